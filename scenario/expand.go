package scenario

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
)

// mostValues is the largest number of values of a list, and so of the options that it makes.
const mostValues = 100

// expandOptions rewrites the options of a tree so that the decoder sees each as if it had been written out: what "like"
// names is put in its place, and a list of values makes one option of each.
func expandOptions(root *node, found *problems) {
	list := root.entry("options")
	if list == nil || list.value == nil || list.value.is != listNode {
		return
	}
	x := &expander{problems: found, places: map[string]int{}}
	marked := slices.ContainsFunc(list.value.items, func(item *node) bool {
		return item != nil && item.textOf("baseline") == "true"
	})
	for _, item := range list.value.items {
		if item != nil && item.is == blockNode {
			x.names = append(x.names, item.textOf("name"))
		}
	}
	var items []*node
	for _, item := range list.value.items {
		if item == nil || item.is != blockNode {
			items = append(items, item)
			continue
		}
		x.key = fmt.Sprintf("options[%d]", len(items))
		o := x.written(item)
		x.oneName(&o)
		if fold := foldKey(o.name); x.place(o.name) < 0 {
			x.places[fold] = len(x.above)
		}
		x.above = append(x.above, o)
		made := x.perValue(o.item)
		if len(items) == 0 && len(made) > 1 && !marked {
			e := item.entries[0]
			x.add(x.at(e.line, e.col), "the first option is the baseline, and its list makes several; put the ground as it is first, or mark another option with baseline: true")
		}
		items = append(items, made...)
	}
	copied := *list.value
	copied.items = items
	list.value = &copied
}

// entry is the entry of a key, nil where the block does not have it.
func (n *node) entry(key string) *entry {
	for i := range n.entries {
		if n.entries[i].key == key {
			return &n.entries[i]
		}
	}
	return nil
}

// textOf is the text of a key, "" where there is none.
func (n *node) textOf(key string) string {
	if e := n.entry(key); e != nil && e.value != nil && e.value.is == textNode {
		return e.value.text
	}
	return ""
}

// expander expands the options from the first to the last.
type expander struct {
	*problems
	above  []writtenOption
	places map[string]int // of the first of each name among them, by foldKey
	names  []string       // of all options, as written
	key    string         // of the option in hand, as the decoder will number it
}

// at is the place of a part of the option in hand.
func (x *expander) at(line, col int, keys ...string) Place {
	key := x.key
	for _, k := range keys {
		key = join(key, k)
	}
	return Place{Line: line, Col: col, Key: key}
}

// writtenOption is an option of the file with every "like" resolved, but with its list.
type writtenOption struct {
	name string
	item *node
	from map[string]string // by measure: the option that it was taken from
}

// oneName refuses the name of an option that an option above has, where one of the two has a list: their made names may
// differ, but like could mean either.
func (x *expander) oneName(o *writtenOption) {
	i := x.place(o.name)
	if i < 0 || o.name == "" || len(lists(o.item)) == 0 && len(lists(x.above[i].item)) == 0 {
		return
	}
	e := o.item.entry("name")
	x.add(x.at(e.value.line, e.value.col, "name"), "the option in line %d has the name %s already; %s", x.above[i].item.entry("name").line, quoted(x.above[i].name), namesCount)
}

// place is the place of the first option above with a name, -1 where there is none.
func (x *expander) place(name string) int {
	if i, ok := x.places[foldKey(name)]; ok {
		return i
	}
	return -1
}

// measureFields are the keys of an option that hold a measure, by name.
func measureFields(key string) (fields []field, like bool) {
	for i := range optionFields {
		if f := &optionFields[i]; f.name == key && key != "cost" && f.shape.form == formBlock && !f.later {
			return f.shape.fields, slices.ContainsFunc(f.shape.fields, func(f field) bool { return f.name == likeField.name })
		}
	}
	return nil, false
}

// written resolves every like of an option.
func (x *expander) written(item *node) writtenOption {
	o := writtenOption{name: item.textOf("name"), from: map[string]string{}}
	copied := *item
	copied.entries = slices.Clone(item.entries)
	o.item = &copied
	for i := range copied.entries {
		e := &copied.entries[i]
		if _, like := measureFields(e.key); !like || e.value == nil || e.value.is != blockNode {
			continue
		}
		if named := e.value.entry(likeField.name); named != nil {
			e.value = x.merged(&o, e.key, e.value, named)
		}
	}
	return o
}

// merged is a measure with the keys of the one that it names put before its own. Where that cannot be had the measure is
// marked as partial, so that nobody misses its keys.
func (x *expander) merged(o *writtenOption, measure string, own *node, named *entry) *node {
	out := *own
	out.partial = true
	if named.value == nil || named.value.is != textNode {
		return &out
	}
	name, at := named.value.text, x.at(named.value.line, named.value.col, measure, named.key)
	o.from[measure] = name
	i := x.place(name)
	if i < 0 {
		x.unknownOption(at, measure, name, o.name)
		return &out
	}
	source := x.above[i].item.entry(measure)
	switch from := x.above[i].from[measure]; {
	case source == nil:
		x.add(at, "the option %s has no %s; %s", quoted(name), measure, x.having(measure))
		return &out
	case from != "" && source.value != nil && source.value.partial: // that of the other was refused
		return &out
	case from != "":
		x.add(at, "%s takes its %s from another option itself; write like: %s", quoted(name), measure, listText(from))
		return &out
	case source.value == nil || source.value.is != blockNode: // reported, or about to be
		return &out
	}
	var taken []entry
	for _, e := range source.value.entries {
		switch {
		case own.entry(e.key) != nil || replaced(measure, e.key, own):
		case e.value != nil && e.value.is == listNode:
			x.add(at, "%s is a list in the option %s, and a list is not taken; give %s here", e.key, quoted(name), e.key)
			return &out
		default:
			taken = append(taken, e)
		}
	}
	out.entries = append(taken, own.entries...)
	out.partial = source.value.partial
	return &out
}

// replaced reports whether a key of a measure that is taken over has no place beside what the option gives: a rate stands
// instead of a spacing with all that belongs to it, and the other way round; an equivalent_depth instead of the drain_radius
// from which it would be computed; and the quadratic law has no working_head.
func replaced(measure, key string, own *node) bool {
	if measure != "trench_drains" {
		return false
	}
	if own.entry("rate") != nil && slices.Contains(withSpacing, key) {
		return true
	}
	switch key {
	case "rate":
		return own.entry("spacing") != nil
	case "equivalent_depth":
		return own.entry("drain_radius") != nil
	case "drain_radius":
		return own.entry("equivalent_depth") != nil
	case "working_head":
		return own.textOf("law") == "quadratic"
	}
	return false
}

// withSpacing are the keys of trench_drains that have a meaning beside a spacing only, and the spacing.
var withSpacing = []string{"spacing", "conductivity", "conductivity_below", "drain_radius", "equivalent_depth", "working_head", "law"}

// unknownOption reports a like that names no option above.
func (x *expander) unknownOption(at Place, measure, name, own string) {
	var above []string
	for _, w := range x.above {
		above = append(above, w.name)
		for _, s := range lists(w.item) {
			e := w.item.entries[s.measure].value.entries[s.key]
			if slices.ContainsFunc(e.value.items, func(v *node) bool { return v != nil && madeName(w.name, e.key, v.text) == name }) {
				x.add(at, "%s is one of the options that a list makes; write like: %s, and give %s beside it", quoted(name), listText(w.name), e.key)
				return
			}
		}
	}
	switch near := fault.Nearest(name, above); {
	case sameName(name, own):
		x.add(at, "this is the option itself; %s", x.having(measure))
	case indexOfName(x.names, name) >= 0:
		x.add(at, "the option %s stands below; only an option above can be named, so change their order", quoted(name))
	case near != "":
		x.add(at, "no option above is named %s; did you mean %s?", quoted(name), quoted(near))
	default:
		x.add(at, "no option above is named %s; %s", quoted(name), x.having(measure))
	}
}

// having lists the options above that have a measure of their own.
func (x *expander) having(measure string) string {
	var names []string
	for _, w := range x.above {
		if w.item.entry(measure) != nil && w.from[measure] == "" {
			names = append(names, w.name)
		}
	}
	if len(names) == 0 {
		return "no option above has one, so write its keys out"
	}
	return "those above that have one are " + quotedWords(names, "and")
}

// spot is where an option has a list: in which entry of it, and in which entry of that.
type spot struct{ measure, key int }

// lists finds the lists of an option that stand for a number.
func lists(item *node) []spot {
	var spots []spot
	for i, e := range item.entries {
		fields, _ := measureFields(e.key)
		if e.value == nil || e.value.is != blockNode {
			continue
		}
		for j, inner := range e.value.entries {
			f := slices.IndexFunc(fields, func(f field) bool { return f.name == inner.key })
			if f >= 0 && fields[f].listable() && inner.value != nil && inner.value.is == listNode {
				spots = append(spots, spot{i, j})
			}
		}
	}
	return spots
}

// listable reports whether a list may stand for the key in a measure: it is a number or a quantity.
func (f *field) listable() bool {
	switch f.shape.form {
	case formNumber, formWhole, formQuantity:
		return !f.later
	}
	return false
}

// perValue makes one option of each value of an option's list, and the option itself where it has none.
func (x *expander) perValue(item *node) []*node {
	spots := lists(item)
	if len(spots) == 0 {
		return []*node{item}
	}
	measure := item.entries[spots[0].measure].key
	first := item.entries[spots[0].measure].value.entries[spots[0].key]
	refuse := func(p Place, format string, args ...any) []*node {
		x.add(p, format, args...)
		return []*node{with(item, spots[0], nil, item.textOf("name"))}
	}
	if len(spots) > 1 {
		second := item.entries[spots[1].measure].value.entries[spots[1].key]
		bare := with(item, spots[0], nil, item.textOf("name"))
		x.add(x.at(second.line, second.col, item.entries[spots[1].measure].key, second.key), "%s has a list already; an option has one list at most, so write an option for each value of one of them", first.key)
		for _, s := range spots[1:] {
			bare = with(bare, s, nil, item.textOf("name"))
		}
		return []*node{bare}
	}
	at := x.at(first.value.line, first.value.col, measure, first.key)
	switch n := len(first.value.items); {
	case n == 0:
		return refuse(at, "the list is empty; write at least one value")
	case n > mostValues:
		return refuse(at, "the list has %d values; at most %d make an option each", n, mostValues)
	}
	for _, only := range []string{"baseline", "minimum"} {
		if mark := item.entry(only); mark != nil && item.textOf(only) == "true" && len(first.value.items) > 1 {
			return refuse(x.at(mark.line, mark.col, mark.key), "the list of %s makes several options, and only one can be the %s; mark another one", first.key, only)
		}
	}
	if e := item.entry("name"); e != nil && e.value != nil && e.value.is == textNode && checkName(e.value.text) != "" {
		return []*node{with(item, spots[0], first.value.items[0], e.value.text)} // so that the name is refused as it is written
	}
	fields, _ := measureFields(measure)
	number := &fields[slices.IndexFunc(fields, func(f field) bool { return f.name == first.key })].shape // lists found it
	if hint := x.withoutUnit(number, first.value.items); hint != "" {
		return refuse(at, "%s", hint)
	}
	var made []*node
	seen := map[string]string{} // texts, by value
	longest := ""
	for _, v := range first.value.items {
		if v == nil { // reported
			continue
		}
		place, value := x.at(v.line, v.col, measure, first.key), sameValue(v.text, number)
		switch twin := seen[value]; {
		case v.is != textNode:
			x.add(place, "a value is wanted in this list, such as [8 m, 12 m]")
		case twin == v.text:
			x.add(place, "%s stands twice in this list; keep one of them", quoted(v.text))
		case twin != "":
			x.add(place, "%s is %s in other words; keep one of them", quoted(v.text), quoted(twin))
		default:
			seen[value] = v.text
			name := madeName(item.textOf("name"), first.key, v.text)
			if utf8.RuneCountInString(name) > utf8.RuneCountInString(longest) {
				longest = name
			}
			one := with(item, spots[0], v, name)
			one.made.list, one.made.varied = item.textOf("name"), join(measure, first.key)
			made = append(made, one)
		}
	}
	if n, e := utf8.RuneCountInString(longest), item.entry("name"); n > longestName && e != nil {
		return refuse(x.at(e.line, e.col, e.key), "with its value the name of an option of the list has %d characters, as in %s; a name has at most %d, so shorten it", n, strconv.Quote(longest), longestName)
	}
	if len(made) == 0 {
		return []*node{with(item, spots[0], nil, item.textOf("name"))}
	}
	return made
}

// sameValue is the same text for all texts of one value.
func sameValue(text string, s *shape) string {
	v, err := quantity.ParseNumber(text)
	if s.form == formQuantity {
		v, err = quantity.Parse(text, s.kind)
	}
	if err != nil {
		return text
	}
	return quantity.FormatNumber(v)
}

// withoutUnit says what to write for a list of quantities of which some have no unit, as in [8, 12, 24 m], and "" for any
// other.
func (x *expander) withoutUnit(number *shape, items []*node) string {
	kind := number.kind
	if number.form != formQuantity || number.bare != "" || kind == quantity.Share {
		return ""
	}
	unit, bare := kind.Unit(), 0
	for _, v := range items {
		if v == nil || v.is != textNode || !strings.ContainsFunc(v.text, isDigit) {
			return ""
		}
		if cut := strings.TrimSpace(strings.TrimLeft(v.text, "+-.0123456789eE")); cut != "" {
			unit = cut
		}
	}
	var right, joined []string // with a unit each; with the parts of a number that a decimal comma cut in two put together
	whole := ""
	for _, v := range items {
		text := v.text
		cut := false
		if _, err := quantity.ParseNumber(text); err == nil {
			bare++
			line, next := []rune(x.src.line(v.line)), v.col-1+len([]rune(text))
			cut = whole == "" && next+1 < len(line) && line[next] == ',' && isDigit(line[next+1])
			text += " " + unit
		}
		if _, err := quantity.Parse(text, kind); err != nil {
			return ""
		}
		right = append(right, text)
		if cut {
			whole = v.text + "."
		} else {
			joined = append(joined, whole+text)
			whole = ""
		}
	}
	switch {
	case bare == 0:
		return ""
	case len(joined) < len(right):
		return fmt.Sprintf("a comma ends an item of a list, so none can stand in a number; write [%s], or [%s]", cutText(strings.Join(joined, ", ")), cutText(strings.Join(right, ", ")))
	}
	return fmt.Sprintf("every value of a list has its unit; write [%s]", cutText(strings.Join(right, ", ")))
}

// madeName is the name of the option that a value of a list makes.
func madeName(name, key, value string) string { return fmt.Sprintf("%s, %s %s", name, key, value) }

// with is an option under another name with another value at a spot. Without a value the key counts as given, but refused.
func with(item *node, s spot, value *node, name string) *node {
	out := *item
	out.entries = slices.Clone(item.entries)
	measure := *out.entries[s.measure].value
	measure.entries = slices.Clone(measure.entries)
	measure.entries[s.key].value = value
	out.entries[s.measure].value = &measure
	if e := out.entry("name"); e != nil && e.value != nil && e.value.is == textNode {
		text := *e.value
		text.text = name
		e.value = &text
	}
	return &out
}
