package survey

import (
	"fmt"
	"io"
	"math"
	"strings"
)

// collect reads all points and sorts them.
func (p *PointReader) collect() (*Survey, error) {
	sv := &Survey{File: p.opts.Name, Flat: p.flat, LengthUnit: p.unitName, Encoding: p.src.encoding, Separator: separatorNames[p.dialect.separator],
		Decimal: map[byte]string{'.': "point", ',': "comma"}[p.dialect.mark]}
	for i, c := range p.columns {
		u := HeaderUse{Column: i + 1, Name: c.name, Field: fieldNames[c.field], Unit: c.unit}
		sv.Header = append(sv.Header, u)
	}
	if p.opts.Structure == "" {
		p.opts.Structure = p.conditions.Structure
	}
	if p.opts.Cable == "" {
		p.opts.Cable, p.opts.Span = p.conditions.cable, p.conditions.span
	}
	p.checkStructure()
	s := sorter{survey: sv, resolver: newResolver(p.opts, p.hasCodes), reader: p, spans: map[[2]string]int{}, ids: map[string]seenPoint{}}
	for {
		pt, err := p.Next()
		if err == io.EOF {
			break
		}
		if err != nil {
			return nil, fmt.Errorf("%s: cannot read: %w", p.opts.Name, err)
		}
		s.place(pt, p.code)
	}
	if err := p.conditions.check(); err != nil {
		p.problems.add(problemOf(err, p.opts.Name, 0, "loads"))
	}
	sv.Conditions = p.conditions
	for _, l := range sv.UnmatchedLoads() {
		p.problems.add(Problem{File: p.opts.Name, Column: "load", Found: l.Cable, Expected: "a load on a cable of this survey", Mend: "write the cable as in the codes: " + strings.Join(cableNames(sv), ", ")})
	}
	for _, r := range sv.UnmatchedReadings() {
		p.problems.add(Problem{File: p.opts.Name, Column: "reading", Found: r.Cable, Expected: "a reading on a cable of this survey", Mend: "write the cable as in the codes: " + strings.Join(cableNames(sv), ", ")})
	}
	if problem, ok := s.resolver.problems[""]; ok {
		s.problem(0, "", problem.Found, problem.Expected, problem.Mend)
	}
	if p.rows == 0 && len(p.problems.Problems) == 0 {
		p.problems.add(Problem{File: p.opts.Name, Expected: "rows of points below the header", Mend: "the file has a header only"})
	}
	if err := p.problems.orNil(); err != nil {
		return nil, err
	}
	sum, err := p.src.hashed()
	if err != nil {
		return nil, fmt.Errorf("%s: cannot read: %w", p.opts.Name, err)
	}
	sv.SHA256, sv.PointsRead = sum, p.rows
	s.finish()
	return sv, nil
}

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

func cableNames(sv *Survey) (out []string) {
	for _, sp := range sv.Spans {
		out = append(out, sp.Cable)
	}
	return out
}

// sorter puts points where they belong. Every row ends in exactly one place.
type sorter struct {
	survey   *Survey
	resolver *resolver
	reader   *PointReader
	spans    map[[2]string]int
	ids      map[string]seenPoint
}

// seenPoint is what must be kept of a point to tell a repeated id.
type seenPoint struct {
	line    int
	e, n, z float64
	code    string
}

func (s *sorter) problem(line int, column, found, expected, mend string) {
	s.reader.problems.add(Problem{File: s.survey.File, Line: line, Column: column, Found: found, Expected: expected, Mend: mend})
}

func (s *sorter) place(pt Point, code []byte) {
	use := s.resolver.use(code)
	pt.Code = use.Code
	if s.repeated(pt) {
		use.Points--
		s.survey.Ignored = append(s.survey.Ignored, pt)
		return
	}
	switch use.Role {
	case Control:
		s.survey.Control = append(s.survey.Control, pt)
	case Ground:
		s.survey.Ground = append(s.survey.Ground, pt)
	case Ignored:
		if problem, ok := s.resolver.problems[use.Code]; ok {
			s.problem(pt.Line, "code", problem.Found, problem.Expected, problem.Mend)
			delete(s.resolver.problems, use.Code)
		}
		s.survey.Ignored = append(s.survey.Ignored, pt)
	default:
		s.onSpan(pt, use)
	}
}

// repeated finds a second row with the same id: refused when the coordinates differ, used once when they do not.
func (s *sorter) repeated(pt Point) bool {
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
	s.survey.Notices = append(s.survey.Notices, Notice{File: s.survey.File, Line: pt.Line, Column: "id",
		Text: fmt.Sprintf("point %s repeats line %d to the digit: used once", quote(pt.ID), first.line)})
	return true
}

func (s *sorter) onSpan(pt Point, use *CodeUse) {
	key := [2]string{use.Cable, use.Span}
	i, ok := s.spans[key]
	if !ok {
		i = len(s.survey.Spans)
		s.spans[key] = i
		s.survey.Spans = append(s.survey.Spans, SpanPoints{Cable: use.Cable, Span: use.Span})
	}
	sp := &s.survey.Spans[i]
	end := map[Role]**Point{SupportA: &sp.A, SupportB: &sp.B}[use.Role]
	switch {
	case end == nil:
		sp.Points = append(sp.Points, pt)
	case *end != nil:
		s.problem(pt.Line, "code", pt.Code, fmt.Sprintf("one %s of cable %s: line %d is one already", use.Role, quote(use.Cable), (*end).Line),
			"give one of the two another code, or say --code")
	default:
		*end = &pt
	}
}

// finish writes down what was assumed and what looks odd.
func (s *sorter) finish() {
	sv := s.survey
	for _, u := range s.resolver.order {
		sv.Codes = append(sv.Codes, *u)
	}
	sv.Guesses = s.reader.guesses
	if !s.reader.hasCodes && len(sv.Codes) > 0 && s.reader.opts.Cable == "" {
		sv.Guesses = append(sv.Guesses, Guess{What: "cable", Taken: sv.Codes[0].Cable, Why: "the file has no codes", SetBy: "--cable"})
	}
	sv.Notices = append(s.reader.notices, sv.Notices...)
	for _, n := range s.resolver.notices {
		sv.Notices = append(sv.Notices, Notice{File: sv.File, Text: n})
	}
	if n := count(sv.Ignored, func(p Point) bool { return p.Code == "" }); n > 0 && s.reader.hasCodes {
		sv.Notices = append(sv.Notices, Notice{File: sv.File, Text: fmt.Sprintf("%d points have no code and are set aside", n)})
	}
	index := IndexDesigns(s.resolver.known)
	for _, sp := range sv.Spans {
		s.odd(sp, index.Of(s.reader.opts.Structure, sp.Cable, sp.Span))
	}
}

func count(points []Point, keep func(Point) bool) (n int) {
	for _, p := range points {
		if keep(p) {
			n++
		}
	}
	return n
}

// extent is the diagonal of the points in plan, m.
func extent(points []Point) float64 {
	lo, hi := [2]float64{math.Inf(1), math.Inf(1)}, [2]float64{math.Inf(-1), math.Inf(-1)}
	for _, p := range points {
		for k, v := range [2]float64{p.E, p.N} {
			lo[k], hi[k] = math.Min(lo[k], v), math.Max(hi[k], v)
		}
	}
	return math.Hypot(hi[0]-lo[0], hi[1]-lo[1])
}

// odd tells a chord that does not fit the design span, by a factor of feet to metres above all.
func (s *sorter) odd(sp SpanPoints, d *Design) {
	if d == nil || d.SpanLength == nil {
		return
	}
	chord, what := extent(sp.Points), "points reach over"
	if sp.A != nil && sp.B != nil {
		chord, what = math.Hypot(sp.A.E-sp.B.E, sp.A.N-sp.B.N), "supports are apart by"
	}
	ratio := chord / d.SpanLength.Value
	add := func(text string) {
		s.survey.Notices = append(s.survey.Notices, Notice{File: s.survey.File, Text: fmt.Sprintf("cable %s: the surveyed %s %.3f m, the design span is %.3f m: %s", quote(sp.Cable), what, chord, d.SpanLength.Value, text)})
	}
	switch {
	case math.Abs(ratio*foot-1) < 0.05:
		add("the file may be in feet: say --unit ft or us-ft")
	case math.Abs(ratio/foot-1) < 0.02 && sp.A != nil && sp.B != nil:
		add("the file may be in metres: check --unit and the units in the header")
	case ratio > 1.01, ratio < 0.99 && sp.A != nil && sp.B != nil:
		add("check the codes, the units and the cables file")
	}
}
