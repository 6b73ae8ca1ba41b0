package tension

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// Scale is a unit in which figures are printed: printed = SI value / Per.
type Scale struct {
	Unit string
	Per  float64 // SI units in one printed unit
}

// The printing units of sheets and sentences.
var (
	Newton         = Scale{"N", 1}
	Kilonewton     = Scale{"kN", 1e3}
	Meganewton     = Scale{"MN", 1e6}
	Metre          = Scale{"m", 1}
	Millimetre     = Scale{"mm", 1e-3}
	NewtonPerMetre = Scale{"N/m", 1}
	DegreeCelsius  = Scale{"°C", 1}
	Degree         = Scale{"°", 1}
	Percent        = Scale{"%", 0.01}
	Plain          = Scale{"", 1}
)

// ForceScale is the force unit in which a value of this size (N) reads best.
func ForceScale(newtons float64) Scale {
	switch v := math.Abs(newtons); {
	case v < 1e3:
		return Newton
	case v < 1e6:
		return Kilonewton
	default:
		return Meganewton
	}
}

// Decimals is the decimal place at which U (in printed units) shows two significant digits; four of the value when U is zero. It is
// negative where that place is left of the point: 8642 is known to hundreds, place -2.
func Decimals(value, expanded float64) int {
	lead, digits := math.Abs(expanded), 2
	if !(lead > 0) || math.IsInf(lead, 0) {
		lead, digits = math.Abs(value), 4
	}
	if !(lead > 0) || math.IsInf(lead, 0) {
		return 0
	}
	// Rounding may carry into a new leading digit (0.0996 prints as 0.10): count on the rounded text.
	text := strconv.FormatFloat(lead, 'e', digits-1, 64)
	exponent, err := strconv.Atoi(text[strings.IndexByte(text, 'e')+1:])
	if err != nil {
		return 0
	}
	return min(digits-1-exponent, 12)
}

// Figure prints a value with its expanded uncertainty U = 2 u (k = 2), U to two significant digits and the value to the
// same place: "23.41 ± 0.31 kN". Without uncertainty it prints the value to four significant digits.
func (s Scale) Figure(q Quantity) string {
	if exact(q) {
		return s.Value(q)
	}
	d := Decimals(q.Value/s.Per, q.Expanded()/s.Per)
	return s.suffix(fmt.Sprintf("%s ± %s", fixed(q.Value/s.Per, d), fixed(q.Expanded()/s.Per, d)))
}

// exact reports whether an uncertainty is none, or no more than the rounding of a propagation.
func exact(q Quantity) bool { return q.U <= 1e-10*math.Abs(q.Value) }

// Value prints the value alone, to the place that its uncertainty allows, with the unit.
func (s Scale) Value(q Quantity) string {
	if exact(q) {
		q.U = 0
	}
	return s.suffix(fixed(q.Value/s.Per, Decimals(q.Value/s.Per, q.Expanded()/s.Per)))
}

// About prints a number that is good to two significant digits.
func (s Scale) About(v float64) string { return s.Value(Quantity{Value: v, U: math.Abs(v) / 2}) }

func (s Scale) suffix(text string) string {
	switch s.Unit {
	case "":
		return text
	case "°":
		return text + s.Unit
	default:
		return text + " " + s.Unit
	}
}

// fixed prints a value at a decimal place, which may be left of the point, without a negative zero.
func fixed(v float64, place int) string {
	if place < 0 {
		unit := math.Pow(10, float64(-place))
		v = math.Round(v/unit) * unit
	}
	text := strconv.FormatFloat(v, 'f', max(place, 0), 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-")
	}
	return text
}

// Probability prints a probability so that near-certainty does not read as certainty: "97 %", "over 99.9 %".
func Probability(p float64) string {
	switch {
	case math.IsNaN(p):
		return "not known"
	case p > 0.999:
		return "over 99.9 %"
	case p < 0.001:
		return "under 0.1 %"
	case p > 0.99 || p < 0.01:
		return fixed(100*p, 1) + " %"
	default:
		return fixed(100*p, 0) + " %"
	}
}

// force prints a tension in the unit that suits its size.
func force(q Quantity) string { return ForceScale(q.Value).Figure(q) }

// change prints a relative difference as "12 % below", "3 % above"; ratio 1 is "equal".
func change(ratio float64) string {
	switch p := math.Round(1000*(ratio-1)) / 10; {
	case p == 0:
		return "equal to"
	case p < 0:
		return strconv.FormatFloat(-p, 'f', -1, 64) + " % below"
	default:
		return strconv.FormatFloat(p, 'f', -1, 64) + " % above"
	}
}
