package tension

import (
	"errors"
	"fmt"
	"math"
)

// Errors of states that do not exist; test with errors.Is.
var (
	ErrNoLoad    = errors.New("tension: a cable without load has no hanging shape")
	ErrTooShort  = errors.New("tension: an inextensible cable shorter than the chord cannot reach both supports")
	ErrNoState   = errors.New("tension: no state found")
	errBadInputs = errors.New("tension: impossible input")
)

// Cable is one elastic cable under even load.
type Cable struct {
	SelfWeight     float64 // w, N per metre of unstressed cable at the reference temperature
	DeckLoad       float64 // q, N per metre of horizontal
	AxialStiffness float64 // EA, N; +Inf for an inextensible cable
	Expansion      float64 // alpha, 1/degC
}

// Chord is the straight line between the supports.
type Chord struct {
	Length float64 // horizontal, m, > 0
	Rise   float64 // z_B - z_A, m
}

// State is a cable in equilibrium between two supports.
type State struct {
	Cable      Cable
	Chord      Chord
	DT         float64 // temperature above the reference, degC
	H          float64 // horizontal tension, N
	Unstressed float64 // S0, m, at the reference temperature
	psiA, psiB float64 // tangent angle measure at the ends: slope = sinh(psi)
}

// equation holds the elastic cable with its tension scaled out, so that it stays regular when H passes through zero:
//
//	dt/ds = kw + kq dx/ds     (t = slope = V/H, s = unstressed length at the reference temperature)
//	dx/ds = g (1/sqrt(1 + t^2) + eta),   dy/ds = t dx/ds
//
// with kw = w/H, kq = q/H, eta = H/EA and g = 1 + alpha dT. Substituting t = sinh(psi) every length is an integral over
// psi of a smooth function. Irvine (1981), Cable Structures, ch. 1, extended by the deck load.
type equation struct{ kw, kq, eta, g float64 }

// lengths are unstressed length, run and rise between two tangents, or their derivatives.
type lengths struct{ s, x, y float64 }

// rate is the derivative of lengths by psi.
func (e equation) rate(psi float64) lengths {
	ex := math.Exp(psi)
	c, sh := (ex+1/ex)/2, math.Sinh(psi)
	dx := e.g * (1/c + e.eta)
	ds := c / (e.kw + e.kq*dx)
	return lengths{ds, ds * dx, ds * dx * sh}
}

// between integrates from psi a to psi b.
func (e equation) between(a, b float64) (l lengths) {
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			d := e.rate(mid + half*x)
			l.s += r.w[i] * d.s
			l.x += r.w[i] * d.x
			l.y += r.w[i] * d.y
		}
	}
	return lengths{l.s * half, l.x * half, l.y * half}
}

// below integrates (t - slope) dx from psi a to psi b: the height over a line of that slope, without subtracting heights.
func (e equation) below(a, b, slope float64) (z float64) {
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			psi := mid + half*x
			z += r.w[i] * e.rate(psi).x * (math.Sinh(psi) - slope)
		}
	}
	return z * half
}

// betweenByH integrates the derivative by H at fixed psi of what between gives; ea is the axial stiffness, h is H.
func (e equation) betweenByH(a, b, h, ea float64) (l lengths) {
	half := (b - a) / 2
	r, panels := ruleFor(half)
	half /= float64(panels)
	soft := e.g / ea
	for p := range panels {
		mid := a + half*float64(2*p+1)
		for i, x := range r.x {
			psi := mid + half*x
			ex := math.Exp(psi)
			c := (ex + 1/ex) / 2
			dx := e.g * (1/c + e.eta)
			d := e.kw + e.kq*dx
			ds := c / d
			dsH := ds / d * (d/h - e.kq*soft)
			dxH := dsH*dx + ds*soft
			l.s += r.w[i] * dsH
			l.x += r.w[i] * dxH
			l.y += r.w[i] * dxH * (ex - 1/ex) / 2
		}
	}
	return lengths{l.s * half, l.x * half, l.y * half}
}

// start guesses the end tangents from the catenary or the parabola of the same mean curvature.
func (e equation) start(c Chord) (a, b float64) {
	own, deck := e.kw/(e.g*(1+e.eta)), e.kq
	k := own + deck
	half := k * c.Length / 2
	if own >= deck {
		m := math.Asinh(c.Rise / c.Length / sinhc(half))
		return m - half, m + half
	}
	t := c.Rise / c.Length
	return math.Asinh(t - half), math.Asinh(t + half)
}

// span finds the end tangents for which the cable spans the chord, by Newton's method from (a, b).
func (e equation) span(c Chord, a, b float64) (float64, float64, error) {
	size := math.Hypot(c.Length, c.Rise)
	last := math.Inf(1)
	for range 60 {
		l := e.between(a, b)
		rx, ry := c.Length-l.x, c.Rise-l.y
		miss := math.Hypot(rx, ry)
		ra, rb := e.rate(a), e.rate(b)
		ta, tb := math.Sinh(a), math.Sinh(b)
		det := 2 * math.Sinh((b-a)/2) * math.Cosh((a+b)/2) // tb - ta without cancellation
		da := (ry - tb*rx) / (ra.x * det)
		db := (ry - ta*rx) / (rb.x * det)
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
		if miss <= 1e-15*size || (miss <= 1e-11*size && miss >= last/4) {
			return a, b, nil
		}
		last = miss
	}
	return a, b, fmt.Errorf("%w: chord %.6g m, rise %.6g m, curvature %.3g 1/m", ErrNoState, c.Length, c.Rise, e.kw+e.kq)
}

// sinhc is sinh(x)/x, even and 1 at zero.
func sinhc(x float64) float64 {
	if math.Abs(x) < 1e-4 {
		return 1 + x*x/6
	}
	return math.Sinh(x) / x
}
