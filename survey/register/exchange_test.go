package register_test

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"tautbook/survey"
	"tautbook/survey/register"
)

// texts that a spreadsheet or a CSV reader would change.
var awkward = []string{"=1+1", "+bridge", "-bridge", "@bridge", "'bridge", "-5", `back\slash\r`, "Brücke, \"old\"", "two\nlines\r\nof text", " blanks ", "\ttab"}

// full makes a register with everything in it.
func full(t *testing.T, where string) *register.Register {
	r := open(t, where, register.Options{Create: true})
	first := record(t, r, submission("Old bridge", 1, "north", "south"))
	fixed := submission("Old bridge", 2, "north")
	fixed.Supersedes, fixed.Why = first, awkward[8]
	record(t, r, fixed)
	for i, text := range awkward {
		e := register.Event{Structure: "Old bridge", Cable: "north", Date: "2000-01-05", Kind: register.Retensioned, Size: &survey.Quantity{Value: 0.1 + 0.2*float64(i), U: 1.0 / 3}, Unit: "m", Note: text}
		if _, err := r.AddEvent(background, e); err != nil {
			t.Fatal(err)
		}
	}
	return r
}

// folder reads every file under a folder.
func folder(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, d os.DirEntry, err error) error {
		if err != nil || d.IsDir() {
			return err
		}
		b, err := os.ReadFile(path)
		rel, _ := filepath.Rel(dir, path)
		out[rel] = string(b)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

// What is exported, imported into a register of either kind and exported again is the same to the byte.
func TestExchangeRoundTrip(t *testing.T) {
	source := full(t, filepath.Join(t.TempDir(), "register.db"))
	dir := filepath.Join(t.TempDir(), "export")
	if err := source.Export(background, dir); err != nil {
		t.Fatal(err)
	}
	want := folder(t, dir)
	if len(want) != 8+4 {
		t.Errorf("%d files in the export, want 8 tables, 2 surveys and 2 cables files", len(want))
	}
	stores(t, func(t *testing.T, where string) {
		r := open(t, where, register.Options{Create: true})
		n, err := r.Import(background, dir)
		if err != nil || n.Added == 0 || n.Known != 0 {
			t.Fatalf("%+v, %v", n, err)
		}
		sound(t, r)
		again := filepath.Join(t.TempDir(), "again")
		if err := r.Export(background, again); err != nil {
			t.Fatal(err)
		}
		got := folder(t, again)
		for name := range want {
			if got[name] != want[name] {
				t.Errorf("%s differs after the round trip:\n%s\nwas\n%s", name, got[name], want[name])
			}
		}
		if len(got) != len(want) {
			t.Errorf("%d files, want %d", len(got), len(want))
		}
		events, err := r.Events(background, "")
		if err != nil {
			t.Fatal(err)
		}
		notes := map[string]bool{}
		for _, e := range events {
			notes[e.Note] = true
		}
		for _, text := range awkward {
			if !notes[text] {
				t.Errorf("the note %q came back otherwise", text)
			}
		}
		if twice, err := r.Import(background, dir); err != nil || twice.Added != 0 || twice.Known != n.Added {
			t.Errorf("imported twice: %+v, %v; want %d known", twice, err, n.Added)
		}
	})
}

// No cell of an export that is not a number begins like a formula.
func TestExportIsSafeInSpreadsheet(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "export")
	if err := full(t, filepath.Join(t.TempDir(), "register.db")).Export(background, dir); err != nil {
		t.Fatal(err)
	}
	b, err := os.ReadFile(filepath.Join(dir, "events.csv"))
	if err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{",'=1+1,", ",'+bridge,", ",'-bridge,", ",'@bridge,", ",''bridge,", ",-5,"} {
		if !strings.Contains(string(b), want) {
			t.Errorf("found no cell %q in\n%s", want, b)
		}
	}
}

// An import that cannot be taken names file, line and column and adds nothing.
func TestImportRefuses(t *testing.T) {
	for _, c := range []struct{ file, old, new, want string }{
		{"visits.csv", "2000-01-03", "2000-01-04", "visits.csv:2: column visit: found"},
		{"events.csv", "retensioned", "damaged", "events.csv:2: column event: found"},
		{"results.csv", "catenary,8,", "catenary,eight,", `results.csv:2: column points_used: found "eight"`},
		{"results.csv", "as designed,,,", "as designed,,,,", "results.csv:2: found"},
		{"results.csv", "verdict", "opinion", "results.csv:1: found columns"},
		{"readings.csv", "30700,", "NaN,", `readings.csv:2: column tension_N: found "NaN"`},
		{"files.csv", "survey,", "photo,", "files.csv:"},
		{"structures.csv", "Old bridge", "New bridge", "spans.csv:2:"},
	} {
		t.Run(c.want, func(t *testing.T) {
			dir := filepath.Join(t.TempDir(), "export")
			if err := full(t, filepath.Join(t.TempDir(), "register.db")).Export(background, dir); err != nil {
				t.Fatal(err)
			}
			name := filepath.Join(dir, c.file)
			b, err := os.ReadFile(name)
			if err != nil {
				t.Fatal(err)
			}
			if !strings.Contains(string(b), c.old) {
				t.Fatalf("%s has no %q:\n%s", c.file, c.old, b)
			}
			if err := os.WriteFile(name, []byte(strings.Replace(string(b), c.old, c.new, 1)), 0o644); err != nil {
				t.Fatal(err)
			}
			r, _ := create(t)
			if _, err := r.Import(background, dir); err == nil || !strings.Contains(err.Error(), c.want) {
				t.Errorf("%v; want %q", err, c.want)
			}
			if n := sound(t, r); n != 0 {
				t.Errorf("%d visits after a refused import", n)
			}
		})
	}
}

// An altered survey of an export is found.
func TestImportFindsAlteredSurvey(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "export")
	if err := full(t, filepath.Join(t.TempDir(), "register.db")).Export(background, dir); err != nil {
		t.Fatal(err)
	}
	found, err := filepath.Glob(filepath.Join(dir, "files", "*"))
	if err != nil || len(found) == 0 {
		t.Fatal(found, err)
	}
	b, err := os.ReadFile(found[0])
	if err != nil {
		t.Fatal(err)
	}
	b[len(b)/2] ^= 1
	if err := os.WriteFile(found[0], b, 0o644); err != nil {
		t.Fatal(err)
	}
	r, _ := create(t)
	if _, err := r.Import(background, dir); err == nil || !strings.Contains(err.Error(), "damaged") {
		t.Errorf("%v; want the damaged file named", err)
	}
}
