package weather

import (
	"fmt"
	"math"
	"strings"
	"time"
)

// Unit turns the numbers of a column into mm per step.
type Unit struct {
	mul, div float64       // mm = number·mul/div
	per      time.Duration // the number is a depth in this time; 0 for a depth in one step
}

// MM is the depth in mm that the number v stands for in a step of the given length.
func (u Unit) MM(v float64, step time.Duration) float64 {
	mul, div := u.factors(step)
	return v * mul / div
}

// factors gives MM(v, step) = v·mul/div. Two factors, because 37 in units of 0.1 mm is 3.7 only by division.
func (u Unit) factors(step time.Duration) (mul, div float64) {
	if u.per == 0 {
		return u.mul, u.div
	}
	return u.mul * step.Seconds(), u.div * u.per.Seconds()
}

const (
	knownUnits = `a depth per step (mm, cm, in), a rate (mm/h, mm/d, in/h), or a number and one of these, such as "0.1 mm"`
	mmPerInch  = 25.4 // exact by definition of the inch
)

// DepthUnit reads the unit of a rain or evapotranspiration column: mm, cm or in for a depth per step, mm/h, mm/d or in/h
// for a rate, with a number before it where the column counts in multiples ("0.1 mm").
func DepthUnit(unit string) (Unit, error) {
	text := strings.TrimSpace(unit)
	if text == "" {
		return Unit{}, fmt.Errorf("the unit is empty; use %s", knownUnits)
	}
	name := strings.TrimLeft(text, "+-0123456789.,eE")
	number := strings.TrimSpace(text[:len(text)-len(name)])
	name = strings.TrimSpace(name)
	u := Unit{div: 1}
	switch name {
	case "mm":
		u.mul = 1
	case "cm":
		u.mul = 10
	case "in":
		u.mul = mmPerInch
	case "mm/h":
		u.mul, u.per = 1, time.Hour
	case "mm/d":
		u.mul, u.per = 1, day
	case "in/h":
		u.mul, u.per = mmPerInch, time.Hour
	default:
		switch lower := strings.ToLower(name); lower {
		case "mm", "cm", "in", "mm/h", "mm/d", "in/h":
			return Unit{}, fmt.Errorf("unknown unit %q; write %q", unit, strings.TrimSpace(number+" "+lower))
		}
		if meant := meantUnit[strings.ToLower(name)]; meant != "" {
			return Unit{}, fmt.Errorf("unknown unit %q; write %q", unit, strings.TrimSpace(number+" "+meant))
		}
		return Unit{}, fmt.Errorf("unknown unit %q; use %s", unit, knownUnits)
	}
	if number == "" {
		return u, nil
	}
	v, ok := parseNumber([]byte(number), false)
	if !ok || !(v > 0) || math.IsInf(v, 0) {
		return Unit{}, fmt.Errorf(`the number before the unit in %q must be positive and decimal, such as "0.1 mm"`, unit)
	}
	// One over a whole number is kept as a division, so that 37 tenths are 3.7 and not the float64 next to it.
	if inv := math.Round(1 / v); v < 1 && v*inv == 1 {
		u.div = inv
	} else {
		u.mul *= v
	}
	return u, nil
}

// meantUnit knows other spellings of the known units. A kilogram of water on a square metre, and a litre, is 1 mm deep.
var meantUnit = map[string]string{
	"kg/m2": "mm", "kg m-2": "mm", "kg/m²": "mm", "l/m2": "mm", "l/m²": "mm", "millimetres": "mm", "millimeters": "mm",
	"mm/day": "mm/d", "mm/24h": "mm/d", "mm d-1": "mm/d", "mm/hr": "mm/h", "mm/hour": "mm/h", "mm h-1": "mm/h",
	"inch": "in", "inches": "in", `"`: "in", "in/hr": "in/h", "in/hour": "in/h", "inch/h": "in/h", "mm/step": "mm",
}
