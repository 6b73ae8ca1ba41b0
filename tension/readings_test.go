package tension

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// Every kind of reading of a known state, worked by other means than the model's: force from the exact state, lift-off by drawing length
// out of it, sags and sightings from its exact heights.
func TestPredictedReadings(t *testing.T) {
	for _, s := range []site{footbridge(), mainCable(), guy()} {
		st := s.truth(t)
		s.sigma, s.support = 1e-7, 1e-7
		const lifted = 0.004
		shorter, err := st.Cable.AtLength(st.Unstressed-lifted, st.Chord, st.DT)
		if err != nil {
			t.Fatal(err)
		}
		below := st.SagMid() * 0.7
		readings := []survey.Reading{{Of: survey.HorizontalTension}, {Of: survey.TensionAtA}, {Of: survey.TensionAtB}, {Of: survey.LiftOffAtA}, {Of: survey.LiftOffAtB, Lifted: survey.Quantity{Value: lifted}},
			{Of: survey.SagAtMidSpan}, {Of: survey.TangentAtB, Below: below}}
		want := []float64{st.H, st.TensionA(), st.TensionB(), st.TensionA(), shorter.TensionB(), st.SagMid(), tangentByHeights(st, below)}
		tol := []float64{1e-4, 1e-4, 1e-4, 1e-4, 1e-3, 1e-5, 1e-5}
		for i := range readings {
			readings[i].Value = survey.Quantity{Value: want[i], U: want[i] / 100}
		}
		d := s.design
		j := judged(t, Case{Points: s.survey(st, rand.New(rand.NewPCG(4, 4))), Design: &d, Conditions: survey.Conditions{CableTemperature: q(s.day, 0), Readings: readings}})
		at := j.in.sight(j.in.x)
		for i := range readings {
			r := &j.in.readings[i]
			got, err := at.predicted(r, st.H)
			if err != nil || math.Abs(got/want[i]-1) > tol[i] {
				t.Errorf("%s: %s is %.6g, want %.6g (%v)", d.Load, r.What(), got, want[i], err)
			}
			h := at.implied(r, 0.7*st.H)
			if sighted := r.Unit() == "m"; sighted != math.IsNaN(h) || !sighted && math.Abs(h/st.H-1) > 1e-3 {
				t.Errorf("%s: %s implies H = %.6g, true %.6g", d.Load, r.What(), h, st.H)
			}
		}
	}
}

// tangentByHeights finds the line of sight by the greatest slope that still stays under the cable, from exact heights.
func tangentByHeights(st State, below float64) float64 {
	least := math.Inf(1)
	const n = 20000
	for i := 1; i <= n; i++ {
		x := st.Chord.Length * float64(i) / n
		least = math.Min(least, (st.Height(x)+below)/x)
	}
	return st.Chord.Rise + below - least*st.Chord.Length
}

// Row O31 of the published check values (IEEE Std 524, transit methods; from memory): a = 4 m and sag 9 m give b = 16 m.
func TestTangentOfAParabola(t *testing.T) {
	st, err := Cable{DeckLoad: 1, AxialStiffness: math.Inf(1)}.AtSag(9, Chord{Length: 300})
	if err != nil {
		t.Fatal(err)
	}
	if b := tangentByHeights(st, 4); math.Abs(b-16) > 1e-4 {
		t.Errorf("by heights %.6f m, published 16 m", b)
	}
	d := survey.Design{Cable: "c", Load: survey.LoadDeck, DeckLoad: q(1, 0)}
	s := site{design: d, chord: st.Chord, points: 21, sigma: 1e-7, support: 1e-7}
	j := judged(t, Case{Points: s.survey(st, rand.New(rand.NewPCG(4, 4))), Design: &d, Conditions: survey.Conditions{Readings: []survey.Reading{{Of: survey.TangentAtB, Below: 4, Value: *q(16, 0.1)}}}})
	if b, err := j.in.sight(j.in.x).predicted(&j.in.readings[0], st.H); err != nil || math.Abs(b-16) > 1e-4 {
		t.Errorf("by the model %.6f m, published 16 m (%v)", b, err)
	}
}
