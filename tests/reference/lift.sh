#!/bin/bash
# Round trips of `lift`: the example plans and a few hundred random ones are built, lifted from their images against their boards and
# built again. What the timelines are is read by tests/reference/oracle_plan.py, which was written from the design pages without a
# look at the program. ORACLE_FIRST and ORACLE_COUNT choose other random plans.
set -u
. tests/report.sh
. tests/reference/judging.bash

first=${ORACLE_FIRST:-1}
count=${ORACLE_COUNT:-300}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans" "$work/trips"
export SCANLATCH PYTHONDONTWRITEBYTECODE=1

holds 'plans are made' "$python" tests/reference/generate_lift.py "$work/plans" "$first" "$count"
mapfile -t examples < <(grep -L "^scanlatch-set" plans/*.yaml)
"$python" tests/reference/lift_trip.py "$work/trips" "${examples[@]}" "$work"/plans/*.yaml >"$work/verdicts" || fail 'the trips end'
while IFS= read -r line; do
	case $line in
	'ok '* | 'damaged '* | 'refused '*) pass ;;
	'skipped '*) ;;
	*) fail "$line" ;;
	esac
done <"$work/verdicts"
same 'every example makes the trip' "${#examples[@]}" "$(grep -c '^ok plans/' "$work/verdicts")"
at_least $((count / 2)) '^ok '
at_least $((count / 6)) '^ok .* held$'
at_least $((count / 12)) '^ok .*/lines-'
at_least $((count / 150)) '^refused .*/tight-.*: lift-raster$'
same 'lines that begin with a pulse are a raster' '' "$(grep '^refused .*/\(loop\|lines\)-' "$work/verdicts")"

finish
