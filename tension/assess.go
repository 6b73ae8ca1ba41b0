package tension

import (
	"fmt"
	"math"

	"tautbook/fit"
	"tautbook/survey"
)

// defaultLimit is the fraction of the expected tension by which a cable may be off when the design gives no limit:
// common practice, no source.
const defaultLimit = 0.10

// unknownTemperatureU is the standard uncertainty of the cable temperature, degC, when none was recorded; the design
// temperature stands in for it: common practice, no source.
const unknownTemperatureU = 15.0

// clearDiameters is how many diameters from a support or a clamp the points are left out when nothing more is known of the bending
// stiffness: common practice, no source.
const clearDiameters = 20

// clearBends is how many times sqrt(EI/H) from a support or a clamp the points are left out: what bending there moves the curve by has
// fallen to less than a hundredth.
const clearBends = 5

// clearLength is how near a support or a clamp points are left out, m: by the bending stiffness under the design tension, else by the
// diameter, else 0. The design tension stands for today's: the length goes with its root only.
func clearLength(d *survey.Design, even float64) float64 {
	switch {
	case d == nil:
		return 0
	case d.BendingStiffness != nil && d.Tension != nil:
		return clearBends * math.Sqrt(d.BendingStiffness.Value/d.Tension.Value)
	case d.BendingStiffness != nil && d.Sag != nil && d.SpanLength != nil && even > 0:
		h := even * d.SpanLength.Value * d.SpanLength.Value / (8 * d.Sag.Value)
		return clearBends * math.Sqrt(d.BendingStiffness.Value/h)
	case d.Diameter != nil:
		return clearDiameters * d.Diameter.Value
	}
	return 0
}

// Case is one cable span to be assessed.
type Case struct {
	Points     survey.SpanPoints
	File       string         // the survey file, for the record
	Design     *survey.Design // nil when there are no design values for this span
	Conditions survey.Conditions
	Fit        fit.Options // accuracy and rejection; the shape follows from the load
	NoDrawing  bool        // leave Assessment.Drawing empty: of very many cables the pictures' points are most of the memory
	Sampling   *Sampling   // Monte Carlo beside the linear propagation; nil = none
}

// Assess fits the shape that the load asks for and works out forces, the comparison with the design, verdict, findings and
// budget. It fails only when no curve can be fitted; everything else that is missing is a finding.
func Assess(c Case) (Assessment, error) {
	listed, told := c.listedHere(), c.localHere()
	r, err := c.fit(listed, told)
	if err != nil {
		return Assessment{}, fmt.Errorf("cable %q, span %q: %w", c.Points.Cable, c.Points.Span, err)
	}
	j := c.judgement(r, listed, told)
	j.fill()
	j.compare()
	j.reconcile()
	j.decide()
	j.explain()
	if c.Sampling != nil {
		j.a.MonteCarlo = j.simulate(*c.Sampling)
	}
	j.tell()
	j.a.Budget = j.budget()
	if !c.NoDrawing {
		j.a.Drawing = j.drawing()
	}
	if c.Points.Span != "" {
		j.a.forces = j.forces()
	}
	return j.a, nil
}

// fit puts the curve of the load on the day through the points.
func (c Case) fit(listed []survey.ListedLoad, told []survey.LocalLoad) (*fit.Result, error) {
	opts := c.Fit
	own, deck, u := evenLoad(c.Design, listed)
	opts.Shape, opts.SelfShare = shapeFor(own, deck)
	if len(told) > 0 && c.Points.A == nil {
		return nil, fmt.Errorf("the local load %q is placed by its distance from support A, and A was not surveyed: survey A and code it, or take the load line out", told[0].What)
	}
	opts.ThroughSupports = c.Conditions.SupportsOnCable
	if opts.Clear == 0 {
		opts.Clear = clearLength(c.Design, own+deck)
	}
	opts.Loads = localOptions(told, Quantity{Value: own + deck, U: u})
	fitted := opts.FindLoads
	for _, l := range opts.Loads {
		if l.SizeFree {
			fitted++
		}
	}
	if fitted > mostFitted {
		opts.FindLoads = max(0, opts.FindLoads-(fitted-mostFitted))
		if fitted-opts.FindLoads > mostFitted {
			return nil, fmt.Errorf("%d local loads of unknown size on one span, at most %d can be told apart: give the size of some", fitted-opts.FindLoads, mostFitted)
		}
	}
	if acc := c.Conditions.Accuracy; acc != nil {
		opts.SigmaAlong, opts.SigmaUp = acc.Horizontal, acc.Vertical
	}
	return fit.Cable(c.Points, opts)
}

// listedHere are the loads on record that concern this span.
func (c Case) listedHere() (out []survey.ListedLoad) {
	if c.Conditions.Loads != survey.LoadsListed {
		return nil
	}
	for _, l := range c.Conditions.Listed {
		if l.On(c.Points.Cable, c.Points.Span) {
			out = append(out, l)
		}
	}
	return out
}

// localHere are the local loads on record that hang on this span.
func (c Case) localHere() (out []survey.LocalLoad) {
	if c.Conditions.Loads != survey.LoadsListed {
		return nil
	}
	for _, l := range c.Conditions.Local {
		if l.On(c.Points.Cable, c.Points.Span) {
			out = append(out, l)
		}
	}
	return out
}

// readingsHere are the readings of this span.
func (c Case) readingsHere() (out []survey.Reading) {
	for _, r := range c.Conditions.Readings {
		if r.On(c.Points.Cable, c.Points.Span) {
			out = append(out, r)
		}
	}
	return out
}

// evenLoad is the load on the day along the cable and along the deck and the standard uncertainty of both together, N/m.
func evenLoad(d *survey.Design, listed []survey.ListedLoad) (own, deck, u float64) {
	if d == nil {
		return 0, 0, 0
	}
	if d.SelfWeight != nil && d.Load != survey.LoadDeck {
		own, u = d.SelfWeight.Value, d.SelfWeight.U
	}
	if d.DeckLoad != nil && d.Load != survey.LoadSelfWeight {
		deck, u = d.DeckLoad.Value, math.Hypot(u, d.DeckLoad.U)
	}
	for _, l := range listed {
		u = math.Hypot(u, l.Load.U)
		if l.Spread == survey.AlongCable {
			own += l.Load.Value
		} else {
			deck += l.Load.Value
		}
	}
	return own, deck, u
}

// shapeFor is the shape under the load on the day: a catenary when nothing says otherwise.
func shapeFor(own, deck float64) (fit.Shape, float64) {
	switch {
	case deck <= 0:
		return fit.Catenary, 1
	case own <= 0:
		return fit.Parabola, 0
	default:
		return fit.Mixed, own / (own + deck)
	}
}

// judgement lays out the inputs and works out every figure with its uncertainty.
func (c Case) judgement(r *fit.Result, listed []survey.ListedLoad, told []survey.LocalLoad) *judgement {
	j := &judgement{Case: c, r: r, d: c.Design, record: c.Conditions.Loads}
	if j.record == "" {
		j.record = survey.LoadsNotChecked
	}
	if j.record != survey.LoadsNotChecked && unlistedLocal(r) {
		j.doubted, j.record = j.record, survey.LoadsNotChecked
	}
	temperature := c.Conditions.CableTemperature
	if temperature == nil && c.Design != nil && c.Design.Temperature != nil {
		j.temperatureAssumed = true
		temperature = &Quantity{Value: c.Design.Temperature.Value, U: unknownTemperatureU}
	}
	j.in = gather(r, c.Design, temperature, listed, told)
	j.in.read(c.readingsHere(), c.Design)
	j.scatter = j.in.weigh()
	j.p = j.in.propagate()
	j.a = Assessment{Cable: c.Points.Cable, Span: c.Points.Span, SurveyFile: c.File, Structure: c.Conditions.Structure,
		Temperature: c.Conditions.CableTemperature}
	if c.Design != nil && c.Design.Structure != "" {
		j.a.Structure = c.Design.Structure
	}
	return j
}

// judgement is one assessment in the making.
type judgement struct {
	Case
	r                  *fit.Result
	d                  *survey.Design
	record             survey.LoadStatus
	doubted            survey.LoadStatus // what was recorded, when the shape shows a local load that the record does not name
	temperatureAssumed bool
	adjusted           *adjusted   // of all evidence
	atRecord           *linearised // every condition at the estimates; nil = not worked out yet
	atRecordRows       []evidenceRow
	notReconciled      error   // why the evidence could not be adjusted
	scatter            float64 // probability of readings that differ by as much as these
	in                 *inputs
	p                  propagated
	a                  Assessment
	ground             ground
}

// fill sets the figures that rest on shape and load alone.
func (j *judgement) fill() {
	p, r := &j.p, j.r
	f := FitSummary{Shape: r.Curve.Shape(), PointsUsed: len(r.Observations), Rejected: list(r.Rejected), LeftOut: r.LeftOut, SelfShare: r.Curve.SelfShare, Share: r.Share, Suspects: list(r.Suspects),
		DegreesOfFreedom: r.DegreesOfFreedom, RMS: r.RMS, VarianceFactor: r.VarianceFactor, AccuracyStated: r.APriori,
		Widening: r.Widening, PlaneFrom: r.Frame.From, AzimuthDeg: r.Frame.Azimuth * 180 / math.Pi, Alternatives: list(r.Alternatives),
		Chord: p.must(outChord), Rise: p.must(outRise), SagMid: p.must(outSagMid), GreatestSag: p.must(outGreatestSag),
		ArcLength: p.must(outArc), LowPointStation: p.quantity(outLowStation), LowPointElevation: p.quantity(outLowElevation)}
	f.SagRatio = f.SagMid.Value / f.Chord.Value
	f.GreatestSagAt, _ = r.Curve.GreatestSag(r.A.Station, r.B.Station)
	if w := r.Swing; w != nil && w.Taken {
		f.Swing = &Swing{AngleDeg: Quantity{Value: w.Angle * 180 / math.Pi, U: w.U * 180 / math.Pi}, SideLoad: p.quantity(outWind), Chance: w.Chance}
	}
	hangs := j.hangs()
	if hangs {
		constant := p.quantity(outConstant)
		switch f.Shape {
		case fit.Catenary:
			f.CatenaryConstant = constant
		case fit.Parabola:
			f.ParabolaParameter = constant
		default:
			f.MixedConstant = constant
		}
	} else {
		f.LowPointStation, f.LowPointElevation = nil, nil
	}
	j.a.Fit, j.a.Reactions = f, []Reaction{}
	j.a.Load = j.loadSummary()
	if !p.known(outH) {
		j.a.Load.Local = j.localSummary()
		return
	}
	if !hangs {
		j.a.Load.Local = j.localSummary()
		j.a.HorizontalTensionAtLeast = j.atLeast()
		return
	}
	h := p.must(outH)
	j.a.HorizontalTension = &h
	j.a.Load.Local = j.localSummary()
	j.a.Reactions = []Reaction{
		j.reaction("A", r.A, outVerticalA, outTensionA, outSlopeA, r.Curve.Z1),
		j.reaction("B", r.B, outVerticalB, outTensionB, outSlopeB, r.Curve.Z2),
	}
}

// list is never nil, so that it prints as an empty list.
func list[T any](l []T) []T {
	if l == nil {
		return []T{}
	}
	return l
}

// hangs reports whether the curvature is known to be positive: its value is above 2 u.
func (j *judgement) hangs() bool {
	return j.in.x[inCurvature] > 2*j.uCurvature()
}

// uCurvature is the standard uncertainty of the curvature, 1/m.
func (j *judgement) uCurvature() float64 { return j.in.few * math.Sqrt(j.r.Cov[2][2]) }

// unfit says why the points cannot be a hanging cable at all; "" when they can. One cable scatters by thousandths of its span
// even when laser points are coarse, and swings by a few hundredths.
func (j *judgement) unfit() string {
	r := j.r
	switch l := r.B.Station - r.A.Station; {
	case r.Torn != nil:
		return fmt.Sprintf("%d of %d points lie off the curve that the rest agrees on, too many to leave out.", len(r.Torn), len(r.Observations)+len(r.Rejected))
	case r.RMS > 0.005*l || r.AcrossRMS > 0.05*l:
		return fmt.Sprintf("The points do not lie on one hanging curve: they scatter by %s in height and %s across the plane.", Metre.About(r.RMS), Metre.About(r.AcrossRMS))
	case j.in.x[inCurvature] < -3*j.uCurvature():
		return fmt.Sprintf("The points bulge upwards (sag at mid-span %s): this is not a hanging cable.", Metre.Figure(j.a.Fit.SagMid))
	}
	return ""
}

// markOff is how far, m or as a part of the chord, the fitted cable may pass a surveyed support mark before the mark, its code or its
// height is taken for wrong: pins and saddles are no larger. Common practice, no source.
const (
	markOff      = 0.3
	markOffShare = 0.01
)

// implausible says why the expected tension cannot be right, whatever the probabilities say: a surveyed support that is not at the end of
// this cable, or a designed cable that would have broken over today's supports. "" when nothing speaks against it.
func (j *judgement) implausible() string {
	y, length := &j.p.y, j.r.B.Station-j.r.A.Station
	for _, m := range j.marks() {
		if size := math.Abs(m.off.Value); size > math.Max(markOff, markOffShare*length) && size > 3*m.off.U {
			return fmt.Sprintf("The fitted cable misses the mark of support %s by %s: its height, its place or its code is wrong, or the cable does not end there.",
				m.name, Metre.Figure(Quantity{Value: size, U: m.off.U}))
		}
	}
	if e := y[outHExpected] / y[outH] * y[outGreatestT]; j.p.known(outHExpected) && j.in.have[inBreaking] && e > j.in.x[inBreaking] {
		return fmt.Sprintf("Over today's supports the designed cable would carry %s, more than its breaking load of %s: design values, unit or supports are wrong.",
			force(Quantity{Value: e, U: e / y[outHExpected] * j.p.u(outHExpected)}), force(Quantity{Value: j.in.x[inBreaking]}))
	}
	return ""
}

// mark is how far above (below: negative) a surveyed support mark the fitted cable passes, m.
type mark struct {
	name string
	off  Quantity
}

// marks are those of the surveyed supports.
func (j *judgement) marks() (out []mark) {
	r := j.r
	for i, e := range []struct {
		name string
		end  fit.End
		z    float64
	}{{"A", r.A, r.Curve.Z1}, {"B", r.B, r.Curve.Z2}} {
		if e.end.Surveyed {
			out = append(out, mark{e.name, Quantity{Value: e.z - e.end.MarkZ, U: math.Hypot(math.Sqrt(r.Cov[i][i]), e.end.UMarkZ)}})
		}
	}
	return out
}

// atLeast is the 95 % lower bound of H when the curve is too flat for an estimate: load over the greatest curvature that
// the survey allows. Nil when there is no load.
func (j *judgement) atLeast() *float64 {
	k := quantile(j.in.x[inCurvature], j.uCurvature(), sure)
	hang := j.p.y[outHanging]
	if !(k > 0) || math.IsNaN(hang) {
		return nil
	}
	h := hang / k
	return &h
}

func (j *judgement) reaction(name string, e fit.End, v, t, slope int, z float64) Reaction {
	p := &j.p
	var left *Quantity
	if j.in.have[inTilt] {
		at := outLeftA
		if name == "B" {
			at = outLeftB
		}
		q := p.must(at)
		left, z = &q, j.r.Frame.Elevation(e.Station, z)
	}
	return Reaction{Left: left, Support: name, Surveyed: e.Surveyed, Station: e.Station, Elevation: z, Horizontal: p.must(outH),
		Vertical: p.must(v), Tension: p.must(t), SlopeDeg: p.must(slope)}
}

func (j *judgement) loadSummary() LoadSummary {
	s := LoadSummary{Record: j.record}
	if j.d == nil {
		return s
	}
	s.Kind = j.d.Load
	if j.in.have[inSelfWeight] && j.d.Load != survey.LoadDeck {
		s.SelfWeight = j.d.SelfWeight
	}
	if j.d.Load != survey.LoadSelfWeight {
		s.DeckLoad = j.d.DeckLoad
	}
	for _, l := range j.in.listed {
		s.Listed = append(s.Listed, ListedLoad{Load: l.Load, Spread: l.Spread, What: l.What})
	}
	if q := j.p.quantity(outHanging); q != nil {
		s.Hanging = *q
	}
	return s
}

// drawing collects what a picture of the span needs.
func (j *judgement) drawing() Drawing {
	r := j.r
	d := Drawing{Residuals: r.Residuals, Curve: r.Curve, From: r.A.Station, To: r.B.Station}
	for _, o := range r.Observations {
		d.Stations = append(d.Stations, o.S)
		d.Elevations = append(d.Elevations, o.Z)
		d.IDs = append(d.IDs, o.ID)
	}
	for _, s := range r.Rejected {
		d.Dropped = append(d.Dropped, [2]float64{s.Station, r.Curve.Z(s.Station) + s.Residual})
	}
	if e := j.a.Expected; e != nil && j.in.frame.surveyed {
		c := r.Curve
		c.Curvature = j.p.y[outHanging] / e.HorizontalTension.Value
		d.Expected = &c
	}
	return d
}
