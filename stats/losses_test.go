package stats

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// priced is a band with what makes its events.
type priced struct{ level, until, perEvent, perDay float64 }

func losses(levels []float64, cal *Calendar, bands []priced, apart float64) []float64 {
	var (
		costs  []LossBand
		passed []Exceedance
	)
	for i, b := range bands {
		th := Threshold{Level: b.level, Until: b.until, Next: math.Inf(1)}
		if i+1 < len(bands) {
			th.Next = bands[i+1].level
		}
		costs = append(costs, LossBand{Level: b.level, PerEvent: b.perEvent, PerDay: b.perDay})
		passed = append(passed, Exceed(levels, cal, th, apart))
	}
	return Losses(levels, cal, costs, passed)
}

// TestLosses is worked out by hand. Every digit of levels is a day.
func TestLosses(t *testing.T) {
	tests := []struct {
		name   string
		levels string
		year   []int32 // nil: all in one
		bands  []priced
		apart  float64
		want   []float64
	}{
		{"no band", "0550", nil, nil, 0, []float64{0}},
		{"bands without a loss", "0570", nil, []priced{{4, 4, 0, 0}, {6, 6, 0, 0}}, 0, []float64{0}},
		{"one band, one event of two days", "05500", nil, []priced{{4, 4, 100, 1}}, 0, []float64{102}},
		{"equal is not above", "0440", nil, []priced{{4, 4, 100, 1}}, 0, []float64{0}},
		{"each event in its highest band", "0570500", nil, []priced{{4, 4, 100, 0}, {6, 6, 1000, 0}}, 0, []float64{1000 + 100}},
		{"equal to the higher band is not in it", "0660", nil, []priced{{4, 4, 100, 0}, {6, 6, 1000, 0}}, 0, []float64{100}},
		{"the higher band costs nothing: the lower one pays", "0570500", nil, []priced{{4, 4, 100, 0}, {6, 6, 0, 0}}, 0, []float64{200}},
		{"the higher one costs by the day only: the lower one pays", "0570", nil, []priced{{4, 4, 100, 0}, {6, 6, 0, 10}}, 0, []float64{110}},
		{"the middle one costs nothing, the event stays in it", "0570", nil, []priced{{4, 4, 100, 0}, {6, 6, 0, 0}, {8, 8, 5000, 0}}, 0, []float64{100}},
		{"the middle one costs nothing, the event goes on to the highest", "05790", nil, []priced{{4, 4, 100, 0}, {6, 6, 0, 0}, {8, 8, 5000, 0}}, 0, []float64{5000}},
		{"all three cost, the event in the middle", "05750", nil, []priced{{4, 4, 100, 0}, {6, 6, 1000, 0}, {8, 8, 5000, 0}}, 0, []float64{1000}},
		{"two peaks in the higher band within one event", "0575750", nil, []priced{{4, 4, 100, 0}, {6, 6, 1000, 0}}, 0, []float64{2000}},
		{"a day pays for the highest band that has a loss", "0579750", nil, []priced{{4, 4, 0, 1}, {6, 6, 0, 0}, {8, 8, 0, 100}}, 0, []float64{4*1 + 100}},
		{"a day in a lower band without a loss pays nothing", "0570", nil, []priced{{4, 4, 0, 0}, {6, 6, 0, 10}}, 0, []float64{10}},
		{"events of one band, days of the other", "05750", nil, []priced{{4, 4, 0, 2}, {6, 6, 50, 0}}, 0, []float64{3*2 + 50}},
		{"a higher band may cost less", "05750", nil, []priced{{4, 4, 100, 5}, {6, 6, 10, 1}}, 0, []float64{10 + 5 + 1 + 5}},

		{"two events where nothing joins them", "0533570", nil, []priced{{4, 4, 100, 1}, {6, 6, 1000, 1}}, 0, []float64{100 + 1000 + 3}},
		{"joined above the arrest level, one event", "0533570", nil, []priced{{4, 2, 100, 1}, {6, 6, 1000, 1}}, 0, []float64{1000 + 3}},
		{"joined by time, one event", "0500570", nil, []priced{{4, 4, 100, 1}, {6, 6, 1000, 1}}, 3, []float64{1000 + 3}},
		{"the higher band's event is joined, the lower one's is not", "0733570", nil, []priced{{4, 4, 100, 0}, {6, 2, 1000, 0}}, 0, []float64{1000}},
		{"a lower event of its own between the parts of a joined one", "073353370", nil, []priced{{4, 4, 100, 0}, {6, 2, 1000, 0}}, 0, []float64{1100}},

		{"the event in the year of its peak, days in their own", "056550", []int32{0, 0, 0, 1, 1, 1}, []priced{{4, 4, 100, 1}}, 0, []float64{102, 2}},
		{"a later peak", "055670", []int32{0, 0, 0, 1, 1, 1}, []priced{{4, 4, 100, 1}}, 0, []float64{2, 102}},
		{"the first of equal peaks", "057700", []int32{0, 0, 0, 1, 1, 1}, []priced{{4, 4, 100, 1}, {6, 6, 1000, 3}}, 0, []float64{1000 + 1 + 3, 3}},
		{"a peak before the years: days only", "075500", []int32{-1, -1, 0, 0, 0, 0}, []priced{{4, 4, 100, 1}, {6, 6, 1000, 3}}, 0, []float64{2}},
		{"a peak after the years: days only", "005570", []int32{0, 0, 0, 0, -1, -1}, []priced{{4, 4, 100, 1}, {6, 6, 1000, 3}}, 0, []float64{2}},
		{"the higher event has its peak before the years", "93370", []int32{-1, -1, 0, 0, 0}, []priced{{4, 4, 100, 0}, {6, 2, 1000, 0}}, 0, []float64{0}},
		{"no year counted", "0570", []int32{-1, -1, -1, -1}, []priced{{4, 4, 100, 1}}, 0, []float64{}},
	}
	for _, tt := range tests {
		t.Run(tt.name, func(t *testing.T) {
			cal := plain(len(tt.levels))
			if tt.year != nil {
				cal.Year, cal.Years = tt.year, len(tt.want)
			}
			if d := cmp.Diff(tt.want, losses(digits(tt.levels), cal, tt.bands, tt.apart)); d != "" {
				t.Errorf("(-want +got)\n%s", d)
			}
		})
	}
}

// TestLossesSteps: a step of six hours pays a quarter of a day.
func TestLossesSteps(t *testing.T) {
	cal := plain(4)
	for i := range cal.Days {
		cal.Start[i], cal.Days[i] = float64(i)/4, 0.25
	}
	if got := losses(digits("0570"), cal, []priced{{4, 4, 100, 8}, {6, 6, 0, 40}}, 0); got[0] != 100+2+10 {
		t.Errorf("%v, want 112", got)
	}
}

// TestLossesAtTheLevel has a peak exactly at the level of a higher band, where the level of the lower one and the peak
// excess add up to a little more.
func TestLossesAtTheLevel(t *testing.T) {
	low, high := 0.3, 0.9
	if !(low+(high-low) > high) {
		t.Fatal("the levels show nothing")
	}
	if got := losses([]float64{0, high, 0}, plain(3), []priced{{low, low, 100, 0}, {high, high, 1000, 0}}, 0); got[0] != 100 {
		t.Errorf("%v, want 100", got)
	}
}

// TestLossesOracle looks at every step of every event instead of its peak.
func TestLossesOracle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 120).Draw(t, "steps")
		cal := plain(n)
		cal.Years = 3
		for i := range cal.Year {
			cal.Year[i] = int32(i/40) - int32(rapid.IntRange(0, 1).Draw(t, "skip"))
		}
		levels := make([]float64, n)
		for i := range levels {
			levels[i] = float64(rapid.IntRange(0, 12).Draw(t, "level"))
		}
		amount := rapid.SampledFrom([]float64{0, 0, 1, 10, 0.25})
		var (
			bands  []LossBand
			passed []Exceedance
		)
		for _, level := range rapid.SampledFrom([][]float64{{4}, {2, 5}, {3, 6, 9}, {1, 2, 4, 8, 11}, {5, 5}}).Draw(t, "bands") {
			bands = append(bands, LossBand{level, amount.Draw(t, "per event"), amount.Draw(t, "per day")})
			until := level - float64(rapid.IntRange(0, 4).Draw(t, "until"))
			apart := float64(rapid.IntRange(0, 4).Draw(t, "apart"))
			passed = append(passed, Exceed(levels, cal, Threshold{level, until, math.Inf(1)}, apart))
		}
		want := make([]float64, cal.Years)
		for i, h := range levels {
			if y := cal.Year[i]; y >= 0 {
				perDay := 0.0
				for _, b := range bands {
					if h > b.Level && b.PerDay > 0 {
						perDay = b.PerDay
					}
				}
				want[y] += perDay * cal.Days[i]
			}
		}
		for b, x := range passed {
			for _, e := range x.Events {
				pays := e.Counted
				for _, h := range levels[e.First : e.Last+1] {
					for _, higher := range bands[b+1:] {
						pays = pays && !(higher.PerEvent > 0 && h > higher.Level)
					}
				}
				if pays {
					want[cal.Year[e.Peak]] += bands[b].PerEvent
				}
			}
		}
		if d := cmp.Diff(want, Losses(levels, cal, bands, passed), near); d != "" {
			t.Fatalf("(-want +got)\n%s", d)
		}
	})
}
