package tension

import (
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// Nobody looked at the loads; cables have slipped, carry unlisted loads, both or neither. With readings of 5 % in tension, or 1 % in
// frequency, a verdict is right at least 95 % of the times it is given, and a cable that only carries more is never called slack: taut and
// deep, level and inclined. Frequencies that rest on tension over mass alone must decide nothing, being no more than the shape says.
func TestVerdictsWithReadingsAreCalibrated(t *testing.T) {
	two := []survey.Reading{cellAtA, cellAtB}
	even := []survey.Reading{{Of: survey.NaturalFrequency, Mode: 2}, {Of: survey.NaturalFrequency, Mode: 1, Sideways: true}, {Of: survey.WaveReturn, Returns: 3}}
	for _, c := range []struct {
		name     string
		site     site
		kinds    []survey.Reading
		relative float64
		slips    float64 // greatest length gained, m
		decides  bool
	}{
		{"hand cable, two cells", footbridge(), two, 0.05, 0.25, true},
		{"hand cable, mode 1", footbridge(), modes[:1], 0.01, 0.25, true},
		{"hand cable, modes of mass", footbridge(), even, 0.01, 0.25, false},
		{"main cable, two cells", mainCable(), two, 0.05, 0.8, true},
		{"main cable, modes", mainCable(), modes, 0.01, 0.8, false},
		{"guy, cell and modes", guy(), append([]survey.Reading{cellAtB}, modes...), 0.05, 0.1, true},
		{"guy, modes", guy(), modes, 0.01, 0.1, true},
	} {
		rng := rand.New(rand.NewPCG(77, 3))
		runs := runsOf(160)
		called, right, byReading := map[Verdict]int{}, map[Verdict]int{}, 0 // without overload under the worse reading, which is said to be for safety
		lambda := 0.0
		for i := range runs {
			v := visitWith{site: c.site, kinds: c.kinds, relative: c.relative, record: survey.LoadsNotChecked}
			if i%4 == 1 || i%4 == 2 {
				v.extra = 1.5 * rng.Float64()
			}
			if i%4 == 2 || i%4 == 3 {
				v.slip = c.slips * rng.Float64()
			}
			visit, st, s := v.draw(t, rng)
			a, err := Assess(visit)
			if err != nil {
				t.Fatal(err)
			}
			lambda = a.Stiffness.Lambda2
			ratio := st.H / s.expectedTruth(t)
			low, high := a.Expected.SlackBelow, a.Expected.OverloadAbove
			if a.DecidedBy == string(groundRivalStrength) {
				continue
			}
			called[a.Verdict]++
			if a.Direct != nil {
				byReading++
			}
			switch {
			case a.Verdict == Slack && ratio < low, a.Verdict == Overload && (ratio > high || 1+v.extra > high), a.Verdict == AsDesigned && ratio >= low && ratio <= high:
				right[a.Verdict]++
			}
			if a.Verdict == Slack && v.slip == 0 && v.extra > 0 {
				t.Errorf("%s: called slack with %.2f of the load unlisted and its length as designed (H %.3f of expected): %s", c.name, v.extra, ratio, a.Reason)
			}
		}
		t.Logf("%-26s lambda squared about %.3g, reading of the tension in %d of %d: called %v, right %v", c.name, lambda, byReading, runs, called, right)
		for verdict, n := range called {
			if verdict == Slack || verdict == Overload {
				if wrong := n - right[verdict]; float64(wrong) > 0.05*float64(n)+3 {
					t.Errorf("%s: %s is wrong %d of %d times", c.name, verdict, wrong, n)
				}
			}
		}
		if c.decides && (called[Slack] == 0 || called[Overload] == 0) || !c.decides && called[Slack] > 0 {
			t.Errorf("%s: called %v", c.name, called)
		}
	}
}
