package scenario

import (
	"math"
	"strconv"

	"quietslope/scenario/result"
	"quietslope/stats"
)

// measure is a figure by which options can be compared.
type measure struct {
	name   string  // of count.decide_by
	unit   string  // said once after the figures of a sentence
	scale  float64 // by which a figure is multiplied for that
	byYear func(*stats.Exceedance) []float64
	of     func(*result.Change) *result.Difference
	figure func(*result.BandFigure) (float64, *result.Interval)
}

// measures are those of count.decide_by.
var measures = []measure{
	{
		"load", ", in m·d a year", 1,
		func(e *stats.Exceedance) []float64 { return e.LoadByYear },
		func(c *result.Change) *result.Difference { return &c.LoadMDaysPerYear },
		func(b *result.BandFigure) (float64, *result.Interval) {
			return b.LoadMDaysPerYear, b.LoadMDaysPerYearCI
		},
	},
	{
		"days", ", in d a year", 1,
		func(e *stats.Exceedance) []float64 { return e.DaysByYear },
		func(c *result.Change) *result.Difference { return &c.DaysPerYear },
		func(b *result.BandFigure) (float64, *result.Interval) { return b.DaysPerYear, b.DaysPerYearCI },
	},
	{
		"events", ", per year", 1,
		func(e *stats.Exceedance) []float64 { return e.EventsByYear },
		func(c *result.Change) *result.Difference { return &c.EventsPerYear },
		func(b *result.BandFigure) (float64, *result.Interval) { return b.EventsPerYear, &b.EventsPerYearCI },
	},
	{
		"annual_probability", ", in %", 100,
		func(e *stats.Exceedance) []float64 { return e.AnyByYear },
		func(c *result.Change) *result.Difference { return &c.AnnualProbability },
		func(b *result.BandFigure) (float64, *result.Interval) {
			return b.AnnualProbability, &b.AnnualProbabilityCI
		},
	},
}

func measureNamed(name string) *measure {
	for i := range measures {
		if measures[i].name == name {
			return &measures[i]
		}
	}
	panic("scenario: no measure " + name)
}

// rank orders the options by their decision figure; figures that differ by rounding only share a rank.
func rank(s *Study, options []optionFigures) {
	if s.Count.DecideOn < 0 {
		return
	}
	for i := range options {
		options[i].Decision.Rank = 1
		for j := range options {
			if stats.Less(options[j].Decision.Value, options[i].Decision.Value) {
				options[i].Decision.Rank++
			}
		}
	}
}

// text is a figure in the unit, to about three digits.
func (m *measure) text(figure float64) string {
	figure *= m.scale
	if figure < 1 {
		return strconv.FormatFloat(figure, 'g', 2, 64)
	}
	return strconv.FormatFloat(figure, 'f', max(0, 2-int(math.Log10(figure))), 64)
}

// met says whether a band's figures meet the target: yes, no, or not_shown where the figure does and the end of its range
// does not. A figure without a range is zero in every year, and meets it, or that of a single year, which shows nothing.
func (t *Target) met(b *result.BandFigure) string {
	if t == nil {
		return ""
	}
	value, ci := measureNamed(t.Measure).figure(b)
	switch {
	case stats.Less(t.Most, value):
		return "no"
	case ci == nil && value > 0, ci != nil && stats.Less(t.Most, ci[1]):
		return "not_shown"
	}
	return "yes"
}
