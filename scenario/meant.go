package scenario

import (
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"quietslope/scenario/quantity"
)

// This file says what a person may have meant with a text that cannot be read, where the key tells more than the kind of
// its value does. Each function returns the whole message, and "" where it knows nothing better than what is said of any
// such value.

// plainBlanks writes every blank as a plain one.
func plainBlanks(text string) string {
	return strings.TrimSpace(strings.NewReplacer("\u00a0", " ", "\u2009", " ", "\u2007", " ", "\u202f", " ").Replace(text))
}

var (
	// sumParts are what stands before a number, the number with whatever marks its thousands, and what stands after it.
	sumParts = regexp.MustCompile(`^([^0-9.,+-]*)([0-9](?:[0-9.,'’ ]*[0-9])?)(?:[.,] ?[-–]+)? *(.*)$`)
	// commaGroups and pointGroups are numbers whose thousands are marked.
	commaGroups = regexp.MustCompile(`^[1-9][0-9]{0,2}(,[0-9]{3})+$`)
	pointGroups = regexp.MustCompile(`^[1-9][0-9]{0,2}(\.[0-9]{3})+$`)
	// manifold is a word that multiplies the number before it, alone or before a currency.
	manifold = regexp.MustCompile(`^(?:(k|K|T|tsd|thousand)|(M|mn|mln|mio|Mio|million|millions)|(bn|billion|mrd|Mrd))\.?(?:$|[ /€$£¥]|[A-Z]{3}$)`)
)

// notSum is said of a sum that is no bare number.
const notSum = "a sum is a bare number, in the currency of money"

// sumMeant is for a sum of money with its currency, with a word such as million, or for each of something.
func sumMeant(text string) string {
	if m := sumParts.FindStringSubmatch(plainBlanks(text)); m != nil && strings.HasPrefix(m[3], "%") {
		return fmt.Sprintf("%s: %s, and not a share; write what it comes to", quoted(text), notSum)
	}
	meant, or := meantSum(text)
	switch {
	case meant == "":
		return ""
	case or != "":
		return fmt.Sprintf("%s: %s; write %s, or %s", quoted(text), notSum, meant, or)
	}
	return fmt.Sprintf("%s: %s; write %s", quoted(text), notSum, meant)
}

// meantSum is the bare number that a sum stands for, with another one that it could be and when, and "" for a text that is
// no sum or needs no such help.
func meantSum(text string) (meant, or string) {
	m := sumParts.FindStringSubmatch(plainBlanks(text))
	if m == nil {
		return "", ""
	}
	before, number, after := strings.TrimSpace(m[1]), m[2], m[3]
	if _, err := quantity.ParseNumber(text); err == nil {
		return "", ""
	}
	grouped := strings.Contains(number, ",") && strings.Contains(number, ".") || commaGroups.MatchString(number) || strings.Count(number, ".") > 1 && pointGroups.MatchString(number)
	if number == plainBlanks(text) && !grouped && !strings.ContainsAny(number, "'’ ") {
		return "", ""
	}
	exponent := "e0"
	for _, word := range []string{after, before} {
		if f := manifold.FindStringSubmatch(word); f != nil {
			exponent = map[bool]string{f[1] != "": "e3", f[2] != "": "e6", f[3] != "": "e9"}[true]
			break
		}
	}
	write := func(number, exponent string) string {
		v, err := strconv.ParseFloat(number+exponent, 64)
		if err != nil {
			return ""
		}
		return quantity.FormatNumber(v)
	}
	number = strings.NewReplacer(" ", "", "'", "", "’", "").Replace(number)
	comma, point := strings.LastIndexByte(number, ','), strings.LastIndexByte(number, '.')
	whole := strings.NewReplacer(".", "", ",", "").Replace(number)
	switch {
	case pointGroups.MatchString(number) && strings.Count(number, ".") == 1: // thousands, or three decimals
		return write(whole, exponent), write(number, exponent) + " if the point marks the decimals"
	case commaGroups.MatchString(number) || pointGroups.MatchString(number):
		meant = write(whole, exponent)
	case comma > point:
		meant = write(strings.Replace(strings.ReplaceAll(number, ".", ""), ",", ".", 1), exponent)
	default:
		meant = write(strings.ReplaceAll(number, ",", ""), exponent)
	}
	if after == "m" && meant != "" {
		or = write(meant, "e6") + " if million is meant"
	}
	return meant, or
}

// threeDecimals are digits that could be thousands with a point between them.
var threeDecimals = regexp.MustCompile(`^\+?[1-9][0-9]{0,2}\.[0-9]{3}$`)

// notThousands refuses a sum such as 210.000: nobody gives the thousandth of a sum, so that the point may well mark
// thousands.
func notThousands(text string) string {
	text = plainBlanks(text)
	if !threeDecimals.MatchString(text) {
		return ""
	}
	return fmt.Sprintf("%s: a point marks the decimals; write %s if it was to mark thousands, or a sum with two decimals", quoted(text), strings.TrimPrefix(strings.Replace(text, ".", "", 1), "+"))
}

var (
	someMonths = regexp.MustCompile(`^([0-9]+(?:\.[0-9]+)?) *(?:months?|mths?|mo)$`)
	yearWords  = regexp.MustCompile(`^([0-9]+(?:\.[0-9]+)?) *(?:years?|yrs?\.?|a|anni|ans|años|Jahre?n?)$`)
	neverWords = []string{"never", "none", "no", "not", "forever", "for ever", "always", "infinite", "infinity", "unlimited", "permanent", "n/a", "nil", "-"}
)

// yearsMeant is for a time that is given in years as a rule. Never is what to say of a word that stands for no end.
func yearsMeant(text, never string) string {
	t := plainBlanks(text)
	switch word := strings.ToLower(t); {
	case slices.Contains(neverWords, word):
		return fmt.Sprintf("%s is not a time; %s", quoted(text), never)
	case slices.Contains([]string{"yearly", "annual", "annually", "every year", "once a year"}, word):
		return fmt.Sprintf("%s is not a time; write 1 y", quoted(text))
	case !strings.ContainsFunc(t, isDigit):
		return fmt.Sprintf("%s is not a time; write one such as 12 y", quoted(text))
	}
	if v, err := quantity.ParseNumber(t); err == nil && v > 0 {
		return fmt.Sprintf("%s has no unit; write %s y", quoted(text), strings.TrimPrefix(t, "+"))
	}
	if m := yearWords.FindStringSubmatch(t); m != nil {
		return fmt.Sprintf("%s: the unit of a year is y; write %s y", quoted(text), m[1])
	}
	if m := someMonths.FindStringSubmatch(t); m != nil {
		if n, err := strconv.ParseFloat(m[1], 64); err == nil && n > 0 {
			return fmt.Sprintf("%s: a month is no unit; write %s y", quoted(text), short(n/12))
		}
	}
	return ""
}

// someYear is a year of some time near ours.
var someYear = regexp.MustCompile(`\b(?:19|20|21)[0-9]{2}\b`)

// yearMeant is for a year with a month, a quarter or a word beside it.
func yearMeant(text string) string {
	all := someYear.FindAllString(text, -1)
	if len(all) != 1 || all[0] == strings.TrimSpace(text) {
		return ""
	}
	return fmt.Sprintf("%s is not a year alone; write %s", quoted(text), all[0])
}

// oneIn is a chance such as 1 in 20, or 1:20.
var oneIn = regexp.MustCompile(`^(?:1|one) *(?:in|:|/) *([1-9][0-9]*)(?: *(?:y|yr|yrs|years?))?$`)

// returnMeant is for a return period that is no number of years.
func returnMeant(text string) string {
	if m := oneIn.FindStringSubmatch(plainBlanks(text)); m != nil {
		return fmt.Sprintf("%s: the years between two passages are wanted here; write %s y", quoted(text), m[1])
	}
	return ""
}

// probabilityMeant is for a probability that is no share.
func probabilityMeant(text string) string {
	m := oneIn.FindStringSubmatch(plainBlanks(text))
	if m == nil {
		return ""
	}
	n, err := strconv.ParseFloat(m[1], 64)
	if err != nil {
		return ""
	}
	return fmt.Sprintf("%s: a share is wanted here; write %s %%", quoted(text), short(100/n))
}

var (
	targetParts = regexp.MustCompile(`^(?:<|<=|≤|at most|max\.?|less than|under)? *([0-9]+(?:\.[0-9]+)?) *(.*)$`)
	aYear       = regexp.MustCompile(` *(?:per|a|in a|each|/) *(?:y|yr|year)$`)
)

// targetMeant is for a target that stands without the figure that it is for.
func targetMeant(text string) string {
	t := plainBlanks(text)
	if _, err := quantity.ParseNumber(t); err == nil {
		t = cutText(t)
		return fmt.Sprintf("a target says which figure it is for; write {days: %s}, {events: %s} or {load: %s}", t, t, t)
	}
	pair := ""
	if m := oneIn.FindStringSubmatch(t); m != nil {
		pair = "return_period: " + m[1] + " y"
	} else if m := targetParts.FindStringSubmatch(t); m != nil {
		switch aYear.ReplaceAllString(m[2], "") {
		case "d", "day", "days":
			pair = "days: " + m[1]
		case "event", "events":
			pair = "events: " + m[1]
		case "%":
			pair = "annual_probability: " + m[1] + " %"
		case "y", "yr", "yrs", "year", "years":
			pair = "return_period: " + m[1] + " y"
		case "m·d", "m d", "m*d", "m.d", "m-d":
			pair = "load: " + m[1]
		}
	}
	if pair == "" {
		return ""
	}
	return fmt.Sprintf("a target says which figure it is for; write {%s}, not the text %s", pair, quoted(text))
}

// costMeant is for a cost that is a sum by itself.
func costMeant(text string) string {
	sum := plainBlanks(text)
	if _, err := quantity.ParseNumber(sum); err != nil {
		if sum, _ = meantSum(text); sum == "" {
			return ""
		}
	}
	return fmt.Sprintf("a cost says what each sum is for; write {capital: %s} if it is paid once", cutText(sum))
}

// contingencyMeant is for a contingency that is given as a factor.
func contingencyMeant(text string) string {
	v, err := quantity.ParseNumber(text)
	if err != nil || v <= 1 || v >= 2 {
		return ""
	}
	return fmt.Sprintf("%s has no unit; write %s %% if a factor is meant, or %s %%", quoted(text), short(100*(v-1)), plainBlanks(text))
}

// declineMeant is for a decline that is a time by itself.
func declineMeant(text string) string {
	if slices.Contains(neverWords, strings.ToLower(plainBlanks(text))) {
		return fmt.Sprintf("%s cannot stand here; write none for drains that never clog", quoted(text))
	}
	if v, err := quantity.Parse(text, quantity.Duration); err != nil || v <= 0 {
		return ""
	}
	return fmt.Sprintf("a decline is a block of keys; write {half_life: %s} if half of the rate is left after that time", cutText(strings.TrimSpace(text)))
}
