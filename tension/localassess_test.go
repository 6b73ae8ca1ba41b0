package tension

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/fit"
	"tautbook/survey"
)

// hungOn is the state on the day with local loads, given as fractions of the designed unstressed length and of the whole even load.
func (s site) hungOn(t testing.TB, at, part float64) LoadedState {
	t.Helper()
	built, err := s.cable(1).AtTension(s.design.Tension.Value, Chord{s.design.SpanLength.Value, s.design.Rise.Value}, 0)
	if err != nil {
		t.Fatal(err)
	}
	c := s.cable(1 + s.extra)
	p := part * (c.SelfWeight + c.DeckLoad) * s.chord.Length
	s0 := built.Unstressed + s.slip
	st, err := c.AtLengthLoaded(s0, s.chord, s.day-s.design.Temperature.Value, []PointLoad{{At: at * s0, P: p}})
	if err != nil {
		t.Fatal(err)
	}
	return st
}

// station is where the one local load of a state hangs, m from A.
func (s LoadedState) station() float64 {
	_, _, x, _, _, _ := s.Segment(0)
	return x
}

// counts how often intervals cover and what else a run of simulated assessments tells.
type localTally struct{ n, tension, ratio, size, place, length float64 }

func (l *localTally) add(a Assessment, st LoadedState, designed, expected float64) bool {
	if a.HorizontalTension == nil || len(a.Load.Local) != 1 || a.Expected == nil || a.UnstressedLength == nil {
		return false
	}
	l.n++
	within := func(into *float64, q Quantity, truth float64) {
		if math.Abs(q.Value-truth) <= 1.96*q.U+1e-9*math.Abs(truth) {
			*into++
		}
	}
	within(&l.tension, *a.HorizontalTension, st.H)
	within(&l.ratio, *a.Expected.Ratio, st.H/expected)
	within(&l.size, *a.Load.Local[0].Load, st.Loads[0].P)
	within(&l.place, a.Load.Local[0].Station, st.station())
	within(&l.length, a.UnstressedLength.Difference, st.Unstressed-designed)
	return true
}

// Simulation: a cable with a local load, told with its size, told without, or found. Tension, ratio, size, place and change of length
// cover the truth as often as they say, although weight, stiffness and load differ from the file by their uncertainties.
func TestLocalLoadsAreCarriedThrough(t *testing.T) {
	runs := 400
	if testing.Short() {
		runs = 150
	}
	base, deep := footbridge(), mainCable()
	deep.slip = 0.04
	for _, c := range []struct {
		name     string
		site     site
		at, part float64
		told     string // "size", "place" or ""
	}{
		{"taut hand cable, size told", base, 0.4, 0.2, "size"},
		{"taut hand cable, place told", base, 0.4, 0.2, "place"},
		{"taut hand cable, found", base, 0.6, 0.3, ""},
		{"deep cable that slipped, size told", deep, 0.3, 0.1, "size"},
		{"deep cable that slipped, found", deep, 0.3, 0.15, ""},
	} {
		rng := rand.New(rand.NewPCG(21, 3))
		var l localTally
		missed := 0
		for range runs {
			s := c.site.drawn(rng)
			st := s.hungOn(t, c.at, c.part)
			designed := s.designed(t)
			exp, err := s.cable(1).AtLengthLoaded(designed, s.chord, s.day-s.design.Temperature.Value, st.Loads)
			if err != nil {
				t.Fatal(err)
			}
			d := s.design
			cond := s.conditions(survey.LoadsNotChecked, 0.5)
			cond.CableTemperature.Value += 0.5 * rng.NormFloat64()
			uP := 0.05 * st.Loads[0].P
			if c.told != "" {
				cond.Loads = survey.LoadsListed
				cond.Local = []survey.LocalLoad{{Station: st.station(), What: "box"}}
				if c.told == "size" {
					cond.Local[0].P = q(st.Loads[0].P+uP*rng.NormFloat64(), uP)
				}
			}
			a, err := Assess(Case{Points: s.survey(st, rng), Design: &d, Conditions: cond, Fit: fit.Options{FindLoads: 2}})
			if err != nil {
				t.Fatal(err)
			}
			if !l.add(a, st, designed, exp.H) {
				missed++
			}
			if c.told == "" && a.Verdict == Slack {
				t.Errorf("%s: called slack on a load that nobody recorded", c.name)
			}
		}
		t.Logf("%-36s one load in all but %d of %d; covered: H %.1f, ratio %.1f, size %.1f, place %.1f, length %.1f %%", c.name, missed, runs,
			100*l.tension/l.n, 100*l.ratio/l.n, 100*l.size/l.n, 100*l.place/l.n, 100*l.length/l.n)
		if float64(missed) > 0.01*float64(runs) {
			t.Errorf("%s: not one load in %d of %d", c.name, missed, runs)
		}
		for what, got := range map[string]float64{"H": l.tension, "ratio": l.ratio, "size": l.size, "place": l.place, "length": l.length} {
			if spare := 3.5 * math.Sqrt(0.95*0.05/l.n); got/l.n < 0.95-spare || (got/l.n > 0.95+spare && what == "H") {
				t.Errorf("%s: %s covered in %.1f %%", c.name, what, 100*got/l.n)
			}
		}
	}
}

// designed is the designer's unstressed length, m.
func (s site) designed(t testing.TB) float64 {
	t.Helper()
	built, err := s.cable(1).AtTension(s.design.Tension.Value, Chord{s.design.SpanLength.Value, s.design.Rise.Value}, 0)
	if err != nil {
		t.Fatal(err)
	}
	return built.Unstressed
}

// Reference: check-values C01 and C04, the isolated cable with 8 kips at the 400 ft point (sources at TestIsolatedCableBenchmark): points
// on its loaded shape give H and, by the kink, the load. The benchmark is elastic, the curve that is fitted is not: a thousandth.
func TestBenchmarkLoadIsReadFromItsShape(t *testing.T) {
	c := Cable{SelfWeight: 3.16, AxialStiffness: 16150000}
	st, err := c.AtLengthLoaded(412.8837+613.0422, Chord{Length: 1000}, 0, []PointLoad{{At: 412.8837, P: 8000}})
	if err != nil {
		t.Fatal(err)
	}
	var obs []fit.Observation
	for i := range 60 {
		x := 1000 * (float64(i) + 0.5) / 60
		obs = append(obs, fit.Observation{S: x, Z: st.Height(x), VarZ: 1e-6})
	}
	r, err := fit.InPlane(obs, fit.Frame{}, fit.End{}, fit.End{Station: 1000}, fit.Options{FindLoads: 2, NoAlternatives: true})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Loads) != 1 {
		t.Fatalf("%d local loads found, want 1: %+v", len(r.Loads), r.Loads)
	}
	h := 3.16 / r.Curve.Curvature
	if math.Abs(h/20107.2-1) > 2e-3 || math.Abs(r.Loads[0].Kink/0.397867-1) > 2e-3 || math.Abs(r.Loads[0].Kink*h/8000-1) > 2e-3 {
		t.Errorf("H %.1f lb, kink %.6f, load %.1f lb; published 20107.2, 0.397867, 8000", h, r.Loads[0].Kink, r.Loads[0].Kink*h)
	}
	if math.Abs(r.Loads[0].Station-st.station()) > 0.05 {
		t.Errorf("load at %.3f ft, hangs at %.3f ft", r.Loads[0].Station, st.station())
	}
}

// How near a clamp points are left out: by EI and H when both are known, else by the diameter, else not at all.
func TestClearLength(t *testing.T) {
	d := survey.Design{}
	if got := clearLength(&d, 38); got != 0 {
		t.Errorf("nothing known: %g m", got)
	}
	d.Diameter = q(0.04, 0)
	if got := clearLength(&d, 38); math.Abs(got-0.8) > 1e-12 {
		t.Errorf("by the diameter: %g m, want 20 diameters", got)
	}
	d.BendingStiffness, d.Tension = q(8100, 0), q(90000, 0) // sqrt(EI/H) = 0.3 m
	if got := clearLength(&d, 38); math.Abs(got-1.5) > 1e-12 {
		t.Errorf("by EI and H: %g m, want 1.5 m", got)
	}
	d.Tension, d.Sag, d.SpanLength = nil, q(0.8, 0), q(120, 0) // H = 40 120^2 / 6.4 = 90 kN
	if got := clearLength(&d, 40); math.Abs(got-1.5) > 1e-12 {
		t.Errorf("by EI and sag: %g m, want 1.5 m", got)
	}
	if got := clearLength(nil, 40); got != 0 {
		t.Errorf("no design: %g m", got)
	}
}
