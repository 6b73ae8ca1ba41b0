package fieldsheets

import (
	"fmt"
	"math"

	"tautbook/tension"
)

// grid is a small table: one column a reading of the cable, one row a figure.
type grid struct {
	Title   string
	Columns []string
	Rows    []gridRow
}

type gridRow struct {
	Label string
	Cells []string
}

const (
	notKnown      = "not determined"
	notApplicable = "not worked out"
)

// readings puts the two readings of the measured shape beside the designed cable, nil when there is no design to put beside.
// Each holds the sag of the points; they differ in what they take as given, so the reader sees what follows from which.
func readings(a *tension.Assessment) *grid {
	e := a.Expected
	if e == nil {
		return nil
	}
	g := &grid{Title: "The readings side by side", Columns: []string{"load as recorded", "designed, today", "length as designed"}}
	one := func(q *tension.Quantity, print func(tension.Quantity) string) string { return or(q, print, notKnown) }
	var implied, use *tension.Quantity
	if a.ImpliedLoad != nil {
		implied = a.ImpliedLoad.IfLengthAsDesigned
	}
	var rivalH, rivalRatio, rivalUse *tension.Quantity
	if v := a.Rival; v != nil {
		rivalH, rivalRatio = &v.HorizontalTension, &v.Ratio
	}
	if s := a.Strength; s != nil {
		use, rivalUse = &s.Use, s.RivalUse
	}
	hanging := notKnown
	if a.Load.Hanging.Value > 0 {
		hanging = tension.NewtonPerMetre.Figure(a.Load.Hanging)
	}
	kilo := forceColumn(a.HorizontalTension, &e.HorizontalTension, rivalH)
	measured := length(e.MeasuredSagMid)
	g.Rows = []gridRow{
		{"this reading is", standing(a)},
		{"H", []string{one(a.HorizontalTension, kilo), kilo(e.HorizontalTension), one(rivalH, kilo)}},
		{"H / expected", []string{one(e.Ratio, tension.Plain.Figure), "1", one(rivalRatio, tension.Plain.Figure)}},
		{"load as it hangs", []string{hanging, "as recorded", one(implied, tension.NewtonPerMetre.Figure)}},
		{"sag at mid-span", []string{measured, length(e.SagMid), measured}},
	}
	if d := a.Direct; d != nil {
		g.Rows = append(g.Rows, gridRow{"direct reading", []string{apart(&d.OffRecord), "for comparison", apart(d.OffLength)}})
	}
	if a.Strength != nil {
		g.Rows = append(g.Rows, gridRow{"strength use", []string{one(use, tension.Percent.Figure), notApplicable, one(rivalUse, tension.Percent.Figure)}})
	}
	return g
}

// standing says for each column whether it is the reading that the verdict takes. The first one counts as taken only when
// somebody looked at the loads and nothing else was read: an excluded rival alone does not settle the load, and how far off a
// direct reading is stands in its own row.
func standing(a *tension.Assessment) []string {
	switch {
	case a.Rival == nil:
		return []string{"open", "for comparison", notKnown}
	case !a.Rival.Excluded:
		return []string{"open", "for comparison", "open"}
	case looked(a) && a.Direct == nil:
		return []string{"taken", "for comparison", "EXCLUDED"}
	}
	return []string{"open", "for comparison", "EXCLUDED"}
}

// apart is how far a direct reading is from a tension.
func apart(off *float64) string {
	if off == nil {
		return notKnown
	}
	return fmt.Sprintf("off by %.1f u", math.Abs(*off))
}

// directGroup is the tension that was read on the day.
func directGroup(a *tension.Assessment) group {
	d := a.Direct
	g := group{Title: "Direct reading of the tension"}
	how := clean(d.Of)
	if d.How != "" {
		how += ", by " + clean(d.How)
	}
	against := "the load as recorded, " + apart(&d.OffRecord)
	if d.OffLength != nil {
		against += "; the length as designed, " + apart(d.OffLength)
	}
	g.Rows = append(g.Rows, row{"Read", how}, row{"H from the reading", force(d.HorizontalTension)},
		row{"Ratio to H under filed load", or(d.Ratio, tension.Plain.Figure, unknown(noDesign))},
		row{"Load it implies / on record", tension.Percent.Figure(d.LoadFactor)}, row{"Load it implies", tension.NewtonPerMetre.Figure(d.Load)},
		row{"Against", against + " (u: standard uncertainty of the difference)"})
	return g
}

// widestForce is the room for a force in a column, "208.34 ± 0.55 kN" and a little more.
const widestForce = 18

// forceColumn prints forces that stand one under another in one unit, that of the largest; one that is so small beside it
// that its digits would not fit has its own unit.
func forceColumn(forces ...*tension.Quantity) func(tension.Quantity) string {
	most := 0.0
	for _, q := range forces {
		if q != nil {
			most = max(most, q.Value, -q.Value)
		}
	}
	scale := tension.ForceScale(most)
	return func(q tension.Quantity) string {
		if text := scale.Figure(q); columns(text) <= widestForce {
			return text
		}
		return force(q)
	}
}
