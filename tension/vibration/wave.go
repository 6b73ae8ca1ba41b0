package vibration

import (
	"fmt"
	"math"
)

// ReturnTime is the time, s, after which a pulse struck at one support has come back to it n times: 2 n L / sqrt(T/m), L, T and m
// those of the chord. For a parabola it is the trade's return-wave rule, sag = g t^2 / (32 n^2), whatever span, weight and
// tension (IEEE Std 524, stringing; from memory, rederived from the wave speed). The error wraps ErrInput.
func (c Cable) ReturnTime(n int) (float64, error) {
	if n < 1 || n > 1000 {
		return 0, fmt.Errorf("%w: %d returns, expected 1 to 1000", ErrInput, n)
	}
	if err := c.check(Mode{Number: 1}); err != nil {
		return 0, err
	}
	return 2 * float64(n) * c.Length * math.Sqrt(c.Mass/c.Tension), nil
}
