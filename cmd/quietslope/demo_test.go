package main

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	"quietslope/scenario/result"
)

const demoStudy = "../../testdata/demo/study.yaml"

// sizing is the sizing of the demo, without a format.
var sizing = []string{"size", demoStudy, "--option", "trenches", "--vary", "trench_drains.spacing", "--between", "4 m .. 40 m"}

// TestDemo holds all that the commands say of the demo.
func TestDemo(t *testing.T) {
	for _, tt := range []struct {
		golden string
		args   []string
	}{
		{"demo-compare.golden", []string{"compare", demoStudy}},
		{"demo-check.golden", []string{"check", demoStudy}},
		{"demo-compare-markdown.golden", []string{"compare", demoStudy, "--format", "markdown"}},
		{"demo-compare-json.golden", []string{"compare", demoStudy, "--format", "json"}},
		{"demo-check-json.golden", []string{"check", demoStudy, "--format", "json"}},
		{"demo-size.golden", sizing},
		{"demo-size-markdown.golden", append(slices.Clip(sizing), "--format", "markdown")},
		{"demo-size-json.golden", append(slices.Clip(sizing), "--format", "json")},
	} {
		t.Run(tt.golden, func(t *testing.T) {
			code, stdout, stderr := program(t.Context(), tt.args...)
			if code != 0 || stderr != "" {
				t.Fatalf("status %d\n%s", code, stderr)
			}
			switch {
			case strings.Contains(tt.golden, "json"):
				stdout = sixDigits(stdout)
			case !strings.Contains(tt.golden, "markdown"):
				for line := range strings.Lines(stdout) {
					if len([]rune(line)) > 101 || strings.HasSuffix(line, " \n") {
						t.Errorf("too wide, or a blank at the end: %q", line)
					}
				}
			}
			compareGolden(t, tt.golden, stdout)
		})
	}
}

var numberInJSON = regexp.MustCompile(`(?m)^(\s*(?:"[^"]*": )?)(-?[0-9][0-9.eE+-]*)(,?)$`)

// sixDigits rounds the numbers of indented JSON, since the last digits of a float64 depend on the processor: some fuse
// a multiplication with an addition. What is left of a sum that should be zero becomes zero.
func sixDigits(text string) string {
	return numberInJSON.ReplaceAllStringFunc(text, func(line string) string {
		m := numberInJSON.FindStringSubmatch(line)
		x, err := strconv.ParseFloat(m[2], 64)
		if err != nil {
			return line
		}
		if math.Abs(x) < 1e-6 {
			x = 0
		}
		return m[1] + strconv.FormatFloat(x, 'g', 6, 64) + m[3]
	})
}

// TestDemoJSON: the JSON has no key that the result package does not know, no null, and every list and interval that
// must be there.
func TestDemoJSON(t *testing.T) {
	for command, into := range map[string]any{"compare": &result.Comparison{}, "check": &result.Check{}, "size": &result.Size{}} {
		args := []string{command, demoStudy}
		if command == "size" {
			args = sizing
		}
		_, stdout, _ := program(t.Context(), append(slices.Clip(args), "--format", "json")...)
		d := json.NewDecoder(strings.NewReader(stdout))
		d.DisallowUnknownFields()
		if err := d.Decode(into); err != nil {
			t.Errorf("%s: %v", command, err)
		}
		if i := strings.Index(stdout, "null"); i >= 0 {
			t.Errorf("%s: null in %q", command, stdout[max(0, i-100):i+4])
		}
		if !strings.HasPrefix(stdout, "{\n  \"results_version\": 1,\n") || !strings.HasSuffix(stdout, "\n}\n") || strings.HasSuffix(stdout, "\n\n") {
			t.Errorf("%s: begins %.40q, ends %q", command, stdout, stdout[len(stdout)-10:])
		}
		if strings.Contains(stdout, `\u003`) {
			t.Errorf("%s: escaped for HTML", command)
		}
		here, err := os.Getwd()
		if err != nil {
			t.Fatal(err)
		}
		if strings.Contains(stdout, filepath.Dir(filepath.Dir(here))) {
			t.Errorf("%s: an absolute path", command)
		}
	}
}

// TestDemoCSV: the CSV has the numbers of the JSON, each by its text.
func TestDemoCSV(t *testing.T) {
	for _, args := range [][]string{{"compare", demoStudy}, {"check", demoStudy}, sizing} {
		command := args[0]
		_, asJSON, _ := program(t.Context(), append(slices.Clip(args), "--format", "json")...)
		code, stdout, stderr := program(t.Context(), append(slices.Clip(args), "--format", "csv")...)
		if code != 0 || stderr != "" {
			t.Fatalf("status %d\n%s", code, stderr)
		}
		rows, err := csv.NewReader(strings.NewReader(stdout)).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		var got, want []string
		for _, r := range rows[1:] {
			got = append(got, slices.DeleteFunc(r[5:8], func(s string) bool { return s == "" })...)
		}
		for _, m := range regexp.MustCompile(`(?m)^\s*(?:"[^"]*": )?(-?[0-9][0-9.eE+-]*),?$`).FindAllStringSubmatch(asJSON, -1) {
			want = append(want, m[1])
		}
		slices.Sort(got) // an interval may stand some keys behind its figure
		slices.Sort(want)
		if len(want) < 200 && command == "compare" || !slices.Equal(got, want) {
			t.Errorf("%s: the CSV has %d numbers, the JSON %d, or they differ", command, len(got), len(want))
		}
	}
}

// TestDemoLevels: one line per step, the last of them the last of the record.
func TestDemoLevels(t *testing.T) {
	_, stdout, stderr := program(t.Context(), "levels", demoStudy)
	lines := strings.Split(strings.TrimSuffix(stdout, "\n"), "\n")
	if len(lines) != 1+14610 || !strings.HasPrefix(lines[0], "time,rain_mm,as it stands/recharge_mm,") || !strings.HasPrefix(lines[len(lines)-1], "2023-12-31,") {
		t.Fatalf("%d lines, first %q, last %q\n%s", len(lines), lines[0], lines[len(lines)-1], stderr)
	}
	if _, err := csv.NewReader(strings.NewReader(stdout)).ReadAll(); err != nil { // of lines with other columns too
		t.Error(err)
	}
}

// smallStudy is the study that the error texts are made from.
const smallStudy = `study: small
weather:
  file: weather.csv
  columns:
    time: {name: date, format: YYYY-MM-DD}
    rain: {name: rain_mm, unit: mm}
ground:
  cover: {thickness: 4 m, drainable_porosity: 6 %, seepage: 0.011 /d, percolation: 0.0045 /d}
  deep: {thickness: 9 m, drainable_porosity: 1.4 %, seepage: 0.007 /d}
bands:
  - {name: onset, level: 4.2 m}
options:
  - name: as it stands
  - name: trenches
    trench_drains: {rate: 0.02 /d, depth: 3 m}
`

// TestErrors holds what a person reads who got something wrong.
func TestErrors(t *testing.T) {
	var record strings.Builder
	record.WriteString("date,rain_mm\n")
	for day := time.Date(2001, 1, 1, 0, 0, 0, 0, time.UTC); day.Year() < 2004; day = day.AddDate(0, 0, 1) {
		fmt.Fprintf(&record, "%s,%d.5\n", day.Format(time.DateOnly), day.YearDay()*7%9)
	}
	golden, err := filepath.Abs("testdata/errors.golden")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	var all bytes.Buffer
	for _, tt := range []struct{ what, file, old, now string }{
		{"nothing", "", "", ""},
		{"no unit", "study.yaml", "thickness: 4 m,", "thickness: 4,"},
		{"a key mistyped", "study.yaml", "seepage: 0.007", "seapage: 0.007"},
		{"a trench below the cover", "study.yaml", "depth: 3 m", "depth: 5 m"},
		{"two things", "study.yaml", "  - {name: onset, level: 4.2 m}", "  - {name: onset, level: 14 m}\n  - {name: failure, level: 3 m}"},
		{"a key that is not there yet", "study.yaml", "depth: 3 m", "depth: 3 m, law: quadratic"},
		{"a decimal comma", "weather.csv", "2001-02-03,4.5", "2001-02-03,\"4,5\""},
		{"a missing value", "weather.csv", "2001-02-03,4.5", "2001-02-03,NA"},
		{"a missing day", "weather.csv", "2001-02-03,4.5\n", ""},
		{"no weather", "weather.csv", "", ""},
	} {
		files := map[string]string{"study.yaml": smallStudy, "weather.csv": record.String()}
		if tt.old != "" && !strings.Contains(files[tt.file], tt.old) {
			t.Fatalf("%s: no %q in %s", tt.what, tt.old, tt.file)
		}
		if tt.file != "" {
			files[tt.file] = strings.Replace(files[tt.file], tt.old, tt.now, 1)
			if tt.old == "" {
				delete(files, tt.file)
				if err := os.Remove(tt.file); err != nil {
					t.Fatal(err)
				}
			}
		}
		for name, text := range files {
			if err := os.WriteFile(name, []byte(text), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		code, stdout, stderr := program(t.Context(), "compare", "study.yaml", "--out", "result.txt")
		want := 2
		if tt.file == "" {
			want = 0
		}
		if code != want || stdout != "" {
			t.Errorf("%s: status %d, stdout %q", tt.what, code, stdout)
		}
		if _, err := os.Stat("result.txt"); errors.Is(err, os.ErrNotExist) != (code != 0) {
			t.Errorf("%s: status %d, and result.txt: %v", tt.what, code, err)
		}
		os.Remove("result.txt")
		fmt.Fprintf(&all, "# %s\n%s\n", tt.what, stderr)
	}
	compareGolden(t, golden, all.String())
}
