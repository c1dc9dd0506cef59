package scenario

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
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
