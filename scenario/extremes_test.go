package scenario

import (
	"context"
	"errors"
	"strings"
	"testing"

	"quietslope/scenario/fault"
)

// onlyTrenches is the demo with the options of one kind that follow instead of its own.
func onlyTrenches(t *testing.T, trenches string, edits ...string) *Study {
	t.Helper()
	text, _, _ := strings.Cut(demoText(t, edits...), "\noptions:\n")
	return parsed(t, text+"\noptions:\n  - name: as it stands\n  - name: trenches\n    trench_drains: "+trenches+"\n")
}

// TestLawOfStoppedDrains: drains by the quadratic law are that too where nothing of them is left.
func TestLawOfStoppedDrains(t *testing.T) {
	for _, decline := range []string{"none", "{half_life: 1 s}", "{half_life: 1 s, flushed_every: 5 y, restored_to: 95 %}"} {
		s := onlyTrenches(t, "{spacing: 12 m, depth: 4.0 m, law: quadratic, decline: "+decline+"}")
		s.Conditions = []Condition{{Name: "stopped", SurfaceWater: 1, Vegetation: 1}}
		c := compare(t, s)
		for _, of := range c.Cases {
			if law := of.Options[1].Drains[0].Law; law != "quadratic" {
				t.Errorf("decline %s, %s: %s", decline, of.Condition, law)
			}
		}
	}
}

// TestBeyondReplay: what asks for more than can be replayed is a fault of the study, and what to look at is said.
func TestBeyondReplay(t *testing.T) {
	for _, tt := range []struct {
		what string
		s    *Study
		want string
	}{
		{"a square", onlyTrenches(t, "{spacing: 0.5 m, depth: 4.0 m, conductivity: 1e5 m/d, law: quadratic}", "porosity: 8 %", "porosity: 0.0001 %"),
			"by the quadratic law the drains carry "},
		{"a replay", onlyTrenches(t, "{spacing: 12 m, depth: 4.0 m}", "    seepage: 0.007 /d ", "    lateral_inflow: 1e5 mm/d\n    full_at: none\n    seepage: 1e-6 /d ",
			"start: steady", "start: {cover: 0 m, deep: 0 m}", "warm_up: auto", "warm_up: 1 y"),
			"far more water comes in than leaves: from "},
	} {
		_, err := Compare(context.Background(), tt.s, CompareQuery{})
		var f *fault.Error
		switch {
		case tt.want == "" && err != nil:
			t.Errorf("%s: %v", tt.what, err)
		case tt.want != "" && (!errors.As(err, &f) || !strings.HasPrefix(f.Text, tt.want) || f.Line == 0):
			t.Errorf("%s: %v", tt.what, err)
		}
	}
}
