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

// numbers joins rising numbers, runs of three and more as a span: 1, 4–6.
func numbers(ns []int) string {
	var parts []string
	for i := 0; i < len(ns); {
		j := i
		for j+1 < len(ns) && ns[j+1] == ns[j]+1 {
			j++
		}
		if j-i < 2 {
			j = i
			parts = append(parts, strconv.Itoa(ns[i]))
		} else {
			parts = append(parts, fmt.Sprintf("%d–%d", ns[i], ns[j]))
		}
		i = j + 1
	}
	return strings.Join(parts, ", ")
}

// write prints the notes. letter gives the key of an option's name.
func (ns notes) write(p *Page, letter func(string) string, cases []result.Case) {
	for i, n := range ns {
		kind := "remark"
		if n.first.Severity == result.Warn {
			kind = "WARNING"
		}
		text := kind
		if of := n.concerns(letter, cases); len(of) > 0 {
			text += ", " + strings.Join(of, "; ")
		}
		p.item(numbered, strconv.Itoa(i+1), text+": "+n.first.Text)
	}
}

// concerns says what a note is about: the options of each band, or what else it names, and in which cases.
func (n note) concerns(letter func(string) string, cases []result.Case) []string {
	// What is said in the same cases goes together, and of every option and band it is known in which cases it is said.
	type what struct{ option, band string }
	var whats []what
	in := map[what][]bool{} // by case
	for _, w := range n.places {
		q := what{w.Option, w.Band}
		if in[q] == nil {
			whats, in[q] = append(whats, q), make([]bool, len(cases))
		}
		for i := range cases {
			in[q][i] = in[q][i] || ofCase(w, &cases[i])
		}
	}
	var texts []string
	var done [][]bool
	for _, q := range whats {
		same := func(b []bool) bool { return slices.Equal(b, in[q]) }
		if slices.ContainsFunc(done, same) {
			continue
		}
		done = append(done, in[q])
		var places []result.Warning
		for _, r := range whats {
			if same(in[r]) {
				places = append(places, result.Warning{Option: r.option, Band: r.band})
			}
		}
		of := inWords(places, letter)
		switch where := casesText(in[q]); {
		case where == "":
			texts = append(texts, of...)
		case len(of) == 0:
			texts = append(texts, where)
		default:
			texts = append(texts, andWords(of)+" in "+where)
		}
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
	switch len(ns) {
	case 0, len(in):
		return ""
	case 1:
		return caseName(ns[0] - 1)
	}
	return "cases " + numbers(ns)
}

// inWords names options and bands: the options of each band together.
func inWords(places []result.Warning, letter func(string) string) []string {
	var of, bands, alone []string    // alone are the letters of options that no band is named with
	options := map[string][]string{} // letters, by band
	for _, w := range places {
		switch {
		case w.Band != "" && w.Option != "":
			bands = with(bands, w.Band)
			options[w.Band] = with(options[w.Band], letter(w.Option))
		case w.Option != "":
			alone = with(alone, letter(w.Option))
		case w.Band != "":
			of = with(of, "band "+w.Band)
		}
	}
	switch len(alone) {
	case 0:
	case 1:
		of = append(of, "option "+alone[0])
	default:
		of = append(of, "options "+strings.Join(alone, ", "))
	}
	for _, b := range bands {
		of = append(of, b+" "+strings.Join(options[b], ", "))
	}
	return of
}

// with is a list with a text in it, once.
func with(list []string, text string) []string {
	if slices.Contains(list, text) {
		return list
	}
	return append(list, text)
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
