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
		{Kilonewton, Quantity{Value: 23412, U: 157}, "23.41 ± 0.31 kN"},
		{Kilonewton, Quantity{Value: 23412, U: 4.98}, "23.412 ± 0.010 kN"}, // 9.96 N rounds up to 10 N: two digits all the same
		{Kilonewton, Quantity{Value: -40, U: 30}, "-0.040 ± 0.060 kN"},
		{Newton, Quantity{Value: -0.02, U: 3}, "0.0 ± 6.0 N"},
		{Metre, Quantity{Value: 8.12341, U: 0.0042}, "8.1234 ± 0.0084 m"},
		{Metre, Quantity{Value: 1646.12, U: 1.44}, "1646.1 ± 2.9 m"},
		{Newton, Quantity{Value: 123456, U: 4321}, "123500 ± 8600 N"},
		{Kilonewton, Quantity{Value: 350000, U: 0}, "350.0 kN"},
		{NewtonPerMetre, Quantity{Value: 10, U: 1e-14}, "10.00 N/m"},
		{Degree, Quantity{Value: -5.005, U: 0.005}, "-5.005 ± 0.010°"},
		{Percent, Quantity{Value: 1.81, U: 0.07}, "181 ± 14 %"},
		{Plain, Quantity{Value: 0.799, U: 0.015}, "0.799 ± 0.030"},
		{Metre, Quantity{Value: 0, U: 0}, "0 m"},
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
