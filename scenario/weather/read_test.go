package weather

import (
	"bytes"
	"compress/gzip"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"

	"quietslope/scenario/fault"
)

// daily is the source of most tests: a daily record w.csv with rain and evapotranspiration.
func daily() Source {
	return Source{
		Path: "w.csv", Name: "w.csv", Time: "date", Format: "YYYY-MM-DD",
		Rain: Column{"rain", "mm"}, PET: &Column{"pet", "mm"}, Missing: []string{"", "NA"},
	}
}

// hourly is a record of rain alone.
func hourly() Source {
	return Source{Path: "w.csv", Name: "w.csv", Time: "time", Format: "YYYY-MM-DD hh:mm", Rain: Column{"rain", "mm"}}
}

func readText(src Source, text string) (*Record, error) {
	return read(context.Background(), src, strings.NewReader(text), int64(len(text)), maxRows)
}

// times joins a header and rows with the given times and no rain.
func times(header string, stamps ...string) string {
	var b strings.Builder
	b.WriteString(header + "\n")
	for _, s := range stamps {
		b.WriteString(s + ",0\n")
	}
	return b.String()
}

func TestRead(t *testing.T) {
	iso := hourly()
	iso.Format = "iso"
	const plain = "date,rain,pet\n2020-02-28,1.5,0.3\n2020-02-29,0,0.4\n2020-03-01,12,0\n"
	for _, tt := range []struct {
		name  string
		src   Source
		text  string
		first string // RFC 3339
		step  string
		rain  []float64
		pet   []float64
	}{
		{"daily over a leap day", daily(), plain, "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"no line end at the end", daily(), strings.TrimSuffix(plain, "\n"), "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"byte-order mark and CRLF", daily(), "\ufeff" + strings.ReplaceAll(plain, "\n", "\r\n"), "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"blank lines at the end", daily(), plain + "\n  \n,,\n\n", "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"semicolons and decimal commas", daily(), strings.NewReplacer(",", ";", ".", ",").Replace(plain), "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"semicolons and points", daily(), strings.ReplaceAll(plain, ",", ";"), "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"tabs and decimal commas", daily(), strings.NewReplacer(",", "\t", ".", ",").Replace(plain), "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0, 12}, []float64{0.3, 0.4, 0}},
		{"blanks around cells", daily(), " date , rain,pet \n 2020-02-28 ,  1.5, 0.3\n2020-02-29,0,0.4\n", "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0}, []float64{0.3, 0.4}},
		{"quoted fields", daily(), "note,\"date\",rain,\"pet\"\n\"a, \"\"b\"\"\nand c\",2020-02-28,\"1.5\",0.3\n, \"2020-02-29\" ,0,0.4\n", "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0}, []float64{0.3, 0.4}},
		{"the separator that has the columns", daily(), "date;rain;pet;a,b,c,d,e\n2020-02-28;1.5;0.3;\n2020-02-29;0;0.4;\n", "2020-02-28T00:00:00Z", "1 d", []float64{1.5, 0}, []float64{0.3, 0.4}},
		{"not a leap year", hourlyOf("YYYY-MM-DD"), times("time,rain", "1900-02-28", "1900-03-01", "1900-03-02"), "1900-02-28T00:00:00Z", "1 d", []float64{0, 0, 0}, nil},
		{"minutes over new year", hourly(), times("time,rain", "1999-12-31 23:59", "2000-01-01 00:00"), "1999-12-31T23:59:00Z", "1 min", []float64{0, 0}, nil},
		{"quarters of an hour", hourly(), times("time,rain", "1999-12-31 23:45", "2000-01-01 00:00", "2000-01-01 00:15"), "1999-12-31T23:45:00Z", "15 min", []float64{0, 0, 0}, nil},
		{"ninety seconds", hourlyOf("YYYYMMDDhhmmss"), times("time,rain", "19991231235830", "20000101000000"), "1999-12-31T23:58:30Z", "90 s", []float64{0, 0}, nil},
		{"five hours", hourlyOf("DD.MM.YYYY hh"), times("time,rain", "31.12.1999 20", "01.01.2000 01"), "1999-12-31T20:00:00Z", "5 h", []float64{0, 0}, nil},
		{"before 1970", hourly(), times("time,rain", "1931-01-01 00:00", "1931-01-01 01:00"), "1931-01-01T00:00:00Z", "1 h", []float64{0, 0}, nil},
		{"iso with the clocks changed", iso, times("time,rain", "2019-03-31T01:00:00+01:00", "2019-03-31T03:00:00+02:00", "2019-03-31T02:00:00.000Z"), "2019-03-31T01:00:00+01:00", "1 h", []float64{0, 0, 0}, nil},
		{"iso in small letters", iso, times("time,rain", "2019-03-31t01:00:00z", "2019-03-31 02:00:00-00:00"), "2019-03-31T01:00:00Z", "1 h", []float64{0, 0}, nil},
		{"iso west of Greenwich", iso, times("time,rain", "2019-03-31T23:00:00-05:30", "2019-04-01T00:00:00-05:30"), "2019-03-31T23:00:00-05:30", "1 h", []float64{0, 0}, nil},
		{"numbers in every spelling", hourlyOf("YYYY-MM-DD"), "time,rain\n2020-01-01,+1.50\n2020-01-02,.5\n2020-01-03,5.\n2020-01-04,1.25e1\n2020-01-05,1E-1\n2020-01-06,-0\n2020-01-07,0.1000000000000000055511151231257827\n",
			"2020-01-01T00:00:00Z", "1 d", []float64{1.5, 0.5, 5, 12.5, 0.1, 0, 0.1}, nil},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r, err := readText(tt.src, tt.text)
			if err != nil {
				t.Fatal(err)
			}
			if got := r.First.Format(time.RFC3339); got != tt.first {
				t.Errorf("first step starts %s, want %s", got, tt.first)
			}
			if got := r.StepText(); got != tt.step {
				t.Errorf("step %s, want %s", got, tt.step)
			}
			if d := cmp.Diff(tt.rain, r.Rain); d != "" {
				t.Errorf("rain: %s", d)
			}
			if d := cmp.Diff(tt.pet, r.PET); d != "" {
				t.Errorf("pet: %s", d)
			}
			for _, v := range r.Rain {
				if math.Signbit(v) {
					t.Errorf("rain of %v", v)
				}
			}
			sum := sha256.Sum256([]byte(tt.text))
			if want := hex.EncodeToString(sum[:]); r.SHA256 != want {
				t.Errorf("hash %s, want %s", r.SHA256, want)
			}
		})
	}
}

func hourlyOf(format string) Source {
	src := hourly()
	src.Format = format
	return src
}

// TestSteps reads records of every step from a minute to a day that divides a day, and some that do not.
func TestSteps(t *testing.T) {
	for m := 1; m <= 1440; m++ {
		if 1440%m != 0 && m%97 != 0 {
			continue
		}
		at := time.Date(2020, 2, 28, 7, 13, 0, 0, time.UTC)
		var b strings.Builder
		b.WriteString("time,rain\n")
		for i := range 5 {
			fmt.Fprintf(&b, "%s,%d\n", at.Add(time.Duration(i*m)*time.Minute).Format("2006-01-02 15:04"), i)
		}
		r, err := readText(hourly(), b.String())
		if err != nil {
			t.Fatalf("%d min: %v", m, err)
		}
		if r.Step != time.Duration(m)*time.Minute || !r.First.Equal(at) || len(r.Rain) != 5 {
			t.Errorf("%d min: %v from %v, %d rows", m, r.Step, r.First, len(r.Rain))
		}
	}
}

func TestUnitsOfARecord(t *testing.T) {
	const text = "time,rain\n2020-01-01 00:00,37\n2020-01-01 00:15,0\n"
	for unit, want := range map[string]float64{"mm": 37, "0.1 mm": 3.7, "mm/h": 9.25, "in": 37 * 25.4, "mm/d": 37. / 96, "0.01in": 37 * 25.4 / 100} {
		src := hourly()
		src.Rain.Unit = unit
		r, err := readText(src, text)
		if err != nil {
			t.Fatalf("%s: %v", unit, err)
		}
		if r.Rain[0] != want {
			t.Errorf("37 in %s is %v mm, want %v", unit, r.Rain[0], want)
		}
	}
}

func TestStamps(t *testing.T) {
	end := hourly()
	end.StampEnd = true
	endDaily := daily()
	endDaily.StampEnd = true
	iso := hourlyOf("iso")
	for _, tt := range []struct {
		name                 string
		src                  Source
		text                 string
		start, stamp, stamp1 string // of the first step, and of row 1
		iso                  string // of row 1
	}{
		{"start", hourly(), times("time,rain", "2020-01-01 00:00", "2020-01-01 01:00"), "2020-01-01T00:00:00Z", "2020-01-01 00:00", "2020-01-01 01:00", "2020-01-01T01:00"},
		{"end", end, times("time,rain", "2020-01-01 00:00", "2020-01-01 01:00"), "2019-12-31T23:00:00Z", "2020-01-01 00:00", "2020-01-01 01:00", "2020-01-01T01:00"},
		{"daily", hourlyOf("MM/DD/YYYY"), times("time,rain", "12/31/2019", "01/01/2020"), "2019-12-31T00:00:00Z", "12/31/2019", "01/01/2020", "2020-01-01"},
		{"end of a day", endDaily, "date,rain,pet\n2020-01-01,0,0\n2020-01-02,0,0\n", "2019-12-31T00:00:00Z", "2020-01-01", "2020-01-02", "2020-01-02"},
		{"days from nine", hourly(), times("time,rain", "2020-01-01 09:00", "2020-01-02 09:00"), "2020-01-01T09:00:00Z", "2020-01-01 09:00", "2020-01-02 09:00", "2020-01-02T09:00"},
		{"with seconds", hourlyOf("DD.MM.YYYY hh:mm:ss Uhr"), times("time,rain", "01.02.2020 00:00:30 Uhr", "01.02.2020 00:01:30 Uhr"), "2020-02-01T00:00:30Z", "01.02.2020 00:00:30 Uhr", "01.02.2020 00:01:30 Uhr", "2020-02-01T00:01:30"},
		{"iso", iso, times("time,rain", "2019-10-27T02:00:00+02:00", "2019-10-27T02:00:00+01:00"), "2019-10-27T02:00:00+02:00", "2019-10-27T02:00:00+02:00", "2019-10-27T03:00:00+02:00", "2019-10-27T03:00:00+02:00"},
		{"iso in UTC", iso, times("time,rain", "2019-10-27T02:00:00Z", "2019-10-27T03:00:00Z"), "2019-10-27T02:00:00Z", "2019-10-27T02:00:00Z", "2019-10-27T03:00:00Z", "2019-10-27T03:00:00Z"},
		{"iso days", iso, times("time,rain", "2019-10-27T00:00:00+01:00", "2019-10-28T00:00:00+01:00"), "2019-10-27T00:00:00+01:00", "2019-10-27T00:00:00+01:00", "2019-10-28T00:00:00+01:00", "2019-10-28"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			r, err := readText(tt.src, tt.text)
			if err != nil {
				t.Fatal(err)
			}
			got := []string{r.First.Format(time.RFC3339), r.Stamp(0), r.Stamp(1), r.ISO(1)}
			if d := cmp.Diff([]string{tt.start, tt.stamp, tt.stamp1, tt.iso}, got); d != "" {
				t.Error(d)
			}
		})
	}
	if got := (&Record{First: time.Date(2020, 1, 1, 0, 0, 0, 0, time.UTC), Step: time.Hour}).Stamp(1); got != "2020-01-01T01:00" {
		t.Errorf("stamp of a record made by hand: %s", got)
	}
}

func TestMissingCodes(t *testing.T) {
	src := daily()
	src.Missing = []string{"", "NA", "-999", "9999,9", "NaN", "---"}
	// Every row but the first lacks one of the two values.
	const text = "date;rain;pet\n2020-01-01;1;1\n2020-01-02;;1\n2020-01-03;1; NA\n2020-01-04;-999.0;1\n2020-01-05;1;-9.99e2\n" +
		"2020-01-06;9999.90;1\n2020-01-07;NaN;1\n2020-01-08; --- ;1\n"
	_, err := readText(src, text)
	const want = `w.csv:3: 7 steps without values, in 1 gap; complete the record, cut it to its longest stretch without gaps, 2020-01-01 to 2020-01-01, or let weather.gaps fill them (zero, or month mean):
    2020-01-02 to 2020-01-08, 7 steps: no rain or pet from line 3`
	if err == nil || err.Error() != want {
		t.Errorf("got %v\nwant %s", err, want)
	}
	src.Missing = []string{"na"}
	_, err = readText(src, "date,rain,pet\n2020-01-01,NA,1\n2020-01-02,1,1\n")
	if err == nil || !strings.Contains(err.Error(), `"NA" is not a number; if it stands for a missing value, list it in weather.missing`) {
		t.Errorf("a code in other letters: %v", err)
	}
}

// refused holds the message about a record against what is wanted of it.
func refused(t *testing.T, src Source, text, want string) {
	t.Helper()
	r, err := readText(src, text)
	if err == nil {
		t.Fatalf("accepted: %+v", r)
	}
	if d := cmp.Diff(want, err.Error()); d != "" {
		t.Error(d)
	}
	if fe := (*fault.Error)(nil); !errors.As(err, &fe) {
		t.Errorf("%T is not a fault.Error", err)
	}
}

// TestRefusals holds the exact text of every refusal.
func TestRefusals(t *testing.T) {
	days := func(rows ...string) string { return "date,rain,pet\n" + strings.Join(rows, "\n") + "\n" }
	hours := func(stamps ...string) string { return times("time,rain", stamps...) }
	end := hourly()
	end.StampEnd = true
	iso := hourlyOf("iso")
	rate := hourly()
	rate.Rain.Unit = "mm/h"
	same := daily()
	same.PET = &Column{"rain", "mm"}
	badUnits := daily()
	badUnits.Format, badUnits.Rain.Unit, badUnits.PET.Unit = "yyyy-mm-dd", "kg/m2", ""
	long := strings.Repeat("x", 70_000)
	for _, tt := range []struct {
		name string
		src  Source
		text string
		want string
	}{
		// The file as such.
		{"empty", daily(), "", "w.csv: the file is empty"},
		{"only a byte-order mark", daily(), "\ufeff", "w.csv: the file is empty"},
		{"only blank lines", daily(), "\n\n \n", "w.csv: the file is empty"},
		{"header only", daily(), "date,rain,pet\n", "w.csv: the file has a header but no rows"},
		{"one row", daily(), days("2020-01-01,1,2"), "w.csv:2: this is the only row; a record needs two at least, and a study some years of them"},
		{"NUL", daily(), days("2020-01-01,1,2", "2020-01-02,\x001,2"), "w.csv:3: the file is not text: it has NUL bytes; save the table as CSV text in UTF-8"},
		{"zeros without end", daily(), strings.Repeat("\x00", 200_000), "w.csv:1: the file is not text: it has NUL bytes; save the table as CSV text in UTF-8"},
		{"UTF-16", daily(), "\xff\xfed\x00a\x00", "w.csv: the file is text in UTF-16; save the table as CSV text in UTF-8"},
		{"spreadsheet", daily(), "PK\x03\x04\x14", "w.csv: the file is a spreadsheet or a zip archive; save the table as CSV text in UTF-8"},
		{"long line", daily(), days("2020-01-01,1,2", long), "w.csv:3: the line is longer than 64 kB; is this the right file?"},
		{"long header", daily(), long, "w.csv:1: the line is longer than 64 kB; is this the right file?"},
		{"long field", daily(), days("2020-01-01,1,2", "2020-01-02,1,"+long[:257]),
			`w.csv:3: field 3 is longer than 256 bytes ("xxxxxxxxxxxxxxxxxxxx"…); is a quote or a separator missing?`},
		{"carriage returns alone", daily(), "date,rain,pet\r2020-01-01,1,2\r", "w.csv:1: the lines end in a carriage return alone; save the file with line feeds"},
		{"blank first line", daily(), "\n" + days("2020-01-01,1,2"), "w.csv:1: the line is blank; the first line must be the header with the names of the columns"},
		{"blank lines between", daily(), days("2020-01-01,1,2", "", "", "2020-01-02,1,2"), "w.csv:3: the line is blank, but rows follow in line 5; delete blank lines"},
		{"blank lines without end", daily(), days("2020-01-01,1,2", strings.Repeat("\n", 10_001)), "w.csv:3: from here on there are more than 10000 blank lines"},

		// The header.
		{"no such column", daily(), "date,rain_mm,Pet\n2020-01-01,1,2\n",
			"w.csv:1: column \"rain\": the header has no such column, only \"date\", \"rain_mm\", \"Pet\"\n" +
				"w.csv:1: column \"pet\": the header has no such column, only \"date\", \"rain_mm\", \"Pet\"; is \"Pet\" meant?"},
		{"no header", daily(), "2020-01-01,1,2\n2020-01-02,1,2\n",
			`w.csv:1: the header has none of the columns "date", "rain", "pet", only "2020-01-01", "1", "2"; the first line must be the header, and this one has numbers`},
		{"no separator", daily(), "date rain pet\n2020-01-01 1 2\n",
			`w.csv:1: the first line must be the header with the names of the columns ("date", "rain", "pet"), but it has no comma, semicolon or tab to separate them`},
		{"text above the header", daily(), "Station 7\nrain in mm, pet too\n\n" + days("2020-01-01,1,2"),
			`w.csv:1: the first line is not the header; line 4 has the columns "date", "rain", "pet". Delete the lines above it; text before the header is not supported yet`},
		{"name twice", daily(), "date,rain,rain,pet\n2020-01-01,1,1,2\n", `w.csv:1: column "rain": the header has this name twice, in columns 2 and 3; rename one`},
		{"one column for two", same, days("2020-01-01,1,2"), `w.csv: the study names column "rain" both for rain and for pet`},
		{"quotes in the header", daily(), "date,\"rain,pet\n", `w.csv:1: the first line must be the header with the names of the columns ("date", "rain", "pet"), but it has quotes that do not fit`},
		{"format and units", badUnits, days("2020-01-01,1,2"),
			"w.csv: column \"date\": \"yyyy-mm-dd\" is not a time format: \"yyyy\" is none of YYYY MM DD hh mm ss; write \"YYYY-MM-DD\"\n" +
				"w.csv: column \"rain\": unknown unit \"kg/m2\"; write \"mm\"\n" +
				"w.csv: column \"pet\": the unit is empty; use a depth per step (mm, cm, in), a rate (mm/h, mm/d, in/h), or a number and one of these, such as \"0.1 mm\""},

		// Rows.
		{"too few fields", daily(), days("2020-01-01,1,2", "2020-01-02,1", "2020-01-03,1,2"), "w.csv:3: the row has 2 fields where the header has 3"},
		{"one field", daily(), days("2020-01-01,1,2", "2020-01-02", "2020-01-03,1,2"), "w.csv:3: the row has 1 field where the header has 3"},
		{"cut off", daily(), "date,rain,pet\n2020-01-01,1,2\n2020-01-02,1,2\n2020-01-03,1", "w.csv:4: the row has 2 fields where the header has 3; it is the last line: the file may have been cut off"},
		{"too many fields", daily(), days("2020-01-01,1,2", "2020-01-02,1,5,2", "2020-01-03,1,2"),
			"w.csv:3: the row has 4 fields where the header has 3; numbers with a decimal comma need a point instead, or columns separated by ; or tabs"},
		{"quote inside", daily(), days("2020-01-01,1,2", "2020-01-02,1\",2", "2020-01-03,1,2"),
			"w.csv:3: there is a quote inside field 2; put the whole field in quotes and double the quotes inside it"},
		{"text after a quote", daily(), days("2020-01-01,1,2", "2020-01-02,\"1\"0,2", "2020-01-03,1,2"), "w.csv:3: there is text after the closing quote of field 2"},
		{"quote not closed", daily(), days("2020-01-01,1,2", "2020-01-02,\"1,2"), "w.csv:3: a quote is opened but never closed"},

		// Values.
		{"decimal comma", daily(), days("2020-01-01,\"1,5\",2", "2020-01-02,1,2"),
			`w.csv:2: column "rain": "1,5" has a decimal comma in a file whose columns are separated by commas; write 1.5, or separate the columns by ; or tabs`},
		{"thousands", daily(), "date;rain;pet\n2020-01-01;1.234,5;2\n2020-01-02;1;2\n",
			`w.csv:2: column "rain": "1.234,5" is not a number; write it without a thousands mark, with a point as decimal mark`},
		{"word", daily(), days("2020-01-01,dry,2", "2020-01-02,1,2 mm"),
			"w.csv:2: column \"rain\": \"dry\" is not a number; if it stands for a missing value, list it in weather.missing, as in missing: [\"\", \"NA\", \"dry\"]\n" +
				"w.csv:3: column \"pet\": \"2 mm\" is a number with something after it; write 2 alone, and its unit in the study"},
		{"blank cell", hourly(), "time,rain\n2020-01-01 00:00,\n2020-01-01 01:00,1\n",
			`w.csv:2: column "rain": "" is not a number; if a blank cell stands for a missing value, list "" in weather.missing`},
		{"NaN and Inf", daily(), days("2020-01-01,NaN,-inf", "2020-01-02,1,+Infinity"),
			"w.csv:2: column \"rain\": \"NaN\" is not accepted as a value; if it stands for a missing value, list it in weather.missing, as in missing: [\"\", \"NA\", \"NaN\"]\n" +
				"w.csv:2: column \"pet\": \"-inf\" is not accepted as a value; if it stands for a missing value, list it in weather.missing, as in missing: [\"\", \"NA\", \"-inf\"] (and in 1 more row; also \"+Infinity\")"},
		{"hexadecimal", daily(), days("2020-01-01,0x1p3,2", "2020-01-02,1,2"),
			`w.csv:2: column "rain": "0x1p3" is not a number; if it stands for a missing value, list it in weather.missing, as in missing: ["", "NA", "0x1p3"]`},
		{"too large a number", daily(), days("2020-01-01,1e999,2", "2020-01-02,1,2"), `w.csv:2: column "rain": "1e999" is too large for a number`},
		{"negative rain", daily(), days("2020-01-01,-1,2", "2020-01-02,-1,2", "2020-01-03,-0.5,2", "2020-01-04,-1,2"),
			`w.csv:2: column "rain": "-1" is negative rain; a negative code for a missing value belongs in weather.missing, and a trace of rain is written as 0 (and in 3 more rows; also "-0.5")`},
		{"negative pet", daily(), days("2020-01-01,1,-0.02", "2020-01-02,1,2"),
			`w.csv:2: column "pet": "-0.02" is negative evapotranspiration; a negative code for a missing value belongs in weather.missing, and dew is written as 0`},
		{"rain of a day", daily(), days("2020-01-01,2000,2", "2020-01-02,2000.1,2"),
			`w.csv:3: column "rain": "2000.1" is 2000.1 mm of rain in a step; more than 2000 mm has never fallen in a day, so check weather.columns.rain.unit`},
		{"rain of a step", rate, "time,rain\n2020-01-01 00:00,2001\n2020-01-01 01:00,1\n2020-01-01 02:00,1\n",
			`w.csv:2: column "rain": "2001" is 2001 mm of rain in a step; more than 2000 mm has never fallen in a day, so check weather.columns.rain.unit`},
		{"rain of a day in parts", hourly(), "time,rain\n2020-01-01 23:00,900\n2020-01-02 00:00,900\n2020-01-02 01:00,900\n2020-01-02 02:00,201\n2020-01-02 03:00,900\n",
			`w.csv:5: column "rain": with "201" the rain of this day adds up to 2001 mm; more than 2000 mm has never fallen in a day, so check weather.columns.rain.unit (and in 1 more row)`},
		{"rain of a day stamped at the end", end, "time,rain\n2020-01-01 23:00,600\n2020-01-02 00:00,900\n2020-01-02 01:00,900\n2020-01-02 02:00,201\n2020-01-02 03:00,900\n",
			`w.csv:6: column "rain": with "900" the rain of this day adds up to 2001 mm; more than 2000 mm has never fallen in a day, so check weather.columns.rain.unit`},
		{"pet of a day", daily(), days("2020-01-01,1,50", "2020-01-02,1,51"),
			`w.csv:3: column "pet": "51" is 51 mm/d; evapotranspiration above 50 mm/d is not possible, so check weather.columns.pet.unit`},

		// Times.
		{"30 February", daily(), days("2020-02-29,1,2", "2020-02-30,1,2", "2020-03-01,1,2"), `w.csv:3: column "date": "2020-02-30" does not exist: February 2020 has 29 days`},
		{"29 February", daily(), days("2019-02-28,1,2", "2019-02-29,1,2", "2019-03-01,1,2"), `w.csv:3: column "date": "2019-02-29" does not exist: 2019 is not a leap year`},
		{"29 February 1900", daily(), days("1900-02-28,1,2", "1900-02-29,1,2", "1900-03-01,1,2"), `w.csv:3: column "date": "1900-02-29" does not exist: 1900 is not a leap year`},
		{"31 April", daily(), days("2019-04-30,1,2", "2019-04-31,1,2", "2019-05-01,1,2"), `w.csv:3: column "date": "2019-04-31" does not exist: April 2019 has 30 days`},
		{"month 13", daily(), days("2019-12-31,1,2", "2019-13-01,1,2"), `w.csv:3: column "date": "2019-13-01" has no month 13; write the format as YYYY-DD-MM if that is the day`},
		{"year 0219", daily(), days("0219-12-31,1,2", "2020-01-01,1,2", "2020-01-02,1,2"), `w.csv:2: column "date": "0219-12-31" is in the year 219; years from 1600 to 2500 are read`},
		{"hour 24", hourly(), hours("2020-01-01 23:00", "2020-01-01 24:00", "2020-01-02 01:00"), `w.csv:3: column "time": "2020-01-01 24:00" has the hour 24; write 00 of the next day`},
		{"hour 25", hourly(), hours("2020-01-01 23:00", "2020-01-01 25:00", "2020-01-02 01:00"), `w.csv:3: column "time": "2020-01-01 25:00" has the hour 25; hours run from 00 to 23`},
		{"minute 60", hourly(), hours("2020-01-01 23:00", "2020-01-01 23:60", "2020-01-02 01:00"), `w.csv:3: column "time": "2020-01-01 23:60" has the minute 60; minutes run from 00 to 59`},
		{"second 60", iso, hours("2020-01-01T23:00:00Z", "2020-01-01T23:59:60Z", "2020-01-02T01:00:00Z"), `w.csv:3: column "time": "2020-01-01T23:59:60Z" has the second 60; seconds run from 00 to 59`},
		{"no time", daily(), days("2020-01-01,1,2", ",1,2", "2020-01-03,1,2"), `w.csv:3: column "date": "" is no time; every row needs one`},
		{"another format", daily(), days("01/02/2020,1,2", "2020-1-2,1,2"),
			`w.csv:2: column "date": "01/02/2020" does not match the format YYYY-MM-DD, in which a time reads "2019-03-31"; write the format as DD/MM/YYYY if the days come first, or MM/DD/YYYY if the months do (and in 1 more row)`},
		{"letters in a time", daily(), days("2020-01-01,1,2", "2020-Ja-02,1,2", "2020-01-03,1,2"),
			`w.csv:3: column "date": "2020-Ja-02" does not match the format YYYY-MM-DD, in which a time reads "2019-03-31"`},
		{"iso without offset", iso, hours("2020-01-01T00:00:00", "2020-01-01T01:00:00Z", "2020-01-01T02:00:00Z"),
			`w.csv:2: column "time": "2020-01-01T00:00:00" has no offset from UTC, which the format iso wants, such as 2019-03-31T14:05:00+01:00; without offsets write the format as YYYY-MM-DDThh:mm:ss`},
		{"iso with a fraction", iso, hours("2020-01-01T00:00:00.5Z", "2020-01-01T01:00:00.Z", "2020-01-01T02:00:00.0"),
			"w.csv:2: column \"time\": \"2020-01-01T00:00:00.5Z\" has a fraction of a second that is not zero, or no offset after it; write whole seconds such as 2019-03-31T14:05:00+01:00 (and in 2 more rows)"},
		{"iso with a wrong offset", iso, hours("2020-01-01T00:00:00+24:00", "2020-01-01T01:00:00+0100"),
			"w.csv:2: column \"time\": \"2020-01-01T00:00:00+24:00\" has an offset from UTC that cannot be read; write Z or one such as +01:00 (and in 1 more row)"},
		{"iso dates", iso, hours("2020-01-01", "2020-01-02 00:00"),
			"w.csv:2: column \"time\": \"2020-01-01\" does not match the format iso, in which a time reads 2019-03-31T14:05:00+01:00; for dates alone write the format as YYYY-MM-DD\n" +
				"w.csv:3: column \"time\": \"2020-01-02 00:00\" has neither seconds nor an offset from UTC, which the format iso wants, such as 2019-03-31T14:05:00+01:00; without both write the format as YYYY-MM-DD hh:mm"},
		{"iso without seconds", iso, hours("2008-03-01T02:00+01:00", "2008-03-01T03:00Z", "2008-03-01T25:00Z", "2008-03-01T02:00+0100"),
			"w.csv:2: column \"time\": \"2008-03-01T02:00+01:00\" has no seconds, which the format iso wants; write 2008-03-01T02:00:00+01:00. A format such as YYYY-MM-DDThh:mm reads times without seconds, but also without an offset (and in 1 more row)\n" +
				"w.csv:4: column \"time\": \"2008-03-01T25:00Z\" has the hour 25; hours run from 00 to 23\n" +
				"w.csv:5: column \"time\": \"2008-03-01T02:00+0100\" does not match the format iso, in which a time reads 2019-03-31T14:05:00+01:00"},
		{"iso without offset but with a blank", iso, hours("2008-03-01 02:00:00", "2008-03-01 03:00:00"),
			`w.csv:2: column "time": "2008-03-01 02:00:00" has no offset from UTC, which the format iso wants, such as 2019-03-31T14:05:00+01:00; without offsets write the format as YYYY-MM-DD hh:mm:ss (and in 1 more row)`},
		{"iso 30 February", iso, hours("2020-02-30T00:00:00Z", "2020-03-01T00:00:00Z", "2020-03-02T00:00:00Z"),
			`w.csv:2: column "time": "2020-02-30T00:00:00Z" does not exist: February 2020 has 29 days`},

		// Step and order.
		{"weeks", daily(), days("2020-01-01,1,2", "2020-01-08,1,2"), "w.csv: the rows are 7 d apart; steps run from 1 min to 1 d, or are calendar months"},
		{"half minutes", hourlyOf("YYYY-MM-DD hh:mm:ss"), hours("2020-01-01 00:00:00", "2020-01-01 00:00:30"), "w.csv: the rows are 30 s apart; steps run from 1 min to 1 d, or are calendar months"},
		{"all the same", daily(), days("2020-01-01,1,2", "2020-01-01,1,2", "2020-01-01,1,2"), `w.csv:3: column "date": "2020-01-01" repeats line 2, and so do all others; is this the right column?`},
		{"newest first", daily(), days("2020-01-03,1,2", "2020-01-02,1,2", "2020-01-01,1,2"), `w.csv:3: column "date": "2020-01-02" comes before that of line 2; put the rows in the order of time, oldest first`},
		{"repeat", daily(), days("2020-01-01,1,2", "2020-01-02,1,2", "2020-01-02,1,2", "2020-01-03,1,2"),
			`w.csv:4: column "date": "2020-01-02" repeats line 3; every time must be one step after the one before`},
		{"backwards", daily(), days("2020-01-01,1,2", "2020-01-02,1,2", "2020-01-04,1,2", "2020-01-03,1,2", "2020-01-05,1,2", "2020-01-06,1,2"),
			`w.csv:5: column "date": "2020-01-03" comes before "2020-01-04" in line 4; every time must be one step after the one before`},
		{"a year mistyped", daily(), days("2020-01-01,1,2", "2020-01-02,1,2", "2120-01-03,1,2", "2020-01-04,1,2", "2020-01-05,1,2"),
			`w.csv:5: column "date": "2020-01-04" comes before "2120-01-03" in line 4; every time must be one step after the one before (and in 1 more row)`},
		{"another step for once", hourly(), hours("2020-01-01 00:00", "2020-01-01 01:00", "2020-01-01 02:30", "2020-01-01 03:30"),
			`w.csv:4: column "time": "2020-01-01 02:30" comes 90 min after "2020-01-01 01:00" in line 3, but the step is 1 h; every time must be one step after the one before`},
		{"another step for good", hourlyOf("YYYY-MM-DD hh:mm"), hours("2019-12-30 00:00", "2019-12-31 00:00", "2020-01-01 00:00", "2020-01-02 00:00", "2020-01-03 00:00", "2020-01-03 01:00", "2020-01-03 02:00", "2020-01-03 03:00"),
			`w.csv:7: column "time": "2020-01-03 01:00" comes 1 h after "2020-01-03 00:00" in line 6, but the step is 1 d; every time must be one step after the one before (and in 2 more rows)`},
		{"a longer step for good", hourly(), hours("2020-01-01 00:00", "2020-01-01 01:00", "2020-01-01 02:00", "2020-01-01 03:00", "2020-01-01 04:00", "2020-01-02 04:00", "2020-01-03 04:00", "2020-01-04 04:00"),
			`w.csv:9: column "time": "2020-01-04 04:00": the step changes from 1 h to 1 d after line 6; every step must be the same`},
		{"clocks put back", hourly(), hours("2019-10-27 00:00", "2019-10-27 01:00", "2019-10-27 02:00", "2019-10-27 02:00", "2019-10-27 03:00"),
			`w.csv:5: column "time": "2019-10-27 02:00" repeats line 4; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso`},
		{"clocks put back in half hours", hourly(), hours("2019-10-27 01:30", "2019-10-27 02:00", "2019-10-27 02:30", "2019-10-27 02:00", "2019-10-27 02:30", "2019-10-27 03:00"),
			`w.csv:5: column "time": "2019-10-27 02:00" comes before "2019-10-27 02:30" in line 4; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso (and in 1 more row)`},
		{"clocks put forward", hourly(), hours("2019-03-31 00:00", "2019-03-31 01:00", "2019-03-31 03:00", "2019-03-31 04:00"),
			"w.csv:4: 1 step without values, in 1 gap; complete the record, cut it to its longest stretch without gaps, 2019-03-31 00:00 to 2019-03-31 01:00, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2019-03-31 02:00 to 2019-03-31 02:00, 1 step: no rows before line 4; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso"},
		{"an hour repeated in June", hourly(), hours("2019-06-30 01:00", "2019-06-30 02:00", "2019-06-30 02:00", "2019-06-30 03:00"),
			`w.csv:4: column "time": "2019-06-30 02:00" repeats line 3; every time must be one step after the one before`},
		{"days of local midnight", iso, hours("2019-03-30T00:00:00+01:00", "2019-03-31T00:00:00+01:00", "2019-04-01T00:00:00+02:00", "2019-04-02T00:00:00+02:00", "2019-04-03T00:00:00+02:00"),
			`w.csv:4: column "time": "2019-04-01T00:00:00+02:00" comes 23 h after "2019-03-31T00:00:00+01:00" in line 3, but the step is 1 d; the offset from UTC changes here: keep one all year, so that days are 24 h long`},

		{"clocks put back every year", hourly(), hours(slices.Concat(
			[]string{"2019-10-27 01:00", "2019-10-27 02:00", "2019-10-27 02:00", "2019-10-27 03:00"}, []string{"2020-10-25 01:00", "2020-10-25 02:00", "2020-10-25 02:00", "2020-10-25 03:00"},
			[]string{"2021-10-31 01:00", "2021-10-31 02:00", "2021-10-31 02:00", "2021-10-31 03:00"})...),
			`w.csv:4: column "time": "2019-10-27 02:00" repeats line 3; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso (and in 2 more rows)`},
		{"every other row unreadable", daily(), days("2020-01-01,1,2", "2020-01-02,1,2", "2020-01-03,1,2", "x", "2020-01-05,1,2", "x", "2020-01-07,1,2", "x", "2020-01-09,1,2", "x", "2020-01-11,1,2"),
			"w.csv:5: the row has 1 field where the header has 3 (and in 3 more rows)"},
		{"months read as days", hourlyOf("MM/DD/YYYY"), hours("11/01/2020", "12/01/2020", "13/01/2020", "14/01/2020", "30/01/2020", "31/01/2020", "01/02/2020", "02/02/2020", "03/02/2020"),
			`w.csv:4: column "time": "13/01/2020" has no month 13; write the format as DD/MM/YYYY if that is the day (and in 3 more rows)`},
		{"centuries apart", hourlyOf("YYYY-MM-DD"), hours("1600-01-01", "2500-01-01"), "w.csv: the rows are 900 years apart; steps run from 1 min to 1 d, or are calendar months"},
		{"off the step by centuries", hourly(), hours("1600-01-01 00:00", "1600-01-01 01:00", "2400-01-01 01:30", "2400-01-01 02:30"),
			`w.csv:4: column "time": "2400-01-01 01:30" comes 420759390 min after "1600-01-01 01:00" in line 3, but the step is 1 h; every time must be one step after the one before`},

		// Gaps.
		{"clocks put forward every year", hourly(), hours("2019-03-31 00:00", "2019-03-31 01:00", "2019-03-31 03:00", "2019-03-31 04:00", "2019-03-31 05:00", "2020-03-29 00:00", "2020-03-29 01:00", "2020-03-29 03:00", "2020-03-29 04:00"),
			"w.csv:4: 8732 steps without values, in 3 gaps; complete the record, cut it to its longest stretch without gaps, 2019-03-31 03:00 to 2019-03-31 05:00, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2019-03-31 02:00 to 2019-03-31 02:00, 1 step: no rows before line 4; if these are clock times of a place with summer time, give them in UTC, or with their offset in the format iso\n" +
				"    2019-03-31 06:00 to 2020-03-28 23:00, 8730 steps: no rows before line 7\n" +
				"    2020-03-29 02:00 to 2020-03-29 02:00, 1 step: no rows before line 9"},
		{"gaps", daily(), days("2020-01-01,NA,2", "2020-01-02,1,2", "2020-01-03,1,2", "2020-01-06,1,2", "2020-01-07,1,", "2020-01-08,,", "2020-01-09,1,2"),
			"w.csv:2: 5 steps without values, in 3 gaps; complete the record, cut it to its longest stretch without gaps, 2020-01-02 to 2020-01-03, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2020-01-01 to 2020-01-01, 1 step: no rain from line 2\n" +
				"    2020-01-04 to 2020-01-05, 2 steps: no rows before line 5\n" +
				"    2020-01-07 to 2020-01-08, 2 steps: no rain or pet from line 6"},
		{"rows and values", daily(), days("2020-01-01,1,2", "2020-01-02,1,2", "2020-01-04,1,", "2020-01-05,1,"),
			"w.csv:4: 3 steps without values, in 1 gap; complete the record, cut it to its longest stretch without gaps, 2020-01-01 to 2020-01-02, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2020-01-03 to 2020-01-05, 3 steps: no rows or no values near line 4"},
		{"no value at all", daily(), days("2020-01-01,1,", "2020-01-02,1,NA"),
			"w.csv:2: 2 steps without values, in 1 gap; complete the record, or let weather.gaps fill them (zero, or month mean):\n" +
				"    2020-01-01 to 2020-01-02, 2 steps: no pet from line 2"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			refused(t, tt.src, tt.text, tt.want)
		})
	}
}

// TestManyGaps and TestManyProblems: ten are listed, and all are counted or said to be more.
func TestManyGaps(t *testing.T) {
	var b strings.Builder
	b.WriteString("date,rain,pet\n")
	for i := range 40 {
		if i%3 != 2 {
			fmt.Fprintf(&b, "%s,1,1\n", time.Date(2020, 1, 1+i, 0, 0, 0, 0, time.UTC).Format(time.DateOnly))
		}
	}
	_, err := readText(daily(), b.String())
	lines := strings.Split(err.Error(), "\n")
	if len(lines) != 12 || lines[11] != "    and 3 more gaps" || !strings.HasPrefix(lines[0], "w.csv:4: 13 steps without values, in 13 gaps;") {
		t.Errorf("%s", err)
	}
}

func TestManyProblems(t *testing.T) {
	const bad = "2020-02-01,-1,-1\n2020-02-02,x,x\n2020-02-03,NaN,NaN\n2020-02-30,1,1\n2021-02-29,1,1\n20-02-06,1,1\n"
	for _, again := range []int{1, 40} {
		_, err := readText(daily(), "date,rain,pet\n2020-01-31,1,1\n"+strings.Repeat(bad, again+1))
		lines := strings.Split(err.Error(), "\n")
		if len(lines) != 11 || lines[10] != "w.csv: these are the first 10 problems; there may be more" {
			t.Fatal(err)
		}
		for _, l := range lines[:9] {
			if !strings.HasSuffix(l, " (and in "+fault.Count(again, "more row")+")") {
				t.Error(l)
			}
		}
		want := `w.csv:9: column "date": "2020-02-01" comes before "2020-02-03" in line 5; every time must be one step after the one before`
		if !strings.HasPrefix(lines[9], want) {
			t.Error(lines[9])
		}
	}
}

// TestKinds: the rows of one kind are one problem, whatever their texts, and a few of these are named.
func TestKinds(t *testing.T) {
	var b strings.Builder
	b.WriteString("date,rain,pet\n")
	for i := range 40 {
		fmt.Fprintf(&b, "%s,-%d,%d\n", time.Date(2020, 1, 1+i, 0, 0, 0, 0, time.UTC).Format(time.DateOnly), i/2+1, 51+i)
	}
	_, err := readText(daily(), b.String()+"\n2020-02-10,0,0\n\n2020-02-11,0,0\n")
	const want = `w.csv:2: column "rain": "-1" is negative rain; a negative code for a missing value belongs in weather.missing, and a trace of rain is written as 0 (and in 39 more rows; also "-2", "-3", "-4" and others)
w.csv:2: column "pet": "51" is 51 mm/d; evapotranspiration above 50 mm/d is not possible, so check weather.columns.pet.unit (and in 39 more rows)
w.csv:42: the line is blank, but rows follow in line 43; delete blank lines (and in 1 more place)`
	if d := cmp.Diff(want, err.Error()); d != "" {
		t.Error(d)
	}
}

// TestLongRecord reads all the days that can be read, which no time.Duration could count.
func TestLongRecord(t *testing.T) {
	var b strings.Builder
	b.WriteString("time,rain\n")
	for at := time.Date(firstYear, 1, 1, 0, 0, 0, 0, time.UTC); at.Year() <= lastYear; at = at.AddDate(0, 0, 1) {
		b.WriteString(at.Format(time.DateOnly) + ",2\n")
	}
	r, err := readText(hourlyOf("YYYY-MM-DD"), b.String())
	if err != nil {
		t.Fatal(err)
	}
	last := len(r.Rain) - 1
	if got := []string{r.ISO(last), r.Stamp(last), r.Start(last + 1).Format(time.DateOnly)}; !slices.Equal(got, []string{"2500-12-31", "2500-12-31", "2501-01-01"}) {
		t.Errorf("ends on %s", got)
	}
	years := r.Audit().Years
	if len(years) != lastYear-firstYear+1 {
		t.Fatalf("%d years", len(years))
	}
	for i, y := range years {
		length := 365.0
		if isLeap(y.Year) {
			length = 366
		}
		if y.Year != firstYear+i || y.RainMM != 2*length || y.ValidShare != 1 {
			t.Errorf("%+v", y)
		}
	}
}

// endless is a pipe that never ends: its rows, or one line.
type endless struct {
	head string
	row  func(i int) string
	n    int
	left string
}

func (e *endless) Read(p []byte) (int, error) {
	if e.left == "" {
		if e.n == 0 {
			e.left = e.head
		}
		var b strings.Builder
		b.WriteString(e.left)
		for b.Len() < 1<<16 {
			b.WriteString(e.row(e.n))
			e.n++
		}
		e.left = b.String()
	}
	n := copy(p, e.left)
	e.left = e.left[n:]
	return n, nil
}

func TestEndless(t *testing.T) {
	at := time.Date(1990, 1, 1, 0, 0, 0, 0, time.UTC)
	good := func(i int) string { return at.Add(time.Duration(i)*time.Minute).Format("2006-01-02 15:04") + ",0\n" }
	for _, tt := range []struct {
		name string
		src  io.Reader
		want string
	}{
		{"good rows", &endless{head: "time,rain\n", row: good}, "w.csv:50002: there are more than 50000 rows; is this the right file?"},
		{"bad rows", &endless{head: "time,rain\n", row: func(i int) string { return "yes\n" }}, "w.csv:50002: there are more than 50000 rows; is this the right file?"},
		{"the same bad value", &endless{head: "time,rain\n", row: func(i int) string { return strings.TrimSuffix(good(i), "0\n") + "x\n" }},
			"w.csv:50002: there are more than 50000 rows; is this the right file?"},
		{"a line without end", &endless{head: "time,rain\n", row: func(int) string { return "1234567890" }}, "w.csv:2: the line is longer than 64 kB; is this the right file?"},
		{"a quote without end", &endless{head: "time,rain\n2020-01-01 00:00,\"", row: func(int) string { return "1\n" }},
			`w.csv:2: field 2 is longer than 256 bytes`},
		{"blank lines", &endless{head: "time,rain\n", row: func(int) string { return "\n" }}, "w.csv:2: from here on there are more than 10000 blank lines"},
	} {
		t.Run(tt.name, func(t *testing.T) {
			_, err := read(t.Context(), hourly(), tt.src, 0, 50_000)
			if err == nil || !strings.Contains(err.Error(), tt.want) {
				t.Errorf("got %v, want %s", err, tt.want)
			}
		})
	}
}

func compress(t testing.TB, text string) []byte {
	var b bytes.Buffer
	z := gzip.NewWriter(&b)
	if _, err := z.Write([]byte(text)); err != nil {
		t.Fatal(err)
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestFiles(t *testing.T) {
	dir := t.TempDir()
	file := func(name string, b []byte) Source {
		src := daily()
		src.Path, src.Name = filepath.Join(dir, name), "data/"+name
		if b != nil {
			if err := os.WriteFile(src.Path, b, 0o600); err != nil {
				t.Fatal(err)
			}
		}
		return src
	}
	var b strings.Builder
	b.WriteString("date,rain,pet\n")
	for i := range 3000 {
		fmt.Fprintf(&b, "%s,%d.%d,1\n", time.Date(2000, 1, 1+i, 0, 0, 0, 0, time.UTC).Format(time.DateOnly), i%7*i%11, i%10)
	}
	text := b.String()
	want, err := Read(t.Context(), file("plain.csv", []byte(text)))
	if err != nil {
		t.Fatal(err)
	}
	packed := compress(t, text)
	for _, name := range []string{"packed.csv.gz", "packed.csv"} {
		got, err := Read(t.Context(), file(name, packed))
		if err != nil {
			t.Fatal(err)
		}
		if d := cmp.Diff(want.Rain, got.Rain); d != "" || len(got.Rain) != 3000 {
			t.Errorf("%s: %s", name, d)
		}
		if sum := sha256.Sum256(packed); got.SHA256 != hex.EncodeToString(sum[:]) {
			t.Errorf("%s: the hash is not that of the bytes on disk", name)
		}
	}
	half := append(compress(t, text[:30_000]), compress(t, text[30_000:])...)
	if got, err := Read(t.Context(), file("two.gz", half)); err != nil || len(got.Rain) != 3000 {
		t.Errorf("two gzip members: %v", err)
	} else if sum := sha256.Sum256(half); got.SHA256 != hex.EncodeToString(sum[:]) {
		t.Error("two gzip members: the hash is not that of the bytes on disk")
	}

	flipped := bytes.Clone(packed)
	flipped[len(flipped)-6] ^= 1
	for _, tt := range []struct {
		src  Source
		want string // the line of a broken archive depends on the compressor
	}{
		{file("no.csv", nil), "data/no.csv: there is no such file; the path of a weather file starts at the folder of the study file"},
		{file("plain.csv/below.csv", nil), "data/plain.csv/below.csv: this is not the path of a file"},
		{file("", nil), "data/: this is a folder, not a file"},
		{file("plain.csv.GZ", []byte(text)), "data/plain.csv.GZ: the name ends in .gz but the contents are not compressed by gzip; rename the file or compress it"},
		{file("short.gz", packed[:len(packed)-100]), "the compressed file ends too early, so part of it is missing; fetch it again"},
		{file("tail.gz", packed[:len(packed)-4]), "the compressed file ends too early, so part of it is missing; fetch it again"},
		{file("head.gz", packed[:5]), "data/head.gz: the compressed file ends too early, so part of it is missing; fetch it again"},
		{file("flipped.gz", flipped), "the compressed file is damaged after this line; fetch it again"},
		{file("tailed.gz", append(bytes.Clone(packed), "more of something else"...)), "data/tailed.gz:3001: the compressed file is damaged after this line; fetch it again"},
		{file("empty.gz", compress(t, "")), "data/empty.gz: the file is empty"},
		{file("nothing.gz", []byte{}), "data/nothing.gz: the file is empty"},
	} {
		_, err := Read(t.Context(), tt.src)
		fe := (*fault.Error)(nil)
		if !errors.As(err, &fe) || !strings.HasSuffix(err.Error(), tt.want) || !strings.HasPrefix(err.Error(), tt.src.Name+":") {
			t.Errorf("%s: got %v, want %s", tt.src.Name, err, tt.want)
		}
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, err := Read(ctx, daily())
	if !errors.Is(err, context.Canceled) || !strings.HasPrefix(err.Error(), "w.csv: ") {
		t.Errorf("got %v", err)
	}
	if fe := (*fault.Error)(nil); errors.As(err, &fe) {
		t.Error("a cancelled reading is not the file's fault")
	}
	// In the middle of rows.
	ctx, cancel = context.WithCancel(t.Context())
	at := time.Date(1990, 1, 1, 0, 0, 0, 0, time.UTC)
	rows := &endless{head: "time,rain\n", row: func(i int) string {
		if i == 20_000 {
			cancel()
		}
		return at.Add(time.Duration(i)*time.Minute).Format("2006-01-02 15:04") + ",0\n"
	}}
	if _, err := read(ctx, hourly(), rows, 0, maxRows); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
}

// A disk that fails is not the file's fault, and the message names the file all the same.
func TestFailingDisk(t *testing.T) {
	broken := errors.New("input/output error")
	_, err := read(t.Context(), daily(), io.MultiReader(strings.NewReader("date,rain,pet\n2020-01-01,1,2\n"), failing{broken}), 0, maxRows)
	if fe := (*fault.Error)(nil); !errors.Is(err, broken) || errors.As(err, &fe) || err.Error() != "w.csv: input/output error" {
		t.Errorf("got %v", err)
	}
}

type failing struct{ err error }

func (f failing) Read([]byte) (int, error) { return 0, f.err }

// TestWriteRead writes records of any step, format, separator and values, and reads them back equal.
func TestWriteRead(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(2, 60).Draw(t, "rows")
		format := rapid.SampledFrom([]string{"YYYY-MM-DD hh:mm:ss", "DD/MM/YYYY hh.mm.ss", "YYYYMMDDhhmmss", "ss mm hh DD MM YYYY", "iso"}).Draw(t, "format")
		sep := rapid.SampledFrom([]string{",", ";", "\t"}).Draw(t, "separator")
		step := time.Duration(rapid.IntRange(60, 86400).Draw(t, "step")) * time.Second
		first := time.Unix(rapid.Int64Range(-11_676_000_000, 16_725_000_000).Draw(t, "first"), 0).UTC() // years 1600 to 2500
		zone := ""
		src := Source{Path: "w", Name: "w", Time: "t", Format: format, Rain: Column{"r", "mm"}, StampEnd: rapid.Bool().Draw(t, "end")}
		if format == "iso" {
			minutes := rapid.IntRange(-14*60, 14*60).Draw(t, "offset")
			first = first.In(time.FixedZone("", minutes*60))
			zone = first.Format("-07:00")
		}
		rain := rapid.SliceOfN(rapid.Float64Range(0, 2), n, n).Draw(t, "rain")
		var pet []float64
		if rapid.Bool().Draw(t, "pet") {
			pet = rapid.SliceOfN(rapid.Float64Range(0, 0.999*maxPETPerDay/float64(day)*float64(step)), n, n).Draw(t, "pet")
			src.PET = &Column{"p", "mm"}
		}
		l, err := newLayout(format)
		if err != nil {
			t.Fatal(err)
		}
		comma := sep != "," && rapid.Bool().Draw(t, "comma")
		number := func(v float64) string {
			s := fmt.Sprint(v)
			if comma {
				s = strings.Replace(s, ".", ",", 1)
			}
			return s
		}
		var b strings.Builder
		b.WriteString("t" + sep + "r")
		if pet != nil {
			b.WriteString(sep + "p")
		}
		for i := range rain {
			b.WriteString("\n" + l.text(first.Add(time.Duration(i)*step), zone) + sep + number(rain[i]))
			if pet != nil {
				b.WriteString(sep + number(pet[i]))
			}
		}
		r, err := readText(src, b.String())
		if err != nil {
			t.Fatal(err)
		}
		if src.StampEnd {
			first = first.Add(-step)
		}
		if !r.First.Equal(first) || r.Step != step {
			t.Fatalf("from %v by %v, want %v by %v", r.First, r.Step, first, step)
		}
		if d := cmp.Diff(rain, r.Rain) + cmp.Diff(pet, r.PET); d != "" {
			t.Fatal(d)
		}
		for i, line := range strings.Split(b.String(), "\n")[1:] {
			if stamp, _, _ := strings.Cut(line, sep); r.Stamp(i) != stamp {
				t.Fatalf("row %d is stamped %s, want %s", i, r.Stamp(i), stamp)
			}
		}
	})
}

// FuzzRead: no panic, every error names the file, and what is accepted is as Read promises.
func FuzzRead(f *testing.F) {
	const hours = "time,rain\n2019-10-27 01:00,0\n2019-10-27 02:00,1\n2019-10-27 02:00,1\n"
	for _, format := range []string{"YYYY-MM-DD", "YYYY-MM-DD hh:mm", "iso", "DD.MM.YYYY", "yyyy"} {
		f.Add([]byte("time,rain,pet\n2020-02-28,1.5,0.3\n2020-02-29,0,0.4\n2020-03-01,12,0\n"), format, "mm", "NA", true, false, byte(0))
		f.Add([]byte(hours), format, "mm/h", "-999", false, true, byte(0))
		f.Add([]byte("time;rain\n28.02.2020;1,5\n29.02.2020;\n"), format, "0.1 mm", "", false, false, byte(1))
		f.Add([]byte("time,rain\n2020-01-01T00:00:00+01:00,0\n2020-01-01T00:00:00Z,\"0\"\n"), format, "in", "", false, false, byte(0))
		f.Add([]byte("time,\"ra\"\"in\"\n\"a\nb\",1e5\n"), format, "in/h", "", false, false, byte(0))
		f.Add(compress(f, hours), format, "cm", "", false, false, byte(0))
	}
	for gaps := range byte(3) {
		f.Add([]byte("time,rain,pet\n2020-01-30,1,0.3\n2020-01-31,NA,0.4\n2020-02-01,1e-9,NA\n2020-02-04,12,0\n2020-02-05,3,1\n2020-02-06,NA,NA\n2020-02-07,1,1\n"), "YYYY-MM-DD", "mm", "NA", true, false, gaps)
		f.Add([]byte("time,rain\n2019-03-31 00:00,1\n2019-03-31 01:00,2\n2019-03-31 03:00,3\n2019-03-31 04:00,0\n"), "YYYY-MM-DD hh:mm", "mm/h", "NA", false, true, gaps)
		f.Add([]byte("time,rain,pet\n2019-02,3,1\n2019-03,5,NA\n2019-04,5,1\n2019-05,5,1\n2019-06,5,1\n2019-07,5,1\n2019-08,5,1\n2019-09,5,1\n2019-10,5,1\n2019-11,0,0\n2019-12,5,1\n2020-01,5,1\n2020-02,NA,1\n2020-03,4,1\n"), "YYYY-MM", "mm/d", "NA", true, false, gaps)
		f.Add([]byte("time,rain\n2019-01-31,3\n2019-02-28,5\n2019-03-31,5\n2019-05-31,5\n"), "YYYY-MM-DD", "in", "", false, true, gaps)
		f.Add([]byte("time,rain\n2019-02-01T00:00:00+01:00,3\n2019-03-01T00:00:00+01:00,5\n2019-03-31T23:00:00Z,5\n"), "iso", "mm", "", false, true, gaps)
	}
	f.Fuzz(func(t *testing.T, text []byte, format, unit, missing string, pet, end bool, gaps byte) {
		src := Source{Path: "w.csv", Name: "w.csv", Time: "time", Format: format, Rain: Column{"rain", unit}, StampEnd: end, Missing: []string{missing},
			Gaps: []Gaps{GapsRefuse, GapsZero, GapsMonthMean}[gaps%3]}
		if pet {
			src.PET = &Column{"pet", unit}
		}
		r, err := read(context.Background(), src, bytes.NewReader(text), int64(len(text)), 10_000)
		if err != nil {
			var at func(err error)
			at = func(err error) {
				if many, ok := err.(interface{ Unwrap() []error }); ok {
					for _, e := range many.Unwrap() {
						at(e)
					}
					return
				}
				if fe := (*fault.Error)(nil); !errors.As(err, &fe) || fe.File != "w.csv" || fe.Text == "" {
					t.Errorf("%T: %v", err, err)
				}
			}
			at(err)
			return
		}
		if !r.Monthly() && (r.Step < minStep || r.Step > maxStep) || len(r.Rain) < 2 || pet != (r.PET != nil) || pet && len(r.PET) != len(r.Rain) {
			t.Fatalf("%+v", r)
		}
		most := float64(maxRainPerDay)
		if r.Monthly() {
			most = maxRainPerMonth
		}
		for i := range r.Rain {
			if !(r.Rain[i] >= 0 && r.Rain[i] <= most) || pet && !(r.PET[i] >= 0 && r.PET[i] <= maxPETPerDay*r.Span(i, i+1)*(1+1e-12)) {
				t.Fatalf("step %d: rain %v", i, r.Rain[i])
			}
		}
		// Its stamps are one step apart and read back.
		for i := 1; i < len(r.Rain); i++ {
			a, _, ok := r.layout.parse([]byte(r.Stamp(i - 1)))
			b, _, ok2 := r.layout.parse([]byte(r.Stamp(i)))
			if !ok || !ok2 || !r.Monthly() && b-a != int64(r.Step/time.Second) || r.Monthly() && (b-a < shortestMonth || b-a > longestMonth) {
				t.Fatalf("%s to %s", r.Stamp(i-1), r.Stamp(i))
			}
		}
		checkFilled(t, r, src.Gaps)
		r.Audit()
	})
}

// checkFilled holds what was filled against what was measured.
func checkFilled(t *testing.T, r *Record, gaps Gaps) {
	t.Helper()
	if gaps == GapsRefuse && r.Filled != nil {
		t.Fatalf("filled %+v", r.Filled)
	}
	columns := []struct {
		x      []float64
		filled func(*Gap) bool
	}{{r.Rain, rainFilled}, {r.PET, petFilled}}
	for k, g := range r.Filled {
		if g.From < 0 || g.To <= g.From || g.To > len(r.Rain) || !g.Rain && !g.PET || g.PET && r.PET == nil {
			t.Fatalf("filled %+v of %d steps", r.Filled, len(r.Rain))
		}
		if k == 0 {
			continue
		}
		if last := r.Filled[k-1]; g.From < last.To || g.From == last.To && g.Rain == last.Rain && g.PET == last.PET {
			t.Fatalf("filled %+v", r.Filled)
		}
	}
	for _, c := range columns {
		least, most := map[time.Month]float64{}, map[time.Month]float64{}
		intensity := func(i int) float64 { return c.x[i] / r.Span(i, i+1) }
		var measured int
		valid := make([]bool, len(c.x))
		for i := range valid {
			valid[i] = true
		}
		for k := range r.Filled {
			if g := &r.Filled[k]; c.filled(g) {
				clear(valid[g.From:g.To])
			}
		}
		for i, ok := range valid {
			if !ok {
				continue
			}
			measured++
			m, v := r.Start(i).Month(), intensity(i)
			if old, ok := least[m]; !ok || v < old {
				least[m] = v
			}
			most[m] = max(most[m], v)
		}
		if 2*measured < len(c.x) {
			t.Fatalf("%d of %d steps were measured", measured, len(c.x))
		}
		for i, ok := range valid {
			m, v := r.Start(i).Month(), intensity(i)
			switch {
			case ok:
			case gaps == GapsZero && v != 0:
				t.Fatalf("step %d is filled with %v", i, c.x[i])
			case gaps == GapsMonthMean && !(v >= least[m]*(1-1e-12) && v <= most[m]*(1+1e-12)):
				t.Fatalf("step %d is filled with %v, outside of %v to %v", i, v, least[m], most[m])
			}
		}
	}
}

// BenchmarkRead reads forty years of hours as the commonest files have them.
func BenchmarkRead(b *testing.B) {
	const rows = 350_640
	at := time.Date(1984, 1, 1, 0, 0, 0, 0, time.UTC)
	var text strings.Builder
	text.WriteString("time,rain,pet\n")
	for i := range rows {
		fmt.Fprintf(&text, "%s,%.1f,%.3f\n", at.Add(time.Duration(i)*time.Hour).Format("2006-01-02 15:04"), float64(i*i%97%13)/10, float64(i%24)/100)
	}
	src := hourly()
	src.PET = &Column{"pet", "mm"}
	plain := []byte(text.String())
	for name, file := range map[string][]byte{"plain": plain, "gz": compress(b, text.String())} {
		b.Run(fmt.Sprintf("rows=%d/file=%s", rows, name), func(b *testing.B) {
			src.Path = filepath.Join(b.TempDir(), "w.csv")
			if err := os.WriteFile(src.Path, file, 0o600); err != nil {
				b.Fatal(err)
			}
			b.SetBytes(int64(len(plain)))
			b.ReportAllocs()
			for b.Loop() {
				r, err := Read(b.Context(), src)
				if err != nil || len(r.Rain) != rows {
					b.Fatal(err)
				}
			}
			b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds(), "rows/s")
		})
	}
}
