// Package configs reads study files: what a study asks for, checked and with
// every default filled in, as a list of points that each can be compiled and
// run.
//
// A study goes through five steps, each in its own file:
//
//	syntax.go         one pass of the TOML parser; every key and element keeps its place
//	check.go          keys and types of values against the tables of keys.go
//	scan.go           [scan] and [[case]] unfolded into combinations of values
//	read*.go point.go one combination read, defaulted, validated and compiled
//	physics.go        the canonical form of its physics; digests and key
//
// The package knows nothing of engines, files of results or statistics. Every
// fault is a [Fault] with line, column and key; a study that is wrong in several
// ways is told so at once ([Faults]).
package configs
