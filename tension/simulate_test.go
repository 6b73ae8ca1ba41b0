package tension

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// site is an invented cable whose truth on the day is known: simulation gives surveys of it.
type site struct {
	design  survey.Design
	chord   Chord
	slip    float64 // unstressed length gained, m
	extra   float64 // load beside the filed one, as a factor of it
	weigh   float64 // true load / filed load (weight on file in error), 1 = right
	stiff   float64 // true EA / filed EA
	widen   float64 // true expansion / filed one
	day     float64 // true temperature, degC
	points  int
	sigma   float64 // of a point, m
	support float64 // of a support, m
	silent  bool    // the accuracy of the points is not stated
}

func q(v, u float64) *survey.Quantity { return &survey.Quantity{Value: v, U: u} }

// footbridge is a hand cable, taut enough to answer to load in sag and tension.
func footbridge() site {
	sf, lim := 4.0, 0.10
	return site{design: survey.Design{Cable: "hand", Load: survey.LoadSelfWeight, SelfWeight: q(38, 0.4), SpanLength: q(96, 0), Rise: q(1.8, 0),
		Tension: q(21900, 0), Temperature: q(10, 0), AxialStiffness: q(14e6, 4e5), Expansion: q(12e-6, 5e-7), BreakingLoad: q(160e3, 0),
		SafetyFactor: &sf, SlackBelow: &lim, OverloadAbove: &lim},
		chord: Chord{96, 1.8}, weigh: 1, stiff: 1, widen: 1, day: 18, points: 21, sigma: 0.003, support: 0.002}
}

// mainCable is a deep cable under a deck: its shape hardly answers to load.
func mainCable() site {
	sf, slack, over := 3.0, 0.05, 0.10
	return site{design: survey.Design{Cable: "hand", Load: survey.LoadDeck, DeckLoad: q(1450, 15), SpanLength: q(96, 0), Rise: q(1.8, 0),
		Tension: q(208800, 0), Temperature: q(10, 0), AxialStiffness: q(95e6, 4e6), Expansion: q(12e-6, 5e-7), BreakingLoad: q(1050e3, 0),
		SafetyFactor: &sf, SlackBelow: &slack, OverloadAbove: &over},
		chord: Chord{96, 1.8}, weigh: 1, stiff: 1, widen: 1, day: 17, points: 25, sigma: 0.003, support: 0.003}
}

// guy is a taut inclined cable: load shows in the sag, hardly in the tension.
func guy() site {
	sf, lim := 3.0, 0.10
	return site{design: survey.Design{Cable: "hand", Load: survey.LoadSelfWeight, SelfWeight: q(37, 0.3), SpanLength: q(38, 0), Rise: q(24, 0),
		Tension: q(90000, 0), Temperature: q(10, 0), AxialStiffness: q(75e6, 2e6), Expansion: q(12e-6, 3e-7), BreakingLoad: q(580e3, 0),
		SafetyFactor: &sf, SlackBelow: &lim, OverloadAbove: &lim},
		chord: Chord{38, 24}, weigh: 1, stiff: 1, widen: 1, day: 22, points: 25, sigma: 0.0015, support: 0.0008}
}

// drawn makes the truth differ from the file by as much as the file's uncertainties say.
func (s site) drawn(rng *rand.Rand) site {
	off := func(v *survey.Quantity) float64 {
		if v == nil {
			return 1
		}
		return 1 + v.U/v.Value*rng.NormFloat64()
	}
	load := s.design.SelfWeight
	if load == nil {
		load = s.design.DeckLoad
	}
	s.weigh, s.stiff, s.widen = off(load), off(s.design.AxialStiffness), off(s.design.Expansion)
	return s
}

func (s site) cable(load float64) Cable {
	c := Cable{AxialStiffness: s.design.AxialStiffness.Value * s.stiff, Expansion: s.design.Expansion.Value * s.widen}
	if s.design.SelfWeight != nil {
		c.SelfWeight = s.design.SelfWeight.Value * s.weigh * load
	}
	if s.design.DeckLoad != nil {
		c.DeckLoad = s.design.DeckLoad.Value * s.weigh * load
	}
	return c
}

// truth is the state on the day.
func (s site) truth(t testing.TB) State {
	t.Helper()
	built, err := s.cable(1).AtTension(s.design.Tension.Value, Chord{s.design.SpanLength.Value, s.design.Rise.Value}, 0)
	if err != nil {
		t.Fatal(err)
	}
	st, err := s.cable(1+s.extra).AtLength(built.Unstressed+s.slip, s.chord, s.day-s.design.Temperature.Value)
	if err != nil {
		t.Fatal(err)
	}
	return st
}

// expectedTruth is the true tension of the designed cable on the day, load as filed.
func (s site) expectedTruth(t testing.TB) float64 {
	s.slip, s.extra = 0, 0
	return s.truth(t).H
}

// survey measures the state: points along the span with normal errors in all three coordinates, and both supports.
func (s site) survey(st interface{ Height(float64) float64 }, rng *rand.Rand) survey.SpanPoints {
	const e0, n0, z0 = 512345.6, 5412345.7, 431.2
	az := 0.7
	at := func(id string, station, z, sigma float64) survey.Point {
		v := sigma * sigma
		return survey.Point{ID: id, HasCov: sigma > 0 && !s.silent, Cov: survey.Cov3{EE: v, NN: v, ZZ: v},
			E: e0 + station*math.Sin(az) + sigma*rng.NormFloat64(), N: n0 + station*math.Cos(az) + sigma*rng.NormFloat64(), Z: z0 + z + sigma*rng.NormFloat64()}
	}
	out := survey.SpanPoints{Cable: s.design.Cable}
	for i := range s.points {
		x := s.chord.Length * (0.01 + 0.98*float64(i)/float64(s.points-1))
		out.Points = append(out.Points, at(fmt.Sprint(i+1), x, st.Height(x), s.sigma))
	}
	a, b := at("A", 0, 0, s.support), at("B", s.chord.Length, s.chord.Rise, s.support)
	out.A, out.B = &a, &b
	return out
}

func (s site) conditions(loads survey.LoadStatus, uT float64) survey.Conditions {
	return survey.Conditions{CableTemperature: q(s.day, uT), Loads: loads}
}

func (s site) assess(t testing.TB, rng *rand.Rand, c survey.Conditions) Assessment {
	t.Helper()
	d := s.design
	a, err := Assess(Case{Points: s.survey(s.truth(t), rng), Design: &d, Conditions: c})
	if err != nil {
		t.Fatal(err)
	}
	return a
}
