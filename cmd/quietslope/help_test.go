package main

import (
	"math"
	"slices"
	"strings"
	"testing"

	"quietslope/scenario"
)

// TestStudyHelp: the reference names every key, every example of ours stands in it, and no line is too wide or ends in a
// blank.
func TestStudyHelp(t *testing.T) {
	code, text, stderr := program(t.Context(), "help", "study")
	if code != 0 || stderr != "" {
		t.Fatalf("status %d, %s", code, stderr)
	}
	for line := range strings.Lines(text) {
		if len([]rune(line)) > helpWidth+1 || strings.HasSuffix(line, " \n") {
			t.Errorf("too wide, or a blank at the end: %q", line)
		}
	}
	flat := strings.Join(strings.Fields(text), " ")
	for _, k := range scenario.Keys() {
		if units := k.Form + " " + strings.Join(k.Units, " "); len(k.Units) > 0 && !strings.Contains(flat, units) {
			t.Errorf("the units are not listed as %q", units)
		}
	}
	var paths []string
	listed := 0
	for _, s := range sections(scenario.Keys()) {
		paths = append(paths, s.path)
		listed += len(s.keys)
		if s.path != "" {
			listed++
		}
	}
	if n := len(scenario.Keys()); listed != n {
		t.Errorf("%d keys are listed, of %d", listed, n)
	}
	for _, k := range scenario.Keys() {
		if !strings.Contains(flat, k.Says) {
			t.Errorf("%s is not described", k.Path)
		}
	}
	for _, later := range scenario.LaterKeys() {
		if !strings.Contains(flat, later) {
			t.Errorf("%s is not named", later)
		}
	}
	for _, e := range studyExamples {
		if !slices.Contains(paths, e.section) || !strings.Contains(text, indent(e.text, "    ")) {
			t.Errorf("the example of %q is not shown", e.section)
		}
	}
	for path := range studyNotes {
		if !slices.Contains(paths, path) {
			t.Errorf("the note of %q is not shown", path)
		}
	}
}

// exampleStudies puts the examples together: the first of each block to one study, and each further one of a block in
// the place of the first.
func exampleStudies() []string {
	var first []string
	at := map[string]int{} // of the key with which an example begins
	var others []int
	for i, e := range studyExamples {
		key, _, _ := strings.Cut(e.text, ":")
		if _, again := at[key]; again && !strings.HasPrefix(key, " ") {
			others = append(others, i)
			continue
		}
		at[key] = len(first)
		first = append(first, e.text)
	}
	studies := []string{strings.Join(first, "")}
	for _, i := range others {
		key, _, _ := strings.Cut(studyExamples[i].text, ":")
		other := slices.Clone(first)
		other[at[key]] = studyExamples[i].text
		studies = append(studies, strings.Join(other, ""))
	}
	return studies
}

// TestStudyExamples: the examples of the reference make studies that are read, and mean what is said of them.
func TestStudyExamples(t *testing.T) {
	studies := exampleStudies()
	if len(studies) != 3 {
		t.Fatalf("%d studies", len(studies))
	}
	for _, text := range studies {
		s, err := scenario.Parse("study.yaml", []byte(text))
		if err != nil {
			t.Fatalf("%v\n%s", err, text)
		}
		var levels []float64
		for _, b := range s.Bands {
			levels = append(levels, math.Round(10*b.Level)/10) // as the lead has them
		}
		if want := []float64{3.6, 4.2, 5, 5.4}; !slices.Equal(levels, want) {
			t.Errorf("the bands begin at %v, not %v", levels, want)
		}
		kinds := map[string]bool{}
		for _, o := range s.Options {
			for _, m := range o.Measures {
				kinds[m.Key] = true
			}
		}
		if len(kinds) != 6 {
			t.Errorf("measures %v", kinds)
		}
	}
}

// TestStudyHelpFormats: every time format that the reference names can be used.
func TestStudyHelpFormats(t *testing.T) {
	for _, format := range []string{"YYYY-MM-DD", "DD.MM.YYYY hh:mm", "YYYYMMDDThhmm", "iso"} {
		if !strings.Contains(studyNotes["weather"], format) {
			t.Errorf("%s is not named", format)
		}
		text := strings.Replace(exampleStudies()[0], "format: YYYY-MM-DD", `format: "`+format+`"`, 1)
		if _, err := scenario.Parse("study.yaml", []byte(text)); err != nil {
			t.Error(err)
		}
	}
}

// TestHelpOfCSV: the quantities that the help of compare, check and size names are there.
func TestHelpOfCSV(t *testing.T) {
	for command, quantities := range map[string][]string{
		"compare": {"load_m_days_per_year", "water_balance.deep.in_mm", "peak_excess_m", "annual_probability", "days_by_month.1", "change.days_per_year.difference", "states.half_stopped.value", "defaults.options[0]", "warning.few_events"},
		"check":   {"audit.years.1"},
		"size":    {"curve.1", "answer", "unit"},
	} {
		_, help, _ := program(t.Context(), "help", command)
		args := []string{command, demoStudy}
		if command == "size" {
			args = sizing
		}
		code, found, stderr := program(t.Context(), append(slices.Clip(args), "--format", "csv")...)
		if code != 0 {
			t.Fatal(stderr)
		}
		for _, q := range quantities {
			if !strings.Contains(help, q) || !strings.Contains(found, ","+q) {
				t.Errorf("%s: %s is not in the help, or not in the CSV", command, q)
			}
		}
		head, _, _ := strings.Cut(found, "\n")
		for _, column := range strings.Split(head, ",") {
			if command == "compare" && !strings.Contains(help, column) {
				t.Errorf("the column %s is not explained", column)
			}
		}
	}
}

func TestWrap(t *testing.T) {
	long := strings.Repeat("x", helpWidth-4)
	for _, tt := range []struct{ text, below, want string }{
		{"a b", "", "a b"},
		{"  a " + long, "    ", "  a " + long},
		{"  a " + long + "y", "    ", "  a\n    " + long + "y"},
		{"  abcde" + long + " z", "", "  abcde" + long + "\nz"},
	} {
		if got := wrap(tt.text, tt.below); got != tt.want {
			t.Errorf("wrap(%q) = %q, want %q", tt.text, got, tt.want)
		}
	}
}
