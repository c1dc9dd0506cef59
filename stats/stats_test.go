package stats

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// TestQuantilesOfUnsorted holds the selection against sorting, ties included.
func TestQuantilesOfUnsorted(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.SliceOfN(rapid.Float64Range(-3, 3), 1, 300).Draw(t, "x")
		for i := range x {
			if rapid.Bool().Draw(t, "round") {
				x[i] = math.Round(x[i])
			}
		}
		p := rapid.SliceOfN(rapid.Float64Range(0, 1), 0, 5).Draw(t, "p")
		p = append(p, 0, 0.5, 0.5, 1)
		slices.Sort(p)
		sorted := slices.Clone(x)
		slices.Sort(sorted)
		for k, q := range Quantiles(slices.Clone(x), p...) {
			if want := Quantile(sorted, p[k]); q != want {
				t.Fatalf("quantile %v is %v, want %v", p[k], q, want)
			}
		}
	})
	if q := Quantiles(nil, 0.5); !math.IsNaN(q[0]) {
		t.Errorf("quantile of nothing is %v", q[0])
	}
	if q := Quantiles([]float64{1}, 1.5); !math.IsNaN(q[0]) {
		t.Errorf("quantile 1.5 is %v", q[0])
	}
}
