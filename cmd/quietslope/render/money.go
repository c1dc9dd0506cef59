package render

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/result"
	"quietslope/stats"
)

// unit is what sums are given in: a multiple of the currency.
type unit struct {
	name string
	size float64
}

var units = []unit{{"", 1}, {"thousand ", 1e3}, {"million ", 1e6}, {"billion ", 1e9}}

// inUnit is the largest unit of which the largest of some sums is at least the given number; the currency itself below that.
func inUnit(largest, least float64) unit {
	u := units[0]
	for _, next := range units[1:] {
		if largest >= least*next.size {
			u = next
		}
	}
	return u
}

// leastSum is the power of ten of a unit below which sums are not told.
const leastSum = -3

// sum prints a sum in a unit, with three significant digits, and its range in brackets where it has one: what is not avoided
// within the years that money counts does not vary with the record.
func (u unit) sum(x float64, ci *result.Interval) (value, limits string) {
	x /= u.size
	if ci == nil || math.Abs(ci[1]-ci[0]) <= 1e-9*u.size*math.Abs(x) {
		return rounded(x, max(exponent(x)-(most-1), leastSum), leastSum), ""
	}
	return ranged(x, scaled(ci, 1/u.size), leastSum)
}

// some is sum for a figure that may not be there.
func (u unit) some(x *float64, ci *result.Interval) (value, limits string) {
	if x == nil {
		return "", ""
	}
	return u.sum(*x, ci)
}

// sumText is a sum in a sentence, with its range and the currency.
func (v *view) sumText(x float64, ci *result.Interval) string {
	largest := math.Abs(x)
	if ci != nil {
		largest = max(largest, math.Abs(ci[0]), math.Abs(ci[1]))
	}
	u := inUnit(largest, 1)
	if u.size == 1e3 && largest < 1e4 {
		u = units[0]
	}
	value, limits := u.sum(x, ci)
	return strings.TrimSpace(value+" "+limits) + " " + u.name + v.c.Settings.Money.Currency
}

// sums finds the largest of sums and their ranges.
type sums float64

func (s *sums) see(x *float64, ci *result.Interval) {
	if x != nil {
		*s = max(*s, sums(math.Abs(*x)))
	}
	if ci != nil {
		*s = max(*s, sums(math.Abs(ci[0])), sums(math.Abs(ci[1])))
	}
}

// byCost are the options of known cost, the cheapest first.
func byCost(c *result.Case) []*result.Option {
	options := slices.DeleteFunc(pointers(c), func(o *result.Option) bool { return o.Cost == nil })
	slices.SortStableFunc(options, func(a, b *result.Option) int {
		return cmp.Compare(a.Cost.PresentValue, b.Cost.PresentValue)
	})
	return options
}

// money writes what the options cost, what they avoid and what that is worth.
func (v *view) money(c *result.Case) {
	m := v.c.Settings.Money
	if m == nil {
		return
	}
	options := byCost(c)
	v.section(c, "What it costs and what it buys")
	if len(options) > 0 {
		v.worth(c, options)
	}
	unknown := placesOf(c, func(o *result.Option) bool { return o.Cost == nil })
	if unknown != nil {
		v.para("The study gives no cost for %s, so %s in none of these tables.", someByLetter(unknown), verb(unknown, "it is", "they are"))
	}
	if len(options) > 0 {
		v.avoiding(options)
	}
}

// placesOf are the places of the options of a case for which keep holds.
func placesOf(c *result.Case, keep func(*result.Option) bool) []int {
	var places []int
	for i := range c.Options {
		if keep(&c.Options[i]) {
			places = append(places, i)
		}
	}
	return places
}

// columnOf is a column of a table of sums.
type columnOf struct {
	group, over, head string
	right             bool
	cell              func(*result.Option) (value, limits string)
}

// costTable is a table of options with those of the columns that hold something.
func (v *view) costTable(options []*result.Option, columns []columnOf) {
	t := table{head: [][]string{nil, nil}, cut: true}
	var cols []column
	for _, k := range columns {
		var col column
		for _, o := range options {
			col.add(k.cell(o))
		}
		cols = append(cols, col)
		t.groups = append(t.groups, k.group)
		t.head[0], t.head[1] = append(t.head[0], k.over), append(t.head[1], k.head)
		t.left = append(t.left, !k.right)
	}
	t.rows = sideBySide(cols...)
	t = t.dropEmpty()
	if !slices.ContainsFunc(t.head[0], func(over string) bool { return over != "" }) {
		t.head = t.head[1:]
	}
	if len(t.groups) > 0 {
		v.rows(t, options)
	}
}

// worth writes what the options cost, what losses they leave, and whether that pays.
func (v *view) worth(c *result.Case, options []*result.Option) {
	m := v.c.Settings.Money
	var largest sums
	for _, o := range options {
		of := o.Cost
		largest.see(&of.Capital, nil)
		largest.see(&of.PresentValue, nil)
		largest.see(of.AnnualLoss, of.AnnualLossCI)
		largest.see(of.NetBenefit, of.NetBenefitCI)
	}
	u := inUnit(float64(largest), 100)
	unforeseen := "nothing"
	if m.Contingency > 0 {
		unforeseen = share(m.Contingency)
	}
	text := fmt.Sprintf("Sums are in %s%s at prices of %d, with %s added to capital for what is not foreseen. Present values are over %s at %s a year, with renewals and flushes.",
		u.name, m.Currency, m.PricesOf, unforeseen, plural(m.HorizonYears, "year"), share(m.DiscountRate))
	losses := slices.ContainsFunc(options, func(o *result.Option) bool { return o.Cost.AnnualLoss != nil })
	if losses {
		text += " An event counts with the loss of the highest band that it reaches, a day with that of the band it lies in. Losses avoided before an option acts are not counted."
	} else {
		text += " The study gives no losses, so nothing is set against the costs."
	}
	v.para("%s", text)

	band, by := v.deciding(), measureOf(v.c.Settings.DecideBy)
	plain := func(x float64) (string, string) { return u.sum(x, nil) }
	columns := []columnOf{
		{"cost:", "", "capital", false, func(o *result.Option) (string, string) { return plain(o.Cost.Capital) }},
		{"cost:", "present", "value", false, func(o *result.Option) (string, string) { return plain(o.Cost.PresentValue) }},
		{"cost:", "", "a year", false, func(o *result.Option) (string, string) { return plain(o.Cost.AnnualEquivalent) }},
	}
	if band >= 0 {
		over, head := by.unit, ""
		if at := strings.LastIndex(by.unit, " per "); at > 0 {
			over, head = by.unit[:at], by.unit[at+1:]
		}
		columns = append(columns, columnOf{"outcome:", over, head, false, func(o *result.Option) (string, string) {
			value, limits := v.deciderOf(c, o, band, by)
			if value == "–" {
				return value, limits
			}
			return value, ""
		}})
	}
	columns = append(columns, v.lossColumns(u, c)...)
	columns = append(columns,
		columnOf{"benefit-cost:", "of the", "step", false, func(o *result.Option) (string, string) { return v.step(c, o) }},
		columnOf{"", "", "meets target", false, targetCell},
		columnOf{" ", "", "remark", false, func(o *result.Option) (string, string) { return v.remark(o), "" }})
	v.costTable(options, columns)

	text = ""
	if slices.ContainsFunc(options, func(o *result.Option) bool { return o.Cost.NetBenefit != nil }) {
		text = fmt.Sprintf("Net benefit: the losses avoided against %s, less the cost beyond that of %s. Benefit-cost: those losses divided by that cost, for the whole option and for the step to it from the last cheaper one that was worth its own step; a step below 1 does not pay for itself.",
			v.baseline, v.baseline)
		if slices.ContainsFunc(options, func(o *result.Option) bool { return !o.Baseline && !o.Cost.ToldApart || v.stepUnclear(c, o) }) {
			text += fmt.Sprintf(" Not told apart: by %s this record does not tell the two apart, so there is no ratio.", by.name)
		}
	}
	if slices.ContainsFunc(options, func(o *result.Option) bool { return strings.Contains(v.remark(o), tooLate) }) {
		text += fmt.Sprintf(" Acts too late: not within %s, so that none of the losses avoided count.", plural(m.HorizonYears, "year"))
	}
	if slices.ContainsFunc(options, func(o *result.Option) bool { return o.Decision != nil && o.Decision.DominatedBy != "" }) {
		text += fmt.Sprintf(" Dominated: the other costs no more and does no worse by %s, and is better in one of the two; how soon they act is not weighed.", by.name)
	}
	if text != "" {
		v.para("%s", strings.TrimSpace(text))
	}
}

// lossColumns are the losses that options leave, and what avoiding the others is worth.
func (v *view) lossColumns(u unit, c *result.Case) []columnOf {
	return []columnOf{
		{"losses:", "", "a year", false, func(o *result.Option) (string, string) {
			if o.Cost == nil {
				return "", ""
			}
			return u.some(o.Cost.AnnualLoss, o.Cost.AnnualLossCI)
		}},
		{"losses:", "", "net benefit", false, func(o *result.Option) (string, string) {
			if o.Cost == nil {
				return "", ""
			}
			return u.some(o.Cost.NetBenefit, o.Cost.NetBenefitCI)
		}},
		{"benefit-cost:", "against", v.baseline, false, func(o *result.Option) (string, string) { return v.ratio(c, o), "" }},
	}
}

// ratio is the benefit-cost ratio of an option, or why it has none.
func (v *view) ratio(c *result.Case, o *result.Option) string {
	switch of := o.Cost; {
	case of == nil || of.NetBenefit == nil: // the baseline has none
		return ""
	case of.BenefitCost != nil:
		return significant(*of.BenefitCost, 2)
	case !of.ToldApart:
		return toldNot
	}
	return costsNoMore
}

// costsNoMore is said where there is nothing to divide by.
const costsNoMore = "costs no more"

// step is the benefit-cost ratio of the step to an option, or why it has none, and from which option the step is.
func (v *view) step(c *result.Case, o *result.Option) (value, from string) {
	of := o.Cost
	if of.StepFrom == "" || of.AnnualLoss == nil {
		return "", ""
	}
	from = "from " + v.letters[of.StepFrom]
	switch {
	case of.StepBenefitCost != nil:
		return significant(*of.StepBenefitCost, 2), from
	case v.stepUnclear(c, o):
		return toldNot, from
	}
	return costsNoMore, from
}

// stepUnclear reports whether the step to an option has no ratio because the two are not told apart.
func (v *view) stepUnclear(c *result.Case, o *result.Option) bool {
	of := o.Cost
	if of.StepFrom == "" || of.StepBenefitCost != nil || of.AnnualLoss == nil {
		return false
	}
	from := optionNamed(c, of.StepFrom)
	return from != nil && from.Cost != nil && stats.Less(from.Cost.PresentValue, of.PresentValue)
}

func optionNamed(c *result.Case, name string) *result.Option {
	for i := range c.Options {
		if c.Options[i].Name == name {
			return &c.Options[i]
		}
	}
	return nil
}

// targetCell says whether an option meets the target.
func targetCell(o *result.Option) (value, limits string) {
	if o.Decision == nil {
		return "", ""
	}
	return words(o.Decision.MeetsTarget), ""
}

// doesNothing reports whether an option is nothing and costs nothing.
func doesNothing(o *result.Option) bool {
	return len(o.Measures) == 0 && (o.Cost == nil || o.Cost.PresentValue == 0)
}

// tooLate is remarked of an option whose effect comes after the years that money counts.
const tooLate = "acts too late"

// remark says what an option is among the others.
func (v *view) remark(o *result.Option) string {
	var parts []string
	switch {
	case o.Baseline && doesNothing(o):
		parts = append(parts, "does nothing")
	case o.Baseline:
		parts = append(parts, "baseline")
	}
	if o.Minimum {
		parts = append(parts, "the minimum")
	}
	if t := o.TimeToEffect; t != nil && o.Cost.AnnualLoss != nil && t.Days >= 365.25*float64(v.c.Settings.Money.HorizonYears) {
		parts = append(parts, tooLate)
	}
	if o.Decision != nil && o.Decision.DominatedBy != "" {
		parts = append(parts, "dominated by "+v.letters[o.Decision.DominatedBy])
	}
	return strings.Join(parts, ", ")
}

// avoiding writes the quantities that a cost is made of, and what a day and an event less cost.
func (v *view) avoiding(options []*result.Option) {
	m := v.c.Settings.Money
	var largest sums
	for _, o := range options {
		largest.see(o.Cost.PerDayAvoided, o.Cost.PerDayAvoidedCI)
		largest.see(o.Cost.PerEventAvoided, o.Cost.PerEventAvoidedCI)
		largest.see(o.Cost.BreakEvenLoss, nil)
	}
	u := inUnit(float64(largest), 1e4)
	count := func(n *int) (string, string) {
		if n == nil {
			return "", ""
		}
		return strconv.Itoa(*n), ""
	}
	rows := slices.DeleteFunc(slices.Clone(options), func(o *result.Option) bool {
		of := o.Cost
		return o.TimeToEffect == nil && of.Metres == nil && of.Flushes == nil && of.Renewals == nil && of.PerDayAvoided == nil && of.PerEventAvoided == nil
	})
	if len(rows) == 0 {
		return
	}
	if largest > 0 {
		v.para("Quantities to be priced anew, and what a day and an event less cost, in %s%s:", u.name, m.Currency)
	} else {
		v.para("Quantities to be priced anew:")
	}
	v.costTable(rows, []columnOf{
		{"drains:", "", "metres", true, func(o *result.Option) (string, string) {
			if o.Cost.Metres == nil {
				return "", ""
			}
			return strconv.FormatFloat(*o.Cost.Metres, 'f', 0, 64), ""
		}},
		{"drains:", "", "flushes", true, func(o *result.Option) (string, string) { return count(o.Cost.Flushes) }},
		{"", "", "renewals", true, func(o *result.Option) (string, string) { return count(o.Cost.Renewals) }},
		{"acts", "", "after", true, func(o *result.Option) (string, string) {
			if o.TimeToEffect == nil {
				return "", ""
			}
			return duration(o.TimeToEffect.Days), ""
		}},
		{"avoided:", "", "per day", false, func(o *result.Option) (string, string) { return u.some(o.Cost.PerDayAvoided, o.Cost.PerDayAvoidedCI) }},
		{"avoided:", "", "per event", false, func(o *result.Option) (string, string) {
			return u.some(o.Cost.PerEventAvoided, o.Cost.PerEventAvoidedCI)
		}},
		{"breaks", "", "even at", false, func(o *result.Option) (string, string) {
			if o.Cost.BreakEvenLoss == nil {
				return "", ""
			}
			return ranged(*o.Cost.BreakEvenLoss/u.size, nil, leastSum) // its range is that of the cost per event
		}},
	})
	text := fmt.Sprintf("Flushes and renewals within %s. Acts after: until nine tenths of the effect on the deep level have come about.", plural(m.HorizonYears, "year"))
	if largest > 0 {
		text += fmt.Sprintf(" Avoided: the cost a year beyond that of %s for each day and each event less a year above %s. Breaks even at: the loss per event at which the option pays for itself and no more, were there no other losses.",
			v.baseline, inQuotes(v.c.Settings.DecideOn))
	}
	v.para("%s", text)
}

// moneyOfCase writes what a further case makes of the losses and of the target.
func (v *view) moneyOfCase(c *result.Case) {
	options := slices.DeleteFunc(pointers(c), func(o *result.Option) bool {
		target, _ := targetCell(o)
		return target == "" && (o.Cost == nil || o.Cost.AnnualLoss == nil)
	})
	if len(options) == 0 {
		return
	}
	var largest sums
	for _, o := range options {
		if o.Cost != nil {
			largest.see(o.Cost.AnnualLoss, o.Cost.AnnualLossCI)
			largest.see(o.Cost.NetBenefit, o.Cost.NetBenefitCI)
		}
	}
	u := inUnit(float64(largest), 100)
	losses := slices.ContainsFunc(options, func(o *result.Option) bool { return o.Cost != nil && o.Cost.AnnualLoss != nil })
	switch {
	case losses && v.targetText() != "":
		v.section(c, "Net benefit and target")
	case losses:
		v.section(c, "Net benefit")
	default:
		v.section(c, "Target: %s", v.targetText())
	}
	if losses {
		v.para("Sums are in %s%s.", u.name, v.c.Settings.Money.Currency)
	}
	v.costTable(options, append(v.lossColumns(u, c), columnOf{"", "", "meets target", false, targetCell}))
}
