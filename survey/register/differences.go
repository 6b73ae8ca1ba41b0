package register

import (
	"database/sql/driver"
	"fmt"
	"math"
	"strings"
)

// sameWithin is the relative difference up to which two figures are the same: above the rounding of another processor, far below any
// uncertainty.
const sameWithin = 1e-9

// differences tells which columns of two rows differ, "" for none.
func differences(stored, fresh []column) string {
	var out []string
	for i := range stored {
		a, b := valueOf(stored[i].at), valueOf(fresh[i].at)
		if !same(a, b) {
			out = append(out, fmt.Sprintf("%s is %s on record and %s when worked out again", stored[i].name, show(a), show(b)))
		}
	}
	return strings.Join(out, "; ")
}

func same(a, b any) bool {
	x, okX := a.(float64)
	y, okY := b.(float64)
	if okX && okY {
		return math.Abs(x-y) <= sameWithin*max(math.Abs(x), math.Abs(y), sameWithin) || x == y
	}
	return a == b
}

func show(a any) string {
	switch a := a.(type) {
	case nil:
		return "not given"
	case float64:
		return exact(a)
	case string:
		return fmt.Sprintf("%q", a)
	}
	return fmt.Sprint(a)
}

// valueOf is the value at a place of a column: nil, string, int64, float64, or bytes as a string.
func valueOf(at any) any {
	switch at := at.(type) {
	case *string:
		return *at
	case *int64:
		return *at
	case *[]byte:
		return string(*at)
	case driver.Valuer:
		v, err := at.Value()
		if err != nil {
			return err.Error()
		}
		return v
	}
	return nil
}
