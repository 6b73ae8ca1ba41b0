package survey

import (
	"fmt"
	"strings"
)

// designParser turns one line of a cables file into a Design.
type designParser struct {
	header  designHeader
	row     designRow
	line    int
	reader  *designReader
	notices []Notice
}

func (p *designParser) problem(column, found, expected, mend string) {
	if w, ok := p.header.written[column]; ok {
		column = w
	}
	p.reader.fault.add(Problem{File: p.reader.name, Line: p.line, Column: column, Found: found, Expected: expected, Mend: mend})
}

func (p *designParser) notice(column, format string, args ...any) {
	p.notices = append(p.notices, Notice{File: p.reader.name, Line: p.line, Column: column, Text: harmless(fmt.Sprintf(format, args...))})
}

func (p *designParser) parse() Design {
	r := p.row
	d := Design{Structure: r.Structure, Cable: r.Cable, Span: r.Span, Line: p.line}
	if plain(r.Cable) == "" {
		p.problem("cable", "", "the id of the cable, the cell is empty", "")
	}
	d.SelfWeight = p.quantity("self_weight", r.SelfWeight, r.USelfWeight)
	d.DeckLoad = p.quantity("deck_load", r.DeckLoad, r.UDeckLoad)
	d.SpanLength = p.quantity("design_span", r.DesignSpan, r.UDesignSpan)
	d.Rise = p.quantity("design_rise", r.DesignRise, r.UDesignRise)
	d.Tension = p.quantity("design_tension", r.DesignTension, r.UDesignTension)
	d.Sag = p.quantity("design_sag", r.DesignSag, r.UDesignSag)
	d.Temperature = p.quantity("design_temperature", r.DesignTemp, r.UDesignTemp)
	d.AxialStiffness = p.quantity("axial_stiffness", r.Axial, r.UAxial)
	d.Expansion = p.quantity("expansion", r.Expansion, r.UExpansion)
	d.BreakingLoad = p.quantity("breaking_load", r.Breaking, r.UBreaking)
	d.Diameter = p.quantity("diameter", r.Diameter, r.UDiameter)
	d.BendingStiffness = p.quantity("bending_stiffness", r.Bending, r.UBending)
	d.TakeUpPerTurn = p.quantity("take_up_per_turn", r.TakeUp, r.UTakeUp)
	d.SafetyFactor = p.safetyFactor(r.SafetyFactor)
	d.SlackBelow = p.limit("slack_below", r.SlackBelow)
	d.OverloadAbove = p.limit("overload_above", r.OverloadAbove)
	p.between(&d)
	p.load(&d)
	p.plausible(&d)
	return d
}

// number parses a cell; ok is false when it is empty or refused.
func (p *designParser) number(column, cell string) (v float64, ok bool) {
	if cell == "" {
		return 0, false
	}
	v, fault := parseNumber([]byte(cell), p.reader.mark)
	if fault != "" {
		expected, mend := fault.describe(p.reader.mark, inDesigns)
		p.problem(column, cell, expected, mend)
		return 0, false
	}
	return v, true
}

// quantity is a value with its uncertainty from two columns, nil when the value's cell is empty.
func (p *designParser) quantity(column, cell, uCell string) *Quantity {
	col := designColumns[column]
	v, ok := p.number(column, cell)
	if !ok {
		if cell == "" && uCell != "" {
			p.problem("u_"+column, uCell, "an empty cell, because "+column+" is empty", "")
		}
		return nil
	}
	unit := p.header.units[column]
	q := Quantity{Value: v*unit.factor + unit.offset}
	if col.positive && !(q.Value > 0) {
		p.problem(column, cell, "a value above 0", "")
	}
	if col.dim == Temperature {
		p.temperature(column, cell, q.Value)
	}
	if u, ok := p.number("u_"+column, uCell); ok {
		if u < 0 {
			p.problem("u_"+column, uCell, "a standard uncertainty of 0 or more", "")
		}
		if p.header.percent["u_"+column] {
			q.U = u / 100 * abs(q.Value)
		} else {
			q.U = u * p.header.units["u_"+column].factor
		}
	}
	return &q
}

func abs(v float64) float64 {
	if v < 0 {
		return -v
	}
	return v
}

func (p *designParser) temperature(column, cell string, degC float64) {
	switch {
	case degC < -zeroC:
		p.problem(column, cell, "a temperature above absolute zero", "")
	case oddTemperature(degC):
		p.notice(column, "a design temperature of %.0f °C is unusual: check its unit", degC)
	}
}

func (p *designParser) safetyFactor(cell string) *float64 {
	v, ok := p.number("safety_factor", cell)
	if !ok {
		return nil
	}
	if !(v >= 1) {
		p.problem("safety_factor", cell, "a factor of 1 or more", "")
	}
	return &v
}

// limit is a percentage of the expected tension as a fraction.
func (p *designParser) limit(column, cell string) *float64 {
	v, ok := p.number(column, cell)
	if !ok {
		return nil
	}
	f := v * p.header.units[column].factor
	if !(f > 0) || f >= 10 || (column == "slack_below" && f >= 1) {
		p.problem(column, cell, "a percentage of the expected tension above 0 (and below 100 for slack_below)", "")
	}
	return &f
}

// between settles how the cable passes over its intermediate supports.
func (p *designParser) between(d *Design) {
	var err error
	if d.OverA, d.OverB, err = ParseSupportBetween(p.row.Between); err != nil {
		p.problem("support_between", p.row.Between, betweenExpected, "")
	}
}

// load settles which load shapes the cable.
func (p *designParser) load(d *Design) {
	kind := LoadKind(strings.NewReplacer("-", " ", "_", " ").Replace(strings.ToLower(p.row.Load)))
	inferred := map[[2]bool]LoadKind{{true, false}: LoadSelfWeight, {false, true}: LoadDeck, {true, true}: LoadBoth}
	have := [2]bool{d.SelfWeight != nil, d.DeckLoad != nil}
	need := func(ok bool, column, cell string) {
		if !ok && cell == "" {
			p.problem(column, "", fmt.Sprintf("a value, because load is %s", quote(string(kind))), "fill the cell or change load")
		}
	}
	switch kind {
	case "":
		if d.Load = inferred[have]; d.Load != "" {
			p.notice("load", "load is empty: taken as %s, from the loads that are given", quote(string(d.Load)))
		}
		return
	case LoadSelfWeight:
		need(have[0], "self_weight", p.row.SelfWeight)
		if have[1] {
			p.notice("deck_load", "deck_load is not used, because load is self weight")
		}
	case LoadDeck:
		need(have[1], "deck_load", p.row.DeckLoad)
		if have[0] {
			p.notice("self_weight", "self_weight is not used, because load is deck: deck_load must hold the cable's own weight")
		}
	case LoadBoth:
		need(have[0], "self_weight", p.row.SelfWeight)
		need(have[1], "deck_load", p.row.DeckLoad)
	default:
		p.problem("load", p.row.Load, "self weight, deck or both", "")
	}
	d.Load = kind
}

// plausible refuses values that contradict each other.
func (p *designParser) plausible(d *Design) {
	if d.Tension != nil && d.Sag != nil {
		p.problem("design_sag", p.row.DesignSag, "an empty cell, because design_tension is given: one of the two fixes the design", "empty the one that was not designed for")
	}
	if d.Tension != nil && d.BreakingLoad != nil && d.BreakingLoad.Value <= d.Tension.Value {
		p.problem("breaking_load", p.row.Breaking, "a breaking load above the design tension "+p.row.DesignTension, "check the units")
	}
	if d.Tension != nil && d.AxialStiffness != nil && d.AxialStiffness.Value > 0 && d.Tension.Value > 0.05*d.AxialStiffness.Value {
		p.problem("axial_stiffness", p.row.Axial, "a stiffness of more than 20 times the design tension (less would stretch the cable by 5 %)", "check the units")
	}
	if d.Sag != nil && d.SpanLength != nil && d.Sag.Value > 3*d.SpanLength.Value {
		p.problem("design_sag", p.row.DesignSag, "a sag below three times the span", "check the units")
	}
	if d.Expansion != nil && (d.Expansion.Value > 1e-4 || d.Expansion.Value < 1e-7) {
		p.problem("expansion", p.row.Expansion, "an expansion between 0.1 and 100 times 1e-6/degC", "check the unit")
	}
}
