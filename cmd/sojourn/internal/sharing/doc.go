// Package sharing decides who works on what: it cuts a study into parts, lets
// any number of processes claim them, and runs the units of claimed parts on
// the workers of this one. It knows no physics: a unit is run by a function
// that is passed in.
package sharing
