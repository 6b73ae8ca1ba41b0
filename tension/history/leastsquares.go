package history

import "math"

// system is a whitened least-squares problem: unit variance, independent. q is an orthonormal basis of the columns, r the triangle
// with columns = q r.
type system struct {
	white [][]float64 // inverse lower Cholesky factor of V, n x n
	y     []float64   // whitened
	q     [][]float64 // k columns of length n
	r     [][]float64 // r[j] is column j of the triangle, j + 1 long
}

// collinear is the share of a column's norm below which what is left beside the others is rounding: it then says nothing new.
const collinear = 1e-7

// newSystem whitens values by their covariance diag(u² - c²) + c cᵀ. The inverse of the Cholesky factor is taken once: n is the
// number of visits.
func newSystem(y, u, c []float64) *system {
	n := len(y)
	l, s := make([][]float64, n), &system{white: make([][]float64, n)}
	for i := range n {
		l[i] = make([]float64, n)
		for j := 0; j <= i; j++ {
			v := c[i] * c[j]
			if i == j {
				v = u[i] * u[i]
			}
			v -= dot(l[i][:j], l[j][:j])
			if i == j {
				l[i][i] = math.Sqrt(v)
			} else {
				l[i][j] = v / l[j][j]
			}
		}
	}
	for i := range n {
		s.white[i] = make([]float64, n)
		s.white[i][i] = 1 / l[i][i]
		for j := range i {
			v := 0.0
			for k := j; k < i; k++ {
				v -= l[i][k] * s.white[k][j]
			}
			s.white[i][j] = v / l[i][i]
		}
	}
	s.y = s.whiten(y)
	return s
}

func (s *system) whiten(x []float64) []float64 {
	out := make([]float64, len(x))
	for i, row := range s.white {
		out[i] = dot(row[:i+1], x[:i+1])
	}
	return out
}

// beside is what a column adds to those of the system: its whitened part orthogonal to them and its coordinates along them. ok is
// false when it adds nothing. Gram-Schmidt is run twice, which is enough (Giraud, Langou and Rozložník 2005).
func (s *system) beside(column []float64) (rest, along []float64, ok bool) {
	rest = s.whiten(column)
	whole := norm(rest)
	along = make([]float64, len(s.q))
	for range 2 {
		for j, q := range s.q {
			d := dot(q, rest)
			along[j] += d
			for i := range rest {
				rest[i] -= d * q[i]
			}
		}
	}
	return rest, along, norm(rest) > collinear*whole && len(s.q) < len(s.y)
}

// add takes a column into the system; false when it is a combination of the others.
func (s *system) add(column []float64) bool {
	rest, along, ok := s.beside(column)
	if !ok {
		return false
	}
	length := norm(rest)
	for i := range rest {
		rest[i] /= length
	}
	s.q, s.r = append(s.q, rest), append(s.r, append(along, length))
	return true
}

// solve gives the estimates, their covariance and the sum of squares that is left (chi-square distributed, n - k degrees).
func (s *system) solve() (b []float64, cov [][]float64, chi2 float64) {
	k := len(s.q)
	left := append([]float64(nil), s.y...)
	right := make([]float64, k)
	for j, q := range s.q {
		right[j] = dot(q, left)
		for i := range left {
			left[i] -= right[j] * q[i]
		}
	}
	inverse := make([][]float64, k) // column j of the inverse triangle
	for j := range k {
		e := make([]float64, k)
		e[j] = 1
		inverse[j] = s.back(e)
	}
	cov = make([][]float64, k)
	for i := range k {
		cov[i] = make([]float64, k)
		for j := range k {
			for m := range k {
				cov[i][j] += inverse[m][i] * inverse[m][j]
			}
		}
	}
	return s.back(right), cov, dot(left, left)
}

func (s *system) back(right []float64) []float64 {
	k := len(s.r)
	x := make([]float64, k)
	for i := k - 1; i >= 0; i-- {
		v := right[i]
		for j := i + 1; j < k; j++ {
			v -= s.r[j][i] * x[j]
		}
		x[i] = v / s.r[i][i]
	}
	return x
}

func dot(a, b []float64) (sum float64) {
	for i := range a {
		sum += a[i] * b[i]
	}
	return sum
}

func norm(a []float64) float64 { return math.Sqrt(dot(a, a)) }
