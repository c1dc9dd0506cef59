package cascade

import "math"

// ResponseTime returns the time, d, in which the deep level of two linear stores in series has made a share, 0 to 1, of the
// way from one steady state to another after a step change of what enters the cover. The rates are the totals of the cover
// and of the deep store, 1/d; that of the cover is +Inf for a step that acts on the deep store itself. The time is +Inf
// where a rate is 0 or the share is 1; NaN for anything outside these ranges.
//
// For the deep store alone 1 - share = exp(-deep*t) (Maillet 1905). For both, with l1 and l2 their rates,
//
//	1 - share = (l1*exp(-l2*t) - l2*exp(-l1*t))/(l1 - l2)
//
// and (1 + l*t)*exp(-l*t) for equal rates: the S-curve of a cascade (J. E. Nash 1957, IAHS Publ. 45, 3:114-121, for equal
// rates), which is the distribution of the sum of two exponential times.
func ResponseTime(cover, deep, share float64) float64 {
	fast, slow := max(cover, deep), min(cover, deep)
	switch {
	case !(slow >= 0 && share >= 0 && share <= 1):
		return math.NaN()
	case share == 0:
		return 0
	case slow == 0 || share == 1:
		return math.Inf(1)
	}
	left := -math.Log1p(-share) // the logarithm of 1 over what is to be left
	k := fast / slow
	if !(k < 1e100) { // infinite, or as good as that
		return left / slow
	}
	// Newton's method, with time in units of 1/slow, for the logarithm of what is left. It grows ever faster with time (the
	// rate of failure of a sum of exponential times rises: R. E. Barlow & F. Proschan 1965, Mathematical Theory of
	// Reliability, from memory), so that from below the root the first stride leads beyond it and all others back to it.
	// Both bounds for the start lie below: the slow store alone, and share <= k*t^2/2.
	t := max(left, math.Sqrt(2*share/k))
	for range 100 {
		x, y := -t, -k*t
		density := k * expXY(x, y) * t
		made := k * exp0XY(x, y) * t * t
		remains := math.Exp(y) + density
		log := -math.Log1p(-made)
		if made > 0.5 {
			log = -math.Log(remains)
		}
		stride := (left - log) * (remains / density)
		t += stride
		if math.Abs(stride) <= 1e-9*t { // the error is of the order of the square of this
			break
		}
	}
	return t / slow
}
