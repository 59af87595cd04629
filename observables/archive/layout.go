package archive

import (
	"fmt"
	"path/filepath"
	"strconv"
	"strings"
)

// Names within the directory.
const (
	studyFile    = "study.toml"
	manifestFile = "manifest.json"
	partsDir     = "parts"
	receiptsDir  = "receipts"
	journalDir   = "journal"
	claimsDir    = "claims"
	fitsDir      = "fits"
)

// Format is the version of the directory's layout and of its files.
const Format = 1

// PartName returns the name under which a part is filed and claimed.
func PartName(key string, first int) string {
	checkKey(key)
	return key + "-" + strconv.Itoa(first)
}

// parsePartName is the inverse of PartName.
func parsePartName(name string) (key string, first int, ok bool) {
	i := strings.LastIndexByte(name, '-')
	if i <= 0 {
		return "", 0, false
	}
	first, err := strconv.Atoi(name[i+1:])
	return name[:i], first, err == nil && first >= 0
}

// checkKey panics on a key that could not be part of a file name.
func checkKey(key string) {
	if key == "" || strings.ContainsAny(key, `/\-. `) {
		panic(fmt.Sprintf("archive: %q is not the key of a point", key))
	}
}

func (d *Dir) join(elem ...string) string {
	return filepath.Join(append([]string{d.path}, elem...)...)
}

func (d *Dir) partFile(table, key string, first int) string {
	return d.join(partsDir, table, PartName(key, first)+".parquet")
}

func (d *Dir) receiptFile(key string, first int) string {
	return d.join(receiptsDir, PartName(key, first)+".json")
}

func (d *Dir) unitFile(key string, unit int) string {
	return d.join(journalDir, PartName(key, unit)+".unit")
}

func (d *Dir) claimFile(name string) string {
	return d.join(claimsDir, name+".json")
}

func (d *Dir) fitFile(name string) string {
	return d.join(fitsDir, name+".parquet")
}
