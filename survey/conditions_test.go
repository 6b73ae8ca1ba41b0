package survey

import (
	"math"
	"strings"
	"testing"
	"time"
)

// All conditions at the top of a file, in both decimal marks.
func TestConditions(t *testing.T) {
	const text = `# Structure: Mill bridge
# date: 2026-06-11 10:30
# Cable temperature: 12.5 +- 2 degC
# wind: light, from the west
# load: main/2; 180 +- 10 N/m; along deck; service pipe; two brackets
# load: *; -12 N/m; along cable
# reading: main/2; tension at A; 30.7 +- 0.5 kN; load cell 3
# instrument: total station, 1 second
# accuracy: horizontal 3 mm, vertical 2 mm
# crew: A. Example
# units: m
# note: fog until nine
# weather app: none
# plain words
id;x;y;z;code
1;0;0;10.5;main/2
`
	for _, mark := range []string{".", ","} {
		written := text
		if mark == "," {
			written = strings.NewReplacer("12.5", "12,5", "30.7", "30,7", "0.5 kN", "0,5 kN", "10.5", "10,5").Replace(text)
		}
		sv, err := ReadPoints(strings.NewReader(written), PointOptions{Name: "c.csv"})
		if err != nil {
			t.Fatal(err)
		}
		c := sv.Conditions
		if c.Structure != "Mill bridge" || !c.Date.Equal(time.Date(2026, 6, 11, 10, 30, 0, 0, time.UTC)) || *c.CableTemperature != (Quantity{12.5, 2}) ||
			c.Wind != "light, from the west" || c.Instrument != "total station, 1 second" || c.Crew != "A. Example" || *c.Accuracy != (Accuracy{0.003, 0.002}) {
			t.Errorf("%+v", c)
		}
		if c.Loads != LoadsListed || len(c.Listed) != 2 || c.Listed[0] != (ListedLoad{"main", "2", Quantity{180, 10}, AlongDeck, "service pipe; two brackets"}) ||
			c.Listed[1] != (ListedLoad{"", "", Quantity{-12, 0}, AlongCable, ""}) {
			t.Errorf("loads %+v", c.Listed)
		}
		if len(c.Readings) != 1 || c.Readings[0] != (Reading{Cable: "main", Span: "2", Of: TensionAtA, Value: Quantity{30700, 500}, How: "load cell 3"}) {
			t.Errorf("readings %+v", c.Readings)
		}
		if strings.Join(c.Notes, "|") != "fog until nine|weather app: none" {
			t.Errorf("notes %q", c.Notes)
		}
		if len(sv.Guesses) != map[string]int{".": 2, ",": 3}[mark] {
			t.Errorf("guesses %+v", sv.Guesses)
		}
	}
}

// The same value twice is no contradiction; another one is. A refused value leaves no trace.
func TestConditionsTwice(t *testing.T) {
	for _, c := range []struct{ key, first, second string }{
		{"structure", "a", "b"}, {"date", "2026-06-11", "2026-06-12"}, {"temperature", "12 degC", "13 degC"}, {"wind", "none", "some"},
		{"loads", "as filed", "not checked"}, {"instrument", "a", "b"}, {"accuracy", "3 mm", "4 mm"}, {"crew", "a", "b"},
		{"unit", "m", "ft"}, {"cable", "a", "b"}, {"span", "1", "2"},
	} {
		var v Conditions
		for i, step := range []struct {
			value string
			ok    bool
		}{{"", false}, {c.first, true}, {c.first, true}, {c.second, false}} {
			if err := v.Set(c.key, step.value); (err == nil) != step.ok {
				t.Errorf("%s step %d: %q gives %v", c.key, i, step.value, err)
			}
		}
	}
	for _, key := range []string{"temperature", "date", "accuracy"} {
		var v Conditions
		if v.Set(key, "nonsense") == nil || v.Set(key, map[string]string{"temperature": "12 degC", "date": "2026-06-11", "accuracy": "3 mm"}[key]) != nil {
			t.Errorf("%s: a good value after a refused one is refused", key)
		}
	}
}

// A key by flag is the key in a file, whatever its case and blanks.
func TestConditionKeys(t *testing.T) {
	var c Conditions
	for key, value := range map[string]string{" Temperature ": "12 degC", "UNITS": "ft", "Cable": "w1"} {
		if err := c.Set(key, value); err != nil {
			t.Errorf("%s: %v", key, err)
		}
	}
	if c.CableTemperature == nil || c.unit != "ft" || c.cable != "w1" {
		t.Errorf("%+v", c)
	}
	if err := c.Set("colour", "blue"); err == nil || !strings.Contains(err.Error(), `found "colour", expected structure, date`) {
		t.Errorf("unknown key: %v", err)
	}
}

// Every key that is listed is handled and named in the message for an unknown one.
func TestConditionKeyList(t *testing.T) {
	for key := range conditionKeys {
		var c Conditions
		if err := c.Set(key, "?"); err != nil && strings.Contains(err.Error(), keyList) {
			t.Errorf("%s is not handled", key)
		}
		if !strings.Contains(" "+strings.ReplaceAll(keyList, ",", "")+" ", " "+key+" ") {
			t.Errorf("%s is not named", key)
		}
	}
}

func TestLocalLoads(t *testing.T) {
	var c Conditions
	for _, v := range []string{"main-left; 3.2 +- 0.2 kN; at 12.4 m; signal box", "main-left; unknown; At 20 ft; branch", "*; 40 N/m; along cable; ice"} {
		if err := c.Set("load", v); err != nil {
			t.Fatal(err)
		}
	}
	if c.Loads != LoadsListed || len(c.Local) != 2 || len(c.Listed) != 1 {
		t.Fatalf("%+v", c)
	}
	box, branch := c.Local[0], c.Local[1]
	if box.Cable != "main-left" || box.Station != 12.4 || *box.P != (Quantity{3200, 200}) || box.What != "signal box" {
		t.Errorf("%+v", box)
	}
	if branch.P != nil || math.Abs(branch.Station-6.096) > 1e-12 {
		t.Errorf("%+v", branch)
	}
	for value, part := range map[string]string{
		"main-left; 3.2 kN; at 12.4 m; again":      "one local load at one place",
		"main-left; 3.2 kN; at -2 m; box":          "above 0",
		"main-left; 3.2 kN; at 2 +- 0.1 m; box":    "without +-",
		"main-left; 3.2 kN/m; at 2 m; box":         "force",
		"main-left; 3.2 kN; at half; box":          "number",
		"main-left; 3.2 kN/m; halfway along; stay": "at 12.4 m",
	} {
		if err := c.Set("load", value); err == nil || !strings.Contains(err.Error(), part) {
			t.Errorf("%q: %v, want %q in it", value, err, part)
		}
	}
}
