package main

import (
	"fmt"
	"os"
	"os/exec"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"
	"unsafe"
)

// terminal is a shell in a terminal of its own, at which a test types.
type terminal struct {
	keys *os.File
	mu   sync.Mutex
	seen strings.Builder // all that the shell has shown
}

// openTerminal starts a shell in a pseudo-terminal (pty(7), ioctl_tty(2) of Linux).
func openTerminal(t *testing.T, shell string, args ...string) *terminal {
	t.Helper()
	control := func(f *os.File, request uintptr, value *uint32) {
		if _, _, err := syscall.Syscall(syscall.SYS_IOCTL, f.Fd(), request, uintptr(unsafe.Pointer(value))); err != 0 {
			t.Fatal(err)
		}
	}
	master, err := os.OpenFile("/dev/ptmx", os.O_RDWR, 0)
	if err != nil {
		t.Skipf("there is no pseudo-terminal: %v", err)
	}
	var number, locked uint32
	control(master, syscall.TIOCGPTN, &number)
	control(master, syscall.TIOCSPTLCK, &locked)
	slave, err := os.OpenFile(fmt.Sprintf("/dev/pts/%d", number), os.O_RDWR|syscall.O_NOCTTY, 0)
	if err != nil {
		t.Fatal(err)
	}
	size := [4]uint16{40, 200}
	if _, _, err := syscall.Syscall(syscall.SYS_IOCTL, slave.Fd(), syscall.TIOCSWINSZ, uintptr(unsafe.Pointer(&size))); err != 0 {
		t.Fatal(err)
	}
	cmd := exec.Command(shell, args...)
	cmd.Stdin, cmd.Stdout, cmd.Stderr = slave, slave, slave
	cmd.SysProcAttr = &syscall.SysProcAttr{Setsid: true, Setctty: true}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	slave.Close()
	term := &terminal{keys: master}
	read := make(chan struct{})
	go func() {
		defer close(read)
		b := make([]byte, 4096)
		for {
			n, err := master.Read(b)
			term.mu.Lock()
			term.seen.Write(b[:n])
			term.mu.Unlock()
			if err != nil {
				return
			}
		}
	}()
	t.Cleanup(func() {
		cmd.Process.Kill()
		cmd.Wait()
		<-read
		master.Close()
	})
	return term
}

func (x *terminal) shown() string {
	x.mu.Lock()
	defer x.mu.Unlock()
	return x.seen.String()
}

// press types, with \t for the Tab key and \n for Return.
func (x *terminal) press(t *testing.T, keys string) {
	t.Helper()
	if _, err := x.keys.WriteString(strings.ReplaceAll(keys, "\n", "\r")); err != nil {
		t.Fatal(err)
	}
}

// wait waits until a condition holds.
func (x *terminal) wait(t *testing.T, what string, holds func() bool) {
	t.Helper()
	for deadline := time.Now().Add(20 * time.Second); !holds(); time.Sleep(5 * time.Millisecond) {
		if time.Now().After(deadline) {
			t.Fatalf("waited in vain for %s; the shell shows\n%s", what, x.shown())
		}
	}
}

// TestTypedCompletion types lines with the Tab key into bash and zsh and looks at the words that the program then gets.
func TestTypedCompletion(t *testing.T) {
	type typing struct {
		keys string
		want []string
	}
	lines := []typing{
		{"quietslope che\tha\t\n", []string{"check", "hard.yaml"}},
		{"quietslope help st\t\n", []string{"help", "study"}},
		{"quietslope compare --fo\tj\tha\t\n", []string{"compare", "--format", "json", "hard.yaml"}},
		{"quietslope compare --format=j\tha\t\n", []string{"compare", "--format=json", "hard.yaml"}},
		{"quietslope compare s\ti\t\n", []string{"compare", "sub folder/it's $5.yml"}},
		{"quietslope compare \"s\ti\t\n", []string{"compare", "sub folder/it's $5.yml"}},
		{"quietslope compare 's\tp\t\n", []string{"compare", "sub folder/plain one.yaml"}},
		{"quietslope compare ~/work/h\t\n", []string{"compare", "$HOME/work/hard.yaml"}},
		{"quietslope compare ha\t--out s\tn\t\n", []string{"compare", "hard.yaml", "--out", "sub folder/notes.txt"}},
		{"quietslope compare ha\t--out=s\tn\t\n", []string{"compare", "hard.yaml", "--out=sub folder/notes.txt"}},
		{"quietslope new s\tx\n", []string{"new", "sub folder/x"}},
		{"quietslope levels s\ti\t--op\tas\t\n", []string{"levels", "sub folder/it's $5.yml", "--option", "as it stands"}},
		{"quietslope levels ~/work/hard.yaml --option as\t\n", []string{"levels", "$HOME/work/hard.yaml", "--option", "as it stands"}},
		{"quietslope levels hard.yaml --option=at\\ a:\t\n", []string{"levels", "hard.yaml", "--option=at a:b=c@d, e"}},
		{"quietslope levels hard.yaml --option at\\ a:b=c@\t\n", []string{"levels", "hard.yaml", "--option", "at a:b=c@d, e"}},
		{"~/bin/quietslope levels hard.yaml --option as\t--option it\t\n", []string{"levels", "hard.yaml", "--option", "as it stands", "--option", "it's cheap"}},
	}
	add := func(file, begins, name string) {
		for _, before := range []string{"--option ", "--option=", "--option '", "--option=\"", "--option \""} {
			word := before + quoteBash(begins, before[len(before)-1])
			given := strings.TrimRight(before, `"'`) + name
			want := []string{"levels", file, given}
			if rest, apart := strings.CutPrefix(given, "--option "); apart {
				want = []string{"levels", file, "--option", rest}
			}
			lines = append(lines, typing{"quietslope levels " + file + " " + word + "\t\n", want})
		}
	}
	for _, n := range hardNames {
		add("hard.yaml", string([]rune(n)[:2]), n)
	}
	add("tilde.yaml", "~", "~")
	add("user.yaml", "~", "~root")

	for _, tt := range []struct {
		shell string
		args  []string
		setUp string
	}{
		{"bash", []string{"--norc", "--noprofile", "-i"}, "source <(quietslope completion bash)"},
		{"zsh", []string{"-f", "-i"}, "autoload -Uz compinit; compinit -D -u; source <(quietslope completion zsh)"},
		{"fish", []string{"--no-config", "-i"}, "quietslope completion fish | source"},
	} {
		t.Run(tt.shell, func(t *testing.T) {
			needShell(t, tt.shell)
			typed := shellFolder(t)
			x := openTerminal(t, tt.shell, tt.args...)
			x.press(t, tt.setUp+"; echo rea''dy\n")
			x.wait(t, "the script to load", func() bool { return strings.Contains(x.shown(), "ready") })
			for _, line := range lines {
				x.press(t, line.keys)
				var got string
				x.wait(t, fmt.Sprintf("%q", line.keys), func() bool {
					text, err := os.ReadFile(typed)
					got = string(text)
					return err == nil && strings.HasSuffix(got, "\nend\n")
				})
				os.Remove(typed)
				want := strings.ReplaceAll(strings.Join(line.want, "\n"), "$HOME/work", os.Getenv("HOME")+"/work") + "\nend\n"
				if got != want {
					t.Errorf("%q gives %q, want %q", line.keys, got, want)
				}
			}
		})
	}
}
