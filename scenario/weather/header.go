package weather

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"
	"unicode"

	"quietslope/scenario/fault"
)

// columns says where in a row the columns of the study stand.
type columns struct {
	sep                   byte
	comma                 bool // a comma is a decimal mark
	width                 int  // fields in a row
	timeAt, rainAt, petAt int  // petAt is -1 without evapotranspiration
}

// separators in the order in which a tie is decided.
const separators = "\t;,"

// lookAhead is the number of lines searched for the header when the first line is none, for a better message only.
const lookAhead = 200

// header reads the first line and finds the separator and the columns.
func (r *reader) header() error {
	b, err := r.firstLine()
	if err != nil {
		return err
	}
	wanted := []string{r.src.Time, r.src.Rain.Name}
	if r.src.PET != nil {
		wanted = append(wanted, r.src.PET.Name)
	}
	for i, name := range wanted {
		if j := slices.Index(wanted, name); j < i {
			return r.fatal(0, "the study names column %q both for %s and for %s", name, role[j], role[i])
		}
	}
	sep, names := separatorOf(b, wanted)
	if !hasAll(names, wanted) {
		return r.missingColumns(names, wanted)
	}
	at := []int{0, 0, -1}
	for i, name := range wanted {
		at[i] = slices.Index(names, name)
		if again := slices.Index(names[at[i]+1:], name); again >= 0 {
			r.problem(r.line, name, "the header has this name twice, in columns %d and %d; rename one", at[i]+1, at[i]+again+2)
		}
	}
	if len(r.problems) > 0 {
		return errStop
	}
	r.columns = columns{sep: sep, comma: sep != ',', width: len(names), timeAt: at[0], rainAt: at[1], petAt: at[2]}
	return nil
}

var role = [...]string{"time", "rain", "pet"}

// firstLine reads the first line without a byte-order mark.
func (r *reader) firstLine() ([]byte, error) {
	start, err := r.in.Peek(4)
	switch {
	case bytes.HasPrefix(start, []byte("\xff\xfe")), bytes.HasPrefix(start, []byte("\xfe\xff")):
		return nil, r.fatal(0, "the file is text in UTF-16; %s", saveAsText)
	case bytes.HasPrefix(start, []byte("PK\x03\x04")):
		return nil, r.fatal(0, "the file is a spreadsheet or a zip archive; %s", saveAsText)
	case err != nil && err != io.EOF:
		return nil, r.unreadable(err)
	}
	b, err := r.next()
	if err == nil {
		b = bytes.TrimPrefix(b, []byte("\ufeff"))
	}
	for err == nil && len(bytes.Trim(b, blanks)) == 0 && r.line < maxBlank {
		b, err = r.next()
	}
	switch {
	case err == io.EOF:
		return nil, r.fatal(0, "the file is empty")
	case err != nil:
		return nil, err
	case r.line > 1:
		return nil, r.fatal(1, "the line is blank; the first line must be the header with the names of the columns")
	case bytes.IndexByte(b, '\r') >= 0:
		return nil, r.fatal(1, "the lines end in a carriage return alone; save the file with line feeds")
	}
	return b, nil
}

// separatorOf takes a header apart by the separator under which the wanted names stand in it, otherwise by the one that
// occurs most often.
func separatorOf(header []byte, wanted []string) (sep byte, names []string) {
	sep, names = ',', namesIn(header, ',')
	for _, c := range []byte(separators) {
		n := namesIn(header, c)
		if hasAll(n, wanted) {
			return c, n
		}
		if len(n) > len(names) {
			sep, names = c, n
		}
	}
	return sep, names
}

func hasAll(names, wanted []string) bool {
	for _, w := range wanted {
		if !slices.Contains(names, w) {
			return false
		}
	}
	return true
}

// namesIn returns the names of a header; nil when its quotes do not fit.
func namesIn(header []byte, sep byte) []string {
	r := reader{columns: columns{sep: sep}}
	if why, open := r.cut(header); why != nil || open {
		return nil
	}
	names := make([]string, len(r.fields))
	for i, f := range r.fields {
		names[i] = string(bytes.Trim(f, blanks))
	}
	return names
}

// missingColumns says which columns the header lacks and what may have been meant.
func (r *reader) missingColumns(names, wanted []string) error {
	first := r.line
	if at := r.headerBelow(wanted); at > 0 {
		return r.fatal(first, "the first line is not the header; line %d has the columns %s. Delete the lines above it; "+
			"text before the header is not supported yet", at, quoteList(wanted))
	}
	if len(names) < 2 {
		what := "no comma, semicolon or tab to separate them"
		if names == nil {
			what = "quotes that do not fit"
		}
		return r.fatal(first, "the first line must be the header with the names of the columns (%s), but it has %s",
			quoteList(wanted), what)
	}
	hint := ""
	if slices.ContainsFunc(names, func(n string) bool { _, ok := parseNumber([]byte(n), true); return ok }) {
		hint = "; the first line must be the header, and this one has numbers"
	}
	near := map[string]string{}
	for _, w := range wanted {
		if n := meantColumn(w, names); n != "" && !slices.Contains(wanted, n) {
			near[w] = fmt.Sprintf("; is %q meant?", n)
		}
	}
	if len(near) == 0 && !slices.ContainsFunc(names, func(n string) bool { return slices.Contains(wanted, n) }) {
		return r.fatal(first, "the header has none of the columns %s, only %s%s", quoteList(wanted), quoteList(names), hint)
	}
	for _, w := range wanted {
		if slices.Contains(names, w) {
			continue
		}
		r.problem(first, w, "the header has no such column, only %s%s%s", quoteList(names), near[w], hint)
	}
	return errStop
}

// meantColumn is the column that a name may stand for: one with the same letters, one close to it, or the one that a
// spreadsheet's letter or a number counts to. It is "" where there is none.
func meantColumn(name string, names []string) string {
	letters := func(s string) string {
		s, _, _ = strings.Cut(strings.ReplaceAll(s, "(", "["), " [") // without a unit
		return strings.Map(func(c rune) rune {
			if unicode.IsLetter(c) || unicode.IsDigit(c) {
				return unicode.ToLower(c)
			}
			return -1
		}, s)
	}
	for _, n := range names {
		if letters(n) == letters(name) {
			return n
		}
	}
	if n := fault.Nearest(name, names); n != "" {
		return n
	}
	at, err := strconv.Atoi(name)
	if len(name) == 1 && name[0]|0x20 >= 'a' && name[0]|0x20 <= 'z' {
		at, err = int(name[0]|0x20-'a')+1, nil
	}
	if err == nil && at >= 1 && at <= len(names) {
		return names[at-1]
	}
	return ""
}

// headerBelow looks for the header in the lines below the first; 0 when it is not there.
func (r *reader) headerBelow(wanted []string) int {
	problems := r.problems
	for range lookAhead {
		b, err := r.next()
		if err != nil {
			r.problems = problems
			return 0
		}
		if _, names := separatorOf(b, wanted); hasAll(names, wanted) {
			return r.line
		}
	}
	return 0
}

// quoteList writes names for a message, cut short where there are many.
func quoteList(names []string) string {
	const most = 20
	var b strings.Builder
	for i, n := range names {
		if i == most {
			fmt.Fprintf(&b, " and %d more", len(names)-most)
			break
		}
		if i > 0 {
			b.WriteString(", ")
		}
		if len(n) > 40 {
			n = strings.ToValidUTF8(n[:40], "") + "…"
		}
		fmt.Fprintf(&b, "%q", n)
	}
	return b.String()
}

// split cuts a row into its fields. It returns false after noting a problem.
func (r *reader) split(b []byte) (ok bool, err error) {
	line := r.line
	why, open := r.cut(b)
	for open && why == nil { // a line end inside quotes belongs to the field (RFC 4180, section 2)
		r.joined = append(append(r.joined[:0], b...), '\n')
		more, err := r.next()
		if err == io.EOF {
			why = wrong("a quote is opened but never closed")
			break
		}
		if err != nil {
			return false, err
		}
		r.joined = append(r.joined, more...)
		b = r.joined
		if len(b) > maxLine {
			return false, r.fatal(line, "the row is longer than 64 kB; is this the right file?")
		}
		why, open = r.cut(b)
	}
	if why != nil {
		r.inRow(line, "", why)
		return false, nil
	}
	return true, nil
}

// cut cuts a line into r.fields. It returns what is wrong with the line, and whether a quote is still open at its end.
func (r *reader) cut(b []byte) (why *trouble, open bool) {
	r.fields = r.fields[:0]
	if bytes.IndexByte(b, '"') >= 0 {
		why, open = r.cutQuoted(b)
	} else {
		rest := b
		for {
			i := bytes.IndexByte(rest, r.sep)
			if i < 0 {
				break
			}
			r.fields = append(r.fields, rest[:i])
			rest = rest[i+1:]
		}
		r.fields = append(r.fields, rest)
	}
	if len(b) > maxField && why == nil {
		for i, f := range r.fields {
			if len(f) > maxField {
				return wrong("field %d is longer than %d bytes (%q…); is a quote or a separator missing?", i+1, maxField, f[:20]), false
			}
		}
	}
	return why, open
}

// cutQuoted is cut for a line with quotes (RFC 4180): a field in quotes may hold separators and, doubled, quotes.
func (r *reader) cutQuoted(b []byte) (why *trouble, open bool) {
	r.quoted = r.quoted[:0]
	for {
		i := 0
		for i < len(b) && b[i] == ' ' {
			i++
		}
		if i == len(b) || b[i] != '"' {
			if i = bytes.IndexByte(b, r.sep); i < 0 {
				i = len(b)
			}
			if bytes.IndexByte(b[:i], '"') >= 0 {
				return wrong("there is a quote inside field %d; put the whole field in quotes and double the quotes inside it",
					len(r.fields)+1), false
			}
			r.fields = append(r.fields, b[:i])
		} else {
			start := len(r.quoted)
			for {
				i++ // past a quote
				n := bytes.IndexByte(b[i:], '"')
				if n < 0 {
					r.fields = append(r.fields, b[i:])
					return nil, true
				}
				r.quoted = append(r.quoted, b[i:i+n]...)
				if i += n + 1; i == len(b) || b[i] != '"' {
					break
				}
				r.quoted = append(r.quoted, '"')
			}
			r.fields = append(r.fields, r.quoted[start:])
			for i < len(b) && b[i] == ' ' {
				i++
			}
			if i < len(b) && b[i] != r.sep {
				return wrong("there is text after the closing quote of field %d", len(r.fields)), false
			}
		}
		if i == len(b) {
			return nil, false
		}
		b = b[i+1:]
	}
}
