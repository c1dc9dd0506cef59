package render

import (
	"fmt"
	"io"
	"testing"

	"quietslope/scenario/result"
)

// manyCases is a comparison of n options in cases whose every option has notes of its own, on three bands.
func manyCases(options, cases int) *result.Comparison {
	var all []strengths
	for i := range options {
		all = append(all, strengths{fmt.Sprintf("trenches, variant %d", i), []string{"trench drains"}, 1 - float64(i)/float64(options)})
	}
	c := fixture(all, threeBands)
	first := c.Cases[0]
	for i := range cases {
		of := first
		if i > 0 {
			of.Condition = fmt.Sprintf("condition %d", i)
			c.Cases = append(c.Cases, of)
		}
		for _, o := range all {
			for _, b := range threeBands {
				c.Warnings = append(c.Warnings,
					result.Warning{Code: "few_events", Severity: result.Warn, Climate: of.Climate, Condition: of.Condition, Option: o.name, Band: b, Text: "Fewer than 5 events, too few for a rate; read the ranges."},
					result.Warning{Code: "not_told_apart", Severity: result.Note, Climate: of.Climate, Condition: of.Condition, Option: o.name, Band: b, Text: "Not told apart: " + o.name + "."})
			}
		}
	}
	return c
}

// BenchmarkLayout lays out and writes a large comparison: many options in many cases, and very many in one.
func BenchmarkLayout(b *testing.B) {
	for _, size := range []struct{ options, cases int }{{100, 50}, {10, 500}, {5000, 1}} {
		c := manyCases(size.options, size.cases)
		name := fmt.Sprintf("%d options, %d cases", size.options, size.cases)
		b.Run(name+"/text", func(b *testing.B) {
			for b.Loop() {
				if err := Comparison(c).Text(io.Discard); err != nil {
					b.Fatal(err)
				}
			}
		})
		b.Run(name+"/markdown", func(b *testing.B) {
			for b.Loop() {
				if err := Comparison(c).Markdown(io.Discard); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
