package survey

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"testing"
)

// rowsOf writes n rows of an invented sagging wire, in the given form.
func rowsOf(n int, header string, row func(b *bytes.Buffer, i int, e, n, z float64)) []byte {
	var b bytes.Buffer
	b.WriteString(header + "\n")
	for i := range n {
		s := float64(i) / float64(n) * 280
		row(&b, i, 155000+0.6*s, 463000+0.8*s, 30+1600*(math.Cosh((s-140)/1600)-1))
	}
	return b.Bytes()
}

var benchForms = []struct {
	name string
	text func(n int) []byte
}{
	{"xyz", func(n int) []byte {
		return rowsOf(n, "x,y,z", func(b *bytes.Buffer, _ int, e, n, z float64) { fmt.Fprintf(b, "%.3f,%.3f,%.3f\n", e, n, z) })
	}},
	{"id-code-sd", func(n int) []byte {
		return rowsOf(n, "id;e;n;z;se;sn;sz;code", func(b *bytes.Buffer, i int, e, n, z float64) {
			fmt.Fprintf(b, "%d;%.3f;%.3f;%.3f;0.003;0.003;0.002;main-left\n", i, e, n, z)
		})
	}},
}

// BenchmarkNext streams 100 000 rows; rows/s and allocations per row are reported beside the usual figures.
func BenchmarkNext(b *testing.B) {
	const n = 100_000
	for _, form := range benchForms {
		b.Run(form.name, func(b *testing.B) {
			text := form.text(n)
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				p, err := NewPointReader(bytes.NewReader(text), PointOptions{Name: "bench"})
				for err == nil {
					_, err = p.Next()
				}
				if err != io.EOF {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/row")
		})
	}
}

// BenchmarkReadPoints reads 100 000 rows into a survey.
func BenchmarkReadPoints(b *testing.B) {
	const n = 100_000
	for _, form := range benchForms {
		b.Run(form.name, func(b *testing.B) {
			text := form.text(n)
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				sv, err := ReadPoints(bytes.NewReader(text), PointOptions{Name: "bench"})
				if err != nil || sv.PointsRead != n {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/row")
		})
	}
}
