package scenario

import (
	"context"
	"encoding/json"
	"regexp"
	"testing"
)

// TestEveryKeyAtOnce: the study that is to use every key does, and all that it finds can be written down.
func TestEveryKeyAtOnce(t *testing.T) {
	s := load(t, "../testdata/full/study.yaml")
	given := map[string]bool{}
	for key := range s.places {
		given[regexp.MustCompile(`\[\d+\]`).ReplaceAllString(key, "[]")] = true
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
