package history

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// model is a series read by some terms.
type model struct {
	series
	clock clock
	terms []term
	mean  *float64 // cable temperature, nil when a visit has none

	sys      *system
	b        []float64
	cov      [][]float64
	chi2     float64
	widening float64
}

// newModel fits the terms to the series; terms that add nothing to those before them are left out.
func newModel(s series, c clock, terms []term) *model {
	m := &model{series: s, clock: c, mean: meanTemperature(s), sys: newSystem(s.y, s.u, s.c), widening: 1}
	for _, t := range terms {
		if m.sys.add(m.column(t)) {
			m.terms = append(m.terms, t)
		}
	}
	m.b, m.cov, m.chi2 = m.sys.solve()
	return m
}

func meanTemperature(s series) *float64 {
	sum := 0.0
	for _, v := range s.visits {
		if v.Temperature == nil {
			return nil
		}
		sum += v.Temperature.Value
	}
	sum /= float64(len(s.visits))
	return &sum
}

func (m *model) place(i int) place {
	v := m.visits[i]
	p := place{no: v.no, at: v.at}
	if m.mean != nil {
		p.warm = v.Temperature.Value - *m.mean
	}
	return p
}

func (m *model) column(t term) []float64 {
	out := make([]float64, len(m.visits))
	for i := range out {
		out[i] = m.clock.at(t, m.place(i))
	}
	return out
}

func (m *model) free() int { return len(m.y) - len(m.terms) }

// with is the model with one more term, without is it with one less.
func (m *model) with(t term) *model {
	return newModel(m.series, m.clock, append(append([]term(nil), m.terms...), t))
}

func (m *model) without(t term) *model {
	var rest []term
	for _, o := range m.terms {
		if !o.same(t) {
			rest = append(rest, o)
		}
	}
	return newModel(m.series, m.clock, rest)
}

// size is the estimate of a term; ok is false when it could not be told from the others.
func (m *model) size(t term) (q Quantity, ok bool) {
	for j, o := range m.terms {
		if o.same(t) {
			return Quantity{Value: m.b[j], U: m.widening * math.Sqrt(m.cov[j][j])}, true
		}
	}
	return Quantity{}, false
}

func (m *model) row(p place) []float64 {
	w := make([]float64, len(m.terms))
	for j, t := range m.terms {
		w[j] = m.clock.at(t, p)
	}
	return w
}

// predict is the figure at a place with the standard uncertainty of the fitted course.
func (m *model) predict(p place) Quantity {
	w := m.row(p)
	variance := 0.0
	for i := range w {
		variance += w[i] * dot(m.cov[i], w)
	}
	return Quantity{Value: dot(w, m.b), U: m.widening * math.Sqrt(math.Max(variance, 0))}
}

// indexOf is the place of a visit in the series by its number among all visits.
func (m *model) indexOf(no int) int {
	for i, v := range m.visits {
		if v.no == no {
			return i
		}
	}
	return len(m.visits)
}

// drift is the drift of the model, nil for none.
func (m *model) drift() *term {
	for i := range m.terms {
		if m.terms[i].drifts() {
			return &m.terms[i]
		}
	}
	return nil
}

// test holds the visits against the model and widens its uncertainties when they scatter more than stated (Birge 1932).
func (m *model) test() FitTest {
	t := FitTest{ChiSquare: m.chi2, DegreesOfFreedom: m.free(), P: 1, Widening: 1}
	if t.DegreesOfFreedom > 0 {
		t.P = distuv.ChiSquared{K: float64(t.DegreesOfFreedom)}.Survival(m.chi2)
		if t.P < 0.01 {
			t.Widening = math.Sqrt(m.chi2 / float64(t.DegreesOfFreedom))
		}
	} else {
		t.ChiSquare = 0
	}
	m.widening = t.Widening
	return t
}

// twoSided is the probability of a standard normal deviate at least as far from zero.
func twoSided(z float64) float64 { return 2 * distuv.UnitNormal.Survival(math.Abs(z)) }
