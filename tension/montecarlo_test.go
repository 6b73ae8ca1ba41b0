package tension

import (
	"encoding/json"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// sampledSite is one assessment of a site with Monte Carlo.
func sampledSite(t *testing.T, s site, sampling Sampling, seed uint64) Assessment {
	t.Helper()
	d := s.design
	points := s.survey(s.truth(t), rand.New(rand.NewPCG(seed, 5)))
	a, err := Assess(Case{Points: points, Design: &d, Conditions: s.conditions(survey.LoadsAsFiled, 1.5), Sampling: &sampling})
	if err != nil {
		t.Fatal(err)
	}
	return a
}

// On ordinary cables the draws bear out the linear answer: mean, u and both ends, and the probabilities of the verdict.
func TestMonteCarloAgreesWithLinear(t *testing.T) {
	for _, c := range []struct {
		name string
		site site
	}{{"hand", footbridge()}, {"main", mainCable()}} {
		a := sampledSite(t, c.site, Sampling{Trials: 30_000, Seed: 1}, 3)
		m := a.MonteCarlo
		if !m.LinearHolds || m.Failed != 0 || m.Trials != 30_000 || !strings.Contains(m.Text, "bears out") {
			t.Errorf("%s: %+v", c.name, m)
		}
		for _, f := range []struct {
			name   string
			s      *Simulated
			linear Quantity
		}{{"H", m.HorizontalTension, *a.HorizontalTension}, {"ratio", m.Ratio, *a.Expected.Ratio}, {"T", m.GreatestTension, a.Strength.GreatestT}} {
			n := math.Sqrt(float64(m.Trials))
			if d := (f.s.Mean - f.linear.Value) / f.linear.U; math.Abs(d) > 4/n+0.02 {
				t.Errorf("%s %s: mean off by %.3f u", c.name, f.name, d)
			}
			if r := f.s.U / f.linear.U; math.Abs(r-1) > 3/n+0.01 {
				t.Errorf("%s %s: u off by a factor %.3f", c.name, f.name, r)
			}
			if w := (f.s.High - f.s.Low) / f.linear.U; math.Abs(w-2*1.96) > 0.08 {
				t.Errorf("%s %s: interval is %.2f u wide", c.name, f.name, w)
			}
		}
		for _, p := range [][2]float64{{*m.PSlack, a.Expected.PSlack}, {*m.PInside, a.Expected.PInside}, {*m.POverload, a.Expected.POverload}} {
			if math.Abs(p[0]-p[1]) > 4*math.Sqrt(0.25/float64(m.Trials)) {
				t.Errorf("%s: probability %.4f, linear %.4f", c.name, p[0], p[1])
			}
		}
	}
}

// nonlinear is a taut rigid wire of known weight: H = w / k with k normal, so the distribution of H is known.
func nonlinear() (survey.SpanPoints, *survey.Design, survey.Conditions) {
	const span, sag = 40.0, 0.02
	d := &survey.Design{Cable: "wire", Load: survey.LoadDeck, DeckLoad: q(10, 0)}
	points := survey.SpanPoints{Cable: "wire"}
	k := 8 * sag / (span * span)
	v := 0.003 * 0.003
	for i := range 11 {
		s := span * float64(i) / 10
		points.Points = append(points.Points, survey.Point{E: s, Z: 100 + k/2*s*(s-span), HasCov: true, Cov: survey.Cov3{EE: 1e-12, NN: 1e-12, ZZ: v}})
	}
	a, b := survey.Point{E: 0, Z: 100, HasCov: true}, survey.Point{E: span, Z: 100, HasCov: true}
	points.A, points.B = &a, &b
	return points, d, survey.Conditions{Loads: survey.LoadsAsFiled}
}

// Where H is far from linear in what the survey measures, the draws follow the exact distribution and the linear answer is refused.
func TestMonteCarloAgainstAnalyticTruth(t *testing.T) {
	points, d, conditions := nonlinear()
	a, err := Assess(Case{Points: points, Design: d, Conditions: conditions, Sampling: &Sampling{Trials: 200_000, Seed: 7}})
	if err != nil {
		t.Fatal(err)
	}
	m, h := a.MonteCarlo, a.HorizontalTension
	k := distuv.Normal{Mu: 10 / h.Value, Sigma: h.U / h.Value * 10 / h.Value}
	if r := k.Sigma / k.Mu; r < 0.06 || r > 0.3 {
		t.Fatalf("curvature known to %.2f: not the case that is meant", r)
	}
	at := func(p float64) float64 { return 10 / k.Quantile(1-p) } // quantile of H; k below zero is out of reach
	low, high, width := 0.0, 0.0, math.Inf(1)
	for p := 1e-4; p < 0.05; p += 1e-5 {
		if w := at(p+0.95) - at(p); w < width {
			low, high, width = at(p), at(p+0.95), w
		}
	}
	t.Logf("u(k)/k %.3f: exact %.1f .. %.1f N, by draws %.1f .. %.1f N, linear %.1f .. %.1f N", k.Sigma/k.Mu, low, high, m.HorizontalTension.Low, m.HorizontalTension.High, h.Value-1.96*h.U, h.Value+1.96*h.U)
	if s := m.HorizontalTension; math.Abs(s.Low-low) > 0.03*width || math.Abs(s.High-high) > 0.03*width {
		t.Errorf("interval %.1f .. %.1f N, exact %.1f .. %.1f N", s.Low, s.High, low, high)
	}
	if m.LinearHolds || m.HorizontalTension.LinearAccepted || !strings.Contains(m.Text, "not good enough for H") {
		t.Errorf("linear answer was accepted: %s", m.Text)
	}
	if len(a.Findings) == 0 || a.Findings[len(a.Findings)-1].ID != "monte-carlo" || a.Findings[len(a.Findings)-1].Level != Look {
		t.Error("no finding says so")
	}
	// exact ends of the symmetric interval
	if want := h.Value - 1.96*h.U - at(0.025); math.Abs(m.HorizontalTension.LinearLowOff-want) > 6*m.HorizontalTension.SamplingError {
		t.Errorf("low end off by %.1f N, exact %.1f N", m.HorizontalTension.LinearLowOff, want)
	}
}

// The same seed gives the same digits whatever the number of workers, in a run of fixed length and in an adaptive one; another seed gives
// others.
func TestMonteCarloIsTheSameOnAnyNumberOfCores(t *testing.T) {
	points, d, conditions := nonlinear()
	run := func(trials, workers int, seed uint64) string {
		done := make(chan int, 1000)
		a, err := Assess(Case{Points: points, Design: d, Conditions: conditions, Sampling: &Sampling{Trials: trials, Seed: seed, Workers: workers, Progress: func(n int) { done <- n }}})
		if err != nil {
			t.Fatal(err)
		}
		close(done)
		told := 0
		for n := range done {
			told += n
		}
		if trials > 0 && told != trials {
			t.Errorf("%d draws told, %d asked for", told, trials)
		}
		text, err := json.Marshal(a.MonteCarlo)
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	for _, trials := range []int{25_000, 0} {
		one := run(trials, 1, 4)
		if eight := run(trials, 8, 4); eight != one {
			t.Errorf("8 workers: %s\n1 worker: %s", eight, one)
		}
		if other := run(trials, 1, 5); other == one {
			t.Error("another seed gives the same draws")
		}
	}
}

// The tolerance of two significant digits, examples of JCGM 101:2008, 7.9.2: 0.00035 has l = -5 and tolerance 0.000005; 2 g
// with one digit is not taken, 0.35 has 0.005.
func TestTolerance(t *testing.T) {
	for u, want := range map[float64]float64{0.00035: 0.000005, 0.35: 0.005, 12: 0.5, 99: 0.5, 100: 5, 0: 0} {
		if got := toleranceOf(u); math.Abs(got-want) > 1e-9*want {
			t.Errorf("%g: %g, want %g", u, got, want)
		}
	}
}

// Draws without a state are counted, not absorbed.
func TestMonteCarloCountsDrawsWithoutAState(t *testing.T) {
	points, d, conditions := nonlinear()
	for i := range points.Points {
		points.Points[i].Cov.ZZ *= 6 // the curvature is then known to two or three u
	}
	a, err := Assess(Case{Points: points, Design: d, Conditions: conditions, Sampling: &Sampling{Trials: 40_000, Seed: 1}})
	if err != nil {
		t.Fatal(err)
	}
	if a.HorizontalTension == nil {
		t.Fatal("too flat for this test")
	}
	r := a.HorizontalTension.Relative()
	want := 40_000 * distuv.UnitNormal.CDF(-1/r)
	if got := float64(a.MonteCarlo.Failed); math.Abs(got-want) > 4*math.Sqrt(want)+1 || got == 0 {
		t.Errorf("%g draws without a state, %g expected", got, want)
	}
	if !strings.Contains(a.MonteCarlo.Text, "without a state") {
		t.Error(a.MonteCarlo.Text)
	}
}
