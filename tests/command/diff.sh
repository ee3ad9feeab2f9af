#!/bin/bash
# What diff takes and prints: text, Markdown, JSON and a picture, sets, folders of images as OLD or NEW, standard input; and what it refuses.
set -u
. tests/report.sh

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
cp plans/*.yaml "$work"
cp tests/bad/unknown-key.yaml "$work/bad.yaml"
cd "$work" || exit 1
# Without a standard, and its stretched cell in sync.
sed -i -E '/^(standard|grade):/d; s/(region: back porch, .*\[blank\]), *stretch: auto/\1/; s/(region: serration, +)cells: 5/\1time: 4.7 us/' tide-board-60.yaml

# compare STATUS ARGUMENT …: leaves stdout and stderr in files.
compare() {
	local wanted=$1
	shift
	"$SCANLATCH" diff "$@" >stdout 2>stderr </dev/null
	same "diff $*: exit status" "$wanted" $?
	sed -z 's/\n    / /g' stdout >unwrapped
	case $wanted in
	0 | 1) holds "diff $*: a report" test -s stdout ;;
	*)
		same "diff $*: nothing on standard output" '' "$(cat stdout)"
		holds "diff $*: words on standard error" test -s stderr
		;;
	esac
}

# says TEXT: a line of the last report, whole but for indentation.
says() {
	holds "says: $1" grep -Fxq "  $1" unwrapped
}

# edit OLD NEW SED: an edited plan, and that it is one.
edit() {
	sed -E "$3" "$1" >"$2"
	holds "$2 is another text" sh -c '! cmp -s "$0" "$1"' "$1" "$2"
}

# One moved edge is one change in both line types; two cells of 18 + 216 + 25 lines, each twice, as A16 is open. First what
# matters at the bench.
edit tide-board-60.yaml later.yaml 's/(region: breezeway, +cells: )1/\12/'
compare 1 tide-board-60.yaml later.yaml
same 'the whole report' 'tide-board-60.yaml to later.yaml: another timeline, 1 change; the images are not the same bytes
  musts: all hold, the frame closes, as before
  frame: 262 lines, 26462 cells, 238944 ticks, 59.923 Hz, as before
  colour: in step as asked, 228 cycles a line, repeats after 1 line and 1 frame, as before
  speed of the chips: in time, 422.571 ns to spare, as before
chips
  rom0: stays as it is
  rom1: stays as it is
  rom2: burn it again, 1036 of 131072 bytes differ, the first at 0x788
lines
  "picture", "border": "burst", between "breezeway" and "back porch": 1 cell later (9 ticks, 0.629
    us)' "$(cat stdout)"
compare 1 later.yaml tide-board-60.yaml
says '"picture", "border": "burst", between "breezeway" and "back porch": 1 cell earlier (9 ticks, 0.629 us)'

# The same plan in other words: like written out, other units, another order of keys and of line types, comments.
cat >words.yaml <<'PLAN'
scanlatch: 1   # the same
frame: [ { line: border, repeat: 10 }, { line: border, repeat: 8 }, { repeat: 0xD8, line: picture }, { repeat: 25, line: border },
  { repeat: 3, line: vertical } ]
PLAN
sed -n '/^name:/,/^lines:/p' tide-board-60.yaml | sed 's/cell: 9 dots/cell: 9 ticks/; s/315.22 MHz/157500\/11 kHz/; /^lines:/d' >>words.yaml
cat >>words.yaml <<'PLAN'
lines:
  vertical: { regions: [ { region: front porch, cells: 2, assert: [blank] }, { region: broad sync, cells: 92, assert: [sync, blank], stretch: 1 },
    { region: serration, time: 4700 ns, assert: [blank] } ] }
  border:
    regions: &regions
      - { region: front porch, cells: 2,      assert: [blank] }
      - { region: sync,        cells: 7,      assert: [sync, blank], stretch: 1 }
      - { region: breezeway,   cells: 1,      assert: [blank] }
      - { region: burst,       time: 2510 ns, assert: [burst, blank] }
      - { region: back porch,  cells: 7,      assert: [blank] }
      - { region: picture,     cells: 80,     assert: [blank] }
  picture:
    like: border
    change: [ { region: picture, assert: [load], hold: { at: col + (row/9)*0x50, scan: row % 9, page: 1-1 } } ]
machine: { outputs: registered, start: 32768, fields: { at: 10..0, scan: 14..11, page: 15..15 }, state: 16 bits, form: loop }
chips: { speed: 120 ns, part: 28C010 }
timing: { margin: 1/50 us, share: 1/1 }
PLAN
sed -i 's/repeat: 0xD8/repeat: 216/; s/&regions//' words.yaml
compare 0 tide-board-60.yaml words.yaml
same 'the same in other words' 'tide-board-60.yaml to words.yaml: same timeline, nothing changed; the images are the same bytes' "$(head -n 1 stdout)"
# Line types in another order have other kinds, so other bytes: the chips need not be burned for that.
{
	sed '/^lines:/,$d' mooring-board.yaml
	printf 'lines:\n  border:\n    regions:\n'
	sed -n '/region: sync, .*cells: 12/,/region: front porch, cells: 2/p' mooring-board.yaml | sed 's/assert: .load., hold: .*/assert: [blank] }/'
	printf '  picture: { like: border, change: [ { region: picture, assert: [load], hold: { column: col } } ] }\n'
	sed -n '/^  sync: /,$p' mooring-board.yaml
} >kinds.yaml
compare 0 mooring-board.yaml kinds.yaml
holds 'other kinds: the same timeline' grep -q ': same timeline, nothing changed; the images are not the same bytes$' unwrapped
holds 'other kinds: no chip must be burned' grep -q 'no chip must be burned again' stdout
holds 'other kinds: bytes differ' grep -Eq '^  rom0: [0-9]+ of 2048 bytes differ, the first at' stdout
# Words only.
edit tide-board-60.yaml note.yaml 's/^note: .*/note: "tides\\nand <b>"/; s/region: burst,/region: colour burst,/'
compare 0 tide-board-60.yaml note.yaml
holds 'words only' grep -q 'same timeline, 2 changes in words only; the images are the same bytes$' unwrapped
says '"picture", "border": a region'"'"'s name: "colour burst", was "burst"'
says "the plan's note: tides?and <b>, was Tide and departure board of a small harbour, colour, 60 Hz"
# An edge between regions that do the same is words only, too.
edit pier-clock.yaml porch.yaml 's/region: front porch, time: 1.9 us/region: front porch, time: 1.9 us/; s/(repeat: 208, line: )picture/\1border/'
edit porch.yaml porch2.yaml 's/region: picture,( +)cells: 52/region: picture,\1cells: 51/; s/(region: front porch, )time: 1.9 us/\1time: 2.9 us/'
compare 0 porch.yaml porch2.yaml
holds 'an edge that no pin sees' grep -q 'same timeline, 1 change in words only;' unwrapped

# stretch: auto placed elsewhere by the limits of a standard that the plan names: a stretched cell moved.
edit tide-board-60.yaml auto.yaml 's/stretch: auto/stretch: 1/; s/(region: breezeway, .*blank\])/\1, stretch: 1/; s/(region: sync, .*), stretch: 1 \}/\1 }/'
compare 1 tide-board-60.yaml auto.yaml
says '"picture", "border": a stretched cell: in "breezeway", was in "sync"'

# Limits: which verdicts changed.
edit tide-board-60.yaml limits.yaml 's/^clock:/standard: composite-525\ngrade: monitor\n\nclock:/'
edit limits.yaml narrow.yaml 's/(region: sync, +)time: 4.7 us/\1time: 3.1 us/'
compare 1 limits.yaml narrow.yaml
holds 'a limit that is missed now' grep -Eq '^  horizontal sync width: MISSED \(3.*us, allowed .* us\), was kept \(.* us, allowed .*\)$' unwrapped
holds 'the limits as a whole' grep -Eq '^  limits: [0-9]+ of [0-9]+ kept at monitor grade of composite-525' stdout
compare 1 tide-board-60.yaml limits.yaml
holds 'a standard is new' grep -q '^  standard: new, composite-525$' stdout
# Against another standard or grade verdicts are summed up, so that what to burn stays near the top; the clock's accuracy is named where it misses.
says 'limits missed: 1 (serration width), was not judged'
says 'limits: 23 of 24 kept at monitor grade of composite-525, 1 not measured, was no standard'
edit limits.yaml studio.yaml 's/^grade: monitor/grade: studio/'
compare 1 limits.yaml studio.yaml
holds 'another grade: counts and names' grep -Eq '^  limits missed: [0-9]+ \(line rate, .*\), was 1 \(serration width\)$' unwrapped
same 'another grade: no verdict one by one' '' "$(grep -E 'was (kept|not judged)' stdout)"
compare 1 limits.yaml tide-board-60.yaml
says 'limits: no standard, was 23 of 24 kept at monitor grade of composite-525, 1 not measured'
holds 'no standard: no verdicts' sh -c '! grep -q "limits missed" stdout'
edit limits.yaml coarse.yaml 's/accuracy: 50 ppm/accuracy: 100 ppm/'
compare 1 limits.yaml coarse.yaml
says 'subcarrier: MISSED (3.579545 MHz by an exact clock, 3.579188 to 3.579903 at 100 ppm, allowed 3.579245 to 3.579845 MHz), was kept (3.579545 MHz, allowed 3.579245 to 3.579845 MHz)'

# Colour and musts that fail.
edit tide-board-60.yaml outofstep.yaml 's/, stretch: auto//; s/, stretch: 1 / /'
compare 1 tide-board-60.yaml outofstep.yaml
holds 'a must fails' grep -q '^  musts: FAIL: colour, was all hold, the frame closes$' stdout
holds 'colour is out of step' grep -q '^  colour: NOT in step as asked, 909/4 (227.25) cycles a line' stdout
compare 1 outofstep.yaml tide-board-60.yaml
holds 'a must holds again' grep -q '^  musts: all hold, the frame closes, was FAIL: colour$' stdout

# Clocks that differ: ticks and times by the new one.
edit later.yaml clock.yaml 's/master: 315.22 MHz/master: 14 MHz/; s/, stretch: auto/, stretch: 1/; s/phase: every line/phase: free/; s/subcarrier: master . 4/subcarrier: 315\/88 MHz/; s/time: 4.7 us/cells: 7/; s/time: 2.51 us/cells: 4/'
compare 1 tide-board-60.yaml clock.yaml
says '"picture", "border": "burst", between "breezeway" and "back porch": 1 cell later (9 ticks, 0.643 us, by the new clock)'

# A machine of another kind is compared as far as it goes.
compare 1 mooring-board.yaml pier-clock.yaml
says 'form: loop, was line-frame'
says 'line stage, state: 15 bits, was 7 bits'
says 'rom3: is not used any more'
says 'rom0: is another part, burn its 32768 bytes'
compare 1 pier-clock.yaml mooring-board.yaml
says 'rom3: is new, burn its 2048 bytes'
# A chip with another label is the same chip.
edit lock-gate-sign.yaml label.yaml 's/label: U4/label: U7/'
compare 0 lock-gate-sign.yaml label.yaml
says 'U7: was U4; stays as it is'

# Sets: bank by bank, the chips once.
edit pilot-station-625.yaml pilot-other.yaml 's/(region: front porch, +cells: )4/\15/'
sed 's/pilot-station-625/pilot-other/' pilot-station.yaml >kit.yaml
compare 1 pilot-station.yaml kit.yaml
holds 'set: bank 0 is the same' grep -q '^bank 0 (pilot-station-525)$' stdout
holds 'set: bank 1 has changes' grep -q '^changes in bank 1 (pilot-station-625)$' stdout
holds 'set: bank 0 has none' sh -c '! grep -q "^changes in bank 0 " stdout'
says '"picture", "border": "sync", between "front porch" and "back porch": 1 cell later (6 ticks, 0.444 us)'
compare 0 pilot-station.yaml pilot-station.yaml
sed 's/bank: 1 bit/bank: 2 bits/' pilot-station.yaml | sed 's/28C010/27C020/' >four.yaml
for file in pilot-station-525 pilot-station-625; do sed 's/28C010, speed: 150/27C020, speed: 150/' $file.yaml >four-$file.yaml; done
sed -i 's/: pilot-station-/: four-pilot-station-/g' four.yaml
compare 1 pilot-station.yaml four.yaml
holds 'set: banks that only one has' grep -q '^  only the new set has them$' stdout
holds 'set: they are named' grep -q '^banks 2 and 3 (pilot-station-525)$' stdout
compare 1 four.yaml pilot-station.yaml
holds 'set: banks that are gone' grep -q '^  only the old set has them$' stdout
compare 1 pilot-station.yaml pilot-station-525.yaml
holds 'a plan against a set' grep -q '^changes in bank 1 (pilot-station-525, was pilot-station-625)$' stdout
# What a set is apart from its plans: name and note are words; a bank that is not listed any more repeats bank 0.
edit pilot-station.yaml named.yaml 's/^name: .*/name: pilot-kit\nnote: for two harbours/'
compare 0 pilot-station.yaml named.yaml
holds 'set: words only' grep -q ': same timeline, 2 changes in words only; the images are the same bytes$' unwrapped
holds 'set: its note' grep -q "^  the set's note: new, for two harbours\$" stdout
holds 'set: its name' grep -q "^  the set's name: pilot-kit, was pilot-station\$" stdout
edit pilot-station.yaml single.yaml 's/, 1: pilot-station-625.yaml//'
compare 1 pilot-station.yaml single.yaml
holds 'set: a bank that is gone' grep -q '^  bank 1: a repeat of bank 0, was pilot-station-625$' stdout
holds 'set: what the bank shows' grep -q '^bank 1 (pilot-station-525, was pilot-station-625)$' stdout
compare 1 --markdown single.yaml pilot-station.yaml
holds 'set, Markdown: a bank that came' grep -q '^| in words only | bank 1 | pilot-station-625, was a repeat of bank 0 |$' stdout
holds 'set, picture: a bank that came' sh -c '"$SCANLATCH" diff --svg single.yaml pilot-station.yaml | grep -q ">bank 1: pilot-station-625, was a repeat of bank 0<"'
# Another part of the same size goes into the socket.
sed 's/28C010/27C010/' tide-board-60.yaml >part.yaml
compare 1 tide-board-60.yaml part.yaml
says 'rom0: is another part, burn its 131072 bytes'

# Images of the other side.
"$SCANLATCH" build tide-board-60.yaml -o images >/dev/null
compare 0 tide-board-60.yaml images
same 'images are the same' 'tide-board-60.yaml to images: the images do what the plan says; the images are the same bytes' "$(head -n 1 stdout)"
compare 0 images/ tide-board-60.yaml
same 'a folder with a slash' 'images to tide-board-60.yaml: the images do what the plan says; the images are the same bytes' "$(head -n 1 stdout)"
compare 0 tide-board-60.yaml "$PWD/images//"
same 'a folder with slashes' 'tide-board-60.yaml to images: the images do what the plan says; the images are the same bytes' "$(head -n 1 stdout)"
mkdir images/below
for folder in . ./ below/..; do
	(cd images && "$SCANLATCH" diff ../tide-board-60.yaml $folder) >stdout
	same "the folder $folder" 'tide-board-60.yaml to images: the images do what the plan says; the images are the same bytes' "$(head -n 1 stdout)"
done
"$SCANLATCH" build later.yaml -o images >/dev/null
compare 1 images tide-board-60.yaml
holds 'images of an older plan: a must fails' grep -q '^  musts in the images: FAIL: signals$' stdout
holds 'images of an older plan: which chip' grep -q '^  rom2: burn it again, 1036 of 131072 bytes differ' stdout
holds 'images of an older plan: where' grep -q '^FAIL  signals ' stdout
compare 1 --json images tide-board-60.yaml
"$SCANLATCH" build pilot-station.yaml -o images >/dev/null
compare 0 pilot-station.yaml images
# Images that do the same in another allotment of states: see prove.sh.
sed 's/^name: .*/name: unused-line/' "$OLDPWD/tests/good/unused-line.yaml" >unused-line.yaml
mkdir other
printf '\xfe\xff\xfd\xf8' >other/unused-line.rom0.bin
compare 0 unused-line.yaml other
says 'rom0: 3 of 4 bytes differ, the first at 0x0'
holds 'another allotment: nothing to burn' grep -q 'no chip must be burned again' stdout

# Standard input.
"$SCANLATCH" diff - later.yaml <tide-board-60.yaml >stdout 2>stderr
same 'standard input: status' 1 $?
holds 'standard input: its name' grep -q '^standard input to later.yaml: another timeline, 1 change' stdout
"$SCANLATCH" diff tide-board-60.yaml - <tide-board-60.yaml >stdout 2>stderr
same 'standard input as NEW: status' 0 $?

# Markdown: nothing that a plan says is markup.
compare 1 --markdown tide-board-60.yaml later.yaml
same 'Markdown' '**tide-board-60.yaml to later.yaml: another timeline, 1 change; the images are not the same bytes**

| at the bench |  |
|---|---|
| musts | all hold, the frame closes, as before |
| frame | 262 lines, 26462 cells, 238944 ticks, 59.923 Hz, as before |
| colour | in step as asked, 228 cycles a line, repeats after 1 line and 1 frame, as before |
| speed of the chips | in time, 422.571 ns to spare, as before |

| chip |  |
|---|---|
| rom0 | stays as it is |
| rom1 | stays as it is |
| rom2 | burn it again, 1036 of 131072 bytes differ, the first at 0x788 |

| | what | change |
|---|---|---|
| lines | "picture", "border": "burst", between "breezeway" and "back porch" | 1 cell later (9 ticks, 0.629 us) |' "$(cat stdout)"
compare 0 --markdown tide-board-60.yaml note.yaml
holds 'Markdown: escaped' grep -Fq 'tides?and \<b\>, was Tide' stdout
compare 1 --markdown pilot-station.yaml kit.yaml
holds 'Markdown: a set' grep -q '^### changes in bank 1 (pilot-station-625)$' stdout

# A picture: tests/reference/diff.sh reads such pictures back. Nothing that a plan says is markup, and what is too much is left out.
compare 1 --svg tide-board-60.yaml later.yaml
holds 'picture: XML' xmllint --noout stdout
holds 'picture: what to burn' grep -q '>rom2: burn it again, 1036 of 131072 bytes differ, the first at 0x788<' stdout
# By hand: 2 cells of 9 ticks, 7 with 3 more, 1: 93 ticks of 14.318182 MHz, and each cell later 9 more.
same 'picture: marks' 'burst begins at cell 11, 7.124 us; was at cell 10, 6.495 us: +1 cell
burst ends at cell 15, 9.638 us; was at cell 14, 9.010 us: +1 cell' "$(sed -n 's/^<title>\(burst .* cell\)<.*/\1/p' stdout | sort -u)"
compare 0 --svg tide-board-60.yaml note.yaml
holds 'picture: XML whatever the words' xmllint --noout stdout
holds 'picture: nothing differs' grep -q 'no line type that both frames have differs at the pins' stdout
compare 1 --svg pilot-station.yaml kit.yaml
holds 'picture: a set' grep -q '>bank 1 (pilot-station-625)<' stdout
compare 0 --svg later.yaml images
holds 'picture: images' xmllint --noout stdout
# What was lifted is cut into lines elsewhere, and is the same timeline.
"$SCANLATCH" lift later.yaml images >lifted.yaml
compare 1 later.yaml lifted.yaml
holds 'a lifted plan: the same timeline' grep -q ': same timeline, 4 changes; ' unwrapped
holds 'a lifted plan: cut elsewhere' grep -q '^  the frame is the same loop, begun at what was line 0, cell 2; its lines are cut elsewhere$' unwrapped
says 'start: 0x0781, was 0x8000'
# Without a start, images of either do for both: of frames that begin in the middle of a line, and with another block.
for side in later lifted; do sed '/^  start:/d' $side.yaml >$side-free.yaml; done
compare 0 later-free.yaml lifted-free.yaml
holds 'a lifted plan without a start: words only' grep -q ': same timeline, 3 changes in words only; the images are not the same bytes$' unwrapped
says 'no chip must be burned again, for either side'"'"'s do the same; but do not mix them: burn all that differ, or none'
"$SCANLATCH" build later-free.yaml -o free >/dev/null
compare 0 free lifted-free.yaml
sed -E '/repeat: 18/d; s/^( +- \{ repeat: 3,   line: vertical.*)/\1\n  - { repeat: 18,  line: border }/' later-free.yaml >turned.yaml
compare 1 later-free.yaml turned.yaml
holds 'blocks in another order: another timeline' grep -q ': another timeline, 1 change; ' unwrapped
says '18 lines of "border": block 4, was block 1'
holds 'blocks in another order: the images do' grep -q '^  no chip must be burned again' unwrapped
compare 0 free turned.yaml
# The same loop, one line of which is cut in two: what asks for something of every line may not be kept then, and that is a difference.
cat >whole-lines.yaml <<'PLAN'
scanlatch: 1
name: jetty
clock: { master: 315/22 MHz, cell: 6 ticks, subcarrier: master / 4, phase: every line }
signals: { sync: { role: composite sync, active: low } }
lines:
  whole: { regions: [ { region: sync, cells: 8, assert: [sync] }, { region: picture, cells: 106 } ] }
  start: { regions: [ { region: sync, cells: 8, assert: [sync] }, { region: picture, cells: 47 } ] }
  end:   { regions: [ { region: picture, cells: 59 } ] }
frame: [ { repeat: 4, line: whole } ]
machine: { form: loop, state: 11 bits }
chips: { part: 28C16 }
PLAN
sed 's/repeat: 4, line: whole }/repeat: 3, line: whole }, { repeat: 1, line: start }, { repeat: 1, line: end }/' whole-lines.yaml >cut-lines.yaml
compare 1 whole-lines.yaml cut-lines.yaml
holds 'a line cut in two: the same timeline' grep -q ': same timeline, ' unwrapped
says 'musts: FAIL: colour, was all hold, the frame closes'

# JSON, against the text.
compare 1 --json tide-board-60.yaml later.yaml
cat >judge.py <<'PYTHON'
import json
document = json.load(open("stdout", encoding="utf-8"))
assert list(document) == ["old", "new", "differs", "same_timeline", "same_bytes", "plans", "chips"], list(document)
plan, = document["plans"]
change, = plan["changes"]
assert plan["musts"] == {"old": [], "new": []} and plan["advice"] == {"old": [], "new": []}, plan
assert [fact["what"] for fact in plan["facts"]] == ["frame", "colour", "speed of the chips"], plan["facts"]
assert change == {"section": "lines", "kind": "region-moved", "lines": ["picture", "border"],
	"what": '"burst", between "breezeway" and "back porch"', "cells": 1, "ticks": "9", "shift_s": "11/17500000", "shift_us": 0.628571,
	"words": '"picture", "border": "burst", between "breezeway" and "back porch": 1 cell later (9 ticks, 0.629 us)'}, change
assert document["chips"][2] == {"label": "rom2", "fate": "burn", "bytes": 131072, "differing": 1036, "first": 0x788}, document["chips"]
PYTHON
holds 'JSON' python3 -B judge.py

# What it refuses. A plan that is bad is told of even if the other is bad too.
compare 2
compare 2 tide-board-60.yaml
compare 2 tide-board-60.yaml later.yaml words.yaml
compare 2 bad.yaml tide-board-60.yaml
compare 2 tide-board-60.yaml bad.yaml
sed 's/^name: .*/name: UPPER/' bad.yaml >worse.yaml
compare 2 bad.yaml worse.yaml
holds 'both are told of' sh -c 'grep -q "^bad.yaml:" stderr && grep -q "^worse.yaml:" stderr'
compare 2 images other
compare 2 tide-board-60.yaml images/pilot-station.rom0.bin
holds 'an image alone: what to give' grep -q '^scanlatch diff: "images/pilot-station.rom0.bin" looks like an image: .* folder' stderr
compare 2 images/pilot-station.rom0.hex tide-board-60.yaml
holds 'an image alone in HEX: what to give' grep -q '^scanlatch diff: "images/pilot-station.rom0.hex" looks like an image: .* folder' stderr
compare 2 bad.yaml tide-board-60.yaml
holds 'a bad plan is no image' sh -c '! grep -q "looks like" stderr'
compare 3 tide-board-60.yaml ''
holds 'no name at all' grep -q '^"": error: cannot read a plan: ' stderr
compare 2 images other
holds 'two folders' grep -q 'wanted at least one plan or set, found two folders' stderr
compare 2 - -
compare 2 --json --markdown tide-board-60.yaml later.yaml
compare 2 --git --json a
compare 2 --svg --json tide-board-60.yaml later.yaml
compare 2 tide-board-60.yaml other
holds 'a folder without images' grep -q 'image-missing' stderr
compare 2 mooring-board.yaml images
printf 'short' >other/tide-board-60.rom0.bin
compare 2 other tide-board-60.yaml
holds 'images of the wrong size' grep -q 'image-size' stderr
compare 3 tide-board-60.yaml missing.yaml
compare 3 missing.yaml tide-board-60.yaml
finish
