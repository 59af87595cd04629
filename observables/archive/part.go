package archive

import (
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"runtime"

	"sojourn/observables"
	"sojourn/observables/internal/durable"
	"sojourn/observables/table"
)

// WritePart writes the tables of a part, then its receipt, and removes the kept
// units. Of the receipt it takes Engine, StreamRevision, Seconds and Host, and
// fills in the rest. The units must be first, first+1, ... It replaces a part
// with fewer units, and does nothing if the part has as many.
func (d *Dir) WritePart(key string, first int, units []observables.Unit, r Receipt) error {
	if err := d.mayWrite(); err != nil {
		return err
	}
	for i, u := range units {
		if u.Unit != first+i {
			panic(fmt.Sprintf("archive: part %s: unit %d stands where %d belongs", PartName(key, first), u.Unit, first+i))
		}
	}
	old, err := d.Receipt(key, first)
	switch {
	case errors.Is(err, ErrAbsent), errors.Is(err, ErrDamaged):
		old = nil
	case err != nil:
		return err
	case old.Units >= len(units):
		return d.dropUnits(key, first, old.Units)
	}
	files, err := d.stagePart(key, first, units)
	defer func() {
		for _, f := range files {
			f.file.Discard()
		}
	}()
	if err != nil {
		return err
	}
	r.Format, r.Tool, r.Arch = Format, d.manifest.Tool, runtime.GOARCH
	r.Key, r.First, r.Units, r.Next = key, first, len(units), nil
	r.Files, r.Trajectories, r.Jumps = nil, 0, 0
	for _, f := range files {
		r.Files = append(r.Files, File{f.table, f.file.Size(), f.file.SHA256()})
	}
	for _, u := range units {
		r.Trajectories += int64(len(u.Trajectories))
		for _, t := range u.Trajectories {
			r.Jumps += t.Jumps
		}
	}
	if old != nil {
		old.Next = &r
		if err := writeJSON(d.receiptFile(key, first), old); err != nil {
			return err
		}
	}
	for _, f := range files {
		if err := f.file.Commit(); err != nil {
			return err
		}
	}
	if err := writeJSON(d.receiptFile(key, first), r); err != nil {
		return err
	}
	return d.dropUnits(key, first, len(units))
}

// staged is a table's file that is complete but not yet under its name.
type staged struct {
	table string
	file  *durable.File
}

// stagePart writes the tables of a part that have rows. The files are to be
// discarded even after an error.
func (d *Dir) stagePart(key string, first int, units []observables.Unit) (files []staged, err error) {
	p := d.point(key)
	scanned := make([]string, len(p.Scan))
	for i, s := range p.Scan {
		scanned[i] = s.Name
	}
	for _, l := range layouts(scanned) {
		b, err := l.block(p, units)
		if err != nil {
			return files, err
		}
		if b == nil {
			continue
		}
		path := d.partFile(l.name, key, first)
		f, err := durable.Create(path)
		if err != nil {
			return files, err
		}
		files = append(files, staged{l.name, f})
		w, err := table.NewWriter(f, table.Schema{
			Name:    l.name,
			Format:  Format,
			Tool:    d.manifest.Tool,
			Columns: append(append([]table.Column(nil), l.leading...), l.own...),
		})
		if err != nil {
			return files, err
		}
		if err := errors.Join(w.Write(b), w.Close()); err != nil {
			return files, fmt.Errorf("%s: %w", path, err)
		}
		if err := f.Stage(); err != nil {
			return files, err
		}
	}
	return files, nil
}

// ReadUnits returns the units of a part in order. Every file is checked against
// the receipt: the error wraps ErrDamaged, or ErrAbsent if the part is not
// finished.
func (d *Dir) ReadUnits(key string, first int) ([]observables.Unit, error) {
	// Another process may complete the part between the receipt and a file:
	// the receipt has changed then, and all is read again.
	for {
		r, err := d.Receipt(key, first)
		if err != nil {
			return nil, err
		}
		units, err := d.readUnits(r)
		if err == nil {
			return units, nil
		}
		now, again := d.Receipt(key, first)
		if again != nil || sameReceipt(r, now) {
			return nil, err
		}
	}
}

func sameReceipt(a, b *Receipt) bool {
	x, _ := encodeJSON(a)
	y, _ := encodeJSON(b)
	return bytes.Equal(x, y)
}

// readUnits reads the files of a receipt.
func (d *Dir) readUnits(r *Receipt) ([]observables.Unit, error) {
	list := layouts(nil)
	files := make([]*table.Reader, len(list))
	count := r.Units
	if r.Next != nil {
		count = r.Next.Units
	}
	for i, l := range list {
		path := d.partFile(l.name, r.Key, r.First)
		data, isNew, err := r.readFile(path, l.name)
		if err != nil {
			return nil, err
		}
		if !isNew {
			count = r.Units
		}
		if data == nil {
			continue
		}
		if files[i], err = table.NewReader(bytes.NewReader(data), int64(len(data)), path); err != nil {
			return nil, fmt.Errorf("%w: %w", ErrDamaged, err)
		}
	}
	units := make([]observables.Unit, count)
	for k := range units {
		units[k].Unit = r.First + k
	}
	for i, l := range list {
		if files[i] == nil {
			continue
		}
		if files[i].Format() > Format {
			return nil, fmt.Errorf("%s: %w", d.partFile(l.name, r.Key, r.First), ErrFormat)
		}
		if err := l.spread(files[i], r.First, units); err != nil {
			return nil, fmt.Errorf("%s: %w", d.partFile(l.name, r.Key, r.First), err)
		}
	}
	return units, nil
}

// readFile returns the content of a table's file, nil if the part has no rows
// for it, and whether it is that of the newest receipt. A file that agrees with
// neither receipt is damaged.
func (r *Receipt) readFile(path, table string) (data []byte, isNew bool, err error) {
	old, next := r.file(table), r.Next.file(table)
	if old == nil && next == nil {
		return nil, true, nil
	}
	data, err = os.ReadFile(path)
	if errors.Is(err, fs.ErrNotExist) && old == nil {
		return nil, false, nil // not exchanged yet
	}
	if errors.Is(err, fs.ErrNotExist) {
		return nil, false, fmt.Errorf("%s: %w: it is missing; %s", path, ErrDamaged, remedy(r))
	}
	if err != nil {
		return nil, false, durable.Explain("read", path, err)
	}
	sum := sha256.Sum256(data)
	digest := hex.EncodeToString(sum[:])
	switch {
	case next != nil && digest == next.SHA256:
		return data, true, nil
	case old != nil && digest == old.SHA256:
		return data, r.Next == nil, nil
	}
	return nil, false, fmt.Errorf("%s: %w: its SHA-256 is not that of its receipt; %s", path, ErrDamaged, remedy(r))
}

// remedy says how a damaged part is made anew.
func remedy(r *Receipt) string {
	return fmt.Sprintf("remove %s/%s.json and run the study again to make the part anew", receiptsDir, PartName(r.Key, r.First))
}
