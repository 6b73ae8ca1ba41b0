package tension

import (
	"tautbook/fit"
	"tautbook/survey"
)

// Quantity is a value with its standard uncertainty; the field that holds it names the unit.
type Quantity = survey.Quantity

// Assessment is what one survey says about one cable span. It is the one result from which every sheet is printed.
// Pointers are nil where the figure could not be worked out; Findings then say what was missing.
type Assessment struct {
	Structure string `json:"structure,omitempty"`
	Cable     string `json:"cable"`
	Span      string `json:"span"`

	SurveyFile  string    `json:"survey_file"`            // the file that its points came from
	Temperature *Quantity `json:"cable_temperature_degC"` // on the day, nil when not recorded

	Fit  FitSummary  `json:"fit"`
	Load LoadSummary `json:"load"`

	// HorizontalTension is H = load as it hangs / curvature, N, valid if the load is as filed. Nil when the curvature is
	// not known to be positive (value under 2 u); HorizontalTensionAtLeast then holds the 95 % lower bound.
	HorizontalTension        *Quantity      `json:"horizontal_tension_N"`
	HorizontalTensionAtLeast *float64       `json:"horizontal_tension_at_least_N,omitempty"`
	Reactions                []Reaction     `json:"reactions"`
	ImpliedLoad              *ImpliedLoad   `json:"implied_load_N_per_m"`
	UnstressedLength         *LengthSummary `json:"unstressed_length_m,omitempty"`
	AtDesignTemperature      *Quantity      `json:"horizontal_tension_at_design_temperature_N,omitempty"`
	Expected                 *Expected      `json:"expected"`
	Rival                    *Rival         `json:"rival_reading,omitempty"`
	Direct                   *Direct        `json:"direct_reading,omitempty"`
	Reconciled               *Reconciled    `json:"reconciled,omitempty"`
	Explanation              *Explanation   `json:"explanation,omitempty"`
	Stiffness                *Stiffness     `json:"stiffness,omitempty"`
	Strength                 *Strength      `json:"strength_use"`
	MonteCarlo               *MonteCarlo    `json:"monte_carlo,omitempty"`

	Verdict   Verdict      `json:"verdict"`
	DecidedBy string       `json:"decided_by"` // the rule that gave the verdict: strength, rival strength, load, tension, two readings, implied load, inside, coarse, none, unfit, implausible, reading, "reading, load" or conflict
	Reason    string       `json:"reason"`     // one sentence: why this verdict
	NextStep  string       `json:"next_step"`  // one sentence: what to do or to measure now
	Findings  []Finding    `json:"findings"`
	Budget    []BudgetLine `json:"budget"`

	// JointHorizontalTension is H of this span, N, together with the neighbouring spans of its cable over supports that let it
	// run; nil where no such condition holds. The verdict rests on HorizontalTension alone.
	JointHorizontalTension *Quantity `json:"joint_horizontal_tension_N,omitempty"`
	// NextSupport is the support between this span and the next of its cable; it stands with the cable in the sheets.
	NextSupport *SupportForce `json:"-"`

	Drawing Drawing `json:"-"`

	forces   *spanForces   // what spans of one cable share; nil for a cable of one span
	together []fit.Suspect // points that lie off the curve together and are still used
}

// Verdict is the word for the state of a cable.
type Verdict string

// The verdicts, see DESIGN "Verdict"; the probability rule is that of JCGM 106:2012.
const (
	AsDesigned Verdict = "as designed"
	Slack      Verdict = "slack"
	Overload   Verdict = "overload"
	OffDesign  Verdict = "off design"
	Undecided  Verdict = "undecided"
	NoDesign   Verdict = "no design"
)

// FitSummary is the fitted shape in the figures that people use. Lengths in m, stations from support A.
type FitSummary struct {
	Shape             fit.Shape         `json:"shape"`
	PointsUsed        int               `json:"points_used"`
	Rejected          []fit.Suspect     `json:"rejected"`
	Suspects          []fit.Suspect     `json:"suspects"`
	LeftOut           []fit.Suspect     `json:"left_out,omitempty"` // near a support or a local load, where bending makes another shape
	DegreesOfFreedom  int               `json:"degrees_of_freedom"`
	RMS               float64           `json:"rms_m"`
	VarianceFactor    float64           `json:"variance_factor"` // dimensionless with a stated accuracy, else m2
	AccuracyStated    bool              `json:"accuracy_stated"`
	Widening          float64           `json:"widening"` // factor on u for correlated residuals
	PlaneFrom         string            `json:"plane_from"`
	AzimuthDeg        float64           `json:"azimuth_deg"`
	Swing             *Swing            `json:"swing,omitempty"` // when the cable hangs out of the vertical plane
	Chord             Quantity          `json:"chord_m"`         // horizontal
	Rise              Quantity          `json:"rise_m"`
	CatenaryConstant  *Quantity         `json:"catenary_constant_m,omitempty"`
	ParabolaParameter *Quantity         `json:"parabola_parameter_m,omitempty"`
	MixedConstant     *Quantity         `json:"mixed_constant_m,omitempty"` // (w + q) / H inverted, for the mixed curve
	LowPointStation   *Quantity         `json:"low_point_station_m"`
	LowPointElevation *Quantity         `json:"low_point_elevation_m"`
	SagMid            Quantity          `json:"sag_mid_m"`
	GreatestSag       Quantity          `json:"greatest_sag_m"`
	GreatestSagAt     float64           `json:"greatest_sag_station_m"`
	ArcLength         Quantity          `json:"arc_length_m"`
	SagRatio          float64           `json:"sag_ratio"` // sag at mid-span / horizontal chord
	Alternatives      []fit.Alternative `json:"alternatives"`
	SelfShare         float64           `json:"self_share"`           // share of self weight in the even load that the shape stands for
	Share             *fit.Share        `json:"told_share,omitempty"` // the share that the points themselves ask for, when they can tell it
}

// LoadSummary says which load the forces rest on, N/m.
type LoadSummary struct {
	Kind       survey.LoadKind   `json:"kind"`
	SelfWeight *Quantity         `json:"self_weight_N_per_m,omitempty"` // as filed, per metre of unstressed cable
	DeckLoad   *Quantity         `json:"deck_load_N_per_m,omitempty"`   // as filed, per metre of horizontal
	Listed     []ListedLoad      `json:"listed,omitempty"`              // seen on the day beside the filed load
	Local      []LocalLoad       `json:"local,omitempty"`               // hanging at one place of the span
	Hanging    Quantity          `json:"hanging_N_per_m"`               // all of it, per metre as it hangs: H = hanging x a
	Record     survey.LoadStatus `json:"record"`                        // not checked, as filed, listed
}

// ListedLoad is a load recorded on the day.
type ListedLoad struct {
	Load   Quantity      `json:"load_N_per_m"`
	Spread survey.Spread `json:"spread"`
	What   string        `json:"what"`
}

// Swing is a cable blown or pulled out of the vertical plane. Shape, sags, chord, slopes and H are then those in its own plane, H by the
// resultant load.
type Swing struct {
	AngleDeg Quantity  `json:"angle_deg"`         // from the vertical, positive to the left seen from A to B
	SideLoad *Quantity `json:"side_load_N_per_m"` // even load across the span that the angle means, to the same side; nil when no load is on file
	Chance   float64   `json:"chance"`            // of such a plan for a cable that hangs straight down
}

// LoadSource says how a local load came into the assessment.
type LoadSource string

// A local load is told with its size, told and its size fitted to the shape, or found in the shape.
const (
	OnRecord      LoadSource = "on record"
	FittedToShape LoadSource = "on record, size from the shape"
	FoundInShape  LoadSource = "found in the shape"
)

// LocalLoad is a load that hangs at one place of the span.
type LocalLoad struct {
	Station Quantity   `json:"station_m"`                        // from the end A of the chord
	Load    *Quantity  `json:"load_N"`                           // nil when its size is not known
	Told    *Quantity  `json:"told_N,omitempty"`                 // as recorded; Load is then the adjusted size
	OffTold *float64   `json:"shape_less_record_in_u,omitempty"` // size by the shape alone less that recorded, in standard uncertainties
	Kink    Quantity   `json:"kink"`                             // jump of the slope there, load / horizontal tension
	From    LoadSource `json:"from"`
	Chance  *float64   `json:"chance,omitempty"` // of so strong a kink anywhere on the span without a load, when found
	What    string     `json:"what,omitempty"`
}

// Reaction is the force of a support on the cable, along the end tangent.
type Reaction struct {
	Support    string    `json:"support"`  // A or B
	Surveyed   bool      `json:"surveyed"` // false: the outermost point stands in for the support
	Station    float64   `json:"station_m"`
	Elevation  float64   `json:"elevation_m"` // of the fitted cable there
	Horizontal Quantity  `json:"horizontal_N"`
	Vertical   Quantity  `json:"vertical_N"`
	Left       *Quantity `json:"left_N,omitempty"` // across the span, positive to the left seen from A to B; only of a swung cable
	Tension    Quantity  `json:"tension_N"`
	SlopeDeg   Quantity  `json:"slope_deg"` // dz/ds from A to B as an angle
}

// ImpliedLoad is the even load, N per metre as it hangs, that the fitted shape needs under three assumptions.
type ImpliedLoad struct {
	IfTensionAsExpected *Quantity `json:"if_tension_as_expected,omitempty"`
	IfTensionAsRead     *Quantity `json:"if_tension_as_read,omitempty"`
	IfLengthAsDesigned  *Quantity `json:"if_length_as_designed,omitempty"`
	Together            string    `json:"together,omitempty"` // what they say, in one sentence
	Filed               Quantity  `json:"filed"`              // the design load as it hangs, for comparison
}

// LengthSummary compares unstressed lengths at the design temperature, m.
type LengthSummary struct {
	Today      Quantity `json:"today"`  // if the load is as recorded
	Design     Quantity `json:"design"` // from the design values
	Difference Quantity `json:"difference"`
}

// Expected is the state that the designer's cable would have today: its unstressed length, today's temperature and
// span, and the load on record. Probabilities follow JCGM 106:2012.
type Expected struct {
	HorizontalTension Quantity  `json:"horizontal_tension_N"`
	SagMid            Quantity  `json:"sag_mid_m"`
	Ratio             *Quantity `json:"ratio"` // tension today / expected; nil when HorizontalTension is
	PSlack            float64   `json:"p_slack"`
	PInside           float64   `json:"p_inside"`
	POverload         float64   `json:"p_overload"`
	SlackBelow        float64   `json:"slack_below_ratio"`    // for example 0.90
	OverloadAbove     float64   `json:"overload_above_ratio"` // for example 1.10
	LimitsFrom        string    `json:"limits_from"`          // "cables file" or "default, common practice"
	SpanFrom          string    `json:"span_from"`            // "surveyed supports" or "design"
	TemperatureShift  float64   `json:"temperature_shift_degC"`
	Uncorrected       *Quantity `json:"ratio_to_design_tension"`               // tension today / design tension, not brought to the day; nil when HorizontalTension is
	UnderFiledLoad    Quantity  `json:"horizontal_tension_under_filed_load_N"` // without the loads seen on the day
	MeasuredSagMid    Quantity  `json:"measured_sag_mid_m"`                    // of the measured curve over the same chord as SagMid
	LoadRatio         Quantity  `json:"load_ratio"`                            // load on record / design load
}

// Rival is the other reading of the same shape: the cable still has its designed unstressed length and the load differs.
type Rival struct {
	HorizontalTension Quantity `json:"horizontal_tension_N"`
	Ratio             Quantity `json:"ratio"`       // to the expected tension
	LoadFactor        Quantity `json:"load_factor"` // load needed / load on record
	ExtraLoad         Quantity `json:"extra_load_N_per_m"`
	PLoadLess         float64  `json:"p_load_below_limit"`
	PLoadMore         float64  `json:"p_load_above_limit"`
	Excluded          bool     `json:"excluded"`
	ExcludedBy        string   `json:"excluded_by,omitempty"`
}

// Direct is the tension that the readings of the day give together, held against both readings of the shape. It is the evidence that tells them
// apart: with the shape it gives the load as well.
type Direct struct {
	Of                string    `json:"of"` // what was read
	How               string    `json:"how"`
	Scatter           float64   `json:"p_scatter"` // probability of readings that differ by as much as these; 1 for a single one
	HorizontalTension Quantity  `json:"horizontal_tension_N"`
	Ratio             *Quantity `json:"ratio"`       // to the tension expected today under the filed load; nil without a design state
	LoadFactor        Quantity  `json:"load_factor"` // load that it implies / load on record
	Load              Quantity  `json:"implied_load_N_per_m"`
	OffRecord         float64   `json:"off_load_as_recorded"`   // difference from the tension if the load is as recorded, in standard uncertainties
	OffLength         *float64  `json:"off_length_as_designed"` // the same for the reading in which the length is as designed
}

// Stiffness says how the shape and the tension answer to load, from the exact elastic state.
type Stiffness struct {
	Lambda2          float64  `json:"lambda_squared"`          // Irvine (1981)
	SagPerLoad       float64  `json:"sag_change_per_load"`     // relative change of sag / relative change of even load
	TensionPerLoad   float64  `json:"tension_change_per_load"` // the same for H
	TensionPerDegree float64  `json:"tension_change_N_per_degC"`
	HiddenLoad       *float64 `json:"hidden_load_N_per_m,omitempty"` // even load that moves the sag by less than U; nil: more than ten times the load
	Meaning          string   `json:"meaning"`
}

// Strength holds the greatest tension in the span against the permitted one, MBL / safety factor.
type Strength struct {
	Use          Quantity  `json:"use"` // T_max / permitted, if the load is as on record
	POver        float64   `json:"p_over"`
	Permitted    float64   `json:"permitted_N"`
	GreatestT    Quantity  `json:"greatest_tension_N"`
	RivalUse     *Quantity `json:"use_in_rival_reading,omitempty"`
	RivalPOver   *float64  `json:"p_over_in_rival_reading,omitempty"`
	SafetyFactor float64   `json:"safety_factor"`
}

// Level says how much a finding weighs.
type Level string

// Levels of a finding, heaviest first.
const (
	Act  Level = "act"  // something to do before the next load
	Look Level = "look" // something to check
	Note Level = "note" // something to know
)

// Finding is one thing that the reader should know, in a sentence with its numbers.
type Finding struct {
	ID    string `json:"id"`
	Level Level  `json:"level"`
	Text  string `json:"text"`
}

// BudgetLine is one input's share in the uncertainty of the ratio (of H when there is no expected state).
type BudgetLine struct {
	Input string  `json:"input"`
	Value string  `json:"value"`       // with unit, as printed
	U     string  `json:"u"`           // with unit, as printed
	OnH   float64 `json:"u_tension_N"` // standard uncertainty of H that it causes, N
	OnR   float64 `json:"u_ratio"`     // standard uncertainty of the ratio that it causes
	Share float64 `json:"share"`       // of the variance, 0 to 1
}

// Drawing is what a picture of the span needs; m, stations from A.
type Drawing struct {
	Stations, Elevations, Residuals []float64    // points used
	IDs                             []string     // of the points used
	Curve                           fit.Curve    // fitted
	Expected                        *fit.Curve   // the designer's cable today, between the same ends
	From, To                        float64      // stations of the chord ends
	Dropped                         [][2]float64 // station, elevation of rejected points
}
