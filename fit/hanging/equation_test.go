package hanging

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func equations(t *rapid.T) Equation {
	k := math.Pow(10, rapid.Float64Range(-5, -1.5).Draw(t, "log curvature"))
	share := rapid.Float64Range(0, 1).Draw(t, "share")
	return Equation{KW: k * share, KQ: k * (1 - share), Eta: rapid.Float64Range(0, 3e-3).Draw(t, "strain"), G: rapid.Float64Range(0.999, 1.001).Draw(t, "warmth")}
}

// Lengths add up over parts, rates are their derivatives, and what Span finds spans.
func TestLengthsRatesAndSpan(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := equations(t)
		run := rapid.Float64Range(1, 300).Draw(t, "run")
		rise := run * rapid.Float64Range(-1.7, 1.7).Draw(t, "incline")
		a, b := e.Start(run, rise)
		a, b, err := e.Span(run, rise, a, b)
		if err != nil {
			t.Fatal(err)
		}
		l := e.Between(a, b)
		size := math.Hypot(run, rise)
		steepest := math.Max(math.Abs(a), math.Abs(b))
		// tangents are known to rounding: over the curvature that is a length
		rounding := 1e-12*size + 1e-15*(1+steepest)/(e.KW+e.KQ)
		if math.Abs(l.X-run) > rounding || math.Abs(l.Y-rise) > 2*rounding {
			t.Fatalf("spans %.15g, %.15g instead of %.15g, %.15g", l.X, l.Y, run, rise)
		}
		if c := math.Cosh(steepest); l.S*e.G > size*c*(1+1e-9) || l.S*e.G*(1+e.Eta*c) < size*(1-1e-9) {
			t.Fatalf("length %g over %g", l.S, size)
		}
		mid := a + rapid.Float64Range(0.05, 0.95).Draw(t, "part")*(b-a)
		p, q := e.Between(a, mid), e.Between(mid, b)
		for _, d := range []float64{p.S + q.S - l.S, p.X + q.X - l.X, p.Y + q.Y - l.Y} {
			if math.Abs(d) > 1e-12*l.S {
				t.Fatalf("parts miss the whole by %g", d)
			}
		}
		if psi := e.Reach(a, (a+b)/2, p.X); math.Abs(psi-mid) > 1e-9*(1+math.Abs(mid))+1e-11/(b-a) {
			t.Fatalf("reach %g, want %g", psi, mid)
		}
		h := math.Max(1e-4*(b-a), 1e-6)
		step := e.Between(mid-h, mid+h)
		rate := e.Rate(mid)
		if math.Abs(step.X/(2*h)-rate.X) > 1e-6*rate.X || math.Abs(step.S/(2*h)-rate.S) > 1e-6*rate.S {
			t.Fatalf("rate %+v, by differences %g, %g", rate, step.S/(2*h), step.X/(2*h))
		}
	})
}

// ByLogTension against a difference over the tension, loads and stiffness kept.
func TestByLogTension(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := equations(t)
		at := func(f float64) Equation { return Equation{KW: e.KW / f, KQ: e.KQ / f, Eta: e.Eta * f, G: e.G} }
		const h = 1e-5
		up, down := at(1+h).Between(-0.3, 0.4), at(1-h).Between(-0.3, 0.4)
		d := e.ByLogTension(-0.3, 0.4)
		for _, c := range [][2]float64{{d.S, (up.S - down.S) / (2 * h)}, {d.X, (up.X - down.X) / (2 * h)}, {d.Y, (up.Y - down.Y) / (2 * h)}} {
			if math.Abs(c[0]-c[1]) > 1e-7*math.Abs(d.S) {
				t.Fatalf("%g, by differences %g", c[0], c[1])
			}
		}
	})
}

func TestSpanThatCannotBe(t *testing.T) {
	for _, run := range []float64{math.NaN(), math.Inf(1)} {
		if _, _, err := (Equation{KW: 0.01, G: 1}).Span(run, 0, -0.1, 0.1); !errors.Is(err, ErrNoShape) {
			t.Errorf("run %g: %v", run, err)
		}
	}
}

// Without a load along the horizontal the lengths come in closed form; by quadrature they are the same.
func TestOwnWeightAgainstQuadrature(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := equations(t)
		e.KQ, e.KW = 0, e.KW+e.KQ
		a := rapid.Float64Range(-2, 2).Draw(t, "a")
		b := a + math.Pow(10, rapid.Float64Range(-6, 0.3).Draw(t, "log range"))
		near := e
		near.KQ = 1e-300 // the same figure, by quadrature
		for _, c := range [][2]Lengths{{e.Between(a, b), near.Between(a, b)}, {e.ByLogTension(a, b), near.ByLogTension(a, b)}} {
			for _, d := range [][2]float64{{c[0].S, c[1].S}, {c[0].X, c[1].X}, {c[0].Y, c[1].Y}} {
				if math.Abs(d[0]-d[1]) > 4e-15*c[1].S*math.Cosh(2+math.Abs(a)) {
					t.Fatalf("%.17g, by quadrature %.17g", d[0], d[1])
				}
			}
		}
	})
}
