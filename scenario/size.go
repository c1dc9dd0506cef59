package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// SizeQuery says which number of which option is looked for.
type SizeQuery struct {
	Option    string // its name, or that of a list over the same number
	Vary      string // the key in the option, such as trench_drains.spacing
	Between   string // the range, such as "4 m .. 40 m"
	Condition string // of the works; "" for as built
	Drains    string // state of the drains, such as before_flush; "" for that which the option's own figures are for
}

const (
	scanned     = 25    // values at which the range is looked at, evenly or by equal ratios
	ratioRange  = 3     // times by which the ends of a range differ from which on it is parted by equal ratios
	sized       = 0.005 // share of the value to which the answer is worked out
	sizedOfNone = 1e-9  // share of a range from zero below which a value counts as no smaller: what comes close to zero
	scanDigits  = 2     // least significant digits of the values of the scan
	sizeDigits  = 4     // most of any value that is tried, in the unit of the range: a person can write it, and it was replayed
)

// sizing is a number of an option that is looked for.
type sizing struct {
	study     *Study
	prepared  *prepared
	option    int
	condition Condition
	drains    *state // nil for that which the option's own figures are for
	key       string
	shape     *shape
	unit      string  // that the range is written in; "" for bare numbers
	base      float64 // one unit in the base unit
	lo, hi    float64 // in the base unit, as all values
	resamples *stats.Resamples
	measure   *measure
}

// Size scans a number of one option over a range and finds the value nearest to the unsafe end with which the study's target
// is still met, and from which on all safer values of the scan meet it too. More drainage can raise the number of events, so
// that a figure need not fall all the way: a value beyond the first miss that meets the target again is named, not chosen.
// Years are counted as for the study as it is written, and a warm-up that is left to the tool is long enough for both ends
// of the range. Errors are as for Compare.
func Size(ctx context.Context, s *Study, q SizeQuery) (*result.Size, error) {
	z, err := newSizing(s, q)
	if err != nil {
		return nil, err
	}
	if err := z.prepare(ctx); err != nil {
		return nil, err
	}
	values := z.grid()
	curve := make([]result.SizePoint, len(values))
	err = each(len(values), func(i int) (err error) {
		curve[i], err = z.at(ctx, values[i])
		return err
	})
	if err != nil {
		return nil, err
	}
	p := z.prepared
	found := &result.Size{
		Declared: map[string]string(s.Declared), Defaults: s.defaults(),
		Head: p.head("size"), Settings: p.settings(), Record: p.recordFound(),
		Option: z.called(), Condition: z.condition.Name, Vary: z.key, Unit: z.baseUnit(), Safer: "lower",
		DecideOn: s.Bands[s.Count.DecideOn].Name, Measure: z.measure.name, Curve: curve,
	}
	if saferAbove[z.key] {
		found.Safer = "higher"
	}
	if t := s.Count.Target; t != nil {
		found.Target = &result.Target{Measure: t.Measure, Value: t.Most}
		if err := z.search(ctx, found); err != nil {
			return nil, err
		}
	}
	found.Reason = z.reason(found)
	z.steps(found.Curve)
	return found, z.describe(ctx, found)
}

// newSizing finds the option and the key, and reads the range.
func newSizing(s *Study, q SizeQuery) (*sizing, error) {
	z := &sizing{study: s, key: q.Vary}
	if s.Count.DecideOn < 0 {
		return nil, s.Fault(s.PlaceOf("count.decide_on"), "several bands are given, so say which of them the option is sized on: give decide_on")
	}
	z.measure = measureNamed(s.Count.DecideBy)
	if t := s.Count.Target; t != nil {
		z.measure = measureNamed(t.Measure)
	}
	var err error
	if z.condition, err = s.conditionNamed(q.Condition); err != nil {
		return nil, err
	}
	if z.option, err = s.optionToVary(q.Option, q.Vary); err != nil {
		return nil, err
	}
	if z.shape, err = s.numberOf(z.option, q.Vary); err != nil {
		return nil, err
	}
	if z.drains, err = s.stateToSize(&s.Options[z.option], q.Drains); err != nil {
		return nil, err
	}
	if err := z.between(q.Between); err != nil {
		return nil, err
	}
	for _, end := range []float64{z.lo, z.hi} {
		if _, err := z.with(end); err != nil {
			return nil, err
		}
	}
	return z, nil
}

// stateToSize is the state of an option's drains with a name, nil for none. With all drains stopped there is nothing to size.
func (s *Study) stateToSize(o *Option, name string) (*state, error) {
	if name == "" {
		return nil, nil
	}
	known := []string{}
	for _, in := range append([]state{asNew}, s.furtherStates(o)...) {
		if in.name == name && name != stateStopped {
			return &in, nil
		}
		if in.name != stateStopped && !slices.Contains(known, in.name) {
			known = append(known, in.name)
		}
	}
	switch {
	case !o.drained():
		return nil, &fault.Error{Key: "--drains", Text: fmt.Sprintf("%s has no drains; leave --drains out", quoted(o.Name))}
	case name == stateStopped:
		return nil, &fault.Error{Key: "--drains", Text: "with all drains stopped there is nothing to size; use " + fault.Words(known, "or")}
	}
	return nil, &fault.Error{Key: "--drains", Text: fmt.Sprintf("the drains of %s have no state %s; use %s", quoted(o.Name), quoted(name), fault.Words(known, "or"))}
}

// prepare settles what all values share.
func (z *sizing) prepare(ctx context.Context) (err error) {
	var ends []*works
	for _, end := range []float64{z.lo, z.hi} {
		s, err := z.with(end)
		if err != nil {
			return err
		}
		w := newWorks(s, &s.Options[0], &z.condition, asNew)
		if err := z.check(w, s, end); err != nil {
			return err
		}
		ends = append(ends, w)
	}
	if z.prepared, err = prepare(ctx, z.study, ends...); err != nil {
		return err
	}
	c := &z.study.Count
	z.resamples = stats.NewResamples(z.prepared.counted.years, c.Resamples, c.MeanBlock, c.Seed)
	return nil
}

// check refuses a value with which the works cannot be replayed.
func (z *sizing) check(w *works, s *Study, value float64) error {
	var found *fault.Error
	if err := w.check(s); errors.As(err, &found) {
		return z.refused(value, found.Text)
	}
	return nil
}

// grid are the values of the scan, by equal ratios where the range is wide, and else evenly, with as few digits as keep them
// apart. A range that is narrower than its values can be written has fewer of them.
func (z *sizing) grid() []float64 {
	var values []float64
	for digits := scanDigits; digits <= sizeDigits && len(values) < scanned; digits++ {
		values = []float64{z.lo}
		for i := 1; i < scanned-1; i++ {
			part := float64(i) / (scanned - 1)
			v := z.lo + part*(z.hi-z.lo)
			if z.byRatio() {
				v = z.lo * math.Pow(z.hi/z.lo, part)
			}
			if v = z.round(v, digits); v > values[len(values)-1] && v < z.hi {
				values = append(values, v)
			}
		}
		values = append(values, z.hi)
	}
	return values
}

// byRatio tells whether the range is wide enough to be parted by equal ratios.
func (z *sizing) byRatio() bool { return z.lo > 0 && z.hi/z.lo >= ratioRange }

// at is the point of the curve at a value.
func (z *sizing) at(ctx context.Context, value float64) (result.SizePoint, error) {
	p, f, err := z.replay(ctx, value)
	if err != nil {
		return result.SizePoint{}, err
	}
	s, o := p.study, &p.study.Options[0]
	d := f[0].Decision
	point := result.SizePoint{Value: value, Text: z.text(value), Figure: d.Value, CI: d.CI, Meets: d.MeetsTarget}
	if c := s.cost(o); c != nil {
		point.PresentValue = &c.PresentValue
	}
	if m := s.metresOf(o); m > 0 {
		point.Metres = &m
	}
	return point, nil
}

// replay replays the option with a value, as the only option of a study.
func (z *sizing) replay(ctx context.Context, value float64) (*prepared, []optionFigures, error) {
	s, err := z.with(value)
	if err != nil {
		return nil, nil, err
	}
	w := newWorks(s, &s.Options[0], &z.condition, asNew)
	if err := z.check(w, s, value); err != nil {
		return nil, nil, err
	}
	p := *z.prepared
	p.study, p.baseline, p.works = s, 0, []*works{w}
	row := s.row(w, &z.condition)
	if z.drains != nil {
		row = []weighted{{newWorks(s, &s.Options[0], &z.condition, *z.drains), 1}}
	}
	p.cases = []caseWorks{{condition: z.condition.Name, works: p.works, rows: [][]weighted{row}}}
	f, err := p.rowFigures(ctx, w, p.cases[0].rows[0])
	if err != nil {
		var found *fault.Error
		if errors.As(err, &found) {
			err = z.refused(value, found.Text)
		}
		return nil, nil, err
	}
	if z.drains != nil {
		f.DrainsAs = z.drains.name
	}
	all := []optionFigures{f}
	p.judge(&all[0], &all[0], z.resamples)
	return &p, all, nil
}

// search finds the answer on the curve: once by the figures, and once by the ends of their ranges.
func (z *sizing) search(ctx context.Context, found *result.Size) error {
	fromSafe := z.fromSafe(found.Curve)
	var err error
	if found.Answer, found.Beyond, err = z.last(ctx, fromSafe, func(p *result.SizePoint) bool { return p.Meets != "no" }); err != nil {
		return err
	}
	if found.Shown, _, err = z.last(ctx, fromSafe, func(p *result.SizePoint) bool { return p.Meets == "yes" }); err != nil {
		return err
	}
	for _, run := range meetsAgain(fromSafe) {
		for _, p := range run {
			found.MeetsAgain = append(found.MeetsAgain, p.Text)
		}
	}
	return nil
}

// meetsAgain are the runs of points beyond the first miss that meet the target.
func meetsAgain(fromSafe []result.SizePoint) (runs [][]result.SizePoint) {
	missed, open := false, false
	for i, p := range fromSafe {
		switch {
		case p.Meets == "no":
			missed, open = true, false
		case missed && open:
			last := &runs[len(runs)-1]
			*last = append(*last, p)
		case missed:
			runs, open = append(runs, fromSafe[i:i+1:i+1]), true
		}
	}
	return runs
}

// fromSafe is the curve in the order from the safe end of the range to the other.
func (z *sizing) fromSafe(curve []result.SizePoint) []result.SizePoint {
	curve = slices.Clone(curve)
	if saferAbove[z.key] {
		slices.Reverse(curve)
	}
	return curve
}

// last is the last point from the safe end before the first that is not good, brought as close to that as the answer is worked
// out, and the nearest one that is not; nil where there is none.
func (z *sizing) last(ctx context.Context, fromSafe []result.SizePoint, good func(*result.SizePoint) bool) (last, beyond *result.SizePoint, err error) {
	bad := slices.IndexFunc(fromSafe, func(p result.SizePoint) bool { return !good(&p) })
	switch bad {
	case 0:
		return nil, nil, nil
	case -1:
		return &fromSafe[len(fromSafe)-1], nil, nil
	}
	meets, misses := fromSafe[bad-1], fromSafe[bad]
	least := 0.0
	if z.lo <= 0 {
		least = sizedOfNone * (z.hi - z.lo)
	}
	for math.Abs(misses.Value-meets.Value) > sized*max(meets.Value, least) {
		middle := (meets.Value + misses.Value) / 2
		if z.byRatio() && max(meets.Value, misses.Value) > 2*min(meets.Value, misses.Value) {
			middle = math.Sqrt(meets.Value) * math.Sqrt(misses.Value)
		}
		middle = z.round(middle, sizeDigits)
		if middle == meets.Value || middle == misses.Value {
			break
		}
		point, err := z.at(ctx, middle)
		if err != nil {
			return nil, nil, err
		}
		if good(&point) {
			meets = point
		} else {
			misses = point
		}
	}
	return &meets, &misses, nil
}
