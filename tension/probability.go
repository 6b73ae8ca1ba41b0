package tension

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// below is the probability that a quantity lies under a limit, by JCGM 106:2012, 7.2, with Student's t for a finite number
// of degrees of freedom. Without uncertainty it is 0 or 1.
func below(value, u, limit, dof float64) float64 {
	d := limit - value
	switch {
	case math.IsNaN(d) || math.IsNaN(u):
		return math.NaN()
	case u == 0 && d > 0:
		return 1
	case u == 0:
		return 0
	case dof > 1e4:
		return distuv.UnitNormal.CDF(d / u)
	default:
		return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: math.Max(dof, 1)}.CDF(d / u)
	}
}

// quantile is the point below which a quantity lies with probability prob.
func quantile(value, u, prob, dof float64) float64 {
	if dof > 1e4 {
		return value + u*distuv.UnitNormal.Quantile(prob)
	}
	return value + u*distuv.StudentsT{Mu: 0, Sigma: 1, Nu: math.Max(dof, 1)}.Quantile(prob)
}
