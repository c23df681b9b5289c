"""Small recordings as Parquet and Arrow files, by pyarrow (general-purpose software, Apache Arrow's own).

python3 tests/columns/generate.py        (pip install pyarrow==26.0.1)
Values are invented; what they must convert to stands in tests/columnar.rs.
"""

import datetime
import pathlib

import pyarrow as pa
import pyarrow.parquet as pq

HERE = pathlib.Path(__file__).parent
UTC = datetime.timezone.utc

times = [datetime.datetime(2026, 5, 9, 6, 30, 0, 20_000 * i, tzinfo=UTC) for i in range(5)]
fields = [
    pa.field("time", pa.timestamp("ms", tz="Europe/Berlin")),
    pa.field("CH01", pa.float64(), metadata={"unit": "mV/V"}),
    pa.field("CH02", pa.float32(), metadata={"unit": "ohm"}),
    pa.field("adc", pa.int32()),
    pa.field("note", pa.dictionary(pa.int8(), pa.string())),
    pa.field("step", pa.string()),
    pa.field("ok", pa.bool_()),
]
table = pa.table(
    [
        pa.array(times, type=fields[0].type),
        pa.array([0.1, 1 / 3, None, float("nan"), -2.5e-7], type=pa.float64()),
        pa.array([109.73, 100.1, 0.1, 1e-3, None], type=pa.float32()),
        pa.array([-8388608, 0, 7, None, 8388607], type=pa.int32()),
        pa.array(["a", "b", "a", None, "a"]).dictionary_encode().cast(fields[4].type),
        pa.array(["empty", "lorry, midspan", '"', "", None]),
        pa.array([True, False, None, True, True]),
    ],
    schema=pa.schema(fields),
)
for name, compression in [("snappy", "snappy"), ("zstd", "zstd"), ("gzip", "gzip"), ("plain", "none")]:
    # two rows a group
    pq.write_table(table, HERE / f"{name}.parquet", compression=compression, row_group_size=2)
for name, compression in [("plain", None), ("lz4", "lz4"), ("zstd", "zstd")]:
    options = pa.ipc.IpcWriteOptions(compression=compression)
    with pa.ipc.new_file(HERE / f"{name}.arrow", table.schema, options=options) as writer:
        writer.write_table(table, max_chunksize=2)
with pa.ipc.new_stream(HERE / "stream.arrows", table.schema) as writer:
    writer.write_table(table, max_chunksize=3)
# civil time, without a zone
civil = pa.table({"when": pa.array([t.replace(tzinfo=None) for t in times], type=pa.timestamp("us")), "u": [1.0, 2.0, 3.0, 4.0, 5.0]})
pq.write_table(civil, HERE / "civil.parquet")
# a checksum in every page
checked = pa.table({"R": pa.array([109.73, 110.12, 110.51, 110.9], type=pa.float64())})
pq.write_table(checked, HERE / "checked.parquet", compression="none", use_dictionary=False, write_page_checksum=True)
