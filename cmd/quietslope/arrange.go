package main

import (
	"slices"
	"strings"

	"github.com/urfave/cli/v2"

	"quietslope/scenario/fault"
)

// arrange prepares a command line for the library, which would take every word after the first argument for an
// argument too: options come first, then "--", then the arguments. What the library would misread or report badly is
// refused here. An option is written -name or --name, its value after = or as the next word.
func arrange(app *cli.App, args []string) ([]string, error) {
	if len(args) == 0 {
		return nil, nil
	}
	name, rest := args[0], args[1:]
	switch name {
	case "-h", "--help", "-help", "help", "h":
		if name != "help" && name != "h" || len(rest) == 0 || isHelp(rest[0]) {
			return []string{"--help"}, nil
		}
		if rest[0] == studyTopic {
			app.CustomAppHelpTemplate = asTemplate(studyHelp())
			return []string{"--help"}, nil
		}
		if app.Command(rest[0]) == nil {
			return nil, unknownCommand(app, rest[0])
		}
		return []string{"help", rest[0]}, nil
	case "-v", "--version", "-version":
		return []string{"--version"}, nil
	}
	if word := strings.TrimLeft(name, "-"); word != name && app.Command(word) != nil {
		return nil, usagef("", "a command is written without hyphens; did you mean %s?", word)
	}
	if strings.HasPrefix(name, "-") {
		return nil, usagef("", "unknown option %q before a command; the command comes first", name)
	}
	command := app.Command(name)
	if command == nil && len(rest) > 0 && app.Command(rest[0]) != nil {
		return nil, usagef("", "the command comes first; did you mean quietslope %s %s?", rest[0], fault.Name(name))
	}
	if command == nil {
		return nil, unknownCommand(app, name)
	}
	before := rest
	if i := slices.Index(rest, "--"); i >= 0 {
		before = rest[:i]
	}
	if slices.ContainsFunc(before, isHelp) {
		return []string{name, "--help"}, nil
	}
	options, arguments, err := split(command, rest)
	if err != nil {
		return nil, err
	}
	if command.ArgsUsage == "" {
		if len(arguments) > 0 {
			return nil, usagef(name, "takes no argument, got %q", arguments[0])
		}
	} else if err := oneArgument(command, arguments); err != nil {
		return nil, err
	}
	return slices.Concat([]string{name}, options, []string{"--"}, arguments), nil
}

func isHelp(word string) bool { return word == "-h" || word == "--help" || word == "-help" }

// What a command takes as its argument, as its ArgsUsage says it.
const (
	studyArgument      = "STUDY.yaml"
	maybeStudyArgument = "[STUDY.yaml]"
	folderArgument     = "DIR"
)

// oneArgument demands the single argument of a command, but for a study that the command can do without.
func oneArgument(command *cli.Command, arguments []string) error {
	what, such := "study file", "study.yaml"
	switch command.ArgsUsage {
	case studyArgument, maybeStudyArgument:
	case folderArgument:
		what, such = "folder", "my-slope"
	default: // one of some words
		what, such = "shell", shells[0]
	}
	switch {
	case len(arguments) == 0 && command.ArgsUsage == maybeStudyArgument:
		return nil
	case len(arguments) == 0:
		return usagef(command.Name, "name the %s, as in: quietslope %s %s", what, command.Name, such)
	case len(arguments) > 1 && strings.TrimLeft(arguments[1], "–—") != arguments[1]:
		return usagef(command.Name, "an option begins with two hyphens, not with a dash; write --%s", fault.Name(strings.TrimLeft(arguments[1], "–—-")))
	case len(arguments) > 1 && what == "study file" && slices.ContainsFunc(arguments, isTable):
		return usagef(command.Name, "one study file is enough, got %q and %q; the study names its weather, as weather.file", arguments[0], arguments[1])
	case len(arguments) > 1:
		return usagef(command.Name, "one %s at a time, got %q and %q", what, arguments[0], arguments[1])
	case arguments[0] == "":
		return usagef(command.Name, "the name of the %s is empty", what)
	}
	return nil
}

// isTable says whether a file's name is that of a table.
func isTable(name string) bool {
	name = strings.TrimSuffix(strings.ToLower(name), ".gz")
	return strings.HasSuffix(name, ".csv") || strings.HasSuffix(name, ".txt") || strings.HasSuffix(name, ".xlsx")
}

// split parts the options of a command, with their values, from its arguments.
func split(command *cli.Command, words []string) (options, arguments []string, err error) {
	given := map[string]bool{}
	for i := 0; i < len(words); i++ {
		word := words[i]
		if word == "--" {
			return options, append(arguments, words[i+1:]...), nil
		}
		if len(word) < 2 || word[0] != '-' {
			arguments = append(arguments, word)
			continue
		}
		name, _, joined := strings.Cut(strings.TrimPrefix(strings.TrimPrefix(word, "-"), "-"), "=")
		flag := flagOf(command, name)
		if flag == nil {
			return nil, nil, unknownOption(command, word, name)
		}
		if _, repeatable := flag.(*cli.StringSliceFlag); !repeatable && given[name] {
			return nil, nil, usagef(command.Name, "--%s is given twice", name)
		}
		given[name] = true
		options = append(options, word)
		if joined || !takesValue(flag) {
			continue
		}
		if i++; i == len(words) || strings.HasPrefix(words[i], "--") {
			return nil, nil, usagef(command.Name, "--%s needs a value", name)
		}
		options = append(options, words[i])
	}
	return options, arguments, nil
}

func flagOf(command *cli.Command, name string) cli.Flag {
	for _, f := range command.Flags {
		if slices.Contains(f.Names(), name) {
			return f
		}
	}
	return nil
}

func takesValue(flag cli.Flag) bool {
	d, ok := flag.(cli.DocGenerationFlag)
	return ok && d.TakesValue()
}

func unknownOption(command *cli.Command, word, name string) error {
	var known []string
	for _, f := range command.Flags {
		known = append(known, f.Names()[0])
	}
	near := fault.Nearest(name, known)
	for _, k := range known {
		if near == "" && name != "" && (strings.HasPrefix(k, name) || strings.HasPrefix(name, k)) {
			near = k
		}
	}
	word = fault.Name(word)
	switch {
	case slices.Contains(formatNames(), name) && slices.Contains(known, flagFormat):
		return usagef(command.Name, "unknown option %s; did you mean --%s %s?", word, flagFormat, name)
	case near != "":
		return usagef(command.Name, "unknown option %s; did you mean --%s?", word, near)
	case len(known) == 0:
		return usagef(command.Name, "unknown option %s; this command has none", word)
	}
	return usagef(command.Name, "unknown option %s; there are --%s", word, strings.Join(known, ", --"))
}

func unknownCommand(app *cli.App, name string) error {
	known := []string{"help"}
	for _, c := range app.Commands {
		known = append(known, c.Name)
	}
	if near := fault.Nearest(name, known); near != "" {
		return usagef("", "unknown command %q; did you mean %s?", name, near)
	}
	if name == "version" {
		return usagef("", "unknown command %q; did you mean --version?", name)
	}
	if isStudy(name) {
		return usagef("", "a command comes before the study file; did you mean quietslope compare %s?", fault.Name(name))
	}
	return usagef("", "unknown command %q", name)
}
