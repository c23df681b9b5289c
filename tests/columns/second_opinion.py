"""What ohmwright writes as Parquet and Arrow, read by pyarrow: values, types, units, words.

cargo build --features cli,parquet && python3 tests/columns/second_opinion.py        (pip install pyarrow)
"""

import pathlib
import subprocess
import tempfile

import pyarrow as pa
import pyarrow.parquet as pq

ROOT = pathlib.Path(__file__).parents[2]
SHEET = """title = "girder"
[channel.a]
column = "CH01"
reads = "mV/V"
[channel.b]
column = "CH02"
reads = "ohm"
"""

with tempfile.TemporaryDirectory() as folder:
    folder = pathlib.Path(folder)
    (folder / "s.toml").write_text(SHEET)
    for name, extra in [("o.parquet", []), ("o.arrow", []), ("single.parquet", ["--single"])]:
        out = folder / name
        recording = ROOT / "tests/columns/plain.parquet"
        command = [ROOT / "target/debug/ohmwright", "convert", folder / "s.toml", recording, "-o", out, "-q", *extra]
        subprocess.run(command, check=True)
        table = pq.read_table(out) if name.endswith("parquet") else pa.ipc.open_file(out).read_all()
        schema = table.schema
        number = pa.float32() if extra else pa.float64()
        assert schema.names == ["time", "moment", "a (mV/V)", "b (ohm)", "flags"], schema.names
        assert schema.field("moment").type == pa.timestamp("us", tz="UTC")
        assert schema.field("a (mV/V)").type == number
        assert schema.field("a (mV/V)").metadata[b"unit"] == b"mV/V"
        assert b"reads: column 'CH01'" in schema.field("a (mV/V)").metadata[b"chain"]
        assert schema.metadata[b"sheet title"] == b"girder" and len(schema.metadata[b"sheet sha256"]) == 64
        assert b"out-of-range" in schema.metadata[b"flags"]
        a = table["a (mV/V)"].to_pylist()
        assert a[2] is None and a[3] is None and abs(a[1] - 1 / 3) < (2e-8 if extra else 1e-17)
        assert table["moment"].to_pylist()[1].microsecond == 20_000
        assert table["flags"].to_pylist() == ["", "", "a:missing", "a:missing", "b:missing"]
        print(name, "as it should be")
