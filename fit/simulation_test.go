package fit

import (
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// Simulation with known truth: the estimate of the curvature is unbiased, as sharp as the Cramer-Rao bound allows, and its
// 95 % interval covers the truth 95 times in a hundred, with a stated accuracy and with one estimated from the residuals.
func TestEstimatesAreUnbiasedSharpAndCovered(t *testing.T) {
	runs := 6000
	if testing.Short() {
		runs = 2000
	}
	for _, c := range []struct {
		name string
		w    truth
	}{
		{"slack, sag 0.15", truth{curve: hang(60, 0, 0.15), n: 21, along: 0.005, up: 0.005}},
		{"ordinary, sag 0.03", truth{curve: hang(120, 0.05, 0.03), n: 31, along: 0.005, up: 0.005}},
		{"taut, sag 0.002", truth{curve: hang(80, 0, 0.002), n: 15, along: 0.002, up: 0.002}},
		{"steep guy, 45 degrees", truth{curve: hang(40, 1, 0.006), n: 19, along: 0.002, up: 0.002}},
		{"half covered", truth{curve: hang(100, 0.1, 0.05), n: 12, along: 0.004, up: 0.004, from: 0.02, to: 0.5}},
	} {
		for _, stated := range []bool{true, false} {
			c.w.stated = stated
			rng := rand.New(rand.NewPCG(11, 17))
			k := c.w.curve.Curvature
			var sum, square, bound float64
			covered := 0
			for range runs {
				r := fitted(t, c.w.survey(rng), Options{NoAlternatives: true})
				d := r.Curve.Curvature - k
				sum += d
				square += d * d
				u := math.Sqrt(r.Cov[2][2])
				t95 := distuv.UnitNormal.Quantile(0.975)
				if !stated || r.ScaledBy != 1 {
					t95 = distuv.StudentsT{Sigma: 1, Nu: float64(r.DegreesOfFreedom)}.Quantile(0.975)
				}
				if math.Abs(d) <= t95*u {
					covered++
				}
				bound += r.Cov[2][2] / (r.ScaledBy * r.Widening * r.Widening) / float64(runs)
			}
			n := float64(runs)
			bias, rms := sum/n, math.Sqrt(square/n)
			crb := math.Sqrt(bound)
			if !stated {
				crb *= c.w.up // unit weights: the bound is in units of the true standard deviation
			}
			cover := float64(covered) / n
			spare := 3 / math.Sqrt(2*n) // three standard errors of a simulated standard deviation
			t.Logf("%-22s stated %-5v bias %+.3f u, rms/bound %.4f, coverage %.2f %%", c.name, stated, bias/rms, rms/crb, 100*cover)
			if math.Abs(bias) > 3.5*rms/math.Sqrt(n) {
				t.Errorf("%s: bias %.2g of u %.2g", c.name, bias, rms)
			}
			if ratio := rms / crb; ratio > 1.02+spare || ratio < 0.98-spare {
				t.Errorf("%s: rms / Cramer-Rao bound = %.4f", c.name, ratio)
			}
			if cover < 0.94 || cover > 0.96 {
				t.Errorf("%s, stated %v: 95 %% intervals cover %.2f %%", c.name, stated, 100*cover)
			}
		}
	}
}
