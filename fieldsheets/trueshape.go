package fieldsheets

import (
	"fmt"
	"math"
	"unicode/utf8"

	"tautbook/tension"
)

// trueShape draws the cable with heights and lengths to one scale, so that the support forces stand along the real end
// tangents; they are drawn to scale among themselves.
func trueShape(a *tension.Assessment) *svg {
	d := a.Drawing
	var s svg
	const margin, arrow = 130.0, 62.0
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range 101 {
		z := d.Curve.Z(d.From + (d.To-d.From)*float64(i)/100)
		lo, hi = math.Min(lo, z), math.Max(hi, z)
	}
	scale := math.Min((pictureWidth-2*margin)/(d.To-d.From), 300/math.Max(hi-lo, 1e-9))
	left := (pictureWidth - scale*(d.To-d.From)) / 2
	longest, top := 0.0, 14.0
	for _, r := range a.Reactions {
		longest = math.Max(longest, r.Tension.Value)
	}
	arrows := make([]supportForce, len(a.Reactions))
	for i, r := range a.Reactions {
		slope, side := d.Curve.Slope(r.Station), 1.0
		if i == 0 {
			side = -1
		}
		along := side * arrow * r.Tension.Value / longest / math.Hypot(1, slope)
		arrows[i] = supportForce{dx: along, dy: -along * slope}
		if arrows[i].dy <= 0 { // the label stands above the tip
			top = math.Max(top, 40-arrows[i].dy-(hi-r.Elevation)*scale)
		}
	}
	x := func(v float64) float64 { return left + (v-d.From)*scale }
	y := func(z float64) float64 { return top + (hi-z)*scale }
	s.line("chord", x(d.From), y(d.Curve.Z(d.From)), x(d.To), y(d.Curve.Z(d.To)))
	s.path("rope", sample(d.From, d.To, func(v float64) (float64, float64) { return x(v), y(d.Curve.Z(v)) }))
	desc, what := "The cable, heights and lengths to one scale.", "no support forces: "+whyNoTension(a)
	bottom := y(lo)
	for i, r := range a.Reactions {
		f := arrows[i]
		f.x, f.y = x(r.Station), y(r.Elevation)
		bottom = math.Max(bottom, f.draw(&s, r))
		desc += fmt.Sprintf(" At %s.", f.label(r))
		what = "arrows: force of the support on the cable, along its end tangent; V upward"
	}
	height := bottom + 28
	s.text("small", pictureWidth/2, height-8, "middle", fmt.Sprintf("to scale, %.4g m between the ends; %s", d.To-d.From, what))
	return s.describe("True shape of "+clean(name(a))+" with support forces", desc, pictureWidth, height)
}

// supportForce is the arrow of a reaction: its foot on the cable end and its way to the tip, picture units.
type supportForce struct{ x, y, dx, dy float64 }

func (f supportForce) label(r tension.Reaction) string {
	return clean(r.Support) + ": T = " + force(r.Tension)
}

// draw puts the arrow and, beyond its tip where the cable is not, the values; it returns the lowest edge.
func (f supportForce) draw(s *svg, r tension.Reaction) float64 {
	tipX, tipY := f.x+f.dx, f.y+f.dy
	s.line("force", f.x, f.y, tipX, tipY)
	sin, cos := math.Sincos(math.Atan2(f.dy, f.dx))
	s.polygon("head", [][2]float64{{tipX, tipY}, {tipX - 9*cos + 4*sin, tipY - 9*sin - 4*cos}, {tipX - 9*cos - 4*sin, tipY - 9*sin + 4*cos}})
	s.disc("support", f.x, f.y, 4)
	ty := tipY - 24
	if f.dy > 0 {
		ty = tipY + 20
	}
	s.label(tipX, ty, "label", f.label(r))
	s.label(tipX, ty+15, "small", "V = "+force(r.Vertical))
	return math.Max(tipY, ty+15)
}

// label is text centred on x but kept inside the picture; its width is estimated, for there is no font to ask.
func (s *svg) label(x, y float64, class, text string) {
	half := 3.9 * float64(utf8.RuneCountInString(text))
	s.text(class, math.Min(math.Max(x, half+2), pictureWidth-half-2), y, "middle", text)
}
