package register

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
)

// Backup writes the register to a new SQLite file while it is in use: a consistent copy of one moment, whole or not at all. An existing file
// is never replaced. A register in PostgreSQL has the tools of that server, or Export.
func (r *Register) Backup(ctx context.Context, path string) (err error) {
	if r.postgres {
		return fmt.Errorf("%s: a backup file is for an SQLite register: use \"tautbook register export\" or the server's own backup", r.name)
	}
	if _, err := os.Lstat(path); !errors.Is(err, fs.ErrNotExist) {
		return fmt.Errorf("%s is there already: name a new file", path)
	}
	dir, err := os.MkdirTemp(filepath.Dir(path), ".backup-")
	if err != nil {
		return fmt.Errorf("cannot write the backup: %w", err)
	}
	defer os.RemoveAll(dir)
	tmp := filepath.Join(dir, "register")
	if err := r.patiently(ctx, func() error {
		_, err := r.db.ExecContext(ctx, "VACUUM INTO $1", tmp)
		return err
	}); err != nil {
		return fmt.Errorf("cannot write the backup %s: %w", path, r.told(err))
	}
	return publish(tmp, path)
}

// publish syncs a finished file and gives it its name.
func publish(tmp, path string) error {
	f, err := os.Open(tmp)
	if err != nil {
		return err
	}
	err = f.Sync()
	if err := errors.Join(err, f.Close()); err != nil {
		return fmt.Errorf("cannot write %s: %w", path, err)
	}
	if err := os.Rename(tmp, path); err != nil {
		return fmt.Errorf("cannot write %s: %w", path, err)
	}
	return nil
}
