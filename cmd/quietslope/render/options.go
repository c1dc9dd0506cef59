package render

import (
	"strings"

	"quietslope/scenario/result"
)

func (v *view) options() {
	if len(v.c.Cases) == 0 {
		return
	}
	v.heading("Options")
	for _, o := range v.c.Cases[0].Options {
		text := o.Name
		if o.Baseline {
			text += " (the baseline)"
		}
		if o.Minimum {
			text += " (the minimum)"
		}
		if len(o.Measures) > 0 {
			text += ": " + strings.Join(o.Measures, "; ")
		}
		if refs := v.notes.refs(nil, o.Name, ""); refs != "" {
			text += " [" + noun(refs) + "]"
		}
		v.item(lettered, v.letters[o.Name], text)
	}
	if text := acting(&v.c.Cases[0]); text != "" {
		v.para("%s", text)
	}
}

func (v *view) bands() {
	v.heading("Bands of the deep level")
	bandTable(&v.Page, v.c.Bands, func(name string) string { return v.notes.refs(nil, "", name) })
	if v.c.Settings.DecideOn != "" && len(v.letters) > 1 {
		v.para("The options are ranked on \"%s\" by %s.", v.c.Settings.DecideOn, measureOf(v.c.Settings.DecideBy).name)
	}
}

// bandTable gives every band in every datum that is known. refs gives the notes about a band; nil for none.
func bandTable(p *Page, bands []result.Band, refs func(string) string) {
	head := [][]string{
		{"given as", "above base", "below", "site", "closes at", "within the"},
		{"", "of deep, m", "ground, m", "datum, m", "or below, m", "readings"},
	}
	t := table{first: "band", head: head, left: []bool{true, false, false, false, false, true}}
	if refs != nil {
		t.head[0], t.head[1], t.left = append(t.head[0], ""), append(t.head[1], "notes"), append(t.left, true)
	}
	safety := false
	for _, b := range bands {
		elevation, within, until := "–", "not known", "–"
		if b.ElevationM != nil {
			elevation = metres(*b.ElevationM)
		}
		if b.WithinReadings != nil {
			within = map[bool]string{true: "yes", false: "no"}[*b.WithinReadings]
		}
		if b.UntilM != b.LevelM {
			until = metres(b.UntilM)
		}
		given := words(b.GivenAs)
		if b.FactorOfSafety != nil {
			given, safety = "safety "+typed(*b.FactorOfSafety, 6), true
		}
		row := []string{given, metres(b.LevelM), metres(b.BelowGroundM), elevation, until, within}
		if refs != nil {
			row = append(row, refs(b.Name))
		}
		t.labels, t.rows = append(t.labels, label{name: b.Name}), append(t.rows, row)
	}
	p.table(t)
	if safety {
		p.para("Safety: the band begins where the level brings the slope to this factor of safety.")
	}
}
