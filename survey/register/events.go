package register

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"slices"
	"strconv"
	"strings"
	"time"

	"tautbook/survey"
)

// key is the id that the content of an event asks for. The moment of its record is part of it: the same turns may be given twice a day.
func (e *Event) key() string {
	size := ""
	if e.Size != nil {
		size = exact(e.Size.Value) + " " + exact(e.Size.U)
	}
	return keyOf(e.Structure, e.Cable, e.Span, e.Date, string(e.Kind), size, e.Unit, e.Note, e.Supersedes, e.RecordedAt)
}

// exact writes a number so that it is read back as it was.
func exact(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// AddEvent adds an event and returns its id. The structure, and the cable and span when they are named, must be on record: a name
// that was mistyped would be recorded and count nowhere.
func (r *Register) AddEvent(ctx context.Context, e Event) (string, error) {
	if err := e.check(); err != nil {
		return "", err
	}
	e.Structure, e.Cable, e.Span, e.Note = plain(e.Structure), plain(e.Cable), plain(e.Span), plain(e.Note)
	e.RecordedAt = stamp(r.now())
	e.ID = e.key()
	err := r.write(ctx, func(tx *sql.Tx) error {
		var n int
		if err := tx.QueryRowContext(ctx, "SELECT count(*) FROM spans WHERE structure = $1 AND ($2 = '' OR cable = $2) AND ($3 = '' OR span = $3)",
			e.Structure, e.Cable, e.Span).Scan(&n); err != nil {
			return err
		}
		if n == 0 {
			return fmt.Errorf("found structure %q, cable %q, span %q, expected one on record: see \"tautbook visits\" for the names", e.Structure, e.Cable, e.Span)
		}
		if e.Supersedes != "" {
			var structure string
			if err := tx.QueryRowContext(ctx, "SELECT structure FROM events WHERE event = $1", e.Supersedes).Scan(&structure); errors.Is(err, sql.ErrNoRows) || err == nil && structure != e.Structure {
				return fmt.Errorf("found no event %s of structure %q to supersede", e.Supersedes, e.Structure)
			} else if err != nil {
				return err
			}
		}
		err := add(ctx, tx, "events", e.columns())
		if taken(err) && e.Supersedes != "" {
			return fmt.Errorf("event %s is superseded already: supersede the newer one", e.Supersedes)
		}
		return err
	})
	return e.ID, err
}

// eventUnits are the units that the size of an event may have, by dimension.
var eventUnits = []string{"turns", "m", "N/m", "N"}

// check refuses an event that could not be understood later.
func (e *Event) check() error {
	if _, err := time.Parse(time.DateOnly, e.Date); err != nil {
		return fmt.Errorf("found date %q, expected one such as 2026-06-11", e.Date)
	}
	if !slices.Contains(EventKinds, e.Kind) {
		return fmt.Errorf("found kind %q, expected one of %q", e.Kind, EventKinds)
	}
	if e.Size != nil && !slices.Contains(eventUnits, e.Unit) {
		return fmt.Errorf("found a size in %q, expected one of %q", e.Unit, eventUnits)
	}
	return nil
}

// ParseSize reads the size of an event: "3 turns", "25 +- 2 mm" of take-up, "180 N/m" or "2 kN" of load. The unit that it returns is
// turns, m, N/m or N.
func ParseSize(text string) (survey.Quantity, string, error) {
	if q, ok := turns(text); ok {
		return q, "turns", nil
	}
	for _, d := range []struct {
		dimension survey.Dimension
		unit      string
	}{{survey.Length, "m"}, {survey.ForcePerLength, "N/m"}, {survey.Force, "N"}} {
		if q, err := survey.ParseQuantity(text, d.dimension); err == nil {
			return q, d.unit, nil
		}
	}
	return survey.Quantity{}, "", fmt.Errorf("found size %q, expected for example \"3 turns\", \"25 +- 2 mm\", \"180 N/m\" or \"2 kN\"", text)
}

// Events are the events that were not superseded, by structure and date, of one structure or of all.
func (r *Register) Events(ctx context.Context, structure string) (out []Event, err error) {
	rows, err := r.db.QueryContext(ctx, "SELECT "+names((&Event{}).columns(), "e.")+` FROM events e WHERE ($1 = '' OR structure = $1)
		AND NOT EXISTS (SELECT 1 FROM events f WHERE f.supersedes = e.event AND f.supersedes <> '') ORDER BY structure, event_date, event`, structure)
	if err != nil {
		return nil, r.told(err)
	}
	defer rows.Close()
	for rows.Next() {
		var e Event
		if err := rows.Scan(places(e.columns())...); err != nil {
			return nil, fmt.Errorf("%s: table events: %w", r.name, err)
		}
		out = append(out, e)
	}
	return out, r.told(rows.Err())
}

// turns reads "3 turns" or "2.5 +- 0.25 turns"; they are parsed as lengths, which have the same form.
func turns(text string) (survey.Quantity, bool) {
	for _, suffix := range []string{"turns", "turn"} {
		if rest, ok := strings.CutSuffix(strings.TrimSpace(text), suffix); ok {
			q, err := survey.ParseQuantity(strings.TrimSpace(rest)+" m", survey.Length)
			return q, err == nil
		}
	}
	return survey.Quantity{}, false
}
