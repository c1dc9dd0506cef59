package scenario

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade/slope"
	"quietslope/scenario/quantity"
)

// sketch draws a study that is read, key by key from the table.
type sketch struct {
	t      *rapid.T
	names  []string           // not given away yet
	values map[string]float64 // of the ground and the site, by path, in base units
	pet    bool
	scheme bool // rates are to be converted
	money  bool
}

// narrower are ranges within those of the table, in base units, in which the keys of a study go together. The base of the
// deep layer and the top leave room for every band and level.
var narrower = map[string]limits{
	"ground.cover.thickness":          atLeast(5, 20),
	"ground.cover.drainable_porosity": atLeast(0.001, 0.3),
	"ground.cover.seepage":            atLeast(1e-4, 0.05),
	"ground.cover.percolation":        atLeast(0, 0.05),
	"ground.cover.full_at":            atLeast(3, 30),
	"ground.deep.thickness":           atLeast(10, 30),
	"ground.deep.drainable_porosity":  atLeast(0.001, 0.3),
	"ground.deep.seepage":             atLeast(1e-4, 0.05),
	"ground.deep.lateral_inflow":      atLeast(0.01, 10),
	"ground.deep.full_at":             atLeast(9, 40),
	"ground.rates_from.step":          atLeast(0.1, 5),
	"ground.start.cover":              atLeast(0, 2),
	"ground.start.deep":               atLeast(0, 8),
	"slope.angle":                     atLeast(5, 20),
	"slope.friction":                  atLeast(8, 30),
	"slope.unit_weight":               atLeast(15, 25),
	"slope.cohesion":                  atLeast(0, 20),
	"site.ground_level":               atLeast(0, 500),
	"trench_drains.depth":             atLeast(1, 4),
	"trench_drains.equivalent_depth":  atLeast(0, 0.9),
	"trench_drains.spacing":           atLeast(2, maxSpacing),
	"trench_drains.drain_radius":      atLeast(0.01, 0.9),
	"bored_drains.level":              atLeast(0, 9),
}

// rangeOf is the range to draw the value of a key from.
func rangeOf(path string, s *shape) limits {
	path = strings.TrimPrefix(strings.Replace(path, "options[].set.", "ground.", 1), "options[].")
	if l, ok := narrower[path]; ok {
		return l
	}
	return s.limits
}

func (k *sketch) coin(what string) bool { return rapid.Bool().Draw(k.t, what) }

// rarely is true one time in n.
func (k *sketch) rarely(n int, what string) bool {
	return rapid.IntRange(1, n).Draw(k.t, what) == 1
}

func word(text string) *node { return &node{text: text} }

// number draws a number within limits that are also given by hold, with few digits.
func (k *sketch) number(lo, hi float64, hold func(text string) bool) string {
	for range 20 {
		x := rapid.Float64Range(lo, hi).Draw(k.t, "number")
		if lo >= 0 && k.coin("small") {
			x = math.Max(lo, hi*math.Pow(10, -8*rapid.Float64Range(0, 1).Draw(k.t, "size")))
		}
		digits := strconv.FormatFloat(x, 'g', rapid.IntRange(1, 4).Draw(k.t, "digits"), 64)
		x, _ = strconv.ParseFloat(digits, 64)
		text := quantity.FormatNumber(x)
		switch rapid.IntRange(0, 5).Draw(k.t, "spelling") {
		case 0:
			text = strconv.FormatFloat(x, 'e', -1, 64)
		case 1:
			text = strconv.FormatFloat(x, 'E', -1, 64)
		case 2:
			if x >= 0 {
				text = "+" + text
			}
		}
		if hold(text) {
			return text
		}
	}
	return ""
}

// quantity draws a quantity within limits, in any unit and spelling.
func (k *sketch) quantity(kind quantity.Kind, l limits) string {
	read := func(text string) (float64, bool) {
		v, err := quantity.Parse(text, kind)
		return v, err == nil && l.hold(v) && !math.Signbit(v) == (v >= 0)
	}
	if kind == quantity.Share && k.coin("bare") {
		if text := k.number(l.lo, min(l.hi, 0.999), func(text string) bool { _, ok := read(text); return ok }); text != "" {
			return text
		}
	}
	unit := rapid.SampledFrom(kind.Units()).Draw(k.t, "unit")
	one, err := quantity.Parse("1 "+unit, kind)
	if err != nil {
		k.t.Fatal(err)
	}
	spelt := rapid.SampledFrom([]string{unit, strings.NewReplacer("m2", "m²", "t2", "t²", "m3", "m³", "deg", "°").Replace(unit)}).Draw(k.t, "spelt")
	blanks := []string{" ", "", "  ", "\u2009", "\u00a0", "\u202f"}
	if strings.HasPrefix(unit, "1") {
		blanks = []string{" ", "\u2009"}
	}
	between := rapid.SampledFrom(blanks).Draw(k.t, "between")
	if text := k.number(l.lo/one, l.hi/one, func(text string) bool { _, ok := read(text + between + spelt); return ok }); text != "" {
		return text + between + spelt
	}
	return quantity.Format((l.lo+l.hi)/2, kind)
}

// scalar draws the value of a key that is no block.
func (k *sketch) scalar(f *field, path string) *node {
	s := &f.shape
	words := slices.Clone(s.words)
	switch {
	case strings.HasSuffix(path, "existing_slip_surface"):
		words = slices.DeleteFunc(words, func(w string) bool { return w == "no" || w == "false" })
	case strings.HasSuffix(path, "rapid_movement_possible"):
		words = slices.DeleteFunc(words, func(w string) bool { return w == "yes" || w == "true" })
	}
	if s.form == formWord || s.form == formBlock || len(words) > 0 && k.rarely(4, "word") {
		return word(rapid.SampledFrom(words).Draw(k.t, "word"))
	}
	switch s.form {
	case formText:
		return word(rapid.SampledFrom([]string{"", " ", "A. N. Engineer", "true", "12", "it's: so", "Böschung", "3,5", "( x"}).Draw(k.t, "text"))
	case formFilled:
		switch f.name {
		case "format":
			return word(rapid.SampledFrom([]string{"iso", "YYYY-MM-DD", "DD.MM.YYYY hh:mm", "YYYYMMDDThhmm"}).Draw(k.t, "format"))
		case "unit":
			return word(rapid.SampledFrom([]string{"mm", "cm", "in", "mm/h", "mm/d", "in/h", "0.1 mm", "0.01 in"}).Draw(k.t, "unit"))
		}
		return word(k.name())
	case formName:
		return word(k.name())
	case formTexts:
		list := &node{is: listNode}
		for range rapid.IntRange(0, 3).Draw(k.t, "texts") {
			list.items = append(list.items, word(rapid.SampledFrom([]string{"", "NA", "-999", "-999.0", "true", "n/a", "#"}).Draw(k.t, "missing")))
		}
		return list
	case formMonth:
		month := rapid.SampledFrom([]string{"January", "may", "OCTOBER", "deCember"}).Draw(k.t, "month")
		return word(month)
	case formNumber:
		l := rangeOf(path, s)
		return word(k.number(l.lo, l.hi, func(text string) bool {
			v, err := quantity.ParseNumber(text)
			return err == nil && l.hold(v) && !(s.sum && notThousands(text) != "")
		}))
	case formWhole:
		return word(strconv.Itoa(rapid.IntRange(int(s.limits.lo), int(s.limits.hi)).Draw(k.t, "whole")))
	case formYears:
		years := 4 * rapid.IntRange(int(math.Ceil(s.limits.lo/4)), int(s.limits.hi)/4).Draw(k.t, "years")
		return word(rapid.SampledFrom([]string{fmt.Sprint(years, " y"), fmt.Sprint(years*1461/4, " d"), fmt.Sprint(years, "y")}).Draw(k.t, "years"))
	case formQuantity:
		text := k.quantity(s.kind, rangeOf(path, s))
		k.values[path], _ = quantity.Parse(text, s.kind)
		return word(text)
	}
	panic("no way to draw " + path)
}

// name takes a name that no other thing of the study has.
func (k *sketch) name() string {
	n := k.names[0]
	k.names = k.names[1:]
	return n
}

// block draws a block: the keys that it needs, and of the others those that the coin or always chooses.
func (k *sketch) block(s *shape, path string, always ...string) *node {
	n := &node{is: blockNode}
	if len(s.choice) > 0 {
		always = []string{rapid.SampledFrom(s.choice).Draw(k.t, "choice")}
	}
	for i := range s.fields {
		f := &s.fields[i]
		at := join(path, f.name)
		if len(s.choice) > 0 && !slices.Contains(always, f.name) {
			continue
		}
		if f.later || f.need == "" && !slices.Contains(always, f.name) && !k.coin(f.name) || !k.allowed(at) {
			continue
		}
		n.entries = append(n.entries, entry{key: f.name, value: k.value(f, at)})
	}
	if len(n.entries) == 0 && len(s.choice) == 0 {
		n.entries = append(n.entries, entry{key: s.fields[0].name, value: k.value(&s.fields[0], join(path, s.fields[0].name))})
	}
	for _, e := range n.entries {
		for _, key := range fieldOf(s.fields, e.key).with {
			k.plant(n, key, func() *node { f := fieldOf(s.fields, key); return k.value(f, join(path, key)) })
		}
	}
	// Keys may stand in any order.
	n.entries = rapid.Permutation(n.entries).Draw(k.t, "order")
	return n
}

// allowed says whether a key goes together with those drawn before.
func (k *sketch) allowed(path string) bool {
	switch path {
	case "weather.columns.pet":
		return k.pet
	case "ground.soil":
		return k.pet
	case "ground.cover.percolation_ceiling":
		return !k.scheme
	case "ground.rates_from":
		return k.scheme
	case "money":
		return k.money
	}
	return true
}

func (k *sketch) value(f *field, path string) *node {
	switch {
	case path == "bands" || path == "options": // need what the rest holds
		return nil
	case path == "conditions":
		list := &node{is: listNode}
		for range rapid.IntRange(1, 3).Draw(k.t, "conditions") {
			list.items = append(list.items, k.block(&f.shape, path))
		}
		return list
	case path == "weather.columns":
		return k.block(&f.shape, path, "pet")
	case path == "ground.cover":
		return k.block(&f.shape, path, "conductivity")
	case path == "slope.slip_depth":
		deepest := k.values["ground.cover.thickness"] + k.values["ground.deep.thickness"]
		return word(quantity.Format(deepest-math.Round(100*rapid.Float64Range(0, 0.5).Draw(k.t, "above the base"))/100, quantity.Length))
	case f.shape.form == formBlock && (len(f.shape.words) == 0 || k.coin("levels")):
		return k.block(&f.shape, path)
	}
	return k.scalar(f, path)
}

// study draws a whole study.
func (k *sketch) study() *node {
	k.values = map[string]float64{}
	k.pet, k.scheme, k.money = k.coin("pet"), k.coin("scheme"), k.coin("money")
	k.names = rapid.Permutation([]string{"as it stands", "trenches", "012", "true", "yes", "0+400", "1e3", "NO", "Böschung", "x: y", "#1", "a, b", "null", "~", "0x1F", "it's",
		"12.50", ".5", "on", "two words", "1_000", "{x}", "0", "rain, mm", "|", "日本"}).Draw(k.t, "names")
	root := k.block(&studyShape, "", "site", "count", "money")
	if e := root.entry("ground"); e != nil && k.scheme {
		k.plant(e.value, "rates_from", func() *node {
			f := fieldOf(groundShape.fields, "rates_from")
			return k.block(&f.shape, "ground.rates_from")
		})
	}
	bands := k.bands(root)
	root.entry("bands").value = bands
	root.entry("options").value = k.options(root)
	count := root.entry("count").value
	on := bands.items[rapid.IntRange(0, len(bands.items)-1).Draw(k.t, "decide_on")].textOf("name")
	count.entries = slices.DeleteFunc(count.entries, func(e entry) bool { return e.key == "decide_on" })
	if len(bands.items) > 1 || k.coin("decide_on") || len(count.entries) == 0 {
		count.entries = append(count.entries, entry{key: "decide_on", value: word(on)})
	}
	return root
}

// plant sets a key of a block if it is not there.
func (k *sketch) plant(block *node, key string, value func() *node) {
	if block.entry(key) == nil {
		block.entries = append(block.entries, entry{key: key, value: value()})
	}
}

func fieldOf(fields []field, name string) *field {
	return &fields[slices.IndexFunc(fields, func(f field) bool { return f.name == name })]
}

// bands draws bands that rise, in any datum.
func (k *sketch) bands(root *node) *node {
	deepest := k.values["ground.cover.thickness"] + k.values["ground.deep.thickness"]
	var ways []string
	for _, way := range datums {
		switch {
		case way == "elevation" && root.entry("site").value.entry("ground_level") == nil:
		case way == bySafety && root.entry("slope") == nil:
		default:
			ways = append(ways, way)
		}
	}
	write := func(way string, level float64) string {
		switch way {
		case "elevation":
			level += k.values["site.ground_level"] - deepest
		case "below_ground":
			level = deepest - level
		case bySafety:
			b := root.entry("slope").value
			number := func(key string, kind quantity.Kind, def float64) float64 {
				if b.entry(key) == nil {
					return def
				}
				v, err := quantity.Parse(b.textOf(key), kind)
				if err != nil {
					k.t.Fatal(err)
				}
				return v
			}
			s := slope.Slope{
				Angle: number("angle", quantity.Angle, 0), Depth: number("slip_depth", quantity.Length, deepest), UnitWeight: number("unit_weight", quantity.UnitWeight, 0),
				Friction: number("friction", quantity.Angle, 0), Cohesion: number("cohesion", quantity.Stress, 0), Standing: b.textOf("flow") == "standing",
			}
			return quantity.FormatNumber(s.FactorOfSafety(level - (deepest - s.Depth)))
		}
		return quantity.FormatNumber(math.Round(level*1e6)/1e6) + rapid.SampledFrom([]string{" m", "m", "\u2009m"}).Draw(k.t, "metres")
	}
	list := &node{is: listNode}
	for i := range rapid.IntRange(1, 4).Draw(k.t, "bands") {
		way := rapid.SampledFrom(ways).Draw(k.t, "way")
		level := float64(i+2) + math.Round(100*rapid.Float64Range(0, 0.5).Draw(k.t, "level"))/100
		b := &node{is: blockNode, entries: []entry{{key: "name", value: word(k.name())}, {key: way, value: word(write(way, level))}}}
		if k.coin("until") {
			b.entries = append(b.entries, entry{key: "until", value: word(write(way, level-1))})
		}
		for _, loss := range []string{"loss_per_event", "loss_per_day"} {
			if k.money && k.coin(loss) {
				b.entries = append(b.entries, entry{key: loss, value: k.scalar(fieldOf(bandFields, loss), "bands[]."+loss)})
			}
		}
		list.items = append(list.items, b)
	}
	return list
}

// options draws options with every kind of measure, like and lists.
func (k *sketch) options(root *node) *node {
	list := &node{is: listNode}
	baseline := rapid.IntRange(-1, 2).Draw(k.t, "baseline")
	like := map[string][]*node{} // options by measure, written out
	var costs []*drawnCost       // of options with a cost of their own
	minimum := rapid.IntRange(-1, 3).Draw(k.t, "minimum")
	for i := range rapid.IntRange(1, 4).Draw(k.t, "options") {
		o := &node{is: blockNode, entries: []entry{{key: "name", value: word(k.name())}}}
		listed := i == 0 || i == baseline || i == minimum // no list in what is or may be the baseline, or the minimum
		drains := map[string]*drawnDrains{}
		for j := range optionFields {
			f := &optionFields[j]
			if f.shape.form != formBlock || f.later || f.name == "cost" || k.coin(f.name) {
				continue
			}
			if f.name == "cut_off_drain" && root.entry("ground").value.entry("deep").value.entry("lateral_inflow") == nil {
				continue
			}
			m, own := k.measure(root, f, like[f.name])
			if m == nil {
				continue
			}
			if own {
				like[f.name] = append(like[f.name], o)
			}
			if !listed && k.rarely(3, "list") {
				listed = k.list(f, m)
			}
			o.entries = append(o.entries, entry{key: f.name, value: m})
			if f.name == "trench_drains" || f.name == "bored_drains" {
				drains[f.name] = k.drainsOf(root, f.name, m, like[f.name])
			}
		}
		if k.money && k.coin("cost") {
			if c := k.cost(o.textOf("name"), drains, &costs); c != nil {
				o.entries = append(o.entries, entry{key: "cost", value: c})
			}
		}
		if i == minimum {
			o.entries = append(o.entries, entry{key: "minimum", value: word("true")})
		}
		if i == baseline {
			o.entries = append(o.entries, entry{key: "baseline", value: word("true")})
		} else if i > 0 && k.coin("not the baseline") {
			o.entries = append(o.entries, entry{key: "baseline", value: word("false")})
		}
		list.items = append(list.items, o)
	}
	return list
}

// drawnDrains is what a cost may count in the drains of an option.
type drawnDrains struct{ metres, flushed bool }

// drainsOf looks up what is known of drains, in their own keys and in those that they take over from one of the options
// above.
func (k *sketch) drainsOf(root *node, measure string, m *node, above []*node) *drawnDrains {
	e := func(key string) *node {
		if own := m.entry(key); own != nil {
			return own.value
		}
		for _, o := range above {
			if named := m.entry(likeField.name); named != nil && o.textOf("name") == named.value.text {
				if taken := o.entry(measure).value.entry(key); taken != nil {
					return taken.value
				}
			}
		}
		return nil
	}
	d := &drawnDrains{metres: e("spacing") != nil && root.entry("site").value.entry("plan_area") != nil}
	if measure == "bored_drains" {
		d.metres = e("number") != nil && e("length") != nil
	}
	if decline := e("decline"); decline != nil {
		d.flushed = decline.entry("flushed_every") != nil
	}
	return d
}

// drawnCost is a cost that others may take, with the drains that its metres and flushes are for.
type drawnCost struct {
	name, drains       string
	perMetre, perFlush bool
}

// cost draws what an option costs: sums of its own, those of an option above with some of its own over them, or those of
// several; nil where nothing fits.
func (k *sketch) cost(name string, drains map[string]*drawnDrains, above *[]*drawnCost) *node {
	var fit []*drawnCost // what this option can take
	for _, c := range *above {
		d := drains[c.drains]
		if (!c.perMetre || d != nil && d.metres) && (!c.perFlush || d != nil && d.flushed) {
			fit = append(fit, c)
		}
	}
	m := &node{is: blockNode}
	add := func(key string) {
		m.entries = append(m.entries, entry{key: key, value: k.scalar(fieldOf(costShape.fields, key), "options[].cost."+key)})
	}
	like := &node{is: listNode}
	for _, c := range fit {
		if k.coin("like") {
			like.items = append(like.items, word(c.name))
		}
	}
	switch len(like.items) {
	case 0:
		of := "" // the only drains of the option
		for _, key := range []string{"trench_drains", "bored_drains"} {
			if drains[key] != nil {
				of = map[bool]string{true: key, false: "both"}[of == ""]
			}
		}
		c := &drawnCost{name: name}
		only := drains[of]
		if only != nil {
			c.drains = of
		}
		for _, key := range []string{"capital", "per_year"} {
			if k.coin(key) {
				add(key)
			}
		}
		if only != nil && only.metres && k.coin("per_metre") {
			add("per_metre")
			c.perMetre = true
		}
		if only != nil && only.flushed && k.coin("per_flush") {
			add("per_flush")
			c.perFlush = true
		}
		if (m.entry("capital") != nil || m.entry("per_metre") != nil) && k.coin("life") {
			add("life")
		}
		if len(m.entries) == 0 {
			return nil
		}
		*above = append(*above, c)
	case 1:
		for _, key := range []string{"capital", "per_year", "life"} {
			if k.coin(key) {
				add(key)
			}
		}
		m.entries = append(m.entries, entry{key: likeField.name, value: like})
		if k.coin("not a list") {
			m.entries[len(m.entries)-1].value = like.items[0]
		}
	default:
		m.entries = append(m.entries, entry{key: likeField.name, value: like})
	}
	return m
}

// measure draws a measure. It is the option's own if it is not taken from another.
func (k *sketch) measure(root *node, f *field, above []*node) (m *node, own bool) {
	path := "options[]." + f.name
	draw := func(key string) *node {
		inner := fieldOf(f.shape.fields, key)
		return k.value(inner, join(path, key))
	}
	m = &node{is: blockNode}
	add := func(key string) { m.entries = append(m.entries, entry{key: key, value: draw(key)}) }
	_, takes := measureFields(f.name)
	source := -1
	if takes && len(above) > 0 && k.coin("like") {
		source = rapid.IntRange(0, len(above)-1).Draw(k.t, "source")
	}
	choice := ""
	if len(f.shape.choice) > 0 && source < 0 {
		choice = rapid.SampledFrom(f.shape.choice).Draw(k.t, "choice")
	}
	for i := range f.shape.fields {
		inner := &f.shape.fields[i]
		at := join(path, inner.name)
		switch {
		case inner.later || inner.name == likeField.name:
		case inner.name == choice:
			add(inner.name)
		case inner.name == "working_head": // half of depth, below
		case slices.Contains(f.shape.choice, inner.name):
		case choice == "rate" && slices.Contains(withSpacing, inner.name):
		case inner.name == "drain_radius" && m.entry("equivalent_depth") != nil, inner.name == "equivalent_depth" && m.entry("drain_radius") != nil:
		case source >= 0 && slices.Contains(withSpacing, inner.name) && above[source].entry(f.name).value.entry("rate") != nil:
		case source >= 0 && inner.name == "depth": // the other may have a working head
		case f.name == "set" && strings.HasPrefix(inner.name, "soil.") && root.entry("ground").value.entry("soil") == nil:
		case f.name == "set" && inner.name == "cover.percolation_ceiling" && k.scheme:
		case inner.need != "" && source < 0 || k.coin(inner.name):
			add(inner.name)
		}
		if at == "options[].vegetation.pet_factor" && !k.pet && m.entry("pet_factor") != nil {
			m.entry("pet_factor").value = word("1")
		}
	}
	if quadratic := m.textOf("law") == "quadratic"; quadratic { // it has no ceiling, and none that is taken over
		m.entries = slices.DeleteFunc(m.entries, func(e entry) bool { return e.key == "ceiling" })
		if source >= 0 || k.coin("no ceiling") {
			m.entries = append(m.entries, entry{key: "ceiling", value: word("none")})
		}
	} else if source >= 0 && above[source].entry(f.name).value.textOf("law") == "quadratic" && m.textOf("law") == "" {
		m.entries = slices.DeleteFunc(m.entries, func(e entry) bool { return e.key == "ceiling" })
	}
	if choice == "spacing" && m.textOf("law") != "quadratic" && k.coin("working_head") {
		depth, err := quantity.Parse(m.textOf("depth"), quantity.Length)
		if err != nil {
			k.t.Fatal(err)
		}
		m.entries = append(m.entries, entry{key: "working_head", value: word(quantity.Format(depth/2, quantity.Length))})
	}
	if source >= 0 {
		m.entries = append(m.entries, entry{key: likeField.name, value: word(above[source].textOf("name"))})
		for _, e := range above[source].entry(f.name).value.entries { // a list is given anew
			if e.value.is == listNode && !replaced(f.name, e.key, m) {
				k.plant(m, e.key, func() *node { return draw(e.key) })
			}
		}
	}
	if len(m.entries) == 0 {
		return nil, false
	}
	return m, source < 0
}

// list puts a list in the place of a number of a measure, if it has one.
func (k *sketch) list(f *field, m *node) bool {
	var spots []int
	for i, e := range m.entries {
		if inner := fieldOf(f.shape.fields, e.key); inner.listable() && e.key != "working_head" && !(e.key == "depth" && m.entry("working_head") != nil) && !(e.key == "pet_factor" && !k.pet) && !(e.key == "ceiling" && m.textOf("law") == "quadratic") {
			spots = append(spots, i)
		}
	}
	if len(spots) == 0 {
		return false
	}
	e := &m.entries[rapid.SampledFrom(spots).Draw(k.t, "spot")]
	list := &node{is: listNode}
	seen := map[string]bool{}
	inner := fieldOf(f.shape.fields, e.key)
	for range rapid.IntRange(1, 3).Draw(k.t, "values") {
		v := k.scalar(inner, "options[]."+f.name+"."+e.key)
		if value := sameValue(v.text, &inner.shape); !seen[value] { // each makes an option
			seen[value] = true
			list.items = append(list.items, v)
		}
	}
	e.value = list
	return true
}

// written is a study as text, in one of the ways in which the format allows it.
func written(t *rapid.T, root *node) string {
	w := &writer{t: t}
	w.block(root, 0, false)
	return w.b.String()
}

// TestSchemaAndReaderAccept: random studies of every key, word, unit and spelling are read, and meet the schema.
func TestSchemaAndReaderAccept(t *testing.T) {
	s := compiledSchema(t)
	rapid.Check(t, func(t *rapid.T) {
		src := written(t, (&sketch{t: t}).study())
		if _, err := Parse("study.yaml", []byte(src)); err != nil {
			t.Fatalf("not read: %v\n%s", err, src)
		}
		v, _ := valueOf(src)
		if err := s.Validate(v); err != nil {
			t.Fatalf("%v\n%s", err, src)
		}
	})
}

// site is a key of a study with its place in the table.
type site struct {
	block *node // that holds it
	at    int   // in its entries
	shape *shape
	field *field
	path  string
}

func (s *site) value() *node     { return s.block.entries[s.at].value }
func (s *site) set(n *node)      { s.block.entries[s.at].value = n }
func (s *site) setText(t string) { s.set(word(t)) }
func (s *site) drop(keys ...string) {
	s.block.entries = slices.DeleteFunc(s.block.entries, func(e entry) bool { return slices.Contains(keys, e.key) })
}

// taken says whether the block of the site takes keys from another option.
func (s *site) taken() bool { return s.block.entry(likeField.name) != nil }

// sites are all keys of a block.
func sites(all []*site, block *node, s *shape, path string) []*site {
	for i := range block.entries {
		e := &block.entries[i]
		f := fieldOf(s.fields, e.key)
		at := join(path, e.key)
		all = append(all, &site{block, i, s, f, at})
		switch {
		case e.value.is == blockNode:
			all = sites(all, e.value, &f.shape, at)
		case f.shape.form == formList:
			for _, item := range e.value.items {
				all = sites(all, item, &f.shape, at+"[]")
			}
		}
	}
	return all
}

// hasUnit says whether the key is a number with a unit and nothing else, but for words.
func (s *site) hasUnit() bool {
	return s.field.shape.form == formQuantity && s.field.shape.bare == "" || s.field.shape.form == formYears
}

func (s *site) single() bool {
	f := s.field.shape.form
	return f != formBlock && f != formList && f != formTexts
}

// listable says whether a list may stand for the key, each of whose values makes an option.
func (s *site) listable() bool {
	return s.field.listable() && listPath(strings.TrimSuffix(s.path, "."+s.field.name))
}

func (s *site) unit() string { return s.field.shape.kind.Unit() }

// faults are the ways to spoil the form of a study. Each says which keys it can be done to.
var faults = []struct {
	name string
	fits func(s *site) bool
	do   func(t *rapid.T, s *site)
}{
	{"unknown key", func(s *site) bool { return true }, func(t *rapid.T, s *site) {
		key := rapid.SampledFrom([]string{"thicknes", "Study", "x", "climates", "snow", "fit"}).Draw(t, "key")
		s.block.entries = append(s.block.entries, entry{key: key, value: word("1 m")})
	}},
	{"missing key", func(s *site) bool { return s.field.need != "" && !s.taken() }, func(t *rapid.T, s *site) { s.drop(s.field.name) }},
	{"no choice", func(s *site) bool { return slices.Contains(s.shape.choice, s.field.name) && !s.taken() }, func(t *rapid.T, s *site) { s.drop(s.field.name) }},
	{"two of a choice", func(s *site) bool { return slices.Contains(s.shape.choice, s.field.name) }, func(t *rapid.T, s *site) {
		others := slices.DeleteFunc(slices.Clone(s.shape.choice), func(key string) bool { return s.block.entry(key) != nil })
		key := rapid.SampledFrom(others).Draw(t, "other")
		s.block.entries = append(s.block.entries, entry{key: key, value: word(fmt.Sprint(fieldOf(s.shape.fields, key).eg))})
	}},
	{"key without another that it needs", func(s *site) bool { return len(s.field.with) > 0 }, func(t *rapid.T, s *site) {
		s.drop(rapid.SampledFrom(s.field.with).Draw(t, "other"))
	}},
	{"excluded key", func(s *site) bool { return len(s.field.not) > 0 }, func(t *rapid.T, s *site) {
		key := rapid.SampledFrom(s.field.not).Draw(t, "other")
		s.drop(key)
		f := fieldOf(s.shape.fields, key)
		s.block.entries = append(s.block.entries, entry{key: key, value: word(fmt.Sprint(f.example()))})
	}},
	{"wrong word", func(s *site) bool { return len(s.field.shape.words) > 0 }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"maybe", "None", "steadily", "cubic", "", "yes or no"}).Draw(t, "word"))
	}},
	{"no unit", (*site).hasUnit, func(t *rapid.T, s *site) { s.setText(rapid.SampledFrom([]string{"12", "1", "1.0"}).Draw(t, "number")) }},
	{"wrong unit", (*site).hasUnit, func(t *rapid.T, s *site) {
		var units []string
		for kind := quantity.Length; kind <= quantity.Share; kind++ {
			for _, u := range kind.Units() {
				if !slices.Contains(s.field.shape.kind.Units(), u) {
					units = append(units, u)
				}
			}
		}
		s.setText("0.5 " + rapid.SampledFrom(append(units, "yards", "M", "mm/week")).Draw(t, "unit"))
	}},
	{"negative", func(s *site) bool { return s.hasUnit() && s.field.shape.limits.sign() != quantity.AnySign }, func(t *rapid.T, s *site) { s.setText("-0.5 " + s.unit()) }},
	{"zero", func(s *site) bool { return s.hasUnit() && s.field.shape.limits.sign() == quantity.Positive }, func(t *rapid.T, s *site) { s.setText("0.0 " + s.unit()) }},
	{"no number", (*site).hasUnit, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"1,5 ", "1 800 ", "010 ", ".5 ", "1. ", "1_000 ", "0x1F ", "1² ", "", "half a ", "\u22123 "}).Draw(t, "number") + s.unit())
	}},
	{"too large a share", func(s *site) bool { return s.hasUnit() && s.field.shape.kind == quantity.Share }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"101 %", "100.5 %", "1000%", rawText + "85", rawText + "1", rawText + "1.0"}).Draw(t, "share"))
	}},
	{"number out of range", func(s *site) bool { return s.field.shape.form == formNumber || s.field.shape.form == formWhole }, func(t *rapid.T, s *site) {
		l := s.field.shape.limits
		s.setText(rawText + rapid.SampledFrom([]string{"-1", quantity.FormatNumber(l.hi + 1), "1e300", ".inf"}).Draw(t, "number"))
	}},
	{"no bare number", func(s *site) bool { return s.field.shape.form == formNumber || s.field.shape.form == formWhole }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"1.5 m", "many", "50 %", "1,5", "true", ""}).Draw(t, "text"))
	}},
	{"no whole number", func(s *site) bool { return s.field.shape.form == formWhole }, func(t *rapid.T, s *site) { s.setText("1500.5") }},
	{"bad name", func(s *site) bool { return s.field.shape.form == formName }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"", " x", "x ", "=x", "+x", "-x", "@x", "As Built", "as recorded", strings.Repeat("x", 61), "a\u2007", rawText + "-5"}).Draw(t, "name"))
	}},
	{"formula", func(s *site) bool { return s.field.shape.cell }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"=1+1", "+x", "- x", "@home", rawText + "-5"}).Draw(t, "formula"))
	}},
	{"blank text", func(s *site) bool { return s.field.shape.form == formFilled }, func(t *rapid.T, s *site) {
		s.setText(rapid.SampledFrom([]string{"", "  ", "\u3000"}).Draw(t, "text"))
	}},
	{"until in another way", func(s *site) bool { return s.field.shape.bare != "" }, func(t *rapid.T, s *site) {
		s.setText(map[bool]string{true: "3 m", false: "1.1"}[s.block.entry(s.field.shape.bare) != nil])
	}},
	{"block for one value", (*site).single, func(t *rapid.T, s *site) {
		s.set(&node{is: blockNode, entries: []entry{{key: "value", value: s.value()}}})
	}},
	{"list for one value", func(s *site) bool {
		return s.single() && s.field.shape.form != formOneOrMore && !s.listable()
	}, func(t *rapid.T, s *site) {
		s.set(&node{is: listNode, items: []*node{s.value()}})
	}},
	{"text for a block or list", func(s *site) bool { return !s.single() }, func(t *rapid.T, s *site) { s.setText("12 m") }},
	{"list for a block", func(s *site) bool { return s.field.shape.form == formBlock }, func(t *rapid.T, s *site) {
		s.set(&node{is: listNode, items: []*node{s.value()}})
	}},
	{"block for a list", func(s *site) bool { return s.field.shape.form == formList }, func(t *rapid.T, s *site) { s.set(s.value().items[0]) }},
	{"text in a list of blocks", func(s *site) bool { return s.field.shape.form == formList }, func(t *rapid.T, s *site) {
		s.value().items = append(s.value().items, word("12 m"))
	}},
	{"empty list", func(s *site) bool { return s.field.shape.form == formList || s.field.listable() }, func(t *rapid.T, s *site) { s.set(&node{is: listNode}) }},
	{"block in a list", func(s *site) bool { return s.value().is == listNode && s.field.shape.form != formList }, func(t *rapid.T, s *site) {
		s.value().items = append(s.value().items, &node{is: blockNode, entries: []entry{{key: "value", value: word("12 m")}}})
	}},
	{"wrong value in a list", (*site).listable, func(t *rapid.T, s *site) {
		if s.value().is != listNode {
			s.set(&node{is: listNode, items: []*node{s.value()}})
		}
		s.value().items = append(s.value().items, word(rapid.SampledFrom([]string{"many", "0.5 kN", "1,5 m", rawText + "null", ""}).Draw(t, "value")))
	}},
	{"one value twice", func(s *site) bool { return s.value().is == listNode && s.field.listable() }, func(t *rapid.T, s *site) {
		again := rawText + s.value().items[0].text
		s.value().items = []*node{word(again), word(again)}
	}},
	{"long list", (*site).listable, func(t *rapid.T, s *site) {
		list := &node{is: listNode}
		for i := range mostValues + 1 {
			text := quantity.FormatNumber(1 + float64(i)/1000)
			if s.field.shape.form == formQuantity {
				text += " " + s.unit()
			}
			list.items = append(list.items, word(text))
		}
		s.set(list)
	}},
	{"nothing", func(s *site) bool { return true }, func(t *rapid.T, s *site) {
		s.setText(rawText + rapid.SampledFrom([]string{"", "~", "null"}).Draw(t, "null"))
	}},
	{"nothing set", func(s *site) bool { return s.field.shape.filled }, func(t *rapid.T, s *site) { s.set(&node{is: blockNode}) }},
}

// TestSchemaAndReaderRefuse: a study with one fault of form is refused by both.
func TestSchemaAndReaderRefuse(t *testing.T) {
	s := compiledSchema(t)
	rapid.Check(t, func(t *rapid.T) {
		root := (&sketch{t: t}).study()
		all := sites(nil, root, &studyShape, "")
		var fit []*site
		i := rapid.IntRange(0, len(faults)-1).Draw(t, "fault")
		for _, s := range all {
			if faults[i].fits(s) {
				fit = append(fit, s)
			}
		}
		if len(fit) == 0 {
			t.Skip("no place for it")
		}
		at := rapid.SampledFrom(fit).Draw(t, "place")
		faults[i].do(t, at)
		src := written(t, root)
		what := faults[i].name + " at " + at.path
		if _, err := Parse("study.yaml", []byte(src)); err == nil {
			t.Fatalf("%s: read\n%s", what, src)
		}
		if v, ok := valueOf(src); !ok {
			t.Fatalf("%s: no tree\n%s", what, src)
		} else if s.Validate(v) == nil {
			t.Fatalf("%s: meets the schema\n%s", what, src)
		}
	})
}
