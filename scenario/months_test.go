package scenario

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

const monthlyStudy = `study: Months and days of the same weather
weather:
  file: FILE
  columns:
    time: {name: time, format: YYYY-MM-DD}
    rain: {name: rain, unit: mm/d}
    pet: {name: pet, unit: mm/d}
  stamp: STAMP
ground:
  surface: {infiltration: 80 %, infiltration_limit: 0.15 mm/h}
  soil: {available_water: 90 mm, readily_available: 40 %}
  cover: {thickness: 3 m, drainable_porosity: 8 %, seepage: 0.012 /d, percolation: 0.01 /d}
  deep: {thickness: 6 m, drainable_porosity: 2 %, seepage: 0.02 /d}
  warm_up: 2 y
bands:
  - {name: low, level: 1.2 m, until: 1.0 m}
count: {year_starts: October, resamples: 100}
options:
  - name: as it stands
  - name: trenches
    trench_drains: {depth: 2.5 m, rate: 0.02 /d}
`

// TestMonthlyStudy replays weather whose intensity changes with the month only, once in months and once in days: the water
// that enters must be the same, and so must the levels at the ends of months. The levels are compared without a soil, since
// what it lets through within a month is spread over the month.
func TestMonthlyStudy(t *testing.T) {
	t.Run("soil", func(t *testing.T) { monthlyStudyTest(t, true) })
	t.Run("no soil", func(t *testing.T) { monthlyStudyTest(t, false) })
}

func monthlyStudyTest(t *testing.T, soil bool) {
	text := monthlyStudy
	if !soil {
		text = strings.Replace(text, "  soil: {available_water: 90 mm, readily_available: 40 %}\n", "", 1)
	}
	first, last := time.Date(1990, time.April, 1, 0, 0, 0, 0, time.UTC), time.Date(2002, time.December, 1, 0, 0, 0, 0, time.UTC)
	rng := rand.New(rand.NewPCG(3, 5))
	months, days := strings.Builder{}, strings.Builder{}
	months.WriteString("time,rain,pet\n")
	days.WriteString("time,rain,pet\n")
	var ends []int // day on which each month ends
	n := 0
	for at := first; at.Before(last); at = at.AddDate(0, 1, 0) {
		season := math.Cos(2 * math.Pi * float64(at.Month()-time.January) / 12)
		row := fmt.Sprintf(",%.2f,%.2f\n", (3.4+1.6*season)*2*rng.Float64(), 1.8-1.6*season)
		next := at.AddDate(0, 1, 0)
		months.WriteString(next.AddDate(0, 0, -1).Format(time.DateOnly) + row)
		for d := at; d.Before(next); d = d.AddDate(0, 0, 1) {
			days.WriteString(d.Format(time.DateOnly) + row)
			n++
		}
		ends = append(ends, n-1)
	}
	dir := t.TempDir()
	study := func(name, stamp, rows string) *Study {
		for file, contents := range map[string]string{name + ".yaml": strings.NewReplacer("FILE", name+".csv", "STAMP", stamp).Replace(text), name + ".csv": rows} {
			if err := os.WriteFile(filepath.Join(dir, file), []byte(contents), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		return load(t, filepath.Join(dir, name+".yaml"))
	}
	monthly, daily := study("months", "end", months.String()), study("days", "start", days.String())
	levels := func(s *Study, q LevelsQuery) *LevelSeries {
		t.Helper()
		l, err := Levels(context.Background(), s, q)
		if err != nil {
			t.Fatal(err)
		}
		return l
	}

	m, d := levels(monthly, LevelsQuery{}), levels(daily, LevelsQuery{})
	if m.Rows != len(ends) || d.Rows != n || m.Time(1) != "1990-05-31" {
		t.Fatalf("%d months, %d days, %s", m.Rows, d.Rows, m.Time(1))
	}
	limited := 0
	for o := range m.Options {
		from := 0
		for i, end := range ends {
			if rain := d.Rain[end]; 0.8*rain > 0.15*24 {
				limited++
			}
			water := total(d.Recharge[o][from : end+1])
			for _, v := range []struct {
				name      string
				got, want float64
			}{{"recharge", m.Recharge[o][i], water}, {"cover", m.Cover[o][i], d.Cover[o][end]}, {"deep", m.Deep[o][i], d.Deep[o][end]}} {
				if soil && v.name != "recharge" {
					continue
				}
				if math.Abs(v.got-v.want) > 1e-9*max(1, v.want) {
					t.Fatalf("%s, %s: %s %v by months, %v by days", m.Options[o], m.Time(i), v.name, v.got, v.want)
				}
			}
			from = end + 1
		}
	}
	if limited == 0 {
		t.Error("the limit of infiltration never acts")
	}

	for _, tt := range []struct {
		from, to, first, last string
		rows                  int
	}{
		{"1991", "1992-03", "1991-01-31", "1992-03-31", 15},
		{"1991-02", "1991-02", "1991-02-28", "1991-02-28", 1},
		{"1991-02-02", "1991-05-01", "1991-03-31", "1991-05-31", 3},
		{"", "1990-06", "1990-04-30", "1990-06-30", 3},
	} {
		cut := levels(monthly, LevelsQuery{From: tt.from, To: tt.to})
		if cut.Rows != tt.rows || cut.Time(0) != tt.first || cut.Time(cut.Rows-1) != tt.last {
			t.Errorf("%s to %s: %d rows from %s to %s", tt.from, tt.to, cut.Rows, cut.Time(0), cut.Time(cut.Rows-1))
		}
	}

	cm, cd := compare(t, monthly), compare(t, daily)
	r := cm.Record
	got := []any{r.From, r.To, r.Step, r.StepDays == nil, r.Stamp, r.Rows, r.CountedFrom, r.CountedTo, r.YearsCounted, r.PartialDays}
	if diff := cmp.Diff([]any{"1990-04", "2002-11", "1 month", true, "end", 152, "1990-10", "2002-09", 12, 183.0 + 61}, got); diff != "" {
		t.Error(diff)
	}
	if cd.Record.PartialDays != r.PartialDays || cd.Record.YearsCounted != r.YearsCounted {
		t.Errorf("days: %+v", cd.Record)
	}
	for i, o := range cm.Cases[0].Options {
		by := cd.Cases[0].Options[i]
		for _, v := range [][2]float64{{o.RechargeMMPerYear, by.RechargeMMPerYear}, {o.WaterBalance.Cover.InMM, by.WaterBalance.Cover.InMM}} {
			if math.Abs(v[0]-v[1]) > 1e-9*math.Abs(v[1]) {
				t.Errorf("%s: %v by months, %v by days", o.Name, v[0], v[1])
			}
		}
		if soil {
			if got, want := *o.ActualETMMPerYear, *by.ActualETMMPerYear; math.Abs(got-want) > 1e-9*want {
				t.Errorf("%s: actual evapotranspiration %v by months, %v by days", o.Name, got, want)
			}
		} else if got, want := o.WaterBalance.Deep.InMM, by.WaterBalance.Deep.InMM; math.Abs(got-want) > 1e-9*want {
			t.Errorf("%s: percolation %v by months, %v by days", o.Name, got, want)
		}
		b := o.Bands[0]
		var spent, counted float64 // d above the band
		for k := range ends {
			h, days := m.Deep[i][k], float64(ends[k]+1)
			if k > 0 {
				days = float64(ends[k] - ends[k-1])
			}
			if k >= 6 && k < 150 && h > 1.2 {
				spent += days
				counted++
			}
		}
		if i == 0 && counted == 0 {
			t.Error("the band is never passed")
		}
		if math.Abs(b.DaysPerYear-spent/12) > 1e-9 {
			t.Errorf("%s: %v d a year, want %v", o.Name, b.DaysPerYear, spent/12)
		}
	}
	if !warned(cm.Warnings, "limit_hardly_acts", "") {
		t.Error("no warning that a limit hardly acts in months")
	}

	check, err := Check(context.Background(), monthly)
	if err != nil {
		t.Fatal(err)
	}
	if w := check.Audit.Wettest; len(w) != 5 || len(w[0].Date) != len("1990-04") {
		t.Errorf("wettest: %+v", w)
	}
}

func TestCountYearsOfMonths(t *testing.T) {
	for _, tt := range []struct {
		first           string
		months          int
		starts          time.Month
		years, from, to int
	}{
		{"2003-01-01T00:00", 36, time.January, 3, 0, 36},
		{"2003-02-01T00:00", 36, time.January, 2, 11, 35},
		{"2003-01-01T00:00", 35, time.October, 2, 9, 33},
		{"2003-03-01T00:00", 11, time.March, 0, 0, 0},
	} {
		p := countYears(record(tt.first, 0, tt.months), tt.starts)
		if p.years != tt.years || p.from != tt.from || p.to != tt.to {
			t.Errorf("%s: %d years, months %d to %d", tt.first, p.years, p.from, p.to)
		}
	}
	// January to April of a leap year.
	c := countYears(record("2004-01-01T00:00", 0, 4), time.January).calendar
	if d := cmp.Diff([][]float64{{0, 31, 60, 91}, {31, 29, 31, 30}}, [][]float64{c.Start, c.Days}); d != "" {
		t.Error(d)
	}
	if ends := wholeYears(record("2003-03-01T00:00", 0, 40)); !cmp.Equal(ends, []int{12, 24, 36}) {
		t.Errorf("whole years end at %v", ends)
	}
}
