package drain_test

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade/drain"
)

// TestStepResponse: the sums are those of D. A. Kraijenhoff van de Leur 1958, De Ingenieur 70, B87-B94 (from memory), the
// figures were computed from them with mpmath 1.2.1 at 50 digits.
func TestStepResponse(t *testing.T) {
	for _, tt := range []struct{ t, flow, height float64 }{
		{0, 0, 0},
		{0.001, 0.022716173774013788, 0.001},
		{0.01, 0.071834848850066625, 0.01},
		{0.1, 0.22716173773997055, 0.099989388024711513},
		{0.25, 0.35917259356317374, 0.2470512633335953},
		{0.4999, 0.507314064557724, 0.46188880016447089},
		{0.5, 0.50736413170859083, 0.46196555831032814},
		{1, 0.70179704197112851, 0.76530771758009624},
		{2, 0.89030134993950111, 1.0613863164395813},
		{3, 0.95964412242291898, 1.170309685873861},
		{20, 0.9999999983292918, 1.2337005475118275},
		{math.Inf(1), 1, math.Pi * math.Pi / 8},
	} {
		near(t, fmt.Sprintf("flow at %v", tt.t), drain.StepOutflow(tt.t), tt.flow, 4e-16)
		near(t, fmt.Sprintf("height at %v", tt.t), drain.StepHead(tt.t), tt.height, 6e-16)
	}
}

// TestStepResponseAnywhere: whichever of its forms a time is given to, the response is the printed sum, rises, and stays
// between its ends. The sum is cut where e^(-n^2*t) is 4e-18.
func TestStepResponseAnywhere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		now := scale(t, -7, 2, "t")
		flow, height := 1.0, math.Pi*math.Pi/8
		sign := 1.0
		for n := 1.0; n*n*now < 40; n += 2 {
			e := math.Exp(-n * n * now)
			flow -= 8 / (math.Pi * math.Pi) * e / (n * n)
			height -= sign * 4 / math.Pi * e / (n * n * n)
			sign = -sign
		}
		q, h := drain.StepOutflow(now), drain.StepHead(now)
		if !(math.Abs(q-flow) <= 1e-14 && math.Abs(h-height) <= 1e-14) {
			t.Errorf("at %v: flow %v, height %v; the sums give %v and %v", now, q, h, flow, height)
		}
		later := now * (1 + scale(t, -6, 1, "later"))
		q2, h2 := drain.StepOutflow(later), drain.StepHead(later)
		if !(0 < q && q <= q2 && q2 <= 1) || !(0 < h && h <= h2 && h2 <= math.Pi*math.Pi/8) {
			t.Errorf("at %v: flow %v, height %v; at %v: %v and %v", now, q, h, later, q2, h2)
		}
	})
}

// TestConsolidation: a level water table between two drains falls as the pore pressure in clay between two drained faces
// does, with c = K*D/mu and the drainage path L/2. The published table gives the time factor T = c*t/(L/2)^2 at which the
// share U is gone: geotechnical notes CEG 4012 (fall 2011), p. 31, first column (read); also in K. Terzaghi 1943 and in
// B. M. Das, Principles of Geotechnical Engineering (from memory). For U = 10 % it cuts 0.00785 off to 0.0078.
func TestConsolidation(t *testing.T) {
	const conductivity, depth, porosity, spacing = 0.8, 2.5, 0.04, 12
	rate := drain.ReactionFactor(conductivity, depth, porosity, spacing)
	gone := func(factor float64) float64 {
		return 100 * drain.StepOutflow(rate*factor*spacing*spacing/4*porosity/(conductivity*depth))
	}
	for _, tt := range []struct{ gone, factor, half float64 }{
		{10, 0.0078, 1e-4}, {20, 0.0314, 0.5e-4}, {30, 0.0707, 0.5e-4}, {40, 0.126, 0.5e-3}, {50, 0.197, 0.5e-3}, {60, 0.286, 0.5e-3},
		{70, 0.403, 0.5e-3}, {80, 0.567, 0.5e-3}, {90, 0.848, 0.5e-3}, {95, 1.129, 0.5e-3},
	} {
		if lo, hi := gone(tt.factor-tt.half), gone(tt.factor+tt.half); !(lo <= tt.gone && tt.gone <= hi) {
			t.Errorf("T = %v: between %v and %v %% gone, want %v", tt.factor, lo, hi, tt.gone)
		}
	}
	// 90 % in the rounded time: 0.85 for 0.848.
	near(t, "t90", drain.ConsolidationTime(12, 0.05), 612, 1e-9)
	c := conductivity * depth / porosity
	near(t, "gone at t90", drain.StepOutflow(rate*drain.ConsolidationTime(spacing, c)), 0.9, 0.5e-3)
}

// TestFallingLevelTable: the height midway of a water table that was level is the derivative of the step response. At a time
// factor of 0.2 it is 0.77231 of the first height, computed; its slowest part alone, 4/pi*e^(-a*t), is 0.77731.
func TestFallingLevelTable(t *testing.T) {
	now := math.Pi * math.Pi / 4 * 0.2
	const step = 1e-4
	near(t, "height", (drain.StepHead(now+step)-drain.StepHead(now-step))/(2*step), 0.77231, 0.5e-5)
	near(t, "slowest part", 4/math.Pi*math.Exp(-now), 0.77731, 0.5e-5)
}

// TestFallingTable: the formula of L. D. Dumm 1954 and 1960 (from memory, as in ILRI Publ. 16), with figures computed: K = 1 m/d, D =
// 3.5 m, porosity 0.05, from 0.8 to 0.5 m in 10 days.
func TestFallingTable(t *testing.T) {
	spacing := drain.FallingSpacing(1, 3.5, 0.05, 0.8, 0.5, 10)
	near(t, "spacing", spacing, 105.695, 0.5e-3)
	rate := drain.ReactionFactor(1, 3.5, 0.05, spacing)
	near(t, "height", drain.FallingHead(0.8, rate, 10), 0.5, 1e-15)
	near(t, "time", drain.FallingTime(0.8, 0.5, rate), 10, 1e-14)

	// Nothing rises, nothing falls at once.
	for _, days := range []float64{0, 0.1, math.Log(1.16) / rate} {
		near(t, fmt.Sprintf("height after %v d", days), drain.FallingHead(0.8, rate, days), 0.8, 1e-15)
	}
	near(t, "to where it is", drain.FallingTime(0.8, 0.8, rate), 0, 0)
	near(t, "to above it", drain.FallingTime(0.8, 0.9, rate), 0, 0)
	if l := drain.FallingSpacing(1, 3.5, 0.05, 0.8, 0.8, 10); !math.IsInf(l, 1) {
		t.Errorf("spacing for no fall: %v", l)
	}
	if d := drain.FallingTime(0.8, 0, rate); !math.IsInf(d, 1) {
		t.Errorf("time to fall for good: %v", d)
	}
	if d := drain.FallingTime(0.8, 0.5, 0); !math.IsInf(d, 1) {
		t.Errorf("time at a rate of 0: %v", d)
	}

	// The exact figure for a parabola of the fourth degree, 1 - (2x/L - 1)^4, is the first part of its sine series over its
	// height; 1.16 stands for it.
	const n = 100000
	sum := 0.0
	for i := range n {
		x := (float64(i) + 0.5) / n
		sum += 2.0 / n * (1 - math.Pow(2*x-1, 4)) * math.Sin(math.Pi*x)
	}
	near(t, "fourth degree", sum, 192*(math.Pi*math.Pi-8)/math.Pow(math.Pi, 5), 1e-9)
	near(t, "fourth degree", sum, 1.17301, 0.5e-5)
}
