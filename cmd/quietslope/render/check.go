package render

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// Check lays out the result of check.
func Check(c *result.Check) *Page {
	p := &Page{}
	ns := newNotes(c.Warnings)
	var names []string
	for _, o := range c.Options {
		names = append(names, o.Name)
	}
	opening(p, &c.Head)
	inputs(p, c.Inputs)

	understood(p, c.Understood)
	checkOptions(p, c, ns)
	conversion(p, c.Conversion)
	p.heading("Bands of the deep level")
	bandTable(p, c.Bands, func(name string) string { return ns.refs(nil, "", name) })
	p.heading("Period and start")
	p.field("years", "%s", yearsText(&c.Record, c.YearStarts))
	recordFields(p, &c.Record)
	p.field("start", "baseline from %s m in the cover and %s m in the deep layer", centimetres(c.Start.CoverM), centimetres(c.Start.DeepM))
	audit(p, c)
	if len(ns.list) > 0 {
		p.heading("Notes")
		if refs := ns.wholeStudy(); refs != "" {
			p.para("%s; about the whole study: %s.", ns.count(), refs)
		}
		ns.write(p, names, nil)
	}
	cautions(p, c.Cautions)
	return p
}

// understood lists every key with the value in force.
func understood(p *Page, keys []result.Understood) {
	p.heading("What was understood")
	defaults := 0
	for _, k := range keys {
		if k.Default {
			defaults++
		}
	}
	p.para("%s; %d of them, marked *, were not given and stand at their default. A key that has one value in several entries of a list stands once; they are counted from 0, so that options[0] is option A.",
		plural(len(keys), "key"), defaults)
	var list listing
	for _, k := range merge(keys) {
		e := entry{key: clean(k.rest), value: clean(k.value), mark: k.byDefault}
		if k.list != "" {
			e.key = fmt.Sprintf("%s[%s].%s", k.list, numbers(k.at), e.key)
		}
		if k.list == "options" {
			e.options = byLetter(k.at)
		}
		list = append(list, e)
	}
	if len(list) > 0 {
		p.add(list)
	}
}

// checkOptions lists what every option was understood to be.
func checkOptions(p *Page, c *result.Check, ns *notes) {
	p.heading("Options and their rates")
	p.para("Stores of the baseline: %s.", ratesText(&c.Rates))
	known := origins{}
	for i, o := range c.Options {
		text := o.Name
		if refs := ns.refs(nil, o.Name, ""); refs != "" {
			text += " [" + noun(refs) + "]"
		}
		p.item(lettered, letter(i), text)
		if !sameRates(&o.Rates, &c.Rates) {
			p.item(below, "", "stores: "+ratesText(&o.Rates))
		}
		if len(o.Drains) == 0 {
			p.item(below, "", "no trench or bored drains")
		}
		for _, d := range o.Drains {
			law, what := "rate", "rate"
			if d.Law == quadratic {
				law, what = "quadratic law, its linear part", "outflow"
			}
			text := fmt.Sprintf("%s, acting above %s m over the base of %s: %s %s /d", words(d.Measure), centimetres(d.InvertM), layerName(d.Layer), law, typed(d.RatePerDay, 4))
			if d.HalfLifeDays != nil {
				text += fmt.Sprintf(" (what stands above halves in %s d)", significant(*d.HalfLifeDays, 2))
			}
			if d.CeilingMMPerDay != nil {
				text += fmt.Sprintf(", at most %s mm/d", typed(*d.CeilingMMPerDay, 6))
			}
			if d.From != "" {
				text += "; the " + what + " is " + known.instead(i, d.From)
			}
			p.item(below, "", text)
		}
	}
}

// origins are the ways in which the rates of drains came about, by their form with no figures, with the option that each is
// first said of.
type origins map[string]origin

type origin struct {
	option int
	parts  []string
}

var digits = regexp.MustCompile(`[0-9]+(\.[0-9]+)?(e[-+]?[0-9]+)?`)

// instead says how the rate of a drain of an option came about: in full, or, where a long formula was said before, what
// differs.
func (known origins) instead(option int, from string) string {
	const long = 3 // parts
	parts := strings.Split(from, ", ")
	form := digits.ReplaceAllString(from, "#")
	before, said := known[form]
	if !said {
		known[form] = origin{option, parts}
	}
	if !said || len(parts) < long {
		return from
	}
	var differs []string
	for i, part := range parts {
		if part != before.parts[i] {
			if _, of, found := strings.Cut(part, " with "); found {
				part = of
			}
			differs = append(differs, part)
		}
	}
	if differs == nil {
		return "as for option " + letter(before.option)
	}
	return "as for option " + letter(before.option) + ", but " + strings.Join(differs, ", ")
}

func layerName(layer string) string {
	if layer == "deep" {
		return "the deep layer"
	}
	return "the " + layer
}

// typed prints a number that a person gave, or could check by hand, with at most n significant digits.
func typed(x float64, n int) string { return strconv.FormatFloat(x, 'g', n, 64) }

func ratesText(r *result.Rates) string {
	text := fmt.Sprintf("cover seepage %s /d, percolation %s /d", typed(r.CoverSeepagePerDay, 6), typed(r.CoverPercolationPerDay, 6))
	if r.PercolationCeilingMMPerDay != nil {
		text += fmt.Sprintf(" (at most %s mm/d)", typed(*r.PercolationCeilingMMPerDay, 6))
	}
	text += fmt.Sprintf(", so that it halves in %s d", significant(math.Ln2/(r.CoverSeepagePerDay+r.CoverPercolationPerDay), 2))
	text += fmt.Sprintf("; deep seepage %s /d, halves in %s d", typed(r.DeepSeepagePerDay, 6), significant(math.Ln2/r.DeepSeepagePerDay, 2))
	return text + porosities(r)
}

// porosities names the drainable porosities where they were converted too; "" elsewhere.
func porosities(r *result.Rates) string {
	if r.CoverPorosity == nil || r.DeepPorosity == nil {
		return ""
	}
	return fmt.Sprintf(", drainable porosity %s %% in the cover and %s %% in the deep layer", typed(100**r.CoverPorosity, 6), typed(100**r.DeepPorosity, 6))
}

// bareRates names the rates of both stores and nothing else.
func bareRates(r *result.Rates) string {
	text := fmt.Sprintf("cover seepage %s /d, percolation %s /d, deep seepage %s /d",
		typed(r.CoverSeepagePerDay, 6), typed(r.CoverPercolationPerDay, 6), typed(r.DeepSeepagePerDay, 6))
	return text + porosities(r)
}

// conversion says what became of rates that were calibrated with a stepping scheme.
func conversion(p *Page, c *result.Conversion) {
	if c == nil {
		return
	}
	p.heading("Rates converted from the %s scheme with steps of %s d", c.Scheme, typed(c.StepDays, 6))
	t := table{
		first: "store and its outlets",
		head:  [][]string{{"rate given", "rate converted", "porosity given", "porosity converted"}, {"/d", "/d", "%", "%"}},
	}
	for _, s := range []struct {
		name string
		of   *result.StoreConversion
	}{{"cover, seepage + percolation", &c.Cover}, {"deep layer, seepage", &c.Deep}} {
		t.labels = append(t.labels, label{name: s.name})
		t.rows = append(t.rows, []string{typed(s.of.GivenPerDay, 6), typed(s.of.ExactPerDay, 6), typed(100*s.of.GivenPorosity, 6), typed(100*s.of.Porosity, 6)})
	}
	p.table(t)
	p.para("Seepage and percolation of the cover keep their proportion.")
	if d := c.LargestDifference; d != nil {
		p.para("Replayed by the scheme itself, the ground without measures has levels that differ from those of the converted rates by %s in the cover and by %s in the deep layer.",
			atMost(d.CoverM, d.CoverAt), atMost(d.DeepM, d.DeepAt))
	} else {
		p.para("The record has other steps than the scheme, so the two were not replayed side by side.")
	}
}

// atMost prints the largest of the differences of a level, and when it is reached.
func atMost(m float64, at string) string {
	if m < 0.001 {
		return "less than a millimetre"
	}
	return fmt.Sprintf("at most %s m (%s)", significant(m, 2), at)
}

func sameRates(a, b *result.Rates) bool {
	same := func(x, y *float64) bool { return (x == nil) == (y == nil) && (x == nil || *x == *y) }
	return a.CoverSeepagePerDay == b.CoverSeepagePerDay && a.CoverPercolationPerDay == b.CoverPercolationPerDay &&
		a.DeepSeepagePerDay == b.DeepSeepagePerDay && same(a.PercolationCeilingMMPerDay, b.PercolationCeilingMMPerDay) &&
		same(a.CoverPorosity, b.CoverPorosity) && same(a.DeepPorosity, b.DeepPorosity)
}

// audit lists what a person should look at in the record.
func audit(p *Page, c *result.Check) {
	a := &c.Audit
	p.heading("The weather record")
	step := "day"
	if c.Record.StepDays == nil {
		step = "month"
	}
	wet := grid{head: []string{step, "mm", ""}, width: 6}
	for _, d := range a.Wettest {
		wet.rows = append(wet.rows, []string{d.Date, strconv.FormatFloat(d.RainMM, 'f', 1, 64), ""})
	}
	if len(wet.rows) > 0 {
		p.para("Wettest %ss, mm of rain:", step)
		p.add(wet)
	}
	if len(a.Years) > 0 {
		p.para("Rain in calendar years, mm (share of the year that the record holds, where not all of it):")
		years := grid{head: []string{"year", "mm", "share"}, width: 5}
		for _, y := range a.Years {
			held := ""
			if y.ValidShare < 1 {
				held = percent(y.ValidShare)
			}
			years.rows = append(years.rows, []string{strconv.Itoa(y.Year), strconv.FormatFloat(y.RainMM, 'f', 0, 64), held})
		}
		p.add(years)
	}
	if len(a.Suspicious) == 0 {
		p.para("Nothing suspicious found.")
		return
	}
	p.para("Look at these:")
	for _, s := range a.Suspicious {
		at := s.From
		if s.To != s.From {
			at += " to " + s.To
		}
		p.item(plain, "", at+", "+words(s.Kind)+": "+s.Text)
	}
}
