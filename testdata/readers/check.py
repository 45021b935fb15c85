"""Open a dataset with pandas, polars, pyarrow and DuckDB and compare what they see.

    python check.py DATASET

Prints "N checks passed" and exits 0, or one line for each failure and exits 1.
The packages, pinned, are in requirements.txt.
"""

import sys
from pathlib import Path

import duckdb
import pandas
import polars
import pyarrow
import pyarrow.parquet as parquet

# The types that columns/ speaks of, as Arrow and DuckDB name them.
ARROW = {"float": "double", "int": "int64", "text": "string", "bool": "bool", "floats": "list<element: double not null>"}
DUCKDB = {"float": "DOUBLE", "int": "BIGINT", "text": "VARCHAR", "bool": "BOOLEAN", "floats": "DOUBLE[]"}

passed = 0
failures = []


def check(what, have, want):
    global passed
    if have == want:
        passed += 1
    else:
        failures.append(f"{what}: {have!r}, expected {want!r}")


def text(metadata, key):
    value = (metadata or {}).get(key)
    return None if value is None else value.decode()


def check_table(db, root, table, reference):
    """Compare the four readers on one table; reference holds its rows of columns/."""
    glob = str(root / table / "*.parquet")
    files = sorted((root / table).glob("*.parquet"))
    arrow = pyarrow.concat_tables([parquet.read_table(f) for f in files])
    frame = pandas.read_parquet(root / table)
    lazy = polars.scan_parquet(glob)
    polar = lazy.collect()
    bare = ", ".join(f"count({row['column_name']})" for row in reference)
    counts = db.execute(f"select count(*), {bare} from '{glob}'").fetchone()  # names without quotes
    described = db.execute(f"describe select * from '{glob}'").fetchall()

    rows = arrow.num_rows
    check(f"{table}: rows in pandas", len(frame), rows)
    check(f"{table}: rows in polars", polar.height, rows)
    check(f"{table}: rows in DuckDB", counts[0], rows)
    check(f"{table}: rows in the footers", sum(parquet.read_metadata(f).num_rows for f in files), rows)

    names = [row["column_name"] for row in reference]
    check(f"{table}: columns in pyarrow", arrow.schema.names, names)
    check(f"{table}: columns in pandas", list(frame.columns), names)
    check(f"{table}: columns in polars", lazy.collect_schema().names(), names)
    check(f"{table}: columns in DuckDB", [d[0] for d in described], names)
    if arrow.schema.names != names:
        return rows

    for i, row in enumerate(reference):
        name = row["column_name"]
        place = f"{table}.{name}"
        field = arrow.schema.field(name)
        check(f"{place}: unit", text(field.metadata, b"unit"), row["unit"])
        check(f"{place}: description", text(field.metadata, b"description"), row["meaning"])
        check(f"{place}: null", text(field.metadata, b"null"), row["null_when"])
        check(f"{place}: Arrow type", str(field.type), ARROW[row["kind"]])
        check(f"{place}: DuckDB type", described[i][1], DUCKDB[row["kind"]])
        nulls = arrow.column(name).null_count
        if row["null_when"] is None:
            check(f"{place}: nulls where there are none", nulls, 0)
        check(f"{place}: nulls in pandas", int(frame[name].isna().sum()), nulls)
        check(f"{place}: nulls in polars", polar[name].null_count(), nulls)
        check(f"{place}: nulls in DuckDB", rows - counts[1 + i], nulls)
        if row["kind"] == "float":
            # pandas turns null into NaN, so a NaN must not come from the file.
            check(f"{place}: NaN", polar[name].is_nan().sum(), 0)
            extremes = db.execute(f"select min({name}), max({name}) from '{glob}'").fetchone()
            check(f"{place}: extremes in polars", (polar[name].min(), polar[name].max()), extremes)
            for end, have in zip(extremes, (frame[name].min(), frame[name].max())):
                check(f"{place}: extremes in pandas", None if pandas.isna(have) else have, end)
    return rows


def main(root):
    db = duckdb.connect()
    # A dataset says itself what it holds.
    columns = parquet.read_table(root / "columns").to_pylist()
    tables = list(dict.fromkeys(row["table_name"] for row in columns))
    check("tables", sorted(tables), sorted(p.name for p in root.iterdir() if p.is_dir()))
    rows = {}
    for table in tables:
        rows[table] = check_table(db, root, table, [row for row in columns if row["table_name"] == table])

    # One glob over all tables at once.
    counted = dict(
        db.execute(
            "select parse_path(filename)[-2], count(*) from read_parquet(?, union_by_name = true, filename = true) group by all",
            [str(root / "*" / "*.parquet")],
        ).fetchall()
    )
    check("rows by one glob", counted, {t: n for t, n in rows.items() if n > 0})
    count = "select count(*) from read_parquet(?, union_by_name = true)"
    check("rows of all tables", db.execute(count, [str(root / "*" / "*.parquet")]).fetchone()[0], sum(rows.values()))
    keys = [row for row in columns if row["key_position"] is not None]
    for table in tables:
        key = [row["column_name"] for row in sorted(keys, key=lambda row: row["key_position"]) if row["table_name"] == table]
        if key:
            distinct = db.execute(f"select count(*) from (select distinct {', '.join(key)} from '{root / table}/*.parquet')").fetchone()[0]
            check(f"{table}: rows told apart by {key}", distinct, rows[table])


if __name__ == "__main__":
    if len(sys.argv) != 2:
        sys.exit("usage: python check.py DATASET")
    main(Path(sys.argv[1]))
    for failure in failures:
        print("FAILED", failure)
    if failures:
        sys.exit(1)
    print(f"{passed} checks passed")
