package cascade

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

func TestGaussPoints(t *testing.T) {
	x, w := make([]float64, points), make([]float64, points)
	quad.Legendre{}.FixedLocations(x, w, 0, 1)
	slices.Reverse(x)
	slices.Reverse(w)
	for i := range x {
		if math.Abs(x[i]-gaussAt[i]) > 1e-15 || math.Abs(w[i]-gaussWeight[i]) > 1e-15 {
			t.Errorf("point %d: %v, %v, gonum has %v, %v", i, gaussAt[i], gaussWeight[i], x[i], w[i])
		}
	}
}

func TestTangent(t *testing.T) {
	for i := -1000; i <= 1000; i++ {
		q := float64(i) / 1000
		want := 1.0
		switch z := math.Sqrt(math.Abs(q)); {
		case q > 0:
			want = math.Tanh(z) / z
		case q < 0:
			want = math.Tan(z) / z
		}
		if n, d := tangent(q); math.Abs(n/d-want) > 5e-16*want {
			t.Errorf("tangent(%v) = %v, want %v", q, n/d, want)
		}
	}
}

// TestLagged: the integral of s*exp(-rate*(t-s)), which the rise is where it is straight, and of a speed that is constant,
// for a kernel from flat to a needle.
func TestLagged(t *testing.T) {
	straight := curve{v: 1}
	for _, y := range []float64{0, 1e-6, 0.3, 1.99, 2, 2.01, 4, 5, 9, 20, 22, 44, 46, 1e3, 1e9} {
		for _, length := range []float64{1e-6, 1, 1e4} {
			rate := y / length
			near := func(name string, got, want float64) {
				if !(math.Abs(got-want) <= 1e-13*want) {
					t.Errorf("%s, rate*t = %v: %v, want %v", name, y, got, want)
				}
			}
			near("rise", straight.lagged(false, rate, length), length*length*exp00X(-y))
			near("speed", straight.lagged(true, rate, length), length*exp01(-y))
		}
	}
}

// drawPair draws the cover's equation, often stiff, and a start from far below to far above the upper root.
func drawPair(rng *rand.Rand) (p pair, u, a float64) {
	power := func(lo, hi float64) float64 { return math.Pow(10, lo+(hi-lo)*rng.Float64()) }
	p = pair{width1: maxStorage, square1: power(-9, 6)}
	if rng.IntN(4) > 0 {
		p.rate1 = power(-6, 6)
	}
	if a = power(-6, 6); rng.IntN(3) == 0 {
		a = -a
	} else if rng.IntN(4) == 0 {
		a = 0
	}
	if rng.IntN(4) > 0 {
		u = power(-12, 9)
	}
	return p, u, a
}

// TestParts: a step of 1e4 d is passed in some hundred parts whatever the rates are, each part leads to where the closed
// solution of the whole way leads, and the time that it needs from one storage to another is the time that has passed.
func TestParts(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 1))
	most := 0
	for range 20000 {
		p, u, a := drawPair(rng)
		start := p.curve(u, a)
		const days = 1e4
		passed, n := 0.0, 0
		for ; passed < days; n++ {
			if n > 1000 {
				t.Fatalf("does not come to an end: %+v from %v with %v", p, u, a)
			}
			c := p.curve(u, a)
			if c.rests() {
				break
			}
			h := min(c.part(), days-passed)
			if now := u + c.rise(h); now < 0 {
				break
			} else {
				u = now
			}
			passed += h

			if v := c.speed(h); v != 0 && passed > 1e-300 {
				want := start.u + start.v*tangentOf(start, passed)/(1+start.g*tangentOf(start, passed))
				if start.w*passed < 15 && math.Abs(u-want) > 1e-12*max(u, start.u*1e-3) {
					t.Fatalf("%v mm after %v d, the closed solution %v; %+v with %v", u, passed, want, start, a)
				}
				speed := a - u*(p.rate1+p.square1*u)
				if math.Abs(v-speed) > 1e-12*(math.Abs(a)+u*(p.rate1+p.square1*u)+math.Abs(c.v)) {
					t.Fatalf("speed %v, the equation says %v", v, speed)
				}
				// Where rounding of the storage does not blur the time.
				if got := start.reaches(&p, u, speed); math.Abs(speed)*passed > 1e-3*u && math.Abs(got-passed) > 1e-10*passed {
					t.Fatalf("reaches %v mm after %v d, not %v; %+v with %v", u, got, passed, start, a)
				}
			}
		}
		most = max(most, n)
	}
	t.Logf("at most %d parts", most)
	if most > 200 {
		t.Errorf("%d parts", most)
	}
}

// tangentOf is T(t) by the functions of the library.
func tangentOf(c curve, t float64) float64 {
	switch {
	case c.w2 > 0:
		return math.Tanh(c.w*t) / c.w
	case c.w2 < 0:
		return math.Tan(c.w*t) / c.w
	}
	return t
}
