package tension

import (
	"fmt"
	"math"
	"strings"

	"tautbook/survey"
)

// words sets what the explanation says and what would tell causes apart.
func (e *Explanation) words(j *judgement) {
	lead := ""
	if e.SpanMoved != nil || e.RiseMoved != nil {
		for _, c := range e.Causes {
			if c.Kind == SupportMoved {
				lead = c.Text + " "
			}
		}
	}
	list := e.fitting()
	switch {
	case !e.Needed:
		e.Says = e.nothing(j)
	case e.Named == SupportMoved:
		e.Says = list[0].Text + " The rest goes with the record: nothing else has to explain it."
		e.Tells = e.confirms()
	case e.Named != "":
		e.Says = lead + "By the records: " + list[0].Text + e.alone()
		e.Tells = e.confirms()
	case len(list) > 1:
		var kinds []string
		for _, c := range list {
			kinds = append(kinds, string(c.Kind))
		}
		e.Says = fmt.Sprintf("%s%s explain it equally well, and the evidence cannot tell them apart.", lead, sentenceCase(enumerated(kinds)))
		e.Tells = e.tells(list)
	case e.Both != nil:
		e.Says = fmt.Sprintf("%sNo single cause goes with the reading: the load differs by %s from the record and the length by %s from the designed one, or the reading is wrong.", lead, NewtonPerMetre.Figure(e.Both.Load), Millimetre.Figure(e.Both.Length))
		e.Tells = "Look at the loads, and repeat the reading by another method."
	case len(e.Causes) > 0 && e.Causes[0].Standing == AgainstRecord:
		c := e.Causes[0]
		e.Says = fmt.Sprintf("%sEvery cause that explains it contradicts a record. Nearest to the records: %s (%s)", lead, strings.TrimSuffix(c.Text, "."), c.Why) + "."
		e.Tells = c.Check
	default:
		e.Says = lead + "No single cause explains it: two things together, or a wrong figure among the design values or the readings."
		e.Tells = "Check the design values of this span first, then look at the loads and repeat the readings."
	}
}

// alone says what else would explain it if a record were wrong, and what cannot.
func (e *Explanation) alone() string {
	var against, not []string
	for _, c := range e.Causes {
		switch {
		case c.Kind == e.Named:
		case c.Standing == AgainstRecord:
			against = append(against, string(c.Kind))
		default:
			not = append(not, string(c.Kind))
		}
	}
	text := ""
	if len(against) > 0 {
		text += fmt.Sprintf(" Only if a record is wrong it could also be: %s.", strings.Join(against, "; "))
	}
	if len(not) > 0 {
		text += fmt.Sprintf(" It cannot be: %s.", strings.Join(not, "; "))
	}
	return text
}

// confirms is the check that would confirm the named cause.
func (e *Explanation) confirms() string {
	for _, c := range e.Causes {
		if c.Kind == e.Named {
			return "To confirm: " + c.Check
		}
	}
	return ""
}

// nothing says that nothing needs explaining and how much would have shown.
func (e *Explanation) nothing(j *judgement) string {
	text := fmt.Sprintf("Nothing needs explaining: the evidence goes together as recorded (probability of more disagreement by chance: %s).", Probability(e.Chance))
	var shows []string
	if d := e.DetectableLength; d != nil {
		shows = append(shows, "a change of length by "+lengthScale(*d).About(*d))
	}
	if d := e.DetectableLoad; d != nil && j.record == survey.LoadsNotChecked {
		shows = append(shows, "an even load of "+NewtonPerMetre.About(*d))
	}
	if len(shows) > 0 {
		text += fmt.Sprintf(" It would have shown %s by itself four times out of five.", strings.Join(shows, " or "))
	}
	return text
}

// lengthScale is millimetres for what is under 10 m.
func lengthScale(v float64) Scale {
	if math.Abs(v) < 10 {
		return Millimetre
	}
	return Metre
}

// tells is the cheapest look or measurement that would tell the fitting causes apart.
func (e *Explanation) tells(list []Cause) string {
	has := map[CauseKind]*Cause{}
	for i := range list {
		has[list[i].Kind] = &list[i]
	}
	var steps []string
	if has[ExtraLoad] != nil {
		steps = append(steps, "a look at the loads")
	}
	if need := e.readingNeeded(list); need != "" {
		steps = append(steps, need)
	}
	if has[TemperatureWrong] != nil {
		steps = append(steps, "the temperature of the cable taken with a contact thermometer")
	}
	if has[SupportMoved] != nil && e.SpanMoved == nil && e.RiseMoved == nil {
		steps = append(steps, "a survey of both supports")
	}
	if has[WeightWrong] != nil {
		steps = append(steps, "the weight of a metre of the cable")
	}
	if has[SurveyWrong] != nil {
		steps = append(steps, "a second survey from another set-up")
	}
	if has[LengthChanged] != nil {
		steps = append(steps, "fresh marks of slip or of take-up at the anchorages")
	}
	return "To tell: " + strings.Join(steps, "; ") + "."
}

// readingNeeded is how sure a direct reading of H must be to tell the causes whose tensions differ most: with errors of 5 % either way the
// two must be 3.3 standard uncertainties apart.
func (e *Explanation) readingNeeded(list []Cause) string {
	var low, high *Cause
	for i := range list {
		c := &list[i]
		if c.Tension == nil {
			continue
		}
		if low == nil || c.Tension.Value < low.Tension.Value {
			low = c
		}
		if high == nil || c.Tension.Value > high.Tension.Value {
			high = c
		}
	}
	if low == nil || high.Tension.Value < 1.03*low.Tension.Value {
		return ""
	}
	allowed := (high.Tension.Value - low.Tension.Value) / 3.3
	u2 := allowed*allowed - math.Pow(math.Max(low.Tension.U, high.Tension.U), 2)
	if u2 <= 0 {
		return ""
	}
	scale := ForceScale(high.Tension.Value)
	return fmt.Sprintf("a direct reading of H good to %s (U): %s if it is the %s, %s if it is the %s",
		scale.About(2*math.Sqrt(u2)), scale.Value(*high.Tension), high.Kind, scale.Value(*low.Tension), low.Kind)
}

// enumerated is "a, b and c".
func enumerated(list []string) string {
	if len(list) < 2 {
		return strings.Join(list, "")
	}
	return strings.Join(list[:len(list)-1], ", ") + " and " + list[len(list)-1]
}

func sentenceCase(s string) string {
	if s == "" {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}
