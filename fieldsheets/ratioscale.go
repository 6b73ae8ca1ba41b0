package fieldsheets

import (
	"fmt"
	"html/template"
	"math"

	"tautbook/tension"
)

// ratioScale shows today's tension over the expected one with its 95 % interval against the limits, and the other reading
// beside it while that is open. Words and shapes say everything that shading does.
func ratioScale(id string, a *tension.Assessment) template.HTML {
	e := a.Expected
	if e == nil || e.Ratio == nil {
		return ""
	}
	type mark struct {
		class, label string
		q            tension.Quantity
	}
	marks := []mark{{"today", "if the load is as recorded", *e.Ratio}}
	if a.Rival != nil && !a.Rival.Excluded {
		marks = append(marks, mark{"other", "if the length is as designed", a.Rival.Ratio})
	}
	lo, hi := math.Min(0.7, e.SlackBelow-0.15), math.Max(1.3, e.OverloadAbove+0.15)
	for _, m := range marks {
		lo = math.Min(lo, math.Max(m.q.Value-m.q.Expanded()-0.05, m.q.Value*0.5))
		hi = math.Max(hi, math.Min(m.q.Value+m.q.Expanded()+0.05, m.q.Value*1.6))
	}
	lo = math.Max(lo, 0)
	var s svg
	const left, right = 20.0, pictureWidth - 20.0
	bottom := 58 + 36*float64(len(marks))
	x := newAxis(lo, hi, left, right, 8)
	s.el(`<rect class="inside" x="%.1f" y="30" width="%.1f" height="%.1f"/>`, x.at(e.SlackBelow), x.at(e.OverloadAbove)-x.at(e.SlackBelow), bottom-30)
	for _, l := range []float64{e.SlackBelow, e.OverloadAbove} {
		s.line("limit", x.at(l), 24, x.at(l), bottom)
	}
	s.line("zero", x.at(1), 30, x.at(1), bottom)
	s.text("small", x.at(e.SlackBelow)-5, 22, "end", fmt.Sprintf("slack below %.2f", e.SlackBelow))
	s.text("small", x.at(e.OverloadAbove)+5, 22, "start", fmt.Sprintf("overload above %.2f", e.OverloadAbove))
	s.line("axis", left, bottom, right, bottom)
	for _, t := range x.ticks() {
		s.line("axis", t.At, bottom, t.At, bottom+4)
		s.text("tick", t.At, bottom+17, "middle", t.Label)
	}
	desc := ""
	for i, m := range marks {
		y := 60 + 36*float64(i)
		from, to := math.Max(x.at(m.q.Value-m.q.Expanded()), left), math.Min(x.at(m.q.Value+m.q.Expanded()), right)
		s.line(m.class, from, y, to, y)
		s.line(m.class, from, y-5, from, y+5)
		s.line(m.class, to, y-5, to, y+5)
		c := x.at(m.q.Value)
		s.el(`<path class="%s-mark" d="M%.1f %.1fl7 7l-7 7l-7 -7Z"/>`, m.class, c, y-7)
		label := m.label + ": " + tension.Plain.Figure(m.q)
		anchor, tx := "start", math.Min(from, c-8)
		if tx > (left+right)/2 {
			anchor, tx = "end", math.Max(to, c+8)
		}
		s.text("small halo", tx, y-11, anchor, label)
		desc += label + ". "
	}
	s.text("tick", right, bottom+32, "end", "tension today / tension expected today")
	return s.picture(id, "Tension today against the expected one", desc, pictureWidth, bottom+40)
}
