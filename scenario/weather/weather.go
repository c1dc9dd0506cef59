// Package weather reads a record of rain and evapotranspiration, checks it, and says what looks wrong with it.
//
// A record is delimited text with one header line and one row per step. It is read whole and checked whole: what comes
// out of Read has a constant step, no gaps, and only finite values within physical limits.
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
	StampEnd bool     // the time names the end of a step, not its start
	Missing  []string // texts that stand for a missing value; a number matches any cell of the same value
}

// Column is one column of numbers.
type Column struct {
	Name string
	// Unit is one that DepthUnit accepts: a depth per step (mm, "0.1 mm", in) or a rate (mm/h, mm/d, in/h).
	Unit string
}

// Record is a complete record of constant step.
type Record struct {
	Name   string        // the file as messages name it
	SHA256 string        // of the file's bytes as they are on disk, in hex
	First  time.Time     // start of the first step; UTC, or for iso times the offset of the first row
	Step   time.Duration // constant, 1 min to 1 d, in whole seconds
	Rain   []float64     // mm per step
	PET    []float64     // mm per step; nil when the record has none

	layout   *layout // of the time column; nil in a record not read from a file
	zone     string  // offset of the first row as written, such as Z or +01:00; empty for civil times
	stampEnd bool
}

// Start is the time at which step i starts. Start(len(r.Rain)) is the end of the record.
func (r *Record) Start(i int) time.Time {
	// In seconds: a time.Duration holds 292 years only.
	return time.Unix(r.First.Unix()+int64(i)*int64(r.Step/time.Second), 0).In(r.First.Location())
}

// FirstFrom is the first step that starts at t or later. It may lie before the record (negative) or behind it.
func (r *Record) FirstFrom(t time.Time) int {
	d, step := t.Unix()-r.First.Unix(), int64(r.Step/time.Second)
	n := d / step
	if d > 0 && d%step != 0 {
		n++
	}
	return int(n)
}

// Days is the length of a step in days.
func (r *Record) Days() float64 { return r.Step.Hours() / 24 }

// Stamp is the time of row i as the weather has it: in its own format, and the end of the step where that is what its
// times name. Times in iso format are all given with the offset of the first row.
func (r *Record) Stamp(i int) string {
	if r.layout == nil {
		return r.iso(r.stamped(i))
	}
	return r.layout.text(r.stamped(i), r.zone)
}

// ISO is the time of row i in ISO 8601, start or end of the step as the weather has it: the date alone for steps of a
// whole day from midnight, otherwise date and time, followed by the offset where the weather has offsets.
func (r *Record) ISO(i int) string { return r.iso(r.stamped(i)) }

func (r *Record) stamped(i int) time.Time {
	if r.stampEnd {
		i++
	}
	return r.Start(i)
}

func (r *Record) iso(t time.Time) string {
	h, m, s := r.First.Clock()
	switch {
	case r.Step == day && h == 0 && m == 0 && s == 0:
		return t.Format(time.DateOnly)
	case r.zone != "":
		return t.Format("2006-01-02T15:04:05") + r.zone
	case s == 0 && r.Step%time.Minute == 0:
		return t.Format("2006-01-02T15:04")
	}
	return t.Format("2006-01-02T15:04:05")
}

// StepText is the length of a step in words: 1 d, 1 h, 15 min.
func (r *Record) StepText() string { return secondsText(int64(r.Step / time.Second)) }

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
