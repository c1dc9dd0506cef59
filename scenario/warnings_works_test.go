package scenario

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"quietslope/cascade/slope"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// only are those of the codes that belong to a test.
func only(codes []string, of ...string) []string {
	return slices.DeleteFunc(slices.Clone(codes), func(c string) bool { return !slices.Contains(of, c) })
}

// parallel are trenches given by a spacing that nobody warns of.
func parallel(change func(*TrenchDrains)) []Measure {
	t := &TrenchDrains{
		Depth: 3, Spacing: 12, Conductivity: 0.05, Radius: 0.1, Equivalent: math.NaN(), Head: 1.5,
		Efficiency: 1, Ceiling: math.Inf(1), Decline: upkept,
	}
	change(t)
	return []Measure{{Key: "trench_drains", Trench: t}}
}

// TestWorksWarnings raises each warning about the works as planned at exactly its condition, and not just short of it.
func TestWorksWarnings(t *testing.T) {
	trenches := func(change func(*TrenchDrains)) func(*prepared) {
		return func(p *prepared) { p.study.Options[1].Measures = parallel(change) }
	}
	bores := func(change func(*BoredDrains)) func(*prepared) {
		return func(p *prepared) {
			b := &BoredDrains{Rate: 0.005, Level: 3, Efficiency: 0.8, Ceiling: math.Inf(1), Decline: upkept}
			change(b)
			p.study.Options[1].Measures = []Measure{{Key: "bored_drains", Bored: b}}
		}
	}
	sloped := func(depth float64, then func(*prepared)) func(*prepared) {
		return func(p *prepared) {
			p.study.Slope = &slope.Slope{Angle: 11, Depth: depth, UnitWeight: 19.5, Friction: 30}
			then(p)
		}
	}
	// slipping makes the usual yearly highest level leave a factor of safety.
	slipping := func(fs float64, p *prepared) {
		// The last 30 levels of 100 are the highest of their years: those of 70 to 99, of 9 m times that by 99.
		top := 9 * 84.5 / 99
		s := &slope.Slope{Angle: 11, Depth: 13, UnitWeight: 19.5, Friction: 30}
		tan := math.Tan(30*math.Pi/180) * fs / s.FactorOfSafety(top)
		s.Friction = math.Atan(tan) * 180 / math.Pi
		p.study.Slope = s
	}
	// acting makes bored drains act after a time, d: they do so in the deep store alone.
	acting := func(days float64) func(*prepared) {
		return func(p *prepared) {
			bores(func(b *BoredDrains) { b.Rate = 0.001 })(p)
			p.study.Ground.DeepSeepage = math.Log(10)/days - 0.8*0.001
		}
	}
	const year = 365.25
	// The equivalent depth of a drain of 0.1 m radius, 12 m apart, 1 m above the contact.
	const computed = 0.80284
	for _, tt := range []struct {
		name   string
		change func(*prepared)
		want   []string
	}{
		{"trenches", trenches(func(*TrenchDrains) {}), nil},
		{"bores", bores(func(*BoredDrains) {}), nil},

		{"trenches that never clog", trenches(func(d *TrenchDrains) { d.Decline = nil }), []string{"drains_never_clog"}},
		{"bores that never clog", bores(func(b *BoredDrains) { b.Decline = nil }), []string{"drains_never_clog"}},
		{"trenches that nobody flushes", trenches(func(d *TrenchDrains) { d.Decline = &Decline{HalfLife: 10, Every: math.Inf(1)} }), nil},
		{"bores flushed every 15 years", bores(func(b *BoredDrains) { b.Decline = &Decline{HalfLife: 10, Every: 15, Restored: 1} }), nil},
		{"bores flushed less often", bores(func(b *BoredDrains) { b.Decline = &Decline{HalfLife: 10, Every: 15.01, Restored: 1} }), []string{"bored_drains_unflushed"}},
		{"bores that nobody flushes", bores(func(b *BoredDrains) { b.Decline = &Decline{HalfLife: 10, Every: math.Inf(1)} }), []string{"bored_drains_unflushed"}},
		{"bores that are renewed instead", bores(func(b *BoredDrains) { b.Decline = &Decline{HalfLife: 10, Every: math.Inf(1), Renewed: 15} }), nil},
		{"bores that are renewed later", bores(func(b *BoredDrains) { b.Decline = &Decline{HalfLife: 10, Every: math.Inf(1), Renewed: 16} }), []string{"bored_drains_unflushed"}},

		{"down to the slip surface", sloped(3, trenches(func(*TrenchDrains) {})), nil},
		{"short of the slip surface", sloped(3.01, trenches(func(*TrenchDrains) {})), []string{"trench_above_slip"}},
		{"short of it, by a rate", sloped(3.01, trenches(func(d *TrenchDrains) { d.Spacing, d.Rate = 0, 0.05 })), []string{"trench_above_slip"}},
		{"slip surface not known", trenches(func(d *TrenchDrains) { d.Depth, d.Spacing = 1, 8 }), []string{}},

		{"bores of 40 m", bores(func(b *BoredDrains) { b.Length, b.Efficiency = 40, 1 }), []string{"bored_drains_efficient"}},
		{"longer bores", bores(func(b *BoredDrains) { b.Length, b.Efficiency = 40.1, 1 }), []string{"bore_may_miss", "bored_drains_efficient"}},
		{"longer bores, allowed for", bores(func(b *BoredDrains) { b.Length, b.Efficiency = 40.1, 0.9 }), nil},
		{"very long bores", bores(func(b *BoredDrains) { b.Length, b.Efficiency = 100.1, 1 }), []string{"bore_long", "bored_drains_efficient"}},

		{"a little more than the computed depth", trenches(func(d *TrenchDrains) { d.Equivalent = 1.149 * computed }), nil},
		{"more than the computed depth", trenches(func(d *TrenchDrains) { d.Equivalent = 1.151 * computed }), []string{"equivalent_depth_differs"}},
		{"a little less", trenches(func(d *TrenchDrains) { d.Equivalent = 0.851 * computed }), nil},
		{"less", trenches(func(d *TrenchDrains) { d.Equivalent = 0.849 * computed }), []string{"equivalent_depth_differs"}},
		{"one depth for all spacings", func(p *prepared) {
			trenches(func(d *TrenchDrains) { d.Equivalent = computed })(p)
			p.study.Options[1].varied = "trench_drains.spacing"
		}, []string{"equivalent_depth_fixed"}},
		{"one depth for all conductivities", func(p *prepared) {
			trenches(func(d *TrenchDrains) { d.Equivalent = computed })(p)
			p.study.Options[1].varied = "trench_drains.conductivity"
		}, nil},
		{"thin drains", trenches(func(d *TrenchDrains) { d.Radius = 1 / math.Pi }), nil},
		{"thick against the ground below", trenches(func(d *TrenchDrains) { d.Radius = 1.001 / math.Pi }), []string{"formula_range"}},
		{"on the contact", trenches(func(d *TrenchDrains) { d.Depth, d.Radius = 4, 1 }), nil},
		{"on the contact, by the quadratic law", trenches(func(d *TrenchDrains) { d.Depth, d.Quadratic = 4, true }), nil},
		{"very fast, by the quadratic law", trenches(func(d *TrenchDrains) { d.Depth, d.Quadratic, d.Spacing, d.Conductivity = 4, true, 4, 4 }), []string{"implausible_drain_rate"}},
		{"ten radii apart", func(p *prepared) {
			p.study.Ground.CoverThickness = 6
			trenches(func(d *TrenchDrains) { d.Depth, d.Spacing, d.Radius, d.Conductivity = 4, 5, 0.5, 0.01 })(p)
		}, nil},
		{"less apart", func(p *prepared) {
			p.study.Ground.CoverThickness = 6
			trenches(func(d *TrenchDrains) { d.Depth, d.Spacing, d.Radius, d.Conductivity = 4, 4.99, 0.5, 0.01 })(p)
		}, []string{"formula_range"}},

		{"as far apart as deep", trenches(func(d *TrenchDrains) { d.Spacing = 3 }), nil},
		{"closer", trenches(func(d *TrenchDrains) { d.Spacing = 2.99 }), []string{"spacing_unusual"}},
		{"ten times as far apart", trenches(func(d *TrenchDrains) { d.Spacing = 30 }), nil},
		{"farther", trenches(func(d *TrenchDrains) { d.Spacing = 30.1 }), []string{"spacing_unusual"}},

		{"tight and porous, just not", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.1
			trenches(func(d *TrenchDrains) { d.Conductivity = 0.01 })(p)
		}, nil},
		{"tight and porous", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.1
			trenches(func(d *TrenchDrains) { d.Conductivity = 0.0099 })(p)
		}, []string{"conductivity_and_porosity"}},
		{"tight and less porous", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.099
			trenches(func(d *TrenchDrains) { d.Conductivity = 0.0099 })(p)
		}, nil},
		{"open and without pores, just not", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.029
			trenches(func(d *TrenchDrains) { d.Conductivity = 1 })(p)
		}, nil},
		{"open and without pores", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.029
			trenches(func(d *TrenchDrains) { d.Conductivity = 1.01 })(p)
		}, []string{"conductivity_and_porosity"}},
		{"open, with pores", func(p *prepared) {
			p.study.Ground.CoverPorosity = 0.03
			trenches(func(d *TrenchDrains) { d.Conductivity = 1.01 })(p)
		}, nil},
		{"conductivity below in another unit", trenches(func(d *TrenchDrains) { d.Depth, d.Below = 4, 87 }), []string{"implausible_ground"}},
		{"consolidation in range", func(p *prepared) { p.study.Ground.Consolidation = 1000 }, nil},
		{"consolidation in another unit", func(p *prepared) { p.study.Ground.Consolidation = 1001 }, []string{"implausible_ground"}},

		{"acting within a year", acting(year * (1 - 1e-9)), nil},
		{"acting later", acting(year * (1 + 1e-9)), []string{"slow_to_act"}},
		// 0.85*(L/2)^2/cv years for L = 20 m.
		{"clay within a year", func(p *prepared) {
			trenches(func(d *TrenchDrains) { d.Spacing = 20 })(p)
			p.study.Ground.Consolidation = 85.001
		}, nil},
		{"clay later", func(p *prepared) {
			trenches(func(d *TrenchDrains) { d.Spacing = 20 })(p)
			p.study.Ground.Consolidation = 84.999
		}, []string{"slow_to_act"}},
		{"slow on a slope that stands", func(p *prepared) { acting(400)(p); slipping(1.0501, p) }, []string{"slow_to_act"}},
		{"slow on a slope that hardly stands", func(p *prepared) { acting(400)(p); slipping(1.0499, p) }, []string{"slow_to_act", "movement_before_effect"}},
		{"fast on a slope that hardly stands", func(p *prepared) { acting(300)(p); slipping(1.0499, p) }, nil},
		{"slow channels on a slope that hardly stands", func(p *prepared) {
			p.study.Ground.DeepSeepage = 0.004
			p.study.Options[1].Measures = []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.1}}}
			slipping(1.0499, p)
		}, []string{"slow_to_act"}},

		{"no band decides, no drains", func(p *prepared) { p.study.Count.DecideOn = -1 }, nil},
		{"no band decides", func(p *prepared) { trenches(func(*TrenchDrains) {})(p); p.study.Count.DecideOn = -1 }, []string{"stopped_drains_not_shown"}},
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

// TestSlowToActText: a time of any length is told in whole years, rounded down.
func TestSlowToActText(t *testing.T) {
	for _, tt := range []struct {
		days float64
		want string
	}{
		{366, "more than 1 year until"},
		{3.5 * 365.25, "more than 3 years until"},
		{999999.5 * 365.25, "more than 999999 years until"},
		{1e6 * 365.25, "more than a million years until"},
		{1e300, "more than a million years until"},
	} {
		p := quiet()
		p.study.Ground.DeepSeepage = math.Ln10 / tt.days
		p.study.Options[1].Measures = []Measure{{Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: 0.5}}}
		p.rework()
		ws := warnings{}
		p.effectWarnings(&ws, p.works[1])
		if len(ws) != 1 || !strings.Contains(ws[0].Text, tt.want) {
			t.Errorf("%g d: %v, want %q", tt.days, ws, tt.want)
		}
	}
}

// TestOneTextForAll: numbers that a table shows are left out of texts, so that options of one list share a note. No table shows
// how many times as far apart as deep trenches are.
func TestOneTextForAll(t *testing.T) {
	p := quiet()
	p.study.Ground.DeepSeepage = 0.005
	p.study.Options = p.study.Options[:1]
	for _, spacing := range []float64{33, 36, 39} {
		o := Option{Name: fmt.Sprint(spacing), Measures: parallel(func(d *TrenchDrains) {
			d.Spacing, d.Equivalent, d.Decline = spacing, 0.5, nil
		}), varied: "trench_drains.spacing"}
		p.study.Options = append(p.study.Options, o)
	}
	p.study.Slope = &slope.Slope{Angle: 11, Depth: 13, UnitWeight: 19.5, Friction: 30}
	p.rework()
	texts := map[string]map[string]bool{}
	ws := p.studyWarnings(nil)
	for _, w := range ws {
		if texts[w.Code] == nil {
			texts[w.Code] = map[string]bool{}
		}
		texts[w.Code][w.Text] = true
	}
	if got, want := codes(ws), []string{"drains_never_clog", "trench_above_slip", "equivalent_depth_fixed", "spacing_unusual", "slow_to_act"}; !slices.Equal(got, want) {
		t.Errorf("got %q, want %q", got, want)
	}
	for code, of := range texts {
		if len(of) != 1 && code != "spacing_unusual" {
			t.Errorf("%s is said in %d ways", code, len(of))
		}
	}
}

// TestReachWarnings holds targets against what no event in the years of the record can show: 3.0/T events a year, and a chance
// of 1 - 0.05^(1/T).
func TestReachWarnings(t *testing.T) {
	least := -math.Log(0.05) / 40
	chance := 1 - math.Pow(0.05, 1.0/40)
	for _, tt := range []struct {
		target *Target
		years  string // that the text names; "" for no warning
	}{
		{nil, ""},
		{&Target{Measure: "events", Most: least * (1 + 1e-6)}, ""},
		{&Target{Measure: "events", Most: least * (1 - 1e-6)}, "41 years"},
		{&Target{Measure: "events", Most: 0.01}, "300 years"}, // 299.57
		{&Target{Measure: "events", Most: 0}, "No record"},
		{&Target{Measure: "annual_probability", Most: chance * (1 + 1e-6)}, ""},
		{&Target{Measure: "annual_probability", Most: chance * (1 - 1e-6)}, "41 years"},
		{&Target{Measure: "annual_probability", Most: 0.01}, "299 years"}, // 298.07
		{&Target{Measure: "annual_probability", Most: 0}, "No record"},
		{&Target{Measure: "days", Most: 0}, ""},
		{&Target{Measure: "load", Most: 0}, ""},
	} {
		p := quiet()
		p.counted.years = 40
		p.study.Count.Target = tt.target
		var ws warnings
		p.reachWarnings(&ws)
		if tt.years == "" {
			if len(ws) > 0 {
				t.Errorf("%+v: %+v", tt.target, ws)
			}
			continue
		}
		if len(ws) != 1 || ws[0].Code != "target_cannot_be_shown" || ws[0].Band != "onset" || !strings.Contains(ws[0].Text, tt.years) {
			t.Errorf("%+v: %+v does not name %s", tt.target, ws, tt.years)
		}
		// It is what the judgement of an option without an event says too.
		e := stats.Exceedance{EventsByYear: make([]float64, 40), DaysByYear: make([]float64, 40), LoadByYear: make([]float64, 40), AnyByYear: make([]float64, 40)}
		f := p.bandFigure(&p.study.Bands[0], &e)
		if got := tt.target.met(&f); got != "not_shown" {
			t.Errorf("%+v: no event is judged %q", tt.target, got)
		}
	}
}

// TestMoneyWarnings raises what is missing in costs and losses.
func TestMoneyWarnings(t *testing.T) {
	drained := func(cost Cost) func(*Study) {
		return func(s *Study) {
			s.Options[1].Measures = parallel(func(*TrenchDrains) {})
			cost.Drains = "trench_drains"
			s.Options[1].Costs = []Cost{cost}
		}
	}
	for _, tt := range []struct {
		name   string
		change func(*Study)
		want   []string
	}{
		{"no money", func(s *Study) { s.Money = nil }, nil},
		{"all given", drained(Cost{Capital: 1, PerYear: 1, Life: 30}), nil},
		{"nothing costed", func(*Study) {}, []string{"cost_not_given"}},
		{"no contingency", func(s *Study) {
			drained(Cost{Capital: 1, PerYear: 1, Life: 30})(s)
			s.Money.Contingency = 0
		}, []string{"no_contingency"}},
		{"one not costed", func(s *Study) {
			drained(Cost{Capital: 1, PerYear: 1, Life: 30})(s)
			s.Options = append(s.Options, Option{Name: "other"})
		}, []string{"cost_not_given"}},
		{"no loss", func(s *Study) {
			drained(Cost{Capital: 1, PerYear: 1, Life: 30})(s)
			s.Bands[0].LossPerDay = 0
		}, []string{"losses_not_given"}},
		{"no upkeep", drained(Cost{Capital: 1, Life: 30}), []string{"upkeep_left_out"}},
		{"flushes only", drained(Cost{Capital: 1, PerFlush: 1, Life: 30}), nil},
		{"no upkeep, no drains", func(s *Study) {
			s.Options[1].Measures = []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.1}}}
			s.Options[1].Costs = []Cost{{Capital: 1, Life: math.Inf(1)}}
		}, nil},
		{"renewed in the last year", drained(Cost{Capital: 1, PerYear: 1, Life: 49.9}), nil},
		{"not renewed", drained(Cost{Capital: 1, PerYear: 1, Life: 50}), []string{"never_renewed"}},
		{"metres not renewed", drained(Cost{PerMetre: 1, PerYear: 1, Life: math.Inf(1)}), []string{"never_renewed"}},
		{"nothing to renew", drained(Cost{PerYear: 1, Life: math.Inf(1)}), nil},
		{"not renewed in 20 years", func(s *Study) {
			drained(Cost{Capital: 1, PerYear: 1, Life: math.Inf(1)})(s)
			s.Money.Horizon = 20
		}, nil},
		{"not renewed in 21", func(s *Study) {
			drained(Cost{Capital: 1, PerYear: 1, Life: math.Inf(1)})(s)
			s.Money.Horizon = 21
		}, []string{"never_renewed"}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			p.study.Money = &Money{Currency: "EUR", Horizon: 50, Rate: 0.03, PricesOf: 2026, Contingency: 0.2}
			p.study.Bands[0].LossPerDay = 1
			tt.change(p.study)
			p.rework()
			if got := codes(p.studyWarnings(nil)); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestActionWarnings does the same for what a replay says of how works act.
func TestActionWarnings(t *testing.T) {
	some, none := 0.1, 0.0
	for _, tt := range []struct {
		name   string
		change func(*prepared, *optionFigures)
		want   []string
	}{
		{"a tenth taken", func(_ *prepared, f *optionFigures) { f.WaterBalance.Cover.DrainsMM = 10 }, nil},
		{"less taken", func(_ *prepared, f *optionFigures) { f.WaterBalance.Cover.DrainsMM = 9.99 }, []string{"trench_takes_little"}},
		{"never running", func(_ *prepared, f *optionFigures) {
			f.WaterBalance.Cover.DrainsMM, f.Drains[0].RunningShare = 0, 0
		}, nil},
		{"ceiling never reached", func(_ *prepared, f *optionFigures) { f.Drains[0].CeilingDaysPerYear = &none }, nil},
		{"ceiling reached", func(_ *prepared, f *optionFigures) { f.Drains[0].CeilingDaysPerYear = &some }, []string{"drain_at_ceiling"}},
		{"a metre lower, unanswered", func(p *prepared, f *optionFigures) {
			p.study.Declared["wells_or_buildings_nearby"], f.Level.MeanM = "unknown", 2
		}, nil},
		{"lower, unanswered", func(p *prepared, f *optionFigures) {
			p.study.Declared["wells_or_buildings_nearby"], f.Level.MeanM = "unknown", 1.99
		}, []string{"mean_level_much_lowered"}},
		{"lower, wells", func(p *prepared, f *optionFigures) {
			p.study.Declared["wells_or_buildings_nearby"], f.Level.MeanM = "yes", 1.99
		}, []string{"mean_level_much_lowered"}},
		{"lower, no wells", func(_ *prepared, f *optionFigures) { f.Level.MeanM = 1 }, nil},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			p.study.Options[1].Measures = parallel(func(*TrenchDrains) {})
			p.rework()
			f := optionFigures{Option: result.Option{Name: "works", Drains: []result.Drain{{RunningShare: 0.2}}}, trace: traceSummary{works: p.works[1]}}
			f.WaterBalance.Cover = result.CoverBalance{DrainsMM: 50, PercolationMM: 100}
			f.Level.MeanM = 3
			base := optionFigures{}
			base.Level.MeanM = 3
			tt.change(p, &f)
			var ws warnings
			p.actionWarnings(&ws, &f, &base)
			if got := codes(ws); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// TestTargetWarnings goes through the states in which an option meets the target.
func TestTargetWarnings(t *testing.T) {
	for _, tt := range []struct {
		states string // letter of each state that is there, and what becomes of the target in it
		want   []string
	}{
		{"", nil},
		{"as_new yes half_stopped yes all_stopped yes", nil},
		{"as_new no mean_between_flushes no before_flush no never_flushed no half_stopped no all_stopped no", nil},
		{"as_new yes mean_between_flushes yes before_flush yes never_flushed yes half_stopped yes all_stopped no", []string{"target_needs_drains"}},
		{"as_new yes mean_between_flushes yes before_flush yes never_flushed no half_stopped yes all_stopped no", []string{"target_needs_drains"}},
		{"as_new yes half_stopped no all_stopped no", []string{"target_needs_drains"}},
		{"as_new yes mean_between_flushes yes before_flush no never_flushed no half_stopped no all_stopped no", []string{"target_only_as_new"}},
		{"as_new yes mean_between_flushes no before_flush no never_flushed no half_stopped no all_stopped no", []string{"target_only_as_new"}},
		{"as_new yes mean_over_horizon no never_flushed no half_stopped no all_stopped no", []string{"target_only_as_new"}},
		{"as_new not_shown mean_over_horizon no never_flushed no half_stopped no all_stopped no", []string{"target_only_as_new"}},
		{"as_new not_shown mean_over_horizon not_shown never_flushed not_shown half_stopped not_shown all_stopped not_shown", nil},
	} {
		p := quiet()
		p.study.Count.Target = &Target{Measure: "days", Most: 2}
		f := optionFigures{Option: result.Option{Name: "works"}}
		words := strings.Fields(tt.states)
		for i := 0; i < len(words); i += 2 {
			f.States = append(f.States, result.State{State: words[i], MeetsTarget: words[i+1]})
		}
		var ws warnings
		p.targetWarnings(&ws, []optionFigures{f})
		if got := codes(ws); !slices.Equal(got, tt.want) {
			t.Errorf("%s: got %q, want %q", tt.states, got, tt.want)
		}
	}
}

// TestWorthWarnings: the two options that are worth most are a tie where what the one costs more lies within the range of what
// it avoids more.
func TestWorthWarnings(t *testing.T) {
	years := shortRecordYears
	loss := func(f func(year int) float64) []float64 {
		var all []float64
		for y := range years {
			all = append(all, f(y))
		}
		return all
	}
	base := loss(func(y int) float64 { return float64(y % 3) })
	best := loss(func(y int) float64 { return 0 })
	next := loss(func(y int) float64 { return 0.3 * float64(y%3) })
	r := stats.NewResamples(years, 400, 2, 1)
	const horizon = 50
	less := make([]float64, years)
	for y := range less {
		less[y] = horizon * (best[y] - next[y])
	}
	sure := -r.Compare(less, make([]float64, years), 0.9).DifferenceCI[1] // that the best avoids more

	for _, tt := range []struct {
		name           string
		first, second  []float64
		costs          [2]float64
		uncosted, loss bool // the second has no cost; no loss is known
		want           []string
	}{
		{name: "sure", first: best, second: next, costs: [2]float64{10 + sure*(1-1e-6), 10}},
		{name: "just not", first: best, second: next, costs: [2]float64{10 + sure*(1+1e-6), 10}, want: []string{"net_benefit_tie"}},
		{name: "sure, in the other order", first: next, second: best, costs: [2]float64{10, 10 + sure*(1-1e-6)}},
		{name: "alike and as dear", first: best, second: best, costs: [2]float64{10, 10}, want: []string{"net_benefit_tie"}},
		{name: "alike and cheaper", first: best, second: best, costs: [2]float64{9, 10}},
		// Nothing is avoided, so the best is to leave things as they are.
		{name: "dear and useless", first: base, second: base, costs: [2]float64{10, 20}},
		{name: "free and useless", first: base, second: base, costs: [2]float64{0, 20}, want: []string{"net_benefit_tie"}},
		{name: "against the baseline only", first: best, second: next, uncosted: true, costs: [2]float64{10, 0}},
		{name: "no loss", loss: true, costs: [2]float64{10, 10}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			p := quiet()
			p.study.Money = &Money{Horizon: horizon}
			p.study.Options = append(p.study.Options, Option{Name: "other"})
			p.rework()
			options := []optionFigures{
				{Option: result.Option{Name: "as it stands", Cost: &result.Cost{}}, losses: base},
				{Option: result.Option{Name: "works", Cost: &result.Cost{PresentValue: tt.costs[0]}}, losses: tt.first},
				{Option: result.Option{Name: "other", Cost: &result.Cost{PresentValue: tt.costs[1]}}, losses: tt.second},
			}
			for i := range options {
				f := &options[i]
				f.trace.works = p.works[i]
				if tt.loss {
					f.losses = nil
				} else if i > 0 {
					net := p.benefit(f, &options[0]) - f.Cost.PresentValue
					f.Cost.NetBenefit = &net
				}
			}
			if tt.uncosted {
				options[2].Cost = nil
			}
			var ws warnings
			p.worthWarnings(&ws, options, r)
			if got := codes(ws); !slices.Equal(got, tt.want) {
				t.Errorf("got %q, want %q", got, tt.want)
			}
		})
	}
}

// linear makes the trenches of the demo follow the linear law, as new for ever.
func linear(s *Study) {
	s.Money = nil
	for i := range s.Options {
		if m := s.Options[i].drains("trench_drains"); m != nil {
			m.Trench.Quadratic, m.Trench.Decline, m.Trench.Head = false, nil, 3
		}
	}
}

// TestLinearLawFar: the demo with linear rates that were worked out for water up to the surface, against the same written with
// the quadratic law.
func TestLinearLawFar(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	linear(s)
	c := compare(t, s)
	squared := load(t, "../testdata/demo/study.yaml")
	linear(squared)
	for i := range squared.Options {
		if m := squared.Options[i].drains("trench_drains"); m != nil {
			m.Trench.Quadratic = true
		}
	}
	want := compare(t, squared)
	for _, w := range want.Warnings {
		if w.Code == "linear_law_far" {
			t.Errorf("%+v", w)
		}
	}
	var named []string
	text := ""
	for _, w := range c.Warnings {
		if w.Code != "linear_law_far" {
			continue
		}
		named = append(named, w.Option)
		if text == "" {
			text = w.Text
		}
		if w.Text != text || w.Band != "movement onset" {
			t.Errorf("%+v differs from %s", w, text)
		}
		i := slices.IndexFunc(s.Options, func(o Option) bool { return o.Name == w.Option })
		by := func(c *result.Comparison) string {
			return measureNamed("load").text(c.Cases[0].Options[i].Decision.Value)
		}
		if moved := fmt.Sprintf("%q %s, not %s", w.Option, by(want), by(c)); !strings.Contains(w.Text, moved) {
			t.Errorf("%s does not say %s", w.Text, moved)
		}
	}
	if !strings.Contains(text, "too much") || len(named) < 3 {
		t.Errorf("named are %q: %s", named, text)
	}
}

// TestLawWarnings raises the same at exactly its conditions: the height, and how far the figure moves.
func TestLawWarnings(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	linear(s)
	p, err := prepare(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	const at = 4 // 24 m apart
	f, err := p.replayed(context.Background(), newWorks(s, byQuadraticLaw(&s.Options[at]), &asBuilt, asNew))
	if err != nil {
		t.Fatal(err)
	}
	squared := f.Bands[s.Count.DecideOn].LoadMDaysPerYear
	if squared <= 0 {
		t.Fatal("nothing is left of the load")
	}
	mean := 8 / (math.Pi * math.Pi) // mean height over that midway
	for _, tt := range []struct {
		name   string
		head   float64 // midway, m, of a working head of 3 m; 0 where the trenches never run
		linear float64
		most   float64 // of the baseline
		want   string  // in the text; "" for no warning
	}{
		{"half of the head", 1.5001, squared / 2, 10, ""},
		{"less than half", 1.4999, squared / 2, 10, "too much"},
		{"twice the head", 5.9999, squared / 2, 10, ""},
		{"more than twice", 6.0001, squared / 2, 10, "too little"},
		{"never running", 0, squared / 2, 10, ""},
		{"far, and the same to 5 %", 0.1, squared * 0.9501, 10, ""},
		{"far, and just not", 0.1, squared * 0.9499, 10, "too much"},
		{"far, the same to a thousandth of the baseline's", 0.1, squared / 2, squared / 2 / 0.00101 * 1.02, ""},
		{"far, and just not", 0.1, squared / 2, squared / 2 / 0.00101, "too much"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			options := make([]optionFigures, len(s.Options))
			for i := range options {
				options[i].Bands = make([]result.BandFigure, len(s.Bands))
				for _, d := range p.works[i].drains {
					options[i].Drains = append(options[i].Drains, result.Drain{Measure: d.measure})
				}
			}
			options[p.baseline].Bands[s.Count.DecideOn].LoadMDaysPerYear = tt.most
			head := tt.head * mean
			if head > 0 {
				options[at].Drains[0].MeanHeadM = &head
			}
			options[at].Decision = &result.Decision{Value: tt.linear}
			var ws warnings
			if err := p.lawWarnings(context.Background(), &ws, options); err != nil {
				t.Fatal(err)
			}
			if tt.want == "" && len(ws) > 0 || tt.want != "" && (len(ws) != 1 || !strings.Contains(ws[0].Text, tt.want)) {
				t.Errorf("%+v, want %q", ws, tt.want)
			}
		})
	}
}

// TestQuietWorks: a comparison with works, costs, losses and a target in which none of what is held against usual practice is
// off raises nothing about it.
func TestQuietWorks(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	s.Declared["iron_or_lime_in_water"], s.Declared["wells_or_buildings_nearby"] = "no", "no"
	s.Options = slices.DeleteFunc(s.Options, func(o Option) bool {
		return o.Name != "as it stands" && o.Name != "trenches, spacing 12 m" && o.Name != "trenches, spacing 16 m"
	})
	s.Count.Target.Most = 100 // which all meet, even with their drains stopped
	s.Bands[2].Level = 4.9
	got := only(codes(compare(t, s).Warnings), worksCodes...)
	if want := []string{"net_benefit_tie"}; !slices.Equal(got, want) { // which they are
		t.Errorf("got %q, want %q", got, want)
	}
}

// worksCodes are those of warnings_works.go that a comparison of trenches can raise.
var worksCodes = []string{
	"drain_never_runs", "drain_runs_rarely", "implausible_drain_rate", "trench_deep", "implausible_ground", "drains_never_clog",
	"trench_above_slip", "equivalent_depth_fixed", "equivalent_depth_differs", "formula_range", "spacing_unusual", "conductivity_and_porosity",
	"slow_to_act", "movement_before_effect", "no_contingency", "upkeep_left_out", "never_renewed", "cost_not_given", "losses_not_given",
	"trench_takes_little", "drain_at_ceiling", "mean_level_much_lowered", "stopped_drains_not_shown", "linear_law_far", "net_benefit_tie",
	"target_cannot_be_shown", "target_only_as_new", "target_needs_drains",
}
