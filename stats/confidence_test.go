package stats

import "testing"

// TestConfidenceChanges: a set that was asked at one confidence answers the next at its own.
func TestConfidenceChanges(t *testing.T) {
	x := []float64{0, 3, 1, 8, 2, 5}
	used := NewResamples(6, 500, 2, 1)
	used.Interval(x, 0.5)
	lo, hi, _ := used.Interval(x, 0.9)
	if l, h, _ := NewResamples(6, 500, 2, 1).Interval(x, 0.9); lo != l || hi != h {
		t.Errorf("[%v, %v], want [%v, %v]", lo, hi, l, h)
	}
}
