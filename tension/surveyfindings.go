package tension

import (
	"fmt"
	"math"
	"strings"

	"tautbook/fit"
)

// tellLocal says what hangs at one place, and what it is worth in H to know it.
func (j *judgement) tellLocal() {
	for _, l := range j.a.Load.Local {
		if l.OffTold != nil && math.Abs(*l.OffTold) > 3 {
			j.add("local-load-off", Look, "The kink at station %s does not agree with the %s on record for %s: by the shape alone the load differs by %+.1f standard uncertainties. Weigh it, or check its place.",
				Metre.Figure(l.Station), force(*l.Told), orUnnamed(l.What), *l.OffTold)
		}
		size := "of unknown size"
		if l.Load != nil {
			size = force(*l.Load)
		}
		switch {
		case l.From != FoundInShape:
			j.add("local-load", Note, "Local load on record at station %s: %s, %s (%s).", Metre.Figure(l.Station), orUnnamed(l.What), size, l.From)
		case l.Kink.Value > 0:
			j.add("local-load-found", Act, "The shape has a kink at station %s, as of a local load of %s that no record names (probability of such a kink by chance: %s), or as of neighbours surveyed wrongly together. Go and look. Every force here counts the load in.",
				Metre.Figure(l.Station), size, Probability(*l.Chance))
		default:
			j.add("local-lift-found", Act, "The shape has an upward kink at station %s, as if something held the cable up there (a prop, a branch, a stay) with %s (probability by chance: %s), or as of neighbours surveyed wrongly together. Go and look. Every force here counts the lift in.",
				Metre.Figure(l.Station), strings.TrimPrefix(size, "-"), Probability(*l.Chance))
		}
	}
	if j.doubted != "" {
		j.add("record-doubted", Act, "The record of loads says %q, but a local load was found that it does not name: the record was not relied on.", j.doubted)
	}
}

func (j *judgement) tellSurvey() {
	r := j.r
	if why := j.unfit(); why != "" {
		j.add("not-one-curve", Act, "%s", why)
	}
	if n := len(r.Rejected); n > 0 {
		j.add("rejected", Look, "%d of %d points left out: %s.", n, n+len(r.Observations), suspects(r.Rejected))
	}
	j.tellTogether()
	j.tellSwing()
	if n := len(r.LeftOut); n > 0 {
		j.add("left-out", Note, "%d points near supports or local loads were not used, because bending makes another shape there: %s.", n, names(r.LeftOut))
	}
	if len(r.Suspects) > 0 {
		j.add("suspects", Look, "Suspect points, still used: %s. Check them in the field book; --reject-beyond leaves them out.", suspects(r.Suspects))
	}
	if r.APriori && !r.VarianceOK {
		if r.VarianceFactor > 1 {
			j.add("variance", Look, "The points scatter more than the stated accuracy allows: variance factor %.2f, 95 %% limit %.2f. Uncertainties were widened by %.2f.",
				r.VarianceFactor, r.ChiSquareHigh, math.Sqrt(r.ScaledBy))
		} else {
			j.add("variance", Note, "The points scatter less than the stated accuracy: variance factor %.2f, 95 %% limit %.2f. The stated accuracy was kept.", r.VarianceFactor, r.ChiSquareLow)
		}
	}
	if !r.APriori {
		few := ""
		if j.in.few > 1.02 {
			few = fmt.Sprintf("; u widened by %.2f because they are few", j.in.few)
		}
		j.add("accuracy-estimated", Note, "No instrument accuracy was stated: it is estimated from the residuals (%d degrees of freedom%s), so a constant error of the instrument does not show.",
			r.DegreesOfFreedom, few)
	}
	if r.Widening > 1 {
		j.add("correlated", Note, "Neighbouring residuals are alike (lag-1 correlation %.2f): uncertainties were widened by %.2f.", r.Lag1, r.Widening)
	}
	if r.RunsP < 0.001 && len(r.Observations) >= 10 {
		j.add("pattern", Look, "The residuals are not scattered by chance (runs test, probability %s): the cable may not hang freely in this shape (a local load, a touching branch, a kink), or the points are not all on one cable.",
			Probability(r.RunsP))
	}
}

func (j *judgement) tellSwing() {
	if w := j.a.Fit.Swing; w != nil {
		side, under := "left", "side load"
		if w.AngleDeg.Value < 0 {
			side = "right"
		}
		angle := w.AngleDeg
		angle.Value = math.Abs(angle.Value)
		if w.SideLoad != nil {
			under = NewtonPerMetre.Figure(Quantity{Value: math.Abs(w.SideLoad.Value), U: w.SideLoad.U})
		}
		j.add("swing", Look, "The cable hangs %s out of the vertical, to the %s seen from A to B, as under %s across the span: wind, or something that pulls aside. Shape, sag and H are those in its own plane, under the resultant load.",
			Degree.Figure(angle), side, under)
	}
	if w := j.r.Swing; w != nil && w.Gusty {
		j.add("gusty", Look, "The points scatter across the plane (%s) more than their accuracy allows: the cable was moving, or some points are on something else. Survey it again in still air.", Millimetre.About(w.Scatter))
	}
}

// names are the points of a list with the reason of each.
func names(list []fit.Suspect) string {
	const most = 6
	var out []string
	for i, s := range list {
		if i == most {
			out = append(out, fmt.Sprintf("and %d more", len(list)-most))
			break
		}
		out = append(out, pointName(s)+" "+s.Reason)
	}
	return strings.Join(out, "; ")
}

func suspects(list []fit.Suspect) string {
	const most = 6
	var out []string
	for i, s := range list {
		if i == most {
			out = append(out, fmt.Sprintf("and %d more", len(list)-most))
			break
		}
		out = append(out, fmt.Sprintf("%s (%+.0f mm, %s)", pointName(s), 1000*s.Residual, s.Reason))
	}
	return strings.Join(out, ", ")
}
