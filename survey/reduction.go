package survey

import (
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey/station"
)

// The accuracy that weights the adjustment of several set-ups when the file states none: common practice, no source. It gives no
// uncertainty: points then come without covariance, and their accuracy is estimated from the residuals of the fit.
const (
	assumedAngle    = 5 * secondOfArc
	assumedDistance = 0.003
	assumedPPM      = 2e-6
)

// gross is the normalised residual from which an observation of the adjustment is named: two-sided 0.1 % (Baarda 1968).
const gross = 3.29

// reduction is the points of a file of raw readings.
type reduction struct {
	points  []Point
	at      int
	told    []string
	header  []HeaderUse
	network *station.Network
	stated  bool
}

// next is the next point.
func (d *reduction) next(pt *Point) error {
	if d.at == len(d.points) {
		*pt = Point{}
		return io.EOF
	}
	*pt = d.points[d.at]
	d.at++
	return nil
}

// reduce turns the readings into points.
func (r *readingsParser) reduce() (*reduction, error) {
	b := &r.book
	in := b.instrument
	if !b.stated {
		in.Angle, in.Distance, in.DistancePM = assumedAngle, assumedDistance, assumedPPM
		r.guess("accuracy of the instrument", "from the residuals of the fit", "the file does not state both, angle accuracy and distance accuracy; set-ups are weighted with 5\" and 3 mm + 2 ppm",
			"lines \"# angle accuracy: 2\"\" and \"# distance accuracy: 2 mm + 2 ppm\"")
	}
	if !b.given["refraction"] {
		r.guess("refraction", "k = 0.13", "the file gives no coefficient", "a line \"# refraction: 0.13\"")
	}
	sights, faces, err := station.Average(r.shots, in)
	if err != nil {
		return nil, r.problemFrom(err)
	}
	for name := range b.orientations {
		if !slices.ContainsFunc(sights, func(s station.Sight) bool { return s.Setup == name }) {
			return nil, &InputError{Problems: []Problem{{File: r.opts.Name, Line: r.shots[0].Line, Column: "orientation", Found: name, Expected: "an orientation of a set-up of this file",
				Mend: "write it as in the column setup: " + strings.Join(station.Setups(sights), ", ")}}}
		}
	}
	n, err := station.Adjust(sights, b.marks, b.orientations, in)
	if err != nil {
		return nil, r.problemFrom(err)
	}
	d := &reduction{network: n, stated: b.stated}
	for i, f := range b.fields {
		d.header = append(d.header, HeaderUse{Column: i + 1, Name: r.names[i], Field: f})
	}
	r.emit(d, sights)
	r.tell(d, faces, len(sights))
	return d, nil
}

// emit makes a point of every target.
func (r *readingsParser) emit(d *reduction, sights []station.Sight) {
	done := map[string]bool{}
	for _, s := range sights {
		if done[s.Target] {
			continue
		}
		done[s.Target] = true
		x, c := d.network.Points[s.Target], d.network.Cov[s.Target]
		pt := Point{ID: s.Target, E: x[0], N: x[1], Z: x[2], Code: r.codes[s.Target], Line: s.Line}
		if d.stated {
			pt.HasCov, pt.Cov = true, covOf(c)
		}
		_, mark := r.book.markLine[s.Target]
		if setup := slices.Contains(d.network.Setups, s.Target); pt.Code == "" && (mark || setup) {
			pt.Code = "CP"
		}
		d.points = append(d.points, pt)
	}
}

func covOf(c [3][3]float64) Cov3 {
	return Cov3{EE: c[0][0], EN: c[0][1], EZ: c[0][2], NN: c[1][1], NZ: c[1][2], ZZ: c[2][2]}
}

// tell puts the reduction into words.
func (r *readingsParser) tell(d *reduction, f station.Faces, sights int) {
	say := func(format string, args ...any) { d.told = append(d.told, fmt.Sprintf(format, args...)) }
	sec := func(rad float64) float64 { return rad / secondOfArc }
	say("%d readings from %d set-ups to %d targets", len(r.shots), len(d.network.Setups), len(d.points))
	if f.Pairs > 0 {
		say("faces: %d pairs, %d on one face; collimation %.1f\" (one pair ± %.1f\"), vertical index error %.1f\" (± %.1f\")", f.Pairs, f.Singles, sec(f.Collimation), sec(f.SCollimation), sec(f.Index), sec(f.SIndex))
	} else {
		say("faces: all %d on one face; collimation and vertical index error are not known and not corrected", f.Singles)
		r.notice(0, "", "no target was read on both faces: an index error of the instrument is in every height; read a few targets on both")
	}
	if f.SIndex > 3*r.book.instrument.Angle && r.book.angleStated && f.Pairs > 2 {
		r.notice(0, "", "the index error differs from pair to pair by %.1f\" (standard deviation), more than the stated %.1f\" explains: look for a target taken for another, or touched up between the faces", sec(f.SIndex), sec(r.book.instrument.Angle))
	}
	if f.Repeated > 0 {
		say("rounds: %d sights with several; one round scatters by %.1f\" in direction, %.1f\" in zenith angle, %.1f mm in distance", f.Repeated, sec(f.SpreadHorizontal), sec(f.SpreadZenith), 1000*f.SpreadSlope)
	}
	say("curvature and refraction with k = %g; scale %g; atmosphere %g ppm", r.book.instrument.K, r.book.instrument.Scale, 1e6*r.book.instrument.Met)
	if d.stated {
		b := r.book.instrument
		say("accuracy of each point from the stated %.2g\" on both faces and %.2g mm + %.2g ppm; centring %.2g mm", sec(b.Angle), 1000*b.Distance, 1e6*b.DistancePM, 1000*b.Centring)
	}
	n := d.network
	if n.Local {
		r.guess("frame", "the first set-up is (0, 0, 0), its circle 0 is north", "no known mark is sighted or occupied", "lines \"# mark: NAME; E; N; Z\"")
	}
	if n.DegreesOfFreedom == 0 {
		say("set-ups: nothing checks them (no redundant sights to marks or common points)")
		return
	}
	limit := chiSquareLimit(n.DegreesOfFreedom)
	worst := n.Worst()
	say("set-ups adjusted: %d redundant observations, variance factor %.2f (95 %% limit %.2f); largest normalised residual %.1f: %s", n.DegreesOfFreedom, n.VarianceFactor, limit, math.Abs(worst.Normalised), residualText(*worst))
	if math.Abs(worst.Normalised) > gross {
		r.notice(worst.Line, "", "the adjustment of the set-ups speaks against %s (normalised residual %.1f, limit %.2f): look for a wrong target, height or coordinate", residualText(*worst), math.Abs(worst.Normalised), gross)
	} else if n.VarianceFactor > limit {
		r.notice(0, "", "the set-ups fit together worse than the stated accuracy: variance factor %.2f, 95 %% limit %.2f", n.VarianceFactor, limit)
	}
}

// residualText is one residual in words.
func residualText(v station.Residual) string {
	switch {
	case v.Setup == "":
		return fmt.Sprintf("the %s of mark %s, off by %.1f mm", v.What, quote(v.Target), 1000*v.Value)
	case v.Target == "":
		return fmt.Sprintf("the %s of set-up %s over its mark, off by %.1f mm", v.What, quote(v.Setup), 1000*v.Value)
	case v.What == "distance":
		return fmt.Sprintf("the distance from %s to %s, off by %.1f mm", quote(v.Setup), quote(v.Target), 1000*v.Value)
	}
	return fmt.Sprintf("the %s from %s to %s, off by %.1f\"", v.What, quote(v.Setup), quote(v.Target), v.Value/secondOfArc)
}

// settle puts the reduction into the survey and gives the points of spans seen from several set-ups what those differ by. The m points of one
// set-up share its shift and turn against the others; points are fitted as independent, so each gets m times that covariance: whatever
// weights c the fit gives them, (sum c)^2 <= m sum c^2 (Cauchy and Schwarz), so U is never too small and can be several times too large. Half of the difference of two set-ups is laid on each, so that neither loses its weight to the other. What all set-ups of a
// span share moves the points together and leaves shape and tension alone.
func (d *reduction) settle(sv *Survey) {
	sv.Reduction, sv.Header = d.told, d.header
	if !d.stated {
		return
	}
	for i := range sv.Spans {
		sp := &sv.Spans[i]
		count := map[string]int{}
		var homes []string
		for _, p := range sp.Points {
			home := d.network.Home[p.ID]
			if count[home]++; count[home] == 1 {
				homes = append(homes, home)
			}
		}
		if len(homes) > 1 {
			sv.Reduction = append(sv.Reduction, fmt.Sprintf("%s: seen from %d set-ups; what they differ by is in the accuracy of its points at its upper bound, so U is on the wide side: one set-up that sees the whole span gives a sharper figure", quote(sp.Cable), len(homes)))
		}
		for k := range sp.Points {
			d.widen(&sp.Points[k], homes, count)
		}
		for _, end := range []*Point{sp.A, sp.B} {
			if end != nil {
				d.widen(end, homes, count)
			}
		}
	}
}

// widen adds the half of what the set-up of a point differs from the other set-ups of its span, on average over them.
func (d *reduction) widen(p *Point, homes []string, count map[string]int) {
	home := d.network.Home[p.ID]
	var sum [3][3]float64
	others := 0.0
	for _, other := range homes {
		if other == home {
			continue
		}
		others++
		c := d.network.Between(home, other, [3]float64{p.E, p.N, p.Z})
		for r := range 3 {
			for k := range 3 {
				sum[r][k] += c[r][k]
			}
		}
	}
	if others == 0 {
		return
	}
	m := float64(max(count[home], 1))
	for r := range 3 {
		for k := range 3 {
			sum[r][k] *= m / (2 * others)
		}
	}
	p.Cov = p.Cov.plus(covOf(sum))
}

// plus adds two covariances.
func (c Cov3) plus(o Cov3) Cov3 {
	return Cov3{c.EE + o.EE, c.EN + o.EN, c.EZ + o.EZ, c.NN + o.NN, c.NZ + o.NZ, c.ZZ + o.ZZ}
}

// chiSquareLimit is the 95 % limit of a variance factor with so many degrees of freedom.
func chiSquareLimit(dof int) float64 {
	return distuv.ChiSquared{K: float64(dof)}.Quantile(0.95) / float64(dof)
}
