#!/bin/sh
# The whole way once: read the invented sheets, show what was found, run searches.
# Called by `make demo`; leaves demo/catalog.sqlite and demo/page.html behind.
set -eu
cd "$(dirname "$0")/.."
mkdir -p demo
rm -f demo/catalog.sqlite demo/page.html
MOTORFOLIO_CATALOG=demo/catalog.sqlite
export MOTORFOLIO_CATALOG

run() {
    printf '\n$ %s\n' "$*"
    "$@"
}

run motorfolio import \
    sample_entries/brindlewick_10.csv sample_entries/brindlewick_22.csv \
    sample_entries/quasselbach.csv sample_entries/gopher_notch.tsv \
    sample_entries/grisoulette.csv sample_entries/wobbleton.csv \
    sample_entries/tanuki_hollow.html
run motorfolio gears sample_entries/gears.csv
run motorfolio check || [ $? -eq 1 ] # 1: errors were found, as planted
run motorfolio search --torque "50 mN·m" --speed "3000 rpm" --supply "24 V" --current "10 A" --limit 5
for machine in lift_axis rotary_table hand_tool; do
    run motorfolio search --requirement "sample_entries/machines/$machine.toml"
done
run motorfolio page --requirement sample_entries/machines/lift_axis.toml --output demo/page.html

printf '\nThe catalog: %s (any SQLite browser opens it; the view "motors" is the wide table).\n' \
    "demo/catalog.sqlite"
