package render

import (
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
	"quietslope/stats"
)

// Numbers of further cases that are told one by one, and of options whose order is short enough for a sentence.
const (
	mostCases = 3
	mostOrder = 6
)

// furtherCases are cases that are held against the first by what ranks the options.
type furtherCases struct {
	*view
	band     int
	by       *measure
	from, to int // the cases from one to before the other
	first    *result.Case
	was      []float64 // the options' figures in the first case
}

// otherCases says what the further cases change on a band.
func (v *view) otherCases(band int, by *measure) {
	n := len(v.c.Cases)
	first := &v.c.Cases[0]
	f := furtherCases{v, band, by, 1, n, first, figuresBy(first, band, by)}
	if n-1 > mostCases {
		f.tell()
		return
	}
	for i := 1; i < n; i++ {
		f.from, f.to = i, i+1
		f.tell()
	}
}

// single reports whether there is one case.
func (f *furtherCases) single() bool { return f.to == f.from+1 }

// tell says what the cases change: first what they cost the options that lead in the first, then for whom the words about
// the first hold no more.
func (f *furtherCases) tell() {
	cases := f.c.Cases[f.from:f.to]
	lead, some := fmt.Sprintf("In the %d further cases", len(cases)), " in some of them"
	if f.single() {
		lead, some = fmt.Sprintf("In %s, %s", caseName(f.from), differs(f.first, &cases[0])), ""
	}
	name := inQuotes(f.c.Bands[f.band].Name)
	if !slices.ContainsFunc(cases, func(c result.Case) bool { return !f.nothingPassed(&c, f.band) }) {
		f.para("%s: no option's level rises above %s.", lead, name)
		return
	}
	var parts []string
	for _, l := range f.leaders() {
		if text := f.instead(l); text != "" {
			parts = append(parts, text)
		}
	}
	now, no, apart, idle, worse := f.differences()
	for _, part := range []struct {
		options []int
		text    string
	}{
		{now, fmt.Sprintf("with %s the level rises above %s too", someByLetter(now), name)},
		{no, fmt.Sprintf("with %s the record holds no event any more", someByLetter(no))},
		{apart, fmt.Sprintf("%s not told apart from %s", someAre(apart), f.reference)},
		{idle, fmt.Sprintf("%s the same as %s in every year", someAre(idle), f.reference)},
		{worse, fmt.Sprintf("%s worse than %s", someAre(worse), f.reference)},
	} {
		if len(part.options) > 0 {
			parts = append(parts, part.text+some)
		}
	}
	parts = append(parts, f.order()...)
	if len(parts) == 0 {
		parts = []string{"the same"}
	}
	f.para("%s: %s.", lead, strings.Join(parts, "; "))
}

// leader is who leads in the first case, and as what.
type leader struct {
	options []int
	what    string
}

const theBaseline = "the baseline"

// leaders are the baseline, the options with the least figure in the first case where it is none of them, and the next one
// where one stands alone in either place.
func (f *furtherCases) leaders() []leader {
	base := slices.IndexFunc(f.first.Options, func(o result.Option) bool { return o.Baseline })
	all := []leader{{[]int{base}, theBaseline}}
	lead := least(f.was)
	if slices.Contains(lead, base) {
		return all
	}
	all = append(all, leader{lead, "the least in " + caseName(0)})
	if by := ranking(f.was); len(lead) == 1 && by[1] != base && stats.Less(f.was[by[1]], f.was[by[2]]) {
		all = append(all, leader{by[1:2], "the next"})
	}
	return all
}

// instead says what options have instead of what they have in the first case, such as "J, the least in case 1, has 0.40 m·d
// per year instead of 0.01"; "" for a baseline that has the same.
func (f *furtherCases) instead(l leader) string {
	before := f.figure(f.first, l.options[0])
	var texts []string              // of all options in all cases
	low, high, most := 0, 0, f.from // most is the case of the highest
	var xs []float64
	for i := f.from; i < f.to; i++ {
		figures := figuresBy(&f.c.Cases[i], f.band, f.by)
		for _, k := range l.options {
			n := len(xs)
			texts, xs = append(texts, f.figure(&f.c.Cases[i], k)), append(xs, figures[k])
			if xs[n] < xs[low] {
				low = n
			}
			if xs[n] > xs[high] {
				high, most = n, i
			}
		}
	}
	has, stays := "has", "stays"
	if len(l.options) > 1 {
		has, stays = "have", "stay"
	}
	who := someByLetter(l.options) + ", " + l.what + ", "
	if texts[low] == texts[high] {
		switch {
		case texts[low] != before:
			return fmt.Sprintf("%s%s %s instead of %s", who, has, f.by.inWords(texts[low]), before)
		case l.what == theBaseline:
			return ""
		}
		return who + stays + " at " + f.by.inWords(before)
	}
	spread := "between " + texts[low] + " and " + f.by.inWords(texts[high])
	if f.single() && len(texts) == 2 {
		spread = texts[0] + " and " + f.by.inWords(texts[1])
	}
	text := fmt.Sprintf("%s%s %s instead of %s", who, has, spread, before)
	if !f.single() {
		text += fmt.Sprintf(", the most in %s (%s)", caseName(most), differs(f.first, &f.c.Cases[most]))
	}
	return text
}

// figure is the figure that ranks an option, without its range; where it cannot be told, its range.
func (f *furtherCases) figure(c *result.Case, option int) string {
	value, limits := f.deciderOf(c, &c.Options[option], f.band, f.by)
	switch {
	case value != "–":
		return strings.Replace(value, "<", "less than ", 1)
	case limits == "":
		return "an unknown number of"
	}
	return strings.Trim(limits, "()")
}

// differences are the options that rise above the band in some case but not in the first, that do so in the first but in
// none of the cases, that are not told apart from the reference, do the same as it or are worse than it in some case but
// not in the first.
func (f *furtherCases) differences() (now, no, apart, idle, worse []int) {
	for k := range f.first.Options {
		before := &f.first.Options[k].Bands[f.band]
		var rises, unclear, same, more bool
		for i := f.from; i < f.to; i++ {
			after := &f.c.Cases[i].Options[k].Bands[f.band]
			rises = rises || !notPassed(after)
			if after.Change == nil || before.Change == nil {
				continue
			}
			switch against(f.by.change(after.Change), after.Change.ToldApart) {
			case against(f.by.change(before.Change), before.Change.ToldApart):
			case toldNot:
				unclear = true
			case toldSame:
				same = true
			case toldMore:
				more = true
			}
		}
		switch {
		case rises && notPassed(before):
			now = append(now, k)
		case !rises && !notPassed(before):
			no = append(no, k)
		}
		if same {
			idle = append(idle, k)
		}
		if unclear {
			apart = append(apart, k)
		}
		if more {
			worse = append(worse, k)
		}
	}
	return now, no, apart, idle, worse
}

// order says what becomes of the order of the options: in one case of all of it, in several of who leads.
func (f *furtherCases) order() []string {
	if len(f.was) < 2 {
		return nil
	}
	lead := least(f.was)
	if !f.single() {
		var others []int // numbers of the cases in which none of them leads
		for i := f.from; i < f.to; i++ {
			now := least(figuresBy(&f.c.Cases[i], f.band, f.by))
			if !slices.ContainsFunc(now, func(k int) bool { return slices.Contains(lead, k) }) {
				others = append(others, i+1)
			}
		}
		if len(others) == 0 {
			return nil
		}
		return []string{"others are the least in " + casesNamed(others)}
	}
	c := &f.c.Cases[f.from]
	is := figuresBy(c, f.band, f.by)
	now := least(is)
	var parts []string
	if !slices.Equal(now, lead) {
		text := "the least is now "
		if len(now) > 1 {
			text = "the least are now "
		}
		parts = append(parts, text+someByLetter(now)+", with "+f.figure(c, now[0]))
	}
	switch after := order(is, len(is)); {
	case after == order(f.was, len(f.was)):
		parts = append(parts, "the order stays")
	case len(is) <= mostOrder:
		parts = append(parts, "the order becomes "+after)
	case slices.Equal(now, lead):
		parts = append(parts, "the order of the others changes")
	}
	return parts
}

// least are the places of the least figures.
func least(xs []float64) []int {
	index := ranking(xs)
	n := 1
	for n < len(index) && !stats.Less(xs[index[n-1]], xs[index[n]]) {
		n++
	}
	index = index[:n]
	slices.Sort(index)
	return index
}

// someAre begins what is said of some options.
func someAre(options []int) string {
	if len(options) == 1 {
		return someByLetter(options) + " is"
	}
	return someByLetter(options) + " are"
}
