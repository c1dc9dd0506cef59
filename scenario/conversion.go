package scenario

import (
	"context"
	"math"

	"quietslope/cascade/scheme"
	"quietslope/scenario/result"
)

// conversion holds the ground of the study as its scheme replays it against the exact stores that it was converted to.
// It returns nil where the rates are those of exact stores.
func (p *prepared) conversion(ctx context.Context) (*result.Conversion, error) {
	given := &p.study.Ground
	if given.Scheme == scheme.Exact {
		return nil, nil
	}
	exact := *given
	exact.toExact()
	c := &result.Conversion{
		Scheme: given.Scheme.String(), StepDays: given.SchemeStep,
		Cover: result.StoreConversion{
			GivenPerDay: given.CoverSeepage + given.Percolation, ExactPerDay: exact.CoverSeepage + exact.Percolation,
			GivenPorosity: given.CoverPorosity, Porosity: exact.CoverPorosity,
		},
		Deep: result.StoreConversion{
			GivenPerDay: given.DeepSeepage, ExactPerDay: exact.DeepSeepage,
			GivenPorosity: given.DeepPorosity, Porosity: exact.DeepPorosity,
		},
	}
	n := len(p.record.Rain)
	if days, to := p.record.Stretch(0, n); to < n || math.Abs(days-given.SchemeStep) > 1e-9*days {
		return c, nil
	}
	d, err := p.schemeDifference(ctx)
	if err != nil {
		return nil, err
	}
	c.LargestDifference = d
	return c, nil
}

// schemeDifference replays the ground without measures by the scheme and by the exact stores, from the same levels and
// through the same warm-up, and finds the largest differences of the levels over the record.
func (p *prepared) schemeDifference(ctx context.Context) (*result.LevelDifference, error) {
	g := &p.study.Ground
	w := newWorks(p.study, &Option{Name: "the ground without measures", Place: p.study.PlaceOf("ground.rates_from")}, &asBuilt, asNew)
	t, run, _, err := p.replayer.begin(ctx, w, period{})
	if err != nil {
		return nil, err
	}
	n := len(t.recharge)
	if err := p.replayer.advance(run, 0, n, t.recharge, t.cover, t.deep); err != nil {
		return nil, err
	}
	toLevels(t.cover, storage(1, w.ground.CoverPorosity))
	toLevels(t.deep, storage(1, w.ground.DeepPorosity))

	pair := scheme.Pair{
		CoverRate: g.CoverSeepage + g.Percolation, Percolation: g.Percolation, DeepRate: g.DeepSeepage,
		CoverCapacity: storage(g.CoverFullAt, g.CoverPorosity), DeepCapacity: storage(g.DeepFullAt, g.DeepPorosity),
		Lateral: g.Lateral,
	}
	cover, deep := storage(t.start.Cover, g.CoverPorosity), storage(t.start.Deep, g.DeepPorosity)
	supply := newSupply(&w.ground, w.uptake, p.record)
	depths := p.replayer.series()
	for _, end := range p.replayer.warm.passes {
		supply.fill(depths[:end], 0)
		if cover, deep, err = g.Scheme.Replay(pair, cover, deep, depths[:end], g.SchemeStep, nil, nil); err != nil {
			return nil, err
		}
	}
	covers, deeps := depths, p.replayer.series()
	if _, _, err = g.Scheme.Replay(pair, cover, deep, t.recharge, g.SchemeStep, covers, deeps); err != nil {
		return nil, err
	}
	toLevels(covers, storage(1, g.CoverPorosity))
	toLevels(deeps, storage(1, g.DeepPorosity))
	d := &result.LevelDifference{}
	d.CoverM, d.CoverAt = p.furthest(covers, t.cover)
	d.DeepM, d.DeepAt = p.furthest(deeps, t.deep)
	p.replayer.drop(t.recharge, t.cover, t.deep, covers, deeps)
	return d, nil
}

// furthest is the largest difference of two series of levels, and the time of the step in which it first stands. What is
// left by rounding is none.
func (p *prepared) furthest(a, b []float64) (most float64, at string) {
	for i := range a {
		if d := math.Abs(a[i] - b[i]); d > max(most, tie) {
			most, at = d, p.record.ISO(i)
		}
	}
	return most, at
}
