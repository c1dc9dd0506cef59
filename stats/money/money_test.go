package money

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

var never = math.Inf(1)

// printed is a figure from a source with the number of its decimals; it must be met within half a unit of the last.
func printed(t *testing.T, what string, got, want float64, decimals int) {
	t.Helper()
	if !(math.Abs(got-want) <= 0.5001*math.Pow(10, -float64(decimals))) {
		t.Errorf("%s: %.9g, want %.*f", what, got, decimals, want)
	}
}

// same compares figures that were worked out in another way.
func same(t interface{ Fatalf(string, ...any) }, what string, got, want, tolerance float64) {
	if !(math.Abs(got-want) <= tolerance*max(1, math.Abs(want))) {
		t.Fatalf("%s: %.17g, want %.17g", what, got, want)
	}
}

// TestFactors has printed interest factors. NaN: not in the source.
func TestFactors(t *testing.T) {
	no := math.NaN()
	for _, source := range []struct {
		name       string
		digits     [3]int // decimals of P/F, P/A, A/P
		rate       float64
		n          int
		pf, pa, ap float64
	}{
		// Tables of discrete compounding at 0.25 %, Blank & Tarquin, Engineering Economy, table 1.
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 1, 0.9975, 0.9975, 1.00250},
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 2, 0.9950, 1.9925, 0.50188},
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 5, 0.9876, 4.9627, 0.20150},
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 10, 0.9753, 9.8639, 0.10138},
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 20, 0.9513, 19.4845, 0.05132},
		{"0.25 %", [3]int{4, 4, 5}, 0.0025, 25, 0.9395, 24.2055, 0.04131},
		// The same rate over long times, tables of Newnan, Eschenbach & Lavelle, Engineering Economic Analysis, appendix.
		{"0.25 %, long", [3]int{4, 0, 4}, 0.0025, 100, 0.7790, no, 0.0113},
		{"0.25 %, long", [3]int{4, 0, 5}, 0.0025, 240, 0.5492, no, 0.00555},
		{"0.25 %, long", [3]int{4, 0, 5}, 0.0025, 360, 0.4070, no, 0.00422},
		{"0.25 %, long", [3]int{4, 0, 5}, 0.0025, 480, 0.3016, no, 0.00358},
		// Fraser and others, Engineering Economics, appendix A, 0.5 %.
		{"0.5 %", [3]int{5, 4, 5}, 0.005, 10, 0.95135, 9.7304, 0.10277},
		{"0.5 %", [3]int{5, 3, 5}, 0.005, 20, 0.90506, 18.987, 0.05267},
		{"0.5 %", [3]int{5, 3, 5}, 0.005, 25, 0.88277, 23.446, 0.04265},
		{"0.5 %", [3]int{5, 0, 5}, 0.005, 50, 0.77929, no, 0.02265},
		{"0.5 %", [3]int{5, 0, 5}, 0.005, 100, 0.60729, no, 0.01273},
		// Factors used in printed solutions to Blank & Tarquin, chapter 9.
		{"solutions", [3]int{0, 4, 0}, 0.06, 20, no, 11.4699, no},
		{"solutions", [3]int{0, 0, 6}, 0.08, 10, no, no, 0.149029},
		{"solutions", [3]int{0, 0, 6}, 0.08, 20, no, no, 0.101852},
		// Standard table values, from memory, recomputed.
		{"standard", [3]int{4, 4, 4}, 0.035, 30, 0.3563, 18.3920, 0.0544},
		{"standard", [3]int{4, 4, 4}, 0.05, 10, 0.6139, 7.7217, 0.1295},
		{"standard", [3]int{4, 4, 4}, 0.05, 20, 0.3769, 12.4622, 0.0802},
		{"standard", [3]int{4, 4, 4}, 0.05, 50, 0.0872, 18.2559, 0.0548},
		{"standard", [3]int{4, 4, 4}, 0.06, 30, 0.1741, 13.7648, 0.0726},
		{"standard", [3]int{4, 4, 4}, 0.08, 10, 0.4632, 6.7101, 0.1490},
		{"standard", [3]int{4, 4, 4}, 0.08, 25, 0.1460, 10.6748, 0.0937},
		{"standard", [3]int{4, 4, 4}, 0.10, 20, 0.1486, 8.5136, 0.1175},
	} {
		for k, want := range []float64{source.pf, source.pa, source.ap} {
			got := []float64{Discount(source.rate, float64(source.n)), Annuity(source.rate, source.n), Recovery(source.rate, source.n)}[k]
			if !math.IsNaN(want) {
				printed(t, source.name+" "+[]string{"P/F", "P/A", "A/P"}[k], got, want, source.digits[k])
			}
		}
	}
	// Table of equal series present worth factors, ASHRAE Pocket Guide for HVAC, 2013. Its figure for 7 years at 10 %,
	// 4.8, is cut off after the first decimal and left out.
	rates := []float64{0.025, 0.03, 0.035, 0.04, 0.045, 0.07, 0.10, 0.15}
	for n, row := range map[int][]float64{
		7:  {6.35, 6.23, 6.11, 6.00, 5.89, 5.39, 0, 4.16},
		10: {8.75, 8.53, 8.32, 8.11, 7.91, 7.02, 6.14, 5.02},
		15: {12.38, 11.94, 11.52, 11.12, 10.74, 9.11, 7.61, 5.85},
	} {
		for k, want := range row {
			if want > 0 {
				printed(t, "equal series", Annuity(rates[k], n), want, 2)
			}
		}
	}
	// For ever: P/A = 1/i, A/P = i (head of the same tables).
	same(t, "for ever", Annuity(0.0025, 1e6), 400, 1e-14)
	same(t, "for ever", Recovery(0.05, 1e6), 0.05, 1e-14)
}

// TestFallingRates multiplies discount factors of spans with rates of their own: HM Treasury Green Book (2003), annex
// 6, table 6.1: 3.5 % for 30 years, then 3 % to year 75, 2.5 % to 125, 2 % to 200, 1.5 % to 300, 1 % after. The factors
// are printed in the appendix on discounting of the Northern Ireland Guide to Expenditure Appraisal and Evaluation,
// table 1; those of years 31 and 76 are computed. Its table of annuity factors is wrong from year 2 on (14.2339 for 20
// years is 14.2124) and not used.
func TestFallingRates(t *testing.T) {
	factor := func(year float64) float64 {
		f, from := 1.0, 0.0
		for _, span := range []struct{ rate, to float64 }{{0.035, 30}, {0.03, 75}, {0.025, 125}, {0.02, 200}, {0.015, 300}, {0.01, 500}} {
			f *= Discount(span.rate, max(0, min(year, span.to)-from))
			from = span.to
		}
		return f
	}
	for year, want := range []float64{1, 0.9662, 0.9335, 0.9019, 0.8714, 0.8420, 0.8135, 0.7860, 0.7594, 0.7337, 0.7089,
		0.6849, 0.6618, 0.6394, 0.6178, 0.5969, 0.5767, 0.5572, 0.5384, 0.5202, 0.5026,
		0.4856, 0.4692, 0.4533, 0.4380, 0.4231, 0.4088, 0.3950, 0.3817, 0.3687, 0.3563} {
		printed(t, "year", factor(float64(year)), want, 4)
		printed(t, "one rate", Discount(0.035, float64(year)), want, 4)
	}
	for year, want := range map[float64]float64{31: 0.3459, 40: 0.2651, 50: 0.1973, 60: 0.1468, 75: 0.0942, 76: 0.0919, 80: 0.0833,
		90: 0.0651, 100: 0.0508, 125: 0.0274, 150: 0.0167, 200: 0.0062, 250: 0.0029, 300: 0.0014, 350: 0.0009, 400: 0.0005, 500: 0.0002} {
		printed(t, "late year", factor(year), want, 4)
	}
	sum := 0.0
	for year := range 60 {
		sum += factor(float64(year))
	}
	printed(t, "sum of years 0 to 59", sum, 26.2285, 4) // computed
	printed(t, "100 at 0, 15, 30 and 45 years", 100*(1+factor(15)+factor(30)+factor(45)), 218.185, 3)
}

// TestWorkedExamples has examples of Panneerselvam, Engineering Economics; the answers are computed, since the printed
// ones come from rounded factors.
func TestWorkedExamples(t *testing.T) {
	printed(t, "3.6, repayment of a loan", 1e6*Recovery(0.18, 15), 196402.78, 2)
	for _, tt := range []struct{ capital, income, want float64 }{
		{1.2e6, 0.4e6, 476988.83}, {2e6, 0.6e6, 515483.25}, {1.8e6, 0.5e6, 296236.04},
	} {
		printed(t, "4.1, present worth", -Plan{Capital: tt.capital, Life: never, PerYear: -tt.income, FlushedEvery: never}.PresentValue(0.20, 10), tt.want, 2)
	}
	for _, tt := range []struct{ capital, perYear, want float64 }{{450000, 27000, 607878.99}, {540000, 28500, 706650.05}} {
		printed(t, "4.2, present cost", Plan{Capital: tt.capital, Life: never, PerYear: tt.perYear, FlushedEvery: never}.PresentValue(0.15, 15), tt.want, 2)
	}
	for _, tt := range []struct{ capital, perYear, want float64 }{{500000, 200000, 306941.06}, {400000, 300000, 385552.85}, {600000, 150000, 278329.27}} {
		p := Plan{Capital: tt.capital, Life: never, PerYear: tt.perYear, FlushedEvery: never}
		printed(t, "6.2, equal annual cost", p.PresentValue(0.20, 15)*Recovery(0.20, 15), tt.want, 2)
	}
}

// TestCapitalizedCost is the example of Blank & Tarquin, Engineering Economy, on a cost that runs for ever at 5 %:
// 150 000 now and 50 000 after 10 years (180 695), 15 000 every 13 years (847 a year), 5000 a year for ever, and 3000 a
// year more from year 5 on (49 362); in all 346 997, or 17 350 a year. A horizon of 2600 years is for ever.
func TestCapitalizedCost(t *testing.T) {
	const rate, forEver = 0.05, 2600
	once := 150000 + 50000*Discount(rate, 10)
	if math.Abs(once-180695) > 50000*0.5e-4 { // it takes P/F to four decimals
		t.Errorf("now and once more: %v", once)
	}
	upgrade := Plan{Life: never, PerFlush: 15000, FlushedEvery: 13}
	printed(t, "every 13 years, a year", upgrade.PresentValue(rate, forEver)*rate, 847, 0)
	upgrade.PerYear = 5000
	printed(t, "with 5000 a year, a year", upgrade.PresentValue(rate, forEver)*rate, 847+5000, 0)
	more := 3000 * BenefitFactor(rate, forEver, 4)
	printed(t, "from year 5", more, 49362, 0)
	all := once + upgrade.PresentValue(rate, forEver) + more
	if math.Abs(all-346997) > 0.5/rate { // its 847 and 5000 a year are rounded to 1
		t.Errorf("in all %v", all)
	}
	printed(t, "a year", all*rate, 17350, 0)
}

// TestPlan is worked out by hand, at rates that leave simple numbers.
func TestPlan(t *testing.T) {
	works := Plan{Capital: 1000, Life: 20, PerYear: 10, PerFlush: 50, FlushedEvery: 8}
	for _, tt := range []struct {
		name            string
		plan            Plan
		rate            float64
		horizon         int
		renewed, flush  int
		want, tolerance float64
	}{
		// at 0 %: 1000, renewed at 20 and 40, 50 years of 10, flushed at 8, 16, 24, 32, 40, 48
		{"no interest", works, 0, 50, 2, 6, 3000 + 500 + 300, 0},
		{"the horizon ends as the life does", works, 0, 40, 1, 4, 2000 + 400 + 200, 0},
		{"a year later", works, 0, 41, 2, 5, 3000 + 410 + 250, 0},
		{"within the first life", works, 0, 20, 0, 2, 1000 + 200 + 100, 0},
		{"no year", works, 0, 0, 0, 0, 1000, 0},
		{"one year", works, 0, 1, 0, 0, 1010, 0},
		{"nothing", Plan{Life: never, FlushedEvery: never}, 0.03, 50, 0, 0, 0, 0},
		{"never renewed or flushed", Plan{100, never, 0, 7, never}, 0.03, 200, 0, 0, 100, 0},
		// at 100 %: worth half after a year, a quarter after two ...
		{"all at 100 %", Plan{64, 2, 16, 32, 3}, 1, 6, 2, 1, 64 + 16 + 4 + 16*(1-1/64.0) + 4, 1e-14},
		{"a flush at a renewal counts", Plan{64, 2, 0, 32, 2}, 1, 6, 2, 2, 64 + 16 + 4 + 8 + 2, 1e-14},
		{"parts of years", Plan{16, 0.5, 0, 8, 1.5}, 3, 2, 3, 1, 16 + 8 + 4 + 2 + 1, 1e-14}, // at 300 %: half after half a year
		{"a life of less than the horizon by rounding only", Plan{1, 1.0 / 3, 0, 1, 0.1}, 0, 1, 2, 9, 3 + 9, 0},
		{"negative rate", Plan{1, 1, 0, 0, never}, -0.5, 3, 2, 0, 1 + 2 + 4, 1e-14},
	} {
		if got := tt.plan.PresentValue(tt.rate, tt.horizon); !(math.Abs(got-tt.want) <= tt.tolerance*tt.want) {
			t.Errorf("%s: %.17g, want %v", tt.name, got, tt.want)
		}
		if r, f := tt.plan.Renewals(tt.horizon), tt.plan.Flushes(tt.horizon); r != tt.renewed || f != tt.flush {
			t.Errorf("%s: renewed %d times, flushed %d; want %d, %d", tt.name, r, f, tt.renewed, tt.flush)
		}
	}
	// Any whole part of any horizon: the last multiple is the horizon itself and is not paid.
	for horizon := 1; horizon <= 200; horizon++ {
		for parts := 1; parts <= 400; parts++ {
			if got := (Plan{Life: float64(horizon) / float64(parts)}).Renewals(horizon); got != parts-1 {
				t.Fatalf("a life of %d/%d years: renewed %d times", horizon, parts, got)
			}
		}
	}
	if got := (Plan{Life: 0.01}).Renewals(200); got != 19999 {
		t.Errorf("a life of 0.01 years: renewed %d times", got)
	}
}

// TestPlanCashFlows adds up the payments one by one.
func TestPlanCashFlows(t *testing.T) {
	span := rapid.OneOf(rapid.Float64Range(0.3, 80), rapid.Just(never), rapid.Map(rapid.IntRange(1, 60), func(n int) float64 { return float64(n) }))
	rapid.Check(t, func(t *rapid.T) {
		p := Plan{
			Capital: rapid.Float64Range(0, 1e6).Draw(t, "capital"), Life: span.Draw(t, "life"),
			PerYear:  rapid.Float64Range(0, 1e4).Draw(t, "per year"),
			PerFlush: rapid.Float64Range(0, 1e5).Draw(t, "per flush"), FlushedEvery: span.Draw(t, "flushed every"),
		}
		rate := rapid.OneOf(rapid.Float64Range(0, 0.2), rapid.Float64Range(-0.02, 1), rapid.SampledFrom([]float64{0, 1e-15, 1e-9, 1e-5})).Draw(t, "rate")
		horizon := rapid.IntRange(1, 120).Draw(t, "horizon")
		worth := func(amount, years float64) float64 { return amount * math.Pow(1+rate, -years) }
		want := p.Capital
		renewals, flushes := 0, 0
		for at := p.Life; at < float64(horizon)-1e-9; at = float64(renewals+1) * p.Life {
			want += worth(p.Capital, at)
			renewals++
		}
		for at := p.FlushedEvery; at < float64(horizon)-1e-9; at = float64(flushes+1) * p.FlushedEvery {
			want += worth(p.PerFlush, at)
			flushes++
		}
		for year := 1; year <= horizon; year++ {
			want += worth(p.PerYear, float64(year))
		}
		same(t, "present value", p.PresentValue(rate, horizon), want, 1e-11)
		if p.Renewals(horizon) != renewals || p.Flushes(horizon) != flushes {
			t.Fatalf("renewed %d times, flushed %d; want %d, %d", p.Renewals(horizon), p.Flushes(horizon), renewals, flushes)
		}
		equal := p.PresentValue(rate, horizon) * Recovery(rate, horizon)
		same(t, "equal annual cost", Plan{PerYear: equal, Life: never, FlushedEvery: never}.PresentValue(rate, horizon), want, 1e-11)
	})
}

// TestSmallRates: with (1+i)^-n - 1 as it stands nothing would be left of the digits. To second order in i
// P/A = n - n(n+1)/2 i + n(n+1)(n+2)/6 i².
func TestSmallRates(t *testing.T) {
	for _, rate := range []float64{0, 1e-300, 1e-18, 1e-16, 3e-15, 1e-12, -1e-12, 1e-9, -1e-9} {
		for _, n := range []int{0, 1, 2, 50, 200} {
			x := float64(n)
			want := x - x*(x+1)/2*rate + x*(x+1)*(x+2)/6*rate*rate
			same(t, "annuity", Annuity(rate, n), want, 4e-16)
		}
	}
	if Discount(0, 37) != 1 || Annuity(0, 37) != 37 || Recovery(0, 4) != 0.25 {
		t.Error("without interest every year counts fully")
	}
}

// TestBenefitFactor adds up the years one by one, and starts at whole years, within years, before and after the horizon.
func TestBenefitFactor(t *testing.T) {
	for _, tt := range []struct {
		rate    float64
		horizon int
		start   float64
		want    float64
	}{
		{0, 50, 0, 50}, {0, 50, -3, 50}, {0, 50, 10, 40}, {0, 50, 10.25, 39.75}, {0, 50, 49.5, 0.5}, {0, 50, 50, 0}, {0, 50, 80, 0},
		{0, 50, never, 0}, {0, 0, 0, 0}, {0.05, 0, 0, 0},
		{1, 3, 0, 0.875}, {1, 3, 1, 0.375}, {1, 3, 1.5, 0.125 + 0.125}, {1, 3, 2.75, 0.125 / 4},
	} {
		same(t, "by hand", BenefitFactor(tt.rate, tt.horizon, tt.start), tt.want, 1e-15)
	}
	rapid.Check(t, func(t *rapid.T) {
		rate := rapid.Float64Range(-0.02, 0.3).Draw(t, "rate")
		horizon := rapid.IntRange(0, 200).Draw(t, "horizon")
		start := rapid.OneOf(rapid.Float64Range(0, 60), rapid.SampledFrom([]float64{0, 1, 7, 0.999999999999, 1.0000000001})).Draw(t, "start")
		want := 0.0
		for year := 1; year <= horizon; year++ {
			want += max(0, min(1, float64(year)-start)) * math.Pow(1+rate, -float64(year))
		}
		same(t, "sum", BenefitFactor(rate, horizon, start), want, 1e-12)
		same(t, "at once", BenefitFactor(rate, horizon, 0), Annuity(rate, horizon), 1e-14)
		whole := min(int(start), horizon)
		same(t, "after whole years", BenefitFactor(rate, horizon, float64(whole)), Annuity(rate, horizon)-Annuity(rate, whole), 1e-12)
	})
}

func TestAnnuitySums(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		rate := rapid.OneOf(rapid.Float64Range(-0.5, 0.9), rapid.Float64Range(0, 1e-6)).Draw(t, "rate")
		n := rapid.IntRange(1, 80).Draw(t, "years")
		want := 0.0
		for year := 1; year <= n; year++ {
			want += Discount(rate, float64(year))
		}
		same(t, "annuity", Annuity(rate, n)/want, 1, 1e-13)
		same(t, "recovery", Recovery(rate, n)*want, 1, 1e-13)
	})
}

func TestMistakesPanic(t *testing.T) {
	for name, f := range map[string]func(){
		"rate -1":          func() { Discount(-1, 2) },
		"rate NaN":         func() { Annuity(math.NaN(), 2) },
		"negative years":   func() { Annuity(0.03, -1) },
		"no year":          func() { Recovery(0.03, 0) },
		"no life":          func() { Plan{FlushedEvery: never}.Renewals(50) },
		"no flushing":      func() { Plan{Life: never}.PresentValue(0.03, 50) },
		"life NaN":         func() { Plan{Life: math.NaN()}.Renewals(50) },
		"negative horizon": func() { Plan{Life: 3}.Renewals(-1) },
		"start NaN":        func() { BenefitFactor(0.03, 50, math.NaN()) },
		"costs missing":    func() { Frontier(nil, []float64{1}) },
		"benefits missing": func() { Steps([]float64{1}, nil, nil, always) },
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
