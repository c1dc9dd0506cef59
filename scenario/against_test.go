package scenario

import (
	"context"
	"errors"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
)

// TestAgainst: against another option the change is that against the baseline, seen from there.
func TestAgainst(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	base := compare(t, s)
	c, err := Compare(context.Background(), s, CompareQuery{Against: "lined channels"})
	if err != nil {
		t.Fatal(err)
	}
	if c.Settings.Against != "lined channels" || base.Settings.Against != "" {
		t.Errorf("against is %q and %q", c.Settings.Against, base.Settings.Against)
	}
	for k := range c.Cases {
		for i, o := range c.Cases[k].Options {
			was := base.Cases[k].Options[i]
			if o.Baseline != was.Baseline || o.Decision.Rank != was.Decision.Rank {
				t.Errorf("%s: baseline or rank changed", o.Name)
			}
			for b := range o.Bands {
				if (o.Bands[b].Change == nil) != (o.Name == "lined channels") {
					t.Errorf("%s on %s: change is %v", o.Name, o.Bands[b].Name, o.Bands[b].Change)
				}
				o.Bands[b].Change, was.Bands[b].Change = nil, nil
			}
			if diff := cmp.Diff(was, o); diff != "" {
				t.Errorf("%s: more than the change differs:\n%s", o.Name, diff)
			}
		}
	}
	from := compare(t, s).Cases[0].Options
	channels := slices.IndexFunc(from, func(o result.Option) bool { return o.Name == "lined channels" })
	c, _ = Compare(context.Background(), s, CompareQuery{Against: "lined channels"})
	there, back := from[channels].Bands[1].Change.DaysPerYear, c.Cases[0].Options[0].Bands[1].Change.DaysPerYear
	if there.Difference != -back.Difference || there.YearsBetter != back.YearsWorse || there.DifferenceCI[0] != -back.DifferenceCI[1] {
		t.Errorf("from the baseline to the channels %+v, and back %+v", there, back)
	}
	var wrong *fault.Error
	if _, err := Compare(context.Background(), s, CompareQuery{Against: "channels"}); !errors.As(err, &wrong) || !strings.Contains(err.Error(), "lined channels") {
		t.Errorf("an unknown option gives %v", err)
	}
}
