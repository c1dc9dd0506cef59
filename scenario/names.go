package scenario

import (
	"fmt"
	"slices"
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
	case foldKey(name) == "":
		return "a name has at least one character that can be seen"
	case strings.ContainsRune(formulaSigns, rune(foldKey(name)[0])):
		return fmt.Sprintf("a name does not begin with %c, because a spreadsheet would take it for a formula", foldKey(name)[0])
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
		if unicode.Is(unicode.Cf, r) || strings.ContainsRune(fillers, r) {
			return -1
		}
		least := r
		for f := unicode.SimpleFold(r); f != r; f = unicode.SimpleFold(f) {
			least = min(least, f)
		}
		return unicode.ToLower(least)
	}, norm.NFKC.String(name))
}

// fillers are letters and signs without a shape: those of Hangul, and the joiner and selectors that change others.
const fillers = "\u034f\u115f\u1160\u2800\ufe0e\ufe0f"

// sameName says whether two texts name the same band, option or condition.
func sameName(a, b string) bool { return foldKey(a) == foldKey(b) }

// indexOfName is the place of a name in a list, -1 where it has none.
func indexOfName(names []string, name string) int {
	return slices.IndexFunc(names, func(n string) bool { return sameName(n, name) })
}

// quoted quotes a text of the user for a message and cuts a long one.
func quoted(text string) string {
	const most = 60
	if r := []rune(text); len(r) > most {
		text = string(r[:most]) + "…"
	}
	return strconv.Quote(text)
}
