package archive

import (
	"encoding/binary"
	"fmt"
	"math"
	"reflect"
	"strings"
)

// encodeValue appends a value: structs field by field, integers as varints,
// doubles as 8 bytes, strings and slices led by their length. Nothing of the
// type is stored; describeType says what a reader must expect. The bytes follow
// from the value alone.
func encodeValue(dst []byte, v reflect.Value) []byte {
	switch v.Kind() {
	case reflect.Struct:
		for i := range v.NumField() {
			dst = encodeValue(dst, v.Field(i))
		}
	case reflect.Slice:
		dst = binary.AppendUvarint(dst, uint64(v.Len()))
		for i := range v.Len() {
			dst = encodeValue(dst, v.Index(i))
		}
	case reflect.String:
		dst = binary.AppendUvarint(dst, uint64(v.Len()))
		dst = append(dst, v.String()...)
	case reflect.Int, reflect.Int32, reflect.Int64:
		dst = binary.AppendVarint(dst, v.Int())
	case reflect.Float64:
		dst = binary.LittleEndian.AppendUint64(dst, math.Float64bits(v.Float()))
	default:
		panic(fmt.Sprintf("archive: cannot keep a %s", v.Type()))
	}
	return dst
}

// decoder reads what encodeValue wrote; bad is set when the bytes do not fit.
type decoder struct {
	src   []byte
	bad   bool
	names map[string]string // one copy of each string
}

func (d *decoder) value(v reflect.Value) {
	switch v.Kind() {
	case reflect.Struct:
		for i := range v.NumField() {
			d.value(v.Field(i))
		}
	case reflect.Slice:
		n := d.length()
		if n == 0 {
			return
		}
		v.Set(reflect.MakeSlice(v.Type(), n, n))
		for i := range n {
			d.value(v.Index(i))
		}
	case reflect.String:
		text := d.take(d.length())
		name, ok := d.names[string(text)]
		if !ok {
			name = string(text)
			d.names[name] = name
		}
		v.SetString(name)
	case reflect.Int, reflect.Int32, reflect.Int64:
		x, n := binary.Varint(d.src)
		d.take(max(n, 0))
		d.bad = d.bad || n <= 0 || v.OverflowInt(x)
		v.SetInt(x)
	case reflect.Float64:
		if b := d.take(8); b != nil {
			v.SetFloat(math.Float64frombits(binary.LittleEndian.Uint64(b)))
		}
	}
}

// length reads the number of elements to come, each of at least one byte.
func (d *decoder) length() int {
	x, n := binary.Uvarint(d.src)
	d.take(max(n, 0))
	if n <= 0 || x > uint64(len(d.src)) {
		d.bad = true
		return 0
	}
	return int(x)
}

// take removes n bytes, or returns nil if there are fewer.
func (d *decoder) take(n int) []byte {
	if n > len(d.src) {
		d.bad = true
		return nil
	}
	b := d.src[:n]
	d.src = d.src[n:]
	return b
}

// describeType spells out the layout of a type: names and kinds.
func describeType(t reflect.Type) string {
	switch t.Kind() {
	case reflect.Struct:
		var fields []string
		for i := range t.NumField() {
			f := t.Field(i)
			fields = append(fields, f.Name+" "+describeType(f.Type))
		}
		return "{" + strings.Join(fields, "; ") + "}"
	case reflect.Slice:
		return "[]" + describeType(t.Elem())
	}
	return t.Kind().String()
}
