package register_test

import (
	"bufio"
	"flag"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautbook/survey/register"
)

var (
	kills = flag.Int("kills", 20, "how often TestKilledWhileRecording kills the recorder")
	child = flag.String("recorder", "", "used by TestKilledWhileRecording: record into this register until killed")
	from  = flag.Int("recorder-from", 0, "used by TestKilledWhileRecording: first day to record")
)

// TestRecorder is the process that TestKilledWhileRecording kills.
func TestRecorder(t *testing.T) {
	if *child == "" {
		t.Skip("runs only as the process that another test kills")
	}
	os.Stdout.WriteString("started\n")
	r, err := register.Open(background, *child, register.Options{Create: true})
	if err != nil {
		t.Fatal(err)
	}
	for day := *from; ; day++ {
		s := submission("Old bridge", day, "north", "south", "east", "west")
		s.Survey.Bytes = append(s.Survey.Bytes, []byte(strings.Repeat("# note: invented padding, so that a visit takes several pages\n", 2000))...)
		out, err := r.Record(background, s)
		if err != nil {
			t.Fatal(err)
		}
		os.Stdout.WriteString("recorded " + out.Visit + "\n")
	}
}

// A recorder killed at any moment leaves a register that opens, holds every visit that it reported, only whole ones, and verifies.
func TestKilledWhileRecording(t *testing.T) {
	n := *kills
	if testing.Short() {
		n = min(n, 5)
	}
	path := filepath.Join(t.TempDir(), "register.db")
	rng := rand.New(rand.NewPCG(1, 1))
	reported, total := map[string]bool{}, 0
	for i := range n {
		// every few kills the register is new, so that its making is hit as well
		if i%7 == 0 {
			path, reported = filepath.Join(t.TempDir(), "register.db"), map[string]bool{}
		}
		total += killRecorder(t, path, i*1000, time.Duration(rng.IntN(200_000))*time.Microsecond, reported)
		if _, err := os.Stat(path); err != nil {
			continue // killed before the file was made
		}
		r, err := register.Open(background, path, register.Options{Create: true})
		if err != nil {
			t.Fatalf("kill %d: %v", i, err)
		}
		sound(t, r)
		visits, err := r.Visits(background, "")
		if err != nil {
			t.Fatal(err)
		}
		have := map[string]bool{}
		for _, v := range visits {
			have[v.ID] = true
			if results, err := r.Results(background, v); err != nil || len(results) != 4 {
				t.Errorf("kill %d: visit %s has %d results, %v; want 4", i, v.ID, len(results), err)
			}
		}
		for id := range reported {
			if !have[id] {
				t.Errorf("kill %d: visit %s was reported as recorded and is lost", i, id)
			}
		}
		r.Close()
	}
	if total == 0 {
		t.Error("no recorder lived long enough to record anything")
	}
}

// killRecorder starts a recorder, kills it some time after it began, and notes and counts what it reported.
func killRecorder(t *testing.T, path string, day int, after time.Duration, reported map[string]bool) (n int) {
	t.Helper()
	c := exec.Command(os.Args[0], "-test.run=^TestRecorder$", "-recorder="+path, "-recorder-from="+itoa(day))
	out, err := c.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	lines := bufio.NewScanner(out)
	for lines.Scan() {
		id, ok := strings.CutPrefix(lines.Text(), "recorded ")
		switch {
		case ok && len(id) == 16:
			reported[id] = true
			n++
		case lines.Text() == "started":
			time.AfterFunc(after, func() { c.Process.Kill() })
		default:
			t.Errorf("the recorder said %q", lines.Text())
		}
	}
	c.Wait()
	return n
}
