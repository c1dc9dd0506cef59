package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"runtime/debug"
	"sync"
	"time"

	"quietslope/cascade"
	"quietslope/scenario/fault"
	"quietslope/scenario/weather"
)

// maxWarmUp bounds what auto may ask for, y. Stores that need longer hardly react within any record.
const maxWarmUp = 1000

// warmUp is what is replayed before the record: whole years from its first step, from the beginning again where the
// record is shorter.
type warmUp struct {
	years   int
	repeats bool  // the record holds fewer whole years
	passes  []int // the record's steps 0..passes[k]-1 are replayed, for each k in turn
}

// newWarmUp finds the warm-up of a study: as given, or for auto the least whole number of years that is at least 3 and
// at least five times the longest time constant of either store over all options and conditions.
func newWarmUp(s *Study, r *weather.Record, all []*works) (warmUp, error) {
	years := s.Ground.WarmUpYears
	if years < 0 {
		slowest, of := math.Inf(1), ""
		for _, w := range all {
			if rate := w.minZeroInvertRate(); rate < slowest {
				slowest, of = rate, w.option.Name
			}
		}
		need := math.Ceil(max(3, 5/slowest/365.25))
		if !(need <= maxWarmUp) {
			return warmUp{}, s.Fault(s.PlaceOf("ground.warm_up"), "auto asks for more than %d years, since a store of the option %s empties at only %s /d; give ground.start levels, or ground.warm_up in years",
				maxWarmUp, quoted(of), short(slowest))
		}
		years = int(need)
	}
	w := warmUp{years: years}
	ends := wholeYears(r)
	if years > 0 && len(ends) == 0 {
		return warmUp{}, &fault.Error{File: r.Name, Text: fmt.Sprintf(
			"is shorter than the 12 months that a warm-up replays: it runs from %s to %s; give a longer record, or start levels and no warm-up", r.ISO(0), r.ISO(len(r.Rain)-1))}
	}
	w.repeats = years > len(ends)
	for left := years; left > 0; left -= min(left, len(ends)) {
		w.passes = append(w.passes, ends[min(left, len(ends))-1])
	}
	return w, nil
}

// trace is the replay of one option over the record.
type trace struct {
	works    *works
	recharge []float64 // net input of the cover, mm per step
	cover    []float64 // end-of-step level, m above the contact; storage in mm while it is replayed
	deep     []float64 // end-of-step level, m above the base of the deep layer; the same
	actualET float64   // over the counted years, mm; 0 without a soil
	start    StartLevels
	coverMax float64 // highest levels over the record, m
	deepMax  float64
	fromDry  float64 // |difference| of the deep level at the first counted step when the replay starts dry, m

	whole, counted cascade.Totals // over the record after the warm-up, and over the counted years
}

// replayer replays options on one record.
type replayer struct {
	study  *Study
	record *weather.Record
	warm   warmUp

	mu    sync.Mutex
	spare [][]float64 // series of the record's length that nobody needs any more
}

// series returns a series of the record's length that may hold anything. One that was dropped serves again: fresh memory
// for every option of a long record would cost more time than the replay.
func (p *replayer) series() []float64 {
	p.mu.Lock()
	defer p.mu.Unlock()
	if last := len(p.spare) - 1; last >= 0 {
		s := p.spare[last]
		p.spare = p.spare[:last]
		return s
	}
	return make([]float64, len(p.record.Rain))
}

// drop gives up series, which another option may then use.
func (p *replayer) drop(series ...[]float64) {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.spare = append(p.spare, series...)
}

// begin works out the water that reaches one option's cover over the record, and replays the warm-up up to its first
// step: once from the start of the study, and once from dry. counted is the stretch over which actual evapotranspiration
// is added up.
func (p *replayer) begin(ctx context.Context, w *works, counted period) (t *trace, run, dry *cascade.Run, err error) {
	if err := w.model.Check(); err != nil {
		return nil, nil, nil, p.study.Fault(w.option.Place, "the two stores of this option cannot be replayed: %v", err)
	}
	t = &trace{works: w, recharge: p.series(), cover: p.series(), deep: p.series()}

	// The water supply does not depend on the stores, so the record's comes first: the steady start needs its mean.
	early := newSupply(&w.ground, w.uptake, p.record)
	scratch := make([]float64, p.longestPass())
	for _, end := range p.warm.passes {
		early.fill(scratch[:end], 0)
	}
	early.fill(t.recharge[:counted.from], 0)
	early.actual = 0
	early.fill(t.recharge[counted.from:counted.to], counted.from)
	t.actualET = early.actual
	early.fill(t.recharge[counted.to:], counted.to)

	cover, deep, err := p.startStorages(w, t.recharge)
	if err != nil {
		return nil, nil, nil, err
	}
	g := &w.ground
	t.start = StartLevels{Cover: cover / storage(1, g.CoverPorosity), Deep: deep / storage(1, g.DeepPorosity)}
	if run, err = cascade.NewRun(w.model, cover, deep); err == nil {
		dry, err = cascade.NewRun(w.model, 0, 0)
	}
	if err == nil {
		err = p.warmUp(ctx, w, scratch, run, dry)
	}
	if err != nil {
		return nil, nil, nil, p.failed(w, err)
	}
	return t, run, dry, nil
}

// failed says which option could not be replayed. That its water outgrows what can be computed with is a fault of the study;
// anything else is one of the program.
func (p *replayer) failed(w *works, err error) error {
	if errors.Is(err, cascade.ErrStorage) {
		return p.study.Fault(w.option.Place, "far more water comes in than leaves: %v; check the rates and lateral_inflow and their units, or give ground.cover.full_at and ground.deep.full_at as levels, over which a full store can run", err)
	}
	return fmt.Errorf("option %q: %w", w.option.Name, err)
}

// warmUp replays the warm-up. The water of a pass is worked out in depths, which hold the longest.
func (p *replayer) warmUp(ctx context.Context, w *works, depths []float64, runs ...*cascade.Run) error {
	supply := newSupply(&w.ground, w.uptake, p.record)
	for _, end := range p.warm.passes {
		if err := ctx.Err(); err != nil {
			return err
		}
		supply.fill(depths[:end], 0)
		for _, run := range runs {
			if err := p.advance(run, 0, end, depths, nil, nil); err != nil {
				return err
			}
		}
	}
	return nil
}

// advance replays the record's steps from..end-1, those of one length at a time. The series are of the whole record;
// cover and deep, into which the storages go, may be nil.
func (p *replayer) advance(run *cascade.Run, from, end int, depths, cover, deep []float64) error {
	for from < end {
		days, to := p.record.Stretch(from, end)
		part := func(series []float64) []float64 {
			if series == nil {
				return nil
			}
			return series[from:to]
		}
		if err := run.Replay(depths[from:to], days, part(cover), part(deep)); err != nil {
			return fmt.Errorf("from %s on: %w", p.record.ISO(from), err)
		}
		from = to
	}
	return nil
}

// lowestMonth is the calendar month in which the deep level of an option is lowest. The function of that name finds it from
// storages, which have the order of the levels. Which month counts first changes nothing in the levels, so it can be
// asked before anything is counted.
func (p *replayer) lowestMonth(ctx context.Context, w *works) (time.Month, error) {
	t, run, _, err := p.begin(ctx, w, period{})
	if err != nil {
		return 0, err
	}
	if err := p.advance(run, 0, len(t.recharge), t.recharge, nil, t.deep); err != nil {
		return 0, p.failed(w, err)
	}
	month := lowestMonth(p.record, t.deep)
	p.drop(t.recharge, t.cover, t.deep)
	return month, nil
}

// replay runs one option through the warm-up and the record.
func (p *replayer) replay(ctx context.Context, w *works, counted period) (*trace, error) {
	t, run, dry, err := p.begin(ctx, w, counted)
	if err != nil {
		return nil, err
	}
	n := len(t.recharge)
	origin := run.Totals()
	var from, to cascade.Totals
	parts := []struct {
		lo, hi int
		end    *cascade.Totals
	}{{0, counted.from, &from}, {counted.from, counted.to, &to}, {counted.to, n, &t.whole}}
	for _, part := range parts {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		if err := p.advance(run, part.lo, part.hi, t.recharge, t.cover, t.deep); err != nil {
			return nil, p.failed(w, err)
		}
		*part.end = run.Totals()
	}
	t.whole = t.whole.Sub(origin)
	t.counted = to.Sub(from)
	coverMax, deepMax := largest(t.cover), largest(t.deep)
	if err := t.checkBalance(&origin, coverMax, deepMax); err != nil {
		return nil, err
	}

	first := min(counted.from+1, n)
	if err := p.advance(dry, 0, first, t.recharge, nil, nil); err != nil {
		return nil, p.failed(w, err)
	}
	_, fromDry := dry.Storage()
	t.fromDry = math.Abs(t.deep[first-1]-fromDry) / storage(1, w.ground.DeepPorosity)

	metreOfCover, metreOfDeep := storage(1, w.ground.CoverPorosity), storage(1, w.ground.DeepPorosity)
	toLevels(t.cover, metreOfCover)
	toLevels(t.deep, metreOfDeep)
	t.coverMax, t.deepMax = coverMax/metreOfCover, deepMax/metreOfDeep
	return t, nil
}

// toLevels turns storages in mm into levels in m, of which each holds so many mm.
func toLevels(storages []float64, perMetre float64) {
	for i, s := range storages {
		storages[i] = s / perMetre
	}
}

func (p *replayer) longestPass() int {
	longest := 0
	for _, end := range p.warm.passes {
		longest = max(longest, end)
	}
	return longest
}

// startStorages is where the warm-up begins: the given levels, or the steady state under the option's own mean recharge
// over the whole years of the record from its first step. (The counted years would be circular: the month in which they
// start is read off a replay.)
func (p *replayer) startStorages(w *works, recharge []float64) (cover, deep float64, err error) {
	g := &w.ground
	if s := p.study.Ground.Start; s != nil {
		return storage(s.Cover, g.CoverPorosity), storage(s.Deep, g.DeepPorosity), nil
	}
	ends := wholeYears(p.record)
	n := len(recharge)
	if len(ends) > 0 {
		n = ends[len(ends)-1]
	}
	cover, deep, err = w.model.Steady(total(recharge[:n]) / p.record.Span(0, n))
	if err != nil {
		return 0, 0, p.study.Fault(w.option.Place, "%v; give ground.start levels, or a level at which the store is full", err)
	}
	return cover, deep, nil
}

// balanceTolerance is the largest water-balance error of a store, as a share of all that entered it and its largest
// storage, or of 1 mm where both are less.
const balanceTolerance = 1e-9

// checkBalance refuses a replay whose water does not add up: the fault would be ours. The largest storages are in mm. What
// passed in the warm-up counts as entered, since the sums have run through it.
func (t *trace) checkBalance(warmUp *cascade.Totals, coverMax, deepMax float64) error {
	in := math.Abs(warmUp.Cover.In) + warmUp.Cover.Unmet
	for _, depth := range t.recharge {
		in += math.Abs(depth)
	}
	for _, store := range []struct {
		name    string
		err, in float64
		largest float64
	}{
		{"cover", t.whole.Cover.Error(), in, coverMax},
		{"deep", t.whole.Deep.Error(), warmUp.Deep.In + warmUp.Deep.Lateral + t.whole.Deep.In + t.whole.Deep.Lateral, deepMax},
	} {
		if !(math.Abs(store.err) <= balanceTolerance*max(1, store.in+store.largest)) {
			return fmt.Errorf("option %q: the water balance of the %s store is off by %g mm; this is a fault of the program, please report it",
				t.works.option.Name, store.name, store.err)
		}
	}
	return nil
}

// total is a sum of a long series. Blocks of it are added up plainly and their sums with compensation (Kahan 1965, Commun.
// ACM 8:40), so that decades of hours do not drift.
func total(xs []float64) float64 {
	const block = 64
	sum, lost := 0.0, 0.0
	for len(xs) > 0 {
		n := min(block, len(xs))
		part := 0.0
		for _, x := range xs[:n] {
			part += x
		}
		y := part - lost
		t := sum + y
		lost = (t - sum) - y
		sum = t
		xs = xs[n:]
	}
	return sum
}

func largest(xs []float64) float64 {
	m := math.Inf(-1)
	for _, x := range xs {
		if x > m {
			m = x
		}
	}
	return m
}

// Panic is a panic of the program's own, on its way to whoever reports it.
type Panic struct {
	Value any
	Stack []byte
}

func (p *Panic) Error() string { return fmt.Sprint(p.Value) }

// each calls f for 0..n-1 on all processors and returns the error of the lowest index, so that neither results nor errors
// depend on how many processors there are.
func each(n int, f func(i int) error) error {
	errs := make([]error, n)
	var wg sync.WaitGroup
	free := make(chan struct{}, runtime.GOMAXPROCS(0))
	for i := range n {
		free <- struct{}{}
		wg.Go(func() {
			defer func() {
				if v := recover(); v != nil { // a panic here would end the program, past every deferred call of main
					errs[i] = &Panic{Value: v, Stack: debug.Stack()}
				}
				<-free
			}()
			errs[i] = f(i)
		})
	}
	wg.Wait()
	for _, err := range errs {
		if err != nil {
			return err
		}
	}
	return nil
}
