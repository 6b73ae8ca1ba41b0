package fieldsheets

import (
	"fmt"
	"io"
	"strings"
)

// WriteSheetPDF prints a sheet as a PDF from the same words, figures and pictures as the HTML page. What WritePDF says of fonts and
// repeatability holds here too.
func WriteSheetPDF(w io.Writer, s Sheet, size Paper) error {
	if size != A4 && size != Letter {
		return fmt.Errorf("paper %q: expected %s or %s", size, A4, Letter)
	}
	d, err := newPaper(size)
	if err != nil {
		return err
	}
	s = s.cleaned()
	d.properties(s.Title, s.Tool, s.Printed)
	d.footer(s.Title, s.Tool, s.Printed)
	pt := bodyPt
	if s.Large {
		pt = largePt
	}
	d.pdf.AddPage()
	d.heading(s.Title, 17)
	var facts []string
	for _, f := range s.Facts {
		facts = append(facts, f.Label+" "+f.Value)
	}
	if len(facts) > 0 {
		d.paragraph("", pt, strings.Join(facts, " · "))
	}
	for _, t := range s.Lead {
		d.paragraph("B", pt+0.5, t)
	}
	for i := range s.Sections {
		d.section(&s.Sections[i], pt)
	}
	d.closing(cautions, s.Signers)
	if err := d.pdf.Output(w); err != nil {
		return fmt.Errorf("cannot print the PDF: %w", err)
	}
	return nil
}

// largePt is the type of sheets that are read on site.
const largePt = 11.0

func (d *paper) section(s *Section, pt float64) {
	if s.NewPage {
		d.pdf.AddPage()
	}
	d.pdf.Ln(1.5)
	if s.Title != "" {
		d.heading(s.Title, pt+3)
	}
	for _, t := range s.Text {
		d.paragraph("", pt, t)
	}
	for _, f := range s.Findings {
		d.room(8)
		d.labelled(strings.ToUpper(string(f.Level)), f.Text)
	}
	if len(s.Facts) > 0 {
		var list []row
		for _, f := range s.Facts {
			list = append(list, row(f))
		}
		d.rows("", list)
	}
	for _, p := range s.Pictures {
		d.figure(p.drawing, p.Caption)
	}
	if s.Table != nil {
		d.grid(s.Table, pt)
	}
	for _, t := range s.Ticks {
		d.tick(t, pt)
	}
	for _, b := range s.Boxes {
		d.writeIn(b, pt)
	}
}

// tick is a box with what there is to do.
func (d *paper) tick(text string, pt float64) {
	line := pt * 0.47
	d.font("", pt)
	lines := d.split(d.shown(text), d.wide-9)
	d.room(float64(len(lines))*line + 2)
	y := d.pdf.GetY() + 1
	d.pdf.SetDrawColor(0, 0, 0)
	d.pdf.SetLineWidth(0.4)
	d.pdf.Rect(marginMM+0.5, y+0.3, 4, 4, "D")
	d.column(marginMM+7, y, d.wide-7, line, lines)
	d.pdf.SetXY(marginMM, y+max(float64(len(lines))*line, 5)+1)
}

// writeIn is a label with a line to write on.
func (d *paper) writeIn(label string, pt float64) {
	d.font("", pt)
	text, line := d.shown(label), pt*0.42
	wide := min(d.pdf.GetStringWidth(text)+3, d.wide-40)
	lines := d.split(text, wide)
	height := max(float64(len(lines))*line+2, 8)
	d.room(height + 3)
	y := d.pdf.GetY() + height
	d.column(marginMM, y-float64(len(lines))*line, wide, line, lines)
	d.pdf.SetDrawColor(0, 0, 0)
	d.pdf.SetLineWidth(0.2)
	d.pdf.Line(marginMM+wide, y, marginMM+d.wide, y)
	d.pdf.SetXY(marginMM, y+2)
}

// grid is a table whose columns are as wide as their text asks for; blank cells have a frame to write in.
func (d *paper) grid(t *Table, pt float64) {
	pt--
	widths := d.gridWidths(t, pt)
	line := pt * 0.45
	body := make([][][]string, 0, len(t.Body))
	for k, r := range t.Body {
		d.gridFont(t.strong(k), pt)
		body = append(body, d.gridCells(t, widths, r))
	}
	d.font("B", pt)
	var names []string
	for _, c := range t.Columns {
		names = append(names, c.Head)
	}
	head := d.gridCells(&Table{Columns: plain(t.Columns)}, widths, names)
	whole := 8 + tallest(head)*line
	for _, r := range body {
		whole += gridHeight(t, r, line)
	}
	_, tall := d.pdf.GetPageSize()
	d.room(min(whole, tall-marginMM-footMM-4))
	if t.Caption != "" {
		d.font("B", pt+0.5)
		d.write(d.shown(t.Caption), (pt+0.5)*0.5)
	}
	d.font("B", pt)
	d.gridRow(t, widths, head, tallest(head)*line+1, line, false)
	for k, r := range body {
		height := gridHeight(t, r, line)
		if d.pdf.GetY()+height > tall-footMM-4 {
			d.pdf.AddPage()
			d.font("B", pt)
			d.gridRow(t, widths, head, tallest(head)*line+1, line, false)
		}
		d.gridFont(t.strong(k), pt)
		d.gridRow(t, widths, r, height, line, true)
	}
	d.pdf.Ln(2.5)
}

func (d *paper) gridFont(strong bool, pt float64) {
	weight := ""
	if strong {
		weight = "B"
	}
	d.font(weight, pt)
}

// plain are the columns as a head has them: with words in every cell.
func plain(list []Column) (out []Column) {
	for _, c := range list {
		c.Blank = false
		out = append(out, c)
	}
	return out
}

// gridWidths shares the width of the page, mm: each column as its text asks for, within a least and a greatest.
func (d *paper) gridWidths(t *Table, pt float64) []float64 {
	widths := make([]float64, len(t.Columns))
	sum := 0.0
	d.font("B", pt)
	for i, c := range t.Columns {
		for _, w := range words(c.Head) {
			widths[i] = max(widths[i], d.pdf.GetStringWidth(d.shown(w))+3)
		}
		for _, r := range t.Body {
			if !c.Blank {
				widths[i] = max(widths[i], min(d.pdf.GetStringWidth(d.shown(r[i]))+3, d.wide*0.4))
			}
		}
		if c.Blank {
			widths[i] = max(widths[i], 20)
		}
		sum += widths[i]
	}
	for i := range widths {
		widths[i] *= d.wide / sum
	}
	return widths
}

func (d *paper) gridCells(t *Table, widths []float64, cells []string) (out [][]string) {
	for i, c := range cells {
		if t.Columns[i].Blank {
			c = ""
		}
		out = append(out, d.split(d.shown(c), widths[i]-1.5))
	}
	return out
}

func tallest(cells [][]string) float64 {
	n := 1
	for _, c := range cells {
		n = max(n, len(c))
	}
	return float64(n)
}

func gridHeight(t *Table, cells [][]string, line float64) float64 {
	for _, c := range t.Columns {
		if c.Blank {
			return max(tallest(cells)*line+1, 8)
		}
	}
	return tallest(cells)*line + 1
}

func (d *paper) gridRow(t *Table, widths []float64, cells [][]string, height, line float64, body bool) {
	x, y := marginMM, d.pdf.GetY()
	d.pdf.SetLineWidth(0.15)
	d.pdf.SetDrawColor(150, 150, 150)
	for i, text := range cells {
		c := t.Columns[i]
		if body && c.Blank {
			d.pdf.Rect(x, y+0.5, widths[i]-1, height-1, "D")
		} else {
			align := "L"
			if c.Right {
				align = "R"
			}
			for k, l := range text {
				d.pdf.SetXY(x, y+0.5+float64(k)*line)
				d.pdf.CellFormat(widths[i]-1, line, l, "", 0, align, false, 0, "")
			}
		}
		x += widths[i]
	}
	d.pdf.Line(marginMM, y+height, marginMM+d.wide, y+height)
	d.pdf.SetDrawColor(0, 0, 0)
	d.pdf.SetXY(marginMM, y+height)
}
