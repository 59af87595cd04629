// Package archive keeps the results directory of a study.
//
//	DIR/study.toml                       the study as given
//	DIR/manifest.json                    the resolved study: points with their facts
//	DIR/parts/TABLE/KEY-FIRST.parquet    rows of a part, one file per table
//	DIR/receipts/KEY-FIRST.json          what a finished part consists of
//	DIR/journal/KEY-UNIT.unit            finished units of unfinished parts
//	DIR/claims/NAME.json                 who works on what
//	DIR/fits/NAME.parquet                what was inferred
//
// KEY is the key of a point, FIRST the first unit of a part. A part is the
// units FIRST, FIRST+1, ... FIRST+extent-1 of a point, as far as they are below
// the point's count; its extent depends on the point alone, never on count.
package archive
