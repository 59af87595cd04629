package sharing

import (
	"context"
	"crypto/sha256"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"sojourn/observables"
	"sojourn/observables/archive"
)

const studyText = "title = \"cold buffer\"\n"

// testPoints returns n points of count units, in parts of 4.
func testPoints(n, count int) []Point {
	var list []Point
	for i := range n {
		list = append(list, Point{
			Number: i,
			Key:    fmt.Sprintf("%016x", 0xb0f<<8+i),
			Count:  count,
			Extent: 4,
			Cost:   Cost{Sites: math.Ldexp(16, i), Rate: 1, Time: 1e5},
			Stamp:  archive.Receipt{Engine: "classes", StreamRevision: 1},
		})
	}
	return list
}

// prepare opens a results directory for points.
func prepare(t testing.TB, path string, points []Point) *archive.Dir {
	t.Helper()
	m := archive.Manifest{Tool: "test", Study: "cold-buffer", Scanned: []string{"bath.beta"}}
	for i, p := range points {
		beta := 0.25 + float64(i)/16
		m.Points = append(m.Points, archive.Point{
			Key: p.Key, Count: p.Count, Extent: p.Extent,
			Scan:  []archive.Parameter{{Name: "bath.beta", Value: fmt.Sprint(beta), Numbers: []float64{beta}}},
			Facts: archive.Facts{Beta: beta, Size: []int{8 << i, 8 << i}},
		})
	}
	d, err := archive.Prepare(path, m, []byte(studyText))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// testUnit returns the record of a unit, which follows from its numbers.
func testUnit(point, unit int) observables.Unit {
	u := observables.Unit{Unit: unit}
	u.Trajectories = []observables.TrajectoryRow{{Start: "random", Engine: "classes", Samples: 100, Jumps: int64(1000*point + unit)}}
	for k := range 20 {
		x := math.Sin(float64(point*1000003 + unit*1009 + k))
		u.Moments = append(u.Moments, observables.MomentRow{Segment: int32(k), Observable: "energy", Count: 7, Sum1: x, Sum2: x * x})
		u.Autocorrelation = append(u.Autocorrelation, observables.AutocorrelationRow{F: "energy", G: "energy", Lag: int64(k), Pairs: 9, SumFG: x / 3})
	}
	return u
}

// runner returns a Runner that takes some milliseconds, and counts units.
func runner(ran *atomic.Int64) Runner {
	return func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		for step := range uint64(3) {
			select {
			case <-ctx.Done():
				return observables.Unit{}, ctx.Err()
			case <-time.After(time.Millisecond):
				progress((step + 1) * 10)
			}
		}
		ran.Add(1)
		return testUnit(point, unit), nil
	}
}

// job returns a Job whose warnings are logged.
func job(t testing.TB, d *archive.Dir, points []Point, workers int, ran *atomic.Int64) *Job {
	return &Job{Dir: d, Points: points, Run: runner(ran), Workers: workers, Host: "cryostat",
		Warn: func(message string) { t.Log("warning: " + message) }}
}

// mustWork runs a Job that must not fail.
func mustWork(t testing.TB, j *Job) Outcome {
	t.Helper()
	o, err := j.Work(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	return o
}

// digests returns the SHA-256 of every table of every part, by path.
func digests(t testing.TB, path string) string {
	t.Helper()
	var lines []string
	err := filepath.WalkDir(filepath.Join(path, "parts"), func(file string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() || strings.Contains(e.Name(), ".tmp-") {
			return err
		}
		data, err := os.ReadFile(file)
		name, _ := filepath.Rel(path, file)
		lines = append(lines, fmt.Sprintf("%s %x", name, sha256.Sum256(data)))
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return strings.Join(lines, "\n")
}

// checkWhole compares a directory with what one worker makes in one go.
func checkWhole(t *testing.T, path string, points []Point) {
	t.Helper()
	want := filepath.Join(t.TempDir(), "reference")
	var ran atomic.Int64
	if o := mustWork(t, job(t, prepare(t, want, points), points, 1, &ran)); !o.Complete() {
		t.Fatalf("the reference is not complete: %+v", o)
	}
	if got, want := digests(t, path), digests(t, want); got != want {
		t.Errorf("the files differ from those of one worker:\n%s\nwant\n%s", got, want)
	}
	d, err := archive.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	if faults := d.Verify(); faults != nil {
		t.Errorf("faults: %v", faults)
	}
	for _, dir := range []string{"journal", "claims"} {
		entries, _ := os.ReadDir(filepath.Join(path, dir))
		for _, e := range entries {
			if !strings.Contains(e.Name(), ".tmp-") {
				t.Errorf("%s/%s is left", dir, e.Name())
			}
		}
	}
}

func TestSameFilesWhateverTheWorkers(t *testing.T) {
	points := testPoints(3, 10)
	for _, workers := range []int{2, 3, 16} {
		path := filepath.Join(t.TempDir(), "results")
		var ran atomic.Int64
		o := mustWork(t, job(t, prepare(t, path, points), points, workers, &ran))
		if !o.Complete() || ran.Load() != 30 || o.UnitsHere != 30 || o.PartsHere != 9 || o.Jumps != 900 || o.Done != 1 {
			t.Errorf("%d workers: %d units were run, outcome %+v", workers, ran.Load(), o)
		}
		checkWhole(t, path, points)
		// A second run finds nothing to do.
		again := mustWork(t, job(t, prepare(t, path, points), points, workers, &ran))
		if ran.Load() != 30 || !again.Complete() || again.UnitsHere != 0 || again.UnitsDone != 30 || again.PartsDone != 9 {
			t.Errorf("a second run: %d units, outcome %+v", ran.Load(), again)
		}
	}
}

func TestWorkersShareAPart(t *testing.T) {
	points := testPoints(1, 4) // one part
	var now, most atomic.Int64
	var ran atomic.Int64
	j := job(t, prepare(t, t.TempDir(), points), points, 2, &ran)
	run := j.Run
	j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		most.Store(max(most.Load(), now.Add(1)))
		defer now.Add(-1)
		time.Sleep(20 * time.Millisecond)
		return run(ctx, point, unit, progress)
	}
	mustWork(t, j)
	if most.Load() != 2 {
		t.Errorf("at most %d units of one part ran at once, want 2", most.Load())
	}
}

func TestGrownCountRunsNewUnitsOnly(t *testing.T) {
	path := t.TempDir()
	var ran atomic.Int64
	before := testPoints(2, 6)
	mustWork(t, job(t, prepare(t, path, before), before, 2, &ran))
	after := testPoints(3, 11) // one point more, too
	ran.Store(0)
	o := mustWork(t, job(t, prepare(t, path, after), after, 2, &ran))
	if want := int64(2*5 + 11); ran.Load() != want || !o.Complete() {
		t.Errorf("%d units were run, want %d", ran.Load(), want)
	}
	checkWhole(t, path, after)
	d, _ := archive.Open(path)
	if r, err := d.Receipt(after[0].Key, 4); err != nil || r.Units != 4 || r.Seconds <= 0 || r.Host != "cryostat" {
		t.Errorf("receipt %+v, %v", r, err)
	}
}

func TestShares(t *testing.T) {
	points := testPoints(3, 10)
	path := t.TempDir()
	var ran atomic.Int64
	for task := range 4 {
		j := job(t, prepare(t, path, points), points, 1, &ran)
		j.Share = Share{Task: task, Tasks: 4}
		o := mustWork(t, j)
		if o.PartsHere == 0 || o.PartsHere != o.Parts {
			t.Errorf("task %d did %d of %d parts", task, o.PartsHere, o.Parts)
		}
		for _, l := range o.Left {
			if !l.Other || l.Held {
				t.Errorf("task %d leaves %+v", task, l)
			}
		}
		if o.Complete() != (task == 3) {
			t.Errorf("after task %d: complete is %v", task, o.Complete())
		}
	}
	if ran.Load() != 30 {
		t.Errorf("%d units were run, want 30", ran.Load())
	}
	checkWhole(t, path, points)
}

func TestHeldPartsAreLeft(t *testing.T) {
	points := testPoints(2, 4)
	d := prepare(t, t.TempDir(), points)
	claim, _, err := d.Claim(archive.PartName(points[0].Key, 0))
	if err != nil {
		t.Fatal(err)
	}
	var ran atomic.Int64
	o := mustWork(t, job(t, d, points, 2, &ran))
	if ran.Load() != 4 || len(o.Left) != 1 || !o.Left[0].Held || o.Left[0].Holder.PID != os.Getpid() || o.Left[0].Key != points[0].Key || o.Left[0].Other {
		t.Errorf("%d units were run, left %+v", ran.Load(), o.Left)
	}
	claim.Release()
	if o := mustWork(t, job(t, d, points, 2, &ran)); ran.Load() != 8 || !o.Complete() {
		t.Errorf("after its release: %d units were run, left %+v", ran.Load(), o.Left)
	}
}

// A part that is held at first is taken once its holder has given it up, while
// there is other work.
func TestHeldPartsAreTriedAgain(t *testing.T) {
	points := testPoints(2, 8)
	d := prepare(t, t.TempDir(), points)
	claim, _, err := d.Claim(archive.PartName(points[1].Key, 0)) // the first to be tried
	if err != nil {
		t.Fatal(err)
	}
	var ran atomic.Int64
	j := job(t, d, points, 1, &ran)
	run := j.Run
	j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		claim.Release()
		return run(ctx, point, unit, progress)
	}
	if o := mustWork(t, j); !o.Complete() || ran.Load() != 16 {
		t.Errorf("%d units were run, left %+v", ran.Load(), o.Left)
	}
}

// The claim of a process that was held up is lost; it stops working on the
// part, and keeps what it has finished.
func TestLostClaim(t *testing.T) {
	points := testPoints(1, 4)
	path := t.TempDir()
	d := prepare(t, path, points)
	name := archive.PartName(points[0].Key, 0)
	var ran atomic.Int64
	var warnings []string
	j := job(t, d, points, 1, &ran)
	j.beat = time.Millisecond
	j.Warn = func(message string) { warnings = append(warnings, message) }
	run := j.Run
	var other *archive.Claim
	j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		if unit == 1 {
			os.Remove(filepath.Join(path, "claims", name+".json"))
			other, _, _ = d.Claim(name)
			time.Sleep(200 * time.Millisecond)
		}
		return run(ctx, point, unit, progress)
	}
	o := mustWork(t, j)
	if ran.Load() != 2 || len(o.Left) != 1 || !o.Left[0].Held {
		t.Errorf("%d units were run, left %+v", ran.Load(), o.Left)
	}
	if len(warnings) != 1 || !strings.Contains(warnings[0], name) {
		t.Errorf("warnings %q", warnings)
	}
	if err := other.Beat(); err != nil {
		t.Errorf("the taker's claim was removed: %v", err)
	}
	other.Release()
	if o := mustWork(t, job(t, d, points, 1, &ran)); ran.Load() != 4 || !o.Complete() {
		t.Errorf("%d units were run in all, left %+v", ran.Load(), o.Left)
	}
	checkWhole(t, path, points)
}

func TestCancelledWorkStopsAtOnce(t *testing.T) {
	points := testPoints(2, 8)
	path := t.TempDir()
	cause := &Interrupted{os.Interrupt}
	ctx, cancel := context.WithCancelCause(context.Background())
	var ran atomic.Int64
	j := job(t, prepare(t, path, points), points, 2, &ran)
	run := j.Run
	j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		if ran.Load() >= 5 {
			cancel(cause)
			<-ctx.Done()
			return observables.Unit{}, ctx.Err()
		}
		return run(ctx, point, unit, progress)
	}
	start := time.Now()
	o, err := j.Work(ctx)
	if got := (*Interrupted)(nil); !errors.As(err, &got) || got != cause {
		t.Errorf("error %v, want the cause of the cancellation", err)
	}
	if time.Since(start) > 5*time.Second {
		t.Errorf("it took %v", time.Since(start))
	}
	kept := int(ran.Load())
	if o.UnitsHere != kept || o.Complete() {
		t.Errorf("%d units were run, outcome %+v", kept, o)
	}
	for _, l := range o.Left {
		if l.Held {
			t.Errorf("%+v is still claimed", l)
		}
	}
	ran.Store(0)
	mustWork(t, job(t, prepare(t, path, points), points, 2, &ran))
	if int(ran.Load()) != 16-kept {
		t.Errorf("%d units were run again", int(ran.Load())+kept-16)
	}
	checkWhole(t, path, points)
}

func TestProgressIsToldInOrder(t *testing.T) {
	points := testPoints(2, 10)
	d := prepare(t, t.TempDir(), points)
	var ran atomic.Int64
	j := job(t, d, points, 3, &ran)
	var mu sync.Mutex
	var last Progress
	told := 0
	j.Notify = func(p Progress) {
		if !mu.TryLock() {
			t.Error("two calls overlap")
			return
		}
		defer mu.Unlock()
		told++
		if p.UnitsDone < last.UnitsDone || p.PartsDone < last.PartsDone || p.Jumps < last.Jumps || p.UnitsHere < last.UnitsHere {
			t.Errorf("progress goes back from %+v to %+v", last, p)
		}
		if p.Done < 0 || p.Done > 1 {
			t.Errorf("a share of %v is done", p.Done)
		}
		last = p
	}
	o := mustWork(t, j)
	if last != o.Progress || told < 20 {
		t.Errorf("told %d times, at last %+v; outcome %+v", told, last, o.Progress)
	}
	if o.Units != 20 || o.UnitsDone != 20 || o.Parts != 6 || o.PartsDone != 6 || o.Seconds <= 0 {
		t.Errorf("outcome %+v", o.Progress)
	}
}
