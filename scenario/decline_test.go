package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"quietslope/cascade/scheme"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// gaussFour are the points and weights of Gauss's rule with four points on 0 to 1, from their closed form.
func gaussFour() (at, weight [4]float64) {
	inner, outer := math.Sqrt(3/7.0-2/7.0*math.Sqrt(1.2)), math.Sqrt(3/7.0+2/7.0*math.Sqrt(1.2))
	much, little := (18+math.Sqrt(30))/72, (18-math.Sqrt(30))/72
	return [4]float64{(1 - outer) / 2, (1 - inner) / 2, (1 + inner) / 2, (1 + outer) / 2}, [4]float64{little, much, much, little}
}

// remains is the share of a drain's rate after a part of its time, by hand.
func remains(d *Decline, part float64, horizon int) float64 {
	switch {
	case d == nil:
		return 1
	case math.IsInf(d.Every, 1):
		return math.Pow(2, -part*float64(horizon)/d.HalfLife)
	}
	return d.Restored * math.Pow(2, -part*d.Every/d.HalfLife)
}

// TestMeanMultiplier holds the ages against the mean of the multiplier in closed form, ρ·(1 − 2^(-m/t½))·t½/(m·ln 2), to the
// error of the rule for e^(-a·x), a = m·ln 2/t½: at most a^8·(4!)^4/(9·(8!)^3) (from memory, and what is seen).
func TestMeanMultiplier(t *testing.T) {
	for _, tt := range []struct {
		d       Decline
		horizon int
	}{
		{Decline{HalfLife: 12, Every: 5, Restored: 0.95}, 50},
		{Decline{HalfLife: 10, Every: 4, Restored: 0.9}, 50},
		{Decline{HalfLife: 3, Every: 9, Restored: 1}, 50},
		{Decline{HalfLife: 12, Every: math.Inf(1), Restored: 1}, 50},
		{Decline{HalfLife: 20, Every: math.Inf(1), Restored: 1}, 100},
		{Decline{HalfLife: 1000, Every: 1, Restored: 0.5}, 1},
		{Decline{HalfLife: 10, Every: math.Inf(1), Restored: 1, Renewed: 20}, 50},
		{Decline{HalfLife: 10, Every: math.Inf(1), Restored: 1, Renewed: 60}, 50},
		{Decline{HalfLife: 10, Every: 4, Restored: 0.9, Renewed: 3}, 50},
	} {
		s := ground(Option{Name: "works", Measures: []Measure{{Bored: &BoredDrains{Decline: &tt.d}}}})
		s.Count.DesignLife = tt.horizon
		m, name := tt.d.Every, stateMean
		if math.IsInf(m, 1) {
			m, name = float64(tt.horizon), stateHorizon
			if tt.d.Renewed > 0 {
				m = min(m, tt.d.Renewed)
			}
		}
		a := m * math.Ln2 / tt.d.HalfLife
		want := tt.d.Restored * -math.Expm1(-a) / a // all digits of 1 - 2^(-m/t½)
		got, states := s.ownStates(&s.Options[1])
		mean := 0.0
		for _, in := range states {
			mean += in.weight * in.state.left(&tt.d)
		}
		limit := math.Pow(a, 8) * math.Pow(24, 4) / (9 * math.Pow(40320, 3))
		if got != name || len(states) != 4 || math.Abs(mean-want) > limit+1e-15 {
			t.Errorf("%+v: %s, %v in the mean, want %s, %v within %g", tt.d, got, mean, name, want, limit)
		}
	}
}

// TestMeanKeepsTheFurthest: warnings see of several replays what comes nearest to a limit.
func TestMeanKeepsTheFurthest(t *testing.T) {
	p := quiet()
	part := func(of traceSummary) optionFigures {
		return optionFigures{trace: of, passed: make([]stats.Exceedance, len(p.study.Bands))}
	}
	for _, order := range [][2]int{{0, 1}, {1, 0}} {
		parts := []optionFigures{
			part(traceSummary{fromDry: 0.1, coverMax: 2, deepMax: 4, refusedShare: 0.3}),
			part(traceSummary{fromDry: 0.2, coverMax: 1, deepMax: 5, refusedShare: 0.2}),
		}
		f := p.mean(p.works[1], []optionFigures{parts[order[0]], parts[order[1]]}, []float64{0.5, 0.5})
		if want := (traceSummary{works: p.works[1], fromDry: 0.2, coverMax: 2, deepMax: 5, refusedShare: 0.3}); f.trace != want {
			t.Errorf("got %+v, want %+v", f.trace, want)
		}
	}
}

// decliningStudy has drains of every kind that clog in every way, in the baseline too.
func decliningStudy(t *testing.T) *Study {
	inf, nan := math.Inf(1), math.NaN()
	flushed := &Decline{HalfLife: 3, Every: 4, Restored: 0.8}
	left := &Decline{HalfLife: 8, Every: inf, Restored: 1}
	trench := func(depth, rate float64, d *Decline) Measure {
		return Measure{Key: "trench_drains", Trench: &TrenchDrains{Depth: depth, Rate: rate, Equivalent: nan, Efficiency: 0.9, Ceiling: 1.5, Decline: d}}
	}
	spaced := func(quadratic bool, d *Decline) Measure {
		return Measure{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 10, Conductivity: 0.05, Radius: 0.1, Equivalent: nan, Head: 1.5,
			Quadratic: quadratic, Efficiency: 0.8, Ceiling: inf, Decline: d}}
	}
	bored := func(rate float64, d *Decline) Measure {
		return Measure{Key: "bored_drains", Bored: &BoredDrains{Rate: rate, Level: 1.5, Efficiency: 1, Ceiling: inf, Decline: d}}
	}
	s := ground(
		Option{Name: "flushed", Measures: []Measure{trench(3, 0.02, flushed)}},
		Option{Name: "never flushed", Measures: []Measure{bored(0.004, left)}},
		Option{Name: "two intervals", Measures: []Measure{trench(2.5, 0.03, flushed), bored(0.002, &Decline{HalfLife: 20, Every: 10, Restored: 0.95})}},
		Option{Name: "one of two", Measures: []Measure{trench(2.5, 0.03, nil), bored(0.002, flushed), {Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: 0.5}}}},
		Option{Name: "mixed", Measures: []Measure{trench(2.5, 0.03, flushed), bored(0.002, left)}},
		Option{Name: "spaced", Measures: []Measure{spaced(false, flushed)}},
		Option{Name: "quadratic", Measures: []Measure{spaced(true, flushed), bored(0.001, nil)}},
		Option{Name: "spaced, as new", Measures: []Measure{spaced(false, nil)}},
		Option{Name: "cut off", Measures: []Measure{{Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: 0.5}}}},
		Option{Name: "channels", Measures: keptOut(0.1)},
	)
	s.Options[0].Measures = []Measure{trench(1, 0.01, left)}
	s.Ground.Lateral, s.Ground.WarmUpYears = 0.05, 3
	s.Bands = []Band{
		{Name: "watch", GivenAs: "level", Level: 1.6, Until: 1.6, LossPerDay: 10},
		{Name: "onset", GivenAs: "level", Level: 2.2, Until: 2.0, LossPerEvent: 500, LossPerDay: 100},
	}
	s.Count.DecideOn, s.Count.DesignLife, s.Count.YearStarts = 1, 12, 9
	s.Count.Target = &Target{Measure: "load", Most: 2}
	s.Money = &Money{Currency: "EUR", Horizon: 30, Rate: 0.03, PricesOf: 2026}
	for i := range s.Options {
		s.Options[i].Costs = []Cost{{Capital: 100, Life: inf}}
	}
	s.Conditions = []Condition{{Name: "neglected", Drains: 0.45, SurfaceWater: 0.6, Vegetation: 1}}
	r := invented(5, 9)
	recordOfDays(t, s, r.First, r.Rain, r.PET)
	return s
}

// changed is a study whose drains do not clog, each changed by hand.
func changed(s *Study, change func(option string, m *Measure)) *Study {
	c := *s
	c.Options = slices.Clone(s.Options)
	for i := range c.Options {
		o := &c.Options[i]
		o.Measures = slices.Clone(o.Measures)
		for k := range o.Measures {
			m := &o.Measures[k]
			switch {
			case m.Trench != nil:
				copied := *m.Trench
				m.Trench = &copied
			case m.Bored != nil:
				copied := *m.Bored
				m.Bored = &copied
			case m.CutOff != nil:
				copied := *m.CutOff
				m.CutOff = &copied
			}
			change(o.Name, m)
			switch {
			case m.Trench != nil:
				m.Trench.Decline = nil
			case m.Bored != nil:
				m.Bored.Decline = nil
			}
		}
	}
	return &c
}

// times multiplies what a drain carries, as a study would have it written.
func times(m *Measure, share float64) {
	switch {
	case m.Trench != nil && m.Trench.Spacing > 0:
		m.Trench.Efficiency *= share
	case m.Trench != nil:
		m.Trench.Rate *= share
	case m.Bored != nil:
		m.Bored.Rate *= share
	case m.CutOff != nil:
		m.CutOff.Intercepted *= share
	}
}

// cases are the figures of every option in every case, with the yearly ones.
func casesOf(t *testing.T, s *Study) (*prepared, [][]optionFigures) {
	t.Helper()
	p, err := prepare(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	var all [][]optionFigures
	for _, c := range p.cases {
		var options []optionFigures
		for i := range c.works {
			f, err := p.rowFigures(context.Background(), c.works[i], c.rows[i])
			if err != nil {
				t.Fatal(err)
			}
			options = append(options, f)
		}
		all = append(all, options)
	}
	return p, all
}

// The figures of replays are the same but for rounding: a share of 1e-11 of figures of some hundreds.
var alike = cmp.Options{cmpopts.EquateApprox(1e-11, 1e-11)}

// TestRowIsTheMeanOfFourStudies: the figures of an option whose drains clog are the mean of those of four studies that have
// the rates at four ages written out, but that extremes are the largest of all ages, and each interval is that of the mean of
// the yearly figures.
func TestRowIsTheMeanOfFourStudies(t *testing.T) {
	for _, horizon := range []int{30, 12} {
		t.Run(fmt.Sprintf("horizon %d y", horizon), func(t *testing.T) {
			s := decliningStudy(t)
			if horizon == 12 { // the design life, where there is no money
				s.Money = nil
				for i := range s.Bands {
					s.Bands[i].LossPerDay, s.Bands[i].LossPerEvent = 0, 0
				}
				for i := range s.Options {
					s.Options[i].Costs = nil
				}
			}
			c := compare(t, s)
			at, weight := gaussFour()
			var parts [4]*result.Comparison
			var yearly [4][][]optionFigures
			var p *prepared
			for k := range at {
				one := changed(s, func(_ string, m *Measure) { times(m, remains(m.decline(), at[k], horizon)) })
				parts[k] = compare(t, one)
				p, yearly[k] = casesOf(t, one)
			}
			mean := func(figure func(k int) float64) float64 {
				sum := 0.0
				for k := range weight {
					sum += weight[k] * figure(k)
				}
				return sum
			}
			most := func(figure func(k int) float64) float64 {
				return max(figure(0), figure(1), figure(2), figure(3))
			}
			series := func(figure func(k int) []float64) []float64 {
				sum := make([]float64, c.Record.YearsCounted)
				for k := range weight {
					for y, x := range figure(k) {
						sum[y] += weight[k] * x
					}
				}
				return sum
			}
			r := stats.NewResamples(c.Record.YearsCounted, s.Count.Resamples, s.Count.MeanBlock, s.Count.Seed)
			pair := func(lo, hi float64, ok bool) *result.Interval {
				if !ok {
					return nil
				}
				return &result.Interval{lo, hi}
			}
			asNew := compare(t, changed(s, func(string, *Measure) {}))
			fractions := 0
			for j := range c.Cases {
				for i := range c.Cases[j].Options {
					o := &c.Cases[j].Options[i]
					of := func(k int) *result.Option { return &parts[k].Cases[j].Options[i] }
					name := c.Cases[j].Condition + ", " + o.Name

					want := *o
					want.Level = result.Level{
						MeanM: mean(func(k int) float64 { return of(k).Level.MeanM }), MaxM: most(func(k int) float64 { return of(k).Level.MaxM }),
						Q50M: mean(func(k int) float64 { return of(k).Level.Q50M }), Q95M: mean(func(k int) float64 { return of(k).Level.Q95M }),
						Q99M: mean(func(k int) float64 { return of(k).Level.Q99M }),
					}
					want.WaterBalance.Cover.DrainsMM = mean(func(k int) float64 { return of(k).WaterBalance.Cover.DrainsMM })
					want.WaterBalance.Deep.InMM = mean(func(k int) float64 { return of(k).WaterBalance.Deep.InMM })
					want.WaterBalance.Deep.DrainsMM = mean(func(k int) float64 { return of(k).WaterBalance.Deep.DrainsMM })
					want.RechargeMMPerYear = of(2).RechargeMMPerYear
					want.Drains = slices.Clone(o.Drains)
					for d := range want.Drains {
						w := &want.Drains[d]
						drain := func(k int) *result.Drain { return &of(k).Drains[d] }
						w.RunningShare = mean(func(k int) float64 { return drain(k).RunningShare })
						w.MeanMMPerDay = mean(func(k int) float64 { return drain(k).MeanMMPerDay })
						w.PeakMMPerDay = max(asNew.Cases[j].Options[i].Drains[d].PeakMMPerDay, drain(0).PeakMMPerDay, drain(1).PeakMMPerDay, drain(2).PeakMMPerDay, drain(3).PeakMMPerDay)
						head := mean(func(k int) float64 {
							if h := drain(k).MeanHeadM; h != nil {
								return drain(k).RunningShare * *h
							}
							return 0
						})
						if w.MeanHeadM = nil; w.RunningShare > 0 {
							head /= w.RunningShare
							w.MeanHeadM = &head
						}
						if w.CeilingDaysPerYear != nil {
							full := mean(func(k int) float64 { return *drain(k).CeilingDaysPerYear })
							w.CeilingDaysPerYear = &full
						}
					}
					want.Bands = slices.Clone(o.Bands)
					for b := range want.Bands {
						w := &want.Bands[b]
						band := func(k int) *result.BandFigure { return &of(k).Bands[b] }
						passed := func(k int) *stats.Exceedance { return &yearly[k][j][i].passed[b] }
						base := func(k int) *stats.Exceedance { return &yearly[k][j][p.baseline].passed[b] }
						w.Events = mean(func(k int) float64 { return band(k).Events })
						w.EventsPerYear = w.Events / float64(c.Record.YearsCounted)
						w.DaysPerYear = mean(func(k int) float64 { return band(k).DaysPerYear })
						w.DaysInBandPerYear = mean(func(k int) float64 { return band(k).DaysInBandPerYear })
						w.AnnualProbability = mean(func(k int) float64 { return band(k).AnnualProbability })
						w.LongestDays = most(func(k int) float64 { return band(k).LongestDays })
						w.LoadMDaysPerYear = mean(func(k int) float64 { return band(k).LoadMDaysPerYear })
						for m := range w.DaysByMonth {
							w.DaysByMonth[m] = mean(func(k int) float64 { return band(k).DaysByMonth[m] })
						}
						ofEventful := func(figure func(*result.BandFigure) *float64) *float64 {
							sum, all := 0.0, 0.0
							for k := range weight {
								if x := figure(band(k)); x != nil {
									sum, all = sum+weight[k]**x, all+weight[k]
								}
							}
							if all == 0 {
								return nil
							}
							sum /= all
							return &sum
						}
						w.MeanSpanDays = ofEventful(func(b *result.BandFigure) *float64 { return b.MeanSpanDays })
						if peak := most(func(k int) float64 {
							if x := band(k).PeakExcessM; x != nil {
								return *x
							}
							return 0
						}); w.PeakExcessM != nil {
							w.PeakExcessM = &peak
						}
						w.MeanExcessM = ofEventful(func(b *result.BandFigure) *float64 { return b.MeanExcessM })
						lo, hi := stats.PoissonInterval(w.Events, float64(c.Record.YearsCounted), 0.9)
						w.EventsPerYearCI = result.Interval{lo, hi}
						lo, hi = stats.BinomialInterval(w.AnnualProbability*float64(c.Record.YearsCounted), c.Record.YearsCounted, 0.9)
						w.AnnualProbabilityCI = result.Interval{lo, hi}
						w.DaysPerYearCI = pair(r.Interval(series(func(k int) []float64 { return passed(k).DaysByYear }), 0.9))
						w.LoadMDaysPerYearCI = pair(r.Interval(series(func(k int) []float64 { return passed(k).LoadByYear }), 0.9))
						if i != p.baseline {
							change := &result.Change{}
							for _, m := range measures {
								d := r.Compare(series(func(k int) []float64 { return m.byYear(passed(k)) }), series(func(k int) []float64 { return m.byYear(base(k)) }), 0.9)
								*m.of(change) = difference(d)
								if m.name == "load" {
									change.ToldApart = d.ToldApart(0.9)
								}
							}
							w.Change = change
						}
						if w.Events != math.Trunc(w.Events) && o.DrainsAs != "" && o.DrainsAs != stateNew {
							fractions++
						}
						if w.Spells = nil; o.DrainsAs == "" || o.DrainsAs == stateNew {
							w.Spells = o.Bands[b].Spells
						}
					}
					onset := &want.Bands[1]
					decision := *o.Decision
					decision.Value, decision.CI = onset.LoadMDaysPerYear, onset.LoadMDaysPerYearCI
					want.Decision = &decision
					if o.Cost != nil {
						cost := *o.Cost
						loss := mean(func(k int) float64 { return *of(k).Cost.AnnualLoss })
						cost.AnnualLoss = &loss
						cost.AnnualLossCI = pair(r.Interval(series(func(k int) []float64 { return yearly[k][j][i].losses }), 0.9))
						want.Cost = &cost
					}
					if d := cmp.Diff(&want, o, alike); d != "" {
						t.Errorf("%s (-want +got):\n%s", name, d)
					}
				}
			}
			if fractions == 0 {
				t.Error("no count has a fraction")
			}
		})
	}
}

// TestDrainsAs: which mean the figures of an option are, and that rates are those as new in the condition.
func TestDrainsAs(t *testing.T) {
	c := compare(t, decliningStudy(t))
	for name, want := range map[string]string{
		"as it stands": "mean_over_horizon", "flushed": "mean_between_flushes", "never flushed": "mean_over_horizon", "two intervals": "mean_between_flushes",
		"one of two": "mean_between_flushes", "mixed": "mean_between_flushes", "spaced": "mean_between_flushes", "spaced, as new": "as_new", "cut off": "as_new", "channels": "",
	} {
		if got := optionNamed(t, c, name).DrainsAs; got != want {
			t.Errorf("%s: %q, want %q", name, got, want)
		}
	}
	for j, share := range []float64{1, 0.45} {
		for i, want := range map[int]float64{1: 0.02 * 0.9, 2: 0.004} {
			if got := c.Cases[j].Options[i].Drains[0].RatePerDay; !agrees(got, want*share) {
				t.Errorf("%s, %s: the rate is %v, want %v", c.Cases[j].Condition, c.Cases[j].Options[i].Name, got, want*share)
			}
		}
	}
}

// TestStatesAreStudies: each state of an option's drains has the figure of a study that has it written out.
func TestStatesAreStudies(t *testing.T) {
	s := decliningStudy(t)
	const horizon = 30
	c := compare(t, s)
	written := map[string]*result.Comparison{
		stateNew:    compare(t, changed(s, func(string, *Measure) {})),
		stateBefore: compare(t, changed(s, func(_ string, m *Measure) { times(m, remains(m.decline(), 1, horizon)) })),
		stateNever: compare(t, changed(s, func(_ string, m *Measure) {
			if d := m.decline(); d != nil {
				times(m, math.Pow(2, -horizon/d.HalfLife))
			}
		})),
		stateHalf: compare(t, changed(s, func(_ string, m *Measure) {
			switch {
			case m.Trench != nil:
				m.Trench.Ceiling /= 2
			case m.Bored != nil:
				m.Bored.Ceiling /= 2
			}
			if m.Trench != nil && m.Trench.Spacing > 0 {
				m.Trench.Spacing *= 2
			} else {
				times(m, 0.5)
			}
		})),
		stateStopped: compare(t, changed(s, func(_ string, m *Measure) { times(m, 0) })),
	}
	order := map[string][]string{
		"":           nil,
		stateNew:     {stateNew, stateHalf, stateStopped},
		stateMean:    {stateNew, stateMean, stateBefore, stateNever, stateHalf, stateStopped},
		stateHorizon: {stateNew, stateHorizon, stateNever, stateHalf, stateStopped},
	}
	for i, o := range c.Cases[0].Options {
		var names []string
		for _, in := range o.States {
			names = append(names, in.State)
			want := &o // of the own mean the row is the figure
			if w := written[in.State]; w != nil {
				want = &w.Cases[0].Options[i]
			}
			d := want.Decision
			if diff := cmp.Diff(result.State{State: in.State, EffectShare: in.EffectShare, Value: d.Value, CI: d.CI, MeetsTarget: d.MeetsTarget}, in, alike); diff != "" {
				t.Errorf("%s, %s (-want +got):\n%s", o.Name, in.State, diff)
			}
		}
		if !slices.Equal(names, order[o.DrainsAs]) {
			t.Errorf("%s has the states %v, want %v", o.Name, names, order[o.DrainsAs])
		}
		if c.Cases[1].Options[i].States != nil {
			t.Errorf("%s has states in the second case", o.Name)
		}
	}
	// What is left of what the drains do as new, by hand; of several drains the mean.
	at, weight := gaussFour()
	mean := func(shares func(x float64) float64) float64 {
		sum := 0.0
		for k := range at {
			sum += weight[k] * shares(at[k])
		}
		return sum
	}
	flushed := func(x float64) float64 { return 0.8 * math.Exp2(-x*4/3) }
	// The equivalent depth under trenches 1 m above the contact is more at 20 m than at 10 m, so more than a quarter is left.
	spaced := func(spacing float64) float64 {
		tr := &TrenchDrains{Depth: 3, Spacing: spacing, Radius: 0.1}
		return (tr.equivalentDepth(&s.Ground) + 0.75) / (spacing * spacing)
	}
	quarter := spaced(20) / spaced(10)
	if !(quarter > 0.25 && quarter < 0.27) {
		t.Errorf("%v is left at twice the spacing", quarter)
	}
	for option, shares := range map[string][]float64{
		"flushed":        {1, mean(flushed), 0.8 * math.Exp2(-4/3.0), math.Exp2(-30 / 3.0), 0.5, 0},
		"never flushed":  {1, mean(func(x float64) float64 { return math.Exp2(-x * 30 / 8) }), math.Exp2(-30 / 8.0), 0.5, 0},
		"two intervals":  {1, mean(func(x float64) float64 { return (flushed(x) + 0.95*math.Exp2(-x*10/20)) / 2 }), (0.8*math.Exp2(-4/3.0) + 0.95*math.Exp2(-0.5)) / 2, (math.Exp2(-30/3.0) + math.Exp2(-30/20.0)) / 2, 0.5, 0},
		"one of two":     {1, (2 + mean(flushed)) / 3, (2 + 0.8*math.Exp2(-4/3.0)) / 3, (2 + math.Exp2(-30/3.0)) / 3, 0.5, 0},
		"spaced":         {1, mean(flushed), 0.8 * math.Exp2(-4/3.0), math.Exp2(-30 / 3.0), quarter, 0},
		"quadratic":      {1, (1 + mean(flushed)) / 2, (1 + 0.8*math.Exp2(-4/3.0)) / 2, (1 + math.Exp2(-30/3.0)) / 2, (0.5 + quarter) / 2, 0},
		"spaced, as new": {1, quarter, 0},
		"cut off":        {1, 0.5, 0},
	} {
		for k, in := range optionNamed(t, c, option).States {
			if !agrees(in.EffectShare, shares[k]) {
				t.Errorf("%s, %s: a share of %v is left, want %v", option, in.State, in.EffectShare, shares[k])
			}
		}
	}
}

// TestWarmUpOfAges: the warm-up suits the drains as they age, on which a store may hang.
func TestWarmUpOfAges(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	s.Ground.Start, s.Ground.WarmUpYears = nil, -1
	s.Ground.Scheme, s.Conditions = scheme.Exact, nil
	for _, tt := range []struct {
		decline *Decline
		want    int
	}{{nil, 3}, {&Decline{HalfLife: 1, Every: math.Inf(1), Restored: 1}, 14}} { // 5/0.001 d are 13.7 y
		s.Options = append(s.Options[:1:1], Option{Name: "bores", Measures: []Measure{
			{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: 1e-3}}},
			{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.05, Level: 0, Efficiency: 1, Ceiling: math.Inf(1), Decline: tt.decline}},
		}})
		if got := compare(t, s).Record.WarmUpYears; got != tt.want {
			t.Errorf("%+v: %d years, want %d", tt.decline, got, tt.want)
		}
	}
}

// TestStateThatCannotBe: a store may hang on its drains altogether. Then it is said that this is about drains that stop.
func TestStateThatCannotBe(t *testing.T) {
	s := decliningStudy(t)
	s.Conditions, s.Options = nil, s.Options[:1]
	s.Ground.DeepSeepage, s.Ground.DeepFullAt = 0, math.Inf(1)
	drain := &BoredDrains{Rate: 0.005, Level: 0, Efficiency: 1, Ceiling: math.Inf(1)}
	s.Options[0].Measures = []Measure{{Key: "bored_drains", Bored: drain}}
	refused := func(want string) {
		t.Helper()
		_, err := Compare(context.Background(), s, CompareQuery{})
		var fe *fault.Error
		if !errors.As(err, &fe) || fe.Text != want {
			t.Errorf("got %v, want %s", err, want)
		}
	}
	refused("the results show this option with all drains stopped too, and then nothing can leave the deep store; give ground.cover.full_at and ground.deep.full_at as levels, over which a full store can run")
	s.Ground.DeepFullAt = 9
	c := compare(t, s)
	if o := c.Cases[0].Options[0]; o.States[2].State != stateStopped || !(o.States[2].Value > o.States[0].Value) {
		t.Errorf("%+v", o.States)
	}
	// Something leaves, and there is no level at which it would be as much as comes in.
	s.Ground.DeepFullAt, s.Ground.CoverFullAt, s.Ground.PercolationCap = math.Inf(1), math.Inf(1), 0.01
	s.Ground.CoverSeepage, s.Ground.DeepSeepage = 0, 0.01
	s.Options[0].Measures = []Measure{{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Rate: 0.1, Equivalent: math.NaN(), Efficiency: 1, Ceiling: math.Inf(1)}}}
	_, err := Compare(context.Background(), s, CompareQuery{})
	if err == nil || !strings.Contains(err.Error(), "the results show this option with all drains stopped too, and then the cover has no steady state") {
		t.Errorf("got %v", err)
	}
}

// TestRenewedDrains: drains that nobody flushes age until the life of their cost is over. The cost of another part of the
// option, one without capital and one without a life renew nothing; nobody renews drains that nobody flushes in the state of
// that name.
func TestRenewedDrains(t *testing.T) {
	const clogs = "bored_drains: {rate: 0.005 /d, level: 3.0 m, decline: {half_life: 10 y}}"
	s := parseBase(t, strings.Join([]string{
		"-study: Test bank",
		"+study: Test bank",
		"+money: {currency: EUR, horizon: 50 y, discount_rate: 3 %, prices_of: 2026}",
		"-  - name: trial",
		"+  - {name: renewed, " + clogs + ", cost: {capital: 1000, life: 20 y}}",
		"+  - {name: upkeep only, " + clogs + ", cost: {per_year: 1000}}",
		"+  - {name: for ever, " + clogs + ", cost: {capital: 1000}}",
		"+  - {name: channels, surface_water: {kept_out: 10 %}, cost: {capital: 1000, life: 5 y}}",
		"+  - {name: both, " + clogs + ", surface_water: {kept_out: 10 %}, cost: {like: [channels, renewed]}}",
		"+  - name: trial\n",
	}, "\n"))
	option := func(name string) *Option { return &s.Options[indexOfName(optionNames(s), name)] }
	for name, want := range map[string]float64{"renewed": 20, "upkeep only": 0, "for ever": 0, "both": 20} {
		if got := option(name).drains("bored_drains").decline().Renewed; got != want {
			t.Errorf("%s: renewed after %v y, want %v", name, got, want)
		}
	}
	further := s.furtherStates(option("renewed"))
	if got := further[1].left(option("renewed").Measures[0].decline()); further[1].name != stateNever || got != math.Exp2(-5) {
		t.Errorf("%s leaves %v, want %v", further[1].name, got, math.Exp2(-5))
	}
}
