#!/usr/bin/env python3
"""Makes the hangers of the demo: six gauges that differ in lead length, recorded in two files. Invented throughout.

Strains are those of a lorry that stands on the deck between two hours without load, during which the zeros creep. Readings
come from the closed form of a quarter bridge on three wires; clocks are those of Berlin.
"""
import pathlib
import random

HERE = pathlib.Path(__file__).parent
METRES = [4.2, 6.8, 9.4, 12.1, 14.7, 17.3]


def reading(e, metres, zero):
    """mV/V of a strain in microstrain: y = R x/(2 (2 (R + r) + R x)), copper of 1/58 ohm mm2/m, 0.25 mm2."""
    x = 2.04 * e * 1e-6
    leads = metres / 58 / 0.25
    return 1e3 * 350 * x / (2 * (2 * (350 + leads) + 350 * x)) + zero


random.seed(7)
zeros = [round(random.uniform(-0.4, 0.4), 4) for _ in METRES]
with open(HERE / "hangers_list.csv", "w") as out:
    out.write("name;like;column;leads.length (m)\n")
    for i, metres in enumerate(METRES):
        out.write(f"h{i + 1};hanger;H{i + 1};{str(metres).replace('.', ',')}\n")
# minutes since 08:00, and share of the lorry
steps = [(0, 0), (1, 0), (2, 0), (20, 0.6), (40, 1), (60, 1), (80, 1), (100, 0.5), (118, 0), (119, 0), (120, 0)]
for name, chosen in [("hangers_morning.csv", steps[:5]), ("hangers_noon.csv", steps[5:])]:
    with open(HERE / name, "w") as out:
        out.write("date;clock;" + ";".join(f"H{i + 1}" for i in range(6)) + "\n;;" + ";".join(["mV/V"] * 6) + "\n")
        for minute, share in chosen:
            cells = []
            for i, metres in enumerate(METRES):
                e = share * (40 + 35 * i) + 0.05 * minute + random.uniform(-0.3, 0.3)
                cells.append(f"{reading(e, metres, zeros[i]):.5f}".replace(".", ","))
            out.write(f"12.03.2026;{8 + minute // 60:02}:{minute % 60:02}:00;" + ";".join(cells) + "\n")
