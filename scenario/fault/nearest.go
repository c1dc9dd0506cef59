package fault

import (
	"os"
	"path/filepath"
	"strings"
	"unicode/utf8"
)

// Nearest returns the known word that a mistyped one most likely stands for, whatever the case, and "" when none is
// close: within a third of its letters, three at most.
func Nearest(word string, known []string) string {
	const longest = 60 // as long as any name may be
	n := utf8.RuneCountInString(word)
	if n > longest {
		return ""
	}
	best, least := "", 1+min(3, (n+1)/3)
	for _, k := range known {
		if len(k) > 4*longest {
			continue
		}
		if d := distance(strings.ToLower(word), strings.ToLower(k)); d < least {
			best, least = k, d
		}
	}
	return best
}

// NearestFile returns the name of the file in the same folder that a path to none most likely stands for: one with the same
// name but for what follows its first point, otherwise one whose name is close. It returns "" where there is none, and
// looks only at names that the caller accepts and that can be shown as they are.
func NearestFile(path string, accept func(name string) bool) string {
	entries, err := os.ReadDir(filepath.Dir(path))
	if err != nil {
		return ""
	}
	base := filepath.Base(path)
	stem, _, _ := strings.Cut(base, ".")
	var stems []string
	names := map[string]string{}
	for _, e := range entries {
		if e.IsDir() || Name(e.Name()) != e.Name() || !accept(e.Name()) {
			continue
		}
		s, _, _ := strings.Cut(e.Name(), ".")
		if stem != "" && strings.EqualFold(s, stem) {
			return e.Name()
		}
		if names[s] == "" {
			stems, names[s] = append(stems, s), e.Name()
		}
	}
	return names[Nearest(stem, stems)]
}

// distance is the least number of characters to insert, delete, replace or swap with their neighbour that makes a of b
// (optimal string alignment; Damerau 1964, Levenshtein 1966, from memory).
func distance(a, b string) int {
	s, t := []rune(a), []rune(b)
	var before, last, row []int
	for j := range len(t) + 1 {
		last = append(last, j)
	}
	for i := range s {
		row = append(make([]int, 0, len(t)+1), i+1)
		for j := range t {
			d := last[j]
			if s[i] != t[j] {
				d++
			}
			d = min(d, last[j+1]+1, row[j]+1)
			if i > 0 && j > 0 && s[i] == t[j-1] && s[i-1] == t[j] {
				d = min(d, before[j-1]+1)
			}
			row = append(row, d)
		}
		before, last = last, row
	}
	return last[len(t)]
}
