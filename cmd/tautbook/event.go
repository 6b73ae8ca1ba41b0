package main

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"tautbook/survey/register"
)

const eventHelp = `Records what was done to a cable or happened to it, so that the history can tell a step that somebody made from one that
nobody did. Kinds: installed, retensioned, load added, load removed, damaged, support repaired, replaced, other.

The size is in turns, as take-up (a length, positive when cable is drawn out of the span), or a load (N/m or N).
Without --kind the events on record are listed. Nothing is overwritten: a correction names the event it --supersedes.`

func newEvent(s streams) *cobra.Command {
	var f registerFlag
	var e register.Event
	var kind, size string
	cmd := &cobra.Command{
		Use:   "event",
		Short: "Record or list what was done to a cable",
		Long:  eventHelp,
		Example: `  tautbook event --structure "Talvessa footbridge" --cable hand-left --date 2026-07-02 --kind retensioned --size "3 turns"
  tautbook event --structure "Talvessa footbridge" --date 2026-08-01 --kind "support repaired" --note "anchor block B"
  tautbook event`,
		Args: exactly(0, "flags only"),
		RunE: func(cmd *cobra.Command, _ []string) error {
			if kind == "" {
				return withRegister(cmd, f, func(reg *register.Register) error { return listEvents(cmd, reg, e.Structure, s) })
			}
			e.Kind = register.EventKind(strings.ToLower(kind))
			return addEvent(cmd, f, e, size, s)
		},
	}
	f.bind(cmd)
	fl := cmd.Flags()
	fl.StringVar(&e.Structure, "structure", "", "the structure")
	fl.StringVar(&e.Cable, "cable", "", "the cable; every cable of the structure when not given")
	fl.StringVar(&e.Span, "span", "", "the span of the cable; every span when not given")
	fl.StringVar(&e.Date, "date", "", "the day, 2026-06-11")
	fl.StringVar(&kind, "kind", "", "what happened")
	fl.StringVar(&size, "size", "", "how much: \"3 turns\", \"25 +- 2 mm\", \"180 N/m\", \"2 kN\"")
	fl.StringVar(&e.Note, "note", "", "in words")
	fl.StringVar(&e.Supersedes, "supersedes", "", "the event that this one corrects, by its whole id")
	return cmd
}

func addEvent(cmd *cobra.Command, f registerFlag, e register.Event, size string, s streams) error {
	if size != "" {
		q, unit, err := register.ParseSize(size)
		if err != nil {
			return usageError{fmt.Errorf("--size: %w", err)}
		}
		e.Size, e.Unit = &q, unit
	}
	reg, err := f.open(cmd, register.Options{Now: s.now})
	if err != nil {
		return err
	}
	defer reg.Close()
	id, err := reg.AddEvent(cmd.Context(), e)
	if err != nil {
		return err
	}
	fmt.Fprintf(s.out, "%s  recorded\n", id)
	return nil
}

func listEvents(cmd *cobra.Command, reg *register.Register, structure string, s streams) error {
	events, err := reg.Events(cmd.Context(), structure)
	if err != nil {
		return err
	}
	for _, e := range events {
		size := ""
		if e.Size != nil {
			size = "  " + figure(e.Size, e.Unit)
		}
		fmt.Fprintf(s.out, "%s  %s  %s  %s  %s%s  %s\n", e.ID, e.Date, e.Structure, strings.Trim(e.Cable+"/"+e.Span, "/"), e.Kind, size, e.Note)
	}
	return nil
}
