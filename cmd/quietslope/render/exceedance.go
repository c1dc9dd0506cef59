package render

import (
	"fmt"
	"math"
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
		text := fmt.Sprintf("No option passes it in %s, which does not mean that none can", plural(T, "year"))
		if refs := v.notes.refs(c, options[0].Name, b.Name); refs != "" {
			text += ": see " + noun(refs)
		}
		v.para("%s.", text)
		return
	}
	var events, load, lasting, with column
	var refs []string
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
		with.add(strconv.Itoa(int(math.Round(f.AnnualProbability*float64(T)))), "("+percentRange(f.AnnualProbability, f.AnnualProbabilityCI)+"%)")
		if r := v.notes.refs(c, o.Name, b.Name); r != "" {
			refs = append(refs, v.letters[o.Name]+" "+r)
		}
	}
	for i, o := range options {
		f := &o.Bands[band]
		peak, longest := "–", days(f.LongestDays)
		if f.PeakExcessM != nil {
			peak = centimetres(*f.PeakExcessM)
		}
		if f.Events == 0 && f.DaysPerYear > 0 {
			longest = "–"
		}
		t.rows = append(t.rows, []string{events.cells()[i], lasting.cells()[i], load.cells()[i], with.cells()[i], longest, peak})
	}
	v.rows(t, options)
	if len(refs) > 0 {
		v.para("See the notes: %s.", strings.Join(refs, "; "))
	}
	v.toldApart(options, band)
	for _, o := range options {
		if v.indexOf(c) == 0 && o.Baseline && len(o.Bands[band].Spells) > 0 {
			v.spells(o, o.Bands[band].Spells)
		}
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

// spells lists when the baseline passed the deciding band, to be held against what is known of the slope.
func (v *view) spells(o *result.Option, spells []result.Spell) {
	const most = 12
	var parts []string
	for i, s := range spells {
		if i == most {
			parts = append(parts, plural(len(spells)-most, "more event"))
			break
		}
		from, to := s.From, s.To
		if from == v.c.Record.From {
			from = "before " + from
		}
		if to == v.c.Record.To {
			to = "after " + to
		}
		parts = append(parts, fmt.Sprintf("%s to %s (+%s)", from, to, centimetres(s.PeakExcessM)))
	}
	v.para("%s passed it: %s. Hold these times against what is known of the slope's movement.", v.letters[o.Name], strings.Join(parts, ", "))
}

// percentRange prints a range of shares as percentages, without their sign.
func percentRange(p float64, ci result.Interval) string {
	_, lo, hi := figures(100*p, 100*ci[0], 100*ci[1], 0)
	return between(lo, hi)
}

// toldApart says which options have less or more than the reference on one band, beyond the record's chance.
func (v *view) toldApart(options []*result.Option, band int) {
	by := measureOf(v.c.Settings.DecideBy)
	var less, more, no []string
	for _, o := range options {
		switch ch := o.Bands[band].Change; {
		case ch == nil:
		case !ch.ToldApart:
			no = append(no, v.letters[o.Name])
		case by.change(ch).Difference > 0:
			more = append(more, v.letters[o.Name])
		default:
			less = append(less, v.letters[o.Name])
		}
	}
	var parts []string
	for _, part := range []struct {
		what    string
		letters []string
	}{{"less", less}, {"more", more}, {"not told apart on this record", no}} {
		if len(part.letters) > 0 {
			parts = append(parts, part.what+": "+strings.Join(part.letters, ", "))
		}
	}
	if len(parts) > 0 {
		v.para("Against %s by %s: %s.", v.reference, by.name, strings.Join(parts, "; "))
	}
}
