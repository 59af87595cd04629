package archive

import (
	"cmp"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"slices"
	"strings"

	"sojourn/observables/internal/durable"
)

// Receipt says what a finished part consists of, and how it was made.
type Receipt struct {
	Format         int     `json:"format"`
	Tool           string  `json:"tool"` // version of the program
	Key            string  `json:"key"`
	First          int     `json:"first"`
	Units          int     `json:"units"` // First, First+1, ...
	Files          []File  `json:"files"` // by table
	Engine         string  `json:"engine"`
	StreamRevision int     `json:"stream_revision"`
	Arch           string  `json:"goarch"`
	Host           string  `json:"host"`    // that finished it
	Seconds        float64 `json:"seconds"` // in trajectories, summed over units
	Trajectories   int64   `json:"trajectories"`
	Jumps          int64   `json:"jumps"`
	// Next is the receipt that replaces this one while files are exchanged.
	Next *Receipt `json:"next,omitempty"`
}

// File is one table of a part.
type File struct {
	Table  string `json:"table"`
	Size   int64  `json:"size"`
	SHA256 string `json:"sha256"`
}

// file returns the file of a table, or nil.
func (r *Receipt) file(table string) *File {
	if r == nil {
		return nil
	}
	for i := range r.Files {
		if r.Files[i].Table == table {
			return &r.Files[i]
		}
	}
	return nil
}

// Receipt returns the receipt of a part. The error wraps ErrAbsent if the part
// is not finished.
func (d *Dir) Receipt(key string, first int) (*Receipt, error) {
	file := d.receiptFile(key, first)
	data, err := os.ReadFile(file)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("%s: %w", file, ErrAbsent)
	}
	if err != nil {
		return nil, durable.Explain("read", file, err)
	}
	var r Receipt
	if err := readJSON(file, data, &r); err != nil {
		return nil, err
	}
	if r.Key != key || r.First != first || r.Units < 1 {
		return nil, fmt.Errorf("%s: %w: it is for %d units of %s", file, ErrDamaged, r.Units, PartName(r.Key, r.First))
	}
	return &r, nil
}

// Parts returns the receipts of all finished parts of a point, by first unit.
func (d *Dir) Parts(key string) ([]*Receipt, error) {
	entries, err := os.ReadDir(d.join(receiptsDir))
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return nil, err
	}
	var list []*Receipt
	for _, e := range entries {
		name, isReceipt := strings.CutSuffix(e.Name(), ".json")
		k, first, ok := parsePartName(name)
		if !isReceipt || !ok || k != key {
			continue
		}
		r, err := d.Receipt(key, first)
		if err != nil {
			return nil, err
		}
		list = append(list, r)
	}
	slices.SortFunc(list, func(a, b *Receipt) int { return cmp.Compare(a.First, b.First) })
	return list, nil
}

// PartDone returns how many units of a part, from first on, are finished. Files
// are looked up, not read; the error wraps ErrDamaged if one is missing or has
// another size than its receipt says.
func (d *Dir) PartDone(key string, first int) (units int, err error) {
	r, err := d.Receipt(key, first)
	if errors.Is(err, ErrAbsent) {
		return 0, nil
	}
	if err != nil {
		return 0, err
	}
	for _, f := range r.Files {
		path := d.partFile(f.Table, key, first)
		info, err := os.Stat(path)
		if err != nil {
			return 0, fmt.Errorf("%s: %w: %w", path, ErrDamaged, err)
		}
		next := r.Next.file(f.Table)
		if info.Size() != f.Size && (next == nil || info.Size() != next.Size) {
			return 0, fmt.Errorf("%s: %w: %d bytes, not %d", path, ErrDamaged, info.Size(), f.Size)
		}
	}
	return r.Units, nil
}

// DropPart removes the receipt of a part, so that the part counts as not run.
func (d *Dir) DropPart(key string, first int) error {
	if err := d.mayWrite(); err != nil {
		return err
	}
	err := os.Remove(d.receiptFile(key, first))
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return err
	}
	return durable.SyncDir(d.join(receiptsDir))
}
