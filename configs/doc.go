// Package configs reads study files: what a study asks for, checked and with
// every default filled in, as a list of points that each can be compiled and
// run.
//
// A study goes through five steps, each in its own file:
//
//	syntax.go    one pass of the TOML parser; every key and element keeps its place
//	check.go     keys and kinds of values against the tables of schema.go
//	scan.go      [scan] and [[case]] unfolded into combinations of values
//	point*.go    one combination read, defaulted and validated: a Point
//	physics.go   the canonical form of its physics, digests and key
//
// The package knows nothing of engines, files of results or statistics. Every
// fault is a [Fault] with line, column and key; a study that is wrong in several
// ways is told so at once ([Faults]).
package configs
