package register_test

import (
	"fmt"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
	"testing"

	"tautbook/survey/register"
)

func itoa(n int) string { return strconv.Itoa(n) }

// Eight writers with connections of their own lose no visit; all of them meet at the making of the register and at the shared structure.
func TestManyWriters(t *testing.T) {
	each := 200
	if testing.Short() {
		each = 20
	}
	stores(t, func(t *testing.T, where string) {
		const writers = 8
		var group sync.WaitGroup
		for w := range writers {
			group.Go(func() {
				r, err := register.Open(background, where, register.Options{Create: true})
				if err != nil {
					t.Error(err)
					return
				}
				defer r.Close()
				for i := range each {
					if out, err := r.Record(background, submission("Old bridge", w*each+i, "north")); err != nil || out.Known {
						t.Errorf("writer %d, visit %d: %+v, %v", w, i, out, err)
						return
					}
				}
			})
		}
		group.Wait()
		if n := sound(t, open(t, where, register.Options{ReadOnly: true})); n != writers*each {
			t.Errorf("%d visits, want %d", n, writers*each)
		}
	})
}

// Eight writers with the same visit record it once.
func TestManyWritersOfOneVisit(t *testing.T) {
	stores(t, func(t *testing.T, where string) {
		r := open(t, where, register.Options{Create: true})
		s := submission("Old bridge", 1, "north")
		var group sync.WaitGroup
		for range 8 {
			group.Go(func() {
				if _, err := r.Record(background, s); err != nil {
					t.Error(err)
				}
			})
		}
		group.Wait()
		if n := sound(t, r); n != 1 {
			t.Errorf("%d visits, want 1", n)
		}
	})
}

// A full disk is said, and what was on record is kept.
func TestDiskFull(t *testing.T) {
	path := filepath.Join(t.TempDir(), "register.db")
	r := open(t, path, register.Options{Create: true, MaxBytes: 400 << 10})
	recorded := 0
	var err error
	for day := range 200 {
		s := submission("Old bridge", day, "north")
		s.Survey.Bytes = append(s.Survey.Bytes, []byte(fmt.Sprintf("# note: %s\n", strings.Repeat("x", 20_000)))...)
		if _, err = r.Record(background, s); err != nil {
			break
		}
		recorded++
	}
	if err == nil || !strings.Contains(err.Error(), "the disk is full") || !strings.Contains(err.Error(), path) {
		t.Fatalf("after %d visits: %v; want the full disk and the register named", recorded, err)
	}
	if recorded < 3 {
		t.Fatalf("only %d visits before the disk was full", recorded)
	}
	for _, o := range []register.Options{{ReadOnly: true}, {}} {
		if n := sound(t, open(t, path, o)); n != recorded {
			t.Errorf("%d visits after the full disk, want %d", n, recorded)
		}
	}
	more := open(t, path, register.Options{})
	record(t, more, submission("Old bridge", 1000, "north"))
	if n := sound(t, more); n != recorded+1 {
		t.Errorf("%d visits once there was room, want %d", n, recorded+1)
	}
}
