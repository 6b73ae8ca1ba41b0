package fieldsheets

import (
	"math/rand/v2"
	"strconv"
	"time"

	"tautbook/fit"
	"tautbook/survey"
	"tautbook/tension"
)

// The assessments of these tests are invented; they cover every verdict and every figure that can be absent.

func q(v, u float64) *tension.Quantity { return &tension.Quantity{Value: v, U: u} }

func drawn() tension.Drawing {
	c := fit.Curve{S1: 0, Z1: 420, S2: 96, Z2: 421.8, Curvature: 0.00177, SelfShare: 1}
	e := c
	e.Curvature = 0.0022
	d := tension.Drawing{Curve: c, Expected: &e, From: 0, To: 96, Dropped: [][2]float64{{40, 419.2}}}
	rng := rand.New(rand.NewPCG(4, 4))
	for i := range 21 {
		s := 1 + 94*float64(i)/20
		r := 0.003 * rng.NormFloat64()
		d.Stations, d.Elevations, d.Residuals = append(d.Stations, s), append(d.Elevations, c.Z(s)+r), append(d.Residuals, r)
		d.IDs = append(d.IDs, strconv.Itoa(i+1))
	}
	return d
}

// full is an assessment with every figure.
func full(cable string, v tension.Verdict) tension.Assessment {
	h := tension.Quantity{Value: 17160, U: 255}
	return tension.Assessment{Structure: "Invented footbridge", Cable: cable, SurveyFile: "points.csv", Temperature: q(18, 1.5),
		Fit: tension.FitSummary{Shape: fit.Catenary, PointsUsed: 21, Rejected: []fit.Suspect{{ID: "7", Line: 9, Station: 40, Residual: -0.31, W: -40, Critical: 6, Reason: "w = -40"}}, Suspects: []fit.Suspect{},
			DegreesOfFreedom: 18, RMS: 0.0028, VarianceFactor: 1.1, AccuracyStated: true, Widening: 1, PlaneFrom: "supports", AzimuthDeg: 62,
			Chord: *q(96, 0.003), Rise: *q(1.8, 0.002), CatenaryConstant: q(564.2, 0.8), LowPointStation: q(37.4, 0.03), LowPointElevation: q(418.76, 0.002),
			SagMid: *q(2.0432, 0.0021), GreatestSag: *q(2.0433, 0.0021), GreatestSagAt: 48.01, ArcLength: *q(96.13, 0.003), SagRatio: 0.02128,
			Alternatives: []fit.Alternative{{Shape: fit.Parabola, Constant: 563.9, RMS: 0.0029, DeltaAICc: 1.2, TensionOff: -0.0006}}},
		Load:              tension.LoadSummary{Kind: survey.LoadSelfWeight, SelfWeight: q(38, 0.4), Hanging: *q(37.9, 0.4), Record: survey.LoadsNotChecked},
		HorizontalTension: &h,
		Reactions: []tension.Reaction{{Support: "A", Surveyed: true, Station: 0, Elevation: 420, Horizontal: h, Vertical: *q(1503, 22), Tension: *q(17230, 260), SlopeDeg: *q(-5.005, 0.005)},
			{Support: "B", Surveyed: true, Station: 96, Elevation: 421.8, Horizontal: h, Vertical: *q(2148, 32), Tension: *q(17290, 260), SlopeDeg: *q(7.135, 0.005)}},
		ImpliedLoad:         &tension.ImpliedLoad{IfTensionAsExpected: q(47.4, 0.6), IfTensionAsRead: q(38.2, 0.8), IfLengthAsDesigned: q(68.5, 2), Together: "What they say in a sentence.", Filed: *q(37.9, 0.4)},
		UnstressedLength:    &tension.LengthSummary{Today: *q(96.07, 0.01), Design: *q(95.975, 0.005), Difference: *q(0.095, 0.007)},
		AtDesignTemperature: q(17500, 260),
		Expected: &tension.Expected{HorizontalTension: *q(21480, 265), UnderFiledLoad: *q(21480, 265), MeasuredSagMid: *q(2.5507, 0.0021), LoadRatio: *q(1, 0), SagMid: *q(2.037, 0.039),
			Ratio: q(0.799, 0.015), PSlack: 0.9999, PInside: 0.0001, SlackBelow: 0.9, OverloadAbove: 1.1, LimitsFrom: "cables file", SpanFrom: "surveyed supports", TemperatureShift: 8, Uncorrected: q(0.78, 0.01)},
		Rival:     &tension.Rival{HorizontalTension: *q(31000, 900), Ratio: *q(1.442, 0.032), LoadFactor: *q(1.81, 0.07), ExtraLoad: *q(30.7, 2.6), PLoadMore: 0.9999},
		Stiffness: &tension.Stiffness{Lambda2: 18.9, SagPerLoad: 0.39, TensionPerLoad: 0.61, TensionPerDegree: -65, Meaning: "meaning"},
		Reconciled: &tension.Reconciled{HorizontalTension: q(17200, 240), Load: q(38.0, 0.35), UnstressedLength: q(96.068, 0.009), Covariance: [][]float64{{57600, 80, -1}, {80, 0.1225, -0.001}, {-1, -0.001, 8.1e-05}},
			Pieces: []tension.Piece{{Name: "load on record", Unit: "N/m", Given: *q(37.9, 0.4), Needed: number(68.5), UApart: number(2), Residual: number(15.3), Detects: number(6.2)},
				{Name: "reading: tension at A, load cell", Unit: "N", Given: *q(17300, 350)}, {Name: "shape (curvature)", Unit: "1/m", Given: *q(0.00177, 2e-6), Needed: number(0.00176), UApart: number(1e-5), Residual: number(-1), Detects: number(3e-5)}},
			ChiSquare: 234, DegreesOfFreedom: 2, Chance: 1e-9, Outcome: tension.OneDisagrees, Without: "load on record", Suspected: []string{"load on record"}, LoadOnRecord: q(37.9, 0.4), Looked: true, Says: "What all evidence says in a sentence."},
		Strength: &tension.Strength{Use: *q(0.432, 0.006), Permitted: 40000, GreatestT: *q(17290, 260), RivalUse: q(0.78, 0.02), RivalPOver: new(float64), SafetyFactor: 4},
		Verdict:  v, Reason: "The reason in a sentence with 17.16 ± 0.51 kN.", NextStep: "The next step in a sentence.",
		Findings: []tension.Finding{{ID: "note", Level: tension.Note, Text: "Something to know."}, {ID: "act", Level: tension.Act, Text: "Something to do."}, {ID: "look", Level: tension.Look, Text: "Something to look at."}},
		Budget:   []tension.BudgetLine{{Input: "self weight on file", Value: "38.00 N/m", U: "0.40 N/m", OnH: 180, OnR: 0.009, Share: 0.7}, {Input: "shape of the cable (survey)", Value: "21 points", U: "rms 2.8 mm", OnH: 20, OnR: 0.001, Share: 0.3}},
		Explanation: &tension.Explanation{ChiSquare: 31, DegreesOfFreedom: 2, Chance: 2e-7, Needed: true, LengthDiffers: *q(0.031, 0.004), DetectableLength: number(0.011),
			Says: "Extra even load and length gained or lost explain it equally well, and the evidence cannot tell them apart.", Tells: "To tell: a look at the loads.",
			Causes: []tension.Cause{
				{Kind: tension.LengthChanged, Standing: tension.Fits, Size: q(0.031, 0.004), Unit: "m", ChiSquare: 0.4, DegreesOfFreedom: 1, Chance: 0.53, Tension: q(17200, 260), Text: "The cable has become 31.0 ± 8.0 mm longer (unstressed) than designed.", Check: "Look at sockets and clamps for about 31 mm of fresh movement."},
				{Kind: tension.TemperatureWrong, Standing: tension.AgainstRecord, Why: "recorded: 18.0 ± 2.0 °C", Size: q(47, 3), Unit: "degC", ChiSquare: 0.4, DegreesOfFreedom: 1, Chance: 0.53, OffRecord: 23, Text: "The cable was at 47.0 ± 6.0 °C.", Check: "Put a contact thermometer on the cable."},
				{Kind: tension.LoadAtOnePlace, Standing: tension.DoesNotFit, Unit: "N", ChiSquare: 30, DegreesOfFreedom: 1}}},
		Drawing: drawn()}
}

// bare is an assessment from which everything is absent that can be.
func bare(cable string, v tension.Verdict) tension.Assessment {
	a := full(cable, v)
	a.Temperature, a.HorizontalTension, a.Reactions, a.ImpliedLoad, a.UnstressedLength, a.AtDesignTemperature = nil, nil, []tension.Reaction{}, nil, nil, nil
	a.Expected, a.Rival, a.Explanation, a.Stiffness, a.Strength, a.Budget, a.Findings = nil, nil, nil, nil, nil, []tension.BudgetLine{}, []tension.Finding{}
	a.Fit.CatenaryConstant, a.Fit.LowPointStation, a.Fit.LowPointElevation, a.Fit.Rejected, a.Fit.Alternatives = nil, nil, nil, []fit.Suspect{}, []fit.Alternative{}
	a.Load, a.Reconciled = tension.LoadSummary{Record: survey.LoadsNotChecked}, nil
	a.Drawing.Expected, a.Drawing.Dropped = nil, nil
	return a
}

func sampleSurvey() *survey.Survey {
	return &survey.Survey{File: "points.csv", SHA256: "00ff", Encoding: "utf-8", Separator: "comma", Decimal: "point", LengthUnit: "m", PointsRead: 23,
		Header:  []survey.HeaderUse{{Column: 1, Name: "id", Field: "id"}, {Column: 2, Name: "x", Field: "easting"}},
		Codes:   []survey.CodeUse{{Code: "c1", Role: survey.OnCable, Cable: "c1", Points: 21, How: "id in the cables file"}, {Code: "BM", Role: survey.Control, Points: 2, How: "usual word for control"}},
		Guesses: []survey.Guess{{What: "separator", Taken: "comma", Why: "it fits", SetBy: "--separator"}}, Notices: []survey.Notice{{File: "points.csv", Line: 4, Text: "odd"}},
		Conditions: survey.Conditions{Structure: "Invented footbridge", Date: time.Date(2026, 6, 11, 0, 0, 0, 0, time.UTC), CableTemperature: q(18, 1.5), Wind: "light",
			Accuracy: &survey.Accuracy{Horizontal: 0.003, Vertical: 0.002}, Instrument: "total station",
			Listed: []survey.ListedLoad{{Cable: "loaded", Load: *q(30, 1), Spread: survey.AlongCable, What: "service pipe"}}, Notes: []string{"invented data"}}}
}

// sampleContinuous is a cable over two supports, one of them stuck.
func sampleContinuous() tension.Continuous {
	off, stuck, sum, p := 0.4, -5.1, 26.3, 2e-6
	support := tension.SupportForce{From: "1", To: "2", Over: survey.BetweenEqualTension, Surveyed: true, TensionFrom: *q(17290, 260), TensionTo: *q(17320, 262), TensionStep: *q(30, 75),
		HorizontalStep: *q(28, 74), Along: *q(28, 74), Left: *q(-410, 6), Down: *q(3650, 55), Resultant: *q(3673, 55), ResultantAzimuth: 152, ResultantFromDown: *q(6.4, 0.3),
		Bend: *q(12.1, 0.02), FrictionNeeded: q(0.008, 0.02), Off: &off}
	jammed := support
	jammed.From, jammed.To, jammed.Over, jammed.Off, jammed.Stuck = "2", "3", survey.BetweenEqualHorizontal, &stuck, true
	jammed.FrictionNeeded, jammed.HorizontalStep = nil, *q(-810, 159)
	return tension.Continuous{Structure: "Invented footbridge", Cable: "track", SurveyFile: "points.csv",
		Spans:    []tension.JoinedSpan{{Span: "1", Separate: *q(17160, 255), Joint: q(17170, 240)}, {Span: "2", Reversed: true, Separate: *q(17190, 257), Joint: q(17170, 240)}, {Span: "3", Separate: *q(16380, 250)}},
		Supports: []tension.SupportForce{support, jammed}, ChiSquare: &sum, DegreesOfFreedom: 2, P: &p,
		Findings: []tension.Finding{{ID: "support-stuck", Level: tension.Act, Text: "The support between spans 2 and 3 is stuck, in a sentence."}}}
}

// sampleMonteCarlo is a run that bears out H and not the ratio.
func sampleMonteCarlo() *tension.MonteCarlo {
	low, in, high := 0.97, 0.03, 0.0
	good := tension.Simulated{Mean: 17161, U: 255, Low: 16660, High: 17665, LinearLowOff: 1.2, LinearHighOff: -0.8, Tolerance: 5, SamplingError: 1.5, LinearAccepted: true}
	bad := tension.Simulated{Mean: 0.803, U: 0.017, Low: 0.775, High: 0.839, LinearLowOff: -0.005, LinearHighOff: -0.01, Tolerance: 0.0005, SamplingError: 0.0001}
	return &tension.MonteCarlo{Trials: 200000, Failed: 3, Seed: 1, Adaptive: true, Stable: true, HorizontalTension: &good, Ratio: &bad, GreatestTension: &good,
		PSlack: &low, PInside: &in, POverload: &high, Text: "Linear propagation is not good enough for the ratio, in a sentence."}
}

func sampleReport() Report {
	flat := bare("flat", tension.Undecided)
	flat.HorizontalTensionAtLeast = new(float64)
	*flat.HorizontalTensionAtLeast = 5200
	flat.Expected = full("", tension.Slack).Expected
	flat.Expected.Ratio, flat.Expected.Uncorrected = nil, nil
	loaded := full("loaded", tension.Overload)
	loaded.Load.Listed = []tension.ListedLoad{{Load: *q(30, 1), Spread: survey.AlongCable, What: "service pipe"}}
	loaded.Load.Record = survey.LoadsListed
	loaded.Expected.LoadRatio = *q(1.79, 0.05)
	loaded.Rival.Excluded, loaded.Rival.ExcludedBy = true, "the record of loads"
	loaded.MonteCarlo = sampleMonteCarlo()
	joined := sampleContinuous()
	loaded.JointHorizontalTension, loaded.NextSupport = joined.Spans[0].Joint, &joined.Supports[0]
	cables := []tension.Assessment{full("c1", tension.AsDesigned), full("c2", tension.Slack), full("c3", tension.OffDesign), loaded, flat, bare("c6", tension.NoDesign)}
	return NewReport(Tool{Name: "tautbook", Version: "test"}, time.Date(2026, 6, 12, 8, 30, 0, 0, time.UTC),
		Input{Surveys: []*survey.Survey{sampleSurvey()}, CablesFile: "cables.csv", CablesNotices: []survey.Notice{{File: "cables.csv", Line: 1, Text: "column not used"}}, Continuous: []tension.Continuous{joined}}, cables)
}

func number(v float64) *float64 { return &v }
