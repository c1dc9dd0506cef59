// Package render turns results into what people and programs read: text for a terminal or a report, JSON, CSV.
//
// The text is laid out for 100 columns, uses no colour, and gives no figure more digits than its range supports.
// The package reads no files and knows no flags.
package render

import (
	"fmt"
	"io"
	"math"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"time"

	"quietslope/scenario"
	"quietslope/scenario/result"
	"quietslope/stats"
)

// Comparison writes the result of compare as text.
func Comparison(w io.Writer, c *result.Comparison) error {
	v := &view{c: c, notes: newNotes(c.Warnings), letters: map[string]string{}}
	if len(c.Cases) > 0 {
		for i, o := range c.Cases[0].Options {
			v.letters[o.Name] = letter(i)
			if o.Baseline {
				v.baseline = letter(i)
			}
		}
	}
	v.title()
	v.inShort()
	v.counted()
	v.options()
	v.bands()
	for i := range c.Cases {
		v.oneCase(&c.Cases[i])
	}
	v.warnings()
	v.settings()
	cautions(&v.page, c.Cautions)
	_, err := w.Write(v.page.Bytes())
	return err
}

// view lays out one comparison.
type view struct {
	page
	c        *result.Comparison
	notes    notes
	letters  map[string]string // of the options, by name
	baseline string            // its letter
}

// letter names the i-th option in tables: A to Z, then AA, AB and so on.
func letter(i int) string {
	if i < 26 {
		return string(rune('A' + i))
	}
	return letter(i/26-1) + letter(i%26)
}

// label is the first cell of an option's row, in at most width columns.
func (v *view) label(name string, width int) string { return keyed(v.letters[name], name, width) }

// keyed joins an option's letter and its name, which is shortened where there is no room for it.
func keyed(key, name string, width int) string {
	if room := width - len(key) - 2; room >= 5 {
		return key + "  " + shorten(clean(name), room)
	}
	return key
}

func (v *view) title() { title(&v.page, &v.c.Head) }

func title(p *page, h *result.Head) {
	p.para("%s", h.Study)
	p.para("%s %s %s", h.Tool.Name, h.Tool.Version, h.Command)
}

// inShort says in a few lines what the tables say on the deciding band, without a judgement of its own.
func (v *view) inShort() {
	band := v.deciding()
	if band < 0 || len(v.c.Cases) == 0 {
		return
	}
	c := &v.c.Cases[0]
	name, T := v.c.Bands[band].Name, v.c.Record.YearsCounted
	by := measureOf(v.c.Settings.DecideBy)
	v.heading("In short")
	for i, n := range v.notes {
		if n.first.Code == "implausible_weather" || n.first.Code == "record_short" && T < veryFewYears {
			v.para("Check first: %s (note %d)", n.first.Text, i+1)
		}
	}
	if v.nothingPassed(c, band) {
		base := baselineOf(c)
		v.para("No option passes %s in %s, so this record cannot compare them on it. The highest deep level of %s is %s m, the band begins at %s m. Check the band, or decide on a lower one.",
			name, plural(T, "year"), v.letters[base.Name], centimetres(base.Level.MaxM), metres(v.c.Bands[band].LevelM))
		v.para("%s.", v.notes.headline())
		return
	}
	var none, worse, same []string
	for _, o := range pointers(c) {
		f := &o.Bands[band]
		switch {
		case o.Baseline && notPassed(f):
			v.para("%s, the baseline, does not pass %s in %s.", v.letters[o.Name], name, plural(T, "year"))
		case o.Baseline:
			days, limits := ranged(f.DaysPerYear, f.DaysPerYearCI, leastDays)
			v.para("%s, the baseline, passes %s in %.0f of %s, on %s days a year.", v.letters[o.Name], name,
				math.Round(f.AnnualProbability*float64(T)), plural(T, "year"), strings.TrimSpace(days+" "+limits))
		case notPassed(f):
			none = append(none, v.letters[o.Name])
		}
		switch {
		case f.Change == nil:
		case !f.Change.ToldApart:
			same = append(same, v.letters[o.Name])
		case by.change(f.Change).Difference > 0:
			worse = append(worse, v.letters[o.Name])
		}
	}
	if len(none) > 0 {
		v.para("With %s the record holds no event, which does not mean that none can come.", strings.Join(none, ", "))
	}
	if len(c.Options) > 1 {
		text := fmt.Sprintf("From the least by %s: %s.", by.name, v.order(c, v.figuresBy(c, band, by)))
		if len(worse) > 0 {
			text += fmt.Sprintf(" Worse than %s: %s.", v.baseline, strings.Join(worse, ", "))
		}
		if len(same) > 0 {
			text += fmt.Sprintf(" Not told apart from %s on this record: %s.", v.baseline, strings.Join(same, ", "))
		}
		if refs := v.notes.numbersOf("order_not_told_apart"); refs != "" {
			text += fmt.Sprintf(" Some neighbours in this order are not told apart from each other: see %s.", noun(refs))
		}
		v.para("%s", text)
	}
	if len(v.notes) > 0 {
		v.para("%s. What is weak about these figures stands there.", v.notes.headline())
	}
}

// deciding is the index of the band that ranks the options, -1 for none.
func (v *view) deciding() int {
	return slices.IndexFunc(v.c.Bands, func(b result.Band) bool { return b.Name == v.c.Settings.DecideOn })
}

// nothingPassed reports whether no option of a case passes a band.
func (v *view) nothingPassed(c *result.Case, band int) bool {
	return !slices.ContainsFunc(c.Options, func(o result.Option) bool { return !notPassed(&o.Bands[band]) })
}

func baselineOf(c *result.Case) *result.Option {
	for i := range c.Options {
		if c.Options[i].Baseline {
			return &c.Options[i]
		}
	}
	return &c.Options[0]
}

// figuresBy are the options' figures on a band by one measure, in the order of the case.
func (v *view) figuresBy(c *result.Case, band int, m *measure) []float64 {
	xs := make([]float64, len(c.Options))
	for i := range c.Options {
		xs[i] = m.figure(&c.Options[i].Bands[band])
	}
	return xs
}

// confidence is the level of the ranges, such as 90 %.
func (v *view) confidence() string { return share(v.c.Settings.Confidence) }

// share prints a share that a person chose.
func share(x float64) string { return strconv.FormatFloat(100*x, 'g', 6, 64) + " %" }

func (v *view) counted() {
	r, s := &v.c.Record, &v.c.Settings
	v.heading("What was counted")
	v.field("years", "%s", yearsText(r, s.YearStarts))
	recordFields(&v.page, r)
	if len(v.c.Cases) == 1 {
		v.field("case", "weather %s, works %s", v.c.Cases[0].Climate, v.c.Cases[0].Condition)
	}
	events := "one event is a run of steps above a band's level"
	if s.ApartDays > 0 {
		events += fmt.Sprintf("; runs %s d or less apart are one event", days(s.ApartDays))
	}
	v.field("events", "%s. Load is the height above the level times the days spent there; peak is the greatest height above it; longest is the days above in the longest event, pauses not counted.", events)
	v.field("ranges", "%s", v.rangesText())
	if v.c.Settings.DecideOn == "" && len(v.notes) > 0 {
		v.field("notes", "%s.", v.notes.headline())
	}
}

// yearsText says which years were counted.
func yearsText(r *result.Record, starts string) string {
	counted := plural(r.YearsCounted, "complete calendar year")
	if last := monthBefore(starts); last != "" && starts != "January" {
		counted = fmt.Sprintf("%s from %s to %s", plural(r.YearsCounted, "complete year"), starts, last)
	}
	text := fmt.Sprintf("%s, %s to %s", counted, r.CountedFrom, r.CountedTo)
	if r.PartialDays > 0 {
		text += fmt.Sprintf("; %s d at the ends are replayed, not counted", days(r.PartialDays))
	}
	return text
}

// monthBefore is the English name of the month before the one named; "" when there is no such month.
func monthBefore(name string) string {
	for m := time.January; m <= time.December; m++ {
		if m.String() == name {
			return ((m+10)%12 + 1).String()
		}
	}
	return ""
}

// recordFields describes the record.
func recordFields(p *page, r *result.Record) {
	gaps := "no gaps filled"
	if r.GapsFilled > 0 {
		gaps = fmt.Sprintf("%d gaps filled", r.GapsFilled)
	}
	p.field("record", "%s to %s, %s of %s (time names the %s of a step), %s",
		r.From, r.To, plural(r.Rows, "step"), r.Step, r.Stamp, gaps)
	water := fmt.Sprintf("rain %.0f mm a year in the counted years", r.RainMMPerYear)
	if r.PETMMPerYear != nil {
		water += fmt.Sprintf(", potential evapotranspiration %.0f", *r.PETMMPerYear)
	}
	p.field("weather", "%s", water)
	warm := "none"
	if r.WarmUpYears > 0 {
		warm = plural(r.WarmUpYears, "year") + " replayed before the record"
	}
	p.field("warm-up", "%s", warm)
}

// Numbers of counted years below which resampled ranges are known to be too narrow, and below which they mean little.
// The coverage that is printed was found by simulation: see stats.Resamples.Interval.
const (
	fewYears     = 60
	veryFewYears = 10
)

func (v *view) rangesText() string {
	text := fmt.Sprintf("in brackets, at %s: events exact Poisson, years with exact binomial, days, load and changes by resampling whole years",
		v.confidence())
	switch n := v.c.Record.YearsCounted; {
	case n == 1:
		text += ". One year gives no resampled range"
	case n < veryFewYears:
		text += ". Resampled ranges from so few years mean little"
	case n < fewYears:
		text += ". Resampled ranges from few years are too narrow: at 90 % they cover about 74 to 86 % with 20 years and 80 to 88 % with 40, and less where a few years hold most of it"
	}
	return text + ". They hold what the record's years say, not the doubt in the ground's numbers."
}

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
		if len(o.Measures) > 0 {
			text += ": " + strings.Join(o.Measures, "; ")
		}
		if refs := v.notes.refs(nil, o.Name, ""); refs != "" {
			text += "  [" + noun(refs) + "]"
		}
		v.hang("  "+v.letters[o.Name], 5, text)
	}
}

// noun names one or several notes.
func noun(refs string) string {
	if strings.ContainsAny(refs, ",–") {
		return "notes " + refs
	}
	return "note " + refs
}

// words turns a key into words.
func words(key string) string { return strings.ReplaceAll(key, "_", " ") }

func (v *view) bands() {
	v.heading("Bands of the deep level")
	bandTable(&v.page, v.c.Bands, func(name string) string { return v.notes.refs(nil, "", name) })
	if v.c.Settings.DecideOn != "" && len(v.letters) > 1 {
		v.para("The options are ranked on %q by %s.", v.c.Settings.DecideOn, measureOf(v.c.Settings.DecideBy).name)
	}
}

// bandTable gives every band in every datum that is known. refs gives the notes about a band; nil for none.
func bandTable(p *page, bands []result.Band, refs func(string) string) {
	head := [][]string{
		{"", "given as", "above base", "below", "site", "closes at", "within the"},
		{"band", "", "of deep, m", "ground, m", "datum, m", "or below, m", "readings"},
	}
	t := table{head: head, left: []bool{true, true, false, false, false, false, true}}
	if refs != nil {
		t.head[0], t.head[1], t.left = append(t.head[0], ""), append(t.head[1], "notes"), append(t.left, true)
	}
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
		row := []string{"", words(b.GivenAs), metres(b.LevelM), metres(b.BelowGroundM), elevation, until, within}
		if refs != nil {
			row = append(row, refs(b.Name))
		}
		t.rows = append(t.rows, row)
	}
	t.label = func(i, width int) string { return shorten(clean(bands[i].Name), width) }
	for i := range t.rows {
		t.rows[i][0] = clean(bands[i].Name)
	}
	p.table(t)
}

// oneCase writes all that belongs to one climate and one condition.
func (v *view) oneCase(c *result.Case) {
	if len(v.c.Cases) > 1 {
		v.heading("Case: weather %s, works %s", c.Climate, c.Condition)
	}
	for i := range v.c.Bands {
		v.exceedance(c, i)
	}
	v.change(c)
	v.months(c)
	v.levels(c)
	v.drains(c)
	v.balance(c)
}

// rows fills a table with one row per option, in the given order, and writes it.
func (v *view) rows(t table, options []*result.Option) {
	for i := range t.rows {
		t.rows[i][0] = v.letters[options[i].Name] + "  " + clean(options[i].Name)
	}
	t.label = func(i, width int) string { return v.label(options[i].Name, width) }
	v.table(t)
}

func pointers(c *result.Case) []*result.Option {
	all := make([]*result.Option, len(c.Options))
	for i := range c.Options {
		all[i] = &c.Options[i]
	}
	return all
}

// Powers of ten below which the tables of the bands tell nothing: no slope is judged by a thousandth of an event, a
// hundredth of a day or a centimetre for a day.
const (
	leastEvents = -3
	leastDays   = -2
	leastLoad   = -2
)

// exceedance writes the table of one band: how often, how long and by how much.
func (v *view) exceedance(c *result.Case, band int) {
	b := &v.c.Bands[band]
	v.heading("%s: deep level above %s m", b.Name, metres(b.LevelM))
	T := v.c.Record.YearsCounted
	options := pointers(c)
	if v.nothingPassed(c, band) {
		text := fmt.Sprintf("No option passes it in %s, which does not mean that none can", plural(T, "year"))
		if refs := v.notes.refs(c, options[0].Name, b.Name); refs != "" {
			text += ": see " + noun(refs)
		}
		v.para("%s.", text)
		return
	}
	var events, load, lasting, with column
	var refs []string
	t := table{
		head: [][]string{
			{"", "events", "days", "load", fmt.Sprintf("years of %d", T), "longest", "peak"},
			{"option", "per year", "per year", "m·d per year", "(chance, %)", "d", "+m"},
		},
		left: []bool{true, true, true, true, true, false, false},
	}
	for _, o := range options {
		f := &o.Bands[band]
		value, limits := ranged(f.EventsPerYear, &f.EventsPerYearCI, leastEvents)
		uncounted := v.notes.has("events_peak_outside", o.Name, b.Name)
		if uncounted || v.notes.has("few_events", o.Name, b.Name) {
			value = "–" // too few for a rate
		}
		if uncounted {
			limits = ""
		}
		events.add(value, limits)
		lasting.add(ranged(f.DaysPerYear, f.DaysPerYearCI, leastDays))
		load.add(ranged(f.LoadMDaysPerYear, f.LoadMDaysPerYearCI, leastLoad))
		with.add(strconv.Itoa(int(math.Round(f.AnnualProbability*float64(T)))), percentRange(f.AnnualProbability, f.AnnualProbabilityCI))
		if r := v.notes.refs(c, o.Name, b.Name); r != "" {
			refs = append(refs, v.letters[o.Name]+" "+r)
		}
	}
	for i, o := range options {
		f := &o.Bands[band]
		peak, longest := "–", days(f.LongestDays)
		if f.PeakExcessM != nil {
			peak = centimetres(*f.PeakExcessM)
		}
		if f.Events == 0 && f.DaysPerYear > 0 {
			longest = "–"
		}
		t.rows = append(t.rows, []string{"", events.cells()[i], lasting.cells()[i], load.cells()[i], with.cells()[i], longest, peak})
	}
	v.rows(t, options)
	if len(refs) > 0 {
		v.para("See the notes: %s.", strings.Join(refs, "; "))
	}
	v.toldApart(options, band)
	for _, o := range options {
		if o.Baseline && len(o.Bands[band].Spells) > 0 {
			v.spells(o, o.Bands[band].Spells)
		}
	}
}

// notPassed reports whether a band is not passed at all in the years counted.
func notPassed(f *result.BandFigure) bool { return f.Events == 0 && f.DaysPerYear == 0 }

// spells lists when the baseline passed the deciding band, to be held against what is known of the slope.
func (v *view) spells(o *result.Option, spells []result.Spell) {
	const most = 12
	var parts []string
	for i, s := range spells {
		if i == most {
			parts = append(parts, plural(len(spells)-most, "more event"))
			break
		}
		from, to := s.From, s.To
		if from == v.c.Record.From {
			from = "before " + from
		}
		if to == v.c.Record.To {
			to = "after " + to
		}
		parts = append(parts, fmt.Sprintf("%s to %s (+%s)", from, to, centimetres(s.PeakExcessM)))
	}
	v.para("%s passed it: %s. Hold these times against what is known of the slope's movement.", v.letters[o.Name], strings.Join(parts, ", "))
}

// percentRange prints a range of shares as percentages.
func percentRange(p float64, ci result.Interval) string {
	_, lo, hi := figures(100*p, 100*ci[0], 100*ci[1], 0)
	return "(" + between(lo, hi) + ")"
}

// dropEmpty leaves out the columns whose cells are all empty.
func (t table) dropEmpty() table {
	var keep []int
	for c := range t.head[0] {
		if c == 0 || slices.ContainsFunc(t.rows, func(r []string) bool { return r[c] != "" }) {
			keep = append(keep, c)
		}
	}
	pick := func(row []string) []string {
		out := make([]string, len(keep))
		for i, c := range keep {
			out[i] = row[c]
		}
		return out
	}
	out := table{label: t.label}
	for _, r := range t.head {
		out.head = append(out.head, pick(r))
	}
	for _, r := range t.rows {
		out.rows = append(out.rows, pick(r))
	}
	if t.left != nil {
		out.left = make([]bool, len(keep))
		for i, c := range keep {
			out.left[i] = t.left[c]
		}
	}
	return out
}

// toldApart says which options have less or more than the baseline on one band, beyond the record's chance.
func (v *view) toldApart(options []*result.Option, band int) {
	by := measureOf(v.c.Settings.DecideBy)
	var less, more, no []string
	for _, o := range options {
		switch ch := o.Bands[band].Change; {
		case ch == nil:
		case !ch.ToldApart:
			no = append(no, v.letters[o.Name])
		case by.change(ch).Difference > 0:
			more = append(more, v.letters[o.Name])
		default:
			less = append(less, v.letters[o.Name])
		}
	}
	var parts []string
	for _, part := range []struct {
		what    string
		letters []string
	}{{"less", less}, {"more", more}, {"not told apart on this record", no}} {
		if len(part.letters) > 0 {
			parts = append(parts, part.what+": "+strings.Join(part.letters, ", "))
		}
	}
	if len(parts) > 0 {
		v.para("Against %s by %s: %s.", v.baseline, by.name, strings.Join(parts, "; "))
	}
}

// against says in a cell how an option stands against the baseline.
func against(d *result.Difference, apart bool) string {
	switch {
	case !apart:
		return "not told apart"
	case d.Difference > 0:
		return "more"
	}
	return "less"
}

// measure is one of the figures that options can be ranked by.
type measure struct {
	key, name, unit string
	scale           float64
	figure          func(*result.BandFigure) float64
	change          func(*result.Change) *result.Difference
}

var measures = []measure{
	{"load", "load", "m·d per year", 1,
		func(f *result.BandFigure) float64 { return f.LoadMDaysPerYear },
		func(c *result.Change) *result.Difference { return &c.LoadMDaysPerYear }},
	{"days", "days", "days per year", 1,
		func(f *result.BandFigure) float64 { return f.DaysPerYear },
		func(c *result.Change) *result.Difference { return &c.DaysPerYear }},
	{"events", "events", "events per year", 1,
		func(f *result.BandFigure) float64 { return f.EventsPerYear },
		func(c *result.Change) *result.Difference { return &c.EventsPerYear }},
	{"annual_probability", "share of years", "% of years", 100,
		func(f *result.BandFigure) float64 { return f.AnnualProbability },
		func(c *result.Change) *result.Difference { return &c.AnnualProbability }},
}

// measureOf finds a measure by its key; the first for a key that is not known.
func measureOf(key string) *measure {
	for i := range measures {
		if measures[i].key == key {
			return &measures[i]
		}
	}
	return &measures[0]
}

// change writes the ranking on the deciding band and the change against the baseline.
func (v *view) change(c *result.Case) {
	band := v.deciding()
	if band < 0 || len(c.Options) < 2 || v.nothingPassed(c, band) {
		return
	}
	by := measureOf(v.c.Settings.DecideBy)
	options := pointers(c)
	slices.SortStableFunc(options, func(a, b *result.Option) int { return rank(a) - rank(b) })

	v.heading("Ranking on %s by %s, and the change against %s", v.c.Bands[band].Name, by.name, v.baseline)
	t := table{
		head: [][]string{
			{"", "", "change", "ratio to", "better", "years", ""},
			{"option", "rank", by.unit, v.baseline, "(same)", "b/s/w", "against " + v.baseline},
		},
		left: []bool{true, false, true, true, true, true, true},
	}
	var diff, ratio column
	for _, o := range options {
		ch := o.Bands[band].Change
		if ch == nil {
			diff.add("", "")
			ratio.add("", "")
			continue
		}
		d := by.change(ch)
		diff.add(ranged(by.scale*d.Difference, scaled(d.DifferenceCI, by.scale), tiny))
		if d.Ratio == nil {
			ratio.add("–", "")
		} else {
			ratio.add(ranged(*d.Ratio, d.RatioCI, -2))
		}
	}
	for i, o := range options {
		rank := "–"
		if o.Decision != nil {
			rank = strconv.Itoa(o.Decision.Rank)
		}
		row := []string{"", rank, diff.cells()[i], ratio.cells()[i], "", "", "baseline"}
		if ch := o.Bands[band].Change; ch != nil {
			d := by.change(ch)
			row[4] = percent(d.ShareBetter)
			if d.DifferenceCI == nil && d.ShareEqual < 1 { // too few years to resample
				row[4] = "–"
			} else if d.ShareEqual >= 0.005 {
				row[4] += " (" + percent(d.ShareEqual) + ")"
			}
			row[5] = fmt.Sprintf("%d/%d/%d", d.YearsBetter, d.YearsEqual, d.YearsWorse)
			row[6] = against(d, ch.ToldApart)
		}
		t.rows = append(t.rows, row)
	}
	v.rows(t, options)
	v.para("A change below zero is an improvement. Better (same): share of the resamples. b/s/w: years better, same, worse. Less and more are said where the two can be told apart: the range of the change leaves out zero and the years better and worse are too uneven "+
		"for chance (sign test at %s). It says that there is a change, not that it is large enough to matter. Ranks follow the figures alone. To see the change between two works, mark one of them baseline: true in the study.", v.confidence())

	v.otherChanges(options, band, by)
	v.orders(c, band, by)
}

// otherChanges writes the change in the measures that do not rank.
func (v *view) otherChanges(options []*result.Option, band int, by *measure) {
	v.gap()
	head := [][]string{{"change against " + v.baseline}, {"option"}}
	var cols []column
	for i := range measures {
		m := &measures[i]
		if m == by {
			continue
		}
		var col column
		for _, o := range options {
			if ch := o.Bands[band].Change; ch == nil {
				col.add("", "")
			} else {
				d := m.change(ch)
				col.add(ranged(m.scale*d.Difference, scaled(d.DifferenceCI, m.scale), tiny))
			}
		}
		unit := m.unit
		if m.scale == 100 {
			unit = "percentage points"
		}
		head[0], head[1] = append(head[0], m.name), append(head[1], unit)
		cols = append(cols, col)
	}
	t := table{head: head, left: []bool{true, true, true, true}}
	for i, o := range options {
		row := []string{""}
		for _, col := range cols {
			row = append(row, col.cells()[i])
		}
		if o.Bands[band].Change == nil {
			row[1] = "baseline"
		}
		t.rows = append(t.rows, row)
	}
	v.rows(t, options)
}

func scaled(ci *result.Interval, by float64) *result.Interval {
	if ci == nil {
		return nil
	}
	return &result.Interval{by * ci[0], by * ci[1]}
}

func rank(o *result.Option) int {
	if o.Decision == nil {
		return math.MaxInt
	}
	return o.Decision.Rank
}

// orders says whether the measures put the options in the same order on a band.
func (v *view) orders(c *result.Case, band int, by *measure) {
	figures := func(m *measure) []float64 { return v.figuresBy(c, band, m) }
	base := figures(by)
	var against []*measure
	for i := range measures {
		if m := &measures[i]; m != by && disagree(base, figures(m)) {
			against = append(against, m)
		}
	}
	v.gap()
	if len(against) == 0 {
		v.para("By no other measure do two options change places, though some may be equal.")
		return
	}
	var names []string
	for _, m := range against {
		names = append(names, m.name)
	}
	v.para("The measures disagree on the order of the options: %s against %s. From the least:", strings.Join(names, " and "), by.name)
	for _, m := range append([]*measure{by}, against...) {
		v.hang("  by "+m.name, 16, v.order(c, figures(m)))
	}
	if slices.ContainsFunc(against, func(m *measure) bool { return m.key == "events" }) || by.key == "events" {
		v.para("A drain can split one long event into several, so that the count rises while days and load fall: read the count with them.")
	}
}

// disagree reports whether some pair of options stands in opposite orders by the two figures.
func disagree(a, b []float64) bool {
	for i := range a {
		for j := range a {
			if stats.Less(a[i], a[j]) && stats.Less(b[j], b[i]) {
				return true
			}
		}
	}
	return false
}

// order lists the options by a figure, from the least, as in "C = D < A".
func (v *view) order(c *result.Case, xs []float64) string {
	index := make([]int, len(xs))
	for i := range index {
		index[i] = i
	}
	slices.SortStableFunc(index, func(a, b int) int {
		switch {
		case stats.Less(xs[a], xs[b]):
			return -1
		case stats.Less(xs[b], xs[a]):
			return 1
		}
		return 0
	})
	var b strings.Builder
	for k, i := range index {
		if k > 0 && !stats.Less(xs[index[k-1]], xs[i]) {
			b.WriteString(" = ")
		} else if k > 0 {
			b.WriteString(" < ")
		}
		b.WriteString(v.letters[c.Options[i].Name])
	}
	return b.String()
}

// months writes when in the year the deciding band is passed.
func (v *view) months(c *result.Case) {
	band := v.deciding()
	if band < 0 && len(v.c.Bands) == 1 {
		band = 0
	}
	if band < 0 || v.nothingPassed(c, band) {
		return
	}
	v.heading("Days above %s by month, mean per year", v.c.Bands[band].Name)
	head := []string{"option"}
	for m := time.January; m <= time.December; m++ {
		head = append(head, m.String()[:3])
	}
	t := table{head: [][]string{head}}
	options := pointers(c)
	for _, o := range options {
		row := []string{""}
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
	v.heading("Deep level at the ends of the counted steps, m above the base of the deep layer")
	t := table{head: [][]string{
		{"", "", "", "", "", "", "recharge", "actual ET"},
		{"option", "mean", "median", "95 %", "99 %", "highest", "mm a year", "mm a year"},
	}}
	options := pointers(c)
	for _, o := range options {
		l := &o.Level
		et := ""
		if o.ActualETMMPerYear != nil {
			et = depth(*o.ActualETMMPerYear)
		}
		t.rows = append(t.rows, []string{"", centimetres(l.MeanM), centimetres(l.Q50M), centimetres(l.Q95M),
			centimetres(l.Q99M), centimetres(l.MaxM), depth(o.RechargeMMPerYear), et})
	}
	t = t.dropEmpty()
	v.rows(t, options)
	text := "95 %, 99 %: the level that is not passed on that share of the steps."
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
				flow = significant(*d.PeakLPerS, 2)
			}
			rates.add(rate(d.RatePerDay), "")
			ceilings.add(ceiling, "")
			means.add(significant(d.MeanMMPerDay, 2), "")
			peaks.add(significant(d.PeakMMPerDay, 2), "")
			flows.add(flow, "")
		}
	}
	if len(drains) == 0 {
		return
	}
	t := table{
		head: [][]string{
			{"", "", "", "rate", "invert", "ceiling", "", "mean", "peak", "peak"},
			{"option", "drain", "layer", "/d", "m", "mm/d", "runs", "mm/d", "mm/d", "L/s"},
		},
		left: []bool{true, true, true, true, false, true, false, true, true, true},
	}
	for i, d := range drains {
		t.rows = append(t.rows, []string{"", words(d.Measure), d.Layer, rates.cells()[i], centimetres(d.InvertM),
			ceilings.cells()[i], percent(d.RunningShare), means.cells()[i], peaks.cells()[i], flows.cells()[i]})
	}
	v.heading("Drains over the counted years")
	v.rows(t.dropEmpty(), options)
	v.para("Runs: share of steps that end with water above the invert, which is given above the base of the drain's layer. Flows are spread over the plan area.")
}

// balance writes the water balance, one line per option.
func (v *view) balance(c *result.Case) {
	r := &v.c.Record
	years := r.PartialDays/365.25 + float64(r.YearsCounted)
	if r.StepDays != nil {
		years = float64(r.Rows) * *r.StepDays / 365.25
	}
	if !(years > 0) || len(c.Options) == 0 {
		return
	}
	v.heading("Water balance of the whole record, mm a year")
	type part struct {
		store, name string
		of          func(*result.Balance) float64
	}
	parts := []part{
		{"cover", "net in", func(b *result.Balance) float64 { return b.Cover.InMM }},
		{"", "seepage", func(b *result.Balance) float64 { return b.Cover.SeepageMM }},
		{"", "to clay", func(b *result.Balance) float64 { return b.Cover.PercolationMM }},
		{"", "drains", func(b *result.Balance) float64 { return b.Cover.DrainsMM }},
		{"", "overflow", func(b *result.Balance) float64 { return b.Cover.OverflowMM }},
		{"", "unmet", func(b *result.Balance) float64 { return b.Cover.UnmetMM }},
		{"", "stored", func(b *result.Balance) float64 { return b.Cover.StorageChangeMM }},
		{"deep", "in", func(b *result.Balance) float64 { return b.Deep.InMM }},
		{"", "lateral", func(b *result.Balance) float64 { return b.Deep.LateralMM }},
		{"", "seepage", func(b *result.Balance) float64 { return b.Deep.SeepageMM }},
		{"", "drains", func(b *result.Balance) float64 { return b.Deep.DrainsMM }},
		{"", "refused", func(b *result.Balance) float64 { return b.Deep.RefusedMM }},
		{"", "stored", func(b *result.Balance) float64 { return b.Deep.StorageChangeMM }},
	}
	optional := []string{"drains", "overflow", "unmet", "lateral", "refused"}
	t := table{head: [][]string{{""}, {"option"}}}
	var shown []part
	for _, q := range parts {
		zero := !slices.ContainsFunc(c.Options, func(o result.Option) bool { return q.of(&o.WaterBalance) != 0 })
		if zero && slices.Contains(optional, q.name) {
			continue
		}
		shown = append(shown, q)
		store := ""
		if q.store != "" {
			store = q.store + ":"
		}
		t.head[0], t.head[1] = append(t.head[0], store), append(t.head[1], q.name)
	}
	options := pointers(c)
	worst := 0.0
	for _, o := range options {
		row := []string{""}
		for _, q := range shown {
			row = append(row, depth(q.of(&o.WaterBalance)/years))
		}
		t.rows = append(t.rows, row)
		worst = max(worst, math.Abs(o.WaterBalance.Cover.ErrorMM), math.Abs(o.WaterBalance.Deep.ErrorMM))
	}
	v.rows(t, options)
	v.para("Net in: infiltration less evapotranspiration; net in and unmet demand together are what leaves and what is stored. Columns that are zero for every option are left out. The balance closes over the whole record to %s mm.", closure(worst))
}

// closure prints the error of a balance; what is left by rounding in floating point is not worth its digits.
func closure(mm float64) string {
	if mm < 1e-6 {
		return "less than 0.000001"
	}
	return significant(mm, 1)
}

func (v *view) warnings() {
	if len(v.notes) == 0 {
		return
	}
	v.heading("Notes")
	v.notes.write(&v.page, func(name string) string { return v.letters[name] })
}

func (v *view) settings() {
	s := &v.c.Settings
	v.heading("Settings and inputs")
	v.field("settings", "year starts in %s, events %s d apart, confidence %s, %d resamples of %s-year blocks, seed %d",
		s.YearStarts, days(s.ApartDays), v.confidence(), s.Resamples, rate(s.BlockYears), s.Seed)
	inputs(&v.page, v.c.Inputs)
	if len(v.c.Defaults) > 0 {
		v.field("defaults", "%s", strings.Join(v.merged(v.c.Defaults), "; "))
	}
	if len(v.c.Declared) > 0 {
		var parts []string
		for _, key := range scenario.DeclaredKeys {
			if answer := v.c.Declared[key]; answer != "" {
				parts = append(parts, words(key)+" "+answer)
			}
		}
		v.field("declared", "%s", strings.Join(parts, "; "))
	}
}

var indexed = regexp.MustCompile(`^([a-z_]+)\[(\d+)\]\.(.*)$`)

// merged lists keys with their values. Those that differ only in the option or band share an entry, as in
// B, C, H: trench_drains.law linear. Which option is no baseline is said with the options.
func (v *view) merged(keys []result.KeyValue) []string {
	type entry struct {
		list, rest, value string
		at                []string
	}
	var entries []entry
	for _, k := range keys {
		if strings.HasPrefix(k.Key, "declared.") || strings.HasSuffix(k.Key, "].baseline") { // said elsewhere
			continue
		}
		e := entry{rest: k.Key, value: k.Value}
		if m := indexed.FindStringSubmatch(k.Key); m != nil {
			if n, err := strconv.Atoi(m[2]); err == nil {
				e = entry{m[1], m[3], k.Value, []string{v.nameOf(m[1], n)}}
			}
		}
		same := func(o entry) bool { return e.list != "" && o.list == e.list && o.rest == e.rest && o.value == e.value }
		if i := slices.IndexFunc(entries, same); i >= 0 {
			entries[i].at = append(entries[i].at, e.at...)
		} else {
			entries = append(entries, e)
		}
	}
	var texts []string
	for _, e := range entries {
		text := e.rest + " " + e.value
		if e.list != "" {
			text = strings.Join(e.at, ", ") + ": " + text
		}
		texts = append(texts, text)
	}
	return texts
}

// nameOf is how the text calls item n of a list of the study.
func (v *view) nameOf(list string, n int) string {
	switch {
	case list == "options":
		return letter(n)
	case list == "bands" && n < len(v.c.Bands):
		return v.c.Bands[n].Name
	}
	return fmt.Sprintf("%s[%d]", list, n)
}

// shortHash is how many hex digits of a hash are enough to tell two files apart by eye.
const shortHash = 12

func inputs(p *page, in []result.Input) {
	for _, f := range in {
		p.field(f.Role, "%s (SHA-256 %s…)", f.File, f.SHA256[:min(shortHash, len(f.SHA256))])
	}
}

func cautions(p *page, texts []string) {
	if len(texts) == 0 {
		return
	}
	p.heading("Before anybody relies on this")
	for _, c := range texts {
		p.hang("  -", 4, c)
	}
}
