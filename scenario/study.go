// Package scenario puts a study together: it reads and checks the study file, works out what each option does to the
// two stores, replays the weather for every option, and fills in the results.
package scenario

import (
	"quietslope/cascade/scheme"
	"quietslope/cascade/slope"
	"quietslope/scenario/weather"
)

// Study is a study file as understood: every default filled in, every number in the units of the package comment of
// cascade, except levels and lengths, which are in m.
type Study struct {
	File       string // as the user named it
	SHA256     string // of the file's bytes, in hex
	Title      string
	PreparedBy string
	CheckedBy  string

	Weather    WeatherSpec
	Ground     Ground
	Slope      *slope.Slope // nil for none
	Bands      []Band       // rising
	Count      Count
	Money      *Money      // nil for none
	Options    []Option    // in the order of the file, one for each value of a list; exactly one has Baseline set
	Conditions []Condition // besides as built
	Site       Site
	Declared   Declared

	Understood []Entry // every key with the value in force, in the order of the documentation

	src    *source          // the text, for pointing into it; nil for a study that was not read
	root   *node            // the same as a tree, with every option written out
	places map[string]Place // of every key that the study gives
}

// Entry is one key of the study with the value in force, as text with its unit.
type Entry struct {
	Key     string
	Value   string
	Default bool // the study did not give it
}

// WeatherSpec is the weather block.
type WeatherSpec struct {
	File     string // as written: a path from the study file's folder
	Path     string // the same, joined to the folder of the study file
	Time     string
	Format   string
	Rain     WeatherColumn
	PET      *WeatherColumn // nil for none
	StampEnd bool
	Missing  []string
	Gaps     weather.Gaps
	Place    Place // of weather.file
}

// WeatherColumn is a column of the weather file.
type WeatherColumn struct{ Name, Unit string }

// Place is where in the study file something stands, so that a check made later can still point at it.
type Place struct {
	Line, Col int
	Key       string
}

// Ground is the slope. That of a Study has the rates and porosities of the formula that it was calibrated with.
type Ground struct {
	Infiltration      float64 // share of the water at the surface
	InfiltrationLimit float64 // mm/h; +Inf for none
	Soil              *Soil   // nil for none

	CoverThickness    float64 // m
	CoverPorosity     float64 // drainable, share
	CoverSeepage      float64 // 1/d
	Percolation       float64 // 1/d
	PercolationCap    float64 // mm/d; +Inf for none
	CoverConductivity float64 // m/d; 0 when not given
	CoverFullAt       float64 // m above the contact; +Inf for none

	DeepThickness float64 // m
	DeepPorosity  float64 // drainable, share
	DeepSeepage   float64 // 1/d
	Lateral       float64 // mm/d
	DeepFullAt    float64 // m above the base of the deep layer; +Inf for none
	Consolidation float64 // coefficient of consolidation of the clay, m2/y; 0 when not given

	Scheme     scheme.Scheme // the formula
	SchemeStep float64       // its step, d

	Start        *StartLevels // nil for steady
	WarmUpYears  int          // -1 for auto
	CalibratedTo float64      // m; NaN when not known
}

// StartLevels are levels given for the start, m above the base of each layer.
type StartLevels struct{ Cover, Deep float64 }

// Soil is the soil-water block.
type Soil struct {
	Available  float64 // mm
	Readily    float64 // share
	CropFactor float64
}

// Band begins at a critical deep level and ends at the next band's.
type Band struct {
	Name    string
	GivenAs string  // level, elevation, below_ground or factor_of_safety
	Level   float64 // m above the base of the deep layer
	Until   float64 // arrest level, same datum, <= Level
	Safety  float64 // the factor of safety that it was given as; 0 for any other
	Place   Place

	LossPerEvent float64 // of an event that reaches this band and no higher one that has a loss per event
	LossPerDay   float64 // of a day on which this is the highest band passed that has a loss per day
}

// Count is the count block.
type Count struct {
	Apart      float64 // d
	YearStarts int     // 1 to 12; 0 for auto
	Confidence float64 // share
	Resamples  int
	Seed       uint64
	MeanBlock  float64 // y
	DecideOn   int     // index into Bands; -1 where nothing is ranked: several bands, one option
	DecideBy   string  // load, days, events or annual_probability
	Target     *Target // nil for none
	DesignLife int     // y
}

// Target is what an option must keep to on the band that the options are decided on.
type Target struct {
	Measure string  // load, days, events or annual_probability
	Most    float64 // per year; of annual_probability a share
	GivenAs string  // the key, which for a return period is not that of the measure
	Text    string  // as typed
	Place   Place
}

// Money says how costs and losses are added up.
type Money struct {
	Currency    string
	Horizon     int     // y
	Rate        float64 // discount rate, share per year
	PricesOf    int     // year
	Contingency float64 // share of every capital sum
}

// Option is one thing that could be done.
type Option struct {
	Name     string
	Baseline bool
	Minimum  bool
	Measures []Measure // in the order of the file; empty for nothing done
	Costs    []Cost    // one for each cost that it adds up; nil where none is given
	Place    Place

	list   string // the name that the study has for the list which made it, "" for none
	varied string // the key of that list, such as trench_drains.spacing
}

// Cost is one part of what an option costs, with a life of its own.
type Cost struct {
	Capital, PerMetre float64 // paid at the start, and again whenever the life is over
	PerYear, PerFlush float64
	Life              float64 // y; +Inf for never renewed
	Drains            string  // the measure whose metres and flushes are meant: trench_drains, bored_drains or "" for none
}

// Measure is one part of an option. Exactly one of the pointers is set.
type Measure struct {
	Key        string // as in the study: trench_drains, bored_drains, surface_water, vegetation, cut_off_drain, set
	Place      Place
	Trench     *TrenchDrains
	Bored      *BoredDrains
	Cut        *SurfaceWater
	Vegetation *Vegetation
	CutOff     *CutOffDrain
	Set        []Assignment
}

// TrenchDrains act on the cover.
type TrenchDrains struct {
	Depth        float64 // m below ground
	Rate         float64 // 1/d; 0 when worked out from the spacing
	Spacing      float64 // m; 0 when the rate is given
	Conductivity float64 // above the drains' level, m/d; 0 for that of the cover
	Below        float64 // the same below their level; 0 for as above
	Radius       float64 // m
	Equivalent   float64 // equivalent depth below drain level, m; NaN when it is computed
	Head         float64 // working head, m
	Quadratic    bool    // the law
	Efficiency   float64 // share
	Ceiling      float64 // largest flow, mm/d; +Inf for none
	Decline      *Decline
}

// Decline is how drains clog: half of their rate is left after each half-life, until a flush restores a share.
type Decline struct {
	HalfLife float64 // y
	Every    float64 // time between flushes, y; +Inf for never
	Restored float64 // share of the rate as new
	Renewed  float64 // y after which the drains are paid for again and are new, by the life of their cost; 0 for never
}

// BoredDrains act on the deep layer.
type BoredDrains struct {
	Rate       float64 // 1/d
	Level      float64 // m above the base of the deep layer
	Efficiency float64 // share
	Ceiling    float64 // largest flow, mm/d; +Inf for none
	Number     int     // 0 when not given
	Length     float64 // m; 0 when not given
	Decline    *Decline
}

// SurfaceWater keeps a share of the infiltration out.
type SurfaceWater struct{ KeptOut float64 }

// Vegetation uses more water, or less, and keeps a share of the rain off the ground.
type Vegetation struct {
	PETFactor    float64 // of the evapotranspiration
	Interception float64 // share of the rain
}

// CutOffDrain takes a share of the lateral inflow.
type CutOffDrain struct{ Intercepted float64 }

// Condition is how the works hold up: the shares that are left of what they do.
type Condition struct {
	Name         string
	Drains       float64 // of the rate of every drain, and of what a cut-off drain takes
	SurfaceWater float64 // of what surface water works keep out
	Vegetation   float64 // of the interception, and of the distance of the factor of evapotranspiration from 1
}

// asBuilt is the condition that is always there.
var asBuilt = Condition{Name: AsBuilt, Drains: 1, SurfaceWater: 1, Vegetation: 1}

// Assignment changes a calibrated number.
type Assignment struct {
	Key   string // such as cover.seepage
	Value float64
	Text  string // the value as typed
	Place Place
}

// Site is the site block.
type Site struct {
	PlanArea    float64 // m2; 0 when not given
	GroundLevel float64 // m on the site's datum; NaN when not given
}

// Declared holds the answers to what the tool cannot know, by key: yes, no or unknown.
type Declared map[string]string

// DeclaredKeys are the keys of Declared in the order of the documentation.
var DeclaredKeys = []string{
	"existing_slip_surface",
	"rapid_movement_possible",
	"ground_changed_since_calibration",
	"iron_or_lime_in_water",
	"perched_water",
	"outlet_on_moving_ground",
	"wells_or_buildings_nearby",
}
