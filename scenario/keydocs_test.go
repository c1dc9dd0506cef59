package scenario

import (
	"os"
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode"
	"unicode/utf8"

	"github.com/google/go-cmp/cmp"

	"quietslope/scenario/quantity"
)

// TestKeys: every key that is read is described, in one form, and says what holds when it is left out.
func TestKeys(t *testing.T) {
	seen := map[string]bool{}
	for _, k := range Keys() {
		first, _ := utf8.DecodeRuneInString(k.Says)
		switch {
		case k.Says == "":
			t.Errorf("%s has no description", k.Path)
		case strings.HasSuffix(k.Says, ".") || !unicode.IsLower(first) || !oneLine(k.Says) || strings.TrimSpace(k.Says) != k.Says:
			t.Errorf("%s: %q is to be one line that begins in lower case and ends without a full stop", k.Path, k.Says)
		case utf8.RuneCountInString(k.Says) > 100:
			t.Errorf("%s: the description is too long: %q", k.Path, k.Says)
		}
		if seen[k.Path] {
			t.Errorf("%s is listed twice", k.Path)
		}
		seen[k.Path] = true
		given := 0
		for _, says := range []bool{k.Required, k.Default != "", k.Absent != ""} {
			if says {
				given++
			}
		}
		// The keys of a block that may be left out say for themselves what stands in for them.
		if given > 1 || given == 0 && k.Form != "block" {
			t.Errorf("%s: required %v, default %q, absent %q: one of them is wanted", k.Path, k.Required, k.Default, k.Absent)
		}
		if strings.HasSuffix(k.Absent, ".") {
			t.Errorf("%s: %q ends with a full stop", k.Path, k.Absent)
		}
		if k.Form == "word" && len(k.Words) == 0 {
			t.Errorf("%s: no words", k.Path)
		}
	}
}

func TestKeysSamples(t *testing.T) {
	all := map[string]KeyDoc{}
	for _, k := range Keys() {
		all[k.Path] = k
	}
	for _, want := range []KeyDoc{
		{Path: "bands", Form: "list of blocks", Required: true},
		{Path: "weather.missing", Form: "list of texts", Default: `["", NA]`},
		{Path: "ground.cover.percolation_ceiling", Form: "flux", Units: quantity.Flux.Units(), Words: []string{"none"}, Range: "above 0 mm/d and at most 100000 mm/d", Default: "none"},
		{Path: "ground.warm_up", Form: "whole number of years", Words: []string{"auto"}, Range: "from 0 y to 1000 y", Absent: "by default auto, or 0 y where start gives levels"},
		{Path: "options[].trench_drains.depth", Form: "length", Units: quantity.Length.Units(), Range: "above 0 m and at most 500 m", Required: true, List: true},
		{Path: "options[].set.cover.seepage", Form: "rate", Units: quantity.Rate.Units(), Range: "from 0 /d to 1000000 /d", Absent: "by default as in ground", List: true},
		{Path: "bands[].loss_per_event", Form: "sum of money", Range: "from 0 to 1e13", Default: "0"},
		{Path: "count.target.return_period", Form: "time", Units: quantity.Duration.Units(), Range: "from 1 y to 1000 y", Absent: oneTarget},
		{Path: "money.discount_rate", Form: "share", Units: quantity.Share.Units(), Range: "from 0 % to below 100 %", Required: true},
		{Path: "options[].trench_drains.decline", Form: "block", Words: []string{"none"}, Default: "none"},
		{Path: "options[].bored_drains.decline.half_life", Form: "time", Units: quantity.Duration.Units(), Range: "above 0 d and at most 1000 y", Required: true},
		{Path: "options[].cost.like", Form: "text or list of texts", Absent: "may be left out"},
		{Path: "declared.perched_water", Form: "word", Words: []string{"yes", "no", "unknown"}, Default: "unknown"},
	} {
		got := all[want.Path]
		got.Says = ""
		if diff := cmp.Diff(want, got); diff != "" {
			t.Errorf("%s (-want +got):\n%s", want.Path, diff)
		}
	}
}

// TestKeysAreThoseRead: what a wide study was understood to say has the paths and the order of Keys.
func TestKeysAreThoseRead(t *testing.T) {
	src, err := os.ReadFile("testdata/study/wide.yaml")
	if err != nil {
		t.Fatal(err)
	}
	s, err := Parse("study.yaml", src)
	if err != nil {
		t.Fatal(err)
	}
	var paths []string
	for _, k := range Keys() {
		paths = append(paths, k.Path)
	}
	last := -1
	for _, e := range s.Understood {
		item := regexp.MustCompile(`\[\d+\]`)
		at := slices.Index(paths, item.ReplaceAllString(e.Key, "[]"))
		if at < 0 {
			t.Errorf("%s is not described", e.Key)
		}
		if at < last && !item.MatchString(e.Key) {
			t.Errorf("%s stands elsewhere in the order of the documentation", e.Key)
		}
		last = at
	}
}

func TestLaterKeys(t *testing.T) {
	later := LaterKeys()
	for _, want := range []string{"weather.gaps as {from: …}", "weather.snow", "ground.ensemble", "climates", "fit"} {
		if !slices.Contains(later, want) {
			t.Errorf("%s is missing from %q", want, later)
		}
	}
	for _, k := range Keys() {
		if slices.Contains(later, k.Path) {
			t.Errorf("%s is both supported and not", k.Path)
		}
	}
}
