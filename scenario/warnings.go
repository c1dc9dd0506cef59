package scenario

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"time"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/scenario/weather"
	"quietslope/stats"
)

// Limits at which a warning is raised.
const (
	schemeFelt       = 0.10 // m of deep level by which the converted stores leave the scheme: judgement
	startFelt        = 0.01 // m of deep level at the first counted step that still depend on the start: judgement
	mostPairs        = 10   // of options that a warning names
	closeToCapacity  = 0.10 // m below capacity within which peaks count as clipped: judgement
	refusedShare     = 0.01 // of the percolation: judgement
	drainDryShare    = 0.95 // of the steps on which the baseline's level is at or below a drain: judgement
	fewYears         = 10   // below which counts say hardly anything: judgement
	fewEvents        = 5    // below which a rate says little: judgement
	mostOfTheYear    = 180  // d a year above a band beyond which its events run into one another: judgement
	leastValidDays   = 25   // days with measured rain of a usable month (rule of the US agriculture service for climate statistics, from memory)
	mostFilled       = 0.05 // of a year's days, or of its rain: judgement
	shortRecordYears = 30   // least length advised for extremes of groundwater level (Geosciences 2020, 10, 373)
)

// Plausible ranges. A number outside them is worth a second look, no more.
const (
	leastConductivity  = 1e-11 * 86400 // m/d, of any soil: judgement
	mostConductivity   = 1e-3 * 86400
	leastInfiltration  = 0.05   // share of the rain: judgement
	leastWater         = 5.0    // mm, of a soil: judgement
	mostWater          = 500.0  // the same
	leastArea          = 100.0  // m2 of a slope in plan: judgement
	leastPorosity      = 0.002  // drainable: judgement, after the specific yields of Johnson 1967, USGS WSP 1662-D
	mostPorosity       = 0.30   // the same
	mostClayPorosity   = 0.10   // of a clay: judgement, after the same
	leastRate          = 1e-4   // 1/d, of a store or a drain: judgement
	mostRate           = 5.0    // 1/d, closely drained sandy land (Smedema & Rycroft 1983, from memory)
	leastConsolidation = 0.1    // m2/y, of clays: from memory
	mostConsolidation  = 1000.0 // the same, fissured
	mostTrenchDepth    = 6.0    // m, usual for counterfort drains (Price & Fitch 2017, 20th NZGS Symposium)
	mostBoreLength     = 100.0  // m: judgement
	mostBoredShare     = 0.90   // efficiency of bored drains in clay: judgement
	mostKeptOut        = 0.50   // of the infiltration over the whole plan area: judgement
	mostIntercepted    = 0.90   // of the lateral inflow: judgement
)

// warnings collects warnings in the order in which they are raised.
type warnings []result.Warning

func (ws *warnings) add(w result.Warning, format string, args ...any) {
	w.Text = fmt.Sprintf(format, args...)
	*ws = append(*ws, w)
}

func warn(code string) result.Warning { return result.Warning{Code: code, Severity: result.Warn} }
func note(code string) result.Warning { return result.Warning{Code: code, Severity: result.Note} }

// studyWarnings are about what was declared, the ground, the bands, the record and the works as planned. They need no
// option replayed but the baseline. Where the options were replayed, options holds their figures; otherwise it is nil.
func (p *prepared) studyWarnings(options []optionFigures) []result.Warning {
	ws := warnings{}
	p.declaredWarnings(&ws)
	p.bandWarnings(&ws)
	p.rechargeWarnings(&ws)
	raised := p.groundWarnings(&p.study.Ground, "")
	ws = append(ws, raised...)
	p.recordWarnings(&ws)
	if a := p.study.Site.PlanArea; a > 0 && a < leastArea {
		ws.add(warn("implausible_area"), "site.plan_area is %s m2, less than any slope that is drained. Check the unit: 1 ha is 10000 m2.", short(a))
	}
	p.conditionWarnings(&ws)
	for i, w := range p.works {
		if slices.ContainsFunc(w.option.Measures, func(m Measure) bool { return m.Set != nil }) {
			for _, found := range p.groundWarnings(w.calibrated(), w.option.Name) {
				same := found
				same.Option = ""
				if !slices.Contains(raised, same) {
					ws = append(ws, found)
				}
			}
		}
		var replayed []result.Drain
		if options != nil {
			replayed = options[i].Drains
		}
		p.drainWarnings(&ws, w, replayed)
		p.practiceWarnings(&ws, w)
		p.designWarnings(&ws, w)
		p.effectWarnings(&ws, w)
	}
	p.stoppedWarnings(&ws)
	p.reachWarnings(&ws)
	p.moneyWarnings(&ws)
	return ws
}

// conditionWarnings name the conditions that change nothing.
func (p *prepared) conditionWarnings(ws *warnings) {
	for k, c := range p.cases {
		acts := slices.ContainsFunc(c.works, func(w *works) bool {
			built := p.works[slices.Index(c.works, w)]
			return w.uptake != built.uptake || !reflect.DeepEqual(w.model, built.model)
		})
		if k > 0 && !acts {
			w := warn("condition_changes_nothing")
			w.Condition = c.condition
			ws.add(w, "The condition leaves every option as it is built. Give the shares that are left, such as drains: 45 %%, or leave the condition out.")
		}
	}
}

func (p *prepared) declaredWarnings(ws *warnings) {
	d := p.study.Declared
	const unknown = "unknown"
	if d["existing_slip_surface"] == unknown {
		ws.add(warn("existing_slip_surface_unknown"),
			"It is not declared that the slope moves on an existing slip surface. The method is for slow movement on an old surface; find out and declare it before using any figure.")
	}
	if d["rapid_movement_possible"] == unknown {
		ws.add(warn("rapid_movement_unknown"),
			"It is not declared whether rapid movement is possible. Where it is, these figures must not be used; find out and declare it.")
	}
	var open []string
	for _, key := range DeclaredKeys[2:] {
		if d[key] == unknown {
			open = append(open, key)
		}
	}
	if len(open) > 0 {
		ws.add(warn("declared_unanswered"), "Not answered under declared: %s. Answer each with yes or no, and weigh what a yes would change.", strings.Join(open, ", "))
	}
	has := func(is func(Measure) bool) bool {
		return slices.ContainsFunc(p.works, func(w *works) bool { return slices.ContainsFunc(w.option.Measures, is) })
	}
	drained := has(func(m Measure) bool { return m.Trench != nil || m.Bored != nil || m.CutOff != nil })
	outlets := drained || has(func(m Measure) bool { return m.Cut != nil })
	for _, yes := range []struct {
		key, code, severity string
		matters             bool
		text                string
	}{
		{"ground_changed_since_calibration", "ground_changed", result.Warn, true,
			"The ground has changed since the calibration. Rates, porosities and critical levels may no longer hold; calibrate again, or set the bands anew from movement since the change."},
		{"iron_or_lime_in_water", "drains_may_clog", result.Warn, drained,
			"Iron or lime in the water clogs drains. Plan access, flushing and inspection, and give a condition in which little is left of the drains, to see what hangs on them."},
		{"perched_water", "perched_water", result.Note, true,
			"Perched water is not in the model. Drains may lower the deep level and leave it."},
		{"outlet_on_moving_ground", "outlet_on_moving_ground", result.Warn, outlets,
			"An outlet on moving ground can shear or leak and then feeds the slide. Lead the water to stable ground and inspect the outlet."},
		{"wells_or_buildings_nearby", "wells_or_buildings_nearby", result.Note, drained,
			"A lower water level can dry wells and settle foundations nearby. Check them, and what consents are needed."},
	} {
		if d[yes.key] == "yes" && yes.matters {
			ws.add(result.Warning{Code: yes.code, Severity: yes.severity}, "%s", yes.text)
		}
	}
}

func (p *prepared) bandWarnings(ws *warnings) {
	s := p.study
	readings := s.Ground.CalibratedTo
	given := map[string]bool{}
	for i := range s.Bands {
		b := &s.Bands[i]
		given[b.GivenAs] = true
		if b.Level > readings+tie {
			w := warn("band_beyond_readings")
			w.Band = b.Name
			ws.add(w, "The band begins at %.2f m, above the highest reading of the calibration (%.2f m). The response there is extrapolated; read more winters before relying on it.", b.Level, readings)
		}
	}
	for i := range s.Bands {
		if b := &s.Bands[i]; b.Level > s.Ground.CoverThickness+s.Ground.DeepThickness+tie {
			w := warn("band_above_ground")
			w.Band = b.Name
			ws.add(w, "The band begins %.2f m above ground. Only artesian water stands there, which the model does not have; check the level and what it was measured from.",
				b.Level-s.Ground.CoverThickness-s.Ground.DeepThickness)
		}
	}
	if readings > s.Ground.DeepFullAt+tie {
		ws.add(warn("readings_above_full"), "ground.calibrated_to is %.2f m, and the deep layer is full at %.2f m above its base: no reading of that level can be that high. Make sure that it is not a depth or an elevation.", readings, s.Ground.DeepFullAt)
	}
	if math.IsNaN(readings) {
		ws.add(warn("readings_unknown"), "ground.calibrated_to is not given, so no band is known to lie within the readings. Give the highest deep level in the readings used for calibration.")
	}
	if given["elevation"] && given["below_ground"] {
		ws.add(warn("bands_in_two_datums"), "Some bands are given as an elevation and some as a depth below ground. Make sure that site.ground_level (%.2f m) is the ground from which those depths were measured.", s.Site.GroundLevel)
	}
	if on := s.Count.DecideOn; on >= 0 && s.Bands[on].Until == s.Bands[on].Level {
		w := note("no_arrest_level")
		w.Band = s.Bands[on].Name
		ws.add(w, "Onset and arrest are taken at the same level. Movement often stops at another level than it starts at; where readings of movement tell, give until.")
	}
}

// rechargeWarnings say what the weather and the ground leave out of the recharge.
func (p *prepared) rechargeWarnings(ws *warnings) {
	switch {
	case p.record.PET != nil && p.study.Ground.Soil == nil:
		ws.add(note("drying_overstated"), "Evapotranspiration is drawn from the cover at the full rate, which overstates drying where the water table is deep. Give ground.soil to keep a soil-water balance.")
	case p.record.PET == nil:
		ws.add(note("no_evapotranspiration"), "The weather has no evapotranspiration: all that infiltrates is recharge, in summer too. Give weather.columns.pet and ground.soil unless the infiltration share was calibrated so.")
	}
}

// groundWarnings hold the numbers of a ground, that of the study or of an option that changes it, against what is usual.
func (p *prepared) groundWarnings(g *Ground, option string) warnings {
	var ws warnings
	at := func(w result.Warning) result.Warning {
		w.Option = option
		return w
	}
	if !math.IsInf(g.InfiltrationLimit, 1) && (p.record.Monthly() || p.record.Step > time.Hour) {
		ws.add(at(note("limit_hardly_acts")), "An infiltration limit hardly acts with steps of %s, over which rain is spread evenly. Give hourly or shorter steps, or lower the infiltration share instead.", p.record.StepText())
	}
	water := 0.0
	if g.Soil != nil {
		water = g.Soil.Available
	}
	for _, q := range []struct {
		key         string
		value       float64
		least, most float64
		unit        string
		scale       float64
	}{
		{"soil.available_water", water, leastWater, mostWater, "mm", 1},
		{"surface.infiltration", g.Infiltration, leastInfiltration, 1, "%", 100},
		{"cover.drainable_porosity", g.CoverPorosity, leastPorosity, mostPorosity, "%", 100},
		{"deep.drainable_porosity", g.DeepPorosity, 0, mostClayPorosity, "%", 100},
		{"cover.conductivity", g.CoverConductivity, leastConductivity, mostConductivity, "m/d", 1},
		{"cover.seepage", g.CoverSeepage, leastRate, mostRate, "/d", 1},
		{"cover.percolation", g.Percolation, leastRate, mostRate, "/d", 1},
		{"deep.seepage", g.DeepSeepage, leastRate, mostRate, "/d", 1},
		{"deep.consolidation", g.Consolidation, leastConsolidation, mostConsolidation, "m2/y", 1},
	} {
		if q.value != 0 && !(q.value >= q.least && q.value <= q.most) {
			ws.add(at(warn("implausible_ground")), "%s is %s %s; usual are %s to %s %s. Check the unit and the source.",
				q.key, short(q.value*q.scale), q.unit, short(q.least*q.scale), short(q.most*q.scale), q.unit)
		}
	}
	if fast := g.CoverSeepage + g.Percolation; g.DeepSeepage > fast {
		ws.add(at(warn("deep_faster_than_cover")), "The deep layer empties faster (%s /d) than the cover (%s /d). In fissured clay under a permeable cover it is usually the other way round; check that the rates are not swapped.",
			short(g.DeepSeepage), short(fast))
	}
	return ws
}

func (p *prepared) recordWarnings(ws *warnings) {
	switch n := p.counted.years; {
	case n < fewYears:
		ws.add(warn("record_short"), "%s counted: too few to compare options by counts. Find a longer record, at least %d years, and use this one for looking at levels only.", fault.Count(n, "complete year"), shortRecordYears)
	case n < shortRecordYears:
		ws.add(warn("record_short"), "%s counted; at least %d are advised where rare levels matter. Do not read return periods beyond the record into the counts.", fault.Count(n, "complete year"), shortRecordYears)
	}
	if p.record.Monthly() {
		soil := ""
		if p.study.Ground.Soil != nil {
			soil = ", and with a soil the recharge of wet days in dry months is missed"
		}
		ws.add(warn("monthly_steps"), "The steps are calendar months: a level is seen at the end of each month only, and days above a band come in whole months. Rain is spread evenly over the month, so peaks are damped and those within a month are missed%s. Find daily weather where there is any.", soil)
	}
	p.gapWarnings(ws)
	for _, q := range p.record.Implausible() {
		at := q.From
		if q.To != q.From {
			at += " to " + q.To
		}
		ws.add(warn("implausible_weather"), "%s: %s. Every figure rests on it.", at, q.Text)
	}
	if p.replayer.warm.repeats {
		ws.add(note("warm_up_repeats_record"), "The warm-up of %s is longer than the record, which was replayed from its beginning more than once to fill it.", fault.Count(p.replayer.warm.years, "year"))
	}
}

// gapWarnings say how much of the record was filled, and which counted years rest on it.
func (p *prepared) gapWarnings(ws *warnings) {
	r := p.record
	if len(r.Filled) == 0 {
		return
	}
	var steps, rain, pet int
	for _, g := range r.Filled {
		n := g.To - g.From
		steps += n
		if g.Rain {
			rain += n
		}
		if g.PET {
			pet += n
		}
	}
	var of, lost []string
	if rain > 0 {
		of, lost = append(of, fault.Count(rain, "step")+" without a value of rain"), append(lost, "rain that fell and was not recorded is missing from every level")
	}
	if pet > 0 {
		of, lost = append(of, fault.Count(pet, "step")+" without a value of evapotranspiration"), append(lost, "without evapotranspiration levels are too high")
	}
	what := strings.Join(of, " and ")
	if p.study.Weather.Gaps == weather.GapsZero {
		ws.add(warn("gaps_filled"), "Filled with zero: %s, of %d steps; %s. Complete the record, or see what weather.gaps: month mean gives.", what, len(r.Rain), strings.Join(lost, ", and "))
	} else {
		ws.add(note("gaps_filled"), "Filled with the mean of the calendar month: %s, of %d steps. Means have no storms; complete the record from a station nearby where a wet time is missing.", what, len(r.Rain))
	}
	if years := p.filledYears(); len(years) > 0 {
		ws.add(warn("years_much_filled"), "Much of the rain is filled in %s: %s. A month there has fewer than %d days of measured rain, or more than %.0f %% of the year's days or rain are filled. Their events rest on it; complete these years, or cut the record.",
			fault.Count(len(years), "counted year"), firstOf(years, ", ", 8), leastValidDays, 100*mostFilled)
	}
}

// filledYears names the counted years that have a month with too few days of measured rain, or too much filled rain.
func (p *prepared) filledYears() []string {
	r, c := p.record, &p.counted
	lost := make([][12]float64, c.years) // days without rain, by month
	filled, fallen := make([]float64, c.years), make([]float64, c.years)
	missing, length := make([]float64, c.years), make([]float64, c.years)
	for _, g := range r.Filled {
		for i := g.From; i < g.To; i++ {
			if y := c.calendar.Year[i]; y >= 0 && g.Rain {
				lost[y][c.calendar.Month[i]] += c.calendar.Days[i]
				filled[y] += r.Rain[i]
				missing[y] += c.calendar.Days[i]
			}
		}
	}
	for i, y := range c.calendar.Year {
		if y >= 0 {
			fallen[y] += r.Rain[i]
			length[y] += c.calendar.Days[i]
		}
	}
	var names []string
	first := r.Start(c.from).Year()
	for y := range c.years {
		much := filled[y] > mostFilled*fallen[y] || missing[y] > mostFilled*length[y]
		for m := range 12 {
			year := first + y
			if time.Month(m+1) < c.starts {
				year++
			}
			days := time.Date(year, time.Month(m+2), 0, 0, 0, 0, 0, time.UTC).Day()
			much = much || lost[y][m] > 0 && float64(days)-lost[y][m] < leastValidDays
		}
		if much {
			names = append(names, c.yearName(first+y))
		}
	}
	return names
}

// yearName names a counted year by the calendar years that it lies in.
func (c *period) yearName(first int) string {
	if c.starts == time.January {
		return strconv.Itoa(first)
	}
	return fmt.Sprintf("%d/%02d", first, (first+1)%100)
}

// firstOf lists the first of some words, and how many more there are.
func firstOf(words []string, sep string, most int) string {
	if len(words) <= most {
		return strings.Join(words, sep)
	}
	return strings.Join(words[:most], sep) + fmt.Sprintf(" and %d more", len(words)-most)
}

// conversionWarnings say where converted rates do not stand for the scheme that they were calibrated with.
func conversionWarnings(ws *warnings, c *result.Conversion) {
	switch {
	case c == nil:
	case c.LargestDifference == nil:
		ws.add(note("conversion_unchecked"), "The rates come from the %s scheme with steps of %s d, and the record has other steps, so that the replay by the scheme cannot be held against the exact one. The deep store's conversion is approximate; check it on a record with those steps.",
			c.Scheme, short(c.StepDays))
	case c.LargestDifference.DeepM > schemeFelt:
		ws.add(warn("conversion_differs"), "Replayed by the %s scheme itself the deep level differs by up to %.2f m (%s): the scheme lets the cover's water arrive early or late within a step. Calibrate again with exact steps, or take bands and readings as no surer than that.",
			c.Scheme, c.LargestDifference.DeepM, c.LargestDifference.DeepAt)
	}
}

// resultWarnings are those that the replays of one case raise. Changes are against one of the options.
func (p *prepared) resultWarnings(options []optionFigures, against int, r *stats.Resamples) warnings {
	ws := warnings{}
	for i := range options {
		p.replayWarnings(&ws, &options[i])
	}
	p.countWarnings(&ws, options)
	p.changeWarnings(&ws, options, against)
	p.choiceWarnings(&ws, options, against, r)
	return ws
}

// ofCases joins the warnings of all cases. One that every case raises in the same words is about none of them; any other
// names its case.
func (p *prepared) ofCases(raised []warnings) []result.Warning {
	in := map[result.Warning]int{} // number of cases
	for _, ws := range raised {
		seen := map[result.Warning]bool{}
		for _, w := range ws {
			if !seen[w] {
				in[w]++
			}
			seen[w] = true
		}
	}
	all := []result.Warning{}
	for k, ws := range raised {
		for _, w := range ws {
			switch {
			case in[w] < len(raised):
				w.Climate, w.Condition = AsRecorded, p.cases[k].condition
			case k > 0: // said of the first
				continue
			}
			all = append(all, w)
		}
	}
	return all
}

func (p *prepared) replayWarnings(ws *warnings, f *optionFigures) {
	t := &f.trace
	g := &t.works.ground
	at := func(code string) result.Warning {
		w := warn(code)
		w.Option = f.Name
		return w
	}
	switch given := p.study.Ground.Start != nil; {
	case t.fromDry > startFelt && given:
		ws.add(at("start_still_felt"), "Replayed from dry, the deep level at the first counted step differs by %.2f m: the first counted years rest on the levels of ground.start. Make sure that they were read on the day on which the record begins, or give ground.warm_up.", t.fromDry)
	case t.fromDry > startFelt:
		ws.add(at("start_still_felt"), "Replayed from dry, the deep level at the first counted step differs by %.2f m. Give a longer ground.warm_up, or ground.start levels that were measured.", t.fromDry)
	}
	if thickness := g.CoverThickness + g.DeepThickness; t.deepMax > thickness+tie || t.coverMax > g.CoverThickness+tie {
		ws.add(at("level_above_ground"), "A level rises above ground: the deep one to %.2f m above its base, where ground is at %.2f m, the cover's to %.2f m above the contact, where ground is at %.2f m. That is outside the meaning of the model; check the porosities and rates, and let full_at be ground level at most.",
			t.deepMax, thickness, t.coverMax, g.CoverThickness)
	}
	if t.deepMax > g.DeepFullAt-closeToCapacity {
		ws.add(at("peaks_clipped"), "The highest deep level (%.2f m) comes within %.0f cm of the level at which the layer is full (%.2f m). Peaks are clipped there, and figures of bands close below are too low.",
			t.deepMax, 100*closeToCapacity, g.DeepFullAt)
	}
	if t.refusedShare > refusedShare {
		ws.add(at("deep_refuses_water"), "The deep layer is full so often that it refuses %.0f %% of the percolation. The cover's level is then too low; check deep.drainable_porosity, deep.full_at and the rates.", 100*t.refusedShare)
	}
}

// countWarnings say where the counts are too small to carry a rate.
func (p *prepared) countWarnings(ws *warnings, options []optionFigures) {
	for b, band := range p.study.Bands {
		for i := range options {
			f := &options[i].Bands[b]
			at := warn("no_events")
			at.Option, at.Band = options[i].Name, band.Name
			switch {
			case f.Events == 0 && f.DaysPerYear == 0:
				ws.add(at, "None in %s, which does not mean that none can come: up to %s events a year fit this record at %s %%.",
					fault.Count(p.counted.years, "year"), strconv.FormatFloat(f.EventsPerYearCI[1], 'g', 2, 64), short(100*p.study.Count.Confidence))
			case f.Events == 0:
				at.Code = "events_peak_outside"
				ws.add(at, "Passed on %s d a year, in events that peak outside the counted years, so that none of them is counted. Read days and load.", short(math.Round(10*f.DaysPerYear)/10))
			case f.Events < fewEvents && f.DaysPerYear > mostOfTheYear:
				at.Code = "few_events"
				ws.add(at, "Passed for most of the time, in few long events: their number says nothing. Read days and load.")
			case f.Events < fewEvents:
				at.Code = "few_events"
				ws.add(at, "Fewer than %d events, too few for a rate; read the ranges.", fewEvents)
			}
		}
	}
}

// changeWarnings say where two measures of a change point opposite ways.
func (p *prepared) changeWarnings(ws *warnings, options []optionFigures, against int) {
	for i := range options {
		for b := range options[i].Bands {
			c := options[i].Bands[b].Change
			if c == nil || c.DaysPerYear.Difference*c.EventsPerYear.Difference >= 0 {
				continue
			}
			w := warn("days_and_events_disagree")
			w.Option, w.Band = options[i].Name, options[i].Bands[b].Name
			if c.DaysPerYear.Difference < 0 {
				ws.add(w, "Fewer days but more events than %s: long events were split. Read days and load with the count.", p.called(against))
			} else {
				ws.add(w, "More days but fewer events than %s: events were joined. Read days and load with the count.", p.called(against))
			}
		}
	}
}

// called is what a text calls an option that others are compared with.
func (p *prepared) called(option int) string {
	if option == p.baseline {
		return "the baseline"
	}
	return quoted(p.study.Options[option].Name)
}

// choiceWarnings say what the record cannot tell about the order of the options.
func (p *prepared) choiceWarnings(ws *warnings, options []optionFigures, against int, r *stats.Resamples) {
	on := p.study.Count.DecideOn
	if on < 0 || len(options) < 2 {
		return
	}
	band := p.study.Bands[on].Name
	m := measureNamed(p.study.Count.DecideBy)

	passed := slices.ContainsFunc(options, func(f optionFigures) bool { return f.Bands[on].DaysPerYear > 0 || f.Bands[on].Events > 0 })
	if !passed {
		w := warn("nothing_to_decide_on")
		w.Band = band
		ws.add(w, "No option's level rises above this band in the counted years, so the record cannot compare them on it. Make sure of the band's level; if it is right, read this as none in %s, and decide on a lower band.", fault.Count(p.counted.years, "year"))
		return
	}
	for i := range options {
		switch c := options[i].Bands[on].Change; {
		case c == nil || c.ToldApart:
		case m.of(c).YearsEqual == p.counted.years:
			w := note("no_effect")
			w.Option, w.Band = options[i].Name, band
			ws.add(w, "By %s the same as %s in every counted year: on this band the difference between the two does nothing.", measureTitle(m.name), p.called(against))
		default:
			w := warn("not_told_apart")
			w.Option, w.Band = options[i].Name, band
			ws.add(w, "Not told apart from %s on this record by %s. Do not read a benefit, or none, into the difference.", p.called(against), measureTitle(m.name))
		}
	}

	var order []int // of the others; each was held against that one above
	for i := range options {
		if i != against {
			order = append(order, i)
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return options[a].Decision.Rank - options[b].Decision.Rank })
	var pairs, equals []string
	last := 0 // place of the option that was found equal last
	for k := 1; k < len(order); k++ {
		first, next := &options[order[k-1]], &options[order[k]]
		switch c := r.Compare(m.byYear(&first.passed[on]), m.byYear(&next.passed[on]), p.study.Count.Confidence); {
		case c.YearsEqual == p.counted.years:
			if len(equals) > 0 && last == k-1 {
				equals[len(equals)-1] += " = " + next.Name
			} else {
				equals = append(equals, first.Name+" = "+next.Name)
			}
			last = k
		case !c.ToldApart(p.study.Count.Confidence):
			pairs = append(pairs, first.Name+" / "+next.Name)
		}
	}
	if len(equals) > 0 {
		w := note("equal_every_year")
		w.Band = band
		ws.add(w, "Alike by %s in every counted year: %s. Choose between them on other grounds.", measureTitle(m.name), strings.Join(equals, "; "))
	}
	if len(pairs) > 0 {
		w := warn("order_not_told_apart")
		w.Band = band
		ws.add(w, "Neighbours in the order by %s that this record cannot tell apart: %s. Choose between them on other grounds.", measureTitle(m.name), firstOf(pairs, "; ", mostPairs))
	}
}

// measureTitle is what the text calls a measure.
func measureTitle(name string) string {
	if name == "annual_probability" {
		return "share of years"
	}
	return name
}

func measureWords(key string) string { return strings.ReplaceAll(key, "_", " ") }
