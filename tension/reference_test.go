package tension

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"testing"
)

// table reads a reference table of testdata: one map a row, numbers parsed on demand.
type row map[string]string

func (r row) f(t *testing.T, key string) float64 {
	t.Helper()
	text, ok := r[key]
	if !ok {
		t.Fatalf("no column %q", key)
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatalf("column %q: %v", key, err)
	}
	return v
}

func table(t *testing.T, name string) []row {
	t.Helper()
	file, err := os.Open("testdata/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer file.Close()
	all, err := csv.NewReader(file).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var rows []row
	for _, cells := range all[1:] {
		r := row{}
		for i, c := range cells {
			r[all[0][i]] = c
		}
		rows = append(rows, r)
	}
	return rows
}

// relative is |got - want| / max(|want|, scale).
func relative(got, want, scale float64) float64 {
	return math.Abs(got-want) / math.Max(math.Abs(want), scale)
}
