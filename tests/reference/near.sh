#!/bin/bash
# Random plans, some with hardly a state to spare, built near to their own images, which gives the same bytes, and near to images that are half
# noise: whatever is there to be kept, the oracle of oracle.sh judges the images, and whether a plan had to be refused.
# ORACLE_FIRST and ORACLE_COUNT choose other random plans.
set -u
. tests/report.sh
. tests/reference/judging.bash

first=${ORACLE_FIRST:-1}
count=${ORACLE_COUNT:-150}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans" "$work/old"

holds 'plans are made' "$python" -B tests/reference/generate.py "$work/plans" "$first" "$count"

# spoil SEED IMAGE …: every other byte becomes noise.
spoil() {
	"$python" -B - "$@" <<'PYTHON'
import random, sys
chance = random.Random(sys.argv[1])
for path in sys.argv[2:]:
	data = bytearray(open(path, "rb").read())
	for index in range(len(data)):
		if chance.random() < 0.5:
			data[index] = chance.randrange(256)
	open(path, "wb").write(data)
PYTHON
}

built=0
for plan in "$work"/plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	old=$work/old/$name
	build "$plan" "$old" --format bin --unproven
	status=$?
	if [ $status -lt 2 ]; then
		built=$((built + 1))
		build "$plan" "$work/same" --format bin --unproven --near "$old"
		same "$name: near to itself, status" "$status" $?
		holds "$name: near to itself, the same bytes" diff -r "$old" "$work/same"
		rm -rf "$work/same"
		spoil "$name" "$old"/*.bin
		build "$plan" "$work/$name" --format bin,hex --near "$old"
		status=$?
		[ $status -ne 1 ] || build "$plan" "$work/$name.unproven" --format bin,hex --near "$old" --unproven
	else
		build "$plan" "$work/$name" --format bin,hex
	fi
	printf '%s\t%s\t%s\t%s\t%s\n' "$plan" "$work/$name" "$status" bin,hex 16
done >"$work/builds"
holds "$built of $count plans were built" test "$built" -ge $((count / 3))
judge_all
at_least $((count / 3)) '^ok .*: built$'
finish
