package fit

import "math"

// evaluator gives heights, slopes, bends and gradients of one curve at many stations; what does not depend on the station is
// worked out once.
type evaluator struct {
	c   Curve
	cat catenaryTerms
	mix mixedCurve
	ok  bool // mix is usable

	loads *cusped // for a curve with local loads, else nil
	hold  int     // the part of it on whose smooth continuation all stations are taken, -1 = the part that holds the station
}

func (c Curve) evaluator() evaluator { return c.evaluatorBy(nil) }

// evaluatorBy is evaluator with derivatives by sizes and places of local loads as well, in the given columns.
func (c Curve) evaluatorBy(columns []column) (e evaluator) {
	e.set(c, columns)
	return e
}

// set prepares the evaluator for another curve; a fit keeps one, so that nothing is cleared or copied at every step.
func (e *evaluator) set(c Curve, columns []column) {
	e.c, e.hold, e.loads = c, -1, nil
	if len(c.Cusps) > 0 {
		e.loads = c.cusped(columns)
		return
	}
	switch c.Shape() {
	case Catenary:
		e.cat = c.prepare()
	case Mixed:
		e.mix, e.ok = c.mixed()
	}
}

// at is height, slope and second derivative at station s; g, when not nil, gets the gradient of the height.
func (e *evaluator) at(s float64, g *gradient) (z, slope, bend float64) {
	c := &e.c
	switch {
	case e.loads != nil:
		i := e.hold
		if i < 0 {
			i = e.loads.pieceAt(s)
		}
		return e.loads.at(i, s, g)
	case c.SelfShare == 1:
		return e.cat.at(s, g)
	case c.SelfShare == 0:
		if g != nil {
			c.gradientParabola(s, g)
		}
		return c.Z(s), c.Slope(s), c.Curvature
	case !e.ok:
		if g != nil {
			c.gradientMixed(s, g)
		}
		return c.Z(s), c.slopeMixed(s), c.Curvature * c.bend(c.chord())
	}
	psi := e.mix.at(*c, s)
	slope = math.Sinh(psi)
	z = c.Z1 + c.chord()*(s-c.S1) + e.mix.eq.Below(e.mix.psi1, psi, c.chord())
	if g != nil {
		e.mix.gradient(*c, s, psi, g)
	}
	return z, slope, c.Curvature * c.bend(slope)
}
