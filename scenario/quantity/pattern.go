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

// Pieces of patterns. They are shown to people, so they are kept short. Nothing in them is read differently by Go and by
// ECMA-262, whose expressions JSON Schema uses.
const (
	blank    = "[ \u00a0\u2007\u2009\u202f]"
	plainNum = `(0|[1-9][0-9]*)(\.[0-9]+)?`
	moreThan = `([1-9][0-9]*(\.[0-9]+)?|0\.[0-9]*[1-9][0-9]*)` // a plainNum that is not 0
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
// other kinds the size of the number is of no account. Parse reads a little more: blanks at the ends, blanks of other
// widths, -0 where the sign is NotNegative.
func Pattern(kind Kind, s Sign) string {
	number := mantissa(s) + "(" + power + ")?"
	if kind != Share {
		return "^" + s.prefix() + number + unitPattern(kind) + "$"
	}
	s = max(s, NotNegative)
	percent, bare := `(100(\.0+)?|[1-9]?[0-9](\.[0-9]+)?)`, `0(\.[0-9]+)?`
	if s == Positive {
		percent, bare = `(100(\.0+)?|[1-9][0-9]?(\.[0-9]+)?|0\.[0-9]*[1-9][0-9]*)`, `0\.[0-9]*[1-9][0-9]*`
	}
	return "^" + s.prefix() + "(" + percent + blank + "*%|" + bare + "|" + mantissa(s) + power + "(" + blank + "*%)?)$"
}

// NumberPattern returns a regular expression, anchored, for the texts that [ParseNumber] reads as a number of the sign, but
// for blanks at the ends.
func NumberPattern(s Sign) string { return "^" + s.prefix() + mantissa(s) + "(" + power + ")?$" }

// WholePattern returns a regular expression, anchored, for the texts that [ParseWhole] reads as a number of the sign, but
// for blanks at the ends.
func WholePattern(s Sign) string {
	if s == Positive {
		return "^" + s.prefix() + "[1-9][0-9]*$"
	}
	return "^" + s.prefix() + "(0|[1-9][0-9]*)$"
}

// unitPattern matches the units of a kind in every spelling, with the blanks before them.
func unitPattern(kind Kind) string {
	spell := strings.NewReplacer("degC", "(degC|°C)", "deg", "(deg|°)", "m2", "m[2²]", "t2", "t[2²]", "m3", "m[3³]")
	before := blank + "*"
	var all []string
	for _, u := range kind.Units() {
		if strings.HasPrefix(u, "1/") { // without a blank the 1 belongs to the number
			before = "(" + blank + "*|" + blank + "+1)"
			continue
		}
		all = append(all, spell.Replace(u))
	}
	if len(all) == 1 {
		return before + all[0]
	}
	return before + "(" + strings.Join(all, "|") + ")"
}
