package stats

import (
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"
)

// daily is the calendar of n days from the first of January 2001, with calendar years of which the first skip and
// any partial last one are not counted.
func daily(n, skip int) *Calendar {
	return calendar(time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), n, 24*time.Hour, skip)
}

func calendar(from time.Time, n int, step time.Duration, skip int) *Calendar {
	c := &Calendar{}
	end := from.Add(time.Duration(n) * step)
	for i := range n {
		t := from.Add(time.Duration(i) * step)
		c.Start = append(c.Start, t.Sub(from).Hours()/24)
		c.Days = append(c.Days, step.Hours()/24)
		c.Month = append(c.Month, uint8(t.Month()-1))
		y := t.Year() - from.Year() - skip
		if y < 0 || time.Date(t.Year()+1, 1, 1, 0, 0, 0, 0, time.UTC).After(end) {
			y = -1
		}
		c.Year = append(c.Year, int32(y))
		c.Years = max(c.Years, y+1)
	}
	return c
}

// plain is the calendar of n steps of a day that all start in one counted year.
func plain(n int) *Calendar {
	c := &Calendar{Years: 1, Month: make([]uint8, n), Year: make([]int32, n)}
	for i := range n {
		c.Start = append(c.Start, float64(i))
		c.Days = append(c.Days, 1)
	}
	return c
}

func above(b float64) Threshold { return Threshold{Level: b, Until: b, Next: math.Inf(1)} }

// near compares figures that were added up in another order.
var near = cmpopts.EquateApprox(1e-12, 1e-12)

// TestExceedJoins has one case for each sentence on what one event is. Every digit of levels is a day.
func TestExceedJoins(t *testing.T) {
	type span struct{ First, Last, Peak int }
	tests := []struct {
		name   string
		levels string
		until  float64
		apart  float64
		want   []span
		open   bool // of the last event
	}{
		{"nothing", "", 4, 10, nil, false},
		{"never above", "0440", 4, 10, nil, false},
		{"equal is not above", "04540", 4, 0, []span{{2, 2, 2}}, false},
		{"one run", "0567650", 4, 0, []span{{1, 5, 3}}, false},
		{"apart 0 joins nothing", "0505050", 4, 0, []span{{1, 1, 1}, {3, 3, 3}, {5, 5, 5}}, false},
		{"a gap of 2 d is more than 1 d", "50500", 4, 1, []span{{0, 0, 0}, {2, 2, 2}}, false},
		{"a gap of exactly apart joins", "5050000", 4, 2, []span{{0, 2, 0}}, false},
		{"a gap over apart does not", "50050000", 4, 2, []span{{0, 0, 0}, {3, 3, 3}}, false},
		{"joins go on", "50505050000", 4, 2, []span{{0, 6, 0}}, false},
		{"the gap counts from the last step above", "55500500000", 4, 3, []span{{0, 5, 0}}, false},
		{"each gap for itself", "505000505000", 4, 2, []span{{0, 2, 0}, {6, 8, 6}}, false},
		{"first of equal peaks", "0575707500", 4, 2, []span{{1, 7, 2}}, false},
		{"peak in a later run", "0505060", 4, 2, []span{{1, 5, 5}}, true},
		{"stays above until", "0533350", 2, 0, []span{{1, 5, 1}}, false},
		{"reaches until", "0532350", 2, 0, []span{{1, 1, 1}, {5, 5, 5}}, false},
		{"falls below until", "0531350", 2, 0, []span{{1, 1, 1}, {5, 5, 5}}, false},
		{"until joins whatever the time", "0533333333350", 2, 1, []span{{1, 11, 1}}, false},
		{"below until but near", "051500000", 2, 2, []span{{1, 3, 1}}, false},
		{"near by one, above until by the other", "0515335000", 2, 2, []span{{1, 6, 1}}, false},
		{"open: the series ends above", "00055", 4, 0, []span{{3, 4, 3}}, true},
		{"open: ends before apart is over", "00500", 4, 3, []span{{2, 2, 2}}, true},
		{"not open: ends when apart is over", "00500", 4, 2, []span{{2, 2, 2}}, false},
		{"open: ends above until", "00533", 2, 0, []span{{2, 2, 2}}, true},
		{"not open: until reached", "00532", 2, 0, []span{{2, 2, 2}}, false},
		{"the series begins above", "5500", 4, 0, []span{{0, 1, 0}}, false},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			x := Exceed(digits(tt.levels), plain(len(tt.levels)), Threshold{4, tt.until, math.Inf(1)}, tt.apart)
			var got []span
			for i, e := range x.Events {
				got = append(got, span{e.First, e.Last, e.Peak})
				if want := tt.open && i == len(x.Events)-1; e.Open != want {
					t.Errorf("event %d open: %v, want %v", i, e.Open, want)
				}
			}
			if d := cmp.Diff(tt.want, got); d != "" {
				t.Errorf("events (-want +got)\n%s", d)
			}
			if x.Count != float64(len(tt.want)) {
				t.Errorf("count %v, want %d", x.Count, len(tt.want))
			}
		})
	}
}

func digits(s string) []float64 {
	var x []float64
	for _, c := range s {
		x = append(x, float64(c-'0'))
	}
	return x
}

// TestExceedFigures is worked out by hand: two events, the first of two runs, over two years of four steps of 10 d.
func TestExceedFigures(t *testing.T) {
	cal := &Calendar{
		Start: []float64{0, 10, 20, 30, 40, 50, 60, 70},
		Days:  []float64{10, 10, 10, 10, 10, 10, 10, 10},
		Month: []uint8{0, 3, 6, 9, 0, 3, 6, 9},
		Year:  []int32{0, 0, 0, 0, 1, 1, 1, 1},
		Years: 2,
	}
	levels := []float64{0, 5, 4, 8, 5, 0, 0, 4.5}
	want := Exceedance{
		Events: []Event{
			{First: 1, Last: 4, Peak: 3, Days: 30, Span: 40, PeakExcess: 4, Load: 10 + 40 + 10, Counted: true},
			{First: 7, Last: 7, Peak: 7, Days: 10, Span: 10, PeakExcess: 0.5, Load: 5, Counted: true, Open: true},
		},
		Count:        2,
		EventsByYear: []float64{1, 1},
		DaysByYear:   []float64{20, 20}, // the step at 40 d belongs to the second year, its event to the first
		LoadByYear:   []float64{50, 15},
		AnyByYear:    []float64{1, 1},
		YearsAbove:   2,
		DaysInBand:   (10 + 10 + 10) / 2.0, // 7 is the next band: the level 8 is above it
		ByMonth:      [12]float64{0: 5, 3: 5, 9: 10},
		Longest:      30,
		MeanSpan:     25,
		PeakExcess:   4,
		MeanExcess:   65 / 40.0,
	}
	got := Exceed(levels, cal, Threshold{Level: 4, Until: 4, Next: 7}, 20)
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("(-want +got)\n%s", d)
	}
	// A level equal to the next band's is not above it, so still in this band.
	if got := Exceed(levels, cal, Threshold{Level: 4, Until: 4, Next: 8}, 20).DaysInBand; got != 20 {
		t.Errorf("days in band up to 8: %v, want 20", got)
	}
}

// TestExceedYears has what counts when events reach over the ends of years.
func TestExceedYears(t *testing.T) {
	tests := []struct {
		name   string
		levels string
		year   []int32
		years  int
		count  float64
		events []float64
		days   []float64
		any    []float64
	}{
		{"the peak's year has the whole event", "556700", []int32{0, 0, 1, 1, 1, 1}, 2, 1, []float64{0, 1}, []float64{2, 2}, []float64{1, 1}},
		{"the first of equal peaks decides", "057700", []int32{0, 0, 0, 1, 1, 1}, 2, 1, []float64{1, 0}, []float64{2, 1}, []float64{1, 1}},
		{"a peak before the years: days count, the event does not", "075500", []int32{-1, -1, 0, 0, 0, 0}, 1, 0, []float64{0}, []float64{2}, []float64{1}},
		{"a peak in the years: the event counts, days before do not", "056500", []int32{-1, -1, 0, 0, 0, 0}, 1, 1, []float64{1}, []float64{2}, []float64{1}},
		{"a peak after the years", "005560", []int32{0, 0, 0, 0, -1, -1}, 1, 0, []float64{0}, []float64{2}, []float64{1}},
		{"no year counted", "055500", []int32{-1, -1, -1, -1, -1, -1}, 0, 0, []float64{}, []float64{}, []float64{}},
		{"a year without", "050000", []int32{0, 0, 1, 1, 2, 2}, 3, 1, []float64{1, 0, 0}, []float64{1, 0, 0}, []float64{1, 0, 0}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			cal := plain(len(tt.levels))
			cal.Year, cal.Years = tt.year, tt.years
			x := Exceed(digits(tt.levels), cal, above(4), 0)
			if len(x.Events) != 1 {
				t.Errorf("%d events on the record, want 1", len(x.Events))
			}
			if x.Count != tt.count || x.YearsAbove != total(tt.any) {
				t.Errorf("count %v, years above %v; want %v, %v", x.Count, x.YearsAbove, tt.count, total(tt.any))
			}
			if d := cmp.Diff([][]float64{tt.events, tt.days, tt.any}, [][]float64{x.EventsByYear, x.DaysByYear, x.AnyByYear}); d != "" {
				t.Errorf("events, days, any by year (-want +got)\n%s", d)
			}
			if tt.count == 0 && (x.Longest != 0 || x.PeakExcess != 0 || x.MeanExcess != 0 || x.MeanSpan != 0) {
				t.Errorf("figures of events without a counted event: %+v", x)
			}
		})
	}
}

// TestExceedSplit shows why no figure stands alone: where a level that stays up is drawn down for part of the time,
// there are more events, but fewer days and less load.
func TestExceedSplit(t *testing.T) {
	before := Exceed(digits("0678876678876000"), plain(16), above(5), 0)
	after := Exceed(digits("0567765567765000"), plain(16), above(5), 0)
	if before.Count != 1 || after.Count != 2 {
		t.Errorf("events %v and %v, want 1 and 2", before.Count, after.Count)
	}
	if !(after.DaysByYear[0] < before.DaysByYear[0] && after.LoadByYear[0] < before.LoadByYear[0]) {
		t.Errorf("days %v to %v, load %v to %v: want both to fall", before.DaysByYear, after.DaysByYear, before.LoadByYear, after.LoadByYear)
	}
}

// TestExceedHourly checks that steps of an hour make whole days, and that a gap of exactly apart joins wherever on the
// time axis it lies, although the starts of hours are no exact numbers of days.
func TestExceedHourly(t *testing.T) {
	const n = 40 * 365 * 24
	cal := calendar(time.Date(1981, 1, 1, 0, 0, 0, 0, time.UTC), n, time.Hour, 0)
	levels := make([]float64, n)
	for _, gap := range []int{7, 25, 72} { // h
		clear(levels)
		events := 0
		for i := 5; i+200 < n; i += 997 { // a day above, and gap hours from its last hour an hour above
			for k := range 24 {
				levels[i+k] = 1
			}
			levels[i+23+gap] = 1
			events++
		}
		x := Exceed(levels, cal, above(0), float64(gap)/24)
		if len(x.Events) != events {
			t.Fatalf("gap %d h: %d events, want %d", gap, len(x.Events), events)
		}
		for i, e := range x.Events {
			if math.Abs(e.Span-1-float64(gap)/24) > 1e-15 || math.Abs(e.Days-25/24.0) > 1e-15 || e.Load != e.Days {
				t.Fatalf("gap %d h, event %d: span %v, days %v, load %v", gap, i, e.Span, e.Days, e.Load)
			}
		}
		if x := Exceed(levels, cal, above(0), float64(gap-1)/24); len(x.Events) != 2*events {
			t.Errorf("apart an hour less than %d h: %d events, want %d", gap, len(x.Events), 2*events)
		}
	}
	for i := range levels {
		levels[i] = 1
	}
	all := Exceed(levels, cal, above(0), 3)
	for y, d := range all.DaysByYear {
		if d != math.Round(d) || d < 365 || d > 366 {
			t.Errorf("year %d has %v days", y, d)
		}
	}
	if got := Mean(all.DaysByYear) - all.DaysInBand; math.Abs(got) > 1e-9 {
		t.Errorf("days less days in band: %v, want 0", got)
	}
}

// TestExceedMonths uses a real calendar: two years with one day above in each month on its last day.
func TestExceedMonths(t *testing.T) {
	cal := daily(730, 0)
	levels := make([]float64, 730)
	for i := range levels[:729] {
		if cal.Month[i] != cal.Month[i+1] {
			levels[i] = 1
		}
	}
	levels[729] = 3
	x := Exceed(levels, cal, above(0.5), 10)
	if x.Count != 24 || cal.Years != 2 {
		t.Errorf("%v events in %d years, want 24 in 2", x.Count, cal.Years)
	}
	for m, d := range x.ByMonth {
		if d != 1 {
			t.Errorf("month %d: %v days per year, want 1", m, d)
		}
	}
	if d := cmp.Diff([]float64{12, 12}, x.DaysByYear); d != "" {
		t.Error(d)
	}
	if x.PeakExcess != 2.5 || x.MeanExcess != (23*0.5+2.5)/24 {
		t.Errorf("peak excess %v, mean excess %v", x.PeakExcess, x.MeanExcess)
	}
}

// TestExceedNaN: a level that is no number is not above, and does not keep an event going.
func TestExceedNaN(t *testing.T) {
	x := Exceed([]float64{5, math.NaN(), 5}, plain(3), Threshold{4, 2, math.Inf(1)}, 0)
	if x.Count != 2 || x.LoadByYear[0] != 2 {
		t.Errorf("%v events, load %v; want 2, 2", x.Count, x.LoadByYear[0])
	}
}

func TestExceedMistakes(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("a calendar of another length must panic")
		}
	}()
	Exceed([]float64{1, 2}, plain(3), above(0), 0)
}

// TestClusters compares the number of events, the days above and the sum of the peaks with function clusters of the
// R package evd on the daily rain of Seattle; see the head of the table for versions and command.
func TestClusters(t *testing.T) {
	rain := column(t, "../testdata/seattle/seattle-weather.csv", "precipitation")
	cal := daily(len(rain), 0)
	for y := range cal.Year { // the table is of the whole record, so count all of it
		cal.Year[y] = 0
	}
	cal.Years = 1
	const table = "../testdata/ref/clusters.csv"
	u, r := column(t, table, "u"), column(t, table, "r")
	ulow, days := column(t, table, "ulow"), column(t, table, "above")
	clusters, peaks := column(t, table, "clusters"), column(t, table, "sum_of_peaks")
	if len(u) < 80 {
		t.Fatalf("the table has %d rows", len(u))
	}
	for i := range u {
		// With ulow an event is over at the first day at or below it and no gap in time joins.
		th, apart := above(u[i]), r[i]
		if !math.IsNaN(ulow[i]) {
			th.Until, apart = ulow[i], 0
		}
		x := Exceed(rain, cal, th, apart)
		top := 0.0
		for _, e := range x.Events {
			top += u[i] + e.PeakExcess
		}
		if x.Count != clusters[i] || x.DaysByYear[0] != days[i] || math.Abs(top-peaks[i]) > 0.0501 {
			t.Errorf("u=%v r=%v ulow=%v: %v events, %v days, peaks %v; want %v, %v, %v",
				u[i], r[i], ulow[i], x.Count, x.DaysByYear[0], top, clusters[i], days[i], peaks[i])
		}
	}
}

// column reads one column of a CSV file with a header line; lines that begin with # are skipped, an empty field is NaN.
func column(t testing.TB, path, name string) []float64 {
	t.Helper()
	f, err := os.Open(filepath.FromSlash(path))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	at := slices.Index(rows[0], name)
	if at < 0 {
		t.Fatalf("%s: no column %s", path, name)
	}
	var x []float64
	for _, row := range rows[1:] {
		v := math.NaN()
		if row[at] != "" {
			if v, err = strconv.ParseFloat(row[at], 64); err != nil {
				t.Fatal(err)
			}
		}
		x = append(x, v)
	}
	return x
}

// slow is the definition of an exceedance word by word: it looks at every pair of neighbouring steps above and adds
// up each figure for itself.
func slow(levels []float64, cal *Calendar, th Threshold, apart float64) Exceedance {
	x := Exceedance{
		EventsByYear: make([]float64, cal.Years), DaysByYear: make([]float64, cal.Years),
		LoadByYear: make([]float64, cal.Years), AnyByYear: make([]float64, cal.Years),
	}
	var steps []int
	for i, h := range levels {
		if h > th.Level {
			steps = append(steps, i)
		}
	}
	joined := func(a, b int) bool { // b may be one past the end
		when := 0.0
		if b < len(levels) {
			when = cal.Start[b]
		} else {
			when = cal.Start[b-1] + cal.Days[b-1]
		}
		stayed := true
		for k := a + 1; k < b; k++ {
			stayed = stayed && levels[k] > th.Until
		}
		return b == a+1 || when-cal.Start[a] <= apart || stayed
	}
	var groups [][]int
	for k, i := range steps {
		if k > 0 && joined(steps[k-1], i) {
			groups[len(groups)-1] = append(groups[len(groups)-1], i)
		} else {
			groups = append(groups, []int{i})
		}
	}
	spans, days, load := 0.0, 0.0, 0.0
	for _, g := range groups {
		first, last := g[0], g[len(g)-1]
		e := Event{First: first, Last: last, Peak: first}
		e.Span = cal.Start[last] + cal.Days[last] - cal.Start[first]
		for _, i := range g {
			e.Days += cal.Days[i]
			e.Load += (levels[i] - th.Level) * cal.Days[i]
			if levels[i] > levels[e.Peak] {
				e.Peak = i
			}
		}
		e.PeakExcess = levels[e.Peak] - th.Level
		e.Counted = cal.Year[e.Peak] >= 0
		e.Open = joined(last, len(levels))
		if e.Counted {
			x.Count++
			x.EventsByYear[cal.Year[e.Peak]]++
			x.Longest, x.PeakExcess = math.Max(x.Longest, e.Days), math.Max(x.PeakExcess, e.PeakExcess)
			spans, days, load = spans+e.Span, days+e.Days, load+e.Load
		}
		x.Events = append(x.Events, e)
	}
	if x.Count > 0 {
		x.MeanSpan, x.MeanExcess = spans/x.Count, load/days
	}
	for y := range cal.Years {
		for _, i := range steps {
			if int(cal.Year[i]) == y {
				x.DaysByYear[y] += cal.Days[i]
				x.LoadByYear[y] += (levels[i] - th.Level) * cal.Days[i]
				x.AnyByYear[y] = 1
				x.ByMonth[cal.Month[i]] += cal.Days[i] / float64(cal.Years)
				if levels[i] <= th.Next {
					x.DaysInBand += cal.Days[i] / float64(cal.Years)
				}
			}
		}
		x.YearsAbove += x.AnyByYear[y]
	}
	return x
}

// TestExceedOracle compares Exceed with the slow one. Levels are small whole numbers, so that equal peaks and levels
// at a threshold are common; steps are eighths of a day, so that sums and gaps are exact.
func TestExceedOracle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 80).Draw(t, "steps")
		levels := make([]float64, n)
		cal := &Calendar{Month: make([]uint8, n), Year: make([]int32, n), Start: make([]float64, n), Days: make([]float64, n)}
		year, at := int32(-1), float64(rapid.IntRange(-3, 3).Draw(t, "origin"))
		same := rapid.Bool().Draw(t, "equal steps")
		level := 3
		for i := range levels {
			// A walk, with a jump now and then, has longer runs than independent levels.
			level = min(9, max(0, level+rapid.IntRange(-2, 2).Draw(t, "step")))
			if rapid.IntRange(0, 9).Draw(t, "jump") == 0 {
				level = rapid.IntRange(0, 9).Draw(t, "to")
			}
			levels[i] = float64(level)
			if rapid.IntRange(0, 7).Draw(t, "year ends") == 0 {
				year++
			}
			cal.Year[i], cal.Month[i] = year, rapid.Uint8Range(0, 11).Draw(t, "month")
			cal.Start[i], cal.Days[i] = at, 1
			if !same {
				cal.Days[i] = float64(rapid.IntRange(1, 16).Draw(t, "eighths")) / 8
			}
			at += cal.Days[i]
		}
		cal.Years = int(year) + 1
		if cal.Years > 0 && rapid.Bool().Draw(t, "partial last year") {
			cal.Years--
			for i := range cal.Year {
				if int(cal.Year[i]) == cal.Years {
					cal.Year[i] = -1
				}
			}
		}
		b := rapid.IntRange(-1, 9).Draw(t, "level")
		th := Threshold{
			Level: float64(b),
			Until: float64(b - rapid.IntRange(0, 3).Draw(t, "arrest below")),
			Next:  float64(b + rapid.IntRange(1, 4).Draw(t, "next above")),
		}
		apart := float64(rapid.IntRange(0, 48).Draw(t, "apart in eighths")) / 8
		want, got := slow(levels, cal, th, apart), Exceed(levels, cal, th, apart)
		if d := cmp.Diff(want, got, near); d != "" {
			t.Fatalf("(-slow +fast)\n%s", d)
		}
	})
}

// TestExceedIdentities holds on any series: the band and what lies above it make up the days above, and with apart and
// arrest level nothing but the grouping changes.
func TestExceedIdentities(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		levels := rapid.SliceOfN(rapid.Float64Range(0, 10), 0, 800).Draw(t, "levels")
		cal := daily(len(levels), 0)
		low, high := rapid.Float64Range(0, 10).Draw(t, "level"), rapid.Float64Range(0, 10).Draw(t, "next")
		low, high = min(low, high), max(low, high)
		apart := rapid.Float64Range(0, 30).Draw(t, "apart")
		a := Exceed(levels, cal, Threshold{low, low, high}, apart)
		b := Exceed(levels, cal, above(high), apart)
		if d := cmp.Diff(a.DaysInBand, Mean(a.DaysByYear)-Mean(b.DaysByYear), near); d != "" {
			t.Fatalf("days in band\n%s", d)
		}
		if d := cmp.Diff(total(a.ByMonth[:]), Mean(a.DaysByYear), near); d != "" {
			t.Fatalf("days by month\n%s", d)
		}
		split := Exceed(levels, cal, above(low), 0)
		if split.Count < a.Count || cmp.Diff(split.DaysByYear, a.DaysByYear, near) != "" || cmp.Diff(split.LoadByYear, a.LoadByYear, near) != "" {
			t.Fatalf("joining changed the days or the load, or made more events: %v, joined %v", split.Count, a.Count)
		}
		if total(a.EventsByYear) != a.Count || total(a.AnyByYear) != a.YearsAbove {
			t.Fatal("yearly figures do not add up")
		}
	})
}

func total(x []float64) float64 {
	s := 0.0
	for _, v := range x {
		s += v
	}
	return s
}
