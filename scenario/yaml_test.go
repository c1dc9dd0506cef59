package scenario

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// drawTree draws a tree as a study could have it.
func drawTree(t *rapid.T, depth int) *node {
	kind := rapid.IntRange(0, 5).Draw(t, "kind")
	if depth == 0 {
		kind = 0
	} else if depth == 5 {
		kind = 5 // the top is a block
	}
	switch {
	case kind >= 4:
		n := &node{is: blockNode}
		var seen []string
		for range rapid.IntRange(1, 4).Draw(t, "keys") {
			key := rapid.StringMatching(`[a-z][a-z_]{0,6}(\.[a-z]{2,4})?`).Draw(t, "key")
			if slices.Contains(seen, key) || key == "null" {
				continue
			}
			seen = append(seen, key)
			n.entries = append(n.entries, entry{key: key, value: drawTree(t, depth-1)})
		}
		return n
	case kind == 3:
		n := &node{is: listNode}
		for range rapid.IntRange(1, 4).Draw(t, "items") {
			n.items = append(n.items, drawTree(t, depth-1))
		}
		return n
	}
	text := rapid.SampledFrom([]string{
		"12 m", "0.02 /d", "1/d", "85 %", "1_800", "010", "0x1F", ".inf", ".nan", "0+400", "012", "-999", "-999.0", "2.4e6", "yes", "true", "YYYY-MM-DD hh:mm",
		"trenches at 16 m", "a#b", "x: y", "", " both ends ", "it's", `say "so"`, "=1", "+15 %", "3 m²", "Böschung", "-", "- x", "?", "a, b", "[x]", "{y}", "# no comment",
		"null", "~", "&a", "*a", "!a", "%a", "@a", "`a", "|", ">", "'", `"`, `\`, "a:", ":a", "http://x", "a: b: c", "日本 12", "1e5", "12:30", "2026-01-02", "<<", "---", "...",
	}).Draw(t, "text")
	return &node{text: text}
}

// rawText begins a text that is to be written without quotes, whatever it is then read as.
const rawText = "\x00"

// writer writes a tree as a person may.
type writer struct {
	t *rapid.T
	b strings.Builder
}

// plainText says whether a text may stand without quotes by the rules that people are told.
func plainText(s string) bool {
	return s != "" && strings.TrimSpace(s) == s && !strings.ContainsAny(s[:1], "-?:,[]{}#&*!|>'\"%@`<~.=") && !strings.ContainsAny(s, ",[]{}\\") &&
		!strings.Contains(s, ": ") && !strings.HasSuffix(s, ":") && !strings.Contains(s, " #") && s != "null"
}

func (w *writer) text(s string) string {
	if plain, ok := strings.CutPrefix(s, rawText); ok {
		return plain
	}
	style := rapid.IntRange(0, 3).Draw(w.t, "style")
	switch {
	case plainText(s) && style < 2, s == "-999" || s == "-999.0" || s == ".inf" || s == ".nan" || s == "=1":
		return s
	case style == 3:
		return "'" + strings.ReplaceAll(s, "'", "''") + "'"
	}
	return `"` + strings.NewReplacer(`\`, `\\`, `"`, `\"`).Replace(s) + `"`
}

func (w *writer) key(k string) string {
	if rapid.IntRange(0, 9).Draw(w.t, "quoted") == 0 {
		return `"` + k + `"`
	}
	return k
}

func (w *writer) flow(n *node) string {
	sep := rapid.SampledFrom([]string{", ", " , ", ",  "}).Draw(w.t, "sep")
	pad := rapid.SampledFrom([]string{"", " "}).Draw(w.t, "pad")
	var parts []string
	switch n.is {
	case textNode:
		return w.text(n.text)
	case listNode:
		for _, item := range n.items {
			if item.is == textNode && strings.Contains(item.text, ":") {
				parts = append(parts, "'"+strings.ReplaceAll(item.text, "'", "''")+"'")
				continue
			}
			parts = append(parts, w.flow(item))
		}
		return "[" + pad + strings.Join(parts, sep) + pad + "]"
	}
	for _, e := range n.entries {
		parts = append(parts, w.key(e.key)+": "+w.flow(e.value))
	}
	return "{" + pad + strings.Join(parts, sep) + pad + "}"
}

// end ends a line, now and then with a comment or a blank line after it.
func (w *writer) end() {
	w.b.WriteString(rapid.SampledFrom([]string{"\n", "\n", "\n", "  # a comment, with: marks {\n", "\n\n", "\n# a line: of comment\n", "   \n"}).Draw(w.t, "end"))
}

func (w *writer) block(n *node, indent int, first bool) {
	step := rapid.IntRange(1, 4).Draw(w.t, "step")
	pad := strings.Repeat(" ", indent)
	line := func(head string, v *node, inner int) {
		if !first {
			w.b.WriteString(pad)
		}
		first = false
		w.b.WriteString(head)
		if v.is == textNode || len(v.entries)+len(v.items) == 0 || rapid.IntRange(0, 2).Draw(w.t, "flow") == 0 {
			w.b.WriteString(" " + strings.Repeat(" ", rapid.IntRange(0, 2).Draw(w.t, "gap")) + w.flow(v))
			w.end()
			return
		}
		if head == "-" && v.is == blockNode {
			w.b.WriteString(strings.Repeat(" ", step))
			w.block(v, indent+1+step, true)
			return
		}
		w.end()
		w.block(v, inner, false)
	}
	for _, e := range n.entries {
		inner := indent + step
		if e.value.is == listNode && rapid.Bool().Draw(w.t, "flush") {
			inner = indent
		}
		line(w.key(e.key)+":", e.value, inner)
	}
	for _, item := range n.items {
		line("-", item, indent+step)
	}
}

func equalTree(a, b *node) bool {
	if a == nil || b == nil || a.is != b.is || a.text != b.text {
		return false
	}
	return slices.EqualFunc(a.entries, b.entries, func(x, y entry) bool { return x.key == y.key && equalTree(x.value, y.value) }) &&
		slices.EqualFunc(a.items, b.items, equalTree)
}

func (n *node) String() string {
	switch n.is {
	case blockNode:
		var b strings.Builder
		for _, e := range n.entries {
			fmt.Fprintf(&b, "%s=%v;", e.key, e.value)
		}
		return "{" + b.String() + "}"
	case listNode:
		return fmt.Sprint(n.items)
	}
	return fmt.Sprintf("%q", n.text)
}

// TestTreeReadsBack writes random trees in the many ways that the format allows, and demands that each is read as it
// was meant, or refused where the writer leaves the small part of the format that studies use.
func TestTreeReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		tree := drawTree(t, 5)
		w := &writer{t: t}
		w.block(tree, 0, false)
		src := w.b.String()
		found := &problems{src: &source{file: "study.yaml", lines: strings.Split(src, "\n")}}
		got := readTree(found)
		if err := found.err(); err != nil {
			t.Fatalf("%v\nin\n%s", err, src)
		}
		if !equalTree(tree, got) {
			t.Fatalf("got\n%v\nwant\n%v\nfrom\n%s", got, tree, src)
		}
	})
}
