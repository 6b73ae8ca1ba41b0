package fit

import (
	"math"
	"slices"
)

// shareTold is the standard uncertainty of the share of self weight below which the points are said to tell it: a quarter of the
// range that it can have.
const shareTold = 0.25

// Share is the share of self weight in the whole even load, w / (w + q), that the points themselves ask for.
type Share struct {
	Value    float64 `json:"value"` // may lie outside 0 to 1 by chance
	U        float64 `json:"u"`
	Constant float64 `json:"constant_m"`         // 1/Curvature of the curve with that share, kept inside 0 to 1, m
	Off      float64 `json:"tension_difference"` // relative difference of the horizontal tension under the same whole load on the span
}

// tellShare estimates the share from the points. cat and par are the fits with shares 1 and 0. To first order the residuals change
// evenly from the one to the other; where that says that the points can tell, the share is found by Gauss-Newton steps on
// the residuals of whole fits. Nil when they cannot: the data then leave the spread of the load open.
func (r *Result) tellShare(w *workspace, cat, par *Result, o Options, per, share float64) *Share {
	fit := func(mu float64) (*Result, []float64) {
		other := &Result{A: r.A, B: r.B, Observations: r.Observations, APriori: r.APriori, locals: slices.Clone(r.locals)}
		if other.solve(w, mu, o) != nil {
			return nil, nil
		}
		return other, other.normalised(w)
	}
	scale := func(f *Result) float64 { // of a fit with a share of its own: the wrong share leaves a pattern that is no noise
		f.residuals()
		f.correlation()
		return math.Sqrt(f.scale(w)) * f.Widening
	}
	v0, v1 := par.last, cat.last
	d := difference(v1, v0)
	least := 1.0
	if !r.APriori {
		least = math.Sqrt(math.Min(cat.VarianceFactor, par.VarianceFactor))
	}
	if !(least/norm(d) < shareTold) {
		return nil
	}
	mu := -dot(v0, d) / dot(d, d)
	if math.Abs(mu-share) < 3*least/norm(d) {
		return &Share{Value: mu, U: math.Sqrt(r.ScaledBy) * r.Widening / norm(d), Constant: r.Curve.Constant()} // in keeping with the one that was taken: not worth more fits
	}
	if left := dot(v0, v0) - mu*mu*dot(d, d); r.APriori && left > 10*float64(r.DegreesOfFreedom) {
		return nil // no share describes these points
	}
	for range 3 {
		inside := min(max(mu, 0.05), 0.95)
		_, low := fit(inside - 0.05)
		at, v := fit(inside)
		_, high := fit(inside + 0.05)
		if low == nil || v == nil || high == nil {
			return nil
		}
		d = difference(high, low)
		for i := range d {
			d[i] /= 0.1
		}
		mu = inside - dot(v, d)/dot(d, d)
		if math.Abs(mu-inside) < 0.01 || mu < 0 || mu > 1 {
			kept := min(max(mu, 0), 1)
			if end, _ := fit(kept); end != nil {
				at = end
			}
			return &Share{Value: mu, U: scale(at) / norm(d), Constant: at.Curve.Constant(),
				Off: r.Curve.Curvature/at.Curve.Curvature*spread(share, per)/spread(kept, per) - 1}
		}
	}
	return nil
}

// normalised are the residuals of the last solution in w, in standard deviations across the curve.
func (r *Result) normalised(w *workspace) []float64 {
	v := make([]float64, len(r.Observations))
	e := r.evaluator(w.problem.z0)
	for i := range r.Observations {
		v[i], _ = e.foot(&r.Observations[i], w.problem.z0, nil)
	}
	return v
}

func difference(a, b []float64) []float64 {
	d := make([]float64, len(a))
	for i := range a {
		d[i] = a[i] - b[i]
	}
	return d
}

// mayTellShare is a cheap bound. With turn = curvature times length, the least-squares catenary and parabola part by about 0.0016 turn
// squared of the sag (root mean square of what a quadratic leaves of the fourth power), and on a chord of slope t by 0.025 turn t more (of
// the third); twice that is granted. Points that scatter more cannot tell them apart.
func (r *Result) mayTellShare() bool {
	l := r.B.Station - r.A.Station
	turn := math.Abs(r.Curve.Curvature * l)
	_, sag := r.Curve.GreatestSag(r.A.Station, r.B.Station)
	apart := 2 * math.Abs(sag) * turn * (0.0016*turn + 0.025*math.Abs(r.Curve.chord()))
	sum := 0.0
	for _, o := range r.Observations {
		sum += apart * apart / o.VarZ
	}
	scale := 1.0
	if !r.APriori {
		scale = r.VarianceFactor
	}
	return sum*shareTold*shareTold > scale
}
