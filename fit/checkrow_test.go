package fit

import (
	"math"
	"strconv"
	"strings"
	"testing"
)

// checkRow is one published or computed check value of testdata/check-values.csv; its columns source and how_known stand
// beside the numbers and are printed when a value is missed.
type checkRow struct {
	t       *testing.T
	row     map[string]string
	in      map[string][]float64
	want    map[string]string
	checked map[string]bool
}

// checkRows reads the rows with the given ids; all must be there.
func checkRows(t *testing.T) map[string]*checkRow {
	out := map[string]*checkRow{}
	for _, r := range referenceTable(t, "check-values.csv") {
		c := &checkRow{t: t, row: r, in: map[string][]float64{}, want: map[string]string{}, checked: map[string]bool{}}
		for _, pair := range strings.Split(r["inputs"], ";") {
			key, list, _ := strings.Cut(pair, "=")
			for _, w := range strings.Fields(list) {
				if v, err := strconv.ParseFloat(w, 64); err == nil {
					c.in[key] = append(c.in[key], v)
				}
			}
		}
		for _, pair := range strings.Split(r["outputs"], ";") {
			key, v, _ := strings.Cut(pair, "=")
			c.want[key] = v
		}
		out[r["id"]] = c
	}
	return out
}

// x is the single input of that name.
func (c *checkRow) x(key string) float64 {
	c.t.Helper()
	if len(c.in[key]) != 1 {
		c.t.Fatalf("%s: input %s is %v", c.row["id"], key, c.in[key])
	}
	return c.in[key][0]
}

// is checks one output within the tolerance that the table gives it.
func (c *checkRow) is(key string, got float64) {
	c.t.Helper()
	value, spare, ok := strings.Cut(c.want[key], "+-")
	want, err1 := strconv.ParseFloat(value, 64)
	tol, err2 := strconv.ParseFloat(spare, 64)
	if !ok || err1 != nil || err2 != nil {
		c.t.Fatalf("%s: output %s is %q", c.row["id"], key, c.want[key])
	}
	c.checked[key] = true
	if !(math.Abs(got-want) <= tol) {
		c.t.Errorf("%s %s = %.12g, want %s: %s (%s)", c.row["id"], key, got, c.want[key], c.row["source"], c.row["how_known"])
	}
}

// done fails when an output of the row was not checked, except those named.
func (c *checkRow) done(except ...string) {
	c.t.Helper()
	for key := range c.want {
		if !c.checked[key] && !strings.Contains(" "+strings.Join(except, " ")+" ", " "+key+" ") {
			c.t.Errorf("%s: output %s was not checked", c.row["id"], key)
		}
	}
}
