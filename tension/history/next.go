package history

import (
	"fmt"
	"math"
	"slices"
	"time"
)

// NextVisit is when to survey again, and what to expect then.
type NextVisit struct {
	Date    string    `json:"date"`
	Why     string    `json:"why"`
	Length  *Quantity `json:"expected_unstressed_length_m"`  // u as a visit would find it
	Tension *Quantity `json:"expected_horizontal_tension_N"` // u as a visit would find it
}

// soon is the wait in days after a change that nobody can account for: common practice, no source.
const soon = 30

// next suggests the date of the next visit: before the probability of being beyond a limit reaches 5 %, and never later than the
// customary interval after the last visit; soon when something has to be explained.
func (r *reading) next() {
	last := r.visits[len(r.visits)-1]
	due := last.at.AddDate(0, r.opts.Customary, 0)
	why := fmt.Sprintf("%d months after the last visit: common practice, no source", r.opts.Customary)
	if due.Before(r.opts.Today) {
		due, why = r.opts.Today, fmt.Sprintf("overdue: more than %d months after the last visit (common practice, no source)", r.opts.Customary)
	}
	earlier := func(at time.Time, reason string) {
		if !at.After(due) {
			due, why = at, reason
		}
	}
	for _, f := range r.Forecasts {
		if at, err := time.Parse(dayOnly, f.Warn); err == nil {
			earlier(at, fmt.Sprintf("the probability that the %s is beyond its limit (%s %s) reaches 5 %% (%s)", f.Of, f.Bound, figure(f.Of, f.Limit), f.Basis))
		}
	}
	if what := r.unexplained(); what != "" {
		earlier(r.opts.Today.AddDate(0, 0, soon), "within a month, to see whether it goes on: "+what)
	}
	if what := r.notSurveyed(); what != "" {
		earlier(r.opts.Today, what)
	}
	r.Next = NextVisit{Date: due.Format(dayOnly), Why: why}
	for _, m := range []*model{r.main, r.other} {
		if m != nil {
			r.Next.expect(m, due)
		}
	}
}

// expect is what the next visit will find, with the uncertainty of the course and of a visit like the median one (prediction).
func (n *NextVisit) expect(m *model, at time.Time) {
	q := m.predict(later(at))
	u := make([]float64, len(m.y))
	for i := range u {
		u[i] = m.apart(i)
	}
	slices.Sort(u)
	q.U = math.Hypot(q.U, u[len(u)/2])
	if m.of == Length {
		n.Length = &q
	} else {
		n.Tension = &q
	}
}

// notSurveyed is the last event after which there was no visit, "" for none.
func (r *reading) notSurveyed() string {
	for _, e := range slices.Backward(r.events) {
		if e.at.After(r.visits[len(r.visits)-1].at) {
			return r.eventText(e) + " has not been surveyed since"
		}
	}
	return ""
}

// unexplained is the first thing in the history that nobody can account for, "" for none.
func (r *reading) unexplained() string {
	for _, s := range r.Steps {
		switch {
		case s.Kind == UnrecordedStep:
			return fmt.Sprintf("an unrecorded change between %s and %s", s.After, s.Before)
		case s.Kind == RecordedStep && s.P != nil && *s.P < significance:
			return fmt.Sprintf("the change between %s and %s is not the recorded one", s.After, s.Before)
		case s.Kind == VisitOff:
			return fmt.Sprintf("the visit of %s does not fit the others", s.After)
		}
	}
	if c := r.Change; c != nil && len(r.main.y) == 2 && len(r.Steps) == 0 && c.P < significance {
		return fmt.Sprintf("a change between %s and %s that nobody recorded", c.From, c.To)
	}
	return ""
}
