package fit

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

func referenceTable(t testing.TB, name string) []map[string]string {
	t.Helper()
	f, err := os.Open("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	all, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []map[string]string
	for _, cells := range all[1:] {
		r := map[string]string{}
		for i, c := range cells {
			r[all[0][i]] = c
		}
		rows = append(rows, r)
	}
	return rows
}

func number(t testing.TB, r map[string]string, key string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(r[key], 64)
	if err != nil {
		t.Fatalf("%s: %v", key, err)
	}
	return v
}

// Reference: catenary-exact.csv, 231 catenaries by 50-digit arithmetic (mpmath; generator beside the table).
func TestCatenaryMeetsExactTable(t *testing.T) {
	worst := map[string]float64{}
	rows := referenceTable(t, "catenary-exact.csv")
	for _, r := range rows {
		span, rise, a := number(t, r, "span"), number(t, r, "rise"), number(t, r, "a")
		c := Curve{S1: 0, Z1: 0, S2: span, Z2: rise, Curvature: 1 / a, SelfShare: 1}
		lowS, lowZ, ok := c.LowPoint()
		if !ok {
			t.Fatalf("%s: no low point", r["id"])
		}
		maxS, maxSag := c.GreatestSag(0, span)
		size := math.Hypot(span, rise)
		for _, q := range []struct {
			key        string
			got, scale float64
		}{
			{"x_low", lowS, span}, {"y_low", lowZ, size}, {"sag_mid", c.Sag(span/2, 0, span), 0}, {"sag_max", maxSag, 0},
			{"x_sag_max", maxS, span}, {"length", c.ArcLength(0, span), 0}, {"y_quarter", c.Z(span / 4), size}, {"y_three_quarter", c.Z(3 * span / 4), size},
		} {
			want := number(t, r, q.key)
			d := math.Abs(q.got-want) / math.Max(math.Abs(want), q.scale)
			worst[q.key] = math.Max(worst[q.key], d)
			if !(d <= 1e-9) {
				t.Errorf("%s %s = %.17g, want %s (relative %.1e)", r["id"], q.key, q.got, r[q.key], d)
			}
		}
	}
	if len(rows) != 231 {
		t.Fatalf("%d rows, want 231", len(rows))
	}
	t.Logf("worst relative differences: %v", worst)
}

// curves draws hanging curves from taut to deep, level to 60 degrees, of every shape.
func curves(t *rapid.T) Curve {
	span := rapid.Float64Range(1, 1000).Draw(t, "span")
	ratio := math.Pow(10, rapid.Float64Range(-4, 0).Draw(t, "log sag ratio"))
	incline := rapid.Float64Range(-1.7, 1.7).Draw(t, "incline")
	share := rapid.SampledFrom([]float64{0, 1, 0.5, 0.1, 0.9, 1e-6, 1 - 1e-6}).Draw(t, "share")
	return Curve{S1: -3, Z1: 120, S2: span - 3, Z2: 120 + incline*span, Curvature: 8 * ratio / span, SelfShare: share}
}

func TestGradientIsTheDerivative(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := curves(t)
		s := c.S1 + rapid.Float64Range(-0.2, 1.2).Draw(t, "part")*c.length()
		var g [3]float64
		c.Gradient(s, &g)
		for i, step := range []float64{1e-3, 1e-3, c.Curvature * 1e-4} {
			up, down := c, c
			switch i {
			case 0:
				up.Z1, down.Z1 = c.Z1+step, c.Z1-step
			case 1:
				up.Z2, down.Z2 = c.Z2+step, c.Z2-step
			default:
				up.Curvature, down.Curvature = c.Curvature+step, c.Curvature-step
			}
			want := (up.Z(s) - down.Z(s)) / (2 * step)
			scale := 1.0
			if i == 2 {
				scale = c.length() * c.length()
			}
			if d := math.Abs(g[i] - want); !(d <= 2e-6*scale+1e-12*math.Abs(c.Z(s))/step) {
				t.Fatalf("parameter %d at %g: %g, by differences %g", i, s, g[i], want)
			}
		}
	})
}

func TestCurveProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := curves(t)
		near := func(name string, got, want, scale float64) {
			if !(math.Abs(got-want) <= 1e-9*scale) {
				t.Fatalf("%s: %.15g against %.15g", name, got, want)
			}
		}
		l := c.length()
		size := math.Hypot(l, c.Z2-c.Z1)
		sa, sb := c.S1+0.13*l, c.S1+0.91*l
		s := c.S1 + rapid.Float64Range(0, 1).Draw(t, "part")*l
		b := c.Rebase(sa, sb)
		near("rebased height", b.Z(s), c.Z(s), size)
		near("rebased slope", b.Slope(s), c.Slope(s), math.Hypot(1, c.Slope(s)))
		near("ends", c.Z(c.S1), c.Z1, size)
		near("ends", c.Z(c.S2), c.Z2, size)
		near("arc adds up", c.ArcLength(c.S1, s)+c.ArcLength(s, c.S2), c.ArcLength(c.S1, c.S2), size)
		mirror := Curve{S1: -c.S2, Z1: c.Z2, S2: -c.S1, Z2: c.Z1, Curvature: c.Curvature, SelfShare: c.SelfShare}
		near("mirror", mirror.Z(-s), c.Z(s), size)
		big := Curve{S1: 7 * c.S1, Z1: 7 * c.Z1, S2: 7 * c.S2, Z2: 7 * c.Z2, Curvature: c.Curvature / 7, SelfShare: c.SelfShare}
		near("scale", big.Z(7*s), 7*c.Z(s), 7*size)
		// z'' = k (mu sqrt(1+z'^2) + 1 - mu), by the slope
		h := 1e-4 * l
		bend := (c.Slope(s+h) - c.Slope(s-h)) / (2 * h)
		want := c.Curvature * c.bend(c.Slope(s))
		if !(math.Abs(bend-want) <= 1e-5*want+1e-11/h) {
			t.Fatalf("differential equation: %g against %g", bend, want)
		}
		at, sag := c.GreatestSag(c.S1, c.S2)
		near("greatest sag tangent", c.Slope(at), c.chord(), math.Hypot(1, c.chord())*10)
		if mid := c.Sag(c.middle(), c.S1, c.S2); sag < mid*(1-1e-9) || sag > 1.6*mid {
			t.Fatalf("greatest sag %g, at mid-span %g", sag, mid)
		}
	})
}

func TestMixedCurveHasItsLimits(t *testing.T) {
	for _, k := range []float64{1e-12, 1e-6, 1e-3, 0.02} {
		for _, rise := range []float64{0, 30, -110} {
			base := Curve{S1: 0, Z1: 5, S2: 100, Z2: 5 + rise, Curvature: k}
			for _, s := range []float64{0, 13, 50, 99} {
				for share, limit := range map[float64]float64{1e-13: 0, 1 - 1e-13: 1} {
					m, p := base, base
					m.SelfShare, p.SelfShare = share, limit
					if d := math.Abs(m.Z(s) - p.Z(s)); d > 1e-10 {
						t.Errorf("share %g, curvature %g, rise %g at %g: off by %g", share, k, rise, s, d)
					}
				}
			}
		}
	}
}

// The parabola's arc against Simpson's rule on a fine grid, independent of the closed form.
func TestParabolaArcAgainstQuadrature(t *testing.T) {
	for _, c := range []Curve{{S2: 100, Curvature: 1e-7}, {S2: 100, Z2: 40, Curvature: 1e-3}, {S2: 100, Z2: -170, Curvature: 0.02}} {
		n, sum := 20000, 0.0
		for i := 0; i <= n; i++ {
			w := 4.0 - 2*float64(1-i%2)
			if i == 0 || i == n {
				w = 1
			}
			sum += w * math.Hypot(1, c.Slope(100*float64(i)/float64(n)))
		}
		want := sum * 100 / float64(3*n)
		if got := c.ArcLength(0, 100); math.Abs(got-want) > 1e-11*want {
			t.Errorf("arc of %+v = %.15g, quadrature %.15g", c, got, want)
		}
	}
}
