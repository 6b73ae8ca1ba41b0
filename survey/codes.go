package survey

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
)

// CodeRule says what one code of a survey file is on.
type CodeRule struct {
	Code  string
	Role  Role
	Cable string
	Span  string
}

// ParseCodeRule reads "CODE=CABLE", "CODE=CABLE/SPAN", "CODE=CABLE/A", "CODE=CABLE/SPAN/B", "CODE=control", "CODE=ground" or
// "CODE=ignore".
func ParseCodeRule(text string) (CodeRule, error) {
	code, target, ok := strings.Cut(text, "=")
	code, target = strings.TrimSpace(code), strings.TrimSpace(target)
	if !ok || code == "" || target == "" {
		return CodeRule{}, wrong(text, "CODE=CABLE, CODE=CABLE/A, CODE=CABLE/SPAN/B, CODE=control, CODE=ground or CODE=ignore", "")
	}
	switch strings.ToLower(target) {
	case "control":
		return CodeRule{Code: code, Role: Control}, nil
	case "ground":
		return CodeRule{Code: code, Role: Ground}, nil
	case "ignore":
		return CodeRule{Code: code, Role: Ignored}, nil
	}
	r := CodeRule{Code: code, Role: OnCable}
	parts := strings.Split(target, "/")
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	if end, ok := support(parts[len(parts)-1]); ok && len(parts) > 1 {
		r.Role, parts = end, parts[:len(parts)-1]
	}
	if len(parts) > 2 || slices.Contains(parts, "") || len(plain(parts[0])) == 0 {
		return CodeRule{}, wrong(target, "CABLE, CABLE/SPAN, CABLE/A or CABLE/SPAN/A after the =", "")
	}
	r.Cable = parts[0]
	if len(parts) == 2 {
		r.Span = parts[1]
	}
	return r, nil
}

func support(token string) (Role, bool) {
	switch strings.ToUpper(token) {
	case "A":
		return SupportA, true
	case "B":
		return SupportB, true
	}
	return "", false
}

// plainWords are codes that stand for the same thing in every survey: common practice, no source.
var plainWords = map[string]Role{"CP": Control, "CTRL": Control, "CONTROL": Control, "BM": Control, "TBM": Control,
	"GND": Ground, "GROUND": Ground, "TOPO": Ground}

// plainRole is the role of a code that is one of the plain words, alone or numbered ("CP", "CP 2", "BM7"). More words mean
// something else: a ground wire is a cable.
func plainRole(tokens []string) (Role, bool) {
	if len(tokens) == 0 || len(tokens) > 2 {
		return "", false
	}
	digits := func(c rune) bool { return c >= '0' && c <= '9' }
	if len(tokens) == 2 && strings.TrimFunc(tokens[1], digits) != "" {
		return "", false
	}
	role, ok := plainWords[strings.ToUpper(strings.TrimRight(strings.TrimRightFunc(tokens[0], digits), "-_"))]
	return role, ok
}

// resolver turns codes into cables, spans and roles, once for each code.
type resolver struct {
	rules    map[string]CodeRule
	used     map[string]bool // rules that a point had
	known    []Design
	byName   map[string][]int  // places in known by cable and span, and by cable, in plain spelling
	names    map[string]string // first spelling of a cable or span: spellings that differ by case are one
	cable    string            // --cable
	span     string
	hasCodes bool
	cache    map[string]*CodeUse
	last     *CodeUse
	order    []*CodeUse
	problems map[string]Problem // by code
	unknown  []*CodeUse         // codes that the cables file does not know
	notices  []string
}

// newResolver indexes rules and known spans. Rules that give one code two meanings are refused.
func newResolver(o PointOptions, hasCodes bool) (*resolver, error) {
	r := &resolver{rules: map[string]CodeRule{}, used: map[string]bool{}, known: o.Known, byName: map[string][]int{}, names: map[string]string{}, cable: o.Cable, span: o.Span,
		hasCodes: hasCodes, cache: map[string]*CodeUse{}, problems: map[string]Problem{}}
	for i, d := range o.Known {
		whole, cable := plain(d.Cable, d.Span), plain(d.Cable)
		r.byName[whole] = append(r.byName[whole], i)
		if cable != whole {
			r.byName[cable] = append(r.byName[cable], i)
		}
		r.spelled(d.Cable)
		r.spelled(d.Span)
	}
	for _, c := range o.Codes {
		key := strings.ToLower(c.Code)
		if other, twice := r.rules[key]; twice && other != c {
			return nil, fmt.Errorf("--code: found %s twice with different meanings, expected one meaning for each code; take one of the two out", quote(c.Code))
		}
		r.rules[key] = c
	}
	return r, nil
}

// use is the meaning of a code; the points that carry it are counted.
func (r *resolver) use(code string) *CodeUse {
	if r.last != nil && r.last.Code == code {
		r.last.Points++
		return r.last
	}
	u, ok := r.cache[code]
	if !ok {
		u = r.resolve(code)
		u.Code = code
		r.cache[code] = u
		r.order = append(r.order, u)
	}
	u.Points++
	r.last = u
	return u
}

// resolve applies, in this order: rules given by flag; ids of the cables file as they stand; words that stand for control and
// ground; --cable; ids of the cables file with a support A or B behind them; and, when there is no cables file, the code itself
// as the id of a cable. With --cable all but rules, control and ground is on that cable.
func (r *resolver) resolve(code string) *CodeUse {
	if rule, ok := r.rules[strings.ToLower(code)]; ok {
		r.used[strings.ToLower(code)] = true
		if rule.Role == Control || rule.Role == Ground || rule.Role == Ignored {
			return &CodeUse{Role: rule.Role, How: "--code"}
		}
		return r.named(code, rule.Cable, rule.Span, rule.Role, "--code")
	}
	exact, isKnown := r.exact(plain(code))
	tokens := strings.FieldsFunc(code, parting)
	role, rest := OnCable, tokens
	if n := len(tokens); n > 0 && !isKnown {
		if end, ok := support(tokens[n-1]); ok {
			role, rest = end, tokens[:n-1]
		}
		if word, ok := plainRole(tokens); ok {
			return &CodeUse{Role: word, How: "usual word for " + string(word)}
		}
	}
	switch {
	case r.cable != "":
		if isKnown && !strings.EqualFold(exact.Cable, r.cable) {
			r.notices = append(r.notices, fmt.Sprintf("code %s is another cable in the cables file: its points are taken as on %s, because --cable or the cable line of the file says so", quote(code), quote(r.cable)))
		}
		return r.named(code, r.cable, r.span, role, "--cable, or the cable line of the file")
	case isKnown:
		return &CodeUse{Role: OnCable, Cable: exact.Cable, Span: exact.Span, How: "id in the cables file"}
	case !r.hasCodes:
		return r.without()
	case len(tokens) == 0:
		return &CodeUse{Role: Ignored, How: "no code; --code cannot name it, fill the cell"}
	case len(r.known) > 0:
		return r.fromKnown(code, rest, role)
	case len(rest) == 0:
		return &CodeUse{Role: role, Cable: "cable 1", How: "support of the only cable; --code " + code + "=CABLE/" + code + " changes it"}
	}
	u := &CodeUse{Role: role, Cable: r.spelled(strings.Join(rest, " ")), How: "the code is taken as the id of a cable; --code changes it"}
	if strings.Contains(code, "/") && len(rest) == 2 {
		u.Cable, u.Span = r.spelled(rest[0]), r.spelled(rest[1])
	}
	return u
}

// exact is the known span of which a plain code is the whole id: of cable and span, or of a cable with one span.
func (r *resolver) exact(code string) (Design, bool) {
	found := r.byName[code]
	for _, i := range found {
		if d := r.known[i]; code == plain(d.Cable, d.Span) {
			return d, true
		}
	}
	if len(found) == 1 && code != "" {
		return r.known[found[0]], true
	}
	return Design{}, false
}

// named is a cable and span that a flag or a line of the file names; the span is found when the cable has one.
func (r *resolver) named(code, cable, span string, role Role, how string) *CodeUse {
	u := &CodeUse{Role: role, Cable: r.spelled(cable), Span: r.spelled(span), How: how}
	if len(r.known) == 0 {
		return u
	}
	if d, ok := r.exact(plain(cable, span)); ok {
		u.Cable, u.Span = d.Cable, d.Span
		return u
	}
	if same := r.byName[plain(cable)]; span == "" && len(same) > 1 {
		return r.needsSpan(code, same)
	}
	text := fmt.Sprintf("%s names %s, which is not in the cables file: there is no design to compare with", how, quote(strings.TrimSuffix(cable+"/"+span, "/")))
	if !slices.Contains(r.notices, text) {
		r.notices = append(r.notices, text)
	}
	return u
}

// needsSpan refuses a cable of several spans without its span.
func (r *resolver) needsSpan(code string, same []int) *CodeUse {
	d := r.known[same[0]]
	r.problems[code] = Problem{Found: code, Expected: fmt.Sprintf("the span as well: cable %s has %d spans in the cables file", quote(d.Cable), len(same)),
		Mend: fmt.Sprintf("write %s/%s, or say --code", d.Cable, d.Span)}
	if !r.hasCodes {
		r.problems[code] = Problem{Expected: r.problems[code].Expected, Mend: fmt.Sprintf("say --span %s", d.Span)}
	}
	return &CodeUse{Role: Ignored, How: "span missing"}
}

// without is the meaning of points in a file that has no codes.
func (r *resolver) without() *CodeUse {
	switch len(r.known) {
	case 0:
		return &CodeUse{Role: OnCable, Cable: "cable 1", How: "the file has no codes: all points are taken as one cable; --cable names it"}
	case 1:
		return &CodeUse{Role: OnCable, Cable: r.known[0].Cable, Span: r.known[0].Span, How: "the file has no codes and the cables file one span; --cable changes it"}
	}
	r.problems[""] = Problem{Expected: "the cable that the points are on", Mend: "the file has no codes and the cables file " + fmt.Sprint(len(r.known)) + " spans: say --cable ID, or add a line \"# cable: ID\" at the top"}
	return &CodeUse{Role: Ignored, How: "cable missing"}
}

// spelled is the first spelling of a cable or span, that of the cables file before all others.
func (r *resolver) spelled(name string) string {
	key := strings.ToLower(name)
	if first, ok := r.names[key]; ok {
		return first
	}
	r.names[key] = name
	return name
}

// fromKnown finds a code with a support behind it among the ids of the cables file; what it does not know is set aside, with the
// nearest id named.
func (r *resolver) fromKnown(code string, rest []string, role Role) *CodeUse {
	whole := plain(rest...)
	if d, ok := r.exact(whole); ok {
		return &CodeUse{Role: role, Cable: d.Cable, Span: d.Span, How: "id in the cables file"}
	}
	same := r.byName[whole]
	switch {
	case len(same) > 1:
		return r.needsSpan(code, same)
	case len(rest) == 0 && len(r.known) == 1:
		return &CodeUse{Role: role, Cable: r.known[0].Cable, Span: r.known[0].Span, How: "support of the only span in the cables file"}
	}
	u := &CodeUse{Role: Ignored, How: "not in the cables file; --code changes it"}
	r.unknown = append(r.unknown, u)
	return u
}

func parting(c rune) bool { return unicode.IsSpace(c) || strings.ContainsRune("/:;,|", c) }

// plain is a code or an id without what spelling varies.
func plain(parts ...string) string {
	return strings.ToLower(strings.Join(strings.FieldsFunc(strings.Join(parts, " "), parting), " "))
}

// tell are the notices about codes: those that the cables file does not know with the nearest id, and rules that no point had.
func (r *resolver) tell() []string {
	out := r.notices
	for i, u := range r.unknown {
		if i == mostListed {
			out = append(out, fmt.Sprintf("%d more codes are not in the cables file: their points are set aside", len(r.unknown)-i))
			break
		}
		near := r.nearest(plain(u.Code))
		out = append(out, fmt.Sprintf("code %s is not in the cables file: its points (%d) are set aside. Nearest id: %s; --code %q says what it is", quote(u.Code), u.Points, quote(near), u.Code+"="+near))
	}
	var idle []string
	for key, rule := range r.rules {
		if !r.used[key] {
			idle = append(idle, fmt.Sprintf("no point has the code %s of --code", quote(rule.Code)))
		}
	}
	slices.Sort(idle)
	return append(out, idle...)
}

// nearest is the known cable id with the least edit distance.
func (r *resolver) nearest(text string) string {
	names := map[string]bool{}
	for _, d := range r.known {
		names[strings.ToLower(d.Cable)] = true
	}
	return r.spelled(nearestOf(text, names))
}

// nearestOf is the name with the least edit distance to a text; of equal ones the first in the alphabet.
func nearestOf(text string, names map[string]bool) string {
	best, at := "", 1<<30
	for name := range names {
		if n := editDistance(text, name); n < at || (n == at && name < best) {
			best, at = name, n
		}
	}
	return best
}

// editDistance is the Levenshtein distance (1966).
func editDistance(a, b string) int {
	x, y := []rune(a), []rune(b)
	if len(x) > 100 {
		x = x[:100]
	}
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i, c := range x {
		last := row[0]
		row[0] = i + 1
		for j, d := range y {
			cost := last
			if c != d {
				cost++
			}
			last = row[j+1]
			row[j+1] = min(cost, row[j+1]+1, row[j]+1)
		}
	}
	return row[len(y)]
}
