#!/bin/bash
# A flipped bit in any used row makes prove fail: every bit of small machines, a sample of a large one.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

python3 tests/command/flip_bits.py "$SCANLATCH" tests/good plans "$work" >"$work/report" 2>&1
status=$?
sed '$d' "$work/report"
read -r cases_passed cases_failed <<<"$(tail -n 1 "$work/report" | grep -Ex '[0-9]+ [0-9]+')"
cases_passed=${cases_passed:-0}
cases_failed=${cases_failed:-0}
holds 'the flips were all tried' test "$status" -eq 0 -a "$cases_passed" -gt 1000
finish
