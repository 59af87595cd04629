package main

import (
	"bufio"
	"os"
	"path/filepath"
	"strconv"
	"strings"
)

// memory returns how many bytes this process may use: the machine's memory, or
// the limit of its control group where that is smaller. Zero means unknown.
func memory() int64 { return memoryUnder("/") }

// memoryUnder reads the same files below another root.
func memoryUnder(root string) int64 {
	limit := meminfo(filepath.Join(root, "proc/meminfo"))
	for _, path := range groupLimits(root) {
		text, err := os.ReadFile(path)
		if err != nil {
			continue
		}
		n, err := strconv.ParseInt(strings.TrimSpace(string(text)), 10, 64)
		if err != nil || n <= 0 { // "max", or no limit
			continue
		}
		if limit == 0 || n < limit {
			limit = n
		}
	}
	return limit
}

func meminfo(path string) int64 {
	f, err := os.Open(path)
	if err != nil {
		return 0
	}
	defer f.Close()
	lines := bufio.NewScanner(f)
	for lines.Scan() {
		fields := strings.Fields(lines.Text())
		if len(fields) >= 2 && fields[0] == "MemTotal:" {
			kilobytes, err := strconv.ParseInt(fields[1], 10, 64)
			if err != nil {
				return 0
			}
			return kilobytes * 1024
		}
	}
	return 0
}

// groupLimits lists the files that may hold a limit for this process: those of
// its control group and of every group above it (both versions of the
// interface), since the smallest of them binds.
func groupLimits(root string) []string {
	paths := []string{
		filepath.Join(root, "sys/fs/cgroup/memory.max"),
		filepath.Join(root, "sys/fs/cgroup/memory/memory.limit_in_bytes"),
	}
	text, err := os.ReadFile(filepath.Join(root, "proc/self/cgroup"))
	if err != nil {
		return paths
	}
	for _, line := range strings.Split(string(text), "\n") {
		fields := strings.SplitN(line, ":", 3) // number:controllers:path
		if len(fields) != 3 {
			continue
		}
		base, name := "sys/fs/cgroup", "memory.max"
		if fields[1] != "" {
			if !strings.Contains(","+fields[1]+",", ",memory,") {
				continue
			}
			base, name = "sys/fs/cgroup/memory", "memory.limit_in_bytes"
		}
		for group := filepath.Clean("/" + fields[2]); group != "/"; group = filepath.Dir(group) {
			paths = append(paths, filepath.Join(root, base, group, name))
		}
	}
	return paths
}
