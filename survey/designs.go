package survey

import (
	"errors"
	"fmt"
	"io"
	"os"
	"strings"

	"github.com/gocarina/gocsv"
)

// designRow is one line of a cables file as text: gocsv sorts the cells into the columns, the numbers are parsed by this
// package alone, because gocsv takes a blank for 0, NaN for a number and a comma for a point.
type designRow struct {
	Structure      string `csv:"structure"`
	Cable          string `csv:"cable"`
	Span           string `csv:"span"`
	Load           string `csv:"load"`
	SelfWeight     string `csv:"self_weight"`
	USelfWeight    string `csv:"u_self_weight"`
	DeckLoad       string `csv:"deck_load"`
	UDeckLoad      string `csv:"u_deck_load"`
	DesignSpan     string `csv:"design_span"`
	UDesignSpan    string `csv:"u_design_span"`
	DesignRise     string `csv:"design_rise"`
	UDesignRise    string `csv:"u_design_rise"`
	DesignTension  string `csv:"design_tension"`
	UDesignTension string `csv:"u_design_tension"`
	DesignSag      string `csv:"design_sag"`
	UDesignSag     string `csv:"u_design_sag"`
	DesignTemp     string `csv:"design_temperature"`
	UDesignTemp    string `csv:"u_design_temperature"`
	Axial          string `csv:"axial_stiffness"`
	UAxial         string `csv:"u_axial_stiffness"`
	Expansion      string `csv:"expansion"`
	UExpansion     string `csv:"u_expansion"`
	Breaking       string `csv:"breaking_load"`
	UBreaking      string `csv:"u_breaking_load"`
	SafetyFactor   string `csv:"safety_factor"`
	SlackBelow     string `csv:"slack_below"`
	OverloadAbove  string `csv:"overload_above"`
	Diameter       string `csv:"diameter"`
	UDiameter      string `csv:"u_diameter"`
	Bending        string `csv:"bending_stiffness"`
	UBending       string `csv:"u_bending_stiffness"`
	TakeUp         string `csv:"take_up_per_turn"`
	UTakeUp        string `csv:"u_take_up_per_turn"`
	Between        string `csv:"support_between"`
}

// designColumns are the columns with a unit, and what is allowed in them.
var designColumns = map[string]struct {
	dim      Dimension
	positive bool
}{
	"self_weight": {ForcePerLength, true}, "deck_load": {ForcePerLength, true}, "design_span": {Length, true}, "design_rise": {Length, false},
	"design_tension": {Force, true}, "design_sag": {Length, true}, "design_temperature": {Temperature, false}, "axial_stiffness": {Force, true},
	"expansion": {PerTemperature, true}, "breaking_load": {Force, true}, "diameter": {Length, true}, "take_up_per_turn": {Length, true},
	"bending_stiffness": {Bending, true},
	"slack_below":       {Fraction, true}, "overload_above": {Fraction, true},
}

var plainColumns = []string{"structure", "cable", "span", "load", "safety_factor", "support_between"}

// designHeader is the header of a cables file as understood: units by column name.
type designHeader struct {
	units   map[string]unit
	written map[string]string // header cell as written
	percent map[string]bool   // a u_ column in percent of its value
}

// designReader feeds gocsv with the bare column names and keeps the line of every record.
type designReader struct {
	rec    *records
	mark   byte
	name   string
	header []string
	lines  []int
	fault  *InputError
}

// Read is the next record; every row must have as many cells as the header.
func (d *designReader) Read() ([]string, error) {
	cells, err := d.rec.read(nil)
	if err != nil {
		return nil, err
	}
	row := make([]string, len(cells))
	for i, c := range cells {
		row[i] = string(c)
	}
	return row, nil
}

// ReadAll gives gocsv the header and all rows; rows of another length are reported and left out.
func (d *designReader) ReadAll() ([][]string, error) {
	all := [][]string{d.header}
	for {
		row, err := d.Read()
		if err == io.EOF {
			return all, nil
		}
		if err != nil {
			return nil, err
		}
		if len(row) != len(d.header) {
			d.fault.add(Problem{File: d.name, Line: d.rec.line, Found: strings.Join(row, string(d.rec.separator)),
				Expected: fmt.Sprintf("%d cells, there are %d", len(d.header), len(row)), Mend: "give every column a cell, empty ones too"})
			continue
		}
		d.lines = append(d.lines, d.rec.line)
		all = append(all, row)
	}
}

// ReadDesigns reads a cables file: one line a cable span, columns in any order, units in brackets in the header. The design
// values are in SI; an empty cell is a nil pointer, never zero. Notices tell columns that are not used and loads that were
// inferred. The error is an *InputError that lists every problem with its place.
func ReadDesigns(r io.Reader, name string) ([]Design, []Notice, error) {
	src, err := open(r, name, "")
	if err != nil {
		return nil, nil, err
	}
	head, _ := src.text.Peek(headSize)
	rec := newRecords(src.text, name)
	d := &designReader{rec: rec, name: name, fault: &InputError{}}
	d.chooseSeparator(head)
	first, err := d.Read()
	if cutShort(err) {
		return nil, nil, d.ending(err)
	}
	if err == io.EOF {
		return nil, nil, &InputError{Problems: []Problem{{File: name, Expected: "a header and a line for each cable span", Mend: "the file holds no rows"}}}
	}
	if err != nil {
		return nil, nil, err
	}
	h, notices := d.readHeader(first)
	if err := d.fault.orNil(); err != nil {
		return nil, nil, err
	}
	notices = append(d.guessed(src.guesses), notices...)
	var rows []designRow
	if err := gocsv.UnmarshalCSV(d, &rows); err != nil && !errors.Is(err, gocsv.ErrEmptyCSVFile) {
		return nil, nil, d.ending(err)
	}
	var out []Design
	seen := map[[2]string]int{}
	for i, row := range rows {
		p := designParser{header: h, row: row, line: d.lines[i], reader: d}
		design := p.parse()
		key := [2]string{strings.ToLower(design.Structure), plain(design.Cable, design.Span)}
		if line, twice := seen[key]; twice {
			p.problem("cable", design.Cable, fmt.Sprintf("each span once: line %d is the same structure, cable and span", line), "")
		}
		seen[key] = p.line
		notices = append(notices, p.notices...)
		out = append(out, design)
	}
	if len(rows) == 0 && len(d.fault.Problems) == 0 {
		d.fault.add(Problem{File: name, Expected: "a line for each cable span below the header"})
	}
	if err := d.fault.orNil(); err != nil {
		return nil, nil, err
	}
	return out, notices, nil
}

// guessed tells what the cells are parted by and how they are written, where that is not the usual way.
func (d *designReader) guessed(guesses []Guess) (out []Notice) {
	add := func(what, taken, why string) {
		out = append(out, Notice{File: d.name, Text: fmt.Sprintf("%s taken as %s: %s", what, taken, why)})
	}
	for _, g := range guesses {
		add(g.What, g.Taken, g.Why)
	}
	if d.rec.separator != ',' {
		add("separator", separatorNames[d.rec.separator], "it parts the header into the most columns")
	}
	if d.mark == ',' {
		add("decimal mark", "comma", "the numbers are written with it")
	}
	return out
}

// ending is the error with which the rows ended, beside the problems found before it.
func (d *designReader) ending(err error) error {
	var input *InputError
	switch {
	case errors.As(err, &input):
		d.fault.join(input)
	case cutShort(err):
		d.fault.add(Problem{File: d.name, Line: d.rec.line, Expected: "the rest of the compressed file", Mend: "it looks cut off or damaged: fetch it again"})
	default:
		return fmt.Errorf("%s: cannot read: %w", d.name, err)
	}
	return d.fault
}

// OfStructure are the designs of one structure. Without a structure all are; a cables file that names no structures is for
// any.
func OfStructure(designs []Design, structure string) []Design {
	if structure == "" {
		return designs
	}
	var named, unnamed []Design
	for _, d := range designs {
		switch {
		case strings.EqualFold(d.Structure, structure):
			named = append(named, d)
		case d.Structure == "":
			unnamed = append(unnamed, d)
		}
	}
	if len(named) > 0 {
		return named
	}
	return unnamed
}

// DesignIndex finds designs by structure, cable and span.
type DesignIndex struct {
	byKey map[[3]string]*Design
}

// IndexDesigns makes an index; the designs must not move while it is used.
func IndexDesigns(designs []Design) DesignIndex {
	x := DesignIndex{byKey: make(map[[3]string]*Design, 2*len(designs))}
	for i := range designs {
		d := &designs[i]
		cable, span := strings.ToLower(d.Cable), strings.ToLower(d.Span)
		x.byKey[[3]string{strings.ToLower(d.Structure), cable, span}] = d
		// a survey that does not name its structure means the only one that has the cable: readers refuse it otherwise
		if _, taken := x.byKey[[3]string{"", cable, span}]; !taken {
			x.byKey[[3]string{"", cable, span}] = d
		}
	}
	return x
}

// Of is the design of a span of a structure, nil when there is none. A cables file that names no structures is for any.
func (x DesignIndex) Of(structure, cable, span string) *Design {
	cable, span = strings.ToLower(cable), strings.ToLower(span)
	if d := x.byKey[[3]string{strings.ToLower(structure), cable, span}]; d != nil {
		return d
	}
	if d := x.byKey[[3]string{"", cable, span}]; d != nil && d.Structure == "" {
		return d
	}
	return nil
}

// ReadDesignsFile is ReadDesigns for a file.
func ReadDesignsFile(path string) ([]Design, []Notice, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, nil, fmt.Errorf("cannot read the cables file: %w", err)
	}
	defer f.Close()
	return ReadDesigns(f, path)
}

// chooseSeparator counts separators in the first row that is not a comment; with semicolons or tabs the decimal mark is what the numbers
// use.
func (d *designReader) chooseSeparator(head []byte) {
	lines := sampleLines(head, d.rec.returns)
	d.rec.separator, d.mark = ',', '.'
	if len(lines) == 0 {
		return
	}
	most := strings.Count(lines[0], ",")
	for _, sep := range []byte{';', '\t'} {
		if n := strings.Count(lines[0], string(sep)); n > most {
			most, d.rec.separator = n, sep
		}
	}
	if d.rec.separator != ',' {
		got, _ := weigh(lines, d.rec.separator)
		d.mark = got.mark
	}
}

// readHeader checks the columns and finds their units.
func (d *designReader) readHeader(cells []string) (designHeader, []Notice) {
	h := designHeader{units: map[string]unit{}, written: map[string]string{}, percent: map[string]bool{}}
	var notices []Notice
	for _, c := range cells {
		name, _ := cutUnit(c)
		name = strings.ToLower(strings.ReplaceAll(strings.TrimSpace(name), " ", "_"))
		d.header = append(d.header, name)
		if first, twice := h.written[name]; twice {
			d.fault.add(Problem{File: d.name, Line: d.rec.line, Column: c, Expected: "each column once", Mend: fmt.Sprintf("columns %s and %s have one name", quote(first), quote(c))})
		}
		h.written[name] = c
	}
	for _, uncertainties := range []bool{false, true} { // the unit of a u_ column may be that of its value
		for i, c := range cells {
			if _, unitText := cutUnit(c); strings.HasPrefix(d.header[i], "u_") == uncertainties && !d.columnUnit(h, d.header[i], c, unitText) {
				notices = append(notices, Notice{File: d.name, Line: d.rec.line, Column: c, Text: fmt.Sprintf("column %s is not used; nearest known name: %s", quote(c), nearestColumn(d.header[i]))})
			}
		}
	}
	for _, must := range []string{"cable"} {
		if _, ok := h.written[must]; !ok {
			d.fault.add(Problem{File: d.name, Line: d.rec.line, Found: strings.Join(cells, ", "), Expected: "a column " + quote(must), Mend: "the first row must name the columns: cable, self_weight [N/m], design_tension [kN], ..."})
		}
	}
	return h, notices
}

// columnUnit settles the unit of one column; false when the column is not known.
func (d *designReader) columnUnit(h designHeader, name, cell, unitText string) bool {
	for _, plain := range plainColumns {
		if name == plain {
			return true
		}
	}
	base := strings.TrimPrefix(name, "u_")
	col, ok := designColumns[base]
	if !ok || (base != name && col.dim == Fraction) {
		return false
	}
	problem := func(found, expected, mend string) {
		d.fault.add(Problem{File: d.name, Line: d.rec.line, Column: cell, Found: found, Expected: expected, Mend: mend})
	}
	switch {
	case base != name && unitText == "%" && col.dim == Temperature:
		problem(unitText, "a unit of temperature: "+spellings[col.dim], "per cent of a temperature depends on where the scale begins")
		return true
	case base != name && unitText == "%":
		h.percent[name] = true
		return true
	case unitText == "" && base != name:
		if u, ok := h.units[base]; ok {
			h.units[name] = u
			return true
		}
		problem("", "a unit in brackets, "+spellings[col.dim]+" or %", "write for example "+name+" [%]")
		return true
	case unitText == "":
		problem("", "a unit in brackets: "+spellings[col.dim], "write for example "+name+" ["+strings.Fields(strings.ReplaceAll(spellings[col.dim], ",", ""))[0]+"]")
		return true
	}
	u, ok := findUnit(unitText, col.dim)
	if !ok {
		problem(unitText, "a unit of "+string(col.dim)+": "+spellings[col.dim], "")
	}
	h.units[name] = u
	return true
}

// nearestColumn is the known column with the most similar name.
func nearestColumn(name string) string {
	known := map[string]bool{}
	for c, col := range designColumns {
		known[c] = true
		if col.dim != Fraction {
			known["u_"+c] = true
		}
	}
	for _, c := range plainColumns {
		known[c] = true
	}
	return nearestOf(name, known)
}
