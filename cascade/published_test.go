package cascade_test

import (
	"math"
	"testing"

	"quietslope/cascade"
)

var none = math.Inf(1)

// series is the classical cascade: all that leaves the cover, at rate a1, enters the deep store, which drains at rate a2.
func series(a1, a2 float64) cascade.Model {
	return cascade.Model{
		Cover:       cascade.Store{Capacity: none},
		Percolation: cascade.Outlet{Rate: a1, Ceiling: none},
		Deep:        cascade.Store{Capacity: none, Seepage: a2},
	}
}

// single is one reservoir of rate a, the cover; the deep store gets nothing.
func single(a float64) cascade.Model {
	return cascade.Model{
		Cover: cascade.Store{Capacity: none, Seepage: a},
		Deep:  cascade.Store{Capacity: none, Seepage: 1},
	}
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

// TestTrajectories replays two cascades day by day. Values: matrix exponential of the augmented system by SciPy 1.10.1
// (scipy.linalg.expm), eight decimals; daily constant input, from rest.
func TestTrajectories(t *testing.T) {
	input := []float64{10, 0, 0, 25, 5, 0, 0, 0, 40, 0}
	cover := []float64{
		9.06346235, 7.42053535, 6.07542050, 27.63278946, 27.15554570, 22.23308038, 18.20290664, 14.90327946, 48.45562260, 39.67210839,
	}
	slow := []float64{ // a2 = 0.02
		0.93022333, 2.53786858, 3.81892476, 7.15884722, 12.43976982, 17.06538975, 20.71628267, 23.57183443, 29.49975366, 37.60898452,
	}
	equal := []float64{ // a2 = a1
		0.87615482, 2.20144196, 3.01747233, 5.65571116, 9.59334497, 12.30098263, 13.71177410, 14.20690703, 17.57660559, 22.32492921,
	}
	const tolerance = 0.5e-8 + 1e-12 // half a unit of the last printed digit

	for _, tt := range []struct {
		a2   float64
		deep []float64
	}{{0.02, slow}, {0.2, equal}} {
		s1, s2 := make([]float64, len(input)), make([]float64, len(input))
		r := newRun(t, series(0.2, tt.a2), 0, 0)
		if err := r.Replay(input, 1, s1, s2); err != nil {
			t.Fatal(err)
		}
		for i := range input {
			near(t, "S1", s1[i], cover[i], tolerance)
			near(t, "S2", s2[i], tt.deep[i], tolerance)
		}
	}

	t.Run("nearly equal rates", func(t *testing.T) {
		r := newRun(t, series(0.2, 0.2000001), 0, 0)
		if err := r.Replay(input, 1, nil, nil); err != nil {
			t.Fatal(err)
		}
		_, deep := r.Storage()
		near(t, "S2", deep, 22.32492381, tolerance)
	})

	t.Run("balance", func(t *testing.T) {
		r := newRun(t, series(0.2, 0.02), 0, 0)
		if err := r.Replay(input, 1, nil, nil); err != nil {
			t.Fatal(err)
		}
		sums := r.Totals()
		near(t, "in", sums.Cover.In, 80, 1e-12)
		near(t, "stored", sums.Cover.Change+sums.Deep.Change, 77.28109291, tolerance)
		near(t, "out", sums.Deep.Seepage, 2.71890709, tolerance)
	})

	// The explicit Euler scheme with a step of a day ends at 41.534177 and 36.298849 mm, so this test would fail it.
	t.Run("explicit Euler is told apart", func(t *testing.T) {
		s1, s2 := 0.0, 0.0
		for _, in := range input {
			s1, s2 = s1+in-0.2*s1, s2+0.2*s1-0.02*s2
		}
		near(t, "S1 by Euler", s1, 41.534177, 0.5e-6)
		near(t, "S2 by Euler", s2, 36.298849, 0.5e-6)
		if math.Abs(s1-cover[9]) < 1 || math.Abs(s2-slow[9]) < 1 {
			t.Error("Euler is too near to be told apart")
		}
	})
}

// TestDeepLevelRisesAfterRain: from S1 = 50 mm without any rain the deep store first rises. Values from the closed form
// of two linear reservoirs in series, computed with SciPy 1.10.1.
func TestDeepLevelRisesAfterRain(t *testing.T) {
	r := newRun(t, series(0.2, 0.02), 50, 100)
	step(t, r, 0, 5)
	cover, deep := r.Storage()
	near(t, "S1 after 5 d", cover, 18.39397206, 0.5e-8)
	near(t, "S2 after 5 d", deep, 120.31474052, 0.5e-8)

	r = newRun(t, series(0.2, 0.02), 50, 0)
	const peak = 12.79213941
	step(t, r, 0, peak)
	_, deep = r.Storage()
	near(t, "S2 at its peak", deep, 38.71318413, 0.5e-8)
	for _, at := range []float64{peak - 0.1, peak + 0.1} {
		r := newRun(t, series(0.2, 0.02), 50, 0)
		step(t, r, 0, at)
		if _, other := r.Storage(); other >= deep {
			t.Errorf("S2 after %v d = %v, not below the peak %v", at, other, deep)
		}
	}

	// The same peak found from within one long step: what a drain with its invert just below the peak has carried.
	m := series(0.2, 0.02)
	m.Deep.Drains = []cascade.Outlet{{Rate: 0.01, Invert: 38.7131, Ceiling: none}, {Rate: 0.01, Invert: 38.7132, Ceiling: none}}
	r = newRun(t, m, 50, 0)
	step(t, r, 0, 31)
	drained := r.Totals().Deep.Drains
	if !(drained[0] > 0 && drained[1] == 0) {
		t.Errorf("drains just below and just above the peak carried %v", drained)
	}
}

// TestSteadyCascade: R = 2 mm/d through a1 = 0.2 and a2 = 0.02 rests at 10 and 100 mm.
func TestSteadyCascade(t *testing.T) {
	cover, deep, err := series(0.2, 0.02).Steady(2)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "S1", cover, 10, 1e-13)
	near(t, "S2", deep, 100, 1e-12)
}

// TestPulseThroughTwoReservoirs: 400 m3/s for 3 h through two reservoirs of K = 9 h. The example is V. M. Ponce 1989,
// Engineering Hydrology, ch. 10, cascade of linear reservoirs, which is solved there by the trapezoidal recursion; these are the
// values of the continuous solution, differences of the gamma distribution function, by SciPy 1.10.1.
func TestPulseThroughTwoReservoirs(t *testing.T) {
	want := []float64{17.850, 39.872, 47.975, 48.280, 44.557, 39.065, 33.106, 27.387, 22.250, 17.824} // 3, 6, ... 30 h
	const rate = 24.0 / 9
	r := newRun(t, series(rate, rate), 0, 0)
	for i, w := range want {
		depth := 0.0
		if i == 0 {
			depth = 400 * 3.0 / 24 // any unit: the system is linear
		}
		step(t, r, depth, 3.0/24)
		_, deep := r.Storage()
		near(t, "outflow", deep*rate, w, 0.5e-3)
	}
	// The trapezoidal recursion of the book gives other numbers, in its first ordinate 16.327.
	if math.Abs(want[0]-16.327) < 1 {
		t.Error("the recursion is too near to be told apart")
	}
}

// TestRecession: a single store empties exponentially, Q = Q0 exp(-a t) with S = Q/a (Maillet 1905).
func TestRecession(t *testing.T) {
	// Base flow in m3/s every half day: K. Subramanya, Engineering Hydrology, 3rd ed., solution of problem 6.1.
	flow := []float64{2.53, 2.38, 2.24, 2.11, 1.99, 1.87, 1.76, 1.66, 1.56}
	a := -math.Log(flow[8]/flow[0]) / 4
	near(t, "recession constant", math.Exp(-a), 0.8861, 0.5e-4)
	r := newRun(t, single(a), flow[0]/a, 0)
	for _, q := range flow[1:] {
		step(t, r, 0, 0.5)
		cover, _ := r.Storage()
		near(t, "base flow", a*cover, q, 0.5e-2)
	}

	// Half-lives from the daily recession constant, ln 2/a with a = -ln K, plain arithmetic.
	for _, tt := range []struct{ k, a, half float64 }{
		{0.93, 0.0725707, 9.5513},
		{0.95, 0.0512933, 13.5134},
		{0.98, 0.0202027, 34.3096},
		{0.995, 0.00501254, 138.2826},
		{0.999, 0.00100050, 692.8005},
	} {
		a := -math.Log(tt.k)
		near(t, "a", a, tt.a, 1e-5*tt.a)
		r := newRun(t, single(a), 100, 0)
		step(t, r, 0, tt.half)
		cover, _ := r.Storage()
		near(t, "storage after a half-life", cover, 50, 0.5e-4*a*50+1e-9)
		r = newRun(t, single(a), 100, 0)
		step(t, r, 0, 1)
		cover, _ = r.Storage()
		near(t, "storage after a day", cover, 100*tt.k, 1e-12)
	}
}

// TestOneReservoir: step and pulse response of a single linear reservoir (V. T. Chow, D. R. Maidment & L. W. Mays 1988, Applied
// Hydrology, sec. 7.2, from memory). The figures follow from 1 - exp(-t/k), k = 3 h, and were computed.
func TestOneReservoir(t *testing.T) {
	const rate = 24.0 / 3
	for _, tt := range []struct{ hours, want float64 }{{1, 0.2835}, {2, 0.4866}, {3, 0.6321}, {6, 0.8647}, {9, 0.9502}} {
		r := newRun(t, single(rate), 0, 0)
		step(t, r, tt.hours/24, tt.hours/24) // 1 mm/d
		cover, _ := r.Storage()
		near(t, "step response", rate*cover, tt.want, 0.5e-4)
	}
	r := newRun(t, single(rate), 0, 0)
	for i, want := range []float64{0.48658, 0.24982, 0.12826, 0.06585, 0.03381, 0.01736} {
		depth := 0.0
		if i == 0 {
			depth = 2.0 / 24
		}
		step(t, r, depth, 2.0/24)
		cover, _ := r.Storage()
		near(t, "pulse response", rate*cover, want, 0.5e-5)
	}
	r = newRun(t, single(0.1), 0, 0)
	for i, want := range []float64{0.951626, 0.861067, 0.779125, 2.608233, 2.835840, 2.565974} {
		step(t, r, []float64{10, 0, 0, 20, 5, 0}[i], 1)
		cover, _ := r.Storage()
		near(t, "recursion", 0.1*cover, want, 0.5e-6)
	}
}

// TestNashCascade: a unit pulse leaves n equal reservoirs with the density of the gamma distribution (J. E. Nash 1957, IAHS
// Publ. 45, 3:114-121), u(t) = (t/K)^(n-1) exp(-t/K)/(K gamma(n)).
func TestNashCascade(t *testing.T) {
	const k = 2.0
	for _, at := range []float64{0.01, 0.5, 1, 2, 4, 6, 10, 50} {
		r := newRun(t, series(1/k, 1/k), 1, 0) // n = 2
		step(t, r, 0, at)
		_, deep := r.Storage()
		near(t, "density, n = 2", deep/k, at/k*math.Exp(-at/k)/k, 1e-15)
		near(t, "distribution, n = 2", r.Totals().Deep.Seepage, 1-(1+at/k)*math.Exp(-at/k), 1e-14)
	}

	// Three reservoirs: the outflow of the first, which is exponential, cannot be fed in as a step of constant input; so the
	// second and third are run from the first by its integral over short steps, which the step-by-step mean approaches
	// with the square of the step. Values by scipy.stats.gamma.pdf(t, 3, scale=2).
	for _, tt := range []struct{ at, pdf, cdf float64 }{
		{1, 0.03790817, 0.01438768},
		{2, 0.09196986, 0.08030140},
		{4, 0.13533528, 0.32332358},
		{6, 0.11202090, 0.57680992},
		{10, 0.04211217, 0.87534798},
	} {
		const dt = 1.0 / 2048
		first := newRun(t, single(1/k), 1, 0)
		rest := newRun(t, series(1/k, 1/k), 0, 0)
		left := 0.0
		for range int(tt.at / dt) {
			step(t, first, 0, dt)
			q := first.Totals().Cover.Seepage
			step(t, rest, q-left, dt)
			left = q
		}
		_, deep := rest.Storage()
		near(t, "density, n = 3", deep/k, tt.pdf, 2e-8)
		near(t, "distribution, n = 3", rest.Totals().Deep.Seepage, tt.cdf, 2e-8)
	}
}

// TestUnequalCascade: with rates 1/k1 and 1/k2 the response is hypoexponential, u = (exp(-t/k2) - exp(-t/k1))/(k2 - k1), the same
// when the reservoirs change places. Values: the closed form, confirmed by SciPy's quad of the convolution.
func TestUnequalCascade(t *testing.T) {
	const k1, k2 = 5.0, 60.0
	for _, tt := range []struct{ at, u, s float64 }{
		{1, 0.00299529, 0.00155212},
		{5, 0.01003936, 0.02975877},
		{10, 0.01292994, 0.08886860},
		{20, 0.01269483, 0.21999454},
		{60, 0.00668861, 0.59867753},
		{120, 0.00246064, 0.85236151},
		{13.554036, 0.01329662, math.NaN()}, // the peak, ln(k2/k1)/(1/k1 - 1/k2)
	} {
		for _, k := range [][2]float64{{k1, k2}, {k2, k1}} {
			r := newRun(t, series(1/k[0], 1/k[1]), 1, 0)
			step(t, r, 0, tt.at)
			_, deep := r.Storage()
			near(t, "density", deep/k[1], tt.u, 0.5e-8+1e-15)
			if !math.IsNaN(tt.s) {
				near(t, "distribution", r.Totals().Deep.Seepage, tt.s, 0.5e-8+1e-15)
			}
		}
	}
}

// TestSlowerRatesReactSlower: with a lower recession constant a store takes longer both to rise and to fall (common
// practice, no source).
func TestSlowerRatesReactSlower(t *testing.T) {
	// Days until the deep store has made the given share of the way from one steady state to the other.
	days := func(m cascade.Model, from, to float64) int {
		c0, d0, err := m.Steady(from)
		if err != nil {
			t.Fatal(err)
		}
		_, d1, err := m.Steady(to)
		if err != nil {
			t.Fatal(err)
		}
		r := newRun(t, m, c0, d0)
		for n := 1; n < 100000; n++ {
			step(t, r, to, 1)
			if _, d := r.Storage(); math.Abs(d-d0) >= 0.5*math.Abs(d1-d0) {
				return n
			}
		}
		t.Fatal("never")
		return 0
	}
	for _, slower := range []cascade.Model{series(0.2, 0.01), series(0.05, 0.02), series(0.05, 0.01)} {
		base := series(0.2, 0.02)
		if up, was := days(slower, 1, 2), days(base, 1, 2); up <= was {
			t.Errorf("rises in %d d, the faster one in %d d", up, was)
		}
		if down, was := days(slower, 2, 1), days(base, 2, 1); down <= was {
			t.Errorf("falls in %d d, the faster one in %d d", down, was)
		}
	}
}
