package fieldsheets

import (
	"strings"

	"tautbook/tension"
)

// explanationGroup is what would explain the evidence: what it says, what would tell causes apart, and each cause that may be the one with
// the check that would confirm it.
func explanationGroup(a *tension.Assessment) group {
	e := a.Explanation
	g := group{Title: "What would explain it"}
	g.Rows = append(g.Rows, row{"It says", cleanSentence(e.Says)})
	if e.Tells != "" {
		g.Rows = append(g.Rows, row{"Next look", cleanSentence(e.Tells)})
	}
	var not []string
	for _, c := range e.Causes {
		switch c.Standing {
		case tension.Fits:
			g.Rows = append(g.Rows, row{"Fits", causeText(c)})
		case tension.AgainstRecord:
			g.Rows = append(g.Rows, row{"Against a record", causeText(c)})
		default:
			text := string(c.Kind)
			if c.Why != "" {
				text += " (" + c.Why + ")"
			}
			not = append(not, text)
		}
	}
	if len(not) > 0 {
		g.Rows = append(g.Rows, row{"Cannot be", cleanSentence(strings.Join(not, "; "))})
	}
	return g
}

// causeText is a cause with the tension that it means, why it may be doubted, and how to check it.
func causeText(c tension.Cause) string {
	text := c.Text
	if c.Tension != nil {
		text += " H would be " + force(*c.Tension) + "."
	}
	if c.Why != "" {
		text += " Against it: " + c.Why + "."
	}
	return cleanSentence(text + " Check: " + c.Check)
}
