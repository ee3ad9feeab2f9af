#!/bin/bash
# Images in a machine from outside: Icarus Verilog (Debian iverilog) simulates a board of hand-written parts (loop.v)
# with the images in its memories, for a frame and 50 cells. Pins, held states and the beginning of each cell are
# compared cell by cell with the timeline, which a reader of its own (oracle_plan.py) lays out from the plan's text.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
python=/usr/bin/python3
export PYTHONDONTWRITEBYTECODE=1
board=$PWD/tests/reference/loop_board.py
model=$PWD/tests/reference/loop.v

# simulated FOLDER [DEFINITION …]: compiles FOLDER/board.v with parameters as defined, and runs it into FOLDER/trace.
simulated() {
	local folder=$1
	shift
	(
		cd "$folder" || return 1
		iverilog -g2005 -Wall -s board "${@/#/-Pboard.}" -o board "$model" board.v && vvp -n board >trace
	)
}

# built PLAN: builds it and puts its images on a board, both in $work/NAME.
built() {
	local out
	out=$work/$(basename "$1" .yaml)
	mkdir -p "$out" && "$SCANLATCH" build "$1" -o "$out" --format bin && "$python" "$board" make "$1" "$out" "$out"
}

# follows PLAN [DEFINITION …]: the board of a plan that was built follows the plan.
follows() {
	local plan=$1 name
	name=$(basename "$plan" .yaml)
	shift
	holds "$name${*:+ $*}: simulates" simulated "$work/$name" "$@"
	holds "$name${*:+ $*}: follows the plan" "$python" "$board" compare "$plan" "$work/$name/trace"
}

for name in tide-board-60 tide-board-50 ferry-queue pier-clock lock-gate-sign; do
	holds "$name: builds" built "plans/$name.yaml"
	follows "plans/$name.yaml"
done
same 'tide-board-60: cells and pins' '26512 cells, 26511 of them with 5 pins compared' \
	"$("$python" "$board" compare plans/tide-board-60.yaml "$work/tide-board-60/trace")"
# 912 ticks a line: all of 262 stretched cells have been taken from the pin.
same 'tide-board-60: the second frame begins after 262 lines of 912 ticks' "$((262 * 912)) 8000" \
	"$(sed -n '26463s/ [^ ]*$//p' "$work/tide-board-60/trace")"

# What the plans of the tree leave out. plan NAME [KEYS OF SYNC]: lines and frame are the same for all; the rest is
# read.
plan() {
	cat >"$work/$1.yaml"
	cat >>"$work/$1.yaml" <<END_OF_PLAN
lines:
  picture:
    regions:
      - { region: front porch, cells: 3, assert: [blank] }
      - { region: sync, cells: 5, assert: [blank, sync]${2:+, $2} }
      - { region: back porch, cells: 4, assert: [blank] }
      - { region: picture, cells: 41, assert: [load] }
  vertical:
    regions:
      - { region: broad sync, cells: 46, assert: [blank, sync]${2:+, $2} }
      - { region: serration, cells: 7, assert: [blank] }
frame:
  - { repeat: 60, line: picture }
  - { repeat: 3, line: vertical }
END_OF_PLAN
}

# Unlatched outputs, counted, and cleared at once in the row past the last.
plan outlook <<PLAN
scanlatch: 1
name: outlook
clock: { master: 8 MHz, cell: 8 ticks }
signals:
  sync:  { role: composite sync, active: low }
  blank: { role: blanking, active: high }
  load:  { role: plain, active: low, lead: -2 cells }
machine: { form: loop, state: 12 bits, advance: count, clear: async, outputs: direct }
chips: { part: 28C64 }
PLAN

# Unlatched outputs, a table, and two signals from a decoder.
plan buoy <<PLAN
scanlatch: 1
name: buoy
clock: { master: 8 MHz, cell: 8 ticks }
signals:
  sync:  { role: composite sync, active: high, from: { field: code, codes: [6] } }
  blank: { role: blanking, active: low, from: { field: code, codes: [2, 3, 6] } }
  load:  { role: plain, active: high, lead: 3 cells }
machine: { form: loop, state: 13 bits, fields: { code: 7..5 }, start: 0x1F4A, outputs: direct }
chips: { part: 28C64 }
PLAN
# A chip of 16 bits in scrambled wiring with jumpers, tied pins and open ones, and a stretch signal that takes a cell
# to arrive.
plan slipway 'stretch: 2' <<PLAN
scanlatch: 1
name: slipway
clock: { master: 8 MHz, dot: 2 ticks, cell: 4 dots, stretch: 1 dot }
signals:
  sync:  { role: composite sync, active: low, lead: 1 cell }
  blank: { role: blanking, active: high }
  load:  { role: plain, active: low }
  late:  { role: stretch, active: low, lead: 1 cell }
machine: { form: loop, state: 12 bits, start: 0x9A5 }
parts: { SLOW16: { address pins: 17, data pins: 16, access: [200 ns] } }
chips:
  - label: deck
    part: SLOW16
    address: [state.7, high, state.0, bank.1, state.11, state.3, -, state.5, state.1, low, state.2, state.10, bank.0,
              state.4, state.9, state.6, state.8]
    data: [next.9, late, next.0, next.7, sync, next.11, next.2, next.5, next.1, load, next.8, next.3, blank, next.10,
           next.4, next.6]
PLAN

for name in outlook buoy slipway; do
	holds "$name: builds" built "$work/$name.yaml"
	follows "$work/$name.yaml"
done
follows "$work/slipway.yaml" BANK=1
follows "$work/slipway.yaml" BANK=3

# A state that the frame does not use comes home within a cell, wherever the power puts it.
comes_home() {
	holds "$1: simulates from spare state $2" simulated "$work/$1" "POWER_UP=$2" SKIP=1
	holds "$1: the trace begins there" grep -qix "0 0*$(printf '%x' "$2") [01x]*" <(head -n 1 "$work/$1/trace")
	holds "$1: comes home from spare state $2" "$python" "$board" compare "$3" "$work/$1/trace" 1
}
comes_home tide-board-60 65535 plans/tide-board-60.yaml
comes_home ferry-queue 131071 plans/ferry-queue.yaml
comes_home pier-clock 32767 plans/pier-clock.yaml

# The comparison can fail: a bit flipped in the row of the first state is seen, be it of the next state or of a
# signal, and so are a plan that differs, a trace that is short, and another beginning. flipped IMAGE BYTE BIT
flipped() {
	local byte
	byte=$(od -An -tu1 -j "$2" -N 1 "$1")
	# shellcheck disable=SC2059 # the format is the byte
	printf "\\$(printf '%03o' $((byte ^ 1 << $3)))" | dd of="$1" bs=1 seek="$2" conv=notrunc status=none
}

# differs NAME WORDS: its board, made and run again, does not follow the plan, and the words say where.
differs() {
	local output
	holds "$1: a new board" "$python" "$board" make "plans/$1.yaml" "$work/$1" "$work/$1"
	holds "$1: simulates again" simulated "$work/$1"
	output=$("$python" "$board" compare "plans/$1.yaml" "$work/$1/trace" 2>&1)
	same "$1: a fault is seen" 1 $?
	holds "$1: $2" grep -q "$2" <<<"$output"
}
# Pin A16 is open there, and the board gives it noise: both halves of the chip are in use.
flipped "$work/tide-board-60/tide-board-60.rom2.bin" $((0x08000)) 0
flipped "$work/tide-board-60/tide-board-60.rom2.bin" $((0x18000)) 0
differs tide-board-60 'line 0 (border) cell 1 region front porch, cell 1 after the first state: pins '
flipped "$work/tide-board-60/tide-board-60.rom2.bin" $((0x08000)) 0
flipped "$work/tide-board-60/tide-board-60.rom2.bin" $((0x18000)) 0
flipped "$work/tide-board-60/tide-board-60.rom0.bin" $((0x08000)) 7
flipped "$work/tide-board-60/tide-board-60.rom0.bin" $((0x18000)) 7
differs tide-board-60 'cell [0-9]* after the first state: pins '
flipped "$work/pier-clock/pier-clock.rom0.bin" 16767 0
differs pier-clock 'line 0 (picture) cell 0 region picture, cell 16768 after the first state: '
flipped "$work/ferry-queue/ferry-queue.rom1.bin" $((0x4000)) 7
differs ferry-queue 'cell [0-9]* after the first state: '
sed 's/sync,        cells: 2/sync,        cells: 3/' plans/lock-gate-sign.yaml >"$work/other.yaml"
"$python" "$board" compare "$work/other.yaml" "$work/lock-gate-sign/trace" >/dev/null 2>&1
same 'another plan is not followed' 1 $?
sed 1d "$work/tide-board-50/trace" >"$work/short"
"$python" "$board" compare plans/tide-board-50.yaml "$work/short" >/dev/null 2>&1
same 'a trace that lacks a cell is not enough' 1 $?

finish
