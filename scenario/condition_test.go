package scenario

import (
	"context"
	"math"
	"slices"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"
	"pgregory.net/rapid"

	"quietslope/cascade/scheme"
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
	w := newWorks(s, &s.Options[1], &Condition{Name: "old", Drains: 0.45, SurfaceWater: 0.6, Vegetation: 0.5}, asNew)
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

// TestConditionLeavesTheLaw: of both parts of the quadratic law a condition leaves the same, and so of its working rate.
func TestConditionLeavesTheLaw(t *testing.T) {
	s := ground(Option{Name: "works", Measures: parallel(func(d *TrenchDrains) { d.Quadratic = true })})
	built := newWorks(s, &s.Options[1], &asBuilt, asNew).drains[0]
	w := newWorks(s, &s.Options[1], &Condition{Name: "old", Drains: 0.5, SurfaceWater: 1, Vegetation: 1}, asNew)
	old, o := w.drains[0], w.model.Cover.Drains[0]
	if !(built.rate > 0 && built.square > 0 && built.worked > built.rate) {
		t.Fatalf("%+v", built)
	}
	if old.rate != built.rate/2 || old.square != built.square/2 || old.worked != built.worked/2 || o.Rate != old.rate || o.Square != old.square {
		t.Errorf("%+v and %+v, want half of %+v", old, o, built)
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
			tr, err := p.replay(context.Background(), newWorks(s, &s.Options[option], &c, asNew), period{to: len(r.Rain)})
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
	states := cmpopts.IgnoreFields(result.Option{}, "States") // the first case has them
	if diff := cmp.Diff(c.Cases[0].Options, c.Cases[3].Options, states); diff != "" {
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

// TestLevelsOfCondition: levels writes the series that compare counted, in every condition and for the baseline too.
func TestLevelsOfCondition(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	for i := range s.Options {
		o := &s.Options[i]
		o.Baseline, o.Costs = o.Name == "trenches, spacing 8 m", nil
		for j := range o.Measures { // of drains that clog compare has the mean over their age
			switch m := &o.Measures[j]; {
			case m.Trench != nil:
				m.Trench.Decline = nil
			case m.Bored != nil:
				m.Bored.Decline = nil
			}
		}
	}
	c := compare(t, s)
	for _, k := range c.Cases {
		l, err := Levels(context.Background(), s, LevelsQuery{Condition: k.Condition, From: c.Record.CountedFrom, To: c.Record.CountedTo})
		if err != nil {
			t.Fatal(err)
		}
		for i, o := range k.Options {
			if got := largest(l.Deep[i]); got != o.Level.MaxM {
				t.Errorf("%s, %s: the highest level is %v m, by compare %v", k.Condition, o.Name, got, o.Level.MaxM)
			}
		}
	}
}

// TestWarmUpOfConditions: a drain that keeps a store quick may have stopped in one of them.
func TestWarmUpOfConditions(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	s.Ground.Start, s.Ground.WarmUpYears = nil, -1
	s.Ground.Scheme = scheme.Exact
	s.Options = append(s.Options[:1:1], Option{Name: "bores", Measures: []Measure{
		{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: 1e-3}}},
		{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.05, Level: 0, Efficiency: 1, Ceiling: math.Inf(1)}},
	}})
	for _, tt := range []struct {
		conditions []Condition
		want       int
	}{{nil, 3}, {[]Condition{{Name: "stopped", SurfaceWater: 1, Vegetation: 1}}, 14}} { // 5/0.001 d are 13.7 y
		s.Conditions = tt.conditions
		if got := compare(t, s).Record.WarmUpYears; got != tt.want {
			t.Errorf("%d conditions: %d years, want %d", len(tt.conditions), got, tt.want)
		}
	}
}
