package fieldsheets

import (
	"bytes"
	"strings"
	"testing"
	"unicode"

	"pgregory.net/rapid"

	"tautbook/tension"
)

// sampleSheet has every kind of part, with a text in every place that a file can fill.
func sampleSheet(text string) Sheet {
	base := sampleReport()
	a := full("main-left", tension.Slack)
	return Sheet{
		Title: "Sheet: " + text, Facts: []Fact{{"structure", text}, {"cable", "main-left"}}, Lead: []string{"Take up 42 ± 6 mm. " + text},
		Tool: base.Tool, Printed: base.Printed, Large: true, Signers: []string{"Done by", "Checked by"},
		Sections: []Section{
			{Title: "Steps " + text, Text: []string{"Stop at 30.0 kN.", text}, Findings: []tension.Finding{{ID: "x", Level: tension.Look, Text: text}, {ID: "y", Level: tension.Act, Text: "Do this first."}},
				Facts:    []Fact{{"Take-up", "42 ± 6 mm"}, {text, text}},
				Pictures: []Drawn{{"True shape.", trueShape(&a)}, {Caption: "none"}},
				Table: &Table{Caption: "Step by step " + text, Columns: []Column{{Head: "step"}, {Head: "take-up", Right: true}, {Head: "what to do"}, {Head: "as left", Blank: true}},
					Body: [][]string{{"1", "21 mm", "turn both screws by the same amount and look at the sag before the next step", ""}, {"2", "42 mm", text, ""}}, Strong: []int{1}}},
			{Title: "On site", NewPage: true, Ticks: []string{"Tell the owner", text}, Boxes: []string{"Temperature of the cable, °C", text}},
		},
	}
}

func sheetPrinted(t testing.TB, s Sheet) string {
	t.Helper()
	var out bytes.Buffer
	if err := WriteSheetHTML(&out, s); err != nil {
		t.Fatal(err)
	}
	return out.String()
}

func sheetText(t interface{ Fatal(...any) }, s Sheet, o TextOptions) string {
	var out bytes.Buffer
	if err := WriteSheetText(&out, s, o); err != nil {
		t.Fatal(err)
	}
	return out.String()
}

func TestGoldenSheet(t *testing.T) {
	s := sampleSheet("a plain word")
	golden(t, "sheet.txt", sheetText(t, s, TextOptions{}))
	html := sheetPrinted(t, s)
	golden(t, "sheet.html", html)
	wellFormed(t, html)
	var out bytes.Buffer
	if err := WriteSheetPDF(&out, s, Letter); err != nil {
		t.Fatal(err)
	}
	golden(t, "sheet.pdf.text", wordsOfPDF(t, out))
}

// Every word of a sheet stands in all three prints, and every caution does.
func TestSheetsSayTheSame(t *testing.T) {
	s := sampleSheet("wordofthefile")
	var out bytes.Buffer
	if err := WriteSheetPDF(&out, s, A4); err != nil {
		t.Fatal(err)
	}
	flat := func(text string) string {
		return strings.Join(strings.Fields(strings.ReplaceAll(text, "\u00a0", " ")), " ")
	}
	prints := map[string]string{"text": flat(sheetText(t, s, TextOptions{})), "HTML": flat(sheetPrinted(t, s)), "PDF": flat(wordsOfPDF(t, out))}
	for name, p := range prints {
		for _, want := range []string{"Take up 42", "Stop at 30.0 kN.", "Do this first.", "21 mm", "Tell the owner", "Done by", "as left", "licensed engineer"} {
			if !strings.Contains(p, want) {
				t.Errorf("%s lacks %q", name, want)
			}
		}
		if n := strings.Count(p, "wordofthefile"); n < 10 {
			t.Errorf("%s holds the word of the file %d times, expected it in every place", name, n)
		}
	}
}

// Text from files stays text, whatever it is, and no line of the terminal is wider than the page.
func TestHostileTextOnASheet(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		text := rapid.OneOf(rapid.String(), rapid.SampledFrom([]string{"<script>x</script>", "\x1b[31m", "\u202e", strings.Repeat("long ", 90)})).Draw(rt, "text")
		s := sampleSheet(text)
		html := sheetPrinted(t, s)
		if strings.Contains(html, "<script") {
			rt.Fatalf("%q comes through to HTML", text)
		}
		wellFormed(t, html)
		for _, l := range strings.Split(sheetText(rt, s, TextOptions{}), "\n") {
			if strings.ContainsFunc(l, func(r rune) bool { return unicode.In(r, unicode.Cc, unicode.Cf) }) {
				rt.Fatalf("%q comes through to the terminal: %q", text, l)
			}
			if columns(l) > 80 && strings.Contains(strings.TrimSpace(l), " ") && !hasLongWord(l) {
				rt.Fatalf("%d columns: %q", columns(l), l)
			}
		}
	})
	for _, text := range []string{"", "\x00\u202e", strings.Repeat("x", 500), "漢字 שלום"} {
		if err := WriteSheetPDF(&bytes.Buffer{}, sampleSheet(text), A4); err != nil {
			t.Errorf("%q: %v", text, err)
		}
	}
}

func hasLongWord(l string) bool {
	for _, w := range words(l) {
		if columns(w) > 30 {
			return true
		}
	}
	return false
}
