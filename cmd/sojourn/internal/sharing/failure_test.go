package sharing

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"sync/atomic"
	"testing"

	"sojourn/observables"
	"sojourn/observables/archive"
)

func TestFailingUnitIsNamed(t *testing.T) {
	cause := errors.New("the table of rates is empty")
	for name, fail := range map[string]func(){
		"an error": nil,
		"a panic":  func() { panic("index out of range") },
	} {
		points := testPoints(2, 8)
		path := t.TempDir()
		var ran atomic.Int64
		j := job(t, prepare(t, path, points), points, 2, &ran)
		run := j.Run
		j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
			if point == 1 && unit == 5 {
				if fail != nil {
					fail()
				}
				return observables.Unit{}, cause
			}
			return run(ctx, point, unit, progress)
		}
		o, err := j.Work(context.Background())
		var u *UnitError
		if !errors.As(err, &u) || u.Point != 1 || u.Unit != 5 || u.Key != points[1].Key || !strings.Contains(err.Error(), "point 1 ("+points[1].Key+"), unit 5: ") {
			t.Errorf("%s: error %v", name, err)
		}
		if fail == nil && !errors.Is(err, cause) || fail != nil && !strings.Contains(string(u.Stack), "TestFailingUnitIsNamed") {
			t.Errorf("%s: the cause is lost: %v", name, err)
		}
		if o.Complete() || o.UnitsHere != int(ran.Load()) || o.UnitsHere < 5 {
			t.Errorf("%s: %d units were run, outcome %+v", name, ran.Load(), o)
		}
		// Whoever mends the cause goes on from there.
		before := ran.Load()
		if o := mustWork(t, job(t, prepare(t, path, points), points, 2, &ran)); !o.Complete() || ran.Load() != 16 || before == 16 {
			t.Errorf("%s: %d units were run in all", name, ran.Load())
		}
		checkWhole(t, path, points)
	}
}

func TestUnwritableJournal(t *testing.T) {
	points := testPoints(1, 4)
	path := t.TempDir()
	d := prepare(t, path, points)
	journal := filepath.Join(path, "journal")
	if err := errors.Join(os.Remove(journal), os.WriteFile(journal, nil, 0o666)); err != nil {
		t.Fatal(err)
	}
	var ran atomic.Int64
	_, err := job(t, d, points, 2, &ran).Work(context.Background())
	if err == nil || !strings.HasPrefix(err.Error(), journal) {
		t.Errorf("error %v does not name the place", err)
	}
}

func TestDamageIsMended(t *testing.T) {
	points := testPoints(1, 6)
	path := t.TempDir()
	var ran atomic.Int64
	mustWork(t, job(t, prepare(t, path, points), points, 1, &ran))
	part := filepath.Join(path, "parts", "moments", archive.PartName(points[0].Key, 4)+".parquet")
	data, err := os.ReadFile(part)
	if err != nil {
		t.Fatal(err)
	}
	data[len(data)/2] ^= 4
	cut := filepath.Join(path, "parts", "moments", archive.PartName(points[0].Key, 0)+".parquet")
	if err := errors.Join(os.WriteFile(part, data, 0o666), os.Truncate(cut, 50)); err != nil {
		t.Fatal(err)
	}
	// A part that is cut is seen at once, one with a changed byte when its
	// units are needed to complete it.
	points = testPoints(1, 8)
	d := prepare(t, path, points)
	if err := d.SaveUnit(points[0].Key, testUnit(0, 6), 1); err != nil {
		t.Fatal(err)
	}
	if err := os.Truncate(filepath.Join(path, "journal", archive.PartName(points[0].Key, 6)+".unit"), 60); err != nil {
		t.Fatal(err)
	}
	ran.Store(0)
	var warnings []string
	j := job(t, d, points, 2, &ran)
	j.Warn = func(message string) { warnings = append(warnings, message) }
	if o := mustWork(t, j); !o.Complete() || ran.Load() != 8 {
		t.Errorf("%d units were run anew, want 8", ran.Load())
	}
	if len(warnings) != 3 {
		t.Errorf("warnings %q, want one for each damage", warnings)
	}
	checkWhole(t, path, points)
}

// The journal loses a unit after it was kept: it is run again when the part is
// merged.
func TestLostKeptUnit(t *testing.T) {
	points := testPoints(1, 4)
	path := t.TempDir()
	var ran atomic.Int64
	j := job(t, prepare(t, path, points), points, 1, &ran)
	run := j.Run
	j.Run = func(ctx context.Context, point, unit int, progress func(uint64)) (observables.Unit, error) {
		if unit == 3 {
			os.Remove(filepath.Join(path, "journal", archive.PartName(points[0].Key, 1)+".unit"))
		}
		return run(ctx, point, unit, progress)
	}
	if o := mustWork(t, j); !o.Complete() || ran.Load() != 5 {
		t.Errorf("%d units were run, want 5", ran.Load())
	}
	checkWhole(t, path, points)
}
