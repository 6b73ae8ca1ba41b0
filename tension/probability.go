package tension

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// below is the probability that a quantity with a normal distribution lies under a limit, by JCGM 106:2012, 7.2. Without
// uncertainty it is 0 or 1.
func below(value, u, limit float64) float64 {
	d := limit - value
	switch {
	case math.IsNaN(d) || math.IsNaN(u):
		return math.NaN()
	case u == 0 && d > 0:
		return 1
	case u == 0:
		return 0
	default:
		return distuv.UnitNormal.CDF(d / u)
	}
}

// quantile is the point below which a quantity lies with probability prob.
func quantile(value, u, prob float64) float64 { return value + u*distuv.UnitNormal.Quantile(prob) }
