// Package slope turns the water level above a slip surface into the factor of safety of a long even slope, and back.
//
// Lengths are m, angles degrees, unit weights kN/m3, stresses kPa. Heights are vertical, never normal to the slope.
package slope

import "math"

// waterWeight is the unit weight of water, kN/m3.
const waterWeight = 9.81

// Slope is an infinite slope: a slip surface parallel to the ground and long against its depth, so that each vertical
// slice stands as the next one does.
type Slope struct {
	Angle      float64 // of the ground and of the slip surface, degrees, above 0 and below 90
	Depth      float64 // vertical, from the ground to the slip surface, m, above 0
	UnitWeight float64 // of the ground, the same above and below the water, kN/m3, above 0
	Friction   float64 // effective angle of friction on the slip surface, degrees, above 0 and below 90
	Cohesion   float64 // effective cohesion on the slip surface, kPa, 0 or more
	Standing   bool    // the water stands in open fissures; otherwise it flows parallel to the slope
}

// FactorOfSafety returns strength over stress on the slip surface,
//
//	FS = [c + (w*z*cos(b)^2 - u)*tan(f)] / [w*z*sin(b)*cos(b)]
//
// with the cohesion c, unit weight w, depth z, slope angle b and angle of friction f, for a water level that stands h m
// vertically above the slip surface. The pore pressure there is
//
//	u = 9.81*h*cos(b)^2    for flow parallel to the slope
//	u = 9.81*h             for water standing in open fissures
//
// FS falls in a straight line as h rises. It means nothing for h below 0, where u would be suction, and for h above
// [Slope.Uplift], where the slip surface would carry tension.
//
// Sources: A. W. Skempton & F. A. DeLory 1957, Stability of natural slopes in London clay, Proc. 4th Int. Conf. Soil
// Mech. Found. Eng., London, vol. 2, 378-381 (flow parallel to the slope; from memory); the same formula, with the
// water at the surface, in B. M. Das, Principles of Geotechnical Engineering, ch. 15 (read second-hand). The
// pressure of standing water is plain hydrostatics; to use it for open fissures is common practice, no source.
func (s Slope) FactorOfSafety(h float64) float64 {
	g := s.gravity()
	return (s.Cohesion + (g.normal-g.water*h)*g.tanFriction) / g.shear
}

// Level returns the h, in m, at which [Slope.FactorOfSafety] is fs. It is below 0 where even the drained slope does not
// reach fs, and above [Slope.Uplift] where the cohesion alone gives more than fs; it is up to the caller to refuse both.
func (s Slope) Level(fs float64) float64 {
	g := s.gravity()
	return (g.normal - (fs*g.shear-s.Cohesion)/g.tanFriction) / g.water
}

// Uplift returns the h, in m, at which the pore pressure carries all the weight on the slip surface, u = w*z*cos(b)^2:
// no effective stress is left there.
func (s Slope) Uplift() float64 {
	g := s.gravity()
	return g.normal / g.water
}

// gravity is what the formulas share.
type gravity struct {
	normal      float64 // total stress across the slip surface, kPa
	shear       float64 // and along it, kPa
	water       float64 // pore pressure for each m of water level, kPa/m
	tanFriction float64
}

func (s Slope) gravity() gravity {
	sin, cos := math.Sincos(s.Angle * math.Pi / 180)
	weight := s.UnitWeight * s.Depth
	g := gravity{
		normal:      weight * cos * cos,
		shear:       weight * sin * cos,
		water:       waterWeight,
		tanFriction: math.Tan(s.Friction * math.Pi / 180),
	}
	if !s.Standing {
		g.water *= cos * cos
	}
	return g
}
