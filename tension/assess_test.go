package tension

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// The story of one cable: more sag is slack only when the loads were looked at and are as filed; an unlisted load with the
// same sag is off design until it is listed, and then it is overload.
func TestVerdictFollowsTheRecordOfLoads(t *testing.T) {
	designed := footbridge()
	slipped := footbridge()
	slipped.slip = 0.06
	loaded := footbridge()
	loaded.extra = 0.8
	listed := survey.Conditions{CableTemperature: q(18, 1), Loads: survey.LoadsListed,
		Listed: []survey.ListedLoad{{Cable: "hand", Load: survey.Quantity{Value: 0.8 * 38, U: 1}, Spread: survey.AlongCable, What: "service pipe"}}}
	for _, c := range []struct {
		name string
		site site
		cond survey.Conditions
		want Verdict
	}{
		{"designed, as filed", designed, designed.conditions(survey.LoadsAsFiled, 1), AsDesigned},
		{"designed, not checked", designed, designed.conditions(survey.LoadsNotChecked, 1), AsDesigned},
		{"slipped, as filed", slipped, slipped.conditions(survey.LoadsAsFiled, 1), Slack},
		{"slipped, not checked", slipped, slipped.conditions("", 1), OffDesign},
		{"loaded, not checked", loaded, loaded.conditions(survey.LoadsNotChecked, 1), OffDesign},
		{"loaded, listed", loaded, listed, Overload},
	} {
		a := c.site.assess(t, rand.New(rand.NewPCG(3, 1)), c.cond)
		if a.Verdict != c.want {
			t.Errorf("%s: %s (%s), want %s", c.name, a.Verdict, a.Reason, c.want)
		}
	}
}

// Points that are no hanging cable give no tension and no verdict on one, whatever the design says.
func TestPointsThatAreNoCable(t *testing.T) {
	s := footbridge()
	st := s.truth(t)
	for name, spoil := range map[string]func(p *survey.SpanPoints){
		"bulging upwards": func(p *survey.SpanPoints) {
			for i := range p.Points {
				p.Points[i].Z = 2*431.2 - p.Points[i].Z
			}
		},
		"two wires": func(p *survey.SpanPoints) {
			for i := range p.Points {
				if i%2 == 0 {
					p.Points[i].Z += 6
				}
			}
		},
	} {
		p := s.survey(st, rand.New(rand.NewPCG(1, 9)))
		spoil(&p)
		a, err := Assess(Case{Points: p, Design: &s.design, Conditions: s.conditions(survey.LoadsAsFiled, 1)})
		if err != nil {
			t.Fatal(err)
		}
		if a.Verdict != Undecided {
			t.Errorf("%s: %s, %s", name, a.Verdict, a.Reason)
		}
		if name == "bulging upwards" && (a.HorizontalTension != nil || len(a.Reactions) > 0) {
			t.Errorf("%s: a tension is given", name)
		}
	}
}

// A taut wire whose sag is lost in the noise has no tension to give but a bound; the verdict is not guessed.
func TestFlatCableGivesABound(t *testing.T) {
	s := footbridge()
	s.sigma, s.points = 2, 9
	a := s.assess(t, rand.New(rand.NewPCG(4, 9)), s.conditions(survey.LoadsAsFiled, 1))
	if a.HorizontalTension != nil || a.HorizontalTensionAtLeast == nil {
		t.Fatalf("tension %v, bound %v", a.HorizontalTension, a.HorizontalTensionAtLeast)
	}
	if *a.HorizontalTensionAtLeast > s.truth(t).H || a.Verdict != Undecided || a.NextStep == "" {
		t.Errorf("bound %.0f N, true %.0f N, verdict %s", *a.HorizontalTensionAtLeast, s.truth(t).H, a.Verdict)
	}
}

// A load cell tells the two readings of one shape apart: the slipped cable is slack, the loaded one overloaded, with nobody having
// looked at the loads; and it catches a wrong record.
func TestDirectReadingTellsTheReadingsApart(t *testing.T) {
	for _, c := range []struct {
		name        string
		slip, extra float64
		record      survey.LoadStatus
		u           float64 // of the load cell, relative
		want        Verdict
	}{
		{"slipped", 0.08, 0, survey.LoadsNotChecked, 0.02, Slack},
		{"loaded", 0, 0.8, survey.LoadsNotChecked, 0.05, Overload},
		{"slipped and loaded to the same tension", 0.2, 0.9, survey.LoadsNotChecked, 0.02, Overload},
		{"as designed", 0, 0, survey.LoadsNotChecked, 0.02, AsDesigned},
		{"loaded, recorded as filed", 0, 0.8, survey.LoadsAsFiled, 0.02, Overload},
		{"slipped and a little loaded, recorded as filed", 0.06, 0.18, survey.LoadsAsFiled, 0.01, OffDesign},
	} {
		s := footbridge()
		s.slip, s.extra = c.slip, c.extra
		st := s.truth(t)
		cond := s.conditions(c.record, 1)
		cond.Readings = []survey.Reading{{Of: survey.TensionAtB, Value: survey.Quantity{Value: st.TensionB(), U: c.u * st.TensionB()}, How: "load cell"}}
		a := s.assess(t, rand.New(rand.NewPCG(8, 3)), cond)
		if a.Verdict != c.want {
			t.Errorf("%s: %s (%s), want %s", c.name, a.Verdict, a.Reason, c.want)
		}
		if d := a.Direct; d == nil || math.Abs(d.HorizontalTension.Value/st.H-1) > 1e-3 || math.Abs(d.LoadFactor.Value-(1+c.extra)) > 0.01 {
			t.Errorf("%s: direct reading %+v, true H %.0f N, load %.2f", c.name, a.Direct, st.H, 1+c.extra)
		}
		if a.Reason == "" || a.NextStep == "" {
			t.Errorf("%s: no reason or next step", c.name)
		}
	}
}
