package quantity

import (
	"cmp"
	"fmt"
	"strings"
)

// Range is two values of a kind, the first below the second.
type Range struct {
	Lo, Hi float64 // in the base unit of the kind
	Unit   string  // that of the second value, as it was written: one of the kind's; "" where it has none
}

// ParseRange reads two quantities "A .. B" with A below B, each with its unit, or with one unit at the end for both. The
// error quotes the text and says what to write instead.
func ParseRange(text string, kind Kind) (Range, error) {
	r := rangeReader{
		read:   func(part string) (float64, error) { return Parse(part, kind) },
		unit:   kind.Unit(),
		wanted: fmt.Sprintf("two values of %s, such as %s", kind, exampleRange(kind)),
	}
	return r.parse(text)
}

// ParseNumberRange reads two bare numbers "A .. B" with A below B. Errors are as those of ParseRange.
func ParseNumberRange(text string) (Range, error) {
	return (&rangeReader{read: ParseNumber, wanted: "two numbers, such as 1 .. 4"}).parse(text)
}

// rangeReader reads ranges of one kind.
type rangeReader struct {
	read   func(string) (float64, error)
	unit   string // the usual one; "" for numbers
	wanted string // what a range is, with an example
}

// parse reads a range, and finds what to write in place of one that it refuses.
func (r *rangeReader) parse(text string) (Range, error) {
	if first, last, ok := strings.Cut(text, ".."); ok {
		first, last = strings.TrimSpace(first), strings.TrimSpace(last)
		if first != "" && last != "" && last[0] != '.' && !strings.Contains(last, "..") {
			return r.between(text, first, last)
		}
	}
	for _, parting := range []string{"...", "…", "–", "—", " to ", " - ", "-", ";", ","} {
		first, last, ok := strings.Cut(text, parting)
		if !ok {
			continue
		}
		first, last = strings.TrimSpace(first), strings.TrimSpace(last)
		if _, err := r.between(text, first, last); err == nil {
			return Range{}, fmt.Errorf("%s is not a range; write %s .. %s", quote(text), first, last)
		}
		if r.unit == "" {
			continue
		}
		if _, err := r.between(text, first, last+" "+r.unit); err == nil {
			return Range{}, fmt.Errorf("%s is not a range; write %s .. %s %s", quote(text), first, last, r.unit)
		}
	}
	return Range{}, fmt.Errorf("%s is not a range; write %s", quote(text), r.wanted)
}

// between makes a range of two texts. The first may lack the unit that the last has.
func (r *rangeReader) between(text, first, last string) (Range, error) {
	firstNumber, firstUnit := split(plain(first))
	lastNumber, unit := split(plain(last))
	hi, err := r.read(last)
	if err != nil {
		if _, fails := r.read(last + " " + cmp.Or(firstUnit, r.unit)); fails != nil || unit != "" || lastNumber == "" {
			return Range{}, err
		}
		if firstUnit == "" {
			return Range{}, fmt.Errorf("%s has no unit; write %s .. %s %s", quote(text), first, last, r.unit)
		}
		return Range{}, fmt.Errorf("%s: the unit stands on both values or once at the end; write %s .. %s %s", quote(text), first, last, firstUnit)
	}
	if firstUnit == "" && firstNumber != "" && unit != "" {
		first += " " + unit
	}
	lo, err := r.read(first)
	switch {
	case err != nil:
		return Range{}, err
	case lo == hi:
		return Range{}, fmt.Errorf("%s: both values are the same; write %s", quote(text), r.wanted)
	case lo > hi:
		return Range{}, fmt.Errorf("%s does not rise; write the smaller value first, %s .. %s", quote(text), last, first)
	}
	return Range{lo, hi, unit}, nil
}

// exampleRange is a range of a kind as it may be written.
func exampleRange(kind Kind) string {
	switch kind {
	case Share:
		return "10 % .. 40 %"
	case Rate, Conductivity:
		return "0.01 .. 0.04 " + kind.Unit()
	}
	return "1 .. 4 " + kind.Unit()
}
