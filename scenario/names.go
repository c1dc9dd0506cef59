package scenario

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"golang.org/x/text/unicode/norm"
)

// longestName is the largest number of characters of a name.
const longestName = 60

// reservedNames are taken for the cases that are always there.
var reservedNames = []string{AsRecorded, AsBuilt}

// formulaSigns begin a formula in a spreadsheet.
const formulaSigns = "=+-@"

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
	case strings.ContainsRune(formulaSigns, rune(name[0])):
		return fmt.Sprintf("a name does not begin with %c, because a spreadsheet would take it for a formula", name[0])
	}
	for _, r := range reservedNames {
		if foldKey(name) == r {
			return "this name is kept for the case that is always there; choose another"
		}
	}
	return ""
}

// foldKey maps names to one text that differ only in case, in characters that nobody sees, or in how the same characters
// are encoded.
func foldKey(name string) string {
	return strings.Map(func(r rune) rune {
		if unicode.Is(unicode.Cf, r) {
			return -1
		}
		least := r
		for f := unicode.SimpleFold(r); f != r; f = unicode.SimpleFold(f) {
			least = min(least, f)
		}
		return unicode.ToLower(least)
	}, norm.NFKC.String(name))
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
