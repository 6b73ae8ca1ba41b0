package history

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/stat/distuv"
)

// Mark is a control mark as one visit found it, in the frame of that visit. Coordinates in m, standard uncertainties above 0.
type Mark struct {
	ID                           string
	Easting, Northing, Elevation Quantity
}

// MarkTest compares the control marks of a visit with those of the visit before that has any.
type MarkTest struct {
	From   string     `json:"from"`
	To     string     `json:"to"`
	Common int        `json:"common"`
	Shift  [3]float64 `json:"shift_m"` // of the datum: easting, northing, elevation, from the marks that did not move
	P      float64    `json:"p"`       // that marks which did not move differ as much by chance, before any was taken out
	Moved  []string   `json:"moved"`
	Note   string     `json:"note"` // why nothing was tested or settled, "" when it was
}

// fewestMarks is the number of marks from which one that moved can be told from the others.
const fewestMarks = 3

func markTests(visits []dated) []MarkTest {
	out := []MarkTest{}
	var before *dated
	for i := range visits {
		v := &visits[i]
		if len(v.Marks) == 0 {
			continue
		}
		if before != nil {
			t := CompareMarks(before.Marks, v.Marks)
			t.From, t.To = before.Date, v.Date
			out = append(out, t)
		}
		before = v
	}
	return out
}

// CompareMarks is a congruence test of two visits (Pelzer 1971; Caspary 1987) for frames that differ by a shift alone: the shift is
// the weighted mean of the differences, the chi-square of what is left tests all marks together at 5 %, and while it fails the mark
// that adds most to it is named as moved and taken out, as long as two stay. A frame that also turned shows as moved marks.
func CompareMarks(a, b []Mark) MarkTest {
	t := MarkTest{P: 1, Moved: []string{}}
	diffs := differences(a, b)
	t.Common = len(diffs)
	if t.Common < fewestMarks {
		t.Note = fmt.Sprintf("%d marks in common, %d are needed", t.Common, fewestMarks)
		return t
	}
	for {
		shift, each, p := congruence(diffs)
		if len(t.Moved) == 0 {
			t.P = p
		}
		t.Shift = shift
		if p >= significance {
			return t
		}
		if len(diffs) <= 2 {
			t.Note = "no two marks keep their places to each other: the datum is not known"
			return t
		}
		worst := 0
		for i := range each {
			if each[i] > each[worst] {
				worst = i
			}
		}
		t.Moved = append(t.Moved, diffs[worst].id)
		diffs = slices.Delete(diffs, worst, worst+1)
	}
}

type markDifference struct {
	id   string
	d, u [3]float64
}

func differences(a, b []Mark) (out []markDifference) {
	for _, m := range a {
		i := slices.IndexFunc(b, func(o Mark) bool { return o.ID == m.ID })
		if i < 0 {
			continue
		}
		diff := markDifference{id: m.ID}
		for k, pair := range [3][2]Quantity{{m.Easting, b[i].Easting}, {m.Northing, b[i].Northing}, {m.Elevation, b[i].Elevation}} {
			diff.d[k], diff.u[k] = pair[1].Value-pair[0].Value, math.Hypot(pair[0].U, pair[1].U)
		}
		out = append(out, diff)
	}
	slices.SortFunc(out, func(x, y markDifference) int { return strings.Compare(x.id, y.id) })
	return out
}

// congruence gives the common shift, how far chi-square falls when each mark is taken out, and the probability of the whole.
func congruence(diffs []markDifference) (shift [3]float64, each []float64, p float64) {
	each = make([]float64, len(diffs))
	chi2 := 0.0
	for k := range 3 {
		sum, weight := 0.0, 0.0
		for _, d := range diffs {
			w := 1 / (d.u[k] * d.u[k])
			sum, weight = sum+w*d.d[k], weight+w
		}
		shift[k] = sum / weight
		for i, d := range diffs {
			w := 1 / (d.u[k] * d.u[k])
			rest := d.d[k] - shift[k]
			chi2 += w * rest * rest
			each[i] += w * rest * rest / (1 - w/weight)
		}
	}
	return shift, each, distuv.ChiSquared{K: float64(3 * (len(diffs) - 1))}.Survival(chi2)
}
