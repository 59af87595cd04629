package main

import (
	"bytes"
	"errors"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// With this variable set the test binary is the program itself, so that tests
// can start, stop and kill processes.
const actAsProgram = "SOJOURN_TEST_ACT_AS_PROGRAM"

func TestMain(m *testing.M) {
	if os.Getenv(actAsProgram) != "" {
		main()
	}
	os.Exit(m.Run())
}

// process is a running program.
type process struct {
	*exec.Cmd
	stdout, stderr bytes.Buffer
}

func start(t *testing.T, dir string, args ...string) *process {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	p := &process{Cmd: exec.Command(self, args...)}
	p.Dir = dir
	p.Env = append(os.Environ(), actAsProgram+"=1")
	p.Stdout, p.Stderr = &p.stdout, &p.stderr
	if err := p.Start(); err != nil {
		t.Fatal(err)
	}
	return p
}

// end waits for the process and returns its exit status, -1 for a signal.
func (p *process) end(t *testing.T) int {
	t.Helper()
	var exit *exec.ExitError
	switch err := p.Wait(); {
	case err == nil:
		return 0
	case errors.As(err, &exit):
		return exit.ExitCode()
	default:
		t.Fatal(err)
	}
	return 0
}

// rows returns the content of every table below parts, by path.
func rows(t *testing.T, dir string) map[string]string {
	t.Helper()
	out := map[string]string{}
	root := filepath.Join(dir, "parts")
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || filepath.Ext(path) != ".parquet" {
			return err // unfinished files of killed processes have other names
		}
		raw, err := os.ReadFile(path)
		out[strings.TrimPrefix(path, root)] = string(raw)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func sameRows(t *testing.T, what string, got, want map[string]string) {
	t.Helper()
	for path, bytes := range want {
		switch other, ok := got[path]; {
		case !ok:
			t.Errorf("%s: %s is missing", what, path)
		case other != bytes:
			t.Errorf("%s: %s differs", what, path)
		}
	}
	for path := range got {
		if _, ok := want[path]; !ok {
			t.Errorf("%s: %s should not be there", what, path)
		}
	}
}

const sharedStudy = `
[lattice]
size = [24, 24]

[hamiltonian]
model = "ising"

[scan]
beta = [0.2, 0.3]

[trajectory]
count  = 12
start  = "both"
settle = 20.0
span   = 600.0
seed   = 8

[covariance]
of = "spin"
`

// The same study gives the same rows, bit for bit, whoever runs it: one worker
// or two, two processes at once, shares, and processes that were stopped or
// killed on the way.
func TestSameRowsHoweverRun(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "study.toml"), []byte(sharedStudy), 0o666); err != nil {
		t.Fatal(err)
	}
	run := func(out string, more ...string) *process {
		return start(t, dir, append([]string{"run", "study.toml", "--quiet", "-o", out}, more...)...)
	}
	finish := func(out string, more ...string) map[string]string {
		t.Helper()
		p := run(out, more...)
		if status := p.end(t); status != exitDone || !strings.Contains(p.stdout.String(), "tau_int") {
			t.Fatalf("%s: status %d\n%s%s", out, status, p.stdout.String(), p.stderr.String())
		}
		return rows(t, filepath.Join(dir, out))
	}
	want := finish("one", "--workers", "1")
	if len(want) == 0 {
		t.Fatal("no rows")
	}
	sameRows(t, "two workers", finish("two", "--workers", "2", "--audit"), want)

	a, b := run("both", "--workers", "1"), run("both", "--workers", "1")
	for _, p := range []*process{a, b} {
		if status := p.end(t); status != exitDone {
			t.Fatalf("two processes: status %d\n%s", status, p.stderr.String())
		}
	}
	sameRows(t, "two processes", finish("both"), want)

	for k := range 3 {
		p := run("shares", "--task", string(rune('0'+k)), "--tasks", "3", "--workers", "1")
		if status := p.end(t); status != exitDone {
			t.Fatalf("share %d: status %d\n%s", k, status, p.stderr.String())
		}
	}
	sameRows(t, "three shares", rows(t, filepath.Join(dir, "shares")), want)

	for range 3 {
		p := run("killed", "--workers", "1")
		time.Sleep(250 * time.Millisecond)
		p.Process.Kill()
		p.Wait()
	}
	sameRows(t, "after kills", finish("killed"), want)

	p := run("stopped", "--workers", "1")
	time.Sleep(250 * time.Millisecond)
	if err := p.Process.Signal(syscall.SIGTERM); err != nil {
		t.Fatal(err)
	}
	if status := p.end(t); status != exitInterrupted {
		t.Errorf("stopped by a signal: status %d, want %d\n%s", status, exitInterrupted, p.stderr.String())
	}
	sameRows(t, "after a signal", finish("stopped"), want)
}

// A scan that is extended by one beta, or a larger count, keeps what is there.
func TestExtendedScanKeepsRows(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "study.toml")
	run := func(text, out string) map[string]string {
		t.Helper()
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
		p := start(t, dir, "run", "study.toml", "--quiet", "-o", out)
		if status := p.end(t); status != exitDone {
			t.Fatalf("status %d\n%s", status, p.stderr.String())
		}
		return rows(t, filepath.Join(dir, out))
	}
	small := strings.Replace(sharedStudy, "span   = 600.0", "span   = 200.0", 1)
	before := run(small, "grown")
	wider := strings.Replace(small, "[0.2, 0.3]", "[0.2, 0.25, 0.3]", 1)
	after := run(wider, "grown")
	for name, bytes := range before {
		if after[name] != bytes {
			t.Errorf("%s changed when the scan was extended", name)
		}
	}
	longer := strings.Replace(wider, "count  = 12", "count  = 20", 1)
	sameRows(t, "grown in steps", run(longer, "grown"), run(longer, "fresh"))
}

// Where fits/ cannot be written the fit is printed all the same, with a warning;
// a results directory that cannot be made is a failure, not a wrong request.
func TestUnwritableDirectories(t *testing.T) {
	dir := t.TempDir()
	t.Chdir(dir)
	small := strings.NewReplacer("span   = 600.0", "span   = 100.0", "[24, 24]", "[4, 4]").Replace(sharedStudy)
	if err := os.WriteFile("study.toml", []byte(small), 0o666); err != nil {
		t.Fatal(err)
	}
	if status, _, stderr := sojourn("run", "study.toml", "--quiet"); status != exitDone {
		t.Fatalf("status %d, %s", status, stderr)
	}
	if err := os.RemoveAll("study/fits"); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile("study/fits", nil, 0o666); err != nil {
		t.Fatal(err)
	}
	status, stdout, stderr := sojourn("fit", "study")
	if status != exitDone || !strings.Contains(stdout, "tau_int") || !strings.Contains(stderr, "warning: the fits could not be written") {
		t.Errorf("status %d\n%s%s", status, stdout, stderr)
	}
	status, _, stderr = sojourn("run", "study.toml", "--quiet", "-o", "study.toml/below")
	if status != exitFailed || stderr == "" {
		t.Errorf("status %d, want %d: %s", status, exitFailed, stderr)
	}
}
