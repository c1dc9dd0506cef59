package scenario

import (
	"fmt"
	"math"

	"quietslope/cascade/scheme"
	"quietslope/scenario/quantity"
)

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
		Consolidation:     deep.get("consolidation").or(0),
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
