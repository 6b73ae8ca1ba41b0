package survey

import "testing"

func TestParseSupportBetween(t *testing.T) {
	for _, c := range []struct {
		text   string
		atA    SupportBetween
		atB    SupportBetween
		refuse bool
	}{
		{"", "", "", false},
		{"fixed", BetweenFixed, BetweenFixed, false},
		{" Equal-Tension ", BetweenEqualTension, BetweenEqualTension, false},
		{"A: fixed / B: equal_horizontal", BetweenFixed, BetweenEqualHorizontal, false},
		{"b: equal tension", "", BetweenEqualTension, false},
		{"roller", "", "", true},
		{"C: fixed", "", "", true},
		{"A: fixed / A: fixed", "", "", true},
		{"A: ", "", "", true},
	} {
		a, b, err := ParseSupportBetween(c.text)
		if a != c.atA || b != c.atB || (err != nil) != c.refuse {
			t.Errorf("%q: %q, %q, %v", c.text, a, b, err)
		}
	}
}
