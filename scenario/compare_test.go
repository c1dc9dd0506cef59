package scenario

import (
	"context"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"runtime"
	"strconv"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"quietslope/cascade"
	"quietslope/cascade/scheme"
	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/scenario/weather"
)

func load(t testing.TB, path string) *Study {
	t.Helper()
	s, err := Load(path)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func compare(t testing.TB, s *Study) *result.Comparison {
	t.Helper()
	c, err := Compare(context.Background(), s, CompareQuery{})
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// table reads a CSV file without its lines that begin with #, as columns by name.
func table(t testing.TB, path string) (columns map[string][]string, rows int) {
	t.Helper()
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	r := csv.NewReader(f)
	r.Comment = '#'
	all, err := r.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	columns = map[string][]string{}
	for i, name := range all[0] {
		for _, row := range all[1:] {
			columns[name] = append(columns[name], row[i])
		}
	}
	return columns, len(all) - 1
}

func number(t testing.TB, text string) float64 {
	t.Helper()
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return x
}

// TestRealWeather replays four years of real daily rain and compares with an independent program: an integrator with
// event location for the levels, and a count written apart (testdata/ref/seattle.py, whose tables these are; the origin
// of the rain is in testdata/seattle/ORIGIN.md).
func TestRealWeather(t *testing.T) {
	const (
		levelTol = 1e-6 // m
		apart    = 2e-6 // m; no reference level may be closer than this to a band, or a count could hang on rounding
	)
	s := load(t, "../testdata/seattle/study.yaml")
	series, err := Levels(context.Background(), s, LevelsQuery{})
	if err != nil {
		t.Fatal(err)
	}
	want, rows := table(t, "../testdata/ref/seattle-levels.csv")
	if rows != series.Rows {
		t.Fatalf("%d rows, want %d", series.Rows, rows)
	}
	worst := 0.0
	for k, option := range series.Options {
		for _, layer := range []struct {
			name string
			got  []float64
		}{{"cover_m", series.Cover[k]}, {"deep_m", series.Deep[k]}} {
			column, ok := want[option+"/"+layer.name]
			if !ok {
				t.Fatalf("the reference has no %s of %q", layer.name, option)
			}
			for i := range rows {
				ref := number(t, column[i])
				worst = max(worst, math.Abs(layer.got[i]-ref))
				if layer.name != "deep_m" {
					continue
				}
				for _, b := range s.Bands {
					if math.Abs(ref-b.Level) < apart || math.Abs(ref-b.Until) < apart {
						t.Fatalf("reference level of %q at %s is too close to band %q for an exact count", option, want["time"][i], b.Name)
					}
				}
			}
		}
	}
	if !(worst <= levelTol) {
		t.Errorf("levels differ by up to %g m, more than %g m", worst, levelTol)
	}

	c := compare(t, s)
	ref, rows := table(t, "../testdata/ref/seattle-counts.csv")
	seen := 0
	for i := range rows {
		for _, o := range c.Cases[0].Options {
			for _, b := range o.Bands {
				if o.Name != ref["option"][i] || b.Name != ref["band"][i] {
					continue
				}
				seen++
				years := number(t, ref["years_counted"][i])
				exact := func(what string, got float64) {
					if want := number(t, ref[what][i]); got != want {
						t.Errorf("%s, %s: %s is %v, want %v", o.Name, b.Name, what, got, want)
					}
				}
				exact("years_counted", float64(c.Record.YearsCounted))
				exact("events", float64(b.Events))
				exact("days", math.Round(b.DaysPerYear*years))
				exact("years_with", math.Round(b.AnnualProbability*years))
				exact("longest_days", b.LongestDays)
				if want := number(t, ref["load_m_days"][i]); math.Abs(b.LoadMDaysPerYear*years-want) > 1e-6*max(1, want) {
					t.Errorf("%s, %s: load is %v m·d, want %v", o.Name, b.Name, b.LoadMDaysPerYear*years, want)
				}
				if b.PeakExcessM != nil && math.Abs(*b.PeakExcessM-number(t, ref["peak_excess_m"][i])) > levelTol {
					t.Errorf("%s, %s: peak excess is %v m, want %s", o.Name, b.Name, *b.PeakExcessM, ref["peak_excess_m"][i])
				}
			}
		}
	}
	if want := len(s.Options) * len(s.Bands); seen != want || rows != want {
		t.Errorf("compared %d rows of %d, want %d", seen, rows, want)
	}
}

// TestSameBytes holds the result to be the same on any number of processors, and from another folder.
func TestSameBytes(t *testing.T) {
	run := func(path string) string {
		out, err := json.Marshal(compare(t, load(t, path)))
		if err != nil {
			t.Fatal(err)
		}
		return string(out)
	}
	want := run("../testdata/demo/study.yaml")
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(0))
	for _, n := range []int{1, 2, 8} {
		runtime.GOMAXPROCS(n)
		if got := run("../testdata/demo/study.yaml"); got != want {
			t.Errorf("GOMAXPROCS=%d changes the result", n)
		}
	}
	absolute, err := filepath.Abs("../testdata/demo")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	if got := run(filepath.Join(absolute, "study.yaml")); got != want {
		t.Error("another folder changes the result")
	}
}

// TestOrderOfOptions: an option's figures do not depend on which other options stand beside it, or in what order.
func TestOrderOfOptions(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	all := compare(t, s)
	last := len(s.Options) - 1
	s.Options[1], s.Options[last] = s.Options[last], s.Options[1]
	turned := compare(t, s)
	for _, pair := range [][2]int{{0, 0}, {1, last}, {last, 1}} {
		if d := cmp.Diff(all.Cases[0].Options[pair[0]], turned.Cases[0].Options[pair[1]]); d != "" {
			t.Errorf("option %d differs (-before +after):\n%s", pair[0], d)
		}
	}
}

// ground is a study without a file: two stores, bands and whatever options a test gives it.
func ground(options ...Option) *Study {
	inf := math.Inf(1)
	options = append([]Option{{Name: "as it stands", Baseline: true}}, options...)
	return &Study{
		File: "study.yaml",
		Ground: Ground{
			Infiltration: 0.8, InfiltrationLimit: inf, Soil: &Soil{Available: 120, Readily: 0.5, CropFactor: 1},
			CoverThickness: 4, CoverPorosity: 0.06, CoverSeepage: 0.011, Percolation: 0.0045, PercolationCap: inf, CoverFullAt: 4,
			DeepThickness: 9, DeepPorosity: 0.014, DeepSeepage: 0.007, DeepFullAt: 9,
			WarmUpYears: -1, CalibratedTo: 4.9,
		},
		Bands:    []Band{{Name: "onset", GivenAs: "level", Level: 2.5, Until: 2.5}},
		Count:    Count{Apart: 10, Confidence: 0.9, Resamples: 200, Seed: 1, MeanBlock: 2, DecideBy: "load"},
		Options:  options,
		Site:     Site{GroundLevel: math.NaN()},
		Declared: Declared{},
	}
}

// invented is a record of made-up weather: showers that come in spells, a demand with the seasons.
func invented(seed uint64, years int) *weather.Record {
	rng := rand.New(rand.NewPCG(seed, 0))
	first := time.Date(1990, time.January, 1, 0, 0, 0, 0, time.UTC)
	n := int(first.AddDate(years, 0, 0).Sub(first).Hours() / 24)
	r := &weather.Record{First: first, Step: 24 * time.Hour, Rain: make([]float64, n), PET: make([]float64, n)}
	wet := false
	for i := range n {
		chance := 0.25
		if wet {
			chance = 0.65
		}
		if wet = rng.Float64() < chance; wet {
			r.Rain[i] = 7 * rng.ExpFloat64()
		}
		r.PET[i] = 1.9 - 1.7*math.Cos(2*math.Pi*float64(i)/365.25)
	}
	return r
}

// deepLevels replays one option over a record of years, after a warm-up of one year.
func deepLevels(t interface {
	Helper()
	Fatal(...any)
}, s *Study, option int, r *weather.Record) *trace {
	t.Helper()
	p := replayer{study: s, record: r, warm: warmUp{years: 1, passes: []int{365}}}
	tr, err := p.replay(context.Background(), newWorks(s, &s.Options[option], &asBuilt, asNew), period{to: len(r.Rain)})
	if err != nil {
		t.Fatal(err)
	}
	return tr
}

// Levels are the quotient of storages that are exact to 1e-10 of themselves.
const levelSlack = 1e-8 // m

// TestMoreDrainageNeverRaises: whatever is added to an option, the deep level is nowhere higher.
func TestMoreDrainageNeverRaises(t *testing.T) {
	inf := math.Inf(1)
	rapid.Check(t, func(t *rapid.T) {
		trench := TrenchDrains{
			Depth: rapid.Float64Range(0.2, 4).Draw(t, "depth"), Rate: rapid.Float64Range(1e-4, 2).Draw(t, "rate"),
			Equivalent: math.NaN(), Efficiency: rapid.Float64Range(0.1, 1).Draw(t, "efficiency"), Ceiling: inf,
		}
		bores := BoredDrains{
			Rate: rapid.Float64Range(1e-4, 1).Draw(t, "bored rate"), Level: rapid.Float64Range(0, 9).Draw(t, "level"),
			Efficiency: 1, Ceiling: rapid.SampledFrom([]float64{inf, 0.3}).Draw(t, "ceiling"),
		}
		faster, deeper := trench, trench
		faster.Rate *= rapid.Float64Range(1, 5).Draw(t, "times")
		deeper.Depth += rapid.Float64Range(0, 4-trench.Depth).Draw(t, "plus")
		cut := rapid.Float64Range(0, 0.5).Draw(t, "kept out")
		option := func(ms ...Measure) Option { return Option{Name: "option", Measures: ms} }
		s := ground(
			option(Measure{Trench: &trench}),
			option(Measure{Trench: &faster}),
			option(Measure{Trench: &deeper}),
			option(Measure{Trench: &trench}, Measure{Bored: &bores}),
			option(Measure{Trench: &trench}, Measure{Cut: &SurfaceWater{KeptOut: cut}}),
		)
		r := invented(rapid.Uint64().Draw(t, "seed"), 2)
		before := deepLevels(t, s, 0, r)
		with := deepLevels(t, s, 1, r)
		lower(t, "trenches", with, before)
		for k, what := range []string{"faster trenches", "deeper trenches", "bored drains too", "water kept out too"} {
			lower(t, what, deepLevels(t, s, k+2, r), with)
		}
	})
}

func lower(t *rapid.T, what string, more, less *trace) {
	for i := range more.deep {
		if more.deep[i] > less.deep[i]+levelSlack || more.cover[i] > less.cover[i]+levelSlack {
			t.Fatalf("%s: step %d stands at %v m (cover %v m), without at %v m (cover %v m)",
				what, i, more.deep[i], more.cover[i], less.deep[i], less.cover[i])
		}
	}
}

// TestPracticeAgrees holds what people who work with such slopes expect: common practice, no source.
func TestPracticeAgrees(t *testing.T) {
	s := ground(Option{Name: "trenches", Measures: []Measure{{Trench: &TrenchDrains{
		Depth: 3, Rate: 0.05, Equivalent: math.NaN(), Efficiency: 1, Ceiling: math.Inf(1)}}}})
	r := invented(7, 6)
	before, after := deepLevels(t, s, 0, r), deepLevels(t, s, 1, r)

	t.Run("draining the cover lowers the deep level", func(t *testing.T) {
		if a, b := total(after.deep)/total(before.deep), largest(after.deep)/largest(before.deep); a > 0.95 || b > 0.95 {
			t.Errorf("the mean falls to %.3f and the highest to %.3f of what they were", a, b)
		}
	})
	t.Run("a band is passed with the deep layer far from full", func(t *testing.T) {
		top := largest(before.deep)
		if !(top > s.Bands[0].Level && top < s.Ground.DeepFullAt/2) {
			t.Errorf("the highest level is %.2f m; the band begins at %v m, the layer is full at %v m", top, s.Bands[0].Level, s.Ground.DeepFullAt)
		}
	})
	t.Run("a lower rate reacts more slowly, rising and falling", func(t *testing.T) {
		slow := ground()
		slow.Ground.DeepSeepage /= 3
		fast := before
		slower := deepLevels(t, slow, 0, r)
		// Both move about means of their own; what counts is how fast, so levels are taken in their own spread.
		if rise, fall := speeds(fast.deep); true {
			slowRise, slowFall := speeds(slower.deep)
			if !(slowRise < rise && slowFall < fall) {
				t.Errorf("per day and spread: rising %.4f against %.4f, falling %.4f against %.4f", slowRise, rise, slowFall, fall)
			}
		}
	})
}

// speeds are the fastest rise and fall in a step, as a share of the mean level.
func speeds(h []float64) (rise, fall float64) {
	for i := 1; i < len(h); i++ {
		rise = max(rise, h[i]-h[i-1])
		fall = max(fall, h[i-1]-h[i])
	}
	mean := total(h) / float64(len(h))
	return rise / mean, fall / mean
}

// TestSupply works the water that enters by hand.
func TestSupply(t *testing.T) {
	r := &weather.Record{Step: 24 * time.Hour, Rain: []float64{10, 0, 100}, PET: []float64{2, 3, 1}}
	inf := math.Inf(1)
	soil := func(factor float64) *Soil { return &Soil{Available: 100, Readily: 0.5, CropFactor: factor} }
	for _, tt := range []struct {
		name    string
		ground  Ground
		keptOut float64
		pet     bool
		want    []float64
	}{
		{"infiltration", Ground{Infiltration: 0.8, InfiltrationLimit: inf}, 0, false, []float64{8, 0, 80}},
		{"limit of 2 mm/h over a day", Ground{Infiltration: 0.8, InfiltrationLimit: 2}, 0, false, []float64{8, 0, 48}},
		{"a tenth kept out of what the limit lets in", Ground{Infiltration: 0.8, InfiltrationLimit: 2}, 0.1, false, []float64{7.2, 0, 43.2}},
		{"less the demand", Ground{Infiltration: 0.8, InfiltrationLimit: inf}, 0, true, []float64{6, -3, 79}},
		// From field capacity: 8 in, 2 asked; then 3 drawn from the soil; then 80 in, 1 asked, 3 to fill up.
		{"with a soil", Ground{Infiltration: 0.8, InfiltrationLimit: inf, Soil: soil(1)}, 0, true, []float64{6, 0, 76}},
		{"crop factor", Ground{Infiltration: 0.8, InfiltrationLimit: inf, Soil: soil(2)}, 0, true, []float64{4, 0, 72}},
	} {
		t.Run(tt.name, func(t *testing.T) {
			record := *r
			if !tt.pet {
				record.PET = nil
			}
			got := make([]float64, len(r.Rain))
			newSupply(&tt.ground, uptake{keptOut: tt.keptOut, petFactor: 1}, &record).fill(got, 0)
			for i := range got {
				if math.Abs(got[i]-tt.want[i]) > 1e-12 {
					t.Errorf("got %v, want %v", got, tt.want)
					break
				}
			}
		})
	}
}

// TestKeptOutMultiplies: shares that several measures keep out leave the product of what each lets in.
func TestKeptOutMultiplies(t *testing.T) {
	s := ground(Option{Name: "both", Measures: []Measure{{Cut: &SurfaceWater{KeptOut: 0.1}}, {Cut: &SurfaceWater{KeptOut: 0.5}}}})
	if got := newWorks(s, &s.Options[1], &asBuilt, asNew).keptOut; math.Abs(got-0.55) > 1e-15 {
		t.Errorf("%v is kept out, want 0.55", got)
	}
}

// TestEqualOptionsShareARank: figures that differ by their last digits only are equal.
func TestEqualOptionsShareARank(t *testing.T) {
	s := load(t, "../testdata/demo/study.yaml")
	s.Options = append(s.Options,
		Option{Name: "the same by another way", Measures: []Measure{{Key: "set", Set: []Assignment{{Key: "surface.infiltration", Value: 0.85 * 0.9}}}}},
		Option{Name: "the same again", Measures: []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.1}}}})
	ranks := map[string]int{}
	for _, o := range compare(t, s).Cases[0].Options {
		ranks[o.Name] = o.Decision.Rank
	}
	if r := ranks["lined channels"]; ranks["the same by another way"] != r || ranks["the same again"] != r || ranks["trenches, spacing 24 m"] != r+3 {
		t.Errorf("ranks %v", ranks)
	}
}

// TestDryOptionBalances: an option under which hardly any water reaches the cover is no fault of the program, however
// much passed in the warm-up.
func TestDryOptionBalances(t *testing.T) {
	for _, share := range []float64{0.75, 0.85, 0.95, 1} {
		for _, years := range []int{-1, 5, 8} {
			s := load(t, "../testdata/demo/study.yaml")
			s.Ground.WarmUpYears = years
			s.Options = append(s.Options, Option{Name: "dry", Measures: []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: share}}}})
			compare(t, s)
		}
	}
}

// TestAnyLegalStudyRuns: whatever a legal study says, it is compared, or refused as bad input. It is no fault of ours.
func TestAnyLegalStudyRuns(t *testing.T) {
	dir := t.TempDir()
	var b strings.Builder
	b.WriteString("date,rain_mm,pet_mm\n")
	r := invented(11, 3)
	for i := range r.Rain {
		fmt.Fprintf(&b, "%s,%.1f,%.2f\n", r.Start(i).Format(time.DateOnly), r.Rain[i], r.PET[i])
	}
	daily := filepath.Join(dir, "weather.csv")
	if err := os.WriteFile(daily, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	b.Reset()
	b.WriteString("date,rain_mm,pet_mm\n")
	for i := range 60 {
		if i != 17 { // a gap
			fmt.Fprintf(&b, "%d-%02d,%d,%d\n", 1990+i/12, i%12+1, 20*(i%7), 10*(i%12))
		}
	}
	monthly := filepath.Join(dir, "monthly.csv")
	if err := os.WriteFile(monthly, []byte(b.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	rapid.Check(t, func(t *rapid.T) {
		some := func(name string, xs ...float64) float64 { return rapid.SampledFrom(xs).Draw(t, name) }
		inf := math.Inf(1)
		s := ground(
			Option{Name: "trenches", Measures: []Measure{{Key: "trench_drains", Trench: &TrenchDrains{
				Depth: some("depth", 0.1, 2, 4), Spacing: some("spacing", 1e-300, 1e-3, 1, 12, 1000), Conductivity: 0.04,
				Equivalent: some("equivalent", 0, 0.8), Efficiency: some("efficiency", 0, 0.5, 1), Ceiling: some("ceiling", 1e-5, 2, inf)}}}},
			Option{Name: "bores", Measures: []Measure{{Key: "bored_drains", Bored: &BoredDrains{
				Rate: some("rate", 1e-300, 1e-3, 1, 1e6), Level: some("level", 0, 3, 9), Efficiency: 1, Ceiling: some("bored ceiling", 1e-5, 2, inf)}}}},
			Option{Name: "dry", Measures: []Measure{{Key: "surface_water", Cut: &SurfaceWater{KeptOut: some("kept out", 0, 0.5, 0.9, 1)}}}},
			Option{Name: "green", Measures: []Measure{
				{Key: "vegetation", Vegetation: &Vegetation{PETFactor: some("pet factor", 0, 1, 1.2, 5), Interception: some("interception", 0, 0.1, 1)}},
				{Key: "cut_off_drain", CutOff: &CutOffDrain{Intercepted: some("intercepted", 0, 0.6, 1)}},
			}},
			everything(),
		)
		if rapid.Bool().Draw(t, "conditions") {
			s.Conditions = []Condition{{Name: "old", Drains: some("drains left", 0, 0.45, 1), SurfaceWater: some("surface water left", 0, 0.6, 1), Vegetation: some("plants left", 0, 0.5, 1)}}
		}
		s.Weather = WeatherSpec{File: "weather.csv", Path: daily, Time: "date", Format: "YYYY-MM-DD", Rain: WeatherColumn{"rain_mm", "mm"}}
		if rapid.Bool().Draw(t, "months") {
			s.Weather.Path, s.Weather.Format = monthly, "YYYY-MM"
			s.Weather.Gaps = rapid.SampledFrom([]weather.Gaps{weather.GapsZero, weather.GapsMonthMean}).Draw(t, "gaps")
		}
		if rapid.Bool().Draw(t, "pet") {
			s.Weather.PET = &WeatherColumn{"pet_mm", "mm"}
		}
		g := &s.Ground
		if s.Weather.PET == nil || rapid.Bool().Draw(t, "no soil") {
			g.Soil = nil
		} else {
			g.Soil = &Soil{Available: some("available", 1e-9, 10, 300), Readily: some("readily", 0, 0.5, 0.95), CropFactor: some("crop factor", 0, 1, 5)}
		}
		g.Infiltration, g.InfiltrationLimit = some("infiltration", 0, 1e-6, 0.05, 0.3, 1), some("limit", 0.01, 2, inf)
		g.CoverThickness, g.CoverPorosity = some("cover thickness", 4, 300), some("cover porosity", 1e-5, 0.06, 1)
		g.CoverSeepage, g.Percolation = some("seepage", 0, 1e-4, 0.01, 1e6), some("percolation", 1e-4, 0.005, 1e6)
		g.PercolationCap = some("percolation ceiling", 1e-5, 1, inf)
		g.CoverFullAt = some("cover full at", g.CoverThickness, g.CoverThickness/2, inf)
		g.DeepPorosity, g.DeepSeepage, g.Lateral = some("deep porosity", 1e-5, 0.014, 1), some("deep seepage", 1e-5, 1e-3, 0.1, 1e6), some("lateral", 0, 0.1, 1e5)
		g.DeepFullAt = some("deep full at", 9, 3, inf)
		g.WarmUpYears = int(some("warm-up", -1, 0, 1, 8))
		g.Scheme = rapid.SampledFrom([]scheme.Scheme{scheme.Exact, scheme.Centred, scheme.Explicit, scheme.Implicit}).Draw(t, "scheme")
		g.SchemeStep = some("scheme step", 1, 1.0/24, 30)
		if len(g.notConverted()) > 0 { // the decoder refuses it
			g.Scheme = scheme.Exact
		}
		if rapid.Bool().Draw(t, "start given") {
			g.Start = &StartLevels{Cover: some("start cover", 0, min(1, g.CoverFullAt)), Deep: some("start deep", 0, 3)}
		}
		s.Bands[0].Level = some("band", 1e-3, 1, 2.9)
		s.Bands[0].Until = s.Bands[0].Level * some("until", 0, 0.5, 1)
		s.Count.Apart = some("apart", 0, 10, 3660)
		s.Count.Resamples = 100

		for name, run := range map[string]func() error{
			"compare": func() error {
				c, err := Compare(context.Background(), s, CompareQuery{})
				if err == nil {
					_, err = json.Marshal(c) // refuses NaN and infinity
				}
				return err
			},
			"check": func() error {
				c, err := Check(context.Background(), s)
				if err == nil {
					_, err = json.Marshal(c)
				}
				return err
			},
		} {
			var fe *fault.Error
			if err := run(); err != nil && !errors.As(err, &fe) {
				t.Fatalf("%s: %v", name, err)
			}
		}
	})
}

// TestBrokenBalanceIsRefused: water that does not add up is not reported as a result.
func TestBrokenBalanceIsRefused(t *testing.T) {
	s := ground()
	tr := deepLevels(t, s, 0, invented(3, 1))
	if err := tr.checkBalance(&cascade.Totals{}, 100, 100); err != nil {
		t.Fatal(err)
	}
	for name, spoil := range map[string]func(*trace){
		"cover": func(t *trace) { t.whole.Cover.Seepage += 1e-5 },
		"deep":  func(t *trace) { t.whole.Deep.Seepage += 1e-5 },
	} {
		spoilt := *tr
		spoil(&spoilt)
		if err := spoilt.checkBalance(&cascade.Totals{}, 100, 100); err == nil || !strings.Contains(err.Error(), name+" store") {
			t.Errorf("%s: %v", name, err)
		}
	}
}
