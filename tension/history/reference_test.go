package history

import (
	"encoding/json"
	"math"
	"os"
	"testing"
	"time"

	"gonum.org/v1/gonum/stat/distuv"
)

// referenceCase is a history of testdata/reference.py (numpy and scipy, dense covariance, brentq).
type referenceCase struct {
	Name                   string
	Days                   []int
	Y, U                   []float64
	Common                 float64
	Kind                   string
	EventDay               *int `json:"event_day"`
	Gap                    *int
	Last                   float64
	ULast                  float64 `json:"u_last"`
	Event                  *float64
	UEvent                 *float64 `json:"u_event"`
	Chi2, P                float64
	Limit                  *float64
	Earliest, Best, Latest float64
}

var dayZero = time.Date(2015, 3, 2, 0, 0, 0, 0, time.UTC)

func onDay(d int) string { return dayZero.AddDate(0, 0, d).Format(time.DateOnly) }

func (c referenceCase) span() Span {
	s := Span{Structure: "invented bridge", Cable: c.Name}
	for i := range c.Y {
		s.Visits = append(s.Visits, Visit{ID: onDay(c.Days[i]), Date: onDay(c.Days[i]), Length: &Quantity{Value: c.Y[i], U: c.U[i]}, LengthCommon: c.Common})
	}
	if c.Kind == "log" {
		s.Events = append(s.Events, Event{Date: onDay(-30), Kind: Installed})
	}
	if c.EventDay != nil {
		s.Events = append(s.Events, Event{Date: onDay(*c.EventDay), Kind: Retensioned, Size: &Quantity{Value: 0.036, U: 0.0005}, Unit: "m"})
	}
	if c.Limit != nil {
		s.Length.AtMost = &Quantity{Value: *c.Limit}
	}
	return s
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s: got %.10g, want %.10g within %g", what, got, want, tolerance)
	}
}

// TestAgainstDenseLeastSquares holds estimates, uncertainties, chi-square and crossing dates against the reference: to 1e-6 of a
// standard uncertainty, dates to a day. The search has to find the model that the history was made with.
func TestAgainstDenseLeastSquares(t *testing.T) {
	text, err := os.ReadFile("testdata/reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var cases []referenceCase
	if err := json.Unmarshal(text, &cases); err != nil {
		t.Fatal(err)
	}
	if len(cases) != 12 {
		t.Fatalf("%d histories, want 12", len(cases))
	}
	for _, c := range cases {
		t.Run(c.Name, func(t *testing.T) { c.check(t) })
	}
}

func (c referenceCase) check(t *testing.T) {
	got, err := Read(c.span(), Options{Today: dayZero.AddDate(0, 0, c.Days[len(c.Days)-1])})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "chi-square", got.Fit.ChiSquare, c.Chi2, 1e-5*(1+c.Chi2))
	near(t, "p", got.Fit.P, c.P, 1e-5)
	found := map[string]*Quantity{}
	if got.Drift != nil {
		found[map[DriftShape]string{Linear: "linear", LogTime: "log"}[got.Drift.Shape]] = &got.Drift.Rate
	}
	recorded := 0
	for _, s := range got.Steps {
		switch s.Kind {
		case RecordedStep:
			recorded++
			near(t, "recorded step", s.By.Value, *c.Event, 1e-6**c.UEvent)
			near(t, "its u", s.By.U, *c.UEvent, 1e-6**c.UEvent)
		case UnrecordedStep:
			found["step"] = s.By
			if want := onDay(c.Days[*c.Gap]); s.Before != want {
				t.Errorf("step before %s, want %s", s.Before, want)
			}
		default:
			t.Errorf("found %v", s)
		}
	}
	if want := map[bool]int{true: 1}[c.EventDay != nil]; recorded != want {
		t.Errorf("%d recorded steps, want %d", recorded, want)
	}
	if c.Kind == "none" {
		if len(found) != 0 {
			t.Errorf("found %v in a history without change", found)
		}
		return
	}
	q := found[c.Kind]
	if q == nil || len(found) != 1 {
		t.Fatalf("found %v, want %s", found, c.Kind)
	}
	near(t, c.Kind, q.Value, c.Last, 1e-6*c.ULast)
	near(t, "u", q.U, c.ULast, 1e-6*c.ULast)
	if c.Limit == nil {
		return
	}
	f := got.Forecasts[0]
	for _, d := range []struct {
		what, got string
		want      float64
	}{{"earliest", f.Earliest, c.Earliest}, {"best", f.Best, c.Best}, {"latest", f.Latest, c.Latest}} {
		at, err := time.Parse(time.DateOnly, d.got)
		if err != nil {
			t.Fatal(err)
		}
		near(t, d.what, daysBetween(dayZero, at), math.Floor(d.want), 1)
	}
}

// TestFamilyWise holds the simulated probability against cases that are known in closed form: independent candidates (Sidak 1967),
// and one candidate twice.
func TestFamilyWise(t *testing.T) {
	axis := func(i int) candidate {
		u := make([]float64, 4)
		u[i] = 1
		return candidate{unit: u}
	}
	z := 2.3
	one := 2 * distuv.UnitNormal.Survival(z)
	near(t, "four independent", familyWise([]candidate{axis(0), axis(1), axis(2), axis(3)}, z), 1-math.Pow(1-one, 4), 4*math.Sqrt(0.08/draws))
	near(t, "one twice", familyWise([]candidate{axis(0), axis(0)}, z), one, 4*math.Sqrt(one/draws))
	near(t, "beyond doubt, by the bound", familyWise([]candidate{axis(0), axis(1)}, 5), 2*2*distuv.UnitNormal.Survival(5), 1e-15)
}
