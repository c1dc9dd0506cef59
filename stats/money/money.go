// Package money is engineering economics: what costs and benefits of later years are worth today, what part of the works
// costs over a number of years, and which of several options are worth their price. It knows nothing of slopes or files.
//
// A rate is a share per year, 0.035 for 3.5 %, and more than -1; 0 means that a later year counts as much as today.
// Amounts are in any currency, at the prices of one day; so the rate is a real one, without inflation. Present values are
// those at the start of the first year. Arguments that no data can cause are mistakes of the caller and panic.
//
// Source of the factors and their letters: the standard interest formulas for discrete compounding, as in Newnan,
// Eschenbach & Lavelle, Engineering Economic Analysis, and Blank & Tarquin, Engineering Economy.
package money

import "math"

// Discount is the present worth of 1 paid after a number of years, which need not be whole:
//
//	P/F = (1 + i)^-t
func Discount(rate, years float64) float64 {
	return math.Exp(-years * math.Log1p(known(rate)))
}

// Annuity is the present worth of 1 paid at the end of each of a number of years:
//
//	P/A = (1 - (1 + i)^-n)/i    n at i = 0
//
// It keeps all digits at small rates.
func Annuity(rate float64, years int) float64 {
	if years < 0 {
		panic("money: negative number of years")
	}
	return annuity(known(rate), float64(years))
}

func annuity(rate, n float64) float64 {
	if n == 0 || rate == 0 {
		return n
	}
	return -math.Expm1(-n*math.Log1p(rate)) / rate
}

// Recovery is what has to be paid at the end of each of a number of years, one or more, for a present worth of 1: the
// reciprocal of Annuity.
//
//	A/P = i/(1 - (1 + i)^-n)    1/n at i = 0
func Recovery(rate float64, years int) float64 {
	if years < 1 {
		panic("money: nothing can be paid back in no year")
	}
	return 1 / Annuity(rate, years)
}

// Plan is what one part of the works costs over time.
type Plan struct {
	Capital      float64 // with contingency; paid at the start, and again whenever its life is over
	Life         float64 // y; +Inf when it is never renewed
	PerYear      float64 // at the end of each year
	PerFlush     float64 // at each multiple of FlushedEvery
	FlushedEvery float64 // y; +Inf when it is never flushed
}

// PresentValue is the present worth of all that the plan costs over a horizon of H whole years:
//
//	PV = C + C*sum over j*life < H of (1 + i)^-(j*life) + P*(P/A, i, H) + F*sum over j*every < H of (1 + i)^-(j*every)
//
// C is the capital, P the cost per year, F that of a flush, and j counts from 1. What falls on the end of the horizon is
// not paid any more, and what is left of the works then is worth nothing. A flush falls due whether or not the works are
// renewed at the same time.
func (p Plan) PresentValue(rate float64, horizon int) float64 {
	return p.Capital +
		float64(p.Capital*repeated(rate, p.Life, p.Renewals(horizon))) +
		float64(p.PerYear*Annuity(rate, horizon)) +
		float64(p.PerFlush*repeated(rate, p.FlushedEvery, p.Flushes(horizon)))
}

// Renewals is how often the works are renewed within a number of years.
func (p Plan) Renewals(horizon int) int { return times(p.Life, horizon) }

// Flushes is how often the works are flushed within a number of years.
func (p Plan) Flushes(horizon int) int { return times(p.FlushedEvery, horizon) }

// repeated is the present worth of 1 paid n times, each time after so many years more: an annuity at the rate of such a
// span of years.
func repeated(rate, every float64, n int) float64 {
	if n == 0 {
		return 0
	}
	return annuity(math.Expm1(every*math.Log1p(known(rate))), float64(n))
}

// slack is by how much a multiple may fall short of the horizon and still be at its end, y: three times a third of the
// horizon is the horizon, however it is rounded.
const slack = 1e-9

// times is the number of multiples j*every, j = 1, 2, ..., before the end of the horizon.
func times(every float64, horizon int) int {
	if !(every > 0) {
		panic("money: a span of time is not more than 0; +Inf is never")
	}
	if horizon < 0 {
		panic("money: negative horizon")
	}
	return max(0, int(math.Ceil((float64(horizon)-slack)/every))-1)
}

// BenefitFactor is the present worth of a benefit of 1 a year over a horizon, of works that act from a number of years
// after the start on. A year t = 1, 2, ... counts, at its end, with the share of it in which they act:
//
//	sum over t = 1 ... H of max(0, min(1, t - start))*(1 + i)^-t
//
// With start 0 or less it is Annuity, with start H or more it is 0.
func BenefitFactor(rate float64, horizon int, start float64) float64 {
	if math.IsNaN(start) {
		panic("money: the start of the benefits is not a number")
	}
	start = max(0, start)
	if start >= float64(horizon) {
		return 0
	}
	// The years after the first with any benefit are whole: an annuity from its end on.
	first := math.Floor(start) + 1
	rest := Annuity(rate, horizon-int(first))
	return float64(Discount(rate, first) * (first - start + rest))
}

func known(rate float64) float64 {
	if !(rate > -1) {
		panic("money: a rate is not more than -1")
	}
	return rate
}
