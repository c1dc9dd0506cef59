package scenario

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"quietslope/cascade/drain"
	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
)

// HandQuery says which drains are worked out by hand formulas. Every field but the first is a quantity as typed, "" where it is
// not given; those of Spacings may each hold several, with commas between.
type HandQuery struct {
	Option            string // of the study, or the name of a list of options
	Spacings          []string
	Depth             string
	Thickness         string
	Conductivity      string
	ConductivityBelow string
	Porosity          string
	Radius            string
	Width, Wet        string // of a trench, instead of the radius
	EquivalentDepth   string // or the word computed
	WorkingHead       string
	Efficiency        string
	Recharge          string
	Consolidation     string
	Fall              string // a range of heads, such as 0.4 m .. 1.0 m
}

// computed is the word for an equivalent depth that is not given.
const computed = "computed"

// hand are the numbers of a HandQuery, in the units of a Study; NaN where they are not given.
type hand struct {
	spacings            []float64
	depth, thickness    float64
	conductivity, below float64
	porosity            float64
	radius, width, wet  float64
	equivalent          float64
	head, efficiency    float64
	recharge            float64 // mm/d
	consolidation       float64 // m2/y
	fallFrom, fallTo    float64
	computed            bool // the equivalent depth, in so many words
}

// handReader reads a HandQuery and collects what is wrong with it.
type handReader struct {
	fault.List
	wrong bool
}

func (r *handReader) add(flag, format string, args ...any) {
	r.List.Add(&fault.Error{Key: flag, Text: fmt.Sprintf(format, args...)})
	r.wrong = true
}

// number reads a quantity; NaN for one that is not given or is wrong.
func (r *handReader) number(flag, text string, kind quantity.Kind, l limits) float64 {
	if text == "" {
		return math.NaN()
	}
	v, err := quantity.Parse(text, kind)
	switch {
	case err != nil:
		r.add(flag, "%v", err)
	case !l.hold(v):
		r.add(flag, "%s is out of range; write a value %s", quoted(text), l.words(&shape{form: formQuantity, kind: kind}))
	default:
		return v
	}
	return math.NaN()
}

// read reads the numbers, each in the range that it has in a study.
func (q *HandQuery) read(r *handReader) *hand {
	length := func(flag, text string, l limits) float64 { return r.number(flag, text, quantity.Length, l) }
	thick := above(0, maxThickness)
	h := &hand{
		spacings:     r.spacings(q.Spacings),
		depth:        length("--depth", q.Depth, thick),
		thickness:    length("--thickness", q.Thickness, thick),
		conductivity: r.number("--conductivity", q.Conductivity, quantity.Conductivity, above(0, maxConductivity)),
		below:        r.number("--conductivity-below", q.ConductivityBelow, quantity.Conductivity, above(0, maxConductivity)),
		porosity:     r.number("--porosity", q.Porosity, quantity.Share, above(0, 1)),
		radius:       length("--radius", q.Radius, above(0, maxRadius)),
		width:        length("--width", q.Width, above(0, maxRadius)),
		wet:          length("--wet", q.Wet, atLeast(0, maxRadius)),
		head:         length("--working-head", q.WorkingHead, thick),
		efficiency:   r.number("--efficiency", q.Efficiency, quantity.Share, above(0, 1)),
		recharge:     r.number("--recharge", q.Recharge, quantity.Flux, above(0, maxFlux)),
		consolidation: r.number("--consolidation", q.Consolidation, quantity.Consolidation,
			above(0, maxConsolidation)),
	}
	if h.computed = q.EquivalentDepth == computed; h.computed {
		h.equivalent = math.NaN()
	} else {
		h.equivalent = length("--equivalent-depth", q.EquivalentDepth, atLeast(0, maxThickness))
	}
	h.fallFrom, h.fallTo = r.fall(q.Fall)
	switch {
	case q.Radius != "" && q.Width+q.Wet != "":
		r.add("--radius", "it is worked out from --width and --wet; keep either it or those two")
	case q.Width != "" && q.Wet == "":
		r.add("--wet", "beside --width, the depth of the water in the trench is needed too, such as 0.3 m, or 0 m for a wet bed alone")
	case q.Wet != "" && q.Width == "":
		r.add("--width", "beside --wet, the width of the trench's bed is needed too, such as 0.6 m")
	case q.Width != "":
		h.radius = drain.TrenchRadius(h.width, h.wet)
	}
	return h
}

// maxRadius is the largest radius of a drain, and width of a trench, m.
const maxRadius = 10

// spacings reads a list of spacings, in the order given.
func (r *handReader) spacings(texts []string) []float64 {
	var found []float64
	for _, text := range texts {
		parts := strings.Split(text, ",")
		for _, part := range parts {
			const flag = "--spacing"
			part = strings.TrimSpace(part)
			v, err := quantity.Parse(part, quantity.Length)
			switch {
			case part == "":
				r.add(flag, "a spacing is missing in %s; write it as \"8 m, 12 m\"", quoted(text))
			case err != nil && len(parts) > 1:
				r.add(flag, "%v. Commas part the spacings, each of which has its unit, and a decimal point is a full stop", err)
			case err != nil:
				r.add(flag, "%v", err)
			case slices.Contains(found, v):
				r.add(flag, "%s stands twice; keep one of them", quoted(part))
			case len(found) == mostValues:
				r.add(flag, "at most %d spacings are worked out at once", mostValues)
				return found
			default:
				if v = r.number(flag, part, quantity.Length, above(0, maxSpacing)); !math.IsNaN(v) {
					found = append(found, v)
				}
			}
		}
	}
	return found
}

// fall reads the two heads between which a water table falls.
func (r *handReader) fall(text string) (from, to float64) {
	if text == "" {
		return math.NaN(), math.NaN()
	}
	heads, err := quantity.ParseRange(text, quantity.Length)
	l := above(0, maxThickness)
	switch {
	case err != nil:
		r.add("--fall", "%v", err)
	case !l.hold(heads.Lo) || !l.hold(heads.Hi):
		r.add("--fall", "%s is out of range; write heads %s", quoted(text), l.words(&shape{form: formQuantity, kind: quantity.Length}))
	}
	return heads.Hi, heads.Lo
}

// variedSpacing is the key of a list of spacings.
const variedSpacing = "trench_drains.spacing"

// handOption is an option with trench drains by spacing.
type handOption struct {
	option *Option
	place  int // of its trenches among its measures
}

// trench is the option's trench drains.
func (o *handOption) trench() *TrenchDrains { return o.option.Measures[o.place].Trench }

// handOptions are the options that a name stands for: one, or all that a list makes of its spacings.
func (s *Study) handOptions(name string) ([]handOption, error) {
	fail := func(format string, args ...any) ([]handOption, error) {
		return nil, &fault.Error{Key: "--option", Text: fmt.Sprintf(format, args...)}
	}
	spaced := func(o *Option) int {
		return slices.IndexFunc(o.Measures, func(m Measure) bool { return m.Trench != nil && m.Trench.Spacing > 0 })
	}
	var all []handOption
	var having, known []string // names to give: a list of spacings goes by its own, and its options by theirs too
	for i := range s.Options {
		o := &s.Options[i]
		k := spaced(o)
		switch isNew := !slices.Contains(known, o.list); {
		case k < 0:
		case o.list == "" || o.varied != variedSpacing:
			having = append(having, o.Name)
		case isNew:
			having, known = append(having, o.list), append(known, o.list)
		}
		if k >= 0 {
			all = append(all, handOption{o, k})
		}
		known = append(known, o.Name)
	}
	switch i := indexOfName(optionNames(s), name); {
	case len(all) == 0:
		return fail("the study has no trench drains with a spacing, and nothing else is worked out by hand; leave study and --option out, and give --spacing, --depth, --conductivity and --porosity")
	case name == "":
		return fail("name the option whose trench drains are meant; those with a spacing are %s", quotedWords(having, "and"))
	case i >= 0 && spaced(&s.Options[i]) < 0:
		return fail("%s has no trench drains with a spacing; those that have are %s", quoted(s.Options[i].Name), quotedWords(having, "and"))
	case i >= 0:
		return []handOption{{&s.Options[i], spaced(&s.Options[i])}}, nil
	}
	var made []handOption
	for _, o := range all {
		if o.option.list == "" || !sameName(o.option.list, name) {
			continue
		}
		if o.option.varied != variedSpacing {
			return fail("the list of %s is one of %s; name one of its options, such as %s", quoted(o.option.list), o.option.varied, quoted(o.option.Name))
		}
		made = append(made, o)
	}
	if made == nil {
		return nil, unknownName("--option", name, known)
	}
	return made, nil
}
