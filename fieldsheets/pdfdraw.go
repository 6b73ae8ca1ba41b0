package fieldsheets

import (
	"math"

	"codeberg.org/go-pdf/fpdf"
)

// ink is a colour on paper; none = not drawn.
type ink struct {
	r, g, b int
	drawn   bool
}

func inkOf(rgb int) ink { return ink{rgb >> 16, rgb >> 8 & 255, rgb & 255, true} }

// look is how the marks of one class are drawn on paper: widths in picture units.
type look struct {
	stroke, fill ink
	width        float64
	dash         []float64
	size         float64 // of text
	bold         bool
}

// Colours of print, as in the style sheet of the page.
const (
	paperInk = 0x000000
	softInk  = 0x444444
	ruleInk  = 0xbbbbbb
	washInk  = 0xeeeeee
	steelInk = 0x1f4e6b
	faintInk = 0x8fa7b5 // steel at half strength
	rustInk  = 0x8a2c0d
	plumInk  = 0x5b2153
	whiteInk = 0xffffff
)

// looks are the classes that pictures use; every one of them differs from the others in form too, not in colour alone.
var looks = map[string]look{
	"grid": {stroke: inkOf(ruleInk), width: 0.7}, "axis": {stroke: inkOf(paperInk), width: 1}, "zero": {stroke: inkOf(paperInk), width: 1},
	"stem": {stroke: inkOf(softInk), width: 1}, "chord": {stroke: inkOf(softInk), width: 1, dash: []float64{2, 5}},
	"fitted": {stroke: inkOf(faintInk), width: 4.5}, "rope": {stroke: inkOf(steelInk), width: 2.4},
	"design": {stroke: inkOf(paperInk), width: 1.5, dash: []float64{9, 5}}, "dot": {stroke: inkOf(paperInk), fill: inkOf(whiteInk), width: 1.2},
	"out": {stroke: inkOf(rustInk), width: 2.2}, "force": {stroke: inkOf(rustInk), width: 2.6}, "head": {fill: inkOf(rustInk)},
	"support": {fill: inkOf(paperInk)}, "inside": {fill: inkOf(washInk)}, "band": {fill: inkOf(washInk)},
	"limit": {stroke: inkOf(paperInk), width: 1.4, dash: []float64{5, 3}},
	"today": {stroke: inkOf(steelInk), width: 3}, "today end": {stroke: inkOf(steelInk), width: 3}, "today-mark": {fill: inkOf(steelInk)},
	"other": {stroke: inkOf(plumInk), width: 3, dash: []float64{6, 4}}, "other end": {stroke: inkOf(plumInk), width: 3},
	"other-mark": {stroke: inkOf(plumInk), fill: inkOf(whiteInk), width: 2.4},
	"read":       {stroke: inkOf(paperInk), width: 2}, "read end": {stroke: inkOf(paperInk), width: 2}, "read-mark": {fill: inkOf(paperInk)},
	"tick": {fill: inkOf(softInk), size: 12}, "small": {fill: inkOf(softInk), size: 12}, "label": {fill: inkOf(paperInk), size: 13, bold: true},
}

// drawing puts a picture on paper with its upper left corner at (x, y), mm, as wide as told; it returns the height.
func (d *paper) drawing(s *svg, x, y, wide float64) (height float64) {
	scale := wide / s.w
	for _, m := range s.marks {
		k, known := looks[m.class]
		if !known {
			k = look{stroke: inkOf(paperInk), fill: ink{}, width: 1, size: 12}
		}
		at := func(p [2]float64) fpdf.PointType { return fpdf.PointType{X: x + p[0]*scale, Y: y + p[1]*scale} }
		if m.text != "" {
			d.mark(m, k, at(m.points[0]), scale)
			continue
		}
		style := d.pen(k, scale)
		switch {
		case m.radius > 0:
			p := at(m.points[0])
			d.pdf.Circle(p.X, p.Y, m.radius*scale, style)
		case m.closed:
			points := make([]fpdf.PointType, len(m.points))
			for i, q := range m.points {
				points[i] = at(q)
			}
			d.pdf.Polygon(points, style)
		default:
			d.polyline(m.points, at)
		}
	}
	d.pdf.SetDashPattern(nil, 0)
	d.pdf.SetTextColor(0, 0, 0)
	return s.h * scale
}

func (d *paper) polyline(points [][2]float64, at func([2]float64) fpdf.PointType) {
	for i, q := range points {
		p := at(q)
		if i == 0 {
			d.pdf.MoveTo(p.X, p.Y)
		} else {
			d.pdf.LineTo(p.X, p.Y)
		}
	}
	d.pdf.DrawPath("D")
}

// pen sets colours, width and dashes, and returns the drawing style.
func (d *paper) pen(k look, scale float64) (style string) {
	if k.fill.drawn {
		d.pdf.SetFillColor(k.fill.r, k.fill.g, k.fill.b)
		style = "F"
	}
	if k.stroke.drawn {
		d.pdf.SetDrawColor(k.stroke.r, k.stroke.g, k.stroke.b)
		style += "D"
	}
	d.pdf.SetLineWidth(math.Max(k.width*scale, 0.05))
	dash := make([]float64, len(k.dash))
	for i, v := range k.dash {
		dash[i] = v * scale
	}
	d.pdf.SetDashPattern(dash, 0)
	return style
}

// mark writes one text of a picture.
func (d *paper) mark(m mark, k look, at fpdf.PointType, scale float64) {
	weight := ""
	if k.bold {
		weight = "B"
	}
	d.font(weight, k.size*scale*72/25.4)
	d.pdf.SetTextColor(k.fill.r, k.fill.g, k.fill.b)
	text := d.shown(m.text)
	switch wide := d.pdf.GetStringWidth(text); m.anchor {
	case "middle":
		at.X -= wide / 2
	case "end":
		at.X -= wide
	}
	d.pdf.Text(at.X, at.Y, text)
}
