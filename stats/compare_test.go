package stats

import (
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

func ptr[T any](x T) *T { return &x }

// TestCompareByHand uses the three resamples of TestIntervalByHand. Baseline 4 and 10, option 4 and 5: differences 0 and
// -5, in the resamples -2.5, -5, 0; ratios 9/14, 1/2, 1. At 50 % an end lies erfc(1) of the way from the last value but
// one to the last.
func TestCompareByHand(t *testing.T) {
	r := byHand([]float64{1, 1}, []float64{0, 2}, []float64{2, 0})
	e := math.Erfc(1)
	want := Change{
		Difference:   -2.5,
		DifferenceCI: &[2]float64{-5 + 2.5*e, -2.5 * e},
		Ratio:        ptr(9 / 14.0),
		RatioCI:      &[2]float64{1/2.0 + e*(9/14.0-1/2.0), 1 - e*(1-9/14.0)},
		ShareBetter:  2 / 3.0,
		ShareEqual:   1 / 3.0,
		YearsBetter:  1,
		YearsEqual:   1,
	}
	if d := cmp.Diff(want, r.Compare([]float64{4, 5}, []float64{4, 10}, 0.5), near); d != "" {
		t.Errorf("(-want +got)\n%s", d)
	}
}

// TestCompareCases has what is left out when.
func TestCompareCases(t *testing.T) {
	half := []float64{2, 0, 6, 4, 8, 1, 1, 3}
	none := make([]float64, 8)
	double := make([]float64, 8)
	noise := make([]float64, 8)
	for y, x := range half {
		double[y] = 2 * x
		noise[y] = x * (1 + 1e-13)
	}
	rare := []float64{0, 0, 0, 9, 0, 0, 0, 0}
	always := []float64{1, 1, 1, 1, 1, 1, 1, 1}
	for _, tt := range []struct {
		name             string
		option, baseline []float64
		difference       float64
		ratio            *float64
		ci, ratioCI      bool
		better, equal    float64 // shares; -1 for do not ask
		years            [3]int  // better, equal, worse
		apart            bool
	}{
		{"the same", half, half, 0, ptr(1.0), false, false, 0, 1, [3]int{0, 8, 0}, false},
		{"the same but for rounding", noise, half, 0, ptr(1.0), false, false, 0, 1, [3]int{0, 8, 0}, false},
		{"nothing in either", none, none, 0, nil, false, false, 0, 1, [3]int{0, 8, 0}, false},
		{"half as much", half, double, -25 / 8.0, ptr(0.5), true, true, 1, 0, [3]int{7, 1, 0}, true},
		{"twice as much", double, half, 25 / 8.0, ptr(2.0), true, true, 0, 0, [3]int{0, 1, 7}, true},
		{"nothing left", none, half, -25 / 8.0, ptr(0.0), true, false, 1, 0, [3]int{7, 1, 0}, true},
		{"something from nothing", half, none, 25 / 8.0, nil, true, false, 0, 0, [3]int{0, 1, 7}, true},
		{"nothing left of every year", none, always, -1, ptr(0.0), true, false, 1, 0, [3]int{8, 0, 0}, true},
		{"a rare baseline: many resamples lack it", none, rare, -9 / 8.0, ptr(0.0), true, false, -1, -1, [3]int{1, 7, 0}, false},
		{"a rare baseline, half left", []float64{0, 0, 0, 4.5, 0, 0, 0, 0}, rare, -4.5 / 8, ptr(0.5), true, false, -1, -1, [3]int{1, 7, 0}, false},
	} {
		t.Run(tt.name, func(t *testing.T) {
			c := NewResamples(8, 2000, 2, 1).Compare(tt.option, tt.baseline, 0.9)
			if d := cmp.Diff(tt.difference, c.Difference, near); d != "" || tt.difference == 0 && c.Difference != 0 {
				t.Errorf("difference\n%s", d)
			}
			if d := cmp.Diff(tt.ratio, c.Ratio, near); d != "" {
				t.Errorf("ratio\n%s", d)
			}
			if (c.DifferenceCI != nil) != tt.ci || (c.RatioCI != nil) != tt.ratioCI {
				t.Errorf("intervals %v, %v; want there %v, %v", c.DifferenceCI, c.RatioCI, tt.ci, tt.ratioCI)
			}
			if tt.better >= 0 && (math.Abs(c.ShareBetter-tt.better) > 0.01 || math.Abs(c.ShareEqual-tt.equal) > 0.01) {
				t.Errorf("shares %v, %v; want about %v, %v", c.ShareBetter, c.ShareEqual, tt.better, tt.equal)
			}
			if got := [3]int{c.YearsBetter, c.YearsEqual, c.YearsWorse}; got != tt.years {
				t.Errorf("years %v, want %v", got, tt.years)
			}
			if got := c.ToldApart(0.9); got != tt.apart {
				t.Errorf("told apart %v, want %v: %v", got, tt.apart, c.DifferenceCI)
			}
		})
	}
	// Exactly, not about: equal series are equal in every resample.
	if c := NewResamples(8, 2000, 2, 1).Compare(half, half, 0.9); c.ShareEqual != 1 || c.ShareBetter != 0 || *c.Ratio != 1 {
		t.Errorf("equal series: %+v", c)
	}
	// Nothing left is exactly a ratio of 0.
	if c := NewResamples(8, 2000, 2, 1).Compare(none, []float64{0.1, 0.2, 0.3, 0.7, 0, 1.1, 1.3, 0.1}, 0.9); *c.Ratio != 0 {
		t.Errorf("nothing left: ratio %v", *c.Ratio)
	}
}

// TestCompareWithoutBaseline goes over the limit of 5 % of resamples without a baseline: 1 of 20 may lack it, 2 not.
func TestCompareWithoutBaseline(t *testing.T) {
	for lacking := range 4 {
		rows := make([][]float64, 20)
		for i := range rows {
			rows[i] = []float64{1, 1}
			if i < lacking {
				rows[i] = []float64{2, 0}
			}
		}
		c := byHand(rows...).Compare([]float64{0, 5}, []float64{0, 10}, 0.9)
		if got, want := c.RatioCI != nil, lacking <= 1; got != want {
			t.Errorf("%d of 20 without: interval %v, want %v", lacking, got, want)
		}
		if c.RatioCI != nil && *c.RatioCI != [2]float64{0.5, 0.5} {
			t.Errorf("%d of 20 without: %v, want 0.5 to 0.5 from the others", lacking, *c.RatioCI)
		}
	}
}

// TestCompareCancels: differences that cancel are zero in a resample, however their sum is rounded.
func TestCompareCancels(t *testing.T) {
	r := byHand([]float64{1, 1, 1, 1}, []float64{2, 1, 0, 1}, []float64{0, 2, 1, 1})
	c := r.Compare([]float64{0.1, 0.2, 0, 1}, []float64{0, 0, 0.3, 1}, 0.9) // 0.1 + 0.2 - 0.3 in floats is 5.6e-17
	if c.ShareEqual != 1/3.0 || c.Difference != 0 || *c.Ratio != 1 {
		t.Errorf("%+v, ratio %v", c, *c.Ratio)
	}
}

// TestToldApart has both conditions, each without the other, and the limits at 90 %.
func TestToldApart(t *testing.T) {
	for _, tt := range []struct {
		name          string
		ci            *[2]float64
		better, worse int
		confidence    float64
		want          bool
	}{
		{"both hold", &[2]float64{-3, -1}, 12, 1, 0.9, true},
		{"worse can be told too", &[2]float64{1, 3}, 1, 12, 0.9, true},
		{"interval holds zero", &[2]float64{-3, 0.1}, 12, 1, 0.9, false},
		{"interval ends at zero", &[2]float64{-3, 0}, 12, 1, 0.9, false},
		{"interval begins at zero", &[2]float64{0, 3}, 1, 12, 0.9, false},
		{"no interval", nil, 12, 1, 0.9, false},
		{"five to none is enough at 90 %", &[2]float64{-3, -1}, 5, 0, 0.9, true},
		{"four to none is not", &[2]float64{-3, -1}, 4, 0, 0.9, false},
		{"five to one is not", &[2]float64{-3, -1}, 5, 1, 0.9, false},
		{"p equal to 1 - confidence is enough", &[2]float64{-3, -1}, 5, 0, 0.9375, true},
		{"at 95 % it takes six", &[2]float64{-3, -1}, 5, 0, 0.95, false},
		{"six to none at 95 %", &[2]float64{-3, -1}, 6, 0, 0.95, true},
		{"no year differs", &[2]float64{-3, -1}, 0, 0, 0.9, false},
	} {
		c := Change{DifferenceCI: tt.ci, YearsBetter: tt.better, YearsWorse: tt.worse, YearsEqual: 3}
		if got := c.ToldApart(tt.confidence); got != tt.want {
			t.Errorf("%s: %v, want %v", tt.name, got, tt.want)
		}
	}
	// A p-value equal to 1 - confidence is enough for any numbers of years. Their p-values are whole multiples of a
	// power of two, so exact.
	for better := range 25 {
		for worse := range better {
			c := Change{DifferenceCI: &[2]float64{-3, -1}, YearsBetter: better, YearsWorse: worse}
			n, ways, p := better+worse, 1.0, 0.0
			for k := range worse + 1 {
				p += ways
				ways = ways * float64(n-k) / float64(k+1)
			}
			if p *= math.Ldexp(2, -n); p < 1 && (!c.ToldApart(1-p) || c.ToldApart(1-0.999*p)) {
				t.Errorf("%d to %d: told apart %v at p = %v, %v just below", better, worse, c.ToldApart(1-p), p, c.ToldApart(1-0.999*p))
			}
		}
	}
}

// TestCompareEmpty: no year, one year, no resample.
func TestCompareEmpty(t *testing.T) {
	for _, tt := range []struct {
		years, n int
		equal    float64 // of the resamples, when there are any: without a year all have nothing
	}{{0, 0, 0}, {0, 100, 1}, {1, 0, 0}, {1, 100, 0}, {2, 0, 0}} {
		option, base := make([]float64, tt.years), make([]float64, tt.years)
		for y := range base {
			base[y] = 2
		}
		c := NewResamples(tt.years, tt.n, 2, 1).Compare(option, base, 0.9)
		if c.DifferenceCI != nil || c.RatioCI != nil || c.ToldApart(0.9) || c.ShareEqual != tt.equal || c.YearsBetter != tt.years {
			t.Errorf("%d years, %d resamples: %+v", tt.years, tt.n, c)
		}
		if (c.Ratio != nil) != (tt.years > 0) {
			t.Errorf("%d years, %d resamples: ratio %v", tt.years, tt.n, c.Ratio)
		}
	}
}

// TestCompareProperties: swapping the two turns the signs round, intervals are in order and hold no NaN, and an option
// that has less in every year is better in every resample.
func TestCompareProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		years := rapid.IntRange(2, 45).Draw(t, "years")
		figure := rapid.OneOf(rapid.Just(0.0), rapid.Float64Range(0, 300), rapid.Map(rapid.IntRange(0, 9), func(i int) float64 { return float64(i) }))
		a := rapid.SliceOfN(figure, years, years).Draw(t, "option")
		b := rapid.SliceOfN(figure, years, years).Draw(t, "baseline")
		r := NewResamples(years, 200, 2, rapid.Uint64().Draw(t, "seed"))
		c, back := r.Compare(a, b, 0.9), r.Compare(b, a, 0.9)
		if c.YearsBetter != back.YearsWorse || c.YearsEqual != back.YearsEqual || c.ShareEqual != back.ShareEqual ||
			math.Abs(c.ShareBetter+c.ShareEqual+back.ShareBetter-1) > 1e-12 {
			t.Fatalf("%+v\nswapped %+v", c, back)
		}
		if d := cmp.Diff(c.Difference, -back.Difference, near); d != "" {
			t.Fatal(d)
		}
		if ci := c.DifferenceCI; ci != nil {
			if !(ci[0] <= ci[1]) {
				t.Fatalf("interval %v", *ci)
			}
			if d := cmp.Diff(ci[0], -back.DifferenceCI[1], near); d != "" {
				t.Fatal(d)
			}
		}
		if c.Ratio != nil && !(*c.Ratio >= 0) || c.RatioCI != nil && !(0 <= c.RatioCI[0] && c.RatioCI[0] <= c.RatioCI[1]) {
			t.Fatalf("ratio %v, %v", c.Ratio, c.RatioCI)
		}
		less := make([]float64, years)
		for y := range less {
			b[y]++
			less[y] = b[y] / 2
		}
		if c := r.Compare(less, b, 0.9); c.ShareBetter != 1 || c.DifferenceCI[1] >= 0 || c.ToldApart(0.9) != (years >= 5) {
			t.Fatalf("half in each of %d years: %+v", years, c)
		}
	})
}
