// Package record keeps a dataset: a directory of Parquet tables that any
// notebook opens, written so that it is either whole or not there.
//
// The usual route is to declare the tables, fill one [Rows] a table, and
//
//	w, err := record.Create(dir, tables, record.CreateOptions{})
//	defer w.Abort()               // no effect after Commit
//	err = w.Write(rows, meta)     // for every table, even without a row
//	err = w.Commit()              // the dataset appears, all of it at once
//
// and, to read, [Open] and [Dataset.Read]; [Inspect] counts without reading.
//
// On disk:
//
//	dir/<table>/part-00000.parquet   one file for each Write
//	dir/columns/part-00000.parquet   every column: kind, unit, meaning, when null
//
// Every column is optional in the Parquet schema and what does not apply is
// null, never zero and never NaN. Floats are BYTE_STREAM_SPLIT and text is
// dictionary encoded, all under zstd. A footer holds the caller's key/value
// pairs and ARROW:schema, whose fields carry "unit", "description" and, where
// a column may be null, "null". The same rows and pairs give the same bytes.
//
// # Durability
//
// A dataset is built in a hidden directory beside its final place,
// ".<base>.partial-<host>-<pid>-<random>"; every file is synced before it gets
// its name, and Commit ends in one rename. A process that dies before leaves
// only that hidden directory, which the next [Create] on the same host removes
// once the process is gone.
//
// Replacing takes two renames: the old dataset becomes
// ".<base>.replaced-<host>-<pid>-<random>", the new one takes its place, and
// then the old one is removed. A kill between the two leaves the old dataset
// whole under that hidden name. [Open] and [Inspect] then say so, the next
// [Create] on the same host moves it back, and so does "mv" by hand.
//
// The package knows no physics and imports no other package of the module. It
// appends to no finished dataset and never changes one in place.
package record
