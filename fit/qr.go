package fit

import "math"

// qr is a Householder factorisation with column pivoting, A P = Q R, of a column-major m x n matrix, kept in place: R above
// the diagonal, its diagonal in rdiag, the reflectors below. Businger and Golub (1965), Numerische Mathematik 7, 269-276.
type qr struct {
	m, n  int
	a     []float64 // column-major, m x n
	rdiag []float64
	norm  []float64 // norms of the columns of A
	pivot []int     // column j of AP is column pivot[j] of A
	rest  []float64 // norms of what is left of the columns
}

func (f *qr) resize(m, n int) {
	f.m, f.n = m, n
	f.a = grow(f.a, m*n)
	f.rdiag, f.norm, f.rest = grow(f.rdiag, n), grow(f.norm, n), grow(f.rest, n)
	if cap(f.pivot) < n {
		f.pivot = make([]int, n)
	}
	f.pivot = f.pivot[:n]
}

func grow(s []float64, n int) []float64 {
	if cap(s) < n {
		return make([]float64, n)
	}
	return s[:n]
}

func (f *qr) column(j int) []float64 { return f.a[j*f.m : (j+1)*f.m] }

// factor factorises the matrix held in a.
func (f *qr) factor() {
	for j := range f.n {
		f.pivot[j] = j
		f.norm[j] = norm(f.column(j))
		f.rest[j] = f.norm[j]
	}
	for j := range min(f.m, f.n) {
		big := j
		for k := j + 1; k < f.n; k++ {
			if f.rest[k] > f.rest[big] {
				big = k
			}
		}
		if big != j {
			cj, cb := f.column(j), f.column(big)
			for i := range cj {
				cj[i], cb[i] = cb[i], cj[i]
			}
			f.rest[j], f.rest[big] = f.rest[big], f.rest[j]
			f.pivot[j], f.pivot[big] = f.pivot[big], f.pivot[j]
		}
		f.reflect(j)
	}
}

// reflect makes the reflector of column j and applies it to the columns after it.
func (f *qr) reflect(j int) {
	c := f.column(j)[j:]
	size := f.rest[j]
	if size == 0 {
		f.rdiag[j] = 0
		return
	}
	if c[0] < 0 {
		size = -size
	}
	if inverse := 1 / size; math.Abs(inverse) < math.MaxFloat64 {
		for i := range c {
			c[i] *= inverse
		}
	} else { // a column of subnormal length
		for i := range c {
			c[i] /= size
		}
	}
	c[0]++
	for k := j + 1; k < f.n; k++ {
		full := f.column(k)
		d := full[j:]
		t := dot(c, d) / c[0]
		for i, x := range c {
			d[i] -= t * x
		}
		f.rest[k] = norm(full[j+1:])
	}
	f.rdiag[j] = -size
}

// applyQT overwrites b (length m) by Q^T b.
func (f *qr) applyQT(b []float64) {
	for j := range min(f.m, f.n) {
		c := f.column(j)[j:]
		if c[0] == 0 {
			continue
		}
		d := b[j:]
		t := dot(c, d) / c[0]
		for i := range d {
			d[i] -= t * c[i]
		}
	}
}

// r is the entry (i, j) of R, i <= j.
func (f *qr) r(i, j int) float64 {
	if i == j {
		return f.rdiag[i]
	}
	return f.a[j*f.m+i]
}

// norm is the Euclidean norm, scaled only when squares would leave the range of float64.
func norm(x []float64) float64 {
	s := dot(x, x)
	if s > 1e-280 && s < 1e280 {
		return math.Sqrt(s)
	}
	big := 0.0
	for _, v := range x {
		big = math.Max(big, math.Abs(v))
	}
	if big == 0 || math.IsInf(big, 0) || math.IsNaN(s) {
		return big + s*0
	}
	s = 0
	for _, v := range x {
		v /= big
		s += v * v
	}
	return big * math.Sqrt(s)
}

func dot(x, y []float64) float64 {
	var a, b float64 // two sums, so that additions need not wait for each other
	y = y[:len(x)]
	i := 0
	for ; i+1 < len(x); i += 2 {
		a += x[i] * y[i]
		b += x[i+1] * y[i+1]
	}
	if i < len(x) {
		a += x[i] * y[i]
	}
	return a + b
}
