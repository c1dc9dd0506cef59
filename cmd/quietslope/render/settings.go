package render

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario"
	"quietslope/scenario/result"
)

func (v *view) warnings() {
	if len(v.notes.list) == 0 {
		return
	}
	v.heading("Notes")
	var names []string
	if len(v.c.Cases) > 0 {
		for _, o := range v.c.Cases[0].Options {
			names = append(names, o.Name)
		}
	}
	v.notes.write(&v.Page, names, v.c.Cases)
}

func (v *view) settings() {
	s := &v.c.Settings
	v.heading("Settings and inputs")
	v.field("settings", "year starts in %s, events %s d apart, confidence %s, %d resamples of %s-year blocks, seed %d",
		s.YearStarts, days(s.ApartDays), v.confidence(), s.Resamples, rate(s.BlockYears), s.Seed)
	if text := v.targetText(); text != "" {
		v.field("target", "%s", text)
	}
	if m := s.Money; m != nil {
		v.field("money", "%s, prices of %d, over %s at a discount rate of %s, contingency %s", m.Currency, m.PricesOf, plural(m.HorizonYears, "year"), share(m.DiscountRate), share(m.Contingency))
	}
	if text := v.drainsText(); text != "" {
		v.field("drains", "%s", text)
	}
	if g := v.givenRates(); g != nil {
		from := "a stepping scheme"
		if c := v.c.Conversion; c != nil {
			from = fmt.Sprintf("the %s scheme with steps of %s d", c.Scheme, typed(c.StepDays, 6))
		}
		v.field("rates", "those of %s were converted: %s. Given were %s", from, bareRates(g), bareRates(g.Given))
	}
	inputs(&v.Page, v.c.Inputs)
	if len(v.c.Defaults) > 0 {
		v.field("defaults", "%s", strings.Join(v.merged(v.c.Defaults), "; "))
	}
	if len(v.c.Declared) > 0 {
		var parts []string
		for _, key := range scenario.DeclaredKeys {
			if answer := v.c.Declared[key]; answer != "" {
				parts = append(parts, words(key)+" "+answer)
			}
		}
		v.field("declared", "%s", strings.Join(parts, "; "))
	}
}

// drainsText says by which law the drains of options work and over how many years they age, where that is said nowhere else.
func (v *view) drainsText() string {
	if len(v.c.Cases) == 0 {
		return ""
	}
	c := &v.c.Cases[0]
	var parts []string
	if options := byQuadraticLaw(c); options != nil {
		parts = append(parts, "quadratic law for the trenches of "+someByLetter(options)+", linear for all else")
	}
	if options := placesOf(c, func(o *result.Option) bool { return o.DrainsAs != "" && o.DrainsAs != "as_new" }); options != nil {
		of := "the design life"
		if v.c.Settings.Money != nil {
			of = "the horizon of the costs"
		}
		parts = append(parts, fmt.Sprintf("those of %s age, without a flush over %s, %s", someByLetter(options), of, plural(v.agingYears(), "year")))
	}
	return strings.Join(parts, "; ")
}

// quadratic is the law of drains whose flow grows with the square of the head.
const quadratic = "quadratic"

// byQuadraticLaw are the options with such drains.
func byQuadraticLaw(c *result.Case) []int {
	return placesOf(c, func(o *result.Option) bool {
		return slices.ContainsFunc(o.Drains, func(d result.Drain) bool { return d.Law == quadratic })
	})
}

// givenRates are the rates of the baseline where they were converted from a stepping scheme, nil elsewhere.
func (v *view) givenRates() *result.Rates {
	if len(v.c.Cases) == 0 || len(v.c.Cases[0].Options) == 0 {
		return nil
	}
	if r := &baselineOf(&v.c.Cases[0]).Rates; r.Given != nil {
		return r
	}
	return nil
}

// alike are keys of the study that differ only in the entry of a list, and have one value.
type alike struct {
	list, rest, value string // list is "" for a key outside a list
	byDefault         bool
	at                []int // entries of the list, from 0
}

var indexed = regexp.MustCompile(`^([a-z_]+)\[(\d+)\]\.(.*)$`)

// merge puts keys together, in the order of the first of each.
func merge(keys []result.Understood) []alike {
	type what struct {
		list, rest, value string
		byDefault         bool
	}
	var all []alike
	known := map[what]int{} // places in all of keys in lists
	for _, k := range keys {
		e := alike{rest: k.Key, value: k.Value, byDefault: k.Default}
		if m := indexed.FindStringSubmatch(k.Key); m != nil {
			if n, err := strconv.Atoi(m[2]); err == nil {
				e.list, e.rest, e.at = m[1], m[3], []int{n}
			}
		}
		of := what{e.list, e.rest, e.value, e.byDefault}
		if i, again := known[of]; again {
			all[i].at = append(all[i].at, e.at...)
			continue
		}
		if e.list != "" {
			known[of] = len(all)
		}
		all = append(all, e)
	}
	return all
}

// merged lists keys with their values. Those that differ only in the option or band share an entry, as in
// B–D, H: trench_drains.law linear. Which option is no baseline is said with the options.
func (v *view) merged(keys []result.KeyValue) []string {
	var left []result.Understood
	for _, k := range keys {
		if !strings.HasPrefix(k.Key, "declared.") && !strings.HasSuffix(k.Key, "].baseline") { // said elsewhere
			left = append(left, result.Understood{Key: k.Key, Value: k.Value})
		}
	}
	var texts []string
	for _, e := range merge(left) {
		text := e.rest + " " + e.value
		var at []string
		for _, n := range e.at {
			at = append(at, v.nameOf(e.list, n))
		}
		switch e.list {
		case "":
		case "options":
			text = byLetter(e.at) + ": " + text
		default:
			text = strings.Join(at, ", ") + ": " + text
		}
		texts = append(texts, text)
	}
	return texts
}

// nameOf is how the text calls item n of a list of the study.
func (v *view) nameOf(list string, n int) string {
	switch {
	case list == "bands" && n < len(v.c.Bands):
		return v.c.Bands[n].Name
	case list == "climates":
		return v.further(n, list, func(c *result.Case) string { return c.Climate })
	case list == "conditions":
		return v.further(n, list, func(c *result.Case) string { return c.Condition })
	}
	return fmt.Sprintf("%s[%d]", list, n)
}

// further is the n-th name of a list of the study, found in the cases, the first of which has a name of ours.
func (v *view) further(n int, list string, name func(*result.Case) string) string {
	var names []string
	for i := range v.c.Cases {
		names = with(names, name(&v.c.Cases[i]))
	}
	if n+1 < len(names) {
		return names[n+1]
	}
	return fmt.Sprintf("%s[%d]", list, n)
}

// shortHash is how many hex digits of a hash are enough to tell two files apart by eye.
const shortHash = 12

func inputs(p *Page, in []result.Input) {
	for _, f := range in {
		p.field(f.Role, "%s (SHA-256 %s…)", f.File, f.SHA256[:min(shortHash, len(f.SHA256))])
	}
}

func cautions(p *Page, texts []string) {
	if len(texts) == 0 {
		return
	}
	p.heading("Before anybody relies on this")
	for _, c := range texts {
		p.item(plain, "", c)
	}
}
