package render

import (
	"regexp"
	"strings"
	"testing"
	"time"

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

// TestSpells: up to forty events are listed, of more the forty highest in order of time.
func TestSpells(t *testing.T) {
	for n, want := range map[int]string{1: "above it at these times,", 40: "above it at these times,", 41: "above it in 41 events, of which these 40 rose highest,", 60: "above it in 60 events, of which these 40 rose highest,"} {
		c := fixture(demoOptions[:2], threeBands)
		f := &c.Cases[0].Options[0].Bands[1]
		for i := range n {
			day := time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC).AddDate(0, 0, 30*i).Format(time.DateOnly)
			f.Spells = append(f.Spells, result.Spell{From: day, To: day, PeakExcessM: 0.5 + float64(i*7%n)/100}) // each height once
		}
		text := written(t, Comparison(c))
		fits(t, text)
		if text := strings.Join(strings.Fields(text), " "); !strings.Contains(text, want) {
			t.Errorf("%d events: no %q in %s", n, want, text)
		}
		_, md, _ := strings.Cut(asMarkdown(t, Comparison(c)), "| from and to")
		var from []string
		for i, s := range f.Spells {
			listed := strings.Contains(md, "| "+s.From+" to ")
			if high := i*7%n >= n-40; listed != high {
				t.Errorf("%d events, %+v: listed is %v", n, s, listed)
			}
			if listed {
				from = append(from, regexp.QuoteMeta(s.From))
			}
		}
		if !regexp.MustCompile("(?s)" + strings.Join(from, ".*")).MatchString(md) {
			t.Errorf("%d events are not in order of time:\n%s", n, md)
		}
	}
}

func TestNotesMerge(t *testing.T) {
	ns := newNotes([]result.Warning{
		{Code: "a", Severity: result.Warn, Option: "x", Text: "One."}, {Code: "a", Severity: result.Warn, Option: "x", Text: "Two."},
		{Code: "a", Severity: result.Warn, Option: "x", Text: "One."},
	})
	if len(ns.list) != 2 {
		t.Fatalf("%d notes, want one of each text", len(ns.list))
	}
	if of := ns.list[0].concerns(newScope([]string{"w", "x"}, nil)); of != "option B" {
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

// TestWholeBalance: a balance with all its parts fits the page.
func TestWholeBalance(t *testing.T) {
	c := fixture(demoOptions, threeBands)
	for i := range c.Cases[0].Options {
		b := &c.Cases[0].Options[i].WaterBalance
		b.Cover = result.CoverBalance{InMM: 48000, SeepageMM: 20000, PercolationMM: 12000, DrainsMM: 7000, OverflowMM: 9000, UnmetMM: 300, StorageChangeMM: 200}
		b.Deep = result.DeepBalance{InMM: 12000, LateralMM: 700, SeepageMM: 8000, DrainsMM: 4000, RefusedMM: 500, StorageChangeMM: 200}
	}
	fits(t, written(t, Comparison(c)))
	readsAsMeant(t, Comparison(c))
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

// TestFlowing: a drain that carries next to nothing does not make its column wider than the page.
func TestFlowing(t *testing.T) {
	for x, want := range map[float64]string{0: "0", 123.4: "120", 0.2251: "0.23", 0.000034: "0.000034", 0.00001: "0.000010", 0.0000099: "<0.00001", 3e-12: "<0.00001"} {
		if got := flowing(x); got != want {
			t.Errorf("%g: %s, want %s", x, got, want)
		}
	}
}
