package drain

import (
	"fmt"
	"math"
)

// EquivalentDepth returns the depth d, m, of the layer that would carry the flow below the drains with the same loss of
// head if the water did not have to come together at them:
//
//	d = (pi*L/8) / (ln(L/(pi*r)) + F(x))    x = 2*pi*D/L
//	F(x) = 4 * sum over n = 1, 3, 5 ... of e^(-2nx)/(n*(1 - e^(-2nx)))
//
// with the depth D of the impermeable base below the drains, which may be infinite, the radius r of the drains and their
// spacing L, all m and above 0; a D of 0 gives 0.
//
// The result is never above D. The formula would be where D is below about pi*r, and where the drains almost touch each
// other, L near pi*r or less: drains of that size are no lines in the ground any more, and no depth is lost to them. (With
// an infinite D and L at or below pi*r the result is infinite.) d grows with D. It grows with L from about ten radii
// up, for a D of five radii or more; L^2/d, which the height of the water table goes with, grows with L everywhere.
//
// Source: W. H. van der Molen & J. Wesseling 1991, Agric. Water Manage. 19, 1-16 (from memory). The sum over n is that of
// a product over the images of the drains, F = 2 * sum over k of ln((1 + q^k)/(1 - q^k)) with q = e^(-2x), which is
// -2*ln of Jacobi's theta function, 1 - 2q + 2q^4 - 2q^9 + ... . It converges fast for large x, and its transform
//
//	F(x) = pi^2/(4x) + ln(x/(2*pi)) - 2*ln(1 + e^(-pi^2/x) + e^(-3*pi^2/x) + ...)
//
// for small x, where the first two terms are the closed form of the paper and the third is what it leaves out. Theta
// function: E. T. Whittaker & G. N. Watson, A Course of Modern Analysis, ch. 21 (from memory). With the terms below both
// are exact to 1e-15, so there is no step between them.
func EquivalentDepth(below, radius, spacing float64) float64 {
	x := 2 * math.Pi * (below / spacing)
	if x < 1 {
		// The term pi^2/(4x) is the resistance of the depth D itself: taken out, nothing overflows for a small D.
		lost := math.Log(below/(math.Pi*radius)) - 2*math.Log1p(math.Exp(-math.Pi*math.Pi/x)+math.Exp(-3*math.Pi*math.Pi/x))
		if lost <= 0 {
			return below
		}
		return below / (1 + 4/(math.Pi*math.Pi)*x*lost)
	}
	q := math.Exp(-2 * x)
	q4 := q * q * q * q
	q9 := q4 * q4 * q
	resistance := math.Log(spacing/(math.Pi*radius)) - 2*math.Log1p(-2*(q-q4+q9-q9*q4*q*q*q))
	if resistance <= 0 {
		return below
	}
	return min(below, math.Pi/8*spacing/resistance)
}

// MoodyDepth returns the equivalent depth, m, by another closed form, with the arguments of [EquivalentDepth]:
//
//	d = D/(1 + D/L*(8/pi*ln(D/r) - (3.55 - 1.6*D/L + 2*(D/L)^2)))    D/L up to 0.3
//	d = pi*L/(8*(ln(L/r) - 1.15))                                    D/L above 0.3
//
// It was made to give Hooghoudt's table, which joins the radial and the level flow at 0.7*D, and gives it within 0.7 %. It
// lies above [EquivalentDepth], by up to 6.5 % where D is eight radii or more, and by some 0.1 % for an infinite D. At
// D/L = 0.3 it steps down by up to 0.6 %, for spacings of a hundred radii or more. The result is never above D.
//
// Source: W. T. Moody 1966, Nonlinear differential equation of drain spacing, J. Irrig. Drain. Div. ASCE 92(IR2), 1-9
// (from memory; the second line was also read, quoted elsewhere).
func MoodyDepth(below, radius, spacing float64) float64 {
	share := below / spacing
	if share <= 0.3 {
		lost := 8/math.Pi*math.Log(below/radius) - (3.55 - 1.6*share + 2*share*share)
		if lost <= 0 {
			return below
		}
		return below / (1 + share*lost)
	}
	resistance := math.Log(spacing/radius) - 1.15
	if resistance <= 0 {
		return below
	}
	return min(below, math.Pi/8*spacing/resistance)
}

// TrenchRadius returns the radius, m, of the round drain that takes in water as a trench or a body of gravel does whose
// bed is width wide and which stands in water to a depth of wet on both sides, both m:
//
//	r = u/pi    u = width + 2*wet, the wetted perimeter
//
// A pipe half full has u = pi*r. Source: L. F. Ernst 1962, as given by W. F. J. van Beers 1976, ILRI Bulletin 15, p. 14
// (u = pi*r of pipes, read); u of a ditch with upright walls and of an envelope as in ILRI Publ. 16, ch. 8 (from memory).
func TrenchRadius(width, wet float64) float64 { return (width + 2*wet) / math.Pi }

// least is the spacing, m, from which SteadySpacing begins to look.
const least = 1e-6

// SteadySpacing returns the widest spacing, m, at which parallel drains carry the flow, m/d, with a water table that
// stands no more than head, m, above them midway ([Layout.SteadyFlow]). above and below are the conductivities, m/d;
// equivalent gives the equivalent depth, m, for a spacing, m.
//
// It widens the spacing from 1e-6 m until the drains no longer carry the flow and then halves the bracket to the last
// digit, so it needs no start. Where equivalent makes more than one spacing the limit it returns the first from below. It
// fails where the closest drains do not carry the flow, and where the widest do.
func SteadySpacing(flow, head, above, below float64, equivalent func(spacing float64) float64) (float64, error) {
	if !(flow > 0 && head > 0) {
		return 0, fmt.Errorf("a flow of %v m/d and a water table %v m above the drains: both have to be above 0", flow, head)
	}
	carries := func(spacing float64) bool {
		l := Layout{Spacing: spacing, Above: above, Below: below, Equivalent: equivalent(spacing)}
		return l.SteadyFlow(head) >= flow
	}
	lo := least
	if !carries(lo) {
		return 0, fmt.Errorf("drains at no spacing carry %v m/d with the water table %v m above them", flow, head)
	}
	hi := 2 * lo
	for carries(hi) {
		if lo, hi = hi, 2*hi; math.IsInf(hi*hi, 1) {
			return 0, fmt.Errorf("drains at any spacing carry %v m/d with the water table %v m above them", flow, head)
		}
	}
	for {
		mid := lo + (hi-lo)/2
		if mid <= lo || mid >= hi {
			return lo, nil
		}
		if carries(mid) {
			lo = mid
		} else {
			hi = mid
		}
	}
}
