package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"tautbook/survey/register"
	"tautbook/tension"
)

// registerFlag names the register.
type registerFlag struct{ register string }

func (f *registerFlag) bind(cmd *cobra.Command) {
	cmd.Flags().StringVar(&f.register, "register", "register.db", "the register: an SQLite file, or a postgres:// URL")
}

// open opens the register for reading, or for writing; making it is the business of record and import.
func (f *registerFlag) open(cmd *cobra.Command, o register.Options) (*register.Register, error) {
	return register.Open(cmd.Context(), f.register, o)
}

// flagNames are the flags of a command by name.
func flagNames(cmd *cobra.Command) (out []string) {
	cmd.Flags().VisitAll(func(f *pflag.Flag) { out = append(out, f.Name) })
	slices.Sort(out)
	return out
}

type recordOptions struct {
	judgeFlags
	registerFlag
	supersedes, why string
	streams         streams
}

const recordHelp = `Records surveys in the register: the file as it is, its conditions, the design values, and the figures that "assess" gives.
A folder stands for the survey files in it (csv, txt, tsv, xyz, asc, pts, also with .gz), without its cables.csv.

One file is one visit and is recorded whole or not at all. The same file again is recognised and not recorded twice; a file
that is refused leaves the others be. Nothing is ever overwritten: a correction is recorded with --supersedes and --why, and
the visit that it corrects stays on record, marked.

The survey has to say its structure and its date, in the file or by flag.`

func newRecord(s streams) *cobra.Command {
	o := &recordOptions{streams: s}
	cmd := &cobra.Command{
		Use:   "record SURVEY|FOLDER...",
		Short: "Record visits in the register",
		Long:  recordHelp,
		Example: `  tautbook record main-left.csv
  tautbook record site-day/
  tautbook record --supersedes 3fa2 --why "wrong temperature" --temperature "9 degC" main-left.csv`,
		Args: atLeastOne,
		RunE: func(cmd *cobra.Command, args []string) error { return o.run(cmd, args) },
	}
	o.judgeFlags.bind(cmd)
	o.registerFlag.bind(cmd)
	cmd.Flags().StringVar(&o.supersedes, "supersedes", "", "the visit that this survey corrects, by id")
	cmd.Flags().StringVar(&o.why, "why", "", "the reason of the correction")
	return cmd
}

func (o *recordOptions) run(cmd *cobra.Command, args []string) error {
	files, err := o.surveyFiles(args)
	if err != nil {
		return err
	}
	if o.supersedes != "" && len(files) != 1 {
		return usageError{fmt.Errorf("--supersedes goes with one survey, found %d", len(files))}
	}
	if o.supersedes != "" && strings.TrimSpace(o.why) == "" {
		return usageError{errors.New("--supersedes needs the reason of the correction: --why")}
	}
	reg, err := o.open(cmd, register.Options{Create: true, Now: o.streams.now})
	if err != nil {
		return err
	}
	defer reg.Close()
	if o.supersedes != "" {
		v, err := reg.Visit(cmd.Context(), o.supersedes)
		if err != nil {
			return err
		}
		o.supersedes = v.ID
	}
	show := progressOf(o.streams, "recording")
	var problems []error
	for i, name := range files {
		show(i, len(files))
		if err := o.record(cmd, reg, name); err != nil {
			problems = append(problems, err)
		}
		if cmd.Context().Err() != nil {
			break
		}
	}
	show(len(files), len(files))
	if len(problems) > 0 && len(files) > 1 {
		problems = append(problems, fmt.Errorf("%d of %d files were not recorded", len(problems), len(files)))
	}
	return errors.Join(problems...)
}

// record records one file.
func (o *recordOptions) record(cmd *cobra.Command, reg *register.Register, name string) error {
	data, err := readAll(name, o.streams)
	if err != nil {
		return err
	}
	s := register.Submission{Survey: register.File{Kind: register.SurveyFile, Name: filepath.Base(name), Bytes: data},
		Settings: o.settings(cmd), Supersedes: o.supersedes, Why: o.why, By: version()}
	cables, err := o.cablesFile([]string{name})
	if err != nil {
		return err
	}
	if cables != "" {
		data, err := os.ReadFile(cables)
		if err != nil {
			return fmt.Errorf("cannot read the cables file: %w", err)
		}
		s.Cables = &register.File{Kind: register.CablesFile, Name: filepath.Base(cables), Bytes: data}
	}
	j, err := judgeStored(s.Survey, s.Cables, s.Settings)
	if err != nil {
		return err
	}
	for _, n := range j.survey.Notices {
		fmt.Fprintf(o.streams.err, "%s: %s\n", name, n.Text)
	}
	s.Designs, s.Conditions, s.Results = j.designs, j.survey.Conditions, j.results
	out, err := reg.Record(cmd.Context(), s)
	if err != nil {
		return err
	}
	word := "recorded"
	if out.Known {
		word = "on record already"
	}
	fmt.Fprintf(o.streams.out, "%s  %s: %s\n", out.Visit, s.Survey.Name, word)
	for _, r := range s.Results {
		fmt.Fprintf(o.streams.out, "  %s\n", resultLine(r))
	}
	return o.sameDay(cmd.Context(), reg, out, s.Conditions.Structure)
}

// sameDay says when another survey of the day is of the same cable: both count in the history.
func (o *recordOptions) sameDay(ctx context.Context, reg *register.Register, out register.Outcome, structure string) error {
	if out.Known {
		return nil
	}
	others, err := reg.SameDay(ctx, out.Visit)
	if err != nil {
		return err
	}
	for _, other := range others {
		fmt.Fprintf(o.streams.err, "tautbook: %s of %s is also in visit %s of the same day, and both count; if this one corrects it, record it with --supersedes %s\n",
			other.Cable, structure, other.Visit, other.Visit)
	}
	return nil
}

// surveyExtensions are those of survey files in a folder.
var surveyExtensions = []string{".csv", ".txt", ".tsv", ".xyz", ".asc", ".pts"}

// surveyFiles puts the surveys of a folder in the place of the folder. What is left out is said.
func (o *recordOptions) surveyFiles(args []string) (files []string, err error) {
	for _, arg := range args {
		info, err := os.Stat(arg)
		if arg == "-" || err != nil || !info.IsDir() {
			files = append(files, arg)
			continue
		}
		entries, err := os.ReadDir(arg)
		if err != nil {
			return nil, fmt.Errorf("cannot read the folder: %w", err)
		}
		found := 0
		for _, e := range entries {
			name := filepath.Join(arg, e.Name())
			bare := strings.TrimSuffix(strings.ToLower(e.Name()), ".gz")
			switch {
			case e.IsDir(), strings.HasPrefix(e.Name(), "."), bare == "cables.csv", o.cables != "" && filepath.Clean(o.cables) == name:
			case slices.Contains(surveyExtensions, filepath.Ext(bare)):
				files = append(files, name)
				found++
			default:
				fmt.Fprintf(o.streams.err, "tautbook: %s left out: not a survey by its name\n", name)
			}
		}
		if found == 0 {
			return nil, fmt.Errorf("%s: found no survey file in the folder, expected one that ends in %s", arg, strings.Join(surveyExtensions, ", "))
		}
	}
	return files, nil
}

// readAll reads a file or standard input.
func readAll(name string, s streams) ([]byte, error) {
	if name == "-" {
		return io.ReadAll(s.in)
	}
	data, err := os.ReadFile(name)
	if err != nil {
		return nil, fmt.Errorf("cannot read the survey: %w", err)
	}
	return data, nil
}

// progressOf shows on a terminal how far long work is, and nothing elsewhere.
func progressOf(s streams, what string) func(done, of int) {
	return func(done, of int) {
		switch {
		case !s.progress || of < 2:
		case done < of:
			fmt.Fprintf(s.err, "\r%s %d of %d", what, done+1, of)
		default:
			fmt.Fprint(s.err, "\r\033[K")
		}
	}
}

// resultLine is a result in one line.
func resultLine(r register.Result) string {
	name := r.Cable
	if r.Span != "" {
		name += "/" + r.Span
	}
	line := fmt.Sprintf("%-20s %-12s", name, strings.ToUpper(r.Verdict))
	if r.HorizontalTension != nil {
		line += fmt.Sprintf(" H %s", tension.ForceScale(r.HorizontalTension.Value).Figure(*r.HorizontalTension))
	}
	if r.Ratio != nil {
		line += fmt.Sprintf(", ratio %.3f ± %.3f", r.Ratio.Value, r.Ratio.Expanded())
	}
	return strings.TrimRight(line, " ")
}
