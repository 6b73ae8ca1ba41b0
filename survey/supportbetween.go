package survey

import (
	"fmt"
	"strings"
)

// SupportBetween says how a cable passes over a support between two of its spans.
type SupportBetween string

// The ways over an intermediate support. "" means that the file does not say: nothing is assumed then.
const (
	BetweenFixed           SupportBetween = "fixed"            // clamped: each span has its own tension
	BetweenEqualTension    SupportBetween = "equal tension"    // saddle or sheave without friction: T is the same on both sides
	BetweenEqualHorizontal SupportBetween = "equal horizontal" // roller carriage or long hanging link: H is the same on both sides
)

const betweenExpected = `fixed, equal tension or equal horizontal, or one for each end: "A: fixed / B: equal tension"`

// ParseSupportBetween reads how the cable passes over the supports at the two ends of a span, from one word for both ends or
// from "A: ... / B: ..."; an end that is not named is "".
func ParseSupportBetween(text string) (atA, atB SupportBetween, err error) {
	if text = strings.TrimSpace(text); text == "" {
		return "", "", nil
	}
	if !strings.Contains(text, ":") {
		way, err := wayOver(text)
		return way, way, err
	}
	for part := range strings.SplitSeq(text, "/") {
		end, word, _ := strings.Cut(part, ":")
		way, err := wayOver(word)
		if err != nil {
			return "", "", err
		}
		into := map[string]*SupportBetween{"a": &atA, "b": &atB}[strings.ToLower(strings.TrimSpace(end))]
		switch {
		case into == nil:
			return "", "", fmt.Errorf("found end %q, expected A or B", strings.TrimSpace(end))
		case *into != "":
			return "", "", fmt.Errorf("found end %q twice, expected each end once", strings.TrimSpace(end))
		}
		*into = way
	}
	return atA, atB, nil
}

func wayOver(word string) (SupportBetween, error) {
	way := SupportBetween(strings.Join(strings.Fields(strings.NewReplacer("-", " ", "_", " ").Replace(strings.ToLower(word))), " "))
	switch way {
	case BetweenFixed, BetweenEqualTension, BetweenEqualHorizontal:
		return way, nil
	}
	return "", fmt.Errorf("found %q, expected %s", strings.TrimSpace(word), betweenExpected)
}
