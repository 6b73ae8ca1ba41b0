package history

import (
	"cmp"
	"errors"
	"fmt"
	"math"
	"slices"
	"time"
)

// parseDate reads 2026-06-11 or 2026-06-11T10:30.
func parseDate(s string) (time.Time, error) {
	for _, layout := range []string{time.DateOnly, "2006-01-02T15:04"} {
		if t, err := time.Parse(layout, s); err == nil {
			return t, nil
		}
	}
	return time.Time{}, fmt.Errorf("found date %q, expected one such as 2026-06-11 or 2026-06-11T10:30", s)
}

// daysBetween counts the days from one moment to another, as a fraction where times of day are known.
func daysBetween(from, to time.Time) float64 { return to.Sub(from).Hours() / 24 }

const daysAYear = 365.25

// dated is a visit with its moment and its number in order of date.
type dated struct {
	Visit
	at time.Time
	no int
}

// happening is an event with its moment.
type happening struct {
	Event
	at time.Time
}

// inOrder checks a span and puts visits and events in order of date; it leaves the span as it is.
func inOrder(s Span) (visits []dated, events []happening, err error) {
	var problems []error
	for i, v := range s.Visits {
		at, err := parseDate(v.Date)
		if err == nil {
			err = v.check()
		}
		if err != nil {
			problems = append(problems, fmt.Errorf("visit %d (%s): %w", i+1, v.ID, err))
		}
		visits = append(visits, dated{Visit: v, at: at})
	}
	for i, e := range s.Events {
		at, err := parseDate(e.Date)
		if err == nil && e.Size != nil && !sound(*e.Size, false) {
			err = fmt.Errorf("found size %g with u %g, expected finite numbers and u of 0 or more", e.Size.Value, e.Size.U)
		}
		if err != nil {
			problems = append(problems, fmt.Errorf("event %d (%s): %w", i+1, e.Kind, err))
		}
		events = append(events, happening{e, at})
	}
	if len(visits) == 0 {
		problems = append(problems, errors.New("found no visit, expected one or more"))
	}
	slices.SortStableFunc(visits, func(a, b dated) int { return cmp.Or(a.at.Compare(b.at), cmp.Compare(a.ID, b.ID)) })
	for i := range visits {
		visits[i].no = i
	}
	slices.SortStableFunc(events, func(a, b happening) int {
		return cmp.Or(a.at.Compare(b.at), cmp.Compare(a.Kind, b.Kind), cmp.Compare(a.Note, b.Note))
	})
	return visits, events, errors.Join(problems...)
}

func (v Visit) check() error {
	for _, f := range []struct {
		name   string
		q      *Quantity
		common float64
	}{{"H", v.Tension, v.TensionCommon}, {"S0", v.Length, v.LengthCommon}} {
		switch {
		case f.q == nil:
		case !sound(*f.q, true):
			return fmt.Errorf("found %s = %g with u = %g, expected finite numbers and u above 0", f.name, f.q.Value, f.q.U)
		case !(f.common >= 0 && f.common < f.q.U):
			return fmt.Errorf("found a common part of u(%s) of %g, expected 0 or more and less than u = %g", f.name, f.common, f.q.U)
		}
	}
	if v.Temperature != nil && !sound(*v.Temperature, false) {
		return errors.New("the temperature is not a finite number")
	}
	for _, m := range v.Marks {
		if !sound(m.Easting, true) || !sound(m.Northing, true) || !sound(m.Elevation, true) {
			return fmt.Errorf("control mark %s: expected finite coordinates and u above 0", m.ID)
		}
	}
	return nil
}

func sound(q Quantity, positive bool) bool {
	return !math.IsNaN(q.Value) && !math.IsInf(q.Value, 0) && !math.IsInf(q.U, 0) && q.U >= 0 && (q.U > 0 || !positive)
}

// series are the visits that have a figure.
type series struct {
	of      Measure
	visits  []dated
	y, u, c []float64
}

func seriesOf(of Measure, visits []dated) series {
	s := series{of: of}
	for _, v := range visits {
		q, common := v.Length, v.LengthCommon
		if of == Tension {
			q, common = v.Tension, v.TensionCommon
		}
		if q != nil {
			s.visits, s.y, s.u, s.c = append(s.visits, v), append(s.y, q.Value), append(s.u, q.U), append(s.c, common)
		}
	}
	return s
}

// apart is the standard uncertainty of a visit without what is common to all.
func (s series) apart(i int) float64 { return math.Sqrt(s.u[i]*s.u[i] - s.c[i]*s.c[i]) }

// difference is the last figure less the first, without what is common to them.
func (s series) difference() Quantity {
	n := len(s.y)
	return Quantity{Value: s.y[n-1] - s.y[0], U: math.Hypot(math.Hypot(s.apart(0), s.apart(n-1)), s.c[n-1]-s.c[0])}
}

// gapOf is the number of the first visit after an event: 0 before the first visit, len when none came after. An event on the day of a
// visit counts as before the last visit of that day.
func (s series) gapOf(e happening) int {
	after := len(s.visits)
	for i := len(s.visits) - 1; i >= 0; i-- {
		day := s.visits[i].at.Truncate(24 * time.Hour)
		if day.Equal(e.at.Truncate(24 * time.Hour)) {
			return i
		}
		if day.Before(e.at) {
			break
		}
		after = i
	}
	return after
}
