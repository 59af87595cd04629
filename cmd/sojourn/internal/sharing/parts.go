package sharing

import (
	"cmp"
	"fmt"
	"slices"

	"sojourn/observables/archive"
)

// Point is one point to run.
type Point struct {
	Number int // passed to the Runner
	Key    string
	Count  int // units wanted
	Extent int // units in a part: from the directory's manifest
	Cost   Cost
	Stamp  archive.Receipt // Engine and StreamRevision of its receipts
}

// Part is the units First .. First+Units-1 of a point.
type Part struct {
	Point int // index into the points
	Key   string
	First int
	Units int // as far as the count goes
}

// name is the name under which a part is filed and claimed.
func (p Part) name() string { return archive.PartName(p.Key, p.First) }

// Parts cuts points into parts, in the order of points and units.
func Parts(points []Point) []Part {
	var list []Part
	for i, p := range points {
		if p.Extent < 1 {
			panic(fmt.Sprintf("sharing: point %s has parts of %d units", p.Key, p.Extent))
		}
		for first := 0; first < p.Count; first += p.Extent {
			list = append(list, Part{i, p.Key, first, min(p.Extent, p.Count-first)})
		}
	}
	return list
}

// byCost orders parts for work: those with the longest units first, so that no
// long unit is begun when all else is done.
func byCost(points []Point, parts []Part) []Part {
	parts = slices.Clone(parts)
	slices.SortStableFunc(parts, func(a, b Part) int {
		return cmp.Compare(points[b.Point].Cost.seconds(), points[a.Point].Cost.seconds())
	})
	return parts
}

// split deals parts to the tasks of a share so that each has about the same
// work: the costliest part left goes to the task with the least so far. It
// returns, by part, the task.
func split(points []Point, parts []Part, tasks int) []int {
	work := func(i int) float64 {
		return float64(parts[i].Units) * points[parts[i].Point].Cost.seconds()
	}
	order := make([]int, len(parts))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(work(b), work(a)) })
	load := make([]float64, tasks)
	number := make([]int, tasks)
	task := make([]int, len(parts))
	for _, i := range order {
		least := 0
		for k := range load {
			// Without costs the number of parts decides.
			if c := cmp.Compare(load[k], load[least]); c < 0 || c == 0 && number[k] < number[least] {
				least = k
			}
		}
		task[i] = least
		load[least] += work(i)
		number[least]++
	}
	return task
}
