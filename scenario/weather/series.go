package weather

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"time"

	"quietslope/scenario/fault"
)

// Limits of what can be weather.
const (
	// The most rain ever measured in a day is 1825 mm, on La Réunion in January 1966 (World Meteorological Organization,
	// archive of weather and climate extremes; from memory).
	maxRainPerDay = 2000 // mm
	// The most rain ever measured in a calendar month is 9300 mm, in Cherrapunji in July 1861 (from memory).
	maxRainPerMonth = 10_000 // mm
	// Reference evapotranspiration of a hot and windy desert day is near 15 mm, and hours of such a day have about
	// three times its mean (from memory).
	maxPETPerDay = 50 // mm/d
)

const (
	minStep = time.Minute
	maxStep = day
)

// Spans are counted in seconds, since a time.Duration holds 292 years only.
const daySeconds = int64(day / time.Second)

// Ways in which a step can be missing.
const (
	rainMissing uint8 = 1 << iota
	petMissing
	rowsMissing
)

// gap is a stretch of steps without values. Its times are as in series.
type gap struct {
	from, to int64
	line     int   // of the first row without a value, or of the row after missing rows
	kind     uint8 // of all its steps together
	hour     bool  // the jump over it is one step and one hour, where clocks may have changed
}

// maxGaps is the number of gaps that a message lists.
const maxGaps = 10

// series puts rows in the order of time, or says which are out of it. Its times are stamps in seconds since 1970, of
// months the numbers of the months.
type series struct {
	head   []row // the first rows, until the step is known
	inDays bool  // most of them have the day of the one before and no hour

	step      int64 // s, or 1 month; 0 until it is known
	months    bool  // the steps are calendar months
	lastDays  bool  // the times of months name their last days
	first     int64 // of the first row
	last      int64 // of the row taken last
	lastLine  int
	rain, pet []float64
	scale     struct{ rainMul, rainDiv, petMul, petDiv, petMost float64 }

	dayEnd  int64   // of the day of the last step, s
	dayRain float64 // in that day so far, mm

	unsure   bool  // a row is out of place, lacks a time or could not be read, so that gaps cannot be told
	broken   bool  // the row read last has no time, or could not be read
	disorder *kind // of the row before, while rows out of place follow each other
	jump     int64 // steps from the row before to the last, 1 when there is no gap
	jumps    int   // rows in a row after such a jump
	jumpFrom int   // number of the line before the first of them
	jumpsOne bool  // the last of these jumps is over a calendar month
	lost     []lostRows

	gaps     []gap // the first of them
	gapCount int
	gapSteps int64
	gapEnd   int64                    // of the last gap, or one step before the first row
	complete struct{ from, to int64 } // the longest stretch without gaps, to its last stamp; none if to < from
}

// take takes the next row that has a time.
func (r *reader) take(w *row) error {
	w.broken, r.broken = r.broken, false
	if r.step > 0 {
		r.place(w)
		return nil
	}
	kept := *w
	kept.time, kept.rain, kept.pet = slices.Clone(w.time), slices.Clone(w.rain), slices.Clone(w.pet)
	r.head = append(r.head, kept)
	if len(r.head) < headRows {
		return nil
	}
	return r.settle()
}

// settle finds the step, which is the commonest difference of the first times, and places the rows read so far.
func (r *reader) settle() error {
	if r.step > 0 || len(r.head) == 0 {
		return nil
	}
	if len(r.head) == 1 {
		if len(r.problems) > 0 {
			return errStop
		}
		return r.fatal(r.head[0].line, "this is the only row; a record needs two at least, and a study some years of them")
	}
	same := 0
	for i := range r.head[1:] {
		if r.head[i].at == r.head[i+1].at {
			same++
		}
	}
	r.inDays = 2*same > len(r.head) && !r.layout.iso && r.layout.at[hour] < 0
	step := commonest(alike(differences(r.head)))
	a, b := &r.head[0], &r.head[1]
	switch {
	case step == 0 && len(r.problems) > 0:
		return errStop
	case step == 0 && a.at == b.at:
		return r.fatalTime(b, "repeats line %d, and so do all others; is this the right column?", a.line)
	case step == 0:
		return r.fatalTime(b, "comes before that of line %d; put the rows in the order of time, oldest first", a.line)
	case step > int64(maxStep/time.Second) && r.unsure: // times were misread, which has been said
		return errStop
	case step >= shortestMonth:
		if err := r.settleMonths(); err != nil {
			return err
		}
	case step > int64(maxStep/time.Second), step < int64(minStep/time.Second):
		return r.wrongStep(secondsText(step))
	default:
		r.step = step
		r.setScale(time.Duration(step) * time.Second)
	}
	if len(r.head) == headRows {
		r.reserve()
	}
	for i := range r.head {
		r.place(&r.head[i])
	}
	r.head = nil
	return nil
}

func (r *reader) wrongStep(text string) error {
	return r.fatal(0, "the rows are %s apart; steps run from 1 min to 1 d, or are calendar months", text)
}

// setScale sets what turns the numbers of a row into mm in a step of the given length.
func (r *reader) setScale(step time.Duration) {
	r.scale.rainMul, r.scale.rainDiv = r.rainUnit.factors(step)
	r.scale.petMul, r.scale.petDiv = r.petUnit.factors(step)
	r.scale.petMost = maxPETPerDay * step.Hours() / 24
}

// reserve makes room for the rows to come, as many as the file can hold at the length of the lines so far.
func (r *reader) reserve() {
	n := int(float64(r.size) / float64(r.read) * headRows * 1.01)
	n = min(n, r.maxRows)
	if n <= headRows {
		return
	}
	r.rain = make([]float64, 0, n)
	if r.petAt >= 0 {
		r.pet = make([]float64, 0, n)
	}
}

func (r *reader) fatalTime(w *row, format string, args ...any) error {
	r.problem(w.line, r.src.Time, "%q %s", w.time, fmt.Sprintf(format, args...))
	return errStop
}

// differences are those of the times of successive rows that are positive, s.
func differences(head []row) (d []int64) {
	for i := 1; i < len(head); i++ {
		if s := head[i].at - head[i-1].at; s > 0 && !head[i].broken {
			d = append(d, s)
		}
	}
	return d
}

// commonest returns the commonest number, of equally common ones the smallest, and 0 when there is none.
func commonest(d []int64) int64 {
	slices.Sort(d)
	var best int64
	most, run := 0, 0
	for i, s := range d {
		if run++; i > 0 && d[i-1] != s {
			run = 1
		}
		if run > most {
			best, most = s, run
		}
	}
	return best
}

// place checks that a row follows the one before and appends its values.
func (r *reader) place(w *row) {
	if r.months && !r.toMonth(w) {
		return
	}
	if r.lastLine == 0 {
		r.first, r.gapEnd = w.at, w.at-r.step
		r.complete.from, r.complete.to = w.at, w.at-r.step
	} else if d := w.at - r.last; d == r.step {
		r.disorder, r.jump = nil, 1
	} else if !r.misplaced(w, d) {
		return
	}
	r.last, r.lastLine = w.at, w.line
	if w.missing != 0 {
		r.addGap(gap{from: w.at, to: w.at, line: w.line, kind: w.missing})
	}
	rain := w.rainV * r.scale.rainMul / r.scale.rainDiv
	if w.missing&rainMissing != 0 {
		rain = math.NaN()
	} else {
		r.checkRain(w, rain)
	}
	r.rain = append(r.rain, rain)
	if r.petAt >= 0 {
		pet := w.petV * r.scale.petMul / r.scale.petDiv
		if w.missing&petMissing != 0 {
			pet = math.NaN()
		} else if !(pet <= r.scale.petMost) {
			r.inRow(w.line, r.src.PET.Name, wrong("%q is %.6g mm/d; evapotranspiration above %d mm/d is not possible, so check weather.columns.pet.unit",
				w.pet, pet/r.scale.petMost*maxPETPerDay, maxPETPerDay))
		}
		r.pet = append(r.pet, pet)
	}
}

// checkRain refuses rain that cannot have fallen in a step, or in the civil day in which the step begins.
func (r *reader) checkRain(w *row, rain float64) {
	if r.months {
		if !(rain <= maxRainPerMonth) {
			r.inRow(w.line, r.src.Rain.Name, wrong("%q is %.6g mm of rain in a month; more than %d mm has never fallen in one, so check weather.columns.rain.unit",
				w.rain, rain, maxRainPerMonth))
		}
		return
	}
	start := w.at + r.offset
	if r.src.StampEnd {
		start -= r.step
	}
	if start >= r.dayEnd || start < r.dayEnd-daySeconds {
		r.dayEnd = start - (start%daySeconds+daySeconds)%daySeconds + daySeconds
		r.dayRain = 0
	}
	if !(rain <= maxRainPerDay) {
		r.inRow(w.line, r.src.Rain.Name, wrong("%q is %.6g mm of rain in a step; more than %d mm has never fallen in a day, so check weather.columns.rain.unit",
			w.rain, rain, maxRainPerDay))
		return
	}
	if r.dayRain += rain; r.dayRain > maxRainPerDay {
		r.inRow(w.line, r.src.Rain.Name, wrong("with %q the rain of this day adds up to %.6g mm; more than %d mm has never fallen in a day, so check weather.columns.rain.unit",
			w.rain, r.dayRain, maxRainPerDay))
	}
}

// misplaced deals with a row that does not come one step after the one before, but d seconds. It returns false when the
// row is to be left out.
func (r *reader) misplaced(w *row, d int64) (keep bool) {
	if d > 0 && d%r.step == 0 {
		r.disorder = nil
		r.skip(w, d/r.step)
		return true
	}
	r.unsure = true
	r.jump = 1
	if r.disorder != nil {
		r.disorder.rows++
		return d > 0
	}
	hint := "; every time must be one step after the one before"
	switch {
	case r.clockChange(w.at, d):
		hint = clockHint
	case r.layout.iso && r.step == daySeconds && (d == 23*3600 || d == 25*3600):
		hint = "; the offset from UTC changes here: keep one all year, so that days are 24 h long"
	}
	before := r.timeText(r.last)
	var t *trouble
	switch {
	case d == 0:
		if r.inDays {
			hint = "; most times repeat the one before, so give the hour in this column too, as in YYYY-MM-DD hh:mm"
		}
		t = wrong("%q repeats line %d"+hint, w.time, r.lastLine)
	case d < 0:
		t = wrong("%q comes before %q in line %d"+hint, w.time, before, r.lastLine)
	default:
		t = wrong("%q comes %s after %q in line %d, but the step is %s"+hint, w.time, secondsText(d), before, r.lastLine, secondsText(r.step))
	}
	r.disorder = r.inRow(w.line, r.src.Time, t)
	return d > 0
}

const clockHint = "; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso"

// clockChange says whether a row that is d seconds after the one before is one hour off its place, at a time of the year
// and the day at which clocks are changed. They are changed in the early hours, in most of the world in March or April
// and in September, October or November (from memory).
func (r *reader) clockChange(unix, d int64) bool {
	const hour = 3600
	if r.layout.iso || r.months || r.step >= daySeconds || d-r.step != hour && r.step-d != hour {
		return false
	}
	t := time.Unix(unix, 0).UTC()
	switch t.Month() {
	case time.March, time.April, time.September, time.October, time.November:
		return t.Hour() <= 4
	}
	return false
}

// skip notes that rows are missing before w, which comes n steps after the row before. The same jump several times in a row
// is a change of step, unless rows between could not be read. Where gaps are filled it takes more of them: rows may be
// missing here and there.
func (r *reader) skip(w *row, n int64) {
	oneMonth := !r.months && r.civil(w.at).Equal(r.civil(r.last).AddDate(0, 1, 0))
	switch {
	case w.broken:
		r.jump = 1
	case n == r.jump, r.jump > 1 && oneMonth && r.jumpsOne:
		r.jump = n
		r.jumps++
	default:
		r.jump, r.jumps, r.jumpFrom = n, 1, r.lastLine
	}
	r.jumpsOne = oneMonth
	often, hint := 3, ""
	if r.fills() && !oneMonth {
		often, hint = 10, "; where rows are only missing, write each of them with empty values, which are filled"
	}
	if r.jumps == often && !w.broken {
		to := r.spanText(n * r.step)
		if oneMonth {
			to = "1 month"
		}
		r.inRow(w.line, r.src.Time, wrong("%q: the step changes from %s to %s after line %d; every step must be the same"+hint,
			w.time, r.spanText(r.step), to, r.jumpFrom)).noun = "place"
		r.unsure = true
	}
	if r.fills() {
		r.lost = append(r.lost, lostRows{before: len(r.rain), steps: n - 1})
	}
	g := gap{from: r.last + r.step, to: w.at - r.step, line: w.line, kind: rowsMissing}
	g.hour = r.clockChange(w.at, n*r.step)
	r.addGap(g)
}

// addGap lengthens the last gap or adds another.
func (r *reader) addGap(g gap) {
	r.gapSteps += (g.to-g.from)/r.step + 1
	if r.gapCount > 0 && g.from == r.gapEnd+r.step {
		if r.gapCount <= len(r.gaps) {
			last := &r.gaps[r.gapCount-1]
			last.to, last.kind, last.hour = g.to, last.kind|g.kind, false
		}
	} else {
		r.endStretch(g.from)
		r.gapCount++
		if len(r.gaps) < maxGaps {
			r.gaps = append(r.gaps, g)
		}
	}
	r.gapEnd = g.to
}

// endStretch notes that the steps since the last gap are complete up to the one before next.
func (r *reader) endStretch(next int64) {
	from, to := r.gapEnd+r.step, next-r.step
	if to-from > r.complete.to-r.complete.from {
		r.complete.from, r.complete.to = from, to
	}
}

// timeText writes a stamp as the file does.
func (r *reader) timeText(at int64) string {
	if r.months {
		return r.layout.text(r.stampOfMonth(at), r.zone)
	}
	return r.layout.text(r.civil(at), r.zone)
}

// spanText writes the time between two stamps.
func (r *reader) spanText(d int64) string {
	if r.months {
		return monthsText(d)
	}
	return secondsText(d)
}

// end checks what can only be told at the end.
func (r *reader) end() error {
	if err := r.settle(); err != nil {
		return err
	}
	switch {
	case r.lastLine == 0 && len(r.problems) == 0:
		return r.fatal(0, "the file has a header but no rows")
	case r.unsure || len(r.problems) >= fault.Most:
	case r.gapCount > 0 && !r.fills():
		r.refuseGaps()
	case r.gapCount > 0 && len(r.problems) == 0:
		r.makeRoom()
	}
	return nil
}

// refuseGaps makes one problem of all gaps, with a list of the first.
func (r *reader) refuseGaps() {
	r.endStretch(r.last + r.step)
	var b strings.Builder
	fmt.Fprintf(&b, "%s without values, in %s; complete the record, ", fault.Count(int(r.gapSteps), "step"), fault.Count(r.gapCount, "gap"))
	if r.complete.to >= r.complete.from {
		fmt.Fprintf(&b, "cut it to its longest stretch without gaps, %s to %s, ", r.timeText(r.complete.from), r.timeText(r.complete.to))
	}
	b.WriteString("or let weather.gaps fill them (zero, or month mean):")
	names := []string{r.src.Rain.Name}
	if r.src.PET != nil {
		names = append(names, r.src.PET.Name)
	}
	hinted := false
	for _, g := range r.gaps {
		fmt.Fprintf(&b, "\n    %s to %s, %s: ", r.timeText(g.from), r.timeText(g.to), fault.Count(int((g.to-g.from)/r.step+1), "step"))
		switch {
		case g.kind == rowsMissing:
			fmt.Fprintf(&b, "no rows before line %d", g.line)
		case g.kind&rowsMissing != 0:
			fmt.Fprintf(&b, "no rows or no values near line %d", g.line)
		case g.kind == rainMissing|petMissing:
			fmt.Fprintf(&b, "no %s or %s from line %d", names[0], names[1], g.line)
		default:
			fmt.Fprintf(&b, "no %s from line %d", names[g.kind/petMissing], g.line)
		}
		if g.hour && !hinted {
			hinted = true
			b.WriteString(clockHint)
		}
	}
	if more := r.gapCount - len(r.gaps); more > 0 {
		fmt.Fprintf(&b, "\n    and %s", fault.Count(more, "more gap"))
	}
	r.problem(r.gaps[0].line, "", "%s", b.String())
}
