package register

import (
	"context"
	"database/sql"
	"encoding/csv"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
)

// row is a row of a table.
type row interface{ columns() []column }

// table is one table of the exchange.
type table struct {
	name string
	keys int // how many of the first columns are the key
	row  func() row
}

// tables are all tables, each after those that it refers to.
var tables = []table{
	{"files", 1, func() row { return &fileRow{} }},
	{"structures", 1, func() row { return &structureRow{} }},
	{"spans", 3, func() row { return &spanRow{} }},
	{"designs", 4, func() row { return &designRow{} }},
	{"visits", 1, func() row { return &Visit{} }},
	{"readings", 2, func() row { return &readingRow{} }},
	{"results", 4, func() row { return &Result{} }},
	{"events", 1, func() row { return &Event{} }},
}

// filesFolder holds the stored files in an export, each named by its SHA-256.
const filesFolder = "files"

// cellsOf are the columns that stand in the CSV of a table: the bytes of files are files of their own.
func cellsOf(r row) []column {
	cols := r.columns()
	if _, ok := r.(*fileRow); ok {
		return cols[:len(cols)-1]
	}
	return cols
}

// Export writes the whole register, as it is at one moment, into a new folder: one CSV file a table, UTF-8, comma, header of SQL column names,
// and the stored files under files/. Import makes the same register of it. The folder appears whole or not at all.
func (r *Register) Export(ctx context.Context, dir string) (err error) {
	if _, err := os.Lstat(dir); !errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("%s is there already: name a new folder", dir)
	}
	tmp, err := os.MkdirTemp(filepath.Dir(filepath.Clean(dir)), ".export-")
	if err != nil {
		return fmt.Errorf("cannot write the export: %w", err)
	}
	defer os.RemoveAll(tmp)
	if err := os.Mkdir(filepath.Join(tmp, filesFolder), 0o755); err != nil {
		return err
	}
	var opts *sql.TxOptions
	if r.postgres {
		opts = &sql.TxOptions{Isolation: sql.LevelRepeatableRead, ReadOnly: true}
	}
	err = r.patiently(ctx, func() error {
		tx, err := r.db.BeginTx(ctx, opts)
		if err != nil {
			return err
		}
		defer tx.Rollback()
		for _, t := range tables {
			if err := t.export(ctx, tx, tmp); err != nil {
				return err
			}
		}
		return nil
	})
	if err != nil {
		return r.told(err)
	}
	if err := os.Chmod(tmp, 0o755); err != nil {
		return err
	}
	return publish(tmp, dir)
}

// export writes one table.
func (t table) export(ctx context.Context, tx *sql.Tx, dir string) (err error) {
	f, err := os.Create(filepath.Join(dir, t.name+".csv"))
	if err != nil {
		return err
	}
	defer func() { err = errors.Join(err, f.Close()) }()
	w := csv.NewWriter(f)
	cols := t.row().columns()
	if err := w.Write(strings.Split(names(cellsOf(t.row()), ""), ", ")); err != nil {
		return err
	}
	rows, err := tx.QueryContext(ctx, "SELECT "+names(cols, "")+" FROM "+t.name+" ORDER BY "+names(cols[:t.keys], ""))
	if err != nil {
		return err
	}
	defer rows.Close()
	var cells []string
	for rows.Next() {
		r := t.row()
		if err := rows.Scan(places(r.columns())...); err != nil {
			return fmt.Errorf("table %s: %w", t.name, err)
		}
		if file, ok := r.(*fileRow); ok {
			if err := file.export(dir); err != nil {
				return err
			}
		}
		cells = cells[:0]
		for _, c := range cellsOf(r) {
			cells = append(cells, cellOf(c.at))
		}
		if err := w.Write(cells); err != nil {
			return err
		}
	}
	if err := rows.Err(); err != nil {
		return err
	}
	w.Flush()
	return errors.Join(w.Error(), f.Sync())
}

// export writes the bytes of a stored file; damaged ones are refused, so that an export is always sound.
func (f *fileRow) export(dir string) error {
	if err := f.check(); err != nil {
		return err
	}
	return os.WriteFile(filepath.Join(dir, filesFolder, f.SHA256), f.Bytes, 0o644)
}
