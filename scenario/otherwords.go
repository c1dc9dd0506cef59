package scenario

import (
	"regexp"
	"slices"
	"strings"

	"quietslope/scenario/fault"
)

// otherWords are words that people use for the keys of a block, and the key that they mean. They are no keys: they only
// serve the message. A note says what the key's value is counted from, where that differs from what the word means.
var otherWords = []struct {
	block string // the last key of its path, "" for the study itself
	key   string
	words []string
	note  string
}{
	{"", "study", []string{"title", "name", "project"}, ""},
	{"", "prepared_by", []string{"author", "engineer"}, ""},
	{"", "checked_by", []string{"checker", "reviewed_by", "approved_by"}, ""},
	{"", "bands", []string{"thresholds", "critical_levels", "levels"}, ""},
	{"", "options", []string{"alternatives", "variants", "measures"}, ""},
	{"", "money", []string{"economics", "economy", "finance", "finances", "appraisal", "currency"}, ", a block with currency, horizon, discount_rate and prices_of"},
	{"weather", "file", []string{"path", "csv", "filename"}, ""},
	{"columns", "time", []string{"date", "datetime", "timestamp"}, ""},
	{"columns", "rain", []string{"precipitation", "rainfall", "precip"}, ""},
	{"columns", "pet", []string{"evapotranspiration", "evaporation", "et", "et0", "eto"}, ", which is the potential and not the actual evapotranspiration"},
	{"ground", "cover", []string{"upper_layer", "top_layer"}, ""},
	{"ground", "deep", []string{"lower_layer", "clay"}, ""},
	{"cover", "drainable_porosity", []string{"specific_yield", "storage"}, ""},
	{"deep", "drainable_porosity", []string{"specific_yield", "storage"}, ""},
	{"deep", "consolidation", []string{"cv", "c_v", "coefficient_of_consolidation"}, ""},
	{"cover", "conductivity", []string{"k", "permeability", "kf", "ks"}, ""},
	{"cover", "percolation", []string{"leakage"}, ""},
	{"cover", "seepage", []string{"outflow", "drainage"}, ""},
	{"deep", "seepage", []string{"outflow", "drainage"}, ""},
	{"cover", "thickness", []string{"depth"}, ""},
	{"deep", "thickness", []string{"depth"}, ", counted from the base of the cover and not from the ground"},
	{"slope", "friction", []string{"phi"}, ""},
	{"slope", "cohesion", []string{"c"}, ""},
	{"slope", "unit_weight", []string{"gamma", "density"}, ""},
	{"slope", "angle", []string{"gradient", "inclination"}, ""},
	{"slope", "slip_depth", []string{"depth"}, ""},
	{"bands", "below_ground", []string{"depth"}, ""},
	{"bands", "level", []string{"height", "threshold"}, ", counted from the base of the deep layer"},
	{"bands", "factor_of_safety", []string{"fos", "fs", "safety_factor"}, ""},
	{"bands", "until", []string{"end", "stop", "arrest"}, ""},
	{"bands", "loss_per_event", []string{"loss", "losses", "damage", "damages", "cost"}, " for what an event costs, or loss_per_day for what each day above the band does"},
	{"bands", "loss_per_event", []string{"event_loss", "event_cost", "cost_per_event", "damage_per_event"}, ""},
	{"bands", "loss_per_day", []string{"daily_loss", "day_loss", "cost_per_day", "damage_per_day", "per_day"}, ""},
	{"count", "target", []string{"goal", "objective", "criterion", "limit", "requirement"}, ""},
	{"count", "design_life", []string{"lifetime", "service_life", "working_life"}, ""},
	{"target", "annual_probability", []string{"probability", "aep", "annual_exceedance_probability", "chance", "p"}, ", the share of years with a passage"},
	{"target", "return_period", []string{"period", "recurrence", "return_interval", "recurrence_interval", "years"}, ""},
	{"target", "days", []string{"days_per_year", "d", "duration"}, ", counted in a year"},
	{"target", "events", []string{"events_per_year", "number", "frequency"}, ", counted in a year"},
	{"money", "currency", []string{"unit", "units"}, ""},
	{"money", "horizon", []string{"period", "years", "design_life", "lifetime", "life", "appraisal_period", "time"}, ""},
	{"money", "discount_rate", []string{"interest", "interest_rate", "rate", "discount", "discounting"}, ""},
	{"money", "prices_of", []string{"price_base", "base_year", "price_year", "price_date", "price_level", "prices", "year"}, ", the year whose prices all sums are in"},
	{"money", "contingency", []string{"optimism_bias", "risk", "risk_allowance", "allowance", "unforeseen"}, ""},
	{"options", "cost", []string{"costs", "price", "money", "budget", "capex"}, ", a block with capital, per_metre, per_year and per_flush"},
	{"options", "minimum", []string{"do_minimum", "least"}, ""},
	{"cost", "capital", []string{"capex", "construction", "investment", "initial", "build", "works", "total", "sum"}, ""},
	{"cost", "per_metre", []string{"cost_per_metre", "cost_per_meter", "per_m", "unit_cost", "unit_price", "rate"}, ""},
	{"cost", "per_year", []string{"opex", "maintenance", "annual", "upkeep", "yearly", "running", "running_costs", "operation", "inspection"}, ""},
	{"cost", "per_flush", []string{"flushing", "flush", "jetting", "cleaning"}, ""},
	{"cost", "life", []string{"lifetime", "service_life", "design_life", "renewal", "renewed_every"}, ""},
	{"options", "bored_drains", []string{"horizontal_drains", "sub_horizontal_drains", "drilled_drains"}, ""},
	{"options", "trench_drains", []string{"trenches"}, ""},
	{"options", "surface_water", []string{"channels", "ditches", "grading"}, ""},
	{"options", "vegetation", []string{"planting", "trees"}, ""},
	{"options", "set", []string{"ground"}, ", which changes numbers of ground, as in set: {cover.seepage: 0.02 /d}"},
	{"trench_drains", "depth", []string{"level", "elevation"}, ", counted from the ground down"},
	{"trench_drains", "spacing", []string{"distance"}, ""},
	{"trench_drains", "conductivity", []string{"k", "permeability", "kf", "ks", "ka", "k_above", "conductivity_above"}, ""},
	{"trench_drains", "conductivity_below", []string{"kb", "k_below", "permeability_below"}, ""},
	{"trench_drains", "drain_radius", []string{"radius", "r0", "r", "effective_radius"}, ""},
	{"trench_drains", "equivalent_depth", []string{"d", "de"}, ", of the flow below the trenches"},
	{"trench_drains", "working_head", []string{"head", "h"}, ", midway between the trenches"},
	{"trench_drains", "decline", []string{"clogging", "ageing", "aging", "deterioration", "maintenance", "flushing"}, ", a block with half_life, flushed_every and restored_to"},
	{"bored_drains", "level", []string{"depth", "elevation", "below_ground"}, ", counted from the base of the deep layer up"},
	{"bored_drains", "number", []string{"count", "n", "drains"}, ""},
	{"bored_drains", "length", []string{"bore_length", "l"}, ", of each bore"},
	{"bored_drains", "decline", []string{"clogging", "ageing", "aging", "deterioration", "maintenance", "flushing"}, ", a block with half_life, flushed_every and restored_to"},
	{"decline", "half_life", []string{"t_half", "halflife", "t12", "t_1/2", "life"}, ", the time after which half of the rate is left"},
	{"decline", "flushed_every", []string{"flush", "flushes", "flushing", "flushed", "flushing_interval", "flush_every", "interval", "jetted_every", "cleaned_every", "maintenance"}, ", a time such as 5 y"},
	{"decline", "restored_to", []string{"restored", "restores", "recovery", "recovered", "restore"}, ", the share of the rate as new"},
	{"surface_water", "kept_out", []string{"share", "reduction", "intercepted"}, ""},
	{"cut_off_drain", "intercepted", []string{"share", "reduction", "kept_out"}, ""},
	{"vegetation", "pet_factor", []string{"crop_factor", "factor"}, ""},
	{"conditions", "drains", []string{"trench_drains", "bored_drains", "cut_off_drain"}, ", for trench, bored and cut-off drains together"},
}

// unitInKey is a unit that stands with the key, as in "thickness (m)" and "thickness [m]".
var unitInKey = regexp.MustCompile(` *[(\[][^)\]]*[)\]]$`)

// meantKey is the key of a block that a person may have meant with a word that is none, with a note on its value, and ""
// for none. The block is named by its path.
func meantKey(word, path string, known []string) (key, note string) {
	word = strings.ToLower(unitInKey.ReplaceAllString(word, ""))
	word = strings.NewReplacer(" ", "_", "-", "_").Replace(word)
	if slices.Contains(known, word) {
		return word, ""
	}
	block := blockOf(path)
	for _, o := range otherWords {
		if o.block == block && slices.Contains(o.words, word) && slices.Contains(known, o.key) {
			return o.key, o.note
		}
	}
	return fault.Nearest(word, known), ""
}

// partOf is the only key that has all words of this one or whose words all stand in it, such as drainable_porosity of
// porosity, and "" for none.
func partOf(word string, known []string) string {
	word = strings.ToLower(unitInKey.ReplaceAllString(word, ""))
	words := strings.FieldsFunc(word, func(r rune) bool { return r == ' ' || r == '_' || r == '-' })
	holds := func(all, some []string) bool {
		for _, w := range some {
			if !slices.Contains(all, w) {
				return false
			}
		}
		return len(some) > 0
	}
	found := ""
	for _, k := range known {
		if parts := strings.Split(k, "_"); holds(parts, words) || holds(words, parts) {
			if found != "" {
				return ""
			}
			found = k
		}
	}
	return found
}

// blockOf is the last key of a path, without the number of an item.
func blockOf(path string) string {
	last := lastOf(path)
	if i := strings.IndexByte(last, '['); i >= 0 {
		last = last[:i]
	}
	return last
}
