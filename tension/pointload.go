package tension

import (
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"tautbook/fit/hanging"
)

// PointLoad is a local force hanging on the cable.
type PointLoad struct {
	At float64 // unstressed length from support A at the reference temperature, m
	P  float64 // N, downwards
}

// LoadedState is a cable in equilibrium under even load and point loads. Segment k runs from load k-1 (support A for k = 0)
// to load k (support B for the last).
type LoadedState struct {
	Cable      Cable
	Chord      Chord
	DT         float64 // degC above the reference
	H          float64 // N
	Unstressed float64 // m
	Loads      []PointLoad
	from, to   []float64 // tangent angle measures at the ends of each segment
}

// Segment returns where segment k begins and ends, as (station, height) pairs above support A, m, and its end slopes.
func (s LoadedState) Segment(k int) (s0, z0, s1, z1, slope0, slope1 float64) {
	e := s.Cable.equation(s.H, s.DT)
	for i := range k + 1 {
		s0, z0 = s1, z1
		l := e.Between(s.from[i], s.to[i])
		s1, z1 = s0+l.X, z0+l.Y
	}
	return s0, z0, s1, z1, math.Sinh(s.from[k]), math.Sinh(s.to[k])
}

// VerticalA is the upward reaction of support A, N.
func (s LoadedState) VerticalA() float64 { return -s.H * math.Sinh(s.from[0]) }

// VerticalB is the upward reaction of support B, N.
func (s LoadedState) VerticalB() float64 { return s.H * math.Sinh(s.to[len(s.to)-1]) }

// Below is the vertical distance from the chord down to the cable at a station (m from A), m. The station must lie within
// the span.
func (s LoadedState) Below(station float64) float64 {
	e := s.Cable.equation(s.H, s.DT)
	var x, z float64
	for k := range s.from {
		l := e.Between(s.from[k], s.to[k])
		if x+l.X < station && k < len(s.from)-1 {
			x, z = x+l.X, z+l.Y
			continue
		}
		psi := e.Reach(s.from[k], (s.from[k]+s.to[k])/2, station-x)
		z += e.Between(s.from[k], psi).Y
		break
	}
	return s.Chord.Rise*station/s.Chord.Length - z
}

// AtLengthLoaded is the state of a cable with unstressed length s0 (m) at dt degC above the reference under point loads.
// Newton's method on the tension and all segment tangents at once (Irvine 1981, ch. 1, segment by segment), the loads
// brought on at once or, where that fails, in steps. The error wraps ErrNoLoad, ErrTooShort or ErrNoState.
func (c Cable) AtLengthLoaded(s0 float64, ch Chord, dt float64, loads []PointLoad) (LoadedState, error) {
	bare, err := c.AtLength(s0, ch, dt)
	if err != nil {
		return LoadedState{}, err
	}
	loads = slices.SortedFunc(slices.Values(loads), func(a, b PointLoad) int { return int(math.Copysign(1, a.At-b.At)) })
	for _, p := range loads {
		if !(p.At > 0 && p.At < s0) || math.IsNaN(p.P) || math.IsInf(p.P, 0) {
			return LoadedState{}, fmt.Errorf("%w: point load %g N at %g m of %g m", errBadInputs, p.P, p.At, s0)
		}
	}
	st := LoadedState{Cable: c, Chord: ch, DT: dt, H: bare.H, Unstressed: s0, Loads: loads}
	st.split(bare)
	if st.settle(1) == nil {
		return st, nil
	}
	st.H, st.from, st.to = bare.H, nil, nil
	st.split(bare)
	const steps = 8
	for i := 1; i <= steps; i++ {
		if err := st.settle(float64(i) / steps); err != nil {
			return LoadedState{}, err
		}
	}
	return st, nil
}

// split lays the segment ends on an unloaded state.
func (s *LoadedState) split(bare State) {
	e := s.Cable.equation(s.H, s.DT)
	a := bare.psiA
	done := 0.0
	for _, p := range append(slices.Clone(s.Loads), PointLoad{At: s.Unstressed}) {
		b := a + (bare.psiB-bare.psiA)*(p.At-done)/s.Unstressed
		for range 60 {
			step := (p.At - done - e.Between(a, b).S) / e.Rate(b).S
			b += step
			if math.Abs(step) <= 1e-13*(1+math.Abs(b)) {
				break
			}
		}
		s.from, s.to = append(s.from, a), append(s.to, b)
		a, done = b, p.At
	}
}

// settle finds equilibrium under a part of the point loads, starting from the present state. Unknowns: H, the first
// tangent, the last tangent of every segment.
func (s *LoadedState) settle(part float64) error {
	n := len(s.to)
	jac, miss := mat.NewDense(n+2, n+2, nil), mat.NewVecDense(n+2, nil)
	var step mat.VecDense
	var lu mat.LU
	s.connect(part)
	last := math.Inf(1)
	for range 60 {
		size := s.linearise(part, jac, miss)
		lu.Factorize(jac)
		if err := lu.SolveVecTo(&step, false, miss); err != nil {
			if _, shaky := err.(mat.Condition); !shaky {
				return fmt.Errorf("%w: %v", ErrNoState, err)
			}
		}
		cut := 1.0
		if d := step.AtVec(0); d < -0.5*s.H {
			cut = -0.5 * s.H / d
		}
		for i := 1; i < n+2; i++ {
			if d := math.Abs(step.AtVec(i)); d*cut > 0.5 {
				cut = 0.5 / d
			}
		}
		s.H += cut * step.AtVec(0)
		s.from[0] += cut * step.AtVec(1)
		for k := range s.to {
			s.to[k] += cut * step.AtVec(k+2)
		}
		s.connect(part)
		if !(s.H > 0) || math.IsNaN(step.AtVec(1)) {
			break
		}
		if size <= 1e-13*s.Unstressed && math.Abs(step.AtVec(0)) <= 1e-12*s.H {
			return nil
		}
		if size <= 1e-11*s.Unstressed && size >= last/2 && cut == 1 {
			return nil // the misses are rounding
		}
		last = size
	}
	return fmt.Errorf("%w: with %d point loads", ErrNoState, len(s.Loads))
}

// connect sets the first tangent of every segment after the first: the slope jumps by P/H at a load.
func (s *LoadedState) connect(part float64) {
	for k, p := range s.Loads {
		s.from[k+1] = math.Asinh(math.Sinh(s.to[k]) + part*p.P/s.H)
	}
}

// linearise fills the Jacobian and the misses of all segment lengths, the run and the rise; it returns the size of the misses.
func (s *LoadedState) linearise(part float64, jac *mat.Dense, miss *mat.VecDense) float64 {
	n := len(s.to)
	e := s.Cable.equation(s.H, s.DT)
	jac.Zero()
	runX, runY := s.Chord.Length, s.Chord.Rise
	done, total := 0.0, 0.0
	for k := range n {
		a, b := s.from[k], s.to[k]
		l, byLogH := e.Between(a, b), e.ByLogTension(a, b)
		ra, rb := e.Rate(a), e.Rate(b)
		end := s.Unstressed
		if k < len(s.Loads) {
			end = s.Loads[k].At
		}
		miss.SetVec(k, end-done-l.S)
		total += math.Abs(end - done - l.S)
		done = end
		runX, runY = runX-l.X, runY-l.Y
		add := func(col int, d hanging.Lengths) {
			jac.Set(k, col, jac.At(k, col)+d.S)
			jac.Set(n, col, jac.At(n, col)+d.X)
			jac.Set(n+1, col, jac.At(n+1, col)+d.Y)
		}
		add(0, scaled(byLogH, 1/s.H))
		add(k+2, rb)
		if k == 0 {
			add(1, scaled(ra, -1))
			continue
		}
		byPrev := math.Cosh(s.to[k-1]) / math.Cosh(a)
		jump := -part * s.Loads[k-1].P / (s.H * s.H) / math.Cosh(a)
		add(k+1, scaled(ra, -byPrev))
		add(0, scaled(ra, -jump))
	}
	miss.SetVec(n, runX)
	miss.SetVec(n+1, runY)
	return total + math.Abs(runX) + math.Abs(runY)
}

func scaled(l hanging.Lengths, f float64) hanging.Lengths {
	return hanging.Lengths{S: f * l.S, X: f * l.X, Y: f * l.Y}
}
