package weather

import (
	"slices"
	"time"

	"quietslope/scenario/fault"
)

// A record whose rows are a calendar month apart is placed by months: row.at and the times in series are then the number
// of the month that a row is about, in months since the year 0, and the step is 1.

// Lengths of calendar months, s.
const (
	shortestMonth = 28 * daySeconds
	longestMonth  = 31 * daySeconds
)

// alike puts one length in place of all that a month can have.
func alike(differences []int64) []int64 {
	for i, s := range differences {
		if s >= shortestMonth && s <= longestMonth {
			differences[i] = longestMonth
		}
	}
	return differences
}

// settleMonths decides whether the first rows, which are commonly as far apart as months or further, are months, and what
// their times name: the first of a month, or with stamps at the end its last day.
func (r *reader) settleMonths() error {
	var firsts, lasts, sameDay int
	var apart []int64 // months from row to row
	var before time.Time
	for i := range r.head {
		t := r.civil(r.head[i].at)
		if edgeOfMonth(t) == otherDay { // a row of another offset is told from others here, and refused later
			t = r.ownClock(&r.head[i])
		}
		switch edgeOfMonth(t) {
		case firstDay:
			firsts++
		case lastDay:
			lasts++
		}
		if i > 0 && !r.head[i].broken {
			if t.Equal(before.AddDate(0, 1, 0)) {
				sameDay++
			}
			if n := monthNumber(t) - monthNumber(before); n > 0 {
				apart = append(apart, n)
			}
		}
		before = t
	}
	if n := len(r.head); 2*(firsts+lasts) <= n {
		if 2*sameDay <= n-1 {
			return r.wrongStep(secondsText(commonest(differences(r.head))))
		}
		first := &r.head[0]
		t := r.ownClock(first)
		if !r.src.StampEnd {
			return r.fatalTime(first, "is not %s, which the rows of months must name; write %q", r.edgeText(), r.nearestEdge(t))
		}
		next := startOfMonth(monthNumber(t)+1, time.UTC)
		return r.fatalTime(first, "is neither the first of the following month nor the last day of its own, one of which the rows of months must name; write %q or %q",
			r.layout.text(next, r.zone), r.layout.text(next.AddDate(0, 0, -1), r.zone))
	}
	if n := commonest(apart); n > 1 {
		return r.wrongStep(monthsText(n))
	}
	if r.lastDays = lasts > firsts; r.lastDays && !r.src.StampEnd {
		at := slices.IndexFunc(r.head, func(w row) bool { return edgeOfMonth(r.ownClock(&w)) == lastDay })
		return r.fatalTime(&r.head[at], "is the last day of its month; write weather.stamp: end if the times name the ends of months, otherwise the first of each month")
	}
	r.months, r.step = true, 1
	return nil
}

// ownClock is the time of a row by the clock of its own offset, as if it were UTC.
func (r *reader) ownClock(w *row) time.Time {
	offset := int64(0)
	if r.layout.iso {
		_, offset, _ = r.layout.parse(w.time)
	}
	return time.Unix(w.at+offset, 0).UTC()
}

// What day of its month a time is the start of.
const (
	otherDay = iota
	firstDay
	lastDay
)

func edgeOfMonth(t time.Time) int {
	h, m, s := t.Clock()
	switch {
	case h != 0 || m != 0 || s != 0:
		return otherDay
	case t.Day() == 1:
		return firstDay
	case t.AddDate(0, 0, 1).Day() == 1:
		return lastDay
	}
	return otherDay
}

// monthNumber counts months from January of the year 0 on.
func monthNumber(t time.Time) int64 { return 12*int64(t.Year()) + int64(t.Month()-time.January) }

// startOfMonth is the inverse of monthNumber.
func startOfMonth(n int64, in *time.Location) time.Time {
	return time.Date(0, time.January+time.Month(n), 1, 0, 0, 0, 0, in)
}

func monthsText(n int64) string {
	if n%12 == 0 {
		return fault.Count(int(n/12), "year")
	}
	return fault.Count(int(n), "month")
}

// civil is a time by the clock of the first row, as if it were UTC.
func (r *reader) civil(at int64) time.Time { return time.Unix(at+r.offset, 0).UTC() }

// stampOfMonth is the time that the row of a month has.
func (r *reader) stampOfMonth(n int64) time.Time {
	switch {
	case r.lastDays:
		return startOfMonth(n+1, time.UTC).AddDate(0, 0, -1)
	case r.src.StampEnd:
		return startOfMonth(n+1, time.UTC)
	}
	return startOfMonth(n, time.UTC)
}

// edgeText says what the times of months name.
func (r *reader) edgeText() string {
	text := "the first of its month"
	switch {
	case r.lastDays:
		text = "the last day of its month"
	case r.src.StampEnd:
		text = "the first of the following month"
	}
	if r.layout.iso || r.layout.at[hour] >= 0 {
		return "00:00 on " + text
	}
	return text
}

// nearestEdge is what to write for a time that is not what the times of months name.
func (r *reader) nearestEdge(t time.Time) string {
	n := monthNumber(t)
	if r.src.StampEnd && t.Day() == 1 {
		n-- // it is the end of the month before
	}
	return r.layout.text(r.stampOfMonth(n), r.zone)
}

// toMonth puts the number of its month in place of the time of a row, and sets the scale to the month's length. It returns
// false after noting that the time does not name a month as the others do.
func (r *reader) toMonth(w *row) (ok bool) {
	t := r.civil(w.at)
	n := monthNumber(t)
	if r.src.StampEnd && !r.lastDays {
		n--
	}
	if !t.Equal(r.stampOfMonth(n)) {
		r.unsure = true
		r.notAMonth(w, t)
		return false
	}
	w.at = n
	start := startOfMonth(n, time.UTC)
	r.setScale(time.Duration(daysIn(start.Year(), int(start.Month()))) * day)
	return true
}

func (r *reader) notAMonth(w *row, t time.Time) {
	want := r.edgeText()
	if own := r.ownClock(w); !own.Equal(t) && edgeOfMonth(own) != otherDay {
		r.inRow(w.line, r.src.Time, wrong("%q is not %s by the offset from UTC of the first row; keep one offset all year, so that months are whole", w.time, want))
		return
	}
	var d int64
	if r.lastLine > 0 {
		d = t.Unix() - r.stampOfMonth(r.last).Unix()
	}
	if d <= 0 {
		r.inRow(w.line, r.src.Time, wrong("%q is not %s, as the times of months must be; write %q", w.time, want, r.nearestEdge(t)))
		return
	}
	r.inRow(w.line, r.src.Time, wrong("%q comes %s after %q in line %d, but the step is 1 month; every time must be %s, such as %q",
		w.time, secondsText(d), r.timeText(r.last), r.lastLine, want, r.nearestEdge(t)))
}
