package survey

import (
	"strings"
	"testing"
)

// knownOf makes designs of "cable/span" names.
func knownOf(names ...string) (out []Design) {
	for _, n := range names {
		cable, span, _ := strings.Cut(n, "/")
		out = append(out, Design{Cable: cable, Span: span})
	}
	return out
}

func rulesOf(t *testing.T, texts ...string) (out []CodeRule) {
	t.Helper()
	for _, text := range texts {
		r, err := ParseCodeRule(text)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, r)
	}
	return out
}

// What each code stands for, by rule, by the cables file, by the usual words and by itself.
func TestCodes(t *testing.T) {
	for _, c := range []struct {
		code  string
		known string // names apart by commas
		rule  string
		cable string // --cable
		want  string // role cable/span
	}{
		{"main-north", "main-north,main-south", "", "", "cable main-north/"},
		{"MAIN-NORTH", "main-north,main-south", "", "", "cable main-north/"},
		{"main-north A", "main-north,main-south", "", "", "support A main-north/"},
		{"main-north/B", "main-north,main-south", "", "", "support B main-north/"},
		{"main-north b", "main-north,main-south", "", "", "support B main-north/"},
		{"main-north:2 A", "main-north/1,main-north/2", "", "", "support A main-north/2"},
		{"main-north/2", "main-north/1,main-north/2", "", "", "cable main-north/2"},
		{"main-north 1", "main-north/1,main-north/2", "", "", "cable main-north/1"},
		{"main-north", "main-north/only", "", "", "cable main-north/only"},
		{"A", "main-north", "", "", "support A main-north/"},
		{"guy A", "guy,guy A", "", "", "cable guy A/"},
		{"guy A B", "guy,guy A", "", "", "support B guy A/"},
		{"main A", "main/A,main/B", "", "", "cable main/A"},
		{"main-nrth", "main-north,main-south", "", "", "ignored /"},
		{"", "main-north,main-south", "", "", "ignored /"},
		{"ground wire", "ground wire,phase", "", "", "cable ground wire/"},
		{"BM", "BM,phase", "", "", "cable BM/"},
		{"CP", "phase", "", "", "control /"},
		{"MC1", "main", "MC1=main/A", "", "support A main/"},
		{"mc1", "main", "MC1=main", "", "cable main/"},
		{"MC1", "main/2", "MC1=main", "", "cable main/2"},
		{"MC1", "main/1,main/2", "MC1=main/2/B", "", "support B main/2"},
		{"main", "main", "main=ignore", "", "ignored /"},
		{"main", "main", "main=ground", "", "ground /"},
		{"x", "main", "x=control", "", "control /"},
		{"anything", "main/1", "", "main", "cable main/1"},
		{"A", "main/1,other", "", "main", "support A main/1"},
		{"BM2", "main/1,other", "", "main", "control /"},
		{"w1", "", "", "", "cable w1/"},
		{"w1 A", "", "", "", "support A w1/"},
		{"w1/2", "", "", "", "cable w1/2"},
		{"w1/2/B", "", "", "", "support B w1/2"},
		{"hand cable left", "", "", "", "cable hand cable left/"},
		{"A", "", "", "", "support A cable 1/"},
		{"ctrl", "", "", "", "control /"},
		{"TBM 3", "", "", "", "control /"},
		{"BM7", "", "", "", "control /"},
		{"CP-12", "", "", "", "control /"},
		{"topo", "", "", "", "ground /"},
		{"gnd 12", "", "", "", "ground /"},
		{"ground wire", "", "", "", "cable ground wire/"},
		{"control cable", "", "", "", "cable control cable/"},
	} {
		o := PointOptions{Cable: c.cable}
		if c.known != "" {
			o.Known = knownOf(strings.Split(c.known, ",")...)
		}
		if c.rule != "" {
			o.Codes = rulesOf(t, c.rule)
		}
		r, err := newResolver(o, true)
		if err != nil {
			t.Fatal(err)
		}
		u := r.use(c.code)
		if got := string(u.Role) + " " + u.Cable + "/" + u.Span; got != c.want {
			t.Errorf("%q among %q: %s, want %s (%s)", c.code, c.known, got, c.want, u.How)
		}
		if u.How == "" || u.Points != 1 {
			t.Errorf("%q: how %q, %d points", c.code, u.How, u.Points)
		}
	}
}

// A cable of several spans is never taken for one of them, however it is named; the message says how to write it.
func TestSpanMustBeNamed(t *testing.T) {
	const row = "x,y,z,code\n1,2,3,"
	for _, c := range []struct {
		text string
		o    PointOptions
		want string
	}{
		{row + "main\n", PointOptions{}, `s.csv:2: column "code": found "main", expected the span as well: cable "main" has 2 spans in the cables file; write main/1, or say --code`},
		{row + "main A\n", PointOptions{}, `s.csv:2: column "code": found "main A", expected the span as well: cable "main" has 2 spans in the cables file; write main/1, or say --code`},
		{row + "q\n", PointOptions{Codes: rulesOf(t, "q=main")}, `s.csv:2: column "code": found "q", expected the span as well: cable "main" has 2 spans in the cables file; write main/1, or say --code`},
		{row + "q\n", PointOptions{Cable: "main"}, `s.csv:2: column "code": found "q", expected the span as well: cable "main" has 2 spans in the cables file; write main/1, or say --code`},
		{"x,y,z\n1,2,3\n", PointOptions{Cable: "main"}, `s.csv: expected the span as well: cable "main" has 2 spans in the cables file; say --span 1`},
		{"x,y,z\n1,2,3\n", PointOptions{}, `s.csv: expected the cable that the points are on; the file has no codes and the cables file 2 spans: say --cable ID, or add a line "# cable: ID" at the top`},
		{"# span: 1\n" + row + "main/1\n", PointOptions{}, `s.csv: column "span": found "1", expected the cable of that span as well; say --cable ID, or add a line "# cable: ID" at the top`},
		{row + "q\n", PointOptions{Codes: rulesOf(t, "q=main/1", "Q=main/2")}, `--code: found "Q" twice with different meanings, expected one meaning for each code; take one of the two out`},
	} {
		c.o.Name, c.o.Known = "s.csv", knownOf("main/1", "main/2")
		_, err := ReadPoints(strings.NewReader(c.text), c.o)
		if err == nil || err.Error() != c.want {
			t.Errorf("%v\nwant %s", err, c.want)
		}
	}
}

// The span that the file names goes with its cable, also when a flag names the same cable; another cable leaves it behind.
func TestSpanOfFile(t *testing.T) {
	for _, c := range []struct{ flag, want string }{{"", "main/2"}, {"MAIN", "main/2"}, {"guy", "guy/"}} {
		sv, err := ReadPoints(strings.NewReader("# cable: main\n# span: 2\nx,y,z\n1,2,3\n"), PointOptions{Name: "s.csv", Known: knownOf("main/1", "main/2", "guy"), Cable: c.flag})
		if err != nil || sv.Spans[0].Cable+"/"+sv.Spans[0].Span != c.want {
			t.Errorf("--cable %q: %+v, %v", c.flag, sv, err)
		}
	}
}

// Every form of a rule, and what is none.
func TestParseCodeRule(t *testing.T) {
	for _, c := range []struct {
		text string
		want CodeRule
	}{
		{"MC1=main", CodeRule{"MC1", OnCable, "main", ""}},
		{" MC 1 = main / 2 / b ", CodeRule{"MC 1", SupportB, "main", "2"}},
		{"MC1=main/A", CodeRule{"MC1", SupportA, "main", ""}},
		{"A=A", CodeRule{"A", OnCable, "A", ""}},
		{"7=Control", CodeRule{"7", Control, "", ""}},
		{"7=GROUND", CodeRule{"7", Ground, "", ""}},
		{"7=ignore", CodeRule{"7", Ignored, "", ""}},
	} {
		if got, err := ParseCodeRule(c.text); err != nil || got != c.want {
			t.Errorf("%q: %+v, %v", c.text, got, err)
		}
	}
	for _, text := range []string{"", "=", "a=", "=main", "main", "a=/", "a=main/", "a=main/1/2", "a=main//A", "a=main/1/2/A", "a= / "} {
		if got, err := ParseCodeRule(text); err == nil {
			t.Errorf("%q was taken as %+v", text, got)
		}
	}
}

// Two spellings of one id that differ by case are one cable, with or without a cables file.
func TestCodesDifferByCase(t *testing.T) {
	sv, err := ReadPoints(strings.NewReader("x,y,z,code\n1,2,3,Main\n2,2,3,main A\n3,2,3,MAIN\n"), PointOptions{Name: "c.csv", Unit: "m"})
	if err != nil {
		t.Fatal(err)
	}
	if len(sv.Spans) != 1 || sv.Spans[0].Cable != "Main" || len(sv.Spans[0].Points) != 2 || sv.Spans[0].A == nil {
		t.Errorf("spans %+v", sv.Spans)
	}
}
