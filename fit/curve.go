package fit

import "math"

// Shape is the family that the curve belongs to.
func (c Curve) Shape() Shape {
	switch c.SelfShare {
	case 1:
		return Catenary
	case 0:
		return Parabola
	default:
		return Mixed
	}
}

// Constant is the catenary constant a or parabola parameter p, 1/Curvature, m; infinite for a straight line.
func (c Curve) Constant() float64 { return 1 / c.Curvature }

func (c Curve) middle() float64 { return (c.S1 + c.S2) / 2 }
func (c Curve) length() float64 { return c.S2 - c.S1 }
func (c Curve) chord() float64  { return (c.Z2 - c.Z1) / (c.S2 - c.S1) }

// above is the height over the line through the two defining points, m. It is in product form: nothing is lost for a taut
// cable, and the value passes smoothly through zero curvature.
//
// With m the middle station, L the distance and t the slope of the line, S(x) = sinh(x)/x, u = k(s-m), l = kL/2 and
// sinh(psi) = t/S(l), the catenary is
//
//	z - line = t (s-m) (S(u) - S(l))/S(l) + cosh(psi) (k/2) (s-S1)(s-S2) S((u+l)/2) S((u-l)/2)
func (c Curve) above(s float64) float64 {
	if len(c.Cusps) > 0 {
		return c.partAt(s).Z(s) - c.Z1 - c.chord()*(s-c.S1)
	}
	k := c.Curvature
	bow := k / 2 * (s - c.S1) * (s - c.S2)
	switch c.Shape() {
	case Parabola:
		return bow
	case Mixed:
		return c.aboveMixed(s)
	}
	m, t := c.middle(), c.chord()
	u, l := k*(s-m), k*c.length()/2
	sl := sinhc(l)
	sp := sinhc((u + l) / 2)
	sm := sinhc((u - l) / 2)
	// S(u) - S(l), whose relative error matters for a steep taut cable: (u^2-l^2) times a smooth quotient.
	ratio := t / sl
	return t*(s-m)*sinhcDifference(u, l)/sl + math.Sqrt(1+ratio*ratio)*bow*sp*sm
}

// sinhcDifference is S(x) - S(y) without cancellation for small arguments.
func sinhcDifference(x, y float64) float64 {
	x2, y2 := x*x, y*y
	if x2 >= 1 || y2 >= 1 {
		sx := sinhc(x)
		sy := sinhc(y)
		return sx - sy
	}
	// Sum over n of (x^2n - y^2n)/(2n+1)!, each difference as (x^2 - y^2) times the sum of mixed powers.
	mixed, power, factor, sum := 1.0, 1.0, 1.0/6, 0.0
	for n := 1; n <= 9; n++ {
		sum += mixed * factor
		power *= y2
		mixed = mixed*x2 + power
		factor /= float64((2*n + 2) * (2*n + 3))
	}
	return (x2 - y2) * sum
}

// psi is the tangent angle measure (slope = sinh psi) of a catenary at the middle station.
func (c Curve) psi() float64 {
	s := sinhc(c.Curvature * c.length() / 2)
	return math.Asinh(c.chord() / s)
}

// Z is the elevation of the curve at a station, m.
func (c Curve) Z(s float64) float64 {
	return (c.Z1+c.Z2)/2 + c.chord()*(s-c.middle()) + c.above(s)
}

// Slope is dz/ds at a station, dimensionless; at a local load that on the side of greater stations.
func (c Curve) Slope(s float64) float64 {
	if len(c.Cusps) > 0 {
		return c.partAt(s).Slope(s)
	}
	switch c.Shape() {
	case Parabola:
		return c.chord() + c.Curvature*(s-c.middle())
	case Mixed:
		return c.slopeMixed(s)
	default:
		return math.Sinh(c.Curvature*(s-c.middle()) + c.psi())
	}
}

// LowPoint is the station and elevation where the tangent is level, m; it may lie outside the span. ok is false when the
// curvature is not positive.
func (c Curve) LowPoint() (station, elevation float64, ok bool) {
	if !(c.Curvature > 0) {
		return 0, 0, false
	}
	if len(c.Cusps) > 0 {
		return c.lowestOf()
	}
	station = c.whereSlope(0)
	return station, c.Z(station), true
}

// whereSlope is the station at which the slope has the given value; the curvature must not be zero.
func (c Curve) whereSlope(t float64) float64 {
	switch c.Shape() {
	case Parabola:
		return c.middle() + (t-c.chord())/c.Curvature
	case Mixed:
		return c.whereSlopeMixed(t)
	default:
		return c.middle() + (math.Asinh(t)-c.psi())/c.Curvature
	}
}

// ArcLength is the length of the curve between two stations, m, negative when sb < sa.
func (c Curve) ArcLength(sa, sb float64) float64 {
	if len(c.Cusps) > 0 {
		if sb < sa {
			return -c.arcOf(sb, sa)
		}
		return c.arcOf(sa, sb)
	}
	switch c.Shape() {
	case Parabola:
		ta, tb := c.Slope(sa), c.Slope(sb)
		return parabolaArc(sb-sa, ta, tb, c.Curvature*(sb-sa))
	case Mixed:
		return c.arcMixed(sa, sb)
	}
	m, k := c.middle(), c.Curvature
	ua, ub := k*(sa-m), k*(sb-m)
	s := sinhc((ub - ua) / 2)
	return (sb - sa) * s * math.Cosh((ua+ub)/2+c.psi())
}

// parabolaArc is the integral of sqrt(1 + t^2) over a run in which the slope goes evenly from ta to tb = ta + d, in a form
// that keeps its digits when d is small.
func parabolaArc(run, ta, tb, d float64) float64 {
	ra, rb := math.Hypot(1, ta), math.Hypot(1, tb)
	lift := ta * (ta + tb) / (ra + rb)
	inner := ra - lift // asinh(tb) - asinh(ta) = asinh(d inner)
	x := d * inner
	part := 1.0
	if math.Abs(x) > 1e-4 {
		part = math.Asinh(x) / x
	} else {
		part -= x * x / 6
	}
	return run / 2 * (rb + lift + inner*part)
}

// Rebase is the same curve, defined by its heights at two other stations sa < sb.
func (c Curve) Rebase(sa, sb float64) Curve {
	return Curve{S1: sa, Z1: c.Z(sa), S2: sb, Z2: c.Z(sb), Curvature: c.Curvature, SelfShare: c.SelfShare, Cusps: c.Cusps}
}

// Sag is the vertical distance at station s from the chord between stations sa and sb down to the curve, m.
func (c Curve) Sag(s, sa, sb float64) float64 { return -c.Rebase(sa, sb).above(s) }

// GreatestSag is the station and size, m, of the greatest sag below the chord between stations sa and sb: where the tangent
// is parallel to the chord.
func (c Curve) GreatestSag(sa, sb float64) (station, sag float64) {
	b := c.Rebase(sa, sb)
	if len(c.Cusps) > 0 {
		return b.greatestSagOf()
	}
	station = b.middle()
	if c.Curvature != 0 {
		station = min(max(b.whereSlope(b.chord()), sa), sb)
	}
	return station, -b.above(station)
}

// Gradient fills g with dz/d(Z1, Z2, Curvature) at station s, the kinks of local loads held: dimensionless, dimensionless, m2.
func (c Curve) Gradient(s float64, g *[3]float64) {
	var all gradient
	e := c.evaluator()
	e.at(s, &all)
	copy(g[:], all[:3])
}

// gradientParabola is Gradient of a parabola.
func (c Curve) gradientParabola(s float64, g *gradient) {
	part := (s - c.S1) / c.length()
	g[0], g[1], g[2] = 1-part, part, (s-c.S1)*(s-c.S2)/2
}
