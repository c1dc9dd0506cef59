package scenario

import (
	"math"
	"testing"

	"quietslope/cascade"
	"quietslope/cascade/scheme"
)

// reaches replays a model in steps of a hundredth of a day from two storages on, and says after how many days its deep
// storage has made nine tenths of the way from where it is to where it comes to rest.
func reaches(t *testing.T, m cascade.Model, cover, deep, recharge float64) float64 {
	t.Helper()
	const step = 0.01
	run, err := cascade.NewRun(m, cover, deep)
	if err != nil {
		t.Fatal(err)
	}
	_, rest, err := m.Steady(recharge)
	if err != nil {
		t.Fatal(err)
	}
	before := 0.0
	for k := range 1_000_000 {
		if err := run.Step(recharge*step, step); err != nil {
			t.Fatal(err)
		}
		_, at := run.Storage()
		made := (at - deep) / (rest - deep)
		if made >= effective {
			return step * (float64(k) + (effective-before)/(made-before))
		}
		before = made
	}
	t.Fatal("it takes more than 10000 d")
	return 0
}

// TestTimeToEffectReplayed holds the time to effect against replays: of a step of what enters, with the works there, which
// is what it is defined by; and of the day on which the works are built. On that day the drains of the deep store act at
// once, so that where there are others too the replay is never later.
func TestTimeToEffectReplayed(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	trench := func(depth, rate float64) Measure {
		return Measure{Key: "trench_drains", Trench: &TrenchDrains{Depth: depth, Rate: rate, Equivalent: nan, Efficiency: 0.8, Ceiling: inf}}
	}
	spaced := Measure{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Spacing: 12, Conductivity: 0.1, Radius: 0.1, Equivalent: nan, Head: 2, Efficiency: 1, Ceiling: inf}}
	bored := Measure{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.006, Level: 1, Efficiency: 0.9, Ceiling: inf}}
	cutOff := Measure{Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: 0.6}}
	vegetation := Measure{Key: "vegetation", Vegetation: &Vegetation{PETFactor: 1, Interception: 0.1}}
	set := func(key string, value float64) Measure {
		return Measure{Key: "set", Set: []Assignment{{Key: key, Value: value}}}
	}
	channels := keptOut(0.2)[0]
	for _, tt := range []struct {
		name     string
		measures []Measure
		deepOnly bool
		builtToo bool // the day of building is such a step
	}{
		{"trench", []Measure{trench(4, 0.02)}, false, true},
		{"trench above the contact", []Measure{trench(3, 0.02)}, false, true},
		{"spaced trench", []Measure{spaced}, false, true},
		{"bored", []Measure{bored}, true, true},
		{"trench and bored", []Measure{trench(4, 0.02), bored}, false, false},
		{"channels", []Measure{channels}, false, true},
		{"channels and bored", []Measure{channels, bored}, false, false},
		{"planting", []Measure{vegetation}, false, true},
		{"cut-off", []Measure{cutOff}, true, true},
		{"cut-off and bored", []Measure{cutOff, bored}, true, true},
		{"cut-off and trench", []Measure{cutOff, trench(4, 0.02)}, false, false},
		{"faster seepage of the deep layer", []Measure{set("deep.seepage", 0.012)}, true, true},
		{"slower seepage of the deep layer", []Measure{set("deep.seepage", 0.005)}, true, true},
		{"lateral inflow", []Measure{set("deep.lateral_inflow", 0.01)}, true, true},
		{"two numbers of the deep layer", []Measure{{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: 0.01}, {Key: "deep.lateral_inflow", Value: 0.01}}}}, true, true},
		{"seepage of the cover", []Measure{set("cover.seepage", 0.03)}, false, true},
		{"cover and deep layer", []Measure{{Key: "set", Set: []Assignment{{Key: "deep.seepage", Value: 0.01}, {Key: "cover.seepage", Value: 0.02}}}}, false, false},
		{"infiltration", []Measure{set("surface.infiltration", 0.6)}, false, true},
		{"equal rates", []Measure{set("cover.seepage", 0.0025)}, false, true},
	} {
		s := ground(Option{Name: tt.name, Measures: tt.measures})
		s.Ground.CoverFullAt, s.Ground.DeepFullAt, s.Ground.Soil = inf, inf, nil
		s.Ground.Lateral = 0.05
		const rain = 6 // mm/d, so that every drain runs from the one state to the other
		entering := func(w *works) float64 { return rain * w.ground.Infiltration * (1 - w.keptOut) * (1 - w.interception) }
		w, base := newWorks(s, &s.Options[1], &asBuilt, asNew), newWorks(s, &s.Options[0], &asBuilt, asNew)
		got := w.timeToEffect()
		if got == nil || got.ClayDays != nil || got.Days != got.StoreDays {
			t.Errorf("%s: %+v", tt.name, got)
			continue
		}

		// A step of what enters the store that the option acts on.
		m, recharge := w.model, entering(w)
		cover, deep, err := m.Steady(recharge)
		if err != nil {
			t.Fatal(err)
		}
		if tt.deepOnly {
			m.Lateral += 0.1
		} else {
			recharge *= 1.1
		}
		if want := reaches(t, m, cover, deep, recharge); math.Abs(got.StoreDays-want) > 1e-4 {
			t.Errorf("%s: %v d, after a step %v", tt.name, got.StoreDays, want)
		}

		// The works, on the day on which they are built.
		if cover, deep, err = base.model.Steady(entering(base)); err != nil {
			t.Fatal(err)
		}
		built := reaches(t, w.model, cover, deep, entering(w))
		if tt.builtToo && math.Abs(got.StoreDays-built) > 1e-4 || built > got.StoreDays+1e-4 {
			t.Errorf("%s: %v d, when it is built %v", tt.name, got.StoreDays, built)
		}
	}
}

// TestTimeToEffectOfClay: what takes longer counts, the stores or the clay between trenches, and only these drain it.
func TestTimeToEffectOfClay(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	trench := func(spacing, rate float64) []Measure {
		return []Measure{{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Spacing: spacing, Rate: rate, Conductivity: 0.1, Radius: 0.1, Equivalent: nan, Head: 2, Efficiency: 1, Ceiling: inf}}}
	}
	s := ground(
		Option{Name: "slow clay", Measures: trench(10, 0)},
		Option{Name: "close together", Measures: trench(1, 0)},
		Option{Name: "by a rate", Measures: trench(0, 0.1)},
		Option{Name: "bores", Measures: []Measure{{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Efficiency: 1, Ceiling: inf}}}},
		Option{Name: "nothing"},
	)
	s.Options[0].Measures = trench(20, 0) // the baseline is there already
	// c_v = 1e-7 m2/s and 10 m: t90 = 0.85·5²/1e-7 s = 2.125e8 s = 2459 d, 6.7 y.
	s.Ground.Consolidation = 1e-7 * 86400 * 365.25
	of := func(i int) (store, clay, days float64) {
		tt := newWorks(s, &s.Options[i], &asBuilt, asNew).timeToEffect()
		if tt == nil {
			return nan, nan, nan
		}
		clay = nan
		if tt.ClayDays != nil {
			clay = *tt.ClayDays
		}
		return tt.StoreDays, clay, tt.Days
	}
	if store, clay, days := of(1); !agrees(clay, 0.85*25/1e-7/86400) || days != clay || !(store < clay) {
		t.Errorf("10 m apart: stores %v d, clay %v d, %v d", store, clay, days)
	}
	if store, clay, days := of(2); !agrees(clay, 0.85*0.25/1e-7/86400) || days != store || !(store > clay) {
		t.Errorf("1 m apart: stores %v d, clay %v d, %v d", store, clay, days)
	}
	for _, i := range []int{3, 4} {
		if store, clay, days := of(i); !math.IsNaN(clay) || days != store || !(days > 0) {
			t.Errorf("%s: stores %v d, clay %v d, %v d", s.Options[i].Name, store, clay, days)
		}
	}
	for _, i := range []int{0, 5} {
		if _, _, days := of(i); !math.IsNaN(days) {
			t.Errorf("%s takes %v d", s.Options[i].Name, days)
		}
		if got := newWorks(s, &s.Options[i], &asBuilt, asNew).acting(); got != 0 {
			t.Errorf("%s acts after %v d", s.Options[i].Name, got)
		}
	}
	s.Ground.DeepSeepage = 0 // the deep store only fills up
	if w := newWorks(s, &s.Options[1], &asBuilt, asNew); w.timeToEffect() != nil || !math.IsInf(w.acting(), 1) {
		t.Errorf("%+v, acting after %v d", w.timeToEffect(), w.acting())
	}
}

// TestTimeToEffectOfRates: the rates are those as replayed, converted from a scheme, with the drains as the condition leaves
// them new, whatever their age.
func TestTimeToEffectOfRates(t *testing.T) {
	inf := math.Inf(1)
	s := ground(
		Option{Name: "bores", Measures: []Measure{{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.01, Efficiency: 0.5, Ceiling: inf, Decline: &Decline{HalfLife: 2, Every: 5, Restored: 0.5}}}}},
		Option{Name: "quadratic", Measures: []Measure{{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Spacing: 12, Conductivity: 0.1, Radius: 0.1, Equivalent: math.NaN(), Head: 2, Quadratic: true, Efficiency: 1, Ceiling: inf}}}},
	)
	s.Ground.Scheme, s.Ground.SchemeStep = scheme.Explicit, 10
	s.Conditions = []Condition{{Name: "neglected", Drains: 0.4, SurfaceWater: 1, Vegetation: 1}}
	s.Count.DesignLife = 50
	r := invented(2, 3)
	recordOfDays(t, s, r.First, r.Rain, r.PET)
	c := compare(t, s)
	deep := -math.Log(1-0.007*10) / 10 // 1/d, of steps of 10 d
	for j, share := range []float64{1, 0.4} {
		got := c.Cases[j].Options[1].TimeToEffect
		if want := math.Ln10 / (deep + 0.005*share); !agrees(got.Days, want) {
			t.Errorf("%s: %v d, want %v", c.Cases[j].Condition, got.Days, want)
		}
		// By the linear law at the working head: π²·K·(h/2)/(μ·L²), in the porosity as converted.
		cover := -math.Log(1-0.0155*10) / 10
		trench := share * math.Pi * math.Pi * 0.1 * 1 / (0.06 * 0.0155 / cover * 144)
		if got, want := c.Cases[j].Options[2].TimeToEffect.Days, cascade.ResponseTime(cover+trench, deep, 0.9); !agrees(got, want) {
			t.Errorf("%s: by the quadratic law %v d, want %v", c.Cases[j].Condition, got, want)
		}
	}
}
