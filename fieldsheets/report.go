package fieldsheets

import (
	"slices"
	"time"

	"tautbook/survey"
	"tautbook/tension"
)

// Report is one visit as it is handed over: what was read, how it was understood, and what it says about every cable.
// Printers do not change it.
type Report struct {
	Tool    Tool                 `json:"tool"`
	Printed time.Time            `json:"printed"`
	Visit   Visit                `json:"visit"`
	Survey  Survey               `json:"survey"`
	Cables  []tension.Assessment `json:"cables"`
	// Continuous are the cables that pass over intermediate supports: what their spans say together.
	Continuous []tension.Continuous `json:"continuous_cables,omitempty"`
	Cautions   []string             `json:"cautions"`
}

// Tool names the program that made a report.
type Tool struct {
	Name    string `json:"name"`
	Version string `json:"version"`
}

// Visit holds the conditions that all survey files of the report share; a condition that differs between files is
// "differs by file" here and stands with each file.
type Visit struct {
	Structure  string `json:"structure"`
	Date       string `json:"date"`
	Wind       string `json:"wind"`
	Loads      string `json:"loads"`
	Instrument string `json:"instrument"`
	Crew       string `json:"crew"`
}

// Survey is everything that was read.
type Survey struct {
	PointsRead int             `json:"points_read"`
	PointsUsed int             `json:"points_used"`
	CablesFile string          `json:"cables_file"` // "" when there was none
	Notices    []survey.Notice `json:"notices"`     // of the cables file
	Files      []SurveyFile    `json:"files"`
}

// SurveyFile says how one file was understood.
type SurveyFile struct {
	File       string             `json:"file"`
	SHA256     string             `json:"sha256"`
	Encoding   string             `json:"encoding"`
	Separator  string             `json:"separator"`
	Decimal    string             `json:"decimal"`
	LengthUnit string             `json:"length_unit"`
	PointsRead int                `json:"points_read"`
	PointsUsed int                `json:"points_used"`
	Conditions Conditions         `json:"conditions"`
	Columns    []survey.HeaderUse `json:"columns"`
	Codes      []survey.CodeUse   `json:"codes"`
	Guesses    []survey.Guess     `json:"guesses"`
	Notices    []survey.Notice    `json:"notices"`
	Reduction  []string           `json:"reduction"` // how raw readings became points; empty for coordinates
}

// Conditions are those of one file.
type Conditions struct {
	Structure   string            `json:"structure"`
	Date        string            `json:"date"`
	Temperature *survey.Quantity  `json:"cable_temperature_degC"`
	Wind        string            `json:"wind"`
	Loads       survey.LoadStatus `json:"loads"`
	Instrument  string            `json:"instrument"`
	AccuracyH   *float64          `json:"accuracy_horizontal_m"`
	AccuracyV   *float64          `json:"accuracy_vertical_m"`
	Crew        string            `json:"crew"`
	Listed      []RecordedLoad    `json:"listed_loads"` // seen on the day beside the filed loads
	Local       []RecordedLocal   `json:"local_loads"`  // seen on the day, hanging at one place
	Readings    []RecordedReading `json:"readings"`     // beside the points
	Notes       []string          `json:"notes"`
}

// RecordedLoad is one line of the record of loads, as it was read; Cable and Span are "" for every cable and every span.
type RecordedLoad struct {
	Cable  string          `json:"cable"`
	Span   string          `json:"span"`
	Load   survey.Quantity `json:"load_N_per_m"`
	Spread survey.Spread   `json:"spread"`
	What   string          `json:"what"`
}

// RecordedReading is one reading of the day, as it was read; Cable and Span are "" for every cable and every span.
type RecordedReading struct {
	Cable string           `json:"cable"`
	Span  string           `json:"span"`
	What  string           `json:"what"`  // what was read, with mode or number of returns
	Value tension.Quantity `json:"value"` // in the SI unit that is named
	Unit  string           `json:"unit"`
	How   string           `json:"how"`
}

// RecordedLocal is one line of the record of loads for a load at one place, as it was read; P is nil when its size is not known.
type RecordedLocal struct {
	Cable   string           `json:"cable"`
	Span    string           `json:"span"`
	Station float64          `json:"station_m"`
	P       *survey.Quantity `json:"load_N"`
	What    string           `json:"what"`
}

// Input is what a report is made of beside the assessments.
type Input struct {
	Surveys       []*survey.Survey
	CablesFile    string               // "" when there was none
	CablesNotices []survey.Notice      // what its reader said
	Continuous    []tension.Continuous // of the assessments, see tension.JoinSpans
}

// NewReport puts a report together; printed is the time that stands on the sheet.
func NewReport(tool Tool, printed time.Time, in Input, cables []tension.Assessment) Report {
	r := Report{Tool: tool, Printed: printed, Cables: cables, Continuous: in.Continuous, Cautions: slices.Clone(cautions)}
	r.Survey = Survey{CablesFile: in.CablesFile, Notices: noNil(in.CablesNotices), Files: []SurveyFile{}}
	if r.Cables == nil {
		r.Cables = []tension.Assessment{}
	}
	for _, sv := range in.Surveys {
		f := NewSurveyFile(sv)
		for _, c := range cables {
			if c.SurveyFile == sv.File {
				f.PointsUsed += c.Fit.PointsUsed
			}
		}
		r.Survey.PointsRead += f.PointsRead
		r.Survey.PointsUsed += f.PointsUsed
		r.Survey.Files = append(r.Survey.Files, f)
	}
	r.Visit = visitOf(r.Survey.Files)
	return r
}

// NewSurveyFile says how a survey was understood.
func NewSurveyFile(sv *survey.Survey) SurveyFile {
	c := sv.Conditions
	f := SurveyFile{File: sv.File, SHA256: sv.SHA256, Encoding: sv.Encoding, Separator: sv.Separator, Decimal: sv.Decimal, LengthUnit: sv.LengthUnit,
		PointsRead: sv.PointsRead, Columns: noNil(sv.Header), Codes: noNil(sv.Codes), Guesses: noNil(sv.Guesses), Notices: noNil(sv.Notices), Reduction: noNil(sv.Reduction),
		Conditions: Conditions{Structure: c.Structure, Temperature: c.CableTemperature, Wind: c.Wind, Loads: c.Loads, Instrument: c.Instrument,
			Crew: c.Crew, Listed: []RecordedLoad{}, Local: []RecordedLocal{}, Readings: []RecordedReading{}, Notes: noNil(c.Notes)}}
	for _, l := range c.Listed {
		f.Conditions.Listed = append(f.Conditions.Listed, RecordedLoad(l))
	}
	for _, l := range c.Local {
		f.Conditions.Local = append(f.Conditions.Local, RecordedLocal(l))
	}
	for _, r := range c.Readings {
		f.Conditions.Readings = append(f.Conditions.Readings, RecordedReading{Cable: r.Cable, Span: r.Span, What: r.What(), Value: r.Value, Unit: r.Unit(), How: r.How})
	}
	if !c.Date.IsZero() {
		f.Conditions.Date = c.Date.Format(time.DateOnly)
	}
	if f.Conditions.Loads == "" {
		f.Conditions.Loads = survey.LoadsNotChecked
	}
	if c.Accuracy != nil {
		h, v := c.Accuracy.Horizontal, c.Accuracy.Vertical
		f.Conditions.AccuracyH, f.Conditions.AccuracyV = &h, &v
	}
	return f
}

// noNil makes an absent list an empty one, so that JSON has [] and not null.
func noNil[T any](list []T) []T {
	if list == nil {
		return []T{}
	}
	return list
}

const differs = "differs by file"

func visitOf(files []SurveyFile) (v Visit) {
	for i, f := range files {
		c := f.Conditions
		for _, m := range []struct {
			into *string
			from string
		}{{&v.Structure, c.Structure}, {&v.Date, c.Date}, {&v.Wind, c.Wind}, {&v.Loads, string(c.Loads)}, {&v.Instrument, c.Instrument}, {&v.Crew, c.Crew}} {
			switch {
			case i == 0:
				*m.into = m.from
			case *m.into != m.from:
				*m.into = differs
			}
		}
	}
	return v
}
