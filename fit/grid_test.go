package fit

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// gridTally pools the normalised errors of one level of one factor of the grid.
type gridTally struct{ n, square, covered float64 }

func (g *gridTally) add(z float64, covered bool) {
	g.n++
	g.square += z * z
	if covered {
		g.covered++
	}
}

// The whole range of cables: sag ratio 2e-4 to 0.6, chord level to 60 degrees, 4 to 5000 points, noise of 1 to 20 mm, all shapes. Every
// fit converges; over the levels of every factor the curvature scatters as the Cramer-Rao bound says, and 95 % intervals cover 94 to
// 96 %; a cable too flat for its survey is said to be so.
func TestGridOfCables(t *testing.T) {
	reps := 3
	if testing.Short() {
		reps = 1
	}
	rng := rand.New(rand.NewPCG(12, 1))
	tally := map[string]*gridTally{}
	at := func(key string) *gridTally {
		if tally[key] == nil {
			tally[key] = &gridTally{}
		}
		return tally[key]
	}
	flat, flatSaid := 0, 0
	for _, share := range []float64{1, 0, 0.5} {
		for _, sag := range []float64{2e-4, 2e-3, 0.01, 0.05, 0.2, 0.6} {
			for _, incline := range []float64{0, 20, 45, 60} {
				for _, n := range []int{4, 5, 8, 20, 100, 1000, 5000} {
					for _, sigma := range []float64{0.001, 0.005, 0.02} {
						runs := reps * 12
						if n >= 1000 {
							runs = 1
						}
						if share == 0.5 {
							runs = max(1, runs/6) // by quadrature
						}
						if share == 0.5 && n == 5000 && (testing.Short() || sigma != 0.005) {
							continue
						}
						span := 60.0
						tan := math.Tan(incline * math.Pi / 180)
						c := Curve{Z1: 100, S2: span, Z2: 100 + tan*span, SelfShare: share}
						c.Curvature = curvatureForSag(c, sag*span)
						for range runs {
							obs := noisy(rng, c, n, sigma, true)
							r, err := InPlane(obs, Frame{}, End{}, End{Station: span}, Options{Shape: c.Shape(), SelfShare: share, NoAlternatives: true})
							if err != nil {
								t.Fatalf("share %g, sag ratio %g, %g degrees, %d points, %g m: %v", share, sag, incline, n, sigma, err)
							}
							u := math.Sqrt(r.Cov[2][2])
							free := u / (math.Sqrt(r.ScaledBy) * r.Widening)
							z := (r.Curve.Curvature - c.Curvature) / free
							t95 := 1.959964
							if r.ScaledBy != 1 {
								t95 = distuv.StudentsT{Sigma: 1, Nu: float64(r.DegreesOfFreedom)}.Quantile(0.975)
							}
							covered := math.Abs(r.Curve.Curvature-c.Curvature) <= t95*u
							for _, key := range []string{"all", fmt.Sprint("share ", share), fmt.Sprint("sag ", sag), fmt.Sprint("incline ", incline), fmt.Sprint("points ", n), fmt.Sprint("noise ", sigma)} {
								at(key).add(z, covered)
							}
							if c.Curvature < free/2 {
								flat++
								if !r.Hangs() {
									flatSaid++
								}
							}
						}
					}
				}
			}
		}
	}
	for key, g := range tally {
		rms, cover := math.Sqrt(g.square/g.n), g.covered/g.n
		t.Logf("%-12s %6.0f fits: rms / Cramer-Rao %.4f, covered %.2f %%", key, g.n, rms, 100*cover)
		if spare := 3.5 / math.Sqrt(2*g.n); rms > 1.02+spare || rms < 0.98-spare {
			t.Errorf("%s: rms / Cramer-Rao bound %.4f", key, rms)
		}
		if spare := 0.01 + 3.5*math.Sqrt(0.95*0.05/g.n); math.Abs(cover-0.95) > spare {
			t.Errorf("%s: covered %.2f %%", key, 100*cover)
		}
	}
	t.Logf("%d of %d cables whose curvature is below u/2 are said to be too flat", flatSaid, flat)
	if float64(flatSaid) < 0.9*float64(flat) {
		t.Errorf("%d of %d cables whose curvature is below u/2 are said to be too flat", flatSaid, flat)
	}
}

// curvatureForSag is the curvature with which a curve has the given sag at mid-span, by bisection.
func curvatureForSag(c Curve, sag float64) float64 {
	lo, hi := 0.0, 1.0
	for range 100 {
		c.Curvature = (lo + hi) / 2
		if c.Sag(c.middle(), c.S1, c.S2) < sag {
			lo = c.Curvature
		} else {
			hi = c.Curvature
		}
	}
	return lo
}
