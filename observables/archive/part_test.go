package archive

import (
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"

	"sojourn/observables"
	"sojourn/observables/table"
)

func TestPartComesBackAsWritten(t *testing.T) {
	d := prepare(t, 20)
	key := testKey(1)
	for first, n := range map[int]int{0: 8, 8: 8, 16: 4} {
		units := testUnits(first, n)
		for _, u := range units {
			if err := d.SaveUnit(key, u, 1); err != nil {
				t.Fatal(err)
			}
		}
		if err := d.WritePart(key, first, units, Receipt{Engine: "classes", StreamRevision: 1, Seconds: 8, Host: "cryostat"}); err != nil {
			t.Fatal(err)
		}
		got, err := d.ReadUnits(key, first)
		if err != nil || !reflect.DeepEqual(got, units) {
			t.Errorf("units from %d: %v\n%v\nwant\n%v", first, err, got, units)
		}
		if done, err := d.PartDone(key, first); done != n || err != nil {
			t.Errorf("part %d has %d units, %v; want %d", first, done, err, n)
		}
		for _, u := range units {
			if d.HasUnit(key, u.Unit) {
				t.Errorf("unit %d is still kept", u.Unit)
			}
		}
	}
	receipts, err := d.Parts(key)
	if err != nil || len(receipts) != 3 || receipts[1].First != 8 {
		t.Fatalf("receipts %v, %v", receipts, err)
	}
	r := receipts[2]
	if r.Units != 4 || r.Trajectories != 4 || r.Jumps != 4*1000+16+17+18+19 || r.Engine != "classes" || r.Host != "cryostat" || r.Arch == "" {
		t.Errorf("receipt %+v", r)
	}
	if done, err := d.PartDone(testKey(0), 0); done != 0 || err != nil {
		t.Errorf("a part that is not there has %d units, %v", done, err)
	}
	if faults := d.Verify(); faults != nil {
		t.Errorf("faults in a sound directory: %v", faults)
	}
}

func TestLeadingColumns(t *testing.T) {
	d := prepare(t, 8)
	if err := d.WritePart(testKey(1), 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	tables := observables.Tables([]string{"bath.beta", "lattice.size"})
	for _, want := range tables {
		path := d.partFile(want.Name, testKey(1), 0)
		if want.Name == "transients" || want.Name == "flips" {
			if _, err := os.Stat(path); err == nil {
				t.Errorf("a table without rows has a file")
			}
			continue
		}
		r, err := table.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		defer r.Close()
		for i, c := range r.Columns() {
			if w := want.Columns[i]; c.Name != w.Name || string(c.Type) != string(w.Type) || c.Unit != w.Unit || c.Meaning != w.Doc {
				t.Errorf("%s: column %d is %v, want %v", want.Name, i, c, w)
			}
		}
		keys, _ := r.Strings("point_key")
		beta, _ := r.Doubles("beta")
		length, _ := r.Int32s("length")
		scanned, _ := r.Doubles("bath_beta")
		size, _ := r.Int32Lists("lattice_size")
		last := r.Rows() - 1
		if keys[last] != testKey(1) || beta[last] != 0.3125 || length[0] != 16 || scanned[0] != 0.3125 || !reflect.DeepEqual(size[last], []int32{16, 8}) {
			t.Errorf("%s: leading columns %v %v %v %v %v", want.Name, keys[0], beta[0], length[0], scanned[0], size[0])
		}
	}
}

// grown returns two directories of the same study: one with a part of 3 units,
// one with 8 in it.
func grown(t *testing.T) (small, large *Dir) {
	small, large = prepare(t, 3), prepare(t, 8)
	for d, n := range map[*Dir]int{small: 3, large: 8} {
		if err := d.WritePart(testKey(0), 0, testUnits(0, n), Receipt{}); err != nil {
			t.Fatal(err)
		}
	}
	return small, large
}

func TestGrownPartHasTheSameBytes(t *testing.T) {
	small, large := grown(t)
	units, err := small.ReadUnits(testKey(0), 0)
	if err != nil {
		t.Fatal(err)
	}
	units = append(units, testUnits(3, 5)...)
	if err := small.WritePart(testKey(0), 0, units, Receipt{}); err != nil {
		t.Fatal(err)
	}
	got, want := tree(t, small.Path()), tree(t, large.Path())
	delete(got, manifestFile)
	delete(want, manifestFile)
	if !reflect.DeepEqual(got, want) {
		t.Error("a part that grew differs from one made at once")
	}
	// Fewer units never replace more.
	if err := small.WritePart(testKey(0), 0, testUnits(0, 3), Receipt{}); err != nil {
		t.Fatal(err)
	}
	if n, _ := small.PartDone(testKey(0), 0); n != 8 {
		t.Errorf("a part of 8 units was replaced by one of %d", n)
	}
}

// A crash may leave any of the files exchanged. The old units can be read in
// every such state, and completing the part once more ends it.
func TestCrashWhileAPartGrows(t *testing.T) {
	probe, _ := grown(t)
	r, err := probe.Receipt(testKey(0), 0)
	if err != nil {
		t.Fatal(err)
	}
	tables := len(r.Files)
	for state := range 1 << tables {
		small, large := grown(t)
		old, _ := small.Receipt(testKey(0), 0)
		next, _ := large.Receipt(testKey(0), 0)
		old.Next = next
		if err := writeJSON(small.receiptFile(testKey(0), 0), old); err != nil {
			t.Fatal(err)
		}
		for i, f := range next.Files {
			if state>>i&1 == 1 {
				data, _ := os.ReadFile(large.partFile(f.Table, testKey(0), 0))
				if err := os.WriteFile(small.partFile(f.Table, testKey(0), 0), data, 0o666); err != nil {
					t.Fatal(err)
				}
			}
		}
		want := 3
		if state == 1<<tables-1 {
			want = 8
		}
		units, err := small.ReadUnits(testKey(0), 0)
		if err != nil || !reflect.DeepEqual(units, testUnits(0, want)) {
			t.Fatalf("state %b: %v, %v; want %d units", state, units, err, want)
		}
		if n, err := small.PartDone(testKey(0), 0); n != 3 || err != nil {
			t.Errorf("state %b: %d units are done, %v; want 3", state, n, err)
		}
		if err := small.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{}); err != nil {
			t.Fatal(err)
		}
		got, all := tree(t, small.Path()), tree(t, large.Path())
		delete(got, manifestFile)
		delete(all, manifestFile)
		if !reflect.DeepEqual(got, all) {
			t.Errorf("state %b: the part is not what it should be", state)
		}
	}
}

// An error in the middle of the exchange leaves the old units readable.
func TestErrorWhileAPartGrows(t *testing.T) {
	d := prepare(t, 8)
	if err := d.WritePart(testKey(0), 0, testUnits(0, 1), Receipt{Seconds: 1}); err != nil {
		t.Fatal(err)
	}
	// Unit 0 has no Dirichlet rows, so that this name is free.
	obstacle := d.partFile("dirichlet", testKey(0), 0)
	if err := os.MkdirAll(filepath.Join(obstacle, "x"), 0o777); err != nil {
		t.Fatal(err)
	}
	if err := d.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{Seconds: 8}); err == nil || !strings.HasPrefix(err.Error(), obstacle) {
		t.Fatalf("error %v", err)
	}
	if err := os.RemoveAll(obstacle); err != nil {
		t.Fatal(err)
	}
	if units, err := d.ReadUnits(testKey(0), 0); err != nil || !reflect.DeepEqual(units, testUnits(0, 1)) {
		t.Errorf("old units: %v, %v", units, err)
	}
	for name := range tree(t, d.Path()) {
		if strings.Contains(name, ".tmp-") {
			t.Errorf("%s is left", name)
		}
	}
	if err := d.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{Seconds: 8}); err != nil {
		t.Fatal(err)
	}
	if r, err := d.Receipt(testKey(0), 0); err != nil || r.Next != nil || r.Units != 8 || r.Seconds != 8 {
		t.Errorf("receipt %+v, %v", r, err)
	}
}

// A table without rows in the first units may have some in later ones.
func TestGrownPartGainsATable(t *testing.T) {
	d := prepare(t, 1)
	if err := d.WritePart(testKey(0), 0, testUnits(0, 1), Receipt{}); err != nil {
		t.Fatal(err)
	}
	r, _ := d.Receipt(testKey(0), 0)
	if r.file("dirichlet") != nil {
		t.Fatal("unit 0 should have no Dirichlet rows")
	}
	staged := prepare(t, 8)
	if err := staged.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	r.Next, _ = staged.Receipt(testKey(0), 0)
	if err := writeJSON(d.receiptFile(testKey(0), 0), r); err != nil {
		t.Fatal(err)
	}
	if units, err := d.ReadUnits(testKey(0), 0); err != nil || !reflect.DeepEqual(units, testUnits(0, 1)) {
		t.Errorf("before the new table is there: %v, %v", units, err)
	}
	if err := d.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	if units, err := d.ReadUnits(testKey(0), 0); err != nil || !reflect.DeepEqual(units, testUnits(0, 8)) {
		t.Errorf("after: %v", err)
	}
}

func TestDamagedParts(t *testing.T) {
	key := testKey(0)
	for _, c := range []struct {
		name   string
		damage func(path string) error
		noted  bool // by PartDone, which reads nothing
		text   string
	}{
		{"a changed byte", func(path string) error {
			data, err := os.ReadFile(path)
			data[len(data)/2] ^= 1
			return errors.Join(err, os.WriteFile(path, data, 0o666))
		}, false, "SHA-256"},
		{"a cut file", func(path string) error { return os.Truncate(path, 100) }, true, "SHA-256"},
		{"a missing file", os.Remove, true, "missing"},
	} {
		t.Run(c.name, func(t *testing.T) {
			d := prepare(t, 8)
			if err := d.WritePart(key, 0, testUnits(0, 8), Receipt{}); err != nil {
				t.Fatal(err)
			}
			path := d.partFile("autocorrelation", key, 0)
			if err := c.damage(path); err != nil {
				t.Fatal(err)
			}
			_, err := d.ReadUnits(key, 0)
			if !errors.Is(err, ErrDamaged) || !strings.HasPrefix(err.Error(), path) || !strings.Contains(err.Error(), c.text) ||
				!strings.Contains(err.Error(), "remove "+filepath.Join(receiptsDir, PartName(key, 0)+".json")) {
				t.Errorf("error %v", err)
			}
			if _, err := d.PartDone(key, 0); errors.Is(err, ErrDamaged) != c.noted {
				t.Errorf("PartDone says %v", err)
			}
			if faults := d.Verify(); len(faults) != 1 || !errors.Is(faults[0], ErrDamaged) {
				t.Errorf("Verify says %v", faults)
			}
			if err := errors.Join(d.DropPart(key, 0), d.DropPart(key, 0)); err != nil {
				t.Fatal(err)
			}
			if n, err := d.PartDone(key, 0); n != 0 || err != nil {
				t.Errorf("a dropped part has %d units, %v", n, err)
			}
			if err := d.WritePart(key, 0, testUnits(0, 8), Receipt{}); err != nil {
				t.Fatal(err)
			}
			if _, err := d.ReadUnits(key, 0); err != nil {
				t.Errorf("made anew: %v", err)
			}
		})
	}
}

func TestVerifyFindsStrays(t *testing.T) {
	d := prepare(t, 8)
	if err := d.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	if err := d.DropPart(testKey(0), 0); err != nil {
		t.Fatal(err)
	}
	faults := d.Verify()
	if len(faults) == 0 || !strings.Contains(faults[0].Error(), "no receipt") {
		t.Errorf("faults %v", faults)
	}
}

// Kept units that a crash left beside their finished part go at the next run.
func TestPrepareCleansTheJournal(t *testing.T) {
	d := prepare(t, 10)
	key := testKey(0)
	if err := d.WritePart(key, 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	for _, u := range []int{7, 8} {
		if err := d.SaveUnit(key, testUnit(u), 1); err != nil {
			t.Fatal(err)
		}
	}
	if _, err := Prepare(d.Path(), testManifest(10, 0, 1), []byte(studyText)); err != nil {
		t.Fatal(err)
	}
	if d.HasUnit(key, 7) || !d.HasUnit(key, 8) {
		t.Error("the journal should hold unit 8 only")
	}
}
