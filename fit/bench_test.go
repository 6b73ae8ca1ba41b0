package fit

import (
	"math/rand/v2"
	"strconv"
	"testing"

	"tautbook/survey"
)

// The 31 points of the comparison with scipy's curve_fit: vertical least squares of a catenary, with covariance.
func BenchmarkFit31(b *testing.B) {
	c := hang(120, 0, 0.0482)
	rng := rand.New(rand.NewPCG(1, 1))
	var obs []Observation
	for i := range 31 {
		s := 4 * float64(i)
		obs = append(obs, Observation{S: s, Z: c.Z(s) + 0.005*rng.NormFloat64(), VarZ: 25e-6})
	}
	b.Run("solver and covariance", func(b *testing.B) {
		var w workspace
		r := Result{A: End{Station: 0}, B: End{Station: 120}, Observations: obs, APriori: true}
		b.ReportAllocs()
		for b.Loop() {
			if err := r.solve(&w, 1, Options{}); err != nil {
				b.Fatal(err)
			}
		}
	})
	b.Run("whole result", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if _, err := InPlane(obs, Frame{}, End{}, End{Station: 120}, Options{}); err != nil {
				b.Fatal(err)
			}
		}
	})
}

// A clean survey of which wrong points would be dropped: it must hardly cost more than one of which none are.
func BenchmarkCleanSurvey(b *testing.B) {
	for _, stated := range []bool{true, false} {
		obs := noisy(rand.New(rand.NewPCG(1, 3)), hang(120, 0, 0.0482), 31, 0.005, stated)
		for _, beyond := range []float64{0, 6} {
			b.Run("stated="+strconv.FormatBool(stated)+"/beyond="+strconv.Itoa(int(beyond)), func(b *testing.B) {
				for b.Loop() {
					if _, err := InPlane(obs, Frame{}, End{}, End{Station: 120}, Options{RejectBeyond: beyond, NoAlternatives: true}); err != nil {
						b.Fatal(err)
					}
				}
			})
		}
	}
}

func BenchmarkCable(b *testing.B) {
	for _, n := range []int{10, 100, 10000} {
		p := truth{curve: hang(120, 0.05, 0.03), n: n, along: 0.005, up: 0.005, stated: true}.survey(rand.New(rand.NewPCG(1, 2)))
		b.Run("n="+strconv.Itoa(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				mustFit(b, p)
			}
			b.ReportMetric(float64(n)*float64(b.N)/b.Elapsed().Seconds(), "points/s")
		})
	}
}

func mustFit(b *testing.B, p survey.SpanPoints) {
	if _, err := Cable(p, Options{}); err != nil {
		b.Fatal(err)
	}
}
