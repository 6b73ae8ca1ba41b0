// Package hanging is the geometry of a cable that hangs under even load and may stretch, with the tension scaled out: unstressed
// length, run and rise between two tangents, exact to rounding. It serves the mixed curve of package fit and the elastic
// states of package tension.
package hanging

import (
	"errors"
	"fmt"
	"math"
)

// ErrNoShape means that no curve of the equation spans the given run and rise; test with errors.Is.
var ErrNoShape = errors.New("hanging: no curve found")

// Equation is the equilibrium of a hanging cable with its horizontal tension H scaled out, so that it stays regular when H
// passes through zero:
//
//	dt/ds = KW + KQ dx/ds     (t = slope = V/H, s = unstressed length at the reference temperature)
//	dx/ds = G (1/sqrt(1 + t^2) + Eta),   dy/ds = t dx/ds
//
// KW = w/H and KQ = q/H in 1/m, Eta = H/EA (0: inextensible) and G = 1 + alpha dT (1: no warmth) dimensionless. Substituting
// t = sinh(psi) every length is an integral over psi of a smooth function. Irvine (1981), Cable Structures, ch. 1,
// extended by a load q even along the horizontal.
type Equation struct{ KW, KQ, Eta, G float64 }

// Lengths are unstressed length S, run X and rise Y between two tangents in m, or derivatives of them.
type Lengths struct{ S, X, Y float64 }

// Rate is the derivative of Lengths by psi.
func (e Equation) Rate(psi float64) Lengths {
	ex := math.Exp(psi)
	c, sh := (ex+1/ex)/2, (ex-1/ex)/2
	dx := e.G * (1/c + e.Eta)
	ds := c / (e.KW + e.KQ*dx)
	return Lengths{ds, ds * dx, ds * dx * sh}
}

// Between integrates from psi a to psi b.
func (e Equation) Between(a, b float64) (l Lengths) {
	if e.KQ == 0 {
		l, _ = e.ownWeight(a, b)
		return l
	}
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			d := e.Rate(mid + half*x)
			l.S += r.w[i] * d.S
			l.X += r.w[i] * d.X
			l.Y += r.w[i] * d.Y
		}
	}
	return Lengths{l.S * half, l.X * half, l.Y * half}
}

// ownWeight is Between without a load even along the horizontal, in closed form (Irvine 1981, sec. 1.3), and the integral
// of the slope over S. Differences of hyperbolic functions are products, so that short and steep spans keep their digits.
func (e Equation) ownWeight(a, b float64) (l Lengths, lift float64) {
	half := math.Sinh((b - a) / 2)
	sh := math.Sinh((a + b) / 2)
	ch := math.Sqrt(1 + sh*sh)
	l.S = 2 * ch * half / e.KW // sinh b - sinh a
	rise := 2 * sh * half / e.KW
	lift = l.S * sh * math.Sqrt(1+half*half) // (sinh(b)^2 - sinh(a)^2) / 2: the mean slope is sinh(mid) cosh(half)
	l.X = e.G * ((b-a)/e.KW + e.Eta*l.S)
	l.Y = e.G * (rise + e.Eta*lift)
	return l, lift
}

// Below integrates (t - slope) dx from psi a to psi b: the height, m, over a line of that slope, without subtracting heights.
func (e Equation) Below(a, b, slope float64) (z float64) {
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			psi := mid + half*x
			z += r.w[i] * e.Rate(psi).X * (math.Sinh(psi) - slope)
		}
	}
	return z * half
}

// ByLogTension is the derivative of Between by ln H at fixed psi a and b, with loads and axial stiffness kept.
func (e Equation) ByLogTension(a, b float64) (l Lengths) {
	if e.KQ == 0 {
		l, lift := e.ownWeight(a, b)
		soft := e.G * e.Eta
		return Lengths{l.S, l.X + soft*l.S, l.Y + soft*lift}
	}
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	soft := e.G * e.Eta
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			ex := math.Exp(mid + half*x)
			c := (ex + 1/ex) / 2
			dx := e.G * (1/c + e.Eta)
			d := e.KW + e.KQ*dx
			ds := c / d
			byS := ds / d * (d - e.KQ*soft)
			byX := byS*dx + ds*soft
			l.S += r.w[i] * byS
			l.X += r.w[i] * byX
			l.Y += r.w[i] * byX * (ex - 1/ex) / 2
		}
	}
	return Lengths{l.S * half, l.X * half, l.Y * half}
}

// Start guesses the end tangents over a run and a rise, m, from the catenary or the parabola of the same mean curvature.
func (e Equation) Start(run, rise float64) (a, b float64) {
	own, deck := e.KW/(e.G*(1+e.Eta)), e.KQ
	k := own + deck
	half := k * run / 2
	if own >= deck {
		m := math.Asinh(rise / run / sinhc(half))
		return m - half, m + half
	}
	t := rise / run
	return math.Asinh(t - half), math.Asinh(t + half)
}

// Span finds the end tangents psi between which the curve covers run and rise, m, by Newton's method from (a, b). The error
// wraps ErrNoShape.
func (e Equation) Span(run, rise, a, b float64) (float64, float64, error) {
	size := math.Hypot(run, rise)
	last := math.Inf(1)
	for range 60 {
		l := e.Between(a, b)
		rx, ry := run-l.X, rise-l.Y
		miss := math.Hypot(rx, ry)
		ra, rb := e.Rate(a), e.Rate(b)
		ta, tb := math.Sinh(a), math.Sinh(b)
		det := 2 * math.Sinh((b-a)/2) * math.Cosh((a+b)/2) // tb - ta without cancellation
		da := (ry - tb*rx) / (ra.X * det)
		db := (ry - ta*rx) / (rb.X * det)
		if !(math.Abs(da)+math.Abs(db) < math.Inf(1)) {
			break
		}
		// A step that would turn the cable over is cut; near the root it never is.
		cut := 1.0
		if limit := 0.7 * (b - a); db-da < -limit {
			cut = limit / (da - db)
		}
		if big := math.Max(math.Abs(da), math.Abs(db)); big*cut > 2 {
			cut = 2 / big
		}
		a, b = a+cut*da, b+cut*db
		if math.Abs(da)+math.Abs(db) <= 1e-9*math.Abs(b-a) { // the next step would be its square: rounding
			return a, b, nil
		}
		if miss <= 1e-15*size || (miss <= 1e-11*size && miss >= last/4) {
			return a, b, nil
		}
		last = miss
	}
	return a, b, fmt.Errorf("%w: run %.6g m, rise %.6g m, curvature %.3g 1/m", ErrNoShape, run, rise, e.KW+e.KQ)
}

// Reach is the psi at run x from psi a, by Newton's method from guess.
func (e Equation) Reach(a, guess, x float64) float64 {
	psi := guess
	for range 60 {
		step := (x - e.Between(a, psi).X) / e.Rate(psi).X
		psi += step
		if math.Abs(step) <= 1e-14*(math.Abs(psi)+math.Abs(psi-a)) {
			break
		}
	}
	return psi
}

// sinhc is sinh(x)/x, even and 1 at zero.
func sinhc(x float64) float64 {
	if math.Abs(x) < 1e-4 {
		return 1 + x*x/6
	}
	return math.Sinh(x) / x
}
