package survey

import (
	"fmt"
	"io"
	"slices"
	"strings"
)

// collect reads all points and sorts them.
func (p *PointReader) collect() (*Survey, error) {
	sv := &Survey{File: p.opts.Name, Flat: p.flat, LengthUnit: p.unitName, Encoding: p.src.encoding, Separator: separatorNames[p.dialect.separator],
		Decimal: map[byte]string{'.': "point", ',': "comma"}[p.dialect.mark], Header: p.Header()}
	p.overrule()
	p.checkStructure()
	codes, err := newResolver(p.opts, p.hasCodes)
	if err != nil {
		return nil, err
	}
	s := sorter{survey: sv, resolver: codes, reader: p, spans: map[[2]string]int{}, ids: map[string]seenPoint{}}
	var pt Point
	for err == nil {
		if err = p.next(&pt); err == nil {
			s.place(&pt)
		}
	}
	if err != io.EOF {
		return nil, err
	}
	if err := p.conditions.check(); err != nil {
		p.problems.add(problemOf(err, p.opts.Name, 0, "loads"))
	}
	sv.Conditions = p.conditions
	p.matchConditions(sv)
	if p.rows == 0 && len(p.problems.Problems) == 0 {
		p.problems.add(Problem{File: p.opts.Name, Expected: "rows of points below the header", Mend: "the file has a header only"})
	}
	if err := p.problems.orNil(); err != nil {
		return nil, err
	}
	if sv.SHA256, err = p.SHA256(); err != nil {
		return nil, err
	}
	sv.PointsRead = p.rows
	s.finish()
	if p.reduced != nil {
		p.reduced.settle(sv)
	}
	return sv, nil
}

// overrule settles structure and cable: options count over the file, and a contradiction is told.
func (p *PointReader) overrule() {
	c := &p.conditions
	if p.opts.Structure == "" {
		p.opts.Structure = c.Structure
	}
	if c.cable != "" && p.opts.Cable != "" && !strings.EqualFold(c.cable, p.opts.Cable) {
		p.notice(0, "", "--cable %s replaces the cable %s that the file names", p.opts.Cable, c.cable)
		c.span = ""
	}
	if p.opts.Cable == "" {
		p.opts.Cable = c.cable
	}
	if p.opts.Span == "" {
		p.opts.Span = c.span
	}
	if p.opts.Span != "" && p.opts.Cable == "" {
		p.problems.add(Problem{File: p.opts.Name, Column: "span", Found: p.opts.Span, Expected: "the cable of that span as well", Mend: "say --cable ID, or add a line \"# cable: ID\" at the top"})
	}
}

// matchConditions refuses loads and readings that would count nowhere, and tells a temperature that is hard to believe.
func (p *PointReader) matchConditions(sv *Survey) {
	unmatched := func(column, found, expected string) {
		p.problems.add(Problem{File: p.opts.Name, Column: column, Found: found, Expected: expected, Mend: "write the cable as in the codes: " + strings.Join(cableNames(sv), ", ")})
	}
	for _, l := range sv.UnmatchedLoads() {
		unmatched("load", l.Cable, "a load on a cable of this survey")
	}
	for _, l := range sv.UnmatchedLocal() {
		unmatched("load", l.Cable, "a load on a cable of this survey")
	}
	for _, r := range sv.UnmatchedReadings() {
		unmatched("reading", r.Cable, "a reading on a cable of this survey")
	}
	if t := p.conditions.CableTemperature; t != nil && oddTemperature(t.Value) {
		p.notice(0, "temperature", "a cable temperature of %.0f °C is unusual: check its unit", t.Value)
	}
}

// oddTemperature reports whether a temperature in degC is one that no cable has outdoors: common practice, no source.
func oddTemperature(degC float64) bool { return degC < -80 || degC > 120 }

// checkStructure narrows the known spans to the structure of the survey.
func (p *PointReader) checkStructure() {
	all := p.opts.Known
	p.opts.Known = OfStructure(all, p.opts.Structure)
	if len(all) > 0 && len(p.opts.Known) == 0 {
		p.problems.add(Problem{File: p.opts.Name, Column: "structure", Found: p.opts.Structure, Expected: fmt.Sprintf("a structure of the cables file, such as %s", quote(all[0].Structure)),
			Mend: "write it the same in both files, or say --structure"})
	}
	seen := map[[2]string]string{}
	for _, d := range p.opts.Known {
		key := [2]string{strings.ToLower(d.Cable), strings.ToLower(d.Span)}
		if other, twice := seen[key]; twice && !strings.EqualFold(other, d.Structure) {
			p.problems.add(Problem{File: p.opts.Name, Column: "structure", Expected: fmt.Sprintf("the structure of the survey: the cables file has cable %s in %s and in %s", quote(d.Cable), quote(other), quote(d.Structure)),
				Mend: "add a line \"# structure: NAME\" at the top, or say --structure"})
			return
		}
		seen[key] = d.Structure
	}
}

// cableNames are the cables of a survey for a message, ten at most.
func cableNames(sv *Survey) (out []string) {
	for _, sp := range sv.Spans {
		switch {
		case slices.Contains(out, sp.Cable):
		case len(out) == 10:
			return append(out, "...")
		default:
			out = append(out, sp.Cable)
		}
	}
	return out
}

// seenPoint is what must be kept of a point to tell a repeated id.
type seenPoint struct {
	line    int
	e, n, z float64
	code    string
}

// sorter puts points where they belong. Every row ends in exactly one place.
type sorter struct {
	survey   *Survey
	resolver *resolver
	reader   *PointReader
	spans    map[[2]string]int
	at       int // the span of the last point
	ids      map[string]seenPoint
	twice    int // rows that repeat another to the digit
	twiceAt  int // line of the first of them
}

func (s *sorter) problem(line int, column, found, expected, mend string) {
	s.reader.problems.add(Problem{File: s.survey.File, Line: line, Column: column, Found: found, Expected: expected, Mend: mend})
}

func (s *sorter) place(pt *Point) {
	if s.repeated(pt) {
		s.survey.Ignored = append(s.survey.Ignored, *pt)
		return
	}
	use := s.resolver.use(pt.Code)
	switch use.Role {
	case Control:
		s.survey.Control = append(s.survey.Control, *pt)
	case Ground:
		s.survey.Ground = append(s.survey.Ground, *pt)
	case Ignored:
		s.refused(use, pt.Line)
		s.survey.Ignored = append(s.survey.Ignored, *pt)
	default:
		s.onSpan(pt, use)
	}
}

// refused tells the problem of a code once, with its first line; that of a file without codes has no line.
func (s *sorter) refused(use *CodeUse, line int) {
	problem, ok := s.resolver.problems[use.Code]
	if !ok {
		return
	}
	delete(s.resolver.problems, use.Code)
	if !s.reader.hasCodes {
		s.problem(0, "", problem.Found, problem.Expected, problem.Mend)
		return
	}
	s.problem(line, "code", problem.Found, problem.Expected, problem.Mend)
}

// repeated finds a second row with the same id: refused when it differs, used once when it does not.
func (s *sorter) repeated(pt *Point) bool {
	if pt.ID == "" {
		return false
	}
	first, again := s.ids[pt.ID]
	if !again {
		s.ids[pt.ID] = seenPoint{pt.Line, pt.E, pt.N, pt.Z, pt.Code}
		return false
	}
	if first.e != pt.E || first.n != pt.N || first.z != pt.Z || first.code != pt.Code {
		s.problem(pt.Line, "id", pt.ID, fmt.Sprintf("an id of its own: line %d has the same one with other values", first.line), "rename one of the two")
		return true
	}
	if s.twice++; s.twice == 1 {
		s.twiceAt = pt.Line
	}
	return true
}

func (s *sorter) onSpan(pt *Point, use *CodeUse) {
	if len(s.survey.Spans) == 0 || s.survey.Spans[s.at].Cable != use.Cable || s.survey.Spans[s.at].Span != use.Span {
		key := [2]string{use.Cable, use.Span}
		i, ok := s.spans[key]
		if !ok {
			i = len(s.survey.Spans)
			s.spans[key] = i
			s.survey.Spans = append(s.survey.Spans, SpanPoints{Cable: use.Cable, Span: use.Span})
		}
		s.at = i
	}
	sp := &s.survey.Spans[s.at]
	var end **Point
	switch use.Role {
	case SupportA:
		end = &sp.A
	case SupportB:
		end = &sp.B
	default:
		if len(sp.Points) == cap(sp.Points) {
			sp.Points = slices.Grow(sp.Points, max(4, len(sp.Points))) // doubling: fewer copies of long clouds
		}
		sp.Points = append(sp.Points, *pt)
		return
	}
	if *end != nil {
		s.problem(pt.Line, "code", pt.Code, fmt.Sprintf("one %s of cable %s: line %d is one already", use.Role, quote(use.Cable), (*end).Line),
			"give one of the two another code, or say --code")
		return
	}
	support := *pt
	*end = &support
}

// finish writes down what was assumed and what looks odd.
func (s *sorter) finish() {
	sv, p := s.survey, s.reader
	for _, u := range s.resolver.order {
		sv.Codes = append(sv.Codes, *u)
	}
	sv.Guesses = p.guesses
	if !p.hasCodes && len(sv.Codes) > 0 && p.opts.Cable == "" {
		sv.Guesses = append(sv.Guesses, Guess{What: "cable", Taken: sv.Codes[0].Cable, Why: "the file has no codes", SetBy: "--cable"})
	}
	if s.twice > 0 {
		p.notice(s.twiceAt, "id", "%d rows repeat an earlier one to the digit, this one first: used once", s.twice)
	}
	for _, text := range s.resolver.tell() {
		p.notice(0, "", "%s", text)
	}
	if n := count(sv.Ignored, func(p Point) bool { return p.Code == "" }); n > 0 && p.hasCodes {
		p.notice(0, "", "points without a code, set aside: %d", n)
	}
	p.lookCutOff()
	index := IndexDesigns(s.resolver.known)
	for _, sp := range sv.Spans {
		s.odd(sp, index.Of(p.opts.Structure, sp.Cable, sp.Span))
		s.mixed(sp)
		s.coinciding(sp)
	}
	sv.Notices = p.notices
}

func count(points []Point, keep func(Point) bool) (n int) {
	for _, p := range points {
		if keep(p) {
			n++
		}
	}
	return n
}
