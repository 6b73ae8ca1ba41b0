package survey

import (
	"fmt"
	"math"
	"strings"

	"tautbook/survey/station"
)

// fieldBook is what the "# key: value" lines of a file of raw readings say about instrument and control.
type fieldBook struct {
	angles       angleUnit
	fields       []string // of the columns
	instrument   station.Instrument
	stated       bool // the accuracy of angles and of distances
	angleStated  bool
	rangeStated  bool
	marks        []station.Mark
	markLine     map[string]int
	orientations map[string]float64
	given        map[string]bool
}

const secondOfArc = math.Pi / 180 / 3600

// newFieldBook has the values that count where the file is silent.
func newFieldBook() fieldBook {
	return fieldBook{instrument: station.Instrument{K: station.Refraction, Scale: 1}, markLine: map[string]int{}, orientations: map[string]float64{}, given: map[string]bool{}}
}

// bookKeys are the keys of a file of raw readings beside those of a visit.
var bookKeys = map[string]bool{"mark": true, "orientation": true, "angles": true, "angle accuracy": true, "distance accuracy": true, "centring": true,
	"refraction": true, "scale": true, "atmosphere": true}

// line reads a comment line: a key of the field book, or a condition of the visit.
func (r *readingsParser) line(line int, text []byte) {
	words := strings.TrimSpace(strings.TrimLeft(string(text), "#"))
	key, value, ok := strings.Cut(words, ":")
	key = strings.ToLower(strings.TrimSpace(key))
	if !ok || !bookKeys[key] {
		r.comment(line, text)
		return
	}
	value = strings.TrimSpace(value)
	if r.dialect.mark == ',' {
		value = decimalPoints(value)
	}
	if r.settled {
		r.fault(line, key, words, "this line above the header", "move it to the top")
		return
	}
	if r.book.given[key] && key != "mark" && key != "orientation" {
		r.fault(line, key, words, "one line of this kind", "take one of the two lines out")
		return
	}
	r.book.given[key] = true
	if err := r.book.put(key, value, line); err != nil {
		r.problems.add(problemOf(err, r.opts.Name, line, key))
	}
}

// put stores one line:
//
//	mark                NAME; E; N; Z [; standard deviation with unit]
//	orientation         SETUP; angle to add to the circle for an azimuth
//	angles              deg | gon | dms | ddd.mmss
//	angle accuracy      5" | 1.5 mgon
//	distance accuracy   2 mm + 2 ppm
//	centring            1 mm
//	refraction          0.13
//	scale               0.9996
//	atmosphere          12 ppm
func (b *fieldBook) put(key, value string, line int) (err error) {
	switch key {
	case "mark":
		return b.putMark(value, line)
	case "orientation":
		name, angle, _ := strings.Cut(value, ";")
		name = strings.TrimSpace(name)
		v, err := parseAngle(angle, b.angles, '.')
		if err != nil {
			return err
		}
		if _, twice := b.orientations[name]; twice || name == "" {
			return wrong(value, "one orientation of a set-up: NAME; 123 45 06", "")
		}
		b.orientations[name] = v
		return nil
	case "angles":
		u, ok := angleUnitOf(value)
		if !ok {
			return wrong(value, angleList, "")
		}
		b.angles = u
		return nil
	case "angle accuracy":
		b.instrument.Angle, err = smallAngle(value)
		b.angleStated = err == nil
	case "distance accuracy":
		err = b.putDistance(value)
		b.rangeStated = err == nil
	case "centring":
		b.instrument.Centring, err = smallLength(value)
	case "refraction":
		b.instrument.K, err = within(value, -5, 5)
	case "scale":
		b.instrument.Scale, err = within(value, 0.99, 1.01)
	case "atmosphere":
		b.instrument.Met, err = within(strings.TrimSpace(strings.TrimSuffix(value, "ppm")), -1000, 1000)
		b.instrument.Met *= 1e-6
	}
	b.stated = b.angleStated && b.rangeStated
	return err
}

// within reads a plain number between two bounds.
func within(text string, lo, hi float64) (float64, error) {
	v, fault := parseNumber([]byte(text), '.')
	if fault != "" || v < lo || v > hi {
		return 0, wrong(text, fmt.Sprintf("a number between %g and %g", lo, hi), "")
	}
	return v, nil
}

// smallAngle reads a standard deviation of angles, rad.
func smallAngle(text string) (float64, error) {
	for _, u := range []struct {
		suffix string
		factor float64
	}{{`"`, secondOfArc}, {"″", secondOfArc}, {"mgon", math.Pi / 200e3}, {"arcsec", secondOfArc}} {
		if number, ok := strings.CutSuffix(text, u.suffix); ok {
			v, err := within(strings.TrimSpace(number), 0.01, 600)
			return v * u.factor, err
		}
	}
	return 0, wrong(text, "a standard deviation such as 5\" or 1.5 mgon", "")
}

// smallLength reads a standard deviation, m.
func smallLength(text string) (float64, error) {
	q, err := ParseQuantity(text, Length)
	if err == nil && (q.U != 0 || q.Value < 0 || q.Value > 1) {
		err = wrong(text, "a standard deviation such as 2 mm", "")
	}
	return q.Value, err
}

// putDistance reads "2 mm + 2 ppm"; the second part may be absent.
func (b *fieldBook) putDistance(value string) (err error) {
	constant, ppm, both := strings.Cut(value, "+")
	if b.instrument.Distance, err = smallLength(strings.TrimSpace(constant)); err != nil {
		return err
	}
	if b.instrument.Distance < leastSigma {
		return wrong(value, "a standard deviation above 0, such as 2 mm + 2 ppm", "")
	}
	if !both {
		return nil
	}
	number, ok := strings.CutSuffix(strings.TrimSpace(ppm), "ppm")
	if !ok {
		return wrong(value, "a part in ppm behind the plus, such as 2 mm + 2 ppm", "")
	}
	b.instrument.DistancePM, err = within(strings.TrimSpace(number), 0, 1000)
	b.instrument.DistancePM *= 1e-6
	return err
}

// putMark reads a known point; coordinates are in metres.
func (b *fieldBook) putMark(value string, line int) error {
	parts := strings.Split(value, ";")
	const form = "NAME; E; N; Z in metres; its standard deviation if it is known: CP1; 1000.000; 5000.000; 100.000; 2 mm"
	if len(parts) != 4 && len(parts) != 5 {
		return wrong(value, form, "")
	}
	m := station.Mark{Name: strings.TrimSpace(parts[0])}
	if first, twice := b.markLine[m.Name]; twice || m.Name == "" {
		return wrong(value, fmt.Sprintf("a mark of its own: line %d is that mark already", first), "rename one of the two")
	}
	for i, into := range []*float64{&m.E, &m.N, &m.Z} {
		v, err := within(strings.TrimSpace(parts[i+1]), -farthest, farthest)
		if err != nil {
			return err
		}
		*into = v
	}
	if len(parts) == 5 {
		u, err := smallLength(strings.TrimSpace(parts[4]))
		if err != nil {
			return err
		}
		m.U = u
	}
	b.marks, b.markLine[m.Name] = append(b.marks, m), line
	return nil
}
