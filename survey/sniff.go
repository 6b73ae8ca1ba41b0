package survey

import (
	"bytes"
	"strings"
)

// dialect is how the cells of a file are written.
type dialect struct {
	separator byte
	mark      byte // decimal mark
}

var separatorNames = map[byte]string{',': "comma", ';': "semicolon", '\t': "tab", ' ': "blanks"}

func separatorByName(name string) (byte, bool) {
	for b, n := range separatorNames {
		if n == name || string(rune(b)) == name {
			return b, true
		}
	}
	return 0, false
}

// sniff finds separator and decimal mark from the head of a text: the separator that gives every line the same number of
// cells and the most columns of numbers wins; then the mark that the numbers use.
func sniff(head []byte, returns bool) (dialect, bool) {
	lines := sampleLines(head, returns)
	best, bestScore := dialect{',', '.'}, 0
	for _, sep := range []byte{'\t', ';', ',', ' '} {
		d, score := weigh(lines, sep)
		if score > bestScore {
			best, bestScore = d, score
		}
	}
	return best, bestScore > 0
}

// sampleLines are up to 200 lines that are neither blank nor comments; a last line that may be cut is left out.
func sampleLines(head []byte, returns bool) (out []string) {
	text := string(head)
	if returns {
		text = strings.ReplaceAll(text, "\r", "\n")
	}
	lines := strings.Split(text, "\n")
	if len(head) >= headSize && len(lines) > 1 {
		lines = lines[:len(lines)-1]
	}
	for _, l := range lines {
		l = strings.TrimRight(l, "\r")
		if t := strings.TrimSpace(l); t == "" || t[0] == '#' || t == string(rune(endOfText)) {
			continue
		}
		if out = append(out, l); len(out) == 200 {
			break
		}
	}
	return out
}

// weigh scores one separator: ten for every column of numbers, one for an even count of cells.
func weigh(lines []string, sep byte) (dialect, int) {
	d := dialect{sep, '.'}
	rec := &records{separator: sep}
	counts := map[int]int{}
	var rows [][]string
	for _, l := range lines {
		cells := rec.split([]byte(strings.ReplaceAll(l, `"`, "")))
		row := make([]string, len(cells))
		for i, c := range cells {
			row[i] = string(c)
		}
		counts[len(row)]++
		rows = append(rows, row)
	}
	usual := 0
	for n, c := range counts {
		if c > counts[usual] || (c == counts[usual] && n > usual) {
			usual = n
		}
	}
	if usual < 2 {
		return d, 0
	}
	body := rows
	if len(rows) > 1 {
		body = rows[1:] // the first may be a header
	}
	score, points, commas := 0, 0, 0
	for col := range usual {
		numbers := 0
		for _, row := range body {
			if col >= len(row) {
				continue
			}
			_, p := parseNumber([]byte(row[col]), '.')
			_, c := parseNumber([]byte(row[col]), ',')
			if p == "" || c == "" {
				numbers++
			}
			switch {
			case p == "" && c != "":
				points++
			case c == "" && p != "":
				commas++
			}
		}
		if 10*numbers >= 9*len(body) {
			score += 10
		}
	}
	if sep != ',' && commas > points {
		d.mark = ','
	}
	if counts[usual] == len(rows) {
		score++
	}
	return d, score
}

// shown is a row as it stood, for messages.
func shown(cells [][]byte, sep byte) string {
	s := string(sep)
	if sep == ' ' {
		s = " "
	}
	return string(bytes.Join(cells, []byte(s)))
}
