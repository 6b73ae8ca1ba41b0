package tension

import (
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"tautbook/fit"
	"tautbook/survey"
)

// two parallel hand cables of an invented footbridge, 1.2 m apart in plan and a little different in sag.
func twoCables(rng *rand.Rand) []Case {
	cases := make([]Case, 2)
	for k, name := range []string{"left", "right"} {
		c := fit.Curve{S2: 60, Z1: 10, Z2: 10.5 + 0.2*float64(k), Curvature: 1 / (150.0 + 20*float64(k)), SelfShare: 1}
		cases[k] = Case{File: "visit.csv", Points: survey.SpanPoints{Cable: name}, Fit: fit.Options{RejectBeyond: 6, NoAlternatives: true}}
		for i := range 41 {
			s := 1.5 * float64(i)
			cases[k].Points.Points = append(cases[k].Points.Points, survey.Point{ID: name + strconv.Itoa(i), Line: 2 + 41*k + i,
				E: s, N: 1.2*float64(k) + 0.003*rng.NormFloat64(), Z: c.Z(s) + 0.003*rng.NormFloat64()})
		}
	}
	return cases
}

func assessed(t *testing.T, cases []Case) []Assessment {
	t.Helper()
	out := make([]Assessment, len(cases))
	for i, c := range cases {
		var err error
		if out[i], err = Assess(c); err != nil {
			t.Fatal(err)
		}
	}
	NameWrongCables(cases, out)
	return out
}

func findingText(a Assessment, id string) string {
	for _, f := range a.Findings {
		if f.ID == id {
			return f.Text
		}
	}
	return ""
}

// A point with the code of the neighbouring cable is left out of its own and named with the cable that it is on; one that is on
// none is not.
func TestPointOnTheWrongCableIsSuggestedItsOwn(t *testing.T) {
	for seed := range uint64(50) {
		cases := twoCables(rand.New(rand.NewPCG(seed, 60)))
		left, right := &cases[0].Points.Points, &cases[1].Points.Points
		moved := (*right)[8]
		*right = append((*right)[:8], (*right)[9:]...)
		*left = append(*left, moved)
		(*left)[4].Z += 0.9 // a plain blunder
		out := assessed(t, cases)
		got := findingText(out[0], "wrong-cable")
		if !strings.Contains(got, moved.ID+" fits cable right") || strings.Contains(got, (*left)[4].ID) {
			t.Errorf("seed %d: %q, rejected %+v", seed, got, out[0].Fit.Rejected)
		}
		if other := findingText(out[1], "wrong-cable"); other != "" {
			t.Errorf("seed %d: of the right cable: %q", seed, other)
		}
	}
}

// A point with another cable's elevation but its own place in plan is not on the other cable.
func TestPointBesideAnotherCableIsNotOnIt(t *testing.T) {
	cases := twoCables(rand.New(rand.NewPCG(1, 61)))
	cases[0].Points.Points[8].Z = cases[1].Points.Points[8].Z
	if got := findingText(assessed(t, cases)[0], "wrong-cable"); got != "" {
		t.Error(got)
	}
}

// Cables of different files and structures are not mixed up.
func TestOnlyCablesOfTheStructureAreTried(t *testing.T) {
	cases := twoCables(rand.New(rand.NewPCG(1, 62)))
	moved := cases[1].Points.Points[8]
	cases[0].Points.Points = append(cases[0].Points.Points, moved)
	cases[0].Conditions.Structure, cases[1].Conditions.Structure, cases[1].File = "bridge", "mast", "other.csv"
	if got := findingText(assessed(t, cases)[0], "wrong-cable"); got != "" {
		t.Error(got)
	}
}

// Neighbours that lie off together, and a survey of which more than a third went, are said so at the level that asks for action.
func TestPointsThatGoTogetherAreTold(t *testing.T) {
	size := func(i int) float64 { return (0.5 + 0.13*float64(i%7)) * float64(1-2*(i/2%2)) }
	often := func(i int) bool { return i%5 == 1 || i%5 == 3 }
	for _, c := range []struct {
		id   string
		off  func(i int) float64
		want string
	}{
		{"off-together", func(i int) float64 {
			if i >= 8 && i < 13 {
				return 0.08
			}
			return 0
		}, "5 points between 12.00 m and 18.00 m"},
		{"many-rejected", func(i int) float64 {
			if often(i) {
				return size(i)
			}
			return 0
		}, "16 of 41"},
		{"torn", func(i int) float64 {
			if often(i) || i == 10 || i == 20 || i == 30 {
				return size(i)
			}
			return 0
		}, "19 of 41"},
	} {
		one := twoCables(rand.New(rand.NewPCG(1, 63)))[0]
		one.Conditions.Accuracy = &survey.Accuracy{Horizontal: 0.003, Vertical: 0.003}
		for i := range one.Points.Points {
			one.Points.Points[i].Z += c.off(i)
		}
		a := assessed(t, []Case{one})[0]
		if got := findingText(a, c.id); !strings.Contains(got, c.want) {
			t.Errorf("%s: %q, rejected %d", c.id, got, len(a.Fit.Rejected))
		}
	}
}
