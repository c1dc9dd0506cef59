package render

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// Powers of ten below which the tables of the bands tell nothing: no slope is judged by a thousandth of an event, a
// hundredth of a day or a centimetre for a day.
const (
	leastEvents = -3
	leastDays   = -2
	leastLoad   = -2
)

// exceedance writes the table of one band: how often, how long and by how much.
func (v *view) exceedance(c *result.Case, band int) {
	b := &v.c.Bands[band]
	safety := ""
	if b.FactorOfSafety != nil {
		safety = "factor of safety below " + typed(*b.FactorOfSafety, 6) + ", "
	}
	v.section(c, "%s: %sdeep level above %s m", b.Name, safety, metres(b.LevelM))
	T := v.c.Record.YearsCounted
	options := pointers(c)
	if v.nothingPassed(c, band) {
		text := fmt.Sprintf("No option's level rises above it in %s, which does not mean that none can", plural(T, "year"))
		if refs := v.notes.refs(c, options[0].Name, b.Name); refs != "" {
			text += ": see " + noun(refs)
		}
		v.para("%s.", text)
		return
	}
	var events, load, lasting, with column
	t := table{
		head: [][]string{
			{"events", "days", "load", fmt.Sprintf("years of %d", T), "longest", "peak"},
			{"per year", "per year", "m·d per year", "(chance)", "d", "+m"},
		},
		left: []bool{true, true, true, true, false, false},
	}
	for _, o := range options {
		f := &o.Bands[band]
		events.add(v.eventsOf(c, o, band))
		lasting.add(ranged(f.DaysPerYear, f.DaysPerYearCI, leastDays))
		load.add(ranged(f.LoadMDaysPerYear, f.LoadMDaysPerYearCI, leastLoad))
		with.add(yearsWith(f, T), "("+percentRange(f.AnnualProbability, f.AnnualProbabilityCI)+"%)")
	}
	cells := sideBySide(events, lasting, load, with)
	for i, o := range options {
		f := &o.Bands[band]
		peak, longest := "–", days(f.LongestDays)
		if f.PeakExcessM != nil {
			peak = centimetres(*f.PeakExcessM)
		}
		if f.Events == 0 && f.DaysPerYear > 0 {
			longest = "–"
		}
		t.rows = append(t.rows, append(cells[i], longest, peak))
	}
	v.rows(t, options)
	if text := v.notes.onBand(c, b.Name); text != "" {
		v.para("%s", text)
	}
	v.toldApart(c, band)
	if text := v.means(c); text != "" && band == max(0, v.deciding()) {
		v.para("%s", text)
	}
	if base := baselineOf(c); v.indexOf(c) == 0 && len(base.Bands[band].Spells) > 0 {
		v.spells(base, base.Bands[band].Spells)
	}
}

// eventsOf are the events a year of an option on a band, as far as they can be told, and their range.
func (v *view) eventsOf(c *result.Case, o *result.Option, band int) (value, limits string) {
	f := &o.Bands[band]
	value, limits = ranged(f.EventsPerYear, &f.EventsPerYearCI, leastEvents)
	switch {
	case v.notes.has("events_peak_outside", c, o.Name, f.Name):
		return "–", ""
	case v.notes.has("few_events", c, o.Name, f.Name): // too few for a rate
		return "–", limits
	}
	return value, limits
}

// notPassed reports whether a band is not passed at all in the years counted.
func notPassed(f *result.BandFigure) bool { return f.Events == 0 && f.DaysPerYear == 0 }

// mostSpells is how many events are listed.
const mostSpells = 40

// spells lists when the baseline's level stood above the deciding band, to be held against what is known of the slope: all
// events, or the highest.
func (v *view) spells(o *result.Option, spells []result.Spell) {
	which := "at these times"
	if n := len(spells); n > mostSpells {
		which = fmt.Sprintf("in %d events, of which these %d rose highest", n, mostSpells)
		spells = highest(spells, mostSpells)
	}
	times := grid{head: []string{"from and to", "m above", ""}, width: 4}
	for _, s := range spells {
		from, to := s.From, s.To
		if from == v.c.Record.From {
			from = "before " + from
		}
		if to == v.c.Record.To {
			to = "after " + to
		}
		times.rows = append(times.rows, []string{from + " to " + to, centimetres(s.PeakExcessM), ""})
	}
	v.para("With %s the level stood above it %s, with the greatest height above it in m. Hold them against what is known of the slope's movement:", v.letters[o.Name], which)
	v.add(times)
}

// highest are the n events that rose highest, in order of time.
func highest(spells []result.Spell, n int) []result.Spell {
	index := make([]int, len(spells))
	for i := range index {
		index[i] = i
	}
	slices.SortStableFunc(index, func(a, b int) int { return cmp.Compare(spells[b].PeakExcessM, spells[a].PeakExcessM) })
	slices.Sort(index[:n])
	var all []result.Spell
	for _, i := range index[:n] {
		all = append(all, spells[i])
	}
	return all
}

// yearsWith is the number of the years in which a band is passed, which for a mean over the ages of drains need not be whole.
func yearsWith(f *result.BandFigure, years int) string {
	with := f.AnnualProbability * float64(years)
	if whole := math.Round(with); math.Abs(with-whole) < 1e-6 {
		return strconv.Itoa(int(whole))
	}
	return rounded(with, -1, -1)
}

// percentRange prints a range of shares as percentages, without their sign.
func percentRange(p float64, ci result.Interval) string {
	_, lo, hi := figures(100*p, 100*ci[0], 100*ci[1], 0)
	return between(lo, hi)
}

// toldApart says which options have less or more than the reference on one band, beyond the record's chance.
func (v *view) toldApart(c *result.Case, band int) {
	by := measureOf(v.c.Settings.DecideBy)
	told := map[string][]int{}
	for i := range c.Options {
		if ch := c.Options[i].Bands[band].Change; ch != nil {
			as := against(by.change(ch), ch.ToldApart)
			told[as] = append(told[as], i)
		}
	}
	var parts []string
	for _, part := range []struct{ as, what string }{
		{toldLess, "less than %s"}, {toldMore, "more than %s"}, {toldNot, "not told apart from %s on this record"}, {toldSame, "the same as %s in every year"},
	} {
		if options := told[part.as]; len(options) > 0 {
			parts = append(parts, fmt.Sprintf(part.what, v.reference)+": "+byLetter(options))
		}
	}
	if len(parts) > 0 {
		v.para("By %s, %s.", by.name, strings.Join(parts, "; "))
	}
}
