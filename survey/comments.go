package survey

import (
	"strings"
)

// settling are the conditions on which the meaning of the rows rests; they cannot change below the first row.
var settling = map[string]bool{"unit": true, "structure": true, "cable": true, "span": true}

// comment reads a "# key: value" line.
func (p *PointReader) comment(line int, text []byte) {
	words := strings.TrimSpace(strings.TrimLeft(string(text), "#"))
	if !p.settled {
		p.above = string(text)
	}
	key, value, ok := strings.Cut(words, ":")
	if !ok {
		return // plain words
	}
	key = conditionKey(key)
	if !conditionKeys[key] {
		p.unknownKey(line, key, words)
		return
	}
	if p.settled && settling[key] && !p.conditions.set[key] {
		p.problems.add(Problem{File: p.opts.Name, Line: line, Column: key, Found: words, Expected: "this line above the header", Mend: "move it to the top: the rows above it were read without it"})
		return
	}
	value = strings.TrimSpace(value)
	if p.dialect.mark == ',' {
		value = decimalPoints(value)
	}
	if err := p.conditions.Set(key, value); err != nil {
		p.problems.add(problemOf(err, p.opts.Name, line, key))
	}
}

// unknownKey keeps a line as a note. One whose key is almost that of a condition was meant to count.
func (p *PointReader) unknownKey(line int, key, words string) {
	p.conditions.Notes = append(p.conditions.Notes, words)
	if near := nearestOf(key, conditionKeys); len(key) <= 40 && editDistance(key, near) <= 2 && len(near) > 3 {
		p.notice(line, "", "%s is kept as a note and counts nowhere: did you mean %s?", quote(words), quote(near+":"))
	} else if len(p.conditions.Notes) <= mostListed {
		p.notice(line, "", "%s is no condition that is known: kept as a note", quote(words))
	}
}
