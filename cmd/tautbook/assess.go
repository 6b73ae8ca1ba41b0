package main

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"sync"

	"github.com/spf13/cobra"

	"tautbook/fieldsheets"
	"tautbook/fit"
	"tautbook/survey"
	"tautbook/tension"
)

// assessOptions are the inputs of one assess run.
type assessOptions struct {
	readingFlags
	conditionFlags
	samplingFlags
	selfWeight, deckLoad string
	findLoads            bool
	rejectBeyond         float64
	format, out          string
	html, pdf, json, csv string
	paper, pictures      string
	exitByVerdict        bool
	supportBetween       string
	streams              streams
}

// mostFound is how many local loads that nobody told are searched for on one span.
const mostFound = 3

const assessHelp = `Fits the hanging curve through the points of each cable span, works out today's tension and end reactions, holds them
against the design at the day's temperature and load, and prints the condition summary.

Design values come from cables.csv; without it there are shapes but no forces, unless --self-weight or --deck-load gives a
load. Conditions of the visit stand as "# key: value" lines at the top of the survey file or are given by flag.

Points whose normalised residual is beyond --reject-beyond are left out, one at a time, and listed; 0 leaves out none.

A load that hangs at one place makes a kink. Loads of that kind are told by --load "CABLE; 3.2 +- 0.2 kN; at 12.4 m; what"; kinks that
nobody told are searched for, and what is found is said in the findings. --find-loads=false fits without looking for any.`

func newAssess(s streams) *cobra.Command {
	o := &assessOptions{streams: s}
	cmd := &cobra.Command{
		Use:   "assess SURVEY...",
		Short: "Tension, verdict and condition summary from survey files",
		Long:  assessHelp,
		Example: `  tautbook assess main-left.csv
  tautbook assess --cables cables.csv --temperature "17.5 +- 1.5 degC" --loads "as filed" --html summary.html main-left.csv
  tautbook assess --monte-carlo adaptive --seed 1 main-left.csv
  tautbook assess --format json wire.csv --self-weight "50 N/m"`,
		Args: atLeastOne,
		RunE: func(cmd *cobra.Command, files []string) error { return o.run(cmd, files) },
	}
	o.readingFlags.bind(cmd)
	o.conditionFlags.bind(cmd)
	o.samplingFlags.bind(cmd)
	fl := cmd.Flags()
	fl.StringVar(&o.selfWeight, "self-weight", "", "self weight of every cable that has no design values, for example \"50 +- 1 N/m\"")
	fl.StringVar(&o.deckLoad, "deck-load", "", "deck load of every cable that has no design values, per horizontal metre")
	fl.Float64Var(&o.rejectBeyond, "reject-beyond", 6, "leave out points whose normalised residual is beyond this; 0 leaves out none")
	fl.BoolVar(&o.findLoads, "find-loads", true, "search the shape for local loads that nobody told")
	fl.StringVar(&o.format, "format", "text", "what goes to standard output: text, json, csv or html")
	fl.StringVar(&o.out, "out", "", "write the result to this file instead of standard output")
	fl.StringVar(&o.html, "html", "", "also write the condition summary as one HTML file")
	fl.StringVar(&o.pdf, "pdf", "", "also write the condition summary as a PDF")
	fl.StringVar(&o.paper, "paper", string(fieldsheets.A4), "sheet of the PDF: A4 or Letter")
	fl.StringVar(&o.pictures, "pictures", "", "also write the drawings of every cable into this folder, as SVG and PNG")
	fl.StringVar(&o.json, "json", "", "also write the result as JSON")
	fl.StringVar(&o.csv, "csv", "", "also write the result as CSV, one line a cable")
	fl.StringVar(&o.supportBetween, "support-between", "", "how cables pass over supports between two spans: fixed, equal tension (saddle, sheave) or equal horizontal (roller carriage); replaces the column of the cables file")
	fl.BoolVar(&o.exitByVerdict, "exit-by-verdict", false, "exit 3 or 4 when a cable is not as designed (see tautbook --help)")
	return cmd
}

// checked refuses values that no flag can have; it gives how cables pass over supports, "" for as filed.
func (o *assessOptions) checked() (over survey.SupportBetween, err error) {
	if !(o.rejectBeyond >= 0) {
		return "", usageError{fmt.Errorf("--reject-beyond is %g, expected 0 or more", o.rejectBeyond)}
	}
	if p := fieldsheets.Paper(o.paper); p != fieldsheets.A4 && p != fieldsheets.Letter {
		return "", usageError{fmt.Errorf("--paper is %q, expected A4 or Letter", o.paper)}
	}
	over, other, err := survey.ParseSupportBetween(o.supportBetween)
	if err == nil && over != other {
		err = errors.New("one word holds for every support; for each end of a span use the column support_between of the cables file")
	}
	if err != nil {
		return "", usageError{fmt.Errorf("--support-between: %w", err)}
	}
	return over, nil
}

func (o *assessOptions) run(cmd *cobra.Command, files []string) error {
	write, err := writerFor(o.format, o.streams)
	if err != nil {
		return err
	}
	over, err := o.checked()
	if err != nil {
		return err
	}
	sampling, err := o.sampling(cmd)
	if err != nil {
		return err
	}
	in, err := o.read(files, *o.values["structure"], o.streams)
	if err != nil {
		return err
	}
	if err := o.apply(cmd, in.surveys); err != nil {
		return err
	}
	plain, err := o.plainLoad()
	if err != nil {
		return err
	}
	opts := fit.Options{RejectBeyond: o.rejectBeyond}
	if o.findLoads {
		opts.FindLoads = mostFound
	}
	cases := casesOf(in, plain, opts)
	if plain != nil && !slices.ContainsFunc(cases, func(c tension.Case) bool { return c.Design == plain }) {
		fmt.Fprintf(o.streams.err, "tautbook: --self-weight and --deck-load are not used: %s has design values for every cable\n", in.cables)
	}
	shown := newProgress(o.streams)
	if sampling != nil {
		sampling.Progress = shown.add
	}
	for i := range cases {
		cases[i].Sampling = sampling
		cases[i].NoDrawing = !o.draws()
	}
	cables, err := assessAll(cases)
	shown.end()
	if err != nil {
		return err
	}
	in.continuous = tension.JoinSpans(cables, over)
	report := newReport(in, cables, o.streams)
	if err := o.write(write, report); err != nil {
		return err
	}
	return o.exitCode(cables)
}

// plainLoad is the load of cables without design values, nil when no flag gives one.
func (o *assessOptions) plainLoad() (*survey.Design, error) {
	if o.selfWeight == "" && o.deckLoad == "" {
		return nil, nil
	}
	d := &survey.Design{Load: survey.LoadBoth}
	parse := func(flag, text string, into **survey.Quantity) error {
		if text == "" {
			return nil
		}
		q, err := survey.ParseQuantity(text, survey.ForcePerLength)
		if err != nil {
			return usageError{fmt.Errorf("--%s: %w", flag, err)}
		}
		if q.Value <= 0 {
			return usageError{fmt.Errorf("--%s is %g N/m, expected more than 0", flag, q.Value)}
		}
		*into = &q
		return nil
	}
	if err := parse("self-weight", o.selfWeight, &d.SelfWeight); err != nil {
		return nil, err
	}
	if err := parse("deck-load", o.deckLoad, &d.DeckLoad); err != nil {
		return nil, err
	}
	switch {
	case d.DeckLoad == nil:
		d.Load = survey.LoadSelfWeight
	case d.SelfWeight == nil:
		d.Load = survey.LoadDeck
	}
	return d, nil
}

// draws reports whether some sheet has pictures.
func (o *assessOptions) draws() bool {
	return o.format == "html" || o.html != "" || o.pdf != "" || o.pictures != ""
}

// casesOf pairs every surveyed span with its design values. The points go from the surveys to the cases.
func casesOf(in input, plain *survey.Design, opts fit.Options) (cases []tension.Case) {
	index := survey.IndexDesigns(in.designs)
	for _, sv := range in.surveys {
		for i, sp := range sv.Spans {
			sv.Spans[i].Points = nil // the case has them now, and lets go of them when it is done
			d := index.Of(sv.Conditions.Structure, sp.Cable, sp.Span)
			if d == nil {
				d = plain
			}
			cases = append(cases, tension.Case{Points: sp, File: sv.File, Design: d, Conditions: sv.Conditions, Fit: opts})
		}
	}
	return cases
}

// assessAll assesses the spans on all cores, in order. Every span that fails is named.
func assessAll(cases []tension.Case) ([]tension.Assessment, error) {
	if len(cases) == 0 {
		return nil, errors.New("no point of the survey is on a cable: see \"tautbook check\" for how the codes were understood")
	}
	out := make([]tension.Assessment, len(cases))
	errs := make([]error, len(cases))
	var group sync.WaitGroup
	next := make(chan int)
	for range min(runtime.GOMAXPROCS(0), len(cases)) {
		group.Go(func() {
			for i := range next {
				if out[i], errs[i] = tension.Assess(cases[i]); errs[i] != nil {
					errs[i] = fmt.Errorf("%s: %w", cases[i].File, errs[i])
				}
				cases[i].Points = survey.SpanPoints{} // many files of points do not fit in memory beside their results
			}
		})
	}
	for i := range cases {
		next <- i
	}
	close(next)
	group.Wait()
	return out, errors.Join(errs...)
}

func newReport(in input, cables []tension.Assessment, s streams) fieldsheets.Report {
	return fieldsheets.NewReport(fieldsheets.Tool{Name: "tautbook", Version: version()}, s.now(),
		fieldsheets.Input{Surveys: in.surveys, CablesFile: in.cables, CablesNotices: in.notices, Continuous: in.continuous}, cables)
}

// writerFor is the printer of a format.
func writerFor(format string, s streams) (func(io.Writer, fieldsheets.Report) error, error) {
	switch format {
	case "text":
		return func(w io.Writer, r fieldsheets.Report) error {
			return fieldsheets.WriteText(w, r, fieldsheets.TextOptions{Width: 80, Color: s.color})
		}, nil
	case "json":
		return fieldsheets.WriteJSON, nil
	case "csv":
		return fieldsheets.WriteCSV, nil
	case "html":
		return fieldsheets.WriteHTML, nil
	}
	return nil, usageError{fmt.Errorf("--format is %q, expected text, json, csv or html", format)}
}

// write prints the result and every extra file that was asked for.
func (o *assessOptions) write(print func(io.Writer, fieldsheets.Report) error, r fieldsheets.Report) error {
	for _, extra := range []struct {
		path  string
		print func(io.Writer, fieldsheets.Report) error
	}{{o.html, fieldsheets.WriteHTML}, {o.pdf, o.writePDF}, {o.json, fieldsheets.WriteJSON}, {o.csv, fieldsheets.WriteCSV}} {
		if extra.path == "" {
			continue
		}
		if err := writeFile(extra.path, func(w io.Writer) error { return extra.print(w, r) }); err != nil {
			return err
		}
	}
	if err := o.writePictures(r); err != nil {
		return err
	}
	if o.out != "" {
		return writeFile(o.out, func(w io.Writer) error { return print(w, r) })
	}
	return print(o.streams.out, r)
}

func (o *assessOptions) writePDF(w io.Writer, r fieldsheets.Report) error {
	return fieldsheets.WritePDF(w, r, fieldsheets.Paper(o.paper))
}

// writePictures writes every drawing into the folder that was named. Cables of one name in a file system that does not tell upper from
// lower case get numbers.
func (o *assessOptions) writePictures(r fieldsheets.Report) error {
	if o.pictures == "" {
		return nil
	}
	if err := os.MkdirAll(o.pictures, 0o755); err != nil {
		return fmt.Errorf("cannot make the folder of the pictures: %w", err)
	}
	seen := map[string]int{}
	for i := range r.Cables {
		for _, p := range fieldsheets.Pictures(&r.Cables[i]) {
			name := p.Name
			key := strings.ToLower(name)
			if seen[key]++; seen[key] > 1 {
				name = fmt.Sprintf("%s-%d", name, seen[key])
			}
			if err := writeFile(filepath.Join(o.pictures, name+".svg"), p.WriteSVG); err != nil {
				return err
			}
			if err := writeFile(filepath.Join(o.pictures, name+".png"), p.WritePNG); err != nil {
				return err
			}
		}
	}
	return nil
}

// exitCode turns verdicts into an exit code when that was asked for.
func (o *assessOptions) exitCode(cables []tension.Assessment) error {
	if !o.exitByVerdict {
		return nil
	}
	code := exitDone
	for _, c := range cables {
		switch c.Verdict {
		case tension.Slack, tension.Overload, tension.OffDesign:
			return codeError(exitOff)
		case tension.Undecided, tension.NoDesign:
			code = exitUndecided
		}
	}
	if code == exitDone {
		return nil
	}
	return codeError(code)
}
