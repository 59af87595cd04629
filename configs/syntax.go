package configs

import (
	"errors"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// builder turns the parser's expressions into a tree. It applies the rules of
// TOML 1.0 on what may be defined twice; the parser itself does not.
type builder struct {
	d       *decoder
	src     *source
	root    *node
	current *node    // the table that keys go into
	path    []string // its name
}

type keyPart struct {
	name string
	at   int
}

// parse reads the file into a tree. Faults of syntax and duplicate keys are
// reported; complete is false if the rest of the file could not be read.
func (d *decoder) parse() (root *node, complete bool) {
	b := &builder{d: d, src: d.src, root: &node{kind: kindTable, style: headed, at: 0}}
	b.current = b.root
	var p unstable.Parser
	text := d.src.text
	if strings.HasPrefix(string(text), "\ufeff") {
		text = text[len("\ufeff"):]
	}
	p.Reset(text)
	shift := len(d.src.text) - len(text)
	for p.NextExpression() {
		e := p.Expression()
		switch e.Kind {
		case unstable.KeyValue:
			value, _ := b.keyValue(e, shift, b.path)
			b.assign(keyParts(e.Key(), shift), value)
		case unstable.Table, unstable.ArrayTable:
			b.header(keyParts(e.Key(), shift), e.Kind == unstable.ArrayTable)
		}
	}
	if err := p.Error(); err != nil {
		at := len(d.src.text)
		var pe *unstable.ParserError
		if errors.As(err, &pe) {
			// A slice of the text: what it lacks in capacity is its offset.
			at = min(max(0, cap(text)-cap(pe.Highlight)), len(text)) + shift
		}
		d.invalid(at, strings.Join(b.path, "."), err)
		return b.root, false
	}
	return b.root, true
}

func keyParts(it unstable.Iterator, shift int) []keyPart {
	var out []keyPart
	for it.Next() {
		n := it.Node()
		out = append(out, keyPart{string(n.Data), int(n.Raw.Offset) + shift})
	}
	return out
}

// keyValue reads the value of a key = value expression in the table called path
// and returns it with its end.
func (b *builder) keyValue(e *unstable.Node, shift int, path []string) (*node, int) {
	path = append([]string{}, path...)
	end := 0
	for it := e.Key(); it.Next(); {
		n := it.Node()
		end = int(n.Raw.Offset+n.Raw.Length) + shift
		path = append(path, string(n.Data))
	}
	start := b.skip(end, " \t=")
	return b.value(e.Value(), start, shift, path)
}

// value converts the value that begins at start. The parser tells where scalars
// are; lists and tables are found between them.
func (b *builder) value(v *unstable.Node, start, shift int, path []string) (*node, int) {
	n := &node{at: start}
	switch v.Kind {
	case unstable.Array:
		n.kind, n.style = kindList, closed
		end := start + 1
		for it := v.Children(); it.Next(); {
			item, e := b.value(it.Node(), b.skipBetween(end), shift, path)
			n.items = append(n.items, item)
			end = e
		}
		return n, b.skipBetween(end) + 1
	case unstable.InlineTable:
		n.kind, n.style = kindTable, closed
		inner := &builder{d: b.d, src: b.src, root: n, current: n, path: path}
		end := start + 1
		for it := v.Children(); it.Next(); {
			item, e := b.keyValue(it.Node(), shift, path)
			inner.assign(keyParts(it.Node().Key(), shift), item)
			end = e
		}
		closeAll(n)
		return n, b.skipBetween(end) + 1
	}
	n.at = int(v.Raw.Offset) + shift
	end := n.at + int(v.Raw.Length)
	n.raw = b.src.text[n.at:end]
	n.text = string(v.Data)
	b.scalar(n, v.Kind, strings.Join(path, "."))
	return n, end
}

// closeAll marks the tables that dotted keys made inside an inline table as
// complete.
func closeAll(n *node) {
	n.style = closed
	for _, e := range n.entries {
		if e.value.kind == kindTable {
			closeAll(e.value)
		}
	}
}

func (b *builder) scalar(n *node, k unstable.Kind, key string) {
	switch k {
	case unstable.String:
		n.kind = kindText
	case unstable.Bool:
		n.kind = kindFlag
	case unstable.Integer:
		n.kind = kindInteger
		i, err := strconv.ParseInt(strings.ReplaceAll(n.text, "_", ""), baseOf(n.text), 64)
		if err != nil {
			n.bad = true
			b.d.fault(n.at, key, "%s is not between -2^63 and 2^63 - 1", shorten(n.text))
		}
		n.integer, n.number = i, float64(i)
	case unstable.Float:
		n.kind = kindFloat
		f, err := strconv.ParseFloat(strings.ReplaceAll(n.text, "_", ""), 64)
		if err != nil {
			n.bad = true
			b.d.fault(n.at, key, "%s is beyond the largest number, 1.8e308", shorten(n.text))
		}
		n.number = f
	default:
		n.kind = kindDate
	}
}

// baseOf returns the base argument for ParseInt: 0 where the number says it.
func baseOf(text string) int {
	if len(text) > 2 && text[0] == '0' && (text[1] == 'x' || text[1] == 'o' || text[1] == 'b') {
		return 0
	}
	return 10
}

func (b *builder) skip(at int, set string) int {
	for at < len(b.src.text) && strings.IndexByte(set, b.src.text[at]) >= 0 {
		at++
	}
	return at
}

// skipBetween skips what may stand between the elements of a list or table.
func (b *builder) skipBetween(at int) int {
	for {
		at = b.skip(at, " \t\r\n,")
		if at >= len(b.src.text) || b.src.text[at] != '#' {
			return at
		}
		for at < len(b.src.text) && b.src.text[at] != '\n' {
			at++
		}
	}
}

// header begins a [table] or, if repeated, the next [[table]] of a list.
func (b *builder) header(path []keyPart, repeated bool) {
	b.path = names(path)
	last := path[len(path)-1]
	b.current = &node{kind: kindTable, style: headed, at: path[0].at}
	parent := b.descend(path)
	if parent == nil {
		return
	}
	old := parent.get(last.name)
	switch {
	case old == nil && repeated:
		list := &node{kind: kindList, style: headers, at: last.at, items: []*node{b.current}}
		parent.entries = append(parent.entries, &entry{last.name, last.at, list})
	case old == nil:
		parent.entries = append(parent.entries, &entry{last.name, last.at, b.current})
	case repeated && old.value.style == headers:
		old.value.items = append(old.value.items, b.current)
	case !repeated && old.value.kind == kindTable && old.value.style == implied:
		b.current = old.value
		b.current.style, b.current.at = headed, path[0].at
		old.at = last.at
	case !repeated && old.value.style == headers:
		b.d.fault(last.at, strings.Join(b.path, "."), "is a list of tables from line %d on: write [[%s]]",
			b.d.line(old.at), strings.Join(b.path, "."))
	default:
		b.twice(last.at, b.path, old)
	}
}

// descend walks to the table that holds the last part of a header's path,
// making tables as needed; nil if there is something else in the way.
func (b *builder) descend(path []keyPart) *node {
	t := b.root
	for i, part := range path[:len(path)-1] {
		e := t.get(part.name)
		if e == nil {
			e = &entry{part.name, part.at, &node{kind: kindTable, style: implied, at: part.at}}
			t.entries = append(t.entries, e)
		}
		switch {
		case e.value.kind == kindTable && e.value.style != closed:
			t = e.value
		case e.value.style == headers:
			t = e.value.items[len(e.value.items)-1]
		default:
			b.twice(part.at, names(path[:i+1]), e)
			return nil
		}
	}
	return t
}

// assign sets a key, perhaps dotted, of the current table.
func (b *builder) assign(path []keyPart, value *node) {
	t := b.current
	full := append([]string{}, b.path...)
	for _, part := range path[:len(path)-1] {
		full = append(full, part.name)
		e := t.get(part.name)
		if e == nil {
			e = &entry{part.name, part.at, &node{kind: kindTable, style: dotted, at: part.at}}
			t.entries = append(t.entries, e)
		}
		if e.value.kind != kindTable || e.value.style != dotted {
			b.twice(part.at, full, e)
			return
		}
		t = e.value
	}
	last := path[len(path)-1]
	full = append(full, last.name)
	if old := t.get(last.name); old != nil {
		b.twice(last.at, full, old)
		return
	}
	t.entries = append(t.entries, &entry{last.name, last.at, value})
}

func (b *builder) twice(at int, path []string, first *entry) {
	b.d.fault(at, strings.Join(path, "."), "is set twice: it stands in line %d already", b.d.line(first.at))
}

func names(path []keyPart) []string {
	out := make([]string, len(path))
	for i := range path {
		out[i] = path[i].name
	}
	return out
}
