package cascade_test

import (
	"encoding/csv"
	"math"
	"os"
	"strconv"
	"strings"
	"testing"

	"quietslope/cascade"
)

// TestReference compares every step of testdata/ref/engine.csv and quadratic.csv: random models with every kind of outlet,
// breakpoint and capacity, solved by a general-purpose integrator (SciPy's DOP853) that shares nothing with this package.
// Their headers say how they were made, by which script, and what they meet. Every model of the second has a drain with
// a square, above and below its upper root and, with evaporation, drawn down through its invert.
func TestReference(t *testing.T) {
	for _, name := range []string{"engine", "quadratic"} {
		t.Run(name, func(t *testing.T) { compareReference(t, readReference(t, name)) })
	}
}

func compareReference(t *testing.T, rows []referenceRow) {
	const tolerance = 1e-7 // relative to max(value, 1 mm)
	worst := 0.0
	var run *cascade.Run // carries on from step to step of a model
	for _, row := range rows {
		m := row.model()
		fresh := newRun(t, m, row.num("start_cover_mm"), row.num("start_deep_mm"))
		if row.num("step") == 1 {
			run = newRun(t, m, row.num("start_cover_mm"), row.num("start_deep_mm"))
		}
		for _, r := range []*cascade.Run{fresh, run} {
			before := r.Totals()
			step(t, r, row.num("depth_mm"), row.num("days"))
			got := r.Totals().Sub(before)
			cover, deep := r.Storage()
			for _, c := range []struct {
				column string
				got    float64
			}{
				{"end_cover_mm", cover},
				{"end_deep_mm", deep},
				{"seepage_mm", got.Cover.Seepage},
				{"percolation_mm", got.Cover.Percolation},
				{"drains_mm", total(got.Cover.Drains)},
				{"overflow_mm", got.Cover.Overflow},
				{"unmet_mm", got.Cover.Unmet},
				{"deep_seepage_mm", got.Deep.Seepage},
				{"deep_drains_mm", total(got.Deep.Drains)},
				{"refused_mm", got.Deep.Refused},
			} {
				want := row.num(c.column)
				d := math.Abs(c.got-want) / max(math.Abs(want), 1)
				worst = max(worst, d)
				if !(d <= tolerance) {
					t.Errorf("model %s step %s (carried on: %t): %s = %v, want %v; events %q",
						row.text("model"), row.text("step"), r == run, c.column, c.got, want, row.text("events"))
				}
			}
		}
	}
	t.Logf("%d steps, largest difference %.2g", len(rows), worst)
}

type referenceRow struct {
	t      *testing.T
	header map[string]int
	fields []string
}

func readReference(t *testing.T, name string) []referenceRow {
	t.Helper()
	f, err := os.Open("../testdata/ref/" + name + ".csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rd := csv.NewReader(f)
	rd.Comment = '#'
	records, err := rd.ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	header := map[string]int{}
	for i, name := range records[0] {
		header[name] = i
	}
	var rows []referenceRow
	for _, r := range records[1:] {
		rows = append(rows, referenceRow{t, header, r})
	}
	if len(rows) < 500 {
		t.Fatalf("only %d rows", len(rows))
	}
	return rows
}

func (r referenceRow) text(column string) string {
	i, ok := r.header[column]
	if !ok {
		r.t.Fatalf("no column %q", column)
	}
	return r.fields[i]
}

func (r referenceRow) has(column string) bool {
	_, ok := r.header[column]
	return ok
}

func (r referenceRow) num(column string) float64 { return r.parse(column, r.text(column)) }

func (r referenceRow) parse(column, text string) float64 {
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		r.t.Fatalf("column %q: %v", column, err)
	}
	return v
}

func (r referenceRow) list(column string) (v []float64) {
	if r.text(column) == "" {
		return nil
	}
	for s := range strings.SplitSeq(r.text(column), ";") {
		v = append(v, r.parse(column, s))
	}
	return v
}

func (r referenceRow) drains(prefix string) (d []cascade.Outlet) {
	rates, inverts, ceilings := r.list(prefix+"_rates_per_day"), r.list(prefix+"_inverts_mm"), r.list(prefix+"_ceilings_mm_per_day")
	for i := range rates {
		d = append(d, cascade.Outlet{Rate: rates[i], Invert: inverts[i], Ceiling: ceilings[i]})
	}
	if squares := prefix + "_squares_per_mm_day"; r.has(squares) {
		for i, s := range r.list(squares) {
			d[i].Square = s
		}
	}
	return d
}

func (r referenceRow) model() cascade.Model {
	return cascade.Model{
		Cover: cascade.Store{
			Capacity: r.num("cover_capacity_mm"), Seepage: r.num("cover_seepage_per_day"), Drains: r.drains("cover_drain"),
		},
		Percolation: cascade.Outlet{Rate: r.num("percolation_per_day"), Ceiling: r.num("percolation_ceiling_mm_per_day")},
		Deep: cascade.Store{
			Capacity: r.num("deep_capacity_mm"), Seepage: r.num("deep_seepage_per_day"), Drains: r.drains("deep_drain"),
		},
		Lateral: r.num("lateral_mm_per_day"),
	}
}

func newRun(t testing.TB, m cascade.Model, cover, deep float64) *cascade.Run {
	t.Helper()
	r, err := cascade.NewRun(m, cover, deep)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func step(t testing.TB, r *cascade.Run, depth, days float64) {
	t.Helper()
	if err := r.Step(depth, days); err != nil {
		t.Fatal(err)
	}
}

func total(v []float64) (s float64) {
	for _, x := range v {
		s += x
	}
	return s
}
