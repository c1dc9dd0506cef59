package scenario

import (
	"fmt"
	"math"
	"slices"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

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
			ws.add(at, "The target is met with the drains as new, and missed %s. Size them for the state that they will be in: see size --drains.", aged[0])
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
