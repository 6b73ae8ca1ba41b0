package tension

import (
	"fmt"
	"math"
	"strings"
)

// impliedMeaning says in one sentence what the three loads that the shape implies say together: from the expected tension, from the tension
// read on the day, from the designed length; nil where there is none. Two loads count as equal when they are less than 1.96 standard
// uncertainties apart, taken as independent; the shape is common to all and cancels from their comparison, so that this errs to the side of equal.
func impliedMeaning(filed Quantity, expected, read, length *Quantity) string {
	if expected == nil && read == nil && length == nil {
		return ""
	}
	same := func(a, b Quantity) bool {
		return math.Abs(a.Value-b.Value) <= apart*math.Hypot(a.U, b.U)
	}
	switch {
	case read != nil && length != nil && same(*read, filed) && same(*read, *length) && !same(*length, filed):
		return fmt.Sprintf("The tension read on the day needs %s, too coarse to tell the %s on record from the %s that the designed length needs.", NewtonPerMetre.Figure(*read), NewtonPerMetre.Figure(filed), NewtonPerMetre.Figure(*length))
	case read != nil && same(*read, filed):
		text := "The tension read on the day needs the load on record"
		if length != nil && !same(*length, filed) {
			return text + ", and the designed length would need " + NewtonPerMetre.Figure(*length) + ": the length has changed, not the load."
		}
		if expected != nil && !same(*expected, filed) {
			return text + "; the expected tension would need " + NewtonPerMetre.Figure(*expected) + ": the tension is not the expected one, by its length, stiffness or temperature."
		}
		return text + ", as do the others: the load is as recorded."
	case read != nil && length != nil && same(*read, *length):
		return fmt.Sprintf("The tension read on the day and the designed length agree on %s, not on the %s on record: the load is not as recorded, the length is as designed.", NewtonPerMetre.Figure(*read), NewtonPerMetre.Figure(filed))
	case read != nil && length != nil:
		return fmt.Sprintf("The tension read on the day needs %s, the designed length %s and the record says %s: load and length have both changed, or the reading is wrong.", NewtonPerMetre.Figure(*read), NewtonPerMetre.Figure(*length), NewtonPerMetre.Figure(filed))
	case read != nil:
		return fmt.Sprintf("The tension read on the day needs %s and the record says %s: the load is not as recorded, or the reading is wrong.", NewtonPerMetre.Figure(*read), NewtonPerMetre.Figure(filed))
	}
	var off, agree []string
	for _, o := range []struct {
		q    *Quantity
		name string
	}{{expected, "expected tension"}, {length, "designed length"}} {
		switch {
		case o.q == nil:
		case same(*o.q, filed):
			agree = append(agree, o.name)
		default:
			off = append(off, fmt.Sprintf("the %s would need %s", o.name, NewtonPerMetre.Figure(*o.q)))
		}
	}
	if len(off) == 0 {
		return fmt.Sprintf("The %s and the shape need the load on record as near as they can tell.", strings.Join(agree, ", the "))
	}
	return fmt.Sprintf("By the shape %s, and the record says %s: either the load is not as recorded or the length has changed; a look or a direct reading tells.", strings.Join(off, " and "), NewtonPerMetre.Figure(filed))
}
