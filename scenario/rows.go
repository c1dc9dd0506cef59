package scenario

import (
	"context"
	"errors"
	"fmt"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// rowFigures replays what an option's figures are the mean of and takes that mean. asNew is the option with its drains as
// new.
func (p *prepared) rowFigures(ctx context.Context, asNew *works, row []weighted) (optionFigures, error) {
	var parts []optionFigures
	var weights []float64
	for _, w := range row {
		f, err := p.replayed(ctx, w.works)
		if err != nil {
			return optionFigures{}, err
		}
		parts, weights = append(parts, f), append(weights, w.weight)
	}
	f := p.mean(asNew, parts, weights)
	if o := asNew.option; o.drained() {
		f.DrainsAs, _ = p.study.ownStates(o)
	}
	return f, nil
}

// peaks gives the drains of an option the peak flows that they have as new, where those are larger than at any of the ages that
// its figures are a mean over: outlets are sized by them.
func (p *prepared) peaks(ctx context.Context, f *optionFigures, asNew *works) error {
	if f.DrainsAs == "" || f.DrainsAs == stateNew {
		return nil
	}
	fresh, err := p.replayed(ctx, asNew)
	if err != nil {
		return err
	}
	for i := range f.Drains {
		d := &fresh.Drains[i]
		if d.PeakMMPerDay > f.Drains[i].PeakMMPerDay {
			f.Drains[i].PeakMMPerDay, f.Drains[i].PeakLPerS = d.PeakMMPerDay, d.PeakLPerS
		}
	}
	f.fresh = &fresh
	return nil
}

// mean is the weighted mean of the figures of several replays of an option, which is not what a replay with mean drains
// would give. The rates and drains are those of the drains as new in this condition. All else is a mean, but for extremes: the
// highest level, the longest event, the highest excess and the peak flow of a drain are the largest of the replays. Warnings
// see the furthest of them. Single events belong to one replay each, so there is no list of them.
func (p *prepared) mean(asNew *works, parts []optionFigures, weights []float64) optionFigures {
	if len(parts) == 1 {
		return parts[0]
	}
	of := func(figure func(*optionFigures) float64) float64 {
		var figures [][]float64
		for i := range parts {
			figures = append(figures, []float64{figure(&parts[i])})
		}
		return stats.AverageSeries(figures, weights)[0]
	}
	f := parts[0]
	f.Drains = nil
	for i := range parts[0].Drains {
		d := meanDrain(i, parts, weights, of)
		d.RatePerDay = asNew.drains[i].rate
		f.Drains = append(f.Drains, d)
	}
	f.Level = result.Level{
		MeanM: of(func(f *optionFigures) float64 { return f.Level.MeanM }),
		Q50M:  of(func(f *optionFigures) float64 { return f.Level.Q50M }),
		Q95M:  of(func(f *optionFigures) float64 { return f.Level.Q95M }),
		Q99M:  of(func(f *optionFigures) float64 { return f.Level.Q99M }),
	}
	f.WaterBalance = meanBalance(of)
	f.trace.works = asNew
	for _, part := range parts {
		f.Level.MaxM = max(f.Level.MaxM, part.Level.MaxM)
		f.trace.fromDry = max(f.trace.fromDry, part.trace.fromDry)
		f.trace.coverMax = max(f.trace.coverMax, part.trace.coverMax)
		f.trace.deepMax = max(f.trace.deepMax, part.trace.deepMax)
		f.trace.refusedShare = max(f.trace.refusedShare, part.trace.refusedShare)
	}
	f.passed, f.Bands = nil, nil
	for i := range p.study.Bands {
		var passed []stats.Exceedance
		for _, part := range parts {
			passed = append(passed, part.passed[i])
		}
		e := stats.Average(passed, weights)
		f.passed = append(f.passed, e)
		f.Bands = append(f.Bands, p.bandFigure(&p.study.Bands[i], &e))
	}
	if parts[0].losses != nil {
		var losses [][]float64
		for _, part := range parts {
			losses = append(losses, part.losses)
		}
		f.losses = stats.AverageSeries(losses, weights)
	}
	return f
}

// meanDrain is the mean of what drain i of an option did in several replays, but for its rate; of gives the mean of a figure.
// The mean head is over the steps on which the drain runs, at whatever age.
func meanDrain(i int, parts []optionFigures, weights []float64, of func(func(*optionFigures) float64) float64) result.Drain {
	d := parts[0].Drains[i]
	d.RunningShare = of(func(f *optionFigures) float64 { return f.Drains[i].RunningShare })
	d.MeanHeadM, d.CeilingDaysPerYear = nil, nil
	var head, heads, full float64
	for k, part := range parts {
		if h := part.Drains[i].MeanHeadM; h != nil { // the drain runs at this age
			head, heads = head+weights[k]*part.Drains[i].RunningShare**h, heads+weights[k]*part.Drains[i].RunningShare
		}
		if days := part.Drains[i].CeilingDaysPerYear; days != nil {
			full += weights[k] * *days
			d.CeilingDaysPerYear = &full
		}
	}
	if heads > 0 {
		head /= heads
		d.MeanHeadM = &head
	}
	d.MeanMMPerDay = of(func(f *optionFigures) float64 { return f.Drains[i].MeanMMPerDay })
	for _, part := range parts {
		if other := part.Drains[i]; other.PeakMMPerDay > d.PeakMMPerDay {
			d.PeakMMPerDay, d.PeakLPerS = other.PeakMMPerDay, other.PeakLPerS
		}
	}
	return d
}

// meanBalance is the mean of the water balances of several replays; of gives the mean of a figure.
func meanBalance(of func(func(*optionFigures) float64) float64) result.Balance {
	cover := func(figure func(*result.CoverBalance) float64) float64 {
		return of(func(f *optionFigures) float64 { return figure(&f.WaterBalance.Cover) })
	}
	deep := func(figure func(*result.DeepBalance) float64) float64 {
		return of(func(f *optionFigures) float64 { return figure(&f.WaterBalance.Deep) })
	}
	return result.Balance{
		Cover: result.CoverBalance{
			InMM:            cover(func(b *result.CoverBalance) float64 { return b.InMM }),
			SeepageMM:       cover(func(b *result.CoverBalance) float64 { return b.SeepageMM }),
			PercolationMM:   cover(func(b *result.CoverBalance) float64 { return b.PercolationMM }),
			DrainsMM:        cover(func(b *result.CoverBalance) float64 { return b.DrainsMM }),
			OverflowMM:      cover(func(b *result.CoverBalance) float64 { return b.OverflowMM }),
			UnmetMM:         cover(func(b *result.CoverBalance) float64 { return b.UnmetMM }),
			StorageChangeMM: cover(func(b *result.CoverBalance) float64 { return b.StorageChangeMM }),
			ErrorMM:         cover(func(b *result.CoverBalance) float64 { return b.ErrorMM }),
		},
		Deep: result.DeepBalance{
			InMM:            deep(func(b *result.DeepBalance) float64 { return b.InMM }),
			LateralMM:       deep(func(b *result.DeepBalance) float64 { return b.LateralMM }),
			SeepageMM:       deep(func(b *result.DeepBalance) float64 { return b.SeepageMM }),
			DrainsMM:        deep(func(b *result.DeepBalance) float64 { return b.DrainsMM }),
			RefusedMM:       deep(func(b *result.DeepBalance) float64 { return b.RefusedMM }),
			StorageChangeMM: deep(func(b *result.DeepBalance) float64 { return b.StorageChangeMM }),
			ErrorMM:         deep(func(b *result.DeepBalance) float64 { return b.ErrorMM }),
		},
	}
}

// states replays every drained option of the first case, which is in a condition, with its drains in every further state, and
// shows the deciding figure in each.
func (p *prepared) states(ctx context.Context, options []optionFigures, c *Condition, r *stats.Resamples) error {
	on := p.study.Count.DecideOn
	if on < 0 {
		return nil
	}
	type job struct {
		option int
		works  *works
	}
	var jobs []job
	for i := range options {
		for _, in := range p.study.furtherStates(&p.study.Options[i]) {
			w := p.works[i]
			if in.name != stateNew {
				w = newWorks(p.study, w.option, c, in)
			}
			jobs = append(jobs, job{i, w})
		}
	}
	found := make([]result.State, len(jobs))
	err := each(len(jobs), func(k int) error {
		w := jobs[k].works
		var f optionFigures
		if fresh := options[jobs[k].option].fresh; fresh != nil && w.state.name == stateNew {
			f = *fresh
		} else {
			var err error
			if f, err = p.replayed(ctx, w); err != nil {
				return p.inState(err, w)
			}
		}
		p.judge(&f, &f, r)
		found[k] = stateOf(&f, w.state.name, w.effectShare())
		return nil
	})
	if err != nil {
		return err
	}
	for i := range options {
		f := &options[i]
		var further []result.State
		for k, j := range jobs {
			if j.option == i {
				further = append(further, found[k])
			}
		}
		if further == nil {
			continue
		}
		own := stateOf(f, f.DrainsAs, p.meanShare(p.cases[0].rows[i]))
		if f.DrainsAs == stateNew {
			f.States = append([]result.State{own}, further...)
		} else {
			f.States = append([]result.State{further[0], own}, further[1:]...)
		}
	}
	return nil
}

// inState says of a fault that it comes from a state of the drains that the study does not name.
func (p *prepared) inState(err error, w *works) error {
	var fe *fault.Error
	if !errors.As(err, &fe) {
		return err
	}
	text := fe.Text
	if wrong := w.model.Check(); wrong != nil {
		text = fmt.Sprintf("%v; give ground.cover.full_at and ground.deep.full_at as levels, over which a full store can run", wrong)
	}
	return p.study.Fault(w.option.Place, "the results show this option %s too, and then %s", stateWords[w.state.name], text)
}

func stateOf(f *optionFigures, name string, share float64) result.State {
	return result.State{State: name, EffectShare: share, Value: f.Decision.Value, CI: f.Decision.CI, MeetsTarget: f.Decision.MeetsTarget}
}

// effectShare is the share of what an option's drains do as new that is left, the mean of all its drains.
func (w *works) effectShare() float64 {
	var shares []float64
	for _, d := range w.drains {
		shares = append(shares, d.share)
	}
	for _, m := range w.option.Measures {
		if m.CutOff != nil {
			shares = append(shares, w.state.left(nil))
		}
	}
	return stats.Mean(shares)
}

// meanShare is the mean of the shares over the ages of a row.
func (p *prepared) meanShare(row []weighted) float64 {
	share := 0.0
	for _, part := range row {
		share += part.weight * part.works.effectShare()
	}
	return share
}
