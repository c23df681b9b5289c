"""The random inputs: SplitMix64, and the small language of the `#:` header lines.

A test in any language repeats the inputs bit for bit from the header of a file; README.md has the rules in words.
Everything here is IEEE double arithmetic in the order written; nothing is rounded anywhere else.
"""

import math

MASK = (1 << 64) - 1


class SplitMix64:
    """G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number generators, OOPSLA 2014."""

    def __init__(self, seed):
        self.state = seed & MASK

    def word(self):
        self.state = (self.state + 0x9E3779B97F4A7C15) & MASK
        z = self.state
        z = ((z ^ (z >> 30)) * 0xBF58476D1CE4E5B9) & MASK
        z = ((z ^ (z >> 27)) * 0x94D049BB133111EB) & MASK
        return z ^ (z >> 31)

    def unit(self):
        """In [0, 1): 53 bits, exact."""
        return float(self.word() >> 11) * 2.0**-53

    def uniform(self, lo, hi):
        return lo + (hi - lo) * self.unit()

    def octave(self, lo, hi):
        """(1 + u) 2^k, k one of lo ..= hi: about log-uniform, and no power or logarithm is needed."""
        k = lo + math.floor(self.unit() * float(hi - lo + 1))
        return (1.0 + self.unit()) * math.ldexp(1.0, k)


def draw(stream, rule, block, known):
    """One value by one rule, for example `uniform 335 365`."""
    word, *rest = rule.split()
    if word == "uniform":
        return stream.uniform(float(rest[0]), float(rest[1]))
    if word == "octave":
        return stream.octave(int(rest[0]), int(rest[1]))
    if word == "cycle":  # block b takes value b mod n; nothing is drawn
        return float(rest[block % len(rest)])
    if word == "same":
        return known[rest[0]]
    if word == "minus":
        return -known[rest[0]]
    raise ValueError(f"unknown rule: {rule}")


def blocks(kind):
    """Yields (block number, parameters, rows); a row is a list of inputs, or None where the row carries its own."""
    stream = SplitMix64(kind.seed)
    done = 0
    block = 0
    while done < kind.rows:
        size = min(kind.block, kind.rows - done)
        parameters = {}
        for name, rule in kind.params:
            parameters[name] = draw(stream, rule, block, parameters)
        rows = []
        if block == 0 or kind.points_in_every_block:
            rows += [list(point) for point in kind.points]
        if kind.null:
            rows.append(None)
        assert len(rows) <= size
        while len(rows) < size:
            rows.append([
                draw(stream, rules[block % len(rules)], block, parameters) for _, rules in kind.inputs
            ])
        yield block, parameters, rows
        done += size
        block += 1
