package main

import (
	"context"
	"embed"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"time"

	"github.com/urfave/cli/v2"

	"quietslope/scenario"
	"quietslope/scenario/fault"
)

// shells are those for which there is a completion script.
var shells = []string{"bash", "zsh", "fish"}

//go:embed shell
var shellScripts embed.FS

// completionCommand prints the script that makes a shell complete the program's command lines.
func completionCommand() *cli.Command {
	return &cli.Command{
		Name: "completion", Category: shellSetUp, ArgsUsage: strings.Join(shells, "|"),
		Usage: "print what makes bash, zsh or fish complete command lines with Tab",
		Description: `What it does:
  Prints a script for the shell named. Once the shell has read it, the Tab key completes commands,
  options, formats and topics of help, study files, and the names of options and conditions of the
  study that stands on the line before. The script's first lines say how to load it for good.

Examples:
  source <(quietslope completion bash)        in bash, for this window only; zsh likewise
  quietslope completion fish | source         the same in fish
`,
		Action: func(c *cli.Context) error {
			shell := c.Args().First()
			if !slices.Contains(shells, shell) {
				if near := fault.Nearest(shell, shells); near != "" {
					return usagef(c.Command.Name, "unknown shell %q; did you mean %s?", shell, near)
				}
				return usagef(c.Command.Name, "unknown shell %q; use %s", shell, fault.Words(shells, "or"))
			}
			script, err := shellScripts.ReadFile("shell/completion." + shell)
			if err != nil {
				return err
			}
			o := &output{stdout: c.App.Writer}
			return o.write(c.Context, func(w io.Writer) error {
				_, err := w.Write(script)
				return err
			})
		},
	}
}

// completeWord, as the first word of a command line, asks what could stand at its end. The scripts use it, no person:
//
//	quietslope --complete SHELL WORD...           zsh, fish: the words after the program's name, without their quoting
//	quietslope --complete bash LINE BREAKS        bash: the line up to the cursor, and COMP_WORDBREAKS
//
// The last word is the one at the cursor, perhaps empty. The first line of the answer is a kind. After "words" come the
// words, one a line; for zsh and fish a tab and a description may follow each, and the shell chooses those that fit; for
// bash they are chosen and quoted already. "studies", "files" and "folders" are listed by the shell itself; what bash
// needs for that follows. An empty answer means that nothing fits, or that something is wrong: nobody wants to read
// errors while typing.
const completeWord = "--complete"

// completeWithin is how long a completion may take, so that a slow disk or a pipe does not keep the shell.
const completeWithin = 2 * time.Second

// complete answers a shell that completes a command line.
func complete(ctx context.Context, app *cli.App, args []string) {
	if len(args) < 2 {
		return
	}
	ctx, cancel := context.WithTimeout(ctx, completeWithin)
	defer cancel()
	shell, words := args[0], args[1:]
	var line bashLine
	if shell == "bash" {
		line = readBash(args[1], strings.Join(args[2:], ""))
		words = line.words
	}
	if len(words) == 0 {
		return
	}
	found, err := await(ctx, func() (proposal, error) { return propose(app, words), nil })
	if err != nil || found.kind == "" {
		return
	}
	var b strings.Builder
	fmt.Fprintln(&b, found.kind)
	switch {
	case shell == "bash":
		line.answer(&b, found)
	case found.kind == wordsKind:
		for _, w := range found.words {
			if shell == "fish" {
				if found.before == "" && strings.HasPrefix(w.text, "~") && !strings.ContainsAny(words[len(words)-1], `\'"`) {
					continue // fish does not quote it, and would put a folder in its place
				}
				b.WriteString(found.before)
			}
			b.WriteString(w.text)
			if w.says != "" {
				b.WriteString("\t" + w.says)
			}
			b.WriteString("\n")
		}
	}
	io.WriteString(app.Writer, b.String())
}

// Kinds of proposals.
const (
	wordsKind   = "words"
	studiesKind = "studies"
	filesKind   = "files"
	foldersKind = "folders"
)

// proposal is what could stand at the end of a command line.
type proposal struct {
	kind   string // "" for nothing
	before string // what stands before it in the same word: "--format=" or nothing
	words  []word // of wordsKind
}

type word struct{ text, says string }

// propose finds what could stand in place of the last of the words after the program's name. It takes the words before
// as arrange does.
func propose(app *cli.App, words []string) proposal {
	last := len(words) - 1
	name, current := words[0], words[last]
	switch {
	case last == 0 && strings.HasPrefix(current, "-"):
		return proposal{kind: wordsKind, words: []word{{"--help", "how to use it"}, {"--version", "which version this is"}}}
	case last == 0:
		return proposal{kind: wordsKind, words: append(commandWords(app), word{"help", "what a command does, what it needs, examples"})}
	case last == 1 && (name == "help" || name == "h"):
		return proposal{kind: wordsKind, words: append(commandWords(app), word{studyTopic, "every key of the study file, units, rules, examples"})}
	}
	command := app.Command(name)
	if command == nil {
		return proposal{}
	}

	given := map[string][]string{} // values of options, by name
	var arguments []string
	var open cli.Flag // an option whose value comes next
	argumentsOnly := false
	for _, w := range words[1:last] {
		switch {
		case open != nil:
			given[open.Names()[0]] = append(given[open.Names()[0]], w)
			open = nil
		case argumentsOnly || len(w) < 2 || w[0] != '-':
			arguments = append(arguments, w)
		case w == "--":
			argumentsOnly = true
		default:
			name, value, joined := strings.Cut(strings.TrimPrefix(strings.TrimPrefix(w, "-"), "-"), "=")
			if flag := flagOf(command, name); flag != nil && takesValue(flag) && !joined {
				open = flag
			} else if flag != nil {
				given[name] = append(given[name], value)
			}
		}
	}

	switch before, _, joined := strings.Cut(current, "="); {
	case open != nil:
		return values(command, open, arguments, given)
	case !argumentsOnly && joined && strings.HasPrefix(before, "--"):
		flag := flagOf(command, strings.TrimPrefix(before, "--"))
		if flag == nil {
			return proposal{}
		}
		p := values(command, flag, arguments, given)
		p.before = before + "="
		return p
	case !argumentsOnly && (strings.HasPrefix(current, "-") || len(arguments) > 0 || command.ArgsUsage == ""):
		return proposal{kind: wordsKind, words: optionWords(command, given)}
	case len(arguments) > 0, command.ArgsUsage == "":
		return proposal{}
	case command.ArgsUsage == studyArgument, command.ArgsUsage == maybeStudyArgument:
		return proposal{kind: studiesKind}
	case command.ArgsUsage == folderArgument:
		return proposal{kind: foldersKind}
	}
	p := proposal{kind: wordsKind}
	for _, s := range strings.Split(command.ArgsUsage, "|") {
		p.words = append(p.words, word{text: s})
	}
	return p
}

// commandWords are the commands with what they do, in the order of help.
func commandWords(app *cli.App) []word {
	var words []word
	for _, c := range app.Commands {
		words = append(words, word{c.Name, c.Usage})
	}
	return words
}

// optionWords are the options that may still be given.
func optionWords(command *cli.Command, given map[string][]string) []word {
	var words []word
	for _, f := range command.Flags {
		name := f.Names()[0]
		_, repeatable := f.(*cli.StringSliceFlag)
		if _, again := given[name]; again && !repeatable {
			continue
		}
		_, says := usageOf(f)
		says, _, _ = strings.Cut(says, "\n")
		says, _, _ = strings.Cut(says, ". ")
		words = append(words, word{"--" + name, strings.TrimSuffix(says, ":")})
	}
	return append(words, word{"--help", "what the command does, what it needs, examples"})
}

// values proposes values of an option of a command, as the first word of its usage says what they are.
func values(command *cli.Command, flag cli.Flag, arguments []string, given map[string][]string) proposal {
	p := proposal{kind: wordsKind}
	switch value, _ := usageOf(flag); {
	case value == "FILE":
		return proposal{kind: filesKind}
	case value == "FORMAT":
		for _, f := range formats {
			p.words = append(p.words, word{f.name, f.says})
		}
	case (value == "NAME" || value == "KEY") && len(arguments) == 1:
		p.words = namesFor(command.Name, flag.Names()[0], arguments[0], given)
	}
	return p
}

// namesFor lists the names and keys of a study that an option of a command takes, but for those given already. A study that
// is not a plain file is not opened, since a pipe is read only once.
func namesFor(command, option, path string, given map[string][]string) []word {
	if rest, ok := strings.CutPrefix(path, "~/"); ok {
		home, err := os.UserHomeDir()
		if err != nil {
			return nil
		}
		path = filepath.Join(home, rest)
	}
	info, err := os.Stat(path)
	if err != nil || !info.Mode().IsRegular() {
		return nil
	}
	s, err := scenario.Load(path)
	if err != nil {
		return nil
	}
	var names []string
	switch option {
	case flagVary:
		names = s.SizeKeys(strings.Join(given[flagOption], ""))
	case flagOption, flagAgainst:
		if command == sizeName {
			names = s.SizeOptions()
			break
		}
		for i := range s.Options {
			names = append(names, s.Options[i].Name)
		}
	case flagClimate:
		names = append(names, scenario.AsRecorded)
	case flagCondition:
		names = append(names, scenario.AsBuilt)
		for i := range s.Conditions {
			names = append(names, s.Conditions[i].Name)
		}
	}
	var words []word
	for _, n := range names {
		if !slices.Contains(given[option], n) {
			words = append(words, word{text: n})
		}
	}
	return words
}
