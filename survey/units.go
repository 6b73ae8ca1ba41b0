package survey

import (
	"fmt"
	"math"
	"strings"
)

// Dimension is the kind of a quantity in a file or flag.
type Dimension string

// The dimensions that inputs have.
const (
	Length         Dimension = "length"
	Force          Dimension = "force"
	ForcePerLength Dimension = "force per length"
	Temperature    Dimension = "temperature"
	PerTemperature Dimension = "expansion"
	Fraction       Dimension = "fraction"
)

// unit converts to SI: SI = written x factor + offset.
type unit struct {
	factor, offset float64
}

const (
	gravity   = 9.80665              // m/s2, standard gravity (CGPM 1901), for masses given as weights
	foot      = 0.3048               // m, exact (NIST SP 811, B.8)
	surveyFt  = 1200.0 / 3937        // m, exact (NIST HB 44, app. C; retired after 2022 but alive in survey files)
	poundF    = 0.45359237 * gravity // N, exact (NIST SP 811, B.8)
	zeroC     = 273.15               // K
	fahrenFac = 5.0 / 9
)

// units is the one table of units: every spelling that a header, a flag or a condition may use.
var units = map[Dimension]map[string]unit{
	Length: {"m": {1, 0}, "mm": {1e-3, 0}, "cm": {1e-2, 0}, "km": {1e3, 0}, "ft": {foot, 0}, "us-ft": {surveyFt, 0}, "usft": {surveyFt, 0},
		"ftus": {surveyFt, 0}, "in": {foot / 12, 0}},
	Force: {"n": {1, 0}, "kn": {1e3, 0}, "mn": {1e6, 0}, "lbf": {poundF, 0}, "lb": {poundF, 0}, "kip": {1e3 * poundF, 0}, "kgf": {gravity, 0}},
	ForcePerLength: {"n/m": {1, 0}, "kn/m": {1e3, 0}, "kg/m": {gravity, 0}, "kgf/m": {gravity, 0}, "lbf/ft": {poundF / foot, 0},
		"lb/ft": {poundF / foot, 0}, "kip/ft": {1e3 * poundF / foot, 0}},
	Temperature:    {"degc": {1, 0}, "c": {1, 0}, "°c": {1, 0}, "degf": {fahrenFac, -32 * fahrenFac}, "f": {fahrenFac, -32 * fahrenFac}, "°f": {fahrenFac, -32 * fahrenFac}, "k": {1, -zeroC}},
	PerTemperature: {"1/degc": {1, 0}, "1e-6/degc": {1e-6, 0}, "1/°c": {1, 0}, "1e-6/°c": {1e-6, 0}, "1/k": {1, 0}, "1e-6/k": {1e-6, 0}, "1/degf": {1 / fahrenFac, 0}, "1e-6/degf": {1e-6 / fahrenFac, 0}},
	Fraction:       {"%": {0.01, 0}, "1": {1, 0}},
}

// spellings lists the units of a dimension for messages, in a fixed order.
var spellings = map[Dimension]string{
	Length:         "m, mm, cm, km, ft, us-ft or in",
	Force:          "N, kN, MN, lbf, kip or kgf",
	ForcePerLength: "N/m, kN/m, kg/m, lbf/ft or kip/ft (a mass counts with standard gravity 9.80665 m/s2)",
	Temperature:    "degC, degF or K",
	PerTemperature: "1/degC, 1e-6/degC, 1/K, 1e-6/K or 1/degF",
	Fraction:       "%",
}

// usual is the unit that a message suggests.
var usual = map[Dimension]string{Length: "mm", Force: "kN", ForcePerLength: "N/m", Temperature: "degC", PerTemperature: "1e-6/degC", Fraction: "%"}

// findUnit looks a spelling up. MN and mN differ only by case: a milli-newton is not a unit of cables and is refused.
func findUnit(text string, d Dimension) (unit, bool) {
	if d == Force && strings.HasPrefix(text, "mN") {
		return unit{}, false
	}
	u, ok := units[d][strings.ToLower(strings.ReplaceAll(strings.TrimSpace(text), " ", ""))]
	return u, ok
}

// ParseQuantity reads a value with its unit and, if given, its standard uncertainty: "12 +- 2 degC", "50 N/m ± 2 %",
// "3 mm". The unit must be of the given dimension and must be written; the result is in SI (temperatures in degC). The
// uncertainty of a temperature is a difference: 2 degF is 1.1 degC.
func ParseQuantity(text string, d Dimension) (Quantity, error) {
	value, spread, hasSpread := cutSpread(text)
	number, name := splitUnit(value)
	v, fault := parseNumber([]byte(number), '.')
	if fault != "" {
		expected, mend := fault.describe(number, '.')
		return Quantity{}, wrong(text, expected, mend)
	}
	var s float64
	relative := false
	if hasSpread {
		sn, su := splitUnit(spread)
		if s, fault = parseNumber([]byte(sn), '.'); fault != "" {
			expected, mend := fault.describe(sn, '.')
			return Quantity{}, wrong(text, expected+" after +-", mend)
		}
		if s < 0 {
			return Quantity{}, wrong(text, "an uncertainty of 0 or more", "")
		}
		switch {
		case su == "%" && d != Fraction && name != "":
			relative = true
		case name == "":
			name = su
		case su != "" && !strings.EqualFold(su, name):
			return Quantity{}, wrong(text, "one unit for value and uncertainty", "")
		}
	}
	if name == "" {
		return Quantity{}, wrong(text, "a unit", fmt.Sprintf("write for example \"%s %s\"", number, usual[d]))
	}
	u, ok := findUnit(name, d)
	if !ok {
		return Quantity{}, wrong(text, "a unit of "+string(d)+" ("+spellings[d]+")", "")
	}
	q := Quantity{Value: v*u.factor + u.offset, U: s * u.factor}
	if relative {
		q.U = math.Abs(q.Value) * s / 100
	}
	if math.IsInf(q.Value, 0) || math.IsInf(q.U, 0) {
		return Quantity{}, wrong(text, "a finite number", "")
	}
	if d == Temperature && q.Value < -zeroC {
		return Quantity{}, wrong(text, "a temperature above absolute zero", "")
	}
	return q, nil
}

// cutSpread parts "value +- spread" in any of the usual spellings.
func cutSpread(text string) (value, spread string, ok bool) {
	for _, mark := range []string{"±", "+-", "+/-"} {
		if value, spread, ok = strings.Cut(text, mark); ok {
			return strings.TrimSpace(value), strings.TrimSpace(spread), true
		}
	}
	return strings.TrimSpace(text), "", false
}

// splitUnit parts "12.5 kN/m" into number and unit; "1e-6/degC" style units begin after a blank.
func splitUnit(text string) (number, name string) {
	if i := strings.IndexAny(text, " \t"); i >= 0 {
		return text[:i], strings.TrimSpace(text[i:])
	}
	end := len(text)
	for i, r := range text {
		if (r >= '0' && r <= '9') || strings.ContainsRune("+-.,", r) {
			continue
		}
		if (r == 'e' || r == 'E') && i+1 < len(text) && strings.ContainsRune("+-0123456789", rune(text[i+1])) {
			continue
		}
		end = i
		break
	}
	return text[:end], strings.TrimSpace(text[end:])
}
