package tension

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

// budget lists what each input costs, greatest first.
func (j *judgement) budget() []BudgetLine {
	p := &j.p
	lines := []BudgetLine{}
	out := outInverse
	if !p.known(outInverse) {
		out = outH
	}
	total := p.u(out)
	if !(total > 0) {
		return lines
	}
	for i, s := range j.in.sources {
		l := BudgetLine{Input: s.name, Value: s.value, U: s.u, Share: p.variance(i, out) / (total * total)}
		if p.known(outH) && j.a.HorizontalTension != nil {
			l.OnH = math.Sqrt(p.variance(i, outH))
		}
		if r := j.ratioSquared(); r > 0 {
			l.OnR = math.Sqrt(p.variance(i, outInverse)) * r
		}
		lines = append(lines, l)
	}
	slices.SortStableFunc(lines, func(a, b BudgetLine) int {
		switch {
		case a.Share > b.Share:
			return -1
		case a.Share < b.Share:
			return 1
		}
		return 0
	})
	return lines
}

// ratioSquared converts an uncertainty of the inverse ratio into one of the ratio; 0 when there is no ratio.
func (j *judgement) ratioSquared() float64 {
	if j.a.Expected == nil || j.a.Expected.Ratio == nil {
		return 0
	}
	r := j.a.Expected.Ratio.Value
	return r * r
}

// neededU is the largest standard uncertainty of the inverse ratio with which the present value would be decided.
func (j *judgement) neededU() float64 {
	x := j.a.Expected
	inv := j.p.y[outInverse]
	decided := func(u float64) bool {
		s, o := 1-below(inv, u, 1/x.SlackBelow), below(inv, u, 1/x.OverloadAbove)
		return s >= sure || o >= sure || 1-s-o >= sure
	}
	lo, hi := 0.0, j.p.u(outInverse)
	for range 50 {
		mid := (lo + hi) / 2
		if decided(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo
}

// cheapest names the measurements that would decide, each taken alone, in the order of what they usually cost: common
// practice, no source.
func (j *judgement) cheapest() string {
	p, need := &j.p, j.neededU()
	total := p.u(outInverse)
	if need < total/20 {
		return "The tension lies so close to a limit that no survey will separate them soon. Treat it as at the limit, or take a direct reading (load cell, lift-off)."
	}
	rank := func(name string) int {
		for i, prefix := range []string{"cable temperature", "load seen", "supports", "shape", "self weight", "deck load"} {
			if strings.HasPrefix(name, prefix) {
				return i
			}
		}
		return 9
	}
	type way struct {
		rank int
		text string
	}
	var ways []way
	for i, s := range j.in.sources {
		rest := need*need - (total*total - p.variance(i, outInverse))
		if rest <= 0 {
			continue
		}
		f := math.Sqrt(rest / p.variance(i, outInverse))
		ways = append(ways, way{rank(s.name), j.wayText(i, f)})
	}
	if lines := j.budget(); len(ways) == 0 && len(lines) > 1 {
		return fmt.Sprintf("No single measurement would decide. The costliest inputs are %s (%.0f %%) and %s (%.0f %%): improve both, or take a direct reading (load cell, lift-off, frequency).",
			lines[0].Input, 100*lines[0].Share, lines[1].Input, 100*lines[1].Share)
	}
	slices.SortStableFunc(ways, func(a, b way) int { return a.rank - b.rank })
	var texts []string
	for _, w := range ways[:min(3, len(ways))] {
		texts = append(texts, w.text)
	}
	return "What would decide, cheapest first: " + strings.Join(texts, "; or ") + "."
}

// wayText says how far one source has to come down, f being the factor on its standard uncertainty.
func (j *judgement) wayText(i int, f float64) string {
	s := j.in.sources[i]
	if s.survey {
		have := float64(len(j.r.Observations))
		n := math.Ceil(have / (f * f))
		if n <= 300 && n <= 20*have {
			return fmt.Sprintf("about %.0f points spread over the whole span instead of %.0f, at the same accuracy", n, have)
		}
		return fmt.Sprintf("points %.0f times as accurate", math.Ceil(1/f))
	}
	return fmt.Sprintf("%s known to u = %s of its present u (%s)", s.name, Percent.About(f), s.u)
}
