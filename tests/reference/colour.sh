#!/bin/bash
# Colour against figures from outside: plans with the line lengths of published systems; then the plans of the tree and a few
# hundred random ones, worked out anew in Python (oracle_colour.py). ORACLE_FIRST and ORACLE_COUNT choose other random plans.
#
#     S170   SMPTE 170M-2004, 11.1 and 11.2: 315/88 MHz, 455/2 cycles a line
#     S244   SMPTE 244M-2003, 4.1.1: 910 clocks of four times the subcarrier in a line
#     B470   Rec. ITU-R BT.470-6 (1998), table 2, 2.11: 4 433 618.75 Hz, 1135/4 + 1/625 cycles a line
#     B601   Rec. ITU-R BT.601-5 (1995), 13.5 MHz: 858 and 864 samples in a line of 525 and of 625
#     E3280  EBU Tech. 3280-E (1995), 1.2: 1135 samples in a line, 1137 in lines 313 and 625
# Lines of 912 and 1136 ticks of four times the subcarrier: common practice, no source.
set -u
. tests/report.sh

first=${ORACLE_FIRST:-1}
count=${ORACLE_COUNT:-300}
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
# Debian's, for its python3-yaml.
python=/usr/bin/python3

# board NAME CLOCK CELLS FRAME: lines of so many cells; those of type "long" have one cell stretched.
board() {
	cat >"$work/$1.yaml" <<PLAN
scanlatch: 1
name: $1
clock: { $2 }
signals:
  sync: { role: composite sync, active: low }
  wide: { role: stretch, active: high }
lines:
  usual: { regions: [ { region: sync, cells: 9, assert: [sync] }, { region: rest, cells: $(($3 - 9)) } ] }
  long:
    like: usual
    change: [ { region: rest, stretch: 1 } ]
frame: [ $4 ]
machine:
  form: line-frame
  line: { state: 8 bits }
  frame: { state: 10 bits }
chips: { line: { part: 28C16, speed: 150 ns }, frame: { part: 28C16, speed: 150 ns } }
PLAN
	"$SCANLATCH" check --json "$work/$1.yaml" >"$work/$1.json" 2>"$work/stderr"
	same "$1: check runs" 0 $?
}

# value NAME PYTHON: of what check said of that plan; C is its colour, P(line) the phase at a line's start.
value() {
	"$python" -B - "$work/$1.json" "$2" <<'PYTHON'
import json, sys
sys.path.insert(0, "tests/reference")
from oracle_colour import laid_out
document = json.load(open(sys.argv[1], encoding="utf-8"))
C = document["proofs"]["colour"]
P = lambda *lines: " ".join(str(laid_out(C["phases"], line + 1)[line]) for line in lines)
print(eval(sys.argv[2]))
PYTHON
}

# reads NAME CYCLES LINES FRAMES: cycles of the first line, and after how many lines and frames the phase repeats.
reads() {
	same "$1: cycles and repeats" "$2 $3 $4" \
		"$(value "$1" '" ".join(str(C[key]) for key in ["cycles_per_line", "repeats_lines", "repeats_frames"])')"
	same "$1: cycles of the line type" "$2" "$(value "$1" 'document["lines"][0]["cycles"]')"
}

# S244, S170: half a cycle more than whole, and two frames of 525 lines. So of 262 lines one frame is whole, of 263 two are.
fourfold='master: 315/22 MHz, subcarrier: master / 4'
board samples-910 "$fourfold, cell: 10 ticks, stretch: 2 ticks, phase: every 2 frames" 91 '{ repeat: 525, line: usual }'
reads samples-910 455/2 2 2
same '910 ticks: phases' '0 1/2 0 1/2 0' "$(value samples-910 'P(0, 1, 2, 3, 524)')"
same '910 ticks: the second frame begins half a cycle on' '1/2 0' "$(value samples-910 'P(525, 526)')"
board field-262 "$fourfold, cell: 10 ticks, stretch: 2 ticks, phase: every frame" 91 '{ repeat: 262, line: usual }'
reads field-262 455/2 2 1
board field-263 "$fourfold, cell: 10 ticks, stretch: 2 ticks, phase: every 2 lines" 91 '{ repeat: 263, line: usual }'
reads field-263 455/2 2 2
# S170 with B601: the same at another clock.
board samples-858 'master: 13.5 MHz, subcarrier: 315/88 MHz, cell: 11 ticks, stretch: 2 ticks, phase: every 2 lines' 78 \
	'{ repeat: 525, line: usual }'
reads samples-858 455/2 2 2

# Common practice, no source: 228 cycles, 15,699.76 Hz, the same on every line.
board samples-912 "$fourfold, cell: 8 ticks, stretch: 2 ticks, phase: every line" 114 '{ repeat: 262, line: usual }'
reads samples-912 228 1 1
same '912 ticks: lines a second' 15699.76 \
	"$(value samples-912 '"%.2f" % (document["frame"]["lines"] * document["frame"]["rate"]["decimal"])')"
same '912 ticks: phases' '0 0 0 0 0' "$(value samples-912 'P(0, 1, 2, 261, 262)')"
# Two ticks more in the last line: the frame is out of step with itself.
sed 's/repeat: 262, line: usual }/repeat: 261, line: usual }, { repeat: 1, line: long }/' "$work/samples-912.yaml" \
	>"$work/samples-914.yaml"
"$SCANLATCH" check --json "$work/samples-914.yaml" >"$work/samples-914.json"
same '914 ticks once: check says so' 1 $?
same '914 ticks once: phases' '0 0 0 1/2 1/2 0' "$(value samples-914 'P(0, 260, 261, 262, 523, 524)')"
same '914 ticks once: the first line out of step' "{'line': 0, 'frame': 1, 'by': '1/2'}" "$(value samples-914 'C["out_of_step"]')"

# B470: 283.7516 cycles in each line, at B601's 864 samples; 0.7516 of a cycle on from line to line, 3/4 from frame to frame.
board samples-864 'master: 13.5 MHz, subcarrier: 4.43361875 MHz, cell: 8 ticks, stretch: 2 ticks, phase: every 4 frames' 108 \
	'{ repeat: 625, line: usual }'
reads samples-864 "$("$python" -c 'from fractions import Fraction; print(Fraction(1135, 4) + Fraction(1, 625))')" 2500 4
same '864 samples: 283.7516 cycles' 283.7516 "$(value samples-864 'C["cycles_per_line_rounded"]')"
same '864 samples: phases' '0 1879/2500 629/1250 3/4 1/2 1/4 0' "$(value samples-864 'P(0, 1, 2, 625, 1250, 1875, 2500)')"
# E3280: the 1/625 of all lines is in two lines of the frame, 2 samples each; a frame is the same 709379/4 cycles.
board samples-1135 'master: 17.734475 MHz, subcarrier: master / 4, cell: 5 ticks, stretch: 2 ticks, phase: every 4 frames' 227 \
	'{ repeat: 312, line: usual }, { repeat: 1, line: long }, { repeat: 311, line: usual }, { repeat: 1, line: long }'
reads samples-1135 1135/4 2500 4
same '1135 samples: cycles of the long lines' 1137/4 "$(value samples-1135 'document["lines"][1]["cycles"]')"
same '1135 samples: a frame as B470 has it' 709379/4 "$(value samples-1135 'C["cycles_per_frame"]')"
same '864 samples: the same frame' 709379/4 "$(value samples-864 'C["cycles_per_frame"]')"
same '1135 samples: phases' '0 3/4 1/2 1/4 0 0 1/4 1/2 3/4' "$(value samples-1135 'P(0, 1, 2, 3, 4, 312, 313, 624, 625)')"
# Common practice, no source: 284 cycles.
board samples-1136 'master: 17.734475 MHz, subcarrier: master / 4, cell: 8 ticks, stretch: 2 ticks, phase: every line' 142 \
	'{ repeat: 312, line: usual }'
reads samples-1136 284 1 1

# Every plan anew.
mkdir "$work/plans"
holds 'plans are made' "$python" -B tests/reference/generate.py "$work/plans" "$first" "$count"
holds 'plans are coloured' "$python" -B tests/reference/generate_colour.py "$first" "$work"/plans/*.yaml
mapfile -t examples < <(grep -L "^scanlatch-set" plans/*.yaml)
cp "${examples[@]}" "$work"/samples-*.yaml "$work/plans"
for plan in "$work"/plans/*.yaml; do
	timeout -k 5 60 "$SCANLATCH" check --json "$plan" >"$plan.json" 2>"$work/stderr" </dev/null
done
"$python" -B tests/reference/oracle_colour.py "$work"/plans/*.yaml >"$work/verdicts"
while IFS= read -r line; do
	case $line in
	'ok '* | 'refused '*) pass ;;
	*) fail "$line" ;;
	esac
done <"$work/verdicts"
same 'every plan was judged' "$(find "$work/plans" -name '*.yaml' | wc -l)" "$(wc -l <"$work/verdicts")"

# at_least NUMBER PATTERN: so many verdicts are of that kind, or the random plans test too little.
at_least() {
	local found
	found=$(grep -c "$2" "$work/verdicts")
	holds "at least $1 verdicts like '$2', found $found" test "$found" -ge "$1"
}
at_least $((count / 5)) '^ok .*: uniform'
at_least $((count / 5)) '^ok .*: uneven'
at_least $((count / 5)) '^ok .*pass'
at_least $((count / 5)) '^ok .*fail'
at_least $((count / 5)) '^ok .*repeats later'
at_least $((count / 20)) '^ok .*free'
at_least $((count / 10)) '^ok .* [2-9] runs'

finish
