package register

import "tautbook/survey"

// fileRow is a row of files.
type fileRow struct {
	SHA256, Kind, Name string
	Size               int64
	Bytes              []byte
}

func (f *fileRow) columns() []column {
	return []column{{"sha256", &f.SHA256}, {"kind", &f.Kind}, {"name", &f.Name}, {"size", &f.Size}, {"bytes", &f.Bytes}}
}

// spanRow is a row of spans; of structures when only the first column is used.
type spanRow struct{ Structure, Cable, Span string }

func (s *spanRow) columns() []column {
	return []column{{"structure", &s.Structure}, {"cable", &s.Cable}, {"span", &s.Span}}
}

// structureRow is a row of structures.
type structureRow struct{ Structure string }

func (s *structureRow) columns() []column { return []column{{"structure", &s.Structure}} }

// designRow is a row of designs.
type designRow struct {
	CablesSHA256 string
	survey.Design
}

func (d *designRow) columns() []column {
	return columnsOf(column{"cables_sha256", &d.CablesSHA256}, column{"structure", &d.Structure}, column{"cable", &d.Cable}, column{"span", &d.Span},
		column{"load_kind", (*string)(&d.Load)}, quantity("self_weight_N_per_m", &d.SelfWeight), quantity("deck_load_N_per_m", &d.DeckLoad),
		quantity("design_span_m", &d.SpanLength), quantity("design_rise_m", &d.Rise), quantity("design_tension_N", &d.Tension),
		quantity("design_sag_m", &d.Sag), quantity("design_temperature_degC", &d.Temperature), quantity("axial_stiffness_N", &d.AxialStiffness),
		quantity("expansion_per_degC", &d.Expansion), quantity("breaking_load_N", &d.BreakingLoad), column{"safety_factor", optional{&d.SafetyFactor}},
		column{"slack_below", optional{&d.SlackBelow}}, column{"overload_above", optional{&d.OverloadAbove}}, quantity("diameter_m", &d.Diameter),
		quantity("bending_stiffness_N_m2", &d.BendingStiffness), quantity("take_up_per_turn_m", &d.TakeUpPerTurn),
		column{"over_A", (*string)(&d.OverA)}, column{"over_B", (*string)(&d.OverB)})
}

func (v *Visit) columns() []column {
	return columnsOf(column{"visit", &v.ID}, column{"structure", &v.Structure}, column{"visit_date", &v.Date}, column{"survey_sha256", &v.SurveySHA256},
		column{"survey_name", &v.SurveyName}, column{"cables_sha256", &v.CablesSHA256}, column{"settings", &v.Settings},
		quantity("temperature_degC", &v.Temperature), column{"wind", &v.Wind}, column{"loads", (*string)(&v.Loads)}, column{"instrument", &v.Instrument},
		column{"accuracy_horizontal_m", optional{&v.AccuracyH}}, column{"accuracy_vertical_m", optional{&v.AccuracyV}}, column{"crew", &v.Crew},
		column{"supersedes", &v.Supersedes}, column{"why", &v.Why}, column{"recorded_at", &v.RecordedAt}, column{"recorded_by", &v.RecordedBy})
}

// readingRow is a row of readings.
type readingRow struct {
	Visit string
	Place int64
	survey.Reading
	tension *survey.Quantity
}

func (r *readingRow) columns() []column {
	return columnsOf(column{"visit", &r.Visit}, column{"place", &r.Place}, column{"cable", &r.Cable}, column{"span", &r.Span},
		column{"read_of", (*string)(&r.Of)}, quantity("tension_N", &r.tension), column{"how", &r.How})
}

func (r *Result) columns() []column {
	p := &r.Place
	return columnsOf(column{"visit", &r.Visit}, column{"judged_by", &r.JudgedBy}, column{"cable", &r.Cable}, column{"span", &r.Span},
		column{"verdict", &r.Verdict}, column{"reason", &r.Reason}, column{"next_step", &r.NextStep}, column{"shape", &r.Shape},
		column{"points_used", &r.PointsUsed}, column{"points_rejected", &r.PointsRejected}, column{"degrees_of_freedom", &r.DegreesOfFree},
		column{"rms_m", optional{&r.RMS}}, column{"variance_factor", optional{&r.VarianceFactor}}, quantity("chord_m", &r.Chord), quantity("rise_m", &r.Rise),
		quantity("sag_mid_m", &r.SagMid), quantity("greatest_sag_m", &r.GreatestSag), quantity("arc_length_m", &r.ArcLength),
		quantity("hanging_load_N_per_m", &r.HangingLoad), quantity("horizontal_tension_N", &r.HorizontalTension),
		column{"horizontal_tension_at_least_N", optional{&r.HorizontalTensionAtLeast}}, quantity("reference_tension_N", &r.ReferenceTension),
		column{"reference_temperature_degC", optional{&r.ReferenceTemperature}}, quantity("unstressed_length_m", &r.UnstressedLength),
		quantity("expected_tension_N", &r.ExpectedTension), quantity("ratio", &r.Ratio), column{"p_slack", optional{&r.PSlack}},
		column{"p_overload", optional{&r.POverload}}, quantity("greatest_tension_N", &r.GreatestTension), quantity("strength_use", &r.StrengthUse),
		column{"start_easting_m", optional{&p.StartEasting}}, column{"start_northing_m", optional{&p.StartNorthing}}, column{"azimuth_deg", optional{&p.AzimuthDeg}},
		column{"from_station_m", optional{&p.From}}, column{"to_station_m", optional{&p.To}}, column{"from_elevation_m", optional{&p.FromElevation}},
		column{"to_elevation_m", optional{&p.ToElevation}}, column{"judged_at", &r.JudgedAt}, column{"judged_with", &r.JudgedWith})
}

func (e *Event) columns() []column {
	return columnsOf(column{"event", &e.ID}, column{"structure", &e.Structure}, column{"cable", &e.Cable}, column{"span", &e.Span}, column{"event_date", &e.Date},
		column{"kind", (*string)(&e.Kind)}, quantity("size", &e.Size), column{"unit", &e.Unit}, column{"note", &e.Note},
		column{"supersedes", &e.Supersedes}, column{"recorded_at", &e.RecordedAt})
}
