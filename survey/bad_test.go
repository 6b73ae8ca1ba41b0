package survey

import (
	"errors"
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "rewrite the golden messages of testdata/bad")

// broken runs read over every file of a folder and holds its message to the file of the same name ending in .want.
func broken(t *testing.T, dir string, least int, read func(path string) error) {
	t.Helper()
	files, err := filepath.Glob(filepath.Join("testdata/bad", dir, "*.csv"))
	if err != nil {
		t.Fatal(err)
	}
	if len(files) < least {
		t.Fatalf("%d broken files in %s, want at least %d", len(files), dir, least)
	}
	for _, path := range files {
		err := read(path)
		if err == nil {
			t.Errorf("%s was taken", path)
			continue
		}
		got := strings.ReplaceAll(err.Error(), filepath.Dir(path)+string(filepath.Separator), "") + "\n"
		want := path + ".want"
		if *update {
			if err := os.WriteFile(want, []byte(got), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		text, err2 := os.ReadFile(want)
		if err2 != nil {
			t.Fatal(err2)
		}
		if got != string(text) {
			t.Errorf("%s: message\n%swant\n%s", path, got, text)
		}
		var input *InputError
		if !errors.As(err, &input) {
			t.Errorf("%s: %T, want *InputError", path, err)
			continue
		}
		for _, p := range input.Problems {
			if p.File == "" || p.Expected == "" || (p.Line == 0 && !strings.Contains(path, "empty.csv") && !wholeFile[filepath.Base(path)]) {
				t.Errorf("%s: a problem lacks file, line or expectation: %+v", path, p)
			}
		}
	}
}

// wholeFile are the broken files whose fault has no line.
var wholeFile = map[string]bool{"comments-only.csv": true, "header-only.csv": true, "loads-listed-without.csv": true, "load-on-unknown-cable.csv": true, "reading-on-unknown-cable.csv": true, "no-codes.csv": true, "wrong-structure.csv": true}

func TestBrokenSurveys(t *testing.T) {
	known, _, err := ReadDesignsFile("testdata/bad/known/cables.csv")
	if err != nil {
		t.Fatal(err)
	}
	needsKnown := map[string]bool{"span-missing.csv": true, "no-codes.csv": true, "wrong-structure.csv": true}
	broken(t, "points", 85, func(path string) error {
		o := PointOptions{}
		if needsKnown[filepath.Base(path)] {
			o.Known = known
		}
		_, err := ReadPointsFile(path, o)
		return err
	})
}

func TestBrokenReadings(t *testing.T) {
	broken(t, "readings", 49, func(path string) error {
		_, err := ReadPointsFile(path, PointOptions{})
		return err
	})
}

func TestBrokenCablesFiles(t *testing.T) {
	broken(t, "cables", 35, func(path string) error {
		_, _, err := ReadDesignsFile(path)
		return err
	})
}

// A line beyond the limit is made here: a file of a megabyte is no example to keep.
func TestLineBeyondLimit(t *testing.T) {
	text := "x,y,z\n0,0,10\n1,0," + strings.Repeat("9", longestLine) + "\n"
	_, err := ReadPoints(strings.NewReader(text), PointOptions{Name: "long.csv"})
	const want = "long.csv:3: expected lines of at most 1 MiB; this is not a survey, or its line ends are lost"
	if err == nil || err.Error() != want {
		t.Errorf("message %v, want %s", err, want)
	}
}
