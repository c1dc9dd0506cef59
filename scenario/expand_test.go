package scenario

import (
	"fmt"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"quietslope/scenario/quantity"
)

// TestListsAndLike: a study with lists and like is the study in which everything is written out.
func TestListsAndLike(t *testing.T) {
	const old = `-  - name: trenches
-    trench_drains:
-      spacing: 12 m
-      depth: 3.0 m
-      conductivity: 0.02 m/d
-      equivalent_depth: 0.85 m
-  - name: bored drains
-    bored_drains: {rate: 0.005 /d, level: 3.0 m}
-  - name: trial
-    set: {cover.seepage: 0.02 /d}
`
	study := func(options string) *Study {
		var edits strings.Builder
		edits.WriteString(old)
		for line := range strings.Lines(strings.TrimPrefix(options, "\n")) {
			edits.WriteString("+" + line)
		}
		return parseBase(t, edits.String())
	}
	short := study(`
  - name: trenches
    trench_drains: {spacing: [8 m, 12 m,16 m], depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 80 %}
  - name: bored drains
    bored_drains: {rate: 0.005 /d, level: 3.0 m, ceiling: 2 mm/d}
  - name: channels
    surface_water: {kept_out: 10 %}
  - name: both
    surface_water: {like: channels}
    trench_drains: {efficiency: 70 %, like: trenches, spacing: [20 m, 0.03 km]}
  - name: by rate
    trench_drains: {like: trenches, rate: 0.03 /d}
    bored_drains: {level: 2.0 m, like: bored drains}
  - name: trial
    set: {cover.seepage: [0.02 /d, 0.03 /d], deep.seepage: 0.008 /d}
`)
	long := study(`
  - name: trenches, spacing 8 m
    trench_drains: {spacing: 8 m, depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 80 %}
  - name: trenches, spacing 12 m
    trench_drains: {spacing: 12 m, depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 80 %}
  - name: trenches, spacing 16 m
    trench_drains: {spacing: 16 m, depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 80 %}
  - name: bored drains
    bored_drains: {rate: 0.005 /d, level: 3.0 m, ceiling: 2 mm/d}
  - name: channels
    surface_water: {kept_out: 10 %}
  - name: both, spacing 20 m
    surface_water: {kept_out: 10 %}
    trench_drains: {spacing: 20 m, depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 70 %}
  - name: both, spacing 0.03 km
    surface_water: {kept_out: 10 %}
    trench_drains: {spacing: 30 m, depth: 3.0 m, conductivity: 0.02 m/d, equivalent_depth: 0.85 m, efficiency: 70 %}
  - name: by rate
    trench_drains: {rate: 0.03 /d, depth: 3.0 m, efficiency: 80 %}
    bored_drains: {rate: 0.005 /d, level: 2.0 m, ceiling: 2 mm/d}
  - name: trial, cover.seepage 0.02 /d
    set: {cover.seepage: 0.02 /d, deep.seepage: 0.008 /d}
  - name: trial, cover.seepage 0.03 /d
    set: {cover.seepage: 0.03 /d, deep.seepage: 0.008 /d}
`)
	if diff := cmp.Diff(long.Options, short.Options, cmpopts.EquateNaNs(), cmpopts.IgnoreTypes(Place{}), cmpopts.IgnoreUnexported(Option{})); diff != "" {
		t.Errorf("(-written out +short):\n%s", diff)
	}
	// What was understood is the same too, but for the words of like themselves and what it takes over.
	value := func(s *Study, key string) string {
		for _, e := range s.Understood {
			if e.Key == key {
				return e.Value
			}
		}
		return ""
	}
	for key, want := range map[string]string{
		"options[1].name": "trenches, spacing 8 m", "options[6].trench_drains.like": "trenches", "options[6].trench_drains.depth": "3 m",
		"options[7].trench_drains.spacing": "30 m", "options[8].trench_drains.rate": "0.03 /d", "options[8].trench_drains.spacing": "",
	} {
		if got := value(short, key); got != want {
			t.Errorf("%s is understood as %q, want %q", key, got, want)
		}
	}
}

// TestPlaceOfTakenKey: what is wrong with a number that was taken over is said where it stands.
func TestPlaceOfTakenKey(t *testing.T) {
	s := parseBase(t, `
-  - name: bored drains
-    bored_drains: {rate: 0.005 /d, level: 3.0 m}
+  - name: wider
+    trench_drains: {like: trenches, spacing: 20 m}
`[1:])
	if p := s.PlaceOf("options[2].trench_drains.depth"); s.src.line(p.Line) != "      depth: 3.0 m" {
		t.Errorf("the place is line %d, %q", p.Line, s.src.line(p.Line))
	}
	if p := s.PlaceOf("options[2].trench_drains.spacing"); !strings.Contains(s.src.line(p.Line), "like: trenches") {
		t.Errorf("the place is line %d, %q", p.Line, s.src.line(p.Line))
	}
}

// TestListable: every number of a measure itself may be a list, and nothing else.
func TestListable(t *testing.T) {
	for _, k := range Keys() {
		measure := strings.HasPrefix(k.Path, "options[].") && strings.Count(k.Path, ".") > 1 &&
			!strings.Contains(k.Path, ".decline.") && !strings.HasPrefix(k.Path, "options[].cost.")
		number := k.Form == "number" || k.Form == "whole number" || len(k.Units) > 0
		if k.List != (measure && number) {
			t.Errorf("%s: a list may stand: %v", k.Path, k.List)
		}
	}
	if quantity.Length.Unit() != "m" { // the values above rely on it
		t.Error("lengths are not in m")
	}
}

// TestLongestList: a hundred values make an option each, one more is refused.
func TestLongestList(t *testing.T) {
	for _, n := range []int{100, 101} {
		var values []string
		for i := range n {
			values = append(values, fmt.Sprintf("%d m", i+1))
		}
		src, err := editStudy(baseStudy(t), "-      spacing: 12 m\n+      spacing: ["+strings.Join(values, ", ")+"]\n")
		if err != nil {
			t.Fatal(err)
		}
		s, err := Parse("study.yaml", []byte(src))
		if n == 100 && (err != nil || len(s.Options) != 103) || n == 101 && (err == nil || !strings.Contains(err.Error(), "at most 100 make an option each")) {
			t.Errorf("%d values: %v", n, err)
		}
	}
}

// TestSameName: names are found however their letters are encoded, and in any case.
func TestSameName(t *testing.T) {
	const composed, decomposed = "caf\u00e9", "cafe\u0301"
	s := parseBase(t, `
-  - {name: watch, level: 3.6 m}
-  - {name: onset, level: 4.2 m, until: 3.9 m}
+  - {name: watch, level: 3.6 m}
+  - {name: `[1:]+composed+`, level: 4.2 m, until: 3.9 m}
-  decide_on: onset
+  decide_on: `+decomposed+`
-  - name: trenches
+  - name: `+composed+`
-  - name: bored drains
-    bored_drains: {rate: 0.005 /d, level: 3.0 m}
+  - name: more
+    trench_drains: {like: `+strings.ToUpper(decomposed)+`, spacing: 20 m}
`)
	if s.Count.DecideOn != 1 || len(s.Options) != 4 || s.Options[2].Measures[0].Trench.Spacing != 20 {
		t.Errorf("decides on band %d; %+v", s.Count.DecideOn, s.Options)
	}
	if i := indexOfName(optionNames(s), "As It Stands"); i != 0 {
		t.Errorf("another case is found at %d", i)
	}
}
