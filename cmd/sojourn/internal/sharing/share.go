package sharing

import (
	"fmt"
	"runtime"
	"strconv"
)

// Share restricts a process to share Task of Tasks, from 0. The zero value is
// no restriction.
type Share struct {
	Task, Tasks int
}

// Check reports a share that cannot be.
func (s Share) Check() error {
	switch {
	case s == Share{}:
		return nil
	case s.Tasks < 1:
		return fmt.Errorf("the number of tasks is %d; at least 1 is needed", s.Tasks)
	case s.Task < 0 || s.Task >= s.Tasks:
		return fmt.Errorf("there is no task %d of %d; tasks count from 0 to %d", s.Task, s.Tasks, s.Tasks-1)
	}
	return nil
}

// whole reports whether the share is no restriction.
func (s Share) whole() bool { return s.Tasks <= 1 }

// arrays lists, by batch system, the variables that describe an array job: this
// task's index, the first and the last one, and the step between them; and, if
// there is one, their number. Slurm's are as its jobs see them; Grid Engine's are
// from memory of its manual.
var arrays = []struct{ index, first, last, step, count string }{
	{"SLURM_ARRAY_TASK_ID", "SLURM_ARRAY_TASK_MIN", "SLURM_ARRAY_TASK_MAX", "SLURM_ARRAY_TASK_STEP", "SLURM_ARRAY_TASK_COUNT"},
	{"SGE_TASK_ID", "SGE_TASK_FIRST", "SGE_TASK_LAST", "SGE_TASK_STEPSIZE", ""},
}

// ShareFromEnvironment returns the share that the batch system's array
// variables determine: of Slurm and of Grid Engine, if the indexes are equally
// spaced. Lists with gaps do not tell which place an index has, nor does
// PBS_ARRAY_INDEX, which comes without the range: ok is false then, and the
// tasks share the study by claims alone.
func ShareFromEnvironment(env func(string) string) (s Share, ok bool) {
	number := func(name string) (int, bool) {
		n, err := strconv.Atoi(env(name))
		return n, err == nil
	}
	for _, a := range arrays {
		index, ok1 := number(a.index)
		first, ok2 := number(a.first)
		last, ok3 := number(a.last)
		if !ok1 || !ok2 || !ok3 {
			continue
		}
		step, given := number(a.step)
		if !given {
			step = 1
		}
		if step < 1 || index < first || index > last || (index-first)%step != 0 {
			continue
		}
		s = Share{Task: (index - first) / step, Tasks: (last-first)/step + 1}
		if n, given := number(a.count); given && n != s.Tasks {
			continue // a list with gaps
		}
		return s, true
	}
	return Share{}, false
}

// Workers returns the number of cores that this process may use: those of its
// affinity mask and control group, and no more than the batch system (Slurm,
// Grid Engine) granted.
func Workers(env func(string) string) int {
	cores := runtime.GOMAXPROCS(0)
	for _, name := range []string{"SLURM_CPUS_PER_TASK", "SLURM_CPUS_ON_NODE", "NSLOTS"} {
		if n, err := strconv.Atoi(env(name)); err == nil && n >= 1 {
			return min(cores, n)
		}
	}
	return cores
}
