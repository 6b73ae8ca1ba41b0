package fit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// wild adds gross errors to count points of a survey and returns their ids.
func wild(rng *rand.Rand, p survey.SpanPoints, count int, size func() float64) map[string]bool {
	bad := map[string]bool{}
	for _, i := range rng.Perm(len(p.Points))[:count] {
		p.Points[i].Z += size()
		bad[p.Points[i].ID] = true
	}
	return bad
}

// outcome counts what a rejection did.
type outcome struct{ missed, wronged, all, withheld int }

func (o *outcome) count(r *Result, bad map[string]bool) {
	right, wrong := 0, 0
	for _, s := range r.Rejected {
		if bad[s.ID] {
			right++
		} else {
			wrong++
		}
	}
	o.missed += len(bad) - right
	o.wronged += wrong
	if right == len(bad) && wrong == 0 {
		o.all++
	}
	if len(r.Stretches) > 0 || r.Torn != nil {
		o.withheld++
	}
}

// eitherWay is an error of 20 standard deviations to 2 m, up or down.
func eitherWay(rng *rand.Rand, sigma float64) func() float64 {
	return func() float64 {
		return 20 * sigma * math.Pow(2/(20*sigma), rng.Float64()) * float64(1-2*rng.IntN(2))
	}
}

// Simulation with known truth: gross errors among good points are all found and no good point is lost.
func TestManyGrossErrorsAreFound(t *testing.T) {
	const sigma = 0.003
	const seeds = 100 // in short runs too: with fewer the shares mean little
	shapes := []struct {
		name  string
		curve Curve
	}{{"ordinary", hang(96, 0.02, 0.05)}, {"deep", hang(60, 0.1, 0.2)}, {"taut", hang(80, 0, 0.002)}, {"steep", hang(40, 1, 0.006)}}
	for _, c := range []struct {
		name     string
		n, wild  int
		beyond   float64
		atLeast  float64 // share of surveys in which all were found and none was thrown wrongly
		withheld float64 // share of surveys in which a run of errors may be taken for a stretch of the cable
	}{
		{"five of 25", 25, 5, 6, 0.99, 0.01},
		{"ten of 25, 40 %", 25, 10, 6, 0.75, 0.07},
		{"40 of 100, 40 %", 100, 40, 6, 0.97, 0.03},
	} {
		for _, shape := range shapes {
			for _, stated := range []bool{true, false} {
				var o outcome
				seeds := seeds
				if c.n > 25 {
					seeds /= 2
				}
				for seed := range uint64(seeds) {
					rng := rand.New(rand.NewPCG(seed, 40))
					p := truth{curve: shape.curve, n: c.n, along: sigma, up: sigma, stated: stated}.survey(rng)
					bad := wild(rng, p, c.wild, eitherWay(rng, sigma*math.Hypot(1, shape.curve.chord())))
					o.count(fitted(t, p, Options{RejectBeyond: c.beyond, NoAlternatives: true}), bad)
				}
				t.Logf("%-16s %-9s stated %-5v: all found, none wronged %.2f %%; missed %d of %d, wronged %d, withheld %d", c.name, shape.name, stated,
					100*float64(o.all)/float64(seeds), o.missed, seeds*c.wild, o.wronged, o.withheld)
				if float64(o.all) < c.atLeast*float64(seeds) || float64(o.withheld) > c.withheld*float64(seeds) {
					t.Errorf("%s, %s, stated %v: %+v in %d surveys", c.name, shape.name, stated, o, seeds)
				}
			}
		}
	}
}

// Two errors that are alike bend the curve to themselves and hide each other from a search one by one.
func TestMaskedPairsAreFound(t *testing.T) {
	const sigma = 0.003
	seeds := 100
	for _, size := range []float64{12, 20, 100, 600} {
		for _, gap := range []int{1, 2, 24} { // neighbours, next but one, both ends
			for _, stated := range []bool{true, false} {
				if !stated && size < 20 {
					continue // without an accuracy 17 residuals leave errors of 11 standard deviations possible
				}
				var o outcome
				for seed := range uint64(seeds) {
					rng := rand.New(rand.NewPCG(seed, 41))
					p := truth{curve: hang(96, 0.02, 0.05), n: 25, along: sigma, up: sigma, stated: stated}.survey(rng)
					i := rng.IntN(25 - gap)
					p.Points[i].Z += size * sigma
					p.Points[i+gap].Z += size * sigma
					o.count(fitted(t, p, Options{RejectBeyond: 6, NoAlternatives: true}), map[string]bool{p.Points[i].ID: true, p.Points[i+gap].ID: true})
				}
				t.Logf("pair of %3.0f sigma, %2d apart, stated %-5v: %d of %d", size, gap, stated, o.all, seeds)
				least := 98
				if size < 20 {
					least = 85 // an end point must jump by eight standard deviations to stand off its neighbours
				}
				if o.all < seeds*least/100 {
					t.Errorf("pair of %g sigma, %d apart, stated %v: %+v in %d surveys", size, gap, stated, o, seeds)
				}
			}
		}
	}
}

// A clean survey loses no point, and its search for errors is seldom begun.
func TestCleanSurveysArePassedBy(t *testing.T) {
	runs := 500
	for _, n := range []int{9, 15, 31, 120} {
		for _, stated := range []bool{true, false} {
			dropped, searched := 0, 0
			for seed := range uint64(runs) {
				rng := rand.New(rand.NewPCG(seed, 42))
				obs := noisy(rng, hang(96, 0.02, 0.05), n, 0.003, stated)
				if r, err := InPlane(obs, Frame{}, End{}, End{Station: 96}, Options{RejectBeyond: 6, NoAlternatives: true}); err != nil || len(r.Rejected)+len(r.Stretches)+len(r.Torn) > 0 {
					dropped++
				}
				var w workspace
				r := Result{B: End{Station: 96}, Observations: obs, Widening: 1}
				var err error
				if r.APriori, err = accuracy(obs); err != nil {
					t.Fatal(err)
				}
				x := rejection{Result: &r, w: &w, share: 1}
				if x.suspicious(r.solve(&w, 1, Options{})) {
					searched++
				}
			}
			t.Logf("%3d points, stated %-5v: searched %.2f %%, dropped or withheld in %d of %d", n, stated, 100*float64(searched)/float64(runs), dropped, runs)
			if dropped > 0 || searched > runs*4/100 {
				t.Errorf("%d points, stated %v: %d clean surveys were searched, %d lost points", n, stated, searched, dropped)
			}
		}
	}
}

// After gross errors are out the 95 % interval of the curvature covers the truth 95 times in a hundred.
func TestCoverageAfterRejection(t *testing.T) {
	const sigma = 0.003
	runs := 3000
	c := hang(96, 0.02, 0.05)
	for _, stated := range []bool{true, false} {
		covered := 0
		for seed := range uint64(runs) {
			rng := rand.New(rand.NewPCG(seed, 43))
			p := truth{curve: c, n: 25, along: sigma, up: sigma, stated: stated}.survey(rng)
			wild(rng, p, 5, eitherWay(rng, sigma))
			r := fitted(t, p, Options{RejectBeyond: 6, NoAlternatives: true})
			t95 := distuv.UnitNormal.Quantile(0.975)
			if !stated || r.ScaledBy != 1 {
				t95 = distuv.StudentsT{Sigma: 1, Nu: float64(r.DegreesOfFreedom)}.Quantile(0.975)
			}
			if math.Abs(r.Curve.Curvature-c.Curvature) <= t95*math.Sqrt(r.Cov[2][2]) {
				covered++
			}
		}
		cover := float64(covered) / float64(runs)
		t.Logf("stated %-5v: 95 %% intervals cover %.2f %% after 5 of 25 points were dropped", stated, 100*cover)
		if cover < 0.94 || cover > 0.96 {
			t.Errorf("stated %v: 95 %% intervals cover %.2f %%", stated, 100*cover)
		}
	}
}

// What the cable itself does on a stretch is not thrown away as errors: a point load, another shape, one set-up that is off.
func TestFeaturesOfTheCableAreNotDropped(t *testing.T) {
	loaded := hang(96, 0.02, 0.05)
	loaded.Cusps = []Cusp{{Station: 40, Kink: 0.03}}
	deep := hang(96, 0, 0.25)
	deep.SelfShare = 0
	for _, c := range []struct {
		name  string
		curve Curve
		off   func(i int) float64 // m, by point
		told  bool                // a stretch must be told
	}{
		{"point load", loaded, func(int) float64 { return 0 }, true},
		{"parabola taken for a catenary", deep, func(int) float64 { return 0 }, false},
		{"bend near a support", hang(96, 0.02, 0.05), func(i int) float64 { return 0.1 * math.Exp(-float64(i)/2.5) }, true},
		{"six points of one set-up", hang(96, 0.02, 0.05), func(i int) float64 {
			if i >= 12 && i < 18 {
				return 0.05
			}
			return 0
		}, true},
		{"the far half of another set-up", hang(96, 0.02, 0.05), func(i int) float64 {
			if i >= 20 {
				return -0.08
			}
			return 0
		}, true},
	} {
		for _, stated := range []bool{true, false} {
			lost, told := 0, 0
			for seed := range uint64(60) {
				rng := rand.New(rand.NewPCG(seed, 44))
				obs := noisy(rng, c.curve, 31, 0.002, stated)
				for i := range obs {
					obs[i].Z += c.off(i)
				}
				r, err := InPlane(obs, Frame{}, End{}, End{Station: 96}, Options{RejectBeyond: 6, NoAlternatives: true})
				if err != nil {
					t.Fatal(err)
				}
				if len(r.Rejected) > 1 {
					lost++
				}
				if len(r.Stretches) > 0 || r.Torn != nil {
					told++
				}
			}
			t.Logf("%-32s stated %-5v: more than one point dropped in %d of 60, told in %d", c.name, stated, lost, told)
			if lost > 0 || stated && c.told && told < 57 {
				t.Errorf("%s, stated %v: dropped in %d of 60 surveys, told in %d", c.name, stated, lost, told)
			}
		}
	}
}

// The same points in another order, and a second time, give the same answer: the sampling is seeded.
func TestRobustStartIsRepeatable(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 45))
	p := truth{curve: hang(96, 0.02, 0.05), n: 40, along: 0.003, up: 0.003, stated: true}.survey(rng)
	bad := wild(rng, p, 14, eitherWay(rng, 0.003))
	want := ""
	for range 5 {
		r := fitted(t, p, Options{RejectBeyond: 6})
		var ids []string
		for _, s := range r.Rejected {
			ids = append(ids, s.ID)
		}
		slices.Sort(ids)
		got := fmt.Sprintf("%v %.9g", ids, r.Curve.Curvature)
		if len(ids) != len(bad) || want != "" && got != want {
			t.Errorf("%s, before %s", got, want)
		}
		want = got
		rng.Shuffle(len(p.Points), func(i, j int) { p.Points[i], p.Points[j] = p.Points[j], p.Points[i] })
	}
}

// The bound on runs against counting: k of n points drawn anywhere, each on either side.
func TestRunChanceBoundsWhatHappens(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 46))
	for _, c := range [][3]int{{25, 5, 2}, {25, 5, 3}, {31, 10, 4}, {100, 6, 2}, {100, 40, 7}} {
		n, k, length := c[0], c[1], c[2]
		const runs = 20000
		seen := 0
		for range runs {
			side := make([]int, n)
			for _, i := range rng.Perm(n)[:k] {
				side[i] = 1 - 2*rng.IntN(2)
			}
			run, hit := 0, false
			for i, v := range side {
				switch {
				case v == 0:
					run = 0
				case i > 0 && side[i-1] == v:
					run++
				default:
					run = 1
				}
				hit = hit || run >= length
			}
			if hit {
				seen++
			}
		}
		got, bound := float64(seen)/runs, runChance(n, k, length)
		if got > bound+4*math.Sqrt(bound/runs) || bound > 2.2*got+0.002 {
			t.Errorf("%v: happens in %.4f, bound %.4f", c, got, bound)
		}
	}
}
