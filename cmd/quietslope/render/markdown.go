package render

import (
	"bytes"
	"io"
	"regexp"
	"strings"

	"github.com/olekukonko/tablewriter"
	"github.com/olekukonko/tablewriter/renderer"
	"github.com/olekukonko/tablewriter/tw"
)

// Markdown writes the page as markdown: CommonMark with pipe tables (GitHub Flavored Markdown). Names are whole and not
// shortened. Whatever they hold, they read as they were written: no text of a page is taken for markup.
func (p *Page) Markdown(w io.Writer) error {
	var b bytes.Buffer
	for i, of := range p.blocks {
		if _, ok := of.(gap); ok {
			continue
		}
		if i > 0 && !sameList(p.blocks[i-1], of) {
			b.WriteByte('\n')
		}
		switch of := of.(type) {
		case title:
			b.WriteString("# " + escape(string(of)) + "\n")
		case heading:
			mark := "## "
			if of.inner {
				mark = "### "
			}
			b.WriteString(mark + escape(of.text) + "\n")
		case para:
			b.WriteString(escapeLine(string(of)) + "\n")
		case item:
			b.WriteString(of.markdown())
		case table:
			b.WriteString(of.markdown())
		case listing:
			b.WriteString(of.table().markdown())
		case grid:
			b.WriteString(of.table().markdown())
		}
	}
	_, err := w.Write(b.Bytes())
	return err
}

// sameList reports whether two blocks are entries of one list.
func sameList(a, b block) bool {
	before, ok := a.(item)
	if !ok {
		return false
	}
	next, ok := b.(item)
	return ok && (before.kind == numbered) == (next.kind == numbered)
}

// markdown is the entry with its mark.
func (i item) markdown() string {
	switch i.kind {
	case lettered:
		return "- **" + escape(i.label) + "** " + escape(i.words) + "\n"
	case numbered:
		return i.label + ". " + escapeLine(i.words) + "\n"
	case plain:
		return "- " + escapeLine(i.words) + "\n"
	case below:
		return "  - " + escapeLine(i.words) + "\n"
	default:
		return "- **" + escape(i.label) + "**: " + escape(i.words) + "\n"
	}
}

// markdown is the table with its bars in line. Of several lines of a head one is made.
func (t table) markdown() string {
	var b strings.Builder
	if t.caption != "" {
		b.WriteString(strings.ToUpper(t.caption[:1]) + escape(t.caption[1:]) + ":\n\n")
	}
	head, rows := t.cells()
	for c := range head {
		head[c] = escape(head[c])
	}
	for r := range rows {
		rows[r][0] = t.labels[r].markdown()
		for c := range rows[r][1:] {
			rows[r][c+1] = escape(rows[r][c+1])
		}
	}
	b.WriteString(drawTable(head, rows, t.left, tablewriter.WithRenderer(renderer.NewMarkdown()),
		tablewriter.WithPadding(tw.Padding{Left: " ", Right: " "})))
	return b.String()
}

// cells are the head and the rows of the table, with nothing that is there to align them.
func (t table) cells() (head []string, rows [][]string) {
	head = []string{t.first}
	for c := range t.head[0] {
		var words []string
		if t.groups != nil {
			words = append(words, t.groups[c])
		}
		for _, line := range t.head {
			if n := len(words); n > 0 && strings.HasPrefix(line[c], words[n-1]) {
				words = words[:n-1] // as of days, and below it days per year
			}
			words = append(words, line[c])
		}
		head = append(head, strings.TrimSpace(strings.Join(words, " ")))
	}
	for i, r := range t.rows {
		l := t.labels[i]
		row := []string{strings.TrimSpace(l.key + " " + l.name)}
		for _, cell := range r {
			row = append(row, strings.Join(strings.Fields(cell), " "))
		}
		rows = append(rows, row)
	}
	return head, rows
}

func (l label) markdown() string {
	if l.key == "" {
		return escape(l.name)
	}
	return "**" + escape(l.key) + "** " + escape(l.name)
}

// table is the listing as a table, without columns that are empty.
func (l listing) table() table {
	t := table{first: "key", head: [][]string{{"value", "options", "default"}}, left: []bool{true, true, true}}
	for _, e := range l {
		mark := ""
		if e.mark {
			mark = "*"
		}
		t.labels, t.rows = append(t.labels, label{name: e.key}), append(t.rows, []string{e.value, e.options, mark})
	}
	return t.dropEmpty()
}

// table is the grid as a table, without the column of remarks where there are none.
func (g grid) table() table {
	t := table{first: g.head[0], head: [][]string{g.head[1:]}}
	for _, r := range g.rows {
		t.labels, t.rows = append(t.labels, label{name: r[0]}), append(t.rows, r[1:])
	}
	return t.dropEmpty()
}

// escape writes plain text so that markdown shows just that text: a backslash before each character that could be taken
// for markup where it stands (CommonMark 0.31, section 2.4; GitHub Flavored Markdown 0.29, tables). It serves inside a
// line and in a cell of a table.
func escape(text string) string {
	text = strings.TrimSpace(text)
	var b strings.Builder
	at := func(i int) byte {
		if i < 0 || i >= len(text) {
			return ' '
		}
		return text[i]
	}
	for i := range len(text) {
		before, c, next := at(i-1), text[i], at(i+1)
		markup := false
		switch c {
		case '\\', '`', '*', '[', '|', '~', '$':
			markup = true
		case '_': // inside a word it is none
			markup = !alphanumeric(before) || !alphanumeric(next)
		case '<': // before a blank or a digit it begins no tag, but before a digit it may begin an address as in <1@a>
			inside, _, closed := strings.Cut(text[i+1:], ">")
			markup = latin(next) || next == '/' || next == '!' || next == '?' || closed && strings.Contains(inside, "@")
		case '&':
			markup = latin(next) || next == '#'
		case '#': // at the beginning and at the end of a heading
			markup = before == ' '
		}
		if markup {
			b.WriteByte('\\')
		}
		b.WriteByte(c)
	}
	return b.String()
}

// marker is what makes a list, a quotation or a rule of a line that begins with it.
var marker = regexp.MustCompile(`^([-+]|>|[0-9]{1,9}[.)])(\s|-|>|$)|^>`)

// escapeLine is escape for text at the beginning of a line.
func escapeLine(text string) string {
	text = escape(text)
	if at := marker.FindStringSubmatchIndex(text); at != nil {
		last := max(at[3], 1) - 1 // of the marker
		return text[:last] + `\` + text[last:]
	}
	return text
}

func latin(c byte) bool { return 'a' <= c|0x20 && c|0x20 <= 'z' }

func alphanumeric(c byte) bool { return latin(c) || '0' <= c && c <= '9' }
