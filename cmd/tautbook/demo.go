package main

import (
	"embed"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"
)

//go:embed demo/*.csv demo/*.txt
var demoFiles embed.FS

const demoHelp = `Writes an invented site into a folder (default: demo-out), runs the main job on it and says where to look.

The site is a valley footbridge with two main cables, two hand cables, a guy and a span wire; its surveys come in different
units and separators. Each cable has a story that a quick look at the sag would get wrong.`

// demoSurveys are the surveys of the visit, in the order of the summary.
var demoSurveys = []string{"main-left.csv", "main-right.txt", "hand-cables.csv", "guy-east.csv", "span-wire.txt"}

func newDemo(s streams) *cobra.Command {
	return &cobra.Command{
		Use:     "demo [DIR]",
		Short:   "The main job on a built-in invented site",
		Long:    demoHelp,
		Example: "  tautbook demo\n  tautbook demo site",
		Args: func(_ *cobra.Command, args []string) error {
			if len(args) > 1 {
				return usageError{fmt.Errorf("found %d arguments, expected one folder at most", len(args))}
			}
			return nil
		},
		RunE: func(_ *cobra.Command, args []string) error {
			dir := "demo-out"
			if len(args) == 1 {
				dir = args[0]
			}
			return runDemo(dir, s)
		},
	}
}

// runDemo writes the site and runs the same commands that a user would type.
func runDemo(dir string, s streams) error {
	if err := writeDemo(dir); err != nil {
		return err
	}
	in := func(name string) string { return filepath.Join(dir, name) }
	args := []string{"assess", "--html", in("summary.html"), "--pdf", in("summary.pdf"), "--json", in("summary.json"), "--csv", in("summary.csv")}
	for _, name := range demoSurveys {
		args = append(args, in(name))
	}
	if code := run(args, s); code != exitDone {
		return codeError(code)
	}
	fmt.Fprintf(s.out, "\nThen somebody looked along hand-left, found a pipe, and listed it. The same points again:\n\n")
	quiet := s
	quiet.out = io.Discard
	if code := run([]string{"assess", "--html", in("summary-after-a-look.html"), in("hand-left-after-a-look.csv")}, quiet); code != exitDone {
		return codeError(code)
	}
	if code := run([]string{"assess", "--format", "text", in("hand-left-after-a-look.csv")}, s); code != exitDone {
		return codeError(code)
	}
	fmt.Fprintf(s.out, `
Where to look:
  %s, %s  condition summary of the visit, for screen and paper
  %s  the hand cable after its loads were looked at
  %s, %s       the same figures for programs
  %s and the surveys beside it     what went in
Run it yourself:
  tautbook check %s
  tautbook assess %s
`, in("summary.html"), in("summary.pdf"), in("summary-after-a-look.html"), in("summary.json"), in("summary.csv"), in("cables.csv"), in("main-left.csv"), in("main-left.csv"))
	return nil
}

// writeDemo copies the embedded files. Files of the same name are replaced, others are left alone; a folder that holds other things
// under these names as folders is refused by the file system.
func writeDemo(dir string) error {
	if err := os.MkdirAll(dir, 0o755); err != nil {
		return fmt.Errorf("cannot make the demo folder: %w", err)
	}
	entries, err := fs.ReadDir(demoFiles, "demo")
	if err != nil {
		return errors.New("the demo is missing from this build")
	}
	for _, e := range entries {
		data, err := demoFiles.ReadFile("demo/" + e.Name())
		if err != nil {
			return err
		}
		if err := writeFile(filepath.Join(dir, e.Name()), func(w io.Writer) error { _, err := w.Write(data); return err }); err != nil {
			return err
		}
	}
	return nil
}
