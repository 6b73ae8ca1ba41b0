package fit

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// blown is a survey of an invented cable under its own weight and an even wind across the chord, found by integrating the three
// equilibrium equations along the cable by Runge-Kutta steps from A and closing on B by Newton's method: no plane is assumed. H, V, W
// are the components of the cable force; loads per metre of cable, w down and wind to the left.
type blown struct {
	span, rise, h, weight, wind float64
}

// path integrates from A with end force (h along, v up, y left), in steps over the horizontal distance.
func (b blown) path(v, y float64, stations []float64) (points [][3]float64) {
	const n = 120
	state := [5]float64{0, 0, 0, v, y} // across, height, -, force up, force left
	rate := func(s [5]float64) [5]float64 {
		slope, turn := s[3]/b.h, s[4]/b.h
		ds := math.Sqrt(1 + slope*slope + turn*turn)
		return [5]float64{turn, slope, 0, b.weight * ds, -b.wind * ds}
	}
	at := 0
	x := 0.0
	dx := b.span / n
	last := state
	for i := range n {
		add := func(s [5]float64, d [5]float64, f float64) [5]float64 {
			for k := range s {
				s[k] += f * d[k]
			}
			return s
		}
		last = state
		k1 := rate(state)
		k2 := rate(add(state, k1, dx/2))
		k3 := rate(add(state, k2, dx/2))
		k4 := rate(add(state, k3, dx))
		for k := range state {
			state[k] += dx / 6 * (k1[k] + 2*k2[k] + 2*k3[k] + k4[k])
		}
		x = float64(i+1) * dx
		for at < len(stations) && stations[at] <= x+1e-9 {
			f := (stations[at] - (x - dx)) / dx // cubic through both ends with their slopes
			r0, r1 := rate(last), rate(state)
			q := func(k int) float64 {
				return last[k]*(1+2*f)*(1-f)*(1-f) + state[k]*f*f*(3-2*f) + dx*(r0[k]*f*(1-f)*(1-f)-r1[k]*f*f*(1-f))
			}
			points = append(points, [3]float64{stations[at], q(0), q(1)})
			at++
		}
	}
	return points
}

// closed finds the end force at A with which the cable ends at B.
func (b blown) closed() (v, y float64) {
	end := func(v, y float64) (float64, float64) {
		p := b.path(v, y, []float64{b.span})[0]
		return p[2] - b.rise, p[1]
	}
	v, y = b.h*b.rise/b.span-b.weight*b.span/2, b.wind*b.span/2
	for range 20 {
		z, a := end(v, y)
		dz, da := end(v+1e-3, y)
		ez, ea := end(v, y+1e-3)
		j := [4]float64{(dz - z) / 1e-3, (ez - z) / 1e-3, (da - a) / 1e-3, (ea - a) / 1e-3}
		det := j[0]*j[3] - j[1]*j[2]
		v, y = v-(z*j[3]-a*j[1])/det, y-(a*j[0]-z*j[2])/det
	}
	return v, y
}

func (b blown) survey(rng *rand.Rand, n int, sigma, gust float64, marks bool) survey.SpanPoints {
	v, y := b.closed()
	var at []float64
	for i := range n {
		at = append(at, b.span*(0.02+0.96*float64(i)/float64(n-1)))
	}
	sin, cos := math.Sincos(0.6)
	var p survey.SpanPoints
	put := func(id string, s, a, z, sigma float64) survey.Point {
		s, a, z = s+sigma*rng.NormFloat64(), a+sigma*rng.NormFloat64(), z+sigma*rng.NormFloat64()
		v := sigma * sigma
		return survey.Point{ID: id, E: 5e5 + s*sin - a*cos, N: 5e6 + s*cos + a*sin, Z: 300 + z, HasCov: sigma > 0, Cov: survey.Cov3{EE: v, NN: v, ZZ: v}}
	}
	for i, q := range b.path(v, y, at) {
		p.Points = append(p.Points, put(string(rune('a'+i)), q[0], q[1]+gust*rng.NormFloat64(), q[2], sigma))
	}
	if marks {
		a, e := put("A", 0, 0, 0, sigma), put("B", b.span, 0, b.rise, sigma)
		p.A, p.B = &a, &e
	}
	return p
}

// The plane of a blown cable, level and inclined, with and without surveyed supports: angle, curvature and forces against the
// equilibrium in space, with their coverage.
func TestSwungCable(t *testing.T) {
	runs := 1000
	if testing.Short() {
		runs = 150
	}
	for _, c := range []struct {
		name  string
		b     blown
		marks bool
		sigma float64
	}{
		{"level, 14 degrees", blown{100, 0, 2000, 10, 2.5}, true, 0.003},
		{"inclined 30 degrees, 22 degrees", blown{80, 46, 1500, 8, -3.2}, true, 0.003},
		{"no supports", blown{120, 5, 3000, 10, 1.5}, false, 0.004},
	} {
		rng := rand.New(rand.NewPCG(8, 1))
		angle := math.Atan(c.b.wind / c.b.weight)
		q := math.Hypot(c.b.weight, c.b.wind)
		v, y := c.b.closed()
		var inside, flat, taken, bias float64
		for range runs {
			r, err := Cable(c.b.survey(rng, 25, c.sigma, 0, c.marks), Options{NoAlternatives: true})
			if err != nil {
				t.Fatal(err)
			}
			if !r.Swing.Taken {
				continue
			}
			taken++
			if math.Abs(r.Swing.Angle-angle) <= 1.96*r.Swing.U {
				inside++
			}
			// The tension in the plane times its axis is the force along the span.
			h := q / r.Curve.Curvature
			along := math.Sqrt(1 - r.Frame.along*r.Frame.along - r.Frame.across*r.Frame.across)
			bias += (h*along/c.b.h - 1) / float64(runs)
			if math.Abs(h*along-c.b.h) <= 1.96*c.b.h*math.Sqrt(r.Cov[2][2])/r.Curve.Curvature {
				flat++
			}
		}
		t.Logf("%-32s swing seen in %.1f %%, angle covered %.1f %%, H covered %.1f %%, bias %.2g", c.name, 100*taken/float64(runs), 100*inside/taken, 100*flat/taken, bias)
		if taken < float64(runs) {
			t.Errorf("%s: swing seen in %g of %d", c.name, taken, runs)
		}
		spare := 3.5 * math.Sqrt(0.05*0.95/taken)
		if math.Abs(inside/taken-0.95) > spare || math.Abs(flat/taken-0.95) > spare {
			t.Errorf("%s: angle covered %.3f, H covered %.3f", c.name, inside/taken, flat/taken)
		}
		// Nearly exact points: angle, curvature, and the end force in all three directions.
		r, err := Cable(c.b.survey(rng, 25, 1e-6, 0, c.marks), Options{NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		h := q / r.Curve.Curvature
		slope := r.Curve.Slope(r.Curve.S1)
		up, left := r.Frame.Components(h, h*slope)
		if !c.marks { // the outermost point is not at A: compare curvature and angle alone
			up, left = v, y
		}
		for what, d := range map[string]float64{"angle": r.Swing.Angle - angle, "force up": (up - v) / c.b.h, "force left": (left - y) / c.b.h} {
			if math.Abs(d) > 2e-6 {
				t.Errorf("%s: %s off by %.2g", c.name, what, d)
			}
		}
	}
}

// A cable that hangs straight down shows no swing oftener than its chance says, and gusts are told from a tilt.
func TestGustsAreNoSwing(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 2))
	b := blown{100, 0, 2000, 10, 0}
	seen, gusty := 0, 0
	const runs = 1000
	for range runs {
		r, err := Cable(b.survey(rng, 21, 0.004, 0, true), Options{NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		if r.Swing.Taken {
			seen++
		}
		if r.Swing.Gusty {
			gusty++
		}
	}
	if seen > 5 || gusty > 6 { // expected 1 each
		t.Errorf("swing in %d, gusts in %d of %d still surveys", seen, gusty, runs)
	}
	seen, gusty = 0, 0
	for range 200 {
		r, err := Cable(b.survey(rng, 21, 0.004, 0.05, true), Options{NoAlternatives: true})
		if err != nil {
			t.Fatal(err)
		}
		if r.Swing.Taken {
			seen++
		}
		if r.Swing.Gusty {
			gusty++
		}
	}
	if seen > 3 || gusty < 199 {
		t.Errorf("gusts seen in %d of 200 gusty surveys, taken for swing in %d", gusty, seen)
	}
}
