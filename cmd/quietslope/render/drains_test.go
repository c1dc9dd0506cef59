package render

import (
	"strings"
	"testing"

	"quietslope/scenario/result"
)

// drainsFixture has every key, and figures from the smallest to the largest.
func drainsFixture() *result.Drains {
	d := &result.Drains{
		Head: result.Head{
			ResultsVersion: 1, Study: "x\x1b]0;title\x07", Tool: result.Tool{Name: "quietslope", Version: "0"}, Command: "drains",
			Inputs: []result.Input{{Role: "study", File: "深い.yaml", SHA256: strings.Repeat("ab", 32)}},
			Warnings: []result.Warning{
				{Code: "slow_to_act", Severity: result.Warn, Option: "a\u202eb", Text: "Slow."}, {Code: "working_head_far", Severity: result.Note, Option: "a\u202eb", Text: "Far."},
			},
			Cautions: []string{"Take care."},
		},
		Option: "a\u202eb",
		Layout: result.DrainLayout{
			DepthM: 499.999, ThicknessM: ptr(500), BelowDrainsM: ptr(0.001), ConductivityMPerDay: 1e5, ConductivityBelowMPerDay: 1e-9, Porosity: 1. / 3,
			PorosityGiven: ptr(0.3), RadiusM: ptr(9.87654321), WidthM: ptr(10), WetM: ptr(0), EquivalentDepth: "given", WorkingHeadM: 249.9995, Efficiency: 1. / 3,
			Law: "quadratic", RechargeMMPerDay: ptr(1e5 / 3), ConsolidationM2PerYear: ptr(1e6), FallFromM: ptr(499.123), FallToM: ptr(0.012345),
			NotOfOption: []string{"spacing", "conductivity_below"},
		},
	}
	for _, f := range []struct{ spacing, rate float64 }{{10000, 1e-6}, {0.012345, 1e6}, {12, 0.04683}} {
		s := result.DrainSpacing{
			SpacingM: f.spacing, Option: "a, spacing",
			DrainAnswer: result.DrainAnswer{EquivalentDepthM: 123.456, ReactionFactorPerDay: f.rate, ReservoirCoefficientDays: 1 / f.rate, HalfLifeDays: 0.69 / f.rate,
				SteadyHeadM: ptr(12345.678), TimeToEffectDays: ptr(2.3 / f.rate)},
			ComputedDepthM: ptr(234.567), MoodyDepthM: ptr(234.999), FallsByHalfDays: 0.84 / f.rate, FallDays: ptr(10 / f.rate),
			SteadyHeadLinearM: ptr(0.0001), StoreDays: ptr(2.3 / f.rate), ClayDays: ptr(1e9), Metres: ptr(123456.7),
		}
		for _, h := range []float64{124.99975, 249.9995, 499.999} {
			s.Outflows = append(s.Outflows, result.DrainOutflow{HeadM: h, LinearMMPerDay: h * f.rate, HooghoudtMMPerDay: h * h * f.rate})
		}
		d.Spacings = append(d.Spacings, s)
	}
	d.DrainAnswer = d.Spacings[0].DrainAnswer
	return d
}

// TestDrainsPage: neither names nor figures of any size break the layout, and the notes name no option, which is the only one.
func TestDrainsPage(t *testing.T) {
	d := drainsFixture()
	text := written(t, Drains(d))
	fits(t, text)
	if strings.ContainsAny(text+asMarkdown(t, Drains(d)), "\x1b\x07\u202e") {
		t.Error("a control character reached the text")
	}
	compareGolden(t, "drains", text)
	compareGolden(t, "drains-markdown", asMarkdown(t, Drains(d)))
	if d.Warnings[0].Option == "" {
		t.Error("the layout changed the result")
	}

	d.Study, d.Inputs, d.Warnings, d.Option, d.Layout.Law, d.Layout.NotOfOption = "", nil, nil, "", "", nil
	text = written(t, Drains(d))
	fits(t, text)
	if !strings.HasPrefix(text, "Parallel drains by hand formulas\n") || strings.Contains(text, "Notes") || strings.Contains(text, "option") {
		t.Errorf("without a study it reads:\n%s", text)
	}
}
