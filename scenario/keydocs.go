package scenario

import (
	"slices"
	"strings"

	"quietslope/scenario/fault"
	"quietslope/scenario/quantity"
)

// KeyDoc describes one key of the study file, as the decoder reads it.
type KeyDoc struct {
	Path     string   // such as options[].trench_drains.depth, where [] stands for each item of a list
	Says     string   // what it is, in one line without a full stop
	Form     string   // how its value is written, such as "block", "name" or the kind of a quantity, "length"
	Units    []string // of a quantity, the usual one first
	Words    []string // that may stand instead, or of the form "word" the only ones
	Range    string   // of a number or quantity, in words; "" for any other form
	Required bool     // must be given wherever its block is
	Default  string   // what stands in for a key that is left out, as it would be typed; "" for no fixed text
	Absent   string   // what holds when the key is left out, in words, where Required and Default do not say it
	List     bool     // a list of values may stand instead, which makes an option of each
}

// Keys describes every key of the study file that is supported, blocks before their keys, in the order of the
// documentation.
func Keys() []KeyDoc { return keyDocs(nil, studyShape.fields, "") }

func keyDocs(docs []KeyDoc, fields []field, path string) []KeyDoc {
	for i := range fields {
		f := &fields[i]
		if f.later {
			continue
		}
		doc := docOf(f, path)
		docs = keyDocs(append(docs, doc), f.shape.fields, inside(doc.Path, &f.shape))
	}
	return docs
}

// docOf describes one key of the block at a path.
func docOf(f *field, path string) KeyDoc {
	s := &f.shape
	doc := KeyDoc{
		Path: join(path, f.name), Says: f.says, Form: s.formName(), Words: s.shownWords(), Range: s.rangeWords(),
		Required: f.need != "", Default: f.def, Absent: f.absent, List: listPath(path) && f.listable(),
	}
	switch s.form {
	case formQuantity:
		doc.Units = s.kind.Units()
	case formTexts:
		doc.Default = "[" + f.def + "]"
	}
	return doc
}

// listPath tells whether a number of the block at a path may be a list: that of a measure, but of no block inside one.
func listPath(path string) bool {
	measure, ok := strings.CutPrefix(path, "options[].")
	fields, _ := measureFields(measure)
	return ok && fields != nil
}

// Written says how the value of the key is written, its range, and what holds when it is left out: "length above 0 m and
// at most 500 m; required".
func (k KeyDoc) Written() string {
	text := k.Form
	switch {
	case k.Form == "word" && len(k.Words) == 1:
		return k.Words[0] + ", and no other yet"
	case k.Form == "word":
		text = fault.Words(k.Words, "or")
	case k.Range != "":
		text += " " + k.Range
	}
	if k.Form != "word" && len(k.Words) > 0 {
		text += ", or " + fault.Words(k.Words, "or")
	}
	if k.List {
		text += ", or a list"
	}
	switch {
	case k.Required:
		return text + "; required"
	case k.Default != "":
		return text + "; default " + k.Default
	case k.Absent != "":
		return text + "; " + k.Absent
	}
	return text + "; may be left out"
}

// inside is the path of the keys of a block, or of the blocks of a list.
func inside(path string, s *shape) string {
	if s.form == formList {
		return path + "[]"
	}
	return path
}

// LaterKeys lists the keys that are known but refused as not supported yet, and after "KEY as" the words of a supported
// key that are.
func LaterKeys() []string { return laterKeys(nil, studyShape.fields, "") }

func laterKeys(keys []string, fields []field, path string) []string {
	for i := range fields {
		f := &fields[i]
		key := join(path, f.name)
		switch {
		case f.later:
			keys = append(keys, key)
		case len(f.shape.later) > 0:
			keys = append(keys, key+" as "+fault.Words(f.shape.later, "or"))
		}
		keys = laterKeys(keys, f.shape.fields, inside(key, &f.shape))
	}
	return keys
}

// formName is the form in words.
func (s *shape) formName() string {
	if s.sum {
		return "sum of money"
	}
	return s.form.name(s.kind)
}

// name is the form in words. The kind is that of a quantity.
func (f form) name(kind quantity.Kind) string {
	switch f {
	case formText, formFilled:
		return "text"
	case formName:
		return "name"
	case formWord:
		return "word"
	case formTexts:
		return "list of texts"
	case formOneOrMore:
		return "text or list of texts"
	case formNumber:
		return "number"
	case formWhole:
		return "whole number"
	case formQuantity:
		_, name, _ := strings.Cut(kind.String(), " ") // without its article
		return name
	case formYears:
		return "whole number of years"
	case formMonth:
		return "English name of a month"
	case formBlock:
		return "block"
	case formList:
		return "list of blocks"
	}
	panic("scenario: a form without a name")
}

// shownWords are the words of the shape without true and false where yes and no say the same.
func (s *shape) shownWords() []string {
	if !slices.Contains(s.words, "yes") {
		return s.words
	}
	var words []string
	for _, w := range s.words {
		if w != "true" && w != "false" {
			words = append(words, w)
		}
	}
	return words
}

// rangeWords is the range of a number or quantity in words.
func (s *shape) rangeWords() string {
	switch s.form {
	case formNumber, formWhole, formQuantity:
		words := s.limits.words(s)
		if s.bare != "" {
			words += ", or a number beside " + s.bare
		}
		return words
	case formYears:
		return "from " + quantity.FormatNumber(s.limits.lo) + " y to " + quantity.FormatNumber(s.limits.hi) + " y"
	}
	return ""
}
