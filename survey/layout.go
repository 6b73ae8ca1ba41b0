package survey

import (
	"bytes"
	"fmt"
	"strings"
)

// settleDialect finds separator and decimal mark.
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
	case header && (p.opts.Order == "" || namesPoint(text)):
		if p.opts.Order != "" {
			p.notice(p.rec.line, "", "the file has a header: --order is not used")
		}
		if err := p.readHeader(text); err != nil {
			return err
		}
	case p.opts.Order != "":
		if header {
			p.notice(p.rec.line, "", "the first row %s is no header that is known: it is passed over and --order counts", quote(strings.Join(text, ", ")))
		}
		if err := p.useOrder(p.opts.Order, len(cells)); err != nil {
			return err
		}
	case len(cells) == 2:
		p.columns = []column{{field: fieldStation}, {field: fieldElevation}}
		p.guess("columns", "station, elevation", "there is no header and there are two columns of numbers", "a header, or --order SZ")
	case p.headerAbove(len(cells)):
		return &InputError{Problems: []Problem{{File: p.opts.Name, Line: p.rec.line, Found: shown(cells, p.dialect.separator), Expected: "a header that names the columns",
			Mend: "the comment line " + quote(p.above) + " looks like one: take its # away"}}}
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

// headerAbove reports whether the last comment line before the first row names as many columns as the row has.
func (p *PointReader) headerAbove(cells int) bool {
	rec := &records{separator: p.dialect.separator}
	var names []string
	for _, c := range rec.split([]byte(strings.TrimLeft(p.above, "# \t"))) {
		names = append(names, string(c))
	}
	return len(names) == cells && namesPoint(names)
}

func (p *PointReader) notice(line int, column, format string, args ...any) {
	p.notices = append(p.notices, Notice{File: p.opts.Name, Line: line, Column: column, Text: harmless(fmt.Sprintf(format, args...))})
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
	if written := p.conditions.unit; written != "" && p.opts.Unit != "" && !sameUnit(written, p.opts.Unit) {
		p.notice(0, "", "--unit %s replaces the unit %s that the file names", p.opts.Unit, written)
	}
	if p.unitName != "" && bareColumns == 0 {
		p.notice(0, "", "every column has its unit in the header: unit %s is not used", p.unitName)
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

// sameUnit reports whether two spellings are of one unit of length.
func sameUnit(a, b string) bool {
	u, _ := findUnit(a, Length)
	v, _ := findUnit(b, Length)
	return u == v
}
