#!/bin/bash
# Machines of two stages before two witnesses from outside: tests/reference/oracle.py, written from the design pages without a
# look at the program, and a board of hand-written parts (line_frame.v, loop.v) that Icarus Verilog (Debian iverilog)
# simulates for two frames with the images in its memories. One plan for each of the 36 combinations of table, counter with
# synchronous and with asynchronous clear, and latched and direct outputs, in both stages; and random plans.
# ORACLE_FIRST and ORACLE_COUNT choose other random plans.
set -u
. tests/report.sh
. tests/reference/judging.bash

first=${ORACLE_FIRST:-1}
count=${ORACLE_COUNT:-150}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans" "$work/random" "$work/boards"
export PYTHONDONTWRITEBYTECODE=1
generator=$PWD/tests/reference/generate_line_frame.py
board=$PWD/tests/reference/line_frame_board.py
models=("$PWD/tests/reference/line_frame.v" "$PWD/tests/reference/loop.v")

# simulated FOLDER [DEFINITION …]: compiles FOLDER/board.v with parameters as defined, and runs it into FOLDER/trace.
simulated() {
	local folder=$1
	shift
	(
		cd "$folder" || return 1
		iverilog -g2005 -Wall -Wno-timescale -s board "${@/#/-Pboard.}" -o board "${models[@]}" board.v && vvp -n board >trace
	)
}

# follows PLAN IMAGES: the plan's board with those images follows the plan.
follows() {
	local folder
	folder=$work/boards/$(basename "$1" .yaml)
	mkdir -p "$folder"
	"$python" "$board" make "$1" "$2" "$folder" && simulated "$folder" && "$python" "$board" compare "$1" "$2" "$folder/trace"
}

# comes_home PLAN IMAGES SKIP VALUE: so does the board that `follows` made, after at most SKIP cells, when the power comes on
# with that value in what feeds back.
comes_home() {
	local folder
	folder=$work/boards/$(basename "$1" .yaml)
	simulated "$folder" "POWER_UP=$4" "SKIP=$3" && "$python" "$board" compare "$1" "$2" "$folder/trace" "$3"
}

# has_binaries IMAGES
has_binaries() {
	local files=("$1"/*.bin)
	[ -e "${files[0]}" ]
}

holds 'combinations are made' "$python" "$generator" combinations "$work/plans"
same 'combinations' 36 "$(find "$work/plans" -name '*.yaml' | wc -l)"
for plan in "$work"/plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	holds "$name: builds" build "$plan" "$work/images-$name" --format bin
	holds "$name: the board follows the plan" follows "$plan" "$work/images-$name"
	read -r skip values < <("$python" "$board" powers "$plan")
	for value in $values; do
		holds "$name: comes home from $value" comes_home "$plan" "$work/images-$name" "$skip" "$value"
	done
done

# The comparison can fail: a wired bit flipped in a row of the frame, in all repeats of the row, is seen.
seen=0
for plan in "$work"/plans/*.yaml; do
	name=$(basename "$plan" .yaml)
	if "$python" "$board" flip "$plan" "$work/images-$name" "$work/flipped-$name"; then
		follows "$plan" "$work/flipped-$name" >"$work/flipped-$name.out" 2>&1
		same "$name: the board with a bit flipped is seen" 1 $?
		holds "$name: its place is told" grep -q "after the frame's first: \|cells, the frame's first after" "$work/flipped-$name.out"
		seen=$((seen + 1))
	fi
done
same 'boards with a bit flipped' 36 "$seen"

holds 'random plans are made' "$python" "$generator" random "$work/random" "$first" "$count"
build_all "$work"/plans/*.yaml "$work"/random/*.yaml
judge_all
at_least $((36 + count / 2)) '^ok .*: built$'
at_least $((count / 40)) '^ok .*: refused'
at_least $((count / 40)) '^ok .*: failed as it must'
damage_all "$first" "$count"

# Random plans on a board, but those whose stretch pin comes late.
simulations=0
for plan in "$work"/random/*.yaml; do
	name=$(basename "$plan" .yaml)
	if has_binaries "$work/$name" && "$python" "$board" wirable "$plan"; then
		holds "$name: the board follows the plan" follows "$plan" "$work/$name"
		simulations=$((simulations + 1))
	fi
done
holds "at least $((count / 3)) random plans on a board, found $simulations" test "$simulations" -ge $((count / 3))

finish
