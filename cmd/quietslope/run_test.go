package main

import (
	"bytes"
	"context"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"github.com/rogpeppe/go-internal/testscript"

	"quietslope/cmd/quietslope/render"
	"quietslope/scenario"
	"quietslope/scenario/fault"
)

var update = flag.Bool("update", false, "rewrite the golden files and the expected output of the scripts")

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){"quietslope": main})
}

// TestScript runs the program as a process of its own. $DEMO is the folder of the demo; "demo FOLDER" copies its study
// and weather to FOLDER.
func TestScript(t *testing.T) {
	demo, err := filepath.Abs("../../testdata/demo")
	if err != nil {
		t.Fatal(err)
	}
	testscript.Run(t, testscript.Params{
		Dir: "testdata/script", UpdateScripts: *update, RequireExplicitExec: true, RequireUniqueNames: true,
		Setup: func(e *testscript.Env) error {
			e.Setenv("TZ", "UTC")
			e.Setenv("DEMO", demo)
			return nil
		},
		Condition: func(cond string) (bool, error) {
			if cond == "root" {
				return os.Geteuid() == 0, nil
			}
			if path, ok := strings.CutPrefix(cond, "exists:"); ok {
				_, err := os.Stat(path)
				return err == nil, nil
			}
			return false, fmt.Errorf("unknown condition %q", cond)
		},
		Cmds: map[string]func(*testscript.TestScript, bool, []string){
			"demo":   copyDemo,
			"status": status,
			"only":   only,
		},
	})
}

// copyDemo copies the demo's study and weather to a folder, which is made.
func copyDemo(ts *testscript.TestScript, _ bool, args []string) {
	to := ts.MkAbs(args[0])
	ts.Check(os.MkdirAll(to, 0o777))
	for _, name := range []string{"study.yaml", "weather.csv"} {
		data, err := os.ReadFile(filepath.Join(ts.Getenv("DEMO"), name))
		ts.Check(err)
		ts.Check(os.WriteFile(filepath.Join(to, name), data, 0o666))
	}
}

// status runs a command and demands its exit status: status 2 quietslope compare.
func status(ts *testscript.TestScript, _ bool, args []string) {
	err := ts.Exec(args[1], args[2:]...)
	got := "0"
	if err != nil {
		got = strings.TrimPrefix(err.Error(), "exit status ")
	}
	if got != args[0] {
		ts.Fatalf("status %s, want %s", got, args[0])
	}
}

// only demands that a folder holds exactly these names: only . a b.
func only(ts *testscript.TestScript, _ bool, args []string) {
	entries, err := os.ReadDir(ts.MkAbs(args[0]))
	ts.Check(err)
	var names []string
	for _, e := range entries {
		if !strings.HasPrefix(e.Name(), ".tmp") { // of the script engine
			names = append(names, e.Name())
		}
	}
	want := slices.Sorted(slices.Values(args[1:]))
	if !slices.Equal(names, want) {
		ts.Fatalf("%s holds %q, want %q", args[0], names, want)
	}
}

// program runs the command in this process.
func program(ctx context.Context, args ...string) (code int, stdout, stderr string) {
	var out, errs bytes.Buffer
	code = run(ctx, args, &out, &errs)
	return code, out.String(), errs.String()
}

func compareGolden(t *testing.T, name, got string) {
	t.Helper()
	path := name
	if !filepath.IsAbs(path) {
		path = filepath.Join("testdata", name)
	}
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if d := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(got, "\n")); d != "" {
		t.Errorf("%s differs (-want +got); rerun with -update to accept:\n%s", path, d)
	}
}

// TestHelp: help is on standard output, fits 100 columns, and says the same however it is asked for.
func TestHelp(t *testing.T) {
	for _, tt := range []struct {
		golden string
		ways   [][]string
	}{
		{"help.golden", [][]string{{}, {"help"}, {"--help"}, {"-h"}, {"help", "--help"}, {"--help", "compare"}}},
		{"help-check.golden", [][]string{{"help", "check"}, {"check", "-h"}}},
		{"help-compare.golden", [][]string{{"help", "compare"}, {"compare", "--help"}, {"compare", "study.yaml", "-h"}, {"compare", "--out", "x", "study.yaml", "--help", "--nope"}}},
		{"help-study.golden", [][]string{{"help", "study"}, {"h", "study"}, {"help", "study", "--help"}}},
		{"help-new.golden", [][]string{{"help", "new"}, {"new", "d", "--force", "--help"}}},
		{"help-completion.golden", [][]string{{"help", "completion"}, {"completion", "-h", "bash"}}},
		{"help-drains.golden", [][]string{{"help", "drains"}, {"drains", "-h"}, {"drains", "--spacing", "8m", "--help"}}},
		{"help-size.golden", [][]string{{"help", "size"}, {"size", "-h"}, {"size", "study.yaml", "--vary", "x", "--help"}}},
		{"help-levels.golden", [][]string{{"help", "levels"}, {"levels", "--help", "--", "x"}}},
	} {
		for _, args := range tt.ways {
			code, stdout, stderr := program(t.Context(), args...)
			if code != 0 || stderr != "" {
				t.Errorf("%q: status %d, stderr %q", args, code, stderr)
			}
			compareGolden(t, tt.golden, stdout)
			for line := range strings.Lines(stdout) {
				if len([]rune(line)) > 101 {
					t.Errorf("%s: too wide: %q", tt.golden, line)
				}
			}
		}
	}
	for _, way := range []string{"--version", "-v"} {
		if code, stdout, _ := program(t.Context(), way); code != 0 || stdout != "quietslope version "+scenario.Version+"\n" {
			t.Errorf("%s: status %d, %q", way, code, stdout)
		}
	}
}

// TestUsage: a command line that cannot be understood is refused with status 2, once, on standard error only.
func TestUsage(t *testing.T) {
	var all strings.Builder
	for _, args := range [][]string{
		{"nope"}, {"comapre", "study.yaml"}, {"study.yaml"}, {""}, {"help", "nope"}, {"help", "levls"}, {"--out", "x", "compare", "study.yaml"}, {"--", "compare"},
		{"compare"}, {"compare", "--"}, {"compare", ""}, {"compare", "a.yaml", "b.yaml"}, {"compare", "a.yaml", "--", "--out"},
		{"compare", "--frmat", "json", "study.yaml"}, {"compare", "study.yaml", "-x"}, {"compare", "study.yaml", "--=3"}, {"check", "study.yaml", "--option", "a"},
		{"compare", "study.yaml", "--out"}, {"compare", "--out", "--format", "json", "study.yaml"}, {"levels", "study.yaml", "--option", "--"},
		{"compare", "study.yaml", "--out", "a", "--out=b"}, {"compare", "study.yaml", "--format", "text", "-format", "json"},
		{"compare", "study.yaml", "--format", "jsno"}, {"check", "study.yaml", "--format=Markdwn"}, {"compare", "study.yaml", "--format", "xml"}, {"compare", "study.yaml", "--format="},
		{"compare", "study.yaml", "--out="}, {"compare", "study.yaml", "--out", "-"}, {"compare", "study.yaml", "--out=-x"}, {"compare", "study.yaml", "--out", "testdata"},
		{"compare", "study.yaml", "--out", "testdata/"}, {"compare", "study.yaml", "--out", "no/such/folder/x.txt"}, {"compare", "study.yaml", "--out", "run_test.go/x.txt"},
		{"compare", "study.yaml", "--out", "nofile/"}, {"compare", "study.yaml", "--out", "/dev/null"}, {"compare", "study.yaml", "--out", "/dev/../dev/stdout"}, {"levels", "study.yaml", "--from="}, {"compare", "study.yaml", "--against="},
		{"new"}, {"new", ""}, {"new", "a", "b"}, {"new", "--frce", "a"}, {"new", "--", "-x"}, {"new", "run_test.go"}, {"new", "run_test.go/x"}, {"new", "no/such/folder"},
		{"new", "starter"}, {"completion"}, {"completion", "bash", "zsh"}, {"completion", "bsh"}, {"completion", "tcsh"}, {"completion", "--format", "bash"},
		// Mistakes of a first time.
		{"study.yaml", "check"}, {"--check", "study.yaml"}, {"version"}, {"check", "study.yaml", "weather.csv"}, {"check", "weather.csv.gz", "study.yaml"},
		{"compare", "study.yaml", "—out", "x"}, {"compare", "study.yaml", "–out", "x"}, {"compare", "study.yaml", "-o", "x"}, {"compare", "study.yaml", "--output", "x"},
		{"compare", "study.yaml", "--json"}, {"compare", "study.yaml", "--format", "JSON"}, {"compare", "study.yaml", "format=json"}, {"compare", "-f", "json", "study.yaml"},
		{"check", "--weather", "weather.csv", "study.yaml"}, {"help", "format"}, {"run", "study.yaml"},
	} {
		code, stdout, stderr := program(t.Context(), args...)
		if code != 2 || stdout != "" {
			t.Errorf("%q: status %d, stdout %q", args, code, stdout)
		}
		if !strings.HasPrefix(stderr, "quietslope: ") || strings.Count(stderr, "quietslope: ") != 1 || strings.Count(stderr, "\n") != 2 {
			t.Errorf("%q: %q", args, stderr)
		}
		fmt.Fprintf(&all, "$ quietslope %s\n%s", strings.Join(quoteAll(args), " "), stderr)
	}
	compareGolden(t, "usage.golden", all.String())
}

func quoteAll(args []string) []string {
	var out []string
	for _, a := range args {
		if a == "" {
			a = `""`
		}
		out = append(out, a)
	}
	return out
}

// TestHostileWords: no name of a file and no word of a command line steers the terminal; names that do are shown in quotes.
func TestHostileWords(t *testing.T) {
	t.Chdir(t.TempDir())
	const esc = "\x1b[31m"
	if err := errors.Join(os.WriteFile(esc+".yaml", []byte("study: [\n"), 0o666), os.WriteFile("study.yam", nil, 0o666), os.Mkdir(esc, 0o777), os.WriteFile(esc+"/x.yml", nil, 0o666)); err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		args []string
		says string
	}{
		{[]string{"check", esc + ".yaml"}, `quietslope: "\x1b[31m.yaml":1:`},
		{[]string{"check", esc + "!.yaml"}, `quietslope: "\x1b[31m!.yaml": there is no such file` + "\n"}, // nor is the other named
		{[]string{"check", esc + "/x.yaml"}, `did you mean "\x1b[31m/x.yml"?`},
		{[]string{"check", "study.yaml "}, `quietslope: "study.yaml ": there is no such file`},
		{[]string{"check", "s.yaml", "--" + esc}, `unknown option "--\x1b[31m"; there are --format, --out`},
		{[]string{"schema", "--" + esc}, `unknown option "--\x1b[31m"`},
		{[]string{"check", "s.yaml", "—" + esc}, `write --"\x1b[31m"`},
		{[]string{esc, "check"}, `did you mean quietslope check "\x1b[31m"?`},
		{[]string{esc}, `unknown command "\x1b[31m"`},
		{[]string{esc + ".yaml"}, `did you mean quietslope compare "\x1b[31m.yaml"?`},
		{[]string{"check", "s.yaml", "--out=-" + esc}, `write ./"-\x1b[31m"`},
		{[]string{"check", "s.yaml", "--out", esc + "/no/x"}, `there is no folder "\x1b[31m/no"`},
		{[]string{"check", "s.yaml", "--format", esc}, `unknown format "\x1b[31m"`},
		{[]string{"check", esc, "b"}, `got "\x1b[31m" and "b"`},
	} {
		code, stdout, stderr := program(t.Context(), tt.args...)
		if code != 2 || stdout != "" || !strings.Contains(stderr, tt.says) || strings.Contains(stderr, "\x1b") {
			t.Errorf("%q: status %d, %q, %q", tt.args, code, stdout, stderr)
		}
	}
}

// TestArrange: options may stand anywhere, and reach the library before the arguments.
func TestArrange(t *testing.T) {
	app := newApp(io.Discard, io.Discard)
	for _, tt := range []struct{ args, want string }{
		{"compare s.yaml --out x", "compare --out x -- s.yaml"},
		{"compare --out x s.yaml", "compare --out x -- s.yaml"},
		{"compare --out=x s.yaml --format json", "compare --out=x --format json -- s.yaml"},
		{"compare -out x s.yaml", "compare -out x -- s.yaml"},
		{"compare --out -x s.yaml", "compare --out -x -- s.yaml"}, // refused later, by name
		{"compare --format json -- --help", "compare --format json -- --help"},
		{"compare -- -s.yaml", "compare -- -s.yaml"},
		{"compare -", "compare -- -"},
		{"compare help", "compare -- help"},
		{"compare study", "compare -- study"},
		{"help study", "--help"},
		{"levels --option a s.yaml --option b,c", "levels --option a --option b,c -- s.yaml"},
		{"new --force d", "new --force -- d"},
		{"completion zsh", "completion -- zsh"},
		{"help", "--help"},
		{"", ""},
	} {
		got, err := arrange(app, strings.Fields(tt.args))
		if err != nil || strings.Join(got, " ") != tt.want {
			t.Errorf("arrange(%q) = %q, %v, want %q", tt.args, strings.Join(got, " "), err, tt.want)
		}
	}
}

// TestReport: which error gives which status, and that each problem is printed once.
func TestReport(t *testing.T) {
	gone, cancel := context.WithCancel(t.Context())
	cancel()
	var list fault.List
	list.Add(&fault.Error{File: "s.yaml", Line: 3, Col: 5, Key: "bands", Text: "missing", Excerpt: "> 3 | x\n"})
	list.Add(&fault.Error{File: "s.yaml", Line: 9, Text: "other"})
	for _, tt := range []struct {
		ctx    context.Context
		err    error
		code   int
		stderr string
	}{
		{t.Context(), nil, 0, ""},
		{t.Context(), list.Err(), 2, "quietslope: s.yaml:3:5: bands: missing\n> 3 | x\nquietslope: s.yaml:9: other\n"},
		{t.Context(), fmt.Errorf("wrapped: %w", &fault.Error{Text: "bad"}), 2, "quietslope: wrapped: bad\n"},
		{t.Context(), errors.New("balance does not close"), 1, "quietslope: balance does not close\n"},
		{t.Context(), &outputError{"x.txt", &os.PathError{Op: "write", Path: ".part", Err: syscall.ENOSPC}}, 1, "quietslope: x.txt: the result could not be written: no space left on device\n"},
		{t.Context(), &outputError{"\x1b[31m", syscall.EACCES}, 1, `quietslope: "\x1b[31m": the result could not be written: permission denied` + "\n"},
		{t.Context(), errors.New("a\x1b[31m\u202eb\tc\xff"), 1, "quietslope: a\ufffd[31m\ufffdb\tc\ufffd\n"},
		{t.Context(), &outputError{"standard output", &os.PathError{Op: "write", Path: "|1", Err: syscall.EPIPE}}, 1, ""},
		{gone, fmt.Errorf("option: %w", context.Canceled), 130, "quietslope: interrupted before the result was complete\n"},
		{t.Context(), context.Canceled, 1, "quietslope: context canceled\n"}, // nobody pressed Ctrl-C
	} {
		var b bytes.Buffer
		if code := report(tt.ctx, &b, tt.err); code != tt.code || b.String() != tt.stderr {
			t.Errorf("%v: status %d and %q, want %d and %q", tt.err, code, &b, tt.code, tt.stderr)
		}
	}
}

// TestPanic: a fault of ours is one line, with its stack only where asked for.
func TestPanic(t *testing.T) {
	for _, debug := range []string{"", "1"} {
		t.Setenv(debugVariable, debug)
		_, err := await(t.Context(), func() (int, error) { panic("index out of range") })
		var b bytes.Buffer
		if code := report(t.Context(), &b, err); code != 1 {
			t.Errorf("status %d", code)
		}
		if lines := strings.Count(b.String(), "\n"); !strings.Contains(b.String(), "internal fault") || !strings.Contains(b.String(), "please report") || (lines > 1) != (debug != "") {
			t.Errorf("%s=%q: %s", debugVariable, debug, &b)
		}
	}
	t.Setenv(debugVariable, "")
	var b bytes.Buffer
	if code := run(t.Context(), []string{"help"}, panicking{}, &b); code != 1 || !strings.Contains(b.String(), "internal fault") || strings.Count(b.String(), "\n") != 1 {
		t.Errorf("status %d, %q", code, &b)
	}
}

type panicking struct{}

func (panicking) Write([]byte) (int, error) { panic("writer") }

type failing struct{ err error }

func (f failing) Write([]byte) (int, error) { return 0, f.err }

// TestFailedStdout: a write to standard output that fails is status 1, also of help; a closed pipe says nothing.
func TestFailedStdout(t *testing.T) {
	for _, tt := range []struct {
		err    error
		stderr string
	}{
		{syscall.ENOSPC, "quietslope: standard output: the result could not be written: no space left on device\n"},
		{syscall.EPIPE, ""},
	} {
		var b bytes.Buffer
		if code := run(t.Context(), []string{"help"}, failing{tt.err}, &b); code != 1 || b.String() != tt.stderr {
			t.Errorf("help: status %d, %q", code, &b)
		}
		b.Reset()
		o := &output{stdout: failing{tt.err}}
		err := o.write(t.Context(), func(w io.Writer) error { _, err := io.WriteString(w, "x"); return err })
		if code := report(t.Context(), &b, err); code != 1 || b.String() != tt.stderr {
			t.Errorf("result: status %d, %q", code, &b)
		}
	}
}

// TestAwait: what hangs is left behind when the context ends.
func TestAwait(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	block := make(chan struct{})
	defer close(block)
	started := make(chan struct{})
	go func() { <-started; cancel() }()
	_, err := await(ctx, func() (int, error) { close(started); <-block; return 1, nil })
	if !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	if _, err := await(ctx, func() (int, error) { t.Error("started after the end"); return 0, nil }); err == nil {
		t.Error("no error")
	}
}

// TestReplace: a file is written whole or not at all.
func TestReplace(t *testing.T) {
	hello := func(w io.Writer) error { _, err := io.WriteString(w, "new\n"); return err }
	inFolder := func(t *testing.T, want ...string) {
		t.Helper()
		entries, err := os.ReadDir(".")
		if err != nil {
			t.Fatal(err)
		}
		var names []string
		for _, e := range entries {
			names = append(names, e.Name())
		}
		if !slices.Equal(names, want) {
			t.Errorf("the folder holds %q, want %q", names, want)
		}
	}
	holds := func(t *testing.T, name, want string) {
		t.Helper()
		if got, err := os.ReadFile(name); err != nil || string(got) != want {
			t.Errorf("%s: %q, %v, want %q", name, got, err, want)
		}
	}
	write := func(t *testing.T, ctx context.Context, name string, f func(io.Writer) error) error {
		t.Helper()
		o, err := openOut("compare", name)
		if err != nil {
			return err
		}
		return (&output{file: o}).write(ctx, f)
	}

	t.Run("new", func(t *testing.T) {
		t.Chdir(t.TempDir())
		if err := write(t, t.Context(), "x.txt", hello); err != nil {
			t.Fatal(err)
		}
		holds(t, "x.txt", "new\n")
		inFolder(t, "x.txt")
		if info, _ := os.Stat("x.txt"); info.Mode().Perm()&0o600 != 0o600 || info.Mode().Perm()&0o111 != 0 {
			t.Errorf("mode %v", info.Mode())
		}
	})
	t.Run("earlier", func(t *testing.T) {
		t.Chdir(t.TempDir())
		if err := os.WriteFile("x.txt", []byte("old, and longer\n"), 0o640); err != nil {
			t.Fatal(err)
		}
		if err := os.Chmod("x.txt", 0o640); err != nil {
			t.Fatal(err)
		}
		if err := write(t, t.Context(), "x.txt", hello); err != nil {
			t.Fatal(err)
		}
		holds(t, "x.txt", "new\n")
		inFolder(t, "x.txt")
		if info, _ := os.Stat("x.txt"); info.Mode().Perm() != 0o640 {
			t.Errorf("mode %v, want that of the earlier file", info.Mode())
		}
	})
	t.Run("through a link", func(t *testing.T) {
		t.Chdir(t.TempDir())
		if err := errors.Join(os.Mkdir("far", 0o777), os.WriteFile("far/x.txt", []byte("old\n"), 0o666), os.Symlink("far/x.txt", "link")); err != nil {
			t.Fatal(err)
		}
		if err := write(t, t.Context(), "link", hello); err != nil {
			t.Fatal(err)
		}
		holds(t, "far/x.txt", "new\n")
		if info, err := os.Lstat("link"); err != nil || info.Mode()&os.ModeSymlink == 0 {
			t.Error("the link is gone")
		}
		inFolder(t, "far", "link")
	})
	t.Run("link to nothing", func(t *testing.T) {
		t.Chdir(t.TempDir())
		if err := os.Symlink("nowhere", "link"); err != nil {
			t.Fatal(err)
		}
		if err := write(t, t.Context(), "link", hello); err == nil || !strings.Contains(err.Error(), "link to nothing") {
			t.Error(err)
		}
	})
	t.Run("failed", func(t *testing.T) {
		t.Chdir(t.TempDir())
		if err := os.WriteFile("x.txt", []byte("old\n"), 0o666); err != nil {
			t.Fatal(err)
		}
		broken := errors.New("broken")
		err := write(t, t.Context(), "x.txt", func(w io.Writer) error { return errors.Join(hello(w), broken) })
		if !errors.Is(err, broken) {
			t.Error(err)
		}
		holds(t, "x.txt", "old\n")
		inFolder(t, "x.txt")
	})
	t.Run("panicked", func(t *testing.T) {
		t.Chdir(t.TempDir())
		func() {
			defer func() { _ = recover() }()
			_ = write(t, t.Context(), "x.txt", func(w io.Writer) error { panic("broken") })
		}()
		inFolder(t)
	})
	t.Run("interrupted", func(t *testing.T) {
		t.Chdir(t.TempDir())
		ctx, cancel := context.WithCancel(t.Context())
		err := write(t, ctx, "x.txt", func(w io.Writer) error {
			if err := hello(w); err != nil {
				return err
			}
			cancel()
			return hello(w)
		})
		if !errors.Is(err, context.Canceled) {
			t.Error(err)
		}
		inFolder(t)
	})
	t.Run("interrupted at the end", func(t *testing.T) {
		t.Chdir(t.TempDir())
		ctx, cancel := context.WithCancel(t.Context())
		err := write(t, ctx, "x.txt", func(w io.Writer) error { defer cancel(); return hello(w) })
		if !errors.Is(err, context.Canceled) {
			t.Error(err)
		}
		inFolder(t)
	})
}

// TestSpare: the study and its weather are never replaced, under whatever name.
func TestSpare(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := errors.Join(os.WriteFile("study.yaml", nil, 0o666), os.WriteFile("other", nil, 0o666), os.Mkdir("sub", 0o777),
		os.Symlink("study.yaml", "soft"), os.Link("study.yaml", "hard"), os.Symlink("sub", "loop")); err != nil {
		t.Fatal(err)
	}
	for name, refused := range map[string]bool{
		"study.yaml": true, "./study.yaml": true, "sub/../study.yaml": true, "loop/../study.yaml": true, "soft": true, "hard": true,
		"other": false, "new": false, "STUDY.yaml": false,
	} {
		o, err := openOut("compare", name)
		if err != nil {
			t.Fatal(name, err)
		}
		err = o.spare("the study", "study.yaml")
		if (err != nil) != refused {
			t.Errorf("%s: %v", name, err)
		}
		var u *usageError
		if err != nil && !errors.As(err, &u) {
			t.Errorf("%s: %T", name, err)
		}
	}
}

// TestInterruptedLayout: a layout that takes long is left behind, and no file with it.
func TestInterruptedLayout(t *testing.T) {
	study, err := filepath.Abs("../../testdata/demo/study.yaml")
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	before := formats
	defer func() { formats = before }()
	block := make(chan struct{})
	defer close(block)
	formats = append(slices.Clone(before), format{"slow", "never done", func(io.Writer, any, func() *render.Page) error {
		cancel()
		<-block
		return nil
	}})
	t.Chdir(t.TempDir())
	code, stdout, stderr := program(ctx, "check", study, "--format", "slow", "--out", "x")
	if code != 130 || stdout != "" || !strings.Contains(stderr, "interrupted") {
		t.Errorf("status %d, %q, %q", code, stdout, stderr)
	}
	holdsOnly(t, ".")
}

// TestInterrupted: with Ctrl-C pressed nothing is written and the status is 130, at once.
func TestInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	study, err := filepath.Abs("../../testdata/demo/study.yaml")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	for _, args := range [][]string{{"compare", study}, {"check", study, "--out", "x"}, {"levels", study, "--out", "x"}} {
		start := time.Now()
		code, stdout, stderr := program(ctx, args...)
		if code != 130 || stdout != "" || stderr != "quietslope: interrupted before the result was complete\n" {
			t.Errorf("%q: status %d, %q, %q", args, code, stdout, stderr)
		}
		if took := time.Since(start); took > time.Second {
			t.Errorf("%q: took %v", args, took)
		}
	}
	if entries, err := os.ReadDir("."); err != nil || len(entries) > 0 {
		t.Errorf("left behind: %v, %v", entries, err)
	}
}
