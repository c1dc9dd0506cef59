package quantity

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
	"unicode"
)

// plainer reads the spellings that a word processor or a web page puts in place of the plain ones.
var plainer = strings.NewReplacer(
	"\u00a0", " ", // non-breaking blank
	"\u2007", " ", // figure blank, non-breaking
	"\u2009", " ", // thin blank
	"\u202f", " ", // narrow non-breaking blank
	"m²", "m2", "t²", "t2", "m³", "m3", // in a unit only: 10² is not 102
	"°C", "degC", "°", "deg",
)

// plain returns the text in plain spelling, without blanks at its ends.
func plain(text string) string { return strings.TrimSpace(plainer.Replace(text)) }

// split cuts a quantity into what was meant as the number, right or wrong, and the unit.
func split(text string) (number, unit string) {
	i := 0
	digit := false
	for i < len(text) {
		c := text[i]
		switch {
		case isDigit(c):
			digit = true
			i++
		case c == '.' || c == ',' || c == '_' || c == '+' || c == '-':
			i++
		case (c == '\'' || strings.HasPrefix(text[i:], "\u2019")) && digits(strings.TrimLeft(text[i:], "'\u2019")) > 0: // an apostrophe between thousands
			i++
			if c != '\'' {
				i += len("\u2019") - 1
			}
		case strings.HasPrefix(text[i:], "\u2212") || strings.HasPrefix(text[i:], "\u2013"): // minus sign, dash
			i += len("\u2212")
		case c == ' ' && i+1 < len(text) && isDigit(text[i+1]) && !strings.HasPrefix(text[i+1:], "1/"):
			i++
		case (c == 'x' || c == 'X') && strings.TrimLeft(text[:i], "+-") == "0" && i+1 < len(text) && isHex(text[i+1]):
			for i++; i < len(text) && isHex(text[i]); i++ {
			}
			return text[:i], strings.TrimSpace(text[i:])
		case (c == 'e' || c == 'E') && digit && exponent(text[i+1:]) > 0:
			i += 1 + exponent(text[i+1:])
			return text[:i], strings.TrimSpace(text[i:])
		default:
			return numberOrNone(text, i, digit)
		}
	}
	return numberOrNone(text, i, digit)
}

// numberOrNone cuts at i, unless there is no digit before it.
func numberOrNone(text string, i int, digit bool) (number, unit string) {
	if !digit {
		return "", text
	}
	return strings.TrimSpace(text[:i]), strings.TrimSpace(text[i:])
}

// exponent is the length of a signed run of digits at the start of the text, 0 for none.
func exponent(text string) int {
	n := 0
	if n < len(text) && (text[n] == '+' || text[n] == '-') {
		n++
	}
	from := n
	for n < len(text) && isDigit(text[n]) {
		n++
	}
	if n == from {
		return 0
	}
	return n
}

func isDigit(c byte) bool { return '0' <= c && c <= '9' }

func isHex(c byte) bool { return isDigit(c) || 'a' <= c|0x20 && c|0x20 <= 'f' }

// wellSpelt says whether the text is a number by the grammar of Parse.
func wellSpelt(number string) bool {
	s := strings.TrimPrefix(number, "-")
	if s == number {
		s = strings.TrimPrefix(number, "+")
	}
	n := digits(s)
	if n == 0 || n > 1 && s[0] == '0' {
		return false
	}
	s = s[n:]
	if strings.HasPrefix(s, ".") {
		n = digits(s[1:])
		if n == 0 {
			return false
		}
		s = s[1+n:]
	}
	if s == "" {
		return true
	}
	return (s[0] == 'e' || s[0] == 'E') && exponent(s[1:]) == len(s)-1 && len(s) > 1
}

// digits counts the digits at the start of the text.
func digits(s string) int {
	n := 0
	for n < len(s) && isDigit(s[n]) {
		n++
	}
	return n
}

// longest is the largest number of characters that a number may have. It leaves room for every float64 written out.
const longest = 400

// misspelt returns an error that says what to write instead of a number that Parse does not read, and nil for one
// that it does. The text is quoted in it, and the unit repeated.
func misspelt(text, number, unit string) error {
	if len(number) > longest {
		return fmt.Errorf("%s: a number has at most %d characters", quote(text), longest)
	}
	if wellSpelt(number) {
		return nil
	}
	if strings.HasPrefix(unit, ":") { // a time of day
		return fmt.Errorf("%s: one decimal number is wanted, such as 12 or 0.5", quote(text))
	}
	if len(unit) > 20 { // no unit that is known, and too long to repeat
		unit = ""
	}
	if unit != "" {
		unit = " " + unit
	}
	write := func(why string, right ...string) error {
		for i := range right {
			right[i] += unit
		}
		return fmt.Errorf("%s: %s; write %s", quote(text), why, strings.Join(right, " or "))
	}
	if lower := strings.ToLower(strings.TrimLeft(number, "+-")); strings.HasPrefix(lower, "0x") {
		if v, err := strconv.ParseUint(lower[2:], 16, 53); err == nil {
			return write("numbers are decimal", strconv.FormatUint(v, 10))
		}
		return fmt.Errorf("%s: numbers are decimal; hexadecimal is not read", quote(text))
	}
	s := strings.NewReplacer("\u2212", "-", "\u2013", "-").Replace(number)
	if s != number && wellSpelt(s) {
		return write("the minus sign is a hyphen", s)
	}
	sign := ""
	if s[0] == '+' || s[0] == '-' {
		sign, s = s[:1], s[1:]
	}
	if joined := groups(s); wellSpelt(joined) {
		if point := strings.Replace(s, ",", ".", 1); point != s && wellSpelt(point) {
			return write("thousands are not marked, and a decimal point is a full stop", sign+joined, sign+point)
		}
		return write("thousands are not marked", sign+joined)
	}
	if point := strings.Replace(s, ",", ".", 1); point != s && wellSpelt(point) {
		return write("a decimal point is a full stop", sign+point)
	}
	if joined := strings.ReplaceAll(s, "_", ""); joined != s && wellSpelt(joined) {
		return write("digits are not grouped", sign+joined)
	}
	if strings.HasPrefix(s, ".") && wellSpelt("0"+s) {
		return write("a digit stands before the point", sign+"0"+s)
	}
	if cut := strings.TrimSuffix(s, "."); cut != s && wellSpelt(cut) {
		return write("a digit stands after the point", sign+cut)
	}
	if cut := strings.TrimLeft(s, "0"); cut != s {
		if cut == "" || !isDigit(cut[0]) {
			cut = "0" + cut
		}
		if wellSpelt(cut) {
			return write("a number does not begin with a zero that means nothing", sign+cut)
		}
	}
	if whole, rest, ok := strings.Cut(s, ","); ok && wellSpelt(pointed(whole)+"."+rest) {
		return write("thousands are not marked, and a decimal point is a full stop", sign+pointed(whole)+"."+rest)
	}
	return fmt.Errorf("%s: one decimal number is wanted, such as 12 or 0.5", quote(text))
}

// pointed removes the points between groups of three digits, and returns "" for a text that is not grouped so.
func pointed(s string) string {
	if !strings.Contains(s, ".") || strings.Contains(s, ",") {
		return ""
	}
	return groups(strings.ReplaceAll(s, ".", ","))
}

// groups removes the marks between groups of three digits, with a decimal part allowed after them, and returns ""
// for a text that is not grouped so.
func groups(s string) string {
	for _, mark := range []string{",", " ", "_", "'", "\u2019"} {
		parts := strings.Split(s, mark)
		if len(parts) < 2 || len(parts[0]) < 1 || len(parts[0]) > 3 || digits(parts[0]) != len(parts[0]) {
			continue
		}
		ok := true
		for i, p := range parts[1:] {
			n := digits(p)
			ok = ok && n == 3 && (n == len(p) || i == len(parts)-2 && p[n] == '.')
		}
		if ok {
			return strings.Join(parts, "")
		}
	}
	return ""
}

// notFinite says what to do about the spellings of infinity and of not-a-number.
func notFinite(text string) string {
	switch strings.TrimLeft(strings.ToLower(text), "+-.") {
	case "inf", "infinity", "∞":
		return "an infinite number is not accepted"
	case "nan":
		return "a number is wanted"
	}
	return ""
}

// notANumber explains a text that does not begin with a number.
func notANumber(text, rest string, kind Kind) error {
	want := fmt.Sprintf("; write %s such as %s", kind, example(kind))
	if fix := notFinite(rest); fix != "" {
		return fmt.Errorf("%s: %s%s", quote(text), fix, want)
	}
	if m := ornament.FindStringSubmatch(text); m != nil {
		if _, err := Parse(m[1], kind); err == nil {
			return fmt.Errorf("%s is not %s; write %s", quote(text), kind, m[1])
		}
	}
	return fmt.Errorf("%s is not %s%s", quote(text), kind, strings.Replace(want, kind.String(), "a number with its unit,", 1))
}

// ornament matches a quantity with signs or a word around it that mean more or less, or with the quotes of a word
// processor.
var ornament = regexp.MustCompile("^(?i:[~≈<>=≤≥“”„«»‘’\"'` ]+|(?:ca|c|approx|about|circa|around)\\.? )+([-+]?[0-9].*?)[“”„«»‘’\"'` ]*$")

// example is a quantity of the kind, to show the form.
func example(kind Kind) string {
	number := map[Kind]string{Rate: "0.01", Share: "8", Change: "+8", Conductivity: "0.02"}[kind]
	if number == "" {
		number = "12"
	}
	return number + " " + kind.Unit()
}

// orList joins words as "a, b or c".
func orList(words []string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " or " + words[len(words)-1]
}

// quote quotes a text for a message and cuts a long one.
func quote(text string) string {
	const most = 60
	if r := []rune(text); len(r) > most {
		text = strings.TrimRightFunc(string(r[:most]), unicode.IsSpace) + "…"
	}
	return strconv.Quote(text)
}
