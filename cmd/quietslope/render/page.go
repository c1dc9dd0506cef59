package render

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"

	"github.com/clipperhouse/displaywidth"
)

// Page is what a command says to people, block by block. Text and Markdown write it: the words, the figures and their
// order are the same in both.
//
// Blocks hold plain text, without any markup, and a name from a study stands in them as it was written there.
type Page struct{ blocks []block }

// block is one of the types below.
type block any

type (
	title string
	para  string   // running text
	gap   struct{} // a blank line, where blocks are not set apart anyway
)

// heading starts a section, or an inner part of the one before.
type heading struct {
	text  string
	inner bool
}

// item is an entry of a list.
type item struct {
	kind   itemKind
	label  string
	indent int // column at which the words of a text begin
	words  string
}

type itemKind int

const (
	named    itemKind = iota // what the entry is about, then what is said of it
	lettered                 // the letter of an option, then its name
	numbered                 // a number that the page refers to
	plain                    // no label
	below                    // a further line of the entry before
)

// table has a first column of labels and further columns of cells. Where it is too wide for the page of the text, the
// labels give way.
type table struct {
	caption string     // what it holds, where no heading or paragraph says so
	first   string     // head of the labels
	head    [][]string // lines of the head, each with one text per further column
	groups  []string   // what columns have in common, for each; nil for none
	cut     bool       // whether groups may be set below each other where they do not fit side by side
	left    []bool     // columns aligned to the left; nil for none
	labels  []label
	rows    [][]string
}

// label begins a row: an option's letter and name, or a name alone.
type label struct{ key, name string }

// listing lists keys of a study.
type listing []entry

// entry is a key with its value, the options that it is about, and whether it is marked.
type entry struct {
	key, value, options string
	mark                bool
}

// grid lists short pairs of a name and a figure, some with a remark.
type grid struct {
	head  []string // of the names, the figures and the remarks
	rows  [][]string
	width int // of the figures
}

func (p *Page) add(b block) { p.blocks = append(p.blocks, b) }

func (p *Page) gap() { p.add(gap{}) }

func (p *Page) title(text string) { p.add(title(clean(text))) }

// heading starts a section.
func (p *Page) heading(format string, args ...any) {
	p.add(heading{text: clean(fmt.Sprintf(format, args...))})
}

// innerHeading starts a part of the section before.
func (p *Page) innerHeading(format string, args ...any) {
	p.add(heading{text: clean(fmt.Sprintf(format, args...)), inner: true})
}

// para appends running text.
func (p *Page) para(format string, args ...any) { p.add(para(clean(fmt.Sprintf(format, args...)))) }

// item appends an entry of a list.
func (p *Page) item(kind itemKind, label, words string) {
	indent := 5
	switch kind {
	case named:
		indent = 16
	case plain:
		indent = 4
	}
	p.add(item{kind, clean(label), indent, clean(words)})
}

// field appends a named entry of a list.
func (p *Page) field(name, format string, args ...any) {
	p.item(named, name, fmt.Sprintf(format, args...))
}

// table appends a table, unless it has no rows.
func (p *Page) table(t table) {
	if len(t.rows) == 0 {
		return
	}
	labels := slices.Clone(t.labels)
	for i := range labels {
		labels[i].name = clean(labels[i].name)
	}
	t.labels = labels
	p.add(t)
}

// columns are the table with those columns only for which keep holds.
func (t table) columns(keep func(int) bool) table {
	pick := func(row []string) []string {
		var out []string
		for c, cell := range row {
			if keep(c) {
				out = append(out, cell)
			}
		}
		return out
	}
	out := t
	out.head, out.rows, out.left = nil, nil, nil
	for _, r := range t.head {
		out.head = append(out.head, pick(r))
	}
	for _, r := range t.rows {
		out.rows = append(out.rows, pick(r))
	}
	for c, left := range t.left {
		if keep(c) {
			out.left = append(out.left, left)
		}
	}
	if t.groups != nil {
		out.groups = pick(t.groups)
	}
	return out
}

// dropEmpty leaves out the columns whose cells are all empty.
func (t table) dropEmpty() table {
	return t.columns(func(c int) bool {
		return slices.ContainsFunc(t.rows, func(r []string) bool { return r[c] != "" })
	})
}

// clean keeps text that came from a file from steering the terminal.
func clean(text string) string {
	return strings.Map(func(r rune) rune {
		if r == '\n' || r == '\t' {
			return ' '
		}
		switch {
		case r == '\u200c', r == '\u200d': // they join letters of some scripts, or keep them apart
			return r
		case r == '\u00ad', r == '\u200b': // where a word may be broken
			return -1
		case !unicode.IsGraphic(r):
			return unicode.ReplacementChar
		}
		return r
	}, text)
}

// column joins figures and their ranges into cells: the figures with their decimal points below each other, the
// ranges in a column of their own. Words, where no figure stands among them, begin below each other.
type column struct{ values, ranges []string }

func (c *column) add(value, ranged string) {
	c.values, c.ranges = append(c.values, value), append(c.ranges, ranged)
}

// sideBySide are the cells of columns, row by row.
func sideBySide(columns ...column) [][]string {
	rows := make([][]string, len(columns[0].values))
	for _, c := range columns {
		for i, cell := range c.cells() {
			rows[i] = append(rows[i], cell)
		}
	}
	return rows
}

func (c *column) cells() []string {
	whole, part := 0, 0
	split := func(v string) (string, string) {
		if i := strings.IndexByte(v, '.'); i >= 0 {
			return v[:i], v[i:]
		}
		return v, ""
	}
	for _, v := range c.values {
		a, b := split(v)
		whole, part = max(whole, displaywidth.String(a)), max(part, displaywidth.String(b))
	}
	words := !slices.ContainsFunc(c.values, func(v string) bool {
		first, _ := utf8.DecodeRuneInString(v)
		return v != "" && !unicode.IsLetter(first)
	})
	cells := make([]string, len(c.values))
	for i, v := range c.values {
		a, b := split(v)
		if words {
			cells[i] = strings.TrimRight(pad(v, whole+part)+" "+c.ranges[i], " ")
			continue
		}
		cells[i] = strings.TrimRight(strings.Repeat(" ", whole-displaywidth.String(a))+a+pad(b, part)+" "+c.ranges[i], " ")
	}
	return cells
}
