package fieldsheets

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tautbook/survey"
	"tautbook/tension"
)

// urgency orders verdicts for the first page.
var urgency = map[string]int{string(tension.Overload): 0, string(tension.Slack): 1, string(tension.OffDesign): 2, string(tension.Undecided): 3,
	string(tension.NoDesign): 4, string(tension.AsDesigned): 5}

// looked reports whether somebody looked at the loads.
func looked(a *tension.Assessment) bool {
	return a.Load.Record == survey.LoadsAsFiled || a.Load.Record == survey.LoadsListed
}

// readingDenies is the distance, in standard uncertainties, from which a direct reading does not fit shape and load on record:
// the coverage of k = 3, common practice, no source.
const readingDenies = 3

// ownerLine says the state of a cable to somebody who is no engineer. Where a direct reading of the tension was taken, the
// verdict may rest on it or on the shape; then the line says only what is true of both.
func ownerLine(a *tension.Assessment) string {
	percent := func(q *tension.Quantity) string { return fmt.Sprintf("%.0f %%", 100*q.Value) }
	e := a.Expected
	switch a.Verdict {
	case tension.Slack:
		if a.Direct == nil && e != nil && e.Ratio != nil {
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It carries less tension than it should have today."
	case tension.Overload:
		switch {
		case a.Direct != nil:
			return "Its tension or its load is above what it was designed for."
		case a.Strength != nil && a.Strength.POver >= 0.95:
			return "Its tension is above what its strength permits."
		case e != nil && e.LoadRatio.Value > e.OverloadAbove:
			return "It carries about " + percent(&e.LoadRatio) + " of the load that it was designed for."
		case e != nil && e.Ratio != nil && e.Ratio.Value > 1:
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It may carry more than its strength permits; the loads have not been looked at."
	case tension.OffDesign:
		return offDesignLine(a)
	case tension.AsDesigned:
		if !looked(a) && a.Direct == nil {
			return "It hangs as designed, if nothing hangs on it that is not on file."
		}
		return "It hangs as designed."
	case tension.Undecided:
		return "The survey does not allow a verdict."
	}
	return "There is no design to hold it against."
}

func offDesignLine(a *tension.Assessment) string {
	switch {
	case a.Direct != nil && math.Abs(a.Direct.OffRecord) > readingDenies:
		return "The tension that was read on it and the one that the survey gives do not fit together: the reading, the weight on file or the record of loads is wrong."
	case a.Rival != nil && a.Rival.Excluded && !looked(a):
		return "It does not hang as designed: it has become longer or shorter. Something may hang on it as well that is not on file: the loads must be looked at."
	}
	return "It does not hang as designed. Either it has become longer or shorter, or something hangs on it that is not on file: the loads must be looked at."
}

// howSure says in one line what the state rests on and how likely it is.
func howSure(a *tension.Assessment) string {
	e, s := a.Expected, a.Strength
	decided := a.Verdict == tension.Overload || a.Verdict == tension.Slack || a.Verdict == tension.AsDesigned
	onRecord := ", with the load as recorded"
	if !looked(a) {
		onRecord = ", if the load is as on file; nobody looked at the loads"
	}
	switch {
	case decided && a.Direct != nil:
		return "at least 95 %, from the survey and a direct reading of the tension together" + forReading(a) + "."
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
	case decided:
		return "at least 95 %" + onRecord + "."
	case a.Verdict == tension.OffDesign:
		return "that something is off is at least 95 % sure; which of the causes it is stays open."
	case a.DecidedBy == tension.ByImplausible:
		return notKnown + ": the supports, their codes or the design values cannot be right."
	case a.Verdict == tension.Undecided && e != nil && e.Ratio != nil:
		return fmt.Sprintf("slack %s, inside the limits %s, overload %s%s.", tension.Probability(e.PSlack), tension.Probability(e.PInside), tension.Probability(e.POverload), onRecord)
	case a.Verdict == tension.Undecided:
		return notKnown + ": no tension can be read from this survey."
	}
	return notKnown + ": there is nothing to compare with."
}

// forReading keeps in view that a coarse reading does not replace the look at the loads.
func forReading(a *tension.Assessment) string {
	if looked(a) {
		return ""
	}
	return "; nobody looked at the loads"
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
