package scenario

import (
	"cmp"
	"fmt"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
)

// value is what one key of the study holds, read by its shape.
type value struct {
	place Place
	given bool    // the study has the key
	bad   bool    // given, and reported
	num   float64 // of a number or quantity, in the base unit; NaN where there is none, so that comparisons are false
	text  string  // as typed, or the word
	word  bool    // text is one of the shape's words
	bare  bool    // a bare number where the shape allows one beside a quantity
	texts []string
	block *blockValue
	items []*value // of a list
	shown string   // value in force as text, for Understood; "" leaves it to text and num
}

// blockValue is a block with its values by key. Order lists the keys that the study gives in the order of the file.
type blockValue struct {
	place   Place
	values  map[string]*value
	order   []string
	later   []string // keys that were refused as not supported yet
	empty   bool     // the study gives it without any key
	partial bool     // keys that it needs are not missing: what they were to be taken from was refused
	made    made     // of an option
}

// get returns the value of a key. It is never nil.
func (b *blockValue) get(key string) *value {
	if b != nil {
		if v := b.values[key]; v != nil {
			return v
		}
	}
	return &value{num: math.NaN()}
}

// isLater says whether the block has a key that was refused as not supported yet.
func (b *blockValue) isLater(keys ...string) bool {
	return b != nil && slices.ContainsFunc(keys, func(k string) bool { return slices.Contains(b.later, k) })
}

// sub returns the block of a key, nil where there is none. A nil block has no values.
func (b *blockValue) sub(key string) *blockValue { return b.get(key).block }

// or returns the number, or instead where the key is left out and nothing stands in for it.
func (v *value) or(instead float64) float64 {
	if v.given || !math.IsNaN(v.num) {
		return v.num
	}
	return instead
}

// decoder reads a tree by the table of keys.
type decoder struct {
	*problems
	places map[string]Place
	// What is said once, though it holds for several bands or options; of money also what need not be said.
	misordered, noConductivity, noMoney, noPlanArea bool

	costs []optionCost // of the options of the file so far
	named []string     // the options of the file
}

// readBlock reads the keys of a block. A nil node stands for a block that is left out and whose keys all have
// something that stands in for them.
func (d *decoder) readBlock(n *node, fields []field, place Place) *blockValue {
	b := &blockValue{place: place, values: map[string]*value{}}
	given := map[string]*node{}
	refused := map[string]bool{} // present, but without a value that can be read
	if n != nil {
		b.empty, b.partial, b.made = len(n.entries) == 0, n.partial, n.made
		known := make([]string, 0, len(fields))
		for _, f := range fields {
			known = append(known, f.name)
		}
		for _, e := range n.entries {
			at := Place{Line: e.line, Col: e.col, Key: join(place.Key, e.key)}
			i := slices.Index(known, e.key)
			switch {
			case i < 0:
				if meant := d.unknownKey(at, e.key, place.Key, fields); meant != "" {
					refused[meant] = true // said already
				}
				continue
			case fields[i].later:
				d.add(at, "%s is not supported yet", e.key)
				b.later = append(b.later, e.key)
				continue
			}
			b.order = append(b.order, e.key)
			if e.value == nil {
				refused[e.key] = true
				continue
			}
			given[e.key] = e.value
			d.places[at.Key] = at
		}
	}
	for i := range fields {
		f := &fields[i]
		if f.later {
			continue
		}
		at := Place{Line: place.Line, Col: place.Col, Key: join(place.Key, f.name)}
		switch v := given[f.name]; {
		case v != nil:
			b.values[f.name] = d.readValue(v, &f.shape, at.Key)
		case refused[f.name]:
			b.values[f.name] = &value{place: at, given: true, bad: true, num: math.NaN()}
		case f.need != "" && b.partial:
			b.values[f.name] = &value{place: at, bad: true, num: math.NaN()}
		case f.need != "":
			above := ""
			if i := strings.LastIndexByte(place.Key, '['); f.name == "name" && i >= 0 && !strings.HasSuffix(place.Key, "[0]") {
				above = ", or delete the - if these keys belong to the item above"
			}
			d.add(at, "the key is missing; give %s%s", f.needed(), above)
			b.values[f.name] = &value{place: at, bad: true, num: math.NaN()}
		default:
			b.values[f.name] = d.standIn(f, at)
		}
	}
	return b
}

// needed is what must be given for the key.
func (f *field) needed() string {
	if strings.HasSuffix(strings.TrimSuffix(f.need, ":"), "such as") {
		return f.need + " " + f.eg
	}
	return f.need
}

// join adds a key to the path of its block. A key that no study has, and that would only spoil a message, is left out.
func join(path, key string) string {
	switch {
	case utf8.RuneCountInString(key) > longestName || !oneLine(key):
		return path
	case path == "":
		return key
	}
	return path + "." + key
}

// standIn is the value of a key that is left out.
func (d *decoder) standIn(f *field, at Place) *value {
	v := &value{place: at, num: math.NaN(), text: f.def}
	switch {
	case f.shape.form == formBlock && f.def == "" && !f.quiet:
		v.block = d.readBlock(nil, f.shape.fields, at)
	case f.shape.form == formTexts:
		v.texts = []string{"", "NA"}
	case f.def == "" || f.def == "none" || f.def == "unknown":
	default:
		quiet := &decoder{problems: &problems{}, places: map[string]Place{}}
		read := quiet.readScalar(&node{text: f.def}, &f.shape, at)
		if len(quiet.list) > 0 {
			panic("the default of " + at.Key + " cannot be read")
		}
		v.num, v.text, v.word = read.num, read.text, read.word
	}
	return v
}

// unknownKey reports a key that the block does not have, and returns the key that may have been meant.
func (d *decoder) unknownKey(at Place, key, path string, fields []field) string {
	var known []string
	for _, f := range fields {
		if !f.later {
			known = append(known, f.name)
		}
	}
	if len(known) == len(settable) && known[0] == settable[0].name {
		return d.unknownSetting(at, key, known)
	}
	near, note := meantKey(key, path, known)
	elsewhere := blocksWith(key, &studyShape, "")
	if near == "" && len(elsewhere) == 0 {
		near = partOf(key, known)
	}
	switch {
	case near != "":
		d.add(at, "unknown key; did you mean %s%s?", near, note)
	case blockOf(path) == "options" && slices.ContainsFunc(settable, func(f field) bool { return f.name == key }):
		d.add(at, "a number of ground is changed under set; write set: {%s: …}", key)
	case len(elsewhere) > 0:
		here := ""
		if len(known) <= 8 {
			here = "; the keys here are " + fault.Words(known, "and")
		}
		d.add(at, "this key does not belong here; it stands under %s%s", fault.Words(elsewhere, "or"), here)
	default:
		d.add(at, "unknown key; the keys here are %s", fault.Words(known, "and"))
	}
	return near
}

// unknownSetting is unknownKey of a set.
func (d *decoder) unknownSetting(at Place, key string, known []string) string {
	var ends, begins []string
	for _, k := range known {
		if strings.HasSuffix(k, "."+key) {
			ends = append(ends, k)
		}
		if strings.HasPrefix(k, key+".") {
			begins = append(begins, k)
		}
	}
	near := fault.Nearest(key, known)
	switch short := strings.TrimPrefix(key, "ground."); {
	case slices.Contains(known, short):
		d.add(at, "set names the numbers of ground without that word; write %s", short)
	case strings.HasSuffix(key, "thickness"):
		d.add(at, "a thickness cannot be set, because levels and drains hang on it; write a study of its own for it")
	case len(begins) > 0:
		d.add(at, "set names each number in one word; write %s", fault.Words(begins, "or"))
	case len(ends) > 0:
		d.add(at, "unknown key; did you mean %s?", fault.Words(ends, "or"))
	case near != "":
		d.add(at, "unknown key; did you mean %s? The keys of set are %s", near, fault.Words(known, "and"))
	default:
		d.add(at, "unknown key; the keys of set are %s", fault.Words(known, "and"))
	}
	return near
}

// blocksWith lists the blocks that have a key, in words.
func blocksWith(key string, s *shape, path string) []string {
	var in []string
	for i := range s.fields {
		f := &s.fields[i]
		if f.name == key {
			if path == "" {
				in = append(in, "the study itself")
			} else {
				in = append(in, path)
			}
		}
		if f.name != "set" {
			in = append(in, blocksWith(key, &f.shape, join(path, f.name))...)
		}
	}
	return in
}

// readValue reads what stands after a key.
func (d *decoder) readValue(n *node, s *shape, key string) *value {
	at := Place{Line: n.line, Col: n.col, Key: key}
	v := &value{place: at, given: true, num: math.NaN()}
	bad := func(format string, args ...any) *value {
		d.add(at, format, args...)
		v.bad = true
		return v
	}
	switch s.form {
	case formBlock:
		switch {
		case n.is == blockNode:
			// The key is a better place than the brace or the first key inside.
			if p, ok := d.places[key]; ok {
				v.place = p
			}
			v.block = d.readBlock(n, s.fields, v.place)
			return v
		case n.is == textNode && len(s.words) > 0:
			if slices.Contains(s.words, n.text) {
				v.text, v.word = n.text, true
				return v
			}
			if hint := cmp.Or(noBlank(n.text), s.hinted(n.text)); hint != "" {
				return bad("%s", hint)
			}
			return bad("%s is neither %s nor a block such as %s", quoted(n.text), fault.Words(s.words, "nor"), blockForm(s))
		case n.is == textNode:
			if hint := cmp.Or(noBlank(n.text), s.hinted(n.text)); hint != "" {
				return bad("%s", hint)
			}
			return bad("a block of keys such as %s is wanted here, not the text %s", blockForm(s), quoted(n.text))
		}
		return bad("a block of keys such as %s is wanted here, not a list", blockForm(s))
	case formList:
		if p, ok := d.places[key]; ok {
			v.place = p
		}
		switch {
		case n.is != listNode:
			return bad("a list is wanted here, each item beginning with a - and a blank")
		case len(n.items) == 0:
			return bad("the list is empty; at least one item is needed")
		}
		for i, item := range n.items {
			v.items = append(v.items, d.readItem(item, s, fmt.Sprintf("%s[%d]", key, i), v.place))
		}
		return v
	case formTexts:
		return d.readTexts(n, s, v)
	case formOneOrMore:
		if n.is == listNode {
			return d.readTexts(n, s, v)
		}
	}
	switch n.is {
	case blockNode:
		if len(s.later) > 0 {
			return bad("%s other than %s is not supported yet", lastOf(key), fault.Words(s.words, "or"))
		}
		return bad("one value is wanted here, not a block of keys")
	case listNode:
		switch {
		case strings.Contains(key, "].cost.") || strings.Contains(key, ".decline."):
			return bad("one value is wanted here; a list may stand only for a number of the measure itself, not in its decline or in a cost; write an option for each value")
		case strings.HasPrefix(key, "options["):
			return bad("one value is wanted here; only a number of a measure may be a list, which makes an option of each value")
		}
		return bad("one value is wanted here, not a list")
	}
	read := d.readScalar(n, s, at)
	d.places[key] = at
	return read
}

// readItem reads one block of a list of blocks.
func (d *decoder) readItem(n *node, s *shape, key string, list Place) *value {
	if n == nil { // reported already
		return &value{place: Place{Line: list.Line, Col: list.Col, Key: key}, given: true, bad: true, num: math.NaN()}
	}
	at := Place{Line: n.line, Col: n.col, Key: key}
	v := &value{place: at, given: true, num: math.NaN()}
	d.places[key] = at
	if n.is != blockNode {
		hint := noBlank(n.text)
		switch form := blockForm(s); {
		case hint != "":
		case n.is == listNode:
			hint = fmt.Sprintf("a block of keys such as %s is wanted here, between { and }, not a list", form)
		case s.fields[0].name == "name":
			hint = fmt.Sprintf("a block of keys such as %s is wanted here; write name: %s", form, cutText(n.text))
		default:
			hint = fmt.Sprintf("a block of keys such as %s is wanted here", form)
		}
		d.add(at, "%s", hint)
		v.bad = true
		return v
	}
	if hint := namedByKey(n, s); hint != "" {
		d.add(at, "%s", hint)
		v.bad = true
		return v
	}
	v.block = d.readBlock(n, s.fields, at)
	return v
}

// namedByKey says what to write for an item such as "watch: 3.6 m", whose name stands in the place of a key.
func namedByKey(n *node, s *shape) string {
	if len(n.entries) != 1 || n.entries[0].value == nil || n.entries[0].value.is != textNode || len(s.fields) < 2 || s.fields[1].name != "level" {
		return ""
	}
	e := n.entries[0]
	if studyKeys()[e.key] || e.key == "" || fault.Nearest(e.key, []string{"name", "level", "elevation"}) != "" {
		return ""
	}
	return fmt.Sprintf("the name of an item is a value of its own; write {name: %s, level: %s}", cutText(listText(e.key)), cutText(e.value.text))
}

// readTexts reads a list of texts.
func (d *decoder) readTexts(n *node, s *shape, v *value) *value {
	if n.is != listNode {
		if n.is == textNode {
			var texts []string
			for _, text := range strings.FieldsFunc(n.text, func(r rune) bool { return !n.quoted && (r == ',' || r == ';') }) {
				texts = append(texts, listText(strings.TrimSpace(text)))
			}
			d.add(v.place, "a list is wanted here; write [%s]", cmp.Or(strings.Join(texts, ", "), `""`))
		} else {
			d.add(v.place, `a list of texts is wanted here, such as ["", NA]`)
		}
		v.bad = true
		return v
	}
	d.places[v.place.Key] = v.place
	if len(n.items) == 0 && s.form == formOneOrMore {
		d.add(v.place, "the list is empty; at least one text is needed")
		v.bad = true
		return v
	}
	if len(n.items) > s.most {
		d.add(v.place, "the list has %d items; at most %d are read", len(n.items), s.most)
		v.bad = true
		return v
	}
	v.texts = []string{}
	for i, item := range n.items {
		if item == nil { // reported already
			continue
		}
		at := Place{Line: item.line, Col: item.col, Key: fmt.Sprintf("%s[%d]", v.place.Key, i)}
		switch {
		case item.is != textNode:
			d.add(at, "a text is wanted in this list")
			v.bad = true
		case !oneLine(item.text):
			d.add(at, "the text %s is not one line of plain text", quoted(item.text))
			v.bad = true
		default:
			v.texts = append(v.texts, item.text)
		}
	}
	return v
}

// listText writes a text as an item of a list, between quotes where it needs them.
func listText(text string) string {
	if text == "" || strings.ContainsAny(text, `,:#[]{}"'&*!|>%@-?`+"`") || strings.TrimSpace(text) != text {
		return `"` + strings.ReplaceAll(strings.ReplaceAll(text, `\`, `\\`), `"`, `\"`) + `"`
	}
	return text
}

// oneLine says whether a text, whose escapes may have brought anything in, is one line of visible text.
func oneLine(text string) bool {
	return !strings.ContainsFunc(text, func(r rune) bool {
		return unicode.IsControl(r) || r == '\u2028' || r == '\u2029' || r == '\ufeff' || r == unicode.ReplacementChar || unicode.Is(unicode.Bidi_Control, r)
	})
}

// blockForm shows the form of a block by the keys that it cannot do without.
func blockForm(s *shape) string {
	var keys []string
	for _, f := range s.fields {
		if f.need != "" {
			keys = append(keys, f.name+": …")
		}
	}
	switch {
	case len(keys) == 0 && len(s.choice) > 0:
		return "{" + strings.Join(s.choice, ": …}, {") + ": …}"
	case len(keys) == 0:
		for _, f := range s.fields[:min(2, len(s.fields))] {
			keys = append(keys, f.name+": …")
		}
	}
	return "{" + strings.Join(keys, ", ") + "}"
}

// lastOf is the last key of a path.
func lastOf(key string) string { return key[strings.LastIndexByte(key, '.')+1:] }

// readScalar reads a text by its shape.
func (d *decoder) readScalar(n *node, s *shape, at Place) *value {
	v := &value{place: at, given: true, num: math.NaN(), text: n.text}
	bad := func(format string, args ...any) *value {
		d.add(at, format, args...)
		v.bad, v.num = true, math.NaN()
		return v
	}
	if !oneLine(n.text) {
		return bad("the text %s is not one line of plain text", quoted(n.text))
	}
	if s.form != formText && s.form != formFilled && s.form != formName && s.form != formOneOrMore {
		if slices.Contains(s.words, n.text) {
			v.word = true
			return v
		}
		if slices.Contains(s.later, n.text) {
			return bad("%s: %s is not supported yet; write %s", lastOf(at.Key), n.text, fault.Words(s.words, "or"))
		}
	}
	if s.cell && n.text != "" && strings.ContainsRune(formulaSigns, rune(n.text[0])) {
		return bad("%s: a text here does not begin with %c, because a spreadsheet would take it for a formula", quoted(n.text), n.text[0])
	}
	var err error
	switch s.form {
	case formText:
	case formFilled, formOneOrMore:
		if strings.TrimSpace(n.text) == "" {
			return bad("a text is wanted here, and this one is blank")
		}
		if s.form == formOneOrMore {
			v.texts = []string{n.text}
		}
	case formName:
		if wrong := checkName(n.text); wrong != "" {
			return bad("%s: %s", quoted(n.text), wrong)
		}
	case formWord:
		return bad("%s cannot stand here; write %s", quoted(n.text), s.meantWord(n.text))
	case formMonth:
		month := monthNamed(n.text)
		if month == 0 {
			return bad("%s is not the English name of a month; write %s", quoted(n.text), meantMonth(n.text))
		}
		v.num, v.text = float64(month), month.String()
	case formNumber:
		v.num, err = quantity.ParseNumber(n.text)
		if hint := notThousands(n.text); s.sum && err == nil && hint != "" {
			return bad("%s", hint)
		}
	case formWhole:
		var whole int64
		whole, err = quantity.ParseWhole(n.text)
		v.num = float64(whole)
	case formQuantity, formYears:
		if s.bare != "" {
			if x, err := quantity.ParseNumber(n.text); err == nil { // its range is for whoever knows what it is
				v.num, v.bare = x, true
				return v
			}
		}
		v.num, err = quantity.Parse(n.text, s.kind)
		if inYears := s.form == formYears || s.kind == quantity.Duration && s.limits.lo >= 365; err != nil && inYears {
			meant := "4"
			if m := someYears.FindStringSubmatch(n.text); m != nil {
				meant = m[1]
			}
			err = fmt.Errorf("%s is not a number of years; write one such as %s y", quoted(n.text), meant)
		}
	}
	if err != nil {
		if hint := s.hinted(n.text); hint != "" {
			return bad("%s", hint)
		}
		if len(s.words) > 0 && !strings.ContainsFunc(n.text, unicode.IsDigit) {
			return bad("%v, or %s", err, fault.Words(s.words, "or"))
		}
		if m := shareAndWord.FindStringSubmatch(n.text); m != nil && strings.HasPrefix(at.Key, "conditions[") {
			if x, err := quantity.Parse(m[1], quantity.Share); err == nil && x >= 0 && x <= 1 {
				return bad("%s: the share that is left is wanted here, and nothing else; write %s if %s is lost", quoted(n.text), quantity.Format(math.Round((1-x)*1e6)/1e6, quantity.Share), m[1])
			}
		}
		return bad("%v", err)
	}
	switch s.form {
	case formNumber, formWhole, formQuantity:
		if !s.limits.hold(v.num) {
			left := ""
			if strings.HasPrefix(at.Key, "conditions[") && v.num > -1 && v.num < 0 {
				left = fmt.Sprintf("; it is the share that is left, so write %s if that much is lost", quantity.Format(math.Round((1+v.num)*1e6)/1e6, quantity.Share))
			}
			return bad("%s is out of range; write a value %s%s", quoted(n.text), s.limits.words(s), left)
		}
	case formYears:
		years := yearsOf(v.num)
		if math.Abs(years-math.Round(years)) > 1e-9 || !s.limits.hold(math.Round(years)) {
			meant := ""
			if up := math.Ceil(years); years > 0 && s.limits.hold(up) {
				meant = fmt.Sprintf("; write %s y", quantity.FormatNumber(up))
			}
			return bad("%s is not a whole number of years %s%s", quoted(n.text), s.rangeWords(), meant)
		}
		v.num = math.Round(years)
	}
	return v
}

// hinted is what the shape has to say of a text that cannot be read, "" for nothing.
func (s *shape) hinted(text string) string {
	if s.hint == nil {
		return ""
	}
	return s.hint(text)
}

// shareAndWord is a share with words after it, such as "55 % lost".
var shareAndWord = regexp.MustCompile(`^([0-9.]+ *%) *\pL`)

// someYears are whole years without a unit or with another word for it.
var someYears = regexp.MustCompile(`^([1-9][0-9]{0,3}) *(?:[yYaAjJ].*)?$`)

func (l limits) hold(x float64) bool {
	return x >= l.lo && x <= l.hi && !(l.loOpen && x == l.lo) && !(l.hiOpen && x == l.hi)
}

// words says what the range is.
func (l limits) words(s *shape) string {
	write := func(x float64) string {
		switch {
		case s.sum && x >= 1e6:
			return strings.Replace(strconv.FormatFloat(x, 'g', -1, 64), "e+", "e", 1)
		case s.form != formQuantity:
			return quantity.FormatNumber(x)
		case s.kind == quantity.Duration && x >= 365.25:
			return quantity.FormatNumber(math.Round(x/365.25)) + " y"
		}
		return quantity.Format(x, s.kind)
	}
	hi := "at most "
	if l.hiOpen {
		hi = "below "
	}
	switch {
	case !l.loOpen && l.hiOpen:
		return "from " + write(l.lo) + " to below " + write(l.hi)
	case !l.loOpen:
		return "from " + write(l.lo) + " to " + write(l.hi)
	}
	return "above " + write(l.lo) + " and " + hi + write(l.hi)
}

// meantWord lists the words of a shape, or gives the one that was meant.
func (s *shape) meantWord(text string) string {
	for _, m := range s.meant {
		if strings.EqualFold(text, m[0]) {
			return m[1]
		}
	}
	words := s.words
	if text != "" {
		begin := func(w string) bool { return strings.HasPrefix(w, strings.ToLower(text)) }
		if i := slices.IndexFunc(words, begin); i >= 0 && !slices.ContainsFunc(words[i+1:], begin) {
			return words[i]
		}
	}
	if near := fault.Nearest(text, words); near != "" {
		return near
	}
	if i := slices.Index([]string{"yes", "no"}, strings.ToLower(text)); i >= 0 && slices.Equal(words, []string{"true", "false"}) {
		return words[i]
	}
	if len(words) == 5 && words[0] == "yes" { // true and false are read too, but nobody needs to know
		words = words[:3]
	}
	return fault.Words(words, "or")
}

// monthNamed returns the month of an English name in any case, and 0 for any other text.
func monthNamed(text string) time.Month {
	for m := time.January; m <= time.December; m++ {
		if strings.EqualFold(text, m.String()) {
			return m
		}
	}
	return 0
}

// foreignMonths are months in other languages that no English name is close to.
var foreignMonths = map[string]time.Month{
	"mär": time.March, "märz": time.March, "mars": time.March, "marzo": time.March, "mai": time.May, "mag": time.May, "maggio": time.May,
	"okt": time.October, "ott": time.October, "dez": time.December, "dic": time.December, "déc": time.December, "décembre": time.December,
	"avr": time.April, "avril": time.April, "juin": time.June, "giu": time.June, "giugno": time.June, "juil": time.July, "juillet": time.July,
	"lug": time.July, "luglio": time.July, "août": time.August, "ago": time.August, "fév": time.February, "février": time.February,
	"gen": time.January, "gennaio": time.January, "ene": time.January, "enero": time.January, "janvier": time.January, "set": time.September,
}

func meantMonth(text string) string {
	var names []string
	for m := time.January; m <= time.December; m++ {
		names = append(names, m.String())
		short := strings.ToLower(strings.TrimSuffix(text, "."))
		if len(short) >= 3 && (strings.HasPrefix(strings.ToLower(m.String()), short) || foreignMonths[short] == m) {
			return m.String()
		}
	}
	if n, err := quantity.ParseWhole(strings.TrimPrefix(text, "0")); err == nil && n >= 1 && n <= 12 {
		return time.Month(n).String()
	}
	if near := fault.Nearest(text, names); near != "" {
		return near
	}
	return "one such as October, or auto"
}
