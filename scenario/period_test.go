package scenario

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"quietslope/scenario/fault"
	"quietslope/scenario/weather"
)

// record is an empty record from first on.
func record(first string, step time.Duration, steps int) *weather.Record {
	t, err := time.Parse("2006-01-02T15:04", first)
	if err != nil {
		panic(err)
	}
	return &weather.Record{Name: "weather.csv", First: t, Step: step, Rain: make([]float64, steps)}
}

func TestCountYears(t *testing.T) {
	const day = 24 * time.Hour
	for _, tt := range []struct {
		name            string
		record          *weather.Record
		starts          time.Month
		years, from, to int
	}{
		{"calendar years, one a leap year", record("2003-01-01T00:00", day, 365+366), time.January, 2, 0, 731},
		{"a day short", record("2003-01-01T00:00", day, 365+365), time.January, 1, 0, 365},
		{"a day late", record("2003-01-02T00:00", day, 364+366), time.January, 1, 364, 730},
		{"from October", record("2003-01-01T00:00", day, 365+366+365), time.October, 2, 273, 273 + 366 + 365},
		{"none", record("2003-03-01T00:00", day, 364), time.March, 0, 0, 0},
		{"hours", record("2003-12-31T22:00", time.Hour, 2+366*24), time.January, 1, 2, 2 + 366*24},
		// The day from 9 to 9 that starts on 31 December belongs to December, and the year starts with the next.
		{"days that start at nine", record("2002-12-31T09:00", day, 366), time.January, 1, 1, 366},
		{"four centuries of days", record("1600-01-01T00:00", day, 400*365+97), time.January, 400, 0, 400*365 + 97},
		{"29 February as the first step", record("2004-02-29T00:00", day, 366), time.March, 1, 1, 366},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := countYears(tt.record, tt.starts)
			if p.years != tt.years || p.from != tt.from || p.to != tt.to {
				t.Fatalf("%d years, steps %d to %d; want %d, %d to %d", p.years, p.from, p.to, tt.years, tt.from, tt.to)
			}
			counted := 0
			for i, y := range p.calendar.Year {
				if (y >= 0) != (i >= tt.from && i < tt.to) {
					t.Fatalf("step %d is in year %d", i, y)
				}
				if y >= 0 {
					counted++
					if want := tt.record.Start(i).Month() - time.January; int(p.calendar.Month[i]) != int(want) {
						t.Fatalf("step %d is in month %d, want %d", i, p.calendar.Month[i], want)
					}
				}
			}
			if tt.years > 0 && (p.calendar.Year[tt.from] != 0 || int(p.calendar.Year[tt.to-1]) != tt.years-1) {
				t.Errorf("years run from %d to %d", p.calendar.Year[tt.from], p.calendar.Year[tt.to-1])
			}
		})
	}
}

func TestLowestMonth(t *testing.T) {
	r := record("2001-01-15T00:00", 24*time.Hour, 730)
	levels := make([]float64, 730)
	for i := range levels {
		levels[i] = 5
		switch m := r.Start(i).Month(); {
		case m == time.September:
			levels[i] = 2
		case m == time.January: // lower, but only the January of 2002 is complete
			levels[i] = 1
			if r.Start(i).Year() == 2002 {
				levels[i] = 2
			}
		}
	}
	if m := lowestMonth(r, levels); m != time.January {
		t.Errorf("lowest is %v, want January: of equal ones the earliest in the year", m)
	}
	levels[365] = 9 // in January 2002
	if m := lowestMonth(r, levels); m != time.September {
		t.Errorf("lowest is %v, want September", m)
	}
	if m := lowestMonth(record("2001-01-15T00:00", 24*time.Hour, 20), levels[:20]); m != 0 {
		t.Errorf("lowest of no complete month is %v", m)
	}
}

func TestNoCompleteYear(t *testing.T) {
	err := noCompleteYear(record("2003-03-01T00:00", 24*time.Hour, 300), time.January)
	want := "weather.csv: holds no complete year from January on: it runs from 2003-03-01 to 2003-12-25, and January 2003 to December 2003 lacks all or part of January 2003, February 2003, December 2003; give a longer record"
	if err.Error() != want {
		t.Errorf("got  %s\nwant %s", err, want)
	}
	err = noCompleteYear(record("2003-03-01T00:00", 24*time.Hour, 380), time.January)
	if !strings.Contains(err.Error(), "count.year_starts: March, from which it holds 1 complete year") {
		t.Errorf("no better month is named: %s", err)
	}
}

func TestWarmUp(t *testing.T) {
	w := func(rates ...float64) []*works {
		s := ground()
		var all []*works
		for _, r := range rates {
			s.Ground.DeepSeepage = r
			all = append(all, newWorks(s, &s.Options[0], &asBuilt, asNew))
		}
		return all
	}
	s := ground()
	long := record("1990-01-01T00:00", 24*time.Hour, 20*366)
	for _, tt := range []struct {
		name   string
		given  int
		all    []*works
		record *weather.Record
		years  int
		passes []int
	}{
		{"at least three years", -1, w(0.5), long, 3, []int{365 + 365 + 366}},
		// 5/0.001 d are 13.69 y; the years from 1990 on hold leap days in 1992, 1996 and 2000.
		{"five times the slowest of all options", -1, w(0.007, 0.001, 0.5), long, 14, []int{14*365 + 3}},
		{"as given", 2, w(0.001), long, 2, []int{730}},
		{"none", 0, w(0.001), long, 0, nil},
		{"again from the beginning", 5, w(0.001), record("1990-01-01T00:00", 24*time.Hour, 800), 5, []int{730, 730, 365}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			s.Ground.WarmUpYears = tt.given
			got, err := newWarmUp(s, tt.record, tt.all)
			if err != nil {
				t.Fatal(err)
			}
			same := len(got.passes) == len(tt.passes)
			for i := range min(len(got.passes), len(tt.passes)) {
				same = same && got.passes[i] == tt.passes[i]
			}
			if got.years != tt.years || !same || got.repeats != (len(tt.passes) > 1) {
				t.Errorf("got %+v", got)
			}
		})
	}
	// From 29 February at noon, a year ends with 28 February where there is no other.
	leap := record("2012-02-29T12:00", 12*time.Hour, 4*2*366)
	if got := wholeYears(leap); len(got) != 4 || got[0] != 2*365 || got[3] != 2*(4*365+1) {
		t.Errorf("whole years end at %v", got)
	}
	short := record("2012-02-29T12:00", 12*time.Hour, 2*364)
	s.Ground.WarmUpYears = 4
	var fe *fault.Error
	if _, err := newWarmUp(s, short, w(0.007)); !errors.As(err, &fe) {
		t.Errorf("a record of less than a year: %v", err)
	}
	s.Ground.WarmUpYears = 0
	if got, err := newWarmUp(s, short, w(0.007)); err != nil || got.years != 0 {
		t.Errorf("a record of less than a year without warm-up: %v, %v", got, err)
	}
	s.Ground.WarmUpYears = -1
	if _, err := newWarmUp(s, long, w(1e-6)); err == nil || !strings.Contains(err.Error(), "give ground.start levels") {
		t.Errorf("a store that takes ten thousand years to empty: %v", err)
	}
}

// TestWorks works rates and inverts by hand.
func TestWorks(t *testing.T) {
	near := func(what string, got, want float64) {
		t.Helper()
		if math.Abs(got-want) > 1e-12*math.Abs(want) {
			t.Errorf("%s is %v, want %v", what, got, want)
		}
	}
	inf, nan := math.Inf(1), math.NaN()
	s := ground(
		Option{Name: "by spacing", Measures: []Measure{
			{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 10, Conductivity: 0.02, Equivalent: 0.85, Head: 1.5, Efficiency: 0.8, Ceiling: inf}},
			{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.1}},
		}},
		Option{Name: "on the contact, the cover's conductivity, another porosity", Measures: []Measure{
			{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Spacing: 10, Equivalent: nan, Head: 2, Efficiency: 1, Ceiling: 3}},
			{Key: "set", Set: []Assignment{{Key: "cover.drainable_porosity", Value: 0.03}, {Key: "deep.drainable_porosity", Value: 0.02}}},
			{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: 2.5, Efficiency: 0.5, Ceiling: inf}},
		}},
	)
	s.Ground.CoverConductivity = 0.05
	a, b := newWorks(s, &s.Options[1], &asBuilt, asNew), newWorks(s, &s.Options[2], &asBuilt, asNew)
	// Half of the depth is the working head, half of that stands above the drain on average.
	near("rate", a.model.Cover.Drains[0].Rate, 0.8*math.Pi*math.Pi*0.02*(0.85+0.75)/(0.06*100))
	near("invert", a.model.Cover.Drains[0].Invert, 1000*0.06*1)
	near("kept out", a.keptOut, 0.1)
	near("rate on the contact", b.model.Cover.Drains[0].Rate, math.Pi*math.Pi*0.05*1/(0.03*100))
	if b.model.Cover.Drains[0].Invert != 0 || b.model.Cover.Drains[0].Ceiling != 3 {
		t.Errorf("on the contact: %+v", b.model.Cover.Drains[0])
	}
	near("bored rate", b.model.Deep.Drains[0].Rate, 0.005)
	near("bored invert", b.model.Deep.Drains[0].Invert, 1000*0.02*2.5)
	near("capacity", b.model.Cover.Capacity, 1000*0.03*4)
	near("zero-invert rate with a drain on the contact", b.minZeroInvertRate(), 0.007)
	if s.Ground.CoverPorosity != 0.06 {
		t.Error("set has changed the study's own ground")
	}
	s.Ground.DeepSeepage = 5
	near("zero-invert rate of the cover", newWorks(s, &s.Options[2], &asBuilt, asNew).minZeroInvertRate(), 0.011+0.0045+math.Pi*math.Pi*0.05/(0.03*100))
}
