package fieldsheets

import (
	"math"
	"strconv"
)

// axis maps values to picture units and knows its ticks.
type axis struct {
	lo, hi   float64 // values at the ends
	from, to float64 // picture units at the ends
	step     float64
}

// newAxis covers lo to hi with ticks at round steps; about count of them.
func newAxis(lo, hi, from, to float64, count int) axis {
	if !(hi > lo) {
		lo, hi = lo-0.5, lo+0.5
	}
	return axis{lo: lo, hi: hi, from: from, to: to, step: roundStep((hi - lo) / float64(count))}
}

// roundStep is the next of 1, 2, 5 times a power of ten.
func roundStep(x float64) float64 {
	p := math.Pow(10, math.Floor(math.Log10(x)))
	for _, f := range []float64{1, 2, 5} {
		if f*p >= x*(1-1e-9) {
			return f * p
		}
	}
	return 10 * p
}

func (a axis) at(v float64) float64 { return a.from + (v-a.lo)/(a.hi-a.lo)*(a.to-a.from) }

// tick is one mark of an axis with its label, which is exactly the value of the mark.
type tick struct {
	At    float64
	Label string
}

// mostTicks keeps a picture readable whatever the axis holds.
const mostTicks = 40

func (a axis) ticks() (out []tick) {
	decimals := max(0, -int(math.Floor(math.Log10(a.step)+1e-9)))
	first := math.Ceil(a.lo/a.step - 1e-9)
	for i := range mostTicks {
		v := (first + float64(i)) * a.step
		if !(v <= a.hi+1e-9*a.step) {
			break
		}
		out = append(out, tick{a.at(v), minus(strconv.FormatFloat(v+0, 'f', decimals, 64))})
	}
	return out
}

// minus writes a true minus sign and no negative zero.
func minus(s string) string {
	if s[0] != '-' {
		return s
	}
	for _, c := range s[1:] {
		if c != '0' && c != '.' {
			return "−" + s[1:]
		}
	}
	return s[1:]
}
