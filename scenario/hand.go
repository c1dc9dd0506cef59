package scenario

import (
	"fmt"
	"math"

	"quietslope/cascade/drain"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
)

// HandCheck works out parallel drains at one spacing or several by the formulas of package drain, for somebody who checks
// them by hand. The numbers are those of the query alone where s is nil; otherwise those of an option of the study, with its
// drains as new, but for what the query gives in their place. No weather is read.
//
// What is wrong with the query comes as one or more *fault.Error, which name the option of the command line.
func HandCheck(s *Study, q HandQuery) (*result.Drains, error) {
	r := &handReader{}
	h := q.read(r)
	var rows []handRow
	found := &result.Drains{Head: newHead(s, "drains")}
	found.Cautions = handCautions
	if s == nil {
		rows = h.rows(&q, r)
	} else {
		options, err := s.handOptions(q.Option)
		if err != nil {
			return nil, err
		}
		found.Option = options[0].option.Name
		if len(options) > 1 {
			found.Option = options[0].option.list
		}
		rows = h.rowsOf(s, options, &q, r)
		found.Layout.NotOfOption = q.inPlace()
	}
	if !r.wrong {
		h.check(rows, &q, r)
	}
	if r.wrong {
		return nil, r.Err()
	}
	for i := range rows {
		f, err := h.figures(s, &rows[i])
		if err != nil {
			return nil, err
		}
		found.Spacings = append(found.Spacings, *f)
	}
	found.DrainAnswer = found.Spacings[0].DrainAnswer
	h.layout(&found.Layout, &rows[0])
	found.Warnings = h.warnings(s, rows, found)
	return found, nil
}

// handRow are drains at one spacing.
type handRow struct {
	trench *TrenchDrains
	ground *Ground // with the porosity of an exact store; of a query alone its cover only, whose thickness may be NaN
	works  *works  // the option; nil for a query alone
}

// under is the thickness of the layer below the drains, m; NaN where it is not known.
func (r *handRow) under() float64 { return r.ground.CoverThickness - r.trench.Depth }

// onBase tells that the drains lie on the impermeable base, or that nothing is known of the ground below them.
func (r *handRow) onBase() bool { return !(r.under() > tie) }

// rows are the drains of a query alone.
func (h *hand) rows(q *HandQuery, r *handReader) []handRow {
	if q.Option != "" {
		r.add("--option", "it names an option of a study; give the study file too")
		return nil
	}
	for _, need := range []struct{ flag, text, what string }{
		{"--spacing", firstText(q.Spacings), "the distance from drain to drain, or several to compare, such as \"8 m, 12 m\""},
		{"--depth", q.Depth, "the depth of the drains below ground, such as \"3.0 m\""},
		{"--conductivity", q.Conductivity, "the hydraulic conductivity of the drained layer, such as \"0.02 m/d\""},
		{"--porosity", q.Porosity, "the drainable porosity of the layer, such as \"8 %\""},
	} {
		if need.text == "" {
			r.add(need.flag, "without a study and --option, give %s", need.what)
		}
	}
	g := &Ground{CoverThickness: h.thickness, CoverPorosity: h.porosity, Consolidation: or(h.consolidation, 0)}
	if q.Thickness == "" && math.IsNaN(h.equivalent) {
		g.CoverThickness = h.depth
	}
	var rows []handRow
	for _, spacing := range h.spacings {
		rows = append(rows, handRow{ground: g, trench: &TrenchDrains{
			Depth: h.depth, Spacing: spacing, Conductivity: h.conductivity, Below: or(h.below, 0),
			Radius: or(h.radius, usualRadius), Equivalent: h.equivalent, Head: or(h.head, h.depth/2),
			Efficiency: or(h.efficiency, 1), Ceiling: math.Inf(1),
		}})
	}
	return rows
}

// firstText is the first of some texts, "" for none.
func firstText(texts []string) string {
	if len(texts) == 0 {
		return ""
	}
	return texts[0]
}

// or is x, or what stands in for it where it is NaN.
func or(x, instead float64) float64 {
	if math.IsNaN(x) {
		return instead
	}
	return x
}

// rowsOf are the drains of options that differ in their spacing alone, with what the query gives in place of their numbers.
func (h *hand) rowsOf(s *Study, options []handOption, q *HandQuery, r *handReader) []handRow {
	name := quoted(options[0].option.Name)
	for _, own := range []struct{ flag, text string }{{"--depth", q.Depth}, {"--thickness", q.Thickness}, {"--porosity", q.Porosity}} {
		if own.text != "" {
			r.add(own.flag, "this is a number of the study, and %s has its own; change it there, or leave study and --option out and give all numbers here", name)
		}
	}
	if !math.IsNaN(options[0].trench().Equivalent) && (q.Radius != "" || q.Width != "") && q.EquivalentDepth == "" {
		r.add("--radius", "%s gives its equivalent depth, so that nothing rests on a radius; add --equivalent-depth %s", name, computed)
	}
	spacings := h.spacings
	if len(spacings) == 0 {
		for _, o := range options {
			spacings = append(spacings, o.trench().Spacing)
		}
	}
	var rows []handRow
	for i, spacing := range spacings {
		of := options[min(i, len(options)-1)]
		t := *of.trench()
		t.Spacing = spacing
		t.Conductivity, t.Below = or(h.conductivity, t.Conductivity), or(h.below, t.Below)
		t.Radius, t.Head, t.Efficiency = or(h.radius, t.Radius), or(h.head, t.Head), or(h.efficiency, t.Efficiency)
		if t.Equivalent = or(h.equivalent, t.Equivalent); h.computed {
			t.Equivalent = math.NaN()
		}
		w := newWorks(s, of.option.withTrench(&t), &asBuilt, asNew)
		w.ground.Consolidation = or(h.consolidation, w.ground.Consolidation)
		rows = append(rows, handRow{trench: &t, ground: &w.ground, works: w})
	}
	return rows
}

// inPlace names what a query gives in place of an option's numbers.
func (q *HandQuery) inPlace() []string {
	var names []string
	for _, g := range []struct{ name, text string }{
		{"spacing", firstText(q.Spacings)}, {"conductivity", q.Conductivity}, {"conductivity_below", q.ConductivityBelow},
		{"drain_radius", q.Radius + q.Width}, {"equivalent_depth", q.EquivalentDepth}, {"working_head", q.WorkingHead},
		{"efficiency", q.Efficiency}, {"consolidation", q.Consolidation},
	} {
		if g.text != "" {
			names = append(names, g.name)
		}
	}
	return names
}

// check holds the numbers of the query against one another, and against those of the option.
func (h *hand) check(rows []handRow, q *HandQuery, r *handReader) {
	t := rows[0].trench
	under := rows[0].under()
	if under < -tie {
		r.add("--thickness", "the layer is %s thick and the drains are %s deep: they would lie below its base; the thickness is counted from the ground", metres(h.thickness), metres(t.Depth))
		return
	}
	if h.equivalent > under+tie {
		r.add("--equivalent-depth", "%s is more than lies below the drains: the layer is %s thick and they are %s deep, which leaves %s", quoted(q.EquivalentDepth), metres(rows[0].ground.CoverThickness), metres(t.Depth), metres(max(0, under)))
	}
	flag := "--radius"
	if q.Width != "" {
		flag = "--width"
	}
	switch given := q.Radius+q.Width != ""; {
	case given && rows[0].works != nil && rows[0].onBase():
		r.add(flag, "the drains of the option lie on the base of the cover, where their radius is of no account; leave it out")
	case given && rows[0].onBase():
		r.add(flag, "it is of account only where ground lies below the drains, and none is known; give --thickness, the depth of the impermeable base, or leave it out")
	}
	if h.head > t.Depth+tie {
		r.add("--working-head", "%s is more than the depth of the drains, %s: water that stands so high above them lies above ground", quoted(q.WorkingHead), metres(t.Depth))
	}
	if h.fallFrom > t.Depth+tie {
		r.add("--fall", "%s is more than the depth of the drains, %s: water that stands so high above them lies above ground", metres(h.fallFrom), metres(t.Depth))
	}
	for i := range rows {
		if t := rows[i].trench; !rows[i].onBase() && 2*t.Radius >= t.Spacing {
			r.add("--spacing", "drains of a radius of %s leave no ground between them at a spacing of %s", metres(t.Radius), metres(t.Spacing))
			return
		}
	}
}

// leastHand is the least rate, 1/d, that is worked with: what empties by half in two thousand years.
const leastHand = 1e-6

// figures works out one spacing. Of the flow and the rate of the formulas the drains reach the share of their efficiency.
func (h *hand) figures(s *Study, row *handRow) (*result.DrainSpacing, error) {
	t := row.trench
	l := t.layout(row.ground)
	rate := t.Efficiency * l.ReactionFactor(t.Head)
	if !(rate >= leastHand && rate <= maxRate) {
		return nil, &fault.Error{Key: "--spacing", Text: fmt.Sprintf("drains %s apart work out at %s /d, and rates from %s to %s /d can be worked with; check spacing, conductivity and porosity, and their units",
			metres(t.Spacing), short(rate), short(leastHand), short(maxRate))}
	}
	f := &result.DrainSpacing{
		SpacingM: t.Spacing,
		DrainAnswer: result.DrainAnswer{
			EquivalentDepthM: l.Equivalent, ReactionFactorPerDay: rate, ReservoirCoefficientDays: 1 / rate, HalfLifeDays: math.Ln2 / rate,
		},
		FallsByHalfDays: drain.FallingTime(1, 0.5, rate),
	}
	if !row.onBase() {
		computed, moody := drain.EquivalentDepth(row.under(), t.Radius, t.Spacing), drain.MoodyDepth(row.under(), t.Radius, t.Spacing)
		f.ComputedDepthM, f.MoodyDepthM = &computed, &moody
	}
	heads := []float64{t.Head / 2, t.Head}
	if t.Depth > t.Head+tie {
		heads = append(heads, t.Depth)
	}
	for _, head := range heads {
		f.Outflows = append(f.Outflows, result.DrainOutflow{
			HeadM: head, LinearMMPerDay: linearFlow(rate, l.Porosity, head), HooghoudtMMPerDay: 1000 * t.Efficiency * l.SteadyFlow(head),
		})
	}
	if h.recharge > 0 {
		steady := l.SteadyHead(h.recharge / 1000 / t.Efficiency)
		linear := h.recharge / linearFlow(rate, l.Porosity, 1)
		f.SteadyHeadM, f.SteadyHeadLinearM = &steady, &linear
	}
	if h.fallFrom > 0 {
		days := drain.FallingTime(h.fallFrom, h.fallTo, t.Efficiency*l.ReactionFactor((h.fallFrom+h.fallTo)/2))
		f.FallDays = &days
	}
	effect := row.effect(rate)
	if effect != nil {
		f.TimeToEffectDays, f.StoreDays, f.ClayDays = &effect.Days, &effect.StoreDays, effect.ClayDays
	}
	if row.works != nil {
		f.Option = row.works.option.Name
		if m := s.metres(&Measure{Trench: t}); m > 0 {
			f.Metres = &m
		}
	}
	return f, nil
}

// linearFlow is the flow, mm/d, at a rate, 1/d, while the water stands head, m, above the drains midway: rate times the
// water stored, the mean height of the water being 8/pi^2 of the head, as in package drain.
func linearFlow(rate, porosity, head float64) float64 {
	return rate * 1000 * porosity / drain.Midway * head
}

// effect is the time to nine tenths of a change: of an option's deep level; of the drained ground alone for a query without
// one.
func (r *handRow) effect(rate float64) *result.TimeToEffect {
	if r.works != nil {
		return r.works.timeToEffect()
	}
	return responseOf(math.Inf(1), rate, r.trench.Spacing, r.ground.Consolidation)
}

// layout says what the figures were worked out from.
func (h *hand) layout(to *result.DrainLayout, row *handRow) {
	t, g := row.trench, row.ground
	l := t.layout(g)
	to.DepthM, to.ThicknessM = t.Depth, finite(g.CoverThickness)
	if to.ThicknessM != nil {
		under := max(0, row.under())
		to.BelowDrainsM = &under
	}
	to.ConductivityMPerDay, to.ConductivityBelowMPerDay, to.Porosity = l.Above, l.Below, l.Porosity
	if !row.onBase() {
		to.RadiusM, to.WidthM, to.WetM = &t.Radius, finite(h.width), finite(h.wet)
	}
	to.EquivalentDepth = computed
	if !math.IsNaN(t.Equivalent) {
		to.EquivalentDepth = "given"
	}
	to.WorkingHeadM, to.Efficiency = t.Head, t.Efficiency
	to.RechargeMMPerDay, to.FallFromM, to.FallToM = finite(h.recharge), finite(h.fallFrom), finite(h.fallTo)
	if c := g.Consolidation; c > 0 {
		to.ConsolidationM2PerYear = &c
	}
	if w := row.works; w != nil {
		to.Law = lawName(t.Quadratic)
		if w.given != nil {
			to.PorosityGiven = &w.given.CoverPorosity
		}
	}
}
