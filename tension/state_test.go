package tension

import (
	"errors"
	"math"
	"testing"
)

// Reference: elastic-exact.csv, elastic catenaries by 40-digit arithmetic (mpmath), see its generator in testdata.
func TestAtLengthMeetsExactElasticCatenaries(t *testing.T) {
	worst, seen := 0.0, 0
	for _, r := range table(t, "elastic-exact.csv") {
		if r.f(t, "P") != 0 {
			continue
		}
		seen++
		c := Cable{SelfWeight: r.f(t, "w"), AxialStiffness: r.f(t, "EA"), Expansion: r.f(t, "alpha")}
		ch := Chord{Length: r.f(t, "span"), Rise: r.f(t, "rise")}
		st, err := c.AtLength(r.f(t, "l0"), ch, r.f(t, "dt"))
		if err != nil {
			t.Fatalf("%s: %v", r["id"], err)
		}
		for _, p := range []struct {
			key  string
			got  float64
			size float64
		}{
			{"H", st.H, 0}, {"V_left", st.VerticalA(), st.H * 1e-3}, {"V_right", st.VerticalB(), st.H * 1e-3},
			{"T_left", st.TensionA(), 0}, {"T_right", st.TensionB(), 0}, {"sag_mid", st.SagMid(), 0},
		} {
			d := relative(p.got, r.f(t, p.key), p.size)
			worst = math.Max(worst, d)
			if !(d <= 1e-9) {
				t.Errorf("%s %s = %.15g, want %s (relative %.1e)", r["id"], p.key, p.got, r[p.key], d)
			}
		}
		back, err := c.AtTension(st.H, ch, r.f(t, "dt"))
		if err != nil {
			t.Fatal(err)
		}
		if d := relative(back.Unstressed, r.f(t, "l0"), 0); !(d <= 1e-13) {
			t.Errorf("%s: S0 from H = %.15g, want %s", r["id"], back.Unstressed, r["l0"])
		}
	}
	if seen != 54 {
		t.Fatalf("read %d states without point load, want 54", seen)
	}
	t.Logf("worst relative difference %.1e", worst)
}

// Reference: catenary-exact.csv, 50-digit arithmetic; the inextensible limit of the state must be the catenary.
func TestInextensibleStateIsCatenary(t *testing.T) {
	worst, seen := 0.0, 0
	for _, r := range table(t, "catenary-exact.csv") {
		seen++
		a := r.f(t, "a")
		c := Cable{SelfWeight: 1, AxialStiffness: math.Inf(1)}
		ch := Chord{Length: r.f(t, "span"), Rise: r.f(t, "rise")}
		st, err := c.AtTension(a, ch, 0)
		if err != nil {
			t.Fatalf("%s: %v", r["id"], err)
		}
		for _, p := range []struct {
			key  string
			got  float64
			size float64
		}{
			{"length", st.Unstressed, 0}, {"V_left", st.VerticalA(), st.TensionA()}, {"V_right", st.VerticalB(), st.TensionB()},
			{"T_left", st.TensionA(), 0}, {"T_right", st.TensionB(), 0}, {"sag_mid", st.SagMid(), 0},
		} {
			d := relative(p.got, r.f(t, p.key), p.size)
			worst = math.Max(worst, d)
			if !(d <= 1e-9) {
				t.Errorf("%s %s = %.15g, want %s (relative %.1e)", r["id"], p.key, p.got, r[p.key], d)
			}
		}
	}
	if seen != 231 {
		t.Fatalf("read %d catenaries, want 231", seen)
	}
	t.Logf("worst relative difference %.1e", worst)
}

func TestStatesThatDoNotExist(t *testing.T) {
	ch := Chord{Length: 100}
	if _, err := (Cable{AxialStiffness: 1e8}).AtLength(101, ch, 0); !errors.Is(err, ErrNoLoad) {
		t.Errorf("no load: %v", err)
	}
	if _, err := (Cable{SelfWeight: 50, AxialStiffness: math.Inf(1)}).AtLength(99, ch, 0); !errors.Is(err, ErrTooShort) {
		t.Errorf("too short: %v", err)
	}
	for _, c := range []Cable{{SelfWeight: -1, AxialStiffness: 1}, {SelfWeight: math.NaN(), AxialStiffness: 1}, {SelfWeight: 1}} {
		if _, err := c.AtTension(1000, ch, 0); err == nil {
			t.Errorf("%+v was taken", c)
		}
	}
}
