package configs

import (
	"math"
	"slices"
	"strconv"
)

// maxBytes bounds the length of a study file.
const maxBytes = 1 << 20

// Decode reads a study from its text. name is the study's name, path what
// faults call the file ("" for a bundled study). The error is [Faults].
func Decode(name, path string, src []byte) (*Study, error) {
	file := path
	if file == "" {
		file = name
	}
	if len(src) > maxBytes {
		return nil, Faults{{File: file, Message: "is longer than 1 MiB: that is no study"}}
	}
	d := newDecoder(newSource(file, append([]byte(nil), src...)))
	root, complete := d.parse()
	if !complete {
		return nil, d.sorted(d.faults)
	}
	d.check(root)
	s := &Study{Name: name, Path: path, Source: src}
	if e := root.get("title"); e != nil {
		s.Title = e.value.text
	}
	combinations, scanned := d.unfold(root)
	s.Scanned = scanned
	if len(combinations) == 0 {
		// The scan is wrong; say what else is.
		combinations = []combination{{at: nowhere}}
	}
	d.readPoints(s, root, combinations)
	if len(d.faults) > 0 {
		return nil, d.sorted(d.faults)
	}
	s.Notes = d.sorted(d.notes)
	return s, nil
}

// readPoints reads every combination and refuses points that are the same.
func (d *decoder) readPoints(s *Study, root *node, combinations []combination) {
	first := map[string]int{} // key -> combination
	var filled [][]Setting
	for i, c := range combinations {
		r := &reading{d: d, root: root, scanned: c.values(), values: map[string]Setting{}}
		p, ok := r.point()
		if !ok {
			continue
		}
		p.Scan = r.settings(s.Scanned, &p)
		if j, taken := first[p.Key]; taken {
			at := c.differs(combinations[j])
			d.fault(at, c.section, "makes the same point as line %d: a point is its physics, times and observables, whatever its count",
				d.line(combinations[j].place()))
			continue
		}
		first[p.Key] = i
		filled = append(filled, r.defaults)
		s.Points = append(s.Points, p)
	}
	s.Defaults = mergeDefaults(filled)
}

// mergeDefaults lists the defaults of all points: one value where all agree,
// else the range.
func mergeDefaults(points [][]Setting) []Setting {
	var names []string
	values := map[string][]string{}
	for _, list := range points {
		for _, s := range list {
			if values[s.Name] == nil {
				names = append(names, s.Name)
			}
			if !slices.Contains(values[s.Name], s.Value) {
				values[s.Name] = append(values[s.Name], s.Value)
			}
		}
	}
	out := make([]Setting, 0, len(names))
	for _, name := range names {
		out = append(out, Setting{Name: name, Value: rangeText(values[name])})
	}
	return out
}

// rangeText writes several values as a range if they are numbers.
func rangeText(values []string) string {
	low, high := math.Inf(1), math.Inf(-1)
	for _, v := range values {
		x, err := strconv.ParseFloat(v, 64)
		if err != nil {
			return listed(values, "or")
		}
		low, high = min(low, x), max(high, x)
	}
	if low == high {
		return values[0]
	}
	return formatNumber(low) + " to " + formatNumber(high)
}
