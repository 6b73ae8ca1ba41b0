package history

import (
	"fmt"
	"math"
	"strings"

	"tautbook/tension"
)

// figure prints a level of a measure: metres to its uncertainty, tensions in the unit that suits them.
func figure(of Measure, q Quantity) string {
	if of == Length {
		return tension.Metre.Figure(q)
	}
	return tension.ForceScale(q.Value).Figure(q)
}

// amount prints a change of a measure without its sign: lengths in mm.
func amount(of Measure, q Quantity) string {
	q.Value = math.Abs(q.Value)
	if of == Length {
		return tension.Millimetre.Figure(q)
	}
	return tension.ForceScale(math.Max(q.Value, q.U)).Figure(q)
}

// about prints a change that is good to two digits, with its sign.
func about(of Measure, v float64) string {
	if of == Length {
		return tension.Millimetre.About(v)
	}
	return tension.ForceScale(v).About(v)
}

func symbol(of Measure) string {
	if of == Length {
		return "S0"
	}
	return "H"
}

// course is "grew by 22.0 ± 4.0 mm", grew the same with its subject.
func course(of Measure, q Quantity) string {
	if q.Value < 0 {
		return "fell by " + amount(of, q)
	}
	return "grew by " + amount(of, q)
}

func grew(of Measure, q Quantity) string { return symbol(of) + " " + course(of, q) }

func chance(p float64) string { return "probability of as much by chance: " + tension.Probability(p) }

func sentence(s string) string {
	if s == "" {
		return s
	}
	return strings.ToUpper(s[:1]) + s[1:]
}

// eventText is an event as printed: "retensioned 2021-05-12 by 6 turns (36.0 ± 1.2 mm)".
func (r *reading) eventText(e happening) string {
	text := fmt.Sprintf("%s %s", e.Kind, e.Date)
	if e.Size == nil {
		return text
	}
	switch e.Unit {
	case "turns":
		text += fmt.Sprintf(" by %g turns", e.Size.Value)
		if per := r.span.TakeUpPerTurn; per != nil {
			text += " (" + tension.Millimetre.Figure(Quantity{Value: e.Size.Value * per.Value, U: math.Hypot(per.Value*e.Size.U, e.Size.Value*per.U)}) + ")"
		}
	case "m":
		text += " by " + tension.Millimetre.Figure(*e.Size)
	default:
		text += " by " + tension.Scale{Unit: e.Unit, Per: 1}.Figure(*e.Size)
	}
	return text
}

// inWords is a term as a reading.
func (r *reading) inWords(t term) string {
	m := r.main
	i := m.indexOf(t.no)
	switch t.kind {
	case linear:
		return "an even drift"
	case logTime:
		return "creep with log time"
	case warmth:
		return "a remainder that goes with temperature"
	case pulse:
		return fmt.Sprintf("the visit of %s off by itself", m.visits[i].Date)
	default:
		return fmt.Sprintf("a step between %s and %s", m.visits[i-1].Date, m.visits[i].Date)
	}
}
