package fieldsheets

import (
	"fmt"

	"tautbook/tension"
)

// monteCarloGroup are the figures that were simulated.
func monteCarloGroup(m *tension.MonteCarlo) group {
	g := group{Title: "By Monte Carlo (JCGM 101)"}
	draws := fmt.Sprintf("%d, seed %d", m.Trials, m.Seed)
	switch {
	case m.Adaptive && !m.Stable:
		draws += ", too few to settle two significant digits"
	case m.Adaptive:
		draws += ", as many as it took"
	}
	if m.Failed > 0 {
		draws += fmt.Sprintf("; %d without a state, left out", m.Failed)
	}
	g.Rows = append(g.Rows, row{"Draws", draws})
	add := func(label string, s *tension.Simulated, scale tension.Scale) {
		if s == nil {
			return
		}
		end := func(v float64) string { return scale.Value(tension.Quantity{Value: v, U: s.U / 2}) }
		says := "linear U agrees"
		if !s.LinearAccepted {
			says = "linear U is not good enough"
		}
		g.Rows = append(g.Rows, row{label, fmt.Sprintf("95 %% between %s and %s (mean %s, u %s); %s", end(s.Low), end(s.High), end(s.Mean), scale.About(s.U), says)})
	}
	if s := m.HorizontalTension; s != nil {
		add("Horizontal tension H", s, tension.ForceScale(s.Mean))
	}
	add("Ratio to expected", m.Ratio, tension.Plain)
	if s := m.GreatestTension; s != nil {
		add("Greatest tension", s, tension.ForceScale(s.Mean))
	}
	if m.PSlack != nil {
		g.Rows = append(g.Rows, row{"Probabilities", fmt.Sprintf("below the limits %s, inside %s, above %s", tension.Probability(*m.PSlack), tension.Probability(*m.PInside), tension.Probability(*m.POverload))})
	}
	return g
}
