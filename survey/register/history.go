package register

import (
	"context"
	"database/sql"
	"fmt"
	"iter"

	"tautbook/survey"
)

// History is everything on record of one cable span, in order of date. Superseded visits and events are left out.
type History struct {
	Structure, Cable, Span string
	Visits                 []HistoryVisit
	Events                 []Event // those of the span, of its whole cable and of its whole structure
}

// HistoryVisit is what one visit says of one span, by the design version that it was judged by when it was recorded. Nil figures could
// not be worked out that day.
type HistoryVisit struct {
	Visit                string
	Date                 string           // 2026-06-11 or 2026-06-11T10:30
	ReferenceTension     *survey.Quantity // H at the reference temperature, N, if the load is as recorded
	UnstressedLength     *survey.Quantity // S0 at the reference temperature, m
	ReferenceTemperature *float64         // design temperature of JudgedBy, degC
	Loads                survey.LoadStatus
	Temperature          *survey.Quantity // of the cable on the day, degC
	Verdict              string
	Ratio                *survey.Quantity // tension today / expected
	SurveySHA256         string
	JudgedBy             string // SHA-256 of the cables file, "" for none; visits judged by different versions may differ in reference state
}

type historyRow struct {
	HistoryVisit
	spanRow
}

func (h *historyRow) columns() []column {
	return columnsOf(h.spanRow.columns(), column{"visit", &h.Visit}, column{"visit_date", &h.Date}, quantity("reference_tension_N", &h.ReferenceTension),
		quantity("unstressed_length_m", &h.UnstressedLength), column{"reference_temperature_degC", optional{&h.ReferenceTemperature}},
		column{"loads", (*string)(&h.Loads)}, quantity("temperature_degC", &h.Temperature), column{"verdict", &h.Verdict}, quantity("ratio", &h.Ratio),
		column{"survey_sha256", &h.SurveySHA256}, column{"judged_by", &h.JudgedBy})
}

// History is what is on record of one span, oldest visit first. The span is "" for a cable with one unnamed span. A span that is not
// on record has an error that says so.
func (r *Register) History(ctx context.Context, structure, cable, span string) (History, error) {
	for h, err := range r.histories(ctx, "WHERE structure = $1 AND cable = $2 AND span = $3", structure, cable, span) {
		return h, err
	}
	return History{}, fmt.Errorf("%s: found no visit of structure %q, cable %q, span %q; see \"tautbook visits\" for what is on record", r.name, structure, cable, span)
}

// Fleet goes through the history of every span on record, in order of structure, cable and span. It reads as it goes and holds one
// span at a time; an error ends it.
func (r *Register) Fleet(ctx context.Context) iter.Seq2[History, error] {
	return r.histories(ctx, "")
}

func (r *Register) histories(ctx context.Context, where string, args ...any) iter.Seq2[History, error] {
	return func(yield func(History, error) bool) {
		events, err := r.Events(ctx, "")
		if err != nil {
			yield(History{}, err)
			return
		}
		byStructure := map[string][]Event{}
		for _, e := range events {
			byStructure[e.Structure] = append(byStructure[e.Structure], e)
		}
		query := "SELECT " + names((&historyRow{}).columns(), "") + " FROM current_results " + where + " ORDER BY structure, cable, span, visit_date, visit"
		rows, err := r.db.QueryContext(ctx, query, args...)
		if err != nil {
			yield(History{}, r.told(err))
			return
		}
		defer rows.Close()
		group(rows, byStructure, func(h History, err error) bool { return yield(h, r.told(err)) })
	}
}

// group joins neighbouring rows of one span and hands each span over.
func group(rows *sql.Rows, events map[string][]Event, yield func(History, error) bool) {
	var h History
	for rows.Next() {
		var row historyRow
		if err := rows.Scan(places(row.columns())...); err != nil {
			yield(History{}, err)
			return
		}
		if len(h.Visits) > 0 && (h.Structure != row.Structure || h.Cable != row.Cable || h.Span != row.Span) {
			if !yield(h, nil) {
				return
			}
			h = History{}
		}
		if len(h.Visits) == 0 {
			h.Structure, h.Cable, h.Span = row.Structure, row.Cable, row.Span
			for _, e := range events[row.Structure] {
				if (e.Cable == "" || e.Cable == row.Cable) && (e.Span == "" || e.Span == row.Span) {
					h.Events = append(h.Events, e)
				}
			}
		}
		h.Visits = append(h.Visits, row.HistoryVisit)
	}
	if err := rows.Err(); err != nil {
		yield(History{}, err)
		return
	}
	if len(h.Visits) > 0 {
		yield(h, nil)
	}
}
