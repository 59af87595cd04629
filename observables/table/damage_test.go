package table

import (
	"bytes"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"strings"
	"testing"
)

// readAll reads every column.
func readAll(data []byte) ([]Missing, error) {
	r, err := NewReader(bytes.NewReader(data), int64(len(data)), "memory")
	if err != nil {
		return nil, err
	}
	var columns []Missing
	for _, c := range mixed.Columns {
		m, err := r.Optional(c.Name)
		if err != nil {
			return nil, err
		}
		columns = append(columns, m)
	}
	return columns, nil
}

// A file cut at any length is reported as incomplete.
func TestCutFiles(t *testing.T) {
	data := encode(t, mixed, mixedBlock(20))
	for n := range data {
		_, err := readAll(data[:n])
		if !errors.Is(err, ErrIncomplete) {
			t.Fatalf("cut to %d of %d bytes: %v", n, len(data), err)
		}
	}
	if _, err := readAll(data); err != nil {
		t.Fatal(err)
	}
}

// Each byte changed in turn gives one of our errors, or values that can be
// compared; never a panic. What goes unnoticed is small: headers of pages and
// the footer carry no checksum, which is why digests are kept elsewhere.
func TestFlippedBytes(t *testing.T) {
	data := encode(t, mixed, mixedBlock(20))
	want, err := readAll(data)
	if err != nil {
		t.Fatal(err)
	}
	noticed, harmless, wrong := 0, 0, 0
	for i := range data {
		damaged := bytes.Clone(data)
		damaged[i] ^= 0x5a
		got, err := readAll(damaged)
		switch {
		case err == nil && reflect.DeepEqual(got, want):
			harmless++
		case err == nil:
			wrong++
		case errors.Is(err, ErrCorrupted), errors.Is(err, ErrIncomplete):
			noticed++
		default:
			t.Fatalf("byte %d: %v is neither ErrCorrupted nor ErrIncomplete", i, err)
		}
	}
	t.Logf("%d bytes: %d noticed, %d without effect, %d unnoticed", len(data), noticed, harmless, wrong)
	if wrong*20 > len(data) {
		t.Errorf("%d of %d damages go unnoticed", wrong, len(data))
	}
}

func TestNotATable(t *testing.T) {
	path := filepath.Join(t.TempDir(), "notes.parquet")
	if err := os.WriteFile(path, []byte("these are notes, not a table"), 0o666); err != nil {
		t.Fatal(err)
	}
	_, err := Open(path)
	if !errors.Is(err, ErrCorrupted) || !strings.HasPrefix(err.Error(), path+": ") {
		t.Errorf("got %v", err)
	}
	if _, err := Open(path + "x"); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("got %v", err)
	}
}
