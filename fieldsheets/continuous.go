package fieldsheets

import (
	"fmt"
	"strings"

	"tautbook/survey"
	"tautbook/tension"
)

// continuousTitle heads what is said of a cable over its intermediate supports.
func continuousTitle(c *tension.Continuous) string {
	return clean(c.Cable) + " over its supports"
}

// continuousLead says in one sentence what the spans say together.
func continuousLead(c *tension.Continuous) string {
	if c.ChiSquare == nil {
		return "No support is filed as one over which the cable may run: the spans were not brought together."
	}
	lead := fmt.Sprintf("Where the cable may run over a support, the tensions of the spans were held against each other: a difference as large as the measured one has probability %s by chance. ", tension.Probability(*c.P))
	for _, s := range c.Supports {
		if s.Stuck {
			return lead + "They do not agree."
		}
	}
	return lead + "They agree; the joint tension is the sharper one."
}

// continuousGroups are the figures of one cable over its supports.
func continuousGroups(c *tension.Continuous) []group {
	along := group{Title: "Horizontal tension along the cable"}
	for _, s := range c.Spans {
		value := force(s.Separate)
		if s.Joint != nil {
			value += "; with its neighbours " + force(*s.Joint)
		}
		if s.Reversed {
			value += " (its A lies on the far side)"
		}
		along.Rows = append(along.Rows, row{"Span " + clean(s.Span), value})
	}
	out := []group{along}
	for i := range c.Supports {
		out = append(out, supportGroup(&c.Supports[i]))
	}
	return out
}

func supportGroup(s *tension.SupportForce) group {
	from, to := clean(s.From), clean(s.To)
	g := group{Title: fmt.Sprintf("Support between spans %s and %s", from, to)}
	add := func(label, format string, args ...any) {
		g.Rows = append(g.Rows, row{label, fmt.Sprintf(format, args...)})
	}
	over := map[survey.SupportBetween]string{"": "not on file: nothing assumed", survey.BetweenFixed: "fixed", survey.BetweenEqualTension: "runs free: equal tension",
		survey.BetweenEqualHorizontal: "rolls or swings: equal horizontal tension"}[s.Over]
	if s.Off != nil {
		over += fmt.Sprintf("; measured %.1f standard uncertainties apart", max(*s.Off, -*s.Off))
	}
	if s.Stuck {
		over += ": STUCK"
	}
	add("The cable there", "%s", over)
	add("Tension on either side", "%s (%s), %s (%s)", force(s.TensionFrom), from, force(s.TensionTo), to)
	add("Difference of tension", "%s", signed(s.TensionStep))
	add("Difference of H", "%s", signed(s.HorizontalStep))
	if f := s.FrictionNeeded; f != nil {
		add("Friction that would hold it", "coefficient %s over a bend of %s", tension.Plain.Figure(tension.Quantity{Value: max(f.Value, -f.Value), U: f.U}), tension.Degree.Figure(s.Bend))
	}
	add("Force on the support", "%s, %s from straight down", force(s.Resultant), tension.Degree.Figure(s.ResultantFromDown))
	add("of it down", "%s", signed(s.Down))
	add("along the cable", "%s, positive toward span %s", signed(s.Along), to)
	add("to the left of that", "%s", signed(s.Left))
	return g
}

// signed is a force in the unit that suits its uncertainty too, so that a difference near zero reads well.
func signed(q tension.Quantity) string {
	return tension.ForceScale(max(q.Value, -q.Value, q.Expanded())).Figure(q)
}

// continuous prints what the spans of one cable say together.
func (p *textPrinter) continuous(c *tension.Continuous) {
	p.title(continuousTitle(c))
	p.wrapped("", continuousLead(c))
	for _, f := range sorted(c.Findings) {
		p.wrapped(fmt.Sprintf("%-6s", strings.ToUpper(string(f.Level))), cleanSentence(f.Text))
	}
	p.groups(continuousGroups(c))
}

func (p *textPrinter) groups(list []group) {
	for _, g := range list {
		p.line("\n  %s", g.Title)
		for _, r := range g.Rows {
			p.wrapped(fmt.Sprintf("    %-28s ", r.Label), cleanSentence(r.Value))
		}
	}
}

// continuousView is one cable over its supports as the page shows it.
type continuousView struct {
	Title, Lead string
	Findings    []tension.Finding
	Groups      []group
}

func continuousViewOf(c *tension.Continuous) continuousView {
	v := continuousView{Title: continuousTitle(c), Lead: together(continuousLead(c)), Groups: continuousGroups(c)}
	for _, g := range v.Groups {
		for i := range g.Rows {
			g.Rows[i].Value = together(cleanSentence(g.Rows[i].Value))
		}
	}
	for _, f := range sorted(c.Findings) {
		f.Text = together(cleanSentence(f.Text))
		v.Findings = append(v.Findings, f)
	}
	return v
}
