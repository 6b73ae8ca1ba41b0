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
	Bending        Dimension = "bending stiffness"
	Fraction       Dimension = "fraction"
	Frequency      Dimension = "frequency"
	Duration       Dimension = "time"
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

// units is the one table of units: every spelling that a header, a flag or a condition may use, in lower case and without
// blanks. Factors are exact by definition: NIST SP 811 (2008), app. B, and NIST HB 44, app. C, for the US survey foot.
var units = map[Dimension]map[string]unit{
	Length: {"m": {1, 0}, "metre": {1, 0}, "metres": {1, 0}, "meter": {1, 0}, "meters": {1, 0}, "mm": {1e-3, 0}, "cm": {1e-2, 0}, "km": {1e3, 0},
		"ft": {foot, 0}, "foot": {foot, 0}, "feet": {foot, 0}, "ift": {foot, 0}, "intlft": {foot, 0}, "in": {foot / 12, 0}, "inch": {foot / 12, 0},
		"us-ft": {surveyFt, 0}, "usft": {surveyFt, 0}, "ftus": {surveyFt, 0}, "sft": {surveyFt, 0}, "ussurveyft": {surveyFt, 0},
		"ussurveyfoot": {surveyFt, 0}, "ussurveyfeet": {surveyFt, 0}},
	Force: {"n": {1, 0}, "dan": {10, 0}, "kn": {1e3, 0}, "mn": {1e6, 0}, "lbf": {poundF, 0}, "lb": {poundF, 0}, "lbs": {poundF, 0},
		"kip": {1e3 * poundF, 0}, "kips": {1e3 * poundF, 0}, "kgf": {gravity, 0}},
	ForcePerLength: {"n/m": {1, 0}, "dan/m": {10, 0}, "kn/m": {1e3, 0}, "n/mm": {1e3, 0}, "kg/m": {gravity, 0}, "kgf/m": {gravity, 0},
		"kg/km": {gravity / 1e3, 0}, "lbf/ft": {poundF / foot, 0}, "lb/ft": {poundF / foot, 0}, "plf": {poundF / foot, 0},
		"kip/ft": {1e3 * poundF / foot, 0}, "klf": {1e3 * poundF / foot, 0}},
	Temperature: {"degc": {1, 0}, "c": {1, 0}, "°c": {1, 0}, "degf": {fahrenFac, -32 * fahrenFac}, "f": {fahrenFac, -32 * fahrenFac},
		"°f": {fahrenFac, -32 * fahrenFac}, "k": {1, -zeroC}},
	PerTemperature: expansions(),
	Bending: {"nm2": {1, 0}, "nm^2": {1, 0}, "nm²": {1, 0}, "n*m2": {1, 0}, "knm2": {1e3, 0}, "knm^2": {1e3, 0}, "knm²": {1e3, 0},
		"lbfft2": {poundF * foot * foot, 0}, "lbfft^2": {poundF * foot * foot, 0}, "kipft2": {1e3 * poundF * foot * foot, 0}, "kipft^2": {1e3 * poundF * foot * foot, 0}},
	Fraction:  {"%": {0.01, 0}, "1": {1, 0}},
	Frequency: {"hz": {1, 0}, "1/s": {1, 0}, "1/min": {1.0 / 60, 0}},
	Duration:  {"s": {1, 0}, "ms": {1e-3, 0}},
}

// expansions are the units of thermal expansion: a power of ten per degree, in the usual spellings.
func expansions() map[string]unit {
	m := map[string]unit{}
	for degree, f := range map[string]float64{"degc": 1, "°c": 1, "k": 1, "degf": 1 / fahrenFac, "°f": 1 / fahrenFac} {
		for _, one := range []string{"1/", "/"} {
			m[one+degree] = unit{f, 0}
		}
		for _, millionth := range []string{"1e-6/", "10^-6/", "e-6/", "ppm/"} {
			m[millionth+degree] = unit{1e-6 * f, 0}
		}
	}
	return m
}

// spellings lists the units of a dimension for messages, in a fixed order.
var spellings = map[Dimension]string{
	Length:         "m, mm, cm, km, ft, us-ft or in",
	Force:          "N, daN, kN, MN, lbf, kip or kgf",
	ForcePerLength: "N/m, daN/m, kN/m, kg/m, lbf/ft or kip/ft (a mass counts with standard gravity 9.80665 m/s2)",
	Temperature:    "degC, degF or K",
	PerTemperature: "1/degC, 1e-6/degC, 1/K, 1e-6/K or 1/degF",
	Bending:        "N m2, kN m2, lbf ft2 or kip ft2",
	Fraction:       "%",
	Frequency:      "Hz, 1/s or 1/min",
	Duration:       "s or ms",
}

// usual is the unit that a message suggests.
var usual = map[Dimension]string{Length: "mm", Force: "kN", ForcePerLength: "N/m", Temperature: "degC", PerTemperature: "1e-6/degC", Bending: "kN m2", Fraction: "%", Frequency: "Hz", Duration: "s"}

// findUnit looks a spelling up. MN and mN differ only by case: a milli-newton is not a unit of cables and is refused.
func findUnit(text string, d Dimension) (unit, bool) {
	if d == Force && strings.HasPrefix(text, "mN") {
		return unit{}, false
	}
	u, ok := units[d][strings.ToLower(strings.ReplaceAll(strings.TrimSpace(text), " ", ""))]
	return u, ok
}

// ParseQuantity reads a value with its unit and, if given, its standard uncertainty: "12 +- 2 degC", "50 N/m ± 2 %",
// "180 +/- 10 N/m", "3 mm". The unit must be of the given dimension and must be written; the result is in SI (temperatures in
// degC) and finite. A value without +- has u = 0, which means exact. It may have a unit of its own of the same dimension ("1 kN +- 20 N"); for a temperature it
// is a difference: 2 degF is 1.1 degC, 2 K is 2 degC, and % of a temperature means nothing and is refused. Nothing is guessed.
// Errors say what was found, what was expected and how to mend it.
func ParseQuantity(text string, d Dimension) (Quantity, error) {
	value, spread, hasSpread := cutSpread(text)
	number, name := splitUnit(value)
	example := fmt.Sprintf("write for example \"12 %s\"", usual[d])
	v, fault := parseNumber([]byte(number), '.')
	if fault != "" {
		expected, mend := fault.describe('.', inText)
		if mend == "" {
			mend = example
		}
		return Quantity{}, wrong(text, expected, mend)
	}
	var s float64
	var spreadUnit string
	if hasSpread {
		var sn string
		sn, spreadUnit = splitUnit(spread)
		if s, fault = parseNumber([]byte(sn), '.'); fault != "" {
			expected, mend := fault.describe('.', inText)
			return Quantity{}, wrong(text, expected+" after +-", mend)
		}
		if !(s >= 0) {
			return Quantity{}, wrong(text, "an uncertainty of 0 or more", "")
		}
		if name == "" {
			name, spreadUnit = spreadUnit, ""
		}
	}
	if name == "" {
		return Quantity{}, wrong(text, "a unit", fmt.Sprintf("write for example \"%s %s\"", number, usual[d]))
	}
	u, ok := findUnit(name, d)
	if !ok {
		return Quantity{}, wrong(text, "a unit of "+string(d)+" ("+spellings[d]+")", "")
	}
	q := Quantity{Value: v*u.factor + u.offset}
	switch {
	case spreadUnit == "":
		q.U = s * u.factor
	case spreadUnit == "%" && d == Temperature:
		return Quantity{}, wrong(text, "an uncertainty in degrees", "per cent of a temperature depends on where the scale begins")
	case spreadUnit == "%" && d != Fraction:
		q.U = math.Abs(q.Value) * s / 100
	default:
		su, ok := findUnit(spreadUnit, d)
		if !ok {
			return Quantity{}, wrong(text, "after +- a unit of "+string(d)+" ("+spellings[d]+") or none", "")
		}
		q.U = s * su.factor
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

// splitUnit parts "12.5 kN/m" into number and unit; a unit that begins with a digit, such as 1e-6/degC, needs a blank before it.
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
