package main

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// hardNames are names of options that a shell could misread, each with a beginning of its own.
var hardNames = []string{
	"as it stands", "trenches 8 m (deep)", `"wide" trenches`, "it's cheap", "$HOME & more; `ls`", "Gräben für das Wasser", "50 % *or* less?",
	"at a:b=c@d, e", `back\slash`, "what!now", "~tilde", "#3", "<b>|{x,y}[z]", `pipes 6"`, `drains 6'`, "now!",
}

// hardStudy is a study with hardNames, and with some of them for its conditions.
func hardStudy() string {
	return namedStudy(hardNames...) + "conditions:\n  - {name: \"it's worn\", drains: 50 %}\n  - {name: $5 (half), drains: 70 %}\n"
}

// namedStudy is a study with options of these names.
func namedStudy(names ...string) string {
	head, _, _ := strings.Cut(smallStudy, "  - name: as it stands\n")
	var b strings.Builder
	b.WriteString(head)
	for _, n := range names {
		fmt.Fprintf(&b, "  - name: '%s'\n", strings.ReplaceAll(n, "'", "''"))
	}
	return b.String()
}

// commandsNow are the names of the commands in the order of help.
func commandsNow() []string {
	var names []string
	for _, c := range newApp(io.Discard, io.Discard).Commands {
		names = append(names, c.Name)
	}
	return names
}

// TestPropose: what could stand at the end of a command line.
func TestPropose(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("s.yaml", []byte(hardStudy()), 0o666); err != nil {
		t.Fatal(err)
	}
	commands, options := strings.Join(commandsNow(), " "), "--against --format --out --help"
	for _, tt := range []struct{ line, kind, before, want string }{ // | parts the words of the line
		{"", "words", "", commands + " help"},
		{"co", "words", "", commands + " help"}, // the shell chooses
		{"-", "words", "", "--help --version"},
		{"help|", "words", "", commands + " study"},
		{"help|study|", "", "", ""},
		{"nope|", "", "", ""},
		{"completion|", "words", "", "bash zsh fish"},
		{"completion|bash|", "words", "", "--help"},
		{"schema|", "words", "", "--out --help"},
		{"schema|x|", "words", "", "--out --help"},
		{"new|", "folders", "", ""},
		{"new|-", "words", "", "--force --help"},
		{"new|--force|", "folders", "", ""},
		{"compare|", "studies", "", ""},
		{"compare|s.y", "studies", "", ""},
		{"compare|--", "words", "", options},
		{"compare|s.yaml|", "words", "", options},
		{"compare|s.yaml|--out|x|--", "words", "", "--against --format --help"},
		{"compare|s.yaml|--out=x|--", "words", "", "--against --format --help"},
		{"compare|--format|", "words", "", strings.Join(formatNames(), " ")},
		{"compare|--format|json|", "studies", "", ""},
		{"compare|--format=", "words", "--format=", strings.Join(formatNames(), " ")},
		{"compare|--format=j", "words", "--format=", strings.Join(formatNames(), " ")},
		{"compare|--nope=", "", "", ""},
		{"compare|--nope|", "studies", "", ""},
		{"compare|--out|", "files", "", ""},
		{"compare|--out=a/", "files", "--out=", ""},
		{"compare|--out|-", "files", "", ""},
		{"compare|--|", "studies", "", ""},
		{"compare|--|-", "studies", "", ""},
		{"compare|--|s.yaml|-", "", "", ""},
		{"levels|s.yaml|--from|", "words", "", ""},
		{"drains|", "studies", "", ""},
		{"drains|--spacing|", "words", "", ""},
		{"drains|s.yaml|--depth|1m|--d", "words", "", "--option --spacing --thickness --conductivity --conductivity-below --porosity --radius --width --wet --equivalent-depth --working-head --efficiency --recharge --consolidation --fall --format --out --help"},
		{"levels|s.yaml|--condition|", "words", "", "as built it's worn $5 (half)"},
		{"levels|s.yaml|--climate=", "words", "--climate=", "as recorded"},
		{"size|s.yaml|--vary|", "words", "", ""}, // no option has a number
		{"size|s.yaml|--between|", "words", "", ""},
		{"size|s.yaml|--condition=", "words", "--condition=", "as built it's worn $5 (half)"},
		{"levels|--option|", "words", "", ""}, // no study yet
		{"levels|none.yaml|--option|", "words", "", ""},
		{"levels|.|--option|", "words", "", ""},
	} {
		got := propose(newApp(io.Discard, io.Discard), strings.Split(tt.line, "|"))
		var texts []string
		for _, w := range got.words {
			texts = append(texts, w.text)
			if strings.ContainsAny(w.says, "\t\n") || len(w.says) > 90 {
				t.Errorf("%s: %q", tt.line, w.says)
			}
		}
		want := tt.want
		if got.kind != tt.kind || got.before != tt.before || strings.Join(texts, " ") != want {
			t.Errorf("%s: %q %q %q, want %q %q %q", tt.line, got.kind, got.before, texts, tt.kind, tt.before, want)
		}
	}

	names := func(words ...string) []string {
		var texts []string
		for _, w := range propose(newApp(io.Discard, io.Discard), words).words {
			texts = append(texts, w.text)
		}
		return texts
	}
	if d := cmp.Diff(hardNames, names("levels", "s.yaml", "--option", "")); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(hardNames, names("drains", "s.yaml", "--option", "")); d != "" {
		t.Error(d)
	}
	if d := cmp.Diff(hardNames, names("compare", "s.yaml", "--against", "")); d != "" {
		t.Error(d)
	}
	listed := strings.Replace(smallStudy, "rate: 0.02 /d,", "spacing: [8 m, 12 m], conductivity: 0.02 m/d,", 1) + "  - name: channels\n    surface_water: {kept_out: 10 %}\n"
	if err := os.WriteFile("l.yaml", []byte(listed), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, tt := range []struct{ line, want string }{
		{"size|l.yaml|--option|", "as it stands|trenches|trenches, spacing 8 m|trenches, spacing 12 m|channels"},
		{"levels|l.yaml|--option|", "as it stands|trenches, spacing 8 m|trenches, spacing 12 m|channels"},
		{"size|l.yaml|--option|channels|--vary|", "surface_water.kept_out"},
		{"size|l.yaml|--option=trenches|--vary=", "trench_drains.depth|trench_drains.spacing|trench_drains.conductivity|trench_drains.conductivity_below|" +
			"trench_drains.drain_radius|trench_drains.equivalent_depth|trench_drains.working_head|trench_drains.efficiency|trench_drains.ceiling"},
		{"size|l.yaml|--option|as it stands|--vary|", ""},
		{"size|l.yaml|--between|", ""},
	} {
		if got := strings.Join(names(strings.Split(tt.line, "|")...), "|"); got != tt.want {
			t.Errorf("%s: %s, want %s", tt.line, got, tt.want)
		}
	}
	if got := names("size", "l.yaml", "--vary", ""); len(got) != 10 {
		t.Errorf("numbers of all options: %q", got)
	}
	if d := cmp.Diff(hardNames[2:], names("levels", "--option", hardNames[1], "s.yaml", "--option="+hardNames[0], "--option", "")); d != "" {
		t.Error(d)
	}
}

// TestOptionsComplete: every option of every command has values that completion knows of.
func TestOptionsComplete(t *testing.T) {
	for _, c := range newApp(io.Discard, io.Discard).Commands {
		for _, f := range c.Flags {
			value, does := usageOf(f)
			if !slices.Contains([]string{"", "FILE", "FORMAT", "KEY", "NAME", "RANGE", "TIME", "VALUE"}, value) || does == "" || takesValue(f) != (value != "") {
				t.Errorf("%s --%s: %q: %q", c.Name, f.Names()[0], value, does)
			}
		}
	}
}

// TestCompleteIsQuiet: whatever is asked, nothing is said on standard error, and the status is 0.
func TestCompleteIsQuiet(t *testing.T) {
	t.Chdir(t.TempDir())
	if err := os.WriteFile("bad.yaml", []byte("study: [\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	for _, args := range [][]string{{}, {"bash"}, {"bash", ""}, {"bash", "quietslope"}, {"bash", "   "}, {"zsh"}, {"zsh", "levels", "bad.yaml", "--option", ""}, {"tcsh", ""}} {
		code, _, stderr := program(t.Context(), append([]string{completeWord}, args...)...)
		if code != 0 || stderr != "" {
			t.Errorf("%q: status %d, %q", args, code, stderr)
		}
	}
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if code, stdout, stderr := program(ctx, completeWord, "zsh", ""); code != 0 || stdout != "" || stderr != "" {
		t.Errorf("status %d, %q, %q", code, stdout, stderr)
	}
}

// TestReadBash: the words of a line, and what of the last one bash leaves alone.
func TestReadBash(t *testing.T) {
	const breaks = " \t\n\"'@><=;|&(:"
	for _, tt := range []struct {
		line, words, raw, quote, head string
	}{
		{`quietslope `, ``, ``, ``, ``},
		{`quietslope co`, `co`, `co`, ``, ``},
		{`./quietslope  a b`, `a|b`, `b`, ``, ``},
		{`quietslope a\ b 'c d' "e f"g`, `a b|c d|e fg`, `"e f"g`, ``, ``},
		{`quietslope a 'c d`, `a|c d`, `'c d`, `'`, ``},
		{`quietslope "c \"d \x \$`, `c "d \x $`, `"c \"d \x \$`, `"`, ``},
		{`quietslope it\'s\`, `it's`, `it\'s\`, ``, ``},
		{`quietslope --out=a`, `--out=a`, `--out=a`, ``, `--out=`},
		{`quietslope --out=`, `--out=`, `--out=`, ``, `--out=`},
		{`quietslope --out\=a`, `--out=a`, `--out\=a`, ``, ``},
		{`quietslope --option='a:b c`, `--option=a:b c`, `--option='a:b c`, `'`, `--option=`},
		{`quietslope --option=a:b\ c`, `--option=a:b c`, `--option=a:b\ c`, ``, `--option=a:`},
		{`quietslope "a=b"c=d`, `a=bc=d`, `"a=b"c=d`, ``, `a=bc=`},
		{`quietslope ''`, ``, `''`, ``, ``},
		{`quietslope a=b `, `a=b|`, ``, ``, ``},
	} {
		b := readBash(tt.line, breaks)
		quote := strings.Trim(string(b.quote), "\x00")
		if strings.Join(b.words, "|") != tt.words || b.raw != tt.raw || quote != tt.quote || b.words[len(b.words)-1][:b.head] != tt.head {
			t.Errorf("%s: %q, raw %s, quote %s, head %d", tt.line, b.words, b.raw, quote, b.head)
		}
	}
}

// TestQuoteBash: what is quoted is read back as it was, by readBash and by bash.
func TestQuoteBash(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching("[^\n\x00]*").Draw(t, "text")
		quote := rapid.SampledFrom([]string{"", "'", `"`}).Draw(t, "quote")
		open := byte(0)
		if quote != "" {
			open = quote[0]
		}
		line := "quietslope " + quote + quoteBash(text, open) + quote
		if got := readBash(line, " =:").words; len(got) > 1 || len(got) == 1 && got[0] != text {
			t.Errorf("%s is read as %q", line, got)
		}
	})
	rapid.Check(t, func(t *rapid.T) { // at the end of a word, where bash adds a quote to all but a quote
		text := rapid.StringMatching("[^\n\x00]*").Draw(t, "text") + rapid.SampledFrom([]string{"", "'", `"`, "!", `\`}).Draw(t, "end")
		quote := rapid.SampledFrom([]string{"'", `"`}).Draw(t, "quote")
		quoted := endBash(text, quote[0])
		if !strings.HasSuffix(quoted, quote) {
			quoted += quote
		}
		if got := readBash("quietslope "+quote+quoted, " =:"); len(got.words) != 1 || got.words[0] != text || got.quote != 0 {
			t.Errorf("%s for %q is read as %q", quoted, text, got.words)
		}
	})
	if _, err := exec.LookPath("bash"); err != nil {
		t.Skip("there is no bash to ask")
	}
	var script strings.Builder
	for _, n := range hardNames {
		fmt.Fprintf(&script, "printf '%%s\\n' %s '%s' \"%s\"\n", quoteBash(n, 0), quoteBash(n, '\''), quoteBash(n, '"'))
	}
	out, err := exec.Command("bash", "--norc", "-c", script.String()).Output()
	if err != nil {
		t.Fatal(err)
	}
	var want strings.Builder
	for _, n := range hardNames {
		want.WriteString(n + "\n" + n + "\n" + n + "\n")
	}
	if d := cmp.Diff(want.String(), string(out)); d != "" {
		t.Error(d)
	}
}

// shellFolder goes to a folder with studies, and puts a program named quietslope first on the path: it answers the
// completion scripts, and otherwise writes its arguments, each on a line, to a file, which is returned.
func shellFolder(t *testing.T) (typed string) {
	t.Helper()
	program, err := exec.LookPath("quietslope")
	if err != nil {
		t.Fatal(err)
	}
	dir := t.TempDir()
	bin, work := filepath.Join(dir, "bin"), filepath.Join(dir, "work")
	typed = filepath.Join(dir, "typed")
	recorder := fmt.Sprintf("#!/bin/sh\ncase $1 in --complete | completion) exec '%s' \"$@\";; esac\nprintf '%%s\\n' \"$@\" end >>'%s'\n", program, typed)
	if err := errors.Join(
		os.MkdirAll(bin, 0o777), os.MkdirAll(work+"/sub folder", 0o777),
		os.WriteFile(bin+"/quietslope", []byte(recorder), 0o777),
		os.WriteFile(work+"/hard.yaml", []byte(hardStudy()), 0o666),
		os.WriteFile(work+"/tilde.yaml", []byte(namedStudy("a", "~")), 0o666),
		os.WriteFile(work+"/user.yaml", []byte(namedStudy("a", "~root")), 0o666),
		os.WriteFile(work+"/sub folder/it's $5.yml", []byte(hardStudy()), 0o666),
		os.WriteFile(work+"/sub folder/plain one.yaml", nil, 0o666),
		os.WriteFile(work+"/sub folder/notes.txt", nil, 0o666),
	); err != nil {
		t.Fatal(err)
	}
	t.Chdir(work)
	t.Setenv("PATH", bin+string(filepath.ListSeparator)+os.Getenv("PATH"))
	t.Setenv("HOME", dir)
	t.Setenv("XDG_CONFIG_HOME", dir) // of fish
	t.Setenv("XDG_DATA_HOME", dir)
	t.Setenv("LC_ALL", "C.UTF-8")
	t.Setenv("TERM", "dumb")
	return typed
}

// needShell skips a test whose shell is not there.
func needShell(t *testing.T, shell string) {
	t.Helper()
	if testing.Short() {
		t.Skip("starts the program over and over")
	}
	if _, err := exec.LookPath(shell); err != nil {
		t.Skipf("%s is not installed", shell)
	}
}

// ask runs a script in a shell and returns the lines that it prints. Nothing may be printed on standard error.
func ask(t *testing.T, shell string, args ...string) []string {
	t.Helper()
	ctx, cancel := context.WithTimeout(t.Context(), 20*time.Second)
	defer cancel()
	var stdout, stderr bytes.Buffer
	cmd := exec.CommandContext(ctx, shell, args...)
	cmd.Stdout, cmd.Stderr = &stdout, &stderr
	if err := cmd.Run(); err != nil || stderr.Len() > 0 {
		t.Fatalf("%s: %v\n%s%s", shell, err, &stdout, &stderr)
	}
	return strings.Split(strings.TrimSuffix(stdout.String(), "\n"), "\n")
}

// completed are lines, and what must be among the completions of their ends and what must not.
type completed struct {
	line     string
	has, not []string
}

// inEveryShell are completions that the program lists itself.
var inEveryShell = []completed{
	{"quietslope ", []string{"new", "check", "compare", "levels", "completion", "help"}, []string{"--help", "hard.yaml"}},
	{"quietslope co", []string{"compare", "completion"}, []string{"check"}},
	{"quietslope help s", []string{"study"}, []string{"compare"}},
	{"quietslope completion ", []string{"bash", "zsh", "fish"}, []string{"hard.yaml"}},
	{"quietslope compare --f", []string{"--format"}, []string{"--out"}},
	{"quietslope compare --format ", formatNames(), []string{"hard.yaml"}},
	{"quietslope compare hard.yaml --format j", []string{"json"}, []string{"text"}},
	{"quietslope levels hard.yaml --option ", hardNames[:10], []string{"text"}},
	{"quietslope levels hard.yaml --option \\~", hardNames[10:11], []string{"text"}},
	{"quietslope levels hard.yaml --option ", hardNames[11:], []string{"text"}},
	{"quietslope levels --option tren", []string{""}, hardNames}, // no study yet
	{"quietslope levels hard.yaml --condition ", []string{"as built", "it's worn", "$5 (half)"}, []string{"as it stands"}},
	{"quietslope levels hard.yaml --option Gr", []string{"Gräben für das Wasser"}, []string{"as it stands"}},
	{"quietslope nope ", []string{""}, []string{"hard.yaml"}},
}

// checkCompleted holds what a shell offers, one block for each line, every block ended by a line with an equals sign.
func checkCompleted(t *testing.T, lines []completed, answer []string) {
	t.Helper()
	for _, tt := range lines {
		end := slices.Index(answer, "=")
		if end < 0 {
			t.Fatalf("%s: no answer", tt.line)
		}
		got := append(answer[:end:end], "")
		answer = answer[end+1:]
		for _, w := range tt.has {
			if !slices.Contains(got, w) {
				t.Errorf("%s: %q, without %q", tt.line, got, w)
			}
		}
		for _, w := range tt.not {
			if slices.Contains(got, w) {
				t.Errorf("%s: %q, with %q", tt.line, got, w)
			}
		}
	}
}

// TestBashCompletes calls the completion function of bash, as bash does for lines with the cursor at the end.
func TestBashCompletes(t *testing.T) {
	needShell(t, "bash")
	shellFolder(t)
	lines := append(slices.Clone(inEveryShell), []completed{
		{"quietslope compare ", []string{"hard.yaml", "sub folder"}, []string{"compare"}},
		{"quietslope compare hard.yaml --out=", []string{"hard.yaml", "sub folder"}, []string{"--out=hard.yaml"}},
		{"quietslope new ", []string{"sub folder"}, []string{"hard.yaml"}},
		{"./quietslope co", []string{""}, []string{"compare"}}, // there is none in this folder
		{"quietslope levels hard.yaml --option=at\\ a:", []string{"b=c@d, e"}, []string{"at a:b=c@d, e"}},
	}...)
	var script strings.Builder
	script.WriteString("source <(quietslope completion bash)\ncompopt() { files=yes; }\n")
	for _, tt := range lines {
		fmt.Fprintf(&script, "files=; COMP_LINE=%s; COMP_POINT=${#COMP_LINE}; _quietslope %s\n", quoteBash(tt.line, 0), strings.Fields(tt.line)[0])
		// What the program lists is quoted already; files are quoted by bash.
		script.WriteString(`if [[ $files ]]; then printf '%s\n' "${COMPREPLY[@]}"; else eval "printf '%s\n' ${COMPREPLY[*]}"; fi; echo =` + "\n")
	}
	checkCompleted(t, lines, ask(t, "bash", "--norc", "--noprofile", "-c", script.String()))
}

// TestZshCompletes calls the completion function of zsh, with stand-ins for those of zsh that offer what it finds.
func TestZshCompletes(t *testing.T) {
	needShell(t, "zsh")
	shellFolder(t)
	var script strings.Builder
	script.WriteString(`compdef() { : }
source <(quietslope completion zsh)
offer() { print -rl -- "${(@M)argv:#$PREFIX*}" }
_describe() { offer "${(@)${(@P)argv[-1]}%%:*}" }
_wanted() { offer "${(@P)argv[-1]}" }
`)
	for _, tt := range inEveryShell {
		words := strings.Split(tt.line, " ") // those of inEveryShell hold no quotes
		fmt.Fprintf(&script, "words=(\"${(@s: :)${:-%s}}\"); CURRENT=%d; PREFIX=%s; _quietslope; print =\n", tt.line, len(words), words[len(words)-1])
	}
	checkCompleted(t, inEveryShell, ask(t, "zsh", "-f", "-c", script.String()))
}

// TestFishCompletes asks fish for the completions of lines.
func TestFishCompletes(t *testing.T) {
	needShell(t, "fish")
	shellFolder(t)
	lines := append(slices.Clone(inEveryShell), []completed{
		{"quietslope compare --format=", []string{"--format=text", "--format=json"}, nil},
		{"quietslope levels hard.yaml --option=a", []string{"--option=as it stands", "--option=at a:b=c@d, e"}, []string{"--option=it's cheap"}},
		{"quietslope levels hard.yaml --option ", nil, []string{"~tilde"}}, // it would be taken for somebody's folder
		{"quietslope levels hard.yaml --option '", []string{"~tilde"}, nil},
		{"quietslope levels hard.yaml --option 'as i", []string{"as it stands"}, []string{"it's cheap"}},
		{"quietslope levels hard.yaml --option \\$H", []string{"$HOME & more; `ls`"}, []string{"it's cheap"}},
		{"quietslope levels 'sub folder/it\\'s $5.yml' --option as\\ ", []string{"as it stands"}, []string{"it's cheap"}},
		{"quietslope levels ~/work/hard.yaml --option as", []string{"as it stands"}, []string{"it's cheap"}},
		{"~/bin/quietslope levels hard.yaml --option as", []string{"as it stands"}, []string{"it's cheap"}},
		{"quietslope compare ", []string{"hard.yaml", "sub folder/"}, []string{"compare"}},
		{"quietslope compare sub\\ folder/", []string{"sub folder/it's $5.yml", "sub folder/plain one.yaml"}, []string{"sub folder/notes.txt"}},
		{"quietslope compare 'sub folder/i", []string{"sub folder/it's $5.yml"}, []string{"sub folder/notes.txt"}},
		{"quietslope compare hard.yaml --out=sub\\ folder/n", []string{"--out=sub folder/notes.txt"}, []string{"--out=sub folder/it's $5.yml"}},
		{"quietslope compare hard.yaml --out s", []string{"sub folder/"}, []string{"hard.yaml"}},
		{"quietslope new ", []string{"sub folder/"}, []string{"hard.yaml"}},
	}...)
	var script strings.Builder
	script.WriteString("quietslope completion fish | source\n")
	for _, tt := range lines {
		// Without the descriptions, which follow a tab.
		fmt.Fprintf(&script, "complete -C '%s' | string replace -r '\\t.*' ''; echo =\n", strings.NewReplacer(`\`, `\\`, `'`, `\'`).Replace(tt.line))
	}
	checkCompleted(t, lines, ask(t, "fish", "--no-config", "-c", script.String()))
}
