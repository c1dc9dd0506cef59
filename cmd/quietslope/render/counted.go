package render

import (
	"fmt"
	"time"

	"quietslope/scenario/result"
)

func (v *view) counted() {
	r, s := &v.c.Record, &v.c.Settings
	v.heading("What was counted")
	v.field("years", "%s", yearsText(r, s.YearStarts))
	recordFields(&v.Page, r)
	switch {
	case len(v.c.Cases) == 1:
		v.field("case", "%s", caseText(&v.c.Cases[0]))
	case v.deciding() < 0: // not listed above
		v.cases()
	}
	v.field("events", "%s. %s; peak is the greatest height above it; longest is the days above in the longest event, pauses not counted.", eventsText(s), loadText)
	v.field("ranges", "%s", v.rangesText())
	if v.reference != v.baseline {
		v.field("changes", "measured against %s, %s. The years and the start are still those of the baseline, %s.", v.reference, v.c.Settings.Against, v.baseline)
	}
	if v.c.Settings.DecideOn == "" && len(v.notes.list) > 0 {
		v.field("notes", "%s.", v.notes.headline())
	}
}

// eventsText says what one event is.
func eventsText(s *result.Settings) string {
	text := "one event is a run of steps above a band's level"
	if s.ApartDays > 0 {
		text += fmt.Sprintf("; runs %s d or less apart are one event", days(s.ApartDays))
	}
	return text
}

const loadText = "Load is the height above the level times the days spent there"

// yearsText says which years were counted.
func yearsText(r *result.Record, starts string) string {
	counted := plural(r.YearsCounted, "complete calendar year")
	if last := monthBefore(starts); last != "" && starts != "January" {
		counted = fmt.Sprintf("%s from %s to %s", plural(r.YearsCounted, "complete year"), starts, last)
	}
	text := fmt.Sprintf("%s, %s to %s", counted, r.CountedFrom, r.CountedTo)
	if r.PartialDays > 0 {
		text += fmt.Sprintf("; %s d at the ends are replayed, not counted", days(r.PartialDays))
	}
	return text
}

// monthBefore is the English name of the month before the one named; "" when there is no such month.
func monthBefore(name string) string {
	for m := time.January; m <= time.December; m++ {
		if m.String() == name {
			return ((m+10)%12 + 1).String()
		}
	}
	return ""
}

// recordFields describes the record.
func recordFields(p *Page, r *result.Record) {
	gaps := "no gaps filled"
	if r.GapsFilled > 0 {
		gaps = plural(r.GapsFilled, "step") + " filled"
	}
	switch r.GapFilling {
	case "":
	case "zero":
		gaps += " with zero"
	default:
		gaps += " by " + r.GapFilling
	}
	p.field("record", "%s to %s, %s of %s (time names the %s of a step), %s",
		r.From, r.To, plural(r.Rows, "step"), r.Step, r.Stamp, gaps)
	water := fmt.Sprintf("rain %.0f mm a year in the counted years", r.RainMMPerYear)
	if r.PETMMPerYear != nil {
		water += fmt.Sprintf(", potential evapotranspiration %.0f", *r.PETMMPerYear)
	}
	p.field("weather", "%s", water)
	warm := "none"
	if r.WarmUpYears > 0 {
		warm = plural(r.WarmUpYears, "year") + " replayed before the record"
	}
	p.field("warm-up", "%s", warm)
}

// Numbers of counted years below which resampled ranges are known to be too narrow, and below which they mean little.
// The coverage that is printed was found by simulation: see stats.Resamples.Interval.
const (
	fewYears     = 60
	veryFewYears = 10
)

func (v *view) rangesText() string {
	text := fmt.Sprintf("in brackets, at %s: events exact Poisson, years with (as the chance of a year) exact binomial, days, load and changes by resampling whole years",
		v.confidence())
	switch n := v.c.Record.YearsCounted; {
	case n == 1:
		text += ". One year gives no resampled range"
	case n < veryFewYears:
		text += ". Resampled ranges from so few years mean little"
	case n < fewYears:
		text += ". Resampled ranges from few years are too narrow: at 90 % they cover about 74 to 86 % with 20 years and 80 to 88 % with 40, and less where a few years hold most of it"
	}
	return text + ". They hold what the record's years say, not the doubt in the ground's numbers."
}
