package fit

import "math"

// The catenary is written with three even functions that are 1, 1 and 1/3 at zero, so that nothing cancels when it is nearly
// straight:
//
//	S(u) = sinh(u)/u,  C(u) = 2 (cosh(u) - 1)/u^2,  R(u) = (cosh(u) - S(u))/u^2 = S'(u)/u
//
// Below one their Taylor series in u^2 are exact to rounding.

// sinhc is S(x).
func sinhc(x float64) float64 {
	y := x * x
	if y >= 1 {
		return math.Sinh(x) / x
	}
	return 1 + y*(1./6+y*(1./120+y*(1./5040+y*(1./362880+y*(1./39916800+y*(1./6227020800+y*(1./1307674368000+
		y*(1./355687428096000))))))))
}

// even is S, C and R at u.
func even(u float64) (s, c, r float64) {
	y := u * u
	switch {
	case y < 0.05: // a sag below about a seventeenth of the span
		s = 1 + y*(1./6+y*(1./120+y*(1./5040+y*(1./362880+y*(1./39916800+y*(1./6227020800))))))
		c = 1 + y*(2./24+y*(2./720+y*(2./40320+y*(2./3628800+y*(2./479001600+y*(2./87178291200))))))
		r = 2./6 + y*(4./120+y*(6./5040+y*(8./362880+y*(10./39916800+y*(12./6227020800)))))
	case y < 1:
		s = sinhc(u)
		c = 1 + y*(2./24+y*(2./720+y*(2./40320+y*(2./3628800+y*(2./479001600+y*(2./87178291200+y*(2./20922789888000+
			y*(2./6402373705728000))))))))
		r = 2./6 + y*(4./120+y*(6./5040+y*(8./362880+y*(10./39916800+y*(12./6227020800+y*(14./1307674368000+
			y*(16./355687428096000+y*(18./121645100408832000))))))))
	default:
		x := math.Abs(u)
		e := math.Exp(x)
		cosh := (e + 1/e) / 2
		s = (e - 1/e) / (2 * x)
		c = 2 * (cosh - 1) / y
		r = (cosh - s) / y
	}
	return s, c, r
}

// catenaryTerms are the parts of a catenary that do not depend on the station, so that a fit computes them once a step. With
// v = s - m, u = k v, l = k half and sinh(psi) = chord / S(l):
//
//	z = mean + sinh(psi) v S(u) + cosh(psi) (k/2) (v^2 C(u) - half^2 C(l))
type catenaryTerms struct {
	m, mean, k      float64
	sinh, cosh      float64 // of psi
	bow, bowByK     float64 // half^2 C(l) and half^2 (S(l) - C(l)/2)
	tanh            float64 // of psi
	byRise, sinhByK float64 // derivatives of sinh(psi) by the rise and by k
}

func (c Curve) prepare() catenaryTerms {
	half := c.length() / 2
	l := c.Curvature * half
	s, b, r := even(l)
	e := catenaryTerms{m: c.middle(), mean: (c.Z1 + c.Z2) / 2, k: c.Curvature, sinh: c.chord() / s, byRise: 1 / (2 * half * s)}
	e.cosh = math.Sqrt(1 + e.sinh*e.sinh)
	e.tanh = e.sinh / e.cosh
	e.bow, e.bowByK = half*half*b, half*half*(s-b/2)
	e.sinhByK = -e.sinh * half * l * r / s
	return e
}

// at is height, slope and second derivative at station s; g, when not nil, gets the gradient of the height.
func (e *catenaryTerms) at(station float64, g *gradient) (z, slope, bend float64) {
	v := station - e.m
	u := e.k * v
	s, c, r := even(u)
	sinh, cosh := u*s, 1+u*u/2*c
	vs, bow := v*s, e.k/2*(v*v*c-e.bow)
	if g != nil {
		turn := vs + e.tanh*bow // dz by sinh(psi)
		g[0], g[1] = 0.5-e.byRise*turn, 0.5+e.byRise*turn
		g[2] = e.sinhByK*turn + e.sinh*v*v*u*r + e.cosh*(v*v*(s-c/2)-e.bowByK)
	}
	return e.mean + e.sinh*vs + e.cosh*bow, e.sinh*cosh + e.cosh*sinh, e.k * (e.cosh*cosh + e.sinh*sinh)
}
