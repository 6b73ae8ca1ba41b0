package hanging

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// rule is a Gauss-Legendre rule on [-1, 1].
type rule struct{ x, w []float64 }

func newRule(n int) rule {
	r := rule{make([]float64, n), make([]float64, n)}
	quad.Legendre{}.FixedLocations(r.x, r.w, -1, 1)
	return r
}

// The integrands of the elastic cable are analytic in a strip of half-width pi/2 about the real tangent-angle axis, so
// an n-point rule over a half-range r has an error of order rho^(-2n) with rho = d + sqrt(1 + d^2), d = pi/(2r)
// (Trefethen 2008, SIAM Review 50, 67-87). The bounds below keep that under 1e-17.
var (
	rule4  = newRule(4)  // r <= 0.02
	rule6  = newRule(6)  // r <= 0.1
	rule8  = newRule(8)  // r <= 0.25
	rule16 = newRule(16) // r <= 1
	rule32 = newRule(32) // r <= maxHalfRange
)

const maxHalfRange = 2.5

// ruleFor picks the cheapest rule that is exact to rounding for half-range r, and the number of equal panels.
func ruleFor(r float64) (rule, int) {
	switch r = math.Abs(r); {
	case r <= 0.02:
		return rule4, 1
	case r <= 0.1:
		return rule6, 1
	case r <= 0.25:
		return rule8, 1
	case r <= 1:
		return rule16, 1
	case r <= maxHalfRange:
		return rule32, 1
	default:
		return rule32, int(math.Ceil(r / maxHalfRange))
	}
}
