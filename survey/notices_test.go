package survey

import (
	"strings"
	"testing"
)

// What does not stop the work but deserves a look is said; each case is one odd file and a part of what is said of it.
func TestNotices(t *testing.T) {
	span := Exact(100)
	known := []Design{{Cable: "main", SpanLength: &span}, {Cable: "hand", Span: "1"}, {Cable: "hand", Span: "2"}}
	const chord = "x,y,z,code\n0,0,5,main A\n%,0,5,main B\n40,0,3,main\n50,0,3,main\n"
	for _, c := range []struct {
		name, text string
		o          PointOptions
		want       string
	}{
		{"misspelt condition", "# temprature: 12 degC\nx,y,z\n1,2,3\n", PointOptions{}, `"temprature: 12 degC" is kept as a note and counts nowhere: did you mean "temperature:"?`},
		{"other key", "# weather app: none\nx,y,z\n1,2,3\n", PointOptions{}, `"weather app: none" is no condition that is known: kept as a note`},
		{"unit by flag and file", "# unit: m\nx,y,z\n1,2,3\n", PointOptions{Unit: "ft"}, `--unit ft replaces the unit m that the file names`},
		{"unit not used", "x [m],y [m],z [m]\n1,2,3\n", PointOptions{Unit: "ft"}, `every column has its unit in the header: unit ft is not used`},
		{"cable by flag and file", "# cable: a\nx,y,z\n1,2,3\n", PointOptions{Cable: "b"}, `--cable b replaces the cable a that the file names`},
		{"order beside header", "x,y,z\n1,2,3\n", PointOptions{Order: "NEZ"}, `the file has a header: --order is not used`},
		{"header not known", "a,b,c\n1,2,3\n", PointOptions{Order: "NEZ"}, `the first row "a, b, c" is no header that is known: it is passed over and --order counts`},
		{"unknown code", "x,y,z,code\n1,2,3,man\n2,2,3,man\n3,2,3,main\n", PointOptions{Known: known}, `code "man" is not in the cables file: its points (2) are set aside. Nearest id: "main"; --code "man=main" says what it is`},
		{"idle rule", "x,y,z,code\n1,2,3,main\n", PointOptions{Codes: []CodeRule{{Code: "zz", Role: Ground}}}, `no point has the code "zz" of --code`},
		{"rule outside the cables file", "x,y,z,code\n1,2,3,q\n", PointOptions{Known: known, Codes: []CodeRule{{Code: "q", Role: OnCable, Cable: "guy"}}}, `--code names "guy", which is not in the cables file`},
		{"other cable under --cable", "x,y,z,code\n1,2,3,hand/1\n", PointOptions{Known: known, Cable: "main"}, `code "hand/1" is another cable in the cables file`},
		{"no code", "x,y,z,code\n1,2,3,main\n2,2,3,\n", PointOptions{Known: known}, `points without a code, set aside: 1`},
		{"repeated rows", "id,x,y,z\n1,1,2,3\n2,2,2,3\n1,1,2,3\n2,2,2,3\n", PointOptions{}, `2 rows repeat an earlier one to the digit, this one first: used once`},
		{"same place", "id,x,y,z\n1,1,2,3\n2,2,2,3\n3,1,2,3\n", PointOptions{}, `cable "cable 1": points with the same coordinates as an earlier one to the digit: 1`},
		{"cut off in the last cell", "x,y,z\n1,2,3.125\n2,2,3.1", PointOptions{}, `the file ends without a line end and the last cell is shorter than the one above it`},
		{"hot cable", "# temperature: 150 degC\nx,y,z\n1,2,3\n", PointOptions{}, `a cable temperature of 150 °C is unusual: check its unit`},
		{"chord in feet", strings.ReplaceAll(chord, "%", "328.08"), PointOptions{Known: known}, `the surveyed supports are apart by 328.080 m, the design span is 100.000 m: the file may be in feet: say --unit ft or us-ft`},
		{"chord in metres", strings.ReplaceAll(chord, "%", "100"), PointOptions{Known: known, Unit: "ft"}, `the file may be in metres: check --unit and the units in the header`},
		{"chord off by 2 per cent", strings.ReplaceAll(chord, "%", "102"), PointOptions{Known: known}, `check the codes, the units and the cables file`},
		{"feet and metres mixed", "x,y,z\n1000,500,3\n1001,501,3\n1002,502,3\n3284.1,1640.4,9.8\n3287.4,1643.7,9.8\n", PointOptions{}, `about 3.28 times as much: metres and feet may be mixed`},
	} {
		c.o.Name = "n.csv"
		sv, err := ReadPoints(strings.NewReader(c.text), c.o)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		said := 0
		var all []string
		for _, n := range sv.Notices {
			all = append(all, n.Text)
			if strings.Contains(n.Text, c.want) {
				said++
			}
			if n.File != "n.csv" {
				t.Errorf("%s: notice of file %q", c.name, n.File)
			}
		}
		if said != 1 {
			t.Errorf("%s: said %d times, all notices: %q", c.name, said, all)
		}
	}
}

// An ordinary file gives no notice, and only the guesses that it must.
func TestQuietFiles(t *testing.T) {
	span := Exact(100)
	for _, text := range []string{
		"id,easting [m],northing [m],elevation [m],code\n1,0,0,5,main A\n2,100.2,0,5,main B\n3,40,0,3,main\n4,60,0,3.1,main\n",
		"id,easting [m],northing [m],elevation [m],code\n1,1000,0,5,main\n2,1100.2,0,5,main\n",
		"# a survey\n# with plain words\nid,easting [m],northing [m],elevation [m],code\n1,0,-40,5,main\n2,0,50,5,main",
	} {
		sv, err := ReadPoints(strings.NewReader(text), PointOptions{Name: "q.csv", Known: []Design{{Cable: "main", SpanLength: &span}}, Codes: []CodeRule{{Code: "MAIN", Role: OnCable, Cable: "main"}}})
		if err != nil {
			t.Error(err)
			continue
		}
		if len(sv.Notices) != 0 || len(sv.Guesses) != 1 {
			t.Errorf("notices %+v, guesses %+v", sv.Notices, sv.Guesses)
		}
	}
}

// The number of codes that nobody knows may be large; the list of them is not.
func TestManyUnknownCodes(t *testing.T) {
	var b strings.Builder
	b.WriteString("x,y,z,code\n0,0,0,main\n")
	for i := range 500 {
		b.WriteString("1,2,3,tree " + strings.Repeat("i", i) + "\n")
	}
	sv, err := ReadPoints(strings.NewReader(b.String()), PointOptions{Name: "n.csv", Known: knownOf("main")})
	if err != nil {
		t.Fatal(err)
	}
	if len(sv.Ignored) != 500 || len(sv.Notices) != 21 || sv.Notices[20].Text != "480 more codes are not in the cables file: their points are set aside" {
		t.Errorf("%d set aside, %d notices, last %+v", len(sv.Ignored), len(sv.Notices), sv.Notices[len(sv.Notices)-1])
	}
}

// Codes that would make a terminal act come out harmless, one line a problem.
func TestHostileCodes(t *testing.T) {
	const hostile = "w\x1b[2J\u202ew"
	_, err := ReadPoints(strings.NewReader("# load: z; 3 N/m; along cable\nx,y,z,code\n1,2,3,"+hostile+"\n"), PointOptions{Name: "h.csv"})
	const want = `h.csv: column "load": found "z", expected a load on a cable of this survey; write the cable as in the codes: w�[2J�w`
	if err == nil || err.Error() != strings.ReplaceAll(want, `\ufffd`, "\ufffd") {
		t.Errorf("%v, want %s", err, want)
	}
}
