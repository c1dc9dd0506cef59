// Package quantity reads and writes numbers with units, as a person writes them in a study: "12 m", "0.006 /d",
// "8 %". It is the only place where the units of a study are parsed.
//
// Each kind of quantity has one base unit, in which values are returned, and a short list of further units that
// are converted to it. A unit of another kind is refused even where the dimensions agree, because it is more often
// a slip than a wish.
package quantity

import (
	"errors"
	"fmt"
	"math"
	"math/big"
	"regexp"
	"strconv"
	"strings"
)

// Kind is what a quantity measures. It fixes the base unit and the other units that are read.
type Kind int

// The kinds, each with its base unit.
const (
	Length        Kind = iota // m; depths, levels, elevations, thicknesses, spacings
	WaterDepth                // mm; a depth of water held by the soil
	Area                      // m2
	Duration                  // d
	Rate                      // 1/d, written /d
	Flux                      // mm/d; a depth of water per time
	Intensity                 // mm/h; a short-lived depth of water per time
	Conductivity              // m/d; hydraulic conductivity
	Consolidation             // m2/y; coefficient of consolidation
	Discharge                 // m3/d
	Stress                    // kPa
	UnitWeight                // kN/m3
	Angle                     // deg
	Temperature               // degC
	DegreeDay                 // mm/degC/d; melt per degree and day
	Share                     // 1, written as %; a part of a whole
	Change                    // 1, written as % with its sign; a relative change
	kinds                     // how many there are
)

// unit converts to the base unit of its kind: value = number·10^shift·mul/div. Powers of ten are applied to the
// decimal text, so that "85 cm" and "0.85 m" are the same float64.
type unit struct {
	name     string
	shift    int
	mul, div float64 // 0 stands for 1
}

// daysPerYear is the Julian year of 365.25 d that study files mean by y.
const daysPerYear = 365.25

// table gives the name of each kind in a sentence, and its units. The first unit is the one written by Format.
//
// The inch is 25.4 mm and the foot 0.3048 m exactly (international yard and pound agreement of 1959; from memory).
var table = [kinds]struct {
	name  string
	units []unit
}{
	Length:     {"a length", []unit{{name: "m"}, {name: "mm", shift: -3}, {name: "cm", shift: -2}, {name: "km", shift: 3}, {name: "in", shift: -4, mul: 254}, {name: "ft", shift: -4, mul: 3048}}},
	WaterDepth: {"a depth of water", []unit{{name: "mm"}, {name: "cm", shift: 1}, {name: "m", shift: 3}, {name: "in", shift: -1, mul: 254}, {name: "ft", shift: -1, mul: 3048}}},
	Area:       {"an area", []unit{{name: "m2"}, {name: "ha", shift: 4}, {name: "ft2", shift: -8, mul: 3048 * 3048}}},
	Duration: {"a time", []unit{{name: "d"}, {name: "s", div: 86400}, {name: "min", div: 1440}, {name: "h", div: 24},
		{name: "y", mul: daysPerYear}}},
	Rate: {"a rate", []unit{{name: "/d"}, {name: "1/d"}, {name: "/s", mul: 86400}, {name: "1/s", mul: 86400}, {name: "/min", mul: 1440}, {name: "1/min", mul: 1440},
		{name: "/h", mul: 24}, {name: "1/h", mul: 24}, {name: "/y", div: daysPerYear}, {name: "1/y", div: daysPerYear}}},
	Flux:          {"a flux", []unit{{name: "mm/d"}, {name: "mm/h", mul: 24}, {name: "in/h", shift: -1, mul: 254 * 24}}},
	Intensity:     {"an intensity", []unit{{name: "mm/h"}, {name: "mm/d", div: 24}, {name: "in/h", shift: -1, mul: 254}}},
	Conductivity:  {"a conductivity", []unit{{name: "m/d"}, {name: "m/s", mul: 86400}, {name: "cm/s", shift: -2, mul: 86400}, {name: "ft/d", shift: -4, mul: 3048}}},
	Consolidation: {"a coefficient of consolidation", []unit{{name: "m2/y"}, {name: "m2/s", mul: 86400 * daysPerYear}}},
	Discharge:     {"a discharge", []unit{{name: "m3/d"}, {name: "L/s", shift: -1, mul: 864}}},
	Stress:        {"a stress", []unit{{name: "kPa"}}},
	UnitWeight:    {"a unit weight", []unit{{name: "kN/m3"}}},
	Angle:         {"an angle", []unit{{name: "deg"}}},
	Temperature:   {"a temperature", []unit{{name: "degC"}}},
	DegreeDay:     {"a melt factor", []unit{{name: "mm/degC/d"}}},
	Share:         {"a share", []unit{{name: "%", shift: -2}}},
	Change:        {"a change", []unit{{name: "%", shift: -2}}},
}

// String names the kind as it stands in a sentence, with its article.
func (k Kind) String() string {
	if k < 0 || k >= kinds {
		return fmt.Sprintf("Kind(%d)", int(k))
	}
	return table[k].name
}

// Unit is the unit in which Parse returns values and Format writes them. Of a share and a change it is "%", though
// Parse returns 0.08 for "8 %".
func (k Kind) Unit() string { return table[k].units[0].name }

// Units lists the units that are read, the base unit first.
func (k Kind) Units() []string {
	names := make([]string, 0, len(table[k].units))
	for _, u := range table[k].units {
		names = append(names, u.name)
	}
	return names
}

// Parse reads a quantity and returns its value in the base unit of the kind.
//
//	quantity = number [blank] unit
//	number   = ["+" | "-"] whole ["." digit {digit}] [("e" | "E") ["+" | "-"] digit {digit}]
//	whole    = "0" | digit of 1 to 9 {digit}
//
// Thin, figure and non-breaking blanks count as blanks; in a unit ², ³, ° and °C as 2, 3, deg and degC. A share may also be
// a bare 0 or a bare number between 0 and 1. A change must carry its sign and may not be below -100 %.
//
// The error quotes the text and says what to write instead. Range is the caller's business: Parse takes a negative
// length. The value is always finite, and zero only where the text says zero.
func Parse(text string, kind Kind) (float64, error) {
	v, err := parse(text, kind)
	if err != nil {
		if better := notOne(text, kind); better != nil {
			err = better
		}
		return 0, err
	}
	return v, nil
}

func parse(text string, kind Kind) (float64, error) {
	number, name := split(plain(text))
	if number == "" {
		return 0, notANumber(text, name, kind)
	}
	if kind == Angle {
		if err := gradient(text); err != nil {
			return 0, err
		}
	}
	if err := misspelt(text, number, name); err != nil {
		return 0, err
	}
	if name == "" {
		return bare(text, number, kind)
	}
	for _, u := range table[kind].units {
		if u.name == name {
			v, err := u.base(number)
			if err != nil {
				return 0, fmt.Errorf("%s: %w", quote(text), err)
			}
			if kind == Change {
				return change(text, number, v)
			}
			return v, nil
		}
	}
	return 0, wrongUnit(text, number, name, kind)
}

// change applies the rules of a relative change: its sign is written, and it cannot take away more than there is.
func change(text, number string, v float64) (float64, error) {
	signed := number[0] == '+' || number[0] == '-'
	switch {
	case !signed && v > 0:
		meant := factorAsChange(v)
		if v <= 0.5 {
			return 0, fmt.Errorf("%s: a change carries its sign; write +%s", quote(text), strings.TrimSpace(text))
		}
		return 0, fmt.Errorf("%s: a change carries its sign; write %s if the result is meant, +%s if that much more is", quote(text), meant, strings.TrimSpace(text))
	case v < -1:
		return 0, fmt.Errorf("%s: a change cannot take away more than 100 %%", quote(text))
	}
	return v, nil
}

// factorAsChange is a factor such as 1.15 written as the change it makes, rounded to a thousandth of a per cent.
func factorAsChange(v float64) string { return Format(math.Round((v-1)*1e5)/1e5, Change) }

// oneIn are the ways to write a gradient of one in n.
var oneIn = regexp.MustCompile(`^1 *[vV]? *(?::|/|in) *([0-9]+(?:\.[0-9]+)?) *[hH]?$`)

// gradient refuses an angle that is given as the ratio of rise to run, such as 1:5, with the angle in degrees.
func gradient(text string) error {
	m := oneIn.FindStringSubmatch(strings.TrimSpace(plain(text)))
	if m == nil {
		return nil
	}
	n, err := strconv.ParseFloat(m[1], 64)
	if err != nil || n == 0 {
		return nil
	}
	return fmt.Errorf("%s is a gradient, and an angle is written in deg; write %s deg if one up in %s along is meant", quote(text), four(degrees(1/n)), m[1])
}

// degrees is the angle of a gradient in degrees.
func degrees(gradient float64) float64 { return math.Atan(gradient) * 180 / math.Pi }

// bare handles a number without a unit.
func bare(text, number string, kind Kind) (float64, error) {
	v, err := number64(number, 0)
	if err != nil {
		return 0, fmt.Errorf("%s: %w", quote(text), err)
	}
	switch kind {
	case Share:
		switch {
		case v >= 0 && v < 1:
			return v, nil
		case v == 1:
			return 0, fmt.Errorf("%s has no unit; write 1 %% or 100 %%", quote(text))
		case v > 1:
			return 0, fmt.Errorf("%s has no unit; write %s %%", quote(text), number)
		}
		return 0, fmt.Errorf("%s: a share without a unit lies between 0 and 1; write it in %%", quote(text))
	case Change:
		if v > 0 && number[0] != '+' {
			meant := factorAsChange(v)
			return 0, fmt.Errorf("%s: a change carries its sign and %%; write %s if a factor is meant", quote(text), meant)
		}
		return 0, fmt.Errorf("%s has no unit; write %s %%", quote(text), number)
	case Angle:
		if v > 0 && v < 1 {
			return 0, fmt.Errorf("%s has no unit; write %s deg if a gradient is meant, or %s deg", quote(text), four(degrees(v)), number)
		}
	}
	return 0, fmt.Errorf("%s has no unit; write %s %s", quote(text), number, kind.Unit())
}

// base converts a number in this unit to the base unit, exactly and with one rounding at the end, so that 0.1 mm/h is
// 2.4 mm/d to the last digit.
func (u unit) base(number string) (float64, error) {
	v, err := number64(number, u.shift)
	if err != nil || v == 0 || u.mul == 0 && u.div == 0 {
		return v, err
	}
	exact, ok := new(big.Rat).SetString(number) // of moderate size, or number64 had refused it
	if !ok {
		return 0, errTooLarge
	}
	scale := func(by float64, times func(x, y *big.Rat) *big.Rat) {
		if by != 0 {
			times(exact, new(big.Rat).SetFloat64(by))
		}
	}
	scale(u.mul, exact.Mul)
	scale(u.div, exact.Quo)
	if u.shift != 0 {
		ten := new(big.Rat).SetInt(new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(u.shift, -u.shift))), nil))
		if u.shift > 0 {
			exact.Mul(exact, ten)
		} else {
			exact.Quo(exact, ten)
		}
	}
	v, _ = exact.Float64()
	if math.IsInf(v, 0) {
		return 0, errTooLarge
	}
	if v == 0 {
		return 0, errTooSmall
	}
	return v, nil
}

// wrongUnit explains a unit that the kind does not have.
func wrongUnit(text, number, name string, kind Kind) error {
	list := kind.String() + " is written in " + orList(kind.Units())
	if kind == Rate {
		list = "a rate is written in /d, /h, /min, /s or /y"
	}
	plainly := usualUnit(name)
	if u, ok := kind.unitOf(plainly); ok {
		return fmt.Errorf("%s: unknown unit %s; write %s %s", quote(text), quote(name), number, u.name)
	}
	for other := Kind(0); other < kinds; other++ {
		u, ok := other.unitOf(plainly)
		if !ok {
			u, ok = foreign(other, plainly)
		}
		if !ok || other == Change {
			continue
		}
		v, err := u.base(number)
		if other == kind {
			if err != nil {
				break
			}
			return fmt.Errorf("%s: unknown unit %s; write %s", quote(text), quote(name), Format(rounded(v), kind))
		}
		hint := ""
		if err == nil {
			hint = instead(v, other, kind)
		}
		wanted := kind.String() + " is wanted here"
		if kind == Rate && hint == "" {
			wanted += ", the share of a store that leaves in a time"
		}
		return fmt.Errorf("%s is %s, and %s; %s%s", quote(text), other, wanted, list, hint)
	}
	if kind == UnitWeight {
		for _, d := range densities {
			if v, err := (unit{mul: d.tonnes * gravity}).base(number); d.name == plainly && err == nil {
				return fmt.Errorf("%s is a density, and a unit weight is wanted here; write %s kN/m3", quote(text), four(v))
			}
		}
	}
	if err := moreThanUnit(text, number, name, kind); err != nil {
		return err
	}
	return fmt.Errorf("%s: unknown unit %s; %s", quote(text), quote(name), list)
}

// gravity turns a density in t/m3 into a unit weight in kN/m3.
const gravity = 9.81

// densities are units of a density, and the t/m3 in one of them.
var densities = []struct {
	name   string
	tonnes float64
}{{"t/m3", 1}, {"Mg/m3", 1}, {"g/cm3", 1}, {"kg/m3", 1e-3}}

// instead says how a value of one kind is written as the other, where there is a usual way.
func instead(v float64, from, to Kind) string {
	var as, why string
	switch {
	case to == Rate && from == Share:
		as, why = four(v)+" /d", "that share a day"
	case to == Rate && from == Duration && v != 0:
		as, why = four(1/v)+" /d", "a time constant"
	case to == Duration && from == Rate && v != 0:
		as, why = four(1/v)+" d", "a time constant"
	case to == Conductivity && from == Flux:
		as, why = four(v/1000)+" m/d", "a conductivity"
	case to == Flux && from == Conductivity:
		as, why = four(v*1000)+" mm/d", "a flux"
	case to == Intensity && from == Conductivity:
		as, why = four(v*1000/24)+" mm/h", "an intensity"
	case to == Angle && from == Share && v != 0:
		as, why = four(degrees(v))+" deg", "a gradient"
	default:
		return ""
	}
	return fmt.Sprintf("; write %s if %s is meant", as, why)
}

// rounded rounds to four figures, enough for a hint.
func rounded(v float64) float64 {
	r, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 4, 64), 64)
	return r
}

func four(v float64) string { return FormatNumber(rounded(v)) }

// Format writes a value in the base unit of the kind, as the shortest text that Parse reads back to the same value.
// Infinite values and NaN, which no study holds, are written as "none" and "unknown".
func Format(v float64, kind Kind) string {
	switch {
	case math.IsInf(v, 0):
		return "none"
	case math.IsNaN(v):
		return "unknown"
	}
	text := FormatNumber(v)
	switch kind {
	case Share:
		text = shifted(v, 2).text()
	case Change:
		text = shifted(v, 2).text()
		if v >= 0 {
			text = "+" + text
		}
	}
	return text + " " + kind.Unit()
}

// decimal is a number as its shortest digits and a power of ten.
type decimal struct {
	digits string // with sign and point
	exp    int
}

// shifted is v·10^by without rounding anew.
func shifted(v float64, by int) decimal {
	mantissa, exp, _ := strings.Cut(strconv.FormatFloat(v, 'e', -1, 64), "e")
	e, _ := strconv.Atoi(exp)
	return decimal{mantissa, e + by}
}

// text writes the decimal without an exponent where that is short.
func (d decimal) text() string {
	sign := ""
	digits := d.digits
	if digits[0] == '-' {
		sign, digits = "-", digits[1:]
	}
	digits = strings.Replace(digits, ".", "", 1)
	if strings.Trim(digits, "0") == "" {
		return "0"
	}
	digits = strings.TrimRight(digits, "0")
	switch {
	case d.exp < -6 || d.exp > 15:
		whole, rest := digits[:1], digits[1:]
		if rest != "" {
			rest = "." + rest
		}
		return fmt.Sprintf("%s%s%se%d", sign, whole, rest, d.exp)
	case d.exp < 0:
		return sign + "0." + strings.Repeat("0", -d.exp-1) + digits
	case len(digits) <= d.exp+1:
		return sign + digits + strings.Repeat("0", d.exp+1-len(digits))
	}
	return sign + digits[:d.exp+1] + "." + digits[d.exp+1:]
}

// FormatNumber writes a finite number as the shortest text that ParseNumber reads back to the same value. Minus zero
// is written as 0.
func FormatNumber(v float64) string { return shifted(v, 0).text() }

// ParseNumber reads a bare decimal number: an optional sign, digits with an optional point, an optional exponent.
func ParseNumber(text string) (float64, error) {
	number, name := split(plain(text))
	if number == "" {
		if fix := notFinite(name); fix != "" {
			return 0, fmt.Errorf("%s: %s", quote(text), fix)
		}
		return 0, fmt.Errorf("%s is not a number; write one such as 12", quote(text))
	}
	if err := misspelt(text, number, ""); err != nil {
		return 0, err
	}
	if name != "" {
		switch v, err := number64(number, -2); {
		case err != nil:
		case name == "%" && (number[0] == '+' || number[0] == '-') && v > -1:
			return 0, fmt.Errorf("%s: a number without a unit is wanted here; write %s if a change by %s %% is meant", quote(text), four(1+v), number)
		case name == "%":
			number = FormatNumber(v)
		case name == "k":
			number = FormatNumber(v * 1e5)
		}
		return 0, fmt.Errorf("%s: a number without a unit is wanted here; write %s", quote(text), number)
	}
	v, err := number64(number, 0)
	if err != nil {
		return 0, fmt.Errorf("%s: %w", quote(text), err)
	}
	return v, nil
}

// largestWhole is the largest whole number read: below 2^53 every reader of JSON keeps each one apart, and so does a
// float64.
const largestWhole = 1<<53 - 1

// ParseWhole reads a whole number of magnitude below 2^53, written in digits only.
func ParseWhole(text string) (int64, error) {
	if whole := groups(plain(text)); wellSpelt(whole) && digits(whole) == len(whole) {
		return 0, fmt.Errorf("%s: thousands are not marked; write %s", quote(text), whole)
	}
	v, err := ParseNumber(text)
	if err != nil {
		return 0, err
	}
	if whole := pointed(plain(text)); whole != "" {
		return 0, fmt.Errorf("%s: a whole number is written in digits only; write %s if the point marks thousands", quote(text), whole)
	}
	if v != math.Trunc(v) {
		return 0, fmt.Errorf("%s is not a whole number; write one such as %s", quote(text), FormatNumber(max(1, math.Round(min(v, 1e15)))))
	}
	if math.Abs(v) > largestWhole {
		return 0, fmt.Errorf("%s is too large; whole numbers go up to %d", quote(text), int64(largestWhole))
	}
	if strings.ContainsAny(text, ".eE") {
		return 0, fmt.Errorf("%s: a whole number is written in digits only; write %d", quote(text), int64(v))
	}
	return int64(v), nil
}

var (
	errTooLarge = errors.New("the number is too large to be read")
	errTooSmall = errors.New("the number is too small to be read; write 0 if zero is meant")
)

// number64 converts a well-spelt number times 10^shift, rounding once.
func number64(number string, shift int) (float64, error) {
	mantissa, exp, has := strings.Cut(strings.ToLower(number), "e")
	e := shift
	if has {
		n, err := strconv.Atoi(exp)
		if err != nil || n > 10000 || n < -10000 {
			// The exponent alone decides, unless the digits are all zero.
			switch {
			case strings.Trim(mantissa, "+-0.") == "":
				n = 0
			case exp[0] == '-':
				return 0, errTooSmall
			default:
				return 0, errTooLarge
			}
		}
		e += n
	}
	v, err := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(e), 64)
	switch {
	case err != nil:
		return 0, errTooLarge
	case v == 0 && strings.Trim(mantissa, "+-0.") != "":
		return 0, errTooSmall
	}
	return v + 0, nil
}
