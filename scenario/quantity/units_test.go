package quantity

import (
	"regexp"
	"strings"
	"testing"
)

// TestUsualSlips holds what is said of quantities as people write them, and that what is to be written instead is read.
func TestUsualSlips(t *testing.T) {
	for _, tt := range []struct {
		text string
		kind Kind
		want string // of the message, what is to be written
	}{
		{"4.0 metres", Length, "4.0 m"}, {"13 feet", Length, "13 ft"}, {"13'", Length, "13 ft"}, {"4 yd", Length, "3.658 m"},
		{"0.011 /day", Rate, "0.011 /d"}, {"0.011 1/day", Rate, "0.011 /d"}, {"0.011 per day", Rate, "0.011 /d"},
		{"0.011 d-1", Rate, "0.011 /d"}, {"0.011 d^-1", Rate, "0.011 /d"}, {"0.011 d⁻¹", Rate, "0.011 /d"}, {"0.011 / d", Rate, "0.011 /d"},
		{"1.1 %/d", Rate, "0.011 /d"}, {"1.1 % per day", Rate, "0.011 /d"}, {"1.1 %", Rate, "0.011 /d"},
		{"90 days", Rate, "0.01111 /d"}, {"90 d", Rate, "0.01111 /d"}, {"2 y", Rate, "0.001369 /d"},
		{"5x10^-7 m/s", Conductivity, "5e-7 m/s"}, {"5·10-7 m/s", Conductivity, "5e-7 m/s"}, {"5 × 10⁻⁷ m/s", Conductivity, "5e-7 m/s"},
		{"5,2*10^-7 m/s", Conductivity, "5.2e-7 m/s"}, {"2x10^3 m", Length, "2e3 m"},
		{"5e-7 m/sec", Conductivity, "5e-7 m/s"}, {"0.044 m/day", Conductivity, "0.044 m/d"}, {"5e-7 m.s-1", Conductivity, "5e-7 m/s"},
		{"5e-7 m s^-1", Conductivity, "5e-7 m/s"}, {"5e-4 m/h", Conductivity, "0.012 m/d"}, {"5e-4 mm/s", Conductivity, "0.0432 m/d"},
		{"8 percent", Share, "8 %"}, {"8 pct", Share, "8 %"}, {"80 ‰", Share, "8 %"}, {"8", Share, "8 %"},
		{"11 degrees", Angle, "11 deg"}, {"11°30'", Angle, "11.5 deg"}, {"0.192 rad", Angle, "11 deg"}, {"1:5", Angle, "11.31 deg"},
		{"0.2", Angle, "11.31 deg"}, {"20 %", Angle, "11.31 deg"},
		{"19.5 kN/m^3", UnitWeight, "19.5 kN/m3"}, {"19.5 KN/m³", UnitWeight, "19.5 kN/m3"}, {"1950 kg/m3", UnitWeight, "19.13 kN/m3"},
		{"5 kN/m2", Stress, "5 kPa"}, {"5 kN/m²", Stress, "5 kPa"}, {"5000 Pa", Stress, "5 kPa"},
		{"10 days", Duration, "10 d"}, {"2 weeks", Duration, "14 d"}, {"3 yrs", Duration, "3 y"},
		{"12'000 m2", Area, "12000 m2"}, {"12.000,5 m2", Area, "12000.5 m2"}, {"12,000.5 m2", Area, "12000.5 m2"}, {"12000 sqm", Area, "12000 m2"}, {"12000 m^2", Area, "12000 m2"},
		{"3.5-4.5 m", Length, "3.5 m"}, {"3.5 to 4.5 m", Length, "3.5 m"}, {"3.5 m – 4.5 m", Length, "3.5 m"}, {"4 ± 0.5 m", Length, "4 m"}, {"8 m and 12 m", Length, "8 m"}, {"8 m; 12 m", Length, "8 m"},
		{"10^-7 m/s", Conductivity, "1e-7 m/s"}, {"10⁻⁷ m/s", Conductivity, "1e-7 m/s"}, {"10**-7 m s-1", Conductivity, "1e-7 m/s"}, {"10-7 m/s", Conductivity, "1e-7 m/s"},
		{"1/120 d", Rate, "0.008333 /d"}, {"1/120 days", Rate, "0.008333 /d"}, {"1/120 per day", Rate, "0.008333 /d"}, {"7*10^-8 s^-1", Rate, "7e-8 /s"},
		{"11.5 ft / 3.5 m", Length, "11.5 ft"}, {"3 to 4 metres", Length, "3 m"}, {"7.6 m below ground", Length, "7.6 m"},
		{"9/2 m", Length, "4.5 m"}, {"4.0 m,", Length, "4.0 m"}, {"4.0 m;", Length, "4.0 m"}, {"4.0 m (guess)", Length, "4.0 m"}, {"418.0 m asl", Length, "418.0 m"},
		{"4.0 m// guess", Length, "4.0 m"}, {"4.0 m# guess", Length, "4.0 m # guess"}, {"~4 m", Length, "4 m"}, {"ca. 4 m", Length, "4 m"}, {"“4.0 m”", Length, "4.0 m"}, {">4 m", Length, "4 m"},
		{"4.0 M", Length, "4.0 m"}, {"40 mm/yr", Flux, "0.1095 mm/d"},
	} {
		_, err := Parse(tt.text, tt.kind)
		if err == nil {
			t.Errorf("%q is read", tt.text)
			continue
		}
		_, write, _ := strings.Cut(err.Error(), "; write ")
		got := regexp.MustCompile(`,? (or|if|and) .*|, and .*`).ReplaceAllString(write, "")
		if got = strings.TrimSuffix(got, ","); got != tt.want {
			t.Errorf("%q: want %q to be written, got %q of %v", tt.text, tt.want, got, err)
		}
		quantity, _, _ := strings.Cut(got, " #")
		if _, err := Parse(quantity, tt.kind); err != nil {
			t.Errorf("%q: what is to be written is not read: %v", tt.text, err)
		}
	}
	for text, want := range map[string]string{
		"0.02 m3/s": "is a discharge, and a rate is wanted here, the share of a store that leaves in a time", "2 l/s": "is a discharge", "1e-7 m/s": "is a conductivity",
		"4.0 m 12 cm": "", "3 furlongs": "unknown unit", "1 /furlong": "unknown unit", "1 ": "has no unit", "e-7 /d": "is not a rate",
	} {
		if _, err := Parse(text, Rate); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: %v", text, err)
		}
	}
	if _, err := Parse("4.0 m 12 cm", Length); err == nil || !strings.HasSuffix(err.Error(), "one number with one unit is wanted, such as 12 m") {
		t.Error(err)
	}
}
