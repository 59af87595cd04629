package observables

import (
	"slices"
	"testing"
)

func TestLags(t *testing.T) {
	want := []int64{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20, 22, 24, 26, 28, 30, 32, 36, 40, 44, 48}
	if got := Lags(4*51 + 3); !slices.Equal(got, want) {
		t.Errorf("Lags(207) = %v, want %v", got, want)
	}
	for samples, last := range map[int64]int64{0: -1, 1: 0, 3: 0, 4: 1, 36: 9, 1 << 20: 1 << 18} {
		lags := Lags(samples)
		switch {
		case last < 0 && lags != nil, last >= 0 && (len(lags) == 0 || lags[len(lags)-1] != last):
			t.Errorf("Lags(%d) = %v, want up to %d", samples, lags, last)
		}
	}
	// A lag is a multiple of the spacing of its level's samples, and their
	// number in one lag never passes the depth of the history.
	for _, lag := range Lags(1 << 40) {
		j := level(lag)
		if lag&(1<<j-1) != 0 || lag>>j > depth || j > 0 && lag>>j <= depth/2 {
			t.Errorf("lag %d on level %d", lag, j)
		}
	}
}

func TestTransientTimes(t *testing.T) {
	got := TransientTimes(2, 3, 0.1)
	if len(got) == 0 || got[0] != 0 || got[len(got)-1] != 48 || !slices.IsSorted(got) {
		t.Errorf("times %v, want 0 to 48 steps", got)
	}
	// 3.6/0.1 is a little below 36 in binary, but is meant.
	if got := TransientTimes(0.6, 3, 0.1); got[len(got)-1] != 36 {
		t.Errorf("times %v, want up to 36", got)
	}
}
