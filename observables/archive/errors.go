package archive

import "errors"

// Errors of the results directory, wrapped with the path.
var (
	// ErrOtherStudy is for a directory whose study shares no point with the
	// one given.
	ErrOtherStudy = errors.New("the directory holds the results of another study")
	// ErrNotResults is for a directory that is no results directory.
	ErrNotResults = errors.New("the directory is not a results directory")
	// ErrFormat is for files of a later version than this program reads.
	ErrFormat = errors.New("the format is later than this program reads")
	// ErrReadOnly is for writing to a directory opened for reading.
	ErrReadOnly = errors.New("the directory was opened for reading")
	// ErrDamaged is for a file that does not agree with its digest or checksum.
	ErrDamaged = errors.New("the file is damaged")
	// ErrAbsent is for a unit or part that is not there.
	ErrAbsent = errors.New("not there")
)
