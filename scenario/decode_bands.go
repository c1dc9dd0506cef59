package scenario

import (
	"fmt"
	"math"
	"strings"

	"quietslope/cascade/slope"
	"quietslope/scenario/quantity"
)

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
		for _, loss := range []struct {
			key string
			of  *float64
		}{{"loss_per_event", &band.LossPerEvent}, {"loss_per_day", &band.LossPerDay}} {
			v := b.get(loss.key)
			*loss.of = v.num
			d.needMoney(v, "a loss")
		}
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
