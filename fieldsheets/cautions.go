package fieldsheets

import "slices"

// cautions stand on every summary and sheet.
var cautions = []string{
	"This sheet advises; it is no permit and no certificate. A licensed engineer and the local code decide.",
	"Shape gives tension divided by load. Every tension here holds only if the load on the cable is the one on record.",
	"U is the expanded uncertainty, k = 2 (about 95 %). It covers the inputs listed in the budget and nothing else: not corrosion, broken wires, clamps, anchorages or foundations.",
	"Do not take up, let out or load a cable on this sheet alone. Keep clear of a cable whose verdict is overload or off design until an engineer has released it.",
	"A verdict is for the day and the conditions of the survey. Wind, ice, traffic and temperature change it.",
}

// Cautions are the sentences that close every summary and sheet.
func Cautions() []string { return slices.Clone(cautions) }
