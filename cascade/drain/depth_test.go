package drain_test

import (
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade/drain"
)

var depths = map[string]func(below, radius, spacing float64) float64{"series": drain.EquivalentDepth, "Moody": drain.MoodyDepth}

// scale draws a number between 10^lo and 10^hi, each size as likely as the next. Drawn numbers crowd near 0; the fractions of
// their multiples of the golden ratio do not.
func scale(t *rapid.T, lo, hi float64, label string) float64 {
	_, share := math.Modf(float64(rapid.IntRange(0, 1<<30).Draw(t, label)) * math.Phi)
	return math.Pow(10, lo+share*(hi-lo))
}

// imageDepth is the equivalent depth by the sum over the odd n as it is printed, which needs some 20/x terms.
func imageDepth(below, radius, spacing float64) float64 {
	x := 2 * math.Pi * below / spacing
	sum := 0.0
	for n := 1.0; n*x < 20; n += 2 {
		e := math.Exp(-2 * n * x)
		sum += e / (n * (1 - e))
	}
	return math.Pi * spacing / 8 / (math.Log(spacing/(math.Pi*radius)) + 4*sum)
}

// TestEquivalentDepth holds the series of W. H. van der Molen & J. Wesseling 1991, Agric. Water Manage. 19, 1-16 (from
// memory), and its limit for an infinite depth. The figures were computed from the printed sum with mpmath 1.2.1 at 50
// digits; 15.915 and 15.916 lie on either side of x = 1.
func TestEquivalentDepth(t *testing.T) {
	inf := math.Inf(1)
	for _, tt := range []struct{ below, radius, spacing, want float64 }{
		{5, 0.1, 30, 2.2994773222331088},
		{5, 0.1, 50, 2.9330926436700674},
		{5, 0.1, 100, 3.6972876684820976},
		{5, 0.1, 250, 4.3823626053414353},
		{10, 0.1, 100, 5.3157733925974868},
		{2, 0.1, 20, 1.3592923642229789},
		{1, 0.1, 40, 0.93134900575062551},
		{0.5, 0.05, 8, 0.42219803098133922},
		{15.915, 0.1, 100, 6.1431302028097963},
		{15.916, 0.1, 100, 6.1432188686157027},
		{30, 0.1, 100, 6.704284854278143},
		{40, 0.3, 100, 8.3716287268173033},
		{inf, 0.1, 30, 2.5840834738089851},
		{inf, 0.1, 100, 6.8141133330189252},
		{inf, 0.1, 250, 14.698326683044926},
	} {
		near(t, fmt.Sprintf("d of %v %v %v", tt.below, tt.radius, tt.spacing),
			drain.EquivalentDepth(tt.below, tt.radius, tt.spacing), tt.want, 4e-15*tt.want)
	}

	// F(x), from the same computation, out of d = (pi*L/8)/(ln(L/(pi*r)) + F).
	for _, tt := range []struct{ x, f, tolerance float64 }{
		{0.1, 20.53354884, 0.5e-8}, {0.3, 5.182820464, 0.5e-9}, {0.5, 2.403777948, 0.5e-9}, {0.7, 1.330305199, 0.5e-9},
		{1, 0.6294205902, 0.5e-10},
	} {
		const spacing, radius = 100, 1e-3
		d := drain.EquivalentDepth(tt.x*spacing/(2*math.Pi), radius, spacing)
		near(t, fmt.Sprintf("F(%v)", tt.x), math.Pi*spacing/(8*d)-math.Log(spacing/(math.Pi*radius)), tt.f, tt.tolerance)
	}
}

func TestEquivalentDepthLimits(t *testing.T) {
	inf := math.Inf(1)
	for _, tt := range []struct{ below, radius, spacing, want float64 }{
		{0, 0.1, 20, 0},     // drains on the base
		{0.3, 0.1, 20, 0.3}, // below pi*r
		{7, 0.1, 0.3, 7},    // drains that touch
		{inf, 0.1, 0.3, inf},
	} {
		if got := drain.EquivalentDepth(tt.below, tt.radius, tt.spacing); got != tt.want {
			t.Errorf("d of %v %v %v = %v, want %v", tt.below, tt.radius, tt.spacing, got, tt.want)
		}
	}
	// A layer that is thin against the spacing carries the flow with all of its depth.
	near(t, "thin layer", drain.EquivalentDepth(1, 0.1, 1e9), 1, 1e-8)

	sizes := []float64{math.SmallestNonzeroFloat64, 1e-308, 1e-150, 1e-9, 1, 1e9, 1e150, math.MaxFloat64}
	for _, below := range sizes {
		for _, radius := range sizes {
			for _, spacing := range sizes {
				for name, depth := range depths {
					if d := depth(below, radius, spacing); !(0 <= d && d <= below) {
						t.Errorf("%s: d of %v %v %v = %v", name, below, radius, spacing, d)
					}
				}
			}
		}
	}
}

// TestErnst: with the base near, the radial resistance of L. F. Ernst 1962, as given by W. F. J. van Beers 1976, ILRI
// Bulletin 15, p. 14, is that of the series. d = D/(1 + 8*D/(pi*L)*ln(D/(pi*r))) follows from it; the figures were
// computed, and the series meets them to their last digit where L is ten times D or more and else to 1e-3.
func TestErnst(t *testing.T) {
	for _, tt := range []struct{ below, spacing, want float64 }{
		{5, 100, 3.6973}, {5, 250, 4.3824}, {10, 100, 5.3158}, {5, 50, 2.9331}, {5, 30, 2.2994}, {2, 20, 1.3593},
	} {
		got := drain.EquivalentDepth(tt.below, 0.1, tt.spacing)
		tolerance := 1e-3
		if tt.spacing >= 10*tt.below {
			tolerance = 0.5e-4
		}
		near(t, fmt.Sprintf("d of %v %v", tt.below, tt.spacing), got, tt.want, tolerance)
		ernst := tt.below / (1 + 8*tt.below/(math.Pi*tt.spacing)*math.Log(tt.below/(math.Pi*0.1)))
		near(t, "Ernst", ernst, tt.want, 0.5e-4)
	}
}

// TestMoody: the formulas of W. T. Moody 1966 are from memory, the figures were computed.
func TestMoody(t *testing.T) {
	for _, tt := range []struct{ below, spacing, want float64 }{
		{5, 30, 2.3766}, {5, 50, 3.0208}, {5, 100, 3.7755}, {10, 100, 5.4594}, {2, 20, 1.4066}, {10, 30, 2.5871}, {50, 100, 6.8204},
	} {
		near(t, fmt.Sprintf("d of %v %v", tt.below, tt.spacing), drain.MoodyDepth(tt.below, 0.1, tt.spacing), tt.want, 0.5e-4)
	}
	if d := drain.MoodyDepth(0, 0.1, 20); d != 0 {
		t.Errorf("no depth: d = %v", d)
	}
}

// TestHooghoudtTable: the equivalent depths of S. B. Hooghoudt 1940, Versl. Landbouwk. Onderz. 46(14), for a radius of
// 0.1 m, as reprinted in ILRI Publ. 16 (1994), table 8.1 (from memory). They are printed to 0.01 m. Moody's formula is held
// to them within 0.02 m or 0.8 %; for an infinite depth so is the series, within 0.5 %. For a finite depth the series lies
// 1 to 5 % below the table, which joins the radial and the level flow at 0.7*D. D = 1, L = 40 is left out: the table says
// 0.96 as for L = 50, between 0.94 and 0.96 for L = 35 and 50, and is not smooth there.
func TestHooghoudtTable(t *testing.T) {
	for _, tt := range []struct {
		below   float64
		spacing []float64
		depth   []float64
	}{
		{1, []float64{10, 15, 20, 25, 30, 35, 50}, []float64{0.80, 0.86, 0.89, 0.91, 0.93, 0.94, 0.96}},
		{2, []float64{10, 15, 20, 25, 30, 35, 40, 50}, []float64{1.08, 1.28, 1.41, 1.50, 1.57, 1.62, 1.66, 1.72}},
		{3, []float64{15, 20, 25, 30, 35, 40, 50, 100}, []float64{1.45, 1.67, 1.83, 1.97, 2.08, 2.16, 2.29, 2.60}},
		{5, []float64{20, 25, 30, 35, 40, 50, 75, 100, 150, 200, 250},
			[]float64{1.88, 2.15, 2.38, 2.58, 2.75, 3.02, 3.49, 3.78, 4.12, 4.31, 4.43}},
		{10, []float64{50, 75, 100, 150, 200, 250}, []float64{3.74, 4.74, 5.47, 6.45, 7.09, 7.53}},
		{math.Inf(1), []float64{10, 15, 20, 25, 30, 35, 40, 50, 75, 100, 150, 200, 250},
			[]float64{1.14, 1.53, 1.89, 2.24, 2.58, 2.91, 3.24, 3.88, 5.38, 6.82, 9.55, 12.20, 14.70}},
	} {
		for i, spacing := range tt.spacing {
			want := tt.depth[i]
			near(t, fmt.Sprintf("Moody, D = %v, L = %v", tt.below, spacing), drain.MoodyDepth(tt.below, 0.1, spacing), want, max(0.02, 0.008*want))
			series := drain.EquivalentDepth(tt.below, 0.1, spacing)
			if math.IsInf(tt.below, 1) {
				near(t, fmt.Sprintf("series, L = %v", spacing), series, want, 0.005*want)
			} else if !(0.95*want <= series && series <= 0.99*want) {
				t.Errorf("series, D = %v, L = %v: %v, not 1 to 5 %% below %v", tt.below, spacing, series, want)
			}
		}
	}
}

// TestEquivalentDepthAnywhere: the depth is that of the printed sum and never above D, changes without steps, and grows with
// everything that it should grow with.
func TestEquivalentDepthAnywhere(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		below, radius, spacing := scale(t, -6, 6, "below"), scale(t, -4, 2, "radius"), scale(t, -3, 6, "spacing")
		d := drain.EquivalentDepth(below, radius, spacing)
		if !(0 < d && d <= below) {
			t.Fatalf("d = %v", d)
		}
		if below/spacing > 1e-3 { // the sum needs thousands of terms there, and more below
			if want := imageDepth(below, radius, spacing); want > 0 && !(math.Abs(d-min(want, below)) <= 1e-10*d) {
				t.Errorf("d = %v, the printed sum gives %v", d, want)
			}
		}
		// Multiplying all lengths multiplies the depth.
		if again := drain.EquivalentDepth(8*below, 8*radius, 8*spacing); !(math.Abs(again-8*d) <= 1e-12*again) {
			t.Errorf("d = %v, and %v for eight times all lengths", d, again)
		}
		// A little more of anything changes little. The capped depth is the steepest: its logarithm goes up by D/L for that of L.
		const little = 1e-9
		bound := 4 * little * (1 + 8*below/(math.Pi*spacing)) * d
		for what, next := range map[string]float64{
			"below":   drain.EquivalentDepth(below*(1+little), radius, spacing),
			"radius":  drain.EquivalentDepth(below, radius*(1+little), spacing),
			"spacing": drain.EquivalentDepth(below, radius, spacing*(1+little)),
		} {
			if !(math.Abs(next-d) <= bound) {
				t.Errorf("d = %v, and %v for a little more %s", d, next, what)
			}
		}
		more := 1 + scale(t, -9, 2, "more")
		if next := drain.EquivalentDepth(more*below, radius, spacing); !(next >= d*(1-1e-12)) {
			t.Errorf("d = %v, and %v for %v times the depth", d, next, more)
		}
		if next := drain.EquivalentDepth(below, more*radius, spacing); !(next >= d*(1-1e-12)) {
			t.Errorf("d = %v, and %v for %v times the radius", d, next, more)
		}
		next := drain.EquivalentDepth(below, radius, more*spacing)
		if !(more*more/next >= 1/d*(1-1e-12)) {
			t.Errorf("d = %v, and %v for %v times the spacing: drains further apart carry more", d, next, more)
		}
		if below >= 5*radius && spacing >= 10*radius && !(next >= d*(1-1e-12)) {
			t.Errorf("d = %v, and %v for %v times the spacing", d, next, more)
		}
	})
}

// TestDepthHasNoStep looks at the change of form, x = 1, from both sides, where the fastest change is d/L.
func TestDepthHasNoStep(t *testing.T) {
	for _, spacing := range []float64{1, 10, 33, 100, 1000} {
		for _, share := range []float64{1e-5, 1e-3, 0.05} {
			at := spacing / (2 * math.Pi)
			lo, hi := at*(1-1e-15), at*(1+1e-15)
			a, b := drain.EquivalentDepth(lo, share*spacing, spacing), drain.EquivalentDepth(hi, share*spacing, spacing)
			near(t, fmt.Sprintf("step at L = %v, r = %v L", spacing, share), b/a, 1, 5e-15)
		}
	}
}

// TestMoodyAboveSeries: both are known to differ by design, by up to 6.5 % for D of eight radii or more.
func TestMoodyAboveSeries(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		const radius = 0.1
		below, spacing := radius*scale(t, math.Log10(8), 5, "below"), radius*scale(t, 1, 5, "spacing")
		series, moody := drain.EquivalentDepth(below, radius, spacing), drain.MoodyDepth(below, radius, spacing)
		if !(series <= moody && moody <= 1.065*series) {
			t.Errorf("D = %v, L = %v: series %v, Moody %v", below, spacing, series, moody)
		}
	})
}

// TestTrenchRadius: a half-full pipe of the same wetted perimeter is the definition.
func TestTrenchRadius(t *testing.T) {
	near(t, "bed of 0.5 m, 0.3 m of water", drain.TrenchRadius(0.5, 0.3), 0.350141, 0.5e-6)
	near(t, "no water at the sides", drain.TrenchRadius(math.Pi, 0), 1, 1e-15)
}
