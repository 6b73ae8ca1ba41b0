package tension

import (
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

// The story of one cable: more sag is slack only when the loads were looked at and are as filed; an unlisted load with the
// same sag is off design until it is listed, and then it is overload.
func TestVerdictFollowsTheRecordOfLoads(t *testing.T) {
	designed := footbridge()
	slipped := footbridge()
	slipped.slip = 0.06
	loaded := footbridge()
	loaded.extra = 0.8
	listed := survey.Conditions{CableTemperature: q(18, 1), Loads: survey.LoadsListed,
		Listed: []survey.ListedLoad{{Cable: "hand", Load: survey.Quantity{Value: 0.8 * 38, U: 1}, Spread: survey.AlongCable, What: "service pipe"}}}
	for _, c := range []struct {
		name string
		site site
		cond survey.Conditions
		want Verdict
	}{
		{"designed, as filed", designed, designed.conditions(survey.LoadsAsFiled, 1), AsDesigned},
		{"designed, not checked", designed, designed.conditions(survey.LoadsNotChecked, 1), AsDesigned},
		{"slipped, as filed", slipped, slipped.conditions(survey.LoadsAsFiled, 1), Slack},
		{"slipped, not checked", slipped, slipped.conditions("", 1), OffDesign},
		{"loaded, not checked", loaded, loaded.conditions(survey.LoadsNotChecked, 1), OffDesign},
		{"loaded, listed", loaded, listed, Overload},
	} {
		a := c.site.assess(t, rand.New(rand.NewPCG(3, 1)), c.cond)
		if a.Verdict != c.want {
			t.Errorf("%s: %s (%s), want %s", c.name, a.Verdict, a.Reason, c.want)
		}
	}
}
