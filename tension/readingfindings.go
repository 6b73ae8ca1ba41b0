package tension

import (
	"fmt"
	"math"
	"strings"
)

// tellReading says which reading of the shape a direct reading supports.
func (j *judgement) tellReading() {
	for _, why := range j.in.unusable() {
		j.add("reading-unused", Look, "A reading was not used: %v.", why)
	}
	d := j.a.Direct
	if d == nil {
		return
	}
	word := func(off float64) string {
		if off = math.Abs(off); off < apart {
			return "agrees"
		}
		return fmt.Sprintf("disagrees (%.1f standard uncertainties)", off)
	}
	text := fmt.Sprintf("The direct reading %s with the load as recorded", word(d.OffRecord))
	if d.OffLength != nil {
		text += fmt.Sprintf(" and %s with the length as designed", word(*d.OffLength))
	}
	if d.Scatter < 0.01 {
		j.add("readings-differ", Look, "The readings (%s) differ from each other by more than their uncertainties allow (probability by chance: %s). The uncertainty of their mean was widened; find out which one is wrong.", d.How, Probability(d.Scatter))
	}
	j.add("direct-reading", Note, "%s. Together with the shape it implies a load of %s.", text, NewtonPerMetre.Figure(d.Load))
}

// tellReconciled says whether the evidence holds together.
func (j *judgement) tellReconciled() {
	r := j.a.Reconciled
	switch {
	case r == nil && j.notReconciled != nil && len(j.in.readings) > 0:
		j.add("evidence", Note, "The evidence could not be adjusted together: %v.", strings.TrimPrefix(j.notReconciled.Error(), "tension: "))
	case r == nil:
	case len(j.in.readings) == 0 && j.a.Explanation != nil && j.a.Explanation.Needed: // load against length alone: the explanation says it
	case r.Outcome == Agrees:
		j.add("evidence", Note, "%s", r.Says)
	default:
		j.add("evidence", Look, "%s", r.Says)
	}
}
