package render

import (
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
)

// The figures below are made up to exercise the layout; they come from no replay.

func ptr(x float64) *float64 { return &x }

func ci(lo, hi float64) *result.Interval { return &result.Interval{lo, hi} }

// strengths scale the made-up figures of an option: 1 for the baseline, 0 for one that ends the exceedances.
type strengths struct {
	name     string
	measures []string
	strength float64
}

var demoOptions = []strengths{
	{"as it stands", nil, 1},
	{"trenches, spacing 12 m", []string{"trench drains 3 m deep, 12 m apart"}, 0},
	{"trenches, spacing 24 m", []string{"trench drains 3 m deep, 24 m apart"}, 0.46},
	{"shallow trenches", []string{"trench drains 1.2 m deep, 8 m apart"}, 0.97},
	{"bored drains", []string{"bored drains at 3 m in the deep layer, 0.005 /d"}, 0.8},
	{"lined channels", []string{"10 % of the infiltration kept out"}, 0.6},
	{"trenches at 16 m with lined channels", []string{"trench drains 3 m deep, 16 m apart", "10 % of the infiltration kept out"}, 0.04},
}

// fixture makes a comparison of the given options on bands of the given names.
func fixture(options []strengths, bands []string) *result.Comparison {
	const years = 39
	inside := true
	c := &result.Comparison{
		Head: result.Head{
			ResultsVersion: 1, Study: "Ostler Lea bank, cover drainage options",
			Tool: result.Tool{Name: "quietslope", Version: "0.1.0"}, Command: "compare",
			Inputs: []result.Input{
				{Role: "study", File: "study.yaml", SHA256: strings.Repeat("0123456789abcdef", 4)},
				{Role: "weather", File: "weather.csv", SHA256: strings.Repeat("fedcba9876543210", 4)},
			},
			Warnings: []result.Warning{
				{Code: "declared_unanswered", Severity: result.Warn, Text: "Not answered under declared: iron_or_lime_in_water, wells_or_buildings_nearby. Answer each with yes or no, and weigh what a yes would change."},
				{Code: "perched_water", Severity: result.Note, Text: "Perched water is not in the model. Drains may lower the deep level and leave it."},
			},
			Cautions: []string{
				"These figures compare options on one record. They are no stability analysis, no forecast of movement and no warning system: nobody's safety may rest on them alone.",
				"Design rests with licensed engineers and the owner.",
			},
		},
		Declared: map[string]string{"existing_slip_surface": "yes", "rapid_movement_possible": "no", "perched_water": "unknown"},
		Defaults: []result.KeyValue{{Key: "count.resamples", Value: "2000"}, {Key: "weather.stamp", Value: "start"}},
		Settings: result.Settings{YearStarts: "October", ApartDays: 10, Confidence: 0.9, Resamples: 2000, Seed: 1, BlockYears: 2,
			DecideBy: "load"},
		Record: result.Record{From: "1984-01-01", To: "2023-12-31", Step: "1 d", StepDays: new(1.0), Stamp: "start", Rows: 14610, WarmUpYears: 4,
			CountedFrom: "1984-10-01", CountedTo: "2023-09-30", YearsCounted: years, PartialDays: 366, RainMMPerYear: 968.3, PETMMPerYear: ptr(691.2)},
	}
	for b, name := range bands {
		level := 3.6 + 0.6*float64(b)
		band := result.Band{Name: name, GivenAs: "level", LevelM: level, UntilM: level, BelowGroundM: 13 - level, ElevationM: ptr(405 + level)}
		if b == 1 {
			band.UntilM = level - 0.3
		}
		if b < 2 {
			band.WithinReadings = &inside
		}
		c.Bands = append(c.Bands, band)
		c.Settings.DecideOn = bands[min(1, len(bands)-1)]
	}
	if len(options) < 2 {
		c.Settings.DecideOn = ""
	}
	found := result.Case{Climate: "as recorded", Condition: "as built"}
	for i, s := range options {
		o := result.Option{
			Name: s.name, Baseline: i == 0, Measures: s.measures, RechargeMMPerYear: 310.4 - 20*(1-s.strength), ActualETMMPerYear: ptr(502.2),
			Level: result.Level{MeanM: 2.4 + 0.8*s.strength, MaxM: 3.9 + 1.2*s.strength, Q50M: 2.3 + 0.7*s.strength, Q95M: 3.2 + 0.9*s.strength, Q99M: 3.6 + s.strength},
			WaterBalance: result.Balance{
				Cover: result.CoverBalance{InMM: 12416, SeepageMM: 8000 * (0.4 + 0.6*s.strength), PercolationMM: 3500, DrainsMM: 4800 * (1 - s.strength), StorageChangeMM: 12.3, ErrorMM: 3e-10},
				Deep:  result.DeepBalance{InMM: 3500, SeepageMM: 3490, StorageChangeMM: 10, ErrorMM: -1.2e-10},
			},
		}
		if s.strength < 1 && len(s.measures) > 0 {
			d := result.Drain{Measure: "trench_drains", Layer: "cover", RatePerDay: 0.013712, InvertM: 1, Law: "linear", RunningShare: 0.412, MeanMMPerDay: 0.4123, PeakMMPerDay: 6.371, PeakLPerS: ptr(0.8849)}
			if i%2 == 0 {
				d.CeilingMMPerDay = ptr(5)
			}
			o.Drains = append(o.Drains, d)
		}
		for b, name := range bands {
			scale := s.strength / (1 + 4*float64(b))
			f := result.BandFigure{
				Name: name, LevelM: c.Bands[b].LevelM, Events: float64(int(61 * scale)), EventsPerYear: float64(int(61*scale)) / years,
				DaysPerYear: 64.21 * scale, AnnualProbability: float64(int(30*scale)) / years,
				LongestDays: 171 * scale, LoadMDaysPerYear: 21.347 * scale * scale,
				EventsPerYearCI:     result.Interval{0.7 * 61 * scale / years, (1.2*61*scale + 3) / years},
				AnnualProbabilityCI: result.Interval{scale * 0.6, scale*0.89 + 0.074*(1-scale)},
			}
			for m := range f.DaysByMonth {
				f.DaysByMonth[m] = scale * []float64{14.2, 15.1, 14, 9.3, 3.2, 0.6, 0.04, 0, 0, 0.2, 1.7, 5.9}[m]
			}
			if scale > 0 {
				f.DaysPerYearCI = ci(0.61*f.DaysPerYear, 1.44*f.DaysPerYear)
				f.LoadMDaysPerYearCI = ci(0.5*f.LoadMDaysPerYear, 1.63*f.LoadMDaysPerYear)
				f.PeakExcessM = ptr(0.93 * scale)
			}
			if i > 0 {
				d := func(x float64) result.Difference {
					cut := x * (1 - s.strength)
					return result.Difference{Difference: -cut, DifferenceCI: ci(-1.6*cut, -0.55*cut+0.05*x), Ratio: ptr(s.strength), RatioCI: ci(0.8*s.strength, min(1.05, 1.2*s.strength)),
						ShareBetter: min(1, 1.4-s.strength), ShareEqual: max(0, s.strength-0.9), YearsBetter: int(30 * (1 - s.strength)), YearsEqual: 9, YearsWorse: 30 - int(30*(1-s.strength))}
				}
				f.Change = &result.Change{EventsPerYear: d(1.56 / (1 + 4*float64(b))), DaysPerYear: d(64.2 / (1 + 4*float64(b))), LoadMDaysPerYear: d(21.3 / (1 + 4*float64(b))),
					AnnualProbability: d(0.77 / (1 + 4*float64(b))), ToldApart: s.strength < 0.7}
			}
			o.Bands = append(o.Bands, f)
		}
		if c.Settings.DecideOn != "" {
			f := o.Bands[min(1, len(bands)-1)]
			o.Decision = &result.Decision{Measure: "load", Value: f.LoadMDaysPerYear, CI: f.LoadMDaysPerYearCI}
		}
		found.Options = append(found.Options, o)
		if i == 3 {
			c.Warnings = append(c.Warnings,
				result.Warning{Code: "drain_runs_rarely", Severity: result.Warn, Option: s.name, Text: "The trench drains lie at 2.80 m, at or above the baseline's cover level on 97 % of the steps. They act on the highest levels only; make sure that this is meant."},
				result.Warning{Code: "few_events", Severity: result.Warn, Band: bands[len(bands)-1], Text: "Fewer than 5 events, too few for a rate; read the ranges. Options (events): " + s.name + " (3)."},
				result.Warning{Code: "days_and_events_disagree", Severity: result.Warn, Option: s.name, Band: bands[0], Text: "Fewer days but more events than the baseline: long events were split. Read days and load with the count."})
		}
	}
	for i := range found.Options {
		if found.Options[i].Decision == nil {
			continue
		}
		found.Options[i].Decision.Rank = 1
		for j := range found.Options {
			if found.Options[j].Decision.Value < found.Options[i].Decision.Value {
				found.Options[i].Decision.Rank++
			}
		}
	}
	c.Cases = []result.Case{found}
	return c
}

// longNames gives nine options names of 60 columns that differ only at the end.
func longNames() []strengths {
	var all []strengths
	for i := range 9 {
		name := fmt.Sprintf("%s, spacing %2d m", "counterfort trenches behind the lower road, with çollars", 8+4*i)
		r := []rune(name)
		if len(r) > 60 {
			name = string(r[:60-len(", spacing 8 m")]) + fmt.Sprintf(", spacing %d m", i)
		}
		all = append(all, strengths{name, []string{"trench drains 3 m deep"}, 1 - float64(i)/8})
	}
	return all
}

// always is a slope that stands above every band all the time.
func always() *result.Comparison {
	c := fixture(demoOptions[:2], []string{"watch", "movement onset"})
	for i := range c.Cases[0].Options {
		for b := range c.Cases[0].Options[i].Bands {
			f := &c.Cases[0].Options[i].Bands[b]
			f.Events, f.EventsPerYear, f.EventsPerYearCI = 1, 1.0/39, result.Interval{0.0013, 0.12}
			f.DaysPerYear, f.DaysPerYearCI = 365.256, ci(365.2, 365.3)
			f.AnnualProbability, f.AnnualProbabilityCI = 1, result.Interval{0.926, 1}
			f.LongestDays, f.PeakExcessM = 14610, ptr(3.217)
			f.LoadMDaysPerYear, f.LoadMDaysPerYearCI = 812.4, ci(790.3, 838.9)
			for m := range f.DaysByMonth {
				f.DaysByMonth[m] = 30.4
			}
			if f.Change != nil {
				same := result.Difference{DifferenceCI: ci(0, 0), Ratio: ptr(1), RatioCI: ci(1, 1), ShareEqual: 1, YearsEqual: 39}
				f.Change = &result.Change{EventsPerYear: same, DaysPerYear: same, LoadMDaysPerYear: same, AnnualProbability: same}
			}
		}
		c.Cases[0].Options[i].Decision.Rank = 1
	}
	return c
}

// never is a slope on which no band was passed.
func never() *result.Comparison {
	all := []strengths{{"as it stands", nil, 0}, {"lined channels", []string{"10 % of the infiltration kept out"}, 0}}
	c := fixture(all, []string{"watch", "movement onset"})
	for i := range c.Cases[0].Options {
		for b := range c.Cases[0].Options[i].Bands {
			if f := &c.Cases[0].Options[i].Bands[b]; f.Change != nil {
				same := result.Difference{ShareEqual: 1, YearsEqual: 39}
				f.Change = &result.Change{EventsPerYear: same, DaysPerYear: same, LoadMDaysPerYear: same, AnnualProbability: same}
			}
		}
	}
	return c
}

// severalCases is the demo under two further climates, and with works that hold up badly.
func severalCases() *result.Comparison {
	c := fixture(demoOptions, threeBands)
	scaled := func(climate, condition string, by float64) {
		options := slices.Clone(demoOptions)
		for i := range options {
			options[i].strength = min(1, by*options[i].strength+max(0, by-1)/4)
		}
		other := fixture(options, threeBands).Cases[0]
		other.Climate, other.Condition = climate, condition
		c.Cases = append(c.Cases, other)
	}
	scaled("wetter winters", "as built", 1.3)
	scaled("drier, by the middle of the century", "as built", 0.6)
	scaled("as recorded", "neglected", 1.1)

	// The same words about every option in the second case, about some in two of them, and about a case as such.
	add := func(code string, of *result.Case, option, band, text string) {
		c.Warnings = append(c.Warnings, result.Warning{Code: code, Severity: result.Warn, Climate: of.Climate, Condition: of.Condition, Option: option, Band: band, Text: text})
	}
	for i := range c.Cases {
		of := &c.Cases[i]
		for k, o := range demoOptions {
			if i == 1 || i == 2 && k < 3 {
				add("few_events", of, o.name, threeBands[2], "Fewer than 5 events, too few for a rate; read the ranges.")
			}
			if i > 1 && k == 1 {
				add("start_still_felt", of, o.name, "", "The first counted years rest on the start.")
			}
		}
		if i != 2 {
			add("order_not_told_apart", of, "", threeBands[1], fmt.Sprintf("Neighbours that this record cannot tell apart: %d.", i))
		}
	}
	c.Warnings = append(c.Warnings, result.Warning{Code: "climate_far", Severity: result.Note, Climate: "wetter winters", Text: "This climate lies beyond the record."})
	return c
}

// againstOther is the demo with its changes measured against the third option.
func againstOther() *result.Comparison {
	c := fixture(demoOptions, threeBands)
	c.Settings.Against = demoOptions[2].name
	options := c.Cases[0].Options
	for b := range threeBands {
		options[0].Bands[b].Change, options[2].Bands[b].Change = options[2].Bands[b].Change, nil
	}
	return c
}

// priced is the demo with a target, with costs and losses, with drains that age, and with a second case.
func priced() *result.Comparison {
	c := fixture(demoOptions, threeBands)
	neglected := fixture(demoOptions, threeBands).Cases[0]
	neglected.Condition = "neglected"
	c.Cases = append(c.Cases, neglected)
	c.Settings.DesignLife = 50
	c.Settings.Target = &result.Target{Measure: "days", Value: 2}
	c.Settings.Money = &result.Money{Currency: "EUR", HorizonYears: 50, DiscountRate: 0.03, PricesOf: 2026, Contingency: 0.2}
	for k := range c.Cases {
		price(&c.Cases[k], k == 0)
	}
	c.Warnings = append(c.Warnings, result.Warning{Code: "net_benefit_tie", Severity: result.Warn, Text: "By net benefit the record cannot tell the best two from each other."})
	return c
}

// price makes up what the options of the demo cost and what their drains do when they age; the last has no known cost.
func price(c *result.Case, first bool) {
	capital := []float64{0, 114000, 57000, 171000, 164640, 45600}
	meets := []string{"no", "yes", "no", "no", "no", "no", "not_shown"}
	for i := range c.Options {
		o := &c.Options[i]
		strength, band := demoOptions[i].strength, &o.Bands[1]
		o.Decision.MeetsTarget = meets[i]
		o.Minimum = i == 5
		if i > 0 {
			o.TimeToEffect = &result.TimeToEffect{StoreDays: 310 + 20*float64(i), Days: 310 + 20*float64(i)}
		}
		if first && len(o.Drains) > 0 && i != 5 {
			age(o, i == 4)
		}
		if i >= len(capital) {
			continue
		}
		pv := 1.71 * capital[i]
		loss := 155405 * strength
		o.Cost = &result.Cost{Capital: capital[i], PresentValue: pv, AnnualEquivalent: pv / 25.73, AnnualLoss: &loss, AnnualLossCI: ci(0.44*loss, 1.66*loss)}
		on := true
		o.Decision.OnFrontier = &on
		if i == 0 {
			continue
		}
		o.Cost.ToldApart = i != 4
		net := 23.1*(155405-loss) - pv
		o.Cost.NetBenefit, o.Cost.NetBenefitCI = &net, ci(0.4*net-1000, 1.7*net+1000)
		if len(o.Drains) > 0 && i != 5 {
			o.Cost.Metres, o.Cost.Flushes, o.Cost.Renewals = ptr(capital[i]/114), new(9), new(1)
		}
		if o.Cost.ToldApart {
			day := pv / 25.73 / (64.21/5 - band.DaysPerYear)
			o.Cost.PerDayAvoided, o.Cost.PerDayAvoidedCI = &day, ci(0.65*day, 1.9*day)
			o.Cost.PerEventAvoided, o.Cost.PerEventAvoidedCI = ptr(110*day), ci(70*day, 210*day)
			o.Cost.BreakEvenLoss, o.Cost.BenefitCost = ptr(115*day), ptr((net+pv)/pv)
		}
	}
	o := c.Options
	for to, from := range map[int]int{5: 0, 2: 5, 1: 5} {
		o[to].Cost.StepFrom = o[from].Name
	}
	o[5].Cost.StepBenefitCost, o[1].Cost.StepBenefitCost = ptr(12.34), ptr(0.871)
	for i, by := range map[int]int{3: 1, 4: 1} {
		on := false
		o[i].Decision.OnFrontier, o[i].Decision.DominatedBy = &on, o[by].Name
	}
}

// age makes up what an option with drains does in every state of them, flushed or not.
func age(o *result.Option, neverFlushed bool) {
	add := func(state string, share, value float64) {
		s := result.State{State: state, EffectShare: share, Value: value, MeetsTarget: "no"}
		if value > 0 {
			s.CI = ci(0.4*value, 1.7*value)
		}
		switch {
		case value < 0.1:
			s.MeetsTarget = "yes"
		case value < 0.2:
			s.MeetsTarget = "not_shown"
		}
		o.States = append(o.States, s)
	}
	own := o.Decision.Value
	add("as_new", 1, 0.7*own)
	if neverFlushed {
		o.DrainsAs = "mean_over_horizon"
		add(o.DrainsAs, 0.4, own)
	} else {
		o.DrainsAs = "mean_between_flushes"
		add(o.DrainsAs, 0.83, own)
		add("before_flush", 0.71, 1.1*own+0.004)
	}
	add("never_flushed", 0.06, 0.5*own+0.4)
	add("half_stopped", 0.25, 0.8*own+0.15)
	add("all_stopped", 0, 0.85)
}
