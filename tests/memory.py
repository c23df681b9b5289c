"""Peak memory of a conversion does not grow with the recording: 5 and 20 million rows.

cargo build --release --features cli && python3 tests/memory.py        (Linux; 1.2 GB of disk; some minutes)
Fails where the longer one takes more than a tenth and 4 MB more.
"""

import os
import pathlib
import subprocess
import tempfile

ROOT = pathlib.Path(__file__).parents[1]
SHEET = """[channel.g]
column = "CH01"
reads = "mV/V"
output = "microstrain"
gauge = { resistance = "350 ohm", gauge_factor = 2.08 }
bridge = { arms = ["e", "0", "0", "0"] }
thermal_output = { coefficients = [-24.0, 1.90, -0.0400], in = "degC" }
temperature = { channel = "deck", longest_gap = "60 s", between = "line" }
zero = { rows = 200 }
[channel.deck]
column = "R"
reads = "ohm"
output = "degC"
platinum = { standard = "IEC 60751", r0 = "100 ohm" }
leads = { wires = 4 }
"""


def peak(command):
    """Peak resident memory of a command, bytes."""
    process = subprocess.Popen(command)
    _, status, usage = os.wait4(process.pid, 0)
    assert status == 0, command
    return 1024 * usage.ru_maxrss


with tempfile.TemporaryDirectory(dir=ROOT / "target") as folder:
    folder = pathlib.Path(folder)
    (folder / "s.toml").write_text(SHEET)
    peaks = {}
    for millions in (5, 20):
        with open(folder / "r.csv", "w") as out:
            out.write("time,CH01,R\n")
            for block in range(0, 1_000_000 * millions, 1000):
                # a temperature every thousandth row
                rows = [f"{0.01 * (block + i):.2f},{(block + 7 * i) % 997 * 0.001:.3f},\n" for i in range(1000)]
                rows[0] = rows[0][:-1] + f"{108 + block % 7 * 0.1:.2f}\n"
                out.writelines(rows)
        command = [ROOT / "target/release/ohmwright", "convert", folder / "s.toml", folder / "r.csv", "-q", "-o", folder / "out.csv"]
        peaks[millions] = peak(command)
        lines = int(subprocess.run(["wc", "-l", folder / "out.csv"], capture_output=True, check=True).stdout.split()[0])
        assert lines == 1_000_000 * millions + 1, lines
        print(f"{millions} million rows: {peaks[millions] / 1e6:.1f} MB")
    assert peaks[20] < 1.1 * peaks[5] + 4e6, "memory grows with the recording"
