package quantity

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// TestParse checks every unit. The values are plain arithmetic on the definitions: 1 in = 25.4 mm, 1 ft = 0.3048 m,
// 1 ha = 10 000 m2, 1 y = 365.25 d.
func TestParse(t *testing.T) {
	for _, tt := range []struct {
		text string
		kind Kind
		want float64
	}{
		{"12 m", Length, 12},
		{"12m", Length, 12},
		{"-3.5 m", Length, -3.5},
		{"+3.5 m", Length, 3.5},
		{"0 m", Length, 0},
		{"-0 m", Length, 0},
		{"85 cm", Length, 0.85},
		{"850 mm", Length, 0.85},
		{"1.2 km", Length, 1200},
		{"10 in", Length, 0.254},
		{"10 ft", Length, 3.048},
		{"1e-3 m", Length, 0.001},
		{"1E+3 m", Length, 1000},
		{"120 mm", WaterDepth, 120},
		{"12 cm", WaterDepth, 120},
		{"0.12 m", WaterDepth, 120},
		{"5 in", WaterDepth, 127},
		{"1 ft", WaterDepth, 304.8},
		{"12000 m2", Area, 12000},
		{"12000 m²", Area, 12000},
		{"1.2 ha", Area, 12000},
		{"100 ft2", Area, 9.290304},
		{"10 d", Duration, 10},
		{"12 h", Duration, 0.5},
		{"36 min", Duration, 0.025},
		{"864 s", Duration, 0.01},
		{"4 y", Duration, 1461},
		{"0.02 /d", Rate, 0.02},
		{"0.02/d", Rate, 0.02},
		{"0.02 1/d", Rate, 0.02},
		{"1/d", Rate, 1},
		{"0.5 /h", Rate, 12},
		{"0.5 1/h", Rate, 12},
		{"0.001 /min", Rate, 1.44},
		{"1e-6 1/s", Rate, 0.0864},
		{"3.6525 /y", Rate, 0.01},
		{"4 mm/d", Flux, 4},
		{"4 mm/h", Flux, 96},
		{"0.1 mm/h", Flux, 2.4},
		{"1e-6 m/s", Conductivity, 0.0864},
		{"0.0002 /h", Rate, 0.0048},
		{"1 in/h", Flux, 609.6},
		{"4 mm/h", Intensity, 4},
		{"96 mm/d", Intensity, 4},
		{"1 in/h", Intensity, 25.4},
		{"0.02 m/d", Conductivity, 0.02},
		{"1e-5 m/s", Conductivity, 0.864},
		{"0.001 cm/s", Conductivity, 0.864},
		{"10 ft/d", Conductivity, 3.048},
		{"1 m2/y", Consolidation, 1},
		{"1e-7 m2/s", Consolidation, 3.15576},
		{"864 m3/d", Discharge, 864},
		{"864 m³/d", Discharge, 864},
		{"10 L/s", Discharge, 864},
		{"5 kPa", Stress, 5},
		{"19.5 kN/m3", UnitWeight, 19.5},
		{"19.5 kN/m³", UnitWeight, 19.5},
		{"11 deg", Angle, 11},
		{"11°", Angle, 11},
		{"-2 degC", Temperature, -2},
		{"-2 °C", Temperature, -2},
		{"3 mm/degC/d", DegreeDay, 3},
		{"3 mm/°C/d", DegreeDay, 3},
		{"8 %", Share, 0.08},
		{"8%", Share, 0.08},
		{"1.4 %", Share, 0.014},
		{"0", Share, 0},
		{"0.85", Share, 0.85},
		{"100 %", Share, 1},
		{"+15 %", Change, 0.15},
		{"-10 %", Change, -0.1},
		{"0 %", Change, 0},
		{"  4\u2009m ", Length, 4},
		{"4\u00a0m", Length, 4},
		{"4\u202fm", Length, 4},
		{"4\u2007m", Length, 4},
	} {
		got, err := Parse(tt.text, tt.kind)
		if err != nil || got != tt.want { // rounded once, as the literal is

			t.Errorf("Parse(%q, %v) = %v, %v, want %v", tt.text, tt.kind, got, err, tt.want)
		}
	}
}

// TestParsePowersOfTen checks that a change between metric prefixes gives the very same value.
func TestParsePowersOfTen(t *testing.T) {
	for _, pair := range [][2]string{{"0.85 m", "85 cm"}, {"0.07 m", "70 mm"}, {"4300 m", "4.3 km"}} {
		a, err := Parse(pair[0], Length)
		if err != nil {
			t.Fatal(err)
		}
		b, err := Parse(pair[1], Length)
		if err != nil || a != b {
			t.Errorf("%s is %v and %s is %v, %v", pair[0], a, pair[1], b, err)
		}
	}
	for _, pair := range [][2]string{{"7 %", "0.07"}, {"29 %", "0.29"}, {"57 %", "0.57"}} {
		a, _ := Parse(pair[0], Share)
		b, _ := Parse(pair[1], Share)
		if a != b {
			t.Errorf("%s is %v and %s is %v", pair[0], a, pair[1], b)
		}
	}
}

func TestParseErrors(t *testing.T) {
	for _, tt := range []struct {
		text string
		kind Kind
		want string
	}{
		{"3", Length, `"3" has no unit; write 3 m`},
		{"1:5", Angle, `"1:5" is a gradient, and an angle is written in deg; write 11.31 deg if one up in 5 along is meant`},
		{"1 in 2.5", Angle, `"1 in 2.5" is a gradient, and an angle is written in deg; write 21.8 deg if one up in 2.5 along is meant`},
		{"1:0", Angle, `"1:0": unknown unit ":0"; an angle is written in deg`},
		{"20 %", Angle, `"20 %" is a share, and an angle is wanted here; an angle is written in deg; write 11.31 deg if a gradient is meant`},
		{"1.95 t/m3", UnitWeight, `"1.95 t/m3" is a density, and a unit weight is wanted here; write 19.13 kN/m3`},
		{"1950 kg/m3", UnitWeight, `"1950 kg/m3" is a density, and a unit weight is wanted here; write 19.13 kN/m3`},
		{"1950 lb/ft3", UnitWeight, `"1950 lb/ft3": unknown unit "lb/ft3"; a unit weight is written in kN/m3`},
		{"3", Duration, `"3" has no unit; write 3 d`},
		{"0.02", Rate, `"0.02" has no unit; write 0.02 /d`},
		{"0", Duration, `"0" has no unit; write 0 d`},
		{"1", Share, `"1" has no unit; write 1 % or 100 %`},
		{"85", Share, `"85" has no unit; write 85 %`},
		{"-0.2", Share, `"-0.2": a share without a unit lies between 0 and 1; write it in %`},
		{"12 furlong", Length, `"12 furlong": unknown unit "furlong"; a length is written in m, mm, cm, km, in or ft`},
		{"12 M", Length, `"12 M": unknown unit "M"; write 12 m`},
		{"12 kpa", Stress, `"12 kpa": unknown unit "kpa"; write 12 kPa`},
		{"12 fortnight", Rate, `"12 fortnight": unknown unit "fortnight"; a rate is written in /d, /h, /min, /s or /y`},
		{"12 per day", Rate, `"12 per day": unknown unit "per day"; write 12 /d`},
		{"8 %", Rate, `"8 %" is a share, and a rate is wanted here; a rate is written in /d, /h, /min, /s or /y; write 0.08 /d if that share a day is meant`},
		{"90 d", Rate, `"90 d" is a time, and a rate is wanted here; a rate is written in /d, /h, /min, /s or /y; write 0.01111 /d if a time constant is meant`},
		{"0 d", Rate, `"0 d" is a time, and a rate is wanted here, the share of a store that leaves in a time; a rate is written in /d, /h, /min, /s or /y`},
		{"0.02 /d", Duration, `"0.02 /d" is a rate, and a time is wanted here; a time is written in d, s, min, h or y; write 50 d if a time constant is meant`},
		{"20 mm/h", Conductivity, `"20 mm/h" is a flux, and a conductivity is wanted here; a conductivity is written in m/d, m/s, cm/s or ft/d; write 0.48 m/d if a conductivity is meant`},
		{"0.01 m/d", Flux, `"0.01 m/d" is a conductivity, and a flux is wanted here; a flux is written in mm/d, mm/h or in/h; write 10 mm/d if a flux is meant`},
		{"4 m", Area, `"4 m" is a length, and an area is wanted here; an area is written in m2, ha or ft2`},
		{"4 m", Share, `"4 m" is a length, and a share is wanted here; a share is written in %`},
		{"1,5 m", Length, `"1,5 m": a decimal point is a full stop; write 1.5 m`},
		{"1,5", Share, `"1,5": a decimal point is a full stop; write 1.5`},
		{"1,800 m", Length, `"1,800 m": thousands are not marked, and a decimal point is a full stop; write 1800 m or 1.800 m`},
		{"12,000,000 m2", Area, `"12,000,000 m2": thousands are not marked; write 12000000 m2`},
		{"1,800.5 m", Length, `"1,800.5 m": thousands are not marked; write 1800.5 m`},
		{"1 800 m", Length, `"1 800 m": thousands are not marked; write 1800 m`},
		{"1\u202f800 m", Length, `"1\u202f800 m": thousands are not marked; write 1800 m`},
		{"1'800 m", Length, `"1'800 m": thousands are not marked; write 1800 m`},
		{"1_800 m", Length, `"1_800 m": thousands are not marked; write 1800 m`},
		{"1_8 m", Length, `"1_8 m": digits are not grouped; write 18 m`},
		{"010 m", Length, `"010 m": a number does not begin with a zero that means nothing; write 10 m`},
		{"00 m", Length, `"00 m": a number does not begin with a zero that means nothing; write 0 m`},
		{"00.5 m", Length, `"00.5 m": a number does not begin with a zero that means nothing; write 0.5 m`},
		{"0x1F m", Length, `"0x1F m": numbers are decimal; write 31 m`},
		{"-0x1F m", Length, `"-0x1F m": numbers are decimal; write 31 m`},
		{".5 m", Length, `".5 m": a digit stands before the point; write 0.5 m`},
		{"5. m", Length, `"5. m": a digit stands after the point; write 5 m`},
		{"\u22123 m", Length, `"−3 m": the minus sign is a hyphen; write -3 m`},
		{"3-4 m", Length, `"3-4 m": one value is wanted here, not two or a range; write 3 m or 4 m`},
		{"3 4 m", Length, `"3 4 m": one decimal number is wanted, such as 12 or 0.5`},
		{"10² m", Length, `"10² m": a power of ten is written with an e; write 1e2 m`},
		{"1.2.3 m", Length, `"1.2.3 m": one decimal number is wanted, such as 12 or 0.5`},
		{".inf", Length, `".inf": an infinite number is not accepted; write a length such as 12 m`},
		{"nan", Rate, `"nan": a number is wanted; write a rate such as 0.01 /d`},
		{".NaN", Share, `".NaN": a number is wanted; write a share such as 8 %`},
		{"", Length, `"" is not a length; write a number with its unit, such as 12 m`},
		{"m", Length, `"m" is not a length; write a number with its unit, such as 12 m`},
		{"deep", Length, `"deep" is not a length; write a number with its unit, such as 12 m`},
		{"1e400 m", Length, `"1e400 m": the number is too large to be read`},
		{"1e308 km", Length, `"1e308 km": the number is too large to be read`},
		{"1e99999999999999999999 m", Length, `"1e99999999999999999999 m": the number is too large to be read`},
		{"1e-400 m", Length, `"1e-400 m": the number is too small to be read; write 0 if zero is meant`},
		{"1e-99999999999999999999 m", Length, `"1e-99999999999999999999 m": the number is too small to be read; write 0 if zero is meant`},
		{"15 %", Change, `"15 %": a change carries its sign; write +15 %`},
		{"115 %", Change, `"115 %": a change carries its sign; write +15 % if the result is meant, +115 % if that much more is`},
		{"90 %", Change, `"90 %": a change carries its sign; write -10 % if the result is meant, +90 % if that much more is`},
		{"1.15", Change, `"1.15": a change carries its sign and %; write +15 % if a factor is meant`},
		{"0.9", Change, `"0.9": a change carries its sign and %; write -10 % if a factor is meant`},
		{"-15", Change, `"-15" has no unit; write -15 %`},
		{"-120 %", Change, `"-120 %": a change cannot take away more than 100 %`},
	} {
		got, err := Parse(tt.text, tt.kind)
		if err == nil || err.Error() != tt.want {
			t.Errorf("Parse(%q, %v) = %v and\n     %v\nwant %s", tt.text, tt.kind, got, err, tt.want)
		}
	}
}

func TestLongTextIsCut(t *testing.T) {
	_, err := Parse(strings.Repeat("9", 1000)+" m", Length)
	if err == nil || len(err.Error()) > 200 {
		t.Errorf("got %v", err)
	}
	_, err = Parse("1 "+strings.Repeat("q", 1000), Length)
	if err == nil || len(err.Error()) > 300 {
		t.Errorf("got %v", err)
	}
}

func TestParseNumber(t *testing.T) {
	for _, tt := range []struct {
		text, want string
		v          float64
	}{
		{text: "1800", v: 1800},
		{text: "2.4e6", v: 2.4e6},
		{text: "-3", v: -3},
		{text: "0e99999999999", v: 0},
		{text: "1_800", want: `"1_800": thousands are not marked; write 1800`},
		{text: "1,800", want: `"1,800": thousands are not marked, and a decimal point is a full stop; write 1800 or 1.800`},
		{text: "010", want: `"010": a number does not begin with a zero that means nothing; write 10`},
		{text: "0x1F", want: `"0x1F": numbers are decimal; write 31`},
		{text: ".inf", want: `".inf": an infinite number is not accepted`},
		{text: "-.INF", want: `"-.INF": an infinite number is not accepted`},
		{text: ".nan", want: `".nan": a number is wanted`},
		{text: "twelve", want: `"twelve" is not a number; write one such as 12`},
		{text: "12 m", want: `"12 m": a number without a unit is wanted here; write 12`},
		{text: "110 %", want: `"110 %": a number without a unit is wanted here; write 1.1`},
		{text: "1e400", want: `"1e400": the number is too large to be read`},
	} {
		v, err := ParseNumber(tt.text)
		if got := message(err); got != tt.want || v != tt.v {
			t.Errorf("ParseNumber(%q) = %v, %s, want %v, %s", tt.text, v, got, tt.v, tt.want)
		}
	}
}

func TestParseWhole(t *testing.T) {
	for _, tt := range []struct {
		text, want string
		v          int64
	}{
		{text: "2000", v: 2000},
		{text: "-1", v: -1},
		{text: "9007199254740991", v: 1<<53 - 1},
		{text: "9007199254740993", want: `"9007199254740993" is too large; whole numbers go up to 9007199254740991`},
		{text: "1.5", want: `"1.5" is not a whole number; write one such as 2`},
		{text: "2.0", want: `"2.0": a whole number is written in digits only; write 2`},
		{text: "2e3", want: `"2e3": a whole number is written in digits only; write 2000`},
		{text: "1e30", want: `"1e30" is too large; whole numbers go up to 9007199254740991`},
		{text: "2 000", want: `"2 000": thousands are not marked; write 2000`},
		{text: "many", want: `"many" is not a number; write one such as 12`},
	} {
		v, err := ParseWhole(tt.text)
		if got := message(err); got != tt.want || v != tt.v {
			t.Errorf("ParseWhole(%q) = %v, %s, want %v, %s", tt.text, v, got, tt.v, tt.want)
		}
	}
}

func message(err error) string {
	if err == nil {
		return ""
	}
	return err.Error()
}

func TestFormat(t *testing.T) {
	for _, tt := range []struct {
		v    float64
		kind Kind
		want string
	}{
		{12, Length, "12 m"},
		{0.1, Length, "0.1 m"},
		{-0.5, Length, "-0.5 m"},
		{0, Length, "0 m"},
		{math.Copysign(0, -1), Length, "0 m"},
		{120000, Area, "120000 m2"},
		{0.0045, Rate, "0.0045 /d"},
		{1e-9, Rate, "1e-9 /d"},
		{1.25e-9, Rate, "1.25e-9 /d"},
		{1e6, Rate, "1000000 /d"},
		{1e20, Rate, "1e20 /d"},
		{0.07, Share, "7 %"},
		{0.29, Share, "29 %"},
		{0.014, Share, "1.4 %"},
		{1, Share, "100 %"},
		{0, Share, "0 %"},
		{0.15, Change, "+15 %"},
		{-0.1, Change, "-10 %"},
		{0, Change, "+0 %"},
		{math.Inf(1), Length, "none"},
		{math.NaN(), Length, "unknown"},
	} {
		if got := Format(tt.v, tt.kind); got != tt.want {
			t.Errorf("Format(%v, %v) = %q, want %q", tt.v, tt.kind, got, tt.want)
		}
	}
}

func TestKinds(t *testing.T) {
	for k := Kind(0); k < kinds; k++ {
		if table[k].name == "" || len(table[k].units) == 0 {
			t.Errorf("kind %d has no name or no units", k)
		}
		if u := table[k].units[0]; u.mul != 0 || u.div != 0 || u.shift != 0 && u.name != "%" {
			t.Errorf("%v: the first unit is not the base unit", k)
		}
		seen := map[string]bool{}
		for _, u := range k.Units() {
			if seen[u] {
				t.Errorf("%v has %s twice", k, u)
			}
			seen[u] = true
		}
	}
	if got := Kind(99).String(); got != "Kind(99)" {
		t.Errorf("got %s", got)
	}
}

// TestFormatReadsBack draws finite values of any size, far beyond any quantity of a study.
func TestFormatReadsBack(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		kind := Kind(rapid.IntRange(0, int(kinds)-1).Draw(t, "kind"))
		v := rapid.Float64().Draw(t, "v")
		if kind == Share || kind == Change {
			v = rapid.Float64Range(-1, 1e300).Draw(t, "v")
		}
		text := Format(v, kind)
		got, err := Parse(text, kind)
		if err != nil || got != v {
			t.Fatalf("%v is written %q and read back as %v, %v", v, text, got, err)
		}
	})
}

func FuzzParse(f *testing.F) {
	for _, s := range []string{"12 m", "0.02 1/d", "8 %", "1,800 m", "0x1F", ".inf", "1 800", "3\u2009m", "1e-400 d", "\u22123 m", "°", "²", "0.5", "-", "1e", "0x", "+15 %"} {
		for k := range kinds {
			f.Add(s, int(k))
		}
	}
	f.Add("2*10"+strings.Repeat("0", 3000)+" m", 0) // nothing of it is to be repeated
	f.Fuzz(func(t *testing.T, text string, k int) {
		kind := Kind(uint(k) % uint(kinds))
		v, err := Parse(text, kind)
		if err != nil {
			if v != 0 || err.Error() == "" || len(err.Error()) > 2000 {
				t.Fatalf("%v and an error of %d bytes", v, len(err.Error()))
			}
			return
		}
		if math.IsNaN(v) || math.IsInf(v, 0) {
			t.Fatalf("%q is read as %v", text, v)
		}
		written := Format(v, kind)
		again, err := Parse(written, kind)
		if err != nil || again != v {
			t.Fatalf("%q is %v, written %q, read back as %v, %v", text, v, written, again, err)
		}
	})
}
