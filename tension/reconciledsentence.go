package tension

import (
	"fmt"
	"math"
	"strings"
)

// reconciledSentence says in one sentence what the reconciliation found.
func reconciledSentence(r *Reconciled) string {
	switch r.Outcome {
	case Agrees:
		return agreesSentence(r)
	case OneDisagrees:
		text := fmt.Sprintf("The %s disagrees with all the rest: it %s", r.Without, r.needs(r.Without))
		if r.Without == pieceLength {
			text += "; the cable has become longer or shorter than designed, or its stiffness, its temperature or the design values are wrong"
		}
		return text + "."
	case CannotTell:
		if r.loadAgainstLength() {
			return fmt.Sprintf("The load on record and the designed length do not go together: the load %s, or the length %s. The verdict takes the load, because somebody looked at it; a direct reading of the tension would confirm it.",
				r.needs(pieceLoad), r.needs(pieceLength))
		}
		text := "The evidence contradicts itself and cannot tell which piece is wrong: "
		for i, name := range r.Suspected {
			if i > 0 {
				text += "; or "
			}
			text += "the " + name + " " + r.needs(name)
		}
		return text + ". " + apartBy(r)
	default:
		return fmt.Sprintf("More than one piece of evidence is wrong: whichever one is left out, the rest still contradicts itself (probability by chance: %s).", Probability(r.Chance))
	}
}

// loadAgainstLength reports whether a load that was looked at and the designed length are all the evidence: then the verdict has chosen
// between them, and the sentence must not sound as if it had not.
func (r *Reconciled) loadAgainstLength() bool {
	for _, p := range r.Pieces {
		if strings.HasPrefix(p.Name, pieceReading) {
			return false
		}
	}
	return r.Looked && r.piece(pieceLoad).Needed != nil && r.piece(pieceLength).Needed != nil
}

// apartBy says what would tell the suspected pieces apart.
func apartBy(r *Reconciled) string {
	if !r.Looked {
		return "A look at the loads would be one more piece of evidence."
	}
	for _, p := range r.Pieces {
		if strings.HasPrefix(p.Name, pieceReading) {
			return "One more reading, of another kind, would tell."
		}
	}
	return "A direct reading of the tension would tell."
}

// needs is what a piece would have to be, in its unit.
func (r *Reconciled) needs(name string) string {
	p := r.piece(name)
	if p.Needed == nil {
		return "is checked by nothing"
	}
	digits := p.Scale()
	return fmt.Sprintf("would have to be %s instead of %s (%.1f standard uncertainties apart)",
		digits.Figure(Quantity{Value: *p.Needed, U: *p.UApart}), digits.Value(p.Given), math.Abs(*p.Residual))
}

// agreesSentence says what agrees, and what that says of a load that nobody looked at.
func agreesSentence(r *Reconciled) string {
	text := fmt.Sprintf("Nothing disagrees: %d pieces of evidence and the shape hold together (probability of a larger spread by chance: %s)", r.DegreesOfFreedom+1, Probability(r.Chance))
	if r.Looked || r.Load == nil || r.LoadOnRecord == nil {
		return text + "."
	}
	off := r.Load.Value - r.LoadOnRecord.Value
	u := math.Hypot(r.Load.U, r.LoadOnRecord.U)
	if math.Abs(off) > apart*u {
		return text + fmt.Sprintf("; by them %s hang there and not the %s on file, which nobody looked at.", NewtonPerMetre.Figure(*r.Load), NewtonPerMetre.Figure(*r.LoadOnRecord))
	}
	return text + "; the load on file, which nobody looked at, agrees with them."
}
