package survey

import (
	"fmt"
	"math"
	"strings"
)

// angleUnit says how the angles of a column are written.
type angleUnit string

const (
	anglesUnknown angleUnit = ""
	anglesDegrees angleUnit = "deg"
	anglesSexa    angleUnit = "dms"
	anglesPacked  angleUnit = "ddd.mmss"
	anglesGon     angleUnit = "gon"
)

const angleList = "deg, gon, dms or ddd.mmss"

// angleUnitOf reads the unit of a header or of the angles line.
func angleUnitOf(text string) (angleUnit, bool) {
	switch u := strings.ToLower(strings.TrimSpace(text)); u {
	case "deg", "degrees", "°", "decimal degrees":
		return anglesDegrees, true
	case "dms", "d m s", "° ' \"":
		return anglesSexa, true
	case "ddd.mmss", "d.mmss", "dd.mmss":
		return anglesPacked, true
	case "gon", "grad", "g":
		return anglesGon, true
	}
	return anglesUnknown, false
}

// parseAngle reads an angle, rad. Degrees, minutes and seconds parted by blanks, colons, dashes or their signs are known for what they are;
// a plain number needs its unit.
func parseAngle(text string, u angleUnit, mark byte) (float64, error) {
	text = strings.TrimSpace(text)
	if text == "" {
		return 0, wrong("", "an angle", "fill the cell or take the row out")
	}
	body := strings.TrimSuffix(strings.TrimSuffix(text, "gon"), "g")
	if body != text {
		if u != anglesGon && u != anglesUnknown {
			return 0, wrong(text, "an angle in "+string(u), "write the whole column in one unit")
		}
		body, u = strings.TrimSpace(body), anglesGon
	}
	negative := strings.HasPrefix(body, "-")
	parts := strings.FieldsFunc(strings.TrimLeft(body, "+-"), func(r rune) bool { return strings.ContainsRune(" \u00a0:-°'\"′″’”", r) })
	signed := strings.ContainsAny(body, "°'\"′″")
	if len(parts) > 1 || signed || u == anglesSexa {
		if u == anglesGon || u == anglesPacked || u == anglesDegrees && len(parts) > 1 {
			return 0, wrong(text, "an angle in "+string(u), "write the unit of the column as [dms], or the angle as one number")
		}
		v, err := sexagesimal(text, parts, mark)
		return signOf(v, negative), err
	}
	v, fault := parseNumber([]byte(strings.TrimLeft(body, "+-")), mark)
	if fault != "" {
		expected, mend := fault.describe(mark, inPoints)
		return 0, wrong(text, strings.Replace(expected, "a number", "an angle", 1), mend)
	}
	switch u {
	case anglesDegrees:
		return signOf(v*math.Pi/180, negative), nil
	case anglesGon:
		return signOf(v*math.Pi/200, negative), nil
	case anglesPacked:
		d := math.Floor(v + 1e-9)
		m := math.Floor((v-d)*100 + 1e-7)
		s := ((v-d)*100 - m) * 100
		if m >= 60 || s >= 60+1e-6 {
			return 0, wrong(text, "minutes and seconds below 60 in ddd.mmss", "write [deg] in the header if these are decimal degrees")
		}
		return signOf((d+m/60+s/3600)*math.Pi/180, negative), nil
	}
	return 0, wrong(text, "an angle whose unit is written", "name it in the header, for example horizontal [deg], [gon], [dms] or [ddd.mmss]")
}

func signOf(v float64, negative bool) float64 {
	if negative {
		return -v
	}
	return v
}

// sexagesimal adds up degrees, minutes and seconds, rad.
func sexagesimal(text string, parts []string, mark byte) (sum float64, err error) {
	if len(parts) == 0 || len(parts) > 3 || strings.Contains(text, " -") {
		return 0, wrong(text, "degrees, minutes and seconds, such as 123 45 06.7", "")
	}
	for i, p := range parts {
		v, fault := parseNumber([]byte(p), mark)
		whole := v == math.Floor(v) && !strings.ContainsRune(p, rune(mark))
		switch {
		case fault != "" || v < 0 || i < len(parts)-1 && !whole:
			return 0, wrong(text, "degrees, minutes and seconds, such as 123 45 06.7", "")
		case i > 0 && v >= 60:
			return 0, wrong(text, fmt.Sprintf("%s below 60", [3]string{"", "minutes", "seconds"}[i]), "")
		}
		sum += v / [3]float64{1, 60, 3600}[i]
	}
	return sum * math.Pi / 180, nil
}
