package survey

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"strings"
)

// PointOptions say how a point file is to be understood. Empty fields are found from the file and reported as guesses.
type PointOptions struct {
	Name      string     // of the file, for messages
	Order     string     // columns of a headerless file: letters P N E Z D S and -
	Separator string     // comma, semicolon, tab or blanks
	Decimal   string     // point or comma
	Encoding  string     // utf-8, utf-16le, utf-16be or windows-1252
	Unit      string     // of lengths whose column does not say it: m, mm, cm, ft, us-ft; "" = m
	Codes     []CodeRule // what codes are on
	Known     []Design   // spans of the cables file, to find codes in
	Structure string     // the structure of the survey, "" = as the file says
	Cable     string     // all points are on this cable
	Span      string     // all points are on this span of it
}

// farthest is the largest coordinate, m, that a survey can hold.
const farthest = 1e8

// PointReader reads a point file row by row and holds one row at a time, whatever the size of the file.
type PointReader struct {
	opts       PointOptions
	src        *source
	rec        *records
	dialect    dialect
	columns    []column
	first      [][]byte // a headerless file's first row
	firstLine  int
	conditions Conditions
	unit       float64
	unitName   string
	guesses    []Guess
	notices    []Notice
	problems   InputError
	rows       int
	flat       bool
	hasCodes   bool
	code       []byte // of the last point, valid until the next
}

func (p *PointReader) guess(what, taken, why, setBy string) {
	p.guesses = append(p.guesses, Guess{What: what, Taken: taken, Why: why, SetBy: setBy})
}

// NewPointReader opens a point file: encoding, separator, header and units are settled before it returns. Conditions at the
// top of the file are read; those further down are read as they come. The error is an *InputError for a file that is not
// understood.
func NewPointReader(r io.Reader, o PointOptions) (*PointReader, error) {
	src, err := open(r, o.Name, o.Encoding)
	if err != nil {
		return nil, err
	}
	p := &PointReader{opts: o, src: src, rec: newRecords(src.text, o.Name), guesses: src.guesses}
	if err := p.settleDialect(); err != nil {
		return nil, err
	}
	cells, err := p.rec.read(p.comment)
	if err == io.EOF {
		return nil, &InputError{Problems: []Problem{{File: o.Name, Expected: "rows of points", Mend: "the file holds only comments"}}}
	}
	if err != nil {
		return nil, err
	}
	if err := p.settleColumns(cells); err != nil {
		return nil, err
	}
	return p, p.settleUnit()
}

func (p *PointReader) settleDialect() error {
	head, _ := p.src.text.Peek(headSize)
	d, found := sniff(head, p.rec.returns)
	if name := p.opts.Separator; name != "" {
		b, ok := separatorByName(name)
		if !ok {
			return fmt.Errorf("--separator: found %s, expected comma, semicolon, tab or blanks", quote(name))
		}
		if b != d.separator {
			d, _ = weigh(sampleLines(head, p.rec.returns), b)
		}
	} else if found {
		p.guess("separator", separatorNames[d.separator], "it parts the lines into equal rows of numbers", "--separator")
	}
	switch p.opts.Decimal {
	case "":
		if d.mark == ',' {
			p.guess("decimal mark", "comma", "the numbers are written with it", "--decimal")
		}
	case "point":
		d.mark = '.'
	case "comma":
		d.mark = ','
	default:
		return fmt.Errorf("--decimal: found %s, expected point or comma", quote(p.opts.Decimal))
	}
	p.dialect, p.rec.separator = d, d.separator
	return nil
}

// settleColumns takes the first row for a header or maps the columns by order.
func (p *PointReader) settleColumns(cells [][]byte) error {
	text := make([]string, len(cells))
	for i, c := range cells {
		text[i] = string(c)
	}
	header := isHeader(text)
	switch {
	case header:
		if p.opts.Order != "" {
			p.notices = append(p.notices, Notice{File: p.opts.Name, Line: p.rec.line, Text: "the file has a header: --order is not used"})
		}
		if err := p.readHeader(text); err != nil {
			return err
		}
	case p.opts.Order != "":
		if err := p.useOrder(p.opts.Order, len(cells)); err != nil {
			return err
		}
	case len(cells) == 2:
		p.columns = []column{{field: fieldStation}, {field: fieldElevation}}
		p.guess("columns", "station, elevation", "there is no header and there are two columns of numbers", "a header, or --order SZ")
	default:
		return &InputError{Problems: []Problem{{File: p.opts.Name, Line: p.rec.line, Found: shown(cells, p.dialect.separator), Expected: "a header that names the columns",
			Mend: "add one (for example point,northing,easting,elevation,code), or say the order, for example " + suggestOrder(text)}}}
	}
	if !header {
		p.firstLine = p.rec.line
		for _, c := range cells {
			p.first = append(p.first, bytes.Clone(c))
		}
	}
	for _, c := range p.columns {
		p.flat = p.flat || c.field == fieldStation
		p.hasCodes = p.hasCodes || c.field == fieldCode
	}
	return nil
}

// suggestOrder is an order that fits the count and kind of cells of a first row.
func suggestOrder(cells []string) string {
	switch len(cells) {
	case 3:
		return "--order ENZ or --order NEZ"
	case 4:
		return "--order PENZ or --order PNEZ"
	default:
		return "--order PNEZD or --order PENZD"
	}
}

// settleUnit finds the unit of columns that do not say theirs.
func (p *PointReader) settleUnit() error {
	p.unitName = p.opts.Unit
	if p.unitName == "" {
		p.unitName = p.conditions.unit
	}
	bareColumns := 0
	for _, c := range p.columns {
		if c.factor == 0 && (c.field >= fieldEasting && c.field <= fieldStation || c.field >= fieldUEasting) {
			bareColumns++
		}
	}
	if p.unitName == "" {
		p.unitName = "m"
		if bareColumns > 0 {
			p.guess("unit", "m", "neither the header nor a flag names a unit of length", "--unit, or a header such as elevation [ft]")
		}
	}
	u, ok := findUnit(p.unitName, Length)
	if !ok {
		return fmt.Errorf("--unit: found %s, expected %s", quote(p.unitName), spellings[Length])
	}
	p.unit = u.factor
	if bareColumns == 0 {
		for _, c := range p.columns {
			if c.field == fieldElevation {
				p.unitName = c.unit
			}
		}
	}
	for i := range p.columns {
		if p.columns[i].factor == 0 {
			p.columns[i].factor = p.unit
		}
	}
	return nil
}

// comment reads a "# key: value" line.
func (p *PointReader) comment(line int, text []byte) {
	key, value, ok := strings.Cut(strings.TrimSpace(strings.TrimLeft(string(text), "#")), ":")
	if !ok {
		return // plain words
	}
	key = strings.ToLower(strings.TrimSpace(key))
	if !conditionKeys[key] {
		p.conditions.Notes = append(p.conditions.Notes, strings.TrimSpace(strings.TrimLeft(string(text), "#")))
		return
	}
	value = strings.TrimSpace(value)
	if p.dialect.mark == ',' {
		value = decimalPoints(value)
	}
	if err := p.conditions.Set(key, value); err != nil {
		p.problems.add(problemOf(err, p.opts.Name, line, key))
	}
}

// Next is the next good point, or io.EOF at the end. Rows with problems are collected and passed over; Close tells them.
// The point's Code is only set when withCode asked for it through the reader's owner; ids are copied.
func (p *PointReader) Next() (Point, error) {
	for {
		cells, line := p.first, p.firstLine
		p.first = nil
		if cells == nil {
			var err error
			if cells, err = p.rec.read(p.comment); err != nil {
				var input *InputError
				if !errors.As(err, &input) {
					return Point{}, err
				}
				for _, problem := range input.Problems {
					p.problems.add(problem)
				}
				return Point{}, io.EOF // after a broken line the rows cannot be trusted
			}
			line = p.rec.line
		}
		p.rows++
		if pt, ok := p.point(cells, line); ok {
			return pt, nil
		}
	}
}

// point makes a point of a row.
func (p *PointReader) point(cells [][]byte, line int) (pt Point, ok bool) {
	if len(cells) != len(p.columns) {
		return pt, p.badRow(cells, line)
	}
	pt.Line = line
	p.code = nil
	var u [3]float64
	bad := len(p.problems.Problems) + p.problems.More
	for i, c := range p.columns {
		cell := cells[i]
		switch c.field {
		case fieldUnused:
		case fieldID:
			pt.ID = string(cell)
		case fieldCode:
			p.code = cell
		default:
			v := p.number(cell, c, i, line)
			switch c.field {
			case fieldEasting, fieldStation:
				pt.E = v
			case fieldNorthing:
				pt.N = v
			case fieldElevation:
				pt.Z = v
			default:
				u[c.field-fieldUEasting] = v
				pt.HasCov = true
				if !(v > 0) {
					p.trouble(line, c, i, string(cell), "a standard deviation above 0", "")
				}
			}
		}
	}
	pt.Cov = Cov3{EE: u[0] * u[0], NN: u[1] * u[1], ZZ: u[2] * u[2]}
	return pt, len(p.problems.Problems)+p.problems.More == bad
}

func (p *PointReader) number(cell []byte, c column, i, line int) float64 {
	v, fault := parseNumber(cell, p.dialect.mark)
	if fault != "" {
		expected, mend := fault.describe(string(cell), p.dialect.mark)
		if fault == faultEmpty {
			p.trouble(line, c, i, "", expected+", the cell is empty", mend)
		} else {
			p.trouble(line, c, i, string(cell), expected, mend)
		}
		return 0
	}
	v *= c.factor
	if math.Abs(v) > farthest {
		p.trouble(line, c, i, string(cell), "a coordinate below 100 000 km", "check the unit and the order of the columns")
	}
	return v
}

func (p *PointReader) trouble(line int, c column, i int, found, expected, mend string) {
	name := c.name
	if name == "" {
		name = fmt.Sprintf("%d (%s)", i+1, fieldNames[c.field])
	}
	p.problems.add(Problem{File: p.opts.Name, Line: line, Column: name, Found: found, Expected: expected, Mend: mend})
}

// badRow reports a row with too few or too many cells.
func (p *PointReader) badRow(cells [][]byte, line int) bool {
	problem := Problem{File: p.opts.Name, Line: line, Found: shown(cells, p.dialect.separator), Expected: fmt.Sprintf("%d cells, there are %d", len(p.columns), len(cells))}
	switch {
	case len(cells) < len(p.columns) && p.rec.ended:
		problem.Mend = "the file ends here without a line end: it looks cut off, fetch it again"
	case len(cells) > len(p.columns) && p.dialect.separator == ',':
		problem.Mend = "a comma inside a cell needs quotes; for decimal commas the separator must be a semicolon or a tab"
	case len(cells) > len(p.columns) && p.dialect.separator == ' ':
		problem.Mend = "a code with blanks needs another separator between the columns"
	}
	p.problems.add(problem)
	return false
}

// ReadPoints reads a whole survey: points sorted by cable, span and role, with everything that was assumed. The error is an
// *InputError that lists every problem with its place; nothing is returned then.
func ReadPoints(r io.Reader, o PointOptions) (*Survey, error) {
	p, err := NewPointReader(r, o)
	if err != nil {
		return nil, err
	}
	return p.collect()
}

// ReadPointsFile is ReadPoints for a file, which may be compressed with gzip. Name defaults to the path.
func ReadPointsFile(path string, o PointOptions) (*Survey, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, fmt.Errorf("cannot read the survey: %w", err)
	}
	defer f.Close()
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return nil, fmt.Errorf("%s is a folder, expected a survey file", path)
	}
	if o.Name == "" {
		o.Name = path
	}
	return ReadPoints(f, o)
}
