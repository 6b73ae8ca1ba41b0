package survey

import (
	"fmt"
	"strings"
	"time"
)

// conditionKeys are the keys that a "# key: value" line of a survey file may have.
var conditionKeys = map[string]bool{"structure": true, "date": true, "temperature": true, "cable temperature": true, "wind": true, "loads": true, "load": true,
	"instrument": true, "accuracy": true, "crew": true, "unit": true, "units": true, "cable": true, "span": true, "note": true}

// Set gives one condition by its key, as it stands in a survey file or a flag:
//
//	structure, wind, instrument, crew, note   words
//	date          2026-06-11 or 2026-06-11 10:30
//	temperature   of the cable: 12 +- 2 degC
//	loads         as filed | listed | not checked
//	load          CABLE[/SPAN]; 180 +- 10 N/m; along cable | along deck; what it is   (may be given several times)
//	accuracy      standard deviation of a point: 3 mm, or horizontal 3 mm, vertical 2 mm
//	unit          of coordinates
//	cable, span   that all points of the file are on
//
// A key given twice with different values is refused, and so is a list of loads beside "as filed" or "not checked".
func (c *Conditions) Set(key, value string) error {
	if key == "cable temperature" {
		key = "temperature"
	}
	if key == "note" {
		c.Notes = append(c.Notes, value)
		return nil
	}
	if value == "" {
		return fmt.Errorf("expected a value for %s", key)
	}
	if c.set == nil {
		c.set = map[string]bool{}
	}
	again := c.set[key]
	c.set[key] = true
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
	case "unit", "units":
		if _, ok := findUnit(value, Length); !ok {
			return fmt.Errorf("expected a unit of length (%s), found %s", spellings[Length], quote(value))
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
	case "load":
		return c.addLoad(value)
	}
	return fmt.Errorf("expected one of structure, date, temperature, wind, loads, load, instrument, accuracy, crew, unit, cable, span or note, found %s", quote(key))
}

func words(into *string, value string, again bool, key string) error {
	if again && *into != value {
		return fmt.Errorf("expected one %s, found %s and %s", key, quote(*into), quote(value))
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
			return fmt.Errorf("expected one date, found a second one %s", quote(value))
		}
		c.Date = d
		return nil
	}
	return fmt.Errorf("expected a date such as 2026-06-11, found %s", quote(value))
}

func (c *Conditions) setTemperature(value string, again bool) error {
	q, err := ParseQuantity(value, Temperature)
	if err != nil {
		return err
	}
	if again && *c.CableTemperature != q {
		return fmt.Errorf("expected one cable temperature, found a second one %s", quote(value))
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
		if !(q.Value > 0) || q.Value > 10 {
			return fmt.Errorf("expected a standard deviation between 0 and 10 m, found %s", quote(part))
		}
		for _, v := range into {
			if *v != 0 {
				return fmt.Errorf("expected each accuracy once, found %s", quote(value))
			}
			*v = q.Value
		}
	}
	if a.Horizontal == 0 || a.Vertical == 0 {
		return fmt.Errorf("expected \"3 mm\" or \"horizontal 3 mm, vertical 2 mm\", found %s", quote(value))
	}
	if again && *c.Accuracy != a {
		return fmt.Errorf("expected one accuracy, found a second one %s", quote(value))
	}
	c.Accuracy = &a
	return nil
}

func (c *Conditions) setLoads(value string) error {
	status := LoadStatus(strings.ToLower(value))
	switch status {
	case LoadsAsFiled, LoadsNotChecked, LoadsListed:
	default:
		return fmt.Errorf("expected as filed, listed or not checked, found %s", quote(value))
	}
	if c.Loads != "" && c.Loads != status {
		return fmt.Errorf("expected one record of loads, found %s and %s", quote(string(c.Loads)), quote(value))
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
	const form = "expected CABLE; 180 +- 10 N/m; along cable (or along deck); what it is"
	if len(parts) < 3 {
		return fmt.Errorf("%s, found %s", form, quote(value))
	}
	l := ListedLoad{Cable: parts[0]}
	if l.Cable == "*" {
		l.Cable = ""
	}
	if cable, span, ok := strings.Cut(l.Cable, "/"); ok {
		l.Cable, l.Span = strings.TrimSpace(cable), strings.TrimSpace(span)
	}
	q, err := ParseQuantity(parts[1], ForcePerLength)
	if err != nil {
		return err
	}
	l.Load = q
	switch l.Spread = Spread(strings.ToLower(parts[2])); l.Spread {
	case AlongCable, AlongDeck:
	default:
		return fmt.Errorf("%s, found %s for the spread", form, quote(parts[2]))
	}
	if len(parts) == 4 {
		l.What = parts[3]
	}
	if c.Loads != "" && c.Loads != LoadsListed {
		return fmt.Errorf("expected no list of loads beside \"loads: %s\", found %s", c.Loads, quote(value))
	}
	c.Loads = LoadsListed
	c.Listed = append(c.Listed, l)
	return nil
}

// check finds contradictions that only show at the end.
func (c *Conditions) check() error {
	if c.Loads == LoadsListed && len(c.Listed) == 0 {
		return fmt.Errorf("expected at least one load line beside \"loads: listed\", such as \"load: CABLE; 180 +- 10 N/m; along cable; service pipe\", or \"loads: as filed\" if nothing hangs there")
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
