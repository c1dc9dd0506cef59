package weather

import (
	"fmt"
	"os"
	"path"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"

	"quietslope/scenario/fault"
)

// This file guesses what was meant by a time, a cell or a path that cannot be used, for messages only.

var (
	yearFirst = regexp.MustCompile(`^[0-9]{4}([-/. ]?)([0-9]{2})(?:([-/. ]?)([0-9]{2}))?([ T_].*)?$`)
	yearLast  = regexp.MustCompile(`^([0-9]{2})([-/. ])([0-9]{2})([-/. ])[0-9]{4}([ T_].*)?$`)
	clock     = regexp.MustCompile(`^([ T_])[0-9]{2}(:?)[0-9]{2}((?::?)[0-9]{2})?$`)
	oneDigit  = regexp.MustCompile(`^(?:[0-9]{1,2}[-/. ][0-9]{1,2}[-/. ][0-9]{4}|[0-9]{4}[-/. ][0-9]{1,2}[-/. ][0-9]{1,2})\b`)
	shortYear = regexp.MustCompile(`^[0-9]{1,2}[-/. ][0-9]{1,2}[-/. ][0-9]{2}\b`)
	dayNumber = regexp.MustCompile(`^[1-9][0-9]{4}(?:[.,][0-9]+)?$`)
	oneHour   = regexp.MustCompile(`[ T][0-9]:[0-9]{2}`)
	monthWord = regexp.MustCompile(`(?i)\b(?:jan|feb|mar|mär|apr|may|mai|jun|jul|aug|sep|oct|okt|nov|dec|dez)`)
	twelve    = regexp.MustCompile(`(?i)[0-9] ?[ap]\.?m\.?$`)
)

// formatsOf lists the formats that a time may be written in, two of them where day and month cannot be told apart.
func formatsOf(text string) []string {
	var dates []string
	rest := ""
	if m := yearFirst.FindStringSubmatch(text); m != nil {
		rest = m[5]
		switch second, _ := strconv.Atoi(m[2]); {
		case m[4] == "":
			dates = []string{"YYYY" + m[1] + "MM"}
		case second > 12:
			dates = []string{"YYYY" + m[1] + "DD" + m[3] + "MM"}
		default:
			dates = []string{"YYYY" + m[1] + "MM" + m[3] + "DD"}
		}
	} else if m := yearLast.FindStringSubmatch(text); m != nil {
		rest = m[5]
		first, _ := strconv.Atoi(m[1])
		second, _ := strconv.Atoi(m[3])
		if second <= 12 {
			dates = append(dates, "DD"+m[2]+"MM"+m[4]+"YYYY")
		}
		if first <= 12 {
			dates = append(dates, "MM"+m[2]+"DD"+m[4]+"YYYY")
		}
	}
	if rest != "" {
		m := clock.FindStringSubmatch(rest)
		if m == nil {
			return nil
		}
		rest = m[1] + "hh" + m[2] + "mm"
		if m[3] != "" {
			rest += m[2] + "ss"
		}
	}
	var formats []string
	for _, d := range dates {
		l, err := compile(d + rest)
		if err != nil {
			continue
		}
		if _, _, ok := l.parse([]byte(text)); ok {
			formats = append(formats, l.format)
		}
	}
	return formats
}

// meantTime says, behind a semicolon, what to do about a time that does not have the shape of the format.
func (l *layout) meantTime(text string) string {
	switch formats := formatsOf(text); {
	case dayNumber.MatchString(text):
		return "; this looks like the day number of a spreadsheet, so show the column there as a date before saving it as text"
	case strings.Trim(text, "#") == "":
		return "; a spreadsheet writes # where the column is too narrow, so widen it before saving it as text"
	case twelve.MatchString(text):
		return "; hours run from 00 to 23, without AM and PM"
	case monthWord.MatchString(text):
		return "; a month is written as a number"
	case len(formats) == 2:
		return fmt.Sprintf("; write the format as %s if the days come first, or %s if the months do", formats[0], formats[1])
	case len(formats) == 1:
		return "; write the format as " + formats[0]
	case shortYear.MatchString(text):
		return "; a year has four digits"
	case oneDigit.MatchString(text) && !yearFirst.MatchString(text) && !yearLast.MatchString(text):
		return "; day and month have two digits each"
	case oneHour.MatchString(text):
		return "; hours have two digits"
	case !strings.ContainsAny(text, "0123456789"):
		return "; delete the row if it is no step"
	}
	return ""
}

// swapped is a format with day and month in each other's place.
func swapped(format string) string {
	return strings.NewReplacer("DD", "MM", "MM", "DD").Replace(format)
}

// listed says how a code is listed as missing beside those that are. Codes longer than any that is used are left out.
func listed(code string, missing []string) string {
	if len(missing) > 8 || len(code) > 20 {
		return ""
	}
	var b strings.Builder
	for _, m := range missing {
		fmt.Fprintf(&b, "%q, ", m)
	}
	return fmt.Sprintf(", as in missing: [%s%q]", &b, code)
}

var (
	withMore   = regexp.MustCompile(`^([-+]?[0-9]+(?:[.,][0-9]+)?) *[^0-9.,eE\s-][^0-9]*$`)
	webAddress = regexp.MustCompile(`^[a-z]{3,}:/`)
	below      = regexp.MustCompile(`^[<≤] *[0-9]`)
)

// meantFile says, behind a semicolon, what may be meant by the path of a file that does not exist.
func meantFile(src Source) string {
	switch {
	case webAddress.MatchString(src.Name):
		return "; this is an address of the web: fetch the file, and name it where you put it"
	case strings.Contains(src.Name, `\`):
		return `; write / between folders, not \`
	}
	folder, base := path.Split(filepath.ToSlash(src.Name))
	if near := fault.NearestFile(src.Path, func(name string) bool { return !strings.HasSuffix(name, ".yaml") && !strings.HasSuffix(name, ".yml") }); near != "" {
		return fmt.Sprintf("; did you mean %s?", folder+near)
	}
	beside := strings.TrimSuffix(src.Path, filepath.Clean(filepath.FromSlash(src.Name)))
	if folder != "" && beside != src.Path {
		if info, err := os.Stat(beside + base); err == nil && info.Mode().IsRegular() {
			return fmt.Sprintf("; one of that name stands beside the study: write %s", base)
		}
	}
	return ""
}
