package main

import (
	"cmp"
	"context"
	"embed"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"syscall"
	"unicode/utf8"

	"github.com/urfave/cli/v2"

	"quietslope/scenario/fault"
)

//go:embed starter
var starter embed.FS

// starterFiles are the files of the starter study.
var starterFiles = []string{"study.yaml", "weather.csv"}

const flagForce = "force"

// newCommand writes a study to begin with.
func newCommand() *cli.Command {
	return &cli.Command{
		Name: "new", Category: beginning, ArgsUsage: folderArgument,
		Usage: "write a starter study and its weather into a folder",
		Description: `What it does:
  Writes study.yaml and weather.csv into the folder DIR, which is made if it is missing. The study
  is of an invented slope with twelve years of invented weather. It can be compared as it is, and
  explains each of its keys; keys that one may want later stand in it as comments. Where one of the
  two files is there already, nothing is written.

Examples:
  quietslope new my-slope
  quietslope new .
`,
		Flags: []cli.Flag{&cli.BoolFlag{Name: flagForce, Usage: "replace a study.yaml and a weather.csv that are there already"}},
		Action: func(c *cli.Context) error {
			dir := c.Args().First()
			if strings.HasPrefix(dir, "-") {
				return usagef(c.Command.Name, "%q begins with -, which would be taken for an option; write ./%s", dir, fault.Name(dir))
			}
			dir = filepath.Clean(dir) // which also takes away a / at the end, that would follow a link
			if err := writeStarter(c.Context, dir, c.Bool(flagForce)); err != nil {
				return err
			}
			o := &output{stdout: c.App.Writer}
			return o.write(c.Context, func(w io.Writer) error {
				_, err := io.WriteString(w, nextSteps(dir))
				return err
			})
		},
	}
}

// writeStarter writes all the files of the starter study into a folder, or none. Files that are there already are an
// error of use unless force is set.
func writeStarter(ctx context.Context, dir string, force bool) (err error) {
	missing, err := starterFolder(dir)
	if err != nil {
		return err
	}
	var files []*outFile
	var write []func(io.Writer) error
	for _, name := range starterFiles {
		content, err := starter.ReadFile("starter/" + name)
		if err != nil {
			return err
		}
		file, err := starterFile(inFolder(dir, name))
		if err != nil {
			return err
		}
		file.replaces = force
		files = append(files, file)
		write = append(write, func(w io.Writer) error {
			_, err := w.Write(content)
			return err
		})
	}
	if err := alreadyThere(dir); err != nil && !force {
		return err
	}
	for _, f := range files {
		if err := f.writable(); err != nil {
			return err
		}
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	if missing {
		switch made := os.Mkdir(dir, 0o777); {
		case made == nil:
			defer func() {
				if err != nil {
					os.Remove(dir) // only where it is empty
				}
			}()
		case !errors.Is(made, fs.ErrExist): // one that another run has made meanwhile is as good
			return &outputError{dir, made}
		}
	}
	err = replaceAll(ctx, files, write...)
	if !force && errors.Is(err, fs.ErrExist) { // written by another run, or by a person, meanwhile
		return cmp.Or(alreadyThere(dir), err)
	}
	return err
}

// alreadyThere refuses a folder that holds any of the files. It looks for the last first: where another run is placing
// them, those before it are then there too.
func alreadyThere(dir string) error {
	var there []string
	for _, name := range slices.Backward(starterFiles) {
		if _, err := os.Lstat(inFolder(dir, name)); err == nil {
			there = slices.Insert(there, 0, name)
		}
	}
	if there == nil {
		return nil
	}
	return usagef("new", "%q holds %s already, so nothing was written; name another folder, or replace with --force", dir, strings.Join(there, " and "))
}

// starterFolder reports whether a folder has to be made, and refuses what is none or cannot become one.
func starterFolder(dir string) (missing bool, err error) {
	refuse := func(format string, args ...any) (bool, error) {
		return false, usagef("new", "%q "+format, append([]any{dir}, args...)...)
	}
	info, err := os.Stat(dir)
	switch {
	case err == nil && !info.IsDir():
		return refuse("is a file; name a folder")
	case err == nil:
		return false, nil
	case errors.Is(err, syscall.ENAMETOOLONG), errors.Is(err, syscall.EINVAL):
		return refuse("is no name that a folder can have")
	case isNotFolder(err):
		return refuse("leads through a file; name a folder")
	case !errors.Is(err, fs.ErrNotExist):
		return false, &outputError{dir, err}
	}
	if info, err := os.Lstat(dir); err == nil && info.Mode()&fs.ModeSymlink != 0 {
		return refuse("is a link to nothing; name a folder")
	}
	parent := filepath.Dir(dir)
	if _, err := os.Stat(parent); errors.Is(err, fs.ErrNotExist) {
		return refuse("cannot be made, since there is no folder %q; make that first", parent)
	}
	return true, nil
}

// starterFile settles where a file goes. Only a plain file may ever be replaced.
func starterFile(name string) (*outFile, error) {
	file := &outFile{command: "new", name: name, path: name}
	info, err := os.Lstat(name)
	switch {
	case errors.Is(err, fs.ErrNotExist), err == nil && info.Mode().IsRegular():
		file.earlier = info // nil where there is none
		return file, nil
	case err != nil:
		return nil, &outputError{name, err}
	}
	return nil, usagef("new", "%q is there already and no plain file, so nothing was written; name another folder", name)
}

// nextSteps says what was written and what to type next.
func nextSteps(dir string) string {
	study, weather := inFolder(dir, starterFiles[0]), inFolder(dir, starterFiles[1])
	var b strings.Builder
	fmt.Fprintf(&b, "Wrote a study of an invented slope, to be changed into your own:\n  %s\n  %s\n\nNext:\n", fault.Name(study), fault.Name(weather))
	steps := [][2]string{
		{"quietslope check " + shellWord(study), "how the study and its weather are understood"},
		{"quietslope compare " + shellWord(study), "its options side by side"},
		{"quietslope help study", "every key, its unit and its range"},
	}
	widest := utf8.RuneCountInString(steps[1][0])
	for _, s := range steps {
		fmt.Fprintf(&b, "  %-*s    %s\n", widest, s[0], s[1])
	}
	return b.String()
}

// inFolder joins a folder and a file to a path that is never taken for an option.
func inFolder(dir, name string) string {
	path := filepath.Join(dir, name)
	if strings.HasPrefix(path, "-") {
		path = "." + string(filepath.Separator) + path
	}
	return path
}

// shellWord quotes a path for a shell where it needs that.
func shellWord(path string) string {
	if shown := fault.Name(path); shown != path { // bash and zsh read its escapes within $'...'
		return "$'" + strings.ReplaceAll(shown[1:len(shown)-1], "'", `\'`) + "'"
	}
	plain := func(r rune) bool {
		return r >= 0x80 || 'a' <= r && r <= 'z' || 'A' <= r && r <= 'Z' || '0' <= r && r <= '9' || strings.ContainsRune("_-./,:+@%", r) || r == filepath.Separator
	}
	if strings.IndexFunc(path, func(r rune) bool { return !plain(r) }) < 0 {
		return path
	}
	return "'" + strings.ReplaceAll(path, "'", `'\''`) + "'"
}
