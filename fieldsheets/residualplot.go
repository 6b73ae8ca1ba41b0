package fieldsheets

import (
	"fmt"
	"math"

	"tautbook/tension"
)

// residuals draws the residuals in mm with a band of two standard deviations of the scatter.
func residuals(a *tension.Assessment) *svg {
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
	s.rect("band", left, ya.at(2000*sigma), right-left, ya.at(-2000*sigma)-ya.at(2000*sigma))
	frame(&s, xa, ya, "station from A [m]", "measured − fitted [mm]")
	s.line("zero", left, ya.at(0), right, ya.at(0))
	every, note := thinning(len(d.Stations))
	for i := 0; i < len(d.Stations); i += every {
		x, y := xa.at(d.Stations[i]), ya.at(1000*d.Residuals[i])
		s.line("stem", x, ya.at(0), x, y)
		s.dot(x, y, fmt.Sprintf("%s: %+.1f mm", clean(d.IDs[i]), 1000*d.Residuals[i]))
	}
	s.text("small", left, bottom+44, "start", "shaded: two standard deviations of the scatter, ± "+tension.Millimetre.About(2*sigma)+note)
	return s.describe("Residuals along "+clean(name(a)), fmt.Sprintf("Scatter %s.", tension.Millimetre.About(sigma)), pictureWidth, bottom+54)
}
