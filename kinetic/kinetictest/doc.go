// Package kinetictest holds what tests of trajectories share: small thermal
// generators with known answers, random commuting ones, a slow engine that is
// obviously right, checks of a compiled generator against an enumeration, and
// the suite that every engine has to pass.
package kinetictest
