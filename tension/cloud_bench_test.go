package tension

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"runtime"
	"testing"

	"tautbook/fit"
	"tautbook/survey"
)

// cloud is a file of invented laser points on one cable, the share wild of them up to 2 m off.
func cloud(n int, wild float64) []byte {
	rng := rand.New(rand.NewPCG(1, 50))
	c := fit.Curve{S2: 120, Z1: 20, Z2: 20, Curvature: 1 / 160.0, SelfShare: 1}
	var b bytes.Buffer
	b.WriteString("x,y,z\n")
	for range n {
		s := 120 * rng.Float64()
		z := c.Z(s) + 0.005*rng.NormFloat64()
		if rng.Float64() < wild {
			z += 4*rng.Float64() - 2
		}
		fmt.Fprintf(&b, "%.4f,%.4f,%.4f\n", s, 0.01*rng.NormFloat64(), z)
	}
	return b.Bytes()
}

func BenchmarkCloud(b *testing.B) {
	for _, wild := range []float64{0, 0.02} {
		text := cloud(200_000, wild)
		b.Run(fmt.Sprintf("wild=%g", wild), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				sv, err := survey.ReadPoints(bytes.NewReader(text), survey.PointOptions{Name: "cloud", Cable: "1"})
				if err != nil {
					b.Fatal(err)
				}
				if _, err := Assess(Case{Points: sv.Spans[0], Fit: fit.Options{RejectBeyond: 6, FindLoads: 2}}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(200_000*float64(b.N)/b.Elapsed().Seconds(), "points/s")
			var m runtime.MemStats
			runtime.ReadMemStats(&m)
			b.ReportMetric(float64(m.Sys)/200_000, "B-sys/point")
		})
	}
}
