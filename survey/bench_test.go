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

// overForms runs read over 100 000 rows in each form; nanoseconds a row are reported beside the usual figures.
func overForms(b *testing.B, read func(text []byte) (rows int, err error)) {
	const n = 100_000
	for _, form := range benchForms {
		b.Run(form.name, func(b *testing.B) {
			text := form.text(n)
			b.SetBytes(int64(len(text)))
			b.ReportAllocs()
			for b.Loop() {
				if rows, err := read(text); rows != n || err != nil {
					b.Fatal(rows, err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/row")
		})
	}
}

// BenchmarkNext streams rows.
func BenchmarkNext(b *testing.B) {
	overForms(b, func(text []byte) (int, error) {
		p, err := NewPointReader(bytes.NewReader(text), PointOptions{Name: "bench"})
		for err == nil {
			_, err = p.Next()
		}
		if err != io.EOF {
			return 0, err
		}
		return p.Rows(), nil
	})
}

// BenchmarkReadPoints reads rows into a survey.
func BenchmarkReadPoints(b *testing.B) {
	overForms(b, func(text []byte) (int, error) {
		sv, err := ReadPoints(bytes.NewReader(text), PointOptions{Name: "bench"})
		if err != nil {
			return 0, err
		}
		return sv.PointsRead, nil
	})
}

// BenchmarkManySpans reads spans of 31 points that a cables file of as many lines knows.
func BenchmarkManySpans(b *testing.B) {
	for _, spans := range []int{1000, 10_000} {
		b.Run(fmt.Sprint("spans=", spans), func(b *testing.B) {
			var text bytes.Buffer
			text.WriteString("x,y,z,code\n")
			var known []Design
			for i := range spans {
				span := Exact(100)
				known = append(known, Design{Cable: fmt.Sprint("c", i), SpanLength: &span})
				for j := range 31 {
					fmt.Fprintf(&text, "%d,%d,%d,c%d\n", i, j*3, j%7, i)
				}
			}
			for b.Loop() {
				sv, err := ReadPoints(bytes.NewReader(text.Bytes()), PointOptions{Name: "bench", Known: known})
				if err != nil || len(sv.Spans) != spans {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(31*spans), "ns/row")
		})
	}
}
