package history

import "math"

// Read reads the history of one span. An error names each visit and event that is not sound. The result depends neither on the order
// of visits and events nor on the units, and is the same each time.
func Read(span Span, o Options) (Trend, error) {
	o = o.filled()
	visits, events, err := inOrder(span)
	if err != nil {
		return Trend{}, err
	}
	t := Trend{Structure: span.Structure, Cable: span.Cable, Span: span.Span, Of: Nothing, Events: []Happening{}, Steps: []Step{},
		Rivals: []Rival{}, Forecasts: []Forecast{}, Curves: []Curve{}, Visits: statesOf(visits), Marks: markTests(visits), Fit: FitTest{P: 1, Widening: 1}}
	for _, e := range events {
		t.Events = append(t.Events, Happening{e.Date, e.Kind, e.Size, e.Unit, e.Note})
	}
	r := reading{Trend: &t, span: span, visits: visits, events: events, opts: o}
	r.read()
	return t, nil
}

// reading is a history on its way to a Trend.
type reading struct {
	*Trend
	span   Span
	visits []dated
	events []happening
	opts   Options

	main, other *model // of the measure that the history is read from, and of the tension beside it; nil when there are no figures
}

func (r *reading) read() {
	lengths, tensions := seriesOf(Length, r.visits), seriesOf(Tension, r.visits)
	main := lengths
	if len(lengths.y) < len(tensions.y) {
		main = tensions
	}
	if len(main.y) > 0 {
		r.model(main, tensions)
		r.changes()
		r.foretell()
	}
	r.next()
	r.say()
	r.rank()
}

// model reads the main series and carries what was found over to the tension: both come from one curve a visit, so a second search
// would only find its noise again.
func (r *reading) model(main, tensions series) {
	r.Of, r.Unit = main.of, "N"
	if main.of == Length {
		r.Unit = "m"
	}
	c := clockOf(r.visits, r.events)
	m := newModel(main, c, append([]term{{kind: level}}, recordedSteps(main, r.events)...))
	switch {
	case len(main.y) > 2:
		m = search(m)
	case len(main.y) == 2 && m.free() == 1:
		// Two visits that differ beyond chance have no common level: the state of today is that of the later one.
		if by := m.difference(); twoSided(by.Value/by.U) < significance {
			m = m.with(term{kind: step, no: main.visits[1].no})
		}
	}
	r.Fit = m.test()
	r.main = m
	if main.of == Length && len(tensions.y) > 0 {
		terms := append([]term{{kind: level}}, recordedSteps(tensions, r.events)...)
		for _, t := range m.terms {
			if t.found() {
				terms = append(terms, t)
			}
		}
		r.other = newModel(tensions, c, terms)
		r.other.test()
	}
}

func statesOf(visits []dated) []State {
	out := []State{}
	for _, v := range visits {
		out = append(out, State{Date: v.Date, ID: v.ID, Survey: v.Survey, Tension: v.Tension, Length: v.Length, Temperature: v.Temperature,
			Loads: string(v.Loads), Verdict: v.Verdict, Ratio: v.Ratio})
	}
	return out
}

// changes fills in what the model says of the past.
func (r *reading) changes() {
	m := r.main
	n := len(m.y)
	for i, v := range m.visits {
		rest := m.y[i] - dot(m.row(m.place(i)), m.b)
		r.Visits[v.no].Residual = &rest
	}
	if n > 1 {
		by := m.difference()
		r.Change = &Change{From: m.visits[0].Date, To: m.visits[n-1].Date, By: by, P: twoSided(by.Value / by.U)}
	}
	for _, t := range recordedSteps(m.series, r.events) {
		r.Steps = append(r.Steps, r.recordedStep(t))
	}
	for _, t := range m.terms {
		if t.found() && n > 2 {
			r.takeFound(t)
		}
	}
	r.Rivals = m.rivals(r.inWords)
	until := r.opts.Today
	for _, c := range []*model{m, r.other} {
		if c != nil {
			r.Curves = append(r.Curves, curveOf(c, until))
		}
	}
}

// takeFound puts a term that was found where it belongs.
func (r *reading) takeFound(t term) {
	m := r.main
	q, _ := m.size(t)
	i := m.indexOf(t.no)
	switch t.kind {
	case step:
		r.Steps = append(r.Steps, Step{After: m.visits[i-1].Date, Before: m.visits[i].Date, Kind: UnrecordedStep, Events: r.loadsBetween(i), By: &q, P: &t.p})
	case pulse:
		r.Steps = append(r.Steps, Step{After: m.visits[i].Date, Before: m.visits[i].Date, Kind: VisitOff, Events: []string{}, By: &q, P: &t.p})
	case warmth:
		r.Warmth = &q
	default:
		r.Drift = r.driftOf(t, q)
	}
}

func (r *reading) driftOf(t term, rate Quantity) *Drift {
	d := Drift{Shape: Linear, Rate: rate, P: t.p}
	c := r.main.clock
	if t.kind == logTime {
		d.Shape, d.Since = LogTime, c.starts[0].Format(dayOnly)
	}
	k := c.at(t, later(yearsFrom(r.opts.Today, 1))) - c.at(t, later(r.opts.Today))
	d.PerYear = Quantity{Value: k * rate.Value, U: k * rate.U}
	return &d
}

// recordedStep holds a step against the size on record.
func (r *reading) recordedStep(t term) Step {
	m := r.main
	i := m.indexOf(t.no)
	s := Step{After: m.visits[i-1].Date, Before: m.visits[i].Date, Kind: RecordedStep, Events: []string{}}
	for _, e := range t.events {
		s.Events = append(s.Events, r.eventText(e))
	}
	if q, ok := m.size(t); ok {
		s.By = &q
	}
	s.Recorded = r.expected(t.events)
	if s.By != nil && s.Recorded != nil {
		off := (s.By.Value - s.Recorded.Value) / math.Hypot(s.By.U, s.Recorded.U)
		p := twoSided(off)
		s.Off, s.P = &off, &p
	}
	return s
}

// expected is the change of S0 that the events of one gap announce; nil when one of them has no size that says it. Turns of one
// gap share the error of a turn.
func (r *reading) expected(events []happening) *Quantity {
	if r.Of != Length {
		return nil
	}
	sum, variance, turns := 0.0, 0.0, 0.0
	pitch := r.span.TakeUpPerTurn
	for _, e := range events {
		per := 1.0
		switch {
		case e.Size == nil || e.Kind != Retensioned:
			return nil
		case e.Unit == "turns" && pitch != nil:
			per = pitch.Value
			turns += e.Size.Value
		case e.Unit != "m":
			return nil
		}
		sum -= per * e.Size.Value
		variance += per * per * e.Size.U * e.Size.U
	}
	if pitch != nil {
		variance += turns * turns * pitch.U * pitch.U
	}
	return &Quantity{Value: sum, U: math.Sqrt(variance)}
}

// loadsBetween are the events of load in the gap before a visit of the main series, as printed.
func (r *reading) loadsBetween(i int) []string {
	out := []string{}
	for _, e := range r.events {
		if e.Kind.ofLoad() && r.main.gapOf(e) == i {
			out = append(out, r.eventText(e))
		}
	}
	return out
}

// foretell holds both measures against their limits.
func (r *reading) foretell() {
	for _, m := range []*model{r.main, r.other} {
		if m == nil {
			continue
		}
		l := r.span.Tension
		if m.of == Length {
			l = r.span.Length
		}
		r.Forecasts = append(r.Forecasts, forecastOf(m, l, r.opts)...)
	}
}
