// Package weather reads a record of rain and evapotranspiration, checks it, and says what looks wrong with it.
//
// A record is delimited text with one header line and one row per step. It is read whole and checked whole: what comes
// out of Read has steps of a constant length or of calendar months, a value in every step, measured or filled as the study
// asks, and only finite values within physical limits.
package weather

import (
	"fmt"
	"time"
)

// Source says where a record is and how to read it.
type Source struct {
	Path     string   // file to open
	Name     string   // the same file as messages name it
	Time     string   // name of the time column
	Format   string   // of YYYY MM DD hh mm ss and literal characters, or iso; see CheckFormat
	Rain     Column   // required
	PET      *Column  // nil for none
	StampEnd bool     // the time names the end of a step, not its start; of a month, the first of the next or its own last day
	Missing  []string // texts that stand for a missing value; a number matches any cell of the same value
	Gaps     Gaps     // what becomes of steps without a value
}

// Column is one column of numbers.
type Column struct {
	Name string
	// Unit is one that DepthUnit accepts: a depth per step (mm, "0.1 mm", in) or a rate (mm/h, mm/d, in/h).
	Unit string
}

// Record is a complete record: every step has its values, measured or filled.
type Record struct {
	Name   string        // the file as messages name it
	SHA256 string        // of the file's bytes as they are on disk, in hex
	First  time.Time     // start of the first step, for months 00:00 of the 1st; UTC, or for iso times the offset of the first row
	Step   time.Duration // constant, 1 min to 1 d, in whole seconds; 0 where every step is a calendar month
	Rain   []float64     // mm per step
	PET    []float64     // mm per step; nil when the record has none
	Filled []Gap         // in the order of time, neighbours with the same columns as one; nil when nothing was filled

	layout   *layout // of the time column; nil in a record not read from a file
	zone     string  // offset of the first row as written, such as Z or +01:00; empty for civil times
	stampEnd bool
	lastDays bool // the times of months name their last days
}

// Monthly says whether the steps are calendar months.
func (r *Record) Monthly() bool { return r.Step == 0 }

// Start is the time at which step i starts. Start(len(r.Rain)) is the end of the record.
func (r *Record) Start(i int) time.Time {
	if r.Monthly() {
		return time.Date(r.First.Year(), r.First.Month()+time.Month(i), 1, 0, 0, 0, 0, r.First.Location())
	}
	// In seconds: a time.Duration holds 292 years only.
	return time.Unix(r.First.Unix()+int64(i)*int64(r.Step/time.Second), 0).In(r.First.Location())
}

// FirstFrom is the first step that starts at t or later. It may lie before the record (negative) or behind it.
func (r *Record) FirstFrom(t time.Time) int {
	if r.Monthly() {
		t = t.In(r.First.Location())
		n := 12*(t.Year()-r.First.Year()) + int(t.Month()-r.First.Month())
		if t.After(r.Start(n)) {
			n++
		}
		return n
	}
	d, step := t.Unix()-r.First.Unix(), int64(r.Step/time.Second)
	n := d / step
	if d > 0 && d%step != 0 {
		n++
	}
	return int(n)
}

// RowFrom is the first row whose time, as the weather has it, is t or later; a row of a month counts as the first of that
// month, whatever its time names. It may lie before the record (negative) or behind it.
func (r *Record) RowFrom(t time.Time) int {
	n := r.FirstFrom(t)
	if r.stampEnd && !r.Monthly() {
		n--
	}
	return n
}

// Stretch is the length of step i in days, and the first step after it that has another length, at most end. Steps of a
// constant length are one stretch, however many they are.
func (r *Record) Stretch(i, end int) (days float64, to int) {
	if !r.Monthly() {
		return r.Step.Hours() / 24, end
	}
	length := func(i int) int {
		t := r.Start(i)
		return daysIn(t.Year(), int(t.Month()))
	}
	n := length(i)
	for to = i + 1; to < end && length(to) == n; {
		to++
	}
	return float64(n), to
}

// Span is the length of the steps i to j-1 together in days.
func (r *Record) Span(i, j int) float64 {
	if !r.Monthly() {
		return float64(j-i) * r.Step.Seconds() / float64(daySeconds)
	}
	return float64((r.Start(j).Unix() - r.Start(i).Unix()) / daySeconds)
}

// Stamp is the time of row i as the weather has it: in its own format, and the end of the step where that is what its
// times name. Times in iso format are all given with the offset of the first row.
func (r *Record) Stamp(i int) string {
	if r.layout == nil {
		return r.iso(r.stamped(i))
	}
	return r.layout.text(r.stamped(i), r.zone)
}

// ISO is the time of row i in ISO 8601, start or end of the step as the weather has it: the date alone for steps of a
// whole day from midnight, otherwise date and time, followed by the offset where the weather has offsets. A month is
// named by itself, such as 2019-03, whatever its time names.
func (r *Record) ISO(i int) string {
	if r.Monthly() {
		return r.iso(r.Start(i))
	}
	return r.iso(r.stamped(i))
}

func (r *Record) stamped(i int) time.Time {
	switch {
	case r.lastDays:
		return r.Start(i+1).AddDate(0, 0, -1)
	case r.stampEnd:
		return r.Start(i + 1)
	}
	return r.Start(i)
}

func (r *Record) iso(t time.Time) string {
	h, m, s := r.First.Clock()
	switch {
	case r.Monthly():
		return t.Format("2006-01")
	case r.Step == day && h == 0 && m == 0 && s == 0:
		return t.Format(time.DateOnly)
	case r.zone != "":
		return t.Format("2006-01-02T15:04:05") + r.zone
	case s == 0 && r.Step%time.Minute == 0:
		return t.Format("2006-01-02T15:04")
	}
	return t.Format("2006-01-02T15:04:05")
}

// StepText is the length of a step in words: 1 month, 1 d, 1 h, 15 min.
func (r *Record) StepText() string {
	if r.Monthly() {
		return "1 month"
	}
	return secondsText(int64(r.Step / time.Second))
}

const day = 24 * time.Hour

// secondsText writes a time of s seconds in the largest unit that divides it.
func secondsText(s int64) string {
	switch {
	case s%daySeconds == 0:
		return fmt.Sprintf("%d d", s/daySeconds)
	case s%3600 == 0:
		return fmt.Sprintf("%d h", s/3600)
	case s%60 == 0:
		return fmt.Sprintf("%d min", s/60)
	}
	return fmt.Sprintf("%d s", s)
}
