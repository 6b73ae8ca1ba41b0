package history

import (
	"cmp"
	"fmt"
	"slices"

	"tautbook/tension"
)

// Rank says how urgent a cable is.
type Rank struct {
	Level  int    `json:"level"` // 1 most urgent; see Levels
	Reason string `json:"reason"`
}

// Levels are the levels of urgency in words, most urgent first; Rank.Level counts from 1. The order is common practice, no source.
var Levels = []string{"beyond a limit", "change not accounted for", "last verdict not as designed, or an event not surveyed since", "limit within the customary interval", "at the next visit"}

// rank finds the most urgent of what the history says.
func (r *reading) rank() {
	r.Rank = Rank{len(Levels), "next visit " + r.Next.Date + ": " + r.Next.Why}
	last := r.visits[len(r.visits)-1]
	customary := r.opts.Today.AddDate(0, r.opts.Customary, 0).Format(dayOnly)
	for _, f := range r.Forecasts {
		if f.Warn != "" && f.Warn <= customary {
			r.Rank = Rank{4, fmt.Sprintf("%s may be beyond its limit (%s %s) from %s: %s", f.Of, f.Bound, figure(f.Of, f.Limit), f.Warn, f.Basis)}
			break
		}
	}
	if what := r.notSurveyed(); what != "" {
		r.Rank = Rank{3, what}
	}
	switch v := last.Verdict; v {
	case tension.Slack, tension.Overload, tension.OffDesign:
		r.Rank = Rank{3, fmt.Sprintf("verdict of %s: %s", last.Date, v)}
	}
	if what := r.unexplained(); what != "" {
		r.Rank = Rank{2, what}
	}
	for _, f := range r.Forecasts {
		if f.Already {
			r.Rank = Rank{1, fmt.Sprintf("%s %s, limit %s %s: beyond it with %s", f.Of, figure(f.Of, f.Today), f.Bound, figure(f.Of, f.Limit), tension.Probability(f.PBeyond))}
			break
		}
	}
}

// ByUrgency puts the cables of a fleet in order: by level, then by the date of the next visit, then by name.
func ByUrgency(all []Trend) {
	slices.SortStableFunc(all, func(a, b Trend) int {
		return cmp.Or(cmp.Compare(a.Rank.Level, b.Rank.Level), cmp.Compare(a.Next.Date, b.Next.Date),
			cmp.Compare(a.Structure, b.Structure), cmp.Compare(a.Cable, b.Cable), cmp.Compare(a.Span, b.Span))
	})
}
