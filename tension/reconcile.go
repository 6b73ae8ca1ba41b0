package tension

import (
	"math"
	"slices"
	"sync"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// falseAlarm is the probability with which the global test speaks although nothing is wrong; testPower is that with which it finds an error of
// the size that Piece.Detects names (Baarda 1968 uses the same 80 %; 5 % goes with the verdict's 95 %).
const (
	falseAlarm = 1 - sure
	testPower  = 0.80
)

// evidenceRow is one condition of the reconciliation.
type evidenceRow struct {
	name    string
	reading *readInput // nil: load, length or chord
	length  bool
	chord   int // inSpan or inRise: the supports as designed; 0 = not
}

const (
	pieceLoad    = "load on record"
	pieceLength  = "unstressed length of the design"
	pieceShape   = "shape (curvature)"
	pieceAxial   = "axial stiffness"
	pieceWarmth  = "cable temperature"
	pieceReading = "reading: " // and what was read
)

// evidenceRows are the conditions that this span has evidence for, but the one left out. The load is evidence only when somebody looked at it.
func (j *judgement) evidenceRows(without string) (rows []evidenceRow) {
	add := func(r evidenceRow) {
		if r.name != without {
			rows = append(rows, r)
		}
	}
	if j.record != survey.LoadsNotChecked {
		add(evidenceRow{name: pieceLoad})
	}
	if j.p.known(outS0Design) && j.p.known(outHExpected) {
		add(evidenceRow{name: pieceLength, length: true})
	}
	for i := range j.in.readings {
		r := &j.in.readings[i]
		if r.unused == "" {
			add(evidenceRow{name: pieceReading + r.name, reading: r})
		}
	}
	return rows
}

// reconcile adjusts all evidence and finds the piece that disagrees. It is silent when nothing checks anything.
func (j *judgement) reconcile() {
	if j.a.HorizontalTension == nil || !(j.p.y[outHanging] > 0) {
		return
	}
	rows := j.evidenceRows("")
	if len(rows) < 2 {
		return
	}
	s, err := j.adjustRows(rows)
	if err != nil {
		j.notReconciled = err
		return
	}
	j.adjusted = s
	r := &Reconciled{ChiSquare: s.chi, DegreesOfFreedom: len(rows) - 1, LoadOnRecord: j.p.quantity(outHanging), Looked: j.record != survey.LoadsNotChecked}
	r.Chance = distuv.ChiSquared{K: float64(r.DegreesOfFreedom)}.Survival(s.chi)
	r.Pieces = j.pieces(s, rows)
	r.judge()
	if r.Outcome == OneDisagrees {
		r.Without = r.Suspected[0]
		rest := j.evidenceRows(r.Without)
		if r.Without == pieceShape || len(rest) < 2 {
			s = nil
		} else if s, err = j.adjustRows(rest); err != nil {
			s = nil
		}
	}
	if s != nil && (r.Outcome == Agrees || r.Outcome == OneDisagrees) {
		r.figures(s)
	}
	r.Says = reconciledSentence(r)
	j.a.Reconciled = r
}

// figures sets tension, load and unstressed length with their covariance.
func (r *Reconciled) figures(s *adjusted) {
	h := math.Exp(s.h)
	values := append([]float64{h}, s.z...)
	for i := range values {
		row := make([]float64, len(values))
		for k := range values {
			row[k] = s.cov.At(i, k)
			if i == 0 {
				row[k] *= h
			}
			if k == 0 {
				row[k] *= h
			}
		}
		r.Covariance = append(r.Covariance, row)
		*[]**Quantity{&r.HorizontalTension, &r.Load, &r.UnstressedLength}[i] = &Quantity{Value: values[i], U: math.Sqrt(row[i])}
	}
}

// adjustRows sets up and solves the adjustment of some conditions.
func (j *judgement) adjustRows(rows []evidenceRow) (*adjusted, error) {
	c := j.conditionsOf(rows, j.in.statedMoves())
	if j.record == survey.LoadsNotChecked && j.p.known(outHRead) && j.p.y[outHRead] > 0 {
		return adjust(c, math.Log(j.p.y[outHRead]))
	}
	figures := []int{0, 1}[:c.figures]
	start, err := j.linearAtRecord(rows, figures)
	if err != nil {
		return nil, err
	}
	return adjustFrom(c, math.Log(j.p.y[outH]), start)
}

// conditionsOf are the conditions of some rows; figures are the load and, where there is a designed length, the unstressed length.
func (j *judgement) conditionsOf(rows []evidenceRow, moves [][]step) conditions {
	c := conditions{rows: len(rows), errors: len(moves), figures: 1}
	if j.hasLength() {
		c.figures = 2
	}
	x := make([]float64, len(j.in.x))
	c.at = func(e []float64, ln float64, f, z []float64) error {
		copy(x, j.in.x)
		for d, m := range moves {
			for _, st := range m {
				x[st.at] += e[d] * st.by
			}
		}
		return j.in.misfits(x, math.Exp(ln), rows, f, z)
	}
	return c
}

func (j *judgement) hasLength() bool { return j.p.known(outS0Design) && j.p.known(outHExpected) }

// allRows are all conditions of this span, whether or not somebody looked at the loads: load on record, unstressed length and supports as
// designed, readings.
func (j *judgement) allRows() []evidenceRow {
	rows := []evidenceRow{{name: pieceLoad}}
	if j.hasLength() {
		rows = append(rows, evidenceRow{name: pieceLength, length: true})
		if j.in.frame.surveyed && j.in.have[inSpan] {
			rows = append(rows, evidenceRow{name: "designed span", chord: inSpan})
			if j.in.have[inRise] && !j.in.have[inTilt] {
				rows = append(rows, evidenceRow{name: "designed rise", chord: inRise})
			}
		}
	}
	for i := range j.in.readings {
		if r := &j.in.readings[i]; r.unused == "" {
			rows = append(rows, evidenceRow{name: pieceReading + r.name, reading: r})
		}
	}
	return rows
}

// linearAtRecord are the conditions of some rows linearised at the estimates and the tension that the load on record gives; all rows are
// worked out once and serve every adjustment that starts there. Figures are numbers of the usual ones, nil = the misfits of the rows.
func (j *judgement) linearAtRecord(rows []evidenceRow, figures []int) (*linearised, error) {
	if j.atRecord == nil {
		all := j.allRows()
		moves := j.in.statedMoves()
		l, err := j.conditionsOf(all, moves).linear(make([]float64, len(moves)), math.Log(j.p.y[outH]))
		if err != nil {
			return nil, err
		}
		j.atRecord, j.atRecordRows = l, all
	}
	var at []int
	for _, r := range rows {
		at = append(at, slices.IndexFunc(j.atRecordRows, func(o evidenceRow) bool { return o.name == r.name }))
	}
	return j.atRecord.pick(at, figures), nil
}

// misfits fills the conditions, each relative, and the figures load and unstressed length.
func (in *inputs) misfits(x []float64, h float64, rows []evidenceRow, f, z []float64) error {
	s := in.sight(x)
	z[0] = h * x[inCurvature]
	var s0, design float64
	if len(z) > 1 {
		if s.far != "" {
			return errNotDetermined
		}
		var y outputs
		in.geometry(&y, s.c, x)
		st, _ := in.design(&y, x)
		if st == nil {
			return errNotDetermined
		}
		design = st.Unstressed
		dt := x[inTemperature] - x[inDesignTemp]
		var err error
		if s0, err = in.unstressed(x, s.c, s.load, s.ch, dt, h, in.stretchFactor(x, s.c, s.ch)); err != nil {
			return err
		}
		z[1] = s0
	}
	for i, r := range rows {
		switch {
		case r.length:
			f[i] = s0/design - 1
		case r.reading != nil:
			p, err := s.predicted(r.reading, h)
			if err != nil {
				return err
			}
			f[i] = p/x[r.reading.at] - 1
		case r.chord == inSpan:
			f[i] = (x[inStationB]-x[inStationA])/x[inSpan] - 1
		case r.chord == inRise:
			f[i] = (s.ch.Rise - x[inRise]) / x[inSpan]
		default:
			f[i] = h*x[inCurvature]/in.hanging(x, s.load, h, s.per) - 1
		}
	}
	return nil
}

// pieces are the rows and the inputs behind them, each with its test.
func (j *judgement) pieces(s *adjusted, rows []evidenceRow) (out []Piece) {
	limit := detectable(len(rows) - 1)
	add := func(p Piece, g *mat.VecDense, unit float64) {
		if w, size, u := s.test(g); !math.IsInf(u, 1) {
			needed, apart, detects := p.Given.Value+size*unit, u*unit, limit*u*unit
			p.Needed, p.UApart, p.Residual, p.Detects = &needed, &apart, &w, &detects
		}
		out = append(out, p)
	}
	for i, r := range rows {
		g := mat.NewVecDense(len(rows), nil)
		g.SetVec(i, 1)
		p := Piece{Name: r.name}
		switch {
		case r.length:
			p.Given, p.Unit = j.p.must(outS0Design), "m"
		case r.reading != nil:
			p.Given, p.Unit = r.reading.Value, r.reading.Unit()
		default:
			p.Given, p.Unit = j.p.must(outHanging), "N/m"
		}
		add(p, g, p.Given.Value)
	}
	for _, in := range []struct {
		name string
		at   int
		unit string
	}{{pieceShape, inCurvature, "1/m"}, {pieceAxial, inAxial, "N"}, {pieceWarmth, inTemperature, "degC"}} {
		u := j.uOf(in.at)
		g := j.byInput(s, in.at, u, rows)
		if u == 0 || g == nil {
			continue
		}
		g.ScaleVec(-1, g) // the input is off by minus what the conditions are
		add(Piece{Name: in.name, Given: Quantity{Value: j.in.x[in.at], U: u}, Unit: in.unit}, g, u)
	}
	return out
}

// uOf is the standard uncertainty of one input.
func (j *judgement) uOf(at int) float64 {
	sum := 0.0
	for _, m := range j.in.statedMoves() {
		for _, st := range m {
			if st.at == at {
				sum += st.by * st.by
			}
		}
	}
	return math.Sqrt(sum)
}

// byInput is what one standard deviation of one input does to the conditions at the solution, nil when it cannot be worked out.
func (j *judgement) byInput(s *adjusted, at int, u float64, rows []evidenceRow) *mat.VecDense {
	x := append([]float64(nil), j.in.x...)
	for d, m := range j.in.statedMoves() {
		for _, st := range m {
			x[st.at] += s.e[d] * st.by
		}
	}
	z := make([]float64, len(s.z))
	f0, f1 := make([]float64, len(rows)), make([]float64, len(rows))
	if j.in.misfits(x, math.Exp(s.h), rows, f0, z) != nil {
		return nil
	}
	x[at] += probe * u
	if j.in.misfits(x, math.Exp(s.h), rows, f1, z) != nil {
		return nil
	}
	g := mat.NewVecDense(len(rows), nil)
	for i := range rows {
		g.SetVec(i, (f1[i]-f0[i])/probe)
	}
	return g
}

// judge finds the outcome: nothing disagrees when the global test is silent. Else every piece is taken out in turn; those without
// which the rest holds together are suspected. The shape is suspected only when no other piece is, because its own points have tested it.
func (r *Reconciled) judge() {
	if r.Chance >= falseAlarm {
		r.Outcome = Agrees
		return
	}
	rest := func(p Piece) bool {
		left := math.Max(0, r.ChiSquare-*p.Residual**p.Residual)
		return r.DegreesOfFreedom == 1 || distuv.ChiSquared{K: float64(r.DegreesOfFreedom - 1)}.Survival(left) >= falseAlarm
	}
	for _, main := range []bool{true, false} {
		for _, p := range r.Pieces {
			if p.Residual != nil && p.main() == main && (main || p.Name == pieceShape) && rest(p) {
				r.Suspected = append(r.Suspected, p.Name)
			}
		}
		if len(r.Suspected) > 0 {
			break
		}
	}
	switch len(r.Suspected) {
	case 0:
		r.Outcome = SeveralWrong
	case 1:
		r.Outcome = OneDisagrees
	default:
		r.Outcome = CannotTell
	}
}

// piece is a piece by its name.
func (r *Reconciled) piece(name string) Piece {
	for _, p := range r.Pieces {
		if p.Name == name {
			return p
		}
	}
	return Piece{}
}

// detectables are the sizes for few degrees of freedom, worked out once each.
var detectables = func() (out [12]func() float64) {
	for i := range out {
		out[i] = sync.OnceValue(func() float64 { return math.Sqrt(noncentrality(i, falseAlarm, testPower)) })
	}
	return out
}()

// detectable is the size, in standard uncertainties, of an error that the global test finds with the power asked for.
func detectable(dof int) float64 {
	if dof < len(detectables) {
		return detectables[dof]()
	}
	return math.Sqrt(noncentrality(dof, falseAlarm, testPower))
}

// noncentrality is that of the chi-square whose probability of passing the limit at the given false alarm is the given power: the size of
// what a test finds, squared, in standard uncertainties.
func noncentrality(dof int, alarm, power float64) float64 {
	limit := distuv.ChiSquared{K: float64(dof)}.Quantile(1 - alarm)
	found := func(l float64) float64 { // noncentral chi-square as a Poisson mixture (Johnson, Kotz and Balakrishnan 1995, ch. 29)
		sum, p := 0.0, math.Exp(-l/2)
		for i := range 200 {
			sum += p * distuv.ChiSquared{K: float64(dof + 2*i)}.Survival(limit)
			p *= l / 2 / float64(i+1)
		}
		return sum
	}
	lo, hi := 0.0, 60.0
	for range 50 {
		mid := (lo + hi) / 2
		if found(mid) < power {
			lo = mid
		} else {
			hi = mid
		}
	}
	return (lo + hi) / 2
}
