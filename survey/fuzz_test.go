package survey

import (
	"bytes"
	"errors"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode"
)

// seeds adds every broken file of a folder; they are small and each has its own oddity.
func seeds(f *testing.F, dir string, add func(data []byte)) {
	files, err := filepath.Glob(filepath.Join("testdata/bad", dir, "*.csv"))
	if err != nil || len(files) == 0 {
		f.Fatalf("%d seeds, %v", len(files), err)
	}
	for _, name := range files {
		data, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		add(data)
	}
}

// wellToldError holds an error to what every refusal promises: typed, with file and expectation, one printable line a problem.
func wellToldError(t *testing.T, err error, lines int) {
	var input *InputError
	if !errors.As(err, &input) {
		t.Fatalf("%T: %v", err, err)
	}
	if len(input.Problems) == 0 || len(input.Problems) > mostListed {
		t.Fatalf("%d problems", len(input.Problems))
	}
	for _, p := range input.Problems {
		if p.File != "f.csv" || p.Expected == "" || p.Line < 0 || (lines >= 0 && p.Line > lines) {
			t.Fatalf("problem without place or expectation: %+v of %d lines", p, lines)
		}
	}
	printable(t, err.Error())
	want := len(input.Problems) - 1
	if input.More > 0 {
		want++
	}
	if n := strings.Count(err.Error(), "\n"); n != want {
		t.Fatalf("%d line ends for %d problems: %s", n, len(input.Problems), err)
	}
}

// printable fails when a message carries something that a terminal would act upon.
func printable(t *testing.T, text string) {
	for _, r := range text {
		if r != '\n' && unicode.IsControl(r) {
			t.Fatalf("the message %q holds a control character", text)
		}
	}
}

// linesOf is an upper bound on the lines of a plain file, -1 for one that is packed or in another encoding.
func linesOf(data []byte) int {
	if len(data) > 1 && (data[0] == 0x1f || data[0] >= 0xfe) {
		return -1
	}
	return 1 + bytes.Count(data, []byte("\n")) + bytes.Count(data, []byte("\r"))
}

func finite(t *testing.T, what string, values ...float64) {
	for _, v := range values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			t.Fatalf("%s holds %v", what, values)
		}
	}
}

func finitePoint(t *testing.T, p Point) {
	finite(t, "a point", p.E, p.N, p.Z, p.Cov.EE, p.Cov.NN, p.Cov.ZZ)
	if math.Abs(p.E) > farthest || math.Abs(p.N) > farthest || math.Abs(p.Z) > farthest || p.HasCov && !(p.Cov.EE+p.Cov.NN+p.Cov.ZZ > 0) {
		t.Fatalf("impossible point %+v", p)
	}
}

func finiteConditions(t *testing.T, c Conditions) {
	if q := c.CableTemperature; q != nil {
		finite(t, "temperature", q.Value, q.U)
		if q.Value < -zeroC || q.U < 0 {
			t.Fatalf("temperature %v", *q)
		}
	}
	if a := c.Accuracy; a != nil && (!(a.Horizontal > 0) || !(a.Vertical > 0) || a.Horizontal > 10 || a.Vertical > 10) {
		t.Fatalf("accuracy %v", *a)
	}
	for _, l := range c.Listed {
		finite(t, "load", l.Load.Value, l.Load.U)
	}
	for _, r := range c.Readings {
		finite(t, "reading", r.Value.Value, r.Value.U, r.Lifted.Value, r.Lifted.U, r.Bending.Value, r.Bending.U)
	}
	if len(c.Listed) > 0 && c.Loads != LoadsListed {
		t.Fatalf("%d loads listed, record %q", len(c.Listed), c.Loads)
	}
}

// A point file gives finite points, every row in one place, or an error with file and line; streaming it gives the same points.
func FuzzReadPoints(f *testing.F) {
	seeds(f, "points", func(data []byte) { f.Add(data, "", false) })
	f.Add([]byte("1 2 3\n4 5 6\n"), "ENZ", false)
	f.Add([]byte("x,y,z,code\n1,2,3,main A\n2,2,3,guy\n3,2,3,tree\n"), "", true)
	f.Add([]byte("\xff\xfex\x00,\x00y\x00,\x00z\x00\n\x001\x00,\x002\x00,\x003\x00"), "", false)
	f.Fuzz(func(t *testing.T, data []byte, order string, known bool) {
		o := PointOptions{Name: "f.csv", Order: order}
		if known {
			o.Known = knownOf("main", "guy/1", "guy/2")
		}
		sv, err := ReadPoints(bytes.NewReader(data), o)
		if err != nil && strings.HasPrefix(err.Error(), "--order") {
			return
		}
		if err != nil {
			wellToldError(t, err, linesOf(data))
			return
		}
		accounted(t, sv)
		for _, n := range sv.Notices {
			printable(t, n.Text)
		}
		finiteConditions(t, sv.Conditions)
		p, err := NewPointReader(bytes.NewReader(data), PointOptions{Name: "f.csv", Order: order})
		if err != nil {
			t.Fatalf("a survey that was read cannot be streamed: %v", err)
		}
		n := 0
		for ; ; n++ {
			pt, err := p.Next()
			if err != nil {
				break
			}
			finitePoint(t, pt)
		}
		if n != sv.PointsRead {
			t.Fatalf("%d points streamed, %d read", n, sv.PointsRead)
		}
	})
}

// A cables file gives finite values within their physical range, or an error with file and line.
func FuzzReadDesigns(f *testing.F) {
	seeds(f, "cables", func(data []byte) { f.Add(data) })
	f.Add([]byte(fullCables))
	f.Fuzz(func(t *testing.T, data []byte) {
		designs, notices, err := ReadDesigns(bytes.NewReader(data), "f.csv")
		if err != nil {
			wellToldError(t, err, linesOf(data))
			return
		}
		if len(designs) == 0 {
			t.Fatal("no designs and no error")
		}
		for _, n := range notices {
			printable(t, n.Text)
		}
		for _, d := range designs {
			if d.Cable == "" || d.Line < 2 {
				t.Fatalf("design without id or line: %+v", d)
			}
			for i, q := range []*Quantity{d.Rise, d.Temperature, d.SelfWeight, d.DeckLoad, d.SpanLength, d.Tension, d.Sag, d.AxialStiffness, d.Expansion, d.BreakingLoad, d.Diameter, d.TakeUpPerTurn} {
				if q == nil {
					continue
				}
				finite(t, "a design value", q.Value, q.U)
				if q.U < 0 || i > 1 && !(q.Value > 0) {
					t.Fatalf("impossible value %d: %v", i, *q)
				}
			}
			for _, v := range []*float64{d.SafetyFactor, d.SlackBelow, d.OverloadAbove} {
				if v != nil {
					finite(t, "a factor", *v)
				}
			}
		}
	})
}

// A condition is stored finite or refused; a refused one changes nothing that can be seen by a second try.
func FuzzConditions(f *testing.F) {
	for _, s := range [][2]string{{"temperature", "12 +- 2 degC"}, {"accuracy", "horizontal 3 mm, vertical 2 mm"}, {"load", "w1/2; 180 +- 10 N/m; along deck; pipe"},
		{"reading", "w1; tension at A; 30.7 +- 0.5 kN; load cell"}, {"reading", "w1; frequency, mode 3, clamped, bending stiffness 4 +- 1 kN m2; 1.21 +- 0.01 Hz"},
		{"reading", "w1; lift-off at B, lifted 2 mm; 30 +- 1 kN"}, {"reading", "w1; wave return 3; 4.2 +- 0.05 s"}, {"loads", "as filed"}, {"date", "2026-06-11 10:30"}, {"unit", "us-ft"}, {"note", ""}, {"crew", "\x1b[2J"}} {
		f.Add(s[0], s[1])
	}
	f.Fuzz(func(t *testing.T, key, text string) {
		var c Conditions
		err := c.Set(key, text)
		finiteConditions(t, c)
		again := c.Set(key, text)
		if err != nil {
			printable(t, err.Error())
			if again == nil {
				t.Fatalf("%q: %q was refused (%v) and then taken", key, text, err)
			}
			return
		}
		if k := conditionKey(key); again != nil && k != "load" && k != "reading" {
			t.Fatalf("%q: %q was taken and then refused: %v", key, text, again)
		}
	})
}

// A quantity is finite, its uncertainty not negative, its temperature above absolute zero; or it is refused.
func FuzzParseQuantity(f *testing.F) {
	for _, s := range []string{"12 +- 2 degC", "50 N/m ± 2 %", "3 mm", "12e-6/degC", "1e308 km", "-400 degC", "12 degC ± 5 %", "1 1e-6/K", "NaN m", "0x1p4 N", "1_0 N", "+-+- N"} {
		for i := range dimensions {
			f.Add(s, uint8(i))
		}
	}
	f.Fuzz(func(t *testing.T, text string, kind uint8) {
		d := dimensions[int(kind)%len(dimensions)]
		q, err := ParseQuantity(text, d)
		if err != nil {
			if q != (Quantity{}) {
				t.Fatalf("%q: %v beside %v", text, q, err)
			}
			printable(t, err.Error())
			return
		}
		finite(t, text, q.Value, q.U)
		if q.U < 0 || d == Temperature && q.Value < -zeroC {
			t.Fatalf("%q is %v", text, q)
		}
		if !strings.ContainsFunc(text, func(r rune) bool { return r >= '0' && r <= '9' }) {
			t.Fatalf("%q has no digit and is %v", text, q)
		}
	})
}

var dimensions = []Dimension{Length, Force, ForcePerLength, Temperature, PerTemperature, Fraction, Frequency, Duration, Bending}

// A code rule says one thing: cable exactly when the role is on a cable; and its code resolves to what it says.
func FuzzParseCodeRule(f *testing.F) {
	for _, s := range []string{"MC1=main", "MC1=main/A", "MC1=main/2/b", "7=control", "=", "a=/", "é=ü/A", "a=b=c"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		c, err := ParseCodeRule(text)
		if err != nil {
			printable(t, err.Error())
			return
		}
		onCable := c.Role == OnCable || c.Role == SupportA || c.Role == SupportB
		if c.Code == "" || onCable != (c.Cable != "") || !onCable && c.Span != "" {
			t.Fatalf("%q: %+v", text, c)
		}
		r, err := newResolver(PointOptions{Codes: []CodeRule{c}}, true)
		if err != nil {
			t.Fatal(err)
		}
		if u := r.use(c.Code); u.Role != c.Role || u.Cable != c.Cable || u.Span != c.Span && !strings.EqualFold(u.Span, c.Cable) {
			t.Fatalf("%q: %+v resolves to %+v", text, c, *u)
		}
	})
}
