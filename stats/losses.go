package stats

// LossBand is what passing the level of a band costs, in any currency. 0 means that the band has no loss of that kind.
type LossBand struct {
	Level    float64 // level that starts the band, m
	PerEvent float64 // for an event
	PerDay   float64 // for a day
}

// Losses are the losses of each counted year: their Mean is the annual loss. The bands stand in order of rising level,
// and passed[i] is what Exceed found in levels for bands[i]. Levels of bands are nested, so that each loss is taken
// once, for the highest band that has one of its kind:
//
//   - A counted event pays the PerEvent of its band in the year of its peak, unless it holds a step above the level of a
//     higher band with a PerEvent of its own; then the event of that band pays.
//   - A counted step pays its length times the PerDay of the highest band below its level that has one.
//
// As in Exceed, a level is above a band when it is greater, not when it is equal. An event that passes a higher band
// pays nothing here even if that band's event has its peak outside the counted years, which can happen at either end of
// the record only.
func Losses(levels []float64, cal *Calendar, bands []LossBand, passed []Exceedance) []float64 {
	if len(levels) != len(cal.Year) || len(levels) != len(cal.Days) {
		panic("stats: calendar and levels differ in length")
	}
	if len(bands) != len(passed) {
		panic("stats: as many exceedances are needed as there are bands")
	}
	byYear := make([]sum, cal.Years)

	var perDay []LossBand // those with a loss per day, the highest first
	for i := len(bands) - 1; i >= 0; i-- {
		if i > 0 && bands[i].Level < bands[i-1].Level {
			panic("stats: bands are not in order of rising level")
		}
		if bands[i].PerDay != 0 {
			perDay = append(perDay, bands[i])
		}
	}
	if len(perDay) > 0 {
		for i, h := range levels {
			y := cal.Year[i]
			if y < 0 {
				continue
			}
			for _, b := range perDay {
				if h > b.Level {
					byYear[y].add(float64(cal.Days[i] * b.PerDay))
					break
				}
			}
		}
	}

	var higher *LossBand // the next higher band with a loss per event: to pass any is to pass the lowest of them
	for i := len(bands) - 1; i >= 0; i-- {
		b := &bands[i]
		if b.PerEvent == 0 {
			continue
		}
		for _, e := range passed[i].Events {
			if e.Counted && !(higher != nil && levels[e.Peak] > higher.Level) {
				byYear[cal.Year[e.Peak]].add(b.PerEvent)
			}
		}
		higher = b
	}

	loss := make([]float64, cal.Years)
	for y, s := range byYear {
		loss[y] = s.total
	}
	return loss
}
