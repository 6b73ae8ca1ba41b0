package fieldsheets

import (
	"fmt"
	"io"
	"strings"
	"time"

	"codeberg.org/go-pdf/fpdf"
	"golang.org/x/image/font/gofont/gobold"
	"golang.org/x/image/font/gofont/goregular"
	"golang.org/x/image/font/sfnt"
)

// Paper is a size of sheet.
type Paper string

// The sheets that the PDF prints on.
const (
	A4     Paper = "A4"
	Letter Paper = "Letter"
)

const (
	marginMM = 15.0
	footMM   = 16.0 // from the lower edge
	bodyPt   = 9.0
	smallPt  = 7.5
)

// paper is a PDF in the making. Lengths in mm.
type paper struct {
	pdf     *fpdf.Fpdf
	glyphs  *sfnt.Font
	buffer  sfnt.Buffer
	missing map[rune]bool // characters that the font does not have
	wide    float64       // of the text
}

// WritePDF prints the condition summary as a PDF from the same words, figures and pictures as the HTML page: for the owner the
// verdicts in words, for the engineer one section a cable, then provenance and cautions. Its font holds Latin, Greek and Cyrillic;
// other characters are shown as a box, and the sheet says so. The text can be selected. The same report gives the same bytes.
func WritePDF(w io.Writer, r Report, size Paper) error {
	if err := finite(r); err != nil {
		return err
	}
	if size != A4 && size != Letter {
		return fmt.Errorf("paper %q: expected %s or %s", size, A4, Letter)
	}
	d, err := newPaper(size)
	if err != nil {
		return err
	}
	p := pageOf(r)
	d.properties(p.Title, r.Tool, r.Printed)
	d.footer(p.Title, r.Tool, r.Printed)
	d.owner(p)
	for i := range p.Cables {
		d.cable(&p.Cables[i])
	}
	for i := range p.Joined {
		d.joined(&p.Joined[i])
	}
	d.provenance(p)
	d.closing(p.Cautions, p.Signers)
	if err := d.pdf.Output(w); err != nil {
		return fmt.Errorf("cannot print the PDF: %w", err)
	}
	return nil
}

func newPaper(size Paper) (*paper, error) {
	glyphs, err := sfnt.Parse(goregular.TTF)
	if err != nil {
		return nil, fmt.Errorf("cannot read the font of the PDF: %w", err)
	}
	d := &paper{pdf: fpdf.New("P", "mm", string(size), ""), glyphs: glyphs, missing: map[rune]bool{}}
	d.pdf.SetCatalogSort(true)
	d.pdf.AddUTF8FontFromBytes("go", "", goregular.TTF)
	d.pdf.AddUTF8FontFromBytes("go", "B", gobold.TTF)
	d.pdf.SetMargins(marginMM, marginMM, marginMM)
	d.pdf.SetAutoPageBreak(true, footMM+4)
	wide, _ := d.pdf.GetPageSize()
	d.wide = wide - 2*marginMM
	return d, nil
}

// properties are what readers of PDF show beside the sheet.
func (d *paper) properties(title string, tool Tool, printed time.Time) {
	d.pdf.SetTitle(title, true)
	d.pdf.SetCreator(tool.Name+" "+tool.Version, true)
	d.pdf.SetCreationDate(printed)
	d.pdf.SetModificationDate(printed)
}

func (d *paper) font(weight string, pt float64) { d.pdf.SetFont("go", weight, pt) }

// shown replaces what the font cannot show by a box, and broken bars by whole ones.
func (d *paper) shown(text string) string {
	return strings.Map(func(r rune) rune {
		if i, err := d.glyphs.GlyphIndex(&d.buffer, r); (err != nil || i == 0) && r != '\n' {
			d.missing[r] = true
			return '□'
		}
		if r == '¦' {
			return '|'
		}
		return r
	}, text)
}

// split parts text into lines of a width. The library would part at blanks that keep a number and its unit together; a broken bar,
// which is about as wide and which shown leaves nowhere, stands in for them meanwhile.
func (d *paper) split(text string, wide float64) []string {
	lines := d.pdf.SplitText(strings.ReplaceAll(text, "\u00a0", "¦"), wide)
	for i := range lines {
		lines[i] = strings.ReplaceAll(lines[i], "¦", "\u00a0")
	}
	return lines
}

// write prints text line by line from the left margin.
func (d *paper) write(text string, lineHeight float64) {
	for _, l := range d.split(text, d.wide-2) {
		d.room(lineHeight)
		d.pdf.CellFormat(d.wide, lineHeight, l, "", 1, "L", false, 0, "")
	}
}

// footer stands on every page.
func (d *paper) footer(title string, tool Tool, printed time.Time) {
	d.pdf.AliasNbPages("")
	d.pdf.SetFooterFunc(func() {
		d.pdf.SetY(-footMM)
		d.font("", smallPt)
		d.pdf.SetTextColor(68, 68, 68)
		d.pdf.CellFormat(d.wide/2, 5, "Advice, not a permit: read with the cautions.", "", 0, "L", false, 0, "")
		d.pdf.CellFormat(d.wide/2, 5, fmt.Sprintf("page %d of {nb}", d.pdf.PageNo()), "", 1, "R", false, 0, "")
		d.pdf.CellFormat(d.wide, 4, d.shown(title+" · made by "+tool.Name+" "+tool.Version+", printed "+printed.Format("2006-01-02 15:04")), "", 0, "L", false, 0, "")
		d.pdf.SetTextColor(0, 0, 0)
	})
}

// room starts a new page when less than the given height is left on this one.
func (d *paper) room(height float64) {
	_, tall := d.pdf.GetPageSize()
	if d.pdf.GetY()+height > tall-footMM-4 {
		d.pdf.AddPage()
	}
}

func (d *paper) heading(text string, pt float64) {
	d.room(18)
	d.font("B", pt)
	d.pdf.MultiCell(d.wide, pt*0.5, d.shown(text), "", "L", false)
	d.pdf.Ln(1)
}

func (d *paper) paragraph(weight string, pt float64, text string) {
	d.font(weight, pt)
	d.write(d.shown(text), pt*0.47)
	d.pdf.Ln(0.8)
}

// labelled is a paragraph with its first words in bold.
func (d *paper) labelled(label, text string) {
	d.font("B", bodyPt)
	d.pdf.Write(bodyPt*0.47, d.shown(label)+" ")
	d.font("", bodyPt)
	d.pdf.Write(bodyPt*0.47, d.shown(text))
	d.pdf.Ln(bodyPt*0.47 + 0.8)
}

// lineMM is the height of one line in a table of figures.
const lineMM = (bodyPt - 1) * 0.43

// figures is a table of labels and values laid out for a width: its lines and its height.
type figures struct {
	title  string
	rows   [][2][]string
	height float64
}

func (d *paper) lay(title string, list []row, wide float64) figures {
	f := figures{title: title, height: 6.4}
	if title == "" {
		f.height = 1
	}
	d.font("", bodyPt-1)
	for _, r := range list {
		cells := [2][]string{d.split(d.shown(r.Label), labelShare*wide-2), d.split(d.shown(r.Value), (1-labelShare)*wide-2)}
		f.rows = append(f.rows, cells)
		f.height += rowHeight(cells)
	}
	f.height += 2.2
	return f
}

// labelShare is the part of a table of figures that the labels take.
const labelShare = 0.42

func rowHeight(cells [2][]string) float64 {
	return float64(max(len(cells[0]), len(cells[1]), 1))*lineMM + 0.8
}

// put prints a table of figures with its corner at (x, y). Rows that do not fit go to the next page under the repeated title.
func (d *paper) put(f figures, x, y, wide float64) {
	head := func(again string) {
		if f.title == "" {
			return
		}
		d.font("B", bodyPt-0.5)
		d.pdf.SetXY(x, y)
		d.pdf.CellFormat(wide, 5.2, d.shown(f.title)+again, "", 0, "L", false, 0, "")
		y += 5.4
	}
	head("")
	_, tall := d.pdf.GetPageSize()
	for _, cells := range f.rows {
		if y+rowHeight(cells) > tall-footMM-4 {
			d.pdf.AddPage()
			y = marginMM
			head(", continued")
		}
		d.pdf.SetDrawColor(187, 187, 187)
		d.pdf.SetLineWidth(0.1)
		d.pdf.Line(x, y, x+wide, y)
		d.font("", bodyPt-1)
		d.pdf.SetTextColor(68, 68, 68)
		d.column(x, y+0.4, labelShare*wide, lineMM, cells[0])
		d.pdf.SetTextColor(0, 0, 0)
		d.column(x+labelShare*wide, y+0.4, (1-labelShare)*wide, lineMM, cells[1])
		y += rowHeight(cells)
	}
	d.pdf.SetDrawColor(0, 0, 0)
	d.pdf.SetXY(marginMM, y+2.2)
}

// rows prints one table of figures over the whole width.
func (d *paper) rows(title string, list []row) {
	f := d.lay(title, list, d.wide)
	d.room(8 + 2*lineMM)
	d.put(f, marginMM, d.pdf.GetY(), d.wide)
}

// columns prints tables of figures in two columns of about one height, in their order; those that are too tall for a page follow each other
// over the whole width.
func (d *paper) columns(groups []group) {
	const gap = 6.0
	wide := (d.wide - gap) / 2
	var all []figures
	whole := 0.0
	for _, g := range groups {
		f := d.lay(g.Title, g.Rows, wide)
		all = append(all, f)
		whole += f.height
	}
	// The first column ends where the taller of both is least.
	cut, least, left := 0, whole, 0.0
	for i, f := range all {
		left += f.height
		if tallest := max(left, whole-left); tallest < least {
			cut, least = i+1, tallest
		}
	}
	_, tall := d.pdf.GetPageSize()
	if least > tall-footMM-4-marginMM {
		for _, g := range groups {
			d.rows(g.Title, g.Rows)
		}
		return
	}
	d.room(least)
	top, lowest := d.pdf.GetY(), 0.0
	for i, column := range [][]figures{all[:cut], all[cut:]} {
		y := top
		for _, f := range column {
			d.put(f, marginMM+float64(i)*(wide+gap), y, wide)
			y += f.height
		}
		lowest = max(lowest, y)
	}
	d.pdf.SetXY(marginMM, lowest)
}

func (d *paper) column(x, y, wide, line float64, text []string) {
	for i, t := range text {
		d.pdf.SetXY(x, y+float64(i)*line)
		d.pdf.CellFormat(wide, line, t, "", 0, "L", false, 0, "")
	}
}

// table prints several columns with a head that is repeated on every page; widths are shares of the text width.
func (d *paper) table(caption string, widths []float64, head []string, body [][]string) {
	const line = (bodyPt - 1) * 0.45
	d.room(12 + 2*line)
	d.font("B", bodyPt)
	d.pdf.MultiCell(d.wide, 5.2, d.shown(caption), "", "L", false)
	put := func(cells []string, weight string) {
		d.font(weight, bodyPt-1)
		var lines [][]string
		height := 0.0
		for i, c := range cells {
			l := d.split(d.shown(c), widths[i]*d.wide-1.5)
			lines = append(lines, l)
			height = max(height, float64(len(l))*line+0.9)
		}
		y, x := d.pdf.GetY(), marginMM
		for i := range cells {
			d.column(x, y, widths[i]*d.wide, line, lines[i])
			x += widths[i] * d.wide
		}
		d.pdf.SetDrawColor(187, 187, 187)
		d.pdf.SetLineWidth(0.1)
		d.pdf.Line(marginMM, y+height-0.3, marginMM+d.wide, y+height-0.3)
		d.pdf.SetXY(marginMM, y+height)
	}
	put(head, "B")
	_, tall := d.pdf.GetPageSize()
	for _, cells := range body {
		if d.pdf.GetY()+3*line > tall-footMM-4 {
			d.pdf.AddPage()
			put(head, "B")
		}
		put(cells, "")
	}
	d.pdf.SetDrawColor(0, 0, 0)
	d.pdf.Ln(2.5)
}

// figure is a picture with its caption, kept on one page.
func (d *paper) figure(s *svg, caption string) {
	if s == nil {
		return
	}
	const share = 0.78
	wide := share * d.wide
	height := s.h * wide / s.w
	d.room(height + 8)
	y := d.pdf.GetY()
	d.drawing(s, marginMM+(d.wide-wide)/2, y, wide)
	d.pdf.SetXY(marginMM, y+height+0.5)
	d.font("", smallPt)
	d.pdf.SetTextColor(68, 68, 68)
	d.pdf.MultiCell(d.wide, 3.6, d.shown(caption), "", "C", false)
	d.pdf.SetTextColor(0, 0, 0)
	d.pdf.Ln(2)
}
