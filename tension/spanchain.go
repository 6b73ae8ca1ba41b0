package tension

import (
	"math"
	"slices"
	"strings"
)

// link is one span in order along a cable.
type link struct {
	at       int // place of its assessment
	reversed bool
}

// meets is the distance in plan, m, within which the ends of two spans are one support: saddles and sheaves are no longer, and
// marks on both sides of one stand no farther apart. For short spans a fiftieth of the shorter one. Common practice, no source.
const meets = 1.0

// end is one end of one span.
type end struct{ at, which int } // which: 0 A, 1 B

// chains puts the spans of one cable in order where their surveyed supports meet. Each end is paired with the nearest end of
// another span; a cable starts at the free end of the span that is named first by its id.
func chains(list []Assessment, spans []int) (out [][]link) {
	slices.SortStableFunc(spans, func(i, j int) int { return compareIDs(list[i].Span, list[j].Span) })
	partner := pairs(list, spans)
	used := map[int]bool{}
	for _, start := range spans {
		for which := range 2 {
			if _, tied := partner[end{start, which}]; tied || used[start] {
				continue
			}
			chain := []link{{start, which == 1}}
			used[start] = true
			for at := (end{start, 1 - which}); ; {
				next, ok := partner[at]
				if !ok || used[next.at] {
					break
				}
				used[next.at] = true
				chain = append(chain, link{next.at, next.which == 1})
				at = end{next.at, 1 - next.which}
			}
			if len(chain) > 1 {
				out = append(out, chain)
			}
		}
	}
	return out
}

// pairs finds the ends that meet, nearest first.
func pairs(list []Assessment, spans []int) map[end]end {
	type pair struct {
		p, q end
		gap  float64
	}
	var near []pair
	for n, i := range spans {
		for _, j := range spans[n+1:] {
			f, g := list[i].forces, list[j].forces
			limit := math.Min(meets, math.Min(list[i].Fit.Chord.Value, list[j].Fit.Chord.Value)/50)
			for p := range 2 {
				for q := range 2 {
					if !f.surveyed(p) || !g.surveyed(q) {
						continue
					}
					gap := math.Hypot(f.ends[p][0]-g.ends[q][0], f.ends[p][1]-g.ends[q][1])
					if gap <= limit {
						near = append(near, pair{end{i, p}, end{j, q}, gap})
					}
				}
			}
		}
	}
	slices.SortStableFunc(near, func(a, b pair) int { return compareSize(a.gap, b.gap) })
	partner := map[end]end{}
	for _, p := range near {
		_, one := partner[p.p]
		_, other := partner[p.q]
		if !one && !other {
			partner[p.p], partner[p.q] = p.q, p.p
		}
	}
	return partner
}

func (f *spanForces) surveyed(which int) bool {
	if which == 0 {
		return f.a != nil
	}
	return f.b != nil
}

// compareIDs orders ids as people do: runs of digits by their number, so that 2 comes before 10.
func compareIDs(a, b string) int {
	for a != "" && b != "" {
		x, restA := leading(a)
		y, restB := leading(b)
		if digit(x[0]) && digit(y[0]) {
			x, y = strings.TrimLeft(x, "0"), strings.TrimLeft(y, "0")
			if len(x) != len(y) {
				return len(x) - len(y)
			}
		}
		if c := strings.Compare(x, y); c != 0 {
			return c
		}
		a, b = restA, restB
	}
	return len(a) - len(b)
}

func digit(c byte) bool { return c >= '0' && c <= '9' }

// leading is the longest start of a text that is all digits or has none.
func leading(s string) (head, rest string) {
	i := 1
	for i < len(s) && digit(s[i]) == digit(s[0]) {
		i++
	}
	return s[:i], s[i:]
}
