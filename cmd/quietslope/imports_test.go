package main

import (
	"os/exec"
	"slices"
	"strings"
	"testing"
)

// TestImportsPointOneWay holds the arrows of DEVELOPERS.md: each package may import only those of the module named here.
func TestImportsPointOneWay(t *testing.T) {
	allowed := map[string][]string{
		"quietslope/cmd/quietslope":        {"quietslope/cmd/quietslope/render", "quietslope/scenario", "quietslope/scenario/fault", "quietslope/scenario/result"},
		"quietslope/cmd/quietslope/render": {"quietslope/scenario", "quietslope/scenario/result", "quietslope/stats"},
		"quietslope/scenario": {"quietslope/cascade", "quietslope/cascade/drain", "quietslope/cascade/scheme", "quietslope/cascade/slope",
			"quietslope/cascade/soil", "quietslope/stats", "quietslope/stats/money", "quietslope/scenario/fault", "quietslope/scenario/quantity", "quietslope/scenario/result", "quietslope/scenario/weather"},
		"quietslope/scenario/weather":  {"quietslope/scenario/fault"},
		"quietslope/scenario/quantity": {},
		"quietslope/scenario/result":   {},
		"quietslope/scenario/fault":    {},
		"quietslope/cascade":           {},
		"quietslope/cascade/drain":     {},
		"quietslope/cascade/scheme":    {},
		"quietslope/cascade/slope":     {},
		"quietslope/cascade/soil":      {},
		"quietslope/stats":             {},
		"quietslope/stats/money":       {"quietslope/stats"},
	}
	pure := []string{"quietslope/cascade", "quietslope/cascade/drain", "quietslope/cascade/scheme", "quietslope/cascade/slope",
		"quietslope/cascade/soil", "quietslope/stats", "quietslope/stats/money"}

	out, err := exec.Command("go", "list", "-f", `{{.ImportPath}} {{join .Imports " "}}`, "quietslope/...").Output()
	if err != nil {
		t.Fatalf("go list: %v", err)
	}
	found := map[string][]string{}
	for line := range strings.Lines(string(out)) {
		fields := strings.Fields(line)
		pkg, imports := fields[0], fields[1:]
		found[pkg] = imports
		known, ok := allowed[pkg]
		if !ok {
			t.Errorf("%s is a package that this test and DEVELOPERS.md do not know", pkg)
		}
		for _, imp := range imports {
			if strings.HasPrefix(imp, "quietslope/") && !slices.Contains(known, imp) {
				t.Errorf("%s imports %s", pkg, imp)
			}
			outside := strings.Contains(strings.Split(imp, "/")[0], ".")
			if slices.Contains(pure, pkg) && outside && !strings.HasPrefix(imp, "gonum.org/v1/gonum") {
				t.Errorf("%s imports %s; it may import the standard library and gonum only", pkg, imp)
			}
		}
	}
	for pkg, imports := range allowed {
		for _, imp := range imports {
			if !slices.Contains(found[pkg], imp) {
				t.Errorf("%s does not import %s, which this test allows it", pkg, imp)
			}
		}
		if found[pkg] == nil {
			t.Errorf("there is no package %s", pkg)
		}
	}
}
