package main

import (
	"fmt"
	"io"
	"strings"
)

// bashLine is a command line up to the cursor. Bash hands the words of a line out as typed and puts completions in as
// they are, so both must be read and quoted here; zsh and fish do that themselves.
type bashLine struct {
	words []string // after the program's name, without their quoting
	raw   string   // the last of them, as typed
	quote byte     // the quote that is open at its end, ' or ", or 0
	head  int      // bytes of the last word, without quoting, that bash leaves alone when it puts in a completion
}

// readBash splits a line as bash does, as far as people type it: with blanks, quotes and backslashes, and no expansion.
// When bash completes a word it replaces what follows the quote that is open, or else the last unquoted break
// character of COMP_WORDBREAKS.
func readBash(line, breaks string) bashLine {
	var b bashLine
	var text strings.Builder
	start := -1                 // of the word in the line; -1 between words
	afterBreak, inQuote := 0, 0 // bytes of text before what would be replaced
	for i := 0; i < len(line); i++ {
		c := line[i]
		if b.quote == 0 && strings.IndexByte(" \t\n", c) >= 0 {
			if start >= 0 {
				b.words = append(b.words, text.String())
			}
			text.Reset()
			start = -1
			continue
		}
		if start < 0 {
			start, afterBreak = i, 0
		}
		switch {
		case c == b.quote:
			b.quote = 0
		case b.quote == '\'':
			text.WriteByte(c)
		case c == '\\' && b.quote == '"' && i+1 < len(line) && strings.IndexByte("$`\"\\", line[i+1]) < 0:
			text.WriteByte(c)
		case c == '\\':
			if i++; i < len(line) { // else the letter that it quotes is not typed yet
				text.WriteByte(line[i])
			}
		case b.quote == 0 && (c == '\'' || c == '"'):
			b.quote, inQuote = c, text.Len()
		default:
			text.WriteByte(c)
			if b.quote == 0 && strings.IndexByte(breaks, c) >= 0 {
				if afterBreak = text.Len(); c == '@' { // which bash replaces too
					afterBreak--
				}
			}
		}
	}
	b.words = append(b.words, text.String())[1:]
	if start >= 0 {
		b.raw = line[start:]
		b.head = afterBreak
	}
	if b.quote != 0 {
		b.head = inQuote
	}
	return b
}

// answer writes a proposal for the script: the words that begin as the last one does, quoted, without the part that
// bash leaves alone. Where the script lists files, it needs the path as typed, what to put before each, and what to
// take away from its beginning.
func (b bashLine) answer(w io.Writer, p proposal) {
	typed := b.words[len(b.words)-1]
	if p.kind == wordsKind {
		var fit []string
		for _, word := range p.words {
			if full := p.before + word.text; strings.HasPrefix(full, typed) {
				fit = append(fit, full[b.head:])
			}
		}
		for _, text := range fit {
			if len(fit) == 1 {
				fmt.Fprintln(w, endBash(text, b.quote))
			} else {
				fmt.Fprintln(w, quoteBash(text, b.quote))
			}
		}
		return
	}
	path, add, drop := b.raw, "", ""
	if p.before != "" {
		rest, plain := strings.CutPrefix(b.raw, p.before)
		if path = rest; !plain {
			path = typed[len(p.before):]
		}
	}
	if b.head < len(p.before) {
		add = p.before[b.head:]
	} else {
		drop = typed[len(p.before):b.head]
	}
	fmt.Fprintf(w, "%s\n%s\n%s\n", path, add, drop)
}

// endBash quotes a text after which the word ends. Bash then closes the quote that is open, but not where the text already
// ends in such a quote: that one must close the word itself.
func endBash(text string, quote byte) string {
	last := len(text) - 1
	if quote == 0 || last < 0 {
		return quoteBash(text, quote)
	}
	before, q := quoteBash(text[:last], quote), string(quote)
	switch {
	case text[last] == quote:
		return before + q + `\` + q
	case quote == '"' && text[last] == '!':
		return before + `"'!'""`
	}
	return quoteBash(text, quote)
}

// quoteBash quotes a text for bash, inside the quote that is open, or with backslashes where none is.
func quoteBash(text string, quote byte) string {
	switch quote {
	case '\'':
		return strings.ReplaceAll(text, `'`, `'\''`)
	case '"': // no backslash takes its meaning from ! there
		return strings.NewReplacer(`\`, `\\`, `$`, `\$`, "`", "\\`", `"`, `\"`, `!`, `"'!'"`).Replace(text)
	}
	var b strings.Builder
	for i := 0; i < len(text); i++ {
		c := text[i]
		letter := 'a' <= c && c <= 'z' || 'A' <= c && c <= 'Z' || '0' <= c && c <= '9' || c >= 0x80
		if !letter && strings.IndexByte("_-./,:=+@%^", c) < 0 {
			b.WriteByte('\\')
		}
		b.WriteByte(c)
	}
	return b.String()
}
