package fit

import (
	"math"
	"slices"
)

// compareShapes fits the catenary and the parabola beside the chosen shape and weighs them by the corrected information
// criterion of Akaike (Hurvich and Tsai 1989, Biometrika 76, 297-307). All have three parameters, so the difference is that
// of the sums of squares: against the stated accuracy when it holds, else in logarithms. Correlated residuals count for
// less. A shape that does not converge is left out.
func (r *Result) compareShapes(w *workspace, share float64, o Options) {
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
		n, f := float64(len(r.Observations)), float64(r.DegreesOfFreedom)
		delta := (other.VarianceFactor - r.VarianceFactor) * f
		if !r.APriori || r.ScaledBy > 1 {
			delta = n * math.Log(other.VarianceFactor/r.VarianceFactor)
		}
		sum := 0.0
		e := other.Curve.evaluator()
		for _, v := range r.Observations {
			z, _, _ := e.at(v.S, nil)
			sum += (v.Z - z) * (v.Z - z)
		}
		r.Alternatives = append(r.Alternatives, Alternative{Shape: alt.shape, Constant: other.Curve.Constant(), RMS: math.Sqrt(sum / n),
			DeltaAICc: delta / (r.Widening * r.Widening), TensionOff: r.Curve.Curvature/other.Curve.Curvature*spread(share, per)/spread(alt.share, per) - 1})
	}
}

// spread is the whole load on the span over that which its number of newtons per metre would be along the horizontal; per is arc
// over horizontal length.
func spread(share, per float64) float64 { return share*per + 1 - share }
