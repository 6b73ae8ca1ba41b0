package fieldsheets

import (
	"fmt"
	"slices"
	"strings"

	"tautbook/survey"
	"tautbook/tension"
)

// urgency orders verdicts for the first page.
var urgency = map[string]int{string(tension.Overload): 0, string(tension.Slack): 1, string(tension.OffDesign): 2, string(tension.Undecided): 3,
	string(tension.NoDesign): 4, string(tension.AsDesigned): 5}

// ownerLine says the state of a cable to somebody who is no engineer.
func ownerLine(a *tension.Assessment) string {
	percent := func(q *tension.Quantity) string { return fmt.Sprintf("%.0f %%", 100*q.Value) }
	e := a.Expected
	switch a.Verdict {
	case tension.Slack:
		if e != nil && e.Ratio != nil {
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It carries less tension than it should have today."
	case tension.Overload:
		switch {
		case a.Strength != nil && a.Strength.POver >= 0.95:
			return "Its tension is above what its strength permits."
		case e != nil && e.LoadRatio.Value > e.OverloadAbove:
			return "It carries about " + percent(&e.LoadRatio) + " of the load that it was designed for."
		case e != nil && e.Ratio != nil && e.Ratio.Value > 1:
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It may carry more than its strength permits; the loads have not been looked at."
	case tension.OffDesign:
		if a.Rival != nil && a.Rival.Excluded {
			return "It does not hang as designed: it has become longer or shorter. Something may hang on it as well that is not on file: the loads must be looked at."
		}
		return "It does not hang as designed. Either it has become longer or shorter, or something hangs on it that is not on file: the loads must be looked at."
	case tension.AsDesigned:
		if a.Load.Record != survey.LoadsAsFiled && a.Load.Record != survey.LoadsListed {
			return "It hangs as designed, if nothing hangs on it that is not on file."
		}
		return "It hangs as designed."
	case tension.Undecided:
		return "The survey is too coarse to say."
	}
	return "There is no design to hold it against."
}

// howSure says in one line what the state rests on and how likely it is.
func howSure(a *tension.Assessment) string {
	e, s := a.Expected, a.Strength
	onRecord := ", with the load as recorded"
	if a.Load.Record != survey.LoadsAsFiled && a.Load.Record != survey.LoadsListed {
		onRecord = ", if the load is as on file; nobody looked at the loads"
	}
	switch {
	case a.Verdict == tension.Overload && s != nil && s.POver >= 0.95:
		return tension.Probability(s.POver) + " that it is over its permitted tension" + onRecord + "."
	case a.Verdict == tension.Overload && e != nil && e.POverload >= 0.95:
		return tension.Probability(e.POverload) + " that it is above the limit" + onRecord + "."
	case a.Verdict == tension.Overload && e != nil && e.LoadRatio.Value > e.OverloadAbove:
		return "the load on record is " + tension.Percent.Figure(e.LoadRatio) + " of the design load."
	case a.Verdict == tension.Overload && s != nil && s.RivalPOver != nil:
		return tension.Probability(*s.RivalPOver) + " that it is over its permitted tension, if its length is as designed."
	case a.Verdict == tension.Slack && e != nil:
		return tension.Probability(e.PSlack) + " that it is below the limit" + onRecord + "."
	case a.Verdict == tension.AsDesigned && e != nil:
		return tension.Probability(e.PInside) + " that it is inside the limits" + onRecord + "."
	case a.Verdict == tension.OffDesign:
		return "that it is off is at least 95 % sure; what made it so is open until the loads are looked at."
	case a.Verdict == tension.Undecided && e != nil:
		return fmt.Sprintf("slack %s, inside the limits %s, overload %s%s.", tension.Probability(e.PSlack), tension.Probability(e.PInside), tension.Probability(e.POverload), onRecord)
	}
	return notKnown + ": there is nothing to compare with."
}

// tally counts the verdicts, most urgent first.
func tally(cables []tension.Assessment) string {
	count := map[string]int{}
	var order []string
	for i := range cables {
		v := string(cables[i].Verdict)
		if count[v] == 0 {
			order = append(order, v)
		}
		count[v]++
	}
	slices.SortStableFunc(order, func(a, b string) int { return urgency[a] - urgency[b] })
	for i, v := range order {
		order[i] = fmt.Sprintf("%d %s", count[v], v)
	}
	switch len(cables) {
	case 0:
		return "No cable was assessed."
	case 1:
		return "One cable: " + string(cables[0].Verdict) + "."
	}
	return fmt.Sprintf("%d cables: %s.", len(cables), strings.Join(order, ", "))
}
