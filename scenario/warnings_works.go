package scenario

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// Limits at which a warning about works is raised.
const (
	mostStraightBore  = 40.0 // m of a bore beyond which its deviation matters: judgement
	roughEquivalent   = 0.15 // share by which a given equivalent depth may differ from the computed one: judgement
	leastSpacingRatio = 1.0  // of trench depth; usual are 2 to 6 (Hutchinson 1977 and CIRIA C591, from memory)
	mostSpacingRatio  = 10.0 // the same
	// Clay without wide cracks drains 1 to 3 % of its volume and carries 0.01 to 0.1 m/d (FAO Irrigation and Drainage Paper 62,
	// 2007, annex 1). What drains 10 % and more, silt and fine sand (Johnson 1967, USGS WSP 1662-D) or clay with wide cracks,
	// carries 0.09 m/d and more (loess and very fine sand, Terzaghi & Peck 1967). The limits are about ten times beyond.
	wideConductivity  = 0.01 // m/d below which a porosity of mostTightPorosity and more is odd
	tightConductivity = 1.0  // m/d above which a porosity below leastWidePorosity is odd
	leastWidePorosity = 0.03
	mostTightPorosity = 0.10
	mostUnflushed     = 15.0   // y that bored drains go without flushing; published 15 to 20 at most (European guidance, after Pun & Urciuoli 2008)
	slowEffect        = 365.25 // d
	leastMargin       = 1.05   // factor of safety in a usual wet season under which movement may break drains before they act: judgement
	leastTaken        = 0.1    // of the percolation that a trench takes: judgement
	lawMoves          = 0.05   // of an option's figure that the law may move unsaid: judgement
	lawMatters        = 0.001  // of the baseline's figure: the same
	headFar           = 2.0    // times by which the height over the drains may differ from the working head: judgement
	longHorizon       = 20.0   // y; few drains have been watched for longer (17 y, Price & Fitch 2017; 20 y, TRL CR61)
	muchLowered       = 1.0    // m of the mean deep level from which wells and foundations nearby may feel it: judgement
)

// drainWarnings hold each drain of an option against the levels without works and, where the option was replayed, against
// what it carried.
func (p *prepared) drainWarnings(ws *warnings, w *works, replayed []result.Drain) {
	for i, d := range w.drains {
		levels := p.base.cover
		if d.layer == inDeep {
			levels = p.base.deep
		}
		levels = levels[p.counted.from:p.counted.to]
		dry := 0
		for _, h := range levels {
			if h <= d.invert {
				dry++
			}
		}
		share := float64(dry) / float64(len(levels))
		at := warn("drain_never_runs")
		at.Option = w.option.Name
		switch {
		case replayed != nil && replayed[i].RunningShare == 0 && dry < len(levels):
			ws.add(at, "The %s lie at %.2f m, and in this option the %s level is never above that: what else the option does leaves them nothing to carry. Set them deeper or leave them out.",
				measureWords(d.measure), d.invert, d.layer)
		case replayed != nil && replayed[i].RunningShare == 0, replayed == nil && dry == len(levels):
			ws.add(at, "The %s lie at %.2f m and the baseline's %s level never rises above %.2f m: they do nothing in this record. Set them deeper where there is water below them, or check why there is none.",
				measureWords(d.measure), d.invert, d.layer, largest(levels))
		case share > drainDryShare:
			at.Code = "drain_runs_rarely"
			ws.add(at, "The %s lie at %.2f m, at or above the baseline's %s level on %.0f %% of the steps. They act on the highest levels only; make sure that this is meant.",
				measureWords(d.measure), d.invert, d.layer, math.Floor(100*share))
		}
		if !plausibleRate(d.worked) { // of the quadratic law not its linear part, which is nothing on the contact
			at.Code = "implausible_drain_rate"
			ws.add(at, "The %s drain at %s /d; usual are %s to %s /d. Check conductivity, spacing and their units.",
				measureWords(d.measure), short(d.worked), short(leastRate), short(mostRate))
		}
	}
}

func plausibleRate(r float64) bool { return r >= leastRate && r <= mostRate }

// practiceWarnings hold the works as planned against common practice.
func (p *prepared) practiceWarnings(ws *warnings, w *works) {
	for _, m := range w.option.Measures {
		at := warn("")
		at.Option = w.option.Name
		switch {
		case m.Trench != nil:
			if m.Trench.Depth > mostTrenchDepth {
				at.Code = "trench_deep"
				ws.add(at, "Trenches %.1f m deep are beyond common practice (about %.0f m; Price & Fitch 2017). Check that they can be built on moving ground.", m.Trench.Depth, mostTrenchDepth)
			}
			for _, q := range []struct {
				key   string
				value float64
			}{{"conductivity", m.Trench.Conductivity}, {"conductivity_below", m.Trench.Below}} {
				if q.value != 0 && !(q.value >= leastConductivity && q.value <= mostConductivity) {
					at.Code = "implausible_ground"
					ws.add(at, "The trench's %s is %s m/d; usual are %s to %s m/d. Check the unit and the source.", q.key, short(q.value), short(leastConductivity), short(mostConductivity))
				}
			}
		case m.Bored != nil:
			if l := m.Bored.Length; l > mostStraightBore && l <= mostBoreLength && m.Bored.Efficiency == 1 {
				at.Code = "bore_may_miss"
				ws.add(at, "Bores of more than %.0f m deviate and can miss the water or lose their fall, and an efficiency of 100 %% allows for none of that. Take a lower one, and have the bores surveyed.", mostStraightBore)
			}
			if m.Bored.Length > mostBoreLength {
				at.Code = "bore_long"
				ws.add(at, "Bores %.0f m long are beyond common practice (about %.0f m). Long bores deviate and miss the water.", m.Bored.Length, mostBoreLength)
			}
			if m.Bored.Efficiency > mostBoredShare {
				at.Code = "bored_drains_efficient"
				ws.add(at, "Bored drains are taken as %s %% efficient. In clay they often reach less water than planned; see what a lower efficiency does.", short(100*m.Bored.Efficiency))
			}
		case m.Cut != nil && m.Cut.KeptOut > mostKeptOut:
			at.Code = "much_kept_out"
			ws.add(at, "Surface water works are taken to keep out %s %% of the infiltration. That is a share over the whole plan area, so run-off from at least that share of it must be collected and led away from the slope; check that it can be, or lower kept_out.", short(100*m.Cut.KeptOut))
		case m.Vegetation != nil && (m.Vegetation.PETFactor != 1 || m.Vegetation.Interception > 0):
			at.Code = "planting_at_once"
			ws.add(at, "The planting acts in full from the first day and alike in all seasons. It takes years to grow, and does little in winter, when levels are high; do not count on it for the first years, and see what half of it does.")
		case m.CutOff != nil && m.CutOff.Intercepted > mostIntercepted:
			at.Code = "cut_off_complete"
			ws.add(at, "The cut-off drain is taken to intercept %s %% of the lateral inflow. Water passes below and around it: no more can be taken than the share of the wet depth that it cuts; check its depth against that, or lower intercepted.", short(100*m.CutOff.Intercepted))
		}
	}
}

// designWarnings hold what a drain is worked out from against what it would be, and against the other numbers of the ground.
func (p *prepared) designWarnings(ws *warnings, w *works) {
	at := func(of result.Warning) result.Warning {
		of.Option = w.option.Name
		return of
	}
	for i := range w.option.Measures {
		m := &w.option.Measures[i]
		if (m.Trench != nil || m.Bored != nil) && m.decline() == nil {
			ws.add(at(warn("drains_never_clog")), "The %s are taken as new for ever. Drains clog; give decline with a half_life, such as 10 y and 20 y in turn, and see what is left.", measureWords(m.Key))
		}
		if m.Bored != nil && m.Bored.Decline != nil && m.Bored.Decline.Every > mostUnflushed {
			ws.add(at(warn("bored_drains_unflushed")), "The bored drains go without flushing for more than %.0f years. Without upkeep such drains last 15 to 20 years at most (European guidance); plan flushing, and pay for it.", mostUnflushed)
		}
		if m.Trench == nil {
			continue
		}
		if s := p.study.Slope; s != nil && m.Trench.Depth < s.Depth-tie {
			ws.add(at(warn("trench_above_slip")), "The trenches end above the slip surface, which is %s m down, and the model takes it that its water follows that of the cover. Where it lies in a permeable zone of its own, trenches that do not reach that may do little (Ostuni and others 2026). Readings at the slip surface must show that it follows.", short(s.Depth))
		}
		if m.Trench.Spacing > 0 {
			layoutWarnings(ws, at, w, m.Trench)
		}
	}
}

// layoutWarnings hold the numbers against each other that the rate of parallel trenches is worked out from.
func layoutWarnings(ws *warnings, at func(result.Warning) result.Warning, w *works, t *TrenchDrains) {
	l := t.layout(&w.ground)
	under, computed := w.ground.CoverThickness-t.Depth, t.equivalentDepth(&w.ground)
	given := !math.IsNaN(t.Equivalent)
	found := short(math.Round(1000*computed) / 1000)
	const check = "Check for which spacing and radius it was worked out, or leave the key out."
	switch {
	case given && computed > 0 && w.option.varied == "trench_drains.spacing":
		ws.add(at(note("equivalent_depth_fixed")), "One equivalent_depth, %s m, serves all spacings of the list, though it grows with the spacing. Leave the key out, and it is computed for each.", short(t.Equivalent))
	case given && t.Equivalent > (1+roughEquivalent)*computed:
		ws.add(at(warn("equivalent_depth_differs")), "equivalent_depth is %s m, and for a drain of %s m radius only %s m are computed: the rate may be too high. "+check, short(t.Equivalent), short(t.Radius), found)
	case given && t.Equivalent < (1-roughEquivalent)*computed:
		ws.add(at(note("equivalent_depth_differs")), "equivalent_depth is %s m; for a drain of %s m radius %s m are computed. "+check, short(t.Equivalent), short(t.Radius), found)
	case !given && under > tie && (under < math.Pi*t.Radius || t.Spacing < leastRadii*t.Radius):
		ws.add(at(warn("formula_range")), "Drains of %s m radius are not thin against the ground between or below them, for which the formula of the equivalent depth is made. Give a smaller drain_radius, or equivalent_depth itself.", short(t.Radius))
	}
	const usual = "times as far apart as they are deep; usual are 2 to 6 times (Hutchinson 1977, quoted from memory). Check spacing and depth."
	switch ratio := t.Spacing / t.Depth; {
	case ratio < leastSpacingRatio:
		ws.add(at(note("spacing_unusual")), "The trenches are less than %s "+usual, short(leastSpacingRatio))
	case ratio > mostSpacingRatio:
		ws.add(at(note("spacing_unusual")), "The trenches are more than %s "+usual, short(mostSpacingRatio))
	}
	poresWarning(ws, at(warn("conductivity_and_porosity")), l.Above, l.Porosity)
}

// poresWarning holds a conductivity, m/d, and a drainable porosity against each other.
func poresWarning(ws *warnings, w result.Warning, k, n float64) {
	if n >= mostTightPorosity && k < wideConductivity || n < leastWidePorosity && k > tightConductivity {
		ws.add(w, "A conductivity of %s m/d hardly goes with a drainable porosity of %s %%: pores that drain freely carry water well, and tight ones do neither (FAO Irrigation and Drainage Paper 62, 2007). One of the two is likely to be wrong, and the rate goes with their ratio.", short(k), short(100*n))
	}
}

// effectWarnings say where works take long to act.
func (p *prepared) effectWarnings(ws *warnings, w *works) {
	t := w.timeToEffect()
	if t == nil || t.Days <= slowEffect {
		return
	}
	at := func(code string) result.Warning {
		found := warn(code)
		found.Option = w.option.Name
		return found
	}
	because := ""
	if t.ClayDays != nil && *t.ClayDays > t.StoreDays {
		because = ", since the clay between the trenches is slow"
	}
	longer := "a million years" // as good as never
	if years := yearsOf(t.Days); years < 1e6 {
		longer = fault.Count(int(years), "year")
	}
	ws.add(at("slow_to_act"), "It takes more than %s until nine tenths of the effect on the deep level are there%s, and all figures are those of works that act in full. Losses until then are not counted as avoided. Keep in force what protects people today.",
		longer, because)
	s := p.study.Slope
	if s == nil || !w.option.drained() {
		return
	}
	g := &p.study.Ground
	top := yearlyHighest(p.base.deep, &p.counted)
	if fs := s.FactorOfSafety(max(0, top-(g.CoverThickness+g.DeepThickness-s.Depth))); fs < leastMargin {
		ws.add(at("movement_before_effect"), "In a usual year the baseline's highest level leaves a factor of safety of %.2f, less than %s. Movement may shear the drains before they act: build where movement is least, or draw the water down by pumping first.", fs, short(leastMargin))
	}
}

// yearlyHighest is the mean of the highest levels of the counted years, m.
func yearlyHighest(levels []float64, c *period) float64 {
	top := make([]float64, c.years)
	for y := range top {
		top[y] = math.Inf(-1)
	}
	for i := c.from; i < c.to; i++ {
		if y := c.calendar.Year[i]; y >= 0 {
			top[y] = max(top[y], levels[i])
		}
	}
	return total(top) / float64(c.years)
}

// moneyWarnings say what is missing in the costs and losses.
func (p *prepared) moneyWarnings(ws *warnings) {
	s := p.study
	if s.Money == nil {
		return
	}
	if s.Money.Contingency == 0 {
		ws.add(warn("no_contingency"), "No contingency is added to the capital sums. Before ground and tenders are known works cost more than planned; give money.contingency.")
	}
	costed := slices.ContainsFunc(s.Options, func(o Option) bool { return o.Costs != nil })
	if !costed {
		ws.add(note("cost_not_given"), "money is given, and no option has a cost. Give the options a cost to have them compared by it.")
		return
	}
	for i := range s.Options {
		o := &s.Options[i]
		at := func(w result.Warning) result.Warning {
			w.Option = o.Name
			return w
		}
		if o.Costs == nil {
			if !o.Baseline {
				ws.add(at(note("cost_not_given")), "The option has no cost, and so is left out of all that money can say. Give it a cost.")
			}
			continue
		}
		upkeep, kept := 0.0, false
		for _, c := range o.Costs {
			upkeep += c.PerYear + c.PerFlush
			if c.Capital+c.PerMetre > 0 && c.Drains != "" && c.Life >= float64(s.Money.Horizon) {
				kept = true
			}
		}
		if o.drained() && upkeep == 0 {
			ws.add(at(warn("upkeep_left_out")), "The drains cost nothing after they are built. Inspection, flushing and readings cost something every year; give per_year or per_flush.")
		}
		if kept && float64(s.Money.Horizon) > longHorizon {
			ws.add(at(warn("never_renewed")), "The drains are not renewed in the %d years that money counts. Few drains have been watched for more than %.0f years; give a cost.life of fewer years, and see what renewing them changes.", s.Money.Horizon, longHorizon)
		}
	}
	if s.lossBands() == nil {
		ws.add(note("losses_not_given"), "No band has a loss, so that no benefit can be set against the costs. Give loss_per_event or loss_per_day, or read the break-even loss.")
	}
}

// actionWarnings are what the replays of the first case say of how works act: too little, at their ceiling, or on neighbours
// too.
func (p *prepared) actionWarnings(ws *warnings, f, base *optionFigures) {
	at := func(w result.Warning) result.Warning {
		w.Option = f.Name
		return w
	}
	for i, d := range f.trace.works.drains {
		r := &f.Drains[i]
		if taken, sinks := f.WaterBalance.Cover.DrainsMM, f.WaterBalance.Cover.PercolationMM; d.layer == inCover && r.RunningShare > 0 && taken < leastTaken*sinks {
			ws.add(at(warn("trench_takes_little")), "The trenches take less than %s %% of what percolates into the deep layer. They will hardly be felt there; set them closer or deeper, or look at other works.", short(100*leastTaken))
		}
		if r.CeilingDaysPerYear != nil && *r.CeilingDaysPerYear > 0 {
			ws.add(at(warn("drain_at_ceiling")), "The %s carry all that they can on %s d a year, when it matters most. Water backs up behind them then; see whether a larger outlet is worth its cost.", measureWords(d.measure), short(math.Round(10**r.CeilingDaysPerYear)/10))
		}
	}
	if near := p.study.Declared["wells_or_buildings_nearby"]; near != "no" && base.Level.MeanM-f.Level.MeanM > muchLowered {
		ws.add(at(note("mean_level_much_lowered")), "The mean deep level falls by more than %s m, which wells, springs and foundations within some 50 m may feel. Look for them, and what consents are needed.", short(muchLowered))
	}
}

// stoppedWarnings say where nobody sees what is left with the drains stopped, since there is no figure that decides.
func (p *prepared) stoppedWarnings(ws *warnings) {
	if p.study.Count.DecideOn >= 0 {
		return
	}
	for i := range p.study.Options {
		if o := &p.study.Options[i]; o.drained() {
			w := warn("stopped_drains_not_shown")
			w.Option = o.Name
			ws.add(w, "What is left with the drains stopped is not shown, since no band decides. Design codes ask that failed drains be considered; give count.decide_on.")
		}
	}
}

// lawWarnings replay with the quadratic law what was replayed with the linear one far from the height that this was worked
// out for, with the drains as new, and say by how much the deciding figure moves. The options for which the linear law lets out
// too much share one text, and so do those for which it lets out too little.
func (p *prepared) lawWarnings(ctx context.Context, ws *warnings, options []optionFigures) error {
	on := p.study.Count.DecideOn
	if on < 0 {
		return nil
	}
	m := measureNamed(p.study.Count.DecideBy)
	type job struct {
		option          *Option
		high            bool    // the water stands higher than the rate was worked out for
		linear, squared float64 // the deciding figure
	}
	var jobs []job
	for i := range options {
		f, o := &options[i], &p.study.Options[i]
		trench := o.drains("trench_drains")
		if trench == nil || trench.Trench.Spacing == 0 || trench.Trench.Quadratic || !math.IsInf(trench.Trench.Ceiling, 1) {
			continue
		}
		k := slices.IndexFunc(f.Drains, func(d result.Drain) bool { return d.Measure == trench.Key })
		if f.Drains[k].MeanHeadM == nil { // they never run
			continue
		}
		head := math.Pi * math.Pi / 8 * *f.Drains[k].MeanHeadM // midway, where the mean is that of half a sine
		if head*headFar >= trench.Trench.Head && head <= headFar*trench.Trench.Head {
			continue
		}
		j := job{option: o, high: head > trench.Trench.Head, linear: f.Decision.Value}
		for _, s := range f.States {
			if s.State == stateNew {
				j.linear = s.Value
			}
		}
		jobs = append(jobs, j)
	}
	err := each(len(jobs), func(k int) error {
		f, err := p.replayed(ctx, newWorks(p.study, byQuadraticLaw(jobs[k].option), &asBuilt, asNew))
		if err == nil {
			jobs[k].squared, _ = m.figure(&f.Bands[on])
		}
		return err
	})
	if err != nil {
		return err
	}
	most, _ := m.figure(&options[p.baseline].Bands[on])
	jobs = slices.DeleteFunc(jobs, func(j job) bool {
		moved := math.Abs(j.squared - j.linear)
		return moved <= lawMoves*max(j.squared, j.linear) || moved <= lawMatters*most
	})
	yearly := figureOf[m.name]
	for _, high := range []bool{false, true} {
		far, too := "less than half", "much"
		if high {
			far, too = "more than twice", "little"
		}
		var moved []string
		for _, j := range jobs {
			if j.high == high {
				moved = append(moved, fmt.Sprintf("%s %s, not %s", quoted(j.option.Name), yearly.text(j.squared), yearly.text(j.linear)))
			}
		}
		for _, j := range jobs {
			if j.high != high {
				continue
			}
			at := warn("linear_law_far")
			at.Option, at.Band = j.option.Name, p.study.Bands[on].Name
			ws.add(at, "While the trenches run the water midway stands at %s of their working_head, so that their linear rate lets out too %s. By the quadratic law, which follows the height, and with the drains as new the %s would be%s: %s. Set working_head to the usual height, or law: quadratic.",
				far, too, measureTitle(m.name), yearly.unit, firstOf(moved, "; ", mostPairs))
		}
	}
	return nil
}

// byQuadraticLaw is an option with trenches, given by a spacing, that follow the quadratic law.
func byQuadraticLaw(o *Option) *Option {
	other := *o
	other.Measures = slices.Clone(o.Measures)
	m := other.drains("trench_drains")
	trench := *m.Trench
	trench.Quadratic, m.Trench = true, &trench
	return &other
}

// figureWriter writes the figures of a measure for people, in a unit that is said once.
type figureWriter struct {
	unit  string
	scale float64
}

// figureOf has the measures of count.decide_by.
var figureOf = map[string]figureWriter{
	"load": {", in m·d a year", 1}, "days": {", in d a year", 1}, "events": {", per year", 1}, "annual_probability": {", in %", 100},
}

// text is a figure to about three digits.
func (f figureWriter) text(figure float64) string {
	figure *= f.scale
	if figure < 1 {
		return strconv.FormatFloat(figure, 'g', 2, 64)
	}
	return strconv.FormatFloat(figure, 'f', max(0, 2-int(math.Log10(figure))), 64)
}

// worthWarnings say where the record cannot tell which option is worth most.
func (p *prepared) worthWarnings(ws *warnings, options []optionFigures, r *stats.Resamples) {
	base := &options[p.baseline]
	if base.losses == nil || base.Cost == nil {
		return
	}
	best, next := -1, -1 // by net benefit; leaving things as they are has none
	net := func(i int) float64 {
		switch c := options[i].Cost; {
		case i == p.baseline:
			return 0
		case c == nil || c.NetBenefit == nil:
			return math.Inf(-1)
		default:
			return *c.NetBenefit
		}
	}
	for i := range options {
		switch {
		case math.IsInf(net(i), -1):
		case best < 0 || net(i) > net(best):
			best, next = i, best
		case next < 0 || net(i) > net(next):
			next = i
		}
	}
	if next < 0 {
		return
	}
	worth := func(i int) []float64 { // less the avoided loss of each year, at its present value
		byYear := make([]float64, p.counted.years)
		if i != p.baseline {
			factor := p.benefitFactor(&options[i])
			for y := range byYear {
				byYear[y] = factor * (options[i].losses[y] - base.losses[y])
			}
		}
		return byYear
	}
	d := r.Compare(worth(best), worth(next), p.study.Count.Confidence)
	more := options[best].Cost.PresentValue - options[next].Cost.PresentValue
	least := 0.0 // that the best avoids more than the next, as sure as the ranges are; where they are alike in every year just that
	switch {
	case d.DifferenceCI != nil:
		least = -d.DifferenceCI[1]
	case d.YearsEqual < p.counted.years: // a single year has no range
		least = math.Inf(-1)
	}
	if stats.Less(more, least) {
		return
	}
	ws.add(warn("net_benefit_tie"), "By net benefit the record cannot tell %s from %s, the two that are worth most. Choose between them on other grounds.", quoted(options[best].Name), quoted(options[next].Name))
}

// reachWarnings say where the record is too short to show that anything meets the target: where even no event in all its years
// has a range that ends above it. Loads and days have none then.
func (p *prepared) reachWarnings(ws *warnings) {
	t := p.study.Count.Target
	if t == nil {
		return
	}
	n, confidence := p.counted.years, p.study.Count.Confidence
	var most, needed float64
	switch t.Measure {
	case "events":
		_, most = stats.PoissonInterval(0, float64(n), confidence)
		needed = most * float64(n) / t.Most
	case "annual_probability":
		_, most = stats.BinomialInterval(0, n, confidence)
		needed = math.Log1p(-most) * float64(n) / math.Log1p(-t.Most)
	}
	if !stats.Less(t.Most, most) {
		return
	}
	w := note("target_cannot_be_shown")
	w.Band = p.study.Bands[p.study.Count.DecideOn].Name
	years := "No record is long enough for a target of none"
	if t.Most > 0 {
		years = fmt.Sprintf("That takes %.0f years", math.Ceil(needed*(1-1e-9)))
	}
	ws.add(w, "In %s the record cannot show at %s %% that anything meets the target, even without a single event. %s; read whether the figure itself meets it, or set a target by days or load.",
		fault.Count(n, "year"), short(100*confidence), years)
}

// targetWarnings say how far meeting the target hangs on upkeep.
func (p *prepared) targetWarnings(ws *warnings, options []optionFigures) {
	t := p.study.Count.Target
	if t == nil {
		return
	}
	for i := range options {
		f := &options[i]
		at := warn("target_only_as_new")
		at.Option, at.Band = f.Name, p.study.Bands[p.study.Count.DecideOn].Name
		meets := map[string]string{}
		for _, s := range f.States {
			meets[s.State] = s.MeetsTarget
		}
		missed := func(states ...string) (words []string) {
			for _, s := range states {
				if meets[s] == "no" {
					words = append(words, stateWords[s])
				}
			}
			return words
		}
		if len(f.States) == 0 || meets[stateNew] == "no" {
			continue
		}
		if aged := missed(stateMean, stateHorizon, stateBefore); len(aged) > 0 { // the mildest says it all
			ws.add(at, "The target is met with the drains as new, and missed %s. Size them for the state that they will be in: give a condition with the share that is left then, and name it to size with --condition.", aged[0])
		} else if lapsed := missed(stateNever, stateHalf, stateStopped); len(lapsed) > 0 {
			at.Code, at.Severity = "target_needs_drains", result.Note
			ws.add(at, "The target is missed %s. Say who keeps them running, and what is done if nobody does.", fault.Words(lapsed, "and"))
		}
	}
}

// stateWords say a state in a sentence.
var stateWords = map[string]string{
	stateMean: "in the mean between flushes", stateHorizon: "in the mean over the horizon", stateBefore: "before a flush",
	stateNever: "if nobody ever flushes the drains", stateHalf: "with every second drain stopped", stateStopped: "with all drains stopped",
}

func measureWords(key string) string { return strings.ReplaceAll(key, "_", " ") }
