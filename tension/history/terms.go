package history

import (
	"math"
	"time"
)

// termKind is what a column of the model stands for.
type termKind int

const (
	level    termKind = iota
	recorded          // step in a gap with an event that changes the figure
	step              // step in a gap without one
	pulse             // one visit off by itself
	linear            // drift in years
	logTime           // drift in decades of days
	warmth            // remainder in degC
)

// term is one column of the model.
type term struct {
	kind   termKind
	no     int         // of a step, the first visit after it; of a pulse, its visit
	events []happening // of a recorded step
	p      float64     // family-wise, of what was found
}

func (t term) found() bool      { return t.kind >= step }
func (t term) drifts() bool     { return t.kind == linear || t.kind == logTime }
func (t term) same(o term) bool { return t.kind == o.kind && t.no == o.no }

// place is where a model is asked: a visit, or a date after the last one at mean temperature.
type place struct {
	no   int
	at   time.Time
	warm float64 // cable temperature less the mean of the visits, degC

	between bool // on the course of the cable and no visit: one that is off does not count
}

// later is a place after all visits.
func later(at time.Time) place { return place{no: math.MaxInt, at: at} }

// clock counts the time of drifts.
type clock struct {
	first  time.Time   // first visit
	starts []time.Time // installation and retensionings; empty when creep has no known start
}

// clockOf reads the starts of creep from the events. Creep goes with the logarithm of the time since the cable was tensioned and
// starts anew at each tensioning; without one before the first visit its start is not known.
func clockOf(visits []dated, events []happening) clock {
	c := clock{first: visits[0].at}
	for _, e := range events {
		if e.Kind != Installed && e.Kind != Retensioned && e.Kind != Replaced {
			continue
		}
		switch {
		case !e.at.After(c.first):
			c.starts = []time.Time{e.at}
		case len(c.starts) > 0:
			c.starts = append(c.starts, e.at)
		}
	}
	return c
}

// creep is the sum of log10(1 + days) over the times since each tensioning up to the next, so that it is continuous over a tensioning
// and leaves its step to the event.
func (c clock) creep(at time.Time) (sum float64) {
	for i, start := range c.starts {
		end := at
		if i+1 < len(c.starts) && c.starts[i+1].Before(end) {
			end = c.starts[i+1]
		}
		if end.After(start) {
			sum += math.Log10(1 + daysBetween(start, end))
		}
	}
	return sum
}

// at is the value of a column.
func (c clock) at(t term, p place) float64 {
	switch t.kind {
	case level:
		return 1
	case recorded, step:
		if p.no >= t.no {
			return 1
		}
	case pulse:
		if p.no == t.no && !p.between {
			return 1
		}
	case linear:
		return daysBetween(c.first, p.at) / daysAYear
	case logTime:
		return c.creep(p.at)
	case warmth:
		return p.warm
	}
	return 0
}

// recordedSteps are the gaps of a series in which an event changed its figure. Events of one gap cannot be told apart: one step.
func recordedSteps(s series, events []happening) (out []term) {
	byGap := map[int][]happening{}
	for _, e := range events {
		if s.of == Length && e.Kind.ofLoad() {
			continue
		}
		g := s.gapOf(e)
		byGap[g] = append(byGap[g], e)
	}
	for g := 1; g < len(s.visits); g++ {
		if len(byGap[g]) > 0 {
			out = append(out, term{kind: recorded, no: s.visits[g].no, events: byGap[g]})
		}
	}
	return out
}
