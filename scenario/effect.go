package scenario

import (
	"math"
	"strings"

	"quietslope/cascade"
	"quietslope/cascade/drain"
	"quietslope/scenario/result"
)

// effective is the share of a change of the deep level after which the works count as acting.
const effective = 0.9

// timeToEffect is the time until nine tenths of what an option does to the deep level have come about, with its drains
// running as new: in the deep store alone for what acts there only, in both stores for anything else; and for the clay
// between trenches, drained to them alone, by consolidation. An option that does nothing has none, and nor has the baseline,
// which is there already, or one that never gets there: a store that nothing drains only fills up.
func (w *works) timeToEffect() *result.TimeToEffect {
	t := w.response()
	if t == nil || math.IsInf(t.Days, 1) {
		return nil
	}
	return t
}

// acting is the time, d, from which on what an option avoids counts: 0 for the baseline and an option that does nothing, +Inf
// for one that never gets there.
func (w *works) acting() float64 {
	if t := w.response(); t != nil {
		return t.Days
	}
	return 0
}

// response is timeToEffect with times that may be +Inf.
func (w *works) response() *result.TimeToEffect {
	if w.option.Baseline || len(w.option.Measures) == 0 {
		return nil
	}
	cover, deep := w.ground.CoverSeepage+w.ground.Percolation, w.ground.DeepSeepage
	for _, d := range w.drains {
		if d.layer == inDeep {
			deep += d.worked
		} else {
			cover += d.worked
		}
	}
	if w.option.actsDeepOnly() {
		cover = math.Inf(1)
	}
	spacing := 0.0
	for _, m := range w.option.Measures {
		if m.Trench != nil {
			spacing = m.Trench.Spacing
		}
	}
	return responseOf(cover, deep, spacing, w.ground.Consolidation)
}

// responseOf is the time until nine tenths of a change have come about: of two stores with these total rates, 1/d, and of clay
// between trenches at a spacing, m, with a coefficient of consolidation, m2/y, unless one of these two is 0, for none.
func responseOf(cover, deep, spacing, consolidation float64) *result.TimeToEffect {
	t := &result.TimeToEffect{StoreDays: cascade.ResponseTime(cover, deep, effective)}
	t.Days = t.StoreDays
	if spacing > 0 && consolidation > 0 {
		days := drain.ConsolidationTime(spacing, consolidation/365.25)
		t.ClayDays, t.Days = &days, max(t.Days, days)
	}
	return t
}

// actsDeepOnly tells whether all that an option does is done to the deep store.
func (o *Option) actsDeepOnly() bool {
	for _, m := range o.Measures {
		for _, a := range m.Set {
			if !strings.HasPrefix(a.Key, "deep.") {
				return false
			}
		}
		if m.Bored == nil && m.CutOff == nil && m.Set == nil {
			return false
		}
	}
	return true
}

// yearsOf is a time in days as years.
func yearsOf(days float64) float64 { return days / 365.25 }
