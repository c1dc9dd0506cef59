package weather

import (
	"math"
	"strconv"
	"testing"
	"time"

	"pgregory.net/rapid"
)

func TestCheckFormat(t *testing.T) {
	for _, f := range []string{
		"iso", "YYYY-MM-DD", "YYYYMMDD", "DD/MM/YYYY", "MM/DD/YYYY hh:mm", "DD.MM.YYYY hh:mm:ss", "YYYY-MM-DDThh:mmZ",
		"YYYYMMDDhhmm", "YYYYMMDDhh", "hh:mm DD/MM/YYYY", "YYYY-MM-DD hh:mm UTC", "YYYY-MM-DD hh:mm GMT", "DD.MM.YYYY hh Uhr", "YYYY年MM月DD日", "YYYY-MM", "MM/YYYY", "YYYYMM",
	} {
		if err := CheckFormat(f); err != nil {
			t.Error(err)
		}
	}
	for _, tt := range []struct{ format, want string }{
		{"", `"" is not a time format: it is empty; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"yyyy-mm-dd", `"yyyy-mm-dd" is not a time format: "yyyy" is none of YYYY MM DD hh mm ss; write "YYYY-MM-DD"`},
		{"YYYY-mm-DD", `"YYYY-mm-DD" is not a time format: it has no MM; write "YYYY-MM-DD"`},
		{"DD/MM/YY", `"DD/MM/YY" is not a time format: a year of two digits could be of any century, so all four are needed; write "DD/MM/YYYY"`},
		{"dd.mm.yyyy hh:mm", `"dd.mm.yyyy hh:mm" is not a time format: "dd" is none of YYYY MM DD hh mm ss; write "DD.MM.YYYY hh:mm"`},
		{"YYYY-MM-DD HH:MM", `"YYYY-MM-DD HH:MM" is not a time format: "HH" is none of YYYY MM DD hh mm ss; write "YYYY-MM-DD hh:mm"`},
		{"YYYY-MM-DDTHH:MM:SSZ", `"YYYY-MM-DDTHH:MM:SSZ" is not a time format: "HH" is none of YYYY MM DD hh mm ss; write "YYYY-MM-DDThh:mm:ssZ"`},
		{"HH:mm dd/MM/yyyy", `"HH:mm dd/MM/yyyy" is not a time format: "HH" is none of YYYY MM DD hh mm ss; write "hh:mm DD/MM/YYYY"`},
		{"D/M/YYYY", `"D/M/YYYY" is not a time format: "D" is none of YYYY MM DD hh mm ss; write "DD/MM/YYYY"`},
		{"YYYY-MM-DD hh:MM", `"YYYY-MM-DD hh:MM" is not a time format: MM stands twice; write "YYYY-MM-DD hh:mm"`},
		{"%Y-%m-%d %H:%M", `"%Y-%m-%d %H:%M" is not a time format: "Y" is none of YYYY MM DD hh mm ss; write "YYYY-MM-DD hh:mm"`},
		{"2006-01-02 15:04", `"2006-01-02 15:04" is not a time format: it has no YYYY; write "YYYY-MM-DD hh:mm"`},
		{"yyyy-MM-dd'T'HH:mm", `"yyyy-MM-dd'T'HH:mm" is not a time format: "yyyy" is none of YYYY MM DD hh mm ss; write "YYYY-MM-DDThh:mm"`},
		{"ISO 8601", `"ISO 8601" is not a time format: it has no YYYY; write "iso"`},
		{"YYYY-MM-DD hh:mm AM", `"YYYY-MM-DD hh:mm AM" is not a time format: a clock of twelve hours is not supported; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"YYYY-MM-DD :mm", `"YYYY-MM-DD :mm" is not a time format: it has mm but no hh; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"YYYY-MM-DD hh:ss", `"YYYY-MM-DD hh:ss" is not a time format: it has ss but no mm; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"YYYY-MM hh:mm", `"YYYY-MM hh:mm" is not a time format: it has hh but no DD; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"yyyy/mm", `"yyyy/mm" is not a time format: "yyyy" is none of YYYY MM DD hh mm ss; write "YYYY/MM"`},
		{"%Y-%m", `"%Y-%m" is not a time format: "Y" is none of YYYY MM DD hh mm ss; write "YYYY-MM"`},
		{"YYYY", `"YYYY" is not a time format: it has no MM; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"YYYY-MM-DD YYYY", `"YYYY-MM-DD YYYY" is not a time format: YYYY stands twice; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{" YYYY-MM-DD", `" YYYY-MM-DD" is not a time format: it begins or ends with a blank; write "YYYY-MM-DD"`},
		{"YYYY-MM-DD\nhh", `"YYYY-MM-DD\nhh" is not a time format: it has a control character; write one such as "YYYY-MM-DD hh:mm", or iso`},
		{"date", `"date" is not a time format: it has no YYYY; write one such as "YYYY-MM-DD hh:mm", or iso`},
	} {
		if err := CheckFormat(tt.format); err == nil || err.Error() != tt.want {
			t.Errorf("got  %v\nwant %s", err, tt.want)
		}
	}
}

// TestTimeParsing compares the parser with that of the standard library on every day of the calendar that is read, and one
// more at each end.
func TestTimeParsing(t *testing.T) {
	l, err := newLayout("YYYY-MM-DD hh:mm:ss")
	if err != nil {
		t.Fatal(err)
	}
	end := time.Date(lastYear+1, 1, 1, 0, 0, 0, 0, time.UTC)
	for at := time.Date(firstYear, 1, 1, 0, 0, 0, 0, time.UTC); at.Before(end); at = at.Add(25*time.Hour + 61*time.Second) {
		text := at.Format(time.DateTime)
		unix, _, ok := l.parse([]byte(text))
		if !ok || unix != at.Unix() || l.text(at, "") != text {
			t.Fatalf("%s is %d, %v", text, unix, ok)
		}
	}
	for _, text := range []string{"1599-12-31 00:00:00", "2501-01-01 00:00:00", "2020-00-01 00:00:00", "2020-01-00 00:00:00", "2020-01-01 00:00:60", "2020-01-01 00:00:0x", "2020-01-01 0x:00:00"} {
		if _, _, ok := l.parse([]byte(text)); ok {
			t.Errorf("%s is accepted", text)
		}
	}
}

func TestISOParsing(t *testing.T) {
	l, err := newLayout("iso")
	if err != nil {
		t.Fatal(err)
	}
	rapid.Check(t, func(t *rapid.T) {
		zone := time.FixedZone("", 60*rapid.IntRange(-1439, 1439).Draw(t, "offset in minutes"))
		at := time.Unix(rapid.Int64Range(-11_670_000_000, 16_720_000_000).Draw(t, "time"), 0).In(zone)
		unix, offset, ok := l.parse([]byte(at.Format(time.RFC3339)))
		if _, want := at.Zone(); !ok || unix != at.Unix() || offset != int64(want) {
			t.Fatalf("%s is %d with %d, %v", at.Format(time.RFC3339), unix, offset, ok)
		}
	})
}

// TestNumbers compares the parser with that of the standard library, which rounds correctly.
func TestNumbers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringMatching(`[+-]?([0-9]{1,20}(\.[0-9]{0,20})?|\.[0-9]{1,20})([eE][+-]?[0-9]{1,2})?`).Draw(t, "text")
		want, err := strconv.ParseFloat(text, 64)
		if err != nil {
			t.Skip()
		}
		if got, ok := parseNumber([]byte(text), false); !ok || got != want {
			t.Fatalf("%s is %v, %v; want %v", text, got, ok, want)
		}
	})
	for _, text := range []string{"", "+", "-", ".", "e5", "1e", "1e+", "1.2.3", "1,2", "1_000", "0x10", "NaN", "inf", "1e5e5", "1-2", "--1", "1 2", "１"} {
		if v, ok := parseNumber([]byte(text), false); ok {
			t.Errorf("%q is read as %v", text, v)
		}
	}
	for text, want := range map[string]float64{"1,5": 1.5, ",5": 0.5, "-1,5e1": -15, "1.5": 1.5, "0,123456789012345678": 0.123456789012345678} {
		if v, ok := parseNumber([]byte(text), true); !ok || v != want {
			t.Errorf("%q with a decimal comma is %v, %v", text, v, ok)
		}
	}
	if _, ok := parseNumber([]byte("1.234,5"), true); ok {
		t.Error("two marks are accepted")
	}
	if v, ok := parseNumber([]byte("-0e7"), false); !ok || math.Signbit(v) {
		t.Errorf("-0e7 is %v", v)
	}
}

func TestDepthUnit(t *testing.T) {
	for _, tt := range []struct {
		unit string
		v    float64
		step time.Duration
		want float64
	}{
		{"mm", 1.1, day, 1.1},
		{" mm ", 1.1, time.Hour, 1.1},
		{"cm", 1.1, day, 11},
		{"in", 2, day, 50.8},
		{"0.1 mm", 37, day, 3.7},
		{"0.01 in", 125, day, 31.75},
		{"0.2mm", 3, day, 0.6}, // 3·0.2 is not the float64 nearest to 0.6
		{"2.5 mm", 3, day, 7.5},
		{"1e-1 mm", 37, day, 3.7},
		{"mm/h", 1.5, 15 * time.Minute, 0.375},
		{"mm/h", 1.5, day, 36},
		{"mm/d", 4.8, time.Hour, 0.2},
		{"in/h", 1, 30 * time.Minute, 12.7},
		{"0.1 mm/h", 60, 10 * time.Minute, 1},
	} {
		u, err := DepthUnit(tt.unit)
		if err != nil {
			t.Error(err)
			continue
		}
		if got := u.MM(tt.v, tt.step); math.Abs(got-tt.want) > 2e-16*tt.want {
			t.Errorf("%v %s in %v is %v mm, want %v", tt.v, tt.unit, tt.step, got, tt.want)
		}
	}
	const known = `use a depth per step (mm, cm, in), a rate (mm/h, mm/d, in/h), or a number and one of these, such as "0.1 mm"`
	for unit, want := range map[string]string{
		"":          "the unit is empty; " + known,
		"m":         `unknown unit "m"; ` + known,
		"mm/month":  `unknown unit "mm/month"; ` + known,
		"degC":      `unknown unit "degC"; ` + known,
		"kg/m2":     `unknown unit "kg/m2"; write "mm"`,
		"0.1 mm/hr": `unknown unit "0.1 mm/hr"; write "0.1 mm/h"`,
		"Inches":    `unknown unit "Inches"; write "in"`,
		"0 mm":      `the number before the unit in "0 mm" must be positive and decimal, such as "0.1 mm"`,
		"-1 mm":     `the number before the unit in "-1 mm" must be positive and decimal, such as "0.1 mm"`,
		"0,1 mm":    `the number before the unit in "0,1 mm" must be positive and decimal, such as "0.1 mm"`,
		"1e-400 mm": `the number before the unit in "1e-400 mm" must be positive and decimal, such as "0.1 mm"`,
	} {
		if _, err := DepthUnit(unit); err == nil || err.Error() != want {
			t.Errorf("got  %v\nwant %s", err, want)
		}
	}
}

// FuzzTime: no format and no text panics; a text that is refused is explained; one that is accepted is what the time it
// stands for is written as, but for the spellings that RFC 3339 leaves open.
func FuzzTime(f *testing.F) {
	for _, format := range []string{"YYYY-MM-DD", "DD.MM.YYYY hh:mm", "YYYYMMDDhhmmss", "iso", "yyyy-mm-dd", "YYYY-MM", ""} {
		for _, text := range []string{"2020-02-29", "29.02.2021 24:00", "20201231235960", "2020-03-29T02:30:00+01:00", "2020-01-01t00:00:00.000z", "1599-12-31", "0000-00-00", ""} {
			f.Add(format, text)
		}
	}
	f.Fuzz(func(t *testing.T, format, text string) {
		l, err := newLayout(format)
		if err != nil {
			if err.Error() == "" {
				t.Error("a format is refused without a word")
			}
			return
		}
		unix, offset, ok := l.parse([]byte(text))
		if !ok {
			if l.explain([]byte(text)).String() == "" {
				t.Errorf("%q is refused without a word", text)
			}
			return
		}
		if y := time.Unix(unix+offset, 0).UTC().Year(); y < firstYear || y > lastYear {
			t.Errorf("%q is in the year %d", text, y)
		}
		if l.iso {
			return
		}
		if back := l.text(time.Unix(unix, 0).UTC(), ""); back != text {
			t.Errorf("%q is written back as %q", text, back)
		}
	})
}
