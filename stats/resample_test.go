package stats

import (
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// byHand are resamples that nobody drew: rows are resamples, columns how often each year stands in them.
func byHand(rows ...[]float64) *Resamples {
	r := &Resamples{years: len(rows[0]), n: len(rows)}
	for y := range r.years {
		for _, row := range rows {
			r.weight = append(r.weight, row[y])
		}
	}
	return r
}

// TestIntervalByHand: two years with 0 and 10 give the means 0, 5, 10. At 50 % the upper quarter point of t with one
// degree of freedom is tan(π/4) = 1, so the lower probability is Φ(-√2) = erfc(1)/2 = 0.0786496, its quantile of three
// values lies 2*0.0786496 of the way from 0 to 5, and the upper end mirrors it.
func TestIntervalByHand(t *testing.T) {
	r := byHand([]float64{1, 1}, []float64{0, 2}, []float64{2, 0})
	if d := cmp.Diff([]float64{5, 10, 0}, r.Means([]float64{0, 10})); d != "" {
		t.Error(d)
	}
	lo, hi, ok := r.Interval([]float64{0, 10}, 0.5)
	want := 5 * math.Erfc(1)
	if !ok || math.Abs(lo-want) > 1e-12 || math.Abs(hi-(10-want)) > 1e-12 {
		t.Errorf("[%v, %v] %v, want [%v, %v]", lo, hi, ok, want, 10-want)
	}
}

// TestIntervalLeftOut has the cases without an interval.
func TestIntervalLeftOut(t *testing.T) {
	for _, tt := range []struct {
		name   string
		r      *Resamples
		byYear []float64
		ok     bool
	}{
		{"no year", NewResamples(0, 100, 2, 1), nil, false},
		{"one year", NewResamples(1, 100, 2, 1), []float64{3}, false},
		{"no resample", NewResamples(3, 0, 2, 1), []float64{3, 4, 5}, false},
		{"nothing at all", NewResamples(3, 100, 2, 1), []float64{0, 0, 0}, false},
		{"two years", NewResamples(2, 100, 2, 1), []float64{0, 1}, true},
		{"the same every year", NewResamples(3, 100, 2, 1), []float64{1, 1, 1}, true},
	} {
		lo, hi, ok := tt.r.Interval(tt.byYear, 0.9)
		if ok != tt.ok || !ok && (lo != 0 || hi != 0) || math.IsNaN(lo+hi) {
			t.Errorf("%s: [%v, %v] %v, want %v", tt.name, lo, hi, ok, tt.ok)
		}
	}
}

// TestResamplesFixed holds the resamples of one seed, so that results can be repeated. Each row is one resample, each
// figure how often a year stands in it. A second program, in another language and with a PCG of its own, drew the same.
func TestResamplesFixed(t *testing.T) {
	r := NewResamples(8, 4, 2, 1)
	var got []string
	for i := range r.n {
		row := ""
		for y := range r.years {
			row += fmt.Sprint(r.weight[y*r.n+i])
		}
		got = append(got, row)
	}
	want := []string{"11122100", "22110011", "42000101", "20211101"}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("(-want +got)\n%s", d)
	}
}

// TestResamplesVary compares the spread of the means with the exact one of the stationary bootstrap (Politis & Romano
// 1994, Lemma 1), which follows from two places of a resample i apart being of one block with probability (1-p)^i:
//
//	var = (1/T)*(C_0 + 2*Σ_{i=1}^{T-1} (1 - i/T)*(1-p)^i*C_i)       C_i the circular autocovariance at lag i
//
// The standard error of a variance from n draws that are nearly normal is √(2/n) of it: 1 %. Successive resamples have
// seeds that differ by one; their means must not be correlated.
func TestResamplesVary(t *testing.T) {
	const n = 20000
	rng := rand.New(rand.NewPCG(7, 7))
	for _, years := range []int{2, 7, 25, 40} {
		for _, block := range []float64{1, 2, 5} {
			x := make([]float64, years)
			for y := range x {
				x[y] = 10 * rng.Float64()
				if y > 0 {
					x[y] += 0.7 * x[y-1]
				}
			}
			mean, T := Mean(x), float64(years)
			exact := 0.0
			for lag := range years {
				c := 0.0
				for y := range x {
					c += (x[y] - mean) * (x[(y+lag)%years] - mean) / T
				}
				w := 2 * (1 - float64(lag)/T) * math.Pow(1-1/block, float64(lag))
				if lag == 0 {
					w = 1
				}
				exact += w * c / T
			}
			m := NewResamples(years, n, block, 3).Means(x)
			sum1, sum2, next := 0.0, 0.0, 0.0
			for i, v := range m {
				sum1 += v - mean
				sum2 += (v - mean) * (v - mean)
				if i > 0 {
					next += (v - mean) * (m[i-1] - mean)
				}
			}
			if got := sum2 / n; math.Abs(got/exact-1) > 0.04 {
				t.Errorf("%d years, blocks of %v: variance %v, exact %v", years, block, got, exact)
			}
			if off := sum1 / n / math.Sqrt(exact/n); math.Abs(off) > 4 {
				t.Errorf("%d years, blocks of %v: the mean is off by %.1f standard errors", years, block, off)
			}
			if cor := next / sum2; math.Abs(cor) > 4/math.Sqrt(n) {
				t.Errorf("%d years, blocks of %v: successive resamples have correlation %v", years, block, cor)
			}
		}
	}
}

// TestResamplesWhole: every resample has as many years as the record, one block for ever has each year once, and a
// resample does not depend on how many are drawn.
func TestResamplesWhole(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		years, n := rapid.IntRange(0, 50).Draw(t, "years"), rapid.IntRange(0, 40).Draw(t, "n")
		block := rapid.SampledFrom([]float64{0, 0.5, 1, 1.5, 2, 10, 1e300, math.Inf(1), math.NaN()}).Draw(t, "block")
		seed := rapid.Uint64().Draw(t, "seed")
		r := NewResamples(years, n, block, seed)
		for i := range n {
			s := 0.0
			for y := range years {
				w := r.weight[y*n+i]
				s += w
				if math.IsInf(block, 1) && w != 1 {
					t.Fatalf("one block: year %d stands %v times in resample %d", y, w, i)
				}
			}
			if s != float64(years) {
				t.Fatalf("resample %d has %v years, want %d", i, s, years)
			}
		}
		x := make([]float64, years)
		for y := range x {
			x[y] = float64(y)
		}
		if more := NewResamples(years, n+7, block, seed).Means(x); !slices.Equal(more[:n], r.Means(x)) {
			t.Fatal("the first resamples depend on how many there are")
		}
	})
}

// TestResamplesRepeat: the same figures on one CPU and on several, from one goroutine and from many, in any order.
func TestResamplesRepeat(t *testing.T) {
	series := make([][]float64, 12)
	rng := rand.New(rand.NewPCG(1, 2))
	for s := range series {
		series[s] = make([]float64, 30)
		for y := range series[s] {
			series[s][y] = math.Floor(5*rng.Float64()) * rng.Float64()
		}
	}
	run := func(procs int, backwards bool) []string {
		defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(procs))
		r := NewResamples(30, 500, 2, 99)
		out := make([]string, len(series))
		var wg sync.WaitGroup
		for k := range series {
			s := k
			if backwards {
				s = len(series) - 1 - k
			}
			wg.Go(func() {
				c := r.Compare(series[s], series[0], 0.9)
				lo, hi, ok := r.Interval(series[s], 0.9)
				out[s] = fmt.Sprint(c.Difference, c.DifferenceCI, c.RatioCI, c.ShareBetter, c.ShareEqual, lo, hi, ok)
			})
		}
		wg.Wait()
		return out
	}
	want := run(1, false)
	for _, procs := range []int{1, 2, 8} {
		if d := cmp.Diff(want, run(procs, true)); d != "" {
			t.Errorf("GOMAXPROCS %d\n%s", procs, d)
		}
	}
}

// TestIntervalCovers draws many short records from a distribution that is known, independent and not skewed, and
// counts how often the interval holds the true mean: about as often as it says. It is there to notice a wrong side, a
// wrong tail or a forgotten expansion, not to measure the coverage.
func TestIntervalCovers(t *testing.T) {
	const records, years = 1000, 20
	rng := rand.New(rand.NewPCG(5, 6))
	r := NewResamples(years, 400, 1, 1)
	held, below := 0, 0
	for range records {
		x := make([]float64, years)
		for y := range x {
			x[y] = 10 + rng.NormFloat64()
		}
		lo, hi, _ := r.Interval(x, 0.9)
		switch {
		case hi < 10:
			below++
		case lo <= 10:
			held++
		}
	}
	if share := float64(held) / records; math.Abs(share-0.9) > 0.03 { // three standard errors
		t.Errorf("the interval holds the mean in %v of the records, want 0.90", share)
	}
	if miss := records - held; below < miss/4 || below > miss*3/4 {
		t.Errorf("%d of %d misses lie below", below, miss)
	}
}

// TestIntervalFallsShort repeats some of the figures in Interval's doc comment: independent years, a share of them
// zero and the others exponential or its square, blocks of 2 years. The tolerance is three standard errors.
func TestIntervalFallsShort(t *testing.T) {
	for _, tt := range []struct {
		years  int
		zero   float64
		square bool
		want   float64
	}{{20, 0, false, 0.86}, {20, 0.85, false, 0.74}, {40, 0.85, false, 0.80}, {20, 0.85, true, 0.56}} {
		const records = 1000
		rng := rand.New(rand.NewPCG(3, 9))
		r := NewResamples(tt.years, 500, 2, 1)
		mean := 1 - tt.zero
		if tt.square {
			mean *= 2
		}
		held := 0
		for range records {
			x := make([]float64, tt.years)
			for y := range x {
				if rng.Float64() < tt.zero {
					continue
				}
				if x[y] = rng.ExpFloat64(); tt.square {
					x[y] *= x[y]
				}
			}
			if lo, hi, ok := r.Interval(x, 0.9); ok && lo <= mean && mean <= hi {
				held++
			}
		}
		if share := float64(held) / records; math.Abs(share-tt.want) > 0.045 {
			t.Errorf("%+v: held in %v", tt, share)
		}
	}
}
