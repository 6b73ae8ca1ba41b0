package tension

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

func runsOf(n int) int {
	if testing.Short() {
		return n / 4
	}
	return n
}

// Simulation with known truth: weight, stiffness, expansion and temperature differ from the file by their uncertainties, the
// cable has slipped or been drawn up by any amount, the survey has its errors. The ratio must be covered by its interval as
// often as stated, and a verdict must be right as often as its probability says.
func TestVerdictsAreCalibrated(t *testing.T) {
	for _, c := range []struct {
		name  string
		site  site
		slips float64 // greatest length gained or lost, m
	}{{"taut hand cable", footbridge(), 0.10}, {"deep main cable", mainCable(), 0.6}, {"guy", guy(), 0.02}} {
		rng := rand.New(rand.NewPCG(9, 2))
		runs := runsOf(2400)
		covered, called, right := 0, map[Verdict]int{}, map[Verdict]int{}
		bias := 0.0
		bins, hits := [5]int{}, [5]int{}
		for range runs {
			s := c.site.drawn(rng)
			s.slip = c.slips * (2*rng.Float64() - 1)
			const uT = 1.0
			cond := s.conditions(survey.LoadsAsFiled, uT)
			s.day += uT * rng.NormFloat64() // the thermometer was off by that much
			st := s.truth(t)
			a, err := Assess(Case{Points: s.survey(st, rng), Design: &s.design, Conditions: cond})
			if err != nil {
				t.Fatal(err)
			}
			e := a.Expected
			if e == nil || e.Ratio == nil {
				t.Fatalf("%s: no ratio: %+v", c.name, a.Findings)
			}
			ratio := st.H / s.expectedTruth(t)
			far := (1/e.Ratio.Value - 1/ratio) / (e.Ratio.U / (e.Ratio.Value * e.Ratio.Value))
			bias += far / float64(runs)
			if math.Abs(far) <= 1.96 {
				covered++
			}
			called[a.Verdict]++
			switch {
			case a.Verdict == Slack && ratio < e.SlackBelow, a.Verdict == AsDesigned && ratio >= e.SlackBelow && ratio <= e.OverloadAbove,
				a.Verdict == Overload && ratio > e.OverloadAbove, a.Verdict == Undecided:
				right[a.Verdict]++
			}
			b := min(int(5*e.PSlack), 4)
			bins[b]++
			if ratio < e.SlackBelow {
				hits[b]++
			}
		}
		cover := float64(covered) / float64(runs)
		t.Logf("%-16s coverage %.2f %%, bias %+.3f u; called %v, right %v; slack in bins of its probability %v of %v", c.name, 100*cover, bias, called, right, hits, bins)
		spare := 2.5 * math.Sqrt(0.05*0.95/float64(runs))
		if cover < 0.94-spare || cover > 0.96+spare {
			t.Errorf("%s: intervals of the ratio cover %.2f %%", c.name, 100*cover)
		}
		if math.Abs(bias) > 4/math.Sqrt(float64(runs)) {
			t.Errorf("%s: bias %.3f of u", c.name, bias)
		}
		for _, v := range []Verdict{Slack, AsDesigned, Overload} {
			if called[v] < runs/50 {
				t.Errorf("%s: %s called only %d times of %d", c.name, v, called[v], runs)
			}
			if rate := float64(right[v]) / float64(called[v]); rate < 0.95 {
				t.Errorf("%s: %s is right %.1f %% of the time", c.name, v, 100*rate)
			}
		}
	}
}

// With an accuracy that must be estimated from seven points, U = 2 u still covers the true tension at least as often as it says.
func TestFewPointsWithoutStatedAccuracyAreCovered(t *testing.T) {
	s := footbridge()
	s.points, s.sigma, s.silent = 7, 0.02, true
	s.design.SelfWeight = q(38, 0)
	rng := rand.New(rand.NewPCG(3, 3))
	st := s.truth(t)
	covered, runs := 0, runsOf(2000)
	for range runs {
		a, err := Assess(Case{Points: s.survey(st, rng), Design: &s.design, Conditions: s.conditions(survey.LoadsAsFiled, 1)})
		if err != nil {
			t.Fatal(err)
		}
		// compared in 1/H, which is linear in what the survey measures
		if far := math.Abs(1/a.HorizontalTension.Value-1/st.H) * a.HorizontalTension.Value * a.HorizontalTension.Value; far <= a.HorizontalTension.Expanded() {
			covered++
		}
	}
	spare := 3 * math.Sqrt(0.05*0.95/float64(runs)) // of the simulation itself
	if cover := float64(covered) / float64(runs); cover < 0.9545-spare || cover > 0.9545+spare {
		t.Errorf("U covers %.2f %%", 100*cover)
	}
}

// A cable with an unlisted extra load and loads not checked is never called slack, be it deep (lambda squared large: the shape
// hardly changes) or taut (small: the sag grows, the tension hardly), even when it has slipped as well.
func TestUnlistedLoadIsNeverCalledSlack(t *testing.T) {
	for _, c := range []struct {
		name string
		site site
	}{{"taut hand cable", footbridge()}, {"deep main cable", mainCable()}, {"guy", guy()}} {
		rng := rand.New(rand.NewPCG(12, 2))
		called := map[Verdict]int{}
		lambda := 0.0
		for i := range runsOf(600) {
			s := c.site.drawn(rng)
			s.extra = 1.5 * rng.Float64()
			if i%2 == 1 {
				s.slip = 0.3 * rng.Float64() * s.chord.Length / 96
			}
			a := s.assess(t, rng, s.conditions(survey.LoadsNotChecked, 1))
			called[a.Verdict]++
			lambda = a.Stiffness.Lambda2
		}
		t.Logf("%-16s lambda squared about %.3g: called %v", c.name, lambda, called)
		if called[Slack] > 0 {
			t.Errorf("%s: called slack %d times", c.name, called[Slack])
		}
	}
}

// The linear propagation against Monte Carlo (JCGM 101) over the same inputs: standard uncertainties of the figures that decide.
func TestPropagationAgreesWithMonteCarlo(t *testing.T) {
	for _, s := range []site{footbridge(), mainCable(), guy()} {
		rng := rand.New(rand.NewPCG(5, 8))
		c := Case{Points: s.survey(s.truth(t), rng), Design: &s.design, Conditions: s.conditions(survey.LoadsAsFiled, 1)}
		j := judged(t, c)
		runs := runsOf(8000)
		outs := []int{outH, outHExpected, outInverse, outTensionB, outS0Difference, outHRival, outRivalFactor, outHReference, outGreatestSag}
		sums, squares := make([]float64, len(outs)), make([]float64, len(outs))
		x := make([]float64, len(j.in.x))
		for range runs {
			copy(x, j.in.x)
			for _, src := range j.in.sources {
				for _, d := range src.directions {
					n := rng.NormFloat64()
					for _, st := range d {
						x[st.at] += n * st.by
					}
				}
			}
			y, _ := j.in.evaluate(x)
			for i, o := range outs {
				sums[i] += y[o] - j.p.y[o]
				squares[i] += (y[o] - j.p.y[o]) * (y[o] - j.p.y[o])
			}
		}
		for i, o := range outs {
			n := float64(runs)
			sd := math.Sqrt(squares[i]/n - sums[i]*sums[i]/n/n)
			if ratio := sd / j.p.u(o); math.Abs(ratio-1) > 0.03+3/math.Sqrt(2*n) {
				t.Errorf("output %d: Monte Carlo u %.4g, linear %.4g (ratio %.3f)", o, sd, j.p.u(o), ratio)
			}
		}
	}
}

// What enters the measured and the expected tension alike cancels: with a design fixed by its sag, the weight drops out of the
// ratio; with one fixed by its tension it stays.
func TestCommonInputsCancel(t *testing.T) {
	s := footbridge()
	s.design.SelfWeight = q(38, 3.8) // 10 %
	st := s.truth(t)
	points := s.survey(st, rand.New(rand.NewPCG(2, 2)))
	byTension, err := Assess(Case{Points: points, Design: &s.design, Conditions: s.conditions(survey.LoadsAsFiled, 0)})
	if err != nil {
		t.Fatal(err)
	}
	sagged := s.design
	built, err := s.cable(1).AtTension(s.design.Tension.Value, s.chord, 0)
	if err != nil {
		t.Fatal(err)
	}
	sagged.Tension, sagged.Sag = nil, q(built.SagMid(), 0)
	bySag, err := Assess(Case{Points: points, Design: &sagged, Conditions: s.conditions(survey.LoadsAsFiled, 0)})
	if err != nil {
		t.Fatal(err)
	}
	share := func(a Assessment) float64 {
		for _, b := range a.Budget {
			if b.Input == "self weight on file" {
				return b.OnR
			}
		}
		t.Fatal("no self weight in the budget")
		return 0
	}
	if u := share(byTension); u < 0.06 {
		t.Errorf("design by tension: 10 %% of weight make %.4f of the ratio, expected most of it", u)
	}
	if u := share(bySag); u > 0.015 {
		t.Errorf("design by sag: 10 %% of weight make %.4f of the ratio, expected nearly nothing", u)
	}
	if byTension.HorizontalTension.Relative() < 0.09 || bySag.HorizontalTension.Relative() < 0.09 {
		t.Error("the tension itself must carry the weight's 10 %")
	}
}

// judged runs a case up to the decision and keeps the inside of it.
func judged(t testing.TB, c Case) *judgement {
	t.Helper()
	r, err := c.fit(c.listedHere(), c.localHere())
	if err != nil {
		t.Fatal(err)
	}
	return c.judgement(r, c.listedHere(), c.localHere())
}
