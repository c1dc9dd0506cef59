package render

import (
	"fmt"
	"io"
	"math"
	"strconv"

	"quietslope/scenario/result"
)

// Check writes the result of check as text.
func Check(w io.Writer, c *result.Check) error {
	var p page
	ns := newNotes(c.Warnings)
	letters := map[string]string{}
	for i, o := range c.Options {
		letters[o.Name] = letter(i)
	}
	title(&p, &c.Head)
	inputs(&p, c.Inputs)

	understood(&p, c.Understood)
	checkOptions(&p, c, ns)
	p.heading("Bands of the deep level")
	bandTable(&p, c.Bands, func(name string) string { return ns.refs(nil, "", name) })
	p.heading("Period and start")
	p.field("years", "%s", yearsText(&c.Record, c.YearStarts))
	recordFields(&p, &c.Record)
	p.field("start", "baseline from %s m in the cover and %s m in the deep layer", centimetres(c.Start.CoverM), centimetres(c.Start.DeepM))
	audit(&p, c)
	if len(ns) > 0 {
		p.heading("Notes")
		if refs := ns.refs(nil, "", ""); refs != "" {
			p.para("%s; about the whole study: %s.", ns.count(), refs)
		}
		ns.write(&p, func(name string) string { return letters[name] })
	}
	cautions(&p, c.Cautions)
	_, err := w.Write(p.Bytes())
	return err
}

// understood lists every key with the value in force.
func understood(p *page, keys []result.Understood) {
	p.heading("What was understood")
	defaults := 0
	width := 0
	for _, k := range keys {
		if k.Default {
			defaults++
		}
		width = max(width, min(len(k.Key), 44))
	}
	p.para("%s; %d of them, marked *, were not given and stand at their default.", plural(len(keys), "key"), defaults)
	for _, k := range keys {
		mark := " "
		if k.Default {
			mark = "*"
		}
		p.hang(mark+" "+clean(k.Key), width+4, k.Value)
	}
}

// checkOptions lists what every option was understood to be.
func checkOptions(p *page, c *result.Check, ns notes) {
	p.heading("Options and their rates")
	p.para("Stores of the baseline: %s.", ratesText(&c.Rates))
	for i, o := range c.Options {
		text := o.Name
		if refs := ns.refs(nil, o.Name, ""); refs != "" {
			text += "  [" + noun(refs) + "]"
		}
		p.hang("  "+letter(i), 5, text)
		if !sameRates(&o.Rates, &c.Rates) {
			p.hang("", 5, "stores: "+ratesText(&o.Rates))
		}
		if len(o.Drains) == 0 {
			p.hang("", 5, "no drains")
		}
		for _, d := range o.Drains {
			text := fmt.Sprintf("%s, acting above %s m over the base of %s: rate %s /d", words(d.Measure), centimetres(d.InvertM), layerName(d.Layer), typed(d.RatePerDay, 4))
			if d.HalfLifeDays != nil {
				text += fmt.Sprintf(" (what stands above halves in %s d)", significant(*d.HalfLifeDays, 2))
			}
			if d.CeilingMMPerDay != nil {
				text += fmt.Sprintf(", at most %s mm/d", typed(*d.CeilingMMPerDay, 6))
			}
			if d.From != "" {
				text += "; the rate is " + d.From
			}
			p.hang("", 5, text)
		}
	}
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
	return text + fmt.Sprintf("; deep seepage %s /d, halves in %s d", typed(r.DeepSeepagePerDay, 6), significant(math.Ln2/r.DeepSeepagePerDay, 2))
}

func sameRates(a, b *result.Rates) bool {
	same := func(x, y *float64) bool { return (x == nil) == (y == nil) && (x == nil || *x == *y) }
	return a.CoverSeepagePerDay == b.CoverSeepagePerDay && a.CoverPercolationPerDay == b.CoverPercolationPerDay &&
		a.DeepSeepagePerDay == b.DeepSeepagePerDay && same(a.PercolationCeilingMMPerDay, b.PercolationCeilingMMPerDay)
}

// audit lists what a person should look at in the record.
func audit(p *page, c *result.Check) {
	a := &c.Audit
	p.heading("The weather record")
	var wet []string
	for _, d := range a.Wettest {
		wet = append(wet, fmt.Sprintf("%s  %s", d.Date, padLeft(strconv.FormatFloat(d.RainMM, 'f', 1, 64), 6)))
	}
	if len(wet) > 0 {
		steps := "days"
		if c.Record.StepDays == nil {
			steps = "months"
		}
		p.para("Wettest %s, mm of rain:", steps)
		p.grid(wet)
	}
	if len(a.Years) > 0 {
		p.para("Rain in calendar years, mm (share of the year that the record holds, where not all of it):")
		var years []string
		for _, y := range a.Years {
			cell := fmt.Sprintf("%d  %s", y.Year, padLeft(strconv.FormatFloat(y.RainMM, 'f', 0, 64), 5))
			if y.ValidShare < 1 {
				cell += " (" + percent(y.ValidShare) + ")"
			}
			years = append(years, cell)
		}
		p.grid(years)
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
		p.hang("  -", 4, at+", "+words(s.Kind)+": "+s.Text)
	}
}

// grid writes cells in as many columns as fit, read downwards.
func (p *page) grid(cells []string) {
	widest := 0
	for _, c := range cells {
		widest = max(widest, len([]rune(c)))
	}
	const indent, gap = 2, 4
	perLine := max(1, (pageWidth-indent+gap)/(widest+gap))
	lines := (len(cells) + perLine - 1) / perLine
	for l := range lines {
		text := ""
		for i := l; i < len(cells); i += lines {
			text += pad(cells[i], widest+gap)
		}
		p.line("  %s", text)
	}
}

func padLeft(s string, width int) string {
	for len(s) < width {
		s = " " + s
	}
	return s
}
