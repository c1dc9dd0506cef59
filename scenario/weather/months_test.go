package weather

import (
	"fmt"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// monthly is a source of months with times in the given format.
func monthly(format string, end bool) Source {
	src := hourlyOf(format)
	src.StampEnd = end
	return src
}

func TestMonths(t *testing.T) {
	iso := func(month, day string) string { return "2020-" + month + "-" + day + "T00:00:00+05:30" }
	for _, tt := range []struct {
		name   string
		src    Source
		stamps []string
		first  string // RFC 3339
		iso    string // of every row
	}{
		{"the month alone", monthly("YYYY-MM", false), []string{"2019-12", "2020-01", "2020-02"}, "2019-12-01T00:00:00Z", "2019-12 2020-01 2020-02"},
		{"in another order", monthly("MM/YYYY", false), []string{"12/2019", "01/2020"}, "2019-12-01T00:00:00Z", "2019-12 2020-01"},
		{"the first day", monthly("YYYY-MM-DD", false), []string{"2020-01-01", "2020-02-01", "2020-03-01"}, "2020-01-01T00:00:00Z", "2020-01 2020-02 2020-03"},
		{"the first day at midnight", monthly("DD.MM.YYYY hh:mm", false), []string{"01.01.2020 00:00", "01.02.2020 00:00"}, "2020-01-01T00:00:00Z", "2020-01 2020-02"},
		{"from February to March", monthly("YYYY-MM-DD", false), []string{"2020-02-01", "2020-03-01"}, "2020-02-01T00:00:00Z", "2020-02 2020-03"},
		{"the end as the first of the following month", monthly("YYYY-MM-DD", true), []string{"2020-01-01", "2020-02-01", "2020-03-01"}, "2019-12-01T00:00:00Z", "2019-12 2020-01 2020-02"},
		{"the end as the last day", monthly("YYYY-MM-DD", true), []string{"2020-01-31", "2020-02-29", "2020-03-31"}, "2020-01-01T00:00:00Z", "2020-01 2020-02 2020-03"},
		{"not a leap year", monthly("YYYY-MM-DD", true), []string{"1900-01-31", "1900-02-28", "1900-03-31"}, "1900-01-01T00:00:00Z", "1900-01 1900-02 1900-03"},
		{"iso", monthly("iso", false), []string{iso("02", "01"), iso("03", "01"), iso("04", "01")}, "2020-02-01T00:00:00+05:30", "2020-02 2020-03 2020-04"},
		{"iso, the last day", monthly("iso", true), []string{iso("02", "29"), iso("03", "31"), iso("04", "30")}, "2020-02-01T00:00:00+05:30", "2020-02 2020-03 2020-04"},
		{"iso with another offset now and then", monthly("iso", false), []string{iso("02", "01"), "2020-02-29T18:30:00Z", iso("04", "01")}, "2020-02-01T00:00:00+05:30", "2020-02 2020-03 2020-04"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r, err := readText(tt.src, times("time,rain", tt.stamps...))
			if err != nil {
				t.Fatal(err)
			}
			if !r.Monthly() || r.StepText() != "1 month" || len(r.Rain) != len(tt.stamps) {
				t.Errorf("%d steps of %s", len(r.Rain), r.StepText())
			}
			if got := r.First.Format(time.RFC3339); got != tt.first {
				t.Errorf("first step starts %s, want %s", got, tt.first)
			}
			var named []string
			for i, want := range tt.stamps {
				named = append(named, r.ISO(i))
				if want == "2020-02-29T18:30:00Z" {
					want = iso("03", "01")
				}
				if got := r.Stamp(i); got != want {
					t.Errorf("row %d is stamped %s, want %s", i, got, want)
				}
			}
			if got := strings.Join(named, " "); got != tt.iso {
				t.Errorf("months %s, want %s", got, tt.iso)
			}
		})
	}
}

func TestUnitsOfMonths(t *testing.T) {
	const text = "time,rain,pet\n2020-01,2,1\n2020-02,2,1\n2020-03,2,1\n2020-04,2,1\n2021-02,2,1\n"
	for unit, want := range map[string][]float64{
		"mm":     {2, 2, 2, 2, 2},
		"0.1 mm": {0.2, 0.2, 0.2, 0.2, 0.2},
		"mm/d":   {62, 58, 62, 60, 56},
		"mm/h":   {2 * 744, 2 * 696, 2 * 744, 2 * 720, 2 * 672},
	} {
		src := monthly("YYYY-MM", false)
		src.Rain.Unit, src.PET, src.Gaps = unit, &Column{"pet", "mm/d"}, GapsZero
		r, err := readText(src, strings.Replace(text, "2021-02", "2020-05,0,0\n2020-06,0,0\n2020-07,0,0\n2020-08,0,0\n2020-09,0,0\n2020-10,0,0\n2020-11,0,0\n2020-12,0,0\n2021-01,0,0\n2021-02", 1))
		if err != nil {
			t.Fatalf("%s: %v", unit, err)
		}
		at := []int{0, 1, 2, 3, 13}
		for k, i := range at {
			if r.Rain[i] != want[k] {
				t.Errorf("%s: %v mm in %s, want %v", unit, r.Rain[i], r.ISO(i), want[k])
			}
		}
		if d := cmp.Diff([]float64{31, 29, 31, 30}, r.PET[:4]); d != "" {
			t.Errorf("%s: pet: %s", unit, d)
		}
	}
}

// TestMonthRefusals holds the exact text of every refusal that is about months.
func TestMonthRefusals(t *testing.T) {
	months := func(stamps ...string) string { return times("time,rain", stamps...) }
	const first, last = false, true // weather.stamp
	rate := monthly("YYYY-MM", false)
	rate.Rain.Unit, rate.PET = "mm/d", &Column{"pet", "mm"}
	for _, tt := range []struct {
		name string
		src  Source
		text string
		want string
	}{
		{"a month has no end", monthly("YYYY-MM", true), months("2020-01", "2020-02"),
			`w.csv: column "time": the format YYYY-MM names a month and no end of it; write weather.stamp: start, with which each row is of the month that it names`},
		{"a day in the format of months", monthly("YYYY-MM", false), months("2020-01-01", "2020-02-01"),
			`w.csv:2: column "time": "2020-01-01" does not match the format YYYY-MM, in which a time reads "2019-03"; write the format as YYYY-MM-DD (and in 1 more row)`},
		{"month 13", monthly("YYYY-MM", false), months("2020-12", "2020-13"), `w.csv:3: column "time": "2020-13" has no month 13; is the order of day and month right in the format?`},

		{"the fifteenth", monthly("YYYY-MM-DD", first), months("2020-01-15", "2020-02-15", "2020-03-15"),
			`w.csv:2: column "time": "2020-01-15" is not the first of its month, which the rows of months must name; write "2020-01-01"`},
		{"the fifteenth as an end", monthly("YYYY-MM-DD", last), months("2020-01-15", "2020-02-15", "2020-03-15"),
			`w.csv:2: column "time": "2020-01-15" is neither the first of the following month nor the last day of its own, one of which the rows of months must name; write "2020-02-01" or "2020-01-31"`},
		{"nine o'clock", monthly("YYYY-MM-DD hh:mm", first), months("2020-01-01 09:00", "2020-02-01 09:00", "2020-03-01 09:00"),
			`w.csv:2: column "time": "2020-01-01 09:00" is not 00:00 on the first of its month, which the rows of months must name; write "2020-01-01 00:00"`},
		{"last days as starts", monthly("YYYY-MM-DD", first), months("2020-01-31", "2020-02-29", "2020-03-31"),
			`w.csv:2: column "time": "2020-01-31" is the last day of its month; write weather.stamp: end if the times name the ends of months, otherwise the first of each month`},
		{"the fifteenth for once", monthly("YYYY-MM-DD", first), months("2020-01-01", "2020-02-15", "2020-03-01", "2020-04-01", "2020-05-01"),
			`w.csv:3: column "time": "2020-02-15" comes 45 d after "2020-01-01" in line 2, but the step is 1 month; every time must be the first of its month, such as "2020-02-01"`},
		{"the fifteenth at first", monthly("YYYY-MM-DD", first), months("2020-01-15", "2020-02-01", "2020-03-01", "2020-04-01"),
			`w.csv:2: column "time": "2020-01-15" is not the first of its month, as the times of months must be; write "2020-01-01"`},
		{"a first among last days", monthly("YYYY-MM-DD", last), months("2020-01-31", "2020-02-29", "2020-04-01", "2020-04-30"),
			`w.csv:4: column "time": "2020-04-01" comes 32 d after "2020-02-29" in line 3, but the step is 1 month; every time must be the last day of its month, such as "2020-03-31"`},
		{"a last day among firsts", monthly("YYYY-MM-DD", last), months("2020-02-01", "2020-03-01", "2020-03-31", "2020-05-01"),
			`w.csv:4: column "time": "2020-03-31" comes 30 d after "2020-03-01" in line 3, but the step is 1 month; every time must be the first of the following month, such as "2020-04-01"`},
		{"iso with summer time", monthly("iso", first), months("2020-01-01T00:00:00+01:00", "2020-02-01T00:00:00+01:00", "2020-03-01T00:00:00+01:00", "2020-04-01T00:00:00+02:00", "2020-05-01T00:00:00+02:00", "2020-06-01T00:00:00+02:00", "2020-07-01T00:00:00+02:00"),
			`w.csv:5: column "time": "2020-04-01T00:00:00+02:00" is not 00:00 on the first of its month by the offset from UTC of the first row; keep one offset all year, so that months are whole (and in 3 more rows)`},

		{"two months", monthly("YYYY-MM", false), months("2020-01", "2020-03", "2020-05"), "w.csv: the rows are 2 months apart; steps run from 1 min to 1 d, or are calendar months"},
		{"quarters", monthly("YYYY-MM-DD", last), months("2020-03-31", "2020-06-30", "2020-09-30", "2020-12-31"), "w.csv: the rows are 3 months apart; steps run from 1 min to 1 d, or are calendar months"},
		{"years", monthly("YYYY-MM-DD", first), months("2019-01-01", "2020-01-01", "2021-01-01"), "w.csv: the rows are 1 year apart; steps run from 1 min to 1 d, or are calendar months"},
		{"four weeks", monthly("YYYY-MM-DD", first), months("2020-01-01", "2020-01-29", "2020-02-26"), "w.csv: the rows are 28 d apart; steps run from 1 min to 1 d, or are calendar months"},
		{"thirty days", monthly("YYYY-MM-DD", first), months("2020-01-01", "2020-01-31", "2020-03-01", "2020-03-31", "2020-04-30", "2020-05-30", "2020-06-29", "2020-07-29", "2020-08-28", "2020-09-27", "2020-10-27"),
			"w.csv: the rows are 30 d apart; steps run from 1 min to 1 d, or are calendar months"},

		{"then days", monthly("YYYY-MM-DD", first), months("2020-01-01", "2020-02-01", "2020-03-01", "2020-04-01", "2020-04-02", "2020-04-03"),
			`w.csv:6: column "time": "2020-04-02" comes 1 d after "2020-04-01" in line 5, but the step is 1 month; every time must be the first of its month, such as "2020-04-01" (and in 1 more row)`},
		{"days, then months", monthly("YYYY-MM-DD", first), months("2020-01-29", "2020-01-30", "2020-01-31", "2020-02-01", "2020-02-02", "2020-02-03", "2020-03-01", "2020-04-01", "2020-05-01", "2020-06-01"),
			`w.csv:11: column "time": "2020-06-01": the step changes from 1 d to 1 month after line 8; every step must be the same`},
		{"months, then quarters", monthly("YYYY-MM", false), months("2020-01", "2020-02", "2020-03", "2020-04", "2020-05", "2020-08", "2020-11", "2021-02"),
			`w.csv:9: column "time": "2021-02": the step changes from 1 month to 3 months after line 6; every step must be the same`},
		{"repeat", monthly("YYYY-MM", false), months("2020-01", "2020-02", "2020-02", "2020-03"), `w.csv:4: column "time": "2020-02" repeats line 3; every time must be one step after the one before`},
		{"backwards", monthly("YYYY-MM", false), months("2019-11", "2019-12", "2020-01", "2020-02", "2020-04", "2020-03", "2020-05"),
			`w.csv:7: column "time": "2020-03" comes before "2020-04" in line 6; every time must be one step after the one before`},
		{"backwards and off", monthly("YYYY-MM-DD", first), months("2020-01-01", "2020-02-01", "2020-03-01", "2020-02-15", "2020-04-01"),
			`w.csv:5: column "time": "2020-02-15" is not the first of its month, as the times of months must be; write "2020-02-01"`},
		{"newest first", monthly("YYYY-MM", false), months("2020-03", "2020-02", "2020-01"), `w.csv:3: column "time": "2020-02" comes before that of line 2; put the rows in the order of time, oldest first`},

		{"gaps", monthly("YYYY-MM-DD", last), "time,rain\n2019-12-31,1\n2020-01-31,1\n2020-03-31,1\n2020-05-31,1\n2020-06-30,1\n2020-07-31,1\n",
			"w.csv:4: 2 steps without values, in 2 gaps; complete the record, cut it to its longest stretch without gaps, 2020-05-31 to 2020-07-31, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2020-02-29 to 2020-02-29, 1 step: no rows before line 4\n" +
				"    2020-04-30 to 2020-04-30, 1 step: no rows before line 5"},
		{"rain of a month", rate, "time,rain,pet\n2020-01,322,1\n2020-02,345,1\n2020-03,323,1\n",
			`w.csv:3: column "rain": "345" is 10005 mm of rain in a month; more than 10000 mm has never fallen in one, so check weather.columns.rain.unit (and in 1 more row)`},
		{"pet of a month", rate, "time,rain,pet\n2020-01,1,1550\n2020-02,1,1450\n2020-03,1,1\n2020-04,1,1501\n",
			`w.csv:5: column "pet": "1501" is 50.0333 mm/d; evapotranspiration above 50 mm/d is not possible, so check weather.columns.pet.unit`},
	} {
		t.Run(tt.name, func(t *testing.T) {
			refused(t, tt.src, tt.text, tt.want)
		})
	}
}

// TestMonthSteps holds the lengths of months against the calendar of the standard library.
func TestMonthSteps(t *testing.T) {
	zone := time.FixedZone("", -5*3600)
	rapid.Check(t, func(t *rapid.T) {
		first := time.Date(rapid.IntRange(1600, 2400).Draw(t, "year"), time.Month(rapid.IntRange(1, 12).Draw(t, "month")), 1, 0, 0, 0, 0, zone)
		n := rapid.IntRange(1, 600).Draw(t, "months")
		r := &Record{First: first, Rain: make([]float64, n)}
		start := first
		for i := range n {
			end := start.AddDate(0, 1, 0)
			days := end.Sub(start).Hours() / 24
			if !r.Start(i).Equal(start) || r.FirstFrom(start) != i || r.FirstFrom(start.Add(time.Second)) != i+1 || r.Span(i, i+1) != days {
				t.Fatalf("month %d: starts %v, %v days", i, r.Start(i), r.Span(i, i+1))
			}
			start = end
		}
		var total float64
		for i := 0; i < n; {
			days, to := r.Stretch(i, n)
			if to <= i || to > n {
				t.Fatalf("a stretch from %d to %d of %d", i, to, n)
			}
			for k := i; k < to; k++ {
				if r.Span(k, k+1) != days {
					t.Fatalf("month %d has %v days in a stretch of %v", k, r.Span(k, k+1), days)
				}
			}
			if to < n && r.Span(to, to+1) == days {
				t.Fatalf("the stretch from %d ends early, at %d", i, to)
			}
			total += days * float64(to-i)
			i = to
		}
		if r.Span(0, n) != total {
			t.Fatalf("%v days together, want %v", r.Span(0, n), total)
		}
	})
	hours := &Record{First: time.Date(2020, 1, 1, 0, 0, 0, 0, time.UTC), Step: time.Hour}
	if days, to := hours.Stretch(7, 9000); days != 1./24 || to != 9000 || hours.Span(24, 96) != 3 {
		t.Errorf("hours: %v days to %d, %v days together", days, to, hours.Span(24, 96))
	}
}

func TestRowFrom(t *testing.T) {
	at := func(text string) time.Time {
		v, err := time.Parse("2006-01-02 15:04", text)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	hours := []string{"2020-01-01 00:00", "2020-01-01 01:00", "2020-01-01 02:00"}
	months := []string{"2020-01-31", "2020-02-29", "2020-03-31"}
	for _, tt := range []struct {
		src    Source
		stamps []string
		at     string
		want   int
	}{
		{hourly(), hours, "2020-01-01 01:00", 1},
		{hourly(), hours, "2020-01-01 01:01", 2},
		{monthly("YYYY-MM-DD hh:mm", true), hours, "2020-01-01 01:00", 1},
		{monthly("YYYY-MM-DD hh:mm", true), hours, "2020-01-01 01:01", 2},
		{monthly("YYYY-MM-DD hh:mm", true), hours, "2019-12-31 00:00", -24},
		{monthly("YYYY-MM-DD", true), months, "2020-01-01 00:00", 0},
		{monthly("YYYY-MM-DD", true), months, "2020-01-02 00:00", 1},
		{monthly("YYYY-MM-DD", true), months, "2019-11-15 00:00", -1},
		{monthly("YYYY-MM-DD", true), months, "2020-04-01 00:00", 3},
		{monthly("YYYY-MM-DD", true), []string{"2020-02-01", "2020-03-01"}, "2020-01-01 00:00", 0},
	} {
		r, err := readText(tt.src, times("time,rain", tt.stamps...))
		if err != nil {
			t.Fatal(err)
		}
		if got := r.RowFrom(at(tt.at)); got != tt.want {
			t.Errorf("%v: the first row from %s on is %d, want %d", tt.stamps, tt.at, got, tt.want)
		}
	}
}

// TestLongRecordOfMonths reads all the months that can be read.
func TestLongRecordOfMonths(t *testing.T) {
	var b strings.Builder
	b.WriteString("time,rain\n")
	for y := firstYear; y <= lastYear; y++ {
		for m := range 12 {
			fmt.Fprintf(&b, "%d-%02d,50\n", y, m+1)
		}
	}
	r, err := readText(monthly("YYYY-MM", false), b.String())
	if err != nil {
		t.Fatal(err)
	}
	last := len(r.Rain) - 1
	if got := r.ISO(last) + r.Start(last+1).Format(" 2006-01-02"); got != "2500-12 2501-01-01" {
		t.Errorf("ends on %s", got)
	}
	for i, y := range r.Audit().Years {
		if y.Year != firstYear+i || y.RainMM != 600 || y.ValidShare != 1 {
			t.Errorf("%+v", y)
		}
	}
}

func TestAuditOfMonths(t *testing.T) {
	// Rain of 40 to 51 mm a month, 30 mm more from October to March, over six years.
	sound := func() *Record {
		r := &Record{First: time.Date(1990, 1, 1, 0, 0, 0, 0, time.UTC), Rain: make([]float64, 72), PET: make([]float64, 72)}
		for i := range r.Rain {
			m := i % 12
			r.Rain[i] = 40 + float64(m*7%12)
			if m < 3 || m >= 9 {
				r.Rain[i] += 30
			}
			r.PET[i] = 40
		}
		return r
	}
	for _, tt := range []struct {
		name   string
		change func(r *Record)
		want   []Suspicious
	}{
		{"sound", func(*Record) {}, nil},
		{"the same rain", func(r *Record) { fill(r.Rain, 12, 5, 60) }, []Suspicious{
			{KindRepeatedRain, "1991-01", "1991-05", "the same 60 mm of rain in 5 steps one after another; a stuck gauge, or a sum spread over several steps, looks like this"}}},
		{"a dry summer month", func(r *Record) { r.Rain[18] = 0 }, nil},
		{"two dry summer months", func(r *Record) { fill(r.Rain, 18, 2, 0) }, []Suspicious{
			{KindLongDry, "1991-07", "1991-08", "no rain for 62 days; check that these are not missing values written as 0"}}},
		{"a dry winter month", func(r *Record) { r.Rain[13] = 0 }, []Suspicious{
			{KindDryMonth, "1991-02", "1991-02", "no rain in February 1991, a month of the wetter half of the year; check that these are not missing values written as 0"}}},
		{"a dry winter month that was filled", func(r *Record) {
			r.Rain[13] = 0
			r.Filled = []Gap{{From: 13, To: 14, Rain: true}}
		}, nil},
		{"centimetres taken for millimetres", func(r *Record) {
			for i := range r.Rain {
				r.Rain[i] /= 10
			}
		}, []Suspicious{
			{KindRainTotal, "1990-01", "1995-12", "rain is 73 mm a year over the record and 8 mm in the wettest month: check the unit of the rain column"}}},
		{"no evapotranspiration for a winter", func(r *Record) { fill(r.PET, 11, 3, 0) }, nil},
	} {
		r := sound()
		tt.change(r)
		if d := cmp.Diff(tt.want, r.Audit().Suspicious); d != "" {
			t.Errorf("%s: %s", tt.name, d)
		}
	}
	r := sound()
	r.Rain[5], r.Rain[30] = 200, 300
	r.First = time.Date(1990, 2, 1, 0, 0, 0, 0, time.UTC)
	a := r.Audit()
	if d := cmp.Diff([]WetDay{{"1992-08", 300}, {"1990-07", 200}}, a.Wettest[:2]); d != "" || len(a.Wettest) != 5 {
		t.Error(d)
	}
	if first, last := a.Years[0], a.Years[6]; first.ValidShare != 334./365 || last.ValidShare != 31./366 {
		t.Errorf("%+v, %+v", first, last)
	}
}
