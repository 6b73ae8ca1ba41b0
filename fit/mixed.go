package fit

import (
	"math"

	"tautbook/fit/hanging"
)

// straight is the curvature times length below which the mixed curve is taken to second order in it: the terms left out
// are then below rounding.
const straight = 1e-9

// mixedCurve is a curve of both loads between its tangents, in the closed differential form of package hanging:
//
//	dpsi/ds = Curvature (SelfShare + (1 - SelfShare)/cosh(psi)),  z' = sinh(psi)
type mixedCurve struct {
	eq         hanging.Equation
	psi1, psi2 float64
}

// mixed solves for the tangents at the two defining points; ok is false for a line that is straight to rounding. An arch is
// solved upside down as a hanging curve. Tangents that cannot be found are NaN, and so is all that follows from them: the
// line is no stand-in for a curve.
func (c Curve) mixed() (m mixedCurve, ok bool) {
	if math.Abs(c.Curvature*c.length()) < straight {
		return m, false
	}
	m.eq = c.equation()
	up, sign := m.eq, 1.0
	if c.Curvature < 0 {
		up.KW, up.KQ, sign = -m.eq.KW, -m.eq.KQ, -1
	}
	rise := sign * (c.Z2 - c.Z1)
	psi1, psi2 := up.Start(c.length(), rise)
	psi1, psi2, err := up.Span(c.length(), rise, psi1, psi2)
	if err != nil {
		psi1, psi2 = math.NaN(), math.NaN()
	}
	m.psi1, m.psi2 = sign*psi1, sign*psi2
	return m, true
}

// equation is the differential equation of the curve.
func (c Curve) equation() hanging.Equation {
	return hanging.Equation{KW: c.Curvature * c.SelfShare, KQ: c.Curvature * (1 - c.SelfShare), G: 1}
}

// at is the tangent angle measure at a station.
func (m mixedCurve) at(c Curve, s float64) float64 {
	guess := m.psi1 + (m.psi2-m.psi1)*(s-c.S1)/c.length()
	return m.eq.Reach(m.psi1, guess, s-c.S1)
}

// bend is z” / Curvature at slope t.
func (c Curve) bend(t float64) float64 { return c.SelfShare*math.Hypot(1, t) + 1 - c.SelfShare }

func (c Curve) aboveMixed(s float64) float64 {
	m, ok := c.mixed()
	if !ok {
		return c.Curvature / 2 * (s - c.S1) * (s - c.S2) * c.bend(c.chord())
	}
	return m.eq.Below(m.psi1, m.at(c, s), c.chord())
}

func (c Curve) slopeMixed(s float64) float64 {
	m, ok := c.mixed()
	if !ok {
		return c.chord() + c.Curvature*(s-c.middle())*c.bend(c.chord())
	}
	return math.Sinh(m.at(c, s))
}

func (c Curve) whereSlopeMixed(t float64) float64 {
	m, ok := c.mixed()
	if !ok {
		return c.middle() + (t-c.chord())/(c.Curvature*c.bend(c.chord()))
	}
	return c.S1 + m.eq.Between(m.psi1, math.Asinh(t)).X
}

func (c Curve) arcMixed(sa, sb float64) float64 {
	m, ok := c.mixed()
	if !ok {
		return (sb - sa) * math.Hypot(1, c.chord())
	}
	return m.eq.Between(m.at(c, sa), m.at(c, sb)).S
}

// gradientMixed uses the symmetries of the curve: shifting it and enlarging it (by 1 + e the curvature falls by e) leave it
// a solution, so every neighbouring solution is z + A z' + B + C (z - s z').
func (c Curve) gradientMixed(s float64, g *gradient) {
	m, ok := c.mixed()
	if !ok {
		part, f := (s-c.S1)/c.length(), c.bend(c.chord())
		g[0], g[1], g[2] = 1-part, part, (s-c.S1)*(s-c.S2)/2*f
		return
	}
	m.gradient(c, s, m.at(c, s), g)
}

// gradient is gradientMixed for known tangents.
func (m mixedCurve) gradient(c Curve, s, psi float64, g *gradient) {
	t1, t2, t := math.Sinh(m.psi1), math.Sinh(m.psi2), math.Sinh(psi)
	part := (t - t1) / (t2 - t1)
	g[0], g[1] = 1-part, part
	// z - z1 - (s - S1) z' at s and at S2, with heights over the chord line so that a small curvature keeps its digits.
	chord := c.chord()
	enlarged := m.eq.Below(m.psi1, psi, chord) - (s-c.S1)*(t-chord)
	whole := -c.length() * (t2 - chord)
	g[2] = -(enlarged - whole*part) / c.Curvature
}
