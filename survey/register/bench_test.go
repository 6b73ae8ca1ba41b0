package register_test

import (
	"flag"
	"fmt"
	"path/filepath"
	"testing"

	"tautbook/survey/register"
)

var fleetStructures = flag.Int("structures", 2000, "structures of the fleet that the benchmarks record, 4 cables and 10 visits each")

// BenchmarkFleet records an invented fleet once and then measures one more visit, the history of one cable and the walk over all of it.
func BenchmarkFleet(b *testing.B) {
	cables := []string{"north", "south", "east", "west"}
	r := open(b, filepath.Join(b.TempDir(), "register.db"), register.Options{Create: true})
	structure := func(i int) string { return fmt.Sprintf("Invented bridge %04d", i) }
	for i := range *fleetStructures {
		for visit := range 10 {
			record(b, r, submission(structure(i), 365*visit+i, cables...))
		}
	}
	more := 0
	b.Run("record", func(b *testing.B) {
		subs := make([]register.Submission, 0, b.N)
		for range b.N {
			more++
			subs = append(subs, submission(fmt.Sprintf("Another bridge %d", more), 1, cables...))
		}
		b.ResetTimer()
		for _, s := range subs {
			record(b, r, s)
		}
	})
	b.Run("history", func(b *testing.B) {
		for i := range b.N {
			if h, err := r.History(background, structure(i%*fleetStructures), "east", ""); err != nil || len(h.Visits) != 10 {
				b.Fatalf("%d visits, %v", len(h.Visits), err)
			}
		}
	})
	b.Run("fleet", func(b *testing.B) {
		for range b.N {
			spans := 0
			for _, err := range r.Fleet(background) {
				if err != nil {
					b.Fatal(err)
				}
				spans++
			}
			if spans < 4**fleetStructures {
				b.Fatalf("%d spans", spans)
			}
		}
	})
}
