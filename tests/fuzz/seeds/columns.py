"""Small files of columns of many types and encodings for the fuzzer, by pyarrow (general-purpose software, Apache Arrow's own).

python3 tests/fuzz/seeds/columns.py        (pip install pyarrow==26.0.1)
"""

import datetime
import decimal
import pathlib

import pyarrow as pa
import pyarrow.parquet as pq

HERE = pathlib.Path(__file__).parent / "columns"
HERE.mkdir(exist_ok=True)

numbers = pa.table({"a": pa.array([1.5, None, -2.0]), "n": pa.array([1, 2, None], type=pa.int16())})
texts = pa.table(
    {
        "s": pa.array(["a", None, "lorry, midspan"]),
        "l": pa.array(["b", "", "ccc"], type=pa.large_string()),
        "d": pa.array(["x", "y", "x"]).dictionary_encode(),
    }
)
views = pa.table({"v": pa.array(["short", "a text of more than twelve bytes", None], type=pa.string_view())})
others = pa.table(
    {
        "m": pa.array([decimal.Decimal("1.25"), None, decimal.Decimal("-3.50")]),
        "w": pa.array([[1], [], None], type=pa.list_(pa.int8())),
        "k": pa.array([{"x": 1}, None, {"x": 2}]),
        "z": pa.nulls(3),
        "o": pa.array([datetime.date(2026, 5, 9), None, datetime.date(1969, 12, 31)]),
    }
)
runs = pa.table({"r": pa.RunEndEncodedArray.from_arrays(pa.array([2, 3], type=pa.int32()), pa.array([1.5, 2.5]))})
same = pa.table({"c": pa.array([0.25] * 3000)})

for name, table in [("numbers", numbers), ("texts", texts), ("others", others)]:
    pq.write_table(table, HERE / f"{name}.parquet", store_schema=False, write_statistics=False)
pq.write_table(texts, HERE / "schema.parquet", compression="none")
pq.write_table(numbers, HERE / "second.parquet", data_page_version="2.0", compression="zstd", write_page_index=True)
pq.write_table(
    numbers, HERE / "split.parquet", use_dictionary=False, column_encoding={"a": "BYTE_STREAM_SPLIT", "n": "DELTA_BINARY_PACKED"}
)
pq.write_table(
    texts.drop_columns(["d"]),
    HERE / "delta.parquet",
    use_dictionary=False,
    column_encoding={"s": "DELTA_LENGTH_BYTE_ARRAY", "l": "DELTA_BYTE_ARRAY"},
)
pq.write_table(same, HERE / "same.parquet", compression="gzip")
for name, table in [("numbers", numbers), ("texts", texts), ("views", views), ("others", others), ("runs", runs), ("same", same)]:
    options = pa.ipc.IpcWriteOptions(compression="zstd" if name == "same" else None)
    with pa.ipc.new_stream(HERE / f"{name}.arrows", table.schema, options=options) as writer:
        writer.write_table(table)
for name, table, codec in [("numbers", numbers, None), ("same", same, "lz4"), ("texts", texts, "zstd")]:
    with pa.ipc.new_file(HERE / f"{name}.arrow", table.schema, options=pa.ipc.IpcWriteOptions(compression=codec)) as writer:
        writer.write_table(table)
