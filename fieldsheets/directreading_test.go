package fieldsheets

import (
	"encoding/csv"
	"strings"
	"testing"

	"tautbook/survey"
	"tautbook/tension"
)

// read is an invented assessment with a direct reading that is far from what the shape gives with the load on record.
func read(v tension.Verdict, off float64) tension.Assessment {
	a := full("invented", v)
	length := 0.4
	a.Direct = &tension.Direct{Of: "tension at A", How: "load cell", HorizontalTension: *q(30900, 250), Ratio: q(1.439, 0.021), LoadFactor: *q(1.80, 0.03),
		Load: *q(68.2, 1.1), OffRecord: off, OffLength: &length}
	return a
}

// The sheet does not know whether the shape or the reading decided, so its lines for the owner must not quote the shape's
// ratio or probability as if that had.
func TestLinesForTheOwnerLeaveOpenWhatDecided(t *testing.T) {
	for _, v := range verdicts {
		for _, record := range []survey.LoadStatus{survey.LoadsNotChecked, survey.LoadsAsFiled} {
			a := read(v, 0.5)
			a.Load.Record = record
			line := ownerLine(&a) + " " + howSure(&a)
			if v != tension.Undecided && strings.ContainsAny(strings.ReplaceAll(line, "95 %", ""), "%") {
				t.Errorf("%s, %s: %s", v, record, line)
			}
			if v == tension.AsDesigned && (record == survey.LoadsNotChecked) != strings.Contains(line, "nobody looked at the loads") {
				t.Errorf("%s, %s: %s", v, record, line)
			}
		}
	}
	a := read(tension.OffDesign, -6.2)
	if line := ownerLine(&a); !strings.Contains(line, "do not fit together") {
		t.Errorf("a reading that contradicts the record reads %q", line)
	}
}

func TestStandingOfReadings(t *testing.T) {
	for _, c := range []struct {
		record              survey.LoadStatus
		excluded, readToo   bool
		wantFirst, wantLast string
	}{
		{survey.LoadsNotChecked, false, false, "open", "open"},
		{survey.LoadsNotChecked, true, false, "open", "EXCLUDED"}, // by the length: the load may have changed as well
		{survey.LoadsAsFiled, true, false, "taken", "EXCLUDED"},
		{survey.LoadsAsFiled, true, true, "open", "EXCLUDED"},
		{survey.LoadsNotChecked, false, true, "open", "open"},
	} {
		a := full("invented", tension.OffDesign)
		if c.readToo {
			a = read(tension.OffDesign, 0.5)
		}
		a.Load.Record, a.Rival.Excluded = c.record, c.excluded
		if got := standing(&a); got[0] != c.wantFirst || got[2] != c.wantLast {
			t.Errorf("%+v: %v", c, got)
		}
	}
}

// What follows from shape and record must say so at the figure: beside a direct reading it may be wrong by a factor.
func TestFiguresFromTheRecordSayThatTheyAre(t *testing.T) {
	a := read(tension.Overload, 6.2)
	for _, g := range groups(&a) {
		for _, r := range g.Rows {
			switch r.Label {
			case "Probabilities", "Use", "Greatest tension", "Horizontal tension H", "Ratio today / expected":
				if !strings.HasSuffix(g.Title, ", if the load is as recorded") {
					t.Errorf("%s stands under %q", r.Label, g.Title)
				}
			}
		}
	}
}

// A direct reading stands in every format with the same figures.
func TestDirectReadingIsPrinted(t *testing.T) {
	r := sampleReport()
	r.Cables = []tension.Assessment{read(tension.Overload, 6.2)}
	for _, format := range []string{"text", "html"} {
		out := strings.ReplaceAll(printed(t, format, r), "\u00a0", " ")
		for _, want := range []string{"30.90 ± 0.50 kN", "1.439 ± 0.042", "180.0 ± 6.0 %", "68.2 ± 2.2 N/m", "tension at A, by load cell", "off by 6.2 u", "off by 0.4 u"} {
			if !strings.Contains(out, want) {
				t.Errorf("%s lacks %q", format, want)
			}
		}
	}
	if !strings.Contains(printed(t, "text", r), "read on it:  30.90 ± 0.50 kN, ratio 1.44") {
		t.Error("the overview does not show the reading")
	}
	if err := validate(t, compiled(t), []byte(printed(t, "json", r))); err != nil {
		t.Error(err)
	}
	rows, err := csv.NewReader(strings.NewReader(printed(t, "csv", r))).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for i, name := range rows[0] {
		if want := map[string]string{"direct_reading_horizontal_tension_N": "30900", "u_direct_reading_horizontal_tension_N": "250", "direct_reading_load_factor": "1.8"}[name]; want != "" && rows[1][i] != want {
			t.Errorf("%s = %q, want %s", name, rows[1][i], want)
		}
	}
	a := read(tension.OffDesign, 6.2)
	a.Expected.LoadRatio = *q(1.8, 0.05)
	if strings.Contains(string(ratioScale(&a).markup("x")), "by the direct reading") {
		t.Error("with listed loads the reading's ratio is to another tension and must not stand on this scale")
	}
}
