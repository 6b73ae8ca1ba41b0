package tension

import (
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

func BenchmarkAssess(b *testing.B) {
	for _, c := range []struct {
		name string
		site site
	}{{"hand", footbridge()}, {"main", mainCable()}, {"guy", guy()}} {
		s := c.site
		s.points = 31
		points := s.survey(s.truth(b), rand.New(rand.NewPCG(1, 1)))
		b.Run(c.name, func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				if _, err := Assess(Case{Points: points, Design: &s.design, Conditions: s.conditions(survey.LoadsAsFiled, 1)}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkAtLength(b *testing.B) {
	s := footbridge()
	st := s.truth(b)
	c := s.cable(1)
	for b.Loop() {
		if _, err := c.AtLength(st.Unstressed, s.chord, 8); err != nil {
			b.Fatal(err)
		}
	}
}
