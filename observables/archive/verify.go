package archive

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"strings"

	"sojourn/observables"
	"sojourn/observables/table"
)

// Verify reads every file of every finished part, to the last page, and checks
// it against its receipt. It returns an error for each thing that is wrong, nil
// if nothing is.
func (d *Dir) Verify() []error {
	var faults []error
	entries, err := os.ReadDir(d.join(receiptsDir))
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		return []error{err}
	}
	filed := map[string]bool{}
	for _, e := range entries {
		name, isReceipt := strings.CutSuffix(e.Name(), ".json")
		key, first, ok := parsePartName(name)
		if !isReceipt || !ok {
			continue
		}
		r, err := d.Receipt(key, first)
		if err != nil {
			faults = append(faults, err)
			continue
		}
		filed[name] = true
		faults = append(faults, d.verifyPart(r)...)
	}
	return append(faults, d.verifyStrays(filed)...)
}

// verifyPart checks the files of one part, each on its own.
func (d *Dir) verifyPart(r *Receipt) (faults []error) {
	for _, t := range observables.Tables(nil) {
		path := d.partFile(t.Name, r.Key, r.First)
		data, _, err := r.readFile(path, t.Name)
		if err == nil && data != nil {
			err = readWhole(data, path)
		}
		if err != nil {
			faults = append(faults, err)
		}
	}
	return faults
}

// readWhole decodes every column of a table.
func readWhole(data []byte, path string) error {
	r, err := table.NewReader(bytes.NewReader(data), int64(len(data)), path)
	if err != nil {
		return err
	}
	for _, c := range r.Columns() {
		if _, err := r.Optional(c.Name); err != nil {
			return err
		}
	}
	return nil
}

// verifyStrays reports tables of parts that have no receipt although their
// point is in the manifest: they are not read, and written anew when the study
// runs.
func (d *Dir) verifyStrays(filed map[string]bool) (faults []error) {
	for _, t := range observables.Tables(nil) {
		entries, err := os.ReadDir(d.join(partsDir, t.Name))
		if err != nil {
			continue
		}
		for _, e := range entries {
			name, isTable := strings.CutSuffix(e.Name(), ".parquet")
			if isTable && !filed[name] {
				path := d.join(partsDir, t.Name, e.Name())
				faults = append(faults, fmt.Errorf("%s: its part has no receipt, so that it is not read", path))
			}
		}
	}
	return faults
}
