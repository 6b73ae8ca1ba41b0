package survey

import (
	"fmt"
	"strings"
	"time"
)

// conditionKeys are the keys that a "# key: value" line of a survey file may have.
var conditionKeys = map[string]bool{"structure": true, "date": true, "temperature": true, "wind": true, "loads": true, "load": true, "reading": true, "supports": true,
	"instrument": true, "accuracy": true, "crew": true, "unit": true, "cable": true, "span": true, "note": true}

// keyList names the keys for a message.
const keyList = "structure, date, temperature, wind, loads, load, reading, supports, instrument, accuracy, crew, unit, cable, span or note"

// conditionKey is the one spelling of a key.
func conditionKey(key string) string {
	switch key = strings.ToLower(strings.TrimSpace(key)); key {
	case "units":
		return "unit"
	case "cable temperature":
		return "temperature"
	}
	return key
}

// Set gives one condition by its key, as it stands in a survey file or a flag:
//
//	structure, wind, instrument, crew, note   words
//	date          2026-06-11 or 2026-06-11 10:30
//	temperature   of the cable: 12 +- 2 degC
//	loads         as filed | listed | not checked
//	load          CABLE[/SPAN]; 180 +- 10 N/m; along cable | along deck; what it is   (may be given several times)
//	load          CABLE[/SPAN]; 3.2 +- 0.2 kN | unknown; at 12.4 m; what it is   (hangs at one place, that far from support A along the chord)
//	reading       CABLE[/SPAN]; what was read; 30.7 +- 0.5 kN; what read it   (may be given several times; see Reading)
//	supports      on the cable | beside the cable: whether the surveyed marks A and B lie on its centre line (default beside)
//	accuracy      standard deviation of a point: 3 mm, or horizontal 3 mm, vertical 2 mm
//	unit          of coordinates
//	cable, span   that all points of the file are on
//
// "cable temperature" and "units" are the same as temperature and unit. Quantities take the units of ParseQuantity; a value without
// +- is exact. A load means "loads: listed". A key given twice with different values is refused, and so is a list of loads beside "as filed" or "not checked".
func (c *Conditions) Set(key, value string) error {
	key, value = conditionKey(key), strings.TrimSpace(value)
	if !conditionKeys[key] {
		return wrong(key, keyList, "")
	}
	if key == "note" {
		c.Notes = append(c.Notes, value)
		return nil
	}
	if value == "" {
		return wrong("", "a value for "+key, "")
	}
	if c.set == nil {
		c.set = map[string]bool{}
	}
	again := c.set[key]
	if err := c.put(key, value, again); err != nil {
		return err
	}
	c.set[key] = true
	return nil
}

// put stores one condition; again is true when the key was given before.
func (c *Conditions) put(key, value string, again bool) error {
	switch key {
	case "structure":
		return words(&c.Structure, value, again, key)
	case "wind":
		return words(&c.Wind, value, again, key)
	case "instrument":
		return words(&c.Instrument, value, again, key)
	case "crew":
		return words(&c.Crew, value, again, key)
	case "cable":
		return words(&c.cable, value, again, key)
	case "span":
		return words(&c.span, value, again, key)
	case "unit":
		if _, ok := findUnit(value, Length); !ok {
			return wrong(value, "a unit of length ("+spellings[Length]+")", "")
		}
		return words(&c.unit, value, again, key)
	case "date":
		return c.setDate(value, again)
	case "temperature":
		return c.setTemperature(value, again)
	case "accuracy":
		return c.setAccuracy(value, again)
	case "loads":
		return c.setLoads(value)
	case "supports":
		return c.setSupports(value, again)
	case "load":
		return c.addLoad(value)
	case "reading":
		return c.addReading(value)
	}
	return wrong(key, keyList, "")
}

func words(into *string, value string, again bool, key string) error {
	if again && *into != value {
		return wrong(value, fmt.Sprintf("one %s: it was %s before", key, quote(*into)), "take one of the two lines out")
	}
	*into = value
	return nil
}

func (c *Conditions) setDate(value string, again bool) error {
	for _, layout := range []string{time.DateOnly, "2006-01-02 15:04", "2006-01-02T15:04", time.RFC3339} {
		d, err := time.Parse(layout, value)
		if err != nil {
			continue
		}
		if again && !c.Date.Equal(d) {
			return wrong(value, "one date: it was "+c.Date.Format(time.DateOnly)+" before", "take one of the two lines out")
		}
		c.Date = d
		return nil
	}
	return wrong(value, "a date such as 2026-06-11", "")
}

func (c *Conditions) setTemperature(value string, again bool) error {
	q, err := ParseQuantity(value, Temperature)
	if err != nil {
		return err
	}
	if again && *c.CableTemperature != q {
		return wrong(value, "one cable temperature: there was another before", "take one of the two lines out")
	}
	c.CableTemperature = &q
	return nil
}

// setAccuracy reads "3 mm" or "horizontal 3 mm, vertical 2 mm".
func (c *Conditions) setAccuracy(value string, again bool) error {
	var a Accuracy
	parts := strings.FieldsFunc(value, func(r rune) bool { return r == ',' || r == ';' })
	for _, part := range parts {
		part = strings.TrimSpace(part)
		word, rest, _ := strings.Cut(part, " ")
		into := []*float64{&a.Horizontal, &a.Vertical}
		switch strings.ToLower(word) {
		case "horizontal":
			part, into = rest, into[:1]
		case "vertical":
			part, into = rest, into[1:]
		}
		q, err := ParseQuantity(part, Length)
		if err != nil {
			return err
		}
		if q.U != 0 {
			return wrong(part, "a standard deviation without one of its own", "write for example \"3 mm\"")
		}
		if !(q.Value >= leastSigma) || q.Value > 10 {
			return wrong(part, "a standard deviation between 0 and 10 m", "")
		}
		for _, v := range into {
			if *v != 0 {
				return wrong(value, "each accuracy once", "")
			}
			*v = q.Value
		}
	}
	if a.Horizontal == 0 || a.Vertical == 0 {
		return wrong(value, "\"3 mm\" or \"horizontal 3 mm, vertical 2 mm\"", "")
	}
	if again && *c.Accuracy != a {
		return wrong(value, "one accuracy: there was another before", "take one of the two lines out")
	}
	c.Accuracy = &a
	return nil
}

func (c *Conditions) setSupports(value string, again bool) error {
	on := strings.EqualFold(value, "on the cable")
	if !on && !strings.EqualFold(value, "beside the cable") {
		return wrong(value, "on the cable or beside the cable", "")
	}
	if again && c.SupportsOnCable != on {
		return wrong(value, "one word on the supports: it was another before", "take one of the two lines out")
	}
	c.SupportsOnCable = on
	return nil
}

func (c *Conditions) setLoads(value string) error {
	status := LoadStatus(strings.ToLower(value))
	switch status {
	case LoadsAsFiled, LoadsNotChecked, LoadsListed:
	default:
		return wrong(value, "as filed, listed or not checked", "")
	}
	if c.Loads != "" && c.Loads != status {
		return wrong(value, fmt.Sprintf("one record of loads: it was %s before", quote(string(c.Loads))), "take one of the two lines out")
	}
	c.Loads = status
	return nil
}

// addLoad reads one listed load; giving one means that the loads are listed.
func (c *Conditions) addLoad(value string) error {
	parts := strings.SplitN(value, ";", 4)
	for i := range parts {
		parts[i] = strings.TrimSpace(parts[i])
	}
	const form = "CABLE; 180 +- 10 N/m; along cable (or along deck); what it is, or CABLE; 3.2 +- 0.2 kN; at 12.4 m; what it is"
	if len(parts) < 3 {
		return wrong(value, form, "")
	}
	if c.Loads != "" && c.Loads != LoadsListed {
		return wrong(value, fmt.Sprintf("no list of loads beside \"loads: %s\"", c.Loads), "write \"loads: listed\", or take the load line out")
	}
	if place, ok := strings.CutPrefix(strings.ToLower(parts[2]), "at "); ok {
		return c.addLocal(value, parts, place)
	}
	var l ListedLoad
	l.Cable, l.Span = cutCable(parts[0])
	q, err := ParseQuantity(parts[1], ForcePerLength)
	if err != nil {
		return err
	}
	l.Load = q
	switch l.Spread = Spread(strings.ToLower(parts[2])); l.Spread {
	case AlongCable, AlongDeck:
	default:
		return wrong(parts[2], "along cable, along deck or a place such as at 12.4 m in the third place: "+form, "")
	}
	if len(parts) == 4 {
		l.What = parts[3]
	}
	for _, other := range c.Listed {
		if strings.EqualFold(other.Cable, l.Cable) && strings.EqualFold(other.Span, l.Span) && other.Load == l.Load && other.Spread == l.Spread && other.What == l.What {
			return wrong(value, "each load once", "take one of the two out, or say in words what tells them apart")
		}
	}
	c.Loads = LoadsListed
	c.Listed = append(c.Listed, l)
	return nil
}

// addLocal reads one load that hangs at one place.
func (c *Conditions) addLocal(value string, parts []string, place string) error {
	l := LocalLoad{}
	l.Cable, l.Span = cutCable(parts[0])
	at, err := ParseQuantity(place, Length)
	if err != nil {
		return err
	}
	if !(at.Value > 0) || at.U != 0 {
		return wrong(place, "the distance from support A along the chord, above 0 and without +-", "write for example \"at 12.4 m\"")
	}
	l.Station = at.Value
	if !strings.EqualFold(parts[1], "unknown") {
		q, err := ParseQuantity(parts[1], Force)
		if err != nil {
			return err
		}
		l.P = &q
	}
	if len(parts) == 4 {
		l.What = parts[3]
	}
	for _, other := range c.Local {
		if strings.EqualFold(other.Cable, l.Cable) && strings.EqualFold(other.Span, l.Span) && other.Station == l.Station {
			return wrong(value, "one local load at one place", "add the two up, or give the second its own place")
		}
	}
	c.Loads = LoadsListed
	c.Local = append(c.Local, l)
	return nil
}

// cutCable parts "CABLE/SPAN"; "*" is every cable.
func cutCable(text string) (cable, span string) {
	if text == "*" {
		return "", ""
	}
	cable, span, _ = strings.Cut(text, "/")
	return strings.TrimSpace(cable), strings.TrimSpace(span)
}

// check finds contradictions that only show at the end.
func (c *Conditions) check() error {
	if c.Loads == LoadsListed && len(c.Listed)+len(c.Local) == 0 {
		return wrong("", "a load line beside \"loads: listed\"", "add \"# load: CABLE; 180 +- 10 N/m; along cable; service pipe\", or write \"loads: as filed\" if nothing hangs there")
	}
	return nil
}

// decimalPoints turns decimal commas between digits into points, for conditions in a file with decimal commas.
func decimalPoints(text string) string {
	b := []byte(text)
	for i := 1; i+1 < len(b); i++ {
		if b[i] == ',' && b[i-1] >= '0' && b[i-1] <= '9' && b[i+1] >= '0' && b[i+1] <= '9' {
			b[i] = '.'
		}
	}
	return string(b)
}
