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
	if refs := ns.refs(nil, "", ""); refs != "" {
		text += "; about the whole study: " + refs
	}
	return text
}

// has reports whether there is a warning of this code about an option on a band.
func (ns notes) has(code, option, band string) bool {
	return slices.ContainsFunc(ns, func(n note) bool {
		return n.first.Code == code && slices.ContainsFunc(n.places, func(w result.Warning) bool { return w.Option == option && w.Band == band })
	})
}

// numbersOf are the numbers of the notes with a code, for print.
func (ns notes) numbersOf(code string) string {
	var found []int
	for i, n := range ns {
		if n.first.Code == code {
			found = append(found, i+1)
		}
	}
	return numbers(found)
}

// refs lists the numbers of the notes about exactly this option and band, either of which may be "", in this case.
func (ns notes) refs(c *result.Case, option, band string) string {
	var found []int
	for i, n := range ns {
		for _, w := range n.places {
			if w.Option == option && w.Band == band && ofCase(w, c) {
				found = append(found, i+1)
				break
			}
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
func (ns notes) write(p *Page, letter func(string) string) {
	for i, n := range ns {
		kind := "remark"
		if n.first.Severity == result.Warn {
			kind = "WARNING"
		}
		of := n.concerns(letter)
		text := kind
		if len(of) > 0 {
			text += ", " + strings.Join(of, "; ")
		}
		p.item(numbered, strconv.Itoa(i+1), text+": "+n.first.Text)
	}
}

// concerns says what a note is about: the options of each band, or what else it names.
func (n note) concerns(letter func(string) string) []string {
	var of, bands, alone []string    // alone are the letters of options that no band is named with
	options := map[string][]string{} // letters, by band
	for _, w := range n.places {
		switch {
		case w.Band != "" && w.Option != "" && w.Climate+w.Condition == "":
			bands = with(bands, w.Band)
			options[w.Band] = with(options[w.Band], letter(w.Option))
		case w.Option != "" && w.Climate+w.Condition == "":
			alone = with(alone, letter(w.Option))
		default:
			if text := place(w, letter); text != "" {
				of = with(of, text)
			}
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

// place says what a warning is about.
func place(w result.Warning, letter func(string) string) string {
	var parts []string
	if w.Option != "" {
		parts = append(parts, strings.TrimSpace("option "+letter(w.Option)))
	}
	if w.Band != "" {
		parts = append(parts, fmt.Sprintf("band %s", w.Band))
	}
	if w.Climate != "" {
		parts = append(parts, w.Climate)
	}
	if w.Condition != "" {
		parts = append(parts, w.Condition)
	}
	return strings.Join(parts, ", ")
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}
