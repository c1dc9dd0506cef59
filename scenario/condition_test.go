package scenario

import (
	"context"
	"encoding/json"
	"errors"
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"quietslope/cascade/scheme"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/scenario/weather"
)

// everything is an option with every measure.
func everything() Option {
	inf := math.Inf(1)
	return Option{Name: "everything", Measures: []Measure{
		{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Rate: 0.04, Equivalent: math.NaN(), Efficiency: 0.5, Ceiling: inf}},
		{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Level: 2, Efficiency: 0.8, Ceiling: 1.5}},
		{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.2}},
		{Key: "vegetation", Vegetation: &Vegetation{PETFactor: 1.2, Interception: 0.1}},
		{Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: 0.6}},
	}}
}

// TestConditionLeavesShares: what a condition leaves of every measure, by hand; the ground and what drains can carry at most
// stay as they are.
func TestConditionLeavesShares(t *testing.T) {
	s := ground(everything())
	s.Ground.Lateral = 0.1
	w := newWorks(s, &s.Options[1], &Condition{Name: "old", Drains: 0.45, SurfaceWater: 0.6, Vegetation: 0.5})
	for _, tt := range []struct {
		what      string
		got, want float64
	}{
		{"trench rate", w.model.Cover.Drains[0].Rate, 0.04 * 0.5 * 0.45},
		{"trench rate of the results", w.drains[0].rate, 0.04 * 0.5 * 0.45},
		{"bored rate", w.model.Deep.Drains[0].Rate, 0.01 * 0.8 * 0.45},
		{"bored ceiling", w.model.Deep.Drains[0].Ceiling, 1.5},
		{"trench invert", w.model.Cover.Drains[0].Invert, 60},
		{"kept out", w.keptOut, 0.12},
		{"interception", w.interception, 0.05},
		{"factor of evapotranspiration", w.petFactor, 1.1},
		{"lateral inflow", w.model.Lateral, 0.1 * (1 - 0.45*0.6)},
		{"cover seepage", w.model.Cover.Seepage, s.Ground.CoverSeepage},
		{"lateral inflow of the ground", w.ground.Lateral, 0.1},
	} {
		if math.Abs(tt.got-tt.want) > 1e-15 {
			t.Errorf("%s is %v, want %v", tt.what, tt.got, tt.want)
		}
	}
}

// TestUptakeByHand: rain, less what plants catch, less what runs off and is kept out, less what they use.
func TestUptakeByHand(t *testing.T) {
	r := &weather.Record{First: time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC), Step: 24 * time.Hour, Rain: []float64{10, 30}, PET: []float64{2, 1}}
	g := Ground{Infiltration: 0.8, InfiltrationLimit: 0.5} // mm/h, 12 mm in a day
	u := uptake{keptOut: 0.25, interception: 0.1, petFactor: 1.5}
	got := make([]float64, 2)
	newSupply(&g, u, r).fill(got, 0)
	want := []float64{0.75*0.8*0.9*10 - 3, 0.75*12 - 1.5}
	if diff := cmp.Diff(want, got, cmp.Comparer(func(a, b float64) bool { return math.Abs(a-b) < 1e-14 })); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
	g.Soil = &Soil{Available: 100, Readily: 0.5, CropFactor: 1.1}
	if s := newSupply(&g, u, r); math.Abs(s.factor-1.65) > 1e-15 {
		t.Errorf("the factor is %v, want crop factor times pet_factor, 1.65", s.factor)
	}
}

// TestWorseConditionNeverLowers: the less is left of works that can only take water, the higher the deep level, at every
// step; and nothing that they do raises it above that of the ground without them.
func TestWorseConditionNeverLowers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		s := ground(everything())
		s.Ground.Lateral = 0.05
		share := func(what string, most float64) float64 { return rapid.Float64Range(0, most).Draw(t, what) }
		better := Condition{Drains: share("drains", 1), SurfaceWater: share("surface water", 1), Vegetation: share("vegetation", 1)}
		worse := Condition{Drains: share("fewer drains", better.Drains), SurfaceWater: share("less", better.SurfaceWater), Vegetation: share("fewer plants", better.Vegetation)}
		r := invented(rapid.Uint64().Draw(t, "seed"), 2)
		replay := func(option int, c Condition) *trace {
			p := replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}
			tr, err := p.replay(context.Background(), newWorks(s, &s.Options[option], &c), period{to: len(r.Rain)})
			if err != nil {
				t.Fatal(err)
			}
			return tr
		}
		b, w, none := replay(1, better), replay(1, worse), replay(0, asBuilt)
		lower(t, "better works", b, w)
		lower(t, "worse works", w, none)
	})
}

// TestCases: each condition is a case of its own, the first is that of a study without conditions, and a condition that
// leaves everything is the same again.
func TestCases(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	plain := *s
	plain.Conditions = nil
	alone := compare(t, &plain)
	s.Conditions = append(s.Conditions, Condition{Name: "as good as new", Drains: 1, SurfaceWater: 1, Vegetation: 1})
	c := compare(t, s)
	var names []string
	for _, k := range c.Cases {
		names = append(names, k.Climate+"/"+k.Condition)
	}
	if want := []string{"as recorded/as built", "as recorded/neglected", "as recorded/drains stopped", "as recorded/as good as new"}; !slices.Equal(names, want) {
		t.Fatalf("the cases are %q, want %q", names, want)
	}
	if diff := cmp.Diff(alone.Cases[0], c.Cases[0]); diff != "" {
		t.Errorf("as built differs from a study without conditions:\n%s", diff)
	}
	if diff := cmp.Diff(c.Cases[0].Options, c.Cases[3].Options); diff != "" {
		t.Errorf("a condition that leaves everything changes something:\n%s", diff)
	}
	for i, o := range c.Cases[1].Options {
		built := c.Cases[0].Options[i]
		if o.Bands[1].DaysPerYear < built.Bands[1].DaysPerYear {
			t.Errorf("%s: neglected it passes the band on %v d a year, as built on %v", o.Name, o.Bands[1].DaysPerYear, built.Bands[1].DaysPerYear)
		}
		for k, d := range c.Cases[2].Options[i].Drains {
			if d.RatePerDay != 0 || d.MeanMMPerDay != 0 || d.RunningShare != 0 {
				t.Errorf("%s: after drain %d stopped it is %+v", o.Name, k, d)
			}
		}
	}
	// A warning that holds in every case is said once, of none of them.
	for _, w := range c.Warnings {
		if w.Condition != "" && !slices.Contains([]string{"as built", "neglected", "drains stopped", "as good as new"}, w.Condition) {
			t.Errorf("a warning names the condition %q", w.Condition)
		}
	}
	if !slices.ContainsFunc(c.Warnings, func(w result.Warning) bool { return w.Condition == "drains stopped" }) {
		t.Error("no warning is about the stopped drains alone")
	}
}

func TestWarningsOfCases(t *testing.T) {
	p := &prepared{cases: []caseWorks{{condition: "as built"}, {condition: "old"}}}
	of := func(texts ...string) (ws warnings) {
		for _, text := range texts {
			ws = append(ws, result.Warning{Code: "code", Text: text})
		}
		return ws
	}
	var got []string
	for _, w := range p.ofCases([]warnings{of("both", "first"), of("second", "both")}) {
		got = append(got, w.Condition+":"+w.Text)
	}
	if want := []string{":both", "as built:first", "old:second"}; !slices.Equal(got, want) {
		t.Errorf("got %q, want %q", got, want)
	}
	if alone := p.ofCases([]warnings{of("only")}); alone[0].Condition != "" {
		t.Errorf("a warning of the only case names it: %v", alone)
	}
}

// TestAgainst: against another option the change is that against the baseline, seen from there.
func TestAgainst(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	base := compare(t, s)
	c, err := Compare(context.Background(), s, CompareQuery{Against: "lined channels"})
	if err != nil {
		t.Fatal(err)
	}
	if c.Settings.Against != "lined channels" || base.Settings.Against != "" {
		t.Errorf("against is %q and %q", c.Settings.Against, base.Settings.Against)
	}
	for k := range c.Cases {
		for i, o := range c.Cases[k].Options {
			was := base.Cases[k].Options[i]
			if o.Baseline != was.Baseline || o.Decision.Rank != was.Decision.Rank {
				t.Errorf("%s: baseline or rank changed", o.Name)
			}
			for b := range o.Bands {
				if (o.Bands[b].Change == nil) != (o.Name == "lined channels") {
					t.Errorf("%s on %s: change is %v", o.Name, o.Bands[b].Name, o.Bands[b].Change)
				}
				o.Bands[b].Change, was.Bands[b].Change = nil, nil
			}
			if diff := cmp.Diff(was, o); diff != "" {
				t.Errorf("%s: more than the change differs:\n%s", o.Name, diff)
			}
		}
	}
	from := compare(t, s).Cases[0].Options
	channels := slices.IndexFunc(from, func(o result.Option) bool { return o.Name == "lined channels" })
	c, _ = Compare(context.Background(), s, CompareQuery{Against: "lined channels"})
	there, back := from[channels].Bands[1].Change.DaysPerYear, c.Cases[0].Options[0].Bands[1].Change.DaysPerYear
	if there.Difference != -back.Difference || there.YearsBetter != back.YearsWorse || there.DifferenceCI[0] != -back.DifferenceCI[1] {
		t.Errorf("from the baseline to the channels %+v, and back %+v", there, back)
	}
	var wrong *fault.Error
	if _, err := Compare(context.Background(), s, CompareQuery{Against: "channels"}); !errors.As(err, &wrong) || !strings.Contains(err.Error(), "lined channels") {
		t.Errorf("an unknown option gives %v", err)
	}
}

// TestEveryKeyAtOnce: the study that is to use every key does, and all that it finds can be written down.
func TestEveryKeyAtOnce(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	given := map[string]bool{}
	for key := range s.places {
		given[regexp.MustCompile(`\[\d+\]`).ReplaceAllString(key, "[]")] = true
	}
	for _, k := range Keys() {
		if !given[k.Path] {
			t.Errorf("%s is not given", k.Path)
		}
	}
	if _, err := json.Marshal(compare(t, s)); err != nil {
		t.Error(err)
	}
	found, err := Check(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := json.Marshal(found); err != nil {
		t.Error(err)
	}
}

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

// TestConvertedRates: the outflow of the cover and its level are those of the scheme at the end of every step; the deep level
// differs by what check prints.
func TestConvertedRates(t *testing.T) {
	for _, by := range []scheme.Scheme{scheme.Centred, scheme.Explicit, scheme.Implicit} {
		t.Run(by.String(), func(t *testing.T) {
			s := ground()
			s.Ground.Scheme, s.Ground.SchemeStep = by, 1
			s.Ground.Lateral = 0.05
			w := newWorks(s, &s.Options[0], &asBuilt)
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
		{Key: "trench_drains", Trench: &TrenchDrains{Depth: 3, Spacing: 10, Conductivity: 0.02, Equivalent: 0.8, Efficiency: 1, Ceiling: math.Inf(1)}},
	}})
	s.Ground.Scheme, s.Ground.SchemeStep = scheme.Centred, 1
	w := newWorks(s, &s.Options[1], &asBuilt)
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
