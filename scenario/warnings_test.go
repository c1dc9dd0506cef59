package scenario

import (
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"quietslope/scenario/result"
	"quietslope/scenario/weather"
	"quietslope/stats"
)

// codes are the codes of warnings, each once, in order.
func codes(ws []result.Warning) []string {
	var all []string
	for _, w := range ws {
		if !slices.Contains(all, w.Code) {
			all = append(all, w.Code)
		}
	}
	return all
}

// quiet is a prepared study that raises no warning of its own: everything declared, a long record with hours, a soil, a
// band with an arrest level within the readings, a deep layer that answers within a year.
func quiet() *prepared {
	s := ground(Option{Name: "works"})
	s.Ground.DeepSeepage = 0.0125
	for _, key := range DeclaredKeys {
		s.Declared[key] = "no"
	}
	s.Declared["existing_slip_surface"] = "yes"
	s.Bands[0].Until = 2
	r := record("1990-01-01T00:00", time.Hour, 100)
	r.PET = make([]float64, 100)
	for i := range 100 {
		r.Rain[i], r.PET[i] = 0.1, 0.08
	}
	p := &prepared{
		study: s, record: r, replayer: &replayer{},
		counted: period{years: shortRecordYears, to: 100, calendar: stats.Calendar{Year: make([]int32, 100)}},
		base:    &trace{cover: make([]float64, 100), deep: make([]float64, 100)},
	}
	for i := range 100 {
		p.base.cover[i], p.base.deep[i] = 4*float64(i)/99, 9*float64(i)/99
		p.counted.calendar.Year[i] = int32(i % shortRecordYears)
	}
	p.rework()
	return p
}

// upkept is a decline that nobody warns of.
var upkept = &Decline{HalfLife: 10, Every: 5, Restored: 0.9}

func (p *prepared) rework() {
	p.works = nil
	for i := range p.study.Options {
		p.works = append(p.works, newWorks(p.study, &p.study.Options[i], &asBuilt, asNew))
	}
}

// TestStudyWarnings raises each warning that needs no option replayed at exactly its condition, and not just short of it.
func TestStudyWarnings(t *testing.T) {
	if ws := quiet().studyWarnings(nil); len(ws) > 0 {
		t.Fatalf("the quiet study warns: %v", ws)
	}
	inf, nan := math.Inf(1), math.NaN()
	trench := func(depth, rate float64) []Measure {
		return []Measure{{Key: "trench_drains", Trench: &TrenchDrains{Depth: depth, Rate: rate, Equivalent: nan, Efficiency: 1, Ceiling: inf, Decline: upkept}}}
	}
	bored := func(level, efficiency, length float64) []Measure {
		return []Measure{{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: level, Efficiency: efficiency, Length: length, Ceiling: inf, Decline: upkept}}}
	}
	declare := func(key, answer string) func(*prepared) {
		return func(p *prepared) { p.study.Declared[key] = answer }
	}
	drained := func(then func(*prepared)) func(*prepared) {
		return func(p *prepared) { p.study.Options[1].Measures = trench(4, 0.05); then(p) }
	}
	measured := func(ms ...Measure) func(*prepared) {
		return func(p *prepared) { p.study.Options[1].Measures = ms }
	}
	for _, tt := range []struct {
		name   string
		change func(*prepared)
		want   []string
	}{
		{"slip surface unknown", declare("existing_slip_surface", "unknown"), []string{"existing_slip_surface_unknown"}},
		{"rapid movement unknown", declare("rapid_movement_possible", "unknown"), []string{"rapid_movement_unknown"}},
		{"others unknown", func(p *prepared) {
			declare("perched_water", "unknown")(p)
			declare("wells_or_buildings_nearby", "unknown")(p)
		}, []string{"declared_unanswered"}},
		{"ground changed", declare("ground_changed_since_calibration", "yes"), []string{"ground_changed"}},
		{"perched water", declare("perched_water", "yes"), []string{"perched_water"}},
		{"iron, no drain", declare("iron_or_lime_in_water", "yes"), nil},
		{"iron and drains", drained(declare("iron_or_lime_in_water", "yes")), []string{"drains_may_clog"}},
		{"outlet of channels moves", func(p *prepared) {
			measured(Measure{Cut: &SurfaceWater{KeptOut: 0.1}})(p)
			declare("outlet_on_moving_ground", "yes")(p)
		}, []string{"outlet_on_moving_ground"}},
		{"iron and a cut-off drain", func(p *prepared) {
			measured(Measure{CutOff: &CutOffDrain{Intercepted: 0.1}})(p)
			declare("iron_or_lime_in_water", "yes")(p)
		}, []string{"drains_may_clog"}},
		{"iron and channels", func(p *prepared) {
			measured(Measure{Cut: &SurfaceWater{KeptOut: 0.1}})(p)
			declare("iron_or_lime_in_water", "yes")(p)
		}, nil},
		{"outlet moves", drained(declare("outlet_on_moving_ground", "yes")), []string{"outlet_on_moving_ground"}},
		{"wells", drained(declare("wells_or_buildings_nearby", "yes")), []string{"wells_or_buildings_nearby"}},

		{"half kept out", measured(Measure{Cut: &SurfaceWater{KeptOut: 0.5}}), nil},
		{"more than half kept out", measured(Measure{Cut: &SurfaceWater{KeptOut: 0.501}}), []string{"much_kept_out"}},
		{"planting that does nothing", measured(Measure{Vegetation: &Vegetation{PETFactor: 1}}), nil},
		{"planting that drinks", measured(Measure{Vegetation: &Vegetation{PETFactor: 1.01}}), []string{"planting_at_once"}},
		{"planting that catches rain", measured(Measure{Vegetation: &Vegetation{PETFactor: 1, Interception: 0.01}}), []string{"planting_at_once"}},
		{"most cut off", measured(Measure{CutOff: &CutOffDrain{Intercepted: 0.9}}), nil},
		{"nearly all cut off", measured(Measure{CutOff: &CutOffDrain{Intercepted: 0.901}}), []string{"cut_off_complete"}},

		{"band at the readings", func(p *prepared) { p.study.Ground.CalibratedTo = 2.5 }, nil},
		{"band above the readings", func(p *prepared) { p.study.Ground.CalibratedTo = 2.4999 }, []string{"band_beyond_readings"}},
		{"readings not known", func(p *prepared) { p.study.Ground.CalibratedTo = nan }, []string{"readings_unknown"}},
		{"two datums", func(p *prepared) {
			p.study.Bands = append(p.study.Bands, p.study.Bands[0], p.study.Bands[0])
			p.study.Bands[1].GivenAs, p.study.Bands[2].GivenAs = "elevation", "below_ground"
		}, []string{"bands_in_two_datums"}},
		{"no arrest level on the deciding band", func(p *prepared) { p.study.Bands[0].Until = 2.5 }, []string{"no_arrest_level"}},
		{"no arrest level, nothing decided", func(p *prepared) { p.study.Bands[0].Until, p.study.Count.DecideOn = 2.5, -1 }, nil},

		{"no soil", func(p *prepared) { p.study.Ground.Soil = nil }, []string{"drying_overstated"}},
		{"no evapotranspiration", func(p *prepared) { p.record.PET = nil }, []string{"no_evapotranspiration"}},
		{"limit, hourly", func(p *prepared) { p.study.Ground.InfiltrationLimit = 5 }, nil},
		{"limit, over an hour", func(p *prepared) {
			p.study.Ground.InfiltrationLimit, p.record.Step = 5, time.Hour+time.Minute
		}, []string{"limit_hardly_acts"}},
		{"limit, months", func(p *prepared) { p.study.Ground.InfiltrationLimit, p.record.Step = 5, 0 }, []string{"limit_hardly_acts", "monthly_steps", "implausible_weather"}},
		{"porosity in range", func(p *prepared) { p.study.Ground.CoverPorosity, p.study.Ground.DeepPorosity = 0.30, 0.10 }, nil},
		{"porosity of the cover", func(p *prepared) { p.study.Ground.CoverPorosity = 0.301 }, []string{"implausible_ground"}},
		{"porosity of the cover, low", func(p *prepared) { p.study.Ground.CoverPorosity = 0.0019 }, []string{"implausible_ground"}},
		{"porosity of the clay", func(p *prepared) { p.study.Ground.DeepPorosity = 0.101 }, []string{"implausible_ground"}},
		{"conductivity in m/s taken for m/d", func(p *prepared) { p.study.Ground.CoverConductivity = 1e-7 }, []string{"implausible_ground"}},
		{"deep as fast as the cover", func(p *prepared) { p.study.Ground.DeepSeepage = 0.0155 }, nil},
		{"deep faster than the cover", func(p *prepared) { p.study.Ground.DeepSeepage = 0.01551 }, []string{"deep_faster_than_cover"}},
		{"rain in the wrong unit", func(p *prepared) {
			for i := range p.record.Rain {
				p.record.Rain[i] *= 10
			}
		}, []string{"implausible_weather"}},
		{"29 years", func(p *prepared) { p.counted.years = 29 }, []string{"record_short"}},
		{"9 years", func(p *prepared) { p.counted.years = 9 }, []string{"record_short"}},
		{"band at ground", func(p *prepared) {
			p.study.Bands[0].Level, p.study.Ground.CalibratedTo, p.study.Ground.DeepFullAt = 13, 13, inf
		}, nil},
		{"band above ground", func(p *prepared) {
			p.study.Bands[0].Level, p.study.Ground.CalibratedTo, p.study.Ground.DeepFullAt = 13.01, 14, inf
		}, []string{"band_above_ground"}},
		{"readings up to the brim", func(p *prepared) { p.study.Ground.CalibratedTo = 9 }, nil},
		{"readings above it", func(p *prepared) { p.study.Ground.CalibratedTo = 9.01 }, []string{"readings_above_full"}},
		{"small infiltration", func(p *prepared) { p.study.Ground.Infiltration = 0.05 }, nil},
		{"hardly any infiltration", func(p *prepared) { p.study.Ground.Infiltration = 0.049 }, []string{"implausible_ground"}},
		{"thin soil", func(p *prepared) { p.study.Ground.Soil = &Soil{Available: 5, Readily: 0.5, CropFactor: 1} }, nil},
		{"metres taken for millimetres", func(p *prepared) { p.study.Ground.Soil = &Soil{Available: 0.12, Readily: 0.5, CropFactor: 1} }, []string{"implausible_ground"}},
		{"small area", func(p *prepared) { p.study.Site.PlanArea = 100 }, nil},
		{"hectares taken for square metres", func(p *prepared) { p.study.Site.PlanArea = 1.2 }, []string{"implausible_area"}},
		{"porosity set", measured(Measure{Set: []Assignment{{Key: "cover.drainable_porosity", Value: 0.31}}}), []string{"implausible_ground"}},
		{"a rate per hour taken for one per day", func(p *prepared) { p.study.Ground.CoverSeepage = 5.01 }, []string{"implausible_ground"}},
		{"no percolation", func(p *prepared) { p.study.Ground.CoverSeepage, p.study.Ground.Percolation = 0.0155, 0 }, nil},
		{"warm-up again", func(p *prepared) { p.replayer.warm = warmUp{years: 4, repeats: true} }, []string{"warm_up_repeats_record"}},

		// The baseline's levels rise evenly from 0 to the top in 100 steps.
		{"dry on 95 of 100", func(p *prepared) { p.study.Options[1].Measures = bored(p.base.deep[94], 0.9, 100) }, nil},
		{"dry on 96 of 100", func(p *prepared) { p.study.Options[1].Measures = bored(p.base.deep[95], 0.9, 100) }, []string{"drain_runs_rarely"}},
		{"dry on all", func(p *prepared) { p.study.Options[1].Measures = bored(9, 0.9, 0) }, []string{"drain_never_runs"}},
		{"dry on 96 of 100, cover", func(p *prepared) { p.study.Options[1].Measures = trench(4-p.base.cover[95], 0.05) }, []string{"drain_runs_rarely"}},
		{"rates in range", func(p *prepared) { p.study.Options[1].Measures = append(trench(4, 5), bored(2, 0.5, 0)...) }, nil},
		{"fast drain", func(p *prepared) { p.study.Options[1].Measures = trench(4, 5.1) }, []string{"implausible_drain_rate"}},
		{"slow drain", func(p *prepared) { p.study.Options[1].Measures = trench(4, 9e-5) }, []string{"implausible_drain_rate"}},
		{"six metres", func(p *prepared) {
			p.study.Ground.CoverThickness = 8
			p.study.Options[1].Measures = trench(6, 0.05)
		}, nil},
		{"deeper than six metres", func(p *prepared) {
			p.study.Ground.CoverThickness = 8
			p.study.Options[1].Measures = trench(6.1, 0.05)
		}, []string{"trench_deep"}},
		{"trench in another unit", func(p *prepared) {
			p.study.Options[1].Measures = trench(4, 0.05)
			p.study.Options[1].Measures[0].Trench.Conductivity = 100
		}, []string{"implausible_ground"}},
		{"bore of 100 m", func(p *prepared) { p.study.Options[1].Measures = bored(2, 0.9, 100) }, nil},
		{"long bore", func(p *prepared) { p.study.Options[1].Measures = bored(2, 0.9, 100.5) }, []string{"bore_long"}},
		{"efficient bore", func(p *prepared) { p.study.Options[1].Measures = bored(2, 0.9, 0) }, nil},
		{"efficient bore", func(p *prepared) { p.study.Options[1].Measures = bored(2, 0.91, 0) }, []string{"bored_drains_efficient"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			tt.change(p)
			p.rework()
			if got := codes(p.studyWarnings(nil)); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestDrainsReplayed: where an option was replayed, its own water decides whether a drain runs at all.
func TestDrainsReplayed(t *testing.T) {
	for _, tt := range []struct {
		name    string
		level   float64
		running float64
		want    []string
	}{
		{"wet in both", 4, 0.2, nil},
		{"dry, since other measures keep it so", 4, 0, []string{"drain_never_runs"}},
		{"dry in both", 9, 0, []string{"drain_never_runs"}},
		{"wet in the option's own ground only", 9, 0.01, []string{"drain_runs_rarely"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			p.study.Options[1].Measures = []Measure{{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: tt.level, Efficiency: 0.9, Ceiling: math.Inf(1), Decline: upkept}}}
			p.rework()
			options := make([]optionFigures, 2)
			options[1].Drains = []result.Drain{{RunningShare: tt.running}}
			if got := codes(p.studyWarnings(options)); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestReplayWarnings does the same for what a replay shows.
func TestReplayWarnings(t *testing.T) {
	for _, tt := range []struct {
		name   string
		change func(*traceSummary)
		want   []string
	}{
		{"nothing", func(*traceSummary) {}, nil},
		{"start forgotten to a centimetre", func(s *traceSummary) { s.fromDry = 0.01 }, nil},
		{"start still felt", func(s *traceSummary) { s.fromDry = 0.0101 }, []string{"start_still_felt"}},
		{"ten centimetres below capacity", func(s *traceSummary) { s.deepMax = 8.9 }, nil},
		{"closer to capacity", func(s *traceSummary) { s.deepMax = 8.901 }, []string{"peaks_clipped"}},
		{"a hundredth refused", func(s *traceSummary) { s.refusedShare = 0.01 }, nil},
		{"more refused", func(s *traceSummary) { s.refusedShare = 0.0101 }, []string{"deep_refuses_water"}},
		{"cover at the surface", func(s *traceSummary) { s.coverMax = 4 }, nil},
		{"cover above the surface", func(s *traceSummary) { s.coverMax = 4.001 }, []string{"level_above_ground"}},
		{"deep above ground", func(s *traceSummary) { s.deepMax, s.works.ground.DeepFullAt = 13.001, math.Inf(1) }, []string{"level_above_ground"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			f := optionFigures{Option: result.Option{Name: "works"}, trace: traceSummary{works: p.works[1]}}
			tt.change(&f.trace)
			var ws warnings
			p.replayWarnings(&ws, &f)
			if got := codes(ws); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestCountWarnings does the same for the counts and the choice between options.
func TestCountWarnings(t *testing.T) {
	// yearly is an option whose years hold the given events, days and load, equal numbers of each.
	yearly := func(name string, baseline bool, events, days func(year int) float64) optionFigures {
		f := optionFigures{Option: result.Option{Name: name, Baseline: baseline}, passed: []stats.Exceedance{{}}}
		e := &f.passed[0]
		for y := range shortRecordYears {
			d := days(y)
			e.EventsByYear = append(e.EventsByYear, events(y))
			e.DaysByYear, e.LoadByYear = append(e.DaysByYear, d), append(e.LoadByYear, d)
			above := 0.0
			if d > 0 {
				above = 1
				e.YearsAbove++
			}
			e.AnyByYear = append(e.AnyByYear, above)
			e.Count += events(y)
		}
		return f
	}
	in := func(n int, x float64) func(int) float64 { // x in the first n years
		return func(year int) float64 {
			if year < n {
				return x
			}
			return 0
		}
	}
	for _, tt := range []struct {
		name   string
		option optionFigures
		want   []string
	}{
		{"told apart", yearly("works", false, in(5, 1), in(5, 10)), nil},
		{"four events", yearly("works", false, in(4, 1), in(4, 10)), []string{"few_events"}},
		{"none", yearly("works", false, in(0, 1), in(0, 10)), []string{"no_events"}},
		{"days but no counted event", yearly("works", false, in(0, 1), in(1, 10)), []string{"events_peak_outside"}},
		{"the same", yearly("works", false, in(20, 1), in(20, 20)), []string{"no_effect"}},
		{"better in four years only", yearly("works", false, in(20, 1), func(y int) float64 { return in(20, 20)(y) - in(4, 5)(y) }), []string{"not_told_apart"}},
		{"better in five", yearly("works", false, in(20, 1), func(y int) float64 { return in(20, 20)(y) - in(5, 5)(y) }), nil},
		{"fewer days, more events", yearly("works", false, in(25, 1), in(10, 20)), []string{"days_and_events_disagree"}},
		{"more days, fewer events", yearly("works", false, in(10, 1), in(26, 20)), []string{"days_and_events_disagree"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			r := stats.NewResamples(shortRecordYears, 400, 1, 1)
			options := []optionFigures{yearly("as it stands", true, in(20, 1), in(20, 20)), tt.option}
			for i := range options {
				options[i].trace.works = p.works[i]
				options[i].Bands = []result.BandFigure{p.bandFigure(&p.study.Bands[0], &options[i].passed[0])}
			}
			for i := range options {
				p.judge(&options[i], &options[0], r)
			}
			rank(p.study, options)
			if got := codes(p.resultWarnings(options, 0, r)); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestNeighboursInOrder: two options that differ from the baseline but not from each other.
func TestNeighboursInOrder(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	twin := s.Options[1]
	twin.Name = "the same again"
	s.Options = append(s.Options, twin)
	c := compare(t, s)
	for code, want := range map[string]string{
		"equal_every_year":     "trenches, spacing 8 m = the same again",
		"order_not_told_apart": "trenches, spacing 12 m / 24 m with channels",
	} {
		i := slices.IndexFunc(c.Warnings, func(w result.Warning) bool { return w.Code == code })
		if i < 0 || !strings.Contains(c.Warnings[i].Text, want) {
			t.Errorf("nobody says %s, %s", code, want)
		}
	}
}

// TestWarningsSay holds every warning of the demo to the form that readers and scripts rely on.
func TestWarningsSay(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	for _, key := range DeclaredKeys {
		s.Declared[key] = "unknown"
	}
	for _, w := range compare(t, s).Warnings {
		if w.Text == "" || !strings.HasSuffix(w.Text, ".") || strings.ToLower(w.Code) != w.Code || (w.Severity != result.Warn && w.Severity != result.Note) {
			t.Errorf("%+v", w)
		}
	}
}

// TestGuideKnowsWarnings holds the contributor guide to the codes that the source can raise.
func TestGuideKnowsWarnings(t *testing.T) {
	read := func(path string) string {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		return string(text)
	}
	files, err := filepath.Glob("*.go")
	if err != nil {
		t.Fatal(err)
	}
	source, guide := "", read("../DEVELOPERS.md")
	for _, file := range files {
		if text := read(file); !strings.HasSuffix(file, "_test.go") && strings.Contains(text, "ws.add(") {
			source += text
		}
	}
	found := regexp.MustCompile(`(?:warn|note|at)\("([a-z_]+)"\)|Code = "([a-z_]+)"|"([a-z_]+)", result\.(?:Warn|Note)`).FindAllStringSubmatch(source, -1)
	if len(found) < 60 {
		t.Fatalf("only %d codes found in the source", len(found))
	}
	for _, m := range found {
		if code := m[1] + m[2] + m[3]; !strings.Contains(guide, "`"+code+"`") {
			t.Errorf("DEVELOPERS.md does not say where %s comes from", code)
		}
	}
}

// sprinkled are single days of a winter, one a week.
func sprinkled(days int) (gaps []weather.Gap) {
	for i := range days {
		gaps = append(gaps, weather.Gap{From: 7 * i, To: 7*i + 1, Rain: true})
	}
	return gaps
}

// TestGapWarnings fills days of one winter until its year is flagged. Rain is 1 mm a day.
func TestGapWarnings(t *testing.T) {
	for _, tt := range []struct {
		name   string
		gaps   string
		filled []weather.Gap // days from 1 October 1991
		rain   float64       // on filled days
		want   []string
		years  string
	}{
		{"none", "month mean", nil, 1, nil, ""},
		{"evapotranspiration only", "month mean", []weather.Gap{{From: 0, To: 60, PET: true}}, 1, []string{"gaps_filled"}, ""},
		{"six days of October", "month mean", []weather.Gap{{From: 0, To: 6, Rain: true}}, 1, []string{"gaps_filled"}, ""},
		{"seven days of October", "month mean", []weather.Gap{{From: 0, To: 7, Rain: true, PET: true}}, 1, []string{"gaps_filled", "years_much_filled"}, "1991/92"},
		{"seven days in two months", "month mean", []weather.Gap{{From: 28, To: 35, Rain: true}}, 1, []string{"gaps_filled"}, ""},
		// 29 days of February 1992 begin on day 123.
		{"four days of February", "month mean", []weather.Gap{{From: 123, To: 127, Rain: true}}, 1, []string{"gaps_filled"}, ""},
		{"five days of February", "month mean", []weather.Gap{{From: 123, To: 128, Rain: true}}, 1, []string{"gaps_filled", "years_much_filled"}, "1991/92"},
		// Two wet days: 2*9.57 mm are just less than a twentieth of 364 + 2*9.57 mm.
		{"a twentieth of the rain", "month mean", []weather.Gap{{From: 0, To: 2, Rain: true}}, 9.57, []string{"gaps_filled"}, ""},
		{"more than a twentieth", "month mean", []weather.Gap{{From: 0, To: 2, Rain: true}}, 9.59, []string{"gaps_filled", "years_much_filled"}, "1991/92"},
		{"before the counted years", "month mean", []weather.Gap{{From: -200, To: -150, Rain: true}}, 1, []string{"gaps_filled"}, ""},
		// A year of 366 days, and five days of a month at most.
		{"eighteen days, with zero", "zero", sprinkled(18), 0, []string{"gaps_filled"}, ""},
		{"nineteen days, with zero", "zero", sprinkled(19), 0, []string{"gaps_filled", "years_much_filled"}, "1991/92"},
		{"two years, with zero", "zero", []weather.Gap{{From: 0, To: 20, Rain: true}, {From: 366, To: 380, Rain: true}}, 0, []string{"gaps_filled", "years_much_filled"}, "1991/92, 1992/93"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			p.record = record("1991-01-01T00:00", 24*time.Hour, 4*365+1)
			p.counted = countYears(p.record, time.October)
			p.study.Weather.Gaps = weather.Gaps(tt.gaps)
			const october = 273
			for i := range p.record.Rain {
				p.record.Rain[i] = 1
			}
			for _, g := range tt.filled {
				g.From, g.To = g.From+october, g.To+october
				p.record.Filled = append(p.record.Filled, g)
				for i := g.From; i < g.To && g.Rain; i++ {
					p.record.Rain[i] = tt.rain
				}
			}
			ws := warnings{}
			p.gapWarnings(&ws)
			if got := codes(ws); !slices.Equal(got, tt.want) {
				t.Fatalf("got %q, want %q", got, tt.want)
			}
			if tt.years != "" && !strings.Contains(ws[1].Text, ": "+tt.years+". ") {
				t.Errorf("%q does not name %s", ws[1].Text, tt.years)
			}
			if len(ws) > 0 && (ws[0].Severity == result.Warn) != (tt.gaps == "zero") {
				t.Errorf("%s is a %s", ws[0].Code, ws[0].Severity)
			}
		})
	}
}

// TestGapInTheMonthThatStarts: a year that begins in February ends with one, which may be longer.
func TestGapInTheMonthThatStarts(t *testing.T) {
	p := quiet()
	p.record = record("2003-01-01T00:00", 24*time.Hour, 3*365)
	p.counted = countYears(p.record, time.February)
	for i := range p.record.Rain {
		p.record.Rain[i] = 1
	}
	const february = 31 // 2003, of 28 days
	p.record.Filled = []weather.Gap{{From: february, To: february + 4, Rain: true}}
	if got := p.filledYears(); !slices.Equal(got, []string{"2003/04"}) {
		t.Errorf("flagged are %q", got)
	}
}

func TestMonthlySteps(t *testing.T) {
	p := quiet()
	p.record.Step = 0
	p.record.Rain, p.record.PET = make([]float64, 100), make([]float64, 100)
	for i := range 100 {
		p.record.Rain[i], p.record.PET[i] = 80, 50
	}
	ws := warnings{}
	p.recordWarnings(&ws)
	if got := codes(ws); !slices.Equal(got, []string{"monthly_steps"}) {
		t.Errorf("got %q", got)
	}
}

func TestConversionWarnings(t *testing.T) {
	for _, tt := range []struct {
		c    *result.Conversion
		want []string
	}{
		{nil, nil},
		{&result.Conversion{Scheme: "centred", StepDays: 1}, []string{"conversion_unchecked"}},
		{&result.Conversion{LargestDifference: &result.LevelDifference{DeepM: 0.1, CoverM: 1}}, nil},
		{&result.Conversion{LargestDifference: &result.LevelDifference{DeepM: 0.1001}}, []string{"conversion_differs"}},
	} {
		ws := warnings{}
		conversionWarnings(&ws, tt.c)
		if got := codes(ws); !slices.Equal(got, tt.want) {
			t.Errorf("%+v: got %q, want %q", tt.c, got, tt.want)
		}
	}
}

// TestGroundOfOptions: what an option's set makes of the ground is held against what is usual too, once.
func TestGroundOfOptions(t *testing.T) {
	p := quiet()
	p.record.Step = 2 * time.Hour
	p.study.Ground.InfiltrationLimit = 5
	p.study.Ground.CoverPorosity = 0.4
	p.study.Options[1].Measures = []Measure{{Set: []Assignment{{Key: "deep.drainable_porosity", Value: 0.2}, {Key: "cover.seepage", Value: 6}}}}
	p.rework()
	var got []string
	for _, w := range p.studyWarnings(nil) {
		got = append(got, w.Option+" "+w.Code)
	}
	if want := []string{" limit_hardly_acts", " implausible_ground", "works implausible_ground", "works implausible_ground"}; !slices.Equal(got, want) {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestConditionChangesNothing(t *testing.T) {
	for _, tt := range []struct {
		c    Condition
		want []string
	}{
		{Condition{Name: "old", Drains: 1, SurfaceWater: 0.5, Vegetation: 0.5}, []string{"condition_changes_nothing"}},
		{Condition{Name: "old", Drains: 0.99, SurfaceWater: 1, Vegetation: 1}, nil},
	} {
		p := quiet()
		p.study.Options[1].Measures = []Measure{{Bored: &BoredDrains{Rate: 0.01, Level: 3, Efficiency: 0.5, Ceiling: math.Inf(1)}}}
		p.study.Conditions = []Condition{tt.c}
		if err := p.work(); err != nil {
			t.Fatal(err)
		}
		ws := warnings{}
		p.conditionWarnings(&ws)
		if got := codes(ws); !slices.Equal(got, tt.want) {
			t.Errorf("%+v: got %q, want %q", tt.c, got, tt.want)
		}
	}
}

func TestNothingToDecideOn(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	s.Bands[2].Level, s.Bands[2].Until, s.Count.DecideOn = 8.9, 8.9, 2
	got := codes(compare(t, s).Warnings)
	if !slices.Contains(got, "nothing_to_decide_on") || slices.Contains(got, "not_told_apart") || slices.Contains(got, "no_effect") {
		t.Errorf("%q", got)
	}
}
