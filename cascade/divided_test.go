package cascade

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// TestDividedDifferences compares with the definition, evaluated with 900 binary digits: the recursive table of divided
// differences of exp, with points that coincide drawn 2^-160 apart. That leaves an error near 2^-160.
func TestDividedDifferences(t *testing.T) {
	const tolerance = 1e-14
	points := []float64{
		0, -1e-200, -1e-12, -1e-6, -0.01, -0.3, -0.999, -1, -1.001, -1.7, -3, -10, -40, -700, -1e4, -1e8,
	}
	type pair struct{ x, y float64 }
	var pairs []pair
	for _, x := range points {
		for _, y := range points {
			pairs = append(pairs, pair{x, y})
		}
		pairs = append(pairs, pair{x, x * (1 + 1e-9)}, pair{x, math.Nextafter(x, -1e9)})
	}
	rng := rand.New(rand.NewPCG(1, 1))
	for range 60 {
		pairs = append(pairs, pair{-math.Pow(10, rng.Float64()*6-4), -math.Pow(10, rng.Float64()*6-4)})
	}
	worst := 0.0
	check := func(name string, x, y, got float64, nodes ...float64) {
		t.Helper()
		want := bigDifference(nodes)
		if want < 1e-290 { // near the smallest number that keeps all its digits
			if got > 1e-280 {
				t.Errorf("%s(%v, %v) = %v, want %v", name, x, y, got, want)
			}
			return
		}
		d := math.Abs(got-want) / want
		worst = max(worst, d)
		if !(d <= tolerance) {
			t.Errorf("%s(%v, %v) = %v, want %v, relative error %.2g", name, x, y, got, want, d)
		}
	}
	for _, p := range pairs {
		x, y := p.x, p.y
		check("exp01", x, 0, exp01(x), 0, x)
		check("exp00X", x, 0, exp00X(x), 0, 0, x)
		check("expXY", x, y, expXY(x, y), x, y)
		check("exp0XY", x, y, exp0XY(x, y), 0, x, y)
		check("exp00XY", x, y, exp00XY(x, y), 0, 0, x, y)
	}
	t.Logf("%d pairs, largest relative error %.2g", len(pairs), worst)
}

const bigDigits = 900 // binary

func newBig(x float64) *big.Float { return new(big.Float).SetPrec(bigDigits).SetFloat64(x) }

func bigDifference(nodes []float64) float64 {
	n := len(nodes)
	x, f := make([]*big.Float, n), make([]*big.Float, n)
	for i, v := range nodes {
		// Moving each by its own amount keeps them apart; relative, so that great points move too.
		d := new(big.Float).SetMantExp(newBig(float64(i+1)), -160)
		x[i] = newBig(v)
		x[i].Sub(x[i], d)
		f[i] = bigExp(x[i])
	}
	for k := 1; k < n; k++ {
		for i := range n - k {
			df := newBig(0).Sub(f[i+1], f[i])
			dx := newBig(0).Sub(x[i+k], x[i])
			f[i] = df.Quo(df, dx)
		}
	}
	v, _ := f[0].Float64()
	return v
}

// bigExp is exp(x) by its Taylor series at x/2^k, squared k times.
func bigExp(x *big.Float) *big.Float {
	const k = 40
	small := new(big.Float).SetMantExp(newBig(0).Set(x), -k)
	sum, term := newBig(1), newBig(1)
	for n := 1; n < 60; n++ {
		term.Mul(term, small)
		term.Quo(term, newBig(float64(n)))
		sum.Add(sum, term)
	}
	for range k {
		sum.Mul(sum, sum)
	}
	return sum
}

func TestLapse(t *testing.T) {
	for _, tt := range []struct{ d, k, want float64 }{
		{0, 3, 0},
		{2, 0, 2},
		{2, 1e-300, 2},
		{math.E - 1, 1, 1},
		{(1 - 1/math.E) / 2, -2, 0.5},
		{0.5, -2, math.Inf(1)}, // comes nearer for ever
		{1, -2, math.Inf(1)},
		{math.Inf(1), 2, math.Inf(1)},
		{math.Expm1(20) / 4, 4, 5},
	} {
		if got := lapse(tt.d, tt.k); !(got == tt.want || math.Abs(got-tt.want) <= 1e-15*tt.want) {
			t.Errorf("lapse(%v, %v) = %v, want %v", tt.d, tt.k, got, tt.want)
		}
	}
}
