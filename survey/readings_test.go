package survey

import (
	"reflect"
	"strings"
	"testing"
)

func TestReadings(t *testing.T) {
	for _, c := range []struct {
		text string
		want Reading
	}{
		{"w1/2; tension at a; 30.7 +- 0.5 kN; load cell 3", Reading{Cable: "w1", Span: "2", Of: TensionAtA, Value: Quantity{30700, 500}, How: "load cell 3"}},
		{"*; Lift-off at B, lifted 2 +- 0.5 mm; 31 +- 1 %  kN", Reading{}},
		{"w1; Lift-off at B, lifted 2 +- 0.5 mm; 31 kN +- 1 %", Reading{Cable: "w1", Of: LiftOffAtB, Value: Quantity{31000, 310}, Lifted: Quantity{0.002, 0.0005}}},
		{"w1; frequency, mode 3, sideways; 72 +- 1.2 1/min", Reading{Cable: "w1", Of: NaturalFrequency, Value: Quantity{1.2, 0.02}, Mode: 3, Sideways: true}},
		{"w1; frequency, mode 1, bending stiffness 4 +- 1 kN m2, clamped; 1.2 +- 0.02 Hz; phone", Reading{Cable: "w1", Of: NaturalFrequency, Value: Quantity{1.2, 0.02}, Mode: 1,
			Bending: Quantity{4000, 1000}, Clamped: true, How: "phone"}},
		{"w1; wave return 3; 4.2 +- 0.05 s", Reading{Cable: "w1", Of: WaveReturn, Value: Quantity{4.2, 0.05}, Returns: 3}},
		{"w1; sag at mid-span; 1.52 +- 0.02 m; sighted", Reading{Cable: "w1", Of: SagAtMidSpan, Value: Quantity{1.52, 0.02}, How: "sighted"}},
		{"w1; tangent at B, from 1.20 m below A; 1.9 +- 0.02 m", Reading{Cable: "w1", Of: TangentAtB, Below: 1.2, Value: Quantity{1.9, 0.02}}},
	} {
		var conditions Conditions
		err := conditions.Set("reading", c.text)
		if c.want.Of == "" {
			if err == nil {
				t.Errorf("%q was taken", c.text)
			}
			continue
		}
		if err != nil {
			t.Errorf("%q: %v", c.text, err)
			continue
		}
		got := conditions.Readings[0]
		got.Value.Value, got.Value.U = round(got.Value.Value), round(got.Value.U)
		if !reflect.DeepEqual(got, c.want) {
			t.Errorf("%q: %+v, want %+v", c.text, got, c.want)
		}
	}
}

func round(v float64) float64 { return float64(int(v*1e6+0.5)) / 1e6 }

// What was found, what was expected and the mend, for each mistake of a reading.
func TestReadingRefusals(t *testing.T) {
	for _, c := range [][2]string{
		{"w1; frequency; 1.2 +- 0.1 Hz", "frequency, mode 1"},
		{"w1; frequency, mode 0; 1.2 +- 0.1 Hz", "half waves"},
		{"w1; frequency, mode 1, lifted 2 mm; 1.2 +- 0.1 Hz", "only what belongs to it"},
		{"w1; frequency, mode 1; 30 +- 1 kN", "a unit of frequency (Hz, 1/s or 1/min)"},
		{"w1; wave return; 4 +- 1 s", "number of returns"},
		{"w1; wave return 2; 4 s", "4.20 +- 0.05 s"},
		{"w1; lift-off at A, lifted -2 mm; 30 +- 1 kN", "0 or more"},
		{"w1; tangent at B; 1.9 +- 0.02 m", "where the line of sight starts"},
		{"w1; tangent at B, from 1.2 m; 1.9 +- 0.02 m", "from 1.20 m below A"},
		{"w1; tension at C; 30 +- 1 kN", "in the second place what was read"},
	} {
		var conditions Conditions
		err := conditions.Set("reading", c[0])
		if err == nil || !strings.Contains(err.Error(), c[1]) {
			t.Errorf("%q: %v, want it to say %q", c[0], err, c[1])
		}
		if len(conditions.Readings) > 0 {
			t.Errorf("%q was kept", c[0])
		}
	}
	var conditions Conditions
	for i, text := range []string{"w1; tension at A; 30 +- 1 kN; load cell", "w1; tension at A; 30 +- 1 kN; load cell"} {
		if err := conditions.Set("reading", text); (err == nil) != (i == 0) {
			t.Errorf("line %d: %v", i, err)
		}
	}
}
