package render

import (
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// withStates is a comparison of a baseline and drained options with the given figures in some states, and what they say
// about the target.
func withStates(state []string, figures [][]float64, meets [][]string) *result.Comparison {
	c := fixture(demoOptions[:1+len(figures)], threeBands)
	c.Settings.DesignLife = 40
	c.Settings.Target = &result.Target{Measure: "load", Value: 0.1}
	c.Cases[0].Options[0].Decision.MeetsTarget = "no"
	for i := range figures {
		o := &c.Cases[0].Options[1+i]
		o.DrainsAs, o.Decision.MeetsTarget = state[0], meets[i][0]
		for k, x := range figures[i] {
			o.States = append(o.States, result.State{State: state[k], Value: x, CI: ci(0.5*x, 1.5*x), MeetsTarget: meets[i][k]})
		}
	}
	return c
}

// inShortAlone is what a comparison of one case says in short, on one line.
func inShortAlone(t *testing.T, c *result.Comparison) string {
	t.Helper()
	text, _, _ := strings.Cut(inShortOf(t, c), " What was counted ")
	return text
}

// TestStatesShort: what is left of the options that lead when their drains age or stop, and of their meeting the target.
func TestStatesShort(t *testing.T) {
	plain := []string{"as_new", "half_stopped", "all_stopped"}
	for _, tt := range []struct {
		what    string
		state   []string
		figures [][]float64
		meets   [][]string
		want    string
	}{
		{"one, missing", plain, [][]float64{{0.05, 2, 4}}, [][]string{{"yes", "no", "no"}},
			"B has 0.05 m·d per year. With every second drain stopped it has 2.0, with all of them stopped 4.0; each time it misses the target."},
		{"two, one of which holds", plain, [][]float64{{0.05, 0.06, 4}, {0.02, 2, 4}}, [][]string{{"yes", "yes", "no"}, {"yes", "no", "no"}},
			"B and C have 0.05 and 0.02 m·d per year. With every second drain stopped they have 0.06 and 2.0 (B meets the target; C misses it), with all of them stopped 4.0 (missing the target)."},
		{"both hold", plain, [][]float64{{0.05, 0.06, 4}, {0.02, 0.03, 4}}, [][]string{{"yes", "yes", "no"}, {"yes", "yes", "not_shown"}},
			"(meeting the target), with all of them stopped 4.0 (B misses the target; C is not shown to meet it)."},
		{"never flushed", []string{"mean_over_horizon", "as_new", "never_flushed", "half_stopped", "all_stopped"}, [][]float64{{0.05, 0.01, 1, 2, 4}}, [][]string{{"yes", "yes", "no", "no", "no"}},
			"When nobody has flushed the drains for 40 years it has 1.0, with every second drain stopped 2.0, with all of them stopped 4.0; each time"},
		{"four", plain, [][]float64{{0.01, 1, 4}, {0.02, 2, 4}, {0.03, 3, 4}, {0.04, 4, 4}}, [][]string{{"yes", "no", "no"}, {"yes", "no", "no"}, {"yes", "no", "no"}, {"yes", "no", "no"}},
			"B–E have between 0.01 and 0.04 m·d per year. With every second drain stopped they have between 1.0 and 4.0, with all"},
	} {
		c := withStates(tt.state, tt.figures, tt.meets)
		if text := inShortAlone(t, c); !strings.Contains(text, strings.TrimPrefix(tt.want, " ")) {
			t.Errorf("%s: no %q in\n%s", tt.what, tt.want, text)
		}
		readsAsMeant(t, Comparison(c))
	}
}

// TestStatesSome: of two options that lead, only one of which ages, it is said which.
func TestStatesSome(t *testing.T) {
	c := withStates([]string{"as_new", "half_stopped", "all_stopped"}, [][]float64{{0.01, 1, 4}, {0.02, 2, 4}}, [][]string{{"yes", "no", "no"}, {"yes", "no", "no"}})
	c.Cases[0].Options[2].States = append(c.Cases[0].Options[2].States, result.State{State: "never_flushed", Value: 3, CI: ci(2, 4), MeetsTarget: "no"})
	want := "When nobody has flushed the drains for 40 years C has 3.0, with every second drain stopped they have 1.0 and 2.0, with all of them stopped 4.0; each time they miss"
	if text := inShortAlone(t, c); !strings.Contains(text, want) {
		t.Errorf("no %q in\n%s", want, text)
	}
}

// TestStatesTable: whatever ranks the options is in the table, and the marks say who meets the target.
func TestStatesTable(t *testing.T) {
	for key, want := range map[string]string{
		"load": "Load in m·d per year. *: meets", "days": "Days per year. *: meets", "events": "Events per year. *: meets", "annual_probability": "Share of years. *: meets",
	} {
		c := priced()
		c.Settings.DecideBy = key
		for i := range c.Cases[0].Options {
			for k := range c.Cases[0].Options[i].States {
				s := &c.Cases[0].Options[i].States[k]
				s.Value, s.CI = min(1, s.Value), ci(0.5*min(1, s.Value), min(1, s.Value))
			}
		}
		if text := onOneLine(t, c); !strings.Contains(text, want) || !strings.Contains(text, " * ") || !strings.Contains(text, "(*): the figure does") {
			t.Errorf("by %s:\n%s", key, written(t, Comparison(c)))
		}
	}
}

// TestStatesOfNothing: drains that keep the level down are shown by what happens without them, though the level is never
// above the band with them; where nothing would happen either, nothing is shown.
func TestStatesOfNothing(t *testing.T) {
	for _, stopped := range []float64{0, 3} {
		c := never()
		o := &c.Cases[0].Options[0]
		o.DrainsAs, o.States = "as_new", []result.State{{State: "as_new"}, {State: "half_stopped"}, {State: "all_stopped", Value: stopped, CI: ci(1, 5)}}
		text := onOneLine(t, c)
		for _, part := range []string{"If drains age or stop", "with all of them stopped 3"} {
			if strings.Contains(text, part) != (stopped > 0) {
				t.Errorf("%q with %v:\n%s", part, stopped, written(t, Comparison(c)))
			}
		}
	}
}

// TestMeans: rows that are means say so, and years that are no whole number are given as they are.
func TestMeans(t *testing.T) {
	c := priced()
	f := &c.Cases[0].Options[2].Bands[1]
	f.AnnualProbability = 4.5 / 39
	c.Cases[0].Options[4].Bands[1].AnnualProbability = 0.01 / 39
	text := onOneLine(t, c)
	for _, want := range []string{
		"The figures of B–D and G are means over the ages of their drains between two flushes, those of E over 50 years without a flush, or over their life if they are renewed before, so that counts need not be whole; longest and peak are the largest of all ages.",
		"In all other tables B–D and G stand with the mean between two flushes and E stands with the mean over the years; but what is longest, highest or a peak is the largest of all ages, and the rate of a drain that as new.", " 4.5 (", " <0.1 (",
		"those of B–E and G age, without a flush over the horizon of the costs, 50 years",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if n := strings.Count(text, "are means over the ages"); n != 1 {
		t.Errorf("it is said %d times", n)
	}
}

// TestQuadratic: the law is named where it is not the linear one.
func TestQuadratic(t *testing.T) {
	c := fixture(demoOptions, threeBands)
	c.Cases[0].Options[1].Drains[0].Law = "quadratic"
	text := onOneLine(t, c)
	for _, want := range []string{"The trenches of B follow the quadratic law; its linear part has the rate given.", "drains quadratic law for the trenches of B, linear for all else"} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	k := checkFixture()
	k.Options[1].Drains[0].HalfLifeDays = nil
	k.Options[1].Drains[0].Law, k.Options[1].Drains[0].From = "quadratic", "Hooghoudt's equation, (8·K·d·h + 4·K·h²)/L²"
	want := "quadratic law, its linear part 0.01371 /d; the outflow is Hooghoudt's equation, (8·K·d·h + 4·K·h²)/L²"
	if text := strings.Join(strings.Fields(written(t, Check(k))), " "); !strings.Contains(text, want) {
		t.Errorf("no %q in\n%s", want, text)
	}
}
