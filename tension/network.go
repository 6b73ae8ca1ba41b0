package tension

import (
	"math"

	"gonum.org/v1/gonum/mat"

	"tautbook/survey"
)

// network holds the end forces of the spans of one cable, each a value with its effects by independent input.
type network struct {
	chain []link
	spans []*spanForces
	width int         // number of independent inputs
	by    [][]float64 // per span and force: effect of each input, forceCount rows a span
}

func newNetwork(list []Assessment, chain []link) *network {
	n := &network{chain: chain}
	index := map[string]int{}
	for _, l := range chain {
		f := list[l.at].forces
		n.spans = append(n.spans, f)
		for _, e := range f.effects {
			if _, ok := index[e.key]; !ok {
				index[e.key] = len(index)
			}
		}
	}
	n.width = len(index)
	for _, f := range n.spans {
		rows := make([][]float64, forceCount)
		for k := range rows {
			rows[k] = make([]float64, n.width)
			for _, e := range f.effects {
				rows[k][index[e.key]] += e.by[k]
			}
		}
		n.by = append(n.by, rows...)
	}
	return n
}

// effect is the effect of each input on one force of one span.
func (n *network) effect(span, force int) []float64 { return n.by[span*forceCount+force] }

func (n *network) quantity(span, force int) Quantity {
	return Quantity{Value: n.spans[span].y[force], U: size(n.effect(span, force))}
}

// relative is the effect on the logarithm of a force.
func (n *network) relative(span, force int) []float64 {
	return mixed(n.width, part{1 / n.spans[span].y[force], n.effect(span, force)})
}

// part is a factor on an effect.
type part struct {
	factor float64
	effect []float64
}

func mixed(width int, parts ...part) []float64 {
	out := make([]float64, width)
	for _, p := range parts {
		for i, v := range p.effect {
			out[i] += p.factor * v
		}
	}
	return out
}

func size(v []float64) float64 { return math.Sqrt(dot(v, v)) }

func dot(a, b []float64) (sum float64) {
	for i := range a {
		sum += a[i] * b[i]
	}
	return sum
}

// near and far are the ends of a span as they come along the cable: 0 for A, 1 for B.
func (n *network) near(span int) int {
	if n.chain[span].reversed {
		return 1
	}
	return 0
}

func (n *network) far(span int) int { return 1 - n.near(span) }

// over is how the cable passes over the support before span i; the second result is false when the two spans say two things.
func (n *network) over(i int) (survey.SupportBetween, bool) {
	at := func(span, which int) survey.SupportBetween {
		if which == 0 {
			return n.spans[span].overA
		}
		return n.spans[span].overB
	}
	from, to := at(i-1, n.far(i-1)), at(i, n.near(i))
	switch {
	case from == to || to == "":
		return from, true
	case from == "":
		return to, true
	}
	return "", false
}

func (n *network) disagree(i int) bool { _, ok := n.over(i); return !ok }

// support is the support before span i: the forces of the two sides and what they make together.
func (n *network) support(list []Assessment, i int, over survey.SupportBetween) SupportForce {
	p, q := n.far(i-1), n.near(i)
	f, g := n.spans[i-1], n.spans[i]
	s := SupportForce{From: list[n.chain[i-1].at].Span, To: list[n.chain[i].at].Span, Over: over, Surveyed: f.surveyed(p) && g.surveyed(q)}
	if over == "" {
		s.Over, _ = n.over(i)
	}
	s.TensionFrom, s.TensionTo = n.quantity(i-1, forceT+p), n.quantity(i, forceT+q)
	minus := func(k, m int) Quantity {
		return Quantity{Value: g.y[m] - f.y[k], U: size(mixed(n.width, part{1, n.effect(i, m)}, part{-1, n.effect(i-1, k)}))}
	}
	s.TensionStep, s.HorizontalStep = minus(forceT+p, forceT+q), minus(forceH, forceH)
	n.resultant(&s, i)
	return s
}

// pull is the force of one span on a support at one of its ends in east, north and up, with the effects on each. The cable pulls the
// support toward the span and down by as much as the support holds it up.
func (n *network) pull(span, which int) (v [3]float64, by [3][]float64) {
	f := n.spans[span]
	sin, cos := math.Sincos(f.azimuth)
	toward := 1.0
	if which == 1 {
		toward = -1
	}
	h, up, left := n.effect(span, forceH), n.effect(span, forceV+which), n.effect(span, forceLeft+which)
	v = [3]float64{toward*sin*f.y[forceH] + cos*f.y[forceLeft+which], toward*cos*f.y[forceH] - sin*f.y[forceLeft+which], -f.y[forceV+which]}
	by[0] = mixed(n.width, part{toward * sin, h}, part{cos, left})
	by[1] = mixed(n.width, part{toward * cos, h}, part{-sin, left})
	by[2] = mixed(n.width, part{-1, up})
	return v, by
}

// resultant fills the force of both spans on the support before span i, and the bend of the cable over it. The azimuths of
// the spans count as exact.
func (n *network) resultant(s *SupportForce, i int) {
	before, byBefore := n.pull(i-1, n.far(i-1))
	after, byAfter := n.pull(i, n.near(i))
	var v [3]float64
	var by [3][]float64
	for k := range 3 {
		v[k], by[k] = before[k]+after[k], mixed(n.width, part{1, byBefore[k]}, part{1, byAfter[k]})
	}
	e, nn := n.ahead(i)
	s.Along = Quantity{Value: v[0]*e + v[1]*nn, U: size(mixed(n.width, part{e, by[0]}, part{nn, by[1]}))}
	s.Left = Quantity{Value: v[1]*e - v[0]*nn, U: size(mixed(n.width, part{e, by[1]}, part{-nn, by[0]}))}
	s.Down = Quantity{Value: -v[2], U: size(by[2])}
	r, h := math.Hypot(math.Hypot(v[0], v[1]), v[2]), math.Hypot(v[0], v[1])
	s.Resultant = Quantity{Value: r, U: size(mixed(n.width, part{v[0] / r, by[0]}, part{v[1] / r, by[1]}, part{v[2] / r, by[2]}))}
	s.ResultantAzimuth = math.Mod(math.Atan2(v[0], v[1])*180/math.Pi+360, 360)
	s.ResultantFromDown = Quantity{Value: math.Atan2(h, -v[2]) * 180 / math.Pi, U: s.Along.U / r * 180 / math.Pi}
	if h > 0 {
		flat := mixed(n.width, part{v[0] / h, by[0]}, part{v[1] / h, by[1]})
		s.ResultantFromDown.U = size(mixed(n.width, part{-v[2] / (r * r), flat}, part{h / (r * r), by[2]})) * 180 / math.Pi
	}
	n.friction(s, i, before, after)
}

// ahead is the unit vector in plan of the mean direction along the cable at the support before span i.
func (n *network) ahead(i int) (east, north float64) {
	for _, span := range []int{i - 1, i} {
		sin, cos := math.Sincos(n.spans[span].azimuth)
		if n.chain[span].reversed {
			sin, cos = -sin, -cos
		}
		east, north = east+sin, north+cos
	}
	size := math.Hypot(east, north)
	if size < 1e-9 { // the cable turns back: there is no direction ahead, take that of the first span
		sin, cos := math.Sincos(n.spans[i-1].azimuth)
		return sin, cos
	}
	return east / size, north / size
}

// friction fills the bend of the cable and the coefficient of friction that would hold the step of tension on it: ln(T2/T1) / bend
// (Euler 1769, Eytelwein 1808).
func (n *network) friction(s *SupportForce, i int, before, after [3]float64) {
	t1, t2 := s.TensionFrom.Value, s.TensionTo.Value
	cos := -(before[0]*after[0] + before[1]*after[1] + before[2]*after[2]) / (t1 * t2)
	bend := math.Acos(math.Max(-1, math.Min(1, cos)))
	p, q := n.far(i-1), n.near(i)
	sign := func(which int) float64 { return 1 - 2*float64(which) }
	// The slopes along the cable, from span to span: the part of the bend that lies in the vertical plane carries its uncertainty.
	change := mixed(n.width, part{-sign(1 - p), n.effect(i-1, forceSlope+p)}, part{sign(q), n.effect(i, forceSlope+q)})
	s.Bend = Quantity{Value: bend * 180 / math.Pi, U: size(change) * 180 / math.Pi}
	if s.Down.Value <= 0 || bend <= 2*size(change) {
		return
	}
	mu := math.Log(t2/t1) / bend
	turn := mu / bend // d mu / d bend, negative for a bend downward over the support, where the slope falls
	by := mixed(n.width, part{1 / (bend * t2), n.effect(i, forceT+q)}, part{-1 / (bend * t1), n.effect(i-1, forceT+p)}, part{turn, change})
	s.FrictionNeeded = &Quantity{Value: mu, U: size(by)}
}

// condition is one equation between the logarithms of the forces of two sides: value must be 0.
type condition struct {
	value   float64
	by      []float64 // effect of each input on the value
	support int
}

func (c condition) u() float64 { return size(c.by) }

// condition is what a free support before span i demands; false when it demands nothing.
func (n *network) condition(i int, over survey.SupportBetween) (condition, bool) {
	from, to := forceH, forceH
	switch over {
	case survey.BetweenEqualTension:
		from, to = forceT+n.far(i-1), forceT+n.near(i)
	case survey.BetweenEqualHorizontal:
	default:
		return condition{}, false
	}
	k := condition{value: math.Log(n.spans[i].y[to] / n.spans[i-1].y[from])}
	k.by = mixed(n.width, part{1, n.relative(i, to)}, part{-1, n.relative(i-1, from)})
	return k, k.u() > 0
}

// adjustment is the least-squares solution of conditions: multipliers w = M^-1 c with M the covariance of the conditions.
type adjustment struct {
	conditions []condition
	m          mat.Cholesky
	w          *mat.VecDense
	sum        float64 // c' M^-1 c
}

// fulfil sets up the normal equations of the conditions. Conditions at different supports are never dependent, so M is regular.
func fulfil(conditions []condition) adjustment {
	k := len(conditions)
	a := adjustment{conditions: conditions, w: mat.NewVecDense(k, nil)}
	m, c := mat.NewSymDense(k, nil), mat.NewVecDense(k, nil)
	for i := range k {
		c.SetVec(i, conditions[i].value)
		for j := range i + 1 {
			m.SetSym(i, j, dot(conditions[i].by, conditions[j].by))
		}
	}
	if !a.m.Factorize(m) || a.m.SolveVecTo(a.w, c) != nil {
		a.sum = math.Inf(1) // contradictory to rounding: no condition can be kept
		return a
	}
	a.sum = mat.Dot(c, a.w)
	return a
}

// correct is a figure with the effects of the inputs on it, brought under the conditions.
func (a *adjustment) correct(value float64, by []float64) Quantity {
	k := len(a.conditions)
	cov := mat.NewVecDense(k, nil)
	for i, c := range a.conditions {
		cov.SetVec(i, dot(by, c.by))
	}
	var gain mat.VecDense
	if a.m.SolveVecTo(&gain, cov) != nil {
		return Quantity{Value: value, U: size(by)}
	}
	variance := dot(by, by) - mat.Dot(cov, &gain)
	return Quantity{Value: value - mat.Dot(cov, a.w), U: math.Sqrt(math.Max(0, variance))}
}
