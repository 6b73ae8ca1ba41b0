package fit

import (
	"cmp"
	"math"
	"math/rand/v2"
	"slices"
)

const (
	fewestForRobust  = 8    // points below which half of them determine no curve with a check
	elementalSamples = 300  // triples drawn for each form of the bow: with 40 % wild points one in five is clean
	probeSamples     = 60   // triples drawn only to see whether a search is needed
	probePoints      = 200  // points looked at for that
	refined          = 4    // best triples of each form that are refined
	robustPoints     = 1000 // points that a robust start looks at; of more, as many are drawn
)

// robustStart finds the curve that the better half of the points agrees on: least trimmed squares (Rousseeuw 1984, JASA 79,
// 871-880) from sampled triples, refined by concentration steps (Rousseeuw and Van Driessen 2006, Data Mining and Knowledge
// Discovery 12, 29-45) with the curve itself. Errors that are alike, and up to nearly half of wild points, cannot bend it, where
// a search one by one is misled. The sampling is seeded: the same points give the same answer. It returns the places of the
// points that keep to that curve within three robust standard deviations (Rousseeuw and Leroy 1987, Robust regression and
// outlier detection, ch. 5), ascending, nil when there is none; the curve through them is then the present one.
func (x *rejection) robustStart(solved error) []int {
	n := len(x.all)
	if n < fewestForRobust {
		return nil
	}
	rng := rand.New(rand.NewPCG(uint64(n), 1984))
	places := x.left
	if n > robustPoints {
		places = rng.Perm(n)[:robustPoints]
		slices.Sort(places)
	}
	best := trimmed{sum: math.Inf(1)}
	half := (len(places) + x.parameters() + 1) / 2
	for _, e := range x.elementals(places, solved) {
		for _, start := range e.best(rng, elementalSamples, refined) {
			if t := x.concentrate(places, e.nearest(start, half), half); t.sum < best.sum {
				best = t
			}
		}
	}
	if math.IsInf(best.sum, 1) || x.solveOn(best.places) != nil {
		return nil
	}
	v := x.normalisedAll()
	size := make([]float64, len(places))
	for i, place := range places {
		size[i] = math.Abs(v[place])
	}
	s := robustScale(quickSelect(size, len(size)/2), len(places), x.parameters())
	if x.APriori {
		s = math.Max(s, 1)
	}
	var good []int
	for i, r := range v {
		if math.Abs(r) <= 3*s {
			good = append(good, i)
		}
	}
	if x.solveOn(good) != nil {
		return nil
	}
	return good
}

// robustScale is the standard deviation of residuals with the given median size under a fit of p parameters by least medians
// (Rousseeuw and Leroy 1987, ch. 5).
func robustScale(median float64, n, p int) float64 {
	return 1.4826 * (1 + 5/math.Max(float64(n-p), 1)) * median
}

// parameters is the number of parameters of the curve.
func (x *rejection) parameters() int { return max(x.n, 3) }

// solveOn fits the curve to the points at some places.
func (x *rejection) solveOn(places []int) error {
	x.Observations = x.Observations[:0]
	for _, i := range places {
		x.Observations = append(x.Observations, x.all[i])
	}
	return x.solve(x.w, x.share, x.o)
}

// normalisedAll are the distances of all points from the present curve in standard deviations.
func (x *rejection) normalisedAll() []float64 {
	e := x.evaluator(x.w.problem.z0)
	v := make([]float64, len(x.all))
	var g gradient
	for i := range x.all {
		v[i], _ = e.foot(&x.all[i], x.w.problem.z0, &g)
	}
	return v
}

// trimmed is a half of the points and the sum of their squared residuals.
type trimmed struct {
	places []int
	sum    float64
}

// concentrate fits the curve to half of the points and takes the half that lies nearest to it, until the sum of squares falls no
// more.
func (x *rejection) concentrate(places, start []int, half int) trimmed {
	best := trimmed{sum: math.Inf(1)}
	subset := make([]int, len(start))
	for i, k := range start {
		subset[i] = places[k]
	}
	size := make([]float64, len(x.all))
	order := slices.Clone(places)
	for range 10 {
		if x.solveOn(subset) != nil {
			break
		}
		e := x.evaluator(x.w.problem.z0)
		var g gradient
		for _, i := range places {
			r, _ := e.foot(&x.all[i], x.w.problem.z0, &g)
			size[i] = r * r
		}
		slices.SortFunc(order, func(a, b int) int { return cmp.Or(cmp.Compare(size[a], size[b]), cmp.Compare(a, b)) })
		sum := 0.0
		for _, i := range order[:half] {
			sum += size[i]
		}
		if !(sum < best.sum*(1-1e-6)) {
			break
		}
		subset = slices.Clone(order[:half])
		slices.Sort(subset)
		best = trimmed{subset, sum}
	}
	return best
}

// elemental fits heights by c0 + c1 u + c2 bow(u) through three points at a time.
type elemental struct {
	u, bow, z, weight []float64
	size              []float64 // work space
}

// elementals are the forms of the bow to try: that of the least-squares curve, if there is one, and a parabola, should gross errors
// have spoilt that curve.
func (x *rejection) elementals(places []int, solved error) []*elemental {
	obs := make([]*Observation, len(places))
	lo, hi := math.Inf(1), math.Inf(-1)
	z0 := 0.0
	for i, k := range places {
		obs[i] = &x.all[k]
		lo, hi = math.Min(lo, obs[i].S), math.Max(hi, obs[i].S)
		z0 += obs[i].Z / float64(len(places))
	}
	form := func(bow func(s, u float64) float64, slope func(s float64) float64) *elemental {
		n := len(obs)
		all := make([]float64, 5*n)
		e := &elemental{u: all[:n], bow: all[n : 2*n], z: all[2*n : 3*n], weight: all[3*n : 4*n], size: all[4*n:]}
		for i, o := range obs {
			e.u[i] = 2*(o.S-lo)/(hi-lo) - 1
			e.bow[i], e.z[i] = bow(o.S, e.u[i]), o.Z-z0
			t := slope(o.S)
			e.weight[i] = 1 / math.Sqrt(o.VarZ-2*o.CovSZ*t+o.VarS*t*t)
		}
		return e
	}
	chord := 0.0
	if solved == nil {
		chord = x.Curve.chord()
	}
	var out []*elemental
	if solved == nil && math.Abs(x.Curve.Curvature)*(hi-lo) > 1e-6 {
		c := x.Curve
		ev := c.evaluator()
		bow := func(s, _ float64) float64 {
			z, _, _ := ev.at(s, nil)
			return (z - c.Z1 - chord*(s-c.S1)) / (c.Curvature * (hi - lo) * (hi - lo))
		}
		out = append(out, form(bow, func(s float64) float64 { _, t, _ := ev.at(s, nil); return t }))
	}
	return append(out, form(func(_, u float64) float64 { return u * u }, func(float64) float64 { return chord }))
}

// through is the curve of three points; false when they are too close to each other.
func (e *elemental) through(a, b, c int) (k [3]float64, ok bool) {
	u1, u2 := e.u[b]-e.u[a], e.u[c]-e.u[a]
	f1, f2 := e.bow[b]-e.bow[a], e.bow[c]-e.bow[a]
	z1, z2 := e.z[b]-e.z[a], e.z[c]-e.z[a]
	det := u1*f2 - u2*f1
	if !(math.Abs(det) > 1e-6) {
		return k, false
	}
	k[1], k[2] = (z1*f2-z2*f1)/det, (u1*z2-u2*z1)/det
	k[0] = e.z[a] - k[1]*e.u[a] - k[2]*e.bow[a]
	return k, true
}

// sizes fills size with the weighted sizes of the residuals.
func (e *elemental) sizes(k [3]float64) []float64 {
	for i, z := range e.z {
		e.size[i] = math.Abs(z-k[0]-k[1]*e.u[i]-k[2]*e.bow[i]) * e.weight[i]
	}
	return e.size
}

// draw is a triple: every other one has a point of each third of the places, so that it reaches over the span, the rest are free.
func (e *elemental) draw(rng *rand.Rand, spread bool) (a, b, c int) {
	n := len(e.z)
	if spread {
		t := n / 3
		return rng.IntN(t), t + rng.IntN(t), 2*t + rng.IntN(n-2*t)
	}
	a, b, c = rng.IntN(n), rng.IntN(n), rng.IntN(n)
	return a, b, c
}

// best are the curves of drawn triples with the least median size of residuals, best first (Rousseeuw 1984).
func (e *elemental) best(rng *rand.Rand, samples, keep int) [][3]float64 {
	type scored struct {
		k [3]float64
		m float64
	}
	var top []scored
	for i := range samples {
		k, ok := e.through(e.draw(rng, i%2 == 0))
		if !ok {
			continue
		}
		m := quickSelect(e.sizes(k), len(e.z)/2)
		if len(top) == keep && m >= top[keep-1].m {
			continue
		}
		at, _ := slices.BinarySearchFunc(top, m, func(s scored, m float64) int { return cmp.Compare(s.m, m) })
		top = slices.Insert(top, at, scored{k, m})
		if len(top) > keep {
			top = top[:keep]
		}
	}
	out := make([][3]float64, len(top))
	for i, s := range top {
		out[i] = s.k
	}
	return out
}

// nearest are the half of the points that lie nearest to a curve.
func (e *elemental) nearest(k [3]float64, half int) []int {
	size := e.sizes(k)
	order := make([]int, len(size))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(size[a], size[b]) })
	return order[:half]
}

// quickSelect is the k-th smallest value, counted from 0; the values change places (Hoare 1961, CACM 4, 321-322).
func quickSelect(v []float64, k int) float64 {
	lo, hi := 0, len(v)-1
	for lo < hi {
		pivot := v[(lo+hi)/2]
		i, j := lo, hi
		for i <= j {
			for v[i] < pivot {
				i++
			}
			for pivot < v[j] {
				j--
			}
			if i <= j {
				v[i], v[j] = v[j], v[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			hi = j
		case k >= i:
			lo = i
		default:
			return v[k]
		}
	}
	return v[k]
}
