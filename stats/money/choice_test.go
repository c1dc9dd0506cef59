package money

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

func TestFrontier(t *testing.T) {
	const little = 0.9e-9
	for _, tt := range []struct {
		name    string
		costs   []float64
		figures []float64
		want    []int
	}{
		{"nothing", nil, nil, []int{}},
		{"one", []float64{5}, []float64{3}, []int{-1}},
		{"each dearer and better", []float64{0, 10, 20}, []float64{9, 5, 1}, []int{-1, -1, -1}},
		{"dearer and worse", []float64{0, 10, 20}, []float64{9, 5, 7}, []int{-1, -1, 1}},
		{"dearer and no better", []float64{0, 10, 20}, []float64{9, 5, 5}, []int{-1, -1, 1}},
		{"as dear and worse", []float64{0, 10, 10}, []float64{9, 5, 7}, []int{-1, -1, 1}},
		{"equal ones stand side by side", []float64{0, 10, 10}, []float64{9, 5, 5}, []int{-1, -1, -1}},
		{"costs nothing and does nothing", []float64{0, 0, 10}, []float64{9, 9, 5}, []int{-1, -1, -1}},
		{"costs nothing and helps", []float64{0, 0, 10}, []float64{9, 6, 5}, []int{1, -1, -1}},
		{"costs and does nothing", []float64{0, 10}, []float64{9, 9}, []int{-1, 0}},
		{"no exceedance left in any", []float64{0, 10, 20}, []float64{0, 0, 0}, []int{-1, 0, 0}},
		{"the dominator with the best figure", []float64{1, 2, 3, 9}, []float64{6, 5, 4, 7}, []int{-1, -1, -1, 2}},
		{"of equal figures the cheapest, which is on the frontier", []float64{9, 3, 2}, []float64{7, 4, 4}, []int{2, 2, -1}},
		{"of equal ones the first", []float64{9, 2, 2}, []float64{7, 4, 4}, []int{1, -1, -1}},
		{"a difference of rounding is none", []float64{10, 10 * (1 + little)}, []float64{5 * (1 + little), 5}, []int{-1, -1}},
		{"a difference of rounding does not save", []float64{10, 10 * (1 - little)}, []float64{5, 6}, []int{-1, 0}},
		{"more than rounding", []float64{10, 10 * (1 + 2e-9)}, []float64{5, 5}, []int{-1, 0}},
		{"equal to equal is equal", []float64{10, 10 * (1 + little), 10 * (1 + 2*little)}, []float64{5, 5, 5}, []int{-1, -1, -1}},
		{"a small cost is not nothing", []float64{0, 1e-12}, []float64{5, 5}, []int{-1, 0}},
	} {
		if got := Frontier(tt.costs, tt.figures); !slices.Equal(got, tt.want) {
			t.Errorf("%s: %v, want %v", tt.name, got, tt.want)
		}
	}
}

// TestFrontierOracle asks of every option, among random ones with many ties, what the definition says.
func TestFrontierOracle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 12).Draw(t, "options")
		small := rapid.Map(rapid.IntRange(0, 6), func(n int) float64 { return float64(n) })
		costs, figures := rapid.SliceOfN(small, n, n).Draw(t, "costs"), rapid.SliceOfN(small, n, n).Draw(t, "figures")
		dominates := func(j, i int) bool {
			return costs[j] <= costs[i] && figures[j] <= figures[i] && (costs[j] < costs[i] || figures[j] < figures[i])
		}
		// A change in the tenth digit changes nothing.
		shaken := func(x []float64) []float64 {
			y := slices.Clone(x)
			for i := range y {
				y[i] *= 1 + rapid.Float64Range(-2e-10, 2e-10).Draw(t, "rounding")
			}
			return y
		}
		by := Frontier(shaken(costs), shaken(figures))
		for i, b := range by {
			if b < 0 {
				for j := range n {
					if dominates(j, i) {
						t.Fatalf("%d is dominated by %d", i, j)
					}
				}
				continue
			}
			if !dominates(b, i) || by[b] != -1 {
				t.Fatalf("%d does not dominate %d from the frontier", b, i)
			}
			for j := range n {
				if dominates(j, i) && (figures[j] < figures[b] || figures[j] == figures[b] && (costs[j] < costs[b] || costs[j] == costs[b] && j < b)) {
					t.Fatalf("%d is a better choice than %d against %d", j, b, i)
				}
			}
		}
	})
}

// step is a Step with a ratio as a source prints it; NaN where there is none.
type step struct {
	option, against int
	ratio           float64
	pays            bool
}

func checkSteps(t *testing.T, what string, got []Step, decimals int, want []step) {
	t.Helper()
	if len(got) != len(want) {
		t.Fatalf("%s: %d steps, want %d", what, len(got), len(want))
	}
	for k, w := range want {
		g := got[k]
		if g.Option != w.option || g.Against != w.against || g.Pays != w.pays || (g.Ratio == nil) != math.IsNaN(w.ratio) {
			t.Errorf("%s, step %d: %+v, want %+v", what, k, g, w)
		} else if g.Ratio != nil {
			printed(t, what, *g.Ratio, w.ratio, decimals)
			same(t, what, g.Benefit/g.Cost, *g.Ratio, 1e-15)
		}
	}
}

func all(n int) []int {
	x := make([]int, n)
	for i := range x {
		x[i] = i
	}
	return x
}

// TestStepsPublished has incremental analyses in print.
func TestStepsPublished(t *testing.T) {
	none := math.NaN()

	// Newnan and others, Engineering Economic Analysis, incremental benefit-cost analysis of four dams, page 502, 8 %, 45
	// years, thousands of dollars: printed are the present costs, the ratios to doing nothing and the order of the steps
	// (nothing, I, III, II, IV), each from the last one that is justified. The ratios of the steps are computed.
	dams := []struct{ first, perYear, benefit, cost, ratio float64 }{
		{12500, 120, 580 + 700 + 400, 13953, 1.46},
		{11000, 480, 700 + 550 + 750, 16812, 1.44},
		{12500, 325, 200 + 950 + 150, 16435, 0.96},
		{16800, 145, 1300 + 250 + 500, 18556, 1.34},
	}
	costs, benefits := []float64{0}, []float64{0}
	for _, d := range dams {
		costs = append(costs, Plan{Capital: d.first, Life: never, PerYear: d.perYear, FlushedEvery: never}.PresentValue(0.08, 45))
		benefits = append(benefits, d.benefit*Annuity(0.08, 45))
		k := len(costs) - 1
		printed(t, "cost of a dam", costs[k], d.cost, 0)
		printed(t, "ratio of a dam", benefits[k]/costs[k], d.ratio, 2)
		checkSteps(t, "one dam", Steps(costs, benefits, []int{k, 0}, always), 2, []step{{0, -1, none, true}, {k, 0, d.ratio, d.ratio > 1}})
	}
	checkSteps(t, "dams", Steps(costs, benefits, all(5), always), 2, []step{
		{0, -1, none, true}, {1, 0, 1.46, true}, {3, 1, -1.85, false}, {2, 1, 1.36, true}, {4, 2, 0.35, false},
	})

	// Blank & Tarquin, Engineering Economy, 8th edition, solution to problem 9.33, per year at 8 %: 1 200 000 for 10 years
	// and 2 000 000 for 20, upkeep 80 000 and 75 000, benefits less disbenefits 430 000 and 440 000. Printed: 178 834.8 and
	// 203 704 a year for the capital, the first ratio, 1.66, and the last step as 10 000 to 19 869.2.
	first, second := 1.2e6*Recovery(0.08, 10), 2e6*Recovery(0.08, 20)
	same(t, "capital a year", first, 178834.8, 0.6/178834.8) // from a factor of six decimals
	same(t, "capital a year", second, 203704, 1/203704.0)
	checkSteps(t, "problem 9.33", Steps([]float64{0, first + 80000, second + 75000}, []float64{0, 430000, 440000}, all(3), always), 2, []step{
		{0, -1, none, true}, {1, 0, 1.66, true}, {2, 1, 0.50, false},
	})
	printed(t, "problem 9.33, last step", 10000/(second+75000-first-80000), 10000/19869.2, 4)

	// The same book, problem 9.36, at 0.5 % a month over 60 months: 60 and 500 for 1.25 and 8 a month. Printed: 1.08 and 0.79.
	month := Recovery(0.005, 60)
	checkSteps(t, "problem 9.36", Steps([]float64{0, 60 * month, 500 * month}, []float64{0, 1.25, 8}, all(3), always), 2, []step{
		{0, -1, none, true}, {1, 0, 1.08, true}, {2, 1, 0.79, false},
	})

	// Sullivan, Wicks & Koelling, Engineering Economy, example 10-7, 10 %, 50 years: first cost, cost a year, value at the
	// end, benefit a year of three projects (the amounts from memory). Printed: 1.34 for A, less than 1 for B against A,
	// 1.16 for C against A.
	costs, benefits = []float64{0}, []float64{0}
	for _, p := range [][4]float64{{8.5e6, 750e3, 1.25e6, 2.15e6}, {10e6, 725e3, 1.75e6, 2.265e6}, {12e6, 700e3, 2e6, 2.5e6}} {
		costs = append(costs, p[0]+p[1]*Annuity(0.10, 50)-p[2]*Discount(0.10, 50))
		benefits = append(benefits, p[3]*Annuity(0.10, 50))
	}
	checkSteps(t, "example 10-7", Steps(costs, benefits, all(4), always), 2, []step{
		{0, -1, none, true}, {1, 0, 1.34, true}, {2, 1, 0.91, false}, {3, 1, 1.16, true},
	})
}

// TestSteps is worked out by hand.
func TestSteps(t *testing.T) {
	none := math.NaN()
	for _, tt := range []struct {
		name            string
		costs, benefits []float64
		among           []int // nil: all
		want            []step
	}{
		{"nothing", nil, nil, nil, nil},
		{"one", []float64{7}, []float64{3}, nil, []step{{0, -1, none, true}}},
		{"in order of cost", []float64{30, 0, 10}, []float64{60, 0, 40}, nil, []step{{1, -1, none, true}, {2, 1, 4, true}, {0, 2, 1, true}}},
		{"a good average with a bad last part", []float64{0, 10, 30}, []float64{0, 40, 50}, nil, []step{{0, -1, none, true}, {1, 0, 4, true}, {2, 1, 0.5, false}}},
		{"only some", []float64{0, 10, 30, 40}, []float64{0, 40, 50, 90}, []int{3, 0, 1}, []step{{0, -1, none, true}, {1, 0, 4, true}, {3, 1, 50 / 30.0, true}}},
		{"a step past one that does not pay", []float64{0, 10, 20}, []float64{0, 5, 50}, nil, []step{{0, -1, none, true}, {1, 0, 0.5, false}, {2, 0, 2.5, true}}},
		{"less benefit", []float64{0, 10, 20}, []float64{0, 30, 20}, nil, []step{{0, -1, none, true}, {1, 0, 3, true}, {2, 1, -1, false}}},
		{"just worth it", []float64{0, 10}, []float64{0, 10}, nil, []step{{0, -1, none, true}, {1, 0, 1, true}}},
		{"a cost of three tenths by rounding a little more", []float64{0, 0.30000000000000004}, []float64{0, 0.3}, nil, []step{{0, -1, none, true}, {1, 0, 1, true}}},
		{"same cost: the best first, and no ratio", []float64{0, 10, 10, 20}, []float64{0, 20, 30, 35}, nil,
			[]step{{0, -1, none, true}, {2, 0, 3, true}, {1, 2, none, false}, {3, 2, 0.5, false}}},
		{"equal options", []float64{0, 10, 10}, []float64{0, 20, 20}, nil, []step{{0, -1, none, true}, {1, 0, 2, true}, {2, 1, none, false}}},
		{"an option that costs nothing and helps comes first", []float64{0, 0, 10}, []float64{0, 5, 30}, nil,
			[]step{{1, -1, none, true}, {0, 1, none, false}, {2, 1, 2.5, true}}},
		{"cheaper than the baseline", []float64{100, 90, 130}, []float64{0, 20, 40}, nil, []step{{1, -1, none, true}, {0, 1, -2, false}, {2, 1, 0.5, false}}},
		// Five storm drains of a public exercise without printed answers, thousands of dollars, and nothing at all.
		{"five drains", []float64{0, 1000, 4000, 4000, 10000, 12000}, []float64{0, 8000, 8000, 14000, 16000, 24000}, nil,
			[]step{{0, -1, none, true}, {1, 0, 8, true}, {3, 1, 2, true}, {2, 3, none, false}, {4, 3, 1 / 3.0, false}, {5, 3, 1.25, true}}},
	} {
		among := tt.among
		if among == nil {
			among = all(len(tt.costs))
		}
		checkSteps(t, tt.name, Steps(tt.costs, tt.benefits, among, always), 12, tt.want)
	}
}

// TestStepsLeadToTheBest: the last step that pays leads to the greatest benefit less cost, every step starts from one
// that paid, and costs rise.
func TestStepsLeadToTheBest(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 10).Draw(t, "options")
		amount := rapid.Map(rapid.IntRange(0, 20), func(n int) float64 { return float64(n) / 4 })
		costs, benefits := rapid.SliceOfN(amount, n, n).Draw(t, "costs"), rapid.SliceOfN(amount, n, n).Draw(t, "benefits")
		steps := Steps(costs, benefits, rapid.Permutation(all(n)).Draw(t, "order"), always)
		best, last := math.Inf(-1), -1
		for i := range n {
			best = max(best, benefits[i]-costs[i])
		}
		for k, s := range steps {
			if s.Against != last || k > 0 && costs[s.Option] < costs[steps[k-1].Option] {
				t.Fatalf("step %d: %+v", k, s)
			}
			if s.Pays {
				last = s.Option
			}
		}
		if len(steps) != n || benefits[last]-costs[last] != best {
			t.Fatalf("the steps lead to %d", last)
		}
	})
}

// always stands for options that are known to differ.
func always(int, int) bool { return true }

// TestStepsUnknown: an option that is not known to differ from the one below it has no ratio, and the next step starts from
// that one again.
func TestStepsUnknown(t *testing.T) {
	none := math.NaN()
	unknown := func(option, against int) bool { return option != 1 }
	checkSteps(t, "not known", Steps([]float64{0, 10, 20}, []float64{0, 40, 50}, all(3), unknown), 12,
		[]step{{0, -1, none, true}, {1, 0, none, false}, {2, 0, 2.5, true}})
}
