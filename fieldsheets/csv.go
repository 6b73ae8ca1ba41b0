package fieldsheets

import (
	"bytes"
	"encoding/csv"
	"io"
	"slices"
	"strconv"
	"strings"

	"tautbook/tension"
)

// csvColumn is one column of the CSV: its name, as in the JSON, and its cell for a cable.
type csvColumn struct {
	name string
	cell func(a *tension.Assessment) string
}

// WriteCSV prints one header and one line a cable with the names of the JSON, standard uncertainties as columns u_..., full
// precision. A number that is not known is an empty cell, so that number columns hold numbers alone; the column
// not_determined then says in words which and why. Text from files is made harmless for spreadsheets. A number that is not
// finite is an error that names its place.
func WriteCSV(w io.Writer, r Report) error {
	if err := finite(r); err != nil {
		return err
	}
	out := csv.NewWriter(w)
	header := make([]string, len(csvColumns))
	for i, c := range csvColumns {
		header[i] = c.name
	}
	if err := out.Write(header); err != nil {
		return err
	}
	if out.Flush(); out.Error() != nil {
		return out.Error()
	}
	return inOrder(w, len(r.Cables), func(text *bytes.Buffer, i int) error {
		line := csv.NewWriter(text)
		row := make([]string, len(csvColumns))
		for k, c := range csvColumns {
			row[k] = c.cell(&r.Cables[i])
		}
		if err := line.Write(row); err != nil {
			return err
		}
		line.Flush()
		return line.Error()
	})
}

func exactly(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

func textColumn(name string, get func(a *tension.Assessment) string) csvColumn {
	return csvColumn{name, func(a *tension.Assessment) string { return harmless(get(a)) }}
}

func numberColumn(name string, get func(a *tension.Assessment) *float64) csvColumn {
	return csvColumn{name, func(a *tension.Assessment) string {
		if v := get(a); v != nil {
			return exactly(*v)
		}
		return ""
	}}
}

// quantityColumns are a value and its standard uncertainty.
func quantityColumns(name string, get func(a *tension.Assessment) *tension.Quantity) []csvColumn {
	return []csvColumn{
		numberColumn(name, func(a *tension.Assessment) *float64 { return value(get(a)) }),
		numberColumn("u_"+name, func(a *tension.Assessment) *float64 { return spread(get(a)) }),
	}
}

func value(q *tension.Quantity) *float64 {
	if q == nil {
		return nil
	}
	return &q.Value
}

func spread(q *tension.Quantity) *float64 {
	if q == nil {
		return nil
	}
	return &q.U
}

// expected reads a figure of the comparison with the design, nil when there is none.
func expected[T any](get func(e *tension.Expected) *T) func(a *tension.Assessment) *T {
	return func(a *tension.Assessment) *T {
		if a.Expected == nil {
			return nil
		}
		return get(a.Expected)
	}
}

func rival(get func(v *tension.Rival) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if a.Rival == nil {
			return nil
		}
		return get(a.Rival)
	}
}

func direct(get func(d *tension.Direct) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if a.Direct == nil {
			return nil
		}
		return get(a.Direct)
	}
}

func reconciled(get func(r *tension.Reconciled) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if a.Reconciled == nil {
			return nil
		}
		return get(a.Reconciled)
	}
}

// next is a figure of the support toward the next span.
func next(get func(s *tension.SupportForce) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if a.NextSupport == nil {
			return nil
		}
		return get(a.NextSupport)
	}
}

func swing(get func(w *tension.Swing) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if a.Fit.Swing == nil {
			return nil
		}
		return get(a.Fit.Swing)
	}
}

func reaction(k int, get func(r *tension.Reaction) *tension.Quantity) func(a *tension.Assessment) *tension.Quantity {
	return func(a *tension.Assessment) *tension.Quantity {
		if k >= len(a.Reactions) {
			return nil
		}
		return get(&a.Reactions[k])
	}
}

var csvColumns = makeColumns()

func makeColumns() (out []csvColumn) {
	add := func(c ...csvColumn) { out = append(out, c...) }
	add(textColumn("structure", func(a *tension.Assessment) string { return a.Structure }),
		textColumn("cable", func(a *tension.Assessment) string { return a.Cable }),
		textColumn("span", func(a *tension.Assessment) string { return a.Span }),
		textColumn("survey_file", func(a *tension.Assessment) string { return a.SurveyFile }),
		textColumn("verdict", func(a *tension.Assessment) string { return string(a.Verdict) }),
		textColumn("loads", func(a *tension.Assessment) string { return string(a.Load.Record) }),
		textColumn("shape", func(a *tension.Assessment) string { return string(a.Fit.Shape) }),
		csvColumn{"points_used", func(a *tension.Assessment) string { return strconv.Itoa(a.Fit.PointsUsed) }},
		csvColumn{"points_rejected", func(a *tension.Assessment) string { return strconv.Itoa(len(a.Fit.Rejected)) }},
		numberColumn("rms_m", func(a *tension.Assessment) *float64 { return &a.Fit.RMS }))
	for _, q := range []struct {
		name string
		get  func(a *tension.Assessment) *tension.Quantity
	}{
		{"chord_m", func(a *tension.Assessment) *tension.Quantity { return &a.Fit.Chord }},
		{"rise_m", func(a *tension.Assessment) *tension.Quantity { return &a.Fit.Rise }},
		{"catenary_constant_m", func(a *tension.Assessment) *tension.Quantity { return a.Fit.CatenaryConstant }},
		{"parabola_parameter_m", func(a *tension.Assessment) *tension.Quantity { return a.Fit.ParabolaParameter }},
		{"mixed_constant_m", func(a *tension.Assessment) *tension.Quantity { return a.Fit.MixedConstant }},
		{"low_point_station_m", func(a *tension.Assessment) *tension.Quantity { return a.Fit.LowPointStation }},
		{"low_point_elevation_m", func(a *tension.Assessment) *tension.Quantity { return a.Fit.LowPointElevation }},
		{"sag_mid_m", func(a *tension.Assessment) *tension.Quantity { return &a.Fit.SagMid }},
		{"greatest_sag_m", func(a *tension.Assessment) *tension.Quantity { return &a.Fit.GreatestSag }},
		{"arc_length_m", func(a *tension.Assessment) *tension.Quantity { return &a.Fit.ArcLength }},
		{"swing_deg", swing(func(w *tension.Swing) *tension.Quantity { return &w.AngleDeg })},
		{"side_load_N_per_m", swing(func(w *tension.Swing) *tension.Quantity { return w.SideLoad })},
		{"horizontal_tension_N", func(a *tension.Assessment) *tension.Quantity { return a.HorizontalTension }},
		{"joint_horizontal_tension_N", func(a *tension.Assessment) *tension.Quantity { return a.JointHorizontalTension }},
		{"reaction_A_vertical_N", reaction(0, func(r *tension.Reaction) *tension.Quantity { return &r.Vertical })},
		{"reaction_A_tension_N", reaction(0, func(r *tension.Reaction) *tension.Quantity { return &r.Tension })},
		{"reaction_A_slope_deg", reaction(0, func(r *tension.Reaction) *tension.Quantity { return &r.SlopeDeg })},
		{"reaction_B_vertical_N", reaction(1, func(r *tension.Reaction) *tension.Quantity { return &r.Vertical })},
		{"reaction_B_tension_N", reaction(1, func(r *tension.Reaction) *tension.Quantity { return &r.Tension })},
		{"reaction_B_slope_deg", reaction(1, func(r *tension.Reaction) *tension.Quantity { return &r.SlopeDeg })},
		{"expected_horizontal_tension_N", expected(func(e *tension.Expected) *tension.Quantity { return &e.HorizontalTension })},
		{"expected_sag_mid_m", expected(func(e *tension.Expected) *tension.Quantity { return &e.SagMid })},
		{"ratio", expected(func(e *tension.Expected) *tension.Quantity { return e.Ratio })},
		{"rival_horizontal_tension_N", rival(func(v *tension.Rival) *tension.Quantity { return &v.HorizontalTension })},
		{"rival_load_factor", rival(func(v *tension.Rival) *tension.Quantity { return &v.LoadFactor })},
		{"direct_reading_horizontal_tension_N", direct(func(d *tension.Direct) *tension.Quantity { return &d.HorizontalTension })},
		{"direct_reading_ratio", direct(func(d *tension.Direct) *tension.Quantity { return d.Ratio })},
		{"direct_reading_load_factor", direct(func(d *tension.Direct) *tension.Quantity { return &d.LoadFactor })},
		{"reconciled_horizontal_tension_N", reconciled(func(r *tension.Reconciled) *tension.Quantity { return r.HorizontalTension })},
		{"reconciled_load_N_per_m", reconciled(func(r *tension.Reconciled) *tension.Quantity { return r.Load })},
		{"reconciled_unstressed_length_m", reconciled(func(r *tension.Reconciled) *tension.Quantity { return r.UnstressedLength })},
		{"next_support_tension_difference_N", next(func(s *tension.SupportForce) *tension.Quantity { return &s.TensionStep })},
		{"next_support_resultant_N", next(func(s *tension.SupportForce) *tension.Quantity { return &s.Resultant })},
		{"next_support_resultant_from_vertical_deg", next(func(s *tension.SupportForce) *tension.Quantity { return &s.ResultantFromDown })},
		{"horizontal_tension_at_design_temperature_N", func(a *tension.Assessment) *tension.Quantity { return a.AtDesignTemperature }},
	} {
		add(quantityColumns(q.name, q.get)...)
	}
	add(numberColumn("horizontal_tension_at_least_N", func(a *tension.Assessment) *float64 { return a.HorizontalTensionAtLeast }),
		numberColumn("p_slack", expected(func(e *tension.Expected) *float64 { return &e.PSlack })),
		numberColumn("p_inside", expected(func(e *tension.Expected) *float64 { return &e.PInside })),
		numberColumn("p_overload", expected(func(e *tension.Expected) *float64 { return &e.POverload })))
	add(quantityColumns("strength_use", func(a *tension.Assessment) *tension.Quantity {
		if a.Strength == nil {
			return nil
		}
		return &a.Strength.Use
	})...)
	add(textColumn("evidence", func(a *tension.Assessment) string {
		if a.Reconciled == nil {
			return ""
		}
		return a.Reconciled.Says
	}))
	add(textColumn("causes_that_fit", func(a *tension.Assessment) string {
		if a.Explanation == nil {
			return ""
		}
		var list []string
		for _, c := range a.Explanation.Causes {
			if c.Standing == tension.Fits {
				list = append(list, string(c.Kind))
			}
		}
		return strings.Join(list, "; ")
	}), textColumn("explanation", func(a *tension.Assessment) string {
		if a.Explanation == nil {
			return ""
		}
		return a.Explanation.Says
	}))
	add(textColumn("reason", func(a *tension.Assessment) string { return a.Reason }), textColumn("next_step", func(a *tension.Assessment) string { return a.NextStep }),
		csvColumn{"not_determined", func(a *tension.Assessment) string { return strings.Join(missing(a), "; ") }})
	return out
}

// missing names the columns that are empty for a cable, with the reason; standard uncertainties go with their values.
func missing(a *tension.Assessment) (out []string) {
	for _, m := range []struct {
		known bool
		name  string
		why   string
	}{
		{a.HorizontalTension != nil, "horizontal_tension_N", whyNoTension(a)},
		{len(a.Reactions) == 2, "reaction_A and reaction_B", whyNoTension(a)},
		{a.Expected != nil, "expected, ratio and probabilities", noDesign},
		{a.Expected == nil || a.Expected.Ratio != nil, "ratio", whyNoTension(a)},
		{a.Rival != nil, "rival", noRival},
		{a.AtDesignTemperature != nil, "horizontal_tension_at_design_temperature_N", whyNotBrought(a)},
		{a.Strength != nil, "strength_use", noStrength},
	} {
		if !m.known {
			out = append(out, m.name+": "+m.why)
		}
	}
	if slices.Equal(constants(a), []*tension.Quantity{nil, nil, nil}) {
		out = append(out, "catenary_constant_m, parabola_parameter_m and mixed_constant_m: "+tooFlat)
	}
	return out
}
