package survey

import "math"

// Quantity is a value with its standard uncertainty, both in the SI unit that the field holding it names.
// U = 0 means that the value is taken as exact. Source of the notation: JCGM 100:2008, 2.3.1.
type Quantity struct {
	Value float64 `json:"value"`
	U     float64 `json:"u"`
}

// Exact is a Quantity without uncertainty.
func Exact(v float64) Quantity { return Quantity{Value: v} }

// Expanded is the expanded uncertainty U = 2 u (coverage factor k = 2, JCGM 100:2008, 6.2), in the unit of the value.
func (q Quantity) Expanded() float64 { return 2 * q.U }

// Relative is u / |value|, dimensionless; infinite when the value is zero and u is not.
func (q Quantity) Relative() float64 {
	if q.U == 0 {
		return 0
	}
	return q.U / math.Abs(q.Value)
}
