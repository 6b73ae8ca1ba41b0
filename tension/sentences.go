package tension

import (
	"fmt"

	"tautbook/survey"
)

// reason is the verdict in one sentence with its numbers.
func (j *judgement) reason() string {
	x, v, s := j.a.Expected, j.a.Rival, j.a.Strength
	switch j.ground {
	case groundUnfit:
		return j.unfit() + " No tension can be read from them."
	case groundImplausible:
		return j.implausible() + " Held against that, no verdict would mean anything."
	case groundReading, groundReadLoad:
		return j.byReading()
	case groundConflict:
		d := j.a.Direct
		return fmt.Sprintf("The direct reading gives H = %s, but shape and load on record give %s: %.1f standard uncertainties apart. The reading, the weight on file or the record of loads is wrong.",
			force(d.HorizontalTension), force(*j.a.HorizontalTension), d.OffRecord)
	case groundStrength:
		return fmt.Sprintf("The greatest tension is %s, %s of the permitted %s (probability of being over: %s).",
			force(s.GreatestT), Percent.Value(s.Use), force(Quantity{Value: s.Permitted}), Probability(s.POver))
	case groundRivalStrength:
		return fmt.Sprintf("If the cable still has its designed length, it carries %s of the load on file and uses %s of its permitted tension. Treat it as overloaded until the loads have been looked at; if it has slipped instead, its tension is %s the expected one.",
			Percent.Value(v.LoadFactor), Percent.Value(*s.RivalUse), change(x.Ratio.Value))
	case groundLoad:
		return j.overLoaded()
	case groundTension:
		return j.against()
	case groundTwoReadings:
		return j.twoReadings()
	case groundImplied:
		return fmt.Sprintf("If the load is as filed the tension is %s the expected one, inside the limits. If instead the length is as designed, the shape needs %s of the filed load.",
			change(x.Ratio.Value), Percent.Figure(v.LoadFactor))
	case groundInside:
		text := j.against()
		if j.record == survey.LoadsNotChecked && j.a.Stiffness != nil {
			text += " " + j.hiddenClause()
		}
		return text
	case groundCoarse:
		return j.coarse()
	default:
		return j.noDesign()
	}
}

// byReading is the reason when a direct reading decides.
func (j *judgement) byReading() string {
	d, x := j.a.Direct, j.a.Expected
	text := fmt.Sprintf("The direct reading (%s) gives H = %s", orUnnamed(d.How), force(d.HorizontalTension))
	if d.Ratio != nil && x != nil {
		text += fmt.Sprintf(", %s the %s expected today under the filed load (ratio %s)", change(d.Ratio.Value), force(x.UnderFiledLoad), Plain.Figure(*d.Ratio))
	}
	return text + fmt.Sprintf(". With the shape it means a load of %s of the one on record.", Percent.Figure(d.LoadFactor))
}

// against is today's tension beside the expected one.
func (j *judgement) against() string {
	x := j.a.Expected
	if j.a.HorizontalTension == nil || x.Ratio == nil {
		return fmt.Sprintf("Probability that the tension is below %.0f %% of expected: %s; above %.0f %%: %s.",
			100*x.SlackBelow, Probability(x.PSlack), 100*x.OverloadAbove, Probability(x.POverload))
	}
	p, what := x.PInside, "inside the limits"
	switch {
	case x.PSlack >= x.PInside && x.PSlack >= x.POverload:
		p, what = x.PSlack, fmt.Sprintf("below %.0f %%", 100*x.SlackBelow)
	case x.POverload >= x.PInside:
		p, what = x.POverload, fmt.Sprintf("above %.0f %%", 100*x.OverloadAbove)
	}
	return fmt.Sprintf("H is %s, %s the %s expected today (ratio %s; probability of being %s: %s).",
		force(*j.a.HorizontalTension), change(x.Ratio.Value), force(x.HorizontalTension), Plain.Figure(*x.Ratio), what, Probability(p))
}

// overLoaded is the reason when the load on record is above the design load: the tension beside what the filed load would give.
func (j *judgement) overLoaded() string {
	x := j.a.Expected
	text := fmt.Sprintf("It carries %s of its design load.", Percent.Figure(x.LoadRatio))
	if h := j.a.HorizontalTension; h != nil {
		text += fmt.Sprintf(" H is %s, %s the %s that the design load alone would give today.", force(*h),
			change(h.Value/x.UnderFiledLoad.Value), force(x.UnderFiledLoad))
	}
	switch {
	case x.PSlack >= sure:
		text += fmt.Sprintf(" Under this load the designed cable would carry %s, so it is also longer than designed.", force(x.HorizontalTension))
	case x.PInside >= sure:
		text += " Its length is as designed: the load explains the sag."
	}
	return text
}

func (j *judgement) hiddenClause() string {
	h := j.a.Stiffness.HiddenLoad
	if h == nil {
		return "The loads were not checked, and more than ten times the present load could hang here without showing in the sag."
	}
	return fmt.Sprintf("The loads were not checked: up to %s more (%s of the load) could hang here without showing in the sag.",
		NewtonPerMetre.About(*h), Percent.About(*h/j.a.Load.Hanging.Value))
}

// twoReadings gives both readings of a shape that is off design beyond doubt, the worse for safety first.
func (j *judgement) twoReadings() string {
	x, v := j.a.Expected, j.a.Rival
	if x.Ratio == nil || j.a.HorizontalTension == nil {
		return "The sag differs from the design beyond doubt. " + j.against()
	}
	asFiled := fmt.Sprintf("if the load is as filed, the length has changed and H is %s, %s the expected %s",
		force(*j.a.HorizontalTension), change(x.Ratio.Value), force(x.HorizontalTension))
	if v == nil {
		return "The sag differs from the design beyond doubt: " + asFiled + ". The other reading, a changed load, could not be worked out."
	}
	if v.Excluded {
		return fmt.Sprintf("The sag differs from the design beyond doubt and the length has changed (%s): %s. An unlisted load may hang there as well, and the loads were not checked.", v.ExcludedBy, asFiled)
	}
	asLong := fmt.Sprintf("if the length is as designed, the load is %s of the filed one and H is %s, %s the expected",
		Percent.Figure(v.LoadFactor), force(v.HorizontalTension), change(v.Ratio.Value))
	first, second := asLong, asFiled
	if x.Ratio.Value > v.Ratio.Value {
		first, second = asFiled, asLong
	}
	return fmt.Sprintf("The sag differs from the design beyond doubt and has two readings. Worse first: %s; %s.", first, second)
}

func (j *judgement) coarse() string {
	x := j.a.Expected
	if j.a.HorizontalTension == nil {
		return fmt.Sprintf("The curve is too flat for this survey to give the tension%s. %s", j.atLeastClause(), j.against())
	}
	return fmt.Sprintf("H is %s, %s the %s expected today, but the ratio %s is too uncertain: slack %s, inside %s, overload %s.",
		force(*j.a.HorizontalTension), change(x.Ratio.Value), force(x.HorizontalTension), Plain.Figure(*x.Ratio),
		Probability(x.PSlack), Probability(x.PInside), Probability(x.POverload))
}

func (j *judgement) atLeastClause() string {
	if h := j.a.HorizontalTensionAtLeast; h != nil {
		return fmt.Sprintf(" (it is at least %s, 95 %% sure)", force(Quantity{Value: *h}))
	}
	return ""
}

func (j *judgement) noDesign() string {
	switch {
	case j.a.HorizontalTension != nil:
		return fmt.Sprintf("H is %s if the load is as filed; there is no design state to hold it against.", force(*j.a.HorizontalTension))
	case j.hangs():
		return "The shape is known, but no load is on file, so there is no tension to give."
	default:
		return "The curve is too flat for this survey to give the tension" + j.atLeastClause() + ", and there is no design state to hold it against."
	}
}

// nextStep is what to do or to measure now.
func (j *judgement) nextStep() string {
	switch j.ground {
	case groundUnfit:
		return "Check codes, units and the order of columns with \"tautbook check\"; give the points of one cable at a time (codes, or --code CODE=ignore)."
	case groundImplausible:
		return "Check codes and heights of the supports, the design span and rise, and their units; survey the supports again. Do not take up or let out on this sheet."
	case groundReading:
		switch j.a.Verdict {
		case AsDesigned:
			return "No action; next visit as planned."
		case Slack:
			return "Check anchorages and clamps for slip before drawing the cable up; plan the retensioning and survey again afterwards."
		}
		return "Do not add load or take up. Tell the engineer who answers for the structure, and find out why the tension is high."
	case groundReadLoad:
		return "Look for the load that is not on file, record it, and have the engineer check the structure for it."
	case groundConflict:
		return "Repeat the direct reading, check the weight on file, and look at the loads again. Until then treat the higher tension as true."
	case groundStrength:
		return "Take live load off, tell the engineer who answers for the structure today, and confirm with a direct reading."
	case groundRivalStrength:
		return "Keep load off the cable, look along it for anything that is not on file, check marks at the anchorages for slip, and record the loads."
	case groundLoad:
		return "Have the engineer check the structure for the load on record, or take the extra load off; then survey again."
	case groundTension:
		if j.a.Verdict == Slack {
			return "Check anchorages and clamps for slip before drawing the cable up; plan the retensioning and survey again afterwards."
		}
		return "Do not add load or take up. Find out why the tension is high (take-up, a moved support), and have the engineer decide on letting out."
	case groundTwoReadings, groundImplied:
		return "Look at the loads and record them (loads: as filed, or listed with values); marks at the anchorages or a direct reading of the tension would tell as well. Until then treat the worse reading as true."
	case groundInside:
		if j.record == survey.LoadsNotChecked {
			return "No action on the cable; record the loads at the next visit."
		}
		return "No action; next visit as planned."
	case groundCoarse:
		return j.cheapest()
	default:
		if j.d == nil {
			return "Add this span to the cables file to get forces and a verdict."
		}
		return "Complete the design values named under findings."
	}
}

// stiffnessMeaning puts the answers to load and warmth into a sentence.
func stiffnessMeaning(s *Stiffness) string {
	kind := "between the two kinds: load shows in the sag and in the tension"
	switch {
	case s.TensionPerLoad > 2*s.SagPerLoad:
		kind = "a cable whose shape hardly answers to load: extra load raises the tension without showing much in the sag"
	case s.SagPerLoad > 2*s.TensionPerLoad:
		kind = "a taut cable: extra load shows in the sag and raises the tension less"
	}
	perTen := 10 * s.TensionPerDegree
	return fmt.Sprintf("Irvine's lambda squared is %.3g, %s. 10 %% more even load at unchanged length means %.1f %% more sag and %.1f %% more tension; 10 °C warmer means %s in tension.",
		s.Lambda2, kind, 10*s.SagPerLoad, 10*s.TensionPerLoad, ForceScale(perTen).About(perTen))
}
