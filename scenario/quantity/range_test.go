package quantity

import (
	"strings"
	"testing"
)

func TestParseRange(t *testing.T) {
	for _, tt := range []struct {
		text   string
		kind   Kind
		lo, hi float64
		unit   string
	}{
		{"4 m .. 40 m", Length, 4, 40, "m"},
		{"4m..40m", Length, 4, 40, "m"},
		{"4 .. 40 m", Length, 4, 40, "m"},
		{" 4 ..  40 m ", Length, 4, 40, "m"},
		{"80 cm .. 4 m", Length, 0.8, 4, "m"},
		{"0.8 m .. 400 cm", Length, 0.8, 4, "cm"},
		{"0 .. 4 m", Length, 0, 4, "m"},
		{"0.5..2 m", Length, 0.5, 2, "m"},
		{"13 ft .. 130 ft", Length, 3.9624, 39.624, "ft"},
		{"0.001 .. 0.02 /d", Rate, 0.001, 0.02, "/d"},
		{"1e-3 /d .. 0.02 1/d", Rate, 0.001, 0.02, "1/d"},
		{"5 .. 30 y", Duration, 5 * 365.25, 30 * 365.25, "y"},
		{"0 .. 40 %", Share, 0, 0.4, "%"},
		{"10 % .. 40 %", Share, 0.1, 0.4, "%"},
		{"0 .. 0.4", Share, 0, 0.4, ""},
		{"1.5\u00a0mm/d .. 2\u2009mm/d", Flux, 1.5, 2, "mm/d"},
	} {
		got, err := ParseRange(tt.text, tt.kind)
		if want := (Range{tt.lo, tt.hi, tt.unit}); err != nil || got != want {
			t.Errorf("%q: %+v, %v; want %+v", tt.text, got, err, want)
		}
	}
	if got, err := ParseNumberRange("1 .. 1.3"); err != nil || got != (Range{1, 1.3, ""}) {
		t.Errorf("%+v, %v", got, err)
	}
}

// TestParseRangeErrors holds what a person reads who got a range wrong.
func TestParseRangeErrors(t *testing.T) {
	for _, tt := range []struct {
		text string
		kind Kind
		want string
	}{
		{"", Length, `"" is not a range; write two values of a length, such as 1 .. 4 m`},
		{"12 m", Length, `"12 m" is not a range; write two values of a length, such as 1 .. 4 m`},
		{".. 12 m", Length, `".. 12 m" is not a range; write two values of a length, such as 1 .. 4 m`},
		{"4 m ..", Length, `"4 m .." is not a range; write two values of a length, such as 1 .. 4 m`},
		{"4 .. 8 .. 12 m", Length, `"4 .. 8 .. 12 m" is not a range; write two values of a length, such as 1 .. 4 m`},
		{"4 m to 40 m", Length, `"4 m to 40 m" is not a range; write 4 m .. 40 m`},
		{"4-40", Length, `"4-40" is not a range; write 4 .. 40 m`},
		{"4 to 40", Share, `"4 to 40" is not a range; write 4 .. 40 %`},
		{"4-40 m", Length, `"4-40 m" is not a range; write 4 .. 40 m`},
		{"4 m – 40 m", Length, `"4 m – 40 m" is not a range; write 4 m .. 40 m`},
		{"4 m...40 m", Length, `"4 m...40 m" is not a range; write 4 m .. 40 m`},
		{"4 m … 40 m", Length, `"4 m … 40 m" is not a range; write 4 m .. 40 m`},
		{"4 m, 40 m", Length, `"4 m, 40 m" is not a range; write 4 m .. 40 m`},
		{"1e-3-2e-3 /d", Rate, `"1e-3-2e-3 /d" is not a range; write two values of a rate, such as 0.01 .. 0.04 /d`},
		{"40 m .. 4 m", Length, `"40 m .. 4 m" does not rise; write the smaller value first, 4 m .. 40 m`},
		{"40 .. 4 m", Length, `"40 .. 4 m" does not rise; write the smaller value first, 4 m .. 40 m`},
		{"12 m .. 12 m", Length, `"12 m .. 12 m": both values are the same; write two values of a length, such as 1 .. 4 m`},
		{"4 .. 40", Length, `"4 .. 40" has no unit; write 4 .. 40 m`},
		{"4 m .. 40", Length, `"4 m .. 40": the unit stands on both values or once at the end; write 4 m .. 40 m`},
		{"4 .. 40 kPa", Length, `"40 kPa" is a stress, and a length is wanted here; a length is written in m, mm, cm, km, in or ft`},
		{"four .. 40 m", Length, `"four" is not a length; write a number with its unit, such as 12 m`},
		{"5 .. 200", Share, `"5 .. 200" has no unit; write 5 .. 200 %`},
		{"4 .. NaN m", Length, `"NaN m" is not a length; write a number with its unit, such as 12 m`},
	} {
		got, err := ParseRange(tt.text, tt.kind)
		if err == nil {
			t.Errorf("%q is read as %+v", tt.text, got)
		} else if err.Error() != tt.want {
			t.Errorf("%q: %v, want %s", tt.text, err, tt.want)
		}
	}
	if _, err := ParseNumberRange("1 m .. 2 m"); err == nil {
		t.Error("a range of lengths is read as one of numbers")
	}
}

// FuzzRange: no text makes trouble, what is read rises, and its ends are those of a range written anew.
func FuzzRange(f *testing.F) {
	for _, s := range []string{
		"4 m .. 40 m", "4 .. 40 m", "0 .. 40 %", "40 m .. 4 m", "4 m - 40 m", "0.1 .. 0.4", "..", "....", "4..", "..4 m", "1e-3..2e-3 /d", "5 .. 30 y",
		"1 .. 1/d", "4 .. 40 1/d", "-4 .. 4 m", "1e308 .. 1e309 km", "4 m\u00a0..\u00a040 m", "4 m .. 40 cm", "\xff .. \xff", "4,5 .. 5,5 m",
	} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, text string) {
		for kind := range kinds {
			r, err := ParseRange(text, kind)
			if err != nil {
				if strings.Contains(err.Error(), "\n") {
					t.Fatalf("%q: a message of several lines: %q", text, err)
				}
				continue
			}
			if !(r.Lo < r.Hi) {
				t.Fatalf("%q: %+v", text, r)
			}
			again, err := ParseRange(Format(r.Lo, kind)+" .. "+Format(r.Hi, kind), kind)
			if err != nil || again.Lo != r.Lo || again.Hi != r.Hi {
				t.Fatalf("%q: %+v, written anew %+v, %v", text, r, again, err)
			}
		}
		if r, err := ParseNumberRange(text); err == nil && !(r.Lo < r.Hi) {
			t.Fatalf("%q: %+v", text, r)
		}
	})
}
