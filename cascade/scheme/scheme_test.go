package scheme_test

import (
	"fmt"
	"math"
	"math/big"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade"
	"quietslope/cascade/scheme"
)

var none = math.Inf(1)

// stepping are the schemes that have a formula, with the weight that each gives to the storage at the end of the step and
// the product of rate and step that it must stay below.
var stepping = []struct {
	scheme     scheme.Scheme
	end, limit float64
}{
	{scheme.Centred, 0.5, 2},
	{scheme.Explicit, 0, 1},
	{scheme.Implicit, 1, none},
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

// exactRate is for rates in range.
func exactRate(t rapid.TB, s scheme.Scheme, rate, step float64) float64 {
	t.Helper()
	r, err := s.ExactRate(rate, step)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// outflows replays a pair by the scheme, and by the exact engine with the converted rates. It returns the outflow of
// both stores at the ends of steps by each, in mm/d.
func outflows(t rapid.TB, s scheme.Scheme, p scheme.Pair, cover, deep float64, depths []float64, days float64) (stepped, exact [2][]float64) {
	t.Helper()
	for i := range 2 {
		stepped[i], exact[i] = make([]float64, len(depths)), make([]float64, len(depths))
	}
	if _, _, err := s.Replay(p, cover, deep, depths, days, stepped[0], stepped[1]); err != nil {
		t.Fatal(err)
	}
	rates := [2]float64{p.CoverRate, p.DeepRate}
	var converted, factor [2]float64
	for i, rate := range rates {
		converted[i] = exactRate(t, s, rate, days)
		factor[i] = rate / converted[i] // storages and capacities have the factor of the porosity
	}
	percolation := p.Percolation / factor[0]
	r, err := cascade.NewRun(cascade.Model{
		Cover:       cascade.Store{Capacity: p.CoverCapacity * factor[0], Seepage: max(0, converted[0]-percolation)},
		Percolation: cascade.Outlet{Rate: percolation, Ceiling: none},
		Deep:        cascade.Store{Capacity: p.DeepCapacity * factor[1], Seepage: converted[1]},
		Lateral:     p.Lateral,
	}, cover*factor[0], deep*factor[1])
	if err != nil {
		t.Fatal(err)
	}
	if err := r.Replay(depths, days, exact[0], exact[1]); err != nil {
		t.Fatal(err)
	}
	for i := range 2 {
		for k := range depths {
			stepped[i][k] *= rates[i]
			exact[i][k] *= converted[i]
		}
	}
	return stepped, exact
}

// TestTwoReservoirs replays the worked example of two equal reservoirs, 1 cm of rain in 3 h on 432 km2 (400 m3/s) with a
// storage constant of 9 h, by the trapezoidal recursion: V. M. Ponce 1989, Engineering Hydrology, cascade of linear
// reservoirs; ordinates in m3/s as printed on the author's online page with this example.
func TestTwoReservoirs(t *testing.T) {
	const rate, step = 24.0 / 9, 3.0 / 24
	printed := []float64{
		16.327, 39.650, 48.313, 48.769, 45.049, 39.464, 33.392, 27.569, 22.347, 17.859, 14.111, 11.047, 8.582, 6.623, 5.084,
		3.883, 2.954, 2.238, 1.69, 1.273, 0.956, 0.716, 0.536, 0.4, 0.298, 0.221, 0.164, 0.122, 0.09, 0.067, 0.049, 0.036,
		0.027, 0.02, 0.015, 0.011, 0.008, 0.006, 0.004, 0.003, 0.002, 0.002, 0.001, 0.001,
	}
	depths := make([]float64, len(printed))
	depths[0] = 400 * step // any unit: the system is linear
	stepped, exact := outflows(t, scheme.Centred,
		scheme.Pair{CoverRate: rate, Percolation: rate, DeepRate: rate, CoverCapacity: none, DeepCapacity: none}, 0, 0, depths, step)
	for k, want := range printed {
		if k == 3 {
			// 48.769 is a misprint: the ordinates before it give 48.789, and those after it follow from that alone.
			near(t, "ordinate at 12 h", stepped[1][k], 48.789, 0.5e-3)
			continue
		}
		near(t, fmt.Sprintf("ordinate at %d h", 3*(k+1)), stepped[1][k], want, 0.5e-3)
	}

	// From the converted rates: the outflow of the first reservoir is the same, that of the second is not, since its inflow
	// bends within each step where the recursion takes the mean of both ends. With B = 5/7 and y = -ln(B) the inflow is
	// I + (Q - I)*exp(-y*t/D), from its Q at the start of the step, and a step gives the exact reservoir
	//
	//	(Q - I)*[y*B - (1-B^2)/2] = -0.004561*(Q - I)
	//
	// more than the recursion. In the first step, with Q = 0 and I = 400, this is 1.824; it then fades with B.
	beta := 5.0 / 7
	y := -math.Log(beta)
	bend := y*beta - (1-beta*beta)/2
	near(t, "bend", bend, -0.004561, 0.5e-6)
	before, ahead, worst, sum := 0.0, 0.0, 0.0, 0.0
	for k, depth := range depths {
		near(t, "outflow of the first", exact[0][k], stepped[0][k], 1e-10)
		ahead = beta*ahead + bend*(before-depth/step)
		near(t, "difference of the second", exact[1][k]-stepped[1][k], ahead, 1e-10)
		before = stepped[0][k]
		worst = max(worst, math.Abs(ahead))
		sum += ahead
	}
	near(t, "largest difference", worst, 1.824, 0.5e-3)
	near(t, "ordinate at 3 h", exact[1][0], 16.327+1.824, 1e-3)
	near(t, "sum of the differences", sum, 0, 1e-3) // both pass the same water
}

// TestOneReservoir: a single store that is stepped by a scheme and the exact one of the converted rate have the same
// outflow at the ends of steps, and the same levels, whatever the input and with the store full and empty at times.
func TestOneReservoir(t *testing.T) {
	for _, tt := range stepping {
		t.Run(tt.scheme.String(), func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				step := rapid.SampledFrom([]float64{1.0 / 24, 0.25, 1, 7, 30}).Draw(t, "step")
				x := min(tt.limit*0.999, math.Exp(rapid.Float64Range(math.Log(1e-6), math.Log(50)).Draw(t, "ln(rate*step)")))
				rate := x / step
				capacity := rapid.SampledFrom([]float64{none, 80}).Draw(t, "capacity")
				start := rapid.Float64Range(0, 80).Draw(t, "start")
				depths := rapid.SliceOfN(rapid.Float64Range(-20, 40), 1, 60).Draw(t, "depths")
				share := rapid.Float64Range(0, 1).Draw(t, "share")
				p := scheme.Pair{CoverRate: rate, Percolation: share * rate, DeepRate: rate, CoverCapacity: capacity, DeepCapacity: none}
				stepped, exact := outflows(t, tt.scheme, p, start, 0, depths, step)

				const porosity = 0.04
				rated := exactRate(t, tt.scheme, rate, step)
				converted := porosity * rate / rated
				largest := start
				for k := range depths {
					a, b := stepped[0][k], exact[0][k]
					largest = max(largest, a/rate)
					if math.Abs(a-b) > 1e-10*max(largest*rate, rate) { // relative to the largest storage or 1 mm
						t.Fatalf("step %d: outflow %v mm/d by the scheme and %v from the converted rate", k+1, a, b)
					}
					h1, h2 := a/rate/(1000*porosity), b/rated/(1000*converted)
					if math.Abs(h1-h2) > 1e-10*max(largest, 1)/(1000*porosity) {
						t.Fatalf("step %d: level %v m by the scheme and %v m from the converted rate", k+1, h1, h2)
					}
				}
			})
		})
	}
}

// TestDeepDifference: the deep store's outflow differs by what its inflow does within a step. With the shares B1 and B2
// of the two stores, the converted rates a1 and a2 and the cover's outflow I + (Q - I)*exp(-a1*t), a step of D days gives
// the exact one
//
//	(Q - I)*{a2*[exp(-a1*D) - exp(-a2*D)]/(a2 - a1) - (1 - B2)*[(1 - w) + w*B1]}
//
// more than the scheme, w being its weight for the end of the step; this then fades with B2.
func TestDeepDifference(t *testing.T) {
	for _, tt := range stepping {
		t.Run(tt.scheme.String(), func(t *testing.T) {
			rapid.Check(t, func(t *rapid.T) {
				const step = 1
				limit := min(tt.limit, 3)
				cover := rapid.Float64Range(0.1, 0.95).Draw(t, "cover") * limit
				deep := rapid.Float64Range(1e-3, 0.09).Draw(t, "deep") * limit
				share := rapid.Float64Range(0, 1).Draw(t, "share")
				lateral := rapid.Float64Range(0, 2).Draw(t, "lateral")
				depths := rapid.SliceOfN(rapid.Float64Range(0, 40), 1, 60).Draw(t, "depths")
				p := scheme.Pair{CoverRate: cover, Percolation: share * cover, DeepRate: deep, CoverCapacity: none, DeepCapacity: none, Lateral: lateral}
				stepped, exact := outflows(t, tt.scheme, p, 10, 100, depths, step)

				a1, a2 := exactRate(t, tt.scheme, cover, step), exactRate(t, tt.scheme, deep, step)
				b1, b2 := tt.scheme.Beta(cover, step), tt.scheme.Beta(deep, step)
				bend := a2*(math.Exp(-a1)-math.Exp(-a2))/(a2-a1) - (1-b2)*((1-tt.end)+tt.end*b1)
				before, ahead := 10*cover, 0.0
				for k, depth := range depths {
					ahead = b2*ahead + share*bend*(before-depth)
					if got := exact[1][k] - stepped[1][k]; math.Abs(got-ahead) > 1e-10*max(1, stepped[1][k]) {
						t.Fatalf("step %d: the exact one is %v mm/d ahead, want %v", k+1, got, ahead)
					}
					before = stepped[0][k]
				}
			})
		})
	}
}

// TestReplay steps two stores as one would by hand. 8 mm, none, and a demand of 3 mm in steps of 2 d, with 0.25 /d and
// 0.125 /d: rate times step is 0.5 in the cover and 0.25 in the deep store. Of the cover's outflow half percolates, and
// 0.5 mm/d come from the side.
func TestReplay(t *testing.T) {
	open := scheme.Pair{CoverRate: 0.25, Percolation: 0.125, DeepRate: 0.125, CoverCapacity: none, DeepCapacity: none, Lateral: 0.5}
	full := open
	full.CoverCapacity, full.DeepCapacity = 9, 9
	for _, tt := range []struct {
		name          string
		scheme        scheme.Scheme
		pair          scheme.Pair
		covers, deeps []float64
	}{
		{"explicit", scheme.Explicit, open,
			[]float64{4*0.5 + 8, 10 * 0.5, 0}, // the demand exceeds what is there
			[]float64{8*0.75 + 2*(0.125*4+0.5), 8*0.75 + 2*(0.125*10+0.5), 9.5*0.75 + 2*(0.125*5+0.5)}},
		{"explicit, full", scheme.Explicit, full,
			[]float64{9, 9 * 0.5, 0},
			[]float64{8*0.75 + 2*(0.125*4+0.5), 9, 9*0.75 + 2*(0.125*4.5+0.5)}},
		{"implicit", scheme.Implicit, open,
			[]float64{(4 + 8) / 1.5, 8 / 1.5, (16.0/3 - 3) / 1.5},
			[]float64{(8 + 2*(0.125*8+0.5)) / 1.25, (8.8 + 2*(0.125*16/3+0.5)) / 1.25, (8.8/1.25 + 2*(0.125*16/3+0.5)/1.25 + 2*(0.125*14/9+0.5)) / 1.25}},
		{"centred", scheme.Centred, open,
			[]float64{(4*0.75 + 8) / 1.25, 8.8 * 0.75 / 1.25, (5.28*0.75 - 3) / 1.25},
			[]float64{(8*0.875 + 2*(0.125*6.4+0.5)) / 1.125, (9.6/1.125*0.875 + 2*(0.125*7.04+0.5)) / 1.125,
				((9.6/1.125*0.875+2.76)/1.125*0.875 + 2*(0.125*3.024+0.5)) / 1.125}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			depths := []float64{8, 0, -3}
			covers, deeps := make([]float64, 3), make([]float64, 3)
			cover, deep, err := tt.scheme.Replay(tt.pair, 4, 8, depths, 2, covers, deeps)
			if err != nil {
				t.Fatal(err)
			}
			for k := range depths {
				near(t, fmt.Sprintf("cover after step %d", k+1), covers[k], tt.covers[k], 1e-14)
				near(t, fmt.Sprintf("deep store after step %d", k+1), deeps[k], tt.deeps[k], 1e-14)
			}
			near(t, "cover returned", cover, covers[2], 0)
			near(t, "deep store returned", deep, deeps[2], 0)

			// In two parts, the storages of the first part being the start of the second.
			cover, deep, err = tt.scheme.Replay(tt.pair, 4, 8, depths[:1], 2, nil, nil)
			if err != nil {
				t.Fatal(err)
			}
			cover, deep, err = tt.scheme.Replay(tt.pair, cover, deep, depths[1:], 2, nil, nil)
			if err != nil {
				t.Fatal(err)
			}
			near(t, "cover in two parts", cover, covers[2], 0)
			near(t, "deep store in two parts", deep, deeps[2], 0)
		})
	}
}

func TestReplayRefuses(t *testing.T) {
	good := scheme.Pair{CoverRate: 0.25, Percolation: 0.125, DeepRate: 0.125, CoverCapacity: none, DeepCapacity: none}
	depths := []float64{1, 2}
	for _, tt := range []struct {
		name   string
		scheme scheme.Scheme
		change func(*scheme.Pair)
		covers []float64
		want   string
	}{
		{"exact", scheme.Exact, func(*scheme.Pair) {}, nil, "the exact scheme has no stepping formula"},
		{"cover too fast", scheme.Centred, func(p *scheme.Pair) { p.CoverRate = 2.5 }, nil,
			"cover: a rate of 2.5 /d with a step of 1 d is out of the range of the centred scheme, which oscillates unless their product, here 2.5, is below 2"},
		{"deep store too fast", scheme.Explicit, func(p *scheme.Pair) { p.DeepRate = 1 }, nil,
			"deep store: a rate of 1 /d with a step of 1 d is out of the range of the explicit scheme, which oscillates unless their product, here 1, is below 1"},
		{"more percolation than outflow", scheme.Implicit, func(p *scheme.Pair) { p.Percolation = 0.3 }, nil,
			"no pair of stores: {CoverRate:0.25 Percolation:0.3 DeepRate:0.125 CoverCapacity:+Inf DeepCapacity:+Inf Lateral:0}"},
		{"no capacity given", scheme.Implicit, func(p *scheme.Pair) { p.DeepCapacity = 0 }, nil,
			"no pair of stores: {CoverRate:0.25 Percolation:0.125 DeepRate:0.125 CoverCapacity:+Inf DeepCapacity:0 Lateral:0}"},
		{"no room", scheme.Implicit, func(*scheme.Pair) {}, make([]float64, 1), "2 depths, but room for 1 and 0 storages"},
	} {
		p := good
		tt.change(&p)
		if _, _, err := tt.scheme.Replay(p, 0, 0, depths, 1, tt.covers, nil); err == nil || err.Error() != tt.want {
			t.Errorf("%s: %v, want %s", tt.name, err, tt.want)
		}
	}
}

func TestExactRateRange(t *testing.T) {
	const out = "a rate of %v /d with a step of %v d is out of the range of the %v scheme, which oscillates unless their product, here %v, is below %v"
	const no = "a rate of %v /d with a step of %v d: the rate must be 0 or more and the step above 0"
	for _, tt := range []struct {
		scheme     scheme.Scheme
		rate, step float64
		want       string // empty: in range
	}{
		{scheme.Centred, math.Nextafter(2, 0), 1, ""},
		{scheme.Centred, 2, 1, fmt.Sprintf(out, 2, 1, "centred", 2, 2)},
		{scheme.Centred, 0.1, 31, fmt.Sprintf(out, 0.1, 31, "centred", 3.1, 2)},
		{scheme.Explicit, math.Nextafter(1, 0), 1, ""},
		{scheme.Explicit, 48, 1.0 / 48, fmt.Sprintf(out, 48, 1.0/48, "explicit", 1, 1)},
		{scheme.Explicit, 0.5, 7, fmt.Sprintf(out, 0.5, 7, "explicit", 3.5, 1)},
		{scheme.Implicit, 1e6, 1e4, ""},
		{scheme.Exact, 1e6, 1e4, ""},
		{scheme.Exact, -0.1, 1, fmt.Sprintf(no, -0.1, 1)},
		{scheme.Implicit, 1, 0, fmt.Sprintf(no, 1, 0)},
		{scheme.Implicit, math.NaN(), 1, fmt.Sprintf(no, math.NaN(), 1)},
		{scheme.Explicit, 1, math.NaN(), fmt.Sprintf(no, 1, math.NaN())},
		{scheme.Implicit, math.Inf(1), 1, fmt.Sprintf(no, math.Inf(1), 1)},
	} {
		got, err := tt.scheme.ExactRate(tt.rate, tt.step)
		switch {
		case tt.want == "" && (err != nil || !(got > 0) || math.IsInf(got, 0)):
			t.Errorf("%v: %v /d, %v d: %v, %v; want a rate", tt.scheme, tt.rate, tt.step, got, err)
		case tt.want != "" && (err == nil || err.Error() != tt.want):
			t.Errorf("%v: %v /d, %v d: %v, want %s", tt.scheme, tt.rate, tt.step, err, tt.want)
		}
	}
	for _, s := range []scheme.Scheme{scheme.Exact, scheme.Centred, scheme.Explicit, scheme.Implicit} {
		near(t, "rate of 0", exactRate(t, s, 0, 1), 0, 0)
		near(t, "share kept at a rate of 0", s.Beta(0, 1), 1, 0)
	}
	// Plain arithmetic: the exact scheme changes nothing, and B follows from its formulas.
	near(t, "exact", exactRate(t, scheme.Exact, 0.3, 30), 0.3, 0)
	near(t, "exact, share kept", scheme.Exact.Beta(0.5, 2), 1/math.E, 1e-16)
	near(t, "centred, beyond its range", scheme.Centred.Beta(6, 1), -0.5, 1e-16)
	near(t, "explicit, beyond its range", scheme.Explicit.Beta(3, 1), -2, 1e-16)
}

func TestString(t *testing.T) {
	for s, want := range map[scheme.Scheme]string{
		scheme.Exact: "exact", scheme.Centred: "centred", scheme.Explicit: "explicit", scheme.Implicit: "implicit", 7: "scheme 7",
	} {
		if got := s.String(); got != want {
			t.Errorf("scheme %d is called %q, want %q", int(s), got, want)
		}
	}
}

// TestAgainstLongArithmetic holds shares and rates against arithmetic of 400 bits, from rates times steps of 1e-15 to the
// limits of the schemes and to 1e10. Steps are powers of two, so that the product is not rounded. Few operations, each
// good to half a unit of the last place, make the tolerance.
func TestAgainstLongArithmetic(t *testing.T) {
	const tolerance = 1e-15
	products := []float64{1e-15, 1e-9, 1e-4, 0.01, 0.1, 1.0 / 3, 0.5, 0.9, 0.999, math.Nextafter(1, 0), 1, 1.5, 1.99, math.Nextafter(2, 0), 2, 10, 1e4, 1e10}
	for _, tt := range stepping {
		for _, x := range products {
			if !(x < tt.limit) {
				continue
			}
			for _, step := range []float64{1.0 / 32, 1, 16} {
				rate := x / step
				what := fmt.Sprintf("%v, %v /d, %v d", tt.scheme, rate, step)
				beta := new(big.Float).Quo(
					new(big.Float).Sub(long(1), new(big.Float).Mul(long(1-tt.end), long(x))),
					new(big.Float).Add(long(1), new(big.Float).Mul(long(tt.end), long(x))))
				want, _ := beta.Float64()
				near(t, "share kept: "+what, tt.scheme.Beta(rate, step), want, tolerance*want)
				want, _ = new(big.Float).Quo(minusLog(beta), long(step)).Float64()
				near(t, "rate: "+what, exactRate(t, tt.scheme, rate, step), want, tolerance*want)
			}
		}
	}
}

// TestTinyProducts: the shorter the step the less there is to convert, to the last digits. -ln(B)/x is 1 + x^2/12 centred,
// 1 + x/2 explicit and 1 - x/2 implicit, and terms of higher order.
func TestTinyProducts(t *testing.T) {
	for _, x := range []float64{1e-300, 1e-20, 1e-12, 1e-7, 1e-4} {
		for _, tt := range []struct {
			scheme scheme.Scheme
			want   float64
		}{{scheme.Centred, 1 + x*x/12}, {scheme.Explicit, 1 + x/2 + x*x/3}, {scheme.Implicit, 1 - x/2 + x*x/3}} {
			near(t, fmt.Sprintf("%v at %v", tt.scheme, x), exactRate(t, tt.scheme, x, 1)/x, tt.want, 5e-16+x*x*x)
		}
	}
}

func long(v float64) *big.Float { return new(big.Float).SetPrec(400).SetFloat64(v) }

// minusLog returns -ln(b) for b above 0 and at most 1: 64 square roots bring b next to 1, where with z = (1-b)/(1+b) the
// series 2*(z + z^3/3 + z^5/5 + ...) gives more than 200 bits at once.
func minusLog(b *big.Float) *big.Float {
	const roots = 64
	b = new(big.Float).Set(b)
	for range roots {
		b.Sqrt(b)
	}
	z := new(big.Float).Quo(new(big.Float).Sub(long(1), b), new(big.Float).Add(long(1), b))
	square := new(big.Float).Mul(z, z)
	sum, power := long(0), new(big.Float).Set(z)
	for k := 1; k < 20; k += 2 {
		sum.Add(sum, new(big.Float).Quo(power, long(float64(k))))
		power.Mul(power, square)
	}
	return sum.SetMantExp(sum, roots+1)
}
