// Package cascade replays two stores in series, a permeable cover over a fissured deep layer, exactly: linear ones, but for one
// drain of the cover that may go with the square of the storage above it.
//
// Storages are drainable water in mm, times are days, rates are 1/d, fluxes are mm/d.
// The package reads no files and knows no words of a study.
//
// With net input r (constant within a step) and the outlets of [Model], the storages S1 of the cover and S2 of the deep
// store follow
//
//	dS1/dt = r - sum of q(S1)
//	dS2/dt = percolation(S1) + lateral - sum of q(S2)
//
// A store at its capacity with a positive balance is held there and its surplus counted; so is an empty cover with a
// negative balance, and the demand that it cannot meet. Between the storages at which an outlet begins to flow or
// reaches its ceiling the equations are linear with constant coefficients, so each step is advanced with the
// exponential solution, not with a stepping formula: one step gives what any number of shorter ones give.
//
// The drain with a square carries, beside its linear flow, one with the square of the storage u above its invert,
//
//	q = Rate*u + Square*u^2
//
// as in Hooghoudt's equation of parallel drains (S. B. Hooghoudt 1940, Versl. Landbouwk. Onderz. 46(14), from memory). Without
// the linear part it is the nonlinear reservoir Q = a*S^n with n = 2 (for n = 2 the recession of J. Boussinesq 1904, Journal de
// mathematiques pures et appliquees 10, 5-78; both from memory). Above that invert S1 follows a Riccati equation with constant
// coefficients, which has a closed solution too. What it makes of S2 has none and is integrated by Gauss's formula, in parts
// short enough that its error stays near rounding. See curve.go.
package cascade

import (
	"errors"
	"fmt"
	"math"
)

// Limits of what can be replayed. They are far outside anything physical; they keep the arithmetic finite.
const (
	maxRate    = 1e6  // 1/d
	maxSquare  = 1e6  // 1/(mm d)
	maxStorage = 1e9  // mm
	maxFlux    = 1e12 // mm/d
	maxDays    = 1e4  // length of a step
	maxDrains  = 100  // of one store
)

// Outlet is one way out of a store. At storage S it carries
//
//	q(S) = min(Rate*u + Square*u^2, Ceiling),  u = max(0, S-Invert)    mm/d
type Outlet struct {
	Rate    float64 // 1/d, 0 to 1e6
	Invert  float64 // storage below which nothing flows, mm, >= 0
	Ceiling float64 // largest flow, mm/d, >= 0; +Inf for none
	Square  float64 // 1/(mm d), 0 to 1e6; above 0 only for one drain of the cover, without a ceiling
}

// Flow returns what the outlet carries at a storage in mm, in mm/d.
func (o Outlet) Flow(storage float64) float64 {
	u := max(0, storage-o.Invert)
	return min(u*(o.Rate+o.Square*u), o.Ceiling)
}

// flows tells whether the outlet carries anything at any storage.
func (o Outlet) flows() bool { return (o.Rate > 0 || o.Square > 0) && o.Ceiling > 0 }

// Store is one of the two stores.
type Store struct {
	Capacity float64  // largest storage, mm, > 0; +Inf for none
	Seepage  float64  // rate of the natural outlet, invert zero, 1/d, 0 to 1e6
	Drains   []Outlet // one per drain that acts on this store
}

// Model is the pair of stores. What leaves the cover through Percolation enters the deep store; all else leaves the slope.
type Model struct {
	Cover       Store
	Percolation Outlet // from the cover to the deep store
	Deep        Store
	Lateral     float64 // inflow to the deep store from the side, mm/d, >= 0
}

// Check reports why a model cannot be replayed, or nil. It refuses numbers that are not finite or outside the ranges
// that the types give, and a store from which nothing can ever leave: no outlet that flows, and no capacity over which
// the surplus could run.
func (m Model) Check() error {
	var errs []error
	add := func(err error) {
		if err != nil {
			errs = append(errs, err)
		}
	}
	add(m.Cover.check("cover"))
	add(m.Percolation.check("percolation"))
	add(m.Deep.check("deep store"))
	add(m.checkSquares())
	add(within("lateral inflow", m.Lateral, maxFlux, "mm/d"))
	if len(errs) > 0 {
		return errors.Join(errs...)
	}
	if !drains(m.Cover, m.coverOutlets()) {
		add(errors.New("nothing can leave the cover"))
	}
	if !drains(m.Deep, m.deepOutlets()) {
		add(errors.New("nothing can leave the deep store"))
	}
	return errors.Join(errs...)
}

func (s Store) check(name string) error {
	if !(s.Capacity > 0 && (s.Capacity <= maxStorage || math.IsInf(s.Capacity, 1))) {
		return fmt.Errorf("%s: capacity %v mm is not above 0 and at most %g mm, or none", name, s.Capacity, float64(maxStorage))
	}
	if err := within(name+": seepage", s.Seepage, maxRate, "/d"); err != nil {
		return err
	}
	if len(s.Drains) > maxDrains {
		return fmt.Errorf("%s: %d drains, more than %d", name, len(s.Drains), maxDrains)
	}
	for i, d := range s.Drains {
		if err := d.check(fmt.Sprintf("%s: drain %d", name, i+1)); err != nil {
			return err
		}
	}
	return nil
}

func (o Outlet) check(name string) error {
	if err := within(name+": rate", o.Rate, maxRate, "/d"); err != nil {
		return err
	}
	if err := within(name+": invert", o.Invert, maxStorage, "mm"); err != nil {
		return err
	}
	if err := within(name+": square", o.Square, maxSquare, "/(mm d)"); err != nil {
		return err
	}
	if !(o.Ceiling >= 0) {
		return fmt.Errorf("%s: ceiling %v mm/d is not 0 or more", name, o.Ceiling)
	}
	if o.Square > 0 && !math.IsInf(o.Ceiling, 1) {
		return fmt.Errorf("%s: square %v /(mm d) with a ceiling of %v mm/d; only an outlet without a ceiling can have a square", name, o.Square, o.Ceiling)
	}
	return nil
}

// checkSquares reports a square where there can be none, and more than one.
func (m Model) checkSquares() error {
	if s := m.Percolation.Square; s > 0 {
		return fmt.Errorf("percolation: square %v /(mm d); only a drain of the cover can have one", s)
	}
	for i, d := range m.Deep.Drains {
		if d.Square > 0 {
			return fmt.Errorf("deep store: drain %d: square %v /(mm d); only a drain of the cover can have one", i+1, d.Square)
		}
	}
	first := 0
	for i, d := range m.Cover.Drains {
		if !(d.Square > 0) {
			continue
		}
		if first > 0 {
			return fmt.Errorf("cover: drains %d and %d have a square; only one can", first, i+1)
		}
		first = i + 1
	}
	return nil
}

// within reports a value that is not between zero and most; NaN is not.
func within(name string, v, most float64, unit string) error {
	if v >= 0 && v <= most {
		return nil
	}
	return fmt.Errorf("%s %v %s is not between 0 and %g %s", name, v, unit, most, unit)
}

// drains tells whether anything can leave a store: through an outlet that lies below the capacity, or over the capacity.
func drains(s Store, outlets []Outlet) bool {
	if !math.IsInf(s.Capacity, 1) {
		return true
	}
	for _, o := range outlets {
		if o.flows() {
			return true
		}
	}
	return false
}

// The places of the outlets that are not drains in coverOutlets and deepOutlets, and of the first drain in each.
const (
	seepage     = 0
	percolation = 1
	coverDrains = 2
	deepDrains  = 1
)

func (m Model) coverOutlets() []Outlet {
	o := []Outlet{{Rate: m.Cover.Seepage, Ceiling: math.Inf(1)}, m.Percolation}
	return append(o, m.Cover.Drains...)
}

func (m Model) deepOutlets() []Outlet {
	o := []Outlet{{Rate: m.Deep.Seepage, Ceiling: math.Inf(1)}}
	return append(o, m.Deep.Drains...)
}
