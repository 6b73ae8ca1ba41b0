package tension

import (
	"errors"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// conditions are equations that hold at the true values: F(e, h) = 0, each row relative to what it is about. e are the
// inputs in standard deviations from their estimates, h is the logarithm of the horizontal tension, which no input holds. Z are
// further figures.
type conditions struct {
	rows, figures, errors int
	at                    func(e []float64, h float64, f, z []float64) error
}

// adjusted is what adjust found.
type adjusted struct {
	h     float64       // logarithm of H
	e     []float64     // adjusted inputs, standard deviations from their estimates
	z     []float64     // figures at the solution
	k     *mat.VecDense // correlates
	cov   *mat.SymDense // of (h, z)
	tests *mat.SymDense // cofactor of the correlates
	chi   float64
	a     *mat.Dense // derivatives of the conditions by e
}

// settled is the change of ln H, or a hundredth of that of an input in standard deviations, below which derivatives are kept.
const settled = 2e-2

var errNotDetermined = errors.New("tension: the evidence does not determine the tension")

// adjust is the general least-squares adjustment of conditions with errors of unit variance and one free unknown: it minimises the sum
// of e^2 under F(e, h) = 0 (Gauss-Helmert model; Mikhail and Ackermann 1976, Observations and Least Squares, ch. 9), linearised
// anew at each step (Pope 1972). With weight P = (A A')^-1, b = dF/dh: dh = -(b'P b)^-1 b'P w, k = -P(w + b dh), e = A'k, chi^2 =
// e'e with rows - 1 degrees of freedom. The covariance is that of the linear model at the solution. The error wraps errNotDetermined when the
// conditions are dependent or say nothing of h.
func adjust(c conditions, h float64) (*adjusted, error) { return adjustFrom(c, h, nil) }

// adjustFrom is adjust with the conditions already linearised at the start; nil = not.
func adjustFrom(c conditions, h float64, l *linearised) (*adjusted, error) {
	s := &adjusted{h: h, e: make([]float64, c.errors)}
	moved := math.Inf(1)
	for i := range 40 {
		var err error
		if i == 0 && l != nil {
			// as given
		} else if moved > settled {
			l, err = c.linear(s.e, s.h)
		} else { // so near that the derivatives stay
			err = c.at(s.e, s.h, l.f, l.z)
		}
		if err != nil {
			return nil, err
		}
		w := mat.NewVecDense(c.rows, nil)
		for i := range c.rows {
			w.SetVec(i, l.f[i]-dot(l.a.RawRowView(i), s.e))
		}
		dh, err := s.solve(l, w)
		if err != nil {
			return nil, err
		}
		var next mat.VecDense
		next.MulVec(l.a.T(), s.k)
		moved = math.Abs(dh)
		for d := range s.e {
			moved = math.Max(moved, math.Abs(next.AtVec(d)-s.e[d])*1e-2)
			s.e[d] = next.AtVec(d)
		}
		s.h += math.Max(-1, math.Min(1, dh))
		if moved < 1e-8 {
			s.z, s.a = l.z, l.a
			s.chi = dot(s.e, s.e)
			s.covariance(l)
			return s, nil
		}
		if math.IsNaN(moved) {
			break
		}
	}
	return nil, errNotDetermined
}

// linearised are the conditions and figures with their derivatives.
type linearised struct {
	f, z  []float64
	a, za *mat.Dense
	b, zb *mat.VecDense
	p     mat.Cholesky
	pb    mat.VecDense
	bPb   float64
}

func (c conditions) linear(e []float64, h float64) (*linearised, error) {
	l := &linearised{f: make([]float64, c.rows), z: make([]float64, c.figures), a: mat.NewDense(c.rows, c.errors, nil), b: mat.NewVecDense(c.rows, nil)}
	if c.figures > 0 {
		l.za, l.zb = mat.NewDense(c.figures, c.errors, nil), mat.NewVecDense(c.figures, nil)
	}
	if err := c.at(e, h, l.f, l.z); err != nil {
		return nil, err
	}
	f, z := make([]float64, c.rows), make([]float64, c.figures)
	x := append([]float64(nil), e...)
	for d := range e {
		x[d] = e[d] + probe
		if err := c.at(x, h, f, z); err != nil {
			return nil, err
		}
		x[d] = e[d]
		for i := range f {
			l.a.Set(i, d, (f[i]-l.f[i])/probe)
		}
		for i := range z {
			l.za.Set(i, d, (z[i]-l.z[i])/probe)
		}
	}
	const small = 1e-6
	if err := c.at(e, h+small, f, z); err != nil {
		return nil, err
	}
	for i := range f {
		l.b.SetVec(i, (f[i]-l.f[i])/small)
	}
	for i := range z {
		l.zb.SetVec(i, (z[i]-l.z[i])/small)
	}
	return l, nil
}

// pick copies some rows; figures are numbers of those there are, nil = the picked rows themselves.
func (l *linearised) pick(rows, figures []int) *linearised {
	_, n := l.a.Dims()
	out := &linearised{a: mat.NewDense(len(rows), n, nil), b: mat.NewVecDense(len(rows), nil)}
	for k, i := range rows {
		out.f = append(out.f, l.f[i])
		out.a.SetRow(k, l.a.RawRowView(i))
		out.b.SetVec(k, l.b.AtVec(i))
	}
	if figures == nil {
		out.z, out.za, out.zb = slices.Clone(out.f), mat.DenseCopyOf(out.a), mat.VecDenseCopyOf(out.b)
		return out
	}
	out.za, out.zb = mat.NewDense(len(figures), n, nil), mat.NewVecDense(len(figures), nil)
	for k, i := range figures {
		out.z = append(out.z, l.z[i])
		out.za.SetRow(k, l.za.RawRowView(i))
		out.zb.SetVec(k, l.zb.AtVec(i))
	}
	return out
}

// solve does one step: it sets the correlates and returns the change of h.
func (s *adjusted) solve(l *linearised, w *mat.VecDense) (dh float64, err error) {
	n, _ := l.a.Dims()
	q := mat.NewSymDense(n, nil)
	q.SymOuterK(1, l.a)
	if !l.p.Factorize(q) || l.p.Cond() > 1e12 {
		return 0, errNotDetermined
	}
	if l.p.SolveVecTo(&l.pb, l.b) != nil {
		return 0, errNotDetermined
	}
	l.bPb = mat.Dot(l.b, &l.pb)
	if !(l.bPb > 4) { // u(H)/H above one half
		return 0, errNotDetermined
	}
	dh = -mat.Dot(&l.pb, w) / l.bPb
	rest := mat.NewVecDense(n, nil)
	rest.AddScaledVec(w, dh, l.b)
	s.k = mat.NewVecDense(n, nil)
	if l.p.SolveVecTo(s.k, rest) != nil {
		return 0, errNotDetermined
	}
	s.k.ScaleVec(-1, s.k)
	return dh, nil
}

// covariance is that of (h, z) and the cofactor of the correlates, by propagating the errors through the solution: h errs by G b'P A e and
// the inputs by (A' Q A - 1) e, Q = P - P b G b'P, G = 1/(b'P b).
func (s *adjusted) covariance(l *linearised) {
	n, m := l.a.Dims()
	var p mat.SymDense
	if l.p.InverseTo(&p) != nil {
		p = *mat.NewSymDense(n, nil)
	}
	s.tests = mat.NewSymDense(n, nil)
	s.tests.SymRankOne(&p, -1/l.bPb, &l.pb)
	var pa, aqa mat.Dense
	pa.Mul(s.tests, l.a)
	aqa.Mul(l.a.T(), &pa)
	for d := range m {
		aqa.Set(d, d, aqa.At(d, d)-1)
	}
	byH := mat.NewDense(1, m, nil)
	byH.Mul(mat.NewDense(1, n, l.pb.RawVector().Data), l.a)
	byH.Scale(1/l.bPb, byH)
	all := mat.NewDense(1+len(l.z), m, nil)
	all.SetRow(0, byH.RawRowView(0))
	if len(l.z) > 0 {
		var z, zh mat.Dense
		z.Mul(l.za, &aqa)
		zh.Mul(l.zb, byH)
		z.Add(&z, &zh)
		for i := range l.z {
			all.SetRow(1+i, z.RawRowView(i))
		}
	}
	s.cov = mat.NewSymDense(1+len(l.z), nil)
	s.cov.SymOuterK(1, all)
}

// test is the normalised residual of an error in direction g of the conditions and the size that the error would have (Baarda
// 1968, A testing procedure for use in geodetic networks). Zero when nothing checks that direction.
func (s *adjusted) test(g *mat.VecDense) (w, size, uSize float64) {
	var qg mat.VecDense
	qg.MulVec(s.tests, g)
	v := mat.Dot(g, &qg)
	if !(v > 1e-12*mat.Dot(g, g)) {
		return 0, 0, math.Inf(1)
	}
	size = -mat.Dot(g, s.k) / v
	return size * math.Sqrt(v), size, 1 / math.Sqrt(v)
}
