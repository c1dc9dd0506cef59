package render

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"time"

	"quietslope/scenario/result"
)

// months writes when in the year the deciding band is passed.
func (v *view) months(c *result.Case) {
	band := v.deciding()
	if band < 0 && len(v.c.Bands) == 1 {
		band = 0
	}
	if band < 0 || v.nothingPassed(c, band) {
		return
	}
	v.section(c, "Days above %s by month, mean per year", v.c.Bands[band].Name)
	var head []string
	for m := time.January; m <= time.December; m++ {
		head = append(head, m.String()[:3])
	}
	t := table{head: [][]string{head}}
	options := pointers(c)
	for _, o := range options {
		var row []string
		for _, d := range o.Bands[band].DaysByMonth {
			row = append(row, monthly(d))
		}
		t.rows = append(t.rows, row)
	}
	v.rows(t, options)
}

// monthly prints the mean days of a month.
func monthly(d float64) string {
	switch {
	case d == 0:
		return "."
	case d < 0.05:
		return "<0.1"
	case d < 9.95:
		return strconv.FormatFloat(d, 'f', 1, 64)
	}
	return strconv.FormatFloat(d, 'f', 0, 64)
}

// levels writes the summary of the deep levels.
func (v *view) levels(c *result.Case) {
	v.section(c, "Deep level at the ends of the counted steps, m above the base of the deep layer")
	t := table{head: [][]string{
		{"", "", "", "", "", "recharge", "actual ET"},
		{"mean", "median", "95 %", "99 %", "highest", "mm a year", "mm a year"},
	}}
	options := pointers(c)
	for _, o := range options {
		l := &o.Level
		et := ""
		if o.ActualETMMPerYear != nil {
			et = depth(*o.ActualETMMPerYear)
		}
		t.rows = append(t.rows, []string{centimetres(l.MeanM), centimetres(l.Q50M), centimetres(l.Q95M),
			centimetres(l.Q99M), centimetres(l.MaxM), depth(o.RechargeMMPerYear), et})
	}
	t = t.dropEmpty()
	v.rows(t, options)
	text := "95 %, 99 %: the level that is not exceeded on that share of the steps."
	if slices.Contains(t.head[0], "actual ET") {
		text += " ET: evapotranspiration."
	}
	v.para("%s", text)
}

// drains writes what every drain carried.
func (v *view) drains(c *result.Case) {
	var options []*result.Option
	var drains []*result.Drain
	var rates, ceilings, means, peaks, flows column
	for _, o := range pointers(c) {
		for i := range o.Drains {
			d := &o.Drains[i]
			options, drains = append(options, o), append(drains, d)
			ceiling, flow := "", ""
			if d.CeilingMMPerDay != nil {
				ceiling = rate(*d.CeilingMMPerDay)
			}
			if d.PeakLPerS != nil {
				flow = flowing(*d.PeakLPerS)
			}
			rates.add(rate(d.RatePerDay), "")
			ceilings.add(ceiling, "")
			means.add(flowing(d.MeanMMPerDay), "")
			peaks.add(flowing(d.PeakMMPerDay), "")
			flows.add(flow, "")
		}
	}
	if len(drains) == 0 {
		return
	}
	t := table{
		head: [][]string{
			{"", "", "rate", "invert", "ceiling", "", "mean", "peak", "peak"},
			{"drain", "layer", "/d", "m", "mm/d", "runs", "mm/d", "mm/d", "L/s"},
		},
		left: []bool{true, true, true, false, true, false, true, true, true},
	}
	cells := sideBySide(rates, ceilings, means, peaks, flows)
	for i, d := range drains {
		of := cells[i]
		t.rows = append(t.rows, []string{words(d.Measure), d.Layer, of[0], centimetres(d.InvertM),
			of[1], percent(d.RunningShare), of[2], of[3], of[4]})
	}
	v.section(c, "Drains over the counted years")
	v.rows(t.dropEmpty(), options)
	text := "Runs: share of steps that end with water above the invert, which is given above the base of the drain's layer. Flows are spread over the plan area."
	if of := byQuadraticLaw(c); of != nil {
		text += fmt.Sprintf(" The trenches of %s follow the quadratic law; its linear part has the rate given.", someByLetter(of))
	}
	v.para("%s", text)
}

// balance writes the water balance, one line per option.
func (v *view) balance(c *result.Case) {
	years := recordYears(&v.c.Record)
	v.section(c, "Water balance of the whole record, mm a year")
	type part struct {
		store, name string
		of          func(*result.Balance) float64
	}
	parts := []part{
		{"cover:", "net in", func(b *result.Balance) float64 { return b.Cover.InMM }},
		{"cover:", "seepage", func(b *result.Balance) float64 { return b.Cover.SeepageMM }},
		{"cover:", "to clay", func(b *result.Balance) float64 { return b.Cover.PercolationMM }},
		{"cover:", "drains", func(b *result.Balance) float64 { return b.Cover.DrainsMM }},
		{"cover:", "overflow", func(b *result.Balance) float64 { return b.Cover.OverflowMM }},
		{"cover:", "unmet", func(b *result.Balance) float64 { return b.Cover.UnmetMM }},
		{"cover:", "stored", func(b *result.Balance) float64 { return b.Cover.StorageChangeMM }},
		{"deep:", "in", func(b *result.Balance) float64 { return b.Deep.InMM }},
		{"deep:", "lateral", func(b *result.Balance) float64 { return b.Deep.LateralMM }},
		{"deep:", "seepage", func(b *result.Balance) float64 { return b.Deep.SeepageMM }},
		{"deep:", "drains", func(b *result.Balance) float64 { return b.Deep.DrainsMM }},
		{"deep:", "refused", func(b *result.Balance) float64 { return b.Deep.RefusedMM }},
		{"deep:", "stored", func(b *result.Balance) float64 { return b.Deep.StorageChangeMM }},
	}
	optional := []string{"drains", "overflow", "unmet", "lateral", "refused"}
	t := table{head: [][]string{nil}, cut: true}
	var shown []part
	for _, q := range parts {
		zero := !slices.ContainsFunc(c.Options, func(o result.Option) bool { return q.of(&o.WaterBalance) != 0 })
		if zero && slices.Contains(optional, q.name) {
			continue
		}
		shown = append(shown, q)
		t.groups, t.head[0] = append(t.groups, q.store), append(t.head[0], q.name)
	}
	options := pointers(c)
	worst := 0.0
	for _, o := range options {
		var row []string
		for _, q := range shown {
			row = append(row, depth(q.of(&o.WaterBalance)/years))
		}
		t.rows = append(t.rows, row)
		worst = max(worst, math.Abs(o.WaterBalance.Cover.ErrorMM), math.Abs(o.WaterBalance.Deep.ErrorMM))
	}
	v.rows(t, options)
	leaves := "it is what leaves and what is stored"
	if slices.ContainsFunc(shown, func(q part) bool { return q.name == "unmet" }) {
		leaves = "together with the demand that the cover could not meet (unmet) it is what leaves and what is stored"
	}
	v.para("Net in: infiltration less evapotranspiration; %s. Columns that are zero for every option are left out. The balance is over the whole record, the recharge above over the counted years only. It closes to %s mm.", leaves, closure(worst))
}

// recordYears is the length of the whole record in years of 365.25 d.
func recordYears(r *result.Record) float64 {
	const perYear = 365.25
	counted := perYear * float64(r.YearsCounted)
	if len(r.CountedFrom) >= len("2006-01") {
		if from, err := time.Parse("2006-01", r.CountedFrom[:len("2006-01")]); err == nil {
			counted = float64(from.AddDate(r.YearsCounted, 0, 0).Unix()-from.Unix()) / 86400
		}
	}
	return (counted + r.PartialDays) / perYear
}

// closure prints the error of a balance; what is left by rounding in floating point is not worth its digits.
func closure(mm float64) string {
	if mm < 1e-6 {
		return "less than 0.000001"
	}
	return significant(mm, 1)
}
