package fieldsheets

import (
	"bytes"
	_ "embed"
	"fmt"
	"html/template"
	"io"
	"slices"
	"strings"
	"sync"

	"tautbook/tension"
)

//go:embed templates/summary.html
var summaryTemplate string

//go:embed templates/summary.css
var summaryStyle string

// summaryPage is parsed when it is first printed, not at every start of the program.
var summaryPage = sync.OnceValue(func() *template.Template {
	return template.Must(template.New("summary").Parse(summaryTemplate))
})

// page is the report in the words and pictures of the HTML sheet.
type page struct {
	Title    string
	Report   Report
	Style    template.CSS
	Visit    []row
	Tally    string
	Cables   []cableView
	Joined   []continuousView
	Urgent   []cableView // the same, most urgent first
	Files    []fileView
	Designs  string // the cables file
	Notices  []string
	Printed  string
	Cautions []string
	Signers  []string
}

// cableView is one cable as the sheet shows it.
type cableView struct {
	ID, Name, Verdict, Class string
	Owner, Sure              string // for the owner: the state in one line, and how sure it is
	Reason, Next             string
	Heavy, Notes             []tension.Finding
	Grid                     *grid
	Groups                   []group
	Scale, Shape, Below, Res template.HTML
	Budget                   []budgetView
	Rejected                 []row

	drawings drawings
}

// drawings are the pictures of one cable; scale is nil when there is nothing to hold the cable against.
type drawings struct{ scale, shape, below, residuals *svg }

func drawingsOf(a *tension.Assessment) drawings {
	return drawings{ratioScale(a), trueShape(a), belowChord(a), residuals(a)}
}

type budgetView struct {
	tension.BudgetLine
	Percent string
	Bar     float64
}

// fileView is one survey file as it was understood.
type fileView struct {
	File, SHA, Text         string
	Columns                 string
	Codes, Guesses, Notices []string
	Conditions              []row
}

// WriteHTML prints the condition summary as one HTML file without scripts and without anything to fetch: for the owner the
// verdicts in words, for the engineer one section a cable, then provenance and cautions. It prints on A4 and Letter.
func WriteHTML(w io.Writer, r Report) error {
	if err := finite(r); err != nil {
		return err
	}
	var out bytes.Buffer
	if err := summaryPage().Execute(&out, pageOf(r)); err != nil {
		return fmt.Errorf("cannot print the summary: %w", err)
	}
	_, err := w.Write(out.Bytes())
	return err
}

// pageOf puts the report into the words and pictures that HTML and PDF share.
func pageOf(r Report) page {
	p := page{Title: "Condition summary" + prefixed(": ", clean(r.Visit.Structure)), Report: r, Style: template.CSS(summaryStyle), Visit: visitRows(r.Visit),
		Printed: r.Printed.Format("2006-01-02 15:04"), Designs: clean(r.Survey.CablesFile), Cautions: r.Cautions,
		Signers: []string{"Surveyed by", "Assessed by", "Reviewed by"}}
	for i := range r.Cables {
		p.Cables = append(p.Cables, viewOf(i, &r.Cables[i]))
	}
	for i := range r.Continuous {
		p.Joined = append(p.Joined, continuousViewOf(&r.Continuous[i]))
	}
	p.Urgent = slices.Clone(p.Cables)
	slices.SortStableFunc(p.Urgent, func(a, b cableView) int { return urgency[a.Verdict] - urgency[b.Verdict] })
	p.Tally = tally(r.Cables)
	for _, n := range r.Survey.Notices {
		p.Notices = append(p.Notices, noticeText(n))
	}
	for _, f := range r.Survey.Files {
		p.Files = append(p.Files, fileViewOf(f))
	}
	return p
}

// together keeps numbers and their units on one line.
func together(s string) string {
	list := words(s)
	for i, w := range list {
		list[i] = strings.ReplaceAll(w, " ", "\u00a0")
	}
	return strings.Join(list, " ")
}

func viewOf(i int, a *tension.Assessment) cableView {
	id := fmt.Sprintf("c%d", i+1)
	v := cableView{ID: id, Name: clean(name(a)), Verdict: string(a.Verdict), Class: strings.ReplaceAll(string(a.Verdict), " ", "-"),
		Owner: together(ownerLine(a)), Sure: together(howSure(a)), Reason: together(cleanSentence(a.Reason)), Next: together(cleanSentence(a.NextStep)), Groups: groups(a)}
	if v.Grid = readings(a); v.Grid != nil {
		for _, r := range v.Grid.Rows {
			for i := range r.Cells {
				r.Cells[i] = together(r.Cells[i])
			}
		}
	}
	for _, g := range v.Groups {
		for i := range g.Rows {
			g.Rows[i].Value = together(cleanSentence(g.Rows[i].Value))
		}
	}
	for _, f := range sorted(a.Findings) {
		f.Text = together(cleanSentence(f.Text))
		if f.Level == tension.Note {
			v.Notes = append(v.Notes, f)
		} else {
			v.Heavy = append(v.Heavy, f)
		}
	}
	if a.Drawing.To > a.Drawing.From {
		v.drawings = drawingsOf(a)
		v.Scale, v.Shape, v.Below, v.Res = v.drawings.scale.markup(id+"s"), v.drawings.shape.markup(id+"f"), v.drawings.below.markup(id+"b"), v.drawings.residuals.markup(id+"r")
	}
	for _, b := range a.Budget {
		b.Input = clean(b.Input)
		share := fmt.Sprintf("%.0f\u00a0%%", 100*b.Share)
		if b.Share < 0.005 {
			share = "under 1\u00a0%"
		}
		v.Budget = append(v.Budget, budgetView{b, share, 100 * b.Share})
	}
	for _, s := range a.Fit.Rejected {
		point := s.ID
		if point == "" {
			point = fmt.Sprintf("line %d", s.Line)
		}
		v.Rejected = append(v.Rejected, row{clean(point), fmt.Sprintf("station %.2f m, %+.0f mm: %s", s.Station, 1000*s.Residual, s.Reason)})
	}
	return v
}

func fileViewOf(f SurveyFile) fileView {
	v := fileView{File: clean(f.File), SHA: f.SHA256}
	v.Text = fmt.Sprintf("%s, cells parted by %s, decimal %s, lengths in %s; %d points read, %d used", f.Encoding, f.Separator, f.Decimal, clean(f.LengthUnit), f.PointsRead, f.PointsUsed)
	var columns []string
	for _, c := range f.Columns {
		label := clean(c.Name)
		if label == "" {
			label = fmt.Sprint(c.Column)
		}
		columns = append(columns, label+" = "+c.Field)
	}
	v.Columns = strings.Join(columns, "; ")
	for _, c := range f.Codes {
		v.Codes = append(v.Codes, codeText(c))
	}
	for _, g := range f.Guesses {
		v.Guesses = append(v.Guesses, guessText(g))
	}
	for _, n := range f.Notices {
		v.Notices = append(v.Notices, noticeText(n))
	}
	c := f.Conditions
	for _, r := range []row{{"date", c.Date}, {"wind", c.Wind}, {"loads", string(c.Loads)}, {"instrument", c.Instrument}, {"crew", c.Crew}} {
		if r.Value != "" {
			v.Conditions = append(v.Conditions, row{r.Label, clean(r.Value)})
		}
	}
	if c.Temperature != nil {
		v.Conditions = append(v.Conditions, row{"cable temperature", degrees(*c.Temperature)})
	}
	if c.AccuracyH != nil && c.AccuracyV != nil {
		v.Conditions = append(v.Conditions, row{"accuracy of a point", fmt.Sprintf("%.3g mm horizontal, %.3g mm vertical", 1000**c.AccuracyH, 1000**c.AccuracyV)})
	}
	for _, l := range c.Listed {
		v.Conditions = append(v.Conditions, row{"load seen", together(listedText(l))})
	}
	for _, l := range c.Local {
		v.Conditions = append(v.Conditions, row{"load seen", together(localText(l))})
	}
	for _, n := range c.Notes {
		v.Conditions = append(v.Conditions, row{"note", clean(n)})
	}
	return v
}
