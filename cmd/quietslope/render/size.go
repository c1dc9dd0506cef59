package render

import (
	"cmp"
	"fmt"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario"
	"quietslope/scenario/result"
)

// Size lays out the result of size.
func Size(s *result.Size) *Page {
	// What is said of the record and the settings is said as for a comparison, here one without options.
	ws := slices.Clone(s.Warnings)
	for i := range ws {
		ws[i].Option, ws[i].Band = "", "" // there is but one of either
	}
	c := &result.Comparison{Head: s.Head, Settings: s.Settings, Record: s.Record}
	v := &sizeView{&view{c: c, notes: newNotes(ws), letters: map[string]string{}}, s, measureOf(s.Measure)}
	opening(&v.Page, &s.Head)
	v.inShort()
	v.sized()
	v.curve()
	v.stopped()
	v.heading("What was counted")
	v.field("years", "%s", yearsText(&s.Record, s.Settings.YearStarts))
	recordFields(&v.Page, &s.Record)
	switch s.Measure {
	case "load":
		v.field("load", "%s.", loadText)
	case "events":
		v.field("events", "%s.", eventsText(&s.Settings))
	}
	v.field("ranges", "%s", v.rangesText())
	if len(v.notes.list) > 0 {
		v.heading("Notes")
		v.notes.write(&v.Page, nil, nil)
	}
	v.settings()
	cautions(&v.Page, s.Cautions)
	return &v.Page
}

// sizeView lays out one sizing.
type sizeView struct {
	*view
	s  *result.Size
	by *measure
}

// told is a figure and its range. One that misses the target by less than the digits kept gets as many more as show it.
func (v *sizeView) told(x float64, ci *result.Interval, meets string) (value, limits string) {
	value, limits = v.by.told(x, ci)
	if meets != targetMissed || v.s.Target == nil || x <= v.s.Target.Value {
		return value, limits
	}
	number, sign := value, ""
	if v.by.scale == 100 {
		number, sign = strings.TrimSuffix(value, " %"), " %"
	}
	for digits := 2; digits <= 6; digits++ {
		if y, err := strconv.ParseFloat(number, 64); err != nil || y > v.by.scale*v.s.Target.Value {
			break
		}
		number = significant(v.by.scale*x, digits)
	}
	return number + sign, limits
}

// figure is what told says, in one.
func (v *sizeView) figure(x float64, ci *result.Interval, meets string) string {
	value, limits := v.told(x, ci, meets)
	return strings.TrimSpace(value + " " + limits)
}

// point says what the option comes to with a value.
func (v *sizeView) point(p *result.SizePoint) string {
	text := v.by.inWords(v.figure(p.Figure, p.CI, p.Meets))
	if p.Metres != nil {
		text += fmt.Sprintf(", %s m of drain", wholeMetres(*p.Metres))
	}
	if p.PresentValue != nil {
		text += ", a present value of " + v.sumText(*p.PresentValue, nil)
	}
	return text
}

// given says in what condition and state of its drains the option was sized; "" for as built and its own figures.
func (v *sizeView) given() string {
	s := v.s
	o := &result.Option{DrainsAs: s.DrainsAs, States: s.States}
	own := s.DrainsAs == "as_new" && stateOf(o, "mean_between_flushes") == nil && stateOf(o, "mean_over_horizon") == nil ||
		s.DrainsAs == "" || strings.HasPrefix(s.DrainsAs, "mean_")
	switch named := s.Condition != scenario.AsBuilt; {
	case named && own:
		return fmt.Sprintf("In the condition %s", inQuotes(s.Condition))
	case named:
		return fmt.Sprintf("In the condition %s, with %s,", inQuotes(s.Condition), ownState(o))
	case own:
		return ""
	}
	return "With " + ownState(o)
}

func wholeMetres(x float64) string { return strconv.FormatFloat(x, 'f', 0, 64) }

// inShort says in a few lines what the curve says.
func (v *sizeView) inShort() {
	s := v.s
	v.heading("In short")
	widest := "largest"
	if s.Safer == "higher" {
		widest = "smallest"
	}
	fromSafe := slices.Clone(s.Curve)
	if s.Safer == "higher" {
		slices.Reverse(fromSafe)
	}
	switch a := s.Answer; {
	case s.Target == nil:
		v.para("%s", s.Reason)
	case a == nil:
		safe := &fromSafe[0]
		v.para("The target is %s. %s With %s it is %s.", v.targetText(), s.Reason, safe.Text, v.point(safe))
	default:
		the := "The"
		if given := v.given(); given != "" {
			the = given + " the"
		}
		v.para("The target is %s. %s %s %s of %s that meets it is %s: %s.", v.targetText(), the, widest, s.Vary, inQuotes(s.Option), a.Text, v.point(a))
		v.margin(widest, fromSafe)
		if s.Reason != "" {
			v.para("%s", s.Reason)
		}
		v.stoppedShort()
		if t := s.TimeToEffect; t != nil && slices.ContainsFunc(s.Warnings, func(w result.Warning) bool { return w.Code == slowToAct }) {
			v.para("Until nine tenths of the effect are there, it takes %s; all figures are those after it.", duration(t.Days))
		}
	}
	if len(s.MeetsAgain) > 0 && s.Answer != nil {
		v.para("The curve does not fall all the way: less safe values meet the target again, and are not chosen.")
	}
	if len(v.notes.list) > 0 {
		v.para("%s, numbered under Notes. What is weak about these figures stands there.", v.notes.count())
	}
}

// margin says how far the range of the answer goes, and what the next value has.
func (v *sizeView) margin(widest string, fromSafe []result.SizePoint) {
	a, shown := v.s.Answer, v.s.Shown
	var text string
	switch {
	case a.Meets == targetMet && a.CI == nil && a.Figure == 0: // nothing passed the band in any year
		text = "No event is left in the record then, which does not mean that none can come; so the figure has no range."
	case a.Meets == targetMet:
		text = "The end of its range meets the target too."
	case shown == nil:
		text = "The end of its range does not meet the target, and nor does that of any value looked at."
	case shown.CI == nil && shown.Figure == 0:
		text = fmt.Sprintf("The end of its range does not meet the target; the %s value looked at that does is %s, with which no event is left in the record.", widest, shown.Text)
	default:
		text = fmt.Sprintf("The end of its range does not meet the target; the %s value whose range does is %s: %s.", widest, shown.Text, v.point(shown))
	}
	if v.s.Beyond == nil {
		v.para("%s", text)
		return
	}
	next := &fromSafe[slices.IndexFunc(fromSafe, func(p result.SizePoint) bool { return v.lessSafe(p.Value, a.Value) })]
	v.para("%s The answer is worked out to 0.5 %% and lies just at the target, without a margin; the next value of the curve, %s, has %s and misses it.",
		text, next.Text, v.by.inWords(v.figure(next.Figure, next.CI, next.Meets)))
}

// lessSafe reports whether the works do less with one value than with another.
func (v *sizeView) lessSafe(value, than float64) bool {
	if v.s.Safer == "higher" {
		return value < than
	}
	return value > than
}

// stoppedShort says what the answer comes to when drains stop.
func (v *sizeView) stoppedShort() {
	o := &result.Option{States: v.s.States}
	half, all := stateOf(o, "half_stopped"), stateOf(o, "all_stopped")
	if half == nil || all == nil {
		return
	}
	told := func(s *result.State) string {
		value, _ := v.told(s.Value, s.CI, s.MeetsTarget)
		return value
	}
	text := fmt.Sprintf("With every second drain stopped it is %s, with all stopped %s", told(half), v.by.inWords(told(all)))
	switch {
	case half.MeetsTarget == targetMissed && all.MeetsTarget == targetMissed:
		text += "; both miss the target"
	case all.MeetsTarget == targetMissed:
		text += ", which misses the target"
	case all.MeetsTarget == targetMet || all.MeetsTarget == targetNotShown:
		text += ": even then the figure meets the target, so that the target asks nothing of these drains"
	}
	v.para("%s.", text)
}

// sized says what was varied.
func (v *sizeView) sized() {
	s := v.s
	v.heading("What was sized")
	text := s.Option
	if len(s.Measures) > 0 {
		with := "with " + s.Curve[0].Text
		if s.Safer == "higher" {
			with = "with " + s.Curve[len(s.Curve)-1].Text
		}
		if s.Answer != nil {
			with = "with " + s.Answer.Text
		}
		text += ": " + strings.Join(s.Measures, "; ") + " (" + with + ")"
	}
	v.field("option", "%s", text)
	v.field("number", "%s from %s to %s; the works do more with %s values", s.Vary, s.Curve[0].Text, s.Curve[len(s.Curve)-1].Text, s.Safer)
	if s.DrainsAs != "" {
		v.field("drains", "%s", ownState(&result.Option{DrainsAs: s.DrainsAs}))
	}
	v.field("case", "weather as recorded, works %s", s.Condition)
}

// curve writes what the option comes to with each value, and what the answer does among them.
func (v *sizeView) curve() {
	s := v.s
	points := slices.Clone(s.Curve)
	for _, p := range []*result.SizePoint{s.Answer, s.Shown} {
		if p != nil && !slices.ContainsFunc(points, func(q result.SizePoint) bool { return q.Text == p.Text }) {
			points = append(points, *p)
		}
	}
	slices.SortStableFunc(points, func(a, b result.SizePoint) int { return cmp.Compare(a.Value, b.Value) })

	var costs sums
	for _, p := range points {
		costs.see(p.PresentValue, nil)
	}
	u := inUnit(float64(costs), 100)
	currency := ""
	if m := s.Settings.Money; m != nil {
		currency = u.name + m.Currency
	}
	sum := func(x *float64, by float64) string {
		if x == nil {
			return ""
		}
		value, _ := u.sum(*x/by, nil)
		return value
	}
	var values, metres, cost, figures, per, each column
	var meets, marks []string
	unit := ""
	for i := range points {
		p := &points[i]
		number, of, _ := strings.Cut(p.Text, " ")
		unit = of
		values.add(number, "")
		long, less, worth := "", "", ""
		if p.Metres != nil {
			long = wholeMetres(*p.Metres)
		}
		if p.Step != nil {
			if x := p.Step.LessPer100Metres; x != nil {
				less, _ = ranged(v.by.scale**x, nil, leastSum)
			}
			worth = sum(p.Step.CostPerLess, v.by.scale)
		}
		metres.add(long, "")
		cost.add(sum(p.PresentValue, 1), "")
		figures.add(v.told(p.Figure, p.CI, p.Meets))
		per.add(less, "")
		each.add(worth, "")
		meets, marks = append(meets, words(p.Meets)), append(marks, v.mark(p))
	}
	const perLength = "100 m"
	one := oneLess[s.Measure]
	figure, time := v.headOfFigure()
	t := table{
		first: words(s.Vary[strings.LastIndexByte(s.Vary, '.')+1:]),
		head: [][]string{
			{"drain", "present", figure, "meets", perLength, one, ""},
			{"m", "value", time, "target", "take off", "costs", "remark"},
		},
		left: []bool{true, true, true, true, true, true, true},
		rows: sideBySide(metres, cost, figures, per, each),
	}
	for i, row := range t.rows {
		t.rows[i] = append(slices.Insert(row, 3, meets[i]), marks[i])
	}
	if len(t.first) > widestNumber { // which the heading names in full
		t.first = "value"
	}
	if unit != "" {
		t.first += ", " + unit
	}
	for _, number := range values.cells() {
		t.labels = append(t.labels, label{name: number})
	}
	t = t.columns(func(c int) bool { // without those that are empty, and without costs and metres that stay the same
		same := !slices.ContainsFunc(t.rows, func(r []string) bool { return r[c] != t.rows[0][c] })
		return t.head[0][c] == "meets" && t.rows[0][c] != "" || t.head[0][c] == figure || !same
	})
	for _, name := range []string{one, perLength} { // numbers give way to nothing
		if t.width() > pageWidth {
			t = t.columns(func(c int) bool { return t.head[0][c] != name })
		}
	}
	v.heading("%s above %s by %s", upperFirst(v.by.name), s.DecideOn, s.Vary)
	v.table(t)

	text := "In brackets are ranges at " + v.confidence() + "."
	if slices.Contains(t.head[0], perLength) {
		text += " 100 m take off: what 100 m of drain more take off the figure, in the step from the next less safe value of the curve to this one."
	}
	if slices.Contains(t.head[0], one) {
		text += fmt.Sprintf(" %s costs: the present value of that step for each such unit of the figure.", upperFirst(one))
	}
	if slices.Contains(t.head[0], perLength) || slices.Contains(t.head[0], one) {
		text += " Steps follow the figures alone, whose ranges are wider."
	}
	if currency != "" && slices.Contains(t.head[0], "present") {
		text += fmt.Sprintf(" Sums are in %s at prices of %d.", currency, s.Settings.Money.PricesOf)
	}
	v.para("%s", text)
}

// widestNumber is the width of what a number is called, beyond which the head of its column is "value".
const widestNumber = 12

// oneLess names one unit less of a figure.
var oneLess = map[string]string{"load": "1 m·d less", "days": "1 day less", "events": "1 event less", "annual_probability": "1 % less"}

// headOfFigure are the two lines of the head of a column of figures.
func (v *sizeView) headOfFigure() (first, second string) {
	if at := strings.LastIndex(v.by.unit, " per "); at > 0 {
		return v.by.unit[:at], v.by.unit[at+1:]
	}
	return "share", "of years"
}

// mark says what a value is among those of the curve.
func (v *sizeView) mark(p *result.SizePoint) string {
	switch s := v.s; {
	case s.Answer != nil && p.Text == s.Answer.Text:
		return "answer"
	case s.Shown != nil && p.Text == s.Shown.Text:
		return "its range too"
	}
	return ""
}

// stopped writes what becomes of the figure when the drains age or stop.
func (v *sizeView) stopped() {
	s := v.s
	if len(s.States) == 0 || s.Answer == nil {
		return
	}
	v.heading("With %s, if drains age or stop", s.Answer.Text)
	figure, time := v.headOfFigure()
	t := table{first: "drains", head: [][]string{{"share", figure, "meets"}, {"left", time, "target"}}, left: []bool{false, true, true}}
	var figures column
	var shares, meets []string
	o := &result.Option{States: s.States}
	for _, known := range drainStates {
		state := stateOf(o, known.key)
		if state == nil {
			continue
		}
		name := known.own
		if known.key == s.DrainsAs {
			name += " (all figures above)"
		}
		t.labels = append(t.labels, label{name: name})
		figures.add(v.told(state.Value, state.CI, state.MeetsTarget))
		shares, meets = append(shares, percent(state.EffectShare)), append(meets, words(state.MeetsTarget))
	}
	for i, cell := range figures.cells() {
		t.rows = append(t.rows, []string{shares[i], cell, meets[i]})
	}
	v.table(t.dropEmpty())
	v.para("Share left: of what the drains do as new.%s", v.statesMeant([]*result.Option{o}))
}
