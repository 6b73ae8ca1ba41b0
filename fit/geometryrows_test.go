package fit

import (
	"math"
	"testing"
)

// solveFor is the root of an increasing function between lo and hi, by bisection to rounding.
func solveFor(f func(float64) float64, want, lo, hi float64) float64 {
	for range 200 {
		if mid := (lo + hi) / 2; f(mid) < want {
			lo = mid
		} else {
			hi = mid
		}
	}
	return lo
}

func level(share, span, constant float64) Curve {
	return Curve{S2: span, Curvature: 1 / constant, SelfShare: share}
}

// ofSag is the level catenary of a span and a sag at mid-span.
func ofSag(span, sag float64) Curve {
	k := solveFor(func(k float64) float64 { return level(1, span, 1/k).Sag(span/2, 0, span) }, sag, 0, 20/span)
	return level(1, span, 1/k)
}

// ofLength is the level catenary of an arc length and a sag: a = (length^2/4 - sag^2) / (2 sag).
func ofLength(length, sag float64) Curve {
	a := (length*length/4 - sag*sag) / (2 * sag)
	span := solveFor(func(x float64) float64 { return level(1, x, a).ArcLength(0, x) }, length, 0, length)
	return level(1, span, a)
}

// Reference: the rows of check-values.csv that are pure geometry of a level catenary; the source of each is in its row.
// Forces are load times a geometric length: H = w a, T at an end = H sqrt(1 + slope^2).
func TestLevelCatenariesOfTextbooks(t *testing.T) {
	rows := checkRows(t)
	end := func(c Curve) float64 { return c.Constant() * math.Hypot(1, c.Slope(c.S2)) }
	arc := func(c Curve) float64 { return c.ArcLength(c.S1, c.S2) }

	r := rows["S02"]
	c, w := ofSag(r.x("span_m"), r.x("sag_m")), r.x("m_kg_per_m")*r.x("g")/1000
	r.is("H_kN", w*c.Constant())
	r.is("Tmax_kN", w*end(c))
	r.is("length_m", arc(c))
	r.done()

	r = rows["S03"]
	c, w = ofSag(r.x("span_m"), r.x("sag_m")), r.x("w_N_per_m")
	r.is("a_m", c.Constant())
	r.is("H_N", w*c.Constant())
	r.is("Tmax_N", w*end(c))
	r.is("length_m", arc(c))
	r.is("slope_end_deg", math.Atan(c.Slope(c.S2))*180/math.Pi)
	r.done()

	r = rows["S07"]
	c, w = ofSag(r.x("span_m"), r.x("sag_m")), r.x("w_N_per_m")
	r.is("a_m", c.Constant())
	r.is("Tmin_N", w*c.Constant())
	r.is("Tmax_N", w*end(c))
	r.is("length_m", arc(c))
	r.done()

	r = rows["S08"]
	c, w = ofSag(r.x("span_ft"), r.x("sag_ft")), r.x("w_lb_per_ft")
	r.is("a_ft", c.Constant())
	r.is("Tmin_lb", w*c.Constant())
	r.is("Tmax_lb", w*end(c))
	r.is("length_ft", arc(c))
	r.done()

	r = rows["S13"]
	c = ofSag(r.x("span_ft"), r.x("sag_ft"))
	r.is("Tmax_lb", r.x("w_lb_per_ft")*end(c))
	r.is("length_ft", arc(c))
	r.done()

	r = rows["S14"]
	c = ofLength(r.x("length_m"), r.x("sag_m"))
	r.is("a_m", c.Constant())
	r.is("Tmax_N", r.x("m_kg_per_m")*r.x("g")*end(c))
	r.is("span_m", c.S2)
	r.done()

	r = rows["S20"]
	c = ofLength(r.x("length_m"), r.x("sag_m"))
	r.is("a_m", c.Constant())
	r.is("Tmax_N", r.x("m_kg_per_m")*r.x("g")*end(c))
	r.is("span_m", c.S2)
	r.done()

	r = rows["S22"]
	c = ofSag(r.x("span_m"), r.x("sag_m"))
	r.is("a_m", c.Constant())
	r.is("length_m", arc(c))
	r.is("excess_m", arc(c)-c.S2)
	r.done()

	r = rows["O01"]
	c, w = level(1, r.x("span_ft"), r.x("c_ft")), r.x("w_lb_per_mile")/5280
	r.is("length_ft", arc(c))

	r.is("sag_ft", c.Sag(c.S2/2, 0, c.S2))
	r.is("Tmax_lb", w*end(c))
	r.is("Tmin_lb", w*c.Constant())
	r.done("length_series_ft", "Tparab_lb") // two terms of a series, and w L^2 / (8 sag) with the sag as the source rounded it

	r = rows["P05"]
	for i, ratio := range r.in["sag_over_span"] {
		c := ofSag(1, ratio)
		r.is([]string{"q1", "q2", "q3", "q4"}[i], c.Sag(0.25, 0, 1)/c.Sag(0.5, 0, 1))
	}
	r.done()

	r = rows["P06"]
	for i, ratio := range r.in["sag_over_span"] {
		c := ofSag(1, ratio)
		r.is([]string{"r1", "r2", "r3"}[i], math.Hypot(1, c.Slope(1))/math.Hypot(1, c.Slope(0.5)))
	}
	r.done()
}

// between is the parabola of H / q between two supports, A the lower one at station 0.
func (c *checkRow) between(constant, span float64) Curve {
	return Curve{Z1: c.x("y_low_m"), S2: span, Z2: c.x("y_high_m"), Curvature: 1 / constant}
}

// Reference: the rows of check-values.csv that are pure geometry of an inclined span; the source of each is in its row. The
// textbooks take the parabola, O38 compares both.
func TestInclinedSpansOfTextbooks(t *testing.T) {
	rows := checkRows(t)
	of := func(id string) (*checkRow, Curve, float64, float64) {
		r := rows[id]
		c := r.between(r.x("T_kg")/r.x("w_kg_per_m"), r.x("span_m"))
		s, z, ok := c.LowPoint()
		if !ok {
			t.Fatalf("%s: no low point", id)
		}
		return r, c, s, z
	}
	for _, id := range []string{"O05", "O12", "O24"} { // the low point lies outside the span
		r, c, s, _ := of(id)
		r.is("x_low_m", s)
		r.is("y_mid_m", c.Z(c.S2/2))
		r.done()
	}
	r, c, _, z := of("O10")
	r.is("y_min_m", z)
	r.is("y_mid_m", c.Z(c.S2/2))
	r.done()

	r, c, _, z = of("O11")
	r.is("drop_high_m", c.Z2-z)
	r.done()

	r, c, s, _ := of("O15")
	r.is("x_low_m", s)
	r.is("x_from_high_m", c.S2-s)
	r.done()

	r, c, _, _ = of("O16")
	r.is("y_mid_m", c.Z(c.S2/2))
	r.done()

	r, c, _, z = of("O19")
	r.is("y_min_m", z)
	r.is("drop_high_m", c.Z2-z)
	r.done()

	r, c, s, z = of("O20")
	r.is("x_from_high_m", c.S2-s)
	r.is("y_min_m", z)
	r.done()

	// A hillside: the ground runs parallel to the chord, h below it.
	r = rows["O13"]
	sin, l := r.x("sin_slope"), r.x("slope_len_m")
	c = Curve{Z1: r.x("h_m"), S2: l * math.Sqrt(1-sin*sin), Z2: r.x("h_m") + l*sin, Curvature: r.x("w_kg_per_m") / r.x("T_kg")}
	s, z, _ = c.LowPoint()
	r.is("clear_low_m", z-s*l*sin/c.S2)
	r.done()

	// Ice and wind: the sag is in the plane of the resultant load.
	r = rows["O14"]
	d, ice := r.x("d_mm")/1000, r.x("ice_mm")/1000
	bare := r.x("w_kg_per_m")
	iced := bare + math.Pi*(d+ice)*ice*r.x("rho_ice")
	blown := math.Hypot(iced, r.x("wind_kg_per_m2")*(d+2*ice))
	sag := func(w float64) float64 {
		span := r.x("span_m")
		return level(0, span, r.x("T_kg")/w).Sag(span/2, 0, span)
	}
	r.is("sag1_m", sag(bare))
	r.is("sag2_m", sag(iced))
	r.is("sag3_m", sag(blown))
	r.is("sag_vert_m", sag(blown)*iced/blown)
	r.done()

	r = rows["O38"]
	span, rise := r.x("span_m"), r.x("rise_m")
	own := Curve{S2: span, Z2: rise, Curvature: 1 / r.x("a_m"), SelfShare: 1}
	flat := own
	flat.SelfShare, flat.Curvature = 0, own.Curvature*math.Hypot(1, rise/span) // the weight of the chord, even along the run
	r.is("sag_cat_m", own.Sag(span/2, 0, span))
	r.is("sag_par_m", flat.Sag(span/2, 0, span))
	r.done()
}
