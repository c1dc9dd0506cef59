// Package render turns results into what people and programs read: text for a terminal, markdown for a report, JSON, CSV.
//
// Comparison, Size and Check lay out what people read as a Page, once, and give no figure more digits than its range supports.
// JSON and CSV take any result, and round nothing. The package reads no files and knows no flags.
package render

import (
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// Comparison lays out the result of compare.
func Comparison(c *result.Comparison) *Page {
	v := &view{c: c, notes: newNotes(c.Warnings), letters: map[string]string{}}
	if len(c.Cases) > 0 {
		for i, o := range c.Cases[0].Options {
			v.letters[o.Name] = letter(i)
			if o.Baseline {
				v.baseline = letter(i)
			}
		}
	}
	v.reference = v.baseline
	if l := v.letters[c.Settings.Against]; l != "" {
		v.reference = l
	}
	opening(&v.Page, &c.Head)
	v.inShort()
	v.standings()
	v.counted()
	v.options()
	v.bands()
	for i := range c.Cases {
		v.oneCase(i)
	}
	v.warnings()
	v.settings()
	cautions(&v.Page, c.Cautions)
	return &v.Page
}

// view lays out one comparison.
type view struct {
	Page
	c         *result.Comparison
	notes     *notes
	letters   map[string]string // of the options, by name
	baseline  string            // its letter
	reference string            // the letter of the option that changes are measured against
}

// opening names the study and what made the result.
func opening(p *Page, h *result.Head) {
	p.title(h.Study)
	p.para("%s %s %s", h.Tool.Name, h.Tool.Version, h.Command)
}

// confidence is the level of the ranges, such as 90 %.
func (v *view) confidence() string { return share(v.c.Settings.Confidence) }

// share prints a share that a person chose.
func share(x float64) string { return strconv.FormatFloat(100*x, 'g', 6, 64) + " %" }

// noun names one or several notes.
func noun(refs string) string {
	if strings.ContainsAny(refs, ",–") {
		return "notes " + refs
	}
	return "note " + refs
}

// words turns a key into words.
func words(key string) string { return strings.ReplaceAll(key, "_", " ") }

// rows fills a table with one row per option, in the given order, and writes it.
func (v *view) rows(t table, options []*result.Option) {
	t.first = "option"
	for _, o := range options {
		t.labels = append(t.labels, label{v.letters[o.Name], o.Name})
	}
	v.table(t)
}

func pointers(c *result.Case) []*result.Option {
	all := make([]*result.Option, len(c.Options))
	for i := range c.Options {
		all[i] = &c.Options[i]
	}
	return all
}
