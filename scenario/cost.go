package scenario

import (
	"math"

	"quietslope/scenario/result"
	"quietslope/stats"
	"quietslope/stats/money"
)

// plans are the parts of an option's cost over time.
func (s *Study) plans(o *Option) []money.Plan {
	var plans []money.Plan
	for _, c := range o.Costs {
		plan := money.Plan{
			Capital: (c.Capital + c.PerMetre*s.metres(o.drains(c.Drains))) * (1 + s.Money.Contingency),
			Life:    c.Life, PerYear: c.PerYear, PerFlush: c.PerFlush, FlushedEvery: math.Inf(1),
		}
		if c.PerFlush > 0 {
			plan.FlushedEvery = o.drains(c.Drains).decline().Every
		}
		plans = append(plans, plan)
	}
	return plans
}

// metres of drain of a measure: parallel trenches over the plan area, or bores; 0 where they are not known.
func (s *Study) metres(m *Measure) float64 {
	switch {
	case m == nil:
	case m.Trench != nil && m.Trench.Spacing > 0:
		return s.Site.PlanArea / m.Trench.Spacing
	case m.Bored != nil:
		return float64(m.Bored.Number) * m.Bored.Length
	}
	return 0
}

// metresOf is the length of all drains of an option, m; 0 where it is not known.
func (s *Study) metresOf(o *Option) float64 {
	sum := 0.0
	for i := range o.Measures {
		sum += s.metres(&o.Measures[i])
	}
	return sum
}

// cost is what an option costs by itself; nil where the study does not say. The baseline costs nothing unless it says so.
func (s *Study) cost(o *Option) *result.Cost {
	if s.Money == nil || o.Costs == nil && !o.Baseline {
		return nil
	}
	horizon := s.Money.Horizon
	c := &result.Cost{}
	renewals := 0
	for _, plan := range s.plans(o) {
		c.Capital += plan.Capital
		c.PresentValue += plan.PresentValue(s.Money.Rate, horizon)
		if plan.Capital > 0 { // else there is nothing to renew
			renewals += plan.Renewals(horizon)
		}
	}
	c.AnnualEquivalent = c.PresentValue * money.Recovery(s.Money.Rate, horizon)
	flushes, flushed := 0, false
	for i := range o.Measures {
		m := &o.Measures[i]
		if d := m.decline(); d != nil && !math.IsInf(d.Every, 1) {
			flushed = true
			flushes += money.Plan{FlushedEvery: d.Every}.Flushes(horizon)
		}
	}
	if metres := s.metresOf(o); metres > 0 {
		c.Metres = &metres
	}
	if flushed {
		c.Flushes = &flushes
	}
	if renewals > 0 {
		c.Renewals = &renewals
	}
	return c
}

// costs adds to the options of one case what they cost and what they avoid for it.
func (p *prepared) costs(options []optionFigures, r *stats.Resamples) {
	s := p.study
	for i := range options {
		f := &options[i]
		f.TimeToEffect = f.trace.works.timeToEffect()
		f.Cost = s.cost(f.trace.works.option)
	}
	base := &options[p.baseline]
	if base.Cost == nil {
		return
	}
	for i := range options {
		if options[i].Cost != nil {
			p.worth(&options[i], base, r)
		}
	}
	p.frontier(options, r)
}

// benefitFactor turns an avoided yearly loss into a present value: that of a year before the works act does not count, and
// nothing does where they never come to act.
func (p *prepared) benefitFactor(f *optionFigures) float64 {
	return money.BenefitFactor(p.study.Money.Rate, p.study.Money.Horizon, yearsOf(f.trace.works.acting()))
}

// benefit is the present value of the losses that an option avoids.
func (p *prepared) benefit(f, base *optionFigures) float64 {
	if f == base || f.losses == nil {
		return 0
	}
	return p.benefitFactor(f) * (stats.Mean(base.losses) - stats.Mean(f.losses))
}

// worth holds what an option avoids against what it costs more than the baseline. A ratio has a meaning only where it costs
// more, and where the record tells it apart from the baseline. A cost per day or event avoided, which divides by a
// difference of its own, also asks that the interval of that difference excludes zero.
//
// The break-even loss is what an event of the deciding band would have to cost for the avoided ones alone to pay for the
// works. Losses that the study gives are left out of it.
func (p *prepared) worth(f, base *optionFigures, r *stats.Resamples) {
	confidence, c := p.study.Count.Confidence, f.Cost
	more := c.PresentValue - base.Cost.PresentValue
	if f.losses != nil {
		loss := stats.Mean(f.losses)
		c.AnnualLoss, c.AnnualLossCI = &loss, interval(r.Interval(f.losses, confidence))
	}
	if f == base {
		return
	}
	factor := p.benefitFactor(f)
	if f.losses != nil {
		net := p.benefit(f, base) - more
		c.NetBenefit = &net
		if d := r.Compare(f.losses, base.losses, confidence).DifferenceCI; d != nil {
			c.NetBenefitCI = &result.Interval{-factor*d[1] - more, -factor*d[0] - more}
		}
	}
	on := p.study.Count.DecideOn
	if on < 0 {
		return
	}
	c.ToldApart = p.toldApart(f, base, r)
	if !c.ToldApart || !stats.Less(base.Cost.PresentValue, c.PresentValue) {
		return
	}
	yearly := c.AnnualEquivalent - base.Cost.AnnualEquivalent
	per := func(measure string) (avoided float64, each *float64, ci *result.Interval) {
		m := measureNamed(measure)
		d := r.Compare(m.byYear(&f.passed[on]), m.byYear(&base.passed[on]), confidence)
		if d.DifferenceCI == nil || d.DifferenceCI[1] >= 0 {
			return 0, nil, nil
		}
		one := yearly / -d.Difference
		return -d.Difference, &one, &result.Interval{yearly / -d.DifferenceCI[0], yearly / -d.DifferenceCI[1]}
	}
	_, c.PerDayAvoided, c.PerDayAvoidedCI = per("days")
	var events float64
	events, c.PerEventAvoided, c.PerEventAvoidedCI = per("events")
	if events > 0 && factor > 0 {
		loss := more / (events * factor)
		c.BreakEvenLoss = &loss
	}
	if f.losses != nil {
		ratio := p.benefit(f, base) / more
		c.BenefitCost = &ratio
	}
}

// toldApart tells whether the record shows that two options differ on the band and by the figure that decide.
func (p *prepared) toldApart(f, other *optionFigures, r *stats.Resamples) bool {
	on, m := p.study.Count.DecideOn, measureNamed(p.study.Count.DecideBy)
	confidence := p.study.Count.Confidence
	return r.Compare(m.byYear(&f.passed[on]), m.byYear(&other.passed[on]), confidence).ToldApart(confidence)
}

// frontier marks the options of known cost that no other makes pointless, and works out what each dearer one of them brings
// for what it costs more than the last one that was worth its own step.
func (p *prepared) frontier(options []optionFigures, r *stats.Resamples) {
	if p.study.Count.DecideOn < 0 {
		return
	}
	base := &options[p.baseline]
	var known []*optionFigures
	var costs, figures, benefits []float64
	for i := range options {
		if f := &options[i]; f.Cost != nil {
			known = append(known, f)
			costs, figures = append(costs, f.Cost.PresentValue), append(figures, f.Decision.Value)
			benefits = append(benefits, p.benefit(f, base))
		}
	}
	var among []int
	for i, by := range money.Frontier(costs, figures) {
		on := by < 0
		known[i].Decision.OnFrontier = &on
		if on {
			among = append(among, i)
		} else {
			known[i].Decision.DominatedBy = known[by].Name
		}
	}
	if base.losses == nil {
		return
	}
	differ := func(option, against int) bool { return p.toldApart(known[option], known[against], r) }
	for _, step := range money.Steps(costs, benefits, among, differ) {
		if step.Against >= 0 && known[step.Option] != base { // leaving things as they are is no step, whatever costs as little
			c := known[step.Option].Cost
			c.StepFrom, c.StepBenefitCost = known[step.Against].Name, step.Ratio
		}
	}
}

// lossBands are the bands as losses see them; nil where none has a loss.
func (s *Study) lossBands() []stats.LossBand {
	var bands []stats.LossBand
	any := false
	for _, b := range s.Bands {
		bands = append(bands, stats.LossBand{Level: b.Level, PerEvent: b.LossPerEvent, PerDay: b.LossPerDay})
		any = any || b.LossPerEvent > 0 || b.LossPerDay > 0
	}
	if !any {
		return nil
	}
	return bands
}
