package fieldsheets

import (
	"io"
	"strings"
)

// WriteSheetText prints a sheet for a terminal. No line is longer than the width, except for an unbreakable word; pictures are left out.
func WriteSheetText(w io.Writer, s Sheet, o TextOptions) error {
	p := newTextPrinter(o)
	for _, l := range p.broken("", strings.ToUpper(cleanSentence(s.Title))) {
		p.line("%s", p.strong(l))
	}
	var facts []string
	for _, f := range s.Facts {
		facts = append(facts, cleanSentence(f.Label+" "+f.Value))
	}
	if len(facts) > 0 {
		p.wrapped("", strings.Join(facts, "; "))
	}
	for _, t := range s.Lead {
		p.wrapped("", cleanSentence(t))
	}
	for i := range s.Sections {
		p.section(&s.Sections[i])
	}
	p.title("Cautions")
	for _, c := range cautions {
		p.wrapped("- ", c)
	}
	if len(s.Signers) > 0 {
		p.line("")
		for _, who := range s.Signers {
			p.line("%s%s  date %s", padded(who, 16), strings.Repeat("_", 36), writeLine)
		}
	}
	_, err := w.Write(p.out.Bytes())
	return err
}

func (p *textPrinter) section(s *Section) {
	if s.Title != "" {
		p.title(cleanSentence(s.Title))
	}
	for _, t := range s.Text {
		p.wrapped("", cleanSentence(t))
	}
	for _, f := range sorted(s.Findings) {
		p.wrapped(padded(strings.ToUpper(string(f.Level)), 6), cleanSentence(f.Text))
	}
	for _, f := range s.Facts {
		lead := "  " + padded(cleanSentence(f.Label), 32) + " "
		if columns(lead) > p.width/2 {
			p.wrapped("  ", cleanSentence(f.Label))
			lead = strings.Repeat(" ", 35)
		}
		p.wrapped(lead, cleanSentence(f.Value))
	}
	if s.Table != nil {
		p.table(s.Table)
	}
	for _, t := range s.Ticks {
		p.wrapped(tickBox+" ", cleanSentence(t))
	}
	for _, b := range s.Boxes {
		list := p.broken("", cleanSentence(b))
		for _, l := range list[:len(list)-1] {
			p.line("%s", l)
		}
		label := list[len(list)-1] + " "
		if columns(label) > p.width-8 {
			p.line("%s", strings.TrimRight(label, " "))
			label = ""
		}
		p.line("%s%s", label, strings.Repeat("_", max(8, p.width-columns(label))))
	}
}

// table prints columns as wide as their text; where that is wider than the page the widest columns are broken between words.
func (p *textPrinter) table(t *Table) {
	const gap = 2
	n := len(t.Columns)
	wide, least := make([]int, n), make([]int, n)
	see := func(i int, text string) {
		wide[i] = max(wide[i], columns(text))
		for _, w := range words(text) {
			least[i] = max(least[i], columns(w))
		}
	}
	for i, c := range t.Columns {
		see(i, c.Head)
		for _, r := range t.Body {
			see(i, c.cell(r[i]))
		}
	}
	for total(wide)+gap*(n-1) > p.width {
		widest := -1
		for i := range wide {
			if wide[i] > least[i] && (widest < 0 || wide[i] > wide[widest]) {
				widest = i
			}
		}
		if widest < 0 {
			break
		}
		wide[widest]--
	}
	if t.Caption != "" {
		p.line("")
		p.wrapped("", cleanSentence(t.Caption))
	}
	head := make([]string, n)
	for i, c := range t.Columns {
		head[i] = c.Head
	}
	p.cells(t, wide, head, false)
	p.line("%s", strings.Repeat("-", min(p.width, total(wide)+gap*(n-1))))
	for k, r := range t.Body {
		cells := make([]string, n)
		for i, c := range t.Columns {
			cells[i] = c.cell(r[i])
		}
		p.cells(t, wide, cells, t.strong(k))
	}
}

func total(list []int) (sum int) {
	for _, v := range list {
		sum += v
	}
	return sum
}

// cells prints one row of a table, each cell broken to the width of its column.
func (p *textPrinter) cells(t *Table, wide []int, cells []string, strong bool) {
	var lines [][]string
	tall := 1
	for i, c := range cells {
		part := textPrinter{width: wide[i]}
		l := part.broken("", c)
		lines = append(lines, l)
		tall = max(tall, len(l))
	}
	for k := range tall {
		out := ""
		for i := range cells {
			text := ""
			if k < len(lines[i]) {
				text = lines[i][k]
			}
			if t.Columns[i].Right {
				text = strings.Repeat(" ", max(0, wide[i]-columns(text))) + text
			}
			if i > 0 {
				out += "  "
			}
			out += padded(text, wide[i])
		}
		out = strings.TrimRight(out, " ")
		if strong {
			out = p.strong(out)
		}
		p.line("%s", out)
	}
}
