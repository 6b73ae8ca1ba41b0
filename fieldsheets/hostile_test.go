package fieldsheets

import (
	"encoding/csv"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"

	"tautbook/survey"
	"tautbook/tension"
)

// Cells that a spreadsheet would run, with the sign hidden behind blanks or in its full-width form (OWASP, CSV Injection).
func TestFormulasAreDisarmed(t *testing.T) {
	for _, formula := range []string{"=1+1", "+1", "-1", "@SUM(A1)", "\t=1", "\r=1", "\n=1", "  =1", "\u00a0+1", "\u200b=1", "＝1+1", "＋1", "－1", "＠A1", "\tplain"} {
		r := sampleReport()
		a := &r.Cables[0]
		a.Structure, a.Cable, a.Span, a.SurveyFile = formula, formula, formula, formula
		rows, err := csv.NewReader(strings.NewReader(printed(t, "csv", r))).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		for i := range 4 {
			if !strings.HasPrefix(rows[1][i], "'") {
				t.Errorf("%q goes into the CSV as %q", formula, rows[1][i])
			}
		}
	}
	for _, plain := range []string{"", "main-left", "1a", "a=b", "ä", "'x"} {
		if got := harmless(plain); got != plain {
			t.Errorf("%q was changed to %q", plain, got)
		}
	}
}

// dress puts a text into every place of a report that comes from a file.
func dress(text string) Report {
	sv := sampleSurvey()
	sv.File = text
	sv.Header[0].Name, sv.Codes[0].Code, sv.Codes[0].Cable, sv.Codes[0].Span = text, text, text, text
	sv.Guesses[0].Taken, sv.Guesses[0].Why, sv.Notices[0].Text = text, text, text
	c := &sv.Conditions
	c.Structure, c.Wind, c.Instrument, c.Crew, c.Notes = text, text, text, text, []string{text}
	c.Listed[0].What, c.Listed[0].Cable = text, text
	a := full(text, tension.OffDesign)
	a.Span, a.SurveyFile, a.Reason, a.NextStep = text, text, "Reason "+text, "Next "+text
	a.Load.Listed = []tension.ListedLoad{{Load: *q(30, 1), Spread: survey.AlongCable, What: text}}
	a.Findings[0].Text, a.Budget[0].Input, a.Drawing.IDs[0], a.Fit.Rejected[0].ID = text, text, text, text
	base := sampleReport()
	return NewReport(base.Tool, base.Printed, Input{Surveys: []*survey.Survey{sv}, CablesFile: text, CablesNotices: []survey.Notice{{Text: text}}}, []tension.Assessment{a})
}

// No control or direction mark from any place of any file reaches a terminal or a page; the letters around it do.
func TestNoInvisibleMarkComesThrough(t *testing.T) {
	for _, mark := range []rune{'\u061c', '\u00ad', '\u200b', '\u200f', '\u202e', '\u2066', '\u2069', '\u2028', '\ufeff', '\ufff9', '\U000e0041', '\u009b', '\x07', '\x1b', '\x00'} {
		r := dress("ab" + string(mark) + "cd")
		for _, format := range []string{"text", "html"} {
			out := printed(t, format, r)
			if strings.ContainsRune(out, mark) {
				i := strings.IndexRune(out, mark)
				t.Errorf("%U comes through to %s: %q", mark, format, out[max(0, i-40):min(len(out), i+20)])
			}
			if !strings.Contains(out, "ab·cd") && !strings.Contains(out, "ab cd") {
				t.Errorf("%U takes the text with it in %s", mark, format)
			}
		}
	}
}

func TestMarkupFromEveryPlaceIsText(t *testing.T) {
	html := printed(t, "html", dress(`</title></style></svg><script>x</script><img src=x onerror=y>"'`))
	for _, bad := range []string{"<script", "<img", "</title></style></svg>"} {
		if strings.Contains(html, bad) {
			t.Errorf("%s comes through", bad)
		}
	}
	wellFormed(t, html)
}

// Names of ordinary words in narrow and wide scripts never make a line of the text longer than it may be.
func TestTextKeepsItsWidthForAnyNames(t *testing.T) {
	for _, name := range []string{strings.Repeat("valley bridge ", 7), strings.Repeat("吊橋 ", 20), "a aa aa aaaaaaaaaaaaa"} {
		keepsItsWidth(t, strings.TrimSpace(name), 80)
	}
	word := rapid.StringOfN(rapid.RuneFrom([]rune("aäZ9-吊橋ケж\u0301")), 1, 9, -1)
	rapid.Check(t, func(t *rapid.T) {
		name := strings.Join(rapid.SliceOfN(word, 1, 14).Draw(t, "words"), " ")
		keepsItsWidth(t, name, rapid.SampledFrom([]int{0, 80, 100}).Draw(t, "width"))
	})
}

func keepsItsWidth(t interface{ Fatalf(string, ...any) }, name string, wide int) {
	var out strings.Builder
	if err := WriteText(&out, dress(name), TextOptions{Width: wide}); err != nil {
		t.Fatalf("%v", err)
	}
	for _, line := range strings.Split(out.String(), "\n") {
		if columns(line) > max(wide, 80) {
			t.Fatalf("%d columns: %s", columns(line), line)
		}
	}
	if !strings.Contains(strings.Join(strings.Fields(out.String()), " "), strings.Join(strings.Fields(clean(name)), " ")) {
		t.Fatalf("the name %q is not in the text", name)
	}
}

// Columns of a terminal, after UAX #11: wide characters take two, combining marks none.
func TestColumns(t *testing.T) {
	for text, want := range map[string]int{"": 0, "abc": 3, "±": 1, "吊橋": 4, "e\u0301": 1, "ﾊ": 1, "Ａ": 2, "…": 1} {
		if got := columns(text); got != want {
			t.Errorf("columns(%q) = %d, want %d", text, got, want)
		}
		if p := padded(text, 9); columns(p) != 9 || strings.TrimRightFunc(p, unicode.IsSpace) != text {
			t.Errorf("padded(%q) = %q", text, p)
		}
	}
}
