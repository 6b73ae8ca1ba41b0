package tension

import (
	"math"
	"testing"
)

// Reference: elastic-exact.csv, elastic catenaries with a point load by 40-digit arithmetic (mpmath).
func TestAtLengthLoadedMeetsExactCatenaries(t *testing.T) {
	worst, seen := 0.0, 0
	for _, r := range table(t, "elastic-exact.csv") {
		var loads []PointLoad
		if p := r.f(t, "P"); p != 0 {
			loads = []PointLoad{{At: r.f(t, "fp") * r.f(t, "l0"), P: p}}
		}
		seen++
		c := Cable{SelfWeight: r.f(t, "w"), AxialStiffness: r.f(t, "EA"), Expansion: r.f(t, "alpha")}
		st, err := c.AtLengthLoaded(r.f(t, "l0"), Chord{Length: r.f(t, "span"), Rise: r.f(t, "rise")}, r.f(t, "dt"), loads)
		if err != nil {
			t.Fatalf("%s: %v", r["id"], err)
		}
		check := func(key string, got, size float64) {
			d := relative(got, r.f(t, key), size)
			worst = math.Max(worst, d)
			if !(d <= 1e-9) {
				t.Errorf("%s %s = %.15g, want %s (relative %.1e)", r["id"], key, got, r[key], d)
			}
		}
		check("H", st.H, 0)
		check("V_left", st.VerticalA(), st.H*1e-3)
		check("V_right", st.VerticalB(), st.H*1e-3)
		check("sag_mid", st.Below(r.f(t, "span")/2), 0)
		if loads != nil {
			_, _, x, y, _, _ := st.Segment(0)
			check("x_load", x, 0)
			check("y_load", y, 0.01)
		}
	}
	if seen != 72 {
		t.Fatalf("read %d states, want 72", seen)
	}
	t.Logf("worst relative difference %.1e", worst)
}

// Reference: check-values C01, C02 and C04, the isolated cable with a point load: 1000 ft span, 8 kips at the 400 ft point;
// movement of the loaded point from the unloaded state, and its cusp P/H. Jayaraman and Knudson, Computers and Structures
// 14 (1981) 325-333; Michalos and Birnstiel (1960); O'Brien and Francis (1964): -2.82 and -18.46 ft, -0.859 and -5.626 m
// (from memory; arithmetic checked to full consistency with mpmath).
func TestIsolatedCableBenchmark(t *testing.T) {
	for _, b := range []struct {
		id                    string
		span, ea, w, l1, l2   float64
		p                     float64
		dx, dy, tol, sag0     float64
		sagTol, hWant, hTol   float64
		kink, kinkTol, x0, xT float64
	}{
		{"C01/C04 (ft, lb)", 1000, 16150000, 3.16, 412.8837, 613.0422, 8000, -2.82, -18.46, 0.005, 96.05, 0.005, 20107.2, 0.1, 0.397867, 1e-5, 400, 0.001},
		{"C02 (m, N)", 304.8, 71840400, 46.12, 125.84695176, 186.85526256, 35586, -0.859, -5.626, 0.001, 29.276, 0.001, 0, 0, 0, 0, 0, 0},
	} {
		c := Cable{SelfWeight: b.w, AxialStiffness: b.ea}
		ch := Chord{Length: b.span}
		bare, err := c.AtLengthLoaded(b.l1+b.l2, ch, 0, []PointLoad{{At: b.l1, P: 0}})
		if err != nil {
			t.Fatal(err)
		}
		full, err := c.AtLengthLoaded(b.l1+b.l2, ch, 0, []PointLoad{{At: b.l1, P: b.p}})
		if err != nil {
			t.Fatal(err)
		}
		_, _, x0, y0, _, _ := bare.Segment(0)
		_, _, x1, y1, _, slopeBefore := full.Segment(0)
		_, _, _, _, slopeAfter, _ := full.Segment(1)
		near := func(name string, got, want, tol float64) {
			if tol > 0 && !(math.Abs(got-want) <= tol) {
				t.Errorf("%s %s = %.6g, want %g within %g", b.id, name, got, want, tol)
			}
		}
		near("dx", x1-x0, b.dx, b.tol)
		near("dy", y1-y0, b.dy, b.tol)
		near("sag0", -y0, b.sag0, b.sagTol)
		near("H", full.H, b.hWant, b.hTol)
		near("kink", slopeAfter-slopeBefore, b.kink, b.kinkTol)
		near("x0", x0, b.x0, b.xT)
	}
}

// Reference: elastic-bvp.csv, two-point boundary-value problems solved by collocation with scipy.integrate.solve_bvp (see
// bvp.py): self weight and deck load together, warm and cold, level and inclined, with and without a point load.
func TestStatesMeetBoundaryValueSolutions(t *testing.T) {
	worst, seen := 0.0, 0
	for _, r := range table(t, "elastic-bvp.csv") {
		seen++
		c := Cable{SelfWeight: r.f(t, "w"), DeckLoad: r.f(t, "q"), AxialStiffness: r.f(t, "EA"), Expansion: r.f(t, "alpha")}
		cut := PointLoad{At: r.f(t, "fp") * r.f(t, "s0"), P: r.f(t, "P")}
		st, err := c.AtLengthLoaded(r.f(t, "s0"), Chord{Length: r.f(t, "span"), Rise: r.f(t, "rise")}, r.f(t, "dt"), []PointLoad{cut})
		if err != nil {
			t.Fatalf("%s: %v", r["id"], err)
		}
		_, _, x, y, _, _ := st.Segment(0)
		for _, p := range []struct {
			key       string
			got, size float64
		}{{"H", st.H, 0}, {"V_left", st.VerticalA(), st.H / 10}, {"V_right", st.VerticalB(), st.H / 10}, {"x_cut", x, 0}, {"y_cut", y, 1}} {
			d := relative(p.got, r.f(t, p.key), p.size)
			worst = math.Max(worst, d)
			if !(d <= 1e-7) {
				t.Errorf("%s %s = %.12g, want %s (relative %.1e)", r["id"], p.key, p.got, r[p.key], d)
			}
		}
	}
	if seen < 20 {
		t.Fatalf("read %d states, want at least 20", seen)
	}
	t.Logf("%d states, worst relative difference %.1e", seen, worst)
}
