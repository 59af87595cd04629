package configs

import (
	"strconv"
	"strings"
)

// nearest returns the candidate that a misspelt word most likely means: equal
// but for letter case, dashes and underscores, else within one edit, or two for
// words above six letters. Empty if there is none.
func nearest(word string, candidates []string) string {
	for _, c := range candidates {
		if plain(c) == plain(word) {
			return c
		}
	}
	allowed := 1
	if len(word) > 6 {
		allowed = 2
	}
	best := ""
	for _, c := range candidates {
		if d := edits(plain(word), plain(c)); d <= allowed && len(c) > 2 {
			allowed = d - 1
			best = c
		}
	}
	return best
}

func plain(s string) string {
	return strings.NewReplacer("-", "", "_", "", " ", "").Replace(strings.ToLower(s))
}

// edits is the number of insertions, deletions, replacements and swaps of
// neighbours that turn a into b (optimal string alignment).
func edits(a, b string) int {
	const long = 64
	if len(a) > long || len(b) > long {
		return long
	}
	var before, previous []int
	current := make([]int, len(b)+1)
	for j := range current {
		current[j] = j
	}
	for i := 1; i <= len(a); i++ {
		before, previous, current = previous, current, make([]int, len(b)+1)
		current[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			current[j] = min(previous[j]+1, current[j-1]+1, previous[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				current[j] = min(current[j], before[j-2]+1)
			}
		}
	}
	return current[len(b)]
}

// listed joins words as in "a, b or c".
func listed(words []string, conjunction string) string {
	switch len(words) {
	case 0:
		return "none"
	case 1:
		return words[0]
	}
	return strings.Join(words[:len(words)-1], ", ") + " " + conjunction + " " + words[len(words)-1]
}

// plural writes a number of things.
func plural(n int, what string) string {
	switch {
	case n == 1:
		return "1 " + what
	case what == "axis":
		return strconv.Itoa(n) + " axes"
	}
	return strconv.Itoa(n) + " " + what + "s"
}
