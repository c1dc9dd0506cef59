package cascade_test

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/mat"
	"pgregory.net/rapid"

	"quietslope/cascade"
)

// check tries a property on 20 times as many cases as rapid does by itself: they are quick, and the faults of an engine
// of this kind show in one case of a thousand.
func check(t *testing.T, property func(*rapid.T)) {
	t.Helper()
	for range 20 {
		rapid.Check(t, property)
	}
}

// drawModel draws a model in which every kind of outlet, breakpoint and capacity comes up. Rates go from 0 to most. Half of
// the models have a drain with a square.
func drawModel(t *rapid.T, most float64) cascade.Model {
	rate := func(name string) float64 {
		if rapid.IntRange(0, 9).Draw(t, name+" zero") == 0 {
			return 0
		}
		return math.Pow(10, rapid.Float64Range(-5, math.Log10(most)).Draw(t, name))
	}
	maybe := func(name string, lo, hi float64) float64 {
		if rapid.Bool().Draw(t, name+" none") {
			return none
		}
		return rapid.Float64Range(lo, hi).Draw(t, name)
	}
	store := func(name string) cascade.Store {
		s := cascade.Store{Capacity: maybe(name+" capacity", 1, 300), Seepage: rate(name + " seepage")}
		for i := range rapid.IntRange(0, 3).Draw(t, name+" drains") {
			n := fmt.Sprintf("%s drain %d", name, i)
			s.Drains = append(s.Drains, cascade.Outlet{
				Rate: rate(n), Invert: float64(rapid.IntRange(0, 40).Draw(t, n+" invert")) * 5, Ceiling: maybe(n+" ceiling", 0, 30),
			})
		}
		return s
	}
	m := cascade.Model{Cover: store("cover"), Deep: store("deep")}
	if rapid.Bool().Draw(t, "has a square") {
		d := cascade.Outlet{
			Square: math.Pow(10, rapid.Float64Range(-6, math.Log10(most)).Draw(t, "square")), Ceiling: none,
			Rate: rate("drain with a square"), Invert: float64(rapid.IntRange(0, 40).Draw(t, "invert of the square")) * 5,
		}
		m.Cover.Drains = slices.Insert(m.Cover.Drains, rapid.IntRange(0, len(m.Cover.Drains)).Draw(t, "place of the square"), d)
	}
	m.Percolation = cascade.Outlet{Rate: rate("percolation"), Ceiling: maybe("percolation ceiling", 0, 20)}
	if rapid.Bool().Draw(t, "percolation has an invert") {
		m.Percolation.Invert = rapid.Float64Range(0, 50).Draw(t, "percolation invert")
	}
	if rapid.Bool().Draw(t, "has lateral") {
		m.Lateral = rapid.Float64Range(0, 5).Draw(t, "lateral")
	}
	if m.Check() != nil {
		m.Cover.Seepage, m.Deep.Seepage = 0.01, 0.01
	}
	return m
}

// drawStart draws storages for a model, often at an edge.
func drawStart(t *rapid.T, m cascade.Model) (cover, deep float64) {
	one := func(name string, s cascade.Store) float64 {
		at := []float64{0, min(s.Capacity, 200)}
		for _, d := range s.Drains {
			at = append(at, d.Invert)
			if d.Rate > 0 {
				at = append(at, d.Invert+d.Ceiling/d.Rate)
			}
		}
		if rapid.Bool().Draw(t, name+" at an edge") {
			return min(rapid.SampledFrom(at).Draw(t, name), s.Capacity, 1000)
		}
		return rapid.Float64Range(0, min(s.Capacity, 250)).Draw(t, name)
	}
	return one("start of cover", m.Cover), one("start of deep store", m.Deep)
}

// drawDepths draws net input, mm, wet, dry and evaporating.
func drawDepths(t *rapid.T, n int, days float64) []float64 {
	depths := make([]float64, n)
	for i := range depths {
		r := 0.0
		switch rapid.IntRange(0, 3).Draw(t, "weather") {
		case 1:
			r = rapid.Float64Range(-10, 0).Draw(t, "dry")
		case 2:
			r = rapid.Float64Range(0, 10).Draw(t, "wet")
		case 3:
			r = rapid.Float64Range(0, 200).Draw(t, "storm")
		}
		depths[i] = r * days
	}
	return depths
}

var stepLengths = []float64{1.0 / 1440, 1.0 / 24, 0.25, 1, 7, 31}

// tight is the tolerance for storages that should be the same: 1e-10 of the storage, or of 1 mm if it is less.
func tight(s float64) float64 { return 1e-10 * max(s, 1) }

// TestSplit: one step with constant input is any split of it into shorter ones.
func TestSplit(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, rapid.SampledFrom([]float64{1, 100, 1e6}).Draw(t, "fastest"))
		cover, deep := drawStart(t, m)
		whole, split := mustRun(t, m, cover, deep), mustRun(t, m, cover, deep)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		for _, depth := range drawDepths(t, 6, days) {
			if err := whole.Step(depth, days); err != nil {
				t.Fatal(err)
			}
			parts := rapid.SliceOfN(rapid.Float64Range(0.001, 1), 2, 7).Draw(t, "parts")
			for _, p := range parts {
				share := p / total(parts)
				if err := split.Step(depth*share, days*share); err != nil {
					t.Fatal(err)
				}
			}
			a1, a2 := whole.Storage()
			b1, b2 := split.Storage()
			if !(math.Abs(a1-b1) <= tight(a1) && math.Abs(a2-b2) <= tight(a2)) {
				t.Fatalf("in one step %v, %v; in %d steps %v, %v", a1, a2, len(parts), b1, b2)
			}
		}
		sameTotals(t, whole.Totals(), split.Totals())
	})
}

// sameTotals compares the fluxes too, to 1e-9 of the water turned over.
func sameTotals(t *rapid.T, a, b cascade.Totals) {
	list := func(s cascade.Totals) []float64 {
		v := []float64{
			s.Cover.In, s.Cover.Seepage, s.Cover.Percolation, s.Cover.Overflow, s.Cover.Unmet, s.Cover.Change,
			s.Deep.In, s.Deep.Lateral, s.Deep.Seepage, s.Deep.Refused, s.Deep.Change,
		}
		return append(append(v, s.Cover.Drains...), s.Deep.Drains...)
	}
	x, y := list(a), list(b)
	scale := 1.0
	for _, v := range x {
		scale = max(scale, math.Abs(v))
	}
	for i := range x {
		if !(math.Abs(x[i]-y[i]) <= 1e-9*scale) {
			t.Fatalf("totals differ:\n%+v\n%+v", a, b)
		}
	}
}

func mustRun(t *rapid.T, m cascade.Model, cover, deep float64) *cascade.Run {
	r, err := cascade.NewRun(m, cover, deep)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// TestMatrixExponential compares with gonum's mat.Dense.Exp of the same linear system while no breakpoint is crossed,
// with drains that run all the time.
func TestMatrixExponential(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 1))
	rate := func() float64 { return math.Pow(10, rng.Float64()*4-3) } // 0.001 to 10
	compared := 0
	for range 400 {
		m := cascade.Model{
			Cover:       cascade.Store{Capacity: none, Seepage: rate(), Drains: []cascade.Outlet{{Rate: rate(), Invert: 20, Ceiling: none}}},
			Percolation: cascade.Outlet{Rate: rate(), Ceiling: none},
			Deep:        cascade.Store{Capacity: 1e6, Seepage: rate(), Drains: []cascade.Outlet{{Rate: rate(), Invert: 10, Ceiling: none}}},
			Lateral:     rng.Float64() * 5,
		}
		if rng.IntN(4) == 0 { // equal rates
			m.Deep.Drains[0].Rate = m.Cover.Drains[0].Rate
			m.Deep.Seepage = m.Cover.Seepage + m.Percolation.Rate
		}
		c, d := m.Cover.Drains[0], m.Deep.Drains[0]
		s1, s2 := 20+rng.Float64()*100, 10+rng.Float64()*100
		net := rng.Float64() * 50
		days := stepLengths[rng.IntN(len(stepLengths))]

		// The system of S1, S2 and a constant 1.
		system := mat.NewDense(3, 3, []float64{
			-(m.Cover.Seepage + c.Rate + m.Percolation.Rate), 0, net + c.Rate*c.Invert,
			m.Percolation.Rate, -(m.Deep.Seepage + d.Rate), m.Lateral + d.Rate*d.Invert,
			0, 0, 0,
		})
		at := func(days float64) (float64, float64) {
			var a, e mat.Dense
			a.Scale(days, system)
			e.Exp(&a)
			var v mat.VecDense
			v.MulVec(&e, mat.NewVecDense(3, []float64{s1, s2, 1}))
			return v.AtVec(0), v.AtVec(1)
		}
		stays := true
		for k := 1; k <= 16; k++ {
			w1, w2 := at(days * float64(k) / 16)
			stays = stays && w1 > 20 && w2 > 10
		}
		if !stays {
			continue
		}
		compared++
		r := newRun(t, m, s1, s2)
		step(t, r, net*days, days)
		g1, g2 := r.Storage()
		w1, w2 := at(days)
		near(t, "S1", g1, w1, tight(w1))
		near(t, "S2", g2, w2, tight(w2))
	}
	if compared < 100 {
		t.Errorf("only %d systems stayed clear of breakpoints", compared)
	}
}

// TestExtremes: any rate from 0 to 1e6 /d and any step from a minute to 31 days gives finite storages within 0 and
// capacity that do not oscillate: under constant input the cover moves one way, and the deep store turns at most once.
func TestExtremes(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, 1e6)
		cover, deep := drawStart(t, m)
		r := mustRun(t, m, cover, deep)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		for _, depth := range drawDepths(t, 3, days) {
			was1, was2 := r.Storage()
			way1, way2, turns := 0, 0, 0
			for range 40 {
				if err := r.Step(depth, days); err != nil {
					t.Fatal(err)
				}
				now1, now2 := r.Storage()
				if !(now1 >= 0 && now1 <= min(m.Cover.Capacity, 1e9) && now2 >= 0 && now2 <= min(m.Deep.Capacity, 1e9)) {
					t.Fatalf("storages %v, %v", now1, now2)
				}
				if w := way(was1, now1); w != 0 {
					if way1*w < 0 {
						t.Fatalf("the cover turns at %v mm", now1)
					}
					way1 = w
				}
				if w := way(was2, now2); w != 0 {
					if way2*w < 0 {
						turns++
					}
					way2 = w
				}
				was1, was2 = now1, now2
			}
			if turns > 1 {
				t.Fatalf("the deep store turns %d times", turns)
			}
		}
	})
}

// way is the direction from a to b, if it is more than rounding.
func way(a, b float64) int {
	switch d := b - a; {
	case d > 1e-12*max(a, 1):
		return 1
	case d < -1e-12*max(a, 1):
		return -1
	}
	return 0
}

// TestBalance: over long records of random weather, from the integrated fluxes, to 1e-9 of what came in plus the
// largest storage, for each store.
func TestBalance(t *testing.T) {
	var worst float64
	check(t, func(t *rapid.T) {
		m := drawModel(t, rapid.SampledFrom([]float64{1, 100, 1e6}).Draw(t, "fastest"))
		cover, deep := drawStart(t, m)
		r := mustRun(t, m, cover, deep)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		depths := make([]float64, 2000)
		in := 0.0
		for i := range depths {
			switch rng.IntN(4) {
			case 0:
				depths[i] = rng.ExpFloat64() * 15 * days
			case 1:
				depths[i] = -rng.Float64() * 5 * days
			}
			in += max(depths[i], 0)
		}
		s1, s2 := make([]float64, len(depths)), make([]float64, len(depths))
		if err := r.Replay(depths, days, s1, s2); err != nil {
			t.Fatal(err)
		}
		top1, top2 := cover, deep
		for i := range s1 {
			top1, top2 = max(top1, s1[i]), max(top2, s2[i])
		}
		sums := r.Totals()
		e1 := math.Abs(sums.Cover.Error()) / (in + top1)
		e2 := math.Abs(sums.Deep.Error()) / (sums.Deep.In + sums.Deep.Lateral + top2)
		if e1+e2 < 1 { // not NaN, which is nothing over nothing
			worst = max(worst, e1, e2)
		}
		if !(e1 <= 1e-9 || in+top1 == 0) || !(e2 <= 1e-9 || sums.Deep.In+sums.Deep.Lateral+top2 == 0) {
			t.Fatalf("errors of the balance %v and %v mm in %+v", sums.Cover.Error(), sums.Deep.Error(), sums)
		}
		for _, v := range append(append([]float64{
			sums.Cover.Seepage, sums.Cover.Percolation, sums.Cover.Overflow, sums.Cover.Unmet,
			sums.Deep.Seepage, sums.Deep.Refused,
		}, sums.Cover.Drains...), sums.Deep.Drains...) {
			if !(v >= -1e-12*(in+1)) {
				t.Fatalf("negative flux in %+v", sums)
			}
		}
		near := math.Abs(sums.Days - days*float64(len(depths)))
		if near > 1e-9*sums.Days {
			t.Fatalf("%v days", sums.Days)
		}
	})
	t.Logf("largest error of a balance %.2g", worst)
}

// TestMoreDrainageNeverRaises: another drain, a faster or lower one or one with a higher ceiling never raises a storage at the
// end of any step. Neither does less input.
func TestMoreDrainageNeverRaises(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, rapid.SampledFrom([]float64{1, 100}).Draw(t, "fastest"))
		cover, deep := drawStart(t, m)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		depths := drawDepths(t, 12, days)
		less := append([]float64(nil), depths...)

		n := m
		n.Cover.Drains = append([]cascade.Outlet(nil), m.Cover.Drains...)
		n.Deep.Drains = append([]cascade.Outlet(nil), m.Deep.Drains...)
		s := &n.Cover
		if rapid.Bool().Draw(t, "in the deep store") {
			s = &n.Deep
		}
		kind := rapid.IntRange(0, 6).Draw(t, "change")
		if kind == 6 {
			n.Cover.Drains, kind = moreSquare(t, m), -1
		}
		if kind > 1 && len(s.Drains) == 0 {
			kind = 0
		}
		switch kind {
		case 0:
			s.Drains = append(s.Drains, cascade.Outlet{
				Rate:   rapid.Float64Range(0, 10).Draw(t, "rate of a new drain"),
				Invert: rapid.Float64Range(0, 100).Draw(t, "invert of a new drain"), Ceiling: none,
			})
		case 1:
			for i := range less {
				less[i] -= rapid.Float64Range(0, 5).Draw(t, "less") * days
			}
		case 2:
			s.Drains[0].Rate *= 2
		case 3:
			s.Drains[0].Invert /= 2
		case 4:
			s.Drains[0].Ceiling *= 2
		case 5:
			s.Seepage *= 2
		}
		a, b := mustRun(t, m, cover, deep), mustRun(t, n, cover, deep)
		for i := range depths {
			if err := a.Step(depths[i], days); err != nil {
				t.Fatal(err)
			}
			if err := b.Step(less[i], days); err != nil {
				t.Fatal(err)
			}
			a1, a2 := a.Storage()
			b1, b2 := b.Storage()
			if b1 > a1+tight(a1) || b2 > a2+tight(a2) {
				t.Fatalf("step %d: %v, %v before, %v, %v after the change", i, a1, a2, b1, b2)
			}
		}
	})
}

// moreSquare returns the drains of the cover with a greater square, or with a square if none had one.
func moreSquare(t *rapid.T, m cascade.Model) []cascade.Outlet {
	more := math.Pow(10, rapid.Float64Range(-6, 2).Draw(t, "more of a square"))
	drains := slices.Clone(m.Cover.Drains)
	for i := range drains {
		if drains[i].Square > 0 {
			drains[i].Square += more
			return drains
		}
	}
	return append(drains, cascade.Outlet{Square: more, Invert: rapid.Float64Range(0, 100).Draw(t, "invert of a square"), Ceiling: none})
}

// TestTimeScales: with rates and fluxes c times as great and steps 1/c as long everything is the same.
func TestTimeScales(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, 100)
		cover, deep := drawStart(t, m)
		days := rapid.SampledFrom(stepLengths).Draw(t, "days")
		c := rapid.Float64Range(0.1, 10).Draw(t, "factor")
		fast := func(o cascade.Outlet) cascade.Outlet {
			return cascade.Outlet{Rate: o.Rate * c, Square: o.Square * c, Invert: o.Invert, Ceiling: o.Ceiling * c}
		}
		faster := func(s cascade.Store) cascade.Store {
			f := cascade.Store{Capacity: s.Capacity, Seepage: s.Seepage * c}
			for _, d := range s.Drains {
				f.Drains = append(f.Drains, fast(d))
			}
			return f
		}
		n := cascade.Model{Cover: faster(m.Cover), Percolation: fast(m.Percolation), Deep: faster(m.Deep), Lateral: m.Lateral * c}
		a, b := mustRun(t, m, cover, deep), mustRun(t, n, cover, deep)
		for _, depth := range drawDepths(t, 10, days) {
			if err := a.Step(depth, days); err != nil {
				t.Fatal(err)
			}
			if err := b.Step(depth, days/c); err != nil {
				t.Fatal(err)
			}
			a1, a2 := a.Storage()
			b1, b2 := b.Storage()
			if math.Abs(a1-b1) > tight(a1) || math.Abs(a2-b2) > tight(a2) {
				t.Fatalf("%v, %v and, with time scaled, %v, %v", a1, a2, b1, b2)
			}
		}
	})
}

// TestReplayIsSteps: Replay gives the same bits as calling Step for each depth, wherever it is cut.
func TestReplayIsSteps(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, 10)
		cover, deep := drawStart(t, m)
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		depths := make([]float64, 300)
		for i := range depths {
			depths[i] = rng.NormFloat64() * 10
		}
		a, b := mustRun(t, m, cover, deep), mustRun(t, m, cover, deep)
		s1, s2 := make([]float64, len(depths)), make([]float64, len(depths))
		cut := rapid.IntRange(0, len(depths)).Draw(t, "cut")
		if err := a.Replay(depths[:cut], 1, s1[:cut], s2[:cut]); err != nil {
			t.Fatal(err)
		}
		if err := a.Replay(depths[cut:], 1, s1[cut:], s2[cut:]); err != nil {
			t.Fatal(err)
		}
		for i, depth := range depths {
			if err := b.Step(depth, 1); err != nil {
				t.Fatal(err)
			}
			if c, d := b.Storage(); c != s1[i] || d != s2[i] {
				t.Fatalf("step %d: %v, %v by Replay, %v, %v by Step", i, s1[i], s2[i], c, d)
			}
		}
		sameTotals(t, a.Totals(), b.Totals())
	})
}

// TestHeld checks held stores against sums that can be done by hand.
func TestHeld(t *testing.T) {
	t.Run("full cover", func(t *testing.T) {
		// 10 mm of room at 110 - 0.1*S: full after ln((110 - 9)/(110 - 10))/0.1 d; then 110 - 10 mm/d run over.
		m := cascade.Model{Cover: cascade.Store{Capacity: 100, Seepage: 0.1}, Deep: cascade.Store{Capacity: none, Seepage: 1}}
		r := newRun(t, m, 90, 0)
		step(t, r, 110, 1)
		full := math.Log(101.0/100) / 0.1
		cover, _ := r.Storage()
		near(t, "storage", cover, 100, 0)
		near(t, "overflow", r.Totals().Cover.Overflow, 100*(1-full), 1e-11)
		step(t, r, 10, 1) // what comes in leaves by seepage: stays full, nothing runs over
		cover, _ = r.Storage()
		near(t, "storage", cover, 100, 0)
		near(t, "overflow", r.Totals().Cover.Overflow, 100*(1-full), 1e-11)
		step(t, r, 0, 10)
		cover, _ = r.Storage()
		near(t, "storage", cover, 100*math.Exp(-1), 1e-12)
	})
	t.Run("empty cover", func(t *testing.T) {
		// du/dt = -5 - 0.1 u from 10 mm: empty after ln(1 + 0.1*10/5)/0.1 d.
		m := cascade.Model{Cover: cascade.Store{Capacity: none, Seepage: 0.1}, Deep: cascade.Store{Capacity: none, Seepage: 1}}
		r := newRun(t, m, 10, 0)
		step(t, r, -20, 4)
		dry := math.Log(1.2) / 0.1
		cover, _ := r.Storage()
		near(t, "storage", cover, 0, 0)
		near(t, "unmet", r.Totals().Cover.Unmet, 5*(4-dry), 1e-12)
		step(t, r, 0, 1)
		step(t, r, -3, 1)
		near(t, "unmet", r.Totals().Cover.Unmet, 5*(4-dry)+3, 1e-12)
		step(t, r, 1, 1)
		cover, _ = r.Storage()
		near(t, "storage", cover, (1-math.Exp(-0.1))/0.1, 1e-14)
	})
	t.Run("full deep store lets go within a step", func(t *testing.T) {
		// Percolation 0.5*S1 from 40 mm without rain meets 2 mm/d of seepage at capacity: refused until S1 = 4 mm, after
		// ln(10)/0.5 d; then 4 mm of percolation are left in the cover.
		m := series(0.5, 0.02)
		m.Deep.Capacity = 100
		r := newRun(t, m, 40, 100)
		step(t, r, 0, 31)
		letsGo := math.Log(10) / 0.5
		near(t, "refused", r.Totals().Deep.Refused, 36-2*letsGo, 1e-12)
		rest := 31 - letsGo
		want := 100*math.Exp(-0.02*rest) + 0.5*4*(math.Exp(-0.02*rest)-math.Exp(-0.5*rest))/(0.5-0.02)
		_, deep := r.Storage()
		near(t, "storage", deep, want, 1e-11)
	})
	t.Run("full deep store lets go early in a long step", func(t *testing.T) {
		// As above, but so long a step that nothing of the fall is to be seen at its end: the deep store runs over at
		// first and then follows the input.
		m := series(30, 10)
		m.Cover.Capacity, m.Deep.Capacity = 1, 1
		whole, parts := newRun(t, m, 1, 1), newRun(t, m, 1, 1)
		step(t, whole, 7, 7)
		for range 700 {
			step(t, parts, 0.01, 0.01)
		}
		near(t, "refused", whole.Totals().Deep.Refused, parts.Totals().Deep.Refused, 1e-12)
		if !(whole.Totals().Deep.Refused > 0.1) {
			t.Errorf("refused %v mm", whole.Totals().Deep.Refused)
		}
	})
	t.Run("deep store never filled by what just keeps it full", func(t *testing.T) {
		m := series(0.5, 0.02)
		m.Deep.Capacity = 100
		r := newRun(t, m, 4, 100)
		for range 50 {
			step(t, r, 2, 1)
		}
		_, deep := r.Storage()
		near(t, "storage", deep, 100, 1e-12)
		near(t, "refused", r.Totals().Deep.Refused, 0, 1e-12)
	})
	t.Run("percolation ceiling", func(t *testing.T) {
		m := series(0.5, 0.02)
		m.Percolation.Ceiling = 3
		m.Cover.Capacity = 50
		r := newRun(t, m, 0, 0)
		for range 400 {
			step(t, r, 30, 1)
		}
		cover, deep := r.Storage()
		near(t, "cover", cover, 50, 0)
		near(t, "deep", deep, 150*(1-math.Exp(-0.02*400)), 0.5)
	})
}

// TestThereAndBackInOneStep: a drain whose invert is passed and left again within one long step has carried water.
func TestThereAndBackInOneStep(t *testing.T) {
	m := series(0.2, 0.02)
	m.Deep.Drains = []cascade.Outlet{{Rate: 0.3, Invert: 30, Ceiling: none}}
	r := newRun(t, m, 50, 0)
	step(t, r, 0, 60)
	_, deep := r.Storage()
	drained := r.Totals().Deep.Drains[0]
	if !(deep < 30 && drained > 1) {
		t.Errorf("ends at %v mm, drained %v mm", deep, drained)
	}
	fine := newRun(t, m, 50, 0)
	for range 6000 {
		step(t, fine, 0, 0.01)
	}
	_, want := fine.Storage()
	near(t, "storage", deep, want, tight(want))
	near(t, "drained", drained, fine.Totals().Deep.Drains[0], 1e-10)
}

// TestFastDrainFarUp: an outlet of 1e6 /d with an invert at 5 m of water holds the storage there to the last digits.
func TestFastDrainFarUp(t *testing.T) {
	m := cascade.Model{
		Cover: cascade.Store{Capacity: none, Seepage: 0.01, Drains: []cascade.Outlet{{Rate: 1e6, Invert: 5000, Ceiling: none}}},
		Deep:  cascade.Store{Capacity: none, Seepage: 1},
	}
	for _, days := range stepLengths {
		r := newRun(t, m, 4999, 0)
		for range 60 {
			step(t, r, 80*31, 31)
		}
		before := r.Totals()
		for range 100 {
			step(t, r, 80*days, days)
		}
		// Steady: 80 - 0.01*S = 1e6*u.
		near(t, "drained per day", r.Totals().Sub(before).Cover.Drains[0]/(100*days), 80-50, 1e-6)
		cover, _ := r.Storage()
		near(t, "storage", cover, 5000+30/1e6, 1e-9)
	}
}

func TestSteady(t *testing.T) {
	check(t, func(t *rapid.T) {
		m := drawModel(t, 1e3)
		input := rapid.Float64Range(-5, 30).Draw(t, "input")
		cover, deep, err := m.Steady(input)
		if err != nil {
			return
		}
		r := mustRun(t, m, cover, deep)
		for range 5 {
			if err := r.Step(input*7, 7); err != nil {
				t.Fatal(err)
			}
		}
		c, d := r.Storage()
		if math.Abs(c-cover) > tight(cover) || math.Abs(d-deep) > tight(deep) {
			t.Fatalf("steady state %v, %v moves to %v, %v", cover, deep, c, d)
		}
	})

	limited := series(0.2, 0.02)
	limited.Percolation.Ceiling = 1
	if _, _, err := limited.Steady(2); err == nil || !strings.Contains(err.Error(), "cover has no steady state") {
		t.Errorf("input above all ceilings: %v", err)
	}
	limited.Cover.Capacity = 70
	cover, deep, err := limited.Steady(2)
	if err != nil || cover != 70 || math.Abs(deep-50) > 1e-12 {
		t.Errorf("with a capacity: %v, %v, %v", cover, deep, err)
	}
	if cover, deep, err := limited.Steady(-3); cover != 0 || deep != 0 || err != nil {
		t.Errorf("negative input: %v, %v, %v", cover, deep, err)
	}
	if _, _, err := limited.Steady(math.NaN()); err == nil {
		t.Error("NaN is taken")
	}
}

func TestFlow(t *testing.T) {
	o := cascade.Outlet{Rate: 0.5, Invert: 10, Ceiling: 4}
	for _, tt := range []struct{ s, want float64 }{{0, 0}, {10, 0}, {12, 1}, {18, 4}, {100, 4}} {
		if got := o.Flow(tt.s); got != tt.want {
			t.Errorf("Flow(%v) = %v, want %v", tt.s, got, tt.want)
		}
	}
	o = cascade.Outlet{Rate: 0.5, Square: 0.25, Invert: 10, Ceiling: none}
	for _, tt := range []struct{ s, want float64 }{{0, 0}, {10, 0}, {12, 2}, {18, 20}} {
		if got := o.Flow(tt.s); got != tt.want {
			t.Errorf("Flow(%v) with a square = %v, want %v", tt.s, got, tt.want)
		}
	}
}

func TestCheck(t *testing.T) {
	nan := math.NaN()
	good := func() cascade.Model {
		m := series(0.2, 0.02)
		m.Cover.Drains = []cascade.Outlet{{Rate: 1, Invert: 5, Ceiling: 3}}
		m.Deep.Drains = []cascade.Outlet{{Rate: 1, Invert: 5, Ceiling: 3}}
		return m
	}
	if err := good().Check(); err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		name   string
		change func(m *cascade.Model)
		want   string
	}{
		{"NaN rate", func(m *cascade.Model) { m.Cover.Seepage = nan }, "cover: seepage NaN /d"},
		{"negative rate", func(m *cascade.Model) { m.Deep.Seepage = -1 }, "deep store: seepage -1 /d"},
		{"too fast", func(m *cascade.Model) { m.Percolation.Rate = 1.1e6 }, "percolation: rate 1.1e+06 /d"},
		{"NaN drain", func(m *cascade.Model) { m.Cover.Drains[0].Rate = nan }, "cover: drain 1: rate NaN"},
		{"negative invert", func(m *cascade.Model) { m.Deep.Drains[0].Invert = -2 }, "deep store: drain 1: invert -2 mm"},
		{"infinite invert", func(m *cascade.Model) { m.Deep.Drains[0].Invert = none }, "invert +Inf mm"},
		{"NaN ceiling", func(m *cascade.Model) { m.Percolation.Ceiling = nan }, "percolation: ceiling NaN mm/d"},
		{"negative ceiling", func(m *cascade.Model) { m.Percolation.Ceiling = -1 }, "ceiling -1 mm/d"},
		{"no capacity", func(m *cascade.Model) { m.Cover.Capacity = 0 }, "cover: capacity 0 mm"},
		{"NaN capacity", func(m *cascade.Model) { m.Deep.Capacity = nan }, "deep store: capacity NaN mm"},
		{"absurd capacity", func(m *cascade.Model) { m.Deep.Capacity = 1e12 }, "deep store: capacity"},
		{"negative square", func(m *cascade.Model) { m.Cover.Drains[0].Square = -1 }, "cover: drain 1: square -1 /(mm d) is not between 0 and"},
		{"NaN square", func(m *cascade.Model) { m.Cover.Drains[0].Square = nan }, "cover: drain 1: square NaN /(mm d)"},
		{"endless square", func(m *cascade.Model) { m.Cover.Drains[0].Square = none }, "cover: drain 1: square +Inf /(mm d)"},
		{"absurd square", func(m *cascade.Model) { m.Cover.Drains[0].Square = 1.1e6 }, "cover: drain 1: square 1.1e+06 /(mm d)"},
		{"square and ceiling", func(m *cascade.Model) { m.Cover.Drains[0].Square = 1 }, "cover: drain 1: square 1 /(mm d) with a ceiling of 3 mm/d"},
		{"square of percolation", func(m *cascade.Model) { m.Percolation.Square = 1 }, "percolation: square 1 /(mm d); only a drain of the cover"},
		{"square in the deep store", func(m *cascade.Model) {
			m.Deep.Drains = append(m.Deep.Drains, cascade.Outlet{Square: 1, Ceiling: none})
		}, "deep store: drain 2: square 1 /(mm d); only a drain of the cover"},
		{"two squares", func(m *cascade.Model) {
			m.Cover.Drains = append(m.Cover.Drains, cascade.Outlet{Square: 1, Ceiling: none}, cascade.Outlet{Rate: 1, Square: 1, Ceiling: none})
		}, "cover: drains 2 and 3 have a square; only one can"},
		{"negative lateral", func(m *cascade.Model) { m.Lateral = -1 }, "lateral inflow -1 mm/d"},
		{"endless lateral", func(m *cascade.Model) { m.Lateral = none }, "lateral inflow +Inf"},
		{"too many drains", func(m *cascade.Model) { m.Cover.Drains = make([]cascade.Outlet, 101) }, "101 drains"},
		{"closed cover", func(m *cascade.Model) { m.Percolation.Rate, m.Cover.Drains = 0, nil }, "nothing can leave the cover"},
		{"closed deep store", func(m *cascade.Model) { m.Deep.Seepage, m.Deep.Drains[0].Ceiling = 0, 0 }, "nothing can leave the deep store"},
	} {
		m := good()
		tt.change(&m)
		err := m.Check()
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: %v, want %q", tt.name, err, tt.want)
		}
		if _, err := cascade.NewRun(m, 0, 0); err == nil {
			t.Errorf("%s: NewRun takes it", tt.name)
		}
		if _, _, err := m.Steady(1); err == nil {
			t.Errorf("%s: Steady takes it", tt.name)
		}
	}
}

func TestRefusedCalls(t *testing.T) {
	m := series(0.2, 0.02)
	m.Cover.Capacity = 100
	nan := math.NaN()
	for _, s := range [][2]float64{{-1, 0}, {101, 0}, {nan, 0}, {0, -1}, {0, nan}, {0, none}} {
		if _, err := cascade.NewRun(m, s[0], s[1]); err == nil {
			t.Errorf("start %v is taken", s)
		}
	}
	for _, days := range []float64{0, -1, nan, none, 1e5} {
		if err := newRun(t, m, 0, 0).Step(1, days); err == nil {
			t.Errorf("step of %v days is taken", days)
		}
	}
	for _, depth := range []float64{nan, none, -none, 1e300} {
		for _, s := range []float64{0, 50, 100} { // empty, between, full
			r := newRun(t, m, s, 0)
			step(t, r, map[float64]float64{0: -1, 50: 1, 100: 100}[s], 1)
			if err := r.Step(depth, 1); err == nil {
				t.Errorf("net input of %v mm is taken from %v mm", depth, s)
			}
		}
	}
	err := newRun(t, m, 0, 0).Replay([]float64{1, 2, nan, 4}, 1, nil, nil)
	if err == nil || !strings.HasPrefix(err.Error(), "step 3: ") {
		t.Errorf("NaN in the third step: %v", err)
	}
	if err := newRun(t, m, 0, 0).Replay(make([]float64, 4), 1, make([]float64, 3), nil); err == nil {
		t.Error("slices of different lengths are taken")
	}
	r := newRun(t, cascade.Model{Cover: cascade.Store{Capacity: none, Seepage: 1e-9}, Deep: cascade.Store{Capacity: none, Seepage: 1}}, 0, 0)
	if err := r.Step(2e9, 1); !errors.Is(err, cascade.ErrStorage) {
		t.Errorf("more than can be stored: %v", err)
	}
	for _, start := range [][2]float64{{2e9, 0}, {0, 2e9}} {
		open := cascade.Model{Cover: cascade.Store{Capacity: none, Seepage: 1e-9}, Deep: cascade.Store{Capacity: none, Seepage: 1}}
		if _, err := cascade.NewRun(open, start[0], start[1]); !errors.Is(err, cascade.ErrStorage) {
			t.Errorf("a start with more than can be stored: %v", err)
		}
	}
}

// busy is a model with everything in it, and weather that drives it through many events.
func busy() (cascade.Model, []float64) {
	m := cascade.Model{
		Cover: cascade.Store{Capacity: 60, Seepage: 0.02, Drains: []cascade.Outlet{
			{Rate: 0.5, Invert: 15, Ceiling: none}, {Rate: 0.2, Invert: 30, Ceiling: 3},
		}},
		Percolation: cascade.Outlet{Rate: 0.3, Ceiling: 8},
		Deep: cascade.Store{Capacity: 90, Seepage: 0.02, Drains: []cascade.Outlet{
			{Rate: 0.1, Invert: 40, Ceiling: 2}, {Rate: 0.05, Invert: 60, Ceiling: none},
		}},
		Lateral: 0.1,
	}
	rng := rand.New(rand.NewPCG(5, 5))
	depths := make([]float64, 4000)
	for i := range depths {
		depths[i] = -2
		if rng.IntN(3) == 0 {
			depths[i] = rng.ExpFloat64() * 25
		}
	}
	return m, depths
}

// TestAllocations: none per step, with events in most of them; nor with a square.
func TestAllocations(t *testing.T) {
	t.Run("linear", func(t *testing.T) {
		m, depths := busy()
		allocations(t, m, depths)
	})
	t.Run("square", func(t *testing.T) {
		m, depths := busy()
		m.Cover.Drains[0].Square = 0.05
		allocations(t, m, depths)
	})
}

func allocations(t *testing.T, m cascade.Model, depths []float64) {
	r := newRun(t, m, 0, 0)
	s1, s2 := make([]float64, len(depths)), make([]float64, len(depths))
	replay := func() {
		if err := r.Replay(depths, 1, s1, s2); err != nil {
			t.Fatal(err)
		}
	}
	if n := testing.AllocsPerRun(3, replay); n != 0 {
		t.Errorf("Replay of %d steps allocates %v times", len(depths), n)
	}
	if n := testing.AllocsPerRun(100, func() { step(t, r, 3, 1) }); n != 0 {
		t.Errorf("Step allocates %v times", n)
	}
	months := []float64{28, 29, 30, 31}
	k := 0
	if n := testing.AllocsPerRun(100, func() { step(t, r, 30, months[k%4]); k++ }); n != 0 {
		t.Errorf("Step of calendar months allocates %v times", n)
	}
}

// TestFullToTheLastDigit: a store that is full stands at its capacity, not one rounding above it. 1.25 less the foot of its
// last segment, and that foot added again, are not 1.25.
func TestFullToTheLastDigit(t *testing.T) {
	capacity := 1.2500000000000002
	m := cascade.Model{
		Cover:       cascade.Store{Capacity: capacity},
		Percolation: cascade.Outlet{Rate: 10, Invert: 0.12500000000000033, Ceiling: 1.1102230246251565e-16},
		Deep:        cascade.Store{Capacity: 1},
	}
	r, err := cascade.NewRun(m, capacity, 1)
	if err != nil {
		t.Fatal(err)
	}
	for range 3 {
		if err := r.Step(0, 1); err != nil {
			t.Fatal(err)
		}
		if cover, deep := r.Storage(); cover > capacity || deep > 1 {
			t.Fatalf("storages %v, %v", cover, deep)
		}
	}
}
