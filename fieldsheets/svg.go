package fieldsheets

import (
	"fmt"
	"html/template"
	"math"
	"strings"
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
	s.el(`<path class="out" d="M%.1f %.1fl8 8m0 -8l-8 8"><title>%s</title></path>`, x-4, y-4, template.HTMLEscapeString(title))
}

func (s *svg) dot(x, y float64, title string) {
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
