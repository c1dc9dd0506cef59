package render

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// note is one numbered note: warnings with the same words about several options or bands share one.
type note struct {
	first  result.Warning
	places []result.Warning // one per option and band that it concerns
}

// notes numbers the warnings: those to weigh first, then the remarks, each in the order of the result.
type notes []note

func newNotes(ws []result.Warning) notes {
	var ns notes
	for _, severity := range []string{result.Warn, result.Note} {
		for _, w := range ws {
			if (w.Severity == result.Warn) != (severity == result.Warn) {
				continue
			}
			same := func(n note) bool {
				return n.first.Code == w.Code && n.first.Severity == w.Severity && n.first.Text == w.Text
			}
			if i := slices.IndexFunc(ns, same); i >= 0 {
				ns[i].places = append(ns[i].places, w)
			} else {
				ns = append(ns, note{w, []result.Warning{w}})
			}
		}
	}
	return ns
}

// count says how many notes there are of either kind.
func (ns notes) count() string {
	warn := 0
	for _, n := range ns {
		if n.first.Severity == result.Warn {
			warn++
		}
	}
	remarks := len(ns) - warn
	switch {
	case remarks == 0:
		return plural(warn, "warning")
	case warn == 0:
		return plural(remarks, "remark")
	}
	return plural(warn, "warning") + " and " + plural(remarks, "remark")
}

// headline says how many notes there are and where.
func (ns notes) headline() string {
	text := ns.count() + ", numbered under Notes and named beside the figures"
	if refs := ns.wholeStudy(); refs != "" {
		text += "; about the whole study: " + refs
	}
	return text
}

// has reports whether there is a warning of this code about an option on a band in a case.
func (ns notes) has(code string, c *result.Case, option, band string) bool {
	return ns.which(func(w result.Warning) bool {
		return w.Code == code && w.Option == option && w.Band == band && ofCase(w, c)
	}) != ""
}

// numbersOf are the numbers of the notes with a code in a case.
func (ns notes) numbersOf(code string, c *result.Case) string {
	return ns.which(func(w result.Warning) bool { return w.Code == code && ofCase(w, c) })
}

// refs are the numbers of the notes about exactly this option and band, either of which may be "", in this case, or in
// any where it is nil.
func (ns notes) refs(c *result.Case, option, band string) string {
	return ns.which(func(w result.Warning) bool { return w.Option == option && w.Band == band && ofCase(w, c) })
}

// onBand says which notes hold for which options of a case on a band, such as "Note 5 holds for B and C, note 6 for H.";
// "" for none.
func (ns notes) onBand(c *result.Case, band string) string {
	var texts []string
	for i, n := range ns {
		var of []int
		for k := range c.Options {
			if slices.ContainsFunc(n.places, func(w result.Warning) bool {
				return w.Option == c.Options[k].Name && w.Band == band && ofCase(w, c)
			}) {
				of = append(of, k)
			}
		}
		switch {
		case len(of) == 0:
		case texts == nil:
			texts = append(texts, fmt.Sprintf("Note %d holds for %s", i+1, byLetter(of)))
		default:
			texts = append(texts, fmt.Sprintf("note %d for %s", i+1, byLetter(of)))
		}
	}
	if texts == nil {
		return ""
	}
	return strings.Join(texts, ", ") + "."
}

// wholeStudy are the numbers of the notes that name nothing in particular.
func (ns notes) wholeStudy() string {
	return ns.which(func(w result.Warning) bool { return w.Option+w.Band+w.Climate+w.Condition == "" })
}

// ofCaseOnly are the numbers of the notes about a case that name nothing else.
func (ns notes) ofCaseOnly(c *result.Case) string {
	return ns.which(func(w result.Warning) bool {
		return w.Option+w.Band == "" && w.Climate+w.Condition != "" && ofCase(w, c)
	})
}

// which are the numbers, for print, of the notes about something that is asked for.
func (ns notes) which(asked func(result.Warning) bool) string {
	var found []int
	for i, n := range ns {
		if slices.ContainsFunc(n.places, asked) {
			found = append(found, i+1)
		}
	}
	return numbers(found)
}

// ofCase reports whether a warning is about this case; one that names no case is about every one.
func ofCase(w result.Warning, c *result.Case) bool {
	return c == nil || (w.Climate == "" || w.Climate == c.Climate) && (w.Condition == "" || w.Condition == c.Condition)
}

// write prints the notes about options of the given names and about cases, nil where there are none.
func (ns notes) write(p *Page, options []string, cases []result.Case) {
	for i, n := range ns {
		text := "remark"
		if n.first.Severity == result.Warn {
			text = "WARNING"
		}
		if of := n.concerns(options, cases); of != "" {
			text += ", " + of
		}
		p.item(numbered, strconv.Itoa(i+1), text+": "+n.first.Text)
	}
}

// concerns says what a note is about; "" where that is the whole study. Where a list would be too long to read, it names
// the bands alone, since the notes are named below the tables too.
func (n note) concerns(options []string, cases []result.Case) string {
	var places []place
	var texts, bands []string
	parts := 0
	for _, w := range n.places {
		p := place{w.Band, w.Option != ""}
		if slices.Contains(places, p) {
			continue
		}
		places = append(places, p)
		of := n.at(p, options, cases)
		text := strings.Join(of, ", ")
		if p.option && p.band != "" {
			bands, parts = append(bands, inQuotes(p.band)), parts+len(of)
			text = "on " + inQuotes(p.band) + " " + text
		}
		if text != "" {
			texts = append(texts, text)
		}
	}
	if parts > mostListed && parts > len(bands) {
		return "on " + andWords(bands) + ", as said below the tables"
	}
	return strings.Join(texts, "; ")
}

// place is what a note is about in the cases: a band, options, options on a band, or neither.
type place struct {
	band   string
	option bool
}

// at says which options a note is about in a place, and in which cases. Cases with the same options go together.
func (n note) at(p place, options []string, cases []result.Case) []string {
	in := make([][]int, max(1, len(cases))) // the options in each case; -1 for a band or a case as such
	for i := range in {
		for _, w := range n.places {
			if p == (place{w.Band, w.Option != ""}) && (len(cases) == 0 || ofCase(w, &cases[i])) {
				in[i] = append(in[i], slices.Index(options, w.Option))
			}
		}
		slices.Sort(in[i])
		in[i] = slices.Compact(in[i])
	}
	var texts []string
	for i, of := range in {
		same := make([]bool, len(in))
		for k := range in {
			same[k] = slices.Equal(of, in[k])
		}
		if len(of) == 0 || slices.Index(same, true) < i {
			continue
		}
		text := ""
		switch {
		case p.option && p.band != "":
			text = byLetter(of)
		case p.option && len(of) == 1:
			text = "option " + byLetter(of)
		case p.option:
			text = "options " + byLetter(of)
		case p.band != "":
			text = "band " + inQuotes(p.band)
		}
		where := casesText(same)
		if text != "" && where != "" {
			text += " in "
		}
		texts = append(texts, text+where)
	}
	return texts
}

// casesText names some of the cases; "" where it is all of them.
func casesText(in []bool) string {
	var ns []int
	for i, yes := range in {
		if yes {
			ns = append(ns, i+1)
		}
	}
	if len(ns) == 0 || len(ns) == len(in) {
		return ""
	}
	return casesNamed(ns)
}

// casesNamed names cases by their numbers.
func casesNamed(ns []int) string {
	if len(ns) == 1 {
		return caseName(ns[0] - 1)
	}
	return "cases " + numbers(ns)
}
