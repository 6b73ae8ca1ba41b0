package survey

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"tautbook/survey/station"
)

// mostReadings is the limit on the rows of a file of raw readings: a day of two people fills a hundredth of it.
const mostReadings = 100_000

// readingField is what a column of raw readings holds.
type readingField int

const (
	readingUnused readingField = iota
	readingSetup
	readingTarget
	readingHorizontal
	readingZenith
	readingSlope
	readingInstrumentHeight
	readingTargetHeight
	readingPrism
	readingFace
	readingRound
	readingCode
	readingFieldCount
)

var readingNames = [readingFieldCount]string{"not used", "setup", "target", "horizontal", "zenith", "slope", "instrument_height", "target_height", "prism_constant", "face", "round", "code"}

// readingHeaders are the names that a header may use: common practice, no source.
var readingHeaders = func() map[string]readingField {
	m := map[string]readingField{}
	for f, names := range map[readingField][]string{
		readingSetup:            {"setup", "station", "stn", "from", "standpoint", "occupied"},
		readingTarget:           {"target", "point", "to", "id", "pointid", "sighted"},
		readingHorizontal:       {"horizontal", "horizontalangle", "horizontaldirection", "hz", "ha", "direction"},
		readingZenith:           {"zenith", "zenithangle", "za", "v", "vz"},
		readingSlope:            {"slope", "slopedistance", "slopedist", "sd"},
		readingInstrumentHeight: {"instrumentheight", "hi", "ih", "heightofinstrument"},
		readingTargetHeight:     {"targetheight", "prismheight", "ht", "hr", "th"},
		readingPrism:            {"prismconstant", "prism", "pc"},
		readingFace:             {"face"},
		readingRound:            {"round", "set"},
		readingCode:             {"code", "desc", "description", "feature", "featurecode", "remark"},
	} {
		for _, n := range names {
			m[n] = f
		}
	}
	return m
}()

// readings finds the header of a file of raw readings: a row that names two of horizontal, zenith and slope. It gives line and
// text of it, "" when the file is something else.
func (s *source) readings() (line int, header string) {
	head, _ := s.text.Peek(headSize)
	text := strings.ReplaceAll(strings.ReplaceAll(string(head), "\r\n", "\n"), "\r", "\n")
	for i, l := range strings.Split(text, "\n") {
		t := strings.TrimSpace(l)
		if t == "" || t[0] == '#' {
			continue
		}
		found := map[readingField]bool{}
		for _, c := range strings.FieldsFunc(t, func(r rune) bool { return r == ',' || r == ';' || r == '\t' }) {
			name, _ := cutUnit(strings.Trim(strings.TrimSpace(c), `"`))
			if f := readingHeaders[bare(name)]; f >= readingHorizontal && f <= readingSlope {
				found[f] = true
			}
		}
		if len(found) >= 2 {
			return i + 1, t
		}
		return 0, ""
	}
	return 0, ""
}

// readingsParser reads the rows of raw readings.
type readingsParser struct {
	*PointReader
	book    fieldBook
	columns [readingFieldCount]int // index of the cell, -1 when there is none
	names   []string               // of the header
	length  [readingFieldCount]float64
	angle   [readingFieldCount]angleUnit
	shots   []station.Reading
	codes   map[string]string // of each target
	codeAt  map[string]int    // the line that said it
}

// readReadings reads and reduces a file of raw readings.
func readReadings(src *source, o PointOptions) (*Survey, error) {
	p := &PointReader{opts: o, src: src, rec: newRecords(src.text, o.Name), guesses: src.guesses, codes: map[string]string{}}
	r := &readingsParser{PointReader: p, codes: map[string]string{}, codeAt: map[string]int{}, book: newFieldBook()}
	if err := r.dialectOf(); err != nil {
		return nil, err
	}
	if err := r.header(); err != nil {
		return nil, err
	}
	p.settled = true
	if o.Order != "" {
		p.notice(r.rec.line, "", "raw readings have a header: --order is not used")
	}
	if err := r.body(); err != nil {
		return nil, err
	}
	if err := p.problems.orNil(); err != nil {
		return nil, err
	}
	reduced, err := r.reduce()
	if err != nil {
		return nil, err
	}
	p.reduced = reduced
	p.rows = len(reduced.points)
	return p.collect()
}

// dialectOf finds the separator from the header, which angles cannot confuse, and the decimal mark from the rows.
func (r *readingsParser) dialectOf() error {
	_, header := r.src.readings()
	d := dialect{',', '.'}
	most := 0
	for _, sep := range []byte{',', ';', '\t'} {
		if n := strings.Count(header, string(sep)); n > most {
			d.separator, most = sep, n
		}
	}
	if name := r.opts.Separator; name != "" {
		b, ok := separatorByName(name)
		if !ok || b == ' ' {
			return fmt.Errorf("--separator: found %s, expected comma, semicolon or tab for raw readings", quote(name))
		}
		d.separator = b
	}
	head, _ := r.src.text.Peek(headSize)
	if d.separator != ',' {
		points, commas := 0, 0
		for _, l := range sampleLines(head, r.rec.returns) {
			points, commas = points+strings.Count(l, "."), commas+strings.Count(l, ",")
		}
		if commas > points {
			d.mark = ','
			r.guess("decimal mark", "comma", "the numbers are written with it", "--decimal")
		}
	}
	switch r.opts.Decimal {
	case "":
	case "point":
		d.mark = '.'
	case "comma":
		d.mark = ','
	default:
		return fmt.Errorf("--decimal: found %s, expected point or comma", quote(r.opts.Decimal))
	}
	r.dialect, r.rec.separator, r.rec.seconds = d, d.separator, true
	return nil
}

// fault keeps a problem of a cell or of the whole line.
func (r *readingsParser) fault(line int, column, found, expected, mend string) {
	r.problems.add(Problem{File: r.opts.Name, Line: line, Column: column, Found: found, Expected: expected, Mend: mend})
}

// header maps the columns.
func (r *readingsParser) header() error {
	cells, err := r.rec.read(r.line)
	if err != nil {
		if err = r.ending(err); err == io.EOF {
			return &r.problems
		}
		return err
	}
	for i := range r.columns {
		r.columns[i] = -1
	}
	for i, c := range cells {
		written := string(c)
		name, unitText := cutUnit(written)
		f := readingHeaders[bare(name)]
		r.names = append(r.names, written)
		if f == readingUnused {
			continue
		}
		if first := r.columns[f]; first >= 0 {
			r.fault(r.rec.line, written, "", "one column for the "+readingNames[f], fmt.Sprintf("columns %s and %s both name it: rename one, for example to \"unused\"", quote(r.names[first]), quote(written)))
			continue
		}
		r.columns[f] = i
		r.unitOf(f, written, unitText)
	}
	for _, f := range []readingField{readingSetup, readingTarget, readingHorizontal, readingZenith, readingSlope} {
		if r.columns[f] < 0 {
			r.fault(r.rec.line, "", strings.Join(r.names, ", "), "a column "+readingNames[f], "raw readings need setup, target, horizontal, zenith and slope: name the column so")
		}
	}
	for i := range r.names {
		f := readingUnused
		for k, at := range r.columns {
			if at == i {
				f = readingField(k)
			}
		}
		r.PointReader.columns = append(r.PointReader.columns, column{name: r.names[i], unit: r.unitName})
		r.book.fields = append(r.book.fields, readingNames[f])
	}
	r.hasCodes = true
	return r.problems.orNil()
}

// unitOf settles the unit of a column.
func (r *readingsParser) unitOf(f readingField, written, text string) {
	switch f {
	case readingHorizontal, readingZenith:
		r.angle[f] = r.book.angles
		if text != "" {
			u, ok := angleUnitOf(text)
			if !ok {
				r.fault(r.rec.line, written, text, "a unit of angle ("+angleList+")", "")
			}
			r.angle[f] = u
		}
	case readingSlope, readingInstrumentHeight, readingTargetHeight, readingPrism:
		r.unitName = r.opts.Unit
		if r.unitName == "" {
			r.unitName = r.conditions.unit
		}
		if text == "" && r.unitName == "" {
			text = "m"
			r.guess("unit of "+readingNames[f], "m", "neither the header nor a flag names a unit of length", "--unit, or a header such as "+readingNames[f]+" [ft]")
		} else if text == "" {
			text = r.unitName
		}
		u, ok := findUnit(text, Length)
		if !ok {
			r.fault(r.rec.line, written, text, "a unit of length ("+spellings[Length]+")", "")
		}
		r.length[f], r.unitName = u.factor, "m"
	}
}

// body reads all rows.
func (r *readingsParser) body() error {
	for {
		cells, err := r.rec.read(r.line)
		if err != nil {
			if err = r.ending(err); err == io.EOF {
				break
			}
			return err
		}
		if len(cells) != len(r.names) {
			r.fault(r.rec.line, "", shown(cells, r.dialect.separator), fmt.Sprintf("%d cells as in the header, the row has %d", len(r.names), len(cells)), "")
			continue
		}
		if len(r.shots) == mostReadings {
			r.fault(r.rec.line, "", "", fmt.Sprintf("at most %d raw readings", mostReadings), "part the file by set-ups")
			break
		}
		r.row(cells)
	}
	if len(r.shots) == 0 && len(r.problems.Problems) == 0 {
		r.fault(0, "", "", "rows of readings below the header", "the file has a header only")
	}
	return nil
}

// cell is the text of a field, "" when the column is absent.
func (r *readingsParser) cell(cells [][]byte, f readingField) string {
	if r.columns[f] < 0 {
		return ""
	}
	return string(bytes.TrimSpace(cells[r.columns[f]]))
}

// row reads one reading.
func (r *readingsParser) row(cells [][]byte) {
	line, bad := r.rec.line, len(r.problems.Problems)+r.problems.More
	at := func(f readingField) string { return r.names[r.columns[f]] }
	v := station.Reading{Setup: r.cell(cells, readingSetup), Target: r.cell(cells, readingTarget), Round: r.cell(cells, readingRound), Line: line}
	for f, text := range map[readingField]string{readingSetup: v.Setup, readingTarget: v.Target} {
		if text == "" {
			r.fault(line, at(f), "", "a name", "fill the cell")
		}
	}
	if v.Setup != "" && v.Setup == v.Target {
		r.fault(line, at(readingTarget), v.Target, "a target other than the set-up itself", "rename one of the two")
	}
	angle := func(f readingField) float64 {
		a, err := parseAngle(r.cell(cells, f), r.angle[f], r.dialect.mark)
		if err != nil {
			r.problems.add(problemOf(err, r.opts.Name, line, at(f)))
		}
		return a
	}
	v.Horizontal, v.Zenith = angle(readingHorizontal), angle(readingZenith)
	v.Slope = r.metres(cells, readingSlope, line)
	v.TargetHeight = r.metres(cells, readingTargetHeight, line)
	v.InstrumentHigh = r.metres(cells, readingInstrumentHeight, line)
	v.PrismConstant = r.metres(cells, readingPrism, line)
	if len(r.problems.Problems)+r.problems.More > bad {
		return
	}
	r.believe(&v, cells)
	r.sameSetup(&v)
	r.coded(v.Target, r.cell(cells, readingCode), line)
	if len(r.problems.Problems)+r.problems.More == bad {
		r.shots = append(r.shots, v)
	}
}

// metres reads a length; an empty cell is 0.
func (r *readingsParser) metres(cells [][]byte, f readingField, line int) float64 {
	text := r.cell(cells, f)
	if text == "" {
		return 0
	}
	v, fault := parseNumber([]byte(text), r.dialect.mark)
	if fault != "" {
		expected, mend := fault.describe(r.dialect.mark, inPoints)
		r.fault(line, r.names[r.columns[f]], text, expected, mend)
		return 0
	}
	v *= r.length[f]
	if limit := [readingFieldCount]float64{readingSlope: 2e4, readingInstrumentHeight: 20, readingTargetHeight: 20, readingPrism: 1}[f]; math.Abs(v) > limit {
		r.fault(line, r.names[r.columns[f]], text, fmt.Sprintf("at most %g m", limit), "check the unit")
	}
	return v
}

// believe refuses what no instrument shows, and settles the face.
func (r *readingsParser) believe(v *station.Reading, cells [][]byte) {
	at := func(f readingField) string { return r.names[r.columns[f]] }
	if v.Horizontal < -2*math.Pi || v.Horizontal > 4*math.Pi {
		r.fault(v.Line, at(readingHorizontal), r.cell(cells, readingHorizontal), "a circle reading between 0 and a full circle", "check the unit of the column")
	}
	const least = math.Pi / 180
	z := math.Mod(v.Zenith, math.Pi)
	if v.Zenith <= 0 || v.Zenith >= 2*math.Pi || z < least || z > math.Pi-least {
		r.fault(v.Line, at(readingZenith), r.cell(cells, readingZenith), "a zenith angle more than 1 degree from straight up and down", "if it counts from the horizon, take it from 90 degrees; check the unit")
	}
	if text := r.cell(cells, readingSlope); text != "" && v.Slope <= 0.1 {
		r.fault(v.Line, at(readingSlope), text, "a slope distance above 0.1 m", "empty the cell if no distance was read")
	}
	v.FaceTwo = v.Zenith > math.Pi
	said := strings.ToLower(r.cell(cells, readingFace))
	if said == "" {
		return
	}
	two, known := map[string]bool{"1": false, "i": false, "l": false, "left": false, "2": true, "ii": true, "r": true, "right": true}[said]
	if !known {
		r.fault(v.Line, at(readingFace), said, "face 1 or 2 (I, II, left, right)", "")
	} else if two != v.FaceTwo {
		r.fault(v.Line, at(readingFace), said, fmt.Sprintf("the face that the zenith angle %.4f degrees shows: 1 below 180, 2 above", v.Zenith*180/math.Pi), "correct the face or the angle")
	}
}

// sameSetup refuses two instrument heights of one set-up.
func (r *readingsParser) sameSetup(v *station.Reading) {
	i := slices.IndexFunc(r.shots, func(o station.Reading) bool { return o.Setup == v.Setup })
	if i >= 0 && r.shots[i].InstrumentHigh != v.InstrumentHigh && r.columns[readingInstrumentHeight] >= 0 {
		r.fault(v.Line, r.names[r.columns[readingInstrumentHeight]], fmt.Sprint(v.InstrumentHigh), fmt.Sprintf("the instrument height of line %d, %g m", r.shots[i].Line, r.shots[i].InstrumentHigh),
			"give a second set-up over the same mark another name")
	}
}

// coded keeps the code of a target; one row of its readings may say it for all.
func (r *readingsParser) coded(target, code string, line int) {
	if code == "" {
		return
	}
	if had, ok := r.codes[target]; ok && had != code {
		r.fault(line, r.names[r.columns[readingCode]], code, fmt.Sprintf("the code %s of line %d for the same target", quote(had), r.codeAt[target]), "write one code, or give the other target a name of its own")
		return
	}
	r.codes[target], r.codeAt[target] = code, line
}

// problemFrom places a fault of the reduction.
func (r *readingsParser) problemFrom(err error) error {
	var f *station.Fault
	if !errors.As(err, &f) {
		return &InputError{Problems: []Problem{{File: r.opts.Name, Line: r.shots[0].Line, Expected: "readings that can be adjusted", Mend: err.Error()}}}
	}
	return &InputError{Problems: []Problem{{File: r.opts.Name, Line: f.Line, Column: f.Column, Found: f.Found, Expected: f.Expected, Mend: f.Mend}}}
}
