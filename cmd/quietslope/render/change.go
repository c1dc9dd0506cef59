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

// How an option stands against another.
const (
	toldNot  = "not told apart"
	toldMore = "more"
	toldLess = "less"
	toldSame = "the same" // in every year
)

// against says in a cell how an option stands against the reference.
func against(d *result.Difference, apart bool) string {
	switch {
	case d.YearsBetter+d.YearsWorse == 0 && d.YearsEqual > 0:
		return toldSame
	case !apart:
		return toldNot
	case d.Difference > 0:
		return toldMore
	}
	return toldLess
}

// measure is one of the figures that options can be ranked by.
type measure struct {
	key, name, unit string
	scale           float64
	figure          func(*result.BandFigure) float64
	change          func(*result.Change) *result.Difference
}

var measures = []measure{
	{"load", "load", "m·d per year", 1,
		func(f *result.BandFigure) float64 { return f.LoadMDaysPerYear },
		func(c *result.Change) *result.Difference { return &c.LoadMDaysPerYear }},
	{"days", "days", "days per year", 1,
		func(f *result.BandFigure) float64 { return f.DaysPerYear },
		func(c *result.Change) *result.Difference { return &c.DaysPerYear }},
	{"events", "events", "events per year", 1,
		func(f *result.BandFigure) float64 { return f.EventsPerYear },
		func(c *result.Change) *result.Difference { return &c.EventsPerYear }},
	{"annual_probability", "share of years", "% of years", 100,
		func(f *result.BandFigure) float64 { return f.AnnualProbability },
		func(c *result.Change) *result.Difference { return &c.AnnualProbability }},
}

// inWords is a figure with its unit.
func (m *measure) inWords(figure string) string {
	if m.scale == 100 { // with its sign
		return figure + " of years"
	}
	return figure + " " + m.unit
}

// told is a figure by the measure and its range, as far as they can be told.
func (m *measure) told(value float64, ci *result.Interval) (figure, limits string) {
	least := leastDays
	switch m.key {
	case "annual_probability":
		if ci == nil {
			return percent(value), ""
		}
		return percent(value), "(" + percentRange(value, *ci) + ")"
	case "events":
		least = leastEvents
	case "load":
		least = leastLoad
	}
	return ranged(value, ci, least)
}

// measureOf finds a measure by its key; the first for a key that is not known.
func measureOf(key string) *measure {
	for i := range measures {
		if measures[i].key == key {
			return &measures[i]
		}
	}
	return &measures[0]
}

// change writes the ranking on the deciding band and the change against the reference.
func (v *view) change(c *result.Case) {
	band := v.deciding()
	if band < 0 || len(c.Options) < 2 || v.nothingPassed(c, band) {
		return
	}
	by := measureOf(v.c.Settings.DecideBy)
	options := pointers(c)
	slices.SortStableFunc(options, func(a, b *result.Option) int { return rank(a) - rank(b) })

	v.section(c, "Ranking on %s by %s, and the change against %s", v.c.Bands[band].Name, by.name, v.reference)
	t := table{
		head: [][]string{
			{"", "change", "ratio to", "better", "years", ""},
			{"rank", by.unit, v.reference, "(same)", "b/s/w", "against " + v.reference},
		},
		left: []bool{false, true, true, true, true, true},
	}
	var diff, ratio column
	for _, o := range options {
		ch := o.Bands[band].Change
		if ch == nil {
			diff.add("", "")
			ratio.add("", "")
			continue
		}
		d := by.change(ch)
		diff.add(ranged(by.scale*d.Difference, scaled(d.DifferenceCI, by.scale), tiny))
		if d.Ratio == nil {
			ratio.add("–", "")
		} else {
			ratio.add(ranged(*d.Ratio, d.RatioCI, -2))
		}
	}
	cells := sideBySide(diff, ratio)
	for i, o := range options {
		rank := "–"
		if o.Decision != nil {
			rank = strconv.Itoa(o.Decision.Rank)
		}
		row := []string{rank, cells[i][0], cells[i][1], "", "", v.referenceText()}
		if ch := o.Bands[band].Change; ch != nil {
			d := by.change(ch)
			row[3] = percent(d.ShareBetter)
			if d.DifferenceCI == nil && d.ShareEqual < 1 { // too few years to resample
				row[3] = "–"
			} else if d.ShareEqual >= 0.005 {
				row[3] += " (" + percent(d.ShareEqual) + ")"
			}
			row[4] = fmt.Sprintf("%d/%d/%d", d.YearsBetter, d.YearsEqual, d.YearsWorse)
			row[5] = against(d, ch.ToldApart)
		}
		t.rows = append(t.rows, row)
	}
	v.rows(t, options)
	if v.indexOf(c) > 0 {
		if text := v.neighbours(c); text != "" {
			v.para("%s", strings.TrimSpace(text))
		}
		v.orders(c, band, by)
		return
	}
	v.para("A change below zero is an improvement. Better (same): share of the resamples. b/s/w: years better, same, worse. Less and more are said where the two can be told apart: the range of the change leaves out zero and the years better and worse are too uneven "+
		"for chance (sign test at %s). It says that there is a change, not that it is large enough to matter. Ranks follow the figures alone. To see the change against another option, name it with --against.", v.confidence())

	v.otherChanges(options, band, by)
	v.orders(c, band, by)
}

// referenceText stands in the row of the option that the others are measured against.
func (v *view) referenceText() string {
	if v.reference == v.baseline {
		return "baseline"
	}
	return "reference"
}

// otherChanges writes the change in the measures that do not rank.
func (v *view) otherChanges(options []*result.Option, band int, by *measure) {
	v.gap()
	head := [][]string{nil, nil}
	var cols []column
	for i := range measures {
		m := &measures[i]
		if m == by {
			continue
		}
		var col column
		for _, o := range options {
			if ch := o.Bands[band].Change; ch == nil {
				col.add("", "")
			} else {
				d := m.change(ch)
				col.add(ranged(m.scale*d.Difference, scaled(d.DifferenceCI, m.scale), tiny))
			}
		}
		unit := m.unit
		if m.scale == 100 {
			unit = "percentage points"
		}
		head[0], head[1] = append(head[0], m.name), append(head[1], unit)
		cols = append(cols, col)
	}
	t := table{caption: "change against " + v.reference, head: head, left: []bool{true, true, true}}
	t.rows = sideBySide(cols...)
	for i, o := range options {
		if o.Bands[band].Change == nil {
			t.rows[i][0] = v.referenceText()
		}
	}
	v.rows(t, options)
}

func scaled(ci *result.Interval, by float64) *result.Interval {
	if ci == nil {
		return nil
	}
	return &result.Interval{by * ci[0], by * ci[1]}
}

func rank(o *result.Option) int {
	if o.Decision == nil {
		return math.MaxInt
	}
	return o.Decision.Rank
}

// orders says whether the measures put the options in the same order on a band.
func (v *view) orders(c *result.Case, band int, by *measure) {
	figures := func(m *measure) []float64 { return figuresBy(c, band, m) }
	base := figures(by)
	var against []*measure
	for i := range measures {
		if m := &measures[i]; m != by && disagree(base, figures(m)) {
			against = append(against, m)
		}
	}
	v.gap()
	if len(against) == 0 {
		v.para("By no other measure do two options change places, though some may be equal.")
		return
	}
	var names []string
	for _, m := range against {
		names = append(names, m.name)
	}
	v.para("The measures disagree on the order of the options: %s against %s. From the least:", strings.Join(names, " and "), by.name)
	for _, m := range append([]*measure{by}, against...) {
		v.field("by "+m.name, "%s", order(figures(m), len(c.Options)))
	}
	if slices.ContainsFunc(against, func(m *measure) bool { return m.key == "events" }) || by.key == "events" {
		v.para("A drain can split one long event into several, so that the count rises while days and load fall: read the count with them.")
	}
}

// disagree reports whether some pair of options stands in opposite orders by the two figures, none of which is below zero.
func disagree(a, b []float64) bool {
	index := make([]int, len(a))
	for i := range index {
		index[i] = i
	}
	slices.SortFunc(index, func(i, j int) int { return cmp.Compare(a[i], a[j]) })
	below, most := 0, 0.0 // how many have less of the first than option j, and the most of the second that they have
	for _, j := range index {
		for stats.Less(a[index[below]], a[j]) {
			most = max(most, b[index[below]])
			below++
		}
		if below > 0 && stats.Less(b[j], most) {
			return true
		}
	}
	return false
}

// ranking are the places of figures from the least to the largest; equal ones keep their order.
func ranking(xs []float64) []int {
	index := make([]int, len(xs))
	for i := range index {
		index[i] = i
	}
	slices.SortStableFunc(index, func(a, b int) int {
		switch {
		case stats.Less(xs[a], xs[b]):
			return -1
		case stats.Less(xs[b], xs[a]):
			return 1
		}
		return 0
	})
	return index
}

// order lists the options by a figure, from the least, as in "C = D < A". It counts what goes beyond most of them.
func order(xs []float64, most int) string {
	var b strings.Builder
	index := ranking(xs)
	for k, i := range index {
		switch {
		case k == most && len(index) > most+1:
			return fmt.Sprintf("%s, then %d more", &b, len(index)-k)
		case k == 0:
		case stats.Less(xs[index[k-1]], xs[i]):
			b.WriteString(" < ")
		default:
			b.WriteString(" = ")
		}
		b.WriteString(letter(i))
	}
	return b.String()
}
