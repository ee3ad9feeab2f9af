#!/bin/bash
# Plans that `fit` writes: they build and prove, and what is measured at their pins is what the search reckoned of them.
set -u
. tests/report.sh

python=/usr/bin/python3
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT

# proves NAME RANKS OPTION …: layouts of these ranks, found with the options.
proves() {
	local name=$1 ranks=$2 rank plan=$work/plan.yaml
	shift 2
	"$SCANLATCH" fit "$@" --json >"$work/found.json"
	for rank in $ranks; do
		rm -rf "$plan" "$work/out"
		holds "$name, $rank: written" "$SCANLATCH" fit "$@" --write "$rank" "$plan"
		"$SCANLATCH" check "$plan" --json >"$work/checked.json" 2>"$work/stderr"
		same "$name, $rank: checked" 0 $?
		same "$name, $rank: nothing to remark but taps" '' "$(grep -E ': (error|notice): ' "$work/stderr" | grep -v 'out-of-step\]$')"
		holds "$name, $rank: measured as reckoned" "$python" tests/reference/fit_measured.py "$work/found.json" "$rank" \
			"$work/checked.json"
		holds "$name, $rank: built" "$SCANLATCH" build "$plan" -o "$work/out"
		holds "$name, $rank: proved" "$SCANLATCH" prove "$plan" "$work/out"
	done
}

proves 'colour, 525' '1 2 10' --standard composite-525 --columns 80 --lines 216 --dots-per-cell 8,9 --crystal '14.31818 MHz'
proves 'colour, 525, unstretched' '1' --standard composite-525 --columns 64 --stretched 0 --width 70
proves 'colour, 525, every 2 lines' '1 7' --standard composite-525 --columns 40 --phase 'every 2 lines' --width 80 \
	--dots-per-cell 12-16
proves 'colour, 525, free' '1' --standard composite-525 --columns 40 --phase free --width 90 --crystal '7.15909 MHz' \
	--dots-per-cell 1-9
proves 'colour, 525, three columns' '1' --standard composite-525 --columns 3 --width 10 --dots-per-cell 1-60 --crystal '3.579545 MHz'
proves 'colour, 625' '1 3' --standard composite-625 --columns 80 --width 80
proves 'monochrome' '1 5' --standard mono-525 --columns 80 --width 90
proves 'component, 525' '1' --standard component-525 --columns 90 --width 95 --crystal '13.5 MHz'
proves 'component, 625' '1' --standard component-625 --columns 90 --width 95 --crystal '13.5 MHz'
for standard in dmt-640x350-85 dmt-720x400-85 dmt-640x480-60 dmt-800x600-60 mode-640x400-70 mode-640x350-70; do
	proves "$standard" '1' --standard $standard --columns 80 --width 90
done
proves 'few lines of a mode' '1 2' --standard dmt-640x480-60 --columns 80 --lines 400
proves 'a mode as published' '1 2' --standard dmt-640x480-60 --grade studio --columns 80 --top 2

finish
