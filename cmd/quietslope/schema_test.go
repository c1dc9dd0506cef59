package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/goccy/go-yaml"
	"github.com/santhosh-tekuri/jsonschema/v6"
)

// TestSchema: the command prints the copy in the repository, to standard output or to a file.
func TestSchema(t *testing.T) {
	want, err := os.ReadFile("../../testdata/study.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	code, stdout, stderr := program(t.Context(), "schema")
	if code != 0 || stdout != string(want) || stderr != "" {
		t.Errorf("status %d, %d bytes for %d, %s", code, len(stdout), len(want), stderr)
	}
	out := filepath.Join(t.TempDir(), "s.json")
	code, stdout, stderr = program(t.Context(), "schema", "--out", out)
	if got, err := os.ReadFile(out); code != 0 || stdout != "" || stderr != "" || err != nil || !bytes.Equal(got, want) {
		t.Errorf("status %d, %d bytes for %d, %s, %v", code, len(got), len(want), stderr, err)
	}
	_, stdout, _ = program(t.Context(), "help", "schema")
	compareGolden(t, "help-schema.golden", stdout)
	code, stdout, stderr = program(t.Context(), "schema", "study.yaml")
	if code != 2 || stdout != "" || !strings.Contains(stderr, "study.yaml") {
		t.Errorf("with an argument: status %d, %q, %s", code, stdout, stderr)
	}
}

// TestSchemaSparesStudies: the schema takes the place of no study.
func TestSchemaSparesStudies(t *testing.T) {
	for _, name := range []string{"study.yaml", "Study.YML", "link.json"} {
		t.Chdir(t.TempDir())
		study := strings.Replace(name, "link.json", "study.yml", 1)
		if err := os.WriteFile(study, []byte("mine\n"), 0o666); err != nil {
			t.Fatal(err)
		}
		if study != name {
			if err := os.Symlink(study, name); err != nil {
				t.Fatal(err)
			}
		}
		code, _, stderr := program(t.Context(), "schema", "--out", name)
		if text, err := os.ReadFile(study); code != 2 || !strings.Contains(stderr, "name a file that ends in .json") || err != nil || string(text) != "mine\n" {
			t.Errorf("%s: status %d, %s, %q, %v", name, code, stderr, text, err)
		}
	}
	if code, _, stderr := program(t.Context(), "schema", "--out", "new.yaml"); code != 0 { // nothing is lost
		t.Errorf("status %d, %s", code, stderr)
	}
}

// TestSchemaMeetsExamples: the examples of the reference and the starter study meet the schema.
func TestSchemaMeetsExamples(t *testing.T) {
	s, err := jsonschema.NewCompiler().Compile("../../testdata/study.schema.json")
	if err != nil {
		t.Fatal(err)
	}
	first, err := starter.ReadFile("starter/study.yaml")
	if err != nil {
		t.Fatal(err)
	}
	for _, text := range append(exampleStudies(), string(first)) {
		var v any
		if err := yaml.Unmarshal([]byte(text), &v); err != nil {
			t.Fatal(err)
		}
		if err := s.Validate(v); err != nil {
			t.Errorf("%v\n%s", err, text)
		}
	}
}
