package scenario

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"quietslope/scenario/result"
	"quietslope/stats"
	"quietslope/stats/money"
)

// recordOfDays writes a record of days as a file and makes a study read it. PET may be nil.
func recordOfDays(t testing.TB, s *Study, first time.Time, rain, pet []float64) {
	t.Helper()
	var b strings.Builder
	b.WriteString("date,rain_mm,pet_mm\n")
	for i := range rain {
		demand := 0.0
		if pet != nil {
			demand = pet[i]
		}
		fmt.Fprintf(&b, "%s,%.3f,%.3f\n", first.AddDate(0, 0, i).Format(time.DateOnly), rain[i], demand)
	}
	path := filepath.Join(t.TempDir(), "weather.csv")
	if err := os.WriteFile(path, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	s.Weather = WeatherSpec{File: "weather.csv", Path: path, Time: "date", Format: "YYYY-MM-DD", Rain: WeatherColumn{"rain_mm", "mm"}}
	if pet != nil {
		s.Weather.PET = &WeatherColumn{"pet_mm", "mm"}
	}
}

// agrees compares to a share of 1e-9; rounding leaves far less.
func agrees(got, want float64) bool { return math.Abs(got-want) <= 1e-9*max(1, math.Abs(want)) }

func keptOut(share float64) []Measure {
	return []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: share}}}
}

// ownersStudy has stores so quick that the deep level at the end of a day is the day's rain in cm, made a tenth: 60 mm stand
// at 6.0 m, since what is left of the day before is e^-50 of it. The cover passes on 100 /d, the deep store loses 50 /d and
// holds 0.2 mm a metre.
//
// Each of the six years has
//
//	A  10 days at 60 mm, 6.00 m       C  4 days at 41.5 mm, 4.15 m, in the last two years 43 mm, 4.30 m
//	B   5 days at 48 mm, 4.80 m       D  1 day  at 40.2 mm, 4.02 m, in the last two years 40.8 mm, 4.08 m
//	E   3 days at 35 mm, 3.50 m
//
// with weeks between them, and bands at 3.0 m (100 a day), 4.0 m (1000 a day, 5000 an event) and 5.5 m (50000 an event).
func ownersStudy(t *testing.T) *Study {
	inf, nan := math.Inf(1), math.NaN()
	cost := func(capital, perYear, life float64) []Cost {
		return []Cost{{Capital: capital, PerYear: perYear, Life: life}}
	}
	const porosity = 0.01
	s := ground(
		Option{Name: "hardly anything", Measures: keptOut(0.01), Costs: cost(2000, 1000, inf)},
		Option{Name: "for nothing", Measures: keptOut(0.03), Costs: cost(0, 0, inf)},
		Option{Name: "a little", Measures: keptOut(0.04), Costs: cost(5000, 0, inf)},
		Option{Name: "channels", Minimum: true, Measures: keptOut(0.2), Costs: cost(10000, 500, 2)},
		Option{Name: "the same channels", Measures: keptOut(0.2), Costs: cost(10000, 500, 2)},
		Option{Name: "dear and worse", Measures: keptOut(0.1), Costs: cost(30000, 0, inf)},
		Option{Name: "no price", Measures: keptOut(0.45)},
		// 100·2/3 /d = π²·K·(0 + 2/2 m)/(0.01·(20 m)²): 100 of every 166.7 mm still reach the deep store, 0.6. The half-life
		// is so long that nothing clogs, and there are flushes to pay for.
		Option{Name: "trenches", Measures: []Measure{{Key: "trench_drains", Trench: &TrenchDrains{
			Depth: 4, Spacing: 20, Conductivity: 100 * 2 / 3.0 * porosity * 400 / (math.Pi * math.Pi),
			Radius: 0.1, Equivalent: nan, Head: 2, Efficiency: 1, Ceiling: inf,
			Decline: &Decline{HalfLife: 1e9, Every: 2, Restored: 1},
		}}}, Costs: []Cost{{Capital: 5000, PerMetre: 100, PerYear: 400, PerFlush: 2000, Life: 4, Drains: "trench_drains"}}},
	)
	s.Options[0].Costs = cost(0, 1000, inf)
	s.Ground = Ground{
		Infiltration: 1, InfiltrationLimit: inf,
		CoverThickness: 4, CoverPorosity: porosity, Percolation: 100, PercolationCap: inf, CoverFullAt: inf,
		DeepThickness: 9, DeepPorosity: 2e-4, DeepSeepage: 50, DeepFullAt: inf,
		Consolidation: 0.85 * 10 * 10 / 1.5, // m2/y: 1.5 y between trenches 20 m apart
		WarmUpYears:   1, CalibratedTo: nan,
	}
	s.Bands = []Band{
		{Name: "watch", GivenAs: "level", Level: 3, Until: 3, LossPerDay: 100},
		{Name: "onset", GivenAs: "level", Level: 4, Until: 4, LossPerEvent: 5000, LossPerDay: 1000},
		{Name: "fast", GivenAs: "level", Level: 5.5, Until: 5.5, LossPerEvent: 50000},
	}
	s.Count = Count{
		Apart: 3, YearStarts: 1, Confidence: 0.9, Resamples: 500, Seed: 1, MeanBlock: 2, DecideOn: 1, DecideBy: "days", DesignLife: 50,
		Target: &Target{Measure: "days", Most: 10, GivenAs: "days", Text: "10"},
	}
	s.Money = &Money{Currency: "EUR", Horizon: 5, Rate: 0.25, PricesOf: 2026, Contingency: 0.2}
	s.Site.PlanArea = 8000

	first := time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC)
	rain := make([]float64, 6*365+1) // one leap year
	for year := range 6 {
		c, d := 41.5, 40.2
		if year >= 4 {
			c, d = 43, 40.8
		}
		at := int(time.Date(2001+year, 1, 1, 0, 0, 0, 0, time.UTC).Sub(first).Hours() / 24)
		for _, block := range []struct {
			from, days int
			depth      float64
		}{{30, 10, 60}, {60, 5, 48}, {90, 4, c}, {120, 1, d}, {150, 3, 35}} {
			for i := range block.days {
				rain[at+block.from+i] = block.depth
			}
		}
	}
	recordOfDays(t, s, first, rain, nil)
	return s
}

// TestOwnersTable is worked out by hand, every figure that an owner is shown.
//
// Money: 5 years at 25 %. A year later counts 0.8, 0.64, 0.512, 0.4096, 0.32768; together P/A = 2.68928.
//
// Time to effect: what acts on the cover goes through stores of 100 and 50 /d, of which (100·u − 50·u²)/50 = 2u − u² is left
// at u = e^(-50t); 0.1 at u = 1 − √0.9, so t = -ln(1 − √0.9)/50 = 0.0594 d. The first year then counts 1 − t/365.25, and a
// benefit of 1 a year is worth F = 2.68928 − 0.8·t/365.25. The trenches act after 1.5 y, when the clay between them has
// drained: 0 + 0.5·0.64 + 0.512 + 0.4096 + 0.32768 = 1.56928.
func TestOwnersTable(t *testing.T) {
	const (
		annuity  = 2.68928
		trenches = 1.56928
	)
	store := -math.Log(1-math.Sqrt(0.9)) / 50
	f := annuity - 0.8*store/365.25

	c := compare(t, ownersStudy(t))
	if c.Record.YearsCounted != 6 {
		t.Fatalf("%d years counted", c.Record.YearsCounted)
	}
	type want struct {
		days, events         float64 // a year above the onset
		loss                 float64
		capital, pv          float64
		meets, dominatedBy   string
		frontier, toldApart  bool
		net                  float64
		perDay, perEvent     float64 // NaN for none, as below
		breakEven, ratio     float64
		stepFrom             string
		step                 float64
		constant             bool // every year is the same, and against the baseline too, so each interval is a point
		renewals, flushes, m float64
	}
	none := math.NaN()
	for name, w := range map[string]want{
		// Days A 10 + B 5 + C 4 + D 1. Losses: A reaches the fast band, 50000, and nothing more for passing the onset; B, C and D
		// 3·5000; 20 days at 1000; E lies between watch and onset, 3 days at 100. 50000 + 15000 + 20000 + 300.
		"as it stands": {days: 20, events: 4, loss: 85300, capital: 0, pv: 1000 * annuity, meets: "no", dominatedBy: "for nothing",
			net: none, perDay: none, perEvent: none, breakEven: none, ratio: none, step: none, constant: true},
		// Levels times 0.99: D is at 3.98 m in four years, below the onset, and at 4.04 m in two. Four years better and none
		// worse are too few. Losses 50000 + 2·5000 + 19·1000 + (3 + 1)·100 = 79400 four times, 85300 twice.
		"hardly anything": {days: (4*19 + 2*20) / 6.0, events: (4*3 + 2*4) / 6.0, loss: (4*79400 + 2*85300) / 6.0,
			capital: 2000 * 1.2, pv: 2400 + 1000*annuity, meets: "no", dominatedBy: "for nothing",
			net: f*(85300-(4*79400+2*85300)/6.0) - 2400, perDay: none, perEvent: none, breakEven: none, ratio: none, step: none},
		// Times 0.97: D below the onset in every year; C at 4.03 m. It costs less than the baseline: no ratio.
		"for nothing": {days: 19, events: 3, loss: 79400, capital: 0, pv: 0, meets: "no", frontier: true, toldApart: true,
			net: f*(85300-79400) + 1000*annuity, perDay: none, perEvent: none, breakEven: none, ratio: none, step: none, constant: true},
		// Times 0.96: C at 3.98 m in four years and at 4.13 m in two. Losses 50000 + 5000 + 15·1000 + (3 + 4 + 1)·100 = 70800
		// four times, 79400 twice. Better than the option before it in four years only: no ratio of the step.
		"a little": {days: (4*15 + 2*19) / 6.0, events: (4*2 + 2*3) / 6.0, loss: (4*70800 + 2*79400) / 6.0,
			capital: 6000, pv: 6000, meets: "no", frontier: true, toldApart: true,
			net:    f*(85300-(4*70800+2*79400)/6.0) - (6000 - 1000*annuity),
			perDay: (6000/annuity - 1000) / (20 - 98/6.0), perEvent: (6000/annuity - 1000) / (4 - 14/6.0),
			breakEven: (6000 - 1000*annuity) / ((4 - 14/6.0) * f), ratio: f * (85300 - (4*70800+2*79400)/6.0) / (6000 - 1000*annuity),
			stepFrom: "for nothing", step: none},
		// Times 0.8: A at 4.8 m, B at 3.84, C at 3.32 or 3.44, D at 3.216 or 3.264, E at 2.8. Losses 5000 + 10·1000 +
		// (5 + 4 + 1)·100. Renewed after 2 and 4 years: 12000·(1 + 0.64 + 0.4096) = 24595.2, and 500·2.68928 = 1344.64.
		"channels": {days: 10, events: 1, loss: 16000, capital: 12000, pv: 25939.84, meets: "yes", frontier: true, toldApart: true,
			net:    f*(85300-16000) - (25939.84 - 2689.28),
			perDay: (25939.84/annuity - 1000) / 10, perEvent: (25939.84/annuity - 1000) / 3,
			breakEven: 23250.56 / (3 * f), ratio: f * 69300 / 23250.56,
			stepFrom: "for nothing", step: f * (79400 - 16000) / 25939.84, constant: true, renewals: 2},
		"the same channels": {days: 10, events: 1, loss: 16000, capital: 12000, pv: 25939.84, meets: "yes", frontier: true, toldApart: true,
			net:    f*69300 - 23250.56,
			perDay: (25939.84/annuity - 1000) / 10, perEvent: (25939.84/annuity - 1000) / 3,
			breakEven: 23250.56 / (3 * f), ratio: f * 69300 / 23250.56,
			stepFrom: "channels", step: none, constant: true, renewals: 2},
		// Times 0.9: A at 5.4 m, no longer fast, B at 4.32, C at 3.735 or 3.87, D at 3.618 or 3.672, E at 3.15. Losses 2·5000 +
		// 15·1000 + (4 + 1 + 3)·100.
		"dear and worse": {days: 15, events: 2, loss: 25800, capital: 36000, pv: 36000, meets: "no", dominatedBy: "channels", toldApart: true,
			net:    f*(85300-25800) - (36000 - 2689.28),
			perDay: (36000/annuity - 1000) / 5, perEvent: (36000/annuity - 1000) / 2,
			breakEven: 33310.72 / (2 * f), ratio: f * 59500 / 33310.72, step: none, constant: true},
		// Times 0.6: A at 3.6 m, all else below 3. Losses 10·100. 8000 m2 / 20 m = 400 m of trench: (5000 + 100·400)·1.2 = 54000,
		// renewed after 4 years, 54000·1.4096 = 76118.4; 400·2.68928 = 1075.712; flushed after 2 and 4 years, 2000·(0.64 +
		// 0.4096) = 2099.2. Benefits 1.56928·84300 = 132290.304, less than those of the channels, which act at once.
		"trenches": {days: 0, events: 0, loss: 1000, capital: 54000, pv: 79293.312, meets: "yes", frontier: true, toldApart: true,
			net:    132290.304 - (79293.312 - 2689.28),
			perDay: (79293.312/annuity - 1000) / 20, perEvent: (79293.312/annuity - 1000) / 4,
			breakEven: 76604.032 / (4 * trenches), ratio: 132290.304 / 76604.032,
			stepFrom: "channels", step: (132290.304 - f*69300) / (79293.312 - 25939.84), constant: true, renewals: 1, flushes: 2, m: 400},
	} {
		o := optionNamed(t, c, name)
		k := o.Cost
		check := func(what string, got *float64, want float64) {
			t.Helper()
			switch {
			case got == nil && math.IsNaN(want):
			case got == nil || math.IsNaN(want) || !agrees(*got, want):
				t.Errorf("%s: %s is %v, want %v", name, what, shown(got), want)
			}
		}
		point := func(what string, ci *result.Interval, at float64) {
			t.Helper()
			switch {
			case !w.constant:
			case math.IsNaN(at):
				if ci != nil {
					t.Errorf("%s: %s has the interval %v, want none", name, what, *ci)
				}
			case ci == nil || !agrees(ci[0], at) || !agrees(ci[1], at):
				t.Errorf("%s: %s has the interval %v, want %v alone", name, what, ci, at)
			}
		}
		positive := func(x float64) float64 { // left out where there are none
			if x == 0 {
				return none
			}
			return x
		}
		count := func(n *int) *float64 {
			if n == nil {
				return nil
			}
			x := float64(*n)
			return &x
		}
		band := &o.Bands[1]
		check("days", &band.DaysPerYear, w.days)
		check("events", &band.EventsPerYear, w.events)
		check("decision", &o.Decision.Value, w.days)
		check("capital", &k.Capital, w.capital)
		check("present value", &k.PresentValue, w.pv)
		check("equal annual cost", &k.AnnualEquivalent, w.pv/annuity)
		check("annual loss", k.AnnualLoss, w.loss)
		check("net benefit", k.NetBenefit, w.net)
		check("per day", k.PerDayAvoided, w.perDay)
		check("per event", k.PerEventAvoided, w.perEvent)
		check("break-even loss", k.BreakEvenLoss, w.breakEven)
		check("benefit-cost ratio", k.BenefitCost, w.ratio)
		check("step", k.StepBenefitCost, w.step)
		check("metres", k.Metres, positive(w.m))
		check("renewals", count(k.Renewals), positive(w.renewals))
		check("flushes", count(k.Flushes), positive(w.flushes))
		point("annual loss", k.AnnualLossCI, w.loss)
		point("net benefit", k.NetBenefitCI, w.net)
		point("per day", k.PerDayAvoidedCI, w.perDay)
		point("per event", k.PerEventAvoidedCI, w.perEvent)
		if k.StepFrom != w.stepFrom || k.ToldApart != w.toldApart {
			t.Errorf("%s: step from %q, told apart %v, want %q, %v", name, k.StepFrom, k.ToldApart, w.stepFrom, w.toldApart)
		}
		d := o.Decision
		if d.OnFrontier == nil || *d.OnFrontier != w.frontier || d.DominatedBy != w.dominatedBy || d.MeetsTarget != w.meets {
			t.Errorf("%s: %+v, want on frontier %v, dominated by %q, target %s", name, d, w.frontier, w.dominatedBy, w.meets)
		}
	}

	free := optionNamed(t, c, "no price")
	if free.Cost != nil || free.Decision.OnFrontier != nil || free.Decision.Value != 0 || free.Decision.Rank != 1 {
		t.Errorf("an option without a cost: %+v, %+v", free.Cost, free.Decision)
	}
	if got := optionNamed(t, c, "channels").TimeToEffect; !agrees(got.StoreDays, store) || got.ClayDays != nil || got.Days != got.StoreDays {
		t.Errorf("time to effect of the channels %+v, want %v d", got, store)
	}
	trench := optionNamed(t, c, "trenches")
	if got := trench.TimeToEffect; got.ClayDays == nil || !agrees(*got.ClayDays, 1.5*365.25) || got.Days != *got.ClayDays {
		t.Errorf("time to effect of the trenches %+v, want 1.5 y", got)
	}
	if c.Cases[0].Options[0].TimeToEffect != nil {
		t.Error("the baseline has a time to effect")
	}

	// At twice the spacing the trenches take a quarter, 100/6 /d, and 6/7 of the water goes deep: A at 5.14 m and B at 4.11.
	var states []string
	for _, s := range trench.States {
		states = append(states, fmt.Sprintf("%s %.6f %.6f %s", s.State, s.EffectShare, s.Value, s.MeetsTarget))
	}
	want2 := []string{
		"as_new 1.000000 0.000000 yes", "mean_between_flushes 1.000000 0.000000 yes", "before_flush 1.000000 0.000000 yes", "never_flushed 1.000000 0.000000 yes",
		"half_stopped 0.250000 15.000000 no", "all_stopped 0.000000 20.000000 no",
	}
	if d := cmp.Diff(want2, states); d != "" {
		t.Errorf("states of the trenches (-want +got):\n%s", d)
	}
}

func optionNamed(t testing.TB, c *result.Comparison, name string) *result.Option {
	t.Helper()
	options := c.Cases[0].Options
	i := slices.IndexFunc(options, func(o result.Option) bool { return o.Name == name })
	if i < 0 {
		t.Fatalf("no option is named %s", name)
	}
	return &options[i]
}

func shown(x *float64) string {
	if x == nil {
		return "none"
	}
	return fmt.Sprint(*x)
}

// offer is an option with its yearly figures on the deciding band.
type offer struct {
	name         string
	costs        []Cost
	days, events []float64
	losses       []float64 // nil for none
	deep         float64   // total rate of the deep store with it, 1/d, on which it acts alone; 0 for one that never comes to act
	nothing      bool      // it has no measure
}

// priced puts offers before p.costs; the first is the baseline.
func priced(m Money, offers []offer) (*prepared, []optionFigures, *stats.Resamples) {
	s := ground()
	s.Options, s.Money, s.Count.DecideBy = nil, &m, "days"
	years := len(offers[0].days)
	p := &prepared{study: s, counted: period{years: years}}
	r := stats.NewResamples(years, s.Count.Resamples, s.Count.MeanBlock, s.Count.Seed)
	for i, o := range offers {
		option := Option{Name: o.name, Baseline: i == 0, Costs: o.costs}
		if !o.nothing && i > 0 {
			option.Measures = []Measure{{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: o.deep}}}}
		}
		s.Options = append(s.Options, option)
	}
	var options []optionFigures
	for i, o := range offers {
		e := stats.Exceedance{DaysByYear: o.days, EventsByYear: o.events, LoadByYear: o.days, AnyByYear: make([]float64, years)}
		if e.EventsByYear == nil {
			e.EventsByYear = make([]float64, years)
		}
		f := optionFigures{passed: []stats.Exceedance{e}, losses: o.losses}
		f.Name = o.name
		f.trace.works = newWorks(s, &s.Options[i], &asBuilt, asNew)
		f.Decision = &result.Decision{Value: stats.Mean(o.days)}
		options = append(options, f)
	}
	return p, options, r
}

func constant(n int, x float64) []float64 { return slices.Repeat([]float64{x}, n) }

// TestRatiosNeedADifference: what is divided by must be known not to be nothing, and be paid for.
func TestRatiosNeedADifference(t *testing.T) {
	inf := math.Inf(1)
	const years = 8
	m := Money{Horizon: 5, Rate: 0.25}
	capital := func(x float64) []Cost { return []Cost{{Capital: x, Life: inf}} }
	mixed := []float64{0, 2, 1, 1, 0, 2, 1, 0} // events, no fewer in the mean than one a year but for one
	base := offer{name: "base", days: constant(years, 20), events: constant(years, 1), losses: constant(years, 100)}
	for _, tt := range []struct {
		name                             string
		base, other                      []Cost
		option                           offer
		told, perDay, perEvent, ratio, k bool
	}{
		{"all of it", nil, nil, offer{costs: capital(10), days: constant(years, 10), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, true, true, true, true, true},
		{"fewer days, and nobody knows of events", nil, nil, offer{costs: capital(10), days: constant(years, 10), events: mixed, losses: constant(years, 40), deep: 1}, true, true, false, true, false},
		{"more events", nil, nil, offer{costs: capital(10), days: constant(years, 10), events: constant(years, 2), losses: constant(years, 40), deep: 1}, true, true, false, true, false},
		{"no fewer days", nil, nil, offer{costs: capital(10), days: constant(years, 20), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, false, false, false, false, false},
		{"four years better", nil, nil, offer{costs: capital(10), days: append(constant(4, 10), constant(4, 20)...), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, false, false, false, false, false},
		{"no losses", nil, nil, offer{costs: capital(10), days: constant(years, 10), events: constant(years, 0.5), deep: 1}, true, true, true, false, true},
		{"as dear as the baseline", capital(10), nil, offer{costs: capital(10), days: constant(years, 10), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, true, false, false, false, false},
		{"as dear but for rounding", capital(10), nil, offer{costs: capital(10 + 1e-12), days: constant(years, 10), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, true, false, false, false, false},
		{"cheaper than the baseline", capital(10), nil, offer{costs: capital(9), days: constant(years, 10), events: constant(years, 0.5), losses: constant(years, 40), deep: 1}, true, false, false, false, false},
		{"it never comes to act", nil, nil, offer{costs: capital(10), days: constant(years, 10), events: constant(years, 0.5), losses: constant(years, 40), deep: 0}, true, true, true, true, false},
	} {
		b := base
		b.costs = tt.base
		if tt.option.losses == nil {
			b.losses = nil
		}
		tt.option.name = tt.name
		p, options, r := priced(m, []offer{b, tt.option})
		p.costs(options, r)
		c := options[1].Cost
		if c.ToldApart != tt.told || (c.PerDayAvoided != nil) != tt.perDay || (c.PerEventAvoided != nil) != tt.perEvent || (c.BenefitCost != nil) != tt.ratio || (c.BreakEvenLoss != nil) != tt.k {
			t.Errorf("%s: %+v", tt.name, c)
		}
		if tt.perDay != (c.PerDayAvoidedCI != nil) || tt.perEvent != (c.PerEventAvoidedCI != nil) {
			t.Errorf("%s: a cost without its interval: %+v", tt.name, c)
		}
	}

	// Nothing drains the deep store, so the benefits never begin: only the cost is left.
	never := offer{name: "never", costs: capital(10), days: constant(years, 10), losses: constant(years, 40), deep: 0}
	p, options, r := priced(m, []offer{base, never})
	p.costs(options, r)
	if c := options[1].Cost; *c.NetBenefit != -10 || *c.BenefitCost != 0 || options[1].TimeToEffect != nil {
		t.Errorf("what never acts is worth %v, ratio %v", *c.NetBenefit, *c.BenefitCost)
	}
	// Ten years and no interest, acting from 2.5 y on: 7.5 years count.
	late := offer{name: "late", costs: capital(10), days: constant(years, 10), losses: constant(years, 40), deep: math.Ln10 / (2.5 * 365.25)}
	p, options, r = priced(Money{Horizon: 10}, []offer{base, late})
	p.costs(options, r)
	if c := options[1].Cost; !agrees(*c.NetBenefit, 7.5*60-10) || !agrees(c.AnnualEquivalent, 1) {
		t.Errorf("acting after 2.5 y it is worth %v, want 440; a year costs %v, want 1", *c.NetBenefit, c.AnnualEquivalent)
	}
}

// TestNoStepToTheBaseline: an option that costs as little as the baseline and does as much by the deciding figure may stand
// before it by its losses. The next step is from that option; to leave things as they are is none.
func TestNoStepToTheBaseline(t *testing.T) {
	free := []Cost{{Life: math.Inf(1)}}
	p, options, r := priced(Money{Horizon: 10}, []offer{
		{name: "as it stands", costs: free, days: constant(8, 10), losses: constant(8, 100)},
		{name: "as good", costs: free, days: constant(8, 10), losses: constant(8, 90), deep: 1},
		{name: "better", costs: []Cost{{Capital: 10, Life: math.Inf(1)}}, days: constant(8, 5), losses: constant(8, 50), deep: 1},
	})
	p.costs(options, r)
	for i, want := range []string{"", "", "as good"} {
		if on := options[i].Decision.OnFrontier; !*on || options[i].Cost.StepFrom != want {
			t.Errorf("%s: on the frontier %v, step from %q, want %q", options[i].Name, *on, options[i].Cost.StepFrom, want)
		}
	}
}

// TestCostIntervals: intervals of what is avoided are those of the resampled differences, turned round and multiplied.
func TestCostIntervals(t *testing.T) {
	base := offer{name: "base", days: []float64{20, 14, 31, 8, 25, 17, 40, 11}, events: []float64{2, 1, 3, 1, 2, 2, 4, 1}, losses: []float64{100, 80, 250, 30, 160, 90, 400, 50}}
	less := offer{name: "less", costs: []Cost{{Capital: 50, PerYear: 3, Life: math.Inf(1)}}, deep: math.Ln10 / 365.25,
		days: []float64{9, 6, 12, 4, 11, 9, 22, 6}, events: []float64{1, 0, 2, 0, 1, 1, 2, 0}, losses: []float64{40, 90, 120, 10, 70, 50, 150, 20}}
	m := Money{Horizon: 4, Rate: 0, Contingency: 0.1}
	p, options, r := priced(m, []offer{base, less})
	p.costs(options, r)
	c := options[1].Cost
	const pv, factor = 55 + 4*3, 3 // the first of the four years does not count
	differ := func(a, b []float64) [2]float64 {
		d := make([]float64, len(a))
		for i := range d {
			d[i] = b[i] - a[i] // avoided
		}
		lo, hi, _ := r.Interval(d, p.study.Count.Confidence)
		return [2]float64{lo, hi}
	}
	losses, days, events := differ(less.losses, base.losses), differ(less.days, base.days), differ(less.events, base.events)
	for _, tt := range []struct {
		what           string
		got            *result.Interval
		wantLo, wantHi float64
	}{
		{"net benefit", c.NetBenefitCI, factor*losses[0] - pv, factor*losses[1] - pv},
		{"per day", c.PerDayAvoidedCI, pv / 4.0 / days[1], pv / 4.0 / days[0]},
		{"per event", c.PerEventAvoidedCI, pv / 4.0 / events[1], pv / 4.0 / events[0]},
	} {
		if tt.got == nil || !agrees(tt.got[0], tt.wantLo) || !agrees(tt.got[1], tt.wantHi) || !(tt.got[0] < tt.got[1]) {
			t.Errorf("%s: %v, want %v to %v", tt.what, tt.got, tt.wantLo, tt.wantHi)
		}
	}
}

// someOffers draws a few options.
func someOffers(t *rapid.T, years int) []offer {
	whole := func(what string, most int) float64 { return float64(rapid.IntRange(0, most).Draw(t, what)) }
	var offers []offer
	for i := range rapid.IntRange(2, 7).Draw(t, "options") {
		o := offer{name: fmt.Sprintf("option %d", i), deep: rapid.Float64Range(1e-4, 1).Draw(t, "deep rate")}
		if i == 0 || rapid.IntRange(0, 4).Draw(t, "has a cost") > 0 {
			o.costs = []Cost{{
				Capital: whole("capital", 3) * 100, PerYear: whole("per year", 2) * 10,
				Life: rapid.SampledFrom([]float64{3, 20, math.Inf(1)}).Draw(t, "life"),
			}}
		}
		for range years {
			o.days = append(o.days, whole("days", 4))
			o.events = append(o.events, whole("events", 2))
			o.losses = append(o.losses, 50*whole("loss", 4))
		}
		offers = append(offers, o)
	}
	return offers
}

// TestCostProperties: dearer is never better, losses count in proportion, and the frontier is what its definition says.
func TestCostProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const years = 6
		offers := someOffers(t, years)
		m := Money{Horizon: rapid.IntRange(1, 60).Draw(t, "horizon"), Rate: rapid.SampledFrom([]float64{0, 0.03, 0.3}).Draw(t, "rate"), Contingency: rapid.Float64Range(0, 1).Draw(t, "contingency")}
		find := func(m Money, offers []offer) []optionFigures {
			p, options, r := priced(m, offers)
			p.costs(options, r)
			return options
		}
		found := find(m, offers)

		dearer := m
		dearer.Contingency += rapid.Float64Range(0, 1).Draw(t, "more contingency")
		for i, o := range find(dearer, offers) {
			if o.Cost != nil && stats.Less(o.Cost.PresentValue, found[i].Cost.PresentValue) {
				t.Fatalf("%s costs %v, with more contingency %v", o.Name, found[i].Cost.PresentValue, o.Cost.PresentValue)
			}
		}

		if last := len(offers) - 1; offers[last].costs != nil {
			more := slices.Clone(offers)
			more[last].costs = []Cost{offers[last].costs[0], {PerYear: 7, Life: math.Inf(1)}}
			is, was := find(m, more)[last].Cost, found[last].Cost
			if want := *was.NetBenefit - 7*money.Annuity(m.Rate, m.Horizon); math.Abs(*is.NetBenefit-want) > 1e-9*(is.PresentValue+1e5) {
				t.Fatalf("7 a year more: the net benefit goes from %v to %v, want %v", *was.NetBenefit, *is.NetBenefit, want)
			}
		}

		twice := slices.Clone(offers)
		for i := range twice {
			twice[i].losses = make([]float64, years)
			for y, x := range offers[i].losses {
				twice[i].losses[y] = 2 * x
			}
		}
		base := found[0].Cost
		for i, o := range find(m, twice) {
			c := found[i].Cost
			if c == nil {
				continue
			}
			more := c.PresentValue - base.PresentValue
			if !agrees(*o.Cost.AnnualLoss, 2**c.AnnualLoss) || i > 0 && math.Abs(*o.Cost.NetBenefit+more-2*(*c.NetBenefit+more)) > 1e-6 {
				t.Fatalf("twice the losses: %+v, once %+v", o.Cost, c)
			}
		}

		for i := range found {
			a := &found[i]
			if a.Cost == nil {
				if a.Decision.OnFrontier != nil || a.Decision.DominatedBy != "" {
					t.Fatalf("%s has no cost and %+v", a.Name, a.Decision)
				}
				continue
			}
			by := ""
			for j := range found {
				b := &found[j]
				if b.Cost == nil || stats.Less(a.Cost.PresentValue, b.Cost.PresentValue) || stats.Less(a.Decision.Value, b.Decision.Value) {
					continue
				}
				if stats.Less(b.Cost.PresentValue, a.Cost.PresentValue) || stats.Less(b.Decision.Value, a.Decision.Value) {
					by = b.Name
				}
			}
			if *a.Decision.OnFrontier != (by == "") || (a.Decision.DominatedBy == "") != (by == "") {
				t.Fatalf("%s: %+v; it is dominated by %q", a.Name, a.Decision, by)
			}
			if from := a.Cost.StepFrom; from != "" {
				k := slices.IndexFunc(found, func(f optionFigures) bool { return f.Name == from })
				if !*a.Decision.OnFrontier || !*found[k].Decision.OnFrontier || stats.Less(a.Cost.PresentValue, found[k].Cost.PresentValue) {
					t.Fatalf("%s steps from %s", a.Name, from)
				}
			}
		}
	})
}

// TestCostWithoutADecision: where no band decides there is nothing to be on a frontier of, and no ratio.
func TestCostWithoutADecision(t *testing.T) {
	s := ownersStudy(t)
	s.Count.DecideOn, s.Count.Target = -1, nil
	c, err := Compare(context.Background(), s, CompareQuery{})
	if err != nil {
		t.Fatal(err)
	}
	o := optionNamed(t, c, "channels")
	if k := o.Cost; o.Decision != nil || o.States != nil || k.ToldApart || k.PerDayAvoided != nil || k.BenefitCost != nil || k.StepFrom != "" || !agrees(*k.AnnualLoss, 16000) {
		t.Errorf("%+v, %+v", o.Decision, k)
	}
}

// pricedStudy is a study text with options after the first; ten years without interest or contingency.
func pricedStudy(t *testing.T, options string) string {
	base := baseStudy(t)
	base = base[:strings.Index(base, "  - name: trenches")]
	return base + options + `
money: {currency: EUR, horizon: 10 y, discount_rate: 0 %, prices_of: 2026, contingency: 0 %}
site: {plan_area: 12000 m2}
declared:
  existing_slip_surface: yes
`
}

const someWorks = `
  - name: trenches
    trench_drains: {spacing: [10 m, 20 m], depth: 3 m, conductivity: 0.02 m/d, decline: {half_life: 12 y, flushed_every: 3 y, restored_to: 95 %}}
    cost: {per_metre: 10, per_year: 100, per_flush: 50, life: 4 y}
  - name: bores
    bored_drains: {rate: 0.005 /d, level: 3 m, number: 12, length: 50 m, decline: {half_life: 10 y, flushed_every: 4 y, restored_to: 90 %}}
    cost: {capital: 1000, per_metre: 20, per_flush: 30, life: 5 y}
  - name: channels
    surface_water: {kept_out: 10 %}
    cost: {capital: 500, per_year: 10, life: 6 y}
`

// TestCostLike: what is taken over is priced by the metres, the flushes and the lives of the option that takes it.
func TestCostLike(t *testing.T) {
	s, err := Parse("study.yaml", []byte(pricedStudy(t, someWorks+`
  - name: closer and cheaper
    trench_drains: {like: trenches, spacing: 8 m}
    cost: {like: trenches, per_metre: 5}
  - name: everything
    trench_drains: {like: trenches, spacing: 16 m}
    bored_drains: {like: bores}
    surface_water: {like: channels}
    cost: {like: [trenches, bores, channels]}
  - name: flushed less
    trench_drains: {like: trenches, spacing: 10 m, decline: {half_life: 12 y, flushed_every: 5 y, restored_to: 95 %}}
    cost: {like: trenches}
  - name: fewer bores
    bored_drains: {like: bores, number: 3}
    cost: {like: [bores]}
  - name: upkeep alone
    surface_water: {like: channels}
    cost: {like: channels, capital: 0}
  - name: lasting
    trench_drains: {like: trenches, spacing: 10 m}
    cost: {like: trenches, life: 20 y, per_flush: 0, capital: 7}
  - name: trenches priced after the channels
    trench_drains: {like: trenches, spacing: 10 m}
    cost: {like: channels, per_metre: 5}
  - name: bores and channels
    bored_drains: {like: bores}
    surface_water: {like: channels}
    cost: {like: [channels, bores]}
`)))
	if err != nil {
		t.Fatal(err)
	}
	for name, w := range map[string]struct {
		capital, pv, metres float64
		flushes, renewals   int
	}{
		// 12000 m2 / 10 m = 1200 m at 10: 12000 now and after 4 and 8 years; 10 years at 100; flushes after 3, 6 and 9 years.
		"trenches, spacing 10 m": {12000, 3*12000 + 1000 + 3*50, 1200, 3, 2},
		"trenches, spacing 20 m": {6000, 3*6000 + 1000 + 3*50, 600, 3, 2},
		// 1000 + 12·50 m·20 = 13000, again after 5 years and not after 10; flushes after 4 and 8 years.
		"bores":              {13000, 2*13000 + 2*30, 600, 2, 1},
		"channels":           {500, 2*500 + 100, 0, 0, 1},
		"closer and cheaper": {1500 * 5, 3*7500 + 1000 + 3*50, 1500, 3, 2},
		// Each part with its own life: 750 m of trench at 10, the bores and the channels as they are.
		"everything":   {7500 + 13000 + 500, 3*7500 + 1000 + 3*50 + 2*13000 + 2*30 + 2*500 + 100, 750 + 600, 5, 4},
		"flushed less": {12000, 3*12000 + 1000 + 50, 1200, 1, 2},
		"fewer bores":  {1000 + 3*50*20, 2*4000 + 2*30, 150, 2, 1},
		"lasting":      {7 + 12000, 12007 + 1000, 1200, 3, 0},
		// 500 + 1200·5, again after 6 years.
		"trenches priced after the channels": {6500, 2*6500 + 100, 1200, 3, 1},
		"upkeep alone":                       {0, 100, 0, 0, 0}, // nothing that could be renewed
		"bores and channels":                 {13500, 2*13000 + 2*30 + 2*500 + 100, 600, 2, 2},
	} {
		i := slices.IndexFunc(s.Options, func(o Option) bool { return o.Name == name })
		if i < 0 {
			t.Fatalf("no option %s", name)
		}
		c := s.cost(&s.Options[i])
		metres, flushes, renewals := 0.0, 0, 0
		if c.Metres != nil {
			metres = *c.Metres
		}
		if c.Flushes != nil {
			flushes = *c.Flushes
		}
		if c.Renewals != nil {
			renewals = *c.Renewals
		}
		if !agrees(c.Capital, w.capital) || !agrees(c.PresentValue, w.pv) || !agrees(c.AnnualEquivalent, w.pv/10) || !agrees(metres, w.metres) || flushes != w.flushes || renewals != w.renewals {
			t.Errorf("%s: capital %v, present value %v, a year %v, %v m, %d flushes, %d renewals, want %+v", name, c.Capital, c.PresentValue, c.AnnualEquivalent, metres, flushes, renewals, w)
		}
	}
	if c := s.cost(&s.Options[0]); c == nil || c.PresentValue != 0 {
		t.Errorf("the baseline costs %+v, want nothing", c)
	}
}

// TestCostLikeRefused: what cannot be priced by the option that takes it.
func TestCostLikeRefused(t *testing.T) {
	for option, want := range map[string]string{
		"bored_drains: {like: bores}\n    cost: {like: trenches}":                                                  "per metre of trench_drains, and this option has none",
		"trench_drains: {rate: 0.02 /d, depth: 3 m}\n    cost: {like: trenches}":                                   "given by a rate",
		"trench_drains: {spacing: 9 m, depth: 3 m, conductivity: 0.02 m/d}\n    cost: {like: trenches}":            "never flushed",
		"bored_drains: {rate: 0.005 /d, level: 3 m}\n    cost: {like: [channels, bores]}":                          "number times their length",
		"surface_water: {like: channels}\n    cost: {like: [channels, nobody]}":                                    "no option above is named \"nobody\"",
		"surface_water: {like: channels}\n    cost: {like: [channels, bores], capital: 5}":                         "beside a like of several names",
		"trench_drains: {like: trenches, spacing: 9 m}\n    bored_drains: {like: bores}\n    cost: {per_metre: 3}": "does not say of which",
		"trench_drains: {like: trenches, spacing: 9 m}\n    surface_water: {like: channels}\n    cost: {like: it}": "this is the option itself",
	} {
		_, err := Parse("study.yaml", []byte(pricedStudy(t, someWorks+"  - name: it\n    "+option+"\n")))
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s\n    got %v, want %q", option, err, want)
		}
	}
}

// TestSameBytesOfMoney: costs, ages and states of drains are the same on any number of processors.
func TestSameBytesOfMoney(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(0))
	for name, s := range map[string]*Study{"owner's table": ownersStudy(t), "declining": decliningStudy(t)} {
		var want []byte
		for _, n := range []int{1, 8} {
			runtime.GOMAXPROCS(n)
			got, err := json.Marshal(compare(t, s))
			if err != nil {
				t.Fatal(err)
			}
			if want == nil {
				want = got
			} else if !bytes.Equal(got, want) {
				t.Errorf("%s: GOMAXPROCS=%d changes the result", name, n)
			}
		}
	}
}

// TestOrderOfCosts: what an option costs, avoids and is worth does not hang on where it stands in the study. Of equal ones the
// first is named.
func TestOrderOfCosts(t *testing.T) {
	for name, s := range map[string]*Study{"owner's table": ownersStudy(t), "declining": decliningStudy(t)} {
		if name == "declining" {
			for i := range s.Options {
				s.Options[i].Costs = []Cost{{Capital: float64(100 * (i * 7 % 11)), Life: 20}}
			}
		}
		before := compare(t, s)
		slices.Reverse(s.Options) // the baseline is marked
		after := compare(t, s)
		named := cmp.Options{cmpopts.IgnoreFields(result.Decision{}, "DominatedBy"), cmpopts.IgnoreFields(result.Cost{}, "StepFrom")}
		for k := range before.Cases {
			slices.Reverse(after.Cases[k].Options)
			for i := range before.Cases[k].Options {
				a, b := &before.Cases[k].Options[i], &after.Cases[k].Options[i]
				if strings.Contains(a.Name, "channels") && a.Cost.StepFrom != b.Cost.StepFrom { // twins, of which the first has the ratio
					ratio := *b.Cost
					ratio.StepBenefitCost = a.Cost.StepBenefitCost
					b.Cost = &ratio
				}
				if d := cmp.Diff(a, b, named); d != "" {
					t.Errorf("%s, %s (-before +after):\n%s", name, a.Name, d)
				}
			}
		}
	}
}

// TestMet: the figure, the end of its range, and a single year, which has no range and shows nothing.
func TestMet(t *testing.T) {
	for _, tt := range []struct {
		value, upper float64 // NaN for no range
		most         float64
		want         string
	}{
		{3, 4, 2, "no"}, {2, 4, 2, "not_shown"}, {1, 2, 2, "yes"}, {2 * (1 + 1e-12), 2 * (1 + 1e-12), 2, "yes"},
		{0, math.NaN(), 0, "yes"}, {1, math.NaN(), 2, "not_shown"}, {3, math.NaN(), 2, "no"},
	} {
		b := &result.BandFigure{DaysPerYear: tt.value}
		if !math.IsNaN(tt.upper) {
			b.DaysPerYearCI = &result.Interval{0, tt.upper}
		}
		if got := (&Target{Measure: "days", Most: tt.most}).met(b); got != tt.want {
			t.Errorf("%v up to %v against %v: %s, want %s", tt.value, tt.upper, tt.most, got, tt.want)
		}
	}
	// None in six years, and yet up to half an event a year at 90 %.
	b := &result.BandFigure{EventsPerYearCI: result.Interval{0, 0.5}}
	if got := (&Target{Measure: "events", Most: 0.1}).met(b); got != "not_shown" {
		t.Errorf("no event in six years: %s", got)
	}
	if got := (*Target)(nil).met(b); got != "" {
		t.Errorf("without a target: %s", got)
	}
}
