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
		refused "$plan, all bytes $byte" "plans/$plan.yaml" "$work/blank" 'hint: chip "rom0" may be blank: its [0-9]* bytes are all 0x'
		same "$plan, all bytes $byte: each chip is named" "$(ls "$work/blank"/*.bin | wc -l)" "$(grep -c 'may be blank' "$work/err")"
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
		refused "${chip##*/}, all bytes $byte" plans/mooring-board-counted.yaml "$work/blank" 'may be blank'
		same "${chip##*/}, all bytes $byte: the others are not" 1 "$(grep -c 'may be blank' "$work/err")"
	done
done
cp -r "$work/tide-board-60" "$work/tide-board-60-swapped"
mv "$work/tide-board-60-swapped/tide-board-60.rom0.bin" "$work/first"
mv "$work/tide-board-60-swapped/tide-board-60.rom2.bin" "$work/tide-board-60-swapped/tide-board-60.rom0.bin"
mv "$work/first" "$work/tide-board-60-swapped/tide-board-60.rom2.bin"
refused 'chips that are swapped' plans/tide-board-60.yaml "$work/tide-board-60-swapped" 'chips may be swapped'

# Random bytes in loops of 4096 states, whose signals come and go by chance: no image of any seed is a raster.
/usr/bin/python3 - "$work" 150 <<'MAKER'
import os
import random
import sys
for seed in range(int(sys.argv[2])):
	os.mkdir(f"{sys.argv[1]}/noise-{seed}")
	chance = random.Random(seed)
	for chip in range(2):
		with open(f"{sys.argv[1]}/noise-{seed}/made.rom{chip}.bin", "wb") as file:
			file.write(chance.randbytes(1 << 12))
MAKER
cat >"$work/noise.yaml" <<'BOARD'
scanlatch: 1
name: made
clock: { master: 14 MHz, dot: 1 tick, cell: 8 dots }
signals:
  sync: { role: composite sync, active: low }
  blank: { role: blanking, active: high }
machine: { form: loop, state: 12 bits }
parts: { QUAYROM: { address pins: 12, data pins: 8, access: [120 ns] } }
chips: { part: QUAYROM }
BOARD
lifted_noise=
for seed in $(seq 0 149); do
	"$SCANLATCH" lift "$work/noise.yaml" "$work/noise-$seed" >"$work/out" 2>"$work/err"
	[ $? -eq 2 ] && grep -q '\[lift-raster\]$' "$work/err" || lifted_noise+=" $seed"
done
same 'random bytes of 4096 states: seeds that are lifted' '' "$lifted_noise"

# ---- rasters that look odd, as plans are

# odd NAME MACHINE LENGTHS SYNC: a plan of lines of these lengths, each shown twice but the first, of which so many cells are sync.
odd() {
	local length frame='' repeat=1 part=28C64
	[[ $2 == *20* ]] && part=WIDEROM
	{
		echo "scanlatch: 1
name: odd
clock: { master: 8 MHz, dot: 1 tick, cell: 8 dots }
signals: { sync: { role: composite sync, active: low } }
lines:"
		for length in $3; do
			echo "  w$length: { regions: [ { region: sync, cells: $4, assert: [sync] }, { region: rest, cells: $((length - $4)) } ] }"
			frame+="${frame:+, }{ repeat: $repeat, line: w$length }"
			repeat=2
		done
		echo "frame: [ $frame ]"
		echo "machine: { $2 }"
		if [[ $2 == *line-frame* ]]; then
			echo 'chips: { line: { part: 28C64 }, frame: { part: 28C64 } }'
		else
			echo "parts: { WIDEROM: { address pins: 20, data pins: 8, access: [120 ns] } }
chips: { part: $part }"
		fi
	} >"$work/odd.yaml"
	rm -rf "$work/odd"
	"$SCANLATCH" build "$work/odd.yaml" -o "$work/odd" --format bin >"$work/out" 2>&1 || fail "$1: is built: $(cat "$work/out")"
	"$SCANLATCH" lift "$work/odd.yaml" "$work/odd" >"$work/lifted.yaml" 2>"$work/err"
	same "$1: lifted" '0 ' "$? $(cat "$work/err")"
	"$SCANLATCH" diff "$work/odd" "$work/lifted.yaml" >"$work/out" 2>&1
	same "$1: the images keep to it" 0 $?
}
odd 'lines of seven lengths' 'form: loop, state: 12 bits' '97 99 101 104 107 110 112' 9
odd 'lines of seven lengths, in two stages' 'form: line-frame, line: { state: 7 bits }, frame: { state: 4 bits }' '97 99 101 104 107 110 112' 9
odd 'short lines of many states' 'form: loop, state: 20 bits' '7 8' 1
odd 'short lines, mostly sync' 'form: loop, state: 12 bits' '9 10' 6

# Lines of random lengths are none, though the rows come home; and chips are not said to be swapped then.
odd_lengths='3 7 11 17 25 34 46 59'
{
	sed '/^lines:/,$d' "$work/odd.yaml"
	echo 'lines:'
	for length in $odd_lengths; do
		echo "  w$length: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: $((length - 1)) } ] }"
	done
	echo "frame: [ $(for length in $odd_lengths; do echo "{ repeat: 1, line: w$length },"; done | tr '\n' ' ' | sed 's/, $//') ]"
	echo 'machine: { form: loop, state: 12 bits }
chips: { part: 28C64 }'
} >"$work/lengths.yaml"
"$SCANLATCH" build "$work/lengths.yaml" -o "$work/lengths" --format bin >"$work/out" 2>&1 || fail 'random lengths are built'
refused 'lines of random lengths' "$work/lengths.yaml" "$work/lengths" 'wires and polarities may be others'
same 'lines of random lengths: chips are not swapped' 0 "$(grep -c 'swapped' "$work/err")"

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
