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
	Cables   []cableView
	Urgent   []cableView // the same, most urgent first
	Files    []fileView
	Notices  []string
	Printed  string
	Cautions []string
}

// cableView is one cable as the sheet shows it.
type cableView struct {
	ID, Name, Verdict, Class string
	Owner                    string // for the owner: one line
	Reason, Next             string
	Heavy, Notes             []tension.Finding
	Groups                   []group
	Scale, Shape, Below, Res template.HTML
	Budget                   []budgetView
	Rejected                 []row
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
	p := page{Title: "Condition summary" + prefixed(": ", clean(r.Visit.Structure)), Report: r, Style: template.CSS(summaryStyle), Visit: visitRows(r.Visit),
		Printed: r.Printed.Format("2006-01-02 15:04"), Cautions: r.Cautions}
	for i := range r.Cables {
		p.Cables = append(p.Cables, viewOf(i, &r.Cables[i]))
	}
	p.Urgent = slices.Clone(p.Cables)
	slices.SortStableFunc(p.Urgent, func(a, b cableView) int { return urgency[a.Verdict] - urgency[b.Verdict] })
	for _, n := range r.Survey.Notices {
		p.Notices = append(p.Notices, noticeText(n))
	}
	for _, f := range r.Survey.Files {
		p.Files = append(p.Files, fileViewOf(f))
	}
	var out bytes.Buffer
	if err := summaryPage().Execute(&out, p); err != nil {
		return fmt.Errorf("cannot print the summary: %w", err)
	}
	_, err := w.Write(out.Bytes())
	return err
}

// urgency orders verdicts for the first page.
var urgency = map[string]int{string(tension.Overload): 0, string(tension.Slack): 1, string(tension.OffDesign): 2, string(tension.Undecided): 3,
	string(tension.NoDesign): 4, string(tension.AsDesigned): 5}

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
		Owner: together(ownerLine(a)), Reason: together(cleanSentence(a.Reason)), Next: together(cleanSentence(a.NextStep)), Groups: groups(a)}
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
		v.Scale = ratioScale(id+"s", a)
		v.Shape = trueShape(id+"f", a)
		v.Below = belowChord(id+"b", a)
		v.Res = residuals(id+"r", a)
	}
	for _, b := range a.Budget {
		b.Input = clean(b.Input)
		v.Budget = append(v.Budget, budgetView{b, fmt.Sprintf("%.0f %%", 100*b.Share), 100 * b.Share})
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

// cleanSentence is clean without the cut: findings are sentences of this program that may quote text from a file.
func cleanSentence(s string) string {
	var out []string
	for _, w := range strings.Fields(s) {
		out = append(out, clean(w))
	}
	return strings.Join(out, " ")
}

// ownerLine says the state of a cable to somebody who is no engineer.
func ownerLine(a *tension.Assessment) string {
	percent := func(q *tension.Quantity) string { return fmt.Sprintf("%.0f %%", 100*q.Value) }
	e := a.Expected
	switch a.Verdict {
	case tension.Slack:
		if e != nil && e.Ratio != nil {
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It carries less tension than it should have today."
	case tension.Overload:
		switch {
		case a.Strength != nil && a.Strength.POver >= 0.95:
			return "Its tension is above what its strength permits."
		case e != nil && e.LoadRatio.Value > e.OverloadAbove:
			return "It carries about " + percent(&e.LoadRatio) + " of the load that it was designed for."
		case e != nil && e.Ratio != nil && e.Ratio.Value > 1:
			return "It carries about " + percent(e.Ratio) + " of the tension that it should have today."
		}
		return "It may carry more than its strength permits; the loads have not been looked at."
	case tension.OffDesign:
		return "It does not hang as designed. Either it has become longer or shorter, or something hangs on it that is not on file: the loads must be looked at."
	case tension.AsDesigned:
		if a.Load.Record == "not checked" {
			return "It hangs as designed, if nothing hangs on it that is not on file."
		}
		return "It hangs as designed."
	case tension.Undecided:
		return "The survey is too coarse to say."
	}
	return "There is no design to hold it against."
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
	for _, n := range c.Notes {
		v.Conditions = append(v.Conditions, row{"note", clean(n)})
	}
	return v
}
