package scenario

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/cascade"
	"quietslope/cascade/drain"
	"quietslope/cascade/scheme"
	"quietslope/scenario/result"
)

// Layers that a drain can act on, as the results name them.
const (
	inCover = "cover"
	inDeep  = "deep"
)

// works is an option in one condition, with its drains in one state, made into numbers: the ground after its changes, the
// water that still enters, and the two stores with the drains beside their natural outlets.
type works struct {
	option *Option
	state  state
	ground Ground  // rates and porosities are those of exact stores
	given  *Ground // the same before they were converted; nil where they were exact
	uptake
	drains []drainage
	model  cascade.Model
}

// uptake is what an option does to the water on its way to the cover.
type uptake struct {
	keptOut      float64 // share of the infiltration that no longer enters
	interception float64 // share of the rain that never reaches the ground
	petFactor    float64 // of the evapotranspiration, besides the soil's crop factor
}

// check refuses a ground whose rates could not be converted, and a drain whose rate, worked out from its spacing, is
// beyond what can be replayed.
func (w *works) check(s *Study) error {
	if w.given != nil {
		for _, wrong := range w.given.notConverted() {
			return s.Fault(w.option.Place, "%s", wrong.text)
		}
	}
	for _, d := range w.drains {
		if !(d.square <= maxSquare) {
			return s.Fault(d.place, "by the quadratic law the drains carry %s mm/d at 1 mm of water stored above them, more than %d mm/d; check spacing, conductivity and drainable_porosity, and their units", short(d.rate+d.square), int(maxSquare))
		}
		if !(d.rate <= maxRate) {
			return s.Fault(d.place, "the drains work out at %s /d, more than %d /d; check spacing, conductivity and drainable_porosity, and their units", short(d.rate), int(maxRate))
		}
	}
	return nil
}

// drainage is one drain of an option.
type drainage struct {
	measure string // as in the study
	place   Place
	layer   string
	rate    float64 // 1/d, after efficiency; of a quadratic law that of its linear part
	square  float64 // 1/(mm d), of a quadratic law
	// The outflow follows Hooghoudt's equation, even where rate and square have come to nothing.
	quadratic bool
	worked    float64 // 1/d, the rate of the linear law at the working head, by which drains are timed and judged
	share     float64 // of what the drains do as new that is left
	invert    float64 // m above the base of its layer
	ceiling   float64 // mm/d; +Inf for none
	index     int     // among the drains of its store in the model
	// It was worked out anew with every second drain stopped, so that its state is in its rate already.
	respaced bool
	from     string // how the rate came about
}

// newWorks applies an option's measures to the ground of the study: first the changed numbers, then everything else, so
// that a trench is worked out in the ground that it is dug in. Of what the works do, the shares of the condition are left,
// and of what the drains do those of their state.
func newWorks(s *Study, o *Option, c *Condition, in state) *works {
	w := &works{option: o, state: in, ground: s.Ground}
	for _, m := range o.Measures {
		for _, a := range m.Set {
			w.ground.assign(a)
		}
	}
	if w.ground.Scheme != scheme.Exact {
		given := w.ground
		w.given = &given
		w.ground.toExact()
	}
	g := &w.ground
	w.model = cascade.Model{
		Cover:       cascade.Store{Capacity: storage(g.CoverFullAt, g.CoverPorosity), Seepage: g.CoverSeepage},
		Percolation: cascade.Outlet{Rate: g.Percolation, Ceiling: g.PercolationCap},
		Deep:        cascade.Store{Capacity: storage(g.DeepFullAt, g.DeepPorosity), Seepage: g.DeepSeepage},
		Lateral:     g.Lateral,
	}
	w.petFactor = 1
	for _, m := range o.Measures {
		switch {
		case m.Trench != nil:
			w.addDrain(m, trench(m.Trench, g, in), c)
		case m.Bored != nil:
			w.addDrain(m, bored(m.Bored), c)
		case m.Cut != nil:
			w.keptOut = both(w.keptOut, c.SurfaceWater*m.Cut.KeptOut)
		case m.Vegetation != nil:
			w.interception = both(w.interception, c.Vegetation*m.Vegetation.Interception)
			w.petFactor *= 1 + c.Vegetation*(m.Vegetation.PETFactor-1)
		case m.CutOff != nil:
			w.model.Lateral *= 1 - c.Drains*in.left(nil)*m.CutOff.Intercepted
		}
	}
	return w
}

// calibrated is the ground with the rates and porosities that it was calibrated with.
func (w *works) calibrated() *Ground {
	if w.given != nil {
		return w.given
	}
	return &w.ground
}

// both is the share that two measures keep back together: each acts on what the other lets through.
func both(a, b float64) float64 { return 1 - (1-a)*(1-b) }

// toExact converts the rates and porosities of a ground that was calibrated with a stepping scheme into those of exact
// stores, which keep outflow and levels at the ends of steps (see package scheme). The rate of the scheme is that of a
// store's natural outlets together; each of them keeps its part. Rates out of the scheme's range stay as they are, and are
// refused by whoever uses them (see notConverted).
func (g *Ground) toExact() {
	convert := func(porosity *float64, rates ...*float64) {
		total := 0.0
		for _, r := range rates {
			total += *r
		}
		exact, err := g.Scheme.ExactRate(total, g.SchemeStep)
		if err != nil || total == 0 {
			return
		}
		for _, r := range rates {
			*r *= exact / total
		}
		*porosity *= total / exact
	}
	convert(&g.CoverPorosity, &g.CoverSeepage, &g.Percolation)
	convert(&g.DeepPorosity, &g.DeepSeepage)
	g.Scheme = scheme.Exact
}

// storage is the drainable water in mm below a level in m.
func storage(level, porosity float64) float64 { return 1000 * porosity * level }

// addDrain makes a drain one of the outlets of its store, at the rate that its state and the condition leave of it.
func (w *works) addDrain(m Measure, d drainage, c *Condition) {
	d.measure, d.place = m.Key, m.Place
	if w.state.everySecond {
		d.ceiling /= 2 // which is that of all drains together
	}
	if !d.respaced {
		d.share = w.state.left(m.decline())
		d.rate, d.square, d.worked = d.share*d.rate, d.share*d.square, d.share*d.worked
	}
	d.rate, d.square, d.worked = c.Drains*d.rate, c.Drains*d.square, c.Drains*d.worked
	if w.given != nil && strings.HasPrefix(d.from, asGiven) {
		d.from += "; rates of drains are not converted"
	}
	store, porosity := &w.model.Cover, w.ground.CoverPorosity
	if d.layer == inDeep {
		store, porosity = &w.model.Deep, w.ground.DeepPorosity
	}
	d.index = len(store.Drains)
	store.Drains = append(store.Drains, cascade.Outlet{
		Rate: d.rate, Square: d.square, Invert: storage(d.invert, porosity), Ceiling: d.ceiling,
	})
	w.drains = append(w.drains, d)
}

// trench turns trench drains into an outlet of the cover. Between parallel trenches the water leaves at the reaction
// factor of the cover, for the mean height of the water above the drains that belongs to the working head midway; by the
// quadratic law it leaves by Hooghoudt's equation at whatever height it stands. Where every second trench is stopped the
// others are worked out anew at twice the spacing.
func trench(t *TrenchDrains, g *Ground, in state) drainage {
	d := drainage{layer: inCover, ceiling: t.Ceiling, invert: max(0, g.CoverThickness-t.Depth)}
	if t.Spacing == 0 {
		d.rate = t.Efficiency * t.Rate
		d.worked = d.rate
		d.from = asGiven + timesEfficiency(t.Efficiency)
		return d
	}
	l := t.layout(g)
	d.worked = t.Efficiency * l.ReactionFactor(t.Head)
	if in.everySecond {
		asNew := d.worked
		apart := *t
		apart.Spacing *= 2
		l = apart.layout(g)
		d.worked = t.Efficiency * l.ReactionFactor(t.Head)
		d.respaced, d.share = true, 0.25 // nothing flows, and of that a quarter
		if asNew > 0 {
			d.share = d.worked / asNew
		}
	}
	with := fmt.Sprintf("K %s m/d", short(l.Above))
	if l.Below != l.Above {
		with += fmt.Sprintf(" (%s m/d below the trenches)", short(l.Below))
	}
	with += fmt.Sprintf(", μ %s %%, L %s m, d %s m", short(100*l.Porosity), short(l.Spacing), short(l.Equivalent))
	if t.Quadratic {
		d.rate, d.square = l.Quadratic()
		d.rate, d.square = t.Efficiency*d.rate, t.Efficiency*d.square
		d.quadratic = true
		d.from = "Hooghoudt's equation, (8·K·d·h + 4·K·h²)/L², with " + with + timesEfficiency(t.Efficiency)
		return d
	}
	d.rate = d.worked
	d.from = "π²·K·(d + h/2)/(μ·L²) with " + with + fmt.Sprintf(", h %s m", short(t.Head)) + timesEfficiency(t.Efficiency)
	return d
}

// layout is the trenches as package drain sees them, in a ground.
func (t *TrenchDrains) layout(g *Ground) drain.Layout {
	l := drain.Layout{
		Spacing: t.Spacing, Above: t.Conductivity, Below: t.Below, Equivalent: t.Equivalent, Porosity: g.CoverPorosity,
	}
	if l.Above == 0 {
		l.Above = g.CoverConductivity
	}
	if l.Below == 0 {
		l.Below = l.Above
	}
	if math.IsNaN(l.Equivalent) {
		l.Equivalent = t.equivalentDepth(g)
	}
	return l
}

// equivalentDepth is the depth of flow below the trenches as it is computed, m: 0 for trenches down to the contact.
func (t *TrenchDrains) equivalentDepth(g *Ground) float64 {
	under := g.CoverThickness - t.Depth
	if under <= tie {
		return 0
	}
	return drain.EquivalentDepth(under, t.Radius, t.Spacing)
}

func bored(b *BoredDrains) drainage {
	rate := b.Efficiency * b.Rate
	return drainage{
		layer: inDeep, rate: rate, worked: rate, invert: b.Level, ceiling: b.Ceiling,
		from: asGiven + timesEfficiency(b.Efficiency),
	}
}

// asGiven is said of a drain's rate that was not worked out.
const asGiven = "as given"

func timesEfficiency(e float64) string {
	if e == 1 {
		return ""
	}
	return fmt.Sprintf(", times the efficiency of %s %%", short(100*e))
}

// describe says in a few words what an option does, one text per measure.
func (o *Option) describe() []string {
	texts := []string{}
	for _, m := range o.Measures {
		switch {
		case m.Trench != nil && m.Trench.Spacing > 0:
			texts = append(texts, fmt.Sprintf("trench drains %s m deep, %s m apart", short(m.Trench.Depth), short(m.Trench.Spacing))+
				m.Trench.byLaw()+besides(m.Trench.Efficiency, m.Trench.Ceiling)+m.Trench.Decline.describe())
		case m.Trench != nil:
			texts = append(texts, fmt.Sprintf("trench drains %s m deep, %s /d", short(m.Trench.Depth), short(m.Trench.Rate))+
				besides(m.Trench.Efficiency, m.Trench.Ceiling)+m.Trench.Decline.describe())
		case m.Bored != nil:
			texts = append(texts, fmt.Sprintf("bored drains at %s m in the deep layer, %s /d", short(m.Bored.Level), short(m.Bored.Rate))+
				besides(m.Bored.Efficiency, m.Bored.Ceiling)+m.Bored.Decline.describe())
		case m.Cut != nil:
			texts = append(texts, fmt.Sprintf("%s %% of the infiltration kept out", short(100*m.Cut.KeptOut)))
		case m.Vegetation != nil:
			texts = append(texts, m.Vegetation.describe())
		case m.CutOff != nil:
			texts = append(texts, fmt.Sprintf("cut-off drain, %s %% of the lateral inflow intercepted", short(100*m.CutOff.Intercepted)))
		default:
			for _, a := range m.Set {
				texts = append(texts, a.Key+" set to "+a.Text)
			}
		}
	}
	return texts
}

func (t *TrenchDrains) byLaw() string {
	if t.Quadratic {
		return ", by the quadratic law"
	}
	return ""
}

func (d *Decline) describe() string {
	if d == nil {
		return ""
	}
	text := fmt.Sprintf(", half clogged after %s y", short(d.HalfLife))
	if !math.IsInf(d.Every, 1) {
		text += fmt.Sprintf(", flushed every %s y back to %s %%", short(d.Every), short(100*d.Restored))
	}
	return text
}

func (v *Vegetation) describe() string {
	text := fmt.Sprintf("planting, evapotranspiration times %s", short(v.PETFactor))
	if v.Interception > 0 {
		text += fmt.Sprintf(", %s %% of the rain intercepted", short(100*v.Interception))
	}
	return text
}

// besides says of a drain what its rate does not.
func besides(efficiency, ceiling float64) string {
	text := ""
	if efficiency != 1 {
		text += fmt.Sprintf(", %s %% efficient", short(100*efficiency))
	}
	if !math.IsInf(ceiling, 1) {
		text += fmt.Sprintf(", at most %s mm/d", short(ceiling))
	}
	return text
}

// short writes a number for people, with at most six significant digits.
func short(x float64) string { return strconv.FormatFloat(x, 'g', 6, 64) }

// minZeroInvertRate is the smaller of the two stores' total rates of outlets whose invert is zero, 1/d.
func (w *works) minZeroInvertRate() float64 {
	total := func(rates float64, drains []cascade.Outlet) float64 {
		for _, d := range drains {
			if d.Invert == 0 {
				rates += d.Rate
			}
		}
		return rates
	}
	return min(total(w.model.Cover.Seepage+w.model.Percolation.Rate, w.model.Cover.Drains),
		total(w.model.Deep.Seepage, w.model.Deep.Drains))
}

func (w *works) rates() result.Rates {
	r := w.ground.rates()
	if w.given != nil {
		given := w.given.rates()
		r.CoverPorosity, r.DeepPorosity = &w.ground.CoverPorosity, &w.ground.DeepPorosity
		given.CoverPorosity, given.DeepPorosity = &w.given.CoverPorosity, &w.given.DeepPorosity
		r.Given = &given
	}
	return r
}

func (g *Ground) rates() result.Rates {
	return result.Rates{
		CoverSeepagePerDay: g.CoverSeepage, CoverPercolationPerDay: g.Percolation,
		PercolationCeilingMMPerDay: finite(g.PercolationCap), DeepSeepagePerDay: g.DeepSeepage,
	}
}

// finite returns x, or nil where it stands for none.
func finite(x float64) *float64 {
	if math.IsInf(x, 0) || math.IsNaN(x) {
		return nil
	}
	return &x
}

// law names how a drain's outflow grows with the height of the water above it. It is the study's word, which a drain keeps
// that has stopped.
func (d *drainage) law() string { return lawName(d.quadratic) }

func lawName(quadratic bool) string {
	if quadratic {
		return "quadratic"
	}
	return "linear"
}

// withTrench is the option with other trench drains in place of its own.
func (o *Option) withTrench(t *TrenchDrains) *Option {
	other := *o
	other.Measures = slices.Clone(o.Measures)
	other.drains("trench_drains").Trench = t
	return &other
}
