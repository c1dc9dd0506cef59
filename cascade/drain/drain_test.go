package drain_test

import (
	"math"
	"testing"

	"quietslope/cascade"
	"quietslope/cascade/drain"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

func TestReactionFactor(t *testing.T) {
	// The formula is from memory, as in H. P. Ritzema (ed.) 1994, Drainage Principles and Applications, ILRI Publ. 16,
	// ch. 8; the figures were computed.
	a := drain.ReactionFactor(0.5, 3.78, 0.05, 100)
	near(t, "a", a, 0.0373071, 0.5e-7)
	near(t, "1/a", 1/a, 26.8045, 0.5e-4)
	near(t, "half-life", math.Ln2/a, 18.5795, 0.5e-4)

	near(t, "half the spacing", drain.ReactionFactor(0.5, 3.78, 0.05, 50), 4*a, 1e-15)
	near(t, "twice the porosity", drain.ReactionFactor(0.5, 3.78, 0.10, 100), a/2, 1e-15)
	near(t, "twice the conductivity", drain.ReactionFactor(1, 3.78, 0.05, 100), 2*a, 1e-15)
	near(t, "twice the depth", drain.ReactionFactor(0.5, 7.56, 0.05, 100), 2*a, 1e-15)
	near(t, "no depth", drain.ReactionFactor(0.5, 0, 0.05, 100), 0, 0)
}

// TestSineMound drains a water table in the shape of half a sine between two drains, for which the reservoir is the exact
// solution. It is the same problem as the consolidation of clay between two drained faces, with c = K*D/mu and the drainage
// path L/2. The published table gives the time factor T = c*t/(L/2)^2 at which the share U is gone: geotechnical notes CEG
// 4012 (fall 2011), p. 31, third column, whose heading was not seen; it agrees with T = -(4/pi^2)*ln(1-U) to its last
// digit.
func TestSineMound(t *testing.T) {
	const conductivity, depth, porosity, spacing = 0.8, 2.5, 0.04, 12
	rate := drain.ReactionFactor(conductivity, depth, porosity, spacing)
	m := cascade.Model{
		Cover: cascade.Store{Capacity: math.Inf(1), Drains: []cascade.Outlet{{Rate: rate, Ceiling: math.Inf(1)}}},
		Deep:  cascade.Store{Capacity: math.Inf(1), Seepage: 1},
	}
	for _, tt := range []struct{ gone, factor, digit float64 }{
		{5, 0.0208, 1e-4}, {10, 0.0427, 1e-4}, {20, 0.0904, 1e-4}, {30, 0.145, 1e-3}, {40, 0.207, 1e-3}, {50, 0.281, 1e-3},
		{60, 0.371, 1e-3}, {70, 0.488, 1e-3}, {80, 0.652, 1e-3}, {90, 0.933, 1e-3}, {95, 1.214, 1e-3},
	} {
		// The share that is gone at both ends of what the printed time factor stands for.
		gone := func(factor float64) float64 {
			r, err := cascade.NewRun(m, 100, 0)
			if err != nil {
				t.Fatal(err)
			}
			if err := r.Step(0, factor*spacing*spacing/4*porosity/(conductivity*depth)); err != nil {
				t.Fatal(err)
			}
			return r.Totals().Cover.Drains[0]
		}
		if lo, hi := gone(tt.factor-tt.digit/2), gone(tt.factor+tt.digit/2); !(lo <= tt.gone && tt.gone <= hi) {
			t.Errorf("T = %v: between %v and %v %% gone, want %v", tt.factor, lo, hi, tt.gone)
		}
	}
}

// TestRecursion: outflow and height midway by the recursion of De Zeeuw & Hellinga 1958 (as in ILRI Publ. 16, ch. 8, from
// memory), figures computed: a = 0.1 /d, mu = 0.05, recharge in m/d from rest; q = 0.8*mu*a*h.
func TestRecursion(t *testing.T) {
	m := cascade.Model{
		Cover: cascade.Store{Capacity: math.Inf(1), Seepage: 0.1},
		Deep:  cascade.Store{Capacity: math.Inf(1), Seepage: 1},
	}
	r, err := cascade.NewRun(m, 0, 0)
	if err != nil {
		t.Fatal(err)
	}
	recharge := []float64{0.01, 0.01, 0, 0, 0.02, 0}
	flow := []float64{0.0009516, 0.0018127, 0.0016402, 0.0014841, 0.0032461, 0.0029372}
	height := []float64{0.237906, 0.453173, 0.410048, 0.371027, 0.811532, 0.734304}
	for i := range recharge {
		if err := r.Step(1000*recharge[i], 1); err != nil {
			t.Fatal(err)
		}
		s, _ := r.Storage()
		q := 0.1 * s / 1000
		near(t, "outflow", q, flow[i], 0.5e-7)
		near(t, "height", q/(0.8*0.05*0.1), height[i], 0.5e-6)
	}
}
