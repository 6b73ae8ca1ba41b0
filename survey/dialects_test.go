package survey

import (
	"bytes"
	"compress/gzip"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"golang.org/x/text/encoding/charmap"
	"golang.org/x/text/encoding/unicode"
)

// writing is one way to write a survey down.
type writing struct {
	separator, encoding, lineEnd, unit string
	mark                               byte
	header                             int    // of headerSpellings; -1 none
	unitBy                             string // bracket, flag or comment
	quoted, comments, extra, packed    bool
}

// headerSpellings name the columns in different orders; F is the unit. The letters give the order for a headerless file.
var headerSpellings = []struct{ names, order string }{
	{"id,easting,northing,elevation,code", "PENZD"},
	{"Point No.,Northing,Easting,Elev,Desc", "PNEZD"},
	{"PT,X,Y,Z,CODE", "PENZD"},
	{"Pkt,Rechtswert,Hochwert,Höhe,Code", "PENZD"},
	{"Height,North,East,Point_ID,Description", "ZNEPD"},
	{"D,H,N,E,P-", "DZNE-"},
}

var unitFactors = map[string]float64{"m": 1, "mm": 1e-3, "cm": 1e-2, "ft": 0.3048, "us-ft": 1200.0 / 3937}

// writtenPoints is the invented survey that every writing holds: two supports, eleven points, a control mark.
func writtenPoints() (out []Point) {
	for i := range 14 {
		s := float64(i) * 9.123
		p := Point{ID: "p" + strconv.Itoa(i+1), E: 412.25 + 0.6*s, N: -87.5 + 0.8*s, Z: 31.125 + 0.002*(s-55)*(s-55), Code: "câble-1"}
		switch i {
		case 0:
			p.Code = "câble-1/A"
		case 12:
			p.Code = "câble-1/B"
		case 13:
			p.Code = "BM"
		}
		out = append(out, p)
	}
	return out
}

func (w writing) number(metres float64) string {
	text := strconv.FormatFloat(metres/unitFactors[w.unit], 'f', -1, 64)
	return strings.ReplaceAll(text, ".", string(rune(w.mark)))
}

// bytes is the survey as a file.
func (w writing) bytes(t *testing.T) []byte {
	var b strings.Builder
	line := func(cells []string) {
		if w.extra {
			cells = append(cells, "x"+cells[0])
		}
		if w.quoted {
			for i := range cells {
				cells[i] = `"` + cells[i] + `"`
			}
		}
		b.WriteString(strings.Join(cells, w.separator) + w.lineEnd)
	}
	comment := func(text string) { b.WriteString("# " + text + w.lineEnd) }
	if w.comments {
		comment("crew: câblerie")
		b.WriteString(w.lineEnd)
	}
	if w.unitBy == "comment" {
		comment("unit: " + w.unit)
	}
	spelling := headerSpellings[max(w.header, 0)]
	if w.header >= 0 {
		names := strings.Split(spelling.names, ",")
		for i, c := range spelling.order {
			if w.unitBy == "bracket" && strings.ContainsRune("ENZ", c) {
				names[i] += []string{"[" + w.unit + "]", "(" + w.unit + ")"}[i%2]
			}
			if w.separator == "   " {
				names[i] = strings.ReplaceAll(names[i], " ", "")
			}
		}
		line(names)
	}
	for i, p := range writtenPoints() {
		cells := map[rune]string{'P': p.ID, 'E': w.number(p.E), 'N': w.number(p.N), 'Z': w.number(p.Z), 'D': p.Code, '-': "7"}
		var row []string
		for _, c := range spelling.order {
			row = append(row, cells[c])
		}
		line(row)
		if w.comments && i%3 == 0 {
			comment("looked at twice")
			b.WriteString(w.lineEnd)
		}
	}
	return w.encoded(t, b.String())
}

func (w writing) encoded(t *testing.T, text string) []byte {
	var out []byte
	var err error
	switch w.encoding {
	case "utf-8":
		out = []byte(text)
	case "utf-8 with mark":
		out = append([]byte("\xef\xbb\xbf"), text...)
	case "utf-16le":
		out, err = unicode.UTF16(unicode.LittleEndian, unicode.UseBOM).NewEncoder().Bytes([]byte(text))
	case "utf-16be":
		out, err = unicode.UTF16(unicode.BigEndian, unicode.UseBOM).NewEncoder().Bytes([]byte(text))
	case "windows-1252":
		out, err = charmap.Windows1252.NewEncoder().Bytes([]byte(text))
	}
	if err != nil {
		t.Fatal(err)
	}
	if w.packed {
		var z bytes.Buffer
		g := gzip.NewWriter(&z)
		g.Write(out)
		g.Close()
		out = z.Bytes()
	}
	return out
}

func (w writing) options() PointOptions {
	o := PointOptions{Name: "written.csv"}
	if w.mark == ',' && w.separator == "," {
		o.Decimal = "comma"
	}
	if w.unitBy == "flag" {
		o.Unit = w.unit
	}
	if w.header < 0 {
		o.Order = headerSpellings[0].order
		if w.extra {
			o.Order += "-"
		}
	}
	return o
}

var (
	separators = []string{",", ";", "\t", "   "}
	encodings  = []string{"utf-8", "utf-8 with mark", "utf-16le", "utf-16be", "windows-1252"}
	lineEnds   = []string{"\n", "\r\n", "\r"}
	unitNames  = []string{"m", "mm", "cm", "ft", "us-ft"}
	unitBys    = []string{"bracket", "flag", "comment"}
)

// writings are all pairs of separator, mark, encoding and line end, all pairs of header and unit, and some seeded mixtures of everything.
func writings() (out []writing) {
	base := writing{separator: ",", mark: '.', encoding: "utf-8", lineEnd: "\n", unit: "m", unitBy: "bracket"}
	for i, sep := range separators {
		for _, mark := range []byte{'.', ','} {
			for j, enc := range encodings {
				w := base
				w.separator, w.mark, w.encoding, w.lineEnd = sep, mark, enc, lineEnds[(i+j)%3]
				if sep == "," && mark == ',' {
					w.quoted = true // taken only with --decimal comma
				}
				out = append(out, w)
			}
		}
	}
	for h := -1; h < len(headerSpellings); h++ {
		for _, u := range unitNames {
			w := base
			w.header, w.unit = h, u
			if h < 0 {
				w.unitBy = "flag"
			}
			out = append(out, w)
		}
	}
	rng := rand.New(rand.NewPCG(1, 1))
	pick := func(from []string) string { return from[rng.IntN(len(from))] }
	for range 300 {
		w := writing{separator: pick(separators), encoding: pick(encodings), lineEnd: pick(lineEnds), unit: pick(unitNames), unitBy: pick(unitBys),
			mark: ".,"[rng.IntN(2)], header: rng.IntN(len(headerSpellings)+1) - 1, comments: rng.IntN(2) == 0, extra: rng.IntN(2) == 0, packed: rng.IntN(5) == 0}
		if w.separator == "," {
			w.mark = '.'
		}
		w.quoted = w.separator != "   " && rng.IntN(2) == 0
		if w.header < 0 && w.unitBy == "bracket" {
			w.unitBy = "flag"
		}
		out = append(out, w)
	}
	return out
}

// One survey, however it is written, is the same points: coordinates within 1e-9 m, everything else to the letter.
func TestOneSurveyManyWritings(t *testing.T) {
	ways := writings()
	if len(ways) < 300 {
		t.Fatalf("%d ways", len(ways))
	}
	want := writtenPoints()
	for i, w := range ways {
		sv, err := ReadPoints(bytes.NewReader(w.bytes(t)), w.options())
		if err != nil {
			t.Errorf("%d %+v: %v", i, w, err)
			continue
		}
		if len(sv.Spans) != 1 || len(sv.Spans[0].Points) != 11 || sv.Spans[0].A == nil || sv.Spans[0].B == nil || len(sv.Control) != 1 {
			t.Errorf("%d %+v: sorted into %+v, control %d", i, w, sv.Codes, len(sv.Control))
			continue
		}
		got := append([]Point{*sv.Spans[0].A}, sv.Spans[0].Points...)
		got = append(append(got, *sv.Spans[0].B), sv.Control...)
		noIDs := w.header == 5
		for k, p := range got {
			q := want[k]
			if !noIDs && p.ID != q.ID || p.Code != q.Code || math.Abs(p.E-q.E) > 1e-9 || math.Abs(p.N-q.N) > 1e-9 || math.Abs(p.Z-q.Z) > 1e-9 {
				t.Errorf("%d %+v: point %+v, want %+v", i, w, p, q)
			}
		}
		if sv.PointsRead != len(want) {
			t.Errorf("%d: %d rows read, want %d", i, sv.PointsRead, len(want))
		}
	}
	t.Logf("%d ways", len(ways))
}

// Every known column name leads to its field, whatever its case and with a unit behind it.
func TestHeaderSynonyms(t *testing.T) {
	place := map[field]int{fieldID: 0, fieldEasting: 1, fieldNorthing: 2, fieldElevation: 3, fieldCode: 4}
	for f, names := range synonyms {
		for _, name := range names {
			header := []string{"id", "easting", "northing", "elevation", "code"}
			row := "a,1,2,3,w1"
			if f == fieldStation {
				header, row, place[f] = []string{"id", "", "elevation"}, "a,1,3", 1
			}
			header[place[f]] = strings.ToUpper(name)
			if f != fieldID && f != fieldCode {
				header[place[f]] += " [mm]"
			}
			p, err := NewPointReader(strings.NewReader(strings.Join(header, ",")+"\n"+row+"\n"), PointOptions{Name: "h.csv"})
			if err != nil {
				t.Errorf("%s: %v", name, err)
				continue
			}
			if got := p.Header()[place[f]].Field; got != fieldNames[f] {
				t.Errorf("%s is %s, want %s", name, got, fieldNames[f])
			}
		}
	}
	for _, prefix := range uPrefixes {
		text := fmt.Sprintf("x,y,z,%sx,%s_y,%s.z\n1,2,3,0.1,0.2,0.3\n", prefix, prefix, prefix)
		p, err := NewPointReader(strings.NewReader(text), PointOptions{Name: "u.csv"})
		if err != nil {
			t.Errorf("%s: %v", prefix, err)
			continue
		}
		pt, err := p.Next()
		if err != nil || !pt.HasCov || math.Abs(pt.Cov.EE-0.01) > 1e-15 || math.Abs(pt.Cov.NN-0.04) > 1e-15 || math.Abs(pt.Cov.ZZ-0.09) > 1e-15 {
			t.Errorf("%s: %+v, %v", prefix, pt, err)
		}
	}
}

// Columns may have different units, and a standard deviation its own.
func TestMixedUnitsByColumn(t *testing.T) {
	sv, err := ReadPoints(strings.NewReader("easting [ft],northing [us-ft],elevation (mm),se [mm],sn [mm],sz [cm],note\n100,3937,2500,3,4,0.5,blue\n"), PointOptions{Name: "m.csv"})
	if err != nil {
		t.Fatal(err)
	}
	p := sv.Spans[0].Points[0]
	if math.Abs(p.E-30.48) > 1e-12 || math.Abs(p.N-1200) > 1e-12 || p.Z != 2.5 || math.Abs(p.Cov.EE-9e-6) > 1e-18 || math.Abs(p.Cov.NN-16e-6) > 1e-18 || math.Abs(p.Cov.ZZ-25e-6) > 1e-18 {
		t.Errorf("point %+v", p)
	}
	if last := sv.Header[6]; last.Field != "not used" || last.Name != "note" {
		t.Errorf("the last column is %+v, want not used", last)
	}
}

// Two columns are stations and elevations: by header, by order, or guessed and told.
func TestFlatSurvey(t *testing.T) {
	for _, c := range []struct {
		text    string
		o       PointOptions
		guesses string
	}{
		{"chainage,elevation [m]\n0,10\n10,9.5\n", PointOptions{Unit: "m"}, "separator, cable"},
		{"0;10\n10;9,5\n", PointOptions{}, "separator, decimal mark, columns, unit, cable"},
		{"station [m],elevation [m],u_z [mm]\n0,10,3\n10,9.5,3\n", PointOptions{}, "separator, accuracy of the station, cable"},
		{"station [m],elevation [m],u_z [mm],u_station [mm]\n0,10,3,3\n10,9.5,3,3\n", PointOptions{}, "separator, cable"},
		{"10,0\n9.5,10\n", PointOptions{Order: "ZS", Unit: "m"}, "separator, cable"},
	} {
		c.o.Name = "flat.csv"
		sv, err := ReadPoints(strings.NewReader(c.text), c.o)
		if err != nil {
			t.Error(err)
			continue
		}
		if p := sv.Spans[0].Points[1]; !sv.Flat || p.E != 10 || p.N != 0 || p.Z != 9.5 {
			t.Errorf("%q: flat %v, %+v", c.text, sv.Flat, p)
		}
		var whats []string
		for _, g := range sv.Guesses {
			whats = append(whats, g.What)
		}
		if got := strings.Join(whats, ", "); got != c.guesses {
			t.Errorf("%q: guesses %s, want %s", c.text, got, c.guesses)
		}
	}
}
