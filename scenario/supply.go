package scenario

import (
	"quietslope/cascade/soil"
	"quietslope/scenario/weather"
)

// supply turns weather into the water that reaches the cover store, step by step and for one option:
//
//	infiltration = (1 - kept out)·min(infiltration share·(1 - interception)·rain, limit·24·Δ)
//
// and then, with a soil, the surplus of its water balance; without one but with evapotranspiration, infiltration less the
// demand, which may be negative; without either, the infiltration. It carries the soil's deficit from step to step.
type supply struct {
	record  *weather.Record
	reaches float64 // share of the rain that reaches the ground
	share   float64 // of this, what enters
	limit   float64 // mm/h; +Inf for none
	enters  float64 // share of the infiltration that works let in
	factor  float64 // of the record's evapotranspiration
	soil    *soil.Store
	actual  float64 // actual evapotranspiration since the last reset, mm
}

// newSupply is the supply of an option, with a soil that is full.
func newSupply(g *Ground, u uptake, r *weather.Record) *supply {
	s := &supply{
		record: r, reaches: 1 - u.interception, share: g.Infiltration, limit: g.InfiltrationLimit, enters: 1 - u.keptOut,
		factor: u.petFactor,
	}
	if g.Soil != nil {
		s.factor *= g.Soil.CropFactor
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
			in := s.enters * min(s.share*(s.reaches*s.record.Rain[from+i]), most)
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
