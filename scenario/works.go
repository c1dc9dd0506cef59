package scenario

import (
	"fmt"
	"math"
	"strconv"

	"quietslope/cascade"
	"quietslope/cascade/drain"
	"quietslope/scenario/result"
)

// Layers that a drain can act on, as the results name them.
const (
	inCover = "cover"
	inDeep  = "deep"
)

// works is an option made into numbers: the ground after its changes, the water that still enters, and the two stores
// with the drains beside their natural outlets.
type works struct {
	option  *Option
	ground  Ground
	keptOut float64 // share of the infiltration that no longer enters
	drains  []drainage
	model   cascade.Model
}

// check refuses a drain whose rate, worked out from its spacing, is beyond what can be replayed.
func (w *works) check(s *Study) error {
	for _, d := range w.drains {
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
	rate    float64 // 1/d, after efficiency
	invert  float64 // m above the base of its layer
	ceiling float64 // mm/d; +Inf for none
	index   int     // among the drains of its store in the model
	from    string  // how the rate came about
}

// newWorks applies an option's measures to the ground of the study: first the changed numbers, then everything else, so
// that a trench is worked out in the ground that it is dug in.
func newWorks(s *Study, o *Option) *works {
	w := &works{option: o, ground: s.Ground}
	for _, m := range o.Measures {
		for _, a := range m.Set {
			w.ground.assign(a)
		}
	}
	g := &w.ground
	w.model = cascade.Model{
		Cover:       cascade.Store{Capacity: storage(g.CoverFullAt, g.CoverPorosity), Seepage: g.CoverSeepage},
		Percolation: cascade.Outlet{Rate: g.Percolation, Ceiling: g.PercolationCap},
		Deep:        cascade.Store{Capacity: storage(g.DeepFullAt, g.DeepPorosity), Seepage: g.DeepSeepage},
		Lateral:     g.Lateral,
	}
	enters := 1.0
	for _, m := range o.Measures {
		switch {
		case m.Trench != nil:
			w.addDrain(m, trench(m, g))
		case m.Bored != nil:
			w.addDrain(m, bored(m))
		case m.Cut != nil:
			enters *= 1 - m.Cut.KeptOut
		}
	}
	w.keptOut = 1 - enters
	return w
}

// storage is the drainable water in mm below a level in m.
func storage(level, porosity float64) float64 { return 1000 * porosity * level }

func (w *works) addDrain(m Measure, d drainage) {
	d.measure, d.place = m.Key, m.Place
	store, porosity := &w.model.Cover, w.ground.CoverPorosity
	if d.layer == inDeep {
		store, porosity = &w.model.Deep, w.ground.DeepPorosity
	}
	d.index = len(store.Drains)
	store.Drains = append(store.Drains, cascade.Outlet{
		Rate: d.rate, Invert: storage(d.invert, porosity), Ceiling: d.ceiling,
	})
	w.drains = append(w.drains, d)
}

// trench turns trench drains into an outlet of the cover. Between parallel trenches the water leaves at the reaction
// factor of the cover, whose flow depth is the equivalent depth below the drains and half of the working head above them,
// the head being half of the trench's depth.
func trench(m Measure, g *Ground) drainage {
	t := m.Trench
	d := drainage{layer: inCover, ceiling: t.Ceiling, invert: max(0, g.CoverThickness-t.Depth)}
	if t.Spacing == 0 {
		d.rate = t.Efficiency * t.Rate
		d.from = "as given" + timesEfficiency(t.Efficiency)
		return d
	}
	conductivity := t.Conductivity
	if conductivity == 0 {
		conductivity = g.CoverConductivity
	}
	equivalent := t.Equivalent
	if math.IsNaN(equivalent) { // a trench that reaches the contact has nothing below it
		equivalent = 0
	}
	head := t.Depth / 2
	flow := equivalent + head/2
	d.rate = t.Efficiency * drain.ReactionFactor(conductivity, flow, g.CoverPorosity, t.Spacing)
	d.from = fmt.Sprintf("π²·K·D/(μ·L²) with K %s m/d, D %s m, μ %s %%, L %s m",
		short(conductivity), short(flow), short(100*g.CoverPorosity), short(t.Spacing)) + timesEfficiency(t.Efficiency)
	return d
}

func bored(m Measure) drainage {
	b := m.Bored
	return drainage{
		layer: inDeep, rate: b.Efficiency * b.Rate, invert: b.Level, ceiling: b.Ceiling,
		from: "as given" + timesEfficiency(b.Efficiency),
	}
}

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
				besides(m.Trench.Efficiency, m.Trench.Ceiling))
		case m.Trench != nil:
			texts = append(texts, fmt.Sprintf("trench drains %s m deep, %s /d", short(m.Trench.Depth), short(m.Trench.Rate))+
				besides(m.Trench.Efficiency, m.Trench.Ceiling))
		case m.Bored != nil:
			texts = append(texts, fmt.Sprintf("bored drains at %s m in the deep layer, %s /d", short(m.Bored.Level), short(m.Bored.Rate))+
				besides(m.Bored.Efficiency, m.Bored.Ceiling))
		case m.Cut != nil:
			texts = append(texts, fmt.Sprintf("%s %% of the infiltration kept out", short(100*m.Cut.KeptOut)))
		default:
			for _, a := range m.Set {
				texts = append(texts, a.Key+" set to "+a.Text)
			}
		}
	}
	return texts
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
	return result.Rates{
		CoverSeepagePerDay:         w.model.Cover.Seepage,
		CoverPercolationPerDay:     w.model.Percolation.Rate,
		PercolationCeilingMMPerDay: finite(w.model.Percolation.Ceiling),
		DeepSeepagePerDay:          w.model.Deep.Seepage,
	}
}

// finite returns x, or nil where it stands for none.
func finite(x float64) *float64 {
	if math.IsInf(x, 0) || math.IsNaN(x) {
		return nil
	}
	return &x
}
