package stats

import (
	"math"
	"slices"
)

// Quantile is the p-quantile of a sorted sample, by linear interpolation between order statistics: with x_1 <= ... <=
// x_n and h = (n-1)p + 1,
//
//	x_[h] + (h - [h])*(x_[h]+1 - x_[h])       [h] the whole part of h
//
// p is from 0 (the smallest) to 1 (the largest); any other p, or a sample that is empty, has no quantile and gives
// NaN. The sample must be in rising order.
//
// Source: Hyndman & Fan 1996, Am. Stat. 50:361-365, definition 7.
func Quantile(sorted []float64, p float64) float64 {
	i, part, ok := position(len(sorted), p)
	switch {
	case !ok:
		return math.NaN()
	case part == 0:
		return sorted[i]
	}
	return between(sorted[i], sorted[i+1], part)
}

// Quantiles are the quantiles of a sample that is in no order, at rising probabilities, as Quantile gives them. It
// takes a time that grows with len(x) and leaves x in another order. x must not hold NaN.
func Quantiles(x []float64, rising ...float64) []float64 {
	q := make([]float64, len(rising))
	done := 0 // x[:done] are the smallest, the largest of them last
	for k, p := range rising {
		i, part, ok := position(len(x), p)
		if !ok {
			q[k] = math.NaN()
			continue
		}
		if i >= done {
			lift(x[done:], i-done)
			done = i + 1
		}
		q[k] = x[i]
		if part > 0 {
			q[k] = between(x[i], slices.Min(x[i+1:]), part)
		}
	}
	return q
}

// position is where the p-quantile of n sorted values lies: part of the way from value i to the next.
func position(n int, p float64) (i int, part float64, ok bool) {
	if n == 0 || !(p >= 0 && p <= 1) {
		return 0, 0, false
	}
	h := p * float64(n-1)
	i = int(h)
	if i >= n-1 {
		return n - 1, 0, true
	}
	return i, h - float64(i), true
}

func between(a, b, part float64) float64 { return a + float64(part*(b-a)) }

// lift reorders x so that x[k] is what it would be if x were sorted, with nothing larger before it and nothing smaller
// behind it (Hoare 1961, Algorithm 65: Find, Commun. ACM 4:321-322).
func lift(x []float64, k int) {
	lo, hi := 0, len(x)-1
	for hi > lo {
		a, b, c := x[lo], x[lo+(hi-lo)/2], x[hi]
		pivot := max(min(a, b), min(max(a, b), c))
		i, j := lo, hi
		for i <= j {
			for x[i] < pivot {
				i++
			}
			for x[j] > pivot {
				j--
			}
			if i <= j {
				x[i], x[j] = x[j], x[i]
				i++
				j--
			}
		}
		switch {
		case k <= j:
			hi = j
		case k >= i:
			lo = i
		default:
			return
		}
	}
}
