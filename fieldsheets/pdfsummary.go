package fieldsheets

import (
	"fmt"
	"slices"
	"strings"
)

// owner is the first page: the verdicts in words, most urgent cable first.
func (d *paper) owner(p page) {
	d.pdf.AddPage()
	d.heading(p.Title, 17)
	var visit []string
	for _, r := range p.Visit {
		visit = append(visit, r.Label+" "+r.Value)
	}
	d.paragraph("", bodyPt, strings.Join(visit, " · "))
	d.paragraph("B", bodyPt+1, p.Tally)
	d.paragraph("", smallPt, "Values are given as value ± U, where U is the expanded uncertainty with k = 2 (about 95 %). H is the horizontal tension, the same all along a span. "+
		p.Cautions[0]+" All cautions are part of this summary.")
	d.pdf.Ln(1)
	d.heading("What the survey says, most urgent cable first", 12)
	for i := range p.Urgent {
		c := &p.Urgent[i]
		d.room(34)
		d.verdict(c, bodyPt+2)
		d.paragraph("", bodyPt+1, c.Owner)
		d.labelled("How sure:", c.Sure)
		d.labelled("Why:", c.Reason)
		d.labelled("Next:", c.Next)
		d.pdf.Ln(1.5)
	}
}

// verdict is the name of a cable with its verdict in a box: readable without colour.
func (d *paper) verdict(c *cableView, pt float64) {
	d.font("B", pt)
	name, word := d.shown(c.Name), strings.ToUpper(c.Verdict)
	d.pdf.SetLineWidth(0.4)
	box := d.pdf.GetStringWidth(word) + 4
	lines := d.split(name, d.wide-box-4)
	y := d.pdf.GetY()
	d.column(marginMM, y, d.wide-box-4, pt*0.5, lines)
	d.pdf.SetXY(marginMM+d.wide-box, y)
	d.pdf.CellFormat(box, pt*0.5+0.6, word, "1", 0, "C", false, 0, "")
	d.pdf.SetXY(marginMM, y+pt*0.5*float64(len(lines))+1.4)
}

// cable is the section of one cable for the engineer.
func (d *paper) cable(c *cableView) {
	d.pdf.AddPage()
	d.verdict(c, 14)
	d.paragraph("", bodyPt, c.Reason)
	d.labelled("Next:", c.Next)
	for _, f := range c.Heavy {
		d.room(8)
		d.labelled(strings.ToUpper(string(f.Level)), f.Text)
	}
	if g := c.Grid; g != nil {
		n := float64(len(g.Columns))
		widths := []float64{0.25}
		head := []string{"if"}
		for _, name := range g.Columns {
			widths, head = append(widths, 0.75/n), append(head, name)
		}
		var body [][]string
		for _, r := range g.Rows {
			body = append(body, append([]string{r.Label}, r.Cells...))
		}
		d.table(g.Title, widths, head, body)
	}
	d.figure(c.drawings.scale, "Today against expected. Bars: 95 % intervals, an arrow where one goes on; shaded: inside the limits.")
	d.figure(c.drawings.shape, "True shape; support forces T, if the load is as recorded, along the real end tangents.")
	d.figure(c.drawings.below, "Below the chord: points, fitted curve, and the designed cable under today's temperature, span and load.")
	d.figure(c.drawings.residuals, "How far the points are from the fitted curve.")
	d.columns(c.Groups)
	if len(c.Rejected) > 0 {
		d.rows("Points left out", c.Rejected)
	}
	if len(c.Budget) > 0 {
		var body [][]string
		for _, b := range c.Budget {
			body = append(body, []string{b.Input, b.Value, b.U, b.Percent})
		}
		d.table("What the uncertainty comes from (standard uncertainties)", []float64{0.4, 0.22, 0.2, 0.18}, []string{"Input", "Value", "u", "Share of the variance"}, body)
	}
	for _, f := range c.Notes {
		d.bullet(f.Text)
	}
}

// joined is the section of one cable over its supports.
func (d *paper) joined(c *continuousView) {
	d.pdf.AddPage()
	d.heading(c.Title, 14)
	d.paragraph("", bodyPt, c.Lead)
	for _, f := range c.Findings {
		d.room(8)
		d.labelled(strings.ToUpper(string(f.Level)), f.Text)
	}
	d.columns(c.Groups)
}

func (d *paper) bullet(text string) {
	d.font("", bodyPt-0.5)
	lines := d.split(d.shown(text), d.wide-4)
	d.room(float64(min(len(lines), 3)) * 4)
	for i, l := range lines {
		lead := ""
		if i == 0 {
			lead = "•"
		}
		d.room(4)
		d.pdf.CellFormat(4, 4, lead, "", 0, "L", false, 0, "")
		d.pdf.CellFormat(d.wide-4, 4, l, "", 1, "L", false, 0, "")
	}
	d.pdf.Ln(0.6)
}

// provenance says how the survey was understood.
func (d *paper) provenance(p page) {
	d.pdf.AddPage()
	d.heading("How the survey was understood", 12)
	designs := "There was no file of design values."
	if p.Designs != "" {
		designs = "Design values from " + p.Designs + "."
	}
	d.paragraph("", bodyPt, designs)
	for _, n := range p.Notices {
		d.bullet(n)
	}
	for _, f := range p.Files {
		d.room(24)
		d.paragraph("B", bodyPt, f.File)
		d.paragraph("", smallPt, "SHA-256 "+f.SHA)
		d.paragraph("", bodyPt-0.5, f.Text+". Columns: "+f.Columns+".")
		var conditions []string
		for _, r := range f.Conditions {
			conditions = append(conditions, r.Label+": "+r.Value)
		}
		if len(conditions) > 0 {
			d.paragraph("", bodyPt-0.5, strings.Join(conditions, "; ")+".")
		}
		for lead, list := range orderedLists(f) {
			for _, text := range list {
				d.bullet(lead + " " + text)
			}
		}
	}
}

// orderedLists yields the lists of one file with the word that leads them.
func orderedLists(f fileView) func(yield func(string, []string) bool) {
	return func(yield func(string, []string) bool) {
		_ = yield("Code", f.Codes) && yield("Guessed", f.Guesses) && yield("Odd", f.Notices)
	}
}

// closing are the cautions and signatures that close every sheet.
func (d *paper) closing(cautions, signers []string) {
	d.room(50 + 13*float64(len(signers)))
	d.heading("Cautions", 12)
	for _, c := range cautions {
		d.bullet(c)
	}
	if len(d.missing) > 0 {
		var list []string
		for r := range d.missing {
			list = append(list, fmt.Sprintf("U+%04X", r))
		}
		slices.Sort(list)
		const most = 20
		if n := len(list); n > most {
			list = append(list[:most], fmt.Sprintf("and %d more", n-most))
		}
		d.bullet("Characters that the font of this PDF does not have stand as □: " + strings.Join(list, ", ") + ". The HTML sheet shows them.")
	}
	if len(signers) == 0 {
		return
	}
	d.pdf.Ln(3)
	d.table("Signatures", []float64{0.2, 0.55, 0.25}, []string{"", "Name and signature", "Date"}, nil)
	for _, s := range signers {
		d.room(13)
		y := d.pdf.GetY() + 9
		d.font("", bodyPt)
		d.column(marginMM, y-4, 0.2*d.wide, 4, []string{s})
		d.pdf.SetDrawColor(0, 0, 0)
		d.pdf.SetLineWidth(0.2)
		d.pdf.Line(marginMM+0.2*d.wide, y, marginMM+0.7*d.wide, y)
		d.pdf.Line(marginMM+0.75*d.wide, y, marginMM+d.wide, y)
		d.pdf.SetXY(marginMM, y+3)
	}
}
