package quantity

import (
	"errors"
	"regexp"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// TestPatterns: what is read matches the pattern of its sign, and what matches is read, unless a float64 cannot hold it.
func TestPatterns(t *testing.T) {
	type pair struct {
		kind Kind
		sign Sign
	}
	patterns := map[pair]*regexp.Regexp{}
	var known []string
	for kind := range kinds {
		known = append(known, kind.Units()...)
		for _, sign := range []Sign{AnySign, NotNegative, Positive} {
			patterns[pair{kind, sign}] = regexp.MustCompile(Pattern(kind, sign))
		}
	}
	known = append(known, "m²", "ft²", "kN/m³", "m³/d", "°", "°C", "mm/°C/d", "m2²", "º", "", "")
	blank := rapid.SampledFrom([]string{"", "", " ", "\u2009", "\u00a0", "\u202f", "  "})
	number := rapid.OneOf(
		rapid.StringMatching(`[+-]?(0|[1-9][0-9]{0,3})(\.[0-9]{1,3})?([eE][+-]?[0-9]{1,2})?`),
		rapid.SampledFrom([]string{"0", "0.0", "1", "0.999", "100", "100.00", "100.01", "99.9", "1,5", "1 800", "010", ".5", "5.", "1_0", "0x1F", "1²", "\u22123", "", "e5", "00.5"}),
	)
	rapid.Check(t, func(t *rapid.T) {
		text := strings.TrimSpace(number.Draw(t, "number") + blank.Draw(t, "between") + rapid.SampledFrom(known).Draw(t, "unit"))
		for kind := range kinds {
			if kind == Change { // its sign is a rule of its own
				continue
			}
			v, err := Parse(text, kind)
			if errors.Is(err, errTooLarge) || errors.Is(err, errTooSmall) {
				continue
			}
			for sign, holds := range map[Sign]bool{AnySign: true, NotNegative: v >= 0, Positive: v > 0} {
				if kind == Share {
					holds = holds && v >= 0 && v <= 1
				}
				matches := patterns[pair{kind, sign}].MatchString(text)
				switch read := err == nil && holds; {
				case read && !matches && !(v == 0 && strings.Contains(text, "-")):
					t.Fatalf("%q is read as %v, %v, and does not match %s", text, v, kind, patterns[pair{kind, sign}])
				case !read && matches && !(kind == Share && strings.ContainsAny(text, "eE")):
					t.Fatalf("%q is not read as %v, and matches %s: %v", text, kind, patterns[pair{kind, sign}], err)
				}
			}
		}
	})
}

func TestNumberPatterns(t *testing.T) {
	for _, tt := range []struct {
		text          string
		number, whole []Sign
	}{
		{"0", []Sign{AnySign, NotNegative}, []Sign{AnySign, NotNegative}},
		{"12", []Sign{AnySign, NotNegative, Positive}, []Sign{AnySign, NotNegative, Positive}},
		{"+12", []Sign{AnySign, NotNegative, Positive}, []Sign{AnySign, NotNegative, Positive}},
		{"-12", []Sign{AnySign}, []Sign{AnySign}},
		{"1.10", []Sign{AnySign, NotNegative, Positive}, nil},
		{"0.0", []Sign{AnySign, NotNegative}, nil},
		{"2e-3", []Sign{AnySign, NotNegative, Positive}, nil},
		{"012", nil, nil},
		{"1,5", nil, nil},
		{"12 m", nil, nil},
		{"", nil, nil},
	} {
		for _, sign := range []Sign{AnySign, NotNegative, Positive} {
			if got := regexp.MustCompile(NumberPattern(sign)).MatchString(tt.text); got != slices.Contains(tt.number, sign) {
				t.Errorf("%q as a number of sign %d: %v", tt.text, sign, got)
			}
			if got := regexp.MustCompile(WholePattern(sign)).MatchString(tt.text); got != slices.Contains(tt.whole, sign) {
				t.Errorf("%q as a whole number of sign %d: %v", tt.text, sign, got)
			}
		}
		if _, err := ParseNumber(tt.text); (err == nil) != (tt.number != nil) {
			t.Errorf("%q is read as a number: %v", tt.text, err)
		}
		if _, err := ParseWhole(tt.text); (err == nil) != (tt.whole != nil) {
			t.Errorf("%q is read as a whole number: %v", tt.text, err)
		}
	}
}
