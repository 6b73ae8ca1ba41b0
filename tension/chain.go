package tension

import (
	"fmt"
	"math"

	"tautbook/fit"
	"tautbook/fit/hanging"
	"tautbook/survey"
)

// Outputs of the chain, as places in one vector; NaN where the figure cannot be worked out.
const (
	outH = iota
	outVerticalA
	outVerticalB
	outTensionA
	outTensionB
	outSlopeA // degrees
	outSlopeB
	outLowStation
	outLowElevation
	outSagMid
	outGreatestSag
	outArc
	outChord
	outRise
	outConstant
	outHanging // load as it hangs, N/m
	outDesignHanging
	outS0Design
	outHDesign
	outHExpected
	outHFiled // expected on the day under the filed load alone
	outSagExpected
	outSagToday     // over the chord that the states use
	outInverse      // expected / today: the expected tension times curvature / load, linear in what the survey measures
	outInverseNaive // design tension / today
	outLoadRatio
	outS0Today
	outS0Difference
	outHReference // today's tension at the design temperature
	outHRival
	outRivalRatio
	outRivalFactor
	outRivalExtra
	outImpliedExpected
	outImpliedLength
	outGreatestT
	outUse
	outRivalUse
	outHRead      // from the direct reading
	outReadRatio  // to the expected tension under the filed load
	outReadFactor // load that the reading implies / load on record
	outReadUse
	outWind  // even load across the span that a swung plane means, N/m as it hangs, to the left of A -> B
	outLeftA // reactions across the span, to the left of A -> B, N
	outLeftB
	outLocal // sizes of the local loads that the shape gives, N
	outCount = outLocal + mostFitted
)

type outputs [outCount]float64

// lack says why a part of the chain could not be worked out.
type lack struct {
	what string // the part
	why  string
}

// evaluate runs the whole chain, from shape and inputs to every figure, for one value of the input vector. Parts that
// lack an input or have no state stay NaN and are named in the second result.
func (in *inputs) evaluate(x []float64) (y outputs, lacks []lack) {
	for i := range y {
		y[i] = math.NaN()
	}
	c := in.curve
	c.Z1, c.Z2, c.Curvature = x[inZA], x[inZB], x[inCurvature]
	c.S1, c.S2 = in.x[inStationA], in.x[inStationB] // the curve stays where it was measured when a support station moves
	load := in.load(x)
	c.Cusps = in.cusps(x, load)
	in.geometry(&y, c, x)
	if !(load.self+load.deck > 0) {
		return y, []lack{{"horizontal tension", "no self_weight or deck_load on file"}}
	}
	in.statics(&y, c, x, load)
	st, lacks := in.design(&y, x)
	if st == nil {
		return y, lacks
	}
	ch, why := in.chordToday(x, c)
	if why != "" {
		return y, append(lacks, lack{"expected tension", why})
	}
	day := st.Cable
	day.SelfWeight, day.DeckLoad = load.self, load.deck
	dt := x[inTemperature] - x[inDesignTemp]
	if err := in.today(&y, x, c, day, ch, dt); err != nil {
		lacks = append(lacks, lack{"expected tension", err.Error()})
	}
	in.rival(&y, x, c, day, ch, dt)
	y[outReadRatio] = y[outHRead] / y[outHFiled]
	in.strength(&y, x)
	return y, lacks
}

// carried is the even load on the day, N/m.
type carried struct {
	self, deck float64 // along the unstressed cable, along the horizontal
}

func (in *inputs) load(x []float64) carried { return in.resultant(x, in.hangingDown(x)) }

// resultant is the load in the plane of a swung cable: the weight and the wind that swings it.
func (in *inputs) resultant(x []float64, l carried) carried {
	if !in.have[inTilt] {
		return l
	}
	cos := math.Cos(x[inTilt])
	return carried{l.self / cos, l.deck / cos}
}

// hangingDown is the weight of everything on record, without wind.
func (in *inputs) hangingDown(x []float64) carried {
	l := carried{x[inSelfWeight], x[inDeckLoad]}
	for i, e := range in.listed {
		if e.Spread == survey.AlongCable {
			l.self += x[inFixed+i]
		} else {
			l.deck += x[inFixed+i]
		}
	}
	return l
}

// hanging is the load per metre as it hangs under horizontal tension h: the self weight is filed per unstressed metre and
// thins out with stretch and warmth (Irvine 1981, ch. 1); per is arc / horizontal length.
func (in *inputs) hanging(x []float64, l carried, h, per float64) float64 {
	g := 1.0
	if in.have[inAxial] {
		g = 1 + h*per/x[inAxial]
	}
	if in.have[inExpansion] && in.have[inTemperature] && in.have[inDesignTemp] {
		g *= 1 + x[inExpansion]*(x[inTemperature]-x[inDesignTemp])
	}
	return l.self/g + l.deck
}

// geometry fills what shape alone gives.
func (in *inputs) geometry(y *outputs, c fit.Curve, x []float64) {
	a, b := x[inStationA], x[inStationB]
	y[outChord] = b - a
	y[outRise] = c.Z(b) - c.Z(a)
	y[outConstant] = 1 / x[inCurvature]
	y[outSagMid] = c.Sag((a+b)/2, a, b)
	_, y[outGreatestSag] = c.GreatestSag(a, b)
	y[outArc] = c.ArcLength(a, b)
	y[outSlopeA] = math.Atan(c.Slope(a)) * 180 / math.Pi
	y[outSlopeB] = math.Atan(c.Slope(b)) * 180 / math.Pi
	if s, z, ok := c.LowPoint(); ok {
		y[outLowStation], y[outLowElevation] = s-in.x[inStationA], in.plane.Elevation(s, z)
	}
}

// statics fills the forces: H = load as it hangs / curvature, reactions along the end tangents.
func (in *inputs) statics(y *outputs, c fit.Curve, x []float64, l carried) {
	per := y[outArc] / y[outChord]
	h := (l.self + l.deck) / x[inCurvature]
	for range 5 { // the stretch is of order 1e-3: each round gains three digits
		h = in.hanging(x, l, h, per) / x[inCurvature]
	}
	ta, tb := c.Slope(x[inStationA]), c.Slope(x[inStationB])
	y[outH] = h
	fitted := 0
	for _, e := range in.local {
		if e.fitted {
			y[outLocal+fitted] = x[e.at] * h
			fitted++
		}
	}
	y[outHanging] = h * x[inCurvature]
	y[outVerticalA], y[outVerticalB] = -h*ta, h*tb
	if in.have[inTilt] {
		y[outWind] = y[outHanging] * math.Sin(x[inTilt])
		plane := in.plane
		plane.Tilt = x[inTilt]
		y[outVerticalA], y[outLeftA] = plane.Components(-h, -h*ta)
		y[outVerticalB], y[outLeftB] = plane.Components(h, h*tb)
	}
	y[outTensionA], y[outTensionB] = h*math.Hypot(1, ta), h*math.Hypot(1, tb)
	y[outGreatestT] = math.Max(y[outTensionA], y[outTensionB])
	if in.have[inReading] {
		per := map[survey.ReadOf]float64{survey.HorizontalTension: 1, survey.TensionAtA: math.Hypot(1, ta), survey.TensionAtB: math.Hypot(1, tb)}[in.readOf]
		y[outHRead] = x[inReading] / per
		y[outReadFactor] = y[outHRead] / h
	}
	in.strength(y, x)
}

// strength fills the use of the breaking load; the caller applies the safety factor, which is exact.
func (in *inputs) strength(y *outputs, x []float64) {
	if !in.have[inBreaking] {
		return
	}
	y[outUse] = y[outGreatestT] / x[inBreaking]
	for use, tension := range map[int]int{outRivalUse: outHRival, outReadUse: outHRead} {
		if h := y[tension]; !math.IsNaN(h) {
			y[use] = y[outGreatestT] / y[outH] * h / x[inBreaking]
		}
	}
}

// design works out the designer's cable; nil with the missing inputs by name when it cannot.
func (in *inputs) design(y *outputs, x []float64) (*State, []lack) {
	var missing []lack
	need := func(ok bool, column string) {
		if !ok {
			missing = append(missing, lack{"expected tension", "missing " + column})
		}
	}
	need(in.have[inTension] || in.have[inSag], "design_tension (or design_sag)")
	need(in.have[inSpan] || in.frame.surveyed, "design_span (the supports were not surveyed either)")
	need(in.have[inRise] || in.frame.surveyed, "design_rise (the supports were not surveyed either)")
	need(in.have[inDesignTemp], "design_temperature")
	need(in.have[inAxial], "axial_stiffness")
	need(in.have[inExpansion], "expansion")
	if missing != nil {
		return nil, missing
	}
	ch := Chord{Length: x[inSpan], Rise: x[inRise]}
	if !in.have[inSpan] {
		ch.Length = y[outChord]
	}
	if !in.have[inRise] {
		ch.Rise = y[outRise]
	}
	c := Cable{SelfWeight: x[inSelfWeight], DeckLoad: x[inDeckLoad], AxialStiffness: x[inAxial], Expansion: x[inExpansion]}
	if in.filed != nil && in.sameDesign(x) {
		y[outS0Design], y[outHDesign] = in.filed.Unstressed, in.filed.H
		return in.filed, nil
	}
	var st State
	var err error
	if in.have[inTension] {
		st, err = c.AtTension(x[inTension], ch, 0)
	} else {
		st, err = c.AtSag(x[inSag], ch)
	}
	if err != nil {
		return nil, []lack{{"expected tension", "the design values have no state: " + err.Error()}}
	}
	y[outS0Design], y[outHDesign] = st.Unstressed, st.H
	return &st, nil
}

// sameDesign reports whether everything that the designer's cable rests on is at its estimate.
func (in *inputs) sameDesign(x []float64) bool {
	for _, i := range [...]int{inSelfWeight, inDeckLoad, inAxial, inExpansion, inTension, inSag, inSpan, inRise} {
		if x[i] != in.x[i] {
			return false
		}
	}
	return in.have[inSpan] && in.have[inRise]
}

// sameSpan is the fraction by which a surveyed span may differ from the design before they are not taken for the same: no
// support moves that far.
const sameSpan = 0.2

// chordToday is the chord for the states: surveyed if both supports were, else that of the design. The second result says
// why there is none.
func (in *inputs) chordToday(x []float64, c fit.Curve) (Chord, string) {
	covered := x[inStationB] - x[inStationA]
	if len(in.local) > 0 && !in.frame.surveyed {
		return Chord{}, "with local loads on the span both supports must be surveyed"
	}
	if in.frame.surveyed {
		if in.have[inSpan] && math.Abs(covered/x[inSpan]-1) > sameSpan {
			return Chord{}, fmt.Sprintf("the surveyed supports are %.4g m apart and the design span is %.4g m: not the same span, or another unit", covered, x[inSpan])
		}
		return Chord{Length: covered, Rise: c.Z(x[inStationB]) - c.Z(x[inStationA])}, "" // in the plane of the cable
	}
	switch {
	case !in.have[inSpan] || !in.have[inRise]:
		return Chord{}, "the supports were not surveyed and the file gives no design_span and design_rise"
	case covered > 1.01*x[inSpan]:
		return Chord{}, fmt.Sprintf("the points cover %.4g m and the design span is %.4g m: not the same span, or another unit", covered, x[inSpan])
	}
	sin, cos := math.Sincos(x[inTilt])
	return Chord{Length: math.Hypot(x[inSpan], x[inRise]*sin), Rise: x[inRise] * cos}, ""
}

// today fills the state of the designer's cable on the day, the comparison, and today's cable at the design temperature.
func (in *inputs) today(y *outputs, x []float64, c fit.Curve, day Cable, ch Chord, dt float64) error {
	var s0, greatest float64
	var points []PointLoad
	var flat error
	if y[outH] > 0 {
		s0, greatest, points, flat = in.measured(day, x, y[outH], ch, dt)
	}
	if len(in.local) > 0 && points == nil {
		return fmt.Errorf("the curve is too flat to say where on the cable the local loads hang")
	}
	exp, err := in.under(day, in.near[outHExpected], y[outS0Design], ch, dt, points)
	if err != nil {
		return fmt.Errorf("the designed cable has no state on the day: %w", err)
	}
	filed := in.resultant(x, carried{x[inSelfWeight], x[inDeckLoad]})
	y[outHFiled] = exp.h
	if len(in.listed)+len(in.local) > 0 {
		alone := day
		alone.SelfWeight, alone.DeckLoad = filed.self, filed.deck
		if st, err := alone.atLengthFrom(in.near[outHFiled], y[outS0Design], ch, dt); err == nil {
			y[outHFiled] = st.H
		}
	}
	k := x[inCurvature]
	y[outHExpected], y[outSagExpected] = exp.h, exp.sag
	y[outSagToday] = in.sagOver(ch, k, c.Cusps)
	hang := y[outHanging]
	y[outInverse] = exp.h * k / hang
	y[outInverseNaive] = y[outHDesign] * k / hang
	y[outDesignHanging] = in.hanging(x, filed, y[outHFiled], math.Hypot(1, ch.Rise/ch.Length))
	y[outLoadRatio] = in.whole(carried{day.SelfWeight, day.DeckLoad}, ch.Length, points) / in.whole(filed, ch.Length, nil)
	y[outImpliedExpected] = exp.h * k
	if !(y[outH] > 0) || flat != nil {
		return nil // the figures below stay unknown; H itself stands
	}
	y[outS0Today] = s0
	y[outS0Difference] = s0 - y[outS0Design]
	y[outGreatestT] = math.Max(y[outGreatestT], greatest)
	if ref, err := in.under(day, in.near[outHReference], s0, ch, 0, points); err == nil {
		y[outHReference] = ref.h
	}
	return nil
}

// sagOver is the sag at mid-span of a cable with curvature k over a chord, m.
func (in *inputs) sagOver(ch Chord, k float64, cusps []fit.Cusp) float64 {
	c := in.curve
	c.Cusps = cusps
	c.S1, c.Z1, c.S2, c.Z2, c.Curvature = 0, 0, ch.Length, ch.Rise, k
	return c.Sag(ch.Length/2, 0, ch.Length)
}

// rival fills the other reading: the cable has its designed unstressed length and the measured shape, so the stretch, and
// with it the tension, follows from the length; the load is what that tension needs. Secant steps on H; the equation is
// regular through H = 0, so that a cable shorter than its unstressed length shows as negative tension.
func (in *inputs) rival(y *outputs, x []float64, c fit.Curve, day Cable, ch Chord, dt float64) {
	k := x[inCurvature]
	if !(k > 0) || math.IsNaN(y[outHExpected]) {
		return
	}
	per := math.Hypot(1, ch.Rise/ch.Length)
	if in.frame.surveyed {
		per = c.ArcLength(x[inStationA], x[inStationB]) / ch.Length
	}
	l := carried{day.SelfWeight, day.DeckLoad}
	length := func(h float64) (float64, error) {
		hang := in.hanging(x, l, h, per)
		e := hanging.Equation{KW: l.self * k / hang, KQ: l.deck * k / hang, Eta: h / x[inAxial], G: 1 + x[inExpansion]*dt}
		if len(c.Cusps) > 0 {
			return kinkedLength(e, ch, c.Cusps, in.x[inStationA])
		}
		a, b := e.Start(ch.Length, ch.Rise)
		a, b, err := e.Span(ch.Length, ch.Rise, a, b)
		if err != nil {
			return 0, err
		}
		return e.Between(a, b).S, nil
	}
	guess := y[outHExpected]
	if near := in.near[outHRival]; near != 0 && !math.IsNaN(near) {
		guess = near
	}
	h, err := lengthTension(length, y[outS0Design], x[inAxial]/per, guess)
	if err != nil {
		return
	}
	factor := h * k / in.hanging(x, l, h, per)
	y[outHRival] = h
	y[outRivalRatio] = h / y[outHExpected]
	y[outRivalFactor] = factor
	y[outRivalExtra] = (factor - 1) * y[outHanging]
	y[outImpliedLength] = h * k
}

// lengthTension solves length(H) = want; ea is the stiffness by which the first step goes, N.
func lengthTension(length func(float64) (float64, error), want, ea, h float64) (float64, error) {
	s, err := length(h)
	if err != nil {
		return 0, err
	}
	slope := -s / ea
	for range 40 {
		step := (want - s) / slope
		if math.Abs(step) > 0.5*ea { // half of EA is far beyond any cable
			return 0, ErrNoState
		}
		next, err := length(h + step)
		if err != nil {
			return 0, err
		}
		h += step
		if math.Abs(step) <= 1e-11*ea*1e-3 || next == s {
			return h, nil
		}
		if d := (next - s) / step; d < 0 {
			slope = d
		}
		s = next
	}
	return 0, ErrNoState
}
