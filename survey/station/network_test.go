package station

import (
	"encoding/csv"
	"errors"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"
)

// fieldNet reads testdata/network.csv, which testdata/network.py made and adjusted with scipy.
func fieldNet(t *testing.T) ([]Sight, []Mark, Instrument) {
	t.Helper()
	in := Instrument{Angle: 3.0 / 3600 * math.Pi / 180, Distance: 0.002, DistancePM: 2e-6, K: 0.13}
	var sights []Sight
	for _, r := range table(t, "testdata/network.csv") {
		s := Sight{Setup: r[0], Target: r[1], Horizontal: number(t, r[2]), Zenith: number(t, r[3]), Slope: number(t, r[4]), SigmaHorizontal: in.Angle, SigmaZenith: in.Angle}
		if s.Slope > 0 {
			s.SigmaSlope = in.distanceSigma(s.Slope)
		}
		sights = append(sights, s)
	}
	return sights, []Mark{{"M1", 0, 0, 10, 0.001}, {"M2", 150, 20, 12, 0.001}, {"M3", 60, 140, 11, 0.001}}, in
}

func table(t *testing.T, name string) [][]string {
	t.Helper()
	f, err := os.Open(name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	return records[1:]
}

// P has no distance: it is intersected from three set-ups.
func TestAdjustmentAgainstScipy(t *testing.T) {
	sights, marks, in := fieldNet(t)
	n, err := Adjust(sights, marks, nil, in)
	if err != nil {
		t.Fatal(err)
	}
	compared := 0
	near := func(what string, got float64, text string, tol float64) {
		t.Helper()
		compared++
		if want := number(t, text); !(math.Abs(got-want) <= tol) {
			t.Errorf("%s %.9f, scipy %.9f", what, got, want)
		}
	}
	for _, r := range table(t, "testdata/network-expected.csv") {
		switch name := r[0]; {
		case name == "sum_of_squares":
			// scipy gives its distances the sigma of the true length, this package that of the read one: parts in 1e5
			near(name, n.VarianceFactor*float64(n.DegreesOfFreedom), r[1], 1e-4)
		case name == "degrees_of_freedom":
			near(name, float64(n.DegreesOfFreedom), r[1], 0)
		case r[4] != "":
			p := n.SetupPosition(name)
			for k := range 3 {
				near(name, p[k], r[1+k], 1e-8)
				i := n.at[name] + k
				near("u of "+name, math.Sqrt(n.cov.At(i, i)), r[5+k], 1e-7)
			}
			near(name, turn(p[3]-number(t, r[4])), "0", 1e-10)
		default:
			for k := range 3 {
				near(name, n.Points[name][k], r[1+k], 1e-8)
			}
		}
	}
	if compared != 41 {
		t.Errorf("%d figures compared, want 41", compared)
	}
}

// A backsight to the wrong mark and a mark written down wrong are both named.
func TestBadBacksightIsNamed(t *testing.T) {
	sights, marks, in := fieldNet(t)
	for i := range sights {
		if sights[i].Setup == "S2" && sights[i].Target == "M3" {
			sights[i].Horizontal += 60.0 / 3600 * math.Pi / 180
		}
	}
	n, err := Adjust(sights, marks, nil, in)
	if err != nil {
		t.Fatal(err)
	}
	if w := n.Worst(); w.Setup != "S2" || w.Target != "M3" || w.What != "direction" || math.Abs(w.Normalised) < 4 {
		t.Errorf("worst residual %+v, want the direction from S2 to M3", *w)
	}
	sights, _, _ = fieldNet(t)
	marks[1].Z += 0.05
	if n, err = Adjust(sights, marks, nil, in); err != nil {
		t.Fatal(err)
	}
	if w := n.Worst(); w.Target != "M2" || w.What != "height" {
		t.Errorf("worst residual %+v, want the height of M2", *w)
	}
}

// The derivatives of a sight against central differences, with scale, curvature and a target height.
func TestSightDerivatives(t *testing.T) {
	a := adjustment{in: Instrument{K: 0.2, Scale: 0.9996}}
	s := &Sight{Horizontal: 1, Zenith: 1.2, Slope: 300, TargetHeight: 1.7}
	setup, p := []float64{10, 20, 30, 0.5}, [3]float64{250, -70, 95}
	g := a.geometry(s, setup, p)
	for c := range 3 {
		const h = 1e-3
		up, down := p, p
		up[c], down[c] = p[c]+h, p[c]-h
		gu, gd := a.geometry(s, setup, up), a.geometry(s, setup, down)
		for k := range 3 {
			if d := -(gu.misfit[k] - gd.misfit[k]) / (2 * h); math.Abs(d-g.j[k][c]) > 1e-6*math.Max(math.Abs(d), 1e-4) {
				t.Errorf("derivative %d by coordinate %d: %g, by differences %g", k, c, g.j[k][c], d)
			}
		}
	}
}

// Known instrument errors come out of the faces, and the single-face reading is freed of them.
func TestInstrumentErrorsAreFound(t *testing.T) {
	const index, collimation, second = 12.0, -20.0, math.Pi / 180 / 3600
	read := func(target string, hz, z float64, two bool) Reading {
		c, i := collimation*second/math.Sin(z), index*second
		if two {
			return Reading{Setup: "S", Target: target, FaceTwo: true, Horizontal: hz + math.Pi - c, Zenith: 2*math.Pi - z + i, Slope: 40}
		}
		return Reading{Setup: "S", Target: target, Horizontal: hz + c, Zenith: z + i, Slope: 40}
	}
	sights, f, err := Average([]Reading{read("a", 6.28, 1.1, false), read("a", 6.28, 1.1, true), read("b", 0.001, 1.4, false), read("b", 0.001, 1.4, true),
		read("c", 3, 0.9, false), read("d", 4, 0.9, true)}, Instrument{Angle: second, Distance: 1e-3})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(f.Index/second-index) > 1e-6 || math.Abs(f.Collimation/second-collimation) > 1e-6 || f.Pairs != 2 || f.Singles != 2 {
		t.Errorf("faces %+v", f)
	}
	for i, want := range [][2]float64{{6.28, 1.1}, {0.001, 1.4}, {3, 0.9}, {4, 0.9}} {
		if s := sights[i]; math.Abs(turn(s.Horizontal-want[0])) > 1e-11 || math.Abs(s.Zenith-want[1]) > 1e-11 {
			t.Errorf("%s: %v %v, want %v", s.Target, s.Horizontal, s.Zenith, want)
		}
	}
	if r := sights[2].SigmaZenith / sights[0].SigmaZenith; math.Abs(r-math.Sqrt2) > 1e-12 {
		t.Errorf("one face has %g times the standard deviation of two, want sqrt 2", r)
	}
}

// The covariance of a point is that of its coordinates over many readings.
func TestPointCovarianceBySimulation(t *testing.T) {
	in := Instrument{Angle: 2e-5, Distance: 0.002, DistancePM: 1e-5}
	rng := rand.New(rand.NewPCG(3, 3))
	const runs = 4000
	var sum, square [3]float64
	var product float64
	var n *Network
	for range runs {
		s := Sight{Setup: "S", Target: "P", Horizontal: 0.7 + in.Angle*rng.NormFloat64(), Zenith: 1.2 + in.Angle*rng.NormFloat64(), Slope: 150 + in.distanceSigma(150)*rng.NormFloat64(),
			SigmaHorizontal: in.Angle, SigmaZenith: in.Angle, SigmaSlope: in.distanceSigma(150)}
		var err error
		if n, err = Adjust([]Sight{s}, nil, nil, in); err != nil {
			t.Fatal(err)
		}
		p := n.Points["P"]
		for k := range 3 {
			sum[k] += p[k]
			square[k] += (p[k] - 100) * (p[k] - 100)
		}
		product += (p[0] - 100) * (p[2] - 100)
	}
	for k := range 3 {
		v := square[k]/runs - (sum[k]/runs-100)*(sum[k]/runs-100)
		if r := v / n.Cov["P"][k][k]; r < 0.9 || r > 1.1 {
			t.Errorf("variance of coordinate %d is %.3f of the stated one", k, r)
		}
	}
	cov := product/runs - (sum[0]/runs-100)*(sum[2]/runs-100)
	if r := cov / n.Cov["P"][0][2]; r < 0.8 || r > 1.2 {
		t.Errorf("covariance of E and Z is %.3f of the stated one", r)
	}
}

func TestLooseSetupIsNamed(t *testing.T) {
	sights, marks, in := fieldNet(t)
	sights = append(sights, Sight{Setup: "S9", Target: "Q", Horizontal: 1, Zenith: 1.5, Slope: 20, SigmaHorizontal: 1e-5, SigmaZenith: 1e-5, SigmaSlope: 1e-3, Line: 77})
	_, err := Adjust(sights, marks, nil, in)
	var f *Fault
	if !errors.As(err, &f) || f.Line != 77 || f.Found != "S9" || !strings.Contains(f.Mend, "mark") {
		t.Errorf("error %+v", err)
	}
}
