package archive

import (
	"errors"

	"sojourn/observables"
	"sojourn/observables/table"
)

// Errors of the results directory, wrapped with the path.
var (
	// ErrOtherStudy is for a directory whose study shares no point with the
	// one given.
	ErrOtherStudy = errors.New("the directory holds the results of another study")
	// ErrNotResults is for a directory that is no results directory.
	ErrNotResults = errors.New("the directory is not a results directory")
	// ErrFormat is for files of a later version than this program reads.
	ErrFormat = errors.New("the file has a later format than this program reads")
	// ErrReadOnly is for writing to a directory opened for reading.
	ErrReadOnly = errors.New("the directory was opened for reading")
	// ErrDamaged is for a file that does not agree with its digest or checksum.
	ErrDamaged = errors.New("the file is damaged")
	// ErrAbsent is for a unit or part that is not there.
	ErrAbsent = errors.New("not there")
)

// Dir is a results directory. Its methods may be called by several goroutines,
// and by several processes on the same directory.
type Dir struct{}

// Open opens an existing results directory for reading; only WriteFit writes.
func Open(path string) (*Dir, error) { panic("archive: not written") }

// Prepare opens a results directory for work on the study m, whose file reads
// study, and creates it if need be. Points that the directory has keep their
// numbers, extents and rows; new ones are added behind. If the directory holds
// another study (ErrOtherStudy) or other files (ErrNotResults), nothing is
// written.
func Prepare(path string, m Manifest, study []byte) (*Dir, error) { panic("archive: not written") }

// Check reports what Prepare would refuse, and writes nothing.
func Check(path string, m Manifest) error { panic("archive: not written") }

// Path returns the directory's path as given.
func (d *Dir) Path() string { panic("archive: not written") }

// Manifest returns the manifest as read or merged. It must not be modified.
func (d *Dir) Manifest() *Manifest { panic("archive: not written") }

// Receipt says what a finished part consists of.
type Receipt struct {
	Format         int     `json:"format"`
	Tool           string  `json:"tool"`
	Key            string  `json:"key"`
	First          int     `json:"first"`
	Units          int     `json:"units"` // First, First+1, ...
	Files          []File  `json:"files"`
	Engine         string  `json:"engine"`
	StreamRevision int     `json:"stream_revision"`
	Arch           string  `json:"goarch"`
	Host           string  `json:"host"`
	Seconds        float64 `json:"seconds"` // in trajectories, summed over units
	Trajectories   int64   `json:"trajectories"`
	Jumps          int64   `json:"jumps"`
}

// File is a file with its digest; Path is relative to the directory.
type File struct {
	Table  string `json:"table"`
	Size   int64  `json:"size"`
	SHA256 string `json:"sha256"`
}

// Receipt returns the receipt of a part, or an error that wraps ErrAbsent.
func (d *Dir) Receipt(key string, first int) (*Receipt, error) { panic("archive: not written") }

// Parts returns the receipts of all finished parts of a point, by first unit.
func (d *Dir) Parts(key string) ([]*Receipt, error) { panic("archive: not written") }

// PartDone returns how many units, from first on, are finished in the part.
func (d *Dir) PartDone(key string, first int) (units int, err error) { panic("archive: not written") }

// WritePart writes the tables of a part and then its receipt, whose Files,
// Units, Trajectories and Jumps it fills in. The units must be first,
// first+1, ... It replaces a part with fewer units, and does nothing if the
// part is there with as many.
func (d *Dir) WritePart(key string, first int, units []observables.Unit, lead []Lead, r Receipt) error {
	panic("archive: not written")
}

// ReadUnits returns the units of a part in order, checked against its receipt.
func (d *Dir) ReadUnits(key string, first int) ([]observables.Unit, error) {
	panic("archive: not written")
}

// SaveUnit keeps a finished unit of an unfinished part, with the seconds it
// took.
func (d *Dir) SaveUnit(key string, u observables.Unit, seconds float64) error {
	panic("archive: not written")
}

// LoadUnit returns a kept unit. The error wraps ErrAbsent if there is none and
// ErrDamaged if it must be run again.
func (d *Dir) LoadUnit(key string, unit int) (u observables.Unit, seconds float64, err error) {
	panic("archive: not written")
}

// WriteFit writes fits/NAME.parquet.
func (d *Dir) WriteFit(s table.Schema, b table.Block) error { panic("archive: not written") }

// Verify reads every file of every finished part, page by page, and checks it
// against its receipt. It returns one error per file that is wrong.
func (d *Dir) Verify() []error { panic("archive: not written") }
