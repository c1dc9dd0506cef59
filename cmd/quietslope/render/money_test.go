package render

import (
	"bytes"
	"math"
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// TestPriced holds the page of a study with a target, costs, losses and drains that age.
func TestPriced(t *testing.T) {
	text := written(t, Comparison(priced()))
	fits(t, text)
	compareGolden(t, "compare-priced", text)
	readsAsMeant(t, Comparison(priced()))
	compareGolden(t, "compare-priced-markdown", asMarkdown(t, Comparison(priced())))
}

// onOneLine is the text of a page without its line breaks.
func onOneLine(t *testing.T, c *result.Comparison) string {
	t.Helper()
	text := written(t, Comparison(c))
	fits(t, text)
	return strings.Join(strings.Fields(text), " ")
}

// TestPricedExtremes: whatever the sums, the page is no wider than it may be, markdown reads as meant, and no figure that is
// not one is printed.
func TestPricedExtremes(t *testing.T) {
	scaled := func(by float64) func(*result.Comparison) {
		return func(c *result.Comparison) {
			for i := range c.Cases[0].Options {
				of := c.Cases[0].Options[i].Cost
				if of == nil {
					continue
				}
				for _, x := range []*float64{&of.Capital, &of.PresentValue, &of.AnnualEquivalent, of.Metres, of.PerEventAvoided, of.PerDayAvoided, of.AnnualLoss, of.NetBenefit, of.BenefitCost, of.StepBenefitCost, of.BreakEvenLoss} {
					if x != nil {
						*x *= by
					}
				}
				for _, x := range []*result.Interval{of.PerEventAvoidedCI, of.PerDayAvoidedCI, of.AnnualLossCI, of.NetBenefitCI} {
					if x != nil {
						x[0], x[1] = x[0]*by, x[1]*by
					}
				}
			}
		}
	}
	each := func(do func(i int, o *result.Option)) func(*result.Comparison) {
		return func(c *result.Comparison) {
			for k := range c.Cases {
				for i := range c.Cases[k].Options {
					do(i, &c.Cases[k].Options[i])
				}
			}
		}
	}
	costs := func(do func(i int, of *result.Cost)) func(*result.Comparison) {
		return each(func(i int, o *result.Option) {
			if o.Cost != nil {
				do(i, o.Cost)
			}
		})
	}
	for _, tt := range []struct {
		what string
		do   func(*result.Comparison)
		want []string
		not  []string
	}{
		{"nothing costs anything", scaled(0), []string{"Sums are in EUR at prices"}, nil},
		{"a hundredth", scaled(0.01), nil, nil},
		{"a million times", scaled(1e6), []string{"Sums are in billion EUR at prices"}, nil},
		{"sums of the size of 1e12", scaled(1e7), []string{"Sums are in billion EUR at prices"}, nil},
		{"below zero", scaled(-1), nil, nil},
		{"no intervals", costs(func(_ int, of *result.Cost) {
			of.PerEventAvoidedCI, of.PerDayAvoidedCI, of.AnnualLossCI, of.NetBenefitCI = nil, nil, nil, nil
		}), nil, nil},
		{"only the baseline has a cost", each(func(i int, o *result.Option) {
			if i > 0 {
				o.Cost, o.Decision.DominatedBy = nil, ""
			}
		}), []string{"The study gives no cost for B–G, so they are in none of these tables.", "The study gives no cost for any option but the baseline."},
			[]string{"Net benefit:", "Quantities to be priced", "Dominated", "net benefit over"}},
		{"not even the baseline", each(func(i int, o *result.Option) { o.Cost, o.Decision.DominatedBy = nil, "" }),
			[]string{"The study gives no cost for A–G,", "What it costs to meet it is not known."}, []string{"Sums are in", "Doing nothing"}},
		{"no losses", costs(func(_ int, of *result.Cost) {
			of.AnnualLoss, of.AnnualLossCI, of.NetBenefit, of.NetBenefitCI, of.BenefitCost, of.StepFrom, of.StepBenefitCost = nil, nil, nil, nil, nil, "", nil
		}), []string{"The study gives no losses, so nothing is set against the costs."}, []string{"losses: ", "benefit-cost: ", "Net benefit:", "a year in losses", "net benefit over"}},
		{"no target", func(c *result.Comparison) {
			c.Settings.Target = nil
			each(func(_ int, o *result.Option) {
				o.Decision.MeetsTarget = ""
				for i := range o.States {
					o.States[i].MeetsTarget = ""
				}
			})(c)
		}, []string{"Net benefit (case 2)"}, []string{"target"}},
		{"no money", func(c *result.Comparison) {
			c.Settings.Money = nil
			each(func(_ int, o *result.Option) { o.Cost, o.Decision.DominatedBy, o.Decision.OnFrontier = nil, "", nil })(c)
		}, []string{`Target: at most 2 days a year above "movement onset" (case 2)`, "those of B–E and G age, without a flush over the design life, 50 years"}, []string{"EUR", "cost"}},
		{"none is told apart", costs(func(_ int, of *result.Cost) {
			of.ToldApart, of.BenefitCost, of.StepBenefitCost = false, nil, nil
			of.PerDayAvoided, of.PerDayAvoidedCI, of.PerEventAvoided, of.PerEventAvoidedCI, of.BreakEvenLoss = nil, nil, nil, nil, nil
		}), []string{"not told apart from A", "Quantities to be priced anew:", "so there is no ratio"}, []string{"a day and an event less"}},
		{"told apart, and no dearer", costs(func(_ int, of *result.Cost) {
			of.PresentValue, of.BenefitCost, of.StepBenefitCost = 0, nil, nil
		}), []string{"costs no more"}, nil},
		{"a baseline with measures", func(c *result.Comparison) { c.Cases[0].Options[0].Measures = []string{"patching"} },
			[]string{"With A, the baseline, losses cost 160 (70–260) thousand EUR a year.", " baseline B"}, []string{"does nothing"}},
		{"no contingency", func(c *result.Comparison) { c.Settings.Money.Contingency = 0 }, []string{"with nothing added to capital"}, nil},
		{"a long currency", func(c *result.Comparison) { c.Settings.Money.Currency = strings.Repeat("深|*$ ", 40) }, nil, nil},
		{"no band decides", func(c *result.Comparison) {
			c.Settings.DecideOn, c.Settings.Target = "", nil
			each(func(_ int, o *result.Option) { o.Decision, o.States = nil, nil })(c)
		}, []string{"What it costs and what it buys"}, []string{"outcome:"}},
	} {
		t.Run(tt.what, func(t *testing.T) {
			c := priced()
			tt.do(c)
			text := onOneLine(t, c)
			readsAsMeant(t, Comparison(c))
			for _, want := range tt.want {
				if !strings.Contains(text, want) {
					t.Errorf("no %q in:\n%s", want, written(t, Comparison(c)))
				}
			}
			for _, not := range append(tt.not, "NaN", "Inf", "nil", "%!", "  ") {
				if strings.Contains(text, not) {
					t.Errorf("%q in:\n%s", not, written(t, Comparison(c)))
				}
			}
		})
	}
}

// TestPricedOne: a study with one option has its costs and losses.
func TestPricedOne(t *testing.T) {
	for _, bands := range [][]string{threeBands, {"onset"}} {
		c := fixture(demoOptions[:1], bands)
		c.Settings.Money = &result.Money{Currency: "GBP", HorizonYears: 1, PricesOf: 2026}
		c.Cases[0].Options[0].Cost = &result.Cost{AnnualLoss: ptr(1234.5)}
		text := onOneLine(t, c)
		if !strings.Contains(text, "Sums are in GBP at prices of 2026, with nothing added") || !strings.Contains(text, "over 1 year at 0 % a year") || !strings.Contains(text, "A as it stands 0 0 0 1230 does nothing") {
			t.Error(written(t, Comparison(c)))
		}
		readsAsMeant(t, Comparison(c))
	}
}

// TestPricedNames: names as long as they may be, and as wide, leave the tables within the page.
func TestPricedNames(t *testing.T) {
	for _, name := range []string{strings.Repeat("n", 60), strings.Repeat("深", 30), "a\x1b[31mred"} {
		c := priced()
		for k := range c.Cases {
			for i := range c.Cases[k].Options {
				o := &c.Cases[k].Options[i]
				rename := func(of *string) {
					if *of != "" {
						*of += name
					}
				}
				rename(&o.Name)
				rename(&o.Decision.DominatedBy)
				if o.Cost != nil {
					rename(&o.Cost.StepFrom)
				}
			}
		}
		text := written(t, Comparison(c))
		fits(t, text)
		if strings.ContainsAny(text, "\x1b") || !strings.Contains(text, "dominated by B") {
			t.Error(text)
		}
	}
	for _, name := range hostileNames {
		c := priced()
		c.Cases = c.Cases[:1]
		c.Settings.Money.Currency, c.Settings.DecideOn, c.Bands[1].Name = name, name, name
		for k := range c.Cases {
			for i := range c.Cases[k].Options {
				c.Cases[k].Options[i].Bands[1].Name = name
			}
		}
		c.Cases[0].Options[5].Name, c.Cases[0].Options[1].Cost.StepFrom = name, name
		readsAsMeant(t, Comparison(c))
	}
}

// TestBestNet: the option that is worth most is named with the next, or with what it cannot be told from.
func TestBestNet(t *testing.T) {
	for _, tt := range []struct {
		what string
		nets []float64 // of B to F
		tie  bool
		want string
	}{
		{"two", []float64{3e6, 2e6, 0, -1, 1e6}, false, "The greatest net benefit over 50 years is that of B, 3.00 million EUR, the next that of C, 2.00 million EUR. Dominated"},
		{"a tie", []float64{2e6, 3e6, 0, -1, 1e6}, true, "is that of C, 3.00 million EUR, the next that of B, 2.00 million EUR; this record does not tell C from B by it (note 5). Dominated"},
		{"one pays", []float64{-5, 3e6, -5, -5, -5}, false, "The greatest net benefit over 50 years is that of C, 3.00 million EUR. Dominated"},
		{"one pays, perhaps", []float64{-5, 3e6, -5, -5, -5}, true, "The greatest net benefit over 50 years is that of C, 3.00 million EUR; this record does not tell C from A by it (note 5). Dominated"},
		{"none pays", []float64{-5e3, -3e6, -5e5, -5e5, -5e5}, false, "No option pays for itself over 50 years; the greatest net benefit is that of B, -5000 EUR. Dominated"},
		{"alike", []float64{7e4, 7e4, 0, 0, 0}, false, "is that of C, 70.0 thousand EUR, the next that of B, 70.0 thousand EUR."},
	} {
		c := priced()
		for i, net := range tt.nets {
			of := c.Cases[0].Options[1+i].Cost
			*of.NetBenefit, of.NetBenefitCI = net, nil
		}
		if !tt.tie {
			c.Warnings = c.Warnings[:len(c.Warnings)-1]
		}
		if text := inShortAlone(t, c); !strings.Contains(text, tt.want) {
			t.Errorf("%s: no %q in\n%s", tt.what, tt.want, text)
		}
	}
}

// TestStep: why a step has no ratio, which is that it costs no more, or else that the two are not told apart.
func TestStep(t *testing.T) {
	v := &view{letters: map[string]string{"a": "A", "b": "B"}}
	for _, tt := range []struct {
		cost  float64 // of B, where A costs 100
		ratio *float64
		want  string
	}{
		{150, ptr(1.234), "1.2"}, {150, nil, toldNot}, {100, nil, costsNoMore}, {100 * (1 + 1e-12), nil, costsNoMore},
	} {
		c := &result.Case{Options: []result.Option{
			{Name: "a", Cost: &result.Cost{PresentValue: 100}},
			{Name: "b", Cost: &result.Cost{PresentValue: tt.cost, AnnualLoss: ptr(1.0), StepFrom: "a", StepBenefitCost: tt.ratio}},
		}}
		if got, from := v.step(c, &c.Options[1]); got != tt.want || from != "from A" {
			t.Errorf("%v: %q %q, want %q", tt.cost, got, from, tt.want)
		}
	}
}

func TestSums(t *testing.T) {
	v := &view{c: &result.Comparison{Settings: result.Settings{Money: &result.Money{Currency: "EUR"}}}}
	for _, tt := range []struct {
		x    float64
		ci   *result.Interval
		want string
	}{
		{0, nil, "0 EUR"}, {277.14, nil, "277 EUR"}, {9999, nil, "10000 EUR"}, {10000, nil, "10.0 thousand EUR"}, {155405, nil, "155 thousand EUR"},
		{155405, ci(67726, 258442), "160 (70–260) thousand EUR"}, {3660740, ci(1.4e6, 6.2e6), "3.7 (1.4–6.2) million EUR"}, {-2.5e9, nil, "-2.50 billion EUR"},
		{1e12, nil, "1000 billion EUR"}, {4000, ci(-2e6, 2e6), "0.004 (-2.0 to 2.0) million EUR"}, {0, ci(0, 0), "0 EUR"},
	} {
		if got := v.sumText(tt.x, tt.ci); got != tt.want {
			t.Errorf("%v %v: %q, want %q", tt.x, tt.ci, got, tt.want)
		}
	}
	for _, tt := range []struct{ largest, least, want float64 }{{0, 100, 1}, {99999, 100, 1}, {1e5, 100, 1e3}, {1e8 - 1, 100, 1e3}, {1e8, 100, 1e6}, {1e15, 100, 1e9}, {1e6, 1, 1e6}, {math.MaxFloat64, 1, 1e9}} {
		if got := inUnit(tt.largest, tt.least).size; got != tt.want {
			t.Errorf("%v: unit %v, want %v", tt.largest, got, tt.want)
		}
	}
}

// TestTargetText: the target is named once, in words.
func TestTargetText(t *testing.T) {
	for _, tt := range []struct {
		of   result.Target
		want string
	}{
		{result.Target{Measure: "days", Value: 2}, `at most 2 days a year above "movement onset"`},
		{result.Target{Measure: "load", Value: 0.5}, `at most 0.5 m·d a year above "movement onset"`},
		{result.Target{Measure: "events", Value: 0.1}, `at most 0.1 events a year above "movement onset"`},
		{result.Target{Measure: "annual_probability", Value: 0.05}, `at most 5 % of the years counted, one in 20, above "movement onset"`},
		{result.Target{Measure: "annual_probability", Value: 0.9}, `at most 90 % of the years counted above "movement onset"`},
		{result.Target{Measure: "annual_probability", Value: 0}, `at most 0 % of the years counted above "movement onset"`},
		{result.Target{Measure: "days", Value: 1}, `at most 1 day a year above "movement onset"`},
		{result.Target{Measure: "events", Value: 1}, `at most 1 event a year above "movement onset"`},
		{result.Target{Measure: "load", Value: 1}, `at most 1 m·d a year above "movement onset"`},
	} {
		v := &view{c: &result.Comparison{Settings: result.Settings{DecideOn: "movement onset", Target: &tt.of}}}
		if got := v.targetText(); got != tt.want {
			t.Errorf("%+v: %q, want %q", tt.of, got, tt.want)
		}
	}
}

// TestTargetShort: who meets the target, with the cheapest, and who does not.
func TestTargetShort(t *testing.T) {
	for _, tt := range []struct {
		meets []string
		costs []float64 // below zero: not known
		want  string
	}{
		{[]string{"no", "yes", "not_shown"}, []float64{0, 5000, 9}, `B meets it on this record; with C the figure does, but the end of its range does not; A misses it. The cheapest of them is B, at a present value of 5000 EUR.`},
		{[]string{"no", "yes", "yes"}, []float64{0, 5, 5}, `B and C meet it on this record; A misses it. The cheapest of them are B and C, at a present value of 5.00 EUR.`},
		{[]string{"no", "yes", "yes"}, []float64{0, -1, 5}, `The cheapest of them is C, at a present value of 5.00 EUR. Of B the cost is not known.`},
		{[]string{"no", "yes", "no"}, []float64{0, -1, 5}, `A and C miss it. What it costs to meet it is not known.`},
		{[]string{"no", "no", "no"}, []float64{0, 5, 5}, `above "movement onset": no option meets it on this record. Doing`},
		{[]string{"no", "not_shown", "no"}, []float64{0, 5, 5}, `no option meets it on this record; with B the figure does, but the end of its range does not. Doing`},
		{[]string{"yes", "yes", "yes"}, []float64{0, 5, 5}, `A–C meet it on this record. The cheapest of them is A, at a present value of 0 EUR.`},
	} {
		c := priced()
		c.Cases = c.Cases[:1]
		c.Cases[0].Options = c.Cases[0].Options[:3]
		for i := range c.Cases[0].Options {
			o := &c.Cases[0].Options[i]
			o.Decision.MeetsTarget, o.States = tt.meets[i], nil
			if o.Cost.PresentValue = tt.costs[i]; tt.costs[i] < 0 {
				o.Cost = nil
			} else if i > 0 {
				o.Cost.StepFrom = ""
			}
		}
		if text := inShortAlone(t, c); !strings.Contains(text, tt.want) {
			t.Errorf("%v: no %q in\n%s", tt.meets, tt.want, text)
		}
	}
}

func TestDuration(t *testing.T) {
	for d, want := range map[float64]string{
		0: "1 day", 0.2: "1 day", 1: "1 day", 1.5: "2 days", 44.2: "45 days", 45: "2 months", 337.8: "12 months", 412.8: "14 months", 730: "24 months", 731: "3 years", 9861.75: "27 years", 1e12: "more than a million years",
	} {
		if got := duration(d); got != want {
			t.Errorf("%v: %q, want %q", d, got, want)
		}
	}
}

// TestActing: options that take as long stand together, the quickest first, and what sets the time is said.
func TestActing(t *testing.T) {
	c := fixture(demoOptions[:4], threeBands)
	for i, d := range []float64{0, 400, 20, 395} {
		if d > 0 {
			c.Cases[0].Options[i].TimeToEffect = &result.TimeToEffect{StoreDays: d, Days: d}
		}
	}
	c.Cases[0].Options[3].TimeToEffect = &result.TimeToEffect{StoreDays: 395, ClayDays: ptr(9800), Days: 9800}
	want := "Time until nine tenths of an option's effect on the deep level have come about: 20 days with C, 14 months with B and 27 years with D. With D the clay between the trenches sets it."
	if text := onOneLine(t, c); !strings.Contains(text, want) {
		t.Errorf("no %q in\n%s", want, text)
	}
}

// TestStatesCSV: a state goes by its name, with its range beside its figure.
func TestStatesCSV(t *testing.T) {
	var b bytes.Buffer
	if err := CSV(&b, priced()); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{
		"as recorded,as built,\"trenches, spacing 24 m\",,states.half_stopped.effect_share,0.25,,,\n",
		",,states.as_new.meets_target,,,,", ",,cost.net_benefit,", ",,cost.told_apart,,,,yes\n", ",,decision.dominated_by,,,,\"trenches, spacing 12 m\"\n", ",,,settings.money.currency,,,,EUR\n",
	} {
		if !strings.Contains(b.String(), want) {
			t.Errorf("no %q in\n%s", want, &b)
		}
	}
	if strings.Contains(b.String(), "states.1") || strings.Contains(b.String(), "_ci,") {
		t.Error("a state by its number, or a range apart from its figure")
	}
}

// TestSlowToAct: an option that meets the target and is noted to act late has its time beside the answer, and one that acts
// after the years that money counts is marked; its net benefit is its cost, whatever the record.
func TestSlowToAct(t *testing.T) {
	c := priced()
	if text := onOneLine(t, c); strings.Contains(text, "Until nine tenths of the effect are there") || strings.Contains(text, "cts too late") {
		t.Error("options that act soon are said to be slow")
	}
	o := &c.Cases[0].Options[1]
	o.TimeToEffect.Days = 76 * 365.25
	o.Cost.NetBenefit, o.Cost.NetBenefitCI = new(-195000.0), &result.Interval{-195000, -195000}
	c.Warnings = append(c.Warnings, result.Warning{Code: slowToAct, Severity: result.Warn, Option: o.Name, Text: "It takes long."})
	text := onOneLine(t, c)
	for _, want := range []string{
		"Until nine tenths of the effect are there, it takes 76 years with B; the figures are those after it.",
		"Acts too late: not within 50 years, so that none of the losses avoided count.", "yes acts too late",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("%q is missing in\n%s", want, written(t, Comparison(c)))
		}
	}
	if strings.Contains(text, "no spread") {
		t.Error("a sum without a range is said to have one")
	}
}
