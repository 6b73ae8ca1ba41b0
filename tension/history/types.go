package history

import (
	"time"

	"tautbook/survey"
	"tautbook/tension"
)

// Quantity is a value with its standard uncertainty.
type Quantity = survey.Quantity

// Span is everything on record of one cable span.
type Span struct {
	Structure, Cable, Span string
	Visits                 []Visit   // in any order; one or more
	Events                 []Event   // in any order
	TakeUpPerTurn          *Quantity // m of cable for one turn, nil when not known
	Expansion              float64   // thermal expansion used for S0, 1/degC; 0 when not known
	Tension                Limits    // on H at the reference state, N
	Length                 Limits    // on S0 at the reference state, m
}

// Limits are the bounds of a figure; nil for none. U of a limit that shares errors with the visits may be 0.
type Limits struct{ AtLeast, AtMost *Quantity }

// Visit is what one visit says of the span. Nil figures could not be worked out. All visits have one reference state.
type Visit struct {
	ID, Survey    string
	Date          string    // 2026-06-11 or 2026-06-11T10:30
	Tension       *Quantity // H at the reference state, N
	TensionCommon float64   // part of u(H) that is common to all visits, N; less than u
	Length        *Quantity // S0 at the reference state, m
	LengthCommon  float64   // part of u(S0) that is common to all visits, m; less than u
	Temperature   *Quantity // of the cable on the day, degC
	Loads         survey.LoadStatus
	Verdict       tension.Verdict
	Ratio         *Quantity // tension on the day / expected
	Marks         []Mark    // control marks, nil when not surveyed
}

// Event is something that happened to the cable.
type Event struct {
	Date string // 2026-06-11; on the day of a visit it counts as before the last visit of that day
	Kind Kind
	Size *Quantity // in Unit, nil when not recorded
	Unit string    // of Size: m or turns are take-up, positive when drawn out of the span; other units are told and not tested
	Note string
}

// Kind says what happened.
type Kind string

// The kinds of events.
const (
	Installed       Kind = "installed"
	Retensioned     Kind = "retensioned"
	LoadAdded       Kind = "load added"
	LoadRemoved     Kind = "load removed"
	Damaged         Kind = "damaged"
	SupportRepaired Kind = "support repaired"
	Replaced        Kind = "replaced"
	Other           Kind = "other"
)

// ofLoad reports whether an event changes the tension and leaves the unstressed length.
func (k Kind) ofLoad() bool { return k == LoadAdded || k == LoadRemoved }

// Options steer Read.
type Options struct {
	Today     time.Time // forecasts start here
	Customary int       // months between visits that are never exceeded; 0 = 24, common practice, no source
	Horizon   float64   // years that forecasts look ahead; 0 = 50
}

func (o Options) filled() Options {
	if o.Customary == 0 {
		o.Customary = 24
	}
	if o.Horizon == 0 {
		o.Horizon = 50
	}
	o.Today = time.Date(o.Today.Year(), o.Today.Month(), o.Today.Day(), 0, 0, 0, 0, time.UTC)
	return o
}

// Measure says which figure the history was read from.
type Measure string

// The measures. The unstressed length comes first: neither load nor temperature changes it.
const (
	Length  Measure = "unstressed length"
	Tension Measure = "horizontal tension"
	Nothing Measure = "nothing"
)

// Trend is the history of one span as it was read. Changes are in the unit of Of: m of unstressed length, else N of tension.
type Trend struct {
	Structure string            `json:"structure"`
	Cable     string            `json:"cable"`
	Span      string            `json:"span"`
	Of        Measure           `json:"read_from"`
	Unit      string            `json:"unit"`          // m or N
	Visits    []State           `json:"visits"`        // oldest first
	Events    []Happening       `json:"events"`        // oldest first
	Change    *Change           `json:"first_to_last"` // nil with fewer than two visits
	Steps     []Step            `json:"steps"`
	Drift     *Drift            `json:"drift"`    // nil when none was shown
	Warmth    *Quantity         `json:"per_degC"` // remainder that goes with temperature, nil when none was shown
	Rivals    []Rival           `json:"rivals"`
	Fit       FitTest           `json:"fit"`
	Forecasts []Forecast        `json:"forecasts"`
	Next      NextVisit         `json:"next_visit"`
	Marks     []MarkTest        `json:"control_marks"`
	Findings  []tension.Finding `json:"findings"`
	Rank      Rank              `json:"urgency"`
	Curves    []Curve           `json:"curves"`
}

// State is one visit as it went into the reading.
type State struct {
	Date        string          `json:"date"`
	ID          string          `json:"visit"`
	Survey      string          `json:"survey"`
	Tension     *Quantity       `json:"horizontal_tension_N"`
	Length      *Quantity       `json:"unstressed_length_m"`
	Temperature *Quantity       `json:"cable_temperature_degC"`
	Loads       string          `json:"loads"`
	Verdict     tension.Verdict `json:"verdict"`
	Ratio       *Quantity       `json:"ratio"`
	Residual    *float64        `json:"residual"` // measured less fitted, in Unit
}

// Happening is an event as it went into the reading.
type Happening struct {
	Date string    `json:"date"`
	Kind Kind      `json:"kind"`
	Size *Quantity `json:"size"`
	Unit string    `json:"unit"`
	Note string    `json:"note"`
}

// Change is the difference of two visits, free of what is common to them.
type Change struct {
	From string   `json:"from"`
	To   string   `json:"to"`
	By   Quantity `json:"by"`
	P    float64  `json:"p"` // probability of a difference as large by chance
}

// Step is a change between two visits.
type Step struct {
	After    string    `json:"after"`  // visit before it
	Before   string    `json:"before"` // visit after it; for one visit that is off both are its date
	Kind     StepKind  `json:"kind"`
	Events   []string  `json:"events"`   // recorded in the gap, as printed
	By       *Quantity `json:"by"`       // nil when it cannot be told from the others
	Recorded *Quantity `json:"recorded"` // change that the record expects, nil when it has no size
	Off      *float64  `json:"off"`      // By less Recorded in standard uncertainties
	P        *float64  `json:"p"`        // of an unrecorded step: family-wise; of a recorded one: of the disagreement
}

// StepKind says where a step comes from.
type StepKind string

// The kinds of steps.
const (
	RecordedStep   StepKind = "recorded"
	UnrecordedStep StepKind = "unrecorded"
	VisitOff       StepKind = "one visit off"
)

// Drift is a slow change.
type Drift struct {
	Shape   DriftShape `json:"shape"`
	Since   string     `json:"since,omitempty"` // start of log time
	Rate    Quantity   `json:"rate"`            // linear: Unit a year; log: Unit for each tenfold of the days since the start
	PerYear Quantity   `json:"next_year"`       // change over the year after today
	P       float64    `json:"p"`               // family-wise
}

// DriftShape is how a drift goes with time.
type DriftShape string

// The shapes of drift.
const (
	Linear  DriftShape = "linear"
	LogTime DriftShape = "log time"
)

// Rival is another reading that fits nearly as well: its AIC is less than 4 above the one taken (Burnham and Anderson 2002, 2.6).
type Rival struct {
	Instead  string  `json:"instead_of"`
	Reading  string  `json:"reading"`
	DeltaAIC float64 `json:"delta_aic"`
}

// FitTest is the chi-square test of the visits against the reading.
type FitTest struct {
	ChiSquare        float64 `json:"chi_square"`
	DegreesOfFreedom int     `json:"degrees_of_freedom"`
	P                float64 `json:"p"`
	Widening         float64 `json:"widening"` // factor on u of steps, drift and forecasts; above 1 when p < 0.01 (Birge 1932)
}

// Curve is the fitted course of a measure with its 95 % confidence band, for drawing.
type Curve struct {
	Of     Measure `json:"of"`
	Points []Point `json:"points"`
}

// Point is one date of a curve, in the unit of its measure.
type Point struct {
	Date  string  `json:"date"`
	Value float64 `json:"value"`
	Low   float64 `json:"low"`
	High  float64 `json:"high"`
}
