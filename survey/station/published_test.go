package station

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"
)

// rows are the surveying rows of testdata/check-values.csv, whose columns source and how_known say where each is from.
type checkRow struct {
	in   map[string]string
	want map[string]string
}

func checkRows(t *testing.T) map[string]checkRow {
	t.Helper()
	f, err := os.Open("testdata/check-values.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	records, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	split := func(text string) map[string]string {
		m := map[string]string{}
		for _, pair := range strings.Split(text, ";") {
			k, v, _ := strings.Cut(pair, "=")
			m[k] = v
		}
		return m
	}
	out := map[string]checkRow{}
	for _, r := range records[1:] {
		out[r[0]] = checkRow{split(r[3]), split(r[4])}
	}
	return out
}

func number(t *testing.T, s string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(s, 64)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

// degrees reads d-m-s with an optional leading minus.
func degrees(t *testing.T, s string) float64 {
	t.Helper()
	negative := strings.HasPrefix(s, "-")
	v := 0.0
	for i, p := range strings.Split(strings.TrimPrefix(s, "-"), "-") {
		v += number(t, p) / math.Pow(60, float64(i))
	}
	if negative {
		v = -v
	}
	return v * math.Pi / 180
}

// is holds a figure to an output of a row.
func (c checkRow) is(t *testing.T, key string, got float64) {
	t.Helper()
	value, tol, ok := strings.Cut(c.want[key], "+-")
	if !ok {
		t.Fatalf("no output %s", key)
	}
	if !(math.Abs(got-number(t, value)) <= number(t, tol)) {
		t.Errorf("%s = %.9g, want %s +- %s", key, got, value, tol)
	}
}

const foot = 0.3048

func TestPublishedReductions(t *testing.T) {
	rows := checkRows(t)
	c := rows["G01"]
	for i, va := range strings.Fields(c.in["va_dms"]) {
		hd, dh := Reduce(number(t, strings.Fields(c.in["sd_ft"])[i]), math.Pi/2-degrees(t, va), 1)
		n := strconv.Itoa(i + 1)
		c.is(t, "hd"+n, hd)
		c.is(t, "el"+n, number(t, c.in["elev_ft"])+number(t, c.in["hi_ft"])+dh-number(t, c.in["hr_ft"]))
	}
	c = rows["G05"]
	_, dh := Reduce(number(t, c.in["sd_ft"])*foot, degrees(t, c.in["z_dms"]), 0.14)
	c.is(t, "elev_B_ft", number(t, c.in["elev_ft"])+dh/foot)
	c = rows["G11"]
	_, dh = Reduce(1000, math.Pi/2, 0.13)
	c.is(t, "per_km2", dh)
	_, dh = Reduce(1000, math.Pi/2, 0.14)
	c.is(t, "handbook_km2", dh)
	c = rows["G14"]
	hd, dh := Reduce(number(t, c.in["sd_m"]), degrees(t, c.in["z_dms"]), number(t, c.in["k"]))
	c.is(t, "hd_m", hd)
	c.is(t, "dh_m", dh+number(t, c.in["hi_m"])-number(t, c.in["ht_m"]))
}

func TestPublishedFaces(t *testing.T) {
	c := checkRows(t)["G08"]
	l, r := strings.Fields(c.in["zl_dms"]), strings.Fields(c.in["zr_dms"])
	var readings []Reading
	for i := range l {
		round := strconv.Itoa(i)
		readings = append(readings, Reading{Setup: "S", Target: "P", Round: round, Horizontal: 1, Zenith: degrees(t, l[i]), Slope: 50},
			Reading{Setup: "S", Target: "P", Round: round, Horizontal: 1 + math.Pi, Zenith: degrees(t, r[i]), FaceTwo: true, Slope: 50})
	}
	s, f, err := Average(readings, Instrument{Angle: 1e-5, Distance: 1e-3})
	if err != nil {
		t.Fatal(err)
	}
	const second = math.Pi / 180 / 3600
	c.is(t, "mean_sec", s[0].Zenith/second)
	c.is(t, "index_sec", -f.Index/second) // the row gives the correction, which is the error with the other sign
}

func TestPublishedPrismConstant(t *testing.T) {
	c := checkRows(t)["G15"]
	read := number(t, c.in["sd_m"])
	s, _, err := Average([]Reading{{Setup: "S", Target: "P", Horizontal: 1, Zenith: degrees(t, c.in["z_dms"]), Slope: read, PrismConstant: number(t, c.in["prism_mm"]) / 1000}}, Instrument{Angle: 1e-5, Distance: 1e-3})
	if err != nil {
		t.Fatal(err)
	}
	c.is(t, "sd_true_m", s[0].Slope)
	hd, dh := Reduce(read, s[0].Zenith, 1)
	hd2, dh2 := Reduce(s[0].Slope, s[0].Zenith, 1)
	c.is(t, "hd_error_m", hd-hd2)
	c.is(t, "dh_error_m", dh-dh2)
}
