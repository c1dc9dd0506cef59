package render

import (
	"fmt"
	"strconv"

	"quietslope/scenario/result"
)

// several reports whether there is more than one case, so that each must be named.
func (v *view) several() bool { return len(v.c.Cases) > 1 }

// caseText says what a case is.
func caseText(c *result.Case) string {
	return fmt.Sprintf("weather %s, works %s", c.Climate, c.Condition)
}

// differs says what sets a case apart from the first.
func differs(first, c *result.Case) string {
	switch {
	case c.Climate == first.Climate:
		return c.Condition
	case c.Condition == first.Condition:
		return c.Climate
	}
	return c.Climate + ", " + c.Condition
}

// caseName names the i-th case.
func caseName(i int) string { return "case " + strconv.Itoa(i+1) }

// section starts a section about a case; where there are several, a part of the section of the case, which is named.
func (v *view) section(c *result.Case, format string, args ...any) {
	text := fmt.Sprintf(format, args...)
	if v.several() {
		v.innerHeading("%s (%s)", text, caseName(v.indexOf(c)))
		return
	}
	v.heading("%s", text)
}

func (v *view) indexOf(c *result.Case) int {
	for i := range v.c.Cases {
		if &v.c.Cases[i] == c {
			return i
		}
	}
	return 0
}

// oneCase writes what belongs to one climate and one condition: all of it for the first, the bands and the ranking for
// any other.
func (v *view) oneCase(i int) {
	c := &v.c.Cases[i]
	if v.several() {
		v.heading("Case %d: %s", i+1, caseText(c))
		text := "All tables of this case follow. Of the others there are the bands and the ranking; CSV and JSON hold the rest."
		if i > 0 {
			text = "The bands and the ranking of this case follow; CSV and JSON hold the rest."
		}
		if refs := v.notes.ofCaseOnly(c); refs != "" {
			text += " About the whole case: see " + noun(refs) + "."
		}
		v.para("%s", text)
	}
	for b := range v.c.Bands {
		v.exceedance(c, b)
	}
	v.change(c)
	if i > 0 {
		v.moneyOfCase(c)
		return
	}
	v.money(c)
	v.states(c)
	v.months(c)
	v.levels(c)
	v.drains(c)
	v.balance(c)
}

// standings sets the figures that rank the options side by side, case by case.
func (v *view) standings() {
	band := v.deciding()
	if band < 0 || !v.several() {
		return
	}
	by := measureOf(v.c.Settings.DecideBy)
	v.heading("How the options stand in each case")
	v.cases()
	t := table{head: [][]string{nil}, cut: true}
	options := pointers(&v.c.Cases[0])
	t.rows = make([][]string, len(options))
	for i := range v.c.Cases {
		c := &v.c.Cases[i]
		t.groups = append(t.groups, caseName(i), caseName(i))
		t.head[0] = append(t.head[0], by.unit, "rank")
		t.left = append(t.left, true, false)
		var figures column
		for k := range c.Options {
			figures.add(v.deciderOf(c, &c.Options[k], band, by))
		}
		for k, cell := range figures.cells() {
			rank := "–"
			if d := c.Options[k].Decision; d != nil {
				rank = strconv.Itoa(d.Rank)
			}
			t.rows[k] = append(t.rows[k], cell, rank)
		}
	}
	v.para("%s above %s, its range, and the rank in the case:", upperFirst(by.name), inQuotes(v.c.Bands[band].Name))
	v.rows(t, options)
}

// cases lists the cases with their numbers.
func (v *view) cases() {
	for i := range v.c.Cases {
		v.field(caseName(i), "%s", caseText(&v.c.Cases[i]))
	}
}

// deciderOf is the figure that ranks an option, and its range.
func (v *view) deciderOf(c *result.Case, o *result.Option, band int, by *measure) (value, limits string) {
	f := &o.Bands[band]
	switch by.key {
	case "events":
		return v.eventsOf(c, o, band)
	case "annual_probability":
		return by.told(f.AnnualProbability, &f.AnnualProbabilityCI)
	case "days":
		return by.told(f.DaysPerYear, f.DaysPerYearCI)
	}
	return by.told(f.LoadMDaysPerYear, f.LoadMDaysPerYearCI)
}
