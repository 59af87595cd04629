package kinetic

import (
	"fmt"
	"strings"

	"sojourn/kinetic/lattice"
)

// Cut says what becomes of a term that would leave the lattice at an open edge,
// or meet an absent site there: Drop or Truncate, or one of them per axis
// (CutAlong).
type Cut string

// The two cuts. Drop is the default ("").
const (
	Drop     Cut = "drop"     // the term is absent
	Truncate Cut = "truncate" // the term keeps the factors inside
)

// CutAlong returns the cut with a rule for each axis, the first axis first. A
// term that leaves along several axes is dropped if any of them drops it.
func CutAlong(rules ...Cut) Cut {
	words := make([]string, len(rules))
	for a, r := range rules {
		if words[a] = string(r); r == "" {
			words[a] = string(Drop)
		}
	}
	return Cut(strings.Join(words, " "))
}

// Along returns the rule along an axis: Drop or Truncate.
func (c Cut) Along(axis int) Cut {
	if c == Truncate || c == Drop || c == "" {
		return max(c, Drop)
	}
	if words := strings.Fields(string(c)); axis < len(words) {
		return Cut(words[axis])
	}
	return Drop
}

// Truncates reports whether terms can lose factors on the lattice: whether the
// rule along an open axis is Truncate.
func (c Cut) Truncates(l lattice.Lattice) bool {
	for a, open := range l.Open {
		if open && c.Along(a) == Truncate {
			return true
		}
	}
	return false
}

// rules tells by axis whether the cut truncates.
func (c Cut) rules() (truncate [lattice.MaxAxes]bool) {
	for a := range truncate {
		truncate[a] = c.Along(a) == Truncate
	}
	return truncate
}

// wrapSite returns the cell at t + e, folded back along periodic axes; ok is
// false if it does not have the given site. outside then marks the open axes
// along which it lies beyond the coordinates at which cells have the site.
func wrapSite(l lattice.Lattice, absent []Absence, t, e lattice.Offset, site int) (c lattice.Offset, outside [lattice.MaxAxes]bool, ok bool) {
	if c, ok = l.Wrap(t, e); ok && len(absent) == 0 {
		return c, outside, true
	}
	ok = true
	for a, open := range l.Open {
		if !open {
			continue
		}
		lo, hi := siteRange(l, absent, site, a)
		if x := t[a] + e[a]; x < lo || x > hi {
			outside[a], ok = true, false
		}
	}
	return c, outside, ok
}

// siteRange returns the first and the last coordinate along an open axis at
// which cells have the site.
func siteRange(l lattice.Lattice, absent []Absence, site, axis int) (lo, hi int) {
	hi = l.Size[axis] - 1
	for _, r := range absent {
		switch {
		case r.Site != site || r.Axis != axis:
		case r.Last:
			hi--
		default:
			lo++
		}
	}
	return lo, hi
}

// HasSite reports whether a cell has the given site.
func (s Spec) HasSite(cell, site int) bool {
	_, _, ok := wrapSite(s.Lattice, s.Absent, s.Lattice.Coord(cell), lattice.Offset{}, site)
	return ok
}

// SiteCount returns how many sites the lattice has.
func (s Spec) SiteCount() int {
	total := 0
	for site := range s.Sites {
		n := 1
		for a, size := range s.Lattice.Size {
			if s.Lattice.Open[a] {
				lo, hi := siteRange(s.Lattice, s.Absent, site, a)
				size = max(0, hi-lo+1)
			}
			n *= size
		}
		total += n
	}
	return total
}

// checkAbsent refuses rules that name no site or edge, or one twice.
func (s Spec) checkAbsent() error {
	seen := map[Absence]bool{}
	for _, r := range s.Absent {
		switch {
		case r.Site < 0 || r.Site >= s.Sites:
			return fmt.Errorf("site %d is said to be absent at an edge; the cell has %d sites", r.Site, s.Sites)
		case r.Axis < 0 || r.Axis >= s.Lattice.Axes:
			return fmt.Errorf("site %d is said to be absent at an edge of axis %d; the lattice has %d axes", r.Site, r.Axis, s.Lattice.Axes)
		case seen[r]:
			return fmt.Errorf("site %d is said twice to be absent at an edge of axis %d", r.Site, r.Axis)
		}
		seen[r] = true
	}
	return nil
}

// checkCut refuses a cut that is not made of the two rules.
func (c Cut) check(axes int) error {
	words := strings.Fields(string(c))
	if len(words) > axes {
		return fmt.Errorf("the cut %q has rules for %d axes; the lattice has %d", c, len(words), axes)
	}
	for _, w := range words {
		if w != string(Drop) && w != string(Truncate) {
			return fmt.Errorf("the cut %q is neither drop nor truncate", w)
		}
	}
	return nil
}
