package scenario

import "quietslope/scenario/quantity"

// This file is the table of the study's keys: what each is called, how its value is written, what range it may have,
// and what stands in for it when it is left out. The decoder reads by it, and errors and the list of what was
// understood come from it.

// form is how a value is written.
type form int

const (
	formText     form = iota // one line of text, which may be blank
	formFilled               // one line of text, not blank
	formName                 // a name by the rules of checkName
	formWord                 // one of the words of the shape
	formTexts                // a list of texts, as typed
	formNumber               // a bare number
	formWhole                // a whole number
	formQuantity             // a number with a unit
	formYears                // a whole number of years, with unit
	formMonth                // the English name of a month
	formBlock                // a block of keys
	formList                 // a list of blocks
)

// shape says what a value must be.
type shape struct {
	form   form
	kind   quantity.Kind // of a quantity
	limits limits        // of a number or quantity, in the base unit of its kind
	words  []string      // words that may stand instead, such as none or auto
	later  []string      // words that are known but not supported yet
	fields []field       // of a block, or of each block of a list
	most   int           // largest number of items of a list of texts
}

// limits is the range of a number.
type limits struct {
	lo, hi         float64
	loOpen, hiOpen bool // the limit itself is out of range
}

// field is one key of a block.
type field struct {
	name  string
	shape shape
	need  string // what must be given; "" for a key that may be left out
	def   string // what stands in for a key that is left out, as it would be typed
	quiet bool   // says nothing when it is left out, and is not listed then
	later bool   // refused: not supported yet
}

// Limits beyond which a number is taken for a slip. Where no reason stands beside it, a limit is a judgement, and far
// outside of what a slope has.
const (
	maxRate         = 1e6   // 1/d; what the engine is tested for
	maxThickness    = 500   // m
	maxLevel        = 1000  // m
	maxFlux         = 1e5   // mm/d
	maxIntensity    = 1e4   // mm/h
	maxConductivity = 1e5   // m/d; clean gravel has some 1e4
	maxWater        = 5000  // mm
	maxSpacing      = 10000 // m
	maxArea         = 1e9   // m2
	maxDrains       = 100000
	maxResamples    = 1000000
	// A soil that meets the full demand down to its last tenth of a millimetre takes ever shorter parts of a day to
	// work out. Allen et al. (1998, FAO-56, table 22) have 0.2 to 0.7 (range from memory).
	maxReadily = 0.95
)

func above(lo, hi float64) limits   { return limits{lo: lo, hi: hi, loOpen: true} }
func atLeast(lo, hi float64) limits { return limits{lo: lo, hi: hi} }

func amount(kind quantity.Kind, l limits, words ...string) shape {
	return shape{form: formQuantity, kind: kind, limits: l, words: words}
}

func block(fields ...field) shape { return shape{form: formBlock, fields: fields} }

func oneOf(words ...string) shape { return shape{form: formWord, words: words} }

func notYet(name string) field { return field{name: name, later: true} }

var (
	filledShape    = shape{form: formFilled}
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
	answerShape    = shape{form: formWord, words: []string{"yes", "no", "unknown", "true", "false"}}
)

// The numbers of the ground, which an option may change with set. Thicknesses are not among them: bands and drains
// hang on them.
var (
	surfaceFields = []field{
		{name: "infiltration", shape: shareShape, def: "100 %"},
		{name: "infiltration_limit", shape: amount(quantity.Intensity, above(0, maxIntensity), "none"), def: "none"},
	}
	soilFields = []field{
		{name: "available_water", shape: amount(quantity.WaterDepth, above(0, maxWater)), need: "the water that plants can draw from the soil, such as 120 mm"},
		{name: "readily_available", shape: amount(quantity.Share, atLeast(0, maxReadily)), def: "50 %"},
		{name: "crop_factor", shape: shape{form: formNumber, limits: atLeast(0, 5)}, def: "1"},
	}
	coverFields = []field{
		{name: "thickness", shape: amount(quantity.Length, above(0, maxThickness)), need: "the thickness of the cover, such as 4.0 m"},
		{name: "drainable_porosity", shape: someShareShape, need: "the share of the cover that fills and drains, such as 6 %"},
		{name: "seepage", shape: rateShape, need: "the rate at which water leaves along the contact, such as 0.01 /d"},
		{name: "percolation", shape: rateShape, need: "the rate at which water sinks into the deep layer, such as 0.005 /d, or 0 /d"},
		{name: "percolation_ceiling", shape: ceilingShape, def: "none"},
		{name: "conductivity", shape: amount(quantity.Conductivity, above(0, maxConductivity)), quiet: true},
		{name: "full_at", shape: fullAtShape}, // stands in: the thickness
	}
	deepFields = []field{
		{name: "thickness", shape: amount(quantity.Length, above(0, maxThickness)), need: "the thickness of the deep layer, such as 9.0 m"},
		{name: "drainable_porosity", shape: someShareShape, need: "the share of the deep layer that its fissures take up, such as 1.4 %"},
		{name: "seepage", shape: rateShape, need: "the rate at which water leaves the deep layer, such as 0.007 /d"},
		{name: "lateral_inflow", shape: amount(quantity.Flux, atLeast(0, maxFlux)), def: "0 mm/d"},
		notYet("consolidation"),
		{name: "full_at", shape: fullAtShape}, // stands in: the thickness
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
				all = append(all, field{name: part.name + "." + f.name, shape: f.shape, quiet: true})
			}
		}
	}
	return all
}()

// studyShape is the whole file. The order is that of the documentation.
var studyShape = block(
	field{name: "study", shape: filledShape, need: "a title on one line, such as: Bank above the mill, drainage options"},
	field{name: "prepared_by", shape: textShape, def: ""},
	field{name: "checked_by", shape: textShape, def: ""},
	field{name: "weather", shape: weatherShape, need: "the record of rain: a block with file and columns"},
	field{name: "ground", shape: groundShape, need: "the two layers: a block with cover and deep"},
	notYet("slope"),
	field{name: "bands", shape: shape{form: formList, fields: bandFields}, need: "a list of critical deep levels, such as: - {name: movement onset, level: 4.2 m}"},
	field{name: "count", shape: countShape},
	notYet("money"),
	notYet("climates"),
	field{name: "options", shape: shape{form: formList, fields: optionFields}, need: "a list of what could be done, the first being the ground as it is: - name: as it stands"},
	notYet("conditions"),
	field{name: "site", shape: block(
		field{name: "plan_area", shape: amount(quantity.Area, above(0, maxArea)), def: "none"},
		field{name: "ground_level", shape: datumShape, def: "none"},
	)},
	field{name: "declared", shape: block(declaredFields()...)},
	notYet("readings"),
	notYet("fit"),
)

var weatherShape = block(
	field{name: "file", shape: filledShape, need: "the path of the record from the folder of the study, such as weather.csv"},
	field{name: "columns", shape: block(
		field{name: "time", shape: block(
			field{name: "name", shape: filledShape, need: "the header of the column of times"},
			field{name: "format", shape: filledShape, need: "how times are written, such as YYYY-MM-DD or iso"},
		), need: "the column of times: {name: HEADER, format: YYYY-MM-DD}"},
		field{name: "rain", shape: columnShape, need: "the column of rain: {name: HEADER, unit: mm}"},
		field{name: "pet", shape: columnShape, def: "none"},
		notYet("temperature"),
	), need: "the columns to read: a block with time and rain"},
	notYet("pet_from"),
	notYet("snow"),
	field{name: "stamp", shape: oneOf("start", "end"), def: "start"},
	field{name: "missing", shape: shape{form: formTexts, most: 100}, def: `"", NA`},
	field{name: "gaps", shape: shape{form: formWord, words: []string{"refuse"}, later: []string{"zero", "month mean"}}, def: "refuse"},
)

var columnShape = block(
	field{name: "name", shape: filledShape, need: "the header of the column"},
	field{name: "unit", shape: filledShape, need: "the unit of the column, such as mm for a depth per step or mm/h for a rate"},
)

var groundShape = block(
	field{name: "surface", shape: block(surfaceFields...)},
	field{name: "soil", shape: block(soilFields...), def: "none"},
	field{name: "cover", shape: block(coverFields...), need: "the upper layer: a block with thickness, drainable_porosity, seepage and percolation"},
	field{name: "deep", shape: block(deepFields...), need: "the lower layer: a block with thickness, drainable_porosity and seepage"},
	notYet("rates_from"),
	field{name: "start", shape: shape{form: formBlock, words: []string{"steady"}, fields: []field{
		{name: "cover", shape: levelShape, need: "the level in the cover at the start, such as 1.2 m"},
		{name: "deep", shape: levelShape, need: "the level in the deep layer at the start, such as 3.4 m"},
	}}, def: "steady"},
	field{name: "warm_up", shape: shape{form: formYears, kind: quantity.Duration, limits: atLeast(0, maxWarmUp), words: []string{"auto"}}}, // stands in: auto, or 0 y beside levels
	field{name: "calibrated_to", shape: amount(quantity.Length, above(0, maxLevel), "unknown"), def: "unknown"},
	notYet("ensemble"),
)

var bandFields = []field{
	{name: "name", shape: nameShape, need: "a name, such as movement onset"},
	{name: "level", shape: amount(quantity.Length, atLeast(-maxLevel, maxLevel)), quiet: true},
	{name: "elevation", shape: datumShape, quiet: true},
	{name: "below_ground", shape: amount(quantity.Length, atLeast(-maxLevel, maxLevel)), quiet: true},
	notYet("factor_of_safety"),
	{name: "until", shape: datumShape}, // stands in: the onset
	notYet("loss_per_event"),
	notYet("loss_per_day"),
}

var countShape = block(
	field{name: "apart", shape: amount(quantity.Duration, atLeast(0, 3660)), def: "10 d"},
	field{name: "year_starts", shape: shape{form: formMonth, words: []string{"auto"}}, def: "auto"},
	field{name: "confidence", shape: amount(quantity.Share, limits{lo: 0.5, hi: 0.999, loOpen: true, hiOpen: true}), def: "90 %"},
	field{name: "resamples", shape: shape{form: formWhole, limits: atLeast(100, maxResamples)}, def: "2000"},
	field{name: "seed", shape: shape{form: formWhole, limits: atLeast(0, 1<<53)}, def: "1"}, // every reader of JSON keeps these apart
	field{name: "decide_on", shape: filledShape},                                            // stands in: the only band
	field{name: "decide_by", shape: oneOf("load", "days", "events", "annual_probability"), def: "load"},
	field{name: "mean_block", shape: amount(quantity.Duration, atLeast(365.25, 365250)), def: "2 y"},
	notYet("target"),
	notYet("design_life"),
)

var optionFields = []field{
	{name: "name", shape: nameShape, need: "a name, such as trenches"},
	{name: "baseline", shape: oneOf("true", "false")}, // stands in: the first is
	notYet("minimum"),
	{name: "trench_drains", shape: trenchShape, quiet: true},
	{name: "bored_drains", shape: boredShape, quiet: true},
	{name: "surface_water", shape: block(
		field{name: "kept_out", shape: shareShape, need: "the share of the infiltration that no longer enters, such as 10 %"},
		notYet("like"),
	), quiet: true},
	notYet("vegetation"),
	notYet("cut_off_drain"),
	{name: "set", shape: block(settable...), quiet: true},
	notYet("cost"),
}

var trenchShape = block(
	field{name: "depth", shape: amount(quantity.Length, above(0, maxThickness)), need: "the depth of the trenches below ground, such as 3.0 m"},
	field{name: "rate", shape: drainRateShape, quiet: true},
	field{name: "spacing", shape: amount(quantity.Length, above(0, maxSpacing)), quiet: true},
	field{name: "conductivity", shape: amount(quantity.Conductivity, above(0, maxConductivity)), quiet: true},
	notYet("conductivity_below"),
	notYet("drain_radius"),
	field{name: "equivalent_depth", shape: amount(quantity.Length, atLeast(0, maxThickness)), quiet: true},
	field{name: "working_head", shape: amount(quantity.Length, above(0, maxThickness)), quiet: true},
	field{name: "law", shape: shape{form: formWord, words: []string{"linear"}, later: []string{"quadratic"}}, def: "linear"},
	field{name: "efficiency", shape: someShareShape, def: "100 %"},
	field{name: "ceiling", shape: ceilingShape, def: "none"},
	notYet("decline"),
	notYet("like"),
)

var boredShape = block(
	field{name: "rate", shape: drainRateShape, need: "the rate at which the drains empty the deep layer above their level, such as 0.005 /d"},
	field{name: "level", shape: levelShape, need: "the level of the drains above the base of the deep layer, such as 3.0 m"},
	field{name: "efficiency", shape: someShareShape, def: "100 %"},
	field{name: "ceiling", shape: ceilingShape, def: "none"},
	field{name: "number", shape: shape{form: formWhole, limits: atLeast(1, maxDrains)}, def: "none"},
	field{name: "length", shape: amount(quantity.Length, above(0, maxLevel)), def: "none"},
	notYet("decline"),
	notYet("like"),
)

func declaredFields() []field {
	var all []field
	for _, k := range DeclaredKeys {
		all = append(all, field{name: k, shape: answerShape, def: "unknown"})
	}
	return all
}
