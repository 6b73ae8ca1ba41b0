package fit

import (
	"math"
	"slices"
)

// compareShapes fits the catenary and the parabola beside the chosen shape and weighs them by the corrected information
// criterion of Akaike (Hurvich and Tsai 1989, Biometrika 76, 297-307), and the same shape without the local loads that were found.
// The difference is that of the sums of squares, against the stated accuracy when it holds, else in logarithms, and of the price of
// the parameters. Correlated residuals count for less. A shape that does not converge is left out.
func (r *Result) compareShapes(w *workspace, share float64, o Options) {
	var ends [2]*Result // by share
	tell := r.mayTellShare()
	if tell && (share == 0 || share == 1) {
		r.last = r.normalised(w)
		ends[int(share)] = r
	}
	per := r.Curve.ArcLength(r.A.Station, r.B.Station) / (r.B.Station - r.A.Station)
	for _, alt := range []struct {
		shape Shape
		share float64
	}{{Catenary, 1}, {Parabola, 0}} {
		if alt.share == share {
			continue
		}
		other := Result{A: r.A, B: r.B, Observations: r.Observations, APriori: r.APriori, locals: slices.Clone(r.locals)}
		if err := other.solve(w, alt.share, o); err != nil {
			continue
		}
		if tell {
			other.last = other.normalised(w)
			ends[int(alt.share)] = &other
		}
		r.Alternatives = append(r.Alternatives, r.against(&other, alt.shape, r.Curve.Curvature/other.Curve.Curvature*spread(share, per)/spread(alt.share, per)-1))
	}
	if ends[0] != nil && ends[1] != nil {
		r.Share = r.tellShare(w, ends[1], ends[0], o, per, share)
	}
	told := slices.DeleteFunc(slices.Clone(r.locals), func(l local) bool { return l.placeFree })
	if len(told) == len(r.locals) {
		return
	}
	if len(told) == 0 {
		told = nil
	}
	other := Result{A: r.A, B: r.B, Observations: r.Observations, APriori: r.APriori, locals: told}
	if err := other.solve(w, share, o); err == nil {
		r.Alternatives = append(r.Alternatives, r.against(&other, r.Curve.Shape(), r.Curve.Curvature/other.Curve.Curvature-1))
	}
}

// against sets another fit to the same points beside r.
func (r *Result) against(other *Result, shape Shape, tensionOff float64) Alternative {
	n := float64(len(r.Observations))
	sum := 0.0
	e := other.Curve.evaluator()
	for _, v := range r.Observations {
		z, _, _ := e.at(v.S, nil)
		sum += (v.Z - z) * (v.Z - z)
	}
	delta := other.VarianceFactor*float64(other.DegreesOfFreedom) - r.VarianceFactor*float64(r.DegreesOfFreedom)
	if !r.APriori || r.ScaledBy > 1 {
		delta = n * math.Log(other.VarianceFactor*float64(other.DegreesOfFreedom)/(r.VarianceFactor*float64(r.DegreesOfFreedom)))
	}
	price := func(p float64) float64 { return 2*p + 2*p*(p+1)/math.Max(n-p-1, 1) }
	return Alternative{Shape: shape, LocalLoads: len(other.locals), Constant: other.Curve.Constant(), RMS: math.Sqrt(sum / n),
		DeltaAICc: delta/(r.Widening*r.Widening) + price(float64(other.n)) - price(float64(r.n)), TensionOff: tensionOff}
}

// spread is the whole load on the span over that which its number of newtons per metre would be along the horizontal; per is arc
// over horizontal length.
func spread(share, per float64) float64 { return share*per + 1 - share }
