package quantity

import "strings"

// Sign says which numbers a pattern matches.
type Sign int

// The signs that a pattern may allow.
const (
	AnySign Sign = iota
	NotNegative
	Positive
)

// Pieces of patterns. Nothing in them is read differently by Go and by ECMA-262, whose expressions JSON Schema uses:
// no classes such as \s or \d, and no look ahead.
const (
	// Blanks may stand around a number and its unit: what strings.TrimSpace takes away, but for control characters.
	blank    = "[ \u00a0\u1680\u2000-\u200a\u202f\u205f\u3000]"
	blanks   = blank + "*"
	plainNum = `(?:0|[1-9][0-9]*)(?:\.[0-9]+)?`
	moreThan = `(?:[1-9][0-9]*(?:\.[0-9]+)?|0\.[0-9]*[1-9][0-9]*)` // a plainNum that is not 0
	power    = `[eE][+-]?[0-9]+`
)

func mantissa(s Sign) string {
	if s == Positive {
		return moreThan
	}
	return plainNum
}

func (s Sign) prefix() string {
	if s == AnySign {
		return `[+-]?`
	}
	return `\+?`
}

// Pattern returns a regular expression, anchored, for the texts that [Parse] reads as a quantity of the kind with a number
// of the sign. A share is never negative, and over 100 % it does not match unless it is written with an exponent; of
// other kinds the size of the number is of no account. -0, which Parse reads as 0, has AnySign only.
func Pattern(kind Kind, s Sign) string {
	number := mantissa(s) + "(?:" + power + ")?"
	if kind != Share {
		return "^" + blanks + s.prefix() + number + unitPattern(kind) + blanks + "$"
	}
	s = max(s, NotNegative)
	percent, bare := `(?:100(?:\.0+)?|[1-9]?[0-9](?:\.[0-9]+)?)`, `0(?:\.[0-9]+)?`
	if s == Positive {
		percent, bare = `(?:100(?:\.0+)?|[1-9][0-9]?(?:\.[0-9]+)?|0\.[0-9]*[1-9][0-9]*)`, `0\.[0-9]*[1-9][0-9]*`
	}
	return "^" + blanks + s.prefix() + "(?:" + percent + blanks + "%|" + bare + "|" + mantissa(s) + power + "(?:" + blanks + "%)?)" + blanks + "$"
}

// NumberPattern returns a regular expression, anchored, for the texts that [ParseNumber] reads as a number of the sign.
func NumberPattern(s Sign) string {
	return "^" + blanks + s.prefix() + mantissa(s) + "(?:" + power + ")?" + blanks + "$"
}

// WholePattern returns a regular expression, anchored, for the texts that [ParseWhole] reads as a number of the sign.
func WholePattern(s Sign) string {
	digits := `(?:0|[1-9][0-9]*)`
	if s == Positive {
		digits = `[1-9][0-9]*`
	}
	return "^" + blanks + s.prefix() + digits + blanks + "$"
}

// unitPattern matches the units of a kind in every spelling, with the blanks before them.
func unitPattern(kind Kind) string {
	spell := strings.NewReplacer("degC", "(?:degC|°C)", "deg", "(?:deg|°)", "m2", "m[2²]", "t2", "t[2²]", "m3", "m[3³]")
	before := blanks
	var all []string
	for _, u := range kind.Units() {
		if strings.HasPrefix(u, "1/") { // without a blank the 1 belongs to the number
			before = "(?:" + blanks + "|" + blank + "+1)"
			continue
		}
		all = append(all, spell.Replace(u))
	}
	return before + "(?:" + strings.Join(all, "|") + ")"
}
