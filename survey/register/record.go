package register

import (
	"context"
	"crypto/sha256"
	"database/sql"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"time"

	"tautbook/survey"
)

// largestFile is the limit on a stored file, bytes: SQLite holds at most 1 GB in one cell, and a register must stay portable.
const largestFile = 512 << 20

// Outcome says what became of a submission.
type Outcome struct {
	Visit string // id
	Known bool   // the same file was on record already with the same settings and design: nothing was added
}

// Record adds one visit whole, or leaves the register as it was. The same survey twice is recognised: with the same settings and
// design nothing is added; with others it is refused unless it supersedes the visit on record. The survey needs a structure and a date.
func (r *Register) Record(ctx context.Context, s Submission) (Outcome, error) {
	v, err := s.visit(stamp(r.now()))
	if err != nil {
		return Outcome{}, err
	}
	out := Outcome{Visit: v.ID}
	err = r.write(ctx, func(tx *sql.Tx) error {
		out.Known = false
		known, err := alreadyThere(ctx, tx, v, s.Survey.Name)
		if err != nil {
			return err
		}
		if known != "" {
			out = Outcome{Visit: known, Known: true}
			return nil
		}
		if err := checkSuperseded(ctx, tx, v); err != nil {
			return err
		}
		return s.insert(ctx, tx, v)
	})
	return out, err
}

// visit is the row of a submission.
func (s *Submission) visit(now string) (*Visit, error) {
	c := s.Conditions
	switch {
	case c.Structure == "":
		return nil, fmt.Errorf("%s: found no structure, expected one for the record: add \"# structure: NAME\" at the top, or give --structure", s.Survey.Name)
	case c.Date.IsZero():
		return nil, fmt.Errorf("%s: found no date, expected the day of the visit: add \"# date: 2026-06-11\" at the top, or give --date", s.Survey.Name)
	case len(s.Results) == 0:
		return nil, fmt.Errorf("%s: found no cable in it, expected points of at least one", s.Survey.Name)
	case len(s.Survey.Bytes) > largestFile:
		return nil, fmt.Errorf("%s: found %d MiB, expected at most %d: thin the cloud, or record the points of the cables only", s.Survey.Name, len(s.Survey.Bytes)>>20, largestFile>>20)
	}
	list := s.Settings
	if list == nil {
		list = []string{}
	}
	settings, err := json.Marshal(list)
	if err != nil {
		return nil, err
	}
	v := &Visit{Structure: plain(c.Structure), Date: dateText(c.Date), SurveySHA256: digest(s.Survey.Bytes), SurveyName: plain(s.Survey.Name), Settings: string(settings),
		Temperature: c.CableTemperature, Wind: plain(c.Wind), Loads: c.Loads, Instrument: plain(c.Instrument), Crew: plain(c.Crew),
		Supersedes: s.Supersedes, Why: plain(s.Why), RecordedAt: now, RecordedBy: s.By}
	if s.Cables != nil {
		v.CablesSHA256 = digest(s.Cables.Bytes)
	}
	if a := c.Accuracy; a != nil {
		v.AccuracyH, v.AccuracyV = &a.Horizontal, &a.Vertical
	}
	v.ID = v.key()
	return v, nil
}

// key is the id that the content of a visit asks for.
func (v *Visit) key() string {
	return keyOf(v.Structure, v.Date, v.SurveySHA256, v.CablesSHA256, v.Settings, v.Supersedes, v.Why)
}

// keyOf is a short digest of texts: 16 hexadecimal digits, so that among a million rows two meet by chance less than once in ten
// million registers.
func keyOf(texts ...string) string {
	list, err := json.Marshal(texts)
	if err != nil {
		panic(err) // texts are always encodable
	}
	return digest(list)[:16]
}

func digest(b []byte) string {
	sum := sha256.Sum256(b)
	return hex.EncodeToString(sum[:])
}

// plain makes a text that every database takes.
func plain(s string) string { return strings.ReplaceAll(strings.ToValidUTF8(s, "\ufffd"), "\x00", "") }

// dateText is a date, with the time of day when there is one.
func dateText(t time.Time) string {
	if t.Equal(t.Truncate(24 * time.Hour)) {
		return t.Format(time.DateOnly)
	}
	return t.Format("2006-01-02T15:04")
}

// alreadyThere finds the same survey on record: its id when it is the same visit, an error when it is in conflict.
func alreadyThere(ctx context.Context, tx *sql.Tx, v *Visit, name string) (string, error) {
	rows, err := tx.QueryContext(ctx, `SELECT visit, settings, cables_sha256, supersedes, (SELECT count(*) FROM visits w WHERE w.supersedes = v.visit AND w.supersedes <> '')
		FROM visits v WHERE survey_sha256 = $1 AND structure = $2 ORDER BY visit`, v.SurveySHA256, v.Structure)
	if err != nil {
		return "", err
	}
	defer rows.Close()
	var other error
	for rows.Next() {
		var id, settings, cables, supersedes string
		var superseded int
		if err := rows.Scan(&id, &settings, &cables, &supersedes, &superseded); err != nil {
			return "", err
		}
		same := settings == v.Settings && cables == v.CablesSHA256
		switch {
		case same && (v.Supersedes == "" || v.Supersedes == supersedes):
			return id, rows.Err()
		case superseded > 0:
		case same:
			other = fmt.Errorf("%s: this survey is on record as visit %s with the same settings and design values: it corrects nothing", name, id)
		case v.Supersedes != "":
		case settings != v.Settings:
			other = fmt.Errorf("%s: this survey is on record as visit %s with other settings: give --supersedes %s and --why if this one is the correction", name, id, id)
		default:
			other = fmt.Errorf("%s: this survey is on record as visit %s, judged by other design values: \"tautbook register judge --cables FILE %s\" judges it by these as well; --supersedes %s and --why corrects it",
				name, id, id, id)
		}
	}
	if err := rows.Err(); err != nil {
		return "", err
	}
	return "", other
}

// checkSuperseded refuses a correction of what is not there, is of another structure or was corrected already.
func checkSuperseded(ctx context.Context, tx *sql.Tx, v *Visit) error {
	if v.Supersedes == "" {
		return nil
	}
	if strings.TrimSpace(v.Why) == "" {
		return errors.New("a correction needs its reason: give --why")
	}
	var structure string
	err := tx.QueryRowContext(ctx, "SELECT structure FROM visits WHERE visit = $1", v.Supersedes).Scan(&structure)
	switch {
	case errors.Is(err, sql.ErrNoRows):
		return fmt.Errorf("found no visit %s to supersede: see \"tautbook visits\"", v.Supersedes)
	case err != nil:
		return err
	case structure != v.Structure:
		return fmt.Errorf("visit %s is of structure %q, the correction of %q", v.Supersedes, structure, v.Structure)
	}
	var newer string
	switch err := tx.QueryRowContext(ctx, "SELECT visit FROM visits WHERE supersedes = $1", v.Supersedes).Scan(&newer); {
	case errors.Is(err, sql.ErrNoRows):
		return nil
	case err != nil:
		return err
	}
	return fmt.Errorf("visit %s is superseded already by %s: supersede that one", v.Supersedes, newer)
}

// insert adds every row of a visit.
func (s *Submission) insert(ctx context.Context, tx *sql.Tx, v *Visit) error {
	if err := addFile(ctx, tx, s.Survey); err != nil {
		return err
	}
	if s.Cables != nil {
		if err := addDesigns(ctx, tx, *s.Cables, s.Designs); err != nil {
			return err
		}
	}
	if err := addNew(ctx, tx, "structures", (&structureRow{v.Structure}).columns()); err != nil {
		return err
	}
	if err := add(ctx, tx, "visits", v.columns()); err != nil {
		return err
	}
	for i, reading := range s.Conditions.Readings {
		row := readingRow{Visit: v.ID, Place: int64(i + 1), Reading: reading, tension: &reading.Value}
		if err := add(ctx, tx, "readings", row.columns()); err != nil {
			return err
		}
	}
	for _, res := range s.Results {
		res.Visit, res.JudgedBy, res.JudgedAt, res.JudgedWith = v.ID, v.CablesSHA256, v.RecordedAt, s.By
		if err := addNew(ctx, tx, "spans", (&spanRow{v.Structure, res.Cable, res.Span}).columns()); err != nil {
			return err
		}
		if err := add(ctx, tx, "results", res.columns()); err != nil {
			return err
		}
	}
	return nil
}

// Rejudge adds results of a visit on record by another design version; those by earlier versions stay. Results by the same version that
// are on record already are left alone, and added is false.
func (r *Register) Rejudge(ctx context.Context, v Visit, cables File, designs []survey.Design, results []Result, by string) (added bool, err error) {
	sum, now := digest(cables.Bytes), stamp(r.now())
	err = r.write(ctx, func(tx *sql.Tx) error {
		var have int
		if err := tx.QueryRowContext(ctx, "SELECT count(*) FROM results WHERE visit = $1 AND judged_by = $2", v.ID, sum).Scan(&have); err != nil || have > 0 {
			added = false
			return err
		}
		if err := addDesigns(ctx, tx, cables, designs); err != nil {
			return err
		}
		for _, res := range results {
			res.Visit, res.JudgedBy, res.JudgedAt, res.JudgedWith = v.ID, sum, now, by
			if err := add(ctx, tx, "results", res.columns()); err != nil {
				return err
			}
		}
		added = true
		return nil
	})
	return added, err
}

// add adds a row.
func add(ctx context.Context, tx *sql.Tx, table string, cols []column) error {
	if _, err := tx.ExecContext(ctx, insertInto(table, cols), places(cols)...); err != nil {
		return fmt.Errorf("table %s: %w", table, err)
	}
	return nil
}

// addNew adds a row unless its key is there already.
func addNew(ctx context.Context, tx *sql.Tx, table string, cols []column) error {
	if _, err := tx.ExecContext(ctx, insertInto(table, cols)+" ON CONFLICT DO NOTHING", places(cols)...); err != nil {
		return fmt.Errorf("table %s: %w", table, err)
	}
	return nil
}

func addFile(ctx context.Context, tx *sql.Tx, f File) error {
	row := fileRow{digest(f.Bytes), string(f.Kind), plain(f.Name), int64(len(f.Bytes)), f.Bytes}
	return addNew(ctx, tx, "files", row.columns())
}

// addDesigns adds a design version.
func addDesigns(ctx context.Context, tx *sql.Tx, cables File, designs []survey.Design) error {
	var have int
	sum := digest(cables.Bytes)
	if err := tx.QueryRowContext(ctx, "SELECT count(*) FROM files WHERE sha256 = $1", sum).Scan(&have); err != nil || have > 0 {
		return err
	}
	if err := addFile(ctx, tx, cables); err != nil {
		return err
	}
	for _, d := range designs {
		row := designRow{sum, d}
		if err := addNew(ctx, tx, "designs", row.columns()); err != nil {
			return err
		}
	}
	return nil
}
