package scenario

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/google/go-cmp/cmp/cmpopts"

	"quietslope/scenario/fault"
)

var updateStudy = flag.Bool("update-study", false, "rewrite the expected messages in testdata/study, and testdata/study.schema.json")

func baseStudy(t testing.TB) string {
	t.Helper()
	src, err := os.ReadFile("testdata/study/base.yaml")
	if err != nil {
		t.Fatal(err)
	}
	return string(src)
}

// editStudy applies edits to the base study. In the edits, lines that begin with - must stand together in the base, and
// the lines that begin with + after them replace them. Edits without any - are a whole file.
func editStudy(base, edits string) (string, error) {
	var old, fresh strings.Builder
	out := base
	whole := true
	flush := func() error {
		if old.Len() > 0 {
			if n := strings.Count("\n"+out, "\n"+old.String()); n != 1 {
				return fmt.Errorf("found %d times:\n%s", n, old.String())
			}
			out = strings.Replace("\n"+out, "\n"+old.String(), "\n"+fresh.String(), 1)[1:]
			whole = false
		} else if whole && fresh.Len() > 0 {
			out = fresh.String()
		}
		old.Reset()
		fresh.Reset()
		return nil
	}
	for line := range strings.Lines(edits) {
		switch line[0] {
		case '-':
			if fresh.Len() > 0 {
				if err := flush(); err != nil {
					return "", err
				}
			}
			old.WriteString(line[1:])
		case '+':
			fresh.WriteString(line[1:])
		default:
			return "", fmt.Errorf("an edit begins with - or +, not %q", line)
		}
	}
	return out, flush()
}

// wrongStudy is one case of a file testdata/study/*.cases: a line "== NAME", the edits to base.yaml, a line "=", and what
// is said of the study.
type wrongStudy struct{ name, edits, want string }

func readCases(t testing.TB, file string) []wrongStudy {
	t.Helper()
	src, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var cases []wrongStudy
	for _, part := range strings.Split("\n"+string(src), "\n== ")[1:] {
		name, rest, _ := strings.Cut(part, "\n")
		edits, want, _ := strings.Cut(rest+"\n", "=\n")
		cases = append(cases, wrongStudy{name, edits, strings.TrimRight(want, "\n")})
	}
	return cases
}

func caseFiles(t testing.TB) []string {
	t.Helper()
	files, err := filepath.Glob("testdata/study/*.cases")
	if err != nil || len(files) == 0 {
		t.Fatalf("no cases: %v", err)
	}
	return files
}

// TestMessages holds every message for a wrong study against its exact text. A study that is accepted says "accepted".
func TestMessages(t *testing.T) {
	base := baseStudy(t)
	for _, file := range caseFiles(t) {
		cases := readCases(t, file)
		for i := range cases {
			c := &cases[i]
			t.Run(strings.TrimSuffix(filepath.Base(file), ".cases")+"/"+c.name, func(t *testing.T) {
				src, err := editStudy(base, c.edits)
				if err != nil {
					t.Fatal(err)
				}
				got := "accepted"
				if _, err := Parse("study.yaml", []byte(src)); err != nil {
					got = err.Error()
				}
				if *updateStudy {
					c.want = got
				} else if diff := cmp.Diff(strings.Split(c.want, "\n"), strings.Split(got, "\n")); diff != "" {
					t.Errorf("run with -update-study to accept (-want +got):\n%s", diff)
				}
			})
		}
		if *updateStudy {
			var out strings.Builder
			for _, c := range cases {
				fmt.Fprintf(&out, "== %s\n%s=\n%s\n", c.name, c.edits, c.want)
			}
			if err := os.WriteFile(file, []byte(out.String()), 0o644); err != nil {
				t.Fatal(err)
			}
		}
	}
}

func parseBase(t *testing.T, edits string) *Study {
	t.Helper()
	src, err := editStudy(baseStudy(t), edits)
	if err != nil {
		t.Fatal(err)
	}
	s, err := Parse("dir/study.yaml", []byte(src))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func TestParseStudy(t *testing.T) {
	s := parseBase(t, `
`[1:])
	type picture struct {
		Title, File, Path, Format string
		PET                       *WeatherColumn
		Missing                   []string
		Ground                    Ground
		Bands                     []Band
		Count                     Count
		Site                      Site
	}
	inf, nan := math.Inf(1), math.NaN()
	got := picture{s.Title, s.Weather.File, s.Weather.Path, s.Weather.Format, s.Weather.PET, s.Weather.Missing, s.Ground, s.Bands, s.Count, s.Site}
	want := picture{
		Title: "Test bank", File: "weather.csv", Path: filepath.Join("dir", "weather.csv"), Format: "YYYY-MM-DD",
		PET:     &WeatherColumn{"pet_mm", "mm"},
		Missing: []string{"", "NA"},
		Ground: Ground{
			Infiltration: 0.85, InfiltrationLimit: inf, Soil: &Soil{Available: 120, Readily: 0.5, CropFactor: 1},
			CoverThickness: 4, CoverPorosity: 0.06, CoverSeepage: 0.011, Percolation: 0.0045, PercolationCap: inf, CoverFullAt: 4,
			DeepThickness: 9, DeepPorosity: 0.014, DeepSeepage: 0.007, DeepFullAt: 9, SchemeStep: 1,
			Start: &StartLevels{1.2, 3.4}, WarmUpYears: 0, CalibratedTo: nan,
		},
		Bands: []Band{
			{Name: "watch", GivenAs: "level", Level: 3.6, Until: 3.6, Place: Place{22, 26, "bands[0].level"}},
			{Name: "onset", GivenAs: "level", Level: 4.2, Until: 3.9, Place: Place{23, 26, "bands[1].level"}},
		},
		Count: Count{Apart: 10, Confidence: 0.9, Resamples: 2000, Seed: 1, MeanBlock: 2, DecideOn: 1, DecideBy: "load", DesignLife: 50},
		Site:  Site{PlanArea: 12000, GroundLevel: 418},
	}
	equalNaN := cmp.Comparer(func(a, b float64) bool { return a == b || math.IsNaN(a) && math.IsNaN(b) })
	if diff := cmp.Diff(want, got, equalNaN); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
	options := []Option{
		{Name: "as it stands", Baseline: true, Place: Place{27, 11, "options[0].name"}},
		{Name: "trenches", Place: Place{28, 11, "options[1].name"}, Measures: []Measure{{
			Key: "trench_drains", Place: Place{29, 5, "options[1].trench_drains"},
			Trench: &TrenchDrains{Depth: 3, Spacing: 12, Conductivity: 0.02, Radius: 0.1, Equivalent: 0.85, Head: 1.5, Efficiency: 1, Ceiling: inf},
		}}},
		{Name: "bored drains", Place: Place{34, 11, "options[2].name"}, Measures: []Measure{{
			Key: "bored_drains", Place: Place{35, 5, "options[2].bored_drains"},
			Bored: &BoredDrains{Rate: 0.005, Level: 3, Efficiency: 1, Ceiling: inf},
		}}},
		{Name: "trial", Place: Place{36, 11, "options[3].name"}, Measures: []Measure{{
			Key: "set", Place: Place{37, 5, "options[3].set"},
			Set: []Assignment{{Key: "cover.seepage", Value: 0.02, Text: "0.02 /d", Place: Place{37, 26, "options[3].set.cover.seepage"}}},
		}}},
	}
	if diff := cmp.Diff(options, s.Options, equalNaN, cmpopts.IgnoreUnexported(Option{})); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

// TestUnderstood reads back a study with most keys in another unit or left out.
func TestUnderstood(t *testing.T) {
	src, err := os.ReadFile("testdata/study/wide.yaml")
	if err != nil {
		t.Fatal(err)
	}
	s, err := Parse("study.yaml", src)
	if err != nil {
		t.Fatal(err)
	}
	var got strings.Builder
	for _, e := range s.Understood {
		from := "given"
		if e.Default {
			from = "default"
		}
		fmt.Fprintf(&got, "%s: %s (%s)\n", e.Key, e.Value, from)
	}
	const golden = "testdata/study/wide.understood"
	if *updateStudy {
		if err := os.WriteFile(golden, []byte(got.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(golden)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got.String(), "\n")); diff != "" {
		t.Errorf("run with -update-study to accept (-want +got):\n%s", diff)
	}
}

func TestBandDatums(t *testing.T) {
	s := parseBase(t, `
-  - {name: watch, level: 3.6 m}
-  - {name: onset, level: 4.2 m, until: 3.9 m}
+  - {name: watch, below_ground: 9.4 m, until: 9.9 m}
+  - {name: onset, elevation: 409.2 m, until: 408.9 m}
`[1:])
	for i, want := range []Band{{Level: 3.6, Until: 3.1}, {Level: 4.2, Until: 3.9}} {
		if b := s.Bands[i]; math.Abs(b.Level-want.Level) > 1e-12 || math.Abs(b.Until-want.Until) > 1e-12 {
			t.Errorf("%s: level %v until %v, want %v and %v", b.Name, b.Level, b.Until, want.Level, want.Until)
		}
	}
}

func TestFaultAndPlaces(t *testing.T) {
	s := parseBase(t, "")
	got := s.Fault(s.PlaceOf("ground.deep.seepage"), "is %d", 7).Error()
	want := "dir/study.yaml:19:14: ground.deep.seepage: is 7\n   19 |     seepage: 0.007 /d\n      |              ^"
	if got != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
	for key, line := range map[string]int{
		"ground.warm_up":                            8, // left out: the block
		"options[1].trench_drains.efficiency":       29,
		"options[1].trench_drains.equivalent_depth": 33,
		"options[2].name":                           34,
		"options[9].name":                           26,
		"money.horizon":                             0,
		"weather.missing":                           2,
	} {
		if p := s.PlaceOf(key); p.Line != line || p.Key != key {
			t.Errorf("%s is placed at %+v, want line %d", key, p, line)
		}
	}
	if got := (&Study{File: "x"}).Fault(Place{Line: 2, Key: "k"}, "t").Error(); got != "x:2: k: t" {
		t.Errorf("got %q", got)
	}
}

// TestAssign: each key of set changes the number that it names, and nothing else.
func TestAssign(t *testing.T) {
	places := func(g *Ground) map[string]*float64 {
		return map[string]*float64{
			"surface.infiltration": &g.Infiltration, "surface.infiltration_limit": &g.InfiltrationLimit,
			"soil.available_water": &g.Soil.Available, "soil.readily_available": &g.Soil.Readily, "soil.crop_factor": &g.Soil.CropFactor,
			"cover.drainable_porosity": &g.CoverPorosity, "cover.seepage": &g.CoverSeepage, "cover.percolation": &g.Percolation,
			"cover.percolation_ceiling": &g.PercolationCap, "cover.conductivity": &g.CoverConductivity, "cover.full_at": &g.CoverFullAt,
			"deep.consolidation": &g.Consolidation, "deep.drainable_porosity": &g.DeepPorosity, "deep.seepage": &g.DeepSeepage, "deep.lateral_inflow": &g.Lateral, "deep.full_at": &g.DeepFullAt,
		}
	}
	if n := len(places(&Ground{Soil: &Soil{}})); n != len(settable) {
		t.Errorf("%d keys are tried, of %d", n, len(settable))
	}
	for _, f := range settable {
		g := Ground{Soil: &Soil{}}
		changed := g
		changed.assign(Assignment{Key: f.name, Value: 7})
		for key, x := range places(&changed) {
			if want := map[bool]float64{true: 7}[key == f.name]; *x != want {
				t.Errorf("set %s leaves %s at %v, want %v", f.name, key, *x, want)
			}
		}
		if g != (Ground{Soil: g.Soil}) || *g.Soil != (Soil{}) {
			t.Errorf("set %s has changed the ground of the study too", f.name)
		}
	}
}

// TestEveryNumberArrives: what the wide study gives is what the rest of the program gets, in its units.
func TestEveryNumberArrives(t *testing.T) {
	src, err := os.ReadFile("testdata/study/wide.yaml")
	if err != nil {
		t.Fatal(err)
	}
	s, err := Parse("dir/wide.yaml", src)
	if err != nil {
		t.Fatal(err)
	}
	inf, nan := math.Inf(1), math.NaN()
	want := &Study{
		File: "dir/wide.yaml", Title: "0+400: a title with a colon", PreparedBy: "A. N. Engineer's office",
		Weather: WeatherSpec{
			File: "records/weather.csv.gz", Path: filepath.Join("dir", "records", "weather.csv.gz"), Time: "time", Format: "iso",
			Rain: WeatherColumn{"rain, mm", "0.1 mm"}, StampEnd: true, Missing: []string{"", "-999", "-999.0", "n/a"}, Gaps: "refuse",
		},
		Ground: Ground{
			Infiltration: 0.85, InfiltrationLimit: 20,
			CoverThickness: 4, CoverPorosity: 0.06, CoverSeepage: 0.011, Percolation: 0, PercolationCap: 2.4, CoverConductivity: 0.0864, CoverFullAt: inf,
			DeepThickness: 9, DeepPorosity: 0.014, DeepSeepage: 0.007, Lateral: 0.05, DeepFullAt: 8.5, Consolidation: 3.15576, SchemeStep: 1,
			WarmUpYears: 12, CalibratedTo: nan,
		},
		Bands: []Band{
			{Name: "012", GivenAs: "below_ground", Level: 3.6, Until: 3.6},
			{Name: "yes", GivenAs: "elevation", Level: 4.2, Until: 3.9, LossPerEvent: 2.4e6, LossPerDay: 1800.5},
		},
		Count: Count{Apart: 0, YearStarts: 10, Confidence: 0.95, Resamples: 10000, Seed: 42, MeanBlock: 3, DecideOn: 1, DecideBy: "annual_probability",
			Target: &Target{Measure: "annual_probability", Most: 0.05, GivenAs: "return_period", Text: "7305 d"}, DesignLife: 25},
		Money: &Money{Currency: "kr.", Horizon: 40, Rate: 0.025, PricesOf: 2026, Contingency: 0.2},
		Options: []Option{
			{Name: "true"},
			{Name: "with rate", Baseline: true, Measures: []Measure{
				{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Rate: 0.05, Radius: 0.1, Equivalent: nan, Head: 2, Efficiency: 0.8, Ceiling: 12,
					Decline: &Decline{HalfLife: 12, Every: inf, Restored: 1}}},
			}, Costs: []Cost{{Capital: 38000, PerYear: 1500, Life: inf, Drains: "trench_drains"}}},
			{Name: "bores", Measures: []Measure{
				{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.0048, Level: 3, Efficiency: 1, Ceiling: inf, Number: 14, Length: 40, Decline: &Decline{HalfLife: 15, Every: 5, Restored: 0.95, Renewed: 30}}},
			}, Costs: []Cost{{PerMetre: 95.5, PerFlush: 4000, Life: 30, Drains: "bored_drains"}}},
			{Name: "on the contact, and more", Measures: []Measure{
				{Key: "set", Set: []Assignment{
					{Key: "cover.conductivity", Value: 0.1, Text: "0.1 m/d"},
					{Key: "surface.infiltration", Value: 0.8, Text: "80 %"},
					{Key: "cover.percolation_ceiling", Value: inf, Text: "none"},
				}},
				{Key: "trench_drains", Trench: &TrenchDrains{Depth: 4, Spacing: 12, Radius: 0.1, Equivalent: nan, Head: 2, Efficiency: 1, Ceiling: inf}},
				{Key: "bored_drains", Bored: &BoredDrains{Rate: 0.0048, Level: 3, Efficiency: 1, Ceiling: inf, Number: 14, Length: 40, Decline: &Decline{HalfLife: 15, Every: 5, Restored: 0.95, Renewed: 30}}},
				{Key: "surface_water", Cut: &SurfaceWater{KeptOut: 0.1}},
			}, Costs: []Cost{
				{Capital: 38000, PerYear: 1500, Life: inf, Drains: "trench_drains"},
				{PerMetre: 95.5, PerFlush: 4000, Life: 30, Drains: "bored_drains"},
			}},
			{Name: "by the square", Minimum: true, Measures: []Measure{{Key: "trench_drains", Trench: &TrenchDrains{
				Depth: 3, Spacing: 12.192, Conductivity: 0.0432, Below: 0.00864, Radius: 0.15, Equivalent: nan, Head: 1.5, Quadratic: true, Efficiency: 1, Ceiling: inf,
			}}}},
		},
		Site: Site{PlanArea: 12000, GroundLevel: 418},
		Declared: Declared{
			"existing_slip_surface": "yes", "rapid_movement_possible": "no", "ground_changed_since_calibration": "unknown",
			"iron_or_lime_in_water": "unknown", "perched_water": "unknown", "outlet_on_moving_ground": "unknown", "wells_or_buildings_nearby": "unknown",
		},
	}
	opts := cmp.Options{
		cmpopts.EquateNaNs(), cmpopts.EquateApprox(1e-12, 0), cmpopts.EquateEmpty(),
		cmpopts.IgnoreTypes(Place{}), cmpopts.IgnoreUnexported(Study{}, Option{}), cmpopts.IgnoreFields(Study{}, "Understood", "SHA256"),
	}
	if d := cmp.Diff(want, s, opts); d != "" {
		t.Errorf("(-want +got):\n%s", d)
	}
}

// TestLoad checks what may be wrong with a file before it is read as a study.
func TestLoad(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		return path
	}
	base := baseStudy(t)
	for _, tt := range []struct{ name, path, want string }{
		{"good", write("good.yaml", base), ""},
		{"byte-order mark", write("bom.yaml", "\ufeff"+base), ""},
		{"line ends", write("crlf.yaml", strings.ReplaceAll(base, "\n", "\r\n")), ""},
		{"document start and end", write("doc.yaml", "# a comment\n---\n"+base+"...\n# the end\n"), ""},
		{"no final line end", write("cut.yaml", strings.TrimSuffix(base, "\n")), ""},
		{"missing", filepath.Join(dir, "none.yaml"), "none.yaml: there is no such file"},
		{"file for a folder", filepath.Join(dir, "good.yaml", "study.yaml"), "study.yaml: this names no file that there could be"},
		{"folder", dir, ": this is a folder; name the study file in it"},
		{"empty", write("empty.yaml", ""), "empty.yaml: the file is empty; a study begins with a line such as: study: Bank above the mill, drainage options"},
		{"comments", write("comments.yaml", "# only\n\n"), "comments.yaml: the file holds no keys; a study begins with a line such as: study: Bank above the mill, drainage options"},
		{"zero bytes", write("zero.yaml", "study: x\x00"), "zero.yaml: the file is not text: it holds zero bytes; a study is plain text in UTF-8"},
		{"compressed", write("gz.yaml", "\x1f\x8b\x08xx"), "gz.yaml: the file is compressed; a study is plain text"},
		{"UTF-16", write("wide.yaml", "\xff\xfes\x00t\x00"), "wide.yaml: the file is UTF-16 text; save it as UTF-8"},
		{"latin letters", write("latin.yaml", "study: x\nprepared_by: Andr\xe9\n"), "latin.yaml:2:18: the byte 0xe9 is not UTF-8 text; save the file as UTF-8"},
		{"control character", write("bell.yaml", "study: x\a\n"), "bell.yaml:1:9: the control character U+0007 stands here; delete it"},
		{"turned text", write("bidi.yaml", "study: x\u202ey\n"), "bidi.yaml:1:9: the invisible character U+202E stands here; delete it"},
		{"lone carriage return", write("mac.yaml", "study: x\rweather: y\r"), "mac.yaml:1:9: a carriage return stands alone here; save the file with line feeds"},
		{"too large", write("large.yaml", base+strings.Repeat("# long\n", 200000)), "large.yaml: the file is larger than 1 MB; a study is a short text, and its data stand in files of their own"},
		{"no name", "", "no study file is named"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			s, err := Load(tt.path)
			if tt.want == "" {
				if err != nil {
					t.Fatal(err)
				}
				if s.Title != "Test bank" || len(s.Options) != 4 || s.SHA256 == "" || s.Weather.Path != filepath.Join(dir, "weather.csv") {
					t.Errorf("got %+v", s)
				}
				return
			}
			var fe *fault.Error
			if !errors.As(err, &fe) || !strings.HasSuffix(err.Error(), tt.want) || fe.File != tt.path {
				t.Errorf("got %v, want %s", err, tt.want)
			}
		})
	}
}

// TestLoadEndless reads a file that never ends.
func TestLoadEndless(t *testing.T) {
	if _, err := os.Stat("/dev/zero"); err != nil {
		t.Skip("this system has no /dev/zero")
	}
	_, err := Load("/dev/zero")
	if want := "/dev/zero: the file is larger than 1 MB; a study is a short text, and its data stand in files of their own"; err == nil || err.Error() != want {
		t.Errorf("got %v", err)
	}
}

// TestNoPermission: what the machine refuses is not the study's fault.
func TestNoPermission(t *testing.T) {
	path := filepath.Join(t.TempDir(), "study.yaml")
	if err := os.WriteFile(path, []byte("study: x\n"), 0); err != nil {
		t.Fatal(err)
	}
	if f, err := os.Open(path); err == nil {
		f.Close()
		t.Skip("this user may read everything")
	}
	_, err := Load(path)
	var fe *fault.Error
	if err == nil || errors.As(err, &fe) {
		t.Errorf("got %v", err)
	}
}

// TestLargeStudies checks that time and message stay small whatever fills the file.
func TestLargeStudies(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long")
	}
	fill := func(s string) string { return strings.Repeat(s, (MaxStudyBytes-2000)/len(s)) }
	var nested, unique strings.Builder
	for i := 0; nested.Len() < MaxStudyBytes-3000; i++ {
		nested.WriteString(strings.Repeat(" ", i) + "a:\n")
	}
	for i := 0; unique.Len() < MaxStudyBytes-2000; i++ {
		fmt.Fprintf(&unique, "k%d: 1\n", i)
	}
	base := baseStudy(t)
	for name, src := range map[string]string{
		"brackets": fill("["), "braces": fill("{"), "dashes": fill("- "), "questions": fill("? "), "quotes": fill(`"`),
		"keys": fill("a: 1\n"), "one key": fill("x") + ": 1\n", "one text": "study: " + fill("x"), "lines": "study:\n" + fill("  x\n"),
		"flow list": "study: [" + fill("1, ") + "]", "flow block": "study: {" + fill("b: 1, ") + "}", "nested": nested.String(), "unique keys": unique.String(),
		"unknown in list": "bands:\n" + fill("- b: 1\n  c: 2\n"), "tabs": fill("\tx\n"), "colons": fill(":"), "commas": "a: [" + fill(",") + "]",
		"items": "study:\n" + fill("- 1\n"), "comments": "study:\n" + fill("# c\n") + "  b: 1\n", "comments after items": "study:\n" + fill("- 1 # c\n"), "texts": fill(`"x" `),
		"null items": "study:\n" + fill("-\n"), "flow nulls": "study: {" + fill("b, ") + "}", "single quotes": fill("''"), "documents": fill("---\n"), "dots": fill("...\n"),
		"missing": strings.Replace(base, "    pet:", "    x: ["+fill("a,")+"]\n    pet:", 1),
		"options": strings.Replace(base, "options:\n", "options:\n"+fill("  - name: a\n"), 1),
		"bands":   strings.Replace(base, "bands:\n", "bands:\n"+fill("  - {name: a, level: 1 m}\n"), 1),
	} {
		start := time.Now()
		_, err := Parse("study.yaml", []byte(src))
		took := time.Since(start)
		if err == nil {
			t.Errorf("%s: no error", name)
			continue
		}
		if n := len(err.Error()); n > 10000 || !strings.HasPrefix(err.Error(), "study.yaml") {
			t.Errorf("%s: an error of %d bytes: %.300s", name, n, err)
		}
		// A slow machine under a race detector may need some seconds; what grows with the square takes minutes.
		if took > 20*time.Second {
			t.Errorf("%s took %v", name, took)
		}
		if testing.Verbose() {
			first, _, _ := strings.Cut(err.Error(), "\n")
			t.Logf("%s: %v: %.150s", name, took.Round(time.Millisecond), first)
		}
	}
}

// TestKeysNowRefused holds the list of keys that wait for their turn.
func TestKeysNowRefused(t *testing.T) {
	var got []string
	var walk func(fields []field, path string)
	walk = func(fields []field, path string) {
		for _, f := range fields {
			if f.later {
				got = append(got, join(path, f.name))
			}
			walk(f.shape.fields, join(path, f.name))
		}
	}
	walk(studyShape.fields, "")
	want := strings.Fields(`
weather.columns.temperature weather.pet_from weather.snow ground.ensemble climates readings fit`)
	if diff := cmp.Diff(want, got); diff != "" {
		t.Errorf("(-want +got):\n%s", diff)
	}
}

// TestTable checks the table of keys against itself: each default can be read and lies in its range.
func TestTable(t *testing.T) {
	var walk func(fields []field, path string)
	walk = func(fields []field, path string) {
		seen := map[string]bool{}
		for i := range fields {
			f := &fields[i]
			if seen[f.name] {
				t.Errorf("%s has %s twice", path, f.name)
			}
			seen[f.name] = true
			if f.need != "" && (f.def != "" || f.quiet || f.later) {
				t.Errorf("%s.%s is needed and yet may be left out", path, f.name)
			}
			d := &decoder{problems: &problems{}, places: map[string]Place{}}
			d.standIn(f, Place{Key: join(path, f.name)}) // panics for a default that cannot be read
			walk(f.shape.fields, join(path, f.name))
		}
	}
	walk(studyShape.fields, "")
}

func TestCheckName(t *testing.T) {
	for _, good := range []string{"a", "012", "0+400", "trenches, spacing 8 m", "Böschung", strings.Repeat("ä", 60), "x=y"} {
		if wrong := checkName(good); wrong != "" {
			t.Errorf("%q: %s", good, wrong)
		}
	}
	for _, bad := range []string{"", " a", "a ", "\u00a0a", "a\nb", "a\tb", "=a", "+a", "-a", "@a", strings.Repeat("a", 61), "As Built", "as recorded"} {
		if checkName(bad) == "" {
			t.Errorf("%q is accepted", bad)
		}
	}
}

func TestFoldKey(t *testing.T) {
	for _, pair := range [][2]string{{"Ärger", "äRGER"}, {"K", "k"}, {"\u212a", "k"}, {"ſ", "S"}} {
		if foldKey(pair[0]) != foldKey(pair[1]) {
			t.Errorf("%q and %q differ", pair[0], pair[1])
		}
	}
}

func FuzzStudy(f *testing.F) {
	base := baseStudy(f)
	f.Add([]byte(base))
	for _, file := range caseFiles(f) {
		for _, c := range readCases(f, file) {
			src, err := editStudy(base, c.edits)
			if err != nil {
				f.Fatal(err)
			}
			f.Add([]byte(src))
		}
	}
	for _, file := range []string{"testdata/study/wide.yaml", "../testdata/full/study.yaml"} {
		src, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(src)
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		s, err := Parse("study.yaml", src)
		if err != nil {
			if s != nil || !strings.HasPrefix(err.Error(), "study.yaml") {
				t.Fatalf("the error does not name the file: %v", err)
			}
			if strings.Contains(err.Error(), "cannot be read as a study (") {
				t.Fatalf("a panic: %v", err)
			}
			return
		}
		if err := invariant(s); err != nil {
			t.Fatal(err)
		}
		again, err := Parse("study.yaml", bytes.ReplaceAll(src, []byte("\r\n"), []byte("\n")))
		if err != nil || !cmp.Equal(s.Understood, again.Understood) {
			t.Fatalf("read differently the second time: %v", err)
		}
	})
}

// invariant checks what the replay takes for granted of a study.
func invariant(s *Study) error {
	baselines := 0
	for _, o := range s.Options {
		if o.Baseline {
			baselines++
		}
	}
	last := 0.0
	for _, b := range s.Bands {
		if !(b.Level > last && b.Level < s.Ground.DeepFullAt && b.Until <= b.Level && b.Until >= 0) {
			return fmt.Errorf("band %+v after %v", b, last)
		}
		last = b.Level
	}
	for i := range s.Conditions {
		if c := &s.Conditions[i]; !(c.Drains >= 0 && c.Drains <= 1 && c.SurfaceWater >= 0 && c.SurfaceWater <= 1 && c.Vegetation >= 0 && c.Vegetation <= 1) {
			return fmt.Errorf("condition %+v", c)
		}
	}
	for i := range s.Options {
		for _, m := range s.Options[i].Measures {
			switch {
			case m.Trench != nil && !(m.Trench.Depth > 0 && m.Trench.Rate+m.Trench.Spacing > 0 && m.Trench.Efficiency > 0 && m.Trench.Head > 0 && m.Trench.Radius > 0),
				m.Trench != nil && m.Trench.Quadratic && (m.Trench.Rate > 0 || !math.IsInf(m.Trench.Ceiling, 1)),
				m.decline() != nil && !(m.decline().HalfLife > 0 && m.decline().Every > 0 && m.decline().Restored > 0 && m.decline().Restored <= 1),
				m.Bored != nil && !(m.Bored.Rate > 0 && m.Bored.Level >= 0 && m.Bored.Efficiency > 0),
				m.Cut != nil && !(m.Cut.KeptOut >= 0 && m.Cut.KeptOut <= 1),
				m.Vegetation != nil && !(m.Vegetation.PETFactor >= 0 && m.Vegetation.Interception >= 0 && m.Vegetation.Interception <= 1),
				m.CutOff != nil && !(m.CutOff.Intercepted >= 0 && m.CutOff.Intercepted <= 1):
				return fmt.Errorf("measure %+v", m)
			}
		}
		for _, c := range s.Options[i].Costs {
			m := s.Options[i].drains(c.Drains)
			switch {
			case s.Money == nil, !(c.Capital >= 0 && c.PerMetre >= 0 && c.PerYear >= 0 && c.PerFlush >= 0 && c.Life >= 1),
				c.PerMetre > 0 && !(s.metres(m) > 0), c.PerFlush > 0 && (m == nil || m.decline() == nil || math.IsInf(m.decline().Every, 1)):
				return fmt.Errorf("cost %+v of %s", c, s.Options[i].Name)
			}
		}
		if w := newWorks(s, &s.Options[i], &asBuilt, asNew); w.ground.CoverPorosity > 1 || w.ground.DeepPorosity > 1 {
			return fmt.Errorf("porosities of %s: %v and %v", s.Options[i].Name, w.ground.CoverPorosity, w.ground.DeepPorosity)
		}
	}
	if m := s.Money; m != nil && !(m.Horizon >= 1 && m.Rate >= 0 && m.Rate < 1 && m.Contingency >= 0 && m.PricesOf > 0 && m.Currency != "") {
		return fmt.Errorf("money %+v", m)
	}
	if t := s.Count.Target; t != nil && !(t.Most >= 0 && measureNamed(t.Measure).name == t.Measure) {
		return fmt.Errorf("target %+v", t)
	}
	switch g := &s.Ground; {
	case len(g.notConverted()) > 0:
		return fmt.Errorf("%v", g.notConverted())
	case baselines != 1, len(s.Bands) == 0, s.Count.DecideOn >= len(s.Bands), s.Count.DecideOn < 0 && len(s.Bands) > 1 && len(s.Options) > 1:
		return fmt.Errorf("%d baselines, %d bands, decide_on %d", baselines, len(s.Bands), s.Count.DecideOn)
	case !(g.CoverThickness > 0 && g.DeepThickness > 0 && g.CoverPorosity > 0 && g.DeepPorosity > 0 && g.CoverFullAt > 0 && g.DeepFullAt > 0):
		return fmt.Errorf("%+v", g)
	case !(g.CoverSeepage+g.Percolation > 0 && g.DeepSeepage > 0 && g.Lateral >= 0 && g.PercolationCap > 0 && g.Infiltration >= 0 && g.Infiltration <= 1):
		return fmt.Errorf("%+v", g)
	}
	return nil
}
