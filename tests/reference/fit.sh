#!/bin/bash
# The search of `fit` against one that looks through every layout of a small space (fit_search.py).
set -u
. tests/report.sh

python=/usr/bin/python3
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
for catalogue in standards crystals parts; do
	"$SCANLATCH" list $catalogue --json >"$work/$catalogue.json" || exit 1
done

# agrees STANDARD GRADE PHASE PHASE_LINES COLUMNS LINES TICKS DOTS STRETCHED WIDTH TOP CRYSTAL …
agrees() {
	local name="$1, $2, $3, $5 columns by $6 lines, $7 ticks, $8 dots, $9 stretched" status list
	local standard=$1 grade=$2 phase=$3 phase_lines=$4 columns=$5 lines=$6 ticks=$7 dots=$8 stretched=$9 width=${10} top=${11}
	shift 11
	list=$(printf '%s,' "$@")
	"$SCANLATCH" fit --json --standard "$standard" --grade "$grade" --phase "$phase" --columns "$columns" --lines "$lines" \
		--ticks-per-dot "$ticks" --dots-per-cell "$dots" --stretched "$stretched" --width "$width" --top "$top" \
		--crystal "${list%,}" >"$work/found.json"
	status=$?
	holds "$name" "$python" tests/reference/fit_search.py "$work/standards.json" "$work/crystals.json" "$work/parts.json" \
		"$work/found.json" "$grade" "$phase_lines" "$ticks" "$dots" "$stretched" "$width" "$top" "$@"
	same "$name: exit status" "$([ "$(wc -l <"$work/found.json")" -gt 0 ] && grep -q '"rank"' "$work/found.json"; echo $?)" \
		"$status"
}

agrees composite-525 monitor 'every line' 1 62 242 1 12,13 2 50 10 '14.31818 MHz' '10.738635 MHz'
agrees composite-525 monitor 'every 2 lines' 2 45 216 1,2 8,16 1 50 200 '14.31818 MHz' '7.15909 MHz'
agrees composite-525 monitor free 0 40 242 1 9 1 0 12 '7.15909 MHz'
agrees composite-525 monitor 'every line' 1 40 100 2,3 9 3 0 40 '14.31818 MHz'
agrees composite-525 monitor 'every line' 1 44 242 2 9 7 50 60 '14.31818 MHz'
agrees composite-525 studio 'every line' 1 64 242 1 12 1 50 10 '14.31818 MHz'
agrees composite-625 monitor 'every line' 1 70 287 1 13,14 2 60 10 '17.734475 MHz' '13.300856 MHz'
agrees composite-625 monitor 'every 2 lines' 2 46 240 1,2 9,10 1 50 25 '8.867238 MHz' '17.734475 MHz'
agrees mono-525 monitor 'every line' 1 64 242 1,2 8,9,10,11,12 0 50 20 '14.31818 MHz' '12 MHz' '13.5 MHz'
agrees component-525 monitor 'every line' 1 60 240 1 12,14 4 50 30 '13.5 MHz' '27 MHz' '16 MHz'
agrees component-625 monitor 'every line' 1 64 288 1,2 6,12 0 30 30 '13.5 MHz' '12 MHz'
agrees dmt-640x480-60 monitor 'every line' 1 80 480 1 6,7,8,9,10 0 50 100 '25.175 MHz' '25 MHz' '25.2 MHz' '28.322 MHz' '31.5 MHz'
agrees dmt-640x480-60 studio 'every line' 1 80 480 1,2 6,8,10 0 50 100 '25.175 MHz' '25 MHz' '25.2 MHz' '50 MHz'
agrees dmt-800x600-60 monitor 'every line' 1 40 600 1,2 8,9,16 0 50 100 '40 MHz' '36 MHz' '50 MHz'
agrees mode-720x400-70 monitor 'every line' 1 80 350 1 8,9 0 50 100 '28.322 MHz' '25.175 MHz'

finish
