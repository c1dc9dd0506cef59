package scenario

import (
	"bytes"
	"fmt"
	"math"
	"os"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"github.com/santhosh-tekuri/jsonschema/v6"
)

const schemaFile = "../testdata/study.schema.json"

// TestSchemaFile: the copy in the repository is the schema.
func TestSchemaFile(t *testing.T) {
	if *updateStudy {
		if err := os.WriteFile(schemaFile, Schema(), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(schemaFile)
	if err != nil {
		t.Fatal(err)
	}
	if diff := cmp.Diff(strings.Split(string(want), "\n"), strings.Split(string(Schema()), "\n")); diff != "" {
		t.Errorf("run with -update-study to accept (-want +got):\n%s", diff)
	}
}

// schemaParts returns the schema as a value, and a function that gives its part at a JSON pointer ready to validate.
func schemaParts(t testing.TB) (doc any, part func(pointer string) *jsonschema.Schema) {
	t.Helper()
	doc, err := jsonschema.UnmarshalJSON(bytes.NewReader(Schema()))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("urn:quietslope:study", doc); err != nil {
		t.Fatal(err)
	}
	return doc, func(pointer string) *jsonschema.Schema { return c.MustCompile("urn:quietslope:study#" + pointer) }
}

// compiledSchema is the whole schema, ready to validate.
func compiledSchema(t testing.TB) *jsonschema.Schema {
	_, part := schemaParts(t)
	return part("")
}

// TestSchemaIsOne: the schema itself meets the schema of schemas, which the validator brings along.
func TestSchemaIsOne(t *testing.T) {
	doc, _ := schemaParts(t)
	meta := jsonschema.NewCompiler().MustCompile("https://json-schema.org/draft/2020-12/schema")
	if err := meta.Validate(doc); err != nil {
		t.Error(err)
	}
}

// TestSchemaValues: every default and example meets the schema of its key, and those of single values are read.
func TestSchemaValues(t *testing.T) {
	doc, part := schemaParts(t)
	keys := 0
	var walk func(v any, pointer string)
	walk = func(v any, pointer string) {
		block, ok := v.(map[string]any)
		if !ok {
			if list, ok := v.([]any); ok {
				for i, item := range list {
					walk(item, fmt.Sprintf("%s/%d", pointer, i))
				}
			}
			return
		}
		if _, ok := block["description"].(string); ok && pointer != "" {
			keys++
			values, ok := block["examples"].([]any)
			if !ok || len(values) == 0 {
				t.Errorf("%s has no example", pointer)
			}
			if def, ok := block["default"]; ok {
				values = append(values, def)
			}
			s := part(pointer)
			for _, value := range values {
				if err := s.Validate(value); err != nil {
					t.Errorf("%s: %v: %v", pointer, value, err)
				}
			}
		}
		for key, inner := range block {
			if key != "examples" && key != "default" {
				walk(inner, pointer+"/"+key)
			}
		}
	}
	walk(doc, "")
	if n := len(Keys()); keys != n {
		t.Errorf("%d keys are in the schema, of %d", keys, n)
	}
	var read func(fields []field)
	read = func(fields []field) {
		for i := range fields {
			f := &fields[i]
			if f.shape.form != formTexts && f.shape.fields == nil && !f.later {
				d := &decoder{problems: &problems{}, places: map[string]Place{}}
				d.readScalar(&node{text: strings.TrimPrefix(fmt.Sprint(f.example()), rawText)}, &f.shape, Place{Key: f.name})
				for _, p := range d.list {
					t.Errorf("%s: %s", f.name, p.text)
				}
			}
			read(f.shape.fields)
		}
	}
	read(studyShape.fields)
}

// asJSON is the value that a tree stands for by the YAML 1.2 core schema.
func asJSON(n *node) any {
	switch {
	case n == nil:
		return nil
	case n.is == blockNode:
		block := map[string]any{}
		for _, e := range n.entries {
			block[e.key] = asJSON(e.value)
		}
		return block
	case n.is == listNode:
		list := []any{}
		for _, item := range n.items {
			list = append(list, asJSON(item))
		}
		return list
	case n.quoted:
		return n.text
	}
	return coreValue(n.text)
}

var (
	coreFloat = regexp.MustCompile(`^[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?$`)
	coreWhole = regexp.MustCompile(`^(0o[0-7]+|0x[0-9a-fA-F]+)$`)
)

// coreValue types a plain text by YAML 1.2, section 10.3.2.
func coreValue(text string) any {
	switch text {
	case "", "~", "null", "Null", "NULL":
		return nil
	case "true", "True", "TRUE":
		return true
	case "false", "False", "FALSE":
		return false
	case ".inf", ".Inf", ".INF", "+.inf", "+.Inf", "+.INF": // JSON has none, nor any number that is not one
		return math.MaxFloat64
	case "-.inf", "-.Inf", "-.INF":
		return -math.MaxFloat64
	case ".nan", ".NaN", ".NAN":
		return nil
	}
	if coreWhole.MatchString(text) {
		n, _ := strconv.ParseUint(text, 0, 64)
		return float64(n)
	}
	if coreFloat.MatchString(text) {
		x, _ := strconv.ParseFloat(text, 64)
		return max(-math.MaxFloat64, min(math.MaxFloat64, x))
	}
	return text
}

// valueOf is the value of a study's text, false where no tree can be read from it.
func valueOf(src string) (any, bool) {
	text, err := readable("study.yaml", []byte(src))
	if err != nil {
		return nil, false
	}
	root, err := readSafely(&problems{src: &source{file: "study.yaml", lines: strings.Split(text, "\n")}})
	if err != nil || root == nil {
		return nil, false
	}
	return asJSON(root), true
}

// TestSchemaMeetsStudies: the studies of the repository meet the schema.
func TestSchemaMeetsStudies(t *testing.T) {
	s := compiledSchema(t)
	for _, file := range []string{"testdata/study/base.yaml", "testdata/study/wide.yaml", "../testdata/demo/study.yaml", "../testdata/seattle/study.yaml", "../testdata/full/study.yaml"} {
		src, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		v, _ := valueOf(string(src))
		if err := s.Validate(v); err != nil {
			t.Errorf("%s: %v", file, err)
		}
	}
}

// TestSchemaMeetsCases: of the studies with known messages the schema accepts those that are read. Of the others it
// accepts just those in unseen.list, each with the reason why a schema cannot see what is wrong. Where the file cannot be
// read as YAML for a study there is nothing to hold against a schema.
func TestSchemaMeetsCases(t *testing.T) {
	src, err := os.ReadFile("testdata/study/unseen.list")
	if err != nil {
		t.Fatal(err)
	}
	known := map[string]string{}
	for line := range strings.Lines(string(src)) {
		if reason, name, ok := strings.Cut(strings.TrimSpace(line), ": "); ok && !strings.HasPrefix(line, "#") {
			known[name] = reason
		}
	}
	s := compiledSchema(t)
	base := baseStudy(t)
	for _, file := range caseFiles(t) {
		for _, c := range readCases(t, file) {
			name := strings.TrimSuffix(file[strings.LastIndexByte(file, '/')+1:], ".cases") + "/" + c.name
			reason := known[name]
			delete(known, name)
			study, err := editStudy(base, c.edits)
			if err != nil {
				t.Fatal(err)
			}
			v, ok := valueOf(study)
			if !ok {
				if reason != "" {
					t.Errorf("%s is listed as %q, but there is no value to look at", name, reason)
				}
				continue
			}
			err = s.Validate(v)
			switch {
			case c.want == "accepted" && err != nil:
				t.Errorf("%s is accepted, but does not meet the schema: %v", name, err)
			case c.want != "accepted" && err == nil && reason == "":
				t.Errorf("%s meets the schema; add a line with the reason\nREASON: %s", name, name)
			case reason != "" && err != nil:
				t.Errorf("%s is listed as %q, but does not meet the schema: %v", name, reason, err)
			}
		}
	}
	for name := range known {
		t.Errorf("there is no case %s", name)
	}
}
