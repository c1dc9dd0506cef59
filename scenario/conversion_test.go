package scenario

import (
	"context"
	"math"
	"testing"

	"github.com/google/go-cmp/cmp"

	"quietslope/cascade/scheme"
	"quietslope/scenario/result"
)

// TestConvertedRates: the outflow of the cover and its level are those of the scheme at the end of every step; the deep level
// differs by what check prints.
func TestConvertedRates(t *testing.T) {
	for _, by := range []scheme.Scheme{scheme.Centred, scheme.Explicit, scheme.Implicit} {
		t.Run(by.String(), func(t *testing.T) {
			s := ground()
			s.Ground.Scheme, s.Ground.SchemeStep = by, 1
			s.Ground.Lateral = 0.05
			w := newWorks(s, &s.Options[0], &asBuilt, asNew)
			if given := w.rates().Given; given == nil || given.CoverSeepagePerDay != 0.011 || given.DeepSeepagePerDay != 0.007 {
				t.Fatalf("given are %+v", w.rates().Given)
			}
			if share := w.ground.CoverSeepage / w.ground.Percolation; math.Abs(share-0.011/0.0045) > 1e-12 {
				t.Errorf("the outlets share the rate as %v, before as %v", share, 0.011/0.0045)
			}
			r := invented(3, 4)
			p := &prepared{study: s, record: r, replayer: &replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}}
			tr, err := p.replayer.replay(context.Background(), w, period{to: len(r.Rain)})
			if err != nil {
				t.Fatal(err)
			}
			pair := scheme.Pair{CoverRate: 0.0155, Percolation: 0.0045, DeepRate: 0.007, CoverCapacity: 240, DeepCapacity: 126, Lateral: 0.05}
			cover, deep := tr.start.Cover*60, tr.start.Deep*14
			first := make([]float64, 365)
			supply := newSupply(&w.ground, w.uptake, r)
			supply.fill(first, 0)
			if cover, deep, err = by.Replay(pair, cover, deep, first, 1, nil, nil); err != nil {
				t.Fatal(err)
			}
			n := len(r.Rain)
			covers, deeps := make([]float64, n), make([]float64, n)
			if _, _, err = by.Replay(pair, cover, deep, tr.recharge, 1, covers, deeps); err != nil {
				t.Fatal(err)
			}
			furthest := 0.0
			for i := range n {
				if d := math.Abs(covers[i]/60 - tr.cover[i]); d > 1e-10 {
					t.Fatalf("step %d: the cover stands at %v m, by the scheme at %v m", i, tr.cover[i], covers[i]/60)
				}
				// The outflow is rate times storage in both.
				out := (w.ground.CoverSeepage + w.ground.Percolation) * 1000 * w.ground.CoverPorosity * tr.cover[i]
				if d := math.Abs(0.0155*covers[i] - out); d > 1e-10 {
					t.Fatalf("step %d: %v mm/d leave the cover, by the scheme %v", i, out, 0.0155*covers[i])
				}
				furthest = max(furthest, math.Abs(deeps[i]/14-tr.deep[i]))
			}
			c, err := p.conversion(context.Background())
			if err != nil {
				t.Fatal(err)
			}
			if d := c.LargestDifference; d == nil || math.Abs(d.DeepM-furthest) > 1e-12 || d.CoverM > 1e-10 {
				t.Fatalf("check says %+v, the largest difference is %v m", d, furthest)
			}
			t.Logf("largest difference of the deep level %.4f m", furthest)
			exact, _ := by.ExactRate(0.0155, 1)
			want := result.StoreConversion{GivenPerDay: 0.0155, ExactPerDay: exact, GivenPorosity: 0.06, Porosity: 0.06 * 0.0155 / exact}
			if diff := cmp.Diff(want, c.Cover, cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-15 })); diff != "" {
				t.Errorf("(-want +got):\n%s", diff)
			}
			// A record with other steps says nothing of the scheme.
			s.Ground.SchemeStep = 0.5
			if c, err := p.conversion(context.Background()); err != nil || c.LargestDifference != nil {
				t.Errorf("with other steps: %+v, %v", c, err)
			}
		})
	}
}

// TestTrenchInConvertedGround: a trench is worked out with the porosity that the converted store has.
func TestTrenchInConvertedGround(t *testing.T) {
	s := ground(Option{Name: "trench", Measures: []Measure{
		{Key: "set", Set: []Assignment{{Key: "cover.seepage", Value: 0.1}}},
		{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 10, Conductivity: 0.02, Equivalent: 0.8, Head: 1.5, Efficiency: 1, Ceiling: math.Inf(1)}},
	}})
	s.Ground.Scheme, s.Ground.SchemeStep = scheme.Centred, 1
	w := newWorks(s, &s.Options[1], &asBuilt, asNew)
	exact, _ := scheme.Centred.ExactRate(0.1045, 1) // set first, converted then
	n := 0.06 * 0.1045 / exact
	if got, want := w.model.Cover.Drains[0].Rate, math.Pi*math.Pi*0.02*(0.8+0.75)/(n*100); math.Abs(got-want) > 1e-15 {
		t.Errorf("the rate is %v, want %v", got, want)
	}
	if got := w.model.Cover.Drains[0].Invert; math.Abs(got-1000*n) > 1e-12 {
		t.Errorf("the invert is %v mm, want %v", got, 1000*n)
	}
	if got := w.model.Cover.Capacity; math.Abs(got-4000*n) > 1e-12 {
		t.Errorf("the capacity is %v mm, want %v", got, 4000*n)
	}
}

// TestBoredDrainsInConvertedGround: so are capacity, inverts and rate of the deep store.
func TestBoredDrainsInConvertedGround(t *testing.T) {
	s := ground(Option{Name: "bores", Measures: []Measure{
		{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: 0.2}}},
		{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: 2, Efficiency: 1, Ceiling: math.Inf(1)}},
	}})
	s.Ground.Scheme, s.Ground.SchemeStep = scheme.Centred, 1
	w := newWorks(s, &s.Options[1], &asBuilt, asNew)
	exact, _ := scheme.Centred.ExactRate(0.2, 1)
	n := 0.014 * 0.2 / exact
	for _, tt := range []struct {
		what      string
		got, want float64
	}{
		{"rate", w.model.Deep.Seepage, exact}, {"porosity", w.ground.DeepPorosity, n},
		{"porosity in the results", *w.rates().DeepPorosity, n}, {"porosity given", *w.rates().Given.DeepPorosity, 0.014},
		{"invert", w.model.Deep.Drains[0].Invert, 2000 * n}, {"capacity", w.model.Deep.Capacity, 9000 * n},
		{"drain", w.model.Deep.Drains[0].Rate, 0.01},
	} {
		if math.Abs(tt.got-tt.want) > 1e-12 {
			t.Errorf("%s is %v, want %v", tt.what, tt.got, tt.want)
		}
	}
	if w.ground.Scheme != scheme.Exact || w.given.Scheme != scheme.Centred {
		t.Errorf("the converted ground is of the %v scheme, the given one of the %v", w.ground.Scheme, w.given.Scheme)
	}
}

// TestConversionAtCapacity: full stores are clipped at the given level by the scheme too.
func TestConversionAtCapacity(t *testing.T) {
	s := ground()
	s.Ground.Scheme, s.Ground.SchemeStep = scheme.Explicit, 1
	s.Ground.CoverSeepage, s.Ground.Percolation, s.Ground.DeepSeepage = 0.1, 0.1, 0.1
	s.Ground.CoverFullAt, s.Ground.DeepFullAt = 0.5, 0.5
	r := invented(3, 4)
	p := &prepared{study: s, record: r, replayer: &replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}}
	c, err := p.conversion(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	tr, err := p.replayer.replay(context.Background(), newWorks(s, &s.Options[0], &asBuilt, asNew), period{to: len(r.Rain)})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(tr.coverMax-0.5) > 1e-12 || math.Abs(tr.deepMax-0.5) > 1e-12 {
		t.Fatalf("the stores are not full: %v and %v m", tr.coverMax, tr.deepMax)
	}
	// By hand: the deep store is fed from the start of the step, and clipped at its end.
	cover, deep := 1000*0.06*tr.start.Cover, 1000*0.014*tr.start.Deep
	step := func(depth float64) {
		cover, deep = min(max(cover*(1-0.2)+depth, 0), 30), min(deep*(1-0.1)+0.1*cover, 7)
	}
	for _, depth := range tr.recharge[:365] { // the warm-up; its soil is full at first, as that of the record after it
		step(depth)
	}
	most, at := 0.0, 0
	for i, depth := range tr.recharge {
		step(depth)
		if d := math.Abs(deep/14 - tr.deep[i]); d > most {
			most, at = d, i
		}
	}
	if d := c.LargestDifference; d.CoverM != 0 || d.CoverAt != "" || math.Abs(d.DeepM-most) > 1e-6 || d.DeepAt != r.ISO(at) {
		t.Errorf("check says %+v, by hand %v m at %s", d, most, r.ISO(at))
	}
}
