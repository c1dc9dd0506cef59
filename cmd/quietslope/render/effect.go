package render

import (
	"fmt"
	"math"

	"quietslope/scenario/result"
)

// acting says how long it takes until the options act; "" where that is not known of any.
func acting(c *result.Case) string {
	parts := actingAfter(c, func(int) bool { return true })
	if parts == nil {
		return ""
	}
	text := "Time until nine tenths of an option's effect on the deep level have come about: " + andWords(parts) + "."
	var clay []int
	for i := range c.Options {
		if t := c.Options[i].TimeToEffect; t != nil && t.ClayDays != nil && *t.ClayDays > t.StoreDays {
			clay = append(clay, i)
		}
	}
	if clay != nil {
		text += fmt.Sprintf(" With %s the clay between the trenches sets it.", someByLetter(clay))
	}
	return text
}

// duration prints a time until something has come about, rounded up: days, months below two years, or years.
func duration(d float64) string {
	const perYear = 365.25
	up := func(x float64) int { return int(math.Ceil(x - 1e-9)) }
	switch {
	case d < 45:
		return plural(max(1, up(d)), "day")
	case d < 2*perYear:
		return plural(up(12*d/perYear), "month")
	case d < 1e6*perYear:
		return plural(up(d/perYear), "year")
	}
	return "more than a million years"
}
