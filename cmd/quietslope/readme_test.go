package main

import (
	"bytes"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"quietslope/scenario"
)

// codeBlocks are the fenced blocks of a Markdown text with the given language.
func codeBlocks(text, language string) []string {
	var blocks []string
	for _, m := range regexp.MustCompile("(?ms)^```"+language+"\n(.*?)^```$").FindAllStringSubmatch(text, -1) {
		blocks = append(blocks, m[1])
	}
	return blocks
}

func readme(t *testing.T) string {
	t.Helper()
	text, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// TestReadmeOutput: what the README shows is what the demo prints, or one of the README's further commands.
func TestReadmeOutput(t *testing.T) {
	code, stdout, stderr := program(t.Context(), "compare", demoStudy)
	if code != 0 {
		t.Fatal(stderr)
	}
	for _, line := range codeBlocks(readme(t), "sh") {
		code, more, stderr := program(t.Context(), readBash(strings.Replace(strings.TrimSuffix(line, "\n"), "testdata/demo/study.yaml", demoStudy, 1), "").words...)
		if code != 0 {
			t.Errorf("%s%s", line, stderr)
		}
		stdout += more
	}
	blocks := codeBlocks(readme(t), "text")
	if len(blocks) < 2 {
		t.Fatalf("%d blocks of output", len(blocks))
	}
	for _, b := range blocks {
		if !strings.Contains(stdout, b) {
			t.Errorf("this is not printed any more:\n%s", b)
		}
	}
}

// TestReadmeStudy: the piece of a study that the README shows is a legal end of the demo's.
func TestReadmeStudy(t *testing.T) {
	blocks := codeBlocks(readme(t), "yaml")
	if len(blocks) != 1 {
		t.Fatalf("%d pieces of a study", len(blocks))
	}
	demo, err := os.ReadFile(demoStudy)
	if err != nil {
		t.Fatal(err)
	}
	before, _, found := strings.Cut(string(demo), "\noptions:\n")
	if !found {
		t.Fatal("the demo has no options")
	}
	s, err := scenario.Parse(demoStudy, []byte(before+"\n"+blocks[0]))
	if err != nil {
		t.Fatal(err)
	}
	if len(s.Options) != 5 || s.Options[2].Name != "trenches, spacing 12 m" || len(s.Conditions) != 1 {
		t.Errorf("it makes the options %+v", s.Options)
	}
}

// TestReadmeCommands runs the README's two commands in a copy of the repository in an empty folder. The tests are only
// compiled there, not run: they are running here.
func TestReadmeCommands(t *testing.T) {
	if testing.Short() {
		t.Skip("builds the program and its tests anew")
	}
	commands := strings.Split(strings.TrimSpace(codeBlocks(readme(t), "")[0]), "\n")
	if len(commands) != 2 || commands[1] != "go test ./..." {
		t.Fatalf("the README begins with %q", commands)
	}
	dir := t.TempDir()
	root := os.DirFS("../..")
	err := fs.WalkDir(root, ".", func(path string, d fs.DirEntry, err error) error {
		switch {
		case err != nil:
			return err
		case d.IsDir() && path != "." && strings.HasPrefix(d.Name(), "."):
			return fs.SkipDir
		case d.IsDir():
			return os.MkdirAll(filepath.Join(dir, path), 0o777)
		}
		text, err := fs.ReadFile(root, path)
		if err != nil {
			return err
		}
		return os.WriteFile(filepath.Join(dir, path), text, 0o666)
	})
	if err != nil {
		t.Fatal(err)
	}
	run := func(args ...string) string {
		cmd := exec.CommandContext(t.Context(), args[0], args[1:]...)
		cmd.Dir = dir
		var stdout, stderr bytes.Buffer
		cmd.Stdout, cmd.Stderr = &stdout, &stderr
		if err := cmd.Run(); err != nil {
			t.Fatalf("%s: %v\n%s", strings.Join(args, " "), err, &stderr)
		}
		return stdout.String()
	}
	_, want, _ := program(t.Context(), "compare", demoStudy)
	if got := run(strings.Fields(commands[0])...); got != want {
		t.Errorf("%s prints something else than here", commands[0])
	}
	run(append(strings.Fields(commands[1]), "-vet=off", "-run", "^$")...)
}
