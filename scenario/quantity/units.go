package quantity

import (
	"cmp"
	"fmt"
	"regexp"
	"strings"
	"unicode"
)

// This file helps those who write a quantity in a usual way that is not read: it finds out what was meant, so that the
// message can say what to write. Nothing that it finds is ever taken as the value.

// unitWords are other spellings of the parts of a unit, in small letters.
var unitWords = map[string]string{
	"metre": "m", "metres": "m", "meter": "m", "meters": "m", "mtr": "m",
	"millimetre": "mm", "millimetres": "mm", "millimeter": "mm", "millimeters": "mm",
	"centimetre": "cm", "centimetres": "cm", "centimeter": "cm", "centimeters": "cm",
	"kilometre": "km", "kilometres": "km", "kilometer": "km", "kilometers": "km",
	"inch": "in", "inches": "in", "foot": "ft", "feet": "ft", "'": "ft", "′": "ft", "sqm": "m2", "sqft": "ft2", "hectare": "ha", "hectares": "ha",
	"day": "d", "days": "d", "hour": "h", "hours": "h", "hr": "h", "hrs": "h", "minute": "min", "minutes": "min", "mins": "min",
	"second": "s", "seconds": "s", "sec": "s", "secs": "s", "year": "y", "years": "y", "yr": "y", "yrs": "y", "a": "y", "annum": "y",
	"percent": "%", "per cent": "%", "pct": "%", "％": "%", "degree": "deg", "degrees": "deg", "º": "deg",
	"litre": "L", "litres": "L", "liter": "L", "liters": "L",
}

// foreignUnits are units that people use and that are not read, each with its kind.
var foreignUnits = []struct {
	kind Kind
	unit
}{
	{Rate, unit{name: "%/d", shift: -2}}, {Rate, unit{name: "%/h", shift: -2, mul: 24}}, {Rate, unit{name: "%/y", shift: -2, div: daysPerYear}},
	{Length, unit{name: "yd", shift: -4, mul: 9144}}, {Length, unit{name: "yards", shift: -4, mul: 9144}}, {Length, unit{name: "dm", shift: -1}},
	{Duration, unit{name: "week", mul: 7}}, {Duration, unit{name: "weeks", mul: 7}},
	{Flux, unit{name: "mm/y", div: daysPerYear}}, {Flux, unit{name: "cm/d", shift: 1}},
	{Conductivity, unit{name: "m/h", mul: 24}}, {Conductivity, unit{name: "mm/s", shift: -3, mul: 86400}}, {Conductivity, unit{name: "cm/h", shift: -2, mul: 24}},
	{Conductivity, unit{name: "m/y", div: daysPerYear}},
	{Discharge, unit{name: "m3/s", mul: 86400}}, {Discharge, unit{name: "m3/h", mul: 24}}, {Discharge, unit{name: "L/min", shift: -2, mul: 144}},
	{Stress, unit{name: "kN/m2"}}, {Stress, unit{name: "Pa", shift: -3}}, {Stress, unit{name: "MPa", shift: 3}},
	{Angle, unit{name: "rad", mul: 57.295779513082323}}, // 180/π
	{Area, unit{name: "km2", shift: 6}},
	{Share, unit{name: "‰", shift: -3}},
}

// foreign is a unit of the kind that is not read.
func foreign(kind Kind, name string) (unit, bool) {
	for _, f := range foreignUnits {
		if f.kind == kind && strings.EqualFold(f.name, name) {
			return f.unit, true
		}
	}
	return unit{}, false
}

// unitOf finds a unit by its name in any case.
func (k Kind) unitOf(name string) (unit, bool) {
	for _, u := range table[k].units {
		if strings.EqualFold(u.name, name) {
			return u, true
		}
	}
	return unit{}, false
}

var (
	superscripts = strings.NewReplacer("⁻", "-", "−", "-", "–", "-", "¹", "1", "^", "", "**", "", "·", " ", "*", " ")
	perWord      = regexp.MustCompile(`(?i)(^| )(?:per|p\.) `)
	slashes      = regexp.MustCompile(` */ *`)
	unitPart     = regexp.MustCompile(`^([^0-9-]+)(-?[0-9])?$`)
)

// usualUnit writes a unit in the usual way: "per day", "1/day", "d-1" and "d⁻¹" are /d, "m s-1" and "m.s^-1" are m/s.
// What it does not know it leaves as it is.
func usualUnit(name string) string {
	if w, ok := unitWords[strings.ToLower(name)]; ok {
		return w
	}
	s := perWord.ReplaceAllString(superscripts.Replace(strings.TrimSpace(name)), "/")
	s = slashes.ReplaceAllString(strings.ReplaceAll(s, ".", " "), "/")
	var above, below []string
	for i, side := range strings.Split(s, "/") {
		for _, part := range strings.Fields(side) {
			if part == "1" && i == 0 {
				continue
			}
			m := unitPart.FindStringSubmatch(part)
			if m == nil {
				return name
			}
			word := m[1]
			if w, ok := unitWords[strings.ToLower(word)]; ok {
				word = w
			}
			power := strings.TrimPrefix(m[2], "-")
			if power == "1" {
				power = ""
			}
			if i > 0 || strings.HasPrefix(m[2], "-") {
				below = append(below, word+power)
			} else {
				above = append(above, word+power)
			}
		}
	}
	return strings.Join(append([]string{strings.Join(above, " ")}, below...), "/")
}

const decimalPattern = `[-+−–]?[0-9]+(?:[.,][0-9]+)?`

var (
	timesTen   = regexp.MustCompile(`^(` + decimalPattern + `) *[x×X·*] *10 *((?:\^|\*\*) *[-+−–⁻]?[0-9⁰¹²³⁴-⁹]+|[-+−–⁻]?[⁰¹²³⁴-⁹]+|[-+−–][0-9]+)( .*|[^0-9].*)?$`)
	tenTo      = regexp.MustCompile(`^()10 *((?:\^|\*\*) *[-+−–⁻]?[0-9⁰¹²³⁴-⁹]+|⁻?[⁰¹²³⁴-⁹]+)( .*|[^0-9].*)?$`)
	twoNumbers = regexp.MustCompile(`^([0-9]+(?:\.[0-9]+)?) *([^0-9\s]*) *(to|-|–|—|and|or|/|;|,|\.\.|±|\+/-) *([0-9]+(?:\.[0-9]+)?) *([^0-9]+)$`)
	minutes    = regexp.MustCompile(`^([0-9]+)(?:°|deg) *([0-9]{1,2}) *['′’]$`)
)

// longestSlip is the largest number of bytes of a text that is explained by repeating parts of it.
const longestSlip = 120

// notOne explains a text that is a power of ten written out, a range, a fraction or two quantities.
func notOne(text string, kind Kind) error {
	text = strings.TrimSpace(text)
	if len(text) > longestSlip {
		return nil
	}
	m := timesTen.FindStringSubmatch(text)
	if m == nil {
		m = tenTo.FindStringSubmatch(text)
	}
	if m != nil {
		number := cmp.Or(strings.ReplaceAll(m[1], ",", "."), "1")
		exp := strings.Map(func(r rune) rune {
			for i, sup := range []rune("⁰¹²³⁴⁵⁶⁷⁸⁹") {
				if r == sup {
					return rune('0' + i)
				}
			}
			return r
		}, strings.TrimSpace(superscripts.Replace(m[2])))
		return fmt.Errorf("%s: a power of ten is written with an e; write %se%s%s", quote(text), number, strings.TrimPrefix(exp, "+"), spaced(m[3], kind))
	}
	if m := minutes.FindStringSubmatch(text); m != nil {
		v, err := number64(m[1], 0)
		part, err2 := number64(m[2], 0)
		if err == nil && err2 == nil {
			return fmt.Errorf("%s: an angle is one decimal number; write %s deg", quote(text), four(v+part/60))
		}
	}
	m = twoNumbers.FindStringSubmatch(plain(text))
	if m == nil || strings.EqualFold(m[2], "e") {
		return nil
	}
	unit := spaced(m[5], kind)
	first, second := m[1]+cmp.Or(spaced(m[2], kind), unit), m[4]+unit
	switch m[3] {
	case "±", "+/-":
		return fmt.Errorf("%s: one value is wanted here; write %s", quote(text), first)
	case "/":
		a, err := number64(m[1], 0)
		b, err2 := number64(m[4], 0)
		if m[2] != "" || err != nil || err2 != nil || b == 0 {
			break
		}
		if u, ok := Duration.unitOf(usualUnit(m[5])); ok && kind == Rate { // 1/120 d is 1/(120 d)
			return fmt.Errorf("%s: a number is decimal; write %s /%s", quote(text), four(a/b), u.name)
		}
		return fmt.Errorf("%s: a number is decimal; write %s%s if a fraction is meant, or else %s or %s", quote(text), four(a/b), unit, first, second)
	case ",":
		if m[2] == "" {
			return nil // a decimal comma
		}
	case "-", "–":
		if m[1] == "10" && m[2] == "" && (kind == Conductivity || kind == Rate) {
			return fmt.Errorf("%s: a power of ten is written with an e; write 1e-%s if one is meant, or one value, not a range", quote(text), second)
		}
	}
	return fmt.Errorf("%s: one value is wanted here, not two or a range; write %s or %s", quote(text), first, second)
}

// spaced is a unit with one blank before it, as the kind has it where the kind does.
func spaced(unit string, kind Kind) string {
	if unit = strings.TrimSpace(unit); unit == "" {
		return ""
	}
	if u, ok := kind.unitOf(usualUnit(unit)); ok {
		unit = u.name
	}
	return " " + unit
}

// moreThanUnit explains a unit after which something else follows.
func moreThanUnit(text, number, name string, kind Kind) error {
	if len(name) > longestSlip {
		return nil
	}
	i := strings.IndexAny(name, " ,;#(")
	if i < 0 {
		i = strings.Index(name, "//")
	}
	if i < 1 {
		return nil
	}
	known := usualUnit(name[:i])
	u, ok := kind.unitOf(known)
	if !ok {
		return nil
	}
	if strings.ContainsAny(name[i:], "0123456789") {
		return fmt.Errorf("%s: one number with one unit is wanted, such as %s", quote(text), example(kind))
	}
	right := number + " " + u.name
	if rest := strings.TrimLeft(name[i:], " "); rest[0] == '#' {
		return fmt.Errorf("%s: a blank stands before the # of a remark; write %s %s", quote(text), right, rest)
	}
	if strings.ContainsFunc(name[i:], unicode.IsLetter) { // "below ground" or "runoff" may turn the meaning round
		return fmt.Errorf("%s: nothing may follow the unit; write %s if that is what the key means without the words after it, and these behind a blank and a #", quote(text), right)
	}
	return fmt.Errorf("%s: nothing may follow the unit; write %s, and a remark after a blank and a #", quote(text), right)
}
