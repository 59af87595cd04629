package sharing

import (
	"reflect"
	"runtime"
	"testing"
)

func TestParts(t *testing.T) {
	points := []Point{{Key: "a", Count: 10, Extent: 4}, {Key: "b", Count: 0, Extent: 1}, {Key: "c", Count: 2, Extent: 64}}
	want := []Part{{0, "a", 0, 4}, {0, "a", 4, 4}, {0, "a", 8, 2}, {2, "c", 0, 2}}
	if got := Parts(points); !reflect.DeepEqual(got, want) {
		t.Errorf("got %v, want %v", got, want)
	}
}

// A larger count adds parts and completes the last one: it moves no border.
func TestPartsDoNotDependOnCount(t *testing.T) {
	for _, extent := range []int{1, 4, 64} {
		large := Parts([]Point{{Key: "a", Count: 200, Extent: extent}})
		for count := 1; count <= 200; count++ {
			small := Parts([]Point{{Key: "a", Count: count, Extent: extent}})
			for i, p := range small {
				if p.First != large[i].First || i < len(small)-1 && p != large[i] || p.Units > large[i].Units {
					t.Fatalf("count %d, extent %d: part %v is not in %v", count, extent, p, large[i])
				}
			}
		}
	}
}

func TestExtent(t *testing.T) {
	for _, c := range []struct {
		name string
		cost Cost
		want int
	}{
		{"nothing known", Cost{}, 64},
		{"16 x 16, short", Cost{Sites: 256, Rate: 1, Time: 4000, Samples: 8000}, 64},
		{"64 x 64", Cost{Sites: 4096, Rate: 1, Time: 20000, Samples: 40000}, 32}, // 3.3 s + 0.3 s a unit
		{"64 x 64, 64 lanes", Cost{Sites: 4096, Rate: 1, Time: 20000, Samples: 40000, Lanes: 64}, 1},
		{"4096 x 4096", Cost{Sites: 1 << 24, Rate: 1, Time: 1000, Samples: 2000}, 1},
	} {
		if got := Extent(c.cost); got != c.want {
			t.Errorf("%s: %d units of %.3g s in a part, want %d", c.name, got, c.cost.seconds(), c.want)
		}
	}
}

func TestSplitIsEvenAndComplete(t *testing.T) {
	points := testPoints(6, 23)
	parts := Parts(points)
	for _, tasks := range []int{1, 2, 3, 7} {
		task := split(points, parts, tasks)
		load := make([]float64, tasks)
		for i, p := range parts {
			load[task[i]] += float64(p.Units) * points[p.Point].Cost.seconds()
		}
		total, most := 0.0, 0.0
		for _, x := range load {
			total += x
			most = max(most, x)
		}
		// The costliest part is 4 units of the last point, 11 % of the whole.
		if most > total/float64(tasks)+4*points[5].Cost.seconds() {
			t.Errorf("%d tasks have %v", tasks, load)
		}
	}
	// More tasks than parts: nobody has two.
	seen := map[int]bool{}
	for _, k := range split(points[:1], parts[:6], 10) {
		if seen[k] {
			t.Error("one of ten tasks has two of six parts")
		}
		seen[k] = true
	}
	// Points without costs are dealt out by number.
	free := []Point{{Key: "a", Count: 8, Extent: 1}}
	if got := split(free, Parts(free), 4); !reflect.DeepEqual(got, []int{0, 1, 2, 3, 0, 1, 2, 3}) {
		t.Errorf("parts without costs go to tasks %v", got)
	}
}

func TestLongUnitsComeFirst(t *testing.T) {
	points := testPoints(3, 8) // each twice as costly as the one before
	var order []string
	for _, p := range byCost(points, Parts(points)) {
		order = append(order, p.name()[len(p.Key)-2:])
	}
	if want := []string{"02-0", "02-4", "01-0", "01-4", "00-0", "00-4"}; !reflect.DeepEqual(order, want) {
		t.Errorf("order %v, want %v", order, want)
	}
}

func TestShareCheck(t *testing.T) {
	for s, ok := range map[Share]bool{{}: true, {0, 1}: true, {2, 3}: true, {3, 3}: false, {-1, 3}: false, {0, -1}: false, {1, 0}: false} {
		if err := s.Check(); (err == nil) != ok {
			t.Errorf("%+v: %v", s, err)
		}
	}
}

func TestShareFromEnvironment(t *testing.T) {
	for _, c := range []struct {
		name string
		env  map[string]string
		want Share
		ok   bool
	}{
		{"no batch system", nil, Share{}, false},
		{"--array=0-9", map[string]string{"SLURM_ARRAY_TASK_ID": "3", "SLURM_ARRAY_TASK_MIN": "0", "SLURM_ARRAY_TASK_MAX": "9", "SLURM_ARRAY_TASK_STEP": "1", "SLURM_ARRAY_TASK_COUNT": "10"}, Share{3, 10}, true},
		{"--array=5-7", map[string]string{"SLURM_ARRAY_TASK_ID": "7", "SLURM_ARRAY_TASK_MIN": "5", "SLURM_ARRAY_TASK_MAX": "7", "SLURM_ARRAY_TASK_COUNT": "3"}, Share{2, 3}, true},
		{"--array=0-8:4", map[string]string{"SLURM_ARRAY_TASK_ID": "4", "SLURM_ARRAY_TASK_MIN": "0", "SLURM_ARRAY_TASK_MAX": "8", "SLURM_ARRAY_TASK_STEP": "4", "SLURM_ARRAY_TASK_COUNT": "3"}, Share{1, 3}, true},
		{"--array=1,3,7", map[string]string{"SLURM_ARRAY_TASK_ID": "3", "SLURM_ARRAY_TASK_MIN": "1", "SLURM_ARRAY_TASK_MAX": "7", "SLURM_ARRAY_TASK_STEP": "1", "SLURM_ARRAY_TASK_COUNT": "3"}, Share{}, false},
		{"no range", map[string]string{"SLURM_ARRAY_TASK_ID": "3"}, Share{}, false},
		{"index outside", map[string]string{"SLURM_ARRAY_TASK_ID": "9", "SLURM_ARRAY_TASK_MIN": "0", "SLURM_ARRAY_TASK_MAX": "3"}, Share{}, false},
		{"-t 1-6:2", map[string]string{"SGE_TASK_ID": "5", "SGE_TASK_FIRST": "1", "SGE_TASK_LAST": "6", "SGE_TASK_STEPSIZE": "2"}, Share{2, 3}, true},
		{"no array", map[string]string{"SGE_TASK_ID": "undefined", "SGE_TASK_FIRST": "undefined", "SGE_TASK_LAST": "undefined", "SGE_TASK_STEPSIZE": "undefined"}, Share{}, false},
		{"an index without its range", map[string]string{"PBS_ARRAY_INDEX": "2"}, Share{}, false},
	} {
		got, ok := ShareFromEnvironment(func(name string) string { return c.env[name] })
		if got != c.want || ok != c.ok {
			t.Errorf("%s: %+v, %v; want %+v, %v", c.name, got, ok, c.want, c.ok)
		}
	}
}

func TestWorkers(t *testing.T) {
	defer runtime.GOMAXPROCS(runtime.GOMAXPROCS(6))
	for _, c := range []struct {
		env  map[string]string
		want int
	}{
		{nil, 6},
		{map[string]string{"SLURM_CPUS_PER_TASK": "4", "SLURM_CPUS_ON_NODE": "2"}, 4},
		{map[string]string{"SLURM_CPUS_ON_NODE": "1"}, 1},
		{map[string]string{"SLURM_CPUS_PER_TASK": "96"}, 6},
		{map[string]string{"NSLOTS": "3"}, 3},
		{map[string]string{"NSLOTS": "many"}, 6},
	} {
		if got := Workers(func(name string) string { return c.env[name] }); got != c.want {
			t.Errorf("%v: %d workers, want %d", c.env, got, c.want)
		}
	}
}
