package scenario

import (
	"cmp"
	"errors"
	"fmt"
	"regexp"
	"strings"
	"sync"
	"unicode"

	"github.com/goccy/go-yaml"
	"github.com/goccy/go-yaml/ast"
	"github.com/goccy/go-yaml/lexer"
	"github.com/goccy/go-yaml/parser"
	"github.com/goccy/go-yaml/token"

	"quietslope/scenario/quantity"
)

// deepest is how many blocks and lists may stand inside each other.
const deepest = 12

// mostParts is how many keys and items a study may have. The library takes a time that grows with the square of their
// number.
const mostParts = 20_000

// node is a part of a study file: a text, a block of keys or a list.
type node struct {
	is      nodeKind
	text    string // of a text, as typed, without quotes
	quoted  bool
	entries []entry        // of a block, in the order of the file
	first   map[string]int // of a block: the line in which each key stands first
	items   []*node        // of a list
	partial bool           // of a block: keys that it needs stand in another block, which could not be had
	made    made           // of an option: what it was made from
	line    int            // where it begins, counted from 1
	col     int
}

// made says from which list an option was made.
type made struct {
	list   string // the name of the option that has the list
	varied string // the key of that list, such as trench_drains.spacing
}

type nodeKind int

const (
	textNode nodeKind = iota
	blockNode
	listNode
)

// entry is a key of a block with what stands after its colon. The value is nil where it was refused.
type entry struct {
	key       string
	line, col int
	value     *node
}

// readTree reads the text of a study as a small part of YAML: plain keys, texts on one line, blocks and lists. All
// else that YAML can do is refused, and so is every character that has no place in the tree. It returns nil when there
// is no tree to go on with.
func readTree(found *problems) *node {
	r := &treeReader{src: found.src, problems: found}
	if r.refuseTable(); len(found.list) > 0 {
		return nil
	}
	if r.refuseTabs(); len(found.list) > 0 {
		return nil
	}
	// Blanks at the end of a line mean nothing, but make the library misplace the text before them.
	lines := make([]string, len(r.src.lines))
	for i, line := range r.src.lines {
		lines[i] = strings.TrimRight(line, " \t")
	}
	tokens := lexer.Tokenize(strings.Join(lines, "\n"))
	if r.refuseTokens(tokens); len(found.list) > 0 {
		return nil
	}
	file, err := parser.Parse(tokens, 0, parser.AllowDuplicateMapKey())
	if err != nil {
		r.explain(err)
		return nil
	}
	var root *node
	for _, doc := range file.Docs {
		if doc.Body == nil || doc.Body.Type() == ast.CommentGroupType {
			continue
		}
		if root != nil {
			r.add(r.placeOf(doc.Body.GetToken(), ""), "a second document begins here; a study file holds one study")
			return nil
		}
		r.used = make([][]bool, len(r.src.lines))
		r.runes = make([][]rune, len(r.src.lines))
		root = r.read(doc.Body, "", 0)
		if root == nil {
			return nil
		}
	}
	if root == nil {
		r.add(Place{}, "the file holds no keys; a study begins with a line such as: study: Bank above the mill, drainage options")
		return nil
	}
	if len(found.list) == 0 {
		r.refuseRest()
	}
	if root.is != blockNode {
		what := "a list"
		if root.is == textNode {
			what = "a text"
		}
		if hint := cmp.Or(noBlank(root.text), noColon(root.text)); hint != "" {
			what += "; " + hint
		}
		r.add(Place{Line: root.line, Col: root.col}, "a study is a block of keys such as study, weather and ground, not %s", what)
		return nil
	}
	return root
}

// treeReader turns the library's syntax tree into nodes.
type treeReader struct {
	src *source
	*problems
	used   [][]bool // by line and character: belongs to a text or key of the tree
	runes  [][]rune // the lines, as far as they were needed
	joined bool     // the text that was refused last holds a key that belongs to the block around it
}

// refuseTable reports a file that begins like a table, most likely the weather.
func (r *treeReader) refuseTable() {
	for i, line := range r.src.lines {
		if isBlankOrComment(line) {
			continue
		}
		if strings.ContainsAny(strings.TrimSpace(line), ",;\t") && !strings.ContainsAny(line, ":=：{}[]\"'") {
			r.add(Place{Line: i + 1, Col: 1}, "this begins like a table, not like a study; name the study file, which in turn names its weather as weather.file")
		}
		return
	}
}

// refuseTabs reports tabs, and the blanks of a word processor, that indent or stand after the dash of an item.
func (r *treeReader) refuseTabs() {
	for i, line := range r.src.lines {
		indent := indentOf(line)
		rest := []rune(strings.TrimPrefix(line[len(indent):], "-"))
		switch tab := strings.IndexByte(indent, '\t'); {
		case tab >= 0 && len(indent) < len(line):
			r.add(Place{Line: i + 1, Col: tab + 1}, "a tab is used for indenting; use blanks")
		case len(rest) > 0 && unicode.Is(unicode.Zs, rest[0]) && rest[0] != ' ' && strings.TrimSpace(string(rest)) != "":
			r.add(Place{Line: i + 1, Col: len([]rune(line)) - len(rest) + 1}, "a blank that is not a plain one (U+%04X) is used for indenting; write plain blanks, as the space bar makes them", rest[0])
		}
	}
}

// indentOf returns what stands before the first key or text of a line: blanks, tabs and the dashes of items.
func indentOf(line string) string {
	isBlank := func(i int) bool { return i < len(line) && (line[i] == ' ' || line[i] == '\t') }
	n := 0
	for isBlank(n) || n < len(line) && line[n] == '-' && isBlank(n+1) {
		n++
	}
	return line[:n]
}

// refuseTokens reports the parts of YAML that a study does not use, before they are taken for anything.
func (r *treeReader) refuseTokens(tokens token.Tokens) {
	var depth, dashes, dashLine, parts int
	seen, ended := false, false
	for _, t := range tokens {
		at := r.placeOf(t, "")
		if ended && t.Type != token.CommentType {
			r.add(at, "the study ended above, at the line of dots; nothing may follow it")
			return
		}
		switch t.Type {
		case token.AnchorType:
			r.add(at, "anchors (&) are not used in a study; put a text that begins with & between quotes")
		case token.AliasType:
			if hint := r.itemMark(at.Line); hint != "" {
				r.add(at, "%s", hint)
				return
			}
			r.add(at, "aliases (*) are not used in a study; put a text that begins with * between quotes")
		case token.TagType:
			r.add(at, "tags (!) are not used in a study; put a text that begins with ! between quotes")
		case token.MergeKeyType:
			r.add(at, "merge keys (<<) are not used in a study; write the keys out")
		case token.DirectiveType:
			r.add(at, "directives (%%) are not used in a study; delete this line, or put a text that begins with %% between quotes")
			return
		case token.LiteralType, token.FoldedType:
			r.add(at, "block texts (| and >) are not used in a study; write the text on one line, between quotes if need be")
			return
		case token.MappingKeyType:
			r.add(at, "keys are plain words, without a question mark; put a text that begins with ? between quotes")
			return
		case token.DocumentHeaderType:
			if seen {
				r.add(at, "a second document begins here; a study file holds one study")
				return
			}
		case token.DocumentEndType:
			ended = true
		case token.MappingValueType, token.CollectEntryType:
			parts++
		case token.MappingStartType, token.SequenceStartType:
			depth++
		case token.MappingEndType, token.SequenceEndType:
			depth--
		case token.SequenceEntryType:
			if t.Position.Line != dashLine {
				dashes, dashLine = 0, t.Position.Line
			}
			dashes++
			parts++
		}
		if parts > mostParts {
			r.add(at, "the study has more than %d keys and items; it needs far fewer", mostParts)
			return
		}
		if depth > deepest || dashes > deepest {
			r.tooDeep(at)
			return
		}
		seen = seen || t.Type != token.CommentType
	}
}

func (r *treeReader) tooDeep(at Place) {
	r.add(at, "more than %d blocks and lists stand inside each other here; a study needs far fewer", deepest)
}

// placeOf is where a token begins.
func (r *treeReader) placeOf(t *token.Token, key string) Place {
	if t == nil || t.Position == nil {
		return Place{Key: key}
	}
	p := Place{Line: t.Position.Line, Col: t.Position.Column, Key: key}
	if p.Line > len(r.src.lines) { // the end of the file
		p.Line, p.Col = len(r.src.lines), 0
	}
	return p
}

// read turns a library node into ours. Path is the key that leads to it. It returns nil for a node that it reported.
func (r *treeReader) read(n ast.Node, path string, depth int) *node {
	at := r.placeOf(n.GetToken(), path)
	if depth > deepest {
		r.tooDeep(at)
		return nil
	}
	out := &node{line: at.Line, col: at.Col}
	switch n := n.(type) {
	case *ast.MappingNode:
		out.is = blockNode
		if !n.IsFlowStyle && len(n.Values) > 0 { // the library's token is the first colon
			first := r.placeOf(n.Values[0].Key.GetToken(), path)
			out.line, out.col = first.Line, first.Col
		}
		for _, v := range n.Values {
			r.readEntry(out, v, path, depth)
		}
		return out
	case *ast.MappingValueNode:
		out.is = blockNode
		r.readEntry(out, n, path, depth)
		return out
	case *ast.SequenceNode:
		out.is = listNode
		for i, v := range n.Values {
			item := fmt.Sprintf("%s[%d]", path, i)
			if v == nil || v.Type() == ast.NullType {
				p := at
				if v != nil && v.GetToken() != nil && v.GetToken().Type == token.NullType {
					p = r.placeOf(v.GetToken(), item)
					r.mark(p, v.GetToken().Value)
					r.add(p, "%q stands for nothing; write a value, put the word between quotes if it is meant as text, or delete the item", v.GetToken().Value)
				} else {
					if i < len(n.Entries) && n.Entries[i].Start != nil {
						p = r.placeOf(n.Entries[i].Start, item)
					}
					p.Key = item
					r.add(p, "nothing stands in this item of the list; write a value, or delete the item")
				}
				out.items = append(out.items, nil)
				continue
			}
			out.items = append(out.items, r.read(v, item, depth+1))
		}
		return out
	case *ast.StringNode, *ast.IntegerNode, *ast.FloatNode, *ast.BoolNode, *ast.InfinityNode, *ast.NanNode:
		if !r.readText(out, n.GetToken(), path) {
			return nil
		}
		return out
	}
	r.add(at, "%s", plainWords)
	return nil
}

// plainWords is what is said of text for which nothing better is known.
const plainWords = "this text has no place in a study here; check the indenting, the blank after each colon, and that quotes and brackets close"

// readEntry reads one key and its value into the block.
func (r *treeReader) readEntry(block *node, v *ast.MappingValueNode, path string, depth int) {
	keyToken := v.Key.GetToken()
	at := r.placeOf(keyToken, path)
	k, isText := v.Key.(*ast.StringNode)
	key := keyToken.Value
	if isText {
		key = k.Value
	}
	full := join(path, key)
	at.Key = full
	e := entry{key: key, line: at.Line, col: at.Col}
	scalar := &node{}
	if !r.readText(scalar, keyToken, full) {
		block.partial = true
		return
	}
	colon := v.Start != nil && v.Start.Type == token.MappingValueType
	_, isNull := v.Value.(*ast.NullNode)
	switch {
	case !colon:
		if r.numberSplit(block, at, key) {
			return
		}
		if studyKeys()[key] {
			r.add(at, "%s has neither colon nor value; write it as %s: …", quoted(key), key)
			break
		}
		at.Key = path
		block.partial = true
		hint := noColon(key)
		if hint == "" {
			hint = r.textSplit(block, at.Line, key)
		}
		r.add(at, "%s", hint)
		return
	case r.after(v.Start) == '\t':
		r.add(r.placeOf(v.Start, full), "a tab stands after the key's colon; use a blank")
	case r.after(v.Start) != ' ':
		hint := "put a text that holds a colon between quotes"
		if text, ok := v.Value.(*ast.StringNode); ok && oneKey.MatchString(key) && studyKeys()[key] {
			hint = fmt.Sprintf("write %s: %s", key, cutText(text.Value))
		} else if number, ok := v.Value.(ast.ScalarNode); ok && oneKey.MatchString(key) && studyKeys()[key] {
			hint = fmt.Sprintf("write %s: %s", key, cutText(number.GetToken().Value))
		}
		r.add(r.placeOf(v.Start, full), "a plain blank stands after a key's colon; %s", hint)
	case !isText:
		r.add(at, "a key is a word, and %s is not one; put it between quotes if it is meant", quoted(key))
		return
	case isNull && v.Value.GetToken().Type == token.NullType:
		r.mark(r.placeOf(v.Value.GetToken(), full), v.Value.GetToken().Value)
		at = r.placeOf(v.Value.GetToken(), full)
		r.add(at, "%q stands for nothing; write a value, put the word between quotes if it is meant as text, or delete the key", v.Value.GetToken().Value)
	case isNull || v.Value == nil:
		hint := ""
		if text := strings.TrimLeft(string(r.line(at.Line)[min(at.Col-1+len([]rune(key)), len(r.line(at.Line))):]), ": "); strings.HasPrefix(text, "#") && len(text) > 1 && text[1] != ' ' {
			hint = "; a # begins a remark, so put a text that begins with # between quotes"
		}
		r.add(at, "nothing stands after the colon; write a value, or delete the key%s", hint)
	default:
		e.value = r.read(v.Value, full, depth+1)
		if e.value == nil && r.joined {
			r.joined, block.partial = false, true
		}
	}
	if line, twice := block.first[key]; twice {
		r.add(at, "the key stands twice in this block, first in line %d; keep one of them", line)
		return
	}
	if block.first == nil {
		block.first = map[string]int{}
	}
	block.first[key] = at.Line
	block.entries = append(block.entries, e)
}

// after returns the character that follows a colon, a blank at the end of the line, and 0 where there is no colon.
func (r *treeReader) after(colon *token.Token) rune {
	p := r.placeOf(colon, "")
	line := r.line(p.Line)
	switch {
	case p.Col < 1 || p.Col > len(line) || line[p.Col-1] != ':':
		return 0
	case strings.Trim(string(line[p.Col:]), " \t") == "":
		return ' '
	}
	return line[p.Col]
}

// numberSplit reports a number that a comma inside {…} cut in two, such as {depth: 3,5 m}, and returns false where
// that is not what happened.
func (r *treeReader) numberSplit(block *node, at Place, key string) bool {
	line := r.line(at.Line)
	if len(block.entries) == 0 || at.Col < 3 || at.Col > len(line) || line[at.Col-2] != ',' || key == "" || !isDigit(rune(key[0])) || !isDigit(line[at.Col-3]) {
		return false
	}
	last := &block.entries[len(block.entries)-1]
	if last.value == nil || last.value.is != textNode || last.value.line != at.Line {
		return false
	}
	// The kind is of no account: the number is wrong before any unit is looked at.
	_, err := quantity.Parse(last.value.text+","+key, quantity.Length)
	if err == nil {
		return false
	}
	r.add(Place{Line: last.value.line, Col: last.value.col, Key: strings.TrimSuffix(at.Key, key) + last.key},
		"inside {…} a comma ends an entry, so none can stand in a number; %v", err)
	last.value = nil
	return true
}

// textSplit explains an entry of {…} that is no key, but the rest of a text or list that a comma cut in two.
func (r *treeReader) textSplit(block *node, line int, rest string) string {
	if n := len(block.entries); n > 0 {
		last := &block.entries[n-1]
		if v := last.value; v != nil && v.is == textNode && !v.quoted && v.text != "" && v.line == line && rest != "" {
			if isDigit(rune(v.text[0])) && isDigit(rune(rest[0])) {
				return fmt.Sprintf("inside {…} a comma ends an entry; write a list between brackets: %s: [%s, %s]", last.key, cutText(v.text), cutText(rest))
			}
			return fmt.Sprintf("inside {…} a comma ends an entry; put a text with a comma between quotes: %s: %q", last.key, cutText(v.text+", "+rest))
		}
	}
	return fmt.Sprintf("%s has neither colon nor value; write it as key: value", quoted(rest))
}

func isDigit(c rune) bool { return '0' <= c && c <= '9' }

// line returns the characters of a line counted from 1.
func (r *treeReader) line(n int) []rune {
	if n < 1 || n > len(r.runes) {
		return nil
	}
	if r.runes[n-1] == nil {
		r.runes[n-1] = []rune(r.src.lines[n-1])
		r.used[n-1] = make([]bool, len(r.runes[n-1]))
	}
	return r.runes[n-1]
}

// mark notes that a text of the file is in the tree. It returns false when the text does not stand at the place.
func (r *treeReader) mark(p Place, text string) bool {
	line := r.line(p.Line)
	i := p.Col - 1
	for _, c := range text {
		if i < 0 || i >= len(line) || line[i] != c {
			return false
		}
		r.used[p.Line-1][i] = true
		i++
	}
	return true
}

// readText takes a text from its token. The library's value is held against the file, so that nothing is read that the
// user cannot see at that place.
func (r *treeReader) readText(out *node, t *token.Token, path string) bool {
	at := r.placeOf(t, path)
	out.is, out.text, out.line, out.col = textNode, t.Value, at.Line, at.Col
	switch t.Type {
	case token.DoubleQuoteType, token.SingleQuoteType:
		out.quoted = true
		raw, ok := quotedText(r.line(at.Line), at.Col-1)
		if !ok {
			r.add(at, "a text between quotes ends on the line on which it begins")
			return false
		}
		inner := raw[1 : len(raw)-1]
		if t.Type == token.SingleQuoteType {
			inner = strings.ReplaceAll(inner, "''", "'")
		}
		if !r.mark(at, raw) || inner != t.Value && (t.Type == token.SingleQuoteType || !strings.Contains(inner, `\`)) {
			r.add(at, "%s", plainWords)
			return false
		}
		return true
	}
	if strings.Contains(t.Value, ": ") || strings.Contains(t.Value, " #") {
		if m := keyInside.FindStringSubmatch(t.Value); m != nil && studyKeys()[m[2]] {
			r.joined = true
			r.add(at, "the entries inside {…} are separated by commas; write %s, %s: %s", cutText(m[1]), m[2], cutText(m[3]))
			return false
		}
		r.add(at, "%s holds a colon and a blank; put the text between quotes", quoted(t.Value))
		return false
	}
	if !r.mark(at, t.Value) {
		r.add(at, "this text seems to go on over more than one line; write it on one line, or check the indenting of the next line")
		return false
	}
	return true
}

// quotedText returns the text between quotes that begins at a character of the line, with its quotes.
func quotedText(line []rune, from int) (string, bool) {
	if from < 0 || from >= len(line) {
		return "", false
	}
	quote := line[from]
	if quote != '"' && quote != '\'' {
		return "", false
	}
	for i := from + 1; i < len(line); i++ {
		switch {
		case line[i] == '\\' && quote == '"':
			i++
		case line[i] == quote && quote == '\'' && i+1 < len(line) && line[i+1] == quote:
			i++
		case line[i] == quote:
			return string(line[from : i+1]), true
		}
	}
	return "", false
}

// refuseRest reports characters that are neither in the tree, nor marks of structure, nor a comment.
func (r *treeReader) refuseRest() {
	for n := range r.src.lines {
		line := r.line(n + 1)
		if strings.TrimRight(string(line), " ") == "..." {
			continue
		}
		for i, c := range line {
			if r.used[n][i] || strings.ContainsRune(" \t{}[],:-", c) {
				continue
			}
			if c == '#' && (i == 0 || line[i-1] == ' ' || line[i-1] == '\t') {
				break
			}
			r.add(Place{Line: n + 1, Col: i + 1}, "%s", plainWords)
			break
		}
	}
}

var keyWithoutBlank = regexp.MustCompile(`^(- +)*([A-Za-z_][A-Za-z_.]*):([^ ].*)$`)

var (
	itemWithoutBlank = regexp.MustCompile(`^( *)(?:-|[–—•*·] *|[0-9]+[.)] *)(\{?"?[A-Za-z_][A-Za-z_.]*"?:.*)$`)
	oneKey           = regexp.MustCompile(`^[A-Za-z_]+$`)
	keyInside        = regexp.MustCompile(`^([^:]*?)[; ] *([a-z_]+): (.*)$`)
	keyNoColon       = regexp.MustCompile(`^(?:- +)*([A-Za-z_]+)(?: *[=：]+ *| +)([^ :].*)$`)
	keyAndText       = regexp.MustCompile(`^ *(?:- +)*([a-z_]+): +([^{\["' ].*)$`)
	roundBlock       = regexp.MustCompile(`^( *- *|[^:#]*: *)\(([a-z_]+: .*)\) *(#.*)?$`)
)

// studyKeys are all keys of a study, by name.
var studyKeys = sync.OnceValue(func() map[string]bool {
	keys := map[string]bool{}
	var add func(fields []field)
	add = func(fields []field) {
		for i := range fields {
			keys[fields[i].name] = true
			add(fields[i].shape.fields)
		}
	}
	add(studyShape.fields)
	return keys
})

// noColon says what to write for a key with its value but no colon between them, and "" for any other text.
func noColon(text string) string {
	m := keyNoColon.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil || !studyKeys()[m[1]] {
		return ""
	}
	return fmt.Sprintf("a colon and a blank stand between a key and its value; write %s: %s", m[1], cutText(withoutRemark(m[2])))
}

// withoutRemark cuts a remark off a line.
func withoutRemark(text string) string {
	text, _, _ = strings.Cut(text, " #")
	return strings.TrimSpace(text)
}

// itemMark says what to write for an item of a list that begins with another sign than a dash and a blank, and "" for any
// other line.
func (r *treeReader) itemMark(n int) string {
	m := itemWithoutBlank.FindStringSubmatch(r.src.line(n))
	if m == nil {
		return ""
	}
	return fmt.Sprintf("an item of a list begins with a - and a blank; write - %s", cutText(withoutRemark(m[2])))
}

// noBlank says what to write for a text such as depth:3 m, whose colon has no blank after it, and "" for any other.
func noBlank(text string) string {
	m := keyWithoutBlank.FindStringSubmatch(strings.TrimSpace(text))
	if m == nil || strings.HasPrefix(m[3], "//") {
		return ""
	}
	return fmt.Sprintf("a plain blank stands after a key's colon; write %s: %s", m[2], cutText(strings.TrimSpace(m[3])))
}

// cutText shortens a text of the user for a message.
func cutText(text string) string {
	if q := []rune(text); len(q) > 40 {
		return string(q[:40]) + "…"
	}
	return text
}

// explain says in the writer's terms what the library could not read.
func (r *treeReader) explain(err error) {
	var ye yaml.Error
	if !errors.As(err, &ye) {
		r.add(Place{}, "%s", plainWords)
		return
	}
	t := ye.GetToken()
	at := r.placeOf(t, "")
	says := func(part string) bool { return strings.Contains(ye.GetMessage(), part) }
	// A key without a blank after its colon makes the library stumble there or a line later.
	for n := at.Line; n >= at.Line-1 && n > 0; n-- {
		text := r.src.line(n)
		if hint := r.itemMark(n); hint != "" {
			r.add(Place{Line: n, Col: len(text) - len(strings.TrimLeft(text, " ")) + 1}, "%s", hint)
			return
		}
		if m := roundBlock.FindStringSubmatch(text); m != nil {
			r.add(Place{Line: n, Col: len([]rune(m[1])) + 1}, "a block stands between { and }; write {%s}", cutText(m[2]))
			return
		}
		if hint := noBlank(text); hint != "" {
			r.add(Place{Line: n, Col: len([]rune(text)) - len([]rune(strings.TrimLeft(text, " "))) + 1}, "%s", hint)
			return
		}
	}
	switch {
	case says("could not find end character"):
		quote := "double quote"
		if says("single") {
			quote = "single quote"
		}
		r.add(at, "this %s has no partner; close the text with another one", quote)
	case says("escape"):
		r.add(at, `a \ between double quotes begins an escape, and this one is not known; use single quotes, or write \\`)
	case says("is a reserved character"):
		c := strings.TrimSpace(t.Value)
		r.add(at, "a text cannot begin with %s; put it between quotes", cutText(c))
	case says("must be specified"), says("could not find flow"), says("sequence end token"):
		r.unclosed(at)
	case says("could not find '"):
		r.add(at, "this bracket closes nothing; delete it, or open one before it")
	case says("expected sequence element"), says("unexpected scalar value type") && t != nil && t.Type == token.CollectEntryType:
		r.add(at, "nothing stands before this comma; delete it, or write the value")
	case says("block sequence entries are not allowed"):
		r.add(at, "an item of a list begins on a line of its own, below the key; put a text that begins with - between quotes")
	case says("mapping value is not allowed") && t != nil && strings.Contains(strings.TrimSpace(t.Origin), "\n"):
		next := at.Line + 1
		for next < len(r.src.lines) && isBlankOrComment(r.src.line(next)) {
			next++
		}
		indent := len(r.src.line(next)) - len(strings.TrimLeft(r.src.line(next), " "))
		r.add(Place{Line: next, Col: indent + 1}, "this line is indented more than the one above, which already has a value; let the keys of one block begin in one column")
	case says("mapping value is not allowed"):
		m := keyAndText.FindStringSubmatch(withoutRemark(r.src.line(at.Line)))
		switch {
		case m == nil:
			r.add(at, "a second colon follows in this line; put a text that holds a colon and a blank between quotes")
		case keyInside.MatchString(m[2]) && studyKeys()[keyInside.FindStringSubmatch(m[2])[2]]:
			in := keyInside.FindStringSubmatch(m[2])
			r.add(at, "a second key follows in this line; write %s: %s on a line of its own", in[2], cutText(in[3]))
		default:
			r.add(at, "a second colon follows in this line; put the text between quotes: %s: %q", m[1], cutText(m[2]))
		}
	case says("map key definition includes an implicit line break"), says("non-map value is specified"), says("unexpected key name"):
		if hint := noColon(r.src.line(at.Line)); hint != "" {
			r.add(at, "%s", hint)
			return
		}
		r.add(at, "this line has no key and colon of its own; check the indenting, and put a long text on one line")
	case says("value is not allowed in this context"):
		before := ""
		if l := []rune(r.src.line(at.Line)); at.Col-1 <= len(l) && at.Col > 0 {
			before = strings.TrimSpace(string(l[:at.Col-1]))
		}
		switch {
		case before == "":
			r.add(at, "%s", r.misplaced(at.Line))
		case strings.HasSuffix(before, `"`), strings.HasSuffix(before, "'"):
			r.add(at, "nothing may follow the closing quote; put the whole text between quotes")
		case r.charAt(at) == ']', r.charAt(at) == '}':
			r.add(at, "this bracket closes nothing; delete it, or open one before it")
		case strings.HasSuffix(before, "]"), strings.HasSuffix(before, "}"):
			r.add(at, "%s", afterBracket)
		default:
			r.add(at, "nothing may follow here; a new key begins on a new line or, inside {…}, after a comma")
		}
	case says("found an invalid key"), says("unexpected map key"), says("undefined map key"), says("cannot take map-key"):
		r.add(at, "a key is a plain word before the colon; put a text that holds a colon between quotes")
	default:
		if c := r.charAt(at); c == '>' || c == '|' {
			r.add(at, "a text cannot begin with %c; put it between quotes, or write a quantity without the sign", c)
			return
		}
		r.add(at, "%s", plainWords)
	}
}

// charAt is the character of a place, 0 outside the file.
func (r *treeReader) charAt(p Place) rune {
	if line := []rune(r.src.line(p.Line)); p.Col > 0 && p.Col <= len(line) {
		return line[p.Col-1]
	}
	return 0
}

const afterBracket = "nothing may follow the closing bracket; in a list each value has its own unit, as in [8 m, 12 m], and a text that begins with a bracket is put between quotes"

// misplaced explains a line whose indenting fits no line above.
func (r *treeReader) misplaced(n int) string {
	indent := func(line string) int { return len(line) - len(strings.TrimLeft(line, " ")) }
	line := r.src.line(n)
	text := withoutRemark(line)
	if strings.HasPrefix(text, "- ") {
		return "an item of a list stands here, and the lines above it are no items; begin each of them with a - and a blank too"
	}
	for i := n - 1; i > 0; i-- {
		above := r.src.line(i)
		if isBlankOrComment(above) || indent(above) > indent(line) {
			continue
		}
		if indent(above) == indent(line) && strings.HasPrefix(strings.TrimSpace(above), "- ") {
			return fmt.Sprintf("each item of this list begins with a - and a blank; write - %s, or indent the line by 2 blanks more if it belongs to the item above", cutText(text))
		}
		break
	}
	return "the indenting of this line fits no line above; let the keys of one block begin in one column"
}

func isBlankOrComment(line string) bool {
	line = strings.TrimSpace(line)
	return line == "" || line[0] == '#'
}

// unclosed reports the innermost bracket that is still open at a place.
func (r *treeReader) unclosed(at Place) {
	var open []Place
	for n := 1; n <= at.Line; n++ {
		line := []rune(r.src.line(n))
		for i := 0; i < len(line); i++ {
			if n == at.Line && i >= at.Col-1 && len(open) > 0 {
				break
			}
			switch c := line[i]; {
			case c == '#' && (i == 0 || line[i-1] == ' '):
				i = len(line)
			case c == '"' || c == '\'':
				// Only a quote at the beginning of a text quotes.
				if i > 0 && !strings.ContainsRune(" [{,:", line[i-1]) {
					continue
				}
				if raw, ok := quotedText(line, i); ok {
					i += len([]rune(raw)) - 1
				}
			case c == '{' || c == '[':
				if i == 0 || strings.ContainsRune(" [{,:", line[i-1]) {
					open = append(open, Place{Line: n, Col: i + 1})
				}
			case (c == '}' || c == ']') && len(open) > 0:
				open = open[:len(open)-1]
			}
		}
	}
	if len(open) == 0 {
		r.add(at, "a comma or a closing bracket is missing before this text")
		return
	}
	p := open[len(open)-1]
	if l := []rune(r.src.line(at.Line)); at.Col > 0 && at.Col <= len(l) {
		if before := strings.TrimSpace(string(l[:at.Col-1])); strings.HasSuffix(before, "]") || strings.HasSuffix(before, "}") {
			r.add(at, "%s", afterBracket)
			return
		}
	}
	if p.Line == at.Line && strings.ContainsAny(r.src.line(at.Line), "}]") {
		r.add(at, "a comma is missing before this text")
		return
	}
	opener, closer := r.src.line(p.Line), "}"
	if []rune(opener)[p.Col-1] == '[' {
		closer = "]"
	}
	r.add(p, "this bracket is not closed; write %s at its end, and commas between its entries", closer)
}
