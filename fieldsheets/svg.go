package fieldsheets

import (
	"fmt"
	"html/template"
	"math"
	"strings"
)

// svg collects one picture: as SVG elements for a page, and as marks that paper and PNG are drawn from. Numbers are written with one
// decimal; text is escaped.
type svg struct {
	strings.Builder
	marks       []mark
	title, desc string
	w, h        float64
}

// mark is one element of a picture: text, a disc, or a line through points that may be closed. Its class says how it looks.
type mark struct {
	class  string
	points [][2]float64
	closed bool
	radius float64
	text   string
	anchor string // of text: start, middle or end
}

func (s *svg) el(format string, args ...any) { fmt.Fprintf(s, format+"\n", args...) }

func (s *svg) keep(m mark) { s.marks = append(s.marks, m) }

func (s *svg) line(class string, x1, y1, x2, y2 float64) {
	s.keep(mark{class: class, points: [][2]float64{{x1, y1}, {x2, y2}}})
	s.el(`<line class="%s" x1="%.1f" y1="%.1f" x2="%.1f" y2="%.1f"/>`, class, x1, y1, x2, y2)
}

func (s *svg) text(class string, x, y float64, anchor, text string) {
	s.keep(mark{class: class, points: [][2]float64{{x, y}}, text: text, anchor: anchor})
	s.el(`<text class="%s" x="%.1f" y="%.1f" text-anchor="%s">%s</text>`, class, x, y, anchor, template.HTMLEscapeString(text))
}

func (s *svg) rect(class string, x, y, w, h float64) {
	s.keep(mark{class: class, points: [][2]float64{{x, y}, {x + w, y}, {x + w, y + h}, {x, y + h}}, closed: true})
	s.el(`<rect class="%s" x="%.1f" y="%.1f" width="%.1f" height="%.1f"/>`, class, x, y, w, h)
}

func (s *svg) disc(class string, x, y, radius float64) {
	s.keep(mark{class: class, points: [][2]float64{{x, y}}, radius: radius})
	s.el(`<circle class="%s" cx="%.1f" cy="%.1f" r="%.1f"/>`, class, x, y, radius)
}

func (s *svg) path(class string, points [][2]float64) {
	s.keep(mark{class: class, points: points})
	s.el(`<path class="%s" d="%s"/>`, class, through(points))
}

func (s *svg) polygon(class string, points [][2]float64) {
	s.keep(mark{class: class, points: points, closed: true})
	s.el(`<path class="%s" d="%sZ"/>`, class, through(points))
}

// through is the SVG path through points.
func through(points [][2]float64) string {
	var b strings.Builder
	for i, p := range points {
		c := "L"
		if i == 0 {
			c = "M"
		}
		fmt.Fprintf(&b, "%s%.1f %.1f", c, p[0], p[1])
	}
	return b.String()
}

// describe sets size, title and description for readers that do not see the picture.
func (s *svg) describe(title, desc string, w, h float64) *svg {
	s.title, s.desc, s.w, s.h = title, desc, w, h
	return s
}

// markup is the picture for a page; id must be its own there.
func (s *svg) markup(id string) template.HTML {
	if s == nil {
		return ""
	}
	return template.HTML(fmt.Sprintf(`<svg viewBox="0 0 %.0f %.0f" role="img" aria-labelledby="%s-t %s-d"><title id="%s-t">%s</title><desc id="%s-d">%s</desc>`+"\n%s</svg>",
		s.w, s.h, id, id, id, template.HTMLEscapeString(s.title), id, template.HTMLEscapeString(s.desc), s.String()))
}

const pictureWidth = 760

// mostDots is the number of points that a picture draws; of a cloud every so many are shown.
const mostDots = 400

// thinning is the step at which points are drawn, and the words that say so.
func thinning(points int) (every int, note string) {
	every = max(1, (points+mostDots-1)/mostDots)
	if every > 1 {
		note = fmt.Sprintf("; 1 of %d points drawn", every)
	}
	return every, note
}

// cross marks a point that was left out.
func (s *svg) cross(x, y float64, title string) {
	s.keep(mark{class: "out", points: [][2]float64{{x - 4, y - 4}, {x + 4, y + 4}}})
	s.keep(mark{class: "out", points: [][2]float64{{x - 4, y + 4}, {x + 4, y - 4}}})
	s.el(`<path class="out" d="M%.1f %.1fl8 8m0 -8l-8 8"><title>%s</title></path>`, x-4, y-4, template.HTMLEscapeString(title))
}

func (s *svg) dot(x, y float64, title string) {
	s.keep(mark{class: "dot", points: [][2]float64{{x, y}}, radius: 2.6})
	s.el(`<circle class="dot" cx="%.1f" cy="%.1f" r="2.6"><title>%s</title></circle>`, x, y, template.HTMLEscapeString(title))
}

// sample evaluates a curve at 121 stations.
func sample(from, to float64, at func(float64) (float64, float64)) (out [][2]float64) {
	for i := range 121 {
		px, py := at(from + (to-from)*float64(i)/120)
		out = append(out, [2]float64{px, py})
	}
	return out
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
