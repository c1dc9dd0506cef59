package scenario

import (
	"context"
	"math"
	"os"
	"strings"
	"testing"
	"time"
)

// The studies testdata/seattle/more*.yaml are compared with tables from an independent program: an integrator with event
// location for the levels; recharge, bands and counts written apart (testdata/ref/seattle-more.py, whose tables these are).

const (
	refLevelTol = 1e-6 // m
	refApart    = 2e-6 // m; no reference level may be closer than this to a band, or a count could hang on rounding
)

// moreStudy reads testdata/seattle/NAME.yaml, with one text in it replaced by another where old is not empty.
func moreStudy(t *testing.T, name string, change ...string) *Study {
	t.Helper()
	path := "../testdata/seattle/" + name + ".yaml"
	src, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	text := string(src)
	for i := 0; i < len(change); i += 2 {
		if strings.Count(text, change[i]) != 1 {
			t.Fatalf("%s holds %q %d times", path, change[i], strings.Count(text, change[i]))
		}
		text = strings.Replace(text, change[i], change[i+1], 1)
	}
	s, err := Parse(path, []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// bareGround takes the soil block and the limit of infiltration from more-months.yaml.
var bareGround = []string{
	"  soil: {available_water: 40 mm, readily_available: 45 %, crop_factor: 0.95}\n", "",
	", infiltration_limit: 0.2 mm/h", "",
}

// monthGaps gives more-months.yaml the record with gaps.
var monthGaps = []string{"file: seattle-months.csv", "file: seattle-months-gaps.csv\n  gaps: month mean"}

func TestMoreRealWeather(t *testing.T) {
	for _, tt := range []struct {
		study, file string
		change      []string
		table, as   string // table of the levels, and what stands there instead of the condition; "" for the condition itself
	}{
		{"more", "more", nil, "more-levels", ""},
		{"more-scheme", "more-scheme", nil, "more-scheme-levels", ""},
		{"more-months", "more-months", nil, "more-months-levels", "with soil"},
		{"more-months-bare", "more-months", bareGround, "more-months-levels", "without soil"},
		{"more-months, month mean", "more-months", monthGaps, "more-months-levels", "with gaps"},
		{"more-gaps, zero", "more-gaps", []string{"gaps: month mean", "gaps: zero"}, "more-gaps-levels", "zero"},
		{"more-gaps, month mean", "more-gaps", nil, "more-gaps-levels", "month mean"},
	} {
		t.Run(tt.study, func(t *testing.T) {
			s := moreStudy(t, tt.file, tt.change...)
			worst := sameLevels(t, s, tt.study, "../testdata/ref/seattle-"+tt.table+".csv", tt.as)
			t.Logf("largest differences: levels %.1e m, recharge over the record %.1e mm, sum of levels %.1e m",
				worst.level, worst.recharge, worst.sum)
			sameBands(t, s, tt.file)
			sameCounts(t, s, tt.study)
		})
	}
}

type refDifference struct{ level, recharge, sum float64 }

// sameLevels compares the levels of every option in every condition with a table, and their sums over all steps, which
// the table may not hold.
func sameLevels(t *testing.T, s *Study, study, path, as string) (worst refDifference) {
	t.Helper()
	want, rows := table(t, path)
	sums, n := table(t, "../testdata/ref/seattle-more-sums.csv")
	seen := 0
	conditions := []string{"as built"}
	for _, c := range s.Conditions {
		conditions = append(conditions, c.Name)
	}
	for _, condition := range conditions {
		series, err := Levels(context.Background(), s, LevelsQuery{Condition: condition})
		if err != nil {
			t.Fatal(err)
		}
		at := map[string]int{}
		for i := range series.Rows {
			at[series.Time(i)] = i
		}
		column := func(name string) []string {
			if as != "" {
				return want[as+"/"+name]
			}
			if c, ok := want[condition+"/"+name]; ok {
				return c
			}
			return want["as built/"+name] // nothing of the option declines
		}
		for k, option := range series.Options {
			for _, layer := range []struct {
				name string
				got  []float64
			}{{"cover_m", series.Cover[k]}, {"deep_m", series.Deep[k]}} {
				ref := column(option + "/" + layer.name)
				if ref == nil {
					t.Fatalf("the reference has no %s of %q, %s", layer.name, option, condition)
				}
				far := 0.0
				where := ""
				for i := range rows {
					j, ok := at[want["time"][i]]
					if !ok {
						t.Fatalf("no step at %s", want["time"][i])
					}
					if d := math.Abs(layer.got[j] - number(t, ref[i])); !(d <= far) {
						far, where = d, want["time"][i]
					}
				}
				if !(far <= refLevelTol) {
					t.Errorf("%s, %s: %s differs by up to %g m at %s, more than %g m", condition, option, layer.name, far, where, refLevelTol)
				}
				worst.level = max(worst.level, far)
			}
			for i := range n {
				if sums["study"][i] != study || sums["condition"][i] != condition || sums["option"][i] != option {
					continue
				}
				seen++
				if steps := number(t, sums["steps"][i]); steps != float64(series.Rows) {
					t.Errorf("%d steps, want %v", series.Rows, steps)
				}
				if near := number(t, sums["nearest_band_m"][i]); !(near >= refApart) {
					t.Errorf("%s, %s: a reference level is %g m from a band, too close for an exact count", condition, option, near)
				}
				for _, c := range []struct {
					name  string
					got   []float64
					tol   float64
					worst *float64
				}{
					{"recharge_mm", series.Recharge[k], 1e-8, &worst.recharge}, // rounding of some thousand sums of some thousand mm
					{"cover_sum_m", series.Cover[k], 1e-6, &worst.sum},
					{"deep_sum_m", series.Deep[k], 1e-6, &worst.sum},
				} {
					total := 0.0
					for _, x := range c.got {
						total += x
					}
					d := math.Abs(total - number(t, sums[c.name][i]))
					if !(d <= c.tol) {
						t.Errorf("%s, %s: %s is %v, want %s", condition, option, c.name, total, sums[c.name][i])
					}
					*c.worst = max(*c.worst, d)
				}
			}
		}
	}
	if want := len(conditions) * len(s.Options); seen != want {
		t.Errorf("compared %d sums of %d", seen, want)
	}
	return worst
}

func sameBands(t *testing.T, s *Study, study string) {
	t.Helper()
	want, n := table(t, "../testdata/ref/seattle-more-bands.csv")
	seen := 0
	for i := range n {
		for _, b := range s.Bands {
			if want["study"][i] != study || want["band"][i] != b.Name {
				continue
			}
			seen++
			for what, got := range map[string]float64{"level_m": b.Level, "until_m": b.Until} {
				// The study holds levels that it works out to the nearest 1e-9 m.
				if ref := number(t, want[what][i]); !(math.Abs(got-ref) <= 0.5e-9+1e-12) {
					t.Errorf("band %s: %s is %v, want %v", b.Name, what, got, ref)
				}
			}
		}
	}
	if seen != len(s.Bands) {
		t.Errorf("compared %d bands of %d", seen, len(s.Bands))
	}
}

func sameCounts(t *testing.T, s *Study, study string) {
	t.Helper()
	c := compare(t, s)
	ref, n := table(t, "../testdata/ref/seattle-more-counts.csv")
	sums, _ := table(t, "../testdata/ref/seattle-more-sums.csv")
	for i, name := range sums["study"] {
		if name != study {
			continue
		}
		if want := time.Month(number(t, sums["year_starts"][i])).String(); c.Settings.YearStarts != want {
			t.Fatalf("years start in %s, want %s", c.Settings.YearStarts, want)
		}
		if want := number(t, sums["warm_up_years"][i]); float64(c.Record.WarmUpYears) != want {
			t.Fatalf("warm-up of %d years, want %v", c.Record.WarmUpYears, want)
		}
		if want := number(t, sums["steps_filled"][i]); float64(c.Record.GapsFilled) != want {
			t.Fatalf("%d steps filled, want %v", c.Record.GapsFilled, want)
		}
	}
	seen := 0
	for i := range n {
		for _, cs := range c.Cases {
			for _, o := range cs.Options {
				for _, b := range o.Bands {
					if ref["study"][i] != study || ref["condition"][i] != cs.Condition || ref["option"][i] != o.Name || ref["band"][i] != b.Name {
						continue
					}
					seen++
					years := number(t, ref["years_counted"][i])
					exact := func(what string, got float64) {
						if want := number(t, ref[what][i]); got != want {
							t.Errorf("%s, %s, %s: %s is %v, want %v", cs.Condition, o.Name, b.Name, what, got, want)
						}
					}
					exact("years_counted", float64(c.Record.YearsCounted))
					exact("events", float64(b.Events))
					exact("days", math.Round(b.DaysPerYear*years))
					exact("days_in_band", math.Round(b.DaysInBandPerYear*years))
					exact("years_with", math.Round(b.AnnualProbability*years))
					exact("longest_days", b.LongestDays)
					if want := number(t, ref["load_m_days"][i]); math.Abs(b.LoadMDaysPerYear*years-want) > 1e-6*max(1, want) {
						t.Errorf("%s, %s, %s: load is %v m·d, want %v", cs.Condition, o.Name, b.Name, b.LoadMDaysPerYear*years, want)
					}
					peak := 0.0
					if b.PeakExcessM != nil {
						peak = *b.PeakExcessM
					}
					if want := number(t, ref["peak_excess_m"][i]); math.Abs(peak-want) > refLevelTol {
						t.Errorf("%s, %s, %s: peak excess is %v m, want %v", cs.Condition, o.Name, b.Name, peak, want)
					}
				}
			}
		}
	}
	if want := (1 + len(s.Conditions)) * len(s.Options) * len(s.Bands); seen != want {
		t.Errorf("compared %d rows of %d", seen, want)
	}
}

// TestMoreSchemes holds the exact stores with converted rates and porosities to the stepping formulas themselves: the cover
// to rounding, and how far they are apart in the deep layer to what an independent program found.
func TestMoreSchemes(t *testing.T) {
	want, n := table(t, "../testdata/ref/seattle-more-schemes.csv")
	for i := range n {
		name := want["scheme"][i]
		s := moreStudy(t, "more-scheme", "scheme: centred", "scheme: "+name)
		found, err := Check(context.Background(), s)
		if err != nil {
			t.Fatal(err)
		}
		c := found.Conversion
		if c == nil || c.LargestDifference == nil {
			t.Fatalf("%s: the stores are not compared with the formula", name)
		}
		for _, v := range []struct {
			what     string
			got, tol float64
		}{
			{"cover_exact_per_day", c.Cover.ExactPerDay, 1e-13},
			{"cover_porosity", c.Cover.Porosity, 1e-13},
			{"deep_exact_per_day", c.Deep.ExactPerDay, 1e-13},
			{"deep_porosity", c.Deep.Porosity, 1e-13},
			{"cover_difference_m", c.LargestDifference.CoverM, 1e-10},
			{"deep_difference_m", c.LargestDifference.DeepM, 1e-9},
		} {
			if ref := number(t, want[v.what][i]); !(math.Abs(v.got-ref) <= v.tol) {
				t.Errorf("%s: %s is %v, want %v", name, v.what, v.got, ref)
			}
		}
		if c.LargestDifference.DeepAt != want["deep_at"][i] {
			t.Errorf("%s: the deep levels are furthest apart at %s, want %s", name, c.LargestDifference.DeepAt, want["deep_at"][i])
		}
	}

	// Levels and outflow of the cover by the trapezoidal rule itself, from the table.
	rule, rows := table(t, "../testdata/ref/seattle-more-scheme-levels.csv")
	s := moreStudy(t, "more-scheme")
	series, err := Levels(context.Background(), s, LevelsQuery{Options: []string{"as it stands"}})
	if err != nil {
		t.Fatal(err)
	}
	found, err := Check(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	cover := found.Conversion.Cover
	at := map[string]int{}
	for i := range series.Rows {
		at[series.Time(i)] = i
	}
	for i := range rows {
		got, ref := series.Cover[0][at[rule["time"][i]]], number(t, rule["by the scheme/as it stands/cover_m"][i])
		if !(math.Abs(got-ref) <= 1e-10) {
			t.Fatalf("cover at %s is at %v m, want %v", rule["time"][i], got, ref)
		}
		out := cover.ExactPerDay * 1000 * cover.Porosity * got // mm/d
		if want := cover.GivenPerDay * 1000 * cover.GivenPorosity * ref; !(math.Abs(out-want) <= 1e-10) {
			t.Fatalf("outflow of the cover at %s is %v mm/d, want %v", rule["time"][i], out, want)
		}
	}
}
