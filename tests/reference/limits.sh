#!/bin/bash
# What the program measures of a signal, before two witnesses from outside: figures that are published of whole signals
# (limits_published.py names the documents), and a second measurement in Python (limits_measure.py), written from the definitions
# of the items alone, of random boards with single edits (limits_perturbed.py). Every item's lowest and highest value must be the
# same fraction, and every limit of src/catalogue/standards.yaml kept or missed as a second reading of it has it.
# LIMITS_FIRST and LIMITS_COUNT choose other random boards.
set -u
. tests/report.sh

first=${LIMITS_FIRST:-1}
count=${LIMITS_COUNT:-250}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
# Debian's, for its python3-yaml.
python=/usr/bin/python3
export PYTHONDONTWRITEBYTECODE=1

# verdicts AT_LEAST SCRIPT ARGUMENT …: counts what the script says; fewer verdicts than that are a failure of their own. What a
# definition leaves open, and limits that are not judged because numbers do not fit, count neither way, if they are few.
verdicts() {
	local at_least=$1 script=$2 line
	shift 2
	holds "$script runs to its end" said "$script" "$@"
	while IFS= read -r line; do
		case $line in
		'ok '*) pass ;;
		'open '*) ;;
		*) fail "${line#FAILED }" ;;
		esac
	done <"$work/said"
	holds "$script: at least $at_least verdicts" test "$(grep -c '^ok ' "$work/said")" -ge "$at_least"
	holds "$script: one in 50 is open at most" test "$((50 * $(grep -c '^open ' "$work/said")))" -le "$(grep -c '^ok ' "$work/said")"
}

said() {
	local script=$1
	shift
	"$python" "tests/reference/$script" "$@" >"$work/said"
}

verdicts 4000 limits_published.py "$work"
verdicts $((80 * count)) limits_perturbed.py "$work" "$first" "$count"

# The comparison can fail, on both sides.
said limits_published.py "$work" wrong
for item in 'horizontal sync width' breezeway 'back porch'; do
	holds "a wider sync is measured: $item" grep -q "^FAILED wrong: $item: " "$work/said"
	holds "a wider sync is measured by the other measurement: $item" grep -q "^FAILED wrong: $item by the other " "$work/said"
done
same 'a wider sync is measured in nothing else' 6 "$(grep -c '^FAILED' "$work/said")"

finish
