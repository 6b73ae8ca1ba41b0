package tension

import (
	"fmt"
	"math"

	"tautbook/fit/hanging"
)

func (c Cable) check(ch Chord, dt float64) error {
	switch {
	case !(ch.Length > 0) || math.IsInf(ch.Length, 0) || math.IsNaN(ch.Rise) || math.IsInf(ch.Rise, 0):
		return fmt.Errorf("%w: chord %g m with rise %g m", errBadInputs, ch.Length, ch.Rise)
	case !(c.SelfWeight >= 0) || !(c.DeckLoad >= 0) || math.IsInf(c.SelfWeight+c.DeckLoad, 0):
		return fmt.Errorf("%w: self weight %g N/m, deck load %g N/m", errBadInputs, c.SelfWeight, c.DeckLoad)
	case c.SelfWeight+c.DeckLoad == 0:
		return ErrNoLoad
	case !(c.AxialStiffness > 0):
		return fmt.Errorf("%w: axial stiffness %g N", errBadInputs, c.AxialStiffness)
	case !(1+c.Expansion*dt > 0) || math.IsInf(dt, 0):
		return fmt.Errorf("%w: expansion %g 1/degC over %g degC", errBadInputs, c.Expansion, dt)
	}
	return nil
}

func (c Cable) equation(h, dt float64) hanging.Equation {
	return hanging.Equation{KW: c.SelfWeight / h, KQ: c.DeckLoad / h, Eta: h / c.AxialStiffness, G: 1 + c.Expansion*dt}
}

// AtTension is the state with horizontal tension h (N, > 0) at dt degC above the reference temperature: it gives the
// unstressed length. Exact for a linear elastic cable (Irvine 1981, ch. 1). The error wraps ErrNoLoad or ErrNoState.
func (c Cable) AtTension(h float64, ch Chord, dt float64) (State, error) {
	if err := c.check(ch, dt); err != nil {
		return State{}, err
	}
	if !(h > 0) || math.IsInf(h, 0) {
		return State{}, fmt.Errorf("%w: horizontal tension %g N", errBadInputs, h)
	}
	e := c.equation(h, dt)
	a, b := e.Start(ch.Length, ch.Rise)
	a, b, err := e.Span(ch.Length, ch.Rise, a, b)
	if err != nil {
		return State{}, fmt.Errorf("%w: %w", ErrNoState, err)
	}
	return State{Cable: c, Chord: ch, DT: dt, H: h, Unstressed: e.Between(a, b).S, psiA: a, psiB: b}, nil
}

// AtLength is the state of a cable with unstressed length s0 (m, at the reference temperature) at dt degC above that
// temperature: it gives the tension. Newton's method on H, which always has one root because the unstressed length that
// spans a chord falls with H; bracketed, so that it cannot leave. The error wraps ErrNoLoad, ErrTooShort or ErrNoState.
func (c Cable) AtLength(s0 float64, ch Chord, dt float64) (State, error) {
	if err := c.check(ch, dt); err != nil {
		return State{}, err
	}
	if !(s0 > 0) || math.IsInf(s0, 0) {
		return State{}, fmt.Errorf("%w: unstressed length %g m", errBadInputs, s0)
	}
	return c.atLengthFrom(0, s0, ch, dt)
}

// atLengthFrom is AtLength from a first guess of the tension, which a near state gives; not a positive number means none.
func (c Cable) atLengthFrom(h, s0 float64, ch Chord, dt float64) (State, error) {
	if !(h > 0) || math.IsInf(h, 0) {
		h = c.startTension(s0, ch, dt)
	}
	if math.IsNaN(h) {
		return State{}, fmt.Errorf("%w: %.6g m against %.6g m", ErrTooShort, s0*(1+c.Expansion*dt), math.Hypot(ch.Length, ch.Rise))
	}
	return c.lengthRoot(s0, ch, dt, h)
}

// lengthRoot does the bracketed Newton iteration of AtLength from tension h.
func (c Cable) lengthRoot(s0 float64, ch Chord, dt, h float64) (State, error) {
	lo, hi := 0.0, math.Inf(1)
	a, b := c.equation(h, dt).Start(ch.Length, ch.Rise)
	var err error
	for range 200 {
		e := c.equation(h, dt)
		if a, b, err = e.Span(ch.Length, ch.Rise, a, b); err != nil {
			a, b = e.Start(ch.Length, ch.Rise)
			if a, b, err = e.Span(ch.Length, ch.Rise, a, b); err != nil {
				return State{}, fmt.Errorf("%w: %w", ErrNoState, err)
			}
		}
		s := e.Between(a, b).S
		miss := s - s0
		if miss > 0 {
			lo = h
		} else {
			hi = h
		}
		next := h - miss/c.lengthByTension(e, a, b, h)
		if !(next > lo && next < hi) {
			next = middle(lo, hi)
		}
		step := math.Abs(next - h)
		if step <= 2e-15*h || (step <= 1e-9*h && math.Abs(miss) <= 4e-16*s0) || hi-lo <= 4e-16*h {
			return State{Cable: c, Chord: ch, DT: dt, H: h, Unstressed: s0, psiA: a, psiB: b}, nil
		}
		if next > 4*h || next < h/4 { // far: the old tangents are no start
			a, b = c.equation(next, dt).Start(ch.Length, ch.Rise)
		}
		h = next
	}
	return State{}, fmt.Errorf("%w: unstressed length %.9g m over chord %.6g m, rise %.6g m", ErrNoState, s0, ch.Length, ch.Rise)
}

// middle halves a bracket that may be open above, on a scale that suits a tension of unknown size.
func middle(lo, hi float64) float64 {
	switch {
	case math.IsInf(hi, 1):
		return 4 * lo
	case lo == 0:
		return hi / 4
	default:
		return math.Sqrt(lo * hi)
	}
}

// lengthByTension is dS0/dH at a fixed chord, m/N: the direct part and that through the end tangents, which move so that
// the chord stays.
func (c Cable) lengthByTension(e hanging.Equation, a, b, h float64) float64 {
	d := e.ByLogTension(a, b)
	ra, rb := e.Rate(a), e.Rate(b)
	det := 2 * math.Sinh((b-a)/2) * math.Cosh((a+b)/2)
	da := (-d.Y + math.Sinh(b)*d.X) / (ra.X * det)
	db := (-d.Y + math.Sinh(a)*d.X) / (rb.X * det)
	return (d.S - ra.S*da + rb.S*db) / h
}

// startTension solves the parabolic approximation g s0 (1 + T/EA) = chord + p^2 l^3 cos^3 / (24 H^2) for H, NaN when there is
// none (Irvine 1981, sec. 2.2, for an inclined chord).
func (c Cable) startTension(s0 float64, ch Chord, dt float64) float64 {
	size := math.Hypot(ch.Length, ch.Rise)
	cos := ch.Length / size
	p := c.SelfWeight/cos + c.DeckLoad
	bow := p * p * ch.Length * ch.Length * ch.Length * cos * cos * cos / 24
	free := s0 * (1 + c.Expansion*dt)
	soft := free / (c.AxialStiffness * cos) // m/N
	if soft == 0 && free <= size {
		return math.NaN()
	}
	// f(H) = free + soft H - size - bow/H^2 rises from -inf; Newton from the left of its one root is monotone after one step.
	h := math.Inf(1)
	if free > size {
		h = math.Sqrt(bow / (free - size))
	}
	if soft > 0 {
		h = math.Min(h, math.Cbrt(bow/soft)+math.Max(0, (size-free)/soft))
	}
	for range 100 {
		next := h - (free+soft*h-size-bow/(h*h))/(soft+2*bow/(h*h*h))
		if next <= 0 {
			next = h / 4
		}
		if math.Abs(next-h) <= 1e-6*h {
			return next
		}
		h = next
	}
	return h
}

// AtSag is the state whose sag at mid-span (m, > 0) is given, at the reference temperature. Secant steps on 1/H, to which
// the sag is nearly proportional. The error wraps ErrNoLoad or ErrNoState.
func (c Cable) AtSag(sag float64, ch Chord) (State, error) {
	if err := c.check(ch, 0); err != nil {
		return State{}, err
	}
	if !(sag > 0) || math.IsInf(sag, 0) {
		return State{}, fmt.Errorf("%w: sag %g m", errBadInputs, sag)
	}
	p := c.SelfWeight*math.Hypot(ch.Length, ch.Rise)/ch.Length + c.DeckLoad
	u := 8 * sag / (p * ch.Length * ch.Length)
	var u0, f0 float64
	for i := range 60 {
		st, err := c.AtTension(1/u, ch, 0)
		if err != nil {
			return State{}, err
		}
		f := st.SagMid() - sag
		slope := (f + sag) / u
		if i > 0 && f != f0 {
			slope = (f - f0) / (u - u0)
		}
		next := math.Max(u-f/slope, u/4)
		if math.Abs(f) <= 1e-15*sag || math.Abs(next-u) <= 2e-15*u {
			return st, nil
		}
		u0, f0, u = u, f, math.Min(next, 4*u)
	}
	return State{}, fmt.Errorf("%w: sag %.6g m over chord %.6g m, rise %.6g m", ErrNoState, sag, ch.Length, ch.Rise)
}

// SlopeA and SlopeB are dz/ds at the supports, dimensionless.
func (s State) SlopeA() float64 { return math.Sinh(s.psiA) }

// SlopeB is dz/ds at support B, dimensionless.
func (s State) SlopeB() float64 { return math.Sinh(s.psiB) }

// VerticalA is the upward reaction of support A, N.
func (s State) VerticalA() float64 { return -s.H * s.SlopeA() }

// VerticalB is the upward reaction of support B, N.
func (s State) VerticalB() float64 { return s.H * s.SlopeB() }

// TensionA is the cable tension at support A, N.
func (s State) TensionA() float64 { return s.H * math.Cosh(s.psiA) }

// TensionB is the cable tension at support B, N.
func (s State) TensionB() float64 { return s.H * math.Cosh(s.psiB) }

// GreatestTension is the larger end tension, N; under even load the tension is greatest at an end.
func (s State) GreatestTension() float64 { return math.Max(s.TensionA(), s.TensionB()) }

// SagMid is the vertical distance from the chord down to the cable at mid-span, m.
func (s State) SagMid() float64 {
	e := s.Cable.equation(s.H, s.DT)
	psi := e.Reach(s.psiA, (s.psiA+s.psiB)/2, s.Chord.Length/2)
	return -e.Below(s.psiA, psi, s.Chord.Rise/s.Chord.Length)
}

// Height is the elevation of the cable above support A at a station (m from A, within the span), m.
func (s State) Height(station float64) float64 {
	e := s.Cable.equation(s.H, s.DT)
	return e.Between(s.psiA, e.Reach(s.psiA, s.psiA+(s.psiB-s.psiA)*station/s.Chord.Length, station)).Y
}

// Lambda2 is Irvine's parameter of the state, dimensionless: (w l cos / T)^2 l' / (T Le / EA) on the inclined chord, with
// T the chord tension. Above about 4 pi^2 the shape hardly answers to load, below about 4 the tension hardly does
// (Irvine 1981, sec. 2.2 and 2.5). Infinite for an inextensible cable.
func (s State) Lambda2() float64 {
	size := math.Hypot(s.Chord.Length, s.Chord.Rise)
	cos := s.Chord.Length / size
	across := s.Cable.SelfWeight*cos + s.Cable.DeckLoad*cos*cos // N per metre of chord, normal to the chord
	pull := s.H / cos
	bow := across * size / pull
	stretch := size * (1 + bow*bow/8)
	return bow * bow * size * s.Cable.AxialStiffness / (pull * stretch)
}
