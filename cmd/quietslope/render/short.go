package render

import (
	"fmt"
	"slices"
	"strings"

	"quietslope/scenario/result"
)

// inShort says in a few lines what the tables say on the deciding band, without a judgement of its own.
func (v *view) inShort() {
	band := v.deciding()
	if band < 0 || len(v.c.Cases) == 0 {
		return
	}
	c := &v.c.Cases[0]
	name, T := inQuotes(v.c.Bands[band].Name), v.c.Record.YearsCounted
	by := measureOf(v.c.Settings.DecideBy)
	v.heading("In short")
	for i, n := range v.notes.list {
		if n.first.Code == "implausible_weather" || n.first.Code == "record_short" && T < veryFewYears {
			v.para("Check first: %s (note %d)", n.first.Text, i+1)
		}
	}
	if v.several() {
		v.para("In %s, %s:", caseName(0), caseText(c))
	}
	if v.nothingPassed(c, band) {
		base := baselineOf(c)
		v.para("No option's level rises above %s in %s, so this record cannot compare them on it. The highest deep level of %s is %s m, the band begins at %s m. Check the band, or decide on a lower one.",
			name, plural(T, "year"), v.letters[base.Name], centimetres(base.Level.MaxM), metres(v.c.Bands[band].LevelM))
		v.statesShort(c, band, by)
		v.otherCases(band, by)
		v.para("%s.", v.notes.headline())
		return
	}
	var none []int
	told := map[string][]int{}
	for i := range c.Options {
		o := &c.Options[i]
		f := &o.Bands[band]
		switch {
		case o.Baseline && notPassed(f):
			v.para("With %s, the baseline, the deep level does not rise above %s in %s.", letter(i), name, plural(T, "year"))
		case o.Baseline:
			days, limits := ranged(f.DaysPerYear, f.DaysPerYearCI, leastDays)
			v.para("With %s, the baseline, the deep level rises above %s in %s of %s, on %s days a year.", letter(i), name,
				yearsWith(f, T), plural(T, "year"), strings.TrimSpace(days+" "+limits))
		case notPassed(f):
			none = append(none, i)
		}
		if f.Change != nil {
			as := against(by.change(f.Change), f.Change.ToldApart)
			told[as] = append(told[as], i)
		}
	}
	if len(none) > 0 {
		v.para("With %s the record holds no event, which does not mean that none can come.", someByLetter(none))
	}
	if len(c.Options) > 1 {
		text := fmt.Sprintf("From the least by %s: %s.", by.name, order(figuresBy(c, band, by), mostListed))
		for _, part := range []struct{ as, what string }{
			{toldMore, "Worse than %s"}, {toldNot, "Not told apart from %s on this record"}, {toldSame, "The same as %s in every year"},
		} {
			if options := told[part.as]; len(options) > 0 {
				text += fmt.Sprintf(" "+part.what+": %s.", v.reference, someByLetter(options))
			}
		}
		v.para("%s", text+v.neighbours(c))
	}
	v.targetShort(c)
	v.moneyShort(c)
	v.statesShort(c, band, by)
	v.otherCases(band, by)
	if len(v.notes.list) > 0 {
		v.para("%s. What is weak about these figures stands there.", v.notes.headline())
	}
}

// neighbours says where it is noted that the order of a case is not certain; "" where it is not.
func (v *view) neighbours(c *result.Case) string {
	refs := v.notes.numbersOf("order_not_told_apart", c)
	if refs == "" {
		return ""
	}
	return fmt.Sprintf(" Some neighbours in this order are not told apart from each other: see %s.", noun(refs))
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
func figuresBy(c *result.Case, band int, m *measure) []float64 {
	xs := make([]float64, len(c.Options))
	for i := range c.Options {
		xs[i] = m.figure(&c.Options[i].Bands[band])
	}
	return xs
}
