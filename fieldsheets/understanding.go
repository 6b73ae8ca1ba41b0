package fieldsheets

import (
	"bytes"
	"fmt"
	"io"
	"strings"

	"tautbook/survey"
	"tautbook/tension"
)

// WriteUnderstanding says how surveys were understood, and nothing that was computed from them: encoding, columns, units,
// codes and what they map to, guesses with the flag that changes each, and what looks odd.
func WriteUnderstanding(w io.Writer, files []SurveyFile, spans []SpanCount, o TextOptions) error {
	p := newTextPrinter(o)
	for _, f := range files {
		p.file(f)
		p.conditions(f)
		for _, s := range spans {
			if s.File == f.File {
				p.wrapped("  span     ", s.String())
			}
		}
	}
	_, err := w.Write(bytes.TrimLeft(p.out.Bytes(), "\n"))
	return err
}

// SpanCount is what a file holds of one span, for WriteUnderstanding.
type SpanCount struct {
	File, Cable, Span string
	Points            int
	A, B              bool
	Extent            [3]float64 // of easting, northing, elevation, m
	Design            bool       // the cables file has it
}

// SpanCounts lists the spans of a survey.
func SpanCounts(sv *survey.Survey, designs []survey.Design) (out []SpanCount) {
	index := survey.IndexDesigns(designs)
	for _, sp := range sv.Spans {
		c := SpanCount{File: sv.File, Cable: sp.Cable, Span: sp.Span, Points: len(sp.Points), A: sp.A != nil, B: sp.B != nil,
			Design: index.Of(sv.Conditions.Structure, sp.Cable, sp.Span) != nil}
		lo, hi := [3]float64{}, [3]float64{}
		for i, q := range sp.Points {
			for k, v := range [3]float64{q.E, q.N, q.Z} {
				if i == 0 {
					lo[k], hi[k] = v, v
				}
				lo[k], hi[k] = min(lo[k], v), max(hi[k], v)
			}
		}
		for k := range c.Extent {
			c.Extent[k] = hi[k] - lo[k]
		}
		out = append(out, c)
	}
	return out
}

// String is one line about the span.
func (s SpanCount) String() string {
	supports := "no supports surveyed"
	switch {
	case s.A && s.B:
		supports = "supports A and B"
	case s.A:
		supports = "support A only"
	case s.B:
		supports = "support B only"
	}
	design := "not in the cables file"
	if s.Design {
		design = "in the cables file"
	}
	label := s.Cable
	if s.Span != "" {
		label += "/" + s.Span
	}
	return fmt.Sprintf("%s: %d points over %.1f m east, %.1f m north, %.1f m in height; %s; %s", clean(label), s.Points, s.Extent[0], s.Extent[1], s.Extent[2], supports, design)
}

// understanding is the same for the end of a summary.
func (p *textPrinter) understanding(r Report) {
	p.title("How the survey was understood")
	if r.Survey.CablesFile != "" {
		p.wrapped("", "Design values: "+clean(r.Survey.CablesFile))
	}
	for _, n := range r.Survey.Notices {
		p.wrapped("  odd      ", noticeText(n))
	}
	for _, f := range r.Survey.Files {
		p.file(f)
	}
	p.line("\nMade by %s %s, printed %s.", r.Tool.Name, r.Tool.Version, r.Printed.Format("2006-01-02 15:04"))
}

func (p *textPrinter) file(f SurveyFile) {
	p.line("")
	p.wrapped("", clean(f.File))
	p.line("  SHA-256  %s", f.SHA256)
	used := ""
	if f.PointsUsed > 0 {
		used = fmt.Sprintf(", %d used", f.PointsUsed)
	}
	p.wrapped("  text     ", fmt.Sprintf("%s, cells parted by %s, decimal %s; lengths in %s; %d points read%s", f.Encoding, f.Separator, f.Decimal, f.LengthUnit, f.PointsRead, used))
	var columns []string
	for _, c := range f.Columns {
		label := clean(c.Name)
		if label == "" {
			label = fmt.Sprint(c.Column)
		}
		columns = append(columns, label+" = "+c.Field)
	}
	p.wrapped("  columns  ", strings.Join(columns, "; "))
	for _, t := range f.Reduction {
		p.wrapped("  reduced  ", cleanSentence(t))
	}
	for _, c := range f.Codes {
		p.wrapped("  code     ", codeText(c))
	}
	for _, g := range f.Guesses {
		p.wrapped("  guessed  ", guessText(g))
	}
	for _, n := range f.Notices {
		p.wrapped("  odd      ", noticeText(n))
	}
}

func codeText(c survey.CodeUse) string {
	code := clean(c.Code)
	if code == "" {
		code = "(none)"
	}
	target := string(c.Role)
	if c.Cable != "" {
		target += " of "
		if c.Role == survey.OnCable {
			target = ""
		}
		target += clean(c.Cable)
		if c.Span != "" {
			target += "/" + clean(c.Span)
		}
	}
	points := "points"
	if c.Points == 1 {
		points = "point"
	}
	return fmt.Sprintf("%s -> %s, %d %s (%s)", code, target, c.Points, points, c.How)
}

func guessText(g survey.Guess) string {
	return fmt.Sprintf("%s: %s, because %s; set it by %s", g.What, clean(g.Taken), cleanSentence(g.Why), g.SetBy)
}

func noticeText(n survey.Notice) string {
	if n.Line > 0 {
		return fmt.Sprintf("line %d: %s", n.Line, cleanSentence(n.Text))
	}
	return cleanSentence(n.Text)
}

func (p *textPrinter) conditions(f SurveyFile) {
	c := f.Conditions
	temperature := "not given"
	if c.Temperature != nil {
		temperature = degrees(*c.Temperature)
	}
	accuracy := "not given: it will be estimated from the residuals"
	for _, col := range f.Columns {
		if strings.HasPrefix(col.Field, "u_") {
			accuracy = "with each point"
		}
	}
	if len(f.Reduction) > 0 {
		accuracy = "with each reading, see reduced"
	}
	if c.AccuracyH != nil && c.AccuracyV != nil {
		accuracy = fmt.Sprintf("%.3g mm horizontal, %.3g mm vertical", 1000**c.AccuracyH, 1000**c.AccuracyV)
	}
	p.wrapped("  visit    ", fmt.Sprintf("structure %s; date %s; cable temperature %s; loads %s; accuracy %s", orWords(c.Structure), orWords(c.Date), temperature, c.Loads, accuracy))
	for _, l := range c.Listed {
		p.wrapped("  load     ", listedText(l))
	}
	for _, l := range c.Local {
		p.wrapped("  load     ", localText(l))
	}
	for _, r := range c.Readings {
		p.wrapped("  reading  ", readingText(r))
	}
	for _, n := range c.Notes {
		p.wrapped("  note     ", clean(n))
	}
}

// listedText is one load of the record, with the cable that it hangs on.
func listedText(l RecordedLoad) string {
	return fmt.Sprintf("%s on %s, %s: %s", tension.NewtonPerMetre.Figure(l.Load), onCable(l.Cable, l.Span), l.Spread, orWords(l.What))
}

// localText is one load at one place, with the cable that it hangs on.
func localText(l RecordedLocal) string {
	size := "size not known"
	if l.P != nil {
		size = tension.ForceScale(l.P.Value).Figure(*l.P)
	}
	return fmt.Sprintf("%s on %s, %.3f m from A: %s", size, onCable(l.Cable, l.Span), l.Station, orWords(l.What))
}

// readingText is one reading, with the cable that it is of.
func readingText(r RecordedReading) string {
	scale := tension.Piece{Unit: r.Unit, Given: r.Value}.Scale()
	return fmt.Sprintf("%s of %s: %s, by %s", r.What, onCable(r.Cable, r.Span), scale.Figure(r.Value), orWords(r.How))
}

func onCable(cable, span string) string {
	if cable == "" {
		return "every cable"
	}
	return clean(cable) + prefixed("/", clean(span))
}

func orWords(s string) string {
	if s == "" {
		return "not given"
	}
	return clean(s)
}

func degrees(q survey.Quantity) string { return fmt.Sprintf("%.4g °C, u %.2g °C", q.Value, q.U) }
