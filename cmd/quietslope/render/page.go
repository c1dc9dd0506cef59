package render

import (
	"bytes"
	"fmt"
	"math"
	"strings"
	"unicode"

	"github.com/clipperhouse/displaywidth"
	"github.com/olekukonko/tablewriter"
	"github.com/olekukonko/tablewriter/renderer"
	"github.com/olekukonko/tablewriter/tw"
)

// pageWidth is the number of columns that the text is designed for.
const pageWidth = 100

// page collects the text. Lines never end in a blank.
type page struct{ bytes.Buffer }

// line appends one line as it is.
func (p *page) line(format string, args ...any) {
	p.WriteString(strings.TrimRight(fmt.Sprintf(format, args...), " "))
	p.WriteByte('\n')
}

func (p *page) gap() { p.WriteByte('\n') }

// heading starts a section.
func (p *page) heading(format string, args ...any) {
	text := clean(fmt.Sprintf(format, args...))
	if p.Len() > 0 {
		p.gap()
	}
	for _, l := range wrap(text, pageWidth) {
		p.line("%s", l)
	}
	p.line("%s", strings.Repeat("-", min(displaywidth.String(text), pageWidth)))
}

// para appends running text, wrapped.
func (p *page) para(format string, args ...any) {
	p.hang("", 0, fmt.Sprintf(format, args...))
}

// hang appends running text behind a label, wrapped, with every line starting at the column indent.
func (p *page) hang(label string, indent int, text string) {
	if displaywidth.String(label) >= indent && label != "" {
		indent = displaywidth.String(label) + 1
	}
	for i, l := range wrap(clean(text), pageWidth-indent) {
		if i > 0 {
			label = ""
		}
		p.line("%s%s", pad(label, indent), l)
	}
}

// field appends a named item of a list.
func (p *page) field(name, format string, args ...any) {
	p.hang("  "+name, 16, fmt.Sprintf(format, args...))
}

// wrap cuts text into lines of at most width columns, between words. A longer word has a line of its own.
func wrap(text string, width int) []string {
	var lines []string
	line, used := "", 0
	for _, w := range strings.Fields(text) {
		n := displaywidth.String(w)
		if line != "" && used+1+n > width {
			lines, line, used = append(lines, line), "", 0
		}
		if line != "" {
			line, used = line+" ", used+1
		}
		line, used = line+w, used+n
	}
	return append(lines, line)
}

// clean keeps text that came from a file from steering the terminal.
func clean(text string) string {
	return strings.Map(func(r rune) rune {
		if r == '\n' || r == '\t' {
			return ' '
		}
		if !unicode.IsGraphic(r) {
			return unicode.ReplacementChar
		}
		return r
	}, text)
}

// pad fills text with blanks on the right up to width columns.
func pad(text string, width int) string {
	return text + strings.Repeat(" ", max(0, width-displaywidth.String(text)))
}

// shorten keeps the beginning and the end of text, since names often differ at the end, in at most width columns.
func shorten(text string, width int) string {
	if displaywidth.String(text) <= width {
		return text
	}
	if width < 1 {
		return ""
	}
	var parts []string
	var widths []int
	for g := displaywidth.StringGraphemes(text); g.Next(); {
		parts, widths = append(parts, g.Value()), append(widths, g.Width())
	}
	left := width - 1
	head, room := 0, (left+1)/2
	for widths[head] <= room {
		room -= widths[head]
		left -= widths[head]
		head++
	}
	tail := len(parts)
	for widths[tail-1] <= left {
		left -= widths[tail-1]
		tail--
	}
	return strings.Join(parts[:head], "") + "…" + strings.Join(parts[tail:], "")
}

// table is a table of text cells. Its first column may be shortened to make it fit the page.
type table struct {
	head [][]string // lines of the head, each with one text per column
	left []bool     // columns aligned to the left; the first always is
	rows [][]string
	// label gives the first cell of a row in at most width columns; nil leaves the first column as it is.
	label func(row, width int) string
}

// minLabel is the narrowest first column: an option's letter.
const minLabel = 2

// table draws a table. Where it is too wide for the page, the first column gives way.
func (p *page) table(t table) {
	if len(t.rows) == 0 {
		return
	}
	text := t.draw(math.MaxInt)
	if over := widest(text) - pageWidth; over > 0 && t.label != nil {
		first := 0
		for i := range t.rows {
			first = max(first, displaywidth.String(t.label(i, math.MaxInt)))
		}
		text = t.draw(max(first-over, minLabel))
	}
	for line := range strings.Lines(text) {
		p.line("%s", strings.TrimSuffix(line, "\n"))
	}
}

// draw draws the table with a first column of at most the given width.
func (t table) draw(first int) string {
	var b strings.Builder
	align := tw.Alignment{tw.AlignLeft}
	for c := range t.head[0][1:] {
		if t.left != nil && t.left[c+1] {
			align = append(align, tw.AlignLeft)
		} else {
			align = append(align, tw.AlignRight)
		}
	}
	w := tablewriter.NewTable(&b,
		tablewriter.WithRenderer(renderer.NewBlueprint(tw.Rendition{
			Borders:  tw.BorderNone,
			Symbols:  tw.NewSymbols(tw.StyleNone),
			Settings: tw.Settings{Lines: tw.LinesNone, Separators: tw.SeparatorsNone},
		})),
		tablewriter.WithHeaderAutoFormat(tw.Off), tablewriter.WithHeaderAutoWrap(tw.WrapNone),
		tablewriter.WithRowAutoWrap(tw.WrapNone), tablewriter.WithTrimSpace(tw.Off), tablewriter.WithTrimLine(tw.Off),
		tablewriter.WithPadding(tw.Padding{Right: "  ", Overwrite: true}),
		tablewriter.WithAlignment(align),
	)
	head := make([]string, len(t.head[0]))
	for c := range head {
		for l, line := range t.head {
			cell := line[c]
			if c == 0 && first < math.MaxInt {
				cell = shorten(cell, first)
			}
			if l > 0 {
				head[c] += "\n"
			}
			head[c] += cell
		}
	}
	w.Header(head)
	for i, row := range t.rows {
		if t.label != nil {
			row = append([]string{t.label(i, first)}, row[1:]...)
		}
		if err := w.Append(row); err != nil {
			panic(err) // it writes to memory, and every row has the columns of the head
		}
	}
	if err := w.Render(); err != nil {
		panic(err)
	}
	return b.String()
}

// widest is the width of the widest line, less the blanks that end it.
func widest(text string) int {
	w := 0
	for line := range strings.Lines(text) {
		w = max(w, displaywidth.String(strings.TrimRight(line, " \n")))
	}
	return w
}

// column joins figures and their ranges into cells: the figures with their decimal points below each other, the
// ranges in a column of their own.
type column struct{ values, ranges []string }

func (c *column) add(value, ranged string) {
	c.values, c.ranges = append(c.values, value), append(c.ranges, ranged)
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
	cells := make([]string, len(c.values))
	for i, v := range c.values {
		a, b := split(v)
		cells[i] = strings.TrimRight(strings.Repeat(" ", whole-displaywidth.String(a))+a+pad(b, part)+" "+c.ranges[i], " ")
	}
	return cells
}
