package scenario

import (
	"context"
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
	scanned   = 25    // values at which the range is looked at, evenly or by equal ratios
	sized     = 0.005 // share of the value to which the answer is worked out
	sizeDigit = 4     // significant digits of every value that is tried, so that the answer is a value that was replayed
)

// saferAbove tells for the numbers of measures whether a higher one drains more or lets less in. Of a key that is not here
// the figures at the two ends of the range tell.
var saferAbove = map[string]bool{
	"trench_drains.depth": true, "trench_drains.rate": true, "trench_drains.spacing": false, "trench_drains.conductivity": true,
	"trench_drains.conductivity_below": true, "trench_drains.drain_radius": true, "trench_drains.equivalent_depth": true,
	"trench_drains.working_head": true, "trench_drains.efficiency": true, "trench_drains.ceiling": true,
	"trench_drains.decline.half_life": true, "trench_drains.decline.flushed_every": false, "trench_drains.decline.restored_to": true,
	"bored_drains.rate": true, "bored_drains.level": false, "bored_drains.efficiency": true, "bored_drains.ceiling": true,
	"bored_drains.decline.half_life": true, "bored_drains.decline.flushed_every": false, "bored_drains.decline.restored_to": true,
	"surface_water.kept_out": true, "vegetation.pet_factor": true, "vegetation.interception": true, "cut_off_drain.intercepted": true,
	"set.surface.infiltration": false, "set.surface.infiltration_limit": false, "set.soil.available_water": true,
	"set.soil.readily_available": true, "set.soil.crop_factor": true, "set.cover.seepage": true, "set.cover.percolation": false,
	"set.cover.percolation_ceiling": false, "set.cover.conductivity": true, "set.deep.seepage": true, "set.deep.lateral_inflow": false,
}

// sizing is a number of an option that is looked for.
type sizing struct {
	study     *Study
	prepared  *prepared
	option    int
	condition Condition
	key       string
	shape     *shape
	resamples *stats.Resamples
	measure   *measure
}

// Size scans a number of one option over a range and finds the value nearest to the unsafe end with which the study's target
// is still met, and from which on all safer values of the scan meet it too. More drainage can raise the number of events, so
// that a figure need not fall all the way: a value beyond the first miss that meets the target again is named, not chosen.
// Errors are as for Compare.
func Size(ctx context.Context, s *Study, q SizeQuery) (*result.Size, error) {
	z, lo, hi, err := newSizing(s, q)
	if err != nil {
		return nil, err
	}
	if z.prepared, err = z.prepare(ctx, lo, hi); err != nil {
		return nil, err
	}
	p := z.prepared
	z.resamples = stats.NewResamples(p.counted.years, s.Count.Resamples, s.Count.MeanBlock, s.Count.Seed)

	values := z.grid(lo, hi)
	curve := make([]result.SizePoint, len(values))
	err = each(len(values), func(i int) (err error) {
		curve[i], err = z.at(ctx, values[i])
		return err
	})
	if err != nil {
		return nil, err
	}
	on := s.Bands[s.Count.DecideOn].Name
	found := &result.Size{
		Head: p.head("size"), Option: z.called(), Vary: z.key, Unit: z.unit(), Condition: z.condition.Name,
		DecideOn: on, Measure: z.measure.name, Settings: p.settings(), Curve: curve,
	}
	if t := s.Count.Target; t != nil {
		found.Target = &result.Target{Measure: t.Measure, Value: t.Most}
		if err := z.search(ctx, found); err != nil {
			return nil, err
		}
	} else {
		found.Reason = fmt.Sprintf("The study has no target. Give count.target, such as {%s: %s}, to have the value found.", s.Count.DecideBy, targetExample(s.Count.DecideBy))
	}
	ws := warnings(p.studyWarnings(nil))
	z.warn(&ws, found)
	found.Warnings = ws
	return found, nil
}

// targetExample is what a target on a measure may be.
func targetExample(measure string) string {
	return targetShape.fields[slices.IndexFunc(targetShape.fields, func(f field) bool { return f.name == measure })].eg
}

// newSizing finds the option and the key, and reads the range.
func newSizing(s *Study, q SizeQuery) (z *sizing, lo, hi float64, err error) {
	z = &sizing{study: s, key: q.Vary, condition: asBuilt}
	if s.Count.DecideOn < 0 {
		return nil, 0, 0, s.Fault(s.PlaceOf("count.decide_on"), "several bands are given, so say which of them the option is sized on: give decide_on")
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
		return nil, 0, 0, unknownName("--condition", q.Condition, names)
	}
	if z.option, err = s.optionToVary(q.Option, q.Vary); err != nil {
		return nil, 0, 0, err
	}
	o := &s.Options[z.option]
	if z.shape, err = s.numberOf(o, q.Vary); err != nil {
		return nil, 0, 0, err
	}
	read := func() (float64, float64, error) { return quantity.ParseRange(q.Between, z.shape.kind) }
	if z.shape.form != formQuantity {
		read = func() (float64, float64, error) { return quantity.ParseNumberRange(q.Between) }
	}
	if lo, hi, err = read(); err != nil {
		return nil, 0, 0, &fault.Error{Key: "--between", Text: err.Error()}
	}
	if z.shape.form == formWhole && (lo != math.Trunc(lo) || hi != math.Trunc(hi)) {
		return nil, 0, 0, &fault.Error{Key: "--between", Text: fmt.Sprintf("%s is a whole number; write whole numbers for both ends", q.Vary)}
	}
	for _, end := range []float64{lo, hi} {
		if _, err := z.with(end); err != nil {
			return nil, 0, 0, err
		}
	}
	return z, lo, hi, nil
}

// optionToVary is the place of the option with a name. The name of a list over the same number stands for any of its options.
func (s *Study) optionToVary(name, key string) (int, error) {
	names := optionNames(s)
	if i := indexOfName(names, name); i >= 0 {
		return i, nil
	}
	for i := range s.Options {
		o := &s.Options[i]
		switch {
		case o.list == "" || !sameName(o.list, name):
		case o.varied == key:
			return i, nil
		default:
			return 0, &fault.Error{Key: "--option", Text: fmt.Sprintf("%q is a list over %s, and %s is looked for; name one of its options, such as %q", name, o.varied, key, o.Name)}
		}
	}
	return 0, unknownName("--option", name, names)
}

// numberOf finds the shape of a number of an option.
func (s *Study) numberOf(o *Option, key string) (*shape, error) {
	var known []string // all numbers of the option's measures
	for _, m := range o.Measures {
		fields, _ := measureFields(m.Key)
		for i := range fields {
			f := &fields[i]
			for j := range f.shape.fields {
				if inner := &f.shape.fields[j]; inner.listable() && m.decline() != nil {
					known = append(known, join(join(m.Key, f.name), inner.name))
					if known[len(known)-1] == key {
						return &inner.shape, nil
					}
				}
			}
			if f.listable() {
				known = append(known, join(m.Key, f.name))
				if known[len(known)-1] == key {
					return &f.shape, nil
				}
			}
		}
	}
	switch near := fault.Nearest(key, known); {
	case len(o.Measures) == 0:
		return nil, &fault.Error{Key: "--option", Text: fmt.Sprintf("%q does nothing, so it has no number to vary", o.Name)}
	case near != "":
		return nil, &fault.Error{Key: "--vary", Text: fmt.Sprintf("%q is no number of the option %q; did you mean %s?", key, o.Name, near)}
	}
	return nil, &fault.Error{Key: "--vary", Text: fmt.Sprintf("%q is no number of the option %q\n  it has: %s", key, o.Name, strings.Join(known, "\n          "))}
}

// with is the study with a value for the number.
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
		return nil, &fault.Error{Key: "--between", Text: fmt.Sprintf("%s cannot be %s: %s", z.key, text, found.list[0].text)}
	}
	varied.SHA256 = z.study.SHA256
	return varied, nil
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

// text writes a value as the study would.
func (z *sizing) text(value float64) string {
	if z.shape.form == formQuantity {
		return quantity.Format(value, z.shape.kind)
	}
	return quantity.FormatNumber(value)
}

// unit is that of the values in the results: the base unit of the kind; shares are 0 to 1 there.
func (z *sizing) unit() string {
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

// prepare settles what all values share. A warm-up that is left to the tool is that of the study and of both ends.
func (z *sizing) prepare(ctx context.Context, lo, hi float64) (*prepared, error) {
	var ends []*works
	for _, end := range []float64{lo, hi} {
		s, err := z.with(end)
		if err != nil {
			return nil, err
		}
		ends = append(ends, newWorks(s, &s.Options[z.option], &z.condition, asNew))
	}
	return prepare(ctx, z.study, ends...)
}

// grid are the values of the scan from the safe end on, by equal ratios where the range is wide, and else evenly.
func (z *sizing) grid(lo, hi float64) []float64 {
	ratio := lo > 0 && hi/lo >= 3
	var values []float64
	for i := range scanned {
		part := float64(i) / (scanned - 1)
		v := lo + part*(hi-lo)
		if ratio {
			v = lo * math.Pow(hi/lo, part)
		}
		values = append(values, z.round(v))
	}
	values[0], values[scanned-1] = lo, hi
	return slices.Compact(values)
}

// round is a value that a person would write.
func (z *sizing) round(v float64) float64 {
	if z.shape.form == formWhole {
		return math.Round(v)
	}
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', sizeDigit, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}

// at replays the option with a value.
func (z *sizing) at(ctx context.Context, value float64) (result.SizePoint, error) {
	f, s, err := z.figures(ctx, value)
	if err != nil {
		return result.SizePoint{}, err
	}
	point := result.SizePoint{Value: value, Meets: s.Count.Target.met(&f.Bands[s.Count.DecideOn])}
	point.Figure, point.CI = z.measure.figure(&f.Bands[s.Count.DecideOn])
	if c := s.cost(&s.Options[z.option]); c != nil {
		point.PresentValue, point.Metres = &c.PresentValue, c.Metres
	} else if m := s.metresOf(&s.Options[z.option]); m > 0 {
		point.Metres = &m
	}
	return point, nil
}

// figures are those of the option with a value, and the study that has it.
func (z *sizing) figures(ctx context.Context, value float64) (*optionFigures, *Study, error) {
	s, err := z.with(value)
	if err != nil {
		return nil, nil, err
	}
	w := newWorks(s, &s.Options[z.option], &z.condition, asNew)
	if err := w.check(s); err != nil {
		return nil, nil, err
	}
	p := *z.prepared
	p.study = s
	f, err := p.rowFigures(ctx, w, s.row(w, &z.condition))
	if err != nil {
		return nil, nil, err
	}
	p.judge(&f, &f, z.resamples)
	return &f, s, nil
}

// search finds the answer on the curve: once by the figures, and once by the ends of their ranges.
func (z *sizing) search(ctx context.Context, found *result.Size) error {
	fromSafe := slices.Clone(found.Curve)
	if !z.lowIsSafe(found.Curve) {
		slices.Reverse(fromSafe)
	}
	var err error
	if found.Answer, err = z.last(ctx, fromSafe, func(p *result.SizePoint) bool { return p.Meets != "no" }); err != nil {
		return err
	}
	if found.Shown, err = z.last(ctx, fromSafe, func(p *result.SizePoint) bool { return p.Meets == "yes" }); err != nil {
		return err
	}
	miss := slices.IndexFunc(fromSafe, func(p result.SizePoint) bool { return p.Meets == "no" })
	found.MeetsAgain = []float64{}
	if miss >= 0 {
		for _, p := range fromSafe[miss:] {
			if p.Meets != "no" {
				found.MeetsAgain = append(found.MeetsAgain, p.Value)
			}
		}
	}
	safe := z.text(fromSafe[0].Value)
	switch {
	case found.Answer == nil && len(found.MeetsAgain) == 0:
		found.Reason = fmt.Sprintf("No value of the range meets the target. Try a range beyond %s, or combine measures.", safe)
	case found.Answer == nil:
		found.Reason = fmt.Sprintf("The safe end of the range, %s, misses the target, although other values meet it: the figure does not fall all the way. Look at the curve, and decide by another measure.", safe)
	case miss < 0:
		found.Reason = fmt.Sprintf("Every value of the range meets the target, so the answer is its end. Try a range beyond %s.", z.text(found.Answer.Value))
	}
	return nil
}

// lowIsSafe tells at which end of the range the works do more.
func (z *sizing) lowIsSafe(curve []result.SizePoint) bool {
	if above, ok := saferAbove[z.key]; ok {
		return !above
	}
	return !stats.Less(curve[len(curve)-1].Figure, curve[0].Figure)
}

// last is the last point from the safe end before the first that is not good, brought as close to that as the answer is worked
// out; nil where the safe end itself is not good.
func (z *sizing) last(ctx context.Context, fromSafe []result.SizePoint, good func(*result.SizePoint) bool) (*result.SizePoint, error) {
	bad := slices.IndexFunc(fromSafe, func(p result.SizePoint) bool { return !good(&p) })
	switch bad {
	case 0:
		return nil, nil
	case -1:
		return &fromSafe[len(fromSafe)-1], nil
	}
	meets, misses := fromSafe[bad-1], fromSafe[bad].Value
	for math.Abs(misses-meets.Value) > sized*math.Abs(meets.Value) {
		middle := z.round((meets.Value + misses) / 2)
		if middle == meets.Value || middle == misses {
			break
		}
		point, err := z.at(ctx, middle)
		if err != nil {
			return nil, err
		}
		if good(&point) {
			meets = point
		} else {
			misses = middle
		}
	}
	return &meets, nil
}

// warn adds what the reader of a curve must weigh.
func (z *sizing) warn(ws *warnings, found *result.Size) {
	at := func(w result.Warning) result.Warning {
		w.Option, w.Band = found.Option, found.DecideOn
		return w
	}
	if found.Answer != nil && found.Answer.Meets == "not_shown" {
		ws.add(at(warn("target_not_shown")), "Only the figure meets the target; the end of its range does not. Leave a margin, or take the value that the range meets too.")
	}
	if len(found.MeetsAgain) > 0 && found.Answer != nil {
		var values []string
		for _, v := range found.MeetsAgain {
			values = append(values, z.text(v))
		}
		ws.add(at(warn("target_met_again")), "Beyond the first miss the target is met again at %s. More drainage can split one long event in two, so fewer events there are no less movement; do not choose these values.", firstOf(values, ", ", 8))
	}
}
