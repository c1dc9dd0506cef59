package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// SizeQuery says which number of which option is looked for.
type SizeQuery struct {
	Option    string // its name, or that of a list over the same number
	Vary      string // the key in the option, such as trench_drains.spacing
	Between   string // the range, such as "4 m .. 40 m"
	Condition string // of the works; "" for as built
}

const (
	scanned     = 25    // values at which the range is looked at, evenly or by equal ratios
	ratioRange  = 3     // times by which the ends of a range differ from which on it is parted by equal ratios
	sized       = 0.005 // share of the value to which the answer is worked out
	sizedOfNone = 1e-3  // share of the range below which a value counts as no smaller: that of a value close to zero
	scanDigits  = 2     // least significant digits of the values of the scan
	sizeDigits  = 4     // most of any value that is tried, in the unit of the range: a person can write it, and it was replayed
)

// saferAbove tells for every number of a measure that changes levels whether a higher one drains more or lets less in.
var saferAbove = map[string]bool{
	"trench_drains.depth": true, "trench_drains.rate": true, "trench_drains.spacing": false, "trench_drains.conductivity": true,
	"trench_drains.conductivity_below": true, "trench_drains.drain_radius": true, "trench_drains.equivalent_depth": true,
	"trench_drains.working_head": true, "trench_drains.efficiency": true, "trench_drains.ceiling": true,
	"trench_drains.decline.half_life": true, "trench_drains.decline.flushed_every": false, "trench_drains.decline.restored_to": true,
	"bored_drains.rate": true, "bored_drains.level": false, "bored_drains.efficiency": true, "bored_drains.ceiling": true,
	"bored_drains.decline.half_life": true, "bored_drains.decline.flushed_every": false, "bored_drains.decline.restored_to": true,
	"surface_water.kept_out": true, "vegetation.pet_factor": true, "vegetation.interception": true, "cut_off_drain.intercepted": true,
	"set.surface.infiltration": false, "set.surface.infiltration_limit": false, "set.soil.available_water": true,
	"set.soil.readily_available": true, "set.soil.crop_factor": true, "set.cover.drainable_porosity": false, "set.cover.seepage": true,
	"set.cover.percolation": false, "set.cover.percolation_ceiling": false, "set.cover.conductivity": true, "set.cover.full_at": false,
	"set.deep.drainable_porosity": true, "set.deep.seepage": true, "set.deep.lateral_inflow": false, "set.deep.full_at": false,
}

// noLevel are the numbers of measures that change no level, and what they change instead.
var noLevel = map[string]string{
	"bored_drains.number":    "changes what the drains cost",
	"bored_drains.length":    "changes what the drains cost",
	"set.deep.consolidation": "changes the time until trenches act",
}

// sizing is a number of an option that is looked for.
type sizing struct {
	study     *Study
	prepared  *prepared
	option    int
	condition Condition
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
	z := &sizing{study: s, key: q.Vary, condition: asBuilt}
	if s.Count.DecideOn < 0 {
		return nil, s.Fault(s.PlaceOf("count.decide_on"), "several bands are given, so say which of them the option is sized on: give decide_on")
	}
	z.measure = measureNamed(s.Count.DecideBy)
	if t := s.Count.Target; t != nil {
		z.measure = measureNamed(t.Measure)
	}
	names := []string{AsBuilt}
	for i := range s.Conditions {
		names = append(names, s.Conditions[i].Name)
		if sameName(s.Conditions[i].Name, q.Condition) {
			z.condition = s.Conditions[i]
		}
	}
	if q.Condition != "" && indexOfName(names, q.Condition) < 0 {
		return nil, unknownName("--condition", q.Condition, names)
	}
	var err error
	if z.option, err = s.optionToVary(q.Option, q.Vary); err != nil {
		return nil, err
	}
	if z.shape, err = s.numberOf(z.option, q.Vary); err != nil {
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

// between reads the range.
func (z *sizing) between(text string) error {
	var r quantity.Range
	var err error
	z.base = 1
	if z.shape.form == formQuantity {
		r, err = quantity.ParseRange(text, z.shape.kind)
	} else {
		r, err = quantity.ParseNumberRange(text)
	}
	if err == nil && z.shape.form == formQuantity {
		z.unit = strings.TrimPrefix(r.Unit, "1") // 1/d is /d
		if z.unit == "" {
			z.unit = z.shape.kind.Unit()
		}
		z.base, err = quantity.Parse("1 "+z.unit, z.shape.kind)
	}
	if err != nil {
		return &fault.Error{Key: "--between", Text: err.Error()}
	}
	z.lo, z.hi = z.round(r.Lo, exactDigits), z.round(r.Hi, exactDigits)
	return nil
}

// optionToVary is the place of the option with a name. The name of a list over the same number stands for any of its options.
func (s *Study) optionToVary(name, key string) (int, error) {
	names := optionNames(s)
	if i := indexOfName(names, name); i >= 0 {
		return i, nil
	}
	var lists []string
	for i := range s.Options {
		o := &s.Options[i]
		switch {
		case o.list == "":
		case !sameName(o.list, name):
			lists = append(lists, o.list)
		case o.varied == key:
			return i, nil
		default:
			if _, err := s.numberOf(i, key); err != nil {
				return 0, err
			}
			return 0, &fault.Error{Key: "--option", Text: fmt.Sprintf("%q is a list over %s; to size another number name one of its options, such as %q", name, o.varied, o.Name)}
		}
	}
	return 0, unknownName("--option", name, append(slices.Compact(lists), names...))
}

// SizeOptions are the names that size knows options by: a list over a number has one of its own besides those of the options
// that it makes.
func (s *Study) SizeOptions() []string {
	var names []string
	for i := range s.Options {
		o := &s.Options[i]
		if o.list != "" && !slices.Contains(names, o.list) {
			names = append(names, o.list)
		}
		names = append(names, o.Name)
	}
	return names
}

// SizeKeys are the numbers that size can vary: those of the options with a name, or of all options for "".
func (s *Study) SizeKeys(name string) []string {
	var keys []string
	for i := range s.Options {
		if o := &s.Options[i]; name != "" && !sameName(o.Name, name) && !(o.list != "" && sameName(o.list, name)) {
			continue
		}
		for _, n := range s.numbers(i) {
			if _, idle := noLevel[n.key]; !idle && n.beside == "" && !slices.Contains(keys, n.key) {
				keys = append(keys, n.key)
			}
		}
	}
	return keys
}

// variable is a number of an option that could be varied.
type variable struct {
	key    string
	shape  *shape
	beside string // a key that the option gives and that leaves no place for this one; "" for none
}

// numbers are those of the measures of an option.
func (s *Study) numbers(option int) []variable {
	var all []variable
	item := s.root.entry("options").value.items[option]
	for _, m := range s.Options[option].Measures {
		measure := item.entry(m.Key).value
		fields, _ := measureFields(m.Key)
		beside := func(f *field) string {
			for i := range fields {
				g := &fields[i]
				if measure.entry(g.name) != nil && (slices.Contains(g.not, f.name) || slices.Contains(f.not, g.name)) {
					return join(m.Key, g.name)
				}
			}
			return ""
		}
		for i := range fields {
			f := &fields[i]
			if f.listable() {
				all = append(all, variable{join(m.Key, f.name), &f.shape, beside(f)})
			}
			for k := range f.shape.fields {
				if inner := &f.shape.fields[k]; inner.listable() && measure.entry(f.name) != nil {
					all = append(all, variable{key: join(join(m.Key, f.name), inner.name), shape: &inner.shape})
				}
			}
		}
	}
	return all
}

// numberOf finds the shape of a number of an option.
func (s *Study) numberOf(option int, key string) (*shape, error) {
	name := s.Options[option].Name
	refuse := func(format string, args ...any) (*shape, error) {
		return nil, &fault.Error{Key: "--vary", Text: fmt.Sprintf(format, args...)}
	}
	var known, ending []string // keys that can be varied, and those of them that end so
	for _, n := range s.numbers(option) {
		instead, idle := noLevel[n.key]
		switch {
		case n.key == key && idle:
			return refuse("%s %s and no level, so no value of it can meet a target", key, instead)
		case n.key == key && n.beside != "":
			return refuse("%s has no place beside %s, which %q gives", key, n.beside, name)
		case n.key == key:
			return n.shape, nil
		case !idle && n.beside == "":
			known = append(known, n.key)
			if strings.HasSuffix(n.key, "."+key) {
				ending = append(ending, n.key)
			}
		}
	}
	near := fault.Nearest(key, known)
	if len(ending) == 1 {
		near = ending[0]
	}
	switch {
	case len(known) == 0:
		return nil, &fault.Error{Key: "--option", Text: fmt.Sprintf("%q does nothing, so it has no number to vary", name)}
	case near != "":
		return refuse("%q is no number of the option %q; did you mean %s?", key, name, near)
	}
	return refuse("%q is no number of the option %q\n  it has: %s", key, name, strings.Join(known, "\n          "))
}

// with is the study with a value for the number and with no other option. Its options are decided by the figure of the target.
func (z *sizing) with(value float64) (*Study, error) {
	text := z.text(value)
	item := z.study.root.entry("options").value.items[z.option]
	measure, path, _ := strings.Cut(z.key, ".")
	item = item.put(measure, func(m *node) *node {
		if measure != "set" {
			if block, key, nested := strings.Cut(path, "."); nested {
				return m.put(block, func(b *node) *node { return b.put(key, func(*node) *node { return textAt(text, b) }) })
			}
		}
		return m.put(path, func(*node) *node { return textAt(text, m) })
	})
	root := z.study.root.put("options", func(list *node) *node {
		copied := *list
		copied.items = slices.Clone(list.items)
		copied.items[z.option] = item
		return &copied
	})
	found := &problems{src: z.study.src}
	varied := (&decoder{problems: found, places: map[string]Place{}}).study(root)
	if len(found.list) > 0 {
		return nil, z.refused(value, found.list[0].text)
	}
	varied.Options = varied.Options[z.option : z.option+1]
	varied.Options[0].Name, varied.Options[0].varied = z.called(), "" // what is said of lists is not said of it
	varied.Conditions = nil
	varied.Count.DecideBy = z.measure.name
	return varied, nil
}

// refused says why the number cannot have a value.
func (z *sizing) refused(value float64, why string) error {
	return &fault.Error{Key: "--between", Text: fmt.Sprintf("%s cannot be %s: %s", z.key, z.text(value), why)}
}

// put is the block with another value of a key, which it has or gets.
func (n *node) put(key string, value func(*node) *node) *node {
	copied := *n
	copied.entries = slices.Clone(n.entries)
	if e := copied.entry(key); e != nil {
		e.value = value(e.value)
	} else {
		copied.entries = append(copied.entries, entry{key: key, line: n.line, col: n.col, value: value(nil)})
	}
	return &copied
}

// textAt is a text that stands where its block does.
func textAt(text string, at *node) *node { return &node{text: text, line: at.line, col: at.col} }

// exactDigits are the significant digits of a value that was converted to another unit and back.
const exactDigits = 12

// written writes a value as the study would, in the unit of the range.
func (z *sizing) written(value float64, digits int) string {
	text := strconv.FormatFloat(value/z.base, 'g', digits, 64)
	if number, err := strconv.ParseFloat(text, 64); err == nil {
		text = quantity.FormatNumber(number)
	}
	return strings.TrimSpace(text + " " + z.unit)
}

// text is a value that was rounded before as the study would have it.
func (z *sizing) text(value float64) string { return z.written(value, exactDigits) }

// round is the value of a number with so many digits, as it is read from a study.
func (z *sizing) round(value float64, digits int) float64 {
	text := z.written(value, digits)
	read := quantity.ParseNumber
	if z.shape.form == formQuantity {
		read = func(text string) (float64, error) { return quantity.Parse(text, z.shape.kind) }
	}
	if rounded, err := read(text); err == nil {
		return rounded
	}
	return value
}

// baseUnit is that of the values in the results: the base unit of the kind; shares are 0 to 1 there.
func (z *sizing) baseUnit() string {
	switch {
	case z.shape.form != formQuantity:
		return ""
	case z.shape.kind == quantity.Share:
		return "share"
	}
	return z.shape.kind.Unit()
}

// called is what the option is called: a list over the number by its own name.
func (z *sizing) called() string {
	if o := &z.study.Options[z.option]; o.varied == z.key {
		return o.list
	} else {
		return o.Name
	}
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
			if z.lo > 0 && z.hi/z.lo >= ratioRange {
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
	p.cases = []caseWorks{{condition: z.condition.Name, works: p.works, rows: [][]weighted{s.row(w, &z.condition)}}}
	f, err := p.rowFigures(ctx, w, p.cases[0].rows[0])
	if err != nil {
		var found *fault.Error
		if errors.As(err, &found) {
			err = z.refused(value, found.Text)
		}
		return nil, nil, err
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
	for math.Abs(misses.Value-meets.Value) > sized*max(meets.Value, sizedOfNone*(z.hi-z.lo)) {
		middle := z.round((meets.Value+misses.Value)/2, sizeDigits)
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

// reason says why there is no answer, and what is to be known of one that is an end of the range. It is "" for any other.
func (z *sizing) reason(found *result.Size) string {
	fromSafe := z.fromSafe(found.Curve)
	safe, unsafe := fromSafe[0], fromSafe[len(fromSafe)-1]
	same := !slices.ContainsFunc(fromSafe, func(p result.SizePoint) bool {
		return stats.Less(p.Figure, safe.Figure) || stats.Less(safe.Figure, p.Figure)
	})
	switch {
	case same && safe.Figure > 0:
		return fmt.Sprintf("The figure is the same at every value of the range, so %s decides nothing here. Size another number.", z.key)
	case found.Target == nil:
		return fmt.Sprintf("The study has no target. Give count.target, such as {%s: %s}, to have the value found.", z.measure.name, targetExample(z.measure.name))
	case found.Answer != nil && found.Beyond != nil:
		return ""
	case found.Answer != nil:
		return "Every value of the range meets the target, so the answer is its end." + z.look(unsafe, saferAbove[z.key], " Look %s %s too.", "")
	case len(found.MeetsAgain) > 0:
		return fmt.Sprintf("The safe end of the range, %s, misses the target, and less safe values meet it: the figure does not fall all the way. Look at the curve, and set the target on another figure.", safe.Text)
	}
	return "No value of the range meets the target." +
		z.look(safe, !saferAbove[z.key], " Look %s %s where such works can be built, or combine measures.", " Combine measures, or choose other works.")
}

// look says to look below or above an end of the range, or something instead where no value beyond it can be.
func (z *sizing) look(end result.SizePoint, below bool, words, instead string) string {
	next, where := 1.01*end.Value, "above"
	if below {
		next, where = 0.99*end.Value, "below"
	}
	next = z.round(next, sizeDigits)
	if _, err := z.with(next); err != nil || next == end.Value {
		return instead
	}
	return fmt.Sprintf(words, where, end.Text)
}

// targetExample is what a target on a measure may be.
func targetExample(measure string) string {
	return targetShape.fields[slices.IndexFunc(targetShape.fields, func(f field) bool { return f.name == measure })].eg
}

// steps works out what each value of the curve has over the next one that is less safe.
func (z *sizing) steps(curve []result.SizePoint) {
	for i := range curve {
		k := i + 1
		if saferAbove[z.key] {
			k = i - 1
		}
		if k < 0 || k == len(curve) {
			continue
		}
		p, next := &curve[i], &curve[k]
		step := &result.SizeStep{Less: next.Figure - p.Figure}
		if !stats.Less(p.Figure, next.Figure) && !stats.Less(next.Figure, p.Figure) {
			step.Less = 0
		}
		if p.Metres != nil && next.Metres != nil && stats.Less(*next.Metres, *p.Metres) {
			per := step.Less / (*p.Metres - *next.Metres) * 100
			step.LessPer100Metres = &per
		}
		if p.PresentValue != nil && next.PresentValue != nil && step.Less > 0 && stats.Less(*next.PresentValue, *p.PresentValue) {
			each := (*p.PresentValue - *next.PresentValue) / step.Less
			step.CostPerLess = &each
		}
		p.Step = step
	}
}

// describe says what the option does with the answer, how its drains stand if they stop, and what is weak about the figures.
// Without an answer it is the safe end of the range that is described.
func (z *sizing) describe(ctx context.Context, found *result.Size) error {
	shown := &z.fromSafe(found.Curve)[0]
	if found.Answer != nil {
		shown = found.Answer
	}
	p, options, err := z.replay(ctx, shown.Value)
	if err != nil {
		return err
	}
	if err := p.states(ctx, options, &z.condition, z.resamples); err != nil {
		return err
	}
	f := &options[0]
	found.Measures, found.DrainsAs = f.Measures, f.DrainsAs
	if found.Answer != nil {
		found.States, found.TimeToEffect = f.States, f.trace.works.timeToEffect()
	}

	whole := z.prepared
	base, err := whole.rowFigures(ctx, whole.works[whole.baseline], whole.cases[0].rows[whole.baseline])
	if err != nil {
		return err
	}
	ws := warnings(p.studyWarnings(options))
	p.actionWarnings(&ws, f, &base)
	if z.condition.Name == AsBuilt {
		if err := p.lawWarnings(ctx, &ws, options); err != nil {
			return err
		}
	}
	if found.Answer != nil {
		p.targetWarnings(&ws, options)
	}
	conversion, err := whole.conversion(ctx)
	if err != nil {
		return err
	}
	conversionWarnings(&ws, conversion)
	p.replayWarnings(&ws, f)
	p.countWarnings(&ws, options)
	z.answerWarnings(&ws, found)
	found.Warnings = slices.DeleteFunc(ws, func(w result.Warning) bool {
		return w.Band != "" && w.Band != found.DecideOn || w.Code == "losses_not_given" // which no sizing needs
	})
	return nil
}

// answerWarnings add what the reader of the answer and the curve must weigh.
func (z *sizing) answerWarnings(ws *warnings, found *result.Size) {
	at := func(w result.Warning) result.Warning {
		w.Option, w.Band = found.Option, found.DecideOn
		return w
	}
	if t := z.study.Options[z.option].drains("trench_drains"); t != nil && !math.IsNaN(t.Trench.Equivalent) && t.Trench.Equivalent > 0 &&
		(z.key == "trench_drains.spacing" || z.key == "trench_drains.depth") {
		w := warn("equivalent_depth_fixed")
		w.Option = found.Option
		ws.add(w, "The equivalent_depth given, %s m, serves every value, though it changes with spacing and depth. Leave it out to have it computed for each.", short(t.Trench.Equivalent))
	}
	if first, last := found.Curve[0].PresentValue, found.Curve[len(found.Curve)-1].PresentValue; first != nil && *first == *last && *first != 0 {
		w := note("cost_not_sized")
		w.Option = found.Option
		ws.add(w, "The cost of the option is the same at every value, since no part of it goes with %s. Give it anew for the answer.", z.key)
	}
	safe := z.fromSafe(found.Curve)[0]
	switch {
	case found.Answer == nil || found.Answer.Meets != "not_shown":
	case found.Shown != nil:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target with the answer; the end of its range does not. Leave a margin, or take %s, which the range meets too.", found.Shown.Text)
	case safe.Figure == 0:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target, at every value: even without a single event in %s the range reaches beyond it. The record is too short to show that the target is met.", fault.Count(found.Record.YearsCounted, "year"))
	default:
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target; at no value of the range does the end of its range meet it too. Leave a margin.")
	}
	var again []string
	for _, run := range meetsAgain(z.fromSafe(found.Curve)) {
		text := run[0].Text
		if len(run) > 1 {
			text += " to " + run[len(run)-1].Text
		}
		again = append(again, text)
	}
	if len(again) > 0 && found.Answer != nil {
		ws.add(at(warn("target_met_again")), "Beyond the first miss the target is met again: %s. More drainage can split one long event in two, so fewer events there are no less movement; do not choose these values.", firstOf(again, ", ", 8))
	}
}
