#!/bin/bash
# `stretch: auto` against every other way to place the same cells, each as a plan of its own: see stretch.py.
# STRETCH_FIRST and STRETCH_COUNT choose other random plans.
set -u
. tests/report.sh

count=${STRETCH_COUNT:-60}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# Debian's.
/usr/bin/python3 -B tests/reference/stretch.py "$SCANLATCH" "$work" "${STRETCH_FIRST:-1}" "$count" >"$work/verdicts" 2>"$work/stderr"
same 'every plan was judged' "0 $count" "$? $(wc -l <"$work/verdicts")"
while IFS= read -r line; do
	case $line in
	'ok '*) pass ;;
	*) fail "$line" ;;
	esac
done <"$work/verdicts"
[ ! -s "$work/stderr" ] || fail 'nothing on standard error' "$(tail -n 3 "$work/stderr")"

# at_least NUMBER PATTERN: so many plans are of that kind, or the random plans test too little.
at_least() {
	local found
	found=$(grep -c "$2" "$work/verdicts")
	holds "at least $1 plans like '$2', found $found" test "$found" -ge "$1"
}
at_least $((count * 3 / 5)) ' elsewhere '
at_least $((count / 15)) ' elsewhere .* by-margin'
at_least $((count / 5)) ' alone '
at_least $((count / 4)) ' studio '
at_least $((count / 4)) ' monitor '
at_least $((count / 4)) ' accuracy '
at_least $((count / 5)) '; 1 cells'
at_least $((count / 5)) '; 2 cells'
at_least $((count / 8)) '; 3 cells'
finish
