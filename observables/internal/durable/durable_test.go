package durable

import (
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// names lists a directory.
func names(t *testing.T, dir string) []string {
	t.Helper()
	entries, err := os.ReadDir(dir)
	if err != nil {
		t.Fatal(err)
	}
	var list []string
	for _, e := range entries {
		list = append(list, e.Name())
	}
	return list
}

func TestFileAppearsOnlyWhenCommitted(t *testing.T) {
	dir := t.TempDir()
	path := filepath.Join(dir, "a.parquet")
	f, err := Create(path)
	if err != nil {
		t.Fatal(err)
	}
	f.Write([]byte("cold "))
	f.Write([]byte("buffer"))
	if err := f.Stage(); err != nil {
		t.Fatal(err)
	}
	if list := names(t, dir); len(list) != 1 || !Temporary(list[0]) {
		t.Fatalf("before Commit the directory holds %v", list)
	}
	if err := f.Commit(); err != nil {
		t.Fatal(err)
	}
	f.Discard()
	data, err := os.ReadFile(path)
	if err != nil || string(data) != "cold buffer" {
		t.Fatalf("read %q, %v", data, err)
	}
	if list := names(t, dir); len(list) != 1 {
		t.Errorf("after Commit the directory holds %v", list)
	}
	sum := sha256.Sum256(data)
	if f.SHA256() != hex.EncodeToString(sum[:]) || f.Size() != int64(len(data)) {
		t.Errorf("digest %s, size %d do not belong to what was written", f.SHA256(), f.Size())
	}
}

func TestDiscardLeavesNothing(t *testing.T) {
	dir := t.TempDir()
	for _, stage := range []bool{false, true} {
		f, err := Create(filepath.Join(dir, "a"))
		if err != nil {
			t.Fatal(err)
		}
		f.Write([]byte("x"))
		if stage {
			if err := f.Stage(); err != nil {
				t.Fatal(err)
			}
		}
		f.Discard()
		if list := names(t, dir); len(list) != 0 {
			t.Errorf("stage %v: %v is left", stage, list)
		}
	}
}

func TestCleanSparesTheYoungAndTheComplete(t *testing.T) {
	dir := t.TempDir()
	old := time.Now().Add(-2 * time.Hour)
	for _, name := range []string{"a" + mark + "01", "a" + mark + "02", "a"} {
		path := filepath.Join(dir, name)
		if err := os.WriteFile(path, nil, 0o666); err != nil {
			t.Fatal(err)
		}
		if !strings.HasSuffix(name, "2") {
			os.Chtimes(path, old, old)
		}
	}
	Clean(dir, time.Hour)
	if got := strings.Join(names(t, dir), " "); got != "a a"+mark+"02" {
		t.Errorf("left: %s", got)
	}
}

func TestErrorsNameFinalPathAndRemedy(t *testing.T) {
	dir := t.TempDir()
	file := filepath.Join(dir, "file")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(file, "below")
	err := WriteFile(path, nil)
	if !errors.Is(err, syscall.ENOTDIR) || !strings.Contains(err.Error(), path+":") || !strings.Contains(err.Error(), "choose another directory") {
		t.Errorf("got %v", err)
	}
	if strings.Contains(err.Error(), mark) {
		t.Errorf("the temporary name shows: %v", err)
	}
	full := Explain("write", "a", &os.PathError{Op: "write", Path: "a" + mark, Err: syscall.ENOSPC})
	if !errors.Is(full, syscall.ENOSPC) || !strings.Contains(full.Error(), "make room") {
		t.Errorf("got %v", full)
	}
}
