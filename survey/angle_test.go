package survey

import (
	"math"
	"testing"
)

// Rows of check value G13 (definitions, computed with mpmath) first; the others are the same angles as people write them.
func TestAngles(t *testing.T) {
	for _, c := range []struct {
		text string
		unit angleUnit
		mark byte
		deg  float64
	}{
		{"123.4567", anglesGon, '.', 111.11103}, {"70-00-14", anglesSexa, '.', 70.00388888889}, {"-0-00-30", anglesSexa, '.', -0.00833333333},
		{"70 00 14", anglesUnknown, '.', 70.00388888889}, {"70°00'14\"", anglesUnknown, '.', 70.00388888889}, {"70° 00′ 14″", anglesUnknown, '.', 70.00388888889},
		{"70:00:14,0", anglesUnknown, ',', 70.00388888889}, {"70.0014", anglesPacked, '.', 70.00388888889}, {"77.78209876543 gon", anglesUnknown, '.', 70.00388888889},
		{"123.45067", anglesPacked, '.', 123 + 45.0/60 + 6.7/3600}, {"123 45 06.7", anglesSexa, '.', 123 + 45.0/60 + 6.7/3600}, {"123.5°", anglesUnknown, '.', 123.5},
		{"123 30", anglesSexa, '.', 123.5}, {"123,5", anglesDegrees, ',', 123.5}, {"123.3", anglesPacked, '.', 123.5}, {"359.59599", anglesPacked, '.', 359 + 59.0/60 + 59.9/3600},
	} {
		v, err := parseAngle(c.text, c.unit, c.mark)
		if err != nil || math.Abs(v*180/math.Pi-c.deg) > 1e-9 {
			t.Errorf("%q in %q: %.10f deg, %v, want %.10f", c.text, c.unit, v*180/math.Pi, err, c.deg)
		}
	}
	for _, text := range []string{"", "12 60 00", "12 30 60", "1 2 3 4", "12.5 30", "1e400", "NaN", "12 -30", "g", "°"} {
		if v, err := parseAngle(text, anglesSexa, '.'); err == nil {
			t.Errorf("%q was taken as %g", text, v)
		}
	}
	if _, err := parseAngle("123.45067", anglesUnknown, '.'); err == nil {
		t.Error("a plain number was taken without its unit")
	}
}
