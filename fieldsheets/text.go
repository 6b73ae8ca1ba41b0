package fieldsheets

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"
	"unicode/utf8"

	"tautbook/tension"
)

// TextOptions steer WriteText.
type TextOptions struct {
	Width int  // columns, 0 = 80; at least 60
	Color bool // use escape codes; the words alone say everything
}

// WriteText prints the report for a terminal: the verdicts of all cables first, then one block a cable, then how the survey
// was understood and the cautions. No line is longer than the width, except for an unbreakable name.
func WriteText(w io.Writer, r Report, o TextOptions) error {
	p := &textPrinter{width: max(o.Width, 60), color: o.Color}
	if o.Width == 0 {
		p.width = 80
	}
	p.heading(r)
	p.overview(r)
	for i := range r.Cables {
		p.cable(&r.Cables[i])
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

func (p *textPrinter) line(format string, args ...any) {
	fmt.Fprintf(&p.out, format, args...)
	p.out.WriteByte('\n')
}

// title is an underlined heading after a blank line.
func (p *textPrinter) title(s string) {
	p.line("\n%s", p.strong(s))
	p.line("%s", strings.Repeat("-", min(utf8.RuneCountInString(s), p.width)))
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
	indent := strings.Repeat(" ", utf8.RuneCountInString(lead))
	line := lead
	empty := true
	for _, word := range words(text) {
		if !empty && utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > p.width {
			p.line("%s", line)
			line, empty = indent, true
		}
		if !empty {
			line += " "
		}
		line += word
		empty = false
	}
	p.line("%s", strings.TrimRight(line, " "))
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
	p.line("%s", p.strong("CONDITION SUMMARY"+prefixed(": ", clean(v.Structure))))
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

// overview is one line a cable: verdict, tension, expected, ratio.
func (p *textPrinter) overview(r Report) {
	p.line("")
	wide := 10
	for i := range r.Cables {
		wide = max(wide, min(utf8.RuneCountInString(clean(name(&r.Cables[i]))), 22))
	}
	p.line("%-*s  %-11s  %-18s  %-18s  %s", wide, "cable", "verdict", "H today", "H expected", "ratio")
	for i := range r.Cables {
		a := &r.Cables[i]
		h, e, ratio := "?", "-", "-"
		switch {
		case a.HorizontalTension != nil:
			h = force(*a.HorizontalTension)
		case a.HorizontalTensionAtLeast != nil:
			h = "over " + forceExact(*a.HorizontalTensionAtLeast)
		}
		if a.Expected != nil {
			e = force(a.Expected.HorizontalTension)
			ratio = or(a.Expected.Ratio, func(q tension.Quantity) string { return fmt.Sprintf("%.2f", q.Value) }, "?")
		}
		label := []rune(clean(name(a)))
		if len(label) > wide {
			label = append(label[:wide-1], '…')
		}
		p.line("%-*s  %s  %-18s  %-18s  %s", wide, string(label), p.verdict(a.Verdict, 11), h, e, ratio)
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
	for _, g := range groups(a) {
		p.line("\n  %s", g.Title)
		for _, r := range g.Rows {
			p.wrapped(fmt.Sprintf("    %-28s ", r.Label), cleanSentence(r.Value))
		}
	}
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

// sorted are the findings with the heaviest first.
func sorted(findings []tension.Finding) []tension.Finding {
	rank := map[tension.Level]int{tension.Act: 0, tension.Look: 1, tension.Note: 2}
	out := slices.Clone(findings)
	slices.SortStableFunc(out, func(a, b tension.Finding) int { return rank[a.Level] - rank[b.Level] })
	return out
}

func (p *textPrinter) budget(a *tension.Assessment) {
	if len(a.Budget) == 0 {
		return
	}
	p.line("\n  What the uncertainty comes from (standard uncertainties)")
	p.line("    %-32s %-16s %-16s %s", "input", "value", "u", "share")
	for _, b := range a.Budget {
		label := []rune(clean(b.Input))
		if len(label) > 32 {
			label = append(label[:31], '…')
		}
		p.line("    %-32s %-16s %-16s %3.0f %%", string(label), b.Value, b.U, 100*b.Share)
	}
}
