package register

import (
	"context"
	"encoding/json"
	"fmt"

	"tautbook/survey"
)

// Judge works results out again from what is stored: the survey, the cables file (nil for none) and the settings of the visit. It
// returns the conditions as well, so that the stored columns can be held against them.
type Judge func(s File, cables *File, settings []string) (survey.Conditions, []Result, error)

// Fault is one damaged row or one difference.
type Fault struct {
	Table string // of the row
	Row   string // its key
	Text  string // what is wrong
}

// String is the fault in one line.
func (f Fault) String() string { return fmt.Sprintf("%s %s: %s", f.Table, f.Row, f.Text) }

// Verification is what Verify found.
type Verification struct {
	Files, Designs, Visits, Results, Events int // rows looked at
	Faults                                  []Fault
}

func (v *Verification) fault(table, row, format string, args ...any) {
	v.Faults = append(v.Faults, Fault{table, row, fmt.Sprintf(format, args...)})
}

// Verify reads every row, holds it against its key and its neighbours, works every result out again and lists each difference. The
// progress function, nil for none, is called before each visit. The error is for a register that cannot be read at all.
func (r *Register) Verify(ctx context.Context, judge Judge, progress func(done, of int)) (Verification, error) {
	var v Verification
	if err := r.verifyStore(ctx, &v); err != nil {
		return v, err
	}
	if err := r.verifyFiles(ctx, &v); err != nil {
		return v, err
	}
	if err := r.verifyEvents(ctx, &v); err != nil {
		return v, err
	}
	visits, err := r.Visits(ctx, "")
	if err != nil {
		return v, err
	}
	known := map[string]bool{}
	for _, visit := range visits {
		known[visit.ID] = true
	}
	for i, visit := range visits {
		if progress != nil {
			progress(i, len(visits))
		}
		if err := ctx.Err(); err != nil {
			return v, err
		}
		if visit.Supersedes != "" && !known[visit.Supersedes] {
			v.fault("visits", visit.ID, "supersedes visit %s, which is not on record", visit.Supersedes)
		}
		r.verifyVisit(ctx, &v, visit, judge)
	}
	return v, r.verifyDesigns(ctx, &v)
}

// verifyStore lets SQLite check its own pages.
func (r *Register) verifyStore(ctx context.Context, v *Verification) error {
	if r.postgres {
		return nil
	}
	for _, check := range []string{"PRAGMA integrity_check", "PRAGMA foreign_key_check"} {
		rows, err := r.db.QueryContext(ctx, check)
		if err != nil {
			return r.told(err)
		}
		cols, err := rows.Columns()
		if err != nil {
			rows.Close()
			return r.told(err)
		}
		for rows.Next() {
			cells, at := make([]any, len(cols)), make([]any, len(cols))
			for i := range cells {
				at[i] = &cells[i]
			}
			if err := rows.Scan(at...); err != nil {
				rows.Close()
				return r.told(err)
			}
			if text := fmt.Sprint(cells...); text != "ok" {
				v.fault("database", check, "%s", text)
			}
		}
		if err := rows.Close(); err != nil {
			return r.told(err)
		}
	}
	return nil
}

// verifyFiles holds every stored file against its digest.
func (r *Register) verifyFiles(ctx context.Context, v *Verification) error {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&fileRow{}).columns(), "")+" FROM files ORDER BY sha256")
	if err != nil {
		return r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var f fileRow
		if err := rows.Scan(places(f.columns())...); err != nil {
			return fmt.Errorf("%s: table files, row %d: %w", r.name, v.Files+1, err)
		}
		v.Files++
		if err := f.check(); err != nil {
			v.fault("files", f.SHA256, "%v", err)
		}
	}
	return r.told(rows.Err())
}

// verifyEvents holds every event against its key, superseded ones too.
func (r *Register) verifyEvents(ctx context.Context, v *Verification) error {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&Event{}).columns(), "")+" FROM events ORDER BY event")
	if err != nil {
		return r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var e Event
		if err := rows.Scan(places(e.columns())...); err != nil {
			v.fault("events", e.ID, "%v", err)
			continue
		}
		v.Events++
		if e.ID != e.key() {
			v.fault("events", e.ID, "damaged: it no longer fits its id (%s %s %s %s)", e.Structure, e.Cable, e.Date, e.Kind)
		}
	}
	return r.told(rows.Err())
}

// verifyVisit works one visit out again by every design version that it was judged by.
func (r *Register) verifyVisit(ctx context.Context, v *Verification, visit Visit, judge Judge) {
	v.Visits++
	if visit.ID != visit.key() {
		v.fault("visits", visit.ID, "damaged: it no longer fits its id (%s %s)", visit.Structure, visit.Date)
	}
	stored, err := r.Results(ctx, visit)
	if err != nil {
		v.fault("results", "visit "+visit.ID, "%v", err)
		return
	}
	v.Results += len(stored)
	byDesign := map[string][]Result{visit.CablesSHA256: nil}
	order := []string{visit.CablesSHA256}
	for _, res := range stored {
		if _, ok := byDesign[res.JudgedBy]; !ok {
			order = append(order, res.JudgedBy)
		}
		byDesign[res.JudgedBy] = append(byDesign[res.JudgedBy], res)
	}
	for _, sum := range order {
		conditions, results, err := r.rejudge(ctx, visit, sum, judge)
		if err != nil {
			v.fault("visits", visit.ID, "(%s, %s, %s) cannot be worked out again: %v", visit.Structure, visit.Date, visit.SurveyName, err)
			return
		}
		compareResults(v, visit, byDesign[sum], results)
		if sum == visit.CablesSHA256 {
			r.compareVisit(ctx, v, visit, conditions)
		}
	}
}

// rejudge reads what is stored of a visit and judges it by a design version.
func (r *Register) rejudge(ctx context.Context, visit Visit, cables string, judge Judge) (survey.Conditions, []Result, error) {
	visit.CablesSHA256 = cables
	in, design, settings, err := r.Stored(ctx, visit)
	if err != nil {
		return survey.Conditions{}, nil, err
	}
	return judge(in, design, settings)
}

func (v *Visit) settings() (out []string, err error) {
	if err := json.Unmarshal([]byte(v.Settings), &out); err != nil {
		return nil, fmt.Errorf("settings %q are no JSON list: %w", v.Settings, err)
	}
	return out, nil
}

// compareVisit holds the columns and the readings of a visit against its survey.
func (r *Register) compareVisit(ctx context.Context, v *Verification, visit Visit, c survey.Conditions) {
	s := Submission{Survey: File{Name: visit.SurveyName}, Conditions: c, Results: make([]Result, 1), Supersedes: visit.Supersedes, Why: visit.Why, By: visit.RecordedBy}
	want, err := s.visit(visit.RecordedAt)
	if err != nil {
		v.fault("visits", visit.ID, "%v", err)
		return
	}
	want.ID, want.SurveySHA256, want.CablesSHA256, want.Settings = visit.ID, visit.SurveySHA256, visit.CablesSHA256, visit.Settings
	if d := differences(visit.columns(), want.columns()); d != "" {
		v.fault("visits", visit.ID, "%s", d)
	}
	stored, err := r.readings(ctx, visit.ID)
	if err != nil {
		v.fault("readings", "visit "+visit.ID, "%v", err)
		return
	}
	if len(stored) != len(c.Readings) {
		v.fault("readings", "visit "+visit.ID, "%d rows, the survey holds %d readings", len(stored), len(c.Readings))
		return
	}
	for i := range stored {
		fresh := readingRow{visit.ID, int64(i + 1), c.Readings[i], &c.Readings[i].Value}
		if d := differences(stored[i].columns(), fresh.columns()); d != "" {
			v.fault("readings", fmt.Sprintf("%d of visit %s", i+1, visit.ID), "%s", d)
		}
	}
}

func (r *Register) readings(ctx context.Context, visit string) (out []readingRow, err error) {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&readingRow{}).columns(), "")+" FROM readings WHERE visit = $1 ORDER BY place", visit)
	if err != nil {
		return nil, r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var row readingRow
		if err := rows.Scan(places(row.columns())...); err != nil {
			return nil, err
		}
		out = append(out, row)
	}
	return out, r.told(rows.Err())
}

// compareResults holds stored results against fresh ones, by cable and span.
func compareResults(v *Verification, visit Visit, stored, fresh []Result) {
	where := func(r Result) string {
		return fmt.Sprintf("of visit %s (%s, %s), cable %q, span %q", visit.ID, visit.Structure, visit.Date, r.Cable, r.Span)
	}
	bySpan := map[[2]string]Result{}
	for _, f := range fresh {
		bySpan[[2]string{f.Cable, f.Span}] = f
	}
	for _, s := range stored {
		key := [2]string{s.Cable, s.Span}
		f, ok := bySpan[key]
		if !ok {
			v.fault("results", where(s), "the survey holds no such span")
			continue
		}
		delete(bySpan, key)
		f.Visit, f.JudgedBy, f.JudgedAt, f.JudgedWith = s.Visit, s.JudgedBy, s.JudgedAt, s.JudgedWith
		if d := differences(s.columns(), f.columns()); d != "" {
			v.fault("results", where(s), "%s; recorded with %s", d, s.JudgedWith)
		}
	}
	for _, f := range fresh {
		if _, left := bySpan[[2]string{f.Cable, f.Span}]; left {
			v.fault("results", where(f), "missing")
		}
	}
}
