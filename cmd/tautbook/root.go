package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"time"

	"github.com/spf13/cobra"
)

// Exit codes, printed in the help.
const (
	exitDone      = 0 // done
	exitFailed    = 1 // input refused, or a file could not be read or written
	exitUsage     = 2 // unknown command, flag or value
	exitUndecided = 3 // with --exit-by-verdict: no cable is off its design, at least one is undecided or without design
	exitOff       = 4 // with --exit-by-verdict: at least one cable is slack, overloaded or off design
)

// streams are the outside of the process, passed in so that a run is testable whole.
type streams struct {
	in       io.Reader
	out, err io.Writer
	color    bool // escape codes are welcome on out
	now      func() time.Time
}

// usageError is a mistake in the command line.
type usageError struct{ error }

// codeError ends the run with a code but without a message.
type codeError int

func (c codeError) Error() string { return fmt.Sprintf("exit code %d", int(c)) }

// run executes one command line and returns the exit code.
func run(args []string, s streams) int {
	root := newRoot(s)
	root.SetArgs(args)
	root.SetIn(s.in)
	root.SetOut(s.out)
	root.SetErr(s.err)
	cmd, err := root.ExecuteC()
	var code codeError
	var usage usageError
	switch {
	case err == nil:
		return exitDone
	case errors.As(err, &code):
		return int(code)
	case errors.As(err, &usage):
		fmt.Fprintf(s.err, "tautbook: %v\nSee \"%s --help\".\n", err, cmd.CommandPath())
		return exitUsage
	default:
		fmt.Fprintf(s.err, "tautbook: %v\n", err)
		return exitFailed
	}
}

const rootHelp = `tautbook turns points surveyed on a hanging cable into the tension that is in it today, with its uncertainty, holds
it against the design at the day's temperature and load, and prints the condition summary.

Start with "tautbook demo", or with "tautbook check SURVEY.csv" on your own file.

Results go to standard output, everything else to standard error. Exit codes:
  0  done
  1  input refused, or a file could not be read or written
  2  wrong usage
  3  with --exit-by-verdict: a cable is undecided or without design, none worse
  4  with --exit-by-verdict: a cable is slack, overloaded or off design

It advises. A licensed engineer and the local code decide.`

func newRoot(s streams) *cobra.Command {
	root := &cobra.Command{
		Use:           "tautbook",
		Short:         "Tension in hanging cables from survey points",
		Long:          rootHelp,
		Version:       version(),
		SilenceErrors: true,
		SilenceUsage:  true,
		Args: func(_ *cobra.Command, args []string) error {
			if len(args) > 0 {
				return usageError{fmt.Errorf("unknown command %q", args[0])}
			}
			return nil
		},
		RunE: func(cmd *cobra.Command, _ []string) error { return cmd.Help() },
	}
	root.SetFlagErrorFunc(func(_ *cobra.Command, err error) error { return usageError{err} })
	root.AddCommand(newCheck(s), newAssess(s), newDemo(s), newManual(s))
	narrow(root)
	return root
}

// version is the module's, or the commit that the toolchain recorded.
func version() string {
	info, ok := debug.ReadBuildInfo()
	if !ok {
		return "unknown"
	}
	if v := info.Main.Version; v != "" && v != "(devel)" {
		return v
	}
	for _, s := range info.Settings {
		if s.Key == "vcs.revision" && len(s.Value) >= 12 {
			return "development " + s.Value[:12]
		}
	}
	return "development"
}

// wantsColor reports whether a file is a terminal whose owner did not ask for plain text (NO_COLOR, TERM=dumb).
func wantsColor(f *os.File) bool {
	info, err := f.Stat()
	return err == nil && info.Mode()&os.ModeCharDevice != 0 && os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb"
}

// atLeastOne asks for one file or more.
func atLeastOne(_ *cobra.Command, args []string) error {
	if len(args) == 0 {
		return usageError{errors.New("name at least one survey file, or - for standard input")}
	}
	return nil
}
