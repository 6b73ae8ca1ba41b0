package tension

import (
	"math"
	"testing"
)

func TestFigures(t *testing.T) {
	for _, c := range []struct {
		scale Scale
		q     Quantity
		want  string
	}{
		{Kilonewton, Quantity{23412, 157}, "23.41 ± 0.31 kN"},
		{Kilonewton, Quantity{23412, 4.98}, "23.412 ± 0.010 kN"}, // 9.96 N rounds up to 10 N: two digits all the same
		{Kilonewton, Quantity{-40, 30}, "-0.040 ± 0.060 kN"},
		{Newton, Quantity{-0.02, 3}, "0.0 ± 6.0 N"},
		{Metre, Quantity{8.12341, 0.0042}, "8.1234 ± 0.0084 m"},
		{Metre, Quantity{1646.12, 1.44}, "1646.1 ± 2.9 m"},
		{Newton, Quantity{123456, 4321}, "123456 ± 8642 N"},
		{Kilonewton, Quantity{350000, 0}, "350.0 kN"},
		{NewtonPerMetre, Quantity{10, 1e-14}, "10.00 N/m"},
		{Degree, Quantity{-5.005, 0.005}, "-5.005 ± 0.010°"},
		{Percent, Quantity{1.81, 0.07}, "181 ± 14 %"},
		{Plain, Quantity{0.799, 0.015}, "0.799 ± 0.030"},
		{Metre, Quantity{0, 0}, "0 m"},
	} {
		if got := c.scale.Figure(c.q); got != c.want {
			t.Errorf("%v in %s: %q, want %q", c.q, c.scale.Unit, got, c.want)
		}
	}
	for v, want := range map[float64]string{0.0004: "under 0.1 %", 0.9996: "over 99.9 %", 0.42: "42 %", 0.992: "99.2 %", math.NaN(): "not known"} {
		if got := Probability(v); got != want {
			t.Errorf("probability %g: %q, want %q", v, got, want)
		}
	}
	if got := Millimetre.About(0.00284); got != "2.8 mm" {
		t.Errorf("about: %q", got)
	}
}
