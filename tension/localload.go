package tension

import (
	"fmt"
	"math"

	"tautbook/fit"
	"tautbook/fit/hanging"
)

// StationLoad is a local force at a station of the span, as a survey sees it.
type StationLoad struct {
	Station float64 // horizontal distance from support A, m
	P       float64 // N, downwards
}

// AtTensionLoaded is the state with horizontal tension h (N, > 0) at dt degC above the reference temperature under local loads at
// given stations, in order of station: it gives the unstressed length and where on it the loads hang. The error wraps ErrNoLoad or
// ErrNoState.
func (c Cable) AtTensionLoaded(h float64, ch Chord, dt float64, loads []StationLoad) (LoadedState, error) {
	if err := c.check(ch, dt); err != nil {
		return LoadedState{}, err
	}
	if !(h > 0) || math.IsInf(h, 0) {
		return LoadedState{}, fmt.Errorf("%w: horizontal tension %g N", errBadInputs, h)
	}
	kinks := make([]StationLoad, len(loads))
	for i, l := range loads {
		kinks[i] = StationLoad{l.Station, l.P / h}
	}
	from, to, err := kinked(c.equation(h, dt), ch, kinks)
	if err != nil {
		return LoadedState{}, err
	}
	st := LoadedState{Cable: c, Chord: ch, DT: dt, H: h, from: from, to: to}
	e := c.equation(h, dt)
	for i := range from {
		st.Unstressed += e.Between(from[i], to[i]).S
		if i < len(loads) {
			st.Loads = append(st.Loads, PointLoad{At: st.Unstressed, P: loads[i].P})
		}
	}
	return st, nil
}

// kinked finds the tangent measures at both ends of every part of a curve over a chord whose slope jumps at given stations; P of a
// kink is the jump. Secant steps on the first slope, by which the rise grows almost evenly.
func kinked(e hanging.Equation, ch Chord, kinks []StationLoad) (from, to []float64, err error) {
	for i, k := range kinks {
		if !(k.Station > 0 && k.Station < ch.Length) || (i > 0 && k.Station < kinks[i-1].Station) || math.IsNaN(k.P) || math.IsInf(k.P, 0) {
			return nil, nil, fmt.Errorf("%w: local load at station %g m of %g m", errBadInputs, k.Station, ch.Length)
		}
	}
	from, to = make([]float64, len(kinks)+1), make([]float64, len(kinks)+1)
	rise := func(t float64) float64 {
		at, z := 0.0, 0.0
		psi := math.Asinh(t)
		for i := range from {
			end := ch.Length
			if i < len(kinks) {
				end = kinks[i].Station
			}
			from[i] = psi
			to[i] = e.Reach(psi, psi+(e.KW+e.KQ)*(end-at), end-at)
			z += e.Between(from[i], to[i]).Y
			at = end
			if i < len(kinks) {
				psi = math.Asinh(math.Sinh(to[i]) + kinks[i].P)
			}
		}
		return z
	}
	t := ch.Rise/ch.Length - (e.KW+e.KQ)*ch.Length/2
	for _, k := range kinks {
		t -= k.P * (ch.Length - k.Station) / ch.Length
	}
	size := math.Hypot(ch.Length, ch.Rise)
	miss := ch.Rise - rise(t)
	slope := ch.Length
	for range 100 {
		if math.Abs(miss) <= 4e-16*size {
			return from, to, nil
		}
		step := miss / slope
		if !(math.Abs(step) < math.Inf(1)) {
			break
		}
		t += step
		next := ch.Rise - rise(t)
		if math.Abs(next) <= 1e-13*size && math.Abs(next) >= math.Abs(miss)/2 {
			return from, to, nil // rounding
		}
		if d := (miss - next) / step; d > 0 {
			slope = d
		}
		miss = next
	}
	return nil, nil, fmt.Errorf("%w: with %d local loads over chord %.6g m, rise %.6g m", ErrNoState, len(kinks), ch.Length, ch.Rise)
}

// kinkedLength is the unstressed length, m, of a curve with the given kinks over a chord that starts at station a.
func kinkedLength(e hanging.Equation, ch Chord, cusps []fit.Cusp, a float64) (s float64, err error) {
	kinks := make([]StationLoad, len(cusps))
	for i, c := range cusps {
		kinks[i] = StationLoad{c.Station - a, c.Kink}
	}
	from, to, err := kinked(e, ch, kinks)
	if err != nil {
		return 0, err
	}
	for i := range from {
		s += e.Between(from[i], to[i]).S
	}
	return s, nil
}

// SagMid is the vertical distance from the chord down to the cable at mid-span, m.
func (s LoadedState) SagMid() float64 { return s.Below(s.Chord.Length / 2) }

// GreatestTension is the greatest cable tension in the span, N: at an end, or beside a load that lifts.
func (s LoadedState) GreatestTension() float64 {
	most := 0.0
	for i := range s.from {
		most = math.Max(most, s.H*math.Max(math.Cosh(s.from[i]), math.Cosh(s.to[i])))
	}
	return most
}

// Height is the elevation of the cable above support A at a station (m from A, within the span), m.
func (s LoadedState) Height(station float64) float64 {
	return s.Chord.Rise*station/s.Chord.Length - s.Below(station)
}
