package scenario

import (
	"fmt"
	"strings"
	"time"

	"quietslope/scenario/fault"
	"quietslope/scenario/weather"
	"quietslope/stats"
)

// period is the stretch of the record that is counted: complete years that begin at the first step of one month.
type period struct {
	starts   time.Month // month in which a year begins
	years    int
	from, to int // the counted steps are from..to-1 of the record
	calendar stats.Calendar
}

// yearOf is the first day of the year that begins in the given month.
func yearOf(year int, starts time.Month, r *weather.Record) time.Time {
	return time.Date(year, starts, 1, 0, 0, 0, 0, r.First.Location())
}

// countYears finds the complete years of a record: those of which every step is there.
func countYears(r *weather.Record, starts time.Month) period {
	p := period{starts: starts}
	n := len(r.Rain)
	for year := r.First.Year() - 1; ; year++ {
		from := r.FirstFrom(yearOf(year, starts, r))
		to := r.FirstFrom(yearOf(year+1, starts, r))
		if to > n {
			break
		}
		if from < 0 {
			continue
		}
		if p.years == 0 {
			p.from = from
		}
		p.years++
		p.to = to
	}
	p.calendar = calendarOf(r, p)
	return p
}

// calendarOf places every step of the record in its month and, where it is counted, its year.
func calendarOf(r *weather.Record, p period) stats.Calendar {
	n := len(r.Rain)
	c := stats.Calendar{
		Start: make([]float64, n), Days: make([]float64, n), Month: make([]uint8, n), Year: make([]int32, n), Years: p.years,
	}
	for i := 0; i < n; {
		start := r.Span(0, i)
		days, to := r.Stretch(i, n)
		for k := range to - i {
			c.Start[i+k] = start + float64(k)*days
			c.Days[i+k] = days
			c.Year[i+k] = -1
		}
		i = to
	}
	for _, m := range months(r) {
		year := int32(-1)
		if m.from >= p.from && m.to <= p.to && p.years > 0 {
			first := r.Start(p.from)
			year = int32(m.year - first.Year())
			if m.month < p.starts {
				year--
			}
		}
		for i := m.from; i < m.to; i++ {
			c.Month[i] = uint8(m.month - time.January)
			c.Year[i] = year
		}
	}
	return c
}

// monthSteps are the steps of a record that start in one calendar month.
type monthSteps struct {
	year     int
	month    time.Month
	from, to int
	complete bool
}

// months cuts a record into calendar months.
func months(r *weather.Record) []monthSteps {
	var ms []monthSteps
	n := len(r.Rain)
	for t := time.Date(r.First.Year(), r.First.Month(), 1, 0, 0, 0, 0, r.First.Location()); ; t = t.AddDate(0, 1, 0) {
		from, to := r.FirstFrom(t), r.FirstFrom(t.AddDate(0, 1, 0))
		if from >= n {
			return ms
		}
		m := monthSteps{year: t.Year(), month: t.Month(), from: max(0, from), to: min(n, to), complete: from >= 0 && to <= n}
		if m.from < m.to {
			ms = append(ms, m)
		}
	}
}

// lowestMonth is the calendar month with the lowest mean level over all its complete occurrences; of equal ones the
// earliest in the year. It is 0 when no month is complete.
func lowestMonth(r *weather.Record, levels []float64) time.Month {
	var sum [13]float64
	var steps [13]int
	for _, m := range months(r) {
		if !m.complete {
			continue
		}
		for _, h := range levels[m.from:m.to] {
			sum[m.month] += h
		}
		steps[m.month] += m.to - m.from
	}
	var lowest time.Month
	for m := time.January; m <= time.December; m++ {
		if steps[m] == 0 {
			continue
		}
		if lowest == 0 || sum[m]/float64(steps[m]) < sum[lowest]/float64(steps[lowest]) {
			lowest = m
		}
	}
	return lowest
}

// noCompleteYear says which months the nearest year lacks, and which starting month would do, if one does.
func noCompleteYear(r *weather.Record, starts time.Month) error {
	n := len(r.Rain)
	best, most := 0, -1
	for year := r.First.Year() - 1; year <= r.Start(n-1).Year(); year++ {
		from, to := r.FirstFrom(yearOf(year, starts, r)), r.FirstFrom(yearOf(year+1, starts, r))
		if present := min(to, n) - max(from, 0); present > most {
			best, most = year, present
		}
	}
	have := map[int]bool{}
	for _, m := range months(r) {
		if m.complete {
			have[m.year*12+int(m.month)-1] = true
		}
	}
	var missing []string
	for i := range 12 {
		t := yearOf(best, starts, r).AddDate(0, i, 0)
		if !have[t.Year()*12+int(t.Month())-1] {
			missing = append(missing, t.Format("January 2006"))
		}
	}
	end := yearOf(best+1, starts, r).AddDate(0, 0, -1)
	text := fmt.Sprintf("holds no complete year from %s on: it runs from %s to %s, and %s to %s lacks all or part of %s",
		starts, r.ISO(0), r.ISO(n-1), yearOf(best, starts, r).Format("January 2006"), end.Format("January 2006"),
		strings.Join(missing, ", "))
	advice := "; give a longer record"
	for m := time.January; m <= time.December; m++ {
		if p := countYears(r, m); p.years > 0 {
			advice = fmt.Sprintf("; give a longer record, or count.year_starts: %s, from which it holds %s", m, fault.Count(p.years, "complete year"))
			break
		}
	}
	return &fault.Error{File: r.Name, Text: text + advice}
}

// wholeYears finds the whole multiples of 12 months in the record from its first step: ends[k-1] is the first step after
// k years. Where the year has no 29 February, a year
// from a time on that day ends at the same time of 28 February.
func wholeYears(r *weather.Record) (ends []int) {
	for k := 1; ; k++ {
		t := r.First.AddDate(k, 0, 0)
		if t.Day() != r.First.Day() {
			t = t.AddDate(0, 0, -t.Day())
		}
		end := r.FirstFrom(t)
		if end > len(r.Rain) {
			return ends
		}
		ends = append(ends, end)
	}
}
