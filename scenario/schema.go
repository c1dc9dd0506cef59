package scenario

import (
	"bytes"
	"encoding/json"
	"fmt"
	"slices"
	"strings"
	"time"
	"unicode"
	"unicode/utf8"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
)

// Schema returns the JSON Schema (draft 2020-12) of the study file, made from the table by which studies are read. It
// holds every key that is supported, and expects scalars as the YAML 1.2 core schema types them: name: 012 arrives as a
// number, and still is a name. A study that is read meets the schema, but for freaks of spelling such as -0 m or blanks before the number; one that
// meets it can still be refused, for what schemaCannot lists.
func Schema() []byte {
	b := &schemaBuilder{}
	file := b.block(&studyShape, "")
	whole := object{
		{"$schema", "https://json-schema.org/draft/2020-12/schema"},
		{"$id", "urn:quietslope:study"},
		{"title", "Study file of quietslope"},
		{"description", schemaSays},
		{"$comment", schemaCannot},
	}
	whole = append(append(whole, file...), member{"$defs", b.defs})
	return []byte(visible(whole.pretty("")) + "\n")
}

const (
	schemaSays = "One study: the weather record, the slope as calibrated, its critical levels, and the options to compare. " +
		"Every quantity is written with its unit, such as 12 m, 0.011 /d or 8 %; a share may also be a bare number from 0 to below 1. " +
		"In a measure of an option one number may be a list, which makes an option of each value, and like takes the same measure of an option above; " +
		"in a cost it takes that of an option above, or adds up those of several. " +
		"What a schema cannot see is said by: quietslope check STUDY.yaml"
	schemaCannot = "Not seen here: the limits of a quantity other than its sign, and 100 % of a share; how a number is spelt before it is read (010, 1. and .5 are refused, and a sum such as 210.000); " +
		"what one key says of another (decide_on names a band, a band by elevation needs site.ground_level, a soil needs columns.pet, costs and losses need money, a cost per metre needs what the metres are worked out from); what one value rules out elsewhere in its block (law: quadratic leaves no working_head and no ceiling, a like of several costs no sum beside it); that names differ; that bands rise and until lies below; " +
		"levels and depths against the thickness of their layer; more than one list in an option; the options that like names; time formats, units of columns and files; " +
		"answers that rule the method out; duplicate keys, and the parts of YAML that a study does not use."
)

// object is a JSON object whose members keep their order.
type object []member

type member struct {
	key   string
	value any // object, []object, or what encoding/json writes on one line
}

// schemaBuilder collects the definitions that keys refer to.
type schemaBuilder struct{ defs object }

// ref refers to a definition, which is made when it is first asked for.
func (b *schemaBuilder) ref(name string, def object) object {
	if !slices.ContainsFunc(b.defs, func(m member) bool { return m.key == name }) {
		b.defs = append(b.defs, member{name, def})
	}
	return object{{"$ref", "#/$defs/" + name}}
}

// block is the schema of a block of keys, or of each block of a list.
func (b *schemaBuilder) block(s *shape, path string) object {
	var keys, excluded, dependent object
	var required []string
	var conditions []object
	like := false
	for i := range s.fields {
		f := &s.fields[i]
		if f.later {
			continue
		}
		keys = append(keys, member{f.name, b.key(f, path)})
		if f.need != "" {
			required = append(required, f.name)
		}
		if never := s.excluded(f); never != nil {
			excluded = append(excluded, member{f.name, object{{"properties", never}}})
		}
		if len(f.with) > 0 {
			dependent = append(dependent, member{f.name, f.with})
		}
		if f.shape.bare != "" {
			conditions = append(conditions, object{
				{"if", object{{"required", []string{f.shape.bare}}}},
				{"then", object{{"properties", object{{f.name, bareNumber(limits{lo: 0, loOpen: true})}}}}},
				{"else", object{{"properties", object{{f.name, b.quantity(&f.shape)}}}}},
			})
		}
		like = like || f.name == likeField.name
	}
	var needs object
	if len(required) > 0 {
		needs = append(needs, member{"required", required})
	}
	if len(s.choice) > 0 { // that it is one only, excluded says: editors have better words for that than for oneOf
		var each []object
		for _, key := range s.choice {
			each = append(each, object{{"required", []string{key}}})
		}
		needs = append(needs, member{"anyOf", each})
	}
	out := object{{"type", "object"}, {"properties", keys}, {"additionalProperties", false}}
	if like && needs != nil { // what is needed may come from the other option
		conditions = append(conditions, object{{"if", object{{"required", []string{likeField.name}}}}, {"else", needs}})
	} else {
		out = append(out, needs...)
	}
	if s.filled {
		out = append(out, member{"minProperties", 1})
	}
	if len(dependent) > 0 {
		out = append(out, member{"dependentRequired", dependent})
	}
	if len(excluded) > 0 {
		out = append(out, member{"dependentSchemas", excluded})
	}
	if len(conditions) > 0 {
		out = append(out, member{"allOf", conditions})
	}
	return out
}

// excluded are the keys that cannot stand beside a key of the block.
func (s *shape) excluded(f *field) object {
	var never object
	for i := range s.fields {
		other := s.fields[i].name
		if slices.Contains(f.not, other) || other != f.name && slices.Contains(s.choice, f.name) && slices.Contains(s.choice, other) {
			never = append(never, member{other, false})
		}
	}
	return never
}

// key is the schema of one key: what it is, what holds when it is left out, a legal value, and what its value may be.
func (b *schemaBuilder) key(f *field, path string) object {
	doc := docOf(f, path)
	text := sentence(doc.Says) + " " + sentence("value: "+doc.Written())
	if len(doc.Units) > 1 { // else the range shows it
		text += " " + sentence("units: "+fault.Words(doc.Units, "or"))
	}
	out := object{{"description", text}}
	if def, ok := f.defaultValue(); ok {
		out = append(out, member{"default", def})
	}
	out = append(out, member{"examples", []any{f.example()}})
	values := b.values(f, doc.Path)
	if doc.List {
		values = append(values, object{
			{"type", "array"}, {"items", oneValue(values)}, {"minItems", 1}, {"maxItems", mostValues}, {"uniqueItems", true},
		})
	}
	return append(out, oneValue(values)...)
}

// sentence begins a text with a capital and ends it with a full stop.
func sentence(text string) string {
	first, n := utf8.DecodeRuneInString(text)
	return string(unicode.ToUpper(first)) + text[n:] + "."
}

// oneValue is the schema of a value that meets one of several.
func oneValue(values []object) object {
	if len(values) == 1 {
		return values[0]
	}
	return object{{"anyOf", values}}
}

// values are the schemas of which the value of a key meets one.
func (b *schemaBuilder) values(f *field, path string) []object {
	s := &f.shape
	var values []object
	words := slices.DeleteFunc(slices.Clone(s.words), func(w string) bool { return w == "true" || w == "false" })
	if s.form == formMonth {
		for m := time.January; m <= time.December; m++ {
			words = append(words, m.String())
		}
	}
	if len(words) > 0 {
		values = append(values, object{{"enum", words}})
	}
	if len(words) < len(s.words) { // plain true is no text
		values = append(values, object{{"type", "boolean"}}, object{{"type", "string"}, {"pattern", "^(true|false)$"}})
	}
	switch s.form {
	case formText, formFilled, formName:
		values = append(values, b.text(s))
	case formTexts:
		values = append(values, object{{"type", "array"}, {"items", b.text(&textShape)}, {"maxItems", s.most}})
	case formOneOrMore:
		text := b.text(&filledShape)
		values = append(values, text, object{{"type", "array"}, {"items", text}, {"minItems", 1}, {"maxItems", s.most}, {"uniqueItems", true}})
	case formMonth:
		values = append(values, object{{"type", "string"}, {"pattern", "^(" + anyCase(words[len(s.words):]...) + ")$"}})
	case formNumber:
		values = append(values, bareNumber(s.limits))
	case formWhole:
		values = append(values, append(object{
			{"type", []string{"integer", "string"}}, {"pattern", quantity.WholePattern(s.limits.sign())},
			{"errorMessage", "write a whole number" + atOrAbove[s.limits.sign()]},
		}, s.limits.members()...))
	case formQuantity, formYears:
		if s.bare != "" { // its block says which of both
			values = append(values, object{{"type", []string{"string", "number"}}})
			break
		}
		values = append(values, b.quantity(s))
	case formBlock:
		values = append(values, b.block(s, path))
	case formList:
		values = append(values, object{{"type", "array"}, {"minItems", 1}, {"items", b.block(s, inside(path, s))}})
	}
	return values
}

// quantity is the schema of a number with a unit. That of a share can also be a number by itself. The member errorMessage,
// which is no part of the standard, is what many editors show in place of a pattern.
func (b *schemaBuilder) quantity(s *shape) object {
	sign := s.limits.sign()
	name := strings.ReplaceAll(formQuantity.name(s.kind), " ", "_") + map[quantity.Sign]string{quantity.NotNegative: "_from_0", quantity.Positive: "_above_0"}[sign]
	wanted := "write " + s.kind.String() + atOrAbove[sign]
	def := object{
		{"type", "string"}, {"pattern", quantity.Pattern(s.kind, sign)},
		{"errorMessage", wanted + " with its unit: " + fault.Words(s.kind.Units(), "or")},
	}
	if s.kind != quantity.Share {
		return b.ref(name, def)
	}
	def[0].value = []string{"string", "number"}
	def[2].value = wanted + " and at most 100 %, or a number below 1"
	bare := s.limits
	if bare.hi >= 1 { // a bare 1 could mean 1 % or 100 %
		bare.hi, bare.hiOpen = 1, true
	}
	return append(b.ref(name, def), bare.members()...)
}

// atOrAbove says the sign of a number in words.
var atOrAbove = map[quantity.Sign]string{quantity.NotNegative: " of 0 or more", quantity.Positive: " above 0"}

// bareNumber is the schema of a number without a unit.
func bareNumber(l limits) object {
	return append(object{
		{"type", []string{"number", "string"}}, {"pattern", quantity.NumberPattern(l.sign())},
		{"errorMessage", "write a number" + atOrAbove[l.sign()] + " without a unit"},
	}, l.members()...)
}

// sign is what numbers in the range may have.
func (l limits) sign() quantity.Sign {
	switch {
	case l.lo > 0 || l.lo == 0 && l.loOpen:
		return quantity.Positive
	case l.lo == 0:
		return quantity.NotNegative
	}
	return quantity.AnySign
}

// members are the limits of a number. An upper limit that is not above the lower one is none.
func (l limits) members() object {
	out := object{{"minimum", l.lo}}
	if l.loOpen {
		out[0].key = "exclusiveMinimum"
	}
	switch {
	case l.hi <= l.lo:
	case l.hiOpen:
		out = append(out, member{"exclusiveMaximum", l.hi})
	default:
		out = append(out, member{"maximum", l.hi})
	}
	return out
}

// Characters that have no place in a text, by oneLine, and those that have none at the ends of a name.
const (
	unseen  = "\u0000-\u001f\u007f-\u009f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff\ufffd"
	blanks  = " \u00a0\u1680\u2000-\u200a\u202f\u205f\u3000"
	unblank = unseen + blanks
)

// text is the schema of a text. What YAML takes for a number or for true or false is one too.
func (b *schemaBuilder) text(s *shape) object {
	def := object{{"type", []string{"string", "number", "boolean"}}}
	if s.cell {
		pattern := "^([^=+@" + unseen + "-][^" + unseen + "]*)?$"
		if s.form == formFilled {
			pattern = "^([^=+@" + unblank + "-]|[" + blanks + "][^" + unseen + "]*[^" + unblank + "])[^" + unseen + "]*$"
		}
		return append(def, member{"pattern", pattern}, member{"minimum", 0}, // a number below 0 begins with -
			member{"errorMessage", "a text on one line, which begins with none of = + - @"})
	}
	switch s.form {
	case formFilled:
		return b.ref("filled_text", append(def, member{"pattern", "^[^" + unseen + "]*[^" + unblank + "][^" + unseen + "]*$"}))
	case formName:
		return b.ref("name", append(def,
			member{"pattern", "^[^=+@" + unblank + "-]([^" + unseen + "]*[^" + unblank + "])?$"},
			member{"maxLength", longestName},
			member{"minimum", 0}, // a name does not begin with -
			member{"errorMessage", fmt.Sprintf("a name has 1 to %d characters, begins with none of = + - @, and neither begins nor ends with a blank", longestName)},
			member{"not", object{{"type", "string"}, {"pattern", "^(" + anyCase(reservedNames...) + ")$"}}}))
	}
	return b.ref("text", append(def, member{"pattern", "^[^" + unseen + "]*$"}))
}

// anyCase is a pattern for texts of small Latin letters and blanks in any case.
func anyCase(texts ...string) string {
	var all []string
	for _, text := range texts {
		var p strings.Builder
		for _, r := range strings.ToLower(text) {
			if r == ' ' {
				p.WriteRune(r)
				continue
			}
			fmt.Fprintf(&p, "[%c%c]", r, unicode.ToUpper(r))
		}
		all = append(all, p.String())
	}
	return strings.Join(all, "|")
}

// defaultValue is what stands in for a key that is left out, as it would stand in the file.
func (f *field) defaultValue() (value any, ok bool) {
	switch s := &f.shape; {
	case s.form == formText:
		return f.def, true
	case s.form == formTexts:
		return (&decoder{}).standIn(f, Place{}).texts, true
	case f.def == "" || (f.def == "none" || f.def == "unknown") && !slices.Contains(s.words, f.def):
		return nil, false
	}
	return f.typed(f.def), true
}

// example is a legal value of the key.
func (f *field) example() any {
	def, ok := f.defaultValue()
	switch s := &f.shape; {
	case f.eg != "":
		return f.typed(f.eg)
	case s.form == formBlock:
		return s.exampleBlock()
	case s.form == formList:
		return []any{s.exampleBlock()}
	case ok:
		return def
	}
	return f.typed(f.shape.words[0])
}

// exampleBlock gives the keys that a block needs, or the first where it needs none.
func (s *shape) exampleBlock() object {
	var out object
	for i := range s.fields {
		if f := &s.fields[i]; f.need != "" || len(s.choice) > 0 && f.name == s.choice[0] {
			out = append(out, member{f.name, f.example()})
		}
	}
	if out == nil {
		out = object{{s.fields[0].name, s.fields[0].example()}}
	}
	return out
}

// typed is a value of the key as YAML types it.
func (f *field) typed(text string) any {
	switch {
	case text == "true" || text == "false":
		return text == "true"
	case f.shape.form == formNumber || f.shape.form == formWhole:
		return json.Number(text)
	}
	return text
}

// schemaWidth is the largest number of bytes of a line, where it can be kept.
const schemaWidth = 120

// pretty writes the object on one line if it fits, and else a line for each member.
func (o object) pretty(indent string) string {
	return prettyParts("{", "}", indent, len(o), func(i int, inner string) string {
		return oneLineJSON(o[i].key) + ": " + prettyValue(o[i].value, inner)
	})
}

func prettyValue(v any, indent string) string {
	switch v := v.(type) {
	case object:
		return v.pretty(indent)
	case []object:
		return prettyParts("[", "]", indent, len(v), func(i int, inner string) string { return v[i].pretty(inner) })
	case []any:
		return prettyParts("[", "]", indent, len(v), func(i int, inner string) string { return prettyValue(v[i], inner) })
	case []string:
		return prettyParts("[", "]", indent, len(v), func(i int, inner string) string { return oneLineJSON(v[i]) })
	}
	return oneLineJSON(v)
}

func prettyParts(open, end, indent string, n int, part func(i int, inner string) string) string {
	inner := indent + "  "
	var parts []string
	for i := range n {
		parts = append(parts, part(i, inner))
	}
	line := open + strings.Join(parts, ", ") + end
	if len(indent)+len(line) <= schemaWidth && !strings.Contains(line, "\n") {
		return line
	}
	return open + "\n" + inner + strings.Join(parts, ",\n"+inner) + "\n" + indent + end
}

// oneLineJSON writes a scalar.
func oneLineJSON(v any) string {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(v); err != nil {
		panic("scenario: the schema cannot be written: " + err.Error())
	}
	return strings.TrimSuffix(b.String(), "\n")
}

// visible writes characters that nobody can see as escapes of JSON.
func visible(text string) string {
	var b strings.Builder
	for _, r := range text {
		if r == '\n' || r == ' ' || unicode.IsGraphic(r) && !unicode.IsSpace(r) && r != unicode.ReplacementChar {
			b.WriteRune(r)
		} else {
			fmt.Fprintf(&b, `\u%04x`, r)
		}
	}
	return b.String()
}
