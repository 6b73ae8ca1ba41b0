package survey

import (
	"slices"
	"strings"
	"time"
)

// Point is one surveyed point in the frame of its survey, in metres.
type Point struct {
	ID      string  // point id as written in the file
	E, N, Z float64 // easting (x), northing (y), elevation (z), m; E is the station and N is 0 in a two-column survey
	Cov     Cov3    // covariance of (E, N, Z), m2; meaningful only when HasCov
	HasCov  bool    // true when the file gave standard deviations for this point
	Code    string  // code or description as written in the file, "" when the file has none
	Line    int     // line of the file, counted from 1
}

// Cov3 is a symmetric 3x3 covariance of (E, N, Z) in m2, upper triangle.
type Cov3 struct{ EE, EN, EZ, NN, NZ, ZZ float64 }

// Role says what a point is on.
type Role string

// The roles that a code can map to.
const (
	OnCable  Role = "cable"
	SupportA Role = "support A"
	SupportB Role = "support B"
	Control  Role = "control"
	Ground   Role = "ground"
	Ignored  Role = "ignored"
)

// CodeUse says how one code of the file was understood and how many points carry it.
type CodeUse struct {
	Code   string `json:"code"`
	Role   Role   `json:"role"`
	Cable  string `json:"cable,omitempty"`
	Span   string `json:"span,omitempty"`
	Points int    `json:"points"`
	How    string `json:"how"` // why it was understood so, and the flag that changes it
}

// Guess is something that was not written in the file and had to be inferred; it is always printed.
type Guess struct {
	What  string `json:"what"`   // for example "separator"
	Taken string `json:"taken"`  // for example "semicolon"
	Why   string `json:"why"`    // the evidence
	SetBy string `json:"set_by"` // the flag or file edit that settles it
}

// Notice is something in the input that deserves a look but does not stop the work.
type Notice struct {
	File   string `json:"file,omitempty"`
	Line   int    `json:"line,omitempty"` // 0 when it concerns the whole file
	Column string `json:"column,omitempty"`
	Text   string `json:"text"`
}

// SpanPoints is what a survey holds of one cable span.
type SpanPoints struct {
	Cable, Span string
	Points      []Point // points on the cable, in file order
	A, B        *Point  // surveyed supports, nil when they were not surveyed
}

// Survey is one file of points, read and sorted, with everything that was assumed on the way.
type Survey struct {
	File       string       // name as given, "-" for standard input
	SHA256     string       // of the bytes as received, hexadecimal
	Encoding   string       // for example "UTF-8"
	Separator  string       // "comma", "semicolon", "tab", "blanks"
	Decimal    string       // "point" or "comma"
	Header     []HeaderUse  // how each column was understood, in file order; names are "" in a headerless file
	LengthUnit string       // unit of the coordinates as written, for example "m" or "ft"
	PointsRead int          // data rows
	Spans      []SpanPoints // in order of first appearance
	Control    []Point
	Ground     []Point
	Ignored    []Point
	Codes      []CodeUse
	Conditions Conditions
	Guesses    []Guess
	Notices    []Notice
	Reduction  []string // how raw readings became points, one sentence a line; nil for a file of coordinates
	Flat       bool     // a two-column survey: station and elevation only
}

// UnmatchedLoads are the listed loads that name a cable or span of which the survey holds no point: a load that would be
// recorded and count nowhere.
func (sv *Survey) UnmatchedLoads() []ListedLoad {
	return slices.DeleteFunc(slices.Clone(sv.Conditions.Listed), func(l ListedLoad) bool { return sv.holds(l.On) })
}

// UnmatchedLocal are the listed local loads that are on no span of the survey.
func (sv *Survey) UnmatchedLocal() []LocalLoad {
	return slices.DeleteFunc(slices.Clone(sv.Conditions.Local), func(l LocalLoad) bool { return sv.holds(l.On) })
}

// UnmatchedReadings are the direct readings that are of no span of the survey.
func (sv *Survey) UnmatchedReadings() []Reading {
	return slices.DeleteFunc(slices.Clone(sv.Conditions.Readings), func(r Reading) bool { return sv.holds(r.On) })
}

// holds reports whether a span of the survey is meant.
func (sv *Survey) holds(on func(cable, span string) bool) bool {
	return slices.ContainsFunc(sv.Spans, func(sp SpanPoints) bool { return on(sp.Cable, sp.Span) })
}

// On reports whether the load concerns a span.
func (l ListedLoad) On(cable, span string) bool { return meant(l.Cable, l.Span, cable, span) }

// On reports whether the load concerns a span.
func (l LocalLoad) On(cable, span string) bool { return meant(l.Cable, l.Span, cable, span) }

// On reports whether the reading is of a span.
func (r Reading) On(cable, span string) bool { return meant(r.Cable, r.Span, cable, span) }

// meant reports whether a cable and span, "" for any, stand for a span.
func meant(cable, span, ofCable, ofSpan string) bool {
	return (cable == "" || strings.EqualFold(cable, ofCable)) && (span == "" || strings.EqualFold(span, ofSpan))
}

// HeaderUse says how one column of a file was understood.
type HeaderUse struct {
	Column int    `json:"column"` // counted from 1
	Name   string `json:"name"`   // as written, "" in a headerless file
	Field  string `json:"field"`  // id, easting, northing, elevation, station, code, u_easting, ... or "not used"
	Unit   string `json:"unit,omitempty"`
}

// LoadStatus says whether the loads on the cable were looked at during the visit.
type LoadStatus string

// The three states of the record of loads; LoadsNotChecked is the default.
const (
	LoadsNotChecked LoadStatus = "not checked"
	LoadsAsFiled    LoadStatus = "as filed"
	LoadsListed     LoadStatus = "listed"
)

// Spread says along what a load is even.
type Spread string

// A load is even along the cable (ice, a clipped cable) or along the horizontal (a deck, people on it).
const (
	AlongCable Spread = "along cable"
	AlongDeck  Spread = "along deck"
)

// ListedLoad is one load seen on the day that the design values do not contain.
type ListedLoad struct {
	Cable, Span string   // "" = every cable, every span
	Load        Quantity // N/m along the cable or along the horizontal; negative for a load found missing
	Spread      Spread
	What        string // free text, for example "service pipe"
}

// LocalLoad is a load seen on the day that hangs at one place of a span.
type LocalLoad struct {
	Cable, Span string    // "" = every cable, every span
	Station     float64   // horizontal distance from support A along the chord, m
	P           *Quantity // N, downwards; nil: its size is not known
	What        string    // free text, for example "signal box"
}

// Accuracy is the instrument's stated standard deviation of one point, m.
type Accuracy struct {
	Horizontal float64 // each of E and N
	Vertical   float64 // Z
}

// Conditions are the circumstances of one visit. Absent values are nil, zero time or "".
type Conditions struct {
	Structure        string
	Date             time.Time
	CableTemperature *Quantity // degC
	Wind             string
	Loads            LoadStatus // "" means not stated, which counts as LoadsNotChecked
	Listed           []ListedLoad
	Local            []LocalLoad
	Readings         []Reading
	SupportsOnCable  bool // the surveyed support marks lie on the centre line of the cable
	Instrument       string
	Accuracy         *Accuracy
	Crew             string
	Notes            []string // other "# key: value" lines, as written

	unit        string          // of coordinates, from the file
	cable, span string          // of all points, from the file
	set         map[string]bool // keys that were given
}

// LoadKind says which load shapes a cable.
type LoadKind string

// The kinds of load of the design file.
const (
	LoadSelfWeight LoadKind = "self weight" // even along the cable: catenary
	LoadDeck       LoadKind = "deck"        // even along the horizontal: parabola
	LoadBoth       LoadKind = "both"        // the mixed curve
)

// Design holds the design values of one cable span, SI. A nil pointer means that the file does not give the value.
type Design struct {
	Structure, Cable, Span string
	Load                   LoadKind
	SelfWeight             *Quantity // N per metre of cable, unstressed, at the design temperature
	DeckLoad               *Quantity // N per metre of horizontal
	SpanLength             *Quantity // design_span: horizontal distance of the supports, m
	Rise                   *Quantity // design_rise: z_B - z_A, m
	Tension                *Quantity // design_tension: horizontal tension H, N
	Sag                    *Quantity // design_sag: at mid-span, m
	Temperature            *Quantity // design_temperature, degC
	AxialStiffness         *Quantity // EA, N
	Expansion              *Quantity // alpha, 1/degC
	BreakingLoad           *Quantity // MBL, N
	SafetyFactor           *float64
	SlackBelow             *float64       // fraction of expected (0.10 for 10 %)
	OverloadAbove          *float64       // fraction of expected
	Diameter               *Quantity      // m
	BendingStiffness       *Quantity      // EI, N m2
	TakeUpPerTurn          *Quantity      // m of unstressed length for one turn
	OverA, OverB           SupportBetween // support_between: how the cable passes over the support at its A and B, if it goes on there
	Line                   int            // line of cables.csv
}
