package render

import (
	"cmp"
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
)

// Answers to whether an option meets the target, as the results have them.
const (
	targetMet      = "yes"
	targetMissed   = "no"
	targetNotShown = "not_shown" // the figure meets it, the end of its range does not
)

// targetText says what an option must keep to; "" where the study sets no target.
func (v *view) targetText() string {
	t := v.c.Settings.Target
	if t == nil {
		return ""
	}
	above := "above " + inQuotes(v.c.Settings.DecideOn)
	what := "m·d"
	switch t.Measure {
	case "annual_probability":
		text := fmt.Sprintf("at most %s of the years counted", share(t.Value))
		if t.Value > 0 && t.Value <= 0.5 {
			text += ", one in " + typed(1/t.Value, 4) + ","
		}
		return text + " " + above
	case "events":
		what = "events"
	case "days":
		what = "days"
	}
	if t.Value == 1 {
		what = strings.TrimSuffix(what, "s")
	}
	return fmt.Sprintf("at most %s %s a year %s", typed(t.Value, 6), what, above)
}

// meeting are the options of a case whose answer about the target is the given one.
func meeting(c *result.Case, answer string) []int {
	var options []int
	for i := range c.Options {
		if d := c.Options[i].Decision; d != nil && d.MeetsTarget == answer {
			options = append(options, i)
		}
	}
	return options
}

// targetShort says which options meet the target, and which of them is the cheapest.
func (v *view) targetShort(c *result.Case) {
	target := v.targetText()
	if target == "" {
		return
	}
	met, missed, notShown := meeting(c, targetMet), meeting(c, targetMissed), meeting(c, targetNotShown)
	var parts []string
	if len(met) > 0 {
		parts = append(parts, someByLetter(met)+verb(met, " meets", " meet")+" it on this record")
	} else {
		parts = append(parts, "no option meets it on this record")
	}
	if len(notShown) > 0 {
		parts = append(parts, fmt.Sprintf("with %s the figure does, but the end of its range does not", someByLetter(notShown)))
	}
	if len(met) > 0 && len(missed) > 0 {
		parts = append(parts, someByLetter(missed)+verb(missed, " misses", " miss")+" it")
	}
	v.para("The target is %s: %s.%s%s", target, strings.Join(parts, "; "), v.cheapest(c, met), v.slow(c, append(met, notShown...)))
}

// slowToAct is the code of the warning that an option takes long to act.
const slowToAct = "slow_to_act"

// slow says how long it takes until those of the options act of which it is noted that they are slow; "" for none.
func (v *view) slow(c *result.Case, options []int) string {
	parts := actingAfter(c, func(i int) bool {
		return slices.Contains(options, i) && v.notes.has(slowToAct, c, c.Options[i].Name, "")
	})
	if parts == nil {
		return ""
	}
	return " Until nine tenths of the effect are there, it takes " + andWords(parts) + "; the figures are those after it."
}

// cheapest names the cheapest of the options that meet the target, and those of them whose cost is not known.
func (v *view) cheapest(c *result.Case, met []int) string {
	if v.c.Settings.Money == nil || len(met) == 0 {
		return ""
	}
	var known, unknown []int
	for _, i := range met {
		if c.Options[i].Cost == nil {
			unknown = append(unknown, i)
		} else {
			known = append(known, i)
		}
	}
	if known == nil {
		return " What it costs to meet it is not known."
	}
	var costs []float64
	for _, i := range known {
		costs = append(costs, c.Options[i].Cost.PresentValue)
	}
	var cheapest []int
	for _, k := range least(costs) {
		cheapest = append(cheapest, known[k])
	}
	text := fmt.Sprintf(" The cheapest of them %s %s, at a present value of %s.", verb(cheapest, "is", "are"), someByLetter(cheapest), v.sumText(costs[least(costs)[0]], nil))
	if unknown != nil {
		text += fmt.Sprintf(" Of %s the cost is not known.", someByLetter(unknown))
	}
	return text
}

// deciders are the options whose figures matter most: those that meet the target, or else those with the least figure.
func deciders(c *result.Case, band int, by *measure) []int {
	if met := meeting(c, targetMet); met != nil {
		return met
	}
	return least(figuresBy(c, band, by))
}

// actingAfter says how long it takes until each of the options for which keep holds acts, as far as that is known; the
// soonest first.
func actingAfter(c *result.Case, keep func(option int) bool) []string {
	var all []together
	for _, t := range alikeBy(c, func(o *result.Option) string {
		if o.TimeToEffect == nil {
			return ""
		}
		return duration(o.TimeToEffect.Days)
	}) {
		if t.options = slices.DeleteFunc(t.options, func(i int) bool { return !keep(i) }); len(t.options) > 0 {
			all = append(all, t)
		}
	}
	slices.SortStableFunc(all, func(a, b together) int {
		return cmp.Compare(c.Options[a.options[0]].TimeToEffect.Days, c.Options[b.options[0]].TimeToEffect.Days)
	})
	var parts []string
	for _, t := range all {
		parts = append(parts, t.text+" with "+someByLetter(t.options))
	}
	return parts
}
