#!/bin/bash
# The command lift: what it prints and writes, its options, boards, sets, bad input, and the textconv of git.
# tests/reference/lift.sh judges what it finds.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
plan=plans/tide-board-60.yaml
"$SCANLATCH" build "$plan" -o "$work/images" --format bin >"$work/built" || fail 'the images are built'

# lifted ARGUMENT …: runs lift, leaves $status, $work/out and $work/err.
lifted() {
	"$SCANLATCH" lift "$@" >"$work/out" 2>"$work/err" </dev/null
	status=$?
}

# ends NAME STATUS ARGUMENT …
ends() {
	local name=$1 wanted=$2
	shift 2
	lifted "$@"
	same "$name: status" "$wanted" "$status"
}

# ---- the plan, and where it goes

ends 'a plan to standard output' 0 "$plan" "$work/images"
cp "$work/out" "$work/plain.yaml"
same 'nothing on standard error' '' "$(cat "$work/err")"
same 'it says where it is from' "# Lifted out of images against the board tide-board-60.yaml. CRC-32 of each chip's bytes:" "$(head -n 1 "$work/out")"
for chip in rom0 rom1 rom2; do
	crc=$(grep -A3 "\"label\": \"$chip\"" "$work/images/tide-board-60.manifest.json" | sed -n 's/.*"crc32": "\(.*\)".*/\1/p')
	holds "the CRC-32 of $chip is the manifest's" grep -qi "^#   $chip  $crc  tide-board-60.$chip.bin\$" "$work/out"
done
holds 'no folder is named' test "$(grep -c "$work" "$work/out")" -eq 0
holds 'picture is held as it was planned' grep -q 'cells: 80, .*hold: { page: 0, scan: row%9, at: 80\*(row/9) + col }' "$work/out"
same 'the frame' '  - { repeat: 18,  line: border }
  - { repeat: 216, line: picture }
  - { repeat: 25,  line: border }
  - { repeat: 3,   line: vertical sync }' "$(sed -n '/^frame:/,/^$/p' "$work/out" | grep repeat)"
holds 'the plan builds and proves' "$SCANLATCH" build "$work/plain.yaml" -o "$work/again"
ends 'a plan to a file' 0 "$plan" "$work/images" -o "$work/deep/lifted.yaml"
same 'the file is what was printed' '' "$(diff "$work/plain.yaml" "$work/deep/lifted.yaml")"
holds 'what was found is told' grep -q '^frame: 18 border, 216 picture, 25 border, 3 vertical sync$' "$work/out"
holds 'and what was written' grep -q "^wrote $work/deep/lifted.yaml " "$work/out"
ends 'again' 0 "$plan" "$work/images" -o "$work/deep/lifted.yaml"
holds 'the same file is kept' grep -q "^kept  $work/deep/lifted.yaml " "$work/out"
ends 'to a folder' 3 "$plan" "$work/images" -o "$work/deep"
ends '-o - is standard output' 0 "$plan" "$work/images" -o -
same '-o -: the plan' '' "$(diff "$work/plain.yaml" "$work/out")"
ends 'single files' 0 "$plan" rom0="$work/images/tide-board-60.rom0.bin" rom1="$work/images/tide-board-60.rom1.bin" \
	rom2="$work/images/tide-board-60.rom2.bin"
same 'single files: the plan' '' "$(diff "$work/plain.yaml" "$work/out")"
same 'the same twice' "$("$SCANLATCH" lift --near "$plan" "$work/images" | cksum)" \
	"$("$SCANLATCH" lift --near "$plan" "$work/images" | cksum)"
ends 'pinned' 0 --near "$plan" "$work/images" -o "$work/pinned.yaml"
holds 'pinned: it builds' "$SCANLATCH" build "$work/pinned.yaml" -o "$work/pinned" --format bin
for chip in rom0 rom1 rom2; do
	holds "pinned: the bytes of $chip" cmp "$work/images/tide-board-60.$chip.bin" "$work/pinned/tide-board-60.$chip.bin"
done

# ---- where the frame begins

same 'after vertical sync: nothing is said of it' '' "$(grep -i '^# start of' "$work/plain.yaml")"
same 'start: whose' '# The board starts in state 0x8000, 26460 cells into this frame; start below is the state of the frame'\''s first cell.' \
	"$(grep '^# The board starts' "$work/plain.yaml")"
for begun in 'mooring-board-counted line 0 of the frame stage' 'pier-clock where the counter is 0'; do
	name=${begun%% *} where="${begun#* }, as in every plan, and not after vertical sync"
	"$SCANLATCH" build "plans/$name.yaml" -o "$work/$name" --format bin >"$work/built" || fail "images of $name"
	ends "$name" 0 "plans/$name.yaml" "$work/$name" -o "$work/$name.yaml"
	holds "$name: its start, told" grep -qx "start of the frame: $where" "$work/out"
	holds "$name: its start, in the plan" grep -qx "# Start of the frame: $where\." "$work/$name.yaml"
done
sed 's/line: vertical sync/line: border/' "$work/plain.yaml" >"$work/flat.yaml"
"$SCANLATCH" build "$work/flat.yaml" -o "$work/flat" --format bin >"$work/built" 2>&1 || fail 'a frame without vertical sync is built'
ends 'no vertical sync' 0 --text "$work/flat.yaml" "$work/flat"
holds 'no vertical sync: said' grep -qx 'start of the frame: arbitrary, as there is no vertical sync' "$work/out"

# ---- JSON and words

ends 'JSON' 0 --json "$plan" "$work/images" -o "$work/beside.yaml"
same 'JSON: the plan is in it, and beside it' '' "$(/usr/bin/python3 -c '
import json, sys
found = json.load(open(sys.argv[1]))
assert found["plan"] == open(sys.argv[2]).read() == open(sys.argv[3]).read(), "plan"
assert found["loop"] == {"state": "0x0781", "cells": 26462, "ticks": "238944", "lines": 262, "power_up_state": "0x8000", "lead_in_cells": 0}
assert [(line["name"], line["cells"], line["ticks"], line["used"]) for line in found["lines"]] == [
	("border", 101, "912", 43), ("picture", 101, "912", 216), ("vertical sync", 101, "912", 3)], "lines"
assert found["lines"][1]["regions"][4] == {"name": "picture", "first_cell": 19, "cells": 80, "stretched_cells": 0, "asserted": ["load"],
	"hold": {"page": "0", "scan": "row%9", "at": "80*(row/9) + col"}}, "picture"
assert sum(block["repeat"] for block in found["frame"]) == 262
' "$work/out" "$work/plain.yaml" "$work/beside.yaml" 2>&1)"
ends 'words' 0 --text "$plan" "$work/images"
holds 'words: the loop' grep -q '^loop: 262 lines, 26462 cells, 238944 ticks, 16.688 ms; power-up in state 0x8000 is in it$' "$work/out"
ends 'words of a chip' 0 --text "$plan" "$work/images/tide-board-60.rom0.bin"
same 'words of a chip: its rows' 'tide-board-60: chip rom0, 28C010
data pins: next.0 next.1 next.2 next.3 next.4 next.5 next.6 next.7
state, and what its row says in them:
A16 low:
0x0000..0x004E  next 0x0001..0x004F' "$(head -n 5 "$work/out")"
same 'words of a chip: its upper half' 'A16 high: as before' "$(tail -n 1 "$work/out")"
ends 'words of signals' 0 --text "$plan" "$work/images/tide-board-60.rom2.bin"
holds 'words of signals: the first line of picture' grep -qx '0x0000..0x004D  load' "$work/out"
cp "$work/images/tide-board-60.rom2.bin" "$work/anything.bin"
ends 'a chip that has no name' 2 --text "$plan" "$work/anything.bin"
holds 'a chip that has no name: what is wanted' grep -q 'wanted a name as NAME.LABEL.bin' "$work/err"

# ---- boards and sets

sed '/^lines:/,/^machine:/{/^machine:/!d}' "$plan" >"$work/board.yaml"
ends 'a board' 0 "$work/board.yaml" "$work/images"
same 'a board: the same but for its name' '' "$(diff <(sed s/tide-board-60.yaml/board.yaml/ "$work/plain.yaml") "$work/out")"
sed '/fields:/d' "$work/board.yaml" >"$work/no-fields.yaml"
ends 'a board without fields' 0 "$work/no-fields.yaml" "$work/images" -o "$work/found.yaml"
holds 'a board without fields: they are found' grep -q 'fields: { bits_10_0: 10..0, bits_15_11: 15..11 }' "$work/found.yaml"
holds 'a board without fields: each is told' grep -q 'hold: { bits_10_0: 80\*(row/9) + col, bits_15_11: row%9 }' "$work/found.yaml"
holds 'a board without fields: the images keep to it' "$SCANLATCH" prove "$work/found.yaml" "$work/images"
"$SCANLATCH" check "$work/board.yaml" >"$work/out" 2>"$work/err"
same 'check of a board' 2 $?
holds 'check of a board says what is missing' grep -q 'error: a plan needs the key "lines"' "$work/err"
holds 'check of a board says what it is' grep -q 'is a board, not a plan; scanlatch lift reads images against it' "$work/err"
"$SCANLATCH" lift - "$work/images" <"$work/board.yaml" >"$work/out" 2>"$work/err"
same 'a board from standard input' '0 standard input' "$? $(sed -n '1s/.*board \(.*\)\. CRC.*/\1/p' "$work/out")"
sed 's/role: composite sync/role: plain/' "$work/board.yaml" >"$work/plain-board.yaml"
ends 'no sync' 2 "$work/plain-board.yaml" "$work/images"
holds 'no sync: the rule' grep -q '\[board-sync\]$' "$work/err"
ends 'no sync, but a signal is named' 0 --cut sync "$work/plain-board.yaml" "$work/images"
same 'the same frame' 4 "$(grep -c repeat "$work/out")"
"$SCANLATCH" build plans/pilot-station.yaml -o "$work/set" --format bin >"$work/built" || fail 'the set is built'
ends 'a set' 0 plans/pilot-station.yaml "$work/set"
holds 'a set: bank 0' grep -qx 'name: pilot-station-525' "$work/out"
ends 'its other bank' 0 --near --bank 1 plans/pilot-station.yaml "$work/set"
holds 'its other bank: the plan' grep -qx 'name: pilot-station-625' "$work/out"
holds 'its other bank: said' grep -qx '# Bank 1 of the jumpers.' "$work/out"
ends 'a bank that there is not' 2 --bank 2 plans/pilot-station.yaml "$work/set"
holds 'a bank that there is not: how many' grep -q 'bank: wanted 0 to 1, as the chips have 1 bank bit, found 2' "$work/err"

# ---- a kind that no line has keeps its place

sed 's/^lines:/&\n  spare: { regions: [ { region: rest, cells: 100 } ] }/' plans/mooring-board.yaml >"$work/spare.yaml"
"$SCANLATCH" build "$work/spare.yaml" -o "$work/spare" --format bin >"$work/built" 2>&1 || fail 'a board with a spare line type is built'
ends 'a spare line type, pinned' 0 --near --text "$work/spare.yaml" "$work/spare"
holds 'a spare line type: its length' grep -qx 'line "unused 0": 2 cells, 16 ticks; 0 lines of the loop' "$work/out"

# ---- a frame of several laps: 15 ticks a lap are 15/4 cycles

cat >"$work/laps.yaml" <<'PLAN'
scanlatch: 1
name: laps
clock: { master: 8 MHz, cell: 1 tick, subcarrier: master / 4, phase: every frame }
signals:
  sync: { role: composite sync, active: low }
  lamp: { role: plain, active: high }
lines:
  quay: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 4 } ] }
  pier: { regions: [ { region: sync, cells: 1, assert: [sync] }, { region: rest, cells: 4, assert: [lamp] } ] }
frame: [ { repeat: 2, line: quay }, { repeat: 1, line: pier }, { repeat: 2, line: quay }, { repeat: 1, line: pier },
         { repeat: 2, line: quay }, { repeat: 1, line: pier }, { repeat: 2, line: quay }, { repeat: 1, line: pier } ]
machine: { form: loop, state: 5 bits }
chips: { part: 28C16 }
PLAN
"$SCANLATCH" build "$work/laps.yaml" -o "$work/laps" --format bin >"$work/built" || fail 'laps are built'
for option in --bank=0 --near; do
	ends "laps, $option" 0 "$option" "$work/laps.yaml" "$work/laps" -o "$work/lapped.yaml"
	same "laps, $option: the loop" '15' "$(sed -n 's/^loop: .* \([0-9]*\) cells.*/\1/p' "$work/out")"
	same "laps, $option: four times two blocks" 8 "$(grep -c 'repeat:' "$work/lapped.yaml")"
	holds "laps, $option: colour is kept" "$SCANLATCH" build "$work/lapped.yaml" -o "$work/lapped" --format bin
done
holds 'laps: the same bytes' cmp "$work/laps/laps.rom0.bin" "$work/lapped/laps.rom0.bin"

# ---- bad input

ends 'no images' 2 "$plan"
ends 'no arguments' 2
"$SCANLATCH" lift - rom0=- rom1="$work/images/tide-board-60.rom1.bin" rom2="$work/images/tide-board-60.rom2.bin" \
	<"$work/board.yaml" >"$work/out" 2>"$work/err"
same 'standard input twice: status' 2 $?
holds 'standard input twice: said' grep -q 'only one of the board and its images can be standard input' "$work/err"
ends 'two images of standard input' 2 "$plan" rom0=- rom1=- rom2="$work/images/tide-board-60.rom2.bin"
holds 'two images of standard input: said' grep -q 'can be standard input' "$work/err"
"$SCANLATCH" lift "$plan" rom0=- rom1="$work/images/tide-board-60.rom1.bin" rom2="$work/images/tide-board-60.rom2.bin" \
	<"$work/images/tide-board-60.rom0.bin" >"$work/out" 2>"$work/err"
same 'an image from standard input' 0 $?
ends 'a bank that is no number' 2 --bank one "$plan" "$work/images"
ends 'words and a file' 2 --text -o "$work/x.yaml" "$plan" "$work/images"
head -c 1000 "$work/images/tide-board-60.rom1.bin" >"$work/short.bin"
ends 'an image of the wrong size' 2 "$plan" rom0="$work/images/tide-board-60.rom0.bin" rom1="$work/short.bin" \
	rom2="$work/images/tide-board-60.rom2.bin"
holds 'an image of the wrong size: the rule' grep -q '\[image-size\]$' "$work/err"
mkdir "$work/empty"
ends 'an empty folder' 2 "$plan" "$work/empty"
same 'an empty folder: every chip' 3 "$(grep -c '\[image-missing\]$' "$work/err")"
# A second loop: state 0x7000, a spare one, leads to itself, in both halves of the chips.
cp -r "$work/images" "$work/looped"
for at in $((0x7000)) $((0x17000)); do
	printf '\x00' | dd of="$work/looped/tide-board-60.rom0.bin" bs=1 seek="$at" conv=notrunc 2>/dev/null
	printf '\x70' | dd of="$work/looped/tide-board-60.rom1.bin" bs=1 seek="$at" conv=notrunc 2>/dev/null
done
ends 'a second loop' 1 "$plan" "$work/looped"
same 'a second loop: how long' 'hint: a loop of 1 cell goes through state 0x7000' "$(sed -n 's/^ *\(hint.*\)/\1/p' "$work/err")"
same 'a second loop: the plan all the same' '' "$(diff <(grep -v '^#' "$work/plain.yaml") <(grep -v '^#' "$work/out"))"
ends 'a second loop, pinned' 1 --near "$plan" "$work/looped"
same 'a second loop, pinned: the byte that no plan says' 1 "$(grep -c '\[lift-near\]$' "$work/err")"

# ---- git

# in_git ARGUMENT …: git without any configuration but the repository's.
in_git() {
	env -i HOME="$work" PATH="$(dirname "$SCANLATCH"):$PATH" GIT_CONFIG_NOSYSTEM=1 git -C "$work/repository" \
		-c user.name=harbour -c user.email=harbour@example.org "$@"
}
mkdir "$work/repository"
cp "$plan" "$work/repository/tide-board-60.yaml"
cp "$work"/images/*.bin "$work/repository"
echo '*.bin diff=scanlatch-rows' >"$work/repository/.gitattributes"
holds 'git: a repository' in_git init -q
in_git config diff.scanlatch-rows.textconv "$(sed -n "s/^git config diff.scanlatch-rows.textconv '\(.*\) board.yaml'\$/\1/p" README.md) tide-board-60.yaml"
in_git add . && in_git commit -q -m 'first'
sed -i 's/burst,       time: 2.51 us/burst,       cells: 5/' "$work/repository/tide-board-60.yaml"
holds 'git: one cell more of burst' "$SCANLATCH" build "$work/repository/tide-board-60.yaml" -o "$work/repository" --format bin
in_git diff -- '*.bin' >"$work/out" 2>"$work/err"
same 'git: nothing is wrong' '' "$(cat "$work/err")"
same 'git: only the chip of the signals changes' 'tide-board-60.rom2.bin' "$(sed -n 's/^diff --git a.* b.\(.*\)/\1/p' "$work/out")"
holds 'git: burst appears in a row' grep -q '^+0x[0-9A-F.x]*  blank  burst$' "$work/out"
holds 'git: and no bytes do' test "$(grep -c 'Binary files' "$work/out")" -eq 0

# What is no image of the board's chips, and boards that are bad or not there: git goes on, and tells them from each other.
# goes_on NAME REGEX …: git log -p ends well and has these lines.
goes_on() {
	local name=$1
	shift
	in_git add -A && in_git commit -q -m "$name"
	in_git log -p -- '*.bin' >"$work/out" 2>"$work/err"
	same "git, $name: status" 0 $?
	same "git, $name: nothing is wrong" '' "$(cat "$work/err")"
	holds "git, $name: history goes back to the first commit" grep -q '^    first$' "$work/out"
	for line in "$@"; do
		holds "git, $name: $line" grep -Eqx -e "$line" "$work/out"
	done
}
printf 'tide' >"$work/repository/a=tide.bin"
goes_on 'another file' '\+a=tide.bin: no image of a chip of the board; 4 bytes, CRC-32 [0-9A-F]{8}'
printf 'ebb' >"$work/repository/a=tide.bin"
goes_on 'it changes' '-a=tide.bin: no image of a chip of the board; 4 bytes, CRC-32 [0-9A-F]{8}' \
	'\+a=tide.bin: no image of a chip of the board; 3 bytes, CRC-32 [0-9A-F]{8}'
truncate -s 1000 "$work/repository/tide-board-60.rom1.bin"
goes_on 'a truncated image' '\+tide-board-60.rom1.bin: no image of a chip of the board; 1000 bytes, CRC-32 [0-9A-F]{8}' \
	'\+tide-board-60.rom1.bin: error: 1000 bytes, but chip "rom1" \(28C010\) has 131072 \[image-size\]'
: >"$work/repository/tide-board-60.rom1.bin"
goes_on 'an empty image' '\+tide-board-60.rom1.bin: no image of a chip of the board; 0 bytes, CRC-32 00000000'
echo 'scanlatch: 7' >"$work/repository/tide-board-60.yaml"
goes_on 'a bad board' '\+tide-board-60.rom0.bin: no image of a chip of the board; 131072 bytes, CRC-32 [0-9A-F]{8}'
rm "$work/repository/tide-board-60.yaml"
goes_on 'no board' '\+tide-board-60.rom0.bin: no image of a chip of the board; 131072 bytes, CRC-32 [0-9A-F]{8}' \
	'\+tide-board-60.yaml: error: cannot read a plan: No such file or directory \[file-unreadable\]'

# By hand.
ends 'as a textconv, an image' 0 --git "$plan" "$work/images/tide-board-60.rom0.bin"
cp "$work/out" "$work/as-git"
ends 'in words' 0 --text "$plan" "$work/images/tide-board-60.rom0.bin"
same 'the same words' '' "$(diff "$work/as-git" "$work/out")"
ends 'as a textconv, no file' 3 --git "$plan" "$work/nosuch.rom0.bin"
ends 'as a textconv, a folder' 3 --git "$plan" "$work/images"
ends 'as a textconv, two files' 2 --git "$plan" "$work/anything.bin" "$work/anything.bin"
ends 'as a textconv, a plan to a file' 2 --git "$plan" "$work/anything.bin" -o "$work/none.yaml"
printf 'tide' >"$work/short.rom0.bin"
ends 'in words, a wrong size' 2 --text "$plan" "$work/short.rom0.bin"

# ---- what is not there

ends 'no folder' 3 "$plan" "$work/nosuch"
same 'no folder: the system says so' "$work/nosuch: error: cannot read a folder of images: No such file or directory [file-unreadable]" \
	"$(cat "$work/err")"
ends 'no file in words' 3 --text "$plan" "$work/nosuch"
holds 'no file in words: the system says so' grep -q 'nosuch: error: cannot read an image: No such file or directory \[file-unreadable\]$' "$work/err"

finish
