package archive

import (
	"bytes"
	"os"
	"strconv"
	"strings"
)

// Holder identifies the process that holds a claim. A process number alone does
// not: numbers are used again, and each container counts its own.
type Holder struct {
	Host    string `json:"host"`
	PID     int    `json:"pid"`
	Boot    string `json:"boot,omitempty"`    // identifies the running kernel
	Space   string `json:"space,omitempty"`   // the space in which PID counts
	Started string `json:"started,omitempty"` // when the process began, in the kernel's ticks since boot
	Token   string `json:"token"`             // random, per claim
}

// self describes this process. Where the kernel does not say, fields are empty,
// and claims end by their age alone.
func self() Holder {
	h := Holder{PID: os.Getpid()}
	h.Host, _ = os.Hostname()
	if b, err := os.ReadFile("/proc/sys/kernel/random/boot_id"); err == nil {
		h.Boot = strings.TrimSpace(string(b))
	}
	h.Space, _ = os.Readlink("/proc/self/ns/pid")
	h.Started, _ = startOf(h.PID)
	return h
}

// gone reports whether the process certainly does not run any more, as seen
// from the process described by here.
func (h Holder) gone(here Holder) bool {
	if h.Boot == "" || h.Boot != here.Boot || h.Space == "" || h.Space != here.Space {
		return false // it lives elsewhere, as far as can be told
	}
	started, running := startOf(h.PID)
	return !running || started != h.Started
}

// startOf returns when a process began, and false if there is none or it is a
// zombie.
func startOf(pid int) (started string, running bool) {
	b, err := os.ReadFile("/proc/" + strconv.Itoa(pid) + "/stat")
	if err != nil {
		return "", !os.IsNotExist(err)
	}
	// The second field is the program's name in parentheses, which may hold
	// blanks and parentheses itself; the third is the state, the 22nd the
	// start (proc(5)).
	i := bytes.LastIndexByte(b, ')')
	fields := strings.Fields(string(b[i+1:]))
	if i < 0 || len(fields) < 20 {
		return "", true
	}
	return fields[19], fields[0] != "Z" && fields[0] != "X"
}
