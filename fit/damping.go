package fit

import "math"

// damped sets step to the minimiser of |J step - r|^2 + par |D step|^2 with par such that |D step| is within a tenth of the
// trust radius, or to the Gauss-Newton step with par = 0 when that lies inside (More 1978, section 5).
func (s *Solver) damped(delta float64, par *float64) {
	n := s.f.n
	rank := s.rank()
	if rank == n {
		s.gaussNewton()
	} else {
		s.truncated(rank)
	}
	dx := s.scaled(s.w2)
	miss := dx - delta
	if miss <= 0.1*delta {
		*par = 0
		return
	}
	low := 0.0
	if rank == n {
		for j := range n {
			l := s.f.pivot[j]
			s.w1[j] = s.diag[l] * (s.w2[l] / dx)
		}
		s.forwardR()
		t := norm(s.w1)
		low = miss / delta / t / t
	}
	for j := range n {
		sum := 0.0
		for i := 0; i <= j; i++ {
			sum += s.f.r(i, j) * s.qtr[i]
		}
		s.w1[j] = sum / s.diag[s.f.pivot[j]]
	}
	g := norm(s.w1)
	high := g / delta
	if high == 0 {
		high = math.SmallestNonzeroFloat64 * 0x1p60 / math.Min(delta, 0.1)
	}
	*par = math.Min(math.Max(*par, low), high)
	if *par == 0 {
		*par = g / dx
	}
	for iter := 1; ; iter++ {
		if *par == 0 {
			*par = math.Max(math.SmallestNonzeroFloat64*0x1p60, 0.001*high)
		}
		s.ridge(math.Sqrt(*par))
		dx = s.scaled(s.w2)
		was := miss
		miss = dx - delta
		if math.Abs(miss) <= 0.1*delta || (low == 0 && miss <= was && was < 0) || iter == 10 {
			return
		}
		for j := range n {
			l := s.f.pivot[j]
			s.w1[j] = s.diag[l] * (s.w2[l] / dx)
		}
		s.forwardRidge()
		t := norm(s.w1)
		better := miss / delta / t / t
		if miss > 0 {
			low = math.Max(low, *par)
		} else {
			high = math.Min(high, *par)
		}
		*par = math.Max(low, *par+better)
	}
}

// scaled fills d with D step and returns its length.
func (s *Solver) scaled(d []float64) float64 {
	for j, v := range s.step {
		d[j] = s.diag[j] * v
	}
	return norm(d)
}

// truncated is the Gauss-Newton step with the dependent columns left alone.
func (s *Solver) truncated(rank int) {
	n := s.f.n
	for j := range n {
		s.w1[j] = 0
	}
	for j := rank - 1; j >= 0; j-- {
		v := s.qtr[j]
		for k := j + 1; k < rank; k++ {
			v -= s.f.r(j, k) * s.w1[k]
		}
		s.w1[j] = v / s.f.rdiag[j]
	}
	for j := range n {
		s.step[s.f.pivot[j]] = s.w1[j]
	}
}

// forwardR solves R^T x = w1 in place.
func (s *Solver) forwardR() {
	for j := range s.f.n {
		sum := 0.0
		for i := range j {
			sum += s.f.r(i, j) * s.w1[i]
		}
		s.w1[j] = (s.w1[j] - sum) / s.f.rdiag[j]
	}
}

// ridge solves the damped problem by Givens rotations of sqrt(par) D into R; the rotated triangle is left in rt (lower,
// column by column) with its diagonal in sdiag.
func (s *Solver) ridge(root float64) {
	n := s.f.n
	rt := s.rt
	for j := range n {
		for i := 0; i <= j; i++ {
			rt[j*n+i] = s.f.r(i, j) // row j of R^T
		}
		s.w1[j] = s.qtr[j]
	}
	for j := range n {
		d := root * s.diag[s.f.pivot[j]]
		if d == 0 {
			continue
		}
		for k := j; k < n; k++ {
			s.w3[k] = 0
		}
		s.w3[j] = d
		extra := 0.0
		for k := j; k < n; k++ {
			if s.w3[k] == 0 {
				continue
			}
			h := math.Hypot(rt[k*n+k], s.w3[k])
			cos, sin := rt[k*n+k]/h, s.w3[k]/h
			rt[k*n+k] = h
			t := cos*s.w1[k] + sin*extra
			extra = -sin*s.w1[k] + cos*extra
			s.w1[k] = t
			for i := k + 1; i < n; i++ {
				t := cos*rt[i*n+k] + sin*s.w3[i]
				s.w3[i] = -sin*rt[i*n+k] + cos*s.w3[i]
				rt[i*n+k] = t
			}
		}
	}
	for j := n - 1; j >= 0; j-- {
		s.sdiag[j] = rt[j*n+j]
		if s.sdiag[j] == 0 {
			s.w1[j] = 0
			continue
		}
		v := s.w1[j]
		for k := j + 1; k < n; k++ {
			v -= rt[k*n+j] * s.w1[k]
		}
		s.w1[j] = v / s.sdiag[j]
	}
	for j := range n {
		s.step[s.f.pivot[j]] = s.w1[j]
	}
}

// forwardRidge solves S^T x = w1 in place, S the rotated triangle.
func (s *Solver) forwardRidge() {
	n := s.f.n
	for j := range n {
		sum := 0.0
		for i := range j {
			sum += s.rt[j*n+i] * s.w1[i]
		}
		s.w1[j] = (s.w1[j] - sum) / s.sdiag[j]
	}
}
