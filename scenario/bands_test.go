package scenario

import (
	"math"
	"slices"
	"testing"
)

// TestSafetyBands works the levels out by hand: FS = [c + (w·z·cos²b - u)·tan f]/(w·z·sin b·cos b), for h.
func TestSafetyBands(t *testing.T) {
	for _, flow := range []string{"parallel", "standing"} {
		s := parseBase(t, `
-study: Test bank
+study: Test bank
+slope: {angle: 11 deg, slip_depth: 12 m, unit_weight: 19.5 kN/m3, friction: 13.8 deg, cohesion: 1 kPa, flow: `[1:]+flow+`}
-  - {name: watch, level: 3.6 m}
-  - {name: onset, level: 4.2 m, until: 3.9 m}
+  - {name: watch, factor_of_safety: 1.1}
+  - {name: onset, factor_of_safety: 1.05, until: 1.08}
`)
		const rad = math.Pi / 180
		sin, cos, tan := math.Sin(11*rad), math.Cos(11*rad), math.Tan(13.8*rad)
		level := func(fs float64) float64 {
			u := 19.5*12*cos*cos - (fs*19.5*12*sin*cos-1)/tan
			h := u / 9.81
			if flow == "parallel" {
				h /= cos * cos
			}
			return 4 + 9 - 12 + h
		}
		for i, want := range [][2]float64{{level(1.1), level(1.1)}, {level(1.05), level(1.08)}} {
			if b := s.Bands[i]; math.Abs(b.Level-want[0]) > 2e-9 || math.Abs(b.Until-want[1]) > 2e-9 {
				t.Errorf("%s, %s: level %v until %v, want %v", flow, b.Name, b.Level, b.Until, want)
			}
		}
		if i := slices.IndexFunc(s.Understood, func(e Entry) bool { return e.Key == "bands[1].until" }); i < 0 || s.Understood[i].Value != "1.08" {
			t.Errorf("until is understood as %+v", s.Understood)
		}
		if s.Bands[1].Safety != 1.05 || s.Bands[1].GivenAs != "factor_of_safety" {
			t.Errorf("given as %s %v", s.Bands[1].GivenAs, s.Bands[1].Safety)
		}
	}
}
