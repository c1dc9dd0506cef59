//go:build unix

package weather

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"syscall"
	"testing"
	"time"
)

// A pipe can wait for its writer for ever; cancelling ends that at once.
func TestPipe(t *testing.T) {
	src := daily()
	src.Path = filepath.Join(t.TempDir(), "pipe")
	if err := syscall.Mkfifo(src.Path, 0o600); err != nil {
		t.Skip(err)
	}
	for _, write := range []string{"nothing", "", "date,rain,pet\n2020-01-01,1,2\n2020-01-02,1"} {
		ctx, cancel := context.WithTimeout(t.Context(), 20*time.Millisecond)
		done := make(chan error, 1)
		go func() {
			_, err := Read(ctx, src)
			done <- err
		}()
		if write != "nothing" {
			w, err := os.OpenFile(src.Path, os.O_WRONLY, 0)
			if err != nil {
				t.Fatal(err)
			}
			defer w.Close()
			if _, err := w.WriteString(write); err != nil {
				t.Fatal(err)
			}
		}
		select {
		case err := <-done:
			if !errors.Is(err, context.DeadlineExceeded) {
				t.Errorf("after %q: %v", write, err)
			}
		case <-time.After(5 * time.Second):
			t.Fatalf("after %q reading did not end", write)
		}
		cancel()
		if write == "nothing" { // lets the reader's open end
			w, err := os.OpenFile(src.Path, os.O_WRONLY, 0)
			if err != nil {
				t.Fatal(err)
			}
			w.Close()
			time.Sleep(5 * time.Millisecond)
		}
	}
}

func TestPipeWithARecord(t *testing.T) {
	src := daily()
	src.Path = filepath.Join(t.TempDir(), "pipe")
	if err := syscall.Mkfifo(src.Path, 0o600); err != nil {
		t.Skip(err)
	}
	go os.WriteFile(src.Path, []byte("date,rain,pet\n2020-01-01,1,2\n2020-01-02,1,2\n"), 0)
	if r, err := Read(t.Context(), src); err != nil || len(r.Rain) != 2 {
		t.Error(err)
	}
}

// Devices without end, and files that are no table.
func TestDevices(t *testing.T) {
	for path, want := range map[string]string{
		"/dev/zero": "w.csv:1: the file is not text: it has NUL bytes; " + saveAsText,
		"/dev/null": "w.csv: the file is empty",
	} {
		src := daily()
		src.Path = path
		if _, err := os.Stat(path); err != nil {
			continue
		}
		if _, err := Read(t.Context(), src); err == nil || err.Error() != want {
			t.Errorf("%s: %v", path, err)
		}
	}
}
