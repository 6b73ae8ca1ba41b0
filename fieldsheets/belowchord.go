package fieldsheets

import (
	"fmt"
	"math"

	"tautbook/tension"
)

// belowChord draws depth below the chord: measured points, fitted curve and the designed cable today. Heights are drawn
// larger than lengths, by a factor that stands beside the picture.
func belowChord(a *tension.Assessment) *svg {
	d := a.Drawing
	var s svg
	const top, bottom, left, right = 30.0, 250.0, 74.0, pictureWidth - 20.0
	chord := func(v float64) float64 { return d.Curve.Z1 + (d.Curve.Z2-d.Curve.Z1)*(v-d.From)/(d.To-d.From) }
	xa := newAxis(d.From, d.To, left, right, 8)
	lo, hi := depths(a, chord)
	ya := newAxis(lo, hi, top, bottom, 5)
	frame(&s, xa, ya, "station from A [m]", "below chord [m]")
	s.path("fitted", sample(d.From, d.To, func(v float64) (float64, float64) { return xa.at(v), ya.at(d.Curve.Sag(v, d.From, d.To)) }))
	if d.Expected != nil {
		s.path("design", sample(d.From, d.To, func(v float64) (float64, float64) { return xa.at(v), ya.at(d.Expected.Sag(v, d.From, d.To)) }))
	}
	every, note := thinning(len(d.Stations))
	for i := 0; i < len(d.Stations); i += every {
		v := d.Stations[i]
		s.dot(xa.at(v), ya.at(chord(v)-d.Elevations[i]), fmt.Sprintf("%s: station %.3f m, residual %+.1f mm", clean(d.IDs[i]), v, 1000*d.Residuals[i]))
	}
	note += dropped(&s, xa, ya, d, chord)
	legend(&s, left, bottom+44, d.Expected != nil, len(d.Dropped) > 0)
	s.text("small", left, bottom+62, "start", exaggeration((ya.to-ya.from)/(ya.hi-ya.lo)/((xa.to-xa.from)/(xa.hi-xa.lo)))+note)
	desc := fmt.Sprintf("Fitted sag at mid-span %s.", length(a.Fit.SagMid))
	if a.Expected != nil {
		desc += " Expected today " + length(a.Expected.SagMid) + "."
	}
	return s.describe("Measured, fitted and designed curve of "+clean(name(a))+" below the chord", desc, pictureWidth, bottom+70)
}

// depths is the range below the chord that holds curves and points used, with a little air; points may lie above the chord.
func depths(a *tension.Assessment, chord func(float64) float64) (lo, hi float64) {
	d := a.Drawing
	hi = math.Max(a.Fit.GreatestSag.Value, 0)
	lo = math.Min(a.Fit.GreatestSag.Value, 0)
	if d.Expected != nil {
		_, sag := d.Expected.GreatestSag(d.From, d.To)
		hi = math.Max(hi, sag)
	}
	for i, v := range d.Stations {
		depth := chord(v) - d.Elevations[i]
		lo, hi = math.Min(lo, depth), math.Max(hi, depth)
	}
	air := 0.06 * math.Max(hi-lo, 1e-6)
	if lo < 0 {
		lo -= air
	}
	return lo, hi + air
}

// exaggeration says how much larger than lengths heights are drawn.
func exaggeration(times float64) string {
	switch {
	case times > 0.95 && times < 1.05:
		return "heights and lengths drawn to one scale"
	case times < 10:
		return fmt.Sprintf("heights drawn %.1f times as large as lengths", times)
	}
	step := math.Pow(10, math.Floor(math.Log10(times))-1)
	return fmt.Sprintf("heights drawn about %.0f times as large as lengths", math.Round(times/step)*step)
}

// dropped marks points that were left out; one outside the picture is put at its edge, and the note says how many.
func dropped(s *svg, xa, ya axis, d tension.Drawing, chord func(float64) float64) (note string) {
	moved := 0
	for _, p := range d.Dropped {
		x, y := xa.at(p[0]), ya.at(chord(p[0])-p[1])
		px, py := math.Min(math.Max(x, xa.from), xa.to), math.Min(math.Max(y, ya.from), ya.to)
		if px != x || py != y {
			moved++
		}
		s.cross(px, py, fmt.Sprintf("left out: station %.3f m, %.3f m below the chord", p[0], chord(p[0])-p[1]))
	}
	if moved > 0 {
		note = fmt.Sprintf("; %d left-out outside the picture, marked at its edge", moved)
	}
	return note
}

func legend(s *svg, x, y float64, design, out bool) {
	s.dot(x, y-4, "measured")
	s.text("small", x+8, y, "start", "measured")
	s.line("fitted", x+76, y-4, x+100, y-4)
	s.text("small", x+105, y, "start", "fitted")
	x += 154
	if design {
		s.line("design", x, y-4, x+28, y-4)
		s.text("small", x+33, y, "start", "as designed, today")
		x += 160
	}
	if out {
		s.cross(x, y-4, "left out")
		s.text("small", x+13, y, "start", "left out")
	}
}
