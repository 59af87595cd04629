package configs

import (
	"sort"
	"unicode/utf8"
)

// source is the text of a study. Places are byte offsets until a fault is
// reported.
type source struct {
	file  string
	text  []byte
	lines []int // where each line begins
}

func newSource(file string, text []byte) *source {
	s := &source{file: file, text: text[:len(text):len(text)], lines: []int{0}}
	for i, c := range text {
		if c == '\n' {
			s.lines = append(s.lines, i+1)
		}
	}
	return s
}

// nowhere is the place of things that the file does not mention.
const nowhere = -1

// position returns the line and the column, in characters, of a byte; both
// count from 1, and are 0 for nowhere.
func (s *source) position(at int) (line, column int) {
	if at < 0 {
		return 0, 0
	}
	at = min(at, len(s.text))
	line = sort.SearchInts(s.lines, at+1)
	start := s.lines[line-1]
	for at > start && at < len(s.text) && !utf8.RuneStart(s.text[at]) {
		at-- // the parser may point into a character
	}
	return line, 1 + utf8.RuneCount(s.text[start:at])
}

// insideString returns the place in the file of byte i of a string's value. raw
// is the string as written, quotes included, and begins at at.
func insideString(raw []byte, at, i int) int {
	quote, open := stringOpening(raw)
	end := len(raw) - open
	j := open
	if open == 3 {
		// A newline right after the opening quotes is not part of the value.
		for _, newline := range []string{"\r\n", "\n"} {
			if len(raw) >= j+len(newline) && string(raw[j:j+len(newline)]) == newline {
				j += len(newline)
				break
			}
		}
	}
	for j < end {
		read, wrote := 1, 1
		if raw[j] == '\\' && quote == '"' {
			read, wrote = escapeLength(raw[j:end])
		}
		if i <= 0 && wrote > 0 {
			break
		}
		j += read
		i -= wrote
	}
	return at + min(j, len(raw))
}

// stringOpening returns the quote that a string is written with, and how many.
func stringOpening(raw []byte) (quote byte, n int) {
	if len(raw) == 0 {
		return 0, 0
	}
	if len(raw) >= 6 && raw[1] == raw[0] && raw[2] == raw[0] {
		return raw[0], 3
	}
	return raw[0], 1
}

// escapeLength returns how many bytes an escape sequence takes in the file and
// in the value. A backslash at the end of a line swallows the white space that
// follows it.
func escapeLength(raw []byte) (read, wrote int) {
	if len(raw) < 2 {
		return len(raw), 1
	}
	digits := map[byte]int{'x': 2, 'u': 4, 'U': 8}[raw[1]]
	if digits > 0 && len(raw) >= 2+digits {
		r := rune(0)
		for _, c := range raw[2 : 2+digits] {
			r = r<<4 | rune(hexDigit(c))
		}
		return 2 + digits, max(1, utf8.RuneLen(r))
	}
	switch raw[1] {
	case ' ', '\t', '\r', '\n':
		j := 1
		for j < len(raw) && (raw[j] == ' ' || raw[j] == '\t' || raw[j] == '\r' || raw[j] == '\n') {
			j++
		}
		return j, 0
	}
	return 2, 1
}

func hexDigit(c byte) byte {
	switch {
	case c >= 'a':
		return c - 'a' + 10
	case c >= 'A':
		return c - 'A' + 10
	}
	return c - '0'
}
