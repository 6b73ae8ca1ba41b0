package history

import (
	"math"
	"math/rand/v2"
)

const (
	// significance is the family-wise probability of finding something where there is nothing.
	significance = 0.05
	// draws is the number of simulated histories behind a family-wise probability: its standard error at 5 % is 0.15 %.
	draws = 20000
	// leastWarmth is the range of cable temperatures (degC) that can show a remainder: common practice, no source.
	leastWarmth = 3
	// fewest visits at which one that is off, or a remainder with temperature, can be told from a step or a drift.
	fewest = 4
	// nearlyAsGood is the difference of AIC up to which another reading is named: Burnham and Anderson (2002), 2.6.
	nearlyAsGood = 4
)

// candidate is a term that may be added, with what it would explain.
type candidate struct {
	term
	unit []float64 // whitened, orthogonal to the model, length 1
	z    float64
}

// candidates are the terms of the family that the visits can tell from the model. One degree of freedom has to stay: a reading that
// fits whatever was measured explains nothing.
func (m *model) candidates() (out []candidate) {
	if m.free() < 2 {
		return nil
	}
	add := func(t term) {
		rest, _, ok := m.sys.beside(m.column(t))
		if !ok {
			return
		}
		length := norm(rest)
		for i := range rest {
			rest[i] /= length
		}
		out = append(out, candidate{t, rest, dot(rest, m.sys.y)})
	}
	n := len(m.visits)
	if m.drift() == nil {
		add(term{kind: linear})
		if len(m.clock.starts) > 0 {
			add(term{kind: logTime})
		}
	}
	for g := 1; g < n; g++ {
		add(term{kind: step, no: m.visits[g].no})
	}
	if n < fewest {
		return out
	}
	for i := 1; i < n-1; i++ {
		add(term{kind: pulse, no: m.visits[i].no})
	}
	if m.warms() {
		add(term{kind: warmth})
	}
	return out
}

// warms reports whether the cable temperatures differ enough for a remainder to show.
func (m *model) warms() bool {
	if m.mean == nil {
		return false
	}
	low, high := math.Inf(1), math.Inf(-1)
	for _, v := range m.visits {
		low, high = min(low, v.Temperature.Value), max(high, v.Temperature.Value)
	}
	return high-low >= leastWarmth
}

// search adds what is found to the recorded terms until chance explains the rest. A term that what was found after it makes
// unnecessary is dropped again.
func search(m *model) *model {
	for range 2 * len(m.y) {
		all := m.candidates()
		best := greatest(all)
		if best < 0 {
			return m
		}
		p := familyWise(all, math.Abs(all[best].z))
		if p >= significance {
			return m
		}
		t := all[best].term
		t.p = p
		m = m.with(t)
		for _, o := range m.terms {
			if q, ok := m.size(o); ok && o.found() && !o.same(t) && twoSided(q.Value/q.U) > significance {
				m = m.without(o)
			}
		}
	}
	return m
}

func greatest(all []candidate) int {
	best := -1
	for i, c := range all {
		if best < 0 || math.Abs(c.z) > math.Abs(all[best].z) {
			best = i
		}
	}
	return best
}

// familyWise is the probability that the greatest |z| of a family is at least as large when there is nothing to find: Bonferroni's
// bound where that decides, else simulated from the joint normal distribution of the z with a fixed seed.
func familyWise(all []candidate, z float64) float64 {
	one := twoSided(z)
	bound := math.Min(1, float64(len(all))*one)
	if one >= significance || bound < significance/10 {
		return bound
	}
	rng := rand.New(rand.NewPCG(1, 1))
	noise := make([]float64, len(all[0].unit))
	beyond := 0
	for range draws {
		for i := range noise {
			noise[i] = rng.NormFloat64()
		}
		for _, c := range all {
			if math.Abs(dot(c.unit, noise)) >= z {
				beyond++
				break
			}
		}
	}
	return math.Min(bound, float64(beyond+1)/(draws+1))
}

// rivals are the readings that fit nearly as well in place of each found term.
func (m *model) rivals(describe func(term) string) []Rival {
	out := []Rival{}
	for _, t := range m.terms {
		if !t.found() {
			continue
		}
		all := m.without(t).candidates()
		own := 0.0
		for _, c := range all {
			if c.same(t) {
				own = c.z * c.z
			}
		}
		for _, c := range all {
			if delta := own - c.z*c.z; !c.same(t) && delta < nearlyAsGood {
				out = append(out, Rival{Instead: describe(t), Reading: describe(c.term), DeltaAIC: delta})
			}
		}
	}
	return out
}
