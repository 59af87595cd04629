package archive

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"time"

	"sojourn/observables"
	"sojourn/observables/internal/durable"
)

// temporaryAge is how long a temporary file must lie untouched before it counts
// as left behind. Files are written in one go, in seconds.
const temporaryAge = time.Hour

// Check reports what Prepare would refuse, and writes nothing.
func Check(path string, m Manifest, study []byte) error {
	_, err := check(path, m, study)
	return err
}

// check returns the merged manifest.
func check(path string, m Manifest, study []byte) (Manifest, error) {
	old, err := readManifest(path)
	if errors.Is(err, fs.ErrNotExist) {
		if err := checkEmpty(path, study); err != nil {
			return Manifest{}, err
		}
		old = nil
	} else if err != nil {
		return Manifest{}, err
	}
	merged, ok := merge(old, m)
	if !ok {
		return Manifest{}, fmt.Errorf("%s: %w: %q, which has no point in common with %q; choose another directory",
			path, ErrOtherStudy, old.Study, m.Study)
	}
	return merged, nil
}

// checkEmpty refuses a directory that holds something else than a results
// directory that was never completed.
func checkEmpty(path string, study []byte) error {
	entries, err := os.ReadDir(path)
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	if err != nil {
		return durable.Explain("read", path, err)
	}
	ours := []string{partsDir, receiptsDir, journalDir, claimsDir, fitsDir}
	for _, e := range entries {
		name := e.Name()
		if e.IsDir() && slices.Contains(ours, name) || durable.Temporary(name) {
			continue
		}
		if name == studyFile {
			if data, err := os.ReadFile(filepath.Join(path, name)); err == nil && bytes.Equal(data, study) {
				continue
			}
		}
		return fmt.Errorf("%s: %w: it has no %s but holds %q; choose a new or an empty directory",
			path, ErrNotResults, manifestFile, name)
	}
	return nil
}

// Prepare opens a results directory for work on the study m, whose file reads
// study, and creates it if need be. Points that the directory has keep their
// numbers, extents and rows; new ones are added behind. If the directory holds
// another study (ErrOtherStudy) or other files (ErrNotResults), nothing is
// written.
func Prepare(path string, m Manifest, study []byte) (*Dir, error) {
	for _, p := range m.Points {
		checkKey(p.Key)
		if p.Extent < 1 || p.Count < 0 || len(p.Facts.Size) == 0 {
			panic(fmt.Sprintf("archive: point %s lacks an extent, a count or a size", p.Key))
		}
	}
	if err := Check(path, m, study); err != nil {
		return nil, err
	}
	d := newDir(path, m, true)
	if err := durable.MakeDirs(d.join(claimsDir)); err != nil {
		return nil, err
	}
	// Two processes that extend the directory at once must not lose each
	// other's points.
	lock, err := d.hold("manifest")
	if err != nil {
		return nil, err
	}
	defer lock.Release()
	merged, err := check(path, m, study)
	if err != nil {
		return nil, err
	}
	d = newDir(path, merged, true)
	data, err := encodeJSON(merged)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", d.join(manifestFile), err)
	}
	if err := replace(d.join(manifestFile), data); err != nil {
		return nil, err
	}
	if err := replace(d.join(studyFile), study); err != nil {
		return nil, err
	}
	for _, dir := range d.directories() {
		if err := durable.MakeDirs(dir); err != nil {
			return nil, err
		}
	}
	d.clean()
	return d, nil
}

// replace writes a file unless it already reads so.
func replace(path string, data []byte) error {
	if old, err := os.ReadFile(path); err == nil && bytes.Equal(old, data) {
		return nil
	}
	return durable.WriteFile(path, data)
}

// directories lists all directories in which files are written by name.
func (d *Dir) directories() []string {
	list := []string{d.join(receiptsDir), d.join(journalDir), d.join(claimsDir)}
	for _, t := range observables.Tables(nil) {
		list = append(list, d.join(partsDir, t.Name))
	}
	return list
}

// clean removes what crashes left behind: old temporary files, claims whose
// holders are gone, and kept units that are already in a part.
func (d *Dir) clean() {
	for _, dir := range append(d.directories(), d.path, d.join(fitsDir)) {
		durable.Clean(dir, temporaryAge)
	}
	d.cleanClaims()
	d.cleanJournal()
}
