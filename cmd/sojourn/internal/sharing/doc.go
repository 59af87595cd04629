// Package sharing decides who works on what: it cuts a study into parts, lets
// any number of processes claim them, and runs the units of claimed parts on
// the workers of this one. It knows no physics: a unit is run by a function
// that is passed in.
//
// # Course of a Job
//
//  1. The points are cut into parts (Parts), which depend on the study alone.
//     Costly units come first, so that the last ones to end are short.
//  2. A worker takes a unit of a part that this process holds. When none is
//     left it claims the next part that is neither finished nor held by another
//     process. So the workers of a process share the units of one part, and
//     processes share parts.
//  3. A finished unit goes to the journal. The worker that finishes the last
//     unit of a part merges the part from the journal into its tables, and
//     gives up the claim.
//  4. Parts that others held are tried again for as long as anything was done
//     in between: their holder may have died.
//
// A process that is stopped or killed loses the units that were running. What
// is in the tables does not depend on who ran what, in which order, or how
// often it was stopped.
package sharing
