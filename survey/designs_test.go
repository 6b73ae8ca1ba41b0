package survey

import (
	"bytes"
	"math"
	"reflect"
	"strings"
	"testing"

	"golang.org/x/text/encoding/unicode"
)

// fullCables is a cables file with every column; values are invented.
const fullCables = `# design values of an invented footbridge
structure,cable,span,load,self_weight [N/m],u_self_weight [%],deck_load [kN/m],u_deck_load [N/m],design_span [ft],u_design_span [mm],design_rise [m],u_design_rise,design_tension [kip],u_design_tension [%],design_sag [m],u_design_sag,design_temperature [degF],u_design_temperature [degC],axial_stiffness [MN],u_axial_stiffness [%],expansion [1e-6/degC],u_expansion,breaking_load [kN],u_breaking_load,safety_factor,slack_below [%],overload_above [%],diameter [in],u_diameter,take_up_per_turn [mm],u_take_up_per_turn,bending_stiffness [kN m2],u_bending_stiffness [N m2],support_between
Mill,main,1,both,150,2,0.4,20,100,5,-1.5,0.01,20,5,,,50,2,160,3,12,0.5,900,10,2.5,12,15,1.5,0.01,4,0.1,8.2,500,A: fixed / B: equal tension
`

func value(q *Quantity) Quantity {
	if q == nil {
		return Quantity{math.NaN(), math.NaN()}
	}
	return *q
}

// Every column in a unit of its own, with its uncertainty in a unit, in per cent or in the unit of the value.
func TestDesignColumns(t *testing.T) {
	designs, notices, err := ReadDesigns(strings.NewReader(fullCables), "c.csv")
	if err != nil || len(designs) != 1 || len(notices) != 0 {
		t.Fatalf("%d designs, notices %+v, %v", len(designs), notices, err)
	}
	d := designs[0]
	if d.Structure != "Mill" || d.Cable != "main" || d.Span != "1" || d.Load != LoadBoth || d.OverA != BetweenFixed || d.OverB != BetweenEqualTension || d.Line != 3 {
		t.Errorf("%+v", d)
	}
	const lbf = 0.45359237 * 9.80665
	for _, c := range []struct {
		name string
		got  *Quantity
		v, u float64
	}{
		{"self_weight", d.SelfWeight, 150, 3}, {"deck_load", d.DeckLoad, 400, 20}, {"design_span", d.SpanLength, 30.48, 0.005}, {"design_rise", d.Rise, -1.5, 0.01},
		{"design_tension", d.Tension, 20e3 * lbf, 1e3 * lbf}, {"design_temperature", d.Temperature, 10, 2}, {"axial_stiffness", d.AxialStiffness, 160e6, 4.8e6},
		{"expansion", d.Expansion, 12e-6, 0.5e-6}, {"breaking_load", d.BreakingLoad, 900e3, 10e3}, {"diameter", d.Diameter, 0.0381, 0.000254}, {"bending_stiffness", d.BendingStiffness, 8200, 500}, {"take_up_per_turn", d.TakeUpPerTurn, 0.004, 0.0001},
	} {
		q := value(c.got)
		if !(math.Abs(q.Value-c.v) <= 1e-12*math.Abs(c.v)) || !(math.Abs(q.U-c.u) <= 1e-12*c.u) {
			t.Errorf("%s is %v, want %v +- %v", c.name, q, c.v, c.u)
		}
	}
	if d.Sag != nil || *d.SafetyFactor != 2.5 || math.Abs(*d.SlackBelow-0.12) > 1e-15 || math.Abs(*d.OverloadAbove-0.15) > 1e-15 {
		t.Errorf("sag %v, factors %v %v %v", d.Sag, *d.SafetyFactor, *d.SlackBelow, *d.OverloadAbove)
	}
}

// The test above names every column that there is.
func TestDesignColumnsAreAllTested(t *testing.T) {
	header := strings.Split(fullCables, "\n")[1]
	columns := 0
	for _, f := range reflect.VisibleFields(reflect.TypeFor[designRow]()) {
		columns++
		if name := f.Tag.Get("csv"); !strings.Contains(","+header+",", ","+name+",") && !strings.Contains(","+header, ","+name+" [") {
			t.Errorf("column %s is not in the full file", name)
		}
	}
	if n := strings.Count(header, ",") + 1; n != columns {
		t.Errorf("%d columns in the file, %d known", n, columns)
	}
}

// An empty cell is an absent value, never zero.
func TestEmptyDesignCells(t *testing.T) {
	header := strings.Split(fullCables, "\n")[1]
	designs, _, err := ReadDesigns(strings.NewReader(header+"\n,main"+strings.Repeat(",", strings.Count(header, ",")-1)+"\n"), "c.csv")
	if err != nil || len(designs) != 1 {
		t.Fatal(err)
	}
	v := reflect.ValueOf(designs[0])
	pointers := 0
	for i := range v.NumField() {
		if v.Field(i).Kind() == reflect.Pointer {
			if pointers++; !v.Field(i).IsNil() {
				t.Errorf("%s is given", v.Type().Field(i).Name)
			}
		}
	}
	if pointers != 16 {
		t.Errorf("%d optional values, want 16", pointers)
	}
}

// The same designs in other separators, decimal marks, encodings, orders and line ends.
func TestDesignWritings(t *testing.T) {
	want, _, err := ReadDesigns(strings.NewReader(fullCables), "c.csv")
	if err != nil {
		t.Fatal(err)
	}
	want[0].Line = 0
	lines := strings.Split(strings.TrimSpace(fullCables), "\n")[1:]
	var reversed []string
	for _, l := range lines {
		cells := strings.Split(l, ",")
		for i, j := 0, len(cells)-1; i < j; i, j = i+1, j-1 {
			cells[i], cells[j] = cells[j], cells[i]
		}
		reversed = append(reversed, strings.Join(cells, ","))
	}
	utf16, err := unicode.UTF16(unicode.BigEndian, unicode.UseBOM).NewEncoder().String(strings.ReplaceAll(fullCables, "\n", "\r\n"))
	if err != nil {
		t.Fatal(err)
	}
	brackets := strings.NewReplacer("[", "(", "]", ")").Replace(fullCables)
	commas := strings.NewReplacer(",", ";", ".", ",").Replace(fullCables)
	tabs := strings.ReplaceAll(fullCables, ",", "\t")
	for name, text := range map[string]string{"semicolons": commas, "tabs": tabs, "utf-16": utf16, "round brackets": brackets,
		"upper case and blanks": strings.ReplaceAll(strings.ToUpper(lines[0]), "_", " ") + "\n" + lines[1] + "\n",
		"uncertainties first":   strings.Join(reversed, "\n") + "\n", "no line end": strings.Join(lines, "\r\n"),
		"quoted": `"` + strings.NewReplacer(",", `","`, "\n", "\"\n\"").Replace(strings.Join(lines, "\n")) + "\"\n"} {
		got, _, err := ReadDesigns(bytes.NewReader([]byte(text)), "c.csv")
		if err != nil || len(got) != 1 {
			t.Errorf("%s: %v", name, err)
			continue
		}
		got[0].Line = 0
		if !reflect.DeepEqual(got, want) {
			t.Errorf("%s:\n%+v\nwant\n%+v", name, got[0], want[0])
		}
	}
}

// What a cables file leaves open is said.
func TestDesignNotices(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"cable,self_weight [N/m]\nw,50\n", `load is empty: taken as "self weight", from the loads that are given`},
		{"cable,deck_load [N/m]\nw,50\n", `load is empty: taken as "deck", from the loads that are given`},
		{"cable,self_weight [N/m],deck_load [N/m]\nw,50,50\n", `load is empty: taken as "both", from the loads that are given`},
		{"cable,load,self_weight [N/m],deck_load [N/m]\nw,self-weight,50,20\n", `deck_load is not used, because load is self weight`},
		{"cable,load,self_weight [N/m],deck_load [N/m]\nw,deck,50,20\n", `self_weight is not used, because load is deck: deck_load must hold the cable's own weight`},
		{"cable,load,self_wieght [N/m]\nw,,50\n", `column "self_wieght [N/m]" is not used; nearest known name: self_weight`},
		{"cable,design_temperature [degC]\nw,200\n", `a design temperature of 200 °C is unusual: check its unit`},
		{"cable;self_weight [N/m];load\nw;50,5;self weight\n", `separator taken as semicolon: it parts the header into the most columns|decimal mark taken as comma: the numbers are written with it`},
		{"cable,load,self_weight [N/m]\nc\xe2ble,self weight,50\n", `encoding taken as windows-1252: the bytes are not UTF-8 and there is no byte-order mark`},
	} {
		_, notices, err := ReadDesigns(strings.NewReader(c.text), "c.csv")
		var texts []string
		for _, n := range notices {
			texts = append(texts, n.Text)
			if n.File != "c.csv" {
				t.Errorf("notice of file %q", n.File)
			}
		}
		if got := strings.Join(texts, "|"); err != nil || got != c.want {
			t.Errorf("%q: %s, %v, want %s", c.text, got, err, c.want)
		}
	}
}

// Designs are found by structure, cable and span, whatever the case; a file that names no structures is for any.
func TestDesignIndex(t *testing.T) {
	designs := []Design{{Structure: "Mill", Cable: "main", Span: "1"}, {Structure: "Ford", Cable: "main", Span: "1"}, {Cable: "guy"}}
	x := IndexDesigns(designs)
	for _, c := range []struct {
		structure, cable, span string
		want                   int // -1 for none
	}{
		{"mill", "MAIN", "1", 0}, {"Ford", "main", "1", 1}, {"Other", "guy", "", 2}, {"", "guy", "", 2}, {"Other", "main", "1", -1}, {"Mill", "main", "2", -1}, {"", "main", "1", 0},
	} {
		got := x.Of(c.structure, c.cable, c.span)
		if c.want < 0 && got != nil || c.want >= 0 && got != &designs[c.want] {
			t.Errorf("%+v: %+v", c, got)
		}
	}
	if n := len(OfStructure(designs, "Mill")); n != 1 {
		t.Errorf("%d designs of Mill", n)
	}
	if n := len(OfStructure(designs, "Other")); n != 1 {
		t.Errorf("%d designs of any structure", n)
	}
	if n := len(OfStructure(designs, "")); n != 3 {
		t.Errorf("%d designs", n)
	}
}
