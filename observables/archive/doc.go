// Package archive keeps the results directory of a study.
//
//	DIR/study.toml                       the study as given
//	DIR/manifest.json                    the resolved study: points with their facts
//	DIR/parts/TABLE/KEY-FIRST.parquet    rows of a part, one file per table that has any
//	DIR/receipts/KEY-FIRST.json          what a finished part consists of
//	DIR/journal/KEY-UNIT.unit            finished units of unfinished parts
//	DIR/claims/NAME.json                 who works on what
//	DIR/fits/NAME.parquet                what was inferred
//
// KEY is the key of a point, FIRST the first unit of a part. A part is the units
// FIRST, FIRST+1, ... FIRST+extent-1 of a point, as far as they are below the
// point's count. Its extent depends on the point alone, never on count, and is
// kept in the manifest.
//
// # Whole or absent
//
// Every file except a claim is written under a temporary name, flushed, and
// renamed (see package durable), so that it is complete or absent whenever the
// program or the machine stops. Temporary files that a crash left are removed
// by Prepare once they are an hour old. A part is there when its receipt is:
// the receipt is written last and holds the digests of the files.
//
// # When a count grows
//
// The last part of a point has fewer units than its extent if the count ends
// within it. When the count grows, that part is completed: its units are read
// back from its files, the new ones are run, and the files are replaced by
// ones with all units, the same bytes as if the larger count had been there
// from the start. A part is therefore complete when it has all its units below
// the count. The replacement goes in four steps, each atomic:
//
//  1. the new files are written and flushed, under temporary names;
//  2. the receipt is replaced by the old one with the new one as its Next;
//  3. the new files are renamed over the old ones, one by one;
//  4. the receipt is replaced by the new one.
//
// Between 2 and 4 each file may be the old or the new one. Either is accepted,
// and since a new file has the rows of the old one, the old units can be read
// at any moment, by this process or another.
//
// # Many processes
//
// Any number of processes, on any hosts that share the file system, may work on
// one directory: see Claim. Doing a part twice is harmless, since the same
// units give the same bytes.
package archive
