package tension

import (
	"errors"
	"math"
	"slices"
)

// trials are adjustments of all evidence of a span, each with something set free. Rows: load on record, unstressed length as designed,
// supports as designed, readings. The load counts as it is filed even when nobody looked at it: what is asked is what would have to be
// different.
type trials struct {
	j     *judgement
	rows  []evidenceRow
	scale []float64 // standard uncertainty of each row by itself; conditions are divided by it
	off   []bool    // rows that are left out of every trial: supports that stand elsewhere
	null  *trial    // everything as on record
}

// trialOptions say what a trial sets free.
type trialOptions struct {
	drop []int  // numbers of rows
	free []step // an input that errs by any amount; by is about the size of such an error
}

// trial is one adjustment.
type trial struct {
	*adjusted
	freed float64 // size of the freed error in steps
	u     float64
	dof   int
}

// newTrials lays out the rows and adjusts them as on record.
func (j *judgement) newTrials() (*trials, error) {
	t := &trials{j: j, rows: j.allRows()}
	t.scale, t.off = make([]float64, len(t.rows)), make([]bool, len(t.rows))
	for i := range t.scale {
		t.scale[i] = 1
	}
	start, err := t.measure()
	if err != nil {
		return nil, err
	}
	s, err := adjustFrom(t.conditions(trialOptions{}, j.in.statedMoves()), math.Log(j.p.y[outH]), start)
	if err != nil {
		return nil, err
	}
	t.null = &trial{adjusted: s, dof: len(t.rows) - 1}
	return t, nil
}

// measure sets the scale of each row, its standard uncertainty at the tension that the load on record gives, and returns the conditions
// linearised there.
func (t *trials) measure() (*linearised, error) {
	l, err := t.j.linearAtRecord(t.rows, nil)
	if err != nil {
		return nil, err
	}
	for i := range t.rows {
		u := math.Sqrt(dot(l.a.RawRowView(i), l.a.RawRowView(i)))
		if !(u > 0) || math.IsInf(u, 0) {
			return nil, errNotDetermined // a condition without any uncertainty cannot be weighed
		}
		t.scale[i] = u
		l.f[i] /= u
		l.b.SetVec(i, l.b.AtVec(i)/u)
		for d, v := range l.a.RawRowView(i) {
			l.a.Set(i, d, v/u)
		}
	}
	return l, nil
}

// kept are the numbers of the rows of a trial.
func (t *trials) kept(o trialOptions) (out []int) {
	for i := range t.rows {
		if !t.off[i] && !slices.Contains(o.drop, i) {
			out = append(out, i)
		}
	}
	return out
}

// conditions are those of a trial; figures are load, unstressed length and the misfit of every row, relative.
func (t *trials) conditions(o trialOptions, moves [][]step) conditions {
	kept := t.kept(o)
	c := conditions{rows: len(kept), errors: len(moves), figures: len(t.rows)}
	every := t.j.conditionsOf(t.rows, moves)
	all, z := make([]float64, len(t.rows)), make([]float64, every.figures)
	c.at = func(e []float64, ln float64, f, figures []float64) error {
		if err := every.at(e, ln, all, z); err != nil {
			return err
		}
		for k, i := range kept {
			f[k] = all[i] / t.scale[i]
		}
		copy(figures, all)
		return nil
	}
	return c
}

// try adjusts the rows that are kept.
func (t *trials) try(o trialOptions) (*trial, error) {
	moves := t.j.in.statedMoves()
	if len(o.free) > 0 {
		moves = append(slices.Clip(slices.Clone(moves)), o.free)
	}
	kept := t.kept(o)
	if len(kept) == 0 {
		return nil, errNotDetermined
	}
	s, err := adjust(t.conditions(o, moves), math.Log(t.j.p.y[outH]))
	if err != nil {
		return nil, err
	}
	out := &trial{adjusted: s, dof: len(kept) - 1}
	if len(o.free) > 0 {
		last := len(moves) - 1
		out.freed = s.e[last]
		out.chi -= out.freed * out.freed
		out.dof--
		out.u = s.uError(last)
	}
	return out, nil
}

// uError is the standard uncertainty of one adjusted error: its variance is 1 - a'Q a, a its column in the conditions and Q the cofactor of
// the correlates.
func (s *adjusted) uError(d int) float64 {
	n, _ := s.a.Dims()
	v := 1.0
	for i := range n {
		for k := range n {
			v -= s.a.At(i, d) * s.tests.At(i, k) * s.a.At(k, d)
		}
	}
	return math.Sqrt(math.Max(v, 0))
}

// tension is H of a trial.
func (s *trial) tension() *Quantity {
	h := math.Exp(s.h)
	return &Quantity{Value: h, U: h * math.Sqrt(s.cov.At(0, 0))}
}

// figure is the relative misfit of a row at the solution of a trial.
func (t *trials) figure(s *trial, row int) *Quantity {
	u := math.Sqrt(math.Max(s.cov.At(row+1, row+1), 0))
	if math.IsNaN(u) {
		return nil
	}
	return &Quantity{Value: s.z[row], U: u}
}

// direct is the misfit of a row at the estimates, before any adjustment, with its standard uncertainty.
func (t *trials) direct(row int) Quantity {
	all, z := make([]float64, len(t.rows)), make([]float64, 2)
	if t.j.in.misfits(append([]float64(nil), t.j.in.x...), t.j.p.y[outH], t.rows, all, z) != nil {
		return Quantity{U: math.Inf(1)}
	}
	return Quantity{Value: all[row], U: t.scale[row]}
}

// unit is what a relative misfit of a row is relative to: N/m, m, or what was read.
func (t *trials) unit(row int) float64 {
	y, x := &t.j.p.y, t.j.in.x
	switch r := t.rows[row]; {
	case r.length:
		return y[outS0Design]
	case r.chord != 0:
		return x[inSpan]
	case r.reading != nil:
		return r.reading.Value.Value
	default:
		return y[outHanging]
	}
}

// moved is the adjustment with the supports as they stand, nil when they stand as designed.
func (t *trials) moved() *trial {
	if !slices.Contains(t.off, true) {
		return nil
	}
	s, err := t.try(trialOptions{})
	if err != nil {
		return nil
	}
	return s
}

// both frees load and length together: nil unless a reading gives the tension.
func (t *trials) both() *Both {
	s, err := t.try(trialOptions{drop: []int{0, 1}})
	if errors.Is(err, errNotDetermined) || err != nil {
		return nil
	}
	if survival(s.chi, s.dof) < falseAlarm {
		return nil
	}
	load, length := t.figure(s, 0), t.figure(s, 1)
	if load == nil || length == nil {
		return nil
	}
	return &Both{Load: times(*load, t.unit(0)), Length: times(*length, t.unit(1))}
}

// times is a quantity times an exact factor.
func times(q Quantity, by float64) Quantity {
	return Quantity{Value: q.Value * by, U: math.Abs(q.U * by)}
}
