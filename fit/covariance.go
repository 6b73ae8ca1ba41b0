package fit

import (
	"fmt"
	"math"
)

// Covariance fills cov (n x n, row-major) with (J^T J)^-1 at the solution of the last Solve, from the R factor of the undamped Jacobian,
// and returns the condition number of the column-scaled Jacobian. It holds for residuals divided by their standard
// deviations and a model that is nearly linear over them. The error wraps ErrRank when a parameter is not determined.
func (s *Solver) Covariance(cov []float64) (float64, error) {
	n := s.f.n
	condition := s.condition()
	if !(condition < conditionLimit) {
		return condition, fmt.Errorf("%w: condition number %.1e", ErrRank, condition)
	}
	inv := s.rt // inverse of R, column by column
	for j := range n {
		for i := n - 1; i >= 0; i-- {
			v := 0.0
			if i == j {
				v = 1
			}
			for k := i + 1; k <= j; k++ {
				v -= s.f.r(i, k) * inv[k*n+j]
			}
			inv[i*n+j] = v / s.f.rdiag[i]
			if i > j {
				inv[i*n+j] = 0
			}
		}
	}
	for a := range n {
		for b := range n {
			sum := 0.0
			for k := max(a, b); k < n; k++ {
				sum += inv[a*n+k] * inv[b*n+k]
			}
			cov[s.f.pivot[a]*n+s.f.pivot[b]] = sum
		}
	}
	return condition, nil
}

// condition is the 1-norm condition number of R after its columns are scaled to length one.
func (s *Solver) condition() float64 {
	n := s.f.n
	size, inverse := 0.0, 0.0
	inv := s.rt
	for j := range n {
		c := s.f.norm[s.f.pivot[j]]
		if c == 0 || s.f.rdiag[j] == 0 {
			return math.Inf(1)
		}
		sum := 0.0
		for i := 0; i <= j; i++ {
			sum += math.Abs(s.f.r(i, j)) / c
		}
		size = math.Max(size, sum)
	}
	for j := range n {
		sum := 0.0
		for i := j; i >= 0; i-- {
			v := 0.0
			if i == j {
				v = 1
			}
			for k := i + 1; k <= j; k++ {
				v -= s.f.r(i, k) / s.f.norm[s.f.pivot[k]] * inv[k*n+j]
			}
			inv[i*n+j] = v / s.f.rdiag[i] * s.f.norm[s.f.pivot[i]]
			sum += math.Abs(inv[i*n+j])
		}
		inverse = math.Max(inverse, sum)
	}
	return size * inverse
}
