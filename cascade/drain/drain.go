// Package drain turns what is known of a drain into what the stores of package cascade need.
//
// Lengths are m, conductivities m/d, porosities shares, rates 1/d.
package drain

import "math"

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
