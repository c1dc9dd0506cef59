package render

import (
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// TestUncountedEvents: where no event is counted, the table gives neither a rate nor its range.
func TestUncountedEvents(t *testing.T) {
	c := fixture(demoOptions[:3], threeBands)
	f := &c.Cases[0].Options[2].Bands[0]
	f.Events, f.EventsPerYear, f.EventsPerYearCI = 0, 0, result.Interval{0, 0.077}
	c.Warnings = append(c.Warnings, result.Warning{Code: "events_peak_outside", Severity: result.Warn, Option: demoOptions[2].name, Band: "watch", Text: "Passed."})
	text := written(t, Comparison(c))
	_, table, _ := strings.Cut(text, "watch: deep level above")
	_, row, _ := strings.Cut(table, "\nC  ")
	row, _, _ = strings.Cut(row, "\n")
	if cells := strings.Fields(strings.TrimPrefix(row, demoOptions[2].name)); cells[0] != "–" || strings.HasPrefix(cells[1], "(") {
		t.Errorf("the row reads %q", row)
	}
}

// TestSpells: twelve events are listed, further ones counted.
func TestSpells(t *testing.T) {
	for n, want := range map[int]string{12: "2001-01-02 (+0.50). Hold", 13: ", 1 more event. Hold", 14: ", 2 more events. Hold"} {
		c := fixture(demoOptions[:2], threeBands)
		for range n {
			f := &c.Cases[0].Options[0].Bands[1]
			f.Spells = append(f.Spells, result.Spell{From: "2001-01-01", To: "2001-01-02", Days: 2, PeakExcessM: 0.5})
		}
		text := written(t, Comparison(c))
		if text := strings.Join(strings.Fields(text), " "); !strings.Contains(text, want) || strings.Count(text, "2001-01-01 to") != 12 {
			t.Errorf("%d events: no %q", n, want)
		}
	}
}

func TestNotesMerge(t *testing.T) {
	ns := newNotes([]result.Warning{
		{Code: "a", Severity: result.Warn, Option: "x", Text: "One."}, {Code: "a", Severity: result.Warn, Option: "x", Text: "Two."},
		{Code: "a", Severity: result.Warn, Option: "x", Text: "One."},
	})
	if len(ns) != 2 {
		t.Fatalf("%d notes, want one of each text", len(ns))
	}
	if of := ns[0].concerns(func(string) string { return "B" }, nil); len(of) != 1 || of[0] != "option B" {
		t.Errorf("the first is about %q", of)
	}
}

func TestRangedBelowLeast(t *testing.T) {
	if v, r := ranged(0.001, ci(0.001, 0.5), -2); v != "<0.01" || r != "(<0.01–0.50)" {
		t.Errorf("got %s %s", v, r)
	}
}

// TestSafetyHeading: the table of a band that was given as a factor of safety says so.
func TestSafetyHeading(t *testing.T) {
	c := fixture(demoOptions[:2], threeBands)
	c.Bands[2].GivenAs, c.Bands[2].FactorOfSafety = "factor_of_safety", ptr(1.05)
	if text, want := written(t, Comparison(c)), "\nfast movement: factor of safety below 1.05, deep level above 4.80 m\n---"; !strings.Contains(text, want) {
		t.Errorf("no %q in:\n%s", want, text)
	}
}

// TestUnmet: demand that the cover could not meet is explained where there is some.
func TestUnmet(t *testing.T) {
	c := fixture(demoOptions[:2], threeBands)
	for _, unmet := range []float64{0, 31} {
		c.Cases[0].Options[1].WaterBalance.Cover.UnmetMM = unmet
		if text := written(t, Comparison(c)); strings.Contains(text, "unmet") != (unmet > 0) {
			t.Errorf("%v mm unmet:\n%s", unmet, text)
		}
	}
}
