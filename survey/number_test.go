package survey

import (
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// sameBits holds parseNumber to strconv.ParseFloat to the bit, with a decimal point and with a decimal comma.
func sameBits(t interface{ Errorf(string, ...any) }, text string) {
	want, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return // beyond the range of a float64
	}
	for _, mark := range []string{".", ","} {
		written := strings.ReplaceAll(text, ".", mark)
		got, fault := parseNumber([]byte(written), mark[0])
		if fault != "" || math.Float64bits(got) != math.Float64bits(want) {
			t.Errorf("%q is %v (%s), strconv reads %v", written, got, fault, want)
		}
	}
}

// Any plain decimal is read to the same bits as by strconv, whose result is correctly rounded.
func TestNumberProperty(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`[+-]?([0-9]{1,20}(\.[0-9]{0,20})?|\.[0-9]{1,20})([eE][+-]?[0-9]{1,2})?`).Draw(t, "number")
		sameBits(t, text)
	})
}

// The same over many decimals of the lengths that surveys have, both sides of the limit of the short way.
func TestNumberManyDecimals(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 7))
	n := 400_000
	if testing.Short() {
		n = 40_000
	}
	for range n {
		digits := 1 + rng.IntN(19)
		v := rng.Uint64() % uint64(math.Pow10(digits))
		text := strconv.FormatUint(v, 10)
		at := rng.IntN(len(text) + 1)
		text = text[:at] + "." + text[at:]
		if text == "." || rng.IntN(9) == 0 {
			text = "-0" + text + "0"
		}
		sameBits(t, text)
	}
	for _, text := range []string{"9007199254740993", "9007199254740992", "9007199254740991", "0.1", "5e-324", "1.7976931348623157e308", "4503599627370496.5", "0.000000000000001", "-0"} {
		sameBits(t, text)
	}
}

// What is no plain decimal is refused, each with the name of its fault.
func TestNumberFaults(t *testing.T) {
	for _, c := range []struct {
		text string
		mark byte
		want numberFault
	}{
		{"", '.', faultEmpty},
		{"12,4", '.', faultComma}, {"12.4", ',', faultPoint},
		{"1,234.5", '.', faultGrouped}, {"1.234,5", ',', faultGrouped}, {"1,234,567", '.', faultGrouped}, {"1.234.567", ',', faultGrouped},
		{"1_000", '.', faultGrouped}, {"1'000.5", '.', faultGrouped}, {"1\u2019000", '.', faultGrouped}, {"1 000", '.', faultGrouped}, {"1\u00a0000,5", ',', faultGrouped},
		{"NaN", '.', faultNotFinite}, {"nan", ',', faultNotFinite}, {"Inf", '.', faultNotFinite}, {"-infinity", '.', faultNotFinite}, {"1e400", '.', faultNotFinite},
		{"0x10", '.', faultNotNumber}, {"0x1p-2", '.', faultNotNumber}, {"1e", '.', faultNotNumber}, {"e5", '.', faultNotNumber}, {"--5", '.', faultNotNumber},
		{"5-", '.', faultNotNumber}, {"9-1", '.', faultNotNumber}, {".", '.', faultNotNumber}, {"-", '.', faultNotNumber}, {"-.", '.', faultNotNumber},
		{"12.4m", '.', faultNotNumber}, {"twelve", '.', faultNotNumber}, {"１２", '.', faultNotNumber}, {"\u221212", '.', faultNotNumber}, {"1e5.5", '.', faultNotNumber},
	} {
		if v, got := parseNumber([]byte(c.text), c.mark); got != c.want || v != 0 {
			t.Errorf("%q with %q: %v, %q, want %q", c.text, c.mark, v, got, c.want)
		}
	}
}

// Reading a number allocates nothing.
func TestNumberAllocatesNothing(t *testing.T) {
	cell := []byte("463012.125")
	if n := testing.AllocsPerRun(100, func() { parseNumber(cell, '.') }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}

func BenchmarkParseNumber(b *testing.B) {
	for _, text := range []string{"9.4", "463012.125", "463012.123456789012"} {
		b.Run(fmt.Sprint(len(text)), func(b *testing.B) {
			cell := []byte(text)
			for b.Loop() {
				parseNumber(cell, '.')
			}
		})
	}
}
