package survey

import (
	"cmp"
	"math"
	"slices"
)

// lookCutOff tells a file that ends without a line end and with a shorter last cell than the row before: the last row may
// have lost its end though it has all its cells.
func (p *PointReader) lookCutOff() {
	if n := len(p.columns); n > 0 && p.rec.ended && p.rows > 1 && p.last[0] < p.last[1] && p.columns[n-1].field != fieldUnused {
		p.notice(p.rec.line, p.columns[n-1].name, "the file ends without a line end and the last cell is shorter than the one above it: if the file was cut off, fetch it again")
	}
}

// extent is the diagonal of the points in plan, m.
func extent(points []Point) float64 {
	lo, hi := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	for _, p := range points {
		for k, v := range [2]float64{p.E, p.N} {
			lo[k], hi[k] = math.Min(lo[k], v), math.Max(hi[k], v)
		}
	}
	return math.Hypot(hi[0]-lo[0], hi[1]-lo[1])
}

// odd tells a chord that does not fit the design span, by a factor of feet to metres above all.
func (s *sorter) odd(sp SpanPoints, d *Design) {
	if d == nil || d.SpanLength == nil {
		return
	}
	chord, what := extent(sp.Points), "points reach over"
	if sp.A != nil && sp.B != nil {
		chord, what = math.Hypot(sp.A.E-sp.B.E, sp.A.N-sp.B.N), "supports are apart by"
	}
	ratio := chord / d.SpanLength.Value
	add := func(text string) {
		s.reader.notice(0, "", "cable %s: the surveyed %s %.3f m, the design span is %.3f m: %s", quote(sp.Cable), what, chord, d.SpanLength.Value, text)
	}
	switch {
	case math.Abs(ratio*foot-1) < 0.05:
		add("the file may be in feet: say --unit ft or us-ft")
	case math.Abs(ratio/foot-1) < 0.02 && sp.A != nil && sp.B != nil:
		add("the file may be in metres: check --unit and the units in the header")
	case ratio > 1.01, ratio < 0.99 && sp.A != nil && sp.B != nil:
		add("check the codes, the units and the cables file")
	}
}

// mixed tells points of one span whose coordinates fall into two sets by the factor of feet to metres.
func (s *sorter) mixed(sp SpanPoints) {
	for axis, of := range []func(Point) float64{func(p Point) float64 { return p.E }, func(p Point) float64 { return p.N }} {
		if s.reader.flat && axis == 1 {
			continue
		}
		v := make([]float64, 0, len(sp.Points))
		for _, p := range sp.Points {
			v = append(v, math.Abs(of(p)))
		}
		slices.Sort(v)
		if small, large, ok := twoScales(v); ok {
			s.reader.notice(0, "", "cable %s: some points have a%s near %.0f m and some near %.0f m, about 3.28 times as much: metres and feet may be mixed in the file; split it and give each part its unit",
				quote(sp.Cable), [...]string{"n easting", " northing"}[axis], small, large)
			return
		}
	}
}

// twoScales finds sorted values that form two tight sets, the medians of which differ by the factor of a foot.
func twoScales(v []float64) (small, large float64, ok bool) {
	cut, widest := 0, 1.5
	for i := 1; i < len(v); i++ {
		if v[i] > widest*v[i-1] && v[i-1] > 0 {
			cut, widest = i, v[i]/v[i-1]
		}
	}
	if cut == 0 || v[0] <= 0 || v[cut-1] > 1.2*v[0] || v[len(v)-1] > 1.2*v[cut] {
		return 0, 0, false
	}
	small, large = v[cut/2], v[(cut+len(v))/2]
	return small, large, math.Abs(large/small*foot-1) < 0.1
}

// coinciding tells points of one span that have the same coordinates to the digit: a part of the file may be in it twice, and
// would then count twice.
func (s *sorter) coinciding(sp SpanPoints) {
	if len(sp.Points) < 2 {
		return
	}
	order := make([]int32, len(sp.Points))
	for i := range order {
		order[i] = int32(i)
	}
	slices.SortFunc(order, func(i, j int32) int { return comparePlace(&sp.Points[i], &sp.Points[j]) })
	n, line := 0, 0
	for k := 1; k < len(order); k++ {
		if p := &sp.Points[order[k]]; comparePlace(&sp.Points[order[k-1]], p) == 0 {
			if n++; line == 0 || p.Line < line {
				line = p.Line
			}
		}
	}
	if n > 0 {
		s.reader.notice(line, "", "cable %s: points with the same coordinates as an earlier one to the digit: %d; if the file holds a part twice, take it out", quote(sp.Cable), n)
	}
}

func comparePlace(a, b *Point) int {
	return cmp.Or(cmp.Compare(a.E, b.E), cmp.Compare(a.N, b.N), cmp.Compare(a.Z, b.Z))
}
