package archive

import (
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"sojourn/observables/internal/durable"
	"sojourn/observables/table"
)

// Dir is a results directory. Its methods may be called by several goroutines,
// and by several processes on the same directory.
type Dir struct {
	path     string
	manifest Manifest
	points   map[string]int // key -> index into manifest.Points
	writable bool
	pace     pace
}

// Open opens an existing results directory for reading; only WriteFit writes.
func Open(path string) (*Dir, error) {
	m, err := readManifest(path)
	if errors.Is(err, fs.ErrNotExist) {
		if _, err := os.Stat(path); err != nil {
			return nil, fmt.Errorf("%s: there is no such directory", path)
		}
		return nil, fmt.Errorf("%s: %w: it has no %s", path, ErrNotResults, manifestFile)
	}
	if err != nil {
		return nil, err
	}
	return newDir(path, *m, false), nil
}

func newDir(path string, m Manifest, writable bool) *Dir {
	d := &Dir{path: path, manifest: m, points: map[string]int{}, writable: writable, pace: usualPace}
	for i, p := range m.Points {
		d.points[p.Key] = i
	}
	return d
}

// readManifest returns the manifest of a directory; the error wraps
// fs.ErrNotExist if it has none.
func readManifest(path string) (*Manifest, error) {
	file := filepath.Join(path, manifestFile)
	data, err := os.ReadFile(file)
	if err != nil {
		return nil, durable.Explain("read", file, err)
	}
	var m Manifest
	if err := readJSON(file, data, &m); err != nil {
		return nil, err
	}
	for _, p := range m.Points {
		if p.Key == "" || p.Extent < 1 {
			return nil, fmt.Errorf("%s: %w: point %d has no key or no extent", file, ErrDamaged, p.Number)
		}
	}
	return &m, nil
}

// readJSON decodes a file of ours and checks its format.
func readJSON(file string, data []byte, v any) error {
	var head struct {
		Format int `json:"format"`
	}
	if err := json.Unmarshal(data, &head); err != nil {
		return fmt.Errorf("%s: %w: %v", file, ErrDamaged, err)
	}
	if head.Format > Format {
		return fmt.Errorf("%s: %w: %d, not %d; a newer version is needed", file, ErrFormat, head.Format, Format)
	}
	if err := json.Unmarshal(data, v); err != nil {
		return fmt.Errorf("%s: %w: %v", file, ErrDamaged, err)
	}
	return nil
}

// encodeJSON is the form in which JSON stands in the directory.
func encodeJSON(v any) ([]byte, error) {
	data, err := json.MarshalIndent(v, "", "  ")
	return append(data, '\n'), err
}

// writeJSON writes v under a name.
func writeJSON(file string, v any) error {
	data, err := encodeJSON(v)
	if err != nil {
		return fmt.Errorf("%s: %w", file, err)
	}
	return durable.WriteFile(file, data)
}

// Path returns the directory's path as given.
func (d *Dir) Path() string { return d.path }

// Manifest returns the manifest as read or merged. It must not be modified.
func (d *Dir) Manifest() *Manifest { return &d.manifest }

// point returns the point with a key; it panics if there is none, since keys
// come from the manifest.
func (d *Dir) point(key string) *Point {
	i, ok := d.points[key]
	if !ok {
		panic(fmt.Sprintf("archive: the manifest has no point %q", key))
	}
	return &d.manifest.Points[i]
}

// mayWrite returns ErrReadOnly if the directory was opened for reading.
func (d *Dir) mayWrite() error {
	if !d.writable {
		return fmt.Errorf("%s: %w", d.path, ErrReadOnly)
	}
	return nil
}

// WriteFit writes a table to fits/NAME.parquet, where NAME is the schema's.
func (d *Dir) WriteFit(s table.Schema, b table.Block) error {
	if err := durable.MakeDirs(d.join(fitsDir)); err != nil {
		return err
	}
	return table.WriteFile(d.fitFile(s.Name), s, b)
}

// OpenFit opens a table that WriteFit wrote. The error wraps fs.ErrNotExist if
// there is none.
func (d *Dir) OpenFit(name string) (*table.Reader, error) {
	return table.Open(d.fitFile(name))
}
