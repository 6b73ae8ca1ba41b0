package register

import (
	"context"
	"fmt"
	"strings"
)

// shortest is the fewest digits of an id that are taken for it.
const shortest = 4

const visitQuery = ", coalesce((SELECT w.visit FROM visits w WHERE w.supersedes = v.visit AND w.supersedes <> ''), '') FROM visits v "

// Visits are the visits on record by structure and date, all of them or those of one structure; superseded ones too, marked.
func (r *Register) Visits(ctx context.Context, structure string) ([]Visit, error) {
	return r.visits(ctx, "WHERE ($1 = '' OR structure = $1)", structure)
}

// Visit finds a visit by its id or by the beginning of it, four digits or more.
func (r *Register) Visit(ctx context.Context, id string) (Visit, error) {
	if len(id) < shortest || strings.Trim(id, "0123456789abcdef") != "" {
		return Visit{}, fmt.Errorf("found visit id %q, expected at least %d digits (0-9, a-f) as \"tautbook visits\" lists them", id, shortest)
	}
	found, err := r.visits(ctx, "WHERE substr(visit, 1, $2) = $1", id, len(id))
	switch {
	case err != nil:
		return Visit{}, err
	case len(found) == 0:
		return Visit{}, fmt.Errorf("%s: found no visit %s: see \"tautbook visits\"", r.name, id)
	case len(found) > 1:
		return Visit{}, fmt.Errorf("%s: %d visits begin with %s: give more digits", r.name, len(found), id)
	}
	return found[0], nil
}

func (r *Register) visits(ctx context.Context, where string, args ...any) (out []Visit, err error) {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&Visit{}).columns(), "v.")+visitQuery+where+" ORDER BY structure, visit_date, visit", args...)
	if err != nil {
		return nil, r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var v Visit
		if err := rows.Scan(append(places(v.columns()), &v.SupersededBy)...); err != nil {
			return nil, fmt.Errorf("%s: table visits, after %s: %w", r.name, lastOf(out), err)
		}
		out = append(out, v)
	}
	return out, r.told(rows.Err())
}

func lastOf(v []Visit) string {
	if len(v) == 0 {
		return "the beginning"
	}
	return "visit " + v[len(v)-1].ID
}

// Results are the figures of a visit by every design version that it was judged by, the one of the record first.
func (r *Register) Results(ctx context.Context, v Visit) (out []Result, err error) {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&Result{}).columns(), "")+` FROM results WHERE visit = $1
		ORDER BY CASE WHEN judged_by = $2 THEN 0 ELSE 1 END, judged_at, cable, span`, v.ID, v.CablesSHA256)
	if err != nil {
		return nil, r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var res Result
		if err := rows.Scan(places(res.columns())...); err != nil {
			return out, fmt.Errorf("%s: results of visit %s: %w", r.name, v.ID, err)
		}
		out = append(out, res)
	}
	return out, r.told(rows.Err())
}

// StoredFile is a file as it was received. An error names it when its bytes are not what they were.
func (r *Register) StoredFile(ctx context.Context, sha256 string) (File, error) {
	var f fileRow
	if err := r.db.QueryRowContext(ctx, "SELECT "+names(f.columns(), "")+" FROM files WHERE sha256 = $1", sha256).Scan(places(f.columns())...); err != nil {
		return File{}, fmt.Errorf("%s: file %s: %w", r.name, sha256, r.told(err))
	}
	if err := f.check(); err != nil {
		return File{}, fmt.Errorf("%s: %w", r.name, err)
	}
	return File{FileKind(f.Kind), f.Name, f.Bytes}, nil
}

// check holds the bytes against their digest.
func (f *fileRow) check() error {
	if got := digest(f.Bytes); got != f.SHA256 || f.Size != int64(len(f.Bytes)) {
		return fmt.Errorf("%s file %q, SHA-256 %s: damaged: its %d bytes have the SHA-256 %s", f.Kind, f.Name, f.SHA256, len(f.Bytes), got)
	}
	return nil
}

// SpanVisit is one span in one visit.
type SpanVisit struct{ Visit, Cable, Span string }

// SameDay are the current results of the same spans on the same day as those of a visit, in other visits.
func (r *Register) SameDay(ctx context.Context, visit string) (out []SpanVisit, err error) {
	rows, err := r.db.QueryContext(ctx, `SELECT o.visit, o.cable, o.span FROM current_results c JOIN current_results o
		ON o.structure = c.structure AND o.cable = c.cable AND o.span = c.span AND substr(o.visit_date, 1, 10) = substr(c.visit_date, 1, 10) AND o.visit <> c.visit
		WHERE c.visit = $1 ORDER BY o.visit, o.cable, o.span`, visit)
	if err != nil {
		return nil, r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var s SpanVisit
		if err := rows.Scan(&s.Visit, &s.Cable, &s.Span); err != nil {
			return nil, err
		}
		out = append(out, s)
	}
	return out, r.told(rows.Err())
}

// Stored is what a visit was judged from: its survey, its cables file (nil for none) and its settings.
func (r *Register) Stored(ctx context.Context, v Visit) (s File, cables *File, settings []string, err error) {
	if s, err = r.StoredFile(ctx, v.SurveySHA256); err != nil {
		return s, nil, nil, err
	}
	s.Name = v.SurveyName
	if v.CablesSHA256 != "" {
		f, err := r.StoredFile(ctx, v.CablesSHA256)
		if err != nil {
			return s, nil, nil, err
		}
		cables = &f
	}
	settings, err = v.settings()
	return s, cables, settings, err
}
