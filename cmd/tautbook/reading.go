package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"github.com/spf13/cobra"

	"tautbook/survey"
	"tautbook/tension"
)

// readingFlags say how survey files are to be understood.
type readingFlags struct {
	cables                                    string
	order, separator, decimal, encoding, unit string
	codes                                     []string
	cable, span                               string
}

func (f *readingFlags) bind(cmd *cobra.Command) {
	fl := cmd.Flags()
	fl.StringVar(&f.cables, "cables", "", "design values; default: cables.csv in the folder of the first survey file, if there is one")
	fl.StringVar(&f.order, "order", "", "columns of a file without header, for example PNEZD, PENZD, ENZ, SZ (station, elevation)")
	fl.StringVar(&f.separator, "separator", "", "comma, semicolon, tab or blanks (default: found from the file)")
	fl.StringVar(&f.decimal, "decimal", "", "point or comma (default: found from the file)")
	fl.StringVar(&f.encoding, "encoding", "", "utf-8, utf-16le, utf-16be or windows-1252 (default: found from the file)")
	fl.StringVar(&f.unit, "unit", "", "unit of coordinates without one: m, mm, cm, ft (international foot) or us-ft (US survey foot) (default m)")
	fl.StringArrayVar(&f.codes, "code", nil, "what a code is on: CODE=CABLE, CODE=CABLE/SPAN, CODE=CABLE/A, CODE=control, CODE=ground, CODE=ignore; may be repeated")
	fl.StringVar(&f.cable, "cable", "", "all points are on this cable")
	fl.StringVar(&f.span, "span", "", "all points are on this span of --cable")
}

// input is everything read from files.
type input struct {
	surveys []*survey.Survey
	designs []survey.Design
	notices []survey.Notice // of the cables file
	cables  string          // its name, "" when there is none

	continuous []tension.Continuous // what the spans of one cable say together
}

// read reads the cables file and every survey.
func (f *readingFlags) read(files []string, structure string, s streams) (input, error) {
	var in input
	var err error
	if in.cables, err = f.cablesFile(files); err != nil {
		return in, err
	}
	if in.cables != "" {
		if in.designs, in.notices, err = survey.ReadDesignsFile(in.cables); err != nil {
			return in, err
		}
	}
	opts := survey.PointOptions{Order: f.order, Separator: f.separator, Decimal: f.decimal, Encoding: f.encoding, Unit: f.unit,
		Cable: f.cable, Span: f.span, Known: in.designs, Structure: structure}
	for _, text := range f.codes {
		rule, err := survey.ParseCodeRule(text)
		if err != nil {
			return in, usageError{fmt.Errorf("--code: %w", err)}
		}
		opts.Codes = append(opts.Codes, rule)
	}
	var problems []error
	for _, name := range files {
		sv, err := readSurvey(name, opts, s)
		if err != nil {
			problems = append(problems, err)
			continue
		}
		in.surveys = append(in.surveys, sv)
	}
	return in, errors.Join(problems...)
}

func readSurvey(name string, opts survey.PointOptions, s streams) (*survey.Survey, error) {
	if name == "-" {
		opts.Name = "-"
		return survey.ReadPoints(s.in, opts)
	}
	return survey.ReadPointsFile(name, opts)
}

// cablesFile is the file named by the flag, or cables.csv beside the first survey.
func (f *readingFlags) cablesFile(files []string) (string, error) {
	if f.cables != "" {
		return f.cables, nil
	}
	if files[0] == "-" {
		return "", nil
	}
	name := filepath.Join(filepath.Dir(files[0]), "cables.csv")
	if _, err := os.Stat(name); err == nil {
		return name, nil
	} else if !errors.Is(err, fs.ErrNotExist) {
		return "", fmt.Errorf("cannot look for %s: %w", name, err)
	}
	return "", nil
}
