package tension

import (
	"fmt"
	"math"
	"strings"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// Bounds of what a cause can be; beyond them it is impossible. Common practice, no source.
const (
	coldestCable, hottestCable = -50.0, 90.0 // degC
	leastWeight, mostWeight    = 0.4, 2.5    // of the weight on file
)

// offRecordLimit is how far, in standard uncertainties, a recorded figure may be off before a cause counts as against the record.
const offRecordLimit = 3

// uUnstated is the relative standard uncertainty of a weight on file that was given without one: common practice, no source.
const uUnstated = 0.05

// uUnstatedWarmth is the standard uncertainty, degC, of a temperature that was recorded without one: common practice, no source.
const uUnstatedWarmth = 3.0

// offRecord is how far a recorded figure would have to be off at least (the near end of the 95 % interval of the error), in its own standard
// uncertainties.
func offRecord(off Quantity, u float64) float64 {
	return math.Max(0, math.Abs(off.Value)-apart*off.U) / u
}

// of fills a cause from its trial; a cause whose size the evidence does not give keeps the chi-square that freeing it leaves.
func (c *Cause) of(s *trial) *Cause {
	c.ChiSquare, c.DegreesOfFreedom, c.Tension = s.chi, max(s.dof, 0), s.tension()
	return c
}

// loadCause frees the load.
func (t *trials) loadCause() *Cause {
	c := &Cause{Kind: ExtraLoad, Unit: "N/m"}
	s, err := t.try(trialOptions{drop: []int{0}})
	if err != nil {
		c.Text = "Another even load than on record; the length is too uncertain to say how much."
		c.Check = "Look along the whole span for anything that is not on file, weigh or list it."
		return c
	}
	c.of(s)
	c.Size = t.size(s, 0)
	if b := t.j.in.x[inBreaking]; t.j.in.have[inBreaking] && c.Tension.Value-2*c.Tension.U > b {
		c.Standing, c.Why = Impossible, "the cable would carry more than its breaking load of "+force(Quantity{Value: b})
	}
	if c.Tension.Value <= 0 || t.j.p.y[outHanging]+c.Size.Value+2*c.Size.U < 0 {
		c.Standing, c.Why = Impossible, "the load would be less than nothing"
	}
	if !(t.j.p.y[outHRival] > 0) && !math.IsNaN(t.j.p.y[outHRival]) && len(t.j.in.readings) == 0 {
		c.Standing, c.Why = Impossible, "at its designed length the cable would be shorter than without tension"
	}
	if c.Standing == "" && t.j.record != survey.LoadsNotChecked {
		c.Standing, c.OffRecord = AgainstRecord, math.Sqrt(math.Max(t.base().chi-s.chi, 0))
		c.Why = "the loads were looked at: " + string(t.j.record)
	}
	share := Percent.Figure(times(Quantity{Value: math.Abs(c.Size.Value), U: c.Size.U}, 1/t.j.p.y[outHanging]))
	if c.Size.Value > 0 {
		c.Text = fmt.Sprintf("An even load of %s beside the one on record (%s of it) hangs on the cable.", NewtonPerMetre.Figure(*c.Size), share)
	} else {
		c.Text = fmt.Sprintf("The even load is %s less than on record (%s of it).", NewtonPerMetre.Figure(negated(*c.Size)), share)
	}
	whole := times(Quantity{Value: math.Abs(c.Size.Value), U: c.Size.U}, t.j.p.y[outChord])
	c.Check = fmt.Sprintf("Look along the whole span for what is not as on file (pipes, cables, planks, ice, debris): in all it would weigh about %s. List what is there with its weight.", ForceScale(whole.Value).About(whole.Value))
	return c
}

// base is the adjustment that causes are held against: supports where they stand.
func (t *trials) base() *trial {
	if s := t.moved(); s != nil {
		return s
	}
	return t.null
}

// size is the misfit of a row in its unit.
func (t *trials) size(s *trial, row int) *Quantity {
	q := t.figure(s, row)
	if q == nil {
		return nil
	}
	out := times(*q, t.unit(row))
	return &out
}

func negated(q Quantity) Quantity { return Quantity{Value: -q.Value, U: q.U} }

// lengthCause frees the unstressed length.
func (t *trials) lengthCause() *Cause {
	s, err := t.try(trialOptions{drop: []int{1}})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: LengthChanged, Unit: "m"}).of(s)
	c.Size = t.size(s, 1)
	if c.Size.Value > 0 {
		c.Text = fmt.Sprintf("The cable has become %s longer (unstressed) than designed: slip at an anchorage, creep, or take-up let out.", Millimetre.Figure(*c.Size))
		c.Check = fmt.Sprintf("Look at sockets, clamps and adjusters of both anchorages for about %s of fresh movement: bright wire, broken paint, changed thread length.", Millimetre.About(c.Size.Value))
		return c
	}
	c.Text = fmt.Sprintf("The cable is %s shorter (unstressed) than designed: take-up drawn in, or never built to the designed length.", Millimetre.Figure(negated(*c.Size)))
	c.Check = fmt.Sprintf("Look at the adjusters of both anchorages and in the records of work for about %s of take-up that was not recorded.", Millimetre.About(-c.Size.Value))
	return c
}

// temperatureCause frees the cable temperature.
func (t *trials) temperatureCause() *Cause {
	in := t.j.in
	if !in.have[inTemperature] || !(in.x[inExpansion] > 0) {
		return nil
	}
	s, err := t.try(trialOptions{free: []step{{inTemperature, 100}}})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: TemperatureWrong, Unit: "degC"}).of(s)
	off := t.shift(s, inTemperature) + 100*s.freed
	u := t.j.uOf(inTemperature)
	c.Size = &Quantity{Value: in.x[inTemperature] + off, U: 100 * s.u}
	recorded := DegreeCelsius.Figure(Quantity{Value: in.x[inTemperature], U: u})
	if u == 0 {
		u = uUnstatedWarmth
	}
	c.OffRecord = offRecord(Quantity{Value: off, U: c.Size.U}, u)
	switch {
	case c.Size.Value < coldestCable || c.Size.Value > hottestCable:
		c.Standing, c.Why = Impossible, fmt.Sprintf("no cable in the open is at %s", DegreeCelsius.About(c.Size.Value))
	case c.OffRecord > offRecordLimit && t.j.temperatureAssumed:
		c.Standing, c.Why = AgainstRecord, "it would be far from any usual temperature"
	case c.OffRecord > offRecordLimit:
		c.Standing, c.Why = AgainstRecord, fmt.Sprintf("recorded: %s, so it would be at least %.1f standard uncertainties off", recorded, c.OffRecord)
	}
	c.Text = fmt.Sprintf("The cable was at %s, not at %s.", DegreeCelsius.Figure(*c.Size), recorded)
	if t.j.temperatureAssumed {
		c.Text = fmt.Sprintf("The cable was at %s; no temperature was recorded.", DegreeCelsius.Figure(*c.Size))
	}
	c.Check = "Put a contact thermometer on the cable, in shade and at several places, and survey again on a day that is 10 °C or more warmer or colder."
	return c
}

// shift is how far the adjustment moved an input by its own stated moves.
func (t *trials) shift(s *trial, at int) (sum float64) {
	for d, m := range t.j.in.statedMoves() {
		for _, st := range m {
			if st.at == at {
				sum += s.e[d] * st.by
			}
		}
	}
	return sum
}

// weightCause frees the load on file, with which the designed cable was made as well as today's.
func (t *trials) weightCause() *Cause {
	in := t.j.in
	var free []step
	var name []string
	own, u := 0.0, 0.0
	for _, w := range []struct {
		at   int
		name string
	}{{inSelfWeight, "self weight"}, {inDeckLoad, "deck load"}} {
		if in.have[w.at] && in.x[w.at] > 0 {
			free = append(free, step{w.at, in.x[w.at]})
			name = append(name, w.name)
			own += in.x[w.at]
			u = math.Hypot(u, t.j.uOf(w.at))
		}
	}
	if free == nil {
		return nil
	}
	s, err := t.try(trialOptions{free: free})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: WeightWrong, Unit: "1"}).of(s)
	shift := 0.0
	for _, f := range free {
		shift += t.shift(s, f.at)
	}
	c.Size = &Quantity{Value: 1 + s.freed + shift/own, U: s.u}
	if u = u / own; u == 0 {
		u = uUnstated
	}
	c.OffRecord = offRecord(Quantity{Value: c.Size.Value - 1, U: c.Size.U}, u)
	switch {
	case c.Size.Value < leastWeight || c.Size.Value > mostWeight:
		c.Standing, c.Why = Impossible, "no such error is made in a weight"
	case c.OffRecord > offRecordLimit:
		c.Standing, c.Why = AgainstRecord, fmt.Sprintf("it would be at least %.1f standard uncertainties off the one on file", c.OffRecord)
	}
	c.Text = fmt.Sprintf("The %s on file is wrong: it is %s of what the file says, and was so when the cable was hung.", strings.Join(name, " and "), Percent.Figure(*c.Size))
	c.Check = fmt.Sprintf("Measure the diameter, count the wires or weigh a piece: the file says %s.", NewtonPerMetre.Value(Quantity{Value: own}))
	return c
}

// supportCause is what the survey of the supports shows by itself; nil when they or their design are not known. What is beyond doubt has
// been set aside in every trial, what is not is tried like any other cause.
func (t *trials) supportCause(e *Explanation) *Cause {
	var chords []int
	for i, r := range t.rows {
		if r.chord != 0 {
			chords = append(chords, i)
		}
	}
	if chords == nil {
		return nil
	}
	s, err := t.try(trialOptions{drop: chords})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: SupportMoved, Unit: "m"}).of(s)
	var parts []string
	known := e.SpanMoved != nil || e.RiseMoved != nil
	for _, i := range chords {
		direct := t.direct(i)
		if known && !t.off[i] {
			continue
		}
		size := times(direct, t.unit(i))
		if c.Size == nil || math.Abs(size.Value)/size.U > math.Abs(c.Size.Value)/c.Size.U {
			c.Size = &size
		}
		if t.rows[i].chord == inSpan {
			parts = append(parts, sided(size, "farther apart", "closer together"))
		} else {
			parts = append(parts, sided(size, "higher at B", "lower at B"))
		}
	}
	c.Text = fmt.Sprintf("The surveyed supports stand %s than designed: they moved, or were not built where the file says.", strings.Join(parts, " and "))
	c.Check = "Survey the supports from control marks outside the structure and compare with the as-built survey; look for leaning, cracks and gaps at the foundations."
	return c
}

func sided(q Quantity, more, less string) string {
	if q.Value < 0 {
		return Millimetre.Figure(negated(q)) + " " + less
	}
	return Millimetre.Figure(q) + " " + more
}

// unseenSupportCause is a support that moved without having been surveyed: to the cable it is a change of length.
func (t *trials) unseenSupportCause() *Cause {
	if t.j.in.frame.surveyed || !t.j.in.have[inSpan] {
		return nil
	}
	s, err := t.try(trialOptions{drop: []int{1}})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: SupportMoved, Unit: "m"}).of(s)
	longer := t.size(s, 1)
	// A chord shorter by d leaves the cable longer by d times the cosine of the chord, nearly.
	x := t.j.in.x
	cos := x[inSpan] / math.Hypot(x[inSpan], x[inRise])
	size := times(*longer, -1/cos)
	c.Size = &size
	c.Text = fmt.Sprintf("The supports stand %s than designed; they were not surveyed.", sided(size, "farther apart", "closer together"))
	c.Check = "Survey both supports and code them A and B."
	return c
}

// localCause looks for a kink in the shape and holds everything against it.
func (j *judgement) localCause() *Cause {
	c := &Cause{Kind: LoadAtOnePlace, Unit: "N", Standing: DoesNotFit, ChiSquare: math.Inf(1)}
	if !j.in.frame.surveyed || len(j.in.local) >= mostFitted {
		return nil
	}
	again := j.Case
	again.Fit.FindLoads++
	listed, told := again.listedHere(), again.localHere()
	r, err := again.fit(listed, told)
	if err != nil || len(r.Loads) <= len(j.r.Loads) {
		return nil
	}
	k := again.judgement(r, listed, told)
	if !k.p.known(outS0Difference) {
		return nil
	}
	t, err := k.newTrials()
	if err != nil {
		return nil
	}
	for i, row := range t.rows {
		t.off[i] = row.chord != 0
	}
	s, err := t.try(trialOptions{})
	if err != nil {
		return nil
	}
	c.of(s)
	c.Standing = ""
	k.a.HorizontalTension = k.p.quantity(outH)
	for _, l := range k.localSummary() {
		if l.From == FoundInShape && l.Load != nil {
			c.Size, c.At = l.Load, &l.Station
		}
	}
	if c.Size == nil {
		return nil
	}
	if c.Size.Value < 0 {
		c.Text = fmt.Sprintf("Something holds the cable up with %s at station %s.", force(negated(*c.Size)), Metre.Figure(*c.At))
	} else {
		c.Text = fmt.Sprintf("A load of %s hangs at station %s: the shape has a kink there.", force(*c.Size), Metre.Figure(*c.At))
	}
	c.Check = fmt.Sprintf("Go and look at station %s; weigh or list what hangs or pushes there. Points around it surveyed wrongly together would look the same.", Metre.Value(*c.At))
	return c
}

// surveyCause frees the curvature. The tests of the points speak for or against it.
func (t *trials) surveyCause() *Cause {
	k := t.j.in.x[inCurvature]
	s, err := t.try(trialOptions{free: []step{{inCurvature, k}}})
	if err != nil {
		return nil
	}
	c := (&Cause{Kind: SurveyWrong, Unit: "m"}).of(s)
	factor := 1 + s.freed + t.shift(s, inCurvature)/k
	sag := t.j.p.y[outSagMid]
	c.Size = &Quantity{Value: sag * (1 - factor), U: math.Abs(sag) * s.u}
	doubt := t.j.surveyDoubted()
	c.OffRecord = offRecord(Quantity{Value: factor - 1, U: s.u}, t.j.uOf(inCurvature)/k)
	switch {
	case !(factor > 0):
		c.Standing, c.Why = Impossible, "the cable would not hang down"
	case doubt == "":
		c.Standing, c.Why = AgainstRecord, fmt.Sprintf("the points agree among themselves; their sag would be at least %.0f standard uncertainties off", c.OffRecord)
	}
	word := "too great"
	size := *c.Size
	if size.Value < 0 {
		word, size = "too small", negated(size)
	}
	c.Text = fmt.Sprintf("The survey shows the sag %s %s%s.", Millimetre.Figure(size), word, doubt)
	c.Check = fmt.Sprintf("Survey again from another set-up, with heights and targets read anew: the sag at mid-span would come out as %s.", Metre.Value(Quantity{Value: sag * factor, U: c.Size.U}))
	return c
}

// surveyDoubted says why the tests of the points speak against the survey; "" when they do not.
func (j *judgement) surveyDoubted() string {
	r := j.r
	all := len(r.Observations) + len(r.Rejected)
	switch {
	case 5*len(r.Rejected) > all:
		return fmt.Sprintf(": %d of %d points had to be left out", len(r.Rejected), all)
	case len(r.Stretches) > 0:
		return ": several points lie off the curve together"
	case r.APriori && r.DegreesOfFreedom > 0 && (distuv.ChiSquared{K: float64(r.DegreesOfFreedom)}).Survival(float64(r.DegreesOfFreedom)*r.VarianceFactor) < 0.01:
		return ": its points scatter more than stated"
	}
	for _, m := range j.marks() {
		if math.Abs(m.off.Value) > 3*m.off.U && math.Abs(m.off.Value) > 0.02 {
			return ": the cable misses the mark of support " + m.name
		}
	}
	return ""
}
