package register_test

import (
	"bytes"
	"context"
	"fmt"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"tautbook/survey"
	"tautbook/survey/register"
)

var background = context.Background()

const cablesText = "structure,cable,load,self_weight [N/m],design_span [m],design_tension [kN],design_temperature [degC]\n"

// submission is an invented visit: its file has the conditions and one point a cable, and judge stands in for the assessment.
func submission(structure string, day int, cables ...string) register.Submission {
	date := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC).AddDate(0, 0, day).Format(time.DateOnly)
	var s, d strings.Builder
	fmt.Fprintf(&s, "# structure: %s\n# date: %s\n# temperature: %g +- 1 degC\n# loads: as filed\n", structure, date, 10+float64(day%7)/3)
	fmt.Fprintf(&s, "# reading: %s; tension at A; 30.7 +- 0.5 kN; load cell\nPoint,Easting,Northing,Elevation,Code\n", cables[0])
	d.WriteString(cablesText)
	for i, c := range cables {
		fmt.Fprintf(&d, "%s,%s,self weight,38,96,21.9,10\n", structure, c)
		for k := range 8 {
			fmt.Fprintf(&s, "%d,%d,0,%g,%s\n", 10*i+k, 10*k, 100+float64((k-4)*(k-4))/float64(10+day%13), c)
		}
	}
	sub := register.Submission{Survey: register.File{Kind: register.SurveyFile, Name: structure + ".csv", Bytes: []byte(s.String())},
		Cables: &register.File{Kind: register.CablesFile, Name: "cables.csv", Bytes: []byte(d.String())}, By: "test"}
	c, results, err := judge(sub.Survey, sub.Cables, nil)
	if err != nil {
		panic(err)
	}
	sub.Conditions, sub.Results = c, results
	sub.Designs, _, _ = survey.ReadDesigns(bytes.NewReader(sub.Cables.Bytes), "cables.csv")
	return sub
}

// judge makes figures of the bytes alone, as the assessment does: the mean height of each cable stands for every figure.
func judge(s register.File, cables *register.File, _ []string) (survey.Conditions, []register.Result, error) {
	designs, _, err := survey.ReadDesigns(bytes.NewReader(cables.Bytes), cables.Name)
	if err != nil {
		return survey.Conditions{}, nil, err
	}
	sv, err := survey.ReadPoints(bytes.NewReader(s.Bytes), survey.PointOptions{Name: s.Name, Known: designs})
	if err != nil {
		return survey.Conditions{}, nil, err
	}
	var out []register.Result
	for _, sp := range sv.Spans {
		sum := 0.0
		for _, p := range sp.Points {
			sum += p.Z
		}
		mean := sum / float64(len(sp.Points))
		q := &survey.Quantity{Value: mean, U: mean / 300}
		out = append(out, register.Result{Cable: sp.Cable, Span: sp.Span, Verdict: "as designed", Shape: "catenary", PointsUsed: int64(len(sp.Points)),
			HorizontalTension: q, ReferenceTension: q, UnstressedLength: q, Ratio: q, RMS: &mean})
	}
	return sv.Conditions, out, nil
}

// create makes an empty register in a file.
func create(t testing.TB) (*register.Register, string) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "register with blanks.db")
	return open(t, path, register.Options{Create: true}), path
}

func open(t testing.TB, where string, o register.Options) *register.Register {
	t.Helper()
	r, err := register.Open(background, where, o)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { r.Close() })
	return r
}

func record(t testing.TB, r *register.Register, s register.Submission) string {
	t.Helper()
	out, err := r.Record(background, s)
	if err != nil {
		t.Fatal(err)
	}
	return out.Visit
}

// sound fails unless verify finds nothing wrong; it returns the number of visits.
func sound(t testing.TB, r *register.Register) int {
	t.Helper()
	v, err := r.Verify(background, judge, nil)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range v.Faults {
		t.Errorf("verify: %s", f)
	}
	return v.Visits
}

// stores runs a test on SQLite and, where a server can be had, on PostgreSQL.
func stores(t *testing.T, test func(t *testing.T, where string)) {
	t.Run("sqlite", func(t *testing.T) { test(t, filepath.Join(t.TempDir(), "register.db")) })
	t.Run("postgres", func(t *testing.T) { test(t, postgres(t)) })
}
