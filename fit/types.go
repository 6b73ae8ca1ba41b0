package fit

// Shape names the family of curve that is fitted.
type Shape string

// The shapes. A catenary hangs under a load even along itself, a parabola under a load even along the horizontal,
// the mixed curve under both.
const (
	Catenary Shape = "catenary"
	Parabola Shape = "parabola"
	Mixed    Shape = "mixed"
)

// Curve is a hanging curve in its vertical plane: the solution of
//
//	z'' = Curvature (SelfShare sqrt(1 + z'^2) + 1 - SelfShare)
//
// through (S1, Z1) and (S2, Z2), S1 < S2. SelfShare 1 is the catenary with constant a = 1/Curvature, SelfShare 0 the
// parabola with parameter p = 1/Curvature, anything between the mixed curve, with H = (w + q) / Curvature and
// SelfShare = w / (w + q). Stations and heights in m, Curvature in 1/m. Curvature may be zero (a straight line) or
// negative (an arch); every method is smooth through zero.
type Curve struct {
	S1, Z1, S2, Z2 float64
	Curvature      float64
	SelfShare      float64
	Cusps          []Cusp // local loads by station, nil = none; shared by copies, never changed in place
}

// Observation is one point in the plane of the cable: station and elevation in m with their covariance in m2.
type Observation struct {
	ID                string
	Line              int     // line of the file it came from, 0 if none
	S, Z              float64 // m
	Across            float64 // distance from the plane, m, positive to the left of A -> B
	VarS, CovSZ, VarZ float64 // m2; all zero when no accuracy is known
	Support           bool    // the mark of a support, used as a point of the curve

	varA, covSA, covAZ float64 // m2, across the plane
}

// Frame is the vertical plane of a span: station s = (E - E0) sin(Azimuth) + (N - N0) cos(Azimuth).
type Frame struct {
	E0, N0   float64 // where station is 0: support A if surveyed, else the outermost point, m
	Azimuth  float64 // of A -> B, rad clockwise from north
	UAzimuth float64 // standard uncertainty of it, rad
	From     string  // "supports" or "points": what fixed the plane
	Tilt     float64 // of the plane about the chord, rad, positive when the cable swings to the left of A -> B; 0 = vertical
	UTilt    float64 // standard uncertainty, rad

	level         float64 // elevation of the end A, where heights in a tilted plane start, m
	along, across float64 // parts up and to the left of the unit vector along the chord axis of a tilted plane
}

// End is one end of the chord on which statics are reported.
type End struct {
	Station  float64 // m
	UStation float64 // standard uncertainty, m; 0 when the end is just the outermost point
	Surveyed bool    // true: a surveyed support; false: the outermost point
	MarkZ    float64 // elevation of the surveyed support mark, m; meaningless when not Surveyed
	UMarkZ   float64 // m
}

// Options steer a fit. The zero value fits a catenary with unknown accuracy and drops nothing.
type Options struct {
	Shape          Shape   // "" = Catenary
	SelfShare      float64 // for Mixed only: w / (w + q)
	SigmaAlong     float64 // a-priori standard deviation along the station, m, for points without covariance; 0 = none
	SigmaUp        float64 // a-priori standard deviation of elevation, m; 0 = unknown
	RejectBeyond   float64 // drop points as unlikely as this many standard deviations of a normal error; 0 = drop nothing
	Alpha          float64 // significance from which a point is listed as suspect, two-sided; 0 = 0.001 (Baarda 1968)
	MaxIterations  int     // 0 = 200
	NoAlternatives bool    // do not fit the other shapes
	NoSwing        bool    // keep the plane vertical whatever the plan of the points

	Loads           []LocalLoad // local loads that are known to hang on the span, any order
	ThroughSupports bool        // the surveyed supports are points of the curve, each with its own accuracy
	Clear           float64     // leave out points nearer than this, m, to a surveyed support or a told local load: bending there makes another shape

	FindLoads int // search for as many local loads at most that nobody told; 0 = do not search
}

// Suspect is one point that the single-point test speaks against.
type Suspect struct {
	ID       string  `json:"id"`
	Line     int     `json:"line,omitempty"`
	Station  float64 `json:"station_m"`
	Residual float64 `json:"residual_m"` // measured minus fitted, m, positive above the curve, of the fit without the dropped points
	W        float64 `json:"w"`          // the statistic when it was tested
	Critical float64 `json:"critical"`
	Reason   string  `json:"reason"`
}

// Result is a fitted curve with everything that can be said about how good it is.
type Result struct {
	Curve Curve         // through the two ends of the chord: S1 = A.Station, S2 = B.Station
	Cov   [3][3]float64 // covariance of (Z1, Z2, Curvature), scaled as ScaledBy says
	Full  []float64     // the same with the free kinks and places of local loads after it, in the order of Loads, row by row
	Frame Frame
	A, B  End
	Swing *Swing       // out of the vertical plane; nil when the points have no plan, or too few
	Loads []LoadResult // local loads, those told and those found, by station

	Observations []Observation // those used, in order of input
	Residuals    []float64     // vertical residual of each, measured minus fitted at the same station, m
	W            []float64     // test statistic of each: see SingleTest
	Rejected     []Suspect     // dropped
	Suspects     []Suspect     // listed, still used
	Stretches    []Stretch     // neighbours that were not dropped because they lie off the curve together
	Torn         []Suspect     // too many to drop: they lie off the curve that the most of them agree on, and are still used
	LeftOut      []Suspect     // never used: within Options.Clear of a support or a local load

	DegreesOfFreedom int
	RMS              float64 // root mean square of the vertical residuals, m
	VarianceFactor   float64 // sum of squared normalised residuals / dof; with unit weights when APriori is false: m2
	APriori          bool    // true when weights come from a stated accuracy
	ChiSquareLow     float64 // 95 % acceptance region of VarianceFactor; zero when APriori is false
	ChiSquareHigh    float64
	VarianceOK       bool    // the chi-square test did not speak against the stated accuracy
	ScaledBy         float64 // factor by which the a-priori covariance was multiplied (>= 1), or the estimated variance factor
	Lag1             float64 // lag-1 autocorrelation of the residuals along the station
	Widening         float64 // factor >= 1 on u because of correlation of the residuals; 1 = none needed
	RunsP            float64 // two-sided probability of the runs test on residual signs along the station
	AcrossRMS        float64 // scatter across the plane, m
	Iterations       int
	Converged        bool
	ConditionNumber  float64 // of the column-scaled weighted Jacobian
	Alternatives     []Alternative
	Share            *Share // what the points say of the spread of the load; nil when they leave it open

	last    []float64 // normalised residuals, for the comparison of shapes
	locals  []local
	columns []column
	n       int // number of parameters
}

// Alternative is another shape through the same points.
type Alternative struct {
	Shape      Shape   `json:"shape"`
	LocalLoads int     `json:"local_loads"` // with so many local loads
	Constant   float64 `json:"constant_m"`  // 1/Curvature, m
	RMS        float64 `json:"rms_m"`
	DeltaAICc  float64 `json:"delta_aicc"`         // AICc minus that of the chosen shape; negative: the alternative fits better
	TensionOff float64 `json:"tension_difference"` // relative difference of the horizontal tension under the same whole load on the span
}
