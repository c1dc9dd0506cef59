package drain

import "math"

// early is the time, in reservoir coefficients, up to which the sums over reflections are used and from which those over
// n. Either has terms below 1e-17 left out there.
const early = 0.5

// StepOutflow returns the flow of parallel drains as a share of the recharge, a time t after the recharge began on ground
// that was drained to the level of the drains; t is in reservoir coefficients, t = a*days, and 0 or more:
//
//	q/R = 1 - 8/pi^2 * sum over n = 1, 3, 5 ... of e^(-n^2*t)/n^2
//
// It is also the share of the water that is gone a time t after a level water table began to fall. For a small t, where
// the sum needs many terms, it is worked out from the same solution written as reflections between the drains,
//
//	q/R = 4*sqrt(t)/pi * (1/sqrt(pi) + 2 * sum over k = 1, 2 ... of (-1)^k*ierfc(k*pi/(2*sqrt(t))))
//
// with ierfc the integral of the complementary error function from its argument to infinity.
//
// Sources: D. A. Kraijenhoff van de Leur 1958, De Ingenieur 70, B87-B94 (the sum over n; from memory); H. S. Carslaw & J. C.
// Jaeger 1959, Conduction of Heat in Solids, sec. 12.5 (how the second form follows from the Laplace transform; from
// memory).
func StepOutflow(t float64) float64 {
	if t <= 0 {
		return 0
	}
	if t < early {
		root := math.Sqrt(t)
		z := math.Pi / (2 * root)
		return 4 * root / math.Pi * (1/math.Sqrt(math.Pi) - 2*(ierfc(z)-ierfc(2*z)))
	}
	sum := 0.0
	for n := 9.0; n > 0; n -= 2 {
		sum += math.Exp(-n*n*t) / (n * n)
	}
	return 1 - 8/(math.Pi*math.Pi)*sum
}

// StepHead returns the height h of the water table midway between the drains a time t after the recharge R began, as
// h*mu/(R*j) with the drainable porosity mu and the reservoir coefficient j = 1/a; t as in [StepOutflow]:
//
//	h*mu/(R*j) = 4/pi * sum over n = 1, -3, 5, -7 ... of (1 - e^(-n^2*t))/n^3
//
// which tends to pi^2/8. Its derivative is the height midway of a level water table that falls, as a share of its first
// height. For a small t the reflections are
//
//	h*mu/(R*j) = t - 2*t * sum over k = 0, 1 ... of (-1)^k*(erfc(z) - 2*z*ierfc(z))    z = (2k + 1)*pi/(4*sqrt(t))
//
// Sources: as for [StepOutflow].
func StepHead(t float64) float64 {
	if t <= 0 {
		return 0
	}
	if t < early {
		late := 0.0
		sign := 1.0
		for k := 1.0; k <= 5; k += 2 {
			z := k * math.Pi / (4 * math.Sqrt(t))
			late += sign * (math.Erfc(z) - 2*z*ierfc(z))
			sign = -sign
		}
		return t - 2*t*late
	}
	sum := 0.0
	sign := 1.0 // of n = 9
	for n := 9.0; n > 0; n -= 2 {
		sum += sign * math.Exp(-n*n*t) / (n * n * n)
		sign = -sign
	}
	return math.Pi*math.Pi/8 - 4/math.Pi*sum
}

// ierfc is the integral of the complementary error function from z to infinity.
func ierfc(z float64) float64 { return math.Exp(-z*z)/math.Sqrt(math.Pi) - z*math.Erfc(z) }

// shape is the height midway of the slowest part of a falling water table that began as a parabola of the fourth degree,
// over its first height. The exact figure is 192*(pi^2 - 8)/pi^5 = 1.173; 1.16 is the one in use.
const shape = 1.16

// FallingHead returns the height of the water table midway between the drains, m, t days after it began to fall from a
// first height head, m, without recharge; rate is the reaction factor, 1/d:
//
//	h = min(head, 1.16*head*e^(-rate*t))
//
// The water table begins as a parabola of the fourth degree, which is near to one that has fallen for a while. The
// formula is the slowest part alone, and above the first height at first: the water midway has not noticed the drains
// yet, and stands still here.
//
// Sources: L. D. Dumm 1954, Agric. Eng. 35, 726-730, after R. E. Glover; 1.16: L. D. Dumm 1960, Validity and use of the
// transient flow concept in subsurface drainage, ASAE; both as in ILRI Publ. 16, ch. 8 (from memory).
func FallingHead(head, rate, t float64) float64 { return min(head, shape*head*math.Exp(-rate*t)) }

// FallingTime returns the time, d, until [FallingHead] has come down from head to a height to, both m: 0 where it begins
// there, else ln(1.16*head/to)/rate.
func FallingTime(head, to, rate float64) float64 {
	if to >= head {
		return 0
	}
	return math.Log(shape*head/to) / rate
}

// FallingSpacing returns the widest spacing, m, at which [FallingHead] comes down from head to a height to, both m, within t
// days:
//
//	L = pi*sqrt(K*D*t/mu)/sqrt(ln(1.16*head/to))
//
// with the arguments of [ReactionFactor]. D is the mean depth of flow while the water table falls. Where head is no higher
// than to the spacing is infinite.
//
// Sources: as for [FallingHead].
func FallingSpacing(conductivity, flowDepth, porosity, head, to, t float64) float64 {
	if to >= head {
		return math.Inf(1)
	}
	return math.Pi * math.Sqrt(conductivity*flowDepth*t/(porosity*math.Log(shape*head/to)))
}

// ConsolidationTime returns the time, d, in which clay between two parallel faces that drain it makes 90 % of a change of
// pore pressure,
//
//	t90 = 0.85*(L/2)^2/cv
//
// for the spacing L of the faces, m, and a coefficient of consolidation cv, m2/d, in the direction of the flow. The clay
// drains to the faces only. 0.85 is the time factor of the table, 0.848, rounded.
//
// Source: K. Terzaghi 1943, Theoretical Soil Mechanics (from memory); time factor 0.848: geotechnical notes CEG 4012 (fall
// 2011), p. 31 (read).
func ConsolidationTime(spacing, cv float64) float64 { return 0.85 * (spacing / 2) * (spacing / 2) / cv }
