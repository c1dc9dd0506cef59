package render

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"io"
	"strconv"
	"strings"
)

// csvHead are the columns of CSV.
var csvHead = []string{"climate", "condition", "option", "band", "quantity", "value", "lower", "upper", "text"}

// CSV writes a result as a table with a row for every figure and every text in it, and one header line, in the order of its
// JSON. Numbers are the very text of the JSON, and nothing is left out but lists without entries.
//
// The quantity is the path in the JSON, its keys joined by dots, from the option or the band down where a row belongs to
// one. Entries of a list are counted from 1; those with a key of their own, and states, go by it. An interval stands in the row of its
// figure: KEY_ci of KEY, ci of the figure before it. Texts stand in the last column, true and false as yes and no. A
// warning is a row warning.CODE, with warning.CODE.severity below it, a caution a row caution.
func CSV(w io.Writer, v any) error {
	var b bytes.Buffer
	if err := JSON(&b, v); err != nil {
		return err
	}
	d := json.NewDecoder(&b)
	d.UseNumber()
	root, err := readNode(d)
	if err != nil {
		return fmt.Errorf("writing CSV: %w", err)
	}
	t := tabler{out: csv.NewWriter(w)}
	t.write(csvHead)
	t.object(owner{}, "", root)
	t.out.Flush()
	return t.out.Error()
}

// node is a value of JSON with its keys in their order.
type node struct {
	scalar json.Token // number, text, yes or no; nil for an object or a list
	object bool
	keys   []string // of an object
	values []node   // of an object or a list
}

// readNode reads the next value.
func readNode(d *json.Decoder) (node, error) {
	token, err := d.Token()
	if err != nil {
		return node{}, err
	}
	open, nested := token.(json.Delim)
	if !nested {
		return node{scalar: token}, nil
	}
	n := node{object: open == '{'}
	for d.More() {
		if n.object {
			key, err := d.Token()
			if err != nil {
				return n, err
			}
			n.keys = append(n.keys, key.(string))
		}
		value, err := readNode(d)
		if err != nil {
			return n, err
		}
		n.values = append(n.values, value)
	}
	_, err = d.Token() // the end
	return n, err
}

// get is the value of a key, nil when there is none.
func (n *node) get(key string) *node {
	for i, k := range n.keys {
		if k == key {
			return &n.values[i]
		}
	}
	return nil
}

// word is the text of a key; "" when there is none.
func (n *node) word(key string) string {
	if v := n.get(key); v != nil {
		if s, ok := v.scalar.(string); ok {
			return s
		}
	}
	return ""
}

// number reports whether a number stands under a key.
func (n *node) number(key string) bool {
	v := n.get(key)
	if v == nil {
		return false
	}
	_, number := v.scalar.(json.Number)
	return number
}

// interval is the lower and the upper limit that a list of two numbers holds.
func (n *node) interval() (limits [2]string, ok bool) {
	if n.object || len(n.values) != 2 {
		return limits, false
	}
	for i := range n.values {
		x, number := n.values[i].scalar.(json.Number)
		if !number {
			return limits, false
		}
		limits[i] = x.String()
	}
	return limits, true
}

// owner is what a row belongs to.
type owner struct{ climate, condition, option, band string }

// tabler writes rows. An error of out is kept there.
type tabler struct{ out *csv.Writer }

func (t *tabler) write(row []string) { _ = t.out.Write(row) }

func (t *tabler) row(of owner, quantity, value string, limits [2]string, text string) {
	t.write([]string{of.climate, of.condition, of.option, of.band, quantity, value, limits[0], limits[1], text})
}

// object writes the members of an object at a path, but for those whose keys are left out.
func (t *tabler) object(of owner, path string, n node, leftOut ...string) {
	intervals := map[string][2]string{} // by the key of their figure
	before := ""                        // key of the last figure
	taken := map[string]bool{}
	for i, key := range n.keys {
		if n.number(key) {
			before = key
		}
		limits, ok := n.values[i].interval()
		figure, named := strings.CutSuffix(key, "_ci")
		if key == "ci" {
			figure, named = before, true
		}
		if ok && named && n.number(figure) {
			intervals[figure], taken[key] = limits, true
		}
	}
	for _, key := range leftOut {
		taken[key] = true
	}
	for i, key := range n.keys {
		if taken[key] {
			continue
		}
		t.value(of, path, key, n.values[i], intervals[key])
	}
}

// value writes what stands under a key of the object at a path. limits are the interval of a figure.
func (t *tabler) value(of owner, path, key string, n node, limits [2]string) {
	here := join(path, key)
	switch x := n.scalar.(type) {
	case json.Number:
		t.row(of, here, x.String(), limits, "")
	case string:
		t.row(of, here, "", limits, x)
	case bool:
		t.row(of, here, "", limits, map[bool]string{true: "yes", false: "no"}[x])
	default:
		if n.object {
			t.object(of, here, n)
			return
		}
		for i, entry := range n.values {
			t.entry(of, path, key, i+1, entry)
		}
	}
}

// entry writes the entry of a list under a key of the object at a path.
func (t *tabler) entry(of owner, path, key string, number int, n node) {
	name := n.word("name")
	switch {
	case key == "cases" && n.object:
		of.climate, of.condition = n.word("climate"), n.word("condition")
		t.object(of, path, n, "climate", "condition")
	case key == "options" && name != "":
		of.option = name
		t.object(of, path, n, "name")
	case key == "bands" && name != "":
		of.band = name
		t.object(of, path, n, "name")
	case key == "warnings" && path == "":
		of := owner{n.word("climate"), n.word("condition"), n.word("option"), n.word("band")}
		code := "warning." + n.word("code")
		t.row(of, code, "", [2]string{}, n.word("text"))
		t.object(of, code, n, "code", "climate", "condition", "option", "band", "text")
	case key == "cautions" && path == "":
		text, _ := n.scalar.(string)
		t.row(of, "caution", "", [2]string{}, text)
	case key == "states" && n.word("state") != "":
		t.object(of, join(join(path, key), n.word("state")), n, "state")
	case n.word("key") != "":
		t.object(of, join(join(path, key), n.word("key")), n, "key")
	default:
		t.value(of, join(path, key), strconv.Itoa(number), n, [2]string{})
	}
}

func join(path, key string) string {
	if path == "" {
		return key
	}
	return path + "." + key
}
