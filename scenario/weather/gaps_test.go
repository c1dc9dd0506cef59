package weather

import (
	"fmt"
	"math"
	"math/big"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func filling(src Source, g Gaps) Source {
	src.Gaps = g
	return src
}

func TestFill(t *testing.T) {
	days := func(rows ...string) string { return "date,rain,pet\n" + strings.Join(rows, "\n") + "\n" }
	months := filling(monthly("YYYY-MM", false), GapsMonthMean)
	months.PET, months.Missing = &Column{"pet", "mm/d"}, []string{""}
	const feb = "2019-02,56,1\n2019-03,31,1\n2019-04,30,1\n2019-05,31,1\n2019-06,30,1\n2019-07,31,1\n2019-08,31,1\n2019-09,30,1\n2019-10,31,1\n2019-11,30,1\n2019-12,31,1\n2020-01,31,1\n"
	hours := hourly()
	hours.Missing = []string{"NA"}
	for _, tt := range []struct {
		name   string
		src    Source
		text   string
		rain   []float64
		pet    []float64
		filled []Gap
	}{
		{"nothing missing", filling(daily(), GapsMonthMean), days("2020-01-01,1,2", "2020-01-02,3,4"), []float64{1, 3}, []float64{2, 4}, nil},
		{"zero", filling(daily(), GapsZero), days("2020-01-01,NA,2", "2020-01-02,3,", "2020-01-03,1,1", "2020-01-06,2,2", "2020-01-07,2,2", "2020-01-08,,NA", "2020-01-09,7,8"),
			[]float64{0, 3, 1, 0, 0, 2, 2, 0, 7}, []float64{2, 0, 1, 0, 0, 2, 2, 0, 8},
			[]Gap{{0, 1, true, false}, {1, 2, false, true}, {3, 5, true, true}, {7, 8, true, true}}},
		{"month mean", filling(daily(), GapsMonthMean), days("2020-01-30,1,2", "2020-01-31,NA,4", "2020-02-01,10,1", "2020-02-02,NA,NA", "2020-02-03,20,2", "2020-02-05,30,3"),
			[]float64{1, 1, 10, 20, 20, 20, 30}, []float64{2, 4, 1, 2, 2, 2, 3},
			[]Gap{{1, 2, true, false}, {3, 4, true, true}, {5, 6, true, true}}},
		{"neighbours are one", filling(daily(), GapsZero), days("2020-01-01,1,1", "2020-01-02,1,1", "2020-01-03,,", "2020-01-05,NA,NA", "2020-01-06,,1", "2020-01-07,,2", "2020-01-08,1,1", "2020-01-09,1,1", "2020-01-10,1,1"),
			[]float64{1, 1, 0, 0, 0, 0, 0, 1, 1, 1}, []float64{1, 1, 0, 0, 0, 1, 2, 1, 1, 1},
			[]Gap{{2, 5, true, true}, {5, 7, true, false}}},
		{"the last row", filling(daily(), GapsZero), days("2020-01-01,1,1", "2020-01-02,1,1", "2020-01-03,,1"), []float64{1, 1, 0}, []float64{1, 1, 1}, []Gap{{2, 3, true, false}}},
		{"rain alone", filling(hours, GapsZero), "time,rain\n2020-01-01 00:00,1\n2020-01-01 01:00,1\n2020-01-01 02:00,NA\n2020-01-01 04:00,1\n", []float64{1, 1, 0, 0, 1}, nil, []Gap{{2, 4, true, false}}},
		{"an hour lost to summer time", filling(hours, GapsMonthMean), times("time,rain", "2019-03-31 00:00", "2019-03-31 01:00", "2019-03-31 03:00", "2019-03-31 04:00"),
			[]float64{0, 0, 0, 0, 0}, nil, []Gap{{2, 3, true, false}}},
		// 2 mm/d in February 2019, 1 mm/d in the other months.
		{"February of a leap year", months, "time,rain,pet\n" + feb + "2020-02,,\n2020-03,31,1\n", []float64{56, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31, 31, 58, 31},
			[]float64{28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31, 31, 29, 31}, []Gap{{12, 13, true, true}}},
		{"a row of a month", months, "time,rain,pet\n" + feb + "2020-03,31,1\n", []float64{56, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31, 31, 58, 31},
			[]float64{28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31, 31, 29, 31}, []Gap{{12, 13, true, true}}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r, err := readText(tt.src, tt.text)
			if err != nil {
				t.Fatal(err)
			}
			if d := cmp.Diff(tt.rain, r.Rain); d != "" {
				t.Errorf("rain: %s", d)
			}
			if d := cmp.Diff(tt.pet, r.PET); d != "" {
				t.Errorf("pet: %s", d)
			}
			if d := cmp.Diff(tt.filled, r.Filled); d != "" {
				t.Errorf("filled: %s", d)
			}
		})
	}
	for _, g := range []Gaps{"", GapsRefuse} {
		if _, err := readText(filling(daily(), g), days("2020-01-01,,1", "2020-01-02,1,1")); err == nil {
			t.Errorf("%q fills", g)
		}
	}
}

// everyOther are the times of some hours one after another, and of some more with an hour left out before each.
func everyOther(hours, more int) (stamps []string) {
	t := time.Date(2020, 1, 1, 0, 0, 0, 0, time.UTC)
	for i := range hours + more {
		stamps = append(stamps, t.Format("2006-01-02 15:04"))
		t = t.Add(time.Hour)
		if i >= hours-1 {
			t = t.Add(time.Hour)
		}
	}
	return stamps
}

func TestFillRefusals(t *testing.T) {
	days := func(rows ...string) string { return "date,rain,pet\n" + strings.Join(rows, "\n") + "\n" }
	hours := func(stamps ...string) string { return times("time,rain", stamps...) }
	zero, mean := filling(daily(), GapsZero), filling(daily(), GapsMonthMean)
	for _, tt := range []struct {
		name string
		src  Source
		text string
		want string
	}{
		{"no such way", filling(daily(), "mean"), days("2020-01-01,1,1", "2020-01-02,1,1"), `w.csv: weather.gaps: "mean" is no way to deal with gaps; write refuse, zero or month mean`},
		{"half is missing", zero, days("2020-01-01,,1", "2020-01-02,1,1"), ""},
		{"more than half", zero, days("2020-01-01,,1", "2020-01-02,1,1", "2020-01-03,,1"),
			`w.csv: column "rain": 2 of 3 steps have no value; more is missing than was measured, and that is not filled; complete the record or cut it to its longest stretch without gaps, 2020-01-02 to 2020-01-02`},
		{"all of a column", mean, days("2020-01-01,1,", "2020-01-02,1,NA"),
			`w.csv: column "pet": 2 of 2 steps have no value; more is missing than was measured, and that is not filled; complete the record`},
		{"rows", zero, days("2020-01-01,1,1", "2020-01-02,1,1", "2020-01-03,1,1", "2020-01-20,1,1", "2020-01-21,1,1"),
			"w.csv: column \"rain\": 16 of 21 steps have no value; more is missing than was measured, and that is not filled; complete the record or cut it to its longest stretch without gaps, 2020-01-01 to 2020-01-03\n" +
				"w.csv: column \"pet\": 16 of 21 steps have no value; more is missing than was measured, and that is not filled; complete the record or cut it to its longest stretch without gaps, 2020-01-01 to 2020-01-03"},
		{"a jump of centuries", filling(hourly(), GapsZero), hours("1600-01-01 00:00", "1600-01-01 00:01", "2400-01-01 00:00"),
			"w.csv:4: the rows reach from 1600-01-01 00:00 to 2400-01-01 00:00, over 420759361 steps of 1 min, and more than 60000000 are not read; is this the right file?"},
		{"a month without values", mean, days("2020-01-29,1,1", "2020-01-30,1,1", "2020-01-31,1,1", "2020-02-01,,1", "2020-02-02,,1", "2020-02-03,,1"),
			`w.csv: column "rain": no February of the record has a value, so gaps there have no mean to be filled with; complete the record or cut it to its longest stretch without gaps, 2020-01-29 to 2020-01-31`},
		{"three of them", filling(monthly("YYYY-MM", false), GapsMonthMean), hours("2020-01", "2020-02", "2020-03", "2020-06", "2020-07", "2020-08", "2020-10"),
			`w.csv: column "rain": no April, May or September of the record has a value, so gaps there have no mean to be filled with; complete the record or cut it to its longest stretch without gaps, 2020-01 to 2020-03`},
		{"an hour repeated", filling(hourly(), GapsZero), hours("2019-10-27 00:00", "2019-10-27 01:00", "2019-10-27 02:00", "2019-10-27 02:00", "2019-10-27 03:00"),
			`w.csv:5: column "time": "2019-10-27 02:00" repeats line 4; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso`},
		{"another step for good", filling(hourly(), GapsZero), hours(everyOther(12, 10)...),
			`w.csv:23: column "time": "2020-01-02 07:00": the step changes from 1 h to 2 h after line 13; every step must be the same; where rows are only missing, write each of them with empty values, which are filled`},
		{"nine rows of another step", filling(hourly(), GapsZero), hours(everyOther(12, 9)...), ""},
		{"a bad value beside a gap", zero, days("2020-01-01,1,1", "2020-01-02,-1,1", "2020-01-04,1,1"),
			`w.csv:3: column "rain": "-1" is negative rain; a negative code for a missing value belongs in weather.missing, and a trace of rain is written as 0`},
	} {
		t.Run(tt.name, func(t *testing.T) {
			_, err := readText(tt.src, tt.text)
			got := ""
			if err != nil {
				got = err.Error()
			}
			if d := cmp.Diff(tt.want, got); d != "" {
				t.Error(d)
			}
		})
	}
}

// TestFillAnything holds records with holes of every kind against sums of rational numbers.
func TestFillAnything(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		months := rapid.Bool().Draw(t, "months")
		src := filling(daily(), rapid.SampledFrom([]Gaps{GapsZero, GapsMonthMean}).Draw(t, "gaps"))
		src.StampEnd = months && rapid.Bool().Draw(t, "last days")
		step := func(at time.Time, n int) time.Time {
			switch {
			case src.StampEnd:
				return at.AddDate(0, n+1, -1)
			case months:
				return at.AddDate(0, n, 0)
			}
			return at.AddDate(0, 0, n)
		}
		first := time.Date(2019, time.Month(rapid.IntRange(1, 12).Draw(t, "month")), 1, 0, 0, 0, 0, time.UTC)
		n := rapid.IntRange(30, 90).Draw(t, "steps")
		// Rows from the start show the step.
		missing := rapid.SliceOfN(rapid.SampledFrom([]uint8{0, 0, 0, 0, 0, 0, rainMissing, petMissing, rainMissing | petMissing, rowsMissing}), n, n).Draw(t, "missing")
		copy(missing, make([]uint8, 14))
		missing[n-1] &^= rowsMissing
		values := [2][]float64{}
		for c := range values {
			values[c] = rapid.SliceOfN(rapid.Float64Range(0, 40), n, n).Draw(t, "values")
		}
		var b strings.Builder
		b.WriteString("date,rain,pet\n")
		for i, m := range missing {
			if m&rowsMissing != 0 {
				missing[i] = rainMissing | petMissing
				continue
			}
			cell := func(c int, bit uint8) string {
				if m&bit != 0 {
					return "NA"
				}
				return fmt.Sprint(values[c][i])
			}
			fmt.Fprintf(&b, "%s,%s,%s\n", step(first, i).Format(time.DateOnly), cell(0, rainMissing), cell(1, petMissing))
		}
		r, err := readText(src, b.String())
		if err != nil {
			if !strings.Contains(err.Error(), "of the record has a value") && !strings.Contains(err.Error(), "more is missing than was measured") &&
				!strings.Contains(err.Error(), "the step changes") {
				t.Fatal(err)
			}
			t.Skip(err)
		}
		if len(r.Rain) != n || r.Monthly() != months || !r.First.Equal(first) {
			t.Fatalf("%d steps of %s from %v", len(r.Rain), r.StepText(), r.First)
		}

		got := make([]uint8, n) // what Filled says
		last := 0
		for k, g := range r.Filled {
			if g.From < last || g.To <= g.From || g.To > n || !g.Rain && !g.PET {
				t.Fatalf("%+v", r.Filled)
			}
			if k > 0 && g.From == last && g.Rain == r.Filled[k-1].Rain && g.PET == r.Filled[k-1].PET {
				t.Fatalf("neighbours: %+v", r.Filled)
			}
			last = g.To
			for i := g.From; i < g.To; i++ {
				if g.Rain {
					got[i] |= rainMissing
				}
				if g.PET {
					got[i] |= petMissing
				}
			}
		}
		if !slices.Equal(got, missing) {
			t.Fatalf("filled %+v, want %v", r.Filled, missing)
		}

		for c, x := range [][]float64{r.Rain, r.PET} {
			var sum, length [13]big.Rat
			weight := func(i int) *big.Rat {
				if !months {
					return big.NewRat(1, 1)
				}
				return new(big.Rat).SetFloat64(r.Span(i, i+1))
			}
			for i := range x {
				if m := r.Start(i).Month(); missing[i]&(1<<c) == 0 {
					if x[i] != values[c][i] {
						t.Fatalf("step %d: %v, want %v", i, x[i], values[c][i])
					}
					sum[m].Add(&sum[m], new(big.Rat).SetFloat64(x[i]))
					length[m].Add(&length[m], weight(i))
				}
			}
			for i := range x {
				want := 0.0
				if missing[i]&(1<<c) == 0 {
					continue
				}
				if src.Gaps == GapsMonthMean {
					m := r.Start(i).Month()
					mean := new(big.Rat).Quo(&sum[m], &length[m])
					want, _ = mean.Mul(mean, weight(i)).Float64()
				}
				if math.Abs(x[i]-want) > max(1e-15*want, 1e-300) { // four roundings, and what is too small for all digits
					t.Fatalf("step %d of column %d is filled with %v, want %v", i, c, x[i], want)
				}
			}
		}
		r.Audit()
	})
}

func TestAuditOfFilledSteps(t *testing.T) {
	for _, step := range []time.Duration{day, time.Hour} {
		r := wetAndDry(6, step)
		perDay := int(day / step)
		// Stretches that would each be a finding, or part of one, had they been measured.
		gap := func(from time.Time, days int, rain, pet bool, v float64) {
			g := Gap{From: r.at(from.Date()), Rain: rain, PET: pet}
			g.To = g.From + days*perDay
			for i := g.From; i < g.To; i++ {
				if rain {
					r.Rain[i] = v
				}
				if pet {
					r.PET[i] = v
				}
			}
			r.Filled = append(r.Filled, g)
		}
		at := func(y int, m time.Month, d int) time.Time { return time.Date(y, m, d, 0, 0, 0, 0, time.UTC) }
		gap(at(1990, 7, 1), 40, true, false, 0.5)
		gap(at(1991, 1, 1), 90, true, true, 0)
		gap(at(1992, 2, 10), 10, true, false, 0) // in a February without rain
		fill(r.Rain, r.at(1992, 2, 1), 29*perDay, 0)
		gap(at(1993, 6, 1), 80, false, true, 0.1)
		gap(at(1994, 6, 1), 1, true, false, 50) // the wettest day, if it were one
		if got := r.Audit().Suspicious; len(got) != 0 {
			t.Errorf("%v: %+v", step, got)
		}
		a := r.Audit()
		for i, want := range []float64{365 - 40, 365 - 90, 366 - 10, 365 - 80, 365 - 1, 365} {
			if y := a.Years[i]; y.ValidShare != want/float64(365+leapDay(y.Year)) {
				t.Errorf("%v: %+v", step, y)
			}
		}
		if a.Wettest[0].Date == "1994-06-01" {
			t.Errorf("%v: a filled day is the wettest", step)
		}
		// What is measured on both sides of a filled step is not one stretch.
		r = wetAndDry(6, step)
		r.Filled = []Gap{{From: r.at(1991, 6, 15), To: r.at(1991, 6, 16), Rain: true}}
		fill(r.Rain, r.at(1991, 5, 17), 60*perDay, 0)
		r.Rain[r.at(1991, 5, 17)-1], r.Rain[r.at(1991, 7, 16)] = 1, 1
		if got := r.Audit().Suspicious; len(got) != 0 {
			t.Errorf("%v: %+v", step, got)
		}
		r.Filled[0].Rain, r.Filled[0].PET = false, true
		if got := r.Audit().Suspicious; len(got) != 1 || got[0].Kind != KindLongDry {
			t.Errorf("%v: %+v", step, got)
		}
	}
}

func leapDay(y int) int {
	if isLeap(y) {
		return 1
	}
	return 0
}

// BenchmarkFill reads forty years of hours of which every hundredth row lacks its values.
func BenchmarkFill(b *testing.B) {
	const rows = 350_640
	at := time.Date(1984, 1, 1, 0, 0, 0, 0, time.UTC)
	var text strings.Builder
	text.WriteString("time,rain,pet\n")
	for i := range rows {
		text.WriteString(at.Add(time.Duration(i) * time.Hour).Format("2006-01-02 15:04"))
		if i%100 == 50 {
			text.WriteString(",NA,NA\n")
			continue
		}
		fmt.Fprintf(&text, ",%.1f,%.3f\n", float64(i*i%97%13)/10, float64(i%24)/100)
	}
	src := filling(hourly(), GapsMonthMean)
	src.PET, src.Missing = &Column{"pet", "mm"}, []string{"NA"}
	b.ReportAllocs()
	for b.Loop() {
		if r, err := readText(src, text.String()); err != nil || len(r.Filled) != rows/100 {
			b.Fatal(err)
		}
	}
}
