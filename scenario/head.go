package scenario

import (
	"math"
	"path/filepath"

	"quietslope/scenario/result"
)

// head is what every result begins with.
func (p *prepared) head(command string) result.Head {
	h := newHead(p.study, command)
	h.Inputs = append(h.Inputs, result.Input{Role: "weather", File: filepath.Base(p.study.Weather.File), SHA256: p.record.SHA256})
	return h
}

// newHead is the head of a result that rests on a study alone, or on none, which is nil.
func newHead(s *Study, command string) result.Head {
	h := result.Head{
		ResultsVersion: result.Version,
		Tool:           result.Tool{Name: "quietslope", Version: Version},
		Command:        command,
		Inputs:         []result.Input{},
		Warnings:       []result.Warning{},
		Cautions:       Cautions,
	}
	if s != nil {
		h.Study = s.Title
		// Base names only: the same study gives the same bytes from whatever folder it is run.
		h.Inputs = append(h.Inputs, result.Input{Role: "study", File: filepath.Base(s.File), SHA256: s.SHA256})
	}
	return h
}

func (p *prepared) settings() result.Settings {
	c := &p.study.Count
	s := result.Settings{
		YearStarts: p.counted.starts.String(), ApartDays: c.Apart, Confidence: c.Confidence, Resamples: c.Resamples,
		Seed: c.Seed, BlockYears: c.MeanBlock, DesignLife: c.DesignLife, DecideBy: c.DecideBy,
	}
	if t := c.Target; t != nil {
		s.Target = &result.Target{Measure: t.Measure, Value: t.Most}
	}
	if m := p.study.Money; m != nil {
		s.Money = &result.Money{Currency: m.Currency, HorizonYears: m.Horizon, DiscountRate: m.Rate, PricesOf: m.PricesOf, Contingency: m.Contingency}
	}
	if c.DecideOn >= 0 {
		s.DecideOn = p.study.Bands[c.DecideOn].Name
	}
	return s
}

func (p *prepared) bands() []result.Band {
	s := p.study
	bands := []result.Band{}
	thickness := s.Ground.CoverThickness + s.Ground.DeepThickness
	for _, b := range s.Bands {
		r := result.Band{
			Name: b.Name, GivenAs: b.GivenAs, LevelM: b.Level, UntilM: b.Until, BelowGroundM: thickness - b.Level,
		}
		if ground := s.Site.GroundLevel; !math.IsNaN(ground) {
			elevation := ground - thickness + b.Level
			r.ElevationM = &elevation
		}
		if readings := s.Ground.CalibratedTo; !math.IsNaN(readings) {
			within := b.Level <= readings+tie
			r.WithinReadings = &within
		}
		if b.GivenAs == bySafety {
			r.FactorOfSafety = &b.Safety
		}
		bands = append(bands, r)
	}
	return bands
}

func (p *prepared) recordFound() result.Record {
	r, c := p.record, &p.counted
	n := len(r.Rain)
	years := float64(c.years)
	stamp := "start"
	if p.study.Weather.StampEnd {
		stamp = "end"
	}
	found := result.Record{
		From: r.ISO(0), To: r.ISO(n - 1), Step: r.StepText(), Stamp: stamp, Rows: n,
		WarmUpYears: p.replayer.warm.years,
		CountedFrom: r.ISO(c.from), CountedTo: r.ISO(c.to - 1), YearsCounted: c.years,
		PartialDays:   r.Span(0, c.from) + r.Span(c.to, n),
		RainMMPerYear: total(r.Rain[c.from:c.to]) / years,
	}
	if days, _ := r.Stretch(0, n); !r.Monthly() {
		found.StepDays = &days
	}
	for _, g := range r.Filled {
		found.GapsFilled += g.To - g.From
		found.GapFilling = string(p.study.Weather.Gaps)
	}
	if r.PET != nil {
		pet := total(r.PET[c.from:c.to]) / years
		found.PETMMPerYear = &pet
	}
	return found
}
