package cascade

import "math"

// The solution of two linear stores in series, and its integral over time, are sums of divided differences of the
// exponential function at the points 0, x = -(rate of the cover)*t and y = -(rate of the deep store)*t. Written in this
// way they need no special case for a rate of zero or for equal rates, and lose no digits near them.
//
// The functions below take x, y <= 0 of any size and are good to about 1e-15 relative.
//
// Divided differences of the exponential and their computation: McCurdy, Ng & Parlett 1984, Mathematics of Computation
// 43, 501-528 (from memory).

// exp01 is e[0,x] = (exp(x) - 1)/x.
func exp01(x float64) float64 {
	if x == 0 {
		return 1
	}
	return math.Expm1(x) / x
}

// expXY is e[x,y] = (exp(x) - exp(y))/(x - y).
func expXY(x, y float64) float64 {
	return math.Exp(max(x, y)) * exp01(-math.Abs(x-y))
}

// exp00X is e[0,0,x] = (e[0,x] - 1)/x.
func exp00X(x float64) float64 {
	if x <= -1 {
		return (exp01(x) - 1) / x
	}
	return taylor(0, x, 2)
}

// exp0XY is e[0,x,y] = (e[0,x] - e[x,y])/(0 - y).
func exp0XY(x, y float64) float64 {
	x, y = max(x, y), min(x, y)
	if y <= -1 {
		return (exp01(x) - expXY(x, y)) / -y
	}
	return taylor(x, y, 2)
}

// exp00XY is e[0,0,x,y] = (e[0,0,x] - e[0,x,y])/(0 - y).
func exp00XY(x, y float64) float64 {
	x, y = max(x, y), min(x, y)
	if y <= -1 {
		return (exp00X(x) - exp0XY(x, y)) / -y
	}
	return taylor(x, y, 3)
}

// taylor sums h(k)/(k+n)! over k >= 0, where h(k) is the sum of all products of k factors x or y (the complete
// homogeneous polynomial). That is the divided difference of exp at x, y and n-1 zeros. For -1 < x, y <= 0 and n <= 3.
//
// The terms change their sign from one to the next and fall off faster than those of exp(-1), so the sum is good once a
// term no longer counts.
func taylor(x, y float64, n int) float64 {
	h, power, sum := 1.0, 1.0, 0.0
	for _, f := range inverseFactorials[n:] {
		term := h * f
		sum += term
		if math.Abs(term) < 1e-18 {
			break
		}
		power *= y
		h = x*h + power
	}
	return sum
}

// inverseFactorials holds 1/k!; the last is below 1e-22.
var inverseFactorials = func() (f [24]float64) {
	f[0] = 1
	for k := 1; k < len(f); k++ {
		f[k] = f[k-1] / float64(k)
	}
	return f
}()

// lapse returns the time t >= 0 at which (exp(k*t) - 1)/k has grown to d >= 0, for a rate k of either sign;
// +Inf if it never does.
func lapse(d, k float64) float64 {
	w := k * d
	switch {
	case w <= -1:
		return math.Inf(1)
	case w == 0:
		return d
	case math.Abs(w) < 1:
		return d * (math.Log1p(w) / w)
	}
	return math.Log1p(w) / k
}
