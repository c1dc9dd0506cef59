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
	limit   float64 // mm per step; +Inf for none
	keptOut float64
	factor  float64 // of the record's evapotranspiration
	soil    *soil.Store
	actual  float64 // actual evapotranspiration since the last reset, mm
}

// supplyKey tells apart the supplies of the options: those with equal keys get the same water.
type supplyKey struct {
	share, limit, keptOut float64
	soil                  Soil
	hasSoil               bool
}

func (w *works) supplyKey() supplyKey {
	k := supplyKey{share: w.ground.Infiltration, limit: w.ground.InfiltrationLimit, keptOut: w.keptOut}
	if w.ground.Soil != nil {
		k.soil, k.hasSoil = *w.ground.Soil, true
	}
	return k
}

func newSupply(k supplyKey, r *weather.Record) *supply {
	s := &supply{
		record: r, share: k.share, limit: k.limit * 24 * r.Days(), keptOut: k.keptOut, factor: 1,
	}
	if k.hasSoil {
		s.factor = k.soil.CropFactor
		s.soil = &soil.Store{Available: k.soil.Available, Readily: k.soil.Readily}
	}
	return s
}

// fill writes the net input of the record's steps from..from+len(depths)-1, mm per step.
func (s *supply) fill(depths []float64, from int) {
	days := s.record.Days()
	for i := range depths {
		in := (1 - s.keptOut) * min(s.share*s.record.Rain[from+i], s.limit)
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
