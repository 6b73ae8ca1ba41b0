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
	if end, ok := support(parts[len(parts)-1]); ok && len(parts) > 1 {
		r.Role, parts = end, parts[:len(parts)-1]
	}
	if len(parts) > 2 || slices.Contains(parts, "") {
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

// resolver turns codes into cables, spans and roles, once for each code.
type resolver struct {
	rules    map[string]CodeRule
	known    []Design
	byName   map[string][]int // places in known by cable and span, and by cable, in plain spelling
	cable    string           // --cable
	span     string
	hasCodes bool
	cache    map[string]*CodeUse
	order    []*CodeUse
	problems map[string]Problem // by code
	notices  []string
}

func newResolver(o PointOptions, hasCodes bool) *resolver {
	r := &resolver{rules: map[string]CodeRule{}, known: o.Known, cable: o.Cable, span: o.Span, hasCodes: hasCodes, cache: map[string]*CodeUse{}, problems: map[string]Problem{}}
	r.byName = map[string][]int{}
	for i, d := range o.Known {
		whole, cable := plain(d.Cable, d.Span), plain(d.Cable)
		r.byName[whole] = append(r.byName[whole], i)
		if cable != whole {
			r.byName[cable] = append(r.byName[cable], i)
		}
	}
	for _, c := range o.Codes {
		r.rules[strings.ToLower(c.Code)] = c
	}
	return r
}

// use is the meaning of a code; the points that carry it are counted.
func (r *resolver) use(code []byte) *CodeUse {
	if u, ok := r.cache[string(code)]; ok {
		u.Points++
		return u
	}
	u := r.resolve(string(code))
	u.Code, u.Points = string(code), 1
	r.cache[u.Code] = u
	r.order = append(r.order, u)
	return u
}

// resolve applies, in this order: rules given by flag, --cable, ids of the cables file, words that stand for control and ground, and, when
// there is no cables file, the code itself as the id of a cable.
func (r *resolver) resolve(code string) *CodeUse {
	if rule, ok := r.rules[strings.ToLower(code)]; ok {
		return &CodeUse{Role: rule.Role, Cable: r.spelled(rule.Cable), Span: rule.Span, How: "--code"}
	}
	tokens := strings.FieldsFunc(code, func(c rune) bool { return unicode.IsSpace(c) || strings.ContainsRune("/:;,|", c) })
	role, rest := OnCable, tokens
	if n := len(tokens); n > 0 {
		if end, ok := support(tokens[n-1]); ok {
			role, rest = end, tokens[:n-1]
		}
		if plain, ok := plainWords[strings.ToUpper(tokens[0])]; ok {
			return &CodeUse{Role: plain, How: "usual word for " + string(plain)}
		}
	}
	switch {
	case r.cable != "":
		return &CodeUse{Role: role, Cable: r.spelled(r.cable), Span: r.span, How: "--cable, or the cable line of the file"}
	case !r.hasCodes:
		return r.without()
	case len(tokens) == 0:
		return &CodeUse{Role: Ignored, How: "no code; --code cannot name it, fill the cell"}
	case len(r.known) > 0:
		return r.fromKnown(code, rest, role)
	case len(rest) == 0:
		return &CodeUse{Role: role, Cable: "cable 1", How: "support of the only cable; --code " + code + "=CABLE/" + code + " changes it"}
	}
	u := &CodeUse{Role: role, Cable: strings.Join(rest, " "), How: "the code is taken as the id of a cable; --code changes it"}
	if strings.Contains(code, "/") && len(rest) == 2 {
		u.Cable, u.Span = rest[0], rest[1]
	}
	return u
}

// without is the meaning of points in a file that has no codes.
func (r *resolver) without() *CodeUse {
	u := &CodeUse{Role: OnCable, Cable: "cable 1", How: "the file has no codes: all points are taken as one cable; --cable names it"}
	if len(r.known) == 1 {
		u.Cable, u.Span = r.known[0].Cable, r.known[0].Span
		u.How = "the file has no codes and the cables file one span; --cable changes it"
	} else if len(r.known) > 1 {
		r.problems[""] = Problem{Expected: "the cable that the points are on", Mend: "the file has no codes and the cables file " + fmt.Sprint(len(r.known)) + " spans: say --cable ID, or add a line \"# cable: ID\" at the top"}
	}
	return u
}

// spelled is the spelling of the cables file for a cable that it knows.
func (r *resolver) spelled(cable string) string {
	for _, d := range r.known {
		if strings.EqualFold(d.Cable, cable) {
			return d.Cable
		}
	}
	return cable
}

// fromKnown finds a code among the ids of the cables file; what it does not know is set aside, with the nearest id named.
func (r *resolver) fromKnown(code string, rest []string, role Role) *CodeUse {
	whole := plain(rest...)
	var same []Design
	for _, i := range r.byName[whole] {
		d := r.known[i]
		if whole == plain(d.Cable, d.Span) {
			return &CodeUse{Role: role, Cable: d.Cable, Span: d.Span, How: "id in the cables file"}
		}
		same = append(same, d)
	}
	switch {
	case len(same) == 1:
		return &CodeUse{Role: role, Cable: same[0].Cable, Span: same[0].Span, How: "id in the cables file"}
	case len(same) > 1:
		r.problems[code] = Problem{Found: code, Expected: fmt.Sprintf("the span as well: cable %s has %d spans in the cables file", quote(same[0].Cable), len(same)),
			Mend: fmt.Sprintf("write %s/%s, or say --code", same[0].Cable, same[0].Span)}
		return &CodeUse{Role: Ignored, How: "span missing"}
	case len(rest) == 0 && len(r.known) == 1:
		return &CodeUse{Role: role, Cable: r.known[0].Cable, Span: r.known[0].Span, How: "support of the only span in the cables file"}
	case plain(code) != whole: // an id may itself end in A or B
		for _, i := range r.byName[plain(code)] {
			d := r.known[i]
			return &CodeUse{Role: OnCable, Cable: d.Cable, Span: d.Span, How: "id in the cables file"}
		}
	}
	near := r.nearest(whole)
	r.notices = append(r.notices, fmt.Sprintf("code %s is not in the cables file: its points are set aside. Nearest id: %s; --code %q says what it is", quote(code), quote(near), code+"="+near))
	return &CodeUse{Role: Ignored, How: "not in the cables file; --code changes it"}
}

// plain is a code or an id without what spelling varies.
func plain(parts ...string) string {
	return strings.ToLower(strings.Join(strings.FieldsFunc(strings.Join(parts, " "), func(c rune) bool { return unicode.IsSpace(c) || strings.ContainsRune("/:;,|", c) }), " "))
}

// nearest is the known cable id with the least edit distance.
func (r *resolver) nearest(text string) string {
	best, at := "", 1<<30
	for _, d := range r.known {
		if n := editDistance(text, strings.ToLower(d.Cable)); n < at {
			best, at = d.Cable, n
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
