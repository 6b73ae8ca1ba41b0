package fit

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
	"pgregory.net/rapid"
)

// loaded draws hanging curves with one to three local loads, some beyond the defining stations.
func loaded(t *rapid.T) Curve {
	c := curves(t)
	n := rapid.IntRange(1, 3).Draw(t, "loads")
	at := -0.3
	for range n {
		at += rapid.Float64Range(0.05, 0.5).Draw(t, "gap")
		c.Cusps = append(c.Cusps, Cusp{Station: c.S1 + at*c.length(), Kink: rapid.Float64Range(-0.2, 1).Draw(t, "kink") * c.Curvature * c.length()})
	}
	return c
}

func TestLocalLoadsMakeTheirKinks(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := loaded(t)
		near := func(name string, got, want, scale float64) {
			if !(math.Abs(got-want) <= 2e-9*scale) {
				t.Fatalf("%s: %.15g against %.15g", name, got, want)
			}
		}
		l := c.length()
		size := math.Hypot(l, c.Z2-c.Z1)
		near("height at S1", c.Z(c.S1), c.Z1, size)
		near("height at S2", c.Z(c.S2), c.Z2, size)
		for i, p := range c.plain()[1:] {
			q := c.plain()[i]
			near("height at a load", p.Z1, q.Z2, size)
			near("kink", p.Slope(p.S1)-q.Slope(q.S2), c.Cusps[i].Kink, math.Hypot(1, p.Slope(p.S1)))
		}
		sa, sb := c.S1+0.13*l, c.S1+0.91*l
		s := c.S1 + rapid.Float64Range(-0.1, 1.1).Draw(t, "part")*l
		b := c.Rebase(sa, sb)
		near("rebased height", b.Z(s), c.Z(s), size)
		near("rebased slope", b.Slope(s), c.Slope(s), math.Hypot(1, c.Slope(s)))
		near("arc adds up", c.ArcLength(sa, s)+c.ArcLength(s, sb), c.ArcLength(sa, sb), size)
		mirror := Curve{S1: -c.S2, Z1: c.Z2, S2: -c.S1, Z2: c.Z1, Curvature: c.Curvature, SelfShare: c.SelfShare}
		for i := len(c.Cusps) - 1; i >= 0; i-- {
			mirror.Cusps = append(mirror.Cusps, Cusp{-c.Cusps[i].Station, c.Cusps[i].Kink})
		}
		near("mirror", mirror.Z(-s), c.Z(s), size)
		at, sag := c.GreatestSag(c.S1, c.S2)
		near("greatest sag", c.Sag(at, c.S1, c.S2), sag, size)
		if d := c.Sag(s, c.S1, c.S2); s >= c.S1 && s <= c.S2 && d > sag+1e-9*size {
			t.Fatalf("sag %g at %g exceeds the greatest %g", d, s, sag)
		}
	})
}

func TestGradientWithLocalLoadsIsTheDerivative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := loaded(t)
		var columns []column
		for i := range c.Cusps {
			columns = append(columns, column{kink: 3 + 2*i, place: 4 + 2*i})
		}
		s := c.S1 + rapid.Float64Range(-0.1, 1.1).Draw(t, "part")*c.length()
		for _, p := range c.Cusps {
			if math.Abs(s-p.Station) < 2e-3*c.length() {
				return // a difference across the kink is no derivative
			}
		}
		e := c.evaluatorBy(columns)
		var g gradient
		e.at(s, &g)
		for i := range 3 + 2*len(c.Cusps) {
			up, down := c, c
			up.Cusps, down.Cusps = append([]Cusp(nil), c.Cusps...), append([]Cusp(nil), c.Cusps...)
			step, scale := 1e-3, 1.0
			switch {
			case i == 0:
				up.Z1, down.Z1 = c.Z1+step, c.Z1-step
			case i == 1:
				up.Z2, down.Z2 = c.Z2+step, c.Z2-step
			case i == 2:
				step, scale = c.Curvature*1e-4, c.length()*c.length()
				up.Curvature, down.Curvature = c.Curvature+step, c.Curvature-step
			case i%2 == 1:
				step, scale = 1e-4*c.Curvature*c.length(), c.length()
				up.Cusps[(i-3)/2].Kink += step
				down.Cusps[(i-3)/2].Kink -= step
			default:
				step, scale = 1e-4*c.length(), math.Abs(c.Cusps[(i-4)/2].Kink)+c.Curvature*c.length()
				up.Cusps[(i-4)/2].Station += step
				down.Cusps[(i-4)/2].Station -= step
			}
			want := (up.Z(s) - down.Z(s)) / (2 * step)
			if d := math.Abs(g[i] - want); !(d <= 1e-5*scale*math.Hypot(1, c.Slope(s))+1e-12*(math.Abs(c.Z(s))+c.length())/step) {
				t.Fatalf("parameter %d at %g of %+v: %g, by differences %g", i, s, c, g[i], want)
			}
		}
	})
}

// Published strings under point loads without a weight of their own: points on the sides of the polygon that the source's answer
// describes. The kinks times H are the loads.
func TestPublishedPolygons(t *testing.T) {
	rows := checkRows(t)
	for id, loads := range map[string]string{"S04": "P_kN", "S15": "P_N", "S16": "P_N"} {
		r := rows[id]
		x, p := r.in["x_loads_m"], r.in[loads]
		span, rise := r.x("span_m"), r.x("rise_m")
		h := r.polygonH(x, p, span, rise)
		z := func(s float64) float64 { // moments of the loads about A: statics of a string, independent of the curve under test
			sum := 0.0
			for i := range x {
				sum += p[i] / h * (math.Max(0, s-x[i]) - s/span*(span-x[i]))
			}
			return rise/span*s + sum
		}
		var obs []Observation
		var told []LocalLoad
		for i := range 41 {
			s := span * (float64(i) + 0.5) / 41
			obs = append(obs, Observation{S: s, Z: z(s), VarZ: 1e-6})
		}
		for _, s := range x {
			told = append(told, LocalLoad{Station: s, SizeFree: true})
		}
		fitted, err := InPlane(obs, Frame{}, End{}, End{Station: span}, Options{Loads: told, NoAlternatives: true})
		if err != nil {
			t.Fatalf("%s: %v", id, err)
		}
		for i, l := range fitted.Loads {
			if got := l.Kink * h; math.Abs(got/p[i]-1) > 1e-9 {
				t.Errorf("%s: load %d is %.12g, want %g (%s)", id, i+1, got, p[i], r.row["source"])
			}
		}
		if k := fitted.Curve.Curvature * span; math.Abs(k) > 1e-9 {
			t.Errorf("%s: curvature times span %g on straight sides", id, k)
		}
		if id != "S16" {
			r.is(map[string]string{"S04": "H_kN", "S15": "H_N"}[id], h)
		}
		from, to := fitted.Curve.Slope(0), fitted.Curve.Slope(span)
		switch id {
		case "S04":
			r.is("T1_kN", h*math.Hypot(1, from))
			r.is("T4_kN", h*math.Hypot(1, to))
			r.is("T2_kN", h*math.Hypot(1, fitted.Curve.Slope((x[0]+x[1])/2)))
			r.is("T3_kN", h*math.Hypot(1, fitted.Curve.Slope((x[1]+x[2])/2)))
		case "S15":
			r.is("T1_N", h*math.Hypot(1, from))
			r.is("VB_N", h*to)
			r.is("Tmax_N", h*math.Hypot(1, to))
			r.is("slope_max_deg", math.Atan(to)*180/math.Pi)
		case "S16":
			r.is("VA_N", -h*from)
			r.is("VB_N", h*to)
			r.is("T1_N", h*math.Hypot(1, from))
			r.is("T2_N", h*math.Hypot(1, fitted.Curve.Slope((x[0]+x[1])/2)))
		}
	}
}

// polygonH is the horizontal tension of a string under point loads: given, or from the known drop of one load point below A.
func (c *checkRow) polygonH(x, p []float64, span, rise float64) float64 {
	if h := c.in["H_N"]; h != nil {
		return h[0]
	}
	at := x[int(c.x("known_point"))-1]
	moment := 0.0 // of the simple beam at the known point
	for i := range x {
		moment += p[i] * (math.Max(0, at-x[i]) - at/span*(span-x[i]))
	}
	return -moment / (c.x("known_drop_m") + rise/span*at)
}

// loadedTruth is an invented cable with one local load, surveyed with equal errors in both coordinates.
type loadedTruth struct {
	c     Curve
	n     int
	sigma float64
}

func (w loadedTruth) points(rng *rand.Rand) []Observation { return noisy(rng, w.c, w.n, w.sigma, true) }

// Loads told with their size, told without, and found: bias, sharpness and coverage of curvature and size.
func TestLocalLoadsAreEstimatedWell(t *testing.T) {
	runs := 3000
	if testing.Short() {
		runs = 1000
	}
	deep := hang(80, 0.1, 0.05)
	deep.Cusps = []Cusp{{30, 0.05}}
	flat := hang(50, 0, 0.01)
	flat.SelfShare = 0
	flat.Cusps = []Cusp{{12, 0.02}}
	for _, c := range []struct {
		name string
		w    loadedTruth
		o    Options
	}{
		{"size told", loadedTruth{deep, 25, 0.004}, Options{Loads: []LocalLoad{{Station: 30, Ratio: 0.05 / deep.Curvature}}}},
		{"place told", loadedTruth{deep, 25, 0.004}, Options{Loads: []LocalLoad{{Station: 30, SizeFree: true}}}},
		{"found", loadedTruth{deep, 31, 0.002}, Options{FindLoads: 2}},
		{"found, parabola", loadedTruth{flat, 31, 0.001}, Options{FindLoads: 2, Shape: Parabola}},
	} {
		rng := rand.New(rand.NewPCG(5, 5))
		c.o.NoAlternatives = true
		var bias, square, coverK, coverP, found, n float64
		for range runs {
			r, err := InPlane(c.w.points(rng), Frame{}, End{}, End{Station: c.w.c.S2}, c.o)
			if err != nil {
				t.Fatal(err)
			}
			if len(r.Loads) != 1 {
				continue
			}
			found++
			t95 := distuv.UnitNormal.Quantile(0.975)
			if r.ScaledBy != 1 {
				t95 = distuv.StudentsT{Sigma: 1, Nu: float64(r.DegreesOfFreedom)}.Quantile(0.975)
			}
			n++
			u := math.Sqrt(r.Cov[2][2])
			z := (r.Curve.Curvature - c.w.c.Curvature) / u
			free := z * math.Sqrt(r.ScaledBy) * r.Widening // against the bound by the true accuracy
			bias += z
			square += free * free
			if math.Abs(z) < t95 {
				coverK++
			}
			if l := r.Loads[0]; math.Abs(l.Kink-c.w.c.Cusps[0].Kink) < t95*l.UKink {
				coverP++
			}
		}
		t.Logf("%-16s found %.1f %%, bias %+.3f u, rms/bound %.3f, covered: curvature %.1f %%, size %.1f %%", c.name, 100*found/float64(runs), bias/n,
			math.Sqrt(square/n), 100*coverK/n, 100*coverP/n)
		if found < 0.995*float64(runs) {
			t.Errorf("%s: one load in %g of %d surveys", c.name, found, runs)
		}
		if math.Abs(bias/n) > 0.08 || math.Abs(math.Sqrt(square/n)-1) > 0.05 {
			t.Errorf("%s: bias %.3f u, rms %.3f of the bound", c.name, bias/n, math.Sqrt(square/n))
		}
		for _, cover := range []float64{coverK / n, coverP / n} {
			if cover < 0.935 || cover > 0.965 {
				t.Errorf("%s: 95 %% interval covers %.1f %%", c.name, 100*cover)
			}
		}
	}
}

// Without a load none is found oftener than chanceLimit says, whatever is known of the accuracy; with a load of growing size it is found
// at the rate that its size in standard deviations allows.
func TestSearchKeepsItsFalseAlarmRate(t *testing.T) {
	runs := 6000
	if testing.Short() {
		runs = 2000
	}
	for _, stated := range []bool{true, false} {
		rng := rand.New(rand.NewPCG(9, 9))
		c := hang(80, 0.1, 0.05)
		alarms := 0
		for range runs {
			r, err := InPlane(noisy(rng, c, 12+rng.IntN(30), 0.004, stated), Frame{}, End{}, End{Station: 80}, Options{FindLoads: 1, NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			alarms += len(r.Loads)
		}
		most := chanceLimit*float64(runs) + 3*math.Sqrt(chanceLimit*float64(runs))
		t.Logf("stated %v: %d alarms in %d surveys without a load, at most %.0f allowed", stated, alarms, runs, most)
		if float64(alarms) > most {
			t.Errorf("stated %v: %d alarms in %d", stated, alarms, runs)
		}
	}
	rng := rand.New(rand.NewPCG(9, 10))
	last := -1
	for _, size := range []float64{2, 4, 6, 8} { // in standard deviations of a kink of known place
		c := hang(80, 0.1, 0.05)
		c.Cusps = []Cusp{{37, 1}}
		probe, err := InPlane(noisy(rng, c, 31, 0.004, true), Frame{}, End{}, End{Station: 80}, Options{Loads: []LocalLoad{{Station: 37, SizeFree: true}}, NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		c.Cusps = []Cusp{{37, size * probe.Loads[0].UKink}}
		found := 0
		for range runs / 6 {
			r, err := InPlane(noisy(rng, c, 31, 0.004, true), Frame{}, End{}, End{Station: 80}, Options{FindLoads: 1, NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			found += len(r.Loads)
		}
		t.Logf("a kink of %g u is found in %d of %d surveys", size, found, runs/6)
		if found < last {
			t.Errorf("a kink of %g u is found less often (%d) than a smaller one (%d)", size, found, last)
		}
		last = found
	}
	if last < runs/6*95/100 {
		t.Errorf("a kink of 8 u is found in %d of %d surveys only", last, runs/6)
	}
}

// One wrong point is no load: a blunder that would make a kink is dropped or listed, and no load is invented for it.
func TestBlunderIsNoLocalLoad(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 4))
	invented := 0
	for range 800 {
		obs := noisy(rng, hang(80, 0.1, 0.05), 25, 0.004, true)
		obs[3+rng.IntN(19)].Z += (0.03 + 0.3*rng.Float64()) * float64(1-2*rng.IntN(2))
		r, err := InPlane(obs, Frame{}, End{}, End{Station: 80}, Options{RejectBeyond: 5, FindLoads: 2, NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		invented += len(r.Loads)
	}
	if invented > 2 {
		t.Errorf("%d local loads invented in 800 surveys with one blunder", invented)
	}
}

// A strong local load must not be taken apart as a row of blunders.
func TestLocalLoadIsNotDroppedAsBlunders(t *testing.T) {
	rng := rand.New(rand.NewPCG(4, 5))
	for _, kink := range []float64{0.01, 0.03, 0.1, 0.3} {
		c := hang(80, 0.1, 0.05)
		c.Cusps = []Cusp{{37, kink}}
		dropped, found := 0, 0
		for range 100 {
			r, err := InPlane(noisy(rng, c, 25, 0.003, true), Frame{}, End{}, End{Station: 80}, Options{RejectBeyond: 5, FindLoads: 2, NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			dropped += len(r.Rejected)
			found += len(r.Loads)
		}
		if dropped > 2 || found < 99 || found > 102 {
			t.Errorf("kink %g: %d points dropped, %d loads found in 100 surveys", kink, dropped, found)
		}
	}
}

// ByRatio is the derivative of the fitted curve by the told size, but for the residuals times second derivatives, as all of the covariance.
func TestByRatioIsTheDerivative(t *testing.T) {
	c := hang(80, 0.1, 0.05)
	c.Cusps = []Cusp{{30, 0.05}, {55, 0.02}}
	obs := noisy(rand.New(rand.NewPCG(6, 6)), c, 25, 0.004, true)
	at := func(ratio float64) *Result {
		r, err := InPlane(obs, Frame{}, End{}, End{Station: 80}, Options{Loads: []LocalLoad{{Station: 30, Ratio: ratio}, {Station: 55, SizeFree: true}}, NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	ratio := 0.05 / c.Curvature
	step := ratio * 1e-4
	mid, up, down := at(ratio), at(ratio+step), at(ratio-step)
	for i, q := range [3][2]float64{{up.Curve.Z1, down.Curve.Z1}, {up.Curve.Z2, down.Curve.Z2}, {up.Curve.Curvature, down.Curve.Curvature}} {
		want := (q[0] - q[1]) / (2 * step)
		if got := mid.Loads[0].ByRatio[i]; !(math.Abs(got-want) <= 3e-3*math.Abs(want)) {
			t.Errorf("parameter %d: %g, by differences %g", i, got, want)
		}
	}
}

// A record of the size and the shape together: between the two, sharper than either, and the disagreement is told.
func TestSizeIsAdjustedWithTheRecord(t *testing.T) {
	c := hang(80, 0.1, 0.05)
	c.Cusps = []Cusp{{30, 0.05}}
	for _, stated := range []bool{true, false} {
		obs := noisy(rand.New(rand.NewPCG(6, 7)), c, 25, 0.004, stated)
		fitted := func(l LocalLoad) *Result {
			r, err := InPlane(obs, Frame{}, End{}, End{Station: 80}, Options{Loads: []LocalLoad{l}, NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			return r
		}
		alone := fitted(LocalLoad{Station: 30, SizeFree: true})
		size := alone.Loads[0].Kink / alone.Curve.Curvature
		u := alone.Loads[0].UKink / alone.Curve.Curvature
		told := size + 3*u
		both := fitted(LocalLoad{Station: 30, Ratio: told, URatio: u})
		got := both.Loads[0].Kink / both.Curve.Curvature
		if !(got > size+0.8*u && got < told-0.8*u) {
			t.Errorf("stated %v: shape %.4g, record %.4g, both %.4g", stated, size, told, got)
		}
		if both.Loads[0].UKink > 0.9*alone.Loads[0].UKink*math.Sqrt(both.ScaledBy/alone.ScaledBy) {
			t.Errorf("stated %v: u of the kink %.3g, by the shape alone %.3g", stated, both.Loads[0].UKink, alone.Loads[0].UKink)
		}
		if off := both.Loads[0].OffTold; off > -1.5 || off < -3 {
			t.Errorf("stated %v: shape differs from the record by %.2f u, expected about -2", stated, off)
		}
	}
}
