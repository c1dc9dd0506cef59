package scenario

import (
	"fmt"
	"math"
	"path/filepath"
	"strconv"
	"strings"

	"quietslope/cascade/scheme"
	"quietslope/cascade/slope"
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

// decodeStudy reads a study from its tree. What is wrong is added to found; the study then is not to be used.
func decodeStudy(root *node, found *problems) *Study {
	d := &decoder{problems: found, places: map[string]Place{}}
	if !anyKey(root) {
		found.add(Place{}, "none of the keys of a study stands in this file; is it the right one? A study begins with a line such as: study: Bank above the mill, drainage options")
		return nil
	}
	expandOptions(root, found)
	file := d.readBlock(root, studyShape.fields, Place{})
	s := &Study{
		File:       found.src.file,
		Title:      file.get("study").text,
		PreparedBy: file.get("prepared_by").text,
		CheckedBy:  file.get("checked_by").text,
		Declared:   Declared{},
		src:        found.src,
		places:     d.places,
	}
	d.weather(s, file.sub("weather"))
	d.site(s, file.sub("site"))
	d.ground(s, file.sub("ground"), file.sub("weather"))
	d.slope(s, file.get("slope"))
	d.bands(s, file.get("bands"))
	d.options(s, file.get("options"))
	d.conditions(s, file.get("conditions"))
	d.count(s, file.sub("count"), file.get("bands"))
	d.declared(s, file.sub("declared"))
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
	w.Gaps = b.get("gaps").text
}

func (d *decoder) site(s *Study, b *blockValue) {
	s.Site = Site{PlanArea: b.get("plan_area").or(0), GroundLevel: b.get("ground_level").num}
}

// none returns the number of a limit, +Inf where there is none.
func (v *value) none() float64 {
	if !v.bad && (v.word || !v.given) && math.IsNaN(v.num) {
		return math.Inf(1)
	}
	return v.num
}

func (d *decoder) ground(s *Study, b, record *blockValue) {
	surface, soil, cover, deep := b.sub("surface"), b.sub("soil"), b.sub("cover"), b.sub("deep")
	g := &s.Ground
	*g = Ground{
		Infiltration:      surface.get("infiltration").num,
		InfiltrationLimit: surface.get("infiltration_limit").none(),
		CoverThickness:    cover.get("thickness").num,
		CoverPorosity:     cover.get("drainable_porosity").num,
		CoverSeepage:      cover.get("seepage").num,
		Percolation:       cover.get("percolation").num,
		PercolationCap:    cover.get("percolation_ceiling").none(),
		CoverConductivity: cover.get("conductivity").or(0),
		DeepThickness:     deep.get("thickness").num,
		DeepPorosity:      deep.get("drainable_porosity").num,
		DeepSeepage:       deep.get("seepage").num,
		Lateral:           deep.get("lateral_inflow").num,
		CalibratedTo:      b.get("calibrated_to").num,
	}
	from := b.sub("rates_from")
	g.Scheme = schemeNamed(from.get("scheme").text)
	g.SchemeStep = from.get("step").num
	g.CoverFullAt = fullLevel(cover.get("full_at"), g.CoverThickness)
	g.DeepFullAt = fullLevel(deep.get("full_at"), g.DeepThickness)
	if soil != nil {
		g.Soil = &Soil{
			Available:  soil.get("available_water").num,
			Readily:    soil.get("readily_available").num,
			CropFactor: soil.get("crop_factor").num,
		}
		if !s.hasKey("weather.columns.pet") && record.sub("columns") != nil && !record.isLater("pet_from") && !record.sub("columns").isLater("temperature") {
			d.add(b.get("soil").place, "the soil balance needs evapotranspiration; give weather.columns.pet, or leave soil out")
		}
	}
	start, warmUp := b.get("start"), b.get("warm_up")
	if start.block != nil {
		g.Start = &StartLevels{Cover: start.block.get("cover").num, Deep: start.block.get("deep").num}
	}
	switch {
	case warmUp.given && !warmUp.word && !math.IsNaN(warmUp.num):
		g.WarmUpYears = int(warmUp.num)
	case !warmUp.given && g.Start != nil:
		warmUp.shown = "0 y"
	default:
		g.WarmUpYears = -1
		warmUp.shown = "auto"
	}
	at := func(key string) Place { return s.PlaceOf("ground." + key) }
	d.checkGround(g, nil, "", at)
	for _, wrong := range g.notConverted() {
		d.add(at(wrong.key), "%s", wrong.text)
	}
	if g.Start != nil {
		d.checkStart(g, "", start.block.get("cover").place, start.block.get("deep").place)
	}
}

// fullLevel is the level at which a layer is full, +Inf for none, by default its thickness.
func fullLevel(v *value, thickness float64) float64 {
	switch {
	case v.word:
		return math.Inf(1)
	case v.given:
		return v.num
	}
	v.num = thickness
	return thickness
}

// checkGround refuses stores from which nothing can leave. Where says how the numbers came about, for an option's
// ground; before is then the ground of the study, whose own faults were said there.
func (d *decoder) checkGround(g, before *Ground, where string, at func(key string) Place) {
	if g.coverClosed() && (before == nil || !before.coverClosed()) {
		d.add(at("cover.seepage"), "%snothing can leave the cover, since seepage and percolation are both 0 /d; give at least one of them a rate", where)
	}
	if g.deepClosed() && (before == nil || !before.deepClosed()) {
		d.add(at("deep.seepage"), "%snothing can leave the deep layer, since its seepage is 0 /d; give it a rate", where)
	}
}

func (g *Ground) coverClosed() bool { return g.CoverSeepage == 0 && g.Percolation == 0 }
func (g *Ground) deepClosed() bool  { return g.DeepSeepage == 0 }

// schemeNamed is the scheme of a word of rates_from, exact for any other.
func schemeNamed(word string) scheme.Scheme {
	for _, s := range []scheme.Scheme{scheme.Centred, scheme.Explicit, scheme.Implicit} {
		if s.String() == word {
			return s
		}
	}
	return scheme.Exact
}

// notConverted lists what stands in the way of turning rates from a stepping scheme into those of exact stores, and under
// which key of the ground.
func (g *Ground) notConverted() (wrong []struct{ key, text string }) {
	if g.Scheme == scheme.Exact {
		return nil
	}
	add := func(key, format string, args ...any) {
		wrong = append(wrong, struct{ key, text string }{key, fmt.Sprintf(format, args...)})
	}
	if !math.IsInf(g.PercolationCap, 1) && !math.IsNaN(g.PercolationCap) {
		add("cover.percolation_ceiling", "rates from the %s scheme cannot be converted beside a percolation_ceiling; leave the ceiling out, or give rates that were calibrated with exact steps", g.Scheme)
	}
	for _, store := range []struct {
		key, name      string
		rate, porosity float64
	}{
		{"cover.seepage", "cover, with seepage and percolation together,", g.CoverSeepage + g.Percolation, g.CoverPorosity},
		{"deep.seepage", "deep layer", g.DeepSeepage, g.DeepPorosity},
	} {
		if math.IsNaN(store.rate) || math.IsNaN(g.SchemeStep) { // reported
			continue
		}
		exact, err := g.Scheme.ExactRate(store.rate, g.SchemeStep)
		if err != nil {
			add(store.key, "the rate of the %s does not fit ground.rates_from: %v; check the rates, the scheme and its step", store.name, err)
		} else if n := store.porosity * store.rate / exact; n > 1 {
			add(store.key, "converted from the %s scheme the drainable porosity of the %s would be %s %%; check the rates and ground.rates_from", g.Scheme, store.name, short(100*n))
		}
	}
	return wrong
}

// checkStart refuses start levels that a store cannot hold.
func (d *decoder) checkStart(g *Ground, where string, cover, deep Place) {
	if g.Start.Cover > g.CoverFullAt+tie {
		d.add(cover, "%sthe cover is full at %s above the contact, so it cannot start at %s", where, metres(g.CoverFullAt), metres(g.Start.Cover))
	}
	if g.Start.Deep > g.DeepFullAt+tie {
		d.add(deep, "%sthe deep layer is full at %s above its base, so it cannot start at %s", where, metres(g.DeepFullAt), metres(g.Start.Deep))
	}
}

// metres writes a level for a message, to a tenth of a millimetre.
func metres(x float64) string { return quantity.Format(math.Round(x*1e4)/1e4, quantity.Length) }

// slope reads the slope above the slip surface.
func (d *decoder) slope(s *Study, v *value) {
	b := v.block
	if b == nil {
		return
	}
	g := &s.Ground
	depth := b.get("slip_depth")
	if !depth.given {
		depth.num = g.CoverThickness + g.DeepThickness
		depth.shown = quantity.Format(depth.num, quantity.Length)
	}
	if depth.num > g.CoverThickness+g.DeepThickness+tie {
		d.add(depth.place, "the slip surface lies %s deep, below the deep layer, whose base is %s below ground; levels there are not known", quoted(depth.text), metres(g.CoverThickness+g.DeepThickness))
	}
	s.Slope = &slope.Slope{
		Angle: b.get("angle").num, Depth: depth.num, UnitWeight: b.get("unit_weight").num,
		Friction: b.get("friction").num, Cohesion: b.get("cohesion").num, Standing: b.get("flow").text == "standing",
	}
}

// bySafety is the key of a band that is given as a factor of safety.
const bySafety = "factor_of_safety"

// datums are the ways in which a band may be given.
var datums = []string{"level", "elevation", "below_ground", bySafety}

func (d *decoder) bands(s *Study, list *value) {
	g := &s.Ground
	base := s.Site.GroundLevel - g.CoverThickness - g.DeepThickness // elevation of the base of the deep layer
	seen := map[string]Place{}
	for _, item := range list.items {
		b := item.block
		band := Band{Name: b.get("name").text, Level: math.NaN(), Until: math.NaN(), Place: item.place}
		d.checkUnique("band", b.get("name"), seen)
		for _, key := range datums {
			if v := b.get(key); v.given {
				if band.GivenAs != "" {
					d.add(v.place, "the band is given as %s already; keep one of them", band.GivenAs)
					continue
				}
				band.GivenAs, band.Place = key, v.place
			}
		}
		if band.GivenAs == "" {
			if b != nil && !b.partial {
				d.add(item.place, "the band has no level; give level (above the base of the deep layer), elevation, below_ground or factor_of_safety")
			}
			s.Bands = append(s.Bands, band)
			continue
		}
		convert := func(x float64) float64 {
			switch band.GivenAs {
			case "elevation":
				x -= base
			case "below_ground":
				x = g.CoverThickness + g.DeepThickness - x
			case bySafety:
				x = g.CoverThickness + g.DeepThickness - s.Slope.Depth + s.Slope.Level(x)
			default:
				return x
			}
			return math.Round(x*1e9) / 1e9 // without the dust of the subtraction
		}
		onset, until := b.get(band.GivenAs), b.get("until")
		if band.GivenAs == "elevation" && !s.hasKey("site.ground_level") {
			d.add(onset.place, "an elevation means nothing without site.ground_level; give it, or give the band as level or below_ground")
		}
		if band.GivenAs == bySafety && !d.checkSafety(s, onset, until) {
			s.Bands = append(s.Bands, band)
			continue
		}
		band.Level = convert(onset.num)
		band.Until = band.Level
		switch {
		case until.given:
			band.Until = convert(d.untilNumber(until, band.GivenAs))
		case band.GivenAs == bySafety:
			until.num, until.shown = onset.num, quantity.FormatNumber(onset.num)
		default:
			until.num, until.shown = onset.num, quantity.Format(onset.num, quantity.Length)
		}
		if band.GivenAs == bySafety {
			band.Safety = onset.num
		}
		d.checkBand(s, &band, onset, until)
		band.Until = min(band.Until, band.Level)
		s.Bands = append(s.Bands, band)
	}
}

// untilNumber is the number of until, which is written as the band's own: NaN, and a problem, where it is not.
func (d *decoder) untilNumber(until *value, givenAs string) float64 {
	switch safety := givenAs == bySafety; {
	case until.bad:
	case until.bare == safety:
		return until.num
	case safety:
		d.add(until.place, "the band is given as a factor of safety, and until is given in the same way; write a number without a unit, such as 1.1")
	default:
		_, err := quantity.Parse(until.text, quantity.Length)
		d.add(until.place, "%v", err)
	}
	until.bad = true
	return math.NaN()
}

// checkSafety refuses a factor of safety for which there is no level. It returns false where no level can be worked out.
func (d *decoder) checkSafety(s *Study, onset, until *value) bool {
	l := s.Slope
	switch {
	case l == nil && s.hasKey("slope"): // reported
		return false
	case l == nil:
		d.add(onset.place, "a factor of safety needs the slope above the slip surface; give the block slope with angle, unit_weight and friction, or give the band as level")
		return false
	}
	dry := l.FactorOfSafety(0)
	if math.IsNaN(dry) {
		return false
	}
	ok := true
	for _, v := range []*value{onset, until} {
		if !v.given || v.bad || v == until && !v.bare {
			continue
		}
		h := l.Level(v.num)
		switch {
		case math.IsNaN(h):
			ok = false
		case h <= tie:
			d.add(v.place, "no water level belongs to %s: even without water above the slip surface the slope has a factor of safety of %s; check slope, or write a lower factor", quoted(v.text), short(dry))
			ok = false
		case h > l.Uplift()+tie:
			d.add(v.place, "for %s the water would have to stand %s above the slip surface, and from %s on it carries the whole weight of the ground; check slope, or write a higher factor", quoted(v.text), metres(h), metres(l.Uplift()))
			ok = false
		case v == until && v.num < onset.num:
			d.add(v.place, "an event ends at or below the level at which it begins, so at a factor of safety of %s or more; %s is less", onset.text, quoted(v.text))
			ok = false
		}
	}
	return ok
}

// hasKey says whether the study gives a key.
func (s *Study) hasKey(key string) bool {
	_, ok := s.places[key]
	return ok
}

// checkBand refuses a band that no level can pass, or that does not follow the band before it.
func (d *decoder) checkBand(s *Study, b *Band, onset, until *value) {
	worked := ""
	if b.GivenAs != "level" {
		worked = fmt.Sprintf(", which is %s above the base of the deep layer,", metres(b.Level))
	}
	switch {
	case b.Level <= tie:
		d.add(onset.place, "%s%s is no critical level: it must lie above the base of the deep layer, at 0 m%s", quoted(onset.text), worked, d.otherDatum(s, b, onset))
	case b.Level >= s.Ground.DeepFullAt-tie:
		d.add(onset.place, "%s%s can never be passed: the deep layer is full at %s above its base; lower the band, or correct ground.deep.full_at%s",
			quoted(onset.text), worked, metres(s.Ground.DeepFullAt), d.otherDatum(s, b, onset))
	case len(s.Bands) > 0 && !d.misordered:
		if before := &s.Bands[len(s.Bands)-1]; b.Level <= before.Level+tie && before.Level < s.Ground.DeepFullAt-tie {
			d.misordered = true
			d.add(onset.place, "bands rise from the first to the last, and this one, at %s above the base of the deep layer, is not above %s at %s; put them in order",
				metres(b.Level), quoted(before.Name), metres(before.Level))
		}
	}
	if !until.given {
		return
	}
	switch {
	case b.Until > b.Level+tie:
		d.add(until.place, "an event ends at or below the level at which it begins, and %s lies above %s; until is given as %s too", quoted(until.text), quoted(onset.text), b.GivenAs)
	case b.Until < -tie:
		d.add(until.place, "%s lies below the base of the deep layer, so that no event would ever end; until is given as %s too", quoted(until.text), b.GivenAs)
	}
}

// otherDatum says in which other datum the number of a band given as a level would lie in the deep layer, and "" for
// none: a depth or an elevation is easily written as a level.
func (d *decoder) otherDatum(s *Study, b *Band, onset *value) string {
	if b.GivenAs != "level" {
		return ""
	}
	g := &s.Ground
	ground := g.CoverThickness + g.DeepThickness // of the ground above the base of the deep layer
	inside := func(level float64) bool { return level > tie && level < min(g.DeepFullAt, g.DeepThickness)-tie }
	var meant []string
	if depth := math.Abs(onset.num); inside(ground - depth) {
		meant = append(meant, fmt.Sprintf("write below_ground: %s if it is a depth below ground", metres(depth)))
	}
	if !math.IsNaN(s.Site.GroundLevel) && inside(onset.num-s.Site.GroundLevel+ground) {
		meant = append(meant, fmt.Sprintf("write elevation: %s if it is an elevation", metres(onset.num)))
	}
	if len(meant) == 0 {
		return ""
	}
	return "; or " + strings.Join(meant, ", or ")
}

// checkUnique refuses a name that was used before, ignoring case.
func (d *decoder) checkUnique(what string, name *value, seen map[string]Place) {
	if !name.given || name.bad {
		return
	}
	fold := foldKey(name.text)
	if first, ok := seen[fold]; ok {
		d.add(name.place, "the %s in line %d has the name %s already; names that differ only in upper and lower case count as the same", what, first.Line, quoted(name.text))
		return
	}
	seen[fold] = name.place
}

func (d *decoder) count(s *Study, b *blockValue, bands *value) {
	c := &s.Count
	*c = Count{
		Apart:      b.get("apart").num,
		Confidence: b.get("confidence").num,
		MeanBlock:  b.get("mean_block").num / 365.25,
		DecideOn:   -1,
		DecideBy:   b.get("decide_by").text,
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
		if on.given && s.Bands[i].Name == on.text {
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
	return joinWords(list, last)
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

func (d *decoder) options(s *Study, list *value) {
	seen := map[string]Place{}
	baseline := -1
	for i, item := range list.items {
		b := item.block
		o := Option{Name: b.get("name").text, Place: item.place}
		if name := b.get("name"); name.given {
			o.Place = name.place
		}
		d.checkUnique("option", b.get("name"), seen)
		if mark := b.get("baseline"); mark.text == "true" {
			if baseline >= 0 {
				d.add(mark.place, "%s is the baseline already; only one option can be", quoted(s.Options[baseline].Name))
			} else {
				baseline = i
			}
		}
		d.measures(s, &o, b)
		s.Options = append(s.Options, o)
	}
	if len(s.Options) == 0 {
		return
	}
	if baseline < 0 {
		baseline = 0
		if first := list.items[0].block.get("baseline"); first.given && first.text == "false" {
			d.add(first.place, "no option is marked as the baseline, so the first is it; mark another one with baseline: true")
		}
	}
	s.Options[baseline].Baseline = true
	for i, item := range list.items {
		if mark := item.block.get("baseline"); !mark.given {
			mark.shown = strconv.FormatBool(i == baseline)
		}
	}
}

// conditions reads how the works hold up, besides as built.
func (d *decoder) conditions(s *Study, list *value) {
	seen := map[string]Place{}
	for _, item := range list.items {
		b := item.block
		d.checkUnique("condition", b.get("name"), seen)
		s.Conditions = append(s.Conditions, Condition{
			Name: b.get("name").text, Drains: b.get("drains").num,
			SurfaceWater: b.get("surface_water").num, Vegetation: b.get("vegetation").num,
		})
	}
}

// measures reads the measures of an option in the order of the file, and checks them in the ground as the option
// leaves it.
func (d *decoder) measures(s *Study, o *Option, b *blockValue) {
	if b == nil {
		return
	}
	g := s.Ground
	var changes []Assignment
	if set := b.get("set"); set.block != nil {
		changes = d.changes(&g, set)
		d.checkChanged(s, &g, changes, set.place)
	}
	for _, key := range b.order {
		v := b.get(key)
		m := Measure{Key: key, Place: v.place}
		switch {
		case v.block == nil:
			continue
		case key == "trench_drains":
			m.Trench = d.trench(&g, v.block)
		case key == "bored_drains":
			m.Bored = d.bored(&g, v.block)
		case key == "surface_water":
			m.Cut = &SurfaceWater{KeptOut: v.block.get("kept_out").num}
		case key == "vegetation":
			m.Vegetation = d.vegetation(s, v.block)
		case key == "cut_off_drain":
			m.CutOff = &CutOffDrain{Intercepted: v.block.get("intercepted").num}
			if g.Lateral == 0 {
				d.add(v.place, "a cut-off drain takes part of ground.deep.lateral_inflow, and there is none; give the inflow, or leave the drain out")
			}
		case key == "set":
			m.Set = changes
		}
		o.Measures = append(o.Measures, m)
	}
}

// changes reads a set and makes its changes to the ground.
func (d *decoder) changes(g *Ground, set *value) []Assignment {
	var changes []Assignment
	for _, key := range set.block.order {
		v := set.block.get(key)
		a := Assignment{Key: key, Value: v.none(), Text: v.text, Place: v.place}
		changes = append(changes, a)
		if strings.HasPrefix(key, "soil.") && g.Soil == nil {
			d.add(v.place, "the study has no ground.soil to change; give it there first")
			continue
		}
		g.assign(a)
	}
	if set.block.empty {
		d.add(set.place, "set changes nothing; give a number of ground, such as {cover.seepage: 0.02 /d}, or delete the key")
	}
	return changes
}

// checkChanged checks the ground as set leaves it, where it differs from the ground of the study.
func (d *decoder) checkChanged(s *Study, g *Ground, set []Assignment, place Place) {
	at := func(keys ...string) Place {
		for _, key := range keys {
			for _, a := range set {
				if a.Key == key {
					return a.Place
				}
			}
		}
		return place
	}
	changed := func(keys ...string) bool { return at(keys...) != place }
	if changed("cover.seepage", "cover.percolation", "deep.seepage") {
		d.checkGround(g, &s.Ground, "in this option ", func(key string) Place { return at(key, "cover.percolation") })
	}
	if len(s.Ground.notConverted()) == 0 {
		for _, wrong := range g.notConverted() {
			d.add(at(wrong.key, "cover.percolation", "cover.drainable_porosity", "deep.drainable_porosity"), "in this option %s", wrong.text)
		}
	}
	if changed("cover.full_at", "deep.full_at") && g.Start != nil && s.Ground.Start.Cover <= s.Ground.CoverFullAt+tie && s.Ground.Start.Deep <= s.Ground.DeepFullAt+tie {
		d.checkStart(g, "in this option ", at("cover.full_at"), at("deep.full_at"))
	}
	if changed("deep.full_at") {
		for i := range s.Bands {
			if b := &s.Bands[i]; b.Level >= g.DeepFullAt-tie && b.Level < s.Ground.DeepFullAt-tie {
				d.add(at("deep.full_at"), "in this option the deep layer is full at %s above its base, so that the band %s, at %s, could never be passed, whatever the weather; the option would look better than it is",
					metres(g.DeepFullAt), quoted(b.Name), metres(b.Level))
				break
			}
		}
	}
}

// groundNumbers are the places of the numbers that set may change. Those of a soil need one.
var groundNumbers = map[string]func(*Ground) *float64{
	"surface.infiltration":       func(g *Ground) *float64 { return &g.Infiltration },
	"surface.infiltration_limit": func(g *Ground) *float64 { return &g.InfiltrationLimit },
	"soil.available_water":       func(g *Ground) *float64 { return &g.Soil.Available },
	"soil.readily_available":     func(g *Ground) *float64 { return &g.Soil.Readily },
	"soil.crop_factor":           func(g *Ground) *float64 { return &g.Soil.CropFactor },
	"cover.drainable_porosity":   func(g *Ground) *float64 { return &g.CoverPorosity },
	"cover.seepage":              func(g *Ground) *float64 { return &g.CoverSeepage },
	"cover.percolation":          func(g *Ground) *float64 { return &g.Percolation },
	"cover.percolation_ceiling":  func(g *Ground) *float64 { return &g.PercolationCap },
	"cover.conductivity":         func(g *Ground) *float64 { return &g.CoverConductivity },
	"cover.full_at":              func(g *Ground) *float64 { return &g.CoverFullAt },
	"deep.drainable_porosity":    func(g *Ground) *float64 { return &g.DeepPorosity },
	"deep.seepage":               func(g *Ground) *float64 { return &g.DeepSeepage },
	"deep.lateral_inflow":        func(g *Ground) *float64 { return &g.Lateral },
	"deep.full_at":               func(g *Ground) *float64 { return &g.DeepFullAt },
}

// assign changes one number of the ground.
func (g *Ground) assign(a Assignment) {
	if strings.HasPrefix(a.Key, "soil.") {
		soil := *g.Soil // the ground of the study keeps its own
		g.Soil = &soil
	}
	*groundNumbers[a.Key](g) = a.Value
}

// vegetation refuses planting that uses water of which the study knows nothing.
func (d *decoder) vegetation(s *Study, b *blockValue) *Vegetation {
	factor := b.get("pet_factor")
	if !math.IsNaN(factor.num) && factor.num != 1 && s.Weather.PET == nil {
		d.add(factor.place, "a pet_factor has nothing to multiply, since the weather has no evapotranspiration; give weather.columns.pet, or write 1 and the interception alone")
	}
	return &Vegetation{PETFactor: factor.num, Interception: b.get("interception").num}
}

func (d *decoder) trench(g *Ground, b *blockValue) *TrenchDrains {
	depth, spacing, rate := b.get("depth"), b.get("spacing"), b.get("rate")
	conductivity, equivalent, head, law := b.get("conductivity"), b.get("equivalent_depth"), b.get("working_head"), b.get("law")
	t := &TrenchDrains{
		Depth:        depth.num,
		Rate:         rate.or(0),
		Spacing:      spacing.or(0),
		Conductivity: conductivity.or(0),
		Equivalent:   equivalent.num,
		Efficiency:   b.get("efficiency").num,
		Ceiling:      b.get("ceiling").none(),
	}
	below := g.CoverThickness - t.Depth // of the cover under the trenches
	if below < -tie {
		d.add(depth.place, "%s is deeper than the cover, which is %s thick; trench drains act on the cover only", quoted(depth.text), metres(g.CoverThickness))
	}
	switch {
	case rate.given && spacing.given:
		d.add(spacing.place, "the rate is given too; keep either the rate, or the spacing from which it is worked out")
	case !rate.given && !spacing.given && !b.partial:
		d.add(b.place, "neither rate nor spacing is given; give the spacing, such as 12 m, with conductivity, or a rate that was measured or worked out elsewhere")
	}
	if rate.given {
		for _, v := range []*value{conductivity, equivalent, head, law} {
			if v.given && !spacing.given {
				d.add(v.place, "this has no meaning beside a rate; delete it, or give the spacing in place of the rate")
			}
		}
		law.shown = "-"
		return t
	}
	if !spacing.given {
		return t
	}
	if !conductivity.given {
		if g.CoverConductivity == 0 && !b.partial && d.noConductivity {
			return t // said of an option above
		} else if g.CoverConductivity == 0 && !b.partial {
			d.noConductivity = true
			d.add(b.place, "the spacing needs the conductivity of the cover; give conductivity here or as ground.cover.conductivity, such as 0.02 m/d")
		} else {
			conductivity.num, conductivity.shown = g.CoverConductivity, quantity.Format(g.CoverConductivity, quantity.Conductivity)
		}
	}
	switch {
	case !equivalent.given && below > tie && !b.partial:
		d.add(b.place, "computing the equivalent depth is not supported yet; give equivalent_depth, the depth of flow below the trenches, or a depth of %s, which reaches the contact", metres(g.CoverThickness))
	case !equivalent.given && math.Abs(below) <= tie:
		equivalent.shown = "0 m"
	case equivalent.given && below >= -tie && t.Equivalent > below+tie:
		d.add(equivalent.place, "%s is more than lies below the trenches: the cover is %s thick and they are %s deep, which leaves %s", quoted(equivalent.text), metres(g.CoverThickness), metres(t.Depth), metres(max(0, below)))
	}
	if head.given && math.Abs(head.num-t.Depth/2) > tie {
		d.add(head.place, "a working_head other than half of depth is not supported yet; delete it, or write %s", metres(t.Depth/2))
	}
	head.shown = quantity.Format(t.Depth/2, quantity.Length)
	return t
}

func (d *decoder) bored(g *Ground, b *blockValue) *BoredDrains {
	lvl := b.get("level")
	if lvl.num > g.DeepThickness+tie {
		d.add(lvl.place, "%s lies above the deep layer, which is %s thick; bored drains act on the deep layer only, and their level is counted from its base", quoted(lvl.text), metres(g.DeepThickness))
	}
	drains := &BoredDrains{
		Rate:       b.get("rate").num,
		Level:      lvl.num,
		Efficiency: b.get("efficiency").num,
		Ceiling:    b.get("ceiling").none(),
		Length:     b.get("length").or(0),
	}
	if n := b.get("number").num; !math.IsNaN(n) {
		drains.Number = int(n)
	}
	return drains
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
	case f.shape.form == formTexts:
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
