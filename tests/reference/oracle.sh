#!/bin/bash
# The example plans and a few hundred random ones, built by the program and judged by tests/reference/oracle.py, which was
# written from the design pages without a look at the program; then the same images with one bit flipped: `prove` and the
# oracle must agree.
# ORACLE_FIRST and ORACLE_COUNT choose other random plans.
set -u
. tests/report.sh
. tests/reference/judging.bash

first=${ORACLE_FIRST:-1}
count=${ORACLE_COUNT:-300}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans"

holds 'plans are made' "$python" -B tests/reference/generate.py "$work/plans" "$first" "$count"
placed=$(grep -l standard "$work"/plans/*.yaml | while IFS= read -r plan; do
	"$SCANLATCH" check "$plan" 2>"$work/stderr"
done | grep -c '^stretch: auto placed')
holds "at least $((count / 20)) plans in which limits place stretched cells, found $placed" test "$placed" -ge $((count / 20))
mapfile -t examples < <(grep -L "^scanlatch-set" plans/*.yaml)
build_all "${examples[@]}" "$work"/plans/*.yaml
judge_all
at_least $((count / 3)) '^ok .*: built$'
at_least $((count / 20)) '^ok .*: refused'
at_least $((count / 20)) '^ok .*: failed as it must'
damage_all "$first" "$count"

finish
