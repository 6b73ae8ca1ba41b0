package register

import (
	"context"
	"database/sql"
	"errors"
	"fmt"
	"math/rand/v2"
	"strings"
	"time"

	"github.com/jackc/pgx/v5/pgconn"
	"modernc.org/sqlite"
	sqlite3 "modernc.org/sqlite/lib"
)

// patience is how long a write is tried again while others write.
const patience = 60 * time.Second

// write runs a transaction that is done whole or not at all. While others hold the register it waits and tries again.
func (r *Register) write(ctx context.Context, do func(tx *sql.Tx) error) error {
	err := r.patiently(ctx, func() error {
		tx, err := r.db.BeginTx(ctx, nil)
		if err != nil {
			return err
		}
		defer tx.Rollback()
		if err := do(tx); err != nil {
			return err
		}
		return tx.Commit()
	})
	return r.told(err)
}

// patiently tries again while the register is held by others, with growing pauses of random length.
func (r *Register) patiently(ctx context.Context, do func() error) error {
	pause, deadline := 5*time.Millisecond, time.Now().Add(patience)
	for {
		err := do()
		if !held(err) || time.Now().After(deadline) {
			return err
		}
		select {
		case <-ctx.Done():
			return ctx.Err()
		case <-time.After(pause/2 + rand.N(pause)):
		}
		pause = min(2*pause, 500*time.Millisecond)
	}
}

// held reports whether an error only means that somebody else was writing.
func held(err error) bool {
	switch sqliteCode(err) {
	case sqlite3.SQLITE_BUSY, sqlite3.SQLITE_LOCKED:
		return true
	}
	switch postgresCode(err) {
	case "40001", "40P01", "55P03": // serialization failure, deadlock, lock not available
		return true
	}
	return false
}

// taken reports whether a key was there already.
func taken(err error) bool {
	return sqliteCode(err) == sqlite3.SQLITE_CONSTRAINT && strings.Contains(err.Error(), "UNIQUE") || postgresCode(err) == "23505"
}

// sqliteCode is the primary result code of SQLite, 0 for other errors.
func sqliteCode(err error) int {
	var e *sqlite.Error
	if errors.As(err, &e) {
		return e.Code() & 0xff
	}
	return 0
}

func postgresCode(err error) string {
	var e *pgconn.PgError
	if errors.As(err, &e) {
		return e.Code
	}
	return ""
}

// told says in words what a database error means for the register.
func (r *Register) told(err error) error {
	var t toldError
	switch code := sqliteCode(err); {
	case err == nil, errors.As(err, &t):
		return err
	case held(err):
		return toldError{fmt.Errorf("%s: others were writing for more than %v; nothing of this was recorded, try again: %w", r.name, patience, err)}
	case code == sqlite3.SQLITE_FULL, postgresCode(err) == "53100":
		return toldError{fmt.Errorf("%s: the disk is full; nothing of this was recorded and what was on record is kept; make room and try again: %w", r.name, err)}
	case code == sqlite3.SQLITE_IOERR:
		return toldError{fmt.Errorf("%s: the disk failed or is full; nothing of this was recorded and what was on record is kept: %w", r.name, err)}
	case code == sqlite3.SQLITE_READONLY, postgresCode(err) == "25006":
		return toldError{fmt.Errorf("%s: the register may only be read: %w", r.name, err)}
	case code == sqlite3.SQLITE_NOTADB:
		return toldError{fmt.Errorf("%s: this file is no register: %w", r.name, err)}
	case code == sqlite3.SQLITE_CORRUPT:
		return toldError{fmt.Errorf("%s: the register is damaged; import the last export or take the last backup: %w", r.name, err)}
	case code != 0 || postgresCode(err) != "":
		return toldError{fmt.Errorf("%s: %w", r.name, err)}
	}
	return err
}

// toldError is an error that told has put into words.
type toldError struct{ error }

// Unwrap is the error in words and what it wraps.
func (t toldError) Unwrap() error { return t.error }
