package survey

import (
	"math"
	"math/rand/v2"
	"strings"
	"testing"
)

// visits are five marks surveyed twice with 2 mm, the second time in a frame that is shifted and turned by 30 degrees.
func visits(rng *rand.Rand, moved map[string][3]float64) (before, after []Point) {
	truth := map[string][3]float64{"M1": {0, 0, 10}, "M2": {120, 10, 12}, "M3": {60, 90, 11}, "M4": {-30, 70, 14}, "M5": {40, -50, 9}}
	const sigma = 0.002
	first := Cov3{EE: sigma * sigma, NN: 9 * sigma * sigma, ZZ: sigma * sigma} // three times coarser along N, so that a covariance left unturned shows
	second := Cov3{EE: sigma * sigma, NN: sigma * sigma, ZZ: sigma * sigma}
	sin, cos := math.Sincos(math.Pi / 6)
	for _, id := range []string{"M1", "M2", "M3", "M4", "M5"} {
		p, d := truth[id], moved[id]
		noise := func() float64 { return sigma * rng.NormFloat64() }
		before = append(before, Point{ID: id, E: p[0] + noise(), N: p[1] + 3*noise(), Z: p[2] + noise(), Cov: first, HasCov: true})
		e, n, z := p[0]+d[0], p[1]+d[1], p[2]+d[2]
		after = append(after, Point{ID: id, E: 500 + e*cos + n*sin + noise(), N: 800 + n*cos - e*sin + noise(), Z: z - 3 + noise(), Cov: second, HasCov: true})
	}
	return before, after
}

// With nothing moved the test fails in 5 % of visits, whatever the frames.
func TestMarksAtRest(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	const runs = 1000
	alarms := 0
	for range runs {
		before, after := visits(rng, nil)
		c, err := CompareMarks(before, after, 0.05)
		if err != nil {
			t.Fatal(err)
		}
		if len(c.Moved) > 0 {
			alarms++
		} else if math.Abs(c.Turn-math.Pi/6) > 6e-4 || c.DegreesOfFreedom != 11 || len(c.Stable) != 5 {
			t.Fatalf("%+v", c)
		}
	}
	if alarms < runs*5/100-21 || alarms > runs*5/100+21 { // three standard deviations of the count
		t.Errorf("%d alarms in %d visits at rest, want about 5 %%", alarms, runs)
	}
}

// A mark that moved is named, with its shift in the frame of the first visit.
func TestMovedMarkIsNamed(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	const runs = 300
	right := 0
	for range runs {
		shift := [3]float64{0.020, 0.015, -0.014}
		before, after := visits(rng, map[string][3]float64{"M3": shift})
		c, err := CompareMarks(before, after, 0.05)
		if err != nil {
			t.Fatal(err)
		}
		if len(c.Moved) == 0 || c.Moved[0].ID != "M3" {
			continue
		}
		right++
		for k, d := range c.Moved[0].Shift {
			if math.Abs(d-shift[k]) > 6*c.Moved[0].U[k] {
				t.Errorf("shift %v, want %v, u %v", c.Moved[0].Shift, shift, c.Moved[0].U)
			}
		}
	}
	if right < runs*95/100 {
		t.Errorf("the moved mark was named %d times of %d", right, runs)
	}
}

func TestMarksThatCannotBeCompared(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	before, after := visits(rng, nil)
	if _, err := CompareMarks(before[:2], after, 0.05); err == nil || !strings.Contains(err.Error(), "2 control marks are in both") {
		t.Errorf("two marks: %v", err)
	}
	after[1].HasCov = false
	if _, err := CompareMarks(before, after, 0.05); err == nil || !strings.Contains(err.Error(), `"M2" has no accuracy`) {
		t.Errorf("no accuracy: %v", err)
	}
	before, after = visits(rng, map[string][3]float64{"M1": {0.1, 0, 0}})
	if c, err := CompareMarks(before[:3], after, 0.05); err != nil || !c.Undecided || len(c.Moved) != 0 {
		t.Errorf("three marks, one moved: %+v, %v", c, err)
	}
}
