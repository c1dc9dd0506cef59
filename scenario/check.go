package scenario

import (
	"context"
	"math"

	"quietslope/scenario/result"
)

// Check says what a study was understood to be. It replays the baseline only, to name the month and the start that auto
// stands for. Errors are as for Compare.
func Check(ctx context.Context, s *Study) (*result.Check, error) {
	p, err := prepare(ctx, s)
	if err != nil {
		return nil, err
	}
	c := &result.Check{
		Head:       p.head("check"),
		Rates:      p.works[p.baseline].rates(),
		Bands:      p.bands(),
		Record:     p.recordFound(),
		Start:      result.StartFound{CoverM: p.base.start.Cover, DeepM: p.base.start.Deep},
		YearStarts: p.counted.starts.String(),
		Understood: []result.Understood{},
	}
	for _, e := range s.Understood {
		c.Understood = append(c.Understood, result.Understood(e))
	}
	for _, w := range p.works {
		o := result.CheckOption{Name: w.option.Name, Rates: w.rates(), Drains: []result.CheckDrain{}}
		for _, d := range w.drains {
			cd := result.CheckDrain{
				Measure: d.measure, Layer: d.layer, Law: d.law(), RatePerDay: d.rate, InvertM: d.invert,
				CeilingMMPerDay: finite(d.ceiling), From: d.from,
			}
			if d.rate > 0 && d.square == 0 { // the quadratic law has none: it falls faster the higher it stands
				half := math.Ln2 / d.rate
				cd.HalfLifeDays = &half
			}
			o.Drains = append(o.Drains, cd)
		}
		c.Options = append(c.Options, o)
	}
	a := p.record.Audit()
	c.Audit = result.Audit{Wettest: []result.WetDay{}, Suspicious: []result.Suspicious{}, Years: []result.YearRain{}}
	for _, d := range a.Wettest {
		c.Audit.Wettest = append(c.Audit.Wettest, result.WetDay(d))
	}
	for _, q := range a.Suspicious {
		c.Audit.Suspicious = append(c.Audit.Suspicious, result.Suspicious(q))
	}
	for _, y := range a.Years {
		c.Audit.Years = append(c.Audit.Years, result.YearRain(y))
	}
	if c.Conversion, err = p.conversion(ctx); err != nil {
		return nil, err
	}
	ws := warnings(p.studyWarnings(nil))
	conversionWarnings(&ws, c.Conversion)
	f := optionFigures{Option: result.Option{Name: s.Options[p.baseline].Name}, trace: summarise(p.base)}
	p.replayWarnings(&ws, &f)
	c.Warnings = ws
	return c, nil
}
