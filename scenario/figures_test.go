package scenario

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"quietslope/cascade"
	"quietslope/scenario/result"
	"quietslope/scenario/weather"
	"quietslope/stats"
)

// TestFiguresByHand: two years of days with the deep level at 1 m, but for ten days at 3 m and five at 4 m, and the cover
// level exactly at its drain but for 73 days.
func TestFiguresByHand(t *testing.T) {
	p := quiet()
	p.record = record("2001-01-01T00:00", 24*time.Hour, 2*365+40)
	p.counted = countYears(p.record, time.January)
	s := p.study
	s.Site.GroundLevel, s.Ground.CalibratedTo = 418, 2.5
	s.Bands = []Band{{Name: "low", Level: 2.5, Until: 2.5}, {Name: "high", Level: 3.5, Until: 3.5}, {Name: "higher", Level: 5, Until: 5}}
	s.Count.DecideOn = 1
	s.Options[1].Measures = []Measure{{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Rate: 0.05, Equivalent: math.NaN(), Efficiency: 1, Ceiling: math.Inf(1)}}}
	p.rework()
	p.replayer.record = p.record
	tr := &trace{works: p.works[1], recharge: make([]float64, 770), cover: make([]float64, 770), deep: make([]float64, 770)}
	for i := range tr.deep {
		tr.cover[i], tr.deep[i] = 1, 1
		switch {
		case i >= 10 && i < 20:
			tr.deep[i] = 3
		case i >= 100 && i < 105:
			tr.deep[i] = 4
		case i >= 200 && i < 273:
			tr.cover[i] = 1.5
		}
	}
	tr.counted = cascade.Totals{Days: 730, Cover: cascade.CoverTotals{Drains: []float64{73}}}
	tr.whole = tr.counted
	f := p.figures(tr)
	if d := f.Drains[0]; d.RunningShare != 0.1 || d.MeanMMPerDay != 0.1 {
		t.Errorf("a drain exactly at the level runs: %+v", d)
	}
	low, high, higher := &f.Bands[0], &f.Bands[1], &f.Bands[2]
	if low.Events != 2 || low.DaysPerYear != 7.5 || low.DaysInBandPerYear != 5 || low.Spells != nil {
		t.Errorf("low: %+v", low)
	}
	want := result.Spell{From: "2001-04-11", To: "2001-04-15", Days: 5, PeakExcessM: 0.5}
	if len(high.Spells) != 1 || high.Spells[0] != want {
		t.Errorf("spells %+v, want %+v", high.Spells, want)
	}
	if higher.PeakExcessM != nil || higher.MeanSpanDays != nil {
		t.Errorf("a band without an event has a peak: %+v", higher)
	}
	bands := p.bands()
	if *bands[0].ElevationM != 407.5 || !*bands[0].WithinReadings || *bands[1].WithinReadings {
		t.Errorf("bands %+v", bands)
	}
}

// TestActualETOfCountedYears: what entered the ground in the counted years left it as recharge or evapotranspiration, but
// for what the soil holds.
func TestActualETOfCountedYears(t *testing.T) {
	s, r := ground(), invented(5, 5)
	p := replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}
	c := period{from: 400, to: 400 + 3*365}
	tr, err := p.replay(context.Background(), newWorks(s, &s.Options[0], &asBuilt, asNew), c)
	if err != nil {
		t.Fatal(err)
	}
	in := s.Ground.Infiltration * total(r.Rain[c.from:c.to])
	if left := in - total(tr.recharge[c.from:c.to]) - tr.actualET; math.Abs(left) > s.Ground.Soil.Available {
		t.Errorf("%v mm entered, %v mm are not accounted for", in, left)
	}
}

// TestFromDry holds the forgetting of the start against a replay that begins dry.
func TestFromDry(t *testing.T) {
	s, r := ground(), invented(3, 2)
	p := replayer{study: s, record: r}
	c := period{from: 100, to: 500}
	steady, err := p.replay(context.Background(), newWorks(s, &s.Options[0], &asBuilt, asNew), c)
	if err != nil {
		t.Fatal(err)
	}
	s.Ground.Start = &StartLevels{}
	dry, err := p.replay(context.Background(), newWorks(s, &s.Options[0], &asBuilt, asNew), c)
	if err != nil {
		t.Fatal(err)
	}
	if want := steady.deep[100] - dry.deep[100]; !(want > 0.1) || math.Abs(steady.fromDry-want) > 1e-12 || dry.fromDry != 0 {
		t.Errorf("%v m from dry, want %v; %v m from dry to dry", steady.fromDry, want, dry.fromDry)
	}
}

// TestSteadyStart: the start is steady under the mean recharge of the whole years; and what is told of the record holds
// nothing of the warm-up.
func TestSteadyStart(t *testing.T) {
	s := ground()
	s.Ground.Soil = nil
	r := record("2001-01-01T00:00", 24*time.Hour, 800)
	for i := range r.Rain {
		r.Rain[i] = []float64{1, 3, 7}[i/365]
	}
	w := newWorks(s, &s.Options[0], &asBuilt, asNew)
	p := replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}
	tr, err := p.replay(context.Background(), w, period{from: 0, to: 730})
	if err != nil {
		t.Fatal(err)
	}
	cover, deep, err := w.model.Steady(0.8 * 2)
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(tr.start.Cover-cover/60) > 1e-12 || math.Abs(tr.start.Deep-deep/14) > 1e-12 {
		t.Errorf("starts from %+v m, want %v and %v", tr.start, cover/60, deep/14)
	}
	if want := 0.8 * (365 + 3*365 + 7*70); math.Abs(tr.whole.Cover.In-want) > 1e-9 || tr.whole.Days != 800 {
		t.Errorf("%v mm in %v d entered, want %v", tr.whole.Cover.In, tr.whole.Days, want)
	}
}

func TestTotalKeepsSmallTerms(t *testing.T) {
	xs := make([]float64, 64*1001)
	xs[0] = 1e16
	for k := 1; k <= 1000; k++ {
		xs[64*k] = 1
	}
	if got := total(xs); got != 1e16+1000 {
		t.Errorf("got %v", got)
	}
}

// TestWarmUpCountsInBalance: an error that is nothing beside the water of the warm-up is none.
func TestWarmUpCountsInBalance(t *testing.T) {
	tr := deepLevels(t, ground(), 0, invented(3, 1))
	tr.whole.Cover.Seepage += 1e-5
	tr.whole.Deep.Seepage += 1e-5
	if err := tr.checkBalance(&cascade.Totals{Cover: cascade.CoverTotals{In: -1e5}, Deep: cascade.DeepTotals{In: 1e5}}, 100, 100); err != nil {
		t.Error(err)
	}
}

func TestNearestYearIsTheFirst(t *testing.T) {
	err := noCompleteYear(record("2003-07-02T00:00", 24*time.Hour, 366), time.January) // 183 d in either year
	if !strings.Contains(err.Error(), "and January 2003 to December 2003 lacks") {
		t.Error(err)
	}
}

func TestSummarise(t *testing.T) {
	tr := &trace{whole: cascade.Totals{Deep: cascade.DeepTotals{In: 100, Refused: 5}}}
	if got := summarise(tr).refusedShare; got != 0.05 {
		t.Errorf("refused share %v", got)
	}
}

func TestDescribeDrains(t *testing.T) {
	o := &Option{Measures: []Measure{
		{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 12, Efficiency: 0.8, Ceiling: 5}},
		{Key: "bored_drains", Bored: &BoredDrains{Level: 3, Rate: 0.005, Efficiency: 1, Ceiling: math.Inf(1)}},
	}}
	want := "trench drains 3 m deep, 12 m apart, 80 % efficient, at most 5 mm/d|bored drains at 3 m in the deep layer, 0.005 /d"
	if got := strings.Join(o.describe(), "|"); got != want {
		t.Errorf("got %s", got)
	}
}

// TestWhyDrainIsDry: the text says whether the slope as it is or the option leaves a drain dry.
func TestWhyDrainIsDry(t *testing.T) {
	for level, want := range map[float64]string{4: "what else the option does", 9: "they do nothing in this record"} {
		p := quiet()
		p.study.Options[1].Measures = []Measure{{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: level, Efficiency: 0.9, Ceiling: math.Inf(1), Decline: upkept}}}
		p.rework()
		options := make([]optionFigures, 2)
		options[1].Drains = []result.Drain{{RunningShare: 0}}
		if ws := p.studyWarnings(options); len(ws) != 1 || !strings.Contains(ws[0].Text, want) {
			t.Errorf("at %v m: %+v", level, ws)
		}
	}
}

// TestNeighboursByRank: neighbours are those of the order by rank, not of the study.
func TestNeighboursByRank(t *testing.T) {
	p := quiet()
	r := stats.NewResamples(shortRecordYears, 400, 1, 1)
	option := func(name string, rank int, load float64) optionFigures {
		f := optionFigures{Option: result.Option{Name: name, Baseline: rank == 9, Decision: &result.Decision{Rank: rank}, Bands: []result.BandFigure{{DaysPerYear: 1}}}, passed: make([]stats.Exceedance, 1)}
		for range shortRecordYears {
			f.passed[0].LoadByYear = append(f.passed[0].LoadByYear, load)
		}
		return f
	}
	var ws warnings
	nearly := option("nearly", 4, 5)
	nearly.passed[0].LoadByYear[3] = 6 // one year does not tell two options apart
	p.choiceWarnings(&ws, []optionFigures{option("base", 9, 9), option("least", 1, 1), option("most", 5, 8), option("least too", 1, 1),
		option("less", 3, 5), nearly, option("and too", 1, 1)}, 0, r)
	if len(ws) != 2 || !strings.Contains(ws[0].Text, "counted year: least = least too = and too.") || !strings.Contains(ws[1].Text, "tell apart: less / nearly.") {
		t.Errorf("%+v", ws)
	}
}

// TestCheckFinds: check hands on what the audit and the replay of the baseline found.
func TestCheckFinds(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	s.Ground.WarmUpYears, s.Ground.Start, s.Count.YearStarts = 0, &StartLevels{Cover: 3, Deep: 8}, 1
	var b strings.Builder // the same rain every day, as from a sensor that is stuck
	fmt.Fprintf(&b, "%s,%s,%s\n", s.Weather.Time, s.Weather.Rain.Name, s.Weather.PET.Name)
	for i := range 800 {
		fmt.Fprintf(&b, "%s,5,2\n", time.Date(2001, time.January, 1+i, 0, 0, 0, 0, time.UTC).Format(time.DateOnly))
	}
	s.Weather.Path = filepath.Join(t.TempDir(), "weather.csv")
	if err := os.WriteFile(s.Weather.Path, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	c, err := Check(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	if !warned(c.Warnings, "start_still_felt", s.Options[0].Name) {
		t.Error("nothing says that the start is still felt")
	}
	if !slices.ContainsFunc(c.Audit.Suspicious, func(q result.Suspicious) bool { return q.Kind == weather.KindRepeatedRain }) {
		t.Errorf("found %+v", c.Audit.Suspicious)
	}
	for _, o := range c.Options {
		for _, d := range o.Drains {
			if d.Law == "quadratic" {
				if d.HalfLifeDays != nil {
					t.Errorf("%s: a half-life by the quadratic law", o.Name)
				}
				continue
			}
			if d.HalfLifeDays == nil || math.Abs(*d.HalfLifeDays*d.RatePerDay-math.Ln2) > 1e-12 {
				t.Errorf("%s: half-life %v", o.Name, d.HalfLifeDays)
			}
		}
	}
}
