package archive

import (
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"reflect"
	"strings"
	"syscall"
	"testing"

	"sojourn/observables"
	"sojourn/observables/internal/durable"
	"sojourn/observables/table"
)

// TestMain turns this program into a child of its own tests.
func TestMain(m *testing.M) {
	args := os.Args[1:]
	switch os.Getenv("ARCHIVE_TEST_CHILD") {
	case "":
		os.Exit(m.Run())
	case "claim":
		d := newDir(args[0], Manifest{}, true)
		if c, _, err := d.Claim(args[1]); c == nil || err != nil {
			fmt.Println("not claimed:", err)
			os.Exit(1)
		}
	case "limited":
		childLimited(args[0])
	case "stranger":
		childStranger(args[0])
	}
	os.Exit(0)
}

// big is a unit that needs more room than is left.
func big(n int) observables.Unit {
	u := testUnit(n)
	for k := range 4000 {
		u.Moments = append(u.Moments, observables.MomentRow{Observable: "energy", Count: 1, Sum1: math.Sin(float64(k)), Sum2: math.Cos(float64(k * k))})
	}
	return u
}

// childLimited writes into a results directory with less room than it needs,
// and prints the errors.
func childLimited(path string) {
	signal.Ignore(syscall.SIGXFSZ)
	d, err := Prepare(path, testManifest(16, 0, 1), []byte(studyText))
	if err != nil {
		fmt.Println("prepare:", err)
		return
	}
	limit := syscall.Rlimit{Cur: 20000, Max: 20000}
	if err := syscall.Setrlimit(syscall.RLIMIT_FSIZE, &limit); err != nil {
		fmt.Println("limit:", err)
		return
	}
	fmt.Println("small unit:", d.SaveUnit(testKey(0), testUnit(8), 1))
	fmt.Println("big unit:", d.SaveUnit(testKey(0), big(9), 1))
	fmt.Println("big part:", d.WritePart(testKey(0), 8, []observables.Unit{big(8)}, Receipt{}))
	fmt.Println("grown part:", d.WritePart(testKey(1), 0, []observables.Unit{testUnit(0), testUnit(1), big(2)}, Receipt{}))
}

// A limit on the size of files stands for a disk that fills up in the middle of
// a file: writing fails after some bytes were taken.
func TestFullDiskKeepsWhatWasComplete(t *testing.T) {
	d := prepare(t, 16)
	for key, n := range map[string]int{testKey(0): 8, testKey(1): 2} {
		if err := d.WritePart(key, 0, testUnits(0, n), Receipt{}); err != nil {
			t.Fatal(err)
		}
	}
	out := runChild(t, "limited", nil, d.Path())
	lines := strings.Split(strings.TrimSpace(out), "\n")
	if len(lines) != 4 || lines[0] != "small unit: <nil>" {
		t.Fatalf("child says\n%s", out)
	}
	for i, file := range []string{d.unitFile(testKey(0), 9), d.partFile("moments", testKey(0), 8), d.partFile("moments", testKey(1), 0)} {
		if line := lines[i+1]; !strings.Contains(line, file+": cannot write: file too large; raise the limit") {
			t.Errorf("error %q does not name %s and a remedy", line, file)
		}
	}
	checkKept(t, d)
}

// checkKept looks for what was complete before the disk was full, and for
// nothing half made.
func checkKept(t *testing.T, d *Dir) {
	t.Helper()
	r, err := Open(d.Path())
	if err != nil {
		t.Fatal(err)
	}
	for key, n := range map[string]int{testKey(0): 8, testKey(1): 2} {
		if units, err := r.ReadUnits(key, 0); err != nil || !reflect.DeepEqual(units, testUnits(0, n)) {
			t.Errorf("part of %d units: %v", n, err)
		}
	}
	if u, _, err := r.LoadUnit(testKey(0), 8); err != nil || !reflect.DeepEqual(u, testUnit(8)) {
		t.Errorf("the kept unit: %v", err)
	}
	if faults := r.Verify(); faults != nil {
		t.Errorf("faults: %v", faults)
	}
	for name := range tree(t, d.Path()) {
		if durable.Temporary(name) {
			t.Errorf("%s is left", name)
		}
	}
	if n, _ := r.PartDone(testKey(0), 8); n != 0 {
		t.Errorf("a part that could not be written has %d units", n)
	}
}

// The same on a real full file system, where one may be made.
func TestFullFileSystem(t *testing.T) {
	dir := t.TempDir()
	if err := syscall.Mount("none", dir, "tmpfs", 0, "size=200k"); err != nil {
		t.Skipf("a small file system cannot be made here: %v", err)
	}
	defer syscall.Unmount(dir, syscall.MNT_DETACH)
	d, err := Prepare(filepath.Join(dir, "results"), testManifest(16, 0, 1), []byte(studyText))
	if err != nil {
		t.Fatal(err)
	}
	for key, n := range map[string]int{testKey(0): 8, testKey(1): 2} {
		if err := d.WritePart(key, 0, testUnits(0, n), Receipt{}); err != nil {
			t.Fatal(err)
		}
	}
	if err := d.SaveUnit(testKey(0), testUnit(8), 1); err != nil {
		t.Fatal(err)
	}
	filler := filepath.Join(dir, "filler")
	f, err := os.Create(filler)
	if err != nil {
		t.Fatal(err)
	}
	for err == nil {
		_, err = f.Write(make([]byte, 1000))
	}
	f.Close()
	for _, err := range []error{
		d.SaveUnit(testKey(0), big(9), 1),
		d.WritePart(testKey(0), 8, []observables.Unit{big(8)}, Receipt{}),
		d.WritePart(testKey(1), 0, []observables.Unit{testUnit(0), testUnit(1), big(2)}, Receipt{}),
	} {
		if !errors.Is(err, syscall.ENOSPC) || !strings.Contains(err.Error(), "make room on the disk") || !strings.Contains(err.Error(), d.Path()) {
			t.Errorf("error %v", err)
		}
	}
	checkKept(t, d)
	if err := os.Remove(filler); err != nil {
		t.Fatal(err)
	}
	if err := d.WritePart(testKey(0), 8, testUnits(8, 8), Receipt{}); err != nil {
		t.Errorf("after room was made: %v", err)
	}
}

// childStranger works on a directory that it may only read.
func childStranger(path string) {
	d, err := Open(path)
	if err != nil {
		fmt.Println("open:", err)
		return
	}
	units, err := d.ReadUnits(testKey(0), 0)
	fmt.Println("read:", len(units), err)
	err = d.WriteFit(table.Schema{Name: "relaxation", Columns: []table.Column{{Name: "tau", Type: table.Double}}}, nil)
	fmt.Println("fit:", errors.Is(err, os.ErrPermission), err)
	_, err = Prepare(path, testManifest(16, 0, 1), []byte(studyText))
	fmt.Println("same:", errors.Is(err, os.ErrPermission), err)
	_, err = Prepare(filepath.Join(path, "below"), testManifest(16, 0, 1), []byte(studyText))
	fmt.Println("new:", errors.Is(err, os.ErrPermission), err)
}

func TestUnwritableDirectory(t *testing.T) {
	// The directory of the tests is closed to others; this one is not.
	base, err := os.MkdirTemp("", "archive-")
	if err != nil {
		t.Fatal(err)
	}
	defer os.RemoveAll(base)
	path := filepath.Join(base, "results")
	d, err := Prepare(path, testManifest(16, 0, 1), []byte(studyText))
	if err != nil {
		t.Fatal(err)
	}
	if err := d.WritePart(testKey(0), 0, testUnits(0, 8), Receipt{}); err != nil {
		t.Fatal(err)
	}
	program := filepath.Join(base, "child")
	data, err := os.ReadFile(os.Args[0])
	if err == nil {
		err = os.WriteFile(program, data, 0o755)
	}
	if err != nil {
		t.Fatal(err)
	}
	asNobody := func(cmd *exec.Cmd) {
		cmd.Path = program
		if os.Getuid() == 0 {
			cmd.SysProcAttr = &syscall.SysProcAttr{Credential: &syscall.Credential{Uid: 65534, Gid: 65534}}
		}
	}
	for _, dir := range []string{base, path, filepath.Join(path, claimsDir)} {
		mode := os.FileMode(0o755)
		if os.Getuid() != 0 {
			mode = 0o555
		}
		os.Chmod(dir, mode)
		defer os.Chmod(dir, 0o755)
	}
	out := runChild(t, "stranger", asNobody, path)
	for i, line := range strings.Split(strings.TrimSpace(out), "\n") {
		want := []string{"read: 8 <nil>", "fit: true " + d.join(fitsDir), "same: true " + path, "new: true " + d.join("below")}[i]
		if !strings.HasPrefix(line, want) || i > 0 && !strings.Contains(line, "choose a directory that you may write to") {
			t.Errorf("line %q, want %q and a remedy", line, want)
		}
	}
}
