#!/bin/bash
# Pictures on the command line: options, files, text for terminals of several widths, names that look like markup, and bounds.
set -u
. tests/report.sh

cases=$PWD/tests/command/draw
plans=$PWD/plans
work=$(mktemp -d) || exit 1
trap 'chmod -R u+w "$work"; rm -rf "$work"' EXIT
cp "$cases"/* "$work"
cd "$work" || exit 1
unset COLUMNS

# ends NAME STATUS ARGUMENT …: the exit status; leaves stdout and stderr in files.
ends() {
	local name=$1 wanted=$2
	shift 2
	"$SCANLATCH" draw "$@" >stdout 2>stderr </dev/null
	same "$name: exit status" "$wanted" $?
}

# refuses NAME TEXT ARGUMENT …: exit 2, nothing drawn, TEXT in the first line of standard error.
refuses() {
	local name=$1 text=$2
	shift 2
	ends "$name" 2 "$@"
	same "$name: stdout" '' "$(cat stdout)"
	same "$name: stderr" "$text" "$(head -n 1 stderr)"
}

# Bad options.
refuses 'nothing' 'scanlatch draw: wanted what to draw (line, frame, table or phase) and a plan, found nothing'
refuses 'unknown picture' 'scanlatch draw: there is no picture of "screen": wanted line, frame, table or phase' screen jetty.yaml
refuses 'no plan' 'scanlatch draw: wanted one plan, found 0' line
refuses 'two plans' 'scanlatch draw: wanted one plan, found 2' line jetty.yaml jetty.yaml
refuses 'a line of a frame' 'scanlatch draw: --line is for draw line, not for draw frame' frame jetty.yaml --line 3
refuses 'text of a table' 'scanlatch draw: --text is for draw line, not for draw table' table jetty.yaml --text
refuses 'ASCII of an SVG' 'scanlatch draw: --ascii is for draw line with --text' line jetty.yaml --ascii
refuses 'an interleaved line' 'scanlatch draw: --interleave is for draw frame, not for draw line' line jetty.yaml --interleave
refuses 'no file' 'scanlatch draw: -o: wanted the name of a file, found nothing' line jetty.yaml -o ''
refuses 'a bank in words' 'scanlatch draw: --bank: wanted a number from 0 to 255, found "left"' frame jetty.yaml --bank left
refuses 'a negative bank' 'scanlatch draw: --bank: wanted a number from 0 to 255, found "-1"' frame jetty.yaml --bank=-1
refuses 'a bank of half a number' 'scanlatch draw: --bank: wanted a number from 0 to 255, found "1x"' frame jetty.yaml --bank 1x
refuses 'a bank beyond all' 'scanlatch draw: --bank: wanted a number from 0 to 255, found "256"' frame jetty.yaml --bank 256
refuses 'there is no JSON' "scanlatch draw: unrecognized option '--json'" line jetty.yaml --json
refuses 'an empty name of a line' 'jetty.yaml: error: there is no line type "" [unknown-line]' line jetty.yaml --line ''
refuses 'a negative line' 'jetty.yaml: error: there is no line type "-1" [unknown-line]' line jetty.yaml --line=-1
refuses 'a line beyond all numbers' 'jetty.yaml: error: there is no line type "99999999999999999999" [unknown-line]' \
	line jetty.yaml --line 99999999999999999999
sed 's/^frame:/  idle: { like: bells }\nframe:/' jetty.yaml >idle.yaml
ends 'a type of no line' 2 line idle.yaml --line idle
holds 'a type of no line: says so' grep -qF 'line type "idle" is in no line of the frame [not-drawn]' stderr
ends 'a bad plan' 2 line /dev/null
ends 'no such plan' 3 line none.yaml

# Files.
ends 'into a file' 0 line jetty.yaml -o out.svg
same 'into a file: says so' "wrote out.svg ($(stat -c %s out.svg) bytes)" "$(cat stdout)"
ends 'once more' 0 line jetty.yaml --output=out.svg
same 'once more: kept' "kept  out.svg ($(stat -c %s out.svg) bytes)" "$(cat stdout)"
ends 'to standard output' 0 line jetty.yaml
holds 'to standard output: the same' cmp stdout out.svg
ends '- is standard output' 0 line jetty.yaml -o -
holds '- is standard output: the same' cmp stdout out.svg
"$SCANLATCH" draw line - <jetty.yaml >stdout
holds 'from standard input: the same' cmp stdout out.svg
ends 'folders are made' 0 frame jetty.yaml -o new/folder/frame.svg
holds 'folders are made: the file is there' test -s new/folder/frame.svg
ends 'an absolute path' 0 frame jetty.yaml -o "$work/absolute.svg"
holds 'an absolute path: the file is there' test -s absolute.svg
ends 'a folder in the place of the file' 3 line jetty.yaml -o new
holds 'a folder in the place of the file: says so' grep -q '^scanlatch: cannot create \./new: Is a directory; nothing was written$' stderr
ends 'a file in the place of the folder' 3 line jetty.yaml -o out.svg/line.svg
holds 'a file in the place of the folder: says so' grep -q '^scanlatch: cannot make directory out.svg: ' stderr
ends 'a name that ends in a slash' 3 line jetty.yaml -o new/
same 'no temporary is left' '' "$(find . -name '.*' -type f)"
if [ -w /dev/full ]; then
	"$SCANLATCH" draw line jetty.yaml >/dev/full 2>stderr
	same 'a full device: exit status' 3 $?
	holds 'a full device: says so' grep -q '^scanlatch: cannot write standard output' stderr
fi

# Which line.
title() {
	sed -n 's/^<title id="picture-title">\(.*\)<\/title>$/\1/p' stdout
}
ends 'a line of a number' 0 line "$plans/tide-board-60.yaml" --line 17
same 'a line of a number: its title' 'tide-board-60, line 17, &quot;border&quot;: 101 cells, 912 ticks, 63.695 us' "$(title)"
ends 'a line of a type' 0 line "$plans/tide-board-60.yaml" --line vertical
same 'a line of a type: between others of it' 'tide-board-60, line 260, &quot;vertical&quot;: 101 cells, 912 ticks, 63.695 us' "$(title)"
ends 'no line named' 0 line "$plans/tide-board-60.yaml"
same 'no line named: of the commonest type' 'tide-board-60, line 19, &quot;picture&quot;: 101 cells, 912 ticks, 63.695 us' "$(title)"
sed 's/bells/12/g' jetty.yaml >numbered.yaml
ends 'a type whose name is a number' 0 line numbered.yaml --line 12
same 'a type whose name is a number: goes before the line' 'jetty, line 0, &quot;12&quot;: 64 cells, 650 ticks, 65.000 us' "$(title)"

# Banks.
ends 'a set' 0 frame "$plans/pilot-station.yaml"
same 'a set: bank 0' 'pilot-station-525, frame: 262 lines, 37466 cells, 16.652 ms, 60.054 Hz' "$(title)"
ends 'a bank' 0 frame "$plans/pilot-station.yaml" --bank 1
same 'a bank: its plan' 'pilot-station-625, frame: 312 lines, 44928 cells, 19.968 ms, 50.08 Hz' "$(title)"
ends 'the table of a bank' 0 table "$plans/pilot-station.yaml" --bank 1
holds 'the table of a bank: names all' grep -q '>bank 0: pilot-station-525<' stdout
holds 'the table of a bank: says which' grep -q 'this picture is bank 1' stdout

# Text, for terminals of several widths.
for columns in 40 80 200; do
	same "text, $columns columns" "$(cat jetty-$columns.txt)" "$(COLUMNS=$columns "$SCANLATCH" draw line jetty.yaml --text)"
	same "text, $columns columns: no line is longer" '' \
		"$(python3 -c 'import sys; print("".join(line for line in open(sys.argv[1], encoding="utf-8") if len(line) > 1 + int(sys.argv[2])), end="")' \
			jetty-$columns.txt $columns)"
done
same 'text in ASCII' "$(cat jetty-80-ascii.txt)" "$(COLUMNS=80 "$SCANLATCH" draw line jetty.yaml --text --ascii)"
for plan in "$plans"/*.yaml; do
	same "ASCII alone: $(basename "$plan")" '' "$("$SCANLATCH" draw line "$plan" --text --ascii | LC_ALL=C grep '[^ -~]')"
done
same 'text without a width: 80 columns' "$(cat jetty-80.txt)" "$("$SCANLATCH" draw line jetty.yaml --text)"
for columns in '' 0 -5 many 80x 99999; do
	same "COLUMNS=\"$columns\" counts as none" "$(cat jetty-80.txt)" "$(COLUMNS=$columns "$SCANLATCH" draw line jetty.yaml --text)"
done
cat >terminal.py <<'PYTHON'
"""Runs a command on a terminal of 40 columns."""
import fcntl, os, pty, struct, sys, termios
process, terminal = pty.fork()
if process == 0:
    fcntl.ioctl(1, termios.TIOCSWINSZ, struct.pack("HHHH", 24, 40, 0, 0))
    os.execv(sys.argv[1], sys.argv[1:])
seen = b""
try:
    while part := os.read(terminal, 65536):
        seen += part
except OSError:
    pass
sys.stdout.buffer.write(seen.replace(b"\r\n", b"\n"))
PYTHON
same "the terminal's own width" "$(cat jetty-40.txt)" "$(python3 terminal.py "$SCANLATCH" draw line jetty.yaml --text)"
sed '1a standard: { limits: { horizontal sync width: 4.7 us +- 0.2 us, back porch: at least 4 us } }' jetty.yaml >limits.yaml
same 'limits as text' 'limits of own, grade monitor
MISSED horizontal sync width 5.000 us, allowed 4.500 us to 4.900 us
kept back porch 5.000 us, allowed at least 4.000 us' "$("$SCANLATCH" draw line limits.yaml --text | tail -n 3)"
ends 'limits as bars' 0 line limits.yaml
holds 'limits as bars: missed' grep -q 'data-item="horizontal sync width" data-value="1/200000" data-low="9/2000000" data-high="49/10000000" data-unit="s" data-kept="0"' stdout
holds 'limits as bars: kept' grep -q 'data-item="back porch" data-value="1/200000" data-low="1/250000" data-unit="s" data-kept="1"' stdout

# Names that look like markup, and the same picture with harmless names of the same length.
sed -e "s|note: .*|note: '</desc><script>alert(1)</script> \& \"quotes\" ]]>'|" -e "s|back porch|'<script>\&\&'|" -e "s|bells|'<b>\&x'|" \
	-e "s|front porch|'\&amp;</text>'|" jetty.yaml >hostile.yaml
sed -e "s|note: .*|note: 'oodescoooscriptoalerto1ooooscripto o oquoteso ooo'|" -e "s|back porch|'oscriptooo'|" -e "s|bells|'oboox'|" \
	-e "s|front porch|'oampoootexto'|" jetty.yaml >harmless.yaml
cat >structure.py <<'PYTHON'
"""The elements of a picture with the names of their attributes."""
import sys
import xml.etree.ElementTree as ElementTree
for element in ElementTree.parse(sys.argv[1]).iter():
    print(element.tag, sorted(element.attrib))
PYTHON
for what in line frame table; do
	"$SCANLATCH" draw $what hostile.yaml >hostile.svg
	"$SCANLATCH" draw $what harmless.yaml >harmless.svg
	holds "markup in names, $what: well-formed" xmllint --noout hostile.svg
	same "markup in names, $what: no script" 0 "$(grep -c '<script' hostile.svg)"
	same "markup in names, $what: nothing else changes" "$(python3 structure.py harmless.svg)" "$(python3 structure.py hostile.svg)"
done
holds 'markup in names: the names are there' grep -q '&lt;b&gt;&amp;x' hostile.svg
"$SCANLATCH" draw line hostile.yaml >hostile.svg
holds 'markup in names: regions too' grep -q 'data-region="&amp;amp;&lt;/text&gt;"' hostile.svg

# Bounds: the picture of the issue, and plans at the limits.
below() {
	holds "$1: below $2 bytes" test "$(stat -c %s "$3")" -lt "$2"
	holds "$1: well-formed" xmllint --huge --noout "$3"
}
"$SCANLATCH" draw frame "$plans/tide-board-60.yaml" -o frame.svg >/dev/null
below 'a frame of 262 lines of 101 cells' 100000 frame.svg
cat >long.head <<'PLAN'
scanlatch: 1
name: breakwater
clock: { master: 10 MHz, cell: 1 tick }
signals:
  sync: { role: composite sync, active: low }
  blank: { role: blanking, active: high }
machine: { form: line-frame, line: { state: 4 bits }, frame: { state: 20 bits } }
parts: { WIDE24: { address pins: 24, data pins: 16, access: [10 ns] } }
chips: { line: { part: WIDE24 }, frame: { part: WIDE24 } }
lines:
  a: { regions: [ { region: s, cells: 2, assert: [sync, blank] }, { region: p, cells: 8 } ] }
  b: { regions: [ { region: s, cells: 3, assert: [sync, blank] }, { region: p, cells: 7 } ] }
frame:
PLAN
{
	cat long.head
	for ((block = 0; block < 2000; block++)); do
		printf '  - { repeat: 250, line: a }\n  - { repeat: 250, line: b }\n'
	done
} >long.yaml
"$SCANLATCH" draw frame long.yaml -o long.svg >/dev/null
below 'a frame of 1,000,000 lines' 1000000 long.svg
holds 'a frame of 1,000,000 lines: blocks are left out' grep -q '3976 smaller blocks are not named' long.svg
{
	cat long.head
	for ((block = 0; block < 8000; block++)); do
		printf '  - { repeat: 1, line: a }\n  - { repeat: 1, line: b }\n'
	done
} >alternating.yaml
"$SCANLATCH" draw frame alternating.yaml -o alternating.svg >/dev/null
below 'a frame of 16,000 lines that alternate' 1000000 alternating.svg
holds 'a frame of 16,000 lines that alternate: says what is left out' \
	grep -q 'left out, for want of room: all but one of [0-9]* lines' alternating.svg
"$SCANLATCH" draw table long.yaml -o long-table.svg >/dev/null
below 'the table of 1,000,000 lines' 500000 long-table.svg
# A line of 12,000 regions, each of them an edge.
{
	sed '/^lines:/,$d; s/^machine: .*/machine: { form: loop, state: 15 bits }/; s/^chips: .*/chips: { part: WIDE24 }/' long.head
	printf 'lines:\n  a:\n    regions:\n'
	for ((region = 0; region < 6000; region++)); do
		printf '      - { region: s, cells: 1, assert: [sync] }\n      - { region: p, cells: 1 }\n'
	done
	printf 'frame: [ { repeat: 1, line: a } ]\n'
} >edges.yaml
"$SCANLATCH" draw line edges.yaml -o edges.svg >/dev/null
below 'a line of 12,000 edges' 500000 edges.svg
holds 'a line of 12,000 edges: says so' grep -q 'more than 1999 edges: too close to be drawn' edges.svg
holds 'a line of 12,000 edges: regions are left out' grep -q 'regions are not named or not drawn, for want of room' edges.svg
"$SCANLATCH" draw frame edges.yaml -o edges-frame.svg >/dev/null
below 'its frame' 500000 edges-frame.svg
ends 'a line of 12,000 edges as text' 0 line edges.yaml --text
holds 'a line of 12,000 edges as text: below 20,000 bytes' test "$(stat -c %s stdout)" -lt 500000
holds 'a line of 12,000 edges as text: a column is several cells' grep -q '^a column is [0-9]* cells, and .* where they differ' stdout

finish
