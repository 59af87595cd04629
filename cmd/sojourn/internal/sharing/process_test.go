package sharing

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"os/exec"
	"strconv"
	"strings"
	"sync/atomic"
	"syscall"
	"testing"
	"time"

	"sojourn/observables"
	"sojourn/observables/archive"
)

// TestMain turns this program into a process that works on a directory, for the
// tests that need several or kill them.
func TestMain(m *testing.M) {
	if os.Getenv("SHARING_TEST_CHILD") == "" {
		os.Exit(m.Run())
	}
	os.Exit(child(os.Args[1:]))
}

// opened is what a child says when it begins to work.
const opened = "opened\n"

// child works on a directory with the study of testPoints, and exits like the
// command: 0, 1 after an error, 3 after a signal.
func child(args []string) int {
	number := func(i int) int {
		n, err := strconv.Atoi(args[i])
		if err != nil {
			panic(err)
		}
		return n
	}
	path, points, workers := args[0], testPoints(number(1), number(2)), number(3)
	ctx, stop := Interrupt(context.Background(), os.Exit)
	defer stop()
	var t quiet
	var ran atomic.Int64
	j := job(&t, prepare(&t, path, points), points, workers, &ran)
	fmt.Print(opened)
	switch {
	case len(args) == 4:
	case args[4] == "together":
		io.ReadAll(os.Stdin) // until all are there
	default:
		j.Run = stubborn(args[4])
	}
	o, err := j.Work(ctx)
	fmt.Printf("ran %d left %d\n", ran.Load(), len(o.Left))
	if ctx.Err() != nil {
		fmt.Println(err)
		return 3
	}
	if err != nil {
		fmt.Println(err)
		return 1
	}
	return 0
}

// stubborn returns a Runner that says when it runs, and ends only when it is
// told to, or not even then.
func stubborn(how string) Runner {
	return func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		fmt.Println("running")
		if how == "deaf" {
			select {}
		}
		<-ctx.Done()
		return observables.Unit{}, ctx.Err()
	}
}

// quiet stands for a *testing.T in a child.
type quiet struct{ testing.TB }

func (quiet) Helper()           {}
func (quiet) Log(...any)        {}
func (quiet) Fatal(args ...any) { panic(fmt.Sprint(args...)) }

// process is a child that runs.
type process struct {
	*exec.Cmd
	in  io.WriteCloser
	out *bufio.Reader
}

// start starts a child.
func start(t *testing.T, args ...any) process {
	t.Helper()
	var text []string
	for _, a := range args {
		text = append(text, fmt.Sprint(a))
	}
	cmd := exec.Command(os.Args[0], text...)
	cmd.Env = append(os.Environ(), "SHARING_TEST_CHILD=1")
	cmd.Stderr = os.Stderr
	in, errIn := cmd.StdinPipe()
	out, errOut := cmd.StdoutPipe()
	if err := errors.Join(errIn, errOut); err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { cmd.Process.Kill() })
	return process{cmd, in, bufio.NewReader(out)}
}

// await reads up to a line that a child must say.
func (p process) await(t *testing.T, line string) {
	t.Helper()
	for {
		got, err := p.out.ReadString('\n')
		if err != nil {
			t.Fatalf("it never says %q: %v", line, err)
		}
		if got == line {
			return
		}
	}
}

// outcome waits for a child that shall end well.
func (p process) outcome(t *testing.T) (ran, left int) {
	t.Helper()
	text, _ := io.ReadAll(p.out)
	if err := p.Wait(); err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	if _, err := fmt.Sscanf(string(text), "ran %d left %d", &ran, &left); err != nil {
		t.Fatalf("%v in %q", err, text)
	}
	return ran, left
}

func TestTwoProcessesShareTheWork(t *testing.T) {
	path := t.TempDir()
	a := start(t, path, 4, 40, 1, "together")
	b := start(t, path, 4, 40, 2, "together")
	a.await(t, opened)
	b.await(t, opened)
	a.in.Close()
	b.in.Close()
	ranA, leftA := a.outcome(t)
	ranB, leftB := b.outcome(t)
	t.Logf("%d and %d units", ranA, ranB)
	if ranA+ranB != 160 || ranA < 16 || ranB < 16 {
		t.Errorf("the processes ran %d and %d of 160 units", ranA, ranB)
	}
	if leftA > 0 && leftB > 0 {
		t.Errorf("both left something: %d and %d parts", leftA, leftB)
	}
	checkWhole(t, path, testPoints(4, 40))
}

// Killed at any moment, and started again until all is done: the files are the
// same. The count grows on the way, so that parts are replaced, too.
func TestKilledProcessesLoseNothingButRunningUnits(t *testing.T) {
	path := t.TempDir()
	random := rand.New(rand.NewPCG(20261201, 7)) // moments of the kills; not reproducible in what they hit
	kills := 0
	for _, count := range []int{6, 21} {
		for complete := false; !complete; {
			child := start(t, path, 3, count, 2)
			// One in four ends while it opens the directory, the others while
			// they work. The first three are too short for all 63 units, 3 ms
			// each; later ones live longer, so that it ends on any machine.
			if random.IntN(4) > 0 {
				child.await(t, opened)
			}
			longest := 20
			if kills >= 3 {
				longest = 60 + 4*kills
			}
			life := time.Duration(random.IntN(longest)) * time.Millisecond
			timer := time.AfterFunc(life, func() { child.Process.Kill() })
			text, _ := io.ReadAll(child.out)
			err := child.Wait()
			timer.Stop()
			checkReadable(t, path)
			var ran, left int
			_, unsaid := fmt.Sscanf(strings.TrimPrefix(string(text), opened), "ran %d left %d", &ran, &left)
			switch {
			case unsaid == nil && left > 0:
				t.Fatalf("%d parts are left by a process that was alone", left)
			case unsaid == nil: // if it was killed, then on its way out
				complete = true
			case err == nil:
				t.Fatalf("it ended without a word: %s", text)
			default:
				if kills++; kills > 200 {
					t.Fatalf("killed 200 times and not done: %s", text)
				}
			}
		}
		checkWhole(t, path, testPoints(3, count))
	}
	t.Logf("killed %d times", kills)
	if kills < 3 {
		t.Errorf("only %d kills hit", kills)
	}
}

// checkReadable reads every finished part.
func checkReadable(t *testing.T, path string) {
	t.Helper()
	d, err := archive.Open(path)
	if err != nil {
		return // killed before there was a manifest
	}
	for _, p := range d.Manifest().Points {
		receipts, err := d.Parts(p.Key)
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range receipts {
			units, err := d.ReadUnits(p.Key, r.First)
			if err != nil || len(units) < r.Units {
				t.Fatalf("after a kill: %d units, %v", len(units), err)
			}
		}
	}
}

func TestSignals(t *testing.T) {
	for _, s := range []syscall.Signal{syscall.SIGINT, syscall.SIGTERM} {
		child := start(t, t.TempDir(), 1, 8, 1, "patient")
		child.await(t, "running\n")
		sent := time.Now()
		child.Process.Signal(s)
		io.Copy(io.Discard, child.out)
		child.Wait()
		if code := child.ProcessState.ExitCode(); code != 3 {
			t.Errorf("%v: exit status %d, want 3", s, code)
		}
		if took := time.Since(sent); took > 3*time.Second {
			t.Errorf("%v: it took %v", s, took)
		}

		child = start(t, t.TempDir(), 1, 8, 1, "deaf")
		child.await(t, "running\n")
		ended := make(chan struct{})
		go func() {
			child.Wait()
			close(ended)
		}()
		// Two signals that meet may count as one: it is sent until it acts.
		for waiting := true; waiting; {
			child.Process.Signal(s)
			select {
			case <-ended:
				waiting = false
			case <-time.After(100 * time.Millisecond):
			}
		}
		if code := child.ProcessState.ExitCode(); code != 128+int(s) {
			t.Errorf("%v twice: exit status %d, want %d", s, code, 128+int(s))
		}
	}
}

func TestStoppedWatchLeavesSignalsAlone(t *testing.T) {
	ctx, stop := Interrupt(context.Background(), func(int) { t.Error("exit was called") })
	stop()
	stop()
	if _, ok := context.Cause(ctx).(*Interrupted); ok {
		t.Error("stopping the watch looks like a signal")
	}
}
