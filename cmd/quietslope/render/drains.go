package render

import (
	"fmt"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// byHand prints what a person works out again, with four significant digits.
func byHand(x float64) string {
	const digits = 4
	if x < 1e-3 || x >= 1e5 {
		return typed(x, digits)
	}
	return significant(x, digits)
}

// millimetres prints a length in m, to the millimetre.
func millimetres(m float64) string { return strconv.FormatFloat(m, 'f', 3, 64) }

// Drains lays out the result of drains.
func Drains(d *result.Drains) *Page {
	p := &Page{}
	if d.Study == "" {
		p.title("Parallel drains by hand formulas")
		p.para("%s %s %s", d.Tool.Name, d.Tool.Version, d.Command)
	} else {
		opening(p, &d.Head)
	}
	drainLayout(p, d)
	drainRates(p, d)
	drainOutflows(p, d)
	drainFormulas(p, d)
	all := append([]result.Warning(nil), d.Warnings...)
	for i := range all {
		all[i].Option = "" // the only one there is
	}
	if ns := newNotes(all); len(ns.list) > 0 {
		p.heading("Notes")
		ns.write(p, nil, nil)
	}
	cautions(p, d.Cautions)
	return p
}

// drainLayout says what the figures were worked out from.
func drainLayout(p *Page, d *result.Drains) {
	l := &d.Layout
	m := func(x float64) string { return typed(x, 6) + " m" }
	p.heading("Worked out from")
	if d.Option != "" {
		law := l.Law + " law"
		if l.Law == "quadratic" {
			law += ", which is Hooghoudt's equation at the head that goes with the stored water"
		}
		p.field("option", "%s, its drains as new; replayed by the %s", d.Option, law)
	}
	if len(l.NotOfOption) > 0 {
		p.field("instead", "given on the command line in place of the option's: %s", words(strings.Join(l.NotOfOption, ", ")))
	}
	inputs(p, d.Inputs)
	switch below := l.BelowDrainsM; {
	case below == nil:
		p.field("drains", "%s deep; how far the ground goes on below them is not known", m(l.DepthM))
	case l.RadiusM == nil:
		p.field("drains", "%s deep, on the impermeable base", m(l.DepthM))
	default:
		p.field("drains", "%s deep in a layer of %s, which leaves D = %s down to the impermeable base", m(l.DepthM), m(*l.ThicknessM), m(*below))
	}
	if l.RadiusM != nil {
		of := ""
		if l.WidthM != nil && l.WetM != nil {
			of = fmt.Sprintf(", of a trench %s wide that stands in %s of water", m(*l.WidthM), m(*l.WetM))
		}
		p.field("radius", "r = %s%s", m(*l.RadiusM), of)
	}
	below := " above and below the drains"
	if l.ConductivityBelowMPerDay != l.ConductivityMPerDay {
		below = fmt.Sprintf(" above the drains, Kb = %s m/d below them", typed(l.ConductivityBelowMPerDay, 6))
	}
	converted := ""
	if l.PorosityGiven != nil {
		converted = fmt.Sprintf(" (converted; given as %s)", share(*l.PorosityGiven))
	}
	p.field("ground", "K = %s m/d%s; drainable porosity μ = %s%s", typed(l.ConductivityMPerDay, 6), below, share(l.Porosity), converted)
	if l.ConsolidationM2PerYear != nil {
		p.field("clay", "coefficient of consolidation c = %s m2/y", typed(*l.ConsolidationM2PerYear, 6))
	}
	p.field("working head", "h = %s above the drains, midway between them", m(l.WorkingHeadM))
	if l.Efficiency != 1 {
		p.field("efficiency", "e = %s", share(l.Efficiency))
	}
	if l.RechargeMMPerDay != nil {
		p.field("recharge", "R = %s mm/d", typed(*l.RechargeMMPerDay, 6))
	}
}

// drainRates tabulates what follows from each spacing.
func drainRates(p *Page, d *result.Drains) {
	p.heading("Spacing by spacing")
	l := &d.Layout
	optional := func(x *float64, print func(float64) string) string {
		if x == nil {
			return ""
		}
		return print(*x)
	}
	fall := ""
	if l.FallFromM != nil && l.FallToM != nil {
		fall = typed(*l.FallFromM, 4) + "–" + typed(*l.FallToM, 4) + " m"
	}
	inForce := "in force"
	if l.EquivalentDepth == "given" {
		inForce = "as given"
	}
	effect := "effect"
	if d.Spacings[0].ClayDays != nil {
		effect = "stores"
	}
	const depth, rate, falls, after = "depth d:", "reservoir:", "falls:", "9/10 after:"
	t := table{first: "L", cut: true,
		groups: []string{depth, depth, depth, rate, rate, rate, falls, falls, after, after, "drains:"},
		head: [][]string{
			{inForce, "computed", "Moody", "a", "1/a", "half-life", "by half", fall, effect, "clay", "length"},
			{"m", "m", "m", "/d", "d", "d", "d", "d", "d", "d", "m"},
		}}
	columns := make([]column, len(t.head[0]))
	for i := range d.Spacings {
		f := &d.Spacings[i]
		t.labels = append(t.labels, label{name: typed(f.SpacingM, 6) + " m"})
		again := f.ComputedDepthM
		if l.EquivalentDepth != "given" {
			again = nil // it is the one in force
		}
		for c, text := range []string{
			millimetres(f.EquivalentDepthM), optional(again, millimetres), optional(f.MoodyDepthM, millimetres),
			byHand(f.ReactionFactorPerDay), byHand(f.ReservoirCoefficientDays), byHand(f.HalfLifeDays), byHand(f.FallsByHalfDays), optional(f.FallDays, byHand),
			optional(f.StoreDays, byHand), optional(f.ClayDays, byHand),
			optional(f.Metres, func(x float64) string { return significant(x, most) }),
		} {
			columns[c].add(text, "")
		}
	}
	t.rows = sideBySide(columns...)
	p.table(t.dropEmpty())
	text := "L spacing, d equivalent depth, a reaction factor, 1/a reservoir coefficient."
	switch {
	case d.Option == "":
		text += " 9/10 of the effect on the drained ground alone: after ln(10)/a."
	case d.Spacings[0].StoreDays != nil:
		text += " 9/10 of the effect on the deep level: through both stores, with all that drains them in the option."
	}
	if d.Spacings[0].ClayDays != nil {
		text += " The clay between the drains has its own time; the longer of the two counts."
	}
	p.para("%s", text)
	if d.Spacings[0].MoodyDepthM != nil {
		p.para("The two equivalent depths differ by design: Moody's formula follows Hooghoudt's table, and the one computed lies 1 to 6 %% below it where the base is near.")
	}
}

// drainOutflows tabulates the outflow at some heads and the steady head, by both laws.
func drainOutflows(p *Page, d *result.Drains) {
	p.heading("Outflow and steady head by both laws")
	t := table{first: "L", cut: true, head: [][]string{nil, nil}}
	add := func(group, unit string) {
		for _, law := range []string{"linear", "Hooghoudt"} {
			t.groups, t.head[0], t.head[1] = append(t.groups, group), append(t.head[0], law), append(t.head[1], unit)
		}
	}
	for _, o := range d.Spacings[0].Outflows {
		add("at "+typed(o.HeadM, 4)+" m:", "mm/d")
	}
	if r := d.Layout.RechargeMMPerDay; r != nil {
		add("under "+typed(*r, 4)+" mm/d:", "m")
	}
	columns := make([]column, len(t.groups))
	for i := range d.Spacings {
		f := &d.Spacings[i]
		t.labels = append(t.labels, label{name: typed(f.SpacingM, 6) + " m"})
		var row []string
		for _, o := range f.Outflows {
			row = append(row, byHand(o.LinearMMPerDay), byHand(o.HooghoudtMMPerDay))
		}
		if f.SteadyHeadM != nil && f.SteadyHeadLinearM != nil {
			row = append(row, millimetres(*f.SteadyHeadLinearM), millimetres(*f.SteadyHeadM))
		}
		for c, text := range row {
			columns[c].add(text, "")
		}
	}
	t.rows = sideBySide(columns...)
	p.table(t)
	p.para("The linear rate is worked out so that both laws agree at the working head; below it the linear law lets out too much, above it too little. In a true steady state the ground holds less water at the same head than the stores do, by up to 18 %%: they empty more slowly than the ground would, which is on the safe side.")
}

// drainFormulas names the formulas and where they come from.
func drainFormulas(p *Page, d *result.Drains) {
	l := &d.Layout
	p.heading("Formulas")
	e, kb := "", "K"
	if l.Efficiency != 1 {
		e = "e·"
	}
	if l.ConductivityBelowMPerDay != l.ConductivityMPerDay {
		kb = "Kb"
	}
	say := func(format string, args ...any) { p.item(plain, "", fmt.Sprintf(format, args...)) }
	if l.RadiusM != nil {
		say("equivalent depth d = (π·L/8)/(ln(L/(π·r)) + F), F = 4·Σ exp(-2nx)/(n·(1 - exp(-2nx))) over n = 1, 3, 5 ..., x = 2π·D/L (van der Molen & Wesseling 1991); and that of Moody 1966")
	}
	if l.WidthM != nil {
		say("radius r = (width + 2·wet)/π (Ernst 1962)")
	}
	say("reaction factor a = %sπ²·(%s·d + K·h/2)/(μ·L²) (De Zeeuw & Hellinga 1958; Kraijenhoff van de Leur 1958), half-life ln(2)/a", e, kb)
	say("falling water table: time = ln(1.16·from/to)/a (Glover and Dumm 1954, 1960); for two heads that are given, with their mean for h")
	say("outflow by the linear law: a·1000·μ·(8/π²)·h, by Hooghoudt 1940: 1000·%s(8·%s·d·h + 4·K·h²)/L², in mm/d; the steady head is where it is the recharge", e, kb)
	if d.Spacings[0].ClayDays != nil {
		say("clay: time = 0.85·(L/2)²/c (Terzaghi 1943)")
	}
}
