package register

import (
	"context"
	"database/sql"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// Imported counts the rows of an import.
type Imported struct{ Added, Known int }

// Import adds everything of a folder that Export wrote, whole or not at all. Rows that are on record already are recognised; one that
// is on record with other content is refused. An error names file, line and column.
func (r *Register) Import(ctx context.Context, dir string) (n Imported, err error) {
	err = r.write(ctx, func(tx *sql.Tx) error {
		n = Imported{}
		for _, t := range tables {
			if err := t.importFile(ctx, tx, dir, &n); err != nil {
				return err
			}
		}
		return nil
	})
	return n, err
}

// importFile adds the rows of one CSV file.
func (t table) importFile(ctx context.Context, tx *sql.Tx, dir string, n *Imported) error {
	name := filepath.Join(dir, t.name+".csv")
	f, err := os.Open(name)
	if err != nil {
		return fmt.Errorf("cannot read the export: %w", err)
	}
	defer f.Close()
	insert, err := tx.PrepareContext(ctx, insertInto(t.name, t.row().columns())+" ON CONFLICT DO NOTHING")
	if err != nil {
		return err
	}
	defer insert.Close()
	return t.parse(f, name, func(r row, line int) error {
		if file, ok := r.(*fileRow); ok {
			if err := file.load(dir); err != nil {
				return fmt.Errorf("%s:%d: %w", name, line, err)
			}
		}
		added, err := insert.ExecContext(ctx, places(r.columns())...)
		if err != nil {
			return fmt.Errorf("%s:%d: %w", name, line, err)
		}
		if count, err := added.RowsAffected(); err != nil || count > 0 {
			n.Added++
			return err
		}
		n.Known++
		if err := t.known(ctx, tx, r); err != nil {
			return fmt.Errorf("%s:%d: %w", name, line, err)
		}
		return nil
	})
}

// known holds a row against the one on record with the same key.
func (t table) known(ctx context.Context, tx *sql.Tx, r row) error {
	cols, have := r.columns(), t.row()
	conditions := make([]string, t.keys)
	for i := range conditions {
		conditions[i] = fmt.Sprintf("%s = $%d", cols[i].name, i+1)
	}
	err := tx.QueryRowContext(ctx, "SELECT "+names(cols, "")+" FROM "+t.name+" WHERE "+strings.Join(conditions, " AND "), places(cols[:t.keys])...).
		Scan(places(have.columns())...)
	if errors.Is(err, sql.ErrNoRows) {
		return errors.New("it supersedes what another row on record supersedes already")
	}
	if err != nil {
		return err
	}
	for i, c := range have.columns() {
		if a, b := valueOf(c.at), valueOf(cols[i].at); a != b && !aside(t.name, c.name) {
			return fmt.Errorf("column %s: on record with this key and other content: %s there, %s here", c.name, short(a), short(b))
		}
	}
	return nil
}

// aside reports whether a column only tells how a row came to be: the same visit may have been recorded in two places.
func aside(table, name string) bool {
	switch name {
	case "recorded_at", "recorded_by", "judged_at", "judged_with", "survey_name":
		return table != "events"
	}
	return table == "files" && name == "name"
}

func short(a any) string {
	s := show(a)
	if len(s) > 60 {
		return s[:60] + "..."
	}
	return s
}

// load reads the bytes of a stored file from an export.
func (f *fileRow) load(dir string) error {
	if len(f.SHA256) != 64 || strings.Trim(f.SHA256, "0123456789abcdef") != "" {
		return fmt.Errorf("column sha256: found %q, expected 64 hexadecimal digits", f.SHA256)
	}
	b, err := os.ReadFile(filepath.Join(dir, filesFolder, f.SHA256))
	if err != nil {
		return fmt.Errorf("cannot read the stored file: %w", err)
	}
	f.Bytes = b
	return f.check()
}

// parse reads a CSV file of the exchange and hands every row over with its line. Columns must be those of the table, in order.
func (t table) parse(in io.Reader, name string, each func(r row, line int) error) error {
	cr := csv.NewReader(in)
	cr.FieldsPerRecord = -1
	want := strings.Split(names(cellsOf(t.row()), ""), ", ")
	head, err := cr.Read()
	if err != nil {
		return fmt.Errorf("%s:1: found no header, expected %s", name, strings.Join(want, ","))
	}
	if len(head) > 0 {
		head[0] = strings.TrimPrefix(head[0], "\ufeff") // a spreadsheet adds it
	}
	if !slices.Equal(head, want) {
		return fmt.Errorf("%s:1: found columns %q, expected %q", name, strings.Join(head, ","), strings.Join(want, ","))
	}
	for {
		cells, err := cr.Read()
		if err == io.EOF {
			return nil
		}
		if err != nil {
			return fmt.Errorf("%s: %w", name, err)
		}
		line, _ := cr.FieldPos(0)
		if len(cells) != len(want) {
			return fmt.Errorf("%s:%d: found %d cells, expected %d", name, line, len(cells), len(want))
		}
		r := t.row()
		for i, c := range cellsOf(r) {
			if err := setCell(c.at, cells[i]); err != nil {
				line, _ := cr.FieldPos(i)
				return fmt.Errorf("%s:%d: column %s: %w", name, line, c.name, err)
			}
		}
		if err := checkKey(r); err != nil {
			return fmt.Errorf("%s:%d: %w", name, line, err)
		}
		if err := each(r, line); err != nil {
			return err
		}
	}
}

// checkKey holds a row against its own key.
func checkKey(r row) error {
	switch r := r.(type) {
	case *Visit:
		if r.ID != r.key() {
			return fmt.Errorf("column visit: found %q, its content asks for %q: a cell was changed after the export", r.ID, r.key())
		}
	case *Event:
		if r.ID != r.key() {
			return fmt.Errorf("column event: found %q, its content asks for %q: a cell was changed after the export", r.ID, r.key())
		}
	case *readingRow:
		if r.tension == nil {
			return errors.New("column tension_N: found nothing, expected a number")
		}
	case *structureRow:
		if r.Structure == "" {
			return errors.New("column structure: found nothing, expected a name")
		}
	}
	return nil
}
