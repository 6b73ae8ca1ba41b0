package tension

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// swungState is an invented cable in wind: it hangs in the plane of the resultant load, as a still cable does in the vertical one.
type swungState struct {
	st     State   // in the plane of the resultant
	angle  float64 // rad, to the left
	run, h float64 // true horizontal chord and rise
}

func (s site) inWind(t testing.TB, angle float64) swungState {
	t.Helper()
	built, err := s.cable(1).AtTension(s.design.Tension.Value, Chord{s.design.SpanLength.Value, s.design.Rise.Value}, 0)
	if err != nil {
		t.Fatal(err)
	}
	sin, cos := math.Sincos(angle)
	c := s.cable(1 / cos)
	st, err := c.AtLength(built.Unstressed+s.slip, Chord{math.Hypot(s.chord.Length, s.chord.Rise*sin), s.chord.Rise * cos}, s.day-s.design.Temperature.Value)
	if err != nil {
		t.Fatal(err)
	}
	return swungState{st, angle, s.chord.Length, s.chord.Rise}
}

// at is the point of the swung cable at a station of its plane: along the chord in plan, to the left, up.
func (w swungState) at(station float64) (along, left, up float64) {
	sin, cos := math.Sincos(w.angle)
	z := w.st.Height(station)
	f := station / w.st.Chord.Length
	return f * w.run, f*w.h*sin*cos - z*sin, f*w.h*sin*sin + z*cos
}

func (s site) swungSurvey(w swungState, rng *rand.Rand) survey.SpanPoints {
	sin, cos := math.Sincos(0.7)
	at := func(id string, along, left, up, sigma float64) survey.Point {
		v := sigma * sigma
		return survey.Point{ID: id, HasCov: true, Cov: survey.Cov3{EE: v, NN: v, ZZ: v}, E: 5e5 + along*sin - left*cos + sigma*rng.NormFloat64(),
			N: 5e6 + along*cos + left*sin + sigma*rng.NormFloat64(), Z: 400 + up + sigma*rng.NormFloat64()}
	}
	out := survey.SpanPoints{Cable: s.design.Cable}
	for i := range s.points {
		x, y, z := w.at(w.st.Chord.Length * (0.01 + 0.98*float64(i)/float64(s.points-1)))
		out.Points = append(out.Points, at("p", x, y, z, s.sigma))
	}
	a, b := at("A", 0, 0, 0, s.support), at("B", s.chord.Length, 0, s.chord.Rise, s.support)
	out.A, out.B = &a, &b
	return out
}

// A swung cable that is as designed reads as designed, and its supports carry just its weight and the wind: the sums of the reactions
// up and across are known without any plane.
func TestSwungCableIsAssessedInItsPlane(t *testing.T) {
	runs := 300
	if testing.Short() {
		runs = 120
	}
	steep := guy()
	steep.chord, steep.design.SpanLength, steep.design.Rise = Chord{60, 20}, q(60, 0), q(20, 0)
	steep.design.Tension = q(12000, 0)
	for _, c := range []struct {
		name  string
		site  site
		angle float64
	}{{"hand cable, 20 degrees", footbridge(), 0.35}, {"deep cable, 5 degrees right", mainCable(), -0.09}, {"inclined, 25 degrees", steep, 0.44}} {
		rng := rand.New(rand.NewPCG(31, 7))
		var tension, ratio, up, across, named float64
		for range runs {
			s := c.site.drawn(rng)
			w := s.inWind(t, c.angle)
			d := s.design
			cond := s.conditions(survey.LoadsAsFiled, 0.3)
			cond.CableTemperature.Value += 0.3 * rng.NormFloat64()
			a, err := Assess(Case{Points: s.swungSurvey(w, rng), Design: &d, Conditions: cond})
			if err != nil {
				t.Fatal(err)
			}
			within := func(into *float64, q Quantity, truth float64) {
				if math.Abs(q.Value-truth) <= 1.96*q.U {
					*into++
				}
			}
			if a.Fit.Swing == nil || a.HorizontalTension == nil || a.Expected == nil {
				t.Fatalf("%s: swing %+v, verdict %s: %s", c.name, a.Fit.Swing, a.Verdict, a.Reason)
			}
			weight := s.cable(1).SelfWeight*w.st.Unstressed + s.cable(1).DeckLoad*w.st.Chord.Length
			within(&tension, *a.HorizontalTension, w.st.H)
			within(&ratio, *a.Expected.Ratio, 1)
			// Both reactions hang on the same weight and survey: the sum is as uncertain as both together.
			va, vb := a.Reactions[0], a.Reactions[1]
			within(&up, Quantity{Value: va.Vertical.Value + vb.Vertical.Value, U: va.Vertical.U + vb.Vertical.U}, weight)
			within(&across, Quantity{Value: va.Left.Value + vb.Left.Value, U: va.Left.U + vb.Left.U}, -weight*math.Tan(c.angle))
			if a.Verdict == AsDesigned {
				named++
			}
		}
		n := float64(runs)
		t.Logf("%-28s covered: H %.1f, ratio %.1f, up %.1f, across %.1f %%; as designed %.1f %%", c.name, 100*tension/n, 100*ratio/n, 100*up/n, 100*across/n, 100*named/n)
		spare := 3.5 * math.Sqrt(0.95*0.05/n)
		for what, got := range map[string]float64{"H": tension, "ratio": ratio, "up": up, "across": across} {
			if got/n < 0.95-spare {
				t.Errorf("%s: %s covered in %.1f %%", c.name, what, 100*got/n)
			}
		}
	}
	// Nearly exact points: the sums to a thousandth of a per cent.
	s := steep
	s.sigma, s.support = 1e-6, 1e-6
	w := s.inWind(t, 0.44)
	d := s.design
	a, err := Assess(Case{Points: s.swungSurvey(w, rand.New(rand.NewPCG(1, 1))), Design: &d, Conditions: s.conditions(survey.LoadsAsFiled, 0.1)})
	if err != nil {
		t.Fatal(err)
	}
	weight := s.cable(1).SelfWeight * w.st.Unstressed
	if got := a.Reactions[0].Vertical.Value + a.Reactions[1].Vertical.Value; math.Abs(got/weight-1) > 1e-5 {
		t.Errorf("supports carry %.4f N of %.4f N", got, weight)
	}
	if got := a.Reactions[0].Left.Value + a.Reactions[1].Left.Value; math.Abs(got/(weight*math.Tan(0.44))+1) > 1e-5 {
		t.Errorf("supports hold %.4f N across of %.4f N wind", got, weight*math.Tan(0.44))
	}
	if math.Abs(a.Expected.Ratio.Value-1) > 1e-4 {
		t.Errorf("ratio %.6f of a cable as designed", a.Expected.Ratio.Value)
	}
}
