package scenario

import (
	"fmt"
	"math"

	"quietslope/scenario/fault"
	"quietslope/scenario/result"
)

// leastRadii is the least distance between drains, in radii of them, for the formula of the equivalent depth: judgement, after
// where it grows with the spacing (see drain.EquivalentDepth).
const leastRadii = 10.0

// warnings hold a hand check against what is usual and against the range of its formulas.
func (h *hand) warnings(s *Study, rows []handRow, found *result.Drains) []result.Warning {
	ws := warnings{}
	p := &prepared{study: s}
	if s != nil {
		p.works = []*works{rows[0].works}
		p.declaredWarnings(&ws)
	}
	at := func(w result.Warning) result.Warning {
		w.Option = found.Option
		return w
	}
	l := &found.Layout
	t := *rows[0].trench
	t.Conductivity, t.Below = l.ConductivityMPerDay, 0
	if k := l.ConductivityBelowMPerDay; k != l.ConductivityMPerDay {
		t.Below = k
	}
	p.practiceWarnings(&ws, &works{option: &Option{Name: found.Option, Measures: []Measure{{Trench: &t}}}})
	if n := l.Porosity; !(n >= leastPorosity && n <= mostPorosity) {
		ws.add(at(warn("implausible_ground")), "The drainable porosity is %s %%; usual are %s to %s %%. Check the unit and the source: it is the share that drains, less than all pores.", short(100*n), short(100*leastPorosity), short(100*mostPorosity))
	}
	poresWarning(&ws, at(warn("conductivity_and_porosity")), l.ConductivityMPerDay, l.Porosity)

	given := l.EquivalentDepth != computed
	// where names the spacings for which something holds; "" for none.
	where := func(holds func(row *handRow, f *result.DrainSpacing) bool) string {
		var names []string
		for i := range rows {
			if holds(&rows[i], &found.Spacings[i]) {
				names = append(names, metres(rows[i].trench.Spacing))
			}
		}
		if more := len(names) - mostPairs; more > 0 {
			names = append(names[:mostPairs], fmt.Sprintf("%d more", more))
		}
		return fault.Words(names, "and")
	}
	for _, held := range []struct {
		w     result.Warning
		holds func(row *handRow, f *result.DrainSpacing) bool
		text  string
	}{
		{warn("implausible_drain_rate"), func(_ *handRow, f *result.DrainSpacing) bool { return !plausibleRate(f.ReactionFactorPerDay) },
			"At a spacing of %s the reaction factor is outside the usual " + short(leastRate) + " to " + short(mostRate) + " /d. Check conductivity, porosity, spacing and their units."},
		{note("spacing_unusual"), func(r *handRow, _ *result.DrainSpacing) bool {
			return r.trench.unusualSpacing()
		}, "At a spacing of %s the drains are less than " + short(leastSpacingRatio) + " or more than " + short(mostSpacingRatio) + " times as far apart as they are deep; usual for trenches on slopes are 2 to 6 times (Hutchinson 1977, quoted from memory). Check spacing and depth."},
		{warn("formula_range"), func(r *handRow, _ *result.DrainSpacing) bool {
			return !given && r.trench.thickDrains(r.under())
		}, "At a spacing of %s the drains are not thin against the ground between or below them, for which the formula of the equivalent depth is made. Give a smaller radius, or the equivalent depth itself."},
		{note("equivalent_depth_differs"), func(r *handRow, f *result.DrainSpacing) bool {
			return given && len(rows) == 1 && f.ComputedDepthM != nil && math.Abs(r.trench.Equivalent-*f.ComputedDepthM) > roughEquivalent**f.ComputedDepthM
		}, "At a spacing of %s the equivalent depth that is given is not that which the formulas give. Check for which spacing and radius it was worked out, or leave it to be computed."},
		{note("equivalent_depth_fixed"), func(_ *handRow, f *result.DrainSpacing) bool {
			return given && len(rows) > 1 && f.ComputedDepthM != nil
		},
			"One equivalent depth is taken at %s, and it grows with the spacing. Compare it with those of the formulas, or leave it to be computed."},
		{warn("slow_to_act"), func(_ *handRow, f *result.DrainSpacing) bool {
			return f.TimeToEffectDays != nil && *f.TimeToEffectDays > slowEffect
		}, "At a spacing of %s more than a year passes until nine tenths of the effect have come about. Do not count on it before, and watch the slope meanwhile."},
		{warn("steady_level_above_ground"), func(r *handRow, f *result.DrainSpacing) bool {
			return f.SteadyHeadM != nil && *f.SteadyHeadM > r.trench.Depth+tie
		}, "At a spacing of %s the drains do not carry the recharge: the water would have to stand above ground. Set them closer or deeper, or check the recharge."},
		{note("working_head_far"), func(r *handRow, f *result.DrainSpacing) bool {
			if f.SteadyHeadM == nil || *f.SteadyHeadM > r.trench.Depth+tie {
				return false
			}
			return r.trench.farFromHead(*f.SteadyHeadM)
		}, "At a spacing of %s the steady head under the recharge is less than half or more than twice the working head, for which the linear rate is worked out. Set the working head nearer to it, and read what Hooghoudt's equation says."},
	} {
		if of := where(held.holds); of != "" {
			ws.add(at(held.w), held.text, of)
		}
	}
	return ws
}
