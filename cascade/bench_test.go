package cascade_test

import (
	"math/rand/v2"
	"testing"

	"quietslope/cascade"
)

// calm is a cascade without any breakpoint but zero, and daily rain: no event ever.
func calm(n int) (cascade.Model, []float64) {
	m := series(0.2, 0.02)
	m.Cover.Seepage, m.Lateral = 0.05, 0.1
	rng := rand.New(rand.NewPCG(3, 3))
	depths := make([]float64, n)
	for i := range depths {
		if rng.IntN(3) == 0 {
			depths[i] = rng.ExpFloat64() * 8
		}
	}
	return m, depths
}

// BenchmarkReplay gives the time of a step: on the fast path; in a record that passes drains, ceilings and capacities in
// many of its steps; with an event in every step; and with a drain that has a square, on its fast path by days and by hours,
// and in the record with many events.
func BenchmarkReplay(b *testing.B) {
	replay := func(name string, m cascade.Model, depths []float64, days float64) (s1, s2 []float64) {
		s1, s2 = make([]float64, len(depths)), make([]float64, len(depths))
		b.Run(name, func(b *testing.B) {
			b.ReportAllocs()
			r := newRun(b, m, 0, 0)
			for b.Loop() {
				if err := r.Replay(depths, days, s1, s2); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(depths)), "ns/step")
		})
		return s1, s2
	}
	run := func(name string, m cascade.Model, depths []float64) (s1, s2 []float64) {
		return replay(name, m, depths, 1)
	}
	// passes fails unless a level is passed in every step.
	passes := func(s []float64, level float64) {
		for i := 1; i < len(s); i++ {
			if (s[i] > level) == (s[i-1] > level) && s[i] != 0 {
				b.Fatalf("step %d does not pass %v mm", i, level)
			}
		}
	}
	m, depths := calm(14610)
	run("events=none", m, depths)

	m, depths = busy()
	run("events=many", m, depths)

	// The cover passes the invert of a drain upwards in every wet step and downwards in every dry one.
	depths = make([]float64, 4000)
	for i := range depths {
		depths[i] = float64(30 * ((i + 1) % 2))
	}
	m = series(0.4, 0.02)
	m.Cover.Drains = []cascade.Outlet{{Rate: 0.4, Invert: 32, Ceiling: none}}
	s1, _ := run("events=every", m, depths)
	passes(s1[100:], 32)

	// The same for the deep store, which needs the root of an equation.
	m = series(4, 0.5)
	m.Deep.Drains = []cascade.Outlet{{Rate: 0.4, Invert: 29, Ceiling: none}}
	_, s2 := run("events=every-deep", m, depths)
	passes(s2[100:], 29)

	m, depths = calm(14610)
	m.Cover.Drains = []cascade.Outlet{{Rate: 0.05, Square: 0.01, Ceiling: none}}
	run("law=quadratic,step=day", m, depths)
	hourly := make([]float64, 24*len(depths))
	for i, d := range depths {
		hourly[24*i+i%24] = d / 2
		hourly[24*i+(i+5)%24] += d / 2
	}
	replay("law=quadratic,step=hour", m, hourly, 1.0/24)

	m, depths = busy()
	m.Cover.Drains[0].Square = 0.05
	run("law=quadratic,events=many", m, depths)
}
