package weather

import (
	"bytes"
	"slices"
	"strconv"
	"strings"
)

// powers of ten that a float64 holds exactly.
var powers = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15}

// parseNumber reads a decimal number,
//
//	[+-] digits [. digits] [(e|E) [+-] digits]
//
// with digits on at least one side of the mark, and a comma for a mark as well if comma is set. The result is the
// float64 nearest to the text. Anything else, NaN and infinities in any spelling included, is not a number.
func parseNumber(b []byte, comma bool) (v float64, ok bool) {
	i, n := 0, len(b)
	neg := false
	if n > 0 && (b[0] == '-' || b[0] == '+') {
		neg = b[0] == '-'
		i++
	}
	var m uint64 // the digits as a whole number, kept while there are 15 of them at most
	digits, frac, mark := 0, 0, -1
	for ; i < n; i++ {
		c := b[i]
		switch {
		case c-'0' < 10:
			if digits < len(powers)-1 {
				m = m*10 + uint64(c-'0')
			}
			digits++
			if mark >= 0 {
				frac++
			}
			continue
		case mark < 0 && (c == '.' || c == ',' && comma):
			mark = i
			continue
		}
		break
	}
	if digits == 0 {
		return 0, false
	}
	if i == n && digits < len(powers) {
		// Both operands are exact, so the one rounding of the division gives the nearest float64.
		v = float64(m) / powers[frac]
		if neg && m != 0 {
			v = -v
		}
		return v, true
	}
	if i < n && b[i] != 'e' && b[i] != 'E' {
		return 0, false
	}
	for j := i + 1; j < n; j++ {
		if c := b[j]; c-'0' >= 10 && c != '+' && c != '-' {
			return 0, false
		}
	}
	text := string(b)
	if mark >= 0 && b[mark] == ',' {
		text = text[:mark] + "." + text[mark+1:]
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, false
	}
	if v == 0 {
		v = 0 // no negative zero
	}
	return v, true
}

// codes are the texts that stand for a missing value.
type codes struct {
	numbers []float64
	texts   []string
}

func newCodes(missing []string, comma bool) codes {
	var c codes
	for _, m := range missing {
		m = strings.Trim(m, blanks)
		if v, ok := parseNumber([]byte(m), comma); ok {
			c.numbers = append(c.numbers, v)
		} else {
			c.texts = append(c.texts, m)
		}
	}
	return c
}

func (c *codes) hasNumber(v float64) bool { return slices.Contains(c.numbers, v) }

func (c *codes) hasText(cell []byte) bool {
	for _, t := range c.texts {
		if string(cell) == t {
			return true
		}
	}
	return false
}

// notNumber says why a cell is refused that is neither a number nor a missing code, and what to write.
func notNumber(cell []byte, comma bool, missing []string) *trouble {
	const orMissing = "if it stands for a missing value, list it in weather.missing%s"
	text := string(cell)
	list := listed(text, missing)
	if text == "" {
		return wrong(`"" is not a number; if a blank cell stands for a missing value, list "" in weather.missing`)
	}
	switch strings.ToLower(strings.TrimLeft(text, "+-")) {
	case "nan", "inf", "infinity":
		return wrong("%q is not accepted as a value; "+orMissing, text, list)
	}
	if _, err := strconv.ParseFloat(text, 64); err != nil && strings.Contains(err.Error(), strconv.ErrRange.Error()) {
		return wrong("%q is too large for a number", text)
	}
	point := bytes.Replace(cell, []byte{','}, []byte{'.'}, 1)
	if _, ok := parseNumber(point, false); ok && !comma {
		return wrong("%q has a decimal comma in a file whose columns are separated by commas; write %s, "+
			"or separate the columns by ; or tabs", text, point)
	}
	if bytes.ContainsAny(cell, ",") {
		return wrong("%q is not a number; write it without a thousands mark, with a point as decimal mark", text)
	}
	switch m := withMore.FindStringSubmatch(text); {
	case m != nil:
		return wrong("%q is a number with something after it; write %s alone, and its unit in the study", text, m[1])
	case below.MatchString(text):
		return wrong("%q is not a number; write 0 for a trace", text)
	case strings.EqualFold(text, "t"), strings.EqualFold(text, "tr"), strings.EqualFold(text, "trace"):
		return wrong("%q is not a number; write 0 for a trace, or, "+orMissing, text, list)
	}
	return wrong("%q is not a number; "+orMissing, text, list)
}
