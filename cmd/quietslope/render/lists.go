package render

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// mostListed is how many entries a list in a sentence has before the rest is counted.
const mostListed = 8

// span is a run of whole numbers.
type span struct{ first, last int }

// spans cuts rising numbers into runs: three and more that follow each other are one, any other number stands alone.
func spans(ns []int) []span {
	var all []span
	for i := 0; i < len(ns); {
		j := i
		for j+1 < len(ns) && ns[j+1] == ns[j]+1 {
			j++
		}
		if j-i < 2 {
			j = i
		}
		all = append(all, span{ns[i], ns[j]})
		i = j + 1
	}
	return all
}

// spanTexts writes runs of numbers, each number as name has it: 1, 4–6.
func spanTexts(all []span, name func(int) string) []string {
	var texts []string
	for _, s := range all {
		text := name(s.first)
		if s.last > s.first {
			text += "–" + name(s.last)
		}
		texts = append(texts, text)
	}
	return texts
}

// numbers joins rising numbers, with runs as spans.
func numbers(ns []int) string { return strings.Join(spanTexts(spans(ns), strconv.Itoa), ", ") }

// letter names the i-th option in tables: A to Z, then AA, AB and so on.
func letter(i int) string {
	if i < 26 {
		return string(rune('A' + i))
	}
	return letter(i/26-1) + letter(i%26)
}

// byLetter names options, given by their places, as a sentence does: B, D–G and J.
func byLetter(options []int) string { return andWords(spanTexts(spans(options), letter)) }

// someByLetter is byLetter that counts what goes beyond mostListed entries.
func someByLetter(options []int) string {
	all := spans(options)
	if len(all) <= mostListed {
		return byLetter(options)
	}
	rest := 0
	for _, s := range all[mostListed:] {
		rest += s.last - s.first + 1
	}
	return fmt.Sprintf("%s and %d more", strings.Join(spanTexts(all[:mostListed], letter), ", "), rest)
}

// andWords joins words as a sentence does.
func andWords(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " and " + words[len(words)-1]
}

// inQuotes sets a name from a study apart from the words around it.
func inQuotes(name string) string { return `"` + name + `"` }

// upperFirst begins a sentence with one of our words.
func upperFirst(word string) string { return strings.ToUpper(word[:1]) + word[1:] }

// with is a list with a text in it, once.
func with(list []string, text string) []string {
	for _, t := range list {
		if t == text {
			return list
		}
	}
	return append(list, text)
}

func plural(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

// verb picks the form of a word for one option or several.
func verb(options []int, one, several string) string {
	if len(options) == 1 {
		return one
	}
	return several
}

// together are options of which the same is said.
type together struct {
	text    string
	options []int
}

// alikeBy puts options together by what text says of each, "" for nothing, in the order of the first of each.
func alikeBy(c *result.Case, text func(*result.Option) string) []together {
	var all []together
	for i := range c.Options {
		of := text(&c.Options[i])
		if of == "" {
			continue
		}
		k := slices.IndexFunc(all, func(t together) bool { return t.text == of })
		if k < 0 {
			k = len(all)
			all = append(all, together{text: of})
		}
		all[k].options = append(all[k].options, i)
	}
	return all
}
