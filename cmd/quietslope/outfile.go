package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"

	"quietslope/scenario/fault"
)

// outFile is a file that a result will be written to: whole, or not at all.
type outFile struct {
	command string
	name    string      // as the user named it
	path    string      // the same with links followed
	earlier os.FileInfo // nil when there is none

	// replaces says whether a file that has come up since may be replaced, too.
	replaces bool
}

// openOut settles where a result goes, before anything is computed. It opens nothing for good.
func openOut(command, name string) (*outFile, error) {
	o := &outFile{command: command, name: name, path: name, replaces: true}
	refuse := func(format string, args ...any) error {
		return usagef(command, "--out %q: %s", name, fmt.Sprintf(format, args...))
	}
	switch {
	case name == "":
		return nil, usagef(command, "--out needs a file name")
	case name == "-":
		return nil, refuse("leave --out away to write to standard output")
	case strings.HasPrefix(name, "-"):
		return nil, refuse("a file name that begins with - is not taken; write ./%s", fault.Name(name))
	}
	if device(name) {
		return nil, refuse("is no plain file; leave --out away to write to standard output")
	}
	info, err := os.Stat(name)
	switch {
	case err == nil && info.IsDir():
		return nil, refuse("is a folder; name a file in it")
	case err == nil && !info.Mode().IsRegular():
		return nil, refuse("is no plain file; leave --out away to write to standard output")
	case err == nil:
		o.earlier = info
		if o.path, err = filepath.EvalSymlinks(name); err != nil {
			return nil, &outputError{name, err}
		}
		return o, o.writable()
	case !errors.Is(err, fs.ErrNotExist) && !isNotFolder(err):
		return nil, &outputError{name, err}
	}
	if _, err := os.Lstat(name); err == nil {
		return nil, refuse("is a link to nothing")
	}
	folder := filepath.Dir(name)
	if info, err = os.Stat(folder); err != nil && (errors.Is(err, fs.ErrNotExist) || isNotFolder(err)) {
		return nil, refuse("there is no folder %q", folder)
	} else if err != nil {
		return nil, &outputError{name, err}
	}
	switch {
	case !info.IsDir():
		return nil, refuse("%q is no folder", folder)
	case os.IsPathSeparator(name[len(name)-1]):
		return nil, refuse("there is no such folder, and no file name")
	}
	return o, nil
}

// writable reports an earlier file that may not be written. It is left alone, though its folder would let it be
// replaced.
func (o *outFile) writable() error {
	if o.earlier == nil {
		return nil
	}
	f, err := os.OpenFile(o.path, os.O_WRONLY, 0)
	if err != nil {
		return &outputError{o.name, err}
	}
	return f.Close()
}

// spare refuses to replace a file that the run reads, by whatever name or link.
func (o *outFile) spare(what, path string) error {
	info, err := os.Stat(path)
	if err != nil || o.earlier == nil || !os.SameFile(info, o.earlier) {
		return nil // a file that cannot be read is for its reader to report
	}
	return usagef(o.command, "--out %q is %s, which this run reads; name another file", o.name, what)
}

// write sends what f writes to the file or to standard output. When it cannot, or when ctx ends, no file is left
// half-written and an earlier one stays as it was.
func (o *output) write(ctx context.Context, f func(io.Writer) error) error {
	if o.file == nil {
		// A reader that has stopped reading must not keep Ctrl-C from working.
		_, err := await(ctx, func() (struct{}, error) {
			return struct{}{}, f(&guarded{ctx, o.stdout, "standard output"})
		})
		return err
	}
	return o.file.replace(ctx, f)
}

// replace writes beside the file and then takes its place.
func (o *outFile) replace(ctx context.Context, f func(io.Writer) error) error {
	return replaceAll(ctx, []*outFile{o}, f)
}

// replaceAll writes files beside those that they will replace, each with its own f, and puts them in their places once
// all are whole. When one cannot be written or ctx ends before that, nothing is left of any. When one cannot be put in
// its place, those before it are taken away again where there was no earlier file.
func replaceAll(ctx context.Context, files []*outFile, write ...func(io.Writer) error) error {
	var written []*whole
	placed := 0
	defer func() {
		for _, w := range written[placed:] {
			os.Remove(w.name)
		}
		if placed == len(files) {
			return
		}
		for i, o := range files[:placed] {
			now, err := os.Lstat(o.path)
			if o.earlier == nil && err == nil && os.SameFile(now, written[i].info) { // not what others put there since
				os.Remove(o.path)
			}
		}
	}()
	for i, o := range files {
		w, err := o.writeBeside(ctx, write[i])
		if err != nil {
			return err
		}
		written = append(written, w)
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	for i, o := range files {
		if err := o.place(written[i].name); err != nil {
			return &outputError{o.name, err}
		}
		placed++
	}
	return nil
}

// link is a variable for tests.
var link = os.Link

// place puts the file of a name in its place. Where nothing may be replaced, something that stands there is
// fs.ErrExist.
func (o *outFile) place(name string) error {
	if o.replaces {
		return os.Rename(name, o.path)
	}
	switch err := link(name, o.path); { // unlike a renaming it replaces nothing
	case err == nil:
		os.Remove(name)
		return nil
	case errors.Is(err, fs.ErrExist):
		return err
	}
	// Some file systems know no links. An empty file holds the place there.
	f, err := os.OpenFile(o.path, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	f.Close()
	if err := os.Rename(name, o.path); err != nil {
		os.Remove(o.path)
		return err
	}
	return nil
}

// whole is a file that is written whole, under a name of its own.
type whole struct {
	name string
	info os.FileInfo
}

// writeBeside writes a file whole, in the same folder.
func (o *outFile) writeBeside(ctx context.Context, f func(io.Writer) error) (*whole, error) {
	temporary, err := createBeside(o.path)
	if err != nil {
		return nil, &outputError{o.name, err}
	}
	done := false
	defer func() {
		if !done {
			temporary.Close()
			os.Remove(temporary.Name())
		}
	}()
	if err := f(&guarded{ctx, temporary, o.name}); err != nil {
		return nil, err
	}
	if o.earlier != nil {
		if err := temporary.Chmod(o.earlier.Mode().Perm()); err != nil {
			return nil, &outputError{o.name, err}
		}
	}
	if err := temporary.Sync(); err != nil {
		return nil, &outputError{o.name, err}
	}
	info, err := temporary.Stat()
	if err != nil {
		return nil, &outputError{o.name, err}
	}
	if err := temporary.Close(); err != nil {
		return nil, &outputError{o.name, err}
	}
	done = true
	return &whole{temporary.Name(), info}, nil
}

// createBeside makes a new file in the folder of path. Unlike os.CreateTemp it leaves the mode to the user's umask.
func createBeside(path string) (*os.File, error) {
	const tries = 100
	for i := 0; ; i++ {
		name := filepath.Join(filepath.Dir(path), fmt.Sprintf(".quietslope-%d-%d.part", os.Getpid(), i))
		f, err := os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
		if err == nil || !errors.Is(err, fs.ErrExist) || i == tries {
			return f, err
		}
	}
}

// guarded stops writing once ctx has ended, and says where a write failed.
type guarded struct {
	ctx   context.Context
	w     io.Writer
	where string
}

func (g *guarded) Write(b []byte) (int, error) {
	if err := g.ctx.Err(); err != nil {
		return 0, err
	}
	n, err := g.w.Write(b)
	if err != nil {
		return n, &outputError{g.where, err}
	}
	return n, nil
}

// device reports whether a path names something of the system, such as /dev/stdout. That can be a link to the very
// file that standard output goes to, which must not be replaced under it.
func device(path string) bool {
	full, err := filepath.Abs(path)
	return err == nil && (strings.HasPrefix(full, "/dev/") && !strings.HasPrefix(full, "/dev/shm/") || strings.HasPrefix(full, "/proc/"))
}

// isNotFolder reports whether a path leads through something that is no folder.
func isNotFolder(err error) bool { return errors.Is(err, syscall.ENOTDIR) }
