package scenario

import (
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// state is how the drains of an option are on the day that is replayed for ever: new, aged, or stopped in part.
type state struct {
	name        string
	left        func(*Decline) float64 // share of what they do as new; nil stands for drains that never clog
	everySecond bool                   // of parallel drains only every second one acts
}

// Names of states, as the results have them.
const (
	stateNew     = "as_new"
	stateMean    = "mean_between_flushes"
	stateHorizon = "mean_over_horizon"
	stateBefore  = "before_flush"
	stateNever   = "never_flushed"
	stateHalf    = "half_stopped"
	stateStopped = "all_stopped"
)

// asNew are drains on the day on which they are finished.
var asNew = state{name: stateNew, left: func(*Decline) float64 { return 1 }}

// aged is one of several states of which an option's figures are the weighted mean.
type aged struct {
	state  state
	weight float64
}

// ages is the number of ages at which drains are replayed between two flushes: points of a Gauss-Legendre rule.
const ages = 4

// declineOver is the share of a drain's rate that is left after a part, 0 to 1, of its time, which is that between two flushes, m,
// or, for drains that are never flushed, the horizon or the life after which they are paid for anew, H (all y):
//
//	restored*2^(-part*m/half_life)    2^(-part*H/half_life)
//
// That drains lose equal shares of their rate in equal times, and that every flush brings them back to the same share, is common
// practice, no source.
func declineOver(part float64, horizon int) func(*Decline) float64 {
	return func(d *Decline) float64 {
		switch {
		case d == nil:
			return 1
		case math.IsInf(d.Every, 1):
			return math.Exp2(-part * min(float64(horizon), d.neglected()) / d.HalfLife)
		}
		return d.Restored * math.Exp2(-part*d.Every/d.HalfLife)
	}
}

// neglected is the time, y, for which drains that clog are neither flushed nor renewed; 0 for others.
func (d *Decline) neglected() float64 {
	switch {
	case d == nil:
		return 0
	case d.Renewed > 0:
		return min(d.Every, d.Renewed)
	}
	return d.Every
}

// horizon is the time, y, over which drains age and money counts.
func (s *Study) horizon() int {
	if s.Money != nil {
		return s.Money.Horizon
	}
	return s.Count.DesignLife
}

// ownStates are the states whose weighted mean an option's figures are, and what that mean is called: as new for drains that
// do not clog; the mean between two flushes, or over the horizon for drains that are never flushed, which are new again
// whenever they are renewed.
func (s *Study) ownStates(o *Option) (name string, states []aged) {
	declines, flushed := o.declines()
	if !declines {
		return stateNew, []aged{{asNew, 1}}
	}
	name = stateHorizon
	if flushed {
		name = stateMean
	}
	parts, weights := make([]float64, ages), make([]float64, ages)
	quad.Legendre{}.FixedLocations(parts, weights, 0, 1)
	for i := range parts {
		states = append(states, aged{state{name: name, left: declineOver(parts[i], s.horizon())}, weights[i]})
	}
	return name, states
}

// furtherStates are the states that the results show besides an option's own: what its drains are before a flush and when
// nobody flushes them, and with every second and all of them stopped. An option without drains has none. Beside drains that
// are flushed, those that never are stand at the end of their life or of the horizon before a flush. Drains that nobody
// flushes are not renewed either. Every second one of drains whose rate is given carries half, and half of what they carry
// at most; ageing leaves that as it is.
func (s *Study) furtherStates(o *Option) []state {
	if !o.drained() {
		return nil
	}
	var states []state
	declines, flushed := o.declines()
	if declines {
		states = append(states, asNew)
	}
	if flushed {
		states = append(states, state{name: stateBefore, left: declineOver(1, s.horizon())})
	}
	if declines {
		states = append(states, state{name: stateNever, left: func(d *Decline) float64 {
			if d == nil {
				return 1
			}
			return math.Exp2(-float64(s.horizon()) / d.HalfLife)
		}})
	}
	return append(states,
		state{name: stateHalf, everySecond: true, left: func(*Decline) float64 { return 0.5 }},
		state{name: stateStopped, left: func(*Decline) float64 { return 0 }})
}

// declines tells whether any drain of the option clogs, and whether any is flushed.
func (o *Option) declines() (declines, flushed bool) {
	for i := range o.Measures {
		if d := o.Measures[i].decline(); d != nil {
			declines = true
			flushed = flushed || !math.IsInf(d.Every, 1)
		}
	}
	return declines, flushed
}

// drained tells whether the option has drains of any kind.
func (o *Option) drained() bool {
	for _, m := range o.Measures {
		if m.Trench != nil || m.Bored != nil || m.CutOff != nil {
			return true
		}
	}
	return false
}
