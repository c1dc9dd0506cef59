package quantity

import (
	"fmt"
	"strings"
)

// ParseRange reads two quantities "A .. B" with A below B, each with its unit, or with one unit at the end for both.
// It returns them in the base unit of the kind. The error quotes the text and says what to write instead.
func ParseRange(text string, kind Kind) (lo, hi float64, err error) {
	return parseRange(text, func(part string) (float64, error) { return Parse(part, kind) }, func(first, last string) string {
		if _, unit := split(plain(first)); unit != "" {
			return first
		}
		_, unit := split(plain(last))
		return first + " " + unit
	}, fmt.Sprintf("two values of %s, such as %s .. %s", kind, exampleTimes(kind, 1), exampleTimes(kind, 4)))
}

// ParseNumberRange reads two bare numbers "A .. B" with A below B. Errors are as those of ParseRange.
func ParseNumberRange(text string) (lo, hi float64, err error) {
	return parseRange(text, ParseNumber, func(first, _ string) string { return first }, "two numbers, such as 1 .. 4")
}

// parseRange parts a range at its dots. complete gives the first value what it lacks.
func parseRange(text string, read func(string) (float64, error), complete func(first, last string) string, wanted string) (lo, hi float64, err error) {
	first, last, ok := strings.Cut(text, "..")
	first, last = strings.TrimSpace(first), strings.TrimSpace(last)
	if !ok || first == "" || last == "" || strings.Contains(last, "..") {
		return 0, 0, fmt.Errorf("%s is not a range; write %s", quote(text), wanted)
	}
	if hi, err = read(last); err != nil {
		return 0, 0, err
	}
	if lo, err = read(complete(first, last)); err != nil {
		return 0, 0, err
	}
	if !(lo < hi) {
		return 0, 0, fmt.Errorf("%s does not rise; write the smaller value first", quote(text))
	}
	return lo, hi, nil
}

// exampleTimes is a value of a kind as it may be written.
func exampleTimes(kind Kind, times int) string {
	if kind == Share {
		return fmt.Sprintf("%d %%", 10*times)
	}
	return fmt.Sprintf("%d %s", times, kind.Unit())
}
