package cascade_test

import (
	"math"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade"
)

// curved is a cover with one drain that has a square, and a deep store that it feeds.
func curved(rate, square, invert, percolation float64) cascade.Model {
	return cascade.Model{
		Cover:       cascade.Store{Capacity: none, Drains: []cascade.Outlet{{Rate: rate, Square: square, Invert: invert, Ceiling: none}}},
		Percolation: cascade.Outlet{Rate: percolation, Ceiling: none},
		Deep:        cascade.Store{Capacity: none, Seepage: 0.02},
	}
}

// TestNonlinearReservoir: a store with Q = a*S^2 alone empties as Q = Q0/(1 + sqrt(a*Q0)*t)^2, the recession of an aquifer
// between drains on its floor (J. Boussinesq 1904, Journal de mathematiques pures et appliquees 10, 5-78, from memory); fills as
// sqrt(I/a)*tanh(sqrt(a*I)*t); and under a loss E is drawn down as sqrt(E/a)*tan, from separation of the variables.
func TestNonlinearReservoir(t *testing.T) {
	const a = 0.004
	for _, days := range []float64{1e-3, 0.04, 1, 7, 31, 365, 1e4} {
		s0 := 80.0
		r := newRun(t, curved(0, a, 0, 0), s0, 0)
		step(t, r, 0, days)
		s, _ := r.Storage()
		q0 := a * s0 * s0
		want := q0 / math.Pow(1+math.Sqrt(a*q0)*days, 2)
		near(t, "recession", a*s*s, want, 1e-13*want)
		near(t, "drained", r.Totals().Cover.Drains[0], s0-s0/(1+a*s0*days), 1e-12*s0)

		const input = 3.0
		r = newRun(t, curved(0, a, 0, 0), 0, 0)
		step(t, r, input*days, days)
		s, _ = r.Storage()
		want = math.Sqrt(input/a) * math.Tanh(math.Sqrt(a*input)*days)
		near(t, "filling", s, want, 1e-13*want)
		near(t, "drained while filling", r.Totals().Cover.Drains[0], input*days-want, 1e-12*(input*days+want))
	}

	const loss = 2.0
	w := math.Sqrt(a * loss)
	empty := math.Atan(math.Sqrt(a/loss)*80) / w
	for _, share := range []float64{0.01, 0.3, 0.8, 0.999} {
		r := newRun(t, curved(0, a, 0, 0), 80, 0)
		step(t, r, -loss*empty*share, empty*share)
		s, _ := r.Storage()
		near(t, "drawn down", s, math.Sqrt(loss/a)*math.Tan(w*empty*(1-share)), 1e-12)
	}
	r := newRun(t, curved(0, a, 0, 0), 80, 0)
	step(t, r, -loss*(empty+3), empty+3)
	near(t, "unmet", r.Totals().Cover.Unmet, loss*3, 1e-12)
	near(t, "drained", r.Totals().Cover.Drains[0], 80-loss*empty, 1e-13*80)
}

// TestRiccati compares storages and what has passed with the closed solution and its integral, with a linear part, from both
// sides of the upper root and with evaporation:
//
//	u(t) = [u0*(1 - B*T/2) + A*T]/[1 + (B/2 + C*u0)*T]
//	integral of u = {ln[cosh(w*t)*(1 + (B/2 + C*u0)*T)] - B*t/2}/C
func TestRiccati(t *testing.T) {
	const seepage, rate, square, invert = 0.05, 0.03, 0.002, 25.0
	for _, input := range []float64{20, 6, 1.25, 0.9, 0, -4} {
		for _, u0 := range []float64{0.01, 10, 60, 700} {
			a, b, c := input-seepage*invert, seepage+rate, square
			w2 := b*b/4 + a*c
			w := math.Sqrt(math.Abs(w2))
			for _, days := range []float64{1e-3, 0.5, 1, 4, 20, 90} {
				tt, cosh := days, 1.0
				switch {
				case w2 > 0:
					tt, cosh = math.Tanh(w*days)/w, math.Cosh(w*days)
				case w2 < 0:
					if w*days >= math.Pi/2 {
						continue
					}
					tt, cosh = math.Tan(w*days)/w, math.Cos(w*days)
				}
				want := (u0*(1-b*tt/2) + a*tt) / (1 + (b/2+c*u0)*tt)
				if want < 0 {
					continue
				}
				volume := (math.Log(cosh*(1+(b/2+c*u0)*tt)) - b*days/2) / c
				m := curved(rate, square, invert, 0)
				m.Cover.Seepage = seepage
				r := newRun(t, m, invert+u0, 0)
				step(t, r, input*days, days)
				s, _ := r.Storage()
				near(t, "storage", s, invert+want, 1e-12*(invert+u0+want))
				near(t, "seepage", r.Totals().Cover.Seepage, seepage*(invert*days+volume), 1e-10*(1+seepage*(invert*days+volume)))
			}
		}
	}
}

// TestHooghoudt: the cover rests at the height that Hooghoudt's equation gives for the input, q = (8*Kb*d*h + 4*Ka*h^2)/L^2 with
// h midway between the drains, which is pi^2/8 times the mean height u/n of the store (S. B. Hooghoudt 1940; half a sine wave as
// the shape of the water table: L. D. Kraijenhoff van de Leur 1958, De Ingenieur 70, B87-B94; both from memory). A long step
// from anywhere leads there.
func TestHooghoudt(t *testing.T) {
	check(t, func(t *rapid.T) {
		above, below := rapid.Float64Range(0.01, 2).Draw(t, "K above"), rapid.Float64Range(0.01, 2).Draw(t, "K below") // m/d
		depth := rapid.SampledFrom([]float64{0, 0.5, 2, 5}).Draw(t, "equivalent depth")                                // m
		spacing, n := rapid.Float64Range(5, 60).Draw(t, "spacing"), rapid.Float64Range(0.01, 0.2).Draw(t, "n")
		q := rapid.Float64Range(0.01, 30).Draw(t, "q") // mm/d

		shape := math.Pi * math.Pi / 8 / (1000 * n) // h = shape*u
		m := curved(8000*below*depth*shape/(spacing*spacing), 4000*above*shape*shape/(spacing*spacing), 100, 0)
		// h = (-4*Kb*d + sqrt((4*Kb*d)^2 + 4*Ka*q*L^2))/(4*Ka)
		p, x := 4*below*depth, q/1000*spacing*spacing
		h := x / (p + math.Sqrt(p*p+4*above*x))
		want := 100 + h/shape
		got, _, err := m.Steady(q)
		if err != nil || math.Abs(got-want) > 1e-13*want {
			t.Fatalf("rests at %v mm, want %v; %v", got, want, err)
		}
		for _, start := range []float64{0, 100, 100 + 3*(want-100)} {
			r := mustRun(t, m, start, 0)
			for range 20 {
				if err := r.Step(q*1e4, 1e4); err != nil {
					t.Fatal(err)
				}
			}
			if s, _ := r.Storage(); math.Abs(s-want) > 1e-12*want {
				t.Fatalf("from %v mm comes to %v mm, want %v", start, s, want)
			}
		}
	})
}

// TestGoesToSteady: a long time of constant input leads to the steady state, in both stores.
func TestGoesToSteady(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, 100)
		m.Cover.Seepage, m.Deep.Seepage = m.Cover.Seepage+0.01, m.Deep.Seepage+0.01 // so that there is one state of rest
		input := rapid.Float64Range(-5, 30).Draw(t, "input")
		want1, want2, err := m.Steady(input)
		if err != nil {
			t.Fatal(err)
		}
		cover, deep := drawStart(t, m)
		r := mustRun(t, m, cover, deep)
		for range 4 {
			if err := r.Step(input*5000, 5000); err != nil {
				t.Fatal(err)
			}
		}
		if s1, s2 := r.Storage(); math.Abs(s1-want1) > tight(want1) || math.Abs(s2-want2) > tight(want2) {
			t.Fatalf("comes to %v, %v, the steady state is %v, %v", s1, s2, want1, want2)
		}
	})
}

// TestSquareGoesToZero: with a square of 1e-18 everything is as with none; and the difference falls off in proportion to it.
func TestSquareGoesToZero(t *testing.T) {
	check(t, func(t *rapid.T) {
		linear := drawModel(t, rapid.SampledFrom([]float64{1, 100, 1e6}).Draw(t, "fastest"))
		for i := range linear.Cover.Drains {
			linear.Cover.Drains[i].Square = 0
		}
		linear.Cover.Drains = append(linear.Cover.Drains, cascade.Outlet{
			Rate: 0.1, Invert: rapid.Float64Range(0, 100).Draw(t, "invert"), Ceiling: none,
		})
		squared := linear
		squared.Cover.Drains = append([]cascade.Outlet(nil), linear.Cover.Drains...)
		square := rapid.SampledFrom([]float64{1e-18, 1e-14, 1e-11, 1e-8}).Draw(t, "square")
		squared.Cover.Drains[len(squared.Cover.Drains)-1].Square = square

		cover, deep := drawStart(t, linear)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		a, b := mustRun(t, linear, cover, deep), mustRun(t, squared, cover, deep)
		for k, depth := range drawDepths(t, 8, days) {
			if err := a.Step(depth, days); err != nil {
				t.Fatal(err)
			}
			if err := b.Step(depth, days); err != nil {
				t.Fatal(err)
			}
			a1, a2 := a.Storage()
			b1, b2 := b.Storage()
			// What the square has taken cannot be more than it would take from the highest storage all the time.
			most := 250 + 200*31*8.0
			taken := square * most * most * days * float64(k+1)
			if !(math.Abs(a1-b1) <= 1e-12*max(a1, 1)+taken && math.Abs(a2-b2) <= 1e-12*max(a2, 1)+taken) {
				t.Fatalf("%v, %v without and %v, %v with a square of %v", a1, a2, b1, b2, square)
			}
		}
	})
}

// TestDeepStoreTurnsOnTheCurve: a deep drain whose invert is passed and left again within one long step while the drain with a square
// runs has carried what it carries in short steps.
func TestDeepStoreTurnsOnTheCurve(t *testing.T) {
	m := curved(0.01, 0.001, 0, 0.2)
	m.Deep.Drains = []cascade.Outlet{{Rate: 0.3, Invert: 20, Ceiling: none}}
	whole, fine := newRun(t, m, 60, 0), newRun(t, m, 60, 0)
	step(t, whole, 0, 60)
	for range 6000 {
		step(t, fine, 0, 0.01)
	}
	s1, s2 := whole.Storage()
	w1, w2 := fine.Storage()
	near(t, "cover", s1, w1, tight(w1))
	near(t, "deep store", s2, w2, tight(w2))
	if d := whole.Totals().Deep.Drains[0]; !(s2 < 20 && d > 1) {
		t.Errorf("ends at %v and %v mm, drained %v mm", s1, s2, d)
	}
	near(t, "drained", whole.Totals().Deep.Drains[0], fine.Totals().Deep.Drains[0], 1e-10)
}

// TestDeepStoreTurnsInAShortStep: the same within one day, which looks from its two ends as if nothing had happened.
func TestDeepStoreTurnsInAShortStep(t *testing.T) {
	m := curved(0.01, 0.001, 0, 0.2)
	m.Deep.Drains = []cascade.Outlet{{Rate: 0.3, Invert: 190.01, Ceiling: none}}
	whole, fine := newRun(t, m, 20, 190), newRun(t, m, 20, 190)
	step(t, whole, 0, 1)
	for range 100 {
		step(t, fine, 0, 0.01)
	}
	_, s2 := whole.Storage()
	_, w2 := fine.Storage()
	near(t, "deep store", s2, w2, tight(w2))
	d := whole.Totals().Deep.Drains[0]
	if !(s2 < 190 && d > 1e-4) {
		t.Errorf("ends at %v mm, drained %v mm", s2, d)
	}
	near(t, "drained", d, fine.Totals().Deep.Drains[0], 1e-12)
}

// TestStiffSquares: the greatest rates and the longest steps come to an end at once, in finite storages, with a true balance.
func TestStiffSquares(t *testing.T) {
	for _, square := range []float64{1e-18, 1e-6, 1, 1e6} {
		for _, rate := range []float64{0, 1e-6, 1, 1e6} {
			for _, deep := range []float64{1e-6, 0.02, 1e6} {
				for _, start := range []float64{0, 1e-6, 50, 1e9} {
					for _, days := range []float64{1.0 / 1440, 1, 31, 1e4} {
						for _, input := range []float64{-1e3, -1e-6, 0, 1e-9, 5, 1e3} {
							m := curved(rate, square, 20, 1e-3)
							m.Cover.Capacity, m.Deep.Capacity = 1e9, 1e9
							m.Deep.Seepage = deep
							r := newRun(t, m, start, start)
							for range 2 {
								step(t, r, input*days, days)
							}
							s1, s2 := r.Storage()
							sums := r.Totals()
							in := max(start, 1) + math.Abs(input)*2*days
							if !(s1 >= 0 && s1 <= 1e9 && s2 >= 0 && s2 <= 1e9 && math.Abs(sums.Cover.Error()) <= 1e-9*in && math.Abs(sums.Deep.Error()) <= 1e-9*in) {
								t.Fatalf("%+v from %v mm, %v mm/d for %v d: %v, %v mm, balance %v, %v", m, start, input, days, s1, s2, sums.Cover.Error(), sums.Deep.Error())
							}
						}
					}
				}
			}
		}
	}
}

// TestEdgeNextToRest: on its way to a state of rest the cover passes an invert that is no farther from there than rounding. It
// was once put to rest beyond that edge, still in the segment below it.
func TestEdgeNextToRest(t *testing.T) {
	m := cascade.Model{
		Cover: cascade.Store{Capacity: 1, Seepage: 0.1, Drains: []cascade.Outlet{
			{Square: 0.1, Ceiling: none}, {Rate: 0.3162277660168379, Ceiling: 1},
		}},
		Percolation: cascade.Outlet{Rate: 0.1, Invert: 8.470329472543003e-22, Ceiling: 1},
		Deep:        cascade.Store{Capacity: 1, Seepage: 0.1},
	}
	for _, depth := range []float64{1e-18, 1.734723475976807e-18, 1e-17, 1e-12} {
		const days = 1.0 / 1440
		whole, halves := newRun(t, m, 0, 1), newRun(t, m, 0, 1)
		step(t, whole, depth, days)
		step(t, halves, depth/2, days/2)
		step(t, halves, depth/2, days/2)
		s1, s2 := whole.Storage()
		w1, w2 := halves.Storage()
		near(t, "cover", s1, w1, 1e-17+1e-10*w1)
		near(t, "deep store", s2, w2, tight(w2))
	}
}

// TestCoverEmptiesBesideDeepStore: the deep store has no outlet, so that it rises ever more slowly until the cover is empty and
// comes to rest at that very moment, for which the search for its turning point has no sign to go by. It is full before that.
func TestCoverEmptiesBesideDeepStore(t *testing.T) {
	inf := math.Inf(1)
	m := cascade.Model{
		Cover:       cascade.Store{Capacity: inf, Seepage: 100, Drains: []cascade.Outlet{{Square: math.Pow(10, -3.75), Ceiling: inf}}},
		Percolation: cascade.Outlet{Rate: math.Pow(10, -0.3838005065917969), Ceiling: inf},
		Deep:        cascade.Store{Capacity: 1.49298095703125},
	}
	r, err := cascade.NewRun(m, 0.10762005250554706, 1.4927424814154757)
	if err != nil {
		t.Fatal(err)
	}
	if err := r.Step(-0.14664266720580843, 1.0/24); err != nil {
		t.Fatal(err)
	}
	sums := r.Totals()
	if e := sums.Deep.Error(); math.Abs(e) > 1e-15 || !(sums.Deep.Refused > 1e-6) {
		t.Errorf("the balance is off by %v mm, refused %v", e, sums.Deep.Refused)
	}
}
