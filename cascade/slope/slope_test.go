package slope_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade/slope"
)

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %v, want %v within %v", what, got, want, tolerance)
	}
}

// level is the height that has the pore pressure here which h m of water of another unit weight have in an example:
// nothing but their product enters.
func level(h, weight float64) float64 { return h * weight / 9.81 }

// TestPublished holds worked examples to half a unit of their last printed digit, and to what they give when worked out
// in full.
func TestPublished(t *testing.T) {
	// B. M. Das, Principles of Geotechnical Engineering, example 15.1, read second-hand: water at the surface;
	// 0.98 = 0.375 + 0.61, in full 0.98427 = 0.37453 + 0.60973.
	das := slope.Slope{Angle: 15, Depth: 6, UnitWeight: 17.8, Friction: 20, Cohesion: 10}
	near(t, "Das 15.1", das.FactorOfSafety(6), 0.98, 0.5e-2)
	near(t, "Das 15.1 in full", das.FactorOfSafety(6), 0.98427, 0.5e-5)
	bare := das
	bare.Cohesion = 0
	near(t, "Das 15.1, friction", bare.FactorOfSafety(6), 0.61, 0.5e-2)
	near(t, "Das 15.1, friction in full", bare.FactorOfSafety(6), 0.60973, 0.5e-5)
	near(t, "Das 15.1, cohesion", das.FactorOfSafety(6)-bare.FactorOfSafety(6), 0.375, 0.5e-3)
	near(t, "Das 15.1, cohesion in full", das.FactorOfSafety(6)-bare.FactorOfSafety(6), 0.37453, 0.5e-5)
	near(t, "Das 15.1, level at 1 over depth", das.Level(1)/6, 0.97898, 0.5e-5)

	// The same example asks for the depth at which FS is 2: printed 1.62 m, in full 1.6164 m.
	lo, hi := 0.1, 6.0
	for range 60 {
		das.Depth = (lo + hi) / 2
		if das.FactorOfSafety(das.Depth) > 2 {
			lo = das.Depth
		} else {
			hi = das.Depth
		}
	}
	near(t, "Das 15.1, depth for 2", lo, 1.62, 0.5e-2)
	near(t, "Das 15.1, depth for 2 in full", lo, 1.6164, 0.5e-4)

	// The same book, 9th ed., problem 15.3: statement read, answer computed.
	das = slope.Slope{Angle: 22, Depth: 6, UnitWeight: 20.8, Friction: 26, Cohesion: 52}
	near(t, "Das 15.3", das.FactorOfSafety(6), 1.8375, 0.5e-4)

	// Graduate Aptitude Test in Engineering (India), Civil, 2014, set 1, question 16, read: cohesionless, friction 34 degrees,
	// unit weight 18, that of water 10, water at the surface, FS = 1.5; of the angles offered 11.3 degrees is the answer, in
	// full 11.3019. FS is 1.5 on both sides of the printed digit.
	gate := func(angle float64) float64 {
		return slope.Slope{Angle: angle, Depth: 4, UnitWeight: 18, Friction: 34}.FactorOfSafety(level(4, 10))
	}
	if a, b := gate(11.25), gate(11.35); !(a > 1.5 && b < 1.5) {
		t.Errorf("2014, question 16: FS = %v and %v on both sides of the answer, want 1.5 between them", a, b)
	}
	near(t, "2014, question 16 in full", gate(11.3019), 1.5, 0.5e-4*0.14) // FS falls by 0.14 a degree
	for _, other := range []float64{45.3, 44.7, 12.3} {
		if fs := gate(other); math.Abs(fs-1.5) < 0.1 {
			t.Errorf("2014, question 16: FS = %v at %v degrees, which is a wrong answer", fs, other)
		}
	}

	// R. F. Craig, Soil Mechanics, 7th ed., slope stability: fissured overconsolidated clay, slip surface at 5 m, water at
	// the surface, unit weight of water 9.8. From memory.
	craig := slope.Slope{Angle: 12, Depth: 5, UnitWeight: 20, Friction: 26, Cohesion: 10}
	near(t, "Craig, peak", craig.FactorOfSafety(level(5, 9.8)), 1.66, 0.5e-2)
	near(t, "Craig, peak in full", craig.FactorOfSafety(level(5, 9.8)), 1.66197, 0.5e-5)
	residual := slope.Slope{Angle: 12, Depth: 5, UnitWeight: 20, Friction: 18}
	near(t, "Craig, residual", residual.FactorOfSafety(level(5, 9.8)), 0.78, 0.5e-2)
	near(t, "Craig, residual in full", residual.FactorOfSafety(level(5, 9.8)), 0.77960, 0.5e-5)
	near(t, "Craig, residual without water", residual.FactorOfSafety(0), 1.5286, 0.5e-4)
	near(t, "Craig, residual, level at 1 over depth", residual.Level(1)/level(5, 9.8), 0.70575, 0.5e-5)
	cos := math.Cos(12 * math.Pi / 180)
	near(t, "Craig, normal stress", residual.Uplift()*9.81*cos*cos, 95.7, 0.5e-1)
	near(t, "Craig, normal stress in full", residual.Uplift()*9.81*cos*cos, 95.677, 0.5e-3)

	// Plain arithmetic: cohesionless, friction 30 degrees, slope 20 degrees, unit weight 20, that of water 10.
	for _, depth := range []float64{1, 7, 40} {
		s := slope.Slope{Angle: 20, Depth: depth, UnitWeight: 20, Friction: 30}
		for _, tt := range []struct{ share, fs float64 }{{0, 1.58626}, {0.5, 1.18969}, {1, 0.79313}} {
			near(t, "FS", s.FactorOfSafety(level(tt.share*depth, 10)), tt.fs, 0.5e-5)
		}
		near(t, "level at 1 over depth", s.Level(1)/level(depth, 10), 0.73917, 0.5e-5)
	}
}

// TestTraps tells the right formula from those that are often taken for it, in the example of Craig.
func TestTraps(t *testing.T) {
	s := slope.Slope{Angle: 12, Depth: 5, UnitWeight: 20, Friction: 18}
	rad := math.Pi / 180
	cos, tan := math.Cos(12*rad), math.Tan(18*rad)
	normal, shear := 100*cos*cos, 100*math.Sin(12*rad)*cos
	near(t, "parallel flow", s.FactorOfSafety(3), (normal-9.81*3*cos*cos)*tan/shear, 1e-14)
	standing := s
	standing.Standing = true
	near(t, "standing water", standing.FactorOfSafety(3), (normal-9.81*3)*tan/shear, 1e-14)

	// Water that flows parallel to the slope presses less than the same height of standing water, by cos^2 of 12 degrees.
	near(t, "levels of equal FS", standing.Level(1), s.Level(1)*cos*cos, 1e-14)
	near(t, "uplift, parallel flow", s.Uplift(), 100/9.81, 1e-14)
	near(t, "uplift, standing water", standing.Uplift(), 100/9.81*cos*cos, 1e-14)

	// A height taken normal to the slope is cos times the vertical one: 2 % less here, and a level too low by as much.
	if normal := s.Level(1) * cos; math.Abs(s.FactorOfSafety(normal)-1) < 5e-3 {
		t.Errorf("a height normal to the slope, %v m, is too near to be told apart", normal)
	}

	// With the unit weight of water at 10 instead of 9.81 the third digit changes.
	if math.Abs(s.FactorOfSafety(level(5, 10))-s.FactorOfSafety(5)) < 5e-3 {
		t.Error("the unit weight of water does not show")
	}
}

// TestOutOfReach: factors of safety that no water level gives lie where the documentation says.
func TestOutOfReach(t *testing.T) {
	s := slope.Slope{Angle: 20, Depth: 8, UnitWeight: 19, Friction: 25, Cohesion: 5}
	dry := s.FactorOfSafety(0)
	near(t, "level of the drained slope", s.Level(dry), 0, 1e-14)
	if h := s.Level(dry + 0.01); !(h < 0) {
		t.Errorf("more than the drained slope gives: h = %v, want below 0", h)
	}
	cohesion := 5 / (19 * 8 * math.Sin(20*math.Pi/180) * math.Cos(20*math.Pi/180))
	near(t, "FS at uplift", s.FactorOfSafety(s.Uplift()), cohesion, 1e-14)
	if h := s.Level(cohesion - 0.01); !(h > s.Uplift()) {
		t.Errorf("less than the cohesion gives: h = %v, want above %v", h, s.Uplift())
	}
}

// draw returns a slope of any sort.
func draw(t *rapid.T) slope.Slope {
	return slope.Slope{
		Angle:      rapid.Float64Range(0.5, 80).Draw(t, "angle"),
		Depth:      rapid.Float64Range(0.1, 200).Draw(t, "depth"),
		UnitWeight: rapid.Float64Range(12, 26).Draw(t, "unit weight"),
		Friction:   rapid.Float64Range(1, 60).Draw(t, "friction"),
		Cohesion:   rapid.Float64Range(0, 200).Draw(t, "cohesion"),
		Standing:   rapid.Bool().Draw(t, "standing"),
	}
}

// TestInverse: level and factor of safety undo each other to 1e-12, relative to the terms that they are the differences
// of.
func TestInverse(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := draw(t)
		h := rapid.Float64Range(0, 1).Draw(t, "share") * s.Uplift()
		fs := s.FactorOfSafety(h)
		dry := s.FactorOfSafety(0)
		if back := s.Level(fs); math.Abs(back-h) > 1e-12*s.Uplift()*dry/(dry-s.FactorOfSafety(s.Uplift())) {
			t.Errorf("the level of FS %v is %v, want %v", fs, back, h)
		}
		if again := s.FactorOfSafety(s.Level(fs)); math.Abs(again-fs) > 1e-12*dry {
			t.Errorf("FS at the level of %v is %v", fs, again)
		}
	})
}

// TestStraightFall: FS falls with h, and in a straight line.
func TestStraightFall(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := draw(t)
		a := rapid.Float64Range(0, 0.99).Draw(t, "a") * s.Uplift()
		b := a + rapid.Float64Range(1e-6, 1).Draw(t, "b")*(s.Uplift()-a)
		fa, fb := s.FactorOfSafety(a), s.FactorOfSafety(b)
		if !(fb < fa) {
			t.Errorf("FS is %v at %v m and %v at %v m", fa, a, fb, b)
		}
		if middle := s.FactorOfSafety((a + b) / 2); math.Abs(middle-(fa+fb)/2) > 1e-13*s.FactorOfSafety(0) {
			t.Errorf("FS half way is %v, want %v", middle, (fa+fb)/2)
		}
	})
}
