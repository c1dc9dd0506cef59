package soil_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade/soil"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

// TestStress: Ks of the tomato example of FAO Irrigation and Drainage Paper 56 (Allen et al. 1998), 160 mm of which 40 %
// are readily available; inputs from memory, the figures follow from eq. 84.
func TestStress(t *testing.T) {
	for _, tt := range []struct{ deficit, ks float64 }{
		{0, 1}, {64, 1}, {72, 0.9167}, {80, 0.8333}, {112, 0.5}, {160, 0},
	} {
		s := soil.Store{Available: 160, Readily: 0.4, Deficit: tt.deficit}
		_, actual := s.Step(0, 1, 1)
		near(t, "Ks", actual, tt.ks, 0.5e-4)
		near(t, "deficit", s.Deficit, tt.deficit+actual, 1e-12)
	}
}

// TestOrder: Ks is taken at the start of a part, and recharge is what is left after the evapotranspiration of the same part.
func TestOrder(t *testing.T) {
	s := soil.Store{Available: 100, Readily: 0.5}
	recharge, actual := s.Step(12, 4, 1)
	near(t, "recharge from full", recharge, 8, 0)
	near(t, "actual", actual, 4, 0)

	s = soil.Store{Available: 100, Readily: 0.5, Deficit: 75} // Ks = 0.5 whatever falls on the day
	recharge, actual = s.Step(80, 4, 1)
	near(t, "actual", actual, 2, 0)
	near(t, "recharge", recharge, 3, 0)
	near(t, "deficit", s.Deficit, 0, 0)
}

// TestLongSteps: a step longer than a day is as many equal parts of at most a day as it takes.
func TestLongSteps(t *testing.T) {
	for _, tt := range []struct {
		days  float64
		parts int
	}{{31, 31}, {28, 28}, {1.5, 2}, {1, 1}, {1.0 / 24, 1}, {1 + 1e-12, 1}} {
		long := soil.Store{Available: 80, Readily: 0.5, Deficit: 30}
		parts := long
		recharge, actual := long.Step(20, 60, tt.days)
		var r, a float64
		for range tt.parts {
			x, y := parts.Step(20/float64(tt.parts), 60/float64(tt.parts), tt.days/float64(tt.parts))
			r, a = r+x, a+y
		}
		near(t, "recharge", recharge, r, 1e-12)
		near(t, "actual", actual, a, 1e-12)
		near(t, "deficit", long.Deficit, parts.Deficit, 1e-12)
	}
}

// TestHalving: parts are halved until the demand of one is at most (1 - p)*A.
func TestHalving(t *testing.T) {
	s := soil.Store{Available: 10, Readily: 0.8, Deficit: 8} // limit 2 mm, demand 7 mm: four parts of 1.75 mm
	_, actual := s.Step(0, 7, 1)
	want, d := 0.0, 8.0
	for range 4 {
		et := (10 - d) / 2 * 1.75
		d += et
		want += et
	}
	near(t, "actual", actual, want, 1e-12)
	near(t, "deficit", s.Deficit, d, 1e-12)

	s = soil.Store{Available: 10, Readily: 0.5, Deficit: 5} // demand just at the limit: one part, which empties the soil
	_, actual = s.Step(0, 5, 1)
	near(t, "actual", actual, 5, 0)
	near(t, "deficit", s.Deficit, 10, 0)
}

// TestReadilyAll: with p = 1 plants take all they want until the soil is empty.
func TestReadilyAll(t *testing.T) {
	s := soil.Store{Available: 10, Readily: 1}
	for _, want := range []float64{4, 4, 2, 0} {
		_, actual := s.Step(0, 4, 1)
		near(t, "actual", actual, want, 0)
	}
	near(t, "deficit", s.Deficit, 10, 0)
	_, actual := s.Step(3, 4, 1)
	near(t, "actual with rain on dry soil", actual, 3, 0)

	almost := soil.Store{Available: 10, Readily: math.Nextafter(1, 0)}
	_, actual = almost.Step(0, 40, 1)
	near(t, "actual, p just below 1", actual, 10, 1e-9)

	none := soil.Store{Readily: 0.5}
	recharge, actual := none.Step(5, 3, 1)
	near(t, "recharge without any soil", recharge, 2, 0)
	near(t, "actual without any soil", actual, 3, 0)
	recharge, actual = none.Step(1, 3, 1)
	near(t, "recharge without any soil", recharge, 0, 0)
	near(t, "actual without any soil", actual, 1, 0)
}

// TestBalance: what goes in comes out or stays, nothing is negative, and the deficit stays within 0 and what there is.
func TestBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := soil.Store{
			Available: rapid.Float64Range(0, 300).Draw(t, "available"),
			Readily:   rapid.OneOf(rapid.Float64Range(0, 1), rapid.SampledFrom([]float64{0, 1, 1 - 1e-9})).Draw(t, "readily"),
		}
		days := rapid.SampledFrom([]float64{1.0 / 1440, 1.0 / 24, 0.5, 1, 28, 31}).Draw(t, "days")
		var in, out, most float64
		for range 30 {
			infiltration := rapid.Float64Range(0, 50).Draw(t, "infiltration")
			demand := rapid.Float64Range(0, 12).Draw(t, "demand") * days
			recharge, actual := s.Step(infiltration, demand, days)
			if !(recharge >= 0 && recharge <= infiltration+1e-9 && actual >= 0 && actual <= demand+1e-9) {
				t.Fatalf("recharge %v of %v, actual %v of %v", recharge, infiltration, actual, demand)
			}
			if !(s.Deficit >= 0 && s.Deficit <= s.Available) {
				t.Fatalf("deficit %v of %v", s.Deficit, s.Available)
			}
			in += infiltration
			out += recharge + actual
			most = max(most, in)
			if e := in + s.Deficit - out; math.Abs(e) > 1e-11*(most+s.Available+1) {
				t.Fatalf("error of the balance %v mm", e)
			}
		}
	})
}
