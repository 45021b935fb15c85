package record

import "strings"

// sqlWords are the words that DuckDB 2.0 (duckdb_keywords(), categories
// "reserved" and "type_function") or PostgreSQL 17 (manual, appendix C,
// "reserved" with or without "can be function or type") do not take as a bare
// column name.
const sqlWords = ` all analyse analyze and anti any array as asc asof asymmetric at authorization
 binary both by case cast check collate collation column columns concurrently constraint create cross
 current_catalog current_date current_role current_schema current_time current_timestamp current_user
 default deferrable desc describe distinct do else end except false fetch for foreign freeze from full
 generated glob grant group having ilike in initially inner intersect into is isnull join lambda lateral
 leading left like limit localtime localtimestamp map natural not notnull null offset on only or order
 outer overlaps pivot pivot_longer pivot_wider placing positional primary qualify references returning
 right select semi session_user show similar some struct summarize symmetric system_user table
 tablesample then to trailing true try_cast tuple union unique unpack unpivot user using variadic
 verbose when where window with `

// sqlReserved reports whether a lower-case name would need quotes in SQL.
func sqlReserved(name string) bool {
	return strings.Contains(strings.ReplaceAll(sqlWords, "\n", ""), " "+name+" ")
}
