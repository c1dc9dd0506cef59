package weather

import (
	"cmp"
	"fmt"
	"math"
	"slices"
	"time"

	"quietslope/scenario/fault"
)

// Audit is what a person should look at before trusting a record.
type Audit struct {
	Wettest    []WetDay     // the five wettest days, or months where these are the steps, the wettest first
	Suspicious []Suspicious // in the order of time
	Years      []YearRain   // every calendar year that the record touches
}

// WetDay is the rain of a civil day or of a month. A step belongs to the day in which it starts.
type WetDay struct {
	Date   string // ISO 8601, of a month such as 2019-03
	RainMM float64
}

// Suspicious is a stretch of the record that may be wrong. From and To are the starts of its first and last step.
type Suspicious struct {
	Kind string // one of the Kind constants
	From string // ISO 8601
	To   string
	Text string // what it is and what it may mean, in plain words
}

// YearRain is a calendar year.
type YearRain struct {
	Year       int
	RainMM     float64 // as replayed, filled steps included
	ValidShare float64 // of the year for which the record has steps that were measured, 0 to 1
}

// Kinds of Suspicious.
const (
	KindRepeatedRain = "repeated_rain" // the same rain in many steps
	KindLongDry      = "long_dry"      // no rain for very long
	KindDryMonth     = "dry_month"     // a month without rain in the wetter half of the year
	KindSpike        = "spike"         // far more rain in a day than in any other
	KindPETZero      = "pet_zero"      // no evapotranspiration for long
	KindPETConstant  = "pet_constant"  // the same evapotranspiration for long
	KindRainTotal    = "rain_total"    // far more or less rain in a year, or more in a day, than nearly any climate has
	KindPETTotal     = "pet_total"     // the same of the evapotranspiration in a year
)

// Thresholds of the audit. All are judgement, set so that a sound daily record of a humid climate gives few findings or
// none, and that a stuck gauge, a lost value written as 0 or a sum of several days gives one.
const (
	wettestDays = 5

	// Means of a year, and rain of a day in mm, outside of which a wrong unit is likelier than the climate: landslides in
	// clay are rare in deserts, and the wettest and hottest places are known for being so. A unit that is wrong by a factor
	// of ten takes most climates out of these limits.
	leastRainPerYear = 150.0
	mostRainPerYear  = 5000.0
	mostRainPerDay   = 400.0
	leastPETPerYear  = 150.0
	mostPETPerYear   = 2500.0
	daysPerYear      = 365.25 // on average

	// Equal amounts of rain in as many steps, and over as long a time, are rarely rain: a sensor that is stuck, or a sum
	// spread evenly over the days it was collected in.
	repeatSteps = 5
	repeatTime  = day

	// So long without rain happens in dry summers, seldom in a wet season; there it is more often a gauge that was out of
	// order and a 0 written for it.
	dryDays       = 60
	dryDaysWetter = 30

	// A day with so many times the rain of the wet days' 99.9 % quantile is more often a decimal mark lost or a sum of
	// several days than a storm. A day is wet from 1 mm on, as is usual for climate indices (from memory), and with fewer
	// wet days than a month has days the quantile means nothing.
	spikeFactor   = 5
	spikeQuantile = 0.999
	spikeWetMM    = 1.0
	spikeWetDays  = 30

	// Evapotranspiration changes with every day's weather. Values that stay for so long are monthly means spread over the
	// days, which is usable, or a column that is not what it seems. Stretches no further apart than a month are one finding.
	petDays       = 30
	petApart      = 31 * day
	mostFindings  = 20 // of one kind; further ones are summed up in one more
	monthsWetter  = 6
	monthsPerYear = 12
)

// Audit looks for what is unusual in the record. It never changes a value. Steps that were filled are no part of a finding,
// but they are part of the totals of a year, which are as replayed.
//
// In a record of months it looks for repeated rain, two dry months or longer, dry months of the wetter half of the year,
// and totals of a year; days out of the ordinary, and evapotranspiration that stays, cannot be told from months.
func (r *Record) Audit() Audit {
	a := newAuditor(r)
	a.totals()
	a.repeats()
	a.dryRuns()
	a.dryMonths()
	a.spikes()
	a.pet()
	return Audit{Wettest: a.wettest(), Suspicious: a.suspicious(), Years: a.years}
}

// Implausible gives those findings of Audit that put the whole record in doubt: rain or evapotranspiration outside of what
// nearly every climate has, as it is when the unit of a column is wrong. It is quick.
func (r *Record) Implausible() []Suspicious {
	a := newAuditor(r)
	a.totals()
	return a.suspicious()
}

// finding is a Suspicious with its steps: from the first to before the last.
type finding struct {
	kind     string
	from, to int
	text     string
}

type auditor struct {
	*Record
	days   []auditDay // of which any rain was measured
	months []auditMonth
	years  []YearRain
	wetter [monthsPerYear]bool // months of the wetter half of the year; all false when not known
	found  []finding
}

func newAuditor(r *Record) *auditor {
	a := &auditor{Record: r}
	a.gather()
	return a
}

type auditDay struct {
	from, to int // steps
	rain     float64
}

type auditMonth struct {
	start    time.Time
	from, to int // steps
	rain     float64
	whole    bool // all of the month's steps are in the record
}

// gather sums the rain by day, month and year. A step of a month counts as a day.
func (a *auditor) gather() {
	var yearRain total
	for i := 0; i < len(a.Rain); {
		t := a.Start(i)
		y, m, d := t.Date()
		end := a.firstAt(time.Date(y, m, d+1, 0, 0, 0, 0, t.Location()), i)
		var sum total
		for _, v := range a.Rain[i:end] {
			sum.add(v)
		}
		rain := sum.value()
		if a.filledRain(i, end) < end-i {
			a.days = append(a.days, auditDay{i, end, rain})
		}
		if n := len(a.months); n == 0 || !sameMonth(a.months[n-1].start, t) {
			a.months = append(a.months, auditMonth{start: time.Date(y, m, 1, 0, 0, 0, 0, t.Location()), from: i})
		}
		if n := len(a.years); n == 0 || a.years[n-1].Year != y {
			a.years = append(a.years, YearRain{Year: y})
			yearRain = total{}
		}
		month, year := &a.months[len(a.months)-1], &a.years[len(a.years)-1]
		month.to = end
		month.rain += rain
		yearRain.add(rain)
		year.RainMM = yearRain.value()
		year.ValidShare += a.seconds(i, end)
		i = end
	}
	for _, g := range a.Filled {
		for i := g.From; i < g.To; i++ {
			y := &a.years[a.Start(i).Year()-a.years[0].Year]
			y.ValidShare -= a.seconds(i, i+1)
		}
	}
	for i := range a.years {
		y := &a.years[i]
		length := time.Date(y.Year+1, 1, 1, 0, 0, 0, 0, time.UTC).Sub(time.Date(y.Year, 1, 1, 0, 0, 0, 0, time.UTC))
		y.ValidShare = min(1, max(0, y.ValidShare/length.Seconds()))
	}
	for i := range a.months {
		m := &a.months[i]
		before, after := a.Start(m.from-1), a.Start(m.to)
		m.whole = before.Before(m.start) && !after.Before(m.start.AddDate(0, 1, 0))
	}
	a.findWetter()
}

// total is a sum with the rounding errors of its additions beside it (Neumaier 1974, from memory), so that tenths of a millimetre add up
// to tenths.
type total struct{ sum, lost float64 }

func (t *total) add(v float64) {
	sum := t.sum + v
	if math.Abs(t.sum) >= math.Abs(v) {
		t.lost += (t.sum - sum) + v
	} else {
		t.lost += (v - sum) + t.sum
	}
	t.sum = sum
}

func (t *total) value() float64 { return t.sum + t.lost }

// firstAt returns the first step from i+1 on that does not start before t, at most the number of steps.
func (a *auditor) firstAt(t time.Time, i int) int {
	return min(max(a.FirstFrom(t), i+1), len(a.Rain))
}

func sameMonth(a, b time.Time) bool { return a.Year() == b.Year() && a.Month() == b.Month() }

// findWetter finds the six successive calendar months with the most rain on average, the earliest of equal ones. Without
// a whole month of every name there is no wetter half.
func (a *auditor) findWetter() {
	var sum [monthsPerYear]float64
	var n [monthsPerYear]int
	for _, m := range a.months {
		if m.whole {
			sum[m.start.Month()-1] += m.rain
			n[m.start.Month()-1]++
		}
	}
	for m := range sum {
		if n[m] == 0 {
			return
		}
		sum[m] /= float64(n[m])
	}
	best, first := -1.0, 0
	for m := range sum {
		half := 0.0
		for k := range monthsWetter {
			half += sum[(m+k)%monthsPerYear]
		}
		if half > best {
			best, first = half, m
		}
	}
	for k := range monthsWetter {
		a.wetter[(first+k)%monthsPerYear] = true
	}
}

func (a *auditor) isWetter(t time.Time) bool { return a.wetter[t.Month()-1] }

func (a *auditor) add(kind string, from, to int, format string, args ...any) {
	a.found = append(a.found, finding{kind, from, to, fmt.Sprintf(format, args...)})
}

// seconds is the length of the steps i to j-1 together in s.
func (a *auditor) seconds(i, j int) float64 {
	if a.Monthly() {
		return a.Span(i, j) * float64(daySeconds)
	}
	return float64(j-i) * a.Step.Seconds()
}

// runs calls found for every stretch of equal values that were measured, from the first step to before the last. Which
// steps were filled is told by filled.
func (a *auditor) runs(x []float64, filled func(*Gap) bool, found func(from, to int, v float64)) {
	from := 0
	upTo := func(end int) {
		for i := from + 1; i <= end; i++ {
			if i == end || x[i] != x[from] {
				found(from, i, x[from])
				from = i
			}
		}
	}
	for i := range a.Filled {
		if g := &a.Filled[i]; filled(g) {
			upTo(g.From)
			from = g.To
		}
	}
	upTo(len(x))
}

func rainFilled(g *Gap) bool { return g.Rain }
func petFilled(g *Gap) bool  { return g.PET }

// filledRain is the number of steps from..to-1 of which the rain was filled.
func (a *auditor) filledRain(from, to int) int {
	i, _ := slices.BinarySearchFunc(a.Filled, from, func(g Gap, from int) int { return cmp.Compare(g.To, from+1) })
	n := 0
	for ; i < len(a.Filled) && a.Filled[i].From < to; i++ {
		if g := &a.Filled[i]; g.Rain {
			n += min(g.To, to) - max(g.From, from)
		}
	}
	return n
}

// totals holds the means of a year and the wettest day against their limits.
func (a *auditor) totals() {
	if len(a.days) == 0 {
		return
	}
	wettest := slices.MaxFunc(a.days, func(x, y auditDay) int { return cmp.Compare(x.rain, y.rain) })
	rain := a.perYear(a.Rain)
	const text = "rain is %s mm a year over the record and %s mm %s: check %sthe unit of the rain column"
	in := "on the wettest day"
	if a.Monthly() {
		in = "in the wettest month"
	}
	switch {
	case rain < leastRainPerYear || rain > mostRainPerYear:
		a.add(KindRainTotal, 0, len(a.Rain), text, roundMM(rain), roundMM(wettest.rain), in, "")
	case !a.Monthly() && wettest.rain > mostRainPerDay:
		a.add(KindRainTotal, wettest.from, wettest.to, text, roundMM(rain), roundMM(wettest.rain), in, "that day, and ")
	}
	if a.PET == nil {
		return
	}
	if pet := a.perYear(a.PET); pet < leastPETPerYear || pet > mostPETPerYear {
		a.add(KindPETTotal, 0, len(a.PET), "evapotranspiration is %s mm a year over the record: check the unit of the evapotranspiration column", roundMM(pet))
	}
}

// perYear is the mean sum of the complete calendar years in mm or, when there is none, the mean of all steps over as long as
// a year.
func (a *auditor) perYear(x []float64) float64 {
	first := slices.IndexFunc(a.months, func(m auditMonth) bool { return m.whole && m.start.Month() == time.January })
	whole := 0
	for first >= 0 && first+whole < len(a.months) && a.months[first+whole].whole {
		whole++
	}
	years := whole / monthsPerYear
	from, to, scale := 0, len(x), daysPerYear/a.Span(0, len(x))
	if years > 0 {
		from, to, scale = a.months[first].from, a.months[first+years*monthsPerYear-1].to, 1/float64(years)
	}
	var sum total
	for _, v := range x[from:to] {
		sum.add(v)
	}
	return sum.value() * scale
}

// roundMM writes mm without decimals, or to two figures when they are few.
func roundMM(v float64) string {
	if v < 10 {
		return fmt.Sprintf("%.2g", v)
	}
	return fmt.Sprintf("%.0f", v)
}

func (a *auditor) repeats() {
	a.runs(a.Rain, rainFilled, func(from, to int, v float64) {
		if v > 0 && to-from >= repeatSteps && a.Span(from, to) >= float64(repeatTime)/float64(day) {
			a.add(KindRepeatedRain, from, to, "the same %.4g mm of rain in %d steps one after another; a stuck gauge, or a sum spread over several steps, looks like this", v, to-from)
		}
	})
}

func (a *auditor) dryRuns() {
	a.runs(a.Rain, rainFilled, func(from, to int, v float64) {
		days := a.Span(from, to)
		if v != 0 || days < dryDaysWetter {
			return
		}
		const text = "no rain for %.0f days%s; check that these are not missing values written as 0"
		if days >= dryDays {
			a.add(KindLongDry, from, to, text, days, "")
			return
		}
		if a.Monthly() { // left to dryMonths
			return
		}
		wetter := 0
		for i := from; i < to; i++ {
			if a.isWetter(a.Start(i)) {
				wetter++
			}
		}
		if a.Span(0, wetter) >= dryDaysWetter {
			a.add(KindLongDry, from, to, text, days, " in the wetter half of the year")
		}
	})
}

// dryMonths comes after dryRuns, whose findings it does not repeat.
func (a *auditor) dryMonths() {
	dry := slices.Clone(a.found)
	for _, m := range a.months {
		if !m.whole || m.rain > 0 || !a.isWetter(m.start) || a.filledRain(m.from, m.to) > 0 {
			continue
		}
		if slices.ContainsFunc(dry, func(f finding) bool { return f.kind == KindLongDry && f.from <= m.from && m.to <= f.to }) {
			continue
		}
		a.add(KindDryMonth, m.from, m.to, "no rain in %s, a month of the wetter half of the year; check that these are not missing values written as 0", m.start.Format("January 2006"))
	}
}

func (a *auditor) spikes() {
	if a.Monthly() {
		return
	}
	var wet []auditDay
	for _, d := range a.days {
		if d.rain >= spikeWetMM {
			wet = append(wet, d)
		}
	}
	slices.SortStableFunc(wet, func(x, y auditDay) int { return cmp.Compare(x.rain, y.rain) })
	// Each day is held against the days with less rain, so that one spike does not hide another. Looking at the wettest
	// hundredth is enough.
	from, q := len(wet), 0.0
	for n := len(wet) - 1; n >= max(spikeWetDays, len(wet)*99/100); n-- {
		if below := quantile(wet[:n], spikeQuantile); wet[n].rain > spikeFactor*below {
			from, q = n, below
		}
	}
	for _, d := range wet[from:] {
		a.add(KindSpike, d.from, d.to, "%.4g mm of rain in a day, more than %d times the 99.9 %% quantile of the ordinary wet days, %.3g mm; a lost decimal mark, or a sum of several days, looks like this",
			d.rain, spikeFactor, q)
	}
}

// quantile is the quantile of type 7 (Hyndman and Fan 1996, from memory) of days in the order of their rain.
func quantile(days []auditDay, p float64) float64 {
	h := p * float64(len(days)-1)
	i := int(math.Floor(h))
	if i+1 >= len(days) {
		return days[len(days)-1].rain
	}
	return days[i].rain + (h-float64(i))*(days[i+1].rain-days[i].rain)
}

func (a *auditor) pet() {
	if a.Monthly() {
		return
	}
	stretches := 0 // in the last finding of constant evapotranspiration
	last := -1     // its place in found
	a.runs(a.PET, petFilled, func(from, to int, v float64) {
		days := a.Span(from, to)
		switch {
		case days < petDays:
		case v == 0:
			a.add(KindPETZero, from, to, "no evapotranspiration for %.0f days; check that these are not missing values written as 0", days)
		case last >= 0 && a.Start(from).Sub(a.Start(a.found[last].to)) <= petApart:
			stretches++
			a.found[last].to = to
			a.found[last].text = fmt.Sprintf("evapotranspiration stays at one value for %d days or longer, %d times; monthly values spread over the days look like this", petDays, stretches)
		default:
			stretches, last = 1, len(a.found)
			a.add(KindPETConstant, from, to, "evapotranspiration stays at %.4g mm a step for %.0f days; a monthly value spread over the days, or a stuck sensor, looks like this", v, days)
		}
	})
}

func (a *auditor) wettest() []WetDay {
	days := slices.DeleteFunc(slices.Clone(a.days), func(d auditDay) bool { return d.rain == 0 })
	layout := time.DateOnly
	if a.Monthly() {
		layout = "2006-01"
	}
	slices.SortStableFunc(days, func(x, y auditDay) int { return cmp.Compare(y.rain, x.rain) })
	var out []WetDay
	for _, d := range days[:min(len(days), wettestDays)] {
		out = append(out, WetDay{a.Start(d.from).Format(layout), d.rain})
	}
	return out
}

// suspicious lists the findings in the order of time, the first of each kind and one that sums up the others.
func (a *auditor) suspicious() []Suspicious {
	slices.SortStableFunc(a.found, func(x, y finding) int { return cmp.Compare(x.from, y.from) })
	var out []Suspicious
	seen := map[string]int{}
	rest := map[string]*finding{}
	var kinds []string // of rest
	list := func(f finding) {
		out = append(out, Suspicious{f.kind, a.iso(a.Start(f.from)), a.iso(a.Start(f.to - 1)), f.text})
	}
	for _, f := range a.found {
		if seen[f.kind]++; seen[f.kind] <= mostFindings {
			list(f)
			continue
		}
		if g := rest[f.kind]; g != nil {
			g.to = max(g.to, f.to)
			continue
		}
		rest[f.kind] = &f
		kinds = append(kinds, f.kind)
	}
	for _, k := range kinds {
		f := *rest[k]
		f.text = fmt.Sprintf("%s of the kind %s between these times", fault.Count(seen[k]-mostFindings, "more finding"), k)
		list(f)
	}
	return out
}
