package fault

import (
	"fmt"
	"strings"
)

// Words joins words as "a, b or c", with the given word before the last.
func Words(words []string, last string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	return strings.Join(words[:len(words)-1], ", ") + " " + last + " " + words[len(words)-1]
}

// Count writes a number with its noun, as in "1 step" and "2 steps".
func Count(n int, noun string) string {
	if n == 1 {
		return "1 " + noun
	}
	return fmt.Sprintf("%d %ss", n, noun)
}
