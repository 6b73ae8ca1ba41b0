package fit

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"
)

const (
	// chanceLimit is how improbable a kink must be, anywhere on the span, before a local load is taken for found.
	chanceLimit = 0.001
	// searchPlaces is the greatest number of places tried; a kink is as wide as the gaps of a survey, not narrower.
	searchPlaces = 120
	// besides is how much better than one wrong point or another shape a local load must explain the residuals, in units of
	// twice the log likelihood: a factor of e^3 = 20 in likelihood.
	besides = 6
)

// search looks for local loads that nobody told: a kink, anywhere on the span, that takes more out of the residuals than
// chance does. The place that does best is tested by the bound of Davies (1987), Hypothesis testing when a nuisance parameter
// is present only under the alternative, Biometrika 74, 33-43, which allows for the looking everywhere. One wrong point
// makes a kink as well, and so does the wrong shape: a load is taken only where it explains clearly more than either. Size
// and place are then fitted with everything else. At least three stations stay on both sides of a load.
func (r *Result) search(w *workspace, share float64, o Options) error {
	for range o.FindLoads {
		if len(r.Observations) < r.n+2+2 {
			return nil
		}
		r.scale(w)
		k, ok := r.bestKink(w)
		if !ok || k.chance > chanceLimit || k.gain < r.otherGain(w, share, o)+besides {
			return nil
		}
		with := *r
		with.Full, with.locals = nil, slices.Clone(r.locals)
		with.locals = append(with.locals, local{station: k.station, sizeFree: true, placeFree: true, chance: k.chance})
		slices.SortFunc(with.locals, func(a, b local) int { return cmp.Compare(a.station, b.station) })
		if with.solve(w, share, o) != nil || !with.orderly() || !with.stands(w, k) {
			return r.solve(w, share, o)
		}
		*r = with
	}
	return nil
}

// stands tests a load again after it was fitted, with the correlation that is left among the residuals: that of the fit without
// it came from the load itself.
func (r *Result) stands(w *workspace, k kink) bool {
	r.residuals()
	r.correlation()
	before := k.chance
	k.judge(w, r.APriori, r.VarianceFactor, float64(r.DegreesOfFreedom), r.Widening)
	for i := range r.locals {
		if l := &r.locals[i]; l.placeFree && l.chance == before {
			l.chance = k.chance
		}
	}
	return k.chance <= chanceLimit
}

// orderly reports whether the loads stayed apart and inside the points after their places were fitted.
func (r *Result) orderly() bool {
	_, lo, hi := stations(r.Observations)
	last := lo
	for _, l := range r.locals {
		if !(l.station > last) {
			return false
		}
		last = l.station
	}
	return last < hi
}

// kink is a candidate for a local load.
type kink struct {
	station float64
	gain    float64 // twice the log likelihood that it gains
	chance  float64 // of as much anywhere on the span
	raw     float64 // square of the residuals along its direction
	path    float64 // length of the path of all directions
}

// bestKink scans the span. For every place the effect of a kink on the residuals, less what the parameters of the fit could do
// instead, is a direction in the space of residuals; the square of the residuals along it is the gain. The length of the path
// of these directions measures how many independent places there are.
func (r *Result) bestKink(w *workspace) (best kink, ok bool) {
	m := len(r.Observations)
	order := byStation(r.Observations)
	places := r.places(order)
	if len(places) == 0 {
		return best, false
	}
	basis, v := r.scores(w)
	dir, last := make([]float64, m), make([]float64, m)
	path := 0.0
	for i, s := range places {
		if !direction(r, basis, s, dir) {
			continue
		}
		if i > 0 {
			path += math.Acos(min(1, max(-1, dot(dir, last))))
		}
		t := dot(dir, v)
		if t*t > best.raw {
			best = kink{station: s, raw: t * t}
			ok = true
		}
		copy(last, dir)
	}
	best.path = path
	f := float64(r.DegreesOfFreedom)
	sum := r.VarianceFactor * f
	best.judge(w, r.APriori, math.Max(sum-best.raw, 1e-12*sum)/(f-1), f-1, 1)
	return best, ok
}

// judge turns a gain into twice a log likelihood, by the stated accuracy when what is left keeps to it, else by the scatter that
// is left (variance factor left with f degrees of freedom), and bounds the probability that chance does as well anywhere along the
// path (Davies 1987, eq. 3.4, two-sided).
func (k *kink) judge(w *workspace, stated bool, left, f, widening float64) {
	z := math.Sqrt(k.raw) / widening
	if _, high := w.quantiles.region(f); !stated || left > high {
		z = equivalent(SingleTest{W: z / math.Sqrt(left), Dof: f})
	}
	k.gain = z * z
	k.chance = math.Min(1, 2*distuv.UnitNormal.Survival(z)+k.path/math.Pi*math.Exp(-k.gain/2))
}

// byStation is the order of the observations along the span.
func byStation(obs []Observation) []int {
	order := make([]int, len(obs))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(obs[a].S, obs[b].S) })
	return order
}

// places are the stations to try, three in every gap between points, fewer when there are many points; three stations stay on
// both sides, and as many between a new load and one that is there.
func (r *Result) places(order []int) (out []float64) {
	const aside = 3
	n := len(order)
	step := max(1, 3*n/searchPlaces)
	for i := aside - 1; i+aside < n; i++ {
		a, b := r.Observations[order[i]].S, r.Observations[order[i+1]].S
		for j := range 3 {
			s := a + (b-a)*(float64(j)+0.5)/3
			if (3*i+j)%step == 0 && b > a && !r.crowded(order, i, s) {
				out = append(out, s)
			}
		}
	}
	return out
}

// crowded reports whether fewer than three points lie between a place after point i and a load that is there.
func (r *Result) crowded(order []int, i int, s float64) bool {
	for _, l := range r.locals {
		if l.station <= s && r.Observations[order[i-2]].S <= l.station || l.station >= s && r.Observations[order[i+3]].S >= l.station {
			return true
		}
	}
	return false
}

// scores are an orthonormal basis of what the parameters of the fit can do to the residuals, column by column, and the residuals,
// all in standard deviations.
func (r *Result) scores(w *workspace) (basis [][]float64, v []float64) {
	m := len(r.Observations)
	e := r.evaluator(w.problem.z0)
	v = make([]float64, m)
	basis = make([][]float64, r.n)
	for j := range basis {
		basis[j] = make([]float64, m)
	}
	var g gradient
	var sigma float64
	for i := range r.Observations {
		v[i], sigma = e.foot(&r.Observations[i], w.problem.z0, &g)
		for j := range basis {
			basis[j][i] = g[j] / sigma
		}
	}
	for j := range basis {
		orthogonal(basis[:j], basis[j])
	}
	return basis, v
}

// orthogonal takes the components along an orthonormal basis out of x, twice for the sake of rounding, and scales x to length 1;
// false when nothing is left.
func orthogonal(basis [][]float64, x []float64) bool {
	before := norm(x)
	for range 2 {
		for _, b := range basis {
			d := dot(b, x)
			for i := range x {
				x[i] -= d * b[i]
			}
		}
	}
	after := norm(x)
	if !(after > 1e-9*before) {
		return false
	}
	for i := range x {
		x[i] /= after
	}
	return true
}

// direction fills dir with the unit direction of a kink at station s: the height that it adds is that of the straight tent, which
// differs from the true one by the square of the sag ratio.
func direction(r *Result, basis [][]float64, s float64, dir []float64) bool {
	for i := range r.Observations {
		o := &r.Observations[i]
		dir[i] = math.Max(0, o.S-s)
		if o.VarS == 0 {
			dir[i] /= math.Sqrt(o.VarZ)
			continue
		}
		t := r.Curve.chord() + r.Curve.Curvature*(o.S-r.Curve.middle())
		dir[i] /= math.Sqrt(o.VarZ - 2*o.CovSZ*t + o.VarS*t*t)
	}
	return orthogonal(basis, dir)
}

// otherGain is the most that one wrong point, or the other shapes, would gain, in twice the log likelihood.
func (r *Result) otherGain(w *workspace, share float64, o Options) float64 {
	gain := 0.0
	for _, t := range r.singleTests(w) {
		z := equivalent(t)
		gain = math.Max(gain, z*z)
	}
	for _, s := range []float64{0, 1} {
		if s == share {
			continue
		}
		other := Result{A: r.A, B: r.B, Observations: r.Observations, APriori: r.APriori, locals: slices.Clone(r.locals)}
		if other.solve(w, s, o) == nil && other.VarianceFactor < r.VarianceFactor {
			gain = math.Max(gain, r.advantage(&other))
		}
	}
	if err := r.solve(w, share, o); err != nil { // back in the workspace
		return math.Inf(1)
	}
	return gain
}

// advantage is twice the log likelihood by which another fit to the same points is better.
func (r *Result) advantage(other *Result) float64 {
	n, f := float64(len(r.Observations)), float64(r.DegreesOfFreedom)
	if !r.APriori || r.VarianceFactor > r.ChiSquareHigh {
		return n * math.Log(r.VarianceFactor*f/(other.VarianceFactor*float64(other.DegreesOfFreedom)))
	}
	return r.VarianceFactor*f - other.VarianceFactor*float64(other.DegreesOfFreedom)
}
