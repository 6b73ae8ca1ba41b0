package main

import (
	"bytes"
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"tautbook/fit"
	"tautbook/survey"
	"tautbook/survey/register"
	"tautbook/tension"
)

// judgeFlags are the flags that a recorded result depends on. They are kept with the visit, so that it can be judged again.
type judgeFlags struct {
	readingFlags
	conditionFlags
	rejectBeyond float64
	findLoads    bool
}

func (f *judgeFlags) bind(cmd *cobra.Command) {
	f.readingFlags.bind(cmd)
	f.conditionFlags.bind(cmd)
	cmd.Flags().Float64Var(&f.rejectBeyond, "reject-beyond", 6, "leave out points whose normalised residual is beyond this; 0 leaves out none")
	cmd.Flags().BoolVar(&f.findLoads, "find-loads", true, "search the shape for local loads that nobody told")
}

// settings are the judge flags that were given, in a fixed order, as they would be typed; --cables is a stored file instead. Those
// with a default are always among them, so that the default may change.
func (f *judgeFlags) settings(given *cobra.Command) (out []string) {
	own := &cobra.Command{}
	new(judgeFlags).bind(own)
	for _, name := range flagNames(own) {
		flag := given.Flags().Lookup(name)
		if name == "cables" || !flag.Changed && name != "reject-beyond" && name != "find-loads" {
			continue
		}
		values := []string{flag.Value.String()}
		if list, ok := flag.Value.(interface{ GetSlice() []string }); ok {
			values = list.GetSlice()
		}
		for _, v := range values {
			out = append(out, "--"+name+"="+v)
		}
	}
	return out
}

// judged is a survey with what was made of it.
type judged struct {
	survey      *survey.Survey
	designs     []survey.Design
	assessments []tension.Assessment
	results     []register.Result
}

// judgeStored works out what a survey says, from the bytes and the settings alone.
func judgeStored(s register.File, cables *register.File, settings []string) (j judged, err error) {
	var f judgeFlags
	cmd := &cobra.Command{}
	f.bind(cmd)
	if err := cmd.ParseFlags(settings); err != nil {
		return j, err
	}
	if !(f.rejectBeyond >= 0) {
		return j, usageError{fmt.Errorf("--reject-beyond is %g, expected 0 or more", f.rejectBeyond)}
	}
	if cables != nil {
		if j.designs, _, err = survey.ReadDesigns(bytes.NewReader(cables.Bytes), cables.Name); err != nil {
			return j, err
		}
	}
	opts, err := f.pointOptions(j.designs, *f.values["structure"])
	if err != nil {
		return j, err
	}
	opts.Name = s.Name
	if j.survey, err = survey.ReadPoints(bytes.NewReader(s.Bytes), opts); err != nil {
		return j, err
	}
	if err := f.apply(cmd, []*survey.Survey{j.survey}); err != nil {
		return j, err
	}
	fitting := fit.Options{RejectBeyond: f.rejectBeyond}
	if f.findLoads {
		fitting.FindLoads = mostFound
	}
	cases := casesOf(input{surveys: []*survey.Survey{j.survey}, designs: j.designs}, nil, fitting)
	spans := make([]survey.SpanPoints, len(cases)) // assessAll lets go of those in the cases
	for i, c := range cases {
		spans[i] = c.Points
	}
	if j.assessments, err = assessAll(cases); err != nil {
		return j, err
	}
	for i, a := range j.assessments {
		j.results = append(j.results, resultOf(a, cases[i].Design, placeOf(a, spans[i], j.survey.Flat)))
	}
	return j, nil
}

// judgeAgain is the register's way to work results out again.
func judgeAgain(s register.File, cables *register.File, settings []string) (survey.Conditions, []register.Result, error) {
	j, err := judgeStored(s, cables, settings)
	if err != nil {
		return survey.Conditions{}, nil, err
	}
	return j.survey.Conditions, j.results, nil
}

// resultOf is an assessment as the register keeps it.
func resultOf(a tension.Assessment, d *survey.Design, place register.Place) register.Result {
	f := &a.Fit
	r := register.Result{Cable: a.Cable, Span: a.Span, Verdict: string(a.Verdict), Reason: a.Reason, NextStep: a.NextStep, Shape: string(f.Shape),
		PointsUsed: int64(f.PointsUsed), PointsRejected: int64(len(f.Rejected)), DegreesOfFree: int64(f.DegreesOfFreedom),
		RMS: &f.RMS, VarianceFactor: &f.VarianceFactor, Chord: &f.Chord, Rise: &f.Rise, SagMid: &f.SagMid, GreatestSag: &f.GreatestSag, ArcLength: &f.ArcLength,
		HorizontalTension: a.HorizontalTension, HorizontalTensionAtLeast: a.HorizontalTensionAtLeast, ReferenceTension: a.AtDesignTemperature}
	if a.HorizontalTension != nil {
		r.HangingLoad = &a.Load.Hanging
	}
	if d != nil && d.Temperature != nil {
		r.ReferenceTemperature = &d.Temperature.Value
	}
	if a.UnstressedLength != nil {
		r.UnstressedLength = &a.UnstressedLength.Today
	}
	if e := a.Expected; e != nil {
		r.ExpectedTension, r.Ratio, r.PSlack, r.POverload = &e.HorizontalTension, e.Ratio, &e.PSlack, &e.POverload
	}
	if s := a.Strength; s != nil {
		r.GreatestTension, r.StrengthUse = &s.GreatestT, &s.Use
	}
	r.Place = place
	return r
}

// placeOf is where the curve hangs in the frame of the survey; a two-column survey has stations and no place.
func placeOf(a tension.Assessment, sp survey.SpanPoints, flat bool) register.Place {
	d := a.Drawing
	from, to := d.Curve.Z(d.From), d.Curve.Z(d.To)
	p := register.Place{From: &d.From, To: &d.To, FromElevation: &from, ToElevation: &to}
	if flat {
		return p
	}
	sin, cos := math.Sincos(a.Fit.AzimuthDeg * math.Pi / 180)
	start := sp.A
	for i := range sp.Points {
		q := &sp.Points[i]
		if sp.A == nil && (start == nil || q.E*sin+q.N*cos < start.E*sin+start.N*cos) {
			start = q
		}
	}
	if start != nil {
		p.StartEasting, p.StartNorthing, p.AzimuthDeg = &start.E, &start.N, &a.Fit.AzimuthDeg
	}
	return p
}
