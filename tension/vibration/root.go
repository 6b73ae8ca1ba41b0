package vibration

import "math"

// SymmetricRoot is the i-th root (from 1) for symmetric in-plane modes, as frequency over that of the taut string in its first
// mode: omega L sqrt(m/T) / pi. lambda2 is Irvine's parameter (>= 0, +Inf for an inextensible cable), b = pi^2 EI / (T L^2) the
// bending stiffness of pinned ends. With b = 0 it solves tan(w/2) = w/2 - (4/lambda2)(w/2)^3 of Irvine and Caughey (1974).
func SymmetricRoot(lambda2, b float64, i int) float64 {
	n := float64(2*i - 1)
	if lambda2 == 0 {
		return n * math.Sqrt(1+b*n*n)
	}
	if b == 0 {
		return stringRoot(lambda2, i)
	}
	return stiffRoot(lambda2, b, i)
}

// stringRoot solves the equation multiplied by cos, which then has no poles: its two ends have opposite signs and one root is between.
func stringRoot(lambda2 float64, i int) float64 {
	long, short := 1.0, 0.0
	if !math.IsInf(lambda2, 1) {
		long, short = lambda2/(1+lambda2), 4/(1+lambda2)
	}
	f := func(x float64) float64 {
		sin, cos := math.Sincos(x)
		return long*(sin-x*cos) + short*x*x*x*cos
	}
	at := float64(2*i-1) * math.Pi / 2
	sign := 1.0
	if i%2 == 0 {
		sign = -1
	}
	return 2 / math.Pi * bisect(at, at+math.Pi, func(x float64) bool { return sign*f(x) > 0 })
}

// stiffRoot solves the secular equation in sines, which the pinned stiff cable shares with the string:
//
//	1 + lambda2 8/pi^2 sum over odd n of 1 / (n^2 (n^2 pi^2 (1 + b n^2) - w^2)) = 0
//
// It rises from pole to pole, so that one root lies between two of them. The sum is cut where its rest, of order 1/n^3, is 1e-9
// of the first term.
func stiffRoot(lambda2, b float64, i int) float64 {
	const terms = 150
	pole := func(n float64) float64 { return n * n * math.Pi * math.Pi * (1 + b*n*n) }
	below := func(w float64) bool {
		sum := 0.0
		for n := 2*terms - 1.0; n > 0; n -= 2 {
			sum += 1 / (n * n * (pole(n) - w*w))
		}
		return 1/lambda2+8/(math.Pi*math.Pi)*sum < 0
	}
	n := float64(2*i - 1)
	return bisect(math.Sqrt(pole(n)), math.Sqrt(pole(n+2)), below) / math.Pi
}

// bisect is the place between lo and hi where below turns from true to false.
func bisect(lo, hi float64, below func(float64) bool) float64 {
	for range 60 {
		mid := (lo + hi) / 2
		if below(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}
