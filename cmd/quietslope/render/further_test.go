package render

import (
	"fmt"
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// inShortOf is what a comparison says in short, on one line.
func inShortOf(t *testing.T, c *result.Comparison) string {
	t.Helper()
	text := written(t, Comparison(c))
	fits(t, text)
	_, text, _ = strings.Cut(text, "\nIn short\n")
	text, _, _ = strings.Cut(text, "\nHow the options stand")
	return strings.Join(strings.Fields(text), " ")
}

// withLoads is a comparison with a case for each list of loads, one load per option, the first of them the baseline's. The
// ranges are made up. An option without load does not rise above the band.
func withLoads(cases ...[]float64) *result.Comparison {
	var options []strengths
	for i := range cases[0] {
		options = append(options, strengths{fmt.Sprintf("option %d", i), nil, 1 - float64(i)/100})
	}
	c := fixture(options, []string{"onset"})
	one := c.Cases[0]
	c.Cases = nil
	for n, loads := range cases {
		of := one
		of.Options = nil
		if n > 0 {
			of.Condition = fmt.Sprintf("condition %d", n)
		}
		for i, load := range loads {
			o := one.Options[i]
			f := o.Bands[0]
			f.LoadMDaysPerYear, f.LoadMDaysPerYearCI = load, ci(load/2, load*2)
			f.DaysPerYear, f.Events = load*3, float64(int(20*load))
			if i > 0 {
				change := *f.Change
				change.ToldApart, change.LoadMDaysPerYear.Difference = load != loads[0], load-loads[0]
				f.Change = &change
			}
			o.Bands = []result.BandFigure{f}
			of.Options = append(of.Options, o)
		}
		c.Cases = append(c.Cases, of)
	}
	return c
}

// TestFurtherCases: what a further case costs the options that lead is said before all else.
func TestFurtherCases(t *testing.T) {
	for _, tt := range []struct {
		what  string
		cases [][]float64
		want  []string
	}{
		{"the least and the next, and a new order", [][]float64{{26, 0.2, 4, 9}, {26, 12, 5, 9}}, []string{
			"In case 2, condition 1: B, the least in case 1, has 12 m·d per year instead of 0.2; C, the next, has 5 m·d per year instead of 4; the least is now C, with 5; the order becomes C < D < B < A."}},
		{"nothing changes", [][]float64{{26, 0.2, 4}, {26, 0.2, 4}}, []string{
			"In case 2, condition 1: B, the least in case 1, stays at 0.2 m·d per year; C, the next, stays at 4 m·d per year; the order stays."}},
		{"two lead, without an event", [][]float64{{26, 0, 0, 9}, {26, 4, 9, 9}}, []string{
			`In case 2, condition 1: B and C, the least in case 1, have 4 and 9 m·d per year instead of 0; with B and C the level rises above "onset" too; the least is now B, with 4;`}},
		{"three lead", [][]float64{{26, 0, 0, 0}, {26, 4, 26, 9}}, []string{
			`B–D, the least in case 1, have between 4 and 26 m·d per year instead of 0; with B–D the level rises above "onset" too; C is not told apart from A;`}},
		{"the baseline changes too", [][]float64{{26, 4}, {40, 50}}, []string{
			"In case 2, condition 1: A, the baseline, has 40 m·d per year instead of 26; B, the least in case 1, has 50 m·d per year instead of 4; B is worse than A; the least is now A, with 40; the order becomes A < B."}},
		{"an event less", [][]float64{{26, 4}, {26, 0}}, []string{
			"B, the least in case 1, has 0 m·d per year instead of 4; with B the record holds no event any more; the order stays."}},
		{"many options", [][]float64{{26, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11}, {26, 1, 2, 3, 4, 5, 6, 7, 8, 9, 11, 10}}, []string{
			"From the least by load: B < C < D < E < F < G < H < I, then 4 more.",
			"B, the least in case 1, stays at 1 m·d per year; C, the next, stays at 2 m·d per year; the order of the others changes."}},
		{"many without an event", [][]float64{{26, 0, 2, 0, 4, 0, 6, 0, 8, 0, 10, 0, 1, 0, 1, 0, 1, 0, 1, 0, 1, 0, 0}, {26, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1}}, []string{
			"With B, D, F, H, J, L, N, P and 4 more the record holds no event,", "B, D, F, H, J, L, N, P and 4 more, the least in case 1, have between 1 and 11 m·d per year instead of 0;"}},
		{"many cases", [][]float64{{26, 1, 4}, {26, 2, 4}, {26, 7, 4}, {26, 3, 26}, {30, 1, 4}}, []string{
			"In the 4 further cases: A, the baseline, has between 26 and 30 m·d per year instead of 26, the most in case 5 (condition 4); B, the least in case 1, has between 1 and 7 m·d per year instead of 1, the most in case 3 (condition 2); C, the next, has between 4 and 26 m·d per year instead of 4, the most in case 4 (condition 3); C is not told apart from A in some of them; others are the least in case 3. "}},
		{"many cases of nothing", [][]float64{{26, 1}, {0, 0}, {0, 0}, {0, 0}, {0, 0}}, []string{`In the 4 further cases: no option's level rises above "onset".`}},
	} {
		text := strings.NewReplacer(".0 ", " ", ".0,", ",", ".0;", ";", ".0.", ".", "0.20", "0.2").Replace(inShortOf(t, withLoads(tt.cases...))) // digits are not what this is about
		for _, want := range tt.want {
			if !strings.Contains(text, want) {
				t.Errorf("%s: no %q in\n%s", tt.what, want, text)
			}
		}
	}
}

// TestFurtherCasesBy: the figure that is told is the one that ranks the options.
func TestFurtherCasesBy(t *testing.T) {
	for key, want := range map[string]string{
		"days": "B, the least in case 1, has 36 days per year instead of 0.6;", "events": "B, the least in case 1, has ", "annual_probability": "% of years instead of ",
	} {
		c := withLoads([]float64{26, 0.2}, []float64{26, 12})
		c.Settings.DecideBy = key
		for i := range 2 {
			f := &c.Cases[i].Options[1].Bands[0]
			f.DaysPerYearCI = ci(f.DaysPerYear/2, 2*f.DaysPerYear)
			f.EventsPerYear, f.AnnualProbability = 0.5+float64(i)/10, 0.2+float64(i)/10
		}
		if text := inShortOf(t, c); !strings.Contains(text, want) {
			t.Errorf("by %s: no %q in\n%s", key, want, text)
		}
	}
}

// TestNotesInCases: a note about options on bands in some cases says where, and, where that would be long, on which bands.
func TestNotesInCases(t *testing.T) {
	options := []string{"a", "b", "c", "d"}
	cases := []result.Case{{Climate: "x", Condition: "built"}, {Climate: "x", Condition: "poor"}, {Climate: "y", Condition: "built"}, {Climate: "y", Condition: "poor"}}
	at := func(band, option string, in ...int) []result.Warning {
		var all []result.Warning
		for _, i := range in {
			all = append(all, result.Warning{Band: band, Option: option, Climate: cases[i].Climate, Condition: cases[i].Condition})
		}
		return all
	}
	join := func(parts ...[]result.Warning) (all []result.Warning) {
		for _, p := range parts {
			all = append(all, p...)
		}
		return all
	}
	for want, places := range map[string][]result.Warning{
		"":                                       join([]result.Warning{{}}),
		"case 2":                                 at("", "", 1),
		"cases 1, 2":                             {{Climate: "x"}},
		`band "watch" in cases 1–3`:              at("watch", "", 0, 1, 2),
		"options B–D":                            {{Option: "b"}, {Option: "d"}, {Option: "c"}, {Option: "b"}},
		"option A in case 1, option B in case 4": join(at("", "a", 0), at("", "b", 3)),
		`on "watch" A`:                           at("watch", "a", 0, 1, 2, 3),
		`on "watch" A and B in cases 1–3`:        join(at("watch", "b", 0, 1, 2), at("watch", "a", 2, 1, 0)),
		`on "watch" A in cases 1, 3, B in case 2; on "onset" C`:       join(at("watch", "a", 0, 2), at("onset", "c", 0, 1, 2, 3), at("watch", "b", 1)),
		`on "watch", "onset" and "failure", as said below the tables`: join(at("watch", "a", 0, 2), at("watch", "b", 1), at("watch", "c", 3), at("onset", "c", 0, 1), at("onset", "a", 2), at("onset", "d", 3), at("failure", "a", 0), at("failure", "b", 1), at("failure", "c", 2)),
	} {
		if got := (note{places: places}).concerns(newScope(options, cases)); got != want {
			t.Errorf("got %q, want %q", got, want)
		}
	}
}

func TestWrap(t *testing.T) {
	for _, tt := range []struct{ text, want string }{
		{"", ""}, {"a b", "a b"}, {"at 90 %, with", "at|90 %,|with"}, {"a % % b", "a % %|b"}, {"abc % % b", "abc %|% b"}, {"% a", "% a"}, {"longer than six", "longer|than|six"},
	} {
		if got := strings.Join(wrap(tt.text, 6), "|"); got != tt.want {
			t.Errorf("%q became %q, want %q", tt.text, got, tt.want)
		}
	}
}

func TestLists(t *testing.T) {
	for _, tt := range []struct{ got, want string }{
		{byLetter(nil), ""}, {byLetter([]int{1}), "B"}, {byLetter([]int{0, 1, 3}), "A, B and D"}, {byLetter([]int{0, 2, 3, 4, 26}), "A, C–E and AA"},
		{someByLetter([]int{0, 2, 4, 6, 8, 10, 12, 14}), "A, C, E, G, I, K, M and O"},
		{someByLetter([]int{0, 2, 4, 6, 8, 10, 12, 14, 20, 21, 22}), "A, C, E, G, I, K, M, O and 3 more"},
		{order([]float64{3, 1, 1}, 3), "B = C < A"}, {order([]float64{3, 1, 1, 7}, 2), "B = C, then 2 more"}, {order([]float64{3, 1, 1}, 2), "B = C < A"},
	} {
		if tt.got != tt.want {
			t.Errorf("got %q, want %q", tt.got, tt.want)
		}
	}
}
