// Package durable writes files that are either complete or absent, whenever the
// program or the machine stops.
//
// A file is written under a temporary name beside its final one, flushed to the
// disk, renamed, and the rename flushed with the directory. Temporary names are
// the final name followed by ".tmp-" and random digits; Clean removes those
// that a crash left behind.
package durable

import (
	"crypto/rand"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"hash"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
	"time"
)

const mark = ".tmp-"

// File is a file on its way to its final name. It is used by one goroutine.
type File struct {
	path, temporary string
	file            *os.File // nil once staged or discarded
	hash            hash.Hash
	size            int64
	staged          bool
	err             error // the first
}

// Create starts a file that shall stand at path.
func Create(path string) (*File, error) {
	temporary := Beside(path, Token())
	file, err := os.OpenFile(temporary, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return nil, Explain("create", path, err)
	}
	return &File{path: path, temporary: temporary, file: file, hash: sha256.New()}, nil
}

// Write appends to the file.
func (f *File) Write(p []byte) (int, error) {
	if f.err != nil {
		return 0, f.err
	}
	n, err := f.file.Write(p)
	f.hash.Write(p[:n])
	f.size += int64(n)
	if err != nil {
		f.err = Explain("write", f.path, err)
	}
	return n, f.err
}

// Size returns the number of bytes written.
func (f *File) Size() int64 { return f.size }

// SHA256 returns the digest of the bytes written, in hexadecimal.
func (f *File) SHA256() string { return hex.EncodeToString(f.hash.Sum(nil)) }

// Stage flushes the file to the disk, still under its temporary name. After an
// error the file is discarded.
func (f *File) Stage() error {
	if f.staged {
		return nil
	}
	if f.err == nil {
		if err := f.file.Sync(); err != nil {
			f.err = Explain("write", f.path, err)
		}
	}
	// Some file systems report a full disk only here.
	if err := f.file.Close(); err != nil && f.err == nil {
		f.err = Explain("write", f.path, err)
	}
	f.file = nil
	if f.err != nil {
		os.Remove(f.temporary)
		return f.err
	}
	f.staged = true
	return nil
}

// Commit stages the file and gives it its final name, replacing what was there.
func (f *File) Commit() error {
	if err := f.Stage(); err != nil {
		return err
	}
	if err := os.Rename(f.temporary, f.path); err != nil {
		os.Remove(f.temporary)
		f.err = Explain("rename", f.path, err)
		return f.err
	}
	f.temporary = ""
	return SyncDir(filepath.Dir(f.path))
}

// Discard removes the file if it was not committed; after Commit it does
// nothing, so that it can be deferred.
func (f *File) Discard() {
	if f.file != nil {
		f.file.Close()
		f.file = nil
	}
	if f.temporary != "" {
		os.Remove(f.temporary)
	}
	if f.err == nil {
		f.err = fs.ErrClosed
	}
}

// WriteFile writes a whole file.
func WriteFile(path string, data []byte) error {
	f, err := Create(path)
	if err != nil {
		return err
	}
	defer f.Discard()
	if _, err := f.Write(data); err != nil {
		return err
	}
	return f.Commit()
}

// MakeDirs creates a directory and its parents.
func MakeDirs(path string) error {
	if err := os.MkdirAll(path, 0o777); err != nil {
		return Explain("create", path, err)
	}
	return nil
}

// SyncDir flushes the names in a directory.
func SyncDir(path string) error {
	d, err := os.Open(path)
	if err != nil {
		return Explain("open", path, err)
	}
	defer d.Close()
	// File systems that cannot flush a directory say that the call is invalid.
	if err := d.Sync(); err != nil && !errors.Is(err, syscall.EINVAL) && !errors.Is(err, errors.ErrUnsupported) {
		return Explain("write", path, err)
	}
	return nil
}

// Token returns 16 random hexadecimal digits.
func Token() string {
	var b [8]byte
	rand.Read(b[:])
	return hex.EncodeToString(b[:])
}

// Beside returns the temporary name beside path that ends in tail.
func Beside(path, tail string) string { return path + mark + tail }

// Temporary reports whether a name is that of a file not yet complete.
func Temporary(name string) bool { return strings.Contains(name, mark) }

// Clean removes temporary files in a directory that nobody has written to for
// at least the given time. What cannot be removed stays.
func Clean(dir string, age time.Duration) {
	entries, err := os.ReadDir(dir)
	if err != nil {
		return
	}
	for _, e := range entries {
		if !Temporary(e.Name()) {
			continue
		}
		if info, err := e.Info(); err == nil && time.Since(info.ModTime()) >= age {
			os.Remove(filepath.Join(dir, e.Name()))
		}
	}
}

// Error is a failure to write, with the path and what to do about it.
type Error struct {
	Op, Path string
	Err      error
}

func (e *Error) Error() string {
	text := fmt.Sprintf("%s: cannot %s: %v", e.Path, e.Op, e.Err)
	switch {
	case errors.Is(e.Err, syscall.ENOSPC), errors.Is(e.Err, syscall.EDQUOT):
		text += "; make room on the disk and start again: what was complete is kept"
	case errors.Is(e.Err, syscall.EFBIG):
		text += "; raise the limit on the size of files (ulimit -f) and start again: what was complete is kept"
	case errors.Is(e.Err, fs.ErrPermission), errors.Is(e.Err, syscall.EROFS):
		text += "; choose a directory that you may write to"
	case errors.Is(e.Err, syscall.ENOTDIR), errors.Is(e.Err, fs.ErrExist):
		text += "; a file stands where a directory is needed: choose another directory"
	}
	return text
}

func (e *Error) Unwrap() error { return e.Err }

// Explain wraps an error of the operating system as an *Error, without the path
// that it names, which may be the temporary one.
func Explain(op, path string, err error) error {
	var p *fs.PathError
	var l *os.LinkError
	switch {
	case errors.As(err, &p):
		err = p.Err
	case errors.As(err, &l):
		err = l.Err
	}
	return &Error{Op: op, Path: path, Err: err}
}
