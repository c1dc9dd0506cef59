package render

import (
	"fmt"
	"maps"
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
type notes struct {
	list     []note
	at       map[spot][]int // the notes, by their places in the list, about exactly this
	anywhere map[spot][]int // the same, whatever the case: a spot of theirs has none
}

// spot is what a warning is about, each part of it "" where it names none.
type spot struct{ climate, condition, option, band string }

func newNotes(ws []result.Warning) *notes {
	type words struct{ code, severity, text string }
	ns := &notes{at: map[spot][]int{}, anywhere: map[spot][]int{}}
	seen := map[words]int{}
	for _, severity := range []string{result.Warn, result.Note} {
		for _, w := range ws {
			if (w.Severity == result.Warn) != (severity == result.Warn) {
				continue
			}
			i, known := seen[words{w.Code, w.Severity, w.Text}]
			if !known {
				i = len(ns.list)
				seen[words{w.Code, w.Severity, w.Text}] = i
				ns.list = append(ns.list, note{first: w})
			}
			ns.list[i].places = append(ns.list[i].places, w)
			here, somewhere := spot{w.Climate, w.Condition, w.Option, w.Band}, spot{option: w.Option, band: w.Band}
			ns.at[here], ns.anywhere[somewhere] = append(ns.at[here], i), append(ns.anywhere[somewhere], i)
		}
	}
	return ns
}

// about are the notes about exactly this option and band, either of which may be "", in a case, or in any where it is
// nil. A note that names no case is about every one.
func (ns *notes) about(c *result.Case, option, band string) []int {
	var found []int
	if c == nil {
		found = slices.Clone(ns.anywhere[spot{option: option, band: band}])
	} else {
		found = slices.Concat(
			ns.at[spot{"", "", option, band}], ns.at[spot{c.Climate, "", option, band}],
			ns.at[spot{"", c.Condition, option, band}], ns.at[spot{c.Climate, c.Condition, option, band}])
	}
	slices.Sort(found)
	return slices.Compact(found)
}

// noteNumbers are the numbers of notes, for print.
func noteNumbers(found []int) string {
	var ns []int
	for _, i := range found {
		ns = append(ns, i+1)
	}
	return numbers(ns)
}

// count says how many notes there are of either kind.
func (ns *notes) count() string {
	warn := 0
	for _, n := range ns.list {
		if n.first.Severity == result.Warn {
			warn++
		}
	}
	remarks := len(ns.list) - warn
	switch {
	case remarks == 0:
		return plural(warn, "warning")
	case warn == 0:
		return plural(remarks, "remark")
	}
	return plural(warn, "warning") + " and " + plural(remarks, "remark")
}

// headline says how many notes there are and where.
func (ns *notes) headline() string {
	text := ns.count() + ", numbered under Notes and named beside the figures"
	if refs := ns.wholeStudy(); refs != "" {
		text += "; about the whole study: " + refs
	}
	return text
}

// has reports whether there is a warning of this code about an option on a band in a case.
func (ns *notes) has(code string, c *result.Case, option, band string) bool {
	return slices.ContainsFunc(ns.about(c, option, band), func(i int) bool { return ns.list[i].first.Code == code })
}

// numbersOf are the numbers of the notes with a code in a case.
func (ns *notes) numbersOf(code string, c *result.Case) string {
	var found []int
	for i, n := range ns.list {
		if n.first.Code == code && slices.ContainsFunc(n.places, func(w result.Warning) bool { return ofCase(w, c) }) {
			found = append(found, i)
		}
	}
	return noteNumbers(found)
}

// refs are the numbers of the notes about exactly this option and band, as about finds them.
func (ns *notes) refs(c *result.Case, option, band string) string {
	return noteNumbers(ns.about(c, option, band))
}

// onBand says which notes hold for which options of a case on a band, such as "Note 5 holds for B and C, note 6 for H.";
// "" for none.
func (ns *notes) onBand(c *result.Case, band string) string {
	of := map[int][]int{} // options, by note
	for k := range c.Options {
		for _, i := range ns.about(c, c.Options[k].Name, band) {
			of[i] = append(of[i], k)
		}
	}
	var texts []string
	for _, i := range slices.Sorted(maps.Keys(of)) {
		text := fmt.Sprintf("note %d for %s", i+1, byLetter(of[i]))
		if texts == nil {
			text = fmt.Sprintf("Note %d holds for %s", i+1, byLetter(of[i]))
		}
		texts = append(texts, text)
	}
	if texts == nil {
		return ""
	}
	return strings.Join(texts, ", ") + "."
}

// wholeStudy are the numbers of the notes that name nothing in particular.
func (ns *notes) wholeStudy() string { return noteNumbers(ns.about(&result.Case{}, "", "")) }

// ofCaseOnly are the numbers of the notes about a case that name nothing else.
func (ns *notes) ofCaseOnly(c *result.Case) string {
	found := slices.Concat(ns.at[spot{climate: c.Climate}], ns.at[spot{condition: c.Condition}], ns.at[spot{climate: c.Climate, condition: c.Condition}])
	slices.Sort(found)
	return noteNumbers(slices.Compact(found))
}

// ofCase reports whether a warning is about this case; one that names no case is about every one.
func ofCase(w result.Warning, c *result.Case) bool {
	return (w.Climate == "" || w.Climate == c.Climate) && (w.Condition == "" || w.Condition == c.Condition)
}

// write prints the notes about options of the given names and about cases, nil where there are none.
func (ns *notes) write(p *Page, options []string, cases []result.Case) {
	in := newScope(options, cases)
	for i, n := range ns.list {
		text := "remark"
		if n.first.Severity == result.Warn {
			text = "WARNING"
		}
		if of := n.concerns(in); of != "" {
			text += ", " + of
		}
		p.item(numbered, strconv.Itoa(i+1), text+": "+n.first.Text)
	}
}

// scope is the options and cases that notes are about.
type scope struct {
	options map[string]int      // their places, by name
	cases   map[[2]string][]int // their places, by climate and condition; "" is any
	n       int                 // how many cases there are, at least one
}

// newScope makes the scope of options of the given names and of cases, nil where there are none.
func newScope(options []string, cases []result.Case) *scope {
	in := &scope{map[string]int{}, map[[2]string][]int{}, max(1, len(cases))}
	for i, name := range options {
		in.options[name] = i
	}
	for i, c := range cases {
		for _, key := range [][2]string{{"", ""}, {c.Climate, ""}, {"", c.Condition}, {c.Climate, c.Condition}} {
			in.cases[key] = append(in.cases[key], i)
		}
	}
	return in
}

// casesOf are the places of the cases that a warning is about.
func (in *scope) casesOf(w result.Warning) []int {
	if len(in.cases) == 0 {
		return []int{0}
	}
	return in.cases[[2]string{w.Climate, w.Condition}]
}

// concerns says what a note is about; "" where that is the whole study. Where a list would be too long to read, it names
// the bands alone, since the notes are named below the tables too.
func (n note) concerns(in *scope) string {
	var places []place
	about := map[place][]result.Warning{}
	for _, w := range n.places {
		p := place{w.Band, w.Option != ""}
		if about[p] == nil {
			places = append(places, p)
		}
		about[p] = append(about[p], w)
	}
	var texts, bands []string
	parts := 0
	for _, p := range places {
		of := in.say(p, about[p])
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

// say says which options warnings of a place are about, and in which cases. Cases with the same options go together.
func (in *scope) say(p place, ws []result.Warning) []string {
	of := make([][]int, in.n) // the options in each case; -1 for a band or a case as such
	for _, w := range ws {
		option, known := in.options[w.Option]
		if !known {
			option = -1
		}
		for _, i := range in.casesOf(w) {
			of[i] = append(of[i], option)
		}
	}
	var sets []string          // of options, in the order of the first case of each
	same := map[string][]int{} // the cases of a set
	for i := range of {
		if len(of[i]) == 0 {
			continue
		}
		slices.Sort(of[i])
		of[i] = slices.Compact(of[i])
		set := fmt.Sprint(of[i])
		if same[set] == nil {
			sets = append(sets, set)
		}
		same[set] = append(same[set], i+1)
	}
	var texts []string
	for _, set := range sets {
		of, where := of[same[set][0]-1], ""
		if len(same[set]) < in.n {
			where = casesNamed(same[set])
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
		if text != "" && where != "" {
			text += " in "
		}
		texts = append(texts, text+where)
	}
	return texts
}

// casesNamed names cases by their numbers.
func casesNamed(ns []int) string {
	if len(ns) == 1 {
		return caseName(ns[0] - 1)
	}
	return "cases " + numbers(ns)
}
