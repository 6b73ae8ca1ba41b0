package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"

	"github.com/rogpeppe/go-internal/testscript"
	"github.com/santhosh-tekuri/jsonschema/v6"

	"tautbook/fieldsheets"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"tautbook": main})
}

// Whole runs of the built program: each script holds commands, input files and what must come out.
func TestScripts(t *testing.T) {
	scripts, err := filepath.Glob("testdata/script/*.txtar")
	if err != nil || len(scripts) < 5 {
		t.Fatalf("%d scripts, %v", len(scripts), err)
	}
	wires, err := filepath.Abs("../../fit/testdata/ahn4")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{Dir: "testdata/script", RequireExplicitExec: true,
		Setup: func(e *testscript.Env) error { e.Setenv("WIRES", wires); return nil }})
}

// inProcess runs one command line without a process.
func inProcess(t *testing.T, in string, args ...string) (out, errs string, code int) {
	t.Helper()
	var o, e bytes.Buffer
	at := time.Date(2026, 6, 12, 8, 30, 0, 0, time.UTC)
	code = run(args, streams{in: strings.NewReader(in), out: &o, err: &e, now: func() time.Time { return at }})
	return o.String(), e.String(), code
}

func TestDemoMeetsSchema(t *testing.T) {
	dir := t.TempDir()
	if _, errs, code := inProcess(t, "", "demo", dir); code != exitDone {
		t.Fatalf("exit %d: %s", code, errs)
	}
	text, err := os.ReadFile(filepath.Join(dir, "summary.json"))
	if err != nil {
		t.Fatal(err)
	}
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(fieldsheets.Schema()))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("schema.json", doc); err != nil {
		t.Fatal(err)
	}
	schema, err := c.Compile("schema.json")
	if err != nil {
		t.Fatal(err)
	}
	got, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	if err := schema.Validate(got); err != nil {
		t.Error(err)
	}
	left, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range left {
		if strings.HasPrefix(f.Name(), ".") {
			t.Errorf("temporary file left: %s", f.Name())
		}
	}
}

// The demo's files are what its generator writes: every number in them has a known truth behind it.
func TestDemoFilesComeFromTheGenerator(t *testing.T) {
	dir := t.TempDir()
	cmd := exec.Command("go", "run", "./demo/generate", dir)
	if out, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	made, err := os.ReadDir(dir)
	if err != nil || len(made) != 6 {
		t.Fatalf("%d files, %v", len(made), err)
	}
	for _, f := range made {
		want, err := os.ReadFile(filepath.Join("demo", f.Name()))
		if err != nil {
			t.Fatal(err)
		}
		got, err := os.ReadFile(filepath.Join(dir, f.Name()))
		if err != nil {
			t.Fatal(err)
		}
		if !bytes.Equal(got, want) {
			t.Errorf("%s is not what the generator writes", f.Name())
		}
	}
}

// Every "$ tautbook" line of the README is run in a fresh demo folder, and what the README shows must be what it prints. A line "..."
// stands for any lines.
func TestReadmeIsTrue(t *testing.T) {
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	t.Chdir(dir)
	if _, errs, code := inProcess(t, "", "demo", "."); code != exitDone {
		t.Fatal(errs)
	}
	blocks := regexp.MustCompile("(?s)```console\n(.*?)```").FindAllStringSubmatch(string(text), -1)
	ran := 0
	for _, b := range blocks {
		for _, part := range strings.Split("\n"+b[1], "\n$ ")[1:] {
			command, want, _ := strings.Cut(part, "\n")
			args, ok := strings.CutPrefix(command, "tautbook ")
			if !ok {
				continue
			}
			ran++
			out, errs, _ := inProcess(t, "", splitArgs(args)...)
			if !shows(out+errs, want) {
				t.Errorf("README: $ %s\nshows\n%s\nbut prints\n%s", command, want, out+errs)
			}
		}
	}
	if ran < 3 {
		t.Errorf("%d commands of the README were run", ran)
	}
}

// splitArgs parts a command line at blanks outside double quotes.
func splitArgs(line string) (out []string) {
	for _, m := range regexp.MustCompile(`"([^"]*)"|(\S+)`).FindAllStringSubmatch(line, -1) {
		out = append(out, m[1]+m[2])
	}
	return out
}

// shows reports whether printed text is what the manual shows, "..." lines standing for any lines.
func shows(printed, shown string) bool {
	var b strings.Builder
	b.WriteString(`(?s)^`)
	for _, line := range strings.Split(strings.TrimRight(shown, "\n"), "\n") {
		if strings.TrimSpace(line) == "..." {
			b.WriteString(`.*`)
			continue
		}
		b.WriteString(regexp.QuoteMeta(line) + `\n`)
	}
	ok, err := regexp.MatchString(strings.TrimSuffix(b.String(), `\n`)+`\n*$`, printed)
	return err == nil && ok
}

func BenchmarkAssess(b *testing.B) {
	dir := b.TempDir()
	if err := writeDemo(dir); err != nil {
		b.Fatal(err)
	}
	name := filepath.Join(dir, "main-left.csv")
	for _, format := range []string{"json", "html"} {
		b.Run(format, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				var o, e bytes.Buffer
				if code := run([]string{"assess", "--format", format, name}, streams{out: &o, err: &e, now: time.Now}); code != exitDone {
					b.Fatal(e.String())
				}
			}
		})
	}
}
