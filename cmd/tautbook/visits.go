package main

import (
	"fmt"
	"io"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"tautbook/fieldsheets"
	"tautbook/survey"
	"tautbook/survey/register"
	"tautbook/tension"
)

const visitsHelp = `Lists the visits on record by structure and date. A visit that was corrected is marked and no longer counts.
"visits show" prints one visit, "visits compare" holds two side by side. An id may be cut to its first digits.`

func newVisits(s streams) *cobra.Command {
	var f registerFlag
	var structure string
	cmd := &cobra.Command{
		Use:     "visits",
		Short:   "List, show and compare visits on record",
		Long:    visitsHelp,
		Example: "  tautbook visits\n  tautbook visits --structure \"Talvessa footbridge\"\n  tautbook visits show 3fa2\n  tautbook visits compare 3fa2 91c0",
		Args:    exactly(0, "no argument"),
		RunE: func(cmd *cobra.Command, _ []string) error {
			return withRegister(cmd, f, func(reg *register.Register) error { return listVisits(cmd, reg, structure, s) })
		},
	}
	cmd.Flags().StringVar(&structure, "structure", "", "only visits of this structure")
	cmd.PersistentFlags().StringVar(&f.register, "register", "register.db", "the register: an SQLite file, or a postgres:// URL")
	cmd.AddCommand(&cobra.Command{
		Use:     "show VISIT",
		Short:   "One visit with its conditions and figures",
		Example: "  tautbook visits show 3fa2",
		Args:    exactly(1, "one visit id"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return withRegister(cmd, f, func(reg *register.Register) error { return showVisit(cmd, reg, args[0], s) })
		},
	}, &cobra.Command{
		Use:     "compare VISIT VISIT",
		Short:   "Two visits side by side: what changed, and is it significant",
		Long:    compareHelp,
		Example: "  tautbook visits compare 3fa2 91c0",
		Args:    exactly(2, "two visit ids"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return withRegister(cmd, f, func(reg *register.Register) error { return compareVisits(cmd, reg, args[0], args[1], s) })
		},
	})
	return cmd
}

// exactly asks for a number of arguments.
func exactly(n int, what string) cobra.PositionalArgs {
	return func(_ *cobra.Command, args []string) error {
		if len(args) != n {
			return usageError{fmt.Errorf("found %d arguments, expected %s", len(args), what)}
		}
		return nil
	}
}

// withRegister opens a register to read it.
func withRegister(cmd *cobra.Command, f registerFlag, do func(*register.Register) error) error {
	reg, err := f.open(cmd, register.Options{ReadOnly: true})
	if err != nil {
		return err
	}
	defer reg.Close()
	return do(reg)
}

func listVisits(cmd *cobra.Command, reg *register.Register, structure string, s streams) error {
	visits, err := reg.Visits(cmd.Context(), structure)
	if err != nil {
		return err
	}
	for i, v := range visits {
		if i == 0 || v.Structure != visits[i-1].Structure {
			fmt.Fprintln(s.out, v.Structure)
		}
		fmt.Fprintf(s.out, "  %s  %s  %s%s\n", v.ID, v.Date, v.SurveyName, marks(v))
	}
	if len(visits) == 0 {
		fmt.Fprintf(s.err, "tautbook: %s: no visit on record\n", reg.Name())
	}
	return nil
}

// marks say how a visit stands to others.
func marks(v register.Visit) (out string) {
	if v.Supersedes != "" {
		out += fmt.Sprintf("; corrects %s (%s)", v.Supersedes, v.Why)
	}
	if v.SupersededBy != "" {
		out += "; superseded by " + v.SupersededBy
	}
	return out
}

func showVisit(cmd *cobra.Command, reg *register.Register, id string, s streams) error {
	v, err := reg.Visit(cmd.Context(), id)
	if err != nil {
		return err
	}
	results, err := reg.Results(cmd.Context(), v)
	if err != nil {
		return err
	}
	line := func(name, text string) {
		if text != "" {
			fmt.Fprintf(s.out, "  %-12s %s\n", name, text)
		}
	}
	fmt.Fprintf(s.out, "%s, %s\n", v.Structure, v.Date)
	line("visit", v.ID+marks(v))
	line("survey", v.SurveyName)
	line("SHA-256", v.SurveySHA256)
	if v.Temperature != nil {
		line("temperature", figure(v.Temperature, "degC")+" (cable)")
	}
	loads := string(v.Loads)
	if loads == "" {
		loads = string(survey.LoadsNotChecked)
	}
	line("loads", loads)
	line("wind", v.Wind)
	line("instrument", v.Instrument)
	line("crew", v.Crew)
	line("recorded", v.RecordedAt+" with "+v.RecordedBy)
	judged := "\x00"
	for _, r := range results {
		if r.JudgedBy != judged {
			judged = r.JudgedBy
			fmt.Fprintf(s.out, "\n%s; values with U, k = 2, if the load is as recorded\n", judgedBy(r, v))
		}
		fmt.Fprintf(s.out, "%s\n%s\n", resultLine(r), folded(r.Reason))
	}
	return cautions(s.out)
}

// judgedBy says which design a result rests on.
func judgedBy(r register.Result, v register.Visit) string {
	switch {
	case r.JudgedBy == "":
		return "without design values"
	case r.JudgedBy == v.CablesSHA256:
		return "judged by the design of the record, " + r.JudgedBy[:12]
	}
	return "judged again by the design " + r.JudgedBy[:12]
}

// cautions end every sheet.
func cautions(w io.Writer) error {
	_, err := fmt.Fprintf(w, "\n%s\n", folded(strings.Join(fieldsheets.Cautions(), "\n\n")))
	return err
}

const compareHelp = `Holds two visits side by side, the second against the first, each by the design that it was judged by: tension at the
reference state, unstressed length, sag, chord, ratio to the expected tension. A change is significant when it is beyond its
U (k = 2). U of a change takes the two visits as independent; what they share (weight, stiffness) would partly cancel, so a
change that is called significant would be so without that too.`

func compareVisits(cmd *cobra.Command, reg *register.Register, first, second string, s streams) error {
	var visits [2]register.Visit
	var results [2][]register.Result
	for i, id := range []string{first, second} {
		v, err := reg.Visit(cmd.Context(), id)
		if err != nil {
			return err
		}
		all, err := reg.Results(cmd.Context(), v)
		if err != nil {
			return err
		}
		visits[i] = v
		for _, r := range all {
			if r.JudgedBy == v.CablesSHA256 {
				results[i] = append(results[i], r)
			}
		}
	}
	if visits[0].Structure != visits[1].Structure {
		return usageError{fmt.Errorf("visit %s is of %q, visit %s of %q: expected two of one structure", visits[0].ID, visits[0].Structure, visits[1].ID, visits[1].Structure)}
	}
	fmt.Fprintf(s.out, "%s: %s (%s) against %s (%s)\nValues with U, k = 2; U of a change takes the visits as independent.\n", visits[0].Structure,
		visits[1].Date, visits[1].ID[:8], visits[0].Date, visits[0].ID[:8])
	for _, note := range apart(visits[0], visits[1]) {
		fmt.Fprintf(s.out, "Note: %s\n", note)
	}
	pairs := 0
	for _, a := range results[0] {
		for _, b := range results[1] {
			if a.Cable == b.Cable && a.Span == b.Span {
				pairs++
				compareSpan(s.out, a, b)
			}
		}
	}
	if pairs == 0 {
		return fmt.Errorf("visits %s and %s have no cable in common", visits[0].ID, visits[1].ID)
	}
	return cautions(s.out)
}

// apart tells in what two visits differ beside the cables.
func apart(a, b register.Visit) (out []string) {
	if a.CablesSHA256 != b.CablesSHA256 {
		out = append(out, "they are judged by different design values; \"register judge\" judges both by the same")
	}
	if a.Instrument != b.Instrument {
		out = append(out, fmt.Sprintf("instruments differ: %q, %q", a.Instrument, b.Instrument))
	}
	if a.Loads != b.Loads {
		out = append(out, fmt.Sprintf("records of loads differ: %q, %q; tensions hold if the load is as recorded", a.Loads, b.Loads))
	}
	if (a.Temperature == nil) != (b.Temperature == nil) {
		out = append(out, "the cable temperature was recorded once only")
	}
	return out
}

// compareSpan prints the figures of one span side by side.
func compareSpan(w io.Writer, a, b register.Result) {
	fmt.Fprintf(w, "\n%s %s: %s, then %s\n", a.Cable, a.Span, a.Verdict, b.Verdict)
	fmt.Fprintf(w, "  %-18s %-20s %-20s %s\n", "", "first", "second", "change")
	rows := []struct {
		name, unit string
		a, b       *survey.Quantity
	}{{"H at reference", "N", a.ReferenceTension, b.ReferenceTension}, {"H on the day", "N", a.HorizontalTension, b.HorizontalTension},
		{"unstressed length", "m", a.UnstressedLength, b.UnstressedLength}, {"sag at mid-span", "m", a.SagMid, b.SagMid}, {"chord", "m", a.Chord, b.Chord},
		{"rise", "m", a.Rise, b.Rise}, {"ratio to expected", "", a.Ratio, b.Ratio}}
	for _, r := range rows {
		if r.a == nil && r.b == nil {
			continue
		}
		change := "not known"
		if r.a != nil && r.b != nil {
			d := survey.Quantity{Value: r.b.Value - r.a.Value, U: math.Hypot(r.a.U, r.b.U)}
			change = figure(&d, r.unit) + ", " + significance(d)
		}
		fmt.Fprintf(w, "  %-18s %-20s %-20s %s\n", r.name, figure(r.a, r.unit), figure(r.b, r.unit), change)
	}
}

// significance says whether a change is beyond its U.
func significance(d survey.Quantity) string {
	if math.Abs(d.Value) > d.Expanded() {
		return "significant"
	}
	return "not significant"
}

// figure is a quantity with U, k = 2.
func figure(q *survey.Quantity, unit string) string {
	switch {
	case q == nil:
		return "not known"
	case unit == "N":
		return tension.ForceScale(q.Value).Figure(*q)
	}
	n := max(0, tension.Decimals(q.Value, q.Expanded()))
	return strings.TrimSpace(fmt.Sprintf("%.*f ± %.*f %s", n, q.Value, n, q.Expanded(), unit))
}
