package weather

import (
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
)

var updateMistakes = flag.Bool("update-mistakes", false, "rewrite the expected messages in testdata/mistakes.cases")

// TestMistakes holds what is said of records as people have them against its exact text. A case of the file is a line
// "== NAME", the format of its times, the record, a line "=", and the message.
func TestMistakes(t *testing.T) {
	const file = "testdata/mistakes.cases"
	text, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	var out strings.Builder
	cases := strings.Split("\n"+string(text), "\n== ")[1:]
	for _, part := range cases {
		name, rest, _ := strings.Cut(part, "\n")
		format, rest, _ := strings.Cut(rest, "\n")
		record, want, found := strings.Cut(rest+"\n", "\n=\n")
		want = strings.TrimRight(want, "\n")
		t.Run(name, func(t *testing.T) {
			if !found {
				t.Fatal("the case has no line =")
			}
			src := daily()
			src.Format = format
			got := "accepted"
			if _, err := readText(src, record+"\n"); err != nil {
				got = err.Error()
			}
			if *updateMistakes {
				want = got
			} else if d := cmp.Diff(strings.Split(want, "\n"), strings.Split(got, "\n")); d != "" {
				t.Errorf("run with -update-mistakes to accept (-want +got):\n%s", d)
			}
		})
		fmt.Fprintf(&out, "== %s\n%s\n%s\n=\n%s\n", name, format, record, want)
	}
	if len(cases) == 0 {
		t.Error("no cases")
	}
	if *updateMistakes {
		if err := os.WriteFile(file, []byte(out.String()), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// TestMeantFile: what is said of the path of a file that does not exist.
func TestMeantFile(t *testing.T) {
	dir := t.TempDir()
	for _, name := range []string{"weather.csv", "study.yaml", "records/gauge.csv.gz"} {
		path := filepath.Join(dir, filepath.FromSlash(name))
		if err := os.MkdirAll(filepath.Dir(path), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, nil, 0o644); err != nil {
			t.Fatal(err)
		}
	}
	for _, tt := range []struct{ name, want string }{
		{"wheather.csv", "; did you mean weather.csv?"},
		{"weather", "; did you mean weather.csv?"},
		{"weather.txt", "; did you mean weather.csv?"},
		{"records/guage.csv", "; did you mean records/gauge.csv.gz?"},
		{"data/weather.csv", "; one of that name stands beside the study: write weather.csv"},
		{`C:\data\weather.csv`, `; write / between folders, not \`},
		{"https:/example.org/weather.csv", "; this is an address of the web: fetch the file, and name it where you put it"},
		{"studdy.yaml", ""},
		{"rain.csv", ""},
	} {
		src := Source{Name: tt.name, Path: filepath.Join(dir, filepath.FromSlash(tt.name))}
		if got := meantFile(src); got != tt.want {
			t.Errorf("%s: got %q, want %q", tt.name, got, tt.want)
		}
	}
}
