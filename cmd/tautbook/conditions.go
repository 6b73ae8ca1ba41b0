package main

import (
	"fmt"

	"github.com/spf13/cobra"

	"tautbook/survey"
)

// conditionFlags are the conditions of the visit, given on the command line instead of in the survey file.
type conditionFlags struct {
	values map[string]*string
	loads  []string
	reads  []string
}

// conditionKeys are the keys of survey.Conditions that have a flag of the same name, in the order of the help.
var conditionKeys = []struct{ key, help string }{
	{"structure", "what is inspected"},
	{"date", "date of the visit, 2026-06-11"},
	{"temperature", "cable temperature, for example \"12 +- 2 degC\""},
	{"wind", "wind in words"},
	{"loads", "record of loads: \"as filed\", \"listed\" or \"not checked\" (default not checked)"},
	{"supports", "whether the surveyed support marks lie on the cable: \"on the cable\" or \"beside the cable\" (default)"},
	{"instrument", "instrument"},
	{"accuracy", "standard deviation of one point, for example \"3 mm\" or \"horizontal 3 mm, vertical 2 mm\""},
	{"crew", "crew"},
}

func (f *conditionFlags) bind(cmd *cobra.Command) {
	f.values = map[string]*string{}
	for _, k := range conditionKeys {
		f.values[k.key] = cmd.Flags().String(k.key, "", k.help)
	}
	cmd.Flags().StringArrayVar(&f.reads, "reading", nil, readingHelp)
	cmd.Flags().StringArrayVar(&f.loads, "load", nil,
		"a load seen on the day: \"CABLE; 30 +- 2 N/m; along cable; service pipe\" (or along deck); may be repeated")
}

// readingHelp is the help of --reading.
const readingHelp = "what was read on the day beside the points: \"CABLE; tension at A; 30.7 +- 0.5 kN; load cell\" (or tension at B, horizontal tension, " +
	"lift-off at A with how far the anchor was lifted, frequency with its mode, wave return 3, sag at mid-span, tangent at B); may be repeated, all are used"

// apply sets the flags over the conditions of every survey; what they replace is told as a notice.
func (f *conditionFlags) apply(cmd *cobra.Command, surveys []*survey.Survey) error {
	var given survey.Conditions
	for _, k := range conditionKeys {
		if !cmd.Flags().Changed(k.key) {
			continue
		}
		if err := given.Set(k.key, *f.values[k.key]); err != nil {
			return usageError{fmt.Errorf("--%s: %w", k.key, err)}
		}
	}
	for _, l := range f.loads {
		if err := given.Set("load", l); err != nil {
			return usageError{fmt.Errorf("--load: %w", err)}
		}
	}
	for _, r := range f.reads {
		if err := given.Set("reading", r); err != nil {
			return usageError{fmt.Errorf("--reading: %w", err)}
		}
	}
	for _, sv := range surveys {
		f.over(cmd, sv, given)
	}
	return f.matched(surveys)
}

// matched refuses a --load or --reading that concerns no cable of any survey.
func (f *conditionFlags) matched(surveys []*survey.Survey) error {
	misses := map[[2]string]int{}
	for _, sv := range surveys {
		if len(f.loads) > 0 {
			for _, l := range sv.UnmatchedLoads() {
				misses[[2]string{"load", l.Cable}]++
			}
			for _, l := range sv.UnmatchedLocal() {
				misses[[2]string{"load", l.Cable}]++
			}
		}
		if len(f.reads) > 0 {
			for _, r := range sv.UnmatchedReadings() {
				misses[[2]string{"reading", r.Cable}]++
			}
		}
	}
	for what, n := range misses {
		if n == len(surveys) {
			return usageError{fmt.Errorf("--%s: found cable %q, expected a cable of the surveys: see \"tautbook check\" for their names", what[0], what[1])}
		}
	}
	return nil
}

// over replaces what was given, one by one, so that a flag for the temperature leaves the date of the file alone.
func (f *conditionFlags) over(cmd *cobra.Command, sv *survey.Survey, given survey.Conditions) {
	c := &sv.Conditions
	replaced := func(key string, had bool) {
		if had {
			sv.Notices = append(sv.Notices, survey.Notice{File: sv.File, Text: fmt.Sprintf("--%s replaces the %s of the file", key, key)})
		}
	}
	changed := cmd.Flags().Changed
	if changed("structure") {
		replaced("structure", c.Structure != "" && c.Structure != given.Structure)
		c.Structure = given.Structure
	}
	if changed("date") {
		replaced("date", !c.Date.IsZero() && !c.Date.Equal(given.Date))
		c.Date = given.Date
	}
	if changed("temperature") {
		replaced("temperature", c.CableTemperature != nil && *c.CableTemperature != *given.CableTemperature)
		c.CableTemperature = given.CableTemperature
	}
	if changed("wind") {
		replaced("wind", c.Wind != "" && c.Wind != given.Wind)
		c.Wind = given.Wind
	}
	if changed("loads") || changed("load") {
		replaced("loads", c.Loads != "" && (c.Loads != given.Loads || len(c.Listed)+len(c.Local)+len(given.Listed)+len(given.Local) > 0))
		c.Loads, c.Listed, c.Local = given.Loads, given.Listed, given.Local
	}
	if changed("reading") {
		replaced("reading", len(c.Readings) > 0)
		c.Readings = given.Readings
	}
	if changed("supports") {
		replaced("supports", c.SupportsOnCable && !given.SupportsOnCable)
		c.SupportsOnCable = given.SupportsOnCable
	}
	if changed("instrument") {
		replaced("instrument", c.Instrument != "" && c.Instrument != given.Instrument)
		c.Instrument = given.Instrument
	}
	if changed("accuracy") {
		replaced("accuracy", c.Accuracy != nil && *c.Accuracy != *given.Accuracy)
		c.Accuracy = given.Accuracy
	}
	if changed("crew") {
		replaced("crew", c.Crew != "" && c.Crew != given.Crew)
		c.Crew = given.Crew
	}
}
