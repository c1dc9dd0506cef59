package cascade

import (
	"math"
	"slices"
	"sort"
)

// line is a flow within a segment: at + rate*u + square*u^2 mm/d, where u mm is the storage above the foot of the segment.
// It is a straight one but for the drain with a square.
type line struct{ at, rate, square float64 }

func (l line) flow(u float64) float64 { return l.at + u*(l.rate+l.square*u) }

// segments is a store cut at every storage where its outlets change: zero, each invert, each storage at which a ceiling
// is reached, the capacity. Segment i runs from base[i] up by width[i], and within it each outlet is a line. Counted from the
// foot of a segment that is f above its invert, a drain that carries Rate*s + Square*s^2 has the rate Rate + 2*Square*f.
//
// The state of a store is the number of its segment and the storage u above the foot of that segment. Counting from the
// foot keeps the full relative precision where a fast outlet with an invert makes a segment of a few micrometres.
//
// Behind the last segment come two of no width for a store that is held: full, and empty.
//
// The flow at the foot of a segment is worked out once, by adding up along the segments, and serves both of its sides.
// So a flow never jumps. An outlet whose ceiling is so low that it is reached within the rounding of its invert has no
// segment to rise in and carries nothing; that is less than 1e-6 mm/d for any storage below 10 m of water.
type segments struct {
	base, width []float64
	outlets     [][]line // by outlet, by segment
	total       []line   // sum over the outlets
	full, empty int      // numbers of the held segments; full = number of the others
	open        bool     // there is no capacity: the last segment ends at maxStorage
}

func newSegments(capacity float64, outlets []Outlet) segments {
	top := min(capacity, maxStorage)
	edges := []float64{0}
	ends := make([]float64, len(outlets)) // storage at which the ceiling is reached
	for o, out := range outlets {
		if !out.flows() {
			continue
		}
		ends[o] = out.Invert + out.Ceiling/out.Rate
		edges = append(edges, out.Invert, ends[o])
	}
	slices.Sort(edges)
	edges = slices.Compact(edges)
	edges = append(edges[:sort.SearchFloat64s(edges, top)], top)

	n := len(edges) - 1
	s := segments{
		base: make([]float64, n+2), width: make([]float64, n+2),
		outlets: make([][]line, len(outlets)), total: make([]line, n+2),
		full: n, empty: n + 1,
		open: math.IsInf(capacity, 1),
	}
	for i := range n {
		s.base[i], s.width[i] = edges[i], edges[i+1]-edges[i]
		if s.base[i]+s.width[i] > edges[i+1] { // by its rounding; no storage may come out above the capacity
			s.width[i] = math.Nextafter(s.width[i], 0)
		}
	}
	s.base[s.full] = top
	for o, out := range outlets {
		f := make([]line, n+2)
		for i := range n {
			if s.base[i] >= out.Invert && s.base[i] < ends[o] {
				f[i].rate = out.Rate + 2*out.Square*(s.base[i]-out.Invert)
				f[i].square = out.Square
			}
			f[i+1].at = f[i].flow(s.width[i])
		}
		f[s.empty] = line{}
		s.outlets[o] = f
	}
	for i := range s.total {
		for _, f := range s.outlets {
			s.total[i].rate += f[i].rate
			s.total[i].square += f[i].square
		}
	}
	for i := range n {
		s.total[i+1].at = s.total[i].flow(s.width[i])
	}
	return s
}

// place finds the segment of a storage within 0 and the capacity.
func (s segments) place(storage float64) (i int, u float64) {
	i = sort.SearchFloat64s(s.base[:s.full], storage) // first foot at or above
	if i == s.full || s.base[i] != storage {
		i--
	}
	return i, min(storage-s.base[i], s.width[i])
}

// within tells whether a storage is one that the store can have.
func (s segments) within(storage float64) bool {
	return storage >= 0 && storage <= s.base[s.full]
}

// curved tells whether an outlet has a square.
func (s segments) curved() bool {
	for _, l := range s.total {
		if l.square > 0 {
			return true
		}
	}
	return false
}
