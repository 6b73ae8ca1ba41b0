package main

import (
	"encoding/json"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"testing"

	"tautbook/survey/register"
	"tautbook/tension"
)

// What the register keeps of a survey is what assess prints of it, with the flags of both at their defaults.
func TestRecordedIsWhatAssessSays(t *testing.T) {
	dir := t.TempDir()
	if err := writeDemo(dir); err != nil {
		t.Fatal(err)
	}
	design, err := os.ReadFile(filepath.Join(dir, "cables.csv"))
	if err != nil {
		t.Fatal(err)
	}
	// a lamp hangs on this wire and nobody told
	cusp := "# structure: Talvessa footbridge\n# date: 2026-06-11\n# temperature: 10 degC\n# accuracy: 1 mm\n# cable: span-wire\nstation,elevation\n"
	for s := 0.0; s <= 30; s++ {
		z := 2.4/4000/2*s*(s-30) - 0.2*math.Min(s/12, (30-s)/18)
		cusp += number(s) + "," + number(z+0.4*s/30+100) + "\n"
	}
	if err := os.WriteFile(filepath.Join(dir, "cusp.csv"), []byte(cusp), 0o644); err != nil {
		t.Fatal(err)
	}
	for _, name := range append(demoSurveys[:len(demoSurveys):len(demoSurveys)], "hand-left-after-a-look.csv", "cusp.csv") {
		path := filepath.Join(dir, name)
		out, errs, code := inProcess(t, "", "assess", "--format", "json", path)
		if code != exitDone {
			t.Fatalf("%s: %s", name, errs)
		}
		var said struct{ Cables []tension.Assessment }
		if err := json.Unmarshal([]byte(out), &said); err != nil {
			t.Fatal(err)
		}
		data, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		j, err := judgeStored(register.File{Name: name, Bytes: data}, &register.File{Name: "cables.csv", Bytes: design}, nil)
		if err != nil {
			t.Fatal(err)
		}
		if len(j.results) != len(said.Cables) {
			t.Fatalf("%s: %d results, assess has %d", name, len(j.results), len(said.Cables))
		}
		for i, r := range j.results {
			a := said.Cables[i]
			want := register.Result{Cable: a.Cable, Verdict: string(a.Verdict), Reason: a.Reason, HorizontalTension: a.HorizontalTension, ReferenceTension: a.AtDesignTemperature, SagMid: &a.Fit.SagMid}
			if a.Expected != nil {
				want.Ratio = a.Expected.Ratio
			}
			if a.UnstressedLength != nil {
				want.UnstressedLength = &a.UnstressedLength.Today
			}
			got := register.Result{Cable: r.Cable, Verdict: r.Verdict, Reason: r.Reason, HorizontalTension: r.HorizontalTension, ReferenceTension: r.ReferenceTension, SagMid: r.SagMid, Ratio: r.Ratio, UnstressedLength: r.UnstressedLength}
			if !reflect.DeepEqual(got, want) {
				t.Errorf("%s: the register would keep %+v, assess says %+v", name, r, a)
			}
		}
	}
}

func number(v float64) string {
	b, err := json.Marshal(v)
	if err != nil {
		panic(err)
	}
	return string(b)
}
