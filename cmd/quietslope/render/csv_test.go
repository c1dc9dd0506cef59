package render

import (
	"bytes"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"maps"
	"slices"
	"strconv"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"

	"quietslope/scenario/result"
)

// leaves collects what a result holds, by the row and the column of CSV in which it is to stand. It looks at the JSON by
// itself and shares nothing with the writer.
func leaves(v any, row [4]string, path []string, into map[string][]string) {
	put := func(quantity, column, text string) {
		key := strings.Join(append(row[:], quantity, column), " / ")
		into[key] = append(into[key], text)
	}
	quantity := strings.Join(path, ".")
	switch v := v.(type) {
	case json.Number:
		put(quantity, "value", v.String())
	case string:
		put(quantity, "text", v)
	case bool:
		put(quantity, "text", map[bool]string{true: "yes", false: "no"}[v])
	case []any:
		last := path[len(path)-1]
		if of, ok := strings.CutSuffix(quantity, "_ci"); ok || last == "ci" {
			if last == "ci" {
				of = strings.TrimSuffix(quantity, "ci") + "value"
			}
			put(of, "lower", v[0].(json.Number).String())
			put(of, "upper", v[1].(json.Number).String())
			return
		}
		for i, e := range v {
			m, _ := e.(map[string]any)
			rest := maps.Clone(m)
			text := func(key string) string { s, _ := rest[key].(string); delete(rest, key); return s }
			in, above := row, path[:len(path)-1]
			switch last {
			case "cases":
				in[0], in[1] = text("climate"), text("condition")
			case "options":
				in[2] = text("name")
			case "bands":
				in[3] = text("name")
			case "defaults", "understood":
				above = append(slices.Clone(path), text("key"))
			case "cautions":
				put("caution", "text", e.(string))
				continue
			case "warnings":
				in = [4]string{text("climate"), text("condition"), text("option"), text("band")}
				code := "warning." + rest["code"].(string)
				leaves(rest["text"], in, []string{code}, into)
				leaves(rest["severity"], in, []string{code, "severity"}, into)
				continue
			default:
				leaves(e, in, append(slices.Clone(path), strconv.Itoa(i+1)), into)
				continue
			}
			leaves(rest, in, above, into)
		}
	case nil: // a list that the fixture left empty
	case map[string]any:
		for key, e := range v {
			leaves(e, row, append(slices.Clone(path), key), into)
		}
	default:
		panic(fmt.Sprintf("%T", v))
	}
}

// csvAsJSON holds the CSV of a result against its JSON: every number and every interval by its text, every word, and not a
// row more.
func csvAsJSON(t *testing.T, found any) [][]string {
	t.Helper()
	var b, j bytes.Buffer
	if err := errors.Join(CSV(&b, found), JSON(&j, found)); err != nil {
		t.Fatal(err)
	}
	if strings.Contains(b.String(), "\r") || !strings.HasSuffix(b.String(), "\n") {
		t.Error("lines do not end in LF")
	}
	rows, err := csv.NewReader(&b).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if want := "climate,condition,option,band,quantity,value,lower,upper,text"; strings.Join(rows[0], ",") != want {
		t.Errorf("the header is %q", rows[0])
	}
	d := json.NewDecoder(&j)
	d.UseNumber()
	var v any
	if err := d.Decode(&v); err != nil {
		t.Fatal(err)
	}
	want, got := map[string][]string{}, map[string][]string{}
	leaves(v, [4]string{}, nil, want)
	for _, r := range rows[1:] {
		for c, column := range []string{"value", "lower", "upper", "text"} {
			if text := r[5+c]; text != "" {
				key := strings.Join(append(slices.Clone(r[:5]), column), " / ")
				got[key] = append(got[key], text)
			}
		}
	}
	for key, texts := range want { // a text without a letter has a row of its own, but leaves no trace here
		if strings.HasSuffix(key, " / text") && strings.Join(texts, "") == "" {
			delete(want, key)
		}
	}
	if d := cmp.Diff(want, got); d != "" {
		t.Errorf("(-JSON +CSV)\n%s", d)
	}
	return rows
}

func TestCSV(t *testing.T) {
	hostile := fixture([]strengths{{`comma, "quoted"; semicolon`, []string{"a\nb"}, 1}, {"'single'", nil, 0.5}, {" – ", nil, 0.2}}, []string{"a,b", `"c"`})
	for _, found := range []any{
		fixture(demoOptions, threeBands), fixture(demoOptions[:1], threeBands), hostile, always(), never(), severalCases(), checkFixture(), drainsFixture(),
	} {
		csvAsJSON(t, found)
	}
	var b bytes.Buffer
	if err := CSV(&b, ptr(0)); err != nil || b.String() != strings.Join(csvHead, ",")+"\n" {
		t.Errorf("%q, %v", &b, err)
	}
	if err := CSV(failing{}, never()); !errors.Is(err, errFull) {
		t.Errorf("a failed write gave %v", err)
	}
}

// TestCSVRows holds the rows of a small result, one of each kind.
func TestCSVRows(t *testing.T) {
	tenth, fifth := 0.1, 0.2
	c := &result.Comparison{
		Head: result.Head{
			Study: `Bank, the "upper"`,
			Warnings: []result.Warning{
				{Code: "few_events", Severity: result.Warn, Climate: "wetter", Option: "trenches", Band: "onset", Text: "Few."},
				{Code: "perched_water", Severity: result.Note, Text: "Perched, perhaps."},
			},
			Cautions: []string{"Take care."},
		},
		Defaults: []result.KeyValue{{Key: "bands[0].until", Value: "3 m"}},
		Declared: map[string]string{"perched_water": "yes"},
		Bands:    []result.Band{{Name: "onset", LevelM: tenth + fifth}},
		Cases: []result.Case{{Climate: "as recorded", Condition: "as built", Options: []result.Option{{
			Name: "trenches", Measures: []string{"deep", "close"},
			Bands:    []result.BandFigure{{Name: "onset", DaysPerYear: 1e-9, DaysPerYearCI: ci(0, 1./3)}},
			Decision: &result.Decision{Measure: "load", Value: 12, CI: ci(1e21, -2.5), Rank: 1},
		}}}},
	}
	var found []string
	for _, r := range csvAsJSON(t, c) {
		found = append(found, strings.Join(r, "|"))
	}
	for _, want := range []string{
		`||||study||||Bank, the "upper"`,
		"wetter||trenches|onset|warning.few_events||||Few.",
		"||||warning.perched_water||||Perched, perhaps.", "||||warning.perched_water.severity||||note",
		"||||caution||||Take care.",
		"||||declared.perched_water||||yes",
		"||||defaults.bands[0].until.value||||3 m",
		"||||settings.confidence|0|||",
		"||||record.years_counted|0|||",
		"|||onset|level_m|0.30000000000000004|||",
		"as recorded|as built|trenches||baseline||||no",
		"as recorded|as built|trenches||measures.2||||close",
		"as recorded|as built|trenches||rates.cover_seepage_per_day|0|||",
		"as recorded|as built|trenches|onset|days_per_year|1e-9|0|0.3333333333333333|",
		"as recorded|as built|trenches|onset|days_by_month.12|0|||",
		"as recorded|as built|trenches||decision.measure||||load",
		"as recorded|as built|trenches||decision.value|12|1e+21|-2.5|",
		"as recorded|as built|trenches||decision.rank|1|||",
	} {
		if !slices.Contains(found, want) {
			t.Errorf("no row %q", want)
		}
	}
	if t.Failed() {
		t.Log(strings.Join(found, "\n"))
	}
}
