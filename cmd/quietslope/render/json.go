package render

import (
	"encoding/json"
	"fmt"
	"io"
)

// JSON writes a result with two blanks of indent and a final newline. Numbers are the shortest text that reads back to
// the same float64; text is not escaped for HTML. A figure that is not finite is an error.
func JSON(w io.Writer, v any) error {
	e := json.NewEncoder(w)
	e.SetIndent("", "  ")
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		return fmt.Errorf("writing JSON: %w", err)
	}
	return nil
}
