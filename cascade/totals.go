package cascade

import "math"

// Totals is the water that has passed since the start of a [Run], in mm. For each store
//
//	what came in - what left - Change = 0
//
// up to rounding, and Error returns that difference. The fluxes are the integrals of the solution over time, not
// differences of storages, so the error is a true check of the replay.
type Totals struct {
	Days  float64 // time replayed
	Cover CoverTotals
	Deep  DeepTotals
}

// CoverTotals is the water of the cover, mm.
type CoverTotals struct {
	In          float64 // net input, less what negative input asked for
	Seepage     float64
	Percolation float64   // to the deep store
	Drains      []float64 // by drain, in the order of the model
	Overflow    float64   // surplus of the full cover
	Unmet       float64   // demand of negative input that the empty cover could not meet
	Change      float64   // storage now less storage at the start
}

// DeepTotals is the water of the deep store, mm.
type DeepTotals struct {
	In      float64 // percolation from the cover
	Lateral float64
	Seepage float64
	Drains  []float64 // by drain, in the order of the model
	Refused float64   // surplus of the full deep store
	Change  float64   // storage now less storage at the start
}

// Error returns the error of the water balance, mm.
func (t CoverTotals) Error() float64 {
	s := sum{}
	s.add(t.In)
	s.add(t.Unmet)
	s.add(-t.Seepage)
	s.add(-t.Percolation)
	for _, d := range t.Drains {
		s.add(-d)
	}
	s.add(-t.Overflow)
	s.add(-t.Change)
	return s.value()
}

// Error returns the error of the water balance, mm.
func (t DeepTotals) Error() float64 {
	s := sum{}
	s.add(t.In)
	s.add(t.Lateral)
	s.add(-t.Seepage)
	for _, d := range t.Drains {
		s.add(-d)
	}
	s.add(-t.Refused)
	s.add(-t.Change)
	return s.value()
}

// Sub returns what passed between an earlier state of the same Run, whose totals are given, and this one.
func (t Totals) Sub(earlier Totals) Totals {
	c, d := earlier.Cover, earlier.Deep
	t.Days -= earlier.Days
	t.Cover.In -= c.In
	t.Cover.Seepage -= c.Seepage
	t.Cover.Percolation -= c.Percolation
	t.Cover.Drains = minus(t.Cover.Drains, c.Drains)
	t.Cover.Overflow -= c.Overflow
	t.Cover.Unmet -= c.Unmet
	t.Cover.Change -= c.Change
	t.Deep.In -= d.In
	t.Deep.Lateral -= d.Lateral
	t.Deep.Seepage -= d.Seepage
	t.Deep.Drains = minus(t.Deep.Drains, d.Drains)
	t.Deep.Refused -= d.Refused
	t.Deep.Change -= d.Change
	return t
}

func minus(a, b []float64) []float64 {
	d := make([]float64, len(a))
	for i := range d {
		d[i] = a[i] - b[i]
	}
	return d
}

// Totals returns the water that has passed since NewRun.
func (r *Run) Totals() Totals {
	s := &r.sums
	cover, deep := r.Storage()
	t := Totals{
		Days: s.days.value(),
		Cover: CoverTotals{
			In:          s.in.value(),
			Seepage:     s.cover.passed(r.cover.outlets[seepage]),
			Percolation: s.cover.passed(r.cover.outlets[percolation]),
			Drains:      s.cover.passedAll(r.cover.outlets[coverDrains:]),
			Overflow:    s.overflow.value(),
			Unmet:       s.unmet.value(),
			Change:      cover - s.start1,
		},
		Deep: DeepTotals{
			Lateral: r.lateral * s.days.value(),
			Seepage: s.deep.passed(r.deep.outlets[seepage]),
			Drains:  s.deep.passedAll(r.deep.outlets[deepDrains:]),
			Refused: s.refused.value(),
			Change:  deep - s.start2,
		},
	}
	t.Deep.In = t.Cover.Percolation
	return t
}

// sums is what a Run adds up. Every flow is a line within a segment, so the time spent in each segment and the integrals
// of the storage above its foot, and of its square, give what passed through each outlet.
type sums struct {
	days, in                 sum
	overflow, unmet, refused sum
	cover, deep              spent
	start1, start2           float64
}

// spent is the time spent in each segment, d, and the integral of the storage above its foot, mm d, and where there is a
// drain with a square that of the square of this storage, mm^2 d.
type spent struct{ time, volume, squares []sum }

func newSums(n1, n2 int, start1, start2 float64) sums {
	return sums{
		cover:  spent{make([]sum, n1), make([]sum, n1), make([]sum, n1)},
		deep:   spent{make([]sum, n2), make([]sum, n2), nil},
		start1: start1, start2: start2,
	}
}

func (s *spent) passed(outlet []line) float64 {
	var q sum
	for i, l := range outlet {
		q.add(l.at * s.time[i].value())
		q.add(l.rate * s.volume[i].value())
		if l.square > 0 {
			q.add(l.square * s.squares[i].value())
		}
	}
	return q.value()
}

func (s *spent) passedAll(outlets [][]line) []float64 {
	q := make([]float64, len(outlets))
	for i, o := range outlets {
		q[i] = s.passed(o)
	}
	return q
}

// count adds a time spent in the present pair of segments, with the integrals of u1, of its square and of u2 over it and,
// for a held cover, the integral of its balance. The square is not needed where no drain has one.
func (r *Run) count(p *pair, time, volume1, squares1, volume2, surplus float64) {
	s := &r.sums
	s.days.add(time)
	s.cover.time[r.i].add(time)
	s.cover.volume[r.i].add(volume1)
	if p.square1 > 0 {
		s.cover.squares[r.i].add(squares1)
	}
	s.deep.time[r.j].add(time)
	s.deep.volume[r.j].add(volume2)
	switch r.i {
	case r.cover.full:
		s.overflow.add(surplus)
	case r.cover.empty:
		s.unmet.add(-surplus)
	}
	if p.held2 {
		s.refused.add(p.b*time + p.perc*volume1)
	}
}

// sum is a compensated sum: it carries along what the additions have rounded away (Neumaier 1974, from memory).
type sum struct{ s, lost float64 }

func (s *sum) add(x float64) {
	t := s.s + x
	if math.Abs(s.s) >= math.Abs(x) {
		s.lost += s.s - t + x
	} else {
		s.lost += x - t + s.s
	}
	s.s = t
}

func (s sum) value() float64 { return s.s + s.lost }
