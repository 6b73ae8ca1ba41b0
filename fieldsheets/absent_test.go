package fieldsheets

import (
	"bytes"
	"encoding/csv"
	"regexp"
	"strings"
	"testing"

	"tautbook/survey"
	"tautbook/tension"
)

// The assessments of this file are invented.

// absences are the figures that an assessment may lack, one switch each.
var absences = []struct {
	name   string
	remove func(a *tension.Assessment)
}{
	{"H and what follows from it", func(a *tension.Assessment) { a.HorizontalTension, a.Reactions = nil, []tension.Reaction{} }},
	{"load", func(a *tension.Assessment) { a.Load = tension.LoadSummary{} }},
	{"temperature", func(a *tension.Assessment) { a.Temperature = nil }},
	{"expected state", func(a *tension.Assessment) { a.Expected = nil }},
	{"ratio", func(a *tension.Assessment) {
		if a.Expected != nil {
			e := *a.Expected
			e.Ratio, e.Uncorrected, a.Expected = nil, nil, &e
		}
	}},
	{"rival reading", func(a *tension.Assessment) { a.Rival = nil }},
	{"strength", func(a *tension.Assessment) { a.Strength = nil }},
	{"strength in the rival reading", func(a *tension.Assessment) {
		if a.Strength != nil {
			s := *a.Strength
			s.RivalUse, s.RivalPOver, a.Strength = nil, nil, &s
		}
	}},
	{"unstressed length and design temperature", func(a *tension.Assessment) { a.UnstressedLength, a.AtDesignTemperature = nil, nil }},
	{"implied loads, reconciled figures", func(a *tension.Assessment) {
		a.ImpliedLoad = &tension.ImpliedLoad{Filed: *q(37.9, 0.4)}
		if a.Reconciled != nil {
			r := *a.Reconciled
			r.HorizontalTension, r.Load, r.UnstressedLength, r.Without, r.Covariance = nil, nil, nil, "", nil
			a.Reconciled = &r
		}
	}},
	{"all of the implied load, stiffness, reconciliation", func(a *tension.Assessment) { a.ImpliedLoad, a.Stiffness, a.Reconciled = nil, nil, nil }},
	{"constant, low point, budget, findings, drawing", func(a *tension.Assessment) {
		a.Fit.CatenaryConstant, a.Fit.LowPointStation, a.Fit.LowPointElevation = nil, nil, nil
		a.Budget, a.Findings, a.Drawing = []tension.BudgetLine{}, []tension.Finding{}, tension.Drawing{}
	}},
}

var verdicts = []tension.Verdict{tension.AsDesigned, tension.Slack, tension.Overload, tension.OffDesign, tension.Undecided, tension.NoDesign}

// Every combination of absent figures under every verdict prints in every format, with words where a figure is missing.
func TestEveryCombinationOfAbsentFigures(t *testing.T) {
	schema := compiled(t)
	emptyCell := regexp.MustCompile(`<td>\s*</td>\s*</tr>|<th scope="row">[^<]*</th><td></td>|<p[^>]*>\s*</p>|<b>[^<]*:</b>\s*</p>`)
	emptyRow := regexp.MustCompile(`(?m)^    [A-Z][^:\n]{0,27}$`)
	bad := regexp.MustCompile(`NaN|Inf\b|nil>|%!`)
	step := 1
	if testing.Short() {
		step = 7 // still every pair
	}
	for mask := 0; mask < 1<<len(absences); mask += step {
		a := full("invented", verdicts[mask%len(verdicts)])
		var names []string
		for i, x := range absences {
			if mask>>i&1 == 1 {
				x.remove(&a)
				names = append(names, x.name)
			}
		}
		r := sampleReport()
		r.Cables = []tension.Assessment{a}
		what := string(a.Verdict) + " without " + strings.Join(names, ", ")
		text := printed(t, "text", r)
		if found := bad.FindString(text) + emptyRow.FindString(text); found != "" {
			t.Fatalf("%s: text has %q", what, found)
		}
		if a.HorizontalTension == nil && !strings.Contains(text, "not determined: ") {
			t.Fatalf("%s: nobody says that H is not determined", what)
		}
		if mask%5 != 0 { // HTML prints the same groups, so a fifth of the combinations, which has every pair, is enough
			continue
		}
		html := printed(t, "html", r)
		if found := bad.FindString(html) + emptyCell.FindString(html); found != "" {
			t.Fatalf("%s: HTML has %q", what, found)
		}
		if mask%3 == 0 {
			if err := validate(t, schema, []byte(printed(t, "json", r))); err != nil {
				t.Fatalf("%s: %v", what, err)
			}
			wellFormed(t, html)
			holdsWhatIsMissing(t, what, printed(t, "csv", r), &a)
		}
	}
}

// holdsWhatIsMissing checks that a number column is empty exactly where the last column says why.
func holdsWhatIsMissing(t *testing.T, what, out string, a *tension.Assessment) {
	t.Helper()
	rows, err := csv.NewReader(strings.NewReader(out)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	cells := map[string]string{}
	for i, name := range rows[0] {
		cells[name] = rows[1][i]
	}
	for column, word := range map[string]string{"horizontal_tension_N": "horizontal_tension_N: ", "strength_use": "strength_use: ", "rival_load_factor": "rival: ", "expected_horizontal_tension_N": "expected, ratio"} {
		if (cells[column] == "") != strings.Contains(cells["not_determined"], word) {
			t.Fatalf("%s: %s is %q and not_determined is %q", what, column, cells[column], cells["not_determined"])
		}
	}
}

// A reader of the first page alone must find state, how sure, why and what next for every cable.
func TestFirstPageSaysAll(t *testing.T) {
	for _, v := range verdicts {
		r := sampleReport()
		r.Cables = []tension.Assessment{full("invented", v)}
		first, _, _ := strings.Cut(printed(t, "html", r), `<section class="cable"`)
		for _, want := range []string{string(v) + "</strong>", "How sure:</b> ", "Why:</b> The reason", "Next:</b> The next", `class="owner">`, "no permit", "2026-06-11", "Invented footbridge", "k = 2"} {
			if !strings.Contains(first, want) {
				t.Errorf("%s: the first page lacks %q", v, want)
			}
		}
	}
}

// The worst that a sheet could do: to tell the owner of a cable whose loads nobody looked at that all is well without saying so.
func TestOwnerLinesSayWhatTheyRestOn(t *testing.T) {
	a := full("invented", tension.AsDesigned)
	if line := ownerLine(&a) + howSure(&a); !strings.Contains(line, "if nothing hangs on it") || !strings.Contains(line, "nobody looked at the loads") {
		t.Errorf("as designed on unchecked loads reads %q", line)
	}
	a.Verdict, a.Rival.Excluded = tension.OffDesign, true
	if line := ownerLine(&a); !strings.Contains(line, "Something may hang on it as well") {
		t.Errorf("off design with the rival excluded reads %q", line)
	}
	a.Verdict, a.Expected.LoadRatio = tension.Overload, *q(1, 0)
	a.Strength.RivalPOver = &a.Expected.PSlack
	for _, line := range []string{ownerLine(&a), howSure(&a)} {
		if strings.Contains(line, "80 %") || strings.Contains(line, "slack") {
			t.Errorf("overload under the other reading reads %q", line)
		}
	}
}

// Conditions that differ between two files are named, not dropped.
func TestConditionsThatDifferAreNamed(t *testing.T) {
	one, two := sampleSurvey(), sampleSurvey()
	two.File, two.Conditions.Wind, two.Conditions.Loads = "second.csv", "gusts", "as filed"
	r := sampleReport()
	r = NewReport(r.Tool, r.Printed, Input{Surveys: []*survey.Survey{one, two}}, r.Cables)
	for _, format := range []string{"text", "html"} {
		out := regexp.MustCompile(`<[^>]*>`).ReplaceAllString(printed(t, format, r), "")
		if !strings.Contains(out, "different between files: wind, loads") {
			t.Errorf("%s does not name the conditions that differ", format)
		}
	}
	if r.Visit.Wind != differs || r.Visit.Date != "2026-06-11" {
		t.Errorf("visit %+v", r.Visit)
	}
}

// The unit of a column of forces is that of its largest figure.
func TestOneUnitDownAColumn(t *testing.T) {
	r := sampleReport()
	small := full("small", tension.Slack)
	small.HorizontalTension = q(640, 12)
	r.Cables = []tension.Assessment{small, full("large", tension.Slack)}
	var out bytes.Buffer
	if err := WriteText(&out, r, TextOptions{}); err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(out.String(), "0.640 ± 0.024 kN") {
		t.Error("640 N beside 17 kN must print as 0.640 kN")
	}
}
