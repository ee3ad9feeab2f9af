#!/bin/bash
# What lift says of images that are no raster: blank, swapped and random ones, lines of random lengths.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# images PLAN: the plan's images in $work/PLAN.
images() {
	"$SCANLATCH" build "plans/$1.yaml" -o "$work/$1" --format bin >"$work/built" || fail "images of $1"
}

# fill BYTE FILE …: every byte becomes that one, in octal.
fill() {
	local byte=$1 file
	shift
	for file; do
		tr '\000-\377' "\\$byte" <"$file" >"$work/filled" && mv "$work/filled" "$file"
	done
}

# refused NAME PLAN IMAGES WORDS: lift refuses the images as no raster, prints no plan, and says the words.
refused() {
	"$SCANLATCH" lift "$2" "$3" >"$work/out" 2>"$work/err"
	same "$1: status" 2 $?
	same "$1: no plan" '' "$(cat "$work/out")"
	same "$1: the rule" 1 "$(grep -c '\[lift-raster\]$' "$work/err")"
	holds "$1: $4" grep -q -e "$4" "$work/err"
}

images harbour-mouth
images mooring-board-counted
images tide-board-60
for plan in harbour-mouth mooring-board-counted tide-board-60; do
	for byte in 377 000; do
		rm -rf "$work/blank" && cp -r "$work/$plan" "$work/blank"
		fill "$byte" "$work/blank"/*.bin
		refused "$plan, all bytes $byte" "plans/$plan.yaml" "$work/blank" 'hint: chip "rom0" is blank: its [0-9]* bytes are all 0x'
		same "$plan, all bytes $byte: each chip is named" "$(ls "$work/blank"/*.bin | wc -l)" "$(grep -c 'is blank' "$work/err")"
	done
	for seed in 1 2 3; do
		rm -rf "$work/random" && cp -r "$work/$plan" "$work/random"
		/usr/bin/python3 -c '
import random, sys
chance = random.Random(int(sys.argv[1]))
for path in sys.argv[2:]:
	length = len(open(path, "rb").read())
	open(path, "wb").write(chance.randbytes(length))' "$seed" "$work/random"/*.bin
		refused "$plan, random bytes $seed" "plans/$plan.yaml" "$work/random" "are these the board's images"
	done
done
for chip in "$work/mooring-board-counted"/*.bin; do
	for byte in 377 000; do
		rm -rf "$work/blank" && cp -r "$work/mooring-board-counted" "$work/blank"
		fill "$byte" "$work/blank/${chip##*/}"
		refused "${chip##*/}, all bytes $byte" plans/mooring-board-counted.yaml "$work/blank" 'is blank'
		same "${chip##*/}, all bytes $byte: the others are not" 1 "$(grep -c 'is blank' "$work/err")"
	done
done
cp -r "$work/tide-board-60" "$work/tide-board-60-swapped"
mv "$work/tide-board-60-swapped/tide-board-60.rom0.bin" "$work/first"
mv "$work/tide-board-60-swapped/tide-board-60.rom2.bin" "$work/tide-board-60-swapped/tide-board-60.rom0.bin"
mv "$work/first" "$work/tide-board-60-swapped/tide-board-60.rom2.bin"
refused 'chips that are swapped' plans/tide-board-60.yaml "$work/tide-board-60-swapped" 'chips may be swapped'

# ---- rasters that no plan has room for

# made KIND: images of 65,536 states in $work/made: "kinds", lines of 16 cells that differ in blanking, or "states", a plain raster whose
# states are in no order.
made() {
	rm -rf "$work/made" && mkdir "$work/made"
	/usr/bin/python3 - "$1" "$work/made" <<'MAKER'
import random
import sys
chance, states = random.Random(6), list(range(1 << 16))
if sys.argv[1] == "states":
	chance.shuffle(states)
rows = [0] * len(states)
for cell, state in enumerate(states):
	after = (cell + 1) % len(states)
	sync = after % 16 < (12 if after < 64 else 2)
	blank = chance.random() < 0.5 if sys.argv[1] == "kinds" else after % 16 < 4
	rows[state] = states[after] | (not sync) << 16 | blank << 17
for chip in range(3):
	with open(f"{sys.argv[2]}/made.rom{chip}.bin", "wb") as file:
		file.write(bytes(row >> 8 * chip & 0xFF for row in rows))
MAKER
}

cat >"$work/made.yaml" <<'BOARD'
scanlatch: 1
name: made
clock: { master: 14 MHz, dot: 1 tick, cell: 8 dots }
signals:
  sync: { role: composite sync, active: low }
  blank: { role: blanking, active: high }
machine: { form: loop, state: 16 bits }
parts: { PIERROM: { address pins: 16, data pins: 8, access: [120 ns] } }
chips: { part: PIERROM }
BOARD
made kinds
"$SCANLATCH" lift "$work/made.yaml" "$work/made" >"$work/out" 2>"$work/err"
same 'too many line types: status' 2 $?
same 'too many line types: counted' '3' "$(sed -n 's/.*these images take \(.\)[0-9]* line types of [0-9]* regions and .* blocks of lines, or more.*\[lift-size\]$/\1/p' "$work/err")"
made states
"$SCANLATCH" lift "$work/made.yaml" "$work/made" >"$work/out" 2>"$work/err"
same 'states in no order: status' 0 $?
"$SCANLATCH" lift --near "$work/made.yaml" "$work/made" >"$work/out" 2>"$work/err"
same 'states in no order, pinned: status' 2 $?
holds 'states in no order, pinned: the rule' grep -q '\[lift-size\]$' "$work/err"
holds 'states in no order, pinned: the hint' grep -q 'hint: without --near the plan is shorter' "$work/err"

# ---- what no plan builds

# One bit more of stretch, in a line of the picture: its colour is out of step then.
cp -r "$work/tide-board-60" "$work/stretched"
for at in $((0x2000)) $((0x12000)); do
	byte=$(od -An -tu1 -j "$at" -N 1 "$work/stretched/tide-board-60.rom2.bin")
	printf "\\x$(printf %02x $((byte ^ 8)))" | dd of="$work/stretched/tide-board-60.rom2.bin" bs=1 seek="$at" conv=notrunc 2>/dev/null
done
"$SCANLATCH" lift plans/tide-board-60.yaml "$work/stretched" >"$work/lifted.yaml" 2>"$work/err"
same 'colour that fails: status' 1 $?
holds 'colour that fails: said' grep -q 'cannot be built as it stands: it fails the proof colour: line 22 takes 915 ticks.*\[lift-near\]$' "$work/err"
"$SCANLATCH" build "$work/lifted.yaml" -o "$work/rebuilt" >"$work/out" 2>"$work/err"
same 'colour that fails: the build' 1 $?
holds 'colour that fails: the build says so too' grep -q '^FAIL  colour' "$work/out"

# A line-frame machine of one kind bit, with three line types: vertical sync comes from the frame stage in two of four lines of a kind.
/usr/bin/python3 - "$work" <<'MAKER'
import sys
line, frame = [], []
for address in range(1 << 7):
	cell, kind = address & 63, address >> 6
	last = cell >= 19
	line.append((0 if last else cell + 1) | last << 6 | (not 14 <= cell < 17) << 7)
for address in range(1 << 4):
	frame.append((address + 1) % 16 | (address < 4) << 4 | (address >= 2) << 5)
open(f"{sys.argv[1]}/line.bin", "wb").write(bytes(line))
open(f"{sys.argv[1]}/frame.bin", "wb").write(bytes(frame))
MAKER
sed 's/PIERROM: { address pins: 16/PIERROM: { address pins: 7/; s/ } }$/ }, BUOYROM: { address pins: 4, data pins: 8, access: [120 ns] } }/
/blank:/c\  vs: { role: vertical sync, active: low, stage: frame }
s/composite/horizontal/; s/^chips.*/chips: { line: { part: PIERROM }, frame: { part: BUOYROM } }/
s/^machine.*/machine: { form: line-frame, line: { state: 6 bits, outputs: direct }, frame: { state: 4 bits, outputs: direct }, kind: 1 bit }/' \
	"$work/made.yaml" >"$work/kinds.yaml"
"$SCANLATCH" lift "$work/kinds.yaml" rom0="$work/line.bin" rom1="$work/frame.bin" >"$work/out" 2>"$work/err"
same 'kinds that are short: status' 2 $?
holds 'kinds that are short: said' grep -q 'no plan gives images like these: kind: 3 line types need 2 bits, found "1 bit" \[lift-size\]' "$work/err"
holds 'kinds that are short: why' grep -q 'lines that differ in signals of the frame stage alone have kinds of their own' "$work/err"

# ---- a line stage that does not number its cells, and that no expression tells

/usr/bin/python3 - "$work" <<'MAKER'
import random
import sys
order = random.Random(8).sample(range(1, 64), 19)
order.insert(0, 0)
line = [0x40] * (1 << 7)
for cell, state in enumerate(order):
	last = cell == 19
	for kind in (0, 64):
		line[state + kind] = order[(cell + 1) % 20] | last << 6 | (not 14 <= cell < 17) << 7
open(f"{sys.argv[1]}/line.bin", "wb").write(bytes(line))
open(f"{sys.argv[1]}/frame.bin", "wb").write(bytes((line + 1) % 16 | (line < 4) << 4 | (line >= 4) << 5 for line in range(1 << 4)))
MAKER
mkdir "$work/disordered"
cp "$work/line.bin" "$work/disordered/made.rom0.bin"
cp "$work/frame.bin" "$work/disordered/made.rom1.bin"
"$SCANLATCH" lift "$work/kinds.yaml" "$work/disordered" >"$work/lifted.yaml" 2>"$work/err"
same 'cells in no order: status' '0 ' "$? $(cat "$work/err")"
holds 'cells in no order: why states are pinned' grep -q '^# Holds pin the state of every cell: without any, the line stage' "$work/lifted.yaml"
"$SCANLATCH" prove "$work/lifted.yaml" "$work/disordered" >"$work/out" 2>"$work/err"
same 'cells in no order: the images keep to the plan' '' "$(grep '^FAIL' "$work/out"; cat "$work/err")"

finish
