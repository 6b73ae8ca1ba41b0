package fieldsheets

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"encoding/xml"
	"io"
	"math"
	"os"
	"regexp"
	"strconv"
	"strings"
	"testing"
	"unicode/utf8"

	"tautbook/tension"
)

var printers = map[string]func(io.Writer, Report) error{
	"text": func(w io.Writer, r Report) error { return WriteText(w, r, TextOptions{}) },
	"json": WriteJSON, "csv": WriteCSV, "html": WriteHTML,
}

func printed(t *testing.T, format string, r Report) string {
	t.Helper()
	var out bytes.Buffer
	if err := printers[format](&out, r); err != nil {
		t.Fatalf("%s: %v", format, err)
	}
	return out.String()
}

func golden(t *testing.T, name, got string) {
	t.Helper()
	path := "testdata/" + name
	if *update {
		if err := os.MkdirAll("testdata", 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s differs from the golden file; -update rewrites it. First difference near %q", name, firstDifference(got, string(want)))
	}
}

func firstDifference(a, b string) string {
	i := 0
	for i < len(a) && i < len(b) && a[i] == b[i] {
		i++
	}
	return a[max(0, i-30):min(len(a), i+60)]
}

func TestGoldenSheets(t *testing.T) {
	for format := range printers {
		golden(t, "summary."+format, printed(t, format, sampleReport()))
	}
	var out bytes.Buffer
	if err := WriteUnderstanding(&out, []SurveyFile{NewSurveyFile(sampleSurvey())}, SpanCounts(sampleSurvey(), nil), TextOptions{}); err != nil {
		t.Fatal(err)
	}
	golden(t, "understanding.text", out.String())
}

func TestPrintingTwiceGivesTheSameAndChangesNothing(t *testing.T) {
	r := sampleReport()
	before := printed(t, "json", r)
	for format := range printers {
		first := printed(t, format, r)
		if second := printed(t, format, r); first != second {
			t.Errorf("%s differs from print to print", format)
		}
	}
	if printed(t, "json", r) != before {
		t.Error("a printer changed the report")
	}
}

// The same figures stand on text, JSON, CSV and HTML.
func TestFiguresAgree(t *testing.T) {
	r := sampleReport()
	var doc struct {
		Cables []struct {
			Cable string `json:"cable"`
			H     *struct {
				Value float64 `json:"value"`
				U     float64 `json:"u"`
			} `json:"horizontal_tension_N"`
		} `json:"cables"`
	}
	if err := json.Unmarshal([]byte(printed(t, "json", r)), &doc); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(strings.NewReader(printed(t, "csv", r))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	column := map[string]int{}
	for i, c := range rows[0] {
		column[c] = i
	}
	text, html := printed(t, "text", r), strings.ReplaceAll(printed(t, "html", r), "\u00a0", " ")
	if len(doc.Cables) != len(r.Cables) || len(rows) != len(r.Cables)+1 {
		t.Fatalf("%d cables in JSON, %d lines in CSV", len(doc.Cables), len(rows))
	}
	figures := 0
	for i, c := range doc.Cables {
		cell := rows[i+1][column["horizontal_tension_N"]]
		if c.H == nil {
			if cell != "" {
				t.Errorf("%s: CSV %q, JSON null", c.Cable, cell)
			}
			continue
		}
		v, err := strconv.ParseFloat(cell, 64)
		u, err2 := strconv.ParseFloat(rows[i+1][column["u_horizontal_tension_N"]], 64)
		if err != nil || err2 != nil || v != c.H.Value || u != c.H.U {
			t.Errorf("%s: CSV %s, JSON %g", c.Cable, cell, c.H.Value)
		}
		shown := tension.ForceScale(v).Figure(tension.Quantity{Value: v, U: u})
		if strings.Count(text, shown) < 2 || !strings.Contains(html, shown) {
			t.Errorf("%s: %q is missing in text or HTML", c.Cable, shown)
		}
		figures++
	}
	if figures != 4 {
		t.Errorf("%d tensions compared, want 4", figures)
	}
}

func TestTextKeepsToEightyColumns(t *testing.T) {
	for i, line := range strings.Split(printed(t, "text", sampleReport()), "\n") {
		if n := utf8.RuneCountInString(line); n > 80 {
			t.Errorf("line %d has %d columns: %s", i+1, n, line)
		}
		if strings.Contains(line, "\x1b") {
			t.Errorf("line %d has an escape code", i+1)
		}
	}
	var out bytes.Buffer
	if err := WriteText(&out, sampleReport(), TextOptions{Color: true}); err != nil {
		t.Fatal(err)
	}
	if plain := regexp.MustCompile("\x1b\\[[0-9;]*m").ReplaceAllString(out.String(), ""); plain != printed(t, "text", sampleReport()) {
		t.Error("colour changes more than colour")
	}
}

// What is absent is said in words: no NaN, no infinity, no empty figure.
func TestAbsentFiguresAreWords(t *testing.T) {
	for format := range printers {
		out := printed(t, format, sampleReport())
		for _, bad := range []string{"NaN", "Inf", "<nil>", "%!", "<td></td></tr>\n</tbody></table>\n<table>"} {
			if strings.Contains(out, bad) {
				t.Errorf("%s contains %s", format, bad)
			}
		}
	}
	r := sampleReport()
	r.Cables[0].Fit.RMS = math.NaN()
	for format, write := range printers {
		if err := write(io.Discard, r); err == nil || !strings.Contains(err.Error(), "cables[0].fit.rms_m") {
			t.Errorf("NaN in %s: %v", format, err)
		}
	}
}

// Text from files stays harmless and legible wherever it is printed.
func TestHostileText(t *testing.T) {
	hostile := []string{`<script>alert(1)</script>`, `"><img src=x onerror=alert(1)>`, `=HYPERLINK("http://x")`, "+1+1", "-2", "@SUM(A1)", "\u202egnp.exe", "a\x1b[31mb\r\nc\x00", strings.Repeat("long", 125), "]]>--><!--"}
	for _, h := range hostile {
		r := sampleReport()
		r.Visit.Structure = h
		for i := range r.Cables {
			r.Cables[i].Cable = h
			r.Cables[i].Findings = append(r.Cables[i].Findings, tension.Finding{ID: "x", Level: tension.Look, Text: h})
		}
		r.Survey.Files[0].File, r.Survey.Files[0].Codes[0].Code, r.Survey.Files[0].Conditions.Notes = h, h, []string{h}
		html := printed(t, "html", r)
		if strings.Contains(html, "<script") || strings.Contains(html, "<img") || strings.Contains(html, "\u202e") {
			t.Errorf("%q comes through to HTML", h)
		}
		wellFormed(t, html)
		for _, line := range strings.Split(printed(t, "text", r), "\n") {
			if strings.ContainsAny(line, "\x1b\r\x00\u202e") {
				t.Errorf("%q comes through to the terminal: %q", h, line)
			}
		}
		rows, err := csv.NewReader(strings.NewReader(printed(t, "csv", r))).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		if c := rows[1][1]; c != "" && strings.ContainsAny(c[:1], "=+-@") {
			t.Errorf("%q is a formula in CSV: %q", h, c)
		}
	}
}

// wellFormed checks that every tag is closed; void elements of HTML apart.
func wellFormed(t *testing.T, html string) {
	t.Helper()
	html = regexp.MustCompile(`<meta [^>]*>`).ReplaceAllString(strings.TrimPrefix(html, "<!doctype html>"), "")
	d := xml.NewDecoder(strings.NewReader(html))
	d.Entity = xml.HTMLEntity
	for {
		if _, err := d.Token(); err == io.EOF {
			return
		} else if err != nil {
			t.Fatalf("not well formed: %v", err)
		}
	}
}

func TestHTMLStandsAlone(t *testing.T) {
	html := printed(t, "html", sampleReport())
	wellFormed(t, html)
	for _, bad := range []string{"http:", "https:", "<script", "<link", "@import", "url("} {
		if strings.Contains(html, bad) {
			t.Errorf("the page fetches or runs something: %s", bad)
		}
	}
	for _, c := range cautions {
		if !strings.Contains(html, strings.ReplaceAll(c, "'", "&#39;")) {
			t.Errorf("caution missing: %s", c)
		}
	}
}

func TestEmptyReportIsValid(t *testing.T) {
	r := NewReport(Tool{Name: "tautbook", Version: "test"}, sampleReport().Printed, Input{}, nil)
	for format := range printers {
		printed(t, format, r)
	}
	if err := validate(t, compiled(t), []byte(printed(t, "json", r))); err != nil {
		t.Error(err)
	}
	if !strings.Contains(printed(t, "json", r), `"cables": []`) || strings.Count(printed(t, "csv", r), "\n") != 1 {
		t.Error("an empty report must print [] and a header")
	}
}
