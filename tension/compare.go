package tension

import (
	"math"

	"tautbook/survey"
)

// limits are the ratios of tension today to expected beyond which a cable is slack or overloaded.
func (j *judgement) limits() (low, high float64, from string) {
	low, high, from = 1-defaultLimit, 1+defaultLimit, "default, common practice"
	if j.d == nil {
		return low, high, from
	}
	if j.d.SlackBelow != nil {
		low = 1 - *j.d.SlackBelow
	}
	if j.d.OverloadAbove != nil {
		high = 1 + *j.d.OverloadAbove
	}
	switch {
	case j.d.SlackBelow != nil && j.d.OverloadAbove != nil:
		from = "cables file"
	case j.d.SlackBelow != nil:
		from = "cables file (slack), default, common practice (overload)"
	case j.d.OverloadAbove != nil:
		from = "cables file (overload), default, common practice (slack)"
	}
	return low, high, from
}

// compare sets everything that holds the cable against its design.
func (j *judgement) compare() {
	p := &j.p
	j.strength()
	if !p.known(outInverse) {
		j.directReading()
		return
	}
	low, high, from := j.limits()
	e := &Expected{HorizontalTension: p.must(outHExpected), UnderFiledLoad: p.must(outHFiled), MeasuredSagMid: p.must(outSagToday), SagMid: p.must(outSagExpected), SlackBelow: low, OverloadAbove: high,
		LimitsFrom: from, SpanFrom: "design", TemperatureShift: j.in.x[inTemperature] - j.in.x[inDesignTemp], LoadRatio: p.must(outLoadRatio)}
	if j.in.frame.surveyed {
		e.SpanFrom = "surveyed supports"
	}
	// The inverse ratio is linear in the curvature that the survey measures: its distribution is the one that is normal
	// even for a flat cable, so probabilities are taken from it.
	inv, u := p.y[outInverse], p.u(outInverse)
	e.PSlack = 1 - below(inv, u, 1/low)
	e.POverload = below(inv, u, 1/high)
	e.PInside = math.Max(0, 1-e.PSlack-e.POverload)
	if j.a.HorizontalTension != nil {
		e.Ratio = p.inverted(outInverse)
		e.Uncorrected = p.inverted(outInverseNaive)
	}
	j.a.Expected = e
	j.a.ImpliedLoad = &ImpliedLoad{IfTensionAsExpected: p.quantity(outImpliedExpected), IfLengthAsDesigned: p.quantity(outImpliedLength),
		Filed: p.must(outDesignHanging)}
	if j.a.HorizontalTension == nil {
		j.a.ImpliedLoad = nil
		return
	}
	if p.known(outS0Difference) {
		j.a.UnstressedLength = &LengthSummary{Today: p.must(outS0Today), Design: p.must(outS0Design), Difference: p.must(outS0Difference)}
	}
	j.a.AtDesignTemperature = p.quantity(outHReference)
	j.rivalReading(low, high)
	j.directReading()
	l := j.a.ImpliedLoad
	if d := j.a.Direct; d != nil {
		l.IfTensionAsRead = &d.Load
	}
	l.Together = impliedMeaning(j.a.Load.Hanging, l.IfTensionAsExpected, l.IfTensionAsRead, l.IfLengthAsDesigned)
	j.a.Stiffness = j.stiffness()
}

// inverted is 1/output with its uncertainty.
func (p *propagated) inverted(out int) *Quantity {
	if !p.known(out) || !(p.y[out] > 0) {
		return nil
	}
	v := 1 / p.y[out]
	return &Quantity{Value: v, U: p.u(out) * v * v}
}

// strength compares the greatest tension with the permitted one.
func (j *judgement) strength() {
	p := &j.p
	if j.d == nil || j.d.SafetyFactor == nil || !p.known(outUse) || j.a.HorizontalTension == nil {
		return
	}
	sf := *j.d.SafetyFactor
	scale := func(out int) Quantity { q := p.must(out); return Quantity{Value: q.Value * sf, U: q.U * sf} }
	s := &Strength{Use: scale(outUse), Permitted: j.in.x[inBreaking] / sf, GreatestT: p.must(outGreatestT), SafetyFactor: sf}
	s.POver = 1 - below(s.Use.Value, s.Use.U, 1)
	if p.known(outRivalUse) {
		use := scale(outRivalUse)
		over := 1 - below(use.Value, use.U, 1)
		s.RivalUse, s.RivalPOver = &use, &over
	}
	j.a.Strength = s
}

// rivalReading sets the reading in which the length is as designed and the load is not as on record.
func (j *judgement) rivalReading(low, high float64) {
	p := &j.p
	if !p.known(outHRival) {
		return
	}
	v := &Rival{HorizontalTension: p.must(outHRival), Ratio: p.must(outRivalRatio), LoadFactor: p.must(outRivalFactor),
		ExtraLoad: p.must(outRivalExtra)}
	v.PLoadLess = below(v.LoadFactor.Value, v.LoadFactor.U, low)
	v.PLoadMore = 1 - below(v.LoadFactor.Value, v.LoadFactor.U, high)
	switch {
	case j.record == survey.LoadsAsFiled || j.record == survey.LoadsListed:
		v.Excluded, v.ExcludedBy = true, "the record of loads"
	case below(v.HorizontalTension.Value, v.HorizontalTension.U, 0) >= sure:
		v.Excluded, v.ExcludedBy = true, "the surveyed length: at its designed length the cable would be shorter than without tension"
	case j.in.have[inBreaking] && p.known(outRivalUse) && below(p.y[outRivalUse], p.u(outRivalUse), 1) <= 1-sure:
		v.Excluded, v.ExcludedBy = true, "the surveyed length: at its designed length the cable would carry more than its breaking load"
	}
	j.a.Rival = v
}

// directReading holds a tension that was read on the day against the two readings of the shape.
func (j *judgement) directReading() {
	p := &j.p
	if len(j.in.readings) == 0 || !p.known(outHRead) || j.a.HorizontalTension == nil {
		return
	}
	of, how := j.in.readNames()
	d := &Direct{Of: of, How: how, Scatter: j.scatter, HorizontalTension: p.must(outHRead), LoadFactor: p.must(outReadFactor), Ratio: p.quantity(outReadRatio)}
	d.Load = Quantity{Value: d.LoadFactor.Value * p.y[outHanging], U: d.LoadFactor.U * p.y[outHanging]}
	d.OffRecord = (p.y[outHRead] - p.y[outH]) / p.uDifference(outHRead, outH)
	if p.known(outHRival) {
		off := (p.y[outHRead] - p.y[outHRival]) / p.uDifference(outHRead, outHRival)
		d.OffLength = &off
	}
	j.a.Direct = d
	if v := j.a.Rival; v != nil && !v.Excluded && d.OffLength != nil && math.Abs(*d.OffLength) > apart && math.Abs(d.OffRecord) < apart {
		v.Excluded, v.ExcludedBy = true, "the direct reading"
	}
}

// apart is the number of standard uncertainties from which two figures count as different: 95 % two-sided.
const apart = 1.96

// decide puts the evidence together.
func (j *judgement) decide() {
	e := evidence{record: j.record, pSlack: math.NaN(), pInside: math.NaN(), pOver: math.NaN(), pLoadOver: math.NaN(),
		pRivalLess: math.NaN(), pRivalMore: math.NaN(), pStrength: math.NaN(), pRivalUseOver: math.NaN()}
	e.unfit = j.unfit() != ""
	e.implausible = j.implausible() != ""
	j.readEvidence(&e)
	if x := j.a.Expected; x != nil {
		e.compared = true
		e.pSlack, e.pInside, e.pOver = x.PSlack, x.PInside, x.POverload
		e.pLoadOver = 1 - below(x.LoadRatio.Value, x.LoadRatio.U, x.OverloadAbove)
	}
	if v := j.a.Rival; v != nil {
		e.rivalKnown, e.rivalRefuted = true, v.Excluded
		e.pRivalLess, e.pRivalMore = v.PLoadLess, v.PLoadMore
	}
	if s := j.a.Strength; s != nil {
		e.pStrength = s.POver
		if s.RivalPOver != nil {
			e.pRivalUseOver = *s.RivalPOver
		}
	}
	j.a.Verdict, j.ground = decide(e)
	j.a.DecidedBy = string(j.ground)
}

// readEvidence adds what a direct reading says.
func (j *judgement) readEvidence(e *evidence) {
	d := j.a.Direct
	e.pReadSlack, e.pReadInside, e.pReadOver, e.pReadLoad, e.pReadUse = math.NaN(), math.NaN(), math.NaN(), math.NaN(), math.NaN()
	if d == nil {
		return
	}
	low, high, _ := j.limits()
	e.readAgrees = math.Abs(d.OffRecord) < apart
	e.readDenies = math.Abs(d.OffRecord) > 3
	if q := d.Ratio; q != nil {
		e.pReadSlack = below(q.Value, q.U, low)
		e.pReadOver = 1 - below(q.Value, q.U, high)
		e.pReadInside = 1 - e.pReadSlack - e.pReadOver
	}
	e.pReadLoad = 1 - below(d.LoadFactor.Value, d.LoadFactor.U, high)
	if s := j.a.Strength; s != nil && j.p.known(outReadUse) {
		e.pReadUse = 1 - below(j.p.y[outReadUse]*s.SafetyFactor, j.p.u(outReadUse)*s.SafetyFactor, 1)
	}
}

// stiffness works out how shape and tension of today's cable answer to load and temperature, by exact states a little
// way off, and how much load could hide in the uncertainty of the sag.
func (j *judgement) stiffness() *Stiffness {
	x, y := j.in.x, &j.p.y
	ch, why := j.in.chordToday(x, j.r.Curve)
	if why != "" || math.IsNaN(y[outS0Today]) {
		return nil
	}
	load := j.in.load(x)
	dt := x[inTemperature] - x[inDesignTemp]
	day := Cable{SelfWeight: load.self, DeckLoad: load.deck, AxialStiffness: x[inAxial], Expansion: x[inExpansion]}
	_, _, points, err := j.in.measured(day, x, y[outH], ch, dt)
	if err != nil {
		return nil
	}
	at := func(factor, dt float64) (dayState, bool) {
		c := day
		c.SelfWeight, c.DeckLoad = load.self*factor, load.deck*factor
		near := 0.0
		if math.Abs(factor-1) <= 0.01 {
			near = y[outH] // so little off, today's tension is the best first guess
		}
		st, err := j.in.under(c, near, y[outS0Today], ch, dt, points)
		return st, err == nil
	}
	now, ok := at(1, dt)
	more, ok1 := at(1.01, dt)
	warm, ok2 := at(1, dt+1)
	if !ok || !ok1 || !ok2 {
		return nil
	}
	s := &Stiffness{Lambda2: State{Cable: day, Chord: ch, DT: dt, H: now.h}.Lambda2(), SagPerLoad: (more.sag/now.sag - 1) / 0.01, TensionPerLoad: (more.h/now.h - 1) / 0.01,
		TensionPerDegree: warm.h - now.h}
	limit := 2 * j.p.uDifference(outSagToday, outSagExpected)
	s.HiddenLoad = hiddenLoad(func(f float64) (float64, bool) { st, ok := at(f, dt); return st.sag - now.sag - limit, ok }, y[outHanging])
	s.Meaning = stiffnessMeaning(s)
	return s
}

// hiddenLoad is the extra even load, N/m, at which the sag of a cable of fixed length has moved by the limit: excess(f) is
// that movement minus the limit under f times the load. Nil when even ten times the load does not show.
func hiddenLoad(excess func(float64) (float64, bool), hanging float64) *float64 {
	const most = 11.0
	lo, hi := 1.0, most
	eLo, _ := excess(lo)
	eHi, ok := excess(hi)
	if !ok || eHi < 0 {
		return nil
	}
	// Regula falsi with halved weights (Illinois; Dowell and Jarratt 1971, BIT 11, 168-174).
	for side := 0; hi-lo > 1e-4*(hi-1); {
		mid := (lo*eHi - hi*eLo) / (eHi - eLo)
		if !(mid > lo && mid < hi) {
			mid = (lo + hi) / 2
		}
		e, ok := excess(mid)
		switch {
		case !ok:
			return nil
		case e < 0:
			lo, eLo = mid, e
			if side < 0 {
				eHi /= 2
			}
			side = -1
		default:
			hi, eHi = mid, e
			if side > 0 {
				eLo /= 2
			}
			side = 1
		}
		if math.Abs(e) < 1e-6*math.Abs(eHi-eLo) {
			lo, hi = mid, mid
		}
	}
	extra := (hi - 1) * hanging
	return &extra
}
