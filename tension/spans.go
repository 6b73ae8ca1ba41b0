package tension

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/stat/distuv"

	"tautbook/survey"
)

// Continuous is one cable that passes over intermediate supports, its spans surveyed in one visit: what they say together.
type Continuous struct {
	Structure  string         `json:"structure,omitempty"`
	Cable      string         `json:"cable"`
	SurveyFile string         `json:"survey_file"`
	Spans      []JoinedSpan   `json:"spans"`    // in order along the cable
	Supports   []SupportForce `json:"supports"` // between them: one fewer
	// The test whether the measured tensions contradict the conditions at the supports that may move freely: the weighted sum of
	// squared contradictions is chi-square with that many degrees of freedom. Nil without such supports.
	ChiSquare        *float64  `json:"chi_square,omitempty"`
	DegreesOfFreedom int       `json:"degrees_of_freedom"`
	P                *float64  `json:"p,omitempty"` // probability of so large a contradiction by chance
	Findings         []Finding `json:"findings"`
}

// JoinedSpan is one span of a continuous cable.
type JoinedSpan struct {
	Span     string    `json:"span"`
	Reversed bool      `json:"reversed"`             // its A lies on the far side, seen along the cable
	Separate Quantity  `json:"horizontal_tension_N"` // from its own points alone
	Joint    *Quantity `json:"joint_horizontal_tension_N"`

	at int // place of its assessment
}

// SupportForce is a support between two spans: what the cable does to it. Forces are those on the support, N.
type SupportForce struct {
	From              string                `json:"from_span"`
	To                string                `json:"to_span"`
	Over              survey.SupportBetween `json:"support_between"` // "" when nobody said: nothing is assumed then
	Surveyed          bool                  `json:"surveyed"`        // false: ends of the points stand in for it
	TensionFrom       Quantity              `json:"tension_from_N"`  // of the cable on the side of each span
	TensionTo         Quantity              `json:"tension_to_N"`
	TensionStep       Quantity              `json:"tension_difference_N"`            // to minus from: what friction or a clamp holds
	HorizontalStep    Quantity              `json:"horizontal_tension_difference_N"` // to minus from
	Along             Quantity              `json:"force_along_N"`                   // on the support, toward the next span, along the mean direction of the two
	Left              Quantity              `json:"force_left_N"`                    // on the support, to the left of that
	Down              Quantity              `json:"force_down_N"`
	Resultant         Quantity              `json:"resultant_N"`
	ResultantAzimuth  float64               `json:"resultant_azimuth_deg"`       // of its horizontal part, clockwise from north
	ResultantFromDown Quantity              `json:"resultant_from_vertical_deg"` // angle between the resultant and straight down
	Bend              Quantity              `json:"bend_deg"`                    // by which the cable changes direction over the support
	FrictionNeeded    *Quantity             `json:"friction_needed,omitempty"`   // coefficient that would hold the step, by Euler and Eytelwein; nil where the cable does not bear down
	Off               *float64              `json:"off,omitempty"`               // contradiction of its condition in standard uncertainties; nil without condition
	Stuck             bool                  `json:"stuck"`                       // the condition is contradicted and was given up
}

// significance is the probability of calling a free support stuck by chance.
const significance = 0.05

// JoinSpans finds the cables that pass over intermediate supports among the assessments of one visit, works out what their
// spans say together, and sets the joint tension in the assessments. Spans follow one another where their surveyed supports meet; those
// whose supports were not surveyed are not joined. At a support that lets the cable move, the tension (or its
// horizontal part) is the same on both sides: conditional least squares on the logarithms of the forces, with the covariance of
// everything that the spans share (Mikhail and Ackermann 1976, Observations and Least Squares, ch. 7). over, when not "", holds for every
// intermediate support in place of the cables file.
func JoinSpans(list []Assessment, over survey.SupportBetween) []Continuous {
	type key struct{ structure, cable, file string }
	groups := map[key][]int{}
	var order []key
	for i := range list {
		a := &list[i]
		if a.forces == nil || a.Span == "" {
			continue
		}
		k := key{a.Structure, strings.ToLower(a.Cable), a.SurveyFile}
		if groups[k] == nil {
			order = append(order, k)
		}
		groups[k] = append(groups[k], i)
	}
	out := []Continuous{}
	for _, k := range order {
		for _, chain := range chains(list, groups[k]) {
			out = append(out, join(list, chain, over))
		}
	}
	return out
}

// join works out one continuous cable.
func join(list []Assessment, chain []link, over survey.SupportBetween) Continuous {
	first := &list[chain[0].at]
	c := Continuous{Structure: first.Structure, Cable: first.Cable, SurveyFile: first.SurveyFile, Findings: []Finding{}, Supports: []SupportForce{}}
	n := newNetwork(list, chain)
	for i, l := range chain {
		c.Spans = append(c.Spans, JoinedSpan{Span: list[l.at].Span, Reversed: l.reversed, Separate: n.quantity(i, forceH), at: l.at})
		if i > 0 {
			c.Supports = append(c.Supports, n.support(list, i, over))
		}
	}
	c.adjust(n)
	for i, s := range c.Spans {
		list[s.at].JointHorizontalTension = s.Joint
		if i < len(c.Supports) {
			list[s.at].NextSupport = &c.Supports[i]
		}
	}
	c.tell(n, over)
	return c
}

// adjust brings the tensions together under the conditions of the supports. While the measured ones contradict the conditions beyond
// chance, the support with the greatest contradiction is taken for stuck and its condition given up.
func (c *Continuous) adjust(n *network) {
	for {
		var conditions []condition
		for i := range c.Supports {
			if s := &c.Supports[i]; !s.Stuck {
				if k, ok := n.condition(i+1, s.Over); ok {
					off := k.value / k.u()
					s.Off = &off
					k.support = i
					conditions = append(conditions, k)
				}
			}
		}
		if len(conditions) == 0 {
			return
		}
		a := fulfil(conditions)
		p := distuv.ChiSquared{K: float64(len(conditions))}.Survival(a.sum)
		if c.ChiSquare == nil {
			sum := a.sum
			c.ChiSquare, c.P, c.DegreesOfFreedom = &sum, &p, len(conditions)
		}
		if p < significance {
			worst := slices.MaxFunc(conditions, func(x, y condition) int { return compareSize(x.value/x.u(), y.value/y.u()) })
			c.Supports[worst.support].Stuck = true
			continue
		}
		c.joint(n, conditions, a)
		return
	}
}

func compareSize(x, y float64) int {
	switch x, y = math.Abs(x), math.Abs(y); {
	case x < y:
		return -1
	case x > y:
		return 1
	}
	return 0
}

// joint sets the tensions of the spans that a condition ties to a neighbour.
func (c *Continuous) joint(n *network, conditions []condition, a adjustment) {
	tied := make([]bool, len(c.Spans))
	for _, k := range conditions {
		tied[k.support], tied[k.support+1] = true, true
	}
	for i := range c.Spans {
		if tied[i] {
			q := a.correct(math.Log(n.spans[i].y[forceH]), n.relative(i, forceH))
			h := math.Exp(q.Value)
			c.Spans[i].Joint = &Quantity{Value: h, U: q.U * h}
		}
	}
}

// tell adds the findings.
func (c *Continuous) tell(n *network, over survey.SupportBetween) {
	add := func(id string, level Level, format string, args ...any) {
		c.Findings = append(c.Findings, Finding{ID: id, Level: level, Text: fmt.Sprintf(format, args...)})
	}
	for i, s := range c.Supports {
		where := fmt.Sprintf("the support between spans %s and %s", s.From, s.To)
		what, step := "tension", s.TensionStep
		if s.Over == survey.BetweenEqualHorizontal {
			what, step = "horizontal tension", s.HorizontalStep
		}
		size := force(Quantity{Value: math.Abs(step.Value), U: step.U})
		greater := s.To
		if step.Value < 0 {
			greater = s.From
		}
		switch {
		case s.Stuck:
			needed := ""
			if f := s.FrictionNeeded; f != nil && s.Over == survey.BetweenEqualTension {
				needed = fmt.Sprintf(" A coefficient of friction of %s would hold it.", Plain.Figure(Quantity{Value: math.Abs(f.Value), U: f.U}))
			}
			add("support-stuck", Act, "The cable should run free over %s, but the %s is greater in span %s by %s (%.1f standard uncertainties): the support is stuck, or a load of one span is not as filed.%s Look at it; the spans were not brought together there.",
				where, what, greater, size, math.Abs(*s.Off), needed)
		case s.Over == "" && math.Abs(s.TensionStep.Value) > 2*s.TensionStep.U && math.Abs(s.HorizontalStep.Value) > 2*s.HorizontalStep.U:
			add("support-unbalanced", Look, "At %s the tensions of the two sides differ by %s, and the file does not say how the cable passes over it (support_between). If it should run free, it does not.", where, size)
		}
		if s.Down.Value < -s.Down.Expanded() {
			add("support-uplift", Act, "At %s the cable pulls up by %s: it must be held down there.", where, force(Quantity{Value: -s.Down.Value, U: s.Down.U}))
		}
		if n.disagree(i+1) && over == "" {
			add("support-between-differs", Look, "The cables file says two things of %s (support_between of the two spans): nothing was assumed there. Make them the same.", where)
		}
	}
}
