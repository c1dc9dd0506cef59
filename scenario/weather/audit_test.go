package weather

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
)

// wetAndDry is an invented record of daily or shorter steps from 1 January 1990: rain of 0.1 to 15 mm on half of the days, more
// of it from October to March, and evapotranspiration that changes every day.
func wetAndDry(years int, step time.Duration) *Record {
	rng := rand.New(rand.NewPCG(7, 1))
	r := &Record{Name: "w.csv", First: time.Date(1990, 1, 1, 0, 0, 0, 0, time.UTC), Step: step}
	end := r.First.AddDate(years, 0, 0)
	for at := r.First; at.Before(end); at = at.Add(step) {
		most := 5.0
		if m := at.Month(); m >= time.October || m <= time.March {
			most = 15
		}
		rain := 0.0
		if rng.Float64() < 0.5 {
			rain = (0.1 + most*rng.Float64()) * step.Hours() / 24
		}
		r.Rain = append(r.Rain, rain)
		r.PET = append(r.PET, (1+rng.Float64())*step.Hours()/24)
	}
	return r
}

// at returns the first step of a day.
func (r *Record) at(y int, m time.Month, d int) int {
	return int(time.Date(y, m, d, 0, 0, 0, 0, time.UTC).Sub(r.First) / r.Step)
}

func fill(x []float64, from, n int, v float64) {
	for i := range n {
		x[from+i] = v
	}
}

func TestAuditOfASoundRecord(t *testing.T) {
	for _, step := range []time.Duration{day, time.Hour} {
		r := wetAndDry(6, step)
		a := r.Audit()
		if len(a.Suspicious) != 0 {
			t.Errorf("%v: found %+v", step, a.Suspicious)
		}
		if len(a.Years) != 6 || len(a.Wettest) != 5 {
			t.Errorf("%v: %d years, %d days", step, len(a.Years), len(a.Wettest))
		}
		for i, y := range a.Years {
			if y.Year != 1990+i || y.ValidShare != 1 {
				t.Errorf("%v: %+v", step, y)
			}
		}
		if !slices.IsSortedFunc(a.Wettest, func(x, y WetDay) int { return int(y.RainMM*1e9 - x.RainMM*1e9) }) {
			t.Errorf("%v: %+v", step, a.Wettest)
		}
	}
}

func TestAuditSums(t *testing.T) {
	// Eight-hour steps from noon: the first and last day, month and year are in parts.
	r := &Record{First: time.Date(2019, 12, 30, 16, 0, 0, 0, time.UTC), Step: 8 * time.Hour}
	r.Rain = []float64{0.1, 0.1, 0.2, 0.3, 3, 0, 0.5, 0, 0, 0.6}
	a := r.Audit()
	want := Audit{
		Wettest: []WetDay{{"2020-01-01", 3.5}, {"2019-12-31", 0.6}, {"2020-01-02", 0.6}, {"2019-12-30", 0.1}},
		Years:   []YearRain{{2019, 0.7, 4. / 1095}, {2020, 4.1, 6. / 1098}},
	}
	if d := cmp.Diff(want, a, cmpopts.EquateApprox(1e-12, 0)); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(Audit{}, (&Record{}).Audit()); d != "" {
		t.Errorf("without steps: %s", d)
	}
}

func TestAuditFindings(t *testing.T) {
	type found = []Suspicious
	for _, tt := range []struct {
		name   string
		step   time.Duration
		change func(r *Record)
		want   found
	}{
		{"the same rain for five days", day, func(r *Record) { fill(r.Rain, r.at(1991, 2, 3), 5, 3.2) }, found{
			{KindRepeatedRain, "1991-02-03", "1991-02-07", "the same 3.2 mm of rain in 5 steps one after another; a stuck gauge, or a sum spread over several steps, looks like this"}}},
		{"for four days", day, func(r *Record) { fill(r.Rain, r.at(1991, 2, 3), 4, 3.2) }, nil},
		{"for twenty-four hours", time.Hour, func(r *Record) { fill(r.Rain, r.at(1991, 2, 3), 24, 0.2) }, found{
			{KindRepeatedRain, "1991-02-03T00:00", "1991-02-03T23:00", "the same 0.2 mm of rain in 24 steps one after another; a stuck gauge, or a sum spread over several steps, looks like this"}}},
		{"for twenty-three hours", time.Hour, func(r *Record) { fill(r.Rain, r.at(1991, 2, 3), 23, 0.2) }, nil},
		{"dry for sixty days of summer", day, func(r *Record) {
			fill(r.Rain, r.at(1991, 5, 10), 60, 0)
			r.Rain[r.at(1991, 5, 9)], r.Rain[r.at(1991, 7, 9)] = 1, 1
		}, found{
			{KindLongDry, "1991-05-10", "1991-07-08", "no rain for 60 days; check that these are not missing values written as 0"}}},
		{"for fifty-nine", day, func(r *Record) {
			fill(r.Rain, r.at(1991, 5, 10), 59, 0)
			r.Rain[r.at(1991, 5, 9)], r.Rain[r.at(1991, 7, 8)] = 1, 1
		}, nil},
		{"dry for thirty days of winter", time.Hour, func(r *Record) {
			fill(r.Rain, r.at(1991, 11, 10), 24*30, 0)
			r.Rain[r.at(1991, 11, 10)-1], r.Rain[r.at(1991, 12, 10)] = 1, 1
		}, found{{KindLongDry, "1991-11-10T00:00", "1991-12-09T23:00", "no rain for 30 days in the wetter half of the year; check that these are not missing values written as 0"}}},
		{"half of them in summer", day, func(r *Record) { fill(r.Rain, r.at(1991, 9, 10), 40, 0) }, nil},
		{"a dry February", day, func(r *Record) {
			fill(r.Rain, r.at(1991, 2, 1), 28, 0)
			r.Rain[r.at(1991, 1, 31)], r.Rain[r.at(1991, 3, 1)] = 1, 1
		}, found{
			{KindDryMonth, "1991-02-01", "1991-02-28", "no rain in February 1991, a month of the wetter half of the year; check that these are not missing values written as 0"}}},
		{"a dry June", day, func(r *Record) { fill(r.Rain, r.at(1991, 6, 1), 30, 0) }, nil},
		{"two spikes", day, func(r *Record) { r.Rain[r.at(1991, 6, 1)], r.Rain[r.at(1993, 6, 1)] = 80, 400 }, found{
			{KindSpike, "1991-06-01", "1991-06-01", "80 mm of rain in a day, more than 5 times the 99.9 % quantile of the ordinary wet days, 15 mm; a lost decimal mark, or a sum of several days, looks like this"},
			{KindSpike, "1993-06-01", "1993-06-01", "400 mm of rain in a day, more than 5 times the 99.9 % quantile of the ordinary wet days, 15 mm; a lost decimal mark, or a sum of several days, looks like this"}}},
		{"a wet day", day, func(r *Record) { r.Rain[r.at(1991, 6, 1)] = 70 }, nil},
		{"a spike in an hour", time.Hour, func(r *Record) { r.Rain[r.at(1991, 6, 1)+5] = 90 }, found{
			{KindSpike, "1991-06-01T00:00", "1991-06-01T23:00", ""}}},
		{"no evapotranspiration", day, func(r *Record) { fill(r.PET, r.at(1991, 6, 1), 30, 0) }, found{
			{KindPETZero, "1991-06-01", "1991-06-30", "no evapotranspiration for 30 days; check that these are not missing values written as 0"}}},
		{"constant evapotranspiration", day, func(r *Record) { fill(r.PET, r.at(1991, 6, 1), 30, 2.5) }, found{
			{KindPETConstant, "1991-06-01", "1991-06-30", "evapotranspiration stays at 2.5 mm a step for 30 days; a monthly value spread over the days, or a stuck sensor, looks like this"}}},
		{"for twenty-nine days", day, func(r *Record) { fill(r.PET, r.at(1991, 6, 1), 29, 2.5) }, nil},
		{"monthly values over the days", day, func(r *Record) {
			for i := range r.PET {
				r.PET[i] = 1 + float64(r.Start(i).Month())/10
			}
		}, found{{KindPETConstant, "1990-01-01", "1995-12-31", "evapotranspiration stays at one value for 30 days or longer, 66 times; monthly values spread over the days look like this"}}},
		{"in the order of time", day, func(r *Record) {
			fill(r.PET, r.at(1991, 6, 1), 30, 0)
			fill(r.Rain, r.at(1992, 2, 3), 5, 3.2)
			r.Rain[r.at(1990, 6, 1)] = 200
		}, found{
			{KindSpike, "1990-06-01", "1990-06-01", ""}, {KindPETZero, "1991-06-01", "1991-06-30", ""}, {KindRepeatedRain, "1992-02-03", "1992-02-07", ""}}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r := wetAndDry(6, tt.step)
			tt.change(r)
			got := r.Audit().Suspicious
			for i := range got {
				if i < len(tt.want) && tt.want[i].Text == "" {
					got[i].Text = ""
				}
			}
			if d := cmp.Diff(tt.want, got, cmpopts.EquateEmpty()); d != "" {
				t.Error(d)
			}
		})
	}
}

// A record that is strange all over gives a list that can still be read.
func TestAuditSumsUp(t *testing.T) {
	r := wetAndDry(6, day)
	for i := range r.Rain {
		r.Rain[i] = float64(1 + i/5%3)
	}
	got := r.Audit().Suspicious
	if len(got) != mostFindings+1 {
		t.Fatalf("%d findings", len(got))
	}
	want := Suspicious{KindRepeatedRain, "1990-04-11", "1995-12-30", fmt.Sprintf("%d more findings of the kind repeated_rain between these times", 2190/5-mostFindings)}
	if d := cmp.Diff(want, got[mostFindings]); d != "" {
		t.Error(d)
	}
}

func TestWetterHalf(t *testing.T) {
	a := newAuditor(wetAndDry(6, day))
	for m := range a.wetter {
		if want := m+1 >= 10 || m+1 <= 3; a.wetter[m] != want {
			t.Errorf("%v is in the wetter half: %v", time.Month(m+1), a.wetter[m])
		}
	}
	r := wetAndDry(1, day)
	r.Rain = r.Rain[1:] // January is not whole
	r.First = r.First.Add(day)
	a = newAuditor(r)
	if slices.Contains(a.wetter[:], true) {
		t.Error("there is a wetter half without a whole January")
	}
}

// TestImplausible works with constant rain and evapotranspiration, so that every mean can be told without a sum.
func TestImplausible(t *testing.T) {
	type found = []Suspicious
	const year = 365.0
	rain := func(from, to, text string) found { return found{{KindRainTotal, from, to, text}} }
	pet := func(text string) found { return found{{KindPETTotal, "2001-01-01", "2003-12-31", text}} }
	all := func(text string) found { return rain("2001-01-01", "2003-12-31", text) }
	for _, tt := range []struct {
		name         string
		rain, pet, p float64 // mm a year; mm on 5 May 2002 instead
		want         found
	}{
		{"sound", 800, 500, 30, nil},
		{"rain at the lower limit", 150, 500, 150 / year, nil},
		{"rain below it", 149, 500, 149 / year, all("rain is 149 mm a year over the record and 0.41 mm on the wettest day: check the unit of the rain column")},
		{"rain near the upper limit", 4999, 500, 0, nil},
		{"rain above it", 5110, 500, 14, all("rain is 5110 mm a year over the record and 14 mm on the wettest day: check the unit of the rain column")},
		{"no rain", 0, 500, 0, all("rain is 0 mm a year over the record and 0 mm on the wettest day: check the unit of the rain column")},
		{"a day at the limit", 800, 500, 400, nil},
		{"a day above it", 365, 500, 421, rain("2002-05-05", "2002-05-05", "rain is 505 mm a year over the record and 421 mm on the wettest day: check that day, and the unit of the rain column")},
		{"a little evapotranspiration", 800, 151, 30, nil},
		{"too little", 800, 50, 30, pet("evapotranspiration is 50 mm a year over the record: check the unit of the evapotranspiration column")},
		{"much evapotranspiration", 800, 2499, 30, nil},
		{"too much", 800, 5000, 30, pet("evapotranspiration is 5000 mm a year over the record: check the unit of the evapotranspiration column")},
		{"both", 8000, 5000, 700, append(all("rain is 8226 mm a year over the record and 700 mm on the wettest day: check the unit of the rain column")[:1:1],
			pet("evapotranspiration is 5000 mm a year over the record: check the unit of the evapotranspiration column")...)},
	} {
		r := &Record{First: time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), Step: day, Rain: make([]float64, 3*365), PET: make([]float64, 3*365)}
		fill(r.Rain, 0, len(r.Rain), tt.rain/year)
		fill(r.PET, 0, len(r.PET), tt.pet/year)
		r.Rain[r.at(2002, 5, 5)] = tt.p
		if d := cmp.Diff(tt.want, r.Implausible(), cmpopts.EquateEmpty()); d != "" {
			t.Errorf("%s: %s", tt.name, d)
		}
		total := slices.DeleteFunc(r.Audit().Suspicious, func(s Suspicious) bool { return s.Kind != KindRainTotal && s.Kind != KindPETTotal })
		if d := cmp.Diff(r.Implausible(), total, cmpopts.EquateEmpty()); d != "" {
			t.Errorf("%s: the audit finds something else: %s", tt.name, d)
		}
	}
	if got := (&Record{}).Implausible(); got != nil {
		t.Errorf("without steps: %v", got)
	}
}

// Only complete years count where there are any; otherwise all steps do, as if they went on for a year.
func TestPerYear(t *testing.T) {
	for _, tt := range []struct {
		name  string
		first time.Time
		steps int
		step  time.Duration
		want  float64
	}{
		{"from July to June", time.Date(2001, 7, 1, 0, 0, 0, 0, time.UTC), 3 * 365, day, 365},
		{"a year", time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), 365, day, 365},
		{"a year of hours", time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), 365 * 24, time.Hour, 365},
		{"days from nine", time.Date(2001, 1, 1, 9, 0, 0, 0, time.UTC), 365, day, 365},
		{"a day less", time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), 364, day, 365.25},
		{"a leap year", time.Date(2004, 1, 1, 0, 0, 0, 0, time.UTC), 366, day, 366},
		{"a month", time.Date(2001, 2, 1, 0, 0, 0, 0, time.UTC), 28, day, 365.25},
	} {
		r := &Record{First: tt.first, Step: tt.step, Rain: make([]float64, tt.steps)}
		for i := range r.Rain { // 1 mm a day
			r.Rain[i] = tt.step.Hours() / 24
		}
		if got := newAuditor(r).perYear(r.Rain); math.Abs(got-tt.want) > 1e-9 {
			t.Errorf("%s: %v, want %v", tt.name, got, tt.want)
		}
	}
	// What lies outside of the complete years is left out.
	r := &Record{First: time.Date(2001, 7, 1, 0, 0, 0, 0, time.UTC), Step: day, Rain: make([]float64, 3*365)}
	fill(r.Rain, r.at(2002, 1, 1), 365, 1)
	fill(r.Rain, r.at(2003, 1, 1), 365, 2)
	fill(r.Rain, 0, r.at(2002, 1, 1), 9)
	fill(r.Rain, r.at(2004, 1, 1), len(r.Rain)-r.at(2004, 1, 1), 9)
	if got := newAuditor(r).perYear(r.Rain); got != 365*1.5 {
		t.Errorf("got %v", got)
	}
}
