package history

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tautbook/survey"
	"tautbook/tension"
)

func (r *reading) add(level tension.Level, id, format string, args ...any) {
	r.Findings = append(r.Findings, tension.Finding{ID: id, Level: level, Text: fmt.Sprintf(format, args...)})
}

// say puts the history into sentences: what it rests on, the steps, the drift, what does not fit, the future.
func (r *reading) say() {
	r.Findings = []tension.Finding{}
	r.sayMarks()
	if r.main == nil {
		r.add(tension.Look, "no-figures", "No visit gives an unstressed length or a tension at the reference state: there is no history to read. The sheets of the visits say what was missing.")
		return
	}
	if r.Of == Tension {
		r.add(tension.Note, "from-tension", "The history is read from H at the reference state: fewer visits give an unstressed length. Take-up on record is not tested against it.")
	}
	if gone := len(r.visits) - len(r.main.visits); gone > 0 {
		r.add(tension.Note, "visits-without", "%d of %d visits give no %s and are left out.", gone, len(r.visits), r.Of)
	}
	r.sayFew()
	for _, s := range r.Steps {
		r.sayStep(s)
	}
	r.sayDrift()
	r.sayWarmth()
	r.sayFit()
	r.sayLoads()
	r.sayForecasts()
	if what := r.notSurveyed(); what != "" {
		r.add(tension.Look, "not-surveyed", "%s: all of this is the state before it.", sentence(what))
	}
}

func (r *reading) sayMarks() {
	for _, t := range r.Marks {
		if len(t.Moved) > 0 {
			r.add(tension.Look, "marks-moved", "Control marks of %s and %s do not agree (%s): %s moved against the others. Do not read a change between these visits as the cable's before the datum is settled.",
				t.From, t.To, chance(t.P), strings.Join(t.Moved, ", "))
		}
		if t.Note != "" {
			r.add(tension.Look, "marks-not-settled", "Control marks of %s and %s: %s. A support that moved and a datum that moved look alike.", t.From, t.To, t.Note)
		}
	}
}

func (r *reading) sayFew() {
	c, n := r.Change, len(r.main.y)
	switch {
	case n == 1:
		r.add(tension.Note, "one-visit", "One visit tells the state and nothing of its course: %s is %s.", symbol(r.Of), figure(r.Of, Quantity{Value: r.main.y[0], U: r.main.u[0]}))
	case n == 2 && len(r.Steps) == 0 && c.P < significance:
		r.add(tension.Look, "difference", "Between %s and %s %s, and no event on record accounts for it (%s). Two visits cannot tell a step from a drift: look at the anchorages, and survey again.",
			c.From, c.To, grew(r.Of, c.By), chance(c.P))
	case n == 2 && len(r.Steps) == 0:
		r.add(tension.Note, "difference", "Between %s and %s no change shows: %s (%s). Two visits give no drift.", c.From, c.To, grew(r.Of, c.By), chance(c.P))
	case n > 2 && r.main.free() < 2 && !slices.ContainsFunc(r.main.terms, term.found):
		r.add(tension.Note, "too-few", "%d visits with recorded changes in %d gaps leave nothing that would show a drift or another step.", n, n-r.main.free()-1)
	}
}

func (r *reading) sayStep(s Step) {
	what := sentence(strings.Join(s.Events, "; "))
	switch {
	case s.Kind == UnrecordedStep:
		r.sayUnrecorded(s)
	case s.Kind == VisitOff:
		side := "above"
		if s.By.Value < 0 {
			side = "below"
		}
		r.add(tension.Look, "visit-off", "The visit of %s is off by itself: its %s lies %s %s the others (family-wise %s). Look at its survey, loads and temperature before at the cable.",
			s.After, symbol(r.Of), amount(r.Of, *s.By), side, chance(*s.P))
	case s.By == nil:
		r.add(tension.Note, "step-unknown", "%s: the visits are too few to tell its step.", what)
	case s.Recorded == nil:
		r.add(tension.Note, "recorded-step", "%s: %s. The record has no size to hold that against.", what, grew(r.Of, *s.By))
	case *s.P < significance:
		r.add(tension.Look, "not-as-recorded", "%s: %s, but the record says that it %s; the difference is %s (%s). Look for slip during the work, for turns that were miscounted, and at the pitch of the thread.",
			what, grew(r.Of, *s.By), course(r.Of, *s.Recorded), amount(r.Of, Quantity{Value: s.By.Value - s.Recorded.Value, U: math.Hypot(s.By.U, s.Recorded.U)}), chance(*s.P))
	default:
		r.add(tension.Note, "as-recorded", "%s: %s, as recorded.", what, grew(r.Of, *s.By))
	}
}

func (r *reading) sayUnrecorded(s Step) {
	text := fmt.Sprintf("Between %s and %s %s that nobody recorded (family-wise %s): ", s.After, s.Before, grew(r.Of, *s.By), chance(*s.P))
	if (s.By.Value > 0) == (r.Of == Length) {
		text += "look for slip at the anchorages and clamps, for a support that gave, and for damage."
	} else {
		text += "look for a tensioning that was not recorded, and for a support that moved outward."
	}
	if len(s.Events) > 0 {
		text += " There was a change of load then (" + strings.Join(s.Events, "; ") + "): if the record of loads does not hold it, that may be the reason."
	}
	if s.Before == r.main.visits[len(r.main.visits)-1].Date {
		text += " One visit alone stands after it: repeat that survey before anything is done."
	}
	r.add(tension.Look, "unrecorded-step", "%s", text)
}

func (r *reading) sayDrift() {
	d := r.Drift
	switch {
	case d == nil && r.main.free() >= 2:
		open := r.main.with(term{kind: linear})
		open.widening = r.main.widening
		if q, ok := open.size(term{kind: linear}); ok {
			r.add(tension.Note, "no-drift", "No drift shows. The visits leave a drift open between %s and %s a year (95 %%).", about(r.Of, q.Value-k95*q.U), about(r.Of, q.Value+k95*q.U))
		}
	case d == nil:
	case d.Shape == Linear:
		r.add(tension.Look, "drift", "%s a year, evenly (family-wise %s).", grew(r.Of, d.Rate), chance(d.P))
	default:
		r.add(tension.Look, "creep", "%s for each tenfold of the days since %s, as creep does (family-wise %s): %s in the year to come.", grew(r.Of, d.Rate), d.Since, chance(d.P), amount(r.Of, d.PerYear))
	}
	if d == nil && len(r.main.clock.starts) == 0 && len(r.main.y) > 2 {
		r.add(tension.Note, "no-start", "Creep with log time was not tried: no installation or tensioning before the first visit is on record.")
	}
	for _, v := range r.Rivals {
		r.add(tension.Note, "rival", "The visits cannot tell %s from %s (AIC differs by %.1f).", v.Instead, v.Reading, v.DeltaAIC)
	}
}

func (r *reading) sayWarmth() {
	if r.Warmth == nil {
		return
	}
	text := fmt.Sprintf("After bringing it to the reference temperature, %s still %s for each °C of the cable: a temperature or an expansion coefficient is wrong.", symbol(r.Of), course(r.Of, *r.Warmth))
	if r.Of == Length && r.span.Expansion > 0 {
		per := tension.Scale{Unit: "per million and °C", Per: 1e-6}
		text += fmt.Sprintf(" It is as if the expansion were off by %s; %s was used.", per.Figure(Quantity{Value: r.Warmth.Value / r.main.y[0], U: r.Warmth.U / r.main.y[0]}), per.Value(Quantity{Value: r.span.Expansion}))
	}
	r.add(tension.Look, "seasonal", "%s", text)
}

func (r *reading) sayFit() {
	if r.Fit.Widening > 1 {
		r.add(tension.Look, "scatter", "The visits scatter more than their uncertainties say (chi-square %.1f on %d degrees of freedom, %s). All uncertainties of the history are widened by %.2f; look for what changes from visit to visit.",
			r.Fit.ChiSquare, r.Fit.DegreesOfFreedom, chance(r.Fit.P), r.Fit.Widening)
	}
}

func (r *reading) sayLoads() {
	n := 0
	for _, v := range r.main.visits {
		if v.Loads != survey.LoadsAsFiled && v.Loads != survey.LoadsListed {
			n++
		}
	}
	if n > 0 {
		r.add(tension.Note, "loads", "At %d of %d visits nobody looked at the loads: a load that came and stayed reads as a change of the cable.", n, len(r.main.visits))
	}
}

func (r *reading) sayForecasts() {
	for _, f := range r.Forecasts {
		what := fmt.Sprintf("%s %s %s", sentence(string(f.Of)), f.Bound, figure(f.Of, f.Limit))
		switch {
		case f.Already:
			r.add(tension.Act, "beyond", "%s: probability of being beyond it today %s (%s is %s).", what, tension.Probability(f.PBeyond), symbol(f.Of), figure(f.Of, f.Today))
		case f.Basis == OnState:
			r.add(tension.Note, "forecast", "%s: probability of being beyond it today %s. The drift is not known, so there is no date.", what, tension.Probability(f.PBeyond))
		case f.Never != "":
			r.add(tension.Note, "forecast", "%s: never seen before %s (95 %%; %s).", what, f.Never[:4], f.Basis)
		case f.Basis == OnUnknown:
			r.add(tension.Note, "forecast", "%s: not reached before %s even with the fastest drift that the visits leave open (95 %%).", what, f.Earliest)
		default:
			r.add(tension.Look, "forecast", "%s: reached %s, if the drift goes on; not before %s, and by %s (95 %%).", what, orBeyond(f.Best), f.Earliest, orBeyond(f.Latest))
		}
	}
}

func orBeyond(date string) string {
	if date == "" {
		return "a date beyond the horizon"
	}
	return date
}
