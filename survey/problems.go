package survey

import (
	"errors"
	"fmt"
	"strings"
	"unicode"
)

// Problem is one thing in an input that must be mended before it can be used.
type Problem struct {
	File     string
	Line     int    // counted from 1; 0 when it concerns the whole file
	Column   string // header name or number of the column, "" when it concerns the whole line
	Found    string // the text found, "" when something is absent
	Expected string // what was expected
	Mend     string // the edit or flag that mends it, "" when there is no single one
}

// longest is the length to which a found text is cut in a message.
const longest = 60

// Error gives the problem as one line: place, what was found, what was expected, how to mend it.
func (p Problem) Error() string {
	var b strings.Builder
	b.WriteString(p.File)
	if p.Line > 0 {
		fmt.Fprintf(&b, ":%d", p.Line)
	}
	b.WriteString(": ")
	if p.Column != "" {
		fmt.Fprintf(&b, "column %s: ", quote(p.Column))
	}
	if p.Found != "" {
		fmt.Fprintf(&b, "found %s, ", quote(p.Found))
	}
	b.WriteString("expected " + p.Expected)
	if p.Mend != "" {
		b.WriteString("; " + p.Mend)
	}
	return harmless(b.String())
}

// harmless is a text without characters that a terminal would act upon or that would break the line: ids and codes come
// from files.
func harmless(s string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsControl(r) || unicode.Is(unicode.Cf, r) || unicode.Is(unicode.Zl, r) || unicode.Is(unicode.Zp, r) {
			return unicode.ReplacementChar
		}
		return r
	}, s)
}

// quote makes text from a file safe and short for a message.
func quote(s string) string {
	if r := []rune(s); len(r) > longest {
		s = string(r[:longest]) + "..."
	}
	return fmt.Sprintf("%q", s)
}

// mostListed is the number of problems that a message lists.
const mostListed = 20

// InputError holds every problem of one input. At most mostListed are kept in full.
type InputError struct {
	Problems []Problem
	More     int // problems beyond those kept
}

// Error lists the problems, one a line.
func (e *InputError) Error() string {
	lines := make([]string, 0, len(e.Problems)+1)
	for _, p := range e.Problems {
		lines = append(lines, p.Error())
	}
	if e.More > 0 {
		lines = append(lines, fmt.Sprintf("and %d more", e.More))
	}
	return strings.Join(lines, "\n")
}

// add keeps a problem.
func (e *InputError) add(p Problem) {
	if len(e.Problems) < mostListed {
		e.Problems = append(e.Problems, p)
	} else {
		e.More++
	}
}

// join adds the problems of another error.
func (e *InputError) join(other *InputError) {
	for _, p := range other.Problems {
		e.add(p)
	}
	e.More += other.More
}

// orNil is the error, or nil when there is no problem.
func (e *InputError) orNil() error {
	if len(e.Problems) == 0 {
		return nil
	}
	return e
}

// valueError is a value of a flag or a condition that was refused.
type valueError struct{ found, expected, mend string }

// Error is "found X, expected Y; mend".
func (e *valueError) Error() string {
	text := "expected " + e.expected
	if e.found != "" {
		text = "found " + quote(e.found) + ", " + text
	}
	if e.mend != "" {
		text += "; " + e.mend
	}
	return harmless(text)
}

func wrong(found, expected, mend string) error { return &valueError{found, expected, mend} }

// problemOf places a refused value in a file.
func problemOf(err error, file string, line int, column string) Problem {
	var v *valueError
	if errors.As(err, &v) {
		return Problem{File: file, Line: line, Column: column, Found: v.found, Expected: v.expected, Mend: v.mend}
	}
	return Problem{File: file, Line: line, Column: column, Expected: err.Error()}
}
