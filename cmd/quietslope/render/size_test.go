package render

import (
	"fmt"
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// sizing is an option whose figure grows with the spacing, with an answer between two values of the scan.
func sizing() *result.Size {
	c := fixture(demoOptions[:2], threeBands)
	s := &result.Size{
		Head: c.Head, Settings: c.Settings, Record: c.Record, Option: "trenches", Condition: "as built", Measures: []string{"trench drains 3 m deep, 13.5 m apart"},
		DrainsAs: "mean_between_flushes", Vary: "trench_drains.spacing", Unit: "m", Safer: "lower", DecideOn: threeBands[1], Measure: "days",
		Target: &result.Target{Measure: "days", Value: 2},
	}
	s.Command, s.Warnings = "size", nil
	s.Settings.Target = s.Target
	s.Settings.Money = &result.Money{Currency: "EUR", HorizonYears: 50, DiscountRate: 0.03, PricesOf: 2026, Contingency: 0.2}
	for i, spacing := range []float64{8, 9.5, 11, 13, 15, 18} {
		s.Curve = append(s.Curve, sizePoint(spacing, 0.2*float64(i*i)))
	}
	for i := range s.Curve[:5] {
		p, next := &s.Curve[i], &s.Curve[i+1]
		p.Step = &result.SizeStep{Less: next.Figure - p.Figure, LessPer100Metres: ptr((next.Figure - p.Figure) / (*p.Metres - *next.Metres) * 100)}
		p.Step.CostPerLess = ptr((*p.PresentValue - *next.PresentValue) / p.Step.Less)
	}
	answer, shown, beyond := sizePoint(13.5, 1.95), sizePoint(12.5, 1.4), sizePoint(13.55, 2.01)
	s.Answer, s.Shown, s.Beyond = &answer, &shown, &beyond
	for i, name := range []string{"as_new", "mean_between_flushes", "before_flush", "never_flushed", "half_stopped", "all_stopped"} {
		x := []float64{0, 1.95, 3.2, 31, 15, 39}[i]
		state := result.State{State: name, EffectShare: []float64{1, 0.83, 0.71, 0.004, 0.25, 0}[i], Value: x, MeetsTarget: meetsTwo(x)}
		if x > 0 {
			state.CI = ci(0.5*x, 1.5*x)
		}
		s.States = append(s.States, state)
	}
	s.Warnings = []result.Warning{
		{Code: "target_not_shown", Severity: result.Warn, Option: "trenches", Band: threeBands[1], Text: "Only the figure meets the target."},
		{Code: "cost_not_given", Severity: result.Note, Option: "trenches", Text: "A remark."},
	}
	return s
}

// meetsTwo says whether a figure with a range of half of it to either side meets a target of 2.
func meetsTwo(x float64) string {
	switch {
	case x > 2:
		return targetMissed
	case 1.5*x > 2:
		return targetNotShown
	}
	return targetMet
}

func sizePoint(spacing, days float64) result.SizePoint {
	p := result.SizePoint{
		Value: spacing, Text: fmt.Sprintf("%g m", spacing), Figure: days, Meets: meetsTwo(days),
		Metres: ptr(12000 / spacing), PresentValue: ptr(20000 + 2.1e6/spacing),
	}
	if days > 0 {
		p.CI = ci(0.5*days, 1.5*days)
	}
	return p
}

// edges are sizings with the ends and the odd turns of what there may be.
func edges() map[string]*result.Size {
	plain := func(s *result.Size) *result.Size { // one without drains or costs
		s.Settings.Money, s.States, s.DrainsAs = nil, nil, ""
		for _, p := range append([]*result.SizePoint{s.Answer, s.Shown, s.Beyond}, points(s)...) {
			if p != nil {
				p.Metres, p.PresentValue, p.Step = nil, nil, nil
			}
		}
		return s
	}
	none := plain(sizing())
	none.Answer, none.Shown, none.Beyond = nil, nil, nil
	none.Reason = "No value of the range meets the target. Look below 8 m where such works can be built, or combine measures."
	for _, p := range points(none) {
		p.Meets = targetMissed
	}

	target := sizing()
	target.Target, target.Settings.Target, target.Answer, target.Shown, target.Beyond, target.States = nil, nil, nil, nil, nil, nil
	target.Reason = "The study has no target. Give count.target, such as {days: 2}, to have the value found."
	for _, p := range points(target) {
		p.Meets = ""
	}

	all := sizing()
	all.Beyond, all.Answer, all.Shown = nil, &all.Curve[3], &all.Curve[3]
	all.Curve, all.Answer.Meets = all.Curve[:4], targetMet
	all.Reason = "Every value of the range meets the target, so the answer is its end. Look above 13 m too."

	unshown := sizing()
	unshown.Shown, unshown.MeetsAgain = nil, []string{"18 m"}

	share := plain(sizing())
	share.Vary, share.Unit, share.Safer, share.Measure = "surface_water.kept_out", "share", "higher", "annual_probability"
	share.Target = &result.Target{Measure: "annual_probability", Value: 0.05}
	share.Settings.Target = share.Target
	for _, p := range append([]*result.SizePoint{share.Answer, share.Shown, share.Beyond}, points(share)...) {
		p.Value = (20 - p.Value) / 100
		p.Text = fmt.Sprintf("%.4g %%", 100*p.Value)
		p.Figure, p.CI = p.Figure/40, ci(p.Figure/80, p.Figure/20+0.01)
	}
	for i, j := 0, len(share.Curve)-1; i < j; i, j = i+1, j-1 {
		share.Curve[i], share.Curve[j] = share.Curve[j], share.Curve[i]
	}

	huge := sizing()
	huge.Settings.Money.Currency = "thousands of convertible marks of the province"
	for _, p := range append([]*result.SizePoint{huge.Answer, huge.Shown, huge.Beyond}, points(huge)...) {
		*p.PresentValue, *p.Metres, p.Figure, p.CI = 1e8**p.PresentValue, 1e5**p.Metres, 365.25, ci(365.1, 365.25)
		if p.Step != nil {
			*p.Step.LessPer100Metres, *p.Step.CostPerLess = -1e-7, 7.7e12
		}
	}

	tiny := plain(sizing())
	tiny.Vary, tiny.Unit = "set.cover.percolation_ceiling", ""
	for _, p := range append([]*result.SizePoint{tiny.Answer, tiny.Shown, tiny.Beyond}, points(tiny)...) {
		p.Text = strings.TrimSuffix(p.Text, " m")
		p.Figure, p.CI = p.Figure*1e-9, nil
	}

	hostile := sizing()
	long := strings.Repeat("ein sehr langer Name | mit <b>Zeichen</b> ", 2)[:60]
	hostile.Study, hostile.Option, hostile.DecideOn, hostile.Condition = "A *study* | of `names`", long, "# 1. _band_ | \\ <i>x</i> & so on, for sixty columns, all ab", long
	hostile.Settings.DecideOn, hostile.Vary = hostile.DecideOn, "trench_drains.decline.flushed_every"
	hostile.Measures = []string{strings.Repeat("trench drains 3 m deep, ", 12)}
	return map[string]*result.Size{
		"size": sizing(), "size-none": none, "size-no-target": target, "size-all": all, "size-unshown": unshown, "size-share": share,
		"size-huge": huge, "size-tiny": tiny, "size-hostile": hostile,
	}
}

func points(s *result.Size) []*result.SizePoint {
	var all []*result.SizePoint
	for i := range s.Curve {
		all = append(all, &s.Curve[i])
	}
	return all
}

// TestSizeStopped: which of the two stopped states miss the target.
func TestSizeStopped(t *testing.T) {
	for _, tt := range []struct{ half, all, want, not string }{
		{targetMissed, targetMissed, "all stopped 39 days per year; both miss the target.", "which misses"},
		{targetNotShown, targetMissed, "all stopped 39 days per year, which misses the target.", "both miss"},
		{targetMet, targetMet, "all stopped 39 days per year: even then the figure meets the target,", "miss the target."},
	} {
		s := sizing()
		for i := range s.States {
			switch state := &s.States[i]; state.State {
			case "half_stopped":
				state.MeetsTarget = tt.half
			case "all_stopped":
				state.MeetsTarget = tt.all
			}
		}
		short, _, _ := strings.Cut(strings.Join(strings.Fields(written(t, Size(s))), " "), "What was sized")
		if !strings.Contains(short, tt.want) || strings.Contains(short, tt.not) {
			t.Errorf("half %s, all %s: %s", tt.half, tt.all, short)
		}
	}
}

// TestSize holds the pages, as text and as markdown.
func TestSize(t *testing.T) {
	for name, s := range edges() {
		t.Run(name, func(t *testing.T) {
			text := written(t, Size(s))
			fits(t, text)
			for _, word := range []string{"NaN", "Inf", "%!", "nil"} {
				if strings.Contains(text, word) {
					t.Errorf("%q stands in the text", word)
				}
			}
			compareGolden(t, name, text)
			if name == "size" || name == "size-hostile" {
				compareGolden(t, name+"-markdown", asMarkdown(t, Size(s)))
			}
		})
	}
}

// TestSizeSlow: the time until the answer acts stands with it where it is noted to be long.
func TestSizeSlow(t *testing.T) {
	s := edges()["size"]
	s.TimeToEffect = &result.TimeToEffect{StoreDays: 300, Days: 147.2 * 365.25}
	const said = "it takes 148 years; all figures are those after it."
	if text := strings.Join(strings.Fields(written(t, Size(s))), " "); strings.Contains(text, said) {
		t.Error("what is not noted is said")
	}
	s.Warnings = append(s.Warnings, result.Warning{Code: slowToAct, Severity: result.Warn, Text: "It takes long."})
	if text := strings.Join(strings.Fields(written(t, Size(s))), " "); !strings.Contains(text, said) {
		t.Errorf("nothing is said of the time:\n%s", written(t, Size(s)))
	}
}

// TestSizeAtTarget: no figure that misses the target is rounded to it.
func TestSizeAtTarget(t *testing.T) {
	for _, tt := range []struct {
		measure      string
		target, x    float64
		ci           result.Interval
		meets, wants string
	}{
		{"days", 3, 3.0239, result.Interval{0, 8.9}, targetMissed, "3.02"},
		{"days", 3, 2.9761, result.Interval{0, 8.9}, targetNotShown, "3"},
		{"days", 3, 4.2, result.Interval{0, 12}, targetMissed, "4"},
		{"events", 0.2, 0.2004, result.Interval{0.1, 0.4}, targetMissed, "0.2004"},
		{"annual_probability", 0.05, 0.0513, result.Interval{0.01, 0.2}, targetMissed, "5.1 %"},
		{"annual_probability", 0.05, 0.0588, result.Interval{0.01, 0.2}, targetMissed, "6 %"},
	} {
		s := &result.Size{Target: &result.Target{Measure: tt.measure, Value: tt.target}}
		v := &sizeView{&view{c: &result.Comparison{}}, s, measureOf(tt.measure)}
		if got, _ := v.told(tt.x, &tt.ci, tt.meets); got != tt.wants {
			t.Errorf("%s %v against %v: %q, want %q", tt.measure, tt.x, tt.target, got, tt.wants)
		}
	}
}

// TestSizeShort: what the answer is for, and whether the target asks anything of the drains, stands in short.
func TestSizeShort(t *testing.T) {
	short := func(s *result.Size) string { return strings.Join(strings.Fields(written(t, Size(s))), " ") }
	s := edges()["size"]
	const needless = "even then the figure meets the target, so that the target asks nothing of these drains."
	if text := short(s); !strings.Contains(text, "The largest trench_drains.spacing") || strings.Contains(text, needless) {
		t.Errorf("%s", text)
	}
	s.Condition = "neglected"
	for i := range s.States {
		s.States[i].Value, s.States[i].CI, s.States[i].MeetsTarget = 0, nil, targetMet
	}
	if text := short(s); !strings.Contains(text, `In the condition "neglected" the largest trench_drains.spacing`) || !strings.Contains(text, needless) {
		t.Errorf("%s", text)
	}
}

// TestSizeWithoutEvents: where no event is left there is no range, and none is said to meet the target.
func TestSizeWithoutEvents(t *testing.T) {
	const noRange = "No event is left in the record then, which does not mean that none can come; so the figure has no range."
	s := sizing()
	s.Answer.Figure, s.Answer.CI, s.Answer.Meets = 0, nil, targetMet
	if text := strings.Join(strings.Fields(written(t, Size(s))), " "); !strings.Contains(text, noRange) || strings.Contains(text, "The end of its range") {
		t.Error(text[:1200])
	}
	s = sizing()
	s.Shown.Figure, s.Shown.CI, s.Shown.Meets = 0, nil, targetMet
	if text := strings.Join(strings.Fields(written(t, Size(s))), " "); !strings.Contains(text, "the largest value looked at that does is 12.5 m, with which no event is left in the record.") {
		t.Error(text[:1200])
	}
}
