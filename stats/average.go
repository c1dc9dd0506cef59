package stats

import "math"

// Average is the mean of several exceedances of one level in the same years, as of replays of one record with drains
// of several ages. The weights are shares and sum to 1. It is the mean of the figures: nothing is counted anew.
//
// Every figure is the weighted mean, so Count and YearsAbove may have a fraction, and AnyByYear is the share of the replays
// in which the year has a step above; but Longest and PeakExcess, which are extremes, are the largest of any replay of
// positive weight. MeanSpan and MeanExcess describe counted events, so they are the mean over those replays that have one,
// whose weights are made to sum to 1 again; they are 0 where none has. MeanExcess is so a mean of means: a replay with many
// days above has no more say than its weight.
//
// Events is nil: events of different replays are not the events of one series and can be neither matched nor listed.
// A single replay is returned as it is, with its events.
func Average(xs []Exceedance, weights []float64) Exceedance {
	checkWeights(len(xs), weights)
	if len(xs) == 1 {
		return xs[0]
	}
	var (
		m        Exceedance
		eventful = make([]float64, len(xs)) // the weights of those with a counted event
	)
	for i := range xs {
		if xs[i].Count > 0 {
			eventful[i] = weights[i]
		}
	}
	for i := range xs {
		if weights[i] > 0 {
			m.Longest, m.PeakExcess = max(m.Longest, xs[i].Longest), max(m.PeakExcess, xs[i].PeakExcess)
		}
	}
	one := func(weights []float64, figure func(*Exceedance) float64) float64 {
		return weighted(len(xs), weights, func(i int) float64 { return figure(&xs[i]) })
	}
	series := func(figures func(*Exceedance) []float64) []float64 {
		all := make([][]float64, len(xs))
		for i := range xs {
			all[i] = figures(&xs[i])
		}
		return AverageSeries(all, weights)
	}
	m.Count = one(weights, func(x *Exceedance) float64 { return x.Count })
	m.YearsAbove = one(weights, func(x *Exceedance) float64 { return x.YearsAbove })
	m.DaysInBand = one(weights, func(x *Exceedance) float64 { return x.DaysInBand })
	m.MeanSpan = one(eventful, func(x *Exceedance) float64 { return x.MeanSpan })
	m.MeanExcess = one(eventful, func(x *Exceedance) float64 { return x.MeanExcess })
	m.EventsByYear = series(func(x *Exceedance) []float64 { return x.EventsByYear })
	m.DaysByYear = series(func(x *Exceedance) []float64 { return x.DaysByYear })
	m.LoadByYear = series(func(x *Exceedance) []float64 { return x.LoadByYear })
	m.AnyByYear = series(func(x *Exceedance) []float64 { return x.AnyByYear })
	copy(m.ByMonth[:], series(func(x *Exceedance) []float64 { return x.ByMonth[:] }))
	return m
}

// AverageSeries is the weighted mean of several series of equal length, value by value. The weights are shares and sum
// to 1.
func AverageSeries(series [][]float64, weights []float64) []float64 {
	checkWeights(len(series), weights)
	m := make([]float64, len(series[0]))
	for _, s := range series {
		if len(s) != len(m) {
			panic("stats: series to average differ in length")
		}
	}
	for k := range m {
		m[k] = weighted(len(series), weights, func(i int) float64 { return series[i][k] })
	}
	return m
}

// weighted is the weighted mean of n values. It is never above the largest nor below the smallest of them, whatever
// the sum of the weights is rounded to: a mean of numbers of years is no more than all years, and that of equal values
// is exact. Without any weight it is 0.
func weighted(n int, weights []float64, value func(i int) float64) float64 {
	var all, by sum
	lo, hi := math.Inf(1), math.Inf(-1)
	for i := range n {
		if weights[i] == 0 {
			continue
		}
		v := value(i)
		all.add(float64(weights[i] * v))
		by.add(weights[i])
		lo, hi = min(lo, v), max(hi, v)
	}
	if by.total == 0 {
		return 0
	}
	return min(max(all.total/by.total, lo), hi)
}

func checkWeights(n int, weights []float64) {
	if n == 0 || len(weights) != n {
		panic("stats: as many weights are needed as there are things to average, and at least one")
	}
	var all sum
	for _, w := range weights {
		if !(w >= 0) {
			panic("stats: negative weight")
		}
		all.add(w)
	}
	if !(math.Abs(all.total-1) <= 1e-9) {
		panic("stats: weights do not sum to 1")
	}
}
