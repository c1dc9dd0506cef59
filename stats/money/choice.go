package money

import (
	"cmp"
	"slices"

	"quietslope/stats"
)

// Frontier says of each option which other one makes it pointless: the index of an option that dominates it, and -1 for
// an option on the frontier, which none does. One option dominates another when it is at least as cheap and at least as
// good, and one of the two strictly. A smaller figure is better. Equal options do not dominate each other.
//
// Costs, and figures, that differ by no more than 1e-9 of the larger one are equal (stats.Less). Of several options that
// dominate, it names the one with the best figure, of these the cheapest, of these the first; that one is itself on the
// frontier.
func Frontier(costs, figures []float64) []int {
	if len(costs) != len(figures) {
		panic("money: costs and figures differ in number")
	}
	c, f := ranks(costs), ranks(figures)
	by := make([]int, len(costs))
	for i := range by {
		by[i] = -1
		for j := range by {
			if c[j] > c[i] || f[j] > f[i] || c[j] == c[i] && f[j] == f[i] {
				continue
			}
			if b := by[i]; b < 0 || f[j] < f[b] || f[j] == f[b] && c[j] < c[b] {
				by[i] = j
			}
		}
	}
	return by
}

// ranks numbers values in rising order, equal ones alike. Values are equal when neighbours in that order differ by
// rounding only; so equal to equal is always equal, which it is not when each pair is compared for itself.
func ranks(x []float64) []int {
	order := make([]int, len(x))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(x[a], x[b]) })
	rank := make([]int, len(x))
	for k := 1; k < len(order); k++ {
		rank[order[k]] = rank[order[k-1]]
		if stats.Less(x[order[k-1]], x[order[k]]) {
			rank[order[k]]++
		}
	}
	return rank
}

// Step is an option set against the one below it in the order of cost.
type Step struct {
	Option  int      // its index
	Against int      // index of the last option before it that was worth its step; -1 for the first
	Cost    float64  // what it costs more
	Benefit float64  // what it brings more
	Ratio   *float64 // Benefit/Cost; nil for the first, where it costs no more, and where the two are not known to differ
	Pays    bool     // it is known to bring more, and at least what it costs more; true for the first
}

// Steps compares options by what each next one adds: in order of cost, each option is set against the last one before it
// that was worth its own step, and is worth it if it brings at least as much more as it costs more. So money is not spent
// on the expensive part of a scheme because its cheap part has a good ratio. The first option, the cheapest, is where
// the steps begin; leaving everything as it is should be among the options. The last step that pays leads to the option
// with the greatest benefit less cost.
//
// Costs and benefits are present values, or amounts per year, both the same. Among are the indices of the options to
// compare, such as those on the frontier. Of options that cost the same, the one with the greatest benefit comes first.
// Differ tells whether two options are known to differ in what they bring; a step that may bring nothing does not pay.
//
// Source: the incremental benefit-cost ratio of mutually exclusive alternatives, Newnan, Eschenbach & Lavelle,
// Engineering Economic Analysis, chapter on economic analysis in the public sector.
func Steps(costs, benefits []float64, among []int, differ func(option, against int) bool) []Step {
	if len(costs) != len(benefits) {
		panic("money: costs and benefits differ in number")
	}
	rank := ranks(costs)
	order := slices.Clone(among)
	slices.SortFunc(order, func(a, b int) int {
		return cmp.Or(cmp.Compare(rank[a], rank[b]), cmp.Compare(benefits[b], benefits[a]), cmp.Compare(a, b))
	})
	var steps []Step
	last := -1
	for _, i := range order {
		s := Step{Option: i, Against: last, Pays: true}
		if last >= 0 {
			s.Benefit = benefits[i] - benefits[last]
			apart := differ(i, last)
			s.Pays = apart && stats.Less(benefits[last], benefits[i])
			if rank[i] != rank[last] {
				s.Cost = costs[i] - costs[last]
			}
			if rank[i] != rank[last] && apart {
				ratio := s.Benefit / s.Cost
				s.Ratio = &ratio
				s.Pays = s.Pays && !stats.Less(s.Benefit, s.Cost)
			}
		}
		if s.Pays {
			last = i
		}
		steps = append(steps, s)
	}
	return steps
}
