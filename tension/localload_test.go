package tension

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// The state at the tension that AtLengthLoaded found, with the loads at the stations where they came to hang, is the same state.
// AtLengthLoaded itself is held against 50-digit references and published benchmarks in pointload_test.go.
func TestLoadedStateByTensionAndByLengthAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		span := rapid.Float64Range(5, 500).Draw(t, "span")
		ch := Chord{Length: span, Rise: span * rapid.Float64Range(-1, 1).Draw(t, "incline")}
		c := Cable{SelfWeight: rapid.Float64Range(1, 100).Draw(t, "weight"), DeckLoad: rapid.Float64Range(0, 100).Draw(t, "deck"),
			AxialStiffness: math.Pow(10, rapid.Float64Range(6, 9).Draw(t, "log EA")), Expansion: 1.2e-5}
		h := (c.SelfWeight + c.DeckLoad) * span / rapid.Float64Range(0.02, 2).Draw(t, "curvature times span")
		if h > c.AxialStiffness/200 {
			return
		}
		var loads []StationLoad
		at := 0.0
		for range rapid.IntRange(1, 3).Draw(t, "loads") {
			at += rapid.Float64Range(0.05, 0.3).Draw(t, "gap")
			loads = append(loads, StationLoad{at * span, rapid.Float64Range(0.01, 1).Draw(t, "P") * (c.SelfWeight + c.DeckLoad) * span})
		}
		st, err := c.AtTensionLoaded(h, ch, 20, loads)
		if err != nil {
			t.Fatal(err)
		}
		back, err := c.AtLengthLoaded(st.Unstressed, ch, 20, st.Loads)
		if err != nil {
			t.Fatal(err)
		}
		for i, q := range [][2]float64{{back.H, h}, {back.SagMid(), st.SagMid()}, {back.GreatestTension(), st.GreatestTension()}, {back.VerticalA(), st.VerticalA()}} {
			if d := math.Abs(q[0] - q[1]); !(d <= 1e-7*math.Max(math.Abs(q[1]), 1e-3*h*float64(i/3))) {
				t.Fatalf("figure %d: %.12g by length, %.12g by tension", i, q[0], q[1])
			}
		}
		_, _, s1, _, _, _ := st.Segment(0)
		if d := math.Abs(s1 - loads[0].Station); d > 1e-9*span {
			t.Fatalf("the first load hangs at %g m, told %g m", s1, loads[0].Station)
		}
		total := c.SelfWeight*st.Unstressed + c.DeckLoad*span
		for _, l := range loads {
			total += l.P
		}
		if up := st.VerticalA() + st.VerticalB(); math.Abs(up-total) > 1e-9*(total+h) {
			t.Fatalf("supports carry %g N of %g N", up, total)
		}
	})
}
