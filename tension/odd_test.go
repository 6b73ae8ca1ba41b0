package tension

import (
	"bytes"
	"encoding/json"
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// Random legal but odd cases: no panic, every figure finite, every sentence whole.
func TestOddCasesHoldTogether(t *testing.T) {
	counts := map[Verdict]int{}
	for seed := range uint64(runsOf(2400)) {
		a, err := Assess(oddCase(t, rand.New(rand.NewPCG(seed, 77))))
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		counts[a.Verdict]++
		text, err := json.Marshal(a)
		if err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		if bytes.Contains(text, []byte("NaN")) || bytes.Contains(text, []byte("%!")) || bytes.Contains(text, []byte("Inf")) {
			t.Errorf("seed %d: %s", seed, text)
		}
		if a.Reason == "" || a.NextStep == "" {
			t.Errorf("seed %d: no sentence", seed)
		}
		sum := 0.0
		for _, b := range a.Budget {
			sum += b.Share
		}
		if len(a.Budget) > 0 && math.Abs(sum-1) > 1e-6 {
			t.Errorf("seed %d: shares add to %g", seed, sum)
		}
		if e := a.Expected; e != nil && (e.PSlack < 0 || e.PSlack > 1 || e.POverload < 0 || e.POverload > 1 || e.PInside < 0) {
			t.Errorf("seed %d: probabilities %+v", seed, e)
		}
	}
	for _, v := range []Verdict{AsDesigned, Slack, Overload, OffDesign, Undecided, NoDesign} {
		if counts[v] < 20 {
			t.Errorf("%s came out only %d times: the cases are not odd enough", v, counts[v])
		}
	}
}

// oddCase draws a legal case from the corners: tiny and huge spans, loads and stiffnesses, moved or missing supports, missing design
// values, gross errors, odd loads and readings.
func oddCase(t *testing.T, rng *rand.Rand) Case {
	s := footbridge()
	pick := func(v ...float64) float64 { return v[rng.IntN(len(v))] }
	span := pick(3, 30, 96, 900)
	s.chord = Chord{span, span * pick(0, 0, 0.02, -0.5, 1.6)}
	w := pick(0.1, 5, 38, 900)
	ratio := pick(1e-4, 0.003, 0.02, 0.1, 0.4)
	h := w * span / 8 / ratio
	s.design.SelfWeight, s.design.DeckLoad = q(w, w*pick(0, 0.01, 0.2)), nil
	s.design.Load = survey.LoadSelfWeight
	switch rng.IntN(4) {
	case 0:
		s.design.Load, s.design.DeckLoad, s.design.SelfWeight = survey.LoadDeck, q(w, w*0.02), nil
	case 1:
		s.design.Load, s.design.DeckLoad = survey.LoadBoth, q(w*pick(0.1, 5), 0)
	}
	s.design.SpanLength, s.design.Rise = q(span*pick(1, 1, 1.0005, 1.3), 0), q(s.chord.Rise, pick(0, 0.01))
	s.design.Tension = q(h, h*pick(0, 0.05))
	s.design.AxialStiffness = q(h*pick(30, 1e3, 1e6), h*pick(0, 1))
	s.design.Temperature = q(pick(-20, 10, 60), 0)
	s.day = pick(-30, 10, 40)
	s.design.BreakingLoad = q(h*pick(1.2, 5, 50), 0)
	built, err := s.cable(1).AtTension(h, Chord{s.design.SpanLength.Value, s.design.Rise.Value}, 0)
	if err != nil {
		t.Fatal(err)
	}
	day, err := s.cable(1+pick(0, 0, 0.5, 3)).AtLength(built.Unstressed*(1+pick(0, 1e-4, -1e-4, 0.02)), s.chord, s.day-s.design.Temperature.Value)
	if err != nil {
		t.Fatal(err)
	}
	s.points, s.sigma, s.support, s.silent = 4+rng.IntN(30), pick(0.0005, 0.003, 0.05), pick(0, 0.003), rng.IntN(2) == 0
	if rng.IntN(2) == 0 {
		s.support = s.sigma
	}
	p := s.survey(day, rng)
	switch rng.IntN(6) {
	case 0:
		p.A = nil
	case 1:
		p.A, p.B = nil, nil
	case 2:
		p.A, p.B = p.B, p.A
	case 3:
		p.Points[0].Z += 3
	}
	d := s.design
	for _, drop := range []**survey.Quantity{&d.SpanLength, &d.Rise, &d.Tension, &d.Temperature, &d.AxialStiffness, &d.Expansion, &d.BreakingLoad} {
		if rng.IntN(12) == 0 {
			*drop = nil
		}
	}
	if d.Tension != nil && rng.IntN(3) == 0 {
		d.Tension, d.Sag = nil, q(built.SagMid(), 0.01)
	}
	c := s.conditions([]survey.LoadStatus{survey.LoadsNotChecked, survey.LoadsAsFiled, survey.LoadsListed}[rng.IntN(3)], pick(0, 2))
	if c.Loads == survey.LoadsListed {
		c.Listed = []survey.ListedLoad{{Load: survey.Quantity{Value: w * pick(-0.3, 0.5, -2), U: w * 0.01}, Spread: survey.AlongDeck, What: "odd"}}
	}
	if rng.IntN(6) == 0 {
		c.CableTemperature = nil
	}
	if rng.IntN(4) == 0 {
		c.Readings = []survey.Reading{{Of: survey.TensionAtA, Value: survey.Quantity{Value: day.TensionA() * pick(1, 0.5), U: day.TensionA() * 0.02}}}
	}
	if rng.IntN(5) == 0 {
		c.Readings = append(c.Readings, oddReadings(day, w, rng)...)
	}
	dp := &d
	if rng.IntN(20) == 0 {
		dp = nil
	}
	return Case{Points: p, Design: dp, Conditions: c}
}

// oddReadings are readings near and far from what such a cable would show.
func oddReadings(st State, w float64, rng *rand.Rand) (out []survey.Reading) {
	pick := func(v ...float64) float64 { return v[rng.IntN(len(v))] }
	f := math.Sqrt(st.H*9.81/w) / (2 * st.Chord.Length)
	add := func(r survey.Reading, v float64) {
		v *= pick(1, 1, 0.3, 20)
		r.Value = survey.Quantity{Value: v, U: v * pick(1e-4, 0.02, 0.5)}
		out = append(out, r)
	}
	for n := range 1 + rng.IntN(3) {
		add(survey.Reading{Of: survey.NaturalFrequency, Mode: n + 1, Sideways: rng.IntN(3) == 0, Clamped: rng.IntN(2) == 0, Bending: survey.Quantity{Value: pick(0, 100, 1e6), U: pick(0, 50)}}, f*float64(n+1))
	}
	add(survey.Reading{Of: survey.WaveReturn, Returns: 3}, 3/f)
	add(survey.Reading{Of: survey.LiftOffAtB, Lifted: survey.Quantity{Value: pick(0, 0.002, 0.5)}}, st.TensionB())
	add(survey.Reading{Of: survey.TangentAtB, Below: st.SagMid() * pick(0.5, 1, 5)}, st.SagMid())
	add(survey.Reading{Of: survey.SagAtMidSpan}, st.SagMid())
	return out
}
