package render

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"quietslope/scenario/result"
)

// most is the largest number of significant digits that a figure with a range is given.
const most = 3

// figures rounds a figure and the ends of its range together, so that none has more digits than the range supports.
//
// The last digit kept is worth at most an eighth of the width of the range, and more than an eightieth of it; the largest
// of the three numbers gets at most three significant digits. A number that would vanish keeps its first digit, down
// to 10^least; one below that, or smaller than the last digit by more than two places, is given as a bound ("<0.01"), so
// that only an exact zero reads "0". A range without width gives three significant digits.
func figures(value, lo, hi float64, least int) (v, l, h string) {
	last := exponent(max(math.Abs(value), math.Abs(lo), math.Abs(hi))) - (most - 1)
	if width := hi - lo; width > 0 {
		last = max(last, exponent(width/8))
	}
	last = max(last, least)
	least = max(least, last-2)
	return rounded(value, last, least), rounded(lo, last, least), rounded(hi, last, least)
}

// tiny is a least digit that cuts nothing.
const tiny = -9

// significant rounds to n significant digits; whole numbers are never cut below the unit digit's place by decimals.
func significant(x float64, n int) string {
	return rounded(x, exponent(x)-(n-1), tiny)
}

// exponent is the power of ten of the first digit of x; 0 for zero.
func exponent(x float64) int {
	if x = math.Abs(x); !(x > 0) || math.IsInf(x, 0) {
		return 0
	}
	return int(math.Floor(math.Log10(x) + 1e-9)) // log10 of a power of ten may come out just below
}

// noise is what a difference of equal figures may leave behind in floating point.
const noise = 1e-12

// rounded prints x with its last digit at 10^last, or at its first digit where it would vanish, but as a bound below
// 10^least.
func rounded(x float64, last, least int) string {
	if math.Abs(x) < noise {
		return "0"
	}
	first := exponent(x)
	if first < least {
		bound := decimals(math.Pow10(least), least)
		if x < 0 {
			return ">-" + bound
		}
		return "<" + bound
	}
	return decimals(x, min(last, first))
}

func decimals(x float64, last int) string {
	if last >= 0 {
		p := math.Pow10(last)
		return strconv.FormatFloat(math.Round(x/p)*p, 'f', 0, 64)
	}
	return strconv.FormatFloat(x, 'f', -last, 64)
}

// between joins the ends of a range: a dash where nothing can be mistaken for a minus sign, a word elsewhere.
func between(lo, hi string) string {
	if strings.Contains(lo+hi, "-") {
		return lo + " to " + hi
	}
	return lo + "–" + hi
}

// ranged prints a figure, and its range in brackets. A figure without a range gets two significant digits. Nothing
// below 10^least is told.
func ranged(value float64, ci *result.Interval, least int) (v, r string) {
	if ci == nil {
		return rounded(value, max(exponent(value)-1, least), least), ""
	}
	if spread := math.Abs(ci[1] - ci[0]); spread <= 1e-9*max(math.Abs(value), 1e-3) {
		if v = rounded(value, max(exponent(value)-(most-1), least), least); v == "0" {
			return v, ""
		}
		return v, "(no spread)"
	}
	v, l, h := figures(value, ci[0], ci[1], least)
	if strings.HasPrefix(v, "<") && l == v && h == v {
		return v, "" // all three below what is told
	}
	return v, "(" + between(l, h) + ")"
}

// metres prints a level to the centimetre, and to the millimetre where it was given so.
func metres(x float64) string {
	s := strconv.FormatFloat(x, 'f', 3, 64)
	s = strings.TrimSuffix(s, "0")
	if s == "-0.00" {
		return "0.00"
	}
	return s
}

// centimetres prints a computed level or height in m, to the centimetre.
func centimetres(x float64) string {
	if s := strconv.FormatFloat(x, 'f', 2, 64); s != "-0.00" {
		return s
	}
	return "0.00"
}

// days prints a duration: whole days from ten on, one decimal below, minutes' worth of digits below a tenth.
func days(d float64) string {
	switch {
	case d == 0:
		return "0"
	case d >= 10:
		return strconv.FormatFloat(d, 'f', 0, 64)
	case d >= 0.1:
		return strings.TrimSuffix(strconv.FormatFloat(d, 'f', 1, 64), ".0")
	}
	return significant(d, 2)
}

// depth prints an amount of water in mm: whole from ten on, one decimal below.
func depth(mm float64) string {
	switch a := math.Abs(mm); {
	case a < 1e-9:
		return "0"
	case a >= 9.95:
		return strconv.FormatFloat(mm, 'f', 0, 64)
	case a >= 0.05:
		return strconv.FormatFloat(mm, 'f', 1, 64)
	case mm < 0:
		return "0"
	}
	return "<0.1"
}

// flowing prints a flow of drains to two significant digits. What is less than a hundred-thousandth, in mm/d or L/s, is as good as
// nothing, and its digits would only take room.
func flowing(x float64) string { return rounded(x, exponent(x)-1, -5) }

// rate prints a rate: at most three significant digits, no padding.
func rate(x float64) string { return typed(x, most) }

// percent prints a share as a whole percentage, without claiming all or none where it is not.
func percent(share float64) string {
	switch p := math.Round(100 * share); {
	case share <= 0:
		return "0 %"
	case share >= 1:
		return "100 %"
	case p < 1:
		return "<1 %"
	case p > 99:
		return ">99 %"
	default:
		return fmt.Sprintf("%.0f %%", p)
	}
}
