package weather

import (
	"fmt"
	"math"
	"slices"
	"time"

	"quietslope/scenario/fault"
)

// Gaps says what becomes of steps that have no value: a missing code in a column, or rows that are not there.
type Gaps string

// The ways to deal with gaps. An empty Gaps is GapsRefuse.
const (
	GapsRefuse    Gaps = "refuse"     // the record is refused, and the gaps are listed
	GapsZero      Gaps = "zero"       // a missing value counts as 0
	GapsMonthMean Gaps = "month mean" // a missing value is the mean of its column over the same month of the year
)

// Gap is a stretch of steps that were filled, in at least one column: the steps From to To-1.
type Gap struct {
	From, To  int
	Rain, PET bool // the columns that were filled
}

// lostRows are steps for which there are no rows.
type lostRows struct {
	before int   // number of rows before them
	steps  int64 // how many
}

func (r *reader) fills() bool { return r.src.Gaps == GapsZero || r.src.Gaps == GapsMonthMean }

// makeRoom puts NaN where rows are missing, so that the columns hold every step. Values that a row lacks are NaN already.
func (r *reader) makeRoom() {
	r.endStretch(r.last + r.step)
	steps := (r.last-r.first)/r.step + 1
	if steps > int64(r.maxRows) {
		r.problem(r.gaps[0].line, "", "the rows reach from %s to %s, over %d steps of %s, and more than %d are not read; is this the right file?",
			r.timeText(r.first), r.timeText(r.last), steps, r.spanText(r.step), r.maxRows)
		return
	}
	r.checkShare(r.src.Rain.Name, r.rain, steps)
	if r.petAt >= 0 {
		r.checkShare(r.src.PET.Name, r.pet, steps)
	}
	if len(r.problems) > 0 || len(r.lost) == 0 {
		return
	}
	r.rain = spread(r.rain, r.lost, int(steps))
	if r.petAt >= 0 {
		r.pet = spread(r.pet, r.lost, int(steps))
	}
}

// checkShare refuses to fill a column of which more is missing than was measured.
func (r *reader) checkShare(column string, x []float64, steps int64) {
	measured := int64(0)
	for _, v := range x {
		if !math.IsNaN(v) {
			measured++
		}
	}
	if missing := steps - measured; missing > measured {
		r.problem(0, column, "%d of %d steps have no value; more is missing than was measured, and that is not filled; %s", missing, steps, r.wayOut())
	}
}

// spread copies rows to their places among all steps.
func spread(x []float64, lost []lostRows, steps int) []float64 {
	out := make([]float64, 0, steps)
	from := 0
	for _, l := range lost {
		out = append(out, x[from:l.before]...)
		for range l.steps {
			out = append(out, math.NaN())
		}
		from = l.before
	}
	return append(out, x[from:]...)
}

// fill replaces NaN in the columns of a record, and notes where it did.
func (r *reader) fill(rec *Record) {
	for i := range rec.Rain {
		g := Gap{From: i, To: i + 1, Rain: math.IsNaN(rec.Rain[i]), PET: rec.PET != nil && math.IsNaN(rec.PET[i])}
		if !g.Rain && !g.PET {
			continue
		}
		if n := len(rec.Filled); n > 0 {
			if last := &rec.Filled[n-1]; last.To == i && last.Rain == g.Rain && last.PET == g.PET {
				last.To++
				continue
			}
		}
		rec.Filled = append(rec.Filled, g)
	}
	r.fillColumn(rec, r.src.Rain.Name, rec.Rain)
	if rec.PET != nil {
		r.fillColumn(rec, r.src.PET.Name, rec.PET)
	}
}

func (r *reader) fillColumn(rec *Record, column string, x []float64) {
	if r.src.Gaps == GapsZero {
		for i, v := range x {
			if math.IsNaN(v) {
				x[i] = 0
			}
		}
		return
	}
	means, missing := monthMeans(rec, x)
	var without []string
	for m := range means {
		if missing[m] && means[m].length == 0 {
			without = append(without, time.Month(m+1).String())
		}
	}
	if len(without) > 0 {
		r.problem(0, column, "no %s of the record has a value, so gaps there have no mean to be filled with; %s", fault.Words(without, "or"), r.wayOut())
		return
	}
	eachMonth(rec, func(m, i int, length float64) {
		if math.IsNaN(x[i]) {
			x[i] = means[m].over(length)
		}
	})
}

// monthMean is what fell, or was drawn, in the valid steps of one month of the year, all years together.
type monthMean struct {
	depth  total   // mm
	length float64 // of these steps: days for months, otherwise the number of steps
}

// over is the depth in mm of a step of the given length that gets as much a day as the valid ones do on average.
func (m *monthMean) over(length float64) float64 { return m.depth.value() * length / m.length }

// monthMeans adds up a column by the month of the year, January first, in which its steps start, and says which months
// lack values.
func monthMeans(rec *Record, x []float64) (means [monthsPerYear]monthMean, missing [monthsPerYear]bool) {
	eachMonth(rec, func(m, i int, length float64) {
		if math.IsNaN(x[i]) {
			missing[m] = true
			return
		}
		means[m].depth.add(x[i])
		means[m].length += length
	})
	return means, missing
}

// eachMonth calls f for every step with the month of the year in which it starts, 0 for January, and its length: in days
// for months, otherwise 1.
func eachMonth(rec *Record, f func(m, i int, length float64)) {
	for i, n := 0, len(rec.Rain); i < n; {
		t := rec.Start(i)
		to := min(rec.FirstFrom(time.Date(t.Year(), t.Month()+1, 1, 0, 0, 0, 0, t.Location())), n)
		length := 1.0
		if rec.Monthly() {
			length = rec.Span(i, to)
		}
		for ; i < to; i++ {
			f(int(t.Month()-time.January), i, length)
		}
	}
}

// wayOut says what to do about gaps that cannot be filled.
func (r *reader) wayOut() string {
	if r.complete.to < r.complete.from {
		return "complete the record"
	}
	return fmt.Sprintf("complete the record or cut it to its longest stretch without gaps, %s to %s", r.timeText(r.complete.from), r.timeText(r.complete.to))
}

// checkGaps refuses a way of filling that is none.
func checkGaps(g Gaps) error {
	if slices.Contains([]Gaps{"", GapsRefuse, GapsZero, GapsMonthMean}, g) {
		return nil
	}
	return fmt.Errorf("weather.gaps: %q is no way to deal with gaps; write %s, %s or %s", string(g), GapsRefuse, GapsZero, GapsMonthMean)
}
