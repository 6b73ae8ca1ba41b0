package survey

import (
	"errors"
	"fmt"
	"io"
	"math"
	"os"
)

// PointOptions say how a point file is to be understood. Empty fields are found from the file and reported as guesses; what is
// given here counts over what a comment line of the file says, and a contradiction is reported as a notice.
type PointOptions struct {
	Name      string     // of the file, for messages
	Order     string     // columns of a headerless file: letters P N E Z D S and -; with a header that is understood it is not used
	Separator string     // comma, semicolon, tab or blanks, or the character itself
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

// leastSigma is the smallest standard deviation, m, that is taken as one: no instrument is better, and squares of much smaller ones
// vanish.
const leastSigma = 1e-9

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
	settled    bool              // columns and units are settled: conditions that would change them come too late
	above      string            // the last comment line before the first row
	codes      map[string]string // codes seen, so that a row with a known code allocates nothing
	reduced    *reduction        // the points of a file of raw readings, nil for coordinates
	last       [2]int            // bytes in the last cell of the row in hand and of the one before
}

// mostCodes is the number of different codes that are kept for reuse; a column of free text has no end of them.
const mostCodes = 10_000

func (p *PointReader) guess(what, taken, why, setBy string) {
	p.guesses = append(p.guesses, Guess{What: what, Taken: taken, Why: why, SetBy: setBy})
}

// NewPointReader opens a point file: encoding, separator, header and units are settled before it returns, and with them every
// guess. Conditions at the top of the file are read; those further down are read as they come. The error is an *InputError for
// a file that is not understood and another error for an option that is not.
//
// A file of raw readings is no list of points before it is reduced whole: ReadPoints takes one, NewPointReader refuses it.
func NewPointReader(r io.Reader, o PointOptions) (*PointReader, error) {
	src, err := open(r, o.Name, o.Encoding)
	if err != nil {
		return nil, err
	}
	if line, header := src.readings(); header != "" {
		return nil, &InputError{Problems: []Problem{{File: o.Name, Line: line, Found: header, Expected: "coordinates, not raw readings", Mend: "reduce the readings first"}}}
	}
	return newPointReader(src, o)
}

// newPointReader is NewPointReader on an opened input.
func newPointReader(src *source, o PointOptions) (*PointReader, error) {
	p := &PointReader{opts: o, src: src, rec: newRecords(src.text, o.Name), guesses: src.guesses, codes: map[string]string{}}
	if err := p.settleDialect(); err != nil {
		return nil, err
	}
	cells, err := p.rec.read(p.comment)
	if err == io.EOF {
		return nil, &InputError{Problems: []Problem{{File: o.Name, Expected: "rows of points", Mend: "the file holds only comments"}}}
	}
	if err != nil {
		if err = p.ending(err); err == io.EOF {
			err = &p.problems
		}
		return nil, err
	}
	if err := p.settleColumns(cells); err != nil {
		return nil, err
	}
	if err := p.settleUnit(); err != nil {
		return nil, err
	}
	p.settled = true
	return p, nil
}

// Next is the next good point, in metres. Rows with problems are passed over and collected: after the last row Next returns an
// *InputError that lists them, or io.EOF when there are none, and returns the same again if it is asked again. An input that
// cannot be read ends with its own error. One row is held at a time; in the steady state nothing is allocated but the id.
func (p *PointReader) Next() (Point, error) {
	var pt Point
	err := p.next(&pt)
	if err == io.EOF {
		if problems := p.problems.orNil(); problems != nil {
			return Point{}, problems
		}
	}
	return pt, err
}

// next is Next without the problems, into pt.
func (p *PointReader) next(pt *Point) error {
	if p.reduced != nil {
		return p.reduced.next(pt)
	}
	for {
		cells, line := p.first, p.firstLine
		p.first = nil
		if cells == nil {
			var err error
			if cells, err = p.rec.read(p.comment); err != nil {
				*pt = Point{}
				return p.ending(err)
			}
			line = p.rec.line
		}
		p.rows++
		if p.point(cells, line, pt) {
			return nil
		}
	}
}

// ending turns the error that ended the rows into io.EOF or into what the caller is told.
func (p *PointReader) ending(err error) error {
	var input *InputError
	switch {
	case err == io.EOF:
		return err
	case errors.As(err, &input): // after a broken line the rows cannot be trusted
		p.problems.join(input)
		p.rec.stop()
		return io.EOF
	case cutShort(err):
		p.problems.add(Problem{File: p.opts.Name, Line: p.rec.line, Expected: "the rest of the compressed file", Mend: "it looks cut off or damaged: fetch it again"})
		p.rec.stop()
		return io.EOF
	}
	return fmt.Errorf("%s: cannot read: %w", p.opts.Name, err)
}

// Header says how each column of the file was understood, in file order.
func (p *PointReader) Header() (out []HeaderUse) {
	for i, c := range p.columns {
		out = append(out, HeaderUse{Column: i + 1, Name: c.name, Field: fieldNames[c.field], Unit: c.unit})
	}
	return out
}

// Conditions are the circumstances of the visit as far as the file has been read.
func (p *PointReader) Conditions() Conditions { return p.conditions }

// Guesses are what the reader had to infer; they do not change after NewPointReader.
func (p *PointReader) Guesses() []Guess { return p.guesses }

// Notices are what deserves a look, as far as the file has been read.
func (p *PointReader) Notices() []Notice { return p.notices }

// Rows is the number of data rows read, good and bad.
func (p *PointReader) Rows() int { return p.rows }

// SHA256 is the digest of all bytes of the input as received, hexadecimal. What is left unread is read first, so it is
// asked for after the last point. The error is one of reading.
func (p *PointReader) SHA256() (string, error) {
	sum, err := p.src.hashed()
	if err != nil {
		return "", fmt.Errorf("%s: cannot read: %w", p.opts.Name, err)
	}
	return sum, nil
}

// point makes a point of a row; false when the row has a problem.
func (p *PointReader) point(cells [][]byte, line int, pt *Point) bool {
	if len(cells) != len(p.columns) {
		return p.badRow(cells, line)
	}
	*pt = Point{Line: line}
	p.last[1], p.last[0] = p.last[0], len(cells[len(cells)-1])
	bad := len(p.problems.Problems) + p.problems.More
	for i := range p.columns {
		c := &p.columns[i]
		switch c.field {
		case fieldUnused:
		case fieldID:
			pt.ID = string(cells[i])
		case fieldCode:
			pt.Code = p.codeOf(cells[i])
		case fieldEasting, fieldStation:
			pt.E = p.number(cells[i], i, line)
		case fieldNorthing:
			pt.N = p.number(cells[i], i, line)
		case fieldElevation:
			pt.Z = p.number(cells[i], i, line)
		case fieldUEasting:
			pt.Cov.EE, pt.HasCov = p.variance(cells[i], i, line), true
		case fieldUNorthing:
			pt.Cov.NN, pt.HasCov = p.variance(cells[i], i, line), true
		case fieldUElevation:
			pt.Cov.ZZ, pt.HasCov = p.variance(cells[i], i, line), true
		}
	}
	return len(p.problems.Problems)+p.problems.More == bad
}

// codeOf is a code as a string, one for all rows that carry it.
func (p *PointReader) codeOf(cell []byte) string {
	code, ok := p.codes[string(cell)]
	if !ok {
		code = string(cell)
		if len(p.codes) < mostCodes {
			p.codes[code] = code
		}
	}
	return code
}

// number is the cell of column i in metres; what is wrong with it is collected.
func (p *PointReader) number(cell []byte, i, line int) float64 {
	v, fault := parseNumber(cell, p.dialect.mark)
	if fault != "" {
		expected, mend := fault.describe(p.dialect.mark, inPoints)
		if fault == faultEmpty {
			expected += ", the cell is empty"
		}
		p.trouble(line, i, cell, expected, mend)
		return 0
	}
	v *= p.columns[i].factor
	if math.Abs(v) > farthest {
		p.trouble(line, i, cell, "a coordinate below 100 000 km", "check the unit and the order of the columns")
	}
	return v
}

// variance is the square of a standard deviation, m2.
func (p *PointReader) variance(cell []byte, i, line int) float64 {
	bad := len(p.problems.Problems) + p.problems.More
	v := p.number(cell, i, line)
	if len(p.problems.Problems)+p.problems.More == bad && !(v >= leastSigma) {
		p.trouble(line, i, cell, "a standard deviation above 0 (1e-9 m at least)", "")
	}
	return v * v
}

func (p *PointReader) trouble(line, i int, found []byte, expected, mend string) {
	c := p.columns[i]
	name := c.name
	if name == "" {
		name = fmt.Sprintf("%d (%s)", i+1, fieldNames[c.field])
	}
	p.problems.add(Problem{File: p.opts.Name, Line: line, Column: name, Found: string(found), Expected: expected, Mend: mend})
}

// badRow reports a row with too few or too many cells.
func (p *PointReader) badRow(cells [][]byte, line int) bool {
	problem := Problem{File: p.opts.Name, Line: line, Found: shown(cells, p.dialect.separator), Expected: fmt.Sprintf("%d cells, there are %d", len(p.columns), len(cells))}
	switch {
	case len(cells) < len(p.columns) && p.rec.ended:
		problem.Mend = "the file ends here without a line end: it looks cut off, fetch it again"
	case len(cells) > len(p.columns) && emptyBeyond(cells, len(p.columns)):
		problem.Mend = "name the empty columns in the header too, or take the separators at the end of the row away"
	case len(cells) > len(p.columns) && p.dialect.separator == ',':
		problem.Mend = "a comma inside a cell needs quotes; for decimal commas the separator must be a semicolon or a tab"
	case len(cells) > len(p.columns) && p.dialect.separator == ' ':
		problem.Mend = "a code with blanks needs another separator between the columns"
	}
	p.problems.add(problem)
	return false
}

func emptyBeyond(cells [][]byte, n int) bool {
	for _, c := range cells[n:] {
		if len(c) > 0 {
			return false
		}
	}
	return true
}

// ReadPoints reads a whole survey: points sorted by cable, span and role, with everything that was assumed. The error is an
// *InputError that lists every problem with its place; nothing is returned then. A file of raw readings, known by its header, is reduced to
// coordinates first (see package station). Every data row ends in exactly one place of the survey: the points
// or a support of a span, Control, Ground or Ignored.
func ReadPoints(r io.Reader, o PointOptions) (*Survey, error) {
	src, err := open(r, o.Name, o.Encoding)
	if err != nil {
		return nil, err
	}
	if src.close != nil {
		defer src.close()
	}
	if _, header := src.readings(); header != "" {
		return readReadings(src, o)
	}
	p, err := newPointReader(src, o)
	if err != nil {
		return nil, err
	}
	return p.collect()
}

// ReadPointsFile is ReadPoints for a file, which may be compressed with gzip or zstd. Name defaults to the path.
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
