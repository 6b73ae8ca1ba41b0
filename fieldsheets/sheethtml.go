package fieldsheets

import (
	"bytes"
	_ "embed"
	"fmt"
	"html/template"
	"io"
	"sync"
)

//go:embed templates/sheet.html
var sheetTemplate string

//go:embed templates/sheet.css
var sheetStyle string

var sheetPage = sync.OnceValue(func() *template.Template {
	return template.Must(template.New("sheet").Parse(sheetTemplate))
})

// sheetView is a sheet with its pictures and style.
type sheetView struct {
	Sheet
	Style    template.CSS
	Parts    []sectionView
	Cautions []string
	When     string
}

type sectionView struct {
	Section
	ID    string
	Drawn []drawnView
	Grid  *tableView
}

type drawnView struct {
	Markup  template.HTML
	Caption string
}

type tableView struct {
	*Table
	Rows []rowView
}

type rowView struct {
	Strong bool
	Cells  []cellView
}

type cellView struct {
	Column
	Text string
}

// WriteSheetHTML prints a sheet as one HTML file without scripts and without anything to fetch. It prints on A4 and Letter.
func WriteSheetHTML(w io.Writer, s Sheet) error {
	v := sheetView{Sheet: s.cleaned(), Style: template.CSS(summaryStyle + sheetStyle), Cautions: cautions, When: s.Printed.Format("2006-01-02 15:04")}
	for i, p := range v.Sheet.Sections {
		part := sectionView{Section: p, ID: fmt.Sprintf("s%d", i+1)}
		for k, d := range p.Pictures {
			if d.drawing != nil {
				part.Drawn = append(part.Drawn, drawnView{d.drawing.markup(fmt.Sprintf("s%dp%d", i+1, k+1)), d.Caption})
			}
		}
		if p.Table != nil {
			part.Grid = viewOfTable(p.Table)
		}
		v.Parts = append(v.Parts, part)
	}
	var out bytes.Buffer
	if err := sheetPage().Execute(&out, v); err != nil {
		return fmt.Errorf("cannot print the sheet: %w", err)
	}
	_, err := w.Write(out.Bytes())
	return err
}

func viewOfTable(t *Table) *tableView {
	v := &tableView{Table: t}
	for k, r := range t.Body {
		line := rowView{Strong: t.strong(k)}
		for i, c := range t.Columns {
			line.Cells = append(line.Cells, cellView{c, r[i]})
		}
		v.Rows = append(v.Rows, line)
	}
	return v
}

// cleaned is the sheet with every text safe to show and with numbers and units kept on one line.
func (s Sheet) cleaned() Sheet {
	tidy := func(text string) string { return together(cleanSentence(text)) }
	all := func(list []string) (out []string) {
		for _, t := range list {
			out = append(out, tidy(t))
		}
		return out
	}
	facts := func(list []Fact) (out []Fact) {
		for _, f := range list {
			out = append(out, Fact{tidy(f.Label), tidy(f.Value)})
		}
		return out
	}
	s.Title, s.Facts, s.Lead = cleanSentence(s.Title), facts(s.Facts), all(s.Lead)
	parts := s.Sections
	s.Sections = nil
	for _, p := range parts {
		p.Title, p.Text, p.Facts, p.Ticks, p.Boxes = tidy(p.Title), all(p.Text), facts(p.Facts), all(p.Ticks), all(p.Boxes)
		p.Findings = sorted(p.Findings)
		for i := range p.Findings {
			p.Findings[i].Text = tidy(p.Findings[i].Text)
		}
		if p.Table != nil {
			t := *p.Table
			t.Caption, t.Body = tidy(t.Caption), nil
			for _, r := range p.Table.Body {
				t.Body = append(t.Body, all(r))
			}
			p.Table = &t
		}
		s.Sections = append(s.Sections, p)
	}
	return s
}
