package fit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// noisy are invented points on a curve with equal errors in both coordinates; stated says whether the accuracy is known.
func noisy(rng *rand.Rand, c Curve, n int, sigma float64, stated bool) []Observation {
	obs := make([]Observation, n)
	for i := range obs {
		s := c.S1 + c.length()*float64(i)/float64(n-1)
		obs[i] = Observation{ID: fmt.Sprint(i), S: s + sigma*rng.NormFloat64(), Z: c.Z(s) + sigma*rng.NormFloat64()}
		if stated {
			obs[i].VarS, obs[i].VarZ = sigma*sigma, sigma*sigma
		}
	}
	return obs
}

// Over the whole range of cables and beyond it, to a sag larger than the span, the fit must end in the right minimum: its
// sum of squares may not exceed that of the true curve. A start at the slope of the chord ended in a wrong one, without an
// error, from a sag of two thirds of the span.
func TestNoCableEndsInAWrongMinimum(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	runs, deep := 6000, 0
	if testing.Short() {
		runs = 2000
	}
	for range runs {
		span, incline := math.Pow(10, 0.7+2*rng.Float64()), 1.73*(2*rng.Float64()-1)
		kl := math.Pow(10, -3.1+3.8*rng.Float64()) // curvature times span up to 5: sag/span from 1e-4 to 1.2 when level, more when steep
		c := Curve{Z1: 200, S2: span, Z2: 200 + incline*span, Curvature: kl / span, SelfShare: float64(rng.IntN(3)) / 2}
		if _, sag := c.GreatestSag(0, span); sag > 0.6*span {
			deep++
		}
		stated := rng.IntN(2) == 0
		obs := noisy(rng, c, 4+rng.IntN(40), math.Pow(10, -3+1.3*rng.Float64()), stated)
		if !stated {
			for i := range obs {
				obs[i].VarS, obs[i].VarZ = 1, 1
			}
		}
		r, err := InPlane(obs, Frame{}, End{}, End{Station: span}, Options{Shape: c.Shape(), SelfShare: c.SelfShare, NoAlternatives: true})
		if err != nil {
			t.Fatalf("%+v: %v", c, err)
		}
		truth := curveProblem{obs: obs, base: c}
		v := make([]float64, len(obs))
		truth.Evaluate([]float64{c.Z1, c.Z2, c.Curvature}, v, nil)
		if got, most := r.VarianceFactor*float64(r.DegreesOfFreedom), dot(v, v); !(got <= most*(1+1e-9)) {
			t.Errorf("%+v, %d points: sum of squares %g, that of the true curve %g", c, len(obs), got, most)
		}
	}
	if deep < runs/40 {
		t.Errorf("only %d of %d cables were deep", deep, runs)
	}
}

// A digit slip moves a point by metres, up to many times the span. The distance to the nearest curve hides it, since the
// curve can bend to it; it must be dropped by name all the same, at the ends of the span too, and listed when nothing may
// be dropped.
func TestGrossErrorIsFoundWhateverItsSize(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 8))
	extra, runs := 0, 1500
	for run := range runs {
		span := math.Pow(10, 0.5+2*rng.Float64())
		c := Curve{Z1: 5, S2: span, Z2: 5 + 1.5*(2*rng.Float64()-1)*span, Curvature: 1.5 * math.Pow(10, -2.5*rng.Float64()) / span, SelfShare: 1}
		obs := noisy(rng, c, 12+rng.IntN(20), 0.003, rng.IntN(2) == 0)
		bad := rng.IntN(len(obs))
		size := math.Pow(10, -0.5+3*rng.Float64()) * float64(1-2*rng.IntN(2))
		obs[bad].Z += size
		r, err := InPlane(obs, Frame{}, End{}, End{Station: span}, Options{RejectBeyond: 5, NoAlternatives: true})
		if err != nil {
			t.Errorf("run %d: error of %.3g m in a span of %.3g m: %v", run, size, span, err)
			continue
		}
		if len(r.Rejected) == 0 || r.Rejected[0].ID != obs[bad].ID || math.Abs(r.Rejected[0].Residual-size) > 0.1*math.Abs(size)+0.05 {
			t.Errorf("run %d: error of %.3g m at point %d of %d in a span of %.3g m, curvature times span %.2g: dropped %+v", run, size, bad, len(obs), span, c.Curvature*span, r.Rejected)
		}
		extra += max(0, len(r.Rejected)-1)
	}
	// five standard deviations are passed by 6e-7 of good points
	if extra > 1 {
		t.Errorf("%d good points dropped in %d surveys", extra, runs)
	}
}

// The same when nothing may be dropped: the point is among the suspects, or in the error when no curve could be fitted.
func TestGrossErrorIsNamedWhenNothingIsDropped(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 9))
	named, runs := 0, 1000
	for range runs {
		span := math.Pow(10, 0.5+2*rng.Float64())
		c := Curve{Z1: 5, S2: span, Z2: 5 + 1.5*(2*rng.Float64()-1)*span, Curvature: 1.5 * math.Pow(10, -2.5*rng.Float64()) / span, SelfShare: 1}
		obs := noisy(rng, c, 12+rng.IntN(20), 0.003, rng.IntN(2) == 0)
		bad := rng.IntN(len(obs))
		obs[bad].Z += math.Pow(10, -0.5+3*rng.Float64()) * float64(1-2*rng.IntN(2))
		r, err := InPlane(obs, Frame{}, End{}, End{Station: span}, Options{NoAlternatives: true})
		if err != nil {
			if strings.Contains(err.Error(), fmt.Sprintf("point %q", obs[bad].ID)) {
				named++
			}
			continue
		}
		for _, s := range r.Suspects {
			if s.ID == obs[bad].ID {
				named++
				break
			}
		}
	}
	if named < runs*995/1000 {
		t.Errorf("%d of %d gross errors named", named, runs)
	}
}

// Points without any error of their own beside one that is wrong: the scatter without it is zero, which must make it stand
// out and not pass.
func TestBlunderAmongExactPoints(t *testing.T) {
	c := Curve{S2: 100, Z2: 20, Curvature: 0.005, SelfShare: 1}
	for _, size := range []float64{0.001, 0.1, 10} {
		obs := noisy(rand.New(rand.NewPCG(1, 1)), c, 15, 0, false)
		obs[4].Z += size
		r, err := InPlane(obs, Frame{}, End{}, End{Station: 100}, Options{})
		if err != nil {
			t.Fatal(err)
		}
		named := false
		for _, s := range r.Suspects {
			named = named || s.ID == obs[4].ID
		}
		if !named {
			t.Errorf("blunder of %g m is not among the suspects %+v", size, r.Suspects)
		}
	}
}

// Points that come back after the final fit stand where they stood in the input.
func TestDroppedPointsComeBackInOrder(t *testing.T) {
	obs := noisy(rand.New(rand.NewPCG(3, 1)), Curve{S2: 100, Z2: 20, Curvature: 0.005, SelfShare: 1}, 15, 0.003, true)
	var w workspace
	r := Result{B: End{Station: 100}, Observations: append([]Observation(nil), obs...), APriori: true, Widening: 1}
	x := rejection{Result: &r, w: &w, share: 1, o: Options{RejectBeyond: 5}, alpha: 1e-6, all: obs}
	for i := range obs {
		x.left = append(x.left, i)
	}
	for _, i := range []int{9, 2} { // both are good points
		x.drop(i, Suspect{ID: obs[i].ID})
	}
	if err := r.solve(&w, 1, x.o); err != nil {
		t.Fatal(err)
	}
	if err := x.bringBack(); err != nil {
		t.Fatal(err)
	}
	if len(r.Rejected) != 0 || len(r.Observations) != len(obs) {
		t.Fatalf("%d observations, rejected %+v", len(r.Observations), r.Rejected)
	}
	for i, o := range r.Observations {
		if o.ID != obs[i].ID {
			t.Errorf("place %d holds point %s", i, o.ID)
		}
	}
}

// Residuals that are finite where the derivatives are not once kept the search for a radius going for ever.
func TestDerivativesThatAreNotFiniteEndTheSearch(t *testing.T) {
	var s Solver
	if sol := s.Solve(notFinite{}, []float64{1, 1}); sol.Status.Err() == nil {
		t.Errorf("status %v", sol.Status)
	}
}

type notFinite struct{}

func (notFinite) Size() (int, int) { return 3, 2 }

func (notFinite) Evaluate(theta, r, j []float64) {
	for i := range r {
		r[i] = float64(i) + theta[0]
	}
	for i := range j {
		j[i] = math.NaN()
	}
}
