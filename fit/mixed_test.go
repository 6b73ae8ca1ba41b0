package fit

import (
	"math"
	"math/rand/v2"
	"testing"
)

// Reference: testdata/mixed/curves.csv, the differential equation integrated step by step by scipy (script beside it).
func TestMixedCurveAgainstIntegration(t *testing.T) {
	rows, worst := referenceTable(t, "mixed/curves.csv"), 0.0
	for i, r := range rows {
		span, rise := number(t, r, "span"), number(t, r, "rise")
		c := Curve{S2: span, Z2: rise, Curvature: number(t, r, "k"), SelfShare: number(t, r, "mu")}
		size := math.Hypot(span, rise)
		for _, q := range []struct {
			key        string
			got, scale float64
		}{
			{"z_quarter", c.Z(span / 4), size}, {"z_mid", c.Z(span / 2), size}, {"z_three_quarter", c.Z(3 * span / 4), size},
			{"slope_left", c.Slope(0), 1}, {"slope_right", c.Slope(span), 1}, {"length", c.ArcLength(0, span), size},
		} {
			d := math.Abs(q.got-number(t, r, q.key)) / math.Max(q.scale, math.Abs(q.got))
			worst = math.Max(worst, d)
			if !(d <= 1e-10) {
				t.Errorf("row %d: %s = %.14g, want %s (relative %.1e)", i+1, q.key, q.got, r[q.key], d)
			}
		}
	}
	if len(rows) != 12 {
		t.Fatalf("%d curves, want 12", len(rows))
	}
	t.Logf("worst relative difference %.1e", worst)
}

// A fit of the mixed shape to points of a mixed curve finds it, and the alternatives show what a wrong shape would cost.
func TestMixedFitComesBack(t *testing.T) {
	for _, share := range []float64{0.2, 0.5, 0.8} {
		c := Curve{Z1: 30, S2: 90, Z2: 42, Curvature: 0.012, SelfShare: share}
		obs := noisy(rand.New(rand.NewPCG(2, 9)), c, 25, 0.002, true)
		r, err := InPlane(obs, Frame{}, End{}, End{Station: 90}, Options{Shape: Mixed, SelfShare: share})
		if err != nil {
			t.Fatal(err)
		}
		if d := math.Abs(r.Curve.Curvature - c.Curvature); d > 4*math.Sqrt(r.Cov[2][2]) {
			t.Errorf("share %g: curvature %g, true %g, u %g", share, r.Curve.Curvature, c.Curvature, math.Sqrt(r.Cov[2][2]))
		}
		if len(r.Alternatives) != 2 || !(r.Alternatives[0].DeltaAICc > 10) || !(r.Alternatives[1].DeltaAICc > 10) {
			t.Errorf("share %g: alternatives %+v", share, r.Alternatives)
		}
	}
}

// The share of self weight is told when the points can tell it, with coverage, and left open when they cannot.
func TestShareIsToldOrLeftOpen(t *testing.T) {
	runs := 400
	if testing.Short() {
		runs = 120
	}
	rng := rand.New(rand.NewPCG(2, 10))
	covered, told := 0.0, 0.0
	for range runs {
		c := Curve{Z1: 30, S2: 90, Z2: 34, Curvature: 0.014, SelfShare: 0.6}
		r, err := InPlane(noisy(rng, c, 31, 0.004, true), Frame{}, End{}, End{Station: 90}, Options{Shape: Mixed, SelfShare: 0.3})
		if err != nil {
			t.Fatal(err)
		}
		if r.Share == nil {
			continue
		}
		told++
		if math.Abs(r.Share.Value-0.6) <= 1.96*r.Share.U {
			covered++
		}
		// The constant that goes with it is nearer the truth than that of the wrong share.
		if wrong, right := math.Abs(r.Curve.Constant()*0.014-1), math.Abs(r.Share.Constant*0.014-1); right > wrong {
			t.Errorf("constant %.3f m with the share told, %.3f m with the filed one, true %.3f m", r.Share.Constant, r.Curve.Constant(), 1/0.014)
		}
	}
	t.Logf("share told in %g of %d, covered in %.1f %%", told, runs, 100*covered/told)
	if told < float64(runs)*0.99 || math.Abs(covered/told-0.95) > 3.5*math.Sqrt(0.95*0.05/told) {
		t.Errorf("told %g of %d, covered %.3f", told, runs, covered/told)
	}
	flat := Curve{Z1: 30, S2: 90, Z2: 34, Curvature: 0.002, SelfShare: 0.6}
	for range 50 {
		r, err := InPlane(noisy(rng, flat, 31, 0.004, true), Frame{}, End{}, End{Station: 90}, Options{Shape: Parabola})
		if err != nil {
			t.Fatal(err)
		}
		if r.Share != nil {
			t.Fatalf("a flat cable cannot tell the share: %+v", *r.Share)
		}
	}
}
