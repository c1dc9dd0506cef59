package stats

import (
	"math"

	"gonum.org/v1/gonum/mathext"
	"gonum.org/v1/gonum/stat/distuv"
)

// PoissonInterval is the exact two-sided interval for a rate per year when a number of events was counted in a number
// of years, events coming independently of each other:
//
//	lo = χ²(a; 2k)/(2T)    hi = χ²(1-a; 2k+2)/(2T)    a = (1 - confidence)/2, k events in T years
//
// χ²(p; f) is the p-quantile of the chi-squared distribution with f degrees of freedom. Without an event lo = 0 and
// hi = -ln(a)/T, which is 3.0/T at 90 %. Without a year nothing is known: lo = 0, hi = +Inf.
//
// A count that is the mean of several (see Average) may have a fraction. The same formula then takes it as it is, as
// quantiles of gamma distributions of shapes k and k+1: the limits rise without a step from those of one whole count to
// those of the next. They are as wide as those of a single count; that the mean of several may scatter less than one of
// them is not made use of.
//
// Limits of a count well below one event may be off by 1e-13 of an event, where the lower one is next to nothing.
//
// Source: Garwood 1936, Biometrika 28:437-442, for whole counts. Counts with a fraction are common practice; Fay & Feuer
// 1997, Statist. Med. 16:791-801, take such gamma quantiles for weighted sums of counts (from memory).
func PoissonInterval(events, years, confidence float64) (lo, hi float64) {
	a := tail(confidence)
	if !(events >= 0) {
		panic("stats: number of events is not 0 or more")
	}
	if !(years > 0) {
		return 0, math.Inf(1)
	}
	if events == 0 {
		return 0, -math.Log(a) / years
	}
	lo = distuv.ChiSquared{K: 2 * events}.Quantile(a) / 2
	hi = distuv.ChiSquared{K: 2*events + 2}.Quantile(1-a) / 2
	return lo / years, hi / years
}

// BinomialInterval is the exact two-sided interval for a probability when k of n independent trials had the outcome:
//
//	lo = B(a; k, n-k+1)    hi = B(1-a; k+1, n-k)    a = (1 - confidence)/2
//
// B(p; ...) is the p-quantile of the beta distribution. With k = 0 it is [0, 1 - a^(1/n)], with k = n its mirror
// [a^(1/n), 1], and with n = 0 nothing is known: [0, 1].
//
// As in PoissonInterval, k may be a mean of several numbers and have a fraction; the limits then lie between those of
// the whole numbers on either side.
//
// Source: Clopper & Pearson 1934, Biometrika 26:404-413, for whole k. Korn & Graubard 1998, Survey Methodology
// 24:193-201, put numbers with a fraction into the same quantiles (from memory).
func BinomialInterval(k float64, n int, confidence float64) (lo, hi float64) {
	a := tail(confidence)
	if !(k >= 0 && k <= float64(n)) {
		panic("stats: k is not between 0 and n")
	}
	lo, hi = 0, 1
	rest := float64(n) - k
	switch {
	case k == 0:
	case rest == 0:
		lo = math.Pow(a, 1/k)
	default:
		lo = distuv.Beta{Alpha: k, Beta: rest + 1}.Quantile(a)
	}
	switch {
	case rest == 0:
	case k == 0:
		hi = -math.Expm1(math.Log(a) / rest)
	default:
		hi = distuv.Beta{Alpha: k + 1, Beta: rest}.Quantile(1 - a)
	}
	return lo, hi
}

// SignTest is the exact two-sided p-value of the sign test: how likely it is, if better and worse were equally
// likely, that the two numbers differ as much as these do or more:
//
//	p = min(1, 2*P(X <= min(better, worse)))    X binomial(better + worse, 1/2)
//
// Years in which nothing changed are left out of both numbers. 5 against 0 gives 0.0625, none against none 1.
//
// Source: Conover 1999, Practical Nonparametric Statistics, the sign test.
func SignTest(better, worse int) float64 {
	few, many := float64(min(better, worse)), float64(max(better, worse))
	if few < 0 {
		panic("stats: negative number of years")
	}
	if few == many {
		return 1 // none against none too
	}
	// P(X <= few) as the regularised incomplete beta function I_1/2(n - few, few + 1), n - few = many.
	return min(1, 2*mathext.RegIncBeta(many, few+1, 0.5))
}

// expandedTail is the probability at which the lower end of an expanded percentile interval is read off the
// resamples of a mean over a number of years:
//
//	Φ(-√(T/(T-1)) * t)    t the (1+confidence)/2 quantile of Student's t with T-1 degrees of freedom
//
// Plain percentiles are too narrow on a short record, for two reasons: resamples vary as if the variance had been
// divided by T, not T - 1, and they act as if it were known. T must be 2 or more.
//
// Source: Hesterberg 2015, Am. Stat. 69:371-386.
func expandedTail(years int, confidence float64) float64 {
	t := float64(years)
	q := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: t - 1}.Quantile(1 - tail(confidence))
	return distuv.UnitNormal.CDF(-math.Sqrt(t/(t-1)) * q)
}

// tail is the probability on each side of a two-sided interval.
func tail(confidence float64) float64 {
	if !(confidence > 0 && confidence < 1) {
		panic("stats: confidence is not between 0 and 1")
	}
	return (1 - confidence) / 2
}
