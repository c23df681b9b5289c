#!/bin/bash
# Instructions of one conversion, by callgrind, counted inside the entry alone: through ow_convert, and through
# ow_convert_slice per row, which is the kernel. The difference of two runs over the difference of their lengths. Writes the
# table in DEVELOPERS.md again, unless `--print` stands behind. Needs cargo, gcc and valgrind.
set -euo pipefail
cd "$(dirname "$0")/../.."
target=target/capi
mkdir -p $target
cargo rustc --quiet --profile embedded --lib --target-dir $target --crate-type staticlib --features capi -- --cfg freestanding
cargo run --quiet --features cli -- image tests/capi/count.toml -o $target/count.owi 2>/dev/null
gcc -std=c99 -O2 -Isrc/capi tests/capi/count.c $target/embedded/libohmwright.a -Wl,--gc-sections -o $target/count
run() {
    local entry=$1
    shift
    valgrind --tool=callgrind --callgrind-out-file=/dev/null --toggle-collect="$entry" $target/count $target/count.owi "$@" 2>&1 |
        sed -n 's/.*Collected : //p'
}
table=$target/instructions.md
{
    echo "| case | kernel, a row of a slice | allowed | C entry, one reading | allowed |"
    echo "|---|---|---|---|---|"
    while IFS=';' read -r name index reading celsius kernel entry; do
        few=$(run ow_convert "$index" 1000 "$reading" "$celsius")
        many=$(run ow_convert "$index" 3000 "$reading" "$celsius")
        one=$(((many - few) / 2000))
        few=$(run ow_convert_slice "$index" 1024 "$reading" "$celsius" slice)
        many=$(run ow_convert_slice "$index" 4096 "$reading" "$celsius" slice)
        row=$(((many - few) / 3072))
        echo "| $name | $row | ${kernel:-} | $one | ${entry:-} |"
    done <<CASES
quarter bridge on three wires;0;0.8;0;20;45
the same with thermal output, a cubic;1;0.8;35;20;45
the same with a slope of the gauge factor;7;0.8;35;;
two gauges and two across (quadratic);6;0.8;0;;
platinum, above 0 °C;2;120;0;60;85
platinum, below 0 °C;2;80;0;60;85
thermistor by its beta;3;8000;0;90;115
thermistor, Steinhart-Hart;8;8000;0;;
type K with a junction in a column;4;4.1;21;;
CASES
    # a thermistor by its table: the one function that it is, called
    for numbers in float fixed; do
        cargo run --quiet --features cli -- curve tests/capi/count.toml divider --within "0.01 K" --as c --numbers $numbers \
            --name by_table -o $target/by_table.c 2>/dev/null
        kind=$([ $numbers = float ] && echo float || echo int32_t)
        point=$([ $numbers = float ] && echo 0 || sed -n 's/.*x \/ 2^\([0-9]*\).*/\1/p' $target/by_table.c | head -n 1)
        gcc -std=c99 -O2 -DKIND="$kind" -DPOINT="$point" tests/capi/count_table.c $target/by_table.c -o $target/count_table
        counted() {
            valgrind --tool=callgrind --callgrind-out-file=/dev/null --toggle-collect=by_table $target/count_table "$1" 2>&1 |
                sed -n 's/.*Collected : //p'
        }
        few=$(counted 1024)
        many=$(counted 4096)
        one=$(((many - few) / 3072))
        echo "| thermistor in a divider by its table, $numbers | $one | 40 | $one | 65 |"
    done
} > $table
cat $table
[ "${1:-}" = --print ] || awk -v table=$table '
    /<!-- instructions: begin -->/ { print; while ((getline line < table) > 0) print line; skip = 1 }
    /<!-- instructions: end -->/ { skip = 0 }
    !skip' DEVELOPERS.md > $target/developers.md && { [ "${1:-}" = --print ] || cp $target/developers.md DEVELOPERS.md; }
