package stats

import "math"

// Change is a yearly figure of an option set against the same figure of the baseline in the same years. Less is
// better.
type Change struct {
	Difference   float64     // option less baseline, per year: negative is an improvement
	DifferenceCI *[2]float64 // its interval; nil as for Resamples.Interval, so also when no year differs

	Ratio   *float64    // option divided by baseline; nil where the baseline has nothing
	RatioCI *[2]float64 // nil with Ratio or DifferenceCI nil, when the option has nothing, and when over 5 % of resamples have no baseline

	ShareBetter float64 // share of the resamples in which the option has strictly less than the baseline
	ShareEqual  float64 // share in which both have the same

	YearsBetter, YearsEqual, YearsWorse int // years in which the option has less, the same, more
}

const (
	// tie is the share of the largest yearly figure by which two figures of a year may differ and still be the same.
	// It is above what arithmetic and the solution of the stores leave behind (1e-10), and far below anything that
	// could matter, so an option that does nothing cannot be told apart by its rounding errors.
	tie = 1e-9
	// nought is the share of the largest yearly difference below which the mean of a resample is zero: differences
	// that cancel must do so whatever the order in which they are added.
	nought = 1e-12
	// withoutBaseline is the largest share of resamples without baseline exceedance that still allows a ratio's interval.
	withoutBaseline = 0.05
)

// Less reports whether figure a is smaller than b by more than rounding: by more than 1e-9 of the larger of the two.
func Less(a, b float64) bool { return a < b-tie*max(math.Abs(a), math.Abs(b)) }

// Compare sets a yearly figure of an option, such as its days above a level, against the baseline's in the same
// years. The differences are formed year by year before they are resampled, so what the years have in common drops
// out. Intervals are expanded percentile intervals as in Interval; resamples without a baseline are left out of the
// ratio's. Figures of a year that differ by less than 1e-9 of the largest figure in either series are the same.
func (r *Resamples) Compare(option, baseline []float64, confidence float64) Change {
	if len(option) != r.years || len(baseline) != r.years {
		panic("stats: yearly figures and resamples differ in years")
	}
	tail(confidence) // refuse a bad one whatever the series hold
	var c Change
	largest := max(greatest(option), greatest(baseline))
	diff := make([]float64, r.years)
	for y := range diff {
		d := option[y] - baseline[y]
		switch {
		case math.Abs(d) <= tie*largest:
			c.YearsEqual++
			continue
		case d < 0:
			c.YearsBetter++
		default:
			c.YearsWorse++
		}
		diff[y] = d
	}

	means := r.Means(diff)
	zero := nought * greatest(diff)
	better, equal := 0, 0
	for i, m := range means {
		switch {
		case math.Abs(m) <= zero:
			means[i] = 0
			equal++
		case m < 0:
			better++
		}
	}
	if r.n > 0 {
		c.ShareBetter = float64(better) / float64(r.n)
		c.ShareEqual = float64(equal) / float64(r.n)
	}
	if c.Difference = Mean(diff); math.Abs(c.Difference) <= zero {
		c.Difference = 0
	}
	c.Ratio, c.RatioCI = r.ratio(c.Difference, means, baseline, nought*largest, confidence)
	if r.varies(diff) {
		lo, hi := r.limits(means, confidence)
		c.DifferenceCI = &[2]float64{lo, hi}
	}
	if c.DifferenceCI == nil || greatest(option) == 0 {
		c.RatioCI = nil
	}
	return c
}

// ratio is the option's mean divided by the baseline's, and its interval, from the difference of the means on the
// record and in each resample: 1 + difference/baseline is exactly 1 where nothing changes and exactly 0 where nothing
// is left. A baseline of at most none counts as none.
func (r *Resamples) ratio(difference float64, differences, baseline []float64, none, confidence float64) (*float64, *[2]float64) {
	base := Mean(baseline)
	if base <= none {
		return nil, nil
	}
	all := max(0, 1+difference/base)
	have := make([]float64, 0, r.n)
	for i, b := range r.Means(baseline) {
		if b > none {
			have = append(have, max(0, 1+differences[i]/b))
		}
	}
	if r.years < 2 || len(have) == 0 || float64(r.n-len(have)) > withoutBaseline*float64(r.n) {
		return &all, nil
	}
	lo, hi := r.limits(have, confidence)
	return &all, &[2]float64{lo, hi}
}

// ToldApart reports whether the record shows that the option differs from the baseline at all: the interval of the
// difference excludes zero, and the sign test on years better against years worse has p <= 1 - confidence. Give it
// the confidence that Compare was given. Both are asked for because the interval alone is too narrow on a short,
// skewed record, and the sign test alone says nothing of size. At 90 % five years better and none worse is the least
// that can do.
func (c Change) ToldApart(confidence float64) bool {
	tail(confidence)
	if c.DifferenceCI == nil || c.DifferenceCI[0] <= 0 && c.DifferenceCI[1] >= 0 {
		return false
	}
	return SignTest(c.YearsBetter, c.YearsWorse) <= 1-confidence+1e-12 // 1 - 0.9 is a little less than 0.1
}

// greatest is the largest absolute value.
func greatest(x []float64) float64 {
	g := 0.0
	for _, v := range x {
		g = max(g, math.Abs(v))
	}
	return g
}
