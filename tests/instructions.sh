#!/bin/bash
# Instructions of `convert --uncertainty` against those of `convert` alone, over the demo: must be less than three times.
# Needs cargo and valgrind. Prints both counts and their ratio; exits with 1 where the ratio is 3 or more.
set -euo pipefail
cd "$(dirname "$0")/.."
cargo build --quiet --release --features cli
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
count() {
    valgrind --tool=callgrind --callgrind-out-file="$work/profile" target/release/ohmwright convert \
        data/demo/footbridge.toml data/demo/footbridge.csv -o "$work/out.csv" --quiet "$@" 2>&1 |
        sed -n 's/.*Collected : //p'
}
plain=$(count)
all=$(count --uncertainty)
awk -v plain="$plain" -v all="$all" 'BEGIN {
    printf "convert %d, with uncertainty %d: %.2f times\n", plain, all, all / plain
    exit all >= 3 * plain
}'
