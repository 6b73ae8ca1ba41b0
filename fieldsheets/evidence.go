package fieldsheets

import (
	"fmt"
	"math"

	"tautbook/tension"
)

// evidenceGroup is the adjustment of all evidence: what it found, the reconciled figures and each piece.
func evidenceGroup(a *tension.Assessment) group {
	r := a.Reconciled
	g := group{Title: "All evidence together"}
	basis := ""
	if r.Without != "" {
		basis = ", without the " + clean(r.Without)
	}
	why := notKnown + ": the evidence contradicts itself"
	g.Rows = append(g.Rows, row{"It says", cleanSentence(r.Says)},
		row{"Reconciled H", or(r.HorizontalTension, func(q tension.Quantity) string { return force(q) + basis }, why)},
		row{"Reconciled load", or(r.Load, func(q tension.Quantity) string { return tension.NewtonPerMetre.Figure(q) + basis }, why)})
	if r.UnstressedLength != nil {
		g.Rows = append(g.Rows, row{"Reconciled S0", length(*r.UnstressedLength) + basis + " (at the design temperature)"})
	}
	degrees := "degrees"
	if r.DegreesOfFreedom == 1 {
		degrees = "degree"
	}
	g.Rows = append(g.Rows, row{"Test of all", fmt.Sprintf("chi square %.1f with %d %s of freedom; by chance: %s", r.ChiSquare, r.DegreesOfFreedom, degrees, tension.Probability(r.Chance))})
	for _, p := range r.Pieces {
		g.Rows = append(g.Rows, row{"Piece", clean(p.Name) + ": " + pieceText(p)})
	}
	return g
}

// pieceText is what a piece gives beside what all the rest needs.
func pieceText(p tension.Piece) string {
	scale := p.Scale()
	text := scale.Figure(p.Given)
	if p.Residual == nil {
		return text + ", checked by nothing"
	}
	return fmt.Sprintf("%s; the rest needs %s, %.1f u apart; an error of %s would show", text,
		scale.Value(tension.Quantity{Value: *p.Needed, U: *p.UApart}), math.Abs(*p.Residual), scale.About(*p.Detects))
}
