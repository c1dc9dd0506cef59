package scenario

import (
	"context"
	"math"
	"slices"
	"time"

	"quietslope/cascade"
	"quietslope/scenario/result"
	"quietslope/scenario/weather"
	"quietslope/stats"
)

// The case that is always there: the weather as recorded, the works as built.
const (
	AsRecorded = "as recorded"
	AsBuilt    = "as built"
)

// prepared is a study with its record read and everything settled that all options share.
type prepared struct {
	study    *Study
	record   *weather.Record
	works    []*works    // of every option, as built
	cases    []caseWorks // the first is as built
	replayer *replayer
	counted  period
	baseline int
	base     *trace // replay of the baseline, as built
}

// caseWorks are all the options in one condition of the works.
type caseWorks struct {
	condition string
	works     []*works     // of every option, its drains as new
	rows      [][]weighted // of every option, what its figures are the mean of
}

// weighted is an option with its drains at one of the ages that its figures are the mean over.
type weighted struct {
	works  *works
	weight float64
}

// prepare reads the record, replays the baseline and settles the years that are counted. A warm-up that is left to the tool is
// long enough for the works besides those of the study too.
func prepare(ctx context.Context, s *Study, besides ...*works) (*prepared, error) {
	record, err := weather.Read(ctx, weatherSource(s))
	if err != nil {
		return nil, err
	}
	p := &prepared{study: s, record: record, baseline: baselineOf(s)}
	if err := p.work(); err != nil {
		return nil, err
	}
	all := besides
	for _, c := range p.cases {
		all = append(all, c.works...)
		for _, row := range c.rows { // the drains of some are slower
			for _, aged := range row {
				all = append(all, aged.works)
			}
		}
	}
	warm, err := newWarmUp(s, record, all)
	if err != nil {
		return nil, err
	}
	p.replayer = &replayer{study: s, record: record, warm: warm}

	starts := time.Month(s.Count.YearStarts)
	if starts == 0 {
		starts, err = p.replayer.lowestMonth(ctx, p.works[p.baseline])
		if err != nil {
			return nil, err
		}
		if starts == 0 { // not one complete month, which is refused below
			starts = record.First.Month()
		}
	}
	p.counted = countYears(record, starts)
	if p.counted.years == 0 {
		return nil, noCompleteYear(record, starts)
	}
	p.base, err = p.replayer.replay(ctx, p.works[p.baseline], p.counted)
	return p, err
}

// maxReplays is the largest number of options times conditions. Nobody reads more.
const maxReplays = 5000

// work works out every option in every condition.
func (p *prepared) work() error {
	s := p.study
	p.cases = nil
	if n := len(s.Options) * (1 + len(s.Conditions)); n > maxReplays { // those of one state, which people can count
		return s.Fault(s.PlaceOf("options"), "%d options in %d conditions are %d replays, more than %d; compare fewer at a time", len(s.Options), 1+len(s.Conditions), n, maxReplays)
	}
	for _, c := range append([]Condition{asBuilt}, s.Conditions...) {
		found := caseWorks{condition: c.Name}
		for i := range s.Options {
			w := newWorks(s, &s.Options[i], &c, asNew)
			if err := w.check(s); err != nil {
				return err
			}
			found.works = append(found.works, w)
			found.rows = append(found.rows, s.row(w, &c))
		}
		p.cases = append(p.cases, found)
	}
	p.works = p.cases[0].works
	return nil
}

// row is what the figures of an option are the mean of.
func (s *Study) row(asNew *works, c *Condition) []weighted {
	_, states := s.ownStates(asNew.option)
	if len(states) == 1 {
		return []weighted{{asNew, 1}}
	}
	var row []weighted
	for _, a := range states {
		row = append(row, weighted{newWorks(s, asNew.option, c, a.state), a.weight})
	}
	return row
}

// baselineOf is the place of the baseline among the options.
func baselineOf(s *Study) int {
	return max(0, slices.IndexFunc(s.Options, func(o Option) bool { return o.Baseline }))
}

func weatherSource(s *Study) weather.Source {
	w := &s.Weather
	src := weather.Source{
		Path: w.Path, Name: w.Path, Time: w.Time, Format: w.Format,
		Rain: weather.Column(w.Rain), StampEnd: w.StampEnd, Missing: w.Missing, Gaps: w.Gaps,
	}
	if w.PET != nil {
		pet := weather.Column(*w.PET)
		src.PET = &pet
	}
	return src
}

// CompareQuery says how options are compared. Its zero value compares them with the baseline.
type CompareQuery struct {
	Against string // name of the option that changes are measured against; "" for the baseline
}

// Compare replays every option of a study in every case on its whole record and says how each passes every band. A
// *fault.Error in the chain means that the study, the record or the query is at fault; any other error is ours, the
// machine's or the context's.
func Compare(ctx context.Context, s *Study, q CompareQuery) (*result.Comparison, error) {
	against := baselineOf(s)
	if q.Against != "" {
		if against = indexOfName(optionNames(s), q.Against); against < 0 {
			return nil, unknownName("--against", q.Against, optionNames(s))
		}
	}
	p, err := prepare(ctx, s)
	if err != nil {
		return nil, err
	}
	resamples := stats.NewResamples(p.counted.years, s.Count.Resamples, s.Count.MeanBlock, s.Count.Seed)

	n := len(s.Options)
	all := make([]optionFigures, n*len(p.cases)) // the options of each case in turn
	err = each(len(all), func(i int) (err error) {
		asNew := p.cases[i/n].works[i%n]
		if all[i], err = p.rowFigures(ctx, asNew, p.cases[i/n].rows[i%n]); err == nil {
			err = p.peaks(ctx, &all[i], asNew)
		}
		return err
	})
	if err != nil {
		return nil, err
	}
	err = each(len(all), func(i int) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		p.judge(&all[i], &all[i/n*n+against], resamples)
		return nil
	})
	if err != nil {
		return nil, err
	}

	c := &result.Comparison{
		Head:     p.head("compare"),
		Declared: map[string]string(s.Declared),
		Defaults: s.defaults(),
		Settings: p.settings(),
		Bands:    p.bands(),
		Record:   p.recordFound(),
	}
	if against != p.baseline {
		c.Settings.Against = s.Options[against].Name
	}
	raised := make([]warnings, len(p.cases))
	laws := warnings{}
	for k, w := range p.cases {
		options := all[k*n : (k+1)*n]
		rank(s, options)
		p.costs(options, resamples)
		if k == 0 {
			if err := p.states(ctx, options, &asBuilt, resamples); err != nil {
				return nil, err
			}
			if err := p.lawWarnings(ctx, &laws, options); err != nil {
				return nil, err
			}
		}
		found := result.Case{Climate: AsRecorded, Condition: w.condition}
		for i := range options {
			found.Options = append(found.Options, options[i].Option)
		}
		c.Cases = append(c.Cases, found)
		raised[k] = p.resultWarnings(options, against, resamples)
	}
	ws := warnings(p.studyWarnings(all[:n]))
	for i := range all[:n] {
		p.actionWarnings(&ws, &all[i], &all[p.baseline])
	}
	ws = append(ws, laws...)
	p.targetWarnings(&ws, all[:n])
	p.worthWarnings(&ws, all[:n], resamples)
	conversion, err := p.conversion(ctx)
	if err != nil {
		return nil, err
	}
	conversionWarnings(&ws, conversion)
	c.Conversion = conversion
	c.Warnings = append(ws, p.ofCases(raised)...)
	return c, nil
}

// defaults are the keys that the study did not give and that stand at their default.
func (s *Study) defaults() []result.KeyValue {
	defaults := []result.KeyValue{}
	for _, e := range s.Understood {
		if e.Default {
			defaults = append(defaults, result.KeyValue{Key: e.Key, Value: e.Value})
		}
	}
	return defaults
}

func optionNames(s *Study) []string {
	var names []string
	for i := range s.Options {
		names = append(names, s.Options[i].Name)
	}
	return names
}

// optionFigures is the result of one option, with what is still needed to compare it with others.
type optionFigures struct {
	result.Option
	trace  traceSummary
	passed []stats.Exceedance // by band
	losses []float64          // by counted year; nil where no band has a loss
	fresh  *optionFigures     // with its drains as new, where the figures are a mean over their ages
}

// traceSummary is what the warnings ask of a replay, so that its series need not be kept.
type traceSummary struct {
	works        *works
	fromDry      float64 // m, as in trace
	coverMax     float64 // m, over the record
	deepMax      float64
	refusedShare float64 // of what percolated to the deep store
}

// summarise keeps of a replay what the warnings ask of it.
func summarise(t *trace) traceSummary {
	s := traceSummary{
		works: t.works, fromDry: t.fromDry, coverMax: t.coverMax, deepMax: t.deepMax,
	}
	if in := t.whole.Deep.In; in > 0 {
		s.refusedShare = t.whole.Deep.Refused / in
	}
	return s
}

// replayed is what one replay of an option says by itself.
func (p *prepared) replayed(ctx context.Context, w *works) (optionFigures, error) {
	if w == p.base.works {
		return p.figures(p.base), nil
	}
	t, err := p.replayer.replay(ctx, w, p.counted)
	if err != nil {
		return optionFigures{}, err
	}
	defer p.replayer.drop(t.recharge, t.cover, t.deep)
	return p.figures(t), nil
}

// figures works out all that one replay says by itself.
func (p *prepared) figures(t *trace) optionFigures {
	w := t.works
	years := float64(p.counted.years)
	from, to := p.counted.from, p.counted.to
	f := optionFigures{trace: summarise(t)}
	f.Option = result.Option{
		Name: w.option.Name, Baseline: w.option.Baseline, Minimum: w.option.Minimum, Measures: w.option.describe(), Rates: w.rates(),
		Drains:            []result.Drain{},
		RechargeMMPerYear: total(t.recharge[from:to]) / years,
		Level:             p.levelFigures(t),
		WaterBalance:      t.balance(),
		Bands:             []result.BandFigure{},
	}
	if w.ground.Soil != nil {
		actual := t.actualET / years
		f.ActualETMMPerYear = &actual
	}
	for _, d := range w.drains {
		f.Drains = append(f.Drains, p.drainFigures(t, d))
	}
	for i := range p.study.Bands {
		b := &p.study.Bands[i]
		e := stats.Exceed(t.deep, &p.counted.calendar, p.threshold(i), p.study.Count.Apart)
		f.passed = append(f.passed, e)
		f.Bands = append(f.Bands, p.bandFigure(b, &e))
	}
	if on := p.study.Count.DecideOn; on >= 0 {
		f.Bands[on].Spells = p.spells(&f.passed[on])
	}
	if losses := p.study.lossBands(); losses != nil {
		f.losses = stats.Losses(t.deep, &p.counted.calendar, losses, f.passed)
	}
	return f
}

// spells are the counted events, to be held against what is known of the slope's movement.
func (p *prepared) spells(e *stats.Exceedance) []result.Spell {
	var spells []result.Spell
	for _, ev := range e.Events {
		if ev.Counted {
			spells = append(spells, result.Spell{
				From: p.record.ISO(ev.First), To: p.record.ISO(ev.Last), Days: ev.Days, PeakExcessM: ev.PeakExcess,
			})
		}
	}
	return spells
}

// threshold is a band as the counting sees it.
func (p *prepared) threshold(i int) stats.Threshold {
	bands := p.study.Bands
	th := stats.Threshold{Level: bands[i].Level, Until: bands[i].Until, Next: math.Inf(1)}
	if i+1 < len(bands) {
		th.Next = bands[i+1].Level
	}
	return th
}

func (p *prepared) levelFigures(t *trace) result.Level {
	levels := t.deep[p.counted.from:p.counted.to]
	spare := p.replayer.series()
	defer p.replayer.drop(spare)
	q := stats.Quantiles(append(spare[:0], levels...), 0.50, 0.95, 0.99)
	return result.Level{MeanM: total(levels) / float64(len(levels)), MaxM: largest(levels), Q50M: q[0], Q95M: q[1], Q99M: q[2]}
}

func (p *prepared) drainFigures(t *trace, d drainage) result.Drain {
	w := t.works
	levels, porosity, outlet := t.cover, w.ground.CoverPorosity, cascadeOutlet(w, d)
	carried := t.counted.Cover.Drains
	if d.layer == inDeep {
		levels, porosity, carried = t.deep, w.ground.DeepPorosity, t.counted.Deep.Drains
	}
	running, head, full := 0, 0.0, 0.0
	counted := levels[p.counted.from:p.counted.to]
	for i, h := range counted {
		if h > d.invert && d.rate+d.square > 0 {
			running++
			head += h - d.invert
			if outlet.Flow(storage(h, porosity)) >= outlet.Ceiling {
				full += p.counted.calendar.Days[p.counted.from+i]
			}
		}
	}
	peak := outlet.Flow(storage(largest(counted), porosity)) // a higher level never carries less
	f := result.Drain{
		Measure: d.measure, Layer: d.layer, RatePerDay: d.rate, InvertM: d.invert, CeilingMMPerDay: finite(d.ceiling),
		Law: d.law(), RunningShare: float64(running) / float64(len(counted)),
		MeanMMPerDay: carried[d.index] / t.counted.Days, PeakMMPerDay: peak,
	}
	if running > 0 {
		head /= float64(running)
		f.MeanHeadM = &head
	}
	if !math.IsInf(d.ceiling, 1) {
		full /= float64(p.counted.years)
		f.CeilingDaysPerYear = &full
	}
	if area := p.study.Site.PlanArea; area > 0 {
		// 1 mm over 1 m² is 1 L.
		litres := peak * area / 86400
		f.PeakLPerS = &litres
	}
	return f
}

// cascadeOutlet is a drain as the model has it.
func cascadeOutlet(w *works, d drainage) cascade.Outlet {
	if d.layer == inDeep {
		return w.model.Deep.Drains[d.index]
	}
	return w.model.Cover.Drains[d.index]
}

func (t *trace) balance() result.Balance {
	c, d := &t.whole.Cover, &t.whole.Deep
	return result.Balance{
		Cover: result.CoverBalance{
			InMM: c.In, SeepageMM: c.Seepage, PercolationMM: c.Percolation, DrainsMM: total(c.Drains),
			OverflowMM: c.Overflow, UnmetMM: c.Unmet,
			StorageChangeMM: c.Change, ErrorMM: c.Error(),
		},
		Deep: result.DeepBalance{
			InMM: d.In, LateralMM: d.Lateral, SeepageMM: d.Seepage, DrainsMM: total(d.Drains), RefusedMM: d.Refused,
			StorageChangeMM: d.Change, ErrorMM: d.Error(),
		},
	}
}

// bandFigure is what can be said of one option at one band without comparing it.
func (p *prepared) bandFigure(b *Band, e *stats.Exceedance) result.BandFigure {
	years, confidence := p.counted.years, p.study.Count.Confidence
	f := result.BandFigure{
		Name: b.Name, LevelM: b.Level,
		Events: e.Count, EventsPerYear: e.Count / float64(years),
		DaysPerYear: stats.Mean(e.DaysByYear), DaysInBandPerYear: e.DaysInBand, AnnualProbability: stats.Mean(e.AnyByYear),
		LongestDays: e.Longest, LoadMDaysPerYear: stats.Mean(e.LoadByYear), DaysByMonth: e.ByMonth,
	}
	lo, hi := stats.PoissonInterval(e.Count, float64(years), confidence)
	f.EventsPerYearCI = result.Interval{lo, hi}
	lo, hi = stats.BinomialInterval(e.YearsAbove, years, confidence)
	f.AnnualProbabilityCI = result.Interval{lo, hi}
	if e.Count > 0 {
		f.MeanSpanDays, f.PeakExcessM, f.MeanExcessM = &e.MeanSpan, &e.PeakExcess, &e.MeanExcess
	}
	return f
}

// judge adds the intervals that come from resampling the years, and the change against another option.
func (p *prepared) judge(f, against *optionFigures, r *stats.Resamples) {
	confidence := p.study.Count.Confidence
	for i := range f.Bands {
		e, b := &f.passed[i], &f.Bands[i]
		b.DaysPerYearCI = interval(r.Interval(e.DaysByYear, confidence))
		b.LoadMDaysPerYearCI = interval(r.Interval(e.LoadByYear, confidence))
		if f == against {
			continue
		}
		be := &against.passed[i]
		c := &result.Change{}
		for _, m := range measures {
			d := r.Compare(m.byYear(e), m.byYear(be), confidence)
			*m.of(c) = difference(d)
			if m.name == p.study.Count.DecideBy {
				c.ToldApart = d.ToldApart(confidence)
			}
		}
		b.Change = c
	}
	if on := p.study.Count.DecideOn; on >= 0 {
		m := measureNamed(p.study.Count.DecideBy)
		value, ci := m.figure(&f.Bands[on])
		f.Decision = &result.Decision{Measure: m.name, Value: value, CI: ci, MeetsTarget: p.study.Count.Target.met(&f.Bands[on])}
	}
}

func interval(lo, hi float64, ok bool) *result.Interval {
	if !ok {
		return nil
	}
	return &result.Interval{lo, hi}
}

func difference(c stats.Change) result.Difference {
	return result.Difference{
		Difference: c.Difference, DifferenceCI: (*result.Interval)(c.DifferenceCI),
		Ratio: c.Ratio, RatioCI: (*result.Interval)(c.RatioCI),
		ShareBetter: c.ShareBetter, ShareEqual: c.ShareEqual,
		YearsBetter: c.YearsBetter, YearsEqual: c.YearsEqual, YearsWorse: c.YearsWorse,
	}
}
