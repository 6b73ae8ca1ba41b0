package fieldsheets

import (
	"fmt"
	"html/template"
	"math"
	"strings"

	"tautbook/tension"
)

// svg collects the elements of one picture. Numbers are written with one decimal; text is escaped.
type svg struct {
	strings.Builder
}

func (s *svg) el(format string, args ...any) { fmt.Fprintf(s, format+"\n", args...) }

func (s *svg) line(class string, x1, y1, x2, y2 float64) {
	s.el(`<line class="%s" x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f"/>`, class, x1, y1, x2, y2)
}

func (s *svg) text(class string, x, y float64, anchor, text string) {
	s.el(`<text class="%s" x="%.1f" y="%.1f" text-anchor="%s">%s</text>`, class, x, y, anchor, template.HTMLEscapeString(text))
}

func (s *svg) path(class string, points [][2]float64) {
	var b strings.Builder
	for i, p := range points {
		c := "L"
		if i == 0 {
			c = "M"
		}
		fmt.Fprintf(&b, "%s%.1f %.1f", c, p[0], p[1])
	}
	s.el(`<path class="%s" d="%s"/>`, class, b.String())
}

// picture wraps the elements with size, title and description for readers that do not see it.
func (s *svg) picture(id, title, desc string, w, h float64) template.HTML {
	return template.HTML(fmt.Sprintf(`<svg viewBox="0 0 %.0f %.0f" role="img" aria-labelledby="%s-t %s-d"><title id="%s-t">%s</title><desc id="%s-d">%s</desc>`+"\n%s</svg>",
		w, h, id, id, id, template.HTMLEscapeString(title), id, template.HTMLEscapeString(desc), s.String()))
}

const pictureWidth = 760

// mostDots is the number of points that a picture draws; of a cloud every so many are shown.
const mostDots = 400

// trueShape draws the cable to scale, heights and lengths alike, with the support forces along the end tangents.
func trueShape(id string, a *tension.Assessment) template.HTML {
	d := a.Drawing
	var s svg
	const margin = 96.0
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range 101 {
		z := d.Curve.Z(d.From + (d.To-d.From)*float64(i)/100)
		lo, hi = math.Min(lo, z), math.Max(hi, z)
	}
	scale := (pictureWidth - 2*margin) / (d.To - d.From)
	if tall := 330 / math.Max(hi-lo, 1e-9); tall < scale {
		scale = tall
	}
	left := (pictureWidth - scale*(d.To-d.From)) / 2
	x := func(v float64) float64 { return left + (v-d.From)*scale }
	y := func(z float64) float64 { return 62 + (hi-z)*scale }
	height := 62 + (hi-lo)*scale + 62
	s.line("chord", x(d.From), y(d.Curve.Z(d.From)), x(d.To), y(d.Curve.Z(d.To)))
	s.path("fitted", sample(d.From, d.To, func(v float64) (float64, float64) { return x(v), y(d.Curve.Z(v)) }))
	desc := "Cable to scale."
	longest := 0.0
	for _, r := range a.Reactions {
		longest = math.Max(longest, r.Tension.Value)
	}
	for i, r := range a.Reactions {
		px, py := x(r.Station), y(r.Elevation)
		side := 1.0
		anchor := "start"
		if i == 0 {
			side, anchor = -1, "end"
		}
		slope := d.Curve.Slope(r.Station)
		n := math.Hypot(1, slope)
		l := 58 * r.Tension.Value / longest
		ex, ey := px+side*l/n, py-side*l*slope/n
		s.line("force", px, py, ex, ey)
		angle := math.Atan2(ey-py, ex-px) * 180 / math.Pi
		s.el(`<path class="head" transform="translate(%.1f %.1f) rotate(%.1f)" d="M0 0L-9 -4L-9 4Z"/>`, ex, ey, angle)
		s.el(`<circle class="support" cx="%.1f" cy="%.1f" r="4"/>`, px, py)
		ty := ey - 8
		if ey > py {
			ty = ey + 16
		}
		tx := math.Min(math.Max(ex, 8), pictureWidth-8)
		if anchor == "end" {
			tx, anchor = math.Max(tx-40, 6), "start"
		} else {
			tx, anchor = math.Min(tx+40, pictureWidth-6), "end"
		}
		label := r.Support + ": T = " + force(r.Tension)
		s.text("label", tx, ty, anchor, label)
		desc += " At " + label + "."
	}
	s.text("small", pictureWidth/2, height-8, "middle", fmt.Sprintf("to scale; %.4g m between the ends; arrows: force of the support on the cable, along the end tangent", d.To-d.From))
	return s.picture(id, "True shape of "+clean(name(a))+" with support forces", desc, pictureWidth, height)
}

// sample evaluates a curve at 121 stations.
func sample(from, to float64, at func(float64) (float64, float64)) (out [][2]float64) {
	for i := range 121 {
		px, py := at(from + (to-from)*float64(i)/120)
		out = append(out, [2]float64{px, py})
	}
	return out
}

// belowChord draws depth below the chord: measured points, fitted curve and the designed cable today, heights exaggerated.
func belowChord(id string, a *tension.Assessment) template.HTML {
	d := a.Drawing
	var s svg
	const top, bottom, left, right = 30.0, 250.0, 74.0, pictureWidth - 20.0
	chord := func(v float64) float64 { return d.Curve.Z1 + (d.Curve.Z2-d.Curve.Z1)*(v-d.From)/(d.To-d.From) }
	deepest := 0.0
	see := func(depth float64) { deepest = math.Max(deepest, depth) }
	see(a.Fit.GreatestSag.Value)
	if d.Expected != nil {
		_, sag := d.Expected.GreatestSag(d.From, d.To)
		see(sag)
	}
	for i, v := range d.Stations {
		see(chord(v) - d.Elevations[i])
	}
	deepest = math.Max(deepest*1.06, 1e-6)
	xa := newAxis(d.From, d.To, left, right, 8)
	ya := newAxis(0, deepest, top, bottom, 5)
	frame(&s, xa, ya, "station from A [m]", "below chord [m]")
	if d.Expected != nil {
		s.path("design", sample(d.From, d.To, func(v float64) (float64, float64) { return xa.at(v), ya.at(d.Expected.Sag(v, d.From, d.To)) }))
	}
	s.path("fitted", sample(d.From, d.To, func(v float64) (float64, float64) { return xa.at(v), ya.at(d.Curve.Sag(v, d.From, d.To)) }))
	every := (len(d.Stations) + mostDots - 1) / mostDots
	for i, v := range d.Stations {
		if i%max(every, 1) == 0 {
			s.el(`<circle class="dot" cx="%.1f" cy="%.1f" r="2.6"><title>%s</title></circle>`, xa.at(v), ya.at(chord(v)-d.Elevations[i]),
				template.HTMLEscapeString(fmt.Sprintf("%s: station %.3f m, residual %+.1f mm", clean(d.IDs[i]), v, 1000*d.Residuals[i])))
		}
	}
	dropped(&s, xa, ya, d, chord)
	times := (ya.to - ya.from) / (ya.hi - ya.lo) / ((xa.to - xa.from) / (xa.hi - xa.lo))
	s.text("small", right, bottom+44, "end", fmt.Sprintf("heights drawn %.2g times larger than lengths", times))
	legend(&s, left, bottom+44, d.Expected != nil, len(d.Dropped) > 0)
	desc := fmt.Sprintf("Fitted sag at mid-span %s.", length(a.Fit.SagMid))
	if a.Expected != nil {
		desc += " Expected today " + length(a.Expected.SagMid) + "."
	}
	return s.picture(id, "Measured, fitted and designed curve below the chord", desc, pictureWidth, bottom+54)
}

// dropped marks points that were left out; one outside the picture is put at its edge.
func dropped(s *svg, xa, ya axis, d tension.Drawing, chord func(float64) float64) {
	for _, p := range d.Dropped {
		px := math.Min(math.Max(xa.at(p[0]), xa.from), xa.to)
		py := math.Min(math.Max(ya.at(chord(p[0])-p[1]), ya.from), ya.to)
		s.el(`<path class="out" d="M%.1f %.1fl8 8m0 -8l-8 8"/>`, px-4, py-4)
	}
}

func legend(s *svg, x, y float64, design, out bool) {
	s.el(`<circle class="dot" cx="%.1f" cy="%.1f" r="2.6"/>`, x, y-4)
	s.text("small", x+8, y, "start", "measured")
	s.line("fitted", x+76, y-4, x+100, y-4)
	s.text("small", x+105, y, "start", "fitted")
	x += 150
	if design {
		s.line("design", x, y-4, x+24, y-4)
		s.text("small", x+29, y, "start", "as designed, today")
		x += 150
	}
	if out {
		s.el(`<path class="out" d="M%.1f %.1fl8 8m0 -8l-8 8"/>`, x, y-8)
		s.text("small", x+13, y, "start", "left out")
	}
}

// frame draws two axes with their ticks and names.
func frame(s *svg, xa, ya axis, xName, yName string) {
	for _, t := range ya.ticks() {
		s.line("grid", xa.from, t.At, xa.to, t.At)
		s.text("tick", xa.from-6, t.At+4, "end", t.Label)
	}
	for _, t := range xa.ticks() {
		s.line("grid", t.At, ya.from, t.At, ya.to)
		s.text("tick", t.At, math.Max(ya.from, ya.to)+15, "middle", t.Label)
	}
	s.text("tick", xa.to, math.Max(ya.from, ya.to)+29, "end", xName)
	s.text("tick", xa.from-60, math.Min(ya.from, ya.to)-12, "start", yName)
}

// residuals draws the vertical residuals with a band of two standard deviations of one point.
func residuals(id string, a *tension.Assessment) template.HTML {
	d := a.Drawing
	var s svg
	const top, bottom, left, right = 30.0, 140.0, 74.0, pictureWidth - 20.0
	most := 0.0
	for _, v := range d.Residuals {
		most = math.Max(most, math.Abs(v))
	}
	sigma := a.Fit.RMS
	most = math.Max(most, 2.2*sigma) * 1000 * 1.08
	if most == 0 {
		most = 1
	}
	xa := newAxis(d.From, d.To, left, right, 8)
	ya := newAxis(-most, most, bottom, top, 4)
	s.el(`<rect class="band" x="%.1f" y="%.1f" width="%.1f" height="%.1f"/>`, left, ya.at(2000*sigma), right-left, ya.at(-2000*sigma)-ya.at(2000*sigma))
	frame(&s, xa, ya, "station from A [m]", "measured − fitted [mm]")
	s.line("zero", left, ya.at(0), right, ya.at(0))
	every := (len(d.Stations) + mostDots - 1) / mostDots
	for i, v := range d.Stations {
		if i%max(every, 1) == 0 {
			s.line("stem", xa.at(v), ya.at(0), xa.at(v), ya.at(1000*d.Residuals[i]))
			s.el(`<circle class="dot" cx="%.1f" cy="%.1f" r="2.4"><title>%s</title></circle>`, xa.at(v), ya.at(1000*d.Residuals[i]),
				template.HTMLEscapeString(fmt.Sprintf("%s: %+.1f mm", clean(d.IDs[i]), 1000*d.Residuals[i])))
		}
	}
	s.text("small", left, bottom+44, "start", "band: two standard deviations of the scatter")
	return s.picture(id, "Residuals along the span", fmt.Sprintf("Scatter %s.", tension.Millimetre.About(sigma)), pictureWidth, bottom+54)
}
