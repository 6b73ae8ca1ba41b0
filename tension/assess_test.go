package tension

import (
	"math/rand/v2"
	"testing"

	"tautbook/survey"
)

func finding(a Assessment, id string) string {
	for _, f := range a.Findings {
		if f.ID == id {
			return f.Text
		}
	}
	return ""
}

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
		t.Logf("%s: %s\n  %s\n  %s", c.name, a.Verdict, a.Reason, a.NextStep)
		for _, f := range a.Findings {
			t.Logf("   [%s %s] %s", f.Level, f.ID, f.Text)
		}
		for _, b := range a.Budget {
			t.Logf("   %-30s %-16s %-12s %6.0f N %.4f %.0f %%", b.Input, b.Value, b.U, b.OnH, b.OnR, 100*b.Share)
		}
	}
}
