package render

import (
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
	"quietslope/stats"
)

// moneyShort says what the baseline loses, which option is worth most and which are dominated.
func (v *view) moneyShort(c *result.Case) {
	if v.c.Settings.Money == nil {
		return
	}
	base := baselineOf(c)
	if base.Cost == nil {
		return
	}
	if len(c.Options) > 1 && !slices.ContainsFunc(c.Options, func(o result.Option) bool { return !o.Baseline && o.Cost != nil }) {
		v.para("The study gives no cost for any option but the baseline.")
	}
	text := ""
	if loss := base.Cost.AnnualLoss; loss != nil {
		who := "With " + v.baseline + ", the baseline,"
		if doesNothing(base) {
			who = "Doing nothing, " + v.baseline + ","
		}
		text = fmt.Sprintf("%s costs %s a year in losses.", who, v.sumText(*loss, base.Cost.AnnualLossCI))
		if !doesNothing(base) {
			text = fmt.Sprintf("%s losses cost %s a year", who, v.sumText(*loss, base.Cost.AnnualLossCI))
			if own := base.Cost.AnnualEquivalent; own > 0 {
				text += fmt.Sprintf(", beside its own cost of %s a year", v.sumText(own, nil))
			}
			text += "."
		}
	}
	if best := v.bestNet(c); best != "" {
		text += " " + best
	}
	if of := dominated(v, c); of != "" {
		text += " " + of
	}
	if text = strings.TrimSpace(text); text != "" {
		v.para("%s", text)
	}
}

// bestNet names the option with the greatest net benefit and the next one, and says where the record does not tell them apart.
// The baseline has none by definition.
func (v *view) bestNet(c *result.Case) string {
	base := baselineOf(c)
	net := func(o *result.Option) float64 {
		if o == base {
			return 0
		}
		return *o.Cost.NetBenefit
	}
	options := slices.DeleteFunc(byCost(c), func(o *result.Option) bool { return o != base && o.Cost.NetBenefit == nil })
	if len(options) < 2 {
		return ""
	}
	slices.SortStableFunc(options, func(a, b *result.Option) int { // the cheaper one of two alike
		switch {
		case stats.Less(net(b), net(a)):
			return -1
		case stats.Less(net(a), net(b)):
			return 1
		}
		return 0
	})
	best, next := options[0], options[1]
	has := func(o *result.Option) string {
		return fmt.Sprintf("that of %s, %s", v.letters[o.Name], v.sumText(*o.Cost.NetBenefit, o.Cost.NetBenefitCI))
	}
	years := plural(v.c.Settings.Money.HorizonYears, "year")
	text := ""
	switch base {
	case best:
		text = fmt.Sprintf("No option pays for itself over %s; the greatest net benefit is %s", years, has(next))
	case next:
		text = fmt.Sprintf("The greatest net benefit over %s is %s", years, has(best))
	default:
		text = fmt.Sprintf("The greatest net benefit over %s is %s, the next %s", years, has(best), has(next))
	}
	if refs := v.notes.numbersOf("net_benefit_tie", c); refs != "" {
		text += fmt.Sprintf("; this record does not tell %s from %s by it (%s)", v.letters[best.Name], v.letters[next.Name], noun(refs))
	}
	return text + "."
}

// dominated says which options are dominated, and by which.
func dominated(v *view, c *result.Case) string {
	all := alikeBy(c, func(o *result.Option) string {
		if o.Decision == nil {
			return ""
		}
		return o.Decision.DominatedBy
	})
	var parts []string
	for _, t := range all {
		parts = append(parts, fmt.Sprintf("%s by %s", someByLetter(t.options), v.letters[t.text]))
	}
	if parts == nil {
		return ""
	}
	return "Dominated, by an option that costs no more and does no worse: " + strings.Join(parts, "; ") + "."
}
