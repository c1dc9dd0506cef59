package render

import (
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/clipperhouse/displaywidth"
	"pgregory.net/rapid"

	"quietslope/scenario/result"
	"quietslope/stats"
)

// TestTableWidth: the width that a table is said to have is that of its widest line once it is drawn.
func TestTableWidth(t *testing.T) {
	texts := []string{"1", "12.5", "a word", "ausführlich", "幅の広い字"} // a name is never empty
	cell := rapid.SampledFrom(append(texts, ""))
	rapid.Check(t, func(t *rapid.T) {
		columns := rapid.IntRange(1, 4).Draw(t, "columns")
		row := func() []string { return rapid.SliceOfN(cell, columns, columns).Draw(t, "row") }
		b := table{first: cell.Draw(t, "first"), caption: cell.Draw(t, "caption")}
		for range rapid.IntRange(1, 2).Draw(t, "lines") {
			b.head = append(b.head, row())
		}
		for range rapid.IntRange(1, 3).Draw(t, "rows") {
			b.labels = append(b.labels, label{rapid.SampledFrom([]string{"", "A", "AB"}).Draw(t, "key"), rapid.SampledFrom(texts).Draw(t, "name")})
			b.rows = append(b.rows, row())
		}
		for range columns {
			b.left = append(b.left, rapid.Bool().Draw(t, "left"))
		}
		if rapid.Bool().Draw(t, "grouped") {
			for c := range columns {
				b.groups = append(b.groups, []string{"one:", "two:", "three:"}[c/2])
			}
		}
		want, drawn := 0, b.draw(math.MaxInt)
		for line := range strings.Lines(drawn) {
			want = max(want, displaywidth.String(strings.TrimRight(line, " \n")))
		}
		if got := b.width(); got != want {
			t.Errorf("%d columns, drawn %d:\n%s", got, want, drawn)
		}
	})
}

// TestDisagree: the quick way finds what comparing every pair does.
func TestDisagree(t *testing.T) {
	figure := rapid.SampledFrom([]float64{0, 1e-12, 1, 1 + 1e-13, 1 + 2e-9, 2, 3, 1e6})
	rapid.Check(t, func(t *rapid.T) {
		a := rapid.SliceOfN(figure, 0, 6).Draw(t, "a")
		b := rapid.SliceOfN(figure, len(a), len(a)).Draw(t, "b")
		want := false
		for i := range a {
			for j := range a {
				want = want || stats.Less(a[i], a[j]) && stats.Less(b[j], b[i])
			}
		}
		if got := disagree(a, b); got != want {
			t.Errorf("%v and %v: %v", a, b, got)
		}
	})
}

// TestNotesAbout: the notes about a place are those that a look at every warning finds.
func TestNotesAbout(t *testing.T) {
	name := func(names ...string) *rapid.Generator[string] { return rapid.SampledFrom(append(names, "")) }
	warning := rapid.Custom(func(t *rapid.T) result.Warning {
		return result.Warning{
			Code: name("a").Draw(t, "code"), Severity: rapid.SampledFrom([]string{result.Warn, result.Note}).Draw(t, "severity"), Text: name("t").Draw(t, "text"),
			Climate: name("dry", "wet").Draw(t, "climate"), Condition: name("new", "old").Draw(t, "condition"), Option: name("x").Draw(t, "option"), Band: name("b").Draw(t, "band"),
		}
	})
	rapid.Check(t, func(t *rapid.T) {
		ns := newNotes(rapid.SliceOfN(warning, 0, 8).Draw(t, "warnings"))
		c := &result.Case{Climate: rapid.SampledFrom([]string{"dry", "wet"}).Draw(t, "of"), Condition: rapid.SampledFrom([]string{"new", "old"}).Draw(t, "in")}
		option, band := name("x").Draw(t, "about"), name("b").Draw(t, "on")
		var here, anywhere, only []int
		for i, n := range ns.list {
			about := func(w result.Warning) bool { return w.Option == option && w.Band == band }
			if slices.ContainsFunc(n.places, about) {
				anywhere = append(anywhere, i)
			}
			if slices.ContainsFunc(n.places, func(w result.Warning) bool { return about(w) && ofCase(w, c) }) {
				here = append(here, i)
			}
			if slices.ContainsFunc(n.places, func(w result.Warning) bool {
				return w.Option+w.Band == "" && w.Climate+w.Condition != "" && ofCase(w, c)
			}) {
				only = append(only, i)
			}
		}
		if got := ns.about(c, option, band); !slices.Equal(got, here) {
			t.Errorf("here: %v, want %v", got, here)
		}
		if got := ns.about(nil, option, band); !slices.Equal(got, anywhere) {
			t.Errorf("anywhere: %v, want %v", got, anywhere)
		}
		if got := ns.ofCaseOnly(c); got != noteNumbers(only) {
			t.Errorf("about the case: %s, want %v", got, only)
		}
	})
}
