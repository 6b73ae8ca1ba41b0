package fit

import (
	"math"
	"slices"
)

// Cusp is a local load on a curve: at Station (m) the slope jumps up by Kink = P/H, dimensionless, for a load P hanging on a
// cable with horizontal tension H. A negative kink is a local lift.
type Cusp struct{ Station, Kink float64 }

// maxFree is the greatest number of sizes and places of local loads that one fit may leave free.
const maxFree = 12

// gradient holds derivatives by (Z1, Z2, Curvature) and by whatever sizes and places of local loads are free.
type gradient [3 + maxFree]float64

// column says where in a gradient the derivatives by kink and place of a cusp stand, 0 = nowhere; Ratio is the kink over the
// curvature when that is what is held, m.
type column struct {
	kink, place int
	ratio       float64
	byRatio     bool
}

// piece is the part of a curve between two cusps, from an anchor towards the side away from S1. Derivatives of height and slope at
// the anchor are by the slope at S1 (place 0), the curvature (2) and the free kinks and places (3 and on).
type piece struct {
	from, to float64 // stations
	s, z, t  float64 // station, height above Z1 and slope at the anchor
	cusp     int     // at the anchor, -1: S1
	dz, dt   gradient
}

// cusped is a curve with local loads, ready for many stations. Between the loads it is the plain solution of the same
// equation; each load adds its kink to the slope. The slope at S1 is found by shooting at (S2, Z2).
type cusped struct {
	c       Curve
	columns []column
	n       int // length of the gradients in use
	pieces  []piece
	whole   gradient // of the height over Z1 at S2, like piece.dz
	failed  bool
}

// cusped prepares a curve with local loads; columns may be nil when no derivative by them is wanted.
func (c Curve) cusped(columns []column) *cusped {
	q := &cusped{c: c, columns: columns, n: 3}
	if columns == nil {
		q.columns = make([]column, len(c.Cusps))
	}
	for _, l := range q.columns {
		q.n = max(q.n, l.kink+1, l.place+1)
	}
	t := c.chord() - c.Curvature*c.length()/2
	for _, p := range c.Cusps { // exact for the parabola
		if p.Station > c.S1 && p.Station < c.S2 {
			t -= p.Kink * (c.S2 - p.Station) / c.length()
		}
	}
	size := math.Hypot(c.length(), c.Z2-c.Z1)
	last := math.Inf(1)
	for range 60 {
		q.shoot(t)
		z := q.height(c.S2, &q.whole)
		miss := c.Z2 - c.Z1 - z
		step := miss / q.whole[0]
		if !(math.Abs(step) < math.Inf(1)) {
			break
		}
		if math.Abs(miss) <= 1e-15*size || math.Abs(miss) >= last/2 && math.Abs(miss) < 1e-11*size {
			return q
		}
		last = math.Abs(miss)
		t += step
	}
	q.failed = true
	return q
}

// shoot lays out the pieces from slope t at S1, away from S1 on both sides.
func (q *cusped) shoot(t float64) {
	c := &q.c
	q.pieces = q.pieces[:0]
	home := piece{from: math.Inf(-1), to: math.Inf(1), s: c.S1, t: t, cusp: -1}
	home.dt[0] = 1
	first := 0
	for first < len(c.Cusps) && c.Cusps[first].Station <= c.S1 {
		first++
	}
	p := home
	for i := first; i < len(c.Cusps); i++ {
		p.to = c.Cusps[i].Station
		q.pieces = append(q.pieces, p)
		p = q.beyond(p, i, 1)
	}
	q.pieces = append(q.pieces, p)
	p = home
	for i := first - 1; i >= 0; i-- {
		if i == first-1 {
			q.pieces[0].from = c.Cusps[i].Station
		} else {
			p.from = c.Cusps[i].Station
			q.pieces = append(q.pieces, p)
		}
		p = q.beyond(p, i, -1)
		p.from, p.to = math.Inf(-1), c.Cusps[i].Station
	}
	if first > 0 {
		q.pieces = append(q.pieces, p)
		slices.SortFunc(q.pieces, func(a, b piece) int {
			if a.from < b.from || (a.from == b.from && a.to < b.to) {
				return -1
			}
			return 1
		})
	}
}

// beyond is the piece on the other side of cusp i; side is the direction of travel.
func (q *cusped) beyond(p piece, i int, side float64) piece {
	cusp, col := q.c.Cusps[i], q.columns[i]
	next := piece{from: cusp.Station, to: math.Inf(1), s: cusp.Station, cusp: i}
	var slope float64
	next.z, slope = q.flow(&p, cusp.Station, &next.dz, &next.dt)
	next.t = slope + side*cusp.Kink
	if col.place > 0 {
		next.dz[col.place] += slope
		next.dt[col.place] += q.c.Curvature * q.c.bend(slope)
	}
	if col.kink > 0 {
		next.dt[col.kink] += side
	}
	if col.byRatio {
		next.dt[2] += side * col.ratio
	}
	return next
}

// flow follows the equation from the anchor of a piece to a station: height over Z1 and slope there; dz and dt, unless nil, get
// their derivatives at that fixed station.
func (q *cusped) flow(p *piece, s float64, dz, dt *gradient) (z, t float64) {
	c := &q.c
	d := s - p.s
	k := c.Curvature
	rise, t, byT := c.flow(p.t, d)
	if dz != nil {
		b0, b1 := c.bend(p.t), c.bend(t)
		byK := d * d / 2 * b0
		if math.Abs(k*d) > 1e-7 {
			byK = (d*t - rise) / k
		}
		for i := range q.n {
			dz[i] = p.dz[i] + byT*p.dt[i]
			dt[i] = b1 / b0 * p.dt[i]
		}
		dz[2] += byK
		dt[2] += d * b1
		if p.cusp >= 0 {
			if at := q.columns[p.cusp].place; at > 0 {
				dz[at] -= t
				dt[at] -= k * b1
			}
		}
	}
	return p.z + rise, t
}

// flow follows the curve's equation over a distance d (m, of any sign) from slope t: rise (m), slope at the end, and the
// derivative of the rise by t (m).
func (c Curve) flow(t, d float64) (rise, end, byT float64) {
	k := c.Curvature
	switch {
	case c.SelfShare == 0:
		return d * (t + k*d/2), t + k*d, d
	case c.SelfShare == 1:
		psi, half := math.Asinh(t), k*d/2
		run := d * sinhc(half)
		return run * math.Sinh(psi+half), math.Sinh(psi + 2*half), run * math.Cosh(psi+half) / math.Hypot(1, t)
	case math.Abs(k*d) < straight:
		b := c.bend(t)
		return d * (t + k*d/2*b), t + k*d*b, d
	}
	eq := c.equation()
	psi := math.Asinh(t)
	to := eq.Reach(psi, psi+k*d, d)
	turn := 2 * math.Sinh((to-psi)/2) * math.Cosh((to+psi)/2)
	return t*d + eq.Below(psi, to, t), t + turn, turn / (k * c.bend(t))
}

// pieceAt is the place of the piece that holds a station.
func (q *cusped) pieceAt(s float64) int {
	for i := range q.pieces {
		if s < q.pieces[i].to {
			return i
		}
	}
	return len(q.pieces) - 1
}

// height is the height over Z1 at a station; g, unless nil, gets derivatives like piece.dz.
func (q *cusped) height(s float64, g *gradient) float64 {
	var dt gradient
	if g == nil {
		z, _ := q.flow(&q.pieces[q.pieceAt(s)], s, nil, nil)
		return z
	}
	z, _ := q.flow(&q.pieces[q.pieceAt(s)], s, g, &dt)
	return z
}

// at is height, slope and second derivative at a station on the smooth continuation of piece i; g, when not nil, gets the gradient
// of the height.
func (q *cusped) at(i int, s float64, g *gradient) (z, slope, bend float64) {
	if q.failed {
		return math.NaN(), math.NaN(), math.NaN()
	}
	c := &q.c
	if g == nil {
		z, slope = q.flow(&q.pieces[i], s, nil, nil)
	} else {
		var dt gradient
		z, slope = q.flow(&q.pieces[i], s, g, &dt)
		part := g[0] / q.whole[0]
		for j := 2; j < q.n; j++ {
			g[j] -= part * q.whole[j]
		}
		g[0], g[1] = 1-part, part
	}
	return c.Z1 + z, slope, c.Curvature * c.bend(slope)
}

// plain are the parts between the local loads as curves without loads, in order of station: each is defined at the loads that
// bound it, the outer ones at the ends of the whole curve or beyond.
func (c Curve) plain() []Curve {
	q := c.cusped(nil)
	reach := c.length()
	out := make([]Curve, len(q.pieces))
	for i, p := range q.pieces {
		s1, s2 := p.from, p.to
		if math.IsInf(s1, 0) {
			s1 = min(c.S1, s2-reach)
		}
		if math.IsInf(s2, 0) {
			s2 = max(c.S2, s1+reach)
		}
		z1, _, _ := q.at(i, s1, nil)
		z2, _, _ := q.at(i, s2, nil)
		out[i] = Curve{S1: s1, Z1: z1, S2: s2, Z2: z2, Curvature: c.Curvature, SelfShare: c.SelfShare}
	}
	return out
}

// partAt is the plain part that holds a station.
func (c Curve) partAt(s float64) Curve {
	parts := c.plain()
	for i := range parts[:len(parts)-1] {
		if s < c.Cusps[i].Station {
			return parts[i]
		}
	}
	return parts[len(parts)-1]
}

// lowestOf is the low point of a curve with local loads: where the slope passes through level, at a load or between loads, and
// the lowest of these when local lifts make several.
func (c Curve) lowestOf() (station, elevation float64, ok bool) {
	elevation = math.Inf(1)
	take := func(s, z float64) {
		if z < elevation {
			station, elevation, ok = s, z, true
		}
	}
	parts := c.plain()
	for i, p := range parts {
		s := p.whereSlope(0)
		if (i == 0 || s >= p.S1) && (i == len(parts)-1 || s <= p.S2) {
			take(s, p.Z(s))
		}
	}
	for i := range c.Cusps {
		if parts[i].Slope(parts[i].S2) < 0 && parts[i+1].Slope(parts[i+1].S1) > 0 {
			take(parts[i].S2, parts[i].Z2)
		}
	}
	return station, elevation, ok
}

// greatestSagOf is GreatestSag with local loads; c is defined at the ends of the chord.
func (c Curve) greatestSagOf() (station, sag float64) {
	line := func(s float64) float64 { return c.Z1 + c.chord()*(s-c.S1) }
	sag = math.Inf(-1)
	take := func(s, z float64) {
		if d := line(s) - z; s >= c.S1 && s <= c.S2 && d > sag {
			station, sag = s, d
		}
	}
	parts := c.plain()
	take(c.S1, c.Z1)
	for i, p := range parts {
		if c.Curvature != 0 {
			if s := p.whereSlope(c.chord()); (i == 0 || s >= p.S1) && (i == len(parts)-1 || s <= p.S2) {
				take(s, p.Z(s))
			}
		}
		if i > 0 {
			take(p.S1, p.Z1)
		}
	}
	return station, sag
}

// arcOf is the length between two stations, sa <= sb, with local loads.
func (c Curve) arcOf(sa, sb float64) float64 {
	sum := 0.0
	parts := c.plain()
	for i, p := range parts {
		from, to := sa, sb
		if i > 0 {
			from = max(from, p.S1)
		}
		if i < len(parts)-1 {
			to = min(to, p.S2)
		}
		if to > from {
			sum += p.ArcLength(from, to)
		}
	}
	return sum
}
