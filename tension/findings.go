package tension

import (
	"fmt"
	"math"
	"strings"

	"tautbook/survey"
)

func (j *judgement) add(id string, level Level, format string, args ...any) {
	j.a.Findings = append(j.a.Findings, Finding{ID: id, Level: level, Text: fmt.Sprintf(format, args...)})
}

// tell writes the reason, the next step and the findings.
func (j *judgement) tell() {
	j.a.Findings = []Finding{}
	j.a.Reason, j.a.NextStep = j.reason(), j.nextStep()
	j.tellStrength()
	j.tellLoads()
	j.tellLocal()
	j.tellReading()
	j.tellReconciled()
	j.tellExplanation()
	j.tellLength()
	j.tellTemperature()
	j.tellSupports()
	j.tellSurvey()
	j.tellShape()
	j.tellMissing()
	j.tellExact()
	j.tellMonteCarlo()
}

// tellMonteCarlo says whether the linear uncertainties hold.
func (j *judgement) tellMonteCarlo() {
	if m := j.a.MonteCarlo; m != nil {
		level := Note
		if !m.LinearHolds {
			level = Look
		}
		j.add("monte-carlo", level, "%s", m.Text)
	}
}

func (j *judgement) tellStrength() {
	s := j.a.Strength
	if s == nil {
		return
	}
	if s.POver > 1-sure {
		j.add("strength", Act, "The greatest tension, %s, uses %s of what the breaking load and the safety factor %.3g permit (%s). Probability that it is over: %s.",
			force(s.GreatestT), Percent.Value(s.Use), s.SafetyFactor, force(Quantity{Value: s.Permitted}), Probability(s.POver))
	}
	if s.RivalPOver != nil && *s.RivalPOver > 1-sure && j.a.Rival != nil && !j.a.Rival.Excluded {
		j.add("strength-rival", Act, "If the length is as designed and the load is not, the greatest tension uses %s of the permitted one.", Percent.Value(*s.RivalUse))
	}
}

func (j *judgement) tellLoads() {
	x := j.a.Expected
	if j.record == survey.LoadsNotChecked && j.a.HorizontalTension != nil {
		j.add("loads-not-checked", Look, "Nobody recorded whether the loads were looked at. Every force here holds only if the load is as filed: shape gives tension divided by load, never tension alone.")
	}
	if x != nil && len(j.in.listed) > 0 {
		var names []string
		for _, l := range j.in.listed {
			names = append(names, fmt.Sprintf("%s (%s, %s)", orUnnamed(l.What), NewtonPerMetre.Figure(l.Load), l.Spread))
		}
		j.add("loads-listed", Note, "Load on record beside the filed one: %s. The load is %s of the design load; the expected tension is that of the designed cable under the load on record.",
			strings.Join(names, ", "), Percent.Figure(x.LoadRatio))
	}
	if s := j.a.Stiffness; s != nil {
		j.add("stiffness", Note, "%s", s.Meaning)
		if j.record == survey.LoadsNotChecked && (j.a.Verdict == AsDesigned || j.a.Verdict == Undecided) {
			if s.HiddenLoad == nil {
				j.add("hidden-load", Look, "An extra even load of ten times the present one could hang here without moving the sag by more than its uncertainty. Only a look at the cable, or a direct reading, can exclude it.")
			} else {
				j.add("hidden-load", Look, "An extra even load of up to %s (%s of the present load) could hang here without moving the sag by more than its uncertainty.",
					NewtonPerMetre.About(*s.HiddenLoad), Percent.About(*s.HiddenLoad/j.a.Load.Hanging.Value))
			}
		}
	}
	if v := j.a.Rival; v != nil && v.Excluded && j.record == survey.LoadsNotChecked {
		j.add("rival-refuted", Note, "The load alone cannot explain the shape; excluded by %s. Length and load may still both have changed.", v.ExcludedBy)
	}
}

func orUnnamed(s string) string {
	if s == "" {
		return "unnamed load"
	}
	return s
}

// tellExplanation says what would explain a cable that is not as recorded.
func (j *judgement) tellExplanation() {
	if e := j.a.Explanation; e != nil && e.Needed {
		j.add("explanation", Look, "%s", strings.TrimSpace(e.Says+" "+e.Tells))
	}
}

func (j *judgement) tellLength() {
	if e := j.a.Explanation; e != nil && e.Needed {
		return // the explanation says it
	}
	l := j.a.UnstressedLength
	if d := j.a.Direct; d != nil && math.Abs(d.OffRecord) > apart {
		return // the load on record is not the load: the length that follows from it is none either
	}
	if l == nil || math.Abs(l.Difference.Value) <= l.Difference.Expanded() {
		return
	}
	word, cause := "longer", "slip at an anchorage, creep, or take-up let out"
	if l.Difference.Value < 0 {
		word, cause = "shorter", "take-up drawn in, or a length other than designed from the start"
	}
	size := Quantity{Value: math.Abs(l.Difference.Value), U: l.Difference.U}
	warmth := l.Difference.Value / (l.Design.Value * j.in.x[inExpansion])
	j.add("length", Look, "Read with the load on record, the cable is %s %s (unstressed) than designed: %s. Temperature alone would have to be wrong by %.0f °C to look the same.",
		Millimetre.Figure(size), word, cause, math.Abs(warmth))
}

func (j *judgement) tellTemperature() {
	x := j.a.Expected
	if j.temperatureAssumed && x != nil {
		j.add("temperature-assumed", Look, "No cable temperature was recorded. The design temperature %.3g °C was taken with a standard uncertainty of %.0f °C (common practice, no source).",
			j.in.x[inDesignTemp], unknownTemperatureU)
	}
	if x == nil || x.Ratio == nil || x.Uncorrected == nil || len(j.in.listed) > 0 {
		return
	}
	naive, true_ := x.Uncorrected.Value, x.Ratio.Value
	side := func(r float64) int {
		switch {
		case r < x.SlackBelow:
			return -1
		case r > x.OverloadAbove:
			return 1
		}
		return 0
	}
	if side(naive) != side(true_) {
		j.add("naive-verdict", Note, "Held against the design tension without bringing it to the day (%+.1f °C, and today's span and load), the ratio would read %.2f instead of %.2f: beyond the limits for one, not for the other.",
			x.TemperatureShift, naive, true_)
	}
}

func (j *judgement) tellSupports() {
	if !j.in.frame.surveyed {
		j.add("supports-not-surveyed", Look, "Both supports must be surveyed and coded A and B for reactions at the supports; those given are at the outermost points. A moved support would not be seen.")
	}
	for _, m := range j.marks() {
		if math.Abs(m.off.Value) > 3*m.off.U {
			word := "above"
			if m.off.Value < 0 {
				word = "below"
			}
			j.add("mark-off-cable", Look, "The fitted cable passes %s %s the mark of support %s. Either the mark is not on the centre line, or the cable bends near the support, or the code is wrong.",
				Millimetre.Figure(Quantity{Value: math.Abs(m.off.Value), U: m.off.U}), word, m.name)
		}
	}
	j.tellMoved("span", "farther apart", "closer together", outChord, inSpan)
	j.tellMoved("rise", "higher at B", "lower at B", outRise, inRise)
}

// tellMoved compares a surveyed chord measure with the design.
func (j *judgement) tellMoved(name, more, less string, out, design int) {
	if !j.in.frame.surveyed || !j.in.have[design] {
		return
	}
	diff := Quantity{Value: j.p.y[out] - j.in.x[design], U: j.p.u(out)}
	for i, s := range j.in.sources {
		if s.directions[0][0].at == design {
			diff.U = math.Hypot(diff.U, j.in.sources[i].directions[0][0].by)
		}
	}
	if math.Abs(diff.Value) <= diff.Expanded() {
		return
	}
	word := more
	if diff.Value < 0 {
		word = less
	}
	level := Note
	if math.Abs(diff.Value) > 3*diff.U {
		level = Look
	}
	effect := ""
	if h := j.expectedAt(design); h > 0 {
		effect = fmt.Sprintf(" With the design %s the expected tension would be %s instead of %s.", name, force(Quantity{Value: h}), force(Quantity{Value: j.p.y[outHExpected]}))
	}
	j.add("support-moved-"+name, level, "The supports are %s %s than designed.%s", Millimetre.Figure(Quantity{Value: math.Abs(diff.Value), U: diff.U}), word, effect)
}

// expectedAt is the expected tension with one chord measure as designed, 0 when it has no state.
func (j *judgement) expectedAt(design int) float64 {
	x, y := j.in.x, &j.p.y
	if math.IsNaN(y[outHExpected]) {
		return 0
	}
	ch := Chord{Length: y[outChord], Rise: y[outRise]}
	if design == inSpan {
		ch.Length = x[inSpan]
	} else {
		ch.Rise = x[inRise]
	}
	l := j.in.load(x)
	c := Cable{SelfWeight: l.self, DeckLoad: l.deck, AxialStiffness: x[inAxial], Expansion: x[inExpansion]}
	dt := x[inTemperature] - x[inDesignTemp]
	_, _, points, err := j.in.measured(c, x, y[outH], Chord{Length: y[outChord], Rise: y[outRise]}, dt)
	if err != nil {
		return 0
	}
	st, err := j.in.under(c, 0, y[outS0Design], ch, dt, points)
	if err != nil {
		return 0
	}
	return st.h
}

// tellTogether says which points lie off the curve together, and that too many were left out to be errors only.
func (j *judgement) tellTogether() {
	r := j.r
	const asFor = "Still used: look there for a local load, a touching branch, a bend near a clamp, a wrong target height for some points, or points on another cable."
	j.a.together = r.Torn
	for _, s := range r.Stretches {
		j.a.together = append(j.a.together, s.Points...)
		n, side := len(s.Points), "above"
		if s.Off < 0 {
			side = "below"
		}
		why := "neighbours of that many together are not chance errors"
		if s.Smooth {
			why = "the points around lead up to them without a step"
		}
		what := fmt.Sprintf("%d points between %.2f m and %.2f m (%s) lie", n, s.From, s.To, suspects(s.Points))
		if n == 1 {
			what = fmt.Sprintf("Point %s at %.2f m lies", suspects(s.Points), s.From)
		}
		j.add("off-together", Act, "%s about %s %s the curve through the others, and %s. %s", what, Millimetre.About(math.Abs(s.Off)), side, why, asFor)
	}
	all := len(r.Observations) + len(r.Rejected)
	switch {
	case r.Torn != nil:
		j.add("torn", Act, "%d of %d points lie off the curve that the rest agrees on: too many to leave out, so all are used and no figure here can be trusted. Check units, codes and set-ups, then survey again.", len(r.Torn), all)
	case 3*len(r.Rejected) > all:
		j.add("many-rejected", Act, "More than a third of the points, %d of %d, were left out: the figures rest on the rest alone. Find out what went wrong with the survey before acting on them.", len(r.Rejected), all)
	}
}

func (j *judgement) tellShape() {
	f := j.a.Fit
	if !j.hangs() {
		if j.unfit() == "" {
			j.add("flat", Act, "The curve is too flat for this survey: the sag at mid-span is %s, no more than its uncertainty.", Metre.Figure(f.SagMid))
		}
		return
	}
	if k, u := j.in.x[inCurvature], j.uCurvature(); u > 0.1*k && j.p.known(outH) {
		hang := j.p.y[outHanging]
		j.add("lopsided", Look, "The curve is so flat that the interval of H is lopsided: from the survey alone it runs from %s to %s (95 %%).",
			force(Quantity{Value: hang / quantile(k, u, 0.975)}), force(Quantity{Value: hang / quantile(k, u, 0.025)}))
	}
	switch {
	case f.SagRatio >= 0.1:
		j.add("sag-ratio", Note, "Sag is %s of the span: a tenth or more suits a tensile structure (common practice, no source).", Percent.About(f.SagRatio))
	case f.SagRatio < 0.05:
		j.add("sag-ratio", Note, "Sag is %s of the span. Under a twentieth, tension exceeds 2.5 times the whole load and small movements change it much (common practice, no source).",
			Percent.About(f.SagRatio))
	}
	if w := f.Share; w != nil {
		told := Percent.Figure(Quantity{Value: math.Min(1, math.Max(0, w.Value)), U: w.U})
		if math.Abs(w.Value-f.SelfShare) > 3*w.U {
			j.add("share", Look, "By the shape %s of the even load hangs along the cable and the rest along the deck; on record it is %s. Taking the shape's word would change H by %+.1f %%. Check which load the cable carries.",
				told, Percent.About(f.SelfShare), 100*w.Off)
		} else {
			j.add("share", Note, "The points tell how the load is spread: %s of it along the cable, in keeping with the %s on record.", told, Percent.About(f.SelfShare))
		}
	}
	for _, alt := range f.Alternatives {
		if alt.DeltaAICc < -10 {
			j.add("shape", Look, "The points speak for a %s against the %s that the filed load asks for (AICc better by %.0f); it would change H by %+.1f %%. Check which load the cable carries.",
				alt.Shape, f.Shape, -alt.DeltaAICc, 100*alt.TensionOff)
		}
	}
}

// tellExact names the inputs that were given without an uncertainty: they count as known exactly, which they rarely are.
func (j *judgement) tellExact() {
	if !j.p.known(outH) {
		return
	}
	var names []string
	for _, in := range []struct {
		at   int
		name string
	}{{inSelfWeight, "self weight"}, {inDeckLoad, "deck load"}, {inTemperature, "cable temperature"}, {inAxial, "axial stiffness"}, {inExpansion, "expansion"}} {
		if j.in.have[in.at] && !j.in.uncertain(in.at) {
			names = append(names, in.name)
		}
	}
	if len(names) > 0 {
		j.add("taken-as-exact", Look, "Given without an uncertainty and taken as exact: %s. U is too small by what they are really off.", strings.Join(names, ", "))
	}
}

func (j *judgement) tellMissing() {
	if j.d == nil {
		j.add("no-design", Look, "No line of the cables file is for this span: shape only, no forces and no verdict.")
		return
	}
	why := map[string][]string{}
	var order []string
	for _, l := range j.p.lacks {
		if why[l.what] == nil {
			order = append(order, l.what)
		}
		why[l.what] = append(why[l.what], l.why)
	}
	for _, what := range order {
		j.add("missing", Look, "No %s: %s.", what, strings.Join(why[what], "; "))
	}
	if j.d.BreakingLoad == nil || j.d.SafetyFactor == nil {
		j.add("no-strength", Note, "Strength was not checked: breaking_load or safety_factor is missing.")
	}
	if e := j.a.Expected; e != nil {
		if e.SpanFrom == "design" {
			j.add("span-from-design", Note, "The expected tension is for the design span, because both supports were not surveyed.")
		}
		if !j.in.have[inSpan] {
			j.add("no-design-span", Note, "The design span is missing: the surveyed one stands in, so a moved support cannot be seen.")
		}
	}
}
