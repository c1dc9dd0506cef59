// Package drain turns what is known of parallel drains into what the stores of package cascade need, and answers the
// questions of a hand calculation about them.
//
// Lengths are m, conductivities m/d, porosities shares, rates 1/d, flows m/d, times days, unless a name is followed by
// another unit. A flow is a volume for each m2 of ground.
//
// # Three laws for the same drains
//
// The steady state: under a recharge that never changes, the water table stands at a height h above the drains midway
// between them, and [Layout.SteadyFlow] is the recharge (Hooghoudt). It is a relation of flow and height and says nothing
// of time.
//
// The linear law: the ground between the drains empties like a reservoir, q = a*S, with the water S that is stored above
// the drains and the rate a of [Layout.ReactionFactor] (De Zeeuw & Hellinga, Kraijenhoff van de Leur). It is the slowest
// part of how a water table moves. Its rate holds for the one height that it was worked out for: at a higher water table
// it lets out too little, at a lower one too much.
//
// The quadratic law: the flow is the steady one at the height that the store has now ([Layout.Quadratic]), so that the
// rate goes up with the height. Its linear part is the linear law of the flow below the drains alone.
//
// Both of the laws of a store take the height midway as pi^2/8 of the mean height of the water table, which is what makes
// a store at rest stand where Hooghoudt says for the same recharge. A true water table at rest is a parabola where the
// water flows below the drains, with a mean of 2/3 of h, and an ellipse where it flows above them, with a mean of pi/4 of
// h: it holds less water than 8/pi^2 of h. Judged by the water that is stored, the linear rate is therefore low at a true
// steady state, by 1 - pi^2/12 = 18 % for flow below the drains and by 1 - pi^3/32 = 3 % for flow above them; the
// quadratic law by 18 % and 1 - pi^6/1024 = 6 %. The stores hold more water for the same flow than the ground does, which is
// on the safe side. The linear law at a water table well below the height that it was worked out for is not.
package drain

import "math"

// Midway is the height of the water table midway between drains over its mean height, as both laws of a store take it: over
// that of the linear reservoir at rest, R/(mu*a). See [StepHead], which has the sources.
const Midway = math.Pi * math.Pi / 8

// Layout is a set of parallel drains at one level in a layer above an impermeable base.
type Layout struct {
	Spacing    float64 // between neighbouring drains, m, above 0
	Above      float64 // conductivity of the ground above the level of the drains, m/d, above 0
	Below      float64 // the same below it, m/d, 0 or more
	Equivalent float64 // equivalent depth of the flow below the drains, m, 0 or more: see EquivalentDepth
	Porosity   float64 // drainable porosity, share, above 0; a steady state does not need it
}

// SteadyFlow returns the flow, m/d, that the drains carry for good while the water table stands a height h, in m, above
// them midway,
//
//	q = (8*Kb*d*h + 4*Ka*h^2)/L^2
//
// with the conductivity Kb below the drains, Ka above them, the equivalent depth d and the spacing L. With Ka = Kb = K
// and drains that reach d into the ground, all the way to the base, it is 4*K*((d+h)^2 - d^2)/L^2.
//
// Source: S. B. Hooghoudt 1940, Versl. Landbouwk. Onderz. 46(14), as in H. P. Ritzema (ed.) 1994, Drainage Principles and
// Applications, ILRI Publ. 16, ch. 8 (from memory).
func (l Layout) SteadyFlow(head float64) float64 {
	return (8*l.Below*l.Equivalent*head + 4*l.Above*head*head) / (l.Spacing * l.Spacing)
}

// SteadyHead returns the height midway, m, at which [Layout.SteadyFlow] is the flow, which is 0 or more:
//
//	h = q*L^2 / (4*Kb*d + sqrt((4*Kb*d)^2 + 4*Ka*q*L^2))
//
// This is the positive root of the quadratic equation in the form that loses no digits where one of the flows, below or
// above the drains, is small against the other.
func (l Layout) SteadyHead(flow float64) float64 {
	if flow == 0 {
		return 0
	}
	below := 4 * l.Below * l.Equivalent
	return flow * l.Spacing * l.Spacing / (below + math.Hypot(below, 2*math.Sqrt(l.Above*flow)*l.Spacing))
}

// ReactionFactor returns the rate, 1/d, at which the drains empty the ground between them while the water table stands
// about a height h, in m, above them midway:
//
//	a = pi^2*(Kb*d + Ka*h/2)/(mu*L^2)
//
// It is [ReactionFactor] for the mean thickness of the flow, the equivalent depth and half of the height, each with its
// own conductivity. A drain of an efficiency below 1 has so much of the rate.
//
// Sources: as there; the mean thickness as in ILRI Publ. 16, ch. 8 (from memory).
func (l Layout) ReactionFactor(head float64) float64 {
	// The depth that has the conductivity of the ground above: exact where both are equal.
	depth := l.Equivalent*(l.Below/l.Above) + head/2
	return ReactionFactor(l.Above, depth, l.Porosity, l.Spacing)
}

// Quadratic returns the law q = rate*u + square*u^2, in mm/d, of a store that holds u mm of drainable water above the
// level of the drains; rate in 1/d, square in 1/(mm d). It is [Layout.SteadyFlow] at the height midway that goes with the
// water,
//
//	h = pi^2/8*y    y = u/(1000*mu), the mean height of the water table above the drains, m
//
// with [Midway], so that
//
//	rate   = pi^2*Kb*d/(mu*L^2)               the reaction factor for h = 0
//	square = pi^4*Ka/(16*1000*mu^2*L^2)
//
// Sources: those of [Layout.SteadyFlow] and [StepHead]. That the flow follows the height at once, as if the water table
// were at rest, is the usual assumption of drainage models: common practice, no source.
func (l Layout) Quadratic() (rate, square float64) {
	perMM := Midway / (1000 * l.Porosity) // height midway for each mm of water, m/mm
	square = 1000 * 4 * l.Above * perMM * perMM / (l.Spacing * l.Spacing)
	return l.ReactionFactor(0), square
}

// ReactionFactor returns the rate, 1/d, at which parallel drains empty the ground between them,
//
//	a = pi^2*K*D/(mu*L^2)
//
// for a conductivity K in m/d, a depth of flow D in m, a drainable porosity mu (share) and a spacing L in m. All four are above
// 0; D may be 0, and the rate then is.
//
// It is the rate of the slowest part of the solution of the linearised groundwater equation between two drains, which is all
// of it for a water table in the shape of half a sine. D is the depth through which the water flows towards the drains: to the
// impermeable base for drains that reach it, the equivalent depth for drains above it, each with the mean height of the
// water table above the drains.
//
// Sources: De Zeeuw & Hellinga 1958, Landbouwkundig Tijdschrift 70, 405-421 (reaction factor); Kraijenhoff van de Leur
// 1958, De Ingenieur 70, B87-B94 (reservoir coefficient, 1/a).
func ReactionFactor(conductivity, flowDepth, porosity, spacing float64) float64 {
	return math.Pi * math.Pi * conductivity * flowDepth / (porosity * spacing * spacing)
}
