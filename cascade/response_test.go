package cascade_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade"
)

// TestResponseTime inverts the S-curve of two unequal reservoirs, k1 = 5 d and k2 = 60 d. Values of the curve: its closed form,
// confirmed by SciPy's quad of the convolution; eight decimals.
func TestResponseTime(t *testing.T) {
	const k1, k2 = 5.0, 60.0
	for _, tt := range []struct{ at, density, s float64 }{
		{1, 0.00299529, 0.00155212},
		{5, 0.01003936, 0.02975877},
		{10, 0.01292994, 0.08886860},
		{20, 0.01269483, 0.21999454},
		{60, 0.00668861, 0.59867753},
		{120, 0.00246064, 0.85236151},
	} {
		tolerance := 0.5e-8 / tt.density * 1.001 // half a unit of the last digit of the share
		near(t, "time", cascade.ResponseTime(1/k1, 1/k2, tt.s), tt.at, tolerance)
		near(t, "time, stores exchanged", cascade.ResponseTime(1/k2, 1/k1, tt.s), tt.at, tolerance)
	}

	// Roots of the closed form by bisection at 40 digits (mpmath), with equal rates and rates that are nearly so.
	for _, tt := range []struct{ cover, deep, share, want float64 }{
		{0.2, 0.02, 0.9, 120.397280430657},
		{0.2, 0.02, 0.5, 39.9215986850537},
		{0.02, 0.02, 0.9, 194.486008493371},
		{0.02, 0.020000001, 0.9, 194.486003631222},
		{0.3, 0.30000000000000027, 0.1, 1.77270536129871},
		{1e6, 0.02, 0.9, 115.129255649702},
		{0.02, 3, 1e-9, 0.000182590965169971},
		{0.02, 0.05, 0.999999, 716.31680907578},
	} {
		near(t, "time", cascade.ResponseTime(tt.cover, tt.deep, tt.share), tt.want, 1e-14*tt.want)
		near(t, "time, stores exchanged", cascade.ResponseTime(tt.deep, tt.cover, tt.share), tt.want, 1e-14*tt.want)
	}

	inf := math.Inf(1)
	for _, tt := range []struct{ cover, deep, share, want float64 }{
		{inf, 0.1, 0.9, math.Ln10 / 0.1},
		{inf, 0.1, 0.5, math.Ln2 / 0.1},
		{1e200, 0.1, 0.5, math.Ln2 / 0.1},
		{0.3, 0.1, 0, 0},
		{0.3, 0.1, 1, inf},
		{0, 0.1, 0.5, inf},
		{0.3, 0, 0.5, inf},
		{inf, 0, 0.5, inf},
		{inf, inf, 0.5, 0},
	} {
		got := cascade.ResponseTime(tt.cover, tt.deep, tt.share)
		if !(got == tt.want || math.Abs(got-tt.want) <= 1e-15*tt.want) {
			t.Errorf("ResponseTime(%v, %v, %v) = %v, want %v", tt.cover, tt.deep, tt.share, got, tt.want)
		}
	}
	nan := math.NaN()
	for _, v := range [][3]float64{{nan, 1, 0.5}, {1, nan, 0.5}, {1, 1, nan}, {-1, 1, 0.5}, {1, -1, 0.5}, {1, 1, -0.1}, {1, 1, 1.1}} {
		if got := cascade.ResponseTime(v[0], v[1], v[2]); !math.IsNaN(got) {
			t.Errorf("ResponseTime(%v) = %v", v, got)
		}
	}
}

// TestResponseTimeIsTheEngine: after the time for a share, a cascade that starts from one steady state under the input of another
// has made that share of the way. Rates from nearly equal to far apart, shares from 1e-9 to all but 1e-6.
func TestResponseTimeIsTheEngine(t *testing.T) {
	check(t, func(t *rapid.T) {
		cover := math.Pow(10, rapid.Float64Range(-4, 2).Draw(t, "cover"))
		apart := math.Pow(10, rapid.Float64Range(-16, 0.5).Draw(t, "apart"))
		deep := cover * (1 + apart)
		if rapid.Bool().Draw(t, "deep slower") {
			deep = cover / (1 + apart*100)
		}
		share := math.Pow(10, rapid.Float64Range(-9, -0.05).Draw(t, "share"))
		if rapid.Bool().Draw(t, "nearly all") {
			share = 1 - math.Pow(10, rapid.Float64Range(-6, -0.3).Draw(t, "left"))
		}
		days := cascade.ResponseTime(cover, deep, share)
		parts := math.Ceil(days / 1e4)
		if parts > 1000 {
			return
		}
		m := series(cover, deep)
		r := mustRun(t, m, 0, 0)
		for range int(parts) {
			if err := r.Step(days/parts, days/parts); err != nil { // 1 mm/d
				t.Fatal(err)
			}
		}
		_, got := r.Storage()
		if want := share / deep; math.Abs(got-want) > 1e-12*want {
			t.Fatalf("after %v d %v of the way, not %v", days, got*deep, share)
		}
	})
}
