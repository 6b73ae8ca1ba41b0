package fit

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// Points over a third of the span only: with the supports as points of the curve the elevation at the far end is known, without them u
// grows honestly, and both cover the truth.
func TestSupportsAsPointsOfTheCurve(t *testing.T) {
	runs := 2000
	if testing.Short() {
		runs = 700
	}
	w := truth{curve: hang(100, 0.1, 0.05), n: 14, along: 0.004, up: 0.004, from: 0.02, to: 0.35, stated: true, supportsMarked: true}
	var u [2]float64
	for i, through := range []bool{false, true} {
		rng := rand.New(rand.NewPCG(3, 14))
		covered, far := 0, 0
		for range runs {
			p := w.survey(rng)
			for _, m := range []*survey.Point{p.A, p.B} {
				m.E += 0.004 * rng.NormFloat64()
				m.N += 0.004 * rng.NormFloat64()
				m.Z += 0.004 * rng.NormFloat64()
				m.HasCov, m.Cov = true, survey.Cov3{EE: 16e-6, NN: 16e-6, ZZ: 16e-6}
			}
			r, err := Cable(p, Options{ThroughSupports: through, NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			u[i] += math.Sqrt(r.Cov[2][2]) / float64(runs)
			if math.Abs(r.Curve.Curvature-w.curve.Curvature) <= 1.96*math.Sqrt(r.Cov[2][2]) {
				covered++
			}
			if math.Abs(r.Curve.Z(90)-w.curve.Z(90)) <= 1.96*r.HeightU(90) {
				far++
			}
			if through && len(r.Observations) != w.n+2 {
				t.Fatalf("%d observations", len(r.Observations))
			}
		}
		t.Logf("through supports %v: u(curvature)/curvature %.3f %%, covered %.1f %%, elevation at 90 m covered %.1f %%", through, 100*u[i]/w.curve.Curvature,
			100*float64(covered)/float64(runs), 100*float64(far)/float64(runs))
		for what, c := range map[string]int{"curvature": covered, "far elevation": far} {
			if f := float64(c) / float64(runs); f < 0.935 || f > 0.965 {
				t.Errorf("through supports %v: %s covered in %.1f %%", through, what, 100*f)
			}
		}
	}
	if !(u[1] < u[0]/5) {
		t.Errorf("u of the curvature %.3g with the supports, %.3g without: a third of the span cannot do as well", u[1], u[0])
	}
}

// A support that the cable does not pass through is told by name.
func TestSupportBesideTheCableIsNamed(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 15))
	w := truth{curve: hang(100, 0.1, 0.05), n: 20, along: 0.003, up: 0.003, stated: true, supportsMarked: true}
	p := w.survey(rng)
	p.B.Z += 0.15
	for _, m := range []*survey.Point{p.A, p.B} {
		m.HasCov, m.Cov = true, survey.Cov3{EE: 9e-6, NN: 9e-6, ZZ: 9e-6}
	}
	r, err := Cable(p, Options{ThroughSupports: true, RejectBeyond: 6})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.Rejected) != 1 || r.Rejected[0].Station < 99 || math.Abs(r.Rejected[0].Residual-0.15) > 0.02 {
		t.Errorf("rejected %+v", r.Rejected)
	}
}

// Bending near a clamp: points within the cleared length are listed and do not move the answer.
func TestPointsNearSupportsAreLeftOut(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 16))
	w := truth{curve: hang(60, 0, 0.03), n: 61, along: 0.001, up: 0.001, stated: true, supportsMarked: true}
	p := w.survey(rng)
	for i := range p.Points {
		s := 60 * (0.01 + 0.98*float64(i)/60)
		p.Points[i].Z -= 0.03 * (math.Exp(-s/0.3) + math.Exp(-(60-s)/0.3)) // clamp turned by 0.1 rad, sqrt(EI/H) = 0.3 m
	}
	r, err := Cable(p, Options{Clear: 1.5})
	if err != nil {
		t.Fatal(err)
	}
	if len(r.LeftOut) != 2 || len(r.Observations) != 59 {
		t.Errorf("%d left out, %d used", len(r.LeftOut), len(r.Observations))
	}
	if d := (r.Curve.Curvature - w.curve.Curvature) / math.Sqrt(r.Cov[2][2]); math.Abs(d) > 3 {
		t.Errorf("curvature off by %.1f u", d)
	}
	if _, err := Cable(p, Options{Clear: 29}); err == nil {
		t.Error("no error although nearly all points lie near a support")
	}
}
