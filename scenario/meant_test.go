package scenario

import (
	"testing"

	"quietslope/scenario/quantity"
)

// TestMeantSum: a sum as people write it is the number that they mean, and a number that is read needs no help.
func TestMeantSum(t *testing.T) {
	for text, want := range map[string]string{
		"€ 2000": "2000", "2000 €": "2000", "95 €/m": "95", "95 EUR per metre": "95", "USD 12.50": "12.5", "about 300": "300",
		"1,800 EUR": "1800", "£1,234,567.50": "1234567.5", "1.234.567,50": "1234567.5", "12,50 €": "12.5", "1 200 000 kr": "1200000", "4’000": "4000",
		"2.4 million": "2400000", "2,4 Mio. €": "2400000", "2.4M": "2400000", "2.4MEUR": "2400000", "1 bn": "1000000000", "2.3 mln": "2300000",
		"3k": "3000", "3 k€": "3000", "TEUR 3": "3000", "95.-": "95", "4'000.--": "4000", "1.800,00 EUR": "1800",
		"1.800 EUR": "1800", "2.4m": "2.4", // said with what else it could be
		"1800": "", "95.5": "", "2.4e6": "", "0": "", "to be quoted": "", "": "", "-5 EUR": "", "1,2,3": "", "95,5": "",
	} {
		got, _ := meantSum(text)
		if got != want {
			t.Errorf("%q is taken for %q, want %q", text, got, want)
		}
		if _, err := quantity.ParseNumber(got); got != "" && err != nil {
			t.Errorf("%q is taken for %q, which is not read: %v", text, got, err)
		}
	}
}

func TestMeantTexts(t *testing.T) {
	for _, tt := range []struct {
		name             string
		meant            func(string) string
		text, says, none string
	}{
		{"years", func(s string) string { return yearsMeant(s, "delete it") }, "2.5 yrs", `"2.5 yrs": the unit of a year is y; write 2.5 y`, "12 furlongs"},
		{"year", yearMeant, "June 2026", `"June 2026" is not a year alone; write 2026`, "2025/2026"},
		{"return period", returnMeant, "1/20", `"1/20": the years between two passages are wanted here; write 20 y`, "20 d"},
		{"probability", probabilityMeant, "1 in 30", `"1 in 30": a share is wanted here; write 3.33333 %`, "often"},
		{"target", targetMeant, "≤ 0.5 m·d per year", `a target says which figure it is for; write {load: 0.5}, not the text "≤ 0.5 m·d per year"`, "as few as can be"},
		{"target of events", targetMeant, "1 event a year", `a target says which figure it is for; write {events: 1}, not the text "1 event a year"`, "2 of them"},
		{"contingency", contingencyMeant, "1.15", `"1.15" has no unit; write 15 % if a factor is meant, or 1.15 %`, "15"},
		{"decline", declineMeant, "forever", `"forever" cannot stand here; write none for drains that never clog`, "slow"},
	} {
		if got := tt.meant(tt.text); got != tt.says {
			t.Errorf("%s: %q gets\n%s, want\n%s", tt.name, tt.text, got, tt.says)
		}
		if got := tt.meant(tt.none); got != "" {
			t.Errorf("%s: %q gets %s, want nothing", tt.name, tt.none, got)
		}
	}
}
