#!/bin/bash
# What diff tells of a plan and images of another: the edits between them, in all three forms, with sets and banks, two stages and
# counters; of damaged images; and why, where what images do cannot be read out of them.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp plans/*.yaml tests/good/codes-auto.yaml tests/good/direct.yaml tests/good/suggests-frame.yaml "$work"
cd "$work" || exit 1

# compare STATUS ARGUMENT …: leaves stdout and stderr in files, and the lines without their ends wrapped.
compare() {
	local wanted=$1
	shift
	"$SCANLATCH" diff "$@" >stdout 2>stderr </dev/null
	same "diff $*: exit status" "$wanted" $?
	holds "diff $*: no line is longer than 100 characters" sh -c 'case $1 in -*) ;; *) ! grep -Eq "^.{101}" stdout ;; esac' sh "$1"
	sed -z 's/\n    / /g' stdout >unwrapped
}

# says TEXT, never TEXT: a line of the last report, whole but for indentation, is there, or is not.
says() {
	holds "says: $1" grep -Fxq "  $1" unwrapped
}

never() {
	holds "does not say: $1" sh -c '! grep -Fq "$1" unwrapped' sh "$1"
}

# build_old PLAN: the images of a plan, in the folder old.
build_old() {
	rm -rf old
	"$SCANLATCH" build "$1" -o old --format bin >/dev/null 2>stderr || fail "$1 is built" "$(cat stderr)"
}

# edit OLD NEW SED: an edited plan, and that it is one.
edit() {
	sed -E "$3" "$1" >"$2"
	holds "$2 is another text" sh -c '! cmp -s "$0" "$1"' "$1" "$2"
}

# flip FILE OFFSET BIT: a bit of a byte.
flip() {
	local byte
	byte=$(od -An -tu1 -j "$2" -N 1 "$1")
	printf "\\$(printf %03o $((byte ^ 1 << $3)))" | dd of="$1" bs=1 seek="$2" conv=notrunc status=none
}

# The whole report, in three forms. The images of the older plan begin the burst a cell earlier; border has the same edges.
build_old tide-board-60.yaml
edit tide-board-60.yaml later.yaml 's/(region: breezeway, +cells: )1/\12/'
compare 1 old later.yaml
same 'the report, up to the proofs' 'old to later.yaml: the images do not do what the plan says, 1 change; the images are not the same
    bytes
  musts in the images: FAIL: signals
  frame: 262 lines, 26462 cells, 238944 ticks, 59.923 Hz, as before
  colour: in step as asked, 228 cycles a line, repeats after 1 line and 1 frame, as before
  speed of the chips: in time, 422.571 ns to spare, as before
  limits: 24 of 24 kept at monitor grade of composite-525, 1 not measured, as before
chips
  rom0: stays as it is
  rom1: stays as it is
  rom2: burn it again, 1036 of 131072 bytes differ, the first at 0x788
lines
  "picture", "border": "burst", between "breezeway" and "back porch": 1 cell later (9 ticks, 0.629
    us)' "$(sed '/^FAIL/,$d' stdout)"
compare 1 later.yaml old
says '"picture", "border": "burst", between "breezeway" and "back porch": 1 cell earlier (9 ticks, 0.629 us)'
compare 1 --markdown old later.yaml
holds 'Markdown: the edit' grep -Fq '| lines | "picture", "border": "burst", between "breezeway" and "back porch" | 1 cell later (9 ticks, 0.629 us) |' stdout
compare 1 old later.yaml
sed -n '/^FAIL/,$p' stdout >proofs
holds 'the proofs: a byte' grep -q '^ .* byte 0x.* at address 0x.* of chip rom2$' proofs
compare 1 --markdown old later.yaml
same 'Markdown: the proofs, as in the text' '```text
'"$(cat proofs)"'
```' "$(sed -n '/^```/,$p' stdout)"
"$SCANLATCH" prove --json later.yaml rom0=old/tide-board-60.rom0.bin rom1=old/tide-board-60.rom1.bin rom2=old/tide-board-60.rom2.bin >proved.json
compare 1 --json old later.yaml
cat >judge.py <<'PYTHON'
import json
document = json.load(open("stdout", encoding="utf-8"))
plan, = document["plans"]
change, = plan["changes"]
assert (document["differs"], document["same_timeline"], plan["same_timeline"]) == (True, False, False), document
assert plan["musts"] == {"old": ["signals"], "new": []} and "changes_unknown" not in plan, plan
assert change["kind"] == "region-moved" and change["lines"] == ["picture", "border"] and change["cells"] == 1, change
proved = json.load(open("proved.json", encoding="utf-8"))["proofs"]
assert plan["failures"] == {"signals": proved["signals"]} and "address" in proved["signals"]["counterexample"], plan["failures"]
PYTHON
holds 'JSON: the edit' python3 -B judge.py
edit later.yaml fence.yaml 's/region: (burst|back porch|breezeway)/region: "```` \1 <b>"/'
compare 1 --markdown old fence.yaml
holds 'Markdown: a fence that no name ends' grep -Fxq '`````text' stdout
holds 'Markdown: the name is in the fence' sh -c 'sed "1,/^\`\`\`\`\`text/d; /^\`\`\`\`\`$/,\$d" stdout | grep -Fq "\`\`\`\` breezeway <b>"'
compare 0 --json tide-board-60.yaml old
holds 'JSON: no failures where none are' sh -c '! grep -q failures stdout'

# Names are the plan's, whatever they are, and no names of the images' come up; holds written otherwise, too.
edit later.yaml words.yaml 's/region: burst,/region: colour,/; s/picture/screen/; s/(at: )80\*\(row\/9\) \+ col/\1col + (row\/9)*0x50/'
compare 1 old words.yaml
holds 'in words of the plan: one change' grep -q 'says, 1 change;' unwrapped
says '"screen", "border": "colour", between "breezeway" and "back porch": 1 cell later (9 ticks, 0.629 us)'
# An edge between regions that do the same is none.
edit pier-clock.yaml porch.yaml 's/(repeat: 208, line: )picture/\1border/'
edit porch.yaml porch2.yaml 's/region: picture,( +)cells: 52/region: picture,\1cells: 51/; s/(region: front porch, )time: 1.9 us/\1time: 2.9 us/'
build_old porch.yaml
compare 0 old porch2.yaml
holds 'an edge that no pin sees' grep -q ': the images do what the plan says; the images are the same bytes$' unwrapped

# Frames: blocks, lines that came, other holds, another start, other levels.
build_old tide-board-60.yaml
edit tide-board-60.yaml blocks.yaml 's/repeat: 216/repeat: 215/; s/repeat: 25,/repeat: 26,/'
compare 1 old blocks.yaml
says 'block 2, "picture": 215 lines, was 216 lines'
says 'block 3, "border": 26 lines, was 25 lines'
holds 'blocks: nothing else' grep -q 'says, 2 changes;' unwrapped
edit tide-board-60.yaml held.yaml 's/scan: row%9/scan: row%9 + 1/'
compare 1 old held.yaml
says '"picture": "picture" holds scan: row%9 + 1, was row%9'
edit tide-board-60.yaml start.yaml 's/start: 0x8000/start: 0xF000/'
compare 1 old start.yaml
says 'start: 0xF000, was 0x8000'
edit tide-board-60.yaml levels.yaml 's/(load: .*active: )low/\1high/'
compare 1 old levels.yaml
says 'signal load: active high, was active low'
edit tide-board-60.yaml lead.yaml 's/lead: 1 cell/lead: 2 cells/'
compare 1 old lead.yaml
says 'signal load: lead 2 cells, was lead 1 cell'

# Rows of text that hold the same nine times: where a block begins, only all of its rows together tell. A line of its own before them, a block
# in two, and one that is cut elsewhere.
edit tide-board-60.yaml rows.yaml 's/ scan: row%9,//; s/ scan: 14..11,//; s/state: 16 bits/state: 17 bits/'
edit rows.yaml one.yaml 's/^(.*repeat: )216(, line: picture \}).*/\11\2\n&/'
edit rows.yaml two.yaml 's/^(.*repeat: )216(, line: picture \}).*/\1100\2\n\1116\2/'
edit rows.yaml other.yaml 's/^(.*repeat: )216(, line: picture \}).*/\180\2\n\1136\2/'
build_old rows.yaml
compare 1 old one.yaml
says 'block 2, "picture": new, 1 line'
holds 'a line of its own: nothing else' grep -q 'says, 1 change;' unwrapped
compare 1 old two.yaml
says 'block 2, "picture": 100 lines, was 216 lines'
says 'block 3, "picture": new, 116 lines'
holds 'a block in two: nothing else' grep -q 'says, 2 changes;' unwrapped
build_old one.yaml
compare 1 old rows.yaml
says 'old block 2, "picture": gone, was 1 line'
holds 'a line of its own is gone: nothing else' grep -q 'says, 1 change;' unwrapped
build_old two.yaml
compare 1 old rows.yaml
says 'block 2, "picture": 216 lines, was 100 lines'
says 'old block 3, "picture": gone, was 116 lines'
compare 1 old other.yaml
says 'block 2, "picture": 80 lines, was 100 lines'
says 'block 3, "picture": 136 lines, was 116 lines'
holds 'cut elsewhere: nothing else' grep -q 'says, 2 changes;' unwrapped

# Two stages, with a table and with counters.
build_old mooring-board.yaml
edit mooring-board.yaml quay.yaml 's/(region: sync, +cells: )12/\113/; s/(region: back porch, +cells: )6/\15/; s/repeat: 33/repeat: 32/'
compare 1 old quay.yaml
says '"picture", "border", "sync": edge between "sync" and "back porch": 1 cell later (8 ticks, 0.318 us)'
says 'block 2, "border": 32 lines, was 33 lines'
holds 'two stages: nothing else' grep -q 'says, 2 changes;' unwrapped
# A picture that was moved takes all its signals with it: they have no other lead. Where border was, no pin sees edges.
edit mooring-board.yaml moved.yaml 's/(region: back porch, +cells: )6/\17/; s/(region: front porch, cells: )2/\11/'
compare 1 old moved.yaml
says '"picture": "picture", between "back porch" and "front porch": 1 cell later (8 ticks, 0.318 us)'
never ' lead '
# Lines that are as many the other way round are no other level.
build_old suggests-frame.yaml
edit suggests-frame.yaml suggests.yaml 's/repeat: 2, line: dark/repeat: 3, line: dark/; s/repeat: 3, line: lit/repeat: 2, line: lit/'
compare 1 old suggests.yaml
says 'block 1, "dark": 3 lines, was 2 lines'
says 'block 2, "lit": 2 lines, was 3 lines'
never 'active high'
edit suggests-frame.yaml longer.yaml 's/repeat: 2, line: dark/repeat: 5, line: dark/'
compare 1 old longer.yaml
says 'block 1, "dark": 5 lines, was 2 lines'
never 'active high'
build_old mooring-board-counted.yaml
edit mooring-board-counted.yaml counted.yaml 's/(region: sync, +cells: )12/\111/'
compare 1 old counted.yaml
says '"picture", "border", "sync": "sync": 1 cell shorter (8 ticks, 0.318 us); the line is 1 cell shorter'

# More lines than are aligned one by one, each of them changed, and one gone.
cat >pier.yaml <<'PLAN'
scanlatch: 1
name: pier
clock: { master: 100 MHz, cell: 1 tick }
signals:
  hsync: { role: horizontal sync, active: low }
  blank: { role: blanking, active: high }
  load: { role: plain, active: high }
lines:
  picture:
    regions:
      - { region: sync, cells: 2, assert: [hsync, blank] }
      - { region: porch, cells: 3, assert: [blank] }
      - { region: picture, cells: 20, assert: [load] }
      - { region: front porch, cells: 3, assert: [blank] }
  border: { like: picture, change: [ { region: picture, assert: [blank] } ] }
frame: [ { repeat: 2500, line: picture }, { repeat: 90, line: border } ]
machine: { form: line-frame, line: { state: 5 bits }, frame: { state: 12 bits } }
chips: { line: { part: 28C64 }, frame: { part: 28C64 } }
PLAN
build_old pier.yaml
edit pier.yaml pier2.yaml 's/(region: porch, cells: )3/\14/; s/(region: front porch, cells: )3/\12/; s/2500/2499/'
compare 1 old pier2.yaml
says '"picture": "picture", between "porch" and "front porch": 1 cell later (1 tick, 0.01 us)'
says 'block 1, "picture": 2499 lines, was 2500 lines'

# Sets: the bank that differs. Of one plan in chips with banks, the bank that is not as the others.
build_old pilot-station.yaml
edit pilot-station-625.yaml pilot-other.yaml 's/(region: front porch, +cells: )4/\15/'
sed 's/pilot-station-625/pilot-other/' pilot-station.yaml >kit.yaml
compare 1 old kit.yaml
holds 'set: bank 0 has no changes' sh -c '! grep -q "^changes in bank 0$" stdout'
holds 'set: bank 1 has' grep -q '^changes in bank 1 (pilot-station-625)$' stdout
says '"picture", "border": "sync", between "front porch" and "back porch": 1 cell later (6 ticks, 0.444 us)'
says '"vertical": edge between "front porch" and "broad sync": 1 cell later (6 ticks, 0.444 us)'
compare 1 --markdown kit.yaml old
holds 'set, Markdown: bank 1 has changes' grep -q '^### changes in bank 1 (pilot-station-625)$' stdout
same 'set, Markdown: proofs of bank 1 alone' '### proofs of bank 1 (pilot-station-625)' "$(grep '^### proofs' stdout)"
compare 0 old pilot-station.yaml

# Damaged: a bit of a signal in one cell, of the next state so that the frame is cut short, so that it hangs.
build_old tide-board-60.yaml
cp -R old damaged
flip damaged/tide-board-60.rom2.bin $((0x1132)) 4
compare 1 damaged tide-board-60.yaml
holds 'a bit of a signal: one line is another' grep -Eq '^  old block 3, "picture 2": gone, was 1 line$' unwrapped
says 'line type "picture 2": gone, was 101 cells, 912 ticks'
holds 'a bit of a signal: where' grep -q '^FAIL  signals ' stdout
compare 1 tide-board-60.yaml damaged
says 'line type "picture 2": new, 101 cells, 912 ticks'
rm -r damaged
cp -R old damaged
flip damaged/tide-board-60.rom0.bin $((0x45A9)) 2
compare 1 damaged tide-board-60.yaml
says 'line type "picture 2": gone, was 97 cells, 876 ticks'
flip damaged/tide-board-60.rom0.bin $((0x813)) 4
compare 1 damaged tide-board-60.yaml
says 'changes cannot be told: no raster: signal "sync" is asserted nowhere in the images'"'"' loop of 16 cells'
never 'picture 2'
compare 1 --markdown damaged tide-board-60.yaml
holds 'Markdown: why' grep -q '^| changes cannot be told | no raster: signal "sync" is asserted nowhere' stdout
compare 1 --json damaged tide-board-60.yaml
holds 'JSON: why' grep -q '"changes_unknown": "no raster: ' stdout

# Nothing to tell lines by, codes that are not known, and images that are not of this size.
edit direct.yaml plain.yaml 's/role: composite sync/role: plain/'
build_old plain.yaml
flip old/direct.rom0.bin 1 4
compare 1 plain.yaml old
holds 'no sync: why' grep -q '^  changes cannot be told: no signal of the board has role composite sync or horizontal sync' unwrapped
build_old codes-auto.yaml
flip old/codes-auto.rom0.bin 0 0
compare 1 codes-auto.yaml old
holds 'codes: auto: read by those of the proofs, or why not' grep -Eq '^(lines|frame|  changes)' unwrapped
build_old tide-board-60.yaml
truncate -s -1 old/tide-board-60.rom1.bin
compare 2 old tide-board-60.yaml
holds 'images of the wrong size' grep -q 'image-size' stderr

# Images whose loop is as planned, but to which not all states lead: the row of state 5 leads to itself.
build_old direct.yaml
flip old/direct.rom0.bin 5 0
flip old/direct.rom0.bin 5 2
compare 1 direct.yaml old
says 'changes: none in what the images'"'"' loop shows and holds'
finish
