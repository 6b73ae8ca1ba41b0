package fit

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

// stretchChance is how improbable a run of neighbours on one side of the curve must be before it is taken for the cable itself and
// not for errors: common practice, no source.
const stretchChance = 0.001

// smoothChance is the two-sided probability of a step between neighbours above which the curve bends to a point rather than the
// point stands off.
const smoothChance = 0.001

// Stretch is a run of neighbouring points that all lie off the curve through the others, on one side of it. Errors of points have
// no reason to stand side by side, nor to be led up to by the points around them: a local load, a kink, another shape or one wrong
// set-up has. Such points are not dropped.
type Stretch struct {
	From, To float64 // stations, m
	Points   []Suspect
	Off      float64 // mean vertical distance from the curve through the other points, m, positive above it
	Chance   float64 // of such a run when the points off the curve stand anywhere
	Smooth   bool    // the residuals lead up to it without a step: the cable bends there
}

// stretches are the runs among the dropped points that chance does not explain, and those that the points around them lead up to;
// places get their points in x.all.
func (x *rejection) stretches() (out []Stretch, places []int) {
	n := len(x.all)
	order := byStation(x.all)
	side := make([]float64, n) // of dropped points, 0 for the rest
	for i, place := range x.dropped {
		side[place] = x.Rejected[i].Residual
	}
	steps := x.steps(order) // in a cloud wrong points are alike by chance, and a bend is a run of many: steps say nothing there
	for i := 0; i < n; {
		v := side[order[i]]
		to := i + 1
		for to < n && v != 0 && side[order[to]]*v > 0 {
			to++
		}
		if v == 0 {
			i = to
			continue
		}
		s := Stretch{From: x.all[order[i]].S, To: x.all[order[to-1]].S, Chance: runChance(n, len(x.dropped), to-i), Smooth: n < fewestForBlocks}
		for k := i; k < to; k++ {
			s.Off += side[order[k]] / float64(to-i)
			s.Smooth = s.Smooth && steps[k] <= distuv.UnitNormal.Quantile(1-smoothChance/2)
		}
		if s.Smooth || s.Chance < stretchChance {
			for _, place := range order[i:to] {
				s.Points = append(s.Points, x.Rejected[slices.Index(x.dropped, place)])
			}
			out = append(out, s)
			places = append(places, order[i:to]...)
		}
		i = to
	}
	return out, places
}

// steps are, in order of stations, how far the residual of each point is from the line through those of its neighbours (at an end
// of the span its two next ones), in standard deviations.
func (x *rejection) steps(order []int) []float64 {
	n := len(order)
	out := make([]float64, n)
	e := x.Curve.evaluator()
	scale := x.scale(x.w)
	v, variance := make([]float64, n), make([]float64, n)
	for i, place := range order {
		o := &x.all[place]
		z, t, _ := e.at(o.S, nil)
		v[i], variance[i] = o.Z-z, scale*(o.VarZ-2*t*o.CovSZ+t*t*o.VarS)
	}
	for i := range n {
		a, b := i-1, i+1
		switch {
		case n < 3:
			return out
		case i == 0:
			a, b = 1, 2
		case i == n-1:
			a, b = n-3, n-2
		}
		sa, sb := x.all[order[a]].S, x.all[order[b]].S
		part := 0.5
		if sb > sa {
			part = (x.all[order[i]].S - sa) / (sb - sa)
		}
		step := v[i] - (1-part)*v[a] - part*v[b]
		out[i] = math.Abs(step) / math.Sqrt(variance[i]+(1-part)*(1-part)*variance[a]+part*part*variance[b])
	}
	return out
}

// runChance bounds the probability that k of n points, drawn anywhere and each on either side, hold a run of length neighbours on
// one side: the expected number of such runs, counted by where they begin.
func runChance(n, k, length int) float64 {
	if length > k || length < 2 {
		return 1
	}
	chance := float64(n-length+1) * math.Pow(0.5, float64(length-1))
	for i := range length {
		chance *= float64(k-i) / float64(n-i)
	}
	return math.Min(1, chance)
}

// giveBack returns stretches of the cable to the fit. When so many points would go that what is left is no clear majority, no curve
// can be called that of the cable: then all points come back.
func (x *rejection) giveBack() error {
	stretches, places := x.stretches()
	if len(x.dropped) > mostDropped(len(x.all)) {
		x.Torn, places = x.Rejected, x.dropped
	} else if len(stretches) == 0 {
		return nil
	}
	x.Stretches = stretches
	back := make(map[int]bool, len(places))
	for _, place := range places {
		back[place] = true
	}
	var kept []Suspect
	var dropped []int
	for i, place := range x.dropped {
		if back[place] {
			x.left = append(x.left, place)
			continue
		}
		kept, dropped = append(kept, x.Rejected[i]), append(dropped, place)
	}
	x.Rejected, x.dropped = kept, dropped
	slices.Sort(x.left)
	return x.solveOn(x.left)
}

// mostDropped is the greatest number of n points that may be dropped: the better part must be a clear majority.
func mostDropped(n int) int { return n * 45 / 100 }
