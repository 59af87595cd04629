package archive

import (
	"bytes"
	"crypto/sha256"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"reflect"
	"strings"

	"sojourn/observables"
	"sojourn/observables/internal/durable"
)

// A kept unit is the line journalMagic, the SHA-256 of the layout of kept, the
// encoded kept, and the SHA-256 of all that.
const journalMagic = "sojourn unit 1\n"

// kept is a finished unit of an unfinished part.
type kept struct {
	Key     string
	Seconds float64
	Unit    observables.Unit
}

var keptLayout = sha256.Sum256([]byte(describeType(reflect.TypeFor[kept]())))

// SaveUnit keeps a finished unit of an unfinished part, with the seconds it
// took.
func (d *Dir) SaveUnit(key string, u observables.Unit, seconds float64) error {
	if err := d.mayWrite(); err != nil {
		return err
	}
	if err := checkNumbers(&u); err != nil {
		return fmt.Errorf("archive: %w", err)
	}
	data := append([]byte(journalMagic), keptLayout[:]...)
	data = encodeValue(data, reflect.ValueOf(kept{key, seconds, u}))
	sum := sha256.Sum256(data)
	return durable.WriteFile(d.unitFile(key, u.Unit), append(data, sum[:]...))
}

// LoadUnit returns a kept unit and the seconds it took. The error wraps
// ErrAbsent if there is none, and ErrDamaged if the unit must be run again.
func (d *Dir) LoadUnit(key string, unit int) (u observables.Unit, seconds float64, err error) {
	file := d.unitFile(key, unit)
	data, err := os.ReadFile(file)
	if errors.Is(err, fs.ErrNotExist) {
		return u, 0, fmt.Errorf("%s: %w", file, ErrAbsent)
	}
	if err != nil {
		return u, 0, durable.Explain("read", file, err)
	}
	k, err := decodeKept(data)
	if err == nil && (k.Key != key || k.Unit.Unit != unit) {
		err = fmt.Errorf("it holds unit %d of %s", k.Unit.Unit, k.Key)
	}
	if err != nil {
		return u, 0, fmt.Errorf("%s: %w: %w", file, ErrDamaged, err)
	}
	return k.Unit, k.Seconds, nil
}

func decodeKept(data []byte) (k kept, err error) {
	body, ok := bytes.CutPrefix(data, []byte(journalMagic))
	if !ok || len(body) < 2*sha256.Size {
		return k, errors.New("it is no kept unit")
	}
	end := len(data) - sha256.Size
	if sum := sha256.Sum256(data[:end]); !bytes.Equal(sum[:], data[end:]) {
		return k, errors.New("its checksum is wrong")
	}
	if !bytes.Equal(body[:sha256.Size], keptLayout[:]) {
		return k, errors.New("another version of the program wrote it")
	}
	d := decoder{src: body[sha256.Size : len(body)-sha256.Size], names: map[string]string{}}
	d.value(reflect.ValueOf(&k).Elem())
	if d.bad || len(d.src) > 0 {
		return k, errors.New("its content does not fit")
	}
	return k, nil
}

// HasUnit reports whether a unit is kept, without reading it.
func (d *Dir) HasUnit(key string, unit int) bool {
	_, err := os.Stat(d.unitFile(key, unit))
	return err == nil
}

// dropUnits removes the kept units of a finished part.
func (d *Dir) dropUnits(key string, first, units int) error {
	for u := first; u < first+units; u++ {
		if err := os.Remove(d.unitFile(key, u)); err != nil && !errors.Is(err, fs.ErrNotExist) {
			return err
		}
	}
	return nil
}

// cleanJournal removes kept units that are in a part already, as when a crash
// came between a receipt and dropUnits. Only points of the manifest are looked
// at; what cannot be removed stays.
func (d *Dir) cleanJournal() {
	entries, err := os.ReadDir(d.join(journalDir))
	if err != nil {
		return
	}
	for _, e := range entries {
		name, isUnit := strings.CutSuffix(e.Name(), ".unit")
		key, unit, ok := parsePartName(name)
		if !isUnit || !ok {
			continue
		}
		i, known := d.points[key]
		if !known {
			continue
		}
		first := unit - unit%d.manifest.Points[i].Extent
		if r, err := d.Receipt(key, first); err == nil && unit < first+r.Units {
			os.Remove(d.join(journalDir, e.Name()))
		}
	}
}
