package tension

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tautbook/fit"
	"tautbook/survey"
)

const (
	mostTried     = 20   // points of one span that are tried on other spans
	largestTried  = 2000 // points of a span that others are tried on: a cloud has no codes to mistake
	acrossBeyond  = 4    // times the scatter across the plane that a point may be off in plan
	leastScatter  = 0.01 // m: the scatter across a plane that is always allowed; common practice, no source
	fitsElsewhere = 3.29 // |w| up to which a point fits another cable: Baarda (1968), two-sided 0.1 %
)

// NameWrongCables tries the points that do not fit their own cable against the other cables of the same structure, and adds a finding
// to the assessment of their own cable that names the one that they fit. cases and assessments are those of one run, in the same order.
func NameWrongCables(cases []Case, assessments []Assessment) {
	for i := range cases {
		off := misfits(&assessments[i])
		if len(off) > mostTried {
			off = off[:mostTried]
		}
		var names []string
		for _, s := range off {
			at := slices.IndexFunc(cases[i].Points.Points, func(p survey.Point) bool { return p.Line == s.Line && p.ID == s.ID })
			if at < 0 {
				continue
			}
			if fits := elsewhere(cases, assessments, i, cases[i].Points.Points[at]); fits != nil {
				names = append(names, fmt.Sprintf("%s fits %s", pointName(s), strings.Join(fits, " or ")))
			}
		}
		if len(names) > 0 {
			assessments[i].Findings = append(assessments[i].Findings, Finding{ID: "wrong-cable", Level: Look,
				Text: fmt.Sprintf("Points that do not fit this cable but another one: %s. Check their codes.", strings.Join(names, "; "))})
		}
	}
}

// misfits are the points that were left out of a cable or lie off it together.
func misfits(a *Assessment) (out []fit.Suspect) {
	out = append(out, a.Fit.Rejected...)
	out = append(out, a.together...)
	return out
}

// pointName is how a point is called in a finding.
func pointName(s fit.Suspect) string {
	if s.ID != "" {
		return s.ID
	}
	return fmt.Sprintf("line %d", s.Line)
}

// elsewhere are the other spans of the structure that a point fits.
func elsewhere(cases []Case, assessments []Assessment, own int, p survey.Point) (fits []string) {
	for k, c := range cases {
		if k == own || c.File != cases[own].File && assessments[k].Structure != assessments[own].Structure || len(c.Points.Points) > largestTried || !near(c.Points, p) {
			continue
		}
		if c.takes(p) {
			name := "cable " + c.Points.Cable
			if c.Points.Span != "" {
				name += ", span " + c.Points.Span
			}
			fits = append(fits, name)
		}
	}
	return fits
}

// near reports whether a point lies in plan within the box of a span, with a tenth of its size to spare.
func near(s survey.SpanPoints, p survey.Point) bool {
	lo, hi := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	for _, q := range s.Points {
		for k, v := range [2]float64{q.E, q.N} {
			lo[k], hi[k] = math.Min(lo[k], v), math.Max(hi[k], v)
		}
	}
	spare := 0.1 * math.Hypot(hi[0]-lo[0], hi[1]-lo[1])
	return p.E > lo[0]-spare && p.E < hi[0]+spare && p.N > lo[1]-spare && p.N < hi[1]+spare
}

// takes reports whether a point fits the cable of the case as well as its own points do, in height and in plan. The cable is fitted
// again with the point.
func (c Case) takes(p survey.Point) bool {
	with := c
	p.Line = -1 // to find it again
	with.Points.Points = append(slices.Clone(c.Points.Points), p)
	r, err := with.fit(c.listedHere(), c.localHere())
	if err != nil {
		return false
	}
	var across, count float64
	at := -1
	for i, o := range r.Observations {
		if o.Line == p.Line {
			at = i
			continue
		}
		across, count = across+o.Across*o.Across, count+1
	}
	if at < 0 || count == 0 {
		return false
	}
	o := r.Observations[at]
	return math.Abs(r.W[at]) <= fitsElsewhere && math.Abs(o.Across) <= acrossBeyond*math.Max(math.Sqrt(across/count), leastScatter) &&
		o.S > r.A.Station && o.S < r.B.Station
}
