// Package fault describes what is wrong with a user's input and where, so that every reader of a
// study or a weather record reports it in the same way: file, line, column, key, what was found, and
// what to write instead.
package fault

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Most is the largest number of problems that one run reports.
const Most = 10

// Error is one problem in one place of a user's file. It prints as
//
//	FILE:LINE:COL: KEY: TEXT
//
// followed by the excerpt, where there is one; parts that are zero are left out. FILE is written as Name does.
type Error struct {
	File    string // as the user named it
	Line    int    // 1-based, 0 when the whole file is meant
	Col     int    // 1-based, in characters, 0 when the whole line is meant
	Key     string // the key or column as the user wrote it, such as options[2].trench_drains.depth
	Text    string // what is wrong, what was expected, what to do
	Excerpt string // the offending line with a caret below it; may be empty
}

func (e *Error) Error() string {
	var b strings.Builder
	b.WriteString(Name(e.File))
	if e.Line > 0 {
		fmt.Fprintf(&b, ":%d", e.Line)
		if e.Col > 0 {
			fmt.Fprintf(&b, ":%d", e.Col)
		}
	}
	if b.Len() > 0 {
		b.WriteString(": ")
	}
	if e.Key != "" {
		b.WriteString(e.Key)
		b.WriteString(": ")
	}
	b.WriteString(e.Text)
	if e.Excerpt != "" {
		b.WriteByte('\n')
		b.WriteString(e.Excerpt)
	}
	return b.String()
}

// Name is the name of a file, or another word that a user typed, as a message shows it: as it is, or in quotes, with
// escapes, where it would steer the terminal, or where one could not see where it ends.
func Name(name string) string {
	unseen := func(r rune) bool { return !unicode.IsGraphic(r) }
	if !utf8.ValidString(name) || strings.ContainsFunc(name, unseen) || strings.TrimSpace(name) != name {
		return strconv.Quote(name)
	}
	return name
}

// List collects problems, so that one run can report several.
// The zero List is empty and ready to use.
type List struct {
	errs []error
	more int
}

// Add appends a problem. After Most problems it only counts.
func (l *List) Add(err error) {
	if len(l.errs) == Most {
		l.more++
		return
	}
	l.errs = append(l.errs, err)
}

// Err returns nil for an empty list, and otherwise one error that prints each problem on a line of its own.
// errors.As finds the *Error values in it.
func (l *List) Err() error {
	switch {
	case len(l.errs) == 0:
		return nil
	case l.more > 0:
		more := fmt.Errorf("and %d more problems", l.more)
		if l.more == 1 {
			more = errors.New("and 1 more problem")
		}
		return errors.Join(append(l.errs[:len(l.errs):len(l.errs)], more)...)
	}
	return errors.Join(l.errs...)
}
