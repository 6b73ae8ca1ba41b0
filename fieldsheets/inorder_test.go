package fieldsheets

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"testing"

	"tautbook/tension"
)

// However many pieces there are, they come in order; the first error ends it.
func TestPiecesComeInOrder(t *testing.T) {
	for _, n := range []int{0, 1, bunch - 1, bunch, bunch + 1, 1000} {
		var got, want bytes.Buffer
		for i := range n {
			fmt.Fprintln(&want, i)
		}
		if err := inOrder(&got, n, func(out *bytes.Buffer, i int) error { _, err := fmt.Fprintln(out, i); return err }); err != nil || got.String() != want.String() {
			t.Errorf("%d pieces: %v, %d bytes, want %d", n, err, got.Len(), want.Len())
		}
		fault := errors.New("fault")
		err := inOrder(io.Discard, n, func(_ *bytes.Buffer, i int) error {
			if i == n-1 {
				return fault
			}
			return nil
		})
		if n > 0 && !errors.Is(err, fault) {
			t.Errorf("%d pieces: error lost", n)
		}
	}
}

// Printed piece by piece, the JSON is what encoding/json makes of the whole report.
func TestJSONByPiecesIsTheWhole(t *testing.T) {
	r := sampleReport()
	for _, n := range []int{0, 1, 6, 200} {
		for len(r.Cables) < n {
			r.Cables = append(r.Cables, r.Cables...)
		}
		some := r
		some.Cables = append([]tension.Assessment{}, r.Cables[:n]...)
		some.Visit.Structure = "\n  \"cables\": [" // the words of the file are no place in it
		want, err := json.MarshalIndent(some, "", "  ")
		if err != nil {
			t.Fatal(err)
		}
		if got := printed(t, "json", some); got != string(want)+"\n" {
			t.Errorf("%d cables: differs near %q", n, firstDifference(got, string(want)+"\n"))
		}
	}
}
