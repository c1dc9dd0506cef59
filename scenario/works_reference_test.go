package scenario

import (
	"context"
	"fmt"
	"math"
	"os"
	"regexp"
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// The studies testdata/seattle/works.yaml and works-bare.yaml are compared with tables from an independent program: levels
// by Taylor series between events, drains by both laws, ages and stops of drains, resampling, costs and losses written
// apart (testdata/ref/seattle-works.py, whose tables these are).

const (
	worksLevelTol = 1e-8  // m; the tables of levels have 9 digits after the point
	worksTol      = 1e-10 // of the figure, or of 1 where it is less: two ways of adding up some thousand numbers
)

// worksTable is one of the tables, by the name of its column and the number of the row.
type worksTable struct {
	t    *testing.T
	cols map[string][]string
	rows int
}

func readWorks(t *testing.T, name string) worksTable {
	t.Helper()
	cols, rows := table(t, "../testdata/ref/seattle-works-"+name+".csv")
	return worksTable{t, cols, rows}
}

func (w worksTable) text(i int, column string) string {
	w.t.Helper()
	c, ok := w.cols[column]
	if !ok {
		w.t.Fatalf("the table has no column %q", column)
	}
	return c[i]
}

// worksCheck compares figures with a row of a table and keeps the largest difference.
type worksCheck struct {
	worksTable
	worst float64
	at    string
}

// figure compares a figure, nil for none, with a cell, blank for none.
func (w *worksCheck) figure(i int, column, where string, got *float64) {
	w.t.Helper()
	cell := w.text(i, column)
	switch {
	case cell == "" && got == nil:
	case cell == "":
		w.t.Errorf("%s: %s is %v, want none", where, column, *got)
	case got == nil:
		w.t.Errorf("%s: no %s, want %s", where, column, cell)
	default:
		want := number(w.t, cell)
		d := math.Abs(*got-want) / max(1, math.Abs(want))
		if !(d <= worksTol) {
			w.t.Errorf("%s: %s is %v, want %v", where, column, *got, want)
		}
		if d > w.worst {
			w.worst, w.at = d, where+" "+column
		}
	}
}

func (w *worksCheck) interval(i int, column, where string, got *result.Interval) {
	w.t.Helper()
	var lo, hi *float64
	if got != nil {
		lo, hi = &got[0], &got[1]
	}
	w.figure(i, column+"lower", where, lo)
	w.figure(i, column+"upper", where, hi)
}

func (w *worksCheck) word(i int, column, where, got string) {
	w.t.Helper()
	if want := w.text(i, column); got != want {
		w.t.Errorf("%s: %s is %q, want %q", where, column, got, want)
	}
}

// orZero is the number, 0 for one that is left out.
func orZero(n *int) *float64 {
	x := 0.0
	if n != nil {
		x = float64(*n)
	}
	return &x
}

// worksImplicit gives works-bare.yaml rates that were fitted by a stepping formula; the trenches then drain the converted porosity.
var worksImplicit = []string{"  start: {", "  rates_from: {scheme: implicit, step: 5 d}\n  start: {"}

// worksStudies are the studies and what compare finds.
func worksStudies(t *testing.T) map[string]*result.Comparison {
	t.Helper()
	return map[string]*result.Comparison{
		"works":      compare(t, moreStudy(t, "works")),
		"works-bare": compare(t, moreStudy(t, "works-bare")),

		"works-bare, implicit": compare(t, moreStudy(t, "works-bare", worksImplicit...)),
	}
}

func worksOption(t *testing.T, c *result.Comparison, condition, name string) *result.Option {
	t.Helper()
	for i := range c.Cases {
		for j := range c.Cases[i].Options {
			if o := &c.Cases[i].Options[j]; c.Cases[i].Condition == condition && o.Name == name {
				return o
			}
		}
	}
	t.Fatalf("no option %q in the condition %q", name, condition)
	return nil
}

// worksCases is the number of options in all cases.
func worksCases(c *result.Comparison) (n int) {
	for _, x := range c.Cases {
		n += len(x.Options)
	}
	return n
}

func TestWorksLevels(t *testing.T) {
	for study, name := range map[string]string{"works": "levels", "works-bare": "bare-levels"} {
		s := moreStudy(t, study)
		want := readWorks(t, name)
		seen, worst := 1, 0.0 // the column of time
		for _, condition := range append([]string{"as built"}, conditionNames(s)...) {
			series, err := Levels(context.Background(), s, LevelsQuery{Condition: condition})
			if err != nil {
				t.Fatal(err)
			}
			at := map[string]int{}
			for i := range series.Rows {
				at[series.Time(i)] = i
			}
			for k, option := range series.Options {
				for layer, got := range map[string][]float64{"cover_m": series.Cover[k], "deep_m": series.Deep[k]} {
					column := condition + "/" + option + "/" + layer
					seen++
					for i := range want.rows {
						when := want.text(i, "time")
						step, ok := at[when]
						if !ok {
							t.Fatalf("no step at %s", when)
						}
						d := math.Abs(got[step] - number(t, want.text(i, column)))
						if worst = max(worst, d); !(d <= worksLevelTol) {
							t.Fatalf("%s: %s differs by %g m at %s", study, column, d, when)
						}
					}
				}
			}
		}
		if seen != len(want.cols) {
			t.Errorf("%s: compared %d columns of %d", study, seen, len(want.cols))
		}
		t.Logf("%s: largest difference of a level %.1e m", study, worst)
	}
}

func conditionNames(s *Study) (names []string) {
	for _, c := range s.Conditions {
		names = append(names, c.Name)
	}
	return names
}

// TestWorksDrains: rates by both laws, with the equivalent depth that is worked out, and what the drains carry.
func TestWorksDrains(t *testing.T) {
	found := worksStudies(t)
	w := &worksCheck{worksTable: readWorks(t, "drains")}
	for i := range w.rows {
		name := w.text(i, "option")
		var trench, bored *result.Drain
		for j, d := range worksOption(t, found[w.text(i, "study")], "as built", name).Drains {
			switch d.Layer {
			case "cover":
				trench = &worksOption(t, found[w.text(i, "study")], "as built", name).Drains[j]
			case "deep":
				bored = &worksOption(t, found[w.text(i, "study")], "as built", name).Drains[j]
			}
		}
		if trench == nil {
			trench = &result.Drain{}
			w.figure(i, "trench_rate_per_day", name, nil)
		} else {
			w.figure(i, "trench_rate_per_day", name, &trench.RatePerDay)
			w.figure(i, "trench_invert_m", name, &trench.InvertM)
			w.figure(i, "trench_running_share", name, &trench.RunningShare)
			w.figure(i, "trench_peak_mm_per_day", name, &trench.PeakMMPerDay)
			if quadratic := number(t, w.text(i, "trench_square_per_mm_day")) > 0; quadratic != (trench.Law == "quadratic") {
				t.Errorf("%s: the law is %s", name, trench.Law)
			}
		}
		if bored == nil {
			w.figure(i, "bored_rate_per_day", name, nil)
		} else {
			w.figure(i, "bored_rate_per_day", name, &bored.RatePerDay)
			w.figure(i, "bored_running_share", name, &bored.RunningShare)
			w.figure(i, "bored_peak_mm_per_day", name, &bored.PeakMMPerDay)
		}
	}
	t.Logf("largest difference %.1e at %s", w.worst, w.at)
}

// TestWorksCounts: every figure of every band, whole for drains of one age, else the mean of the figures over four ages and
// the longest event of all, with its interval and its change against the baseline.
func TestWorksCounts(t *testing.T) {
	found := worksStudies(t)
	w := &worksCheck{worksTable: readWorks(t, "counts")}
	for i := range w.rows {
		study, condition, name, band := w.text(i, "study"), w.text(i, "condition"), w.text(i, "option"), w.text(i, "band")
		where := strings.Join([]string{study, condition, name, band}, ", ")
		if near := number(t, w.text(i, "nearest_band_m")); !(near > 5*worksLevelTol) {
			t.Errorf("%s: a reference level is %g m from a band, too close for an exact count", where, near)
		}
		o := worksOption(t, found[study], condition, name)
		w.word(i, "drains_as", where, o.DrainsAs)
		var b *result.BandFigure
		for j := range o.Bands {
			if o.Bands[j].Name == band {
				b = &o.Bands[j]
			}
		}
		w.figure(i, "events_counted", where, &b.Events)
		w.figure(i, "days_in_band_per_year", where, &b.DaysInBandPerYear)
		w.figure(i, "longest_days", where, &b.LongestDays)
		apart := ""
		change := result.Change{}
		if b.Change != nil {
			change, apart = *b.Change, fmt.Sprint(b.Change.ToldApart)
		}
		w.word(i, "told_apart", where, apart)
		for _, m := range []struct {
			name  string
			value float64
			ci    *result.Interval
			d     result.Difference
		}{
			{"load", b.LoadMDaysPerYear, b.LoadMDaysPerYearCI, change.LoadMDaysPerYear},
			{"days", b.DaysPerYear, b.DaysPerYearCI, change.DaysPerYear},
			{"events", b.EventsPerYear, &b.EventsPerYearCI, change.EventsPerYear},
			{"annual_probability", b.AnnualProbability, &b.AnnualProbabilityCI, change.AnnualProbability},
		} {
			w.figure(i, m.name, where, &m.value)
			w.interval(i, m.name+"_", where, m.ci)
			if b.Change != nil {
				w.figure(i, m.name+"_difference", where, &m.d.Difference)
				w.interval(i, m.name+"_difference_", where, m.d.DifferenceCI)
			}
		}
	}
	rows := 0
	for _, c := range found {
		rows += worksCases(c) * len(c.Bands)
	}
	if rows != w.rows {
		t.Errorf("the table has %d rows of %d", w.rows, rows)
	}
	t.Logf("largest difference %.1e at %s", w.worst, w.at)
}

// TestWorksStates: the deciding figure, whichever it is, with drains of every age, half of them stopped, and all of them.
func TestWorksStates(t *testing.T) {
	w := &worksCheck{worksTable: readWorks(t, "states")}
	seen := 0
	for _, measure := range []string{"load", "days", "events", "annual_probability"} {
		works := []string{"decide_by: days", "decide_by: " + measure, "  target: {days: 20}\n", worksTarget(measure, "days", "20")}
		bare := []string{"  target: {load: 15}\n", "  decide_by: " + measure + "\n" + worksTarget(measure, "load", "15")}
		found := map[string]*result.Comparison{
			"works":                compare(t, moreStudy(t, "works", works...)),
			"works-bare":           compare(t, moreStudy(t, "works-bare", bare...)),
			"works-bare, implicit": compare(t, moreStudy(t, "works-bare", append(bare, worksImplicit...)...)),
		}
		for _, c := range found {
			for _, o := range c.Cases[0].Options {
				seen += len(o.States)
			}
		}
		for i := range w.rows {
			if w.text(i, "measure") != measure {
				continue
			}
			state := w.text(i, "state")
			where := strings.Join([]string{w.text(i, "study"), w.text(i, "option"), state, measure}, ", ")
			known := false
			for _, s := range worksOption(t, found[w.text(i, "study")], "as built", w.text(i, "option")).States {
				if s.State != state {
					continue
				}
				known = true
				w.figure(i, "effect_share", where, &s.EffectShare)
				w.figure(i, "value", where, &s.Value)
				w.interval(i, "", where, s.CI)
				w.word(i, "meets_target", where, s.MeetsTarget)
			}
			if !known {
				t.Errorf("%s: no such state", where)
			}
		}
	}
	if seen != w.rows {
		t.Errorf("there are %d states, in the table %d", seen, w.rows)
	}
	t.Logf("largest difference %.1e at %s", w.worst, w.at)
}

// worksTarget is the line of the target where the study decides by its measure, else none.
func worksTarget(measure, of, value string) string {
	if measure != of {
		return ""
	}
	return "  target: {" + of + ": " + value + "}\n"
}

// TestWorksMoney: costs, losses and what they are worth, ratios where the record tells options apart, the frontier and the
// steps along it, the time to effect, and the target.
func TestWorksMoney(t *testing.T) {
	found := worksStudies(t)
	w := &worksCheck{worksTable: readWorks(t, "money")}
	for i := range w.rows {
		study, condition, name := w.text(i, "study"), w.text(i, "condition"), w.text(i, "option")
		where := strings.Join([]string{study, condition, name}, ", ")
		o := worksOption(t, found[study], condition, name)
		w.word(i, "meets_target", where, o.Decision.MeetsTarget)
		w.word(i, "dominated_by", where, o.Decision.DominatedBy)
		frontier := ""
		if o.Decision.OnFrontier != nil {
			frontier = fmt.Sprint(*o.Decision.OnFrontier)
		}
		w.word(i, "on_frontier", where, frontier)

		if e := o.TimeToEffect; e == nil {
			w.figure(i, "effect_days", where, nil)
		} else {
			w.figure(i, "store_days", where, &e.StoreDays)
			w.figure(i, "clay_days", where, e.ClayDays)
			w.figure(i, "effect_days", where, &e.Days)
		}

		c := o.Cost
		if c == nil {
			w.figure(i, "capital", where, nil)
			continue
		}
		w.figure(i, "capital", where, &c.Capital)
		w.figure(i, "present_value", where, &c.PresentValue)
		w.figure(i, "annual_equivalent", where, &c.AnnualEquivalent)
		metres := 0.0
		if c.Metres != nil {
			metres = *c.Metres
		}
		w.figure(i, "metres", where, &metres)
		w.figure(i, "flushes", where, orZero(c.Flushes))
		w.figure(i, "renewals", where, orZero(c.Renewals))
		for _, v := range []struct {
			column string
			got    *float64
		}{
			{"annual_loss", c.AnnualLoss}, {"net_benefit", c.NetBenefit}, {"benefit_cost", c.BenefitCost},
			{"per_event_avoided", c.PerEventAvoided}, {"per_day_avoided", c.PerDayAvoided},
			{"break_even_loss_per_event", c.BreakEvenLoss}, {"step_benefit_cost", c.StepBenefitCost},
		} {
			w.figure(i, v.column, where, v.got)
		}
		w.interval(i, "annual_loss_", where, c.AnnualLossCI)
		w.interval(i, "net_benefit_", where, c.NetBenefitCI)
		w.interval(i, "per_event_avoided_", where, c.PerEventAvoidedCI)
		w.interval(i, "per_day_avoided_", where, c.PerDayAvoidedCI)
		w.word(i, "step_from", where, c.StepFrom)
		if !o.Baseline {
			w.word(i, "told_apart", where, fmt.Sprint(c.ToldApart))
		}
	}
	rows := 0
	for _, c := range found {
		rows += worksCases(c)
	}
	if rows != w.rows {
		t.Errorf("the table has %d rows of %d", w.rows, rows)
	}
	t.Logf("largest difference %.1e at %s", w.worst, w.at)
}

// TestWorksSize: the deciding figure against the spacing, and the widest spacing before the first that misses the target, as
// a scan and bisection of the independent program found them.
func TestWorksSize(t *testing.T) {
	w := &worksCheck{worksTable: readWorks(t, "size")}
	for _, tt := range []struct{ study, option, measure, target string }{
		{"works", "trenches", "days", "20"},
		{"works", "trenches", "events", "1.6"},
		{"works", "quadratic trenches", "load", "6"},
		{"works-bare", "quadratic on the contact", "load", "15"},
	} {
		t.Run(tt.option+", "+tt.measure, func(t *testing.T) {
			w.t = t
			var rows []int
			limits := map[string]float64{}
			var curve []string
			var again []float64
			missed := false
			for i := range w.rows {
				if w.text(i, "study") != tt.study || w.text(i, "option") != tt.option || w.text(i, "measure") != tt.measure {
					continue
				}
				spacing := number(t, w.text(i, "spacing_m"))
				if w.text(i, "what") != "curve" {
					limits[w.text(i, "what")] = spacing
					continue
				}
				rows = append(rows, i)
				curve = append(curve, w.text(i, "spacing_m")+" m")
				meets := w.text(i, "meets_target") != "no"
				if missed = missed || !meets; missed && meets {
					again = append(again, spacing)
				}
			}
			target := "decide_by: " + tt.measure + "\n  target: {" + tt.measure + ": " + tt.target + "}"
			change := []string{"decide_by: days\n  target: {days: 20}", target}
			if tt.study == "works-bare" {
				change = []string{"target: {load: 15}", target}
			}

			// The curve, as options of a list.
			s := worksList(t, tt.study, tt.option, "["+strings.Join(curve, ", ")+"]", change)
			c := compare(t, s)
			for k, i := range rows {
				d := c.Cases[0].Options[1+k].Decision
				where := c.Cases[0].Options[1+k].Name
				w.figure(i, "value", where, &d.Value)
				w.interval(i, "", where, d.CI)
				w.word(i, "meets_target", where, d.MeetsTarget)
			}

			z, err := Size(context.Background(), moreStudy(t, tt.study, change...), SizeQuery{
				Option: tt.option, Vary: "trench_drains.spacing", Between: curve[0] + " .. " + curve[len(curve)-1]})
			if err != nil {
				t.Fatal(err)
			}
			for _, l := range []struct {
				what string
				got  *result.SizePoint
			}{{"limit", z.Answer}, {"shown", z.Shown}} {
				if l.got == nil {
					t.Errorf("%s: no answer, want %v", l.what, limits[l.what])
				} else if got, limit := l.got.Value, limits[l.what]; !(got <= limit*(1+0.0002) && got >= limit*(1-0.005)) {
					t.Errorf("%s: the answer is %v m, want %v m or up to 0.5 %% less", l.what, got, limit)
				} else {
					t.Logf("%s: %v m, %.2f %% less than %v m", l.what, got, 100*(1-got/limit), limit)
				}
			}
			// The values of both curves are rounded, and not to the same digits.
			if len(z.MeetsAgain) != len(again) {
				t.Fatalf("the target is met again at %q, want %v", z.MeetsAgain, again)
			}
			for k, text := range z.MeetsAgain {
				if got := number(t, strings.TrimSuffix(text, " m")); !(math.Abs(got-again[k]) <= 0.005*again[k]) {
					t.Errorf("the target is met again at %s, want %v m", text, again[k])
				}
			}
		})
	}
	t.Logf("largest difference %.1e at %s", w.worst, w.at)
}

var (
	worksSpacing = regexp.MustCompile(`(\bspacing: )\S+ m\b`)
	worksCost    = regexp.MustCompile(`(?m)^    cost: .*\n?`)
)

// worksList is the study with its baseline and one option only, whose spacing is a list.
func worksList(t *testing.T, study, option, spacings string, change []string) *Study {
	t.Helper()
	path := "../testdata/seattle/" + study + ".yaml"
	src, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	head, rest, ok := strings.Cut(strings.Replace(string(src), change[0], change[1], 1), "options:\n")
	if !ok {
		t.Fatal("no options")
	}
	var kept []string
	for k, block := range strings.Split(rest, "\n\n") {
		name := strings.TrimPrefix(strings.SplitN(strings.TrimSpace(block), "\n", 2)[0], "- name: ")
		switch {
		case k == 0 || !strings.HasPrefix(block, "  - name: ") && !strings.HasPrefix(block, "conditions:"):
			kept = append(kept, block)
		case name == option:
			block = worksSpacing.ReplaceAllString(block, "${1}"+spacings)
			kept = append(kept, worksCost.ReplaceAllString(block, ""))
		}
	}
	s, err := Parse(path, []byte(head+"options:\n"+strings.Join(kept, "\n\n")))
	if err != nil {
		t.Fatal(err)
	}
	return s
}
