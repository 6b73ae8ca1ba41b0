package register

import (
	"database/sql/driver"
	"fmt"
	"strings"

	"tautbook/survey"
)

// column is one SQL column of a row and where its value stands in memory; the place serves as argument of a statement and as target
// of a scan. A row is described by its columns once: writing, reading, comparing and the exchange all go by that list.
type column struct {
	name string
	at   any // *string, *int64, *[]byte, half or optional
}

// half is the value or the uncertainty of an optional quantity: NULL when there is none.
type half struct {
	of **survey.Quantity
	u  bool
}

// Value is the number to store.
func (h half) Value() (driver.Value, error) {
	switch {
	case *h.of == nil:
		return nil, nil
	case h.u:
		return (*h.of).U, nil
	}
	return (*h.of).Value, nil
}

// Scan takes a stored number.
func (h half) Scan(src any) error {
	v, given, err := number(src)
	if err != nil || !given {
		return err
	}
	if *h.of == nil {
		*h.of = new(survey.Quantity)
	}
	if h.u {
		(*h.of).U = v
	} else {
		(*h.of).Value = v
	}
	return nil
}

// optional is a number that may be missing.
type optional struct{ of **float64 }

// Value is the number to store.
func (o optional) Value() (driver.Value, error) {
	if *o.of == nil {
		return nil, nil
	}
	return **o.of, nil
}

// Scan takes a stored number.
func (o optional) Scan(src any) error {
	v, given, err := number(src)
	if err == nil && given {
		*o.of = &v
	}
	return err
}

func number(src any) (v float64, given bool, err error) {
	switch x := src.(type) {
	case nil:
		return 0, false, nil
	case float64:
		return x, true, nil
	case int64:
		return float64(x), true, nil
	}
	return 0, false, fmt.Errorf("found %q, expected a number", fmt.Sprint(src))
}

// quantity is the two columns of an optional quantity.
func quantity(name string, at **survey.Quantity) []column {
	return []column{{name, half{at, false}}, {"u_" + name, half{at, true}}}
}

// columnsOf joins columns, lists of columns and quantities in order.
func columnsOf(parts ...any) (out []column) {
	for _, p := range parts {
		switch p := p.(type) {
		case column:
			out = append(out, p)
		case []column:
			out = append(out, p...)
		}
	}
	return out
}

// names is the column list of a statement, with a prefix before each name.
func names(cols []column, prefix string) string {
	out := make([]string, len(cols))
	for i, c := range cols {
		out[i] = prefix + c.name
	}
	return strings.Join(out, ", ")
}

// places are the values of a row as arguments or scan targets.
func places(cols []column) []any {
	out := make([]any, len(cols))
	for i, c := range cols {
		out[i] = c.at
	}
	return out
}

// insertInto is the statement that adds a row.
func insertInto(table string, cols []column) string {
	marks := make([]string, len(cols))
	for i := range cols {
		marks[i] = fmt.Sprintf("$%d", i+1)
	}
	return fmt.Sprintf("INSERT INTO %s (%s) VALUES (%s)", table, names(cols, ""), strings.Join(marks, ", "))
}
