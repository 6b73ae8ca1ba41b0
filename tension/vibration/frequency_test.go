package vibration

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// table reads a CSV file as one map a row.
func table(t *testing.T, name string) (out []map[string]string) {
	t.Helper()
	f, err := os.Open("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range rows[1:] {
		m := map[string]string{}
		for i, name := range rows[0] {
			m[name] = r[i]
		}
		out = append(out, m)
	}
	return out
}

func number(t *testing.T, text string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func fields(text string) map[string]string {
	out := map[string]string{}
	for _, kv := range strings.Split(text, ";") {
		k, v, _ := strings.Cut(kv, "=")
		out[k] = v
	}
	return out
}

func hertz(t *testing.T, c Cable, n int) float64 {
	t.Helper()
	f, err := c.Frequency(Mode{Number: n})
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// The vibration rows of the published check values; the source of each stands in the row.
func TestPublishedVibration(t *testing.T) {
	type values = map[string]float64
	stiff := func(in func(string) float64, ends Ends) Cable {
		return Cable{Length: in("L_m"), Tension: in("T_N"), Mass: in("m_kg_per_m"), Bending: in("EI_Nm2"), Ends: ends}
	}
	rows := map[string]func(in func(string) float64) values{
		"V01": func(in func(string) float64) values {
			return values{"f1_Hz": hertz(t, Cable{Length: in("L_m"), Tension: in("T_N"), Mass: in("mu_kg_per_m")}, 1)}
		},
		"V02": func(in func(string) float64) values {
			c := Cable{Length: in("L_m"), Tension: in("T_N"), Mass: in("mu_kg_per_m")}
			return values{"f1_Hz": hertz(t, c, 1), "f2_Hz": hertz(t, c, 2), "f3_Hz": hertz(t, c, 3)}
		},
		"V04": func(func(string) float64) values {
			r := SymmetricRoot(math.Inf(1), 0, 1)
			return values{"half_root": r * math.Pi / 2, "over_pi": r}
		},
		"V05": func(in func(string) float64) values {
			return values{"f1_Hz": hertz(t, stiff(in, Pinned), 1), "f5_Hz": hertz(t, stiff(in, Pinned), 5)}
		},
		"V06": func(in func(string) float64) values {
			return values{"f1_series_Hz": hertz(t, stiff(in, Clamped), 1)}
		},
		"V07": func(in func(string) float64) values { // the string that has the clamped frequency; the series is 1.5e-5 below the exact root
			c := stiff(in, Clamped)
			f := hertz(t, c, 1)
			tension := 4 * c.Mass * c.Length * c.Length * f * f
			return values{"T_string_N": tension, "bias": tension/c.Tension - 1}
		},
	}
	loose := map[string]float64{"V07": 3.5e-5} // series against the exact root, twice its difference in f
	seen, compared := 0, 0
	for _, r := range table(t, "check-values.csv") {
		in, out := fields(r["inputs"]), fields(r["outputs"])
		var got values
		if r["id"] == "V03" { // Irvine and Caughey (1974)
			got = values{}
			for i, l := range strings.Fields(in["lambda2"]) {
				got["r"+strconv.Itoa(i+1)] = SymmetricRoot(number(t, l), 0, 1)
			}
		} else {
			got = rows[r["id"]](func(k string) float64 { return number(t, in[k]) })
		}
		seen++
		for k, v := range out {
			value, tol, _ := strings.Cut(v, "+-")
			g, ok := got[k]
			if !ok {
				continue
			}
			compared++
			limit := math.Max(number(t, tol), loose[r["id"]]*math.Max(1, math.Abs(number(t, value))))
			if !(math.Abs(g-number(t, value)) <= limit) {
				t.Errorf("%s %s = %.8g, published %s (%s)", r["id"], k, g, v, r["source"])
			}
		}
	}
	if seen != 7 || compared != 18 {
		t.Fatalf("%d rows and %d figures compared", seen, compared)
	}
}

// alongChord is a cable of the finite-element table by Irvine's rule for inclined cables; its load is per unstressed metre.
func alongChord(t *testing.T, r map[string]string) (c Cable, sag float64) {
	v := func(k string) float64 { return number(t, r[k]) }
	l, size := v("l_m"), math.Hypot(v("l_m"), v("rise_m"))
	cos := l / size
	pull := v("H_N") / cos
	bow := v("w_N_per_m") * cos * size / pull
	stretch := size * (1 + bow*bow/8)
	return Cable{Length: size, Tension: pull, Mass: v("w_N_per_m") / 9.80665 / (1 + pull/v("EA_N")), Lambda2: bow * bow * size * v("EA_N") / (pull * stretch),
		Bending: v("EI_Nm2"), Ends: Ends(r["ends"])}, bow / 8
}

// Independent finite elements with large displacements about the exact catenary (testdata/finite_element.py): the closed form is of small sag, so
// its error goes with the square of the sag ratio. Limits are stated for each kind of mode.
func TestFiniteElementFrequencies(t *testing.T) {
	worst := map[string]float64{}
	compared := 0
	for _, r := range table(t, "finite-element.csv") {
		c, sag := alongChord(t, r)
		for n, column := range map[int]string{1: "f1_Hz", 2: "f2_Hz", 3: "f3_Hz", 4: "f4_Hz"} {
			want := number(t, r[column])
			off := hertz(t, c, n)/want - 1
			limit := 5e-5 + 8*sag*sag
			if c.Ends == Clamped && c.Bending > 0 {
				limit += 2e-4 // the elements are coarse in the bend at a clamp
				if c.Lambda2 > 1 && n%2 == 1 {
					limit += 0.008 // the product of two corrections
				}
			}
			if math.Abs(off) > limit {
				t.Errorf("%s, EI %s %s, mode %d: %.5f Hz, finite elements %.5f: off by %.2e (lambda squared %.2f, sag ratio %.4f)", r["name"], r["EI_Nm2"], r["ends"], n, hertz(t, c, n), want, off, c.Lambda2, sag)
			}
			worst[r["name"]+" "+r["ends"]] = math.Max(worst[r["name"]+" "+r["ends"]], math.Abs(off))
			compared++
		}
	}
	if compared != 72 {
		t.Fatalf("%d frequencies compared", compared)
	}
	t.Log("greatest relative differences:", worst)
}

// The root lies between the string's and the next one's, rises with lambda squared and with bending, and the two equations for it agree.
func TestSymmetricRoots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := math.Exp(rapid.Float64Range(-7, 12).Draw(t, "ln lambda2"))
		i := rapid.IntRange(1, 5).Draw(t, "i")
		r := SymmetricRoot(l, 0, i)
		if n := float64(2*i - 1); !(r >= n && r < n+2) {
			t.Fatalf("root %d of %g is %g", i, l, r)
		}
		if more := SymmetricRoot(l*1.1, 0, i); more < r {
			t.Fatalf("falls from %g to %g", r, more)
		}
		x := r * math.Pi / 2
		if miss := l/4*(math.Sin(x)-x*math.Cos(x)) + x*x*x*math.Cos(x); math.Abs(miss) > 1e-9*(l*x+x*x*x) {
			t.Fatalf("root %d of %g misses by %g", i, l, miss)
		}
		if stiff := SymmetricRoot(l, 1e-12, i); math.Abs(stiff/r-1) > 2e-6 {
			t.Fatalf("sines give %g, tan gives %g", stiff, r)
		}
		if stiff := SymmetricRoot(l, 1e-3, i); stiff < r {
			t.Fatalf("bending lowers %g to %g", r, stiff)
		}
	})
}

// A parabola's return time gives its sag by the trade's rule, whatever span, load and tension.
func TestReturnWaveIsSag(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		l := rapid.Float64Range(10, 800).Draw(t, "span")
		q := rapid.Float64Range(1, 2000).Draw(t, "load")
		h := rapid.Float64Range(1e3, 1e6).Draw(t, "tension")
		n := rapid.IntRange(1, 10).Draw(t, "returns")
		time, err := Cable{Length: l, Tension: h, Mass: q / 9.80665}.ReturnTime(n)
		if err != nil {
			t.Fatal(err)
		}
		sag := 9.80665 * time * time / (32 * float64(n*n))
		if want := q * l * l / (8 * h); math.Abs(sag/want-1) > 1e-12 {
			t.Fatalf("sag %g, want %g", sag, want)
		}
	})
}

func TestImpossibleCables(t *testing.T) {
	ok := Cable{Length: 50, Tension: 1e6, Mass: 20}
	for _, c := range []struct {
		change func(c *Cable)
		mode   int
	}{
		{func(c *Cable) { c.Length = 0 }, 1}, {func(c *Cable) { c.Tension = math.NaN() }, 1}, {func(c *Cable) { c.Mass = math.Inf(1) }, 1}, {func(c *Cable) { c.Lambda2 = -1 }, 1},
		{func(c *Cable) { c.Bending = -1 }, 1}, {func(c *Cable) { c.Ends = "loose" }, 1}, {func(*Cable) {}, 0}, {func(*Cable) {}, 101},
		{func(c *Cable) { c.Ends, c.Bending = Clamped, 1e8 }, 1},
	} {
		cable := ok
		c.change(&cable)
		if f, err := cable.Frequency(Mode{Number: c.mode}); err == nil {
			t.Errorf("%+v mode %d: %g Hz", cable, c.mode, f)
		}
	}
	if _, err := ok.ReturnTime(0); err == nil {
		t.Error("no returns have a time")
	}
	if a, b := (Mode{Number: 2}).String(), (Mode{Number: 2, Sideways: true}).String(); a != "in-plane mode 2" || b != "sideways mode 2" {
		t.Errorf("%s, %s", a, b)
	}
}
