package stats

// Calendar places the steps of a series in time. All slices have the length of the series.
type Calendar struct {
	Start []float64 // start of each step, d from any origin, rising
	Days  []float64 // length of each step, d
	Month []uint8   // month in which each step starts, 0 = January
	Year  []int32   // index of the counted year in which it starts, -1 when it is not counted
	Years int       // number of counted years
}

// Threshold is the level that starts a band, and the levels that go with it.
type Threshold struct {
	Level float64 // m; a step is above when its level is greater, not when it is equal
	Until float64 // arrest level, m: while levels stay above it an event goes on. Level or more when there is none
	Next  float64 // level that starts the next band, m; +Inf for the highest band
}

// Event is one exceedance of a level: one run of steps above it, or several that belong together.
type Event struct {
	First, Last int     // first and last step above the level
	Peak        int     // step of the highest level; the first of equal ones
	Days        float64 // duration: total length of its steps above the level, d
	Span        float64 // total length of all steps from First to Last, d; longer than Days when runs were joined
	PeakExcess  float64 // highest level less the threshold, m
	Load        float64 // sum over its steps above of (level - threshold)*length, m·d
	Counted     bool    // Peak lies in a counted year
	Open        bool    // a step above just after the end of the series would still belong to it
}

// Exceedance says how often, how long and by how much a series passes a level.
//
// EventsByYear has each counted event, whole, in the year of its peak; the event may reach into other years. The
// other yearly figures are of the steps above that start in the year, whatever their event. So there can be years
// with steps above but without an event.
//
// Of one series the counts are whole numbers. Average gives the mean of several, and then they may have a fraction.
type Exceedance struct {
	Events []Event // of the whole series, in order of time, counted or not; nil in a mean of several
	Count  float64 // counted events

	EventsByYear []float64 // number of counted events
	DaysByYear   []float64 // length of the steps above, d
	LoadByYear   []float64 // sum of (level - threshold)*length over the steps above, m·d
	AnyByYear    []float64 // 1 in a year with a step above, else 0: its mean is the annual probability
	YearsAbove   float64   // number of years with a step above

	DaysInBand float64     // length of the counted steps above the level and not above the next, d per year
	ByMonth    [12]float64 // length of the counted steps above that start in each month, d per year; January first

	Longest    float64 // longest duration (Days) of a counted event, d; 0 without one
	MeanSpan   float64 // mean span of the counted events, d; 0 without one
	PeakExcess float64 // greatest peak excess of a counted event, m; 0 without one
	// MeanExcess is the mean over time of level - threshold, over the steps above of the counted events: their load
	// divided by their days, m. Long events weigh more than short ones. It is 0 without a counted event.
	MeanExcess float64
}

// slack is what a gap may be longer than the given one and still count as equal, d. It is a tenth of a second: more
// than the starts of steps are rounded by, less than any step lasts.
const slack = 1e-6

// Exceed finds the events above a level in a series of levels (m), and their figures.
//
// A run is steps above th.Level without a break. Two successive runs are one event if the time from the start of the
// last step above of the one to the start of the first step above of the other is apart (d) or less, or if every
// level between them is above th.Until. With apart = 0 no time is short enough, and the arrest level alone joins.
// Events are found on the whole series. An event counts, whole, if its peak step lies in a counted year.
//
// With steps of a day, apart = r joins what runs declustering with run length r joins: an event is over after r days
// at or below the level.
//
// Source: runs declustering, Coles 2001, An Introduction to Statistical Modeling of Extreme Values, section 5.3.2.
func Exceed(levels []float64, cal *Calendar, th Threshold, apart float64) Exceedance {
	n := len(levels)
	start, days, month, year := cal.Start, cal.Days, cal.Month, cal.Year
	if len(start) != n || len(days) != n || len(month) != n || len(year) != n {
		panic("stats: calendar and levels differ in length")
	}
	if apart > 0 {
		apart += slack
	}

	type yearSums struct{ days, load sum }
	var (
		x        Exceedance
		byYear   = make([]yearSums, cal.Years)
		byMonth  [12]sum
		inBand   sum
		cur      Event // the event in hand
		curDays  sum
		curSpan  sum
		curLoad  sum
		begun    bool // there is an event in hand
		held     bool // levels have stayed above Until since its last step above
		allSpan  sum  // of counted events, as are the next two
		allDays  sum
		allLoad  sum
		topLevel float64
	)
	figures := make([]float64, 4*cal.Years)
	x.EventsByYear, figures = split(figures, cal.Years)
	x.DaysByYear, figures = split(figures, cal.Years)
	x.LoadByYear, x.AnyByYear = split(figures, cal.Years)

	finish := func() {
		cur.Days, cur.Span, cur.Load = curDays.total, curSpan.total, curLoad.total
		cur.PeakExcess = topLevel - th.Level
		if y := year[cur.Peak]; y >= 0 {
			cur.Counted = true
			x.Count++
			x.EventsByYear[y]++
			allSpan.add(cur.Span)
			allDays.add(cur.Days)
			allLoad.add(cur.Load)
			x.Longest = max(x.Longest, cur.Days)
			x.PeakExcess = max(x.PeakExcess, cur.PeakExcess)
		}
		x.Events = append(x.Events, cur)
	}

	for i, h := range levels {
		if !(h > th.Level) {
			if held && !(h > th.Until) {
				held = false
			}
			continue
		}
		if !begun || !held && start[i]-start[cur.Last] > apart {
			if begun {
				finish()
			}
			begun = true
			cur = Event{First: i, Peak: i}
			curDays, curSpan, curLoad, topLevel = sum{}, sum{}, sum{}, h
		} else {
			for _, d := range days[cur.Last+1 : i] {
				curSpan.add(d)
			}
		}
		cur.Last, held = i, true
		if h > topLevel {
			topLevel, cur.Peak = h, i
		}
		load := float64((h - th.Level) * days[i])
		curDays.add(days[i])
		curSpan.add(days[i])
		curLoad.add(load)
		if y := year[i]; y >= 0 {
			byYear[y].days.add(days[i])
			byYear[y].load.add(load)
			byMonth[month[i]].add(days[i])
			if !(h > th.Next) {
				inBand.add(days[i])
			}
			x.AnyByYear[y] = 1
		}
	}
	if begun {
		cur.Open = held || start[n-1]+days[n-1]-start[cur.Last] <= apart
		finish()
	}

	for y, s := range byYear {
		x.DaysByYear[y], x.LoadByYear[y] = s.days.total, s.load.total
		x.YearsAbove += x.AnyByYear[y]
	}
	if cal.Years > 0 {
		t := float64(cal.Years)
		x.DaysInBand = inBand.total / t
		for m := range byMonth {
			x.ByMonth[m] = byMonth[m].total / t
		}
	}
	if x.Count > 0 {
		x.MeanSpan = allSpan.total / x.Count
		x.MeanExcess = allLoad.total / allDays.total
	}
	return x
}

// split cuts the first n values off s, so that appending to them cannot reach the rest.
func split(s []float64, n int) (head, rest []float64) { return s[:n:n], s[n:] }
