package render

import (
	"bytes"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/clipperhouse/displaywidth"
	"github.com/google/go-cmp/cmp"

	"quietslope/scenario"
	"quietslope/scenario/result"
)

var update = flag.Bool("update", false, "rewrite the .golden files")

// compareGolden holds text against a golden file.
func compareGolden(t *testing.T, name, got string) {
	t.Helper()
	path := filepath.Join("testdata", name+".golden")
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got, "\n")); d != "" {
		t.Errorf("%s differs (-want +got); rerun with -update to accept:\n%s", path, d)
	}
}

// written is a page as text.
func written(t *testing.T, p *Page) string {
	t.Helper()
	var b bytes.Buffer
	if err := p.Text(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// fits fails for lines wider than the page, with blanks at their end, or with control characters.
func fits(t *testing.T, text string) {
	t.Helper()
	for i, l := range strings.Split(text, "\n") {
		if w := displaywidth.String(l); w > pageWidth {
			t.Errorf("line %d is %d columns wide: %q", i+1, w, l)
		}
		if strings.TrimRight(l, " \t") != l || strings.ContainsAny(l, "\t\x1b") {
			t.Errorf("line %d ends in a blank or holds a control character: %q", i+1, l)
		}
	}
}

var threeBands = []string{"watch", "movement onset", "fast movement"}

func TestComparison(t *testing.T) {
	for _, tt := range []struct {
		name string
		c    *result.Comparison
	}{
		{"compare-demo", fixture(demoOptions, threeBands)},
		{"compare-one-option", fixture(demoOptions[:1], threeBands)},
		{"compare-one-band", fixture(demoOptions[:3], threeBands[1:2])},
		{"compare-long-names", fixture(longNames(), threeBands)},
		{"compare-always", always()},
		{"compare-never", never()},
		{"compare-cases", severalCases()},
		{"compare-against", againstOther()},
	} {
		t.Run(tt.name, func(t *testing.T) {
			text := written(t, Comparison(tt.c))
			fits(t, text)
			compareGolden(t, tt.name, text)
		})
	}
}

// TestHostileNames: names from a file neither steer the terminal nor break the layout.
func TestHostileNames(t *testing.T) {
	c := fixture([]strengths{{"a\x1b[31mred", nil, 1}, {strings.Repeat("深", 30), nil, 0.5}, {"e\u0301 combining \u202e", nil, 0.2}}, []string{"深い水位", "movement onset"})
	c.Study = "x\x1b]0;title\x07"
	text := written(t, Comparison(c))
	fits(t, text)
	if strings.ContainsAny(text, "\x1b\x07\u202e") {
		t.Error("a control character reached the text")
	}
}

// TestDisagreement: a drain that splits an event raises the count while days fall; the text says so.
func TestDisagreement(t *testing.T) {
	c := fixture(demoOptions[:3], threeBands)
	c.Cases[0].Options[2].Bands[1].EventsPerYear = 3
	text := written(t, Comparison(c))
	for _, want := range []string{"The measures disagree on the order of the options: events against load.", "by load       B < C < A", "by events     B < A < C"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in:\n%s", want, text)
		}
	}
}

// checkFixture makes a result of check out of that of compare.
func checkFixture() *result.Check {
	demo := fixture(demoOptions, threeBands)
	c := &result.Check{
		Head: demo.Head,
		Understood: []result.Understood{
			{Key: "study", Value: "Ostler Lea bank, cover drainage options"}, {Key: "weather.stamp", Value: "start", Default: true},
			{Key: "ground.cover.drainable_porosity", Value: "6 %"}, {Key: "count.apart", Value: "10 d", Default: true},
			{Key: "options[0].baseline", Value: "true", Default: true}, {Key: "options[1].name", Value: "trenches, spacing 12 m"},
			{Key: "options[1].baseline", Value: "false", Default: true}, {Key: "options[1].trench_drains.equivalent_depth", Value: "0.8 m"},
			{Key: "options[2].baseline", Value: "false", Default: true}, {Key: "options[2].trench_drains.equivalent_depth", Value: "0.8 m"},
			{Key: "options[3].baseline", Value: "false"}, {Key: "options[3].trench_drains.equivalent_depth", Value: "0.9 m"},
			{Key: "options[4].baseline", Value: "false", Default: true}, {Key: "options[5].baseline", Value: "false", Default: true},
			{Key: "conditions[0].drains", Value: "45 %"}, {Key: "conditions[1].drains", Value: "45 %"},
		},
		Rates: result.Rates{CoverSeepagePerDay: 0.011, CoverPercolationPerDay: 0.0045, DeepSeepagePerDay: 0.007},
		Bands: demo.Bands, Record: demo.Record, YearStarts: "October", Start: result.StartFound{CoverM: 0.4312, DeepM: 2.5117},
		Audit: result.Audit{
			Wettest:    []result.WetDay{{Date: "1998-11-03", RainMM: 71.2}, {Date: "2009-01-18", RainMM: 64}, {Date: "1984-02-02", RainMM: 9.95}},
			Suspicious: []result.Suspicious{{Kind: "dry_run", From: "2003-02-01", To: "2003-04-02", Text: "61 days without rain; make sure that missing days were not written as 0"}},
		},
	}
	for y := 1984; y <= 2023; y++ {
		c.Audit.Years = append(c.Audit.Years, result.YearRain{Year: y, RainMM: 968 + float64((y*37)%211), ValidShare: 1})
	}
	c.Audit.Years[39].ValidShare = 0.745
	for i, o := range demo.Cases[0].Options {
		co := result.CheckOption{Name: o.Name, Rates: c.Rates}
		for _, d := range o.Drains {
			co.Drains = append(co.Drains, result.CheckDrain{Measure: d.Measure, Layer: d.Layer, RatePerDay: d.RatePerDay, HalfLifeDays: ptr(50.55),
				InvertM: d.InvertM, CeilingMMPerDay: d.CeilingMMPerDay, From: "π²·K·D/(μ·L²) with K 0.02 m/d, D 1.6 m, μ 6 %, L 12 m, times the efficiency 80 %"})
		}
		if i == 6 {
			co.Rates.CoverSeepagePerDay = 0.02
		}
		c.Options = append(c.Options, co)
	}
	return c
}

// TestOrigins: a long formula is said once, and then what differs.
func TestOrigins(t *testing.T) {
	known := origins{}
	for i, tt := range []struct{ from, want string }{
		{"as given", "as given"},
		{"K·D with K 0.02 m/d, D 1.6 m, L 8 m", "K·D with K 0.02 m/d, D 1.6 m, L 8 m"},
		{"K·D with K 0.02 m/d, D 1.6 m, L 12 m", "as for option B, but L 12 m"},
		{"K·D with K 1e-07 m/d, D 1.65 m, L 8 m", "as for option B, but K 1e-07 m/d, D 1.65 m"},
		{"K·D with K 0.02 m/d, D 1.6 m, L 8 m, times the efficiency of 80 %", "K·D with K 0.02 m/d, D 1.6 m, L 8 m, times the efficiency of 80 %"},
		{"K·D with K 0.02 m/d, D 1.6 m, L 9 m, times the efficiency of 75 %", "as for option E, but L 9 m, times the efficiency of 75 %"},
		{"K·D with K 0.02 m/d, D 1.6 m, L 8 m", "as for option B"},
		{"as given", "as given"},
		{"as given, times the efficiency of 80 %", "as given, times the efficiency of 80 %"},
		{"as given, times the efficiency of 90 %", "as given, times the efficiency of 90 %"},
	} {
		if got := known.instead(i, tt.from); got != tt.want {
			t.Errorf("%s became %q, want %q", tt.from, got, tt.want)
		}
	}
}

func TestCheck(t *testing.T) {
	text := written(t, Check(checkFixture()))
	fits(t, text)
	compareGolden(t, "check-demo", text)
}

func TestFigures(t *testing.T) {
	for _, tt := range []struct {
		value, lo, hi float64
		want          string
	}{
		{0.3587, 0.2231, 0.5312, "0.36 0.22 0.53"},       // width 0.308: an eighth is 0.039, so hundredths
		{21.37, 11.2, 36.9, "21 11 37"},                  // width 25.7: units
		{10.31, 6.3, 14.8, "10 6 15"},                    // width 8.5: units
		{5.9, 3.6, 8.5, "5.9 3.6 8.5"},                   // width 4.9: tenths
		{1234, 1102, 1399, "1230 1100 1400"},             // width 297: tens
		{0.5, 0.46, 0.54, "0.50 0.46 0.54"},              // width 0.08: hundredths, at the edge of the rule
		{0.5, 0.4600001, 0.5399999, "0.500 0.460 0.540"}, // just below the edge
		{123.456, 123.4, 123.5, "123 123 124"},           // three digits at most
		{0, 0, 0.0468, "0 0 0.047"},                      // an exact zero
		{0.3, 0, 30, "0.3 0 30"},                         // would vanish: keeps its first digit
		{0.6, 0, 25, "0.6 0 25"},                         // would be rounded up by two thirds
		{2, 0.00004, 4.1, "2.0 <0.001 4.1"},              // smaller still: a bound
		{-2, -4.1, -0.00004, "-2.0 -4.1 >-0.001"},        // the sign of an end is never lost
		{-12.34, -25.1, -3.2, "-12 -25 -3"},              // width 21.9
		{1e-17, -1e-16, 0.4, "0 0 0.40"},                 // what is left of a difference of equals
		{0.096, 0.04, 0.151, "0.10 0.04 0.15"},           // rounding carries
		{7, 7, 7, "7.00 7.00 7.00"},                      // no width
		{0.0214, 0.0013, 0.118, "0.02 0.001 0.12"},       // a lower end keeps its first digit
	} {
		v, l, h := figures(tt.value, tt.lo, tt.hi, tiny)
		if got := v + " " + l + " " + h; got != tt.want {
			t.Errorf("figures(%v, %v, %v) = %s, want %s", tt.value, tt.lo, tt.hi, got, tt.want)
		}
	}
}

// TestFiguresStayClose: over many scales a figure is never off by more than half an eighth of its range, nor by more than
// half its first digit.
func TestFiguresStayClose(t *testing.T) {
	for _, scale := range []float64{1e-6, 1e-3, 0.07, 1, 3.3, 99, 1e4} {
		for i := 1; i < 200; i++ {
			v := scale * float64(i) / 37
			lo, hi := v*0.6, v*(1+float64(i%7)/3+0.01)
			text, _, _ := figures(v, lo, hi, tiny)
			var got float64
			if err := json.Unmarshal([]byte(text), &got); err != nil {
				t.Fatalf("figures(%v, %v, %v) = %q", v, lo, hi, text)
			}
			if off := math.Abs(got - v); off > (hi-lo)/16+0.005*v {
				t.Errorf("figures(%v, %v, %v) = %s, off by %v", v, lo, hi, text, off)
			}
			if digits := len(strings.TrimLeft(strings.ReplaceAll(text, ".", ""), "0")); v < 100 && digits > 3 {
				t.Errorf("figures(%v, %v, %v) = %s has %d digits", v, lo, hi, text, digits)
			}
		}
	}
}

func TestSmallFormats(t *testing.T) {
	for _, tt := range []struct{ got, want string }{
		{percent(0), "0 %"}, {percent(1), "100 %"}, {percent(0.9999), ">99 %"}, {percent(0.0004), "<1 %"}, {percent(0.456), "46 %"},
		{days(0), "0"}, {days(171.4), "171"}, {days(9.0), "9"}, {days(3.25), "3.2"}, {days(1.0 / 96), "0.010"},
		{depth(-0.001), "0"}, {depth(0.02), "<0.1"}, {depth(9.96), "10"}, {depth(-3.21), "-3.2"}, {depth(0), "0"},
		{metres(4.2), "4.20"}, {metres(4.1234), "4.123"}, {metres(-0.0001), "0.00"}, {centimetres(-0.001), "0.00"},
		{significant(0.0137123, 3), "0.0137"}, {significant(1234.5, 2), "1200"}, {significant(0, 2), "0"},
		{rate(0.0045), "0.0045"}, {share(0.9), "90 %"}, {share(0.995), "99.5 %"},
		{numbers([]int{1, 2, 4, 5, 6, 9}), "1, 2, 4–6, 9"}, {numbers(nil), ""},
		{letter(0) + letter(25) + letter(26) + letter(27) + letter(701) + letter(702), "AZAAABZZAAA"},
		{shorten("trenches, spacing 12 m", 11), "trenc… 12 m"}, {shorten("short", 11), "short"}, {shorten("深い水位計測", 6), "深…測"}, {shorten("abc", 0), ""}, {shorten("abc", 1), "…"},
		{monthBefore("January"), "December"}, {monthBefore("October"), "September"}, {monthBefore(""), ""},
	} {
		if tt.got != tt.want {
			t.Errorf("got %q, want %q", tt.got, tt.want)
		}
	}
}

func TestMerged(t *testing.T) {
	v := &view{c: &result.Comparison{Bands: []result.Band{{Name: "watch"}, {Name: "onset"}}}}
	got := v.merged([]result.KeyValue{{Key: "options[1].baseline", Value: "false"}, {Key: "count.seed", Value: "1"}, {Key: "declared.perched_water", Value: "unknown"}, {Key: "options[1].trench_drains.law", Value: "linear"}, {Key: "bands[0].until", Value: "3 m"},
		{Key: "options[2].trench_drains.law", Value: "linear"}, {Key: "options[3].trench_drains.law", Value: "linear"}, {Key: "bands[1].until", Value: "4 m"}})
	want := []string{"count.seed 1", "B–D: trench_drains.law linear", "watch: until 3 m", "onset: until 4 m"}
	if d := cmp.Diff(want, got); d != "" {
		t.Error(d)
	}
}

func TestJSON(t *testing.T) {
	tenth, fifth := 0.1, 0.2
	var b bytes.Buffer
	if err := JSON(&b, map[string]any{"a<b": tenth + fifth, "c": []int{}}); err != nil {
		t.Fatal(err)
	}
	if want := "{\n  \"a<b\": 0.30000000000000004,\n  \"c\": []\n}\n"; b.String() != want {
		t.Errorf("got %s, want %s", &b, want)
	}
	if err := JSON(&b, math.NaN()); err == nil {
		t.Error("a figure that is not a number was written")
	}
}

func TestLevels(t *testing.T) {
	tenth, fifth := 0.1, 0.2
	s := &scenario.LevelSeries{
		Options: []string{"as it stands", `a "quoted", name`}, Rows: 2, Rain: []float64{0, 12.5},
		Time:     func(i int) string { return []string{"2001-01-01", "2001-01-02"}[i] },
		Recharge: [][]float64{{0, tenth + fifth}, {0, 1e-9}}, Cover: [][]float64{{1, 2}, {1, 2}}, Deep: [][]float64{{3, 3.5}, {3, 1. / 3}},
	}
	var b bytes.Buffer
	if err := Levels(&b, s); err != nil {
		t.Fatal(err)
	}
	want := "time,rain_mm,as it stands/recharge_mm,as it stands/cover_m,as it stands/deep_m," +
		`"a ""quoted"", name/recharge_mm","a ""quoted"", name/cover_m","a ""quoted"", name/deep_m"` + "\n" +
		"2001-01-01,0,0,1,3,0,1,3\n2001-01-02,12.5,0.30000000000000004,2,3.5,1e-09,2,0.3333333333333333\n"
	if d := cmp.Diff(want, b.String()); d != "" {
		t.Error(d)
	}
	if err := Levels(failing{}, s); !errors.Is(err, errFull) {
		t.Errorf("a failed write gave %v", err)
	}
	if err := Comparison(never()).Text(failing{}); !errors.Is(err, errFull) {
		t.Errorf("a failed write gave %v", err)
	}
}

var errFull = errors.New("full")

type failing struct{}

func (failing) Write([]byte) (int, error) { return 0, errFull }

// TestRankedBy: whatever ranks the options, its own change is in the first table and the other three in the second.
func TestRankedBy(t *testing.T) {
	for key, unit := range map[string]string{"load": "m·d per year", "days": "days per year", "events": "events per year", "annual_probability": "% of years"} {
		c := fixture(demoOptions, threeBands)
		c.Settings.DecideBy = key
		text := written(t, Comparison(c))
		fits(t, text)
		_, rest, _ := strings.Cut(text, "\nRanking on movement onset by ")
		first, second, ok := strings.Cut(rest, "\nchange against A")
		if !ok || !strings.Contains(first, unit) || strings.Contains(strings.SplitN(second, "\n\n", 2)[0], unit) {
			t.Errorf("by %s:\n%s", key, rest)
		}
	}
}

// TestCases: with several cases each has its own heading, and a note about one of them is named there only.
func TestCases(t *testing.T) {
	c := fixture(demoOptions[:2], threeBands)
	wet := c.Cases[0]
	wet.Climate = "wetter winters"
	c.Cases = append(c.Cases, wet)
	c.Warnings = append(c.Warnings, result.Warning{Code: "x", Severity: result.Warn, Climate: "wetter winters", Option: "as it stands", Band: "watch", Text: "Only there."})
	text := written(t, Comparison(c))
	fits(t, text)
	before, after, ok := strings.Cut(text, "\nCase 2: weather wetter winters, works as built\n")
	if !ok || !strings.Contains(before, "\nCase 1: weather as recorded, works as built\n") {
		t.Fatal("no heading for each case")
	}
	if strings.Contains(before, "Note 2 holds") || !strings.Contains(after, "Note 2 holds for A.") {
		t.Errorf("the note is not named where it belongs:\n%s", text)
	}
}

// TestManyCases: however many cases there are and however long the names, the table that sets them side by side fits the
// page, no name is shortened beyond reading, and every figure is in it.
func TestManyCases(t *testing.T) {
	for n := 2; n < 12; n++ {
		for _, options := range [][]strengths{demoOptions, longNames(), {{"A", nil, 1}, {"B", nil, 0.3}}} {
			c := fixture(options, threeBands)
			for i := 1; i < n; i++ {
				other := c.Cases[0]
				other.Condition = fmt.Sprintf("condition %d, of which the name is as long as a name may be", i)
				c.Cases = append(c.Cases, other)
			}
			text := written(t, Comparison(c))
			fits(t, text)
			_, rest, _ := strings.Cut(text, "the rank in the case:\n")
			tables, _, _ := strings.Cut(rest, "\nWhat was counted")
			if got := strings.Count(tables, "rank"); got != n {
				t.Errorf("%d cases, %d columns:\n%s", n, got, tables)
			}
			for row := range strings.Lines(tables) {
				if strings.HasPrefix(row, "A ") && !strings.Contains(row, options[0].name[:min(10, len(options[0].name))]) {
					t.Errorf("the name is too short in %q", row)
				}
			}
		}
	}
}

// TestCasesOfNothing: a first case in which nothing happens does not hide what happens in another.
func TestCasesOfNothing(t *testing.T) {
	c := never()
	c.Cases = append(c.Cases, fixture([]strengths{{"as it stands", nil, 1}, {"lined channels", nil, 0}}, []string{"watch", "movement onset"}).Cases...)
	c.Cases[1].Climate = "wetter winters"
	text := strings.Join(strings.Fields(written(t, Comparison(c))), " ")
	for _, want := range []string{`No option's level rises above "movement onset" in 39 years`,
		`In case 2, wetter winters: A, the baseline, has 0.9 m·d per year instead of 0; with A the level rises above "movement onset" too; the least is now B, with 0; the order becomes B < A.`} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in %s", want, text)
		}
	}
	c.Cases[0], c.Cases[1] = c.Cases[1], c.Cases[0]
	if text := strings.Join(strings.Fields(written(t, Comparison(c))), " "); !strings.Contains(text, `no option's level rises above "movement onset".`) {
		t.Error(text)
	}
	c = severalCases()
	c.Settings.DecideOn = ""
	if text := written(t, Comparison(c)); !strings.Contains(text, "\n  case 4        weather as recorded, works neglected\n") {
		t.Errorf("the cases are not listed:\n%s", text)
	}
}

// TestDecidersOfCases: whatever ranks the options is what the cases are compared by.
func TestDecidersOfCases(t *testing.T) {
	for key, want := range map[string]string{
		"load": `Load above "movement onset", its range,`, "days": `Days above "movement onset",`, "events": `Events above "movement onset",`, "annual_probability": `Share of years above "movement onset",`,
	} {
		c := severalCases()
		c.Settings.DecideBy = key
		if text := written(t, Comparison(c)); !strings.Contains(text, want) {
			t.Errorf("no %q in:\n%s", want, text)
		}
	}
}

// TestRecordFields: what was filled is said with how, and a band given as a factor of safety with its number.
func TestRecordFields(t *testing.T) {
	for _, tt := range []struct {
		gaps    int
		filling string
		want    string
	}{{0, "", "no gaps filled"}, {1, "zero", "1 step filled with zero"}, {31, "month mean", "31 steps filled by month mean"}, {2, "", "2 steps filled"}} {
		c := fixture(demoOptions[:2], threeBands)
		c.Record.GapsFilled, c.Record.GapFilling = tt.gaps, tt.filling
		c.Bands[0].GivenAs, c.Bands[0].FactorOfSafety = "factor_of_safety", ptr(1.05)
		c.Cases[0].Options[0].Rates = result.Rates{CoverSeepagePerDay: 0.011, CoverPercolationPerDay: 0.0045, DeepSeepagePerDay: 0.007,
			Given: &result.Rates{CoverSeepagePerDay: 0.0109, CoverPercolationPerDay: 0.00448, DeepSeepagePerDay: 0.00699}}
		text := strings.Join(strings.Fields(written(t, Comparison(c))), " ")
		for _, want := range []string{tt.want, "watch safety 1.05 3.60", "Safety: the band begins where", "converted: cover seepage 0.011 /d, percolation 0.0045 /d, deep seepage 0.007 /d. Given were cover seepage 0.0109 /d, percolation 0.00448 /d, deep seepage 0.00699 /d"} {
			if !strings.Contains(text, want) {
				t.Errorf("no %q in %s", want, text)
			}
		}
	}
}

// TestConversion: what became of the rates of a stepping scheme is set side by side.
func TestConversion(t *testing.T) {
	c := checkFixture()
	c.Conversion = &result.Conversion{Scheme: "centred", StepDays: 1,
		Cover:             result.StoreConversion{GivenPerDay: 0.0155, ExactPerDay: 0.0155003, GivenPorosity: 0.06, Porosity: 0.0599988},
		Deep:              result.StoreConversion{GivenPerDay: 0.5, ExactPerDay: 0.510826, GivenPorosity: 0.014, Porosity: 0.0137033},
		LargestDifference: &result.LevelDifference{CoverM: 0.00012, DeepM: 0.0213, CoverAt: "1998-11-03", DeepAt: "2001-02-03"}}
	text := written(t, Check(c))
	fits(t, text)
	readsAsMeant(t, Check(c))
	_, text, _ = strings.Cut(text, "\nRates converted")
	text, _, _ = strings.Cut(text, "\n\n")
	want := ` from the centred scheme with steps of 1 d
---------------------------------------------------------
                              rate given  rate converted  porosity given  porosity converted
store and its outlets                 /d              /d               %                   %
cover, seepage + percolation      0.0155       0.0155003               6             5.99988
deep layer, seepage                  0.5        0.510826             1.4             1.37033
Seepage and percolation of the cover keep their proportion.
Replayed by the scheme itself, the ground without measures has levels that differ from those of the
converted rates by less than a millimetre in the cover and by at most 0.021 m (2001-02-03) in the
deep layer.`
	if d := cmp.Diff(want, text); d != "" {
		t.Error(d)
	}
	c.Conversion.LargestDifference = nil
	if text := written(t, Check(c)); !strings.Contains(text, "The record has other steps than the scheme") {
		t.Error(text)
	}
}
