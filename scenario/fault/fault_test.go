package fault

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

func TestErrorText(t *testing.T) {
	for _, tt := range []struct {
		err  Error
		want string
	}{
		{Error{File: "s.yaml", Line: 3, Col: 7, Key: "cover.seepage", Text: "is missing"}, "s.yaml:3:7: cover.seepage: is missing"},
		{Error{File: "s.yaml", Line: 3, Text: "is odd", Excerpt: "  3 | x"}, "s.yaml:3: is odd\n  3 | x"},
		{Error{File: "w.csv", Text: "is empty"}, "w.csv: is empty"},
		{Error{File: "\x1b[31m s.yaml", Line: 3, Text: "is odd"}, `"\x1b[31m s.yaml":3: is odd`},
		{Error{Key: "--option", Text: "is not known"}, "--option: is not known"},
	} {
		if got := tt.err.Error(); got != tt.want {
			t.Errorf("got %q, want %q", got, tt.want)
		}
	}
}

func TestName(t *testing.T) {
	for name, want := range map[string]string{
		"": "", "a b/ü (1).yaml": "a b/ü (1).yaml", `it's "6"`: `it's "6"`, "日本.csv": "日本.csv", "a\u00a0b": "a\u00a0b",
		"a\x1b[31m": `"a\x1b[31m"`, "a\nb": `"a\nb"`, "a\x00": `"a\x00"`, "a\xff": `"a\xff"`, "a\u009bm": `"a\u009bm"`, "gpj\u202efdp": `"gpj\u202efdp"`,
		" a": `" a"`, "a ": `"a "`, "a\u00a0": `"a\u00a0"`, "\t": `"\t"`,
	} {
		if got := Name(name); got != want {
			t.Errorf("%q: %s, want %s", name, got, want)
		}
	}
}

func TestList(t *testing.T) {
	var l List
	if l.Err() != nil {
		t.Error("an empty list is an error")
	}
	for i := range Most {
		l.Add(&Error{File: "f", Text: fmt.Sprint(i)})
	}
	var e *Error
	if err := l.Err(); !errors.As(err, &e) || e.Text != "0" {
		t.Errorf("the first problem is not found in %v", err)
	}
	full := l.Err().Error()
	l.Add(errors.New("one more"))
	if got := l.Err().Error(); got != full+"\nand 1 more problem" {
		t.Errorf("got %q", got)
	}
	l.Add(errors.New("and one"))
	if got := l.Err().Error(); got != full+"\nand 2 more problems" {
		t.Errorf("got %q", got)
	}
}

func TestNearest(t *testing.T) {
	keys := []string{"thickness", "seepage", "percolation", "full_at", "level", "rain_mm"}
	commands := []string{"check", "compare", "levels"}
	for _, tt := range []struct {
		known      []string
		word, want string
	}{
		{keys, "thicknes", "thickness"}, {keys, "Seepage", "seepage"}, {keys, "sepaage", "seepage"}, {keys, "SEAPAGE", "seepage"},
		{keys, "levle", "level"}, {keys, "fullat", "full_at"}, {keys, "rainmm", "rain_mm"},
		{keys, "height", ""}, {keys, "x", ""}, {keys, "", ""}, {keys, strings.Repeat("x", 1000), ""},
		{commands, "comapre", "compare"}, {commands, "chekc", "check"}, {commands, "level", "levels"}, {commands, "compares", "compare"},
		{commands, "xyz", ""}, {commands, "", ""}, {commands, "c", ""},
	} {
		if got := Nearest(tt.word, tt.known); got != tt.want {
			t.Errorf("%q of %q: got %q, want %q", tt.word, tt.known, got, tt.want)
		}
	}
}

func TestWords(t *testing.T) {
	for _, tt := range []struct {
		words []string
		want  string
	}{{nil, ""}, {[]string{"a"}, "a"}, {[]string{"a", "b"}, "a or b"}, {[]string{"a", "b", "c"}, "a, b or c"}} {
		if got := Words(tt.words, "or"); got != tt.want {
			t.Errorf("%q gives %q, want %q", tt.words, got, tt.want)
		}
	}
	if got := Count(0, "step") + ", " + Count(1, "step") + ", " + Count(2, "step"); got != "0 steps, 1 step, 2 steps" {
		t.Error(got)
	}
}
