package stats

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// gauss are the weights of the four-point Gauss-Legendre rule on an interval of length 1 (Abramowitz & Stegun 1964,
// table 25.4, halved; from memory, recomputed): they sum to 1 but for rounding.
var gauss = []float64{0.17392742256872692, 0.32607257743127305, 0.32607257743127305, 0.17392742256872692}

// TestAverage is worked out by hand: three replays of two years of six days, the last without an event that counts.
func TestAverage(t *testing.T) {
	cal := daily(12, 0)
	for i := range cal.Year {
		cal.Year[i] = int32(i / 6)
		cal.Month[i] = uint8(i / 6)
	}
	cal.Years = 2
	th := Threshold{Level: 4, Until: 4, Next: 6}
	xs := []Exceedance{
		Exceed(digits("005750"+"005055"), cal, th, 2), // events of 3 d and, with a gap, of 3 d in 4 d
		Exceed(digits("005500"+"000000"), cal, th, 2), // one of 2 d
		Exceed(digits("000000"+"000000"), cal, th, 2),
	}
	want := Exceedance{
		Count:        0.5*2 + 0.25*1,
		EventsByYear: []float64{0.5 + 0.25, 0.5},
		DaysByYear:   []float64{0.5*3 + 0.25*2, 0.5 * 3},
		LoadByYear:   []float64{0.5*5 + 0.25*2, 0.5 * 3},
		AnyByYear:    []float64{0.75, 0.5},
		YearsAbove:   0.5*2 + 0.25,
		DaysInBand:   (0.5*(2+3) + 0.25*2) / 2,
		ByMonth:      [12]float64{(0.5*3 + 0.25*2) / 2, 0.5 * 3 / 2},
		Longest:      3,
		// of the first two only, which have two thirds and one third of the weight there is
		MeanSpan:   (2*3.5 + 2) / 3.0,
		PeakExcess: 3,
		MeanExcess: (2*8/6.0 + 1) / 3,
	}
	got := Average(xs, []float64{0.5, 0.25, 0.25})
	if d := cmp.Diff(want, got, near); d != "" {
		t.Errorf("(-want +got)\n%s", d)
	}
	none := Average(xs[2:], []float64{1})
	for _, weights := range [][]float64{{0, 0, 1}, {0.2, 0.3, 0.5}} {
		if got := Average([]Exceedance{xs[2], xs[2], xs[2]}, weights); cmp.Diff(none, got) != "" {
			t.Errorf("without any event: %+v", got)
		}
	}
}

// TestAverageOfOne: a single replay stays what it is, with its events, and several equal ones give the same figures to
// the last bit.
func TestAverageOfOne(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		levels := rapid.SliceOfN(rapid.Float64Range(0, 10), 0, 1200).Draw(t, "levels")
		x := Exceed(levels, daily(len(levels), 0), above(rapid.Float64Range(0, 10).Draw(t, "level")), 3)
		if d := cmp.Diff(x, Average([]Exceedance{x}, []float64{1})); d != "" {
			t.Fatalf("a single one\n%s", d)
		}
		got := Average([]Exceedance{x, x, x, x}, gauss)
		x.Events = nil
		if d := cmp.Diff(x, got); d != "" {
			t.Fatalf("four equal ones\n%s", d)
		}
	})
}

// TestAverageIdentities: the mean of figures is a linear thing, so yearly figures and those of the whole record agree,
// and the exact intervals can be had of every average.
func TestAverageIdentities(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		days := rapid.IntRange(366, 1500).Draw(t, "days")
		cal := daily(days, 0)
		level := rapid.Float64Range(0, 12).Draw(t, "level")
		var xs []Exceedance
		for range gauss {
			levels := rapid.SliceOfN(rapid.Float64Range(0, 10), days, days).Draw(t, "levels")
			xs = append(xs, Exceed(levels, cal, above(level), 2))
		}
		m := Average(xs, gauss)
		if d := cmp.Diff(total(m.EventsByYear), m.Count, near); d != "" {
			t.Fatalf("events\n%s", d)
		}
		if d := cmp.Diff(total(m.AnyByYear), m.YearsAbove, near); d != "" {
			t.Fatalf("years above\n%s", d)
		}
		if d := cmp.Diff(total(m.ByMonth[:]), Mean(m.DaysByYear), near); d != "" {
			t.Fatalf("days by month\n%s", d)
		}
		load, lo, hi := 0.0, math.Inf(1), 0.0
		for i := range xs {
			load += gauss[i] * Mean(xs[i].LoadByYear)
			lo, hi = min(lo, xs[i].Count), max(hi, xs[i].Count)
		}
		if d := cmp.Diff(load, Mean(m.LoadByYear), near); d != "" {
			t.Fatalf("load\n%s", d)
		}
		if m.Count < lo || m.Count > hi {
			t.Fatalf("%v events in the mean of %v to %v", m.Count, lo, hi)
		}
		PoissonInterval(m.Count, float64(cal.Years), 0.9)
		BinomialInterval(m.YearsAbove, cal.Years, 0.9) // would panic with more years above than years
	})
}
