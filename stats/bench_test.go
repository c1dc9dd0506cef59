package stats

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
	"time"
)

// BenchmarkExceed is one level on 40 years of hours that wave up and down, at levels passed seldom and often.
func BenchmarkExceed(b *testing.B) {
	const n = 350640
	cal := calendar(time.Date(1981, 1, 1, 0, 0, 0, 0, time.UTC), n, time.Hour, 0)
	levels := make([]float64, n)
	for i := range levels {
		t := float64(i)
		levels[i] = math.Sin(2*math.Pi*t/8766) + 0.3*math.Sin(t/700) + 0.02*math.Sin(t/3)
	}
	for _, level := range []float64{2, 1, 0} {
		x := Exceed(levels, cal, above(level), 10)
		b.Run(fmt.Sprintf("steps=%d/above=%.0fpct", n, 100*Mean(x.DaysByYear)/365.25), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				Exceed(levels, cal, above(level), 10)
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/step")
		})
	}
}

// BenchmarkCompare is what a large study asks for: each option against the baseline in each band, one measure.
func BenchmarkCompare(b *testing.B) {
	const years, bands = 40, 5
	rng := rand.New(rand.NewPCG(1, 1))
	for _, options := range []int{8, 20} {
		series := make([][]float64, options)
		for k := range series {
			series[k] = make([]float64, years)
			for y := range series[k] {
				series[k][y] = max(0, 30*rng.NormFloat64())
			}
		}
		b.Run(fmt.Sprintf("resamples=2000/options=%d/bands=%d/years=%d", options, bands, years), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				r := NewResamples(years, 2000, 2, 1)
				for range bands {
					for _, s := range series {
						r.Compare(s, series[0], 0.9)
					}
				}
			}
		})
	}
}

func BenchmarkNewResamples(b *testing.B) {
	b.Run("resamples=2000/years=40", func(b *testing.B) {
		for b.Loop() {
			NewResamples(40, 2000, 2, 1)
		}
	})
}
