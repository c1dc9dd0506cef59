package render

import (
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
)

// drainStates are the states of the drains in the order of their columns: the lines of the head, and the words of a
// sentence.
var drainStates = []struct {
	key  string
	head [2]string
	own  string // what an option's own figures are for
}{
	{"as_new", [2]string{"as", "new"}, "drains as new"},
	{"mean_between_flushes", [2]string{"mean between", "flushes"}, "the mean between two flushes"},
	{"mean_over_horizon", [2]string{"mean over", "the years"}, "the mean over the years"},
	{"before_flush", [2]string{"before", "a flush"}, "drains before a flush"},
	{"never_flushed", [2]string{"never", "flushed"}, "drains that are never flushed"},
	{"half_stopped", [2]string{"every second", "stopped"}, "every second drain stopped"},
	{"all_stopped", [2]string{"all", "stopped"}, "all drains stopped"},
}

// stateOf is an option with its drains in a state, nil where that is not known.
func stateOf(o *result.Option, state string) *result.State {
	for i := range o.States {
		if o.States[i].State == state {
			return &o.States[i]
		}
	}
	return nil
}

// anyState reports whether an option of the case has drains, and with them in some state rises above the band.
func anyState(c *result.Case) bool {
	return slices.ContainsFunc(c.Options, func(o result.Option) bool {
		return slices.ContainsFunc(o.States, func(s result.State) bool { return s.Value > 0 })
	})
}

// agingYears are the years over which drains age.
func (v *view) agingYears() int {
	if m := v.c.Settings.Money; m != nil {
		return m.HorizonYears
	}
	return v.c.Settings.DesignLife
}

// states writes what becomes of the deciding figure when drains age or stop.
func (v *view) states(c *result.Case) {
	band := v.deciding()
	if band < 0 || !anyState(c) {
		return
	}
	by := measureOf(v.c.Settings.DecideBy)
	v.section(c, "If drains age or stop: %s above %s", by.name, v.c.Bands[band].Name)
	t := table{head: [][]string{nil, nil}}
	var options []*result.Option
	for _, o := range pointers(c) {
		if o.States != nil {
			options = append(options, o)
		}
	}
	var cols []column
	for _, s := range drainStates {
		var col column
		for _, o := range options {
			state := stateOf(o, s.key)
			if state == nil {
				col.add("", "")
				continue
			}
			value, _ := by.told(state.Value, state.CI)
			col.add(value, map[string]string{targetMet: "*", targetNotShown: "(*)"}[state.MeetsTarget])
		}
		cols = append(cols, col)
		t.head[0], t.head[1], t.left = append(t.head[0], s.head[0]), append(t.head[1], s.head[1]), append(t.left, true)
	}
	t.rows = sideBySide(cols...)
	v.rows(t.dropEmpty(), options)

	text := upperFirst(by.unit) + "."
	switch by.key {
	case "load":
		text = "Load in " + by.unit + "."
	case "annual_probability":
		text = "Share of years."
	}
	if target := v.targetText(); target != "" {
		text += fmt.Sprintf(" *: meets the target, %s; (*): the figure does, the end of its range does not.", target)
	}
	v.para("%s", text+v.ownStates(c)+v.statesMeant(options))
}

// ownStates says which state the options' figures elsewhere are for.
func (v *view) ownStates(c *result.Case) string {
	var parts []string
	for _, t := range alikeBy(c, func(o *result.Option) string {
		if o.States == nil {
			return ""
		}
		return ownState(o)
	}) {
		parts = append(parts, someByLetter(t.options)+verb(t.options, " stands", " stand")+" with "+t.text)
	}
	text := " In all other tables " + andWords(parts)
	if v.means(c) != "" {
		text += "; but what is longest, highest or a peak is the largest of all ages, and the rate of a drain that as new"
	}
	return text + "."
}

// ownState says which state of its drains an option's figures are for.
func ownState(o *result.Option) string {
	for _, s := range drainStates {
		if s.key == o.DrainsAs {
			return s.own
		}
	}
	return words(o.DrainsAs)
}

// statesMeant says what the states mean that are in the table.
func (v *view) statesMeant(options []*result.Option) string {
	has := func(state string) bool {
		return slices.ContainsFunc(options, func(o *result.Option) bool { return stateOf(o, state) != nil })
	}
	text := ""
	if has("never_flushed") {
		text += fmt.Sprintf(" Never flushed: as clogged as they are after %s without flushing or renewal.", plural(v.agingYears(), "year"))
	}
	if has("half_stopped") {
		text += " Every second stopped: trenches are worked out anew at twice the spacing, which leaves about a quarter of their rate; of drains given by a rate, and of any ceiling, half is left."
	}
	return text
}

// means says below a table which of its rows are means over the ages of drains; "" for none.
func (v *view) means(c *result.Case) string {
	all := alikeBy(c, func(o *result.Option) string {
		switch o.DrainsAs {
		case "mean_between_flushes":
			return "between two flushes"
		case "mean_over_horizon":
			return fmt.Sprintf("over %s without a flush, or over their life if they are renewed before", plural(v.agingYears(), "year"))
		}
		return ""
	})
	if all == nil {
		return ""
	}
	text := fmt.Sprintf("The figures of %s are means over the ages of their drains %s", someByLetter(all[0].options), all[0].text)
	for _, t := range all[1:] {
		text += fmt.Sprintf(", those of %s %s", someByLetter(t.options), t.text)
	}
	return text + ", so that counts need not be whole; longest and peak are the largest of all ages."
}

// statesShort says what the options that matter most have when their drains age or stop.
func (v *view) statesShort(c *result.Case, band int, by *measure) {
	if !anyState(c) {
		return
	}
	var options []int
	for _, i := range deciders(c, band, by) {
		if c.Options[i].States != nil {
			options = append(options, i)
		}
	}
	if options == nil {
		return
	}
	type stopped struct {
		key, when string
		options   []int // those that have the state
	}
	all := []stopped{
		{"never_flushed", fmt.Sprintf("when nobody has flushed the drains for %s", plural(v.agingYears(), "year")), nil},
		{"half_stopped", "with every second drain stopped", nil},
		{"all_stopped", "with all of them stopped", nil},
	}
	missed := true // in every state
	for k := range all {
		s := &all[k]
		for _, i := range options {
			if state := stateOf(&c.Options[i], s.key); state != nil {
				s.options = append(s.options, i)
				missed = missed && state.MeetsTarget == targetMissed
			}
		}
	}
	var parts []string
	before := "" // who was spoken of
	for _, s := range all {
		if s.options == nil {
			continue
		}
		text, who := s.when, " "+verb(options, "it has", "they have")+" "
		if len(s.options) < len(options) {
			who = fmt.Sprintf(" %s%s ", someByLetter(s.options), verb(s.options, " has", " have"))
		}
		if who == before {
			who = " "
		} else {
			before = who
		}
		text += who + spread(c, s.options, func(o *result.Option) *result.State { return stateOf(o, s.key) }, by)
		if v.c.Settings.Target != nil && !missed {
			text += " (" + inTarget(c, s.options, s.key) + ")"
		}
		parts = append(parts, text)
	}
	if parts == nil {
		return
	}
	own := func(o *result.Option) *result.State { return stateOf(o, o.DrainsAs) }
	text := fmt.Sprintf("%s%s %s. %s", someByLetter(options), verb(options, " has", " have"), by.inWords(spread(c, options, own, by)), upperFirst(strings.Join(parts, ", ")))
	if v.c.Settings.Target != nil && missed {
		text += "; each time " + verb(options, "it misses", "they miss") + " the target"
	}
	v.para("%s.", text)
}

// inTarget says of options with a known state which of them meet the target in it.
func inTarget(c *result.Case, options []int, state string) string {
	var parts []string
	target := "the target"
	for _, of := range []struct {
		answer, all, is, are string
	}{
		{targetMet, "meeting the target", "meets", "meet"},
		{targetMissed, "missing the target", "misses", "miss"},
		{targetNotShown, "meeting the target is not shown", "is not shown to meet", "are not shown to meet"},
	} {
		var some []int
		for _, i := range options {
			if stateOf(&c.Options[i], state).MeetsTarget == of.answer {
				some = append(some, i)
			}
		}
		if len(some) == len(options) {
			return of.all
		}
		if some != nil {
			parts = append(parts, someByLetter(some)+" "+verb(some, of.is, of.are)+" "+target)
			target = "it"
		}
	}
	return strings.Join(parts, "; ")
}

// spread are the figures of options in a state: each of up to three, the least and the highest of more.
func spread(c *result.Case, options []int, state func(*result.Option) *result.State, by *measure) string {
	var texts []string
	var values []float64
	low, high := 0, 0
	for k, i := range options {
		s := state(&c.Options[i])
		value, _ := by.told(s.Value, s.CI)
		texts, values = append(texts, strings.Replace(value, "<", "less than ", 1)), append(values, s.Value)
		if values[k] < values[low] {
			low = k
		}
		if values[k] > values[high] {
			high = k
		}
	}
	const most = 3
	switch {
	case !slices.ContainsFunc(texts, func(t string) bool { return t != texts[0] }):
		return texts[0]
	case len(texts) <= most:
		return andWords(texts)
	}
	return "between " + texts[low] + " and " + texts[high]
}
