package scenario

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"testing"
	"time"
)

// BenchmarkCompare reads a study and forty years of hours (350,640 rows) and compares its eight options: all that the
// command does but the printing. testdata/speed/compare.py does the same work with pandas and SciPy.
func BenchmarkCompare(b *testing.B) {
	dir := b.TempDir()
	text, err := os.ReadFile("../testdata/speed/hourly.yaml")
	if err != nil {
		b.Fatal(err)
	}
	study := filepath.Join(dir, "hourly.yaml")
	if err := os.WriteFile(study, text, 0o666); err != nil {
		b.Fatal(err)
	}
	const rows = 350640
	writeHourly(b, filepath.Join(dir, "hourly.csv"), rows)

	b.Run("rows=350640/options=8", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			s, err := Load(study)
			if err != nil {
				b.Fatal(err)
			}
			c, err := Compare(context.Background(), s, CompareQuery{})
			if err != nil {
				b.Fatal(err)
			}
			if c.Record.Rows != rows || len(c.Cases[0].Options) != 8 {
				b.Fatalf("%d rows, %d options", c.Record.Rows, len(c.Cases[0].Options))
			}
		}
	})
}

// BenchmarkCompareDeclining compares eight options with drains that clog over forty years of hours: each is replayed at four
// ages and in five states, besides a baseline. BenchmarkCompare replays each option once.
func BenchmarkCompareDeclining(b *testing.B) {
	const rows = 350640
	path := filepath.Join(b.TempDir(), "hourly.csv")
	writeHourly(b, path, rows)
	inf := math.Inf(1)
	decline := &Decline{HalfLife: 10, Every: 5, Restored: 0.9}
	var options []Option
	for i := range 8 {
		m := Measure{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 6 + 2*float64(i), Conductivity: 0.05, Radius: 0.1,
			Equivalent: math.NaN(), Head: 1.5, Quadratic: i >= 6, Efficiency: 1, Ceiling: inf, Decline: decline}}
		options = append(options, Option{Name: fmt.Sprintf("trenches %d", i), Measures: []Measure{m}, Costs: []Cost{{Capital: 100 * float64(8-i), Life: 20}}})
	}
	s := ground(options...)
	s.Ground.Soil = nil
	s.Bands[0].LossPerEvent = 100
	s.Money = &Money{Horizon: 50, Rate: 0.03}
	s.Count.Resamples, s.Count.DesignLife = 2000, 50
	s.Weather = WeatherSpec{File: "hourly.csv", Path: path, Time: "time", Format: "YYYY-MM-DD hh:mm", Rain: WeatherColumn{"rain_mm", "mm"}}
	b.Run("rows=350640/options=9", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			c, err := Compare(context.Background(), s, CompareQuery{})
			if err != nil {
				b.Fatal(err)
			}
			if got := len(c.Cases[0].Options[8].States); got != 6 {
				b.Fatalf("%d states", got)
			}
		}
	})
}

// writeHourly writes invented hours of rain, about 970 mm a year in showers.
func writeHourly(tb testing.TB, path string, rows int) {
	tb.Helper()
	f, err := os.Create(path)
	if err != nil {
		tb.Fatal(err)
	}
	defer f.Close()
	w := bufio.NewWriter(f)
	fmt.Fprintln(w, "time,rain_mm")
	rng := rand.New(rand.NewPCG(1, 1))
	t := time.Date(1984, time.January, 1, 0, 0, 0, 0, time.UTC)
	wet := false
	for range rows {
		rain := 0.0
		if chance := rng.Float64(); wet {
			wet = chance < 0.75
		} else {
			wet = chance < 0.025
		}
		if wet {
			rain = 1.2 * rng.ExpFloat64()
		}
		fmt.Fprintf(w, "%s,%.1f\n", t.Format("2006-01-02 15:04"), rain)
		t = t.Add(time.Hour)
	}
	if err := w.Flush(); err != nil {
		tb.Fatal(err)
	}
}
