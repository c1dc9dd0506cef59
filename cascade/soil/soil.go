// Package soil keeps the water of the root zone: how much of the infiltration the soil and its plants keep, and how much
// goes on to the water table.
//
// Water is mm, time is days.
package soil

import "math"

// Store is a soil with a deficit against field capacity. Water in excess of field capacity is recharge.
type Store struct {
	Available float64 // water that plants can take from full, mm, >= 0
	Readily   float64 // share of it that they take without stress, 0 to 1
	Deficit   float64 // carried on from step to step, mm, 0 to Available; 0 is full
}

// maxParts is the largest number of equal parts into which Step cuts a day.
const maxParts = 1024

// Step carries the deficit D over a step of the given length in days and returns the recharge and the actual
// evapotranspiration, mm. Infiltration is what enters the soil and demand is the evapotranspiration of a soil that is wet
// enough, both mm >= 0 over the step and spread evenly.
//
// The actual evapotranspiration is Ks*demand with
//
//	Ks = 1                                             while D <= Readily*Available
//	Ks = (Available - D)/((1 - Readily)*Available)     beyond
//
// taken at the start of each part of the step; then D changes by it less the infiltration, and what is below zero is
// recharge. A part is at most a day, and so short that its demand is at most (1 - Readily)*Available: then D cannot pass
// Available. With Readily at 1 there is no stress until the soil is empty; D then moves evenly and one part is as good as
// many. With Readily so near to 1 that more than 1024 parts a day would be wanted, 1024 it is. In both cases the actual
// evapotranspiration is what is left in the soil at most.
//
// At every call infiltration + D(new) - D(old) = recharge + actual, up to rounding.
//
// Source: R. G. Allen, L. S. Pereira, D. Raes & M. Smith 1998, Crop evapotranspiration, FAO Irrigation and Drainage Paper
// 56, eq. 84 (Ks).
func (s *Store) Step(infiltration, demand, days float64) (recharge, actual float64) {
	n := max(1, math.Ceil(days-1e-9)) // a day that rounding has made longer is still one
	limit := (1 - s.Readily) * s.Available
	for most := n * maxParts; limit > 0 && demand/n > limit && n < most; {
		n *= 2
	}
	in, want := infiltration/n, demand/n
	for range int(n) {
		et := s.stress() * want
		d := s.Deficit - in + et
		if d > s.Available {
			et = s.Available - s.Deficit + in
			d = s.Available
		}
		if d < 0 {
			recharge -= d
			d = 0
		}
		s.Deficit = d
		actual += et
	}
	return recharge, actual
}

// stress is Ks.
func (s *Store) stress() float64 {
	if s.Deficit <= s.Readily*s.Available {
		return 1
	}
	return (s.Available - s.Deficit) / ((1 - s.Readily) * s.Available)
}
