package main

import (
	"context"
	"encoding/json"
	"errors"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"sync"
	"testing"

	"quietslope/scenario"
	"quietslope/scenario/result"
)

// TestNew: what is written can be checked, compared and replayed as it is, and tells a story with an honest warning.
func TestNew(t *testing.T) {
	golden, err := filepath.Abs("testdata/new.golden")
	if err != nil {
		t.Fatal(err)
	}
	t.Chdir(t.TempDir())
	code, stdout, stderr := program(t.Context(), "new", "my-slope")
	if code != 0 || stderr != "" {
		t.Fatalf("status %d, %s", code, stderr)
	}
	compareGolden(t, golden, stdout)
	holdsOnly(t, "my-slope", starterFiles...)
	for _, name := range starterFiles {
		want, err := starter.ReadFile("starter/" + name)
		if err != nil {
			t.Fatal(err)
		}
		if got, err := os.ReadFile("my-slope/" + name); err != nil || string(got) != string(want) {
			t.Errorf("%s: %v, or not as embedded", name, err)
		}
	}
	for _, args := range [][]string{{"check", "my-slope/study.yaml"}, {"levels", "my-slope/study.yaml"}} {
		if code, _, stderr := program(t.Context(), args...); code != 0 || stderr != "" {
			t.Errorf("%q: status %d, %s", args, code, stderr)
		}
	}
	code, stdout, stderr = program(t.Context(), "compare", "my-slope/study.yaml", "--format", "json")
	if code != 0 || stderr != "" {
		t.Fatalf("status %d, %s", code, stderr)
	}
	var r result.Comparison
	if err := json.Unmarshal([]byte(stdout), &r); err != nil {
		t.Fatal(err)
	}
	if !slices.ContainsFunc(r.Warnings, func(w result.Warning) bool { return w.Code == "record_short" }) {
		t.Error("nothing is said of the short record")
	}
	load := func(option int) float64 { return r.Cases[0].Options[option].Bands[1].LoadMDaysPerYear }
	nothing, trenches, channels, both := load(0), load(1), load(2), load(3)
	if p := r.Cases[0].Options[0].Bands[1].AnnualProbability; p < 0.3 || p > 0.7 {
		t.Errorf("the band is passed in a share of %v of the years", p)
	}
	if !(both < trenches && trenches < nothing/4 && channels < 0.75*nothing && channels > trenches) {
		t.Errorf("loads %v, %v, %v, %v", nothing, trenches, channels, both)
	}
}

// TestStarter: the two files are small and plain, and every key that stands in the study as a comment can be used.
func TestStarter(t *testing.T) {
	weather, err := starter.ReadFile("starter/weather.csv")
	if err != nil {
		t.Fatal(err)
	}
	if !strings.HasPrefix(string(weather), "date,rain_mm,pet_mm\n2012-01-01,") || len(weather) > 150_000 {
		t.Errorf("%d bytes, beginning %.60q", len(weather), weather)
	}
	study, err := starter.ReadFile("starter/study.yaml")
	if err != nil {
		t.Fatal(err)
	}
	if len(study) > 20_000 {
		t.Errorf("%d bytes", len(study))
	}
	for line := range strings.Lines(string(study)) {
		if len([]rune(line)) > 121 {
			t.Errorf("too wide: %q", line)
		}
	}
	// A comment has one blank after its #; a key has none, or those that it stands behind.
	aside := regexp.MustCompile(`(?m)^#(\S|  )`)
	all := aside.ReplaceAllString(string(study), "$1")
	t.Chdir(t.TempDir())
	if err := errors.Join(os.WriteFile("study.yaml", []byte(all), 0o666), os.WriteFile("weather.csv", weather, 0o666)); err != nil {
		t.Fatal(err)
	}
	if code, _, stderr := program(t.Context(), "compare", "study.yaml"); code != 0 || stderr != "" {
		t.Errorf("status %d\n%s", code, stderr)
	}
	s, err := scenario.Load("study.yaml")
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Options) != 11 || len(s.Bands) != 4 || len(s.Conditions) != 1 {
		t.Errorf("with all keys the study has %d options, %d bands and %d conditions", len(s.Options), len(s.Bands), len(s.Conditions))
	}
}

// TestNewFolders: which folders are taken, what is printed of them, and that nothing is written where one is refused.
func TestNewFolders(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := errors.Join(os.MkdirAll("there", 0o777), os.WriteFile("there/notes", nil, 0o666), os.MkdirAll("half", 0o777),
		os.WriteFile("half/weather.csv", []byte("mine\n"), 0o666), os.MkdirAll("odd/study.yaml", 0o777), os.MkdirAll("linked", 0o777),
		os.Symlink("../half/weather.csv", "linked/weather.csv"), os.Symlink("there", "way"), os.Symlink("nowhere", "lost"),
		os.Symlink("lost", "linked/study.yaml"), os.WriteFile("file", nil, 0o666)); err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct {
		args []string
		code int
		says string // on the stream that belongs to the status
	}{
		{[]string{"gone/."}, 0, "quietslope compare gone/study.yaml "},
		{[]string{"nowhere/../other"}, 0, "quietslope compare other/study.yaml "},
		{[]string{"esc\x1b[31m's"}, 0, `quietslope compare $'esc\x1b[31m\'s/study.yaml' `},
		{[]string{"--", "-\x1b"}, 2, `write ./"-\x1b"`},
		{[]string{"there"}, 0, "quietslope compare there/study.yaml "},
		{[]string{"way"}, 2, `"way" holds study.yaml and weather.csv already`}, // the same folder
		{[]string{"new/"}, 0, "quietslope compare new/study.yaml "},
		{[]string{"new/below"}, 0, "quietslope compare new/below/study.yaml "},
		{[]string{"."}, 0, "quietslope compare study.yaml "},
		{[]string{"Fräulein's hill"}, 0, `quietslope compare 'Fräulein'\''s hill/study.yaml' `},
		{[]string{"./-x"}, 0, "quietslope compare ./-x/study.yaml "},
		{[]string{"~"}, 0, "quietslope compare '~/study.yaml' "},
		{[]string{"--", "-y"}, 2, "write ./-y"},
		{[]string{"half"}, 2, `"half" holds weather.csv already, so nothing was written`},
		{[]string{"half/weather.csv"}, 2, "is a file"},
		{[]string{"file/below"}, 2, "leads through a file"},
		{[]string{"lost"}, 2, "is a link to nothing"},
		{[]string{"lost/"}, 2, "is a link to nothing"},
		{[]string{"no/where"}, 2, `there is no folder "no"`},
		{[]string{strings.Repeat("x", 300)}, 2, "is no name that a folder can have"},
		{[]string{"odd", "--force"}, 2, "is there already and no plain file"},
		{[]string{"linked", "--force"}, 2, "is there already and no plain file"},
		{[]string{"half", "--force"}, 0, "quietslope compare half/study.yaml "},
		{[]string{"--force", "half"}, 0, "quietslope compare half/study.yaml "},
	} {
		code, stdout, stderr := program(t.Context(), append([]string{"new"}, tt.args...)...)
		said, silent := stderr, stdout
		if tt.code == 0 {
			said, silent = stdout, stderr
		}
		if code != tt.code || !strings.Contains(said, tt.says) || silent != "" || strings.Contains(said, "\x1b") {
			t.Errorf("%q: status %d, %q, %q", tt.args, code, stdout, stderr)
		}
		if tt.args[0] == "half" && tt.code == 2 {
			if mine, err := os.ReadFile("half/weather.csv"); string(mine) != "mine\n" {
				t.Errorf("%q, %v", mine, err)
			}
			holdsOnly(t, "half", "weather.csv")
		}
	}
	holdsOnly(t, ".", "-x", "Fräulein's hill", "esc\x1b[31m's", "file", "gone", "half", "linked", "lost", "new", "odd", "other", "study.yaml", "there", "way", "weather.csv", "~")
	holdsOnly(t, "half", "study.yaml", "weather.csv")
	holdsOnly(t, "there", "notes", "study.yaml", "weather.csv")
	holdsOnly(t, "odd", "study.yaml")
}

// TestNewInterrupted: with Ctrl-C pressed neither files nor a folder are left.
func TestNewInterrupted(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	t.Chdir(t.TempDir())
	if code, stdout, stderr := program(ctx, "new", "d"); code != 130 || stdout != "" || !strings.Contains(stderr, "interrupted") {
		t.Errorf("status %d, %q, %q", code, stdout, stderr)
	}
	holdsOnly(t, ".")
	// Wherever it ends, also once the folder is made.
	for looks := 0; ; looks++ {
		switch err := writeStarter(&endsAfter{t.Context(), looks}, "d", false); {
		case err == nil && looks > 2: // it was looked at more often than this
			holdsOnly(t, "d", starterFiles...)
			return
		case !errors.Is(err, context.Canceled):
			t.Fatalf("ended after %d looks: %v", looks, err)
		}
		holdsOnly(t, ".")
	}
}

// endsAfter is a context that has ended once it was looked at so many times.
type endsAfter struct {
	context.Context
	looks int
}

func (c *endsAfter) Err() error {
	if c.looks--; c.looks < 0 {
		return context.Canceled
	}
	return nil
}

// TestNewRace: of many runs at once in one folder, one writes the study and the others are refused.
func TestNewRace(t *testing.T) {
	t.Chdir(t.TempDir())
	for range 20 {
		var errs [20]error
		var runs sync.WaitGroup
		for i := range errs {
			runs.Go(func() { errs[i] = writeStarter(t.Context(), "d", false) })
		}
		runs.Wait()
		done := 0
		for _, err := range errs {
			var refused *usageError
			switch {
			case err == nil:
				done++
			case !errors.As(err, &refused) || !strings.Contains(err.Error(), `"d" holds study.yaml`):
				t.Error(err)
			}
		}
		if done != 1 {
			t.Errorf("%d runs wrote the study", done)
		}
		holdsOnly(t, "d", starterFiles...)
		if err := os.RemoveAll("d"); err != nil {
			t.Fatal(err)
		}
	}
}

// TestNewMeanwhile: what comes up while the files are written is neither replaced nor taken away.
func TestNewMeanwhile(t *testing.T) {
	write := func(text string) func(io.Writer) error {
		return func(w io.Writer) error { _, err := io.WriteString(w, text); return err }
	}
	holds := func(name, want string) {
		t.Helper()
		if got, err := os.ReadFile(name); err != nil || string(got) != want {
			t.Errorf("%s: %q, %v, want %q", name, got, err, want)
		}
	}
	for _, late := range []string{"a", "b"} {
		t.Run(late, func(t *testing.T) {
			t.Chdir(t.TempDir())
			files := []*outFile{{name: "a", path: "a"}, {name: "b", path: "b"}}
			err := replaceAll(t.Context(), files, write("new\n"), func(w io.Writer) error {
				return errors.Join(write("new\n")(w), os.WriteFile(late, []byte("mine\n"), 0o666))
			})
			if !errors.Is(err, fs.ErrExist) {
				t.Error(err)
			}
			holdsOnly(t, ".", late)
			holds(late, "mine\n")
		})
	}
	t.Run("between", func(t *testing.T) { // the first, once placed, is replaced by another's, and the second by mine
		t.Chdir(t.TempDir())
		defer func() { link = os.Link }()
		link = func(from, to string) error {
			if to == "b" {
				if err := errors.Join(os.WriteFile("c", []byte("another's\n"), 0o666), os.Rename("c", "a"), os.WriteFile("b", []byte("mine\n"), 0o666)); err != nil {
					t.Error(err)
				}
			}
			return os.Link(from, to)
		}
		if err := replaceAll(t.Context(), []*outFile{{name: "a", path: "a"}, {name: "b", path: "b"}}, write("new\n"), write("new\n")); !errors.Is(err, fs.ErrExist) {
			t.Error(err)
		}
		holdsOnly(t, ".", "a", "b")
		holds("a", "another's\n")
		holds("b", "mine\n")
	})
	t.Run("without links", func(t *testing.T) {
		t.Chdir(t.TempDir())
		defer func() { link = os.Link }()
		link = func(string, string) error { return errors.ErrUnsupported }
		files := []*outFile{{name: "a", path: "a"}, {name: "b", path: "b"}}
		if err := replaceAll(t.Context(), files, write("new\n"), write("new\n")); err != nil {
			t.Error(err)
		}
		if err := replaceAll(t.Context(), files, write("newer\n"), write("newer\n")); !errors.Is(err, fs.ErrExist) {
			t.Error(err)
		}
		if err := os.Remove("a"); err != nil {
			t.Fatal(err)
		}
		if err := replaceAll(t.Context(), files, write("newer\n"), write("newer\n")); !errors.Is(err, fs.ErrExist) {
			t.Error(err)
		}
		holdsOnly(t, ".", "b")
		holds("b", "new\n")
	})
}

// TestReplaceAll: two files are written both or not at all.
func TestReplaceAll(t *testing.T) {
	broken := errors.New("broken")
	good := func(w io.Writer) error { _, err := io.WriteString(w, "new\n"); return err }
	bad := func(w io.Writer) error { return errors.Join(good(w), broken) }
	pair := func() []*outFile { return []*outFile{{name: "a", path: "a"}, {name: "b", path: "b"}} }

	t.Chdir(t.TempDir())
	if err := replaceAll(t.Context(), pair(), good, bad); !errors.Is(err, broken) {
		t.Error(err)
	}
	holdsOnly(t, ".")
	ctx, cancel := context.WithCancel(t.Context())
	if err := replaceAll(ctx, pair(), good, func(w io.Writer) error { defer cancel(); return good(w) }); !errors.Is(err, context.Canceled) {
		t.Error(err)
	}
	holdsOnly(t, ".")
	func() {
		defer func() { _ = recover() }()
		_ = replaceAll(t.Context(), pair(), good, func(io.Writer) error { panic("broken") })
	}()
	holdsOnly(t, ".")
	// The second cannot take its place: a folder with something in it stands there.
	if err := os.MkdirAll("b/in", 0o777); err != nil {
		t.Fatal(err)
	}
	var failed *outputError
	if err := replaceAll(t.Context(), pair(), good, good); !errors.As(err, &failed) || failed.where != "b" {
		t.Error(err)
	}
	holdsOnly(t, ".", "b")
	if err := os.RemoveAll("b"); err != nil {
		t.Fatal(err)
	}
	if err := replaceAll(t.Context(), pair(), good, good); err != nil {
		t.Error(err)
	}
	holdsOnly(t, ".", "a", "b")
}

// holdsOnly demands that a folder holds exactly these names.
func holdsOnly(t *testing.T, dir string, want ...string) {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, e := range entries {
		names = append(names, e.Name())
	}
	if !slices.Equal(names, want) {
		t.Errorf("%s holds %q, want %q", dir, names, want)
	}
}

func TestShellWord(t *testing.T) {
	for path, want := range map[string]string{
		"a/b.yaml": "a/b.yaml", "a b": "'a b'", "it's": `'it'\''s'`, "Bräu/§": "Bräu/§", "$x": "'$x'", "~": "'~'", "a(1)": "'a(1)'",
	} {
		if got := shellWord(path); got != want {
			t.Errorf("shellWord(%q) = %s, want %s", path, got, want)
		}
	}
}
