package scenario

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strconv"

	"quietslope/cascade/drain"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
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
		if m.Bored != nil && m.Bored.Decline.neglected() > mostUnflushed {
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
	case given && computed > 0 && w.option.varied == variedSpacing:
		ws.add(at(note("equivalent_depth_fixed")), "One equivalent_depth, %s m, serves all spacings of the list, though it grows with the spacing. Leave the key out, and it is computed for each.", short(t.Equivalent))
	case given && t.Equivalent > (1+roughEquivalent)*computed:
		ws.add(at(warn("equivalent_depth_differs")), "equivalent_depth is %s m, and for a drain of %s m radius only %s m are computed: the rate may be too high. "+check, short(t.Equivalent), short(t.Radius), found)
	case given && t.Equivalent < (1-roughEquivalent)*computed:
		ws.add(at(note("equivalent_depth_differs")), "equivalent_depth is %s m; for a drain of %s m radius %s m are computed. "+check, short(t.Equivalent), short(t.Radius), found)
	case !given && t.thickDrains(under):
		ws.add(at(warn("formula_range")), "Drains of %s m radius are not thin against the ground between or below them, for which the formula of the equivalent depth is made. Give a smaller drain_radius, or equivalent_depth itself.", short(t.Radius))
	}
	if ratio := t.Spacing / t.Depth; t.unusualSpacing() {
		digits := 0 // two significant ones
		if ratio < leastSpacingRatio {
			digits = 1 - int(math.Floor(math.Log10(ratio)))
		}
		ws.add(at(note("spacing_unusual")), "The trenches are %s times as far apart as they are deep; usual are 2 to 6 times (Hutchinson 1977, quoted from memory). Check spacing and depth.", strconv.FormatFloat(ratio, 'f', digits, 64))
	}
	poresWarning(ws, at(warn("conductivity_and_porosity")), l.Above, l.Porosity)
}

// thickDrains tells whether drains are too thick, against the ground between them or below them (m), for the formula of the
// equivalent depth. With no ground below them there is none to be worked out.
func (t *TrenchDrains) thickDrains(under float64) bool {
	return under > tie && (under < math.Pi*t.Radius || t.Spacing < leastRadii*t.Radius)
}

// unusualSpacing tells whether trenches are much closer together or farther apart than their depth lets expect.
func (t *TrenchDrains) unusualSpacing() bool {
	ratio := t.Spacing / t.Depth
	return !(ratio >= leastSpacingRatio && ratio <= mostSpacingRatio)
}

// farFromHead tells whether a height of the water over trenches, m, differs much from the working head of their linear rate.
func (t *TrenchDrains) farFromHead(height float64) bool {
	return height*headFar < t.Head || height > headFar*t.Head
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
// out for, with the drains as new, and say by how much the deciding figure moves. The options whose water stands lower share
// one text, and so do those whose water stands higher. Which law has the higher figure does not follow from that: bands are
// passed while the water stands high.
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
		head := drain.Midway * *f.Drains[k].MeanHeadM
		if !trench.Trench.farFromHead(head) {
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
	for _, high := range []bool{false, true} {
		far := "less than half"
		if high {
			far = "more than twice"
		}
		var moved []string
		for _, j := range jobs {
			if j.high == high {
				moved = append(moved, fmt.Sprintf("%s %s, not %s", quoted(j.option.Name), m.text(j.squared), m.text(j.linear)))
			}
		}
		for _, j := range jobs {
			if j.high != high {
				continue
			}
			at := warn("linear_law_far")
			at.Option, at.Band = j.option.Name, p.study.Bands[on].Name
			ws.add(at, "While the trenches run the water midway stands at %s of their working_head on average; below that head a linear rate lets out too much, above it too little. By the quadratic law, which follows the height, and with the drains as new the %s would be%s: %s. Set working_head to the usual height, or law: quadratic.",
				far, measureTitle(m.name), m.unit, firstOf(moved, "; ", mostPairs))
		}
	}
	return nil
}

// byQuadraticLaw is an option with trenches, given by a spacing, that follow the quadratic law.
func byQuadraticLaw(o *Option) *Option {
	t := *o.drains("trench_drains").Trench
	t.Quadratic = true
	return o.withTrench(&t)
}
