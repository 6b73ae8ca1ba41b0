package register

import (
	"time"

	"tautbook/survey"
)

// File is a file as it was received.
type File struct {
	Kind  FileKind
	Name  string // without its folder
	Bytes []byte
}

// FileKind says what a stored file is.
type FileKind string

// The kinds of stored files.
const (
	SurveyFile FileKind = "survey"
	CablesFile FileKind = "cables"
)

// Submission is everything that one visit hands in.
type Submission struct {
	Survey     File
	Cables     *File           // design version that the results were judged by, nil for none
	Designs    []survey.Design // of Cables
	Settings   []string        // flags given beside the file, as --flag=value, so that the results can be computed again
	Conditions survey.Conditions
	Results    []Result // one for each span; Visit, JudgedBy, JudgedAt and JudgedWith are filled in by Record
	Supersedes string   // id of the visit that this one corrects, "" for none
	Why        string   // reason of the correction
	By         string   // version of the program
}

// Visit is one recorded survey of one structure. Quantities are nil when they were not recorded.
type Visit struct {
	ID           string
	Structure    string
	Date         string // 2026-06-11 or 2026-06-11T10:30
	SurveySHA256 string
	SurveyName   string
	CablesSHA256 string // "" for none
	Settings     string // JSON list
	Temperature  *survey.Quantity
	Wind         string
	Loads        survey.LoadStatus
	Instrument   string
	AccuracyH    *float64 // m
	AccuracyV    *float64 // m
	Crew         string
	Supersedes   string
	Why          string
	RecordedAt   string
	RecordedBy   string

	SupersededBy string // id of the visit that corrects this one, "" for none
}

// Result holds the figures of one cable span of one visit, judged by one design version; SI, the SQL column names the unit. Nil
// figures could not be worked out.
type Result struct {
	Visit, JudgedBy                           string
	Cable, Span                               string
	Verdict, Reason, NextStep, Shape          string
	PointsUsed, PointsRejected, DegreesOfFree int64
	RMS, VarianceFactor                       *float64
	Chord, Rise, SagMid, GreatestSag          *survey.Quantity // m
	ArcLength                                 *survey.Quantity // m
	HangingLoad                               *survey.Quantity // N/m
	HorizontalTension                         *survey.Quantity // on the day, if the load is as recorded, N
	HorizontalTensionAtLeast                  *float64         // N
	ReferenceTension                          *survey.Quantity // H at the reference temperature, N
	ReferenceTemperature                      *float64         // degC
	UnstressedLength                          *survey.Quantity // at the reference temperature, m
	ExpectedTension                           *survey.Quantity // N
	Ratio                                     *survey.Quantity
	PSlack, POverload                         *float64
	GreatestTension                           *survey.Quantity // N
	StrengthUse                               *survey.Quantity
	Place                                     Place
	JudgedAt, JudgedWith                      string
}

// Place is where the fitted curve of a span hangs in the frame of its survey; nil figures when it is not known.
type Place struct {
	StartEasting, StartNorthing *float64 // of station 0, m
	AzimuthDeg                  *float64 // clockwise from north
	From, To                    *float64 // stations of the ends, m
	FromElevation, ToElevation  *float64 // of the curve there, m
}

// EventKind says what happened to a cable.
type EventKind string

// The kinds of events.
const (
	Installed       EventKind = "installed"
	Retensioned     EventKind = "retensioned"
	LoadAdded       EventKind = "load added"
	LoadRemoved     EventKind = "load removed"
	Damaged         EventKind = "damaged"
	SupportRepaired EventKind = "support repaired"
	Replaced        EventKind = "replaced"
	OtherEvent      EventKind = "other"
)

// EventKinds are all kinds, in the order of the help.
var EventKinds = []EventKind{Installed, Retensioned, LoadAdded, LoadRemoved, Damaged, SupportRepaired, Replaced, OtherEvent}

// Event is something that was done to a cable or happened to it.
type Event struct {
	ID          string
	Structure   string
	Cable, Span string // "" for every cable of the structure, every span of the cable
	Date        string // 2026-06-11
	Kind        EventKind
	Size        *survey.Quantity // in Unit; nil when the kind has none
	Unit        string           // turns, m (take-up, positive when drawn out of the span), N/m or N; "" without a size
	Note        string
	Supersedes  string
	RecordedAt  string
}

// stamp is a moment as it is stored.
func stamp(t time.Time) string { return t.UTC().Format(time.RFC3339Nano) }
