#!/bin/bash
# Instructions of one conversion through the C entry, by callgrind: the difference of two runs over the difference of their
# lengths. Needs cargo, gcc and valgrind.
set -euo pipefail
cd "$(dirname "$0")/../.."
target=target/capi
mkdir -p $target
cargo rustc --quiet --profile embedded --lib --target-dir $target --crate-type staticlib --features capi -- --cfg freestanding
cargo run --quiet --features cli -- image tests/capi/count.toml -o $target/count.owi 2>/dev/null
gcc -std=c99 -O2 -Isrc/capi tests/capi/count.c $target/embedded/libohmwright.a -Wl,--gc-sections -o $target/count
run() {
    valgrind --tool=callgrind --callgrind-out-file=/dev/null $target/count $target/count.owi "$@" 2>&1 |
        sed -n 's/.*Collected : //p'
}
while read -r name index reading celsius; do
    few=$(run "$index" 1000 "$reading" "$celsius")
    many=$(run "$index" 11000 "$reading" "$celsius")
    echo "$name $(((many - few) / 10000))"
done <<CASES
quarter 0 0.8 0
thermal 1 0.8 35
platinum 2 120 0
platinum_below_zero 2 80 0
beta 3 8000 0
type_k 4 4.1 21
CASES
