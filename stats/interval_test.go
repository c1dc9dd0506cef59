package stats

import (
	"encoding/csv"
	"math"
	"os"
	"slices"
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

// TestGarwood checks published limits of Poisson counts. Columns: two-sided 95 % (Garwood 1936, Biometrika
// 28:437-442), the upper end of 90 % (one-sided 95 %), and both ends of the one-sided 84.13 % of Gehrels 1986,
// Astrophys. J. 303:336-346, tables 1 and 2 (those two columns from memory; all recomputed with R's poisson.test).
func TestGarwood(t *testing.T) {
	const gehrels = 2*0.841344746068543 - 1 // Φ(1) on each side
	for _, tt := range []struct {
		n, lo95, hi95, hi90, loGeh, hiGeh float64
	}{
		{0, 0, 3.6889, 2.9957, 0, 1.841},
		{1, 0.0253, 5.5716, 4.7439, 0.173, 3.300},
		{2, 0.2422, 7.2247, 6.2958, 0.708, 4.638},
		{3, 0.6187, 8.7673, 7.7537, 1.367, 5.918},
		{4, 1.0899, 10.2416, 9.1535, 2.086, 7.163},
		{5, 1.6235, 11.6683, 10.5130, 2.840, 8.382},
		{6, 2.2019, 13.0595, 11.8424, 3.620, 9.584},
		{7, 2.8144, 14.4227, 13.1481, 4.419, 10.770},
		{8, 3.4538, 15.7632, 14.4346, 5.232, 11.945},
		{9, 4.1154, 17.0848, 15.7052, 6.057, 13.110},
		{10, 4.7954, 18.3904, 16.9622, 6.891, 14.267},
		{20, 12.2165, 30.8884, 29.0620, 15.566, 25.547},
		{50, 37.1110, 65.9188, 63.2871, 42.953, 58.118},
	} {
		lo, hi := PoissonInterval(tt.n, 1, 0.95)
		within(t, 0.5001e-4, "95 % lower", tt.n, lo, tt.lo95)
		within(t, 0.5001e-4, "95 % upper", tt.n, hi, tt.hi95)
		_, hi = PoissonInterval(tt.n, 1, 0.90)
		within(t, 0.5001e-4, "90 % upper", tt.n, hi, tt.hi90)
		lo, hi = PoissonInterval(tt.n, 1, gehrels)
		within(t, 0.5001e-3, "84.13 % lower", tt.n, lo, tt.loGeh)
		within(t, 0.5001e-3, "84.13 % upper", tt.n, hi, tt.hiGeh)
	}
	// poisson.test(5, 94.32) of R: a rate, not a number.
	lo, hi := PoissonInterval(5, 94.32, 0.95)
	within(t, 1e-8, "rate lower", 5, lo, 0.01721254)
	within(t, 1e-8, "rate upper", 5, hi, 0.12371005)
	// None in 40 years: the rule of three (Eypasch et al. 1995, BMJ 311:619), 3/40, is the rounded upper end of 90 %.
	if lo, hi = PoissonInterval(0, 40, 0.9); lo != 0 || math.Abs(hi-math.Log(20)/40) > 1e-15 || math.Abs(hi-3.0/40) > 2e-4 {
		t.Errorf("none in 40 years: %v to %v", lo, hi)
	}
}

// TestClopperPearson checks the rows "exact" of Newcombe 1998, Statist. Med. 17:857-872, Table I (from memory;
// recomputed with R's binom.test), and 5 of 25 of the tables of Conover 1999.
func TestClopperPearson(t *testing.T) {
	for _, tt := range []struct {
		k              float64
		n              int
		lo, hi, digits float64
	}{
		{81, 263, 0.2527, 0.3676, 1e-4},
		{15, 148, 0.0578, 0.1617, 1e-4},
		{0, 20, 0, 0.1684, 1e-4},
		{1, 29, 0.0009, 0.1776, 1e-4},
		{5, 25, 0.068, 0.407, 1e-3},
		{20, 20, 1 - 0.1684, 1, 1e-4},
	} {
		lo, hi := BinomialInterval(tt.k, tt.n, 0.95)
		within(t, 0.5001*tt.digits, "lower", tt.k, lo, tt.lo)
		within(t, 0.5001*tt.digits, "upper", tt.k, hi, tt.hi)
	}
}

func within(t *testing.T, tol float64, what string, n, got, want float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s, n = %v: %.10g, want %g", what, n, got, want)
	}
}

// TestAgainstR compares with R's own tests and quantiles: see the head of testdata/ref/intervals.csv. The tolerance is
// relative; the two libraries agree to a few 1e-13 at worst.
func TestAgainstR(t *testing.T) {
	f, err := os.Open("../testdata/ref/intervals.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	rows, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	same := func(row []string, got, want float64) {
		t.Helper()
		if !(math.Abs(got-want) <= 1e-11*math.Abs(want)) {
			t.Errorf("%v: got %.17g", row, got)
		}
	}
	// Counts well below one have lower limits of 1e-20 and less, which are zero but for the formula.
	nearly := func(row []string, got, want float64) {
		t.Helper()
		if !(math.Abs(got-want) <= max(1e-11*math.Abs(want), 1e-13)) {
			t.Errorf("%v: got %.17g", row, got)
		}
	}
	sample := []float64{5, 1, 4, 1, 9, 2.6, 5.35}
	slices.Sort(sample)
	seen := map[string]int{}
	for _, row := range rows[1:] {
		v := make([]float64, len(row))
		for i, s := range row[1:] {
			if v[i+1], err = strconv.ParseFloat(s, 64); err != nil {
				t.Fatal(err)
			}
		}
		c, k, n, a, b := v[1], v[2], int(v[3]), v[4], v[5]
		seen[row[0]]++
		switch row[0] {
		case "poisson":
			lo, hi := PoissonInterval(k, 1, c)
			same(row, lo, a)
			same(row, hi, b)
		case "binomial":
			lo, hi := BinomialInterval(k, n, c)
			same(row, lo, a)
			same(row, hi, b)
		case "gamma":
			lo, hi := PoissonInterval(k, 1, c)
			nearly(row, lo, a)
			same(row, hi, b)
		case "beta":
			lo, hi := BinomialInterval(k, n, c)
			nearly(row, lo, a)
			nearly(row, hi, b)
		case "expanded":
			same(row, expandedTail(n, c), b)
		case "sign":
			same(row, SignTest(int(k), n), a)
			same(row, SignTest(n, int(k)), a)
		case "quantile":
			same(row, Quantile(sample, c), a)
		default:
			t.Errorf("unknown row %v", row)
		}
	}
	if len(seen) != 7 || len(rows) < 500 {
		t.Errorf("the table has %v", seen)
	}
}

// TestExpandedTail starts from upper 5 % points of Student's t as printed in the table of the NIST/SEMATECH e-Handbook
// of Statistical Methods, three decimals, and asks for the tail that belongs to them within that rounding.
func TestExpandedTail(t *testing.T) {
	for _, tt := range []struct {
		years int
		t     float64
	}{{2, 6.314}, {3, 2.920}, {5, 2.132}, {10, 1.833}, {20, 1.729}, {30, 1.699}, {41, 1.684}, {61, 1.671}, {101, 1.660}} {
		n := float64(tt.years)
		tailOf := func(q float64) float64 { return math.Erfc(math.Sqrt(n/(n-1))*q/math.Sqrt2) / 2 }
		got := expandedTail(tt.years, 0.90)
		if hi, lo := tailOf(tt.t-0.00051), tailOf(tt.t+0.00051); !(lo <= got && got <= hi) {
			t.Errorf("%d years: %v, want between %v and %v", tt.years, got, lo, hi)
		}
	}
	// With ever more years nothing is left of the expansion.
	if got := expandedTail(1e7, 0.90); math.Abs(got-0.05) > 1e-7 {
		t.Errorf("very many years: %v, want 0.05", got)
	}
}

func TestSignTest(t *testing.T) {
	for _, tt := range []struct {
		better, worse int
		want          float64
	}{
		{0, 0, 1}, {1, 0, 1}, {4, 0, 0.125}, {5, 0, 0.0625}, {0, 5, 0.0625}, {3, 3, 1},
		{6, 1, 2 * (1 + 7) / 128.0}, {2, 8, 2 * (1 + 10 + 45) / 1024.0},
	} {
		if got := SignTest(tt.better, tt.worse); math.Abs(got-tt.want) > 1e-15 {
			t.Errorf("SignTest(%d, %d) = %v, want %v", tt.better, tt.worse, got, tt.want)
		}
	}
}

// TestIntervalsCover is the property that makes these intervals exact: at either end the tail beyond the count has the
// probability asked for. The sums are over the probabilities of single counts.
func TestIntervalsCover(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 60).Draw(t, "n")
		k := rapid.IntRange(0, n).Draw(t, "k")
		c := rapid.Float64Range(0.05, 0.995).Draw(t, "confidence")
		a := (1 - c) / 2
		binomial := func(p float64, from, to int) float64 {
			s := 0.0
			for i := from; i <= to; i++ {
				x, _ := math.Lgamma(float64(n + 1))
				y, _ := math.Lgamma(float64(i + 1))
				z, _ := math.Lgamma(float64(n - i + 1))
				s += math.Exp(x - y - z + float64(i)*math.Log(p) + float64(n-i)*math.Log1p(-p))
			}
			return s
		}
		poisson := func(m float64, from, to int) float64 {
			s := 0.0
			for i := from; i <= to; i++ {
				x, _ := math.Lgamma(float64(i + 1))
				s += math.Exp(float64(i)*math.Log(m) - m - x)
			}
			return s
		}
		lo, hi := BinomialInterval(float64(k), n, c)
		if k > 0 && math.Abs(binomial(lo, k, n)-a) > 1e-9 || k < n && math.Abs(binomial(hi, 0, k)-a) > 1e-9 {
			t.Fatalf("binomial %d of %d: [%v, %v]", k, n, lo, hi)
		}
		lo, hi = PoissonInterval(float64(k), 1, c)
		if k > 0 && math.Abs(1-poisson(lo, 0, k-1)-a) > 1e-9 || math.Abs(poisson(hi, 0, k)-a) > 1e-9 {
			t.Fatalf("poisson %d: [%v, %v]", k, lo, hi)
		}
	})
}

// TestFractionsOfACount: limits of counts with a fraction lie between those of the whole counts on either side, rise
// with the count, and do not jump where a count is whole or none or all.
func TestFractionsOfACount(t *testing.T) {
	const rounding = 1e-12
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 120).Draw(t, "n")
		whole := rapid.IntRange(0, n-1).Draw(t, "whole")
		c := rapid.Float64Range(0.05, 0.999).Draw(t, "confidence")
		part := rapid.Float64Range(0, 1).Draw(t, "part")
		more := rapid.Float64Range(0, 1).Draw(t, "more")
		below := float64(whole)
		k := below + min(part, more)
		next := below + max(part, more)
		for name, limits := range map[string]func(float64) (float64, float64){
			"poisson":  func(k float64) (float64, float64) { return PoissonInterval(k, float64(n), c) },
			"binomial": func(k float64) (float64, float64) { return BinomialInterval(k, n, c) },
		} {
			last := [2]float64{math.Inf(-1), math.Inf(-1)}
			for _, x := range []float64{below, k, next, below + 1} {
				lo, hi := limits(x)
				rate := x / float64(n)
				if !(lo >= last[0]-rounding && hi >= last[1]-rounding) || !(lo <= rate+rounding && hi >= rate-rounding) {
					t.Fatalf("%s, %v of %d at %v: %v to %v after %v", name, x, n, c, lo, hi, last)
				}
				last = [2]float64{lo, hi}
			}
			const little = 1e-9
			for _, x := range []float64{below, below + 1} {
				lo, hi := limits(x)
				for _, by := range []float64{-little, little} {
					if x+by < 0 || x+by > float64(n) {
						continue
					}
					if l, h := limits(x + by); math.Abs(l-lo) > 1e-7 || math.Abs(h-hi) > 1e-7 {
						t.Fatalf("%s, %v of %d at %v: %v to %v, beside it %v to %v", name, x, n, c, lo, hi, l, h)
					}
				}
			}
		}
	})
}

// TestFractionsByHand has limits in closed form. A gamma distribution of shape 1/2 is half the square of a normal
// variable; its quantile at 5 % is that of a normal variable at 52.5 %, 0.0627068 (from memory, recomputed from the
// error function). A beta distribution of shapes 1/2 and 1/2 is the arcsine law: its p-quantile is sin²(πp/2).
func TestFractionsByHand(t *testing.T) {
	z := math.Sqrt2 * math.Erfinv(0.05)
	within(t, 0.5e-7, "z", 0.5, z, 0.0627068)
	lo, _ := PoissonInterval(0.5, 1, 0.9)
	within(t, 1e-14, "lower", 0.5, lo, z*z/2)
	// B(0.95; 3/2, 1/2) of half an outcome in one trial solves (2/π)(asin(√x) - √(x(1-x))) = 0.95.
	_, hi := BinomialInterval(0.5, 1, 0.9)
	within(t, 1e-12, "upper", 0.5, 2/math.Pi*(math.Asin(math.Sqrt(hi))-math.Sqrt(hi*(1-hi))), 0.95)
	// and its mirror the lower end.
	lo, _ = BinomialInterval(0.5, 1, 0.9)
	within(t, 1e-12, "lower", 0.5, lo, 1-hi)
}

func TestQuantile(t *testing.T) {
	x := []float64{1, 2, 3, 4}
	for _, tt := range []struct{ p, want float64 }{{0, 1}, {1, 4}, {0.5, 2.5}, {1 / 3.0, 2}, {0.25, 1.75}} {
		if got := Quantile(x, tt.p); got != tt.want {
			t.Errorf("Quantile(%v) = %v, want %v", tt.p, got, tt.want)
		}
	}
	if got := Quantile([]float64{7}, 0.3); got != 7 {
		t.Errorf("of one value: %v", got)
	}
	if got := Quantile([]float64{1, math.Inf(1)}, 0); got != 1 {
		t.Errorf("smallest of two, one infinite: %v", got)
	}
	for _, bad := range []float64{Quantile(nil, 0.5), Quantile(x, -0.1), Quantile(x, 1.1), Quantile(x, math.NaN())} {
		if !math.IsNaN(bad) {
			t.Errorf("no quantile, got %v", bad)
		}
	}
}

// TestNothingKnown: without a year or a trial every rate and every probability is possible.
func TestNothingKnown(t *testing.T) {
	if lo, hi := PoissonInterval(0, 0, 0.9); lo != 0 || !math.IsInf(hi, 1) {
		t.Errorf("rate: %v to %v", lo, hi)
	}
	if lo, hi := BinomialInterval(0, 0, 0.9); lo != 0 || hi != 1 {
		t.Errorf("probability: %v to %v", lo, hi)
	}
	if got := Mean(nil); got != 0 {
		t.Errorf("mean of no years: %v", got)
	}
}

func TestMistakesPanic(t *testing.T) {
	r := NewResamples(3, 10, 2, 1)
	for name, f := range map[string]func(){
		"confidence 1":      func() { PoissonInterval(1, 1, 1) },
		"confidence NaN":    func() { BinomialInterval(1, 2, math.NaN()) },
		"confidence 0":      func() { r.Interval(make([]float64, 3), 0) },
		"more than all":     func() { BinomialInterval(3, 2, 0.9) },
		"negative events":   func() { PoissonInterval(-1, 2, 0.9) },
		"NaN events":        func() { PoissonInterval(math.NaN(), 2, 0.9) },
		"a little too many": func() { BinomialInterval(2.0000001, 2, 0.9) },
		"NaN of 2":          func() { BinomialInterval(math.NaN(), 2, 0.9) },
		"nothing to mean":   func() { Average(nil, nil) },
		"weights too few":   func() { Average(make([]Exceedance, 2), []float64{1}) },
		"weights too light": func() { Average(make([]Exceedance, 2), []float64{0.5, 0.4}) },
		"negative weight":   func() { Average(make([]Exceedance, 2), []float64{1.5, -0.5}) },
		"uneven series":     func() { AverageSeries([][]float64{{1}, {1, 2}}, []float64{0.5, 0.5}) },
		"losses of others":  func() { Losses(nil, plain(0), make([]LossBand, 2), make([]Exceedance, 1)) },
		"bands falling":     func() { Losses(nil, plain(0), []LossBand{{Level: 2}, {Level: 1}}, make([]Exceedance, 2)) },
		"losses too long":   func() { Losses([]float64{1}, plain(2), nil, nil) },
		"negative years":    func() { SignTest(-1, 2) },
		"other years":       func() { r.Means(make([]float64, 2)) },
		"other years again": func() { r.Compare(make([]float64, 3), make([]float64, 4), 0.9) },
		"told apart at 1.5": func() { Change{}.ToldApart(1.5) },
	} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%s: no panic", name)
				}
			}()
			f()
		}()
	}
}
