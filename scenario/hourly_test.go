package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"quietslope/cascade"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

const hourlyStudy = `study: Hours with the time at their end, works that change the ground
weather:
  file: hours.csv
  columns:
    time: {name: time, format: "DD.MM.YYYY hh:mm"}
    rain: {name: rain, unit: 0.1 mm}
  stamp: end
ground:
  surface: {infiltration: 50 %, infiltration_limit: 2 mm/h}
  cover: {thickness: 3 m, drainable_porosity: 8 %, seepage: 0.02 /d, percolation: 0.03 /d, percolation_ceiling: 3 mm/d}
  deep: {thickness: 6 m, drainable_porosity: 2 %, seepage: 0.04 /d, lateral_inflow: 0.1 mm/d}
  start: {cover: 0.5 m, deep: 1 m}
  warm_up: 1 y
bands:
  - {name: low, level: 1.5 m}
  - {name: high, level: 2.2 m, until: 2.0 m}
count: {apart: 2 d, year_starts: March, decide_on: high, decide_by: events, confidence: 80 %, resamples: 300, seed: 7}
options:
  - name: as it stands
  - name: other ground
    set: {cover.drainable_porosity: 4 %, deep.drainable_porosity: 1 %, cover.percolation_ceiling: 4 mm/d}
    trench_drains: {depth: 2 m, rate: 0.05 /d, efficiency: 80 %}
    bored_drains: {rate: 0.02 /d, level: 1 m, ceiling: 0.3 mm/d}
    surface_water: {kept_out: 10 %}
site: {plan_area: 1 ha}
`

// TestHourlyStudy works the same study out beside the program: the water by hand, the two stores by the engine alone from
// a model written out in numbers, the counts by plain loops over the hours.
func TestHourlyStudy(t *testing.T) {
	const days = 1.0 / 24
	first := time.Date(2001, time.January, 10, 0, 0, 0, 0, time.UTC)
	last := time.Date(2004, time.April, 20, 7, 0, 0, 0, time.UTC)
	hours := int(last.Sub(first) / time.Hour)
	rng := rand.New(rand.NewPCG(2, 4))
	rain := make([]float64, hours)
	var b strings.Builder
	b.WriteString("time,rain\n")
	wet := false
	for i := range rain {
		winter := 1 + math.Cos(2*math.Pi*float64(i)/24/365.25)
		if wet {
			wet = rng.Float64() < 0.8
		} else {
			wet = rng.Float64() < 0.02*winter
		}
		tenths := 0
		if wet {
			tenths = int(14 * rng.ExpFloat64())
		}
		rain[i] = float64(tenths) / 10
		fmt.Fprintf(&b, "%s,%d\n", first.Add(time.Duration(i+1)*time.Hour).Format("02.01.2006 15:04"), tenths)
	}
	dir := t.TempDir()
	path := filepath.Join(dir, "study.yaml")
	for name, text := range map[string]string{"study.yaml": hourlyStudy, "hours.csv": b.String()} {
		if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}

	inf := math.Inf(1)
	eighty := 0.8 // per cent; not a constant, so that the product is rounded as the program's is
	models := []struct {
		keep        float64 // of the infiltration
		cover, deep float64 // mm in a metre
		model       cascade.Model
	}{
		{1, 80, 20, cascade.Model{
			Cover:       cascade.Store{Capacity: 240, Seepage: 0.02},
			Percolation: cascade.Outlet{Rate: 0.03, Ceiling: 3},
			Deep:        cascade.Store{Capacity: 120, Seepage: 0.04}, Lateral: 0.1,
		}},
		{0.9, 40, 10, cascade.Model{
			Cover:       cascade.Store{Capacity: 120, Seepage: 0.02, Drains: []cascade.Outlet{{Rate: eighty * 0.05, Invert: 40, Ceiling: inf}}},
			Percolation: cascade.Outlet{Rate: 0.03, Ceiling: 4},
			Deep:        cascade.Store{Capacity: 60, Seepage: 0.04, Drains: []cascade.Outlet{{Rate: 0.02, Invert: 10, Ceiling: 0.3}}}, Lateral: 0.1,
		}},
	}
	s := load(t, path)
	series, err := Levels(context.Background(), s, LevelsQuery{})
	if err != nil {
		t.Fatal(err)
	}
	c := compare(t, s)
	if len(series.Rain) != hours || c.Record.Rows != hours {
		t.Fatalf("%d hours, want %d", len(series.Rain), hours)
	}

	// Years from March 2001, 2002 and 2003 are complete.
	from := int(time.Date(2001, time.March, 1, 0, 0, 0, 0, time.UTC).Sub(first) / time.Hour)
	to := int(time.Date(2004, time.March, 1, 0, 0, 0, 0, time.UTC).Sub(first) / time.Hour)
	const years = 3
	if c.Record.YearsCounted != years || c.Record.WarmUpYears != 1 || c.Settings.YearStarts != "March" {
		t.Fatalf("%+v, year starts in %s", c.Record, c.Settings.YearStarts)
	}
	if want := float64(hours-(to-from)) / 24; math.Abs(c.Record.PartialDays-want) > 1e-9 {
		t.Errorf("partial days %v, want %v", c.Record.PartialDays, want)
	}
	if c.Record.CountedFrom != "2001-03-01T01:00" || c.Record.CountedTo != "2004-03-01T00:00" {
		t.Errorf("counted from %s to %s", c.Record.CountedFrom, c.Record.CountedTo)
	}

	events := make([][]float64, len(models)) // on the band that decides, by year
	for k, m := range models {
		depths := make([]float64, hours)
		for i := range depths {
			depths[i] = m.keep * min(0.5*rain[i], 2)
		}
		run, err := cascade.NewRun(m.model, 0.5*m.cover, 1*m.deep)
		if err != nil {
			t.Fatal(err)
		}
		dry, err := cascade.NewRun(m.model, 0, 0)
		if err != nil {
			t.Fatal(err)
		}
		cover, deep := make([]float64, hours), make([]float64, hours)
		fromDry := make([]float64, hours)
		must := func(err error) {
			t.Helper()
			if err != nil {
				t.Fatal(err)
			}
		}
		must(run.Replay(depths[:365*24], days, nil, nil))
		must(run.Replay(depths, days, cover, deep))
		must(dry.Replay(depths[:365*24], days, nil, nil))
		must(dry.Replay(depths, days, nil, fromDry))
		for i := range hours {
			cover[i] /= m.cover
			deep[i] /= m.deep
			if math.Abs(series.Cover[k][i]-cover[i]) > 1e-12 || math.Abs(series.Deep[k][i]-deep[i]) > 1e-12 || math.Abs(series.Recharge[k][i]-depths[i]) > 1e-12 {
				t.Fatalf("option %d, hour %d: %v m over %v m, %v mm; want %v m over %v m, %v mm", k, i,
					series.Cover[k][i], series.Deep[k][i], series.Recharge[k][i], cover[i], deep[i], depths[i])
			}
		}
		o := &c.Cases[0].Options[k]
		if felt := math.Abs(deep[from] - fromDry[from]/m.deep); (felt > startFelt) != warned(c.Warnings, "start_still_felt", o.Name) {
			t.Errorf("option %d: the start is felt by %v m, and the warning says otherwise", k, felt)
		}

		for band, th := range []struct{ level, until float64 }{{1.5, 1.5}, {2.2, 2.0}} {
			count, above, load := 0, 0, 0.0
			byYear := make([]float64, years)
			for i := 0; i < hours; {
				if !(deep[i] > th.level) {
					i++
					continue
				}
				last, peak := i, i
				stays := true // above until since last
				j := i + 1
				for ; j < hours; j++ {
					stays = stays && deep[j] > th.until
					if deep[j] > th.level {
						last, stays = j, true
						if deep[j] > deep[peak] {
							peak = j
						}
					} else if j-last >= 48 && !stays {
						break
					}
				}
				if peak >= from && peak < to {
					count++
					y := first.Add(time.Duration(peak) * time.Hour)
					year := y.Year() - 2001
					if y.Month() < time.March {
						year--
					}
					byYear[year]++
				}
				i = j
			}
			for i := from; i < to; i++ {
				if deep[i] > th.level {
					above++
					load += (deep[i] - th.level) * days
				}
			}
			f := &o.Bands[band]
			if f.Events != float64(count) || math.Abs(f.DaysPerYear*years*24-float64(above)) > 1e-6 || math.Abs(f.LoadMDaysPerYear*years-load) > 1e-9 {
				t.Errorf("option %d, band %d: %v events, %v h, load %v; want %d, %d, %v", k, band, f.Events, f.DaysPerYear*years*24, f.LoadMDaysPerYear*years, count, above, load)
			}
			if count == 0 {
				t.Errorf("option %d, band %d: nothing to count", k, band)
			}
			lo, hi := stats.PoissonInterval(float64(count), years, 0.8)
			if f.EventsPerYearCI[0] != lo || f.EventsPerYearCI[1] != hi {
				t.Errorf("option %d, band %d: interval %v", k, band, f.EventsPerYearCI)
			}
			if band == 1 {
				events[k] = byYear
				if d := o.Decision; d.Measure != "events" || d.Value != float64(count)/years || d.CI == nil || d.CI[0] != lo || d.CI[1] != hi {
					t.Errorf("option %d decides by %+v", k, d)
				}
				if len(f.Spells) != count {
					t.Errorf("option %d: %d spells of %d events", k, len(f.Spells), count)
				}
			}
		}

		for i, d := range o.Drains {
			levels, porosity, outlet := cover, m.cover, cascade.Outlet{}
			if d.Layer == "deep" {
				levels, porosity, outlet = deep, m.deep, m.model.Deep.Drains[0]
			} else {
				outlet = m.model.Cover.Drains[0]
			}
			running, peak := 0, 0.0
			for _, h := range levels[from:to] {
				if h > d.InvertM {
					running++
				}
				peak = max(peak, outlet.Flow(h*porosity))
			}
			if d.InvertM != 1 || d.RatePerDay != outlet.Rate || math.Abs(d.RunningShare-float64(running)/float64(to-from)) > 1e-12 ||
				math.Abs(d.PeakMMPerDay-peak) > 1e-9 || d.PeakLPerS == nil || math.Abs(*d.PeakLPerS-peak*10000/86400) > 1e-9 {
				t.Errorf("drain %d: %+v; it runs %d h and carries up to %v mm/d", i, d, running, peak)
			}
		}
	}

	// The change is in events, and so is what tells apart.
	r := stats.NewResamples(years, 300, 2, 7)
	want := r.Compare(events[1], events[0], 0.8)
	got := c.Cases[0].Options[1].Bands[1].Change
	if got.EventsPerYear.Difference != want.Difference || got.EventsPerYear.ShareBetter != want.ShareBetter || got.ToldApart != want.ToldApart(0.8) {
		t.Errorf("change %+v, want %+v", got, want)
	}

	t.Run("cut", func(t *testing.T) {
		// Rows are cut by the time that they show, here the end of the step.
		for _, tt := range []struct {
			from, to, first, last string
			rows                  int
		}{
			{"2002-03-01", "2002-03-01", "01.03.2002 00:00", "01.03.2002 23:00", 24},
			{"2002-03-01T05:00", "2002-03-01T05:00", "01.03.2002 05:00", "01.03.2002 05:00", 1},
			{"2003", "2003-01", "01.01.2003 00:00", "31.01.2003 23:00", 31 * 24},
			{"", "2001-01-10", "10.01.2001 01:00", "10.01.2001 23:00", 23},
			{"2004-04-20", "", "20.04.2004 00:00", "20.04.2004 07:00", 8},
		} {
			cut, err := Levels(context.Background(), s, LevelsQuery{Options: []string{"other ground"}, From: tt.from, To: tt.to})
			if err != nil {
				t.Fatal(err)
			}
			if cut.Rows != tt.rows || cut.Time(0) != tt.first || cut.Time(cut.Rows-1) != tt.last {
				t.Fatalf("%s to %s: %d rows from %s to %s", tt.from, tt.to, cut.Rows, cut.Time(0), cut.Time(cut.Rows-1))
			}
			at := 0
			for series.Time(at) != tt.first {
				at++
			}
			for i := range cut.Rows {
				if cut.Rain[i] != series.Rain[at+i] || cut.Recharge[0][i] != series.Recharge[1][at+i] || cut.Cover[0][i] != series.Cover[1][at+i] || cut.Deep[0][i] != series.Deep[1][at+i] {
					t.Fatalf("%s to %s: row %d is not hour %d", tt.from, tt.to, i, at+i)
				}
			}
		}
		for _, q := range []LevelsQuery{
			{From: "2010"}, {From: "2002-02-30"}, {From: "2003", To: "2002"}, {To: "1.3.2002"},
			{Options: []string{"no such"}}, {Options: []string{"other ground", "other ground"}}, {Climate: "wetter"}, {Condition: "neglected"},
		} {
			var fe *fault.Error
			if _, err := Levels(context.Background(), s, q); !errors.As(err, &fe) {
				t.Errorf("%+v: %v", q, err)
			}
		}
		if _, err := Levels(context.Background(), s, LevelsQuery{Climate: AsRecorded, Condition: AsBuilt}); err != nil {
			t.Error(err)
		}
	})
}

func warned(ws []result.Warning, code, option string) bool {
	for _, w := range ws {
		if w.Code == code && w.Option == option {
			return true
		}
	}
	return false
}

// TestFailingOption: an option that cannot be replayed fails the whole comparison, as bad input.
func TestFailingOption(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	s.Options = append(s.Options, Option{Name: "closed", Measures: []Measure{{Key: "set", Set: []Assignment{
		{Key: "cover.seepage", Value: 0}, {Key: "cover.percolation_ceiling", Value: 0.01}, {Key: "cover.full_at", Value: math.Inf(1)},
	}}}})
	s.Ground.WarmUpYears = 1
	var fe *fault.Error
	if _, err := Compare(context.Background(), s, CompareQuery{}); !errors.As(err, &fe) {
		t.Errorf("got %v", err)
	}
}

// TestEach: the error of the lowest index is the one that counts, and a panic is an error that keeps its stack.
func TestEach(t *testing.T) {
	one, two := errors.New("one"), errors.New("two")
	for range 20 {
		err := each(50, func(i int) error {
			switch i {
			case 3:
				time.Sleep(time.Millisecond)
				return one
			case 4:
				return two
			}
			return nil
		})
		if err != one {
			t.Fatalf("got %v", err)
		}
	}
	err := each(2, func(i int) error {
		if i == 1 {
			panic("broken")
		}
		return nil
	})
	var p *Panic
	if !errors.As(err, &p) || p.Value != "broken" || !strings.Contains(string(p.Stack), "TestEach") {
		t.Errorf("got %v", err)
	}
	done := make([]bool, 10)
	if err := each(10, func(i int) error { done[i] = true; return nil }); err != nil {
		t.Error(err)
	}
	for i, d := range done {
		if !d {
			t.Errorf("%d is left out", i)
		}
	}
}
