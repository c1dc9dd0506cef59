package main

import (
	"fmt"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/urfave/cli/v2"

	"quietslope/scenario"
)

// Categories group the commands by what a person is doing.
const (
	beginning   = "Begin"
	lookFirst   = "Look before you replay"
	comparing   = "Compare options"
	takeNumbers = "Take the numbers elsewhere"
	shellSetUp  = "Set up your shell"
)

// categories stand in the order of the work.
var categories = []string{beginning, lookFirst, comparing, takeNumbers, shellSetUp}

const exitStatus = `Exit status:
  0 done; 2 the study, its weather or the command line is at fault; 1 a fault of the program or the
  machine (disk full, no permission); 130 stopped with Ctrl-C.
`

// appHelp is the text of "quietslope help".
func appHelp(app *cli.App) string {
	var b strings.Builder
	b.WriteString(`quietslope compares ways of quietening a slow, deep landslide by drainage.

You bring a slope with a permeable cover over fissured clay, two reservoirs calibrated for it, a
weather record, and works to choose from, all named in one study file. quietslope replays the whole
record for every option and says how often, how long and by how much the deep water level passes
each critical band. It is no stability analysis and no warning system.

Usage:
  quietslope new DIR                           a starter study in the folder DIR
  quietslope COMMAND STUDY.yaml [options]      options may stand before or after the study
  quietslope help COMMAND                      what a command does, what it needs, examples
  quietslope help study                        every key of the study file, units, rules, examples
  quietslope --version
`)
	for _, category := range categories {
		fmt.Fprintf(&b, "\n%s:\n", category)
		for _, c := range app.Commands {
			if c.Category == category {
				fmt.Fprintf(&b, "  %-12s%s\n", c.Name, c.Usage)
			}
		}
	}
	b.WriteString(`
To start, let it write a study of an invented slope, compare its options, and make it your own:
  quietslope new my-slope
  quietslope compare my-slope/study.yaml

` + exitStatus)
	return b.String()
}

// commandHelp is the text of "quietslope help COMMAND": the command's description, its options, the exit status.
func commandHelp(app *cli.App, c *cli.Command) string {
	var b strings.Builder
	options := ""
	if len(c.Flags) > 0 {
		options = " [options]"
	}
	line := strings.TrimRight(c.Name+" "+c.ArgsUsage, " ") + options
	fmt.Fprintf(&b, "%s %s: %s\n\nUsage:\n  %s %s\n\n%s", app.Name, c.Name, c.Usage, app.Name, line, c.Description)
	if c.ArgsUsage != strings.ToLower(c.ArgsUsage) { // it is about a study
		b.WriteString("\nThe study file:\n  \"quietslope help study\" lists its keys, units and rules, with examples.\n")
	}
	if len(c.Flags) > 0 {
		b.WriteString("\nOptions:\n")
	}
	for _, f := range c.Flags {
		const width = 20
		value, does := usageOf(f)
		lead := strings.TrimRight("--"+f.Names()[0]+" "+value, " ")
		if len(lead) > width {
			fmt.Fprintf(&b, "  %s\n", lead)
			lead = ""
		}
		for _, line := range strings.Split(does, "\n") {
			fmt.Fprintf(&b, "  %-*s  %s\n", width, lead, line)
			lead = ""
		}
	}
	b.WriteString("\n" + exitStatus)
	return b.String()
}

// studyTopic is the word after help that asks for the reference of the study file.
const studyTopic = "study"

// helpWidth is the largest number of characters of a line of help.
const helpWidth = 100

// studyHelp is the text of "quietslope help study". What it says of each key comes from the table by which the study is
// read.
func studyHelp() string {
	var b strings.Builder
	b.WriteString(`The study file: one YAML file that names the weather, the ground, the critical levels and the
options. "quietslope check" says how yours was understood.

Rules of the format:
  - Plain text in UTF-8, at most 1 MB. Blocks are indented with blanks, never tabs, or stand between
    { and }. A blank follows the colon of every key. A # after a blank begins a comment.
  - Keys may stand in any order, each once in its block and none without a value. An unknown key is
    an error, never ignored. "quietslope check" lists the defaults of those that are left out.
  - Not used: anchors, aliases, merge keys, tags, block texts (| and >) and a second document.
  - A text stands on one line. Put it between quotes when it holds a colon and a blank or begins
    with a sign such as & * ! | > % @ [ { or #.
  - Every quantity has its unit: 12 m, 0.011 /d, 8 %. A decimal point is a full stop, thousands are
    not marked, and 2.4e6 is read. Only where the list says number is there no unit. A sum of money
    is a number too; its currency stands once, in money.
  - A share may also be a bare 0 or a number between 0 and 1: 0.85 is 85 %. A bare 1 is refused.
  - A name has 1 to 60 characters, no blank at either end, does not begin with = + - or @, and
    differs from the others of its list in more than case. "as recorded" and "as built" are taken.
  - Where "or a list" is said, a list such as spacing: [8 m, 12 m] makes one option of each value:
    "trenches, spacing 8 m" and "trenches, spacing 12 m". An option has one list at most.
  - like: NAME in a measure takes the same measure of an option above, where it is written out. No
    other key is required then; those given beside it override, and a list there is given anew.
  - like: NAME in a cost takes the sums of an option above that gives its own; those given beside it
    override. like: [NAME, NAME] adds up several costs, each with its own life; metres and flushes
    are those of the option that takes them. An option of a list has the cost of the list.
  - Conditions say what is left of the works: drains: 45 % leaves 45 % of the rate of every drain.
    The ground as calibrated stays as it is, and all is replayed as built too.
  - Levels: level is above the base of the key's own layer, depth and below_ground are below ground,
    elevation is on the site's datum.
  - A missing code that is a number matches the same value, so that -999 covers -999.0; any other
    matches the cell exactly, but for blanks around it.

Below, [] stands for each item of a list, and "required" means: wherever its block stands. The
examples put together in this order are a whole study; a second text of a block replaces the first.
`)
	for _, s := range sections(scenario.Keys()) {
		b.WriteString("\n" + wrap(s.heading(), "  ") + "\n")
		s.writeKeys(&b)
		b.WriteString(studyNotes[s.path])
		for _, e := range studyExamples {
			if e.section == s.path {
				fmt.Fprintf(&b, "\n  %s:\n\n%s", e.lead, indent(e.text, "    "))
			}
		}
	}
	b.WriteString("\nUnits, the usual one first (y is 365.25 d, and m² is read as m2):\n")
	writeUnits(&b, scenario.Keys())
	b.WriteString("\n" + wrap("Known but not supported yet: "+strings.Join(scenario.LaterKeys(), ", ")+".", "") + "\n")
	return b.String()
}

// section is a block of the study whose keys are listed together, with those of the blocks in it.
type section struct {
	path string // "" for the keys outside any block
	head scenario.KeyDoc
	keys []scenario.KeyDoc
}

// sections puts the keys together: those of each block at the top, and those of each block in the items of a list.
func sections(docs []scenario.KeyDoc) []section {
	all := []section{{}}
	for _, d := range docs {
		path := sectionOf(d.Path)
		i := slices.IndexFunc(all, func(s section) bool { return s.path == path })
		switch {
		case i >= 0:
			all[i].keys = append(all[i].keys, d)
		case path == d.Path && (d.Form == "block" || d.Form == "list of blocks"):
			all = append(all, section{path: path, head: d})
		case strings.Contains(d.Path, "[]."): // a key of an item itself
			list, _, _ := strings.Cut(d.Path, "[].")
			i = slices.IndexFunc(all, func(s section) bool { return s.path == list })
			all[i].keys = append(all[i].keys, d)
		default:
			all[0].keys = append(all[0].keys, d)
		}
	}
	return all
}

// sectionOf is the path of the block under which a key would be listed: the first part of its path, or the part up to the
// first key of an item.
func sectionOf(path string) string {
	list, inItem, _ := strings.Cut(path, "[].")
	if inItem != "" {
		first, _, _ := strings.Cut(inItem, ".")
		return list + "[]." + first
	}
	first, _, _ := strings.Cut(path, ".")
	return first
}

func (s *section) heading() string {
	if s.path == "" {
		return "Outside any block:"
	}
	return fmt.Sprintf("%s: %s (%s)", s.path, s.head.Says, s.head.Written())
}

// writeKeys lists the keys of a section, by their path inside it.
func (s *section) writeKeys(b *strings.Builder) {
	inside := func(path string) string {
		return strings.TrimPrefix(strings.TrimPrefix(path, s.path), "[]")
	}
	var names []string
	widest := 0
	for _, k := range s.keys {
		name := strings.TrimPrefix(inside(k.Path), ".")
		names = append(names, name)
		widest = max(widest, utf8.RuneCountInString(name))
	}
	if strings.HasSuffix(s.path, "].set") { // the keys of ground once more
		b.WriteString(wrap("  Its keys, written and meant as in ground, and each may be a list: "+strings.Join(names, ", ")+".", "  ") + "\n")
		return
	}
	for i, k := range s.keys {
		lead := fmt.Sprintf("  %-*s  ", widest, names[i])
		below := strings.Repeat(" ", len(lead))
		b.WriteString(wrap(lead+k.Says, below) + "\n" + wrap(below+k.Written(), below) + "\n")
	}
}

// writeUnits lists the units of every kind of quantity that the keys use, in the order of their first use.
func writeUnits(b *strings.Builder, docs []scenario.KeyDoc) {
	seen := map[string]bool{}
	for _, k := range docs {
		if len(k.Units) > 0 && !seen[k.Form] {
			seen[k.Form] = true
			fmt.Fprintf(b, "  %-14s  %s\n", k.Form, strings.Join(k.Units, "  "))
		}
	}
}

// wrap breaks a text at blanks into lines of helpWidth. Blanks at its beginning stay; the later lines begin with below.
func wrap(text, below string) string {
	var b strings.Builder
	line := text[:len(text)-len(strings.TrimLeft(text, " "))]
	empty := true // the line has no word yet
	for i, word := range strings.Split(strings.TrimLeft(text, " "), " ") {
		if i > 0 && !empty && utf8.RuneCountInString(line)+1+utf8.RuneCountInString(word) > helpWidth {
			b.WriteString(line + "\n")
			line, empty = below, true
		}
		if !empty {
			line += " "
		}
		line, empty = line+word, false
	}
	return b.String() + line
}

// indent puts blanks before every line that has text.
func indent(text, by string) string {
	var b strings.Builder
	for line := range strings.Lines(text) {
		if line != "\n" {
			b.WriteString(by)
		}
		b.WriteString(line)
	}
	return b.String()
}

// asTemplate makes a text the template that prints it, whatever braces it holds.
func asTemplate(text string) string { return "{{print " + strconv.Quote(text) + "}}" }

// studyNotes stand below the keys of a section.
var studyNotes = map[string]string{
	"weather": `
  The file: looked for from the folder of the study, wherever the program is started; an absolute
  path is taken as it is. Its first line is the header. Columns are separated by commas, semicolons
  or tabs; with the last two a decimal comma is read. It may be packed with gzip. The step is
  constant, from a minute to a day, or each row is a calendar month.

  Gaps are missing rows and cells of weather.missing. gaps: refuse lists them; zero takes each such
  value of rain and of pet as 0; month mean gives it the mean intensity of its column over all
  measured steps of the record in the same month of the year. Results count what was filled, and
  name the years that rest on it.

  Times: YYYY MM DD hh mm ss are year, month, day, hour, minute and second, and any other character
  stands for itself: YYYY-MM-DD, DD.MM.YYYY hh:mm, YYYYMMDDThhmm. The format iso reads times with
  their offset from UTC, such as 2019-03-31T14:05:00+01:00 or 2019-03-31T13:05:00Z.
  Clocks with summer time skip an hour and repeat another, and such a record, unless daily, is
  refused. Give UTC or standard time all year, or iso. Daily rows in iso keep one offset all year.
  A month is named by its first day, or by YYYY-MM alone; with the stamp end by the first day of the
  following month or by its own last day.
`,
}

// exampleLayers are the two layers of the examples.
const exampleLayers = `  cover:
    thickness: 4.0 m
    drainable_porosity: 8 %
    conductivity: 0.044 m/d
    seepage: 0.011 /d
    percolation: 0.0045 /d
  deep:
    thickness: 9.0 m
    drainable_porosity: 1.4 %
    seepage: 0.007 /d
    lateral_inflow: 0.05 mm/d
`

// studyExamples stand below the notes of a section. Each text is part of a study as it would stand there, so that they
// make one when put together; a second text of one block is another way to write it.
var studyExamples = []struct{ section, lead, text string }{
	{"", "Example", `study: Bank above the mill, drainage options
prepared_by: A. N. Engineer
`},
	{"weather", "Daily depths", `weather:
  file: weather.csv
  columns:
    time: {name: date, format: YYYY-MM-DD}
    rain: {name: rain_mm, unit: mm}
    pet: {name: pet_mm, unit: mm}
  missing: ["", NA, -999]
`},
	{"weather", "Tips of a gauge, in local time with its offset, stamped at the end of the step, with gaps", `weather:
  file: records/gauge.csv.gz
  columns:
    time: {name: time, format: iso}
    rain: {name: tips, unit: 0.2 mm}
    pet: {name: et0, unit: mm/h}
  stamp: end
  gaps: month mean
`},
	{"ground", "With levels that were read at the start of the record; without start it begins steady", `ground:
  surface: {infiltration: 85 %}
  soil: {available_water: 120 mm}
` + exampleLayers + `  start: {cover: 1.2 m, deep: 3.4 m}
  calibrated_to: 4.9 m
`},
	{"ground", "With rates that were calibrated by a stepping formula, which are converted", `ground:
` + exampleLayers + `  rates_from: {scheme: centred, step: 1 d}
`},
	{"slope", "Example", `slope: {angle: 11 deg, unit_weight: 19.5 kN/m3, friction: 13.8 deg, flow: parallel}
`},
	{"bands", "One band of each kind; with this ground, slope and site they begin at 3.6, 4.2, 5.0 and 5.4 m", `bands:
  - {name: watch, level: 3.6 m}
  - {name: movement onset, elevation: 409.2 m, until: 408.9 m, loss_per_day: 1800}
  - {name: fast movement, below_ground: 8.0 m}
  - {name: failure, factor_of_safety: 1.0, until: 1.02, loss_per_event: 2.4e6}
`},
	{"count", "With a target: at most 2 days a year above movement onset", `count:
  apart: 10 d
  year_starts: October
  decide_on: movement onset
  decide_by: load
  target: {days: 2}
`},
	{"money", "Example", `money: {currency: EUR, horizon: 50 y, discount_rate: 3 %, prices_of: 2026, contingency: 20 %}
`},
	{"options", "The ground as it is, to compare with", `options:
  - name: as it stands
`},
	{"options[].trench_drains", "By spacing, with flushing; the same if they never clog; by rates, each of which makes an option", `  - name: trenches 12 m apart
    trench_drains:
      spacing: 12 m
      depth: 3.0 m
      drain_radius: 0.2 m
      law: quadratic
      efficiency: 80 %
      decline: {half_life: 12 y, flushed_every: 5 y, restored_to: 95 %}
    cost: {per_metre: 95, per_year: 600, per_flush: 4000, life: 30 y}

  - name: the same if they never clog
    trench_drains: {like: trenches 12 m apart, decline: none}

  - name: trenches at given rates
    trench_drains: {rate: [0.01 /d, 0.02 /d], depth: 3.0 m}
`},
	{"options[].bored_drains", "Example", `  - name: bored drains
    bored_drains: {rate: 0.005 /d, level: 3.0 m, number: 12, length: 45 m}
    cost: {capital: 20000, per_metre: 210, per_year: 2500, life: 20 y}
`},
	{"options[].surface_water", "The least that has to be done, and with it trenches that differ from those above in one key", `  - name: lined channels
    minimum: true
    surface_water: {kept_out: 10 %}
    cost: {capital: 38000, per_year: 1500, life: 25 y}

  - name: trenches 24 m apart with channels
    trench_drains: {like: trenches 12 m apart, spacing: 24 m}
    surface_water: {like: lined channels}
    cost: {like: [trenches 12 m apart, lined channels]}
`},
	{"options[].vegetation", "Example", `  - name: planting
    vegetation: {pet_factor: 1.10, interception: 4 %}
`},
	{"options[].cut_off_drain", "Example", `  - name: drain uphill
    cut_off_drain: {intercepted: 60 %}
`},
	{"options[].set", "Example", `  - name: seepage from a trial
    set: {cover.seepage: 0.02 /d}
`},
	{"options[].cost", "The sums of another option but for the price of a metre", `  - name: trenches 8 m apart
    trench_drains: {like: trenches 12 m apart, spacing: 8 m}
    cost: {like: trenches 12 m apart, per_metre: 90}
`},
	{"conditions", "Example", `conditions:
  - {name: neglected, drains: 45 %, surface_water: 60 %}
`},
	{"site", "Example", `site: {plan_area: 1.2 ha, ground_level: 418.0 m}
`},
	{"declared", "Example", `declared: {existing_slip_surface: yes, rapid_movement_possible: no, perched_water: unknown}
`},
}
