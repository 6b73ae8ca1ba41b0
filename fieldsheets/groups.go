package fieldsheets

import (
	"fmt"
	"strings"

	"tautbook/fit"
	"tautbook/survey"
	"tautbook/tension"
)

// row is one printed figure: what it is and what it says.
type row struct{ Label, Value string }

// group is a titled list of figures. Text and HTML print the same groups.
type group struct {
	Title string
	Rows  []row
}

// Why a figure is not there, in words that follow "not determined: ".
const (
	tooFlat    = "the curve is too flat for this survey"
	noLoad     = "no load on file"
	noDesign   = "no design values to compare with, see findings"
	noRival    = "no even load explains this shape at the designed length"
	noStrength = "breaking load, safety factor or tension is missing, see findings"
)

// unknown is what stands where a figure could not be worked out.
func unknown(why string) string { return "not determined: " + why }

// or prints a quantity, or words where there is none.
func or(q *tension.Quantity, print func(tension.Quantity) string, otherwise string) string {
	if q == nil {
		return otherwise
	}
	return print(*q)
}

func force(q tension.Quantity) string { return tension.ForceScale(q.Value).Figure(q) }

func forceExact(v float64) string { return force(tension.Quantity{Value: v}) }

// length prints metres, or millimetres for what is small.
func length(q tension.Quantity) string {
	if q.Value < 1 && q.Value > -1 {
		return tension.Millimetre.Figure(q)
	}
	return tension.Metre.Figure(q)
}

// name is how a cable is called on a sheet.
func name(a *tension.Assessment) string {
	if a.Span == "" {
		return a.Cable
	}
	return a.Cable + ", span " + a.Span
}

// visitRows are the conditions that were recorded; those that differ between files are named and stand with each file.
func visitRows(v Visit) (out []row) {
	if v.Date == "" {
		v.Date = "date not recorded"
	}
	var different []string
	for _, r := range []row{{"visit", v.Date}, {"wind", v.Wind}, {"loads", v.Loads}, {"instrument", v.Instrument}, {"crew", v.Crew}} {
		switch r.Value {
		case "":
		case differs:
			different = append(different, r.Label)
		default:
			out = append(out, row{r.Label, clean(r.Value)})
		}
	}
	if len(different) > 0 {
		out = append(out, row{"different between files:", strings.Join(different, ", ")})
	}
	return out
}

// groups are all figures of one cable.
func groups(a *tension.Assessment) []group {
	out := []group{forces(a), comparison(a)}
	if a.Expected != nil {
		out = append(out, rivalGroup(a))
	}
	if a.Direct != nil {
		out = append(out, directGroup(a))
	}
	if a.Explanation != nil {
		out = append(out, explanationGroup(a))
	}
	if a.Reconciled != nil {
		out = append(out, evidenceGroup(a))
	}
	if a.MonteCarlo != nil {
		out = append(out, monteCarloGroup(a.MonteCarlo))
	}
	return append(out, strengthGroup(a), loadGroup(a), shapeGroup(a))
}

func forces(a *tension.Assessment) group {
	g := group{Title: "Forces today, if the load is as recorded"}
	h := or(a.HorizontalTension, force, unknown(whyNoTension(a)))
	if v := a.HorizontalTensionAtLeast; v != nil && a.HorizontalTension == nil {
		h = "at least " + forceExact(*v) + " (95 % sure); " + tooFlat + " to say more"
	}
	g.Rows = append(g.Rows, row{"Horizontal tension H", h})
	for _, r := range a.Reactions {
		where := "support " + clean(r.Support)
		if !r.Surveyed {
			where = "end " + clean(r.Support) + " (outermost)"
		}
		g.Rows = append(g.Rows,
			row{"Tension at " + where, force(r.Tension) + ", slope " + tension.Degree.Figure(r.SlopeDeg)},
			row{"Vertical reaction there", force(r.Vertical) + upOrDown(r)})
		if r.Left != nil {
			g.Rows = append(g.Rows, row{"Reaction across the span", force(*r.Left) + ", positive to the left from A to B"})
		}
	}
	if len(a.Reactions) == 0 {
		g.Rows = append(g.Rows, row{"Reactions at A and B", unknown(whyNoTension(a))})
	}
	return g
}

func whyNoTension(a *tension.Assessment) string {
	if a.Load.Hanging.Value == 0 {
		return noLoad
	}
	return tooFlat
}

// whyNotBrought says why there is no tension at the design temperature or no unstressed length.
func whyNotBrought(a *tension.Assessment) string {
	switch {
	case a.HorizontalTension == nil:
		return whyNoTension(a)
	case a.Expected == nil:
		return noDesign
	}
	return "the elastic state has no solution for these values"
}

func upOrDown(r tension.Reaction) string {
	if r.Vertical.Value < 0 && r.Surveyed {
		return " (the support holds the cable down)"
	}
	return ""
}

func comparison(a *tension.Assessment) group {
	g := group{Title: "Against the design, if the load is as recorded"}
	e := a.Expected
	if e == nil {
		g.Rows = append(g.Rows, row{"Expected tension", unknown(noDesign)})
		return g
	}
	g.Rows = append(g.Rows,
		row{"Ratio today / expected", or(e.Ratio, tension.Plain.Figure, unknown(whyNoTension(a)))},
		row{"Limits", fmt.Sprintf("slack below %.2f, overload above %.2f (%s)", e.SlackBelow, e.OverloadAbove, e.LimitsFrom)},
		row{"Probabilities", fmt.Sprintf("slack %s, inside the limits %s, overload %s", tension.Probability(e.PSlack), tension.Probability(e.PInside), tension.Probability(e.POverload))},
		row{"Brought to the day from", fmt.Sprintf("design temperature %+.1f °C, span from %s", e.TemperatureShift, e.SpanFrom)})
	if e.LoadRatio.Value != 1 {
		g.Rows = append(g.Rows, row{"Load on record / design load", tension.Percent.Figure(e.LoadRatio)},
			row{"H under design load alone", force(e.UnderFiledLoad)})
	}
	g.Rows = append(g.Rows, row{"H at the design temperature", or(a.AtDesignTemperature, force, unknown(whyNotBrought(a)))})
	if l := a.UnstressedLength; l != nil {
		g.Rows = append(g.Rows, row{"Unstressed length today", tension.Metre.Figure(l.Today)},
			row{"Longer than designed by", tension.Millimetre.Figure(l.Difference)})
	} else {
		g.Rows = append(g.Rows, row{"Unstressed length today", unknown(whyNotBrought(a))})
	}
	if i := a.ImpliedLoad; i != nil {
		g.Rows = append(g.Rows, row{"Load implied by expected H", or(i.IfTensionAsExpected, tension.NewtonPerMetre.Figure, unknown(tooFlat))},
			row{"Load implied by length", or(i.IfLengthAsDesigned, tension.NewtonPerMetre.Figure, unknown(noRival))})
		if i.IfTensionAsRead != nil {
			g.Rows = append(g.Rows, row{"Load implied by the reading", tension.NewtonPerMetre.Figure(*i.IfTensionAsRead)})
		}
		if i.Together != "" {
			g.Rows = append(g.Rows, row{"The implied loads together", cleanSentence(i.Together)})
		}
	} else {
		g.Rows = append(g.Rows, row{"Load implied by the shape", unknown(whyNoTension(a))})
	}
	return g
}

// rivalGroup says how far the other reading is from the record and whether anything rules it out.
func rivalGroup(a *tension.Assessment) group {
	g := group{Title: "The other reading: length as designed, load not"}
	v := a.Rival
	if v == nil {
		g.Rows = append(g.Rows, row{"H then", unknown(noRival)})
		return g
	}
	g.Rows = append(g.Rows, row{"Load then / load on record", tension.Percent.Figure(v.LoadFactor)},
		row{"Load beside the record then", tension.NewtonPerMetre.Figure(v.ExtraLoad)})
	state := "open: nothing on record excludes it"
	if v.Excluded {
		state = "excluded by " + v.ExcludedBy
	}
	g.Rows = append(g.Rows, row{"This reading is", state})
	if s := a.Strength; s != nil && s.RivalPOver != nil && !v.Excluded {
		g.Rows = append(g.Rows, row{"Over the permitted tension", tension.Probability(*s.RivalPOver) + " then"})
	}
	return g
}

func strengthGroup(a *tension.Assessment) group {
	g := group{Title: "Strength, if the load is as recorded"}
	s := a.Strength
	if s == nil {
		g.Rows = append(g.Rows, row{"Use of the permitted tension", unknown(noStrength)})
		return g
	}
	g.Rows = append(g.Rows, row{"Greatest tension", force(s.GreatestT)},
		row{"Permitted", fmt.Sprintf("%s (breaking load / %.3g)", forceExact(s.Permitted), s.SafetyFactor)},
		row{"Use", fmt.Sprintf("%s; over: %s", tension.Percent.Figure(s.Use), tension.Probability(s.POver))})
	return g
}

func loadGroup(a *tension.Assessment) group {
	l := a.Load
	g := group{Title: "Load"}
	if l.SelfWeight != nil {
		g.Rows = append(g.Rows, row{"Self weight on file", tension.NewtonPerMetre.Figure(*l.SelfWeight)})
	}
	if l.DeckLoad != nil {
		g.Rows = append(g.Rows, row{"Deck load on file", tension.NewtonPerMetre.Figure(*l.DeckLoad)})
	}
	for _, e := range l.Listed {
		g.Rows = append(g.Rows, row{"Seen on the day", tension.NewtonPerMetre.Figure(e.Load) + " " + string(e.Spread) + ": " + clean(e.What)})
	}
	for _, e := range l.Local {
		g.Rows = append(g.Rows, row{"At one place", localLoad(e)})
	}
	if l.Hanging.Value > 0 {
		g.Rows = append(g.Rows, row{"All, per metre as it hangs", tension.NewtonPerMetre.Figure(l.Hanging)})
	} else {
		g.Rows = append(g.Rows, row{"Load", "none on file"})
	}
	record := map[survey.LoadStatus]string{survey.LoadsAsFiled: "looked at, as filed", survey.LoadsListed: "looked at, listed"}[l.Record]
	if record == "" {
		record = "NOT CHECKED"
	}
	temperature := or(a.Temperature, tension.DegreeCelsius.Figure, "not recorded")
	g.Rows = append(g.Rows, row{"Record of loads", record}, row{"Cable temperature", temperature})
	return g
}

// localLoad is one local load with where it hangs and how it is known.
func localLoad(l tension.LocalLoad) string {
	size := "size not known"
	if l.Load != nil {
		size = tension.ForceScale(l.Load.Value).Figure(*l.Load)
	}
	text := fmt.Sprintf("%s at station %s, %s", size, tension.Metre.Figure(l.Station), l.From)
	if l.What != "" {
		text += ": " + clean(l.What)
	}
	return text
}

func shapeGroup(a *tension.Assessment) group {
	f := a.Fit
	g := group{Title: "Shape"}
	points := fmt.Sprintf("%d used", f.PointsUsed)
	if n := len(f.Rejected); n > 0 {
		points += fmt.Sprintf(", %d left out", n)
	}
	accuracy := "estimated from the residuals"
	if f.AccuracyStated {
		accuracy = fmt.Sprintf("as stated, variance factor %.2f", f.VarianceFactor)
	}
	g.Rows = append(g.Rows, row{"Curve", string(f.Shape)}, row{"Points", points + ", scatter " + tension.Millimetre.About(f.RMS)}, row{"Accuracy", accuracy})
	known := false
	for i, c := range constants(a) {
		if c != nil {
			label := [...]string{"Catenary constant a = H/w", "Parabola parameter p = H/q", "Constant H/(w + q)"}[i]
			g.Rows, known = append(g.Rows, row{label, tension.Metre.Figure(*c)}), true
		}
	}
	if !known {
		g.Rows = append(g.Rows, row{"Curve constant", unknown(tooFlat)})
	}
	if w := f.Swing; w != nil {
		g.Rows = append(g.Rows, row{"Swing out of the vertical", tension.Degree.Figure(w.AngleDeg) + ", positive to the left from A to B"})
		if w.SideLoad != nil {
			g.Rows = append(g.Rows, row{"Side load it means", tension.NewtonPerMetre.Figure(*w.SideLoad)})
		}
	}
	g.Rows = append(g.Rows, row{"Chord, horizontal", tension.Metre.Figure(f.Chord)}, row{"Rise of B over A", tension.Metre.Figure(f.Rise)},
		row{"Sag at mid-span", length(f.SagMid) + fmt.Sprintf(" (%s of the span)", tension.Percent.About(f.SagRatio))},
		row{"Greatest sag", length(f.GreatestSag) + fmt.Sprintf(" at station %.1f m", f.GreatestSagAt)}, row{"Arc length", tension.Metre.Figure(f.ArcLength)})
	if f.LowPointStation != nil && f.LowPointElevation != nil {
		g.Rows = append(g.Rows, row{"Low point", "station " + tension.Metre.Figure(*f.LowPointStation) + outside(a) + ", elevation " + tension.Metre.Figure(*f.LowPointElevation)})
	} else {
		g.Rows = append(g.Rows, row{"Low point", unknown(tooFlat)})
	}
	for _, alt := range f.Alternatives {
		label := "As a " + string(alt.Shape)
		if alt.LocalLoads < len(a.Load.Local) {
			label = "Without the load found"
		}
		g.Rows = append(g.Rows, row{label, fmt.Sprintf("H %+.2f %%, %s", 100*alt.TensionOff, fitsAsWell(alt))})
	}
	return g
}

// constants are those of the catenary, the parabola and the mixed curve; at most one is there.
func constants(a *tension.Assessment) []*tension.Quantity {
	return []*tension.Quantity{a.Fit.CatenaryConstant, a.Fit.ParabolaParameter, a.Fit.MixedConstant}
}

func outside(a *tension.Assessment) string {
	if s := a.Fit.LowPointStation.Value; s < 0 || s > a.Fit.Chord.Value {
		return " (outside the span)"
	}
	return ""
}

// fitsAsWell puts the evidence between two shapes into words; two and ten are the usual marks of the criterion (Burnham and
// Anderson 2002, sec. 2.6).
func fitsAsWell(alt fit.Alternative) string {
	switch d := alt.DeltaAICc; {
	case d > 10:
		return "fits far worse"
	case d > 2:
		return "fits worse"
	case d < -10:
		return "fits far better"
	case d < -2:
		return "fits better"
	default:
		return "fits as well"
	}
}
