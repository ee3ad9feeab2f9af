#!/bin/bash
# The bring-up table of build sheets against an independent count: the second implementation (oracle.py) runs the images of the example plans
# and of random ones, and its pins are counted cell by cell; and against a published line rate.
set -u
. tests/report.sh
. tests/reference/judging.bash

work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
mkdir "$work/plans"

# Builds a plan and writes its sheet; prints the line for the judge if it was built.
sheet_line() {
	local plan=$1 folder
	folder=$work/$(basename "$plan" .yaml)
	build "$plan" "$folder" --format bin || return
	timeout -k 5 60 "$SCANLATCH" sheet "$plan" -o "$folder.html" >/dev/null 2>&1 || echo "no sheet of $plan" >&2
	printf '%s\t%s\t%s\n' "$plan" "$folder" "$folder.html"
}

holds 'loops are made' "$python" -B tests/reference/generate.py "$work/plans" 1 60
holds 'machines of two stages are made' "$python" -B tests/reference/generate_line_frame.py random "$work/plans" 1 60
holds 'all kinds of stages are made' "$python" -B tests/reference/generate_line_frame.py combinations "$work/plans"
mapfile -t examples < <(grep -L "^scanlatch-set" plans/*.yaml)
for plan in "${examples[@]}" "$work"/plans/*.yaml; do
	sheet_line "$plan"
done >"$work/pages"
"$python" -B tests/reference/sheet_bring_up.py <"$work/pages" >"$work/verdicts"
while IFS= read -r line; do
	case $line in
	ok*) pass ;;
	*) fail "$line" ;;
	esac
done <"$work/verdicts"
same 'every page was judged' "$(wc -l <"$work/pages")" "$(wc -l <"$work/verdicts")"
built=$(wc -l <"$work/pages")
holds "at least 120 pages, found $built" test "$built" -ge 120
holds 'some have counters' grep -q 'clear' <(cat "$work"/*.html)
holds 'some have spikes of an asynchronous clear' grep -q 'asynchronous clear adds' <(cat "$work"/*.html)

# SMPTE 170M-2004, 11.2: the line rate is the subcarrier's 315/88 MHz divided by 227.5, that is 4.5 MHz / 286 = 2,250,000/143 Hz. A
# line of 910 ticks of four times the subcarrier, with one pulse of sync, has it at its sync pin.
cat >"$work/line-rate.yaml" <<'PLAN'
scanlatch: 1
name: line-rate
clock: { master: 315/22 MHz, dot: 1 tick, cell: 10 dots, subcarrier: master / 4, phase: every 2 lines }
signals: { sync: { role: horizontal sync, active: low } }
lines: { only: { regions: [ { region: sync, cells: 7, assert: [sync] }, { region: rest, cells: 84 } ] } }
frame: [ { repeat: 1, line: only } ]
machine: { form: loop, state: 7 bits }
chips: { part: 28C16, speed: 150 ns }
PLAN
"$SCANLATCH" sheet "$work/line-rate.yaml" -o "$work/line-rate.html" >"$work/out" 2>&1
same 'a sheet of one line: exit status' 0 $?
same 'the published line rate at the sync pin' '15.734266 kHz 2250000/143 Hz' "$("$python" -B -c '
import sys
sys.path.insert(0, "tests/reference")
from sheet_bring_up import Page
print(*Page(sys.argv[1]).rows["sync"][:2])' "$work/line-rate.html")"
# The same by the other bank of clocks: 13.5 MHz / 858 (ITU-R BT.601-5, table 2: 858 luminance samples a line).
"$SCANLATCH" sheet plans/pilot-station.yaml -o "$work/pilot-station.html" >"$work/out" 2>&1
same 'the line rate of bank 0 of a set' '15.734266 kHz 2250000/143 Hz' "$("$python" -B -c '
import sys
sys.path.insert(0, "tests/reference")
from sheet_bring_up import Page
print(*Page(sys.argv[1]).rows["sync"][:2])' "$work/pilot-station.html")"
finish
