package render

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"slices"
	"strings"

	"github.com/clipperhouse/displaywidth"
	"github.com/olekukonko/tablewriter"
	"github.com/olekukonko/tablewriter/renderer"
	"github.com/olekukonko/tablewriter/tw"
)

// pageWidth is the number of columns that the text is designed for.
const pageWidth = 100

// Text writes the page for a terminal or a plain file: 100 columns, no colour, no line that ends in a blank.
func (p *Page) Text(w io.Writer) error {
	var t lines
	// Sections that have parts stand out from these.
	parts := slices.ContainsFunc(p.blocks, func(b block) bool { h, ok := b.(heading); return ok && h.inner })
	for _, b := range p.blocks {
		switch b := b.(type) {
		case title:
			t.hang("", 0, string(b))
		case heading:
			rule := "-"
			if parts && !b.inner {
				rule = "="
			}
			t.heading(b.text, rule)
		case para:
			t.hang("", 0, string(b))
		case gap:
			t.WriteByte('\n')
		case item:
			t.hang(b.mark(), b.indent, b.words)
		case table:
			t.table(b)
		case listing:
			t.listing(b)
		case grid:
			t.grid(b)
		}
	}
	_, err := w.Write(t.Bytes())
	return err
}

// mark is what stands before the words of an entry.
func (i *item) mark() string {
	switch i.kind {
	case numbered:
		return fmt.Sprintf("%3s", i.label)
	case plain:
		return "  -"
	case below:
		return ""
	}
	return "  " + i.label
}

// lines collects text.
type lines struct{ bytes.Buffer }

func (t *lines) line(line string) {
	t.WriteString(strings.TrimRight(line, " "))
	t.WriteByte('\n')
}

// heading appends a heading with a rule below it.
func (t *lines) heading(of, rule string) {
	if t.Len() > 0 {
		t.WriteByte('\n')
	}
	for _, l := range wrap(of, pageWidth) {
		t.line(l)
	}
	t.line(strings.Repeat(rule, min(displaywidth.String(of), pageWidth)))
}

// hang appends running text behind a label, wrapped, with every line starting at the column indent.
func (t *lines) hang(label string, indent int, of string) {
	if displaywidth.String(label) >= indent && label != "" {
		indent = displaywidth.String(label) + 1
	}
	for i, l := range wrap(of, pageWidth-indent) {
		if i > 0 {
			label = ""
		}
		t.line(pad(label, indent) + l)
	}
}

// wrap cuts text into lines of at most width columns, between words, but not before a percent sign. A longer word has a
// line of its own.
func wrap(text string, width int) []string {
	var lines []string
	line, used := "", 0
	for words := strings.Fields(text); len(words) > 0; {
		w := words[0]
		words = words[1:]
		if len(words) > 0 && strings.HasPrefix(words[0], "%") {
			w += " " + words[0]
			words = words[1:]
		}
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

// in joins a label to at most width columns. The name is shortened, or left out where there is no room for it.
func (l label) in(width int) string {
	if l.key == "" {
		return shorten(l.name, width)
	}
	if room := width - len(l.key) - 2; room >= 5 {
		return l.key + "  " + shorten(l.name, room)
	}
	return l.key
}

// Widths of the labels.
const (
	minLabel = 2  // an option's letter
	cutLabel = 30 // to which they are shortened before a table is cut
)

// apart stands between the columns of a table.
const apart = "  "

// table draws a table.
func (t *lines) table(b table) {
	if !b.cut {
		t.whole(b)
		return
	}
	for from := 0; from < len(b.groups); {
		rest := b.columns(func(c int) bool { return c >= from })
		n := fitting(rest)
		if from > 0 {
			t.WriteByte('\n')
		}
		t.whole(rest.columns(func(c int) bool { return c < n }))
		from += n
	}
}

// fitting is the number of the first columns, in whole groups, at least one, that fit the page with labels that can still
// be read.
func fitting(b table) int {
	fit := 0
	labels := b.widestLabel()
	for fit < len(b.groups) {
		n := fit + 1 // columns with one more group
		for n < len(b.groups) && b.groups[n] == b.groups[fit] {
			n++
		}
		over := b.columns(func(c int) bool { return c < n }).width() - pageWidth
		if fit > 0 && over > 0 && labels-over < cutLabel {
			break
		}
		fit = n
	}
	return fit
}

// whole draws a table in one piece.
func (t *lines) whole(b table) {
	labels := math.MaxInt
	if over := b.width() - pageWidth; over > 0 {
		labels = max(b.widestLabel()-over, minLabel)
	}
	for line := range strings.Lines(b.draw(labels)) {
		t.line(strings.TrimSuffix(line, "\n"))
	}
}

// width is how wide the table would be drawn with whole labels.
func (b table) width() int {
	first := max(b.widestLabel(), displaywidth.String(b.first))
	if len(b.lines()) > 1 {
		first = max(first, displaywidth.String(b.caption))
	}
	widths := []int{first}
	for c := range b.head[0] {
		widest := 0
		for _, line := range b.lines() {
			widest = max(widest, displaywidth.String(line[c]))
		}
		for _, row := range b.rows {
			widest = max(widest, displaywidth.String(row[c]))
		}
		widths = append(widths, widest)
	}
	for len(widths) > 0 && widths[len(widths)-1] == 0 {
		widths = widths[:len(widths)-1]
	}
	all := 0
	for c, w := range widths {
		if c > 0 {
			all += len(apart)
		}
		all += w
	}
	return all
}

// lines are the lines of the head, with what columns have in common where these begin. Of a table that was cut a part may
// have nothing to say in the upper ones.
func (b table) lines() [][]string {
	if b.groups == nil {
		return b.head
	}
	once := make([]string, len(b.groups))
	for c, g := range b.groups {
		if c == 0 || g != b.groups[c-1] {
			once[c] = g
		}
	}
	lines := append([][]string{once}, b.head...)
	for len(lines) > 1 && b.caption == "" && !slices.ContainsFunc(lines[0], func(cell string) bool { return strings.TrimSpace(cell) != "" }) {
		lines = lines[1:]
	}
	return lines
}

func (b table) widestLabel() int {
	widest := 0
	for _, l := range b.labels {
		widest = max(widest, displaywidth.String(l.in(math.MaxInt)))
	}
	return widest
}

// draw draws the table with labels of at most the given width.
func (b table) draw(width int) string {
	lines := b.lines()
	head := make([]string, 1+len(lines[0]))
	for l, line := range lines {
		first := ""
		switch l {
		case len(lines) - 1:
			first = b.first
		case 0:
			first = b.caption
		}
		if width < math.MaxInt {
			first = shorten(first, width)
		}
		for c, cell := range append([]string{first}, line...) {
			if l > 0 {
				head[c] += "\n"
			}
			head[c] += cell
		}
	}
	var rows [][]string
	for i, row := range b.rows {
		rows = append(rows, append([]string{b.labels[i].in(width)}, row...))
	}
	return drawTable(head, rows, b.left, tablewriter.WithPadding(tw.Padding{Right: apart, Overwrite: true}),
		tablewriter.WithRenderer(renderer.NewBlueprint(tw.Rendition{
			Borders:  tw.BorderNone,
			Symbols:  tw.NewSymbols(tw.StyleNone),
			Settings: tw.Settings{Lines: tw.LinesNone, Separators: tw.SeparatorsNone},
		})))
}

// drawTable draws cells in columns. The first column is aligned to the left, and so are those that left names of the
// others.
func drawTable(head []string, rows [][]string, left []bool, options ...tablewriter.Option) string {
	var b strings.Builder
	align := tw.Alignment{tw.AlignLeft}
	for c := range head[1:] {
		if left != nil && left[c] {
			align = append(align, tw.AlignLeft)
		} else {
			align = append(align, tw.AlignRight)
		}
	}
	w := tablewriter.NewTable(&b, append(options,
		tablewriter.WithHeaderAutoFormat(tw.Off), tablewriter.WithHeaderAutoWrap(tw.WrapNone),
		tablewriter.WithRowAutoWrap(tw.WrapNone), tablewriter.WithTrimSpace(tw.Off), tablewriter.WithTrimLine(tw.Off),
		tablewriter.WithAlignment(align))...)
	w.Header(head)
	for _, row := range rows {
		if err := w.Append(row); err != nil {
			panic(err) // it writes to memory, and every row has the columns of the head
		}
	}
	if err := w.Render(); err != nil {
		panic(err)
	}
	return b.String()
}

// listing writes keys, and their values side by side where the keys are not too long.
func (t *lines) listing(l listing) {
	const most = 48
	width := 0
	for _, e := range l {
		width = max(width, min(displaywidth.String(e.key), most))
	}
	for _, e := range l {
		mark, text := "  ", e.value
		if e.mark {
			mark = "* "
		}
		if e.options != "" {
			text += " (" + e.options + ")"
		}
		t.hang(mark+e.key, width+4, text)
	}
}

// grid writes pairs in as many columns as fit, read downwards.
func (t *lines) grid(g grid) {
	var cells []string
	widest := 0
	for _, r := range g.rows {
		cell := fmt.Sprintf("%s  %*s", r[0], g.width, r[1])
		if r[2] != "" {
			cell += " (" + r[2] + ")"
		}
		cells = append(cells, cell)
		widest = max(widest, displaywidth.String(cell))
	}
	const indent, gap = 2, 4
	perLine := max(1, (pageWidth-indent+gap)/(widest+gap))
	lines := (len(cells) + perLine - 1) / perLine
	for l := range lines {
		line := strings.Repeat(" ", indent)
		for i := l; i < len(cells); i += lines {
			line += pad(cells[i], widest+gap)
		}
		t.line(line)
	}
}
