package main

import (
	"strings"
	"testing"
	"time"
)

// Speed is over the last seconds, time left from the share of the work done
// since this process began: 10 s for the first quarter leave 20 s for the half
// that remains.
func TestPace(t *testing.T) {
	begin := time.Now()
	var now tally
	p := &progress{begin: begin, look: func() tally { return now }}
	now = tally{done: 8, total: 32, share: 0.25}
	p.sample(begin)
	now = tally{done: 16, total: 32, share: 0.5, jumps: 5000}
	at := begin.Add(10 * time.Second)
	p.sample(at)
	if got, want := p.sentence(at), "16 of 32 units, 500 jumps/s, 20 s left"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestProgressLines(t *testing.T) {
	var b strings.Builder
	p := &progress{out: &b, begin: time.Now(), every: time.Nanosecond, stop: make(chan struct{}),
		look: func() tally { return tally{done: 1, total: 2, share: 0.5} }}
	p.wait.Add(1)
	go p.lines()
	time.Sleep(3 * tickEvery)
	p.finish()
	if !strings.HasPrefix(b.String(), "sojourn: 1 of 2 units") {
		t.Errorf("got %q", b.String())
	}
	quiet := startProgress(&b, true, p.look)
	n := b.Len()
	quiet.finish()
	if b.Len() != n {
		t.Error("a quiet run shows progress")
	}
}
