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

const unknown = "not determined"

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

// visitRows are the conditions that are known and the same in all files.
func visitRows(v Visit) (out []row) {
	for _, r := range []row{{"visit", v.Date}, {"wind", v.Wind}, {"loads", v.Loads}, {"instrument", v.Instrument}, {"crew", v.Crew}} {
		if r.Value != "" && r.Value != differs {
			out = append(out, row{r.Label, clean(r.Value)})
		}
	}
	return out
}

// groups are all figures of one cable.
func groups(a *tension.Assessment) []group {
	out := []group{forces(a), comparison(a)}
	if a.Rival != nil {
		out = append(out, rivalGroup(a))
	}
	return append(out, strengthGroup(a), loadGroup(a), shapeGroup(a))
}

func forces(a *tension.Assessment) group {
	g := group{Title: "Forces today, if the load is as recorded"}
	h := or(a.HorizontalTension, force, unknown+noTension(a))
	if v := a.HorizontalTensionAtLeast; v != nil && a.HorizontalTension == nil {
		h = "at least " + forceExact(*v) + " (95 % sure); the curve is too flat for more"
	}
	g.Rows = append(g.Rows, row{"Horizontal tension H", h})
	for _, r := range a.Reactions {
		where := "support " + r.Support
		if !r.Surveyed {
			where = "end " + r.Support + " (outermost)"
		}
		g.Rows = append(g.Rows,
			row{"Tension at " + where, force(r.Tension) + ", slope " + tension.Degree.Figure(r.SlopeDeg)},
			row{"Vertical reaction there", force(r.Vertical) + upOrDown(r)})
	}
	return g
}

func noTension(a *tension.Assessment) string {
	if a.Load.Hanging.Value == 0 {
		return ": no load on file"
	}
	return ": the curve is too flat for this survey"
}

func upOrDown(r tension.Reaction) string {
	if r.Vertical.Value < 0 && r.Surveyed {
		return " (the support holds the cable down)"
	}
	return ""
}

func comparison(a *tension.Assessment) group {
	g := group{Title: "Against the design"}
	e := a.Expected
	if e == nil {
		g.Rows = append(g.Rows, row{"Expected tension", "no design state to compare with: see findings"})
		return g
	}
	g.Rows = append(g.Rows,
		row{"H expected today", force(e.HorizontalTension)},
		row{"Ratio today / expected", or(e.Ratio, tension.Plain.Figure, unknown)},
		row{"Limits", fmt.Sprintf("slack below %.2f, overload above %.2f (%s)", e.SlackBelow, e.OverloadAbove, e.LimitsFrom)},
		row{"Probabilities", fmt.Sprintf("slack %s, inside the limits %s, overload %s", tension.Probability(e.PSlack), tension.Probability(e.PInside), tension.Probability(e.POverload))},
		row{"Sag expected / measured", length(e.SagMid) + " / " + length(e.MeasuredSagMid)},
		row{"Brought to the day from", fmt.Sprintf("design temperature %+.1f °C, span from %s", e.TemperatureShift, e.SpanFrom)})
	if e.LoadRatio.Value != 1 {
		g.Rows = append(g.Rows, row{"Load on record / design load", tension.Percent.Figure(e.LoadRatio)},
			row{"H under the design load alone", force(e.UnderFiledLoad)})
	}
	if q := a.AtDesignTemperature; q != nil {
		g.Rows = append(g.Rows, row{"H at the design temperature", force(*q)})
	}
	if l := a.UnstressedLength; l != nil {
		g.Rows = append(g.Rows, row{"Unstressed length today", tension.Metre.Figure(l.Today)},
			row{"Longer than designed by", tension.Millimetre.Figure(l.Difference)})
	}
	if i := a.ImpliedLoad; i != nil {
		g.Rows = append(g.Rows, row{"Load implied by expected H", or(i.IfTensionAsExpected, tension.NewtonPerMetre.Figure, unknown)},
			row{"Load implied by length", or(i.IfLengthAsDesigned, tension.NewtonPerMetre.Figure, unknown)})
	}
	return g
}

func rivalGroup(a *tension.Assessment) group {
	v := a.Rival
	g := group{Title: "The other reading: length as designed, load not"}
	g.Rows = append(g.Rows, row{"H then", force(v.HorizontalTension)}, row{"Ratio then", tension.Plain.Figure(v.Ratio)},
		row{"Load then / load on record", tension.Percent.Figure(v.LoadFactor)}, row{"Load beside the record then", tension.NewtonPerMetre.Figure(v.ExtraLoad)})
	state := "open: nothing on record excludes it"
	if v.Excluded {
		state = "excluded by " + v.ExcludedBy
	}
	g.Rows = append(g.Rows, row{"This reading is", state})
	return g
}

func strengthGroup(a *tension.Assessment) group {
	g := group{Title: "Strength"}
	s := a.Strength
	if s == nil {
		g.Rows = append(g.Rows, row{"Use of the permitted tension", "not checked: see findings"})
		return g
	}
	g.Rows = append(g.Rows, row{"Greatest tension", force(s.GreatestT)},
		row{"Permitted", fmt.Sprintf("%s (breaking load / %.3g)", forceExact(s.Permitted), s.SafetyFactor)},
		row{"Use", fmt.Sprintf("%s; over: %s", tension.Percent.Figure(s.Use), tension.Probability(s.POver))})
	if s.RivalUse != nil && a.Rival != nil && !a.Rival.Excluded {
		g.Rows = append(g.Rows, row{"Use in the other reading", tension.Percent.Figure(*s.RivalUse)})
	}
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
	if l.Hanging.Value > 0 {
		g.Rows = append(g.Rows, row{"All, per metre as it hangs", tension.NewtonPerMetre.Figure(l.Hanging)})
	} else {
		g.Rows = append(g.Rows, row{"Load", "none on file"})
	}
	record := map[survey.LoadStatus]string{survey.LoadsAsFiled: "looked at, as filed", survey.LoadsListed: "looked at, listed", survey.LoadsNotChecked: "NOT CHECKED"}[l.Record]
	temperature := or(a.Temperature, tension.DegreeCelsius.Figure, "not recorded")
	g.Rows = append(g.Rows, row{"Record of loads", record}, row{"Cable temperature", temperature})
	return g
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
	for _, c := range []struct {
		label string
		q     *tension.Quantity
	}{{"Catenary constant a = H/w", f.CatenaryConstant}, {"Parabola parameter p = H/q", f.ParabolaParameter}, {"Constant H/(w + q)", f.MixedConstant}} {
		if c.q != nil {
			g.Rows = append(g.Rows, row{c.label, tension.Metre.Figure(*c.q)})
		}
	}
	g.Rows = append(g.Rows, row{"Chord, horizontal", tension.Metre.Figure(f.Chord)}, row{"Rise of B over A", tension.Metre.Figure(f.Rise)},
		row{"Sag at mid-span", length(f.SagMid) + fmt.Sprintf(" (%s of the span)", tension.Percent.About(f.SagRatio))},
		row{"Greatest sag", length(f.GreatestSag) + fmt.Sprintf(" at station %.1f m", f.GreatestSagAt)}, row{"Arc length", tension.Metre.Figure(f.ArcLength)})
	if f.LowPointStation != nil && f.LowPointElevation != nil {
		g.Rows = append(g.Rows, row{"Low point", "station " + tension.Metre.Figure(*f.LowPointStation) + outside(a) + ", elevation " + tension.Metre.Figure(*f.LowPointElevation)})
	}
	for _, alt := range f.Alternatives {
		g.Rows = append(g.Rows, row{"As a " + string(alt.Shape), fmt.Sprintf("H %+.2f %%, %s", 100*alt.TensionOff, fitsAsWell(alt))})
	}
	return g
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

// clean makes text from a file safe to show on one line: control and direction marks become visible blanks, and what is
// very long is cut.
func clean(s string) string {
	s = strings.Map(func(r rune) rune {
		switch {
		case r < ' ' || r == 0x7f || (r >= 0x80 && r < 0xa0),
			r >= 0x200b && r <= 0x200f, r >= 0x2028 && r <= 0x202e, r >= 0x2060 && r <= 0x2069, r == 0xfeff:
			return '·'
		}
		return r
	}, s)
	if runes := []rune(s); len(runes) > 120 {
		s = string(runes[:120]) + "…"
	}
	return s
}
