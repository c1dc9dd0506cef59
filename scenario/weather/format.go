package weather

import (
	"bytes"
	"errors"
	"fmt"
	"slices"
	"strings"
	"time"
)

// isoFormat is the name of the format of RFC 3339 date-times.
const isoFormat = "iso"

// Years outside these limits are taken for mistyped: no record of rain is older, and no study looks further ahead.
const (
	firstYear = 1600
	lastYear  = 2500
)

// Parts of a time, in the order of the tokens.
const (
	year = iota
	month
	dayOfMonth
	hour
	minute
	second
	parts
)

var tokens = [parts]string{"YYYY", "MM", "DD", "hh", "mm", "ss"}

// layout is a time format taken apart. Every part has a fixed width, so each stands at a fixed place.
type layout struct {
	format   string
	iso      bool
	at       [parts]int // where the part begins, -1 when the format lacks it
	literals []literal

	// The day of the last time read. Rows of one day follow each other, and the calendar is the slow part.
	y, m, d  int
	midnight int64
}

type literal struct {
	at int
	c  byte
}

// CheckFormat says whether a time format can be used: YYYY, MM, DD, hh, mm and ss with literal characters, or iso.
// MM is the month and mm the minute. A format must have year and month; hh needs DD, mm needs hh and ss needs mm. Without
// DD it can tell months only. For a format that comes close the error gives the right spelling.
func CheckFormat(format string) error {
	_, err := newLayout(format)
	return err
}

func newLayout(format string) (*layout, error) {
	l, err := compile(format)
	if err == nil {
		return l, nil
	}
	meant := meantFormat(format)
	if formats := formatsOf(format); len(formats) > 0 { // a time in place of the format
		meant = formats[0]
	}
	if meant != "" && meant != format {
		return nil, fmt.Errorf("%q is not a time format: %w; write %q", format, err, meant)
	}
	return nil, fmt.Errorf("%q is not a time format: %w; write one such as %q, or iso", format, err, "YYYY-MM-DD hh:mm")
}

// compile takes a format apart, from left to right.
func compile(format string) (*layout, error) {
	l := &layout{format: format, iso: format == isoFormat}
	if l.iso {
		return l, nil
	}
	switch {
	case format == "":
		return nil, errors.New("it is empty")
	case len(format) > 64:
		return nil, errors.New("it is longer than 64 characters")
	case strings.Trim(format, blanks) != format:
		return nil, errors.New("it begins or ends with a blank")
	}
	for p := range l.at {
		l.at[p] = -1
	}
	word := 0 // where the letters before i begin that are no token
	for i := 0; i < len(format); {
		c := format[i]
		if c < ' ' || c == 0x7f {
			return nil, errors.New("it has a control character")
		}
		end := i + 1 // of the run of one letter
		for isLetter(c) && end < len(format) && format[end] == c {
			end++
		}
		p := slices.Index(tokens[:], format[i:end])
		if p >= 0 || !isLetter(c) {
			if err := checkWord(format[word:i]); err != nil {
				return nil, err
			}
			word = end
		}
		if p < 0 {
			for ; i < end; i++ {
				l.literals = append(l.literals, literal{i, c})
			}
			continue
		}
		if l.at[p] >= 0 {
			return nil, fmt.Errorf("%s stands twice", tokens[p])
		}
		l.at[p], i = i, end
	}
	if err := checkWord(format[word:]); err != nil {
		return nil, err
	}
	for _, p := range []int{year, month} {
		if l.at[p] < 0 {
			return nil, fmt.Errorf("it has no %s", tokens[p])
		}
	}
	for _, p := range []int{hour, minute, second} {
		if l.at[p] >= 0 && l.at[p-1] < 0 {
			return nil, fmt.Errorf("it has %s but no %s", tokens[p], tokens[p-1])
		}
	}
	return l, nil
}

// hasDay says whether times in the format tell the day.
func (l *layout) hasDay() bool { return l.iso || l.at[dayOfMonth] >= 0 }

func isLetter(c byte) bool { return 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' }

// checkWord refuses literal letters that look like a part of a time in another spelling. Words such as T, Z, UTC and Uhr
// are literal characters.
func checkWord(w string) error {
	const partLetters = "YyMmDdHhSs"
	if w == "" {
		return nil
	}
	if strings.EqualFold(w, "am") || strings.EqualFold(w, "pm") {
		return errors.New("a clock of twelve hours is not supported")
	}
	if strings.EqualFold(w, "yy") {
		return errors.New("a year of two digits could be of any century, so all four are needed")
	}
	if strings.Trim(w, partLetters) == "" {
		return fmt.Errorf("%q is none of YYYY MM DD hh mm ss", w)
	}
	for i := 1; i < len(w); i++ {
		if w[i] == w[i-1] && strings.IndexByte(partLetters, w[i]) >= 0 {
			return fmt.Errorf("%q is none of YYYY MM DD hh mm ss", w[i-1:i+1])
		}
	}
	return nil
}

// meantFormat guesses the spelling that was meant: another case, another number of letters, or the letters and digits
// that other programs use for the same parts. It returns "" when the guess would be no format either.
func meantFormat(format string) string {
	if strings.EqualFold(strings.TrimSpace(format), isoFormat) || strings.EqualFold(strings.TrimSpace(format), "ISO8601") ||
		strings.EqualFold(strings.TrimSpace(format), "ISO 8601") || strings.EqualFold(strings.TrimSpace(format), "RFC3339") {
		return isoFormat
	}
	in := strings.NewReplacer(
		"%Y", "YYYY", "%m", "MM", "%d", "DD", "%H", "hh", "%M", "mm", "%S", "ss", "%F", "YYYY-MM-DD", "%T", "hh:mm:ss",
		"2006", "YYYY", "01", "MM", "02", "DD", "15", "hh", "04", "mm", "05", "ss", "'", "",
	).Replace(strings.TrimSpace(format))
	var out strings.Builder
	last := -1
	for i := 0; i < len(in); {
		c := in[i] | 0x20 // lower case
		end := i
		for end < len(in) && in[end]|0x20 == c && isLetter(in[end]) {
			end++
		}
		p := -1
		switch {
		case end == i:
		case c == 'y', (c == 'j' || c == 'a') && end-i == 4: // Jahr, année, año
			p = year
		case c == 'd', (c == 't' || c == 'j') && end-i == 2: // Tag, jour
			p = dayOfMonth
		case c == 'h':
			p = hour
		case c == 's':
			p = second
		case c == 'm' && (last == hour || in[i:end] == "mm" && last != year && strings.Contains(in, "MM")):
			p = minute
		case c == 'm':
			p = month
		}
		if p < 0 {
			out.WriteByte(in[i])
			i++
			continue
		}
		out.WriteString(tokens[p])
		last, i = p, end
	}
	if _, err := compile(out.String()); err != nil {
		return ""
	}
	return out.String()
}

// text writes a time in the format. The zone is what iso ends with.
func (l *layout) text(t time.Time, zone string) string {
	if l.iso {
		return t.Format("2006-01-02T15:04:05") + zone
	}
	b := []byte(l.format)
	y, mo, d := t.Date()
	h, mi, s := t.Clock()
	for p, v := range [parts]int{y, int(mo), d, h, mi, s} {
		if l.at[p] < 0 {
			continue
		}
		for i := l.at[p] + len(tokens[p]) - 1; i >= l.at[p]; i-- {
			b[i] = byte('0' + v%10)
			v /= 10
		}
	}
	return string(b)
}

// number reads w digits at i; -1 when one of them is none. There must be w bytes.
func number(b []byte, i, w int) int {
	v := 0
	for _, c := range b[i : i+w] {
		if c -= '0'; c > 9 {
			return -1
		}
		v = v*10 + int(c)
	}
	return v
}

// parse reads a time: seconds since 1970 and, for iso, the offset from UTC in seconds east. A civil time is read as if
// it were UTC. It says only whether the text is a time; explain says why it is not.
func (l *layout) parse(b []byte) (unix, offset int64, ok bool) {
	if l.iso {
		return l.parseISO(b)
	}
	if len(b) != len(l.format) {
		return 0, 0, false
	}
	for _, c := range l.literals {
		if b[c.at] != c.c {
			return 0, 0, false
		}
	}
	d := 1
	if i := l.at[dayOfMonth]; i >= 0 {
		d = number(b, i, 2)
	}
	unix, ok = l.dayOf(number(b, l.at[year], 4), number(b, l.at[month], 2), d)
	if !ok {
		return 0, 0, false
	}
	if i := l.at[hour]; i >= 0 {
		v := number(b, i, 2)
		if v < 0 || v > 23 {
			return 0, 0, false
		}
		unix += int64(v) * 3600
	}
	if i := l.at[minute]; i >= 0 {
		v := number(b, i, 2)
		if v < 0 || v > 59 {
			return 0, 0, false
		}
		unix += int64(v) * 60
	}
	if i := l.at[second]; i >= 0 {
		v := number(b, i, 2)
		if v < 0 || v > 59 {
			return 0, 0, false
		}
		unix += int64(v)
	}
	return unix, 0, true
}

// parseISO reads an RFC 3339 date-time. A fraction of a second must be zero.
func (l *layout) parseISO(b []byte) (unix, offset int64, ok bool) {
	const whole = len("2006-01-02T15:04:05")
	if len(b) <= whole || b[4] != '-' || b[7] != '-' || b[10]|0x20 != 't' && b[10] != ' ' || b[13] != ':' || b[16] != ':' {
		return 0, 0, false
	}
	unix, ok = l.dayOf(number(b, 0, 4), number(b, 5, 2), number(b, 8, 2))
	h, m, s := number(b, 11, 2), number(b, 14, 2), number(b, 17, 2)
	if !ok || h < 0 || h > 23 || m < 0 || m > 59 || s < 0 || s > 59 {
		return 0, 0, false
	}
	unix += int64(h*3600 + m*60 + s)
	zone := b[whole:]
	if zone[0] == '.' {
		n := len(zone)
		zone = bytes.TrimLeft(zone[1:], "0")
		if len(zone) == 0 || n-len(zone) < 2 {
			return 0, 0, false
		}
	}
	switch {
	case len(zone) == 1 && zone[0]|0x20 == 'z':
		return unix, 0, true
	case len(zone) == 6 && (zone[0] == '+' || zone[0] == '-') && zone[3] == ':':
		h, m := number(zone, 1, 2), number(zone, 4, 2)
		if h < 0 || h > 23 || m < 0 || m > 59 {
			return 0, 0, false
		}
		offset = int64(h*3600 + m*60)
		if zone[0] == '-' {
			offset = -offset
		}
		return unix - offset, offset, true
	}
	return 0, 0, false
}

// dayOf returns the start of a day of the proleptic Gregorian calendar as seconds since 1970.
func (l *layout) dayOf(y, m, d int) (unix int64, ok bool) {
	if d == l.d && m == l.m && y == l.y && y != 0 { // a year of 0 is a day that was never read
		return l.midnight, true
	}
	if y < firstYear || y > lastYear || m < 1 || m > 12 || d < 1 || d > daysIn(y, m) {
		return 0, false
	}
	l.y, l.m, l.d = y, m, d
	l.midnight = time.Date(y, time.Month(m), d, 0, 0, 0, 0, time.UTC).Unix()
	return l.midnight, true
}

func isLeap(y int) bool { return y%4 == 0 && (y%100 != 0 || y%400 == 0) }

func daysIn(y, m int) int {
	switch m {
	case 4, 6, 9, 11:
		return 30
	case 2:
		if isLeap(y) {
			return 29
		}
		return 28
	}
	return 31
}

// zoneOf returns the offset of an RFC 3339 date-time as written.
func zoneOf(b []byte) string {
	if n := len(b); n > 0 && b[n-1]|0x20 == 'z' {
		return "Z"
	}
	return string(b[len(b)-len("+00:00"):])
}

// read takes a text apart without judging the numbers; false when the text has another shape than the format.
func (l *layout) read(b []byte) (v [parts]int, ok bool) {
	if len(b) != len(l.format) {
		return v, false
	}
	for _, c := range l.literals {
		if b[c.at] != c.c {
			return v, false
		}
	}
	v[dayOfMonth] = 1
	for p := range v {
		if l.at[p] < 0 {
			continue
		}
		if v[p] = number(b, l.at[p], len(tokens[p])); v[p] < 0 {
			return v, false
		}
	}
	return v, true
}

// explain says why a text that parse refuses is no time in the format, and what one looks like.
func (l *layout) explain(b []byte) *trouble {
	if len(b) == 0 {
		return wrong(`"" is no time; every row needs one`)
	}
	if l.iso {
		return l.explainISO(string(b))
	}
	if v, ok := l.read(b); ok {
		if d := v[dayOfMonth]; v[month] > 12 && v[month] <= 31 && d >= 1 && d <= 12 && l.hasDay() {
			return wrong("%q has no month %d; write the format as %s if that is the day", b, v[month], swapped(l.format))
		}
		return wrongPart(b, v)
	}
	return wrong("%q does not match the format %s, in which a time reads %q%s", b, l.format,
		l.text(time.Date(2019, 3, 31, 14, 5, 0, 0, time.UTC), ""), l.meantTime(string(b)))
}

func (l *layout) explainISO(text string) *trouble {
	const (
		shape   = "YYYY-MM-DDThh:mm:ss"
		toMin   = len("YYYY-MM-DDThh:mm")
		sample  = "2019-03-31T14:05:00+01:00"
		noMatch = "%q does not match the format iso, in which a time reads " + sample
	)
	// Seconds that are left out are put in, so that the rest can be looked at.
	full := text
	short := len(text) == toMin || len(text) > toMin && text[toMin] != ':'
	if short {
		full = text[:toMin] + ":00" + text[toMin:]
	}
	civil, err := compile(shape)
	if err != nil || len(full) < len(shape) {
		if len(text) == len(time.DateOnly) {
			return wrong(noMatch+"; for dates alone write the format as YYYY-MM-DD", text)
		}
		return wrong(noMatch, text)
	}
	b := []byte(full[:len(shape)])
	mark := b[10]
	if mark == ' ' || mark == 't' {
		b[10] = 'T'
	}
	v, ok := civil.read(b)
	if !ok {
		return wrong(noMatch, text)
	}
	if _, _, ok := civil.parse(b); !ok {
		return wrongPart([]byte(text), v)
	}
	switch zone := full[len(shape):]; {
	case short && zone == "":
		return wrong("%q has neither seconds nor an offset from UTC, which the format iso wants, such as "+sample+
			"; without both write the format as YYYY-MM-DD%chh:mm", text, mark)
	case short:
		if _, _, ok := l.parseISO([]byte(full)); !ok {
			return wrong(noMatch, text)
		}
		return wrong("%q has no seconds, which the format iso wants; write %s. A format such as YYYY-MM-DDThh:mm reads times without "+
			"seconds, but also without an offset", text, full)
	case zone == "":
		return wrong("%q has no offset from UTC, which the format iso wants, such as "+sample+"; without offsets write the format as YYYY-MM-DD%chh:mm:ss", text, mark)
	case zone[0] == '.':
		return wrong("%q has a fraction of a second that is not zero, or no offset after it; write whole seconds such as "+sample, text)
	}
	return wrong("%q has an offset from UTC that cannot be read; write Z or one such as +01:00", text)
}

// wrongPart says which of the parts of a time cannot be.
func wrongPart(b []byte, v [parts]int) *trouble {
	y, m, d := v[year], v[month], v[dayOfMonth]
	switch {
	case y < firstYear || y > lastYear:
		return wrong("%q is in the year %d; years from %d to %d are read", b, y, firstYear, lastYear)
	case m < 1 || m > 12:
		return wrong("%q has no month %d; is the order of day and month right in the format?", b, m)
	case d == 29 && m == 2 && !isLeap(y):
		return wrong("%q does not exist: %d is not a leap year", b, y)
	case d < 1 || d > daysIn(y, m):
		return wrong("%q does not exist: %s %d has %d days", b, time.Month(m), y, daysIn(y, m))
	case v[hour] == 24:
		return wrong("%q has the hour 24; write 00 of the next day", b)
	case v[hour] > 23:
		return wrong("%q has the hour %d; hours run from 00 to 23", b, v[hour])
	case v[minute] > 59:
		return wrong("%q has the minute %d; minutes run from 00 to 59", b, v[minute])
	}
	return wrong("%q has the second %d; seconds run from 00 to 59", b, v[second])
}
