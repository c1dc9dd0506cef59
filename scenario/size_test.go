package scenario

import (
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
	"quietslope/stats"
)

const demoStudy = "../testdata/demo/study.yaml"

// demoText is the demo with parts of its text changed: an old text and a new one in turn.
func demoText(t testing.TB, edits ...string) string {
	t.Helper()
	src, err := os.ReadFile(demoStudy)
	if err != nil {
		t.Fatal(err)
	}
	return edited(t, string(src), edits...)
}

func edited(t testing.TB, text string, edits ...string) string {
	t.Helper()
	for i := 0; i < len(edits); i += 2 {
		if !strings.Contains(text, edits[i]) {
			t.Fatalf("the study has no %q", edits[i])
		}
		text = strings.Replace(text, edits[i], edits[i+1], 1)
	}
	return text
}

func parsed(t testing.TB, text string) *Study {
	t.Helper()
	s, err := Parse(demoStudy, []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func size(t testing.TB, s *Study, option, vary, between string) *result.Size {
	t.Helper()
	found, err := Size(context.Background(), s, SizeQuery{Option: option, Vary: vary, Between: between})
	if err != nil {
		t.Fatal(err)
	}
	return found
}

const trenchSpacings = "spacing: [8 m, 12 m, 16 m, 24 m]"

// TestSizeMeetsBruteForce: on the demo the answer is the last spacing of a scan in steps of 0.1 % before the first that misses
// the target, to half a per cent, and at one per cent wider the target is missed. The scan replays studies that are written
// out, and counts the days itself.
func TestSizeMeetsBruteForce(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long")
	}
	found := size(t, parsed(t, demoText(t)), "trenches", "trench_drains.spacing", "4 m .. 40 m")
	if found.Answer == nil || found.Beyond == nil {
		t.Fatalf("no answer: %s", found.Reason)
	}

	values := []float64{found.Answer.Value, math.Round(1.01e4*found.Answer.Value) / 1e4}
	for v := 4.0; v < 13.5; {
		values = append(values, v)
		if v < 11.5 { // far from the answer, where any miss would be seen too
			v *= 1.01
		} else {
			v *= 1.001
		}
	}
	p, err := prepare(context.Background(), parsed(t, demoText(t)))
	if err != nil {
		t.Fatal(err)
	}
	days := make([]float64, len(values))
	err = each(len(values), func(i int) error {
		s, err := Parse(demoStudy, []byte(demoText(t, trenchSpacings, fmt.Sprintf("spacing: %g m", values[i]))))
		if err != nil {
			return err
		}
		days[i], err = p.daysAbove(s, 1, s.Bands[1].Level)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	const target = 2
	if !(days[0] <= target) || !(days[1] > target) {
		t.Errorf("%g m: %g days a year, and %g m: %g, with a target of %d", values[0], days[0], values[1], days[1], target)
	}
	first := 2 + slices.IndexFunc(days[2:], func(d float64) bool { return d > target })
	if first < 3 {
		t.Fatal("the scan misses nothing, or everything")
	}
	last := values[first-1]
	if got := found.Answer.Value; math.Abs(got/last-1) > 0.005 {
		t.Errorf("the answer is %g m, and %g m by brute force", got, last)
	}
	if math.Abs(days[0]-found.Answer.Figure) > 1e-9 {
		t.Errorf("%g days a year at the answer, counted %g", found.Answer.Figure, days[0])
	}
}

// TestSizeWideRange: however wide the range, the answer is worked out to half a per cent of itself.
func TestSizeWideRange(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long")
	}
	s := parsed(t, demoText(t, "options:\n", "options:\n  - name: drier ground\n    set: {cover.seepage: 0.011 /d}\n"))
	for _, tt := range []struct{ option, vary, usual, wide string }{
		{"trenches", "trench_drains.spacing", "8 m .. 20 m", "0.01 m .. 10 km"},
		{"bored drains", "bored_drains.rate", "0.01 /d .. 1 /d", "1e-9 /d .. 1e6 /d"},
		{"drier ground", "set.cover.seepage", "0.011 /d .. 0.1 /d", "0 /d .. 1e6 /d"},
	} {
		usual, wide := size(t, s, tt.option, tt.vary, tt.usual), size(t, s, tt.option, tt.vary, tt.wide)
		if usual.Beyond == nil || wide.Beyond == nil {
			t.Fatalf("%s: no answer within the ranges", tt.vary)
		}
		if a, b := usual.Answer.Value, wide.Answer.Value; math.Abs(a-b) > 0.0051*min(a, b) {
			t.Errorf("%s: %g over %s, %g over %s", tt.vary, a, tt.usual, b, tt.wide)
		}
		if a, b := wide.Answer.Value, wide.Beyond.Value; math.Abs(a-b) > 0.0051*min(a, b) {
			t.Errorf("%s: over %s %g meets the target, and what misses it is %g", tt.vary, tt.wide, a, b)
		}
	}
}

// daysAbove counts the days a year on which the deep level of an option of a study on the same record stands above a level, as
// the mean over the ages of its drains.
func (p *prepared) daysAbove(s *Study, option int, level float64) (float64, error) {
	days := 0.0
	for _, part := range s.row(newWorks(s, &s.Options[option], &asBuilt, asNew), &asBuilt) {
		t, err := p.replayer.replay(context.Background(), part.works, p.counted)
		if err != nil {
			return 0, err
		}
		for _, h := range t.deep[p.counted.from:p.counted.to] {
			if h > level {
				days += part.weight
			}
		}
		p.replayer.drop(t.recharge, t.cover, t.deep)
	}
	return days / float64(p.counted.years), nil
}

// TestSizeMeetsCompare: every figure of a curve is that of compare, to the last bit, where the study has that value.
func TestSizeMeetsCompare(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long")
	}
	for _, tt := range []struct {
		option, vary, between string
		at                    []string // the two ends of the range are among them
		written               func(value string) []string
		compared              string // what the option is called there
		also                  []string
	}{
		{"trenches", "trench_drains.spacing", "6 m .. 31 m", []string{"6 m", "31 m"},
			func(v string) []string { return []string{trenchSpacings, "spacing: " + v} }, "trenches", nil},
		{"bored drains", "bored_drains.rate", "0.002 .. 0.05 /d", []string{"0.002 /d", "0.05 /d"},
			func(v string) []string { return []string{"rate: 0.005 /d", "rate: " + v} }, "bored drains", []string{"target: {days: 2}", "target: {load: 8}"}},
		{"bored drains", "bored_drains.decline.half_life", "3 .. 40 y", []string{"3 y", "40 y"},
			func(v string) []string { return []string{"half_life: 10 y", "half_life: " + v} }, "bored drains", []string{"target: {days: 2}", "target: {days: 27}"}},
		{"lined channels", "surface_water.kept_out", "1 % .. 30 %", []string{"1 %", "30 %"},
			func(v string) []string { return []string{"kept_out: 10 %", "kept_out: " + v} }, "lined channels", []string{"target: {days: 2}", "target: {return_period: 20 y}"}},
	} {
		found := size(t, parsed(t, demoText(t, tt.also...)), tt.option, tt.vary, tt.between)
		if found.Answer == nil || found.Beyond == nil {
			t.Errorf("%s: no answer: %s %+v", tt.vary, found.Reason, found.Curve)
			continue
		}
		points := append(slices.Clone(found.Curve), *found.Answer, *found.Beyond)
		at := append([]string{found.Answer.Text, found.Beyond.Text, found.Curve[12].Text}, tt.at...)
		for _, text := range at {
			i := slices.IndexFunc(points, func(p result.SizePoint) bool { return p.Text == text })
			if i < 0 {
				t.Fatalf("%s is no point of the curve", text)
			}
			point := points[i]
			c := compare(t, parsed(t, demoText(t, append(tt.written(text), tt.also...)...)))
			o := c.Cases[0].Options[slices.IndexFunc(c.Cases[0].Options, func(o result.Option) bool { return o.Name == tt.compared })]
			band := &o.Bands[1]
			want := result.SizePoint{
				Value: point.Value, Text: text, Step: point.Step,
				Figure: band.DaysPerYear, CI: band.DaysPerYearCI, Meets: o.Decision.MeetsTarget, Metres: o.Cost.Metres, PresentValue: &o.Cost.PresentValue,
			}
			switch found.Measure {
			case "load":
				want.Figure, want.CI = band.LoadMDaysPerYear, band.LoadMDaysPerYearCI
			case "annual_probability":
				want.Figure, want.CI = band.AnnualProbability, &band.AnnualProbabilityCI
			}
			if d := cmp.Diff(want, point); d != "" {
				t.Errorf("%s %s: compare (-) and size (+) differ:\n%s", tt.vary, text, d)
			}
			if text != found.Answer.Text {
				continue
			}
			if d := cmp.Diff(o.Measures, found.Measures); d != "" {
				t.Errorf("%s %s: %s", tt.vary, text, d)
			}
			for k, s := range found.States {
				if w := o.States[k]; s.State != w.State || s.EffectShare != w.EffectShare || s.MeetsTarget != w.MeetsTarget {
					t.Errorf("%s %s: state %+v, compare has %+v", tt.vary, text, s, w)
				}
			}
			if len(found.States) != len(o.States) {
				t.Errorf("%s %s: %d states, compare has %d", tt.vary, text, len(found.States), len(o.States))
			}
		}
	}
}

// TestSizeStates: the states of the answer are in the figure of the target, though another one ranks the options.
func TestSizeStates(t *testing.T) {
	found := size(t, parsed(t, demoText(t)), "trenches", "trench_drains.spacing", "4 m .. 40 m")
	c := compare(t, parsed(t, demoText(t, trenchSpacings, "spacing: "+found.Answer.Text, "decide_by: load", "decide_by: days")))
	want := c.Cases[0].Options[1]
	if d := cmp.Diff(want.States, found.States); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(want.TimeToEffect, found.TimeToEffect); d != "" || found.TimeToEffect == nil {
		t.Errorf("time to effect: %s", d)
	}
	if found.DrainsAs != stateMean || len(found.States) != 6 || found.States[1].Value != found.Answer.Figure {
		t.Errorf("drains %s, states %+v", found.DrainsAs, found.States)
	}
}

// TestSizeAnswer: whatever the target is set on, the answer meets it, the value beyond misses it and is less than half a
// per cent away, and every value that was tried has at most four digits.
func TestSizeAnswer(t *testing.T) {
	for _, tt := range []struct {
		target, option, vary, between string
		measure                       string
		most                          float64
	}{
		{"days: 2", "trenches", "trench_drains.spacing", "4 m .. 40 m", "days", 2},
		{"days: 2", "trenches", "trench_drains.spacing", "13 ft .. 130 ft", "days", 2},
		{"load: 1.5", "trenches", "trench_drains.spacing", "4 m .. 40 m", "load", 1.5},
		{"events: 0.1", "trenches", "trench_drains.spacing", "4 m .. 40 m", "events", 0.1},
		{"annual_probability: 5 %", "trenches", "trench_drains.spacing", "4 m .. 40 m", "annual_probability", 0.05},
		{"return_period: 20 y", "trenches", "trench_drains.spacing", "4 m .. 40 m", "annual_probability", 0.05},
		{"days: 2", "lined channels", "surface_water.kept_out", "0 .. 40 %", "days", 2},
		{"days: 2", "trenches, spacing 12 m", "trench_drains.decline.flushed_every", "0.5 y .. 20 y", "days", 2},
		{"load: 3", "Trenches, spacing 16 M", "trench_drains.efficiency", "30 % .. 100 %", "load", 3}, // names differ in case only
		{"days: 5", "24 m with channels", "trench_drains.depth", "1 m .. 4 m", "days", 5},
	} {
		found := size(t, parsed(t, demoText(t, "days: 2", tt.target)), tt.option, tt.vary, tt.between)
		if found.Target == nil || found.Target.Measure != tt.measure || found.Target.Value != tt.most || found.Measure != tt.measure {
			t.Errorf("%s %s: target %+v, measure %s", tt.target, tt.vary, found.Target, found.Measure)
		}
		a, b := found.Answer, found.Beyond
		if a == nil || b == nil {
			t.Errorf("%s %s: no answer: %s", tt.target, tt.vary, found.Reason)
			continue
		}
		if a.Meets == "no" || b.Meets != "no" || stats.Less(tt.most, a.Figure) || !stats.Less(tt.most, b.Figure) {
			t.Errorf("%s %s: answer %+v, beyond %+v", tt.target, tt.vary, *a, *b)
		}
		if math.Abs(a.Value-b.Value) > 0.005*a.Value*(1+1e-9) {
			t.Errorf("%s %s: between %v and %v", tt.target, tt.vary, a.Value, b.Value)
		}
		points := append(slices.Clone(found.Curve), *a, *b)
		if s := found.Shown; s != nil {
			points = append(points, *s)
			if s.Meets != "yes" || s.CI != nil && stats.Less(tt.most, s.CI[1]) || saferAbove[tt.vary] != (s.Value >= a.Value) && s.Value != a.Value {
				t.Errorf("%s %s: shown %+v, answer %+v", tt.target, tt.vary, *s, *a)
			}
		}
		for _, p := range points {
			number, _, _ := strings.Cut(p.Text, " ")
			if digits := strings.Trim(strings.Replace(number, ".", "", 1), "0"); len(digits) > 4 {
				t.Errorf("%s %s: %q has more than four digits", tt.target, tt.vary, p.Text)
			}
		}
		if n := len(found.Curve); n != scanned || !slices.IsSortedFunc(found.Curve, func(a, b result.SizePoint) int { return int(math.Copysign(1, a.Value-b.Value)) }) {
			t.Errorf("%s %s: a curve of %d points, or not in order", tt.target, tt.vary, n)
		}
	}
}

// TestSizeUnits: values are those of a study in the unit of the range, whatever that is, and in the base unit as numbers.
func TestSizeUnits(t *testing.T) {
	s := parsed(t, demoText(t))
	for _, tt := range []struct {
		vary, option, between string
		unit, first, last     string
		lo, hi                float64
	}{
		{"trench_drains.spacing", "trenches", "400 .. 4000 cm", "m", "400 cm", "4000 cm", 4, 40},
		{"trench_drains.spacing", "trenches", "80 cm .. 4 m", "m", "0.8 m", "4 m", 0.8, 4},
		{"trench_drains.decline.half_life", "trenches, spacing 8 m", "5 y .. 30 y", "d", "5 y", "30 y", 5 * 365.25, 30 * 365.25},
		{"surface_water.kept_out", "lined channels", "0 .. 0.4", "share", "0 %", "40 %", 0, 0.4},
		{"bored_drains.rate", "bored drains", "0.001 .. 0.02 1/d", "/d", "0.001 /d", "0.02 /d", 0.001, 0.02},
	} {
		z, err := newSizing(s, SizeQuery{Option: tt.option, Vary: tt.vary, Between: tt.between})
		if err != nil {
			t.Errorf("%s: %v", tt.between, err)
			continue
		}
		grid := z.grid()
		lo, hi := grid[0], grid[len(grid)-1]
		if lo != tt.lo || hi != tt.hi || z.text(lo) != tt.first || z.text(hi) != tt.last || z.baseUnit() != tt.unit {
			t.Errorf("%s: %v (%s) to %v (%s) in %s", tt.between, lo, z.text(lo), hi, z.text(hi), z.baseUnit())
		}
	}
}

// TestSizeGrid: the scan has 25 values with as few digits as keep them apart, and none outside the range.
func TestSizeGrid(t *testing.T) {
	s := parsed(t, demoText(t))
	for _, tt := range []struct {
		between  string
		n        int
		contains []string
	}{
		{"4 m .. 40 m", 25, []string{"4.4 m", "13 m", "36 m"}},
		{"4 m .. 8 m", 25, []string{"4.2 m", "6 m", "7.8 m"}},
		{"12 m .. 12.5 m", 25, []string{"12.02 m", "12.48 m"}},
		{"12 m .. 12.1 m", 11, []string{"12.05 m"}},
		{"12.00001 m .. 12.00002 m", 2, nil},
		{"0.001 m .. 1000 m", 25, []string{"1 m"}},
	} {
		z, err := newSizing(s, SizeQuery{Option: "trenches", Vary: "trench_drains.spacing", Between: tt.between})
		if err != nil {
			t.Fatal(err)
		}
		var texts []string
		for i, v := range z.grid() {
			texts = append(texts, z.text(v))
			if v < z.lo || v > z.hi || i > 0 && v <= z.grid()[i-1] {
				t.Errorf("%s: %s is out of order", tt.between, z.text(v))
			}
		}
		if len(texts) != tt.n {
			t.Errorf("%s: %d values: %s", tt.between, len(texts), strings.Join(texts, ", "))
		}
		for _, text := range tt.contains {
			if !slices.Contains(texts, text) {
				t.Errorf("%s: no %s in %s", tt.between, text, strings.Join(texts, ", "))
			}
		}
	}
}

// TestSizeEnds: what is said where the range holds no answer, or where it is an end.
func TestSizeEnds(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long")
	}
	const vary = "trench_drains.spacing"
	for _, tt := range []struct {
		what, between         string
		edits                 []string
		answer, shown, reason string
		codes                 []string
	}{
		{"nothing meets", "20 m .. 40 m", nil, "", "", "No value of the range meets the target. Look below 20 m where such works can be built, or combine measures.", nil},
		{"all meet", "4 m .. 11 m", nil, "11 m", "11 m", "Every value of the range meets the target, so the answer is its end. Look above 11 m too.", nil},
		{"only figures meet", "12.3 m .. 12.7 m", nil, "12.7 m", "", "Every value of the range meets the target, so the answer is its end. Look above 12.7 m too.", []string{"target_not_shown"}},
		{"the record is too short", "4 m .. 40 m", []string{"{days: 2}", "{annual_probability: 5 %}"}, "12.94 m", "", "", []string{"target_not_shown"}},
		{"no target", "4 m .. 40 m", []string{"target: {days: 2}", "", "decide_by: load", "decide_by: days"}, "", "", "The study has no target. Give count.target, such as {days: 2}, to have the value found.", nil},
	} {
		found := size(t, parsed(t, demoText(t, tt.edits...)), "trenches", vary, tt.between)
		text := func(p *result.SizePoint) string {
			if p == nil {
				return ""
			}
			return p.Text
		}
		if text(found.Answer) != tt.answer || text(found.Shown) != tt.shown || found.Reason != tt.reason {
			t.Errorf("%s: answer %q, shown %q, %q", tt.what, text(found.Answer), text(found.Shown), found.Reason)
		}
		var codes []string
		for _, w := range found.Warnings {
			if strings.HasPrefix(w.Code, "target_not") || strings.HasPrefix(w.Code, "target_met") {
				codes = append(codes, w.Code)
			}
		}
		if !slices.Equal(codes, tt.codes) {
			t.Errorf("%s: %q", tt.what, codes)
		}
	}
	found := size(t, parsed(t, demoText(t)), "bored drains", "bored_drains.rate", "0.001 .. 0.01 /d")
	if want := "No value of the range meets the target. Look above 0.01 /d where such works can be built, or combine measures."; found.Answer != nil || found.Reason != want || found.Safer != "higher" || found.States != nil {
		t.Errorf("answer %+v, %s", found.Answer, found.Reason)
	}
	found = size(t, parsed(t, demoText(t)), "trenches, spacing 24 m", "trench_drains.efficiency", "30 % .. 100 %")
	if want := "No value of the range meets the target. Combine measures, or choose other works."; found.Reason != want {
		t.Error(found.Reason)
	}
	// On the contact nothing flows below the trenches, and their radius is of no account.
	found = size(t, parsed(t, demoText(t, "depth: 3.0 m", "depth: 4.0 m")), "trenches, spacing 24 m", "trench_drains.drain_radius", "5 cm .. 30 cm")
	if !strings.Contains(found.Reason, "The figure is the same at every value") || found.Curve[0].Figure == 0 {
		t.Errorf("%s: %+v", found.Reason, found.Curve[0])
	}
}

// everyNumber is the demo with options that have every number of every measure.
func everyNumber(t testing.TB) *Study {
	text, _, found := strings.Cut(demoText(t,
		"    seepage: 0.007 /d ", "    lateral_inflow: 0.05 mm/d\n    seepage: 0.007 /d ", "surface: {infiltration: 85 %}", "surface: {infiltration: 85 %, infiltration_limit: 8 mm/h}",
		"file: weather.csv", "file: weather.csv"), "\noptions:\n")
	if !found {
		t.Fatal("the demo has no options")
	}
	return parsed(t, text+`
options:
  - name: as it stands
  - name: spacing
    trench_drains: {spacing: 24 m, depth: 3 m, efficiency: 80 %, decline: {half_life: 12 y, flushed_every: 5 y, restored_to: 95 %}}
  - name: rate
    trench_drains: {rate: 0.02 /d, depth: 3 m, ceiling: 2 mm/d}
  - name: bores
    bored_drains: {rate: 0.005 /d, level: 3 m, ceiling: 1 mm/d, decline: {half_life: 12 y, flushed_every: 5 y, restored_to: 95 %}}
  - name: others
    surface_water: {kept_out: 5 %}
    vegetation: {pet_factor: 1.1}
    cut_off_drain: {intercepted: 50 %}
  - name: ground
    set: {cover.seepage: 0.011 /d}
  - name: ground with trenches
    set: {cover.conductivity: 0.04 m/d}
    trench_drains: {spacing: 24 m, depth: 3 m}
`)
}

// TestSizeDirections: for every number that can be sized the table says at which end of a range the works do more: there the
// load above the lowest band is less.
func TestSizeDirections(t *testing.T) {
	s := everyNumber(t)
	ranges := map[string][2]string{ // by key: the option, and a range of usual values
		"trench_drains.depth":                 {"rate", "2 m .. 3.9 m"}, // of a spacing the rate hangs on the depth too
		"trench_drains.rate":                  {"rate", "0.005 .. 0.05 /d"},
		"trench_drains.spacing":               {"spacing", "8 m .. 40 m"},
		"trench_drains.conductivity":          {"spacing", "0.01 m/d .. 0.1 m/d"},
		"trench_drains.conductivity_below":    {"spacing", "0.01 m/d .. 0.1 m/d"},
		"trench_drains.drain_radius":          {"spacing", "5 cm .. 50 cm"},
		"trench_drains.equivalent_depth":      {"spacing", "0.1 m .. 1 m"},
		"trench_drains.working_head":          {"spacing", "0.1 m .. 3 m"},
		"trench_drains.efficiency":            {"spacing", "30 % .. 100 %"},
		"trench_drains.ceiling":               {"rate", "0.1 mm/d .. 3 mm/d"},
		"trench_drains.decline.half_life":     {"spacing", "5 y .. 40 y"},
		"trench_drains.decline.flushed_every": {"spacing", "1 y .. 20 y"},
		"trench_drains.decline.restored_to":   {"spacing", "40 % .. 100 %"},
		"bored_drains.rate":                   {"bores", "0.001 .. 0.01 /d"},
		"bored_drains.level":                  {"bores", "1 m .. 5 m"},
		"bored_drains.efficiency":             {"bores", "30 % .. 100 %"},
		"bored_drains.ceiling":                {"bores", "0.01 .. 0.5 mm/d"},
		"bored_drains.decline.half_life":      {"bores", "5 y .. 40 y"},
		"bored_drains.decline.flushed_every":  {"bores", "1 y .. 20 y"},
		"bored_drains.decline.restored_to":    {"bores", "40 % .. 100 %"},
		"surface_water.kept_out":              {"others", "0 .. 20 %"},
		"vegetation.pet_factor":               {"others", "0.9 .. 1.2"},
		"vegetation.interception":             {"others", "0 .. 10 %"},
		"cut_off_drain.intercepted":           {"others", "0 .. 90 %"},
		"set.surface.infiltration":            {"ground", "70 % .. 90 %"},
		"set.surface.infiltration_limit":      {"ground", "0.3 mm/h .. 2 mm/h"},
		"set.soil.available_water":            {"ground", "60 mm .. 200 mm"},
		"set.soil.readily_available":          {"ground", "20 % .. 90 %"},
		"set.soil.crop_factor":                {"ground", "0.8 .. 1.2"},
		"set.cover.drainable_porosity":        {"ground with trenches", "4 % .. 15 %"},
		"set.cover.seepage":                   {"ground", "0.005 .. 0.03 /d"},
		"set.cover.percolation":               {"ground", "0.002 .. 0.009 /d"},
		"set.cover.percolation_ceiling":       {"ground", "0.2 .. 1 mm/d"},
		"set.cover.conductivity":              {"ground with trenches", "0.01 m/d .. 0.1 m/d"},
		"set.cover.full_at":                   {"ground", "0.5 m .. 4 m"},
		"set.deep.drainable_porosity":         {"ground", "1 % .. 2 %"},
		"set.deep.seepage":                    {"ground", "0.005 .. 0.01 /d"},
		"set.deep.lateral_inflow":             {"ground", "0 .. 0.2 mm/d"},
		"set.deep.full_at":                    {"ground", "5.5 m .. 9 m"},
	}
	for key, safer := range saferAbove {
		of, known := ranges[key]
		if !known {
			t.Errorf("%s has no range here", key)
			continue
		}
		z, err := newSizing(s, SizeQuery{Option: of[0], Vary: key, Between: of[1]})
		if err != nil {
			t.Errorf("%s: %v", key, err)
			continue
		}
		if err := z.prepare(context.Background()); err != nil {
			t.Errorf("%s: %v", key, err)
			continue
		}
		var load [2]float64
		for i, end := range []float64{z.lo, z.hi} {
			_, f, err := z.replay(context.Background(), end)
			if err != nil {
				t.Fatalf("%s: %v", key, err)
			}
			load[i] = f[0].Bands[0].LoadMDaysPerYear
		}
		if safer {
			load[0], load[1] = load[1], load[0]
		}
		if !(load[0] < load[1]) {
			t.Errorf("%s: a load of %g at the safe end, %g at the other", key, load[0], load[1])
		}
	}
}

// TestSizeKnowsNumbers: the tables of directions hold every number of every measure once, and nothing else.
func TestSizeKnowsNumbers(t *testing.T) {
	var keys []string
	add := func(key string, s *shape) {
		keys = append(keys, key)
		_, directed := saferAbove[key]
		_, idle := noLevel[key]
		if directed == idle {
			t.Errorf("%s is in neither table, or in both", key)
		}
		if s.form == formWhole && !idle {
			t.Errorf("%s is a whole number, which size does not vary", key)
		}
	}
	for _, o := range optionFields {
		fields, _ := measureFields(o.name)
		for i := range fields {
			f := &fields[i]
			if f.listable() {
				add(join(o.name, f.name), &f.shape)
			}
			for k := range f.shape.fields {
				if inner := &f.shape.fields[k]; inner.listable() {
					add(join(join(o.name, f.name), inner.name), &inner.shape)
				}
			}
		}
	}
	if n := len(saferAbove) + len(noLevel); n != len(keys) {
		t.Errorf("the tables have %d numbers, the measures %d", n, len(keys))
	}
}

// TestSizeKeys: what can be varied are the numbers of the option that act, and no others.
func TestSizeKeys(t *testing.T) {
	s := everyNumber(t)
	var all []string
	for key := range saferAbove {
		all = append(all, key)
	}
	slices.Sort(all)
	if got := slices.Sorted(slices.Values(s.SizeKeys(""))); !slices.Equal(got, all) {
		t.Errorf("of all options: %q", got)
	}
	for option, want := range map[string]string{
		"as it stands": "",
		"RATE":         "trench_drains.depth trench_drains.rate trench_drains.efficiency trench_drains.ceiling",
		"others":       "surface_water.kept_out vegetation.pet_factor vegetation.interception cut_off_drain.intercepted",
		"nobody":       "",
	} {
		if got := strings.Join(s.SizeKeys(option), " "); got != want {
			t.Errorf("%s: %s", option, got)
		}
	}
	demo := parsed(t, demoText(t))
	if got := demo.SizeKeys("trenches"); !slices.Contains(got, "trench_drains.spacing") || !slices.Contains(got, "trench_drains.decline.half_life") {
		t.Errorf("of a list: %q", got)
	}
	if got, want := demo.SizeOptions()[:3], []string{"as it stands", "trenches", "trenches, spacing 8 m"}; !slices.Equal(got, want) {
		t.Errorf("%q", got)
	}
}

// TestSizeMeetsAgain: storms a month apart keep the level above the band all winter without drains, as one event; drains let it
// fall in between, so that there are several; strong ones keep all but the first below it. A target of one event a year is
// met without drains, missed with some, and met with more, which is the answer.
func TestSizeMeetsAgain(t *testing.T) {
	dir := t.TempDir()
	var record strings.Builder
	record.WriteString("date,rain_mm\n")
	for day := time.Date(2000, 1, 1, 0, 0, 0, 0, time.UTC); day.Year() < 2012; day = day.AddDate(0, 0, 1) {
		rain := 0
		if m := day.Month(); day.Day() == 1 && (m >= time.November || m <= time.March) {
			rain = 40
		}
		fmt.Fprintf(&record, "%s,%d\n", day.Format(time.DateOnly), rain)
	}
	if err := os.WriteFile(filepath.Join(dir, "weather.csv"), []byte(record.String()), 0o666); err != nil {
		t.Fatal(err)
	}
	s, err := Parse(filepath.Join(dir, "study.yaml"), []byte(`study: storms
weather: {file: weather.csv, columns: {time: {name: date, format: YYYY-MM-DD}, rain: {name: rain_mm, unit: mm}}}
ground:
  cover: {thickness: 4 m, drainable_porosity: 6 %, seepage: 0.1 /d, percolation: 0.3 /d}
  deep: {thickness: 9 m, drainable_porosity: 1 %, seepage: 0.01 /d}
bands: [{name: onset, level: 2.7 m}]
count: {apart: 0 d, decide_by: events, target: {events: 1}, year_starts: August}
options:
  - name: as it stands
  - name: bores
    bored_drains: {rate: 0.01 /d, level: 0 m}
`))
	if err != nil {
		t.Fatal(err)
	}
	found := size(t, s, "bores", "bored_drains.rate", "0.0001 .. 0.3 /d")
	a, b := found.Answer, found.Beyond
	if a == nil || a.Value < 0.041 || a.Value > 0.057 || a.Figure != 1 || b.Figure != 2 {
		t.Errorf("answer %+v, beyond %+v", a, b)
	}
	want := []string{"0.0076 /d", "0.00074 /d", "0.00053 /d", "0.00038 /d", "0.00027 /d", "0.00019 /d", "0.00014 /d", "0.0001 /d"}
	if !slices.Equal(found.MeetsAgain, want) {
		t.Errorf("met again at %q", found.MeetsAgain)
	}
	i := slices.IndexFunc(found.Warnings, func(w result.Warning) bool { return w.Code == "target_met_again" })
	if i < 0 || !strings.Contains(found.Warnings[i].Text, "met again: 0.0076 /d, 0.00074 /d to 0.0001 /d. ") {
		t.Errorf("warnings %+v", found.Warnings)
	}

	// Where the safe end misses there is no answer, though other values meet the target.
	found = size(t, s, "bores", "bored_drains.rate", "0.0001 .. 0.03 /d")
	if found.Answer != nil || len(found.MeetsAgain) == 0 || !strings.HasPrefix(found.Reason, "The safe end of the range, 0.03 /d, misses the target") {
		t.Errorf("answer %+v, again %q: %s", found.Answer, found.MeetsAgain, found.Reason)
	}
}

// TestSizeCondition: in a condition the works are sized for what it leaves of them.
func TestSizeCondition(t *testing.T) {
	s := parsed(t, demoText(t, "\nsite:", "\nconditions:\n  - {name: worn, drains: 60 %}\n\nsite:"))
	built := size(t, s, "trenches", "trench_drains.spacing", "4 m .. 40 m")
	worn, err := Size(context.Background(), s, SizeQuery{"trenches", "trench_drains.spacing", "4 m .. 40 m", "Worn", ""})
	if err != nil {
		t.Fatal(err)
	}
	if built.Condition != "as built" || worn.Condition != "worn" || !(worn.Answer.Value < 0.95*built.Answer.Value) {
		t.Errorf("%s: %s, %s: %s", built.Condition, built.Answer.Text, worn.Condition, worn.Answer.Text)
	}
	for _, w := range append(built.Warnings, worn.Warnings...) {
		if w.Code == "condition_changes_nothing" || w.Code == "drain_runs_rarely" { // which is of another option
			t.Errorf("%+v", w)
		}
	}
	c := compare(t, parsed(t, demoText(t, trenchSpacings, "spacing: "+worn.Answer.Text, "\nsite:", "\nconditions:\n  - {name: worn, drains: 60 %}\n\nsite:")))
	if got, want := worn.Answer.Figure, c.Cases[1].Options[1].Bands[1].DaysPerYear; got != want {
		t.Errorf("%v days a year, compare has %v", got, want)
	}
}

// TestSizeLawOfACondition: the replay by the quadratic law is of works as built, so that in a condition nothing is said of it.
func TestSizeLawOfACondition(t *testing.T) {
	s := parsed(t, demoText(t, "law: quadratic", "working_head: 1.2 m", "\nsite:", "\nconditions:\n  - {name: worn, drains: 99 %}\n\nsite:"))
	for condition, want := range map[string]bool{"": true, "worn": false} {
		found, err := Size(context.Background(), s, SizeQuery{"trenches", "trench_drains.spacing", "4 m .. 40 m", condition, ""})
		if err != nil {
			t.Fatal(err)
		}
		if got := slices.ContainsFunc(found.Warnings, func(w result.Warning) bool { return w.Code == "linear_law_far" }); got != want {
			t.Errorf("condition %q: %v", condition, found.Warnings)
		}
	}
}

// TestSizeFixedDepth: an equivalent depth that is given does not follow the spacing, which is said; at the answer it is held against the computed one too.
func TestSizeFixedDepth(t *testing.T) {
	codes := func(found *result.Size) string {
		var codes []string
		for _, w := range found.Warnings {
			if strings.HasPrefix(w.Code, "equivalent_depth") {
				codes = append(codes, w.Severity+" "+w.Code)
			}
		}
		return strings.Join(codes, ", ")
	}
	given := parsed(t, demoText(t, "depth: 3.0 m", "depth: 3.0 m\n      equivalent_depth: 0.5 m"))
	for _, tt := range []struct {
		study                 *Study
		option, vary, between string
		want                  string
	}{
		{parsed(t, demoText(t)), "trenches", "trench_drains.spacing", "4 m .. 40 m", ""},
		{given, "trenches", "trench_drains.spacing", "4 m .. 40 m", "note equivalent_depth_differs, warn equivalent_depth_fixed"},
		{given, "trenches, spacing 8 m", "trench_drains.depth", "2 m .. 3.5 m", "note equivalent_depth_differs, warn equivalent_depth_fixed"},
		{given, "lined channels", "surface_water.kept_out", "0 .. 30 %", ""},
	} {
		if got := codes(size(t, tt.study, tt.option, tt.vary, tt.between)); got != tt.want {
			t.Errorf("%s: %q, want %q", tt.vary, got, tt.want)
		}
	}
}

// TestSizeCost: a cost that does not go with the number is said to be that of the study.
func TestSizeCost(t *testing.T) {
	s := parsed(t, demoText(t))
	for key, of := range map[string]struct {
		option, between string
		same            bool
	}{
		"trench_drains.spacing":               {"trenches", "10 m .. 12 m", false},
		"surface_water.kept_out":              {"lined channels", "0 .. 30 %", true},
		"trench_drains.depth":                 {"shallow trenches", "1 m .. 3 m", true},
		"trench_drains.decline.flushed_every": {"shallow trenches", "2 y .. 6 y", false},
	} {
		found := size(t, s, of.option, key, of.between)
		if said := slices.ContainsFunc(found.Warnings, func(w result.Warning) bool { return w.Code == "cost_not_sized" }); said != of.same {
			t.Errorf("%s: %v", key, said)
		}
	}
	found := size(t, s, "trenches", "trench_drains.spacing", "10 m .. 20 m")
	for i, p := range found.Curve {
		if i == len(found.Curve)-1 {
			if p.Step != nil {
				t.Errorf("the end of the curve has the step %+v", p.Step)
			}
			continue
		}
		// By hand, from the row and the next one.
		next := found.Curve[i+1]
		less, more := next.Figure-p.Figure, *p.PresentValue-*next.PresentValue
		if step := p.Step; math.Abs(step.Less-less) > 1e-12 || math.Abs(*step.LessPer100Metres-100*less/(*p.Metres-*next.Metres)) > 1e-9 ||
			(step.CostPerLess == nil) != (less <= 0) || less > 0 && math.Abs(*step.CostPerLess/(more/less)-1) > 1e-12 {
			t.Errorf("%s: %+v", p.Text, step)
		}
		if math.Abs(*p.Metres*p.Value-12000) > 1e-6 {
			t.Errorf("%s: %g m of drain on 12000 m2", p.Text, *p.Metres)
		}
	}
}

// TestSizeRefuses holds what a person reads who asks for what cannot be sized.
func TestSizeRefuses(t *testing.T) {
	s := everyNumber(t)
	const spacing = "trench_drains.spacing"
	for _, tt := range []struct {
		q    SizeQuery
		want string
	}{
		{SizeQuery{"spacings", spacing, "4 m .. 40 m", "", ""}, `--option: the study has no "spacings"; did you mean "spacing"?`},
		{SizeQuery{"as it stands", spacing, "4 m .. 40 m", "", ""}, `--option: "as it stands" does nothing, so it has no number to vary`},
		{SizeQuery{"spacing", spacing, "4 m .. 40 m", "neglected", ""}, `--condition: the study has no "neglected"` + "\n  it has: as built"},
		{SizeQuery{"spacing", "spacing", "4 m .. 40 m", "", ""}, `--vary: "spacing" is no number of the option "spacing"; did you mean trench_drains.spacing?`},
		{SizeQuery{"spacing", "trench_drain.spacing", "4 m .. 40 m", "", ""}, `--vary: "trench_drain.spacing" is no number of the option "spacing"; did you mean trench_drains.spacing?`},
		{SizeQuery{"spacing", "trench_drains.law", "4 m .. 40 m", "", ""}, `--vary: "trench_drains.law" is no number of the option "spacing"` + "\n  it has: trench_drains.depth"},
		{SizeQuery{"spacing", "cost.per_metre", "4 .. 40", "", ""}, `--vary: "cost.per_metre" is no number of the option "spacing"`},
		{SizeQuery{"rate", spacing, "4 m .. 40 m", "", ""}, `--vary: trench_drains.spacing has no place beside trench_drains.rate, which "rate" gives`},
		{SizeQuery{"bores", "bored_drains.number", "4 .. 40", "", ""}, `--vary: bored_drains.number changes what the drains cost and no level, so no value of it can meet a target`},
		{SizeQuery{"ground", "set.deep.consolidation", "1 .. 4 m2/y", "", ""}, `--vary: set.deep.consolidation changes the time until trenches act and no level, so no value of it can meet a target`},
		{SizeQuery{"spacing", spacing, "4 m", "", ""}, `--between: "4 m" is not a range; write two values of a length, such as 1 .. 4 m`},
		{SizeQuery{"spacing", spacing, "40 m .. 4 m", "", ""}, `--between: "40 m .. 4 m" does not rise; write the smaller value first, 4 m .. 40 m`},
		{SizeQuery{"spacing", spacing, "4 .. 40", "", ""}, `--between: "4 .. 40" has no unit; write 4 .. 40 m`},
		{SizeQuery{"others", "vegetation.pet_factor", "1 m .. 2 m", "", ""}, `--between: "2 m": a number without a unit is wanted here; write 2`},
		{SizeQuery{"spacing", spacing, "0 m .. 40 m", "", ""}, `--between: trench_drains.spacing cannot be 0 m: `},
		{SizeQuery{"spacing", spacing, "-4 m .. 40 m", "", ""}, `--between: trench_drains.spacing cannot be -4 m: `},
		{SizeQuery{"spacing", spacing, "0.1 mm .. 40 m", "", ""}, `--between: trench_drains.spacing cannot be 0.0001 m: the drains work out at `},
		{SizeQuery{"rate", "trench_drains.depth", "1 m .. 5 m", "", ""}, `--between: trench_drains.depth cannot be 5 m: `},
		{SizeQuery{"others", "surface_water.kept_out", "0 .. 150 %", "", ""}, `--between: surface_water.kept_out cannot be 150 %: `},
		{SizeQuery{"bores", "bored_drains.level", "1 m .. 99 m", "", ""}, `--between: bored_drains.level cannot be 99 m: `},
	} {
		_, err := Size(context.Background(), s, tt.q)
		var f *fault.Error
		if !errors.As(err, &f) {
			t.Errorf("%+v: %v", tt.q, err)
		} else if !strings.HasPrefix(err.Error(), tt.want) {
			t.Errorf("%+v:\n got %v\nwant %s", tt.q, err, tt.want)
		}
	}

	demo := parsed(t, demoText(t))
	_, err := Size(context.Background(), demo, SizeQuery{"trenches", "trench_drains.depth", "1 m .. 4 m", "", ""})
	if want := `--option: "trenches" is a list over trench_drains.spacing; to size another number name one of its options, such as "trenches, spacing 8 m"`; err == nil || err.Error() != want {
		t.Errorf("%v", err)
	}
	_, err = Size(context.Background(), demo, SizeQuery{"nobody", "trench_drains.depth", "1 m .. 4 m", "", ""})
	if err == nil || !strings.Contains(err.Error(), "it has: trenches\n          as it stands\n          trenches, spacing 8 m") {
		t.Errorf("%v", err)
	}

	alone, _, _ := strings.Cut(demoText(t, "  decide_on: movement onset ", "  # "), "\n  - name: trenches\n")
	_, err = Size(context.Background(), parsed(t, edited(t, alone, "target: {days: 2}", "")), SizeQuery{"as it stands", spacing, "4 m .. 40 m", "", ""})
	if err == nil || !strings.Contains(err.Error(), "count.decide_on: several bands are given, so say which of them the option is sized on: give decide_on") {
		t.Errorf("%v", err)
	}
}

// TestSizeStops: a sizing that is broken off says so.
func TestSizeStops(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Size(ctx, parsed(t, demoText(t)), SizeQuery{"trenches", "trench_drains.spacing", "4 m .. 40 m", "", ""}); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
}

// TestSizeDrains: sized for a state of its drains an option has the figures that it has in that state, and is sized safer the
// less is left of them.
func TestSizeDrains(t *testing.T) {
	s := parsed(t, demoText(t))
	last := math.Inf(1)
	for _, in := range []string{stateNew, stateMean, stateBefore, stateHalf} {
		q := SizeQuery{Option: "trenches", Vary: "trench_drains.spacing", Between: "4 m .. 20 m", Drains: in}
		if in == stateMean { // its own
			q.Drains = ""
		}
		found, err := Size(context.Background(), s, q)
		if err != nil {
			t.Fatal(err)
		}
		if found.DrainsAs != in || !(found.Answer.Value < last) {
			t.Errorf("%s: sized as %s at %s", in, found.DrainsAs, found.Answer.Text)
		}
		last = found.Answer.Value
		k := slices.IndexFunc(found.States, func(r result.State) bool { return r.State == in })
		if r := found.States[k]; r.Value != found.Answer.Figure || !cmp.Equal(r.CI, found.Answer.CI) || r.MeetsTarget != found.Answer.Meets || len(found.States) != 6 {
			t.Errorf("%s: %+v, want %+v", in, r, found.Answer)
		}
	}
	for in, want := range map[string]string{
		"all_stopped": `--drains: with all drains stopped there is nothing to size; use as_new, before_flush, never_flushed or half_stopped`,
		"clogged":     `--drains: the drains of "trenches, spacing 8 m" have no state "clogged"; use as_new, before_flush, never_flushed or half_stopped`,
	} {
		_, err := Size(context.Background(), s, SizeQuery{Option: "trenches", Vary: "trench_drains.spacing", Between: "4 m .. 20 m", Drains: in})
		if err == nil || err.Error() != want {
			t.Errorf("%s: %v, want %s", in, err, want)
		}
	}
	_, err := Size(context.Background(), s, SizeQuery{Option: "lined channels", Vary: "surface_water.kept_out", Between: "0 .. 40 %", Drains: stateHalf})
	if want := `--drains: "lined channels" has no drains; leave --drains out`; err == nil || err.Error() != want {
		t.Errorf("%v, want %s", err, want)
	}
}
