// Package scheme converts rates that were calibrated with a stepping formula into the rates of the exact reservoir.
//
// A program that steps a linear reservoir, Q = a*S, over steps of length D gives another recession than the reservoir
// itself: its rate a belongs to the formula and to D. With a constant inflow I within the step each formula of this
// package is
//
//	Q(t+D) = B*Q(t) + (1-B)*I
//
// so its outflow at the ends of steps is that of the exact reservoir of rate a' = -ln(B)/D. The levels at the ends of
// steps, S/(1000*n) m with the drainable porosity n, stay as they were too when the converted store has the porosity
//
//	n' = n*a/a'
//
// and with it capacity and inverts, given as levels, keep their levels. A store that is clipped at its capacity or at
// zero at the ends of steps stays equal as well: with constant inflow the storage moves in one direction within a step.
//
// For the lower of two stores in series the conversion is approximate, since its inflow varies within the step where
// the formula takes one value: the mean of both ends, which errs by a small bend only, or one end, which brings the
// water half a step late (explicit) or early (implicit). [Scheme.Replay] steps both stores by the formula itself, to
// show by how much.
//
// Storages are mm, times days, rates 1/d.
package scheme

import (
	"fmt"
	"math"
)

// Scheme is a formula that steps a linear reservoir. The formulas differ in the storage from which they take the
// outflow of a step: the one at its start, at its end, or the mean of both.
type Scheme int

const (
	Exact    Scheme = iota // no stepping formula: the exponential solution
	Centred                // mean of both ends; the trapezoidal rule
	Explicit               // start of the step; Euler's forward rule
	Implicit               // end of the step; Euler's backward rule
)

// String returns the name in small letters.
func (s Scheme) String() string {
	switch s {
	case Exact:
		return "exact"
	case Centred:
		return "centred"
	case Explicit:
		return "explicit"
	case Implicit:
		return "implicit"
	}
	return fmt.Sprintf("scheme %d", int(s))
}

// end returns the weight of the storage at the end of the step in its outflow.
func (s Scheme) end() float64 {
	switch s {
	case Centred:
		return 0.5
	case Implicit:
		return 1
	}
	return 0
}

// Beta returns the share B of its outflow that a reservoir of the given rate, in 1/d, keeps over one step, in days,
// without inflow. With x = rate*step it is
//
//	exp(-x)         exact
//	(2-x)/(2+x)     centred
//	1-x             explicit
//	1/(1+x)         implicit
//
// It is 0 or less where the formula empties the store within a step or oscillates: for x >= 2 centred, x >= 1 explicit.
//
// Sources: V. M. Ponce 1989, Engineering Hydrology, Principles and Practices, Prentice Hall, cascade of linear
// reservoirs, for the centred one (there C2, with x = C; the formula and x <= 2 were read in the author's own online
// pages on it). The others follow in one line from the balance of a step, S(t+D) = S(t) + D*(I - a*S), with S taken at
// its start or at its end. M. P. Clark & D. Kavetski 2010, Ancient numerical daemons of conceptual hydrological
// modeling 1, Water Resources Research 46 (abstract read), compare what such formulas do to the results of models.
func (s Scheme) Beta(rate, step float64) float64 {
	x := rate * step
	if s == Exact {
		return math.Exp(-x)
	}
	end := s.end()
	return (1 - (1-end)*x) / (1 + end*x)
}

// ExactRate returns the rate -ln(B)/step, in 1/d, of the exact reservoir whose outflow at the ends of steps is that of
// a reservoir of the given rate stepped by the scheme (see [Scheme.Beta]); it is 0 for a rate of 0. It fails for a rate
// below 0 or a step that is not above 0, and where B is not above 0: no exact reservoir does the same.
func (s Scheme) ExactRate(rate, step float64) (float64, error) {
	x := rate * step
	if !(rate >= 0 && step > 0 && x <= math.MaxFloat64) {
		return 0, fmt.Errorf("a rate of %v /d with a step of %v d: the rate must be 0 or more and the step above 0", rate, step)
	}
	if s == Exact {
		return rate, nil
	}
	start, end := 1-s.end(), s.end()
	if start*x >= 1 {
		return 0, fmt.Errorf("a rate of %v /d with a step of %v d is out of the range of the %v scheme, which oscillates unless their product, here %.6g, is below %v",
			rate, step, s, x, 1/start)
	}
	// The logarithm of B in two parts of one sign, so that nothing cancels for small x.
	return (math.Log1p(end*x) - math.Log1p(-start*x)) / step, nil
}

// Pair is two linear stores in series: a part of what leaves the cover enters the deep store.
type Pair struct {
	CoverRate     float64 // at which the cover empties, percolation included, 1/d
	Percolation   float64 // of this, what enters the deep store, 1/d
	DeepRate      float64 // at which the deep store empties, 1/d
	CoverCapacity float64 // mm, above 0; +Inf for none
	DeepCapacity  float64
	Lateral       float64 // inflow to the deep store from the side, mm/d, 0 or more
}

// Replay steps a pair of stores by the formula of the scheme, one step of the given length in days for each depth, in
// mm, of net input; a depth may be negative. It starts at the given storages and returns those reached. The storages at
// the ends of the steps go into covers and deeps, each of which is as long as depths, or nil when it is not wanted.
//
// It does as a plain stepping program does. The deep store's inflow of a step is the percolation from the storage that
// the scheme takes for the cover's own outflow: at the start of the step, at its end, or the mean of both. Storages are
// clipped to 0 and the capacity at the end of the step, the cover's before its percolation is worked out.
//
// It fails for the exact scheme, which has no such formula, and for rates out of the scheme's range (see
// [Scheme.ExactRate]), of which it names the store.
func (s Scheme) Replay(p Pair, cover, deep float64, depths []float64, days float64, covers, deeps []float64) (endCover, endDeep float64, err error) {
	if s == Exact {
		return 0, 0, fmt.Errorf("the %v scheme has no stepping formula", s)
	}
	if _, err := s.ExactRate(p.CoverRate, days); err != nil {
		return 0, 0, fmt.Errorf("cover: %w", err)
	}
	if _, err := s.ExactRate(p.DeepRate, days); err != nil {
		return 0, 0, fmt.Errorf("deep store: %w", err)
	}
	if !(p.Percolation >= 0 && p.Percolation <= p.CoverRate && p.CoverCapacity > 0 && p.DeepCapacity > 0 && p.Lateral >= 0) {
		return 0, 0, fmt.Errorf("no pair of stores: %+v", p)
	}
	if covers != nil && len(covers) != len(depths) || deeps != nil && len(deeps) != len(depths) {
		return 0, 0, fmt.Errorf("%d depths, but room for %d and %d storages", len(depths), len(covers), len(deeps))
	}
	end := s.end()
	for k, depth := range depths {
		before := cover
		cover = s.step(cover, p.CoverRate*days, depth, p.CoverCapacity)
		inflow := p.Percolation*((1-end)*before+end*cover) + p.Lateral
		deep = s.step(deep, p.DeepRate*days, inflow*days, p.DeepCapacity)
		if covers != nil {
			covers[k] = cover
		}
		if deeps != nil {
			deeps[k] = deep
		}
	}
	return cover, deep, nil
}

// step returns the storage at the end of a step over which depth mm flow in, for x = rate*step.
func (s Scheme) step(storage, x, depth, capacity float64) float64 {
	end := s.end()
	next := (storage*(1-(1-end)*x) + depth) / (1 + end*x)
	return min(max(next, 0), capacity)
}
