package render

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strings"
	"testing"
	"unicode"

	"github.com/google/go-cmp/cmp"
	"github.com/yuin/goldmark"
	"github.com/yuin/goldmark/extension"
	"github.com/yuin/goldmark/renderer/html"
	"pgregory.net/rapid"

	"quietslope/scenario/result"
)

// failer is what a test and a property share.
type failer interface {
	Helper()
	Errorf(format string, args ...any)
	Fatal(args ...any)
}

func asMarkdown(t failer, p *Page) string {
	t.Helper()
	var b bytes.Buffer
	if err := p.Markdown(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// piece is a piece of a rendered page: the name of its element and its text.
type piece struct{ Tag, Text string }

// rendered renders markdown and takes it apart. It fails for comments, which stand where raw HTML was left out, and for
// elements that are not wanted.
func rendered(t failer, md string, links bool) []piece {
	t.Helper()
	extensions := []goldmark.Extender{extension.Table}
	if links {
		extensions = []goldmark.Extender{extension.GFM}
	}
	var b bytes.Buffer
	if err := goldmark.New(goldmark.WithExtensions(extensions...), goldmark.WithRendererOptions(html.WithXHTML())).Convert([]byte(md), &b); err != nil {
		t.Fatal(err)
	}
	wanted := []string{"h1", "h2", "h3", "p", "ul", "ol", "li", "table", "thead", "tbody", "tr", "th", "td", "strong"}
	if links {
		wanted = append(wanted, "a")
	}
	var pieces []piece
	open := []int{} // indices of the pieces that text belongs to
	d := xml.NewDecoder(io.MultiReader(strings.NewReader("<page>"), &b, strings.NewReader("</page>")))
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return pieces
		}
		if err != nil {
			t.Fatal(err)
		}
		switch token := token.(type) {
		case xml.StartElement:
			name := token.Name.Local
			if name == "page" {
				continue
			}
			if !slices.Contains(wanted, name) {
				t.Errorf("an element %s", name)
			}
			if len(name) == 2 && name != "ul" && name != "ol" && name != "tr" || name == "p" {
				pieces = append(pieces, piece{Tag: name})
				open = append(open, len(pieces)-1)
			}
		case xml.EndElement:
			if n := len(open); n > 0 && pieces[open[n-1]].Tag == token.Name.Local {
				pieces[open[n-1]].Text = strings.Trim(pieces[open[n-1]].Text, "\n")
				open = open[:n-1]
			}
		case xml.CharData:
			if n := len(open); n > 0 {
				pieces[open[n-1]].Text += string(token)
			} else if strings.TrimSpace(string(token)) != "" {
				t.Errorf("text outside: %q", token)
			}
		default:
			t.Errorf("raw HTML: %v", token)
		}
	}
}

// meant is what a page holds, as it should read.
func meant(p *Page) []piece {
	var pieces []piece
	for _, b := range p.blocks {
		switch b := b.(type) {
		case title:
			pieces = append(pieces, piece{"h1", string(b)})
		case heading:
			tag := "h2"
			if b.inner {
				tag = "h3"
			}
			pieces = append(pieces, piece{tag, b.text})
		case para:
			pieces = append(pieces, piece{"p", string(b)})
		case item:
			text := b.words
			switch b.kind {
			case named:
				text = b.label + ": " + b.words
			case lettered:
				text = b.label + " " + b.words
			}
			pieces = append(pieces, piece{"li", text})
		case table:
			pieces = append(pieces, meantTable(b)...)
		case listing:
			pieces = append(pieces, meantTable(b.table())...)
		case grid:
			pieces = append(pieces, meantTable(b.table())...)
		}
	}
	for i := range pieces {
		pieces[i].Text = strings.TrimSpace(pieces[i].Text)
	}
	return pieces
}

func meantTable(t table) []piece {
	var pieces []piece
	if t.caption != "" {
		pieces = append(pieces, piece{"p", strings.ToUpper(t.caption[:1]) + t.caption[1:] + ":"})
	}
	head, rows := t.cells()
	for _, c := range head {
		pieces = append(pieces, piece{"th", c})
	}
	for _, r := range rows {
		for _, c := range r {
			pieces = append(pieces, piece{"td", c})
		}
	}
	return pieces
}

// noBlanks is a text without its blanks.
func noBlanks(text string) string {
	return strings.Map(func(r rune) rune {
		if unicode.IsSpace(r) {
			return -1
		}
		return r
	}, text)
}

// readsAsMeant holds what a renderer makes of the markdown of a page against the page, and its tables against those of
// the text before they are shortened.
func readsAsMeant(t failer, p *Page) {
	t.Helper()
	md := asMarkdown(t, p)
	pieces := rendered(t, md, false)
	if d := cmp.Diff(meant(p), pieces); d != "" {
		t.Errorf("(-page +markdown)\n%s", d)
	}
	if d := cmp.Diff(pieces, rendered(t, md, true)); d != "" {
		t.Errorf("with links and strokes (-without +with)\n%s", d)
	}
	var cells []string
	for _, c := range pieces {
		if c.Tag == "td" {
			cells = append(cells, noBlanks(c.Text))
		}
	}
	for _, b := range p.blocks {
		var of table
		switch b := b.(type) {
		case listing:
			of = b.table()
			cells = cells[len(of.rows)*(1+len(of.head[0])):]
			continue
		case grid:
			of = b.table()
			cells = cells[len(of.rows)*(1+len(of.head[0])):]
			continue
		case table:
			of = b
		default:
			continue
		}
		lines := strings.Split(strings.TrimSuffix(of.draw(math.MaxInt), "\n"), "\n")
		lines = lines[len(lines)-len(of.rows):]
		for _, l := range lines {
			n := 1 + len(of.head[0])
			if want := noBlanks(l); want != strings.Join(cells[:n], "") {
				t.Errorf("a row of the text %q, of the markdown %q", want, cells[:n])
			}
			cells = cells[n:]
		}
	}
	if len(cells) > 0 {
		t.Errorf("%d cells more than the text has", len(cells))
	}
}

// hostileNames are names that hold all that markdown takes for markup.
var hostileNames = []string{
	`a|b`, `a\|b`, `\`, `back\slash\`, `|---|`, `**bold**`, `*`, `_em_ a_b __x__`, "`code`", "``", `<b>tag</b>`, `<!-- gone -->`, `</td>`,
	`[link](https://example.org "x")`, `![image](x)`, `[a]: b`, `# head`, `tail ##`, `1. one`, `12) twelve`, `1`, `2.5 m`, `- dash`, `+ plus`,
	`> quote`, `---`, `===`, `***`, `~~gone~~`, "~~~", `$x^2$`, `&amp; &#65; & &copy;`, `"quoted" 'single'`, `<https://example.org>`,
	`https://example.org/a_b_c`, `www.example.org`, `two  blanks`, `[ ] task`, `[x] task`, `:---:`, `deep 深い`, `<1 m`, `a<b>c`, `(c) -- ...`, `Über_`, `é_b_`,
}

func TestMarkdown(t *testing.T) {
	var hostile []strengths
	for i, name := range hostileNames {
		hostile = append(hostile, strengths{name, []string{hostileNames[len(hostileNames)-1-i]}, float64(i%11) / 10})
	}
	for _, tt := range []struct {
		name string
		page *Page
	}{
		{"compare-demo-markdown", Comparison(fixture(demoOptions, threeBands))},
		{"check-demo-markdown", Check(checkFixture())},
		{"compare-cases-markdown", Comparison(severalCases())},
		{"compare-hostile-markdown", Comparison(fixture(hostile[:5], hostileNames[5:8]))},
		{"", Comparison(fixture(longNames(), threeBands))}, {"", Comparison(always())}, {"", Comparison(againstOther())}, {"", Comparison(never())},
		{"", Comparison(fixture(demoOptions[:1], threeBands))}, {"", Comparison(fixture(hostile, threeBands))},
	} {
		readsAsMeant(t, tt.page)
		if tt.name != "" {
			compareGolden(t, tt.name, asMarkdown(t, tt.page))
		}
	}
	for _, name := range hostileNames {
		c := fixture(demoOptions[:2], []string{name, "second " + name})
		c.Study, c.Cautions = name, []string{name}
		c.Cases[0].Options[1].Name, c.Cases[0].Options[1].Measures = name, []string{name}
		c.Inputs[0].File = name
		other := c.Cases[0]
		other.Climate, other.Condition = name, name
		c.Cases = append(c.Cases, other)
		c.Warnings = append(c.Warnings, result.Warning{Code: "x", Severity: result.Warn, Option: name, Band: name, Text: name})
		readsAsMeant(t, Comparison(c))
	}
	if err := Comparison(never()).Markdown(failing{}); !errors.Is(err, errFull) {
		t.Errorf("a failed write gave %v", err)
	}
}

// TestMarkdownDollar: a name that holds dollar signs is not taken for a formula by what knows formulas. CommonMark does not,
// so that the other tests cannot see it.
func TestMarkdownDollar(t *testing.T) {
	c := fixture(demoOptions[:2], []string{"$x$", "second"})
	c.Study = "costs $5 or $6"
	c.Cases[0].Options[1].Name, c.Cases[0].Options[1].Measures = "$y^2$", []string{"$$z$$"}
	md := asMarkdown(t, Comparison(c))
	if bare := regexp.MustCompile(`(^|[^\\])\$.*`).FindString(md); bare != "" || !strings.Contains(md, `\$\$z\$\$`) {
		t.Errorf("a dollar sign on its own: %q", bare)
	}
}

// TestMarkdownOfAnything: whatever a block says, markdown shows just that.
func TestMarkdownOfAnything(t *testing.T) {
	letters := rapid.SampledFrom([]rune("ab1 23.)(-+*_`~#>=<![]|\\&;:/$'\"@^éß深–{}"))
	rapid.Check(t, func(r *rapid.T) {
		word := func(what string) string {
			s := strings.TrimSpace(rapid.StringOfN(letters, 1, 12, -1).Draw(r, what))
			if s == "" {
				return "x"
			}
			return s
		}
		p := &Page{}
		p.title(word("title"))
		p.heading("%s", word("heading"))
		p.innerHeading("%s", word("heading"))
		p.para("%s", word("paragraph"))
		for i, kind := range []itemKind{named, lettered, below, plain} {
			p.item(kind, fmt.Sprint("label", i), word("item"))
		}
		p.para("%s", word("paragraph"))
		p.item(numbered, "1", word("note"))
		p.item(numbered, "2", word("note"))
		p.table(table{first: "option", head: [][]string{{word("head")}}, labels: []label{{"A", word("name")}, {"", word("name")}}, rows: [][]string{{"1"}, {"2"}}})
		got := rendered(r, asMarkdown(r, p), false)
		if d := cmp.Diff(meant(p), got); d != "" {
			r.Errorf("%s\n(-page +markdown)\n%s", asMarkdown(r, p), d)
		}
	})
}
