package fieldsheets

import (
	"fmt"
	"math"

	"tautbook/tension"
)

// reading is one line of the ratio scale.
type reading struct {
	class, assumption string
	ratio             tension.Quantity
}

// ratioScale shows today's tension over the expected one with its 95 % interval against the limits, and the other reading
// under it while that is open. Words and shapes say everything that shading does.
func ratioScale(a *tension.Assessment) *svg {
	e := a.Expected
	if e == nil || e.Ratio == nil {
		return nil
	}
	list := []reading{{"today", "if the load is as recorded", *e.Ratio}}
	if a.Rival != nil && !a.Rival.Excluded {
		list = append(list, reading{"other", "if the length is as designed", a.Rival.Ratio})
	}
	if d := a.Direct; d != nil && d.Ratio != nil && e.LoadRatio.Value == 1 { // with loads listed its ratio is to another tension
		list = append(list, reading{"read", "by the direct reading", *d.Ratio})
	}
	var s svg
	const left, right, top = 218.0, pictureWidth - 20.0, 30.0
	lo, hi := ratioRange(e, list)
	x := newAxis(lo, hi, left, right, 7)
	bottom := top + 44*float64(len(list)) + 6
	s.rect("inside", x.at(e.SlackBelow), top, x.at(e.OverloadAbove)-x.at(e.SlackBelow), bottom-top)
	s.line("zero", x.at(1), top, x.at(1), bottom)
	for _, l := range []float64{e.SlackBelow, e.OverloadAbove} {
		s.line("limit", x.at(l), top-6, x.at(l), bottom)
	}
	s.text("small", x.at(e.SlackBelow)-5, 20, "end", fmt.Sprintf("← slack below %.2f", e.SlackBelow))
	s.text("small", x.at(e.OverloadAbove)+5, 20, "start", fmt.Sprintf("overload above %.2f →", e.OverloadAbove))
	s.line("axis", left, bottom, right, bottom)
	for _, t := range x.ticks() {
		s.line("axis", t.At, bottom, t.At, bottom+4)
		s.text("tick", t.At, bottom+17, "middle", t.Label)
	}
	desc := fmt.Sprintf("Slack below %.2f, overload above %.2f.", e.SlackBelow, e.OverloadAbove)
	for i, r := range list {
		y := top + 25 + 44*float64(i)
		figure := tension.Plain.Figure(r.ratio)
		s.text("small", 0, y-5, "start", r.assumption)
		s.text("label", 0, y+12, "start", figure)
		r.draw(&s, x, y)
		desc += " " + r.assumption + ": " + figure + "."
	}
	s.text("tick", right, bottom+34, "end", "tension today / tension expected today")
	return s.describe("Tension of "+clean(name(a))+" today against the expected one", desc, pictureWidth, bottom+42)
}

// ratioRange covers the limits and the intervals, but not so much of a very wide one that the limits could not be seen.
func ratioRange(e *tension.Expected, list []reading) (lo, hi float64) {
	lo, hi = math.Min(0.7, e.SlackBelow-0.15), math.Max(1.3, e.OverloadAbove+0.15)
	for _, r := range list {
		v, u := r.ratio.Value, r.ratio.Expanded()
		lo = math.Min(lo, math.Max(v-u-0.05, v-math.Abs(v)/2))
		hi = math.Max(hi, math.Min(v+u+0.05, v+0.6*math.Abs(v)))
	}
	return math.Max(lo, 0), hi
}

// draw is the interval with end bars and a diamond at the value; an end outside the scale has an arrow instead of a bar.
func (r reading) draw(s *svg, x axis, y float64) {
	lo, hi := r.ratio.Value-r.ratio.Expanded(), r.ratio.Value+r.ratio.Expanded()
	s.line(r.class, x.at(math.Max(lo, x.lo)), y, x.at(math.Min(hi, x.hi)), y)
	end := func(v, at, out float64) {
		if v == at {
			s.line(r.class+" end", x.at(at), y-6, x.at(at), y+6)
			return
		}
		s.path(r.class+" end", [][2]float64{{x.at(at) - 7*out, y - 6}, {x.at(at), y}, {x.at(at) - 7*out, y + 6}})
	}
	end(lo, math.Max(lo, x.lo), -1)
	end(hi, math.Min(hi, x.hi), 1)
	if r.ratio.Value >= x.lo && r.ratio.Value <= x.hi {
		at := x.at(r.ratio.Value)
		s.polygon(r.class+"-mark", [][2]float64{{at, y - 7}, {at + 7, y}, {at, y + 7}, {at - 7, y}})
	}
}
