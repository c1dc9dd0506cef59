package scenario

import (
	"cmp"
	"math"
	"strconv"
	"strings"

	"quietslope/scenario/quantity"
)

func (d *decoder) options(s *Study, list *value) {
	seen := map[string]Place{}
	baseline, minimum := -1, -1
	for _, item := range list.items {
		if b := item.block; b != nil {
			d.named = append(d.named, cmp.Or(b.made.list, b.get("name").text))
		}
	}
	for i, item := range list.items {
		b := item.block
		o := Option{Name: b.get("name").text, Place: item.place}
		if b != nil {
			o.list, o.varied = b.made.list, b.made.varied
		}
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
		if mark := b.get("minimum"); mark.text == "true" {
			if minimum >= 0 {
				d.add(mark.place, "%s is the minimum already; only one option can be", quoted(s.Options[minimum].Name))
			} else {
				o.Minimum, minimum = true, i
			}
		}
		d.measures(s, &o, b)
		d.cost(s, &o, b)
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
		case v.block == nil, key == "cost":
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
	"deep.consolidation":         func(g *Ground) *float64 { return &g.Consolidation },
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
	conductivity, below, radius := b.get("conductivity"), b.get("conductivity_below"), b.get("drain_radius")
	equivalent, head, law := b.get("equivalent_depth"), b.get("working_head"), b.get("law")
	t := &TrenchDrains{
		Depth:        depth.num,
		Rate:         rate.or(0),
		Spacing:      spacing.or(0),
		Conductivity: conductivity.or(0),
		Below:        below.or(0),
		Radius:       radius.or(usualRadius),
		Equivalent:   equivalent.num,
		Head:         head.or(depth.num / 2),
		Quadratic:    law.text == "quadratic",
		Efficiency:   b.get("efficiency").num,
		Ceiling:      b.get("ceiling").none(),
		Decline:      d.decline(b.get("decline")),
	}
	under := g.CoverThickness - t.Depth // thickness of the cover below the trenches
	if under < -tie {
		d.add(depth.place, "%s is deeper than the cover, which is %s thick; trench drains act on the cover only", quoted(depth.text), metres(g.CoverThickness))
	}
	switch {
	case rate.given && spacing.given:
		d.add(spacing.place, "the rate is given too; keep either the rate, or the spacing from which it is worked out")
	case !rate.given && !spacing.given && !b.partial:
		d.add(b.place, "neither rate nor spacing is given; give the spacing, such as 12 m, with conductivity, or a rate that was measured or worked out elsewhere")
	}
	if rate.given {
		for _, v := range []*value{conductivity, below, radius, equivalent, head, law} {
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
	case equivalent.given && radius.given:
		d.add(radius.place, "the equivalent_depth is given too, so that nothing is computed from the drain_radius; keep one of the two")
	case radius.given && 2*t.Radius >= t.Spacing:
		d.add(radius.place, "drains of a radius of %s leave no ground between them at a spacing of %s; the radius is that of a drain which takes in as much as the trench, about its wetted perimeter divided by π", quoted(radius.text), quoted(spacing.text))
	}
	switch {
	case equivalent.given && under >= -tie && t.Equivalent > under+tie:
		d.add(equivalent.place, "%s is more than lies below the trenches: the cover is %s thick and they are %s deep, which leaves %s", quoted(equivalent.text), metres(g.CoverThickness), metres(t.Depth), metres(max(0, under)))
	case !equivalent.given && t.equivalentDepth(g) >= 0:
		equivalent.shown = metres(t.equivalentDepth(g))
	}
	if !radius.given && !equivalent.given && under > tie {
		radius.shown = quantity.Format(usualRadius, quantity.Length)
	}
	if !below.given && under > tie && !math.IsNaN(conductivity.num) {
		below.shown = quantity.Format(conductivity.num, quantity.Conductivity)
	}
	switch {
	case t.Quadratic && head.given:
		d.add(head.place, "the quadratic law follows the height of the water itself and has no working_head; delete it, or write law: linear")
	case head.given && t.Head > t.Depth+tie:
		d.add(head.place, "%s is more than the depth of the trenches, %s: water that stands so high above them lies above ground", quoted(head.text), metres(t.Depth))
	case !t.Quadratic && !math.IsNaN(t.Head):
		head.shown = metres(t.Head)
	}
	if v := b.get("ceiling"); t.Quadratic && v.given && !v.word {
		d.add(v.place, "the quadratic law is replayed without a ceiling; write ceiling: none, or law: linear")
	}
	return t
}

// usualRadius is that of a drain whose radius is not given, m.
const usualRadius = 0.1

// decline reads how drains clog; nil for drains that never do.
func (d *decoder) decline(v *value) *Decline {
	b := v.block
	if b == nil {
		return nil
	}
	every, restored := b.get("flushed_every"), b.get("restored_to")
	years := func(v *value) float64 { return yearsOf(v.num) }
	decline := &Decline{HalfLife: years(b.get("half_life")), Every: math.Inf(1), Restored: restored.or(1)}
	if every.given {
		decline.Every = years(every)
	}
	switch {
	case every.given && !every.bad && !restored.given:
		d.add(every.place, "a flush seldom makes drains as new; say what it restores, such as restored_to: 95 %%")
	case restored.given && !restored.bad && !every.given:
		d.add(restored.place, "without flushing nothing is restored; give flushed_every, such as 5 y, or delete the key")
	}
	return decline
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
		Decline:    d.decline(b.get("decline")),
	}
	if n := b.get("number").num; !math.IsNaN(n) {
		drains.Number = int(n)
	}
	return drains
}
