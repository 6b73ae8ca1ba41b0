package survey

import (
	"fmt"
	"strconv"
	"strings"
)

// ReadOf says what a reading is of.
type ReadOf string

// What can be read beside the points. Tensions are along the cable at the support.
const (
	HorizontalTension ReadOf = "horizontal tension"
	TensionAtA        ReadOf = "tension at A"
	TensionAtB        ReadOf = "tension at B"
	LiftOffAtA        ReadOf = "lift-off at A" // force of the jack at which the anchor has come off its seat
	LiftOffAtB        ReadOf = "lift-off at B"
	NaturalFrequency  ReadOf = "frequency"
	WaveReturn        ReadOf = "wave return"     // time after which a pulse has come back
	SagAtMidSpan      ReadOf = "sag at mid-span" // sighted, vertical from the chord
	TangentAtB        ReadOf = "tangent at B"    // how far below support B a line of sight meets it that starts below A and touches the cable
)

// readings lists what can be read, with the dimension of the value.
var readings = []struct {
	of        ReadOf
	dimension Dimension
	unit      string // SI
}{{HorizontalTension, Force, "N"}, {TensionAtA, Force, "N"}, {TensionAtB, Force, "N"}, {LiftOffAtA, Force, "N"}, {LiftOffAtB, Force, "N"},
	{NaturalFrequency, Frequency, "Hz"}, {WaveReturn, Duration, "s"}, {SagAtMidSpan, Length, "m"}, {TangentAtB, Length, "m"}}

// Reading is something read on the day beside the points. As text it is "CABLE[/SPAN]; what; value +- u; what read it", where what is one of
//
//	tension at A | tension at B | horizontal tension
//	lift-off at A | lift-off at B [, lifted 2 +- 0.5 mm]
//	frequency, mode 2 [, sideways] [, bending stiffness 4 +- 1 kN m2] [, clamped]
//	wave return 3
//	sag at mid-span
//	tangent at B, from 1.20 m below A
//
// A mode is counted by the half waves that a taut string has in it.
type Reading struct {
	Cable, Span string // "" = every cable, every span
	Of          ReadOf
	Value       Quantity // N, Hz, s or m, with its standard uncertainty
	How         string   // free text, for example "load cell 3"
	Mode        int      // of a frequency, from 1
	Sideways    bool     // a frequency out of the plane of the cable
	Bending     Quantity // EI for a frequency, N m2; zero = that of the cables file, or none
	Clamped     bool     // the ends do not turn; without it they are pinned. Without bending stiffness it makes no difference
	Returns     int      // of a wave, from 1
	Below       float64  // start of a line of sight below support A, m
	Lifted      Quantity // how far the anchor had moved when the lift-off force was read, m
}

// What is the second place of the reading as text: what was read, with everything that the value needs to be understood.
func (r Reading) What() string {
	switch r.Of {
	case NaturalFrequency:
		text := fmt.Sprintf("frequency, mode %d", r.Mode)
		if r.Sideways {
			text += ", sideways"
		}
		if r.Clamped {
			text += ", clamped"
		}
		return text
	case WaveReturn:
		return fmt.Sprintf("wave return %d", r.Returns)
	case TangentAtB:
		return fmt.Sprintf("tangent at B, from %g m below A", r.Below)
	}
	return string(r.Of)
}

// Unit is the SI unit of the value.
func (r Reading) Unit() string {
	for _, known := range readings {
		if r.Of == known.of {
			return known.unit
		}
	}
	return ""
}

const readingForm = "CABLE; tension at A (or tension at B, horizontal tension, lift-off at A, frequency with its mode, wave return 3, sag at mid-span, tangent at B); 30.7 +- 0.5 kN; what read it"

// addReading reads one direct reading.
func (c *Conditions) addReading(value string) error {
	parts := strings.SplitN(value, ";", 4)
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	if len(parts) < 3 {
		return wrong(value, readingForm, "")
	}
	r, d, err := parseWhat(parts[1])
	if err != nil {
		return err
	}
	r.Cable, r.Span = cutCable(parts[0])
	if r.Value, err = ParseQuantity(parts[2], d); err != nil {
		return err
	}
	if !(r.Value.Value > 0) || !(r.Value.U > 0) {
		example := map[Dimension]string{Force: "30.7 +- 0.5 kN", Frequency: "1.214 +- 0.005 Hz", Duration: "4.20 +- 0.05 s", Length: "1.52 +- 0.02 m"}[d]
		return wrong(parts[2], fmt.Sprintf("a value above 0 with its standard uncertainty for %s", quote(r.What())), "write for example \""+example+"\"")
	}
	if len(parts) == 4 {
		r.How = parts[3]
	}
	for _, other := range c.Readings {
		if other == r {
			return wrong(value, "each reading once", "take one of the two out, or say in words what tells them apart")
		}
	}
	c.Readings = append(c.Readings, r)
	return nil
}

// parseWhat reads the second place of a reading and says which dimension its value has.
func parseWhat(text string) (r Reading, d Dimension, err error) {
	details := strings.Split(text, ",")
	name := strings.Join(strings.Fields(strings.ToLower(details[0])), " ")
	if rest, ok := strings.CutPrefix(name, string(WaveReturn)); ok {
		name = string(WaveReturn)
		if r.Returns, err = wholeNumber(rest, "the number of returns, such as wave return 3", 1000); err != nil {
			return r, d, err
		}
	}
	for _, known := range readings {
		if name == strings.ToLower(string(known.of)) {
			r.Of, d = known.of, known.dimension
		}
	}
	if r.Of == "" {
		return r, d, wrong(text, "in the second place what was read: "+readingForm, "")
	}
	for _, detail := range details[1:] {
		if err := r.detail(strings.TrimSpace(detail)); err != nil {
			return r, d, err
		}
	}
	switch {
	case r.Of == NaturalFrequency && r.Mode == 0:
		return r, d, wrong(text, "the mode of the frequency", "write for example \"frequency, mode 1\"")
	case r.Of == TangentAtB && r.Below == 0:
		return r, d, wrong(text, "where the line of sight starts", "write for example \"tangent at B, from 1.20 m below A\"")
	}
	return r, d, nil
}

// detail reads one of the words behind what was read.
func (r *Reading) detail(text string) (err error) {
	text = strings.Join(strings.Fields(text), " ")
	word, rest, _ := strings.Cut(text, " ")
	frequency := r.Of == NaturalFrequency
	switch word = strings.ToLower(word); {
	case word == "mode" && frequency && r.Mode == 0:
		r.Mode, err = wholeNumber(rest, "the number of half waves, such as mode 2", 100)
		return err
	case word == "sideways" && frequency && rest == "":
		r.Sideways = true
		return nil
	case (word == "clamped" || word == "pinned") && frequency && rest == "":
		r.Clamped = word == "clamped"
		return nil
	case word == "bending" && frequency:
		if head, tail, _ := strings.Cut(rest, " "); strings.EqualFold(head, "stiffness") {
			rest = tail
		}
		r.Bending, err = positive(rest, Bending)
		return err
	case word == "from" && r.Of == TangentAtB:
		length, ok := strings.CutSuffix(strings.ToLower(rest), " below a")
		q, err := ParseQuantity(length, Length)
		if err != nil || !ok || !(q.Value > 0) || q.U != 0 {
			return wrong(text, "a length above 0 below A, without +-: its error belongs to the value", "write for example \"from 1.20 m below A\"")
		}
		r.Below = q.Value
		return nil
	case word == "lifted" && (r.Of == LiftOffAtA || r.Of == LiftOffAtB):
		r.Lifted, err = positive(rest, Length)
		return err
	}
	return wrong(text, fmt.Sprintf("behind %q only what belongs to it: ", string(r.Of))+readingForm, "")
}

func positive(text string, d Dimension) (Quantity, error) {
	q, err := ParseQuantity(text, d)
	if err == nil && !(q.Value >= 0) {
		err = wrong(text, "a "+string(d)+" of 0 or more", "")
	}
	if err != nil {
		return Quantity{}, err
	}
	return q, nil
}

func wholeNumber(text, expected string, most int) (int, error) {
	n, err := strconv.Atoi(strings.TrimSpace(text))
	if err != nil || n < 1 || n > most {
		return 0, wrong(strings.TrimSpace(text), expected, "")
	}
	return n, nil
}
