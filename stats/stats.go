// Package stats turns series of levels into exceedance figures, and figures of single years into intervals and
// comparisons. It knows nothing of stores, drains or files.
//
// The work goes in three steps. Exceed finds the events of one series above one level and adds up its figures by
// year. PoissonInterval, BinomialInterval and Resamples.Interval say how far such figures can be trusted on a record
// of that length. Resamples.Compare sets one series against another in the same years.
//
// Average makes one exceedance of those of several replays before the second step, and Losses puts a price on what
// Exceed found. What is done with money over the years is in stats/money.
//
// Lengths of time are days, rates are per year, and levels have whatever unit the caller gives them; the comments say
// m. A confidence is a share strictly between 0 and 1. Arguments that no data can cause, such as slices of different
// lengths or a confidence of 1.5, are mistakes of the caller and panic; an empty series, no year or no resample is
// not a mistake and gives the empty result.
package stats

// Mean is the mean of a figure over the counted years, per year: the sum of byYear divided by its length. It is 0
// without a year.
func Mean(byYear []float64) float64 {
	if len(byYear) == 0 {
		return 0
	}
	var a sum
	for _, x := range byYear {
		a.add(x)
	}
	return a.total / float64(len(byYear))
}

// sum adds up terms with compensation (Kahan 1965, Commun. ACM 8:40), so that 24 steps of an hour make one day
// exactly and decades of hours do not drift.
type sum struct {
	total float64
	lost  float64 // what the last addition rounded away
}

func (a *sum) add(x float64) {
	y := x - a.lost
	t := a.total + y
	a.lost = (t - a.total) - y
	a.total = t
}
