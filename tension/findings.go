package tension

import (
	"fmt"
	"math"
	"strings"

	"tautbook/fit"
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

// tellLocal says what hangs at one place, and what it is worth in H to know it.
func (j *judgement) tellLocal() {
	for _, l := range j.a.Load.Local {
		if l.OffTold != nil && math.Abs(*l.OffTold) > 3 {
			j.add("local-load-off", Look, "The kink at station %s does not agree with the %s on record for %s: by the shape alone the load differs by %+.1f standard uncertainties. Weigh it, or check its place.",
				Metre.Figure(l.Station), force(*l.Told), orUnnamed(l.What), *l.OffTold)
		}
		size := "of unknown size"
		if l.Load != nil {
			size = force(*l.Load)
		}
		switch {
		case l.From != FoundInShape:
			j.add("local-load", Note, "Local load on record at station %s: %s, %s (%s).", Metre.Figure(l.Station), orUnnamed(l.What), size, l.From)
		case l.Kink.Value > 0:
			j.add("local-load-found", Act, "The shape has a kink at station %s: a local load of %s hangs there that no record names (probability of such a kink by chance: %s). Go and look. Every force here counts it in.",
				Metre.Figure(l.Station), size, Probability(*l.Chance))
		default:
			j.add("local-lift-found", Act, "The shape has an upward kink at station %s: something holds the cable up there (a prop, a branch, a stay) with %s (probability by chance: %s). Go and look.",
				Metre.Figure(l.Station), strings.TrimPrefix(size, "-"), Probability(*l.Chance))
		}
	}
	if j.doubted != "" {
		j.add("record-doubted", Act, "The record of loads says %q, but a local load was found that it does not name: the record was not relied on.", j.doubted)
	}
}

func orUnnamed(s string) string {
	if s == "" {
		return "unnamed load"
	}
	return s
}

// tellReading says which reading of the shape a direct reading supports.
func (j *judgement) tellReading() {
	d := j.a.Direct
	if d == nil {
		return
	}
	word := func(off float64) string {
		if off = math.Abs(off); off < apart {
			return "agrees"
		}
		return fmt.Sprintf("disagrees (%.1f standard uncertainties)", off)
	}
	text := fmt.Sprintf("The direct reading %s with the load as recorded", word(d.OffRecord))
	if d.OffLength != nil {
		text += fmt.Sprintf(" and %s with the length as designed", word(*d.OffLength))
	}
	j.add("direct-reading", Note, "%s. Together with the shape it implies a load of %s.", text, NewtonPerMetre.Figure(d.Load))
}

func (j *judgement) tellLength() {
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
	r := j.r
	if !j.in.frame.surveyed {
		j.add("supports-not-surveyed", Look, "Both supports must be surveyed and coded A and B for reactions at the supports; those given are at the outermost points. A moved support would not be seen.")
	}
	for _, e := range []struct {
		name string
		end  fit.End
		z    float64
		at   int
	}{{"A", r.A, r.Curve.Z1, 0}, {"B", r.B, r.Curve.Z2, 1}} {
		if !e.end.Surveyed {
			continue
		}
		off := e.z - e.end.MarkZ
		u := math.Sqrt(r.Cov[e.at][e.at] + e.end.UMarkZ*e.end.UMarkZ)
		if math.Abs(off) > 3*u {
			word := "above"
			if off < 0 {
				word = "below"
			}
			j.add("mark-off-cable", Look, "The fitted cable passes %s %s the mark of support %s. Either the mark is not on the centre line, or the cable bends near the support, or the code is wrong.",
				Millimetre.Figure(Quantity{Value: math.Abs(off), U: u}), word, e.name)
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

func (j *judgement) tellSurvey() {
	r := j.r
	if why := j.unfit(); why != "" {
		j.add("not-one-curve", Act, "%s", why)
	}
	if n := len(r.Rejected); n > 0 {
		j.add("rejected", Look, "%d of %d points left out: %s.", n, n+len(r.Observations), suspects(r.Rejected))
	}
	j.tellSwing()
	if n := len(r.LeftOut); n > 0 {
		j.add("left-out", Note, "%d points near supports or local loads were not used, because bending makes another shape there: %s.", n, names(r.LeftOut))
	}
	if len(r.Suspects) > 0 {
		j.add("suspects", Look, "Suspect points, still used: %s. Check them in the field book; --reject-beyond leaves them out.", suspects(r.Suspects))
	}
	if r.APriori && !r.VarianceOK {
		if r.VarianceFactor > 1 {
			j.add("variance", Look, "The points scatter more than the stated accuracy allows: variance factor %.2f, 95 %% limit %.2f. Uncertainties were widened by %.2f.",
				r.VarianceFactor, r.ChiSquareHigh, math.Sqrt(r.ScaledBy))
		} else {
			j.add("variance", Note, "The points scatter less than the stated accuracy: variance factor %.2f, 95 %% limit %.2f. The stated accuracy was kept.", r.VarianceFactor, r.ChiSquareLow)
		}
	}
	if !r.APriori {
		few := ""
		if j.in.few > 1.02 {
			few = fmt.Sprintf("; u widened by %.2f because they are few", j.in.few)
		}
		j.add("accuracy-estimated", Note, "No instrument accuracy was stated: it is estimated from the residuals (%d degrees of freedom%s), so a constant error of the instrument does not show.",
			r.DegreesOfFreedom, few)
	}
	if r.Widening > 1 {
		j.add("correlated", Note, "Neighbouring residuals are alike (lag-1 correlation %.2f): uncertainties were widened by %.2f.", r.Lag1, r.Widening)
	}
	if r.RunsP < 0.001 && len(r.Observations) >= 10 {
		j.add("pattern", Look, "The residuals are not scattered by chance (runs test, probability %s): the cable may not hang freely in this shape (a local load, a touching branch, a kink), or the points are not all on one cable.",
			Probability(r.RunsP))
	}
}

func (j *judgement) tellSwing() {
	if w := j.a.Fit.Swing; w != nil {
		side, under := "left", "side load"
		if w.AngleDeg.Value < 0 {
			side = "right"
		}
		angle := w.AngleDeg
		angle.Value = math.Abs(angle.Value)
		if w.SideLoad != nil {
			under = NewtonPerMetre.Figure(Quantity{Value: math.Abs(w.SideLoad.Value), U: w.SideLoad.U})
		}
		j.add("swing", Look, "The cable hangs %s out of the vertical, to the %s seen from A to B, as under %s across the span: wind, or something that pulls aside. Shape, sag and H are those in its own plane, under the resultant load.",
			Degree.Figure(angle), side, under)
	}
	if w := j.r.Swing; w != nil && w.Gusty {
		j.add("gusty", Look, "The points scatter across the plane (%s) more than their accuracy allows: the cable was moving, or some points are on something else. Survey it again in still air.", Millimetre.About(w.Scatter))
	}
}

// names are the points of a list with the reason of each.
func names(list []fit.Suspect) string {
	const most = 6
	var out []string
	for i, s := range list {
		if i == most {
			out = append(out, fmt.Sprintf("and %d more", len(list)-most))
			break
		}
		name := s.ID
		if name == "" {
			name = fmt.Sprintf("line %d", s.Line)
		}
		out = append(out, name+" "+s.Reason)
	}
	return strings.Join(out, "; ")
}

func suspects(list []fit.Suspect) string {
	const most = 6
	var out []string
	for i, s := range list {
		if i == most {
			out = append(out, fmt.Sprintf("and %d more", len(list)-most))
			break
		}
		name := s.ID
		if name == "" {
			name = fmt.Sprintf("line %d", s.Line)
		}
		out = append(out, fmt.Sprintf("%s (%+.0f mm, %s)", name, 1000*s.Residual, s.Reason))
	}
	return strings.Join(out, ", ")
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
