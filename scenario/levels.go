package scenario

import (
	"context"
	"fmt"
	"strings"
	"time"

	"quietslope/scenario/fault"
	"quietslope/scenario/weather"
)

// LevelsQuery says which levels are wanted. Empty fields mean all options, the weather as recorded, the works as built,
// the whole record.
type LevelsQuery struct {
	Options            []string // names, in any order; the study's order is kept
	Climate, Condition string
	From, To           string // YYYY, YYYY-MM, YYYY-MM-DD or YYYY-MM-DDThh:mm; To includes the whole of what it names
}

// LevelSeries are the replayed series of some options, cut to the time asked for.
type LevelSeries struct {
	Options               []string
	Rows                  int
	Time                  func(i int) string // of row i, as the weather has it
	Rain                  []float64          // mm per step
	Recharge, Cover, Deep [][]float64        // per option: mm per step; end-of-step levels, m above the base of the layer
}

// Levels replays the options asked for. Errors are as for Compare.
func Levels(ctx context.Context, s *Study, q LevelsQuery) (*LevelSeries, error) {
	if err := q.check(s); err != nil {
		return nil, err
	}
	p, err := prepare(ctx, s)
	if err != nil {
		return nil, err
	}
	lo, hi, err := q.cut(p.record)
	if err != nil {
		return nil, err
	}
	chosen := p.cases[0]
	for _, c := range p.cases {
		if sameName(c.condition, q.Condition) {
			chosen = c
		}
	}
	var wanted []int
	for i := range s.Options {
		if len(q.Options) == 0 || indexOfName(q.Options, s.Options[i].Name) >= 0 {
			wanted = append(wanted, i)
		}
	}
	n := len(wanted)
	series := &LevelSeries{
		Rows: hi - lo, Time: func(i int) string { return p.record.Stamp(lo + i) }, Rain: p.record.Rain[lo:hi],
		Recharge: make([][]float64, n), Cover: make([][]float64, n), Deep: make([][]float64, n),
	}
	for _, i := range wanted {
		series.Options = append(series.Options, s.Options[i].Name)
	}
	err = each(n, func(k int) error {
		t := p.base
		if w := chosen.works[wanted[k]]; w != p.works[p.baseline] {
			var err error
			if t, err = p.replayer.replay(ctx, w, p.counted); err != nil {
				return err
			}
		}
		series.Recharge[k], series.Cover[k], series.Deep[k] = t.recharge[lo:hi], t.cover[lo:hi], t.deep[lo:hi]
		return nil
	})
	if err != nil {
		return nil, err
	}
	return series, nil
}

// check refuses names that the study does not have.
func (q *LevelsQuery) check(s *Study) error {
	known := optionNames(s)
	for i, name := range q.Options {
		if indexOfName(known, name) < 0 {
			return unknownName("--option", name, known)
		}
		if indexOfName(q.Options[:i], name) >= 0 {
			return &fault.Error{Key: "--option", Text: fmt.Sprintf("%q is asked for twice; name each option once", name)}
		}
	}
	if q.Climate != "" && !sameName(q.Climate, AsRecorded) {
		return unknownName("--climate", q.Climate, []string{AsRecorded})
	}
	_, err := s.conditionNamed(q.Condition)
	return err
}

// conditionNamed is the condition that a query names, as built for "".
func (s *Study) conditionNamed(name string) (Condition, error) {
	all := append([]Condition{asBuilt}, s.Conditions...)
	names := make([]string, len(all))
	for i := range all {
		names[i] = all[i].Name
	}
	switch i := indexOfName(names, name); {
	case name == "":
		return asBuilt, nil
	case i < 0:
		return Condition{}, unknownName("--condition", name, names)
	default:
		return all[i], nil
	}
}

func unknownName(flag, name string, known []string) error {
	hint := ""
	if near := fault.Nearest(name, known); near != "" {
		hint = fmt.Sprintf("; did you mean %q?", near)
	} else if flag == "--option" || flag == "--against" {
		hint = "; give its name, not its letter in the tables"
	}
	return &fault.Error{Key: flag, Text: fmt.Sprintf("the study has no %q%s\n  it has: %s", name, hint, strings.Join(known, "\n          "))}
}

// cut finds the rows to write: those whose times, as the weather has them, lie between From and To; of months, those that
// begin in between.
func (q *LevelsQuery) cut(r *weather.Record) (lo, hi int, err error) {
	n := len(r.Rain)
	row := func(t time.Time) int { return min(max(r.RowFrom(t), 0), n) }
	lo, hi = 0, n
	if q.From != "" {
		from, _, err := parseMoment("--from", q.From, r)
		if err != nil {
			return 0, 0, err
		}
		lo = row(from)
	}
	if q.To != "" {
		_, end, err := parseMoment("--to", q.To, r)
		if err != nil {
			return 0, 0, err
		}
		hi = row(end)
	}
	if lo >= hi {
		return 0, 0, &fault.Error{Key: "--from, --to",
			Text: fmt.Sprintf("no step of the record lies in between; it runs from %s to %s", r.ISO(0), r.ISO(n-1))}
	}
	return lo, hi, nil
}

// parseMoment reads a time given on the command line as the stretch that it names: a year, a month, a day or a minute.
func parseMoment(flag, text string, r *weather.Record) (from, end time.Time, err error) {
	for _, f := range []struct {
		layout              string
		years, months, days int
		rest                time.Duration
	}{
		{"2006", 1, 0, 0, 0},
		{"2006-01", 0, 1, 0, 0},
		{"2006-01-02", 0, 0, 1, 0},
		{"2006-01-02T15:04", 0, 0, 0, time.Minute},
	} {
		if t, err := time.ParseInLocation(f.layout, text, r.First.Location()); err == nil {
			return t, t.AddDate(f.years, f.months, f.days).Add(f.rest), nil
		}
	}
	return from, end, &fault.Error{Key: flag,
		Text: fmt.Sprintf("%q is not a time that exists; write 1998, 1998-11, 1998-11-30 or 1998-11-30T06:00", text)}
}
