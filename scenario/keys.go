package scenario

import (
	"quietslope/scenario/quantity"
	"quietslope/scenario/weather"
)

// This file is the table of the study's keys: what each is called, how its value is written, what range it may have,
// what stands in for it when it is left out, and what it is. The decoder reads by it, and errors, the list of what was
// understood and the reference of all keys come from it.

// form is how a value is written.
type form int

const (
	formText      form = iota // one line of text, which may be blank
	formFilled                // one line of text, not blank
	formName                  // a name by the rules of checkName
	formWord                  // one of the words of the shape
	formTexts                 // a list of texts, as typed
	formOneOrMore             // a text that is not blank, or a list of such texts
	formNumber                // a bare number
	formWhole                 // a whole number
	formQuantity              // a number with a unit
	formYears                 // a whole number of years, with unit
	formMonth                 // the English name of a month
	formBlock                 // a block of keys
	formList                  // a list of blocks
)

// shape says what a value must be.
type shape struct {
	form   form
	kind   quantity.Kind // of a quantity
	limits limits        // of a number or quantity, in the base unit of its kind
	words  []string      // words that may stand instead, such as none or auto
	later  []string      // words that are known but not supported yet
	fields []field       // of a block, or of each block of a list
	choice []string      // of a block: keys of which one is given
	filled bool          // of a block: it has at least one key
	most   int           // largest number of items of a list of texts
	cell   bool          // a text that comes to stand in a cell of a table, where no formula may begin
	bare   string        // of a quantity: the key beside which it is a bare number, for the decoder to tell apart
	meant  [][2]string   // other words that a person may write, and which of the shape's words is meant
	sum    bool          // of a number: a sum of money, in the currency of the study

	hint func(text string) string // what to say of a text that cannot be read as this, "" for nothing better than usual
}

// limits is the range of a number.
type limits struct {
	lo, hi         float64
	loOpen, hiOpen bool // the limit itself is out of range
}

// field is one key of a block.
type field struct {
	name   string
	says   string // what it is, for the reference that Keys makes: one line without a full stop
	shape  shape
	need   string   // what must be given, up to "such as" where eg shall follow; "" for a key that may be left out
	def    string   // what stands in for a key that is left out, as it would be typed
	absent string   // for the reference: what holds when it is left out, where need and def do not say it
	eg     string   // for the schema: a value as it would be typed; "" where the default or the shape has one
	not    []string // keys of the block that have no place beside it
	with   []string // for the schema: keys of the block that are needed beside it
	quiet  bool     // says nothing when it is left out, and is not listed then
	later  bool     // refused: not supported yet
}

// Limits beyond which a number is taken for a slip. Where no reason stands beside it, a limit is a judgement, and far
// outside of what a slope has.
const (
	maxRate          = 1e6   // 1/d; what the engine is tested for
	maxSquare        = 1e6   // 1/(mm d); the same
	maxThickness     = 500   // m
	maxLevel         = 1000  // m
	maxFlux          = 1e5   // mm/d
	maxIntensity     = 1e4   // mm/h
	maxConductivity  = 1e5   // m/d; clean gravel has some 1e4
	maxWater         = 5000  // mm
	maxSpacing       = 10000 // m
	maxArea          = 1e9   // m2
	maxDrains        = 100000
	maxSafety        = 10     // factor of safety; no slope that moves comes near
	maxResamples     = 100000 // a year of them takes 0.8 MB
	maxMoney         = 1e13   // of any currency
	maxHorizon       = 500    // y
	maxConsolidation = 1e6    // m2/y; fissured clays have some 0.1 to 1000
	mostCosts        = 20     // that one cost may add up
	// A soil that meets the full demand down to its last tenth of a millimetre takes ever shorter parts of a day to
	// work out. Allen et al. (1998, FAO-56, table 22) have 0.2 to 0.7 (range from memory).
	maxReadily = 0.95
)

func above(lo, hi float64) limits   { return limits{lo: lo, hi: hi, loOpen: true} }
func atLeast(lo, hi float64) limits { return limits{lo: lo, hi: hi} }

func amount(kind quantity.Kind, l limits, words ...string) shape {
	return shape{form: formQuantity, kind: kind, limits: l, words: words}
}

// years is a time that is usually given in years. Never is what to say of a word that stands for no end of it.
func years(l limits, never string) shape {
	return shape{form: formQuantity, kind: quantity.Duration, limits: l, hint: func(text string) string { return yearsMeant(text, never) }}
}

func block(fields ...field) shape { return shape{form: formBlock, fields: fields} }

func oneOf(words ...string) shape { return shape{form: formWord, words: words} }

func notYet(name string) field { return field{name: name, later: true} }

var (
	filledShape    = shape{form: formFilled}
	titleShape     = shape{form: formFilled, cell: true}
	personShape    = shape{form: formText, cell: true}
	textShape      = shape{form: formText}
	nameShape      = shape{form: formName}
	shareShape     = amount(quantity.Share, atLeast(0, 1))
	someShareShape = amount(quantity.Share, above(0, 1))
	levelShape     = amount(quantity.Length, atLeast(0, maxLevel))
	datumShape     = amount(quantity.Length, atLeast(-1000, 10000)) // elevations on land, from the shore of the Dead Sea to the highest peaks
	rateShape      = amount(quantity.Rate, atLeast(0, maxRate))
	drainRateShape = amount(quantity.Rate, above(0, maxRate))
	ceilingShape   = amount(quantity.Flux, above(0, maxFlux), "none")
	fullAtShape    = amount(quantity.Length, above(0, maxLevel), "none")
	angleShape     = amount(quantity.Angle, limits{lo: 0, hi: 90, loOpen: true, hiOpen: true})
	moneyShape     = shape{form: formNumber, limits: atLeast(0, maxMoney), sum: true, hint: sumMeant}
	answerShape    = shape{form: formWord, words: []string{"yes", "no", "unknown", "true", "false"}}
)

// The numbers of the ground, which an option may change with set. Thicknesses are not among them: bands and drains
// hang on them.
var (
	surfaceFields = []field{
		{name: "infiltration", says: "share of the rain that enters the ground; the rest runs off",
			shape: shareShape, def: "100 %", eg: "85 %"},
		{name: "infiltration_limit", says: "largest intensity at which water enters; the rest runs off",
			shape: amount(quantity.Intensity, above(0, maxIntensity), "none"), def: "none", eg: "20 mm/h"},
	}
	soilFields = []field{
		{name: "available_water", says: "water that plants can draw from a soil at field capacity",
			shape: amount(quantity.WaterDepth, above(0, maxWater)), need: "the water that plants can draw from the soil, such as", eg: "120 mm"},
		{name: "readily_available", says: "share of available_water that plants draw at their full demand",
			shape: amount(quantity.Share, atLeast(0, maxReadily)), def: "50 %", eg: "55 %"},
		{name: "crop_factor", says: "what the evapotranspiration of the record is multiplied by",
			shape: shape{form: formNumber, limits: atLeast(0, 5)}, def: "1", eg: "1.1"},
	}
	coverFields = []field{
		{name: "thickness", says: "from the ground down to the contact with the deep layer",
			shape: amount(quantity.Length, above(0, maxThickness)), need: "the thickness of the cover, such as", eg: "4.0 m"},
		{name: "drainable_porosity", says: "share of the cover that fills and drains as its level moves",
			shape: someShareShape, need: "the share of the cover that fills and drains, such as", eg: "6 %"},
		{name: "seepage", says: "rate at which stored water leaves along the contact and out at the toe",
			shape: rateShape, need: "the rate at which water leaves along the contact, such as", eg: "0.01 /d"},
		{name: "percolation", says: "rate at which stored water sinks into the deep layer; 0 /d for none",
			shape: rateShape, need: "the rate at which water sinks into the deep layer, such as 0.005 /d, or 0 /d", eg: "0.005 /d"},
		{name: "percolation_ceiling", says: "most that the deep layer takes in, however full the cover is",
			shape: ceilingShape, def: "none", eg: "2 mm/d"},
		{name: "conductivity", says: "hydraulic conductivity of the cover, for trenches that are given by their spacing", absent: "may be left out",
			shape: amount(quantity.Conductivity, above(0, maxConductivity)), quiet: true, eg: "0.02 m/d"},
		{name: "full_at", says: "level above the contact at which the cover is full and overflows", absent: "by default the thickness of the cover",
			shape: fullAtShape, eg: "3.5 m"},
	}
	deepFields = []field{
		{name: "thickness", says: "from the contact down to the base of the deep layer, the slip surface",
			shape: amount(quantity.Length, above(0, maxThickness)), need: "the thickness of the deep layer, such as", eg: "9.0 m"},
		{name: "drainable_porosity", says: "share of the deep layer that fills and drains: its fissures only",
			shape: someShareShape, need: "the share of the deep layer that its fissures take up, such as", eg: "1.4 %"},
		{name: "seepage", says: "rate at which stored water leaves the deep layer by itself",
			shape: rateShape, need: "the rate at which water leaves the deep layer, such as", eg: "0.007 /d"},
		{name: "lateral_inflow", says: "steady inflow from the side or from uphill",
			shape: amount(quantity.Flux, atLeast(0, maxFlux)), def: "0 mm/d", eg: "0.05 mm/d"},
		{name: "consolidation", says: "coefficient of consolidation of the clay, for the time until trenches have drained it", absent: "may be left out",
			shape: amount(quantity.Consolidation, above(0, maxConsolidation)), quiet: true, eg: "3 m2/y"},
		{name: "full_at", says: "level above the base at which the deep layer is full and refuses more", absent: "by default the thickness of the deep layer",
			shape: fullAtShape, eg: "8.5 m"},
	}
)

// settable lists the keys of set, which are those of the ground without the thicknesses.
var settable = func() []field {
	var all []field
	for _, part := range []struct {
		name   string
		fields []field
	}{{"surface", surfaceFields}, {"soil", soilFields}, {"cover", coverFields}, {"deep", deepFields}} {
		for _, f := range part.fields {
			if f.name != "thickness" && !f.later {
				all = append(all, field{name: part.name + "." + f.name, says: f.says, absent: "by default as in ground", shape: f.shape, eg: f.eg, quiet: true})
			}
		}
	}
	return all
}()

// studyShape is the whole file. The order is that of the documentation.
var studyShape = block(
	field{name: "study", says: "title of the study, on one line",
		shape: titleShape, need: "a title on one line, such as:", eg: "Bank above the mill, drainage options"},
	field{name: "prepared_by", says: "who made the study", absent: "by default blank",
		shape: personShape, def: "", eg: "A. N. Engineer"},
	field{name: "checked_by", says: "who checked the study", absent: "by default blank",
		shape: personShape, def: "", eg: "A. Checker"},
	field{name: "weather", says: "the record that is replayed for every option",
		shape: weatherShape, need: "the record of rain: a block with file and columns"},
	field{name: "ground", says: "the slope as calibrated: two layers, each one store of drainable water",
		shape: groundShape, need: "the two layers: a block with cover and deep"},
	field{name: "slope", says: "the slope above the slip surface, for bands given as a factor of safety",
		shape: slopeShape, def: "none"},
	field{name: "bands", says: "the critical deep levels, from the lowest to the highest",
		shape: shape{form: formList, fields: bandFields, choice: datums}, need: "a list of critical deep levels, such as: - {name: movement onset, level: 4.2 m}"},
	field{name: "count", says: "how exceedances are counted and options ranked",
		shape: countShape},
	field{name: "money", says: "how costs and losses are added up over the years", absent: "may be left out, without costs and losses",
		shape: moneyBlock, quiet: true},
	notYet("climates"),
	field{name: "options", says: "what could be done; all options are replayed on the same record",
		shape: shape{form: formList, fields: optionFields}, need: "a list of what could be done, the first being the ground as it is: - name: as it stands"},
	field{name: "conditions", says: "how the works hold up; every option is replayed in each, and as built", absent: "by default only as built",
		shape: shape{form: formList, fields: conditionFields}, quiet: true},
	field{name: "site", says: "where and how large the slope is",
		shape: block(
			field{name: "plan_area", says: "area of the slope in plan, to turn depths of water into volumes",
				shape: amount(quantity.Area, above(0, maxArea)), def: "none", eg: "12000 m2"},
			field{name: "ground_level", says: "elevation of the ground on the site's datum, for bands given as an elevation",
				shape: datumShape, def: "none", eg: "418.0 m"},
		)},
	field{name: "declared", says: "what no calculation can know; unknown is an honest answer, and is listed with the results",
		shape: block(declaredFields()...)},
	notYet("readings"),
	notYet("fit"),
)

var weatherShape = block(
	field{name: "file", says: "path of the CSV file, from the folder of the study",
		shape: filledShape, need: "the path of the record from the folder of the study, such as", eg: "weather.csv"},
	field{name: "columns", says: "which columns of the file are read; others may stand there too",
		shape: block(
			field{name: "time", says: "the column of times",
				shape: block(
					field{name: "name", says: "header of the column, as it stands in the file",
						shape: filledShape, need: "the header of the column of times", eg: "date"},
					field{name: "format", says: "how the times are written, such as YYYY-MM-DD hh:mm, or iso",
						shape: filledShape, need: "how times are written, such as YYYY-MM-DD or iso", eg: "YYYY-MM-DD"},
				), need: "the column of times: {name: HEADER, format: YYYY-MM-DD}"},
			field{name: "rain", says: "the column of rain",
				shape: columnShape("rain_mm"), need: "the column of rain: {name: HEADER, unit: mm}"},
			field{name: "pet", says: "the column of potential evapotranspiration of grass",
				shape: columnShape("pet_mm"), def: "none"},
			notYet("temperature"),
		), need: "the columns to read: a block with time and rain"},
	notYet("pet_from"),
	notYet("snow"),
	field{name: "stamp", says: "whether a time names the start or the end of its step",
		shape: oneOf("start", "end"), def: "start", eg: "end"},
	field{name: "missing", says: "cells that stand for a missing value; a list given here replaces the default",
		shape: shape{form: formTexts, most: 100}, def: `"", NA`},
	field{name: "gaps", says: "what to do about missing values; filled ones are counted and reported",
		shape: shape{form: formWord, words: []string{string(weather.GapsRefuse), string(weather.GapsZero), string(weather.GapsMonthMean)}, later: []string{"{from: …}"}}, def: "refuse", eg: "month mean"},
)

// columnShape is a column of depths of water. Name is a header that one may have.
func columnShape(name string) shape {
	return block(
		field{name: "name", says: "header of the column, as it stands in the file",
			shape: filledShape, need: "the header of the column", eg: name},
		field{name: "unit", says: "a depth per step (mm, cm, in), a rate (mm/h, mm/d, in/h), or multiples such as 0.1 mm",
			shape: filledShape, need: "the unit of the column, such as mm for a depth per step or mm/h for a rate", eg: "mm"},
	)
}

var groundShape = block(
	field{name: "surface", says: "how rain enters the ground",
		shape: block(surfaceFields...)},
	field{name: "soil", says: "soil-water balance: plants use part of the water before any goes deeper; needs columns.pet",
		shape: block(soilFields...), def: "none"},
	field{name: "cover", says: "the upper, permeable layer",
		shape: block(coverFields...), need: "the upper layer: a block with thickness, drainable_porosity, seepage and percolation"},
	field{name: "deep", says: "the lower layer: clay with open fissures",
		shape: block(deepFields...), need: "the lower layer: a block with thickness, drainable_porosity and seepage"},
	field{name: "rates_from", says: "the formula that the rates of ground and set were calibrated with; rates of drains are as given",
		shape: block(
			field{name: "scheme", says: "the formula: centred is also called trapezoidal, explicit forward, implicit backward",
				shape: shape{form: formWord, words: []string{"exact", "centred", "explicit", "implicit"}, meant: [][2]string{
					{"centered", "centred"}, {"central", "centred"}, {"trapezoidal", "centred"}, {"trapezium", "centred"}, {"crank-nicolson", "centred"},
					{"forward", "explicit"}, {"euler", "explicit"}, {"backward", "implicit"}, {"analytical", "exact"}, {"exponential", "exact"},
				}}, def: "exact", eg: "centred"},
			field{name: "step", says: "the step that the formula was used with",
				shape: amount(quantity.Duration, above(0, 366)), def: "1 d"},
		)},
	field{name: "start", says: "where the replay begins: the steady levels under each option's own mean recharge, or levels",
		shape: shape{form: formBlock, words: []string{"steady"}, fields: []field{
			{name: "cover", says: "level in the cover at the start, above the contact",
				shape: levelShape, need: "the level in the cover at the start, such as", eg: "1.2 m"},
			{name: "deep", says: "level in the deep layer at the start, above its base",
				shape: levelShape, need: "the level in the deep layer at the start, such as", eg: "3.4 m"},
		}}, def: "steady"},
	field{name: "warm_up", says: "years of the record that are replayed before it, so that the start no longer matters", absent: "by default auto, or 0 y where start gives levels",
		shape: shape{form: formYears, kind: quantity.Duration, limits: atLeast(0, maxWarmUp), words: []string{"auto"}}, eg: "4 y"},
	field{name: "calibrated_to", says: "highest deep level in the readings used for calibration; bands above it are extrapolated",
		shape: amount(quantity.Length, above(0, maxLevel), "unknown"), def: "unknown", eg: "4.9 m"},
	notYet("ensemble"),
)

// oneLevel is what holds of a band that does not give one of its levels.
const oneLevel = "one of level, elevation, below_ground and factor_of_safety is required"

var bandFields = []field{
	{name: "name", says: "what begins at this level, such as movement onset",
		shape: nameShape, need: "a name, such as", eg: "movement onset"},
	{name: "level", says: "height above the base of the deep layer", absent: oneLevel,
		shape: amount(quantity.Length, atLeast(-maxLevel, maxLevel)), quiet: true, eg: "4.2 m"},
	{name: "elevation", says: "height on the site's datum; needs site.ground_level", absent: oneLevel,
		shape: datumShape, quiet: true, eg: "409.2 m"},
	{name: "below_ground", says: "depth below ground", absent: oneLevel,
		shape: amount(quantity.Length, atLeast(-maxLevel, maxLevel)), quiet: true, eg: "8.8 m"},
	{name: "factor_of_safety", says: "factor of safety at whose level the band begins; needs slope", absent: oneLevel,
		shape: shape{form: formNumber, limits: above(0, maxSafety)}, quiet: true, eg: "1.0"},
	{name: "until", says: "level, or factor of safety, at which an event ends again, given in the same way as the band", absent: "by default the level at which the band begins",
		shape: shape{form: formQuantity, kind: quantity.Length, limits: atLeast(-1000, 10000), bare: bySafety}, eg: "3.9 m"},
	{name: "loss_per_event", says: "what an event costs that reaches this band and none above with such a loss (0 is none); needs money",
		shape: moneyShape, def: "0", quiet: true, eg: "250000"},
	{name: "loss_per_day", says: "what a day costs on which this is the highest band passed with such a loss (0 is none); needs money",
		shape: moneyShape, def: "0", quiet: true, eg: "1800"},
}

var countShape = block(
	field{name: "apart", says: "exceedances no further apart than this are one event; with 0 d only until joins them",
		shape: amount(quantity.Duration, atLeast(0, 3660)), def: "10 d"},
	field{name: "year_starts", says: "month in which the counted years begin; auto is the month with the lowest level",
		shape: shape{form: formMonth, words: []string{"auto"}}, def: "auto", eg: "October"},
	field{name: "confidence", says: "confidence of the ranges beside the figures",
		shape: amount(quantity.Share, limits{lo: 0.5, hi: 0.999, loOpen: true, hiOpen: true}), def: "90 %"},
	field{name: "resamples", says: "how often the years are drawn anew for the ranges of days, load and changes",
		shape: shape{form: formWhole, limits: atLeast(100, maxResamples)}, def: "2000"},
	field{name: "seed", says: "where the random draws begin; the same seed gives the same figures",
		shape: shape{form: formWhole, limits: atLeast(0, 1<<53-1)}, def: "1"}, // every reader of JSON keeps these apart
	field{name: "decide_on", says: "name of the band that ranks the options", absent: "by default the only band; required with several bands and several options",
		shape: filledShape, eg: "movement onset"},
	field{name: "decide_by", says: "figure that ranks the options; load is the height above the band times days",
		shape: oneOf("load", "days", "events", "annual_probability"), def: "load", eg: "days"},
	field{name: "mean_block", says: "mean length of the runs of years that are drawn together",
		shape: amount(quantity.Duration, atLeast(365.25, 365250)), def: "2 y"},
	field{name: "target", says: "what an option must keep to on decide_on", absent: "may be left out",
		shape: targetShape, quiet: true},
	field{name: "design_life", says: "years over which drains age where money gives no horizon",
		shape: shape{form: formYears, kind: quantity.Duration, limits: atLeast(1, maxHorizon)}, def: "50 y"},
)

// targetShape has a key for each figure that a target can be set on.
var targetShape = shape{form: formBlock, hint: targetMeant, choice: []string{"load", "days", "events", "annual_probability", "return_period"}, fields: []field{
	{name: "load", says: "most load, m·d a year", absent: oneTarget,
		shape: shape{form: formNumber, limits: atLeast(0, 1e6)}, quiet: true, eg: "0.5"},
	{name: "days", says: "most days a year", absent: oneTarget,
		shape: shape{form: formNumber, limits: atLeast(0, 366)}, quiet: true, eg: "2"},
	{name: "events", says: "most events a year", absent: oneTarget,
		shape: shape{form: formNumber, limits: atLeast(0, 366)}, quiet: true, eg: "0.1"},
	{name: "annual_probability", says: "largest share of years with a passage", absent: oneTarget,
		shape: shape{form: formQuantity, kind: quantity.Share, limits: atLeast(0, 1), hint: probabilityMeant}, quiet: true, eg: "5 %"},
	{name: "return_period", says: "one in so many years has a passage, at most: the inverse of annual_probability, as counted", absent: oneTarget,
		shape: shape{form: formQuantity, kind: quantity.Duration, limits: atLeast(365.25, 365250), hint: returnMeant}, quiet: true, eg: "20 y"},
}}

// oneTarget is what holds of a target that does not give one of its figures.
const oneTarget = "one of load, days, events, annual_probability and return_period is required"

var moneyBlock = block(
	field{name: "currency", says: "name or sign of the currency, printed beside every sum",
		shape: titleShape, need: "the currency, such as", eg: "EUR"},
	field{name: "horizon", says: "years over which costs and losses are counted",
		shape: shape{form: formYears, kind: quantity.Duration, limits: atLeast(1, maxHorizon)}, need: "the years over which costs and losses are counted, such as", eg: "50 y"},
	field{name: "discount_rate", says: "yearly rate at which later sums count less; real, so without inflation",
		shape: amount(quantity.Share, limits{lo: 0, hi: 1, hiOpen: true}), need: "the yearly rate at which later sums count less, such as", eg: "3 %"},
	field{name: "prices_of", says: "year whose prices all sums are in",
		shape: shape{form: formWhole, limits: atLeast(1900, 2200), hint: yearMeant}, need: "the year whose prices all sums are in, such as", eg: "2026"},
	field{name: "contingency", says: "share added to every capital sum for what is not foreseen",
		shape: shape{form: formQuantity, kind: quantity.Share, limits: atLeast(0, 1), hint: contingencyMeant}, def: "0 %", eg: "20 %"},
)

var costShape = shape{form: formBlock, filled: true, hint: costMeant, fields: []field{
	{name: "capital", says: "paid at the start, and again whenever life is over",
		shape: moneyShape, def: "0", quiet: true, eg: "210000"},
	{name: "per_metre", says: "paid like capital, for each metre: plan area divided by spacing, or number of bores times length",
		shape: moneyShape, def: "0", quiet: true, eg: "95"},
	{name: "per_year", says: "upkeep, inspection and readings, each year",
		shape: moneyShape, def: "0", quiet: true, eg: "600"},
	{name: "per_flush", says: "paid whenever decline.flushed_every has passed",
		shape: moneyShape, def: "0", quiet: true, eg: "4000"},
	{name: "life", says: "time after which capital and metres are paid again, and drains that nobody flushes are as new", absent: "by default never renewed",
		shape: years(atLeast(365.25, 365250), "works that are never renewed have no life; delete the key"), quiet: true, eg: "30 y"},
	{name: "like", says: "name of an option above whose cost is taken, or of several whose costs are added up", absent: "may be left out",
		shape: shape{form: formOneOrMore, most: mostCosts}, quiet: true, eg: "name of the other option"},
}}

// declineField says how drains clog.
var declineField = field{name: "decline", says: "how the drains clog, and what flushing restores", def: "none",
	shape: shape{form: formBlock, words: []string{"none"}, hint: declineMeant, fields: []field{
		{name: "half_life", says: "time after which half of the rate is left, without flushing",
			shape: years(above(0, 365250), "drains that never clog have no decline; write decline: none"), need: "the time after which half of the rate is left, such as", eg: "12 y"},
		{name: "flushed_every", says: "time between flushes", absent: "by default never flushed; required with restored_to",
			shape: years(atLeast(30, 365250), "drains that are never flushed have neither this key nor restored_to; delete both"), quiet: true, eg: "5 y", with: []string{"restored_to"}},
		{name: "restored_to", says: "share of the rate as new that a flush restores", absent: "required with flushed_every",
			shape: someShareShape, quiet: true, eg: "95 %", with: []string{"flushed_every"}},
	}}}

var optionFields = []field{
	{name: "name", says: "what the option is called in every result",
		shape: nameShape, need: "a name, such as", eg: "trenches"},
	{name: "baseline", says: "whether this is the option that all others are compared with; only one can be", absent: "by default the first option is, where none is marked",
		shape: oneOf("true", "false"), eg: "true"},
	{name: "minimum", says: "whether this is the least that has to be done anyway; it is marked in the table of costs", absent: "by default no option is",
		shape: oneOf("true", "false"), quiet: true, eg: "true"},
	{name: "trench_drains", says: "parallel trenches that drain the cover, down to their own level and no further", absent: "may be left out",
		shape: trenchShape, quiet: true},
	{name: "bored_drains", says: "bores that drain the deep layer, down to their own level and no further", absent: "may be left out",
		shape: boredShape, quiet: true},
	{name: "surface_water", says: "lined channels, grading and the like, which keep water out of the ground", absent: "may be left out",
		shape: block(
			field{name: "kept_out", says: "share of the infiltration that no longer enters, over the whole plan area",
				shape: shareShape, need: "the share of the infiltration that no longer enters, such as", eg: "10 %"},
			likeField,
		), quiet: true},
	{name: "vegetation", says: "planting, which uses more water and keeps some rain off the ground", absent: "may be left out",
		shape: block(
			field{name: "pet_factor", says: "what the evapotranspiration is multiplied by, besides soil.crop_factor",
				shape: shape{form: formNumber, limits: atLeast(0, 5)}, need: "what the evapotranspiration is multiplied by, such as", eg: "1.10"},
			field{name: "interception", says: "share of the rain that never reaches the ground",
				shape: shareShape, def: "0 %", eg: "4 %"},
			likeField,
		), quiet: true},
	{name: "cut_off_drain", says: "a drain uphill of the slope, which takes part of deep.lateral_inflow", absent: "may be left out",
		shape: block(
			field{name: "intercepted", says: "share of deep.lateral_inflow that no longer arrives",
				shape: shareShape, need: "the share of deep.lateral_inflow that no longer arrives, such as", eg: "60 %"},
			likeField,
		), quiet: true},
	{name: "set", says: "numbers of ground that this option changes, before its other measures act", absent: "may be left out",
		shape: shape{form: formBlock, fields: settable, filled: true}, quiet: true},
	{name: "cost", says: "what the option costs; needs money", absent: "may be left out: nothing for the baseline, not known for any other",
		shape: costShape, quiet: true},
}

// likeField takes the measure of another option. The reader puts that option's keys in its place, before it is decoded.
var likeField = field{name: "like", says: "name of an option above whose same measure is taken; keys beside it override", absent: "may be left out",
	shape: filledShape, quiet: true, eg: "name of the other option"}

var trenchShape = shape{form: formBlock, choice: []string{"spacing", "rate"}, fields: []field{
	{name: "depth", says: "depth of the trenches below ground, no deeper than the cover is thick",
		shape: amount(quantity.Length, above(0, maxThickness)), need: "the depth of the trenches below ground, such as", eg: "3.0 m"},
	{name: "rate", says: "rate at which the trenches empty the cover above their level, measured or worked out elsewhere", absent: "either rate or spacing is required",
		shape: drainRateShape, quiet: true, eg: "0.02 /d", not: withSpacing},
	{name: "spacing", says: "distance from trench to trench, from which the rate is worked out", absent: "either rate or spacing is required",
		shape: amount(quantity.Length, above(0, maxSpacing)), quiet: true, eg: "12 m"},
	{name: "conductivity", says: "hydraulic conductivity of the cover, of what lies above the trenches' level; only with spacing", absent: "by default ground.cover.conductivity",
		shape: amount(quantity.Conductivity, above(0, maxConductivity)), quiet: true, eg: "0.02 m/d"},
	{name: "conductivity_below", says: "hydraulic conductivity of what lies below the trenches' level; only with spacing", absent: "by default as conductivity; unused on the contact",
		shape: amount(quantity.Conductivity, above(0, maxConductivity)), quiet: true, eg: "0.005 m/d"},
	{name: "drain_radius", says: "radius of a drain that takes in as much: wetted perimeter divided by π; only with spacing", absent: "by default 0.1 m; unused on the contact",
		shape: amount(quantity.Length, above(0, maxRadius)), quiet: true, eg: "0.2 m", not: []string{"equivalent_depth"}},
	{name: "equivalent_depth", says: "depth of flow below the trenches, after Hooghoudt; it grows with the spacing; only with spacing", absent: "by default computed from spacing, drain_radius and the cover below the trenches",
		shape: amount(quantity.Length, atLeast(0, maxThickness)), quiet: true, eg: "0.80 m"},
	{name: "working_head", says: "height midway of the water above the trenches, for the rate of the linear law; only with spacing", absent: "by default half of depth",
		shape: amount(quantity.Length, above(0, maxThickness)), quiet: true, eg: "1.5 m"},
	{name: "law", says: "how the outflow grows with the height of the water above the trenches; only with spacing",
		shape: shape{form: formWord, words: []string{"linear", "quadratic"}}, def: "linear", eg: "quadratic"},
	{name: "efficiency", says: "share of the rate that is reached, to allow for poor workmanship",
		shape: someShareShape, def: "100 %", eg: "80 %"},
	{name: "ceiling", says: "most that the trenches carry away",
		shape: ceilingShape, def: "none", eg: "12 mm/d"},
	declineField,
	likeField,
}}

var boredShape = block(
	field{name: "rate", says: "rate at which the drains empty the deep layer above their level",
		shape: drainRateShape, need: "the rate at which the drains empty the deep layer above their level, such as", eg: "0.005 /d"},
	field{name: "level", says: "level of the drains above the base of the deep layer",
		shape: levelShape, need: "the level of the drains above the base of the deep layer, such as", eg: "3.0 m"},
	field{name: "efficiency", says: "share of the rate that is reached, to allow for poor workmanship",
		shape: someShareShape, def: "100 %", eg: "80 %"},
	field{name: "ceiling", says: "most that the drains carry away",
		shape: ceilingShape, def: "none", eg: "5 mm/d"},
	field{name: "number", says: "how many bores there are; costs per metre depend on it",
		shape: shape{form: formWhole, limits: atLeast(1, maxDrains)}, def: "none", eg: "12"},
	field{name: "length", says: "length of each bore; costs per metre and a warning depend on it",
		shape: amount(quantity.Length, above(0, maxLevel)), def: "none", eg: "45 m"},
	declineField,
	likeField,
)

var slopeShape = block(
	field{name: "angle", says: "angle of the ground, and of the slip surface below it, to the horizontal",
		shape: angleShape, need: "the angle of the slope, such as", eg: "11 deg"},
	field{name: "slip_depth", says: "depth of the slip surface below ground, measured vertically", absent: "by default the thickness of cover and deep layer",
		shape: amount(quantity.Length, above(0, maxThickness)), eg: "13 m"},
	field{name: "unit_weight", says: "weight of the ground above the slip surface, with its water",
		shape: amount(quantity.UnitWeight, atLeast(8, 35)), need: "the unit weight of the ground, such as", eg: "19.5 kN/m3"},
	field{name: "friction", says: "effective angle of friction on the slip surface; residual, where it has moved before",
		shape: angleShape, need: "the angle of friction on the slip surface, such as", eg: "13.8 deg"},
	field{name: "cohesion", says: "effective cohesion on the slip surface",
		shape: amount(quantity.Stress, atLeast(0, 1e4)), def: "0 kPa", eg: "2 kPa"},
	field{name: "flow", says: "how the water stands: parallel, seeping along the slope; standing, in open fissures without flow",
		shape: shape{form: formWord, words: []string{"parallel", "standing"}, meant: [][2]string{
			{"along", "parallel"}, {"slope", "parallel"}, {"hydrostatic", "standing"}, {"vertical", "standing"}, {"none", "standing"},
		}}, def: "parallel"},
)

var conditionFields = []field{
	{name: "name", says: "what the condition is called in every result",
		shape: nameShape, need: "a name, such as", eg: "neglected"},
	{name: "drains", says: "share that is left of the rate of trench and bored drains, and of what a cut-off drain takes",
		shape: shareShape, def: "100 %", eg: "45 %"},
	{name: "surface_water", says: "share that is left of what surface_water keeps out",
		shape: shareShape, def: "100 %", eg: "60 %"},
	{name: "vegetation", says: "share that is left of the interception, and of what pet_factor adds",
		shape: shareShape, def: "100 %", eg: "80 %"},
}

// declaredSays describes the keys of DeclaredKeys.
var declaredSays = map[string]string{
	"existing_slip_surface":            "the slope moves on a slip surface that exists already; no is refused",
	"rapid_movement_possible":          "the slope could move rapidly; yes is refused",
	"ground_changed_since_calibration": "cutting, filling, toe erosion, an earthquake or more than 0.5 m of movement came since",
	"iron_or_lime_in_water":            "the water carries iron or lime, which clog drains",
	"perched_water":                    "water is held up above the level in the cover, which the model does not have",
	"outlet_on_moving_ground":          "an outlet of the drains would lie on ground that moves",
	"wells_or_buildings_nearby":        "wells or buildings stand near that a lower level could harm",
}

func declaredFields() []field {
	var all []field
	for _, k := range DeclaredKeys {
		all = append(all, field{name: k, says: declaredSays[k], shape: answerShape, def: "unknown"})
	}
	return all
}
