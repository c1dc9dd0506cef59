package scenario

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// longestName is the largest number of characters of a name.
const longestName = 60

// reservedNames are taken for the cases that are always there.
var reservedNames = []string{"as recorded", "as built"}

// checkName returns what is wrong with the name of a band or an option, and "" for nothing.
func checkName(name string) string {
	switch {
	case name == "":
		return "a name has at least one character"
	case utf8.RuneCountInString(name) > longestName:
		return fmt.Sprintf("a name has at most %d characters; this one has %d", longestName, utf8.RuneCountInString(name))
	case strings.ContainsFunc(name, unicode.IsControl):
		return "a name stands on one line and holds no control characters"
	case strings.TrimFunc(name, unicode.IsSpace) != name:
		return "a name neither begins nor ends with a blank"
	case strings.ContainsRune("=+-@", rune(name[0])):
		return fmt.Sprintf("a name does not begin with %c, because a spreadsheet would take it for a formula", name[0])
	}
	for _, r := range reservedNames {
		if foldKey(name) == r {
			return "this name is kept for the case that is always there; choose another"
		}
	}
	return ""
}

// foldKey maps names that differ only in case to one text.
func foldKey(name string) string {
	return strings.Map(func(r rune) rune {
		least := r
		for f := unicode.SimpleFold(r); f != r; f = unicode.SimpleFold(f) {
			least = min(least, f)
		}
		return unicode.ToLower(least)
	}, name)
}

// nearest returns the known word that is closest to word, and "" when none is close.
func nearest(word string, known []string) string {
	const longest = 40
	if utf8.RuneCountInString(word) > longest {
		return ""
	}
	best, least := "", 1+min(3, (utf8.RuneCountInString(word)+1)/3)
	for _, k := range known {
		if d := distance(foldKey(word), foldKey(k)); d < least {
			best, least = k, d
		}
	}
	return best
}

// distance is the least number of characters to insert, delete, replace or swap with their neighbour that makes a of b
// (optimal string alignment; Damerau 1964, Levenshtein 1966, from memory).
func distance(a, b string) int {
	s, t := []rune(a), []rune(b)
	var before, last, row []int
	for j := range len(t) + 1 {
		last = append(last, j)
	}
	for i := range s {
		row = append(make([]int, 0, len(t)+1), i+1)
		for j := range t {
			d := last[j]
			if s[i] != t[j] {
				d++
			}
			d = min(d, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && s[i] == t[j-1] && s[i-1] == t[j] {
				d = min(d, before[j-1]+1)
			}
			row = append(row, d)
		}
		before, last = last, row
	}
	return last[len(t)]
}

// quoted quotes a text of the user for a message and cuts a long one.
func quoted(text string) string {
	const most = 60
	if r := []rune(text); len(r) > most {
		text = string(r[:most]) + "…"
	}
	return strconv.Quote(text)
}

// joinWords joins words as "a, b or c".
func joinWords(words []string, last string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " " + last + " " + words[len(words)-1]
}
