package prompt

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"golang.org/x/sys/unix"
)

// patient is how long a test waits for what must come; a loaded machine is slow.
const patient = 20 * time.Second

// pty is the user's end of a pseudo-terminal with the program at the other.
type pty struct {
	t     *testing.T
	user  *os.File
	other *os.File // the program's end, to look at its modes
	cmd   *exec.Cmd
	ended chan error

	mu   sync.Mutex
	said bytes.Buffer // all that came, as it came
	seen int          // how far expect has got
}

var program struct {
	once sync.Once
	path string
	err  error
}

// built is the path of the program, built once for all tests.
func built(t *testing.T) string {
	t.Helper()
	program.once.Do(func() {
		folder, err := os.MkdirTemp("", "nearcell-prompt")
		if err != nil {
			program.err = err
			return
		}
		program.path = filepath.Join(folder, "nearcell")
		out, err := exec.Command("go", "build", "-o", program.path, "nearcell/cmd/nearcell").CombinedOutput()
		if err != nil {
			program.err = fmt.Errorf("%w\n%s", err, out)
		}
	})
	if program.err != nil {
		t.Fatal(program.err)
	}
	return program.path
}

func TestMain(m *testing.M) {
	code := m.Run()
	if program.path != "" {
		os.RemoveAll(filepath.Dir(program.path))
	}
	os.Exit(code)
}

// openPty gives both ends of a new pseudo-terminal.
func openPty(t *testing.T, width, height uint16) (user, other *os.File) {
	t.Helper()
	user, err := os.OpenFile("/dev/ptmx", os.O_RDWR|syscall.O_NOCTTY, 0)
	if err != nil {
		t.Skipf("there are no pseudo-terminals here: %v", err)
	}
	fd := int(user.Fd())
	number, err := unix.IoctlGetInt(fd, unix.TIOCGPTN)
	if err != nil {
		t.Skipf("there are no pseudo-terminals here: %v", err)
	}
	if err := unix.IoctlSetPointerInt(fd, unix.TIOCSPTLCK, 0); err != nil {
		t.Fatal(err)
	}
	other, err = os.OpenFile(fmt.Sprintf("/dev/pts/%d", number), os.O_RDWR|syscall.O_NOCTTY, 0)
	if err != nil {
		t.Skipf("there are no pseudo-terminals here: %v", err)
	}
	if err := unix.IoctlSetWinsize(fd, unix.TIOCSWINSZ, &unix.Winsize{Col: width, Row: height}); err != nil {
		t.Fatal(err)
	}
	return user, other
}

// start runs the program in a folder at a terminal of its own.
func start(t *testing.T, folder string, args ...string) *pty {
	t.Helper()
	path := built(t)
	user, other := openPty(t, 80, 24)
	p := &pty{t: t, user: user, other: other, ended: make(chan error, 1)}
	p.cmd = exec.Command(path, args...)
	p.cmd.Dir = folder
	p.cmd.Env = append(os.Environ(), "TERM=xterm", "NO_COLOR=1")
	p.cmd.Stdin, p.cmd.Stdout, p.cmd.Stderr = other, other, other
	p.cmd.SysProcAttr = &syscall.SysProcAttr{Setsid: true, Setctty: true}
	if err := p.cmd.Start(); err != nil {
		t.Fatal(err)
	}
	go func() {
		buffer := make([]byte, 4096)
		for {
			n, err := user.Read(buffer)
			p.mu.Lock()
			p.said.Write(buffer[:n])
			p.mu.Unlock()
			if err != nil {
				return
			}
		}
	}()
	go func() { p.ended <- p.cmd.Wait() }()
	t.Cleanup(func() {
		p.cmd.Process.Kill()
		other.Close()
		user.Close()
	})
	return p
}

func (p *pty) send(keys string) {
	p.t.Helper()
	if _, err := io.WriteString(p.user, keys); err != nil {
		p.t.Fatal(err)
	}
}

var escapes = regexp.MustCompile("\x1b\\[[0-9;?]*[A-Za-z]")

// screen is what came so far without what moves the cursor.
func (p *pty) screen() string {
	p.mu.Lock()
	defer p.mu.Unlock()
	return strings.ReplaceAll(escapes.ReplaceAllString(p.said.String(), ""), "\r", "")
}

// expect waits for a text beyond what was expected before, and gives what came.
func (p *pty) expect(text string) string {
	p.t.Helper()
	for end := time.Now().Add(patient); ; time.Sleep(2 * time.Millisecond) {
		all := p.screen()
		if n := strings.Index(all[min(p.seen, len(all)):], text); n >= 0 {
			came := all[p.seen : p.seen+n+len(text)]
			p.seen += n + len(text)
			return came
		}
		if time.Now().After(end) {
			p.t.Fatalf("%q did not come; what came:\n%s", text, all[min(p.seen, len(all)):])
		}
	}
}

// asked waits until the prompt stands there and the terminal is its own.
func (p *pty) asked(mark string) {
	p.t.Helper()
	p.expect(mark)
	for end := time.Now().Add(patient); p.modes().Lflag&unix.ICANON != 0; time.Sleep(time.Millisecond) {
		if time.Now().After(end) {
			p.t.Fatal("the terminal is not the line editor's")
		}
	}
}

func (p *pty) modes() *unix.Termios {
	p.t.Helper()
	modes, err := unix.IoctlGetTermios(int(p.other.Fd()), unix.TCGETS)
	if err != nil {
		p.t.Fatal(err)
	}
	return modes
}

// ends waits for the program's end, which must leave the terminal as it was.
func (p *pty) ends(code int) {
	p.t.Helper()
	select {
	case err := <-p.ended:
		got := 0
		var failed *exec.ExitError
		if errors.As(err, &failed) {
			got = failed.ExitCode()
		} else if err != nil {
			p.t.Fatal(err)
		}
		if got != code {
			p.t.Fatalf("exit code %d, not %d; the screen:\n%s", got, code, p.screen())
		}
	case <-time.After(patient):
		p.t.Fatalf("the program does not end; the screen:\n%s", p.screen())
	}
	if modes := p.modes(); modes.Lflag&unix.ICANON == 0 || modes.Lflag&unix.ECHO == 0 || modes.Lflag&unix.ISIG == 0 {
		p.t.Fatal("the terminal was left in the line editor's modes")
	}
}
