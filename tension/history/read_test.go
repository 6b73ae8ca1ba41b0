package history

import (
	"encoding/json"
	"flag"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"pgregory.net/rapid"

	"tautbook/survey"
	"tautbook/tension"
)

var update = flag.Bool("update", false, "rewrite golden files")

// invented is a history of four years or so with everything in it.
func invented() Span {
	day := func(s string, s0, h, temperature float64) Visit {
		return Visit{ID: s, Date: s, Length: &Quantity{Value: s0, U: 0.0032}, LengthCommon: 0.003, Tension: &Quantity{Value: h, U: 320}, TensionCommon: 300,
			Temperature: &Quantity{Value: temperature, U: 1}, Loads: survey.LoadsAsFiled, Verdict: tension.AsDesigned}
	}
	return Span{Structure: "Invented footbridge", Cable: "hand-left", TakeUpPerTurn: &Quantity{Value: 0.006, U: 0.0001},
		Tension: Limits{AtLeast: &Quantity{Value: 15000}},
		Visits: []Visit{day("2019-06-03", 96.0305, 17100, 14), day("2020-06-01", 96.0311, 17080, 18), day("2021-06-02", 95.9962, 19030, 12),
			day("2022-06-03", 95.9969, 19000, 17), day("2024-05-30", 96.0187, 17800, 16), day("2025-06-04", 96.0192, 17770, 13), day("2026-06-01", 96.0186, 17790, 19)},
		Events: []Event{{Date: "2018-09-10", Kind: Installed}, {Date: "2021-05-12", Kind: Retensioned, Size: &Quantity{Value: 6}, Unit: "turns"}}}
}

var today = time.Date(2026, 7, 1, 0, 0, 0, 0, time.UTC)

func read(t *testing.T, s Span) Trend {
	t.Helper()
	got, err := Read(s, Options{Today: today})
	if err != nil {
		t.Fatal(err)
	}
	return got
}

func sentencesOf(got Trend) string {
	var b strings.Builder
	for _, f := range got.Findings {
		fmt.Fprintf(&b, "%s %s: %s\n", f.Level, f.ID, f.Text)
	}
	fmt.Fprintf(&b, "urgency %d: %s\nnext %s: %s\n", got.Rank.Level, got.Rank.Reason, got.Next.Date, got.Next.Why)
	return b.String()
}

// TestSentences pins what is said of histories of one, two, three and seven visits.
func TestSentences(t *testing.T) {
	few := func(n int) Span { s := invented(); s.Visits = s.Visits[:n]; return s }
	unnoticed, low, miscounted, noLength, unsurveyed := few(2), few(2), invented(), invented(), few(2)
	unnoticed.Visits[1].Length.Value += 0.02
	low.Tension.AtLeast = &Quantity{Value: 19000}
	miscounted.Events[1].Size = &Quantity{Value: 9}
	for i := range noLength.Visits {
		noLength.Visits[i].Length = nil
	}
	unsurveyed.Events = append(unsurveyed.Events, Event{Date: "2026-01-05", Kind: LoadAdded, Size: &Quantity{Value: 12}, Unit: "N/m"})
	for name, s := range map[string]Span{"one": few(1), "two": few(2), "three": few(3), "seven": invented(), "two-changed": unnoticed, "beyond": low,
		"not-as-recorded": miscounted, "tension-only": noLength, "not-surveyed-since": unsurveyed} {
		t.Run(name, func(t *testing.T) {
			got := sentencesOf(read(t, s))
			file := filepath.Join("testdata", "sentences", name+".txt")
			if *update {
				if err := os.WriteFile(file, []byte(got), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(file)
			if err != nil {
				t.Fatal(err)
			}
			if got != string(want) {
				t.Errorf("got\n%swant\n%s", got, want)
			}
		})
	}
}

// TestFewVisits: one visit has a state and no change, two have a change and neither drift nor forecast date.
func TestFewVisits(t *testing.T) {
	s := invented()
	s.Events = nil
	s.Visits = s.Visits[:2]
	s.Visits[1].Length.Value += 1 // beyond all doubt
	two := read(t, s)
	if two.Change == nil || two.Change.P > 1e-9 || two.Drift != nil || len(two.Steps) != 0 || two.Forecasts[0].Earliest != "" || two.Forecasts[0].Basis != OnState {
		t.Errorf("two visits: %+v", two)
	}
	near(t, "tension today is that of the later visit", two.Forecasts[0].Today.Value, s.Visits[1].Tension.Value, 1e-6)
	near(t, "u of the difference", two.Change.By.U, math.Sqrt(2*(0.0032*0.0032-0.003*0.003)), 1e-12)
	s.Visits = s.Visits[:1]
	if one := read(t, s); one.Change != nil || one.Drift != nil || one.Next.Date == "" {
		t.Errorf("one visit: %+v", one)
	}
}

// TestInvariance: the order of the input, the unit of length and the origin of time change nothing but what they name.
func TestInvariance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		seed := rapid.Uint64().Draw(t, "seed")
		w := world{visits: rapid.IntRange(1, 9).Draw(t, "visits"), every: 1, apart: 0.001, common: rapid.SampledFrom([]float64{0, 0.01}).Draw(t, "common"),
			drift: rapid.SampledFrom([]float64{0, 0.004}).Draw(t, "drift"), slip: 0.01, slipGap: rapid.IntRange(0, 4).Draw(t, "gap"),
			retensioned: rapid.SampledFrom([]float64{0, 0.036}).Draw(t, "retensioned")}
		rng := rand.New(rand.NewPCG(seed, 1))
		s := w.draw(rng)
		s.Length.AtMost = &Quantity{Value: truthS0 + 0.1}
		o := Options{Today: w.last()}
		base, err := Read(s, o)
		if err != nil {
			t.Fatal(err)
		}
		shuffled := s
		shuffled.Visits, shuffled.Events = append([]Visit(nil), s.Visits...), append([]Event(nil), s.Events...)
		rng.Shuffle(len(shuffled.Visits), func(i, j int) { shuffled.Visits[i], shuffled.Visits[j] = shuffled.Visits[j], shuffled.Visits[i] })
		rng.Shuffle(len(shuffled.Events), func(i, j int) { shuffled.Events[i], shuffled.Events[j] = shuffled.Events[j], shuffled.Events[i] })
		if got, err := Read(shuffled, o); err != nil || text(t, got) != text(t, base) {
			t.Fatalf("the order counts: %v\n%s\n%s", err, text(t, got), text(t, base))
		}
		sameShape(t, base, scaled(s, 1024), o, 1024) // a power of two, so that rounding is the same
		const leap = 28 * 365.25                     // the calendar repeats
		later := s
		later.Visits, later.Events = append([]Visit(nil), s.Visits...), append([]Event(nil), s.Events...)
		for i := range later.Visits {
			later.Visits[i].Date = shifted(later.Visits[i].Date, leap)
		}
		for i := range later.Events {
			later.Events[i].Date = shifted(later.Events[i].Date, leap)
		}
		sameShape(t, base, later, Options{Today: o.Today.AddDate(0, 0, leap)}, 1)
	})
}

func shifted(date string, days float64) string {
	at, _ := parseDate(date)
	return at.AddDate(0, 0, int(days)).Format(dayOnly)
}

func text(t *rapid.T, v any) string {
	out, err := json.Marshal(v)
	if err != nil {
		t.Fatal(err)
	}
	return string(out)
}

func scaled(s Span, k float64) Span {
	by := func(q *Quantity) *Quantity { return &Quantity{Value: k * q.Value, U: k * q.U} }
	s.Visits, s.Events = append([]Visit(nil), s.Visits...), append([]Event(nil), s.Events...)
	for i := range s.Visits {
		s.Visits[i].Length, s.Visits[i].LengthCommon = by(s.Visits[i].Length), k*s.Visits[i].LengthCommon
	}
	for i := range s.Events {
		if s.Events[i].Size != nil {
			s.Events[i].Size = by(s.Events[i].Size)
		}
	}
	s.Length.AtMost = by(s.Length.AtMost)
	return s
}

func sameShape(t *rapid.T, base Trend, s Span, o Options, k float64) {
	got, err := Read(s, o)
	if err != nil {
		t.Fatal(err)
	}
	if len(got.Steps) != len(base.Steps) || (got.Drift == nil) != (base.Drift == nil) || (got.Warmth == nil) != (base.Warmth == nil) || got.Rank.Level != base.Rank.Level {
		t.Fatalf("another reading: %s\n%s", text(t, got), text(t, base))
	}
	for i := range got.Steps {
		if g, b := got.Steps[i].By, base.Steps[i].By; (g == nil) != (b == nil) || g != nil && !(math.Abs(g.Value-k*b.Value) <= 1e-9*k && math.Abs(g.U-k*b.U) <= 1e-6*k*b.U) {
			t.Fatalf("step %v, want %g times %v", g, k, b)
		}
	}
	if d := base.Drift; d != nil && !(math.Abs(got.Drift.Rate.Value-k*d.Rate.Value) <= 1e-9*k) {
		t.Fatalf("drift %v, want %g times %v", got.Drift.Rate, k, d.Rate)
	}
}

// TestMarks: a datum that shifted is no mark that moved; one that moved is named; two that moved of four leave the datum open.
func TestMarks(t *testing.T) {
	q := func(v float64) Quantity { return Quantity{Value: v, U: 0.001} }
	net := func(shift float64, moved map[string]float64) (out []Mark) {
		for i, id := range []string{"m1", "m2", "m3", "m4"} {
			at := float64(30 * i)
			out = append(out, Mark{id, q(at + shift), q(2*at - shift), q(100 + shift + moved[id])})
		}
		return out
	}
	still := CompareMarks(net(0, nil), net(0.05, nil))
	near(t, "shift", still.Shift[0], 0.05, 1e-9)
	if len(still.Moved) != 0 || still.P < 0.99 || still.Note != "" {
		t.Errorf("a shift of all: %+v", still)
	}
	one := CompareMarks(net(0, nil), net(0.05, map[string]float64{"m3": 0.012}))
	if len(one.Moved) != 1 || one.Moved[0] != "m3" || one.P > 1e-6 || math.Abs(one.Shift[2]-0.05) > 1e-9 {
		t.Errorf("m3 moved: %+v", one)
	}
	open := CompareMarks(net(0, nil), net(0, map[string]float64{"m1": 0.03, "m2": -0.02, "m3": 0.012}))
	if open.Note == "" {
		t.Errorf("no two marks agree: %+v", open)
	}
	if few := CompareMarks(net(0, nil)[:2], net(0, nil)); few.Common != 2 || few.Note == "" {
		t.Errorf("two marks: %+v", few)
	}
	s := invented()
	s.Visits[0].Marks, s.Visits[3].Marks = net(0, nil), net(0, map[string]float64{"m3": 0.012})
	if got := sentencesOf(read(t, s)); !strings.Contains(got, "2019-06-03 and 2022-06-03 do not agree") || !strings.Contains(got, "m3 moved") {
		t.Errorf("marks are not said:\n%s", got)
	}
}

// TestRefused: each input that is not sound is named.
func TestRefused(t *testing.T) {
	for want, spoil := range map[string]func(s *Span){
		"found no visit": func(s *Span) { s.Visits = nil },
		"visit 2 (2020-06-01): found date \"yesterday\"": func(s *Span) { s.Visits[1].Date = "yesterday" },
		"found S0 = NaN":                    func(s *Span) { s.Visits[0].Length.Value = math.NaN() },
		"u = 0, expected":                   func(s *Span) { s.Visits[0].Tension.U = 0 },
		"common part of u(S0)":              func(s *Span) { s.Visits[0].LengthCommon = 0.0032 },
		"temperature is not":                func(s *Span) { s.Visits[0].Temperature.Value = math.Inf(1) },
		"control mark m1":                   func(s *Span) { s.Visits[0].Marks = []Mark{{ID: "m1"}} },
		"event 2 (retensioned): found size": func(s *Span) { s.Events[1].Size.U = -1 },
	} {
		s := invented()
		spoil(&s)
		if _, err := Read(s, Options{Today: today}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("got %v, want %q", err, want)
		}
	}
}

// TestDayOfVisit: an event on the day of two visits stands between them, on the day of one before it.
func TestDayOfVisit(t *testing.T) {
	s := invented()
	s.Visits = s.Visits[:3]
	s.Visits[1].Date, s.Visits[2].Date, s.Events[1].Date = "2021-05-12T08:30", "2021-05-12T16:00", "2021-05-12"
	got := read(t, s)
	if len(got.Steps) != 1 || got.Steps[0].After != "2021-05-12T08:30" || got.Steps[0].Before != "2021-05-12T16:00" {
		t.Errorf("steps %+v", got.Steps)
	}
}

// TestByUrgency: level first, then date, then name.
func TestByUrgency(t *testing.T) {
	all := []Trend{{Cable: "d", Rank: Rank{Level: 5}}, {Cable: "c", Rank: Rank{Level: 2}, Next: NextVisit{Date: "2027-01-01"}},
		{Cable: "b", Rank: Rank{Level: 2}, Next: NextVisit{Date: "2026-01-01"}}, {Cable: "a", Rank: Rank{Level: 2}, Next: NextVisit{Date: "2027-01-01"}}, {Cable: "e", Rank: Rank{Level: 1}}}
	ByUrgency(all)
	order := ""
	for _, t := range all {
		order += t.Cable
	}
	if order != "ebacd" {
		t.Errorf("order %s, want ebacd", order)
	}
}
