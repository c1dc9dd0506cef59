package cascade

import (
	"errors"
	"fmt"
	"math"
)

const (
	// maxSegments is the number of segments in one step beyond which something is wrong with this package: the cover
	// passes each of its segments at most once in a step and the deep store at most twice.
	maxSegments = 1000
	// maxParts is the same for the parts into which segments are cut where the cover has a drain with a square. Between two
	// events there are at most some hundred.
	maxParts = 200 * maxSegments
	// keptLengths is the number of different step lengths whose transitions are kept; months need four.
	keptLengths = 8
	// block is the number of steps that are added up plainly before they go into the compensated sums.
	block = 128
)

// ErrStorage is what a replay ends with when a store without a capacity comes to hold more than can be computed with. The
// model and its input ask for it.
var ErrStorage = fmt.Errorf("its storage passes %g mm", float64(maxStorage))

// Run is a replay in progress: a model, the storages reached and the water that has passed.
// It is not safe for concurrent use; any number of Runs may work side by side.
type Run struct {
	cover, deep segments
	lateral     float64

	i, j   int     // segments that the stores are in
	u1, u2 float64 // storages above the feet of the segments, mm

	lengths [keptLengths]table
	newest  int

	sums    sums
	single  [1]float64
	scratch [block]float64
}

// table keeps the transitions over one step length for every pair of segments, filled in as they are met.
type table struct {
	days  float64
	pairs []transition
	lags  []lag // for pairs in which the cover has a drain with a square
}

// NewRun returns a replay that starts at the given storages, in mm. It fails when the model cannot be replayed (see
// [Model.Check]) or a storage is not within 0 and the capacity of its store.
func NewRun(m Model, cover, deep float64) (*Run, error) {
	if err := m.Check(); err != nil {
		return nil, err
	}
	r := &Run{
		cover:   newSegments(m.Cover.Capacity, m.coverOutlets()),
		deep:    newSegments(m.Deep.Capacity, m.deepOutlets()),
		lateral: m.Lateral,
	}
	if r.cover.open && cover > maxStorage {
		return nil, fmt.Errorf("cover: %w", ErrStorage)
	}
	if r.deep.open && deep > maxStorage {
		return nil, fmt.Errorf("deep store: %w", ErrStorage)
	}
	if !r.cover.within(cover) {
		return nil, fmt.Errorf("start of the cover %v mm is not between 0 and %v mm", cover, r.cover.base[r.cover.full])
	}
	if !r.deep.within(deep) {
		return nil, fmt.Errorf("start of the deep store %v mm is not between 0 and %v mm", deep, r.deep.base[r.deep.full])
	}
	r.i, r.u1 = r.cover.place(cover)
	r.j, r.u2 = r.deep.place(deep)
	r.sums = newSums(len(r.cover.base), len(r.deep.base), cover, deep)
	return r, nil
}

// Storage returns the storages reached, in mm.
func (r *Run) Storage() (cover, deep float64) {
	return r.cover.base[r.i] + r.u1, r.deep.base[r.j] + r.u2
}

// Step replays one step of the given length in days, over which depth mm of net input arrive at a constant rate; depth
// may be negative. After an error the Run is of no further use.
func (r *Run) Step(depth, days float64) error {
	r.single[0] = depth
	_, err := r.replay(r.single[:], days, nil, nil)
	return err
}

// Replay replays one step of the given length in days for each depth, and writes the storages at the ends of the steps,
// in mm, into cover and deep. Each of the two is as long as depths, or nil when it is not wanted. After an error, which
// names the step by its number from 1, the Run is of no further use.
func (r *Run) Replay(depths []float64, days float64, cover, deep []float64) error {
	if cover != nil && len(cover) != len(depths) || deep != nil && len(deep) != len(depths) {
		return fmt.Errorf("%d depths, but room for %d and %d storages", len(depths), len(cover), len(deep))
	}
	k, err := r.replay(depths, days, cover, deep)
	if err != nil {
		return fmt.Errorf("step %d: %w", k+1, err)
	}
	return nil
}

// replay returns the number of steps done.
func (r *Run) replay(depths []float64, days float64, cover, deep []float64) (int, error) {
	if !(days > 0 && days <= maxDays) {
		return 0, fmt.Errorf("a step of %v days is not above 0 and at most %g days", days, float64(maxDays))
	}
	tab := r.table(days)
	perDay := 1 / days
	for k := 0; k < len(depths); {
		n := min(block, len(depths)-k)
		c, d := r.scratch[:n], r.scratch[:n]
		if cover != nil {
			c = cover[k : k+n]
		}
		if deep != nil {
			d = deep[k : k+n]
		}
		done := 0
		if r.cover.total[r.i].square > 0 {
			done = r.glideCurved(tab, perDay, depths[k:k+n], c, d)
		} else {
			done = r.glide(tab, perDay, depths[k:k+n], c, d)
		}
		k += done
		if done == n {
			continue
		}
		if err := r.walk(tab, depths[k]*perDay); err != nil {
			return k, err
		}
		r.sums.in.add(depths[k])
		c[done], d[done] = r.Storage()
		k++
	}
	return len(depths), nil
}

// table returns the transitions kept for a step length; when there are too many lengths the oldest gives way.
func (r *Run) table(days float64) *table {
	for i := range r.lengths {
		if r.lengths[i].days == days {
			return &r.lengths[i]
		}
	}
	r.newest = (r.newest + 1) % keptLengths
	t := &r.lengths[r.newest]
	t.days = days
	if t.pairs == nil {
		t.pairs = make([]transition, len(r.cover.base)*len(r.deep.base))
		if r.cover.curved() {
			t.lags = make([]lag, len(t.pairs))
		}
	}
	clear(t.pairs)
	clear(t.lags)
	return t
}

// pair returns the equations in the segments that the stores are in.
func (r *Run) pair() pair {
	i, j := r.i, r.j
	p := pair{
		base1: r.cover.base[i], width1: r.cover.width[i], flow1: r.cover.total[i].at, rate1: r.cover.total[i].rate,
		base2: r.deep.base[j], width2: r.deep.width[j], rate2: r.deep.total[j].rate,
		perc:    r.cover.outlets[percolation][i].rate,
		b:       r.lateral + r.cover.outlets[percolation][i].at - r.deep.total[j].at,
		square1: r.cover.total[i].square,
		held1:   i >= r.cover.full, held2: j >= r.deep.full,
	}
	return p
}

// transition returns the transition of the present pair over the whole step.
func (r *Run) transition(t *table, p *pair) *transition {
	c := &t.pairs[r.i*len(r.deep.base)+r.j]
	if !c.known {
		*c = p.transition(t.days)
	}
	return c
}

// glide does steps from the front of depths for as long as neither store leaves its segment, and returns how many it
// did. It knows from the two ends of a step that nothing can have happened within it:
//
//   - S1 is monotone within a step, since the net input is constant.
//   - With v = dS2/dt, d(v*exp(rate2*t))/dt = perc*(dS1/dt)*exp(rate2*t) has one sign, so S2 turns at most once. If it does,
//     v falls off at least as fast as exp(-rate2*t) until then, and S2 gets no further than v*f2 from its start.
//
// Where that bound lies outside the segment the step is left to walk, which finds out. The signs of v at the two ends
// would often tell as well, but v at the end may be nothing but rounding.
func (r *Run) glide(t *table, perDay float64, depths, cover, deep []float64) int {
	p := r.pair()
	if p.held2 {
		return 0
	}
	least, most := -maxFlux, maxFlux // of a, for which the cover stays in its segment or stays held
	switch r.i {
	case r.cover.full:
		least = 0
	case r.cover.empty:
		most = 0
	}
	c := *r.transition(t, &p)
	constant := c.f2 * p.b
	u1, u2 := r.u1, r.u2
	var sum1, sum2, sum float64 // of u1 and u2 at the starts of the steps, of the depths
	n := len(depths)
	cover, deep = cover[:n], deep[:n]
	for k, depth := range depths {
		a := depth*perDay - p.flow1
		next1 := c.e1*u1 + c.f1*a
		next2 := c.e2*u2 + (constant + c.h1*u1 + c.h2*a)
		far := u2 + c.f2*(p.b+p.perc*u1-p.rate2*u2)
		if !(a >= least && a <= most && next1 >= 0 && next1 <= p.width1 && next2 >= 0 && next2 <= p.width2 && far >= 0 && far <= p.width2) {
			n = k
			break
		}
		sum1 += u1
		sum2 += u2
		sum += depth
		u1, u2 = next1, next2
		cover[k], deep[k] = p.base1+u1, p.base2+u2
	}
	if n == 0 {
		return 0
	}
	r.u1, r.u2 = u1, u2
	steps := float64(n)
	a := sum*perDay - steps*p.flow1
	r.sums.in.add(sum)
	r.count(&p, steps*t.days,
		c.f1*sum1+c.g1*a,
		0,
		c.f2*sum2+c.g2*p.b*steps+c.h2*sum1+c.h3*a,
		a*t.days)
	return n
}

// walk does one step in which something may happen, from one event to the next. Each event names the segment that the
// store goes to; it is never found again from the storage. In a step the cover moves in one direction only, and the
// deep store in one and then, after at most one turning point, in the other. Holding on to these directions makes an
// endless exchange between two segments impossible, whatever the rounding.
//
// Events that fall together, or closer than the times can be told apart, follow each other after a time of zero.
//
// Where the cover has a drain with a square its segment is passed in parts that are short enough for the quadrature of
// [curve]; the end of a part is not an event.
func (r *Run) walk(t *table, rate float64) error {
	if !(math.Abs(rate) <= maxFlux) {
		return fmt.Errorf("net input of %v mm/d", rate)
	}
	way1 := r.startCover(rate)
	way2 := r.startDeep()
	left := t.days
	for events, parts := 0, 0; events < maxSegments && parts < maxParts; parts++ {
		if err := r.enter(way1, way2); err != nil {
			return err
		}
		p := r.pair()
		a, speed := 0.0, 0.0 // speed is du1/dt
		if !p.held1 {
			a = rate - p.flow1
			speed = a - r.u1*(p.rate1+p.square1*r.u1)
		}

		h, event := left, stepEnds
		var bent curve
		if p.square1 > 0 {
			bent = p.curve(r.u1, a)
		}
		leaves := r.coverLeaves(&p, &bent, way1, rate)
		if p.square1 > 0 {
			if bent.rests() {
				r.u1, speed = min(bent.u, p.width1), 0
			} else if s := bent.part(); s < h {
				h, event = s, partEnds
			}
		}
		if leaves <= h {
			h, event = leaves, coverLeaves
		}
		if p.held2 {
			if s := r.letsGo(&p, &bent, way1, a); s <= h {
				h, event = s, deepLetsGo
			}
		} else if way1 != 0 && way2 != way1 {
			if s := r.turns(&p, &bent, way1, speed, h); s <= h {
				h, event = s, deepTurns
			}
		}
		next := r.over(t, &p, &bent, a, h)
		if !p.held2 && (way2 > 0 && next.u2 > p.width2 || way2 < 0 && next.u2 < 0 && r.j > 0) {
			target := 0.0
			if way2 > 0 {
				target = p.width2
			}
			if p.square1 > 0 {
				h = bent.crossing(&p, r.u2, target, h)
			} else {
				h = p.crossing(r.u1, r.u2, a, target, h)
			}
			event = deepLeaves
			next = r.over(t, &p, &bent, a, h)
			next.u2 = target
		}
		surplus := rate - p.flow1 // of a held cover
		r.count(&p, h, next.volume1, next.squares1, next.volume2, surplus*h)
		r.u1 = min(max(next.u1, 0), p.width1)
		r.u2 = min(max(next.u2, 0), p.width2)

		if event != partEnds {
			events++
		}
		switch event {
		case stepEnds:
			return nil
		case coverLeaves:
			r.u1 = 0
			if way1 > 0 {
				r.u1 = p.width1
			}
		case deepTurns:
			way2 = way1
		case deepLetsGo:
			r.release()
			way2 = -1
		}
		left -= h
		if left <= 0 {
			return nil
		}
	}
	return errors.New("internal error: a step does not come to its end")
}

// What ends a part of a step.
const (
	stepEnds = iota
	partEnds
	coverLeaves
	deepLeaves
	deepTurns
	deepLetsGo
)

// over returns where the stores come to after a part of a step.
func (r *Run) over(t *table, p *pair, bent *curve, a, h float64) motion {
	if p.square1 > 0 {
		return bent.move(p, r.u2, h)
	}
	if h == t.days {
		return r.transition(t, p).move(r.u1, r.u2, a, p.b)
	}
	c := p.transition(h)
	return c.move(r.u1, r.u2, a, p.b)
}

// startCover lets go of a held cover whose balance has changed its sign, and returns the direction in which the cover
// moves throughout the step: 1 up, -1 down, 0 for a cover that is held or at rest.
func (r *Run) startCover(rate float64) int {
	s := &r.cover
	switch {
	case r.i == s.full:
		if rate >= s.total[s.full].at {
			return 0
		}
		r.i = s.full - 1
		r.u1 = s.width[r.i]
		return -1
	case r.i == s.empty:
		if rate <= 0 {
			return 0
		}
		r.i = 0
		return 1
	}
	return sign(rate - s.total[r.i].flow(r.u1))
}

// startDeep lets go of a held deep store whose balance has changed its sign, and returns the direction in which the deep
// store moves at the start of the step. The direction of a held store is up; that of a store at rest is 0, and it turns
// to that of the cover as soon as percolation changes.
func (r *Run) startDeep() int {
	if r.j == r.deep.full {
		if r.u1 < r.enough() {
			r.release()
			return -1
		}
		return 1
	}
	return sign(r.gain())
}

// gain is the speed of the deep store, mm/d; if it is held, of its surplus.
func (r *Run) gain() float64 {
	return r.lateral + r.cover.outlets[percolation][r.i].flow(r.u1) - r.deep.total[r.j].flow(r.u2)
}

// release puts a held deep store back into its last segment.
func (r *Run) release() {
	r.j = r.deep.full - 1
	r.u2 = r.deep.width[r.j]
}

// enter moves a store that stands at an edge of its segment, and is on its way out, into the next segment.
func (r *Run) enter(way1, way2 int) error {
	if s := &r.cover; r.i < s.full {
		switch {
		case way1 > 0 && r.u1 == s.width[r.i]:
			if r.i++; r.i == s.full && s.open {
				return fmt.Errorf("cover: %w", ErrStorage)
			}
			r.u1 = 0
		case way1 < 0 && r.u1 == 0 && r.i > 0:
			r.i--
			r.u1 = s.width[r.i]
		case way1 < 0 && r.u1 == 0:
			r.i = s.empty
		}
	}
	if s := &r.deep; r.j < s.full {
		switch {
		case way2 > 0 && r.u2 == s.width[r.j]:
			if r.j++; r.j == s.full && s.open {
				return fmt.Errorf("deep store: %w", ErrStorage)
			}
			r.u2 = 0
		case way2 < 0 && r.u2 == 0 && r.j > 0:
			r.j--
			r.u2 = s.width[r.j]
		}
	}
	return nil
}

// coverLeaves returns the time after which the cover comes to the edge of its segment; +Inf for never.
//
// With y the distance still to go and v the speed at the edge, dy/dt = -v - rate1*y, so the edge is reached when
// (exp(rate1*t) - 1)/rate1 = y/v. With a square see [curve.reaches].
func (r *Run) coverLeaves(p *pair, bent *curve, way1 int, rate float64) float64 {
	if p.held1 || way1 == 0 {
		return math.Inf(1)
	}
	target, v := 0.0, rate-p.flow1
	if way1 > 0 {
		target, v = p.width1, rate-r.cover.total[r.i+1].at
	}
	if v*float64(way1) <= 0 {
		return math.Inf(1) // it comes to rest first
	}
	if p.square1 > 0 {
		return bent.reaches(p, target, v)
	}
	return lapse((target-r.u1)/v, p.rate1)
}

// turns returns the time after which the deep store stops and turns the way of the cover; +Inf for never within these
// segments.
//
// With v the speed of the deep store and s that of the cover at the start, v(t)*exp(rate2*t) = v + perc*s*(exp(k*t) - 1)/k
// with k = rate2 - rate1. With a square see [curve.turns]; there it is +Inf too if it does not turn within h.
func (r *Run) turns(p *pair, bent *curve, way1 int, speed, h float64) float64 {
	push := p.perc * speed
	if push*float64(way1) <= 0 {
		return math.Inf(1)
	}
	if p.square1 > 0 {
		return bent.turns(p, r.gain()*float64(way1), h)
	}
	return lapse(max(0, -r.gain()/push), p.rate2-p.rate1)
}

// enough returns the storage of the cover above the foot of its segment at which percolation just keeps the full deep
// store full. Where percolation does not depend on it, it is -Inf if percolation is more than enough, +Inf if it is
// less; and that of the cover as it stands if it is just enough.
func (r *Run) enough() float64 {
	perc := r.cover.outlets[percolation][r.i]
	missing := r.deep.total[r.deep.full].at - r.lateral - perc.at
	switch {
	case perc.rate > 0:
		return missing / perc.rate
	case missing < 0:
		return math.Inf(-1)
	case missing > 0:
		return math.Inf(1)
	}
	return r.u1
}

// letsGo returns the time after which the full deep store begins to fall; +Inf for never within these segments.
func (r *Run) letsGo(p *pair, bent *curve, way1 int, a float64) float64 {
	if way1 >= 0 || p.held1 {
		return math.Inf(1)
	}
	enough := r.enough()
	if enough > r.u1 {
		return 0
	}
	v := a - enough*(p.rate1+p.square1*enough) // speed of the cover when it gets there
	if p.perc == 0 || enough < 0 || v >= 0 {
		return math.Inf(1)
	}
	if p.square1 > 0 {
		return bent.reaches(p, enough, v)
	}
	return lapse((enough-r.u1)/v, p.rate1)
}

func sign(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}
