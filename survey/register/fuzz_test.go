package register

import (
	"bytes"
	"encoding/csv"
	"strings"
	"testing"
)

// Whatever a CSV file of the exchange holds, it is refused or every row of it is written again and read again to the same row.
func FuzzImportTable(f *testing.F) {
	for i, t := range tables {
		f.Add(uint8(i), names(cellsOf(t.row()), ",")+"\n")
	}
	f.Add(uint8(1), "structure\n'=1+1\n\"a\n\\r\\\\b\"\n")
	f.Add(uint8(7), "event,structure,cable,span,event_date,kind,size,u_size,unit,note,supersedes,recorded_at\nx,a,,,2000-01-01,damaged,1e3,,m,'@,,\n")
	f.Fuzz(func(t *testing.T, which uint8, text string) {
		tab := tables[int(which)%len(tables)]
		err := tab.parse(strings.NewReader(text), "x.csv", func(r row, line int) error {
			if line < 2 {
				t.Errorf("a row on line %d", line)
			}
			again := tab.row()
			for i, c := range cellsOf(r) {
				cell := cellOf(c.at)
				if err := setCell(cellsOf(again)[i].at, cell); err != nil {
					t.Errorf("column %s, cell %q: %v", c.name, cell, err)
				}
			}
			if d := differences(cellsOf(r), cellsOf(again)); d != "" {
				t.Error(d)
			}
			return nil
		})
		if err != nil && !strings.HasPrefix(err.Error(), "x.csv:") {
			t.Errorf("error without a place: %v", err)
		}
	})
}

// A text comes back from a CSV cell as it was, and no cell begins like a formula unless it is a number.
func FuzzGuardedText(f *testing.F) {
	for _, s := range []string{"=1", "-5", "'", `\`, "\r\n", "@x", "+", "-Inf"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		text = plain(text)
		var b bytes.Buffer
		w := csv.NewWriter(&b)
		w.Write([]string{"x", Guarded(text)})
		w.Flush()
		cells, err := csv.NewReader(&b).Read()
		if err != nil || len(cells) != 2 {
			t.Fatalf("%q: %v", text, err)
		}
		if got, err := unguarded(cells[1]); err != nil || got != text {
			t.Errorf("%q came back as %q, %v", text, got, err)
		}
	})
}
