package scenario

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// Limits at which a warning about works is raised.
const (
	mostStraightBore  = 40.0 // m of a bore beyond which its deviation matters: judgement
	roughEquivalent   = 0.15 // share by which a given equivalent depth may differ from the computed one: judgement
	leastSpacingRatio = 1.0  // of trench depth; usual are 2 to 6 (Hutchinson 1977 and CIRIA C591, from memory)
	mostSpacingRatio  = 10.0 // the same
	// Ground with wide cracks drains 10 to 20 % of its volume and carries more than 10 m/d; without them it drains 1 to 3 % and
	// carries 0.01 to 0.1 m/d (FAO Irrigation and Drainage Paper 62, 2007, annex 1). The limits are ten times beyond.
	wideConductivity  = 0.01 // m/d below which a porosity of mostTightPorosity and more is odd
	tightConductivity = 1.0  // m/d above which a porosity below leastWidePorosity is odd
	leastWidePorosity = 0.03
	mostTightPorosity = 0.10
	mostUnflushed     = 15.0   // y that bored drains go without flushing; published 15 to 20 at most
	slowEffect        = 365.25 // d
	leastMargin       = 1.05   // factor of safety in a usual wet season under which movement may break drains before they act: judgement
	leastTaken        = 0.1    // of the percolation that a trench takes: judgement
	lawMoves          = 0.05   // of an option's figure that the law may move unsaid: judgement
	lawMatters        = 0.001  // of the baseline's figure: the same
	headFar           = 2.0    // times by which the height over the drains may differ from the working head: judgement
	longHorizon       = 20.0   // y after which drains are renewed in practice: judgement, after published lives of drains
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
		if !plausibleRate(d.rate) {
			at.Code = "implausible_drain_rate"
			ws.add(at, "The %s drain at %s /d; usual are %s to %s /d. Check conductivity, spacing and their units.",
				measureWords(d.measure), short(d.rate), short(leastRate), short(mostRate))
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
				ws.add(at, "Trenches %.1f m deep are beyond common practice (about %.0f m). Check that they can be built on moving ground.", m.Trench.Depth, mostTrenchDepth)
			}
			if k := m.Trench.Conductivity; k != 0 && !(k >= leastConductivity && k <= mostConductivity) {
				at.Code = "implausible_ground"
				ws.add(at, "The trench's conductivity is %s m/d; usual are %s to %s m/d. Check the unit and the source.", short(k), short(leastConductivity), short(mostConductivity))
			}
		case m.Bored != nil:
			if l := m.Bored.Length; l > mostStraightBore && l <= mostBoreLength {
				at.Code, at.Severity = "bore_may_miss", result.Note
				ws.add(at, "Bores of %.0f m deviate and can miss the water or lose their fall. Allow for it in their number and efficiency, and survey them.", l)
				at.Severity = result.Warn
			}
			if m.Bored.Length > mostBoreLength {
				at.Code = "bore_long"
				ws.add(at, "Bores %.0f m long are beyond common practice (about %.0f m). Long bores deviate and miss the water.", m.Bored.Length, mostBoreLength)
			}
			if m.Bored.Efficiency > mostBoredShare {
				at.Code = "bored_drains_efficient"
				ws.add(at, "Bored drains are taken as %.0f %% efficient. In clay they often reach less water than planned; see what a lower efficiency does.", 100*m.Bored.Efficiency)
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
			ws.add(at(warn("bored_drains_unflushed")), "The bored drains go without flushing for more than %.0f years. Without upkeep such drains last 15 to 20 years at most; plan flushing, and pay for it.", mostUnflushed)
		}
		t := m.Trench
		if t == nil || t.Spacing == 0 {
			continue
		}
		l := t.layout(&w.ground)
		switch computed := t.equivalentDepth(&w.ground); {
		case math.IsNaN(t.Equivalent):
		case w.option.varied == "trench_drains.spacing" && computed > 0:
			ws.add(at(note("equivalent_depth_fixed")), "One equivalent_depth, %s m, serves all spacings of the list, though it grows with the spacing: here %s m are computed. Leave the key out.", short(t.Equivalent), short(math.Round(computed*1000)/1000))
		case math.Abs(t.Equivalent-computed) > roughEquivalent*computed:
			ws.add(at(note("equivalent_depth_differs")), "equivalent_depth is %s m; for a drain of %s m radius %s m are computed. Check for which spacing and radius it was worked out, or leave the key out.", short(t.Equivalent), short(t.Radius), short(math.Round(computed*1000)/1000))
		}
		if ratio := t.Spacing / t.Depth; !(ratio >= leastSpacingRatio && ratio <= mostSpacingRatio) {
			ws.add(at(note("spacing_unusual")), "The trenches are %s times as far apart as they are deep; usual are 2 to 6 times. Check spacing and depth.", short(math.Round(ratio*10)/10))
		}
		poresWarning(ws, at(warn("conductivity_and_porosity")), l.Above, l.Porosity)
		if s := p.study.Slope; s != nil && t.Depth < s.Depth-tie && !slices.ContainsFunc(*ws, func(w result.Warning) bool { return w.Code == "trench_above_slip" }) {
			ws.add(note("trench_above_slip"), "Trenches end above the slip surface, %s m down. In the model they act on it only by what no longer percolates; whether the water at the slip surface follows must be shown by readings there.", short(s.Depth))
		}
	}
}

// poresWarning holds a conductivity, m/d, and a drainable porosity against each other.
func poresWarning(ws *warnings, w result.Warning, k, n float64) {
	if n >= mostTightPorosity && k < wideConductivity || n < leastWidePorosity && k > tightConductivity {
		ws.add(w, "A conductivity of %s m/d hardly goes with a drainable porosity of %s %%: pores that drain freely carry water well, and tight ones do neither. One of the two is likely to be wrong, and the rate goes with their ratio.", short(k), short(100*n))
	}
}

// effectWarnings say where works take long to act.
func (p *prepared) effectWarnings(ws *warnings, w *works) {
	t := w.timeToEffect()
	if t == nil || t.Days <= slowEffect {
		return
	}
	slow := warn("slow_to_act")
	slow.Option = w.option.Name
	by := "the two stores"
	if t.ClayDays != nil && *t.ClayDays > t.StoreDays {
		by = "the clay between the trenches"
	}
	ws.add(slow, "It takes %s until nine tenths of the effect are there, by %s. Losses until then are not counted as avoided; keep what protects people today in force.", yearsText(t.Days), by)
	s := p.study.Slope
	if s == nil {
		return
	}
	g := &p.study.Ground
	top := yearlyHighest(p.base.deep, &p.counted)
	if fs := s.FactorOfSafety(max(0, top-(g.CoverThickness+g.DeepThickness-s.Depth))); fs < leastMargin {
		risk := warn("movement_before_effect")
		risk.Option = w.option.Name
		ws.add(risk, "In a usual year the baseline's highest level leaves a factor of safety of %.2f. Movement may shear drains before they act; build where movement is least, or draw the water down by pumping first.", fs)
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

// yearsText is a time of more than some months, in words.
func yearsText(days float64) string {
	years := yearsOf(days)
	if years < 2 {
		return fmt.Sprintf("%.0f months", math.Ceil(12*years))
	}
	return fmt.Sprintf("%.0f years", math.Ceil(years))
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
	var without, idle, kept []string
	costed := false
	for i := range s.Options {
		o := &s.Options[i]
		costed = costed || o.Costs != nil
		if o.Costs == nil {
			if !o.Baseline {
				without = append(without, o.Name)
			}
			continue
		}
		upkeep, renewed := 0.0, true
		for _, c := range o.Costs {
			upkeep += c.PerYear + c.PerFlush
			if c.Capital+c.PerMetre > 0 && c.Drains != "" && c.Life >= float64(s.Money.Horizon) {
				renewed = false
			}
		}
		if o.drained() && upkeep == 0 {
			idle = append(idle, o.Name)
		}
		if !renewed && float64(s.Money.Horizon) > longHorizon {
			kept = append(kept, o.Name)
		}
	}
	if len(idle) > 0 {
		ws.add(warn("upkeep_left_out"), "Drains without any cost of upkeep: %s. Inspection, flushing and readings cost something every year; give per_year or per_flush.", firstOf(idle, "; ", 8))
	}
	if len(kept) > 0 {
		ws.add(warn("never_renewed"), "Drains that are not renewed within %d years: %s. Few drains last so long; give cost.life.", s.Money.Horizon, firstOf(kept, "; ", 8))
	}
	if costed && len(without) > 0 {
		ws.add(note("cost_not_given"), "Without a cost, and so left out of what money can say: %s.", firstOf(without, "; ", 8))
	}
	if costed && s.lossBands() == nil {
		ws.add(note("losses_not_given"), "No band has a loss, so that no benefit can be set against the costs. Give loss_per_event or loss_per_day, or read the break-even loss.")
	}
	if !costed {
		ws.add(note("cost_not_given"), "money is given, and no option has a cost. Give the options a cost to have them compared by it.")
	}
}

// actionWarnings are what the replays of the first case say of how drains act: too little, at their ceiling, or far from the
// height that the linear law was worked out for.
func (p *prepared) actionWarnings(ws *warnings, f *optionFigures) {
	w := f.trace.works
	for i, d := range w.drains {
		at := warn("")
		at.Option = f.Name
		r := &f.Drains[i]
		if d.layer == inCover && r.RunningShare > 0 {
			if taken, sinks := f.WaterBalance.Cover.DrainsMM, f.WaterBalance.Cover.PercolationMM; taken < leastTaken*sinks {
				at.Code = "trench_takes_little"
				ws.add(at, "The trenches take %s of what percolates into the deep layer. They will hardly be felt there; set them closer or deeper, or look at other works.", percent(taken/sinks))
			}
		}
		if r.CeilingDaysPerYear != nil && *r.CeilingDaysPerYear > 0 {
			at.Code = "drain_at_ceiling"
			ws.add(at, "The %s carry all that they can on %s a year, when it matters most. Water backs up behind them then; see whether a larger outlet is worth its cost.", measureWords(d.measure), daysText(*r.CeilingDaysPerYear))
		}
	}
}

// lawWarnings replay with the quadratic law what was replayed with the linear one far from the height that this was worked
// out for, with the drains as new, and say by how much the deciding figure moves.
func (p *prepared) lawWarnings(ctx context.Context, ws *warnings, options []optionFigures, r *stats.Resamples) error {
	on := p.study.Count.DecideOn
	if on < 0 {
		return nil
	}
	type job struct {
		option                *Option
		head, linear, squared float64
	}
	var jobs []job
	for i := range options {
		f := &options[i]
		o := &p.study.Options[i]
		m := o.drains("trench_drains")
		if m == nil || m.Trench.Spacing == 0 || m.Trench.Quadratic || !math.IsInf(m.Trench.Ceiling, 1) {
			continue
		}
		k := slices.IndexFunc(f.Drains, func(d result.Drain) bool { return d.Measure == m.Key })
		if f.Drains[k].MeanHeadM == nil {
			continue
		}
		head := math.Pi * math.Pi / 8 * *f.Drains[k].MeanHeadM // midway, where the mean is that of half a sine
		if head*headFar >= m.Trench.Head && head <= headFar*m.Trench.Head {
			continue
		}
		j := job{option: o, head: head, linear: f.Decision.Value}
		for _, s := range f.States {
			if s.State == stateNew {
				j.linear = s.Value
			}
		}
		jobs = append(jobs, j)
	}
	err := each(len(jobs), func(k int) error {
		o := *jobs[k].option
		o.Measures = slices.Clone(o.Measures)
		m := o.drains("trench_drains")
		trench := *m.Trench
		trench.Quadratic, m.Trench = true, &trench
		f, err := p.replayed(ctx, newWorks(p.study, &o, &asBuilt, asNew))
		if err == nil {
			jobs[k].squared, _ = measureNamed(p.study.Count.DecideBy).figure(&f.Bands[on])
		}
		return err
	})
	if err != nil {
		return err
	}
	most := options[p.baseline].Decision.Value
	for _, j := range jobs {
		if moved := math.Abs(j.squared - j.linear); moved <= lawMoves*max(j.squared, j.linear) || moved <= lawMatters*most {
			continue
		}
		at := warn("linear_law_far")
		at.Option = j.option.Name
		too := "too much"
		if j.head > j.option.drains("trench_drains").Trench.Head {
			too = "too little"
		}
		ws.add(at, "While the trenches run the water stands %.2f m above them midway, and their linear rate was worked out for %s m: it lets out %s. By the quadratic law, which follows the height, the %s of the trenches as new is %s a year, not %s. Set working_head to what is usual here, or law: quadratic.",
			j.head, short(j.option.drains("trench_drains").Trench.Head), too, measureTitle(p.study.Count.DecideBy), figureText(p.study.Count.DecideBy, j.squared), figureText(p.study.Count.DecideBy, j.linear))
	}
	return nil
}

// figureText is a figure of a measure for people.
func figureText(measure string, value float64) string {
	switch measure {
	case "load":
		return strconv.FormatFloat(value, 'f', 2, 64) + " m·d"
	case "days":
		return strconv.FormatFloat(value, 'f', 1, 64) + " d"
	case "annual_probability":
		return percent(value)
	}
	return strconv.FormatFloat(value, 'f', 2, 64)
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
	if d.DifferenceCI != nil && -d.DifferenceCI[1] > more {
		return
	}
	ws.add(warn("net_benefit_tie"), "By net benefit the record cannot tell %s from %s, the two that are worth most. Choose between them on other grounds.", quoted(options[best].Name), quoted(options[next].Name))
}

// percent is a share for people.
func percent(share float64) string { return quantity.FormatNumber(math.Round(1000*share)/10) + " %" }

// daysText is a number of days a year for people.
func daysText(days float64) string { return quantity.FormatNumber(math.Round(10*days)/10) + " d" }

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
		var missed []string
		for _, s := range f.States {
			meets[s.State] = s.MeetsTarget
			if s.MeetsTarget == "no" {
				missed = append(missed, stateWords[s.State])
			}
		}
		aged := slices.ContainsFunc([]string{stateMean, stateHorizon, stateBefore}, func(s string) bool { return meets[s] == "no" })
		switch {
		case len(f.States) == 0 || meets[stateNew] == "no":
		case aged:
			ws.add(at, "The target is met with the drains as new, and missed %s. Size them for the state that they will be in.", fault.Words(missed, "and"))
		case len(missed) > 0:
			at.Code, at.Severity = "target_needs_drains", result.Note
			ws.add(at, "The target is missed %s. Say who keeps the drains running, and what is done if nobody does.", fault.Words(missed, "and"))
		}
	}
}

// stateWords say a state in a sentence.
var stateWords = map[string]string{
	stateNew: "with the drains as new", stateMean: "in the mean between flushes", stateHorizon: "in the mean over the horizon",
	stateBefore: "before a flush", stateNever: "if nobody ever flushes them", stateHalf: "with every second drain stopped", stateStopped: "with all drains stopped",
}

func measureWords(key string) string { return strings.ReplaceAll(key, "_", " ") }
