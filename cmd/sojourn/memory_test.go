package main

import (
	"os"
	"path/filepath"
	"testing"
)

// The smallest limit binds: that of the machine, of the control group, or of a
// group above it (Linux, Documentation/admin-guide/cgroup-v2.rst, memory.max).
func TestMemoryLimits(t *testing.T) {
	for _, c := range []struct {
		name  string
		files map[string]string
		want  int64
	}{
		{"nothing known", nil, 0},
		{"machine", map[string]string{"proc/meminfo": "MemTotal:       1024 kB\nMemFree: 1 kB\n"}, 1 << 20},
		{"no limit", map[string]string{
			"proc/meminfo":               "MemTotal: 1024 kB\n",
			"proc/self/cgroup":           "0::/a\n",
			"sys/fs/cgroup/a/memory.max": "max\n",
		}, 1 << 20},
		{"own group", map[string]string{
			"proc/meminfo":                 "MemTotal: 1024 kB\n",
			"proc/self/cgroup":             "0::/a/b\n",
			"sys/fs/cgroup/a/b/memory.max": "5000\n",
		}, 5000},
		{"group above", map[string]string{
			"proc/meminfo":                 "MemTotal: 1024 kB\n",
			"proc/self/cgroup":             "0::/a/b\n",
			"sys/fs/cgroup/a/b/memory.max": "5000\n",
			"sys/fs/cgroup/a/memory.max":   "4000\n",
		}, 4000},
		{"first version", map[string]string{
			"proc/meminfo":     "MemTotal: 1024 kB\n",
			"proc/self/cgroup": "3:cpu:/x\n5:memory,hugetlb:/job\n",
			"sys/fs/cgroup/memory/job/memory.limit_in_bytes": "6000\n",
		}, 6000},
		{"container", map[string]string{
			"proc/meminfo":             "MemTotal: 1024 kB\n",
			"sys/fs/cgroup/memory.max": "7000\n",
		}, 7000},
	} {
		root := t.TempDir()
		for path, text := range c.files {
			path = filepath.Join(root, path)
			if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(path, []byte(text), 0o666); err != nil {
				t.Fatal(err)
			}
		}
		if got := memoryUnder(root); got != c.want {
			t.Errorf("%s: %d, want %d", c.name, got, c.want)
		}
	}
}
