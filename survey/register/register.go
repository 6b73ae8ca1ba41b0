package register

import (
	"context"
	"database/sql"
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"net/url"
	"os"
	"strings"
	"time"

	_ "github.com/jackc/pgx/v5/stdlib" // PostgreSQL driver
	"github.com/pressly/goose/v3"
	"github.com/pressly/goose/v3/lock"
	_ "modernc.org/sqlite" // SQLite driver
)

//go:embed migrations/*.sql
var migrations embed.FS

// busyTimeout is how long SQLite itself waits for another writer, ms; after that a transaction is tried again, see write.
const busyTimeout = 5000

// migrationTries is how often the making of tables is tried while another process makes them too.
const migrationTries = 10

// Register is an open register. It may be used by many goroutines.
type Register struct {
	db       *sql.DB
	name     string // for messages: the file, or the URL without its password
	postgres bool
	now      func() time.Time
}

// Options steer how a register is opened.
type Options struct {
	Create   bool             // make it when it is not there
	ReadOnly bool             // never write; works beside writers
	Now      func() time.Time // clock of the record; nil = time.Now
	MaxBytes int64            // largest size of an SQLite file; 0 = what the disk holds
}

// Open opens the register at a file (SQLite) or at a postgres:// URL, and brings its tables up to date unless it is only read. An
// error names the place; it never holds the password of a URL.
func Open(ctx context.Context, where string, o Options) (*Register, error) {
	r := &Register{name: where, now: o.Now}
	if r.now == nil {
		r.now = time.Now
	}
	driver, source, err := r.source(where, o)
	if err != nil {
		return nil, err
	}
	if r.db, err = sql.Open(driver, source); err != nil {
		return nil, fmt.Errorf("%s: cannot open the register: %w", r.name, err)
	}
	if err := r.migrate(ctx, o); err != nil {
		r.db.Close()
		return nil, err
	}
	return r, nil
}

// source is the driver and what it opens.
func (r *Register) source(where string, o Options) (driver, source string, err error) {
	if strings.HasPrefix(where, "postgres://") || strings.HasPrefix(where, "postgresql://") {
		u, err := url.Parse(where)
		if err != nil {
			return "", "", errors.New("the URL of the register cannot be read, expected postgres://user@host/database")
		}
		r.postgres, r.name = true, u.Redacted()
		q := u.Query()
		if o.ReadOnly {
			q.Set("default_transaction_read_only", "on")
		}
		u.RawQuery = q.Encode()
		return "pgx", u.String(), nil
	}
	info, err := os.Stat(where)
	switch {
	case errors.Is(err, fs.ErrNotExist) && !o.Create:
		return "", "", fmt.Errorf("%s: there is no register here; \"tautbook record\" makes one, --register names another", where)
	case err != nil && !errors.Is(err, fs.ErrNotExist):
		return "", "", fmt.Errorf("cannot open the register: %w", err)
	case err == nil && info.IsDir():
		return "", "", fmt.Errorf("%s is a folder, expected a register file", where)
	}
	q := url.Values{"_pragma": {fmt.Sprintf("busy_timeout(%d)", busyTimeout)}}
	if o.ReadOnly {
		q.Set("mode", "ro")
	} else {
		q["_pragma"] = append(q["_pragma"], "journal_mode(WAL)", "synchronous(FULL)", "foreign_keys(1)")
		q.Set("_txlock", "immediate")
		if o.MaxBytes > 0 {
			q["_pragma"] = append(q["_pragma"], fmt.Sprintf("max_page_count(%d)", max(1, o.MaxBytes/4096)))
		}
	}
	return "sqlite", (&url.URL{Scheme: "file", Opaque: (&url.URL{Path: where}).EscapedPath(), RawQuery: q.Encode()}).String(), nil
}

// migrate brings the tables up to date, or refuses those of a newer program.
func (r *Register) migrate(ctx context.Context, o Options) error {
	dialect := goose.DialectSQLite3
	if r.postgres {
		dialect = goose.DialectPostgres
	}
	sub, err := fs.Sub(migrations, "migrations")
	if err != nil {
		return err
	}
	opts := []goose.ProviderOption{goose.WithDisableGlobalRegistry(true)}
	if r.postgres && !o.ReadOnly {
		locker, err := lock.NewPostgresSessionLocker()
		if err != nil {
			return err
		}
		opts = append(opts, goose.WithSessionLocker(locker))
	}
	p, err := goose.NewProvider(dialect, r.db, sub, opts...)
	if err != nil {
		return err
	}
	have, err := r.schemaVersion(ctx)
	if err != nil {
		return fmt.Errorf("%s: cannot open the register: %w", r.name, r.told(err))
	}
	want := p.ListSources()[len(p.ListSources())-1].Version
	switch {
	case have == want:
		return nil
	case have > want:
		return fmt.Errorf("%s: made by a newer program (tables %d, this one knows %d): use that program", r.name, have, want)
	case o.ReadOnly || (have == 0 && !o.Create):
		return fmt.Errorf("%s: found tables of version %d, expected %d: it is no register, or one that \"tautbook record\" must bring up to date first", r.name, have, want)
	}
	for try := 1; ; try++ {
		err := r.patiently(ctx, func() error { _, err := p.Up(ctx); return err })
		if err == nil {
			return nil
		}
		// another process that makes the same tables at the same moment is no fault, once they are there
		if have, lost := r.schemaVersion(ctx); lost == nil && have == want {
			return nil
		}
		if try == migrationTries {
			return fmt.Errorf("%s: cannot make the tables: %w", r.name, r.told(err))
		}
		time.Sleep(time.Duration(try) * 20 * time.Millisecond)
	}
}

// schemaVersion is the version of the tables, 0 when there are none.
func (r *Register) schemaVersion(ctx context.Context) (version int64, err error) {
	find := "SELECT count(*) FROM sqlite_master WHERE type = 'table' AND name = 'goose_db_version'"
	if r.postgres {
		find = "SELECT count(*) FROM information_schema.tables WHERE table_schema = current_schema() AND table_name = 'goose_db_version'"
	}
	var n int
	err = r.patiently(ctx, func() error { return r.db.QueryRowContext(ctx, find).Scan(&n) })
	if err != nil || n == 0 {
		return 0, err
	}
	err = r.db.QueryRowContext(ctx, "SELECT coalesce(max(version_id), 0) FROM goose_db_version WHERE is_applied").Scan(&version)
	return version, err
}

// Close closes the register.
func (r *Register) Close() error { return r.db.Close() }

// Name is the file or the URL of the register without its password.
func (r *Register) Name() string { return r.name }
