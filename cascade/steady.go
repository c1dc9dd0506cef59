package cascade

import (
	"fmt"
	"math"
)

// Steady returns the storages, in mm, at which both stores rest under a constant net input in mm/d, within 0 and the
// capacities. Where more than one storage is at rest, as below the lowest invert without input, it returns the lowest.
// It fails when the model cannot be replayed, and when there is no state of rest because the ceilings of all outlets of
// a store without capacity are together below its input.
func (m Model) Steady(input float64) (cover, deep float64, err error) {
	if err := m.Check(); err != nil {
		return 0, 0, err
	}
	if !(input >= -maxFlux && input <= maxFlux) {
		return 0, 0, fmt.Errorf("net input of %v mm/d", input)
	}
	s := newSegments(m.Cover.Capacity, m.coverOutlets())
	cover, ok := s.rest(input)
	if !ok {
		return 0, 0, fmt.Errorf("the cover has no steady state: all its outlets together carry less than the net input of %.4g mm/d", input)
	}
	inflow := m.Lateral + m.Percolation.Flow(cover)
	d := newSegments(m.Deep.Capacity, m.deepOutlets())
	deep, ok = d.rest(inflow)
	if !ok {
		return 0, 0, fmt.Errorf("the deep store has no steady state: all its outlets together carry less than the inflow of %.4g mm/d", inflow)
	}
	return cover, deep, nil
}

// rest returns the lowest storage at which the flow is the input.
func (s *segments) rest(input float64) (storage float64, ok bool) {
	if input <= 0 {
		return 0, true
	}
	for i := range s.full {
		if input <= s.total[i+1].at {
			u := s.total[i].storage(input)
			return s.base[i] + min(max(u, 0), s.width[i]), true
		}
	}
	return s.base[s.full], !s.open
}

// storage returns the storage above the foot of the segment at which the line carries flow.
func (l line) storage(flow float64) float64 {
	x := flow - l.at
	if l.square == 0 {
		return x / l.rate
	}
	// The root of square*u^2 + rate*u = x, so written that nothing cancels.
	return 2 * x / (l.rate + math.Sqrt(l.rate*l.rate+4*l.square*x))
}
