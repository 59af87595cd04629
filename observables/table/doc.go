// Package table writes and reads flat tables as Parquet files, and knows
// nothing of what stands in them.
//
// A Schema is data: columns with their types, units and meanings, and further
// key-value pairs. A Writer takes a schema and blocks of rows, column by
// column; a Reader gives back whole columns by name.
//
//	type         Go slice    in the file
//	Double       []float64   DOUBLE, byte-stream-split
//	Int64        []int64     INT64, delta
//	Int32        []int32     INT32, delta
//	String       []string    BYTE_ARRAY (UTF-8), dictionary
//	Int32List    [][]int32   LIST of INT32
//
// All pages are compressed with zstd. Columns stand in the order of the schema.
// A column is required unless it is declared optional; a missing value is then
// null. No value is ever NaN. The same schema and blocks give the same bytes.
//
// A file appears under its name only when it is complete and on the disk.
// Readers go by name: unknown columns are ignored, a column that a file lacks
// is reported as absent, one of another type is an error. A file that was cut
// short gives ErrIncomplete, one with damage that can be seen ErrCorrupted;
// damage inside a page is seen by its checksum, other damage only by a digest
// of the file that was kept elsewhere.
package table
