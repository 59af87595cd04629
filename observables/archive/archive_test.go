package archive

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"sync"
	"testing"

	"sojourn/observables"
	"sojourn/observables/table"
)

const studyText = "title = \"Which lattice holds a bit in the cold buffer?\"\n"

// testKey is the key of test point i.
func testKey(i int) string { return fmt.Sprintf("%016x", 0xc01d<<8+i) }

// testManifest has the points with the given indices, each with count units in
// parts of 8.
func testManifest(count int, points ...int) Manifest {
	m := Manifest{Tool: "test", Study: "cold-buffer", Scanned: []string{"bath.beta", "lattice.size"}}
	for _, i := range points {
		beta := 0.25 + float64(i)/16
		m.Points = append(m.Points, Point{
			Key:    testKey(i),
			Count:  count,
			Extent: 8,
			Scan: []Parameter{
				{Name: "bath.beta", Value: fmt.Sprint(beta), Numbers: []float64{beta}},
				{Name: "lattice.size", Value: "[16, 8]", Numbers: []float64{16, 8}},
			},
			Facts: Facts{Model: "ising", Beta: beta, Size: []int{16, 8}, Open: []bool{false, true}, Lags: []int64{0, 1, 2}},
		})
	}
	return m
}

// testUnit returns a unit with rows in every table that follow from its number.
func testUnit(n int) observables.Unit {
	u := observables.Unit{Unit: n}
	x := func(k int) float64 { return math.Sin(float64(n*1000+k)) * 1e6 }
	u.Trajectories = []observables.TrajectoryRow{{Lane: 0, Start: [...]string{"up", "down"}[n%2], Engine: "classes", Samples: 600, Jumps: int64(1000 + n)}}
	for k := range 5 {
		u.Moments = append(u.Moments, observables.MomentRow{Segment: int32(k), Observable: "energy", Count: 10, Sum1: x(k), Sum2: x(k + 1), Sum3: math.Copysign(0, -1), Sum4: x(k + 2)})
		u.Autocorrelation = append(u.Autocorrelation, observables.AutocorrelationRow{Segment: 1, F: "energy", G: "magnetization", Lag: int64(k), Pairs: 600, SumF: x(k), SumG: x(k + 3), SumFG: x(k + 4)})
	}
	for k := range n % 3 { // sometimes none
		u.Dirichlet = append(u.Dirichlet, observables.DirichletRow{Segment: int32(k), F: "energy", G: "energy", Count: 3, Sum: x(k)})
		u.Covariance = append(u.Covariance, observables.CovarianceRow{Of: "spin", Axis: int32(k - 1), Displacement: []int32{int32(k), -1}[:2-k], Snapshots: 7, Pairs: 9, SumF: x(k), SumG: x(k), SumFG: x(k)})
	}
	return u
}

func testUnits(first, n int) []observables.Unit {
	var units []observables.Unit
	for u := first; u < first+n; u++ {
		units = append(units, testUnit(u))
	}
	return units
}

// prepare makes a results directory of points 0 and 1.
func prepare(t testing.TB, count int) *Dir {
	t.Helper()
	d, err := Prepare(filepath.Join(t.TempDir(), "results"), testManifest(count, 0, 1), []byte(studyText))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// tree returns the content of all files below a directory, by relative path.
func tree(t testing.TB, dir string) map[string]string {
	t.Helper()
	files := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		data, err := os.ReadFile(path)
		name, _ := filepath.Rel(dir, path)
		files[name] = string(data)
		return err
	})
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		t.Fatal(err)
	}
	return files
}

func TestPrepareExtendsAndKeepsNumbers(t *testing.T) {
	path := filepath.Join(t.TempDir(), "a", "results")
	if _, err := Prepare(path, testManifest(4, 3, 1), []byte(studyText)); err != nil {
		t.Fatal(err)
	}
	before := tree(t, path)
	if _, err := Prepare(path, testManifest(4, 3, 1), []byte(studyText)); err != nil {
		t.Fatal(err)
	}
	if !reflect.DeepEqual(before, tree(t, path)) {
		t.Error("the same study changes the directory")
	}
	// One point goes, two come, one of them in front; parts are never re-cut.
	m := testManifest(9, 0, 1, 2)
	m.Title = "extended"
	m.Points[1].Extent = 64
	if _, err := Prepare(path, m, []byte("# longer\n"+studyText)); err != nil {
		t.Fatal(err)
	}
	d, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	type brief struct {
		Number  int
		Key     string
		Current bool
		Count   int
		Extent  int
	}
	var got []brief
	for _, p := range d.Manifest().Points {
		got = append(got, brief{p.Number, p.Key, p.Current, p.Count, p.Extent})
	}
	want := []brief{{0, testKey(3), false, 4, 8}, {1, testKey(1), true, 9, 8}, {2, testKey(0), true, 9, 8}, {3, testKey(2), true, 9, 8}}
	if !reflect.DeepEqual(got, want) {
		t.Errorf("points %v, want %v", got, want)
	}
	if d.Manifest().Title != "extended" || !strings.HasPrefix(tree(t, path)[studyFile], "# longer") {
		t.Error("the study given last is not the one kept")
	}
	if p := d.Manifest().Point(testKey(2)); p == nil || !reflect.DeepEqual(p.Facts, m.Points[2].Facts) || !reflect.DeepEqual(p.Scan, m.Points[2].Scan) {
		t.Errorf("facts of a point do not come back: %+v", p)
	}
	if d.Manifest().Point("0") != nil {
		t.Error("a point that is not there is found")
	}
}

func TestPrepareRefusesAndWritesNothing(t *testing.T) {
	write := func(t *testing.T, path, text string) {
		t.Helper()
		if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	for _, c := range []struct {
		name string
		make func(t *testing.T, path string)
		want error
		text string
	}{
		{"another study", func(t *testing.T, path string) {
			if _, err := Prepare(path, testManifest(4, 7), []byte(studyText)); err != nil {
				t.Fatal(err)
			}
		}, ErrOtherStudy, "choose another directory"},
		{"other files", func(t *testing.T, path string) { write(t, filepath.Join(path, "thesis.tex"), "") }, ErrNotResults, `"thesis.tex"`},
		{"someone's study", func(t *testing.T, path string) { write(t, filepath.Join(path, studyFile), "# mine") }, ErrNotResults, studyFile},
		{"a later format", func(t *testing.T, path string) { write(t, filepath.Join(path, manifestFile), `{"format": 99}`) }, ErrFormat, "newer version"},
		{"a damaged manifest", func(t *testing.T, path string) { write(t, filepath.Join(path, manifestFile), `{"format": 1, "po`) }, ErrDamaged, manifestFile},
		{"a manifest of something else", func(t *testing.T, path string) {
			write(t, filepath.Join(path, manifestFile), `{"points": [{"name": "x"}]}`)
		}, ErrDamaged, "no key"},
	} {
		t.Run(c.name, func(t *testing.T) {
			path := t.TempDir()
			c.make(t, path)
			before := tree(t, path)
			_, err := Prepare(path, testManifest(4, 0, 1), []byte(studyText))
			if !errors.Is(err, c.want) || !strings.Contains(err.Error(), c.text) || !strings.HasPrefix(err.Error(), path) {
				t.Errorf("error %v, want %v with %q", err, c.want, c.text)
			}
			if !reflect.DeepEqual(before, tree(t, path)) {
				t.Error("the directory was changed")
			}
		})
	}
}

func TestPrepareOnAFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "results")
	if err := os.WriteFile(path, []byte("text"), 0o666); err != nil {
		t.Fatal(err)
	}
	_, openErr := Open(path)
	_, err := Prepare(path, testManifest(4, 0), []byte(studyText))
	for _, err := range []error{err, openErr} {
		if err == nil || !strings.HasPrefix(err.Error(), path) || !strings.Contains(err.Error(), "a file stands where a directory is needed") {
			t.Errorf("error %v", err)
		}
	}
}

func TestPrepareGoesOnAfterACrash(t *testing.T) {
	path := t.TempDir()
	// What can be there before the manifest is.
	for _, dir := range []string{claimsDir, partsDir} {
		if err := os.Mkdir(filepath.Join(path, dir), 0o777); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.WriteFile(filepath.Join(path, manifestFile+".tmp-0123"), []byte("{"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, err := Prepare(path, testManifest(4, 0), []byte(studyText)); err != nil {
		t.Error(err)
	}
}

// Processes that extend a directory at once lose none of each other's points.
func TestPrepareAtOnce(t *testing.T) {
	path := filepath.Join(t.TempDir(), "results")
	var wg sync.WaitGroup
	for i := 1; i <= 12; i++ {
		wg.Go(func() {
			if _, err := Prepare(path, testManifest(4, 0, i), []byte(studyText)); err != nil {
				t.Error(err)
			}
		})
	}
	wg.Wait()
	d, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	for i := range 13 {
		if d.Manifest().Point(testKey(i)) == nil {
			t.Errorf("point %d is lost", i)
		}
	}
}

func TestOpen(t *testing.T) {
	path := filepath.Join(t.TempDir(), "results")
	if _, err := Open(path); err == nil || !strings.Contains(err.Error(), "no such directory") {
		t.Errorf("no directory: %v", err)
	}
	os.Mkdir(path, 0o777)
	if _, err := Open(path); !errors.Is(err, ErrNotResults) {
		t.Errorf("an empty directory: %v", err)
	}
	if _, err := Prepare(path, testManifest(4, 0), []byte(studyText)); err != nil {
		t.Fatal(err)
	}
	d, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	_, _, claimErr := d.Claim("x")
	for _, err := range []error{
		d.SaveUnit(testKey(0), testUnit(0), 1),
		d.WritePart(testKey(0), 0, testUnits(0, 1), Receipt{}),
		d.DropPart(testKey(0), 0),
		claimErr,
	} {
		if !errors.Is(err, ErrReadOnly) {
			t.Errorf("writing to a directory opened for reading: %v", err)
		}
	}
}

func TestFits(t *testing.T) {
	d := prepare(t, 4)
	r, err := Open(d.Path())
	if err != nil {
		t.Fatal(err)
	}
	s := table.Schema{Name: "relaxation", Columns: []table.Column{{Name: "tau_int", Type: table.Double, Optional: true}}}
	b := table.NewBuilder(s)
	b.Row(12.5)
	b.Row(nil)
	if err := r.WriteFit(s, b.Block()); err != nil {
		t.Fatal(err)
	}
	f, err := r.OpenFit("relaxation")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if m, err := f.Optional("tau_int"); err != nil || !reflect.DeepEqual(m.Valid, []bool{true, false}) {
		t.Errorf("got %v, %v", m, err)
	}
	if _, err := r.OpenFit("decay"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a table that is not there: %v", err)
	}
}

func TestJournal(t *testing.T) {
	d := prepare(t, 4)
	key := testKey(0)
	want := testUnit(5)
	if err := d.SaveUnit(key, want, 12.5); err != nil {
		t.Fatal(err)
	}
	got, seconds, err := d.LoadUnit(key, 5)
	if err != nil || seconds != 12.5 || !reflect.DeepEqual(got, want) {
		t.Errorf("got %v, %v, %v", got, seconds, err)
	}
	if !d.HasUnit(key, 5) || d.HasUnit(key, 6) || d.HasUnit(testKey(1), 5) {
		t.Error("HasUnit is wrong")
	}
	if _, _, err := d.LoadUnit(key, 6); !errors.Is(err, ErrAbsent) {
		t.Errorf("a unit that is not there: %v", err)
	}
	file := d.unitFile(key, 5)
	data, _ := os.ReadFile(file)
	d.SaveUnit(key, want, 12.5)
	if again, _ := os.ReadFile(file); !bytes.Equal(data, again) {
		t.Error("the same unit gives other bytes")
	}
	for i := range data {
		damaged := bytes.Clone(data)
		damaged[i] ^= 0x41
		os.WriteFile(file, damaged, 0o666)
		if _, _, err := d.LoadUnit(key, 5); !errors.Is(err, ErrDamaged) {
			t.Fatalf("byte %d changed: %v", i, err)
		}
		os.WriteFile(file, data[:i], 0o666)
		if _, _, err := d.LoadUnit(key, 5); !errors.Is(err, ErrDamaged) {
			t.Fatalf("cut to %d bytes: %v", i, err)
		}
	}
	// A kept unit under another name is not taken for it.
	os.WriteFile(d.unitFile(key, 6), data, 0o666)
	if _, _, err := d.LoadUnit(key, 6); !errors.Is(err, ErrDamaged) {
		t.Errorf("a unit under another name: %v", err)
	}
	want.Moments[1].Sum2 = math.NaN()
	if err := d.SaveUnit(key, want, 1); err == nil || !strings.Contains(err.Error(), "Moments, row 1: Sum2 is NaN") {
		t.Errorf("NaN: %v", err)
	}
}
