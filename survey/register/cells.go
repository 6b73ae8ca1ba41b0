package register

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"tautbook/survey"
)

// A cell of the exchange is plain text. Backslash and carriage return are written \\ and \r, because CSV readers turn the latter into a
// line feed. A text that a spreadsheet could take for a formula gets an apostrophe before it, and so does one that begins with an
// apostrophe, so that reading gives every text back as it was. A number that is not given is an empty cell.

// cellOf writes the value of a column.
func cellOf(at any) string {
	switch v := valueOf(at).(type) {
	case string:
		return Guarded(v)
	case int64:
		return strconv.FormatInt(v, 10)
	case float64:
		return exact(v)
	}
	return ""
}

var escapes = strings.NewReplacer(`\`, `\\`, "\r", `\r`)

// Guarded is a text as a CSV cell that is safe to open in a spreadsheet.
func Guarded(s string) string {
	s = escapes.Replace(s)
	if s == "" || !strings.ContainsRune("=+-@\t'", rune(s[0])) {
		return s
	}
	if _, err := strconv.ParseFloat(s, 64); err == nil && strings.Trim(s, "+-.0123456789eE") == "" {
		return s
	}
	return "'" + s
}

// unguarded is the text that Guarded was given.
func unguarded(cell string) (string, error) {
	cell = strings.TrimPrefix(cell, "'")
	if !strings.Contains(cell, `\`) {
		return cell, nil
	}
	var b strings.Builder
	for i := 0; i < len(cell); i++ {
		if cell[i] != '\\' {
			b.WriteByte(cell[i])
			continue
		}
		i++
		switch {
		case i < len(cell) && cell[i] == '\\':
			b.WriteByte('\\')
		case i < len(cell) && cell[i] == 'r':
			b.WriteByte('\r')
		default:
			return "", fmt.Errorf("found a lone backslash in %q, expected it doubled", cell)
		}
	}
	return b.String(), nil
}

// setCell reads a cell into the place of a column.
func setCell(at any, cell string) error {
	switch at := at.(type) {
	case *string:
		text, err := unguarded(cell)
		if err == nil && plain(text) != text {
			err = fmt.Errorf("found %q, expected UTF-8 text without zero bytes", text)
		}
		*at = text
		return err
	case *int64:
		n, err := strconv.ParseInt(cell, 10, 64)
		if err != nil {
			return fmt.Errorf("found %q, expected a whole number", cell)
		}
		*at = n
		return nil
	}
	if cell == "" {
		return nil
	}
	v, err := strconv.ParseFloat(cell, 64)
	if err != nil || math.IsNaN(v) || math.IsInf(v, 0) {
		return fmt.Errorf("found %q, expected a number or nothing", cell)
	}
	switch at := at.(type) {
	case optional:
		*at.of = &v
	case half:
		if *at.of == nil {
			if at.u {
				return fmt.Errorf("found the uncertainty %q of a value that is not given", cell)
			}
			*at.of = new(survey.Quantity)
		}
		return at.Scan(v)
	}
	return nil
}
