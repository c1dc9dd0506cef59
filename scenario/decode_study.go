package scenario

import (
	"fmt"
	"math"
	"path/filepath"
	"regexp"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
	"quietslope/scenario/weather"
)

// tie is the difference in m below which two levels are one: levels that were worked out from elevations or depths
// carry rounding.
const tie = 1e-9

// anyKey says whether a tree has a key of a study, or one close to it, or nothing at all.
func anyKey(root *node) bool {
	var known []string
	for _, f := range studyShape.fields {
		known = append(known, f.name)
	}
	for _, e := range root.entries {
		if near, _ := meantKey(e.key, "", known); near != "" {
			return true
		}
	}
	return len(root.entries) == 0
}

// sayTaken adds to a problem of a key that an option took over which option that was, unless the option that has the key
// has the problem too.
func (d *decoder) sayTaken() {
	at := map[problem]bool{}
	taker := func(p *problem) (Place, bool) {
		m := measureOf.FindStringSubmatch(p.place.Key)
		if m == nil {
			return Place{}, false
		}
		like, ok := d.places[m[0]+".like"]
		return like, ok && p.place.Line < d.places[m[1]].Line
	}
	for _, p := range d.list {
		if _, taken := taker(&p); !taken {
			p.place.Key = ""
			at[p] = true
		}
	}
	for i := range d.list {
		p := &d.list[i]
		same := *p
		same.place.Key = ""
		if like, taken := taker(p); taken && !at[same] {
			p.text += fmt.Sprintf(" (taken over by like in line %d; give the key there)", like.Line)
		}
	}
}

// measureOf is the measure of an option in the path of a key.
var measureOf = regexp.MustCompile(`^(options\[\d+\])\.[a-z_]+`)

// decodeStudy reads a study from its tree. What is wrong is added to found; the study then is not to be used.
func decodeStudy(root *node, found *problems) *Study {
	d := &decoder{problems: found, places: map[string]Place{}}
	if !anyKey(root) {
		found.add(Place{}, "none of the keys of a study stands in this file; is it the right one? A study begins with a line such as: study: Bank above the mill, drainage options")
		return nil
	}
	expandOptions(root, found)
	return d.study(root)
}

// study reads a tree in which every option is written out.
func (d *decoder) study(root *node) *Study {
	found := d.problems
	file := d.readBlock(root, studyShape.fields, Place{})
	s := &Study{
		File:       found.src.file,
		Title:      file.get("study").text,
		PreparedBy: file.get("prepared_by").text,
		CheckedBy:  file.get("checked_by").text,
		Declared:   Declared{},
		src:        found.src,
		root:       root,
		places:     d.places,
	}
	d.weather(s, file.sub("weather"))
	d.site(s, file.sub("site"))
	d.ground(s, file.sub("ground"), file.sub("weather"))
	d.slope(s, file.get("slope"))
	d.money(s, file.get("money"))
	d.bands(s, file.get("bands"))
	d.options(s, file.get("options"))
	d.conditions(s, file.get("conditions"))
	d.count(s, file.sub("count"))
	d.declared(s, file.sub("declared"))
	d.sayTaken()
	if len(found.list) == 0 {
		s.Understood = understood(nil, file, studyShape.fields, "")
	}
	return s
}

func (d *decoder) weather(s *Study, b *blockValue) {
	w := &s.Weather
	file := b.get("file")
	w.File, w.Place = file.text, file.place
	w.Path = w.File
	if !filepath.IsAbs(w.Path) {
		w.Path = filepath.Join(filepath.Dir(s.File), filepath.FromSlash(w.File))
	}
	columns := b.sub("columns")
	names := map[string]string{}
	column := func(key string) (name, second string) {
		c := columns.sub(key)
		if c == nil {
			return "", ""
		}
		n := c.get("name")
		if n.given && !n.bad {
			if other := names[n.text]; other != "" {
				d.add(n.place, "the column %s is %s already; each is a column of its own", quoted(n.text), other)
			}
			names[n.text] = key
		}
		if key == "time" {
			f := c.get("format")
			if f.given && !f.bad {
				if err := weather.CheckFormat(f.text); err != nil {
					d.add(f.place, "%v", err)
				}
			}
			return n.text, f.text
		}
		u := c.get("unit")
		if u.given && !u.bad {
			if _, err := weather.DepthUnit(u.text); err != nil {
				d.add(u.place, "%v", err)
			}
		}
		return n.text, u.text
	}
	w.Time, w.Format = column("time")
	w.Rain.Name, w.Rain.Unit = column("rain")
	if columns.sub("pet") != nil {
		w.PET = &WeatherColumn{}
		w.PET.Name, w.PET.Unit = column("pet")
	}
	w.StampEnd = b.get("stamp").text == "end"
	w.Missing = b.get("missing").texts
	w.Gaps = weather.Gaps(b.get("gaps").text)
}

func (d *decoder) site(s *Study, b *blockValue) {
	s.Site = Site{PlanArea: b.get("plan_area").or(0), GroundLevel: b.get("ground_level").num}
}

// hasKey says whether the study gives a key.
func (s *Study) hasKey(key string) bool {
	_, ok := s.places[key]
	return ok
}

// namesCount says which names are one.
const namesCount = "names that differ only in upper and lower case, or in how letters are encoded, count as the same"

// checkUnique refuses a name that was used before, ignoring case.
func (d *decoder) checkUnique(what string, name *value, seen map[string]Place) {
	if !name.given || name.bad {
		return
	}
	fold := foldKey(name.text)
	if first, ok := seen[fold]; ok {
		d.add(name.place, "the %s in line %d has the name %s already; %s", what, first.Line, quoted(name.text), namesCount)
		return
	}
	seen[fold] = name.place
}

func (d *decoder) count(s *Study, b *blockValue) {
	c := &s.Count
	*c = Count{
		Apart:      b.get("apart").num,
		Confidence: b.get("confidence").num,
		MeanBlock:  yearsOf(b.get("mean_block").num),
		DecideOn:   -1,
		DecideBy:   b.get("decide_by").text,
		DesignLife: int(b.get("design_life").or(0)),
	}
	if m := b.get("year_starts").num; !math.IsNaN(m) {
		c.YearStarts = int(m)
	}
	if n := b.get("resamples").num; !math.IsNaN(n) {
		c.Resamples = int(n)
	}
	if n := b.get("seed").num; !math.IsNaN(n) {
		c.Seed = uint64(n)
	}
	on := b.get("decide_on")
	var names []string
	for i := range s.Bands {
		names = append(names, s.Bands[i].Name)
		if on.given && sameName(s.Bands[i].Name, on.text) {
			c.DecideOn = i
		}
	}
	switch {
	case on.given && !on.bad && c.DecideOn < 0 && len(names) > 0:
		hint := ""
		if near := fault.Nearest(on.text, names); near != "" {
			hint = "; did you mean " + quoted(near) + "?"
		}
		d.add(on.place, "no band is named %s%s The bands are %s", quoted(on.text), stop(hint), quotedWords(names, "and"))
	case on.given:
	case len(s.Bands) == 1:
		c.DecideOn = 0
		on.shown = names[0]
	case len(s.Bands) > 1 && len(s.Options) > 1:
		d.add(s.PlaceOf("count.decide_on"), "several bands are given, so say which of them ranks the options: give decide_on as %s", quotedWords(names, "or"))
	default:
		on.shown = "none"
	}
	d.target(s, b.get("target"))
}

// target reads what an option must keep to.
func (d *decoder) target(s *Study, v *value) {
	b := v.block
	if b == nil {
		return
	}
	for _, key := range targetShape.choice {
		g := b.get(key)
		if !g.given {
			continue
		}
		if t := s.Count.Target; t != nil {
			d.add(g.place, "the target is given as %s already; keep one of them", t.GivenAs)
			continue
		}
		t := &Target{Measure: key, Most: g.num, GivenAs: key, Text: g.text, Place: g.place}
		if key == "return_period" {
			t.Measure, t.Most = "annual_probability", 365.25/g.num
		}
		s.Count.Target = t
	}
	switch {
	case s.Count.Target == nil && b.empty:
		d.add(v.place, "the target is empty; give one of %s, such as {days: 2}", fault.Words(targetShape.choice, "or"))
	case s.Count.Target != nil && s.Count.DecideOn < 0 && len(s.Bands) > 1 && len(s.Options) == 1 && !d.places["count.decide_on"].given():
		d.add(v.place, "several bands are given, so say which of them the target is for: give decide_on")
	}
}

// given tells whether the study has the key of the place.
func (p Place) given() bool { return p.Line > 0 }

// money reads how costs and losses are added up.
func (d *decoder) money(s *Study, v *value) {
	b := v.block
	if d.noMoney = v.given; b == nil { // refused, where it is given, and that is enough
		return
	}
	s.Money = &Money{
		Currency: b.get("currency").text, Rate: b.get("discount_rate").num, Contingency: b.get("contingency").num,
		Horizon: int(b.get("horizon").or(0)), PricesOf: int(b.get("prices_of").or(0)),
	}
}

// stop ends a hint, or the words before it where there is none.
func stop(hint string) string {
	if hint == "" {
		return "."
	}
	return hint
}

func quotedWords(names []string, last string) string {
	const most = 8
	var list []string
	for i, n := range names {
		if i == most {
			list = append(list, fmt.Sprintf("%d more", len(names)-most))
			break
		}
		list = append(list, quoted(n))
	}
	return fault.Words(list, last)
}

func (d *decoder) declared(s *Study, b *blockValue) {
	for _, key := range DeclaredKeys {
		v := b.get(key)
		switch v.text {
		case "true":
			v.text = "yes"
		case "false":
			v.text = "no"
		}
		s.Declared[key] = v.text
		switch {
		case key == "existing_slip_surface" && v.text == "no":
			d.add(v.place, "the method is for slow movement on a slip surface that exists already; for a slope that has not moved it says nothing")
		case key == "rapid_movement_possible" && v.text == "yes":
			d.add(v.place, "the method is for slow movement; where rapid movement is possible, days above a level say nothing about safety")
		}
	}
}

// understood lists the values in force of a block, in the order of the table.
func understood(list []Entry, b *blockValue, fields []field, path string) []Entry {
	for i := range fields {
		f := &fields[i]
		v := b.values[f.name]
		key := join(path, f.name)
		switch {
		case f.later || v.shown == "-":
		case v.block != nil:
			list = understood(list, v.block, f.shape.fields, key)
		case v.items != nil:
			for i, item := range v.items {
				list = understood(list, item.block, f.shape.fields, fmt.Sprintf("%s[%d]", key, i))
			}
		case v.given || v.shown != "" || !f.quiet:
			list = append(list, Entry{Key: key, Value: v.inForce(f), Default: !v.given})
		}
	}
	return list
}

// inForce writes a value as text with its unit.
func (v *value) inForce(f *field) string {
	switch {
	case v.shown != "":
		return v.shown
	case v.word:
		return v.text
	case f.shape.form == formTexts || f.shape.form == formOneOrMore && len(v.texts) > 1:
		var texts []string
		for _, t := range v.texts {
			texts = append(texts, listText(t))
		}
		return "[" + strings.Join(texts, ", ") + "]"
	case math.IsNaN(v.num) && v.text == "":
		return "blank"
	case math.IsNaN(v.num):
		return v.text
	case v.bare:
		return quantity.FormatNumber(v.num)
	}
	switch f.shape.form {
	case formQuantity:
		if f.shape.kind == quantity.Duration && v.num >= 365.25 && math.Mod(v.num, 365.25) == 0 {
			return quantity.FormatNumber(v.num/365.25) + " y"
		}
		return quantity.Format(v.num, f.shape.kind)
	case formYears:
		return quantity.FormatNumber(v.num) + " y"
	case formMonth:
		return v.text
	}
	return quantity.FormatNumber(v.num)
}
