package scenario

import (
	"quietslope/cascade/soil"
	"quietslope/scenario/weather"
)

// supply turns weather into the water that reaches the cover store, step by step and for one option:
//
//	infiltration = (1 - kept out)·min(infiltration share·rain, limit·24·Δ)
//
// and then, with a soil, the surplus of its water balance; without one but with evapotranspiration, infiltration less the
// demand, which may be negative; without either, the infiltration. It carries the soil's deficit from step to step.
type supply struct {
	record  *weather.Record
	share   float64
	limit   float64 // mm/h; +Inf for none
	keptOut float64
	factor  float64 // of the record's evapotranspiration
	soil    *soil.Store
	actual  float64 // actual evapotranspiration since the last reset, mm
}

// newSupply is the supply of an option's ground, with a soil that is full.
func newSupply(g *Ground, keptOut float64, r *weather.Record) *supply {
	s := &supply{
		record: r, share: g.Infiltration, limit: g.InfiltrationLimit, keptOut: keptOut, factor: 1,
	}
	if g.Soil != nil {
		s.factor = g.Soil.CropFactor
		s.soil = &soil.Store{Available: g.Soil.Available, Readily: g.Soil.Readily}
	}
	return s
}

// fill writes the net input of the record's steps from..from+len(depths)-1, mm per step.
func (s *supply) fill(depths []float64, from int) {
	for i := 0; i < len(depths); {
		days, to := s.record.Stretch(from+i, from+len(depths))
		most := s.limit * 24 * days
		for ; i < to-from; i++ {
			in := (1 - s.keptOut) * min(s.share*s.record.Rain[from+i], most)
			if s.record.PET != nil {
				demand := s.factor * s.record.PET[from+i]
				if s.soil != nil {
					var actual float64
					in, actual = s.soil.Step(in, demand, days)
					s.actual += actual
				} else {
					in -= demand
				}
			}
			depths[i] = in
		}
	}
}
