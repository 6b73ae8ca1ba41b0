package fit

import (
	"errors"
	"math"
)

// Problem is a nonlinear least-squares problem: minimise sum r_i(theta)^2.
type Problem interface {
	// Size is the number of residuals m and of parameters n, m >= n.
	Size() (m, n int)
	// Evaluate fills r (length m) with the residuals, each divided by its standard deviation, and j, column-major m x n,
	// with dr_i/dtheta_j unless it is nil.
	Evaluate(theta, r, j []float64)
}

// Status says how an iteration ended.
type Status int

// The ends of an iteration.
const (
	Converged  Status = iota // step and gradient are at the level of rounding
	Stalled                  // no step lowers the sum of squares any more, the gradient is small
	OutOfSteps               // MaxIterations reached
	NotFinite                // residuals or derivatives are not finite
)

// Err is nil for a usable end.
func (s Status) Err() error {
	switch s {
	case Converged, Stalled:
		return nil
	case OutOfSteps:
		return errors.New("fit: the iteration limit was reached before convergence")
	default:
		return errors.New("fit: residuals or their derivatives are not finite")
	}
}

// ErrRank means that the data do not determine all parameters.
var ErrRank = errors.New("fit: the points do not determine the curve")

// conditionLimit is the condition number of the column-scaled Jacobian beyond which a covariance is refused: half of the
// digits of float64.
const conditionLimit = 1e10

// Solution is what Solve found.
type Solution struct {
	Theta      []float64
	Sum        float64 // sum of squared residuals
	Iterations int
	Status     Status
	Condition  float64 // of the column-scaled Jacobian at the solution, in the 1-norm
}

// Solver holds the work space of Levenberg-Marquardt iterations; reuse it for many fits of like size. The zero value is
// ready. A Solver must not be used by two goroutines at once.
type Solver struct {
	MaxIterations int // 0 = 200
	f             qr
	r, trial, qtr []float64
	theta, next   []float64
	diag, step    []float64
	w1, w2, w3    []float64
	rt, sdiag     []float64 // n x n copy of R for the damped steps
}

const eps = 0x1p-52

// Solve minimises from start. Gauss-Newton steps are tried first and kept when they contract to the solution, as they do for a
// cable from its starting rule. Else the method is the trust-region form of Levenberg-Marquardt by More (1978), The
// Levenberg-Marquardt algorithm: implementation and theory, Lecture Notes in Mathematics 630, 105-116, on a pivoted QR
// factorisation of the Jacobian, finished by Gauss-Newton steps.
func (s *Solver) Solve(p Problem, start []float64) Solution {
	m, n := p.Size()
	s.resize(m, n)
	out := Solution{Status: NotFinite}
	copy(s.theta, start)
	if steps, fnorm, ok := s.contract(p, 0.1, 0); ok {
		out.Status, out.Iterations = Converged, steps
		return s.finish(out, fnorm)
	}
	copy(s.theta, start)
	p.Evaluate(s.theta, s.r, nil)
	fnorm := norm(s.r)
	if math.IsNaN(fnorm) || math.IsInf(fnorm, 0) {
		return s.finish(out, fnorm)
	}
	limit := s.MaxIterations
	if limit == 0 {
		limit = 200
	}
	out.Status = OutOfSteps
	delta, par := 0.0, 0.0
	for out.Iterations < limit {
		out.Iterations++
		s.linearise(p)
		first := s.scale(out.Iterations == 1)
		if out.Iterations == 1 {
			delta = first
		}
		done, norm1 := s.lower(p, fnorm, &delta, &par)
		fnorm = norm1
		if done != OutOfSteps {
			out.Status = done
			break
		}
	}
	_, fnorm, _ = s.contract(p, 0.98, 10)
	return s.finish(out, fnorm)
}

func (s *Solver) finish(out Solution, fnorm float64) Solution {
	out.Theta, out.Sum = s.theta, fnorm*fnorm
	return out
}

func (s *Solver) resize(m, n int) {
	s.f.resize(m, n)
	s.r, s.trial, s.qtr = grow(s.r, m), grow(s.trial, m), grow(s.qtr, m)
	for _, v := range []*[]float64{&s.theta, &s.next, &s.diag, &s.step, &s.w1, &s.w2, &s.w3, &s.sdiag} {
		*v = grow(*v, n)
	}
	s.rt = grow(s.rt, n*n)
}

// linearise evaluates at theta, factorises the Jacobian and rotates the residuals.
func (s *Solver) linearise(p Problem) {
	p.Evaluate(s.theta, s.r, s.f.a)
	s.f.factor()
	copy(s.qtr, s.r)
	s.f.applyQT(s.qtr)
}

// scale updates the scaling of the parameters by the column norms and returns the first trust radius.
func (s *Solver) scale(first bool) float64 {
	size := 0.0
	for j, c := range s.f.norm {
		switch {
		case first && c == 0:
			s.diag[j] = 1
		case first || c > s.diag[j]:
			s.diag[j] = c
		}
		size += s.diag[j] * s.theta[j] * s.diag[j] * s.theta[j]
	}
	if size == 0 {
		return 1
	}
	return math.Sqrt(size)
}

// lower tries damped steps until one lowers the sum of squares. It returns OutOfSteps to go on.
func (s *Solver) lower(p Problem, fnorm float64, delta, par *float64) (Status, float64) {
	if fnorm == 0 || s.gradient(fnorm) <= eps {
		return Converged, fnorm
	}
	for {
		s.damped(*delta, par)
		pnorm := 0.0
		for j, d := range s.step {
			s.next[j] = s.theta[j] - d
			pnorm += s.diag[j] * d * s.diag[j] * d
		}
		pnorm = math.Sqrt(pnorm)
		if !(pnorm < math.Inf(1)) { // derivatives that are not finite: no radius would ever be small enough
			return NotFinite, fnorm
		}
		p.Evaluate(s.next, s.trial, nil)
		fnorm1 := norm(s.trial)
		actual := -1.0
		if 0.1*fnorm1 < fnorm {
			actual = 1 - (fnorm1/fnorm)*(fnorm1/fnorm)
		}
		t1, t2 := s.predicted()/fnorm, math.Sqrt(*par)*pnorm/fnorm
		predicted, slope := t1*t1+2*t2*t2, -(t1*t1 + t2*t2)
		ratio := 0.0
		if predicted != 0 {
			ratio = actual / predicted
		}
		s.radius(ratio, actual, slope, fnorm, fnorm1, pnorm, delta, par)
		if ratio >= 1e-4 {
			copy(s.theta, s.next)
			copy(s.r, s.trial)
			fnorm = fnorm1
		}
		size := 0.0
		for j, x := range s.theta {
			size += s.diag[j] * x * s.diag[j] * x
		}
		switch size = math.Sqrt(size); {
		case math.Abs(actual) <= eps && predicted <= eps && ratio <= 2:
			return Converged, fnorm
		case *delta <= 4*eps*size:
			return Stalled, fnorm
		case ratio >= 1e-4:
			return OutOfSteps, fnorm
		}
	}
}

// radius adapts the trust radius and the damping to how well the linear model predicted.
func (s *Solver) radius(ratio, actual, slope, fnorm, fnorm1, pnorm float64, delta, par *float64) {
	switch {
	case !(ratio > 0.25):
		cut := 0.5
		if actual < 0 {
			cut = 0.5 * slope / (slope + 0.5*actual)
		}
		if !(0.1*fnorm1 < fnorm) || !(cut >= 0.1) {
			cut = 0.1
		}
		*delta = cut * math.Min(*delta, pnorm/0.1)
		*par /= cut
	case *par == 0 || ratio >= 0.75:
		*delta = pnorm / 0.5
		*par *= 0.5
	}
}

// gradient is the largest cosine between the residuals and a column of the Jacobian.
func (s *Solver) gradient(fnorm float64) float64 {
	g := 0.0
	for j := range s.f.n {
		c := s.f.norm[s.f.pivot[j]]
		if c == 0 {
			continue
		}
		sum := 0.0
		for i := 0; i <= j; i++ {
			sum += s.f.r(i, j) * (s.qtr[i] / fnorm)
		}
		g = math.Max(g, math.Abs(sum/c))
	}
	return g
}

// predicted is |R P^T step|, the length of the change of the residuals in the linear model.
func (s *Solver) predicted() float64 {
	for i := range s.w3 {
		s.w3[i] = 0
	}
	for j := range s.f.n {
		d := s.step[s.f.pivot[j]]
		for i := 0; i <= j; i++ {
			s.w3[i] += s.f.r(i, j) * d
		}
	}
	return norm(s.w3)
}

// contract takes undamped Gauss-Newton steps from theta while each is shorter than the shortest before it by the given factor;
// patience is how many in a row may fail that, since with large residuals a step can be short by accident. Near the solution
// the sum of squares is flat to rounding while the steps, and with them the last digits of the parameters, are not. ok means
// that the steps shrank to the level of rounding; theta is then the solution and the factorisation that of the Jacobian
// there. fnorm is the norm of the residuals at theta.
func (s *Solver) contract(p Problem, factor float64, patience int) (steps int, fnorm float64, ok bool) {
	shortest, last, before, least := math.Inf(1), math.Inf(1), math.Inf(1), math.Inf(1)
	fails := 0
	copy(s.next, s.theta)
	for steps < 300 {
		steps++
		s.linearise(p)
		fnorm = norm(s.r)
		// A first step may go astray and contract to another stationary point: it would raise the sum of squares.
		if !(fnorm < math.Inf(1)) || fnorm > least*(1+1e-9) || s.rank() < s.f.n {
			break
		}
		least = min(least, fnorm)
		s.gaussNewton()
		size, level := s.stepSize(fnorm)
		if size <= level {
			return steps, fnorm, true
		}
		fails++
		if size < factor*shortest {
			fails = 0
		}
		if size < shortest {
			shortest = size
			copy(s.next, s.theta)
		}
		if fails > patience {
			ok = shortest <= 1e6*level // the steps have become noise
			break
		}
		for j, d := range s.step {
			s.theta[j] -= d
		}
		// The next step would be rounding, by the worse of the last two contractions, and this one is far below the scatter:
		// residuals and Jacobian need not be worked out again; what the step takes from the residuals is at a right angle to
		// what is left.
		rate := max(size/last, before)
		if size*rate <= level && rate < 1e-3 && size <= 1e-6*fnorm/math.Sqrt(float64(s.f.m)) {
			return steps, math.Sqrt(fnorm*fnorm - size*size), true
		}
		last, before = size, size/last
	}
	if !ok || fails > 0 {
		copy(s.theta, s.next)
		s.linearise(p)
	}
	return steps, norm(s.r), ok
}

// stepSize is the length of the step in units of the residuals that it moves, and the length below which a step is rounding:
// in the residuals, or in the parameters themselves.
func (s *Solver) stepSize(fnorm float64) (size, level float64) {
	whole := 0.0
	for j, d := range s.step {
		size += s.f.norm[j] * d * s.f.norm[j] * d
		whole += s.f.norm[j] * s.theta[j] * s.f.norm[j] * s.theta[j]
	}
	return math.Sqrt(size), eps * (math.Sqrt(whole) + fnorm)
}

// rank counts the columns that are not, to rounding, combinations of others; each is measured by its own length, so that the
// units of the parameters do not matter.
func (s *Solver) rank() int {
	k := 0
	for j := range s.f.n {
		if math.Abs(s.f.rdiag[j]) > eps*float64(s.f.m)*s.f.norm[s.f.pivot[j]] {
			k++
		}
	}
	return k
}

// gaussNewton sets step to the undamped step.
func (s *Solver) gaussNewton() {
	n := s.f.n
	for j := n - 1; j >= 0; j-- {
		v := s.qtr[j]
		for k := j + 1; k < n; k++ {
			v -= s.f.r(j, k) * s.w1[k]
		}
		s.w1[j] = v / s.f.rdiag[j]
	}
	for j := range n {
		s.step[s.f.pivot[j]] = s.w1[j]
	}
}
