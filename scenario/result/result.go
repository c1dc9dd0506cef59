// Package result holds what the commands find, in the shape in which it is written as JSON.
//
// Lengths are m, storages mm, times days, rates 1/d, shares 0 to 1. A pointer or an empty value with omitempty is a
// key that is left out where it does not apply; every other key is always there.
package result

// Version of the JSON; raised only when a key goes or changes its meaning.
const Version = 1

// Head stands first in the result of every command.
type Head struct {
	ResultsVersion int       `json:"results_version"`
	Study          string    `json:"study"`
	Tool           Tool      `json:"tool"`
	Command        string    `json:"command"`
	Inputs         []Input   `json:"inputs"`
	Warnings       []Warning `json:"warnings"`
	Cautions       []string  `json:"cautions"`
}

// Tool names the program that made a result.
type Tool struct {
	Name    string `json:"name"`
	Version string `json:"version"`
}

// Input is a file that was read.
type Input struct {
	Role   string `json:"role"` // study or weather
	File   string `json:"file"` // without its folder
	SHA256 string `json:"sha256"`
}

// Severities of a warning.
const (
	Warn = "warn"
	Note = "note"
)

// Warning is something the reader must weigh. Text says what to do.
type Warning struct {
	Code      string `json:"code"`
	Severity  string `json:"severity"`
	Climate   string `json:"climate,omitempty"`
	Condition string `json:"condition,omitempty"`
	Option    string `json:"option,omitempty"`
	Band      string `json:"band,omitempty"`
	Text      string `json:"text"`
}

// KeyValue is a key of the study and the value in force, as text with its unit.
type KeyValue struct {
	Key   string `json:"key"`
	Value string `json:"value"`
}

// Comparison is the result of compare.
type Comparison struct {
	Head
	Declared map[string]string `json:"declared"`
	Defaults []KeyValue        `json:"defaults"`
	Settings Settings          `json:"settings"`
	Bands    []Band            `json:"bands"`
	Record   Record            `json:"record"`
	Cases    []Case            `json:"cases"`
	// Of the rates of the ground; left out where they are those of exact stores.
	Conversion *Conversion `json:"conversion,omitempty"`
}

// Settings are the choices that shape the figures.
type Settings struct {
	YearStarts string  `json:"year_starts"` // English name of a month
	ApartDays  float64 `json:"apart_days"`
	Confidence float64 `json:"confidence"`
	Resamples  int     `json:"resamples"`
	Seed       uint64  `json:"seed"`
	BlockYears float64 `json:"block_years"`
	DesignLife int     `json:"design_life_years"`
	DecideOn   string  `json:"decide_on,omitempty"`
	DecideBy   string  `json:"decide_by"`
	Target     *Target `json:"target,omitempty"`
	Money      *Money  `json:"money,omitempty"`
	Against    string  `json:"against,omitempty"` // the option that changes are measured against, where it is not the baseline
}

// Target is what an option must keep to on the band that decides: at most Value a year.
type Target struct {
	Measure string  `json:"measure"`
	Value   float64 `json:"value"`
}

// Money says how costs and losses are added up.
type Money struct {
	Currency     string  `json:"currency"`
	HorizonYears int     `json:"horizon_years"`
	DiscountRate float64 `json:"discount_rate"`
	PricesOf     int     `json:"prices_of"`
	Contingency  float64 `json:"contingency"`
}

// Band is a band of the study, with its level in every datum that is known.
type Band struct {
	Name           string   `json:"name"`
	GivenAs        string   `json:"given_as"`
	LevelM         float64  `json:"level_m"`
	UntilM         float64  `json:"until_m"`
	ElevationM     *float64 `json:"elevation_m,omitempty"`
	BelowGroundM   float64  `json:"below_ground_m"`
	FactorOfSafety *float64 `json:"factor_of_safety,omitempty"` // of a band that was given so
	WithinReadings *bool    `json:"within_readings,omitempty"`  // left out when calibrated_to is not known
}

// Record describes the weather record and the years counted.
type Record struct {
	From          string   `json:"from"` // first and last time as the weather has them, ISO 8601
	To            string   `json:"to"`
	Step          string   `json:"step"`                // such as 1 month, 1 d or 15 min
	StepDays      *float64 `json:"step_days,omitempty"` // left out for calendar months
	Stamp         string   `json:"stamp"`
	Rows          int      `json:"rows"`
	WarmUpYears   int      `json:"warm_up_years"`
	CountedFrom   string   `json:"counted_from"`
	CountedTo     string   `json:"counted_to"`
	YearsCounted  int      `json:"years_counted"`
	PartialDays   float64  `json:"partial_days"`
	GapsFilled    int      `json:"gaps_filled"`           // steps
	GapFilling    string   `json:"gap_filling,omitempty"` // zero or month mean; left out where nothing was filled
	RainMMPerYear float64  `json:"rain_mm_per_year"`
	PETMMPerYear  *float64 `json:"pet_mm_per_year,omitempty"`
}

// Case is one climate and one condition of the works, with every option.
type Case struct {
	Climate   string   `json:"climate"`
	Condition string   `json:"condition"`
	Options   []Option `json:"options"`
}

// Option is what one option does.
type Option struct {
	Name     string   `json:"name"`
	Baseline bool     `json:"baseline"`
	Minimum  bool     `json:"minimum,omitempty"` // the least that has to be done anyway
	Measures []string `json:"measures"`
	// DrainsAs is the state of the drains that the option's figures are for, as in State: as new, or the mean over the ages
	// that they have. Left out for an option without drains.
	DrainsAs          string        `json:"drains_as,omitempty"`
	Rates             Rates         `json:"rates"`
	Drains            []Drain       `json:"drains"`
	RechargeMMPerYear float64       `json:"recharge_mm_per_year"`
	ActualETMMPerYear *float64      `json:"actual_et_mm_per_year,omitempty"`
	Level             Level         `json:"level"`
	WaterBalance      Balance       `json:"water_balance"`
	Bands             []BandFigure  `json:"bands"`
	Decision          *Decision     `json:"decision,omitempty"`
	States            []State       `json:"states,omitempty"` // in the first case only
	TimeToEffect      *TimeToEffect `json:"time_to_effect,omitempty"`
	Cost              *Cost         `json:"cost,omitempty"` // where it is known
}

// State is the deciding figure of an option with its drains in one state.
type State struct {
	State       string    `json:"state"`        // as_new, mean_between_flushes, mean_over_horizon, before_flush, never_flushed, half_stopped or all_stopped
	EffectShare float64   `json:"effect_share"` // of what the drains do as new; the mean of several drains
	Value       float64   `json:"value"`
	CI          *Interval `json:"ci,omitempty"`
	MeetsTarget string    `json:"meets_target,omitempty"` // as in Decision
}

// TimeToEffect is the time until nine tenths of what an option does to the deep level have come about.
type TimeToEffect struct {
	StoreDays float64  `json:"store_days"`          // for the two stores
	ClayDays  *float64 `json:"clay_days,omitempty"` // for the clay between trenches, where a coefficient of consolidation is given
	Days      float64  `json:"days"`                // the longer
}

// Cost is what an option costs, what it avoids and what that is worth, over the horizon of the settings. Sums without a
// comparison are of the option; the baseline's are taken off where something is avoided.
type Cost struct {
	Capital           float64   `json:"capital"` // at the start, with contingency
	PresentValue      float64   `json:"present_value"`
	AnnualEquivalent  float64   `json:"annual_equivalent"`
	Metres            *float64  `json:"metres,omitempty"` // of drain
	Flushes           *int      `json:"flushes,omitempty"`
	Renewals          *int      `json:"renewals,omitempty"`
	PerEventAvoided   *float64  `json:"per_event_avoided,omitempty"`
	PerEventAvoidedCI *Interval `json:"per_event_avoided_ci,omitempty"`
	PerDayAvoided     *float64  `json:"per_day_avoided,omitempty"`
	PerDayAvoidedCI   *Interval `json:"per_day_avoided_ci,omitempty"`
	AnnualLoss        *float64  `json:"annual_loss,omitempty"`
	AnnualLossCI      *Interval `json:"annual_loss_ci,omitempty"`
	NetBenefit        *float64  `json:"net_benefit,omitempty"`
	NetBenefitCI      *Interval `json:"net_benefit_ci,omitempty"`
	BenefitCost       *float64  `json:"benefit_cost,omitempty"`
	StepFrom          string    `json:"step_from,omitempty"` // the last cheaper option that was worth its own step
	StepBenefitCost   *float64  `json:"step_benefit_cost,omitempty"`
	BreakEvenLoss     *float64  `json:"break_even_loss_per_event,omitempty"`
	ToldApart         bool      `json:"told_apart"` // from the baseline, on the band and by the figure that decide
}

// Rates are the rates of the two stores as replayed.
type Rates struct {
	CoverSeepagePerDay         float64  `json:"cover_seepage_per_day"`
	CoverPercolationPerDay     float64  `json:"cover_percolation_per_day"`
	PercolationCeilingMMPerDay *float64 `json:"percolation_ceiling_mm_per_day,omitempty"`
	DeepSeepagePerDay          float64  `json:"deep_seepage_per_day"`
	CoverPorosity              *float64 `json:"cover_porosity,omitempty"` // where it was converted too
	DeepPorosity               *float64 `json:"deep_porosity,omitempty"`
	Given                      *Rates   `json:"given,omitempty"` // before they were converted from a stepping scheme
}

// Drain is one drain of an option and what it carried over the counted years.
type Drain struct {
	Measure         string   `json:"measure"`
	Layer           string   `json:"layer"` // cover or deep
	RatePerDay      float64  `json:"rate_per_day"`
	InvertM         float64  `json:"invert_m"` // above the base of its layer
	CeilingMMPerDay *float64 `json:"ceiling_mm_per_day,omitempty"`
	Law             string   `json:"law"`
	RunningShare    float64  `json:"running_share"`         // of the counted steps that end with water above the invert
	MeanHeadM       *float64 `json:"mean_head_m,omitempty"` // mean height of the level above the invert on those steps; left out where there are none
	MeanMMPerDay    float64  `json:"mean_mm_per_day"`
	PeakMMPerDay    float64  `json:"peak_mm_per_day"` // largest flow at the end of a counted step, as new or at any age
	PeakLPerS       *float64 `json:"peak_l_per_s,omitempty"`
	// Time a year at whose ends the drain carries all that it can; left out without a ceiling.
	CeilingDaysPerYear *float64 `json:"ceiling_days_per_year,omitempty"`
}

// Level sums up the end-of-step deep levels of the counted years.
type Level struct {
	MeanM float64 `json:"mean_m"`
	MaxM  float64 `json:"max_m"` // of drains that age the largest at any age, where all else is a mean
	Q50M  float64 `json:"q50_m"`
	Q95M  float64 `json:"q95_m"`
	Q99M  float64 `json:"q99_m"`
}

// Balance is the water balance of the record after the warm-up.
type Balance struct {
	Cover CoverBalance `json:"cover"`
	Deep  DeepBalance  `json:"deep"`
}

// CoverBalance: in + unmet - seepage - percolation - drains - overflow - storage change = error.
type CoverBalance struct {
	InMM            float64 `json:"in_mm"`
	SeepageMM       float64 `json:"seepage_mm"`
	PercolationMM   float64 `json:"percolation_mm"`
	DrainsMM        float64 `json:"drains_mm"`
	OverflowMM      float64 `json:"overflow_mm"`
	UnmetMM         float64 `json:"unmet_mm"`
	StorageChangeMM float64 `json:"storage_change_mm"`
	ErrorMM         float64 `json:"error_mm"`
}

// DeepBalance: in + lateral - seepage - drains - refused - storage change = error.
type DeepBalance struct {
	InMM            float64 `json:"in_mm"`
	LateralMM       float64 `json:"lateral_mm"`
	SeepageMM       float64 `json:"seepage_mm"`
	DrainsMM        float64 `json:"drains_mm"`
	RefusedMM       float64 `json:"refused_mm"`
	StorageChangeMM float64 `json:"storage_change_mm"`
	ErrorMM         float64 `json:"error_mm"`
}

// Interval is a lower and an upper limit at the confidence of the settings.
type Interval [2]float64

// BandFigure says how one option passes one band.
type BandFigure struct {
	Name                string      `json:"name"`
	LevelM              float64     `json:"level_m"`
	Events              float64     `json:"events"` // whole, unless the figures are a mean over ages of the drains
	EventsPerYear       float64     `json:"events_per_year"`
	EventsPerYearCI     Interval    `json:"events_per_year_ci"`
	DaysPerYear         float64     `json:"days_per_year"`
	DaysPerYearCI       *Interval   `json:"days_per_year_ci,omitempty"`
	DaysInBandPerYear   float64     `json:"days_in_band_per_year"`
	AnnualProbability   float64     `json:"annual_probability"`
	AnnualProbabilityCI Interval    `json:"annual_probability_ci"`
	LongestDays         float64     `json:"longest_days"`
	MeanSpanDays        *float64    `json:"mean_span_days,omitempty"`
	PeakExcessM         *float64    `json:"peak_excess_m,omitempty"`
	MeanExcessM         *float64    `json:"mean_excess_m,omitempty"`
	LoadMDaysPerYear    float64     `json:"load_m_days_per_year"`
	LoadMDaysPerYearCI  *Interval   `json:"load_m_days_per_year_ci,omitempty"`
	DaysByMonth         [12]float64 `json:"days_by_month"` // per year, January first
	Change              *Change     `json:"change,omitempty"`
	Spells              []Spell     `json:"spells,omitempty"` // on the deciding band, in order of time
}

// Spell is one counted event, from its first to its last step above the band.
type Spell struct {
	From        string  `json:"from"` // as the weather has the time
	To          string  `json:"to"`
	Days        float64 `json:"days"` // spent above
	PeakExcessM float64 `json:"peak_excess_m"`
}

// Change is the option against the baseline in the same years.
type Change struct {
	EventsPerYear     Difference `json:"events_per_year"`
	DaysPerYear       Difference `json:"days_per_year"`
	LoadMDaysPerYear  Difference `json:"load_m_days_per_year"`
	AnnualProbability Difference `json:"annual_probability"`
	ToldApart         bool       `json:"told_apart"`
}

// Difference is option minus baseline, so an improvement is negative.
type Difference struct {
	Difference   float64   `json:"difference"`
	DifferenceCI *Interval `json:"difference_ci,omitempty"`
	Ratio        *float64  `json:"ratio,omitempty"`
	RatioCI      *Interval `json:"ratio_ci,omitempty"`
	ShareBetter  float64   `json:"share_better"`
	ShareEqual   float64   `json:"share_equal"`
	YearsBetter  int       `json:"years_better"`
	YearsEqual   int       `json:"years_equal"`
	YearsWorse   int       `json:"years_worse"`
}

// Decision is the figure that ranks the options.
type Decision struct {
	Measure string    `json:"measure"`
	Value   float64   `json:"value"`
	CI      *Interval `json:"ci,omitempty"` // left out where the years hold no exceedance to resample
	Rank    int       `json:"rank"`         // 1 is least; equal figures share a rank

	MeetsTarget string `json:"meets_target,omitempty"` // yes, no, or not_shown: the figure does and the end of its range does not
	OnFrontier  *bool  `json:"on_frontier,omitempty"`  // no other option of known cost is as cheap and as good, and better in one
	DominatedBy string `json:"dominated_by,omitempty"` // such an option
}

// Size is the result of size: one number of an option over a range, and the value that just meets the target. Values are in
// Unit; of a share they are 0 to 1.
type Size struct {
	Head
	Declared  map[string]string `json:"declared"`
	Defaults  []KeyValue        `json:"defaults"`
	Settings  Settings          `json:"settings"`
	Record    Record            `json:"record"`
	Option    string            `json:"option"`
	Condition string            `json:"condition"`
	// What the option does and the state of its drains, as in Option, with the answer; without one with the safe end of the
	// range.
	Measures []string `json:"measures"`
	DrainsAs string   `json:"drains_as,omitempty"`
	Vary     string   `json:"vary"`
	Unit     string   `json:"unit"`  // of the values; share for shares, blank for plain numbers
	Safer    string   `json:"safer"` // lower or higher: the values with which the works do more
	DecideOn string   `json:"decide_on"`
	Measure  string   `json:"measure"` // of the figures
	Target   *Target  `json:"target,omitempty"`
	// Answer is the last value, counted from the safe end, before the first whose figure misses the target. Shown is the
	// same for the end of the figure's range. Beyond is the value nearest to the answer that was looked at and misses.
	Answer     *SizePoint `json:"answer,omitempty"`
	Shown      *SizePoint `json:"shown,omitempty"`
	Beyond     *SizePoint `json:"beyond,omitempty"`
	MeetsAgain []string   `json:"meets_again,omitempty"` // values of the curve beyond the first miss that meet the target
	Reason     string     `json:"reason,omitempty"`      // why there is no answer, or what is to be known of it
	States     []State    `json:"states,omitempty"`      // of the option's drains with the answer
	// TimeToEffect is that of the option with the answer, as in Option.
	TimeToEffect *TimeToEffect `json:"time_to_effect,omitempty"`
	Curve        []SizePoint   `json:"curve"` // in order of value
}

// SizePoint is the option with one value of the number.
type SizePoint struct {
	Value        float64   `json:"value"`
	Text         string    `json:"text"` // the value as it is written in a study
	Figure       float64   `json:"figure"`
	CI           *Interval `json:"ci,omitempty"`
	Meets        string    `json:"meets,omitempty"` // the target: yes, no, not_shown
	Metres       *float64  `json:"metres,omitempty"`
	PresentValue *float64  `json:"present_value,omitempty"`
	Step         *SizeStep `json:"step,omitempty"` // of the curve only; left out at its unsafe end
}

// SizeStep is what a value of the curve has over the next one that is less safe.
type SizeStep struct {
	Less             float64  `json:"less"`                          // of the figure; below zero where it has more
	LessPer100Metres *float64 `json:"less_per_100_metres,omitempty"` // of drain that it has more
	// Present value that it costs more, for each unit of the figure less; left out where it costs or brings no more.
	CostPerLess *float64 `json:"cost_per_less,omitempty"`
}

// Check is the result of check.
type Check struct {
	Head
	Understood []Understood  `json:"understood"`
	Rates      Rates         `json:"rates"` // of the baseline
	Options    []CheckOption `json:"options"`
	Bands      []Band        `json:"bands"`
	Record     Record        `json:"record"`
	Audit      Audit         `json:"audit"`
	Start      StartFound    `json:"start"`
	YearStarts string        `json:"year_starts"`
	Conversion *Conversion   `json:"conversion,omitempty"` // as in Comparison
}

// Conversion says how the rates of the ground were converted from the scheme that they were calibrated with.
type Conversion struct {
	Scheme            string           `json:"scheme"`
	StepDays          float64          `json:"step_days"`
	Cover             StoreConversion  `json:"cover"`
	Deep              StoreConversion  `json:"deep"`
	LargestDifference *LevelDifference `json:"largest_difference,omitempty"` // left out where the record has other steps
}

// StoreConversion is the total rate of a store's natural outlets and its drainable porosity, before and after.
type StoreConversion struct {
	GivenPerDay   float64 `json:"given_per_day"`
	ExactPerDay   float64 `json:"exact_per_day"`
	GivenPorosity float64 `json:"given_porosity"`
	Porosity      float64 `json:"porosity"`
}

// LevelDifference is the largest difference of the end-of-step levels over the record when the ground without measures
// is replayed by the scheme itself and by the exact stores, and the step in which it stands.
type LevelDifference struct {
	CoverM  float64 `json:"cover_m"`
	DeepM   float64 `json:"deep_m"`
	CoverAt string  `json:"cover_at,omitempty"` // as the weather has the time; left out where there is no difference
	DeepAt  string  `json:"deep_at,omitempty"`
}

// Understood is one key of the study with the value in force.
type Understood struct {
	Key     string `json:"key"`
	Value   string `json:"value"`
	Default bool   `json:"default"`
}

// CheckOption is what an option was understood to be.
type CheckOption struct {
	Name   string       `json:"name"`
	Rates  Rates        `json:"rates"`
	Drains []CheckDrain `json:"drains"`
}

// CheckDrain is a drain before any replay.
type CheckDrain struct {
	Measure         string   `json:"measure"`
	Layer           string   `json:"layer"`
	Law             string   `json:"law"`
	RatePerDay      float64  `json:"rate_per_day"`             // of a quadratic law that of its linear part
	HalfLifeDays    *float64 `json:"half_life_days,omitempty"` // of the water above the invert; of a linear law only
	InvertM         float64  `json:"invert_m"`
	CeilingMMPerDay *float64 `json:"ceiling_mm_per_day,omitempty"`
	From            string   `json:"from"` // how the rate came about, in words
}

// StartFound is the start that the baseline was replayed from.
type StartFound struct {
	CoverM float64 `json:"cover_m"`
	DeepM  float64 `json:"deep_m"`
}

// Audit is what the weather record looks like.
type Audit struct {
	Wettest    []WetDay     `json:"wettest"`
	Suspicious []Suspicious `json:"suspicious"`
	Years      []YearRain   `json:"years"`
}

// WetDay is one of the wettest days of the record.
type WetDay struct {
	Date   string  `json:"date"`
	RainMM float64 `json:"rain_mm"`
}

// Suspicious is a stretch of the record that a person should look at.
type Suspicious struct {
	Kind string `json:"kind"`
	From string `json:"from"`
	To   string `json:"to"`
	Text string `json:"text"`
}

// YearRain is a calendar year of the record.
type YearRain struct {
	Year       int     `json:"year"`
	RainMM     float64 `json:"rain_mm"`
	ValidShare float64 `json:"valid_share"`
}

// Drains is the result of drains: parallel drains worked out by formulas that a hand can follow, at one spacing or several.
type Drains struct {
	Head
	Option      string         `json:"option,omitempty"` // of the study, or the name of a list of options
	DrainAnswer                // at the first spacing
	Layout      DrainLayout    `json:"layout"`
	Spacings    []DrainSpacing `json:"spacings"`
}

// DrainAnswer is what is asked of a spacing first.
type DrainAnswer struct {
	EquivalentDepthM         float64  `json:"equivalent_depth_m"` // in force
	ReactionFactorPerDay     float64  `json:"reaction_factor_per_day"`
	ReservoirCoefficientDays float64  `json:"reservoir_coefficient_days"`
	HalfLifeDays             float64  `json:"half_life_days"`
	SteadyHeadM              *float64 `json:"steady_head_m,omitempty"`       // under the recharge, by Hooghoudt's equation
	TimeToEffectDays         *float64 `json:"time_to_effect_days,omitempty"` // left out where nothing changes: for the baseline
}

// DrainLayout is what the figures were worked out from. Heads are heights of the water above the drains, midway.
type DrainLayout struct {
	DepthM                   float64  `json:"depth_m"`                  // of the drains below ground
	ThicknessM               *float64 `json:"thickness_m,omitempty"`    // from the ground to the impermeable base; left out where only an equivalent depth is known
	BelowDrainsM             *float64 `json:"below_drains_m,omitempty"` // of the layer
	ConductivityMPerDay      float64  `json:"conductivity_m_per_day"`
	ConductivityBelowMPerDay float64  `json:"conductivity_below_m_per_day"`
	Porosity                 float64  `json:"porosity"`
	PorosityGiven            *float64 `json:"porosity_given,omitempty"` // before it was converted from a stepping scheme
	RadiusM                  *float64 `json:"radius_m,omitempty"`       // left out for drains on the base
	WidthM                   *float64 `json:"width_m,omitempty"`        // of the trench that the radius stands for
	WetM                     *float64 `json:"wet_m,omitempty"`
	EquivalentDepth          string   `json:"equivalent_depth"` // computed or given
	WorkingHeadM             float64  `json:"working_head_m"`
	Efficiency               float64  `json:"efficiency"`
	Law                      string   `json:"law,omitempty"` // of the option: linear or quadratic
	RechargeMMPerDay         *float64 `json:"recharge_mm_per_day,omitempty"`
	ConsolidationM2PerYear   *float64 `json:"consolidation_m2_per_year,omitempty"`
	FallFromM                *float64 `json:"fall_from_m,omitempty"`
	FallToM                  *float64 `json:"fall_to_m,omitempty"`
	NotOfOption              []string `json:"not_of_option,omitempty"` // what the command line gives in place of the option
}

// DrainSpacing are the figures of one spacing.
type DrainSpacing struct {
	SpacingM float64 `json:"spacing_m"`
	Option   string  `json:"option,omitempty"` // that has this spacing
	DrainAnswer
	ComputedDepthM    *float64       `json:"computed_depth_m,omitempty"` // equivalent depth of van der Molen & Wesseling; left out for drains on the base
	MoodyDepthM       *float64       `json:"moody_depth_m,omitempty"`    // the same of Moody
	FallsByHalfDays   float64        `json:"falls_by_half_days"`         // a water table without recharge, by Glover and Dumm
	FallDays          *float64       `json:"fall_days,omitempty"`        // the same between the heads of the layout
	Outflows          []DrainOutflow `json:"outflows"`
	SteadyHeadLinearM *float64       `json:"steady_head_linear_m,omitempty"` // under the recharge, by the linear law
	StoreDays         *float64       `json:"store_days,omitempty"`           // time to effect of the stores alone
	ClayDays          *float64       `json:"clay_days,omitempty"`            // and of the clay, where a coefficient of consolidation is known
	Metres            *float64       `json:"metres,omitempty"`               // of drain on the plan area
}

// DrainOutflow is the outflow at one head by both laws.
type DrainOutflow struct {
	HeadM             float64 `json:"head_m"`
	LinearMMPerDay    float64 `json:"linear_mm_per_day"`
	HooghoudtMMPerDay float64 `json:"hooghoudt_mm_per_day"`
}
