package tension

import (
	"math"

	"tautbook/fit"
	"tautbook/fit/hanging"
)

// rival fills the other reading: the cable has its designed unstressed length and the measured shape, so the stretch, and
// with it the tension, follows from the length; the load is what that tension needs. Secant steps on H; the equation is
// regular through H = 0, so that a cable shorter than its unstressed length shows as negative tension.
func (in *inputs) rival(y *outputs, x []float64, c fit.Curve, day Cable, ch Chord, dt float64) {
	k := x[inCurvature]
	if !(k > 0) || math.IsNaN(y[outHExpected]) {
		return
	}
	per := in.stretchFactor(x, c, ch)
	l := carried{day.SelfWeight, day.DeckLoad}
	length := func(h float64) (float64, error) { return in.unstressed(x, c, l, ch, dt, h, per) }
	guess := y[outHExpected]
	if near := in.near[outHRival]; near != 0 && !math.IsNaN(near) {
		guess = near
	}
	h, err := lengthTension(length, y[outS0Design], x[inAxial]/per, guess)
	if err != nil {
		return
	}
	factor := h * k / in.hanging(x, l, h, per)
	y[outHRival] = h
	y[outRivalRatio] = h / y[outHExpected]
	y[outRivalFactor] = factor
	y[outRivalExtra] = (factor - 1) * y[outHanging]
	y[outImpliedLength] = h * k
}

// stretchFactor is the mean tension over the horizontal one, by which a cable along the measured curve stretches.
func (in *inputs) stretchFactor(x []float64, c fit.Curve, ch Chord) float64 {
	if in.frame.surveyed {
		return c.ArcLength(x[inStationA], x[inStationB]) / ch.Length
	}
	return math.Hypot(1, ch.Rise/ch.Length)
}

// unstressed is the unstressed length, m, of a cable that hangs in the measured curve under horizontal tension h, whatever its load.
func (in *inputs) unstressed(x []float64, c fit.Curve, l carried, ch Chord, dt, h, per float64) (float64, error) {
	k := x[inCurvature]
	hang := in.hanging(x, l, h, per)
	e := hanging.Equation{KW: l.self * k / hang, KQ: l.deck * k / hang, Eta: h / x[inAxial], G: 1 + x[inExpansion]*dt}
	if len(c.Cusps) > 0 {
		return kinkedLength(e, ch, c.Cusps, in.x[inStationA])
	}
	a, b := e.Start(ch.Length, ch.Rise)
	a, b, err := e.Span(ch.Length, ch.Rise, a, b)
	if err != nil {
		return 0, err
	}
	return e.Between(a, b).S, nil
}

// lengthTension solves length(H) = want; ea is the stiffness by which the first step goes, N.
func lengthTension(length func(float64) (float64, error), want, ea, h float64) (float64, error) {
	s, err := length(h)
	if err != nil {
		return 0, err
	}
	slope := -s / ea
	for range 40 {
		step := (want - s) / slope
		if math.Abs(step) > 0.5*ea { // half of EA is far beyond any cable
			return 0, ErrNoState
		}
		next, err := length(h + step)
		if err != nil {
			return 0, err
		}
		h += step
		if math.Abs(step) <= 1e-11*ea*1e-3 || next == s {
			return h, nil
		}
		if d := (next - s) / step; d < 0 {
			slope = d
		}
		s = next
	}
	return 0, ErrNoState
}
