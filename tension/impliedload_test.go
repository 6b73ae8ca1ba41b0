package tension

import (
	"math"
	"strings"
	"testing"
)

// What the three implied loads say together, one row for each way in which they can stand to the record.
func TestImpliedMeaning(t *testing.T) {
	filed := *q(38, 0.4)
	same, more, other := q(38.5, 0.8), q(69, 2), q(52, 1)
	for _, c := range []struct {
		name                   string
		expected, read, length *Quantity
		want                   string
	}{
		{"nothing known", nil, nil, nil, ""},
		{"all as recorded", same, same, same, "as do the others: the load is as recorded"},
		{"read as recorded, length needs more", other, same, more, "the length has changed, not the load"},
		{"read as recorded, no length, expected off", other, same, nil, "the tension is not the expected one"},
		{"read too coarse", other, q(54, 15), more, "too coarse to tell the 38.00 ± 0.80 N/m on record from the 69.0 ± 4.0 N/m"},
		{"read and length agree on more", other, more, q(68, 2), "the load is not as recorded, the length is as designed"},
		{"all differ", other, other, more, "load and length have both changed, or the reading is wrong"},
		{"read off, no length", nil, more, nil, "the load is not as recorded, or the reading is wrong"},
		{"no reading, off", other, nil, more, "either the load is not as recorded or the length has changed"},
		{"no reading, as recorded", same, nil, same, "The expected tension, the designed length and the shape need the load on record"},
		{"no reading, only length as recorded", nil, nil, same, "The designed length and the shape need the load on record"},
	} {
		got := impliedMeaning(filed, c.expected, c.read, c.length)
		if (c.want == "") != (got == "") || !strings.Contains(got, c.want) {
			t.Errorf("%s: %q, want it to say %q", c.name, got, c.want)
		}
		if got != "" && (!strings.HasSuffix(got, ".") || strings.Count(got, ". ") > 0) {
			t.Errorf("%s: not one sentence: %q", c.name, got)
		}
	}
}

// Which outcome follows from the pieces, and what the sentence says of each.
func TestReconciledOutcome(t *testing.T) {
	piece := func(name string, residual float64) Piece {
		n, u := 40.0, 1.0
		return Piece{Name: name, Unit: "N/m", Given: *q(38, 0.4), Needed: &n, UApart: &u, Residual: &residual}
	}
	for _, c := range []struct {
		name    string
		r       Reconciled
		want    Outcome
		without string
		says    []string
	}{
		{"silent", Reconciled{ChiSquare: 2, DegreesOfFreedom: 2, Chance: 0.37, Looked: true, Pieces: []Piece{piece(pieceLoad, 1.2)}}, Agrees, "", []string{"Nothing disagrees: 3 pieces"}},
		{"two roads", Reconciled{ChiSquare: 25, DegreesOfFreedom: 1, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceLoad, 5), piece(pieceLength, 5)}}, CannotTell, "",
			[]string{"do not go together: the load would have to be 40.0 ± 2.0 N/m instead of 38.00 N/m", "The verdict takes the load, because somebody looked at it"}},
		{"two roads and a reading", Reconciled{ChiSquare: 25, DegreesOfFreedom: 2, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceLoad, 5), piece(pieceLength, 5), piece(pieceReading+"tension at A", 0.1)}}, CannotTell, "",
			[]string{"cannot tell which", "One more reading, of another kind, would tell"}},
		{"two roads, loads not checked", Reconciled{ChiSquare: 25, DegreesOfFreedom: 1, Chance: 1e-6, Pieces: []Piece{piece(pieceReading+"tension at A", 5), piece(pieceLength, 5)}}, CannotTell, "",
			[]string{"A look at the loads"}},
		{"load alone", Reconciled{ChiSquare: 26, DegreesOfFreedom: 2, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceLoad, 5), piece(pieceLength, 2), piece(pieceReading+"tension at A", 3)}}, OneDisagrees, pieceLoad,
			[]string{"The load on record disagrees with all the rest: it would have to be 40.0 ± 2.0 N/m instead of 38.00 N/m (5.0 standard uncertainties apart)."}},
		{"length alone", Reconciled{ChiSquare: 26, DegreesOfFreedom: 2, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceLoad, 2), piece(pieceLength, 5)}}, OneDisagrees, pieceLength,
			[]string{"longer or shorter than designed"}},
		{"nothing explains it", Reconciled{ChiSquare: 60, DegreesOfFreedom: 2, Chance: 1e-9, Looked: true, Pieces: []Piece{piece(pieceLoad, 4), piece(pieceLength, 4)}}, SeveralWrong, "",
			[]string{"More than one piece"}},
		{"shape when nothing else", Reconciled{ChiSquare: 26, DegreesOfFreedom: 2, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceLoad, 2), piece(pieceShape, 5)}}, OneDisagrees, pieceShape, []string{"The shape"}},
		{"shape gives way to a reading", Reconciled{ChiSquare: 26, DegreesOfFreedom: 2, Chance: 1e-6, Looked: true, Pieces: []Piece{piece(pieceReading+"frequency, mode 2", 5), piece(pieceShape, 5)}}, OneDisagrees,
			pieceReading + "frequency, mode 2", nil},
	} {
		r := c.r
		r.judge()
		if r.Outcome == OneDisagrees {
			r.Without = r.Suspected[0]
		}
		if r.Outcome != c.want || r.Without != c.without {
			t.Errorf("%s: %s, without %q, suspected %v", c.name, r.Outcome, r.Without, r.Suspected)
		}
		for _, s := range c.says {
			if says := reconciledSentence(&r); !strings.Contains(says, s) {
				t.Errorf("%s: %q, want %q", c.name, says, s)
			}
		}
	}
	open := Reconciled{ChiSquare: 0.1, DegreesOfFreedom: 1, Chance: 0.75, Load: q(69, 1.5), LoadOnRecord: q(38, 0.4)}
	open.judge()
	if says := reconciledSentence(&open); !strings.Contains(says, "69.0 ± 3.0 N/m hang there and not the 38.00 ± 0.80 N/m on file, which nobody looked at") {
		t.Errorf("an unlisted load that length and reading agree on reads %q", says)
	}
	open.Load = q(38.3, 1.5)
	if says := reconciledSentence(&open); !strings.Contains(says, "agrees with them") {
		t.Errorf("a load as on file reads %q", says)
	}
}

// Noncentrality for 5 % and 80 %: with one degree of freedom it is (1.959964 + 0.841621)^2 = 7.849; the others by scipy.stats.ncx2 (brentq).
func TestNoncentrality(t *testing.T) {
	for dof, want := range map[int]float64{1: 7.8489, 2: 9.6347, 3: 10.9026, 4: 11.9353, 14: 18.3382} {
		if got := detectable(dof); math.Abs(got*got-want) > 2e-4 {
			t.Errorf("%d degrees of freedom: %.5f, want %.4f", dof, got*got, want)
		}
	}
}
