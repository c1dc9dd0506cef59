package scenario

import (
	"bytes"
	"cmp"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"unicode"
	"unicode/utf8"

	"quietslope/scenario/fault"
)

// MaxStudyBytes is the largest study file that is read.
const MaxStudyBytes = 1_000_000

// Load reads and checks the study file at path. The path as given names the file in errors, and its folder is where
// the files that the study names are looked for.
//
// Whatever is wrong with the file or its text comes as one or more *fault.Error, up to fault.Most of them in the order
// of the file. Any other error is the machine's: no permission, a disk that does not answer.
func Load(path string) (*Study, error) {
	whole := func(format string, args ...any) error {
		return &fault.Error{File: path, Text: fmt.Sprintf(format, args...)}
	}
	if path == "" {
		return nil, &fault.Error{Text: "no study file is named"}
	}
	f, err := os.Open(path)
	switch {
	case errors.Is(err, fs.ErrNotExist):
		hint := ""
		if near := fault.NearestFile(path, func(name string) bool {
			return strings.HasSuffix(name, ".yaml") || strings.HasSuffix(name, ".yml")
		}); near != "" {
			hint = fmt.Sprintf("; did you mean %s?", fault.Name(filepath.ToSlash(filepath.Join(filepath.Dir(path), near))))
		}
		return nil, whole("there is no such file%s", hint)
	case errors.Is(err, syscall.ENOTDIR), errors.Is(err, syscall.ENAMETOOLONG), errors.Is(err, syscall.EINVAL):
		return nil, whole("this names no file that there could be")
	case err != nil:
		return nil, unreadable(path, err)
	}
	defer f.Close() // read only: nothing can be lost on closing
	if info, err := f.Stat(); err == nil && info.IsDir() {
		return nil, whole("this is a folder; name the study file in it")
	}
	src, err := io.ReadAll(io.LimitReader(f, MaxStudyBytes+1))
	if err != nil {
		return nil, unreadable(path, err)
	}
	return Parse(path, src)
}

// unreadable puts an error of the machine into plain words.
func unreadable(path string, err error) error {
	var pe *fs.PathError
	if errors.As(err, &pe) {
		err = pe.Err
	}
	return fmt.Errorf("%s: the file cannot be read: %w", fault.Name(path), err)
}

// Parse reads and checks the text of a study file. The file need not exist: its name stands in errors, and its folder
// is where the files that the study names are looked for. Errors are as those of Load.
func Parse(file string, src []byte) (*Study, error) {
	text, err := readable(file, src)
	if err != nil {
		return nil, err
	}
	lines := &source{file: file, lines: strings.Split(text, "\n")}
	found := &problems{src: lines}
	root, err := readSafely(found)
	if err != nil {
		return nil, err
	}
	if root == nil {
		return nil, found.err()
	}
	s := decodeStudy(root, found)
	if err := found.err(); err != nil {
		return nil, err
	}
	sum := sha256.Sum256(src)
	s.SHA256 = hex.EncodeToString(sum[:])
	return s, nil
}

// readSafely reads the tree of a study. The reader of the format is not ours: whatever it may trip over, the user hears
// which file did it.
func readSafely(found *problems) (root *node, err error) {
	defer func() {
		if r := recover(); r != nil {
			root, err = nil, &fault.Error{File: found.src.file, Text: fmt.Sprintf("this text cannot be read as a study (%v); simplify it, or report it as a fault of the program", r)}
		}
	}()
	return readTree(found), nil
}

// readable checks that the bytes are text that a study may hold, and returns it with plain line ends and without a
// byte-order mark.
func readable(file string, src []byte) (string, error) {
	fail := func(line, col int, format string, args ...any) (string, error) {
		return "", &fault.Error{File: file, Line: line, Col: col, Text: fmt.Sprintf(format, args...)}
	}
	switch {
	case len(src) > MaxStudyBytes:
		return fail(0, 0, "the file is larger than 1 MB; a study is a short text, and its data stand in files of their own")
	case len(src) == 0:
		return fail(0, 0, "the file is empty; a study begins with a line such as: study: Bank above the mill, drainage options")
	case bytes.HasPrefix(src, []byte{0xff, 0xfe}) || bytes.HasPrefix(src, []byte{0xfe, 0xff}):
		return fail(0, 0, "the file is UTF-16 text; save it as UTF-8")
	case bytes.HasPrefix(src, []byte("PK\x03\x04")):
		return fail(0, 0, "the file is a document of an office program or a zip archive; a study is plain text, saved as UTF-8")
	case bytes.HasPrefix(src, []byte{0x1f, 0x8b}):
		return fail(0, 0, "the file is compressed; a study is plain text")
	}
	src = bytes.TrimPrefix(src, []byte("\ufeff"))
	if bytes.IndexByte(src, 0) >= 0 {
		return fail(0, 0, "the file is not text: it holds zero bytes; a study is plain text in UTF-8")
	}
	src = bytes.ReplaceAll(src, []byte("\r\n"), []byte("\n"))
	line, col := 1, 1
	for i := 0; i < len(src); {
		r, n := utf8.DecodeRune(src[i:])
		switch {
		case r == utf8.RuneError && n == 1:
			return fail(line, col, "the byte 0x%02x is not UTF-8 text; save the file as UTF-8", src[i])
		case r == '\n':
			line, col = line+1, 0
		case r == '\r':
			return fail(line, col, "a carriage return stands alone here; save the file with line feeds")
		case unicode.IsControl(r) && r != '\t':
			return fail(line, col, "the control character U+%04X stands here; delete it", r)
		case r == '\u2028' || r == '\u2029' || unicode.Is(unicode.Bidi_Control, r) || r == '\ufeff':
			return fail(line, col, "the invisible character U+%04X stands here; delete it", r)
		}
		i += n
		col++
	}
	return string(src), nil
}

// source is the text of a study, for pointing into it.
type source struct {
	file  string
	lines []string
}

// line returns the text of a line counted from 1, and "" outside the file.
func (s *source) line(n int) string {
	if n < 1 || n > len(s.lines) {
		return ""
	}
	return s.lines[n-1]
}

// excerpt shows a line with a caret below a column, both counted from 1. A long line is cut on both sides of it.
func (s *source) excerpt(line, col int) string {
	const before, after = 60, 30
	text := []rune(s.line(line))
	if line < 1 || line > len(s.lines) {
		return ""
	}
	at := max(col-1, 0)
	if at > len(text) {
		at = len(text)
	}
	lead, tail := "", ""
	from, to := 0, len(text)
	if at > before+20 {
		from, lead = at-before, "…"
	}
	if to > at+after+20 && to > before+after {
		to, tail = max(at+after, min(from+before+after, to)), "…"
	}
	shown := strings.Map(func(r rune) rune {
		if r == '\t' {
			return ' '
		}
		return r
	}, string(text[from:to]))
	out := fmt.Sprintf("%5d | %s%s%s", line, lead, strings.TrimRight(shown, " "), tail)
	if col > 0 {
		out += "\n      | " + strings.Repeat(" ", at-from+len([]rune(lead))) + "^"
	}
	return out
}

// fault makes an error of a place and a text.
func (s *source) fault(p Place, text string) *fault.Error {
	return &fault.Error{File: s.file, Line: p.Line, Col: p.Col, Key: p.Key, Text: text, Excerpt: s.excerpt(p.Line, p.Col)}
}

// problems collects what is wrong with a study.
type problems struct {
	src  *source
	list []problem
}

type problem struct {
	place Place
	text  string
}

func (ps *problems) add(p Place, format string, args ...any) {
	ps.list = append(ps.list, problem{p, fmt.Sprintf(format, args...)})
}

// err returns the problems in the order of the file, at most fault.Most and the number of the rest, or nil for none.
func (ps *problems) err() error {
	slices.SortStableFunc(ps.list, func(a, b problem) int {
		return cmp.Or(cmp.Compare(a.place.Line, b.place.Line), cmp.Compare(a.place.Col, b.place.Col))
	})
	// What one line says of several options is one problem.
	said := map[problem]bool{}
	ps.list = slices.DeleteFunc(ps.list, func(p problem) bool {
		p.place.Key = ""
		again := said[p]
		said[p] = true
		return again
	})
	var list fault.List
	for i, p := range ps.list {
		if i < fault.Most {
			list.Add(ps.src.fault(p.place, p.text))
		} else {
			list.Add(nil) // only counted
		}
	}
	return list.Err()
}

// Fault is a problem at a place of the study, for checks made after reading.
func (s *Study) Fault(p Place, format string, args ...any) *fault.Error {
	text := fmt.Sprintf(format, args...)
	if s.src == nil { // a study that was not read from a file
		return &fault.Error{File: s.File, Line: p.Line, Col: p.Col, Key: p.Key, Text: text}
	}
	return s.src.fault(p, text)
}

// PlaceOf returns the place of a key such as ground.deep.seepage or options[2].trench_drains.depth. For a key that
// the study does not give it is the place of the innermost block around it that is given, with the key's own name.
func (s *Study) PlaceOf(key string) Place {
	for at := key; at != ""; {
		if p, ok := s.places[at]; ok {
			p.Key = key
			return p
		}
		at = at[:max(strings.LastIndexAny(at, ".["), 0)]
	}
	return Place{Key: key}
}
