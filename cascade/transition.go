package cascade

import "math"

// pair holds the equations while the cover is in one segment and the deep store in another. With u1, u2 the storages
// above the feet of their segments,
//
//	du1/dt = a - rate1*u1 - square1*u1^2      a = net input - flow1
//	du2/dt = b + perc*u1 - rate2*u2
//
// A store that is held has no width, rates of zero, and does not move whatever a and b are.
type pair struct {
	base1, width1, flow1, rate1 float64
	base2, width2, rate2        float64
	perc, b                     float64
	square1                     float64
	held1, held2                bool
}

// motion is where a part of a step leads, and the integrals of u1, u1^2 and u2 over it.
type motion struct {
	u1, u2                     float64
	volume1, squares1, volume2 float64
}

// rise is du2/dt.
func (p *pair) rise(u1, u2 float64) float64 { return p.b + p.perc*u1 - p.rate2*u2 }

// transition carries the two stores through a time t within their segments, where no drain has a square:
//
//	u1(t) = e1*u1 + f1*a                              integral of u1 = f1*u1 + g1*a
//	u2(t) = e2*u2 + f2*b + h1*u1 + h2*a               integral of u2 = f2*u2 + g2*b + h2*u1 + h3*a
//
// This is the matrix exponential of the pair of equations, with the divided differences of divided.go written out.
// It is the cascade of two linear reservoirs (Nash 1957, IAHS Publ. 45, 3:114-121, for equal rates), with any rates,
// any start and a loss from the first reservoir that passes the second by.
type transition struct {
	e1, f1, g1             float64
	e2, f2, g2, h1, h2, h3 float64
	known                  bool
}

func (p *pair) transition(t float64) transition {
	x, y := -p.rate1*t, -p.rate2*t
	c := transition{e1: 1, e2: 1, known: true}
	if !p.held1 {
		c.e1, c.f1, c.g1 = math.Exp(x), t*exp01(x), t*t*exp00X(x)
	}
	if !p.held2 {
		c.e2, c.f2, c.g2 = math.Exp(y), t*exp01(y), t*t*exp00X(y)
	}
	if p.perc > 0 && !p.held2 {
		c.h1 = p.perc * t * expXY(x, y)
		c.h2 = p.perc * t * t * exp0XY(x, y)
		c.h3 = p.perc * t * t * t * exp00XY(x, y)
	}
	return c
}

// move carries the two stores from u1 and u2 through a time t.
func (c *transition) move(u1, u2, a, b float64) motion {
	return motion{
		u1:      c.e1*u1 + c.f1*a,
		u2:      c.e2*u2 + (c.f2*b + c.h1*u1 + c.h2*a),
		volume1: c.f1*u1 + c.g1*a,
		volume2: c.f2*u2 + c.g2*b + c.h2*u1 + c.h3*a,
	}
}

// crossing returns the time in (0, h] at which u2 comes to target. The caller knows that u2 is monotone until h,
// that it stands at or before the target now and beyond it at h.
func (p *pair) crossing(u1, u2, a, target, h float64) float64 {
	return crossing(func(t float64) (f, df float64) {
		x, y := -p.rate1*t, -p.rate2*t
		now1 := math.Exp(x)*u1 + t*exp01(x)*a
		now2 := math.Exp(y)*u2 + t*exp01(y)*p.b + p.perc*t*(expXY(x, y)*u1+t*exp0XY(x, y)*a)
		return now2 - target, p.rise(now1, now2)
	}, u2-target, h)
}

// crossing returns the time in (0, h] at which gap, which is atStart at time zero, comes to zero. It gives its derivative
// too. The caller knows that it does not have the same sign at both ends, and comes to zero once between them.
//
// It is Newton's method within a bracket, which is halved instead whenever a stride of Newton's is not half as long as the
// one before or leads out of it.
func crossing(gap func(t float64) (f, df float64), atStart, h float64) float64 {
	before, after := 0.0, h
	atEnd, _ := gap(h)
	if atEnd == 0 { // the way there has no sign to go by
		return h
	}
	t := h * (atStart / (atStart - atEnd)) // on the chord
	stride := h
	for range 200 {
		if !(t > before && t < after) {
			stride = (after - before) / 2
			if t = before + stride; t == before || t == after {
				break
			}
		}
		f, df := gap(t)
		if f == 0 {
			return t
		}
		if (f < 0) == (atEnd > 0) {
			before = t
		} else {
			after = t
		}
		newton := -f / df
		if math.Abs(newton) > stride/2 { // too slow
			t = before // and so to the middle
			continue
		}
		stride = math.Abs(newton)
		t += newton
		if stride <= 1e-9*t {
			break // the error of t is of the order of the square of this
		}
	}
	return min(max(t, before), after)
}
