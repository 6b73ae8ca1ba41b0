package survey

import (
	"bytes"
	"compress/gzip"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"
	"testing/iotest"

	"pgregory.net/rapid"
)

// A streamed file tells its bad rows at the end, and tells them again when asked again.
func TestStreamTellsBadRows(t *testing.T) {
	p, err := NewPointReader(strings.NewReader("x,y,z\n1,2,3\n4,5,q\n7,8\n9,9,9\n"), PointOptions{Name: "s.csv"})
	if err != nil {
		t.Fatal(err)
	}
	var got []float64
	for err == nil {
		var pt Point
		if pt, err = p.Next(); err == nil {
			got = append(got, pt.E)
		}
	}
	if fmt.Sprint(got) != "[1 9]" || p.Rows() != 4 {
		t.Errorf("points %v of %d rows", got, p.Rows())
	}
	for range 2 {
		var input *InputError
		if !errors.As(err, &input) || len(input.Problems) != 2 || input.Problems[0].Line != 3 || input.Problems[1].Line != 4 {
			t.Errorf("end is %v", err)
		}
		_, err = p.Next()
	}
}

// After a line that ends the rows, such as one with NUL bytes, no later row comes out, however often it is asked for.
func TestStreamStopsAtBrokenLine(t *testing.T) {
	text := "x,y,z\n" + strings.Repeat("1000,2000,3000\n", 10_000) + "1,\x00,3\n4,5,6\n"
	p, err := NewPointReader(strings.NewReader(text), PointOptions{Name: "s.csv"})
	if err != nil {
		t.Fatal(err)
	}
	n := 0
	for ; err == nil; n++ {
		_, err = p.Next()
	}
	for range 2 {
		pt, again := p.Next()
		if again == nil || again.Error() != err.Error() || pt != (Point{}) {
			t.Errorf("asked again: %+v, %v, first %v", pt, again, err)
		}
	}
	if n != 10_001 || !strings.HasPrefix(err.Error(), "s.csv:10002: expected text; the line holds NUL bytes") {
		t.Errorf("%d rows, %v", n-1, err)
	}
}

// The Ctrl-Z at the end of a file of an old instrument is no row.
func TestEndOfTextMark(t *testing.T) {
	sv, err := ReadPoints(strings.NewReader("x,y,z\r\n1,2,3\r\n\x1a"), PointOptions{Name: "z.csv"})
	if err != nil || sv.PointsRead != 1 {
		t.Errorf("%+v, %v", sv, err)
	}
}

// A good stream ends with io.EOF; conditions, header, guesses and digest can be asked for.
func TestStream(t *testing.T) {
	const text = "# crew: one\nx,y,z,code\n1,2,3,w1\n# a word\n# wind: none\n4,5,6,w1\n"
	p, err := NewPointReader(strings.NewReader(text), PointOptions{Name: "s.csv"})
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []Point{{E: 1, N: 2, Z: 3, Code: "w1", Line: 3}, {E: 4, N: 5, Z: 6, Code: "w1", Line: 6}} {
		if pt, err := p.Next(); err != nil || pt != want {
			t.Errorf("%+v, %v, want %+v", pt, err, want)
		}
	}
	for range 2 {
		if pt, err := p.Next(); err != io.EOF || pt != (Point{}) {
			t.Errorf("end is %+v, %v", pt, err)
		}
	}
	sum := sha256.Sum256([]byte(text))
	if got, err := p.SHA256(); err != nil || got != hex.EncodeToString(sum[:]) {
		t.Errorf("digest %s, %v", got, err)
	}
	if c := p.Conditions(); c.Crew != "one" || c.Wind != "none" || len(p.Header()) != 4 || len(p.Guesses()) != 3 || len(p.Notices()) != 0 {
		t.Errorf("%+v %+v %+v %+v", c, p.Header(), p.Guesses(), p.Notices())
	}
}

// The digest is that of the bytes as received: of the packed file, and also when a gzip file has more than one part.
func TestDigestOfPackedFile(t *testing.T) {
	var z bytes.Buffer
	for _, part := range []string{"x,y,z\n1,2,3\n", "4,5,6\n"} {
		g := gzip.NewWriter(&z)
		g.Write([]byte(part))
		g.Close()
	}
	sum := sha256.Sum256(z.Bytes())
	sv, err := ReadPoints(bytes.NewReader(z.Bytes()), PointOptions{Name: "z.csv.gz"})
	if err != nil || sv.SHA256 != hex.EncodeToString(sum[:]) || sv.PointsRead != 2 {
		t.Errorf("%+v, %v", sv, err)
	}
}

// An input that breaks is told with its own error, whenever it breaks; one that trickles in is read all the same.
func TestInputThatBreaks(t *testing.T) {
	text := "x,y,z\n" + strings.Repeat("1000,2000,3000\n", 20_000)
	broken := errors.New("line lost")
	for _, at := range []int{0, 3, 100, headSize + 10, len(text) - 1} {
		_, err := ReadPoints(io.MultiReader(strings.NewReader(text[:at]), iotest.ErrReader(broken)), PointOptions{Name: "b.csv"})
		if !errors.Is(err, broken) {
			t.Errorf("broken at %d: %v", at, err)
		}
	}
	sv, err := ReadPoints(iotest.OneByteReader(strings.NewReader("x,y,z\r\n1,2,3\r\n\"4\",5,6\r\n")), PointOptions{Name: "b.csv"})
	if err != nil || sv.PointsRead != 2 {
		t.Errorf("%+v, %v", sv, err)
	}
}

// Past the head no row of a plain file allocates.
func TestRowsAllocateNothing(t *testing.T) {
	text := "x,y,z,code\n" + strings.Repeat("155000.125,463000.250,31.125,w1\n", 20_000)
	p, err := NewPointReader(strings.NewReader(text), PointOptions{Name: "a.csv"})
	if err != nil {
		t.Fatal(err)
	}
	p.Next()
	if n := testing.AllocsPerRun(10_000, func() {
		if _, err := p.Next(); err != nil {
			t.Fatal(err)
		}
	}); n != 0 {
		t.Errorf("%v allocations a row", n)
	}
}

// A quote that is never closed swallows the rest of the file: that is told with the line where it was opened.
func TestOpenQuoteOverManyLines(t *testing.T) {
	text := "x,y,z\n" + strings.Repeat("1,2,3\n", 300) + "\"4,5,6\n" + strings.Repeat("1,2,3\n", 170_000)
	_, err := ReadPoints(strings.NewReader(text), PointOptions{Name: "q.csv"})
	if err == nil || !strings.HasPrefix(err.Error(), "q.csv:302: expected a closing quote") {
		t.Errorf("%v", err)
	}
}

// accounted fails when a row of a survey is not in exactly one place.
func accounted(t interface{ Fatalf(string, ...any) }, sv *Survey) {
	seen := map[int]string{}
	put := func(where string, points ...Point) {
		for _, p := range points {
			if other, twice := seen[p.Line]; twice {
				t.Fatalf("line %d is in %s and in %s", p.Line, other, where)
			}
			seen[p.Line] = where
		}
	}
	for _, sp := range sv.Spans {
		put("a span", sp.Points...)
		for _, end := range []*Point{sp.A, sp.B} {
			if end != nil {
				put("supports", *end)
			}
		}
	}
	put("control", sv.Control...)
	put("ground", sv.Ground...)
	put("ignored", sv.Ignored...)
	if len(seen) != sv.PointsRead {
		t.Fatalf("%d rows read, %d in a place", sv.PointsRead, len(seen))
	}
	counted := 0
	for _, u := range sv.Codes {
		counted += u.Points
	}
	if counted > sv.PointsRead {
		t.Fatalf("%d points by code, %d rows", counted, sv.PointsRead)
	}
}

// Whatever the codes, the ids and the cables file: every row ends in exactly one place, and a refusal has its line.
func TestNothingIsLost(t *testing.T) {
	taken, refused := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		code := rapid.SampledFrom([]string{"main", "MAIN", "main/1", "main 2", "main/1 A", "main/1/B", "guy", "guy A", "guy B", "A", "B", "CP", "BM 3", "gnd", "ground wire", "tree", "", "x=y", "é"})
		var o PointOptions
		if rapid.Bool().Draw(t, "known") {
			o.Known = knownOf(rapid.SliceOfNDistinct(rapid.SampledFrom([]string{"main/1", "main/2", "guy", "guy A", "CP"}), 1, 4, rapid.ID).Draw(t, "cables")...)
		}
		if rapid.IntRange(0, 3).Draw(t, "rule") == 0 {
			o.Codes = []CodeRule{{Code: "tree", Role: Ground}, {Code: "guy", Role: OnCable, Cable: "main", Span: "1"}}
		}
		o.Cable = rapid.SampledFrom([]string{"", "", "", "main", "other"}).Draw(t, "cable")
		o.Name = "r.csv"
		var b strings.Builder
		b.WriteString("id,x,y,z,code\n")
		n := rapid.IntRange(1, 30).Draw(t, "rows")
		for i := range n {
			k := i
			if rapid.IntRange(0, 15).Draw(t, "repeat") == 0 && i > 0 {
				k = i - 1
			}
			fmt.Fprintf(&b, "%d,%d,%d,%d,%s\n", k, k*3, k, k%7, code.Draw(t, "code"))
		}
		sv, err := ReadPoints(strings.NewReader(b.String()), o)
		if err != nil {
			refused++
			var input *InputError
			if !errors.As(err, &input) {
				t.Fatalf("%v", err)
			}
			for _, p := range input.Problems {
				if p.File != "r.csv" || p.Line < 2 || p.Line > n+1 {
					t.Fatalf("problem without place: %+v", p)
				}
			}
			return
		}
		taken++
		if sv.PointsRead != n {
			t.Fatalf("%d rows read of %d", sv.PointsRead, n)
		}
		accounted(t, sv)
	})
	if taken == 0 || refused == 0 {
		t.Errorf("%d surveys taken, %d refused: both must happen", taken, refused)
	}
}
