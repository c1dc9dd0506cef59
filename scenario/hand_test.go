package scenario

import (
	"encoding/json"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"quietslope/cascade"
	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
	"quietslope/scenario/result"
)

// bareHand is a query without a study that is right, to change.
func bareHand() HandQuery {
	return HandQuery{Spacings: []string{"8 m, 12 m"}, Depth: "3 m", Thickness: "4 m", Conductivity: "0.044 m/d", Porosity: "8 %"}
}

// handText is a study of which options are worked out by hand. Its rates were calibrated with a stepping scheme.
const handText = `study: by hand
weather:
  file: weather.csv
  columns:
    time: {name: date, format: YYYY-MM-DD}
    rain: {name: rain_mm, unit: mm}
ground:
  cover: {thickness: 4 m, drainable_porosity: 8 %, conductivity: 0.044 m/d, seepage: 0.011 /d, percolation: 0.0045 /d}
  deep: {thickness: 9 m, drainable_porosity: 1.4 %, seepage: 0.007 /d}
  rates_from: {scheme: centred, step: 1 d}
bands:
  - {name: onset, level: 4.2 m}
options:
  - name: as it stands
  - name: trenches
    trench_drains: {spacing: [8 m, 12 m, 24 m], depth: 3 m, equivalent_depth: 0.8 m, efficiency: 80 %}
  - name: trenches at a measured rate
    trench_drains: {rate: 0.02 /d, depth: 3 m}
  - name: bored drains
    bored_drains: {rate: 0.005 /d, level: 3 m}
  - name: depths
    trench_drains: {spacing: 9 m, depth: [2 m, 3 m]}
  - name: with channels
    trench_drains: {spacing: 9 m, depth: 3 m}
    surface_water: {kept_out: [10 %, 20 %]}
site: {plan_area: 12000 m2}
declared: {existing_slip_surface: yes, rapid_movement_possible: no}
`

func handStudy(t *testing.T, text string) *Study {
	t.Helper()
	s, err := Parse("study.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestHandQuery: what is wrong names the option of the command line, and says what to write.
func TestHandQuery(t *testing.T) {
	study := handStudy(t, handText)
	for _, tt := range []struct {
		change func(*HandQuery)
		study  *Study
		want   []string
	}{
		{func(q *HandQuery) { *q = HandQuery{} }, nil, []string{
			"--spacing: without a study and --option, give ", "--depth: without ", "--conductivity: without ", "--porosity: without "}},
		{func(q *HandQuery) { q.Option = "trenches" }, nil, []string{"--option: it names an option of a study; give the study file too"}},
		{func(q *HandQuery) { q.Depth = "3" }, nil, []string{`--depth: "3" has no unit; write 3 m`}},
		{func(q *HandQuery) { q.Depth = "0 m" }, nil, []string{`--depth: "0 m" is out of range; write a value above 0 m and at most 500 m`}},
		{func(q *HandQuery) { q.Porosity = "0 %" }, nil, []string{`--porosity: "0 %" is out of range; write a value above 0 % and at most 100 %`}},
		{func(q *HandQuery) { q.Conductivity = "3 mm/d" }, nil, []string{`--conductivity: "3 mm/d" is a flux`, "write 0.003 m/d"}},
		{func(q *HandQuery) { q.Spacings = []string{"8, 12 m"} }, nil, []string{`--spacing: "8" has no unit; write 8 m. Commas part the spacings`}},
		{func(q *HandQuery) { q.Spacings = []string{"1,5 m"} }, nil, []string{"a decimal point is a full stop"}},
		{func(q *HandQuery) { q.Spacings = []string{"8 m,"} }, nil, []string{`--spacing: a spacing is missing in "8 m,"`}},
		{func(q *HandQuery) { q.Spacings = []string{"8 m", "12 m, 800 cm"} }, nil, []string{`--spacing: "800 cm" stands twice`}},
		{func(q *HandQuery) { q.Spacings = []string{strings.Repeat("x", 99)} }, nil, []string{"--spacing: "}},
		{func(q *HandQuery) { q.Spacings = []string{"20 km"} }, nil, []string{"at most 10000 m"}},
		{func(q *HandQuery) { q.Thickness = "2 m" }, nil, []string{"--thickness: the layer is 2 m thick and the drains are 3 m deep"}},
		{func(q *HandQuery) { q.EquivalentDepth = "1.1 m" }, nil, []string{`--equivalent-depth: "1.1 m" is more than lies below the drains`, "which leaves 1 m"}},
		{func(q *HandQuery) { q.EquivalentDepth = "computd" }, nil, []string{"--equivalent-depth: "}},
		{func(q *HandQuery) { q.WorkingHead = "3.5 m" }, nil, []string{`--working-head: "3.5 m" is more than the depth of the drains, 3 m`}},
		{func(q *HandQuery) { q.Fall = "1 .. 3.5 m" }, nil, []string{"--fall: 3.5 m is more than the depth of the drains"}},
		{func(q *HandQuery) { q.Fall = "1.0 m .. 0.4 m" }, nil, []string{`--fall: "1.0 m .. 0.4 m" does not rise; write the smaller value first`}},
		{func(q *HandQuery) { q.Fall = "1 m to 0.4 m" }, nil, []string{`--fall: "1 m to 0.4 m" is not a range; write two values of a length`}},
		{func(q *HandQuery) { q.Fall = "0.4 .. 1" }, nil, []string{`--fall: "0.4 .. 1" has no unit; write 0.4 .. 1 m`}},
		{func(q *HandQuery) { q.Fall = "0 m .. 1 m" }, nil, []string{`--fall: "0 m .. 1 m" is out of range; write heads above 0 m`}},
		{func(q *HandQuery) { q.Radius, q.Width, q.Wet = "0.1 m", "0.6 m", "0 m" }, nil, []string{"--radius: it is worked out from --width and --wet"}},
		{func(q *HandQuery) { q.Width = "0.6 m" }, nil, []string{"--wet: beside --width"}},
		{func(q *HandQuery) { q.Wet = "0.6 m" }, nil, []string{"--width: beside --wet"}},
		{func(q *HandQuery) { q.Thickness, q.Radius = "", "0.2 m" }, nil, []string{"--radius: it is of account only where ground lies below the drains", "give --thickness"}},
		{func(q *HandQuery) { q.Thickness, q.Width, q.Wet = "3 m", "0.6 m", "0 m" }, nil, []string{"--width: it is of account only"}},
		{func(q *HandQuery) { q.Spacings, q.Radius = []string{"8 m", "0.5 m"}, "0.25 m" }, nil, []string{"--spacing: drains of a radius of 0.25 m leave no ground between them at a spacing of 0.5 m"}},
		{func(q *HandQuery) { q.Conductivity = "1e-30 m/d" }, nil, []string{"--spacing: drains 8 m apart work out at ", "check spacing, conductivity and porosity"}},
		{func(q *HandQuery) { q.Conductivity, q.Spacings = "1e5 m/d", []string{"0.3 m"} }, nil, []string{"--spacing: drains 0.3 m apart work out at "}},
		{func(q *HandQuery) { q.Spacings, q.Depth, q.Recharge = nil, "", "-1 mm/d" }, nil, []string{"--recharge: ", "--spacing: ", "--depth: "}},

		{func(q *HandQuery) { *q = HandQuery{} }, study, []string{"--option: name the option whose trench drains are meant; those with a spacing are "}},
		{func(q *HandQuery) { *q = HandQuery{Option: "bored drains"} }, study, []string{`--option: "bored drains" has no trench drains with a spacing; those that have are "trenches"`}},
		{func(q *HandQuery) { *q = HandQuery{Option: "trenches at a measured rate"} }, study, []string{"has no trench drains with a spacing"}},
		{func(q *HandQuery) { *q = HandQuery{Option: "trnches"} }, study, []string{`--option: the study has no "trnches"; did you mean "trenches"?`}},
		{func(q *HandQuery) { q.Option, q.Spacings = "trenches", nil }, study, []string{"--depth: this is a number of the study", "--thickness: this ", "--porosity: this "}},
		{func(q *HandQuery) { *q = HandQuery{Option: "trenches", Radius: "0.2 m"} }, study, []string{"--radius: ", "add --equivalent-depth computed"}},
	} {
		q := bareHand()
		tt.change(&q)
		_, err := HandCheck(tt.study, q)
		var f *fault.Error
		if err == nil || !errors.As(err, &f) {
			t.Errorf("%q: %v", tt.want, err)
			continue
		}
		for _, want := range tt.want {
			if !strings.Contains(err.Error(), want) {
				t.Errorf("no %q in %v", want, err)
			}
		}
		if n := strings.Count(err.Error(), "\n") + 1; n > len(tt.want) && tt.study == nil {
			t.Errorf("%d lines: %v", n, err)
		}
	}
	if _, err := HandCheck(nil, HandQuery{Spacings: []string{strings.Repeat("1 m, ", 3) + "1 m"}}); strings.Count(err.Error(), "stands twice") != 3 {
		t.Error(err)
	}
	many := bareHand()
	many.Spacings = nil
	for i := range mostValues + 5 {
		many.Spacings = append(many.Spacings, quantity.Format(20+float64(i), quantity.Length))
	}
	if _, err := HandCheck(nil, many); err == nil || !strings.Contains(err.Error(), "at most 100 spacings") {
		t.Error(err)
	}
	many.Spacings = many.Spacings[:mostValues]
	if d, err := HandCheck(nil, many); err != nil || len(d.Spacings) != mostValues {
		t.Error(err)
	}
}

// TestHandList: what a list of options can stand for.
func TestHandList(t *testing.T) {
	s := handStudy(t, handText)
	for name, want := range map[string]string{
		"depths": `one of trench_drains.depth; name one of its options, such as "depths, depth 2 m"`, "with channels": "one of surface_water.kept_out",
	} {
		if _, err := HandCheck(s, HandQuery{Option: name}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v", name, err)
		}
	}
	for name, want := range map[string][]float64{
		"depths, depth 2 m": {9}, "TRENCHES": {8, 12, 24}, "trenches, spacing 12 m": {12},
	} {
		d, err := HandCheck(s, HandQuery{Option: name})
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		var got []float64
		for _, f := range d.Spacings {
			got = append(got, f.SpacingM)
		}
		if !slices.Equal(got, want) || d.ReactionFactorPerDay != d.Spacings[0].ReactionFactorPerDay || len(d.Inputs) != 1 || d.Inputs[0].SHA256 != s.SHA256 {
			t.Errorf("%s: %v, %+v", name, got, d.Inputs)
		}
	}
}

// TestHandOption: an option is worked out with its own numbers, in the ground as its rates were converted, and what the query
// gives stands in their place.
func TestHandOption(t *testing.T) {
	s := handStudy(t, handText)
	check := func(q HandQuery) *result.Drains {
		t.Helper()
		d, err := HandCheck(s, q)
		if err != nil {
			t.Fatal(err)
		}
		return d
	}
	own := check(HandQuery{Option: "trenches"})
	for i := range own.Spacings {
		f := &own.Spacings[i]
		o := &s.Options[slices.IndexFunc(s.Options, func(o Option) bool { return o.Name == f.Option })]
		w := newWorks(s, o, &asBuilt, asNew)
		near(t, f.Option, f.ReactionFactorPerDay, w.drains[0].worked, 1e-15)
		near(t, "effect", *f.TimeToEffectDays, w.timeToEffect().Days, 0)
		near(t, "metres", *f.Metres, s.Site.PlanArea/f.SpacingM, 0)
	}
	l := &own.Layout
	if l.PorosityGiven == nil || *l.PorosityGiven != s.Ground.CoverPorosity || l.Porosity == s.Ground.CoverPorosity || l.Law != "linear" || l.NotOfOption != nil || l.EquivalentDepth != "given" {
		t.Errorf("%+v", l)
	}
	other := check(HandQuery{Option: "trenches", Spacings: []string{"10 m"}, Conductivity: "0.1 m/d", ConductivityBelow: "0.05 m/d", Radius: "0.2 m",
		EquivalentDepth: computed, WorkingHead: "1 m", Efficiency: "100 %", Consolidation: "2 m2/y", Recharge: "1 mm/d"})
	o := &other.Layout
	if f := &other.Spacings[0]; len(other.Spacings) != 1 || f.SpacingM != 10 || f.EquivalentDepthM != *f.ComputedDepthM || f.ClayDays == nil || f.SteadyHeadM == nil {
		t.Errorf("%+v", other.Spacings)
	}
	near(t, "rate", other.ReactionFactorPerDay, math.Pi*math.Pi*(0.05*other.EquivalentDepthM+0.1*0.5)/(l.Porosity*100), 1e-12)
	want := []string{"spacing", "conductivity", "conductivity_below", "drain_radius", "equivalent_depth", "working_head", "efficiency", "consolidation"}
	if o.ConductivityMPerDay != 0.1 || o.ConductivityBelowMPerDay != 0.05 || *o.RadiusM != 0.2 || o.WorkingHeadM != 1 || o.Efficiency != 1 || *o.ConsolidationM2PerYear != 2 || !slices.Equal(o.NotOfOption, want) {
		t.Errorf("%+v", o)
	}
	again := check(HandQuery{Option: "trenches"}) // the study is as it was
	near(t, "again", again.ReactionFactorPerDay, own.ReactionFactorPerDay, 0)

	plain := handStudy(t, handText)
	plain.Options[1].Baseline, plain.Options[0].Baseline = true, false
	d, err := HandCheck(plain, HandQuery{Option: plain.Options[1].Name})
	if err != nil || d.TimeToEffectDays != nil || d.Spacings[0].StoreDays != nil {
		t.Errorf("a baseline acts already: %v, %+v", err, d)
	}
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: %v, want %v", what, got, want)
	}
}

// TestHandFigures: any query that is taken gives figures that can be written, and that keep to what their formulas say of one
// another.
func TestHandFigures(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		draw := func(name string, lo, hi float64) float64 {
			return math.Exp(rapid.Float64Range(math.Log(lo), math.Log(hi)).Draw(t, name))
		}
		log := func(name string, lo, hi float64, kind quantity.Kind) string {
			return quantity.Format(draw(name, lo, hi), kind)
		}
		maybe := func(text string) string {
			if rapid.Bool().Draw(t, "given") {
				return text
			}
			return ""
		}
		depth, below := draw("depth", 0.01, 100), draw("under", 1e-6, 100)
		from := depth * rapid.Float64Range(0.1, 1).Draw(t, "from")
		to := from * rapid.Float64Range(0.01, 0.99).Draw(t, "to")
		q := HandQuery{
			Fall:     maybe(quantity.Format(to, quantity.Length) + " .. " + quantity.Format(from, quantity.Length)),
			Spacings: []string{log("spacing", 0.01, 1e4, quantity.Length)}, Depth: quantity.Format(depth, quantity.Length),
			Thickness: maybe(quantity.Format(depth+below, quantity.Length)), Conductivity: log("conductivity", 1e-9, 1e5, quantity.Conductivity),
			ConductivityBelow: maybe(log("below", 1e-12, 1e5, quantity.Conductivity)), Porosity: log("porosity", 1e-4, 1, quantity.Share),
			Radius: maybe(log("radius", 1e-9, 1, quantity.Length)), EquivalentDepth: maybe(log("equivalent", 1e-9, below, quantity.Length)),
			WorkingHead: maybe(log("head", 1e-9, depth, quantity.Length)), Efficiency: maybe(log("efficiency", 1e-3, 1, quantity.Share)),
			Recharge: maybe(log("recharge", 1e-9, 1e5, quantity.Flux)), Consolidation: maybe(log("consolidation", 1e-9, 1e6, quantity.Consolidation)),
		}
		d, err := HandCheck(nil, q)
		if err != nil {
			var f *fault.Error
			if !errors.As(err, &f) || !strings.HasPrefix(f.Key, "--") {
				t.Fatal(err)
			}
			return
		}
		if _, err := json.Marshal(d); err != nil {
			t.Fatal(err, q)
		}
		f, l := &d.Spacings[0], &d.Layout
		same := func(what string, got, want float64) {
			if !(math.Abs(got-want) <= 1e-9*math.Abs(want)) {
				t.Errorf("%s: %v, want %v; %+v", what, got, want, q)
			}
		}
		same("coefficient", f.ReservoirCoefficientDays*f.ReactionFactorPerDay, 1)
		same("half-life", math.Exp(-f.ReactionFactorPerDay*f.HalfLifeDays), 0.5)
		same("effect", math.Exp(-f.ReactionFactorPerDay**f.StoreDays), 0.1)
		same("a fall by half", 1.16*math.Exp(-f.ReactionFactorPerDay*f.FallsByHalfDays), 0.5)
		if days := f.FallDays; days != nil { // at the mean of the two heads
			depth := l.ConductivityBelowMPerDay*f.EquivalentDepthM + l.ConductivityMPerDay*(from+to)/4
			rate := l.Efficiency * math.Pi * math.Pi * depth / (l.Porosity * f.SpacingM * f.SpacingM)
			same("a fall", rate**days, math.Log(1.16*from/to))
		}
		for _, o := range f.Outflows {
			above, most := o.LinearMMPerDay-o.HooghoudtMMPerDay, 1e-9*o.HooghoudtMMPerDay
			switch h := l.WorkingHeadM; {
			case o.HeadM == h:
				same("both laws at the working head", o.LinearMMPerDay, o.HooghoudtMMPerDay)
			case o.HeadM < h && above < -most, o.HeadM > h && above > most:
				t.Errorf("at %v m, not %v m, the laws give %v and %v", o.HeadM, h, o.LinearMMPerDay, o.HooghoudtMMPerDay)
			}
		}
		if r := l.RechargeMMPerDay; r != nil {
			h := *f.SteadyHeadM
			k, kb := l.ConductivityMPerDay, l.ConductivityBelowMPerDay
			same("steady flow", 1000*l.Efficiency*(8*kb*f.EquivalentDepthM*h+4*k*h*h)/(f.SpacingM*f.SpacingM), *r)
			// A store at rest stands at the mean height that goes with the head midway: by the linear reservoir at rest there is pi^2/8
			// of the mean (StepHead in package drain).
			same("steady linear head", *f.SteadyHeadLinearM, math.Pi*math.Pi/8**r/(1000*l.Porosity*f.ReactionFactorPerDay))
		}
	})
}

// TestHandEffect: the time to effect of the drained ground alone is that of one store.
func TestHandEffect(t *testing.T) {
	d, err := HandCheck(nil, bareHand())
	if err != nil {
		t.Fatal(err)
	}
	near(t, "effect", *d.TimeToEffectDays, cascade.ResponseTime(math.Inf(1), d.ReactionFactorPerDay, 0.9), 1e-15)
	near(t, "effect", *d.TimeToEffectDays, math.Ln10*d.ReservoirCoefficientDays, 1e-12)
}

// TestHandWarnings: each is raised beyond its limit and not on it.
func TestHandWarnings(t *testing.T) {
	for _, tt := range []struct {
		code       string
		not, raise func(*HandQuery)
	}{
		{"trench_deep", func(q *HandQuery) { q.Depth, q.Thickness = "6 m", "9 m" }, func(q *HandQuery) { q.Depth, q.Thickness = "6.1 m", "9 m" }},
		{"implausible_ground", func(q *HandQuery) { q.Conductivity = "86.4 m/d" }, func(q *HandQuery) { q.Conductivity = "86.5 m/d" }},
		{"implausible_ground", func(q *HandQuery) { q.ConductivityBelow = "8.65e-7 m/d" }, func(q *HandQuery) { q.ConductivityBelow = "8.63e-7 m/d" }},
		{"implausible_ground", func(q *HandQuery) { q.Porosity = "30 %" }, func(q *HandQuery) { q.Porosity = "31 %" }},
		{"implausible_ground", func(q *HandQuery) { q.Porosity = "0.2 %" }, func(q *HandQuery) { q.Porosity = "0.19 %" }},
		{"conductivity_and_porosity", func(q *HandQuery) { q.Porosity = "9.9 %"; q.Conductivity = "0.009 m/d" }, func(q *HandQuery) { q.Porosity = "10 %"; q.Conductivity = "0.009 m/d" }},
		// pi^2*0.044*0.75/(0.08*L^2) is 1e-4 /d at 201.77 m, and 5 /d at 0.9023 m.
		{"implausible_drain_rate", func(q *HandQuery) { q.base("201.7 m") }, func(q *HandQuery) { q.base("201.8 m") }},
		{"implausible_drain_rate", func(q *HandQuery) { q.base("0.903 m") }, func(q *HandQuery) { q.base("0.902 m") }},
		{"spacing_unusual", func(q *HandQuery) { q.Spacings = []string{"3 m", "30 m"} }, func(q *HandQuery) { q.Spacings = []string{"2.9 m"} }},
		{"spacing_unusual", func(q *HandQuery) { q.Spacings = []string{"30 m"} }, func(q *HandQuery) { q.Spacings = []string{"30.1 m"} }},
		{"formula_range", func(q *HandQuery) { q.Spacings, q.Radius = []string{"3 m"}, "0.3 m" }, func(q *HandQuery) { q.Spacings, q.Radius = []string{"2.9 m"}, "0.3 m" }},
		{"formula_range", func(q *HandQuery) { q.Radius = "0.318 m" }, func(q *HandQuery) { q.Radius = "0.319 m" }},
		{"equivalent_depth_differs", func(q *HandQuery) { q.Spacings, q.EquivalentDepth = []string{"8 m"}, "0.84 m" }, func(q *HandQuery) { q.Spacings, q.EquivalentDepth = []string{"8 m"}, "0.85 m" }}, // 0.7307 is computed
		{"equivalent_depth_fixed", func(q *HandQuery) { q.Spacings, q.EquivalentDepth = []string{"8 m"}, "0.8 m" }, func(q *HandQuery) { q.EquivalentDepth = "0.8 m" }},
		// 0.85*(L/2)^2/c is 365.25 d for c = 0.85*16 = 13.6 m2/y at 8 m.
		{"slow_to_act", func(q *HandQuery) { q.Spacings, q.Consolidation = []string{"8 m"}, "13.61 m2/y" }, func(q *HandQuery) { q.Spacings, q.Consolidation = []string{"8 m"}, "13.59 m2/y" }},
		// 4*0.044*9 of drains on the base over 64 is 24.75 mm/d with the water at the ground.
		{"steady_level_above_ground", func(q *HandQuery) { q.base("8 m"); q.Recharge = "24.7 mm/d" }, func(q *HandQuery) { q.base("8 m"); q.Recharge = "24.8 mm/d" }},
		// A quarter of 6.1875 mm/d, which the same drains carry at the working head of 1.5 m, holds the water at half of it.
		{"working_head_far", func(q *HandQuery) { q.base("8 m"); q.Recharge = "1.55 mm/d" }, func(q *HandQuery) { q.base("8 m"); q.Recharge = "1.54 mm/d" }},
	} {
		for _, raised := range []bool{false, true} {
			q := bareHand()
			if raised {
				tt.raise(&q)
			} else {
				tt.not(&q)
			}
			d, err := HandCheck(nil, q)
			if err != nil {
				t.Errorf("%s: %v", tt.code, err)
				continue
			}
			if got := slices.ContainsFunc(d.Warnings, func(w result.Warning) bool { return w.Code == tt.code }); got != raised {
				t.Errorf("%s of %+v: %v, %+v", tt.code, q, got, d.Warnings)
			}
		}
	}
	q := bareHand()
	q.Spacings = nil
	for l := range 15 {
		q.Spacings = append(q.Spacings, quantity.Format(100+float64(l), quantity.Length))
	}
	d, err := HandCheck(nil, q)
	if err != nil || !slices.ContainsFunc(d.Warnings, func(w result.Warning) bool { return strings.Contains(w.Text, "109 m and 5 more the drains") }) {
		t.Errorf("%v, %+v", err, d)
	}
}

// base sets drains on the base, at a spacing.
func (q *HandQuery) base(spacing string) { q.Spacings, q.Thickness = []string{spacing}, "" }
