package scenario

import (
	"context"
	"encoding/json"
	"fmt"
	"os"
	"regexp"
	"testing"
)

// TestEveryKeyAtOnce: the study that is to use every key does, and all that it finds can be written down. It has one
// target only, as every study; with each other one in its place it is read too.
func TestEveryKeyAtOnce(t *testing.T) {
	const full = "../testdata/full/study.yaml"
	s := load(t, full)
	given := map[string]bool{}
	note := func(s *Study) {
		for key := range s.places {
			given[regexp.MustCompile(`\[\d+\]`).ReplaceAllString(key, "[]")] = true
		}
	}
	note(s)
	src, err := os.ReadFile(full)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range targetShape.fields {
		target := fmt.Sprintf("target: {%s: %s}", f.name, f.eg)
		other, err := Parse(full, regexp.MustCompile(`target: \{.*?\}`).ReplaceAll(src, []byte(target)))
		if err != nil {
			t.Fatal(err)
		}
		note(other)
		if got := other.Count.Target; got == nil || got.GivenAs != f.name || got.Text != f.eg {
			t.Errorf("%s is read as %+v", target, got)
		}
	}
	for _, k := range Keys() {
		if !given[k.Path] {
			t.Errorf("%s is not given", k.Path)
		}
	}
	if _, err := json.Marshal(compare(t, s)); err != nil {
		t.Error(err)
	}
	found, err := Check(context.Background(), s)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := json.Marshal(found); err != nil {
		t.Error(err)
	}
}
