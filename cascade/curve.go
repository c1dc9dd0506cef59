package cascade

import "math"

// curve is the storage u1 of the cover within a segment in which a drain has a square. It follows the Riccati equation
//
//	du1/dt = a - rate1*u1 - square1*u1^2
//
// With the speed v and the slope 2*g = rate1 + 2*square1*u of the outflow at the start u, and
//
//	w^2 = rate1^2/4 + a*square1,   T(t) = tanh(w*t)/w
//
// its solution is
//
//	u1(t) = u + v*T/(1 + g*T)      du1/dt = v*(1 - w^2*T^2)/(1 + g*T)^2
//
// T is t where w is 0, and tan(|w|*t)/|w| where w^2 < 0: evaporation draws the store down, and would without end.
// Starts on both sides of the upper root (w - rate1/2)/square1, at which the store rests, are included. This is the closed
// solution of a Riccati equation with constant coefficients as textbooks have it (E. L. Ince 1926, Ordinary Differential
// Equations, section 2.15, from memory), written so that nothing cancels near rest, and without a division by square1.
//
// The deep store needs the integral of u1(s)*exp(-rate2*(t-s)), for which there is no closed form. It is worked out by
// Gauss's formula with points on this solution, and so are the integrals of u1 and u1^2, whose closed forms cancel for a small
// square; the balance of water then is a check of both. For that a segment is passed in parts within which the solution,
// continued to complex times, has no pole nearby: see part.
type curve struct {
	u, v, g, w2 float64
	root        float64 // way from u to where it rests, mm; meant only where w^2 > 0
	w           float64 // root of |w^2|
}

func (p *pair) curve(u, a float64) curve {
	c := curve{
		u: u, v: a - u*(p.rate1+p.square1*u),
		g: p.rate1/2 + p.square1*u, w2: p.rate1*p.rate1/4 + a*p.square1,
	}
	c.w = math.Sqrt(math.Abs(c.w2))
	c.root = c.v / (c.w + c.g)
	return c
}

// rests tells whether the store is at its upper root but for rounding, and puts it there for any time. Rounding leaves up to
// 3e-16 of the storage still to go; and nothing of 1e-17 mm is left in a storage of 1 mm.
func (c *curve) rests() bool {
	if !(c.w2 > 0 && math.Abs(c.root) <= 1e-17+5e-16*c.u) {
		return false
	}
	*c = curve{u: max(c.u+c.root, 0)}
	return true
}

// part returns the time over which the quadrature is good: (w + g)*t = 3/4. No pole of the solution is then nearer to the
// start of the part than 4/3 of its length, so that the error of Gauss's formula of eight points falls off as 7.2^-17 does:
// 7.2 is the sum of the half-axes of the ellipse around the part, in halves of its length, that reaches to such a pole (P. J.
// Davis & P. Rabinowitz 1984, Methods of Numerical Integration, section 4.6, from memory). In 600 random parts, computed at
// 40 digits, it was at most 9e-14 of the integral of the rise. A step of any length takes at most some hundred parts: the
// farther the store is from rest, the shorter they are, and the faster it comes nearer.
func (c *curve) part() float64 { return longest / (c.w + c.g) }

const longest = 0.75 // part, times w + g

// rise returns u1(t) - u within a part.
func (c *curve) rise(t float64) float64 {
	n, d := tangent(c.w2 * t * t)
	n *= t
	return c.v * n / (d + c.g*n)
}

// speed returns du1/dt at t within a part.
func (c *curve) speed(t float64) float64 {
	q := c.w2 * t * t
	n, d := tangent(q)
	below := d + c.g*t*n
	return c.v * (d*d - q*n*n) / (below * below)
}

// tangent returns the numerator and the denominator of tanh(z)/z for q = z^2, and of tan(|z|)/|z| for q = -|z|^2, to 1e-16 for
// -1 <= q <= 1: the convergent of Lambert's continued fraction z/(1 + z^2/(3 + z^2/(5 + ...))) that ends with 17 (M. Abramowitz
// & I. A. Stegun 1964, Handbook of Mathematical Functions, 4.5.70 for tanh, from memory).
func tangent(q float64) (n, d float64) {
	n = 34459425 + q*(4729725+q*(135135+q*(990+q)))
	d = 34459425 + q*(16216200+q*(945945+q*(13860+q*45)))
	return n, d
}

// reaches returns the time at which u1 comes to target, at which it has the speed v, other than zero and towards that side.
//
// With y = target - u and g that of the target, T = y/(v + g*y). For w^2 >= 0 this makes
// (exp(2*w*t) - 1)/(2*w) = (y/v)/(1 - square1*y/(w + g)).
func (c *curve) reaches(p *pair, target, v float64) float64 {
	y := target - c.u
	g := p.rate1/2 + p.square1*target
	if c.w2 >= 0 {
		if y == 0 {
			return 0
		}
		return lapse(y/v/(1-p.square1*y/(c.w+g)), 2*c.w)
	}
	return math.Atan(c.w*(y/(v+g*y))) / c.w
}

// The points and weights of Gauss's formula on 0 to 1 (M. Abramowitz & I. A. Stegun 1964, Handbook of Mathematical Functions,
// table 25.4, from memory, and worked out anew).
const points = 8

var (
	gaussAt = [points]float64{
		0.019855071751231884158, 0.1016667612931866302, 0.23723379504183550709, 0.40828267875217509753,
		0.59171732124782490247, 0.76276620495816449291, 0.8983332387068133698, 0.98014492824876811584,
	}
	gaussWeight = [points]float64{
		0.050614268145188129576, 0.11119051722668723527, 0.15685332293894363367, 0.18134189168918099148,
		0.18134189168918099148, 0.15685332293894363367, 0.11119051722668723527, 0.050614268145188129576,
	}
)

// lagCuts are where the integrals with the kernel exp(-x) are cut, from the side where it is 1, so that eight points are
// enough for each piece; behind the last nothing is left.
var lagCuts = [...]float64{2, 4.5, 8, 13, 21, 30, 45}

// lagged returns the integral of f(s)*exp(-rate*(t-s)) from 0 to t, within a part, where f is the speed or else the rise.
func (c *curve) lagged(speed bool, rate, t float64) float64 {
	all, near := 0.0, 0.0 // near and far are counted back from t
	for _, cut := range lagCuts {
		far := min(t, cut/rate)
		length, piece := far-near, 0.0
		for i, x := range gaussAt {
			back, f := near+length*x, 0.0
			if speed {
				f = c.speed(t - back)
			} else {
				f = c.rise(t - back)
			}
			piece += gaussWeight[i] * math.Exp(-rate*back) * f
		}
		all += length * piece
		if far == t {
			break
		}
		near = far
	}
	return all
}

// move carries the two stores, of which the deep one is at u2, through a time t within a part.
func (c *curve) move(p *pair, u2, t float64) motion {
	m := motion{u1: c.u, u2: u2, volume1: c.u * t, squares1: c.u * c.u * t}
	l := lag{e2: 1}
	if !p.held2 {
		l = p.lag(t)
		still := p.b + p.perc*c.u
		m.u2 = l.e2*u2 + l.f2*still
		m.volume2 = l.f2*u2 + l.g2*still
	}
	if c.v == 0 {
		return m
	}
	m.u1 += c.rise(t)
	sum, squares, behind, volume := c.gauss(&l, t)
	sum *= t
	m.volume1 += sum
	m.squares1 += 2*c.u*sum + squares*t
	switch {
	case p.held2 || p.perc == 0:
		return m
	case p.rate2*t > lagCuts[0]:
		late := p.perc * c.lagged(false, p.rate2, t)
		behind, volume = late, (p.perc*sum-late)/p.rate2
	}
	m.u2 += behind
	m.volume2 += volume
	return m
}

// lag carries the deep store through a time t: with the rise d of u1 at the points of Gauss's formula
//
//	u2(t) = e2*u2 + f2*(b + perc*u) + sum of behind*d          integral of u2 = f2*u2 + g2*(b + perc*u) + sum of volume*d
//
// The sums are good for rate2*t up to lagCuts[0].
type lag struct {
	e2, f2, g2     float64
	behind, volume [points]float64
	known          bool
}

func (p *pair) lag(t float64) lag {
	y := -p.rate2 * t
	l := lag{e2: math.Exp(y), f2: t * exp01(y), g2: t * t * exp00X(y), known: true}
	if p.perc == 0 || -y > lagCuts[0] {
		return l
	}
	for i, x := range gaussAt {
		left, w := t*(1-x), p.perc*t*gaussWeight[i]
		l.behind[i] = w * math.Exp(-p.rate2*left)
		l.volume[i] = w * left * exp01(-p.rate2*left)
	}
	return l
}

// gauss sums up the rise d of u1 at the points of Gauss's formula over a time t within a part: its mean, that of its square, and
// what it adds to the deep store and to that store's integral by the lag of t.
func (c *curve) gauss(l *lag, t float64) (mean, squares, behind, volume float64) {
	for i, x := range gaussAt {
		d := c.rise(t * x)
		wd := gaussWeight[i] * d
		mean += wd
		squares += wd * d
		behind += l.behind[i] * d
		volume += l.volume[i] * d
	}
	return mean, squares, behind, volume
}

// crossing returns the time in (0, h] at which the deep store, which is at u2, comes to target, as [pair.crossing] does.
func (c *curve) crossing(p *pair, u2, target, h float64) float64 {
	still := p.b + p.perc*c.u
	return crossing(func(t float64) (f, df float64) {
		y := -p.rate2 * t
		now2 := math.Exp(y)*u2 + t*exp01(y)*still + p.perc*c.lagged(false, p.rate2, t)
		return now2 - target, p.rise(c.u+c.rise(t), now2)
	}, u2-target, h)
}

// turns returns the time in [0, h] at which the deep store turns the way of the cover; +Inf if it does not. The gain is its
// speed now, counted positive that way.
//
// Its speed is gain*exp(-rate2*t) and perc times the integral of du1/dt(s)*exp(-rate2*(t-s)).
func (c *curve) turns(p *pair, gain, h float64) float64 {
	if gain >= 0 {
		return 0
	}
	speed := func(t float64) (f, df float64) {
		f = gain*math.Exp(-p.rate2*t) + p.perc*math.Abs(c.lagged(true, p.rate2, t))
		return f, p.perc*math.Abs(c.speed(t)) - p.rate2*f
	}
	if f, _ := speed(h); f < 0 {
		return math.Inf(1)
	}
	return crossing(speed, gain, h)
}

// glideCurved is glide where the cover has a drain with a square. It leaves steps to walk that are longer than a part, or
// than the deep store allows for the same formula; the bound of S2 holds as it does there.
func (r *Run) glideCurved(t *table, perDay float64, depths, cover, deep []float64) int {
	p := r.pair()
	if p.held2 {
		return 0
	}
	cached := &t.lags[r.i*len(r.deep.base)+r.j]
	if !cached.known {
		*cached = p.lag(t.days)
	}
	l := *cached
	days := t.days
	half, w0 := p.rate1/2, p.rate1*p.rate1/4
	u1, u2 := r.u1, r.u2
	var sum, volume1, squares1, volume2 float64
	n := len(depths)
	cover, deep = cover[:n], deep[:n]
	for k, depth := range depths {
		a := depth*perDay - p.flow1
		c := curve{u: u1, v: a - u1*(p.rate1+p.square1*u1), g: half + p.square1*u1, w2: w0 + a*p.square1}
		// (w + g + rate2/2)*days <= 3/4, and the range of a that walk takes; false for NaN.
		room := longest - (c.g+p.rate2/2)*days
		if !(room >= 0 && math.Abs(c.w2)*(days*days) <= room*room && a >= -maxFlux && a <= maxFlux) {
			n = k
			break
		}
		still := p.b + p.perc*u1
		next1 := u1 + c.rise(days)
		d1, dd1, behind, volume := c.gauss(&l, days)
		next2 := l.e2*u2 + l.f2*still + behind
		far := u2 + l.f2*(still-p.rate2*u2)
		if !(next1 >= 0 && next1 <= p.width1 && next2 >= 0 && next2 <= p.width2 && far >= 0 && far <= p.width2) {
			n = k
			break
		}
		sum += depth
		volume1 += u1 + d1
		squares1 += u1*(u1+2*d1) + dd1
		volume2 += l.f2*u2 + l.g2*still + volume
		u1, u2 = next1, next2
		cover[k], deep[k] = p.base1+u1, p.base2+u2
	}
	if n == 0 {
		return 0
	}
	r.u1, r.u2 = u1, u2
	r.sums.in.add(sum)
	r.count(&p, float64(n)*days, volume1*days, squares1*days, volume2, 0)
	return n
}
