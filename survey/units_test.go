package survey

import (
	"encoding/csv"
	"maps"
	"math"
	"os"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Unit factors of row G12 of the check values. Source as in the row: NIST SP 811, App. B; US survey foot 1200/3937 m
// (Federal Register 1959, retired 2022); "from memory, arithmetic checked with mpmath".
func TestUnitFactorsOfReference(t *testing.T) {
	f, err := os.Open("testdata/check-values.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) != 2 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	read := func(text string, d Dimension) float64 {
		q, err := ParseQuantity(text, d)
		if err != nil {
			t.Fatal(err)
		}
		return q.Value
	}
	got := map[string]float64{
		"ft_m": read("1 ft", Length), "us_ft_m": read("1 us-ft", Length), "us_over_intl": read("1 us-ft", Length) / read("1 ft", Length),
		"g0": read("1 kg/m", ForcePerLength), "kgf_N": read("1 kgf", Force),
		"lb_kg": read("1 lb/ft", ForcePerLength) * read("1 ft", Length) / read("1 kg/m", ForcePerLength),
		"lbf_N": read("1 lbf", Force), "kip_kN": read("1 kip", Force) / 1e3, "lbf_per_ft_N_per_m": read("1 lbf/ft", ForcePerLength),
		"degF_per_K": 1 / (read("33 degF", Temperature) - read("32 degF", Temperature)),
	}
	seen := 0
	for _, pair := range strings.Split(rows[1][4], ";") {
		key, text, _ := strings.Cut(pair, "=")
		value, spare, _ := strings.Cut(text, "+-")
		want, err1 := strconv.ParseFloat(value, 64)
		tol, err2 := strconv.ParseFloat(spare, 64)
		if err1 != nil || err2 != nil {
			t.Fatalf("%s is %q", key, text)
		}
		v, here := got[key]
		if !here {
			continue // pressures, miles and angles are no inputs
		}
		seen++
		if tol == 0 {
			tol = 4e-16 * want // stated as exact: to the last digit of a float64, two roundings apart
		}
		if key == "degF_per_K" {
			tol = 1e-13 // a difference of temperatures near 273 K
		}
		if !(math.Abs(v-want) <= tol) {
			t.Errorf("%s = %.17g, want %s: %s (%s)", key, v, text, rows[1][5], rows[1][6])
		}
	}
	if seen != len(got) {
		t.Errorf("%d of %d factors are in the row", seen, len(got))
	}
}

// Factors that follow from definitions: NIST SP 811 (2008), app. B; NIST HB 44, app. C; standard gravity CGPM 1901.
func TestQuantities(t *testing.T) {
	for _, c := range []struct {
		text   string
		d      Dimension
		v, u   float64
		source string
	}{
		{"12 +- 2 degC", Temperature, 12, 2, "definition"},
		{"54 +- 3 degF", Temperature, 110.0 / 9, 5.0 / 3, "definition: (54 - 32) 5/9, a difference scales without offset"},
		{"-40 degF", Temperature, -40, 0, "definition"},
		{"32 degF", Temperature, 0, 0, "definition"},
		{"285.15 ± 2 K", Temperature, 12, 2, "definition"},
		{"12 °C ± 2 K", Temperature, 12, 2, "definition: a kelvin and a degree Celsius are one difference"},
		{"12 degC +/- 3.6 degF", Temperature, 12, 2, "definition"},
		{"3 mm", Length, 0.003, 0, "definition"},
		{"10 ft +- 1 in", Length, 3.048, 0.0254, "NIST SP 811"},
		{"3937 US survey feet", Length, 1200, 0, "NIST HB 44, app. C"},
		{"12.5 kN ± 20 N", Force, 12500, 20, "definition"},
		{"1 daN", Force, 10, 0, "definition"},
		{"150 MN", Force, 1.5e8, 0, "definition"},
		{"2 kip ± 1 %", Force, 8896.443230521, 88.96443230521, "NIST SP 811"},
		{"50 N/m ± 2 %", ForcePerLength, 50, 1, "definition"},
		{"5 kg/m", ForcePerLength, 49.03325, 0, "CGPM 1901"},
		{"3.4 lb/ft", ForcePerLength, 3.4 * 0.45359237 * 9.80665 / 0.3048, 0, "NIST SP 811"},
		{"1 kip/ft", ForcePerLength, 14593.902937206365, 0, "NIST SP 811"},
		{"12e-6/degC", PerTemperature, 12e-6, 0, "definition"},
		{"12 1e-6/K ± 0.5 1e-6/K", PerTemperature, 12e-6, 0.5e-6, "definition"},
		{"6.5 ppm/degF", PerTemperature, 11.7e-6, 0, "definition: 6.5 x 9/5"},
		{"10 %", Fraction, 0.1, 0, "definition"},
		{"10 ± 2 %", Fraction, 0.1, 0.02, "definition"},
		{"-30 N/m", ForcePerLength, -30, 0, "definition"},
	} {
		q, err := ParseQuantity(c.text, c.d)
		if err != nil {
			t.Errorf("%s: %v", c.text, err)
			continue
		}
		tol := func(v float64) float64 { return 1e-13 * (math.Abs(v) + 1e-9) }
		if c.d == Temperature {
			tol = func(float64) float64 { return 1e-13 }
		}
		if !(math.Abs(q.Value-c.v) <= tol(c.v)) || !(math.Abs(q.U-c.u) <= tol(c.u)) {
			t.Errorf("%s is %v, want %v +- %v (%s)", c.text, q, c.v, c.u, c.source)
		}
	}
}

// Every spelling of every unit, with one of it in SI; sources as above. Temperatures are given at 50 of the unit.
func TestEveryUnit(t *testing.T) {
	const lbf, ft, usft, g = 4.4482216152605, 0.3048, 0.3048006096012192, 9.80665
	want := map[Dimension]map[float64]string{
		Length:         {1: "m metre metres meter meters", 1e-3: "mm", 1e-2: "cm", 1e3: "km", ft: "ft foot feet ift intlft", 0.0254: "in inch", usft: "us-ft usft ftus sft ussurveyft ussurveyfoot ussurveyfeet"},
		Force:          {1: "n", 10: "dan", 1e3: "kn", 1e6: "mn", lbf: "lbf lb lbs", 1e3 * lbf: "kip kips", g: "kgf"},
		ForcePerLength: {1: "n/m", 10: "dan/m", 1e3: "kn/m n/mm", g: "kg/m kgf/m", g / 1e3: "kg/km", lbf / ft: "lbf/ft lb/ft plf", 1e3 * lbf / ft: "kip/ft klf"},
		Temperature:    {50: "degc c °c", 10: "degf f °f", -223.15: "k"},
		PerTemperature: {1: "1/degc 1/°c 1/k /degc /°c /k", 1e-6: "1e-6/degc 1e-6/°c 1e-6/k 10^-6/degc 10^-6/°c 10^-6/k e-6/degc e-6/°c e-6/k ppm/degc ppm/°c ppm/k",
			1.8: "1/degf 1/°f /degf /°f", 1.8e-6: "1e-6/degf 1e-6/°f 10^-6/degf 10^-6/°f e-6/degf e-6/°f ppm/degf ppm/°f"},
		Bending:  {1: "nm2 nm^2 nm² n*m2", 1e3: "knm2 knm^2 knm²", lbf * ft * ft: "lbfft2 lbfft^2", 1e3 * lbf * ft * ft: "kipft2 kipft^2"},
		Fraction: {0.01: "%", 1: "1"}, Frequency: {1: "hz 1/s", 1.0 / 60: "1/min"}, Duration: {1: "s", 1e-3: "ms"},
	}
	for d, table := range units {
		seen := 0
		for si, names := range want[d] {
			for _, name := range strings.Fields(names) {
				seen++
				one := 1.0
				if d == Temperature {
					one = 50
				}
				u, ok := table[name]
				if got := one*u.factor + u.offset; !ok || math.Abs(got-si) > 1e-14*(math.Abs(si)+math.Abs(u.offset)) {
					t.Errorf("%s %q is %.17g, want %.17g", d, name, got, si)
				}
			}
		}
		if seen != len(table) {
			t.Errorf("%s: %d units tested of %d", d, seen, len(table))
		}
	}
}

// What is no quantity is refused with what was expected.
func TestQuantitiesRefused(t *testing.T) {
	for _, c := range []struct {
		text string
		d    Dimension
		want string
	}{
		{"", Length, `expected a number; write for example "12 mm"`},
		{"12", Temperature, `found "12", expected a unit; write for example "12 degC"`},
		{"12 N", ForcePerLength, `found "12 N", expected a unit of force per length (` + spellings[ForcePerLength] + `)`},
		{"12 mN", Force, `found "12 mN", expected a unit of force (` + spellings[Force] + `)`},
		{"NaN m", Length, `found "NaN m", expected a finite number; write for example "12 mm"`},
		{"1e400 m", Length, `found "1e400 m", expected a finite number; write for example "12 mm"`},
		{"1e308 km", Length, `found "1e308 km", expected a finite number`},
		{"-400 degC", Temperature, `found "-400 degC", expected a temperature above absolute zero`},
		{"12 degC ± 5 %", Temperature, `found "12 degC ± 5 %", expected an uncertainty in degrees; per cent of a temperature depends on where the scale begins`},
		{"12 N ± -1 N", Force, `found "12 N ± -1 N", expected an uncertainty of 0 or more`},
		{"12 N ± warm", Force, `found "12 N ± warm", expected a number after +-`},
		{"± 3 mm", Length, `found "± 3 mm", expected a number; write for example "12 mm"`},
		{"12,5 kN", Force, `found "12,5 kN", expected a number with a decimal point; write a point for the comma`},
		{"1_000 N", Force, `found "1_000 N", expected a number with a decimal point; write it without grouping marks`},
	} {
		_, err := ParseQuantity(c.text, c.d)
		if err == nil || err.Error() != c.want {
			t.Errorf("%q: %v, want %s", c.text, err, c.want)
		}
	}
}

// A value written in any unit and read back is the value: factor and spelling belong together.
func TestUnitsRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		d := rapid.SampledFrom([]Dimension{Length, Force, ForcePerLength, Temperature, PerTemperature, Fraction, Frequency, Duration, Bending}).Draw(t, "dimension")
		name := rapid.SampledFrom(slices.Sorted(maps.Keys(units[d]))).Draw(t, "unit")
		v := rapid.Float64Range(1, 1e6).Draw(t, "value")
		u := rapid.Float64Range(0, 1e3).Draw(t, "u")
		if d == Force && strings.HasPrefix(name, "mn") {
			name = "MN"
		}
		text := strconv.FormatFloat(v, 'g', -1, 64) + " " + name + " +- " + strconv.FormatFloat(u, 'g', -1, 64) + " " + name
		q, err := ParseQuantity(text, d)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		f := units[d][strings.ToLower(name)]
		if want := v*f.factor + f.offset; q.Value != want || q.U != u*f.factor {
			t.Fatalf("%s is %v", text, q)
		}
	})
}
