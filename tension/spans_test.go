package tension

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"tautbook/survey"
)

// line is an invented cable over three spans with known forces: chords and azimuths, one weight, and the tension at the near end
// of each span (equal over the supports unless a saddle is stuck).
type line struct {
	chords   []Chord
	azimuths []float64
	over     survey.SupportBetween
	step     float64 // relative step of the tension over the second support
	points   int
	sigma    float64
	support  float64
}

func threeSpans() line {
	return line{chords: []Chord{{80, 4}, {120, -3}, {60, 2}}, azimuths: []float64{0.6, 0.75, 0.7}, over: survey.BetweenEqualTension, points: 21, sigma: 0.003, support: 0.002}
}

const lineWeight, lineWeightU, lineTension = 40.0, 0.6, 30000.0

// states are the true states: from span to span the tension (or its horizontal part) goes over the support unchanged, but for the
// step of the second one.
func (l line) states(t testing.TB, weight float64) (out []State) {
	t.Helper()
	c := Cable{SelfWeight: weight, AxialStiffness: 15e6, Expansion: 12e-6}
	want := lineTension
	for i, ch := range l.chords {
		if i == 2 {
			want *= 1 + l.step
		}
		h := want
		var st State
		for range 50 {
			var err error
			if st, err = c.AtTension(h, ch, 0); err != nil {
				t.Fatal(err)
			}
			if l.over != survey.BetweenEqualTension {
				break
			}
			h *= want / st.TensionA()
		}
		out = append(out, st)
		if want = st.H; l.over == survey.BetweenEqualTension {
			want = st.TensionB()
		}
	}
	return out
}

// surveyed is the survey of all spans: one mark a support.
func (l line) surveyed(states []State, rng *rand.Rand) (spans []survey.SpanPoints) {
	e, n, z := 500.0, 700.0, 300.0
	at := func(id string, e, n, z, sigma float64) *survey.Point {
		v := sigma * sigma
		return &survey.Point{ID: id, HasCov: true, Cov: survey.Cov3{EE: v, NN: v, ZZ: v}, E: e + sigma*rng.NormFloat64(), N: n + sigma*rng.NormFloat64(), Z: z + sigma*rng.NormFloat64()}
	}
	mark := at("S0", e, n, z, l.support)
	for i, st := range states {
		sin, cos := math.Sincos(l.azimuths[i])
		sp := survey.SpanPoints{Cable: "track", Span: fmt.Sprint(i + 1), A: mark}
		for k := range l.points {
			s := st.Chord.Length * (0.02 + 0.96*float64(k)/float64(l.points-1))
			sp.Points = append(sp.Points, *at(fmt.Sprint(k), e+s*sin, n+s*cos, z+st.Height(s), l.sigma))
		}
		e, n, z = e+st.Chord.Length*sin, n+st.Chord.Length*cos, z+st.Chord.Rise
		mark = at(fmt.Sprint("S", i+1), e, n, z, l.support)
		sp.B = mark
		spans = append(spans, sp)
	}
	return spans
}

func (l line) design(i int) *survey.Design {
	d := &survey.Design{Cable: "track", Span: fmt.Sprint(i + 1), Load: survey.LoadSelfWeight, SelfWeight: q(lineWeight, lineWeightU), OverA: l.over, OverB: l.over,
		AxialStiffness: q(15e6, 3e5), Expansion: q(12e-6, 5e-7), Temperature: q(10, 0)}
	d.SpanLength, d.Rise, d.Tension = q(l.chords[i].Length, 0), q(l.chords[i].Rise, 0), q(lineTension, 0)
	return d
}

func (l line) assessed(t testing.TB, spans []survey.SpanPoints) (list []Assessment) {
	t.Helper()
	for i, sp := range spans {
		a, err := Assess(Case{Points: sp, Design: l.design(i), Conditions: survey.Conditions{Loads: survey.LoadsAsFiled, CableTemperature: q(10, 1)}})
		if err != nil {
			t.Fatal(err)
		}
		list = append(list, a)
	}
	return list
}

// truth is the force on the support before span i, from the true states: along, left, down, resultant.
func (l line) truth(states []State, i int) (v [4]float64) {
	f, g := states[i-1], states[i]
	turn := (l.azimuths[i] - l.azimuths[i-1]) / 2
	v[0] = (g.H - f.H) * math.Cos(turn)
	v[1] = -(f.H + g.H) * math.Sin(turn) // azimuths grow clockwise: a turn to the right pulls to the right
	v[2] = g.VerticalA() + f.VerticalB()
	v[3] = math.Hypot(math.Hypot(v[0], v[1]), v[2])
	return v
}

// score collects normalised errors of one figure.
type score struct {
	n, inside int
	sum, sum2 float64
}

func (s *score) add(q Quantity, truth float64) {
	d := (q.Value - truth) / q.U
	s.n++
	s.sum += d
	s.sum2 += d * d
	if math.Abs(d) < 1.96 {
		s.inside++
	}
}

// check holds the score against what chance allows for so many independent runs: the spans of one run share the weight.
func (s *score) check(t *testing.T, name string, independent int) {
	t.Helper()
	n := float64(s.n)
	bias, spread, cover := s.sum/n, math.Sqrt(s.sum2/n), float64(s.inside)/n
	t.Logf("%-22s n %d: bias %+.3f u, spread %.3f u, 95 %% interval covers %.1f %%", name, s.n, bias, spread, 100*cover)
	n = float64(independent)
	if math.Abs(bias) > 4/math.Sqrt(n) {
		t.Errorf("%s: bias %+.3f u", name, bias)
	}
	if noise := 3.5 * math.Sqrt(0.05*0.95/n); cover < 0.94-noise || cover > 0.96+noise {
		t.Errorf("%s: 95 %% interval covers %.1f %%", name, 100*cover)
	}
}

func runs(short, long int) int {
	if testing.Short() {
		return short
	}
	return long
}

// Simulation with known truth: the weight is drawn once for all spans, as it is on file once for all.
func TestContinuousCableAgainstTruth(t *testing.T) {
	for _, over := range []survey.SupportBetween{survey.BetweenEqualTension, survey.BetweenEqualHorizontal} {
		l := threeSpans()
		l.over = over
		rng := rand.New(rand.NewPCG(11, 7))
		var step, along, left, down, resultant, friction, joint, separate score
		false_, n := 0, runs(300, 1000)
		gain := 0.0
		for range n {
			st := l.states(t, lineWeight+lineWeightU*rng.NormFloat64())
			list := l.assessed(t, l.surveyed(st, rng))
			c := JoinSpans(list, "")
			if len(c) != 1 || len(c[0].Supports) != 2 {
				t.Fatalf("%+v", c)
			}
			for i, s := range c[0].Supports {
				want := l.truth(st, i+1)
				step.add(s.TensionStep, st[i+1].TensionA()-st[i].TensionB())
				along.add(s.Along, want[0])
				left.add(s.Left, want[1])
				down.add(s.Down, want[2])
				resultant.add(s.Resultant, want[3])
				if f := s.FrictionNeeded; f != nil && over == survey.BetweenEqualTension {
					friction.add(*f, 0)
				}
			}
			if *c[0].P < significance {
				false_++
			}
			if s := c[0].Spans; over == survey.BetweenEqualHorizontal && s[0].Joint != nil && s[1].Joint != nil && s[2].Joint != nil &&
				math.Max(relative(s[0].Joint.Value, s[1].Joint.Value, 0), relative(s[1].Joint.Value, s[2].Joint.Value, 0)) > 1e-9 {
				t.Fatalf("joint tensions over rollers differ: %v, %v, %v", s[0].Joint, s[1].Joint, s[2].Joint)
			}
			for i, sp := range c[0].Spans {
				separate.add(sp.Separate, st[i].H)
				if *c[0].P >= significance {
					joint.add(*sp.Joint, st[i].H)
					gain += sp.Joint.U / sp.Separate.U / 3 / float64(n)
				}
			}
		}
		t.Logf("%s: u of the joint tension is %.2f of the separate one", over, gain)
		for _, s := range []struct {
			name string
			*score
		}{{"tension step", &step}, {"force along", &along}, {"force to the left", &left}, {"force down", &down}, {"resultant", &resultant}, {"friction needed", &friction}, {"joint tension", &joint}, {"separate tension", &separate}} {
			if s.n > 0 {
				s.check(t, s.name, n)
			}
		}
		rate := float64(false_) / float64(n)
		t.Logf("%s: false alarms %.1f %%", over, 100*rate)
		if math.Abs(rate-significance) > 3.5*math.Sqrt(0.05*0.95/float64(n))+0.005 {
			t.Errorf("%s: false alarms %.1f %%", over, 100*rate)
		}
	}
}

// A stuck saddle is found as often as the non-central chi-square says, and named.
func TestStuckSaddleIsFoundAtItsPower(t *testing.T) {
	l := threeSpans()
	l.step = 0.012
	rng := rand.New(rand.NewPCG(3, 9))
	n, found, named := runs(200, 800), 0, 0
	lambda := 0.0
	for range n {
		st := l.states(t, lineWeight+lineWeightU*rng.NormFloat64())
		list := l.assessed(t, l.surveyed(st, rng))
		c := JoinSpans(list, "")[0]
		if lambda == 0 {
			lambda = power(t, list, l.step)
		}
		if *c.P < significance {
			found++
			if c.Supports[1].Stuck && !c.Supports[0].Stuck && slices.ContainsFunc(c.Findings, func(f Finding) bool { return f.ID == "support-stuck" && f.Level == Act }) {
				named++
			}
			if c.Spans[2].Joint != nil && c.Supports[1].Stuck {
				t.Fatal("a span beyond a stuck saddle was brought together with the others")
			}
		}
	}
	// Power by simulation of the test statistic itself: two normal variables, one shifted by sqrt(lambda), against the
	// chi-square limit for two degrees of freedom, 5.991 (table value).
	theory, m := 0, 400000
	for range m {
		a, b := rng.NormFloat64()+math.Sqrt(lambda), rng.NormFloat64()
		if a*a+b*b > 5.991 {
			theory++
		}
	}
	got, want := float64(found)/float64(n), float64(theory)/float64(m)
	t.Logf("step %.1f %%: found %.1f %%, by theory %.1f %%; the right one named in %.1f %% of those", 100*l.step, 100*got, 100*want, 100*float64(named)/float64(found))
	if math.Abs(got-want) > 3.5*math.Sqrt(want*(1-want)/float64(n))+0.01 {
		t.Errorf("found %.1f %%, by theory %.1f %%", 100*got, 100*want)
	}
	if want < 0.3 || want > 0.97 {
		t.Errorf("power %.2f tells nothing", want)
	}
	if float64(named) < 0.85*float64(found) {
		t.Errorf("named right %d of %d", named, found)
	}
}

// power is the non-centrality of the test for a step at the second support: d' M^-1 d.
func power(t *testing.T, list []Assessment, step float64) float64 {
	t.Helper()
	n := newNetwork(list, chains(list, []int{0, 1, 2})[0])
	var both []condition
	for i := range 2 {
		k, ok := n.condition(i+1, survey.BetweenEqualTension)
		if !ok {
			t.Fatal("no condition")
		}
		k.value = []float64{0, math.Log1p(step)}[i]
		both = append(both, k)
	}
	a := fulfil(both)
	return a.sum
}

// RUS Bulletin and General Order 95, rows O36 of check-values.csv: adjoining spans at one tension have sags as the squares of the
// spans. The joint tension of such spans, and of crossing supports at level, is that one tension.
func TestAdjoiningSpansAtOneTension(t *testing.T) {
	rows := 0
	for _, r := range table(t, "check-values.csv") {
		if r["id"] != "O36" {
			continue
		}
		rows++
		p := published{t: t, id: r["id"], in: map[string]string{}, out: map[string][2]float64{}}
		for _, kv := range strings.Split(r["inputs"], ";") {
			k, v, _ := strings.Cut(kv, "=")
			p.in[k] = v
		}
		for _, kv := range strings.Split(r["outputs"], ";") {
			k, v, _ := strings.Cut(kv, "=")
			var value, tol float64
			if _, err := fmt.Sscanf(v, "%f+-%f", &value, &tol); err != nil {
				t.Fatal(kv, err)
			}
			p.out[k] = [2]float64{value, tol}
		}
		first, sag := p.f("span_ft"), p.f("sag_ft")
		l := line{chords: []Chord{{first * foot, 0}}, azimuths: []float64{0.5, 0.5, 0.5}, over: survey.BetweenEqualHorizontal, points: 15, sigma: 1e-5, support: 1e-5}
		for _, other := range p.list("other_ft") {
			l.chords = append(l.chords, Chord{other * foot, 0})
		}
		h := lineWeight * first * foot * first / (8 * sag) // parabola
		var st []State
		for _, ch := range l.chords {
			s, err := Cable{SelfWeight: lineWeight, AxialStiffness: math.Inf(1)}.AtTension(h, ch, 0)
			if err != nil {
				t.Fatal(err)
			}
			st = append(st, s)
		}
		list := l.assessed(t, l.surveyed(st, rand.New(rand.NewPCG(1, 2))))
		c := JoinSpans(list, "")[0]
		for i, key := range []string{"sag1_ft", "sag2_ft"} {
			want := p.out[key]
			if got := list[i+1].Fit.SagMid.Value / foot; math.Abs(got-want[0]) > want[1]+2e-3 {
				t.Errorf("sag of span %d: %.4f ft, %s says %.4f", i+2, got, r["source"], want[0])
			}
			if got := c.Spans[i+1].Joint.Value; relative(got, h, 0) > 2e-3 {
				t.Errorf("joint tension %g, want %g", got, h)
			}
		}
	}
	if rows != 1 {
		t.Fatalf("%d rows", rows)
	}
}

const foot = 0.3048

// Properties: naming the spans in another order, or measuring a span from its other end, changes no force on a support; spans of other
// cables change nothing.
func TestOrderAndMirrorDoNotMatter(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		l := threeSpans()
		l.points = 9
		for i := range l.azimuths {
			l.azimuths[i] = rapid.Float64Range(0, 6.2).Draw(rt, "azimuth")
		}
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(rt, "seed"), 1))
		spans := l.surveyed(l.states(t, lineWeight), rng)
		list := l.assessed(t, spans)
		want := JoinSpans(list, "")
		if len(want) != 1 {
			rt.Skip("ends that should be free meet")
		}
		mirrored := slices.Clone(spans)
		for i := range mirrored {
			if rapid.Bool().Draw(rt, "turned") {
				mirrored[i].A, mirrored[i].B = mirrored[i].B, mirrored[i].A
				mirrored[i].Points = slices.Clone(mirrored[i].Points)
				slices.Reverse(mirrored[i].Points)
			}
		}
		turned := make([]Assessment, 3)
		for i, sp := range mirrored {
			d := l.design(i)
			if sp.A != spans[i].A {
				d.Rise.Value = -d.Rise.Value
			}
			a, err := Assess(Case{Points: sp, Design: d, Conditions: survey.Conditions{Loads: survey.LoadsAsFiled, CableTemperature: q(10, 1)}})
			if err != nil {
				rt.Fatal(err)
			}
			turned[i] = a
		}
		order := rapid.Permutation([]int{0, 1, 2}).Draw(rt, "order")
		shuffled := make([]Assessment, 3)
		for i, k := range order {
			shuffled[i] = turned[k]
		}
		got := JoinSpans(shuffled, "")
		if len(got) != 1 {
			rt.Fatalf("%d cables", len(got))
		}
		if relative(*got[0].ChiSquare, *want[0].ChiSquare, 1e-3) > 1e-3 {
			rt.Fatalf("chi-square %g, %g", *got[0].ChiSquare, *want[0].ChiSquare)
		}
		for i := range 2 {
			g, w := got[0].Supports[i], want[0].Supports[i]
			if (g.FrictionNeeded == nil) != (w.FrictionNeeded == nil) || (g.FrictionNeeded != nil && math.Abs(g.FrictionNeeded.Value-w.FrictionNeeded.Value) > 1e-4*w.FrictionNeeded.U+1e-9) {
				rt.Fatalf("support %d: friction %v, turned %v", i, w.FrictionNeeded, g.FrictionNeeded)
			}
			for _, c := range [][2]Quantity{{g.TensionStep, w.TensionStep}, {g.Along, w.Along}, {g.Left, w.Left}, {g.Down, w.Down}, {g.Resultant, w.Resultant}, {g.Bend, w.Bend}} {
				if math.Abs(c[0].Value-c[1].Value) > 1e-4*c[1].U+1e-6*lineTension || relative(c[0].U, c[1].U, 1e-3) > 1e-3 {
					rt.Fatalf("support %d: %+v, turned %+v", i, c[1], c[0])
				}
			}
		}
	})
}

func TestOrderOfIDs(t *testing.T) {
	got := []string{"10", "2", "b2", "1", "b10", "01", "A"}
	slices.SortStableFunc(got, compareIDs)
	if want := []string{"1", "01", "2", "10", "A", "b2", "b10"}; !slices.Equal(got, want) {
		t.Errorf("%q", got)
	}
}
