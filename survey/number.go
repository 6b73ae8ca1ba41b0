package survey

import (
	"math"
	"strconv"
	"unicode"
)

// numberFault says why a text is not a number of a survey; "" when it is one.
type numberFault string

const (
	faultEmpty     numberFault = "empty cell"
	faultNotNumber numberFault = "not a number"
	faultNotFinite numberFault = "not a finite number"
	faultComma     numberFault = "comma"
	faultPoint     numberFault = "point"
	faultGrouped   numberFault = "grouped"
)

// powers are the powers of ten that a short number can be divided by; all are float64 without rounding.
var powers = [shortNumber]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// shortNumber is the length up to which a number, sign apart, has at most 15 digits beside its mark, or 16 without one.
const shortNumber = 16

// parseNumber reads a plain decimal number: sign, digits, one decimal mark, optional exponent. Everything else that a
// general parser takes (NaN, Inf, hexadecimal, underscores, grouping) is refused by name. The result is the nearest float64: an
// integer is rounded once by conversion, and one of at most 15 digits, which is exact, once by division through a power of ten
// that is exact too (Clinger 1990, How to read floating point numbers accurately); everything longer goes to strconv.
func parseNumber(cell []byte, mark byte) (float64, numberFault) {
	digits := cell
	negative := false
	if len(cell) > 0 && (cell[0] == '-' || cell[0] == '+') {
		negative, digits = cell[0] == '-', cell[1:]
	}
	if len(digits) == 0 || len(digits) > shortNumber {
		return slowNumber(cell, mark)
	}
	var mantissa uint64
	at := -1 // of the mark
	for i, c := range digits {
		if d := c - '0'; d <= 9 {
			mantissa = mantissa*10 + uint64(d)
		} else if c == mark && at < 0 {
			at = i
		} else {
			return slowNumber(cell, mark)
		}
	}
	if at >= 0 && len(digits) == 1 {
		return slowNumber(cell, mark)
	}
	v := float64(mantissa)
	if at >= 0 {
		v /= powers[len(digits)-1-at]
	}
	if negative {
		v = -v
	}
	return v, ""
}

// slowNumber handles exponents and many digits, and finds the name of the fault.
func slowNumber(cell []byte, mark byte) (float64, numberFault) {
	if len(cell) == 0 {
		return 0, faultEmpty
	}
	text := make([]byte, 0, len(cell))
	marks, commas, points, digits := 0, 0, 0, 0
	for i, c := range cell {
		switch {
		case c >= '0' && c <= '9':
			digits++
		case c == ',' || c == '.':
			if c == ',' {
				commas++
			} else {
				points++
			}
			if c == mark {
				marks++
				c = '.'
			}
		case c == '+' || c == '-':
			if i > 0 && cell[i-1] != 'e' && cell[i-1] != 'E' {
				return 0, faultNotNumber
			}
		case c == 'e' || c == 'E':
		default:
			return 0, wordFault(cell)
		}
		text = append(text, c)
	}
	switch {
	case commas > 0 && points > 0, commas > 1, points > 1:
		return 0, faultGrouped
	case mark == '.' && commas == 1:
		return 0, faultComma
	case mark == ',' && points == 1:
		return 0, faultPoint
	case digits == 0 || marks > 1:
		return 0, faultNotNumber
	}
	v, err := strconv.ParseFloat(string(text), 64)
	switch {
	case err != nil && math.IsInf(v, 0):
		return 0, faultNotFinite
	case err != nil:
		return 0, faultNotNumber
	}
	return v, ""
}

// wordFault tells NaN and Inf, which other parsers take, and grouped digits from plain text.
func wordFault(cell []byte) numberFault {
	if v, err := strconv.ParseFloat(string(cell), 64); err == nil && (math.IsNaN(v) || math.IsInf(v, 0)) {
		return faultNotFinite
	}
	grouped := false
	for _, r := range string(cell) {
		switch {
		case r >= '0' && r <= '9', r == '.', r == ',', r == '-', r == '+':
		case r == '_', r == '\'', r == '\u2019', unicode.IsSpace(r):
			grouped = true
		default:
			return faultNotNumber
		}
	}
	if grouped {
		return faultGrouped
	}
	return faultNotNumber
}

// numberPlace is where a number stands: what mends it differs.
type numberPlace int

const (
	inPoints numberPlace = iota
	inDesigns
	inText // a condition or a flag
)

// describe gives expectation and remedy for a fault in a number.
func (f numberFault) describe(mark byte, at numberPlace) (expected, mend string) {
	expected = "a number with a decimal point"
	if mark == ',' {
		expected = "a number with a decimal comma"
	}
	switch f {
	case faultEmpty:
		return "a number", [...]string{"fill the cell or take the row out", "fill the cell", ""}[at]
	case faultComma:
		return expected, "write a point for the comma" +
			[...]string{", or say --decimal comma if the whole file has decimal commas", ", or part the cells by semicolons", ""}[at]
	case faultPoint:
		return expected, "write a comma for the point" +
			[...]string{", or say --decimal point if the whole file has decimal points", "", ""}[at]
	case faultGrouped:
		return expected, "write it without grouping marks"
	case faultNotFinite:
		return "a finite number", [...]string{"take the row out or measure the point again", "empty the cell if the value is not known", ""}[at]
	}
	return expected, ""
}
