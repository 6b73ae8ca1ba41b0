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

// Two readings of unequal accuracy are taken by their weights; two that contradict each other widen their mean by the Birge ratio and are told,
// while the reconciliation goes by what was stated.
func TestReadingsTogether(t *testing.T) {
	s := footbridge()
	st := s.truth(t)
	assessed := func(a, b survey.Quantity) Assessment {
		d := s.design
		c := s.conditions(survey.LoadsNotChecked, 1)
		c.Readings = []survey.Reading{{Of: survey.HorizontalTension, Value: a, How: "one"}, {Of: survey.HorizontalTension, Value: b, How: "two"}}
		out, err := Assess(Case{Points: s.survey(st, rand.New(rand.NewPCG(6, 6))), Design: &d, Conditions: c})
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	agree := assessed(survey.Quantity{Value: 21000, U: 300}, survey.Quantity{Value: 21400, U: 600})
	if h := agree.Direct.HorizontalTension; math.Abs(h.Value-21080) > 1e-6 || math.Abs(h.U-300*2/math.Sqrt(5)) > 0.01 { // weights 4 to 1
		t.Errorf("together %v, want 21080 with u 268.3", h)
	}
	if p := agree.Direct.Scatter; math.Abs(p-0.551) > 0.001 { // chi square (400/670.8)^2, 1 degree of freedom
		t.Errorf("scatter %.4f, want 0.551", p)
	}
	apart := assessed(survey.Quantity{Value: 20000, U: 100}, survey.Quantity{Value: 22000, U: 100})
	if h := apart.Direct.HorizontalTension; math.Abs(h.Value-21000) > 1e-6 || math.Abs(h.U-1000) > 0.1 { // 70.71 times sqrt(200)
		t.Errorf("together %v, want 21000 with u 1000", h)
	}
	if r := apart.Reconciled; r == nil || r.ChiSquare < 199 || r.Outcome == Agrees {
		t.Errorf("reconciled %+v", r)
	}
	same := s.conditions(survey.LoadsAsFiled, 1)
	for _, v := range []float64{st.H, 1.5 * st.H} {
		same.Readings = append(same.Readings, survey.Reading{Of: survey.HorizontalTension, Value: *q(v, 300), How: "cell"})
	}
	if r := s.assess(t, rand.New(rand.NewPCG(6, 6)), same).Reconciled; r.Without != pieceReading+"horizontal tension, cell (2)" || r.HorizontalTension == nil {
		t.Errorf("of two readings by one name the second is wrong: %+v", r)
	}
	told := false
	for _, f := range apart.Findings {
		told = told || f.ID == "readings-differ"
	}
	if !told {
		t.Errorf("nobody says that the readings differ: %+v", apart.Findings)
	}
}

// The frequencies that readings are held against, from shape and tension alone, against the finite elements of package vibration: level and
// inclined, with and without bending stiffness.
func TestPredictedFrequenciesMeetFiniteElements(t *testing.T) {
	compared := 0
	for _, r := range table(t, "../vibration/testdata/finite-element.csv") {
		c := Cable{SelfWeight: r.f(t, "w_N_per_m"), AxialStiffness: r.f(t, "EA_N")}
		st, err := c.AtTension(r.f(t, "H_N"), Chord{r.f(t, "l_m"), r.f(t, "rise_m")}, 0)
		if err != nil {
			t.Fatal(err)
		}
		d := survey.Design{Cable: "c", Load: survey.LoadSelfWeight, SelfWeight: q(c.SelfWeight, 0), AxialStiffness: q(c.AxialStiffness, 0)}
		s := site{design: d, chord: st.Chord, points: 21, sigma: 1e-7, support: 1e-7}
		var readings []survey.Reading
		for n := 1; n <= 4; n++ {
			readings = append(readings, survey.Reading{Of: survey.NaturalFrequency, Mode: n, Clamped: r["ends"] == "clamped", Bending: survey.Quantity{Value: r.f(t, "EI_Nm2")}, Value: *q(1, 0.01)})
		}
		j := judged(t, Case{Points: s.survey(st, rand.New(rand.NewPCG(4, 4))), Design: &d, Conditions: survey.Conditions{Readings: readings}})
		at := j.in.sight(j.in.x)
		ratio := st.SagMid() / math.Hypot(st.Chord.Length, st.Chord.Rise)
		for i, column := range []string{"f1_Hz", "f2_Hz", "f3_Hz", "f4_Hz"} {
			limit := 2e-4 + 8*ratio*ratio
			if r["ends"] == "clamped" {
				limit += 0.008
			}
			got, err := at.predicted(&j.in.readings[i], st.H)
			if err != nil || math.Abs(got/r.f(t, column)-1) > limit {
				t.Errorf("%s, EI %s %s: %s %.5f Hz, finite elements %s (%v)", r["name"], r["EI_Nm2"], r["ends"], column, got, r[column], err)
			}
			compared++
		}
	}
	if compared != 72 {
		t.Fatalf("%d frequencies compared", compared)
	}
}
