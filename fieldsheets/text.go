package fieldsheets

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"

	"tautbook/tension"
)

// TextOptions steer WriteText.
type TextOptions struct {
	Width int  // columns, at least 80: the tables have fixed columns; 0 = 80
	Color bool // use escape codes; the words alone say everything
}

// WriteText prints the report for a terminal: the verdicts of all cables first, then one block a cable, then how the survey
// was understood and the cautions. No line is longer than the width, except for an unbreakable name.
func WriteText(w io.Writer, r Report, o TextOptions) error {
	if err := finite(r); err != nil {
		return err
	}
	p := newTextPrinter(o)
	p.heading(r)
	p.overview(r)
	for i := range r.Cables {
		p.cable(&r.Cables[i])
	}
	for i := range r.Continuous {
		p.continuous(&r.Continuous[i])
	}
	p.understanding(r)
	p.title("Cautions")
	for _, c := range r.Cautions {
		p.wrapped("- ", c)
	}
	_, err := w.Write(p.out.Bytes())
	return err
}

type textPrinter struct {
	out   bytes.Buffer
	width int
	color bool
}

func newTextPrinter(o TextOptions) *textPrinter {
	return &textPrinter{width: max(o.Width, 80), color: o.Color}
}

func (p *textPrinter) line(format string, args ...any) {
	fmt.Fprintf(&p.out, format, args...)
	p.out.WriteByte('\n')
}

// title is an underlined heading after a blank line.
func (p *textPrinter) title(s string) {
	p.line("")
	wide := 0
	for _, l := range p.broken("", s) {
		p.line("%s", p.strong(l))
		wide = max(wide, columns(l))
	}
	p.line("%s", strings.Repeat("-", min(wide, p.width)))
}

func (p *textPrinter) strong(s string) string {
	if p.color {
		return "\x1b[1m" + s + "\x1b[0m"
	}
	return s
}

// verdictColors are a help for the eye only.
var verdictColors = map[tension.Verdict]string{tension.Overload: "31", tension.Slack: "31", tension.OffDesign: "35", tension.Undecided: "33", tension.AsDesigned: "32"}

func (p *textPrinter) verdict(v tension.Verdict, width int) string {
	s := fmt.Sprintf("%-*s", width, strings.ToUpper(string(v)))
	if c := verdictColors[v]; p.color && c != "" {
		return "\x1b[1;" + c + "m" + s + "\x1b[0m"
	}
	return s
}

// wrapped prints text after a lead, broken between words; later lines are indented by the lead's width.
func (p *textPrinter) wrapped(lead, text string) {
	for _, l := range p.broken(lead, text) {
		p.line("%s", l)
	}
}

func (p *textPrinter) broken(lead, text string) (out []string) {
	indent := strings.Repeat(" ", columns(lead))
	line := lead
	empty := true
	for _, word := range words(text) {
		if !empty && columns(line)+1+columns(word) > p.width {
			out = append(out, line)
			line, empty = indent, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	return append(out, strings.TrimRight(line, " "))
}

// words parts a text at blanks but keeps a number and its unit or uncertainty together.
func words(text string) []string {
	var out []string
	for _, w := range strings.Fields(text) {
		if n := len(out); n > 0 && (w == "±" || strings.HasSuffix(out[n-1], "±") || (isUnit(w) && endsInDigit(out[n-1]))) {
			out[n-1] += " " + w
			continue
		}
		out = append(out, w)
	}
	return out
}

func isUnit(w string) bool {
	return slices.Contains([]string{"N", "kN", "MN", "m", "mm", "N/m", "°C", "%"}, strings.TrimRight(w, ",.;:)"))
}

func endsInDigit(s string) bool { return s != "" && s[len(s)-1] >= '0' && s[len(s)-1] <= '9' }

func (p *textPrinter) heading(r Report) {
	v := r.Visit
	for _, l := range p.broken("", "CONDITION SUMMARY"+prefixed(": ", clean(v.Structure))) {
		p.line("%s", p.strong(l))
	}
	parts := []string{}
	for _, s := range visitRows(v) {
		parts = append(parts, s.Label+" "+s.Value)
	}
	if len(parts) > 0 {
		p.wrapped("", strings.Join(parts, "; "))
	}
	p.wrapped("", "Values are given with U, k = 2 (about 95 %). H is the horizontal tension.")
}

func prefixed(lead, s string) string {
	if s == "" {
		return ""
	}
	return lead + s
}

// widestName is the room for a cable's name in the overview; a longer one has a line of its own.
const widestName = 16

// overview is one line a cable: verdict, tension, expected, ratio. Each column of forces has one unit, so that the eye can
// compare down the column.
func (p *textPrinter) overview(r Report) {
	p.line("")
	if len(r.Cables) == 0 {
		p.line("No cable was assessed.")
		return
	}
	wide := 10
	var today, expected []*tension.Quantity
	for i := range r.Cables {
		a := &r.Cables[i]
		if n := columns(clean(name(a))); n <= widestName {
			wide = max(wide, n)
		}
		today = append(today, a.HorizontalTension)
		if v := a.HorizontalTensionAtLeast; v != nil {
			today = append(today, &tension.Quantity{Value: *v})
		}
		if a.Expected != nil {
			expected = append(expected, &a.Expected.HorizontalTension)
		}
	}
	hToday, hExpected := forceColumn(today...), forceColumn(expected...)
	p.line("%s  %-11s  %-18s  %-18s  %s", padded("cable", wide), "verdict", "H today", "H expected", "ratio")
	for i := range r.Cables {
		a := &r.Cables[i]
		h, e, ratio := or(a.HorizontalTension, hToday, notKnown), "no design", "no design"
		if v := a.HorizontalTensionAtLeast; v != nil && a.HorizontalTension == nil {
			h = "over " + hToday(tension.Quantity{Value: *v})
		}
		if a.Expected != nil {
			e = hExpected(a.Expected.HorizontalTension)
			ratio = or(a.Expected.Ratio, func(q tension.Quantity) string { return fmt.Sprintf("%.2f", q.Value) }, "too flat")
		}
		label := clean(name(a))
		if columns(label) > wide {
			p.wrapped("", label)
			label = ""
		}
		p.line("%s  %s  %-18s  %-18s  %s", padded(label, wide), p.verdict(a.Verdict, 11), h, e, ratio)
		if d := a.Direct; d != nil {
			text := force(d.HorizontalTension)
			if d.Ratio != nil {
				text += fmt.Sprintf(", ratio %.2f", d.Ratio.Value)
			}
			p.line("%s  %-11s  %s", padded("", wide), "read on it:", text)
		}
	}
}

func (p *textPrinter) cable(a *tension.Assessment) {
	p.title(clean(name(a)) + ": " + strings.ToUpper(string(a.Verdict)))
	p.wrapped("", cleanSentence(a.Reason))
	p.wrapped("Next: ", cleanSentence(a.NextStep))
	for _, f := range sorted(a.Findings) {
		if f.Level != tension.Note {
			p.wrapped(fmt.Sprintf("%-6s", strings.ToUpper(string(f.Level))), cleanSentence(f.Text))
		}
	}
	p.grid(readings(a))
	p.groups(groups(a))
	p.budget(a)
	first := true
	for _, f := range a.Findings {
		if f.Level == tension.Note {
			if first {
				p.line("\n  Notes")
				first = false
			}
			p.wrapped("    - ", cleanSentence(f.Text))
		}
	}
}

func (p *textPrinter) grid(g *grid) {
	if g == nil {
		return
	}
	wide := (p.width - 4 - 17) / len(g.Columns)
	print := func(label string, cells []string) {
		l := "    " + padded(label, 17)
		for _, c := range cells {
			l += padded(c, wide-1) + " "
		}
		p.line("%s", strings.TrimRight(l, " "))
	}
	p.line("\n  %s", g.Title)
	print("", g.Columns)
	for _, r := range g.Rows {
		print(r.Label, r.Cells)
	}
}

// sorted are the findings with the heaviest first.
func sorted(findings []tension.Finding) []tension.Finding {
	rank := map[tension.Level]int{tension.Act: 0, tension.Look: 1, tension.Note: 2}
	out := slices.Clone(findings)
	slices.SortStableFunc(out, func(a, b tension.Finding) int { return rank[a.Level] - rank[b.Level] })
	return out
}

// budget lists the inputs that matter; those under a hundredth of the variance are one line.
func (p *textPrinter) budget(a *tension.Assessment) {
	if len(a.Budget) == 0 {
		return
	}
	p.line("\n  What the uncertainty comes from (standard uncertainties)")
	p.line("    %-32s %-16s %-14s %s", "input", "value", "u", "share")
	var small []string
	for i, b := range a.Budget {
		if i > 0 && b.Share < 0.005 {
			small = append(small, clean(b.Input))
			continue
		}
		lead, rest := "    "+padded(clean(b.Input), 32)+" ", fmt.Sprintf("%-16s %-14s %3.0f %%", b.Value, b.U, 100*b.Share)
		if columns(lead+rest) > p.width {
			p.wrapped("    ", clean(b.Input))
			lead = strings.Repeat(" ", 37)
		}
		p.line("%s%s", lead, rest)
	}
	if len(small) > 0 {
		p.wrapped("    ", "under 1 % each: "+strings.Join(small, "; "))
	}
}
