package fieldsheets

import (
	"bytes"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/ledongthuc/pdf"

	"tautbook/tension"
)

// pdfText is the text of a PDF as it was laid on paper, page by page, one line a line; read by a library that is not the one that
// wrote it. That library garbles characters above U+00FF: TestLettersOfThePDF looks at those.
func pdfText(t testing.TB, r Report, size Paper) string {
	t.Helper()
	var out bytes.Buffer
	if err := WritePDF(&out, r, size); err != nil {
		t.Fatal(err)
	}
	return wordsOfPDF(t, out)
}

func wordsOfPDF(t testing.TB, out bytes.Buffer) string {
	t.Helper()
	doc, err := pdf.NewReader(bytes.NewReader(out.Bytes()), int64(out.Len()))
	if err != nil {
		t.Fatal(err)
	}
	var text strings.Builder
	for i := range doc.NumPage() {
		x, y := -1.0, -1.0
		for _, c := range doc.Page(i + 1).Content().Text {
			switch {
			case c.Y != y || c.X < x:
				text.WriteByte('\n')
			case c.X > x+6: // another cell
				text.WriteString("  ")
			}
			x, y = c.X+c.W, c.Y
			text.WriteString(c.S)
		}
		fmt.Fprintf(&text, "\n-- end of page %d --\n", i+1)
	}
	return text.String()
}

func TestGoldenPDF(t *testing.T) {
	golden(t, "summary.pdf.text", pdfText(t, sampleReport(), A4))
}

// The same report gives the same bytes; paper of another size holds the same words.
func TestPDFIsTheSameTwice(t *testing.T) {
	var a, b bytes.Buffer
	for _, w := range []*bytes.Buffer{&a, &b} {
		if err := WritePDF(w, sampleReport(), A4); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(a.Bytes(), b.Bytes()) {
		t.Error("two PDFs of one report differ")
	}
	if err := WritePDF(&a, sampleReport(), "A5"); err == nil {
		t.Error("a sheet that is not on offer was taken")
	}
	words := func(s string) []string {
		return strings.Fields(regexp.MustCompile(`page \d+ of \d+|, continued|-- end of page .*`).ReplaceAllString(s, ""))
	}
	count := func(list []string) map[string]int {
		m := map[string]int{}
		for _, w := range list {
			m[w]++
		}
		return m
	}
	letter := count(words(pdfText(t, sampleReport(), Letter)))
	for w := range count(words(pdfText(t, sampleReport(), A4))) {
		if letter[w] == 0 {
			t.Errorf("%q is on A4 and not on Letter", w)
		}
	}
}

// Every figure of the tables stands in the PDF as it does in text and HTML.
func TestFiguresAreTheSameInThePDF(t *testing.T) {
	r := sampleReport()
	squeeze := strings.NewReplacer(" ", "", "\u00a0", "", "\n", "")
	got := squeeze.Replace(pdfText(t, r, A4))
	figures := 0
	for i := range r.Cables {
		for _, g := range groups(&r.Cables[i]) {
			for _, row := range g.Rows {
				for _, f := range regexp.MustCompile(`[−+-]?[0-9][0-9.]* ± [0-9.]+`).FindAllString(row.Value, -1) {
					figures++
					if !strings.Contains(got, squeeze.Replace(f)) {
						t.Errorf("%s: %q is not in the PDF", row.Label, f)
					}
				}
			}
		}
	}
	if figures < 40 {
		t.Fatalf("only %d figures compared", figures)
	}
}

// Names in many letters are shown and can be selected; those that the font does not have stand as a box, and the sheet says which.
// Read by pdftotext, which .ci/run installs.
func TestLettersOfThePDF(t *testing.T) {
	reader, err := exec.LookPath("pdftotext")
	if err != nil {
		t.Skip("pdftotext (package poppler-utils) is not installed")
	}
	selected := func(r Report) string {
		path := filepath.Join(t.TempDir(), "summary.pdf")
		f, err := os.Create(path)
		if err != nil {
			t.Fatal(err)
		}
		if err := errors.Join(WritePDF(f, r, A4), f.Close()); err != nil {
			t.Fatal(err)
		}
		text, err := exec.Command(reader, "-layout", path, "-").Output()
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	r := sampleReport()
	r.Cables[0].Cable = "Čáp-Ωμέγα-Кабель-橋"
	got := selected(r)
	for _, part := range []string{"Čáp-Ωμέγα-Кабель-□", "U+6A4B", "measured − fitted [mm]", "•", "← slack below 0.90"} {
		if !strings.Contains(got, part) {
			t.Errorf("%q cannot be selected in the PDF", part)
		}
	}
	if strings.Contains(selected(sampleReport()), "Characters that the font") {
		t.Error("a message on missing characters without any")
	}
}

// Hostile text from files prints and stays inside the paper.
func TestHostileTextInThePDF(t *testing.T) {
	for _, text := range []string{"<script>alert(1)</script>", "=1+1", "\u202eabc", strings.Repeat("x", 500), strings.Repeat("wide words ", 60), "", "(\\)%\n", "\x00\xff"} {
		r := dress(text)
		got := pdfText(t, r, Letter)
		if len(got) < 500 {
			t.Errorf("%q: hardly any text in the PDF", text)
		}
		if strings.ContainsAny(got, "\u202e\x00") {
			t.Errorf("%q: an invisible mark came through", text)
		}
	}
}

// A summary of no cable and of many prints.
func TestPDFOfNoneAndMany(t *testing.T) {
	r := sampleReport()
	r.Cables = nil
	if !strings.Contains(pdfText(t, r, A4), "No cable was assessed.") {
		t.Error("a summary of no cable does not say so")
	}
	for range 30 {
		r.Cables = append(r.Cables, full("main-left", tension.Slack), bare("wire", tension.NoDesign))
	}
	if got := strings.Count(pdfText(t, r, A4), "SLACK"); got != 60 { // first page and section
		t.Errorf("%d verdicts, want 60", got)
	}
}

func BenchmarkPDF(b *testing.B) {
	r := sampleReport()
	for len(r.Cables) < 10 {
		r.Cables = append(r.Cables, full("main-left", tension.Slack))
	}
	for b.Loop() {
		var out bytes.Buffer
		if err := WritePDF(&out, r, A4); err != nil {
			b.Fatal(err)
		}
	}
}
